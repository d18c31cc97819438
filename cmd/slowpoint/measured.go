package main

import (
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"sort"
	"strings"
	"sync"
	"time"

	"slowpoint/cmd/slowpoint/record"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// logs are the files of loggers, each read when it is first asked for.
type logs struct {
	folder string // of the plan
	today  time.Time
	read   map[*workbook.Record]func() (*record.Log, cell.Errors)
}

// newLogs makes ready to read the records of a plan that lies in a folder; a clock that is ahead of today is told.
func newLogs(plan *workbook.Plan, folder string, today time.Time) *logs {
	l := &logs{folder: folder, today: today, read: map[*workbook.Record]func() (*record.Log, cell.Errors){}}
	for i := range plan.Records {
		rec := &plan.Records[i]
		if rec.Sound {
			l.read[rec] = sync.OnceValues(func() (*record.Log, cell.Errors) { return l.open(rec) })
		}
	}
	return l
}

// open reads the file of a record.
func (l *logs) open(rec *workbook.Record) (*record.Log, cell.Errors) {
	path := filepath.Join(l.folder, filepath.FromSlash(rec.File))
	if whole, err := filepath.EvalSymlinks(path); err == nil { // a link may lead out of the folder
		if home, err := filepath.EvalSymlinks(l.folder); err == nil {
			if way, err := filepath.Rel(home, whole); err != nil || !filepath.IsLocal(way) {
				return nil, cell.Errors{{At: rec.Cells["File"], Field: "File", Typed: rec.File, Msg: "is a link that leads out of the plan's folder, from which alone records are read", Hint: "put the file itself into the folder of the plan"}}
			}
		}
	}
	return record.Read(settingOf(rec, path, l.today))
}

// settingOf is how the file of a record is to be read.
func settingOf(rec *workbook.Record, path string, today time.Time) record.Setting {
	s := record.Setting{File: path, Name: rec.File, Sheet: rec.Sheet, Time: rec.Time, Temperature: rec.Temperature, DateOrder: rec.DateOrder,
		Zone: rec.Zone, Decimal: rec.Decimal, Missing: rec.Missing, Corrections: rec.CorrectionK, Cells: rec.Cells, Today: today}
	if rec.AccuracyK != nil {
		s.AccuracyK = *rec.AccuracyK
	}
	return s
}

// foodAt is what the plan tells of the place that a probe measures; nil where it may leap with its surroundings, or nobody knows where it is.
func foodAt(rec *workbook.Record) *record.Food {
	var at *model.Place // nil: the slowest point
	switch rec.Of {
	case workbook.AtSlowest:
	case workbook.AtPoint:
		at = &rec.Place.Place
	default:
		return nil
	}
	f := &record.Food{LowC: math.NaN(), HighC: math.NaN()}
	if len(rec.Products) == 0 {
		return f
	}
	p := rec.Products[0]
	lo, hi, film, whole := surroundedBy(p)
	if q, ok := model.Quickest(&p.Product, at, lo, hi, filmOff*film); ok {
		f.SettleS = q.SettleS
		if whole {
			f.ShareS, f.LowC, f.HighC, f.Follows = q.ShareS, lo, hi, q.Follows
		}
	}
	return f
}

// slowProbeS is how soon a food settles that a slow probe may look like, s: of food that settles later none of the pulls that tests draw went
// unnoticed where a limit was then met; own choice.
const slowProbeS = 1200.0

// unseenIn is why a slow probe that leaves a food and stays out would not be told.
func unseenIn(f *record.Food) report.Unseen {
	switch {
	case f.Follows == nil:
		return report.Undescribed
	case f.SettleS < slowProbeS:
		return report.Quick
	}
	return 0
}

// filmOff is how many times as high as typed a film may be before what a food does may be taken for a leap; own choice.
const filmOff = 3.0

// surroundedBy is the range of the temperatures that a product starts at and meets by the plan, °C, and the highest film, W/(m²·K), +Inf where any is not
// typed; whole tells that every step says its temperature.
func surroundedBy(p *workbook.Product) (lo, hi, film float64, whole bool) {
	lo, hi, whole = p.StartC, p.StartC, len(p.Steps) > 0
	take := func(e *model.Exposure) {
		cs := e.Medium.C
		if e.RadiatingC != nil {
			cs = append(slices.Clone(cs), *e.RadiatingC)
		}
		for _, c := range cs {
			lo, hi = min(lo, c), max(hi, c)
		}
		switch {
		case e.Surface.Insulates():
		case e.Surface.FilmTyped() && e.FilmW != nil:
			film = max(film, *e.FilmW)
		default:
			film = math.Inf(1)
		}
		whole = whole && e.Surface != nil && (len(cs) > 0 || e.Surface.NoMedium)
	}
	for i := range p.Steps {
		st := &p.Steps[i]
		take(&st.Exposure)
		for k := range st.Faces {
			take(&st.Faces[k].Exposure)
		}
	}
	if film == 0 { // no step says
		film = math.Inf(1)
	}
	return lo, hi, film, whole
}

// ran is the steps of a chain as a record has them.
type ran struct {
	first  int       // the first step that it covers
	startS []float64 // of each covered step, s from the first reading; and behind the last its end
	clockS float64   // how finely these are told
}

// stretches are the covered steps on the clock of the log.
func (w *ran) stretches(steps []model.Step) (out []record.Stretch) {
	for i := 0; i+1 < len(w.startS); i++ {
		st := steps[w.first+i].Stage
		out = append(out, record.Stretch{StartS: w.startS[i], EndS: w.startS[i+1], Heats: st != nil && st.Heats})
	}
	return out
}

// fault is a mistake in a cell of a record's row.
func fault(rec *workbook.Record, heading, typed, msg, hint string) *cell.Error {
	return &cell.Error{At: rec.Cells[heading], Field: heading, Typed: typed, Msg: msg, Hint: hint}
}

// laidOut says when the steps of a product began by a record: as its row says, else as long as the plan has them. lengths are those of
// the plan, s.
func laidOut(rec *workbook.Record, log *record.Log, steps []model.Step, lengths []float64) (*ran, *cell.Error) {
	if len(steps) == 0 {
		return nil, fault(rec, "Product", "", "has no steps in the plan", "add them to the sheet Steps, or judge the record with --stages")
	}
	given := map[int]float64{} // by step
	end := log.TimesS[len(log.TimesS)-1]
	r := &ran{clockS: clockOf(rec, log)}
	starts, wrong := startsOf(rec, log, steps, 0)
	if wrong != nil {
		return nil, wrong
	}
	for n, b := range starts {
		if b.t > end {
			return nil, fault(rec, "Starts at", rec.Starts[n].Typed, fmt.Sprintf("lies outside the readings, which go from %s to %s", shown(log, 0), shown(log, end)), "correct the time, or the file")
		}
		given[b.step] = b.t
	}
	if len(starts) > 0 {
		r.first = starts[0].step
	}
	if len(rec.Starts) == 0 {
		given[0] = 0
	}
	if r.first >= len(steps) {
		return nil, fault(rec, "Starts at", rec.Starts[0].Typed, "says when the chain ended, and not when it began", "write a step before it: Oven 09:12; end 13:30")
	}
	if e, ok := given[len(steps)]; ok {
		end = e
	}
	t := given[r.first]
	for i := r.first; i < len(steps); i++ {
		if g, ok := given[i]; ok {
			t = g
		} else if later := nextGiven(given, i, len(steps)); later >= 0 && t >= given[later] {
			return nil, fault(rec, "Starts at", "", fmt.Sprintf("%s would begin by the plan's durations at %s, which is after %s began", steps[i].Name, shown(log, t), steps[later].Name), "write when it began: Oven 09:12; Rest 11:02; Chill 11:20")
		}
		if t >= end {
			break
		}
		r.startS = append(r.startS, t)
		if _, known := given[i+1]; !known && i+1 < len(steps) && !(lengths[i] > 0) {
			return nil, fault(rec, "Starts at", "", fmt.Sprintf("does not say when %s began, and how long %s was is not known without", steps[i+1].Name, steps[i].Name), "write when it began: Oven 09:12; Rest 11:02; Chill 11:20")
		}
		t += lengths[i]
	}
	r.startS = append(r.startS, end)
	if len(r.startS) < 2 {
		return nil, fault(rec, "Starts at", "", "leaves no readings within the steps", "correct it")
	}
	return r, nil
}

// clockOf is how finely a record tells when steps began and ended, s: a minute where its row has times in whole minutes, or none and the clock
// of the file shows whole minutes; else a second.
func clockOf(rec *workbook.Record, log *record.Log) float64 {
	fine := func(s float64) bool { return math.Abs(s-60*math.Round(s/60)) > tiny }
	typed := false
	for i := range rec.Starts {
		s := &rec.Starts[i]
		if s.Clock || s.Elapsed && s.After > 0 {
			typed = true
		}
		if fine(s.After.Seconds()) {
			return 1
		}
	}
	if !typed && (slices.ContainsFunc(log.TimesS, fine) || log.Start.Second() != 0 || log.Start.Nanosecond() != 0) {
		return 1
	}
	return 60
}

// nextGiven is the next of n steps whose beginning is known; −1 if there is none.
func nextGiven(given map[int]float64, i, n int) int {
	for k := i + 1; k < n; k++ {
		if _, ok := given[k]; ok {
			return k
		}
	}
	return -1
}

// stepNamed finds a step; 0 if there is none of that name, which the reader told.
func stepNamed(steps []model.Step, name string) int {
	for i := range steps {
		if workbook.Key(steps[i].Name) == workbook.Key(name) {
			return i
		}
	}
	return 0
}

const day = 24 * time.Hour

// began is when a step began.
type began struct {
	step int     // the number of steps: the chain ended
	t    float64 // s from the first reading
}

// startsOf are the times of Starts at, which rise. A time without a step is that of the step bare.
func startsOf(rec *workbook.Record, log *record.Log, steps []model.Step, bare int) ([]began, *cell.Error) {
	var out []began
	for n := range rec.Starts {
		s := &rec.Starts[n]
		t, wrong := startOf(rec, log, s)
		if wrong != nil {
			return nil, wrong
		}
		if n > 0 && t <= out[n-1].t {
			return nil, fault(rec, "Starts at", s.Typed, "is no later than the step before it", "write the steps in their order")
		}
		b := began{bare, t}
		if s.Step != "" {
			b.step = stepNamed(steps, s.Step)
		}
		if s.End {
			b.step = len(steps)
		}
		out = append(out, b)
	}
	return out, nil
}

// startOf is a start in s from the first reading.
func startOf(rec *workbook.Record, log *record.Log, s *workbook.Start) (float64, *cell.Error) {
	switch {
	case s.Typed != "" && !s.Clock && !s.Elapsed: // a step alone: at the first reading
		return 0, nil
	case s.Elapsed:
		return s.After.Seconds(), nil
	case log.Start.IsZero():
		return 0, fault(rec, "Starts at", s.Typed, "is a time of the clock, and the file has none", "write the time after the first reading, such as 20 min")
	case !s.Date.IsZero() && !log.Dated:
		return 0, fault(rec, "Starts at", s.Typed, "has a date, and the file has none", "write the clock alone")
	case !s.Date.IsZero():
		y, m, d := s.Date.Date()
		t := time.Date(y, m, d, 0, 0, 0, 0, log.Start.Location()).Add(s.After).Sub(log.Start).Seconds()
		if t < 0 {
			return 0, fault(rec, "Starts at", s.Typed, "is before the first reading, at "+shown(log, 0), "correct the time, or the file")
		}
		return t, nil
	}
	end := log.TimesS[len(log.TimesS)-1]
	if end > day.Seconds() {
		mend := "write the date too, as 2026-11-03 09:12"
		if !log.Dated {
			mend = "write the time after the first reading, such as 20 min"
		}
		return 0, fault(rec, "Starts at", s.Typed, "has no date, and the record is longer than a day", mend)
	}
	h, m, sec := log.Start.Clock()
	t := (s.After - time.Duration(h)*time.Hour - time.Duration(m)*time.Minute - time.Duration(sec)*time.Second).Seconds()
	if t < 0 { // after midnight
		t += day.Seconds()
	}
	if t > end {
		return 0, fault(rec, "Starts at", s.Typed, fmt.Sprintf("lies outside the readings, which go from %s to %s", shown(log, 0), shown(log, end)), "correct the time, or the file")
	}
	return t, nil
}

// nextDay warns of a record whose first step begins at a time of the clock before that of the first reading: it is taken for the next day.
func nextDay(rec *workbook.Record, log *record.Log, m *report.Measured) {
	if len(rec.Starts) == 0 || log.Start.IsZero() {
		return
	}
	s := &rec.Starts[0]
	if h, min, sec := log.Start.Clock(); !s.Clock || !s.Date.IsZero() || s.After >= time.Duration(h)*time.Hour+time.Duration(min)*time.Minute+time.Duration(sec)*time.Second {
		return
	}
	e := fault(rec, "Starts at", s.Typed, "is before the first reading, at "+shown(log, 0)+", and is taken for the next day: what was read before it is left out", "correct the time if that is not meant")
	e.Level = cell.Warning
	m.Problems = append(m.Problems, *e)
}

// inexact warns of a record whose instrument nobody knows.
func inexact(rec *workbook.Record, m *report.Measured) {
	if rec.AccuracyK == nil {
		e := fault(rec, "Accuracy", "", "Accuracy is blank, so the instrument is taken for exact, and a verdict may rest on its error", "write how far it may be off")
		e.Level = cell.Warning
		m.Problems = append(m.Problems, *e)
	}
}

// shown writes a time of a record as its file has it.
func shown(log *record.Log, s float64) string {
	switch t := log.Start.Add(time.Duration(s * float64(time.Second))); {
	case log.Start.IsZero():
		return report.Duration(s) + " after the first reading"
	case log.Dated:
		return t.Format("2006-01-02 15:04:05")
	default:
		return t.Format("15:04:05")
	}
}

// measure judges the records of a product beside its prediction; media are the surroundings that were recorded too.
func (r *runner) measure(p *workbook.Product, out *report.Product, media []*medium) {
	if r.logs == nil {
		return
	}
	for i := range r.plan.Records {
		rec := &r.plan.Records[i]
		if !rec.Sound && slices.ContainsFunc(rec.Products, func(q *workbook.Product) bool { return q.Name == p.Name }) {
			m := describe(rec)
			m.Problems.Add(cell.Error{At: rec.At, Msg: fmt.Sprintf("The record %s was not read: its row has mistakes", rec.Name), Hint: "mend the cells that are named with it"})
			out.Measured = append(out.Measured, *m)
			continue
		}
		if rec.Sound && rec.Of.Food() && rec.Products[0].Name == p.Name {
			out.Measured = append(out.Measured, *r.measured(rec, p, out, media))
		}
	}
}

// unjudged tells of records of products that cannot be calculated, beside which nothing stands.
func (r *runner) unjudged() (es cell.Errors) {
	if r.logs == nil || r.alone != nil {
		return nil
	}
	for i := range r.plan.Records {
		rec := &r.plan.Records[i]
		refused := func(q *workbook.Product) bool {
			return slices.ContainsFunc(r.plan.NotCalculated, func(n workbook.NotCalculated) bool { return n.Product == q.Name }) ||
				slices.ContainsFunc(r.refused, func(n report.NotCalculated) bool { return n.Product == q.Name })
		}
		if rec.Sound && rec.Of.Food() && refused(rec.Products[0]) {
			es.Add(cell.Error{At: rec.At, Level: cell.Warning, Msg: fmt.Sprintf("The record %s is of a product that cannot be calculated, and was not judged", rec.Name), Hint: "judge it alone: slowpoint judge FILE --limits PLAN --like \"" + rec.Name + "\""})
		}
	}
	return es
}

// lengthsOf are how long the steps are, s: in the prediction where there is one, for steps may end at a temperature; NaN for those that do
// where there is none.
func lengthsOf(steps []model.Step, h *model.History) []float64 {
	out := make([]float64, len(steps))
	for i := range steps {
		out[i] = steps[i].DurationS
		if h == nil && steps[i].UntilC != nil {
			out[i] = math.NaN()
		}
		if h != nil && !h.Recorded && i < len(h.Spans) {
			out[i] = h.Spans[i].EndS - h.Spans[i].StartS
		}
	}
	return out
}

// describe is what the row of a record says.
func describe(rec *workbook.Record) *report.Measured {
	return &report.Measured{Name: rec.Name, What: rec.Measured, At: rec.At, File: rec.File, Sensor: rec.Sensor, Calibrated: rec.Calibrated, Note: rec.Note,
		AccuracyK: rec.AccuracyK, CorrectionK: rec.CorrectionK}
}

// facts are what its file says.
func facts(m *report.Measured, log *record.Log) {
	m.File, m.SHA256, m.Sheet, m.Column, m.Unit = log.Name, log.SHA256, log.Sheet, log.Head, log.Unit
	m.How = log.How
	m.ResolutionK, m.StepS, m.Missing, m.Doubtful, m.About = log.ResolutionK, log.StepS, log.Missing, len(log.Doubtful), log.About
	for _, e := range log.Echo {
		m.Echo = append(m.Echo, report.EchoRow{Line: int(e.Line), Time: e.Time, Read: e.Read, S: e.S, C: e.C, Taken: e.Taken})
	}
	if !log.Start.IsZero() {
		m.Begins = shown(log, 0)
	}
}

// errorOf is by how much a reading may be off: the accuracy of the instrument and half of its resolution, K.
func errorOf(rec *workbook.Record, log *record.Log) float64 {
	if rec.AccuracyK == nil {
		return log.ResolutionK / 2
	}
	return *rec.AccuracyK + log.ResolutionK/2
}

// measured reads, judges and compares one record. out is the prediction; nil if there is none.
func (r *runner) measured(rec *workbook.Record, p *workbook.Product, out *report.Product, media []*medium) *report.Measured {
	m := describe(rec)
	log, problems := r.logs.read[rec]()
	m.Problems = slices.Clone(problems)
	if log == nil {
		return m
	}
	facts(m, log)
	var predicted *model.History
	if out != nil {
		predicted = out.History
	}
	way, wrong := laidOut(rec, log, p.Steps, lengthsOf(p.Steps, predicted))
	if wrong != nil {
		m.Problems = append(m.Problems, *wrong)
		return m
	}
	nextDay(rec, log, m)
	inexact(rec, m)
	if f := foodAt(rec); f != nil {
		log = log.Within(*f, way.stretches(p.Steps))
		m.Unseen = unseenIn(f)
	}
	re, lines := recording(rec, log, p, way, m)
	if len(re.TimesS) == 0 {
		m.Problems.Add(*fault(rec, "Starts at", "", "leaves no readings within the steps", "correct it"))
		return m
	}
	re.Medium = traceOf(media, re, way)
	findings, err := rules.FindRecorded(r.plan.Limits, rules.Recorded{Product: p.Name, Family: p.Family, Recording: bordered(re, log, way)})
	if err != nil {
		m.Problems.Add(cell.Error{At: rec.At, Msg: "The record cannot be judged: " + err.Error()})
		return m
	}
	m.History, err = re.Line()
	if err != nil {
		m.Problems.Add(cell.Error{At: rec.At, Msg: "The record cannot be judged: " + err.Error()})
		return m
	}
	for i := range findings {
		if f := &findings[i]; f.AtS != nil {
			f.Cells = append(f.Cells, placeIn(log, re, lines, *f.AtS))
		}
	}
	for i := range findings {
		r.unread(&findings[i], p, way, re)
	}
	stoppedEarly(findings, rec, p.Steps[way.first+len(re.Spans):])
	m.Judgement = rules.Conclude(findings, r.plan.Groups)
	if out != nil {
		r.compare(rec, p, out, way, re, media, m)
	}
	return m
}

// tiny is below what any logger's clock tells, s.
const tiny = 1e-6

// stoppedEarly turns limits on stages that a record does not reach into ones that cannot be told, unless its row says when it ended: a logger that
// stopped early shows nothing of what came after.
func stoppedEarly(findings []rules.Finding, rec *workbook.Record, after []model.Step) {
	if slices.ContainsFunc(rec.Starts, func(s workbook.Start) bool { return s.End }) {
		return
	}
	for i := range findings {
		f := &findings[i]
		if f.Verdict != rules.NotApplicable || f.Limit == nil {
			continue
		}
		for _, st := range after {
			if st.Stage != nil && (slices.Contains(f.Limit.Stages, st.Stage) || f.Limit.Then == st.Stage) {
				f.Verdict, f.Why = rules.CannotTell, fmt.Sprintf("The record ends before the step %s, so it cannot be told; where that was meant, write its end in Starts at.", st.Name)
				break
			}
		}
	}
}

// recording is what a log says of a product on the clock of its chain, and the line of the file of each reading.
func recording(rec *workbook.Record, log *record.Log, p *workbook.Product, way *ran, m *report.Measured) (re *model.Recording, lines []int32) {
	re = &model.Recording{Point: model.Point{At: rec.At, Name: rec.Measured, Place: rec.Place.Place}, Surface: rec.Of == workbook.AtSurface, LowC: math.NaN(), HighC: math.NaN(),
		ErrorK: errorOf(rec, log)}
	if re.Surface {
		re.Name = "surface"
	}
	zero, end := way.startS[0], way.startS[len(way.startS)-1]
	for i := 0; i+1 < len(way.startS); i++ {
		re.Spans = append(re.Spans, model.Span{Step: &p.Steps[way.first+i], StartS: way.startS[i] - zero, EndS: way.startS[i+1] - zero})
	}
	re.Before = p.Steps[:way.first:way.first]
	from, to := 0, len(log.TimesS)
	for from < to && log.TimesS[from] < zero-tiny {
		from++
	}
	for to > from && log.TimesS[to-1] > end+tiny {
		to--
	}
	m.Before, m.After, m.Readings = from, len(log.TimesS)-to, to-from
	re.C, lines = log.C[from:to:to], log.Lines[from:to]
	re.TimesS = log.TimesS[from:to:to]
	if zero != 0 {
		re.TimesS = make([]float64, to-from)
		for i := range re.TimesS {
			re.TimesS[i] = max(log.TimesS[from+i]-zero, 0)
		}
	}
	for _, g := range log.Gaps {
		if g >= from && g+1 < to {
			re.Gaps = append(re.Gaps, g-from)
			m.Gaps = append(m.Gaps, [2]float64{re.TimesS[g-from], re.TimesS[g-from+1]})
		}
	}
	re.Doubted = log.Doubted(from, to, from)
	for i := range log.Leaps {
		if l := &log.Leaps[i]; l.Before >= from && l.First < to {
			m.Problems.Add(l.Problem)
		}
	}
	return re, lines
}

// unread turns what a record cannot show, for it lacks steps of the chain, into what cannot be told: at most some time in a range, when
// there was more of it than was read; and a limit on cooling whose clock may have started before the first reading.
func (r *runner) unread(f *rules.Finding, p *workbook.Product, way *ran, re *model.Recording) {
	l, steps := f.Limit, p.Steps
	cannot := func(why string) {
		f.Verdict, f.MarginK, f.MarginS, f.Why = rules.CannotTell, nil, nil, why
	}
	begun := &steps[way.first]
	crossed := l.FromC
	if l.Clock.AtC != nil {
		crossed = l.Clock.AtC
	}
	if first := re.C[0]; (l.Kind == rules.CoolWithin || l.Kind == rules.ByTheEnd) && f.Verdict == rules.NotApplicable && crossed != nil && l.ToC != nil && first <= *crossed+re.ErrorK && first > *l.ToC &&
		(way.first > 0 || math.IsInf(begun.DurationS, 1) || p.StartC > *crossed) && (begun.Stage == nil || !begun.Stage.Heats) {
		cannot(fmt.Sprintf("The record begins in %s, when the place was at %s already: when its clock started was not read, so it cannot be told.", begun.Name, r.degrees(first, false)))
		return
	}
	switch l.Kind {
	case rules.Band, rules.StayAbove, rules.StayBelow, rules.Outside, rules.Falling, rules.Duration:
	default:
		return
	}
	for i := range steps {
		about := len(l.Stages) == 0 || slices.Contains(l.Stages, steps[i].Stage)
		if about && f.Verdict == rules.Met && (i < way.first || i >= way.first+len(way.startS)-1) {
			cannot(strings.TrimSuffix(f.Why, ".") + "; but the record holds nothing of " + steps[i].Name + ", which the limit is about too, so it cannot be told.")
		}
	}
}

// bordered is a recording with the last reading before its steps and the first after them, so that it is judged from the instants at which
// the steps began and ended, and not from the readings nearest to these.
func bordered(re *model.Recording, log *record.Log, way *ran) *model.Recording {
	zero, end := way.startS[0], way.startS[len(way.startS)-1]
	first := sort.Search(len(log.TimesS), func(i int) bool { return log.TimesS[i] >= zero-tiny })
	last := first + len(re.TimesS) - 1
	lead, trail := 0, 0
	if first > 0 && re.TimesS[0] > tiny {
		lead = 1
	}
	if last+1 < len(log.TimesS) && log.TimesS[last] < end-tiny {
		trail = 1
	}
	if lead+trail == 0 {
		return re
	}
	out := *re
	out.TimesS, out.C, out.Gaps, out.Doubted = nil, log.C[first-lead:last+1+trail:last+1+trail], nil, nil
	for _, t := range log.TimesS[first-lead : last+1+trail] {
		out.TimesS = append(out.TimesS, t-zero)
	}
	for _, g := range log.Gaps {
		if g >= first-lead && g < last+trail {
			out.Gaps = append(out.Gaps, g-first+lead)
		}
	}
	out.Doubted = log.Doubted(first-lead, last+trail+1, first)
	return &out
}

// placeIn names the reading that lies nearest to an instant.
func placeIn(log *record.Log, re *model.Recording, lines []int32, t float64) cell.Ref {
	lo, hi := 0, len(re.TimesS)
	for lo < hi {
		if mid := (lo + hi) / 2; re.TimesS[mid] < t {
			lo = mid + 1
		} else {
			hi = mid
		}
	}
	if lo == len(re.TimesS) || lo > 0 && t-re.TimesS[lo-1] < re.TimesS[lo]-t {
		lo--
	}
	return cell.Ref{Sheet: fmt.Sprintf("%s line %d", log.Name, lines[lo])}
}

// mostCompared is at how many readings a record is held against the prediction.
const mostCompared = 2000

// compare holds a record against the prediction with the steps as long as they were.
func (r *runner) compare(rec *workbook.Record, p *workbook.Product, out *report.Product, way *ran, re *model.Recording, media []*medium, m *report.Measured) {
	if rec.Of == workbook.AtOther {
		return
	}
	a := &report.Against{Place: rec.Place.Place, PlaceName: rec.Measured}
	steps, before := asItWas(p.Steps, lengthsOf(p.Steps, out.History), way)
	for _, air := range media {
		if air.step >= len(steps) {
			continue
		}
		st := &steps[air.step]
		if st.DurationS-air.durationS >= way.clockS+air.clockS {
			m.Problems.Add(cell.Error{At: rec.At, Level: cell.Note, Msg: fmt.Sprintf("Beside it %s is calculated for %s, and was recorded for %s by %s: the planned surroundings are taken there",
				st.Name, report.Duration(st.DurationS), report.Duration(air.durationS), air.named()), Hint: "write in both rows when the step began and ended"})
			continue
		}
		air.into(st, 0)
		st.Medium, a.Air = goesOn(st.Medium, st.DurationS), true // its last reading goes on for what the clocks differ by
	}
	h, err := model.Solve(p.Product, steps, model.Options{})
	if err != nil {
		m.Problems.Add(cell.Error{At: rec.At, Level: cell.Note, Msg: "The record was not compared with the prediction, which cannot be made for steps as long as they were: " + oneLine(err)})
		return
	}
	slowest := slowestPlace(h)
	switch rec.Of {
	case workbook.AtSlowest:
		a.Place = slowest
	case workbook.AtSurface:
		var ok bool
		if a.Place, ok = report.SurfacePlace(&p.Product); !ok {
			return
		}
	}
	stride := max(1, (len(re.TimesS)+mostCompared-1)/mostCompared)
	var on, c []float64 // the times on the clock of the prediction, and what was read; NaN: doubtful
	for i := 0; i < len(re.TimesS); i += stride {
		read := re.C[i]
		if _, doubted := slices.BinarySearch(re.Doubted, i); doubted {
			read = math.NaN()
			a.LeftOut++
		}
		a.TimesS, on, c = append(a.TimesS, re.TimesS[i]), append(on, before+re.TimesS[i]), append(c, read)
	}
	if a.Readings = len(on) - a.LeftOut; a.Readings == 0 {
		m.Problems.Add(cell.Error{At: rec.At, Level: cell.Note, Msg: "The record was not compared with the prediction: all of its readings are doubtful"})
		return
	}
	a.C = make([]float64, len(on))
	h.Course(a.Place, on, a.C)
	var slow []float64
	if rec.Of == workbook.AtPoint {
		slow = make([]float64, len(on))
		h.Course(slowest, on, slow)
	}
	differ(a, re.Spans, c, slow)
	r.fit.fitTo(&p.Product, steps, way.first, on, c, rec.AccuracyK, m.ResolutionK, a)
	m.Against = a
}

// asItWas are the steps of a chain up to the end of a record, as long as they were; those before the record are as long as in lengths, s, and before
// in all.
func asItWas(plan []model.Step, lengths []float64, way *ran) (steps []model.Step, before float64) {
	steps = append([]model.Step(nil), plan[:way.first+len(way.startS)-1]...)
	for i := range steps {
		long := lengths[i]
		if i < way.first {
			before += long
		} else {
			long = way.startS[i-way.first+1] - way.startS[i-way.first]
		}
		steps[i].DurationS, steps[i].UntilC = long, nil
	}
	return steps, before
}

// differ fills in how far a record lies from the prediction beside it; c are its readings, and slow the prediction of the slowest place, nil where that
// is of no account.
func differ(a *report.Against, spans []model.Span, c, slow []float64) {
	k := 0
	for i := range c {
		for k+1 < len(spans) && a.TimesS[i] > spans[k].EndS {
			k++
		}
		d := c[i] - a.C[i]
		if math.IsNaN(d) {
			continue
		}
		a.BiasK += d / float64(a.Readings)
		a.RMSK += d * d / float64(a.Readings)
		worse := 1.0 // warmer
		if spans[k].Step.Stage != nil && spans[k].Step.Stage.Heats {
			worse = -1
			if -d > a.ColderK {
				a.ColderK, a.ColderS = -d, a.TimesS[i]
			}
		} else if d > a.WarmerK {
			a.WarmerK, a.WarmerS = d, a.TimesS[i]
		}
		if slow == nil {
			continue
		}
		if beyond := worse * (slow[i] - a.C[i]); beyond > a.SlowestK {
			a.SlowestK, a.SlowestS = beyond, a.TimesS[i]
		}
	}
	a.RMSK = math.Sqrt(a.RMSK)
}

// slowestPlace is the coldest place at the end of the last step that heats, or the warmest at the end of a chain without one.
func slowestPlace(h *model.History) model.Place {
	at, cold := h.EndS(), false
	for _, sp := range h.Spans {
		if sp.Step.Stage != nil && sp.Step.Stage.Heats {
			at, cold = sp.EndS, true
		}
	}
	s := h.SampleAt([]float64{at})
	if cold {
		return s.ColdestAt[0]
	}
	return s.HottestAt[0]
}

// oneLine is an error without its line ends.
func oneLine(err error) string { return strings.Join(strings.Fields(err.Error()), " ") }
