package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/record"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/report"
)

// judgeFlags are the flags of judge that fill a row of the sheet Records, with its headings.
var judgeFlags = []struct{ flag, heading, takes, use string }{
	{"product", "Product", "PRODUCT", "the `PRODUCT` of the plan that was measured"},
	{"process", "Process", "PROCESS", "whose air or water was measured, of a medium: the `PROCESS`"},
	{"measured", "What it measured", "PLACE", "`PLACE` of the probe: slowest point, centre, surface, a name of the sheet Points, other place (default slowest point)"},
	{"starts", "Starts at", "TIMES", "`TIMES` at which steps began: \"Oven 09:12; Chill 11:20\" (default: the first step, at the first reading)"},
	{"sheet", "Sheet", "SHEET", "`SHEET` of a workbook with several"},
	{"time", "Time column", "COLUMN", "`COLUMN` of the times, by heading or letter, a unit in brackets behind: \"Elapsed (min)\""},
	{"temperature", "Temperature column", "COLUMN", "`COLUMN` of the temperatures, by heading or letter, a unit in brackets behind: \"Probe 1 (°C)\""},
	{"date-order", "Date order", "ORDER", "`ORDER` of the file's dates: day month year, month day year, year month day"},
	{"zone", "Time zone", "ZONE", "`ZONE` of the file's clock, as UTC+01:00"},
	{"missing", "Missing words", "WORDS", "further `WORDS` for a reading that is missing, divided by commas"},
	{"sensor", "Sensor", "NAME", "`NAME` of the instrument, for the report"},
	{"calibrated", "Calibrated on", "DATE", "`DATE` of its calibration, for the report"},
	{"correction", "Correction", "DIFFERENCE", "`DIFFERENCE` that is added to every reading, in °C"},
	{"accuracy", "Accuracy", "DIFFERENCE", "`DIFFERENCE` by which the instrument may be off, in °C; it weighs in the verdicts"},
}

func judgeCommand(files *shelf) *cobra.Command {
	var limits, like, stages string
	var o checkOptions
	values := make([]string, len(judgeFlags))
	cmd := &cobra.Command{
		Use: "judge RECORD", Short: "Judge the file of a probe logger by the limits of a plan",
		Long: `Judge reads one channel of a logger's file (.csv, .txt or .xlsx) and judges it by the limits of a plan, with no prediction. What the
readings leave open is never filled in: between two readings and across gaps both the lowest and the highest course are judged, and
where they differ the verdict is cannot tell.

A logger is set up once as a row of the plan's sheet Records and used again with --like.
Exit codes: 0 every must limit is met; 1 one is not, or cannot be told; 2 the file or the plan could not be used; 3 the results could not
be written, or a fault of the program.`,
		Example: "  slowpoint judge probe.csv --limits plan.xlsx --product \"Turkey roll\" --starts \"simmer 09:12; rest 11:25; ice bath 11:40; store 14:50; end 15:00\"\n" +
			"  slowpoint judge probe.csv --limits plan.xlsx --stages \"cook 09:12; cool 11:40; end 15:00\"", Args: cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			given := workbook.Given{Cells: map[string]string{}, Like: like, Stages: stages}
			for i, f := range judgeFlags {
				given.Cells[f.heading] = values[i]
			}
			return judge(cmd, args[0], limits, given, &o, files)
		},
	}
	f := cmd.Flags()
	f.StringVar(&limits, "limits", "", "`PLAN` whose limits judge the record (needed)")
	f.StringVar(&like, "like", "", "take what is not said here from the row `NAME` of the plan's sheet Records")
	f.StringVar(&stages, "stages", "", "`STAGES` with their times, where no product of the plan is meant: \"cook 09:12; cool 11:20\"")
	for i, j := range judgeFlags {
		f.StringVar(&values[i], j.flag, "", j.use)
	}
	f.StringVar(&o.out, "out", "", "`FOLDER` of the results (default RECORD-results beside the file)")
	f.StringVar(&o.every, "every", "60s", "`INTERVAL` of the courses in the results; it changes no verdict")
	f.StringVar(&o.date, "date", "", "`DATE` on the report, as 2026-01-31 (default today)")
	f.StringVar(&o.paper, "paper", "", "`SIZE` of the pages: A4 or Letter (default: the plan's own, else A4)")
	f.StringVar(&o.font, "font", "", "TrueType `FILE.ttf` that prints, in the PDFs, the characters that DejaVu Sans lacks, such as Chinese or Japanese ones")
	f.BoolVar(&o.noPDF, "no-pdf", false, "write no PDF")
	return cmd
}

