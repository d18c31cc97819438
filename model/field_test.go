package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// What one steady medium holds in the long run under unlike films is the medium itself: its response, worked out by mode, is 1 everywhere.
func TestOneMediumHoldsItself(t *testing.T) {
	var axes [3]*axis
	nd := &nodes{}
	for a, kind := range []axisKind{planeFull, radial, planeHalf} {
		axes[a] = &axis{base: baseOf(kind, 9+a), radiusM: 0.03 * float64(a+1)}
		at := axes[a].sitesFor(3, true)
		nd.x[a], nd.phi[a] = at.x, at.phi
	}
	for _, weak := range []float64{1e-6, 5, 1e5} {
		cs := &chainStep{durS: 600, props: Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 3700}, media: []Course{{C: []float64{80}}}, knots: []float64{0},
			lo: [3]film{{u: weak}, {group: -1}, {group: -1}}, up: [3]film{{u: 10}, {group: -1}, {u: 40}}}
		f := newTensor(axes, nd, 5, &slab{}, &slab{wide: 1})
		f.run(cs)
		st := f.steps[0]
		if !st.even {
			t.Fatalf("film %g: not taken for even", weak)
		}
		one := make([]float64, f.size())
		addOuter(one, st, 0, st.e0[0])
		for i, x := range one {
			if d := math.Abs(x - st.groups[0].s[i]); d > 1e-9 {
				t.Fatalf("film %g: mode %d of the response is %g off", weak, i, d)
			}
		}
	}
}

// The coldest and hottest node, and a rival of them, are those that a look at every node finds.
func TestRowsHideNoNode(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	rivals := 0
	for _, kinds := range [][3]axisKind{{planeFull, planeHalf, planeHalf}, {planeHalf, radial, lumped}, {spherical, lumped, lumped}} {
		nd := &nodes{}
		for a, kind := range kinds {
			nd.x[a] = nodesOf(kind, 2, 8, false)
		}
		b := newBody(body{kinds: kinds, radii: [3]float64{0.03, 0.05, 0.07}}, nd)
		for range 200 {
			for i := range b.buf { // few values, so that many nodes are as cold
				b.buf[i] = float64(rng.IntN(12))
			}
			lo, hi := b.lowest()
			wantLo, wantHi, least, most := -1, -1, math.Inf(1), math.Inf(-1)
			for _, i := range b.order {
				if b.buf[i] < least {
					wantLo, least = i, b.buf[i]
				}
				if b.buf[i] > most {
					wantHi, most = i, b.buf[i]
				}
			}
			if lo != wantLo || hi != wantHi {
				t.Fatalf("nodes %d and %d, want %d and %d", lo, hi, wantLo, wantHi)
			}
			for _, sign := range []float64{1, -1} {
				first := lo
				if sign < 0 {
					first = hi
				}
				best, want, lowest := b.buf[first]+sign*1.5, -1, 0.0 // so that the first is far from being the best
				stride := b.strides()
				for i := range b.buf {
					if g := b.index(i); i != first && sign*b.buf[i] <= sign*b.buf[first]+2 && b.deeper(i, g, stride, sign) {
						if p := b.promise(i, g, stride, sign); p < sign*best-flatK && (want < 0 || p < lowest) {
							want, lowest = i, p
						}
					}
				}
				if got := b.rival(first, sign, 2, best); got != want {
					t.Fatalf("rival %d, want %d", got, want)
				}
				if want >= 0 {
					rivals++
				}
			}
		}
	}
	if rivals < 100 {
		t.Errorf("only %d rivals: the cases do not show what they should", rivals)
	}
}
