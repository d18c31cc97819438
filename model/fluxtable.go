package model

import "math"

// fluxTable holds a flux over the surface temperature in cubic pieces, which meet with value and slope. A piece is made when it is first
// asked for, and cut into narrower ones where a cubic does not follow the flux: at the kinks between two laws.
type fluxTable struct {
	fromC, width, perK float64 // pieces of width K from fromC on; perK = 1/width
	pieces             []fluxPiece
	depth              int
	of                 func(surfaceC, d float64) (w, slope float64) // d: half width of a difference, K
}

// fluxPiece is w = c[0] + x (c[1] + x (c[2] + x c[3])), x in K from its lower end.
type fluxPiece struct {
	c     [4]float64
	lower float64
	ready bool
	finer *fluxTable
}

const (
	tableFromC, tableToC = -120, 520 // °C: beyond what a plan may hold
	tableWidthK          = 2
	tableFiner           = 8    // pieces that one is cut into
	tableDepth           = 6    // the narrowest pieces are 2 K / 8^6 wide
	tableClose           = 2e-7 // largest error of a cubic, by the flux + 1 W/m²
)

func newFluxTable(fromC, toC, width float64, depth int, of func(surfaceC, d float64) (w, slope float64)) *fluxTable {
	return &fluxTable{fromC: fromC, width: width, perK: 1 / width, depth: depth, of: of,
		pieces: make([]fluxPiece, int(math.Round((toC-fromC)/width)))}
}

// at gives flux and slope.
func (t *fluxTable) at(surfaceC float64) (w, slope float64) {
	x := (surfaceC - t.fromC) * t.perK
	if x >= 0 && x < float64(len(t.pieces)) {
		p := &t.pieces[int(x)]
		if p.ready {
			d := surfaceC - p.lower
			return p.c[0] + d*(p.c[1]+d*(p.c[2]+d*p.c[3])), p.c[1] + d*(2*p.c[2]+3*d*p.c[3])
		}
		return t.slow(int(x), surfaceC)
	}
	return t.of(surfaceC, 1e-3)
}

// slow makes a piece, or goes on in the narrower ones.
func (t *fluxTable) slow(i int, surfaceC float64) (w, slope float64) {
	p := &t.pieces[i]
	if p.finer == nil {
		t.cut(i)
		if p.ready {
			return t.at(surfaceC)
		}
	}
	f := p.finer // round-off at its ends must not leave it
	x := min(max((surfaceC-f.fromC)*f.perK, 0), float64(len(f.pieces))-0.5)
	if q := &f.pieces[int(x)]; q.ready {
		d := surfaceC - q.lower
		return q.c[0] + d*(q.c[1]+d*(q.c[2]+d*q.c[3])), q.c[1] + d*(2*q.c[2]+3*d*q.c[3])
	}
	return f.slow(int(x), surfaceC)
}

// cut makes a piece out of values and slopes at its ends, and holds it against the flux between them.
func (t *fluxTable) cut(i int) {
	p := &t.pieces[i]
	a, b, l := t.fromC+float64(i)*t.width, t.fromC+float64(i+1)*t.width, t.width
	d := min(1e-3, l/16)
	wa, sa := t.of(a, d)
	wb, sb := t.of(b, d)
	rise := (wb - wa) / l
	p.lower, p.c = a, [4]float64{wa, sa, (3*rise - 2*sa - sb) / l, (sa + sb - 2*rise) / (l * l)}
	p.ready = true
	if t.depth == 0 {
		return
	}
	for _, part := range []float64{0.21, 0.5, 0.79} {
		x := part * l
		w, _ := t.of(a+x, 0)
		if got := p.c[0] + x*(p.c[1]+x*(p.c[2]+x*p.c[3])); math.Abs(got-w) > tableClose*(1+math.Abs(w)) {
			p.ready = false
			p.finer = newFluxTable(a, b, l/tableFiner, t.depth-1, t.of)
			return
		}
	}
}

// tabulate makes the table of a medium that stays as it is.
func (s *skin) tabulate() {
	if len(s.course.y) > 1 {
		return
	}
	if s.law != nil {
		s.table = newFluxTable(tableFromC, tableToC, tableWidthK, tableDepth, func(c, _ float64) (w, slope float64) { return s.law(c, 0) })
		return
	}
	s.now = s.around(0)
	s.table = newFluxTable(tableFromC, tableToC, tableWidthK, tableDepth, func(c, d float64) (w, slope float64) {
		if d == 0 {
			return s.direct(c, &s.now), 0
		}
		return s.sloped(c, &s.now, d)
	})
}
