package main

import (
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/rules/codes"
)

func codesCopyCommand(files *shelf) *cobra.Command {
	var target string
	cmd := &cobra.Command{
		Use: "copy ID… PLAN.xlsx", Short: "Write a new workbook beside the plan, with starter limits added",
		Example: "  slowpoint codes copy US-FC22-501.14-A1 plan.xlsx",
		Args:    takes(2, many, "name the limits by their IDs, then the plan; slowpoint codes lists the limits"),
		RunE: func(cmd *cobra.Command, args []string) error {
			ids, plan := args[:len(args)-1], args[len(args)-1]
			rows, err := codes.ByID(ids...)
			if err != nil {
				return &failure{exitInput, err}
			}
			ext := filepath.Ext(plan)
			if target == "" {
				target = strings.TrimSuffix(plan, ext) + "-with-limits" + ext
			}
			if ext != "" && !strings.EqualFold(filepath.Ext(target), ext) {
				return &failure{exitInput, fmt.Errorf("%s: a copy of the plan is written, so the name must end in %s", target, ext)}
			}
			if err := newFile(target, "name another with --out"); err != nil {
				return err
			}
			if _, err := workbook.Look(plan); err != nil {
				return &failure{exitInput, err}
			}
			var there, notCarried []string
			var refused error
			err = files.writeWhole(target, func(w io.Writer) error {
				there, notCarried, refused = workbook.CopyRows(sheetRows(rows), plan, w)
				return refused
			})
			var full *unwritable
			if refused != nil && !errors.As(refused, &full) {
				return &failure{exitInput, refused}
			}
			if err != nil {
				return &failure{exitFault, err}
			}
			out := cmd.OutOrStdout()
			fmt.Fprintf(out, "%s: %s added\n", target, count(len(rows)-len(there), "limit"))
			for _, n := range there {
				fmt.Fprintf(out, "already there: %s\n", n)
			}
			for _, n := range notCarried {
				fmt.Fprintf(out, "not carried over: %s\n", n)
			}
			fmt.Fprintln(out, confirm)
			return nil
		},
	}
	cmd.Flags().StringVar(&target, "out", "", "write the new workbook to `NEW.xlsx` (default PLAN-with-limits.xlsx beside the plan)")
	return cmd
}

// sheetRows lays starter limits out as rows of a plan's sheets.
func sheetRows(rows []codes.Row) workbook.Rows {
	out := workbook.Rows{}
	for i := range rows {
		out["Limits"] = append(out["Limits"], rows[i].Cells)
		for _, g := range rows[i].Groups {
			out["Groups"] = append(out["Groups"], map[string]string{"Group": g.Group, "Join": g.Join, "Within": g.Within})
		}
		for _, t := range rows[i].Tables {
			out["Tables"] = append(out["Tables"], map[string]string{"Table": t.Table, "Temperature": t.Temperature, "Time": t.Time})
		}
	}
	return out
}
