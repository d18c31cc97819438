package rules

import (
	"math"
	"sort"
)

// How finely a course is followed.
const (
	straightK = 0.04 // a stretch whose middle lies further than this from the straight line is halved, K
	leastS    = 0.05 // the shortest stretch that is halved again, s
	sameK     = 1e-9 // temperatures closer than this are equal, K
	sameS     = 1e-4 // times closer than this are equal, s
	crossingS = 1e-5 // a crossing is found to this, s
)

// interval is a stretch of time from a to b, s from the start of the chain.
type interval struct{ a, b float64 }

// path is the course of one place: temperatures c (°C) at rising times t (s; two equal ones are a jump). Between two knots it
// is straight; with at given, it is at(t), and the knots are close enough for it to be nearly straight.
type path struct {
	t, c  []float64
	at    func(t float64) float64
	nodes func(from, to float64) [5]float64 // at at the five nodes of Gauss between two instants; nil: ask at
}

// in is the part of a path within an interval whose ends are knots.
func (p path) in(iv interval) path {
	first := sort.Search(len(p.t), func(i int) bool { return p.t[i] > iv.a }) - 1
	last := sort.SearchFloat64s(p.t, iv.b)
	first, last = max(first, 0), min(last, len(p.t)-1)
	if last < first {
		last = first
	}
	return path{p.t[first : last+1], p.c[first : last+1], p.at, p.nodes}
}

// value is the temperature at t; at a jump the one before it.
func (p path) value(t float64) float64 {
	if p.at != nil {
		return p.at(t)
	}
	i := sort.SearchFloat64s(p.t, t)
	switch {
	case i == 0:
		return p.c[0]
	case i == len(p.t):
		return p.c[i-1]
	}
	return p.c[i-1] + (t-p.t[i-1])/(p.t[i]-p.t[i-1])*(p.c[i]-p.c[i-1])
}

// cross finds when the path passes a level between knots i and i+1, which lie on either side of it.
func (p path) cross(i int, level float64) float64 {
	a, b, fa, fb := p.t[i], p.t[i+1], p.c[i]-level, p.c[i+1]-level
	switch {
	case fa == fb || b == a:
		return a
	case (fa > 0) == (fb > 0): // one end lies on the level but for the arithmetic
		if math.Abs(fa) < math.Abs(fb) {
			return a
		}
		return b
	}
	x := a + (b-a)*fa/(fa-fb)
	if p.at == nil || fa == 0 || fb == 0 {
		return math.Min(math.Max(x, a), b)
	}
	side := 0 // Illinois: regula falsi that halves the end that stays
	for n := 0; n < 40 && b-a > crossingS; n++ {
		f := p.at(x) - level
		prev := x
		if f == 0 {
			return x
		}
		if (f > 0) == (fa > 0) {
			a, fa = x, f
			if side == -1 {
				fb /= 2
			}
			side = -1
		} else {
			b, fb = x, f
			if side == 1 {
				fa /= 2
			}
			side = 1
		}
		x = a + (b-a)*fa/(fa-fb)
		if math.Abs(x-prev) < crossingS {
			return x
		}
	}
	return x
}

// most finds the highest point of sign·course within an interval whose ends are knots: its time and temperature.
func (p path) most(iv interval, sign float64) (at, c float64) {
	q := p.in(iv)
	best := 0
	for i := range q.c {
		if sign*q.c[i] > sign*q.c[best] {
			best = i
		}
	}
	if p.at == nil {
		return q.t[best], q.c[best]
	}
	return q.polish(best, sign)
}

