package model

import (
	"math"

	"gonum.org/v1/gonum/blas/blas64"
)

// confocal are the coordinates of a spheroid whose surfaces are spheroids with the same foci, which cut one another at right angles, so that
// heat goes from a control volume to the next straight over the surface between them, and what a surface lets through is known exactly. The first
// is the length σ from the centre to a surface along the shorter axis, by that of the spheroid: 0 on the line or the disc between the foci, which has
// no surface or lets nothing through, 1 on the face. The second goes from 0 at the equator to 1 at the pole, evenly with the angle η from the pole.
// With c the distance of the foci and τ = √(σ²+c²) a place lies τ·cos η up and σ·sin η across if the spheroid is long, σ·cos η up and τ·sin η across if
// it is flat (Moon & Spencer 1961, Field Theory Handbook, section I; from memory, held by tests). A sphere is the limit c = 0.
type confocal struct {
	long bool
	c    float64 // from the centre to a focus, m
	end  float64 // the shorter half axis, m
}

// shells gives the confocal coordinates of a spheroid.
func (s *spheroidMap) shells() *confocal {
	return &confocal{long: s.a > s.b, c: math.Sqrt(math.Abs(s.a*s.a - s.b*s.b)), end: min(s.a, s.b)}
}

// angle gives η, rad, at the second coordinate.
func (q *confocal) angle(x float64) float64 { return math.Pi / 2 * (1 - x) }

// tau gives τ, m, of σ.
func (q *confocal) tau(sigma float64) float64 { return math.Hypot(sigma, q.c) }

func (q *confocal) place(x coord) Place {
	sigma, eta := x[0]*q.end, q.angle(x[1])
	if q.long {
		return Place{UpM: q.tau(sigma) * math.Cos(eta), AcrossM: sigma * math.Sin(eta)}
	}
	return Place{UpM: sigma * math.Cos(eta), AcrossM: q.tau(sigma) * math.Sin(eta)}
}

// coord is the inverse of place; a place outside is moved to the surface.
func (q *confocal) coord(p Place) coord {
	short, wide := math.Abs(p.AcrossM), math.Abs(p.UpM)
	if !q.long {
		short, wide = wide, short
	}
	// short²/σ² + wide²/(σ²+c²) = 1
	b, d := short*short+wide*wide-q.c*q.c, 2*short*q.c
	root := math.Hypot(b, d)
	square := (b + root) / 2
	if b < 0 {
		square = d * d / (2 * (root - b))
	}
	sigma := math.Sqrt(square)
	tau := q.tau(sigma)
	if tau == 0 {
		return coord{}
	}
	along := min(1, wide/tau) // the cosine of the angle from the longer axis
	across := math.Sqrt(1 - along*along)
	if sigma > 0 {
		across = min(1, short/sigma)
	}
	angle := math.Atan2(across, along)
	if q.long {
		angle = math.Pi/2 - angle
	}
	return coord{min(1, sigma/q.end), angle / (math.Pi / 2)}
}

// volume is that between two σ and two cosines of η, by 2π, m³.
func (q *confocal) volume(s0, s1, m0, m1 float64) float64 {
	cube := func(a, b float64) float64 { return (b - a) * (a*a + a*b + b*b) / 3 }
	if q.long {
		t0, t1 := q.tau(s0), q.tau(s1)
		return cube(t0, t1)*(m1-m0) - q.c*q.c*(t1-t0)*cube(m0, m1)
	}
	return cube(s0, s1)*(m1-m0) + q.c*q.c*(s1-s0)*cube(m0, m1)
}

// face is the surface between two cosines of η, by 2π, m².
func (q *confocal) face(m0, m1 float64) float64 {
	sum := 0.0
	for _, g := range gauss5 {
		m := m0 + (m1-m0)*g.x
		if q.long {
			sum += g.w * (m1 - m0) * q.end * math.Sqrt(q.end*q.end+q.c*q.c*(1-m*m))
		} else {
			sum += g.w * (m1 - m0) * q.tau(q.end) * math.Hypot(q.end, q.c*m)
		}
	}
	return sum
}

