package model

import (
	"math"
	"sort"
)

// law is what a food does with heat, as functions of its heat content h in J/m³, which is 0 at the freezing point (at 0 °C where nothing
// freezes): the temperature, and the Kirchhoff integral u = ∫k dT in W/m, 0 at the same place. Both rise strictly. Heat content is what is
// conserved, so no latent heat can be lost between two temperatures, however long a time step is.
//
// Above 100 °C a food has the properties that it has there, since it holds no water above it (typed tables: above their last row).
type law struct {
	zeroC      float64 // temperature at which h and u are 0, °C
	warm, cold piece   // h ≥ 0 and h < 0
	lowC       float64 // coldest temperature that the tables know, °C
	otherWay   *uLaw   // see byU
}

// piece is a table over evenly spaced heat contents from 0 on, downwards for the cold one; each row is a cubic through its two ends with
// their slopes. Beyond the last row everything goes on in a straight line.
type piece struct {
	per  float64 // rows per J/m³; negative for the cold piece
	rows []lawRow
}

// lawRow holds the cubics of temperature and Kirchhoff integral over a row, in its own coordinate 0…1.
type lawRow struct{ t, u [4]float64 }

// Where the tables end, °C: no oven is hotter, no freezer colder.
const (
	hottestC = 400
	coldestC = -80
)

// boilingLimitC is the temperature above which a food keeps its properties.
const boilingLimitC = 100

// newLaw makes the law of a food with a factor on its conductivity. Its tables have rows so many that temperatures are right to 1e-5 K.
func newLaw(m *Material, factor float64) *law {
	l := &law{lowC: coldestC}
	top := float64(boilingLimitC)
	if m.LowC != 0 || m.HighC != 0 {
		top, l.lowC = min(top, m.HighC), m.LowC
		if m.Table {
			top = m.HighC
		}
	}
	props := func(c float64) (k, rhoC float64) {
		p := m.Props(max(l.lowC, min(c, top)))
		return p.KWmK * factor, p.RhoKgM3 * p.CJkgK
	}
	switch {
	case m.FreezingC != nil && m.EnthalpyJkg != nil:
		l.zeroC = *m.FreezingC
		rho := m.Props(l.zeroC).RhoKgM3
		base := m.EnthalpyJkg(l.zeroC)
		l.cold = tabulate(l.zeroC, min(l.lowC, l.zeroC-1), 256, props, func(c float64) float64 { return rho * (m.EnthalpyJkg(c) - base) })
		l.warm = tabulate(l.zeroC, hottestC, 192, props, nil)
	case constant(m):
		l.cold, l.warm = tabulate(l.zeroC, coldestC, 1, props, nil), tabulate(l.zeroC, hottestC, 1, props, nil)
	default:
		l.cold, l.warm = tabulate(l.zeroC, coldestC, 64, props, nil), tabulate(l.zeroC, hottestC, 192, props, nil)
	}
	return l
}

// constant tells whether a food has the same properties at all temperatures: its law is straight, and one row is all of it.
func constant(m *Material) bool {
	if m.LowC != 0 || m.HighC != 0 || m.Table || m.EnthalpyJkg != nil {
		return false
	}
	p := m.Props(0)
	for c := float64(coldestC); c <= hottestC; c += 9 {
		if m.Props(c) != p {
			return false
		}
	}
	return true
}

// knotsOf spaces temperatures from one end of a piece to the other: close where a food thaws.
func knotsOf(from, to float64) []float64 {
	var out []float64
	for c, d := from, 0.02; ; c += math.Copysign(d, to-from) {
		if (to-c)*(to-from) <= 0 {
			return append(out, to)
		}
		out = append(out, c)
		d = min(d*1.1, 1)
	}
}

// tabulate makes a piece from zeroC to endC, in one row where the properties are constant. heat gives the heat content where a formula for it exists; else ρc is integrated.
func tabulate(zeroC, endC float64, rows int, props func(c float64) (k, rhoC float64), heat func(c float64) float64) piece {
	at := []float64{zeroC, endC}
	if rows > 1 {
		at = knotsOf(zeroC, endC)
	}
	h, u := make([]float64, len(at)), make([]float64, len(at))
	down := endC < zeroC
	inside := func(c float64) float64 { // the properties on this side of the freezing point, where they jump
		if down {
			return min(c, zeroC-1e-9)
		}
		return max(c, zeroC)
	}
	between := func(a, b float64) (dh, du float64) {
		for _, q := range gauss5 {
			k, rc := props(inside(a + (b-a)*q.x))
			dh, du = dh+q.w*(b-a)*rc, du+q.w*(b-a)*k
		}
		return dh, du
	}
	for i := 1; i < len(at); i++ {
		dh, du := between(at[i-1], at[i])
		h[i], u[i] = h[i-1]+dh, u[i-1]+du
		if heat != nil {
			h[i] = heat(at[i])
		}
	}
	end := h[len(h)-1]
	type point struct{ t, u, dt, du float64 }
	points := make([]point, rows+1)
	for r := range points {
		want := end * float64(r) / float64(rows)
		i := sort.Search(len(h)-2, func(i int) bool { return math.Abs(h[i+1]) >= math.Abs(want) })
		c := at[i] + (at[i+1]-at[i])*(want-h[i])/(h[i+1]-h[i])
		var dh, du, k, rc float64
		for try := 0; try < 20; try++ {
			if heat == nil {
				dh, du = between(at[i], c)
			} else {
				dh = heat(c) - h[i]
			}
			k, rc = props(inside(c))
			off := (want - h[i] - dh) / rc
			if math.Abs(off) < 1e-12 {
				break
			}
			c += off
		}
		if heat != nil {
			_, du = between(at[i], c)
		}
		points[r] = point{c, u[i] + du, 1 / rc, k / rc}
	}
	p := piece{per: float64(rows) / end, rows: make([]lawRow, rows)}
	for r := range p.rows {
		a, b := points[r], points[r+1]
		d := 1 / p.per
		p.rows[r] = lawRow{cubic(a.t, b.t, a.dt*d, b.dt*d), cubic(a.u, b.u, a.du*d, b.du*d)}
	}
	return p
}