// polish looks between the neighbours of a knot for the true extreme, by golden section.
func (p path) polish(i int, sign float64) (at, c float64) {
	at, c = p.t[i], p.c[i]
	a, b := p.t[max(i-1, 0)], p.t[min(i+1, len(p.t)-1)]
	if math.Abs(p.c[max(i-1, 0)]-c) < 1e-4 && math.Abs(p.c[min(i+1, len(p.t)-1)]-c) < 1e-4 {
		return at, c
	}
	const g = 0.6180339887498949
	x, y := b-g*(b-a), a+g*(b-a)
	fx, fy := sign*p.at(x), sign*p.at(y)
	for n := 0; n < 40 && b-a > 0.02; n++ {
		if math.Abs(fx-fy) < 1e-7 { // on either side of it, or in the flat
			m := (x + y) / 2
			fm := sign * p.at(m)
			if fm > sign*c {
				at, c = m, sign*fm
			}
			if fm-fx < 1e-7 {
				break
			}
			a, b = x, y
			x, y = b-g*(b-a), a+g*(b-a)
			fx, fy = sign*p.at(x), sign*p.at(y)
			continue
		}
		if fx > fy {
			b, y, fy = y, x, fx
			x = b - g*(b-a)
			fx = sign * p.at(x)
		} else {
			a, x, fx = x, y, fy
			y = a + g*(b-a)
			fy = sign * p.at(y)
		}
	}
	if fx > sign*c {
		at, c = x, sign*fx
	}
	if fy > sign*c {
		at, c = y, sign*fy
	}
	return at, c
}

// region is a range of temperatures, °C; a temperature beyond an end by less than slack (K) is still in it, and with a negative
// slack one short of an end by less is not.
type region struct{ lo, hi, slack float64 }

// atOrAbove, above, atOrBelow, below and between are the regions of the operators; equality is taken to sameK.
func atOrAbove(c float64) region      { return region{c, math.Inf(1), sameK} }
func above(c float64) region          { return region{c, math.Inf(1), -sameK} }
func atOrBelow(c float64) region      { return region{math.Inf(-1), c, sameK} }
func below(c float64) region          { return region{math.Inf(-1), c, -sameK} }
func between(lo, hi float64) region   { return region{lo, hi, -sameK} }
func (r region) holds(c float64) bool { return c >= r.lo-r.slack && c <= r.hi+r.slack }

// spent is how long a course was in a region.
type spent struct {
	total, longest, first period
	count                 int     // periods
	lastEnd               float64 // when the last period ended, s
}

// period is a length of time with the instants at which it began and ended, all in s.
type period struct{ s, from, to float64 }

// stay measures how long a path is in a region within intervals whose ends are knots.
func (p path) stay(ivs []interval, r region) spent {
	var sp spent
	lo, hi := r.lo-r.slack, r.hi+r.slack
	for _, iv := range ivs {
		q := p.in(iv).turned(r)
		if len(q.t) == 0 {
			continue
		}
		inA := q.c[0] >= lo && q.c[0] <= hi
		on, start := inA, q.t[0]
		for i := 0; i+1 < len(q.t); i++ {
			B := q.c[i+1]
			inB := B >= lo && B <= hi
			switch {
			case inA && !inB:
				sp.add(start, q.cross(i, r.edge(B)))
				on = false
			case inB && !inA:
				on, start = true, q.cross(i, r.edge(q.c[i]))
			case !inA:
				if A := q.c[i]; A <= lo && B >= hi || A >= hi && B <= lo {
					sp.add(q.cross(i, r.edge(A)), q.cross(i, r.edge(B)))
				}
			}
			inA = inB
		}
		if on {
			sp.add(start, q.t[len(q.t)-1])
		}
	}
	return sp
}

// shortestS is the length of a period above which it counts as one, s: a touch has none.
const shortestS = 1e-9

