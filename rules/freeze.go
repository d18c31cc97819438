package rules

// FreezeHold is freezing in two phases.
var FreezeHold = &Kind{Name: "freeze", Unit: "min", Needs: [][]string{{"From"}, {"Time"}, {"To"}, {"Second time"}},
	May:  []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "at or below From for Time, then at or below To for Second time", judge: judgeFreeze}

func judgeFreeze(v *view) Finding {
	l := v.l
	q := question{unit: "min", need: *l.SecondS / 60}
	chilled := func(t tilt) region { return l.coldSide(*l.FromC - t.errK) }
	frozen := func(t tilt) region { return l.coldSide(*l.ToC - t.errK - t.ownK) }
	q.risks = func(t tilt) []risk {
		all := []risk{v.risk(turns{breaking: true}, v.stages, frozen(t)), v.risk(turns{breaking: true}, v.stages, chilled(t))}
		for _, iv := range v.stages {
			all = append(all, tooShort(chilled(t), func(p path) (float64, path, bool) { return iv.a, p.in(iv), true }, *l.TimeS))
		}
		return all
	}
	q.traits = func(t tilt) []trait {
		all := []trait{periods(v.stages, chilled(t)), periods(v.stages, frozen(t))}
		for _, iv := range v.stages {
			all = append(all, func(p path) int { return p.in(iv).attempts(chilled(t), iv.a, *l.TimeS) })
		}
		return all
	}
	q.measure = func(p path, t tilt) outcome {
		first, second := "freeze first", "freeze"
		if *l.TimeS == 0 {
			first, second = "freeze never", "freeze at once"
		}
		o := none(NotMet, first)
		o.value, o.margin = 0, -*l.SecondS
		o.bad = neverBad - p.deepest(v.stages, chilled(t))
		for n, iv := range v.stages {
			q := p.in(iv)
			done, ok := q.reach(chilled(t), iv.a, *l.TimeS)
			if !ok {
				continue
			}
			held := v.after(p, n, done, frozen(t))
			o.word = second
			o.value, o.bad, o.margin = held.s/60, -held.s/60, held.s-*l.SecondS
			if held.s == 0 {
				o.bad = -p.deepest(v.stages, frozen(t))
			}
			o.start, o.end, o.at = done, held.to, held.to
			o.holes = holes{"value": lasting(held.s, -1)}
			if l.enough(held.s, *l.SecondS) {
				o.verdict = Met
			}
			break
		}
		return o
	}
	return v.judgePlaces(q)
}

// after is the longest period in a region from an instant in the n-th stretch of the stages on.
func (v *view) after(p path, n int, from float64, r region) period {
	var longest period
	for k, iv := range v.stages[n:] {
		q := path{at: p.at}
		s := p.in(iv)
		for i, t := range s.t {
			if k == 0 && t <= from {
				continue
			}
			if k == 0 && len(q.t) == 0 {
				q.t, q.c = append(q.t, from), append(q.c, s.value(from))
			}
			q.t, q.c = append(q.t, t), append(q.c, s.c[i])
		}
		if len(q.t) < 2 {
			continue
		}
		if sp := q.stay([]interval{{q.t[0], q.t[len(q.t)-1]}}, r); sp.longest.s > longest.s {
			longest = sp.longest
		}
	}
	if longest.to == 0 {
		longest.from, longest.to = from, from
	}
	return longest
}
