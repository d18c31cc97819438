package main

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"slowpoint/cmd/slowpoint/record"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// simplifyK is how far the straight lines of a course may lie from the readings that they stand for, K: less than any air logger can tell.
const simplifyK = 0.05

// medium is the record of the surroundings of a step, ready to be calculated with.
type medium struct {
	of        *workbook.Record
	nth       int // of the records of the product's surroundings
	step      int
	durationS float64
	clockS    float64         // how finely its row or its file tells when steps began and ended
	ended     bool            // somebody wrote down when the step ended, so that it does not end at a temperature
	courses   []model.Course  // as read, then the ends that the accuracy of the instrument, the simplification and each gap allow
	others    map[int]float64 // how long other steps were, where the row says when they began and ended, s
	manyGaps  bool            // more than were tried at every combination of their ends
	timesS, c []float64       // the readings, s from the start of the step
	errorK    float64         // by how much they may be off
}

// sparseS is how far apart readings of a medium may lie that stand for a straight line, s; farther apart its ends are judged too.
const sparseS = 300

// gapsTried is how many gaps of a medium are tried at every combination of their ends, mostRuns how many runs in all.
const gapsTried, mostRuns = 3, 64

// deviate calculates a product with the surroundings that were recorded. It is nil if none were, or none could be used; the problems are
// told either way. The media are those that could be used.
func (r *runner) deviate(p *workbook.Product, out *report.Product) (v *report.Deviation, media []*medium) {
	if r.logs == nil {
		return nil, nil
	}
	v = &report.Deviation{WithinK: simplifyK}
	cannot := func(why string) { v.Judgement = rules.Judgement{Verdict: rules.CannotTell, Why: why} }
	media, lengths, open := r.media(p, out, v)
	switch {
	case len(v.Records) == 0:
		return nil, nil
	case len(media) == 0:
		cannot("the record could not be used")
		return v, nil
	case open != "":
		cannot(open)
		return v, nil
	}
	after, err := r.inMedia(p, media, make([]int, len(media)), nil)
	if err != nil {
		cannot("it cannot be calculated: " + oneLine(err))
		return v, media
	}
	v.History = after.History
	findings := after.Judgement.Findings
	var asRead []rules.Verdict
	for i := range findings {
		asRead = append(asRead, findings[i].Verdict)
	}
	for _, which := range ends(media) {
		for _, lasted := range lasted(lengths) {
			bound, err := r.inMedia(p, media, which, lasted)
			if err != nil {
				cannot("its bounds cannot be calculated: " + oneLine(err))
				return v, media
			}
			for i := range findings {
				if i < len(bound.Judgement.Findings) && rules.Worse(&bound.Judgement.Findings[i], &findings[i]) {
					findings[i] = bound.Judgement.Findings[i]
				}
			}
		}
	}
	manyGaps := slices.ContainsFunc(media, func(m *medium) bool { return m.manyGaps })
	for i := range findings { // what may have been beside the readings proves nothing
		switch f := &findings[i]; {
		case asRead[i] == rules.Met && f.Verdict == rules.NotMet:
			f.Verdict, f.Why = rules.CannotTell, strings.TrimSuffix(f.Why, ".")+"; but that is at the unfavourable end of what the record leaves open, and by its readings alone it is met, so it cannot be told."
		case manyGaps && f.Verdict == rules.Met:
			f.Verdict, f.Why = rules.CannotTell, "It is met at the ends of all records and gaps together, and there are too many to try them apart."
		}
		findings[i].Run = ""
	}
	v.Judgement = rules.Conclude(findings, r.plan.Groups)
	return v, media
}

// media reads the records of the surroundings of a product into v, and gives those that can be used, and the lengths of steps that they leave open
// within what their clocks tell. open says why nobody can tell by them
// what the surroundings were; "" if that is plain.
func (r *runner) media(p *workbook.Product, out *report.Product, v *report.Deviation) (media []*medium, lengths []length, open string) {
	for i := range r.plan.Records {
		rec := &r.plan.Records[i]
		if !rec.Sound || rec.Of != workbook.OfMedium || !slices.ContainsFunc(rec.Products, func(q *workbook.Product) bool { return q.Name == p.Name }) {
			continue
		}
		m, air := r.surroundings(rec, p, out)
		v.Records, v.Steps = append(v.Records, *m), append(v.Steps, rec.Step)
		if air == nil {
			continue
		}
		air.of, air.nth = rec, len(v.Records)-1
		if k := slices.IndexFunc(media, func(b *medium) bool { return b.step == air.step }); k >= 0 {
			v.Records[air.nth].Problems.Add(*fault(rec, "What it measured", rec.Measured, "is recorded twice for "+p.Name+": by "+media[k].named()+" too", "keep one of the records"))
			open = fmt.Sprintf("the surroundings of %s are recorded twice, by %s and %s", p.Steps[air.step].Name, media[k].named(), air.named())
			continue
		}
		media = append(media, air)
	}
	if open != "" {
		return media, nil, open
	}
	for k := range p.Steps {
		l := settle(media, k, p.Steps[k].Name)
		switch {
		case l.wrong != nil:
			v.Records[l.b.nth].Problems.Add(*l.wrong)
			return media, nil, fmt.Sprintf("%s and %s do not agree on how long %s was", l.a.named(), l.b.named(), p.Steps[k].Name)
		case l.mostS > l.leastS+sameLengthS:
			lengths = append(lengths, l)
		}
	}
	if len(lengths) > openLengths {
		return media, nil, fmt.Sprintf("the records differ on how long %d steps were", len(lengths))
	}
	return media, lengths, ""
}

