package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"runtime"
	"runtime/debug"
	"slices"
	"sync"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/report"
)

// What is judged in a search, in words: of a product with rows in the sheet Spread, and of one without.
const (
	spreadBasis  = "Judged at the unfavourable ends of what the sheet Spread lets vary, each limit at its own, with the error of the calculation counted against it."
	nominalBasis = "Judged at the values of the plan, with the error of the calculation counted against it; how far pieces, air and food stray from them is not counted."
)

func sizeCommand(files *shelf) *cobra.Command {
	var o sizeOptions
	cmd := &cobra.Command{
		Use: "size PLAN", Short: "Find the largest size, the shortest step, or the end, medium or start temperature that meets every limit",
		Long: `Size varies one number of a product, leaves everything else as the plan has it, and finds the values that meet every limit of level
must: the largest size, the shortest duration, the coldest medium or end of a step that heats and the warmest of one that does not, the
warmest start. The value told meets the limits and its neighbour, a whole step of --step farther, does not. Margins need not go one way: all
runs of values that meet are told.

WHAT is thickness, width, length, diameter, "duration STEP", "until STEP" (the temperature at which it ends), "medium temperature
STEP" or "start temperature"; STEP may be PROCESS/STEP. Left out, it is the size that decides how fast heat gets in.

Exit codes: 0 a value was found for every product; 1 for some product no value meets every limit; 2 the input, or part of it, could not
be used; 3 the results could not be written, or a fault of the program.`,
		Example: "  slowpoint size plan.xlsx --vary start-temperature", Args: onePlan(1),
		RunE: func(cmd *cobra.Command, args []string) error { return sizes(cmd, args[0], &o, files) },
	}
	f := cmd.Flags()
	f.StringArrayVar(&o.products, "product", nil, "search for this `PRODUCT` only (may be repeated)")
	f.StringVar(&o.vary, "vary", "", "vary `WHAT` (default: the size that decides)")
	f.StringVar(&o.find, "find", "", "`END` that is asked for: largest or smallest (default: see above)")
	f.StringVar(&o.from, "from", "", "least `VALUE` of the range, as \"20 mm\"")
	f.StringVar(&o.to, "to", "", "greatest `VALUE` of the range")
	f.StringVar(&o.step, "step", "", "resolution, `STEP` (default 1 mm or 0.05 in, 1 min, 1 degree)")
	f.StringVar(&o.out, "out", "", "write size.txt, size.pdf and size.json, with the curves, into `FOLDER`")
	f.StringVar(&o.date, "date", "", "`DATE` in size.pdf and size.json, as 2026-01-31 (default today)")
	return cmd
}

// sizeGarbage is the percentage of live memory by which a search lets garbage grow: it holds little, and makes much. With the usual 100 it
// takes a tenth more time, with 400 a twentieth less, but a thousand searches then take 0.7 GB.
const sizeGarbage = 200

// sizes is the command size.
func sizes(cmd *cobra.Command, name string, o *sizeOptions, files *shelf) error {
	plan, err := workbook.Read(name)
	if err != nil {
		return &failure{exitInput, err}
	}
	head, err := headOf(plan, &checkOptions{every: "60s", date: o.date})
	if err != nil {
		return err
	}
	for _, p := range o.products {
		if slices.ContainsFunc(plan.NotCalculated, func(n workbook.NotCalculated) bool { return sameName(n.Product, p) }) {
			tellProblems(cmd.ErrOrStderr(), head.Problems)
			return &failure{exitInput, fmt.Errorf("%s cannot be calculated: mend its row first", p)}
		}
	}
	if _, err = keepOnly(plan, "--product", o.products); err != nil {
		return err
	}
	if len(plan.Products) == 0 {
		tellProblems(cmd.ErrOrStderr(), head.Problems)
		return &failure{exitInput, errors.New("the plan has no product to calculate")}
	}
	r := &runner{plan: plan, head: head, options: &checkOptions{}}
	defer debug.SetGCPercent(debug.SetGCPercent(sizeGarbage))
	found, unfit, err := r.sizes(cmd.Context(), o)
	if err != nil {
		return err
	}
	tellProblems(cmd.ErrOrStderr(), head.Problems)
	if err := writeSizes(cmd.OutOrStdout(), head, found, len(plan.Products) == 1 && o.out == ""); err != nil {
		return &failure{exitFault, err}
	}
	for _, u := range unfit {
		fmt.Fprintf(cmd.ErrOrStderr(), "not searched: %s\n", u)
	}
	fmt.Fprintln(cmd.OutOrStdout(), "Calculated from the inputs, not measured; your food authority decides.")
	if o.out != "" {
		if err := files.writeSizes(o.out, head, found); err != nil {
			return &failure{exitFault, err}
		}
		fmt.Fprintf(cmd.OutOrStdout(), "Results in %s\n", o.out)
	}
	switch {
	case plan.Problems.Faults() > 0 || len(unfit) > 0 || len(o.products) == 0 && len(plan.NotCalculated) > 0 || plan.NotImported > 0:
		return &failure{code: exitInput}
	case slices.ContainsFunc(found, func(s *report.Sizing) bool { return !s.Found() }):
		return &failure{code: exitNotMet}
	}
	return nil
}