// gauss5 is the Gauss-Legendre rule with 5 points on 0…1.
var gauss5 = gauss(5)

// cubic gives the coefficients of the cubic from a to b with slopes da and db over 0…1.
func cubic(a, b, da, db float64) [4]float64 {
	return [4]float64{a, da, 3*(b-a) - 2*da - db, 2*(a-b) + da + db}
}

// row finds the row of a heat content and the place in it; beyond the last row the place is above 1.
func (l *law) row(h float64) (*lawRow, float64, float64) {
	p := &l.warm
	if h < 0 {
		p = &l.cold
	}
	x, i := h*p.per, len(p.rows)-1
	if x < float64(i) { // not where a try has run off to infinity or to no number: its error shows that, and it is thrown away
		i = int(x)
	}
	return &p.rows[i], x - float64(i), p.per
}

// at gives the temperature, °C, and the Kirchhoff integral, W/m, of a heat content, with their slopes by it.
func (l *law) at(h float64) (t, u, dt, du float64) {
	r, x, per := l.row(h)
	if x > 1 { // beyond the table
		a, b := &r.t, &r.u
		dt, du = a[1]+2*a[2]+3*a[3], b[1]+2*b[2]+3*b[3]
		x--
		return a[0] + a[1] + a[2] + a[3] + dt*x, b[0] + b[1] + b[2] + b[3] + du*x, dt * per, du * per
	}
	a, b := &r.t, &r.u
	return a[0] + x*(a[1]+x*(a[2]+x*a[3])), b[0] + x*(b[1]+x*(b[2]+x*b[3])),
		(a[1] + x*(2*a[2]+x*3*a[3])) * per, (b[1] + x*(2*b[2]+x*3*b[3])) * per
}

// temperature gives that of a heat content, °C.
func (l *law) temperature(h float64) float64 {
	t, _ := l.warmth(h)
	return t
}

// warmth gives the temperature of a heat content, °C, and its slope by it, m³·K/J.
func (l *law) warmth(h float64) (t, dt float64) {
	r, x, per := l.row(h)
	if x > 1 {
		t, _, dt, _ := l.at(h)
		return t, dt
	}
	a := &r.t
	return a[0] + x*(a[1]+x*(a[2]+x*a[3])), (a[1] + x*(2*a[2]+x*3*a[3])) * per
}

// kirchhoff gives the integral of a heat content, W/m.
func (l *law) kirchhoff(h float64) float64 {
	r, x, _ := l.row(h)
	if x > 1 {
		_, u, _, _ := l.at(h)
		return u
	}
	b := &r.u
	return b[0] + x*(b[1]+x*(b[2]+x*b[3]))
}

// kirchhoffs fills out with the integrals, W/m, times per, of the heat contents v times rhoC.
func (l *law) kirchhoffs(v []float64, rhoC, per float64, out []float64) {
	rows, scale := l.warm.rows, rhoC*l.warm.per
	last := float64(len(rows) - 1)
	out = out[:len(v)]
	for i, v := range v {
		x := v * scale
		if x >= 0 && x < last {
			k := int(x)
			b := &rows[k].u
			x -= float64(k)
			out[i] = (b[0] + x*(b[1]+x*(b[2]+x*b[3]))) * per
			continue
		}
		out[i] = l.kirchhoff(v*rhoC) * per
	}
}

// heat gives the heat content of a temperature, J/m³: the inverse of temperature.
func (l *law) heat(c float64) float64 {
	p := &l.warm
	if c < l.zeroC {
		p = &l.cold
	}
	i := sort.Search(len(p.rows)-1, func(i int) bool {
		a := &p.rows[i].t
		return (c-a[0]-a[1]-a[2]-a[3])*p.per <= 0
	})
	h := (float64(i) + 0.5) / p.per
	for range 60 { // Newton's method: the row is all but straight
		t, _, dt, _ := l.at(h)
		next := h + (c-t)/dt
		if math.Abs(next-h) <= 1e-14*math.Abs(h) {
			return next
		}
		h = next
	}
	return h
}

// sharp tells whether ice forms all but at one temperature, as in water: half of what leaves over ten degrees leaves in the first 0.05 K. Marches that
// spread it over volumes find nothing there if the food starts at its freezing point and a face is held; food that freezes from -0.06 °C on is not
// sharp.
func (l *law) sharp() bool { return l.heat(l.zeroC-0.05) < 0.5*l.heat(l.zeroC-10) }
