package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"maps"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"sync"
	"time"

	"github.com/schollz/progressbar/v3"
	"github.com/spf13/cobra"
	"golang.org/x/term"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// checkOptions are the flags of check.
type checkOptions struct {
	out, every, date, paper, font string
	only                          []string
	fit                           string
	onePDF, noPDF                 bool
	samples                       int
	seed                          uint64
}

func checkCommand(files *shelf) *cobra.Command {
	var o checkOptions
	cmd := &cobra.Command{
		Use: "check [PLAN]", Short: "Calculate a plan, judge its limits and write the report; without PLAN, the built-in demo",
		Example: "  slowpoint check\n  slowpoint check plan.xlsx --out results", Args: onePlan(0),
		RunE: func(cmd *cobra.Command, args []string) error { return check(cmd, args, &o, files) },
	}
	f := cmd.Flags()
	f.StringVar(&o.out, "out", "", "`FOLDER` of the results (default PLAN-results beside the plan)")
	f.StringVar(&o.every, "every", "60s", "`INTERVAL` of the courses in the results; it changes no verdict")
	f.StringArrayVar(&o.only, "only", nil, "calculate this `PRODUCT` only (may be repeated)")
	f.StringVar(&o.date, "date", "", "`DATE` on the report, as 2026-01-31 (default today)")
	f.StringVar(&o.paper, "paper", "", "`SIZE` of the pages: A4 or Letter (default: the plan's own, else A4)")
	f.StringVar(&o.font, "font", "", "TrueType `FILE.ttf` that prints, in the PDFs, the characters that DejaVu Sans lacks, such as Chinese or Japanese ones")
	f.StringVar(&o.fit, "fit", "", "with a sheet Records: fit `WHAT` to each record of a product: film, conductivity or film,conductivity; it changes no verdict")
	f.BoolVar(&o.onePDF, "one-pdf", false, "one PDF with everything instead of one a product")
	f.BoolVar(&o.noPDF, "no-pdf", false, "write no PDF")
	f.IntVar(&o.samples, "samples", 0, "with a sheet Spread: judge `N` drawn pieces, 200 say, and tell the share that meets each limit (0 = none)")
	f.Uint64Var(&o.seed, "seed", 1, "`SEED` of the drawn pieces; the same seed draws the same")
	return cmd
}

// check is the main job.
func check(cmd *cobra.Command, args []string, o *checkOptions, files *shelf) error {
	plan, folder, err := readPlan(args, o)
	if err != nil {
		return err
	}
	font, err := fontOf(o)
	if err != nil {
		return err
	}
	report.UseFont(font)
	defer report.UseFont(nil)
	if !o.noPDF {
		plan.Problems = append(plan.Problems, unprinted(plan)...)
		plan.Problems.Sort(plan.Sheets)
	}
	fit, err := fittingOf(o.fit)
	if err != nil {
		return &failure{exitInput, err}
	}
	names := filesOf(plan)
	left, err := keepOnly(plan, "--only", o.only)
	if err != nil {
		return err
	}
	head, err := headOf(plan, o)
	if err != nil {
		return err
	}
	head.LeftOut = left
	if err := files.makeFolder(folder); err != nil {
		return &failure{exitFault, err}
	}
	for _, k := range known() {
		head.Known = append(head.Known, k.KnownAnswer)
	}
	head.Products = len(plan.Products)
	r := &runner{shelf: files, plan: plan, head: head, logs: newLogs(plan, planFolder(args), head.Date), fit: fit, folder: folder, options: o, names: names, progress: progress(cmd.ErrOrStderr(), len(plan.Products))}
	if err := r.all(); err != nil {
		return &failure{exitFault, err}
	}
	tellProblems(cmd.ErrOrStderr(), head.Problems)
	r.tell(cmd.OutOrStdout())
	return r.exit()
}

// mostFont is the size of the largest font file that is taken, bytes.
const mostFont = 30 << 20

// fontOf reads the font of --font; nil if there is none.
func fontOf(o *checkOptions) (*report.Font, error) {
	if o.font == "" {
		return nil, nil
	}
	if o.noPDF {
		return nil, &failure{exitInput, errors.New("--font and --no-pdf exclude each other: the font is for the PDFs; leave one out")}
	}
	ttf, err := readFont(o.font)
	var f *report.Font
	if err == nil {
		f, err = report.ReadFont(ttf)
	}
	if err != nil {
		return nil, &failure{exitInput, fmt.Errorf("--font %s: %w", o.font, err)}
	}
	return f, nil
}

