package food

import (
	"errors"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"slowpoint/model"
	"slowpoint/testdata/published"
)

// near fails unless got is within tol of want.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: %.9g, want %.9g ± %g", what, got, want, tol)
	}
}

// parallel is the volume-weighted conductivity, the upper bound; the tests compare it with independent figures.
func (m *mix) parallel(t float64) float64 {
	k, total := 0.0, m.specificVolume(t)
	for i, c := range components {
		k += m.x[i] / at(c.density, t) / total * at(c.k, t)
	}
	return k
}

func TestPureWater(t *testing.T) {
	// Arithmetic on the published polynomials (ASHRAE 2006, ch. 9, Table 2), worked out apart from this program; last digit.
	m := mix{x: [6]float64{1}}
	for _, c := range []struct{ t, rho, k, c float64 }{
		{0, 997.18, 0.57109, 4176.2},
		{20, 995.740, 0.603659, 4176.57},
		{60, 983.842, 0.652707, 4190.45},
		{100, 959.920, 0.680304, 4221.84},
	} {
		near(t, "density", m.density(c.t), c.rho, 0.0006)
		near(t, "conductivity", m.conductivity(c.t), c.k, 6e-7)
		near(t, "specific heat", m.specificHeat(c.t), c.c, 0.006)
	}
}

func TestComponentModel(t *testing.T) {
	// The same polynomials with volume-additive density and the rule of Levy, computed independently in Python; last digit printed.
	meat := [6]float64{0.72, 0.21, 0.06, 0, 0, 0.01}
	starchy := [6]float64{0.70, 0.03, 0.02, 0.22, 0.02, 0.01}
	for _, c := range []struct {
		name                          string
		x                             [6]float64
		t, rho, parallel, levy, c, al float64
	}{
		{"meat 5 °C", meat, 5, 1053.2902, 0.485449, 0.454714, 3560.126, 1.212621e-07},
		{"meat 20 °C", meat, 20, 1050.6665, 0.505910, 0.474615, 3565.815, 1.266828e-07},
		{"meat 70 °C", meat, 70, 1032.1134, 0.556832, 0.524977, 3595.632, 1.414612e-07},
		{"starchy 5 °C", starchy, 5, 1106.9248, 0.495916, 0.470353, 3414.353, 1.244507e-07},
		{"starchy 20 °C", starchy, 20, 1104.8271, 0.517977, 0.492883, 3422.541, 1.303469e-07},
		{"starchy 70 °C", starchy, 70, 1087.2962, 0.572787, 0.549172, 3457.177, 1.460963e-07},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := mix{x: c.x}
			near(t, "density", m.density(c.t), c.rho, 6e-5)
			near(t, "parallel", m.parallel(c.t), c.parallel, 6e-7)
			near(t, "conductivity", m.conductivity(c.t), c.levy, 6e-7)
			near(t, "specific heat", m.specificHeat(c.t), c.c, 6e-4)
			near(t, "diffusivity", m.conductivity(c.t)/m.density(c.t)/m.specificHeat(c.t), c.al, 6e-14)
		})
	}
}

func TestFoodsAsPredictedIndependently(t *testing.T) {
	rows := published.Rows(t, "food_predictions.csv")
	if len(rows) != len(Foods) {
		t.Fatalf("%d predictions for %d foods", len(rows), len(Foods))
	}
	for _, r := range rows {
		f, ok := Find(r["food"])
		if !ok {
			t.Errorf("no food %q", r["food"])
			continue
		}
		f.PoresJoin = false // what lies between the pores
		m := f.Material()
		if m.Composition == "" {
			t.Errorf("%s: no composition in words", r["food"])
		}
		for _, at := range []string{"20", "60"} {
			p := m.Props(published.Number(t, at))
			near(t, r["food"]+" density "+at, p.RhoKgM3, published.Number(t, r["rho"+at]), 0.11)
			near(t, r["food"]+" conductivity "+at, p.KWmK, published.Number(t, r["k_levy"+at]), 1.1e-4)
			near(t, r["food"]+" specific heat "+at, p.CJkgK, published.Number(t, r["c"+at]), 1.1)
		}
	}
}

