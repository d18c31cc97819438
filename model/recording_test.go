package model

import "testing"

// TestUsualStep: the median of what lies between readings, the lower of two; a jump of hours and a clock that goes back do not move it.
func TestUsualStep(t *testing.T) {
	for _, c := range []struct {
		t    []float64
		want float64
	}{
		{nil, 0},
		{[]float64{7}, 0},
		{[]float64{0, 60}, 60},
		{[]float64{0, 60, 180}, 60},
		{[]float64{0, 60, 180, 310}, 120},
		{[]float64{0, 30, 60, 7260, 7290}, 30},
		{[]float64{0, 30, 10, 40, 85}, 30},
	} {
		if got := UsualStep(c.t); got != c.want {
			t.Errorf("%v: %g s, want %g", c.t, got, c.want)
		}
	}
}