// readFont reads a font file, if it is not too large.
func readFont(name string) ([]byte, error) {
	in, err := os.Open(name)
	if err != nil {
		return nil, reason(err)
	}
	defer in.Close()
	ttf, err := io.ReadAll(io.LimitReader(in, mostFont+1))
	if err != nil {
		return nil, reason(err)
	}
	if len(ttf) > mostFont {
		return nil, fmt.Errorf("the file is larger than %d MB: take a font of one script, or one cut down to it", mostFont>>20)
	}
	return ttf, nil
}

// reason is an error of a file without the name of the file.
func reason(err error) error {
	var p *os.PathError
	if errors.As(err, &p) {
		return p.Err
	}
	return err
}

// unprinted warns of the names that the PDF cannot show in full: those of products, steps and limits, and what Plan says.
func unprinted(plan *workbook.Plan) cell.Errors {
	var found cell.Errors
	look := func(at cell.Ref, field, name string) {
		if list := report.Unprinted(name); list != "" {
			found.Add(plan.Locate(cell.Error{At: at, Level: cell.Warning, Field: field, Typed: name,
				Msg:  "holds characters that the font of the PDF lacks (" + list + "); it prints \uFFFD for each",
				Hint: "the screen, report.txt, results.xlsx and results.json keep the name as it is typed; for the PDF give a font that has them (check --font FILE.ttf; none prints those above U+FFFF), or add a name in Latin, Greek or Cyrillic letters"}))
		}
	}
	steps := map[cell.Ref]bool{}
	for i := range plan.Products {
		p := &plan.Products[i]
		look(p.At, "Product", p.Name)
		for k := range p.Steps {
			if s := &p.Steps[k]; !steps[s.At] {
				steps[s.At] = true
				look(s.At, "Step", s.Name)
			}
		}
	}
	for i := range plan.Limits {
		look(plan.Limits[i].At, "Limit", plan.Limits[i].Name)
	}
	for _, it := range plan.Items {
		look(it.At, "Value", it.Value)
	}
	return found
}

// readPlan reads the plan or the demo and says where its results go.
func readPlan(args []string, o *checkOptions) (plan *workbook.Plan, folder string, err error) {
	if len(args) == 0 {
		plan, err = workbook.ReadDemo()
		folder = "slowpoint-demo-results"
	} else {
		plan, err = workbook.Read(args[0])
		folder = beside(args[0])
	}
	if err != nil {
		return nil, "", &failure{exitInput, err}
	}
	if o.out != "" {
		folder = o.out
	}
	return plan, folder, nil
}

// planFolder is the folder that the files of a plan lie in; "." for the demo, which has none.
func planFolder(args []string) string {
	if len(args) == 0 {
		return "."
	}
	if info, err := os.Stat(args[0]); err == nil && info.IsDir() {
		return args[0]
	}
	return filepath.Dir(args[0])
}

// beside is the folder of the results when none is named: beside the plan, with its name.
func beside(plan string) string {
	path := filepath.Clean(plan)
	if base := filepath.Base(path); base == "." || base == ".." {
		if whole, err := filepath.Abs(path); err == nil {
			path = whole
		}
	}
	if ext := filepath.Ext(path); strings.EqualFold(ext, ".xlsx") || strings.EqualFold(ext, ".xlsm") {
		path = strings.TrimSuffix(path, ext)
	}
	return path + "-results"
}

