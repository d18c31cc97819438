package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The equations of a line are solved from both ends, and once more with another right side: held against what comes of multiplying the answer again.
func TestEquationsOfALine(t *testing.T) {
	draw := rand.New(rand.NewPCG(3, 5))
	for n := 1; n <= 12; n++ {
		m := &lineMarch{low: make([]float64, n), diag: make([]float64, n), up: make([]float64, n)}
		for i := range n {
			m.low[i], m.up[i] = draw.Float64()-1, draw.Float64()-1
			m.diag[i] = 2 + draw.Float64()
		}
		low, diag, up := append([]float64(nil), m.low...), append([]float64(nil), m.diag...), append([]float64(nil), m.up...)
		solve := func(name string, by func(y []float64)) {
			b := make([]float64, n)
			for i := range b {
				b[i] = draw.NormFloat64()
			}
			x := append([]float64(nil), b...)
			by(x)
			for i := range b {
				got := diag[i] * x[i]
				if i > 0 {
					got += low[i] * x[i-1]
				}
				if i < n-1 {
					got += up[i] * x[i+1]
				}
				if !(math.Abs(got-b[i]) < 1e-12) {
					t.Errorf("%s, %d rows: row %d gives %g, want %g", name, n, i, got, b[i])
				}
			}
		}
		solve("factor", m.factor)
		solve("back", m.back)
	}
}
