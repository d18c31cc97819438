package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// basis is what the numbers rest on: critical factors, method, known answers.
func (x *sheet) basis() {
	d, h, p := x.doc, x.head, x.p
	d.heading(say("basis title"), 0, 30)
	if !p.recorded() {
		x.factorTable()
		x.properties()
	}
	d.heading(say("method title"), 1, 20)
	if p.History != nil {
		d.text(say("method", p.History.Method))
		d.text(say("resolution", duration(h.EveryS, nearest), h.errorWords(p.History.ErrorK)))
		if p.History.Bound != "" {
			d.text(say("bound", duration(p.History.BoundFromS, nearest), p.History.Bound))
		}
	}
	for _, r := range p.Further {
		d.text(x.runSentence(r))
	}
	d.text(say("rounding"))
	x.knownAnswers()
}

// factorTable are the critical factors with the values used.
func (x *sheet) factorTable() {
	d := x.doc
	d.heading(say("factors title"), 1, 25)
	d.text(say("factors note"))
	rows := x.factors()
	for i, r := range rows {
		if rows[i] = r[:2]; r[2] != "" {
			rows[i][1] = say("factor from", r[1], r[2])
		}
	}
	d.grouped([]col{{title: say("col factor"), wide: 32, bold: true}, {title: say("col used"), wide: frameWide - 32}}, rows, small, func(i int) bool { return i+1 < len(rows) && rows[i+1][0] != "" })
}

// significant writes a number with about six digits.
func significant(v float64) string { return plain(v, decimalsFor(v, 6), nearest) }

// decimalsFor is how many decimals show a number of significant digits, nine at most; none for 0 and what is no number.
func decimalsFor(v float64, digits int) int {
	if v == 0 || math.IsNaN(v) || math.IsInf(v, 0) {
		return 0
	}
	return max(0, min(9, digits-1-int(math.Floor(math.Log10(math.Abs(v))))))
}

// runSentence sets a further run beside the usual one at the deciding limit.
func (x *sheet) runSentence(r rules.Run) string {
	further, usual := 0, 0
	at := x.p.inTyped(x.decides.place, x.decides.history)
	for i := range x.p.Judgement.Findings {
		switch f := &x.p.Judgement.Findings[i]; {
		case f.Verdict == rules.NotApplicable:
		case kindOf(f.Run) == r.Name:
			further++
		case kindOf(f.Run) == "":
			usual++
		}
	}
	end := x.p.History.EndS()
	return say("also run "+r.Name, further, usual, x.decides.placeName, x.head.temperature(x.p.History.At(at, end), nearest),
		x.head.temperature(r.History.At(at, end), nearest))
}

// factors are the critical factors with the values used and where they come from.
func (x *sheet) factors() [][]string {
	h, p := x.head, x.p
	var rows [][]string
	add := func(a, b, c string) { rows = append(rows, []string{a, b, c}) }
	shape := ""
	if p.Product.Shape != nil {
		shape = p.Product.Shape.Name
	}
	add(say("factor shape"), joined(shape, sizes(&x.p.Product)), x.from(append([]string{"Shape"}, model.SizeColumns...)...))
	add(say("factor start"), h.stated(p.Product.StartC), x.from("Start temperature"))
	for _, m := range p.Product.Foods() {
		add(say("factor food"), joined(m.Name, m.Composition), m.Source)
		if m.FreezingC != nil {
			add(say("factor freezing"), h.stated(*m.FreezingC), m.Source)
		}
	}
	if p.History == nil {
		return rows
	}
	for i := range p.History.Spans {
		x.spanFactors(&p.History.Spans[i], add)
	}
	for i := len(rows) - 1; i > 0; i-- { // the name of a step once
		if rows[i][0] == rows[i-1][0] {
			rows[i][0] = ""
		}
	}
	return rows
}

// from names the cells in which some columns were typed.
func (x *sheet) from(columns ...string) string {
	var s []string
	for _, r := range x.p.Readings {
		for _, c := range columns {
			if r.Column == c && (r.At.Sheet == x.p.Product.At.Sheet || x.p.Product.At.IsZero()) && r.Typed != "" {
				s = append(s, say("factor typed", r.Typed, r.Where()))
			}
		}
	}
	return strings.Join(s, "; ")
}