// Mistakes found in copies of the coefficients; each of these figures moves far beyond its tolerance if one of them slips in.
func TestCopyErrors(t *testing.T) {
	near(t, "fat conductivity at 60 °C (slope e-4, not e-3)", at(fat.k, 60), 0.163509, 1e-6)
	near(t, "water specific heat at 20 °C (4176.2, not 4128.9)", at(water.c, 20), 4176.572, 1e-3)
	near(t, "fat specific heat at 60 °C (slope 1.4733, not 0.14733)", at(fat.c, 60), 2055.315, 1e-3)
	near(t, "carbohydrate specific heat at 60 °C (quadratic term negative)", at(carbohydrate.c, 60), 1645.166, 1e-3)
	near(t, "ash specific heat at 60 °C (not its conductivity)", at(ash.c, 60), 1192.722, 1e-3)
	near(t, "protein density at 60 °C (0.5184)", at(protein.density, 60), 1298.796, 1e-3)
	// The diffusivity of fat printed in the same table, 0.098777 − 1.2569e-4·t mm²/s (from memory), agrees with k/(ρ·c) for e-4 only.
	near(t, "fat diffusivity at 20 °C, mm²/s", 1e6*at(fat.k, 20)/at(fat.density, 20)/at(fat.c, 20), 0.0963, 0.003)
}

func TestPublishedSpecificHeats(t *testing.T) {
	sum, worst, n := 0.0, 0.0, 0
	for _, r := range published.Rows(t, "ashrae_specific_heat.csv") {
		// The printed column counts fibre twice: once within total carbohydrate, once as fibre. To check the polynomials the test does the
		// same; the program does not.
		m := mix{}
		for i, col := range []string{"water", "protein", "fat", "carbohydrate_total", "fibre", "ash"} {
			m.x[i] = published.Number(t, r[col]) / 100
		}
		d := m.specificHeat(20)/1000 - published.Number(t, r["c"])
		sum, worst, n = sum+d*d, math.Max(worst, math.Abs(d)), n+1
		if math.Abs(d) > 0.0055 { // printed to 0.01
			t.Logf("%s: %.4f, printed %s", r["food"], m.specificHeat(20)/1000, r["c"])
		}
	}
	t.Logf("%d foods: rms %.4f, worst %.4f kJ/(kg·K)", n, math.Sqrt(sum/float64(n)), worst)
	if n < 27 {
		t.Errorf("%d foods, want 27 or more", n)
	}
	if rms := math.Sqrt(sum / float64(n)); rms > 0.004 {
		t.Errorf("%d foods: rms %.4f kJ/(kg·K), want at most 0.004", n, rms)
	}
}

func TestLevy(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k1, k2 := rapid.Float64Range(0.05, 3).Draw(t, "k1"), rapid.Float64Range(0.05, 3).Draw(t, "k2")
		v := rapid.Float64Range(0, 1).Draw(t, "share")
		a, b := phase{k1, v}, phase{k2, 1 - v}
		k := levy(a, b)
		if math.Abs(k-levy(b, a)) > 1e-9*k {
			t.Fatalf("not symmetric: %g and %g", k, levy(b, a))
		}
		lo, hi := maxwell(a, b), maxwell(b, a)
		if lo > hi {
			lo, hi = hi, lo
		}
		if k < lo*(1-1e-9) || k > hi*(1+1e-9) {
			t.Fatalf("%g outside the Maxwell-Eucken bounds %g to %g", k, lo, hi)
		}
		if got := levy(phase{k1, 0}, phase{k2, 1}); math.Abs(got-k2) > 1e-9*k2 {
			t.Fatalf("none of phase 1: %g, want %g", got, k2)
		}
		if got := levy(phase{k1, 1}, phase{k2, 0}); math.Abs(got-k1) > 1e-9*k1 {
			t.Fatalf("nothing but phase 1: %g, want %g", got, k1)
		}
	})
}