// periods is how many periods stay finds. When one begins and ends is asked only of those that could be a touch.
func (p path) periods(ivs []interval, r region) int {
	const surelyS = 1e-6 // between two knots within: far more than shortestS, whatever the arithmetic of the crossings leaves
	lo, hi := r.lo-r.slack, r.hi+r.slack
	n := 0
	for _, iv := range ivs {
		q := p.in(iv).turned(r)
		last := len(q.t) - 1
		count := func(first, final int) { // the knots within
			if q.t[final]-q.t[first] > surelyS {
				n++
				return
			}
			from, to := q.t[first], q.t[final]
			if first > 0 {
				from = q.cross(first-1, r.edge(q.c[first-1]))
			}
			if final < last {
				to = q.cross(final, r.edge(q.c[final+1]))
			}
			if to-from > shortestS {
				n++
			}
		}
		first := -1 // knot within; -1: it is outside
		for i, c := range q.c {
			switch in := c >= lo && c <= hi; {
			case in && first < 0:
				first = i
			case in:
			case first >= 0:
				count(first, i-1)
				first = -1
			case i > 0:
				if A := q.c[i-1]; (A <= lo && c >= hi || A >= hi && c <= lo) && q.cross(i-1, r.edge(c))-q.cross(i-1, r.edge(A)) > shortestS {
					n++
				}
			}
		}
		if first >= 0 {
			count(first, last)
		}
	}
	return n
}

// nearK is how close to an end of a region a turn of an exact course is looked at between its knots, K: several times straightK.
const nearK = 0.2

// turned adds the turns of an exact course that cross an end of a region between two knots, so that no short dip is unseen.
func (p path) turned(r region) path {
	if p.at == nil || len(p.t) < 2 {
		return p
	}
	q, n := p, len(p.t)-1
	for i, c := range p.c {
		if !(math.Abs(c-r.lo) < nearK || math.Abs(c-r.hi) < nearK) {
			continue
		}
		before, after := p.c[max(i-1, 0)], p.c[min(i+1, n)]
		for _, sign := range []float64{-1, 1} {
			if sign*before > sign*c || sign*after > sign*c {
				continue
			}
			at, x := p.polish(i, sign)
			if r.holds(x) == r.holds(c) {
				continue
			}
			k := sort.SearchFloat64s(q.t, at)
			if k < len(q.t) && q.t[k] == at {
				continue
			}
			q.t = append(append(append([]float64(nil), q.t[:k]...), at), q.t[k:]...)
			q.c = append(append(append([]float64(nil), q.c[:k]...), x), q.c[k:]...)
		}
	}
	return q
}

// edge is the end of the region that a temperature outside it lies beyond.
func (r region) edge(c float64) float64 {
	if c <= r.lo-r.slack {
		return r.lo
	}
	return r.hi
}

// add counts one more period; a touch has no length and is none.
func (sp *spent) add(from, to float64) {
	if to-from <= shortestS {
		return
	}
	p := period{to - from, from, to}
	if sp.count == 0 {
		sp.first, sp.total.from = p, from
	}
	if p.s > sp.longest.s {
		sp.longest = p
	}
	sp.count++
	sp.total.s += p.s
	sp.total.to, sp.lastEnd = to, to
}

// deepest and shallowest are how far the knots of a path lie within a region at most and at least, over intervals whose ends
// are knots, K; negative: how far they lie outside it.
func (p path) deepest(ivs []interval, r region) float64 {
	most := math.Inf(-1)
	for _, iv := range ivs {
		for _, c := range p.in(iv).c {
			most = math.Max(most, math.Min(c-r.lo, r.hi-c))
		}
	}
	return most
}

func (p path) shallowest(ivs []interval, r region) float64 {
	least := math.Inf(1)
	for _, iv := range ivs {
		for _, c := range p.in(iv).c {
			least = math.Min(least, math.Min(c-r.lo, r.hi-c))
		}
	}
	return least
}

// depth ranks places that a time in a region (s) cannot rank: how far outside one was that never was in it (K, negative), how
// far inside one that was there all the while (positive); 0 between the two.
func (v *view) depth(p path, r region, s float64, c Counting) float64 {
	if s == 0 {
		return math.Min(0, p.deepest(v.stages, r))
	}
	all := 0.0
	for _, iv := range v.stages {
		if c == Total {
			all += iv.b - iv.a
		} else {
			all = math.Max(all, iv.b-iv.a)
		}
	}
	if s < all-sameS {
		return 0
	}
	return math.Max(0, p.shallowest(v.stages, r))
}

