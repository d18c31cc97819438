package rules

import (
	"math"
	"sort"

	"slowpoint/model"
)

// A clock that starts at a crossing runs only at the places that were ever above the temperature crossed: part of the food, with
// an edge. A place just within that edge was there for a moment only and starts its clock at its peak, before its neighbours
// on the warmer side fall to the crossing. So the time taken grows towards the edge, with an infinite slope, and its supremum over the
// places that count is the limit at the edge. That supremum decides: verdict and margin are those of a place whose peak is edgeK
// above the crossing, as near to the limit as the numbers go. The place named, and its value, are half a probe's breadth within the edge
// where the verdict is the same there: nobody can measure nearer, and the note tells the value at the edge.

// edgeK is how far the peak of a place at an edge lies above the crossing, within half as much, K: what the search for a peak can
// tell apart. For a chill of an hour it shortens the time by about a second.
const edgeK = 1e-5

// probeM is how near to an edge two places cannot be told apart: half the breadth of the thinnest needles of probes, m (common practice,
// no source).
const probeM = 6e-4

// onEdge is a place on an edge, and which way the counting places lie on one of its axes: 1 or -1.
type onEdge struct {
	at     model.Axes
	axis   int
	inward float64
}

// on makes the place of an edge that x is.
func (e *edge) on(x model.Axes) onEdge {
	return onEdge{x, e.axis, math.Copysign(1, e.in[e.axis]-e.out[e.axis])}
}

// probed is the place half a probe's breadth within an edge, unless a verdict is another one there.
func (v *view) probed(edge candidate, q question) (candidate, bool) {
	x := edge.edge.at
	x[edge.edge.axis] = v.c.inside(edge.edge.axis, x[edge.edge.axis]+edge.edge.inward*probeM)
	c := candidate{place: v.h.PlaceAt(x), surface: edge.surface, path: v.path(v.h.PlaceAt(x)), edge: edge.edge}
	c.nominal = q.measure(c.path, tilt{})
	t := v.unfavourable()
	t.rank = true
	return c, c.nominal.verdict == edge.nominal.verdict && q.measure(c.path, t).verdict == q.measure(edge.path, t).verdict
}

// edgeNote tells that a finding's place lies at an edge, or half a probe's breadth within it.
func (v *view) edgeNote(edge candidate, q question, there bool) string {
	h := holes{"start": v.l.startWords()}
	if there || math.IsNaN(edge.nominal.value) {
		return say("note at the edge", h)
	}
	if h["value"] = lasting(60*edge.nominal.value, 0); q.unit != "min" {
		h["value"] = v.l.degrees(edge.nominal.value, 0)
	}
	return say("note edge", h)
}

// mostEdges is how many edges of a window are followed exactly, each way along each axis: the worst by a first look at all. The
// first look is too rough to compare one axis with another.
const mostEdges = 2

// edge is a crossing of the edge between two neighbours along an axis: one counts in a window, the other does not.
type edge struct {
	in, out model.Axes
	axis    int
	level   float64 // the peak at the edge, °C
	t       tilt
	w       window
	lo, hi  int     // between which instants of the scan the two have their peaks, and some more
	first   outcome // of the scanned courses, blended so that the peak just counts
	joint   *joint  // an edge between places of unlike numbers of periods, not one of those that count
}

// edges finds places at the edges of those that count for a clock, in each window: along the axes between neighbouring spots. The
// least favourable is moved along its edge. Edges that are plainly more favourable than the worst candidate are left out.
func (v *view) edges(s scope, q question, cs []candidate) []onEdge {
	if !v.l.clocked() || v.h.Recorded || len(s.spots) == 0 {
		return nil
	}
	ws := v.windows()
	if len(ws) == 1 && !v.patchy { // every place counts
		return nil
	}
	within := make([]bool, len(v.c.spots))
	for _, i := range s.spots {
		within[i] = true
	}
	var found []onEdge
	for _, w := range ws {
		pk := v.peaks(s.spots, w)
		slid := false
		for n, level := range []float64{v.l.crossedC(), v.l.crossedC() - v.errK} {
			if n > 0 && v.errK == 0 {
				break
			}
			t := tilt{rank: true, errK: v.errK * float64(n), edge: n > 0} // the unfavourable reading counts more places
			var worst model.Axes
			var by edge
			most := math.Inf(-1)
			for _, e := range v.paired(pk, within, w, level, t, q, cs) {
				if x, ok := v.follow(e, e.in); ok {
					found = append(found, e.on(x))
					if bad := q.measure(v.path(v.h.PlaceAt(x)), t).bad; bad > most {
						worst, by, most = x, e, bad
					}
				}
				if n > 0 && slid {
					break
				}
			}
			if !slid && !math.IsInf(most, -1) {
				found, slid = append(found, by.on(v.slide(by, worst, q, s.surfaceOnly))), true
			}
		}
	}
	return found
}

// peaks are the highest temperatures of the scanned courses in a window.
type peaks struct {
	at          []int     // instant of the scan, by spot
	c           []float64 // °C, by spot
	least, most float64   // of c
	first, last int       // instants of the window
}

