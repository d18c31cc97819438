package model

import "math"

// modesMarch steps a smooth field in the modes of a linear problem close to its own: constant properties in the middle of those that occur,
// and films as steep as the surfaces are now. What they decay by is exact in time; only what is left over of the properties and the surfaces
// is stepped: by the second-order exponential scheme ETD2RK (Cox & Matthews 2002, J. Comput. Phys. 176:430-455), corrected once with the
// parabola in time through what was left over at the start of the step before, at the start and at the end, whose correction is the estimate
// of the error. The unknown is the heat content over the middle heat capacity, a temperature in all but name, so that heat is conserved
// whatever the steps.
type modesMarch struct {
	*spaceMarch
	mem slab // for what lasts a step of the chain

	rhoC, k         float64       // the middle ones, J/(m³·K), W/(m·K)
	films           [3][2]float64 // W/(m²·K), by axis and face
	decay           [3][]float64  // by axis, 1/s
	to, from        [3][]float64  // n×n, by axis: values at the nodes in modes and back
	c, n0           []float64     // modes, K, and what is left over, K/s, now
	a, na, next, n1 []float64     // first look at the end of a step, and the end
	e, p1, p2, p3   []float64     // by mode, for a step: see phis
	before, bend    []float64     // what was left over at the start of the step before, and half its second slope in time, K/s³
	savedAt         float64       // s into the step
	lastS           float64       // length of the step before, s; 0: there is none in these modes
	x, y, z, nodal  []float64
	length, tau     float64     // of the last try, and its end from the start of the step, s
	reacts          bool        // a film is not constant
	rows            [][]float64 // instants on the way, by depth
	tolK            float64     // how far the cubics of the track may lie off between two instants, K
}

// keptW stands for a face that is kept at its medium, W/(m²·K): it stays within a thousandth of a degree of it soon after the start.
const keptW = 1e7

func newModesMarch(m *spaceMarch, tolK float64) *modesMarch {
	f := &modesMarch{spaceMarch: m, tolK: tolK}
	f.mem.wide = 1
	for _, s := range []*[]float64{&f.c, &f.n0, &f.a, &f.na, &f.next, &f.n1, &f.e, &f.p1, &f.p2, &f.p3, &f.before, &f.bend, &f.x, &f.y, &f.z, &f.nodal} {
		*s = make([]float64, m.n)
	}
	return f
}

// surround chooses the linear problem of a step.
func (m *modesMarch) surround(skins func(*Face) *skin) {
	m.leave()
	m.spaceMarch.surround(skins)
	low, high := m.spaceMarch.span()
	for a := range m.skins {
		for _, s := range m.skins[a] {
			if s != nil && !s.insulated {
				l, h := s.mediumRange()
				low, high = min(low, l), max(high, h)
			}
		}
	}
	m.middle(low, high)
	m.reacts = false
	for a := range m.skins {
		for _, s := range m.skins[a] {
			m.reacts = m.reacts || s != nil && !s.insulated && !s.held && !s.linear
		}
	}
	m.linearize(0)
}

// leave takes the state out of the modes.
func (m *modesMarch) leave() {
	if m.rhoC > 0 {
		m.nodes(m.c, m.nodal)
		for i, v := range m.nodal {
			m.h[i] = v * m.rhoC
		}
	}
}

// linearize makes the modes of films as steep as the surfaces are tau s into the step, and brings the state into them.
func (m *modesMarch) linearize(tau float64) {
	m.mem.free = m.mem.all
	for a, ax := range m.axes {
		if ax.n == 1 {
			m.decay[a], m.to[a], m.from[a] = []float64{0}, []float64{1}, []float64{1}
			continue
		}
		for side, s := range m.skins[a] {
			m.films[a][side] = 0
			if s != nil && !s.insulated {
				m.films[a][side] = m.steepness(a, side, tau)
			}
		}
		m.decay[a], m.to[a], m.from[a] = ax.modes(&m.mem, m.k/m.rhoC, [2]float64{m.films[a][0] / m.rhoC, m.films[a][1] / m.rhoC})
	}
	for i, h := range m.h {
		m.nodal[i] = h / m.rhoC
	}
	m.modes(m.nodal, m.c)
}

