package rules

import (
	"math"

	"slowpoint/model"
)

// CoolWithin is a cooling window: from the clock to To within Time.
var CoolWithin = &Kind{Name: "cool", Unit: "min", Needs: [][]string{{"To"}, {"Time"}, {"Clock starts"}},
	May:  []string{"From", "Stage", "Where", "Compare", "Compare time"},
	Help: "from the clock down to To, and staying there, within Time", judge: judgeCool}

func judgeCool(v *view) Finding {
	l := v.l
	ws := v.windows()
	q := question{unit: "min", need: *l.TimeS / 60, measure: worstOf(ws, "cool nowhere", v.coolWindow)}
	q.risks = func(t tilt) []risk { return []risk{v.risk(turns{breaking: true}, v.spans(), v.cold(t))} }
	q.traits = func(t tilt) []trait {
		return append(v.clocks(ws, t), periods(v.spans(), v.cold(t)))
	}
	q.room = func(p path) float64 {
		least := math.NaN()
		for _, w := range ws {
			if r := v.coolRoom(p, w); !(r >= least) {
				least = r
			}
		}
		return least
	}
	return v.judgePlaces(q)
}

// cold is where a place has to come to, the limit's temperature moved against it.
func (v *view) cold(t tilt) region { return v.l.coldSide(*v.l.ToC - t.errK - t.ownK) }

// worstOf measures the least favourable of the windows that count; word is said where none does.
func worstOf(ws []window, word string, one func(path, window, tilt) outcome) measure {
	return func(p path, t tilt) outcome {
		worst := nowhere(word)
		for _, w := range ws {
			if o := one(p, w, t); worse(o, worst) {
				worst = o
			}
		}
		return worst
	}
}

// nowhere is the outcome of a place that a limit does not apply to.
func nowhere(word string) outcome {
	o := none(NotApplicable, word)
	o.bad = math.Inf(-1)
	return o
}

// clockStart finds when the clock of a window starts for a place by a fall: at its first fall to the crossing temperature after
// its highest temperature. ok is false where the window does not count; open tells that the fall is still to come when the
// chain ends in the cold. The error starts it earlier.
func (v *view) clockStart(p path, w window, t tilt) (start float64, ok, open bool) {
	if !math.IsNaN(w.clock) {
		return w.clock, true, false
	}
	from := v.l.crossedC()
	q, top := p.in(w.interval).peaked(from - t.errK)
	if q.c[top] <= from+sameK && !(t.edge && q.c[top] >= from-t.errK-sameK) {
		return 0, false, false
	}
	level := from + t.errK
	if start, ok = q.fallsTo(level, top); !ok {
		return 0, false, w.last && v.endsCold(w)
	}
	if t.bound {
		start = v.earliest(q, top, level, start)
	}
	return start, true, false
}

// clocks are the traits of a clock that starts by a fall, one for each window: how often a place fell to the level before the clock starts. Where
// two peaks of a place are equally high, it starts after the one or after the other.
func (v *view) clocks(ws []window, t tilt) []trait {
	if !v.l.clocked() {
		return nil
	}
	var all []trait
	level := v.l.crossedC() + t.errK
	for _, w := range ws {
		all = append(all, func(p path) int {
			start, ok, _ := v.clockStart(p, w, t)
			if !ok {
				return traitless
			}
			q, falls := p.in(w.interval), 0
			for i := 0; i+1 < len(q.c) && q.t[i+1] < start; i++ {
				if q.c[i] > level && q.c[i+1] <= level {
					falls++
				}
			}
			return falls
		})
	}
	return all
}

// fallsTo finds the first fall to a level from a knot on; that knot's instant where it is no higher.
func (p path) fallsTo(level float64, from int) (float64, bool) {
	if p.c[from] <= level {
		return p.t[from], true
	}
	for i := from; i+1 < len(p.c); i++ {
		if p.c[i] > level && p.c[i+1] <= level {
			return p.cross(i, level), true
		}
	}
	return 0, false
}

// crossedC is the temperature whose crossing starts the clock, °C.
func (l *Limit) crossedC() float64 {
	if l.Clock.AtC != nil {
		return *l.Clock.AtC
	}
	return *l.FromC
}

// endsCold tells whether a window has a stage that chills.
func (v *view) endsCold(w window) bool {
	for _, r := range v.runs {
		if chills(r.stage) && r.a >= w.a && r.a < w.b {
			return true
		}
	}
	return false
}

