package rules

import (
	"math"
	"sort"
	"strconv"

	"slowpoint/model"
)

// Hold is the time at or above (at or below) a temperature.
var Hold = &Kind{Name: "hold", Unit: "min", Needs: [][]string{{"From", "To"}, {"Time"}, {"Counting"}},
	May:  []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "at or above From (at or below To) for Time within the stages; Time 0: reached once", judge: judgeHold}

func judgeHold(v *view) Finding {
	l := v.l
	if *l.TimeS == 0 {
		return v.judgePlaces(v.reached())
	}
	q := question{unit: "min", need: *l.TimeS / 60, warm: l.ToC == nil, needs: true, adds: true}
	q.risks = func(t tilt) []risk {
		return []risk{v.risk(turns{breaking: true, another: v.single()}, v.stages, v.heldRegion(t))}
	}
	q.traits = func(t tilt) []trait { return []trait{periods(v.stages, v.heldRegion(t))} }
	q.measure = func(p path, t tilt) outcome {
		r := v.heldRegion(t)
		sp := p.stay(v.stages, r)
		count := v.counting(t)
		held := sp.counted(count)
		o := none(NotMet, "hold above")
		if l.ToC != nil {
			o.word = "hold below"
		}
		o.value, o.bad, o.margin = held.s/60, -held.s/60-v.depth(p, r, held.s, count), held.s-*l.TimeS
		o.slow = l.ToC == nil
		if !t.rank {
			o.holes = holes{"value": lasting(held.s, -1), "count": strconv.Itoa(sp.count)}
		}
		o.start, o.end, o.at = when(held, sp.count)
		o.again = count == Once && sp.count > 1
		switch {
		case o.again:
			o.word, o.bad, o.margin = "hold again", 1e5-held.s/60, math.NaN()
		case !l.enough(held.s, *l.TimeS):
		case t.bound && count == Once && v.mayMultiply(held, l.ToC != nil):
			o.verdict = CannotTell
		default:
			o.verdict = Met
		}
		if t == (tilt{}) && o.verdict == Met {
			v.sparse(&o, p, r, *l.TimeS, l.figure("Time", lasting(*l.TimeS, 1)))
			if l.Counting == Total && v.chilledBetween(held) {
				o.notes = append(o.notes, say("note separated", nil))
			}
		}
		return o
	}
	return v.judgePlaces(q)
}

// heldRegion is where a place has to be, the limit's temperature moved against it.
func (v *view) heldRegion(t tilt) region {
	if v.l.ToC != nil {
		return v.l.coldSide(*v.l.ToC - t.errK - t.ownK)
	}
	return v.l.warmSide(*v.l.FromC + t.errK + t.ownK)
}

// when gives clock start, clock end and deciding time of a period; NaN where there was none.
func when(held period, count int) (start, end, at float64) {
	if count == 0 {
		return math.NaN(), math.NaN(), math.NaN()
	}
	return held.from, held.to, held.to
}

// reached is a hold of no length: once is enough.
func (v *view) reached() question {
	l := v.l
	sign, level := 1.0, 0.0
	if l.ToC != nil {
		sign, level = -1, *l.ToC
	} else {
		level = *l.FromC
	}
	q := question{unit: "°C", need: level, warm: sign > 0, adds: true}
	q.room = func(p path) float64 {
		_, c := p.mostOf(v.stages, sign)
		return sign * (c - level)
	}
	q.measure = func(p path, t tilt) outcome {
		at, c := p.mostOf(v.stages, sign)
		o := none(NotMet, "reached above")
		if sign < 0 {
			o.word = "reached below"
		}
		o.value, o.bad, o.at = c, -sign*c, at
		o.slow = sign > 0
		if !t.rank {
			o.holes = holes{"value": l.degrees(c, int(-sign))}
		}
		if v.heldRegion(t).holds(c) {
			o.verdict = Met
		}
		return o
	}
	return q
}

// mostOf is the extreme over several intervals.
func (p path) mostOf(ivs []interval, sign float64) (at, c float64) {
	at, c = math.NaN(), math.Inf(int(-sign))
	for _, iv := range ivs {
		if t, x := p.most(iv, sign); sign*x > sign*c {
			at, c = t, x
		}
	}
	return at, c
}

// chilledBetween tells whether a cooling or cold stage lies within a period.
func (v *view) chilledBetween(held period) bool {
	for _, r := range v.runs {
		if chills(r.stage) && r.a > held.from && r.b < held.to {
			return true
		}
	}
	return false
}

// chills tells the stages that separate one heating from the next.
func chills(s *model.Stage) bool {
	return s == model.Cool || s == model.Store || s == model.HoldCold || s == model.Freeze
}

// sparse marks a record whose readings are too far apart to show a short time: what lies between the first and the last
// reading of the periods is not enough, and the time is shorter than the gap at their ends.
func (v *view) sparse(o *outcome, p path, r region, needS float64, typed string) {
	if !v.h.Recorded || v.c.whole != nil || needS == 0 { // the courses of a recording tell it by themselves
		return
	}
	var sure, best, gap float64
	for _, iv := range v.stages {
		q := p.in(iv)
		first := -1
		for i := range q.t {
			if !r.holds(q.c[i]) {
				continue
			}
			if i > 0 && !r.holds(q.c[i-1]) || i == 0 {
				first = i
			}
			if i > 0 {
				gap = math.Max(gap, q.t[i]-q.t[i-1])
			}
			if i+1 < len(q.t) {
				gap = math.Max(gap, q.t[i+1]-q.t[i])
			}
			if first >= 0 && (i+1 == len(q.t) || !r.holds(q.c[i+1])) {
				sure += q.t[i] - q.t[first]
				best = math.Max(best, q.t[i]-q.t[first])
			}
		}
	}
	if v.l.Counting == Continuous {
		sure = best
	}
	if !v.l.enough(sure, needS) && needS < gap-sameS {
		o.cautions = append(o.cautions, "sparse record")
		o.sparse = say("sparse", holes{"gap": lasting(gap, 1), "time": typed})
	}
}

// sortedRows are the rows of a table, coldest first.
func sortedRows(t *Table) []*Row {
	var rows []*Row
	for i := range t.Rows {
		rows = append(rows, &t.Rows[i])
	}
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].C < rows[j].C })
	return rows
}
