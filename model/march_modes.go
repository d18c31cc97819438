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
	tolK float64 // how far the cubics of the track may lie off between two instants, K
	mem  slab    // for what lasts a step of the chain

	// The linear problem.
	rhoC, k  float64       // the middle ones, J/(m³·K), W/(m·K)
	films    [3][2]float64 // W/(m²·K), by axis and face
	decay    [3][]float64  // by axis, 1/s
	rate     []float64     // by mode, 1/s
	to, from [3][]float64  // n×n, by axis: values at the nodes in modes and back
	reacts   bool          // a film is not constant
	changes  bool          // a medium changes in the step
	wide     bool          // a face is steep in one place and flat in another: no film comes near both
	onHeld   []bool        // by node: it lies on a face that is kept at its medium

	// A step from tn to tn+d, in the letters of the scheme: states u, in modes, K, and N, what is left over of their rates, K/s.
	c, n0          []float64 // u(tn) and N(u, tn)
	a, na          []float64 // a(n), the first look at the end, and N(a, tn+d)
	next, n1       []float64 // u(tn+d) and its N
	e, p1, p2, p3  []float64 // by mode: exp(−rate·d) and d·φ1, d·φ2, d·φ3, see phis
	end, more      []float64 // at the nodes: the end before it was corrected, and the correction, K
	before         []float64 // N at the start of the step before
	bend           []float64 // half the second slope of N in time, K/s³
	length, tau    float64   // d of the last try, s, and its end from the start of the step of the chain, s
	lastS          float64   // length of the step before, s; 0: there is none in these modes
	savedAt        float64   // s into the step of the chain
	turned         bool      // the step begins at a corner of a course
	x, y, z, nodal []float64
	face, faceWas  [3][2][]float64 // where a medium changes: what stands at the faces at the start of this step and of the step before

	// The track.
	look [3][]float64 // by axis: the rows of from of every other node from the face on
	seen []int        // the nodes that these rows give
	rows [][]float64  // instants on the way, by depth
}

// keptW stands for a face that is kept at its medium, W/(m²·K): it stays within a thousandth of a degree of it soon after the start.
const keptW = 1e7

func newModesMarch(m *spaceMarch, tolK float64) *modesMarch {
	f := &modesMarch{spaceMarch: m, tolK: tolK}
	f.mem.wide = 1
	for _, s := range []*[]float64{&f.c, &f.n0, &f.a, &f.na, &f.next, &f.n1, &f.e, &f.p1, &f.p2, &f.p3, &f.before, &f.bend, &f.end, &f.more, &f.x, &f.y, &f.z, &f.nodal} {
		*s = make([]float64, m.n)
	}
	f.onHeld = make([]bool, m.n)
	f.everyOther()
	return f
}

// everyOther chooses the nodes at which the track is held to the march on the way: every other one of an axis, faces among them.
func (m *modesMarch) everyOther() {
	var on [3][]int
	for a, ax := range m.axes {
		for i := 0; i < ax.n; i++ {
			if (ax.n-1-i)%2 == 0 || i == 0 && ax.face[0] > 0 {
				on[a] = append(on[a], i)
			}
		}
		m.look[a] = make([]float64, len(on[a])*ax.n)
	}
	for _, i := range on[0] {
		for _, j := range on[1] {
			for _, k := range on[2] {
				m.seen = append(m.seen, (i*m.axes[1].n+j)*m.axes[2].n+k)
			}
		}
	}
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
	m.reacts, m.changes = false, false
	clear(m.onHeld)
	for a := range m.skins {
		for side, s := range m.skins[a] {
			if s != nil && s.held {
				for _, i := range m.spots[a][side] {
					m.onHeld[i] = true
				}
			}
			if s != nil && !s.insulated {
				m.reacts = m.reacts || !s.held && !s.linear
				m.changes = m.changes || len(s.course.y) > 1
				s.seen(len(m.spots[a][side]))
			}
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

// alone and one are the decay and the matrix of an axis without extent.
var alone, one = []float64{0}, []float64{1}

// linearize makes the modes of films as steep as the surfaces are tau s into the step, and brings the state into them.
func (m *modesMarch) linearize(tau float64) {
	m.wide = false
	m.mem.free = m.mem.all
	for a, ax := range m.axes {
		if ax.n == 1 {
			m.decay[a], m.to[a], m.from[a] = alone, one, one
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
	m.lookAgain()
	m.rate = m.rate[:0]
	for _, p := range m.decay[0] {
		for _, q := range m.decay[1] {
			for _, r := range m.decay[2] {
				m.rate = append(m.rate, p+q+r)
			}
		}
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
	alpha *= a.perR2
	for i, k := range a.poly.sym {
		sym[i] = alpha * k
	}
	sym[0] += films[0] * a.face[0]
	sym[n*n-1] += films[1] * a.face[1]
	decay, v := eigen(mem, n, sym)
	to, from = mem.take(n*n), mem.take(n*n)
	for i := 0; i < n; i++ {
		decay[i] = max(0, decay[i])
		for j, root := range a.poly.root {
			to[i*n+j] = v[i*n+j] * root
			from[j*n+i] = v[i*n+j] / root
		}
	}
	return decay, to, from
}

// leastSteep is how steep a film must be by the steepest place of its face: what is left over there would run away from half on.
const leastSteep = 0.55

// steepness is how steep the film of a face is to be now, W/(m²·K): in the middle of the slopes of the flux on it, so that as little as
// possible is left over where it is steepest, mostly at an edge, and where it is flattest. Edges of faces that are kept at their media do not
// count: they stay there however steep it is.
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
		if m.onHeld[i] {
			continue
		}
		_, d := s.flux(m.law.temperature(m.h[i]), tau)
		least, most = min(least, -d), max(most, -d)
	}
	if least < (2*leastSteep-1)*most {
		m.wide = true
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

// lookAgain fills look.
func (m *modesMarch) lookAgain() {
	for a, ax := range m.axes {
		n, rows := ax.n, len(m.look[a])/ax.n
		for r := rows - 1; r >= 0; r-- {
			i := max(0, n-1-2*(rows-1-r))
			copy(m.look[a][r*n:(r+1)*n], m.from[a][i*n:(i+1)*n])
		}
	}
}

// along applies one matrix by axis.
func (m *modesMarch) along(by *[3][]float64, in, out []float64) {
	byAxes(by, [3]int{m.axes[0].n, m.axes[1].n, m.axes[2].n}, in, m.x, m.y, out)
}

func (m *modesMarch) modes(nodal, out []float64) { m.along(&m.to, nodal, out) }
func (m *modesMarch) nodes(modes, out []float64) { m.along(&m.from, modes, out) }

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
