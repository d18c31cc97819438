package model

import "math"

// lineGrid cuts one axis, or the layers of a slab, into control volumes around nodes that stand on the faces too, closer towards them.
// Volumes and face areas are exact in the axis' own measure and given by 1 m² of the upper face.
type lineGrid struct {
	kind  axisKind
	r     float64   // half thickness or radius, m; stirred: volume over area
	x     []float64 // m, from the centre outwards, or from the lower face to the upper around the middle
	w     []float64 // volume of a node, m
	links []link    // between a node and the next
	food  []int     // by node: which law
	parts [][2]int  // first and last node of each layer
}

// link carries heat from a node to the one before it: by g times the difference of the Kirchhoff integrals, g in 1/m, or, at a joint,
// of the temperatures, g in W/(m²·K).
type link struct {
	g     float64
	joint bool
}

// perfectM2KW stands for the contact of layers that touch perfectly, m²·K/W: as much as a layer of food 0.05 µm thick.
const perfectM2KW = 1e-7

// crowd is how much closer nodes stand at a face than at the centre: e to this power.
const crowd = 1.8

// depths gives the depths below a face of n+1 nodes, m, from 0 to r.
func depths(r float64, n int) []float64 {
	d := make([]float64, n+1)
	for j := range d {
		d[j] = r * math.Expm1(crowd*float64(j)/float64(n)) / math.Expm1(crowd)
	}
	d[n] = r
	return d
}

// newLineGrid makes a grid of about n volumes on the half thickness or radius.
func newLineGrid(p *Product, kind axisKind, r float64, n int) *lineGrid {
	g := &lineGrid{kind: kind, r: r}
	if kind == lumped {
		g.x, g.w, g.food, g.parts = []float64{0}, []float64{r}, []int{0}, [][2]int{{0, 0}}
		return g
	}
	var layers []Layer
	if p.Shape == LayeredSlab {
		layers = p.Layers
	}
	if len(layers) == 0 {
		d := depths(r, n)
		if kind == planeFull {
			for j := range d {
				g.x = append(g.x, d[j]-r)
			}
		}
		for j := n; j >= 0; j-- {
			if j < n || kind != planeFull {
				g.x = append(g.x, r-d[j])
			}
		}
		g.part(0)
		return g
	}
	from := -r
	for i := len(layers) - 1; i >= 0; i-- {
		l := &layers[i]
		half := max(4, int(math.Round(float64(n)*math.Sqrt(l.ThicknessM/(2*r)))))
		d := depths(l.ThicknessM/2, half)
		for j := range d {
			g.x = append(g.x, from+d[j])
		}
		for j := half - 1; j >= 0; j-- {
			g.x = append(g.x, from+l.ThicknessM-d[j])
		}
		g.part(i)
		if from += l.ThicknessM; i > 0 {
			g.links = append(g.links, link{g: 1 / max(layers[i-1].BelowM2KW, perfectM2KW), joint: true})
		}
	}
	g.x[len(g.x)-1] = r
	return g
}

// part makes the volumes and links of the nodes that were added since the last part.
func (g *lineGrid) part(food int) {
	first := len(g.w)
	last := len(g.x) - 1
	e := map[axisKind]float64{radial: 1, spherical: 2}[g.kind]
	volume := func(a, b float64) float64 {
		if e == 0 {
			return b - a
		}
		return g.r * (math.Pow(b/g.r, e+1) - math.Pow(a/g.r, e+1)) / (e + 1)
	}
	from := g.x[first]
	for i := first; i <= last; i++ {
		to := g.x[i]
		if i < last {
			to = (g.x[i] + g.x[i+1]) / 2
			g.links = append(g.links, link{g: math.Pow(math.Abs(to)/g.r, e) / (g.x[i+1] - g.x[i])})
		}
		g.w = append(g.w, volume(from, to))
		g.food = append(g.food, food)
		from = to
	}
	g.parts = append(g.parts, [2]int{first, last})
}

// lineMarch steps the heat contents of a line in time: the trapezoid rule and the second-order backward formula one after the other
// (Bank et al. 1985, IEEE Trans. Electron Devices 32:1992-2007), which is L-stable, each solved by Newton's method to the end, so that
// what flows over a face is what the food gains.
type lineMarch struct {
	*lineGrid
	laws         []*law
	lower, upper *Face
	skins        [2]*skin // lower, upper; the lower one is nil at a centre of symmetry
	kept         []float64

	h, rate              []float64 // heat contents, J/m³, and their slopes, J/(m³·s), now
	h1, h2, guess        []float64
	b, f0, f1, f2        []float64 // W/m²
	temp, dt, u, du      []float64 // of the last look: temperature, its slope by h, Kirchhoff integral, its slope by h
	low, diag, up, delta []float64 // the three diagonals and the right side
	qs                   [2]float64
	inJ                  float64 // heat that came in through the faces since the start, J/m²
	fresh                bool    // no step since the surroundings changed: nothing to guess from
}