// judge judges one record by itself.
func judge(cmd *cobra.Command, path, limits string, given workbook.Given, o *checkOptions, files *shelf) error {
	if limits == "" {
		return &failure{exitInput, errors.New("--limits is missing: name the plan whose limits judge the record")}
	}
	if given.Stages != "" {
		for _, heading := range []string{"Product", "Process", "Starts at"} {
			if given.Cells[heading] != "" {
				return &failure{exitInput, fmt.Errorf("--stages and --%s exclude each other: leave one out", flagOf(heading))}
			}
		}
		given.Cells["Starts at"] = given.Stages
	}
	if _, err := workbook.Look(path); err != nil {
		return &failure{exitInput, fmt.Errorf("the file of the logger, %w", err)}
	}
	name := filepath.Base(path)
	given.Cells["Record"], given.Cells["File"] = strings.TrimSuffix(name, filepath.Ext(name)), name
	if !filepath.IsLocal(name) || strings.ContainsAny(name, `:\`) {
		given.Cells["File"] = "record"
	}
	if given.Cells["What it measured"] == "" && given.Like == "" {
		given.Cells["What it measured"] = "slowest point"
	}
	plan, rec, err := workbook.ReadWith(limits, given)
	if err != nil {
		return &failure{exitInput, err}
	}
	flagged(plan.Problems)
	for i := range plan.Problems {
		if e := &plan.Problems[i]; given.Stages != "" && e.At.Sheet == "--starts" {
			e.At.Sheet = "--stages"
		}
	}
	if rec == nil || !rec.Sound {
		tellProblems(cmd.ErrOrStderr(), ofFlags(plan.Problems))
		return &failure{exitInput, errors.New("the record could not be judged")}
	}
	if !rec.Of.Food() {
		return &failure{exitInput, errors.New("--measured names a medium: judge is about the food; put the record into the plan's sheet Records, and check calculates with it")}
	}
	rec.File = name
	for heading := range rec.Cells {
		if f := flagOf(heading); f != "" {
			rec.Cells[heading] = cell.Ref{Sheet: "--" + f}
		}
	}
	rec.Cells["File"] = cell.Ref{Sheet: name}
	if given.Stages != "" {
		rec.Cells["Starts at"] = cell.Ref{Sheet: "--stages"}
	}
	p := rec.Products[0]
	if es := chainFaults(plan, p); es.Faults() > 0 {
		tellProblems(cmd.ErrOrStderr(), es)
		return &failure{exitInput, errors.New("the steps of the product are not known for sure; mend them, or say the stages with --stages")}
	}
	plan.Products, plan.NotCalculated = []workbook.Product{*p}, nil
	if o.out == "" {
		o.out = strings.TrimSuffix(path, filepath.Ext(path)) + "-results"
	}
	return judgeAlone(cmd, plan, rec, path, o, files)
}

// chainFaults are the faults that leave open which steps a product goes through, and how long they are: a stage that is lost would be a limit
// that does not apply. What only a calculation needs is left aside.
func chainFaults(plan *workbook.Plan, p *workbook.Product) (es cell.Errors) {
	for _, n := range plan.NotCalculated {
		if n.Product != p.Name {
			continue
		}
		for _, e := range n.Because {
			switch {
			case e.Level != cell.Fault:
			case e.At.Sheet == "Products" && (e.Field == "Process" || e.Field == "Product"), e.At.Sheet != "Products" && slices.Contains(ofChain, e.Field):
				es.Add(e)
			}
		}
	}
	for i := range p.Steps {
		if st := &p.Steps[i]; st.Stage == nil {
			es.Add(cell.Error{At: st.At, Field: "Stage", Msg: "The stage of " + st.Name + " is not known", Hint: "correct it, or say the stages with --stages"})
		}
	}
	return es
}

// ofChain are the headings of Steps that say which steps there are and how long; "" is a whole row or sheet.
var ofChain = []string{"", "Process", "Product", "Step", "Stage", "Duration", "Until slowest point reaches"}

// judgeAlone reads the file, judges it and writes the report.
func judgeAlone(cmd *cobra.Command, plan *workbook.Plan, rec *workbook.Record, path string, o *checkOptions, files *shelf) error {
	font, err := fontOf(o)
	if err != nil {
		return err
	}
	report.UseFont(font)
	defer report.UseFont(nil)
	head, err := headOf(plan, o)
	if err != nil {
		return err
	}
	setting := settingOf(rec, path, head.Date)
	l := &logs{read: map[*workbook.Record]func() (*record.Log, cell.Errors){rec: sync.OnceValues(func() (*record.Log, cell.Errors) { return record.Read(setting) })}}
	log, problems := l.read[rec]()
	if log == nil {
		tellProblems(cmd.ErrOrStderr(), problems)
		return &failure{exitInput, errors.New("the record could not be read")}
	}
	plan.Problems = aboutLimits(plan) // those of the file come with its findings
	head.Problems = plan.Problems
	head.Products, head.Judged = 1, true
	for _, k := range known() {
		head.Known = append(head.Known, k.KnownAnswer)
	}
	r := &runner{shelf: files, plan: plan, head: head, logs: l, folder: o.out, options: o, names: filesOf(plan), progress: progress(cmd.ErrOrStderr(), 0)}
	if r.alone, problems = r.judgedAlone(rec, &plan.Products[0]); r.alone == nil {
		tellProblems(cmd.ErrOrStderr(), problems)
		return &failure{exitInput, errors.New("the record could not be judged")}
	}
	if err := files.makeFolder(o.out); err != nil {
		return &failure{exitFault, err}
	}
	if err := r.all(); err != nil {
		return &failure{exitFault, err}
	}
	tellProblems(cmd.ErrOrStderr(), head.Problems)
	r.tell(cmd.OutOrStdout())
	return r.exit()
}

// flagOf is the flag that fills a column of the sheet Records; "" if there is none.
func flagOf(heading string) string {
	for _, f := range judgeFlags {
		if f.heading == heading {
			return f.flag
		}
	}
	return ""
}

// flagged names the flags in the place of the cells of the row that they filled.
func flagged(es cell.Errors) {
	for i := range es {
		if e := &es[i]; e.At.Sheet == "Records" {
			if f := flagOf(e.Field); f != "" {
				e.At = cell.Ref{Sheet: "--" + f}
			}
		}
	}
}

// ofFlags are the problems of the row that flags filled.
func ofFlags(es cell.Errors) cell.Errors {
	var out cell.Errors
	for _, e := range es {
		if strings.HasPrefix(e.At.Sheet, "--") || e.At.Sheet == "Records" {
			out = append(out, e)
		}
	}
	return out
}

// aboutLimits are the problems of a plan that touch its limits, or all of it.
func aboutLimits(plan *workbook.Plan) cell.Errors {
	var out cell.Errors
	for _, e := range plan.Problems {
		switch e.At.Sheet {
		case "Limits", "Groups", "Tables", "Plan", "":
			out = append(out, e)
		}
	}
	return out
}

// judgedAlone is a record as a product of its own; nil with the reasons where it cannot be judged.
func (r *runner) judgedAlone(rec *workbook.Record, p *workbook.Product) (*report.Product, cell.Errors) {
	m := r.measured(rec, p, nil, nil)
	if m.History == nil {
		return nil, m.Problems
	}
	out := &report.Product{Product: p.Product, Steps: p.Steps, Family: p.Family, RecipeVersion: p.RecipeVersion, Batch: p.Batch, Process: p.Process,
		Note: p.Note, History: m.History, Judgement: m.Judgement, Readings: rec.Readings()}
	for i := range out.Readings {
		at := &out.Readings[i].At
		if f := flagOf(out.Readings[i].Column); f != "" {
			*at = cell.Ref{Sheet: "--" + f}
		} else if at.Sheet == "Records" { // named after the file that was given
			*at = cell.Ref{Sheet: rec.File}
		}
	}
	out.Samples = out.History.Sample(r.head.EveryS)
	out.Measured = []report.Measured{*m}
	return out, nil
}
