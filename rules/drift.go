package rules

import (
	"slices"
	"strings"

	"slowpoint/model"
)

// drifts tells whether a limit may be met only because food drifts slowly: it is about a stage that keeps food or lets it stand, or, where it
// names none, about staying at a temperature, or about heat that no cook or reheat gave.
func (l *Limit) drifts(h *model.History) bool {
	switch l.Kind {
	case Duration, Delay, Humidity, Stated, Falling:
		return false
	}
	if same(l.Where.Name, "medium") {
		return false
	}
	stays := slices.Contains([]*Kind{StayAbove, StayBelow, Outside, Band, ByTheEnd}, l.Kind)
	heated := false
	for _, sp := range h.Spans {
		switch {
		case sp.Step == nil:
		case model.Drifts(sp.Step.Stage) && len(l.Stages) > 0:
			if slices.Contains(l.Stages, sp.Step.Stage) {
				return true
			}
		case model.Drifts(sp.Step.Stage):
			if stays || !heated && l.Kind != CoolWithin {
				return true
			}
		}
		heated = heated || sp.Step != nil && (sp.Step.Stage == model.Cook || sp.Step.Stage == model.Reheat)
	}
	return false
}

// drifted weighs a met finding against that of the run in which the food drifts as fast as what the plan leaves open allows: met in both, it has the
// lesser room of both in temperature; else it cannot be told.
func (f *Finding) drifted(g *Finding) {
	if g.Verdict == Met || g.Verdict == NotApplicable {
		f.narrowed(g, say("note margin drift", nil))
		return
	}
	f.Verdict, f.MarginK, f.MarginS, f.MarginPlace, f.CarryOver = CannotTell, nil, nil, "", ""
	f.Why = say("drift", holes{"met": strings.TrimSuffix(f.Why, "."), "fast": strings.TrimSuffix(g.Why, ".")})
}
