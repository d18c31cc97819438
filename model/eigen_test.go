package model

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The eigenvalues are held to those of another program (gonum), the vectors to what they must do.
func TestEigen(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 2, 3, 7, 40, 91} {
		sym := mat.NewSymDense(n, nil)
		a := make([]float64, n*n)
		for i := 0; i < n; i++ {
			for j := i; j < n; j++ {
				x := r.NormFloat64() * math.Sqrt(float64((i+1)*(j+1)))
				if (i+j)%3 == 0 && i != j {
					x = 0
				}
				sym.SetSym(i, j, x)
				a[i*n+j], a[j*n+i] = x, x
			}
		}
		var eig mat.EigenSym
		eig.Factorize(sym, false)
		want := eig.Values(nil)
		d, v := eigen(&slab{wide: 1}, n, append([]float64(nil), a...))
		size := math.Max(math.Abs(want[0]), math.Abs(want[n-1]))
		for i := range d {
			if math.Abs(d[i]-want[i]) > 1e-13*size*float64(n) {
				t.Errorf("n %d: eigenvalue %d is %g, want %g", n, i, d[i], want[i])
			}
			for k := 0; k < n; k++ {
				sum := 0.0
				for j := 0; j < n; j++ {
					sum += a[k*n+j] * v[i*n+j]
				}
				if math.Abs(sum-d[i]*v[i*n+k]) > 1e-13*size*float64(n) {
					t.Fatalf("n %d: vector %d is not kept by the matrix", n, i)
				}
			}
			for j := range d {
				dot, want := 0.0, 0.0
				if i == j {
					want = 1
				}
				for k := 0; k < n; k++ {
					dot += v[i*n+k] * v[j*n+k]
				}
				if math.Abs(dot-want) > 1e-13*float64(n) {
					t.Fatalf("n %d: vectors %d and %d give %g, want %g", n, i, j, dot, want)
				}
			}
		}
	}
}

func BenchmarkEigen(b *testing.B) {
	for _, n := range []int{14, 63, 91} {
		b.Run(string(rune('0'+n/10))+"x", func(b *testing.B) {
			r := rand.New(rand.NewPCG(1, 2))
			a, c := make([]float64, n*n), make([]float64, n*n)
			for i := 0; i < n; i++ {
				for j := 0; j <= i; j++ {
					a[i*n+j] = r.NormFloat64()
					a[j*n+i] = a[i*n+j]
				}
			}
			tmp := &slab{wide: 1}
			for b.Loop() {
				copy(c, a)
				mark := tmp.mark()
				eigen(tmp, n, c)
				tmp.back(mark)
			}
		})
	}
}
