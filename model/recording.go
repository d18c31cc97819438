package model

import "slices"

// Recording is what a logger measured at one place of a food, with what its readings leave open.
type Recording struct {
	Point
	Surface bool
	Spans   []Span    // the steps of the chain that it covers, on the clock of TimesS
	Before  []Step    // the steps before these; nil where the chain begins with them
	TimesS  []float64 // s from the start of the chain, rising strictly
	C       []float64 // °C, corrected, as long as TimesS
	ErrorK  float64   // accuracy of the instrument and half its resolution, K
	Gaps    []int     // i: readings are lacking between i and i+1, beyond the usual time between two
	Doubted []int     // readings that jump faster than their neighbours allow, or may be cut off
	LowC    float64   // what the place cannot have fallen below in a gap, and cannot have risen above, °C: the range of the medium, or NaN
	HighC   float64   // where none is known; then that of the whole record
	Medium  *Trace    // of the surroundings; nil if not recorded
}

// Line is the record as straight segments between its readings. It fails where NewRecord does.
func (r *Recording) Line() (*History, error) {
	h, err := NewRecord(r.Spans, []Trace{{Point: r.Point, TimesS: r.TimesS, C: r.C}}, r.Medium)
	if err == nil {
		h.ErrorK = r.ErrorK
	}
	return h, err
}

// gapTimes is how many times the usual time between two readings may pass without one, and hourS how long at most, s; more is a gap. Rounds by
// hand are made hourly (common practice, no source); what happened in longer times nobody saw, however usual they are.
const (
	gapTimes = 3
	hourS    = 3600
)

// MostApartS is how far apart two readings may lie that are no gap, s, where usualS lie between them as a rule.
func MostApartS(usualS float64) float64 { return min(gapTimes*usualS, hourS) }

// UsualStep is the median time from a reading to a later one, the lower of two, s; 0 if there are none.
func UsualStep(timesS []float64) float64 {
	d := make([]float64, 0, len(timesS))
	for i := 1; i < len(timesS); i++ {
		if step := timesS[i] - timesS[i-1]; step > 0 {
			d = append(d, step)
		}
	}
	if len(d) == 0 {
		return 0
	}
	slices.Sort(d)
	return d[(len(d)-1)/2]
}
