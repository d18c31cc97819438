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

// Measured is the record of a logger: what was read, and what the limits say of it. It stands apart from the prediction.
type Measured struct {
	Name, What         string // what it measured, as typed
	At                 cell.Ref
	File, SHA256       string
	Sheet, Column      string
	Unit               string // of the file
	How                string // how the file was read, where that had to be decided
	Begins             string // the clock of the first reading; "" if the file has none
	Sensor, Calibrated string
	Note               string
	Readings           int
	StepS              float64  // the usual time between two, s
	ResolutionK        float64  // smallest step of the readings
	AccuracyK          *float64 // of the instrument; nil: not stated
	CorrectionK        float64
	Missing, Doubtful  int
	Gaps               [][2]float64 // s from the start of the chain
	Before, After      int          // readings outside the chain, which were left out
	Unseen             Unseen       // why a probe that left the food slowly, and stayed out, would not be told by its readings
	About              []string     // lines above the table of the file
	Echo               []EchoRow
	History            *model.History // nil where the record could not be used
	Judgement          rules.Judgement
	Against            *Against // the prediction beside it; nil if there is none
	Problems           cell.Errors
}

// Unseen is why readings cannot tell a probe that left the food slowly from the food; its zero says that they can, or that it does not matter.
type Unseen int

const (
	Undescribed Unseen = iota + 1 // nobody knows how fast the food can be
	Quick                         // it can be as fast as a probe
)

// EchoRow is a row of the file as typed and as understood.
type EchoRow struct {
	Line       int
	Time, Read string
	S, C       float64
	Taken      bool // it is a reading of the record; otherwise S and C say nothing
}

// Against holds a record against the prediction at one place, with the steps as long as they were.
type Against struct {
	Place     model.Place
	PlaceName string
	TimesS, C []float64 // the prediction
	Air       bool      // made with recorded surroundings of a step, where there were any
	Readings  int       // that were compared
	LeftOut   int       // doubtful ones, which were not
	BiasK     float64   // mean of record minus prediction
	RMSK      float64
	ColderK   float64 // by how much the record was colder at most, in steps that heat, at ColderS; 0: nowhere
	ColderS   float64
	WarmerK   float64 // by how much it was warmer at most, in the other steps, at WarmerS
	WarmerS   float64
	SlowestK  float64 // of a record of a named point: how much slower the slowest place was at the least favourable instant, by prediction
	SlowestS  float64
	Fitted    []Fitted
	FittedRMS float64 // with the fitted values
	NotFitted string  // why nothing was fitted though it was asked for
}

// Fitted is a value that makes the prediction follow the record, with its interval of 95 %.
type Fitted struct {
	What             string // "film coefficient of Oven", "conductivity"
	Value, Low, High float64
	Typed            float64 // what was taken; 0: nothing
	Unit             string
	Vague            bool // the record does not tell it
}

// asProduct is a record as a product of its own, so that its findings are worded and drawn as any others.
func (m *Measured) asProduct(p *Product) *Product {
	q := &Product{Product: p.Product, Steps: p.Steps, Family: p.Family, RecipeVersion: p.RecipeVersion, Batch: p.Batch, Process: p.Process,
		History: m.History, Judgement: m.Judgement, From: p.From}
	q.gaps = m.Gaps
	if m.Against != nil {
		q.predicted = &model.Trace{Point: model.Point{Name: say("line predicted")}, TimesS: m.Against.TimesS, C: m.Against.C}
	}
	return q
}

// ofGaps are the gaps of a record that stands in the place of a prediction.
func (p *Product) ofGaps() [][2]float64 {
	if p.gaps == nil && p.recorded() && len(p.Measured) == 1 {
		return p.Measured[0].Gaps
	}
	return p.gaps
}

// inGap tells whether an instant lies within a gap.
func (p *Product) inGap(t float64) bool {
	return slices.ContainsFunc(p.ofGaps(), func(g [2]float64) bool { return t > g[0] && t < g[1] })
}

