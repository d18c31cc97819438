package rules

// StayAbove and StayBelow are keeping hot and keeping cold: no excursion, or none longer than Time.
var (
	StayAbove = &Kind{Name: "stay above", Needs: [][]string{{"From", "To"}}, May: []string{"Time", "Counting", "Stage", "Where", "Compare", "Compare time"},
		Help:  "never below From during the stages; with Time: the longest excursion allowed (Counting total: all of them together; once: one only)",
		judge: func(v *view) Finding { return judgeStay(v, 1) }}
	StayBelow = &Kind{Name: "stay below", Needs: [][]string{{"To", "From"}}, May: []string{"Time", "Counting", "Stage", "Where", "Compare", "Compare time"},
		Help:  "never above To during the stages; with Time: the longest excursion allowed (Counting total: all of them together; once: one only)",
		judge: func(v *view) Finding { return judgeStay(v, -1) }}
)

// judgeStay judges keeping at or above (sign 1) or at or below (sign −1) a temperature.
func judgeStay(v *view, sign float64) Finding {
	l := v.l
	level := l.FromC
	if level == nil {
		level = l.ToC
	}
	if l.TimeS != nil {
		return v.judgePlaces(v.excursion(*level, sign))
	}
	q := question{unit: "°C", need: *level, warm: sign > 0}
	q.room = func(p path) float64 {
		_, c := p.mostOf(v.stages, -sign)
		return sign * (c - *level)
	}
	q.measure = func(p path, t tilt) outcome {
		at, c := p.mostOf(v.stages, -sign)
		o := none(NotMet, "stay above")
		kept := l.warmSide(*level + t.errK + t.ownK)
		if sign < 0 {
			o.word, kept = "stay below", l.coldSide(*level-t.errK-t.ownK)
		}
		o.value, o.at, o.bad = c, at, -sign*c
		if v.begins(at) {
			o.word += " began"
		}
		if !t.rank {
			own := l.own()
			o.holes = holes{"value": l.degrees(c, int(-sign)), "level": l.operator(sign < 0) + own["bare"]}
		}
		if kept.holds(c) {
			o.verdict = Met
		}
		return o
	}
	return v.judgePlaces(q)
}

// begins tells whether an instant is the start of one of the stages.
func (v *view) begins(at float64) bool {
	for _, iv := range v.stages {
		if at == iv.a {
			return true
		}
	}
	return false
}

// excursion is a limit on how long a place may be beyond the temperature.
func (v *view) excursion(level, sign float64) question {
	l := v.l
	q := question{unit: "min", need: *l.TimeS / 60, warm: sign > 0}
	strict := l.Compare == MoreThan || l.Compare == LessThan
	beyond := func(t tilt) region {
		switch {
		case sign > 0 && strict:
			return atOrBelow(level + t.errK + t.ownK)
		case sign > 0:
			return below(level + t.errK + t.ownK)
		case strict:
			return atOrAbove(level - t.errK - t.ownK)
		}
		return above(level - t.errK - t.ownK)
	}
	q.risks = func(t tilt) []risk { return []risk{v.risk(v.exposedTurns(), v.stages, beyond(t))} }
	q.traits = func(t tilt) []trait { return []trait{periods(v.stages, beyond(t))} }
	q.measure = func(p path, t tilt) outcome {
		c := v.counting(t)
		if c == NotCounted {
			c = Continuous // Time is the longest excursion
		}
		out, word := beyond(t), "out above"
		if sign < 0 {
			word = "out below"
		}
		sp := p.stay(v.stages, out)
		o := v.exposed(sp, c, word, t)
		o.bad += v.depth(p, out, sp.counted(c).s, c)
		return o
	}
	return q
}
