package model

import (
	"math"
	"sync"
)

// Response is how a place within a food follows its surroundings at the soonest: a kernel for each direction, along which heat comes in apart
// from the others.
type Response struct {
	settleS float64
	stepS   float64
	came    [][]float64 // by direction: the share of its surroundings that has come in after each step, rising

	mu    sync.Mutex
	known map[[2]int]float64
}

// What a place is at is Σ ∫ K(s)·u(t−s) ds over the directions, with u the temperature of what surrounds that direction and ∫ΣK = 1
// (Duhamel's theorem, Carslaw & Jaeger 1959, section 1.14; from memory). Behind a film that is at most h, a weaker one is the same as h
// towards a temperature between the surface and the surroundings; so every course of films up to h is covered too. A body that is larger is
// covered as well: what lies about the smaller one in it is between the extremes
// (strictly so where the surface is held; behind a film nearly). Therefore
//
//   - any sum of readings with weights that add up to nought is at most half of the range of u times ∫|the same sum of kernels|, and
//   - as the kernel of a centre falls no faster, seen over any time w, than its last and slowest part, exp(−w/settle), nor does the
//     distance to the coldest or the hottest that u can be.
//
// The kernel is log-concave, as a place in the middle is reached through one layer after the other. Own derivation; held against the exact
// model by a test.

// responseRoots is how many parts of a series are kept: more than enough for instants at which a centre has moved by a thousandth.
const responseRoots = 24

// A response is kept over responseTimes the time of settling, in steps of a responseParts of d²/α, but no fewer and no more than some.
const (
	responseTimes              = 8.0
	responseParts              = 200.0
	fewestParts, mostResponses = 2000, 40000
)

// direction is an axis of a body, from its middle to the surface.
type direction struct {
	bends  float64 // 1 of a slab, 2 of a cylinder, 3 of a sphere
	decayS float64 // d²/α, s
	biot   float64 // h·d/k; +Inf: held
}

// newResponse works out how the middle of a body of such directions responds; settleS is its first time constant, s.
func newResponse(ds []direction, settleS float64) *Response {
	least := math.Inf(1)
	for _, d := range ds {
		least = math.Min(least, d.decayS)
	}
	n := int(math.Max(fewestParts, math.Min(mostResponses, responseTimes*settleS/least*responseParts)))
	r := &Response{settleS: settleS, stepS: responseTimes * settleS / float64(n), known: map[[2]int]float64{}}
	left := make([][]float64, len(ds)) // what of the start is left along each direction
	for i, d := range ds {
		roots, weights := d.series()
		left[i] = make([]float64, n+1)
		for k := range left[i] {
			fo, sum := float64(k)*r.stepS/d.decayS, 0.0
			for j := range roots {
				part := roots[j] * roots[j] * fo
				if part > 30 {
					break
				}
				sum += weights[j] * math.Exp(-part)
			}
			if left[i][k] = math.Min(1, sum); fo < 0.003 {
				left[i][k] = 1
			}
			if k > 0 {
				left[i][k] = math.Min(left[i][k], left[i][k-1])
			}
		}
	}
	for i := range ds {
		came := make([]float64, n+1)
		for k := 1; k <= n; k++ {
			m := left[i][k-1] - left[i][k]
			for o := range ds {
				if o != i {
					m *= (left[o][k-1] + left[o][k]) / 2
				}
			}
			came[k] = came[k-1] + m
		}
		r.came = append(r.came, came)
	}
	return r
}

// series is the series of the middle of a slab, cylinder or sphere behind a film: λ·tan λ, λ·J1/J0 and 1−λ·cot λ are Bi (Carslaw &
// Jaeger 1959, sections 3.11, 7.7 and 9.4; from memory).
func (d direction) series() (roots, weights []float64) {
	bi := math.Min(d.biot, 1e7)
	of := func(l float64) float64 { // rises through nought at the root
		switch d.bends {
		case 2:
			return l*math.J1(l) - bi*math.J0(l)
		case 3:
			return math.Sin(l) - l*math.Cos(l) - bi*math.Sin(l)
		}
		return l*math.Sin(l) - bi*math.Cos(l)
	}
	zero := func(of func(float64) float64, lo, hi float64) float64 {
		up := of(hi) > of(lo)
		for range 60 {
			if m := (lo + hi) / 2; of(m) > 0 == up {
				hi = m
			} else {
				lo = m
			}
		}
		return (lo + hi) / 2
	}
	from := 1e-9
	for n := 1.0; n <= responseRoots; n++ {
		var l float64
		switch d.bends {
		case 2:
			top := zero(math.J0, (n-0.75)*math.Pi, n*math.Pi)
			next := zero(math.J1, n*math.Pi, (n+0.75)*math.Pi)
			l = zero(of, from, top)
			from = next
			weights = append(weights, 2/l*math.J1(l)/(math.J0(l)*math.J0(l)+math.J1(l)*math.J1(l)))
		case 3:
			l = zero(of, (n-1)*math.Pi+1e-9, n*math.Pi)
			weights = append(weights, 2*(math.Sin(l)-l*math.Cos(l))/(l-math.Sin(l)*math.Cos(l)))
		default:
			l = zero(of, (n-1)*math.Pi, (n-0.5)*math.Pi)
			weights = append(weights, 2*math.Sin(l)/(l+math.Sin(l)*math.Cos(l)))
		}
		roots = append(roots, l)
	}
	return roots, weights
}

// in is the share that has come in along a direction within t, s.
func (r *Response) in(came []float64, t float64) float64 {
	x := t / r.stepS
	switch k := int(x); {
	case t <= 0:
		return 0
	case k >= len(came)-1:
		return came[len(came)-1]
	default:
		return came[k] + (came[k+1]-came[k])*(x-float64(k))
	}
}

// Times are rounded to 2 %, and what follows grows with no more than the third power of them.
const rounded = 1.05

// fiftieths counts a time in steps of 2 %.
func fiftieths(s float64) int {
	if s <= 0 {
		return math.MinInt
	}
	return int(math.Round(math.Log(s) * 50))
}

// Turn is the most by which the place can be off, afterS after a reading, the straight line through that reading and one beforeS before it; as
// a share of the range of its surroundings. beforeS of 0: off the reading itself.
func (r *Response) Turn(beforeS, afterS float64) float64 {
	key := [2]int{fiftieths(beforeS), fiftieths(afterS)}
	r.mu.Lock()
	defer r.mu.Unlock()
	if most, ok := r.known[key]; ok {
		return most
	}
	if beforeS > 0 {
		beforeS = math.Exp(float64(key[0]) / 50)
	}
	afterS = math.Exp(float64(key[1]) / 50)
	slope := 0.0
	if beforeS > 0 {
		slope = afterS / beforeS
	}
	sum, end := 0.0, responseTimes*r.settleS+beforeS+afterS
	ds := math.Max(math.Min(afterS/20, r.settleS/50), end/8000)
	for _, came := range r.came {
		was := 0.0
		for s := ds; s <= end+ds; s += ds {
			now := r.in(came, s) - (1+slope)*r.in(came, s-afterS) + slope*r.in(came, s-afterS-beforeS)
			sum += math.Abs(now - was)
			was = now
		}
	}
	most := rounded * sum / 2
	r.known[key] = most
	return most
}