// sizes searches for every product of the plan, on all processors, and gives what was found in the order of the plan. unfit are the
// products that do not have what is to be varied, in words; if that is all of them, it is an error.
func (r *runner) sizes(ctx context.Context, o *sizeOptions) (found []*report.Sizing, unfit []string, err error) {
	dials := make([]*dial, len(r.plan.Products))
	fit := 0
	var first error
	for i := range r.plan.Products {
		p := &r.plan.Products[i]
		d, err := r.dialOf(p, o)
		if err != nil {
			if first == nil {
				first = err
			}
			unfit = append(unfit, fmt.Sprintf("%s: %v", p.Name, err))
			continue
		}
		dials[i], fit = d, fit+1
	}
	if fit == 0 {
		return nil, nil, &failure{exitInput, first}
	}
	workers := runtime.GOMAXPROCS(0)
	within := 1 // values of one search at once
	if fit == 1 {
		within = workers
	}
	out := make([]*report.Sizing, len(dials))
	faults := make([]error, len(dials))
	slots := make(chan struct{}, workers)
	var working sync.WaitGroup
	for i, d := range dials {
		if d == nil {
			continue
		}
		slots <- struct{}{}
		if ctx.Err() != nil {
			break
		}
		working.Go(func() {
			defer func() { <-slots }()
			p := &r.plan.Products[i]
			defer func() {
				if fault := recover(); fault != nil {
					faults[i] = fmt.Errorf("fault of the program at product %s: %v; please report it with the plan", p.Name, fault)
				}
			}()
			basis := nominalBasis
			if len(p.Spreads) > 0 {
				basis = spreadBasis
			}
			out[i] = r.size(p, d, r.judges(p), basis, within)
		})
	}
	working.Wait()
	if err := errors.Join(faults...); err != nil {
		return nil, nil, &failure{exitFault, err}
	}
	return slices.DeleteFunc(out, func(s *report.Sizing) bool { return s == nil }), unfit, nil
}

// writeSizes writes what was found as text, with the curves if wanted.
func writeSizes(w io.Writer, h *report.Head, found []*report.Sizing, curves bool) error {
	for _, s := range found {
		if err := report.WriteSizing(w, h, s, curves); err != nil {
			return err
		}
		fmt.Fprintln(w)
	}
	return nil
}

// writeSizes writes the files of size.
func (s *shelf) writeSizes(folder string, h *report.Head, found []*report.Sizing) error {
	if err := s.makeFolder(folder); err != nil {
		return err
	}
	text, js, pdf := filepath.Join(folder, "size.txt"), filepath.Join(folder, "size.json"), filepath.Join(folder, "size.pdf")
	s.expect(js, text, pdf)
	if err := s.writeWhole(pdf, func(w io.Writer) error { return report.WriteSizesPDF(w, h, found) }); err != nil {
		return err
	}
	if err := s.writeWhole(text, func(w io.Writer) error { return writeSizes(w, h, found, true) }); err != nil {
		return err
	}
	return s.writeWhole(js, func(w io.Writer) error { return report.WriteSizeJSON(w, h, found) })
}
