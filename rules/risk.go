package rules

import (
	"math"
	"slices"

	"slowpoint/model"
)

// A value also leaps at places that lie between two spots and are like neither: a trough that is below From in a few millimetres only breaks a
// time there and nowhere else. The spots show how near their courses come to such a leap, and from the nearest it is followed by steps along the
// axes to where it is least (see closer.go).

// risk fills in how far a course is from each leap of the value to the worse that may be, as a share of how far is looked at; +Inf: no leap is near.
type risk struct {
	leaps int // how many may be
	fill  func(p path, by []float64)
}

// leapt is by what share of the value at a spot it has leapt.
const leapt = 0.05

// riskK is how near to an end of a region a turn of a spot's course is looked at, K.
const riskK = 0.8

// turns says which turns of a course matter: those within a region that point out of it (a period may break in two), those beyond it that point
// farther out (two periods may join), and those beyond it that point towards it (another period may begin).
type turns struct{ breaking, joining, another bool }

// risk is how near the turns of a course come to an end of a region that they do not pass: those of each step by themselves, since they are least at
// unlike places.
func (v *view) risk(w turns, ivs []interval, r region) risk {
	spans := v.h.Spans
	return risk{len(spans), func(p path, by []float64) {
		for n := range by {
			by[n] = math.Inf(1)
		}
		for _, iv := range ivs {
			q, n := p.in(iv), 0
			for i := 1; i+1 < len(q.c); i++ {
				for n+1 < len(spans) && q.t[i] > spans[n].EndS {
					n++
				}
				a, c, b := q.c[i-1], q.c[i], q.c[i+1]
				if low, high := c <= a && c < b, c >= a && c > b; low || high {
					by[n] = math.Min(by[n], w.off(r, c, low)/riskK)
				}
			}
		}
	}}
}

// off is how near a turn at c (°C) comes to an end of a region, K.
func (w turns) off(r region, c float64, low bool) float64 {
	least := math.Inf(1)
	for _, end := range []float64{r.lo, r.hi} {
		out := end == r.lo && c < r.lo || end == r.hi && c > r.hi
		outwards := (end == r.lo) == low // it points out of the region there
		if w.breaking && r.holds(c) && outwards || w.joining && out && outwards || w.another && out && !outwards {
			least = math.Min(least, math.Abs(c-end))
		}
	}
	return least
}

// tooShort is the risk that the period in which a place is in a region for s seconds is too short: how much longer it is.
func tooShort(r region, start func(p path) (from float64, part path, ok bool), s float64) risk {
	const share = 0.25 // of s
	return risk{1, func(p path, by []float64) {
		by[0] = math.Inf(1)
		from, q, ok := start(p)
		if !ok || s == 0 {
			return
		}
		done, ok := q.reach(r, from, s)
		if !ok {
			return
		}
		for i := 0; i+1 < len(q.t); i++ {
			if q.t[i+1] >= done && r.holds(q.c[i]) && !r.holds(q.c[i+1]) {
				by[0] = (q.cross(i, r.edge(q.c[i+1])) - done) / (share * s)
				return
			}
		}
	}}
}

// risky finds the places at which the risks of a question are least, at a tilt, where that is not far from a leap.
func (v *view) risky(s scope, q question, t tilt) []model.Axes {
	if q.risks == nil || v.h.Recorded || s.surfaceOnly || len(s.spots) == 0 || !v.gridded() {
		return nil
	}
	times, rows := v.c.ranking(len(s.spots))
	var found []model.Axes
	for _, of := range q.risks(t) {
		nearest, by := make([]int, of.leaps), make([]float64, of.leaps)
		least := slices.Repeat([]float64{1}, of.leaps)
		for _, i := range s.spots {
			of.fill(path{t: times, c: rows[i]}, by)
			for n, r := range by {
				if r < least[n] {
					nearest[n], least[n] = i, r
				}
			}
		}
		for n, i := range nearest {
			if least[n] < 1 {
				found = append(found, v.untilLeapt(q, t, i, func(p path) float64 { of.fill(p, by); return by[n] }))
			}
		}
	}
	return found
}

// untilLeapt goes from a spot along the axes to where a risk is least, or on from where the value has leapt.
func (v *view) untilLeapt(q question, t tilt, spot int, of func(p path) float64) model.Axes {
	base := q.measure(path{t: v.c.times, c: v.c.rows[spot]}, t)
	return v.stepwise(func(p path, t tilt) outcome {
		o := q.measure(p, t)
		if rank(o.verdict) > rank(base.verdict) || o.bad-base.bad > leapt*math.Abs(base.bad) {
			o.bad += neverBad * neverBad
			return o
		}
		return outcome{verdict: base.verdict, bad: -of(p)}
	}, v.c.spots[spot].Axes, t)
}
