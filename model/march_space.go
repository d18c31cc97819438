package model

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

// spaceAxis is an axis of a body that is marched in more than one direction.
type spaceAxis struct {
	kind         axisKind
	n            int
	x            []float64 // nodes, in radii, or in the coordinate of a stretch
	w            []float64 // their shares of the volume
	k            []float64 // n×n, 1/m²: what a Kirchhoff integral at node j adds to the rate at node i
	fast         float64   // largest rate of decay of k, 1/m²
	lower, upper *Face
	face         [2]float64   // what a flow over the lower and upper face adds to the rate of its node, 1/m; 0 where there is none
	poly         *collocation // nil where the nodes are those of control volumes
	line         *lineMesh    // control volumes only
}

// smooth makes an axis of n nodes with the polynomial through them, for fields without a freezing front.
func smoothAxis(kind axisKind, radiusM float64, n int, by stretch, faces [2]*Face) *spaceAxis {
	c := collocationOf(kind, n, by)
	a := &spaceAxis{kind: kind, n: n, x: c.x, w: c.w, k: make([]float64, n*n), poly: c, lower: faces[0], upper: faces[1]}
	for i, k := range c.k {
		a.k[i] = k / (radiusM * radiusM)
	}
	a.fast = c.fast / (radiusM * radiusM)
	a.faces(radiusM)
	return a
}

// cutAxis makes an axis of control volumes, for fields with a freezing front; their nodes stand closer at a face by e to the power of crowd.
func cutAxis(kind axisKind, radiusM float64, n int, crowd float64, faces [2]*Face) *spaceAxis {
	g := newLineGrid(&Product{}, kind, radiusM, n, crowd)
	m := newLineMesh(g)
	a := &spaceAxis{kind: kind, n: len(g.x), w: m.share, line: m, lower: faces[0], upper: faces[1]}
	a.x, a.k = make([]float64, a.n), make([]float64, a.n*a.n)
	for i, x := range g.x {
		a.x[i] = x / radiusM
	}
	for i, l := range g.links {
		p, q := l.g/g.w[i], l.g/g.w[i+1]
		a.k[i*a.n+i] -= p
		a.k[i*a.n+i+1] += p
		a.k[(i+1)*a.n+i+1] -= q
		a.k[(i+1)*a.n+i] += q
	}
	for i := range a.x {
		a.fast = max(a.fast, -2*a.k[i*a.n+i])
	}
	a.faces(radiusM)
	return a
}

// faces sets what a flow over a face does.
func (a *spaceAxis) faces(radiusM float64) {
	per := (&axis{base: &base{kind: a.kind}}).weight() / radiusM
	a.face[1] = per / a.w[a.n-1]
	if a.kind == planeFull {
		a.face[0] = per / a.w[0]
	}
}

// spaceMarch steps the heat contents of a body of two or three axes, or of a spheroid, by the stabilised explicit scheme RKL2 (Meyer,
// Balsara & Aslam 2014, J. Comput. Phys. 257:594-626), which is of second order and needs no equations solved: only the Kirchhoff
// integrals of the heat contents, whose differences the axes turn into flows.
type spaceMarch struct {
	axes  [3]*spaceAxis
	round *roundMesh  // of a spheroid; nil else
	ice   *iceVolumes // where a front of ice may move; nil else
	n     int
	law   *law
	skins [3][2]*skin
	spots [3][2][]int // the nodes of each face

	h, f0          []float64 // heat contents, J/m³, and their rates, J/(m³·s)
	y1, y2, f, u   []float64
	kept           []float64
	conducts, thin float64       // in this step of the chain: fastest rate of decay by conduction, 1/s; largest slope of temperature by heat
	steep          [3][2]float64 // by face: largest slope of the flow by temperature at the last rates, W/(m²·K)
}

