package model

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// axisKind is a coordinate from the centre to a face.
type axisKind int

const (
	lumped    axisKind = iota // no extent: well mixed, or a direction that the shape does not have
	planeHalf                 // 0 (mid-plane, symmetric) … 1 (face)
	planeFull                 // -1 (lower face) … 1 (upper face)
	radial                    // cylinder: 0 (axis) … 1 (face)
	spherical                 // sphere: 0 (centre) … 1 (face)
	axisKinds                 // how many there are
)

// maxDegrees is how many functions there may be on one axis.
const maxDegrees = 48

// base holds what depends on the kind of an axis and the number n of polynomials only. The polynomials are orthonormal in the
// axis' own volume measure, scaled to a volume of 1, and the first of them is 1:
//
//	planeHalf  sqrt(4j+1) P2j(x)          measure dx
//	planeFull  sqrt(2j+1) Pj(x)           measure dx/2
//	radial     sqrt(2j+1) Pj(2x²-1)       measure 2x dx
//	spherical  sqrt((4j+3)/3) P2j+1(x)/x  measure 3x² dx
//
// (P: Legendre polynomials; their norms: Abramowitz & Stegun 1964, 22.2.10.) The stiffness matrix ∫φi'φj' is brought to
// diagonal form once, in sets of functions that it does not mix: the even and the odd ones of planeFull, else all.
type base struct {
	kind  axisKind
	n     int
	d     []float64      // n, rising; d[0] = 0
	u     []float64      // n×n, u[m*n+i]: polynomial m in function i
	sets  []*functionSet // set p holds the polynomials p, p+len(sets), p+2·len(sets) …
	sites [4][2]*sites   // by the number of axes with extent; every other node only in the second
}

// functionSet are the functions that are sums of the polynomials of a set: eigenvectors u of their stiffness matrix, with eigenvalues d.
type functionSet struct {
	n   int
	d   []float64 // n, rising; the first of the first set is 0
	u   []float64 // n×n, u[m*n+i]: the set's polynomial m in function i
	top []float64 // n, function i at the upper face (1); at the lower face of planeFull (-1) the odd ones have the other sign
}