// headOf makes what all documents share.
func headOf(plan *workbook.Plan, o *checkOptions) (*report.Head, error) {
	h := &report.Head{Version: version, Plan: plan.Name, SHA256: plan.SHA256, Paper: plan.Paper, Fahrenheit: plan.Fahrenheit, Problems: plan.Problems}
	for _, it := range plan.Items {
		h.Items = append(h.Items, report.Item(it))
	}
	for _, s := range plan.Sources {
		h.Sources = append(h.Sources, report.Source(s))
	}
	h.NotImported = plan.NotImported
	for _, n := range plan.NotCalculated {
		h.NotCalculated = append(h.NotCalculated, report.NotCalculated(n))
	}
	switch strings.ToLower(o.paper) {
	case "a4":
		h.Paper = "A4"
	case "letter":
		h.Paper = "Letter"
	case "":
	default:
		return nil, &failure{exitInput, fmt.Errorf("--paper %q: expected A4 or Letter", o.paper)}
	}
	if h.Paper == "" {
		h.Paper = "A4"
	}
	if o.samples < 0 || o.samples > mostSamples {
		return nil, &failure{exitInput, fmt.Errorf("--samples %d: expected a number from 0 to %d", o.samples, mostSamples)}
	}
	if o.onePDF && o.noPDF {
		return nil, &failure{exitInput, errors.New("--one-pdf and --no-pdf exclude each other: leave one out")}
	}
	every, err := time.ParseDuration(o.every)
	if err != nil || every < time.Second {
		return nil, &failure{exitInput, fmt.Errorf("--every %q: expected a duration of at least 1s, such as 60s or 5m", o.every)}
	}
	h.EveryS = every.Seconds()
	h.Date = time.Now()
	if o.date != "" {
		if h.Date, err = time.Parse("2006-01-02", o.date); err != nil {
			return nil, &failure{exitInput, fmt.Errorf("--date %q: expected a date such as 2026-01-31", o.date)}
		}
	}
	h.Date = time.Date(h.Date.Year(), h.Date.Month(), h.Date.Day(), 0, 0, 0, 0, time.UTC)
	for i := range plan.Products {
		h.MostPoints = max(h.MostPoints, 1+len(plan.Products[i].Points))
	}
	return h, nil
}

// filesOf gives each product of the whole plan the file name of its report, those that cannot be calculated too: so --only, and a product
// with a mistake, name the reports of the others as a run of everything does, and what is left of an earlier run is known.
func filesOf(plan *workbook.Plan) map[string]string {
	type named struct {
		row  int
		name string
	}
	var all []named
	for i := range plan.Products {
		all = append(all, named{plan.Products[i].At.Row, plan.Products[i].Name})
	}
	for _, n := range plan.NotCalculated {
		all = append(all, named{n.At.Row, n.Product})
	}
	slices.SortStableFunc(all, func(a, b named) int { return a.row - b.row })
	var products []string
	seen := map[string]bool{"": true}
	for _, n := range all {
		if !seen[n.name] { // a name that comes twice is a mistake of the second row
			products = append(products, n.name)
		}
		seen[n.name] = true
	}
	out := make(map[string]string, len(products))
	for i, file := range fileNames(products) {
		out[products[i]] = file
	}
	return out
}

// keepOnly drops the products that were not asked for by a flag, and names them; an unknown name is an error.
func keepOnly(plan *workbook.Plan, flag string, only []string) (left []string, err error) {
	if len(only) == 0 {
		return nil, nil
	}
	var names []string
	for i := range plan.Products {
		names = append(names, plan.Products[i].Name)
	}
	for _, n := range plan.NotCalculated {
		names = append(names, n.Product)
	}
	for _, o := range only {
		if !slices.ContainsFunc(names, func(n string) bool { return sameName(n, o) }) {
			return nil, &failure{exitInput, fmt.Errorf("%s %q: the plan has no product of that name; it has %s", flag, o, strings.Join(names[:min(len(names), 20)], ", "))}
		}
	}
	keep := func(n string) bool {
		return slices.ContainsFunc(only, func(o string) bool { return sameName(n, o) })
	}
	plan.Products = slices.DeleteFunc(plan.Products, func(p workbook.Product) bool {
		if keep(p.Name) {
			return false
		}
		left = append(left, p.Name)
		return true
	})
	plan.NotCalculated = slices.DeleteFunc(plan.NotCalculated, func(n workbook.NotCalculated) bool {
		if keep(n.Product) {
			return false
		}
		left = append(left, n.Product)
		return true
	})
	return left, nil
}

// sameName compares names without regard to case and blanks.
func sameName(a, b string) bool {
	return strings.EqualFold(strings.Join(strings.Fields(a), " "), strings.Join(strings.Fields(b), " "))
}

// progress is a bar on a terminal and nothing elsewhere, nor for a few products.
func progress(errs io.Writer, n int) *progressbar.ProgressBar {
	return progressOf(errs, n, "calculating", n > 3)
}

