package model

import (
	"fmt"
	"math"
)

// roundMesh is a spheroid in the coordinates of its map, in which fields that are smooth in space are polynomials in ρ² and μ².
type roundMesh struct {
	spaceMesh
	rr, rm, mm []float64 // by node: share of the volume times the squared gradients of rho, their product, of mu, 1/m²
	face       []float64 // by node on the surface: what a flow adds to the rate, 1/m
	fast       float64   // largest rate of decay, 1/m²
	ur, um     []float64
}

// newRoundMesh makes a mesh of nr × nm nodes.
func newRoundMesh(ball *spheroidMap, nr, nm int) *roundMesh {
	a, b := ball.a, ball.b
	rho, mu := collocationOf(spherical, nr, 0), collocationOf(planeHalf, nm, 0)
	most := 0.0
	for _, c := range mu.x {
		most = max(most, ball.surfaceShare(c)/rho.w[nr-1])
	}
	axes := [3]*spaceAxis{
		{kind: spherical, n: nr, x: rho.x, w: rho.w, poly: rho, face: [2]float64{0, most}},
		{kind: planeHalf, n: nm, x: mu.x, w: mu.w, poly: mu},
		{kind: lumped, n: 1, x: []float64{0}, w: []float64{1}, k: []float64{0}},
	}
	m := &roundMesh{spaceMesh: *newSpaceMesh(axes)}
	for i, r := range rho.x {
		for j, c := range mu.x {
			w, s2 := m.w[i*nm+j], 1-c*c
			m.rr = append(m.rr, w*(c*c/(a*a)+s2/(b*b)))
			m.rm = append(m.rm, w*c*s2/r*(1/(a*a)-1/(b*b)))
			m.mm = append(m.mm, w*s2/(r*r)*(s2/(a*a)+c*c/(b*b)))
		}
	}
	for _, c := range mu.x { // area element over volume, by the share of the node
		m.face = append(m.face, ball.surfaceShare(c)/rho.w[nr-1])
	}
	m.ur, m.um = make([]float64, m.n), make([]float64, m.n)
	m.fast = m.fastest()
	return m
}

// conduct fills out with the rates of heat contents by conduction from Kirchhoff integrals u.
func (m *roundMesh) conduct(u, out []float64) {
	rho, mu := m.axes[0].poly, m.axes[1].poly
	nr, nm := rho.n, mu.n
	clear(m.ur)
	clear(m.um)
	for i := 0; i < nr; i++ {
		addColumns(m.ur[i*nm:(i+1)*nm], u, nm, rho.d[i*nr:(i+1)*nr])
		addRows(m.um[i*nm:(i+1)*nm], mu.d, nm, u[i*nm:(i+1)*nm])
	}
	clear(out)
	for i, r := range m.ur {
		c := m.um[i]
		m.ur[i] = m.rr[i]*r + m.rm[i]*c
		m.um[i] = m.rm[i]*r + m.mm[i]*c
	}
	for i := 0; i < nr; i++ { // the transposes
		for j := 0; j < nr; j++ {
			add(out[j*nm:(j+1)*nm], -rho.d[i*nr+j], m.ur[i*nm:(i+1)*nm])
		}
		addNegative(out[i*nm:(i+1)*nm], mu.d, nm, m.um[i*nm:(i+1)*nm])
	}
	for i := range out {
		out[i] /= m.w[i]
	}
}

// addNegative takes from out the product of v with the rows of m, n wide.
func addNegative(out, m []float64, n int, v []float64) {
	for k, f := range v {
		add(out, -f, m[k*n:(k+1)*n])
	}
}

// fastest finds the largest rate of decay by repeated conduction, and puts 15 % on it.
func (m *roundMesh) fastest() float64 {
	v, next := make([]float64, m.n), make([]float64, m.n)
	for i := range v {
		v[i] = float64(1-2*(i%2)) * (1 + float64(i%7)/7)
	}
	rate := 0.0
	for range 80 {
		m.conduct(v, next)
		top, bottom := 0.0, 0.0
		for i := range v {
			top -= m.w[i] * v[i] * next[i]
			bottom += m.w[i] * v[i] * v[i]
		}
		rate = top / bottom
		for i := range v {
			v[i] = next[i] / math.Sqrt(bottom) / rate
		}
	}
	return 1.15 * rate
}

func (m *roundMesh) String() string {
	return fmt.Sprintf("%d × %d polynomials through the food", m.axes[0].n, m.axes[1].n)
}

// layRound lays out a spheroid.
func (s *solver) layRound(f *marched, l *law, e effort) {
	m := newRoundMesh(s.ball, s.smoothNodes(0, e), s.smoothNodes(1, e))
	march := newSpaceMarch(m.axes, l, s.product.StartC)
	march.round = m
	f.state, f.mesh = march, m
	nd := &nodes{x: [3][]float64{{0}, {0}, {0}}, phi: [3][]float64{{1}, {1}, {1}}}
	m.axes[0].bodyNodes(nd, 0, s.used)
	m.axes[1].bodyNodes(nd, 1, s.used)
	m.seenAt(nd)
	f.body = newBody(body{kinds: [3]axisKind{spherical, planeHalf}, radii: s.radii, ball: s.ball}, nd)
}
