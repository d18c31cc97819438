package rules

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"slowpoint/model"
)

// The periods that are counted are those that are measured: of drawn courses that touch a region, dip out of it for an instant and pass it between two
// knots, straight between their knots and not.
func TestPeriodsAreThoseOfStay(t *testing.T) {
	draw := rand.New(rand.NewPCG(7, 11))
	some := map[int]bool{}
	for range 3000 {
		p, at := path{}, 0.0
		for range 3 + draw.IntN(20) {
			p.t = append(p.t, at)
			p.c = append(p.c, []float64{10, 10 + 1e-10, 10 - 1e-10, 20, 8 + 14*draw.Float64(), 8 + 14*draw.Float64()}[draw.IntN(6)])
			at += []float64{60, 1, 1e-5, 1e-7, 1e-10}[draw.IntN(5)]
		}
		if draw.IntN(2) == 0 { // bent between the knots by up to a tenth of a kelvin
			straight := path{t: p.t, c: p.c}
			bend := 0.2 * (draw.Float64() - 0.5)
			p.at = func(t float64) float64 {
				i := min(max(1, len(p.t)-1), max(1, slices.IndexFunc(p.t, func(x float64) bool { return x >= t })))
				s := (t - p.t[i-1]) / (p.t[i] - p.t[i-1])
				return straight.value(t) + bend*4*s*(1-s)
			}
		}
		ivs := []interval{{p.t[0], p.t[len(p.t)-1]}}
		if n := draw.IntN(len(p.t)); n > 0 {
			ivs = []interval{{p.t[0], p.t[n]}, {p.t[n], p.t[len(p.t)-1]}}
		}
		for _, r := range []region{between(10, 20), atOrBelow(10), above(10), atOrAbove(20), {lo: 10, hi: 10 + 1e-9, slack: sameK}} {
			n := p.periods(ivs, r)
			if want := p.stay(ivs, r).count; n != want {
				t.Fatalf("%v in %v: %d periods, %d by how long they are", p.c, r, n, want)
			}
			some[n] = true
		}
	}
	for n := range 5 {
		if !some[n] {
			t.Errorf("no course with %d periods was drawn", n)
		}
	}
}

// The exact course of a place is the same to the bit whether or not it was looked at by the instants of the scan before, and however often and for whatever
// part of the chain it is asked for.
func TestExactCourseIsTheSameWhateverWasAsked(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.04}, 5, filmStep(model.Cook, 40, 95, 30), filmStep(model.Rest, 12, 21, 7), filmStep(model.Cool, 100, 2, 25))
	x := model.Axes{0.0123}
	all, part := interval{0, h.EndS()}, interval{h.Spans[1].StartS, h.Spans[2].EndS}
	want := map[interval]path{all: newCourses(h).path(h.PlaceAt(x), all), part: newCourses(h).path(h.PlaceAt(x), part)}
	v := newView(&Limit{}, newCourses(h))
	scan := v.exactly(x)
	for _, iv := range []interval{part, all, part, part, all} {
		got := v.c.path(h.PlaceAt(x), iv)
		if !slices.Equal(got.t, want[iv].t) || !slices.Equal(got.c, want[iv].c) {
			t.Errorf("from %g s to %g s: %d knots of %d, or others", iv.a, iv.b, len(got.t), len(want[iv].t))
		}
		mid := (iv.a + iv.b) / 2.1
		if a, b := got.at(mid), want[iv].at(mid); a != b || scan.at(mid) != b {
			t.Errorf("at %g s: %v and %v, want %v", mid, a, scan.at(mid), b)
		}
		if math.IsNaN(got.nodes(iv.a, iv.b)[2]) {
			t.Error("no nodes")
		}
	}
}

// A course is followed by the middles of all stretches, of the halves of those that bend, of theirs, and so on, each once and in their order.
func TestRefineHalvesWhatBends(t *testing.T) {
	at := func(t float64) float64 { return 60*math.Exp(-t/7) + 3*math.Sin(t/40) }
	var halved func(a, b float64, depth int) []float64 // the knots between two instants
	deepest := 0
	halved = func(a, b float64, depth int) []float64 {
		m := (a + b) / 2
		deepest = max(deepest, depth)
		if math.Abs(at(m)-(at(a)+at(b))/2) <= 0.04 || b-a <= 0.1 { // straightK, 2·leastS
			return []float64{m}
		}
		return append(append(halved(a, m, depth+1), m), halved(m, b, depth+1)...)
	}
	times := []float64{0, 0.04, 5, 30, 90, 91, 400}
	var c, want []float64
	for i, x := range times {
		c, want = append(c, at(x)), append(want, x)
		if i+1 < len(times) && times[i+1]-x > 0.05 { // leastS
			want = append(want, halved(x, times[i+1], 1)...)
		}
	}
	p := refine(times, c, func(t, out []float64) {
		for i, x := range t {
			out[i] = at(x)
		}
	}, at)
	if !slices.Equal(p.t, want) || deepest < 5 {
		t.Errorf("knots %v, want %v; %d levels", p.t, want, deepest)
	}
	for i, x := range p.t {
		if p.c[i] != at(x) {
			t.Errorf("%g °C at %g s, want %g", p.c[i], x, at(x))
		}
	}
}
