package model

import "math"

// looks gives instants, s into the step, at which a skin is looked at for its extremes.
func (s *skin) looks() []float64 {
	x := s.course.x
	if len(x) < 2 {
		return []float64{0}
	}
	var out []float64
	for i := 0; i <= 16; i++ {
		out = append(out, x[0]+(x[len(x)-1]-x[0])*float64(i)/16)
	}
	for i := 0; i < len(x); i += 1 + len(x)/64 {
		out = append(out, x[i])
	}
	return out
}

// mediumRange gives the coldest and hottest temperature that the surface may come to: where it is in balance with what surrounds it.
func (s *skin) mediumRange() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, tau := range s.looks() {
		c := s.balanceC(tau)
		low, high = min(low, c), max(high, c)
	}
	return low, high
}

// balanceC is the temperature at which no heat flows into the food, °C.
func (s *skin) balanceC(tau float64) float64 {
	if s.linear || s.held {
		return s.mediumC(tau)
	}
	lo, hi := -100.0, 500.0
	for hi-lo > 1e-3 {
		mid := (lo + hi) / 2
		if w, _ := s.exact(mid, tau); w > 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}
