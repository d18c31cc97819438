package rules

import (
	"math"
	"slices"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// tilt moves a limit's temperatures against the food, in K: positive is less favourable.
type tilt struct {
	errK float64 // the error band: every temperature of the limit moves, each to its own unfavourable side
	ownK float64 // the limit's own temperature alone moves: what the margin asks
	rank bool    // only verdict, value and badness are wanted: no words
	edge bool    // a place whose highest temperature is that at which the clock starts, within errK, counts: the unfavourable reading

	bound bool     // of all courses at or below one that is only a bound, the least favourable reading (see bound.go)
	count Counting // instead of the limit's own; NotCounted: its own
}

// outcome is what a limit says of one place.
type outcome struct {
	verdict    Verdict
	bad        float64 // how unfavourable within comparable outcomes: larger is worse
	value      float64 // in the unit of the finding; NaN for none
	margin     float64 // room in s; NaN for none
	at         float64 // deciding time, s; NaN for none
	start, end float64 // clock, s; NaN for none
	word       string  // key of the sentence
	holes      holes   // what its placeholders stand for, besides the usual
	row        *Row    // the deciding row of a table
	notes      []string
	cautions   []string
	again      bool   // a second period breaks it, whatever comes after
	slow       bool   // the place is the slowest one, in the words of the trade
	sparse     string // why the readings cannot show it; "" if they can
}

// neverBad is added to how unfavourable a place is that never came to the level, so that it ranks behind any time taken.
const neverBad = 1e6

// kept tells whether nothing is amiss: the limit is met, or does not apply.
func (o outcome) kept() bool { return o.verdict == Met || o.verdict == NotApplicable }

// none is an outcome without numbers.
func none(v Verdict, word string) outcome {
	nan := math.NaN()
	return outcome{verdict: v, word: word, value: nan, margin: nan, at: nan, start: nan, end: nan}
}

// measure judges the course of one place.
type measure func(p path, t tilt) outcome

// judgement by places: a measure, its margin, and what the finding says.
type question struct {
	measure measure
	room    func(p path) float64 // K; nil: found by moving the limit's own temperature
	unit    string
	need    float64 // required, in unit; NaN for none
	warm    bool    // colder food would be less favourable
	both    bool    // warmer food would be less favourable as well
	faces   bool    // a moment at a surface may decide
	steady  bool    // the error moves a whole course, so that the margin alone does not weigh against it
	needs   bool    // a time that is needed, not one that is allowed
	rises   bool    // a clock that starts at a crossing does so on the way up
	adds    bool    // what was reached before a bound begins counts all the same

	risks  func(t tilt) []risk  // how far a course is from such a leap between two spots (see risk.go)
	traits func(t tilt) []trait // of a course: where one changes the value may leap (see joint.go); nil: it is even everywhere
}

// rank orders verdicts from harmless to worst.
func rank(v Verdict) int { return [...]int{CannotTell: 2, Met: 1, NotMet: 3, NotApplicable: 0}[v] }

// worse tells whether a is less favourable than b.
func worse(a, b outcome) bool {
	if rank(a.verdict) != rank(b.verdict) {
		return rank(a.verdict) > rank(b.verdict)
	}
	return a.bad > b.bad
}

// candidate is a place that may decide.
type candidate struct {
	place   model.Place
	surface bool
	path    path
	nominal outcome
	edge    *onEdge // nil if not at the edge of the places where the clock started
}

// judgePlaces answers a question about every place of the limit and makes the finding of the least favourable one.
func (v *view) judgePlaces(q question) (f Finding) {
	s := v.scope()
	if s.medium == nil && s.one == nil && len(s.spots) == 0 {
		return v.blank(CannotTell, s.why)
	}
	cs := v.candidates(s, q)
	best := worstOfAll(cs)
	edge := cs[best]
	if edge.edge != nil && edge.nominal.verdict != NotApplicable {
		if c, same := v.probed(edge, q); same {
			cs, best = append(cs, c), len(cs)
		}
	}
	o := cs[best].nominal
	f = v.finding(o, q)
	goes := v.goes(&f, &cs[best])
	defer func() { f.Goes = goes }()
	if s.medium == nil {
		place := cs[best].place
		f.Place, f.PlaceName = &place, s.name
		if s.name == "" || s.surfaceOnly {
			f.PlaceName = v.placeName(place)
		}
		if edge.edge != nil && f.Verdict != NotApplicable {
			f.Notes = append(f.Notes, v.edgeNote(edge, q, near(place, edge.place)))
			f.EdgeOf = v.l.startWords()
			f.MarginS = finite(edge.nominal.margin)
		}
	} else {
		f.PlaceName = s.name
	}
	if v.brief && f.Verdict != Met {
		return f
	}
	if f.Verdict != NotApplicable {
		least, at := v.room(s, q, cs)
		if o.verdict == Met {
			least, at = v.leastRoom(s, q, cs, least, at)
		}
		f.MarginK = finite(least)
		if at != nil && f.MarginK != nil && f.Place != nil && !near(*at, *f.Place) {
			if name := v.placeName(*at); name != f.PlaceName {
				f.MarginPlace = name
				f.Notes = append(f.Notes, say("note margin place", holes{"place": name}))
			}
		}
	} else if c, tail, ok := v.mayApply(q, cs); ok {
		f = v.finding(c.nominal, q)
		f.Verdict = CannotTell
		f.PlaceName = s.name
		if s.medium == nil {
			f.Place = &c.place
			if s.name == "" || s.surfaceOnly {
				f.PlaceName = v.placeName(c.place)
			}
		}
		f.Why = v.sentence(&f, c.nominal, tail)
		return f
	} else if why := v.neverWarm(s); why != "" {
		f.Why = why
		return f
	}
	f.Why = v.sentence(&f, o, v.weigh(&f, o, q, s, cs))
	return f
}

// goes tells courses apart by how often they pass the temperatures of the limit, how often they fell to that of its clock before it started, and
// whether the place lies at an edge.
func (v *view) goes(f *Finding, c *candidate) int {
	p := c.path.in(v.reach())
	passes := func(level *float64, until float64) int {
		n := 0
		for i := 0; level != nil && i+1 < len(p.c) && p.t[i+1] < until; i++ {
			if (p.c[i] > *level) != (p.c[i+1] > *level) {
				n++
			}
		}
		return min(n, 15)
	}
	all := math.Inf(1)
	goes := passes(v.l.FromC, all)<<1 | passes(v.l.ToC, all)<<5 | passes(v.l.Clock.AtC, all)<<9
	if f.ClockStartS != nil && v.l.clocked() {
		level := v.l.crossedC()
		goes |= passes(&level, *f.ClockStartS) << 13
	}
	if c.edge != nil {
		goes |= 1
	}
	return goes
}

// worstOfAll is the index of the least favourable candidate.
func worstOfAll(cs []candidate) int {
	best := 0
	for i := range cs {
		if worse(cs[i].nominal, cs[best].nominal) {
			best = i
		}
	}
	return best
}

// unfavourable is the tilt of the unfavourable end of the error band.
func (v *view) unfavourable() tilt { return tilt{errK: v.errK, edge: true} }

// ends are the tilts that decide: none, and those of the error.
func (v *view) ends() []tilt {
	switch {
	case v.errK == 0:
		return []tilt{{}}
	case v.single():
		return []tilt{{}, v.unfavourable(), {errK: -v.errK}}
	}
	return []tilt{{}, v.unfavourable()}
}

// mayApply looks at a limit that applies to no place as calculated, but to one at the unfavourable end: a place whose highest
// temperature is that at which the clock starts. It gives what is not met there, and why that cannot be told.
func (v *view) mayApply(q question, cs []candidate) (worst candidate, tail string, ok bool) {
	if !v.l.clocked() {
		return worst, "", false
	}
	worst = cs[0]
	worst.nominal = q.measure(worst.path, v.unfavourable())
	for _, c := range cs[1:] {
		if o := q.measure(c.path, v.unfavourable()); worse(o, worst.nominal) {
			worst, worst.nominal = c, o
		}
	}
	if verdict := worst.nominal.verdict; verdict == Met || verdict == NotApplicable {
		return worst, "", false
	}
	_, top := worst.path.mostOf(v.spans(), 1)
	h := holes{"top": v.l.degrees(top, 1), "start": v.l.startWords(), "error": v.l.differenceUp(v.errK)}
	if math.Abs(top-v.l.crossedC()) <= sameK {
		return worst, say("clock at the edge", h), true
	}
	return worst, say(v.read("clock within error"), h), true
}

// read is the key of a sentence about an error, in the words of a recording where it is one.
func (v *view) read(key string) string {
	if v.c.whole != nil {
		return key + " read"
	}
	return key
}

// spans are the stretches of the windows.
func (v *view) spans() []interval {
	var ivs []interval
	for _, w := range v.windows() {
		ivs = append(ivs, w.interval)
	}
	return ivs
}

// neverWarm says how warm the places were for which the clock never started; "" where the clock is no crossing.
func (v *view) neverWarm(s scope) string {
	ivs := v.spans()
	if !v.l.clocked() || len(ivs) == 0 {
		return ""
	}
	top := math.Inf(-1)
	take := func(p path) {
		_, c := p.mostOf(ivs, 1)
		top = math.Max(top, c)
	}
	switch {
	case s.medium != nil:
		take(*s.medium)
	case s.one != nil:
		take(v.path(*s.one))
	}
	for _, i := range s.spots {
		take(path{t: v.c.times, c: v.c.rows[i]})
	}
	if math.IsInf(top, 0) || math.IsNaN(top) {
		return ""
	}
	if top > v.l.crossedC()+sameK {
		return say("cool never fell", holes{"start": v.l.startWords(), "top": v.l.degrees(top, 1)})
	}
	return say("never above", holes{"start": v.l.startWords(), "top": v.l.degrees(top, 1)})
}

// candidates are the places whose exact courses decide: the least favourable spots of the scan and what lies beside them.
func (v *view) candidates(s scope, q question) []candidate {
	switch {
	case s.medium != nil:
		return []candidate{{path: *s.medium, nominal: q.measure(*s.medium, tilt{})}}
	case s.one != nil:
		p := v.path(*s.one)
		return []candidate{{place: *s.one, path: p, nominal: q.measure(p, tilt{})}}
	}
	picks := v.pick(s.spots, q, tilt{})
	if v.errK > 0.05 || v.errK > 0 && v.several() || v.patchy && v.l.clocked() {
		picks = append(picks, v.pick(s.spots, q, v.unfavourable())...)
	}
	if v.errK > 0 && v.single() { // a warmer place may come back for a second period
		picks = append(picks, v.pick(s.spots, q, tilt{errK: -v.errK})...)
	}
	if q.faces && !s.surfaceOnly { // a film that weakens lets a surface rise for a moment, which the scan may step over
		picks = append(picks, v.faces(s.spots, q)...)
	}
	var cs []candidate
	put := func(p model.Place, surface bool) {
		path := v.path(p)
		cs = append(cs, candidate{place: p, surface: surface, path: path, nominal: q.measure(path, tilt{})})
	}
	add := func(p model.Place, surface bool) {
		if !slices.ContainsFunc(cs, func(c candidate) bool { return alike(c.place, p) }) {
			put(p, surface)
		}
	}
	for n, i := range picks {
		add(v.c.spots[i].Place, v.c.spots[i].Surface)
		if v.h.Recorded || n > 0 {
			continue
		}
		times := v.c.lightTimes(i, v.reach())
		out := make([]float64, len(times))
		offset := math.NaN() // so that the search sees the slope among places that never come to the level
		p, _ := v.h.Least(v.c.spots[i], s.surfaceOnly, func(p model.Place) float64 {
			v.h.Course(p, times, out)
			o := q.measure(path{t: times, c: out}, tilt{rank: true})
			if o.verdict == NotApplicable {
				return 1e9
			}
			if math.IsNaN(offset) {
				if offset = 0; o.bad > neverBad/2 {
					offset = neverBad
				}
			}
			return offset - o.bad
		})
		add(p, v.c.spots[i].Surface && s.surfaceOnly)
	}
	for _, e := range v.edges(s, q, cs) {
		n := len(cs)
		if add(v.h.PlaceAt(e.at), s.surfaceOnly); len(cs) > n {
			cs[n].edge = &e
		}
	}
	for _, x := range v.jointsAround(s, q, cs) { // add would drop one just beside another place, though its verdict may differ
		put(v.h.PlaceAt(x), s.surfaceOnly)
	}
	for _, t := range v.ends() {
		for _, x := range v.risky(s, q, t) {
			put(v.h.PlaceAt(x), false)
		}
	}
	for _, x := range v.closer(s, q, cs) {
		put(v.h.PlaceAt(x), false)
	}
	for _, x := range v.settled(s, q, cs) {
		put(v.h.PlaceAt(x), s.surfaceOnly)
	}
	return cs
}

// mostFaces is how many spots of the surface are looked at closely, each for itself.
const mostFaces = 8

// faces are the spots of the surface, the worst of them where they are many.
func (v *view) faces(spots []int, q question) []int {
	var on []int
	for _, i := range spots {
		if v.c.spots[i].Surface {
			on = append(on, i)
		}
	}
	if len(on) > mostFaces {
		return v.pick(on, q, tilt{})
	}
	return on
}

// clocked tells whether the limit's clock starts at a crossing, so that it may not apply to some places.
func (l *Limit) clocked() bool { return l.Clock.Crossing || l.Clock.AtC != nil }

// pick ranks spots by their scanned courses and returns the worst, and the second worst where its verdict differs.
func (v *view) pick(spots []int, q question, t tilt) []int {
	t.rank = true
	// a clock that starts at a peak only just high enough turns on hundredths of a kelvin
	if v.c.roughly(); v.c.rough != nil && len(spots) >= manySpots && !v.l.clocked() {
		spots = v.shortlist(spots, q, t)
	}
	best, second := -1, -1
	var ob, os outcome
	for _, i := range spots {
		o := q.measure(path{t: v.c.times, c: v.c.rows[i]}, t)
		v.patchy = v.patchy || o.verdict == NotApplicable
		switch {
		case best < 0 || worse(o, ob):
			second, os = best, ob
			best, ob = i, o
		case second < 0 || worse(o, os):
			second, os = i, o
		}
	}
	if second >= 0 && (v.h.Recorded || os.verdict != ob.verdict) {
		return []int{best, second}
	}
	return []int{best}
}

// listed is how many spots of the rough ranking are looked at closely.
const listed = 12

// shortlist ranks many spots by their rough courses.
func (v *view) shortlist(spots []int, q question, t tilt) []int {
	type ranked struct {
		spot int
		o    outcome
	}
	var top []ranked
	for _, i := range spots {
		o := q.measure(path{t: v.c.roughT, c: v.c.rough[i]}, t)
		v.patchy = v.patchy || o.verdict == NotApplicable
		at := len(top)
		for at > 0 && worse(o, top[at-1].o) {
			at--
		}
		if at == listed {
			continue
		}
		if len(top) < listed {
			top = append(top, ranked{})
		}
		copy(top[at+1:], top[at:])
		top[at] = ranked{i, o}
	}
	var out []int
	for _, r := range top {
		out = append(out, r.spot)
	}
	return out
}

// room is the smallest margin in K over all places, and the place that has it.
func (v *view) room(s scope, q question, cs []candidate) (float64, *model.Place) {
	margin := func(p path, least float64) float64 {
		if q.room != nil {
			return q.room(p)
		}
		return roomBy(q.measure, path{t: p.t, c: p.c}, least)
	}
	least, any := math.Inf(1), false
	take := func(r float64) {
		if !math.IsNaN(r) {
			any = true
			least = math.Min(least, r)
		}
	}
	// how much room a candidate has, where that is less than most: +Inf elsewhere
	below := func(i int, most float64) float64 {
		if p := cs[i].path; q.room == nil && !math.IsInf(most, 1) && math.IsInf(roomBy(q.measure, path{t: p.t, c: p.c}, most), 1) {
			return math.Inf(1)
		}
		return margin(cs[i].path, math.Inf(1))
	}
	var where *model.Place
	for i := range cs {
		before := least
		if take(below(i, least)); least < before-0.002 {
			where = &cs[i].place
		}
	}
	at := -1
	rough := v.c.rough != nil && len(s.spots) >= manySpots
	for _, i := range s.spots {
		if rough && !v.maybe(q, i, least) {
			continue
		}
		before := least
		if take(margin(path{t: v.c.times, c: v.c.rows[i]}, least)); least < before-0.002 {
			at = i
		}
	}
	if at >= 0 && !v.h.Recorded { // a spot that is not among the candidates decides: its exact course
		if r := margin(v.path(v.c.spots[at].Place), math.Inf(1)); !math.IsNaN(r) {
			least, where = r, &v.c.spots[at].Place
			for i := range cs {
				if r := below(i, least); r < least {
					least, where = r, &cs[i].place
				}
			}
		}
	}
	if !any {
		return math.NaN(), nil
	}
	return least, where
}

// maybe tells by its rough course whether a spot may have a margin below least.
func (v *view) maybe(q question, spot int, least float64) bool {
	const slackK = 0.3 // how far a rough course may be off
	p := path{t: v.c.roughT, c: v.c.rough[spot]}
	if q.room != nil {
		r := q.room(p)
		return !(r > least+slackK)
	}
	if math.IsInf(least, 1) {
		return true
	}
	return !q.measure(p, tilt{ownK: least + slackK, rank: true}).kept()
}

// roomBy finds by bisection how far the limit's own temperature may move before a place no longer meets it, K. It answers
// +Inf where no change within reach matters or where the place meets it at least (then it cannot be the smallest).
func roomBy(m measure, p path, least float64) float64 {
	const reach = 300.0
	met := func(k float64) bool { return m(p, tilt{ownK: k, rank: true}).kept() }
	hi := math.Min(least, reach)
	if met(hi) {
		return math.Inf(1)
	}
	lo := -reach
	if !met(lo) {
		return math.NaN()
	}
	// from 0 outwards, so that few steps find a small margin
	if hi > 0 && met(0) {
		lo = 0
	} else if hi > 0 {
		hi = 0
	}
	for hi-lo > 5e-4 {
		if mid := (lo + hi) / 2; met(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo
}

// worstAt is the worst outcome over the candidates for a given tilt.
func worstAt(q question, cs []candidate, t tilt) outcome {
	t.rank = true
	o := q.measure(cs[0].path, t)
	for _, c := range cs[1:] {
		if p := q.measure(c.path, t); worse(p, o) {
			o = p
		}
	}
	return o
}

// weigh applies the error band and the bound of the history to the verdict, and says so in the tail of the sentence.
func (v *view) weigh(f *Finding, o outcome, q question, s scope, cs []candidate) (tail string) {
	if v.errK > 0 || v.l.clocked() {
		word := ""
		if o.verdict == Met && v.unsure(f, q, cs) {
			word = "within error met"
			if v.errK == 0 {
				f.Verdict = CannotTell
				return say("clock elsewhere", holes{"start": v.l.startWords()})
			}
		} else if o.verdict == NotMet && v.errK > 0 && (worstAt(q, cs, tilt{errK: -v.errK}).verdict == Met ||
			v.single() && worstAt(q, cs, tilt{errK: v.errK}).verdict == Met) {
			word = "within error missed"
		}
		if word != "" {
			f.Verdict = CannotTell
			h := holes{"error": v.l.differenceUp(v.errK)}
			if f.MarginK == nil || math.Abs(*f.MarginK) > v.errK*1.5 || math.Abs(*f.MarginK) < 1e-6 {
				word = "within error"
			} else {
				h["by"] = v.l.differenceUp(math.Abs(*f.MarginK))
			}
			return say(v.read(word), h) + v.turns(f)
		}
	}
	if !v.proved(f.Verdict, q, s, cs) {
		f.Verdict = CannotTell
		word := "bound"
		switch {
		case v.single():
			word = "bound once"
		case v.l.clocked():
			word = "bound clock"
		}
		return say(word, holes{"bound": v.h.Bound, "at": clockTime(v.h.BoundFromS)})
	}
	if o.sparse != "" && f.Verdict == Met {
		f.Verdict = CannotTell
		return o.sparse
	}
	return ""
}

// unsure tells whether a limit that is met as calculated may not be met within the error: at the unfavourable end, or where
// the room left is smaller than the error; for a single period at either end, since there a second one may begin or a gap open.
func (v *view) unsure(f *Finding, q question, cs []candidate) bool {
	if worstAt(q, cs, v.unfavourable()).verdict != Met {
		return true
	}
	if v.errK == 0 {
		return false
	}
	return !q.steady && f.MarginK != nil && *f.MarginK < v.errK-sameK || v.single() && worstAt(q, cs, tilt{errK: -v.errK}).verdict != Met
}

// single tells whether one period only is allowed, so that a change of all temperatures one way may mend or break the limit.
func (v *view) single() bool { return v.l.Counting == Once }

// several tells whether the error moves more than the limit's own temperature, so that the margin does not find every place
// where it decides.
func (v *view) several() bool {
	l := v.l
	return v.single() || l.clocked() || l.FromC != nil && (l.ToC != nil || l.ReferenceC != nil)
}

// turns says what to do where a step that ends by Until ends at the very limit; "" elsewhere.
func (v *view) turns(f *Finding) string {
	for _, sp := range v.h.Spans {
		if sp.Step != nil && sp.Step.UntilC != nil && sp.Reached != nil && *sp.Reached && f.AtS != nil && math.Abs(sp.EndS-*f.AtS) < 1 {
			return say("within error until", holes{"step": sp.Step.Name})
		}
	}
	return ""
}

// blank is a finding without numbers.
func (v *view) blank(verdict Verdict, why string) Finding {
	return Finding{Limit: v.l, Level: v.level(), Verdict: verdict, Unit: v.l.Kind.Unit, Why: why, Cells: v.cells(math.NaN())}
}

// level is the word of the column Level.
func (v *view) level() string {
	if v.l.Advice {
		return "advice"
	}
	return "must"
}

// cells are the limit's cell and the cell of the step that holds an instant.
func (v *view) cells(t float64) []cell.Ref {
	var refs []cell.Ref
	if !v.l.At.IsZero() {
		refs = append(refs, v.l.At)
	}
	if !math.IsNaN(t) {
		if r, ok := v.stepAt(t); ok {
			refs = append(refs, r)
		}
	}
	return refs
}

// finding turns an outcome into a finding, without place, margin in K and sentence.
func (v *view) finding(o outcome, q question) Finding {
	f := v.blank(o.verdict, "")
	f.Unit = q.unit
	f.Value, f.Required, f.MarginS = finite(o.value), finite(q.need), finite(o.margin)
	f.AtS, f.ClockStartS, f.ClockEndS = finite(o.at), finite(o.start), finite(o.end)
	f.Notes, f.Cautions = append(f.Notes, o.notes...), append(f.Cautions, o.cautions...)
	if o.row != nil && !o.row.At.IsZero() {
		f.Cells = append(f.Cells, o.row.At)
	}
	f.Cells = append(f.Cells, v.cells(o.at)[len(v.cells(math.NaN())):]...)
	return f
}

// finite is a number of a finding: nil for NaN and infinities, which a document cannot hold.
func finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}

// enough compares a time held with a needed one: at least, unless the limit says more than. Both in s. Times closer than sameS are equal, but for needs
// that are themselves no longer than seconds, as those of a lethality at a high reference temperature may be.
func (l *Limit) enough(held, need float64) bool {
	same := sameS * min(1, need)
	if l.CompareTime == MoreThan {
		return held > need+same
	}
	return held >= need-same
}

// within compares a time taken with an allowed one: at most, unless the limit says less than. Both in s.
func (l *Limit) within(taken, allowed float64) bool {
	if l.CompareTime == LessThan {
		return taken < allowed-sameS
	}
	return taken <= allowed+sameS
}

// warmSide is the region at or above a temperature by the limit's operator.
func (l *Limit) warmSide(c float64) region {
	if l.Compare == MoreThan {
		return above(c)
	}
	return atOrAbove(c)
}

// coldSide is the region at or below a temperature by the limit's operator.
func (l *Limit) coldSide(c float64) region {
	if l.Compare == LessThan {
		return below(c)
	}
	return atOrBelow(c)
}
