package model

import "testing"

// TestWhere words places: the same place the same way for every reader, and a surface with the name of its face.
func TestWhere(t *testing.T) {
	size := Size{ThicknessM: 0.05, WidthM: 0.1, LengthM: 0.2, DiameterM: 0.12}
	can := Size{DiameterM: 0.12, LengthM: 0.2}
	for _, x := range []struct {
		name  string
		shape *Shape
		size  Size
		at    Place
		want  string
	}{
		{"centre", Slab, size, Place{}, "centre"},
		{"top of a slab", Slab, size, Place{UpM: 0.025}, "top surface"},
		{"underside of a slab", Slab, size, Place{UpM: -0.025}, "underside"},
		{"within a slab", Slab, size, Place{UpM: 0.018}, "43 mm above the underside"},
		{"just under the top", Slab, size, Place{UpM: 0.0246}, "0.4 mm under the top"},
		{"within a cylinder", Cylinder, size, Place{UpM: 0.021}, "21 mm from the axis"},
		{"skin of a cylinder", Cylinder, size, Place{UpM: 0.06}, "curved surface"},
		{"within a sphere", Sphere, size, Place{UpM: 0.021}, "21 mm from the centre"},
		{"skin of a sphere", Sphere, size, Place{UpM: 0.06}, "surface"},
		{"short cylinder, half way up", ShortCylinder, can, Place{AcrossM: 0.021}, "21 mm from the axis, half way up"},
		{"short cylinder, lower", ShortCylinder, can, Place{UpM: -0.08, AcrossM: 0.021}, "21 mm from the axis, 20 mm above the underside"},
		{"short cylinder, on the axis", ShortCylinder, can, Place{UpM: 0.05}, "on the axis, 150 mm above the underside"},
		{"short cylinder, middle of the top", ShortCylinder, can, Place{UpM: 0.1}, "top surface"},
		{"short cylinder, top beside the axis", ShortCylinder, can, Place{UpM: 0.1, AcrossM: 0.03}, "top surface, 30 mm from the axis"},
		{"short cylinder, curved face", ShortCylinder, can, Place{AcrossM: 0.06}, "curved surface"},
		{"short cylinder, curved face lower", ShortCylinder, can, Place{UpM: -0.08, AcrossM: 0.06}, "curved surface, 20 mm above the underside"},
		{"short cylinder, rim", ShortCylinder, can, Place{UpM: -0.1, AcrossM: 0.06}, "edge of underside and curved face"},
		{"bar, aside", Bar, size, Place{AcrossM: 0.02}, "20 mm from the middle of the width, half way up"},
		{"bar, side", Bar, size, Place{AcrossM: 0.05}, "side surface"},
		{"brick, end", Brick, size, Place{AlongM: 0.1}, "end surface"},
		{"brick, corner", Brick, size, Place{UpM: 0.025, AcrossM: 0.05, AlongM: -0.1}, "corner of top, side and end"},
		{"brick, within", Brick, size, Place{UpM: 0.01, AlongM: 0.03}, "35 mm above the underside, 30 mm from the middle of the length"},
		{"stirred", Stirred, size, Place{}, "anywhere: one temperature throughout"},
	} {
		t.Run(x.name, func(t *testing.T) {
			p := Product{Shape: x.shape, Size: x.size}
			if got := p.Where(x.at); got != x.want {
				t.Errorf("%q, want %q", got, x.want)
			}
			p.Points = []Point{{Name: "probe", Place: x.at}}
			if got := p.Where(x.at); got != "probe" && x.shape != Stirred || p.Lies(x.at) != x.want {
				t.Errorf("the user's point there: %q, %q", got, p.Lies(x.at))
			}
		})
	}
}

// TestWhereInInches words places of a product that was typed in inches: an inch is 25.4 mm.
func TestWhereInInches(t *testing.T) {
	size := Size{ThicknessM: 0.0635, WidthM: 0.1, LengthM: 0.2, DiameterM: 0.12}
	for _, x := range []struct {
		name  string
		shape *Shape
		at    Place
		want  string
	}{
		{"within a slab", Slab, Place{UpM: 0.0148}, "1.83 in (47 mm) above the underside"}, // 46.55 mm
		{"just under the top", Slab, Place{UpM: 0.03135}, "0.016 in (0.4 mm) under the top"},
		{"within a cylinder", Cylinder, Place{UpM: 0.021}, "0.83 in (21 mm) from the axis"},
		{"just under a skin", Sphere, Place{UpM: 0.0595}, "0.02 in (0.5 mm) under the surface"},
		{"short cylinder", ShortCylinder, Place{AcrossM: 0.021}, "0.83 in (21 mm) from the axis, half way up"},
		{"bar", Bar, Place{AcrossM: 0.02}, "0.79 in (20 mm) from the middle of the width, half way up"},
		{"brick", Brick, Place{AlongM: 0.03}, "half way up, 1.18 in (30 mm) from the middle of the length"},
		{"a face has no number", Slab, Place{UpM: 0.03175}, "top surface"},
	} {
		t.Run(x.name, func(t *testing.T) {
			p := Product{Shape: x.shape, Size: size, Inches: true}
			if got := p.Lies(x.at); got != x.want {
				t.Errorf("%q, want %q", got, x.want)
			}
		})
	}
}

