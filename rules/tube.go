package rules

import (
	"fmt"
	"math"
	"slices"
	"sort"

	"slowpoint/model"
)

// A record is known at its readings only. What the course did between two of them lies in a range: that of the two between usual readings,
// in which nothing can have come and gone unseen but what is faster than the logger was set for, and a wider one in a gap. All courses
// within these ranges and through the readings are the tube of the record.

// jumpS is how long a course at the edge of a tube takes for a jump, s.
const jumpS = 1e-6

// ranged is a stretch of a tube that is not bounded by its own two knots alone.
type ranged struct {
	i      int     // between knots i and i+1
	lo, hi float64 // °C
	gap    int     // which gap; -1: usual readings, cut by the end of a step
}

// gap is a time in which nothing was recorded.
type gap struct {
	interval
	lo, hi float64 // between which temperatures the place may have been, °C
	edge   int     // -1: before the first reading; 1: after the last one; 0: between two
}

// bare tells whether nothing bounds what was in a gap.
func (g gap) bare() bool { return g.lo <= anyLowC && g.hi >= anyHighC }

// tube is what the readings of a record allow.
type tube struct {
	t, c   []float64 // knots: readings, and the ends of steps between them at the straight-line value
	free   []int     // knots that are no readings, rising
	kept   []int     // knots that no course may leave out: the ends of the steps, rising
	ranges []ranged  // rising
	gaps   []gap
	spans  []model.Span // without what lies no farther before the first and after the last reading than two readings may lie apart
	usualS float64      // the median time between two readings, s
	soFar  region       // of the readings, while the tube is laid out
}

// choice is how a course runs between two knots: through up to two temperatures for an instant at its start, then at a level.
type choice struct {
	straight bool // from knot to knot, and nothing else
	visit    [2]float64
	visits   int
	level    float64
}

// at is the choice to stay at a level.
func at(level float64) choice { return choice{level: level} }

// way is a course through a tube: what it chooses in the stretch i whose range is lo to hi; gap tells that it lies in a gap.
type way func(i int, lo, hi float64, gap bool) choice

// check finds what keeps a recording from being judged.
func check(r *model.Recording) error {
	if len(r.TimesS) == 0 || len(r.TimesS) != len(r.C) {
		return fmt.Errorf("%s: %d times for %d readings", r.Name, len(r.TimesS), len(r.C))
	}
	for i, t := range r.TimesS {
		if math.IsNaN(r.C[i]) || math.IsInf(r.C[i], 0) || math.IsNaN(t) || math.IsInf(t, 0) || i > 0 && !(t > r.TimesS[i-1]) {
			return fmt.Errorf("%s: reading %d: time %g s, %g °C", r.Name, i+1, t, r.C[i])
		}
	}
	for _, g := range r.Gaps {
		if g < 0 || g+1 >= len(r.TimesS) {
			return fmt.Errorf("%s: no readings beside the gap %d", r.Name, g)
		}
	}
	for _, d := range r.Doubted {
		if d < 0 || d >= len(r.TimesS) {
			return fmt.Errorf("%s: no reading %d", r.Name, d+1)
		}
	}
	return nil
}

// Where nothing was measured and no medium is known, a place may have been at anything that food comes to, °C.
const anyLowC, anyHighC = -80, 300

// newTube lays out what a recording allows, without the readings in without (rising).
func newTube(r *model.Recording, without []int) *tube {
	b := newLayer(r, without)
	b.before()
	for i := b.first; i <= b.last; {
		next, isGap := b.next(i)
		b.reading(i, next, isGap)
		if next <= b.last {
			b.between(i, next, isGap)
		}
		i = next
	}
	b.after()
	return b.u
}

// layer lays out a tube, reading by reading.
type layer struct {
	u           *tube
	r           *model.Recording
	air         *surroundings
	out         map[int]bool // readings that are left out
	gaps        map[int]bool // by the reading before
	first, last int          // of the readings that are not
	ends        []float64    // of the steps
	k           int          // how many of them are laid out
}

