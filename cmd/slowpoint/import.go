package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"text/tabwriter"

	"github.com/schollz/progressbar/v3"
	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/intake"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// importOptions are the flags of import.
type importOptions struct {
	mapping, propose, out, name, since string
	thenCheck                          bool
	check                              checkOptions // date, paper, onePDF and noPDF
}

func importCommand(files *shelf) *cobra.Command {
	var o importOptions
	cmd := &cobra.Command{
		Use: "import THEIRS…", Short: "Make a plan of spreadsheets that you keep already, by a mapping that you make once",
		Long: `Import reads workbooks (.xlsx, .xlsm) and CSV files of your own, or folders of them, and writes a plan. A mapping, which is a workbook
too, says which of their columns goes where; --propose writes one to begin with, in which you confirm each row. Rows that cannot be
imported are listed in the plan's sheet "Not imported" with the reason; each value of the plan leads back to its cell in your files.`,
		Example: "  slowpoint import Recipes.xlsx --propose map.xlsx\n  slowpoint import Recipes.xlsx --map map.xlsx",
		Args:    takes(1, many, "name the spreadsheets to import: workbooks (.xlsx, .xlsm), CSV files or folders of them"),
		RunE:    func(cmd *cobra.Command, args []string) error { return importThem(cmd, args, &o, files) },
	}
	f := cmd.Flags()
	f.StringVar(&o.mapping, "map", "", "the mapping, `MAP`: a workbook or a folder of CSV files that says what goes where")
	f.StringVar(&o.propose, "propose", "", "look at the files and write a mapping to be confirmed, `MAP.xlsx`")
	f.StringVar(&o.out, "out", "", "write the plan to `PLAN.xlsx` (default THEIRS-plan.xlsx beside the first file)")
	f.StringVar(&o.name, "name", "", "`NAME` of the plan, instead of that of the first file: NAME-plan.xlsx")
	f.StringVar(&o.since, "since", "", "an earlier plan, `OLD.xlsx`: tell what is new, gone and changed since")
	f.BoolVar(&o.thenCheck, "check", false, "go on with slowpoint check on the plan; the flags below are for it")
	f.StringVar(&o.check.date, "date", "", "with --check: `DATE` on the report, as 2026-01-31 (default today)")
	f.StringVar(&o.check.paper, "paper", "", "with --check: `SIZE` of the pages: A4 or Letter (default: the plan's own, else A4)")
	f.BoolVar(&o.check.onePDF, "one-pdf", false, "with --check: one PDF with everything instead of one a product")
	f.BoolVar(&o.check.noPDF, "no-pdf", false, "with --check: write no PDF")
	o.check.every = "60s"
	return cmd
}

// importThem is the command import.
func importThem(cmd *cobra.Command, args []string, o *importOptions, files *shelf) error {
	if err := o.sensible(cmd); err != nil {
		return &failure{exitInput, err}
	}
	target := o.target(args[0])
	if !strings.EqualFold(filepath.Ext(target), ".xlsx") {
		return &failure{exitInput, fmt.Errorf("%s: a workbook is written, so the name must end in .xlsx", target)}
	}
	mend := "name another with --out"
	if o.propose != "" {
		mend = "choose another name"
	}
	if err := newFile(target, mend); err != nil {
		return err
	}
	names, err := theirFiles(args, o.mapping, o.since)
	if err != nil {
		return &failure{exitInput, err}
	}
	var m *intake.Mapping
	if o.propose == "" {
		if m, err = intake.ReadMapping(o.mapping); err != nil {
			return &failure{exitInput, err}
		}
	}
	bar := progressOf(cmd.ErrOrStderr(), len(names)+2, "reading", true)
	theirs, aside, err := readTheirs(names, args, bar)
	if err != nil {
		bar.Clear()
		return &failure{exitInput, err}
	}
	for _, n := range aside {
		fmt.Fprintf(cmd.ErrOrStderr(), "note: %s is left aside: it is a plan that an import made; name it if it is to be imported\n", n)
	}
	if o.propose != "" {
		return propose(cmd.OutOrStdout(), args, theirs, target, files, bar)
	}
	return o.plan(cmd, m, theirs, target, files, bar)
}

