package model

import (
	"math"
	"testing"
)

// A thick food in each shape, as well mixed: one temperature that decays as exp(−ΣUA·t/(V·ρ·c)) towards the mean of the media weighed
// by UA (heat balance of one temperature; textbooks of heat transfer as lumped capacity). Volumes and surfaces are worked out by hand
// from the sizes: thickness 0.043, width 0.071, length 0.113, diameter 0.059 m.
func TestMixed(t *testing.T) {
	const thick, wide, long, d = 0.043, 0.071, 0.113, 0.059
	size := Size{ThicknessM: thick, WidthM: wide, LengthM: long, DiameterM: d}
	under := FaceExposure{Underside, Exposure{Surface: ContactPlate, WrapM2KW: ptr(0.004), Medium: Course{C: []float64{150}}}}
	bare := FaceExposure{Underside, Exposure{Surface: Insulated}}
	for _, c := range []struct {
		name   string
		shape  *Shape
		face   *FaceExposure
		volume float64 // m³
		ua, tm float64 // W/K, °C
	}{
		{"slab, two like faces", Slab, nil, thick, 2 * 23, 120},
		{"slab, underside insulated", Slab, &bare, thick, 23, 120},
		{"slab on a plate", Slab, &under, thick, 23 + 250, (23*120 + 250*150) / 273.},
		{"cylinder", Cylinder, nil, math.Pi * d * d / 4, 23 * math.Pi * d, 120},
		{"sphere", Sphere, nil, math.Pi * d * d * d / 6, 23 * math.Pi * d * d, 120},
		{"short cylinder, underside insulated", ShortCylinder, &bare, math.Pi * d * d / 4 * long, 23 * math.Pi * (d*d/4 + d*long), 120},
		{"bar on a plate", Bar, &under, thick * wide, 23*(wide+2*thick) + 250*wide, (23*120*(wide+2*thick) + 250*150*wide) / (23*(wide+2*thick) + 250*wide)},
		{"brick", Brick, nil, thick * wide * long, 23 * 2 * (thick*wide + wide*long + thick*long), 120},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, steps := plain()
			p.Shape, p.Food.Flow = c.shape, FlowsThick
			p.Size = Size{}
			for _, need := range c.shape.Needs {
				switch need {
				case "Thickness":
					p.Size.ThicknessM = size.ThicknessM
				case "Width":
					p.Size.WidthM = size.WidthM
				case "Length":
					p.Size.LengthM = size.LengthM
				case "Diameter":
					p.Size.DiameterM = size.DiameterM
				}
			}
			steps = steps[:1]
			steps[0].Exposure = Exposure{Surface: Film, FilmW: ptr(23.0), Medium: Course{C: []float64{120}}}
			if c.face != nil {
				steps[0].Faces = []FaceExposure{*c.face}
			}
			if !Mixes(&p) {
				t.Fatal("a thick food is not taken as one that mixes")
			}
			ran, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			q, chain := Mixed(p, steps, ran)
			h, err := Solve(q, chain, Options{})
			if err != nil {
				t.Fatal(err)
			}
			f := p.Food.Props(50)
			const at = 1700.
			want := c.tm + (p.StartC-c.tm)*math.Exp(-c.ua*at/(c.volume*f.RhoKgM3*f.CJkgK))
			if got := h.At(Place{}, at); math.Abs(got-want) > 1e-6 {
				t.Errorf("%.6f °C, want %.6f", got, want)
			}
		})
	}
}

// The surface of a spheroid against a sum over many rings, both ways of being one and near a sphere.
func TestSpheroidSurface(t *testing.T) {
	for _, c := range []struct {
		name          string
		thickness, d_ float64
	}{
		{"long", 0.062, 0.045}, {"flat", 0.031, 0.077}, {"nearly a sphere", 0.0500001, 0.05}, {"just beyond that", 0.0501, 0.05},
	} {
		t.Run(c.name, func(t *testing.T) {
			const n = 20000
			sum, a, b := 0.0, c.d_/2, c.thickness/2
			for i := range n {
				// rings between two angles from the axis: frustum of a cone
				u, v := math.Pi*float64(i)/n, math.Pi*float64(i+1)/n
				r1, r2, y1, y2 := a*math.Sin(u), a*math.Sin(v), b*math.Cos(u), b*math.Cos(v)
				sum += math.Pi * (r1 + r2) * math.Hypot(r1-r2, y1-y2)
			}
			if got := spheroidM2(c.thickness, c.d_); math.Abs(got-sum) > 1e-7*sum {
				t.Errorf("%.9f m², want %.9f", got, sum)
			}
		})
	}
}

// A step that differs from others by an insulated face, and media that change in time: the films and media of the faces are put together.
func TestMixedTakesFacesTogether(t *testing.T) {
	p, steps := plain()
	p.Food.Flow = FlowsThick
	steps[0].Faces = []FaceExposure{{Underside, Exposure{Surface: Insulated}}}
	steps[1].Exposure = Exposure{Surface: Film, FilmW: ptr(12.0), Medium: Course{TimesS: []float64{0, 1000, 5300}, C: []float64{12, 4, 2}}}
	steps[1].Faces = []FaceExposure{{Underside, Exposure{Surface: Film, FilmW: ptr(36.0), Medium: Course{TimesS: []float64{0, 2000, 5300}, C: []float64{8, 1, 1}}}}}
	ran, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	q, chain := Mixed(p, steps, ran)
	if q.Size.AreaM2 != 2 || *chain[0].FilmW*2 != *steps[0].FilmW {
		t.Errorf("bake: area %g m², film %g", q.Size.AreaM2, *chain[0].FilmW)
	}
	m := chain[1].Medium
	if *chain[1].FilmW != 24 || len(m.TimesS) != 4 {
		t.Fatalf("blast: film %g, course %v", *chain[1].FilmW, m)
	}
	for i, want := range []float64{0.25*12 + 0.75*8, 0.25*4 + 0.75*4.5, 0.25*(4-2*1000/4300.) + 0.75, 0.25*2 + 0.75} {
		if math.Abs(m.C[i]-want) > 1e-12 {
			t.Errorf("at %g s: %g °C, want %g", m.TimesS[i], m.C[i], want)
		}
	}
	if _, err := Solve(q, chain, Options{}); err != nil {
		t.Error(err)
	}
}
