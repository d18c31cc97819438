package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/workbook"
)

func blankCommand(files *shelf) *cobra.Command {
	var demo bool
	cmd := &cobra.Command{
		Use: "blank FILE.xlsx", Short: "Write an empty plan workbook with headings, units, notes and lists to choose from",
		Example: "  slowpoint blank my-plan.xlsx\n  slowpoint blank --demo demo.xlsx", Args: takes(1, 1, "name the workbook to write, as my-plan.xlsx"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if !strings.EqualFold(filepath.Ext(args[0]), ".xlsx") {
				return &failure{exitInput, fmt.Errorf("%s: a workbook is written, so the name must end in .xlsx", args[0])}
			}
			if err := newFile(args[0], "choose another name"); err != nil {
				return err
			}
			if err := files.writeWhole(args[0], func(w io.Writer) error { return workbook.WriteBlank(w, demo) }); err != nil {
				return &failure{exitFault, err}
			}
			fmt.Fprintf(cmd.OutOrStdout(), "%s is ready: fill it in, then run slowpoint check %s\n", args[0], args[0])
			return nil
		},
	}
	cmd.Flags().BoolVar(&demo, "demo", false, "fill it with the demo plan")
	return cmd
}

// newFile refuses a file that exists; mend tells how to name another.
func newFile(path, mend string) error {
	if _, err := os.Lstat(path); err == nil {
		return &failure{exitInput, fmt.Errorf("%s exists already and is left as it is: %s", path, mend)}
	} else if !errors.Is(err, os.ErrNotExist) {
		return &failure{exitInput, err}
	}
	return nil
}