// modes solves an axis with a diffusivity, m²/s, and films over heat capacities, m/s: the rates of decay, 1/s, and the matrices that take
// values at the nodes into modes and back. Scaled by the roots of the weights the problem is symmetric.
func (a *spaceAxis) modes(mem *slab, alpha float64, films [2]float64) (decay, to, from []float64) {
	n := a.n
	sym := mem.take(n * n)
	for i := 0; i < n; i++ {
		for j := 0; j < n; j++ {
			sym[i*n+j] = -alpha * a.k[i*n+j] * math.Sqrt(a.w[i]/a.w[j])
		}
	}
	sym[0] += films[0] * a.face[0]
	sym[n*n-1] += films[1] * a.face[1]
	decay, v := eigen(mem, n, sym)
	to, from = mem.take(n*n), mem.take(n*n)
	for i := 0; i < n; i++ {
		decay[i] = max(0, decay[i])
		for j := 0; j < n; j++ {
			to[i*n+j] = v[i*n+j] * math.Sqrt(a.w[j])
			from[j*n+i] = v[i*n+j] / math.Sqrt(a.w[j])
		}
	}
	return decay, to, from
}

// leastSteep is how steep a film must be by the steepest place of its face: what is left over there would run away from half on.
const leastSteep = 0.55

// steepness is how steep the film of a face is to be now, W/(m²·K): in the middle of the slopes of the flux on it, so that as little as
// possible is left over where it is steepest, mostly at an edge, and where it is flattest.
func (m *modesMarch) steepness(a, side int, tau float64) float64 {
	s := m.skins[a][side]
	switch {
	case s.held:
		return keptW
	case s.linear:
		return s.totalW
	}
	least, most := math.Inf(1), 0.0
	for _, i := range m.spots[a][side] {
		_, d := s.flux(m.law.temperature(m.h[i]), tau)
		least, most = min(least, -d), max(most, -d)
	}
	return max((least+most)/2, leastSteep*most)
}

// A linear problem is left for a new one when a surface is steeper or flatter than its film by these factors: what is left over would grow
// and with it the number of steps.
const tooSteep, tooFlat = 1.25, 0.75

// drifts tells whether the surfaces have left the linear problem, tau s into the step; m.h holds the state.
func (m *modesMarch) drifts(tau float64) bool {
	for a := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || s.insulated || s.held || s.linear {
				continue
			}
			if d := m.steepness(a, side, tau); d > tooSteep*m.films[a][side] || d < tooFlat*m.films[a][side] {
				return true
			}
		}
	}
	return false
}

// middle chooses the properties of the linear problem for temperatures between low and high.
func (m *modesMarch) middle(low, high float64) {
	from, to := m.law.heat(low), m.law.heat(high)
	m.rhoC = (to - from) / (high - low)
	if high-low < 1e-6 {
		_, _, dt, _ := m.law.at(from)
		m.rhoC = 1 / dt
	}
	least, most := math.Inf(1), 0.0
	for i := 0; i <= 32; i++ {
		_, _, _, du := m.law.at(from + (to-from)*float64(i)/32)
		least, most = min(least, du), max(most, du)
	}
	m.k = (least + most) / 2 * m.rhoC
}

// along applies one n×n matrix by axis.
func (m *modesMarch) along(by *[3][]float64, in, out []float64) {
	n0, n1, n2 := m.axes[0].n, m.axes[1].n, m.axes[2].n
	if n1*n2 == 1 {
		clear(out)
		addRows(out, by[0], n0, in)
		return
	}
	along(in, m.x, by[0], 1, n0, n1*n2)
	if n2 == 1 {
		along(m.x, out, by[1], n0, n1, 1)
		return
	}
	along(m.x, m.y, by[1], n0, n1, n2)
	along(m.y, out, by[2], n0*n1, n2, 1)
}

func (m *modesMarch) modes(nodal, out []float64) { m.along(&m.to, nodal, out) }
func (m *modesMarch) nodes(modes, out []float64) { m.along(&m.from, modes, out) }

