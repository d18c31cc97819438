package rules

import "math"

// HeatWithin is a heating window: from the clock up to To within Time.
var HeatWithin = &Kind{Name: "heat", Unit: "min", Needs: [][]string{{"To"}, {"Time"}, {"Clock starts"}},
	May:  []string{"From", "Second time", "Stage", "Where", "Compare", "Compare time"},
	Help: "reaches To (and stays Second time) within Time of the clock", judge: judgeHeat}

func judgeHeat(v *view) Finding {
	ws := v.windows()
	q := question{unit: "min", need: *v.l.TimeS / 60, warm: true, rises: true, adds: true, measure: worstOf(ws, "heat nowhere", v.heatWindow)}
	q.risks = func(t tilt) []risk {
		all := []risk{v.risk(turns{breaking: true}, v.spans(), v.hot(t))}
		for _, w := range ws {
			all = append(all, tooShort(v.hot(t), func(p path) (float64, path, bool) {
				q := p.in(w.interval)
				start, ok := v.heatStart(q, w, t.errK)
				return start, q, ok
			}, v.second()))
		}
		return all
	}
	q.traits = func(t tilt) []trait {
		all := []trait{periods(v.spans(), v.hot(t))}
		if v.l.clocked() {
			all = append(all, periods(v.spans(), atOrAbove(v.l.crossedC()-t.errK)))
		}
		for _, w := range ws {
			all = append(all, func(p path) int {
				q := p.in(w.interval)
				start, ok := v.heatStart(q, w, t.errK)
				if !ok {
					return traitless
				}
				return q.attempts(v.hot(t), start, v.second())
			})
		}
		return all
	}
	return v.judgePlaces(q)
}

// hot is where a place has to come to, the limit's temperature moved against it.
func (v *view) hot(t tilt) region { return v.l.warmSide(*v.l.ToC + t.errK + t.ownK) }

// second is how long a place has to stay there, s.
func (v *view) second() float64 {
	if v.l.SecondS == nil {
		return 0
	}
	return *v.l.SecondS
}

// heatStart is when the clock of a window starts for a place: with the stage, or when it first is at the crossing temperature.
func (v *view) heatStart(q path, w window, errK float64) (float64, bool) {
	if !math.IsNaN(w.clock) {
		return w.clock, true
	}
	from := v.l.crossedC() - errK
	for i := range q.c {
		if q.c[i] >= from-sameK {
			if i == 0 {
				return q.t[0], true
			}
			return q.cross(i-1, from), true
		}
	}
	return 0, false
}

// heatWindow judges one window at one place.
func (v *view) heatWindow(p path, w window, t tilt) outcome {
	l := v.l
	q := p.in(w.interval)
	start, ok := v.heatStart(q, w, t.errK)
	if !ok {
		return nowhere("heat nowhere")
	}
	o := none(NotMet, "heat late")
	o.start, o.slow = start, true
	done, reached := q.reach(v.hot(t), start, v.second())
	if !reached {
		ran := w.b - start
		o.value, o.bad, o.margin, o.at = ran/60, neverBad-q.deepest([]interval{w.interval}, v.hot(t)), *l.TimeS-ran, w.b
		o.holes = holes{"value": lasting(ran, -1), "stage": v.stageNames()}
		switch {
		case !l.within(ran, *l.TimeS):
		case w.b > w.stageTo+sameS:
			o.word, o.margin = "heat stage", math.Min(o.margin, w.stageTo-w.b)
			v.afterStage(&o, q, w, w.b, -1, t)
		default:
			o.verdict, o.word, o.margin = CannotTell, "heat open", math.NaN()
		}
		return o
	}
	took := done - start
	o.end, o.at, o.value, o.bad, o.margin = done, done, took/60, took/60, *l.TimeS-took
	o.holes = holes{"value": lasting(took, 1), "stage": v.stageNames()}
	o.word = "heat closed"
	if took == 0 {
		o.bad = *l.ToC + t.errK + t.ownK - q.value(start)
	}
	switch {
	case done > w.stageTo+sameS:
		o.word, o.margin = "heat stage later", math.Min(o.margin, w.stageTo-done)
		v.afterStage(&o, q, w, done, -1, t)
	case l.within(took, *l.TimeS):
		o.verdict = Met
	}
	return o
}

// attempts is how many periods in a region were too short until one after start lasted s seconds; never where none did.
func (p path) attempts(r region, start, s float64) int {
	const never = 1 << 20
	done, ok := p.reach(r, start, s)
	if !ok {
		return never
	}
	n := 0
	for i := 0; i+1 < len(p.t) && p.t[i+1] < done; i++ {
		if r.holds(p.c[i]) && !r.holds(p.c[i+1]) {
			n++
		}
	}
	return n
}

// reach finds when a path has, after start, been in a region for s seconds in a row.
func (p path) reach(r region, start, s float64) (float64, bool) {
	on, from := false, 0.0
	for i := range p.t {
		if p.t[i] < start-sameS {
			continue
		}
		if !r.holds(p.c[i]) {
			on = false
			continue
		}
		if !on {
			on, from = true, p.t[i]
			if i > 0 && !r.holds(p.c[i-1]) && p.t[i] > p.t[i-1] {
				from = math.Max(start, p.cross(i-1, r.edge(p.c[i-1])))
			} else if i > 0 && r.holds(p.c[i-1]) {
				from = math.Min(p.t[i], math.Max(start, p.t[i-1]))
			}
		}
		until := p.t[i] // how long it certainly lasts: to where it leaves the region after this knot
		if i+1 < len(p.t) && !r.holds(p.c[i+1]) {
			until = p.cross(i, r.edge(p.c[i+1]))
		}
		if until-from >= s-sameS {
			return from + s, true
		}
	}
	return 0, false
}
