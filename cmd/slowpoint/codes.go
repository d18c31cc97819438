package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/rules/codes"
)

// confirm is said wherever starter limits are shown.
const confirm = "Starter limits are not legal advice: confirm each against the code in force where you are, and have it confirmed by the person who answers for it."

func codesCommand(files *shelf) *cobra.Command {
	var where, stage string
	cmd := &cobra.Command{
		Use: "codes", Short: "List starter limits of published codes, to copy and confirm",
		Example: "  slowpoint codes --where US --stage cook", Args: commandsOnly,
		RunE: func(cmd *cobra.Command, _ []string) error {
			out := cmd.OutOrStdout()
			found := codes.Find(where, stage)
			for i := range found {
				showCode(out, &found[i])
			}
			if len(found) == 0 {
				return &failure{exitInput, fmt.Errorf("no starter limit matches%s%s", given("where", where), given("stage", stage))}
			}
			fmt.Fprintf(out, "%s. %s\nCopy with: slowpoint codes copy ID... PLAN.xlsx\n", standFor(found), confirm)
			return nil
		},
	}
	cmd.AddCommand(codesCopyCommand(files))
	cmd.Flags().StringVar(&where, "where", "", "part of the name of a `PLACE`, issuer or document")
	cmd.Flags().StringVar(&stage, "stage", "", "`STAGE`: cook, cool, hold hot, …")
	return cmd
}

// standFor counts limits, and the published rows that they stand for: a table is one limit, and a clause may take several.
func standFor(found []codes.Row) string {
	covered, tables, rows, parts := 0, 0, 0, 0
	for i := range found {
		r := &found[i]
		covered += len(r.Covers)
		if len(r.Tables) > 0 {
			tables++
			rows += len(r.Tables)
		}
		if len(r.Covers) == 0 {
			parts++
		}
	}
	s := fmt.Sprintf("%s, for %s of published codes", count(len(found), "starter limit"), count(covered, "row"))
	var how []string
	if tables > 0 {
		how = append(how, fmt.Sprintf("%d of the limits have a table, with %s in all", tables, count(rows, "row")))
	}
	if parts > 0 {
		how = append(how, fmt.Sprintf("%d are further parts of a clause", parts))
	}
	if len(how) > 0 {
		s += ": " + strings.Join(how, ", ")
	}
	return s
}

// given repeats a flag as it was given; "" if it was not.
func given(flag, value string) string {
	if value == "" {
		return ""
	}
	return fmt.Sprintf(" --%s %q", flag, value)
}

// showCode prints one starter limit.
func showCode(w io.Writer, r *codes.Row) {
	fmt.Fprintf(w, "%s  [%s, %s] %s\n", r.ID, r.Where, r.Stage, r.Title)
	fmt.Fprintf(w, "    rule %s", r.Cells["Rule"])
	for _, h := range []string{"From", "To", "Time", "Second time", "Clock starts", "Counting", "Compare", "Compare time", "Reference temperature", "z", "Log reductions", "Allowance", "Humidity", "Share of stage", "Table"} {
		if v := r.Cells[h]; v != "" {
			fmt.Fprintf(w, "; %s %s", strings.ToLower(h), v)
		}
	}
	fmt.Fprintf(w, "\n    %s\n", r.Source)
	if n := r.Cells["Note"]; n != "" {
		fmt.Fprintf(w, "    %s\n", n)
	}
}