// progressOf is a bar of n parts, if it is wanted and errs is a terminal.
func progressOf(errs io.Writer, n int, what string, wanted bool) *progressbar.ProgressBar {
	f, ok := errs.(*os.File)
	shown := wanted && ok && term.IsTerminal(int(f.Fd()))
	return progressbar.NewOptions(n, progressbar.OptionSetWriter(errs), progressbar.OptionSetVisibility(shown),
		progressbar.OptionSetDescription(what), progressbar.OptionShowCount(), progressbar.OptionClearOnFinish(),
		progressbar.OptionUseANSICodes(os.Getenv("NO_COLOR") == ""))
}

// runner takes the products of a plan through the whole job.
type runner struct {
	shelf    *shelf
	plan     *workbook.Plan
	head     *report.Head
	folder   string
	options  *checkOptions
	progress *progressbar.ProgressBar
	rows     []report.Row
	advice   []string               // by row: the advice that is not met, a line each
	logs     *logs                  // the files of records; nil: they are left alone
	fit      fitting                // what is fitted to records
	alone    *report.Product        // the product that a record was judged as, in the place of a prediction; nil: the plan is calculated
	names    map[string]string      // by product: the file name of its report, without its ending
	refused  []report.NotCalculated // found while calculating
	corners  map[cell.Ref]corner    // by row of Limits: where to judge what varies, once it was found; nil: it is looked for
	warned   cell.Errors            // as well, of products that were calculated
}

// mostSamples is how many pieces are drawn at most.
const mostSamples = 100_000

// ahead is how many products a processor may be ahead of the one that is written.
const ahead = 4

// all calculates every product on all processors and writes the results in the order of the plan.
func (r *runner) all() error {
	r.expect()
	jsonFile, err := r.shelf.spool(r.path("results.json"))
	if err != nil {
		return err
	}
	defer jsonFile.drop()
	bookFile, err := r.shelf.spool(r.path("results.xlsx"))
	if err != nil {
		return err
	}
	defer bookFile.drop()
	textFile, err := r.shelf.spool(r.path("report.txt"))
	if err != nil {
		return err
	}
	defer textFile.drop()
	js, book, text := report.NewJSON(jsonFile, r.head), report.NewWorkbook(bookFile, r.head), report.NewText(textFile, r.head)
	add := func(d *done) error {
		for _, w := range []func(*report.Product) error{js.Add, book.Add, text.Add} {
			if err := w(d.product); err != nil {
				return err
			}
		}
		row := d.product.Row()
		if !r.options.noPDF && !r.options.onePDF {
			row.File = d.file
		}
		r.rows, r.advice = append(r.rows, row), append(r.advice, adviceNotMet(d.product))
		r.warned = append(r.warned, d.product.History.Warnings...)
		for i := range d.product.Measured {
			r.warn(d.product.Measured[i].Problems)
		}
		if v := d.product.Deviation; v != nil {
			for i := range v.Records {
				r.warn(v.Records[i].Problems)
			}
		}
		return nil
	}
	if err := r.each(true, add); err != nil {
		return err
	}
	r.warn(r.unjudged())
	r.progress.Finish()
	for _, n := range r.refused { // after the last product, since reports read the head
		r.head.NotCalculated = append(r.head.NotCalculated, n)
		r.head.Problems = append(r.head.Problems, n.Because...)
		r.head.Products--
	}
	r.head.Problems = append(r.head.Problems, r.warned...)
	for _, w := range []func() error{js.Close, book.Close, text.Close} {
		if err := w(); err != nil {
			return err
		}
	}
	for _, f := range []*spooled{jsonFile, bookFile, textFile} {
		if err := f.keep(); err != nil {
			return err
		}
	}
	if r.options.noPDF {
		return nil
	}
	return r.shelf.writeWhole(r.path("summary.pdf"), func(w io.Writer) error {
		if !r.options.onePDF {
			return report.WriteSummaryPDF(w, r.head, r.rows)
		}
		return report.OnePDF(w, r.head, r.rows, func(put func(*report.Product) error) error {
			return r.each(false, func(d *done) error { return put(d.product) })
		})
	})
}

// warn notes problems once, though they may touch several products.
func (r *runner) warn(es cell.Errors) {
	for _, e := range es {
		if !slices.Contains(r.warned, e) {
			r.warned.Add(e)
		}
	}
}