func newSpaceMarch(axes [3]*spaceAxis, l *law, startC float64) *spaceMarch {
	m := &spaceMarch{axes: axes, law: l, n: axes[0].n * axes[1].n * axes[2].n}
	for _, s := range []*[]float64{&m.h, &m.f0, &m.y1, &m.y2, &m.f, &m.u} {
		*s = make([]float64, m.n)
	}
	for i := range m.h {
		m.h[i] = l.heat(startC)
	}
	if axes[0].line != nil {
		m.ice = newIceVolumes(axes, l, startC)
		copy(m.u, m.ice.start)
	}
	stride := [3]int{axes[1].n * axes[2].n, axes[2].n, 1}
	for i := range m.h {
		for a, ax := range axes {
			switch at := i / stride[a] % ax.n; {
			case ax.face[1] > 0 && at == ax.n-1:
				m.spots[a][1] = append(m.spots[a][1], i)
			case ax.face[0] > 0 && at == 0:
				m.spots[a][0] = append(m.spots[a][0], i)
			}
		}
	}
	return m
}

func (m *spaceMarch) surround(skins func(*Face) *skin) {
	low, high := m.span()
	for a, ax := range m.axes {
		m.skins[a] = [2]*skin{}
		if ax.face[1] > 0 {
			m.skins[a][1] = skins(ax.upper)
		}
		if ax.face[0] > 0 {
			m.skins[a][0] = skins(ax.lower)
		}
		for _, s := range m.skins[a] {
			if s != nil && !s.insulated {
				l, h := s.mediumRange()
				low, high = min(low, l), max(high, h)
			}
		}
	}
	var spread float64
	spread, m.thin = m.law.fastest(low, high)
	m.conducts = m.conductsFast() * spread
}

// fastest is a bound on the rates of decay now, 1/s: of conduction, and of the faces as steep as the last rates found them, with half as
// much again for what they may become in a step.
func (m *spaceMarch) fastest() float64 {
	rate := m.conducts
	for a, ax := range m.axes {
		for side := range m.skins[a] {
			rate += 1.5 * ax.face[side] * m.steep[a][side] * m.thin
		}
	}
	return rate
}

// conductsFast is the largest rate of decay of all axes together, 1/m².
func (m *spaceMarch) conductsFast() float64 {
	if m.round != nil {
		return m.round.fast
	}
	sum := 0.0
	for _, a := range m.axes {
		sum += a.fast
	}
	return sum
}

// conduct fills out with the rates of heat contents by conduction from Kirchhoff integrals u.
func (m *spaceMarch) conduct(u, out []float64) {
	if m.round != nil {
		m.round.conduct(u, out)
		return
	}
	if m.ice != nil {
		m.ice.conduct(u, out)
		for a := range m.skins {
			for side, s := range m.skins[a] {
				if s != nil && s.held { // the heat content of the medium itself
					m.ice.even(m.spots[a][side])
				}
			}
		}
		return
	}
	clear(out)
	n0, n1, n2 := m.axes[0].n, m.axes[1].n, m.axes[2].n
	m.axes[0].apply(u, out, n1*n2)
	for i := 0; i < n0; i++ {
		m.axes[1].apply(u[i*n1*n2:(i+1)*n1*n2], out[i*n1*n2:(i+1)*n1*n2], n2)
	}
	if n2 > 1 {
		for i := 0; i < n0*n1; i++ {
			m.axes[2].apply(u[i*n2:(i+1)*n2], out[i*n2:(i+1)*n2], 1)
		}
	}
}

// apply adds the rates along an axis; inner values lie between one node of the axis and the next.
func (a *spaceAxis) apply(u, out []float64, inner int) {
	n := a.n
	switch {
	case n == 1:
	case inner == 1:
		addRows(out, a.k, n, u)
	default:
		for i := 0; i < n; i++ {
			addColumns(out[i*inner:(i+1)*inner], u, inner, a.k[i*n:(i+1)*n])
		}
	}
}

