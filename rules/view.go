package rules

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// courses is what the limits of one history share: the scan with the ends of every step among its instants, and exact paths.
type courses struct {
	h     *model.History
	times []float64
	rows  [][]float64 // rows[spot][time], °C
	spots []model.Spot
	end   float64
	exact map[model.Place]*known
	light map[int][]float64 // of a spot: the instants that a local search looks at
	pairs []neighbour       // nil until asked for
	marks [3][]float64      // the spots' coordinates on each axis, rising, m; filled with pairs
	air   *path
	damp  *path
	whole *path   // the one course that there is, of a recording; nil elsewhere
	airK  float64 // how far the recorded medium may be off, K

	boils     *courses // the same, no hotter than food gets that holds water; nil: it is not
	boilAsked bool

	roughT []float64 // for ranking many spots: fewer instants, and the spots' temperatures there
	rough  [][]float64
}

// manySpots is from how many spots on a history is ranked by rough courses first.
const manySpots = 24

// roughly fills the rough courses: the instants that keep a few spots far apart within 0.3 K of their scanned courses.
func (c *courses) roughly() {
	if c.roughT != nil || c.h.Recorded || len(c.spots) < manySpots {
		return
	}
	keep := make([]bool, len(c.times))
	var few [][]float64
	for n := 0; n < 5; n++ {
		few = append(few, c.rows[n*(len(c.rows)-1)/4])
	}
	for _, i := range thin(c.times, few, 0.3) {
		keep[i] = true
	}
	for _, t := range c.bounds() {
		keep[sort.SearchFloat64s(c.times, t)] = true
	}
	var at []int
	for i, k := range keep {
		if k {
			at = append(at, i)
			c.roughT = append(c.roughT, c.times[i])
		}
	}
	all := make([]float64, len(at)*len(c.rows))
	for s, row := range c.rows {
		part := all[s*len(at) : (s+1)*len(at)]
		for k, i := range at {
			part[k] = row[i]
		}
		c.rough = append(c.rough, part)
	}
}

// ranking are the courses by which so many spots are ranked, rough ones of many.
func (c *courses) ranking(spots int) (times []float64, rows [][]float64) {
	if c.roughly(); c.rough != nil && spots >= manySpots {
		return c.roughT, c.rough
	}
	return c.times, c.rows
}

// bounds are the instants that every path must have: the ends of the steps, and where a bound begins.
func (c *courses) bounds() []float64 {
	bounds := []float64{0, c.end}
	for _, sp := range c.h.Spans {
		bounds = append(bounds, sp.StartS, sp.EndS)
	}
	if c.h.Bound != "" {
		bounds = append(bounds, c.h.BoundFromS)
	}
	return bounds
}

// newCourses prepares a history for judging.
func newCourses(h *model.History) *courses {
	scan := h.Scan()
	c := &courses{h: h, end: h.EndS(), exact: map[model.Place]*known{}, light: map[int][]float64{}}
	if scan == nil || len(scan.TimesS) == 0 {
		return c
	}
	c.times, c.rows, c.spots = scan.TimesS, scan.C, scan.Spots
	if len(h.Spans) == 0 {
		c.end = c.times[len(c.times)-1]
	}
	c.insert(c.bounds())
	return c
}

// insert makes the given times instants of the scan, by straight lines.
func (c *courses) insert(times []float64) {
	missing := false
	for _, t := range times {
		i := sort.SearchFloat64s(c.times, t)
		missing = missing || i == len(c.times) || c.times[i] != t
	}
	if !missing {
		return
	}
	all := rising(append(append([]float64(nil), c.times...), times...))
	n := len(all)
	rows := make([][]float64, len(c.rows))
	for s := range c.rows {
		p := path{t: c.times, c: c.rows[s]}
		rows[s] = make([]float64, n)
		for i, t := range all {
			rows[s][i] = p.value(t)
		}
	}
	c.times, c.rows = all, rows
}

// known is what has been worked out of the exact course of a place: by step, and where it was asked between.
type known struct {
	scan   []float64 // at the instants of the scan; nil until asked for
	pieces []path
	joined path     // of the pieces that were asked for last
	within interval // for which they were
	at     func(t float64) float64
	nodes  func(from, to float64) [5]float64
}

// known is what has been worked out of a place.
func (c *courses) known(p model.Place) *known {
	k := c.exact[p]
	if k == nil {
		k = &known{at: c.asked(p), nodes: c.askedNodes(p)}
		c.exact[p] = k
	}
	return k
}

