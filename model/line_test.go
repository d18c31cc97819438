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
