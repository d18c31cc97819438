package rules

import "math"

// A step with Until ends when the slowest place reaches a temperature, and the error of the calculation moves that instant: by as long as the place
// takes there to go through the error. Where only times count, that decides by itself.

// untilMoves makes a time within intervals one that cannot be told where the ends of such steps may move it past what is allowed or needed, and
// says so in the tail of its sentence.
func (v *view) untilMoves(o *outcome, ivs []interval) (tail string) {
	if v.h.Recorded || v.errK == 0 || o.verdict != Met && o.verdict != NotMet {
		return ""
	}
	most, step := 0.0, ""
	for _, iv := range ivs {
		for n, sp := range v.h.Spans {
			if sp.Step == nil || sp.Step.UntilC == nil || sp.Reached == nil || !*sp.Reached || sp.EndS <= iv.a+sameS || sp.EndS > iv.b+sameS {
				continue
			}
			most, step = most+v.errK/v.pace(n), sp.Step.Name
		}
	}
	if step == "" || math.Abs(o.margin) > most {
		return ""
	}
	o.verdict = CannotTell
	return say("until moves", holes{"step": step, "error": v.l.differenceUp(v.errK), "by": lasting(most, 1)})
}

// pace is how fast the slowest place changes as a step ends, K/s.
func (v *view) pace(n int) float64 {
	sp := v.h.Spans[n]
	sign := 1.0
	if !sp.Step.Stage.Heats {
		sign = -1
	}
	slowest, least := 0, math.Inf(1)
	for i, row := range v.c.rows {
		if c := sign * (path{t: v.c.times, c: row}).value(sp.EndS); c < least {
			slowest, least = i, c
		}
	}
	p, d := v.c.spots[slowest].Place, math.Min(30, (sp.EndS-sp.StartS)/4)
	return math.Abs(v.h.At(p, sp.EndS)-v.h.At(p, sp.EndS-d)) / d
}