// counted picks the period that a counting asks for.
func (sp spent) counted(c Counting) period {
	switch c {
	case Continuous:
		return sp.longest
	case Once:
		return sp.first
	}
	return sp.total
}

// stretch is the part of a course between two instants a and b (s), with its temperatures ca and cb there (°C).
type stretch struct{ a, b, ca, cb float64 }

// refine makes the exact path of a course from its knots: it halves every stretch that is not nearly straight.
// course fills out with the temperatures at rising times.
func refine(t, c []float64, course func(t, out []float64), at func(float64) float64) path {
	open := make([]stretch, 0, len(t))
	for i := 0; i+1 < len(t); i++ {
		if t[i+1]-t[i] > leastS {
			open = append(open, stretch{t[i], t[i+1], c[i], c[i+1]})
		}
	}
	var moreT, moreC []float64
	for depth := 0; len(open) > 0 && depth < 14; depth++ {
		mid, out := make([]float64, len(open)), make([]float64, len(open))
		for i, s := range open {
			mid[i] = (s.a + s.b) / 2
		}
		course(mid, out)
		n := 0
		for i, s := range open {
			if s.bends(out[i]) {
				n += 2
			}
		}
		next := make([]stretch, 0, n)
		for i, s := range open {
			if s.bends(out[i]) {
				next = append(next, stretch{s.a, mid[i], s.ca, out[i]}, stretch{mid[i], s.b, out[i], s.cb})
			}
		}
		if depth == 0 {
			moreT, moreC = mid, out
		} else {
			moreT, moreC = merge(moreT, moreC, mid, out)
		}
		open = next
	}
	t, c = merge(t, c, moreT, moreC)
	return path{t: t, c: c, at: at}
}

// bends tells whether a stretch is halved once more, by the temperature at its middle, °C.
func (s *stretch) bends(mid float64) bool {
	return math.Abs(mid-(s.ca+s.cb)/2) > straightK && s.b-s.a > 2*leastS
}

// merge joins two lists of knots whose times rise.
func merge(t, c, moreT, moreC []float64) (allT, allC []float64) {
	n := len(t) + len(moreT)
	allT, allC = make([]float64, 0, n), make([]float64, 0, n)
	for i, k := 0, 0; len(allT) < n; {
		if k == len(moreT) || i < len(t) && t[i] <= moreT[k] {
			allT, allC = append(allT, t[i]), append(allC, c[i])
			i++
		} else {
			allT, allC = append(allT, moreT[k]), append(allC, moreC[k])
			k++
		}
	}
	return allT, allC
}

// thin picks the knots of straight-line courses that share their instants and keeps each of them within tol (K) of itself.
func thin(t []float64, courses [][]float64, tol float64) []int {
	keep := []int{0}
	lo, hi := make([]float64, len(courses)), make([]float64, len(courses))
	for i := 0; i < len(t)-1; {
		// the longest stretch from i whose knots all lie within tol of its chord, by a cone of slopes for each course
		for n := range courses {
			lo[n], hi[n] = math.Inf(-1), math.Inf(1)
		}
		last := i + 1
	stretch:
		for j := i + 1; j < len(t); j++ {
			dt := t[j] - t[i]
			if dt <= 0 {
				break
			}
			for n, c := range courses {
				if s := (c[j] - c[i]) / dt; s < lo[n] || s > hi[n] {
					break stretch
				}
			}
			last = j
			for n, c := range courses {
				lo[n], hi[n] = max(lo[n], (c[j]-tol-c[i])/dt), min(hi[n], (c[j]+tol-c[i])/dt)
			}
		}
		keep = append(keep, last)
		i = last
	}
	return keep
}
