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
		for _, n := range []int{2, 3, 8, 20, 40} {
			for _, rho := range []float64{1e-6, 0.03, 1.7, 40, 1e5} {
				for p, b := range baseOf(kind, n).sets {
					n := b.n
					t.Run(fmt.Sprintf("kind %d, %d functions, set %d, rho %g", kind, n, p, rho), func(t *testing.T) {
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
}

func BenchmarkRankOne10(b *testing.B) {
	s := baseOf(planeHalf, 10).sets[0]
	for b.Loop() {
		rankOne(new(slab), s.d, s.top, 1.3)
	}
}

// The modes of a slab with a film on each face solve the eigenproblem of its polynomials: K + lo·φ(-1)φ(-1)ᵀ + up·φ(1)φ(1)ᵀ.
func TestTwoFacesSolveTheirEigenproblem(t *testing.T) {
	for _, n := range []int{2, 3, 12, 25, 48} {
		for _, films := range [][2]float64{{0, 0}, {0, 3}, {3, 0}, {0.5, 0.5}, {0.5, 0.5 + 1e-12}, {2, 0.1}, {0.1, 2}, {1e4, 30}, {7, heldBiot}, {heldBiot, 7}, {heldBiot, heldBiot}, {1e9, heldBiot}} {
			t.Run(fmt.Sprintf("%d functions, films %g and %g", n, films[0], films[1]), func(t *testing.T) {
				a := &axis{base: baseOf(planeFull, n), radiusM: 1}
				s := &axisStep{rate: make([]float64, n), gUp: make([]float64, n), gLo: make([]float64, n), b: make([]float64, n*n)}
				a.twoFaces(s, &slab{wide: 1}, films[0], films[1])
				top, low, k := make([]float64, n), make([]float64, n), a.stiffness()
				a.values(1, top, nil)
				a.values(-1, low, nil)
				size := 0.0
				for i := range top {
					size += k.At(i, i) + films[0]*low[i]*low[i] + films[1]*top[i]*top[i]
				}
				dot := func(x []float64, col int) (sum float64) {
					for m, v := range x {
						sum += v * s.b[m*n+col]
					}
					return sum
				}
				for i := 0; i < n; i++ {
					if i > 0 && s.rate[i] < s.rate[i-1] {
						t.Errorf("rates do not rise at %d", i)
					}
					lo, up := films[0]*dot(low, i), films[1]*dot(top, i)
					if math.Abs(lo-s.gLo[i]) > 1e-13*size || math.Abs(up-s.gUp[i]) > 1e-13*size {
						t.Errorf("mode %d is driven by %g and %g, its faces say %g and %g", i, s.gLo[i], s.gUp[i], lo, up)
					}
					for m := 0; m < n; m++ {
						sum, square := low[m]*lo+top[m]*up-s.rate[i]*s.b[m*n+i], 0.0
						for j := 0; j < n; j++ {
							sum += k.At(m, j) * s.b[j*n+i]
							square += s.b[j*n+i] * s.b[j*n+m]
						}
						if m == i {
							square--
						}
						if math.Abs(sum) > 3e-13*size || math.Abs(square) > 1e-13 {
							t.Fatalf("mode %d: residue %g of %g, product with mode %d off by %g", i, sum, size, m, square)
						}
					}
				}
				if films[0] > 0 && films[1] > 0 { // a common medium of 1 K is what all modes rest at: their drives over their rates are the constant 1
					for m := 0; m < n; m++ {
						sum := 0.0
						for i := 0; i < n; i++ {
							sum += s.b[m*n+i] * (s.gLo[i] + s.gUp[i]) / s.rate[i]
						}
						if m == 0 {
							sum--
						}
						if math.Abs(sum) > 1e-9 {
							t.Errorf("polynomial %d of the rest at 1 K is off by %g", m, sum)
						}
					}
				}
			})
		}
	}
}