// named is the record of a medium, with its row.
func (m *medium) named() string { return fmt.Sprintf("%s (%s)", m.of.Name, m.of.At) }

// sameLengthS is by how much two lengths of a step may differ that are the same, s.
const sameLengthS = 1

// openLengths is of how many steps at most two records may tell the length a little differently; of more they do not agree.
const openLengths = 2

// length is how long a step was by the records that say so, s: the shortest and the longest.
type length struct {
	step          int
	leastS, mostS float64
	a, b          *medium     // two records that do not agree, the later one last
	wrong         *cell.Error // says so; nil if all agree
}

// settle looks at how long a step was by each record that says so. Two that differ by less than their clocks tell leave it open between them; of two
// that differ by more, wrong says it of the later, b. The record of the step's own surroundings takes the length from another one that says it
// where it does not itself, as far as its readings were taken.
func settle(media []*medium, step int, name string) length {
	var own, says *medium
	l, long := length{step: step}, 0.0
	for _, m := range media {
		s, said := m.others[step]
		if m.step == step {
			if own = m; m.ended {
				s, said = m.durationS, true
			}
		}
		switch {
		case said && says == nil:
			says, long, l.leastS, l.mostS = m, s, s, s
		case said && math.Abs(s-long) >= says.clockS+m.clockS:
			l.a, l.b = says, m
			l.wrong = fault(m.of, "Starts at", "", fmt.Sprintf("%s lasted %s by it, and %s by %s", name, report.Duration(s), report.Duration(long), says.named()), "correct Starts at in one of the two rows")
			return l
		case said:
			l.leastS, l.mostS = min(l.leastS, s), max(l.mostS, s)
		}
	}
	switch {
	case own == nil || own.ended || says == nil:
	case long > own.durationS+sameLengthS:
		if l.a, l.b = own, says; own.nth > says.nth {
			l.a, l.b = says, own
		}
		l.wrong = fault(l.b.of, "Starts at", "", fmt.Sprintf("%s lasted %s by %s, and %s, which does not say when it ended, is taken for %s", name, report.Duration(long), says.named(), own.named(), report.Duration(own.durationS)),
			"write in Starts at of "+own.of.Name+" when the step ended")
	default:
		own.durationS, own.ended = min(long, own.durationS), true
	}
	return l
}

// lasted are the lengths of steps, s by step, that are judged beside those that the records give as they come: where they leave some open, every
// combination of the shortest and the longest.
func lasted(lengths []length) []map[int]float64 {
	out := []map[int]float64{nil}
	for _, l := range lengths {
		var next []map[int]float64
		for _, m := range out {
			for _, s := range []float64{l.leastS, l.mostS} {
				with := map[int]float64{l.step: s}
				maps.Copy(with, m)
				next = append(next, with)
			}
		}
		out = next
	}
	return out
}

// inMedia judges a product in recorded surroundings; which are the courses that are taken, one of each, and lasted lengths of steps that go before those
// of the records, s; their last readings go on for the rest.
func (r *runner) inMedia(p *workbook.Product, media []*medium, which []int, lasted map[int]float64) (*report.Product, error) {
	q := *p
	q.Steps = append([]model.Step(nil), p.Steps...)
	q.Spreads = nil
	for _, s := range p.Spreads {
		if s.Of.Name != "medium temperature" || !slices.ContainsFunc(media, func(m *medium) bool { return s.Step == m.step }) {
			q.Spreads = append(q.Spreads, s)
		}
	}
	for i, m := range media {
		for k, s := range m.others { // where several say it, they agree
			q.Steps[k].DurationS, q.Steps[k].UntilC = s, nil
		}
		m.into(&q.Steps[m.step], which[i])
	}
	for _, m := range media {
		st := &q.Steps[m.step]
		st.DurationS = m.durationS
		if m.ended {
			st.UntilC = nil
		}
	}
	for k, s := range lasted {
		q.Steps[k].DurationS, q.Steps[k].UntilC = s, nil
	}
	for _, m := range media {
		q.Steps[m.step].Medium = goesOn(q.Steps[m.step].Medium, q.Steps[m.step].DurationS)
	}
	return r.judgedBy(&q, model.Options{})
}

