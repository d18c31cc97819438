package model

import "math"

// functions gives the functions of a body that is no product of axes, with as many as its axes tell; nil for one that is.
func (s *solver) functions(axes [3]*axis) functions {
	switch {
	case s.ball != nil:
		return &ball{ballBase: ballOf(axes[0].n-1, axes[1].n-1), spheroidMap: *s.ball}
	case s.product.Shape.Layered():
		return s.layers(axes[0].n)
	}
	return nil
}

// layers spreads the polynomials over a layered slab. n is how many a slab of one food would need: a layer takes what its own thickness and
// diffusivity ask for by the same rule, the less the farther a change of surroundings has to come to reach it.
func (s *solver) layers(n int) *stack {
	need := func(fo float64, sharp bool) float64 {
		d := 2.5 + 2.15*math.Pow(fo, -0.25)
		if sharp {
			d += 5
		}
		return d
	}
	share := float64(n) / need(s.foMin[0], s.sharp[0])
	if s.kinds[0] == planeFull {
		share /= fullDegrees
	}
	half := s.product.Size.ThicknessM / 2
	return stackOf(s.kinds[0], s.product.Layers, func(p *part) int {
		q := s.product.Layers[p.layer].Food.Props(50)
		alpha := q.KWmK / (q.RhoKgM3 * q.CJkgK)
		thick := (p.hi - p.lo) * half
		far := 1 - p.hi
		if s.kinds[0] == planeFull {
			far = min(far, 1+p.lo)
		}
		far *= half
		r := thick
		if p.kind == planeFull {
			r /= 2
		}
		fo := (alpha*s.settle + far*far/8) / (r * r)
		d := need(fo, s.sharp[0] && far < 1e-9)
		if alpha*s.settle > 1000*r*r { // a straight line, all but a parabola: a foil
			return 3
		}
		if p.kind == planeFull {
			d *= fullDegrees
		}
		return min(int(math.Ceil(share*max(d, 5))), maxDegrees)
	})
}

// fullDegrees is how many more polynomials an axis takes that has two faces than one from the middle to a face.
const fullDegrees = 1.85

// ballDegrees is the number of polynomials along ρ (axis 0), that grows with the layer a change of surroundings has warmed as for any axis, and
// along μ (axis 1), that grows with how far the spheroid is from a sphere. The numbers were fitted to spheroids of 1:4 to 3:1.
func (s *solver) ballDegrees(a, more int) int {
	n := 3 + 1.9*math.Pow(s.foMin[0], -0.25)
	if s.sharp[0] {
		n += 5
	}
	along := n * (1 + 0.1*float64(more))
	if a == 0 {
		return min(int(math.Round(along)), mostBall)
	}
	ratio := max(s.ball.a, s.ball.b) / min(s.ball.a, s.ball.b)
	return min(int(math.Round(3.5+2.2*ratio))+more, int(math.Round(along)), mostBall)
}

// mostBall is the most polynomials along an axis of a spheroid: their number on the whole grows with its square, the time with its sixth power.
const mostBall = 26