// rates fills out with the slopes in time of heat contents h, tau s into the step.
func (m *spaceMarch) rates(h, out []float64, tau float64) {
	if m.ice != nil {
		m.ice.read(h, m.u)
	} else {
		for i, x := range h {
			m.u[i] = m.law.kirchhoff(x)
		}
	}
	m.conduct(m.u, out)
	held := false
	for a, ax := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || s.insulated {
				continue
			}
			if s.held {
				held = true
				continue
			}
			m.steep[a][side] = 0
			for k, i := range m.spots[a][side] {
				w, d := s.flux(m.temperature(h[i], i), tau)
				m.steep[a][side] = max(m.steep[a][side], -d)
				per := ax.face[side]
				if m.round != nil {
					per = m.round.face[k]
				}
				out[i] += w * per
			}
		}
	}
	if held {
		m.hold(nil, out, 0)
	}
}

// hold keeps the faces that are kept at their media: rates 0, and heat contents, unless nil, those of the media.
func (m *spaceMarch) hold(h, rate []float64, tau float64) {
	for a := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || !s.held {
				continue
			}
			at := 0.0
			if h != nil {
				at = m.law.heat(s.mediumC(tau))
			}
			for _, i := range m.spots[a][side] {
				if h != nil {
					h[i] = at
				}
				if rate != nil {
					rate[i] = 0
				}
			}
		}
	}
}

// temperature gives that of node i with heat content h at the last rates, °C.
func (m *spaceMarch) temperature(h float64, i int) float64 {
	if m.ice != nil {
		t, _ := m.law.byU.temperature(m.u[i])
		return t
	}
	return m.law.temperature(h)
}

func (m *spaceMarch) begin(tau float64) {
	m.hold(m.h, nil, tau)
	m.rates(m.h, m.f0, tau)
	if m.ice != nil {
		copy(m.ice.start, m.u)
	}
}

// mostStages is how many stages a step may have: more would gather rounding.
const mostStages = 99

func (m *spaceMarch) try(tau, d float64) float64 {
	stages := int(math.Ceil((math.Sqrt(9+8*d*m.fastest()*1.05) - 1) / 2))
	stages = max(3, stages|1)
	if stages > mostStages {
		return math.Inf(1)
	}
	s2 := float64(stages*stages + stages - 2)
	w1 := 4 / s2
	h, y0, y1 := m.h, m.y2, m.y1
	if m.ice != nil {
		copy(m.u, m.ice.start)
		m.conduct(m.u, m.f)
	}
	for i := range h {
		y0[i] = h[i]
		y1[i] = h[i] + w1/3*d*m.f0[i]
	}
	at := w1 / 3
	m.hold(y1, nil, tau+at*d)
	b1, b2 := 1.0/3, 1.0/3
	for j := 2; j <= stages; j++ {
		x := float64(j)
		b := 1.0 / 3
		if j > 2 {
			b = (x*x + x - 2) / (2 * x * (x + 1))
		}
		mu, nu := (2*x-1)/x*b/b1, -(x-1)/x*b/b2
		steep := mu * w1 * d
		first := -(1 - b1) * steep
		m.rates(y1, m.f, tau+at*d)
		rest := 1 - mu - nu
		for i, r := range m.f {
			y0[i] = mu*y1[i] + nu*y0[i] + rest*h[i] + steep*r + first*m.f0[i]
		}
		at = (x*x + x - 2) / s2
		m.hold(y0, nil, tau+at*d)
		y0, y1 = y1, y0
		b1, b2 = b, b1
	}
	m.y1, m.y2 = y1, y0
	m.rates(m.y1, m.f, tau+d)
	worst := 0.0
	for i, y := range m.y1 {
		e := 0.8*(h[i]-y) + 0.4*d*(m.f0[i]+m.f[i])
		worst = max(worst, math.Abs(e*m.thinAt(y, i)))
	}
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

// thinAt is the slope of the temperature of node i by its heat content h at the last rates, m³·K/J.
func (m *spaceMarch) thinAt(h float64, i int) float64 {
	if m.ice == nil {
		_, thin := m.law.warmth(h)
		return thin
	}
	_, du := m.ice.invert(h, m.u[i], i)
	_, dt := m.law.byU.temperature(m.u[i])
	return du * dt
}

func (m *spaceMarch) accept(k *track, t float64) {
	m.h, m.y1 = m.y1, m.h
	m.f0, m.f = m.f, m.f0
	if m.ice != nil {
		copy(m.ice.start, m.u)
	}
	m.keep(k, t)
}

// turn does nothing: each step stands by itself.
func (m *spaceMarch) turn(float64) {}

func (m *spaceMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	if m.ice != nil {
		copy(c, m.u)
		m.ice.slopes(m.h, m.u, m.f0, slope)
		return
	}
	for i, h := range m.h {
		c[i], slope[i] = m.law.warmth(h)
		slope[i] *= m.f0[i]
	}
}

// firstS is what a few stages reach.
func (m *spaceMarch) firstS() float64 { return 2 / m.fastest() }

func (m *spaceMarch) span() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	if m.ice != nil {
		for _, u := range m.u {
			low, high = min(low, u), max(high, u)
		}
		low, _ = m.law.byU.temperature(low)
		high, _ = m.law.byU.temperature(high)
		return low, high
	}
	for _, h := range m.h {
		low, high = min(low, h), max(high, h)
	}
	return m.law.temperature(low), m.law.temperature(high)
}

