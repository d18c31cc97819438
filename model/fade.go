package model

import "sort"

// fades keep what is left of the modes of every axis at the instants of the scan, half way between them, and before changes of surroundings: whoever
// looks for the least favourable place asks for the course of hundreds of places at these instants, and what is left is the same at all of them.
type fades struct {
	t    []float64    // rising, s
	keep [][3]int     // by instant and axis: how many modes are worth keeping; 0: not worked out yet
	left [3][]float64 // by axis: all modes of each instant

	between [3][maxDegrees]float64 // by axis: what is left at the last instant that is not kept
}

// whole is what is left along an axis without extent.
var whole = []float64{1}

// remembers is a field that keeps its fades.
type remembers interface{ remember(times []float64) }

// start begins to keep the fades of rising instants.
func (d *fades) start(times []float64) { *d = fades{t: times} }

// remembered are the instants of a scan at which its field keeps its fades.
func (h *History) remembered(times []float64) []float64 {
	all := make([]float64, 0, 2*len(times)+4*len(h.settling))
	for i, t := range times {
		if i > 0 {
			all = append(all, (times[i-1]+t)/2)
		}
		all = append(all, t)
	}
	for i := range h.settling {
		all = append(all, h.settling[i].before()...)
	}
	return rising(all)
}

// first is where to look for an instant, and for those after it.
func (d *fades) first(t float64) int { return sort.SearchFloat64s(d.t, t) }

// find goes on from a place to an instant, and tells whether it is kept.
func (d *fades) find(from int, t float64) (at int, ok bool) {
	for from < len(d.t) && d.t[from] < t {
		from++
	}
	return from, from < len(d.t) && d.t[from] == t
}

// along gives what is left of an axis at an instant that is kept, tau after its step began or a medium changed.
func (d *fades) along(a, i int, x *axis, step *axisStep, tau float64) []float64 {
	if x.kind == lumped {
		return whole
	}
	if d.keep == nil {
		d.keep = make([][3]int, len(d.t))
	}
	if d.left[a] == nil {
		d.left[a] = make([]float64, len(d.t)*x.n)
	}
	left, keep := d.left[a][i*x.n:][:x.n], &d.keep[i][a]
	if *keep == 0 {
		*keep = decays(step.rate, tau, left)
	}
	return left[:*keep]
}

// elsewhere gives what is left of an axis at an instant that is not kept, until it is asked for another.
func (d *fades) elsewhere(a int, x *axis, step *axisStep, tau float64) []float64 {
	if x.kind == lumped {
		return whole
	}
	e := d.between[a][:x.n]
	return e[:decays(step.rate, tau, e)]
}

// one gives what is left of the first axis at an instant; kept goes on to it.
func (d *fades) one(kept *int, t float64, x *axis, step *axisStep, tau float64) []float64 {
	var ok bool
	if *kept, ok = d.find(*kept, t); ok {
		return d.along(0, *kept, x, step, tau)
	}
	return d.elsewhere(0, x, step, tau)
}

// on gives what is left of each axis at an instant; kept goes on to it.
func (d *fades) on(kept *int, t float64, axes *[3]*axis, steps *[3]*axisStep, tau float64) (left [3][]float64) {
	var ok bool
	*kept, ok = d.find(*kept, t)
	for a, x := range axes {
		if ok {
			left[a] = d.along(a, *kept, x, steps[a], tau)
		} else {
			left[a] = d.elsewhere(a, x, steps[a], tau)
		}
	}
	return left
}
