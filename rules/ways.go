package rules

import "math"

// ways lists courses through a tube that bracket all of them for a limit: where every one of them has the same verdict, every course
// has. ok is false for a kind whose courses cannot be bracketed.
//
//	the colder, the worse (hold at or above,   the coldest and the warmest course: what a course is judged by (time at or above,
//	table, lethality, stay above, by the end   lethal rate, extreme, temperature at an instant) grows with every temperature of it.
//	at or above, heat from a stage), and the   A period of several is the same: the times of a warmer course hold those of a colder
//	other way round (hold at or below, stay    one. Freeze: who is at or below From earlier and longer, and then at or below To.
//	below, by the end at or below, freeze,
//	cool from a stage)
//	band, outside                              as much as the ranges allow in the band, and as little: each stretch by itself. To
//	                                           get to the other side of a band a course must pass it, which takes no time but is
//	                                           not outside.
//	falling                                    in each gap to the coldest and after that to the warmest; straight everywhere.
//	cool from a crossing                       the clock starts at the first fall to From after the highest temperature. Earliest: the
//	                                           highest as early as it can have been, then the coldest course until From; latest: the
//	                                           highest as late as it can have been, then the warmest until From. From there on the
//	                                           warmest (no warmer than the highest), or the coldest. The time taken is longest from
//	                                           the earliest start with the warmest course after it, shortest the other way.
//	heat from a crossing                       the clock starts when From is first reached. Longest: the warmest course until then and
//	                                           the coldest after it; shortest the other way, or where a gap lets it start and
//	                                           be hot at once.
//	by the end from a crossing                 both starts, each with the coldest and the warmest after it; where the start is not
//	                                           known within the usual interval, nobody can tell (recorded.go).
//	delay, duration, stated                    no temperatures.
//	once                                       as without it; where a gap leaves open whether there is one more period, nobody can
//	                                           tell (recorded.go).
//
// A clock turns on From moved by the error, too: the courses are laid out for both.
func (v *view) ways(u *tube, open func(gap int) bool) (ws []way, ok bool) {
	l := v.l
	switch l.Kind {
	case Delay, Duration, Stated:
		return nil, true
	case Hold, HoldTable, Lethality, StayAbove, StayBelow, FreezeHold:
		return []way{low, high}, true
	case Band, Outside:
		in, out := throughBand((*l.FromC + *l.ToC) / 2)
		if l.Kind == Outside {
			out = u.besideBand((*l.FromC + *l.ToC) / 2)
		}
		return []way{in, out}, true
	case Falling:
		return []way{line, u.settled, u.dipped}, true
	case CoolWithin, HeatWithin, ByTheEnd:
		ws = []way{low, high}
		if !l.clocked() {
			return ws, true
		}
	default:
		return nil, false
	}
	shifts := []float64{0}
	if v.errK > 0 {
		shifts = []float64{0, v.errK, -v.errK}
	}
	wins := v.windows()
	for _, k := range shifts {
		from := l.crossedC() + k
		switch l.Kind {
		case HeatWithin:
			for _, w := range wins {
				ws = append(ws, u.warmed(w.interval, from, start{early: true}))
			}
			ws = append(ws, u.every(wins, func(w interval) way { return u.warmed(w, from, v.soonest(u, w, from, open)) }))
		case CoolWithin:
			for _, w := range wins {
				ws = append(ws, u.fallen(w.interval, from, start{early: true, warm: true}, open))
			}
			ws = append(ws, u.every(wins, func(w interval) way { return u.fallen(w, from, start{}, open) }))
		case ByTheEnd:
			for _, early := range []bool{true, false} {
				for _, warm := range []bool{true, false} {
					for _, w := range wins {
						ws = append(ws, u.fallen(w.interval, from, start{early, warm}, open))
					}
					ws = append(ws, u.every(wins, func(w interval) way { return u.fallen(w, from, start{early, warm}, open) }))
				}
			}
		}
	}
	return ws, true
}

// every joins the ways of several windows, each in its own; straight elsewhere.
func (u *tube) every(wins []window, one func(interval) way) way {
	var ways []way
	for _, w := range wins {
		ways = append(ways, one(w.interval))
	}
	return func(i int, lo, hi float64, gap bool) choice {
		out := choice{straight: true}
		for _, w := range ways {
			if c := w(i, lo, hi, gap); !c.straight {
				out = c
			}
		}
		return out
	}
}

// throughBand are the ways that are as long in a band as they can be, and as short, by its middle (°C).
func throughBand(mid float64) (in, out way) {
	in = func(_ int, lo, hi float64, _ bool) choice { return at(math.Max(lo, math.Min(mid, hi))) }
	out = func(_ int, lo, hi float64, _ bool) choice {
		if mid-lo > hi-mid {
			return at(lo)
		}
		return at(hi)
	}
	return in, out
}

// besideBand is the way that stays out of a band where it can, on the side of a reading beside it: to change sides it would have to pass.
func (u *tube) besideBand(mid float64) way {
	return func(i int, lo, hi float64, _ bool) choice {
		k := i
		if u.isFree(k) && !u.isFree(i+1) {
			k++
		}
		if u.isFree(k) && mid-lo > hi-mid || !u.isFree(k) && u.c[k] < mid {
			return at(lo)
		}
		return at(hi)
	}
}

