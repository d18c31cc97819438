package model

import (
	"math"
	"sync"
)

// spheroidMap is the map between a spheroid and the unit ball: up = a·ρ·μ, across = b·ρ·√(1-μ²), with ρ from the centre 0 to the surface 1
// and μ from the equator 0 to the pole 1. Any even, smooth field is a polynomial in ρ² along ρ and in μ² along μ.
type spheroidMap struct {
	a float64 // half of the axis of revolution, m
	b float64 // radius at the equator, m
}

// coord gives ρ and μ of a place, moved to the surface if it lies outside; at the centre μ is 0.
func (s *spheroidMap) coord(p Place) coord {
	z, r := math.Abs(p.UpM)/s.a, math.Abs(p.AcrossM)/s.b
	rho := math.Hypot(z, r)
	if rho == 0 {
		return coord{}
	}
	return coord{min(rho, 1), min(z/rho, 1)}
}

// place is the inverse of coord.
func (s *spheroidMap) place(x coord) Place {
	return Place{UpM: s.a * x[0] * x[1], AcrossM: s.b * x[0] * math.Sqrt(1-x[1]*x[1])}
}

// reach is the greatest half axis, m.
func (s *spheroidMap) reach() float64 { return max(s.a, s.b) }

// surfaceShare is the surface at μ by volume of the spheroid, 1/m: its integral over μ from 0 to 1 is surface by volume.
func (s *spheroidMap) surfaceShare(mu float64) float64 {
	return 3 / (s.a * s.b) * math.Hypot(s.a*math.Sqrt(1-mu*mu), s.b*mu)
}

// ballBase holds the polynomials on the unit ball that are round about its axis and even, orthonormal in the volume of the ball scaled
// to 1: of harmonic m = 0…l and n = 0…p-m
//
//	√((4n+4m+3)/3) ρ^2m J(n) · √(4m+1) P2m(μ)
//
// with the Jacobi polynomials J(n) = P(0,2m+1/2) of degree n in 2ρ²-1 and the Legendre polynomials P2m. (Solid harmonics times Jacobi
// polynomials: Dunkl & Xu 2014, Orthogonal Polynomials of Several Variables, section 5.2; the norms: Abramowitz & Stegun 1964, 22.2.1 and
// 22.2.10; from memory, held by TestBallBase.) The first is 1.
type ballBase struct {
	p, l  int
	n     int
	start []int       // by harmonic: its first function; l+2, the last is n
	grad  []float64   // n×n: ∫∇f·∇g
	polar []float64   // n×n: ∫ ∂f/∂Z·∂g/∂Z, Z along the axis
	along []float64   // (p+1)×n: the radial part of a function as polynomials of a half plane along ρ
	rec   [][]jacobi  // by harmonic: how the radial parts follow from each other
	face  []float64   // n: radial part at the surface
	mus   [][]float64 // values of the harmonics at the points of surface, by point
}

// jacobi is a step φ(j+1) = (a·t+b)·φ(j) - c·φ(j-1).
type jacobi struct{ a, b, c float64 }

var (
	ballsMu sync.Mutex
	balls   = map[[2]int]*ballBase{} // kept: one takes some ms to make
)

// mostBalls is how many bases are kept: a large one takes 2 MB.
const mostBalls = 24

// ballOf gives the base of degree p with harmonics up to l.
func ballOf(p, l int) *ballBase {
	ballsMu.Lock()
	defer ballsMu.Unlock()
	if b := balls[[2]int{p, l}]; b != nil {
		return b
	}
	if len(balls) >= mostBalls {
		clear(balls)
	}
	b := newBallBase(p, l)
	balls[[2]int{p, l}] = b
	return b
}

