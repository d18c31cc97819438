package model

import "math"

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
		t, _ := m.law.byU().temperature(m.u[i])
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
	_, dt := m.law.byU().temperature(m.u[i])
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
		low, _ = m.law.byU().temperature(low)
		high, _ = m.law.byU().temperature(high)
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
