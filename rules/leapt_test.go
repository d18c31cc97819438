package rules

import (
	"testing"

	"slowpoint/model"
)

// statedStep is a step in air of its own at some faces: a face without a film is insulated.
type statedStep struct {
	stage        *model.Stage
	minutes      float64
	mediumC, w   float64
	faces        []*model.Face
	faceC, faceW []float64
}

func chainOf(steps []statedStep) []model.Step {
	var all []model.Step
	for _, s := range steps {
		st := filmStep(s.stage, s.minutes, s.mediumC, s.w)
		for i, f := range s.faces {
			e := model.Exposure{Surface: model.Insulated}
			if s.faceW[i] > 0 {
				w := s.faceW[i]
				e = model.Exposure{Surface: model.Film, FilmW: &w, Medium: model.Course{TimesS: []float64{0}, C: []float64{s.faceC[i]}}}
			}
			st.Faces = append(st.Faces, model.FaceExposure{Face: f, Exposure: e})
		}
		all = append(all, st)
	}
	return all
}

// Limits whose least favourable place was overlooked, because the value leaps there: between two spots, at one edge of several, or in a spheroid off its
// axes. Each is missed at a place that was found by trying hundreds; none may be told met. Made-up plans.
func TestLeapsOnceOverlooked(t *testing.T) {
	solid := func(k, c float64) *model.Material {
		p := model.Properties{KWmK: k, RhoKgM3: 1040, CJkgK: c}
		return &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return p }}
	}
	side := []*model.Face{model.Sides}
	for _, x := range []struct {
		name  string
		p     model.Product
		steps []statedStep
		l     Limit
		at    model.Place // where it is not met
	}{
		{"a bar that dips below To between two spots",
			model.Product{Shape: model.Bar, Size: model.Size{ThicknessM: 0.0435, WidthM: 0.0466}, Food: solid(0.269, 3627), StartC: 15},
			[]statedStep{
				{model.Cook, 17, 106.3, 8.4, []*model.Face{model.Top}, []float64{109.7}, []float64{24.8}},
				{model.Cook, 19, 65.5, 6.1, []*model.Face{model.Underside}, []float64{71.5}, []float64{32.8}},
				{model.Cook, 23, 101.3, 15.6, []*model.Face{model.Top}, []float64{99.3}, []float64{8.1}},
				{stage: model.Rest, minutes: 19, mediumC: 21.7, w: 14.4}, {stage: model.Cool, minutes: 60, mediumC: 1.7, w: 15.1}},
			Limit{Kind: HeatWithin, FromC: c(36.2), ToC: c(38.131702), TimeS: min_(13.5), Clock: Clock{Crossing: true}, Stages: []*model.Stage{model.Cook},
				Compare: MoreThan, CompareTime: LessThan},
			model.Place{UpM: -0.00264034348, AcrossM: 0.0228353079}},
		{"a bar that keeps To for too short a time in between",
			model.Product{Shape: model.Bar, Size: model.Size{ThicknessM: 0.0573, WidthM: 0.1252}, Food: solid(0.3, 2715), StartC: 7.8},
			[]statedStep{{model.Cook, 33, 104.6, 22.6, side, []float64{94.1}, []float64{63.9}}, {stage: model.HoldHot, minutes: 31, mediumC: 64.5, w: 49.1},
				{model.Cool, 254, 1, 8.7, []*model.Face{model.Underside}, []float64{0}, []float64{0}}, {stage: model.Store, minutes: 79, mediumC: 2.7, w: 56}},
			Limit{Kind: HeatWithin, ToC: c(44.7 + 0.064), SecondS: min_(9.5), TimeS: min_(60.46), Clock: Clock{Start: model.HoldHot}},
			model.Place{UpM: 0.0090367}},
		{"a spheroid off its axes",
			model.Product{Shape: model.Spheroid, Size: model.Size{ThicknessM: 0.0427, DiameterM: 0.0677}, Food: solid(0.462, 2694), StartC: 7.4},
			[]statedStep{{stage: model.Cook, minutes: 15, mediumC: 91, w: 16.1}, {stage: model.Cook, minutes: 31, mediumC: 52.4, w: 49.6},
				{stage: model.Cook, minutes: 34, mediumC: 96.5, w: 7.5}, {stage: model.Rest, minutes: 3, mediumC: 24.5, w: 29.3},
				{stage: model.HoldHot, minutes: 29, mediumC: 66.7, w: 9.6}, {stage: model.HoldHot, minutes: 27, mediumC: 43.2, w: 40.1}},
			Limit{Kind: HoldTable, Counting: Continuous, Stages: []*model.Stage{model.Cook, model.Rest, model.HoldHot},
				Table: &Table{Name: "T", Rows: []Row{{C: 62.36, S: 45.6 * 60}, {C: 65.56, S: 8.9 * 60}, {C: 68.36, S: 120}, {C: 75.36, S: 54}}}},
			model.Place{UpM: 0.0154476, AcrossM: 0.0060329}},
	} {
		t.Run(x.name, func(t *testing.T) {
			x.p.Name = "P"
			h, err := model.Solve(x.p, chainOf(x.steps), model.Options{})
			if err != nil {
				t.Fatal(err)
			}
			h.Points = append(h.Points, model.Point{Name: "there", Place: x.at})
			there := x.l
			there.Where.Name = "there"
			if f := one(t, there, h); f.Verdict != NotMet {
				t.Fatalf("the case does not show it: %v: %s", f.Verdict, f.Why)
			}
			if f := one(t, x.l, h); f.Verdict == Met {
				t.Errorf("met: %s", f.Why)
			}
		})
	}
}
