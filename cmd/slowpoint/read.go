package main

import (
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

func readCommand() *cobra.Command {
	return &cobra.Command{
		Use: "read PLAN", Short: "Say what is understood of a plan and everything that is wrong with it; calculate nothing",
		Example: "  slowpoint read plan.xlsx", Args: onePlan(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			plan, err := workbook.Read(args[0])
			if err != nil {
				return &failure{exitInput, err}
			}
			understood(cmd.OutOrStdout(), plan)
			plan.Problems = append(plan.Problems, understoodRecords(cmd.OutOrStdout(), plan, planFolder(args))...)
			tellProblems(cmd.OutOrStdout(), plan.Problems)
			if plan.Problems.Faults() > 0 || plan.NotImported > 0 {
				return &failure{code: exitInput}
			}
			return nil
		},
	}
}

// onePlan takes at most one name, and least at least; a name with blanks comes apart where it is not quoted.
func onePlan(least int) cobra.PositionalArgs {
	return func(_ *cobra.Command, args []string) error {
		switch {
		case len(args) < least:
			return &failure{exitInput, errors.New("name the plan: a workbook (.xlsx) or a folder of CSV files")}
		case len(args) > 1:
			return &failure{exitInput, fmt.Errorf("one plan at a time, and %d names were given: put quotes around a name with blanks, as \"my plan.xlsx\"", len(args))}
		}
		return nil
	}
}

// understood says what a plan holds.
func understood(w io.Writer, p *workbook.Plan) {
	fmt.Fprintf(w, "%s: %s can be calculated, %s cannot; %s%s\n", p.Name, count(len(p.Products), "product"), count(len(p.NotCalculated), "product"), count(len(p.Limits), "limit"), notImported(p))
	for i := range p.Products {
		q := &p.Products[i]
		steps := ""
		for k := range q.Steps {
			if k > 0 {
				steps += ", "
			}
			steps += fmt.Sprintf("%s %s", q.Steps[k].Name, minutes(q.Steps[k].DurationS))
		}
		fmt.Fprintf(w, "  %s: %s, %s from %s; %s\n", q.Name, q.Shape.Name, foodsOf(&q.Product), ownScale(q.StartC, p.Fahrenheit), steps)
	}
	for _, n := range p.NotCalculated {
		fmt.Fprintf(w, "  %s: not calculated (%s)\n", n.Product, count(n.Because.Faults(), "error"))
	}
}

// understoodRecords says what the files of records hold, and gives what is wrong with them.
func understoodRecords(w io.Writer, p *workbook.Plan, folder string) cell.Errors {
	var all cell.Errors
	l := newLogs(p, folder, time.Now())
	for i := range p.Records {
		rec := &p.Records[i]
		if !rec.Sound {
			fmt.Fprintf(w, "  record %s: not read\n", rec.Name)
			continue
		}
		log, problems := l.read[rec]()
		all = append(all, problems...)
		if log == nil {
			fmt.Fprintf(w, "  record %s: not read (%s)\n", rec.Name, count(problems.Faults(), "error"))
			continue
		}
		n := len(log.TimesS)
		fmt.Fprintf(w, "  record %s: %s of %s, %s, from %s to %s, %s to %s\n", rec.Name, log.Head, log.Name, count(n, "reading"), shown(log, 0), shown(log, log.TimesS[n-1]),
			ownScale(slices.Min(log.C), p.Fahrenheit), ownScale(slices.Max(log.C), p.Fahrenheit))
	}
	return all
}

// foodsOf names the food of a product, or those of its layers.
func foodsOf(p *model.Product) string {
	var names []string
	for _, f := range p.Foods() {
		names = append(names, f.Name)
	}
	return strings.Join(names, " + ")
}

// ownScale writes a temperature, °C, in the scale that the plan shows temperatures in.
func ownScale(c float64, fahrenheit bool) string {
	if fahrenheit {
		return fmt.Sprintf("%.4g °F", unit.Temperature.Unit("°F").Out(c))
	}
	return fmt.Sprintf("%.4g °C", c)
}

// notImported tells, behind a count of products, of the rows that the import of the plan could not take; "" if there are none.
func notImported(p *workbook.Plan) string {
	if p.NotImported == 0 {
		return ""
	}
	return ", and " + count(p.NotImported, "row") + " of the spreadsheets not imported"
}

// most is how many problems are told one by one.
const most = 100

// tellProblems prints problems, repeats down a column folded, the faults before the rest.
func tellProblems(w io.Writer, es cell.Errors) {
	es = es.Fold()
	for _, level := range []cell.Level{cell.Fault, cell.Warning, cell.Note} {
		n := 0
		for _, e := range es {
			if e.Level != level {
				continue
			}
			if n++; n <= most {
				fmt.Fprintf(w, "%s: %s\n", level, e.Error())
			}
		}
		if n > most {
			fmt.Fprintf(w, "%s: %d more of this kind\n", level, n-most)
		}
	}
}

// count writes a number with its noun.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// minutes writes a duration in minutes, from ten hours on in hours and minutes and below one minute in seconds.
func minutes(s float64) string {
	if x := math.Abs(s); x > 0 && x < 59.5 {
		return fmt.Sprintf("%.3g s", s)
	}
	if m := math.Round(s / 60); m >= 600 {
		if rest := math.Mod(m, 60); rest > 0 {
			return fmt.Sprintf("%.0f h %02.0f min", (m-rest)/60, rest)
		}
		return fmt.Sprintf("%.0f h", m/60)
	}
	return fmt.Sprintf("%.4g min", s/60)
}