func (m *spaceMarch) save(float64) {
	m.kept = append(append(m.kept[:0], m.h...), m.f0...)
	if m.ice != nil {
		m.kept = append(m.kept, m.ice.start...)
	}
}

func (m *spaceMarch) restore() {
	copy(m.h, m.kept[:m.n])
	copy(m.f0, m.kept[m.n:])
	if m.ice != nil {
		copy(m.ice.start, m.kept[2*m.n:])
		copy(m.u, m.ice.start)
	}
}

// fastest gives the largest diffusivity, m²/s, and the largest slope of temperature by heat content, m³·K/J, between two temperatures.
func (l *law) fastest(low, high float64) (spread, thin float64) {
	for i := 0; i <= 64; i++ {
		_, _, dt, du := l.at(l.heat(low + (high-low)*float64(i)/64))
		spread, thin = max(spread, du), max(thin, dt)
	}
	return spread, thin
}

// spaceMesh is what stands between the nodes of a spaceMarch: polynomials, or monotone cubics along each axis in turn.
type spaceMesh struct {
	axes [3]*spaceAxis
	n    int
	w    []float64
	body [3][]float64 // by axis of polynomials: the weights of its nodes at those of the body
	x, y []float64
}

func newSpaceMesh(axes [3]*spaceAxis) *spaceMesh {
	m := &spaceMesh{axes: axes, n: axes[0].n * axes[1].n * axes[2].n}
	for _, x := range axes[0].w {
		for _, y := range axes[1].w {
			for _, z := range axes[2].w {
				m.w = append(m.w, x*y*z)
			}
		}
	}
	return m
}

// seenAt makes ready to fill the nodes of a body.
func (m *spaceMesh) seenAt(nd *nodes) {
	for a, ax := range m.axes {
		m.body[a] = make([]float64, len(nd.x[a])*ax.n)
		for g, x := range nd.x[a] {
			ax.valueAt(x, m.body[a][g*ax.n:(g+1)*ax.n])
		}
	}
	n, last := m.axes[0].n, len(nd.x[2])
	m.x, m.y = make([]float64, n*m.axes[1].n*last), make([]float64, n*len(nd.x[1])*last)
}