// Every published diffusivity that is listed for a built-in food lies within the scatter of such figures, ±15 %, of the prediction.
func TestPublishedDiffusivities(t *testing.T) {
	for _, r := range published.Rows(t, "diffusivity.csv") {
		m, ok := Named(r["food"])
		if !ok {
			t.Fatalf("no food %q", r["food"])
		}
		p := m.Props(published.Number(t, r["at"]))
		predicted, printed := 1e6*p.KWmK/p.RhoKgM3/p.CJkgK, published.Number(t, r["mm2_s"])
		low, high := 0.85*printed, 1.15*printed
		if r["lowest"] != "" {
			low, high = published.Number(t, r["lowest"]), printed
		}
		t.Logf("%-42s %-38s printed %.3f, predicted %.3f mm²/s, %+.0f %%", r["food"], r["sample"], printed, predicted, 100*(predicted/printed-1))
		if predicted < low || predicted > high {
			t.Errorf("%s: predicted %.4f mm²/s, want %.4f to %.4f", r["food"], predicted, low, high)
		}
	}
}

func TestFoods(t *testing.T) {
	if len(Foods) != 96 {
		t.Fatalf("%d foods, want 96", len(Foods))
	}
	seen := map[string]bool{}
	for _, f := range Foods {
		if seen[plain(f.Name)] {
			t.Errorf("%s: twice", f.Name)
		}
		seen[plain(f.Name)] = true
		if strings.TrimSpace(f.Source) == "" {
			t.Errorf("%s: no source", f.Name)
		}
		if (f.FreezingC != nil) != (f.FreezingSource != "") {
			t.Errorf("%s: freezing point and its source go together", f.Name)
		}
		if f.FreezingC != nil && !(*f.FreezingC > -5 && *f.FreezingC < 0) {
			t.Errorf("%s: freezing point %g °C", f.Name, *f.FreezingC)
		}
		f.PoresJoin = false // what lies between the pores
		m, err := Compose(f.Name, f.Source, f.Composition)
		if err != nil {
			t.Errorf("%s: %v", f.Name, err)
			continue
		}
		if (m.EnthalpyJkg != nil) != (f.FreezingC != nil) || (m.IceShare != nil) != (f.FreezingC != nil) {
			t.Errorf("%s: a known freezing point and the heat content through it go together", f.Name)
		}
		for _, tc := range []float64{LowC, 0, 20, 100, HighC} {
			p := m.Props(tc)
			if f.FreezingC != nil && tc < 0 { // frozen
				if !(p.KWmK > 0.9 && p.KWmK < 2.3 && p.RhoKgM3 > 1000 && p.RhoKgM3 < 1100 && p.CJkgK > 1800 && p.CJkgK < 2700) {
					t.Errorf("%s at %g °C: %+v", f.Name, tc, p)
				}
				continue
			}
			if !(p.KWmK > 0.15 && p.KWmK < 0.8 && p.RhoKgM3 > 850 && p.RhoKgM3 < 1400 && p.CJkgK > 1800 && p.CJkgK < 4300) {
				t.Errorf("%s at %g °C: %+v", f.Name, tc, p)
			}
		}
	}
}