// newLayer finds what the readings that are not left out say as a whole.
func newLayer(r *model.Recording, without []int) *layer {
	u := &tube{usualS: model.UsualStep(r.TimesS), soFar: region{lo: math.Inf(1), hi: math.Inf(-1)}}
	n := len(r.TimesS)
	b := &layer{u: u, r: r, out: make(map[int]bool, len(without)), gaps: map[int]bool{}, last: n - 1}
	for _, i := range without {
		b.out[i] = true
	}
	for b.first < b.last && b.out[b.first] {
		b.first++
	}
	for b.last > b.first && b.out[b.last] {
		b.last--
	}
	u.spans = clipped(r.Spans, r.TimesS[b.first], r.TimesS[b.last], model.MostApartS(u.usualS))
	b.ends = u.ends()
	for _, g := range r.Gaps {
		b.gaps[g] = true
	}
	b.air = newSurroundings(r)
	u.t, u.c = make([]float64, 0, n+len(b.ends)), make([]float64, 0, n+len(b.ends))
	return b
}

// before lays out what of the chain lies before the record.
func (b *layer) before() {
	start, c := b.r.TimesS[b.first], b.r.C[b.first]
	for b.k < len(b.ends) && b.ends[b.k] < start {
		b.k++
	}
	if b.k > 0 {
		g := gap{interval: interval{b.ends[0], start}, edge: -1}
		g.lo, g.hi = b.air.bounds(b.r, b.u, b.first, b.first, g.interval)
		b.u.stretch(b.ends[:b.k], knot{g.a, c}, knot{g.b, c}, &g, true)
	}
}

// next is the reading after i that counts, and whether readings are lacking between the two.
func (b *layer) next(i int) (next int, isGap bool) {
	next, isGap = i+1, b.gaps[i]
	for next <= b.last && b.out[next] {
		isGap = isGap || b.gaps[next]
		next++
	}
	if next > i+1 && next <= b.last && b.r.TimesS[next]-b.r.TimesS[i] > model.MostApartS(b.u.usualS)+sameS { // what is left out leaves a gap
		isGap = true
	}
	return next, isGap
}

// reading lays out a reading as a knot, unless it repeats the one before and the one after, so that it says nothing more.
func (b *layer) reading(i, next int, isGap bool) {
	u, t, c := b.u, b.r.TimesS[i], b.r.C[i]
	u.soFar.lo, u.soFar.hi = math.Min(u.soFar.lo, c), math.Max(u.soFar.hi, c)
	edge := b.k < len(b.ends) && b.ends[b.k] <= t
	for b.k < len(b.ends) && b.ends[b.k] <= t {
		b.k++
	}
	if m := len(u.c); edge || m < 2 || next > b.last || isGap || u.c[m-1] != c || b.r.C[next] != c || gapsAt(u, m) || b.k < len(b.ends) && b.ends[b.k] < b.r.TimesS[next] {
		u.t, u.c = append(u.t, t), append(u.c, c)
	}
	if edge {
		u.kept = append(u.kept, len(u.t)-1)
	}
}

// between lays out what lies between two readings where that is a gap, or cut by the ends of steps.
func (b *layer) between(i, next int, isGap bool) {
	from := b.k
	for b.k < len(b.ends) && b.ends[b.k] < b.r.TimesS[next] {
		b.k++
	}
	if !isGap && b.k == from {
		return
	}
	left, right := knot{b.r.TimesS[i], b.r.C[i]}, knot{b.r.TimesS[next], b.r.C[next]}
	var g *gap
	if isGap {
		g = &gap{interval: interval{left.t, right.t}}
		g.lo, g.hi = b.air.bounds(b.r, b.u, i, next, g.interval)
	}
	b.u.stretch(b.ends[from:b.k], left, right, g, false)
}

// after lays out what of the chain lies after the record.
func (b *layer) after() {
	if b.k == len(b.ends) {
		return
	}
	g := gap{interval: interval{b.r.TimesS[b.last], b.ends[len(b.ends)-1]}, edge: 1}
	g.lo, g.hi = b.air.bounds(b.r, b.u, b.last, b.last, g.interval)
	b.u.stretch(b.ends[b.k:], knot{g.a, b.r.C[b.last]}, knot{g.b, b.r.C[b.last]}, &g, false)
}

// gapsAt tells whether the stretch before the knot m has a range of its own.
func gapsAt(u *tube, m int) bool {
	n := len(u.ranges)
	return n > 0 && u.ranges[n-1].i >= m-1
}

// knot is a point of a course.
type knot struct{ t, c float64 }