// spanFactors are the critical factors of one step.
func (x *sheet) spanFactors(sp *model.Span, add func(a, b, c string)) {
	h, s := x.head, sp.Step
	what := s.Name
	method := ""
	if sp.Method != "" {
		method = say("factor method", sp.Method)
	}
	end := duration(sp.EndS-sp.StartS, nearest)
	switch {
	case sp.Reached != nil && *sp.Reached && s.UntilC != nil:
		end = say("factor until", end, h.stated(*s.UntilC))
	case sp.Reached != nil && s.UntilC != nil:
		end = say("factor until not", end, h.stated(*s.UntilC))
	}
	add(what, joined(say("factor lasts", end), x.exposure(&s.Exposure), method), s.At.String())
	for i := range s.Faces {
		if words := x.exposure(&s.Faces[i].Exposure); words != "" {
			add(what, s.Faces[i].Face.Name+": "+words, s.Faces[i].At.String())
		}
	}
	for _, f := range sp.Films {
		face := ""
		if f.Face != nil {
			face = ", " + f.Face.Name
		}
		used := say("film", plain(f.FilmW, 2, nearest))
		if f.MostW > f.LeastW {
			used += say("film ranges", plain(f.LeastW, 1, down), plain(f.MostW, 1, up))
		}
		if math.IsInf(f.FilmW, 1) {
			used = say("film held")
		} else if f.TotalW > 0 && plain(f.TotalW, 2, nearest) != plain(f.FilmW, 2, nearest) {
			used += say("film total", plain(f.TotalW, 2, nearest))
		}
		source := f.Source
		if f.Typed && source == "" {
			source = say("film typed")
		}
		add(what+face, used, source)
	}
	if pr := sp.Props; pr.KWmK > 0 && x.p.Product.Food != nil && sp.Method != model.Marched {
		add(what, say("props", plain(pr.KWmK, 4, nearest), plain(pr.RhoKgM3, 1, nearest), plain(pr.CJkgK, 0, nearest), x.propsAt(sp)), say("props source"))
	}
	if sp.MediumFromC != nil && sp.MediumToC != nil {
		add(what, say("medium raised", h.stated(*sp.MediumFromC), h.stated(*sp.MediumToC)), say("medium raised why"))
	}
}

func (x *sheet) propsAt(sp *model.Span) string {
	if sp.PropsAtC == 0 {
		return ""
	}
	return say("props at", x.head.temperature(sp.PropsAtC, nearest))
}

// exposure is the surroundings of a step or face in words; "" if there are none.
func (x *sheet) exposure(e *model.Exposure) string {
	h := x.head
	if e.Surface == nil {
		return ""
	}
	s := []string{e.Surface.Name}
	if n := len(e.Medium.C); n > 0 {
		kind := say("set-point")
		if e.Measured {
			kind = say("measured")
		}
		if n == 1 {
			s = append(s, say("medium one", h.stated(e.Medium.C[0]), kind))
		} else {
			lo, hi := e.Medium.C[0], e.Medium.C[0]
			for _, c := range e.Medium.C {
				lo, hi = min(lo, c), max(hi, c)
			}
			s = append(s, say("medium course", e.Medium.Name, h.stated(lo), h.stated(hi), kind))
		}
	}
	if e.AirMS != nil {
		s = append(s, say("air speed", plain(*e.AirMS, 2, nearest)))
	}
	if e.RH != nil {
		s = append(s, say("humidity", plain(*e.RH, 1, nearest)))
	}
	if e.RadiatingC != nil {
		s = append(s, say("radiating", h.stated(*e.RadiatingC)))
	}
	if e.Emissivity != nil {
		s = append(s, say("emissivity", plain(*e.Emissivity, 2, nearest)))
	}
	if e.Wet != nil {
		s = append(s, map[bool]string{true: say("wet"), false: say("dry")}[*e.Wet])
	}
	if e.Cover != nil {
		s = append(s, say("cover", e.Cover.Name))
	}
	if e.WrapM2KW != nil {
		s = append(s, say("wrap", plain(*e.WrapM2KW, 5, nearest)))
	}
	return strings.Join(s, ", ")
}

// warnings are the cautions of this run.
func (x *sheet) warnings() {
	d := x.doc
	d.heading(say("cautions title"), 0, 20)
	d.text(say("cautions note"))
	for _, c := range x.cautions {
		d.item("•", c.Text, body)
	}
	if len(x.cautions) == 0 {
		d.text(say("cautions none"))
	}
	d.heading(say("standing title"), 1, 20)
	for _, s := range CautionText() {
		d.item("•", s, body)
	}
}

