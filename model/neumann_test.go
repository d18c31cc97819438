package model

import (
	"math"
	"testing"

	"slowpoint/testdata/published"
)

// icy is a food of which the ice forms at one temperature, as nearly as a table of heat contents can have it: over sharpK.
type icy struct {
	frozen, unfrozen Properties // of one density
	latentJkg        float64
	freezingC        float64
}

// sharpK is the range over which the ice of an icy food forms, K: about a thousandth of the temperature differences of the tests.
const sharpK = 0.02

// food gives the material down to lowC or a little below. The cold table of a law has 256 rows of equal heat, so the range is chosen such
// that the last ice forms at the end of a row: a bend within a row would be rounded.
func (f *icy) food(lowC float64) *Material {
	end := f.freezingC - sharpK
	plateau := f.latentJkg + f.frozen.CJkgK*sharpK
	rows := math.Floor(256 * plateau / (plateau + f.frozen.CJkgK*(end-lowC)))
	return &Material{Name: "test food", Source: "input of the test", Composed: true, LowC: end - plateau*(256/rows-1)/f.frozen.CJkgK, HighC: 100, FreezingC: &f.freezingC,
		Props: func(c float64) Properties {
			switch {
			case c >= f.freezingC:
				return f.unfrozen
			case c < end-1e-9:
				return f.frozen
			}
			p := f.frozen
			p.KWmK = f.unfrozen.KWmK + (f.freezingC-c)/sharpK*(f.frozen.KWmK-f.unfrozen.KWmK)
			p.CJkgK = plateau / sharpK
			return p
		},
		EnthalpyJkg: func(c float64) float64 {
			switch {
			case c >= f.freezingC:
				return f.unfrozen.CJkgK * (c - f.freezingC)
			case c >= end:
				return plateau / sharpK * (c - f.freezingC)
			}
			return f.frozen.CJkgK*(c-end) - plateau
		}}
}

// marchOnceFor marches a product with an effort of one's own.
func marchOnceFor(t testing.TB, p Product, steps []Step, e effort) *History {
	t.Helper()
	if found := Check(p, steps); found.Faults() > 0 {
		t.Fatal(found)
	}
	s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: new(scratch)}
	s.layOut()
	h, _ := s.marchOnce(e)
	if len(s.refused) > 0 {
		t.Fatal(s.refused)
	}
	return h
}

func heldTo(c float64) Exposure {
	return Exposure{Surface: Held, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}
}

// A half space that freezes from its surface (Neumann), as a slab so thick that its middle does not notice. A mesh knows the front to within
// a volume, so the front is read from the temperature in what is frozen, halfway to it, which the whole past of the front has made: below the
// surface the temperature follows an error function, and the front is where that is at the freezing point. Two and a half times the usual nodes.
func TestNeumann(t *testing.T) {
	made := map[string]*History{}
	for _, r := range published.Rows(t, "neumann.csv") {
		n := func(c string) float64 { return published.Number(t, r[c]) }
		const halfM = 0.15
		f := &icy{Properties{n("ks"), n("rho"), n("cs")}, Properties{n("kl"), n("rho"), n("cl")}, n("L"), n("freezing_C")}
		h := made[r["case"]]
		if h == nil {
			h = marchOnceFor(t, Product{Name: "half space", Shape: Slab, Size: Size{ThicknessM: 2 * halfM}, Food: f.food(n("surface_C") - 1), StartC: n("start_C")},
				[]Step{{Name: "freeze", Stage: Freeze, DurationS: 7200, Exposure: heldTo(n("surface_C"))}}, effort{more: 2.5, tolK: 2e-3})
			made[r["case"]] = h
		}
		now := n("time_s")
		at := func(depthM float64) float64 { return h.At(Place{UpM: halfM - depthM}, now) }
		spread := 2 * math.Sqrt(n("ks")/n("rho")/n("cs")*now)
		front := n("front_mm") / 1000
		look := front / 2
		full := (at(look) - n("surface_C")) / math.Erf(look/spread)
		got := spread * math.Erfinv((n("freezing_C")-n("surface_C"))/full)
		if math.Abs(got/front-1) > 0.005 {
			t.Errorf("%s after %g s: front at %.3f mm, want %.3f", r["case"], now, 1000*got, 1000*front)
		}
		t.Logf("%s after %g s: front off by %.3f %%", r["case"], now, 100*(got/front-1))
		for _, d := range []string{"5", "20", "50"} {
			got, want := at(published.Number(t, d)/1000), n("at"+d+"mm_C")
			// 0.5 % of the front is as much as this temperature gradient on it
			if tol := 0.02 + 0.005*math.Abs(n("freezing_C")-n("surface_C")); math.Abs(got-want) > tol {
				t.Errorf("%s after %g s: %s mm deep %.4f °C, want %.4f", r["case"], now, d, got, want)
			}
			t.Logf("   %s mm deep off by %.4f K", d, got-want)
		}
	}
}

// Where sensible heats vanish and the ice forms sharply, a slab of 50 mm freezes in Plank's time: t = Λ/(Tf - Tm)·(D/2h + D²/8k) = 7543.4028 s with
// Λ 2.2e8 J/m³, k 1.6 W/(m·K), h 30 W/(m²·K), Tf 0 °C, Tm -30 °C (Plank's P and R as in Encyclopaedia of Food Sciences; the number is
// arithmetic). Specific heat 20 J/(kg·K): own volumes of the source give 7541.6 to 7544.9 s with it.
func TestPlankLimit(t *testing.T) {
	p := Properties{1.6, 1000, 20}
	f := &icy{p, p, 220e3, 0}
	h := marchOnceFor(t, Product{Name: "slab", Shape: Slab, Size: Size{ThicknessM: 0.05}, Food: f.food(-31)},
		[]Step{{Name: "freeze", Stage: Freeze, DurationS: 8000, Exposure: filmTo(30, -30)}}, effort{more: 2.5, tolK: 4e-3})
	lo, hi := 0.0, 8000.0
	for hi-lo > 0.01 {
		if mid := (lo + hi) / 2; h.At(Place{}, mid) > -sharpK {
			lo = mid
		} else {
			hi = mid
		}
	}
	const want = 2.2e8 / 30 * (0.05/60 + 0.05*0.05/8/1.6)
	if math.Abs(want-7543.4028) > 1e-3 {
		t.Fatalf("Plank's time %.4f s", want)
	}
	t.Logf("%.1f s, %.3f %% off", hi, 100*(hi/want-1))
	if math.Abs(hi/want-1) > 0.003 {
		t.Errorf("%.1f s, want %.1f", hi, want)
	}
}
