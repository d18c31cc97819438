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

// leastRoom is the margin in K of what is met: no more than that of the candidates and the spots, at a place.
func (v *view) leastRoom(s scope, q question, cs []candidate, least float64, where *model.Place) (float64, *model.Place) {
	if v.h.Recorded || s.medium != nil || v.brief || where == nil || !(least > roomK) {
		return least, where
	}
	if q.room == nil { // a path of straight lines cuts turns off
		least = math.Min(least, roomBy(q.measure, v.path(*where), least-roomK/2))
	}
	if s.one != nil {
		return least, where
	}
	if least < closeRoomK && !s.surfaceOnly && v.gridded() {
		least, where = v.closerRoom(q, least, where)
	}
	if q.room != nil || q.traits == nil {
		return least, where
	}
	misses := func(k float64) *model.Place {
		t := tilt{ownK: k, rank: true}
		if v.single() {
			for i := range cs {
				if !q.measure(cs[i].path, t).kept() {
					return &cs[i].place
				}
			}
		}
		for _, x := range append(v.joints(s, q, cs, t, 1).places, v.risky(s, q, t)...) {
			p := v.h.PlaceAt(x)
			if !q.measure(v.path(p), t).kept() {
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

// closerRoom looks for a place of less room by steps along the axes.
func (v *view) closerRoom(q question, least float64, where *model.Place) (float64, *model.Place) {
	for range 4 {
		t := tilt{ownK: least - roomK/2, rank: true}
		score := q.measure
		if q.room != nil {
			score = func(p path, _ tilt) outcome { return outcome{verdict: Met, bad: -q.room(p)} }
		}
		y := v.stepwise(score, v.h.Axes(*where), t)
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
		least, where = r, &p
		if before-least < closerRoomK {
			break
		}
	}
	return least, where
}
