package model

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// TestResponseOfHeld: the middle of a body whose surface is held follows by the printed values: of a slab half way at α·t/d² of 0.3788, of
// a cylinder 0.2, of a sphere 0.1388; from the series' first part, which is all that is left there but for less than 1e-3 (Carslaw & Jaeger
// 1959, sections 3.4, 7.6 and 9.3; from memory).
func TestResponseOfHeld(t *testing.T) {
	for _, c := range []struct {
		name       string
		bends      float64
		first, sq  float64 // weight and square of the first root
		fo, behind float64
	}{
		{"slab", 1, 4 / math.Pi, math.Pi * math.Pi / 4, 0.38, 0.001},
		{"cylinder", 2, 1.6020, 5.7832, 0.30, 0.001},
		{"sphere", 3, 2, math.Pi * math.Pi, 0.21, 0.001},
	} {
		const decay = 1700.0
		r := newResponse([]direction{{bends: c.bends, decayS: decay, biot: math.Inf(1)}}, decay/c.sq)
		want := 1 - c.first*math.Exp(-c.sq*c.fo)
		if got := r.in(r.came[0], c.fo*decay); math.Abs(got-want) > c.behind {
			t.Errorf("%s: %.5f, want %.5f", c.name, got, want)
		}
		if got := r.Turn(0, 50*decay); math.Abs(got-rounded) > 0.01 {
			t.Errorf("%s: from one extreme to the other it moves by %.3f of the range", c.name, got)
		}
	}
}

// TestResponse: the exact model never turns away from its straight line by more, with surroundings that jump between the extremes at drawn
// instants behind a film or a surface that is held, nor comes nearer to the coldest and the hottest than the slowest part allows; and it comes
// near both.
func TestResponse(t *testing.T) {
	const lo, hi = 0.0, 90.0
	rng := rand.New(rand.NewPCG(5, 19))
	props := Properties{KWmK: 0.47, RhoKgM3: 1060, CJkgK: 3500}
	food := &Material{Name: "invented", Source: "invented", Props: func(float64) Properties { return props }, Waterless: true}
	for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar, Brick} {
		turned, left := 0.0, 0.0
		for range 25 {
			size := func() float64 { return 0.02 + 0.08*rng.Float64() }
			p := Product{Name: "drawn", Shape: shape, Food: food, StartC: lo + (hi-lo)*float64(rng.IntN(2)), Size: Size{ThicknessM: size(), WidthM: size(), LengthM: size(), DiameterM: size()}}
			film := 5 * math.Pow(200, rng.Float64())
			q, ok := Quickest(&p, nil, lo, hi, film)
			if !ok || q.Follows == nil {
				t.Fatal(shape.Name, "is not known")
			}
			c := lo + hi - p.StartC
			var steps []Step
			for range 4 {
				on := film * (0.3 + 0.7*math.Round(rng.Float64())) // no more than said
				steps = append(steps, Step{Name: "step", Stage: Cook, DurationS: q.SettleS * (0.1 + 2*rng.Float64()), Exposure: Exposure{Surface: Film, FilmW: &on, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}})
				c = lo + hi - c
			}
			h, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(shape.Name, err)
			}
			dt := q.SettleS / 40
			n := int(h.EndS() / dt)
			times, temps := make([]float64, n), make([]float64, n)
			for i := range times {
				times[i] = dt * float64(i)
			}
			h.Course(Place{}, times, temps)
			early := func(i int) bool { // within the first instants of a step the sum of modes swings by some tenths of a degree, where the middle stands still
				return slices.ContainsFunc(h.Spans, func(sp Span) bool { return times[i] >= sp.StartS && times[i] < sp.StartS+dt })
			}
			for i := range temps {
				for w := 1; i+w < n; w *= 2 {
					after := dt * float64(w)
					for _, b := range []int{0, w, 3 * w} {
						if i < b || early(i) || early(i+w) || early(i-b) {
							continue
						}
						line := temps[i]
						if b > 0 {
							line += (temps[i] - temps[i-b]) * float64(w) / float64(b)
						}
						share := math.Max(0, math.Abs(temps[i+w]-line)-0.02) / ((hi - lo) * q.Follows.Turn(dt*float64(b), after))
						if turned = math.Max(turned, share); share > 1.005 {
							t.Fatalf("%s: %.3f times as far off its line as it can be, by %.3f K, %.0f s after %.0f s, %d before", shape.Name, share, temps[i+w]-line, after, times[i], b)
						}
					}
					for _, end := range []float64{lo, hi} {
						now, then := math.Abs(temps[i]-end), math.Abs(temps[i+w]-end)
						if now < 1 || early(i) || early(i+w) {
							continue
						}
						least := now * math.Exp(-after/q.SettleS*1.0)
						if left = math.Max(left, least/then); least > 1.13*then+0.01 { // a film in between is told up to 12 % too slow (TestQuickestBehindFilm)
							t.Fatalf("%s: %.3f K from %g °C, and no less than %.3f K can be", shape.Name, then, end, least)
						}
					}
				}
			}
		}
		if turned < 0.5 || left < 0.8 {
			t.Errorf("%s: no more than %.2f of the turn and %.2f of the distance that are said", shape.Name, turned, left)
		}
	}
}

// TestFollowsNot: where ice may form the heat content bends too much for a response, and nothing is said of it.
func TestFollowsNot(t *testing.T) {
	food := &Material{Name: "invented", Source: "invented", Props: func(c float64) Properties {
		if c < -5 {
			return Properties{KWmK: 1.5, RhoKgM3: 1000, CJkgK: 2000}
		}
		return Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 4000}
	}}
	p := Product{Shape: Slab, Food: food, Size: Size{ThicknessM: 0.05}}
	for _, c := range []struct {
		lo   float64
		says bool
	}{{0, true}, {-20, false}} {
		if q, ok := Quickest(&p, nil, c.lo, 80, 60); !ok || (q.Follows != nil) != c.says {
			t.Errorf("from %g °C: %+v", c.lo, q)
		}
	}
}