// left fills out, in modes, with what the linear problem leaves over of the rates of a state in modes, K/s.
func (m *modesMarch) left(modes, out []float64, tau float64) {
	m.nodes(modes, m.nodal)
	for i, v := range m.nodal {
		m.u[i] = (m.law.kirchhoff(v*m.rhoC) - m.k*v) / m.rhoC
	}
	m.conduct(m.u, m.f)
	for a, ax := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || s.insulated {
				continue
			}
			w := m.films[a][side]
			heldV := 0.0
			if s.held {
				heldV = m.law.heat(s.mediumC(tau)) / m.rhoC
			}
			per := ax.face[side] / m.rhoC
			for _, i := range m.spots[a][side] {
				v := m.nodal[i]
				if s.held {
					m.f[i] += per * w * heldV
					continue
				}
				q, _ := s.flux(m.law.temperature(v*m.rhoC), tau)
				m.f[i] += per * (q + w*v)
			}
		}
	}
	m.modes(m.f, out)
}

func (m *modesMarch) begin(tau float64) {
	m.left(m.c, m.n0, tau)
	m.lastS = 0
}

// phis fills what is left of the modes and the functions φ1, φ2 and φ3 of the scheme, times d, for a time d after the start of a step.
func (m *modesMarch) phis(d float64) {
	var e [3][maxDegrees]float64
	for a := range m.axes {
		for i, r := range m.decay[a] {
			e[a][i] = math.Exp(-r * d)
		}
	}
	i := 0
	for j, x := range m.decay[0] {
		for k, y := range m.decay[1] {
			for l, r := range m.decay[2] {
				z := (x + y + r) * d
				left := e[0][j] * e[1][k] * e[2][l]
				m.e[i] = left
				var p1, p2, p3 float64
				if z < 0.05 { // the series, where the quotients lose digits
					p3 = 1.0/6 - z/24*(1-z/5*(1-z/6*(1-z/7)))
					p2 = 0.5 - z*p3
					p1 = 1 - z*p2
				} else {
					p1 = (1 - left) / z
					p2 = (1 - p1) / z
					p3 = (0.5 - p2) / z
				}
				m.p1[i], m.p2[i], m.p3[i] = d*p1, d*p2, d*p3
				i++
			}
		}
	}
}

