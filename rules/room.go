package rules

import (
	"math"

	"slowpoint/model"
)

// The margin in K is how far the limit's own temperature may move before the first place misses. Which place that is may change on the way: the
// edges where periods join or break move with the temperature (see joint.go). So the edges are looked at where the margin ends, and
// where one misses there, the margin is halved in to where none does.
const (
	roomK       = 0.004 // to which the margin is found, K
	closeRoomK  = 1.0   // below which places are looked for once more by steps along the axes (see closer.go), K
	closerRoomK = 0.02  // how much smaller a room found so has to be to be followed again
)

// leastRoom is the margin in K of what is met: no more than that of the candidates and the spots, at a place (nil: the one that decides).
func (v *view) leastRoom(s scope, q question, cs []candidate, least float64, where *model.Place) (float64, *model.Place) {
	if v.h.Recorded || len(s.spots) == 0 || v.brief || !(least > roomK) || math.IsInf(least, 1) {
		return least, where
	}
	if q.room == nil {
		least = v.exactRoom(q, cs, where, least)
	}
	if least < closeRoomK && !s.surfaceOnly {
		least, where = v.closerRoom(q, cs, least, where)
	}
	if q.room != nil || q.traits == nil {
		return least, where
	}
	misses := func(k float64) *model.Place {
		t := tilt{ownK: k, rank: true}
		if v.single() {
			for i := range cs {
				if verdict := q.measure(cs[i].path, t).verdict; verdict != Met && verdict != NotApplicable {
					return &cs[i].place
				}
			}
		}
		for _, x := range append(v.joints(s, q, cs, t, 1).places, v.risky(s, q, t)...) {
			p := v.h.PlaceAt(x)
			if verdict := q.measure(v.path(p), t).verdict; verdict != Met && verdict != NotApplicable {
				return &p
			}
		}
		return nil
	}
	lo, hi := 0.0, least-roomK
	at := misses(hi)
	if v.single() { // a second period may come and go
		for k := roomK; k < hi; k *= 1.6 {
			if p := misses(k); p != nil {
				hi, at = k, p
				break
			}
			lo = k
		}
	}
	if at == nil {
		return least, where
	}
	for hi-lo > roomK {
		m := (lo + hi) / 2
		if p := misses(m); p != nil {
			hi, at = m, p
		} else {
			lo = m
		}
	}
	return lo, at
}

// exactRoom is the room of the place that decides by its exact course: a path of straight lines cuts its turns off.
func (v *view) exactRoom(q question, cs []candidate, where *model.Place, least float64) float64 {
	p := cs[0].path
	if where != nil {
		p = v.path(*where)
	}
	met := func(k float64) bool {
		verdict := q.measure(p, tilt{ownK: k, rank: true}).verdict
		return verdict == Met || verdict == NotApplicable
	}
	lo, hi := 0.0, least-roomK/2
	if met(hi) {
		return least
	}
	for hi-lo > roomK/2 {
		if m := (lo + hi) / 2; met(m) {
			lo = m
		} else {
			hi = m
		}
	}
	return lo
}

// closerRoom looks for a place of less room by steps along the axes.
func (v *view) closerRoom(q question, cs []candidate, least float64, where *model.Place) (float64, *model.Place) {
	x := cs[0].place
	if where != nil {
		x = *where
	}
	if !v.gridded() {
		return least, where
	}
	for range 4 {
		t := tilt{ownK: least - roomK/2, rank: true}
		score := q.measure
		if q.room != nil {
			score = func(p path, _ tilt) outcome { return outcome{verdict: Met, bad: -q.room(p)} }
		}
		y := v.stepwise(score, v.h.Axes(x), t)
		p := v.h.PlaceAt(y)
		room := q.room
		if room == nil {
			room = func(p path) float64 { return roomBy(q.measure, p, least) }
		}
		r := room(v.exactly(y))
		if !(r < least-roomK/2) {
			return least, where
		}
		before := least
		least, where, x = r, &p, p
		if before-least < closerRoomK {
			break
		}
	}
	return least, where
}
