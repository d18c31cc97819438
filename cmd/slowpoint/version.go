package main

import (
	"fmt"

	"github.com/spf13/cobra"
)

// version of the program; it stands in every report. A release sets it when it is built.
var version = "0.1.0"

func versionCommand() *cobra.Command {
	return &cobra.Command{
		Use: "version", Short: "Say which version this is", Example: "  slowpoint version", Args: takes(0, 0, ""),
		Run: func(cmd *cobra.Command, _ []string) { fmt.Fprintln(cmd.OutOrStdout(), "slowpoint", version) },
	}
}
