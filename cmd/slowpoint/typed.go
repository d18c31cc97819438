package main

import (
	"errors"
	"fmt"
	"regexp"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/workbook"
)

// What cobra says of a command line that it does not understand, in the words of the house.

// many is no upper bound of a number of names.
const many = 1 << 30

// takes is the rule of a command that takes from least to most names; mend tells what to name where there are too few.
func takes(least, most int, mend string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		switch {
		case len(args) < least:
			return fmt.Errorf("%s (%s)", mend, usage(cmd))
		case len(args) > most && most == 0:
			return fmt.Errorf("%s takes no name, and %q was given", cmd.CommandPath(), args[0])
		case len(args) > most:
			return fmt.Errorf("%s takes one name, and %d were given: put quotes around a name with blanks (%s)", cmd.CommandPath(), len(args), usage(cmd))
		}
		return nil
	}
}

// usage is how a command is written, without its flags.
func usage(cmd *cobra.Command) string {
	return strings.TrimSuffix(cmd.UseLine(), " [flags]")
}

// commandsOnly is the rule of a command that takes other commands and no names.
func commandsOnly(cmd *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	return noCommand(cmd, args[0])
}

// noCommand tells of a word that is no command.
func noCommand(of *cobra.Command, word string) error {
	var known []string
	for _, c := range of.Commands() {
		if c.IsAvailableCommand() {
			known = append(known, c.Name())
		}
	}
	offer := workbook.Meant(word, known)
	if offer == "" {
		offer = ";"
	}
	return fmt.Errorf("%s has no command %q%s %s --help lists its commands", of.CommandPath(), word, offer, of.CommandPath())
}

var (
	unknownCommand = regexp.MustCompile(`^unknown command "(.*)" for "slowpoint"`)
	unknownFlag    = regexp.MustCompile(`^unknown (?:shorthand )?flag: (.*)$`)
	bareFlag       = regexp.MustCompile(`^flag needs an argument: (?:'.' in )?(.*)$`)
)

// plainFlag words what is wrong with a flag.
func plainFlag(cmd *cobra.Command, err error) error {
	help := cmd.CommandPath() + " --help lists its flags"
	if m := unknownFlag.FindStringSubmatch(err.Error()); m != nil {
		return fmt.Errorf("%s has no flag %s; %s", cmd.CommandPath(), m[1], help)
	}
	if m := bareFlag.FindStringSubmatch(err.Error()); m != nil {
		return fmt.Errorf("the flag %s needs a value behind it; %s", m[1], help)
	}
	return err
}

// plainCommand words what cobra says of the first word on the command line; every other error stays.
func plainCommand(root *cobra.Command, err error) error {
	var told *failure
	if err == nil || errors.As(err, &told) {
		return err
	}
	if m := unknownCommand.FindStringSubmatch(err.Error()); m != nil {
		return noCommand(root, m[1])
	}
	return err
}

// helpCommand is help COMMAND; cobra's own says in its words that it does not know one, and that all went well.
func helpCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "help [COMMAND]",
		Short: "Help about any command",
		RunE: func(cmd *cobra.Command, args []string) error {
			of, rest, err := cmd.Root().Find(args)
			switch {
			case err != nil || of == nil:
				return noCommand(cmd.Root(), args[0])
			case len(rest) > 0:
				return noCommand(of, rest[0])
			}
			of.InitDefaultHelpFlag()
			return of.Help()
		},
	}
}