// shellMarch steps the heat contents of a spheroid in which a front of ice may move, in control volumes between confocal surfaces. Those beside the
// foci are so small that explicit stages would be many: it steps as lineMarch does, and reads its volumes as iceVolumes does.
type shellMarch struct {
	*spaceMarch
	w       []float64 // volumes by 2π, m³
	faceM2  []float64 // by node on the surface, by 2π, m²
	steepM2 []float64 // by node on the surface: how its flow changes with u, by 2π
	rowM    []float64 // by node of the first axis: what it lets through along the second, m
	colM    []float64 // by node of the second: what it lets through along the first

	spread, off                []float64 // of the last look at the neighbours: what u spreads over in a volume to each side of its middle, and the middle's from the node, W/m
	mean, meanU                []float64 // of the last look: mean heat content and its slope by u
	rate, uRate, rate2, uRate2 []float64 // W/m³ and W/(m·s), now and after the last try
	h1, h2, u0, u1, u2         []float64
	b, g0, g1, g2, delta, flow []float64 // by 2π, J and W
	band                       []float64 // by node: the diagonal and the n of the second axis below it
	line                       []float64 // what factor works in
	fresh                      bool      // no step since the surroundings changed
}

// newShellMarch lays out the volumes of n[0] × n[1] nodes.
func newShellMarch(q *confocal, n [2]int, l *law, startC float64) (*shellMarch, *spaceMesh) {
	kind := planeHalf
	if q.long {
		kind = radial
	}
	axes := [3]*spaceAxis{cutAxis(kind, q.end, n[0], roundCrowd, [2]*Face{}), cutAxis(planeHalf, 1, n[1], 1e-6, [2]*Face{}),
		{kind: lumped, n: 1, x: []float64{0}, w: []float64{1}, k: []float64{0}}}
	axes[0].face, axes[1].face = [2]float64{0, 1}, [2]float64{}
	m := &shellMarch{spaceMarch: newSpaceMarch(axes, l, startC)}
	// between gives where a volume of an axis begins and ends
	between := func(a *spaceAxis, i int) (from, to float64) {
		from, to = a.x[0], a.x[a.n-1]
		if i > 0 {
			from = (a.x[i-1] + a.x[i]) / 2
		}
		if i < a.n-1 {
			to = (a.x[i] + a.x[i+1]) / 2
		}
		return from, to
	}
	link := func(a *spaceAxis, i int, g float64) { a.k[i*a.n+i+1], a.k[(i+1)*a.n+i] = g, g }
	for _, a := range axes[:2] {
		clear(a.k)
	}
	for i := range axes[0].n {
		from, to := between(axes[0], i)
		from, to = from*q.end, to*q.end
		row := to - from
		area := q.tau(to) * q.tau(to)
		if q.long {
			row = q.tau(to) - q.tau(from)
			area = q.tau(to) * to
		}
		m.rowM = append(m.rowM, row)
		if i < axes[0].n-1 {
			link(axes[0], i, area/((axes[0].x[i+1]-axes[0].x[i])*q.end))
		}
		for j := range axes[1].n {
			low, high := between(axes[1], j)
			m.w = append(m.w, q.volume(from, to, math.Cos(q.angle(low)), math.Cos(q.angle(high))))
		}
	}
	for j := range axes[1].n {
		low, high := between(axes[1], j)
		m0, m1 := math.Cos(q.angle(low)), math.Cos(q.angle(high))
		m.colM, m.faceM2 = append(m.colM, m1-m0), append(m.faceM2, q.face(m0, m1))
		if j < axes[1].n-1 {
			link(axes[1], j, math.Sin(q.angle(high))/(q.angle(axes[1].x[j])-q.angle(axes[1].x[j+1])))
		}
	}
	for _, s := range []*[]float64{&m.spread, &m.off, &m.mean, &m.meanU, &m.rate, &m.uRate, &m.rate2, &m.uRate2, &m.h1, &m.h2, &m.u0, &m.u1, &m.u2, &m.b,
		&m.g0, &m.g1, &m.g2, &m.delta, &m.flow} {
		*s = make([]float64, m.n)
	}
	copy(m.u0, m.u)
	m.steepM2 = make([]float64, axes[1].n)
	m.band, m.line = make([]float64, m.n*(axes[1].n+1)), make([]float64, axes[1].n+1)
	mesh := newSpaceMesh(axes)
	sum := 0.0
	for _, w := range m.w {
		sum += w
	}
	for i, w := range m.w {
		mesh.w[i] = w / sum
	}
	return m, mesh
}

