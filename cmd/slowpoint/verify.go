package main

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"slowpoint/model/verify"
	"slowpoint/report"
	judging "slowpoint/rules/known"
)

func verifyCommand() *cobra.Command {
	var isMeasured bool
	c := &cobra.Command{
		Use: "verify", Short: "Solve problems with a known answer on this machine", Example: "  slowpoint verify\n  slowpoint verify --measured", Args: takes(0, 0, ""),
		RunE: func(cmd *cobra.Command, _ []string) error {
			out := cmd.OutOrStdout()
			if isMeasured {
				return printMeasured(out)
			}
			w := tabwriter.NewWriter(out, 0, 4, 2, ' ', 0)
			area, missed, n := "", 0, 0
			reported, long := known(), solved(verify.LongCases())
			for _, r := range slices.Concat(reported, long) {
				if r.area != area {
					area = r.area
					fmt.Fprintf(w, "\n%s\n", strings.ToUpper(area[:1])+area[1:])
				}
				if !r.OK {
					missed++
				}
				n++
				fmt.Fprintf(w, "  %s\texpected %s\tgot %.6g\tallowance %.2g\t%s\t%s\n", r.Name, r.Amount(fmt.Sprintf("%.6g", r.Expected)), r.Got, r.Allowance, metWord(r.OK), r.Source)
			}
			if err := w.Flush(); err != nil {
				return &failure{exitFault, err}
			}
			fmt.Fprintf(out, "\n%d of %d cases met\n", n-missed, n)
			fmt.Fprintf(out, "A report is made with %d of them: the other %d take too long for every run and are solved here only\n", len(reported), len(long))
			if missed > 0 {
				return &failure{exitNotMet, fmt.Errorf("not met on this machine: %s with a known answer; do not use its results", count(missed, "case"))}
			}
			return nil
		},
	}
	c.Flags().BoolVar(&isMeasured, "measured", false, "predict published measurements instead, and show both")
	return c
}

// printMeasured shows measured beside predicted, the bad ones too; that a case is not met is no fault of this machine.
func printMeasured(out io.Writer) error {
	met, list := 0, verify.MeasuredCases()
	for i := range list {
		r := list[i].Compare()
		if r.Err != nil {
			return &failure{exitFault, r.Err}
		}
		if r.Met {
			met++
		}
		fmt.Fprintf(out, "%s: %s\n  %s: measured %s, predicted %s, ratio %s; asked %s\n  source: %s\n  taken: %s\n\n",
			r.ID, r.What, r.Words(), amount(r.Measured, r.Unit), amount(r.Got, r.Unit), ratio(r.Ratio), r.Outcome(), r.Source, r.Taken)
	}
	_, err := fmt.Fprintf(out, "%d of %d measurements met\n", met, len(list))
	if err != nil {
		return &failure{exitFault, err}
	}
	return nil
}

// amount writes a measured or predicted figure with its unit.
func amount(x float64, unit string) string {
	switch {
	case math.IsInf(x, 1):
		return "never"
	case x < 10:
		return fmt.Sprintf("%.2f %s", x, unit)
	case x < 1000:
		return fmt.Sprintf("%.1f %s", x, unit)
	}
	return fmt.Sprintf("%.0f %s", x, unit)
}

func ratio(x float64) string {
	if math.IsInf(x, 1) {
		return "-"
	}
	return fmt.Sprintf("%.2f", x)
}

func metWord(met bool) string {
	if met {
		return "met"
	}
	return "NOT MET"
}

// knownCase is a known answer with its area.
type knownCase struct {
	report.KnownAnswer
	area string
}

// known solves every case with a known answer that a report shows.
func known() []knownCase { return solved(slices.Concat(verify.Cases(), judging.Cases())) }

func solved(cases []verify.Case) []knownCase {
	var out []knownCase
	for _, c := range cases {
		r := verify.Run(c)
		out = append(out, knownCase{report.KnownAnswer{Name: c.Name, Source: c.Source, Expected: c.Expected, Got: r.Got,
			Allowance: c.Allowance, Unit: c.Unit, OK: r.Met,
			Shape: c.Problem.Product.Shape, Steps: c.Problem.Steps}, c.Area})
	}
	return out
}
