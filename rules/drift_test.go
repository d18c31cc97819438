package rules

import (
	"errors"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
)

// TestDrift: a limit on food that stands or is kept is met only if it is met too where the food drifts as fast as what the plan leaves open allows, and so is
// one whose clock starts there; the other runs are asked for by no other limit.
func TestDrift(t *testing.T) {
	chain := func(start, rest float64, cook bool) *model.History {
		q := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3500}
		food := &model.Material{Name: "test food", Source: "test input", Waterless: true, Props: func(float64) model.Properties { return q }}
		steps := []model.Step{filmStep(model.Rest, 40, 20, rest), filmStep(model.Cool, 90, 2, 30)}
		if cook {
			steps = append([]model.Step{filmStep(model.Cook, 60, 90, 40)}, steps...)
		}
		h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.03}, Food: food, StartC: start}, steps, model.Options{})
		if err != nil {
			t.Fatal(err)
		}
		return h
	}
	slow, fast := chain(80, 5, false), chain(80, 30, false)
	all := Applies{All: true}
	for _, x := range []struct {
		name    string
		l       Limit
		h, fast *model.History
		asks    bool
		verdict Verdict
	}{
		{"stay above in the rest", Limit{Kind: StayAbove, FromC: c(60), Stages: st(model.Rest)}, slow, fast, true, CannotTell},
		{"stay above, met in both", Limit{Kind: StayAbove, FromC: c(30), Stages: st(model.Rest)}, slow, fast, true, Met},
		{"stay above, missed anyway", Limit{Kind: StayAbove, FromC: c(79), Stages: st(model.Rest)}, slow, fast, false, NotMet},
		{"hold in the rest", Limit{Kind: Hold, FromC: c(60), TimeS: c(1200), Counting: Continuous, Stages: st(model.Rest)}, slow, fast, true, CannotTell},
		{"hold, no stage, nothing heated", Limit{Kind: Hold, FromC: c(60), TimeS: c(1200), Counting: Continuous}, slow, fast, true, CannotTell},
		{"hold, no stage, cooked", Limit{Kind: Hold, FromC: c(60), TimeS: c(600), Counting: Continuous}, chain(10, 5, true), chain(10, 30, true), true, Met},
		{"hold in the cook: nothing stood before", Limit{Kind: Hold, FromC: c(60), TimeS: c(600), Counting: Continuous, Stages: st(model.Cook)}, chain(10, 5, true), chain(10, 30, true), false, Met},
		{"by the end of the chill", Limit{Kind: ByTheEnd, ToC: c(21), Stages: st(model.Cool)}, slow, fast, true, Met},
		{"cooling, whose clock starts in the rest", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: c(2800), Clock: Clock{Crossing: true}, Stages: st(model.Cool)}, slow, fast, true, CannotTell},
		{"nothing is left open", Limit{Kind: StayAbove, FromC: c(60), Stages: st(model.Rest)}, slow, nil, true, Met},
	} {
		t.Run(x.name, func(t *testing.T) {
			asked := false
			x.l.Name, x.l.Applies = "L", all
			s := Subject{Product: "P", History: x.h, Drift: func(model.Drift) ([]Run, error) {
				asked = true
				if x.fast == nil {
					return nil, nil
				}
				return []Run{{History: x.fast}}, nil
			}}
			f := Judge([]Limit{x.l}, nil, s).Findings[0]
			if f.Verdict != x.verdict || asked != x.asks {
				t.Errorf("%v, asked %v; want %v, %v: %s", f.Verdict, asked, x.verdict, x.asks, f.Why)
			}
			if told := strings.Contains(f.Why, "leaves blank"); told != (x.verdict == CannotTell) || told && (f.MarginK != nil || f.MarginS != nil) {
				t.Errorf("%s, %v, %v", f.Why, f.MarginK, f.MarginS)
			}
		})
	}
	met := Limit{Name: "L", Kind: StayAbove, FromC: c(30), Stages: st(model.Rest), Applies: all}
	with := Judge([]Limit{met}, nil, Subject{Product: "P", History: slow, Drift: func(model.Drift) ([]Run, error) { return []Run{{History: fast}}, nil }}).Findings[0]
	own := Judge([]Limit{met}, nil, Subject{Product: "P", History: fast}).Findings[0]
	faster := *with.MarginK
	if *with.MarginK != *own.MarginK {
		t.Errorf("room %g K, want that of the faster run, %g K", *with.MarginK, *own.MarginK)
	}

	// The room in time is that of the faster run too; of several runs the least, told once.
	within := Limit{Name: "L", Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: c(5000), Clock: Clock{Crossing: true}, Stages: st(model.Cool), Applies: all}
	between := chain(80, 9, false)
	with = Judge([]Limit{within}, nil, Subject{Product: "P", History: slow, Drift: func(model.Drift) ([]Run, error) { return []Run{{History: between}, {History: fast}}, nil }}).Findings[0]
	own = Judge([]Limit{within}, nil, Subject{Product: "P", History: fast}).Findings[0]
	usual := Judge([]Limit{within}, nil, Subject{Product: "P", History: slow}).Findings[0]
	if with.Verdict != Met || *with.MarginS != *own.MarginS || !(*own.MarginS < *usual.MarginS-60) {
		t.Errorf("%v, room %g s, want that of the faster run, %g s, of %g s", with.Verdict, *with.MarginS, *own.MarginS, *usual.MarginS)
	}
	for i, note := range with.Notes {
		if slices.Contains(with.Notes[:i], note) {
			t.Errorf("twice: %s", note)
		}
	}
	if n := len(slices.DeleteFunc(slices.Clone(with.Notes), func(n string) bool { return !strings.Contains(n, "counts what the plan leaves blank") })); n != 1 {
		t.Errorf("the lesser room is told %d times: %q", n, with.Notes)
	}

	// What is enough without the other runs does not ask for them.
	for _, enough := range []bool{true, false} {
		asked := false
		f := Judge([]Limit{met}, nil, Subject{Product: "P", History: slow, Enough: func(fs []Finding) bool { return enough && len(fs) == 1 && fs[0].Verdict == Met },
			Drift: func(model.Drift) ([]Run, error) { asked = true; return []Run{{History: fast}}, nil }}).Findings[0]
		if asked == enough || enough == (*f.MarginK == faster) {
			t.Errorf("enough %v: asked %v, room %g K", enough, asked, *f.MarginK)
		}
	}

	// Where the other runs cannot be calculated, neither a limit that is met nor one that does not apply is left so.
	for _, l := range []Limit{within, {Name: "L", Kind: CoolWithin, FromC: c(95), ToC: c(21), TimeS: c(5000), Clock: Clock{Crossing: true}, Stages: st(model.Cool), Applies: all}} {
		f := Judge([]Limit{l}, nil, Subject{Product: "P", History: slow, Drift: func(model.Drift) ([]Run, error) { return nil, errors.New("no properties there") }}).Findings[0]
		if f.Verdict != CannotTell || !strings.Contains(f.Why, "no properties there") {
			t.Errorf("from %g °C: %v: %s", *l.FromC, f.Verdict, f.Why)
		}
	}
}