func newBallBase(p, l int) *ballBase {
	b := &ballBase{p: p, l: l}
	for m := 0; m <= l; m++ {
		b.start = append(b.start, b.n)
		b.n += p - m + 1
		b.rec = append(b.rec, radialSteps(m, p-m+1))
	}
	b.start = append(b.start, b.n)
	n := b.n
	b.grad, b.polar, b.along = make([]float64, n*n), make([]float64, n*n), make([]float64, (p+1)*n)
	b.face = make([]float64, n)
	b.radial(1, b.face, nil)
	rho, mu := gauss(2*p+2), gauss(2*l+2) // exact for the polynomials that stand here
	rad, drad, across := make([]float64, n), make([]float64, n), make([]float64, n)
	ang, dang := make([]float64, l+1), make([]float64, l+1)
	fz, fr := make([]float64, n), make([]float64, n)
	half, line := baseOf(planeHalf, p+1), make([]float64, p+1)
	for _, u := range rho {
		b.radial(u.x, rad, drad)
		half.values(u.x, line, nil)
		for j, v := range line {
			add(b.along[j*n:][:n], u.w*v, rad)
		}
		for i := range across {
			across[i] = rad[i] / u.x
		}
		for _, v := range mu {
			b.harmonics(v.x, ang, dang)
			s := math.Sqrt(1 - v.x*v.x)
			for m := 0; m <= l; m++ {
				for i := b.start[m]; i < b.start[m+1]; i++ { // ∂/∂Z and ∂/∂R
					fz[i] = v.x*drad[i]*ang[m] + s*s*across[i]*dang[m]
					fr[i] = s * (drad[i]*ang[m] - v.x*across[i]*dang[m])
				}
			}
			w := 3 * u.x * u.x * u.w * v.w
			for i := range fz {
				z, r := w*fz[i], w*fr[i]
				gr, po := b.grad[i*n:][:n], b.polar[i*n:][:n]
				for j := 0; j <= i; j++ {
					po[j] += z * fz[j]
					gr[j] += z*fz[j] + r*fr[j]
				}
			}
		}
	}
	for i := 0; i < n; i++ {
		for j := 0; j < i; j++ {
			b.grad[j*n+i], b.polar[j*n+i] = b.grad[i*n+j], b.polar[i*n+j]
		}
	}
	for _, v := range surfacePoints {
		ang := make([]float64, l+1)
		b.harmonics(v.x, ang, nil)
		b.mus = append(b.mus, ang)
	}
	return b
}

// surfacePoints are where integrals over the surface are taken.
var surfacePoints = gauss(96)

// radialSteps gives the steps of n orthonormal radial parts of harmonic m.
func radialSteps(m, n int) []jacobi {
	beta := 2*float64(m) + 0.5
	norm := func(j int) float64 { return math.Sqrt((4*float64(j) + 4*float64(m) + 3) / 3) }
	steps := make([]jacobi, n)
	for j := range steps {
		k := float64(j)
		a, b, c := (beta+2)/2, -beta/2, 0.0
		if j > 0 {
			s := 2*k + beta
			d := 2 * (k + 1) * (k + beta + 1) * s
			a, b, c = (s+1)*(s+2)*s/d, -(s+1)*beta*beta/d, 2*k*(k+beta)*(s+2)/d
			c *= norm(j+1) / norm(j-1)
		}
		up := norm(j+1) / norm(j)
		steps[j] = jacobi{a * up, b * up, c}
	}
	return steps
}

// radial fills out (n) with the radial parts at ρ and, unless nil, slope with their slopes.
func (b *ballBase) radial(rho float64, out, slope []float64) {
	t := 2*rho*rho - 1
	power, dpower := 1.0, 0.0 // ρ^2m and its slope
	for m := 0; m <= b.l; m++ {
		p0, p1, d0, d1 := 0.0, math.Sqrt((4*float64(m)+3)/3), 0.0, 0.0
		for j, r := range b.rec[m] {
			i := b.start[m] + j
			out[i] = power * p1
			if slope != nil {
				slope[i] = dpower*p1 + power*d1*4*rho
			}
			s := r.a*t + r.b
			d0, d1 = d1, s*d1+r.a*p1-r.c*d0
			p0, p1 = p1, s*p1-r.c*p0
		}
		dpower = dpower*rho*rho + power*2*rho
		power *= rho * rho
	}
}

// harmonics fills out (l+1) with √(4m+1)·P2m at μ and, unless nil, slope with their slopes.
func (b *ballBase) harmonics(mu float64, out, slope []float64) {
	baseOf(planeHalf, len(out)).values(mu, out, slope)
}

// ball is a spheroid as functions.
type ball struct {
	*ballBase
	spheroidMap
	at  *nodes      // that rad and ang belong to
	rad [][]float64 // by node of ρ: the radial parts
	ang [][]float64 // by node of μ: the harmonics
}

func (b *ball) size() int { return b.n }

func (b *ball) one(out []float64) {
	clear(out)
	out[0] = 1
}

func (b *ball) mean(out []float64) { b.one(out) }

// heldFrom is the film by conductivity and radius (of a layer: thickness) from which a surface counts as held: it is then within a ten
// millionth of what the food changes by.
const heldFrom = 1e7

