package model

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// axisKind is a coordinate from the centre to a face.
type axisKind int

const (
	lumped     axisKind = iota // no extent: well mixed, or a direction that the shape does not have
	planeHalf                  // 0 (mid-plane, symmetric) … 1 (face)
	planeFull                  // -1 (lower face) … 1 (upper face)
	radial                     // cylinder: 0 (axis) … 1 (face)
	spherical                  // sphere: 0 (centre) … 1 (face)
	axisKinds  = iota
	maxDegrees = 48 // most functions on one axis
)

// base holds what depends on the kind of an axis and the number n of polynomials only. The polynomials are orthonormal in the
// axis' own volume measure, scaled to a volume of 1, and the first of them is 1:
//
//	planeHalf  sqrt(4j+1) P2j(x)          measure dx
//	planeFull  sqrt(2j+1) Pj(x)           measure dx/2
//	radial     sqrt(2j+1) Pj(2x²-1)       measure 2x dx
//	spherical  sqrt((4j+3)/3) P2j+1(x)/x  measure 3x² dx
//
// (P: Legendre polynomials; their norms: Abramowitz & Stegun 1964, 22.2.10.) The stiffness matrix ∫φi'φj' is brought to
// diagonal form once: its eigenvectors are u, its eigenvalues d, the values of the new functions at the upper face top.
type base struct {
	kind axisKind
	n    int
	d    []float64 // n, rising; d[0] = 0
	u    []float64 // n×n, u[m*n+i]: polynomial m in function i
	top  []float64 // n, function i at the upper face (1)
	low  []float64 // n, function i at the lower face (-1); planeFull only
}

var (
	basesMu sync.Mutex
	bases   [axisKinds][maxDegrees + 1]*base // made once each: 0.1 ms for 20 functions, which would be most of a solution's time
)

// baseOf gives the base of a kind with n functions, 1 ≤ n ≤ maxDegrees.
func baseOf(kind axisKind, n int) *base {
	basesMu.Lock()
	defer basesMu.Unlock()
	if b := bases[kind][n]; b != nil {
		return b
	}
	b := newBase(kind, n)
	bases[kind][n] = b
	return b
}

func newBase(kind axisKind, n int) *base {
	b := &base{kind: kind, n: n, d: make([]float64, n), u: make([]float64, n*n), top: make([]float64, n)}
	if kind == lumped {
		b.u[0], b.top[0] = 1, 1
		return b
	}
	k := mat.NewSymDense(n, nil)
	lo, e, norm := 0.0, 0, 1.0
	switch kind {
	case planeFull:
		lo, norm = -1, 0.5
	case radial:
		e, norm = 1, 2
	case spherical:
		e, norm = 2, 3
	}
	phi, dphi := make([]float64, n), make([]float64, n)
	for _, q := range gauss(2*n + 4) { // exact for the polynomials of degree ≤ 4n+1 that stand here
		x, w := lo+(1-lo)*q.x, (1-lo)*q.w*norm
		for range e {
			w *= x
		}
		b.values(x, phi, dphi)
		for i := 0; i < n; i++ {
			for j := i; j < n; j++ {
				k.SetSym(i, j, k.At(i, j)+w*dphi[i]*dphi[j])
			}
		}
	}
	var eig mat.EigenSym
	eig.Factorize(k, true) // cannot fail: the matrix is symmetric and finite
	eig.Values(b.d)
	b.d[0] = 0 // the constant carries no gradient
	var vec mat.Dense
	eig.VectorsTo(&vec)
	for m := 0; m < n; m++ {
		for i := 0; i < n; i++ {
			b.u[m*n+i] = vec.At(m, i)
		}
	}
	for m := 0; m < n; m++ { // the first function is the constant 1 and nothing else
		b.u[m*n], b.u[m] = 0, 0
	}
	b.u[0] = 1
	b.values(1, phi, nil)
	for i := range b.top {
		for m := 0; m < n; m++ {
			b.top[i] += phi[m] * b.u[m*n+i]
		}
	}
	if kind == planeFull {
		b.low = make([]float64, n)
		b.values(-1, phi, nil)
		for i := range b.low {
			for m := 0; m < n; m++ {
				b.low[i] += phi[m] * b.u[m*n+i]
			}
		}
	}
	return b
}

