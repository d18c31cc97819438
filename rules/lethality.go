package rules

import (
	"math"
	"strconv"
)

// Lethality is the integral of the lethal rate over one heating: the general method, F = ∫10^((T−Tref)/z)dt.
var Lethality = &Kind{Name: "lethality", Needs: [][]string{{"Reference temperature"}, {"z"}, {"Time", "D"}, {"Time", "Log reductions"}},
	May:  []string{"From", "z above the reference temperature", "Stage", "Where", "Compare time"},
	Help: "equivalent minutes at the reference temperature, added up over one heating; From is the floor below which nothing is credited", judge: judgeLethality}

// Cautions on lethality that was earned slowly: Stephens et al. 1994 found that Listeria heated at 5 K/min or slower survives
// more than the integral says.
const (
	slowKs      = 5.0 / 60 // K/s
	nearFloorK  = 10.0
	muchOfTotal = 0.1
)

func judgeLethality(v *view) Finding {
	l := v.l
	heats := v.heatings()
	q := question{unit: "min", warm: true, adds: true}
	per, needS := 60.0, 0.0
	if l.TimeS != nil {
		needS = *l.TimeS
		q.need = needS / 60
	} else {
		q.unit, q.need, per, needS = "log10", *l.Logs, *l.DS, *l.Logs**l.DS
	}
	q.measure = func(p path, t tilt) outcome {
		k := v.killer(t)
		best, which := -1.0, 0
		for i, ivs := range heats {
			f := k.over(p, ivs)
			if math.IsNaN(f) || math.IsInf(f, 0) {
				o := none(CannotTell, "lethality endless")
				o.slow = true
				return o
			}
			if f > best {
				best, which = f, i
			}
		}
		best = math.Max(best, 0)
		o := none(NotMet, "lethality time")
		if l.TimeS == nil {
			o.word = "lethality logs"
		}
		o.value, o.bad, o.margin, o.slow = best/per, -math.Log10(best), math.NaN(), true
		if best == 0 {
			_, top := path{t: p.t, c: p.c}.mostOf(v.stages, 1)
			o.bad = neverBad - top
		}
		if !t.rank {
			o.holes = holes{"value": round(best/per, decimalsOf(best/per, q.unit), -1)}
		}
		if l.TimeS != nil {
			o.margin = best - needS
		}
		if l.enough(best, needS) {
			o.verdict = Met
		}
		if t == (tilt{}) && len(heats) > 0 {
			o.start, o.end = k.credited(p, heats[which])
			o.at = o.end
			if p.at != nil || v.h.Recorded {
				o.cautions = k.cautions(p, heats[which], best)
			}
			if len(heats) > 1 {
				o.notes = append(o.notes, say("note heatings", holes{"count": strconv.Itoa(len(heats))}))
			}
		}
		return o
	}
	if l.ZAboveK == nil || *l.ZAboveK == *l.ZK {
		q.room = func(p path) float64 { // moving the reference temperature by d divides the whole by 10^(d/z)
			best, k := 0.0, v.killer(tilt{})
			p.at = nil
			for _, ivs := range heats {
				best = math.Max(best, k.over(p, ivs))
			}
			return *l.ZK * math.Log10(best/needS) // −Inf where nothing was credited: no margin
		}
	}
	return v.judgePlaces(q)
}

// heatings are the stages of the limit, kept apart where chilling lies between: cooling after a heating belongs to it.
func (v *view) heatings() [][]interval {
	var cuts []float64
	cold := false
	for _, r := range v.runs {
		if c := chills(r.stage); c {
			cold = true
		} else if cold {
			cold = false
			cuts = append(cuts, r.a)
		}
	}
	cuts = append(cuts, v.c.end)
	var heats [][]interval
	from := 0.0
	for _, to := range cuts {
		var part []interval
		for _, iv := range v.stages {
			if a, b := math.Max(iv.a, from), math.Min(iv.b, to); b > a {
				part = append(part, interval{a, b})
			}
		}
		if len(part) > 0 {
			heats = append(heats, part)
		}
		from = to
	}
	return heats
}

// killer adds up lethality: seconds at the reference temperature.
type killer struct {
	refC, lnBelow, lnAbove float64 // lnBelow, lnAbove: ln10/z, 1/K
	floorC                 float64 // nothing is credited below it; −Inf for none
	shiftK                 float64 // added to every temperature
	rough                  bool    // courses between straight lines serve to rank only
}

