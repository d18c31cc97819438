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
	rate            []float64     // by mode, 1/s
	to, from        [3][]float64  // n×n, by axis: values at the nodes in modes and back
	look            [3][]float64  // by axis: the rows of from of every other node from the face on
	seen            []int         // the nodes that these rows give
	c, n0           []float64     // modes, K, and what is left over, K/s, now
	a, na, next, n1 []float64     // first look at the end of a step, and the end
	e, p1, p2, p3   []float64     // by mode, for a step: see phis
	end, more       []float64     // at the nodes: the end of the last try before it was corrected, and the correction, K
	before, bend    []float64     // what was left over at the start of the step before, and half its second slope in time, K/s³
	savedAt         float64       // s into the step
	turned          bool          // the step begins at a corner of a course
	lastS           float64       // length of the step before, s; 0: there is none in these modes
	x, y, z, nodal  []float64
	length, tau     float64         // of the last try, and its end from the start of the step, s
	reacts          bool            // a film is not constant
	changes         bool            // a medium changes in the step
	wide            bool            // a face is steep in one place and flat in another: no film comes near both
	onHeld          []bool          // by node: it lies on a face that is kept at its medium
	face, faceWas   [3][2][]float64 // where a medium changes: what stands at the faces at the start of this step and of the step before
	rows            [][]float64     // instants on the way, by depth
	tolK            float64         // how far the cubics of the track may lie off between two instants, K
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

// left fills out, in modes, with what the linear problem leaves over of the rates of a state in modes, K/s, and nodal with the state at the
// nodes. Conduction in modes is their decay less what the films of the linear problem take, so that only what stands at the faces needs more
// than one way from the nodes to the modes.
func (m *modesMarch) left(modes, nodal, out []float64, tau float64) {
	m.nodes(modes, nodal)
	m.law.kirchhoffs(nodal, m.rhoC, 1/m.k, m.u)
	for i, v := range nodal {
		m.u[i] -= v
	}
	m.modes(m.u, out)
	for i, r := range m.rate {
		out[i] *= -r
	}
	for a, ax := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || s.insulated {
				continue
			}
			w, per := m.films[a][side], ax.face[side]/m.rhoC
			at := m.f[:len(m.spots[a][side])]
			if s.held {
				medium := m.law.heat(s.mediumC(tau)) / m.rhoC
				for k, i := range m.spots[a][side] {
					at[k] = per * w * (medium + m.u[i])
				}
			} else {
				for k, i := range m.spots[a][side] {
					v := nodal[i]
					q, _ := s.flux(m.law.temperature(v*m.rhoC), tau)
					at[k] = per * (q + w*(v+m.u[i]))
				}
			}
			m.addFace(a, side, at, out)
		}
	}
}

// addFace adds to modes what stands at the nodes of a face, which it overwrites.
func (m *modesMarch) addFace(a, side int, at, out []float64) {
	p, q := (a+1)%3, (a+2)%3 // the axes of the face, in their order
	if p > q {
		p, q = q, p
	}
	np, nq := m.axes[p].n, m.axes[q].n
	if np*nq > 1 {
		x, y := m.x[:len(at)], m.y[:len(at)]
		along(at, x, m.to[p], 1, np, nq)
		at = x
		if nq > 1 {
			along(x, y, m.to[q], np, nq, 1)
			at = y
		}
	}
	n := m.axes[a].n
	node := 0
	if side == 1 {
		node = n - 1
	}
	to := m.to[a]
	switch a {
	case 0:
		for i := 0; i < n; i++ {
			add(out[i*len(at):(i+1)*len(at)], to[i*n+node], at)
		}
	case 1:
		for g := 0; g < np; g++ {
			for i := 0; i < n; i++ {
				add(out[(g*n+i)*nq:(g*n+i+1)*nq], to[i*n+node], at[g*nq:(g+1)*nq])
			}
		}
	default:
		col := m.x[len(m.x)-n:]
		for i := range col {
			col[i] = to[i*n+node]
		}
		for g, x := range at {
			add(out[g*n:(g+1)*n], x, col)
		}
	}
}

func (m *modesMarch) begin(tau float64) {
	m.left(m.c, m.nodal, m.n0, tau)
	m.lastS = 0
	m.standing(m.nodal)
}

