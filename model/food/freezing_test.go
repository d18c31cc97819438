package food

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"slowpoint/model"
)

// frozenFood composes a food with a freezing point, or ends the test.
func frozenFood(t testing.TB, c Composition, freezingC float64) model.Material {
	t.Helper()
	c.FreezingC = &freezingC
	m, err := Compose("food", "test", c)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func TestIceShare(t *testing.T) {
	// Miles (1974) with the bound water of Schwartzberg (1976), worked out apart from this program; 6 decimals.
	m := frozenFood(t, Composition{WaterPc: 75, ProteinPc: 20, FatPc: 4, AshPc: 1}, -1.7)
	for _, c := range []struct{ t, ice float64 }{{-5, 0.442200}, {-10, 0.556100}, {-20, 0.613050}, {-30, 0.632033}, {-1.7, 0}, {-1.5, 0}, {20, 0}} {
		near(t, "ice", m.IceShare(c.t), c.ice, 6e-7)
	}
	// Tchigeov (1979), 1.105·xw/(1 + 0.7138/ln(Tf − t + 1)), as in ASHRAE Handbook – Refrigeration (2006), chapter 9: fitted to measurements,
	// and it has no bound water, so it lies higher. The rule of Miles stays within 0.12 of it.
	for _, c := range []struct{ t, ice float64 }{{-5, 0.556444}, {-10, 0.627799}, {-20, 0.667733}, {-30, 0.684163}} {
		tchigeov := 1.105 * 0.75 / (1 + 0.7138/math.Log(-1.7-c.t+1))
		near(t, "Tchigeov", tchigeov, c.ice, 6e-7)
		if d := tchigeov - m.IceShare(c.t); d < 0 || d > 0.12 {
			t.Errorf("at %g °C Tchigeov is %g above Miles", c.t, d)
		}
	}
}

// Whatever the food: its heat content rises strictly, has no step at the freezing point, has the apparent specific heat as its slope, and a
// temperature found back from it is the one it came from.
func TestHeatContent(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		share := func(name string, most float64) float64 { return rapid.Float64Range(0, most).Draw(t, name) }
		c := Composition{WaterPc: rapid.Float64Range(15, 95).Draw(t, "water"), AshPc: share("ash", 3)}
		rest := 100 - c.WaterPc - c.AshPc
		c.ProteinPc = rest * share("protein", 1)
		c.FatPc = (rest - c.ProteinPc) * share("fat", 1)
		c.CarbohydratePc = rest - c.ProteinPc - c.FatPc
		tf := rapid.Float64Range(-20, -0.1).Draw(t, "freezing point")
		c.FreezingC = &tf
		m, err := Compose("food", "test", c)
		if err != nil {
			t.Fatal(err)
		}
		if c.WaterPc <= 0.4*c.ProteinPc {
			if m.EnthalpyJkg != nil {
				t.Fatal("nothing freezes, yet there is a heat content through freezing")
			}
			return
		}
		if h := m.EnthalpyJkg(0); h != 0 {
			t.Fatalf("%g J/kg at 0 °C, want 0", h)
		}
		if d := m.EnthalpyJkg(tf) - m.EnthalpyJkg(math.Nextafter(tf, -100)); d < 0 || d > 0.01 {
			t.Fatalf("a step of %g J/kg at the freezing point", d)
		}
		at := rapid.Float64Range(LowC, 150).Draw(t, "temperature")
		width := 1e-4 * math.Min(math.Abs(at-tf), 1)
		if at+width > HighC || at-width < LowC || width < 1e-7 {
			return
		}
		slope := (m.EnthalpyJkg(at+width) - m.EnthalpyJkg(at-width)) / (2 * width)
		if p := m.Props(at); math.Abs(slope-p.CJkgK) > 1e-4*p.CJkgK || p.CJkgK < 1500 {
			t.Fatalf("slope %g at %g °C, specific heat %g", slope, at, p.CJkgK)
		}
		low, high, h := float64(LowC), float64(HighC), m.EnthalpyJkg(at)
		for high-low > 1e-10 {
			if mid := (low + high) / 2; m.EnthalpyJkg(mid) < h {
				low = mid
			} else {
				high = mid
			}
		}
		if math.Abs(low-at) > 1e-8 {
			t.Fatalf("%g °C found back as %.10g", at, low)
		}
	})
}

// From the freezing point upwards a food with one behaves as the same food without, to the last bit; the density below is the one there.
func TestAboveFreezingAsBefore(t *testing.T) {
	beef := Composition{WaterPc: 71.7, ProteinPc: 21.24, FatPc: 4.4, AshPc: 1.08}
	plain, err := Compose("beef", "test", beef)
	if err != nil {
		t.Fatal(err)
	}
	m := frozenFood(t, beef, -1.7)
	for tc := -1.7; tc < 150; tc += 0.37 {
		if m.Props(tc) != plain.Props(tc) {
			t.Errorf("at %g °C %+v, without a freezing point %+v", tc, m.Props(tc), plain.Props(tc))
		}
	}
	for _, tc := range []float64{-1.8, -10, -40} {
		if m.Props(tc).RhoKgM3 != plain.Props(-1.7).RhoKgM3 {
			t.Errorf("density %g at %g °C", m.Props(tc).RhoKgM3, tc)
		}
	}
}

// A food whose water is all bound, or that has none, has no heat content through freezing.
func TestNothingFreezes(t *testing.T) {
	for _, c := range []struct {
		name string
		Composition
	}{
		{"fat", Composition{FatPc: 100}},
		{"dried meat", Composition{WaterPc: 20, ProteinPc: 60, FatPc: 15, AshPc: 5}},
	} {
		m := frozenFood(t, c.Composition, -3)
		if m.EnthalpyJkg != nil || m.IceShare != nil || m.FreezingC == nil {
			t.Errorf("%s: %+v", c.name, m)
		}
	}
}

// Mistakes found in copies of ice and cold water: each moves these figures far beyond their tolerance.
func TestCopyErrorsOfIce(t *testing.T) {
	near(t, "ice conductivity at −20 °C (slope e-3, not e-2)", at(ice.k, -20), 2.385194, 1e-6)
	near(t, "ice specific heat at −20 °C (slope positive)", at(ice.c, -20), 1940.762, 1e-3)
	near(t, "ice density at −20 °C", at(ice.density, -20), 919.5042, 1e-4)
	near(t, "cold water specific heat at −10 °C (4081.7, slope negative)", at(coldWater, -10), 4234.278, 1e-3)
	// Ice at 0 °C: 2.22 W/(m·K) and 2.06 kJ/(kg·K) to 3 figures (handbook values, from memory).
	near(t, "ice conductivity at 0 °C", at(ice.k, 0), 2.22, 0.005)
	near(t, "ice specific heat at 0 °C", at(ice.c, 0), 2062, 5)
	// Water that turned to ice must leave the liquid: at −40 °C frozen cod is far below the specific heat it would have with its water whole.
	z, _ := (&mix{x: [6]float64{0.8, 0.18, 0.01, 0, 0, 0.01}}).freezing(-1)
	near(t, "what is liquid and what is ice at −20 °C is all the water", z.apparent(-20),
		(0.8-z.ice(-20))*at(coldWater, -20)+z.ice(-20)*at(ice.c, -20)+0.18*at(protein.c, -20)+0.01*at(fat.c, -20)+0.01*at(ash.c, -20)+z.latent(-20)*0.728*1/400, 1e-6)
}