// peaks of the spots of a limit.
func (v *view) peaks(spots []int, w window) peaks {
	pk := peaks{at: make([]int, len(v.c.rows)), c: make([]float64, len(v.c.rows)), least: math.Inf(1), most: math.Inf(-1),
		first: sort.SearchFloat64s(v.c.times, w.a), last: sort.SearchFloat64s(v.c.times, w.b)}
	for _, i := range spots {
		at, top := pk.first, math.Inf(-1)
		for n, c := range v.c.rows[i][pk.first : pk.last+1] {
			if c > top {
				at, top = pk.first+n, c
			}
		}
		pk.at[i], pk.c[i] = at, top
		pk.least, pk.most = math.Min(pk.least, top), math.Max(pk.most, top)
	}
	return pk
}

// paired lists the pairs of neighbours that the edge lies between, the worst by their blended courses first.
func (v *view) paired(pk peaks, within []bool, w window, level float64, t tilt, q question, cs []candidate) []edge {
	if pk.least > level || pk.most <= level {
		return nil
	}
	bar := outcome{verdict: NotApplicable, bad: math.Inf(-1)}
	for _, c := range cs {
		if worse(c.nominal, bar) {
			bar = c.nominal
		}
	}
	bar.bad -= plainly * math.Abs(bar.bad)
	peak, top := pk.at, pk.c
	var es []edge
	for _, pair := range v.c.neighbours() {
		i, k := pair.a, pair.b
		if top[i] < top[k] {
			i, k = k, i
		}
		if !(within[i] && within[k] && top[i] > level && top[k] <= level) {
			continue
		}
		e := edge{in: v.c.spots[i].Axes, out: v.c.spots[k].Axes, axis: pair.axis, level: level, t: t, w: w,
			lo: max(pk.first, min(peak[i], peak[k])-2), hi: min(pk.last, max(peak[i], peak[k])+2)}
		if e.first = q.measure(v.c.blend(i, k, (level-top[k])/(top[i]-top[k]), w, level), t); !worse(bar, e.first) {
			es = append(es, e)
		}
	}
	sort.SliceStable(es, func(a, b int) bool { return worse(es[a].first, es[b].first) })
	return fewEachWay(es, mostEdges)
}

// fewEachWay keeps the first edges each way along each axis, so many.
func fewEachWay(es []edge, most int) []edge {
	var few []edge
	taken := map[[2]int]int{}
	for _, e := range es {
		way := [2]int{e.axis, 1}
		if e.out[e.axis] < e.in[e.axis] {
			way[1] = -1
		}
		if taken[way]++; taken[way] <= most {
			few = append(few, e)
		}
	}
	return few
}

// plainly is by what share of the value the first look at an edge may err: less favourable than that is worth following.
const plainly = 0.2

// blend mixes the scanned courses of two spots (share of the first), moved so that the peak in a window just exceeds a level.
func (c *courses) blend(i, k int, share float64, w window, level float64) path {
	p := path{t: c.times, c: make([]float64, len(c.times))}
	for n := range p.c {
		p.c[n] = c.rows[k][n] + share*(c.rows[i][n]-c.rows[k][n])
	}
	_, top := p.most(w.interval, 1)
	for n := range p.c {
		p.c[n] += level + edgeK - top
	}
	return p
}

// follow finds the place of an edge on the line along its axis through a place: where the peak in the window is edgeK above the
// level, by regula falsi (Illinois). It looks further out on either side where the two neighbours do not bracket the edge there;
// ok is false where the line does not cross it within the food.
func (v *view) follow(e edge, through model.Axes) (x model.Axes, ok bool) {
	if e.joint != nil {
		return v.followJoint(e, through)
	}
	out := make([]float64, len(v.c.times))
	on := func(along float64) model.Axes {
		through[e.axis] = along
		return through
	}
	over := func(along float64) float64 { return v.peakOf(e, v.h.PlaceAt(on(along)), out) - e.level - edgeK }
	a, b := e.in[e.axis], e.out[e.axis]
	fa, fb := over(a), over(b)
	for n := 0; n < 4 && (fa <= 0 || fb > 0); n++ {
		if d := b - a; fa <= 0 {
			b, fb = a, fa
			a = v.c.inside(e.axis, a-d)
			fa = over(a)
		} else {
			a, fa = b, fb
			b = v.c.inside(e.axis, b+d)
			fb = over(b)
		}
	}
	if fa <= 0 || fb > 0 {
		return x, false
	}
	for n, side := 0, 0; n < 60 && math.Abs(b-a) > 1e-12; n++ {
		m := a + (b-a)*fa/(fa-fb)
		f := over(m)
		if math.Abs(f) < edgeK/2 {
			return on(m), true
		}
		if f > 0 {
			if a, fa = m, f; side < 0 {
				fb /= 2
			}
			side = -1
		} else {
			if b, fb = m, f; side > 0 {
				fa /= 2
			}
			side = 1
		}
	}
	return on(a), true
}

