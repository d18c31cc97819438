package rules

// Duration is how long stages last.
var Duration = &Kind{Name: "duration", Unit: "min", Needs: [][]string{{"Stage"}, {"Time"}, {"Compare time"}},
	Help: "the stages last at least or at most Time, whatever the temperature", judge: judgeDuration}

func judgeDuration(v *view) Finding {
	l := v.l
	s, end := 0.0, 0.0
	for _, iv := range v.stages {
		s += iv.b - iv.a
		end = iv.b
	}
	o := none(NotMet, "duration most")
	least := l.CompareTime == AtLeast || l.CompareTime == MoreThan
	o.value, o.margin, o.at, o.start, o.end = s/60, *l.TimeS-s, end, v.stages[0].a, end
	o.holes = holes{"value": lasting(s, 1), "stage": "stage " + v.stageNames()}
	if len(l.Stages) > 1 {
		o.holes["stage"] = "stages " + v.stageNames()
	}
	if least {
		o.word, o.margin = "duration least", s-*l.TimeS
		o.holes["value"] = lasting(s, -1)
	}
	if least && l.enough(s, *l.TimeS) || !least && l.within(s, *l.TimeS) {
		o.verdict = Met
	}
	q := question{unit: "min", need: *l.TimeS / 60}
	tail := v.untilMoves(&o, v.stages)
	f := v.finding(o, q)
	f.Why = v.sentence(&f, o, tail)
	return f
}
