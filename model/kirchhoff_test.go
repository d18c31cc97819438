package model

import (
	"math"
	"testing"
)

// heat gives the heat content at u, J/m³.
func (b *uLaw) heat(u float64) float64 {
	r, x := b.row(u)
	_, h := r.sums(x)
	return h
}

// The law read by u says what it says read by heat content, frozen, freezing and warm, and beyond its last row.
func TestLawIsTheSameBothWays(t *testing.T) {
	l := newLaw(freezingFood(), 1)
	for _, c := range []float64{-79, -40, -18, -5, -2, -1.3, -1.11, -1.1001, -1.1, -1.0999, -1, 0, 5, 40, 99, 150, 390, 420} {
		h := l.heat(c)
		u := l.kirchhoff(h)
		gotC, slope := l.byU().temperature(u)
		gotH := l.byU().heat(u)
		_, _, dt, du := l.at(h)
		if math.Abs(gotC-c) > 1e-5 {
			t.Errorf("%g °C: %.7g °C by u", c, gotC)
		}
		if math.Abs(gotH-h) > 2e-6*3e8 {
			t.Errorf("%g °C: %.9g J/m³, by u %.9g", c, h, gotH)
		}
		if math.Abs(slope*du/dt-1) > 1e-4 {
			t.Errorf("%g °C: slope %g, by u %g", c, dt/du, slope)
		}
	}
}

// A mean over a spread of u is the integral of the heat content over it, on one row and over several, across the freezing point and beside it,
// and its slopes are those of the mean.
func TestMeanHeatContent(t *testing.T) {
	b := newLaw(freezingFood(), 1).byU()
	cases := [][2]float64{{0, 0.5}, {0, 1e-3}, {-0.2, 0.5}, {0.3, 0.5}, {-3, 0.1}, {-3, 0.8}, {-3, 1.5}, {-3, 2.9}, {-0.1, 0.02}, {-40, 3}, {12, 0.4}, {12, 11}, {-0.004, 0.003}}
	for u := -3.4; u < -2.6; u += 0.07 {
		for d := 0.1; d < 0.5; d += 0.06 {
			cases = append(cases, [2]float64{u, d}, [2]float64{-u, d})
		}
	}
	for _, c := range cases {
		u, d := c[0], c[1]
		h, byU, byD := b.mean(u, d)
		const n = 20000
		sum := 0.0
		for i := range n {
			x := b.heat(u - d + 2*d*(float64(i)+0.5)/n)
			sum += x / n
		}
		if math.Abs(h-sum) > 20 {
			t.Errorf("%g ± %g: %.9g J/m³, integral %.9g", u, d, h, sum)
		}
		for i, slope := range [2]float64{byU, byD} {
			e := d * 1e-3
			step := func(sign float64) float64 {
				x := c
				x[i] += sign * e
				h, _, _ := b.mean(x[0], x[1])
				return h
			}
			if got := (step(1) - step(-1)) / (2 * e); math.Abs(got-slope) > 1e-3*byU+1e-5*math.Abs(h)/d {
				t.Errorf("%g ± %g: slope %d %.7g, by differences %.7g", u, d, i, slope, got)
			}
		}
	}
}
