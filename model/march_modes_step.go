package model

import "math"

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