func TestWhereInSpheroidsAndLayers(t *testing.T) {
	egg := Product{Shape: Spheroid, Size: Size{ThicknessM: 0.06, DiameterM: 0.04}}
	pastry, filling := &Material{Name: "pastry"}, &Material{Name: "filling"}
	pie := Product{Shape: LayeredSlab, Size: Size{ThicknessM: 0.046}, Layers: []Layer{{Food: pastry, ThicknessM: 0.006, BelowM2KW: 0.01}, {Food: filling, ThicknessM: 0.034}, {Food: pastry, ThicknessM: 0.006}}}
	even := Product{Shape: LayeredSlab, Size: Size{ThicknessM: 0.04}, Layers: []Layer{{Food: pastry, ThicknessM: 0.02}, {Food: filling, ThicknessM: 0.02}}}
	for _, x := range []struct {
		name string
		p    *Product
		at   Place
		want string
	}{
		{"centre", &egg, Place{}, "centre"},
		{"pole", &egg, Place{UpM: -0.03}, "surface, at a pole"},
		{"equator", &egg, Place{AcrossM: 0.02}, "surface, at the equator"},
		{"surface between", &egg, Place{UpM: 0.018, AcrossM: 0.016}, "surface, 16 mm from the axis, 18 mm from the plane of the equator"},
		{"axis", &egg, Place{UpM: 0.011}, "on the axis, 11 mm from the centre"},
		{"plane of the equator", &egg, Place{AcrossM: 0.009}, "in the plane of the equator, 9 mm from the centre"},
		{"within", &egg, Place{UpM: 0.011, AcrossM: 0.007}, "7 mm from the axis, 11 mm from the plane of the equator"},
		{"just under a pole", &egg, Place{UpM: 0.0294}, "0.6 mm under the surface, at a pole"},
		{"just under the equator", &egg, Place{AcrossM: 0.0195}, "0.5 mm under the surface, at the equator"},
		{"top of a pie", &pie, Place{UpM: 0.023}, "top surface"},
		{"underside of a pie", &pie, Place{UpM: -0.023}, "underside"},
		{"lid", &pie, Place{UpM: 0.02}, "43 mm above the underside, in layer 1 (pastry)"},
		{"joint, the side of the filling", &pie, Place{UpM: 0.017}, "at the joint between layer 1 (pastry) and layer 2 (filling), in layer 2"},
		{"joint, the side of the lid", &pie, Place{UpM: 0.017 + beyondM}, "at the joint between layer 1 (pastry) and layer 2 (filling), in layer 1"},
		{"joint below, the side of the base", &pie, Place{UpM: -0.017 - beyondM}, "at the joint between layer 2 (filling) and layer 3 (pastry), in layer 3"},
		{"joint below, the side of the filling", &pie, Place{UpM: -0.017}, "at the joint between layer 2 (filling) and layer 3 (pastry), in layer 2"},
		{"centre of a pie", &pie, Place{}, "centre, in layer 2 (filling)"},
		{"filling", &pie, Place{UpM: 0.003}, "26 mm above the underside, in layer 2 (filling)"},
		{"joint at the centre", &even, Place{}, "at the joint between layer 1 (pastry) and layer 2 (filling), in layer 1"},
		{"just under the top of a pie", &pie, Place{UpM: 0.0227}, "0.3 mm under the top, in layer 1 (pastry)"},
	} {
		t.Run(x.name, func(t *testing.T) {
			if got := x.p.Where(x.at); got != x.want {
				t.Errorf("%q, want %q", got, x.want)
			}
		})
	}
	pie.Points = []Point{{Name: "probe in the filling", Place: Place{UpM: 0.017}}}
	if a, b := pie.Where(Place{UpM: 0.017}), pie.Where(Place{UpM: 0.017 + beyondM}); a != "probe in the filling" || b == a {
		t.Errorf("the two sides of a joint: %q and %q", a, b)
	}
}
