package model

import (
	"math"
	"testing"
)

// TestConstantLaw: a food with the same properties at all temperatures has the straight law that they make, in one row on each side of 0 °C; one whose properties
// differ anywhere has not.
func TestConstantLaw(t *testing.T) {
	const k, rho, c = 0.47, 1040.0, 3450.0
	same := &Material{Props: func(float64) Properties { return Properties{k, rho, c} }}
	l := newLaw(same, 0.9)
	if len(l.cold.rows) != 1 || len(l.warm.rows) != 1 {
		t.Errorf("%d and %d rows", len(l.cold.rows), len(l.warm.rows))
	}
	for _, at := range []float64{-79, -3, 0, 0.5, 64.25, 399} {
		temperature, u, dt, du := l.at(at * rho * c)
		if math.Abs(temperature-at) > 1e-9 || math.Abs(u-0.9*k*at) > 1e-9 || math.Abs(dt*rho*c-1) > 1e-12 || math.Abs(du*rho*c/(0.9*k)-1) > 1e-12 {
			t.Errorf("at %g °C: %g °C, %g W/m, slopes %g, %g", at, temperature, u, dt*rho*c, du*rho*c)
		}
	}
	above := &Material{Props: func(x float64) Properties { return Properties{k + 0.001*max(0, x-55), rho, c} }}
	if l := newLaw(above, 1); len(l.warm.rows) == 1 || math.Abs(l.kirchhoff(80*rho*c)-(k*80+0.0005*25*25)) > 1e-3 {
		t.Errorf("%d rows, %g W/m", len(l.warm.rows), l.kirchhoff(80*rho*c))
	}
}
