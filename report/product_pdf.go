package report

import (
	"fmt"
	"io"
	"math"
	"slices"
	"sort"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// WriteProductPDF writes the report of one product: a page for whoever cooks and probes, then the pages for the auditor.
// It may run in several goroutines at once.
func WriteProductPDF(w io.Writer, h *Head, p *Product) (err error) {
	defer caught(&err)
	d := newDoc(h, p.Product.Name)
	d.product(p)
	return d.finish(w)
}

// product writes all pages of a product.
func (d *doc) product(p *Product) {
	d.title, d.note = p.Product.Name, say("footer not measured")
	if p.recorded() {
		d.note = say("footer measured")
	}
	x := &sheet{doc: d, p: p, decides: p.decides(), order: p.worstFirst(), cautions: Cautions(d.head, p)}
	x.operator()
	x.front()
	x.limits()
	x.drivers()
	x.predicted()
	x.measured()
	x.deviated()
	x.basis()
	x.warnings()
	x.readings()
	x.changes()
	x.glossary()
	x.deviation()
}

// sheet is a product's report being written.
type sheet struct {
	*doc
	p        *Product
	decides  *deciding
	order    []*rules.Finding // worst first
	cautions []Caution
	short    int // how crowded the page for the kitchen is: 1 fewer checks, 2 very long names are cut
}

// recorded tells whether the product was judged by a measured record.
func (p *Product) recorded() bool { return p.History != nil && p.History.Recorded }

// source says in what the limits were judged.
func (x *sheet) source() string {
	if x.p.recorded() {
		return say("in record")
	}
	return say("in calculation")
}

// headline is the verdict in one sentence for everybody.
func (x *sheet) headline() string {
	f := x.decides.finding
	switch {
	case f == nil || f.Limit == nil:
		if x.p.Judgement.Why != "" {
			return sentence(x.p.Judgement.Why)
		}
		return say("headline none")
	case f.Verdict == rules.CannotTell:
		return say("headline cannot tell", f.Limit.Name, f.Why)
	}
	room := x.head.room(x.p.telling(f))
	switch {
	case f.Verdict == rules.Met && room != "":
		return say("headline met", x.source(), f.Limit.Name, room)
	case f.Verdict == rules.NotMet && room != "":
		return say("headline not met", f.Limit.Name, x.source(), room)
	}
	return say("headline plain", f.Limit.Name, f.Verdict.String(), f.Why)
}

// lessRoom names a limit that has less room than the tightest, only because a step ends at a temperature near it; "" if there is none.
func (x *sheet) lessRoom() string {
	tightest := x.decides.finding
	if tightest == nil || tightest.Verdict != rules.Met {
		return ""
	}
	for _, f := range x.order {
		if f != tightest && f.Level == "must" && f.Verdict == rules.Met && f.Limit != nil && finite(f.MarginK) &&
			!(finite(tightest.MarginK) && *f.MarginK >= *tightest.MarginK) {
			if step := x.p.madeByUntil(f); step != "" {
				return say("headline until", f.Limit.Name, x.head.difference(*f.MarginK, down), step)
			}
		}
	}
	return ""
}

// counts tells how many limits have which verdict.
func (x *sheet) counts() string {
	var n [4]int
	for _, f := range x.order {
		if f.Level != "alternative" { // each limit has one finding: that of the less favourable run
			n[f.Verdict]++
		}
	}
	if x.p.recorded() {
		return say("counts record", tallied(n))
	}
	return say("counts", tallied(n))
}

// tallied says how many have which verdict, and nothing of verdicts that none has.
func tallied(n [4]int) string {
	var s []string
	for _, c := range []struct {
		n     int
		words string
	}{{n[rules.Met], say("count met", n[rules.Met])}, {n[rules.NotMet], say("count not met", n[rules.NotMet])},
		{n[rules.CannotTell], say("count cannot tell", n[rules.CannotTell])}, {n[rules.NotApplicable], counted(n[rules.NotApplicable], "count not applicable")}} {
		if c.n > 0 {
			s = append(s, c.words)
		}
	}
	if len(s) == 0 {
		return say("count none")
	}
	return strings.Join(s, ", ")
}

// operator is the one page for whoever cooks and probes.
func (x *sheet) operator() {
	d, p := x.doc, x.p
	d.page()
	if d.nest > 0 { // one of several: everything of it below its name
		d.nest--
		d.bookmark(p.Product.Name, 0)
		d.nest++
	}
	d.bookmark(say("operator title"), 0)
	size, name := 24.0, d.clean(p.Product.Name)
	lines := wrap(name, frameWide, size, true)
	if len(lines) > 2 {
		size = 16
		lines = wrap(name, frameWide, size, true)
		if len(lines) > 2 {
			lines = []string{lines[0], shorten(strings.Join(lines[1:], " "), frameWide, size, true)}
		}
	}
	for _, s := range lines {
		d.y += height(size)
		d.put(d.left, d.y-0.25*height(size), s, size, true)
	}
	if p.History != nil {
		d.para(shorten(d.clean(say("operator process", p.Process, counted(len(p.History.Spans), "steps"), duration(x.decides.history.EndS(), nearest))), frameWide, kitchen, false), style{size: kitchen, after: 2})
	}
	x.verdictBox()
	below := x.advice(true)
	for x.short < 2 && bottomY-d.y-below < x.captionTall()+chartLeast+4 {
		x.short++
		below = x.advice(true)
	}
	x.operatorChart(below)
	x.advice(false)
}

// verdictBox is the word in large type with one sentence beside it.
func (x *sheet) verdictBox() {
	d := x.doc
	word := verdictWord(overall(x.p.Judgement.Verdict))
	wide := widthMM(word, 20, true) + 8
	size := 12.0
	says := x.headline() + x.recordsShort() + x.besides()
	lines := wrap(d.clean(says), frameWide-wide-4, size, false)
	if len(lines) > 5 {
		size = kitchen
		lines = wrap(capped(d.clean(says), frameWide-wide-4, size, 9), frameWide-wide-4, size, false)
	}
	h := max(float64(len(lines))*height(size)+5, 14)
	d.frame(d.left, d.y, frameWide, h, 2)
	d.put(d.left+4, d.y+h/2+2.5, word, 20, true)
	y := d.y + (h-float64(len(lines))*height(size))/2
	for i, s := range lines {
		d.put(d.left+wide, y+(float64(i+1)-0.28)*height(size), s, size, false)
	}
	d.y += h + 3
}

// operatorChart shows the slowest place and the limits, as high as the page allows.
func (x *sheet) operatorChart(below float64) {
	if x.p.History == nil {
		return
	}
	d := x.doc
	sentence := x.caption()
	h := min(max(bottomY-d.y-below-x.captionTall()-3, chartLeast), 86)
	d.head.history(x.p, x.decides, kitchen, 92, false).draw(d.canvas(d.left, d.y, frameWide, h))
	d.y += h + 1
	d.para(sentence, style{size: kitchen, after: 2})
}

// chartLeast is the least height of the chart on the page for the kitchen, mm.
const chartLeast = 40.0

// caption is the sentence under the chart on the page for the kitchen.
func (x *sheet) caption() string {
	if x.p.History == nil {
		return ""
	}
	return capped(x.clean(x.slowestSentence()), frameWide, kitchen, [...]int{9, 9, 4}[x.short])
}

// captionTall is its height, mm.
func (x *sheet) captionTall() float64 {
	return float64(len(wrap(x.caption(), frameWide, kitchen, false))) * height(kitchen)
}

// slowestSentence says what the line of the slowest place shows.
func (x *sheet) slowestSentence() string {
	h, hist := x.head, x.decides.history
	var s []string
	for i, sp := range hist.Spans {
		if n := len(hist.Spans); n > 6 && i == 4 {
			s = append(s, say("more steps", n-5))
		} else if n > 6 && i > 4 && i < n-1 {
			continue
		} else {
			c := hist.At(x.decides.place, sp.EndS)
			s = append(s, say("at the end of", i+1, sp.Step.Name, duration(sp.EndS, nearest), h.temperature(c, x.cautious(sp.EndS))))
		}
	}
	key := "chart sentence"
	if name := x.p.nameOf(hist); name != "" {
		key += " " + name
		if _, ok := worstOf(name); ok {
			key = "chart sentence worst"
		}
	}
	if hist.Recorded {
		key = "chart sentence record"
	}
	args := []any{x.decides.placeName + x.ofPiece(hist, x.decides.placeName), strings.Join(s, "; ")}
	if key == "chart sentence" || key == "chart sentence "+rules.LowConductivity || key == "chart sentence worst" {
		args = append([]any{x.decides.called()}, args...)
	}
	out := say(key, args...)
	var broken []string
	for i, p := range newTimeAxis(hist, x.decides.part()).pieces {
		if p.broken {
			broken = append(broken, say("axis piece", i+1, duration(p.t1-p.t0, nearest)))
		}
	}
	if len(broken) > 0 {
		out += say("axis broken", strings.Join(broken, ", "))
	}
	return out
}

// cautious is the rounding of a course to the unfavourable side: down while heating, up otherwise.
func (x *sheet) cautious(t float64) rounding {
	for _, sp := range x.decides.history.Spans {
		if t <= sp.EndS && sp.Step.Stage != nil && sp.Step.Stage.Heats {
			return down
		} else if t <= sp.EndS {
			return up
		}
	}
	return up
}

// checks says what to check with the probe, where and when, in the order of time.
func (x *sheet) checks() []string {
	var due []*rules.Finding
	seen := map[string]bool{}
	for _, f := range x.order {
		if f.Limit == nil || f.Level != "must" || f.Verdict == rules.NotApplicable || f.Place == nil || seen[f.Limit.Name] || vacuous(f) {
			continue
		}
		seen[f.Limit.Name] = true
		due = append(due, f)
	}
	due = distinct(due, 3-btoi(x.short > 0))
	sort.SliceStable(due, func(i, j int) bool { return instant(due[i]) < instant(due[j]) })
	var out []string
	for _, f := range due {
		place := f.PlaceName
		if place == "" {
			place = x.decides.placeName
		}
		if h := x.p.runOf(f); h != nil {
			place += x.ofPiece(h, place)
		}
		if f.EdgeOf != "" && x.short < 2 {
			place = say("check edge", place, f.EdgeOf)
		}
		when := say("check any time")
		if len(f.Limit.Stages) > 0 {
			when = say("check throughout", stages(f.Limit))
		}
		if finite(f.AtS) {
			when = say("check at", duration(60*math.Round(*f.AtS/60), nearest), x.stepAt(f)+x.checkRun(f))
		}
		line := capped(x.clean(say("check", when, place+x.expected(f), x.head.plainly(f))), frameWide-widthMM("1.  ", kitchen, false), kitchen, [...]int{5, 5, 2}[x.short])
		if !slices.Contains(out, line) {
			out = append(out, line)
		}
	}
	if len(out) == 0 {
		out = append(out, say("check nothing"))
	}
	return out
}

// expected is what a probe should read at the place and instant that decide a finding, in its own run; "" where there is none.
func (x *sheet) expected(f *rules.Finding) string {
	hist := x.p.runOf(f)
	if !finite(f.AtS) || f.Place == nil || hist == nil {
		return ""
	}
	c := hist.At(*f.Place, *f.AtS)
	if !finite(&c) {
		return ""
	}
	key := "check expects"
	if hist.Recorded {
		key = "check recorded"
	}
	return say(key, x.head.temperature(c, x.cautious(*f.AtS)))
}

// checkRun names the run of a check where that is not the one of the picture.
func (x *sheet) checkRun(f *rules.Finding) string {
	if f.Run == x.p.nameOf(x.decides.history) {
		return ""
	}
	if sp := x.differs(f.Run); sp != nil {
		return say("check run ends", x.p.runWords(f.Run, true), sp.Step.Name, duration(sp.EndS, nearest))
	}
	return say("check run", x.p.runWords(f.Run, true))
}

// distinct keeps the first n findings that differ in what is asked, where and when.
func distinct(fs []*rules.Finding, n int) []*rules.Finding {
	var out []*rules.Finding
	seen := map[string]bool{}
	for _, f := range fs {
		l := f.Limit
		key := fmt.Sprint(f.PlaceName, math.Round(instant(f)), l.Kind)
		for _, v := range []*float64{l.FromC, l.ToC, l.TimeS} {
			if v != nil {
				key += fmt.Sprint(" ", *v)
			}
		}
		if !seen[key] && len(out) < n {
			seen[key] = true
			out = append(out, f)
		}
	}
	return out
}

// instant is when a finding is decided, s; a finding without one comes last.
func instant(f *rules.Finding) float64 {
	if finite(f.AtS) {
		return *f.AtS
	}
	return math.Inf(1)
}

// stepAt is the name of the step in which a finding is decided, in the run that the finding belongs to.
func (x *sheet) stepAt(f *rules.Finding) string {
	h := x.p.runOf(f)
	if h == nil {
		return ""
	}
	for _, sp := range h.Spans {
		if *f.AtS <= sp.EndS+0.5 {
			return sp.Step.Name
		}
	}
	return ""
}

// advice writes what to check and what helps most, and the blanks; dry it only tells how high that is, mm.
func (x *sheet) advice(dry bool) float64 {
	d := x.doc
	lever := x.p.Lever
	if lever == "" {
		lever = say("lever none")
		if x.p.recorded() {
			lever = say("lever record")
		}
	}
	lever = capped(d.clean(lever), frameWide, kitchen, [...]int{4, 4, 2}[x.short])
	checks := x.checks()
	foot := say("operator decides")
	if x.p.recorded() {
		foot = say("operator decides record")
	}
	for _, f := range x.order {
		if f.Limit != nil && bare(f.Limit) && f.Verdict != rules.NotApplicable {
			foot += say("operator uncited")
			break
		}
	}
	note := ""
	if a := x.p.adviceNotMet(); a != "" {
		note = shorten(d.clean(a), frameWide, kitchen, false)
	}
	if dry {
		n := btoi(note != "") + len(wrap(d.clean(lever), frameWide, kitchen, false)) + len(wrap(d.clean(foot), frameWide, kitchen, false))
		for _, s := range checks {
			n += len(wrap(d.clean(s), frameWide-widthMM("1.  ", kitchen, false), kitchen, false))
		}
		return float64(n)*height(kitchen) + 2*height(13) + float64(len(checks)) + 9 + 3*blankTall
	}
	d.para(say("checks title"), style{size: 13, bold: true, after: 0.8})
	for i, s := range checks {
		d.item(fmt.Sprintf("%d.", i+1), s, kitchen)
	}
	if note != "" {
		d.para(note, style{size: kitchen})
	}
	d.y++
	d.para(say("lever title"), style{size: 13, bold: true, after: 0.8})
	d.para(lever, style{size: kitchen, after: 2})
	x.blanks(foot)
	return 0
}

// blankTall is the height of a row to write in, mm.
const blankTall = 8.5

// blanks is room for readings and initials, as many rows as the page has left.
func (x *sheet) blanks(foot string) {
	d := x.doc
	last := wrap(d.clean(foot), frameWide, kitchen, false)
	room := bottomY - d.y - float64(len(last))*height(kitchen) - 2
	n := max(2, min(6, int(room/blankTall)-1))
	d.need(float64(n+1)*blankTall + 2 + float64(len(last))*height(kitchen))
	at := d.left
	for i, w := range []float64{32, 32, 46, 34, 36} {
		d.put(at+1.5, d.y+5.5, say([...]string{"blank date", "blank time", "blank place", "blank reading", "blank initials"}[i]), kitchen, true)
		for r := 0; r <= n; r++ {
			d.frame(at, d.y+float64(r)*blankTall, w, blankTall, 0.7)
		}
		at += w
	}
	d.y += float64(n+1)*blankTall + 2
	for _, s := range last {
		d.y += height(kitchen)
		d.put(d.left, d.y-0.28*height(kitchen), s, kitchen, false)
	}
}

// front is the first page for the auditor.
func (x *sheet) front() {
	d, h, p := x.doc, x.head, x.p
	d.page()
	d.heading(say("front title", p.Product.Name), 0, 20)
	d.para(say("front verdict", verdictWord(overall(p.Judgement.Verdict)), x.headline()+x.lessRoom()+x.besides()), style{size: 11, bold: true, after: 1})
	d.text(x.counts())
	for _, s := range p.recordSentences() {
		d.para(s, style{size: body, bold: true, after: 1})
	}
	if p.recorded() {
		d.text(say("front record") + say("see cautions"))
	} else {
		d.text(strings.Join(CautionText()[:2], " ") + say("see cautions"))
	}
	for _, g := range p.Judgement.Groups {
		key := "group all"
		if g.AnyOf {
			key = "group any"
		}
		by := ""
		if g.DecidedBy != "" {
			by = say("group by", g.DecidedBy)
		}
		d.text(say(key, g.Group, g.Verdict.String(), by))
	}
	var missing []string
	seen := map[*rules.Limit]bool{}
	for _, f := range x.order {
		if f.Limit != nil && bare(f.Limit) && f.Verdict != rules.NotApplicable && !seen[f.Limit] {
			seen[f.Limit] = true
			missing = append(missing, say("missing line", f.Limit.Name, f.Limit.At.String(), lacks(f.Limit)))
		}
	}
	if len(missing) > 0 {
		d.boxed(append([]string{say("missing citation")}, missing...), style{size: body, bold: true})
	}
	if ps := h.ProblemsOf(p); len(ps) > 0 {
		d.heading(say("problems title"), 1, 10)
		x.problems(ps)
	}
	what := say("what title")
	if p.recorded() {
		what = say("what title record")
	}
	d.heading(what, 1, 20)
	d.pairs([][2]string{
		{say("key product"), p.Product.Name}, {say("key family"), p.Family}, {say("key recipe"), p.RecipeVersion}, {say("key batch"), p.Batch},
		{say("key process"), p.Process}, {say("key note"), p.Note}, {say("key equipment"), x.perStep(func(s *model.Step) string { return s.Equipment })},
		{say("key load"), x.perStep(func(s *model.Step) string { return s.Load })}}, 45)
	rows := [][2]string{}
	for _, it := range h.Items {
		rows = append(rows, [2]string{it.Item, it.Value})
	}
	rows = append(rows, [2]string{say("key file"), h.Plan}, [2]string{say("key digest"), h.SHA256})
	rows = append(append(rows, h.sources(10)...), [2]string{say("key version"), h.Version}, [2]string{say("key date"), h.day()})
	d.heading(say("plan title"), 1, 20)
	d.pairs(rows, 45)
	x.signatures("sign prepared", "sign reviewed", "sign responsible")
}

func (x *sheet) problems(ps cell.Errors) {
	var rows [][]string
	for _, e := range ps {
		msg := e.Msg
		if e.Hint != "" {
			msg += " – " + e.Hint
		}
		if e.Typed != "" {
			msg = say("problem typed", e.Typed, msg)
		}
		rows = append(rows, []string{e.Where(), e.Level.String(), msg})
	}
	x.table([]col{{title: say("col place"), wide: 34}, {title: say("col level"), wide: 20}, {title: say("col message"), wide: frameWide - 54}}, rows, small)
}

// perStep joins what the steps say, each with its name.
func (x *sheet) perStep(of func(*model.Step) string) string {
	var s []string
	for i := range x.p.Steps {
		if v := strings.TrimSpace(of(&x.p.Steps[i])); v != "" {
			s = append(s, x.p.Steps[i].Name+": "+v)
		}
	}
	return strings.Join(s, "; ")
}

// signatures are blank lines for names, signatures and dates.
func (x *sheet) signatures(keys ...string) {
	d := x.doc
	d.need(float64(len(keys))*11 + 4)
	d.y += 2
	for _, k := range keys {
		d.y += 9
		d.put(d.left, d.y, say(k), small, false)
		d.rule(d.left+36, d.left+98, d.y+0.8, 0.7)
		d.put(d.left+101, d.y, say("sign signature"), small, false)
		d.rule(d.left+118, d.left+148, d.y+0.8, 0.7)
		d.put(d.left+151, d.y, say("sign date"), small, false)
		d.rule(d.left+160, d.left+frameWide, d.y+0.8, 0.7)
	}
	d.y += 4
}

// limits are the margin bars and one card a limit.
func (x *sheet) limits() {
	d := x.doc
	d.heading(say("limits title"), 0, 70)
	if len(x.order) == 0 {
		d.text(say("headline none"))
		return
	}
	var counted, idle []*rules.Finding
	for _, f := range x.order {
		if f.Verdict == rules.NotApplicable {
			idle = append(idle, f)
		} else {
			counted = append(counted, f)
		}
	}
	if len(counted) > 0 {
		d.marginBars(counted)
		d.text(x.barsSentence(counted))
	}
	for _, f := range counted {
		x.card(f)
	}
	if len(idle) > 0 {
		d.heading(say("idle title"), 1, 12)
		var rows [][]string
		for _, f := range idle {
			if f.Limit != nil {
				rows = append(rows, []string{f.Limit.Name, f.Limit.At.String(), f.Why})
			}
		}
		d.table([]col{{title: say("col limit"), wide: 60, bold: true}, {title: say("col place"), wide: 30}, {title: say("col why"), wide: frameWide - 90}}, rows, small)
	}
}

// barsSentence says the same as the bars.
func (x *sheet) barsSentence(fs []*rules.Finding) string {
	var s []string
	for i, f := range fs {
		if i == 3 {
			break
		}
		if f.Limit == nil {
			continue
		}
		room := x.head.room(f)
		if room == "" {
			room = say("no margin")
		}
		s = append(s, say("bars one", f.Limit.Name, f.Verdict.String(), room))
	}
	return say("bars sentence", strings.Join(s, "; "))
}

// card is everything about one limit and its finding.
func (x *sheet) card(f *rules.Finding) {
	d, l := x.doc, f.Limit
	if l == nil {
		return
	}
	title := l.Name
	if run := x.p.runWords(f.Run, false); run != "" {
		title += say("card run", run)
	}
	rows := x.cardRows(f)
	d.section(say("card title", title, verdictWord(f.Verdict)), 2, min(d.pairsHeight(rows, 30)+1, 20), 1)
	d.pairs(rows, 30)
}

// cardRows is everything about a limit and its finding as pairs of what and which; a blank one is left out.
func (x *sheet) cardRows(f *rules.Finding) [][2]string {
	h, l := x.head, f.Limit
	value := h.quantity(f, f.Value, false)
	if value != "" && finite(f.Required) {
		value = say("card value", value, h.quantity(f, f.Required, true))
	}
	label := say("card found")
	if x.p.recorded() {
		label = say("col value")
	}
	return [][2]string{
		{say("card asks"), say("card asks line", ruleName(l), h.asks(l), stages(l), whereAsked(l), f.Level) + x.cardCells(f)},
		{label, found(value, f.Why)},
		{say("card margin"), x.marginWords(f)},
		{say("card ends"), x.endsWords(f)},
		{say("card typed"), x.typedWords(f)},
		{say("card share"), x.shareWords(f)},
		{say("card place"), x.placeAndTime(f)},
		{say("card clock"), x.clockWords(f)},
		{say("card notes"), notes(f)},
		{say("card citation"), x.cited(l)},
		{say("card ccp"), l.CCP},
		{say("card hazard"), l.Hazard},
		{say("card note"), l.Note},
	}
}

// notes are the notes of a finding in one text.
func notes(f *rules.Finding) string {
	if len(f.Notes) == 1 {
		return f.Notes[0]
	}
	var s []string
	for _, n := range f.Notes {
		s = append(s, strings.TrimSuffix(n, "."))
	}
	return strings.Join(s, "; ")
}

// cardCells are the cells of a limit and of the step that decides; "" if none is known.
func (x *sheet) cardCells(f *rules.Finding) string {
	if s := x.refs(f.Cells); s != "" {
		return say("card cells", s)
	}
	return ""
}

// placeAndTime is where and when a finding is decided, and in which run.
func (x *sheet) placeAndTime(f *rules.Finding) string {
	where, when := f.PlaceName, ""
	unknown := x.p.recorded() && f.Place != nil && *f.Place == model.Place{} // a probe that no point stands for
	if f.Place != nil && !unknown {
		if lies := x.p.productOf(x.p.runOf(f)).Lies(*f.Place); where == "" {
			where = lies
		} else if where != lies {
			where = say("card where", where, lies)
		}
	}
	if finite(f.AtS) {
		when = say("card when", duration(*f.AtS, nearest), x.stepAt(f)) + x.inRun(f)
	}
	return joined(where, when)
}

// inRun names the run that the times of a finding belong to; "" for the usual run, where that needs no name.
func (x *sheet) inRun(f *rules.Finding) string {
	run := x.p.runWords(f.Run, false)
	if run == "" {
		return ""
	}
	if sp := x.differs(f.Run); sp != nil {
		return say("in run ends", run, sp.Step.Name, duration(sp.EndS, nearest))
	}
	return say("in run", run)
}

// differs is the first step of a further run whose end tells it apart from the usual one; nil if there is none.
func (x *sheet) differs(run string) *model.Span {
	h := x.p.run(run)
	if h == nil || x.p.History == nil {
		return nil
	}
	for i := range h.Spans {
		sp := &h.Spans[i]
		if i < len(x.p.History.Spans) && math.Abs(sp.EndS-x.p.History.Spans[i].EndS) >= 60 && sp.Step != nil {
			return sp
		}
	}
	return nil
}

// marginWords is the room of a finding, and what sets it where that is the end of a step.
func (x *sheet) marginWords(f *rules.Finding) string {
	g := *f
	g.MarginPlace = "" // the notes of the card say it
	s := x.head.room(&g)
	if step := x.p.madeByUntil(f); step != "" {
		s += say("room until", x.head.difference(*f.MarginK, down), step)
	}
	return s
}

// whereAsked is the place that the limit is about, as typed.
func whereAsked(l *rules.Limit) string {
	if l.Where.Name == "" {
		return "every point"
	}
	return l.Where.Name
}

// cited is the citation as typed, with what is missing and the status of the limit.
func (x *sheet) cited(l *rules.Limit) string {
	s := citation(l)
	if bare(l) {
		s += say("citation lacks", lacks(l))
	}
	if l.Status != "" {
		s += say("citation status", l.Status)
	}
	return s
}

// clockWords says when the clock starts, in words, and the instants at which it started and ended; in which run, unless the line
// above, where and when the finding is decided, has said so.
func (x *sheet) clockWords(f *rules.Finding) string {
	words, ran := x.head.clock(f.Limit), ""
	if words != "" {
		words = say("clock starts with", words)
	}
	switch start, end := finite(f.ClockStartS), finite(f.ClockEndS); {
	case start && end:
		ran = say("clock ran", duration(*f.ClockStartS, nearest), duration(*f.ClockEndS, nearest))
	case start:
		ran = say("clock started", duration(*f.ClockStartS, nearest))
	case end:
		ran = say("clock ended", duration(*f.ClockEndS, nearest))
	}
	if ran != "" && !finite(f.AtS) {
		ran += x.inRun(f)
	}
	return joined(words, ran)
}

// found is a value with the sentence on it.
func found(value, why string) string {
	if value == "" || why == "" {
		return value + why
	}
	return value + ". " + capital(why)
}

func joined(parts ...string) string {
	var s []string
	for _, p := range parts {
		if strings.TrimSpace(p) != "" {
			s = append(s, p)
		}
	}
	return strings.Join(s, "; ")
}

// refs names cells, and where they come from as far as it is known.
func (x *sheet) refs(rs []cell.Ref) string {
	var s []string
	for _, r := range rs {
		if t := (cell.Reading{At: r, From: x.p.From[r]}).Where(); t != "" {
			s = append(s, t)
		}
	}
	return strings.Join(s, ", ")
}

// predicted are the pictures and the table of steps of a prediction.
func (x *sheet) predicted() {
	d, h := x.doc, x.head
	if x.p.History == nil || x.p.History.Recorded {
		return
	}
	sentence := x.slowestSentence() + " " + x.levelsSentence() + x.errorSentence()
	// The chart gives way to the pages before it by a fifth, if some of its sentence then still stands below it.
	const most, least, titles, lines = 90.0, 72.0, 31.0, 3
	tall, below := most, float64(len(wrap(d.clean(sentence), frameWide, body, false)))*height(body)
	if room := bottomY - d.y - titles; room-lines*height(body) >= least {
		tall = min(most, max(least, room-below))
	}
	d.heading(say("predicted title"), 0, tall+25)
	d.text(say("predicted note"))
	d.heading(say("course title"), 1, tall+7)
	h.history(x.p, x.decides, small, 96, true).draw(d.canvas(d.left, d.y, frameWide, tall))
	d.y += tall + 1
	d.text(sentence)
	d.heading(say("slowest title"), 1, 30)
	x.slowest()
	if f, times := h.profile(x.p, x.decides, small, 84); f != nil {
		d.heading(say("profile title"), 1, 68)
		f.draw(d.canvas(d.left, d.y, frameWide, 54))
		d.y += 55
		sentence := x.profileSentence(times)
		if f.unnamed > 0 {
			sentence += " " + counted(f.unnamed, "profile unnamed")
		}
		d.text(sentence)
	}
	d.heading(say("sketch title", x.decides.called()), 1, 48)
	piece := x.p.productOf(x.decides.history)
	d.sketch(piece, x.decides.place, say("sketch place", x.decides.called(), x.decides.placeName), 38)
	if x.p.Product.Shape.Mixed() {
		d.text(say("sketch sentence stirred", sizes(piece)))
		return
	}
	d.text(say("sketch sentence", x.p.Product.Shape.Name, sizes(piece), x.decides.called(), x.decides.placeName))
}

// levelsSentence names the limit lines of the chart in both units.
func (x *sheet) levelsSentence() string {
	var s []string
	seen := map[*rules.Limit]bool{}
	for _, f := range x.order {
		l := f.Limit
		if l == nil || seen[l] || f.Verdict == rules.NotApplicable || l.FromC == nil && l.ToC == nil {
			continue
		}
		seen[l] = true
		s = append(s, say("level", joined(x.head.typed(l, "From", l.FromC), x.head.typed(l, "To", l.ToC)), l.Name))
	}
	if len(s) == 0 {
		return ""
	}
	return say("levels sentence", strings.Join(s, ", "))
}

func (x *sheet) errorSentence() string {
	h := x.decides.history
	return say("error sentence", x.head.errorWords(h.ErrorK), sinceWords(h), iceWords(h))
}

// sinceWords says from when after a change of surroundings the stated error holds.
func sinceWords(h *model.History) string {
	if h.ErrorFromS <= 30 {
		return say("error since")
	}
	return duration(h.ErrorFromS, up)
}

// iceWords says where the stated error does not hold; "" where it holds everywhere.
func iceWords(h *model.History) string {
	if !h.IceMoves {
		return ""
	}
	return say("error ice")
}

// slowest is the table of the steps with the coldest and the hottest place at the end of each, and how they move.
func (x *sheet) slowest() {
	h, p := x.head, x.p
	var rows [][]string
	s := &p.Samples
	for _, sp := range p.History.Spans {
		cold, hot := "", ""
		if i := sampleAt(s.TimesS, sp.EndS); i >= 0 && i < len(s.Coldest) && i < len(s.Hottest) {
			low, high := x.extremes(i, &sp, &told{head: h})
			cold, hot = joinedBy(low.words, low.where), joinedBy(high.words, high.where)
		}
		name := sp.Step.Name
		if sp.Step.Stage != nil && sp.Step.Stage.Name != name {
			name += " (" + sp.Step.Stage.Name + ")"
		}
		rows = append(rows, []string{name, duration(sp.StartS, nearest), duration(sp.EndS, nearest), x.mediumAtEnd(&sp), cold, hot})
	}
	x.table([]col{{title: say("col step"), wide: 32, bold: true}, {title: say("col start"), wide: 23}, {title: say("col end"), wide: 23}, {title: say("col medium"), wide: 28},
		{title: say("col coldest"), wide: 37}, {title: say("col hottest"), wide: 37}}, rows, small)
	if len(x.p.Further) > 0 {
		x.text(say("table usual", x.p.runWords("", true)))
	}
	x.text(x.moves())
}

func (x *sheet) mediumAtEnd(sp *model.Span) string {
	if x.p.History.MediumC == nil {
		return ""
	}
	c := x.p.History.MediumC(sp.EndS)
	if math.IsNaN(c) {
		return say("no medium")
	}
	return x.head.stated(c) + x.head.raised(sp)
}

// raised says of a step that its medium is not the one that was typed; "" where it is.
func (h *Head) raised(sp *model.Span) string {
	if sp.MediumFromC == nil {
		return ""
	}
	return say("medium raised here", h.stated(*sp.MediumFromC))
}

// sampleAt is the sample at an instant; -1 if there is none.
func sampleAt(times []float64, t float64) int {
	for i, at := range times {
		if math.Abs(at-t) < 1e-6*max(1, t) {
			return i
		}
	}
	return -1
}

// told are the temperatures that one sentence or row has named already, all at one instant of one run: a place that it names again
// has the same number again, however it would be rounded there.
type told struct {
	head *Head
	said []extreme
}

// extreme is a place with its temperature.
type extreme struct {
	where, words string
	c            float64 // °C
}

func (t *told) temperature(where string, c float64, r rounding) string {
	const alike = 0.02 // K: places with one name lie near each other
	for _, e := range t.said {
		if e.where == where && math.Abs(e.c-c) < alike {
			return e.words
		}
	}
	e := extreme{where, t.head.temperature(c, r), c}
	t.said = append(t.said, e)
	return e.words
}

// extremes are the coldest and the hottest place at a sample, the end of a step: the unfavourable one is rounded first, for in a food
// of one temperature both have the same name. where is "" if the place is not known.
func (x *sheet) extremes(i int, sp *model.Span, told *told) (cold, hot extreme) {
	s := &x.p.Samples
	one := func(c []float64, at []model.Place, r rounding) (e extreme) {
		if i >= len(c) || !finite(&c[i]) {
			return e
		}
		if i < len(at) {
			e.where = x.extremePlace(i, c, at)
		}
		e.c, e.words = c[i], told.temperature(e.where, c[i], r)
		return e
	}
	if heats(sp) {
		cold = one(s.Coldest, s.ColdestAt, down)
		return cold, one(s.Hottest, s.HottestAt, up)
	}
	hot = one(s.Hottest, s.HottestAt, up)
	return one(s.Coldest, s.ColdestAt, down), hot
}

// heats tells whether a step is a heating.
func heats(sp *model.Span) bool {
	return sp.Step != nil && sp.Step.Stage != nil && sp.Step.Stage.Heats
}

// joinedBy puts a comma between two texts if there are two.
func joinedBy(a, b string) string {
	if a == "" || b == "" {
		return a + b
	}
	return a + ", " + b
}

// extremePlace words where the coldest or hottest place is at a sample; the centre where the sentence on how the places move
// says so too, for a food of one temperature has no place of its own.
func (x *sheet) extremePlace(i int, c []float64, at []model.Place) string {
	if x.p.centreLike(x.p.Samples, i, c[i]) {
		return x.p.Product.Where(model.Place{})
	}
	return x.p.Product.Where(at[i])
}

// profileSentence gives surface and middle at each time of the profile.
func (x *sheet) profileSentence(times []float64) string {
	hist := x.decides.history
	way := x.p.passage(x.decides)
	var s []string
	for _, t := range times {
		args := []any{duration(t, nearest)}
		for _, at := range way.ends {
			args = append(args, x.head.temperature(hist.At(at, t), x.cautious(t)))
		}
		s = append(s, say(way.words, args...))
	}
	all := capital(strings.Join(s, "; "))
	out := say("profile sentence", all)
	if x.p.Product.Shape.Oval() {
		out = say("profile sentence spheroid", all)
	}
	if x.p.Product.Shape.Layered() {
		out += say("profile joints")
	}
	if name := x.p.nameOf(hist); name != "" {
		if _, ok := worstOf(name); ok {
			return say("profile worst") + out
		}
		out = say("profile "+name) + out
	}
	return out
}

// sizeName is what the size of a column is called.
func sizeName(column string) string { return strings.ToLower(column) }

// sizes says the sizes of a product that its shape uses.
func sizes(p *model.Product) string {
	if p.Shape == nil {
		return ""
	}
	var s []string
	for _, need := range p.Shape.Needs {
		switch v := *p.Size.Of(need); need {
		case "Volume":
			s = append(s, say("size volume", plain(v*1000, 3, nearest)))
		case "Surface area":
			s = append(s, say("size area", plain(v, 4, nearest)))
		default:
			s = append(s, sizeName(need)+" "+length(p, v))
		}
	}
	if p.Shape.Layered() {
		var layers []string
		for i, y := range p.Layers {
			if y.BelowM2KW > 0 {
				layers = append(layers, say("size gap", i+1, y.Food.Name, length(p, y.ThicknessM), plain(y.BelowM2KW, 5, nearest)))
			} else {
				layers = append(layers, say("size layer", i+1, y.Food.Name, length(p, y.ThicknessM)))
			}
		}
		s = append(s, sizeName("Thickness")+" "+length(p, p.Size.ThicknessM), say("size layers", len(layers), strings.Join(layers, ", ")))
	}
	return strings.Join(s, ", ")
}

// ofPiece says that a run is of another piece than the one listed, by its sizes; "" where it is not, or where the place is the same in both.
func (x *sheet) ofPiece(h *model.History, place string) string {
	piece := x.p.productOf(h)
	if piece.Size == x.p.Product.Size || place == "centre" {
		return ""
	}
	return say("of piece", sizes(piece))
}

// measured keeps what was measured apart from what was calculated.
func (x *sheet) measured() {
	d, p := x.doc, x.p
	rec := p.History != nil && p.History.Recorded
	if rec {
		d.page()
	}
	d.heading(say("measured title"), 0, 43)
	if !rec && len(p.Measured) > 0 {
		d.text(say("measured beside"))
		x.records()
		return
	}
	if !rec {
		none := "measured none"
		if p.Deviation != nil {
			none = "measured food none"
		}
		d.text(say(none))
		x.blankTable([]string{"blank date", "blank batch", "blank place", "blank start", "blank end", "blank logger", "blank initials"}, 3) // runs that are often asked for
		return
	}
	d.text(say("measured note"))
	d.head.history(p, x.decides, small, 96, true).draw(d.canvas(d.left, d.y, frameWide, 88))
	d.y += 89
	d.text(x.slowestSentence())
	for i := range p.Measured { // the record itself
		d.pairs(p.Measured[i].facts(x.head), 34)
		x.echo(&p.Measured[i])
	}
}

// blankTable is a form of n blank rows.
func (x *sheet) blankTable(keys []string, n int) {
	d := x.doc
	w := frameWide / float64(len(keys))
	const head, tall = 8.5, 7.5 // two lines of print, one of writing
	d.need(head + tall*float64(n))
	for i, k := range keys {
		at := d.left + w*float64(i)
		for j, s := range wrap(say(k), w-2, small, true) {
			d.put(at+1.2, d.y+3.4+float64(j)*3.9, s, small, true)
		}
		d.frame(at, d.y, w, head, 0.7)
		for r := range n {
			d.frame(at, d.y+head+float64(r)*tall, w, tall, 0.7)
		}
	}
	d.y += head + tall*float64(n) + 3
}