// conducts fills m.flow with what flows into every volume from its neighbours at u; if anew, it looks at how u spreads in the volumes too.
func (m *shellMarch) conducts(u []float64, anew bool) {
	v, n1 := m.ice, m.axes[1].n
	clear(m.flow)
	clear(m.delta)
	clear(v.near)
	clear(v.shift)
	v.along(0, n1, 0, u, m.flow)
	for i, row := range m.rowM {
		v.along(1, 1, i*n1, u, m.delta)
		for j, col := range m.colM {
			at := i*n1 + j
			m.flow[at] = m.flow[at]*col + m.delta[at]*row
		}
	}
	if !anew {
		return
	}
	if s := m.skins[0][1]; s != nil && s.held {
		v.even(m.spots[0][1])
	}
	for i, near2 := range v.near {
		m.spread[i] = max(leastSpread, math.Sqrt(near2))
		m.off[i] = v.shiftAt(i, u[i])
	}
}

// look reads the mean heat contents of the volumes at u with their slopes.
func (m *shellMarch) look(u []float64) {
	for i, x := range u {
		m.mean[i], m.meanU[i], _ = m.law.byU().mean(x+m.off[i], m.spread[i])
	}
}

// surface adds what flows over the face at u to m.flow, tau s into the step; slopes, unless nil, gets what of it changes with u.
func (m *shellMarch) surface(u []float64, tau float64, slopes []float64) {
	s := m.skins[0][1]
	if s == nil || s.insulated || s.held {
		return
	}
	for j, i := range m.spots[0][1] {
		t, dt := m.law.byU().temperature(u[i])
		q, d := s.flux(t, tau)
		m.flow[i] += q * m.faceM2[j]
		if slopes != nil {
			slopes[j] = d * dt * m.faceM2[j]
		}
	}
}

// held tells whether the face is kept at its medium, and at which u.
func (m *shellMarch) held(tau float64) (u float64, is bool) {
	s := m.skins[0][1]
	if s == nil || !s.held {
		return 0, false
	}
	return m.law.kirchhoff(m.law.heat(s.mediumC(tau))), true
}

// shellNewtonK is where Newton's method ends, K: a small part of what a step may be off.
const shellNewtonK = 5e-3

// looksAnew is how many looks of Newton's method read how u spreads in the volumes: it mostly ends before. The rest keep it, so that they come to an end.
const looksAnew = 12

// solve finds the u of w·h(u) = b + a·F(u) at tau, from u on, and h; it says whether it did.
func (m *shellMarch) solve(u, h []float64, a, tau float64) bool {
	slopes := m.steepM2
	clear(slopes)
	fix, held := m.held(tau)
	for try := range 25 {
		m.conducts(u, try < looksAnew)
		m.look(u)
		m.surface(u, tau, slopes)
		for i := range u {
			m.delta[i] = m.b[i] + a*m.flow[i] - m.w[i]*m.mean[i]
		}
		m.matrix(a, slopes)
		if held {
			p := m.axes[1].n + 1
			for _, i := range m.spots[0][1] { // so stiff that nothing moves it
				m.band[i*p] *= 1e18
				m.delta[i] = (fix - u[i]) * m.band[i*p]
			}
		}
		m.factor()
		m.back(m.delta)
		worst := 0.0
		for i, d := range m.delta {
			u[i] += d
			if d = math.Abs(d) * max(1/unfrozenK, m.meanU[i]*heatCounts); !(d <= worst) {
				if worst = d; math.IsNaN(d) {
					return false
				}
			}
		}
		if worst < shellNewtonK {
			for i, d := range m.delta {
				h[i] = m.mean[i] + m.meanU[i]*d
			}
			return true
		}
	}
	return false
}