// stretch adds what lies between two readings a and b where it is a gap, or cut by the ends of steps. lead: there is no reading at a.
func (u *tube) stretch(ends []float64, a, b knot, g *gap, lead bool) {
	x := ranged{lo: math.Min(a.c, b.c), hi: math.Max(a.c, b.c), gap: -1}
	if g != nil {
		x.lo, x.hi, x.gap = g.lo, g.hi, len(u.gaps)
		u.gaps = append(u.gaps, *g)
	}
	if !lead {
		x.i = len(u.t) - 1
		u.ranges = append(u.ranges, x)
	}
	for _, t := range ends {
		if t >= b.t && !(g != nil && g.edge == 1) {
			break
		}
		u.kept, u.free = append(u.kept, len(u.t)), append(u.free, len(u.t))
		u.t, u.c = append(u.t, t), append(u.c, a.c+(b.c-a.c)*(t-a.t)/(b.t-a.t))
		if g == nil || g.edge != 1 || t < b.t {
			x.i = len(u.t) - 1
			u.ranges = append(u.ranges, x)
		}
	}
}

// ends are the ends of the steps, rising; without steps there are none.
func (u *tube) ends() []float64 {
	var ends []float64
	for _, sp := range u.spans {
		ends = append(ends, sp.StartS, sp.EndS)
	}
	return rising(ends)
}

// clipped is what of the steps lies within the readings from a to b, with steps kept whole that reach out further than slack.
func clipped(spans []model.Span, a, b, slack float64) []model.Span {
	out := append([]model.Span(nil), spans...)
	if len(out) > 0 && out[0].StartS < a && out[0].StartS >= a-slack {
		for i := range out {
			out[i].StartS, out[i].EndS = math.Max(out[i].StartS, a), math.Max(out[i].EndS, a)
		}
	}
	if n := len(out); n > 0 && out[n-1].EndS > b && out[n-1].EndS <= b+slack {
		for i := range out {
			out[i].StartS, out[i].EndS = math.Min(out[i].StartS, b), math.Min(out[i].EndS, b)
		}
	}
	return slices.DeleteFunc(out, func(sp model.Span) bool { return sp.EndS <= sp.StartS && (a < b || sp.EndS < sp.StartS) })
}

// surroundings are what is known of the medium beside a record.
type surroundings struct {
	m      *model.Trace
	lo, hi []float64 // extremes of its readings up to each, the lowest counted from coldest, the highest from hottest
	stepS  float64
	hole   float64 // where its first hole begins, s; +Inf for none
	// from when on the measured place was the coldest, and the hottest, of the food, s; NaN where that is not known
	coldest, hottest float64
	raw              bool // the record begins with food that nothing was done to
}

// newSurroundings prepares the recorded medium; it may be nil.
func newSurroundings(r *model.Recording) *surroundings {
	s := &surroundings{m: r.Medium, hole: math.Inf(1)}
	if s.m == nil || len(s.m.TimesS) == 0 || len(s.m.TimesS) != len(s.m.C) || len(r.Gaps) == 0 && within(r.Spans, r.TimesS) {
		s.m = nil
		s.raw = raw(r, model.MostApartS(model.UsualStep(r.TimesS)))
		s.hottest, s.coldest = s.foremost(r, 1), s.foremost(r, -1)
		return s
	}
	s.stepS = model.UsualStep(s.m.TimesS)
	for i := 1; i < len(s.m.TimesS) && math.IsInf(s.hole, 1); i++ {
		if s.m.TimesS[i]-s.m.TimesS[i-1] > model.MostApartS(s.stepS)+sameS {
			s.hole = s.m.TimesS[i-1]
		}
	}
	s.raw = raw(r, model.MostApartS(s.stepS))
	s.hottest, s.coldest = s.foremost(r, 1), s.foremost(r, -1)
	s.lo, s.hi = s.running(s.coldest, -1), s.running(s.hottest, 1)
	return s
}

// within tells whether steps lie within readings.
func within(spans []model.Span, t []float64) bool {
	n := len(spans)
	return n == 0 || spans[0].StartS >= t[0] && spans[n-1].EndS <= t[len(t)-1]
}

// running is the extreme of the medium from an instant (NaN: the first reading) up to each of its readings, the warmest (sign 1) or coldest.
func (s *surroundings) running(from, sign float64) []float64 {
	out := append([]float64(nil), s.m.C...)
	for i := 1; i < len(out); i++ {
		if !(s.m.TimesS[i] <= from) && sign*out[i-1] > sign*out[i] {
			out[i] = out[i-1]
		}
	}
	return out
}