// dipped falls to the coldest in a gap and rises to the warmest after that; between usual readings it runs straight, but for where a step
// begins between two, which it does at the coldest, or ends, which it does at the warmest. settled does the reverse, and runs straight
// through a gap.
func (u *tube) dipped(i int, lo, hi float64, gap bool) choice {
	switch {
	case gap:
		return choice{visit: [2]float64{lo}, visits: 1, level: hi}
	case u.isFree(i):
		return at(lo)
	case u.isFree(i + 1):
		return at(hi)
	}
	return choice{straight: true}
}

func (u *tube) settled(i int, lo, hi float64, _ bool) choice {
	switch {
	case u.isFree(i):
		return at(hi)
	case u.isFree(i + 1):
		return at(lo)
	}
	return choice{straight: true}
}

// within tells whether the stretch i lies in an interval.
func (u *tube) within(i int, iv interval) bool { return u.t[i] >= iv.a && u.t[i+1] <= iv.b }

// isFree tells whether a knot is no reading.
func (u *tube) isFree(k int) bool {
	for _, f := range u.free {
		if f == k {
			return true
		}
	}
	return false
}

// peak is where a course may have its highest temperature in a window: in a stretch, or at a reading (then stretch is the one after it).
type peak struct {
	stretch int
	reading bool
	c       float64 // °C
}

// peaks are the earliest and the latest place of the highest temperature in a window. A stretch between usual readings does not count: its
// range is that of the two. ok is false for a window without stretches.
func (u *tube) peaks(w interval, open func(gap int) bool) (first, last peak, ok bool) {
	top, where := math.Inf(-1), -1
	free := 0
	n := len(u.t)
	for k := 0; k < n; k++ {
		for free < len(u.free) && u.free[free] < k {
			free++
		}
		if free < len(u.free) && u.free[free] == k || u.t[k] < w.a || u.t[k] > w.b {
			continue
		}
		if u.c[k] > top {
			top, where = u.c[k], k
		}
	}
	if where >= 0 {
		first = peak{where, true, top}
		last, ok = first, true
	}
	for _, r := range u.ranges {
		if !u.within(r.i, w) || r.gap >= 0 && !open(r.gap) || r.hi < top || r.gap < 0 && r.hi == top {
			continue
		}
		p := peak{r.i, false, r.hi}
		if !ok {
			first, last, ok = p, p, true
			continue
		}
		if p.stretch < first.stretch {
			first = p
		}
		if p.stretch >= last.stretch && r.hi > top { // as warm as an earlier reading is no later peak
			last = p
		}
	}
	return first, last, ok
}

// soonest is how a window for heating is the shortest: with a late start, or with an early one in a gap that lets the place be hot at once.
func (v *view) soonest(u *tube, w interval, from float64, open func(gap int) bool) start {
	late, early := start{warm: true}, start{early: true, warm: true}
	one := func(s start) outcome {
		worst := nowhere("")
		for _, x := range v.windows() {
			if x.interval == w {
				worst = v.heatWindow(u.course(&path{}, u.warmed(w, from, s), open), x, tilt{rank: true})
			}
		}
		return worst
	}
	if worse(one(late), one(early)) {
		return early
	}
	return late
}

// start says how a course goes through a clock: whether that starts as early as it can or as late, and whether the course is the warmest
// after it or the coldest.
type start struct{ early, warm bool }

// after is the course once the clock runs, no warmer than most (°C).
func (s start) after(lo, hi, most float64) float64 {
	if s.warm {
		return math.Min(hi, most)
	}
	return lo
}

// fallen is the way through a window whose clock starts by a fall to from (°C).
func (u *tube) fallen(w interval, from float64, s start, open func(gap int) bool) way {
	first, last, ok := u.peaks(w, open)
	p := last
	if s.early {
		p = first
	}
	const before, falling, fell = 0, 1, 2
	state := before
	return func(i int, lo, hi float64, _ bool) choice {
		if !ok || !u.within(i, w) {
			return choice{straight: true}
		}
		forced := !u.isFree(i+1) && u.c[i+1] <= from
		if state == before && i == p.stretch {
			state = falling
			switch {
			case p.reading:
			case !s.early:
				if forced {
					state = fell
				}
				return at(hi)
			case lo <= from:
				state = fell
				return choice{visit: [2]float64{hi, lo}, visits: 2, level: s.after(lo, hi, p.c)}
			default:
				return choice{visit: [2]float64{hi}, visits: 1, level: lo}
			}
		}
		switch {
		case state == before:
			return choice{straight: true}
		case state == fell:
			return at(s.after(lo, hi, p.c))
		case s.early && lo > from:
			return at(lo)
		case s.early:
			state = fell
			return choice{visit: [2]float64{lo}, visits: 1, level: s.after(lo, hi, p.c)}
		}
		if math.Min(hi, p.c) <= from {
			state = fell
			return at(s.after(lo, hi, p.c))
		}
		if forced {
			state = fell
		}
		return at(math.Min(hi, p.c))
	}
}

// warmed is the way through a window whose clock starts where from (°C) is first reached.
func (u *tube) warmed(w interval, from float64, s start) way {
	began, runs := false, false
	return func(i int, lo, hi float64, _ bool) choice {
		if !u.within(i, w) {
			return choice{straight: true}
		}
		if !began {
			began, runs = true, !u.isFree(i) && u.c[i] >= from
		}
		if !runs && s.early && hi >= from {
			runs = true
			return choice{visit: [2]float64{from}, visits: 1, level: s.after(lo, hi, hi)}
		}
		if !runs && lo >= from {
			runs = true
		}
		if runs {
			return at(s.after(lo, hi, hi))
		}
		if runs = !u.isFree(i+1) && u.c[i+1] >= from; s.early {
			return choice{straight: true}
		}
		return at(lo)
	}
}
