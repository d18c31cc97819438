package report

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// Text writes report.txt: what the PDFs hold, as plain text that a screen reader reads in order. It stands in the words of
// the PDFs wherever they have any. A product is written and forgotten; only a line for the list is kept.
// Problems and NotCalculated of the head may grow until Close.
type Text struct {
	w        io.Writer
	h        *Head
	products spool
	buf      *bufio.Writer // in front of the spool, later of w
	rows     []slim
}

// NewText makes a writer of report.txt; nothing reaches w before Close.
func NewText(w io.Writer, h *Head) *Text {
	t := &Text{w: w, h: h}
	t.buf = bufio.NewWriterSize(&t.products, 1<<16)
	return t
}

// textWords are the texts that only report.txt has.
var textWords = map[string]string{
	"title record":    "slowpoint: recorded temperatures held against the limits that the user entered",
	"what record":     "What was judged",
	"title":           "slowpoint: calculated temperatures held against the limits that the user entered",
	"order":           "This text says the same as the PDF reports. First the plan, then all products with their verdicts, then each product, then the known-answer cases and the words used.",
	"courses":         "The whole courses of temperature are in results.xlsx and results.json.",
	"rounding":        "Temperatures stand in the user's unit first, with the other unit in brackets. Results are rounded to the unfavourable side; limits are not rounded.",
	"plan":            "Plan",
	"file":            "File: %s",
	"digest":          "SHA-256 of the file: %s",
	"source":          "Made by the import from: %s, SHA-256 %s",
	"version":         "Program: slowpoint %s",
	"date":            "Date: %s",
	"item":            "%s: %s",
	"blank":           "(blank)",
	"problems":        "Problems in the plan",
	"no problems":     "None.",
	"problem":         "%s, %s",
	"refused":         "Products that could not be calculated",
	"refused one":     "%s (%s)",
	"list":            "All products, the most urgent first",
	"list part":       "The products of this run, the most urgent first",
	"list none":       "No product was calculated.",
	"list one":        "%d. %s: %s.",
	"list deciding":   " Deciding limit: %s.",
	"list room":       " Margin: %s.",
	"list why":        " Why: %s",
	"list cautions":   " Cautions: %d.",
	"product":         "Product %d: %s",
	"verdict":         "Verdict: %s. %s",
	"what":            "What was calculated",
	"limits":          "Limits, the most urgent first",
	"limits none":     "No limit was judged.",
	"group":           "Group %s (%s): %s.",
	"group by":        " Decided by %s.",
	"limit":           "Limit %d: %s: %s",
	"properties":      "%s at %s: conductivity %s W/(m·K), density %s kg/m³, specific heat %s J/(kg·K)",
	"properties ice":  ", ice %s",
	"limit low":       " (second run, at 0.9 of the conductivity)",
	"limit mixed":     " (run as well mixed)",
	"limit worst":     " (at its unfavourable ends)",
	"measured":        "Measured (the user's own records)",
	"record":          "Record %s",
	"as recorded":     "With the surroundings as recorded",
	"as recorded one": "%s: as planned %s; as recorded %s. %s",
	"record limit":    "%s: %s; %s. %s",
	"drivers":         "What drives each margin",
	"drivers of":      "%s",
	"driver":          "%d. %s. %s. Basis: %s",
	"course":          "Course of temperature",
	"recorded":        "These temperatures were measured.",
	"predicted":       "These temperatures were calculated, not measured.",
	"step":            "%s, %s to %s",
	"step medium":     "surroundings at the end %s",
	"coldest":         "coldest at the end %s (%s)",
	"hottest":         "hottest at the end %s (%s)",
	"mean":            "mean at the end %s",
	"point":           "%s at the end %s",
	"deciding":        "where the tightest limit is decided (%s) at the end %s",
	"moves":           "How the slowest place moves",
	"lever":           "The biggest lever",
	"profile":         "Profile through the product",
	"factors":         "What the numbers rest on",
	"factor":          "%s: %s",
	"factor from":     " (from: %s)",
	"method":          "Method: %s.",
	"error":           "Error estimate: %s at any place, from %s after each change of surroundings%s.",
	"interval":        "Courses are written every %s and at each change of step; limits are judged from the field itself, not from this interval.",
	"bound":           "From %s on the temperatures are bounds: %s",
	"cautions":        "Cautions for this run",
	"cautions none":   "None beyond the standing caution.",
	"input":           "Input: what was typed and what was used",
	"typed":           "%s, %s: typed %q, used %s",
	"default":         "%s, %s: left blank, used %s",
	"because":         " (%s)",
	"known":           "Known-answer cases solved by this program on this machine",
	"known none":      "None were solved in this run.",
	"known one":       "%s: expected %s, got %s, allowance %s: %s. Source: %s",
	"known good":      "within the allowance",
	"known bad":       "OUTSIDE THE ALLOWANCE: do not use these results",
	"caution":         "Caution",
	"changes":         "When to look at the process again",
	"glossary":        "Words used",
	"end":             "End of the report.",
}

