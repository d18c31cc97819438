package rules

import (
	"math"

	"slowpoint/model"
)

// A value also leaps at places that lie between two spots and are like neither: a trough that is below From in a few millimetres only breaks a
// time there and nowhere else. The spots show how near their courses come to such a leap, and from the nearest it is followed by steps along the
// axes to where it is least (see closer.go).

// risk is how far a course is from a leap of the value to the worse, by how far is looked at; +Inf: there is none; 0 or less: it has leapt.
type risk func(p path) float64

// leapt is by what share of the value at a spot it has leapt.
const leapt = 0.05

// riskK is how near to an end of a region a turn of a spot's course is looked at, K.
const riskK = 0.8

// turns says which turns of a course matter: those within a region that point out of it (a period may break in two), those beyond it that point
// farther out (two periods may join), and those beyond it that point towards it (another period may begin).
type turns struct{ breaking, joining, another bool }

// risk is how near the turns of a course come to an end of a region that they do not pass.
func (w turns) risk(ivs []interval, r region) risk {
	return func(p path) float64 {
		least := math.Inf(1)
		for _, iv := range ivs {
			q := p.in(iv)
			for i := 1; i+1 < len(q.c); i++ {
				a, c, b := q.c[i-1], q.c[i], q.c[i+1]
				low, high := c <= a && c < b, c >= a && c > b
				if !low && !high {
					continue
				}
				for _, end := range []float64{r.lo, r.hi} {
					off := math.Abs(c - end)
					if !(off < least) {
						continue
					}
					out := end == r.lo && c < r.lo || end == r.hi && c > r.hi
					outwards := (end == r.lo) == low // it points out of the region there
					if w.breaking && r.holds(c) && outwards || w.joining && out && outwards || w.another && out && !outwards {
						least = off
					}
				}
			}
		}
		return least / riskK
	}
}

// tooShort is the risk that the period that lasts s seconds is too short: how much longer the periods are that are long enough.
func tooShort(r region, start func(p path) (from float64, part path, ok bool), s float64) risk {
	const share = 0.25 // of s
	return func(p path) float64 {
		from, q, ok := start(p)
		if !ok || s == 0 {
			return math.Inf(1)
		}
		done, ok := q.reach(r, from, s)
		if !ok {
			return math.Inf(1)
		}
		for i := range q.t {
			if q.t[i] >= done-s && i+1 < len(q.t) && r.holds(q.c[i]) && !r.holds(q.c[i+1]) {
				return (q.cross(i, r.edge(q.c[i+1])) - done) / (share * s)
			}
		}
		return math.Inf(1)
	}
}

// risky finds the places at which the risks of a question are least, at a tilt, where that is not far from a leap.
func (v *view) risky(s scope, q question, t tilt) []model.Axes {
	if q.risks == nil || v.h.Recorded || s.surfaceOnly || len(s.spots) == 0 || !v.gridded() {
		return nil
	}
	var found []model.Axes
	for _, of := range q.risks(t) {
		best, least := -1, 1.0
		for _, i := range s.spots {
			if r := of(path{t: v.c.times, c: v.c.rows[i]}); r < least && r > 0 {
				best, least = i, r
			}
		}
		if best < 0 {
			continue
		}
		base := q.measure(path{t: v.c.times, c: v.c.rows[best]}, t)
		x := v.stepwise(func(p path, t tilt) outcome {
			o := q.measure(p, t)
			if rank(o.verdict) > rank(base.verdict) || o.bad-base.bad > leapt*math.Abs(base.bad) {
				o.bad += neverBad * neverBad
				return o
			}
			return outcome{verdict: base.verdict, bad: -of(p)}
		}, v.c.spots[best].Axes, t)
		found = append(found, x)
	}
	return found
}
