package report

import (
	"testing"

	"slowpoint/model"
)

// The place on the surface is the middle of the top, the skin of a round piece, and the side of a spheroid that is longer than wide; what has one
// temperature has none.
func TestSurfacePlace(t *testing.T) {
	z := model.Size{ThicknessM: 0.05, WidthM: 0.08, LengthM: 0.12, DiameterM: 0.03}
	wide := z
	wide.DiameterM = 0.07
	for _, c := range []struct {
		shape *model.Shape
		size  model.Size
		want  model.Place
		none  bool
	}{
		{shape: model.Slab, size: z, want: model.Place{UpM: 0.025}},
		{shape: model.LayeredSlab, size: z, want: model.Place{UpM: 0.025}},
		{shape: model.Brick, size: z, want: model.Place{UpM: 0.025}},
		{shape: model.Cylinder, size: z, want: model.Place{UpM: 0.015}},
		{shape: model.Sphere, size: z, want: model.Place{UpM: 0.015}},
		{shape: model.ShortCylinder, size: z, want: model.Place{UpM: 0.06}},
		{shape: model.Spheroid, size: z, want: model.Place{AcrossM: 0.015}},
		{shape: model.Spheroid, size: wide, want: model.Place{UpM: 0.025}},
		{shape: model.Stirred, size: z, none: true},
		{size: z, none: true},
	} {
		if got, ok := SurfacePlace(&model.Product{Shape: c.shape, Size: c.size}); ok == c.none || got != c.want {
			t.Errorf("%v: %v, %v, want %v", c.shape, got, ok, c.want)
		}
	}
}

// A place of a run of other sizes lies in the product as typed in proportion to them, by each direction's own size.
func TestPlaceInTyped(t *testing.T) {
	typed := model.Size{ThicknessM: 0.04, WidthM: 0.10, LengthM: 0.20, DiameterM: 0.06}
	varied := model.Size{ThicknessM: 0.05, WidthM: 0.08, LengthM: 0.25, DiameterM: 0.048}
	at := model.Place{UpM: 0.010, AcrossM: 0.020, AlongM: 0.050}
	for _, c := range []struct {
		shape *model.Shape
		want  model.Place // factors: thickness 0.8, width 1.25, length 0.8, diameter 1.25
	}{
		{model.Slab, model.Place{UpM: 0.008, AcrossM: 0.020, AlongM: 0.050}},
		{model.Cylinder, model.Place{UpM: 0.0125, AcrossM: 0.020, AlongM: 0.050}},
		{model.ShortCylinder, model.Place{UpM: 0.008, AcrossM: 0.025, AlongM: 0.050}},
		{model.Spheroid, model.Place{UpM: 0.008, AcrossM: 0.025, AlongM: 0.050}},
		{model.Brick, model.Place{UpM: 0.008, AcrossM: 0.025, AlongM: 0.040}},
	} {
		other := &model.History{}
		p := Product{Product: model.Product{Shape: c.shape, Size: typed}}
		p.atWorst = []worstRun{{history: other, product: &model.Product{Shape: c.shape, Size: varied}}}
		if got := p.inTyped(at, other); !nearPlace(got, c.want) {
			t.Errorf("%s: %v, want %v", c.shape.Name, got, c.want)
		}
		if got := p.inTyped(at, &model.History{}); got != at {
			t.Errorf("%s, the product itself: %v", c.shape.Name, got)
		}
	}
}

func nearPlace(a, b model.Place) bool {
	const m = 1e-12
	return max(a.UpM-b.UpM, b.UpM-a.UpM, a.AcrossM-b.AcrossM, b.AcrossM-a.AcrossM, a.AlongM-b.AlongM, b.AlongM-a.AlongM) < m
}