// path is the place of a results file.
func (r *runner) path(name string) string { return filepath.Join(r.folder, name) }

// expect tells the shelf which files the run is to write, and which an earlier one of the plan may have left.
func (r *runner) expect() {
	r.shelf.expect(r.path("results.json"), r.path("results.xlsx"), r.path("report.txt"))
	due := map[string]bool{}
	if !r.options.noPDF {
		due["summary"] = true
		r.shelf.expect(r.path("summary.pdf"))
	}
	if !r.options.noPDF && !r.options.onePDF {
		for i := range r.plan.Products {
			f := r.names[r.plan.Products[i].Name]
			due[f] = true
			r.shelf.expect(r.path(f + ".pdf"))
		}
	}
	for _, f := range append(slices.Sorted(maps.Values(r.names)), "summary") {
		if !due[f] {
			r.shelf.spare(r.path(f + ".pdf"))
		}
	}
}

// done is one product after its calculation.
type done struct {
	product *report.Product // nil: refused
	refused cell.Errors     // why
	at      cell.Ref
	name    string
	file    string
	err     error
}

// each calculates every product and hands them on in the order of the plan. Product reports are written on the way,
// if wanted. The order of what is handed on does not depend on the number of processors.
func (r *runner) each(reports bool, take func(*done) error) error {
	ctx, cancel := context.WithCancel(context.Background())
	var working sync.WaitGroup
	defer working.Wait() // nobody may be left who writes a file
	defer cancel()
	workers := runtime.GOMAXPROCS(0)
	queue := make(chan chan *done, ahead*workers)
	slots := make(chan struct{}, workers)
	working.Go(func() {
		defer close(queue)
		for i := range r.plan.Products {
			result := make(chan *done, 1)
			select {
			case <-ctx.Done():
				return
			case slots <- struct{}{}:
			}
			select {
			case <-ctx.Done():
				return
			case queue <- result:
			}
			working.Go(func() {
				defer func() { <-slots }()
				result <- r.one(i, reports)
			})
		}
	})
	for result := range queue {
		d := <-result
		if d.err != nil {
			return d.err
		}
		if d.product == nil {
			r.refuse(d, reports)
		} else if err := take(d); err != nil {
			return err
		}
		if reports {
			r.progress.Add(1)
		}
	}
	return nil
}

// refuse notes a product that turned out not to be calculable; first tells whether it is met for the first time.
func (r *runner) refuse(d *done, first bool) {
	if !first {
		return
	}
	r.refused = append(r.refused, report.NotCalculated{At: d.at, Product: d.name, Because: d.refused})
}

// one calculates, judges and reports one product.
func (r *runner) one(i int, reports bool) (d *done) {
	p := &r.plan.Products[i]
	d = &done{file: r.names[p.Name] + ".pdf", at: p.At, name: p.Name}
	defer func() {
		if fault := recover(); fault != nil {
			d.err = fmt.Errorf("fault of the program at product %s: %v; please report it with the plan", p.Name, fault)
		}
	}()
	d.product, d.err = r.calculate(p)
	if errors.As(d.err, &d.refused) { // found while it was calculated
		d.err = nil
		for j, e := range d.refused {
			d.refused[j] = p.AsTyped(r.plan.Locate(e))
		}
		return d
	}
	if d.err != nil || !reports || r.options.noPDF || r.options.onePDF {
		return d
	}
	d.err = r.shelf.writeWhole(r.path(d.file), func(w io.Writer) error {
		return report.WriteProductPDF(w, r.head, d.product)
	})
	return d
}

