package model

import "math"

// fluxTable holds a flux over the surface temperature in cubic pieces, which meet with value and slope. A piece is made when it is first
// asked for, and cut into narrower ones where a cubic does not follow the flux: at the kinks between two laws.
type fluxTable struct {
	fromC, width, perK float64 // pieces of width K from fromC on; perK = 1/width
	count              int
	pieces             []fluxPiece // count of them; nil until the first is asked for: many a table never is
	depth              int
	of                 func(surfaceC, d float64) (w, slope float64) // d: half width of the difference for the slope, K; 0: no slope is needed
}

// fluxPiece is w = c[0] + x (c[1] + x (c[2] + x c[3])), x in K from its lower end.
type fluxPiece struct {
	c     [4]float64
	lower float64
	ready bool
	finer *fluxTable
}

const (
	tableFromC, tableToC = -50, 110 // °C: at the least
	tableBeyondK         = 10       // beyond the medium
	tableWidthK          = 2        // dry; else tableMoistK
	tableMoistK          = 1
	tableFiner           = 4    // pieces that one is cut into
	tableDepth           = 9    // the narrowest pieces are a few µK wide
	tableClose           = 4e-7 // largest error of a cubic, by the flux and what a K changes of it
)

func newFluxTable(fromC, width float64, pieces, depth int, of func(surfaceC, d float64) (w, slope float64)) *fluxTable {
	return &fluxTable{fromC: fromC, width: width, perK: 1 / width, depth: depth, of: of, count: pieces}
}

// at gives flux and slope.
func (t *fluxTable) at(surfaceC float64) (w, slope float64) {
	x := (surfaceC - t.fromC) * t.perK
	if !(x >= 0 && x < float64(len(t.pieces))) {
		if !(x >= 0 && x < float64(t.count)) {
			return t.of(surfaceC, slopeK)
		}
		t.pieces = make([]fluxPiece, t.count)
	}
	p := &t.pieces[int(x)]
	for !p.ready {
		if p.finer == nil {
			t.cut(int(x))
			continue
		}
		t = p.finer
		x = min(max((surfaceC-t.fromC)*t.perK, 0), tableFiner-0.5) // round-off at its ends must not leave it
		p = &t.pieces[int(x)]
	}
	return p.at(surfaceC - p.lower)
}

// at gives flux and slope x K above the lower end.
func (p *fluxPiece) at(x float64) (w, slope float64) {
	return p.c[0] + x*(p.c[1]+x*(p.c[2]+x*p.c[3])), p.c[1] + x*(2*p.c[2]+3*x*p.c[3])
}

// cut makes a piece out of values and slopes at its ends, and holds it against the flux between them.
func (t *fluxTable) cut(i int) {
	p := &t.pieces[i]
	a, l := t.fromC+float64(i)*t.width, t.width
	d := min(slopeK, l/16)
	var wa, sa, wb, sb float64
	if i > 0 && t.pieces[i-1].ready {
		wa, sa = t.pieces[i-1].at(l)
	} else {
		wa, sa = t.of(a, d)
	}
	if i+1 < len(t.pieces) && t.pieces[i+1].ready {
		wb, sb = t.pieces[i+1].at(0)
	} else {
		wb, sb = t.of(t.fromC+float64(i+1)*t.width, d)
	}
	rise := (wb - wa) / l
	p.lower, p.c = a, [4]float64{wa, sa, (3*rise - 2*sa - sb) / l, (sa + sb - 2*rise) / (l * l)}
	p.ready = true
	if t.depth == 0 {
		return
	}
	for _, part := range []float64{0.21, 0.5, 0.79} {
		x := part * l
		w, _ := t.of(a+x, 0)
		if got, _ := p.at(x); math.Abs(got-w) > tableClose*(math.Abs(w)+math.Abs(sa)) {
			p.ready = false
			p.finer = newFluxTable(a, l/tableFiner, tableFiner, t.depth-1, t.of)
			p.finer.pieces = make([]fluxPiece, tableFiner)
			return
		}
	}
}

// clear forgets all pieces.
func (t *fluxTable) clear() { clear(t.pieces) }

// tabulate makes the table of a medium that stays as it is.
func (s *skin) tabulate() {
	if len(s.course.y) > 1 {
		s.nowS = math.NaN()
		return
	}
	s.table = s.newTable()
}

// manyPlaces is from how many places on a table is cheaper than the flux itself.
const manyPlaces = 30

// seen makes ready for looks at so many places at a time.
func (s *skin) seen(places int) {
	if s.table == nil && s.brief == nil && s.law == nil && !s.linear && places >= manyPlaces {
		s.brief = s.newTable()
	}
}

// newTable makes a table without pieces.
func (s *skin) newTable() *fluxTable {
	of := func(c, _ float64) (w, slope float64) { return s.law(c, 0) }
	if s.law == nil {
		if len(s.course.y) == 1 {
			s.now = s.around(0)
		}
		of = func(c, d float64) (w, slope float64) {
			if d == 0 {
				return s.direct(c, &s.now), 0
			}
			return s.sloped(c, &s.now, d)
		}
	}
	low, high := float64(tableFromC), float64(tableToC)
	for _, c := range s.course.y {
		low, high = min(low, math.Floor(c-tableBeyondK)), max(high, c+tableBeyondK)
	}
	width := float64(tableWidthK)
	if s.moist || s.law != nil {
		width = tableMoistK
	}
	return newFluxTable(low, width, int(math.Ceil((high-low)/width)), tableDepth, of)
}