func (t *Text) put(s string) { _, _ = t.buf.WriteString(s) } // the writer keeps the first error for Flush

// heading writes a heading; level 1 is underlined with =, 2 with -, 3 not at all.
func (t *Text) heading(level int, key string, args ...any) {
	s := oneLine(fmt.Sprintf(textWords[key], args...))
	t.put("\n" + s + "\n")
	if level < 3 {
		t.put(strings.Repeat([...]string{"", "=", "-"}[level], len([]rune(s))) + "\n")
	}
}

// line writes a paragraph of one line.
func (t *Text) line(key string, args ...any) { t.plain(fmt.Sprintf(textWords[key], args...)) }

func (t *Text) plain(s string) {
	if s = oneLine(s); s != "" {
		t.put(s + "\n")
	}
}

func (t *Text) item(s string) {
	if s = oneLine(s); s != "" {
		t.put("- " + s + "\n")
	}
}

// oneLine keeps a user's text from breaking the form: line ends and control characters become blanks.
func oneLine(s string) string {
	s = strings.ToValidUTF8(s, "\uFFFD")
	return strings.TrimSpace(strings.Map(func(r rune) rune {
		if r < ' ' || r >= 0x7F && r < 0xA0 || r == 0x2028 || r == 0x2029 {
			return ' '
		}
		return r
	}, s))
}

// Add writes one product; it may be forgotten afterwards.
func (t *Text) Add(p *Product) error {
	if p == nil || p.History == nil {
		return errors.New("report.txt: a product without a history")
	}
	t.rows = append(t.rows, slimOf(t.h, p, len(t.rows)+1))
	x := &sheet{doc: &doc{head: t.h}, p: p, decides: p.decides(), order: p.worstFirst(), cautions: Cautions(t.h, p)}
	t.heading(1, "product", len(t.rows), p.Product.Name)
	t.line("verdict", overall(p.Judgement.Verdict), x.headline()+x.lessRoom()+x.besides())
	t.plain(x.counts())
	for _, s := range p.recordSentences() {
		t.plain(s)
	}
	for _, e := range t.h.ProblemsOf(p) {
		t.problem(e)
	}
	t.what(x)
	t.limits(x)
	t.drivers(x)
	t.course(x)
	t.records(x)
	t.deviated(x)
	t.basis(x)
	t.cautions(x)
	t.readings(p)
	return t.buf.Flush()
}

// what describes the product.
func (t *Text) what(x *sheet) {
	p := x.p
	if t.h.Judged {
		t.heading(2, "what record")
	} else {
		t.heading(2, "what")
	}
	for _, r := range [][2]string{{say("key family"), p.Family}, {say("key recipe"), p.RecipeVersion}, {say("key batch"), p.Batch}, {say("key process"), p.Process},
		{say("key note"), p.Note}, {say("key equipment"), x.perStep(func(s *model.Step) string { return s.Equipment })},
		{say("key load"), x.perStep(func(s *model.Step) string { return s.Load })}} {
		if r[1] != "" {
			t.line("item", r[0], r[1])
		}
	}
	if p.Lever != "" {
		t.line("item", textWords["lever"], p.Lever)
	}
}