// sensible refuses flags that do not go together.
func (o *importOptions) sensible(cmd *cobra.Command) error {
	given := func(names ...string) string {
		for _, n := range names {
			if cmd.Flags().Changed(n) {
				return "--" + n
			}
		}
		return ""
	}
	forCheck := given("date", "paper", "one-pdf", "no-pdf")
	switch {
	case o.mapping == "" && o.propose == "":
		return errors.New("name the mapping: --map MAP.xlsx; without one, --propose MAP.xlsx writes one to begin with")
	case o.propose != "" && given("map", "out", "name", "since", "check") != "":
		return fmt.Errorf("--propose writes a mapping and no plan: leave %s out, confirm the mapping, then import with --map", given("map", "out", "name", "since", "check"))
	case o.out != "" && o.name != "":
		return errors.New("--out and --name both name the plan: leave one out")
	case o.name != "" && (strings.ContainsAny(o.name, `/\`) || strings.HasPrefix(o.name, ".")):
		return fmt.Errorf("--name %q: expected a name without a folder; --out names a file anywhere", o.name)
	case forCheck != "" && !o.thenCheck:
		return fmt.Errorf("%s is for the report: give --check too, or leave it out", forCheck)
	}
	return nil
}

// target is the file to be written: the proposed mapping or the plan.
func (o *importOptions) target(first string) string {
	switch {
	case o.propose != "":
		return o.propose
	case o.out != "":
		return o.out
	case o.name != "":
		return filepath.Join(filepath.Dir(filepath.Clean(first)), o.name+"-plan.xlsx")
	}
	path := strings.TrimSuffix(beside(first), "-results")
	if strings.EqualFold(filepath.Ext(path), ".csv") {
		path = strings.TrimSuffix(path, filepath.Ext(path))
	}
	return path + "-plan.xlsx"
}

// isTheirs tells whether a file of a folder may be a spreadsheet; those that a spreadsheet program keeps beside an open one are none.
func isTheirs(name string) bool {
	ext := strings.ToLower(filepath.Ext(name))
	return slices.Contains([]string{".xlsx", ".xlsm", ".csv"}, ext) && !strings.HasPrefix(name, ".") && !strings.HasPrefix(name, "~$")
}

// theirFiles lists the files to be read: those named, and those of the folders named in order of their names, each once. Of a folder,
// files that are ours are left aside.
func theirFiles(args []string, ours ...string) ([]string, error) {
	var out []string
	var known []os.FileInfo
	for _, n := range ours {
		if info, err := os.Stat(n); n != "" && err == nil {
			known = append(known, info)
		}
	}
	is := func(info os.FileInfo) bool {
		return slices.ContainsFunc(known, func(k os.FileInfo) bool { return os.SameFile(k, info) })
	}
	var wrong []error
	for _, a := range args {
		info, err := os.Stat(a)
		switch {
		case errors.Is(err, os.ErrNotExist):
			wrong = append(wrong, fmt.Errorf("%s: there is no such file or folder; look at the spelling of its name", a))
		case err != nil:
			wrong = append(wrong, fmt.Errorf("%s: it cannot be opened (%w)", a, cause(err)))
		case !info.IsDir() && !isTheirs(filepath.Base(a)):
			wrong = append(wrong, fmt.Errorf("%s: expected a workbook (.xlsx, .xlsm), a .csv file or a folder of them; save it as one", a))
		case !info.IsDir():
			out, known = append(out, a), append(known, info)
		default:
			list, err := os.ReadDir(a)
			if err != nil {
				wrong = append(wrong, fmt.Errorf("%s: the folder cannot be read (%w)", a, cause(err)))
				continue
			}
			n := len(out)
			for _, e := range list {
				path := filepath.Join(a, e.Name())
				if info, err := os.Stat(path); err == nil && !info.IsDir() && isTheirs(e.Name()) && !is(info) {
					out, known = append(out, path), append(known, info)
				}
			}
			if n == len(out) {
				wrong = append(wrong, fmt.Errorf("%s: the folder holds no .xlsx, .xlsm or .csv file to import", a))
			}
		}
	}
	first := map[string]string{}
	for _, n := range out {
		k := strings.ToLower(filepath.Base(n))
		if first[k] != "" {
			wrong = append(wrong, fmt.Errorf("%s and %s have one name, so that nobody could tell where a value comes from: rename one, or give it once", first[k], n))
		}
		first[k] = n
	}
	return out, errors.Join(wrong...)
}

// readTheirs reads their files, all of them before anything is said of those that cannot be read. Of a folder, plans that an import made
// before are left aside, and named; args are the files and folders as given.
func readTheirs(names, args []string, bar *progressbar.ProgressBar) (out []*workbook.Spreadsheet, aside []string, err error) {
	var wrong []error
	for _, n := range names {
		s, err := workbook.ReadSpreadsheet(n)
		switch {
		case err != nil:
			wrong = append(wrong, err)
		case s.Imported() && !slices.Contains(args, n):
			aside = append(aside, n)
		default:
			out = append(out, s)
		}
		bar.Add(1)
	}
	if len(out) == 0 && len(wrong) == 0 {
		wrong = append(wrong, fmt.Errorf("%s: only plans that an import made; name the spreadsheets to import", strings.Join(args, " ")))
	}
	return out, aside, errors.Join(wrong...)
}

// propose writes a mapping to be confirmed.
func propose(out io.Writer, args []string, theirs []*workbook.Spreadsheet, target string, files *shelf, bar *progressbar.ProgressBar) error {
	bar.Describe("writing")
	files.expect(target)
	if err := files.writeWhole(target, func(w io.Writer) error { return intake.Propose(w, theirs) }); err != nil {
		bar.Clear()
		return &failure{exitFault, err}
	}
	bar.Finish()
	fmt.Fprintf(out, "%s is ready: answer its questions and write yes in the column Confirmed of each row that is right, then run slowpoint import %s --map %s\n",
		target, strings.Join(args, " "), target)
	return nil
}

// plan imports, writes the plan and tells what became of the rows.
func (o *importOptions) plan(cmd *cobra.Command, m *intake.Mapping, theirs []*workbook.Spreadsheet, target string, files *shelf, bar *progressbar.ProgressBar) error {
	out, errs := cmd.OutOrStdout(), cmd.ErrOrStderr()
	bar.Describe("importing")
	r := m.Import(theirs)
	if o.since != "" {
		var err error
		if r.Changes, err = intake.Since(o.since, r); err != nil {
			bar.Clear()
			return &failure{exitInput, err}
		}
	}
	bar.Add(1)
	bar.Describe("writing")
	faulty := r.Faulty()
	empty := len(r.Made) == 0
	if !empty {
		files.expect(target)
		if err := files.writeWhole(target, func(w io.Writer) error { return intake.Write(w, r) }); err != nil {
			bar.Clear()
			return &failure{exitFault, err}
		}
	}
	bar.Finish()
	tellProblems(errs, everything(r, faulty))
	tellCounts(out, r)
	code := exitMet
	if r.Problems.Faults()+len(r.Not)+len(faulty) > 0 {
		code = exitInput
	}
	if empty {
		return &failure{exitInput, fmt.Errorf("nothing was imported, so %s is not written: %s", target, whyNothing(r))}
	}
	if o.since != "" {
		tellChanges(out, filepath.Base(filepath.Clean(o.since)), r.Changes)
	}
	if !o.thenCheck {
		fmt.Fprintf(out, "%s is ready: look at it, then run slowpoint check %s\n", target, target)
		if code != exitMet {
			return &failure{code: code}
		}
		return nil
	}
	fmt.Fprintf(out, "%s is written\n", target)
	return worse(code, check(cmd, []string{target}, &o.check, files))
}

// worse joins the exit code of the import with the outcome of check: the larger one counts.
func worse(code int, err error) error {
	var f *failure
	if err == nil && code > exitMet || errors.As(err, &f) && f.code < code {
		return &failure{code: code}
	}
	return err
}

// everything is what is wrong with the mapping and their files, and what could not be imported or copied, each fault once; what is
// wrong with whole records in the same words is told at the first of them.
func everything(r *intake.Result, faulty []intake.NotImported) cell.Errors {
	type same struct {
		at  cell.Ref
		msg string
	}
	out := slices.Clone(r.Problems)
	seen := map[same]bool{}
	for _, e := range out {
		seen[same{e.At, e.Msg}] = true
	}
	type run struct {
		index, n int
		last     cell.Ref
	}
	runs := map[same]*run{} // by file, sheet and words
	for _, n := range append(slices.Clone(r.Not), faulty...) {
		if n.Told {
			continue
		}
		at := r.Ref(n.At)
		if n.At.Row == 0 && n.At.Col == 0 {
			at = r.Ref(n.Record)
		}
		whole := same{cell.Ref{Sheet: at.Sheet}, n.Typed + "\x1f" + n.Why}
		if k := (same{at, n.Why}); seen[k] {
			continue
		} else if u := runs[whole]; u != nil && (at.Row == 0 || at.Col == 0) {
			u.n, u.last = u.n+1, at
			continue
		} else {
			seen[k] = true
		}
		if at.Row == 0 || at.Col == 0 {
			runs[whole] = &run{index: len(out)}
		}
		out.Add(cell.Error{At: at, Field: n.Column, Typed: n.Typed, Msg: n.Why, Hint: n.Mend})
	}
	for _, u := range runs {
		if u.n > 0 {
			out[u.index].Msg += fmt.Sprintf(" (the same in %d more, down to %s)", u.n, u.last)
		}
	}
	return out
}

// whyNothing says why nothing was imported.
func whyNothing(r *intake.Result) string {
	n := intake.Count{}
	for _, c := range r.Counts {
		n.Read, n.LeftOut = n.Read+c.Read, n.LeftOut+c.LeftOut
	}
	switch {
	case !mapped(r):
		return "mend the mapping " + r.Mapping + " first"
	case n.Read == 0:
		return "the list has no rows"
	case n.LeftOut == n.Read:
		return "every row is left out by a rule of the mapping " + r.Mapping
	}
	return "mend what is told above first"
}

// mapped tells whether the mapping itself is free of faults.
func mapped(r *intake.Result) bool {
	return !slices.ContainsFunc(r.Problems, func(e cell.Error) bool {
		theirs := slices.ContainsFunc(r.Files, func(f intake.File) bool { return e.At.Sheet == f.Name || strings.HasPrefix(e.At.Sheet, f.Name+" › ") })
		return e.Level == cell.Fault && !theirs
	})
}

// tellCounts prints what became of the rows of each source, and why rows were left out.
func tellCounts(w io.Writer, r *intake.Result) {
	t := tabwriter.NewWriter(w, 0, 0, 3, ' ', tabwriter.AlignRight)
	fmt.Fprintln(t, "rows read\timported\tleft out\tnot imported\t")
	total := intake.Count{}
	line := func(c intake.Count, name string) {
		fmt.Fprintf(t, "%d\t%d\t%d\t%d\t   %s\n", c.Read, c.Imported, c.LeftOut, c.Not, name)
	}
	for _, c := range r.Counts {
		line(c, c.Source)
		total.Read, total.Imported, total.LeftOut, total.Not = total.Read+c.Read, total.Imported+c.Imported, total.LeftOut+c.LeftOut, total.Not+c.Not
	}
	line(total, "in total")
	t.Flush()
	var reasons []string
	n := map[string]int{}
	for _, l := range r.Left {
		if n[l.Reason]++; n[l.Reason] == 1 {
			reasons = append(reasons, l.Reason)
		}
	}
	for _, reason := range reasons {
		fmt.Fprintf(w, "left out: %s (%s)\n", count(n[reason], "row"), reason)
	}
	rows := map[string]int{}
	for _, m := range r.Made {
		rows[m.Sheet.Name]++
	}
	for _, s := range workbook.Sheets {
		if rows[s.Name] > 0 {
			fmt.Fprintf(w, "made: %s of %s\n", count(rows[s.Name], "row"), s.Name)
		}
	}
}

// tellChanges prints what changed since an earlier plan.
func tellChanges(w io.Writer, old string, changes []intake.Change) {
	fmt.Fprintf(w, "since %s: %s\n", old, count(len(changes), "change"))
	for i, c := range changes {
		if i == most {
			fmt.Fprintf(w, "  %d more in the sheet Changes\n", len(changes)-most)
			break
		}
		fmt.Fprintf(w, "  %s\n", c)
	}
}