// foremostK is how far the slowest point must have fallen from its peak, K, and how many times the error of its readings.
const foremostK, foremostErrors = 1.0, 4.0

// foremost is from when on the slowest point was the hottest place of the food (sign 1), or the coldest (−1), s; NaN where that is not known.
// In food that was heated once and then chilled the heat comes in from all sides and leaves again; while places further out are hotter, the
// slowest point rises, and once it falls it is the hottest (with the heat equation no new peak forms within a food). From then on only the
// medium can make another place hotter, no hotter than the medium was since. It is not looked for after a second heating, where heat may still
// be on its way, not beyond a gap, and not where the steps before the record are such that there may have been two.
func (s *surroundings) foremost(r *model.Recording, sign float64) float64 {
	known := r.HighC // what the medium never was beyond
	if sign < 0 {
		known = r.LowC
	}
	switch {
	case !same(r.Name, "slowest point"), !s.raw && len(r.Spans) > 0 && !once(r, sign), s.m == nil && math.IsNaN(known), s.m != nil && s.m.TimesS[0] > r.TimesS[0]+model.MostApartS(s.stepS):
		return math.NaN()
	}
	until := len(r.TimesS)
	if len(r.Gaps) > 0 {
		until = slices.Min(r.Gaps) + 1
	}
	fall := math.Max(foremostK, foremostErrors*r.ErrorK)
	turned, peak, k := false, math.Inf(-1), 0
	for i := 0; i < until; i++ {
		t, c := r.TimesS[i], sign*r.C[i]
		air := sign * known
		if s.m != nil {
			for k+1 < len(s.m.TimesS) && s.m.TimesS[k+1] <= t {
				k++
			}
			if s.m.TimesS[k] > s.hole {
				return math.NaN()
			}
			// the warmer of the two readings of the medium beside this one
			air = math.Max(sign*s.m.C[k], sign*s.m.C[min(k+1, len(s.m.C)-1)])
		}
		if air >= c {
			if turned {
				return math.NaN()
			}
			peak = c
			continue
		}
		turned = true
		if peak = math.Max(peak, c); c <= peak-fall {
			return t
		}
	}
	return math.NaN()
}

// raw tells whether a record, or that of the air, begins with the first step of a chain, but for some slack, and that is a cook or a thaw: then no place of
// the food is taken to have been hotter before than what comes, nor colder than what was read.
func raw(r *model.Recording, slackS float64) bool {
	if len(r.Before) > 0 || len(r.Spans) == 0 || r.Spans[0].Step == nil || len(r.TimesS) == 0 {
		return false
	}
	begins := r.TimesS[0]
	if r.Medium != nil && len(r.Medium.TimesS) > 0 {
		begins = math.Min(begins, r.Medium.TimesS[0])
	}
	if begins > r.Spans[0].StartS+slackS {
		return false
	}
	st := r.Spans[0].Step.Stage
	return st == model.Cook || st == model.Thaw
}

// once tells whether the food was heated in one go and is chilled when a record begins (sign 1), or the other way round (−1). Of food that comes to the
// first step of a chain no more is known, and one heating, or chilling, is taken.
func once(r *model.Recording, sign float64) bool {
	heats := func(st *model.Step) bool { return st != nil && st.Stage != nil && st.Stage.Heats }
	last := heats(r.Spans[0].Step)
	if last == (sign > 0) {
		return false
	}
	for i := len(r.Before) - 1; i >= 0; i-- {
		now := heats(&r.Before[i])
		if now == (sign < 0) && last == (sign > 0) { // the other, and what comes before it is once more the same
			return false
		}
		last = now
	}
	return true
}

