package model

import (
	"fmt"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// spaceMesh is what stands between the nodes of a spaceMarch: polynomials, or monotone cubics along each axis in turn.
type spaceMesh struct {
	axes [3]*spaceAxis
	n    int
	w    []float64
	body [3][]float64 // by axis of polynomials: the weights of its nodes at those of the body
	x, y []float64
}

func newSpaceMesh(axes [3]*spaceAxis) *spaceMesh {
	m := &spaceMesh{axes: axes, n: axes[0].n * axes[1].n * axes[2].n}
	for _, x := range axes[0].w {
		for _, y := range axes[1].w {
			for _, z := range axes[2].w {
				m.w = append(m.w, x*y*z)
			}
		}
	}
	return m
}

// seenAt makes ready to fill the nodes of a body.
func (m *spaceMesh) seenAt(nd *nodes) {
	for a, ax := range m.axes {
		m.body[a] = make([]float64, len(nd.x[a])*ax.n)
		for g, x := range nd.x[a] {
			ax.valueAt(x, m.body[a][g*ax.n:(g+1)*ax.n])
		}
	}
	n, last := m.axes[0].n, len(nd.x[2])
	m.x, m.y = make([]float64, n*m.axes[1].n*last), make([]float64, n*len(nd.x[1])*last)
}

// byAxes applies a matrix by axis to n[0]×n[1]×n[2] numbers, by way of x and y. It goes from the last axis to the first: each comes first in
// what it leaves, so that after the first all is in order again.
func byAxes(by *[3][]float64, n [3]int, in, x, y, out []float64) {
	used := 1
	for used < 3 && n[used] > 1 {
		used++
	}
	for a := used - 1; a >= 0; a-- {
		to := x
		switch a {
		case 0:
			to = out
		case 1:
			to = y
		}
		rows, lines := len(by[a])/n[a], len(in)/n[a]
		to = to[:rows*lines]
		if lines == 1 {
			clear(to)
			addRows(to, by[a], n[a], in)
			return
		}
		all := blas64.General{Rows: lines, Cols: n[a], Stride: n[a], Data: in}
		for i := 0; i < rows; i++ {
			blas64.Gemv(blas.NoTrans, 1, all, blas64.Vector{N: n[a], Inc: 1, Data: by[a][i*n[a] : (i+1)*n[a]]}, 0, blas64.Vector{N: lines, Inc: 1, Data: to[i*lines : (i+1)*lines]})
		}
		in = to
	}
}

func (m *spaceMesh) weights() []float64 { return m.w }

func (m *spaceMesh) String() string {
	words := fmt.Sprint(m.axes[0].n)
	for _, a := range m.axes[1:] {
		if a.n > 1 {
			words += fmt.Sprintf(" × %d", a.n)
		}
	}
	if m.axes[0].poly != nil {
		return words + " polynomials through the food"
	}
	return words + " control volumes"
}

// at gives the temperature of a place from those of the nodes.
func (m *spaceMesh) at(x coord, c []float64) float64 {
	if m.axes[0].poly == nil {
		return m.pieces(x, c)
	}
	n1, n2 := m.axes[1].n, m.axes[2].n
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		ax.valueAt(x[a], v[a][:ax.n])
	}
	sum, i := 0.0, 0
	for _, p := range v[0][:m.axes[0].n] {
		for _, q := range v[1][:n1] {
			line := 0.0
			for k, r := range v[2][:n2] {
				line += r * c[i+k]
			}
			sum += p * q * line
			i += n2
		}
	}
	return sum
}