// killer of a limit: the error lowers the food, the margin raises the reference temperature.
func (v *view) killer(t tilt) killer {
	l := v.l
	k := killer{refC: *l.ReferenceC + t.ownK, lnBelow: math.Ln10 / *l.ZK, floorC: math.Inf(-1), shiftK: -t.errK}
	k.rough = t.rank
	k.lnAbove = k.lnBelow
	if l.ZAboveK != nil {
		k.lnAbove = math.Ln10 / *l.ZAboveK
	}
	if l.FromC != nil {
		k.floorC = *l.FromC - sameK
	}
	return k
}

// rate is the lethal rate at a temperature, without dimension.
func (k killer) rate(c float64) float64 {
	if c < k.refC {
		return math.Exp(k.lnBelow * (c - k.refC))
	}
	return math.Exp(k.lnAbove * (c - k.refC))
}

// over adds up over intervals, s.
func (k killer) over(p path, ivs []interval) float64 {
	sum := 0.0
	for _, iv := range ivs {
		q := p.in(iv)
		top := math.Inf(-1)
		for _, c := range q.c {
			if c > top {
				top = c
			}
		}
		top += k.shiftK
		if len(q.t) < 2 || top < k.floorC {
			continue
		}
		known, last := -1, 0.0 // the knot whose rate is known, and that rate
		for i := 0; i+1 < len(q.t); i++ {
			a, b := q.c[i]+k.shiftK, q.c[i+1]+k.shiftK
			if k.negligible(q, max(a, b), top) || q.t[i] == q.t[i+1] {
				continue
			}
			if lo := min(a, b); q.at != nil || k.lnAbove != k.lnBelow || lo < k.floorC {
				sum += k.stretch(q, i, top)
				continue
			}
			if known != i {
				last = math.Exp(k.lnBelow * (a - k.refC))
			}
			next := math.Exp(k.lnBelow * (b - k.refC))
			sum += (q.t[i+1] - q.t[i]) * meanRate(k.lnBelow*(b-a)/2, last, next)
			known, last = i+1, next
		}
	}
	return sum
}

// negligible tells whether the rates of a stretch whose warmest end is hi lie too far below those at top to count, or below the floor.
func (k killer) negligible(p path, hi, top float64) bool {
	far := 30.0 // e-folds
	if k.rough && p.at == nil {
		far = 8
	}
	return hi < k.floorC || (top-hi)*k.lnBelow > far
}

// stretch adds up between two knots, split at the floor and at the reference temperature where z changes there. top is the
// warmest temperature: stretches far below it are taken as straight.
func (k killer) stretch(p path, i int, top float64) float64 {
	a, b := p.c[i]+k.shiftK, p.c[i+1]+k.shiftK
	if lo, hi := min(a, b), max(a, b); p.at == nil && lo >= k.floorC && (k.lnAbove == k.lnBelow || lo >= k.refC || hi <= k.refC) {
		return k.straight(p.t[i+1]-p.t[i], a, b)
	}
	ts := []float64{p.t[i], p.t[i+1]}
	cs := []float64{a, b}
	split := func(level float64) {
		for n := 0; n+1 < len(cs); n++ {
			if (cs[n]-level)*(cs[n+1]-level) < 0 {
				s := path{t: ts[n : n+2], c: []float64{cs[n] - k.shiftK, cs[n+1] - k.shiftK}, at: p.at}
				t := s.cross(0, level-k.shiftK)
				ts = append(ts[:n+1], append([]float64{t}, ts[n+1:]...)...)
				cs = append(cs[:n+1], append([]float64{level}, cs[n+1:]...)...)
				return
			}
		}
	}
	if !math.IsInf(k.floorC, -1) {
		split(k.floorC)
	}
	if k.lnAbove != k.lnBelow {
		split(k.refC)
	}
	sum := 0.0
	for n := 0; n+1 < len(ts); n++ {
		if lo, hi := math.Min(cs[n], cs[n+1]), math.Max(cs[n], cs[n+1]); lo < k.floorC-sameK && hi <= k.floorC+sameK {
			continue
		}
		if p.at == nil || (top-math.Max(cs[n], cs[n+1]))*k.lnBelow > 16 {
			sum += k.straight(ts[n+1]-ts[n], cs[n], cs[n+1])
		} else {
			sum += k.gauss(p, stretch{ts[n], ts[n+1], cs[n], cs[n+1]})
		}
	}
	return sum
}

