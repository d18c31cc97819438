package report

import (
	"math"
	"strings"

	"slowpoint/model"
)

// moves says in words how the coldest and the hottest place move: taken from the field, so that --every changes nothing.
func (x *sheet) moves() string {
	if len(x.p.Samples.ColdestAt) == 0 || x.p.Product.Shape.Mixed() {
		return say("moves stirred")
	}
	if x.p.moved == "" {
		var out []string
		for i := range x.p.History.Spans {
			if s := x.p.movesIn(&x.p.History.Spans[i]); s != "" {
				out = append(out, s)
			}
		}
		x.p.moved = capital(strings.Join(out, "; "))
	}
	all := say("moves sentence", x.p.moved, x.decides.placeName)
	if x.p.Product.Shape.Layered() { // no column tells a pack from a food
		all += say("moves layers")
	}
	return all
}

// moments is how many instants of a step are looked at, the early ones closer to each other; finer is how often the neighbourhood of the
// farthest is looked at again.
const (
	moments = 24
	finer   = 2
)

// movesIn says how the place moves in one step: where it is first and last and, if it goes beyond both by 5 mm or more, the farthest.
func (p *Product) movesIn(sp *model.Span) string {
	heats := heats(sp)
	long := sp.EndS - sp.StartS
	if !(long > 0) {
		return ""
	}
	times := make([]float64, 0, moments)
	for k := 1; k <= moments; k++ { // the field at the start is still that of the step before
		times = append(times, sp.StartS+long*float64(k*k)/(moments*moments))
	}
	places := p.extremesAt(times, heats)
	first, last := places[0], places[len(places)-1]
	far, most := first, 0.0
	for n := 0; ; n++ {
		at := 0
		for i, q := range places {
			if d := beyond(q, first, last); d > most {
				far, most, at = q, d, i
			}
		}
		if n == finer || at == 0 || at == len(places)-1 {
			break
		}
		from, to := times[at-1], times[at+1]
		times = times[:0]
		for k := 0; k <= 8; k++ {
			times = append(times, from+(to-from)*float64(k)/8)
		}
		places = p.extremesAt(times, heats)
	}
	what := say("hottest")
	if heats {
		what = say("coldest")
	}
	a, b, via := p.Product.Where(first), p.Product.Where(last), p.Product.Where(far)
	switch {
	case most >= 0.005 && via != a && via != b:
		return say("moves via", sp.Step.Name, what, a, via, b)
	case a == b:
		return say("moves not", sp.Step.Name, what, a)
	}
	return say("moves", sp.Step.Name, what, a, b)
}

// sameAsCentreK is how near to the centre's temperature the coldest or hottest place is no other place, K: in a food of nearly one temperature
// a tenth of a degree is less than any probe tells, and in one that has just come into other surroundings the inside is still flat to a
// hundredth of the difference from the coldest to the hottest place.
const sameAsCentreK, sameAsCentre = 0.1, 0.01

// extremesAt gives the coldest or the hottest place at each instant; the centre where that is as cold or as hot.
func (p *Product) extremesAt(times []float64, coldest bool) []model.Place {
	s := p.History.SampleAt(append([]float64(nil), times...))
	at, c := s.HottestAt, s.Hottest
	if coldest {
		at, c = s.ColdestAt, s.Coldest
	}
	out := make([]model.Place, len(at))
	for i := range at {
		if !p.centreLike(s, i, c[i]) {
			out[i] = at[i]
		}
	}
	return out
}

// centreLike tells whether the coldest or hottest temperature of a sample, °C, is the centre's as well as can be told.
func (p *Product) centreLike(s model.Samples, i int, c float64) bool {
	least := max(sameAsCentreK, p.History.ErrorK, sameAsCentre*(s.Hottest[i]-s.Coldest[i]))
	return len(s.Points) > 0 && i < len(s.Points[0]) && math.Abs(s.Points[0][i]-c) < least
}

// beyond is how far a place lies outside of the box between two others, m.
func beyond(q, a, b model.Place) float64 {
	most := 0.0
	for _, x := range [][3]float64{{q.UpM, a.UpM, b.UpM}, {q.AcrossM, a.AcrossM, b.AcrossM}, {q.AlongM, a.AlongM, b.AlongM}} {
		most = math.Max(most, math.Max(x[0]-math.Max(x[1], x[2]), math.Min(x[1], x[2])-x[0]))
	}
	return most
}