func (b *ball) terms(cs *chainStep, mem *slab) terms {
	n := b.n
	te := terms{mass: mem.take(n), stiff: mem.take(n * n), drive: make([][]float64, len(cs.media))}
	for g := range te.drive {
		te.drive[g] = mem.take(n)
	}
	heat := cs.props.RhoKgM3 * cs.props.CJkgK
	for i := range te.mass {
		te.mass[i] = heat
	}
	k := cs.props.KWmK / (b.b * b.b)
	stretch := k * (b.b*b.b/(b.a*b.a) - 1)
	for i, g := range b.grad {
		te.stiff[i] = k*g + stretch*b.polar[i]
	}
	u, group := cs.up[0].u, cs.up[0].group
	if group < 0 {
		return te
	}
	l := b.l + 1
	if !(u*max(b.a, b.b) < heldFrom*cs.props.KWmK) {
		for m := 0; m < l; m++ {
			h := holding{v: mem.take(n), group: group}
			copy(h.v[b.start[m]:b.start[m+1]], b.face[b.start[m]:])
			if m == 0 {
				h.share = 1
			}
			te.held = append(te.held, h)
		}
		return te
	}
	film := mem.take(l * l)
	for i, v := range surfacePoints {
		w := u * v.w * b.surfaceShare(v.x)
		for m, x := range b.mus[i] {
			add(film[m*l:][:l], w*x, b.mus[i])
		}
	}
	drive := te.drive[group]
	for m := 0; m < l; m++ {
		for i := b.start[m]; i < b.start[m+1]; i++ {
			drive[i] = b.face[i] * film[m*l]
			for o := 0; o < l; o++ {
				add(te.stiff[i*n+b.start[o]:][:b.start[o+1]-b.start[o]], b.face[i]*film[m*l+o], b.face[b.start[o]:b.start[o+1]])
			}
		}
	}
	return te
}

func (b *ball) values(x coord, out []float64) {
	b.radial(x[0], out, nil)
	var ang [maxDegrees]float64
	b.harmonics(x[1], ang[:b.l+1], nil)
	for m := 0; m <= b.l; m++ {
		for i := b.start[m]; i < b.start[m+1]; i++ {
			out[i] *= ang[m]
		}
	}
}

// prepare makes the tables of the nodes.
func (b *ball) prepare(nd *nodes) {
	if b.at == nd {
		return
	}
	b.at, b.rad, b.ang = nd, nil, nil
	for _, rho := range nd.x[0] {
		r := make([]float64, b.n)
		b.radial(rho, r, nil)
		b.rad = append(b.rad, r)
	}
	for _, mu := range nd.x[1] {
		a := make([]float64, b.l+1)
		b.harmonics(mu, a, nil)
		b.ang = append(b.ang, a)
	}
}

// ring adds up the radial parts of each harmonic.
func (b *ball) ring(rad, q, out []float64) {
	for m := range out {
		sum := 0.0
		r := rad[b.start[m]:b.start[m+1]]
		for i, x := range q[b.start[m]:b.start[m+1]] {
			sum += x * r[i]
		}
		out[m] = sum
	}
}

func (b *ball) grid(nd *nodes, q, out []float64) {
	b.prepare(nd)
	var ring [maxDegrees]float64
	h := ring[:b.l+1]
	i := 0
	for _, rad := range b.rad {
		b.ring(rad, q, h)
		for _, ang := range b.ang {
			sum := 0.0
			for m, x := range h {
				sum += x * ang[m]
			}
			out[i] = sum
			i++
		}
	}
}

func (b *ball) slice(nd *nodes, axis int, x coord, node [3]int, q, out []float64) {
	b.prepare(nd)
	if axis == 1 { // the harmonics are the polynomials of the axis
		if node[0] >= 0 {
			b.ring(b.rad[node[0]], q, out[:b.l+1])
			return
		}
		rad := make([]float64, b.n)
		b.radial(x[0], rad, nil)
		b.ring(rad, q, out[:b.l+1])
		return
	}
	var ang [maxDegrees]float64
	b.harmonics(x[1], ang[:b.l+1], nil)
	line := make([]float64, b.n)
	for m := 0; m <= b.l; m++ {
		for i := b.start[m]; i < b.start[m+1]; i++ {
			line[i] = q[i] * ang[m]
		}
	}
	clear(out[:b.p+1])
	addRows(out[:b.p+1], b.along, b.n, line)
}