// path is the exact course of a place over the steps that an interval touches.
func (c *courses) path(p model.Place, within interval) path {
	if c.whole != nil {
		return *c.whole
	}
	k := c.known(p)
	if k.pieces == nil {
		k.pieces = make([]path, max(1, len(c.h.Spans)))
	} else if k.within == within {
		return k.joined
	}
	var whole path
	for i := range k.pieces {
		span := interval{0, c.end}
		if len(c.h.Spans) > 0 {
			span = interval{c.h.Spans[i].StartS, c.h.Spans[i].EndS}
		}
		if len(k.pieces) > 1 && (span.b <= within.a && i+1 < len(k.pieces) || span.a >= within.b && i > 0) {
			continue
		}
		if k.pieces[i].t == nil {
			k.pieces[i] = c.piece(p, span, k)
		}
		whole = whole.then(k.pieces[i])
	}
	if whole.at != nil {
		whole.nodes = k.nodes
	}
	k.joined, k.within = whole, within
	return whole
}

// piece is the exact course of a place over one step.
func (c *courses) piece(p model.Place, span interval, k *known) path {
	q := path{t: c.times, c: k.scan}
	if k.scan == nil {
		q.c = c.times
	}
	if q = q.in(span); k.scan == nil {
		q.c = make([]float64, len(q.t))
		c.h.Course(p, q.t, q.c)
	}
	if c.h.Recorded {
		return path{t: q.t, c: q.c}
	}
	return refine(q.t, q.c, func(t, out []float64) { c.h.Course(p, t, out) }, k.at)
}

// then joins a path to one that begins where it ends.
func (p path) then(q path) path {
	if len(p.t) == 0 {
		return q
	}
	n := len(p.t)
	return path{t: append(p.t[:n:n], q.t[1:]...), c: append(p.c[:n:n], q.c[1:]...), at: q.at}
}

// asked is the temperature of a place at any instant, which it remembers: limits and their unfavourable ends ask for the same.
func (c *courses) asked(p model.Place) func(t float64) float64 {
	known := map[float64]float64{}
	return func(t float64) float64 {
		x, ok := known[t]
		if !ok {
			x = c.h.At(p, t)
			known[t] = x
		}
		return x
	}
}

// askedNodes is the same for the five nodes of Gauss between two instants.
func (c *courses) askedNodes(p model.Place) func(from, to float64) [5]float64 {
	known := map[[2]float64][5]float64{}
	return func(from, to float64) [5]float64 {
		x, ok := known[[2]float64{from, to}]
		if !ok {
			t := gaussNodes(from, to)
			c.h.Course(p, t[:], x[:])
			known[[2]float64{from, to}] = x
		}
		return x
	}
}

// lightTimes are the instants in an interval at which a local search beside a spot looks.
func (c *courses) lightTimes(spot int, within interval) []float64 {
	t, ok := c.light[spot]
	if !ok {
		t = c.bounds()
		for _, i := range thin(c.times, c.rows[spot:spot+1], 0.15) {
			t = append(t, c.times[i])
		}
		t = rising(t)
		c.light[spot] = t
	}
	first, last := sort.SearchFloat64s(t, within.a), sort.SearchFloat64s(t, within.b)
	return t[first:min(last+1, len(t))]
}

// medium is the course of the main surroundings, with a jump at each change; nil where some step has none.
func (c *courses) medium() *path {
	if c.air == nil {
		c.air = c.stated(c.h.MediumC, func(e *model.Exposure) bool { return len(e.Medium.TimesS) > 0 })
	}
	return c.air
}

// humidity is the course of the stated relative humidity (%), NaN where none was stated.
func (c *courses) humidity() *path {
	if c.damp == nil {
		c.damp = c.stated(c.h.HumidityPc, func(e *model.Exposure) bool { return e.Medium.RH != nil })
	}
	return c.damp
}

// stated samples a figure of the surroundings just after each change, at its own points, and at the instants of a record.
func (c *courses) stated(value func(float64) float64, has func(*model.Exposure) bool) *path {
	p := &path{}
	spans := c.h.Spans
	if len(spans) == 0 {
		spans = []model.Span{{EndS: c.end}}
	}
	for _, sp := range spans {
		t := []float64{sp.StartS}
		if sp.Step != nil && has(&sp.Step.Exposure) {
			for _, x := range sp.Step.Exposure.Medium.TimesS {
				if sp.StartS+x > t[len(t)-1] && sp.StartS+x < sp.EndS {
					t = append(t, sp.StartS+x)
				}
			}
		}
		if c.h.Recorded {
			for _, x := range c.times {
				if x > sp.StartS && x < sp.EndS {
					t = append(t, x)
				}
			}
			sort.Float64s(t)
		}
		t = append(t, sp.EndS)
		for i, x := range t {
			at := x
			if i == 0 { // at the instant of a change a history gives the value before it
				at = x + math.Min(1e-6, (sp.EndS-sp.StartS)/2)
			}
			p.t, p.c = append(p.t, x), append(p.c, value(at))
		}
	}
	return p
}

