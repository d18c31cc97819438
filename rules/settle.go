package rules

import (
	"math"
	"slices"
	"sort"

	"slowpoint/model"
)

// What a first look finds is the least favourable place of courses at few instants: where the value is far from what is required, it could be a per
// cent or some hundredths of a kelvin too favourable. So the place that decides is moved at last by courses at every instant of the scan: a
// parabola along each axis, ever finer, until nothing more is to be had. The value that is told is then that of the worst place.
const (
	settledShare = 5e-4 // of the value: less is no gain
	settledK     = 1e-3 // the same of a temperature, K
	settleRounds = 5
	settleFiner  = 4  // how much shorter the steps of the next round are
	flatGains    = 20 // by less than so many times no gain the value changes over a step where a kink beside a parabola does not matter
)

// gain is how much less favourable the value of b is than that of a, in units of what counts as no gain.
func (q question) gain(a, b outcome) float64 {
	switch {
	case rank(b.verdict) != rank(a.verdict) || math.IsNaN(a.value) || math.IsNaN(b.value):
		return math.Inf(1)
	case q.unit == "°C":
		return math.Abs(b.value-a.value) / settledK
	}
	return math.Abs(b.value-a.value) / (settledShare*math.Abs(a.value) + 1e-12)
}

// settled gives where the least favourable candidate comes to by exact courses, where that is less favourable.
func (v *view) settled(s scope, q question, cs []candidate) []model.Axes {
	if v.h.Recorded || v.brief || len(s.spots) == 0 || !v.gridded() {
		return nil
	}
	worst := cs[worstOfAll(cs)]
	if worst.edge != nil || worst.nominal.verdict == NotApplicable || math.IsNaN(worst.nominal.value) {
		return nil
	}
	at := v.h.Axes(worst.place)
	if v.alone(q, at) {
		return nil
	}
	x := v.settle(q, at, s.surfaceOnly)
	if x == at {
		return nil
	}
	return []model.Axes{x}
}

// alone tells whether a place is a spot of the scan at an end of each axis, beside which the spots are plainly more favourable.
func (v *view) alone(q question, x model.Axes) bool {
	at := slices.IndexFunc(v.c.spots, func(s model.Spot) bool { return s.Axes == x })
	if at < 0 {
		return false
	}
	for axis, marks := range v.c.marks {
		if last := len(marks) - 1; last > 0 && x[axis] != marks[0] && x[axis] != marks[last] {
			return false
		}
	}
	here := v.scanned(q, at)
	for _, pair := range v.c.neighbours() {
		if pair.a != at && pair.b != at {
			continue
		}
		if o := v.scanned(q, pair.a+pair.b-at); worse(o, here) || q.gain(here, o) < 1 {
			return false
		}
	}
	return true
}

// scanned is what the scanned course of a spot gives.
func (v *view) scanned(q question, spot int) outcome {
	return q.measure(path{t: v.c.times, c: v.c.rows[spot]}, tilt{rank: true})
}

// settle moves a place to the least favourable one near it.
func (v *view) settle(q question, x model.Axes, surfaceOnly bool) model.Axes {
	score := func(x model.Axes) outcome {
		p := v.exactly(x)
		if q.unit != "°C" { // a time is hardly moved by what the lines between the instants leave out, a peak is
			p.at = nil
		}
		return q.measure(p, tilt{rank: true})
	}
	best := score(x)
	start, first := x, best
	var steps model.Axes
	for axis, marks := range v.c.marks {
		last := len(marks) - 1
		if last == 0 || surfaceOnly && (x[axis] == marks[last] || x[axis] == marks[0] && marks[0] < 0) {
			continue
		}
		n := min(max(sort.SearchFloat64s(marks, x[axis]), 1), last)
		steps[axis] = (marks[n] - marks[n-1]) / 2
	}
	for round := range settleRounds {
		from, before, steep := x, best, 0.0
		for axis, d := range steps {
			if d == 0 {
				continue
			}
			at, here := x[axis], best
			try := func(along float64) outcome {
				y := x
				if y[axis] = v.c.inside(axis, along); y[axis] != along {
					return none(NotApplicable, "")
				}
				o := score(y)
				if worse(o, best) {
					x, best = y, o
				}
				return o
			}
			left, right := try(at-d), try(at+d)
			for _, o := range []outcome{left, right} {
				if o.verdict != NotApplicable {
					steep = math.Max(steep, q.gain(here, o))
				}
			}
			if bend := left.bad + right.bad - 2*here.bad; left.verdict != NotApplicable && right.verdict != NotApplicable && bend < 0 {
				if step := d / 2 * (left.bad - right.bad) / bend; math.Abs(step) > d/20 && math.Abs(step) < 2*d {
					try(at + step)
				}
			}
			steps[axis] /= settleFiner
		}
		if q.gain(before, best) < 1 {
			if round > 0 || steep < flatGains {
				break
			}
			continue
		}
		for axis := range x { // on the way that it went: along a ridge
			from[axis] = v.c.inside(axis, 2*x[axis]-from[axis])
		}
		if o := score(from); worse(o, best) {
			x, best = from, o
		}
	}
	if q.gain(first, best) < 1 {
		return start
	}
	return x
}