// values fills phi (n) with the polynomials at x and, unless nil, dphi with their slopes.
func (b *base) values(x float64, phi, dphi []float64) {
	n := b.n
	switch b.kind {
	case lumped:
		phi[0] = 1
		if dphi != nil {
			dphi[0] = 0
		}
		return
	case planeFull:
		legendre(x, 1, 0, phi, dphi)
	case planeHalf:
		legendre(x, 2, 0, phi, dphi)
	case spherical:
		sphericalValues(x, phi, dphi)
		return
	case radial:
		legendre(2*x*x-1, 1, 0, phi, dphi)
		for j := range dphi {
			dphi[j] *= 4 * x
		}
	}
	s := norms[b.kind][:n]
	for j := range s {
		phi[j] *= s[j]
	}
	if dphi != nil {
		for j := range s {
			dphi[j] *= s[j]
		}
	}
}

// norms holds the factors that make the polynomials orthonormal, and the recurrence's own numbers.
var norms = func() (s [axisKinds][maxDegrees]float64) {
	for j := 0; j < maxDegrees; j++ {
		s[planeHalf][j] = math.Sqrt(float64(4*j + 1))
		s[planeFull][j] = math.Sqrt(float64(2*j + 1))
		s[radial][j] = math.Sqrt(float64(2*j + 1))
		s[spherical][j] = math.Sqrt(float64(4*j+3) / 3)
	}
	return s
}()

// recur holds (2m+1)/(m+1) and m/(m+1) of the three-term recurrence of the Legendre polynomials (Abramowitz & Stegun 1964, 22.7.10).
var recur = func() (r [2*maxDegrees + 4][2]float64) {
	for m := range r {
		r[m] = [2]float64{float64(2*m+1) / float64(m+1), float64(m) / float64(m+1)}
	}
	return r
}()

// legendre fills p with P(first), P(first+every), … at x and, unless nil, dp with their slopes.
func legendre(x float64, every, first int, p, dp []float64) {
	p0, p1 := 1.0, x // P(m), P(m+1)
	d0, d1 := 0.0, 1.0
	next, want := 0, first
	for m := 0; next < len(p); m++ {
		if m == want {
			p[next] = p0
			if dp != nil {
				dp[next] = d0
			}
			next++
			want += every
		}
		a, c := recur[m+1][0], recur[m+1][1]
		p2 := a*x*p1 - c*p0
		if dp != nil {
			d0, d1 = d1, a*(p1+x*d1)-c*d0
		}
		p0, p1 = p1, p2
	}
}

// sphericalValues fills phi with sqrt((4j+3)/3) P(2j+1)(x)/x and dphi with the slopes, by a recurrence in x² that needs no division.
func sphericalValues(x float64, phi, dphi []float64) {
	// P(2j+1) = x·q(j), P(2j) = e(j):  q(j) = a(2j) e(j) - c(2j) q(j-1),  e(j+1) = a(2j+1) x² q(j) - c(2j+1) e(j)
	x2 := x * x
	e, q := 1.0, 0.0
	de, dq := 0.0, 0.0
	s := norms[spherical][:len(phi)]
	for j := range phi {
		a, c := recur[2*j][0], recur[2*j][1]
		q, dq = a*e-c*q, a*de-c*dq
		phi[j] = s[j] * q
		if dphi != nil {
			dphi[j] = s[j] * dq
		}
		a, c = recur[2*j+1][0], recur[2*j+1][1]
		e, de = a*x2*q-c*e, a*(2*x*q+x2*dq)-c*de
	}
}

// node is a point and weight of a quadrature rule on 0…1.
type node struct{ x, w float64 }

// gauss gives the Gauss-Legendre rule with n points on 0…1 (Abramowitz & Stegun 1964, 25.4.29), its points by Newton's method.
func gauss(n int) []node {
	rule := make([]node, n)
	p := make([]float64, n+1)
	d := make([]float64, n+1)
	for i := range rule {
		x := math.Cos(math.Pi * (float64(i) + 0.75) / (float64(n) + 0.5))
		for range 100 {
			legendreAll(x, p, d)
			dx := p[n] / d[n]
			x -= dx
			if math.Abs(dx) < 1e-15 {
				break
			}
		}
		legendreAll(x, p, d)
		rule[i] = node{(1 - x) / 2, 1 / ((1 - x*x) * d[n] * d[n])}
	}
	return rule
}

