package rules

import (
	"math"
	"testing"

	"slowpoint/model"
)

// icy is a test food that freezes from −1.3 °C on: ice by Raoult's law, w·(1 − Tf/T) of its mass with w = 0.7 (Schwartzberg 1976), with a
// latent heat of 333 kJ/kg.
func icy() *model.Material {
	const tf, w, latent, c0 = -1.3, 0.7, 333e3, 3500.
	ice := func(t float64) float64 {
		if t >= tf {
			return 0
		}
		return w * (1 - tf/t)
	}
	at := tf
	return &model.Material{Name: "icy food", Source: "test input", Composed: true, LowC: -40, HighC: 150, FreezingC: &at, IceShare: ice,
		EnthalpyJkg: func(t float64) float64 { return c0*(t-tf) - latent*ice(t) },
		Props: func(t float64) model.Properties {
			q := model.Properties{KWmK: 0.45 + 0.8*ice(t), RhoKgM3: 1040, CJkgK: c0}
			if t < tf {
				q.CJkgK -= latent * w * tf / (t * t)
			}
			return q
		}}
}

// Limits on freezing and thawing, on a history that goes through the ice: the centre of a slab is the last, so that values can be
// read off courses.
func TestFreezingIsJudged(t *testing.T) {
	steps := []model.Step{filmStep(model.Freeze, 260, -32, 34), filmStep(model.Thaw, 900, 8, 13)}
	h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.037}, Food: icy(), StartC: 14}, steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	first := func(d dense, level float64) float64 { // min
		for i := range d.t {
			if d.c[i] <= level {
				return d.t[i] / 60
			}
		}
		return math.Inf(1)
	}
	longest := 0.0 // from 10 to −12 °C, of places every millimetre: the outermost start first, the innermost end last
	for up := 0.0; up <= 0.0185; up += 0.001 {
		d := read(h, model.Place{UpM: up})
		longest = math.Max(longest, first(d, -12)-first(d, 10))
	}
	skin := read(h, model.Place{UpM: 0.0185})
	for _, x := range []struct {
		name    string
		l       Limit
		verdict Verdict
		value   float64
	}{
		{"from 10 to −12 °C", Limit{Kind: CoolWithin, FromC: c(10), ToC: c(-12), TimeS: min_(240), Clock: Clock{Crossing: true}, Stages: st(model.Freeze)}, Met, longest},
		{"−18 °C by the end", Limit{Kind: ByTheEnd, ToC: c(-18), Stages: st(model.Freeze)}, Met, h.At(model.Place{}, 260*60)},
		{"too little time", Limit{Kind: CoolWithin, FromC: c(10), ToC: c(-12), TimeS: min_(60), Clock: Clock{Crossing: true}, Stages: st(model.Freeze)}, NotMet, longest},
		{"thawed by the end", Limit{Kind: ByTheEnd, FromC: c(0), Stages: st(model.Thaw)}, Met, h.At(model.Place{}, h.EndS())},
		{"still cold until it cooks", Limit{Kind: CoolWithin, FromC: c(10), ToC: c(5), TimeS: min_(240), Clock: Clock{Crossing: true}, Stages: st(model.Freeze)}, NotMet, 1160 - first(skin, 10)},
		{"never above 6 °C while it thaws", Limit{Kind: StayBelow, ToC: c(6), Stages: st(model.Thaw)}, NotMet, h.At(model.Place{UpM: 0.0185}, h.EndS())},
	} {
		t.Run(x.name, func(t *testing.T) {
			f := one(t, x.l, h)
			if f.Verdict != x.verdict || f.Value == nil || math.Abs(*f.Value-x.value) > 0.1 {
				got := math.NaN()
				if f.Value != nil {
					got = *f.Value
				}
				t.Errorf("%v, %.2f; want %v, %.2f (%s)", f.Verdict, got, x.verdict, x.value, f.Why)
			}
		})
	}
}
