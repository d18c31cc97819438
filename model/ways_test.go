package model

import (
	"math"
	"testing"
)

// A shape is told by its value alone: one that no list knows, made of the ways of another under other columns, has the same history, places and
// films; and the sizes that are derived from its ways are those of geometry.
func TestShapeIsItsValue(t *testing.T) {
	plank := &Shape{Name: "plank", Needs: []string{"Diameter", "Length"}, Ways: []Way{upright("Diameter"), {planeHalf, "Length", Sides, Sides}}}
	dry := false
	oven := Step{Name: "oven", Stage: Cook, DurationS: 3700, Exposure: Exposure{Surface: MovingAir, AirMS: ptr(1.3), Wet: &dry, Medium: Course{C: []float64{141}}},
		Faces: []FaceExposure{{Face: Underside, Exposure: filmTo(37, 90)}}}
	bar, _ := plain()
	bar.Shape, bar.Size = Bar, Size{ThicknessM: 0.031, WidthM: 0.067}
	own := bar
	own.Shape, own.Size = plank, Size{DiameterM: 0.031, LengthM: 0.067}
	var h [2]*History
	for i, p := range []Product{bar, own} {
		var err error
		if h[i], err = Solve(p, []Step{oven, {Name: "cool", Stage: Cool, DurationS: 5000, Exposure: filmTo(21, 2)}}, Options{}); err != nil {
			t.Fatal(err)
		}
	}
	for _, at := range []Place{{}, {UpM: 0.0155}, {UpM: -0.0155, AcrossM: 0.0335}, {UpM: 0.004, AcrossM: 0.011}} {
		for _, sec := range []float64{600, 3700, 8700} {
			if a, b := h[0].At(at, sec), h[1].At(at, sec); a != b {
				t.Errorf("%v at %g s: %v °C and %v °C", at, sec, a, b)
			}
		}
		if a, b := bar.Where(at), own.Where(at); a != b {
			t.Errorf("%v lies %q and %q", at, a, b)
		}
	}
	if a, b := h[0].Spans[0].Films[0].Source, h[1].Spans[0].Films[0].Source; a != b {
		t.Errorf("films: %q and %q", a, b)
	}
	if a, b := len(plank.Faces()), len(Bar.Faces()); a != b {
		t.Errorf("%d faces and %d", a, b)
	}
}

// Volumes, surfaces and reach of the shapes, by the formulas of geometry.
func TestSizesFollowFromTheWays(t *testing.T) {
	z := Size{ThicknessM: 0.03, WidthM: 0.05, LengthM: 0.11, DiameterM: 0.07, VolumeM3: 0.004, AreaM2: 0.16}
	circle, inf := math.Pi*0.07*0.07/4, math.Inf(1)
	for _, c := range []struct {
		shape                        *Shape
		volumeM3, areaM2, acrossFlow float64
		reach                        [3]float64
	}{
		{Slab, 0.03, 2, 0.5, [3]float64{0.015, inf, inf}},
		{Cylinder, circle, math.Pi * 0.07, 0.07, [3]float64{0.035, 0, inf}},
		{Sphere, circle * 0.07 * 2 / 3, 4 * circle, 0.07, [3]float64{0.035, 0, 0}},
		{ShortCylinder, circle * 0.11, 2*circle + math.Pi*0.07*0.11, 0.07, [3]float64{0.055, 0.035, 0}},
		{Bar, 0.03 * 0.05, 2 * (0.03 + 0.05), 0.05, [3]float64{0.015, 0.025, inf}},
		{Brick, 0.03 * 0.05 * 0.11, 2 * (0.03*0.05 + 0.05*0.11 + 0.03*0.11), 0.05, [3]float64{0.015, 0.025, 0.055}},
		{Spheroid, circle * 0.03 * 2 / 3, spheroidM2(0.03, 0.07), 0.07, [3]float64{0.015, 0.035, 0}},
		{LayeredSlab, 0.03, 2, 0.5, [3]float64{0.015, inf, inf}},
		{Stirred, 0.004, 0.16, math.Cbrt(0.004), [3]float64{inf, inf, inf}},
	} {
		t.Run(c.shape.Name, func(t *testing.T) {
			volume, sides := c.shape.bulk(&z)
			area := 0.0
			for _, s := range sides {
				area += s.areaM2
			}
			if math.Abs(volume/c.volumeM3-1) > 1e-12 || math.Abs(area/c.areaM2-1) > 1e-12 {
				t.Errorf("%.10g m³ in %.10g m², want %.10g and %.10g", volume, area, c.volumeM3, c.areaM2)
			}
			if got := c.shape.acrossFlowM(&z); got != c.acrossFlow {
				t.Errorf("%g m across the flow, want %g", got, c.acrossFlow)
			}
			if got := reach(&Product{Shape: c.shape, Size: z}); got != c.reach {
				t.Errorf("reaches %v m, want %v", got, c.reach)
			}
		})
	}
}

// What fixes the temperature of a surface has no film: all of it lies in between. It counts as typed where what lies between had to be.
func TestFixedSurfaces(t *testing.T) {
	for _, c := range []struct {
		e      Exposure
		typed  bool
		totalW float64 // W/(m²·K)
	}{
		{Exposure{Surface: ContactPlate, WrapM2KW: ptr(0.004)}, true, 250},
		{Exposure{Surface: Held}, false, math.Inf(1)},
		{Exposure{Surface: Insulated}, false, 0},
	} {
		u := c.e.filmUsed(nil, &filmCase{shape: Slab, size: Size{ThicknessM: 0.03}})
		if u.Typed != c.typed || u.Caution != "" || !(u.TotalW == c.totalW || math.Abs(u.TotalW-c.totalW) < 1e-9) {
			t.Errorf("%s: typed %v, %g W/(m²·K), %q; want %v, %g", c.e.Surface.Name, u.Typed, u.TotalW, u.Caution, c.typed, c.totalW)
		}
	}
}