// into puts a course of the record in the place of the planned surroundings of a step. Its walls are shifted alike.
func (m *medium) into(st *model.Step, which int) {
	if st.RadiatingC != nil {
		c := *st.RadiatingC + m.walls(which, st.Medium)
		st.RadiatingC = &c
	}
	st.Medium, st.Measured = m.courses[which], true
}

// goesOn is a course whose last temperature goes on up to an instant, s.
func goesOn(c model.Course, s float64) model.Course {
	if n := len(c.TimesS); n > 0 && c.TimesS[n-1] < s {
		c.TimesS, c.C = append(slices.Clone(c.TimesS), s), append(slices.Clone(c.C), c.C[n-1])
	}
	return c
}

// traceOf is what the surroundings of all steps of a record were, on its clock; nil if they were not recorded throughout, or by an
// instrument that is less exact than the probe.
func traceOf(media []*medium, re *model.Recording, way *ran) *model.Trace {
	tr := &model.Trace{Point: model.Point{Name: "medium"}}
	for i, sp := range re.Spans {
		k := slices.IndexFunc(media, func(m *medium) bool { return m.step == way.first+i })
		if k < 0 || media[k].errorK > re.ErrorK+1e-9 || sp.EndS-sp.StartS-media[k].durationS >= way.clockS+media[k].clockS {
			return nil
		}
		for n, t := range media[k].timesS {
			if at := sp.StartS + max(t, 0); at <= sp.EndS && (len(tr.TimesS) == 0 || at > tr.TimesS[len(tr.TimesS)-1]) {
				tr.TimesS, tr.C = append(tr.TimesS, at), append(tr.C, media[k].c[n])
			}
		}
	}
	if len(tr.TimesS) == 0 {
		return nil
	}
	return tr
}

// walls is by how much the radiating temperature is shifted from the plan's, K: by the mean of the record, and at its ends by its lowest and
// its highest, for how fast walls follow the air nobody knows.
func (m *medium) walls(which int, planned model.Course) float64 {
	c := m.courses[which]
	switch {
	case which == 0:
		return mean(c, m.durationS) - mean(planned, m.durationS)
	case which <= (len(m.courses)-1)/2:
		return slices.Min(c.C) - mean(planned, m.durationS)
	}
	return slices.Max(c.C) - mean(planned, m.durationS)
}

// mean is the mean of a course from its start to an instant, s; the last temperature goes on.
func mean(c model.Course, until float64) float64 {
	line := model.Trace{TimesS: c.TimesS, C: c.C}
	sum, t, x := 0.0, 0.0, c.C[0]
	add := func(at, next float64) { sum, t, x = sum+(at-t)*(x+next)/2, at, next }
	for i, at := range c.TimesS {
		if at >= until {
			break
		}
		add(at, c.C[i])
	}
	add(until, line.At(until))
	return sum / until
}

// ends are the runs beside the one as read: every combination of the ends of the media, as far as there are not too many.
func ends(media []*medium) [][]int {
	n := 1
	for _, m := range media {
		n *= len(m.courses) - 1
	}
	var out [][]int
	if n > mostRuns {
		low, high := make([]int, len(media)), make([]int, len(media))
		for i, m := range media {
			low[i], high[i], m.manyGaps = 1, len(m.courses)-1, true
		}
		return [][]int{low, high}
	}
	for k := range n {
		which := make([]int, len(media))
		for i, m := range media {
			which[i], k = 1+k%(len(m.courses)-1), k/(len(m.courses)-1)
		}
		out = append(out, which)
	}
	return out
}

// surroundings reads the record of a medium for a product.
func (r *runner) surroundings(rec *workbook.Record, p *workbook.Product, out *report.Product) (*report.Measured, *medium) {
	m := describe(rec)
	log, problems := r.logs.read[rec]()
	m.Problems = slices.Clone(problems)
	if log == nil {
		return m, nil
	}
	facts(m, log)
	air, wrong := mediumOf(rec, log, p, lengthsOf(p.Steps, out.History), m)
	if wrong != nil {
		m.Problems = append(m.Problems, *wrong)
		return m, nil
	}
	nextDay(rec, log, m)
	inexact(rec, m)
	return m, air
}

