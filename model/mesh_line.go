package model

import (
	"fmt"
	"math"
	"sort"
)

// lineMesh puts monotone cubics between the nodes of a line (Fritsch & Butland 1984, SIAM J. Sci. Stat. Comput. 5:300-304), so that nothing
// between two nodes is colder or hotter than both.
type lineMesh struct {
	*lineGrid
	share []float64
}

func newLineMesh(g *lineGrid) *lineMesh {
	m := &lineMesh{lineGrid: g, share: make([]float64, len(g.w))}
	sum := 0.0
	for _, w := range g.w {
		sum += w
	}
	for i, w := range g.w {
		m.share[i] = w / sum
	}
	return m
}

func (m *lineMesh) weights() []float64 { return m.share }

func (m *lineMesh) String() string {
	if m.kind == lumped {
		return "well mixed: one temperature"
	}
	return fmt.Sprintf("%d control volumes", len(m.x))
}

// part finds the layer of a place, m; at a joint the layer nearer the centre.
func (m *lineMesh) partOf(x float64) [2]int {
	last := len(m.parts) - 1
	for _, p := range m.parts[:last] {
		if below(x, m.x[p[1]], bondM) {
			return p
		}
	}
	return m.parts[last]
}

// places are the nodes as places, m: of the two sides of a joint that one that a place on the joint does not belong to lies a little beyond it.
func (m *lineMesh) places() []float64 {
	xs := append([]float64(nil), m.x...)
	for i, p := range m.parts[:len(m.parts)-1] {
		if joint := m.x[p[1]]; below(joint, joint, bondM) {
			xs[m.parts[i+1][0]] += beyondM
		} else {
			xs[p[1]] -= beyondM
		}
	}
	return xs
}

// interval finds the node below a place, m, in a layer, and the layer's first and last node.
func (m *lineMesh) interval(layer [2]int, x float64) (i, lo, hi int) {
	lo, hi = layer[0], layer[1]
	i = lo + sort.SearchFloat64s(m.x[lo:hi+1], x) - 1
	return max(lo, min(i, hi-1)), lo, hi
}

// reads gives the first and last node that the temperature of a place in radii depends on.
func (m *lineMesh) reads(x float64) (first, last int) {
	i, lo, hi := m.interval(m.partOf(x*m.r), x*m.r)
	return max(lo, i-2), min(hi, i+3)
}

func (m *lineMesh) at(c coord, t []float64) float64 {
	if m.kind == lumped {
		return t[0]
	}
	x := c[0] * m.r
	return m.within(m.partOf(x), x, t)
}

// within gives the temperature of a place, m, that lies in a layer.
func (m *lineMesh) within(layer [2]int, x float64, t []float64) float64 {
	i, lo, hi := m.interval(layer, x)
	d := m.x[i+1] - m.x[i]
	y := max(0, min(1, (x-m.x[i])/d))
	steep := func(j int) float64 { return (t[j+1] - t[j]) / (m.x[j+1] - m.x[j]) }
	slope := func(j int) float64 {
		switch {
		case j == lo && lo == 0 && m.kind != planeFull: // the centre of symmetry
			return 0
		case j == lo:
			return endSlope(steep(j), steep(j+1), m.x[j+1]-m.x[j], m.x[j+2]-m.x[j+1])
		case j == hi:
			return endSlope(steep(j-1), steep(j-2), m.x[j]-m.x[j-1], m.x[j-1]-m.x[j-2])
		}
		a, b := steep(j-1), steep(j)
		if a*b <= 0 {
			return 0
		}
		w := (1 + (m.x[j+1]-m.x[j])/(m.x[j+1]-m.x[j-1])) / 3
		return a * b / (w*b + (1-w)*a)
	}
	q := cubic(t[i], t[i+1], slope(i)*d, slope(i+1)*d)
	return q[0] + y*(q[1]+y*(q[2]+y*q[3]))
}

// endSlope is the slope at an end from the steepness of the two intervals beside it, near and next, of lengths a and b, kept monotone.
func endSlope(near, next, a, b float64) float64 {
	s := ((2*a+b)*near - a*next) / (a + b)
	switch {
	case s*near <= 0:
		return 0
	case near*next <= 0 && math.Abs(s) > 3*math.Abs(near):
		return 3 * near
	}
	return s
}

func (m *lineMesh) onto(other mesh) func(here, there []float64) {
	to := other.(*lineMesh)
	if m.kind == lumped {
		return func(here, there []float64) { copy(there, here) }
	}
	return func(here, there []float64) {
		for layer, p := range to.parts {
			for j := p[0]; j <= p[1]; j++ {
				there[j] = m.within(m.parts[layer], to.x[j], here)
			}
		}
	}
}

func (m *lineMesh) fill(nodes, out []float64) { copy(out, nodes) }

func (m *lineMesh) shot(f *marched, c []float64) snapshot { return &marchedShot{f, c} }

func (m *lineMesh) neighbours(j int, do func(k int)) {
	for _, k := range [2]int{j - 1, j + 1} {
		if k >= 0 && k < len(m.x) {
			do(k)
		}
	}
}