// aroundGaps adds the ends of gaps, and an instant within each, to rising times.
func (p *Product) aroundGaps(times []float64) []float64 {
	gaps := p.ofGaps()
	if len(gaps) == 0 {
		return times
	}
	out := append([]float64(nil), times...)
	for _, g := range gaps {
		out = append(out, g[0], (g[0]+g[1])/2, g[1])
	}
	slices.Sort(out)
	end := times[len(times)-1]
	return slices.DeleteFunc(slices.Compact(out), func(t float64) bool { return t < 0 || t > end })
}

// facts are what is known of a record, as pairs.
func (m *Measured) facts(h *Head) [][2]string {
	where := m.File
	if m.Sheet != "" {
		where += say("record sheet", m.Sheet)
	}
	accuracy := say("record no accuracy")
	if m.AccuracyK != nil {
		accuracy = h.difference(*m.AccuracyK, up)
	}
	correction := ""
	if m.CorrectionK != 0 {
		correction = signed(m.CorrectionK, func(k float64) string { return h.difference(k, nearest) })
	}
	gaps := make([]string, 0, len(m.Gaps))
	for i, g := range m.Gaps {
		if i == 6 {
			gaps = append(gaps, say("and more", len(m.Gaps)-6))
			break
		}
		gaps = append(gaps, say("record gap", duration(g[0], nearest), duration(g[1], nearest), duration(g[1]-g[0], nearest)))
	}
	left := ""
	if m.Before+m.After > 0 {
		left = say("record outside", m.Before, m.After)
	}
	lacking := ""
	if m.Missing > 0 {
		lacking = say("record missing", m.Missing)
	}
	if m.Doubtful > 0 {
		lacking = strings.TrimSpace(lacking + " " + say("record doubtful", m.Doubtful))
	}
	return [][2]string{
		{say("record what"), m.What},
		{say("record file"), where},
		{say("key digest"), m.SHA256},
		{say("record column"), joined(m.Column, m.Unit)},
		{say("record how"), m.How},
		{say("record begins"), m.Begins},
		{say("record readings"), say("record count", m.Readings, duration(m.StepS, nearest), h.difference(m.ResolutionK, nearest))},
		{say("record lacking"), lacking},
		{say("record unseen"), m.unseen()},
		{say("record gaps"), strings.Join(gaps, "; ")},
		{say("record left"), left},
		{say("record sensor"), m.Sensor},
		{say("record calibrated"), m.Calibrated},
		{say("record correction"), correction},
		{say("record accuracy"), accuracy},
		{say("key note"), m.Note},
	}
}

// unseen says why the curve has to be looked at; "" where it need not be for that.
func (m *Measured) unseen() string {
	switch m.Unseen {
	case Undescribed:
		return say("record unseen undescribed")
	case Quick:
		return say("record unseen quick")
	}
	return ""
}

// verdictOf is the verdict of a record with the limit that settles it, in a sentence.
func (m *Measured) verdictOf(p *Product) string {
	if m.History == nil {
		return say("record unusable", m.Name)
	}
	q := m.asProduct(p)
	r := q.Row()
	why := r.Why
	if r.Deciding != "" {
		why = r.Deciding + ": " + why
	}
	return say("record verdict", m.Name, overall(m.Judgement.Verdict).String(), sentence(why))
}

// compared says how the record lay to the prediction.
func (m *Measured) compared(h *Head) []string {
	a := m.Against
	if a == nil {
		return nil
	}
	signed := func(k float64) string { return signed(k, func(k float64) string { return h.difference(k, nearest) }) }
	key := "against"
	if a.Air {
		key = "against air"
	}
	out := []string{say(key, a.PlaceName, a.Readings, signed(a.BiasK), h.difference(a.RMSK, up))}
	if a.LeftOut > 0 {
		out = append(out, say("against left out", a.LeftOut))
	}
	switch {
	case a.ColderK > 0 && a.WarmerK > 0:
		out = append(out, say("against both", h.difference(a.ColderK, up), duration(a.ColderS, nearest), h.difference(a.WarmerK, up), duration(a.WarmerS, nearest)))
	case a.ColderK > 0:
		out = append(out, say("against colder", h.difference(a.ColderK, up), duration(a.ColderS, nearest)))
	case a.WarmerK > 0:
		out = append(out, say("against warmer", h.difference(a.WarmerK, up), duration(a.WarmerS, nearest)))
	default:
		out = append(out, say("against safe"))
	}
	if a.SlowestK > 0 {
		out = append(out, say("against slowest", a.PlaceName, h.difference(a.SlowestK, up), duration(a.SlowestS, nearest)))
	}
	if len(a.Fitted) > 0 {
		var s []string
		for _, f := range a.Fitted {
			words := say("fitted one", f.What, three(f.Value), three(f.Low), three(f.High))
			if f.Vague {
				words = say("fitted vague", f.What, three(f.Low), three(f.High))
			}
			if f.Unit != "" {
				words += " " + f.Unit
			}
			if f.Typed > 0 {
				words += say("fitted typed", three(f.Typed))
			}
			s = append(s, words)
		}
		out = append(out, say("fitted", strings.Join(s, "; "), h.difference(a.FittedRMS, up)))
	}
	if a.NotFitted != "" {
		out = append(out, say("fitted not", a.NotFitted))
	}
	return out
}

