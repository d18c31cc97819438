package rules

import "math"

// Outside is hot or cold, nothing in between.
var Outside = &Kind{Name: "outside", Unit: "min", Needs: [][]string{{"From"}, {"To"}}, May: []string{"Stage", "Where", "Compare"},
	Help: "never strictly between From and To: at or below From, or at or above To", judge: judgeOutside}

func judgeOutside(v *view) Finding {
	l := v.l
	strict := l.Compare == MoreThan || l.Compare == LessThan
	q := question{unit: "min", need: 0}
	q.room = func(p path) float64 {
		deep := math.Inf(-1) // the deepest point in the band, K; negative: how far off the nearest is
		for _, iv := range v.stages {
			s := p.in(iv).turned(between(*l.FromC, *l.ToC))
			for i, x := range s.c {
				deep = math.Max(deep, math.Min(x-*l.FromC, *l.ToC-x))
				if mid := (*l.FromC + *l.ToC) / 2; i > 0 && (x-mid)*(s.c[i-1]-mid) <= 0 {
					deep = math.Max(deep, (*l.ToC-*l.FromC)/2)
				}
			}
		}
		return -deep
	}
	q.measure = func(p path, t tilt) outcome {
		r := between(*l.FromC-t.errK-t.ownK, *l.ToC+t.errK+t.ownK)
		if strict {
			r.slack = sameK
		}
		if t.bound {
			p = v.cappedFrom(p, (r.lo+r.hi)/2)
		}
		sp := p.stay(v.stages, r)
		o := none(NotMet, "outside")
		o.value, o.bad = sp.total.s/60, sp.total.s/60+v.depth(p, r, sp.total.s, Total)
		o.holes = holes{"value": lasting(sp.total.s, 1)}
		if sp.count > 0 {
			o.start, o.end, o.at = sp.total.from, sp.lastEnd, sp.total.from
			return o
		}
		for _, iv := range v.stages { // a touch has no length
			s := p.in(iv)
			for i := range s.c {
				if r.holds(s.c[i]) {
					o.word, o.at = "outside touch", s.t[i]
					return o
				}
			}
		}
		o.verdict, o.word = Met, "outside never"
		return o
	}
	return v.judgePlaces(q)
}