// straight is exact where the temperature runs straight and z does not change: dt·√(L1·L2)·sinh(x/2)/(x/2), x = ln(L2/L1).
func (k killer) straight(dt, a, b float64) float64 {
	ln := k.lnBelow
	if (a+b)/2 >= k.refC {
		ln = k.lnAbove
	}
	return dt * meanRate(ln*(b-a)/2, math.Exp(ln*(a-k.refC)), math.Exp(ln*(b-k.refC)))
}

// meanRate is the mean of a rate that grows evenly by e^(2y) from one to another: their geometric mean times sinh(y)/y, by its
// series where y is small.
func meanRate(y, from, to float64) float64 {
	if y2 := y * y; y2 < 0.25 {
		return math.Sqrt(from) * math.Sqrt(to) * (1 + y2/6*(1+y2/20*(1+y2/42*(1+y2/72*(1+y2/110)))))
	}
	return (to - from) / (2 * y)
}

// Five-point Gauss-Legendre nodes and weights on −1…1 (Abramowitz and Stegun, table 25.4).
var (
	gaussX = [5]float64{-0.9061798459386640, -0.5384693101056831, 0, 0.5384693101056831, 0.9061798459386640}
	gaussW = [5]float64{0.2369268850561891, 0.4786286704993665, 0.5688888888888889, 0.4786286704993665, 0.2369268850561891}
)

// gaussNodes are the five instants at which a course is asked between two.
func gaussNodes(from, to float64) (t [5]float64) {
	half, mid := (to-from)/2, (from+to)/2
	for i, x := range gaussX {
		t[i] = mid + half*x
	}
	return t
}

// gauss adds up the exact course over a stretch, of which the temperatures are shifted, halved until the rate changes by less than a factor of about 4.5.
func (k killer) gauss(p path, s stretch) float64 {
	if math.Abs(s.cb-s.ca)*math.Max(k.lnBelow, k.lnAbove) > 1.5 && s.b-s.a > leastS {
		m := (s.a + s.b) / 2
		c := p.at(m) + k.shiftK
		return k.gauss(p, stretch{s.a, m, s.ca, c}) + k.gauss(p, stretch{m, s.b, c, s.cb})
	}
	var cs [5]float64
	if p.nodes != nil {
		cs = p.nodes(s.a, s.b)
	} else {
		for i, t := range gaussNodes(s.a, s.b) {
			cs[i] = p.at(t)
		}
	}
	sum := 0.0
	for i, c := range cs {
		sum += gaussW[i] * k.rate(c+k.shiftK)
	}
	return (s.b - s.a) / 2 * sum
}

// credited is when the first and the last of the lethality was earned, to a thousandth of its top rate.
func (k killer) credited(p path, ivs []interval) (from, to float64) {
	_, top := p.mostOf(ivs, 1)
	low := math.Max(k.floorC, top-3*math.Ln10/k.lnBelow)
	sp := path{t: p.t, c: p.c}.stay(ivs, atOrAbove(low))
	if sp.count == 0 {
		return math.NaN(), math.NaN()
	}
	return sp.total.from, sp.lastEnd
}

// cautions tells of lethality without a floor, and of a tenth or more earned barely above the floor or on a slow way up.
func (k killer) cautions(p path, ivs []interval, total float64) []string {
	var keys []string
	if math.IsInf(k.floorC, -1) {
		keys = append(keys, "lethality without floor")
	}
	slow := 0.0
	for _, iv := range ivs {
		q := p.in(iv)
		for i := 0; i+1 < len(q.t); i++ {
			dt, up := q.t[i+1]-q.t[i], q.c[i+1]-q.c[i]
			if dt > 0 && (up > 0 && up/dt < slowKs || math.Max(q.c[i], q.c[i+1]) < k.floorC+nearFloorK) {
				slow += k.straightFrom(dt, q.c[i]+k.shiftK, q.c[i+1]+k.shiftK)
			}
		}
	}
	if total > 0 && slow > muchOfTotal*total {
		keys = append(keys, "slow come-up lethality")
	}
	return keys
}

// straightFrom is straight with what lies below the floor left out.
func (k killer) straightFrom(dt, a, b float64) float64 {
	if lo, hi := math.Min(a, b), math.Max(a, b); hi <= k.floorC {
		return 0
	} else if lo < k.floorC {
		return k.straight(dt*(hi-k.floorC)/(hi-lo), k.floorC, hi)
	}
	return k.straight(dt, a, b)
}