// onto goes along the last axis, then the middle one, then the first.
func (m *spaceMesh) onto(other mesh) func(here, there []float64) {
	to := other.(interface{ space() *spaceMesh }).space()
	var along [3]func(here, there []float64)
	for a := range along {
		along[a] = m.axes[a].onto(to.axes[a])
	}
	n := [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}
	k := [3]int{to.axes[0].n, to.axes[1].n, to.axes[2].n}
	p, q := make([]float64, n[0]*n[1]*k[2]), make([]float64, n[0]*k[1]*k[2])
	in, out := make([]float64, max(n[0], n[1])), make([]float64, max(k[0], k[1]))
	// lines goes along the middle index of from (outer × n × inner) into that of into (outer × k × inner).
	lines := func(a, outer, inner int, from, into []float64) {
		for o := 0; o < outer; o++ {
			for i := 0; i < inner; i++ {
				for j := 0; j < n[a]; j++ {
					in[j] = from[(o*n[a]+j)*inner+i]
				}
				along[a](in[:n[a]], out[:k[a]])
				for j, c := range out[:k[a]] {
					into[(o*k[a]+j)*inner+i] = c
				}
			}
		}
	}
	return func(here, there []float64) {
		for i := 0; i < n[0]*n[1]; i++ {
			along[2](here[i*n[2]:(i+1)*n[2]], p[i*k[2]:(i+1)*k[2]])
		}
		lines(1, n[0], k[2], p, q)
		lines(0, 1, k[1]*k[2], q, there)
	}
}

func (m *spaceMesh) space() *spaceMesh { return m }

// fill gives the temperatures at the nodes of the body.
func (m *spaceMesh) fill(c, out []float64) {
	if m.axes[0].poly == nil {
		copy(out, c)
		return
	}
	byAxes(&m.body, [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}, c, m.x, m.y, out)
}

func (m *spaceMesh) shot(f *marched, c []float64) snapshot {
	if m.axes[0].poly == nil {
		return &marchedShot{f, c}
	}
	return newSmoothShot(m, f, c)
}

// slice gives the coefficients of the polynomials along an axis through a place from the temperatures of the nodes.
func (m *spaceMesh) slice(c []float64, axis int, x coord, out []float64) {
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		if a != axis {
			ax.valueAt(x[a], v[a][:ax.n])
		}
	}
	n := [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}
	var line [maxDegrees]float64
	i := 0
	for g0 := 0; g0 < n[0]; g0++ {
		for g1 := 0; g1 < n[1]; g1++ {
			row := c[i : i+n[2]]
			i += n[2]
			switch axis {
			case 0, 1:
				sum := 0.0
				for k, z := range v[2][:n[2]] {
					sum += z * row[k]
				}
				if axis == 0 {
					line[g0] += v[1][g1] * sum
				} else {
					line[g1] += v[0][g0] * sum
				}
			default:
				add(line[:n[2]], v[0][g0]*v[1][g1], row)
			}
		}
	}
	m.axes[axis].poly.coefficients(line[:n[axis]], out)
}

// placeWeights appends the weights of the nodes in the temperature of a place.
func (m *spaceMesh) placeWeights(x coord, out []float64) []float64 {
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		ax.valueAt(x[a], v[a][:ax.n])
	}
	for _, p := range v[0][:m.axes[0].n] {
		for _, q := range v[1][:m.axes[1].n] {
			q *= p
			for _, r := range v[2][:m.axes[2].n] {
				out = append(out, q*r)
			}
		}
	}
	return out
}

// pieces goes along the last axis, then the middle one, then the first.
func (m *spaceMesh) pieces(x coord, c []float64) float64 {
	along := func(a int, x float64, value func(i int) float64) float64 {
		ax := m.axes[a]
		if ax.n == 1 {
			return value(0)
		}
		vals := make([]float64, ax.n)
		for i, last := ax.line.reads(x); i <= last; i++ {
			vals[i] = value(i)
		}
		return ax.line.at(coord{x}, vals)
	}
	n1, n2 := m.axes[1].n, m.axes[2].n
	return along(0, x[0], func(i int) float64 {
		return along(1, x[1], func(j int) float64 {
			return along(2, x[2], func(k int) float64 { return c[(i*n1+j)*n2+k] })
		})
	})
}

func (m *spaceMesh) neighbours(j int, do func(k int)) {
	stride := m.n
	for a := range m.axes {
		n := m.axes[a].n
		stride /= n
		at := j / stride % n
		if at > 0 {
			do(j - stride)
		}
		if at+1 < n {
			do(j + stride)
		}
	}
}