// matrix fills the band with w·dh/du - a·dF/du.
func (m *shellMarch) matrix(a float64, slopes []float64) {
	n0, n1 := m.axes[0].n, m.axes[1].n
	p := n1 + 1
	clear(m.band)
	join := func(i, before int, g float64) {
		m.band[i*p] += a * g
		m.band[before*p] += a * g
		m.band[i*p+i-before] -= a * g
	}
	for i := range n0 {
		for j := range n1 {
			at := i*n1 + j
			m.band[at*p] += m.w[at] * m.meanU[at]
			if i > 0 {
				join(at, at-n1, m.axes[0].k[i*n0+i-1]*m.colM[j])
			}
			if j > 0 {
				join(at, at-1, m.axes[1].k[j*n1+j-1]*m.rowM[i])
			}
		}
	}
	for j, i := range m.spots[0][1] {
		m.band[i*p] -= a * slopes[j]
	}
}

// factor brings the band, symmetric and positive, to L·D·L': D stands as its inverse.
func (m *shellMarch) factor() {
	n1 := m.axes[1].n
	p := n1 + 1
	l := m.line
	for i := range m.n {
		row := m.band[i*p : (i+1)*p]
		far := min(i, n1)
		// row[k] is the entry at column i-k
		for k := far; k >= 1; k-- {
			c := i - k
			up := m.band[c*p : (c+1)*p]
			sum := row[k] - blas64.Dot(blas64.Vector{N: far - k, Inc: 1, Data: l[k+1:]}, blas64.Vector{N: far - k, Inc: 1, Data: up[1:]})
			l[k] = sum
			row[k] = sum * up[0]
		}
		d := row[0]
		for k := 1; k <= far; k++ {
			d -= l[k] * row[k]
		}
		row[0] = 1 / d
	}
}

// back solves the factored band for y.
func (m *shellMarch) back(y []float64) {
	n1 := m.axes[1].n
	p := n1 + 1
	for i := range y {
		sum := y[i]
		row := m.band[i*p : (i+1)*p]
		for k := 1; k <= min(i, n1); k++ {
			sum -= row[k] * y[i-k]
		}
		y[i] = sum
	}
	for i := range y {
		y[i] *= m.band[i*p]
	}
	for i := m.n - 1; i >= 0; i-- {
		x, row := y[i], m.band[i*p:(i+1)*p]
		for k := 1; k <= min(i, n1); k++ {
			y[i-k] -= row[k] * x
		}
	}
}

func (m *shellMarch) begin(tau float64) {
	fix, held := m.held(tau)
	if held {
		for _, i := range m.spots[0][1] {
			m.u0[i] = fix
		}
	}
	m.conducts(m.u0, true)
	m.surface(m.u0, tau, nil)
	for i := range m.rate {
		m.rate[i] = m.flow[i] / m.w[i]
	}
	if held {
		m.look(m.u0)
		for _, i := range m.spots[0][1] {
			m.h[i] = m.mean[i]
		}
	}
	m.slopes(m.u0, m.rate, m.uRate, tau)
	m.fresh = true
}

// slopes fills out with the slopes in time of u, W/(m·s), where heat contents change by rate, W/m³; held faces go as their medium does.
func (m *shellMarch) slopes(u, rate, out []float64, tau float64) {
	m.look(u)
	if _, held := m.held(tau); held {
		from := max(0, tau-1)
		a, _ := m.held(from)
		b, _ := m.held(from + 1)
		for _, i := range m.spots[0][1] {
			rate[i] = (b - a) * m.meanU[i]
		}
	}
	for i, r := range rate {
		out[i] = r / m.meanU[i]
	}
}