// window is a part of the chain from the start of a cook, reheat or thaw stage (or of the chain) to the next cook or reheat.
type window struct {
	interval
	last    bool    // it ends with the chain
	clock   float64 // instant of an event clock; NaN for a crossing
	stageTo float64 // where the stage named in Stage ends for good within the window; +Inf if no stage is named
}

// run is a stage as it ran: steps of one stage in a row.
type run struct {
	interval
	stage *model.Stage
}

// runs joins consecutive steps of the same stage.
func runs(spans []model.Span) []run {
	var rs []run
	for _, sp := range spans {
		if sp.Step == nil {
			continue
		}
		if n := len(rs); n > 0 && rs[n-1].stage == sp.Step.Stage && rs[n-1].b == sp.StartS {
			rs[n-1].b = sp.EndS
			continue
		}
		rs = append(rs, run{interval{sp.StartS, sp.EndS}, sp.Step.Stage})
	}
	return rs
}

// view is a history seen through one limit.
type view struct {
	l      *Limit
	h      *model.History
	c      *courses
	runs   []run
	stages []interval // where the limit's stages ran, joined where they meet; the whole chain if none is named
	errK   float64
	brief  bool // only verdict and place are wanted, and of what is not met no more than that
	patchy bool // the limit does not apply to some places of the scan
}

// newView looks at a history through a limit.
func newView(l *Limit, c *courses) *view {
	v := &view{l: l, h: c.h, c: c, runs: runs(c.h.Spans), errK: c.h.ErrorK}
	if same(l.Where.Name, "medium") {
		v.errK = c.airK // stated, not calculated; or recorded
	}
	v.stages = v.within(l.Stages)
	return v
}

// reach is the part of the chain that the limit is about.
func (v *view) reach() interval {
	ivs := v.stages
	if v.l.Clock != (Clock{}) {
		ivs = v.spans()
	}
	if len(ivs) == 0 {
		return interval{0, v.c.end}
	}
	iv := ivs[0]
	for _, x := range ivs {
		iv = interval{math.Min(iv.a, x.a), math.Max(iv.b, x.b)}
	}
	if v.l.Clock != (Clock{}) && v.h.Recorded { // Time after the clock may be past the window, and a record is known by its knots only
		iv.b = v.c.end
	}
	return iv
}

// path is the exact course of a place over what the limit is about.
func (v *view) path(p model.Place) path { return v.c.path(p, v.reach()) }

// within lists where stages ran, joined where they meet; the whole chain for none.
func (v *view) within(stages []*model.Stage) []interval {
	if len(stages) == 0 {
		return []interval{{0, v.c.end}}
	}
	var ivs []interval
	for _, r := range v.runs {
		if !named(stages, r.stage) {
			continue
		}
		if n := len(ivs); n > 0 && ivs[n-1].b == r.a {
			ivs[n-1].b = r.b
			continue
		}
		ivs = append(ivs, r.interval)
	}
	return ivs
}

// named tells whether a stage is in a list.
func named(list []*model.Stage, s *model.Stage) bool {
	for _, x := range list {
		if x == s {
			return true
		}
	}
	return false
}

// lacks names the stage that the limit needs and the process does not have; nil if it has them all.
func (v *view) lacks() *model.Stage {
	has := func(s *model.Stage) bool { return len(v.within([]*model.Stage{s})) > 0 }
	if len(v.l.Stages) > 0 && len(v.stages) == 0 {
		return v.l.Stages[0]
	}
	for _, s := range []*model.Stage{v.l.Then, v.l.Clock.Start, v.l.Clock.End} {
		if s != nil && !has(s) {
			return s
		}
	}
	return nil
}

