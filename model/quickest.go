package model

import "math"

// Quickness is how fast a place within a food can follow what surrounds it at most.
type Quickness struct {
	SettleS float64   // the time constant with which it follows surroundings that step to a new temperature, s
	ShareS  float64   // the most that it moves in a second, as a share of the range of all temperatures that its surface and its start had, 1/s
	Follows *Response // how it follows them at the soonest; nil where its heat content bends too much to say, as that of food that may freeze
}

// With the surface of a body held at a new temperature its centre follows by a curve S(Fo) from 0 to 1, whose last and slowest part decays
// with the square of the first eigenvalue and whose steepest slope is a number of the shape; Fo is α·t/d², with d from centre to surface.
// The series of slab, cylinder and sphere stand in Carslaw & Jaeger (1959), sections 3.4, 7.6 and 9.3 (section numbers from memory); the
// slopes are computed from them, and held to them by a test.
//
// No course of the surroundings moves the centre faster than that slope times their range. By Duhamel's theorem (section 1.14) the centre is
// T0 + ∫ S'(t−s)·(f(s)−T0) ds, with f the temperature of the surface; S' rises once and falls once, so that its slope's positive and
// negative parts are max S' each, and with f and T0 between lo and hi the centre moves by no more than (hi−lo)·max S' in a unit of time. A
// film only lowers it, for f stays between the surroundings and the start. Own derivation.
const (
	slabSettles, slabSlope         = math.Pi * math.Pi / 4, 1.851
	cylinderSettles, cylinderSlope = 5.7832, 3.802
	ballSettles, ballSlope         = math.Pi * math.Pi, 5.923
)

// With a film the centre is slower: the first rate of decay is near that of both resistances in a row, 1/(d²/(α·λ²) + d·ρc/(n·h)) with
// n = 1, 2, 3 for slab, cylinder and sphere (exact for little and for much film; in between at most 5 % too slow for a slab, 9 % for a
// cylinder and 12 % for a sphere, held by a test), and the slope is no steeper than that of a stirred mass, n·h/(d·ρc).

// Quickest says how fast a place can follow at most, with the quickest of the properties that the food has from lowC to highC, and films of no
// more than filmW, W/(m²·K); +Inf: its surface may be held. A nil place is the slowest point, which is no quicker than the centre; any other
// is taken for the centre of the largest ball around it within the food, held. In shapes with several directions the slopes and the rates of
// decay add up. ok is false where conduction sets no bound (stirred), where an outer layer that holds more heat shortens the way (layers), or
// the product is not known in full.
func Quickest(p *Product, at *Place, lowC, highC, filmW float64) (q Quickness, ok bool) {
	if p.Shape == nil || p.Shape.Mixed() || p.Shape.Layered() {
		return q, false
	}
	alpha, least, holds := 0.0, math.Inf(1), math.Inf(1) // m²/s, m²/s, J/(m³·K)
	for _, f := range p.Foods() {
		a, l, h := f.quickest(lowC, highC)
		alpha, least, holds = math.Max(alpha, a), math.Min(least, l), math.Min(holds, h)
	}
	if !(alpha > 0) || math.IsInf(alpha, 0) || !(filmW > 0) {
		return q, false
	}
	rate := 0.0 // 1/s
	var ds []direction
	add := func(settles, slope, n, m float64) {
		if m == 0 || math.IsInf(m, 1) {
			return
		}
		behind := m * holds / (n * filmW) // s
		rate += 1 / (m*m/(alpha*settles) + behind)
		ds = append(ds, direction{bends: n, decayS: m * m / alpha, biot: m * filmW / (alpha * holds)})
		q.ShareS += math.Min(alpha*slope/(m*m), 1/behind)
	}
	r := reach(p)
	switch {
	case at != nil && *at != Place{}:
		filmW = math.Inf(1)
		add(ballSettles, ballSlope, 3, p.deep(*at))
	case p.Shape.Oval(): // the ball within it
		add(ballSettles, ballSlope, 3, p.deep(Place{}))
	default:
		for i := range p.Shape.Ways {
			switch p.Shape.Ways[i].kind {
			case radial:
				add(cylinderSettles, cylinderSlope, 2, r[i])
			case spherical:
				add(ballSettles, ballSlope, 3, r[i])
			default:
				add(slabSettles, slabSlope, 1, r[i])
			}
		}
	}
	q.SettleS = 1 / rate
	if rate > 0 && !math.IsInf(rate, 0) && alpha <= mostBend*least {
		q.Follows = newResponse(ds, q.SettleS)
	}
	return q, rate > 0
}

// mostBend is how much the diffusivity may differ over the range for a response to be worked out; own choice. Ice has several times that of
// food that is thawed.
const mostBend = 1.5

// quickest is the highest thermal diffusivity of a food from lowC to highC, and the least, m²/s, and the least heat that it holds,
// J/(m³·K); 0 where it is not known.
func (f *Material) quickest(lowC, highC float64) (alpha, least, holds float64) {
	least, holds = math.Inf(1), math.Inf(1)
	if f.Props == nil {
		return 0, 0, holds
	}
	const steps = 40
	for i := 0; i <= steps; i++ {
		c := lowC + (highC-lowC)*float64(i)/steps
		if f.LowC != 0 || f.HighC != 0 {
			c = math.Max(f.LowC, math.Min(c, f.HighC))
		}
		q := f.Props(c)
		if h := q.RhoKgM3 * q.CJkgK; h > 0 {
			alpha, least, holds = math.Max(alpha, q.KWmK/h), math.Min(least, q.KWmK/h), math.Min(holds, h)
		}
	}
	return alpha, least, holds
}

// deep is how far a place lies within the food, m: no more than to its nearest surface; 0 on it.
func (p *Product) deep(at Place) float64 {
	r := reach(p)
	got := [3]float64{math.Abs(at.UpM), math.Abs(at.AcrossM), math.Abs(at.AlongM)}
	if p.Shape.Oval() { // a spheroid of the same form through the place
		return math.Max(0, math.Min(r[0], r[1])*(1-math.Hypot(got[0]/r[0], got[1]/r[1])))
	}
	least := math.Inf(1)
	for i := range r {
		if r[i] > 0 {
			least = math.Min(least, r[i]-got[i])
		}
	}
	return math.Max(0, least)
}
