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

// Nodes stand closer at a face than at the centre, by e to this power: of one axis, and of more, which are stepped explicitly and pay for the
// closest.
const lineCrowd, cutCrowd = 2.4, 1.1

// depths gives the depths below a face of n+1 nodes, m, from 0 to r.
func depths(r float64, n int, crowd float64) []float64 {
	d := make([]float64, n+1)
	for j := range d {
		d[j] = r * math.Expm1(crowd*float64(j)/float64(n)) / math.Expm1(crowd)
	}
	d[n] = r
	return d
}

// newLineGrid makes a grid of about n volumes on the half thickness or radius.
func newLineGrid(p *Product, kind axisKind, r float64, n int, crowd float64) *lineGrid {
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
		d := depths(r, n, crowd)
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
		d := depths(l.ThicknessM/2, half, crowd)
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
	h1, h2               []float64
	b, f0, f1, f2        []float64  // W/m²
	temp, dt, u, du      []float64  // of the last look: temperature, its slope by h, Kirchhoff integral, its slope by h
	low, diag, up, delta []float64  // the three diagonals and the right side
	qs                   [2]float64 // flow over each face at the end of the last solve, W/m²: of the equations that were solved, so that what comes in is what is gained
	q0, q2               float64    // flow over both faces now and after the last try, W/m²
	tryJ, inJ            float64    // heat that came in over the faces in the last try, and since the start, J/m²
	fresh                bool       // no step since the surroundings changed: nothing to guess from
}

func newLineMarch(g *lineGrid, laws []*law) *lineMarch {
	m := &lineMarch{lineGrid: g, laws: laws}
	n := len(g.x)
	for _, s := range []*[]float64{&m.h, &m.rate, &m.h1, &m.h2, &m.b, &m.f0, &m.f1, &m.f2, &m.temp, &m.dt, &m.u, &m.du, &m.low, &m.diag, &m.up, &m.delta} {
		*s = make([]float64, n)
	}
	return m
}

// The numbers of the scheme: gamma is how far the first part goes.
var (
	trGamma  = 2 - math.Sqrt2
	trErrorK = (-3*trGamma*trGamma + 4*trGamma - 2) / (12 * (2 - trGamma))
)

// look reads Kirchhoff integrals of heat contents, and temperatures where flows need them: at faces and joints.
func (m *lineMarch) look(h []float64) {
	if len(m.laws) == 1 {
		l := m.laws[0]
		for i, x := range h {
			m.u[i], m.du[i] = l.slide(x)
		}
	} else {
		for i, x := range h {
			m.u[i], m.du[i] = m.laws[m.food[i]].slide(x)
		}
	}
	for _, p := range m.parts {
		for _, i := range p {
			m.temp[i], _, m.dt[i], _ = m.laws[m.food[i]].at(h[i])
		}
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
	m.q0 = m.qs[0] + m.qs[1]
	m.fresh = true
}

// Newton's method ends with a correction this small, K, or, where no node passed its freezing point, with one whose square is.
const newtonK, newtonSmoothK = 1e-5, 2e-3

// unfrozenK is the conductivity that turns Kirchhoff integrals into temperatures where only their size counts, W/(m·K): below that of any
// food that freezes, so that temperatures come out large.
const unfrozenK = 0.2

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
		m.factor(m.delta)
		worst, passed := 0.0, false
		for i, d := range m.delta {
			was := h[i]
			h[i] = was + d
			passed = passed || (was < 0) != (h[i] < 0)
			if d = math.Abs(d * m.du[i]); !(d <= worst) {
				if worst = d; math.IsNaN(d) {
					return false
				}
			}
		}
		worst /= unfrozenK
		m.qs[0] += slope[0] * m.delta[0]
		m.qs[1] += slope[1] * m.delta[n-1]
		if worst < newtonK || worst < newtonSmoothK && !passed {
			return true
		}
	}
	return false
}

