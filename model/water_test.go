package model

import (
	"math"
	"strings"
	"testing"
)

// Prandtl numbers of saturated water as printed beside the other properties in Incropera & DeWitt, table A.6 (from memory), which do not enter
// the program.
func TestWaterProperties(t *testing.T) {
	for _, c := range []struct{ tK, pr float64 }{{280, 10.26}, {290, 7.56}, {300, 5.83}, {310, 4.62}, {320, 3.77}, {330, 3.15}, {340, 2.66}, {350, 2.29}, {360, 2.02}, {370, 1.80}} {
		w := waterAt(c.tK - 273.15)
		if got := w.pr(); math.Abs(got-c.pr) > 0.006*c.pr {
			t.Errorf("%g K: Prandtl number %.3f, printed %.2f", c.tK, got, c.pr)
		}
	}
	// Expansion is the slope of density: between rows 10 K apart it is their difference (density of IAPWS-95 at 1 atm: 999.10 at 15, 997.05 at 25, 992.22
	// at 40, 983.20 at 60, 971.79 at 80 °C; CRC Handbook, from memory).
	for _, c := range []struct{ aC, aRho, bC, bRho float64 }{{15, 999.10, 25, 997.05}, {25, 997.05, 40, 992.22}, {40, 992.22, 60, 983.20}, {60, 983.20, 80, 971.79}} {
		w := waterAt((c.aC + c.bC) / 2)
		if want := 2 * (c.aRho - c.bRho) / (c.aRho + c.bRho) / (c.bC - c.aC); math.Abs(w.beta-want) > 0.04*want {
			t.Errorf("%g to %g °C: expansion %.4g 1/K, by density %.4g", c.aC, c.bC, w.beta, want)
		}
		if want := (c.aRho + c.bRho) / 2; math.Abs(w.rho-want) > 1 {
			t.Errorf("%g to %g °C: density %.5g kg/m³, want %.5g", c.aC, c.bC, w.rho, want)
		}
	}
	for _, c := range []struct{ far, end float64 }{{-5, 0}, {250, 96.85}} {
		if waterAt(c.far) != waterAt(c.end) {
			t.Errorf("%g °C is not taken as %g °C", c.far, c.end)
		}
	}
}

// A horizontal cylinder of 100 mm at 70 °C in water of 43.7 °C, mean 56.85 °C, by hand: ν 4.970e-7 m²/s, Pr 3.148,
// Ra 9.80665·504e-6·26.3·1e-3/ν²·Pr = 1.657e9, Nu (0.60+0.387·34.399/1.0997)² = 161.42, film 161.42·0.650/0.1 (Churchill & Chu 1975).
func TestBareFilmOfWater(t *testing.T) {
	c := &filmCase{shape: Cylinder, size: Size{DiameterM: 0.1}, foodC: 70, mediumC: 43.7}
	if got := bareWaterW(c); math.Abs(got-1049.2) > 0.2 {
		t.Errorf("%.1f W/(m²·K), want 1049.2", got)
	}
	w, source := WaterBath.film(c)
	if w != waterBathW || !strings.Contains(source, "would have about 1050 W/(m²·K) by Churchill & Chu 1975, food surface 70.0 °C, water 43.7 °C") {
		t.Errorf("%g W/(m²·K): %s", w, source)
	}
	c.foodC = c.mediumC + 0.4
	if _, source = WaterBath.film(c); strings.Contains(source, "bare surface") {
		t.Errorf("food as warm as the water: %s", source)
	}
}
