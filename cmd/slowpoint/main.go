// Command slowpoint predicts how cooked and chilled food heats and cools through a plan's steps, finds the slowest point,
// judges the limits that the user entered and writes the report.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"sync"
	"syscall"

	"github.com/spf13/cobra"
	"golang.org/x/term"
)

// The exit codes.
const (
	exitMet    = 0 // every must limit is met for every product
	exitNotMet = 1 // something is not met or cannot be told
	exitInput  = 2 // the input, or part of it, could not be used
	exitFault  = 3 // the results could not be written, the run was stopped, or a fault of the program
)

// failure is an error with the exit code that it means. A failure without a cause has been told already.
type failure struct {
	code  int
	cause error
}

func (f *failure) Error() string {
	if f.cause == nil {
		return ""
	}
	return f.cause.Error()
}

func main() { os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) }

// run is the whole program: results to out, everything else to errs.
func run(args []string, in io.Reader, out, errs io.Writer) int {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	context.AfterFunc(ctx, stop) // a second Ctrl-C ends the program at once
	results, files := &told{w: out}, &shelf{}
	root := rootCommand(files)
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(results)
	root.SetErr(errs)
	ended := make(chan error, 1)
	go func() { ended <- plainCommand(root, root.ExecuteContext(ctx)) }()
	var err error
	select {
	case err = <-ended:
	case <-ctx.Done(): // a calculation may take seconds: it is not waited for
		results.close()
		if f, ok := errs.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
			fmt.Fprintln(errs) // behind ^C and the progress bar
		}
		err = &failure{exitFault, errors.New("stopped: " + files.clear())}
	}
	if fault := results.fault(); fault != nil && ctx.Err() == nil {
		err = &failure{exitFault, fmt.Errorf("standard output cannot be written (%w): send it elsewhere, or make room", cause(fault))}
	}
	if err == nil {
		return exitMet
	}
	code := exitInput // cobra's own complaints are about what was typed
	var f *failure
	if errors.As(err, &f) {
		code = f.code
	}
	if text := err.Error(); text != "" {
		fmt.Fprintln(errs, "slowpoint: "+text)
	}
	return code
}

// told keeps the first error of writing, which fmt.Fprintf and its like would let go by.
type told struct {
	mu  sync.Mutex
	w   io.Writer
	err error
}

func (t *told) Write(p []byte) (int, error) {
	t.mu.Lock()
	defer t.mu.Unlock()
	if t.w == nil {
		return 0, os.ErrClosed
	}
	n, err := t.w.Write(p)
	if err != nil && t.err == nil {
		t.err = err
	}
	return n, err
}

// close lets nothing more through.
func (t *told) close() {
	t.mu.Lock()
	defer t.mu.Unlock()
	t.w = nil
}

func (t *told) fault() error {
	t.mu.Lock()
	defer t.mu.Unlock()
	return t.err
}

func rootCommand(files *shelf) *cobra.Command {
	root := &cobra.Command{
		Use:   "slowpoint",
		Short: "Predict the slowest point of cooked and chilled food and judge your time-temperature limits",
		Long: `Slowpoint reads products and cook, rest, chill, hold and reheat steps from a spreadsheet, predicts the temperature of every
place in the food through the whole chain, finds the slowest point, judges the limits that you entered and writes a report.
It supports planning; it does not replace measurement. Your food authority decides.`,
		SilenceUsage: true, SilenceErrors: true,
		CompletionOptions: cobra.CompletionOptions{HiddenDefaultCmd: true},
	}
	root.SetFlagErrorFunc(plainFlag)
	root.SetHelpCommand(helpCommand())
	root.AddCommand(checkCommand(files), judgeCommand(files), sizeCommand(files), compareCommand(files), readCommand(), importCommand(files), blankCommand(files), codesCommand(files), foodsCommand(), verifyCommand(), versionCommand())
	return root
}