// byAxes applies a matrix by axis to n[0]×n[1]×n[2] numbers, by way of x and y. It goes from the last axis to the first: each comes first in
// what it leaves, so that after the first all is in order again.
func byAxes(by *[3][]float64, n [3]int, in, x, y, out []float64) {
	used := 1
	for used < 3 && n[used] > 1 {
		used++
	}
	for a := used - 1; a >= 0; a-- {
		to := x
		switch a {
		case 0:
			to = out
		case 1:
			to = y
		}
		rows, lines := len(by[a])/n[a], len(in)/n[a]
		to = to[:rows*lines]
		if lines == 1 {
			clear(to)
			addRows(to, by[a], n[a], in)
			return
		}
		all := blas64.General{Rows: lines, Cols: n[a], Stride: n[a], Data: in}
		for i := 0; i < rows; i++ {
			blas64.Gemv(blas.NoTrans, 1, all, blas64.Vector{N: n[a], Inc: 1, Data: by[a][i*n[a] : (i+1)*n[a]]}, 0, blas64.Vector{N: lines, Inc: 1, Data: to[i*lines : (i+1)*lines]})
		}
		in = to
	}
}

func (m *spaceMesh) weights() []float64 { return m.w }

func (m *spaceMesh) String() string {
	words := fmt.Sprint(m.axes[0].n)
	for _, a := range m.axes[1:] {
		if a.n > 1 {
			words += fmt.Sprintf(" × %d", a.n)
		}
	}
	if m.axes[0].poly != nil {
		return words + " polynomials through the food"
	}
	return words + " control volumes"
}

// at gives the temperature of a place from those of the nodes.
func (m *spaceMesh) at(x coord, c []float64) float64 {
	if m.axes[0].poly == nil {
		return m.pieces(x, c)
	}
	n1, n2 := m.axes[1].n, m.axes[2].n
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		ax.valueAt(x[a], v[a][:ax.n])
	}
	sum, i := 0.0, 0
	for _, p := range v[0][:m.axes[0].n] {
		for _, q := range v[1][:n1] {
			line := 0.0
			for k, r := range v[2][:n2] {
				line += r * c[i+k]
			}
			sum += p * q * line
			i += n2
		}
	}
	return sum
}

// onto goes along the last axis, then the middle one, then the first.
func (m *spaceMesh) onto(other mesh) func(here, there []float64) {
	to := other.(interface{ space() *spaceMesh }).space()
	var along [3]func(here, there []float64)
	for a := range along {
		along[a] = m.axes[a].onto(to.axes[a])
	}
	n := [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}
	k := [3]int{to.axes[0].n, to.axes[1].n, to.axes[2].n}
	p, q := make([]float64, n[0]*n[1]*k[2]), make([]float64, n[0]*k[1]*k[2])
	in, out := make([]float64, max(n[0], n[1])), make([]float64, max(k[0], k[1]))
	// lines goes along the middle index of from (outer × n × inner) into that of into (outer × k × inner).
	lines := func(a, outer, inner int, from, into []float64) {
		for o := 0; o < outer; o++ {
			for i := 0; i < inner; i++ {
				for j := 0; j < n[a]; j++ {
					in[j] = from[(o*n[a]+j)*inner+i]
				}
				along[a](in[:n[a]], out[:k[a]])
				for j, c := range out[:k[a]] {
					into[(o*k[a]+j)*inner+i] = c
				}
			}
		}
	}
	return func(here, there []float64) {
		for i := 0; i < n[0]*n[1]; i++ {
			along[2](here[i*n[2]:(i+1)*n[2]], p[i*k[2]:(i+1)*k[2]])
		}
		lines(1, n[0], k[2], p, q)
		lines(0, 1, k[1]*k[2], q, there)
	}
}

func (m *spaceMesh) space() *spaceMesh { return m }

// onto gives a function that takes values at the nodes of an axis to those of another.
func (a *spaceAxis) onto(other *spaceAxis) func(here, there []float64) {
	if a.n == 1 {
		return func(here, there []float64) { copy(there, here) }
	}
	if a.poly == nil {
		return func(here, there []float64) {
			for j, x := range other.x {
				there[j] = a.line.at(coord{x}, here)
			}
		}
	}
	w := make([]float64, other.n*a.n)
	for j, x := range other.x {
		a.valueAt(x, w[j*a.n:(j+1)*a.n])
	}
	return func(here, there []float64) {
		clear(there)
		addRows(there, w, a.n, here)
	}
}