// mediumOf makes the course of a step of a record. The record must cover the step, which is as long as the row says, else as the plan
// has it; lengths are those of the plan, s.
func mediumOf(rec *workbook.Record, log *record.Log, p *workbook.Product, lengths []float64, m *report.Measured) (*medium, *cell.Error) {
	air := &medium{step: stepNamed(p.Steps, rec.Step), errorK: errorOf(rec, log), clockS: clockOf(rec, log)}
	st := &p.Steps[air.step]
	if len(st.Medium.TimesS) == 0 {
		return nil, fault(rec, "What it measured", rec.Measured, st.Name+" has no surroundings with a temperature", "name another step")
	}
	from, wrong := air.times(rec, log, p.Steps, lengths)
	if wrong != nil {
		return nil, wrong
	}
	last := log.TimesS[len(log.TimesS)-1]
	if st.UntilC != nil && !air.ended { // it may take longer than planned, up to its longest
		air.durationS = max(air.durationS, min(st.DurationS, last-from))
	}
	to := from + air.durationS
	reach := max(1.5*log.StepS, 1) // the course of the last reading goes on for one more
	if to > last+reach {
		return nil, fault(rec, "File", rec.File, fmt.Sprintf("ends at %s, and %s needs it up to %s", shown(log, last), st.Name, shown(log, to)), "write when the step began and ended in Starts at, or give the whole file")
	}
	if air.durationS <= 0 {
		return nil, fault(rec, "Starts at", "", st.Name+" has no length by it", "correct it")
	}
	air.fill(log, p.Steps, from, to, m)
	return air, nil
}

// times finds when the step began by the record's row, s from the first reading, and how long it and others were.
func (air *medium) times(rec *workbook.Record, log *record.Log, steps []model.Step, lengths []float64) (from float64, wrong *cell.Error) {
	starts, wrong := startsOf(rec, log, steps, air.step)
	if wrong != nil {
		return 0, wrong
	}
	air.others = map[int]float64{}
	to, known := 0.0, -1 // the last step up to the record's own whose beginning was written down
	for n, b := range starts {
		switch {
		case b.step <= air.step:
			from, known = b.t, b.step
		case b.step == air.step+1:
			to, air.ended = b.t, true
		}
		if n+1 < len(starts) && starts[n+1].step == b.step+1 && b.step != air.step {
			air.others[b.step] = starts[n+1].t - b.t
		}
	}
	if len(starts) > 0 {
		if known < 0 {
			return 0, fault(rec, "Starts at", rec.Starts[0].Typed, "does not say when "+steps[air.step].Name+" began", "write when it began before it")
		}
		for ; known < air.step; known++ { // as long as the plan has them
			from += lengths[known]
		}
	}
	air.durationS = lengths[air.step]
	if air.ended {
		air.durationS = to - from
	}
	return from, nil
}

// fill makes the courses of the readings between two instants, s from the first. In a gap the medium may have been at anything between the
// extremes of the whole record and of the surroundings that the plan has elsewhere: what stops a logger may have stopped a chiller.
func (air *medium) fill(log *record.Log, steps []model.Step, from, to float64, m *report.Measured) {
	x := stretch{log: log, from: from, to: to, gaps: map[int]int{}}
	for x.i+1 < len(log.TimesS) && log.TimesS[x.i+1] <= from {
		x.i++
	}
	for x.j = x.i; x.j+1 < len(log.TimesS) && log.TimesS[x.j] < to; {
		x.j++
	}
	m.Readings, m.Before, m.After = x.j-x.i+1, x.i, len(log.TimesS)-1-x.j
	for k := x.i; k <= x.j; k++ {
		air.timesS, air.c = append(air.timesS, log.TimesS[k]-from), append(air.c, log.C[k])
	}
	for _, g := range log.Gaps {
		if g >= x.i && g < x.j {
			x.gaps[g] = len(x.gaps)
			m.Gaps = append(m.Gaps, [2]float64{log.TimesS[g] - from, log.TimesS[g+1] - from})
		}
	}
	elsewhere := elsewhere(steps, air.step)
	lowest, highest := min(slices.Min(log.C), slices.Min(elsewhere)), max(slices.Max(log.C), slices.Max(elsewhere))
	air.courses = []model.Course{x.course(m.Name, 0, nil)}
	n := len(x.gaps)
	if n > gapsTried {
		n, air.manyGaps = 1, true // all together
	}
	for _, shift := range []float64{-air.errorK - simplifyK, air.errorK + simplifyK} {
		for which := range 1 << n {
			air.courses = append(air.courses, x.course(m.Name, shift, func(g int) float64 {
				if air.manyGaps {
					g = 0
				}
				if which>>g&1 == 0 {
					return lowest
				}
				return highest
			}))
		}
	}
}

