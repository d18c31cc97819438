package model

import (
	"math"
	"sort"

	"gonum.org/v1/gonum/blas/blas64"
)

// track keeps n nodes at rising instants, with their slopes in time: cubics through both stand between. A change of surroundings stands
// twice, with the slopes before and after it. Where a front of ice moves through more than one direction, Kirchhoff integrals are kept, which are
// as even when it passes a node and cheaper to read between nodes.
type track struct {
	n     int
	times []float64
	data  []float64 // by instant: n temperatures, °C, or Kirchhoff integrals, W/m, then n slopes of them
	ice   *law      // where Kirchhoff integrals are kept; nil: temperatures are
	last  int       // the interval that was looked at last
	cuts  int       // how often instants were taken back
}

// usualInstants is how many instants a march mostly takes.
const usualInstants = 250

// add appends an instant and gives the slices to fill with what is kept and its slopes.
func (k *track) add(t float64) (c, slope []float64) {
	k.times = append(k.times, t)
	at := len(k.data)
	if cap(k.data) == 0 {
		k.data = make([]float64, 0, usualInstants*2*k.n)
	}
	if at+2*k.n <= cap(k.data) {
		k.data = k.data[:at+2*k.n] // the caller fills it
	} else {
		k.data = append(k.data, make([]float64, 2*k.n)...)
	}
	return k.data[at : at+k.n], k.data[at+k.n : at+2*k.n]
}

// cut takes back everything after the first m instants.
func (k *track) cut(m int) {
	k.times, k.data, k.last = k.times[:m], k.data[:2*k.n*m], 0
	k.cuts++
}

// row gives what was kept of instant i.
func (k *track) row(i int) (c, slope []float64) {
	at := 2 * k.n * i
	return k.data[at : at+k.n], k.data[at+k.n : at+2*k.n]
}

// whole gives all that was kept of instant i: what stands at the nodes, then the slopes.
func (k *track) whole(i int) []float64 { return k.data[2*k.n*i : 2*k.n*(i+1)] }

// between holds the weights of the two instants around one.
type between struct {
	i              int
	c0, s0, c1, s1 float64
}

// find gives the weights for an instant; at a change the value before it.
func (k *track) find(t float64) between {
	i := k.last
	if i+1 >= len(k.times) || t <= k.times[i] || t > k.times[i+1] {
		i = sort.SearchFloat64s(k.times, t) - 1
		i = max(0, min(i, len(k.times)-2))
		k.last = i
	}
	t0, t1 := k.times[i], k.times[i+1]
	d := t1 - t0
	if d <= 0 {
		return between{i: i, c0: 1}
	}
	return cubicAt(i, max(0, min(1, (t-t0)/d)), d)
}

// cubicAt gives the weights at the share x of an interval i of length d.
func cubicAt(i int, x, d float64) between {
	y := x * x
	return between{i, 1 + y*(2*x-3), d * x * (1 + x*(x-2)), y * (3 - 2*x), d * y * (x - 1)}
}

// mix fills out with what stands between temperatures and slopes at both ends.
func (b *between) mix(c0, s0, c1, s1, out []float64) {
	c0, s0, c1, s1 = c0[:len(out)], s0[:len(out)], c1[:len(out)], s1[:len(out)]
	for j := range out {
		out[j] = b.c0*c0[j] + b.s0*s0[j] + b.c1*c1[j] + b.s1*s1[j]
	}
}

// raw fills out with what is kept of all nodes.
func (k *track) raw(b between, out []float64) {
	a := k.data[2*k.n*b.i : 2*k.n*(b.i+2)]
	n := k.n
	b.mix(a[:n], a[n:2*n], a[2*n:3*n], a[3*n:4*n], out[:n])
}

// all fills out with the temperatures of all nodes.
func (k *track) all(b between, out []float64) {
	k.raw(b, out)
	if k.ice != nil {
		for j, u := range out[:k.n] {
			out[j], _ = k.ice.byU().temperature(u)
		}
	}
}

// kept gives the temperature of a node at instant i, °C.
func (k *track) kept(i, j int) float64 {
	c := k.data[2*k.n*i+j]
	if k.ice != nil {
		t, _ := k.ice.byU().temperature(c)
		return t
	}
	return c
}

// reach gives the coldest and hottest temperature that was kept between two instants.
func (k *track) reach(from, to float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for i, t := range k.times {
		if t < from || t > to {
			continue
		}
		c, _ := k.row(i)
		least, most := spanOf(c)
		low, high = min(low, least), max(high, most)
	}
	if k.ice != nil && low <= high {
		low, _ = k.ice.byU().temperature(low)
		high, _ = k.ice.byU().temperature(high)
	}
	return low, high
}

// spanOf gives the least and the largest of some numbers.
func spanOf(c []float64) (low, high float64) {
	low, high = c[0], c[0]
	for _, c := range c {
		if c < low {
			low = c
		} else if c > high {
			high = c
		}
	}
	return low, high
}

// sums gives the sums of the temperatures of all nodes by weight at instant i, and of their slopes in time.
func (k *track) sums(i int, w []float64) (c, slope float64) {
	all, slopes := k.row(i)
	v := blas64.Vector{N: k.n, Inc: 1, Data: w}
	return blas64.Dot(v, blas64.Vector{N: k.n, Inc: 1, Data: all}), blas64.Dot(v, blas64.Vector{N: k.n, Inc: 1, Data: slopes})
}
