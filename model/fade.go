package model

import "sort"

// fades keep what is left of the modes of every axis at the instants of the scan, half way between them, and before changes of surroundings: whoever
// looks for the least favourable place asks for the course of hundreds of places at these instants, and what is left is the same at all of them.
type fades struct {
	t    []float64    // rising, s
	keep [][3]int     // by instant and axis: how many modes are worth keeping; 0: not worked out yet
	left [3][]float64 // by axis: all modes of each instant
}

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

// at gives what is left of each axis at an instant that is kept, tau after its step began or a medium changed.
func (d *fades) at(i int, axes *[3]*axis, steps *[3]*axisStep, tau float64) (left [3][]float64) {
	if d.keep == nil {
		d.keep = make([][3]int, len(d.t))
		for a, x := range axes {
			d.left[a] = make([]float64, len(d.t)*x.n)
		}
	}
	keep := &d.keep[i]
	for a, x := range axes {
		left[a] = d.left[a][i*x.n:][:x.n]
		if keep[a] == 0 {
			keep[a] = decays(steps[a].rate, tau, left[a])
		}
		left[a] = left[a][:keep[a]]
	}
	return left
}

// on gives what is left of each axis at an instant, as at does where that is kept; kept goes on to it, and e holds what is left elsewhere.
func (d *fades) on(kept *int, t float64, axes *[3]*axis, steps *[3]*axisStep, tau float64, e *[3][maxDegrees]float64) (left [3][]float64) {
	var ok bool
	if *kept, ok = d.find(*kept, t); ok {
		return d.at(*kept, axes, steps, tau)
	}
	for a := range left {
		left[a] = e[a][:decays(steps[a].rate, tau, e[a][:axes[a].n])]
	}
	return left
}
