package rules

import (
	"testing"

	"slowpoint/model"
)

// Where a film weakens while the medium gets colder the surface rises for less than a second: between two instants of the scan, and told at every
// point as it is at the surface. A made-up plan.
func TestASurfaceThatRisesForAMoment(t *testing.T) {
	of := func(k, rho, cp float64) *model.Material {
		return &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return model.Properties{KWmK: k, RhoKgM3: rho, CJkgK: cp} }}
	}
	p := model.Product{Name: "P", Shape: model.LayeredSlab, Size: model.Size{ThicknessM: 0.0166}, StartC: 7.7, Layers: []model.Layer{{Food: of(0.476, 992, 3358), ThicknessM: 0.0086, BelowM2KW: 0.003},
		{Food: of(0.509, 955, 2467), ThicknessM: 0.003}, {Food: of(0.25, 1061, 2430), ThicknessM: 0.005}}}
	steps := chainOf([]statedStep{{stage: model.Cook, minutes: 50, mediumC: 84.2, w: 29}, {stage: model.Cook, minutes: 40, mediumC: 65, w: 12.46},
		{stage: model.Rest, minutes: 14, mediumC: 21.4, w: 19.6}, {stage: model.Cool, minutes: 144, mediumC: 0.2, w: 9.5}})
	steps[0].UntilC = c(64.5)
	h, err := model.Solve(p, steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	l := Limit{Kind: Falling, Stages: []*model.Stage{model.Cool, model.Rest}, AllowanceK: c(1e-6)}
	every := one(t, l, h)
	l.Where = Where{Name: "surface"}
	surface := one(t, l, h)
	if *surface.Value < 1e-3 {
		t.Fatalf("the surface rises by %g K: the case needs more", *surface.Value)
	}
	if *every.Value < *surface.Value-1e-9 {
		t.Errorf("%g K at every point, %g at the surface", *every.Value, *surface.Value)
	}
}
