package rules

import "math"

// Falling is a temperature that only falls.
var Falling = &Kind{Name: "falling", Unit: "K", Needs: [][]string{{"Stage"}, {"Allowance"}}, May: []string{"Where"},
	Help: "the temperature never rises by more than the allowance during the stages", judge: judgeFalling}

func judgeFalling(v *view) Finding {
	l := v.l
	q := question{unit: "K", need: *l.AllowanceK, warm: true, both: true, steady: true, faces: true}
	q.room = func(p path) float64 {
		rise, _, _ := v.rise(p)
		return *l.AllowanceK - rise
	}
	q.measure = func(p path, t tilt) outcome {
		rise, from, to := v.rise(p)
		o := none(NotMet, "falling")
		o.value, o.bad = rise, rise
		if rise > 0 {
			o.start, o.end, o.at = from, to, to
		}
		o.holes = holes{"value": l.differenceUp(rise)}
		// the error shifts a whole course: it weighs only on a rise that is there
		if seen := rise + t.errK; rise <= sameK || seen <= *l.AllowanceK+sameK {
			o.verdict = Met
		}
		return o
	}
	return v.judgePlaces(q)
}

// rise is the largest rise from an earlier to a later instant within one stretch of the stages, K, and the two instants.
func (v *view) rise(p path) (most, from, to float64) {
	for _, iv := range v.stages {
		q := p.in(iv)
		low, at := math.Inf(1), 0.0
		for i, c := range q.c {
			if c < low {
				low, at = c, q.t[i]
			}
			if c-low > most {
				most, from, to = c-low, at, q.t[i]
			}
		}
	}
	return most, from, to
}