// differences is the strip below the chart of a record: by how much it was warmer than the prediction, over the same time; nil without one.
func (h *Head) differences(p *Product, d *deciding) *chart {
	if p.predicted == nil {
		return nil
	}
	hist := d.history
	axis := newTimeAxis(hist, d.part())
	times := p.aroundGaps(chartTimes(hist))
	read := make([]float64, len(times))
	hist.Course(d.place, times, read)
	l := line{name: say("line difference")}
	lo, hi := 0.0, 0.0
	for i, c := range predictedAt(p.predicted, times) {
		y := (read[i] - c) * h.perK()
		if p.inGap(times[i]) {
			y = math.NaN()
		}
		if !math.IsNaN(y) {
			lo, hi = min(lo, y), max(hi, y)
		}
		l.x, l.y = append(l.x, axis.at(times[i])), append(l.y, y)
	}
	f := &chart{xName: axis.name, yName: say("axis difference", h.degree()), x1: axis.end(), xTicks: axis.ticks, size: small, ends: 96, lines: []line{l}}
	f.y0, f.y1 = lo-0.1*(hi-lo)-0.2, hi+0.35*(hi-lo)+0.6 // for the strip with the names of the steps
	f.yTicks = ticksTo(f.y0, hi+0.05*(hi-lo)+0.1, []float64{0.5, 1, 2, 5, 10, 20, 25, 50, 100}, 5)
	f.levels = []level{{words: []string{"0 " + h.degree(), say("as predicted")}, from: 0, to: axis.end()}}
	for _, sp := range hist.Spans {
		f.bands = append(f.bands, band{name: sp.Step.Name, from: axis.at(sp.StartS), to: axis.at(sp.EndS)})
	}
	return f
}

// records are the measured part of a report.
func (x *sheet) records() {
	d := x.doc
	for i := range x.p.Measured {
		m := &x.p.Measured[i]
		if i > 0 {
			d.y += 3
		}
		d.heading(say("record title", m.Name), 1, 40)
		d.para(m.verdictOf(x.p), style{size: body, bold: true, after: 1})
		if len(m.Problems) > 0 {
			x.problems(m.Problems)
			d.y += 1.5
		}
		d.pairs(m.facts(x.head), 34)
		if m.History == nil {
			continue
		}
		q := m.asProduct(x.p)
		y := &sheet{doc: d, p: q, decides: q.decides(), order: q.worstFirst()}
		tall := 92.0
		if m.Against != nil { // with the strip below
			tall += 44
		}
		d.need(tall)
		x.head.history(q, y.decides, small, 96, true).draw(d.canvas(d.left, d.y, frameWide, 88))
		d.y += 89
		d.text(y.slowestSentence())
		if f := x.head.differences(q, y.decides); f != nil {
			d.need(44)
			f.draw(d.canvas(d.left, d.y, frameWide, 40))
			d.y += 41
			d.text(say("against strip"))
		}
		for _, s := range m.compared(x.head) {
			d.text(s)
		}
		d.table([]col{{title: say("col limit"), wide: 40, bold: true}, {title: say("col verdict"), wide: 25, bold: true}, {title: say("col value"), wide: 27},
			{title: say("col margin"), wide: 34}, {title: say("col why"), wide: frameWide - 126}}, y.recordRows(), small)
		x.echo(m)
	}
}