func newLineMarch(g *lineGrid, laws []*law) *lineMarch {
	m := &lineMarch{lineGrid: g, laws: laws}
	n := len(g.x)
	for _, s := range []*[]float64{&m.h, &m.rate, &m.h1, &m.h2, &m.guess, &m.b, &m.f0, &m.f1, &m.f2, &m.temp, &m.dt, &m.u, &m.du, &m.low, &m.diag, &m.up, &m.delta} {
		*s = make([]float64, n)
	}
	return m
}

// The numbers of the scheme: gamma is how far the first part goes.
var (
	trGamma  = 2 - math.Sqrt2
	trErrorK = (-3*trGamma*trGamma + 4*trGamma - 2) / (12 * (2 - trGamma))
)

// look reads temperatures and Kirchhoff integrals of heat contents.
func (m *lineMarch) look(h []float64) {
	for i, x := range h {
		m.temp[i], m.u[i], m.dt[i], m.du[i] = m.laws[m.food[i]].at(x)
	}
}

// flows fills f with what flows into every volume, W/m², from the last look, at tau s into the step, and the slopes of the faces' flows by
// heat content.
func (m *lineMarch) flows(f []float64, tau float64) (slope [2]float64) {
	n := len(f)
	in := 0.0
	for i := 0; i < n-1; i++ {
		l := &m.links[i]
		var q float64
		if l.joint {
			q = l.g * (m.temp[i+1] - m.temp[i])
		} else {
			q = l.g * (m.u[i+1] - m.u[i])
		}
		f[i] = q - in
		in = q
	}
	f[n-1] = -in
	m.qs = [2]float64{}
	for side, s := range m.skins {
		i := (n - 1) * side
		if s == nil || s.insulated || s.held {
			continue
		}
		q, d := s.flux(m.temp[i], tau)
		f[i] += q
		m.qs[side], slope[side] = q, d*m.dt[i]
	}
	return slope
}

// heldAt gives the heat content of a face that is kept at its medium.
func (m *lineMarch) heldAt(side, i int, tau float64) float64 {
	return m.laws[m.food[i]].heat(m.skins[side].mediumC(tau))
}

// begin takes the state over at a change of surroundings, tau s into the step.
func (m *lineMarch) begin(tau float64) {
	n := len(m.h)
	for side, s := range m.skins {
		if s != nil && s.held {
			i := (n - 1) * side
			m.h[i] = m.heldAt(side, i, tau)
		}
	}
	m.look(m.h)
	m.flows(m.f0, tau)
	for i := range m.rate {
		m.rate[i] = m.f0[i] / m.w[i]
	}
	for side, s := range m.skins {
		if s != nil && s.held {
			m.rate[(n-1)*side] = 0
		}
	}
	m.fresh = true
}

// newtonK is how small the last correction of a temperature must be, K; what is left is its square.
const newtonK = 1e-5

// solve finds w·h = b + a·F(h) at tau, from h on; it says whether it did.
func (m *lineMarch) solve(h, b []float64, a, tau float64) bool {
	n := len(h)
	for try := 0; try < 14; try++ {
		m.look(h)
		slope := m.flows(m.delta, tau)
		for i := range h {
			m.delta[i] = b[i] + a*m.delta[i] - m.w[i]*h[i]
			m.diag[i] = m.w[i]
		}
		for i := 0; i < n-1; i++ {
			l := &m.links[i]
			x, y := a*l.g*m.du[i], a*l.g*m.du[i+1]
			if l.joint {
				x, y = a*l.g*m.dt[i], a*l.g*m.dt[i+1]
			}
			m.diag[i] += x
			m.diag[i+1] += y
			m.up[i], m.low[i+1] = -y, -x
		}
		m.diag[0] -= a * slope[0]
		m.diag[n-1] -= a * slope[1]
		for side, s := range m.skins {
			if s != nil && s.held {
				i := (n - 1) * side
				m.diag[i], m.delta[i] = 1, m.heldAt(side, i, tau)-h[i]
				if side == 0 && n > 1 {
					m.up[0] = 0
				} else {
					m.low[i] = 0
				}
			}
		}
		m.factor()
		m.back(m.delta)
		worst := 0.0
		for i, d := range m.delta {
			h[i] += d
			worst = max(worst, math.Abs(d*m.dt[i]))
		}
		if worst < newtonK {
			return true
		}
		if math.IsNaN(worst) {
			return false
		}
	}
	return false
}