// readings is the input echo, a line of cells for each row of the plan.
func (x *sheet) readings() {
	d := x.doc
	d.heading(say("input title"), 0, 30)
	if len(x.p.Readings) == 0 {
		d.text(say("input none"))
		return
	}
	d.text(say("input note"))
	var rows [][]string
	var cells []cell.Reading
	rs, blanks := blanksTogether(x.p.Readings)
	carded := x.carded()
	for i := range rs {
		row := rs[i].At
		if row.Col = 0; !carded[row] || !slices.Contains(onCard, rs[i].Column) {
			cells = append(cells, rs[i])
		}
		if i+1 == len(rs) || rs[i].At.Sheet != rs[i+1].At.Sheet || rs[i].At.Row != rs[i+1].At.Row {
			rows = append(rows, []string{strings.TrimSpace(row.String() + "\n" + sharedSource(cells)), echoed(cells)})
			cells = cells[:0]
		}
	}
	d.table([]col{{title: say("col row"), wide: 30, bold: true}, {title: say("col cells"), wide: frameWide - 30}}, append(rows, blanks...), small)
}

// blanksTogether takes out of the readings the defaults that stood in for blank cells of one column in three rows or more, and tells
// each once with its rows: a line of the echo for each sheet.
func blanksTogether(rs []cell.Reading) (left []cell.Reading, lines [][]string) {
	type same struct {
		sheet string
		col   int
		used  string
	}
	of := func(r *cell.Reading) same { return same{r.At.Sheet, r.At.Col, joined(r.Used, defaultWhy(r))} }
	rows := map[same][]int{}
	for i := range rs {
		if r := &rs[i]; r.Typed == "" && r.From == "" && r.At.Row > 0 && !slices.Contains(rows[of(r)], r.At.Row) {
			rows[of(r)] = append(rows[of(r)], r.At.Row)
		}
	}
	line := map[string]int{}
	told := map[same]bool{}
	for i := range rs {
		r := &rs[i]
		k := of(r)
		if r.Typed != "" || r.From != "" || len(rows[k]) < 3 {
			left = append(left, *r)
			continue
		}
		if told[k] {
			continue
		}
		told[k] = true
		words := say("echo blanks", echoName(r), k.used, rowRanges(rows[k]))
		if n, has := line[k.sheet]; has {
			lines[n][1] += " · " + words
		} else {
			line[k.sheet] = len(lines)
			lines = append(lines, []string{say("echo blank cells", k.sheet), words})
		}
	}
	return left, lines
}

// rowRanges writes rows of a sheet, those that follow each other as a range.
func rowRanges(rows []int) string {
	slices.Sort(rows)
	var s []string
	for i := 0; i < len(rows); {
		k := i
		for k+1 < len(rows) && rows[k+1] == rows[k]+1 {
			k++
		}
		switch {
		case k == i:
			s = append(s, fmt.Sprint(rows[i]))
		case k == i+1:
			s = append(s, fmt.Sprint(rows[i]), fmt.Sprint(rows[k]))
		default:
			s = append(s, fmt.Sprintf("%d–%d", rows[i], rows[k]))
		}
		i = k + 1
	}
	return strings.Join(s, ", ")
}

// echoName is a cell's column, letter first.
func echoName(r *cell.Reading) string {
	if r.At.Col > 0 {
		return cell.ColumnName(r.At.Col) + " " + r.Column
	}
	return r.Column
}

// defaultWhy is why a value was used, but for what "(blank)" and the arrow say already.
func defaultWhy(r *cell.Reading) string {
	if strings.HasPrefix(r.Why, "blank:") {
		return ""
	}
	return r.Why
}

// onCard are the columns of a limit that stand on its card word for word.
var onCard = []string{"Code", "Clause", "Edition", "Issued by", "Confirmed by", "Confirmed on", "CCP", "Hazard", "Status", "Note"}

// carded are the rows of the limits that have a card.
func (x *sheet) carded() map[cell.Ref]bool {
	rows := map[cell.Ref]bool{}
	for _, f := range x.order {
		if f.Limit != nil && f.Verdict != rules.NotApplicable {
			rows[cell.Ref{Sheet: f.Limit.At.Sheet, Row: f.Limit.At.Row}] = true
		}
	}
	return rows
}