// standing keeps what stands at the faces now, where a medium changes.
func (m *modesMarch) standing(nodal []float64) {
	if !m.changes {
		return
	}
	m.face, m.faceWas = m.faceWas, m.face
	for a := range m.spots {
		for side, spots := range m.spots[a] {
			at := m.face[a][side][:0]
			for _, i := range spots {
				at = append(at, nodal[i])
			}
			m.face[a][side] = at
		}
	}
}

// turn takes over a corner of a course: what was left over before it becomes what it would have been had the line after the corner begun
// there already, so that the next step can look ahead and does not begin anew. Only what stands at the faces counts. Its bend it finds in its
// middle. Where the line may not be followed so far, the next step is a first one.
func (m *modesMarch) turn(tau float64) {
	if m.lastS == 0 {
		return
	}
	for a, ax := range m.axes {
		for side, s := range m.skins[a] {
			if s == nil || s.insulated || len(s.course.y) < 2 {
				continue
			}
			c, turns, ok := s.cornerAt(tau, tau-m.lastS)
			if !ok {
				m.lastS = 0
				return
			}
			if !turns {
				continue
			}
			per := ax.face[side] / m.rhoC
			at := m.f[:len(m.spots[a][side])]
			if s.held {
				by := per * m.films[a][side] * (m.law.heat(c.straight.mediumC) - m.law.heat(c.was.mediumC)) / m.rhoC
				for k := range at {
					at[k] = by
				}
			} else {
				for k, v := range m.faceWas[a][side] {
					at[k] = per * c.change(s, m.law.temperature(v*m.rhoC))
				}
			}
			m.addFace(a, side, at, m.before)
			m.turned = true
		}
	}
}

// phis fills what is left of the modes and the functions φ1, φ2 and φ3 of the scheme, times d, for a time d after the start of a step.
func (m *modesMarch) phis(d float64) {
	var e [3][maxDegrees]float64
	for a := range m.decay {
		for i, r := range m.decay[a] {
			e[a][i] = math.Exp(-r * d)
		}
	}
	n := len(m.decay[2])
	i := 0
	for j := range m.decay[0] {
		for k := range m.decay[1] {
			before, rates := e[0][j]*e[1][k], m.rate[i:i+n]
			left, f1, f2, f3, last := m.e[i:][:n], m.p1[i:][:n], m.p2[i:][:n], m.p3[i:][:n], e[2][:n]
			i += n
			for l, r := range rates {
				z := r * d
				x := before * last[l]
				left[l] = x
				var p1, p2, p3 float64
				if z < 0.05 { // the series, where the quotients lose digits
					p3 = 1.0/6 - z/24*(1-z/5*(1-z/6*(1-z/7)))
					p2 = 0.5 - z*p3
					p1 = 1 - z*p2
				} else {
					per := 1 / z
					p1 = (1 - x) * per
					p2 = (1 - p1) * per
					p3 = (0.5 - p2) * per
				}
				f1[l], f2[l], f3[l] = d*p1, d*p2, d*p3
			}
		}
	}
}

func (m *modesMarch) try(tau, d float64) float64 {
	m.phis(d)
	c, n := m.c, len(m.c)
	e, p1, p2, p3 := m.e[:n], m.p1[:n], m.p2[:n], m.p3[:n]
	n0, na, n1, a, next, z := m.n0[:n], m.na[:n], m.n1[:n], m.a[:n], m.next[:n], m.z[:n]
	before, bend := m.before[:n], m.bend[:n]
	for i, c := range c {
		a[i] = e[i]*c + p1[i]*n0[i]
	}
	if (m.changes || m.wide) && m.lastS > 0 { // what is left over is much, and goes on as it went
		share := d / m.lastS
		for i, n := range n0 {
			a[i] += p2[i] * share * (n - before[i])
		}
		m.left(a, m.nodal, na, tau+d)
		for i, a := range a {
			next[i] = a + p2[i]*(na[i]-n0[i]-share*(n0[i]-before[i]))
		}
	} else {
		m.left(a, m.nodal, na, tau+d)
		for i, a := range a {
			next[i] = a + p2[i]*(na[i]-n0[i])
		}
	}
	m.left(next, m.end, n1, tau+d)
	if m.lastS > 0 && !m.turned {
		perD, perLast, perBoth := 1/d, 1/m.lastS, 1/(d+m.lastS)
		for i, n := range n1 {
			bend[i] = ((n-n0[i])*perD - (n0[i]-before[i])*perLast) * perBoth
		}
	} else {
		m.halfway(tau, d)
	}
	for i, n := range n1 {
		z[i] = p2[i]*(n-na[i]) + bend[i]*d*d*(2*p3[i]-p2[i])
		next[i] += z[i]
	}
	m.nodes(z, m.more)
	m.length, m.tau = d, tau+d
	worst := 0.0
	for _, v := range m.more {
		if v = math.Abs(v); !(v <= worst) {
			if math.IsNaN(v) {
				return math.Inf(1)
			}
			worst = v
		}
	}
	return worst
}