// fill gives the temperatures at the nodes of the body.
func (m *spaceMesh) fill(c, out []float64) {
	if m.axes[0].poly == nil {
		copy(out, c)
		return
	}
	byAxes(&m.body, [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}, c, m.x, m.y, out)
}

func (m *spaceMesh) shot(f *marched, c []float64) snapshot {
	if m.axes[0].poly == nil {
		return &marchedShot{f, c}
	}
	return newSmoothShot(m, f, c)
}

// slice gives the coefficients of the polynomials along an axis through a place from the temperatures of the nodes.
func (m *spaceMesh) slice(c []float64, axis int, x coord, out []float64) {
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		if a != axis {
			ax.valueAt(x[a], v[a][:ax.n])
		}
	}
	n := [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}
	var line [maxDegrees]float64
	i := 0
	for g0 := 0; g0 < n[0]; g0++ {
		for g1 := 0; g1 < n[1]; g1++ {
			row := c[i : i+n[2]]
			i += n[2]
			switch axis {
			case 0, 1:
				sum := 0.0
				for k, z := range v[2][:n[2]] {
					sum += z * row[k]
				}
				if axis == 0 {
					line[g0] += v[1][g1] * sum
				} else {
					line[g1] += v[0][g0] * sum
				}
			default:
				add(line[:n[2]], v[0][g0]*v[1][g1], row)
			}
		}
	}
	m.axes[axis].poly.coefficients(line[:n[axis]], out)
}

// placeWeights appends the weights of the nodes in the temperature of a place.
func (m *spaceMesh) placeWeights(x coord, out []float64) []float64 {
	var v [3][maxDegrees]float64
	for a, ax := range m.axes {
		ax.valueAt(x[a], v[a][:ax.n])
	}
	for _, p := range v[0][:m.axes[0].n] {
		for _, q := range v[1][:m.axes[1].n] {
			q *= p
			for _, r := range v[2][:m.axes[2].n] {
				out = append(out, q*r)
			}
		}
	}
	return out
}

// valueAt fills out with the weights of the nodes in the value at x.
func (a *spaceAxis) valueAt(x float64, out []float64) {
	if a.n == 1 {
		out[0] = 1
		return
	}
	a.poly.weightsAt(x, out)
}

// pieces goes along the last axis, then the middle one, then the first.
func (m *spaceMesh) pieces(x coord, c []float64) float64 {
	along := func(a int, x float64, value func(i int) float64) float64 {
		ax := m.axes[a]
		if ax.n == 1 {
			return value(0)
		}
		vals := make([]float64, ax.n)
		for i, last := ax.line.reads(x); i <= last; i++ {
			vals[i] = value(i)
		}
		return ax.line.at(coord{x}, vals)
	}
	n1, n2 := m.axes[1].n, m.axes[2].n
	return along(0, x[0], func(i int) float64 {
		return along(1, x[1], func(j int) float64 {
			return along(2, x[2], func(k int) float64 { return c[(i*n1+j)*n2+k] })
		})
	})
}

func (m *spaceMarch) touches(k *skin) (nodes []int) {
	for a := range m.skins {
		for side, s := range m.skins[a] {
			if s == k {
				nodes = append(nodes, m.spots[a][side]...)
			}
		}
	}
	return nodes
}

func (m *spaceMesh) neighbours(j int, do func(k int)) {
	stride := m.n
	for a := range m.axes {
		n := m.axes[a].n
		stride /= n
		at := j / stride % n
		if at > 0 {
			do(j - stride)
		}
		if at+1 < n {
			do(j + stride)
		}
	}
}
