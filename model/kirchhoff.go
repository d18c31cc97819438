package model

import "math"

// uLaw is the law of a food read the other way round: by the Kirchhoff integral u, W/m, which is smooth in time and place where a front of ice
// passes; the heat content is not.
type uLaw struct {
	warm, cold uPiece // u ≥ 0 and u < 0
}

// uPiece is a table from u = 0 on, downwards for the cold one. Its rows grow with the distance from 0, uRowsPerOctave to each doubling of
// 1 + |u|/first, so that the place in it is read off the number's own bits. The last row goes on in a straight line.
type uPiece struct {
	per  float64 // 1/first, m/W; negative for the cold piece
	rows []uRow
}

// uRow holds cubics over a row in its own coordinate 0…1: of the heat content, its integral over u from the start of the row on, and the
// temperature.
type uRow struct {
	from, per float64    // W/m, m/W
	g         float64    // ∫h du from 0 to the row, J·W/m⁴
	h, sum, t [4]float64 // J/m³; J·W/m⁴, from the first power on; °C
}

// makeURow makes a row that begins at from, is d wide, both W/m, and has the integral g, J·W/m⁴, before it.
func makeURow(from, d, g float64, h, t [4]float64) uRow {
	return uRow{from: from, per: 1 / d, g: g, h: h, t: t, sum: [4]float64{d * h[0], d * h[1] / 2, d * h[2] / 3, d * h[3] / 4}}
}

// end gives the integral of the heat content where a row ends, J·W/m⁴.
func (r *uRow) end() (g float64) { return r.g + r.sum[0] + r.sum[1] + r.sum[2] + r.sum[3] }

// straightOn is the straight line on which a cubic over 0…1 goes on from its end.
func straightOn(c [4]float64) [4]float64 {
	return [4]float64{c[0] + c[1] + c[2] + c[3], c[1] + 2*c[2] + 3*c[3]}
}

const (
	uRowBits       = 3
	uRowsPerOctave = 1 << uRowBits
	// uFirst is the u at which rows have grown to twice the first, W/m: of some hundredths of a degree.
	uFirst = 0.02
)

// byU is the law by u, tabled when it is first asked for.
func (l *law) byU() *uLaw {
	if l.otherWay == nil {
		l.readByU()
	}
	return l.otherWay
}

func (l *law) readByU() {
	end := func(p *piece) float64 { return l.kirchhoff(float64(len(p.rows)) / p.per) }
	l.otherWay = &uLaw{l.pieceByU(end(&l.warm)), l.pieceByU(end(&l.cold))}
}

// pieceByU tables the law from u = 0 to end.
func (l *law) pieceByU(end float64) uPiece {
	sign := math.Copysign(1, end)
	start := func(row int) float64 { // 1 + |u|/uFirst rises by uRowsPerOctave even parts to its next double
		octave, part := row/uRowsPerOctave, row%uRowsPerOctave
		return sign * uFirst * (math.Ldexp(1+float64(part)/uRowsPerOctave, octave) - 1)
	}
	n := 1
	for math.Abs(start(n)) < math.Abs(end) {
		n++
	}
	type point struct{ h, t, dh, dt float64 }
	at := func(h float64) point {
		t, _, dt, du := l.at(h)
		return point{h, t, 1 / du, dt / du}
	}
	p := uPiece{per: sign / uFirst, rows: make([]uRow, n+1)}
	a := at(sign * 1e-9) // beside the freezing point
	a.h = 0
	g := 0.0
	for i := range n {
		from, to := start(i), start(i+1)
		d := to - from
		b := at(l.heatAtU(to, a.h+a.dh*d))
		p.rows[i] = makeURow(from, d, g, steadyCubic(a.h, b.h, a.dh*d, b.dh*d), steadyCubic(a.t, b.t, a.dt*d, b.dt*d))
		g, a = p.rows[i].end(), b
	}
	last := &p.rows[n-1]
	p.rows[n] = makeURow(start(n), 1/last.per, g, straightOn(last.h), straightOn(last.t))
	return p
}

// steadyCubic gives the coefficients of a cubic from a to b over 0…1 with slopes da and db, or less where it would turn (Fritsch & Carlson 1980, SIAM
// J. Numer. Anal. 17:238-246): beside a bend.
func steadyCubic(a, b, da, db float64) [4]float64 {
	steep := func(slope float64) float64 {
		if most := 3 * (b - a); math.Abs(slope) > math.Abs(most) {
			return most
		}
		return slope
	}
	return cubic(a, b, steep(da), steep(db))
}

// heatAtU gives the heat content of a Kirchhoff integral, by Newton's method from a heat content of the same sign.
func (l *law) heatAtU(u, h float64) float64 {
	for range 60 {
		_, v, _, dv := l.at(h)
		next := h + (u-v)/dv
		if next*u < 0 {
			next = h / 2
		}
		if math.Abs(next-h) <= 1e-14*math.Abs(h) {
			return next
		}
		h = next
	}
	return h
}

// row finds the row of a Kirchhoff integral and the place in it.
func (b *uLaw) row(u float64) (*uRow, float64) {
	p := &b.warm
	if u < 0 {
		p = &b.cold
	}
	i := int(math.Float64bits(1+u*p.per)>>(52-uRowBits)) - 1023<<uRowBits
	if uint(i) >= uint(len(p.rows)) {
		i = len(p.rows) - 1
	}
	r := &p.rows[i]
	return r, (u - r.from) * r.per
}

// sums gives the integral of the heat content over u from 0 to the place x of a row, J·W/m⁴, and the heat content there, J/m³.
func (r *uRow) sums(x float64) (g, h float64) {
	return r.g + x*(r.sum[0]+x*(r.sum[1]+x*(r.sum[2]+x*r.sum[3]))), r.h[0] + x*(r.h[1]+x*(r.h[2]+x*r.h[3]))
}

// mean gives the mean heat content over u - d to u + d, J/m³, with its slopes by u and by d.
func (b *uLaw) mean(u, d float64) (h, byU, byD float64) {
	r, x := b.row(u - d)
	s, y := b.row(u + d)
	if r == s {
		c := &r.h
		x, y = (x+y)*0.5, d*r.per
		y2 := y * y * (1. / 3)
		bend := c[2] + 3*c[3]*x
		return c[0] + x*(c[1]+x*(c[2]+x*c[3])) + y2*bend, (c[1] + x*(2*c[2]+x*3*c[3]) + y2*3*c[3]) * r.per, 2 * (1. / 3) * y * bend * r.per
	}
	g0, h0 := r.sums(x)
	g1, h1 := s.sums(y)
	half := 0.5 / d
	h = (g1 - g0) * half
	return h, (h1 - h0) * half, (h1+h0)*half - 2*h*half
}

// temperature gives that at u, °C, and its slope, K·m/W.
func (b *uLaw) temperature(u float64) (t, dt float64) {
	r, x := b.row(u)
	c := &r.t
	return c[0] + x*(c[1]+x*(c[2]+x*c[3])), (c[1] + x*(2*c[2]+x*3*c[3])) * r.per
}