// legendreAll fills p[0…n] and d[0…n] with the Legendre polynomials and slopes, for any n.
func legendreAll(x float64, p, d []float64) {
	p[0], d[0] = 1, 0
	if len(p) > 1 {
		p[1], d[1] = x, 1
	}
	for m := 1; m+1 < len(p); m++ {
		a, c := float64(2*m+1)/float64(m+1), float64(m)/float64(m+1)
		p[m+1] = a*x*p[m] - c*p[m-1]
		d[m+1] = a*(p[m]+x*d[m]) - c*d[m-1]
	}
}

// axis is one coordinate of a product.
type axis struct {
	*base
	radiusM float64 // half thickness or radius, m; 0 for lumped
	lower   *Face   // the faces that end it
	upper   *Face
}

// weight is the number that turns a film at the face into a rate: (e+1) for a half axis, 1/2 at each face of a full one.
func (a *axis) weight() float64 {
	return [axisKinds]float64{planeHalf: 1, planeFull: 0.5, radial: 2, spherical: 3}[a.kind]
}

// axisStep is an axis during one step: its own functions decay exponentially, each at its rate.
type axisStep struct {
	rate     []float64 // n, 1/s, rising
	b        []float64 // n×n, b[m*n+i]: polynomial m in mode i
	gUp, gLo []float64 // n, 1/s: how a medium of 1 K at the upper (lower) face drives each mode
}

// film is how a face meets its medium in a step.
type film struct {
	u     float64 // W/(m²·K) with wrap in series; +Inf: held
	group int     // which medium; -1: none (insulated)
}

// wellMixed is an axis without extent.
var wellMixed = &axisStep{rate: []float64{0}, b: []float64{1}, gUp: []float64{0}, gLo: []float64{0}}

// step solves the axis for one step. alpha: diffusivity, m²/s; k: conductivity, W/(m·K).
func (a *axis) step(mem *slab, p Properties, lo, up film) *axisStep {
	n := a.n
	if a.kind == lumped {
		return wellMixed
	}
	s := &axisStep{rate: mem.take(n)}
	scale := p.KWmK / (p.RhoKgM3 * p.CJkgK) / (a.radiusM * a.radiusM)
	rho := func(f film) float64 {
		if f.group < 0 {
			return 0
		}
		if math.IsInf(f.u, 1) {
			return heldBiot
		}
		return math.Min(f.u*a.radiusM/p.KWmK*a.weight(), heldBiot)
	}
	d, q := a.d, a.u
	var g1, g2 []float64
	if a.kind == planeFull {
		var q1 []float64
		d, q1, g1 = rankOne(mem, d, a.low, rho(lo))
		v := mem.take(n)
		for i := range v {
			for m, t := range a.top {
				v[i] += q1[m*n+i] * t
			}
		}
		var q2 []float64
		d, q2, g2 = rankOne(mem, d, v, rho(up))
		g := mem.take(n)
		for i := range g {
			for m := range g1 {
				g[i] += q2[m*n+i] * g1[m]
			}
		}
		g1 = g
		q = multiply(mem, n, multiply(mem, n, q, q1), q2)
	} else {
		var q2 []float64
		d, q2, g2 = rankOne(mem, d, a.top, rho(up))
		q = multiply(mem, n, q, q2)
		g1 = mem.take(n)
	}
	s.b = q
	for i := range d {
		s.rate[i] = d[i] * scale
		g1[i] *= scale
		g2[i] *= scale
	}
	s.gLo, s.gUp = g1, g2
	return s
}

// heldBiot stands for an infinite film: the surface is within 1e-10 of its medium from the first instant on.
const heldBiot = 1e12

// multiply gives the product of two n×n matrices.
func multiply(mem *slab, n int, a, b []float64) []float64 {
	c := mem.take(n * n)
	for i := 0; i < n; i++ {
		ci := c[i*n : i*n+n]
		for k := 0; k < n; k++ {
			if f := a[i*n+k]; f != 0 {
				for j, x := range b[k*n : k*n+n] {
					ci[j] += f * x
				}
			}
		}
	}
	return c
}
