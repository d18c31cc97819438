package rules

import (
	"math"
	"sort"
)

// A history may be a bound: from BoundFromS on the food is at or below the temperatures shown, and before it at them. A verdict
// stands only if it stands for every such course. Which do:
//
//	more cold is favourable   met stands: the food is there no later and stays no shorter. With a clock that starts at a
//	(cool, band, stay below,  crossing, and in a band, the food may get there earlier than shown and so spend longer: met stands
//	by the end at or below,   where it does with all the time from BoundFromS on counted that may count. Not met stands where what
//	hold at or below, freeze, came before decides: with absolute cold from then on.
//	outside)
//	more cold is adverse      not met stands, but for a clock that starts at a crossing after BoundFromS: it may start later, or
//	(hold, table, lethality,  never. Met stands where it does with absolute cold from BoundFromS on.
//	heat, stay above, by the
//	end at or above)
//	both (falling)            neither stands on what comes after BoundFromS.
//	one period only           colder food may split a period, join two, or leave one out: met stands where no period can begin
//	                          or end after BoundFromS, not met where a second period came before it, or no period is long enough,
//	                          or all are too long together.
//
// What is stated or timed (stated, humidity, delay, duration, the medium) is no temperature of the food and stands.

// proved tells whether a verdict stands where the temperatures are only bounds.
func (v *view) proved(verdict Verdict, q question, s scope, cs []candidate) bool {
	if v.h.Bound == "" || same(v.l.Where.Name, "medium") {
		return true
	}
	switch cold := !q.warm || q.both; {
	case verdict == Met:
		return !v.past(v.h.BoundFromS) || (!q.warm || q.adds && v.sure(q, s, cs)) && v.everywhere(s, cs, func(p path) bool {
			t := v.unfavourable()
			t.rank, t.bound = true, true
			o := q.measure(p, t)
			return o.verdict == Met || o.verdict == NotApplicable
		})
	case verdict == NotMet && cold:
		return v.lost(q, cs)
	case verdict == NotMet && v.past(v.h.BoundFromS):
		return v.missed(q, cs)
	}
	return true
}

// everywhere tells whether something holds for the courses of all places of the limit.
func (v *view) everywhere(s scope, cs []candidate, holds func(path) bool) bool {
	for _, c := range cs {
		if !holds(c.path) {
			return false
		}
	}
	for _, i := range s.spots {
		if !holds(path{t: v.c.times, c: v.c.rows[i]}) {
			return false
		}
	}
	return true
}

// sure tells whether a limit that colder food would miss is met by what was reached before the temperatures became bounds.
func (v *view) sure(q question, s scope, cs []candidate) bool {
	return v.everywhere(s, cs, func(p path) bool { return q.measure(v.dropFrom(p), tilt{errK: v.errK, rank: true}).verdict == Met })
}

// lost tells whether a limit that colder food would meet was missed before the temperatures became bounds.
func (v *view) lost(q question, cs []candidate) bool {
	t := tilt{errK: -v.errK, rank: true}
	for _, c := range cs {
		if !v.peaksLater(q, c.path) && q.measure(v.dropFrom(c.path), t).verdict == NotMet {
			return true
		}
	}
	return false
}

// missed tells whether a limit that colder food would miss is missed by every course at or below the one shown.
func (v *view) missed(q question, cs []candidate) bool {
	t := tilt{errK: -v.errK, rank: true}
	for _, c := range cs {
		switch {
		case v.single():
			if q.measure(v.before(c.path), t).again {
				return true
			}
			all := t
			if all.count = Total; q.needs {
				all.count = Continuous
			}
			if q.measure(c.path, all).verdict == NotMet {
				return true
			}
		default:
			o := q.measure(c.path, t)
			if o.verdict == NotMet && (!v.l.clocked() || o.start <= v.h.BoundFromS+sameS && !v.peaksLater(q, c.path)) {
				return true
			}
		}
	}
	return false
}

// past tells whether what the limit is about goes on after an instant.
func (v *view) past(t float64) bool {
	n := len(v.stages)
	return v.l.Clock != Clock{} || n > 0 && v.stages[n-1].b > t+sameS
}

// peaksLater tells whether a clock that started by a fall before the temperatures became bounds may start anew after a higher
// peak that follows.
func (v *view) peaksLater(q question, p path) bool {
	if !v.l.clocked() || q.rises {
		return false
	}
	for _, w := range v.windows() {
		in := p.in(w.interval)
		before, after := math.Inf(-1), math.Inf(-1)
		for i, c := range in.c {
			if in.t[i] <= v.h.BoundFromS+sameS {
				before = math.Max(before, c)
			} else {
				after = math.Max(after, c)
			}
		}
		if before > v.l.crossedC()-v.errK && after > before {
			return true
		}
	}
	return false
}

// earliest is the earliest instant at which the clock of a window may start for a course at or below the one shown: q is its part
// in the window, top its highest knot, start where it falls to level after that.
func (v *view) earliest(q path, top int, level, start float64) float64 {
	from := v.h.BoundFromS
	if start <= from && q.t[top] <= from {
		return start
	}
	before := q.in(interval{q.t[0], from})
	high := 0
	for i := range before.c {
		if before.c[i] > before.c[high] {
			high = i
		}
	}
	if q.t[0] < from && before.c[high] > level {
		if fell, ok := before.fallsTo(level, high); ok {
			return fell
		}
	}
	return math.Max(from, q.t[0])
}

// mayMultiply tells whether the one period of a course may become several, or another one begin, where the food is colder than
// shown; favourable: the food is in the region the more, the colder it is.
func (v *view) mayMultiply(held period, favourable bool) bool {
	if favourable {
		return held.from > v.h.BoundFromS+sameS || held.to < v.stages[len(v.stages)-1].b-sameS
	}
	return held.to > v.h.BoundFromS+sameS
}

// counting is how a limit's periods add up.
func (v *view) counting(t tilt) Counting {
	if t.count != NotCounted {
		return t.count
	}
	return v.l.Counting
}

// highest is the highest temperature from a to b.
func (p path) highest(a, b float64) float64 {
	top := math.Max(p.value(a), p.value(b))
	for i, t := range p.t {
		if t > a && t < b {
			top = math.Max(top, p.c[i])
		}
	}
	return top
}

// before is the part of a course before the temperatures became bounds.
func (v *view) before(p path) path { return p.in(interval{p.t[0], v.h.BoundFromS}) }

// dropFrom replaces a course by absolute cold from where it is a bound: what a bound from above leaves certain of the warm.
func (v *view) dropFrom(p path) path { return v.cappedFrom(path{t: p.t, c: p.c}, -273.15) }

// cappedFrom lowers a course to at most c (°C) from where it is a bound.
func (v *view) cappedFrom(p path, c float64) path {
	from := v.h.BoundFromS
	i := sort.SearchFloat64s(p.t, from)
	if i >= len(p.t) {
		return p
	}
	if p.t[i] == from { // there it is exact yet: a jump
		i++
	}
	q := path{t: append(append([]float64(nil), p.t[:i]...), p.t[max(i-1, 0):]...)}
	q.c = append(append([]float64(nil), p.c[:i]...), p.c[max(i-1, 0):]...)
	for k := i; k < len(q.c); k++ {
		q.c[k] = math.Min(q.c[k], c)
	}
	if p.at != nil {
		q.at = func(t float64) float64 {
			if t <= from {
				return p.at(t)
			}
			return math.Min(p.at(t), c)
		}
	}
	return q
}
