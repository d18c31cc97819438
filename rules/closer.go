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
func (v *view) closer(s scope, q question, cs []candidate) []coordinates {
	if v.h.Recorded || s.surfaceOnly || len(s.spots) == 0 || math.IsNaN(q.need) {
		return nil
	}
	best := 0
	for i := range cs {
		if worse(cs[i].nominal, cs[best].nominal) {
			best = i
		}
	}
	o := cs[best].nominal
	if o.verdict == NotMet || o.verdict == NotApplicable || !(math.Abs(o.value-q.need) <= closerShare*math.Abs(q.need)) {
		return nil
	}
	v.c.neighbours() // fills the marks
	if n := len(v.c.marks[0]) * len(v.c.marks[1]) * len(v.c.marks[2]); n != len(v.c.spots) && !v.oval() {
		return nil // no grid
	}
	starts := []coordinates{coordinatesOf(cs[best].place)}
	spots := append([]int(nil), s.spots...)
	by := make([]outcome, len(v.c.spots))
	for _, i := range spots {
		by[i] = q.measure(path{t: v.c.times, c: v.c.rows[i]}, tilt{rank: true})
	}
	sort.SliceStable(spots, func(a, b int) bool { return worse(by[spots[a]], by[spots[b]]) })
	for _, i := range spots[:min(closerSpots, len(spots))] {
		starts = append(starts, coordinatesOf(v.c.spots[i].Place))
	}
	var found []coordinates
	for _, x := range starts {
		found = append(found, v.stepwise(q, x))
	}
	return found
}

// stepwise goes from a place to less favourable ones, along one axis at a time.
func (v *view) stepwise(q question, x coordinates) coordinates {
	score := func(x coordinates) outcome { return q.measure(v.exactly(x), tilt{rank: true}) }
	best := score(x)
	steps := coordinates{}
	for axis, marks := range v.c.marks {
		if last := len(marks) - 1; last > 0 {
			n := min(max(sort.SearchFloat64s(marks, x[axis]), 1), last)
			steps[axis] = marks[n] - marks[n-1]
		}
	}
	if v.oval() { // its spots are no grid
		steps = coordinates{v.h.Product.Size.ThicknessM / 40, v.h.Product.Size.DiameterM / 40}
	}
	for share := 0.5; share*max(steps[0], steps[1], steps[2]) > closerM; share /= 2 {
		for moved := true; moved; {
			moved = false
			for axis, d := range steps {
				for _, sign := range []float64{-1, 1} {
					y := x
					if y[axis] = v.keptIn(x, axis, x[axis]+sign*share*d); y[axis] == x[axis] {
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

// oval tells whether the food is a spheroid, whose outline bends in both of its directions.
func (v *view) oval() bool { return v.h.Product != nil && v.h.Product.Shape == model.Spheroid }

// keptIn is the coordinate within the food that is nearest to one on the line along an axis through a place.
func (v *view) keptIn(x coordinates, axis int, along float64) float64 {
	along = v.c.inside(axis, along)
	if !v.oval() || axis > 1 {
		return along
	}
	half := coordinates{v.h.Product.Size.ThicknessM / 2, v.h.Product.Size.DiameterM / 2}
	other := x[1-axis] / half[1-axis]
	reach := half[axis] * math.Sqrt(math.Max(0, 1-other*other))
	return math.Max(-reach, math.Min(reach, along))
}

// exactly is the course of a place at the instants of the scan, exact wherever it is asked between them.
func (v *view) exactly(x coordinates) path {
	at := x.place()
	p := path{t: v.c.times, c: make([]float64, len(v.c.times)), at: func(t float64) float64 { return v.h.At(at, t) }}
	v.h.Course(at, p.t, p.c)
	return p
}
