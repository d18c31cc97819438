package rules

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"slowpoint/model"
)

// Recorded is a recording to be judged, of a product by name and family.
type Recorded struct {
	Product, Family string
	Recording       *model.Recording
}

// FindRecorded judges each limit that applies, on the straight lines between readings and on every course that the readings allow: where
// these differ, nobody can tell.
// It fails where the recording is no record (NewRecord).
func FindRecorded(limits []Limit, r Recorded) ([]Finding, error) {
	if err := check(r.Recording); err != nil {
		return nil, err
	}
	d := &reading{r: r.Recording, buf: &path{}}
	d.food = d.track(r.Recording)
	var out []Finding
	for i := range limits {
		l := &limits[i]
		if !l.Applies.to(Subject{Product: r.Product, Family: r.Family}) {
			continue
		}
		f := d.find(l)
		f.Limit = l
		if f.MarginK != nil && (f.Verdict != NotMet || *f.MarginK < 0) { // all readings may be off by so much to the unfavourable side
			k := *f.MarginK - r.Recording.ErrorK
			f.MarginK = &k
		}
		out = append(out, f)
	}
	return out, nil
}

// reading is a recording as it is judged.
type reading struct {
	r    *model.Recording
	food *track
	air  *track // nil until asked for
	buf  *path  // scratch for the courses, one at a time
}

// track is the tube of one recorded place, with its straight line.
type track struct {
	r    *model.Recording
	u    *tube
	line path
	air  bool
}

// track lays out a recording, without some of its readings.
func (d *reading) track(r *model.Recording, without ...int) *track {
	u := newTube(r, without)
	return &track{r: r, u: u, line: path{t: u.t, c: u.c}}
}

// medium is the track of the surroundings.
func (d *reading) medium() *track {
	if d.air == nil {
		m := d.r.Medium
		// air may have been at anything in a gap
		r := &model.Recording{Point: m.Point, Spans: d.r.Spans, TimesS: m.TimesS, C: m.C, ErrorK: d.r.ErrorK, LowC: anyLowC, HighC: anyHighC}
		usual := model.UsualStep(m.TimesS)
		for i := 0; i+1 < len(m.TimesS); i++ {
			if m.TimesS[i+1]-m.TimesS[i] > model.MostApartS(usual)+sameS {
				r.Gaps = append(r.Gaps, i)
			}
		}
		d.air = d.track(r)
		d.air.air = true
	}
	return d.air
}

// name is what the measured place is called in sentences.
func (t *track) name() string {
	switch n := strings.TrimSpace(t.r.Name); {
	case t.air:
		return "medium"
	case t.r.Surface:
		return "surface"
	case n == "" || same(n, "other place") || same(n, "medium") || same(n, "every point") || same(n, "surface"):
		return "place of the probe"
	default:
		return n
	}
}

// slowest tells whether the measured place is the one that is slowest to heat and to cool, as whoever put the probe there says.
func (t *track) slowest() bool {
	return !t.r.Surface && (same(t.r.Name, "slowest point") || same(t.r.Name, "centre"))
}

// judge judges a limit on one course of a track.
func (t *track) judge(l *Limit, p path) Finding { return judgeOne(l, t.courses(p)) }

// courses is one course of a track as a history.
func (t *track) courses(p path) *courses {
	unknown := func(float64) float64 { return math.NaN() }
	pt := t.r.Point
	pt.Name = t.name()
	h := &model.History{Recorded: true, Spans: t.u.spans, Points: []model.Point{pt}, ErrorK: t.r.ErrorK, MediumC: unknown, HumidityPc: unknown}
	c := &courses{h: h, times: p.t, rows: [][]float64{p.c}, spots: []model.Spot{{Place: pt.Place, Surface: t.r.Surface}}, end: h.EndS(),
		exact: map[model.Place]*known{}, light: map[int][]float64{}, whole: &p}
	if len(h.Spans) == 0 {
		c.end = p.t[len(p.t)-1]
	}
	if t.air {
		c.air, c.airK = &p, t.r.ErrorK
	}
	return c
}

// find judges one limit.
func (d *reading) find(l *Limit) Finding {
	t := d.food
	v := newView(l, t.courses(t.line))
	if s := v.lacks(); s != nil && len(l.Faults()) == 0 && l.missing() == "" {
		h := holes{"stage": s.Name}
		if l.Applies.All {
			return v.blank(NotApplicable, say("stage unread", h))
		}
		return v.blank(CannotTell, say("stage unread own", h))
	}
	where := strings.TrimSpace(l.Where.Name)
	h := holes{"place": t.name(), "where": where}
	every := where == "" || same(where, "every point")
	switch {
	case l.Kind == Delay || l.Kind == Duration || l.Kind == Stated:
		c := t.courses(t.line)
		c.h.Spans = t.r.Spans // as stated
		return judgeOne(l, c)
	case l.Kind == Humidity:
		return v.blank(CannotTell, say("no humidity read", h))
	case same(where, "medium") && (d.r.Medium == nil || len(d.r.Medium.TimesS) == 0):
		return v.blank(CannotTell, say("no medium read", h))
	case same(where, "medium"):
		t = d.medium()
	case every, same(where, t.name()), same(where, t.r.Name), same(where, "centre") && t.slowest():
	default:
		return v.blank(CannotTell, say("not measured", h))
	}
	own := *l
	own.Where = Where{Name: t.name()}
	f := d.bracketed(&own, t)
	if (every || same(where, "centre") && !same(t.r.Name, "centre")) && f.Verdict != NotApplicable {
		f.Notes = append(f.Notes, say("note one place", h))
		if f.Verdict == Met && !t.slowest() {
			f.untold(say("tube place", h))
		}
	}
	return f
}