// tell prints the overview: the products that need attention first, each with the limit that decides and the room it leaves.
func (r *runner) tell(w io.Writer) {
	const indent = "               "
	for _, n := range r.head.NotCalculated[:min(len(r.head.NotCalculated), most)] {
		fmt.Fprintf(w, "%-14s %s\n%s%s\n", "NOT CALCULATED", n.Product, indent, firstFault(n.Because))
	}
	order := make([]int, len(r.rows))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return weigh(r.rows[a].Worst()) - weigh(r.rows[b].Worst()) })
	for _, i := range order[:min(len(order), most)] {
		row := &r.rows[i]
		fmt.Fprintf(w, "%-14s %s%s\n", strings.ToUpper(row.Verdict.String()), row.Product, byRecord(row))
		line := row.Deciding
		if room := row.Room(r.head); room != "" {
			line += ": " + room
		}
		if line != "" {
			fmt.Fprintf(w, "%s%s\n", indent, line)
		}
		if row.Why != "" {
			fmt.Fprintf(w, "%s%s\n", indent, row.Why)
		}
		for _, s := range row.Records {
			fmt.Fprintf(w, "%s%s\n", indent, s)
		}
		if r.advice[i] != "" {
			fmt.Fprintf(w, "%sAdvice not met: %s\n", indent, r.advice[i])
		}
	}
	if len(r.rows) > most || len(r.head.NotCalculated) > most {
		fmt.Fprintf(w, "… at most %d of a kind are shown here; all of them are in report.txt\n", most)
	}
	fmt.Fprintf(w, "\n%s\n", r.counts())
	if left := r.head.LeftOutWords(); left != "" {
		fmt.Fprintln(w, left)
	}
	basis := "Calculated from the inputs, not measured; your food authority decides."
	if r.alone != nil {
		basis = "Judged from the record alone; your food authority decides."
	}
	fmt.Fprintf(w, "%s\nResults in %s\n", basis, r.folder)
	if stale := r.shelf.stale(); stale != "" {
		fmt.Fprintln(w, stale)
	}
}

// byRecord says behind the name of a product that a record is not met or cannot be told.
func byRecord(r *report.Row) string {
	if r.Measured == nil || *r.Measured == rules.Met {
		return ""
	}
	return " – by record " + strings.ToUpper(r.Measured.String())
}

// firstFault is the first error of a product that was not calculated, and how many more it has.
func firstFault(es cell.Errors) string {
	text, more := "", -1
	for _, e := range es {
		if e.Level != cell.Fault {
			continue
		}
		if more++; more == 0 {
			text = e.Error()
		}
	}
	if more > 0 {
		text += fmt.Sprintf(" (and %s more)", count(more, "error"))
	}
	return text
}

// counts says how many products have which verdict.
func (r *runner) counts() string {
	n := map[rules.Verdict]int{}
	for _, row := range r.rows {
		n[row.Verdict]++
	}
	s := fmt.Sprintf("%s: %d met, %d not met, %d cannot tell", count(len(r.rows)+len(r.head.NotCalculated), "product"), n[rules.Met], n[rules.NotMet],
		n[rules.CannotTell]+n[rules.NotApplicable])
	if k := len(r.head.NotCalculated); k > 0 {
		s += fmt.Sprintf(", %d not calculated", k)
	}
	records := map[rules.Verdict]int{}
	some := 0
	for _, row := range r.rows {
		if row.Measured != nil {
			records[*row.Measured]++
			some++
		}
	}
	if some > 0 {
		s += fmt.Sprintf("; by records of %s: %d met, %d not met, %d cannot tell", count(some, "product"), records[rules.Met], records[rules.NotMet], records[rules.CannotTell])
	}
	return s + notImported(r.plan)
}

// adviceNotMet tells the limits of level advice that a product does not meet; they do not weigh in its verdict.
func adviceNotMet(p *report.Product) string {
	var s []string
	for _, f := range p.Judgement.Findings {
		if f.Level == "advice" && f.Verdict == rules.NotMet {
			s = append(s, f.Limit.Name+". "+f.Why)
		}
	}
	return strings.Join(s, "; ")
}

// weigh puts the worst verdict first.
func weigh(v rules.Verdict) int {
	return slices.Index([]rules.Verdict{rules.NotMet, rules.CannotTell, rules.NotApplicable, rules.Met}, v)
}

// exit gives the exit code of the run.
func (r *runner) exit() error {
	if r.plan.Problems.Faults() > 0 || r.warned.Faults() > 0 || len(r.head.NotCalculated) > 0 || r.plan.NotImported > 0 {
		return &failure{code: exitInput}
	}
	if len(r.rows) == 0 {
		return &failure{exitInput, errors.New("the plan has no product to calculate")}
	}
	for _, row := range r.rows {
		if row.Verdict != rules.Met || row.Measured != nil && *row.Measured != rules.Met {
			return &failure{code: exitNotMet}
		}
	}
	return nil
}
