package model

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The eigenvalues of a bordered diagonal matrix, held against gonum's general solver (an independent method).
func TestRankOneAgainstGeneralSolver(t *testing.T) {
	for _, kind := range []axisKind{planeHalf, planeFull, radial, spherical} {
		for _, n := range []int{3, 8, 20, 40} {
			for _, rho := range []float64{1e-6, 0.03, 1.7, 40, 1e5} {
				t.Run(fmt.Sprintf("kind %d, %d functions, rho %g", kind, n, rho), func(t *testing.T) {
					b := baseOf(kind, n)
					mu, q, g := rankOne(new(slab), b.d, b.top, rho)
					a := mat.NewSymDense(n, nil)
					for i := range b.d {
						for j := i; j < n; j++ {
							x := rho * b.top[i] * b.top[j]
							if i == j {
								x += b.d[i]
							}
							a.SetSym(i, j, x)
						}
					}
					var eig mat.EigenSym
					if !eig.Factorize(a, true) {
						t.Fatal("no eigenvalues")
					}
					want := eig.Values(nil)
					size := want[n-1]
					for i := range mu {
						if e := math.Abs(mu[i] - want[i]); e > 2e-13*size {
							t.Errorf("eigenvalue %d: %.15g, general solver %.15g", i, mu[i], want[i])
						}
					}
					for i := 0; i < n; i++ {
						vq := 0.0
						for k := 0; k < n; k++ {
							vq += rho * b.top[k] * q[k*n+i]
						}
						if math.Abs(vq-g[i]) > 1e-8*(1+math.Abs(g[i]))*math.Max(1, rho/1e3) {
							t.Errorf("drive %d: %g, summed %g", i, g[i], vq)
						}
						for j := i; j < n; j++ {
							dot := 0.0
							for k := 0; k < n; k++ {
								dot += q[k*n+i] * q[k*n+j]
							}
							if i == j {
								dot--
							}
							if math.Abs(dot) > 1e-13 {
								t.Errorf("vectors %d and %d: %g", i, j, dot)
							}
						}
					}
				})
			}
		}
	}
}

func BenchmarkRankOne10(b *testing.B) {
	s := baseOf(planeHalf, 10)
	for b.Loop() {
		rankOne(new(slab), s.d, s.top, 1.3)
	}
}