func (m *modesMarch) try(tau, d float64) float64 {
	m.phis(d)
	for i, c := range m.c {
		m.a[i] = m.e[i]*c + m.p1[i]*m.n0[i]
	}
	m.left(m.a, m.na, tau+d)
	for i, a := range m.a {
		m.next[i] = a + m.p2[i]*(m.na[i]-m.n0[i])
	}
	m.left(m.next, m.n1, tau+d)
	if m.lastS == 0 {
		m.halfway(tau, d)
	}
	for i, n := range m.n1 {
		if m.lastS > 0 {
			m.bend[i] = ((n-m.n0[i])/d - (m.n0[i]-m.before[i])/m.lastS) / (d + m.lastS)
		}
		m.z[i] = m.p2[i]*(n-m.na[i]) + m.bend[i]*d*d*(2*m.p3[i]-m.p2[i])
		m.next[i] += m.z[i]
	}
	m.nodes(m.z, m.nodal)
	worst := 0.0
	for _, v := range m.nodal {
		worst = max(worst, math.Abs(v))
	}
	m.length, m.tau = d, tau+d
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

// halfway takes the bend of a step that has none before it from what is left over in its middle.
func (m *modesMarch) halfway(tau, d float64) {
	m.phis(d / 2)
	for i, c := range m.c {
		m.a[i] = m.e[i]*c + m.p1[i]*m.n0[i] + m.p2[i]*(m.n1[i]-m.n0[i])/2
	}
	m.left(m.a, m.bend, tau+d/2)
	for i, n := range m.bend {
		m.bend[i] = 2 * (m.n0[i] + m.n1[i] - 2*n) / (d * d)
	}
	m.phis(d)
}

// at gives the temperatures of the nodes and their slopes in time, x s after the start of the last try.
func (m *modesMarch) at(x float64, c, slope []float64) {
	m.phis(x)
	share := x / m.length
	i := 0
	for _, p := range m.decay[0] {
		for _, q := range m.decay[1] {
			for _, r := range m.decay[2] {
				more := (m.n1[i] - m.n0[i]) * share
				m.a[i] = m.e[i]*m.c[i] + m.p1[i]*m.n0[i] + m.p2[i]*more + m.bend[i]*x*(2*x*m.p3[i]-m.length*m.p2[i])
				m.z[i] = m.n0[i] + more + m.bend[i]*x*(x-m.length) - (p+q+r)*m.a[i]
				i++
			}
		}
	}
	m.row(m.a, m.z, c, slope)
}

// row turns modes and their slopes in time into temperatures of nodes and theirs.
func (m *modesMarch) row(modes, slopes, c, slope []float64) {
	m.nodes(modes, c)
	m.nodes(slopes, slope)
	for i, v := range c {
		t, _, dt, _ := m.law.at(v * m.rhoC)
		c[i], slope[i] = t, slope[i]*dt*m.rhoC
	}
}

// keep writes the state into a track.
func (m *modesMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	m.rest(m.c, m.n0)
	m.row(m.c, m.z, c, slope)
}

// rest fills z with the slopes of modes.
func (m *modesMarch) rest(modes, left []float64) {
	i := 0
	for _, p := range m.decay[0] {
		for _, q := range m.decay[1] {
			for _, r := range m.decay[2] {
				m.z[i] = left[i] - (p+q+r)*modes[i]
				i++
			}
		}
	}
}

// accept makes the last try the state, and keeps so many instants on the way to t that the cubics between them follow it.
func (m *modesMarch) accept(k *track, t float64) {
	for len(m.rows) < mostHalvings+3 {
		m.rows = append(m.rows, make([]float64, 2*m.n))
	}
	n := m.n
	start, end := m.rows[mostHalvings+1], m.rows[mostHalvings+2]
	c, slope := k.row(len(k.times) - 1)
	copy(start, c)
	copy(start[n:], slope)
	m.rest(m.next, m.n1)
	m.row(m.next, m.z, end[:n], end[n:])
	m.between(k, instant{t - m.length, 0, start}, instant{t - m.length, m.length, end}, 0)
	c, slope = k.add(t)
	copy(c, end)
	copy(slope, end[n:])
	m.c, m.next = m.next, m.c
	m.before, m.n0, m.n1 = m.n0, m.n1, m.before
	m.lastS = m.length
	if m.reacts {
		if m.leave(); m.drifts(m.tau) {
			m.linearize(m.tau)
			m.begin(m.tau)
		}
	}
}

// instant is a state x s after the start of a try that began at t0: temperatures, then slopes.
type instant struct {
	t0, x float64
	row   []float64
}

// mostHalvings is how often a step is halved at most for instants to keep.
const mostHalvings = 8

// between adds the instants that are needed between two.
func (m *modesMarch) between(k *track, lo, hi instant, depth int) {
	if depth == mostHalvings {
		return
	}
	n := m.n
	mid := instant{lo.t0, (lo.x + hi.x) / 2, m.rows[depth]}
	m.at(mid.x, mid.row[:n], mid.row[n:])
	worst, d := 0.0, hi.x-lo.x
	for i := 0; i < n; i++ {
		guess := (lo.row[i]+hi.row[i])/2 + d/8*(lo.row[n+i]-hi.row[n+i])
		worst = max(worst, math.Abs(guess-mid.row[i]))
	}
	if worst < m.tolK {
		return
	}
	// A cubic's error falls with the fourth power of its length: the halves are good where the whole was off by less than 16 times.
	good := worst < 12*m.tolK
	if !good {
		m.between(k, lo, mid, depth+1)
	}
	c, slope := k.add(mid.t0 + mid.x)
	copy(c, mid.row[:n])
	copy(slope, mid.row[n:])
	if !good {
		m.between(k, mid, hi, depth+1)
	}
}

// firstS is a length for the first step after a change, s: what is left over has hardly begun to change.
func (m *modesMarch) firstS() float64 { return 1 }

func (m *modesMarch) span() (low, high float64) {
	if m.rhoC == 0 {
		return m.spaceMarch.span()
	}
	m.nodes(m.c, m.nodal)
	low, high = math.Inf(1), math.Inf(-1)
	for _, v := range m.nodal {
		low, high = min(low, v), max(high, v)
	}
	return m.law.temperature(low * m.rhoC), m.law.temperature(high * m.rhoC)
}

// save puts heat contents aside and not modes: a surface may lead to those of another linear problem before they are wanted again.
func (m *modesMarch) save(tau float64) {
	m.leave()
	m.spaceMarch.save(tau)
	m.savedAt = tau
}

func (m *modesMarch) restore() {
	m.spaceMarch.restore()
	m.linearize(m.savedAt)
	m.begin(m.savedAt)
}

func (m *modesMarch) keepsHeat() []*law { return nil }