// bounds are between which temperatures the place may have been in a gap between the readings i and k. No place of a food passes the
// range of what the food was at and of all surroundings that it has had since (maximum principle): after a cook, places beside the
// probe may be hotter than it and than the air, and it rises. So the medium counts from the start of the record, not of the gap, unless
// the measured place was the hottest (coldest) one before. What the food was at elsewhere when the record began is not read: unless nothing was
// done to it before, nothing bounds the gap on that side, and nothing what lies before the first reading.
// Where the medium was not recorded, the range known of it counts; where none is, nothing is known: it may have been anything.
func (s *surroundings) bounds(r *model.Recording, u *tube, i, k int, iv interval) (lo, hi float64) {
	if iv.b <= r.TimesS[i] {
		return anyLowC, anyHighC
	}
	lo, hi = math.Min(r.C[i], r.C[k]), math.Max(r.C[i], r.C[k])
	slack := model.MostApartS(s.stepS)
	if s.m != nil && s.hole >= iv.b && s.m.TimesS[0] <= r.TimesS[0]+slack && s.m.TimesS[0] <= iv.a+slack && s.m.TimesS[len(s.m.TimesS)-1] >= iv.b-slack {
		n := min(sort.SearchFloat64s(s.m.TimesS, iv.b), len(s.m.TimesS)-1)
		lo, hi = math.Min(lo, s.lo[n]), math.Max(hi, s.hi[n])
		if !s.raw && !(s.coldest <= iv.a) {
			lo = anyLowC
		}
		if !s.raw && !(s.hottest <= iv.a) {
			hi = anyHighC
		}
	} else if !math.IsNaN(r.LowC) && !math.IsNaN(r.HighC) {
		lo, hi = math.Min(lo, r.LowC), math.Max(hi, r.HighC)
	} else {
		return anyLowC, anyHighC
	}
	if !(s.coldest <= iv.a) {
		lo = math.Min(lo, u.soFar.lo)
	}
	if !(s.hottest <= iv.a) {
		hi = math.Max(hi, u.soFar.hi)
	}
	return lo, hi
}

// course writes the course of a way through the tube into buf, with the gaps for which open says no as straight lines.
func (u *tube) course(buf *path, w way, open func(gap int) bool) path {
	if most := 2 * len(u.t); cap(buf.t) < most { // a knot at each reading, and one where the course leaves it
		buf.t, buf.c = make([]float64, 0, most), make([]float64, 0, most)
	}
	t, c := buf.t[:0], buf.c[:0]
	keep := -1 // the last knot that may not be left out
	emit := func(x, y float64) {
		if m := len(c); m >= 2 && c[m-1] == y && c[m-2] == y && m-1 > keep {
			t[m-1] = x
			return
		}
		t, c = append(t, x), append(c, y)
	}
	before := choice{straight: true}
	var eps float64
	f, kp, rg := 0, 0, 0
	last := len(u.t) - 1
	for i := 0; i <= last; i++ {
		now := before
		eps2 := eps
		if i < last {
			dt := u.t[i+1] - u.t[i]
			eps2 = math.Min(jumpS, dt/8)
			lo, hi := u.c[i], u.c[i+1]
			if lo > hi {
				lo, hi = hi, lo
			}
			inGap, closed := false, false
			if rg < len(u.ranges) && u.ranges[rg].i == i {
				x := u.ranges[rg]
				rg++
				inGap, closed = x.gap >= 0, x.gap >= 0 && !open(x.gap)
				lo, hi = x.lo, x.hi
			}
			if closed {
				now = choice{straight: true}
			} else {
				now = w(i, lo, hi, inGap)
			}
			if i == 0 {
				before = now
			}
		}
		v := u.c[i]
		if f < len(u.free) && u.free[f] == i { // no reading: the course may jump here, so that what ends and what begins here each have their own
			f++
			w := v
			if !before.straight {
				w = before.level
			}
			if !now.straight {
				v = now.level
			}
			if i > 0 && i < last && w != v {
				t, c = append(t, u.t[i]), append(c, w)
			} else if i == last {
				v = w
			}
		} else if i > 0 && !before.straight && before.level != v {
			emit(u.t[i]-eps, before.level)
		}
		emit(u.t[i], v)
		if kp < len(u.kept) && u.kept[kp] == i {
			kp++
			keep = len(t) - 1
		}
		if i < last && !now.straight {
			for n := 0; n < now.visits; n++ {
				emit(u.t[i]+float64(n+1)*eps2, now.visit[n])
			}
			if now.visits > 0 || now.level != v {
				emit(u.t[i]+float64(now.visits+1)*eps2, now.level)
			}
		}
		before, eps = now, eps2
	}
	buf.t, buf.c = t, c
	return path{t: t, c: c}
}

// line is the course of straight segments.
func line(int, float64, float64, bool) choice { return choice{straight: true} }

// low and high are the coldest and the warmest course.
func low(_ int, lo, _ float64, _ bool) choice  { return at(lo) }
func high(_ int, _, hi float64, _ bool) choice { return at(hi) }
