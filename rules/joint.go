package rules

import (
	"math"
	"sort"

	"slowpoint/model"
)

// Two periods in a region join at the places that do not quite leave it between them: a place whose peak just reaches To of a band spends the
// whole of it within, and a time that is needed in a row breaks in two at a place whose trough just passes From. On the one side of that edge
// a time is smooth, on the other it changes with an infinite slope or by a leap. At a place that comes into the region just as the stages begin it
// has a kink. So the least favourable lies at such edges as often as anywhere, and a search that follows slopes stops before it.

// jointM is how near to an edge a place that joins two periods is looked for, m. The time is smooth on its side.
const jointM = 1e-6

// trait tells courses apart that lie on either side of such an edge; traitless is one that has no part in any.
type trait func(p path) int

const traitless = -1

// joint is what an edge between places of unlike traits needs.
type joint struct {
	trait   trait
	nth     int // among the traits of the question
	inner   int // the trait at the inner end
	measure measure
}

// periods is the trait of how many periods a course spends in a region, and of whether it is in it as each of the intervals begins and ends.
func periods(ivs []interval, r region) trait {
	return func(p path) int {
		n := p.periods(ivs, r)
		for _, iv := range ivs {
			q := p.in(iv)
			for _, c := range []float64{q.c[0], q.c[len(q.c)-1]} {
				if n *= 2; r.holds(c) {
					n++
				}
			}
		}
		return n
	}
}

// jointed is what a look at the edges found: places, and the worst of them with its edge.
type jointed struct {
	places []model.Axes
	worst  model.Axes
	by     edge
	bad    float64 // −Inf: no edge was found
}

// joints finds the places at the edges between those of unlike traits, at a tilt: the least favourable between neighbouring spots along the
// axes, so many each way. Edges that are plainly more favourable than the worst candidate are left out.
func (v *view) joints(s scope, q question, cs []candidate, t tilt, eachWay int) jointed {
	found := jointed{bad: math.Inf(-1)}
	if q.traits == nil || v.h.Recorded || len(s.spots) == 0 {
		return found
	}
	t.rank = true
	for _, e := range v.parted(s, q, cs, t, eachWay) {
		if x, ok := v.follow(e, e.in); ok {
			found.places = append(found.places, x)
			if bad := q.measure(v.path(v.h.PlaceAt(x)), t).bad; bad > found.bad {
				found.worst, found.by, found.bad = x, e, bad
			}
		}
	}
	return found
}

// jointsAround finds the places at edges as calculated, the worst moved along its edge, and at both ends of the error, between which that edge moves.
func (v *view) jointsAround(s scope, q question, cs []candidate) []model.Axes {
	found := v.joints(s, q, cs, tilt{}, mostEdges)
	places := found.places
	here := !math.IsInf(found.bad, -1)
	if here {
		found.worst = v.slide(found.by, found.worst, q, s.surfaceOnly)
		places = append(places, found.worst)
	}
	if v.errK == 0 {
		return places
	}
	for _, t := range []tilt{v.unfavourable(), {errK: -v.errK}} {
		if !here {
			places = append(places, v.joints(s, q, cs, t, 1).places...)
			continue
		}
		e := found.by
		t.rank = true
		e.t, e.joint = t, &joint{trait: q.traits(t)[e.joint.nth], nth: e.joint.nth, inner: e.joint.inner, measure: q.measure}
		if x, ok := v.follow(e, found.worst); ok {
			places = append(places, x)
		} else { // the traits are others there
			places = append(places, v.joints(s, q, cs, t, 1).places...)
		}
	}
	return places
}

// parted lists the pairs of neighbours of unlike traits, the worst by their blended courses first.
func (v *view) parted(s scope, q question, cs []candidate, t tilt, eachWay int) []edge {
	times, rows := v.c.ranking(len(s.spots))
	bar := outcome{verdict: NotApplicable, bad: math.Inf(-1)}
	for _, c := range cs {
		if o := q.measure(c.path, t); worse(o, bar) {
			bar = o
		}
	}
	bar.bad -= plainly * math.Abs(bar.bad)
	mixed := path{t: times, c: make([]float64, len(times))}
	blend := func(i, k int, share float64) path { // of i
		for n := range mixed.c {
			mixed.c[n] = rows[k][n] + share*(rows[i][n]-rows[k][n])
		}
		return mixed
	}
	var es []edge
	traits := make([]int, len(v.c.spots))
	for nth, of := range q.traits(t) {
		some := map[int]bool{}
		for i := range traits {
			traits[i] = traitless
		}
		for _, i := range s.spots {
			if traits[i] = of(path{t: times, c: rows[i]}); traits[i] != traitless {
				some[traits[i]] = true
			}
		}
		if len(some) < 2 {
			continue
		}
		for _, pair := range v.c.neighbours() {
			i, k := pair.a, pair.b
			if traits[i] == traitless || traits[k] == traitless || traits[i] == traits[k] {
				continue
			}
			lo, hi := 0.0, 1.0
			for range 6 {
				if m := (lo + hi) / 2; of(blend(i, k, m)) == traits[i] {
					hi = m
				} else {
					lo = m
				}
			}
			e := edge{in: v.c.spots[i].Axes, out: v.c.spots[k].Axes, axis: pair.axis, t: t,
				joint: &joint{trait: of, nth: nth, inner: traits[i], measure: q.measure}}
			e.first = q.measure(blend(i, k, hi), t)
			if o := q.measure(blend(i, k, lo), t); worse(o, e.first) {
				e.first = o
			}
			if !worse(bar, e.first) {
				es = append(es, e)
			}
		}
	}
	sort.SliceStable(es, func(a, b int) bool { return worse(es[a].first, es[b].first) })
	return fewEachWay(es, eachWay)
}

// followJoint finds the place of such an edge on the line along its axis through a place, by halves, and gives the less favourable of its two
// sides. It looks further out on either side where the two neighbours do not bracket the edge there; ok is false where the line does
// not cross it within the food.
func (v *view) followJoint(e edge, through model.Axes) (x model.Axes, ok bool) {
	on := func(along float64) model.Axes {
		through[e.axis] = along
		return through
	}
	inner := func(along float64) bool { return e.joint.trait(v.exactly(on(along))) == e.joint.inner }
	a, b := e.in[e.axis], e.out[e.axis]
	in, beyond := inner(a), inner(b)
	for n := 0; n < 4 && in == beyond; n++ {
		if d := b - a; in {
			a, b = b, v.c.inside(e.axis, b+d)
			beyond = inner(b)
		} else {
			a, b = v.c.inside(e.axis, a-d), a
			in = inner(a)
		}
	}
	if in == beyond {
		return x, false
	}
	for math.Abs(b-a) > jointM {
		if m := (a + b) / 2; inner(m) == in {
			a = m
		} else {
			b = m
		}
	}
	x = on(a)
	if y := on(b); worse(e.joint.measure(v.path(v.h.PlaceAt(y)), e.t), e.joint.measure(v.path(v.h.PlaceAt(x)), e.t)) {
		x = y
	}
	return x, true
}
