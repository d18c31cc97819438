package rules

import (
	"math"
	"slices"
	"testing"

	"slowpoint/model"
)

// A value that has a kink at its worst place, such as where another row of a table begins to decide, is followed to it: no slope leads there. Made-up
// questions on slabs, short cylinders and a spheroid: the value falls by the same on either side of the place whose peak is a given temperature.
func TestCloserFollowsAKink(t *testing.T) {
	for _, x := range []struct {
		name  string
		shape *model.Shape
		size  model.Size
	}{
		{"slab", model.Slab, model.Size{ThicknessM: 0.05}},
		{"short cylinder", model.ShortCylinder, model.Size{DiameterM: 0.06, LengthM: 0.07}},
		{"spheroid", model.Spheroid, model.Size{ThicknessM: 0.04, DiameterM: 0.06}},
	} {
		t.Run(x.name, func(t *testing.T) {
			h := solve(t, x.shape, x.size, 5, filmStep(model.Cook, 25, 95, 60), filmStep(model.Cool, 60, 3, 40))
			least, most := math.Inf(1), math.Inf(-1)
			for _, row := range newCourses(h).rows {
				top := slices.Max(row)
				least, most = math.Min(least, top), math.Max(most, top)
			}
			for n := range 8 {
				kink := least + (most-least)*float64(n+1)/9.3
				v := newView(&Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(100), Counting: Total, Applies: Applies{All: true}}, newCourses(h))
				f := v.judgePlaces(question{unit: "min", need: 100, measure: func(p path, _ tilt) outcome {
					_, top := p.mostOf([]interval{{0, h.EndS()}}, 1)
					o := none(Met, "band")
					if o.value = 100 - 2*math.Abs(top-kink); o.value > 99.99 {
						o.verdict = NotMet
					}
					o.bad = o.value
					return o
				}})
				if f.Verdict != NotMet {
					t.Errorf("peak of %.1f °C: %v, worst %.4f", kink, f.Verdict, *f.Value)
				}
			}
		})
	}
}