// windows cuts the chain for the limits that have a clock. A thaw is a beginning, and an end only of what had to be frozen.
func (v *view) windows() []window {
	frozen := v.l.ToC != nil && *v.l.ToC < 0
	starts := []float64{0}
	var heats []float64
	for _, r := range v.runs {
		if r.stage == model.Cook || r.stage == model.Reheat || frozen && r.stage == model.Thaw {
			heats = append(heats, r.a)
		}
		if (r.stage == model.Cook || r.stage == model.Reheat || r.stage == model.Thaw) && r.a > starts[len(starts)-1] {
			starts = append(starts, r.a)
		}
	}
	var ws []window
	for _, a := range starts {
		w := window{interval: interval{a, v.c.end}, last: true, clock: math.NaN(), stageTo: math.Inf(1)}
		for _, b := range heats {
			if b > a {
				w.b, w.last = b, false
				break
			}
		}
		if v.timed(&w) {
			ws = append(ws, w)
		}
	}
	return ws
}

// timed fills in the event clock (a stage that ends as the next heating starts belongs to that heating) and the end of the named stage, and tells whether the window has them.
func (v *view) timed(w *window) bool {
	if len(v.l.Stages) > 0 {
		w.stageTo = math.Inf(-1)
		for _, iv := range v.stages {
			if iv.a < w.b && iv.b > w.a {
				w.stageTo = math.Min(iv.b, w.b)
			}
		}
		if math.IsInf(w.stageTo, -1) {
			return false
		}
	}
	cl := v.l.Clock
	if cl.Start == nil && cl.End == nil {
		return true
	}
	for _, r := range v.runs {
		switch {
		case cl.Start == r.stage && r.a >= w.a && r.a < w.b:
			w.clock = r.a
			return true
		case cl.End == r.stage && r.b >= w.a && (r.b < w.b || w.last):
			w.clock = r.b
			return true
		}
	}
	return false
}

// scope is the places that a limit is about.
type scope struct {
	spots       []int // of the scan; nil: one place or the medium
	surfaceOnly bool
	one         *model.Place
	medium      *path
	name        string // for the words; "" for every point
	why         string // why there are no places at all
}

// scope finds the places of Where.
func (v *view) scope() scope {
	name := strings.TrimSpace(v.l.Where.Name)
	switch {
	case name == "" || same(name, "every point"):
		all := make([]int, len(v.c.spots))
		for i := range all {
			all[i] = i
		}
		return scope{spots: all, why: say("no places", nil)}
	case same(name, "surface"):
		s := scope{surfaceOnly: true, why: say("no surface", nil), name: "surface"}
		for i, sp := range v.c.spots {
			if sp.Surface {
				s.spots = append(s.spots, i)
			}
		}
		return s
	case same(name, "medium"):
		p := v.c.medium()
		for _, iv := range v.stages {
			for _, x := range p.in(iv).c {
				if math.IsNaN(x) {
					return scope{why: say("no medium", nil)}
				}
			}
		}
		return scope{medium: p, name: "medium"}
	}
	for _, pt := range v.h.Points {
		if same(pt.Name, name) {
			return scope{one: &pt.Place, name: pt.Name}
		}
	}
	return scope{why: say("no point", holes{"point": name})}
}

// placeName says where a place is, in the one wording that the documents use.
func (v *view) placeName(p model.Place) string {
	if v.h.Product != nil && v.h.Product.Shape.Mixed() {
		return v.h.Product.Where(p)
	}
	for _, pt := range v.h.Points {
		if near(pt.Place, p) {
			return pt.Name
		}
	}
	if v.h.Product == nil { // a record: only its places exist
		return fmt.Sprintf("%.0f mm above the centre", 1000*p.UpM)
	}
	return v.h.Product.Where(p)
}

// near tells whether two places are the same to a hundredth of a millimetre.
func near(a, b model.Place) bool {
	return math.Abs(a.UpM-b.UpM) < 1e-5 && math.Abs(a.AcrossM-b.AcrossM) < 1e-5 && math.Abs(a.AlongM-b.AlongM) < 1e-5
}

// alike tells whether two places are the same; the two sides of a joint of layers are not.
func alike(a, b model.Place) bool {
	const m = 5e-10
	return math.Abs(a.UpM-b.UpM) < m && math.Abs(a.AcrossM-b.AcrossM) < m && math.Abs(a.AlongM-b.AlongM) < m
}

// stepAt is the cell of the step that holds an instant, at a change the one before it.
func (v *view) stepAt(t float64) (cell.Ref, bool) {
	for _, sp := range v.h.Spans {
		if t <= sp.EndS && sp.Step != nil {
			return sp.Step.At, !sp.Step.At.IsZero()
		}
	}
	return cell.Ref{}, false
}