func TestNamed(t *testing.T) {
	m, ok := Named("  COD,  atlantic, RAW ")
	if !ok || m.Name != "Cod, Atlantic, raw" || m.FreezingC == nil || *m.FreezingC != -2.2 || !m.Composed {
		t.Fatalf("%+v %v", m, ok)
	}
	// 28.0 °F in ASHRAE Handbook – Refrigeration (2006), chapter 9, Table 3.
	near(t, "28 °F", *m.FreezingC, (28-32)/1.8, 0.03)
	if !strings.Contains(m.Source, "15015") || !strings.Contains(m.Source, "Choi & Okos") {
		t.Errorf("source %q", m.Source)
	}
	*m.FreezingC = 99
	if again, _ := Named("Cod, Atlantic, raw"); *again.FreezingC != -2.2 {
		t.Error("a caller changed the table")
	}
	if _, ok := Named("cod"); ok {
		t.Error("part of a name must not match")
	}
	for _, f := range []string{"Shrimp, raw (not previously frozen)", "Egg, whole, raw", "Egg white, raw", "Egg yolk, raw", "Potato, main crop, raw",
		"Cheese, cheddar", "Cheese, cottage, creamed", "Milk, whole", "Frankfurter, beef, unheated"} { // their freezing points are known from memory only
		if m, ok := Named(f); !ok || m.FreezingC != nil {
			t.Errorf("%s must come without a freezing point", f)
		}
	}
}

// TestSetForms: a food that flows is answered with a listed one that does not.
func TestSetForms(t *testing.T) {
	for from, to := range setForms {
		raw, ok := Named(from)
		set, is := Named(to)
		if !ok || !is || raw.Flow == model.FlowsNo || set.Flow != model.FlowsNo || raw.SetForm != set.Name || set.SetForm != "" {
			t.Errorf("%s -> %s", from, to)
		}
	}
}

func TestNearest(t *testing.T) {
	for _, c := range []struct{ typed, first string }{
		{"cod", "Cod, Atlantic, raw"},
		{"Salmon farmed", "Salmon, Atlantic, farmed, raw"},
		{"stawberry", "Strawberry, raw"},
		{"carrot boiled", "Carrots, boiled"},
		{"chicken breast roast", "Chicken, breast, meat only, roasted"},
	} {
		got := Nearest(c.typed)
		if len(got) == 0 || len(got) > 5 || got[0] != c.first {
			t.Errorf("%q: %q, want %q first", c.typed, got, c.first)
		}
	}
	if got := Nearest("xylophone"); len(got) != 0 {
		t.Errorf("nothing is like a xylophone: %q", got)
	}
}

func TestRefusedCompositions(t *testing.T) {
	v := func(x float64) *float64 { return &x }
	beef := Composition{WaterPc: 71.7, ProteinPc: 21.24, FatPc: 4.4, AshPc: 1.08}
	with := func(change func(*Composition)) Composition { c := beef; change(&c); return c }
	for _, c := range []struct {
		name   string
		source string
		c      Composition
		fields string
	}{
		{"sum 96.42", "label", with(func(c *Composition) { c.WaterPc -= 2 }), "Water"},
		{"sum 103.42", "label", with(func(c *Composition) { c.FatPc += 5 }), "Water"},
		{"negative fat", "label", with(func(c *Composition) { c.FatPc = -4.4 }), "Fat"},
		{"not a number", "label", with(func(c *Composition) { c.AshPc = math.NaN() }), "Ash"},
		{"two columns", "label", with(func(c *Composition) { c.ProteinPc, c.FibrePc = 121, -1 }), "Protein Fibre"},
		{"no source", " ", beef, "Source"},
		{"mostly air", "label", with(func(c *Composition) { c.AirByVolumePc = v(50.5) }), "Air by volume"},
		{"air and density", "label", with(func(c *Composition) { c.AirByVolumePc, c.DensityKgM3 = v(5), v(1000) }), "Density"},
		{"freezing point of nought", "label", with(func(c *Composition) { c.FreezingC = v(0) }), "Freezing point"},
		{"freezing point above nought", "label", with(func(c *Composition) { c.FreezingC = v(28.9) }), "Freezing point"},
		{"freezing point of a deep freezer", "label", with(func(c *Composition) { c.FreezingC = v(-40) }), "Freezing point"},
		{"freezing point not a number", "label", with(func(c *Composition) { c.FreezingC = v(math.NaN()) }), "Freezing point"},
		{"density zero", "label", with(func(c *Composition) { c.DensityKgM3 = v(0) }), "Density"},
		{"density in g/cm³", "label", with(func(c *Composition) { c.DensityKgM3 = v(1.05) }), "Density"},
		{"density of a stone", "label", with(func(c *Composition) { c.DensityKgM3 = v(1250) }), "Density"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Compose("beef", c.source, c.c)
			var faults Faults
			if !errors.As(err, &faults) {
				t.Fatalf("error %v, want Faults", err)
			}
			var fields []string
			for _, f := range faults {
				fields = append(fields, f.Field)
				if f.Msg == "" || f.Hint == "" {
					t.Errorf("%+v: message or hint missing", f)
				}
			}
			if got := strings.Join(fields, " "); got != c.fields {
				t.Errorf("faults in %q, want %q: %v", got, c.fields, err)
			}
		})
	}
}

