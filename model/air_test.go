package model

import (
	"fmt"
	"math"
	"testing"
)

// Film coefficients of air blown over a long round piece, W/(m²·K), air at 10 °C, convection only: Churchill & Bernstein 1977,
// worked out apart from this program with tabulated air (figures printed to 0.1).
func TestAirOverCylinder(t *testing.T) {
	for _, c := range []struct{ diameterM, airMS, want float64 }{
		{0.11, 0.3, 5.6}, {0.11, 0.5, 7.3}, {0.11, 1, 10.6}, {0.11, 1.2, 11.7}, {0.11, 2, 15.6}, {0.11, 3, 19.7}, {0.11, 5, 26.7},
		{0.178, 0.3, 4.4}, {0.178, 1, 8.5}, {0.178, 2, 12.7}, {0.178, 3, 16.2}, {0.178, 5, 22.3},
	} {
		t.Run(fmt.Sprintf("%g m, %g m/s", c.diameterM, c.airMS), func(t *testing.T) {
			a := airAt(10, 0)
			got := churchillBernstein(c.airMS*c.diameterM/a.nu(), a.pr()) * a.k / c.diameterM
			if math.Abs(got-c.want) > 0.015*c.want { // two tables of air differ by 1 %
				t.Errorf("%.2f W/(m²·K), want %.1f", got, c.want)
			}
		})
	}
}

// Still cold room, joints of 50 to 180 mm, air 2 °C, surface 5 to 40 K warmer: 3 to 6.2 W/(m²·K) without radiation
// (Churchill & Chu 1975, worked out apart from this program).
func TestStillAirOverCylinder(t *testing.T) {
	film := func(diameterM, excess float64) float64 {
		w, _ := stillAir(&filmCase{shape: Cylinder, size: Size{DiameterM: diameterM}, foodC: 2 + excess, mediumC: 2})
		return w
	}
	if low, high := film(0.18, 5), film(0.05, 40); math.Abs(low-3) > 0.15 || math.Abs(high-6.2) > 0.25 {
		t.Errorf("%.2f and %.2f W/(m²·K), want 3 and 6.2", low, high)
	}
}

// Formulas at one state each, worked out by hand from the printed form (numbers typed here, not taken from the code).
func TestCorrelations(t *testing.T) {
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"flat plate, laminar, Re 40000, Pr 0.71: 0.664·200·0.8921", plateForced(40000, 0.71), 118.47},
		{"flat plate beyond the laminar range, the laminar formula as a lower bound, Re 1e6, Pr 0.71: 0.664·1000·0.8921", plateForced(1e6, 0.71), 592.4},
		{"sphere at the end of the range, Re 50000, Pr 0.71: 2+0.47·223.61·0.8840", sphereForced(5e4, 0.71), 94.90},
		{"sphere in a stream, Re 2500, Pr 0.71: 2+0.47·50·0.8840", sphereForced(2500, 0.71), 22.774},
		{"sphere in still air, Ra 1e5, Pr 0.71: 2+0.589·17.783/1.2959·1.0002", sphereFree(1e5, 0.71), 10.084},
	} {
		t.Run(c.name, func(t *testing.T) {
			if math.Abs(c.got-c.want) > 2e-3*c.want {
				t.Errorf("%.4f, want %.4f", c.got, c.want)
			}
		})
	}
}

// Dry air at 20 °C and sea level: any textbook table (from memory): 1.204 kg/m³, 1.82e-5 Pa·s, 0.0257 W/(m·K).
// The standard atmosphere at 2000 m: 79495 Pa (ICAO, from memory). Water boils at 100.0 °C at the sea and at 93.3 °C at 2000 m (from memory).
func TestAirAndBoiling(t *testing.T) {
	a := airAt(20, 0)
	for _, c := range []struct {
		name           string
		got, want, tol float64
	}{
		{"density", a.rho, 1.204, 0.003}, {"viscosity", a.mu, 1.82e-5, 2e-7}, {"conductivity", a.k, 0.0257, 2.5e-4},
		{"pressure at 2000 m", pressurePa(2000), 79495, 40}, {"boiling at the sea", boilingC(0), 100, 0.05}, {"boiling at 2000 m", boilingC(2000), 93.3, 0.15},
	} {
		if math.Abs(c.got-c.want) > c.tol {
			t.Errorf("%s: %g, want %g", c.name, c.got, c.want)
		}
	}
}

func TestMovingAirIsNeverBelowStill(t *testing.T) {
	for _, shape := range []*Shape{Slab, Sphere, Cylinder, Brick} {
		c := filmCase{shape: shape, size: Size{ThicknessM: 0.05, WidthM: 0.1, LengthM: 0.2, DiameterM: 0.07}, foodC: 60, mediumC: 4, airMS: 0.01}
		still, _ := stillAir(&c)
		if moving, _ := movingAir(&c); moving < still {
			t.Errorf("%s: %g below %g", shape.Name, moving, still)
		}
	}
}