// peakOf is the highest temperature of a place in the window of an edge, °C: near where its neighbours have theirs, else anywhere.
func (v *view) peakOf(e edge, at model.Place, scratch []float64) float64 {
	first, last := sort.SearchFloat64s(v.c.times, e.w.a), sort.SearchFloat64s(v.c.times, e.w.b)
	for lo, hi := e.lo, e.hi; ; lo, hi = first, last {
		p := path{t: v.c.times[lo : hi+1], c: scratch[lo : hi+1], at: func(t float64) float64 { return v.h.At(at, t) }}
		v.h.Course(at, p.t, p.c)
		top := 0
		for i := range p.c {
			if p.c[i] > p.c[top] {
				top = i
			}
		}
		if (top > 0 || lo == first) && (top < len(p.c)-1 || hi == last) {
			_, c := p.polish(top, 1)
			return c
		}
	}
}

// inside is the coordinate within the food that is nearest to one on an axis.
func (c *courses) inside(axis int, along float64) float64 {
	marks := c.marks[axis]
	return math.Max(marks[0], math.Min(marks[len(marks)-1], along))
}

// slide moves along an edge, from a place on it, to where the limit is least favourable: a parabola over each of the other axes,
// finer each time.
func (v *view) slide(e edge, x model.Axes, q question, surfaceOnly bool) model.Axes {
	if !v.gridded() {
		return x
	}
	score := func(x model.Axes) float64 { return q.measure(v.path(v.h.PlaceAt(x)), e.t).bad }
	for axis, marks := range v.c.marks {
		last := len(marks) - 1
		if axis == e.axis || last == 0 || surfaceOnly && (x[axis] == marks[last] || x[axis] == marks[0] && marks[0] < 0) {
			continue
		}
		n := min(max(sort.SearchFloat64s(marks, x[axis]), 1), last)
		spacing := marks[n] - marks[n-1]
		d, best := spacing/2, score(x)
		for d > spacing/10 {
			at, here := x, best
			try := func(along float64) float64 {
				y := at
				if y[axis] = v.c.inside(axis, along); y[axis] == at[axis] {
					return math.NaN()
				}
				y, ok := v.follow(e, y)
				if !ok {
					return math.NaN()
				}
				s := score(y)
				if s > best {
					best, x = s, y
				}
				return s
			}
			left, right := try(at[axis]-d), try(at[axis]+d)
			if bend := left + right - 2*here; bend < 0 && at[axis]-d >= marks[0] && at[axis]+d <= marks[last] {
				try(at[axis] + d/2*(left-right)/bend)
			}
			if best <= here+1e-3*math.Abs(here) {
				d /= 3
			}
		}
	}
	return x
}

// neighbour is a pair of spots next to each other along one axis.
type neighbour struct{ a, b, axis int }

// neighbours lists the pairs of neighbours and fills the marks.
func (c *courses) neighbours() []neighbour {
	if c.pairs != nil {
		return c.pairs
	}
	c.pairs = []neighbour{}
	order := make([]int, len(c.spots))
	for axis := range c.marks {
		key := func(i int) model.Axes { // the two other coordinates first
			x := c.spots[i].Axes
			return model.Axes{x[(axis+1)%3], x[(axis+2)%3], x[axis]}
		}
		for i, s := range c.spots {
			order[i] = i
			c.marks[axis] = append(c.marks[axis], s.Axes[axis])
		}
		c.marks[axis] = rising(c.marks[axis])
		sort.SliceStable(order, func(a, b int) bool {
			x, y := key(order[a]), key(order[b])
			for n := range x {
				if x[n] != y[n] {
					return x[n] < y[n]
				}
			}
			return false
		})
		for n := 1; n < len(order); n++ {
			x, y := key(order[n-1]), key(order[n])
			if x[0] == y[0] && x[1] == y[1] && x[2] != y[2] {
				c.pairs = append(c.pairs, neighbour{order[n-1], order[n], axis})
			}
		}
	}
	return c.pairs
}

// rising sorts numbers and drops those that come again.
func rising(xs []float64) []float64 {
	sort.Float64s(xs)
	n := 0
	for i, x := range xs {
		if i == 0 || x > xs[n-1] {
			xs[n] = x
			n++
		}
	}
	return xs[:n]
}

// peaked gives the highest knot of a path; where it lies near a level, the true peak beside it is made a knot first.
func (p path) peaked(level float64) (path, int) {
	top, most := 0, math.Inf(-1)
	for i, c := range p.c {
		if c > most {
			top, most = i, c
		}
	}
	if p.at == nil || math.Abs(p.c[top]-level) > nearK {
		return p, top
	}
	at, c := p.polish(top, 1)
	if c <= p.c[top] {
		return p, top
	}
	k := sort.SearchFloat64s(p.t, at)
	return path{
		t:  append(append(append(make([]float64, 0, len(p.t)+1), p.t[:k]...), at), p.t[k:]...),
		c:  append(append(append(make([]float64, 0, len(p.t)+1), p.c[:k]...), c), p.c[k:]...),
		at: p.at,
	}, k
}