// sites are the nodes of an axis.
type sites struct {
	x   []float64 // rising
	phi []float64 // phi[g*n+m]: polynomial m at node g
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

// sitesFor gives the nodes of the base on one of used axes; every other node only, if coarse.
func (b *base) sitesFor(used int, coarse bool) *sites {
	i := 0
	if coarse {
		i = 1
	}
	basesMu.Lock()
	defer basesMu.Unlock()
	if b.sites[used][i] == nil {
		s := &sites{x: nodesOf(b.kind, used, b.n, coarse)}
		s.phi = make([]float64, b.n*len(s.x))
		for g, x := range s.x {
			b.values(x, s.phi[g*b.n:(g+1)*b.n], nil)
		}
		b.sites[used][i] = s
	}
	return b.sites[used][i]
}

// newBase makes the base of a kind with n functions.
func newBase(kind axisKind, n int) *base {
	b := &base{kind: kind, n: n}
	if kind == lumped {
		b.sets = []*functionSet{{1, []float64{0}, []float64{1}, []float64{1}}}
		b.d, b.u = b.sets[0].d, b.sets[0].u
		return b
	}
	phi, all := make([]float64, n), b.stiffness()
	b.values(1, phi, nil)
	sets := 1
	if kind == planeFull {
		sets = 2
	}
	for p := 0; p < sets; p++ {
		var own []float64
		k := mat.NewSymDense((n-p+sets-1)/sets, nil)
		for i := p; i < n; i += sets {
			own = append(own, phi[i])
			for j := i; j < n; j += sets {
				k.SetSym(i/sets, j/sets, all.At(i, j))
			}
		}
		b.sets = append(b.sets, newFunctionSet(k, own, p == 0))
	}
	b.d, b.u = make([]float64, n), make([]float64, n*n)
	at := [2]int{}
	for i := range b.d { // the sets together
		p := 0
		if sets == 2 && (at[0] == b.sets[0].n || at[1] < b.sets[1].n && b.sets[1].d[at[1]] < b.sets[0].d[at[0]]) {
			p = 1
		}
		f := b.sets[p]
		b.d[i] = f.d[at[p]]
		for m := 0; m < f.n; m++ {
			b.u[(m*sets+p)*n+i] = f.u[m*f.n+at[p]]
		}
		at[p]++
	}
	return b
}

// newFunctionSet brings a stiffness matrix to diagonal form; phi are the polynomials at the upper face, the first of which may be the constant.
func newFunctionSet(k *mat.SymDense, phi []float64, constant bool) *functionSet {
	n := len(phi)
	f := &functionSet{n: n, d: make([]float64, n), u: make([]float64, n*n), top: make([]float64, n)}
	var eig mat.EigenSym
	eig.Factorize(k, true) // cannot fail: the matrix is symmetric and finite
	eig.Values(f.d)
	var vec mat.Dense
	eig.VectorsTo(&vec)
	for m := 0; m < n; m++ {
		for i := 0; i < n; i++ {
			f.u[m*n+i] = vec.At(m, i)
		}
	}
	if constant { // it carries no gradient, and the first function is it and nothing else
		f.d[0] = 0
		for m := 0; m < n; m++ {
			f.u[m*n], f.u[m] = 0, 0
		}
		f.u[0] = 1
	}
	addColumns(f.top, f.u, n, phi)
	return f
}

// stiffness is the matrix ∫φi'φj' of the polynomials in the measure of the axis, n×n.
func (b *base) stiffness() *mat.SymDense {
	n := b.n
	k := mat.NewSymDense(n, nil)
	lo, e, norm := 0.0, 0, 1.0
	switch b.kind {
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
	return k
}

// values fills phi (n) with the polynomials at x and, unless nil, dphi with their slopes.
func (b *base) values(x float64, phi, dphi []float64) {
	t, dt := b.inner(x)
	r := recurrences[b.kind][:len(phi)]
	p0, p1, d0, d1 := 0.0, 1.0, 0.0, 0.0
	if dphi == nil {
		for j := range r {
			phi[j] = p1
			p0, p1 = p1, (r[j].a*t+r[j].b)*p1-r[j].c*p0
		}
		return
	}
	for j := range r {
		phi[j], dphi[j] = p1, d1*dt
		s := r[j].a*t + r[j].b
		d0, d1 = d1, s*d1+r[j].a*p1-r[j].c*d0
		p0, p1 = p1, s*p1-r[j].c*p0
	}
}

// curve gives the sum of q times the polynomials at x, its slope and its curvature.
func (b *base) curve(x float64, q []float64) (f, slope, bend float64) {
	t, dt := b.inner(x)
	r := recurrences[b.kind][:len(q)]
	p0, p1, d0, d1, e0, e1 := 0.0, 1.0, 0.0, 0.0, 0.0, 0.0
	for j, w := range q {
		f += w * p1
		slope += w * d1
		bend += w * e1
		a, c := r[j].a, r[j].c
		s := a*t + r[j].b
		e0, e1 = e1, s*e1+2*a*d1-c*e0
		d0, d1 = d1, s*d1+a*p1-c*d0
		p0, p1 = p1, s*p1-c*p0
	}
	if b.kind != planeFull { // dt/dx = 4x
		return f, slope * dt, bend*dt*dt + 4*slope
	}
	return f, slope, bend
}

// inner gives the variable that the polynomials are polynomials in, and its slope.
func (b *base) inner(x float64) (t, slope float64) {
	if b.kind == planeFull {
		return x, 1
	}
	return 2*x*x - 1, 4 * x
}

// recurrences holds the numbers of φ(j+1) = (a·t+b)·φ(j) - c·φ(j-1). All the polynomials are Jacobi polynomials P(0,β): in x for planeFull
// (β 0), else in t = 2x²-1: P2j(x) has β -1/2, Pj(t) has β 0 and P2j+1(x)/x has β 1/2 (DLMF 18.7.13, 18.7.14; the recurrence:
// Abramowitz & Stegun 1964, 22.7.1).
var recurrences = func() (r [axisKinds][maxDegrees]struct{ a, b, c float64 }) {
	for kind := planeHalf; kind < axisKinds; kind++ {
		beta := [axisKinds]float64{planeHalf: -0.5, spherical: 0.5}[kind]
		norm := func(j int) float64 { return math.Sqrt((2*float64(j) + beta + 1) / (beta + 1)) }
		for j := range r[kind] {
			n := float64(j)
			a, b, c := (beta+2)/2, -beta/2, 0.0
			if j > 0 {
				m := 2*n + beta
				d := 2 * (n + 1) * (n + beta + 1) * m
				a, b, c = (m+1)*(m+2)*m/d, -(m+1)*beta*beta/d, 2*n*(n+beta)*(m+2)/d
				c *= norm(j+1) / norm(j-1)
			}
			up := norm(j+1) / norm(j)
			r[kind][j].a, r[kind][j].b, r[kind][j].c = a*up, b*up, c
		}
	}
	return r
}()

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

// step solves the axis for one step; the result lies in mem, which is not tmp.
func (a *axis) step(mem, tmp *slab, p Properties, lo, up film) *axisStep {
	n := a.n
	if a.kind == lumped {
		return wellMixed
	}
	mark := tmp.mark()
	scale := p.KWmK / (p.RhoKgM3 * p.CJkgK) / (a.radiusM * a.radiusM)
	rho := func(f film) float64 {
		if f.group < 0 {
			return 0
		}
		if math.IsInf(f.u, 1) {
			return heldBiot
		}
		return min(f.u*a.radiusM/p.KWmK*a.weight(), heldBiot)
	}
	s := &axisStep{rate: mem.take(n), gUp: mem.take(n), gLo: mem.take(n), b: mem.take(n * n)}
	if a.kind == planeFull {
		a.twoFaces(s, tmp, rho(lo), rho(up))
	} else {
		f := a.sets[0]
		d, q, g := rankOne(tmp, f.d, f.top, rho(up))
		multiply(n, f.u, q, s.b)
		copy(s.rate, d)
		copy(s.gUp, g)
	}
	for i := range s.rate {
		s.rate[i] *= scale
		s.gLo[i] *= scale
		s.gUp[i] *= scale
	}
	tmp.back(mark)
	return s
}

// twoFaces solves an axis with two faces, of rates lo and up. With the weaker film on both faces even and odd functions do not mix and are
// half as many each; what the stronger film has more comes on top of that.
func (a *axis) twoFaces(s *axisStep, tmp *slab, lo, up float64) {
	n := a.n
	weak, strong, less, more, sign := s.gLo, s.gUp, lo, up, 1.0 // sign: of the odd functions at the stronger face
	if lo > up {
		weak, strong, less, more, sign = s.gUp, s.gLo, up, lo, -1
	}
	var d, v, b [2][]float64 // by set: eigenvalues, values at the upper face, polynomials in functions
	for p, f := range a.sets {
		var q, g []float64
		d[p], q, g = rankOne(tmp, f.d, f.top, 2*less)
		b[p] = multiply(f.n, f.u, q, tmp.take(f.n*f.n))
		if v[p] = f.top; less > 0 {
			v[p] = g
			for i := range g {
				g[i] /= 2 * less
			}
		}
	}
	all, atStrong, driven := tmp.take(n), tmp.take(n), tmp.take(n)
	var place [2][maxDegrees]int // of the functions of a set among all
	for k, at := 0, [2]int{}; k < n; k++ {
		p, odd := 0, 1.0
		if at[0] == len(d[0]) || at[1] < len(d[1]) && d[1][at[1]] < d[0][at[0]] {
			p, odd = 1, sign
		}
		i := at[p]
		at[p]++
		place[p][i] = k
		all[k], atStrong[k], driven[k] = d[p][i], odd*v[p][i], less*v[p][i]
		if p == 1 {
			driven[k] *= -odd
		}
		if k > 0 && all[k] <= all[k-1] { // two that are one to rounding
			all[k] = math.Nextafter(all[k-1], math.Inf(1))
		}
	}
	mu, q, g := rankOne(tmp, all, atStrong, more-less)
	copy(s.rate, mu)
	addColumns(weak, q, n, driven)
	for i := range strong {
		if strong[i] = atStrong[i] * more; more > less {
			strong[i] = g[i] * (more / (more - less))
		}
	}
	for p, f := range a.sets {
		rows := tmp.take(f.n * n)
		for i, k := range place[p][:f.n] {
			copy(rows[i*n:][:n], q[k*n:][:n])
		}
		for m := 0; m < f.n; m++ {
			addColumns(s.b[(2*m+p)*n:][:n], rows, n, b[p][m*f.n:][:f.n])
		}
	}
}

// heldBiot stands for an infinite film: the surface is within 1e-10 of its medium from the first instant on.
const heldBiot = 1e12

// multiply adds the product of two n×n matrices to c.
func multiply(n int, a, b, c []float64) []float64 {
	for i := 0; i < n; i++ {
		addColumns(c[i*n:i*n+n], b, n, a[i*n:i*n+n])
	}
	return c
}

// addColumns adds to out the product of v with the rows of m (n wide), of which out may be shorter: four rows at a time.
func addColumns(out, m []float64, n int, v []float64) {
	k := 0
	for ; k+4 <= len(v); k += 4 {
		p, q, r, s := v[k], v[k+1], v[k+2], v[k+3]
		a, b, c, d := m[k*n:][:len(out)], m[(k+1)*n:][:len(out)], m[(k+2)*n:][:len(out)], m[(k+3)*n:][:len(out)]
		for j := range out {
			out[j] += p*a[j] + q*b[j] + r*c[j] + s*d[j]
		}
	}
	for ; k < len(v); k++ {
		f := v[k]
		for j, x := range m[k*n:][:len(out)] {
			out[j] += f * x
		}
	}
}
