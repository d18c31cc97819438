package rules

import (
	"testing"

	"slowpoint/model"
)

// A value far from what is required is that of the least favourable place all the same, to 0.2 % and 0.005 K. Made-up plans; held against
// places every 0.1 mm between the faces.
func TestValueIsThatOfTheWorstPlace(t *testing.T) {
	p := model.Properties{KWmK: 0.563, RhoKgM3: 1040, CJkgK: 3156}
	top := []*model.Face{model.Top}
	food := &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return p }}
	h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.0423}, Food: food, StartC: 11}, chainOf([]statedStep{
		{stage: model.Cook, minutes: 14, mediumC: 107.4, w: 12.5}, {stage: model.Cook, minutes: 27, mediumC: 50.9, w: 25.6},
		{model.Cook, 26, 80.1, 47.4, top, []float64{94.7}, []float64{28.2}}, {model.Cook, 21, 44.3, 8.5, top, []float64{35.2}, []float64{64.9}},
		{stage: model.Rest, minutes: 9, mediumC: 23.6, w: 52.5}, {stage: model.HoldHot, minutes: 29, mediumC: 50.2, w: 20.7},
		{model.HoldHot, 12, 39.5, 11.4, []*model.Face{model.Underside}, []float64{49.9}, []float64{34.7}}}), model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	cook := []*model.Stage{model.Cook}
	for _, x := range []struct {
		name  string
		l     Limit
		least bool // the least value is the worst
	}{
		{"reached once", Limit{Kind: Hold, FromC: c(44), TimeS: c(0), Counting: Total, Stages: cook}, true},
		{"lethality", Limit{Kind: Lethality, FromC: c(44), ReferenceC: c(55), ZK: c(7.5), TimeS: min_(3), Stages: cook}, true},
		{"hold", Limit{Kind: Hold, FromC: c(48), TimeS: min_(4), Counting: Total, Stages: cook}, true},
		{"band", Limit{Kind: Band, FromC: c(15), ToC: c(52), TimeS: min_(300), Counting: Total}, false},
	} {
		t.Run(x.name, func(t *testing.T) {
			h.Points = h.Points[:1]
			told := one(t, x.l, h)
			if told.Verdict != Met {
				t.Fatalf("%v: %s", told.Verdict, told.Why)
			}
			allowed := 0.005
			if told.Unit != "°C" {
				allowed = 0.002 * *told.Value
			}
			named := x.l
			named.Where.Name = "there"
			for up := -0.02115; up <= 0.02115; up += 1e-4 {
				h.Points = append(h.Points[:1], model.Point{Name: "there", Place: model.Place{UpM: up}})
				better := *told.Value - *one(t, named, h).Value
				if !x.least {
					better = -better
				}
				if better > allowed {
					t.Errorf("%.2f mm: every point is told %.5g, better by %.3g than that place", 1000*up, *told.Value, better)
					break
				}
			}
		})
	}
}