// halfway takes the bend of a step that has none before it from what is left over in its middle.
func (m *modesMarch) halfway(tau, d float64) {
	m.phis(d / 2)
	for i, c := range m.c {
		m.a[i] = m.e[i]*c + m.p1[i]*m.n0[i] + m.p2[i]*(m.n1[i]-m.n0[i])/2
	}
	m.left(m.a, m.more, m.bend, tau+d/2)
	for i, n := range m.bend {
		m.bend[i] = 2 * (m.n0[i] + m.n1[i] - 2*n) / (d * d)
	}
	m.phis(d)
}

// way fills a with the modes x s after the start of the last try.
func (m *modesMarch) way(x float64) {
	m.phis(x)
	share, n := x/m.length, len(m.c)
	e, p1, p2, p3, n0, n1, bend, a := m.e[:n], m.p1[:n], m.p2[:n], m.p3[:n], m.n0[:n], m.n1[:n], m.bend[:n], m.a[:n]
	for i, c := range m.c {
		a[i] = e[i]*c + p1[i]*n0[i] + p2[i]*(n1[i]-n0[i])*share + bend[i]*x*(2*x*p3[i]-m.length*p2[i])
	}
}

// at gives the temperatures of the nodes and their slopes in time where way has been.
func (m *modesMarch) at(x float64, c, slope []float64) {
	share := x / m.length
	for i, n := range m.n0 {
		m.z[i] = n + (m.n1[i]-n)*share + m.bend[i]*x*(x-m.length)
	}
	m.rest(m.a, m.z)
	m.nodes(m.a, c)
	m.row(m.z, c, slope)
}

// row turns the state at the nodes into temperatures, and the slopes of modes in time into theirs.
func (m *modesMarch) row(slopes, c, slope []float64) {
	m.nodes(slopes, slope)
	slope = slope[:len(c)]
	for i, v := range c {
		t, dt := m.law.warmth(v * m.rhoC)
		c[i], slope[i] = t, slope[i]*dt*m.rhoC
	}
}

// keep writes the state into a track.
func (m *modesMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	m.rest(m.c, m.n0)
	m.nodes(m.c, c)
	m.row(m.z, c, slope)
}

// rest fills z with the slopes of modes.
func (m *modesMarch) rest(modes, left []float64) {
	n := len(modes)
	z, left, rate := m.z[:n], left[:n], m.rate[:n]
	for i, c := range modes {
		z[i] = left[i] - rate[i]*c
	}
}

// accept makes the last try the state, and keeps so many instants on the way to t that the cubics between them follow it.
func (m *modesMarch) accept(k *track, t float64) {
	for len(m.rows) < mostHalvings+2 {
		m.rows = append(m.rows, make([]float64, 2*m.n))
	}
	n := m.n
	start, end := k.whole(len(k.times)-1), m.rows[mostHalvings+1]
	m.rest(m.next, m.n1)
	more := m.more[:n]
	for i, v := range m.end {
		end[i] = v + more[i]
	}
	m.row(m.z, end[:n], end[n:])
	m.between(k, instant{t - m.length, 0, start}, instant{t - m.length, m.length, end}, 0)
	c, slope := k.add(t)
	copy(c, end)
	copy(slope, end[n:])
	m.c, m.next = m.next, m.c
	m.before, m.n0, m.n1 = m.n0, m.n1, m.before
	m.lastS, m.turned = m.length, false
	m.standing(m.end)
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
	m.way(mid.x)
	seen := m.nodal[:len(m.seen)]
	m.along(&m.look, m.a, seen)
	worst, d := 0.0, hi.x-lo.x
	for k, i := range m.seen {
		guess := (lo.row[i]+hi.row[i])/2 + d/8*(lo.row[n+i]-hi.row[n+i])
		worst = max(worst, math.Abs(guess-m.law.temperature(seen[k]*m.rhoC)))
	}
	if worst < m.tolK {
		return
	}
	m.at(mid.x, mid.row[:n], mid.row[n:])
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