// limits writes every finding in full.
func (t *Text) limits(x *sheet) {
	t.heading(2, "limits")
	if len(x.order) == 0 {
		t.line("limits none")
	}
	n := 0
	for _, f := range x.order {
		if f.Limit == nil {
			continue
		}
		n++
		run := ""
		if f.Run != "" {
			run = limitRun(f.Run)
		}
		t.heading(3, "limit", n, f.Limit.Name+run, f.Verdict)
		for _, r := range x.cardRows(f) {
			if r[1] != "" {
				t.item(fmt.Sprintf(textWords["item"], r[0], r[1]))
			}
		}
	}
	if len(x.p.Judgement.Groups) > 0 {
		t.put("\n")
	}
	for _, g := range x.p.Judgement.Groups {
		s := fmt.Sprintf(textWords["group"], g.Group, join(g.AnyOf), g.Verdict)
		if g.DecidedBy != "" {
			s += fmt.Sprintf(textWords["group by"], g.DecidedBy)
		}
		t.plain(s)
	}
}

// limitRun is what follows a name where it is about a further run.
func limitRun(name string) string {
	if _, ok := worstOf(name); ok {
		name = "worst"
	}
	return textWords["limit "+name]
}

// records write what was measured.
func (t *Text) records(x *sheet) {
	if len(x.p.Measured) == 0 {
		return
	}
	t.heading(2, "measured")
	t.plain(say("measured beside"))
	for i := range x.p.Measured {
		m := &x.p.Measured[i]
		t.heading(3, "record", m.Name)
		t.plain(m.verdictOf(x.p))
		for _, e := range m.Problems {
			t.problem(e)
		}
		for _, f := range m.facts(t.h) {
			if f[1] != "" {
				t.item(fmt.Sprintf(textWords["item"], f[0], f[1]))
			}
		}
		for _, s := range m.compared(t.h) {
			t.plain(s)
		}
		if m.History == nil {
			continue
		}
		q := m.asProduct(x.p)
		y := &sheet{doc: x.doc, p: q, decides: q.decides(), order: q.worstFirst()}
		for _, r := range y.recordRows() {
			t.item(fmt.Sprintf(textWords["record limit"], r[0], r[1], joinedBy(r[2], r[3]), r[4]))
		}
	}
}

// deviated writes what the product came to with the surroundings as they were recorded.
func (t *Text) deviated(x *sheet) {
	v := x.p.Deviation
	if v == nil {
		return
	}
	t.heading(2, "as recorded")
	t.plain(v.verdict())
	t.plain(say("deviated note"))
	for _, r := range x.besideWords() {
		t.item(fmt.Sprintf(textWords["as recorded one"], r[0], r[1], r[2], r[3]))
	}
	for i := range v.Records {
		m := &v.Records[i]
		t.heading(3, "record", m.Name)
		for _, e := range m.Problems {
			t.problem(e)
		}
		for _, f := range m.facts(t.h) {
			if f[1] != "" {
				t.item(fmt.Sprintf(textWords["item"], f[0], f[1]))
			}
		}
	}
	if v.History != nil {
		t.plain(say("deviated spread", three(v.WithinK)))
	}
}

// drivers writes what drives each margin.
func (t *Text) drivers(x *sheet) {
	if len(x.p.Worst) == 0 {
		return
	}
	t.heading(2, "drivers")
	t.plain(say("drivers sentence"))
	for _, f := range x.order {
		w := x.p.worstCase(f)
		if w == nil || f.Limit == nil || f.Verdict == rules.NotApplicable {
			continue
		}
		t.heading(3, "drivers of", f.Limit.Name)
		for i, r := range x.driverRows(w) {
			t.item(fmt.Sprintf(textWords["driver"], i+1, r[0], r[1], r[2]))
		}
	}
}

// course says what the pictures show.
func (t *Text) course(x *sheet) {
	h, p := t.h, x.p
	t.heading(2, "course")
	if p.History.Recorded {
		t.line("recorded")
	} else {
		t.line("predicted")
	}
	for k := range p.History.Spans {
		sp := &p.History.Spans[k]
		step, stage := stepWords(p.History.Spans, k)
		if stage != step && stage != "" {
			step += " (" + stage + ")"
		}
		out := []string{fmt.Sprintf(textWords["step"], step, duration(sp.StartS, nearest), duration(sp.EndS, nearest))}
		if p.History.MediumC != nil {
			if c := p.History.MediumC(sp.EndS); finite(&c) {
				out = append(out, fmt.Sprintf(textWords["step medium"], h.stated(c)+h.raised(sp)))
			}
		}
		told := &told{head: h}
		out = append(out, t.atEnd(x, sp, told)...)
		if w := x.decides.history; w.At != nil {
			r := up
			if heats(sp) {
				r = down
			}
			c, where := w.At(x.decides.place, sp.EndS), x.decides.placeName
			if name := p.nameOf(w); name != "" { // another run has its own numbers
				out = append(out, fmt.Sprintf(textWords["deciding"], where+limitRun(name), h.temperature(c, r)))
			} else {
				out = append(out, fmt.Sprintf(textWords["deciding"], where, told.temperature(where, c, r)))
			}
		}
		t.item(strings.Join(out, "; "))
	}
	if p.Product.Shape == nil || len(p.History.Spans) == 0 || p.History.Spans[0].Step == nil {
		return
	}
	if len(p.Samples.ColdestAt) > 0 && !p.History.Recorded {
		t.heading(3, "moves")
		t.plain(x.moves())
		if p.passage(x.decides) != nil {
			t.heading(3, "profile")
			t.plain(x.profileSentence(profileTimes(x.decides.history)))
		}
	}
}

