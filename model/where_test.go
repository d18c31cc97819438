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
		{"stirred", Stirred, size, Place{}, "anywhere: it is stirred"},
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
