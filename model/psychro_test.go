package model

import (
	"fmt"
	"math"
	"testing"
)

// Saturation pressure of water. Steam tables (Çengel & Boles, Thermodynamics, table A-4; from memory) to the digits printed there; three
// verification values of IAPWS-IF97 (table 35; from memory), a formulation of its own that agrees within 0.02 %; triple point 611.657 Pa
// (IAPWS). Over supercooled water the Smithsonian Meteorological Tables (1951, table 94; from memory), within the 0.4 % that Magnus' formula is given with.
func TestSaturationPressure(t *testing.T) {
	for _, c := range []struct{ tC, pa, within float64 }{
		{0.01, 611.657, 1e-6}, {25, 3169.8, 2e-5}, {50, 12352, 5e-5}, {60, 19947, 4e-5}, {80, 47416, 4e-5}, {100, 101420, 4e-5}, {120, 198670, 2e-5}, {150, 476160, 2e-5},
		{26.85, 3536.58941, 2e-4}, {226.85, 2638897.76, 2e-4}, {326.85, 12344314.6, 2e-4},
		{-10, 286.27, 4e-3}, {-20, 125.40, 4e-3}, {373.946, criticalP, 1e-6},
	} {
		if got := satPa(c.tC); math.Abs(got-c.pa) > c.within*c.pa {
			t.Errorf("%g °C: %.7g Pa, want %g", c.tC, got, c.pa)
		}
	}
	if d := satPa(tripleC-1e-9) - satPa(tripleC+1e-9); math.Abs(d) > 1e-5 {
		t.Errorf("the two formulas are %g Pa apart where they meet", d)
	}
	for _, c := range []float64{-40, -0.3, 0.2, 13.7, 64, 99.9, 121, 171} {
		if got := satC(satPa(c)); math.Abs(got-c) > 1e-8 {
			t.Errorf("%g °C there and back is %.10g", c, got)
		}
	}
}

// The boiling point of water at heights in the standard atmosphere, as tables of cooking and engineering print it (from memory, to 0.1 K
// or so), and at 1 atm (IAPWS: 99.974 °C).
func TestBoilingPointAtAltitudes(t *testing.T) {
	for _, c := range []struct{ m, want, within float64 }{
		{0, 99.974, 0.001}, {500, 98.3, 0.1}, {1000, 96.7, 0.1}, {1500, 95.0, 0.1}, {2000, 93.3, 0.1}, {3000, 90.0, 0.1}, {4000, 86.6, 0.1},
	} {
		if got := boilingC(c.m); math.Abs(got-c.want) > c.within {
			t.Errorf("%g m: %.3f °C, want %g", c.m, got, c.want)
		}
	}
}

// Latent heat by the steam tables (Çengel & Boles, table A-4; from memory), kJ/kg.
func TestLatentHeat(t *testing.T) {
	for _, c := range []struct{ tC, kJ float64 }{{0.01, 2500.9}, {20, 2453.5}, {50, 2382.0}, {80, 2308.0}, {100, 2256.4}} {
		if got := latentJkg(c.tC) / 1000; math.Abs(got-c.kJ) > 0.004*c.kJ {
			t.Errorf("%g °C: %.1f kJ/kg, want %g", c.tC, got, c.kJ)
		}
	}
}

// The two wet thermometers of the properties that the program is held to: air 20 °C, 50 %: 13.56 °C with Lewis number 0.87 (charts 13.7 to
// 13.8; from memory); ovens of 160 and 180 °C with 20.04 and 22.07 kPa of vapour: 64.6 and 67.0 °C. All worked out apart from the program,
// with Magnus' formula, which is why they differ by 0.1 K in the ovens.
func TestWetBulbOfRoomAndOven(t *testing.T) {
	for _, c := range []struct{ tC, vapourPa, want, within float64 }{
		{20, satPa(20) / 2, 13.56, 0.02}, {20, satPa(20) / 2, 13.75, 0.3}, {160, 20040, 64.6, 0.2}, {180, 22070, 67.0, 0.2},
	} {
		if got := (moistAir{c.tC, c.vapourPa, 101325}).wetBulbC(1); math.Abs(got-c.want) > c.within {
			t.Errorf("air %g °C, %.0f Pa: %.3f °C, want %g", c.tC, c.vapourPa, got, c.want)
		}
	}
}

// Wet-bulb depressions of the hygrometer tables that schools and weather services print (relative humidity in whole %, from memory). The
// Lewis number of water in air makes a wet surface a little colder than the thermodynamic wet bulb of the tables: up to 5 % of the
// depression.
func TestWetBulbAgainstHygrometerTables(t *testing.T) {
	for _, c := range []struct{ dryC, rh, depressionK float64 }{
		{0, 81, 1}, {0, 64, 2}, {10, 77, 2}, {10, 44, 5}, {20, 91, 1}, {20, 74, 3}, {20, 59, 5}, {20, 24, 10}, {25, 63, 5}, {25, 33, 10}, {30, 86, 2}, {30, 67, 5}, {30, 39, 10}, {40, 72, 5}, {40, 48, 10},
	} {
		t.Run(fmt.Sprintf("%g °C, %g %%", c.dryC, c.rh), func(t *testing.T) {
			got := c.dryC - moistAir{c.dryC, vapourPa(c.dryC, c.rh, 101325), 101325}.wetBulbC(1)
			if rounding := 0.25; got < c.depressionK-rounding || got > 1.05*c.depressionK+rounding {
				t.Errorf("depression %.2f K, tables %g", got, c.depressionK)
			}
		})
	}
}

// A surface whose water has an activity dries less: air of 3 °C at 38 %, activity 0.95: -1.143 °C (mpmath, 30 digits, apart from the program).
func TestWetBulbByWaterActivity(t *testing.T) {
	if got := (moistAir{3, 0.38 * satPa(3), 101325}).wetBulbC(0.95); math.Abs(got+1.143) > 0.03 {
		t.Errorf("%.4f °C", got)
	}
}

// The dew point: 20 °C and 50 %: 9.3 °C; 30 °C and 70 %: 23.9 °C (psychrometric chart, from memory).
func TestDewPoint(t *testing.T) {
	for _, c := range []struct{ tC, rh, want float64 }{{20, 50, 9.3}, {30, 70, 23.9}, {87, 100, 87}} {
		if got := dewC(vapourPa(c.tC, c.rh, 101325)); math.Abs(got-c.want) > 0.1 {
			t.Errorf("%g °C, %g %%: %.2f °C, want %g", c.tC, c.rh, got, c.want)
		}
	}
	if got := vapourPa(150, 40, 101325); got != 101325 {
		t.Errorf("air of 150 °C at 40 %% holds %g Pa of vapour, and no more than the total pressure can be", got)
	}
}

// The humidity ratio rises and stays finite up to pure vapour and beyond, without a step where it turns straight.
func TestHumidityRatioStaysFinite(t *testing.T) {
	last, slope := -1.0, 0.0
	for x := 0.0; x < 12; x += 0.01 {
		w := humidityRatio(x*97000, 97000)
		if rise := w - last; !(rise > 0) || rise < slope*(1-1e-9) && x > 0.02 || math.IsInf(w, 0) {
			t.Fatalf("at %g of the pressure: %g after %g", x, w, last)
		} else if x > 0.01 {
			slope = rise
		}
		last = w
	}
	if got, want := humidityRatio(2339, 101325), 0.014697; math.Abs(got-want) > 2e-6 { // 0.622·2339/98986
		t.Errorf("%g, want %g", got, want)
	}
}