// factor brings the three diagonals to a form that back uses, and solves them for y on the way.
func (m *lineMarch) factor(y []float64) {
	n := len(y)
	low, diag, up := m.low[:n], m.diag[:n], m.up[:n]
	d := 1 / diag[0]
	diag[0] = d
	last := y[0]
	for i := 1; i < n; i++ {
		l := low[i] * d
		low[i] = l
		d = 1 / (diag[i] - l*up[i-1])
		diag[i] = d
		last = y[i] - l*last
		y[i] = last
	}
	last *= d
	y[n-1] = last
	for i := n - 2; i >= 0; i-- {
		last = (y[i] - up[i]*last) * diag[i]
		y[i] = last
	}
}

// back solves the factored diagonals for y.
func (m *lineMarch) back(y []float64) {
	n := len(y)
	low, diag, up := m.low[:n], m.diag[:n], m.up[:n]
	last := y[0]
	for i := 1; i < n; i++ {
		last = y[i] - low[i]*last
		y[i] = last
	}
	last *= diag[n-1]
	y[n-1] = last
	for i := n - 2; i >= 0; i-- {
		last = (y[i] - up[i]*last) * diag[i]
		y[i] = last
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
	a1 := 1 / (trGamma * (2 - trGamma))
	m.tryJ = a1 * a * (m.q0 + m.qs[0] + m.qs[1])
	for i := range m.b {
		m.f1[i] = (m.w[i]*m.h1[i] - m.b[i]) / a
		m.b[i] = m.w[i] * (a1*m.h1[i] - (a1-1)*m.h[i])
		m.h2[i] = m.h[i] + (m.h1[i]-m.h[i])/trGamma
	}
	if !m.solve(m.h2, m.b, a, tau+d) {
		return math.Inf(1)
	}
	m.q2 = m.qs[0] + m.qs[1]
	m.tryJ += a * m.q2
	c := 2 * trErrorK * d
	for i := range m.delta {
		m.f2[i] = (m.w[i]*m.h2[i] - m.b[i]) / a
		m.delta[i] = c * (m.f0[i]/trGamma - m.f1[i]/(trGamma*(1-trGamma)) + m.f2[i]/(1-trGamma))
	}
	m.back(m.delta)
	worst := 0.0
	for i, e := range m.delta {
		if e = math.Abs(e) * max(m.laws[m.food[i]].thin(m.h2[i]), heatCounts); !(e <= worst) {
			if worst = e; math.IsNaN(e) {
				return math.Inf(1)
			}
		}
	}
	return worst
}

// heatCounts is what an error of the heat content counts at least, m³·K/J: half of what it is worth in unfrozen food of 3.6 MJ/(m³·K). Freezing
// food hides it, and it would come out as a wrong time when the food has frozen or thawed.
const heatCounts = 0.5 / 3.6e6

// accept makes the last try the state.
func (m *lineMarch) accept(k *track, t float64) {
	m.h, m.h2 = m.h2, m.h
	m.q0, m.inJ = m.q2, m.inJ+m.tryJ
	for i := range m.rate {
		m.rate[i] = m.f2[i] / m.w[i]
	}
	for side, s := range m.skins {
		if s != nil && s.held {
			m.rate[(len(m.rate)-1)*side] = 0
		}
	}
	m.fresh = false
	m.keep(k, t)
}

// keep writes the state into a track.
func (m *lineMarch) keep(k *track, t float64) {
	h, slope := k.add(t)
	copy(h, m.h)
	copy(slope, m.rate)
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
	low, high = math.Inf(1), math.Inf(-1)
	for i, h := range m.h {
		c := m.laws[m.food[i]].temperature(h)
		low, high = min(low, c), max(high, c)
	}
	return low, high
}

func (m *lineMarch) save(float64) {
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

func (m *lineMarch) keepsHeat() []*law {
	out := make([]*law, len(m.food))
	for i, f := range m.food {
		out[i] = m.laws[f]
	}
	return out
}