// factor brings the three diagonals to a form that back uses.
func (m *lineMarch) factor() {
	m.diag[0] = 1 / m.diag[0]
	for i := 1; i < len(m.diag); i++ {
		m.low[i] *= m.diag[i-1]
		m.diag[i] = 1 / (m.diag[i] - m.low[i]*m.up[i-1])
	}
}

func (m *lineMarch) back(y []float64) {
	n := len(y)
	for i := 1; i < n; i++ {
		y[i] -= m.low[i] * y[i-1]
	}
	y[n-1] *= m.diag[n-1]
	for i := n - 2; i >= 0; i-- {
		y[i] = (y[i] - m.up[i]*y[i+1]) * m.diag[i]
	}
}

// try makes one step of length d from tau; it gives an estimate of its error, K, and +Inf where Newton's method found nothing. The state
// changes only by accept.
func (m *lineMarch) try(tau, d float64) float64 {
	a := trGamma / 2 * d
	copy(m.h1, m.h)
	if !m.fresh {
		for i, r := range m.rate {
			m.h1[i] += trGamma * d * r
		}
	}
	for i := range m.b {
		m.f0[i] = m.w[i] * m.rate[i]
		m.b[i] = m.w[i]*m.h[i] + a*m.f0[i]
	}
	if !m.solve(m.h1, m.b, a, tau+trGamma*d) {
		return math.Inf(1)
	}
	q1 := m.qs[0] + m.qs[1]
	a1 := 1 / (trGamma * (2 - trGamma))
	for i := range m.b {
		m.f1[i] = (m.w[i]*m.h1[i] - m.b[i]) / a
		m.b[i] = m.w[i] * (a1*m.h1[i] - (a1-1)*m.h[i])
		m.h2[i] = m.h[i] + (m.h1[i]-m.h[i])/trGamma
	}
	if !m.solve(m.h2, m.b, a, tau+d) {
		return math.Inf(1)
	}
	_ = q1
	c := 2 * trErrorK * d
	for i := range m.delta {
		m.f2[i] = (m.w[i]*m.h2[i] - m.b[i]) / a
		m.delta[i] = c * (m.f0[i]/trGamma - m.f1[i]/(trGamma*(1-trGamma)) + m.f2[i]/(1-trGamma))
	}
	m.back(m.delta)
	worst := 0.0
	for i, e := range m.delta {
		worst = max(worst, math.Abs(e*m.dt[i]))
	}
	return worst
}

// accept makes the last try the state.
func (m *lineMarch) accept() {
	m.h, m.h2 = m.h2, m.h
	for i := range m.rate {
		m.rate[i] = m.f2[i] / m.w[i]
	}
	for side, s := range m.skins {
		if s != nil && s.held {
			m.rate[(len(m.rate)-1)*side] = 0
		}
	}
	m.fresh = false
}

// keep writes the state into a track.
func (m *lineMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	m.look(m.h)
	copy(c, m.temp)
	for i := range slope {
		slope[i] = m.rate[i] * m.dt[i]
	}
}

// fill starts at one temperature.
func (m *lineMarch) fill(c float64) {
	for i := range m.h {
		m.h[i] = m.laws[m.food[i]].heat(c)
	}
}

func (m *lineMarch) surround(skins func(*Face) *skin) {
	m.skins = [2]*skin{nil, skins(m.upper)}
	if m.kind == planeFull {
		m.skins[0] = skins(m.lower)
	}
}

// firstS is the time in which heat crosses the volume at the face.
func (m *lineMarch) firstS() float64 {
	if len(m.x) == 1 {
		return 1
	}
	n := len(m.x) - 1
	d := m.x[n] - m.x[n-1]
	return 0.2 * d * d / (m.du[n] + 1e-9)
}

func (m *lineMarch) span() (low, high float64) {
	m.look(m.h)
	low, high = m.temp[0], m.temp[0]
	for _, c := range m.temp {
		low, high = min(low, c), max(high, c)
	}
	return low, high
}

func (m *lineMarch) save() {
	m.kept = append(append(m.kept[:0], m.h...), m.rate...)
}

func (m *lineMarch) restore() {
	n := len(m.h)
	copy(m.h, m.kept[:n])
	copy(m.rate, m.kept[n:])
}

func (m *lineMarch) touches(k *skin) (nodes []int) {
	for side, s := range m.skins {
		if s == k {
			nodes = append(nodes, (len(m.x)-1)*side)
		}
	}
	return nodes
}