// atEnd is what the samples say at the end of a step.
func (t *Text) atEnd(x *sheet, sp *model.Span, told *told) []string {
	h, p, s := t.h, x.p, &x.p.Samples
	i := sampleAt(s.TimesS, sp.EndS)
	if i < 0 {
		return nil
	}
	var out []string
	cold, hot := x.extremes(i, sp, told)
	for _, e := range []struct {
		key string
		at  extreme
	}{{"coldest", cold}, {"hottest", hot}} {
		if e.at.where != "" {
			out = append(out, fmt.Sprintf(textWords[e.key], e.at.words, e.at.where))
		}
	}
	if i < len(s.Mean) && finite(&s.Mean[i]) {
		out = append(out, fmt.Sprintf(textWords["mean"], h.temperature(s.Mean[i], nearest)))
	}
	for n, pt := range p.History.Points {
		if n < len(s.Points) && i < len(s.Points[n]) && finite(&s.Points[n][i]) {
			out = append(out, fmt.Sprintf(textWords["point"], pt.Name, told.temperature(pt.Name, s.Points[n][i], nearest)))
		}
	}
	return out
}

// basis is what the numbers rest on.
func (t *Text) basis(x *sheet) {
	t.heading(2, "factors")
	name := ""
	factors := x.factors()
	if t.h.Judged { // they were not used
		factors = nil
	}
	for _, r := range factors {
		if r[0] != "" { // the table of the PDF says a step's name once
			name = r[0]
		}
		s := fmt.Sprintf(textWords["factor"], name, r[1])
		if r[2] != "" {
			s += fmt.Sprintf(textWords["factor from"], r[2])
		}
		t.item(s)
	}
	if rows := x.propertyRows(); len(rows) > 0 && !t.h.Judged {
		t.plain(say("properties title") + ":")
		food := ""
		for _, r := range rows {
			if r[0] != "" {
				food = r[0]
			}
			s := fmt.Sprintf(textWords["properties"], food, r[1], r[2], r[3], r[4])
			if r[5] != "" {
				s += fmt.Sprintf(textWords["properties ice"], r[5])
			}
			t.item(s)
		}
		t.plain(x.propertiesSentence())
	}
	w := x.p.History
	t.line("method", w.Method)
	t.line("error", t.h.errorWords(w.ErrorK), sinceWords(w), iceWords(w))
	if t.h.EveryS > 0 {
		t.line("interval", duration(t.h.EveryS, nearest))
	}
	if w.Bound != "" {
		t.line("bound", duration(w.BoundFromS, nearest), w.Bound)
	}
	for _, r := range x.p.Further {
		t.plain(x.runSentence(r))
	}
}

func (t *Text) cautions(x *sheet) {
	t.heading(2, "cautions")
	if len(x.cautions) == 0 {
		t.line("cautions none")
	}
	for _, c := range x.cautions {
		t.item(c.Text)
	}
}

// readings is the input echo.
func (t *Text) readings(p *Product) {
	if len(p.Readings) == 0 {
		return
	}
	t.heading(2, "input")
	for _, r := range p.Readings {
		s := fmt.Sprintf(textWords["default"], r.Where(), r.Column, r.Used)
		if r.Typed != "" {
			s = fmt.Sprintf(textWords["typed"], r.Where(), r.Column, r.Typed, r.Used)
		}
		if r.Why != "" {
			s += fmt.Sprintf(textWords["because"], r.Why)
		}
		t.item(s)
	}
}