// untold turns a finding into one that cannot be told, for a reason that continues its sentence.
func (f *Finding) untold(tail string) {
	f.Verdict = CannotTell
	f.Why = strings.TrimSuffix(strings.TrimSuffix(f.Why, "."), ", so it cannot be told") + tail
}

// least are the least margins of several courses.
type least struct{ s, k *float64 }

// take takes the margins of one more course.
func (m *least) take(f *Finding) {
	lesser := func(a **float64, b *float64) {
		if b != nil && (*a == nil || *b < **a) {
			*a = b
		}
	}
	lesser(&m.s, f.MarginS)
	lesser(&m.k, f.MarginK)
}

// all and none of the gaps are open.
func allGaps(int) bool { return true }
func noGap(int) bool   { return false }

// bracketed judges a limit on the straight line and on the courses that bracket all others.
func (d *reading) bracketed(l *Limit, t *track) Finding {
	f := t.judge(l, t.line)
	if f.Verdict == CannotTell {
		return f
	}
	m := least{f.MarginS, f.MarginK}
	agree := d.agree(l, t, f.Verdict, allGaps, &m)
	tail := ""
	if len(t.r.Doubted) > 0 {
		tail = d.doubt(l, t, &f, agree)
	}
	if tail == "" && !agree {
		tail = d.blame(l, t, &f)
	}
	if tail == "" {
		if f.Verdict == Met {
			f.MarginS, f.MarginK = m.s, m.k
		}
		reach := newView(l, t.courses(t.line)).reach()
		for _, g := range t.u.gaps {
			if f.Verdict != NotApplicable && g.a < reach.b && g.b > reach.a {
				f.Notes = append(f.Notes, say("note gap", holes{"from": clockTime(g.a), "until": clockTime(g.b)}))
				break
			}
		}
		return f
	}
	f.untold(tail)
	if slices.ContainsFunc(t.u.gaps, gap.bare) { // what it lacks there has no number
		m.k = f.MarginK
	}
	// no room is proved
	for _, x := range []struct{ to, from **float64 }{{&f.MarginS, &m.s}, {&f.MarginK, &m.k}} {
		if *x.to = *x.from; *x.to != nil && **x.to > 0 {
			*x.to = nil
		}
	}
	return f
}

// agree tells whether the courses that bracket all others have a verdict. With m it takes the margins of all of them.
func (d *reading) agree(l *Limit, t *track, verdict Verdict, open func(gap int) bool, m *least) bool {
	v := newView(l, t.courses(t.line))
	ws, ok := v.ways(t.u, open)
	if !ok {
		return false
	}
	moves := l.Kind == ByTheEnd && l.clocked() && v.errK > 0
	agree := true
	var clocks []region // by window: between which instants its clock starts, s
	if l.Kind == ByTheEnd && l.clocked() {
		clocks = slices.Repeat([]region{{lo: math.Inf(1), hi: math.Inf(-1)}}, len(v.windows()))
	}
	for _, w := range ws {
		p := t.u.course(d.buf, w, open)
		g := t.judge(l, p)
		if m != nil {
			m.take(&g)
		}
		if moves && !t.steady(l, p, g.Verdict) {
			agree = false
		}
		for i := range clocks {
			from, ok, _ := v.clockStart(p, v.windows()[i], tilt{})
			if !ok {
				from = -1 // never
			}
			clocks[i].lo, clocks[i].hi = math.Min(clocks[i].lo, from), math.Max(clocks[i].hi, from)
		}
		if g.Verdict != verdict {
			if agree = false; m == nil {
				return false
			}
		}
	}
	for _, c := range clocks {
		if c.lo < 0 && c.hi >= 0 || c.hi-c.lo > 2*t.u.usualS+sameS { // it may have started at any instant between
			return false
		}
	}
	if v.single() && verdict != NotApplicable && v.maySplit(t.u, open) {
		return false
	}
	return agree
}

