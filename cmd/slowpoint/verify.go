package main

import (
	"fmt"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"slowpoint/model/verify"
	"slowpoint/report"
)

func verifyCommand() *cobra.Command {
	return &cobra.Command{
		Use: "verify", Short: "Solve problems with a known answer on this machine", Example: "  slowpoint verify", Args: cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			out := cmd.OutOrStdout()
			w := tabwriter.NewWriter(out, 0, 4, 2, ' ', 0)
			area, missed, n := "", 0, 0
			for _, r := range known() {
				if r.area != area {
					area = r.area
					fmt.Fprintf(w, "\n%s\n", strings.ToUpper(area[:1])+area[1:])
				}
				word := "met"
				if !r.OK {
					word = "NOT MET"
					missed++
				}
				n++
				fmt.Fprintf(w, "  %s\texpected %.6g %s\tgot %.6g\tallowance %.2g\t%s\t%s\n", r.Name, r.Expected, r.Unit, r.Got, r.Allowance, word, r.Source)
			}
			if err := w.Flush(); err != nil {
				return &failure{exitFault, err}
			}
			fmt.Fprintf(out, "\n%d of %d cases met\n", n-missed, n)
			if missed > 0 {
				return &failure{exitNotMet, fmt.Errorf("not met on this machine: %s with a known answer; do not use its results", count(missed, "case"))}
			}
			return nil
		},
	}
}

// knownCase is a known answer with its area.
type knownCase struct {
	report.KnownAnswer
	area string
}

// known solves every case with a known answer.
func known() []knownCase {
	var out []knownCase
	for _, c := range verify.Cases() {
		r := verify.Run(c)
		out = append(out, knownCase{report.KnownAnswer{Name: c.Name, Source: c.Source, Expected: c.Expected, Got: r.Got,
			Allowance: c.Allowance, Unit: c.Unit, OK: r.Met,
			Shape: c.Problem.Product.Shape, Steps: c.Problem.Steps}, c.Area})
	}
	return out
}