// stretch is what a log says of a step: the readings i to j, of which the step takes those between two instants, s from the first reading.
type stretch struct {
	log      *record.Log
	i, j     int
	from, to float64
	gaps     map[int]int // by the reading before it: its number
}

// course is the surroundings of the step by straight lines between the readings, shifted by some K. With bound it is an end of what they leave
// open: in a gap at bound, and between readings that are far apart at the one of the two on the side of the shift.
func (x *stretch) course(name string, shift float64, bound func(gap int) float64) model.Course {
	const jump = 1e-3 // s, for a change at a gap's ends
	log := x.log
	line := model.Trace{TimesS: log.TimesS, C: log.C} // the last reading goes on
	c := model.Course{Name: name}
	add := func(t, temp float64) {
		if n := len(c.TimesS); n == 0 || t > c.TimesS[n-1] {
			c.TimesS, c.C = append(c.TimesS, t), append(c.C, temp+shift)
		}
	}
	stays := func(k int, temp float64) { // from the reading k to the next
		add(max(log.TimesS[k]-x.from, 0)+jump, temp)
		add(min(log.TimesS[k+1]-x.from, x.to-x.from)-jump, temp)
	}
	add(0, line.At(x.from))
	for k := x.i; k <= x.j; k++ {
		if t := log.TimesS[k] - x.from; t > 0 && t < x.to-x.from {
			add(t, log.C[k])
		}
		g, lacking := x.gaps[k]
		switch {
		case bound == nil || k+1 == len(log.TimesS):
		case lacking:
			stays(k, bound(g))
		case log.TimesS[k+1]-log.TimesS[k] > sparseS && shift > 0: // it may have been at either all the time
			stays(k, max(log.C[k], log.C[k+1]))
		case log.TimesS[k+1]-log.TimesS[k] > sparseS:
			stays(k, min(log.C[k], log.C[k+1]))
		}
	}
	add(x.to-x.from, line.At(x.to))
	return simplified(c)
}

// elsewhere are the planned temperatures of a step's own surroundings and of those that it may come to when its equipment stops, °C: those of
// all steps where it heats, else those of the steps that do not heat, such as a kitchen's air. Where none of these is warmer, as without a rest
// on the way to the chiller, they are those of all steps.
func elsewhere(steps []model.Step, i int) []float64 {
	heats := func(k int) bool { return steps[k].Stage != nil && steps[k].Stage.Heats }
	own := slices.Max(steps[i].Medium.C)
	var mild, all []float64
	for k := range steps {
		all = append(all, steps[k].Medium.C...)
		if !heats(k) {
			mild = append(mild, steps[k].Medium.C...)
		}
	}
	if heats(i) || slices.Max(mild) <= own {
		return all
	}
	return mild
}

// mostTogether is how many readings are stood for by lines together: the method looks at up to half its square.
const mostTogether = 512

// simplified drops the rows of a course that straight lines between the others pass within simplifyK (Ramer, Douglas and Peucker's method, in pieces).
func simplified(c model.Course) model.Course {
	looks := 0
	return simplifiedBy(c, &looks)
}

// simplifiedBy counts the rows that were looked at.
func simplifiedBy(c model.Course, looks *int) model.Course {
	n := len(c.TimesS)
	keep := make([]bool, n)
	keep[0] = true
	type part struct{ from, to int }
	var todo []part
	for at := 0; at < n-1; {
		to := min(at+mostTogether, n-1)
		keep[to] = true
		todo = append(todo, part{at, to})
		at = to
	}
	for len(todo) > 0 {
		p := todo[len(todo)-1]
		todo = todo[:len(todo)-1]
		long, rise := c.TimesS[p.to]-c.TimesS[p.from], c.C[p.to]-c.C[p.from]
		far, at := simplifyK, -1
		for i := p.from + 1; i < p.to; i++ {
			if d := math.Abs(c.C[i] - c.C[p.from] - (c.TimesS[i]-c.TimesS[p.from])/long*rise); d > far {
				far, at = d, i
			}
		}
		*looks += p.to - p.from
		if at >= 0 {
			keep[at] = true
			todo = append(todo, part{p.from, at}, part{at, p.to})
		}
	}
	out := model.Course{Name: c.Name}
	for i := range keep {
		if keep[i] {
			out.TimesS, out.C = append(out.TimesS, c.TimesS[i]), append(out.C, c.C[i])
		}
	}
	return out
}