// echoed are the cells of a row of the input: letter and column, what was typed, and what was used where that differs. Blank cells
// side by side with one default are told together. Where a cell comes from stands behind its name, without what stands beside the row.
func echoed(rs []cell.Reading) string {
	source := sharedSource(rs)
	var out []string
	blanks, before := "", ""
	for i := range rs {
		r := &rs[i]
		name := echoName(r)
		if r.From != "" {
			name += " (" + strings.TrimPrefix(r.From, source+"!") + ")"
		}
		used := joined(r.Used, defaultWhy(r))
		if r.Typed == "" && blanks != "" && used == before {
			blanks += ", " + name
			out[len(out)-1] = say("echo default", blanks, used)
			continue
		}
		blanks, before = "", used
		switch {
		case r.Typed == "":
			blanks = name
			out = append(out, say("echo default", name, used))
		case used == r.Typed:
			out = append(out, say("echo same", name, r.Typed))
		default:
			out = append(out, say("echo", name, r.Typed, used))
		}
	}
	return strings.Join(out, " · ")
}

// sharedSource is the sheet of the user's own that most cells of a row come from, the first of equals; "" if they come from none.
func sharedSource(rs []cell.Reading) string {
	best, times := "", map[string]int{}
	for i := range rs {
		if n := strings.LastIndexByte(rs[i].From, '!'); n > 0 {
			s := rs[i].From[:n]
			if times[s]++; times[s] > times[best] {
				best = s
			}
		}
	}
	return best
}

// sources are the spreadsheets that the plan was made of, for a table of names and values; at most so many by name.
func (h *Head) sources(most int) [][2]string {
	var rows [][2]string
	name := say("key source")
	for _, s := range h.Sources[:min(len(h.Sources), most)] {
		rows = append(rows, [2]string{name, say("source", s.File, s.SHA256)})
		name = " "
	}
	if n := len(h.Sources) - most; n > 0 {
		rows = append(rows, [2]string{name, say("source more", n)})
	}
	return rows
}

// changeKeys are the reasons to look again, under "change " in words.
var changeKeys = []string{"recipe", "size", "supplier", "equipment", "load", "setting", "limit", "measured", "deviation", "organism", "year"}

// changes are the reasons to look at the process again, with boxes to tick.
func (x *sheet) changes() {
	d := x.doc
	d.heading(say("changes title"), 0, 30)
	d.text(say("changes note"))
	for _, k := range changeKeys {
		d.item("☐", say("change "+k), body)
	}
}

// deviation is a form of blanks: the decision is not the program's. It is never split; below the end of the glossary it has a line
// less for each answer rather than a page of its own.
func (x *sheet) deviation() {
	d := x.doc
	const line = 7.5
	keys, lines := []string{"what", "cause", "held", "disposition", "prevention", "records"}, 2
	if titles := 54.0; d.y+titles+float64(len(keys))*(2+height(body)+float64(lines)*line) > bottomY {
		d.page()
		lines = 3
	}
	d.heading(say("deviation title"), 0, 60)
	d.text(say("deviation note"))
	for _, k := range keys {
		d.y += 2
		d.para(say("deviation "+k), style{size: body, bold: true, after: 0})
		for range lines {
			d.y += line
			d.rule(d.left, d.left+frameWide, d.y, 0.7)
		}
	}
	d.y += 3
	x.signatures("sign decided", "sign checked")
}

// glossaryKeys are the words of the glossary, under "word " and "means " in words.
var glossaryKeys = []string{"slowest", "met", "cannot tell", "margin", "clock", "place", "film", "set-point", "carry-over", "equivalent", "z", "conductivity", "record", "digest"}

// glossary explains the words of theory in half a page.
func (x *sheet) glossary() {
	d := x.doc
	const rows = 14
	d.heading(say("glossary title"), 0, 40)
	var p [][2]string
	for _, k := range glossaryKeys {
		p = append(p, [2]string{say("word " + k), say("means " + k)})
	}
	d.pairs(p[:rows], 34)
}

// ProblemsOf gives the problems that touch a product: its rows, its limits', and those of the whole plan. Faults are not among them.
func (h *Head) ProblemsOf(p *Product) cell.Errors {
	type row struct {
		sheet string
		row   int
	}
	mine := map[row]bool{{p.Product.At.Sheet, p.Product.At.Row}: true, {"Plan", 0}: true, {"", 0}: true}
	for _, r := range p.Readings {
		mine[row{r.At.Sheet, r.At.Row}] = true
	}
	for _, s := range p.Steps {
		mine[row{s.At.Sheet, s.At.Row}] = true
	}
	for _, f := range p.Judgement.Findings {
		if f.Limit != nil {
			mine[row{f.Limit.At.Sheet, f.Limit.At.Row}] = true
		}
	}
	var out cell.Errors
	for _, e := range h.Problems {
		if e.Level != cell.Fault && (e.At.Row == 0 || e.At.Sheet == "Plan" || mine[row{e.At.Sheet, e.At.Row}]) {
			out = append(out, e)
		}
	}
	return out
}
