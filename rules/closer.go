package rules

import (
	"math"
	"sort"

	"slowpoint/model"
)

// The value of a limit over the places has kinks and leaps: where the deciding row, period or window changes. A search that follows slopes may stop
// short of the least favourable place by a few per cent. Where that could decide, places are looked for once more by steps along the axes,
// each half as long as the last, from the worst candidate and from the worst spots of the scan: no slope is asked for.
const (
	closerShare = 0.06 // how near to what is required a value is, of it, that is looked at closer
	closerSpots = 4    // from how many spots of the scan
	closerM     = 2e-6 // the shortest step, m
)

// closer adds what such a look finds; nothing where the worst candidate is far from what is required, or missed already.
func (v *view) closer(s scope, q question, cs []candidate) []model.Axes {
	if v.h.Recorded || s.surfaceOnly || len(s.spots) == 0 || math.IsNaN(q.need) {
		return nil
	}
	best := worstOfAll(cs)
	if o := cs[best].nominal; o.verdict == NotMet || o.verdict == NotApplicable || !(math.Abs(o.value-q.need) <= closerShare*math.Abs(q.need)) {
		return nil
	}
	if !v.gridded() {
		return nil
	}
	starts := []model.Axes{v.h.Axes(cs[best].place)}
	spots := append([]int(nil), s.spots...)
	by := make([]outcome, len(v.c.spots))
	for _, i := range spots {
		by[i] = q.measure(path{t: v.c.times, c: v.c.rows[i]}, tilt{rank: true})
	}
	sort.SliceStable(spots, func(a, b int) bool { return worse(by[spots[a]], by[spots[b]]) })
	for _, i := range spots[:min(closerSpots, len(spots))] {
		starts = append(starts, v.c.spots[i].Axes)
	}
	var found []model.Axes
	for _, x := range starts {
		found = append(found, v.stepwise(q.measure, x, tilt{rank: true}))
	}
	return found
}

// gridded tells whether the spots are a grid, where two layers meet with two in one place, and fills the marks.
func (v *view) gridded() bool {
	v.c.neighbours()
	return len(v.c.marks[0])*len(v.c.marks[1])*len(v.c.marks[2]) <= len(v.c.spots)
}

// stepwise goes from a place to less favourable ones at a tilt, along one axis at a time.
func (v *view) stepwise(m measure, x model.Axes, t tilt) model.Axes {
	score := func(x model.Axes) outcome { return m(v.exactly(x), t) }
	best := score(x)
	steps := model.Axes{}
	for axis, marks := range v.c.marks {
		if last := len(marks) - 1; last > 0 {
			n := min(max(sort.SearchFloat64s(marks, x[axis]), 1), last)
			steps[axis] = marks[n] - marks[n-1]
		}
	}
	for share := 0.5; share*max(steps[0], steps[1], steps[2]) > closerM; share /= 2 {
		for moved := true; moved; {
			moved = false
			for axis, d := range steps {
				for _, sign := range []float64{-1, 1} {
					y := x
					if y[axis] = v.c.inside(axis, x[axis]+sign*share*d); y[axis] == x[axis] {
						continue
					}
					if o := score(y); worse(o, best) {
						x, best, moved = y, o, true
					}
				}
			}
		}
	}
	return x
}

// exactly is the course of a place at the instants of the scan, exact wherever it is asked between them. It is remembered: steps come back to where they
// were, and limits look at the same places.
func (v *view) exactly(x model.Axes) path {
	at := v.h.PlaceAt(x)
	k := v.c.known(at)
	if k.scan == nil {
		k.scan = make([]float64, len(v.c.times))
		v.h.Course(at, v.c.times, k.scan)
	}
	return path{t: v.c.times, c: k.scan, at: k.at}
}