// coolWindow judges one window at one place.
func (v *view) coolWindow(p path, w window, t tilt) outcome {
	l := v.l
	start, ok, open := v.clockStart(p, w, t)
	if open {
		o := none(CannotTell, "cool not fallen")
		o.holes = holes{"start": l.startWords()}
		o.bad = neverBad + p.value(w.b) - *l.ToC
		return o
	}
	if !ok {
		return nowhere("cool nowhere")
	}
	cold := v.cold(t)
	q := p.in(w.interval)
	last := len(q.c) - 1
	o := none(NotMet, "cool late")
	o.start, o.slow = start, true
	if !cold.holds(q.c[last]) { // never down for good within the window
		return v.coolOpen(o, q, w, t)
	}
	i := last
	for i >= 0 && cold.holds(q.c[i]) {
		i--
	}
	end := w.a
	if i >= 0 {
		end = q.cross(i, cold.hi)
	}
	took := math.Max(0, end-start)
	o.end, o.at = math.Max(end, start), math.Max(end, start)
	o.value, o.bad, o.margin = took/60, took/60, *l.TimeS-took
	if !t.rank {
		o.holes = holes{"value": lasting(took, 1), "start": l.startWords(), "stage": v.stageNames()}
	}
	o.word = "cool closed"
	if took == 0 {
		o.word, o.bad = "cool at once", math.Min(0, v.coolExcess(q, w, start))
	}
	switch {
	case end > w.stageTo+sameS:
		o.word, o.margin = "cool stage later", math.Min(o.margin, w.stageTo-end)
		up := 1
		if cold.holds(q.value(w.stageTo)) {
			o.word, up = "cool stage again", -1
		}
		v.afterStage(&o, q, w, end, up, t)
	case l.within(took, *l.TimeS):
		o.verdict = Met
	}
	if t == (tilt{}) {
		v.rises(&o, q, start, end)
	}
	return o
}

// coolOpen judges a window that ends before the place is down for good.
func (v *view) coolOpen(o outcome, q path, w window, t tilt) outcome {
	l, ran := v.l, w.b-o.start
	o.value, o.bad, o.margin, o.at = ran/60, neverBad+v.coolExcess(q, w, o.start), *l.TimeS-ran, w.b
	if !t.rank {
		up := 1
		if !l.within(ran, *l.TimeS) {
			up = -1
		}
		still := "still"
		for i, c := range q.c { // it was down, and did not stay there
			if q.t[i] > o.start && v.cold(t).holds(c) {
				still = "again"
			}
		}
		o.holes = holes{"value": lasting(ran, up), "start": l.startWords(), "stage": v.stageNames(), "still": still}
	}
	switch {
	case !l.within(ran, *l.TimeS): // by how much is not known before it is down
		o.margin = math.NaN()
	case w.b > w.stageTo+sameS:
		o.word, o.margin = "cool stage", math.Min(o.margin, w.stageTo-w.b)
		v.afterStage(&o, q, w, w.b, 1, t)
	default:
		o.verdict, o.word, o.margin = CannotTell, "cool open", math.NaN()
		if !w.last {
			o.word = "cool cut"
		}
	}
	if t == (tilt{}) {
		v.rises(&o, q, o.start, w.b)
	}
	return o
}

// rises notes a return above the crossed temperature after the clock started, or above To on the way.
func (v *view) rises(o *outcome, q path, start, end float64) {
	if !math.IsNaN(start) && v.l.Clock.Crossing {
		for i := 0; i+1 < len(q.t); i++ {
			if from := v.l.crossedC(); q.t[i] > start+sameS && q.c[i] <= from && q.c[i+1] > from+0.05 {
				o.notes = append(o.notes, say("note again", holes{"temp": v.l.startWords(), "when": clockTime(q.cross(i, from))}))
				return
			}
		}
	}
	for i := 0; i+1 < len(q.t); i++ {
		if to := *v.l.ToC; q.t[i] > start && q.c[i] <= to && q.c[i+1] > to && q.t[i] < end {
			o.notes = append(o.notes, say("note again", holes{"temp": v.l.figure("To", exactly(to, "°C")), "when": clockTime(q.cross(i, to))}))
			return
		}
	}
}

// stageNames are the stages of the limit in words.
func (v *view) stageNames() string {
	s := ""
	for i, st := range v.l.Stages {
		if i > 0 {
			s += " + "
		}
		s += st.Name
	}
	return s
}

// coolRoom is how far To could be lowered in one window, K: To less the highest temperature from the allowed time on.
func (v *view) coolRoom(p path, w window) float64 {
	start, ok, _ := v.clockStart(p, w, tilt{})
	if !ok {
		return math.NaN()
	}
	return -v.coolExcess(p.in(w.interval), w, start)
}

// coolExcess is how far above To the highest temperature lies from the allowed time on, K; q is the part of a path in the window.
func (v *view) coolExcess(q path, w window, start float64) float64 {
	due := math.Max(w.a, math.Min(start+*v.l.TimeS, math.Min(w.b, w.stageTo)))
	top := q.value(due)
	for i, t := range q.t {
		if t > due {
			top = math.Max(top, q.c[i])
		}
	}
	return top - *v.l.ToC
}

// afterStage fills in what a place was at when the named stage ended, and the stages that lie between that and a later instant.
// up is the side to which the temperature is rounded; q is the part of a path in the window.
func (v *view) afterStage(o *outcome, q path, w window, until float64, up int, t tilt) {
	if t.rank {
		return
	}
	o.holes["left"] = v.l.degrees(q.value(w.stageTo), up)
	names := v.stageNames()
	seen := map[*model.Stage]bool{}
	for _, r := range v.runs {
		if r.a >= w.stageTo-sameS && r.a < until && !seen[r.stage] && !named(v.l.Stages, r.stage) {
			seen[r.stage] = true
			names += " + " + r.stage.Name
		}
	}
	o.holes["wider"] = names
}