func (m *shellMarch) try(tau, d float64) float64 {
	a := trGamma / 2 * d
	copy(m.u1, m.u0)
	for i, r := range m.uRate {
		if !m.fresh {
			m.u1[i] += trGamma * d * r
		}
		m.g0[i] = m.w[i] * m.rate[i]
		m.b[i] = m.w[i]*m.h[i] + a*m.g0[i]
	}
	if !m.solve(m.u1, m.h1, a, tau+trGamma*d) {
		return math.Inf(1)
	}
	a1 := 1 / (trGamma * (2 - trGamma))
	for i := range m.b {
		m.g1[i] = (m.w[i]*m.h1[i] - m.b[i]) / a
		m.b[i] = m.w[i] * (a1*m.h1[i] - (a1-1)*m.h[i])
		m.u2[i] = m.u0[i] + (m.u1[i]-m.u0[i])/trGamma
	}
	if !m.solve(m.u2, m.h2, a, tau+d) {
		return math.Inf(1)
	}
	c := 2 * trErrorK * d
	for i := range m.b {
		m.g2[i] = (m.w[i]*m.h2[i] - m.b[i]) / a
		m.rate2[i] = m.g2[i] / m.w[i]
		m.delta[i] = c * (m.g0[i]/trGamma - m.g1[i]/(trGamma*(1-trGamma)) + m.g2[i]/(1-trGamma))
	}
	if _, held := m.held(tau); held {
		for _, i := range m.spots[0][1] {
			m.delta[i] = 0
		}
	}
	m.back(m.delta)
	m.slopes(m.u2, m.rate2, m.uRate2, tau+d)
	at := cubicAt(0, trGamma, d)
	worst := 0.0
	for i, e := range m.delta {
		_, thin := m.law.byU().temperature(m.u2[i])
		worst = max(worst, math.Abs(e)*max(thin, m.meanU[i]*heatCounts))
		if !m.fresh {
			t, _ := m.law.byU().temperature(m.u1[i])
			k, _ := m.law.byU().temperature(at.c0*m.u0[i] + at.s0*m.uRate[i] + at.c1*m.u2[i] + at.s1*m.uRate2[i])
			worst = max(worst, math.Abs(t-k)*betweenCounts)
		}
	}
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

func (m *shellMarch) accept(k *track, t float64) {
	m.h, m.h2 = m.h2, m.h
	m.u0, m.u2 = m.u2, m.u0
	m.rate, m.rate2 = m.rate2, m.rate
	m.uRate, m.uRate2 = m.uRate2, m.uRate
	m.fresh = false
	m.keep(k, t)
}

func (m *shellMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	copy(c, m.u0)
	copy(slope, m.uRate)
	copy(m.u, m.u0) // that span reads
}

// firstS is the time in which heat crosses the volumes at the thinnest part of the face.
func (m *shellMarch) firstS() float64 {
	least := math.Inf(1)
	n0 := m.axes[0].n
	for j, i := range m.spots[0][1] {
		least = min(least, m.w[i]*m.meanU[i]/(m.axes[0].k[n0*n0-2]*m.colM[j]))
	}
	return 0.2 * least
}

func (m *shellMarch) save(float64) {
	m.kept = m.kept[:0]
	for _, x := range [][]float64{m.h, m.u0, m.rate, m.uRate} {
		m.kept = append(m.kept, x...)
	}
}

func (m *shellMarch) restore() {
	for i, x := range [][]float64{m.h, m.u0, m.rate, m.uRate} {
		copy(x, m.kept[i*m.n:])
	}
	copy(m.u, m.u0)
}

// shellNodes is how many volumes a spheroid gets from the centre to the face, and near a sphere from the equator to the pole.
const shellNodes, shellTurns = 28, 12

// shellPower is that of the axes' ratio in how many.
const shellPower = 0.4

// layShells lays out a spheroid in which a front of ice may move: one far from a sphere gets more volumes from the equator to the pole, where
// they are longer.
func (s *solver) layShells(f *marched, l *law, e effort) {
	ratio := s.radii[0] / s.radii[1]
	n := [2]int{e.volumes(shellNodes), e.volumes(int(math.Round(shellTurns * math.Pow(ratio, shellPower))))}
	m, mesh := newShellMarch(s.ball.shells(), n, l, s.product.StartC)
	f.state, f.mesh, f.track.ice = m, mesh, l
	nd := &nodes{x: [3][]float64{m.axes[0].x, m.axes[1].x, {0}}}
	f.body = newBody(body{kinds: [3]axisKind{spherical, planeHalf}, radii: s.radii, ball: s.ball, shells: s.ball.shells()}, nd)
}