func (t *Text) problem(e cell.Error) {
	at := e.Where()
	e.At = cell.Ref{}
	if at == "" {
		t.item(e.Level.String() + ": " + e.Error())
		return
	}
	t.item(fmt.Sprintf(textWords["problem"], e.Level, at) + ": " + e.Error())
}

// Close writes the report and lets go of what was spooled. Call it once, after the last product, also after an error.
func (t *Text) Close() error {
	defer t.products.Close()
	if err := t.buf.Flush(); err != nil {
		return err
	}
	t.buf.Reset(t.w)
	t.front()
	t.list()
	if _, err := t.products.WriteTo(t.buf); err != nil {
		return err
	}
	t.known()
	t.closing()
	t.put("\n")
	t.line("end")
	return t.buf.Flush()
}

// front is what the run was and what its words mean.
func (t *Text) front() {
	h := t.h
	title := textWords["title"]
	if h.Judged {
		title = textWords["title record"]
	}
	t.put(title + "\n" + strings.Repeat("=", len([]rune(title))) + "\n\n")
	for _, key := range []string{"order", "courses", "rounding"} {
		t.line(key)
	}
	t.heading(1, "caution")
	for _, s := range CautionText() {
		t.item(s)
	}
	t.heading(1, "plan")
	for _, it := range h.Items {
		value := it.Value
		if strings.TrimSpace(value) == "" {
			value = textWords["blank"]
		}
		t.line("item", it.Item, value)
	}
	t.line("file", h.Plan)
	t.line("digest", h.SHA256)
	for _, s := range h.Sources {
		t.line("source", s.File, s.SHA256)
	}
	t.line("version", h.Version)
	if !h.Date.IsZero() {
		t.line("date", h.day())
	}
	t.plain(h.LeftOutWords())
	t.heading(1, "problems")
	if len(h.Problems) == 0 {
		t.line("no problems")
	}
	for _, e := range h.Problems {
		t.problem(e)
	}
	if len(h.NotCalculated) > 0 {
		t.heading(1, "refused")
	}
	for _, n := range h.NotCalculated {
		t.plain(fmt.Sprintf(textWords["refused one"], n.Product, n.At))
		for _, e := range n.Because {
			t.problem(e)
		}
	}
}

// list is one line a product, the most urgent first.
func (t *Text) list() {
	if len(t.h.LeftOut) > 0 {
		t.heading(1, "list part")
	} else {
		t.heading(1, "list")
	}
	rows := listed(t.h.NotCalculated, t.rows)
	t.plain(t.h.LeftOutWords())
	if len(t.rows) == 0 {
		t.line("list none")
	}
	for i := range rows {
		r := &rows[i]
		s := fmt.Sprintf(textWords["list one"], i+1, r.Product, r.word())
		if r.Deciding != "" {
			s += fmt.Sprintf(textWords["list deciding"], r.Deciding)
		}
		if room := r.Room(t.h); room != "" {
			s += fmt.Sprintf(textWords["list room"], room)
		}
		if r.Why != "" {
			s += fmt.Sprintf(textWords["list why"], r.Why)
		}
		for _, one := range r.Records {
			s += " " + one
		}
		if r.cautions > 0 {
			s += fmt.Sprintf(textWords["list cautions"], r.cautions)
		}
		t.plain(s)
	}
}

// known are the known-answer cases.
func (t *Text) known() {
	t.heading(1, "known")
	if len(t.h.Known) == 0 {
		t.line("known none")
	}
	for _, k := range t.h.Known {
		ok := textWords["known bad"]
		if k.OK {
			ok = textWords["known good"]
		}
		t.item(fmt.Sprintf(textWords["known one"], k.Name, bare6(k.Expected), bare6(k.Got), k.Amount(bare6(k.Allowance)), ok, k.Source))
	}
}

// closing is what stands at the end of every PDF: the reasons to look again, and the words.
func (t *Text) closing() {
	t.heading(1, "changes")
	for _, k := range changeKeys {
		t.item(say("change " + k))
	}
	t.heading(1, "glossary")
	for _, k := range glossaryKeys {
		t.line("item", say("word "+k), say("means "+k))
	}
}

// bare6 is a number with about six figures, or a dash where there is none.
func bare6(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	return significant(v)
}
