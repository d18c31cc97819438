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
			fmt.Fprintf(out, "%s. %s\nCopy with: slowpoint codes copy ID... PLAN.xlsx\n", count(len(found), "starter limit"), confirm)
			return nil
		},
	}
	cmd.AddCommand(codesCopyCommand(files))
	cmd.Flags().StringVar(&where, "where", "", "part of the name of a `PLACE`, issuer or document")
	cmd.Flags().StringVar(&stage, "stage", "", "`STAGE`: cook, cool, hold hot, …")
	return cmd
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
