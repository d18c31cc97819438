package model

import "math"

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