func TestAir(t *testing.T) {
	v := func(x float64) *float64 { return &x }
	beef := Composition{WaterPc: 71.7, ProteinPc: 21.24, FatPc: 4.4, AshPc: 1.08}
	solid, err := Compose("beef", "label", beef)
	if err != nil {
		t.Fatal(err)
	}
	airy := beef
	airy.AirByVolumePc = v(20)
	foam, err := Compose("foam", "label", airy)
	if err != nil {
		t.Fatal(err)
	}
	s, f := solid.Props(20), foam.Props(20)
	near(t, "density with 20 % air", f.RhoKgM3, 0.8*s.RhoKgM3, 1e-9)
	near(t, "specific heat does not change", f.CJkgK, s.CJkgK, 1e-9)
	// Maxwell-Eucken by hand, share 0.2 of air at 0.025 W/(m·K).
	near(t, "conductivity with 20 % air", f.KWmK, s.KWmK*(2*s.KWmK+0.025-0.4*(s.KWmK-0.025))/(2*s.KWmK+0.025+0.2*(s.KWmK-0.025)), 1e-12)

	weighed := beef
	weighed.DensityKgM3 = v(f.RhoKgM3)
	same, err := Compose("foam", "label", weighed)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "the same air from its density", same.Props(60).KWmK, foam.Props(60).KWmK, 1e-12)

	weighed.DensityKgM3 = v(s.RhoKgM3 * 1.03)
	dense, err := Compose("beef", "label", weighed)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "3 % too dense is no air", dense.Props(20).KWmK, s.KWmK, 1e-12)
}

// Apples hold a fifth to a quarter of air. With their density as measured, conductivity and specific heat are the measured ones within the
// scatter of published figures.
func TestPublishedApples(t *testing.T) {
	for _, r := range published.Rows(t, "textbook_foods.csv") {
		if r["k"] == "" {
			continue
		}
		f, ok := Find(r["food"])
		if !ok {
			t.Fatalf("no food %q", r["food"])
		}
		m, err := f.Weighed(Weighing{DensityKgM3: ptr(published.Number(t, r["rho"])), Source: "textbook"})
		if err != nil {
			t.Fatal(err)
		}
		p := m.Props(20)
		t.Logf("%s: %+v", r["sample"], p)
		near(t, r["sample"]+" density", p.RhoKgM3, published.Number(t, r["rho"]), 1e-9)
		near(t, r["sample"]+" conductivity", p.KWmK, published.Number(t, r["k"]), 0.15*published.Number(t, r["k"]))
		near(t, r["sample"]+" specific heat", p.CJkgK, published.Number(t, r["c"]), 0.05*published.Number(t, r["c"]))
	}
}

