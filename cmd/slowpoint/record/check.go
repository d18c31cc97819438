package record

import (
	"fmt"
	"math"
	"slices"

	"slowpoint/model/cell"
)

// How many equal readings are more than a steady temperature explains.
const (
	constantLeast = 20 // of a whole record
	frozenLeast   = 60 // in a row
)

// constant refuses a channel that never moves although it shows more than whole degrees; one of whole degrees may be steady.
func (r *reader) constant(t *taker) {
	if len(t.cs) < constantLeast || slices.Min(t.cs) != slices.Max(t.cs) {
		return
	}
	level := cell.Fault
	if t.step.places == 0 {
		level = cell.Warning
	}
	r.tells.tell(constant, level, "", t.lines[0], t.lay.temp, fmt.Sprintf("%g", t.cs[0]), fmt.Sprint(len(t.cs)))
}

// check looks at the log as a whole: gaps, jumps, sensors that stopped, clocks that were not set.
func (r *reader) check(t *taker, start float64) {
	r.gaps(t, start)
	r.jumps(t)
	r.stopped(t)
	r.years(t)
}

// gaps finds the usual step, and where readings are lacking.
func (r *reader) gaps(t *taker, start float64) {
	log := r.log
	n := len(log.TimesS)
	steps := make([]float64, 0, n)
	for i := 1; i < n; i++ {
		steps = append(steps, log.TimesS[i]-log.TimesS[i-1])
	}
	log.StepS = median(steps)
	most := r.set.GapS
	if most <= 0 {
		most = 3 * log.StepS
	}
	if n < 2 {
		return
	}
	for i := 1; i < n; i++ {
		d := log.TimesS[i] - log.TimesS[i-1]
		if d <= most+tiny {
			continue
		}
		log.Gaps = append(log.Gaps, i-1)
		if len(log.Gaps) > 1000 {
			continue
		}
		s := gap
		if t.form == dateStamp && !r.utc && math.Abs(d-3600) <= max(3*log.StepS, 60) {
			s = springGap
		}
		r.tells.tell(s, cell.Warning, "", log.Lines[i-1], 0, "", r.row(log.Lines[i-1]), fmt.Sprint(log.Lines[i]), spanOf(d), spanOf(log.StepS))
	}
}

// jumps finds readings that leave their neighbours and come back faster than those ever move.
func (r *reader) jumps(t *taker) {}

// stopped finds a long run of one and the same reading.
func (r *reader) stopped(t *taker) {}

// years looks at the dates: of a clock that was not set.
func (r *reader) years(t *taker) {}
