package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// A medium that turns warm for two minutes between samples leaves a warm layer inside the surface: though the surface loses heat at every
// sample, the hottest place is there and no longer in the centre.
func TestSamplesSeeWhatHappenedBetweenThem(t *testing.T) {
	w := 200.0
	air := Course{Name: "door", TimesS: []float64{0}, C: []float64{2}}
	for at := 600.0; at < 7000; at += 600 { // warm until half a minute before a sample
		for i, c := range []float64{2, 95, 95, 2} {
			air.TimesS, air.C = append(air.TimesS, at-[]float64{160, 150, 40, 30}[i]), append(air.C, c)
		}
	}
	air.TimesS, air.C = append(air.TimesS, 7200), append(air.C, 2)
	for _, shape := range []*Shape{Slab, Cylinder, Sphere} {
		p := Product{Shape: shape, StartC: 30, Size: Size{ThicknessM: 0.06, DiameterM: 0.06},
			Food: &Material{Name: "test", Source: "input of the test", Waterless: true, Props: func(float64) Properties { return testFood }}}
		h, err := Solve(p, []Step{{Stage: Cool, DurationS: 7200, Exposure: Exposure{Surface: Film, FilmW: &w, Medium: air}}}, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s := h.Sample(600)
		inside := 0
		for k, at := range s.TimesS {
			hottest, place := math.Inf(-1), 0.0
			for x := 0.0; x <= 1; x += 1.0 / 400 {
				if c := h.At(Place{UpM: 0.03 * x}, at); c > hottest {
					hottest, place = c, x
				}
			}
			if place > 0.2 {
				inside++
			}
			if math.Abs(s.Hottest[k]-hottest) > 0.002 {
				t.Errorf("%s at %g s: hottest %.4f °C at %.1f mm, there is %.4f °C at %.1f mm", shape.Name, at, s.Hottest[k], 1000*s.HottestAt[k].UpM, hottest, 30*place)
			}
		}
		if inside < 3 {
			t.Errorf("%s: the hottest place lay in a warm layer at %d samples only: the case does not show what it should", shape.Name, inside)
		}
	}
}

// Random courses, on each face its own where there are two, at samples from every minute to every half hour: no place is colder or
// hotter than the two of the samples.
func TestSamplesOfOneAxisHoldAllPlaces(t *testing.T) {
	rnd := rand.New(rand.NewPCG(7, 3))
	between := func(a, b float64) float64 { return a + (b-a)*rnd.Float64() }
	const long = 5400.0
	surroundings := func() Exposure {
		w := between(3, 250)
		m := Course{Name: "air", TimesS: []float64{0}, C: []float64{between(0, 95)}}
		for at := 0.0; rnd.IntN(4) > 0 && at < long; {
			at += between(30, 1500)
			m.TimesS, m.C = append(m.TimesS, at), append(m.C, between(0, 95))
		}
		if last := m.TimesS[len(m.TimesS)-1]; last < long && len(m.TimesS) > 1 {
			m.TimesS, m.C = append(m.TimesS, long), append(m.C, between(0, 95))
		}
		if rnd.IntN(8) == 0 {
			return Exposure{Surface: Insulated}
		}
		return Exposure{Surface: Film, FilmW: &w, Medium: m}
	}
	for trial := range 250 {
		shape := []*Shape{Slab, Slab, Cylinder, Sphere}[trial%4]
		r := between(0.008, 0.06)
		p := Product{Shape: shape, StartC: between(2, 90), Size: Size{ThicknessM: 2 * r, DiameterM: 2 * r},
			Food: &Material{Name: "test", Source: "input of the test", Waterless: true, Props: func(float64) Properties { return testFood }}}
		var steps []Step
		for _, stage := range []*Stage{Cook, Cool} {
			st := Step{Stage: stage, DurationS: between(900, long), Exposure: surroundings()}
			if trial%4 == 1 {
				st.Faces = []FaceExposure{{Face: Underside, Exposure: surroundings()}}
			}
			steps = append(steps, st)
		}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s := h.Sample([]float64{60, 300, 1800}[rnd.IntN(3)])
		low := -1.0
		if shape != Slab {
			low = 0
		}
		allowed := 2*h.ErrorK + 0.002
		for k, at := range s.TimesS {
			for x := low; x <= 1; x += 1.0 / 120 {
				c := h.At(Place{UpM: r * x}, at)
				if at > 0 && (c < s.Coldest[k]-allowed || c > s.Hottest[k]+allowed) {
					t.Fatalf("trial %d, %s of %.0f mm at %.0f s: %.4f °C at %.1f mm, outside coldest %.4f at %.1f mm to hottest %.4f at %.1f mm", trial, shape.Name, 2000*r, at, c,
						1000*r*x, s.Coldest[k], 1000*s.ColdestAt[k].UpM, s.Hottest[k], 1000*s.HottestAt[k].UpM)
				}
			}
		}
	}
}

// A slab in one medium with another film on each face: the coldest place of a cook and the hottest of a chill move inside it. At every
// sample they are at the temperatures named, and no place beside them or anywhere else is colder or hotter.
func TestExtremeInsideASlabIsFollowed(t *testing.T) {
	rnd := rand.New(rand.NewPCG(11, 5))
	between := func(a, b float64) float64 { return a + (b-a)*rnd.Float64() }
	inside := 0
	for trial := range 80 {
		r := between(0.01, 0.06)
		p := Product{Shape: Slab, StartC: between(2, 40), Size: Size{ThicknessM: 2 * r},
			Food: &Material{Name: "test", Source: "input of the test", Waterless: true, Props: func(float64) Properties { return testFood }}}
		var steps []Step
		for i, stage := range []*Stage{Cook, Cool} {
			above, below := between(5, 150), between(5, 150)
			air := Course{Name: "air", TimesS: []float64{0}, C: []float64{[]float64{between(90, 180), between(0, 15)}[i]}}
			if trial%3 == 1 { // it settles
				air.TimesS, air.C = []float64{0, 900, 7200}, []float64{air.C[0] + []float64{-20, 20}[i], air.C[0], air.C[0]}
			}
			e := func(w *float64) Exposure { return Exposure{Surface: Film, FilmW: w, Medium: air} }
			steps = append(steps, Step{Stage: stage, DurationS: between(1800, 7200), Exposure: e(&above), Faces: []FaceExposure{{Face: Underside, Exposure: e(&below)}}})
		}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s := h.Sample([]float64{17, 60, 240}[trial%3])
		for k, at := range s.TimesS {
			for _, e := range []struct {
				c, x, sign float64
			}{{s.Coldest[k], s.ColdestAt[k].UpM, 1}, {s.Hottest[k], s.HottestAt[k].UpM, -1}} {
				if math.Abs(e.x) < 0.999*r {
					inside++
				}
				if c := h.At(Place{UpM: e.x}, at); math.Abs(c-e.c) > 1e-6 {
					t.Fatalf("trial %d at %.0f s: %.3f mm is at %.8f °C, named with %.8f", trial, at, 1000*e.x, c, e.c)
				}
				if at < 60 { // before that nothing is promised, and the field is not smooth
					continue
				}
				for _, x := range []float64{e.x - 0.01*r, e.x + 0.01*r, r * between(-1, 1)} {
					if c := h.At(Place{UpM: max(-r, min(r, x))}, at); e.sign*(c-e.c) < -1e-4 {
						t.Fatalf("trial %d at %.0f s: %.3f mm is at %.7f °C, beyond %.7f at %.3f mm", trial, at, 1000*x, c, e.c, 1000*e.x)
					}
				}
			}
		}
	}
	if inside < 5000 {
		t.Errorf("only %d extremes lay inside: the case does not show what it should", inside)
	}
}