// Bread has no behaviour before it is weighed.
func TestBread(t *testing.T) {
	bread, ok := Find("bread, WHITE")
	if !ok || !bread.Airy() {
		t.Fatalf("%+v %v", bread, ok)
	}
	if _, ok := Named("Bread, white"); ok {
		t.Error("bread came without a density")
	}
	var faults Faults
	if _, err := Compose("bread", "label", bread.Composition); !errors.As(err, &faults) || len(faults) != 1 || faults[0].Field != "Density" {
		t.Errorf("%v, want the density asked for", err)
	}
	tf := -5.
	m, err := bread.Weighed(Weighing{DensityKgM3: ptr(300), FreezingC: &tf, Source: "own scales"})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "density", m.Props(20).RhoKgM3, 300, 1e-9)
	// The equation of the effective medium itself, with the conductivity between the pores that food_predictions.csv gives.
	k, air := m.Props(20).KWmK, 1-300/1263.7
	near(t, "balance of the effective medium", (1-air)*(0.3651-k)/(0.3651+2*k)+air*(0.025-k)/(0.025+2*k), 0, 2e-4)
	if m.Props(-20).KWmK <= k || m.EnthalpyJkg == nil || *m.FreezingC != tf || !strings.Contains(m.Source, "own scales") || !strings.Contains(m.Source, "Landauer") {
		t.Errorf("%+v", m)
	}
	for _, c := range []float64{50, 1400} {
		if _, err := bread.Weighed(Weighing{DensityKgM3: &c, Source: "own scales"}); !errors.As(err, &faults) || faults[0].Field != "Density" {
			t.Errorf("%g kg/m³: %v", c, err)
		}
	}
	if bread.DensityKgM3 != nil || Foods[0].DensityKgM3 != nil {
		t.Error("weighing changed the table")
	}
}

// Two phases that both reach through: one alone is itself, and neither is favoured.
func TestMedium(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k1, k2 := rapid.Float64Range(0.02, 3).Draw(t, "k1"), rapid.Float64Range(0.02, 3).Draw(t, "k2")
		a := phase{k1, rapid.Float64Range(0, 1).Draw(t, "share")}
		b := phase{k2, 1 - a.share}
		k := medium(a, b)
		lo, hi := maxwell(a, b), maxwell(b, a)
		if lo > hi {
			lo, hi = hi, lo
		}
		if k < lo*(1-1e-9) || k > hi*(1+1e-9) || math.Abs(k-medium(b, a)) > 1e-9*k {
			t.Fatalf("%g, Maxwell-Eucken bounds %g to %g, the other way round %g", k, lo, hi, medium(b, a))
		}
		if got := medium(phase{k1, 1}, phase{k2, 0}); math.Abs(got-k1) > 1e-9*k1 {
			t.Fatalf("nothing but phase 1: %g, want %g", got, k1)
		}
	})
}

func TestScaledSum(t *testing.T) {
	// Beef, sirloin: ASHRAE Handbook – Refrigeration (2006), ch. 9, Table 3 adds up to 98.42 %.
	m, err := Compose("beef", "ASHRAE", Composition{WaterPc: 71.7, ProteinPc: 21.24, FatPc: 4.4, AshPc: 1.08})
	if err != nil {
		t.Fatal(err)
	}
	full, err := Compose("beef", "ASHRAE", Composition{WaterPc: 71.7 / .9842, ProteinPc: 21.24 / .9842, FatPc: 4.4 / .9842, AshPc: 1.08 / .9842})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "specific heat", m.Props(20).CJkgK, full.Props(20).CJkgK, 1e-9)
	if want := "water 71.7 %, protein 21.24 %, fat 4.4 %, ash 1.08 % (adds up to 98.42 %, scaled to 100 %)"; m.Composition != want {
		t.Errorf("in words %q, want %q", m.Composition, want)
	}
}

// What holds no water cannot boil: fat rendered and clarified is 100 % fat.
func TestWaterless(t *testing.T) {
	for _, v := range []struct {
		name             string
		waterPc, fatPc   float64
		nothingThatBoils bool
	}{{"clarified fat", 0, 100, true}, {"butter", 17, 83, false}} {
		m, err := Compose(v.name, "made up", Composition{WaterPc: v.waterPc, FatPc: v.fatPc})
		if err != nil || m.Waterless != v.nothingThatBoils {
			t.Errorf("%s: %v, %v", v.name, m.Waterless, err)
		}
	}
}

func ptr(x float64) *float64 { return &x }