// steady tells whether a verdict stands with all readings off by the error either way: by the end, a clock that starts later may be
// less favourable as well as one that starts earlier.
func (t *track) steady(l *Limit, p path, verdict Verdict) bool {
	exact := t.courses(p)
	exact.h.ErrorK, exact.airK = 0, 0
	shift := func(k float64) {
		for i := range p.c {
			p.c[i] += k
		}
	}
	shift(-t.r.ErrorK)
	steady := judgeOne(l, exact).Verdict == verdict
	shift(2 * t.r.ErrorK)
	steady = steady && judgeOne(l, exact).Verdict == verdict
	shift(-t.r.ErrorK)
	return steady
}

// maySplit tells whether a gap leaves open how many periods there were: the place may have gone in and out of them.
func (v *view) maySplit(u *tube, open func(gap int) bool) bool {
	for _, x := range u.ranges {
		if x.gap < 0 || !open(x.gap) {
			continue
		}
		for _, iv := range v.stages {
			if u.t[x.i] < iv.b && u.t[x.i+1] > iv.a && v.straddles(x.lo, x.hi) {
				return true
			}
		}
	}
	return false
}

// straddles tells whether a range holds an edge of what the limit counts, with the error on either side.
func (v *view) straddles(lo, hi float64) bool {
	var edges []float64
	for _, x := range []*float64{v.l.FromC, v.l.ToC} {
		if x != nil {
			edges = append(edges, *x)
		}
	}
	if v.l.Table != nil {
		for _, row := range v.l.Table.Rows {
			edges = append(edges, row.C)
		}
	}
	for _, x := range edges {
		if x >= lo-v.errK-sameK && x <= hi+v.errK+sameK {
			return true
		}
	}
	return false
}

// mostBlamed is how many gaps or readings are tried one by one.
const mostBlamed = 12

// blame says which part of a record leaves a verdict open.
func (d *reading) blame(l *Limit, t *track, f *Finding) string {
	if !d.agree(l, t, f.Verdict, noGap, nil) {
		return d.sparse(l, t, f)
	}
	u := t.u
	for i := range u.gaps[:min(len(u.gaps), mostBlamed)] {
		if d.agree(l, t, f.Verdict, func(g int) bool { return g == i }, nil) {
			continue
		}
		g := u.gaps[i]
		key := map[int]string{-1: "tube gap before", 0: "tube gap", 1: "tube gap after"}[g.edge]
		if g.edge == 0 && g.bare() {
			key = "tube gap bare"
		} else if g.edge == 0 && g.hi >= anyHighC {
			key = "tube gap no top"
		} else if g.edge == 0 && g.lo <= anyLowC {
			key = "tube gap no bottom"
		}
		return say(key, holes{"from": clockTime(g.a), "until": clockTime(g.b), "long": lasting(g.b-g.a, 0), "low": l.degrees(g.lo, -1), "high": l.degrees(g.hi, 1)})
	}
	long := 0.0
	for _, g := range u.gaps {
		long += g.b - g.a
	}
	g := u.gaps[0]
	return say("tube gaps", holes{"count": strconv.Itoa(len(u.gaps)), "from": clockTime(g.a), "until": clockTime(g.b), "long": lasting(long, 0)})
}

// sparse says that the readings are too far apart for a limit.
func (d *reading) sparse(l *Limit, t *track, f *Finding) string {
	at := f.AtS
	if at == nil {
		at = f.ClockStartS
	}
	n, i := len(t.u.t), 0
	if at != nil {
		for i+2 < n && t.u.t[i+1] < *at {
			i++
		}
	}
	long := math.Max(t.u.t[min(i+1, n-1)]-t.u.t[i], t.u.usualS)
	if l.TimeS != nil && *l.TimeS > 0 && *l.TimeS < long-sameS {
		f.Cautions = append(f.Cautions, "sparse record")
		return say("sparse", holes{"gap": lasting(long, 1), "time": l.figure("Time", lasting(*l.TimeS, 1))})
	}
	return say("tube readings", holes{"long": lasting(long, 0), "from": clockTime(t.u.t[i])})
}

// doubt says which doubted reading turns a limit; "" if none does.
func (d *reading) doubt(l *Limit, t *track, f *Finding, agree bool) string {
	told := func(without ...int) Verdict {
		x := d.track(t.r, without...)
		if len(x.u.t) == 0 {
			return CannotTell
		}
		g := x.judge(l, x.line)
		if g.Verdict != CannotTell && !d.agree(l, x, g.Verdict, allGaps, nil) {
			return CannotTell
		}
		return g.Verdict
	}
	with := f.Verdict
	if !agree {
		with = CannotTell
	}
	all := t.r.Doubted
	if told(all...) == with {
		return ""
	}
	h := holes{"value": l.degrees(t.r.C[all[0]], 0), "when": clockTime(t.r.TimesS[all[0]]), "count": strconv.Itoa(len(all))}
	if len(all) == 1 {
		return say("tube doubted", h)
	}
	for _, i := range all[:min(len(all), mostBlamed)] {
		if told(i) != with {
			h["value"], h["when"] = l.degrees(t.r.C[i], 0), clockTime(t.r.TimesS[i])
			return say("tube doubted", h)
		}
	}
	return say("tube doubted all", h)
}
