package rules

import (
	"math"
	"strconv"
)

// Band is the time spent between two temperatures.
var Band = &Kind{Name: "band", Unit: "min", Needs: [][]string{{"From"}, {"To"}, {"Time"}, {"Counting"}},
	May:  []string{"Stage", "Where", "Compare time"},
	Help: "time strictly between From and To is at most Time, over the stages or the whole chain", judge: judgeBand}

func judgeBand(v *view) Finding {
	l := v.l
	q := question{unit: "min", need: *l.TimeS / 60}
	in := func(t tilt) region { return between(*l.FromC-t.errK-t.ownK, *l.ToC+t.errK) }
	q.risks = func(t tilt) []risk { return []risk{v.risk(v.exposedTurns(), v.stages, in(t))} }
	q.traits = func(t tilt) []trait { return []trait{periods(v.stages, in(t))} }
	q.measure = func(p path, t tilt) outcome {
		r := in(t)
		if t.bound {
			p = v.cappedFrom(p, (r.lo+r.hi)/2)
		}
		sp := p.stay(v.stages, r)
		count := v.counting(t)
		o := v.exposed(sp, count, "band", t)
		o.bad += v.depth(p, r, sp.counted(count).s, count)
		return o
	}
	return v.judgePlaces(q)
}

// exposedTurns are the turns that matter for a time that is allowed at most.
func (v *view) exposedTurns() turns {
	return turns{joining: true, breaking: v.single(), another: v.single()}
}

// exposed judges a time that is allowed at most.
func (v *view) exposed(sp spent, c Counting, word string, t tilt) outcome {
	l := v.l
	was := sp.counted(c)
	o := none(NotMet, word)
	o.value, o.bad, o.margin = was.s/60, was.s/60, *l.TimeS-was.s
	if !t.rank {
		o.holes = holes{"value": lasting(was.s, 1), "count": strconv.Itoa(sp.count)}
	}
	o.start, o.end, o.at = when(was, sp.count)
	switch o.again = c == Once && sp.count > 1; {
	case o.again:
		o.word, o.bad, o.margin = map[string]string{"band": "band again"}[word], 1e5+was.s/60, math.NaN()
		if o.word == "" {
			o.word = "out again"
		}
	case !l.within(was.s, *l.TimeS):
	case t.bound && c == Once && v.mayMultiply(was, false):
		o.verdict = CannotTell
	default:
		o.verdict = Met
	}
	return o
}
