package rules

import (
	"math"

	"slowpoint/model"
)

// Delay is the time between two stages.
var Delay = &Kind{Name: "delay", Unit: "min", Needs: [][]string{{"Stage"}, {"Time"}}, May: []string{"Compare time"},
	Help: "the second stage starts within Time of the end of the first (Stage: cook > cool)", judge: judgeDelay}

func judgeDelay(v *view) Finding {
	l := v.l
	first, then := l.Stages[0], l.Then
	q := question{unit: "min", need: *l.TimeS / 60}
	worst := none(NotApplicable, "stage lacking")
	worst.holes = holes{"stage": then.Name}
	if v.onlyBefore(then, first) { // what it took down is not the food of the first stage, and nobody can tell whether it is in its place
		worst.verdict, worst.word, worst.holes = CannotTell, "delay order", holes{"first": first.Name, "second": then.Name}
		if chills(then) {
			worst.word = "delay order cold"
		}
		f := v.finding(worst, q)
		f.Why = v.sentence(&f, worst, "")
		return f
	}
	for i, r := range v.runs {
		if r.stage != first {
			continue
		}
		if o, ok := v.wait(r.b, i, then); ok && worse(o, worst) {
			worst = o
		}
	}
	tail := v.untilMoves(&worst, []interval{{worst.start, worst.at}})
	f := v.finding(worst, q)
	f.Why = v.sentence(&f, worst, tail)
	return f
}

// onlyBefore tells whether a stage comes, and each time before the first of another.
func (v *view) onlyBefore(early, late *model.Stage) bool {
	comes, seen := false, false
	for _, r := range v.runs {
		switch {
		case r.stage == late:
			seen = true
		case r.stage == early && seen:
			return false
		case r.stage == early:
			comes = true
		}
	}
	return comes && seen
}

// wait judges the time from the end of the run i to the next start of a stage; ok is false where the first stage comes again
// before it.
func (v *view) wait(from float64, i int, then *model.Stage) (outcome, bool) {
	l := v.l
	o := none(NotMet, "delay")
	o.start = from
	h := holes{"first": l.Stages[0].Name, "second": then.Name}
	o.holes = h
	for _, r := range v.runs[i+1:] {
		if r.stage == then {
			took := r.a - from
			o.value, o.bad, o.margin, o.at, o.end = took/60, took/60, *l.TimeS-took, r.a, r.a
			h["value"] = lasting(took, 1)
			if l.within(took, *l.TimeS) {
				o.verdict = Met
			}
			return o, true
		}
		if r.stage == l.Stages[0] {
			return o, false
		}
	}
	ran := v.c.end - from
	o.value, o.bad, o.margin, o.at = ran/60, ran/60, *l.TimeS-ran, v.c.end
	o.word = "delay late"
	h["value"] = lasting(ran, -1)
	if l.within(ran, *l.TimeS) {
		o.verdict, o.word = CannotTell, "delay open"
		o.margin = math.NaN()
	}
	return o, true
}
