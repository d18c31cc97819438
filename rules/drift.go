package rules

import (
	"slices"
	"strings"

	"slowpoint/model"
)

// sides gives those to which food may move sooner than calculated against a limit: what asks for heat is less so where food comes out of the steps
// before, or stays, colder; what asks for cold where it does hotter; and a clock that starts as food falls to a temperature where it starts earlier.
func (l *Limit) sides() []model.Drift {
	switch {
	case same(l.Where.Name, "medium"):
		return nil
	case l.Kind == Hold && l.ToC != nil, l.Kind == StayBelow, l.Kind == FreezeHold:
		return []model.Drift{model.Hotter}
	case l.Kind == Hold, l.Kind == HoldTable, l.Kind == Lethality, l.Kind == StayAbove:
		return []model.Drift{model.Colder}
	case l.Kind == HeatWithin, l.Kind == ByTheEnd && l.FromC != nil:
		return []model.Drift{model.Colder, model.Hotter} // a clock may start earlier
	case l.Kind == CoolWithin, l.Kind == ByTheEnd, l.Kind == Band, l.Kind == Outside, l.Kind == Falling:
		return []model.Drift{model.Earlier, model.Hotter}
	case l.Kind == Duration, l.Kind == Delay: // a step with Until ends sooner or later
		return []model.Drift{model.Colder, model.Hotter}
	}
	return nil
}

// wantsHeat tells whether a limit asks for heat: colder food is less favourable.
func (l *Limit) wantsHeat() bool {
	return l.Kind != Duration && l.Kind != Delay && slices.Contains(l.sides(), model.Colder)
}

// takes tells whether a side takes a step that begins before the last one that a limit is about has ended: what comes later says nothing of it.
func (l *Limit) takes(side model.Drift, h *model.History) bool {
	var steps []model.Step
	last, until := -1, false
	for i, sp := range h.Spans {
		if sp.Step == nil {
			return false
		}
		steps = append(steps, *sp.Step)
		if len(l.Stages) == 0 || l.Then == sp.Step.Stage || slices.Contains(l.Stages, sp.Step.Stage) {
			last = i
		}
		until = until || sp.Step.UntilC != nil
	}
	if (l.Kind == Duration || l.Kind == Delay) && !until {
		return false
	}
	for i := range last + 1 {
		if side.Takes(steps, i) {
			return true
		}
	}
	return false
}

// drifted weighs a finding that is met, or does not apply, against that of a run whose steps are taken to one side as far as their plan leaves it open:
// met in both, it has the lesser room of both, in temperature and in time; missed in the other, it cannot be told.
func (f *Finding) drifted(g *Finding) {
	if g.Verdict == Met || g.Verdict == NotApplicable {
		f.lessRoom(g, say("note margin drift", nil))
		return
	}
	f.open(say("drift", holes{"met": strings.TrimSuffix(f.Why, "."), "fast": strings.TrimSuffix(g.Why, ".")}))
}

// lessRoom takes the margins of another run in which the limit is met as well, where those are smaller. The note says so.
func (f *Finding) lessRoom(g *Finding, note string) {
	f.narrowed(g, note)
	if f.Verdict == Met && g.Verdict == Met && f.MarginS != nil && g.MarginS != nil && *g.MarginS < *f.MarginS-tieS {
		f.MarginS = g.MarginS
		f.noteOnce(note)
	}
}

// open makes a finding one that cannot be told.
func (f *Finding) open(why string) {
	f.Verdict, f.MarginK, f.MarginS, f.MarginPlace, f.CarryOver, f.StillWarm = CannotTell, nil, nil, "", "", ""
	f.Why = why
}
