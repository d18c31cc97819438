package model

import (
	"slices"
	"testing"
)

// What a history keeps for the instants of its scan changes no temperature by a single bit: at these instants, between them, on either side of
// changes; asked one by one, backwards, or as a course.
func TestFadesChangeNothing(t *testing.T) {
	for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Brick, Stirred} {
		t.Run(shape.Name, func(t *testing.T) {
			p, steps := fadingChain(shape)
			plain, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			kept, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			sc := kept.Scan()
			if _, ok := kept.field.(remembers); !ok {
				t.Fatalf("%T keeps nothing", kept.field)
			}
			var times []float64
			for i, at := range sc.TimesS {
				if times = append(times, at); i+1 < len(sc.TimesS) {
					next := sc.TimesS[i+1]
					times = append(times, at+(next-at)*0.3, (at+next)/2)
				}
			}
			want, got := make([]float64, len(times)), make([]float64, len(times))
			for range 2 { // worked out, then as kept
				for i := 0; i < len(sc.Spots); i += 1 + len(sc.Spots)/7 {
					at := sc.Spots[i].Place
					plain.Course(at, times, want)
					kept.Course(at, times, got)
					for k := len(times) - 1; k >= 0; k-- {
						if got[k] != want[k] || kept.At(at, times[k]) != want[k] {
							t.Fatalf("%v at %g s: %v and %v with what is kept, %v without", at, times[k], got[k], kept.At(at, times[k]), want[k])
						}
					}
				}
			}
		})
	}
}

// fadingChain is a shape that is cooked, rests in air that cools, and is chilled. Invented.
func fadingChain(shape *Shape) (Product, []Step) {
	food := &Material{Name: "test food", Source: "test input", Props: func(float64) Properties { return Properties{KWmK: 0.47, RhoKgM3: 1060, CJkgK: 3500} }}
	p := Product{Name: "p", Shape: shape, Food: food, StartC: 6, Size: Size{ThicknessM: 0.05, WidthM: 0.11, LengthM: 0.17, DiameterM: 0.07, VolumeM3: 0.002, AreaM2: 0.09}}
	steps := []Step{ownStep(Cook, 2500, 35, 110), ownStep(Rest, 700, 9, 23), ownStep(Cool, 6000, 28, 2.5)}
	if shape == Slab || shape == Cylinder {
		steps[1].Medium = Course{TimesS: []float64{0, 300, 700}, C: []float64{40, 23, 19}}
	}
	return p, steps
}

// What a history keeps of the place that it was asked for last changes no temperature by a single bit: places asked for in turn, by the instant and as
// courses, are as by histories that were asked for nothing else.
func TestPlacesInTurn(t *testing.T) {
	for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Brick, LayeredSlab, Spheroid} {
		t.Run(shape.Name, func(t *testing.T) {
			p, steps := fadingChain(shape)
			if shape == LayeredSlab {
				p.Layers = []Layer{{Food: p.Food, ThicknessM: 0.03, BelowM2KW: 0.01}, {Food: p.Food, ThicknessM: 0.02}}
			}
			fresh := func() *History {
				h, err := Solve(p, steps, Options{})
				if err != nil {
					t.Fatal(err)
				}
				return h
			}
			h := fresh()
			spots := h.Scan().Spots
			places := []Place{spots[0].Place, spots[len(spots)/2].Place, spots[len(spots)-1].Place}
			times := []float64{0, 3, 11, 900, 2500, 2504, 2530, 3200, 3203, 3215, 9199} // just after changes of surroundings too
			want, got := make([][]float64, len(places)), make([]float64, len(times))
			for i, at := range places {
				want[i] = make([]float64, len(times))
				fresh().Course(at, times, want[i])
			}
			for k, now := range times {
				for i, at := range places {
					if c := h.At(at, now); c != want[i][k] {
						t.Errorf("%v at %g s: %v in turn, %v alone", at, now, c, want[i][k])
					}
				}
			}
			for i, at := range places {
				if h.Course(at, times, got); !slices.Equal(got, want[i]) {
					t.Errorf("%v: %v in turn, %v alone", at, got, want[i])
				}
			}
		})
	}
}
