package rules

import (
	"strings"
	"testing"

	"slowpoint/model"
)

// What moist food gains while it stands open in air is counted only where the water that it loses was calculated, or where a cover or
// a typed film stands for it: a thick slab leaves the oven at 46 °C inside and rises to 58 °C or more.
func TestCarryOverOfMoistFood(t *testing.T) {
	wet, dry, lid, film := true, false, 0.08, 6.
	for _, x := range []struct {
		name      string
		rest      model.Exposure
		waterless bool
		verdict   Verdict
		says      string // in the notes; "": none about carry-over
	}{
		{"open in still air, nothing said", model.Exposure{Surface: model.StillAir}, false, NotMet, "It would be met only through the rise after the cook"},
		{"open in moving air, nothing said", model.Exposure{Surface: model.MovingAir, AirMS: &film}, false, NotMet, "not counted"},
		{"a typed film of air stands for convection alone", model.Exposure{Surface: model.StillAir, FilmW: &film}, false, NotMet, "not counted"},
		{"open by the column Cover", model.Exposure{Surface: model.StillAir, Cover: model.Open}, false, NotMet, "not counted"},
		{"wet, with its evaporation", model.Exposure{Surface: model.StillAir, Wet: &wet}, false, Met, "Met only through the rise after the cook"},
		{"said to be dry", model.Exposure{Surface: model.StillAir, Wet: &dry}, false, Met, "a moist surface loses heat"},
		{"under a lid", model.Exposure{Surface: model.StillAir, Cover: model.LooseLid, WrapM2KW: &lid}, false, Met, "Met only"},
		{"a typed film", model.Exposure{Surface: model.Film, FilmW: &film}, false, Met, "a moist surface loses heat"},
		{"food without water", model.Exposure{Surface: model.StillAir}, true, Met, "Met only"},
	} {
		t.Run(x.name, func(t *testing.T) {
			q := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3500}
			food := &model.Material{Name: "test food", Source: "test input", Waterless: x.waterless, Props: func(float64) model.Properties { return q }}
			cook, rest := filmStep(model.Cook, 95, 165, 31), filmStep(model.Rest, 25, 24, 1)
			medium := rest.Medium
			rest.Exposure = x.rest
			rest.Medium = medium
			h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.094}, Food: food, StartC: 7}, []model.Step{cook, rest}, model.Options{})
			if err != nil {
				t.Fatal(err)
			}
			l := Limit{Name: "L", Kind: Hold, FromC: c(55), TimeS: c(0), Counting: Total, Stages: st(model.Cook, model.Rest), Applies: Applies{All: true}}
			within := Limit{Name: "W", Kind: HeatWithin, ToC: c(55), TimeS: c(7200), Clock: Clock{Start: model.Cook}, Stages: l.Stages, Applies: l.Applies}
			anywhere := within
			anywhere.Stages = nil
			for _, f := range Judge([]Limit{l, within, anywhere}, nil, Subject{Product: "P", History: h}).Findings {
				if f.Verdict != x.verdict || !strings.Contains(strings.Join(f.Notes, "\n"), x.says) {
					t.Errorf("%s: %v, %q, %q; centre %.1f °C after the cook, %.1f °C later", f.Limit.Kind.Name, f.Verdict, f.Why, f.Notes, h.At(model.Place{}, 5700), h.At(model.Place{}, 7200))
				}
				if f.Verdict == NotMet && f.Limit.Kind == HeatWithin && !strings.HasPrefix(f.Why, "As the cook ended, the slowest place (centre) was at 46.") {
					t.Errorf("heat says %q", f.Why)
				}
				if f.Limit == nil || len(f.Limit.Stages) == 1 {
					t.Error("the finding is of another limit")
				}
				if (f.CarryOver != "") != (f.Verdict == Met) {
					t.Errorf("%s: carry-over %q of a limit that is %v", f.Limit.Kind.Name, f.CarryOver, f.Verdict)
				}
			}
		})
	}
}

// Only what comes before the first step in which moist food lies open and dry counts, wherever that step stands, and on whatever face; and
// all of it again from the next cook on.
func TestCarryOverBehindACover(t *testing.T) {
	wet, film, wrap := true, 6., 0.05
	covered := model.Exposure{Surface: model.StillAir, Cover: model.TightWrap, WrapM2KW: &wrap}
	open, moist, typed := model.Exposure{Surface: model.StillAir}, model.Exposure{Surface: model.StillAir, Wet: &wet}, model.Exposure{Surface: model.Film, FilmW: &film}
	type rest struct {
		minutes float64
		e       model.Exposure
		top     *model.Exposure
	}
	for _, x := range []struct {
		name    string
		rests   []rest
		again   bool // the whole again, from the cook on
		verdict Verdict
		stages  []*model.Stage // nil: cook and rest
	}{
		{"covered all the time", []rest{{1, covered, nil}, {24, covered, nil}}, false, Met, nil},
		{"covered for a minute only", []rest{{1, covered, nil}, {24, open, nil}}, false, NotMet, nil},
		{"wet for a minute only", []rest{{1, moist, nil}, {24, open, nil}}, false, NotMet, nil},
		{"a typed film for a minute only", []rest{{1, typed, nil}, {24, open, nil}}, false, NotMet, nil},
		{"open at the end, when all has been reached", []rest{{24, covered, nil}, {5, open, nil}}, false, Met, nil},
		{"open on one face", []rest{{25, typed, &open}}, false, NotMet, nil},
		{"open, then cooked again and covered", []rest{{5, open, nil}, {25, covered, nil}}, true, Met, nil},
		{"open all the time, of the rest alone", []rest{{25, open, nil}}, false, NotMet, st(model.Rest)},
	} {
		t.Run(strings.ReplaceAll(x.name, " ", "-"), func(t *testing.T) {
			q := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3500}
			food := &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return q }}
			steps := []model.Step{filmStep(model.Cook, 95, 165, 31)}
			for _, r := range x.rests {
				st := filmStep(model.Rest, r.minutes, 24, 1)
				medium := st.Medium
				st.Exposure, st.Medium = r.e, medium
				if r.top != nil {
					e := *r.top
					e.Medium = medium
					st.Faces = []model.FaceExposure{{Face: model.Top, Exposure: e}}
				}
				steps = append(steps, st)
			}
			if x.again {
				steps = []model.Step{steps[0], steps[1], filmStep(model.Cook, 2, 165, 31), steps[2]}
			}
			h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.094}, Food: food, StartC: 7}, steps, model.Options{})
			if err != nil {
				t.Fatal(err)
			}
			l := Limit{Name: "L", Kind: Hold, FromC: c(52), TimeS: c(0), Counting: Total, Stages: st(model.Cook, model.Rest), Applies: Applies{All: true}}
			if x.stages != nil {
				l.Stages = x.stages
			}
			if f := Judge([]Limit{l}, nil, Subject{Product: "P", History: h}).Findings[0]; f.Verdict != x.verdict || strings.Contains(f.Why, "Inf") {
				t.Errorf("%v, want %v: %s %q; centre %.1f °C after the cook, %.1f °C in the end", f.Verdict, x.verdict, f.Why, f.Notes, h.At(model.Place{}, 5700), h.At(model.Place{}, h.EndS()))
			}
		})
	}
}