// recordRows are the findings on a record: limit, verdict, value, room, why; what the limits cite stands with the prediction.
func (x *sheet) recordRows() [][]string {
	var rows [][]string
	for _, f := range x.order {
		if f.Limit == nil || f.Verdict == rules.NotApplicable {
			continue
		}
		value := x.head.quantity(f, f.Value, false)
		if value != "" && finite(f.Required) {
			value = say("card value", value, x.head.quantity(f, f.Required, true))
		}
		why := sentence(f.Why)
		if len(f.Notes) > 0 {
			why += " " + sentence(notes(f))
		}
		if n := len(f.Cells); n > 0 && f.Cells[n-1].Row == 0 { // the reading that decides
			why += " " + say("record line", f.Cells[n-1].Sheet)
		}
		name := f.Limit.Name
		if f.Level != "must" {
			name = say("record level", name, f.Level)
		}
		rows = append(rows, []string{name, verdictWord(f.Verdict), value, x.head.room(f), why})
	}
	return rows
}

// recordsShort says for the kitchen what the records came to, without the reasons.
func (x *sheet) recordsShort() string {
	if x.p.recorded() {
		return ""
	}
	s := ""
	for i := range x.p.Measured {
		m := &x.p.Measured[i]
		s += " " + say("record short", m.Name, m.verdict().String())
	}
	if v := x.p.Deviation; v != nil {
		s += " " + say("deviated short", v.names(), overall(v.Judgement.Verdict).String())
	}
	return s
}

// recordSentences tell what each record came to.
func (p *Product) recordSentences() []string {
	if p.recorded() {
		return nil
	}
	var s []string
	for i := range p.Measured {
		s = append(s, p.Measured[i].verdictOf(p))
	}
	if p.Deviation != nil {
		s = append(s, p.Deviation.verdict())
	}
	return s
}

// echo shows the first and last rows of a file as they were understood.
func (x *sheet) echo(m *Measured) {
	if len(m.Echo) == 0 {
		return
	}
	d := x.doc
	d.heading(say("echo title"), 2, 25)
	if len(m.About) > 0 {
		d.text(say("echo about", strings.Join(m.About[:min(len(m.About), 6)], " / ")))
	}
	var rows [][]string
	for _, e := range m.Echo {
		row := []string{fmt.Sprint(e.Line), e.Time, e.Read, "", say("echo left")}
		if e.Taken {
			row[3], row[4] = duration(e.S, nearest), x.head.temperature(e.C, nearest)
		}
		rows = append(rows, row)
	}
	d.table([]col{{title: say("echo line"), wide: 16}, {title: say("echo time"), wide: 48}, {title: say("echo read"), wide: 34}, {title: say("echo s"), wide: 40}, {title: say("echo c"), wide: frameWide - 138}}, rows, small)
}

// verdict is that of a record; CannotTell where it could not be used.
func (m *Measured) verdict() rules.Verdict {
	if m.History == nil {
		return rules.CannotTell
	}
	return overall(m.Judgement.Verdict)
}

// measuredWorst is the worst verdict of the records of a product; nil if it has none.
func (p *Product) measuredWorst() *rules.Verdict {
	var all []rules.Verdict
	if p.recorded() {
		return nil
	}
	for i := range p.Measured {
		all = append(all, p.Measured[i].verdict())
	}
	if p.Deviation != nil {
		all = append(all, overall(p.Deviation.Judgement.Verdict))
	}
	if len(all) == 0 {
		return nil
	}
	worst := slices.MinFunc(all, func(a, b rules.Verdict) int { return weight(a) - weight(b) })
	return &worst
}

// predictedAt is the prediction beside a record, for the chart.
func predictedAt(tr *model.Trace, times []float64) []float64 {
	out := make([]float64, len(times))
	for i, t := range times {
		out[i] = math.NaN()
		if n := len(tr.TimesS); n > 0 && t >= tr.TimesS[0]-1e-6 && t <= tr.TimesS[n-1]+1e-6 {
			out[i] = tr.At(t)
		}
	}
	return out
}

// three writes a number with three significant digits, noughts behind the decimal sign too.
func three(v float64) string { return decimal(v, decimalsFor(v, 3), nearest) }
