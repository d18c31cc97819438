package report

import (
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// TestMadeByUntil: a room that is only the distance from a limit to the temperature that ends a step does not make the limit the
// tightest; the same room from anything else does.
func TestMadeByUntil(t *testing.T) {
	yes, no, four := true, false, 4.0
	chill := func(reached *bool) *model.History {
		return &model.History{Spans: []model.Span{{Step: &model.Step{Name: "chill", Stage: model.Cool, UntilC: &four}, Reached: reached, EndS: 9000}}}
	}
	limit := func(k *rules.Kind, toC float64) *rules.Limit { return &rules.Limit{Name: k.Name, Kind: k, ToC: &toC} }
	for _, x := range []struct {
		name string
		f    rules.Finding
		h    *model.History
		made bool
	}{
		{"5 °C wanted, the chill ends at 4 °C", rules.Finding{Limit: limit(rules.StayBelow, 5), Verdict: rules.Met, MarginK: ptr(0.96)}, chill(&yes), true},
		{"more room than the end of the step gives", rules.Finding{Limit: limit(rules.StayBelow, 5), Verdict: rules.Met, MarginK: ptr(1.6)}, chill(&yes), false},
		{"the step ended by its longest duration", rules.Finding{Limit: limit(rules.StayBelow, 5), Verdict: rules.Met, MarginK: ptr(0.96)}, chill(&no), false},
		{"as much room as the end of the step gives, by chance, an hour after it", rules.Finding{Limit: limit(rules.StayBelow, 5), Verdict: rules.Met, MarginK: ptr(0.96), AtS: ptr(12600.)}, chill(&yes), false},
		{"what is lacking is never made by it", rules.Finding{Limit: limit(rules.StayBelow, 3), Verdict: rules.NotMet, MarginK: ptr(-1.)}, chill(&yes), false},
		{"a heating limit is not about a chill", rules.Finding{Limit: limit(rules.HeatWithin, 3), Verdict: rules.Met, MarginK: ptr(1.)}, chill(&yes), false},
		{"lethality has no temperature to reach", rules.Finding{Limit: limit(rules.Lethality, 5), Verdict: rules.Met, MarginK: ptr(1.)}, chill(&yes), false},
	} {
		t.Run(x.name, func(t *testing.T) {
			p := &Product{History: x.h}
			if x.f.AtS == nil {
				x.f.AtS = ptr(9000.)
			}
			if got := p.madeByUntil(&x.f) == "chill"; got != x.made {
				t.Errorf("%v", got)
			}
			f := x.f
			f.Level = "must"
			other := rules.Finding{Limit: limit(rules.CoolWithin, 21), Level: "must", Verdict: f.Verdict, MarginK: ptr(3.)}
			p.Judgement.Findings = []rules.Finding{f, other}
			if first := p.worstFirst()[0].Limit; (first == other.Limit) != x.made {
				t.Errorf("%s stands first", first.Name)
			}
		})
	}
}
