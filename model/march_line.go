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

// Nodes stand closer at a face than at the centre, by e to this power: of one axis; of cylinders and spheres, where the last ice goes fastest in
// the middle; and of more axes, which are stepped explicitly and pay for the closest.
const lineCrowd, roundCrowd, cutCrowd = 2.4, 1, 1.1

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
	if p.Shape.Layered() {
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

// power is that of the radius in the area of a surface within.
func (g *lineGrid) power() float64 {
	return map[axisKind]float64{radial: 1, spherical: 2}[g.kind]
}

// moments gives the means of the distance from x, m, and of its square, m², over the volume between two places.
func (g *lineGrid) moments(x, a, b float64) (first, second float64) {
	e := g.power()
	power := func(n float64) float64 { return (math.Pow(b, n) - math.Pow(a, n)) / n }
	mean := func(n float64) float64 { return power(e+1+n) / power(e+1) } // of the place to the power n
	m1 := mean(1)
	return m1 - x, mean(2) - 2*x*m1 + x*x
}

// part makes the volumes and links of the nodes that were added since the last part.
func (g *lineGrid) part(food int) {
	first := len(g.w)
	last := len(g.x) - 1
	e := g.power()
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
//
// The unknown is the Kirchhoff integral u at the nodes, which is smooth where a front of ice passes; the heat content is not. That of a volume is
// the mean over the u in it: about the mean of a parabola through the node and its neighbours, a quarter of the difference between those below it
// to as much above. So a front passes through a volume evenly, and no node turns in an instant.
type lineMarch struct {
	*lineGrid
	laws         []*law
	lower, upper *Face
	skins        [2]*skin // lower, upper; the lower one is nil at a centre of symmetry
	kept         []float64
	// by node: half of the u within its volume, by the difference of its neighbours', and the weights of the differences from the node to the one
	// before and the one after it in the mean u of its volume
	spread, fore, aft []float64

	h, u, rate                []float64 // heat contents, J/m³, Kirchhoff integrals, W/m, and what flows in, W/m³, now
	c, slope, uRate           []float64 // temperatures, °C, with their slopes, K/s, and those of u, W/(m·s), now
	rate2, c2, slope2, uRate2 []float64 // after the last try
	h1, h2, u1, u2            []float64
	b, f0, f1                 []float64  // W/m²
	mean, meanU, meanF, meanA []float64  // of the last look: mean heat content, its slopes by u, and by that of the node before and of the node after
	temp, tempU               []float64  // of the last look, at faces and joints: temperature, its slope by u
	low, diag, up, delta      []float64  // the three diagonals and the right side
	qs                        [2]float64 // flow over each face at the end of the last solve, W/m²: of the equations that were solved, so that what comes in is what is gained
	q0, q2                    float64    // flow over both faces now and after the last try, W/m²
	tryJ, inJ                 float64    // heat that came in over the faces in the last try, and since the start, J/m²
	sharp                     bool       // ice forms at one temperature in a layer
	closeK                    float64    // a correction so small ends Newton's method, K
	fresh                     bool       // no step since the surroundings changed: nothing to guess from
}

func newLineMarch(g *lineGrid, laws []*law) *lineMarch {
	m := &lineMarch{lineGrid: g, laws: laws, closeK: newtonK}
	n := len(g.x)
	for _, s := range []*[]float64{&m.spread, &m.fore, &m.aft, &m.h, &m.u, &m.rate, &m.c, &m.slope, &m.uRate, &m.rate2, &m.c2, &m.slope2, &m.uRate2,
		&m.h1, &m.h2, &m.u1, &m.u2, &m.b, &m.f0, &m.f1, &m.mean, &m.meanU, &m.meanF, &m.meanA, &m.temp, &m.tempU, &m.low, &m.diag, &m.up, &m.delta} {
		*s = make([]float64, n)
	}
	for _, p := range g.parts {
		if laws[g.food[p[0]]].sharp() { // a volume turns at once, when the front passes its node
			m.sharp, m.closeK = true, newtonSharpK
			continue
		}
		m.within(p)
	}
	return m
}

// within fills the weights of the nodes of a layer: those of a parabola through a node and its neighbours, and of a straight line at the ends and
// in the first two volumes below a face, where a parabola would overshoot just after a change.
func (m *lineMarch) within(p [2]int) {
	if p[0] == p[1] {
		return
	}
	from := m.x[p[0]]
	for i := p[0]; i <= p[1]; i++ {
		to := m.x[i]
		if i < p[1] {
			to = (m.x[i] + m.x[i+1]) / 2
		}
		m.spread[i] = 0.25
		first, second := m.moments(m.x[i], from, to)
		switch i {
		case p[0]:
			m.aft[i] = first / (m.x[i+1] - m.x[i])
		case p[1]:
			m.fore[i] = -first / (m.x[i] - m.x[i-1])
		default:
			before, after := m.x[i]-m.x[i-1], m.x[i+1]-m.x[i]
			deep := float64(p[1] - i)
			if m.kind == planeFull {
				deep = min(deep, float64(i-p[0]))
			}
			second *= max(0, min(1, (deep-1)/2)) // from the second volume to the third
			m.fore[i] = (second - after*first) / (before * (before + after))
			m.aft[i] = (second + before*first) / (after * (before + after))
		}
		from = to
	}
	if m.kind != planeFull && p[0] == 0 { // flat at a centre of symmetry
		e := m.power()
		m.spread[0], m.aft[0] = 0.125, (e+1)/(4*(e+3))
	}
}

// The numbers of the scheme: gamma is how far the first part goes.
var (
	trGamma  = 2 - math.Sqrt2
	trErrorK = (-3*trGamma*trGamma + 4*trGamma - 2) / (12 * (2 - trGamma))
)

// leastSpread is the least half spread of u in a volume, W/m: of some millionths of a degree.
const leastSpread = 1e-6

// look reads mean heat contents of the volumes with their slopes, and temperatures where flows need them: at faces and joints.
func (m *lineMarch) look(u []float64) {
	n := len(u)
	mean, meanU, meanF, meanA := m.mean[:n], m.meanU[:n], m.meanF[:n], m.meanA[:n]
	wFore, wAft, spread := m.fore[:n], m.aft[:n], m.spread[:n]
	for _, p := range m.parts {
		l := m.laws[m.food[p[0]]].byU()
		fore, aft := 0.0, 0.0
		for i := p[0]; i <= p[1]; i++ {
			x := u[i]
			if fore, aft = -aft, 0; i < p[1] {
				aft = u[i+1] - x
			}
			f, a := wFore[i], wAft[i]
			sign := spread[i]
			d := (aft - fore) * sign
			if d < 0 {
				d, sign = -d, -sign
			}
			if d < leastSpread {
				d, sign = leastSpread, 0
			}
			h, slope, wide := l.mean(x+f*fore+a*aft, d)
			wide *= sign
			mean[i], meanF[i], meanA[i] = h, slope*f-wide, slope*a+wide
			meanU[i] = slope * (1 - f - a)
		}
		if p[0] < p[1] { // their only neighbour
			meanU[p[0]] += meanF[p[0]]
			meanU[p[1]] += meanA[p[1]]
			meanF[p[0]], meanA[p[1]] = 0, 0
		}
		for _, i := range p {
			m.temp[i], m.tempU[i] = l.temperature(u[i])
		}
	}
}

// flows fills f with what flows into every volume, W/m², at u, from the last look, at tau s into the step, and the slopes of the faces' flows by u.
func (m *lineMarch) flows(f, u []float64, tau float64) (slope [2]float64) {
	n := len(f)
	u, links := u[:n], m.links[:n-1]
	in := 0.0
	for i := range links {
		l := &links[i]
		q := l.g * (u[i+1] - u[i])
		if l.joint {
			q = l.g * (m.temp[i+1] - m.temp[i])
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
		m.qs[side], slope[side] = q, d*m.tempU[i]
	}
	return slope
}

// heldAt gives the Kirchhoff integral of a face that is kept at its medium.
func (m *lineMarch) heldAt(side, i int, tau float64) float64 {
	l := m.laws[m.food[i]]
	return l.kirchhoff(l.heat(m.skins[side].mediumC(tau)))
}

// begin takes the state over at a change of surroundings, tau s into the step.
func (m *lineMarch) begin(tau float64) {
	n := len(m.h)
	for side, s := range m.skins {
		if s != nil && s.held {
			i := (n - 1) * side
			m.u[i] = m.heldAt(side, i, tau)
		}
	}
	m.look(m.u)
	m.flows(m.f0, m.u, tau)
	for i := range m.rate {
		m.rate[i] = m.f0[i] / m.w[i]
	}
	for side, s := range m.skins {
		if s != nil && s.held {
			i := (n - 1) * side
			m.h[i], m.rate[i] = m.mean[i], 0
		}
	}
	m.q0 = m.qs[0] + m.qs[1]
	m.fresh = true
	m.read(m.u, m.c, m.slope)
	m.rates(m.rate, m.slope, m.uRate, tau)
}

// Newton's method ends with a correction this small, K; where ice forms all but at one temperature with a smaller one, and with one whose square is
// where nothing freezes or melts or where it comes to its end ever faster.
const newtonK, newtonSharpK, newtonSmoothK = 1e-3, 1e-4, 5e-3

// unfrozenK is the conductivity that turns Kirchhoff integrals into temperatures where only their size counts, W/(m·K): below that of any
// food that freezes, so that temperatures come out large.
const unfrozenK = 0.2

// solve finds the u of w·h(u) = b + a·F(u) at tau, from u on, and h; it says whether it did.
func (m *lineMarch) solve(u, h, b []float64, a, tau float64) bool {
	n := len(u)
	links, w := m.links[:n-1], m.w[:n]
	delta, diag, low, up := m.delta[:n], m.diag[:n], m.low[:n], m.up[:n]
	mean, meanU, meanF, meanA := m.mean[:n], m.meanU[:n], m.meanF[:n], m.meanA[:n]
	worst := math.Inf(1)
	for try := 0; try < 20; try++ {
		m.look(u)
		slope := m.flows(delta, u, tau)
		below := 0.0 // what the node before takes
		for i, q := range delta {
			delta[i] = b[i] + a*q - w[i]*mean[i]
			diag[i] = w[i]*meanU[i] + below
			if i == n-1 {
				break
			}
			l := &links[i]
			if l.joint {
				x := a * l.g * m.tempU[i]
				below = a * l.g * m.tempU[i+1]
				diag[i] += x
				up[i], low[i+1] = -below, -x
				continue
			}
			x := a * l.g
			below = x
			diag[i] += x
			up[i] = w[i]*meanA[i] - x
			low[i+1] = w[i+1]*meanF[i+1] - x
		}
		m.diag[0] -= a * slope[0]
		m.diag[n-1] -= a * slope[1]
		for side, s := range m.skins {
			if s != nil && s.held {
				i := (n - 1) * side
				m.diag[i], m.delta[i] = 1, m.heldAt(side, i, tau)-u[i]
				if side == 0 && n > 1 {
					m.up[0] = 0
				} else {
					m.low[i] = 0
				}
			}
		}
		m.factor(m.delta)
		last, bent := worst, false
		worst = 0
		for i, d := range delta {
			x := u[i] + d
			u[i] = x
			bent = bent || x < 0
			counts := 1 / unfrozenK
			if x := meanU[i] * heatCounts; x > counts {
				counts = x
			}
			if d = math.Abs(d) * counts; !(d <= worst) {
				if worst = d; math.IsNaN(d) {
					return false
				}
			}
		}
		m.qs[0] += slope[0] * m.delta[0]
		m.qs[1] += slope[1] * m.delta[n-1]
		if worst < m.closeK || worst < newtonSmoothK && (!bent || !m.sharp && worst < last/10) {
			m.contents(h, u)
			return true
		}
	}
	return false
}

// contents fills h with the heat contents that the last linear equations were solved for.
func (m *lineMarch) contents(h, u []float64) {
	n := len(h)
	mean, meanU, meanF, meanA, delta := m.mean[:n], m.meanU[:n], m.meanF[:n], m.meanA[:n], m.delta[:n]
	before, here := 0.0, delta[0]
	for i := range h {
		after := 0.0 // the first and last volume of a layer do not go with those beyond it
		if i+1 < n {
			after = delta[i+1]
		}
		h[i] = mean[i] + meanU[i]*here + meanF[i]*before + meanA[i]*after
		before, here = here, after
	}
}

// factor brings the three diagonals to a form that back uses, and solves them for y on the way. It goes from both ends to the middle at once: each
// row waits for the one before it, and so two wait at a time.
func (m *lineMarch) factor(y []float64) {
	n := len(y)
	low, diag, up := m.low[:n], m.diag[:n], m.up[:n]
	mid := (n - 1) / 2
	d, p := 0.0, 0.0 // of the row before, from either end
	if mid > 0 {
		d, p = 1/diag[0], y[0]
		diag[0] = d
	}
	e, q := 0.0, 0.0
	if n > 1 {
		e, q = 1/diag[n-1], y[n-1]
		diag[n-1] = e
	}
	j := n - 2
	if n%2 == 0 && j > mid {
		u := up[j] * e
		e, q = 1/(diag[j]-u*low[j+1]), y[j]-u*q
		up[j], diag[j], y[j] = u, e, q
		j--
	}
	for i := 1; i < mid; i++ {
		l, u := low[i]*d, up[j]*e
		d, e = 1/(diag[i]-l*up[i-1]), 1/(diag[j]-u*low[j+1])
		p, q = y[i]-l*p, y[j]-u*q
		low[i], diag[i], y[i] = l, d, p
		up[j], diag[j], y[j] = u, e, q
		j--
	}
	pivot := diag[mid]
	if mid > 0 {
		l := low[mid] * d
		pivot -= l * up[mid-1]
		y[mid] -= l * p
		low[mid] = l
	}
	if n > 1 {
		u := up[mid] * e
		pivot -= u * low[mid+1]
		y[mid] -= u * q
		up[mid] = u
	}
	diag[mid] = 1 / pivot
	m.outwards(y)
}

// outwards finishes what factor and back have brought to the middle row.
func (m *lineMarch) outwards(y []float64) {
	n := len(y)
	low, diag, up := m.low[:n], m.diag[:n], m.up[:n]
	mid := (n - 1) / 2
	p := y[mid] * diag[mid]
	q := p
	y[mid] = p
	j := mid + 1
	for i := mid - 1; i >= 0; i-- {
		p, q = (y[i]-up[i]*p)*diag[i], (y[j]-low[j]*q)*diag[j]
		y[i], y[j] = p, q
		j++
	}
	if j < n {
		y[j] = (y[j] - low[j]*q) * diag[j]
	}
}

// back solves the factored diagonals for y.
func (m *lineMarch) back(y []float64) {
	n := len(y)
	low, up := m.low[:n], m.up[:n]
	mid := (n - 1) / 2
	for i := 1; i <= mid; i++ {
		y[i] -= low[i] * y[i-1]
	}
	for j := n - 2; j >= mid; j-- {
		y[j] -= up[j] * y[j+1]
	}
	m.outwards(y)
}

// try makes one step of length d from tau; it gives an estimate of its error, K, and +Inf where Newton's method found nothing. The state
// changes only by accept.
func (m *lineMarch) try(tau, d float64) float64 {
	a := trGamma / 2 * d
	n := len(m.h)
	w, h, u, h1, u1, h2, u2, b := m.w[:n], m.h[:n], m.u[:n], m.h1[:n], m.u1[:n], m.h2[:n], m.u2[:n], m.b[:n]
	f0, f1, rate, rate2, delta := m.f0[:n], m.f1[:n], m.rate[:n], m.rate2[:n], m.delta[:n]
	copy(u1, u)
	if !m.fresh {
		for i, r := range m.uRate[:n] {
			u1[i] += trGamma * d * r
		}
	}
	for i, r := range rate {
		f0[i] = w[i] * r
		b[i] = w[i]*h[i] + a*f0[i]
	}
	if !m.solve(u1, h1, b, a, tau+trGamma*d) {
		return math.Inf(1)
	}
	a1, perA := 1/(trGamma*(2-trGamma)), 1/a
	m.tryJ = a1 * a * (m.q0 + m.qs[0] + m.qs[1])
	for i, x := range h1 {
		f1[i] = (w[i]*x - b[i]) * perA
		b[i] = w[i] * (a1*x - (a1-1)*h[i])
		u2[i] = u[i] + (u1[i]-u[i])*(1/trGamma)
	}
	if !m.solve(u2, h2, b, a, tau+d) {
		return math.Inf(1)
	}
	m.q2 = m.qs[0] + m.qs[1]
	m.tryJ += a * m.q2
	c := 2 * trErrorK * d
	c0, c1, c2 := c/trGamma, c/(trGamma*(1-trGamma)), c/(1-trGamma)
	for i, x := range h2 {
		f := (w[i]*x - b[i]) * perA
		delta[i] = c0*f0[i] - c1*f1[i] + c2*f
		rate2[i] = f / w[i]
	}
	m.unheld(delta) // no error
	m.unheld(rate2)
	m.back(delta)
	m.read(u2, m.c2, m.slope2)
	worst := 0.0
	for i, e := range delta {
		counts := m.slope2[i]
		if x := m.meanU[i] * heatCounts; x > counts {
			counts = x
		}
		if e = math.Abs(e) * counts; !(e <= worst) {
			if worst = e; math.IsNaN(e) {
				return math.Inf(1)
			}
		}
	}
	m.rates(rate2, m.slope2, m.uRate2, tau+d)
	if m.fresh {
		return worst
	}
	worst = max(worst, m.between(d)*betweenCounts)
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

// between is how far the first part of a step of length d lies from the cubic between its ends, which the track keeps, K.
func (m *lineMarch) between(d float64) float64 {
	at := cubicAt(0, trGamma, d)
	worst := 0.0
	c, slope, c2, slope2 := m.c[:len(m.u1)], m.slope[:len(m.u1)], m.c2[:len(m.u1)], m.slope2[:len(m.u1)]
	for _, p := range m.parts {
		l := m.laws[m.food[p[0]]].byU()
		for i := p[0]; i <= p[1]; i++ {
			t, _ := l.temperature(m.u1[i])
			if off := math.Abs(t - (at.c0*c[i] + at.s0*slope[i] + at.c1*c2[i] + at.s1*slope2[i])); !(off <= worst) {
				worst = off
			}
		}
	}
	return worst
}

// unheld leaves no rate and no error to faces that are kept at their medium.
func (m *lineMarch) unheld(rate []float64) {
	for side, s := range m.skins {
		if s != nil && s.held {
			rate[(len(rate)-1)*side] = 0
		}
	}
}

// betweenCounts is what the distance of the first part of a step from the cubic between its ends, which the track keeps, counts as an error.
const betweenCounts = 0.6

// heatCounts is what an error of the heat content counts at least, m³·K/J: half of what it is worth in unfrozen food of 3.6 MJ/(m³·K). Freezing
// food hides it, and it would come out as a wrong time when the food has frozen or thawed.
const heatCounts = 0.5 / 3.6e6

// accept makes the last try the state.
func (m *lineMarch) accept(k *track, t float64) {
	m.h, m.h2 = m.h2, m.h
	m.u, m.u2 = m.u2, m.u
	m.q0, m.inJ = m.q2, m.inJ+m.tryJ
	m.rate, m.rate2 = m.rate2, m.rate
	m.c, m.c2 = m.c2, m.c
	m.slope, m.slope2 = m.slope2, m.slope
	m.uRate, m.uRate2 = m.uRate2, m.uRate
	m.fresh = false
	m.keep(k, t)
}

// turn does nothing: each step stands by itself.
func (m *lineMarch) turn(float64) {}

// keep writes the temperatures of the state into a track, with the slopes that the flows give them.
func (m *lineMarch) keep(k *track, t float64) {
	c, slope := k.add(t)
	copy(c, m.c)
	copy(slope, m.slope)
}

// read fills c with the temperatures at u, and slope with their slopes by u, K·m/W.
func (m *lineMarch) read(u, c, slope []float64) {
	for _, p := range m.parts {
		l := m.laws[m.food[p[0]]].byU()
		for i := p[0]; i <= p[1]; i++ {
			c[i], slope[i] = l.temperature(u[i])
		}
	}
}

// rates fills uRate with what rate, W/m³, makes of u in a second, tau s into the step, and makes slopes of temperatures by u slopes in time; held
// faces go as their media do. How heat contents go with u is that of the last look, which was at u or within what Newton's method leaves of it.
func (m *lineMarch) rates(rate, slope, uRate []float64, tau float64) {
	n := len(rate)
	copy(m.delta, rate)
	copy(m.diag, m.meanU)
	copy(m.up, m.meanA)
	copy(m.low, m.meanF)
	for side, s := range m.skins {
		if s != nil && s.held {
			i := (n - 1) * side
			m.diag[i], m.up[i], m.low[i] = 1, 0, 0
			from := max(0, tau-1)
			m.delta[i] = m.heldAt(side, i, from+1) - m.heldAt(side, i, from)
		}
	}
	m.factor(m.delta)
	copy(uRate, m.delta)
	for i, r := range uRate[:n] {
		slope[i] *= r
	}
}

// fill starts at one temperature.
func (m *lineMarch) fill(c float64) {
	for i := range m.h {
		l := m.laws[m.food[i]]
		m.h[i] = l.heat(c)
		m.u[i] = l.kirchhoff(m.h[i])
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
	return 0.2 * d * d * m.meanU[n]
}

func (m *lineMarch) span() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for i, u := range m.u {
		c, _ := m.laws[m.food[i]].byU().temperature(u)
		low, high = min(low, c), max(high, c)
	}
	return low, high
}

func (m *lineMarch) save(float64) {
	m.kept = m.kept[:0]
	for _, x := range [][]float64{m.h, m.rate, m.u, m.c, m.slope, m.uRate} {
		m.kept = append(m.kept, x...)
	}
	m.kept = append(m.kept, m.q0, m.inJ)
}

func (m *lineMarch) restore() {
	n := len(m.h)
	for i, x := range [][]float64{m.h, m.rate, m.u, m.c, m.slope, m.uRate} {
		copy(x, m.kept[i*n:])
	}
	m.q0, m.inJ = m.kept[len(m.kept)-2], m.kept[len(m.kept)-1]
}

func (m *lineMarch) touches(k *skin) (nodes []int) {
	for side, s := range m.skins {
		if s == k {
			nodes = append(nodes, (len(m.x)-1)*side)
		}
	}
	return nodes
}
