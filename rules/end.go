package rules

import "math"

// ByTheEnd is a temperature at one instant.
var ByTheEnd = &Kind{Name: "by the end", Unit: "°C", Needs: [][]string{{"From", "To"}},
	May:  []string{"Time", "Clock starts", "Stage", "Where", "Compare"},
	Help: "at or above From (at or below To) when the stage ends, or Time after the clock", judge: judgeEnd}

func judgeEnd(v *view) Finding {
	l := v.l
	sign, level, word := 1.0, 0.0, "end above"
	if l.ToC != nil {
		sign, level, word = -1, *l.ToC, "end below"
	} else {
		level = *l.FromC
	}
	q := question{unit: "°C", need: level, warm: sign > 0, adds: true}
	instants := func(p path, t tilt) []float64 {
		if l.TimeS == nil {
			var ts []float64
			for _, iv := range v.stages {
				ts = append(ts, iv.b)
			}
			return ts
		}
		return v.due(p, t)
	}
	if l.TimeS != nil {
		q.traits = func(t tilt) []trait { return v.clocks(v.windows(), t) }
	}
	q.room = func(p path) float64 {
		least := math.NaN()
		for _, t := range instants(p, tilt{}) {
			if t > v.c.end+sameS {
				continue
			}
			if r := sign * (p.value(t) - level); !(r >= least) {
				least = r
			}
		}
		return least
	}
	q.measure = func(p path, t tilt) outcome {
		worst := nowhere("end nowhere")
		shown := t
		shown.bound = false
		last := instants(p, shown)
		for i, at := range instants(p, t) {
			o := none(NotMet, word)
			o.at = at
			if l.TimeS != nil {
				o.start, o.end = at-*l.TimeS, at
			}
			if at > v.c.end+sameS {
				o.verdict, o.word, o.at, o.end = CannotTell, "end open", math.NaN(), math.NaN()
				o.holes = holes{"when": clockTime(at)}
			} else {
				c := p.value(at)
				if t.bound {
					c = p.highest(at, math.Min(last[i], v.c.end))
				}
				o.value, o.bad = c, -sign*c
				o.holes = holes{"value": l.degrees(c, int(-sign)), "when": clockTime(at)}
				kept := l.warmSide(level + t.errK + t.ownK)
				if sign < 0 {
					kept = l.coldSide(level - t.errK - t.ownK)
				}
				switch {
				case t.bound && sign > 0 && last[i] > at+sameS: // at either instant it may be colder
					o.verdict = CannotTell
				case kept.holds(c):
					o.verdict = Met
				}
			}
			if worse(o, worst) {
				worst = o
			}
		}
		return worst
	}
	return v.judgePlaces(q)
}

// due are the instants Time after the clock of each window.
func (v *view) due(p path, t tilt) []float64 {
	var ts []float64
	for _, w := range v.windows() {
		if start, ok, open := v.clockStart(p, w, t); ok {
			ts = append(ts, start+*v.l.TimeS)
		} else if open {
			ts = append(ts, v.c.end+*v.l.TimeS)
		}
	}
	return ts
}
