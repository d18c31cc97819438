package model_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"slowpoint/model"
)

// These tests draw products and chains at random and hold two ways of solving against each other, or against what must be true of any
// conduction. Their tolerances are a few times the error that the histories themselves state.

// drawnFood is a food of constant properties within the range of real ones.
func drawnFood(t *rapid.T) (*model.Material, model.Properties) {
	p := model.Properties{
		KWmK:    rapid.Float64Range(0.3, 0.65).Draw(t, "k"),
		RhoKgM3: rapid.Float64Range(900, 1150).Draw(t, "rho"),
		CJkgK:   rapid.Float64Range(2400, 4000).Draw(t, "c"),
	}
	return &model.Material{Name: "drawn", Source: "drawn at random by the test", Props: func(float64) model.Properties { return p }, Waterless: true}, p
}

func constant(c float64) model.Course { return model.Course{TimesS: []float64{0}, C: []float64{c}} }

// film is a film, W/(m²·K), to a medium, °C.
func film(h, c float64) model.Exposure {
	return model.Exposure{Surface: model.Film, FilmW: &h, Medium: constant(c)}
}

// wrapped is the same as film(h, c) by another way: a film twice as good behind a wrap.
func wrapped(h, c float64) model.Exposure {
	e := film(2*h, c)
	r := 1/h - 1/(2*h)
	e.Cover, e.WrapM2KW = model.TightWrap, &r
	return e
}

// drawnChain is a cook, a rest and a chill, each with one film and medium on all faces.
func drawnChain(t *rapid.T) []model.Step {
	draw := func(name string, stage *model.Stage, hLow, hHigh, cLow, cHigh, longS float64) model.Step {
		return model.Step{Name: name, Stage: stage, DurationS: rapid.Float64Range(600, longS).Draw(t, name+" s"),
			Exposure: film(rapid.Float64Range(hLow, hHigh).Draw(t, name+" film"), rapid.Float64Range(cLow, cHigh).Draw(t, name+" medium"))}
	}
	return []model.Step{
		draw("cook", model.Cook, 10, 300, 80, 200, 7200),
		draw("rest", model.Rest, 4, 12, 15, 30, 2400),
		draw("chill", model.Cool, 8, 400, 0, 5, 14400),
	}
}

// drawnProduct is one of the shapes that are solved by axes.
func drawnProduct(t *rapid.T, f *model.Material, shapes ...*model.Shape) model.Product {
	size := func(name string) float64 { return rapid.Float64Range(0.015, 0.2).Draw(t, name) }
	return model.Product{Name: "drawn", Food: f, StartC: rapid.Float64Range(2, 25).Draw(t, "start"), Shape: rapid.SampledFrom(shapes).Draw(t, "shape"),
		Size: model.Size{ThicknessM: size("thickness"), WidthM: size("width"), LengthM: size("length"), DiameterM: size("diameter")}}
}

// drawnPlace lies anywhere in the food.
func drawnPlace(t *rapid.T, p model.Product) model.Place {
	part := func(name string, half float64) float64 { return rapid.Float64Range(-1, 1).Draw(t, name) * half }
	z := p.Size
	switch p.Shape {
	case model.Slab:
		return model.Place{UpM: part("up", z.ThicknessM/2)}
	case model.Cylinder, model.Sphere:
		return model.Place{UpM: part("up", z.DiameterM/2)}
	case model.ShortCylinder:
		return model.Place{UpM: part("up", z.LengthM/2), AcrossM: math.Abs(part("across", z.DiameterM/2))}
	case model.Bar:
		return model.Place{UpM: part("up", z.ThicknessM/2), AcrossM: part("across", z.WidthM/2)}
	}
	return model.Place{UpM: part("up", z.ThicknessM/2), AcrossM: part("across", z.WidthM/2), AlongM: part("along", z.LengthM/2)}
}

func solved(t rapid.TB, p model.Product, steps []model.Step) *model.History {
	t.Helper()
	h, err := model.Solve(p, steps, model.Options{})
	if err != nil {
		t.Fatalf("%s: %v", p.Shape.Name, err)
	}
	return h
}

// later draws an instant at least a minute after every change of surroundings, from when histories state their error.
func later(t *rapid.T, steps []model.Step) float64 {
	start := 0.0
	i := rapid.IntRange(0, len(steps)-1).Draw(t, "step")
	for _, s := range steps[:i] {
		start += s.DurationS
	}
	return start + rapid.Float64Range(60, steps[i].DurationS).Draw(t, "in the step, s")
}

// agree fails unless two histories give the same within the errors that they state.
func agree(t *rapid.T, what string, a, b float64, ha, hb *model.History) {
	t.Helper()
	if tol := 2*(ha.ErrorK+hb.ErrorK) + 0.002; math.Abs(a-b) > tol {
		t.Fatalf("%s: %.6f and %.6f °C, %.4f K apart, and the histories state %.4f and %.4f K", what, a, b, math.Abs(a-b), ha.ErrorK, hb.ErrorK)
	}
}

var allShapes = []*model.Shape{model.Slab, model.Cylinder, model.Sphere, model.ShortCylinder, model.Bar, model.Brick}

func TestSymmetricFacesEqualAHalfProblem(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		whole := drawnProduct(t, f, model.Slab)
		half := whole
		half.Size.ThicknessM /= 2
		steps := drawnChain(t)
		var insulated, twoFaces []model.Step
		for _, s := range steps {
			i, b := s, s
			i.Faces = []model.FaceExposure{{Face: model.Underside, Exposure: model.Exposure{Surface: model.Insulated}}}
			e := wrapped(*s.FilmW, s.Medium.C[0])
			b.Faces = []model.FaceExposure{{Face: model.Underside, Exposure: e}}
			insulated, twoFaces = append(insulated, i), append(twoFaces, b)
		}
		hw, hh, hb := solved(t, whole, steps), solved(t, half, insulated), solved(t, whole, twoFaces)
		at, x := later(t, steps), rapid.Float64Range(0, 1).Draw(t, "x")*half.Size.ThicknessM
		middle := half.Size.ThicknessM / 2
		agree(t, "half with an insulated face", hw.At(model.Place{UpM: x}, at), hh.At(model.Place{UpM: x - middle}, at), hw, hh)
		agree(t, "two faces alike by other ways, above", hw.At(model.Place{UpM: x}, at), hb.At(model.Place{UpM: x}, at), hw, hb)
		agree(t, "two faces alike by other ways, below", hw.At(model.Place{UpM: -x}, at), hb.At(model.Place{UpM: -x}, at), hw, hb)
	})
}

func TestBrickTendsToBarAndSlab(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, q := drawnFood(t)
		slab := drawnProduct(t, f, model.Slab)
		steps := drawnChain(t)[:1]
		// So wide that the sides are not felt in the middle: erfc(3.5) of a step of 200 K is 0.0002 K.
		wide := 14 * math.Sqrt(q.KWmK/q.RhoKgM3/q.CJkgK*steps[0].DurationS)
		bar, brick, narrow := slab, slab, slab
		bar.Shape, bar.Size.WidthM = model.Bar, wide
		brick.Shape, brick.Size.WidthM, brick.Size.LengthM = model.Brick, wide, 1.1*wide
		narrow.Shape, narrow.Size.WidthM = model.Bar, wide/14
		hs, hb, hk := solved(t, slab, steps), solved(t, bar, steps), solved(t, brick, steps)
		at, p := later(t, steps), model.Place{UpM: rapid.Float64Range(-0.5, 0.5).Draw(t, "x") * slab.Size.ThicknessM}
		agree(t, "bar and slab", hb.At(p, at), hs.At(p, at), hb, hs)
		agree(t, "brick and slab", hk.At(p, at), hs.At(p, at), hk, hs)
		if hn := solved(t, narrow, steps); hn.At(p, steps[0].DurationS) < hs.At(p, steps[0].DurationS)-2*(hn.ErrorK+hs.ErrorK) {
			t.Fatalf("a narrow bar is colder than a slab: %g and %g °C", hn.At(p, at), hs.At(p, at))
		}
		// A long brick is a bar in its middle.
		long := narrow
		long.Shape, long.Size.LengthM = model.Brick, wide
		hl, hn := solved(t, long, steps), solved(t, narrow, steps)
		p.AcrossM = 0.3 * narrow.Size.WidthM
		agree(t, "long brick and bar", hl.At(p, at), hn.At(p, at), hl, hn)
	})
}

func TestLongCylinderIsACylinder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, q := drawnFood(t)
		round := drawnProduct(t, f, model.Cylinder)
		steps := drawnChain(t)[:1]
		short := round
		short.Shape, short.Size.LengthM = model.ShortCylinder, 14*math.Sqrt(q.KWmK/q.RhoKgM3/q.CJkgK*steps[0].DurationS)
		hr, hs := solved(t, round, steps), solved(t, short, steps)
		at, x := later(t, steps), rapid.Float64Range(0, 0.5).Draw(t, "x")*round.Size.DiameterM
		agree(t, "cylinder and short cylinder", hr.At(model.Place{UpM: x}, at), hs.At(model.Place{AcrossM: x}, at), hr, hs)
	})
}

func TestSplittingAStepChangesNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, allShapes...)
		steps := drawnChain(t)
		i := rapid.IntRange(0, 2).Draw(t, "split step")
		first, second := steps[i], steps[i]
		part := rapid.Float64Range(0.2, 0.8).Draw(t, "split at")
		first.DurationS *= part
		second.DurationS -= first.DurationS
		split := append(append(append([]model.Step{}, steps[:i]...), first, second), steps[i+1:]...)
		a, b := solved(t, p, steps), solved(t, p, split)
		at, place := later(t, steps), drawnPlace(t, p)
		agree(t, p.Shape.Name+", split", a.At(place, at), b.At(place, at), a, b)
		if math.Abs(a.EndS()-b.EndS()) > 1e-9*a.EndS() {
			t.Fatalf("ends at %g and %g s", a.EndS(), b.EndS())
		}
	})
}

func TestSplittingARampChangesNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, model.Slab, model.Cylinder, model.Sphere, model.ShortCylinder)
		s := drawnChain(t)[:1]
		from, to, d := p.StartC, s[0].Medium.C[0], s[0].DurationS
		part := rapid.Float64Range(0.2, 0.8).Draw(t, "split at")
		ramp := func(d, a, b float64) model.Step {
			r := s[0]
			r.DurationS, r.Medium = d, model.Course{TimesS: []float64{0, d}, C: []float64{a, b}}
			return r
		}
		middle := from + part*(to-from)
		a, b := solved(t, p, []model.Step{ramp(d, from, to)}), solved(t, p, []model.Step{ramp(part*d, from, middle), ramp(d-part*d, middle, to)})
		at, place := rapid.Float64Range(60, d).Draw(t, "t"), drawnPlace(t, p)
		agree(t, p.Shape.Name+", ramp", a.At(place, at), b.At(place, at), a, b)
	})
}

// One medium on all faces is solved as products of axes, a course as a full tensor; a course that does not change is the same thing.
func TestProductOfAxesEqualsFullTensor(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, model.ShortCylinder, model.Bar, model.Brick)
		steps := drawnChain(t)
		var courses []model.Step
		for _, s := range steps {
			c := s.Medium.C[0]
			s.Medium = model.Course{TimesS: []float64{0, s.DurationS}, C: []float64{c, c}}
			courses = append(courses, s)
		}
		a, b := solved(t, p, steps), solved(t, p, courses)
		at, place := later(t, steps), drawnPlace(t, p)
		agree(t, p.Shape.Name, a.At(place, at), b.At(place, at), a, b)
		sa, sb := a.Sample(a.EndS()/7), b.Sample(b.EndS()/7)
		for i := range sa.TimesS {
			if sa.TimesS[i] < 60 {
				continue
			}
			agree(t, p.Shape.Name+" mean", sa.Mean[i], sb.Mean[i], a, b)
		}
	})
}

func TestNothingOutsideStartAndMedia(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, allShapes...)
		steps := drawnChain(t)
		h := solved(t, p, steps)
		low, high := p.StartC, p.StartC
		for _, s := range steps {
			low, high = math.Min(low, s.Medium.C[0]), math.Max(high, s.Medium.C[0])
		}
		hold := func(what string, c float64) {
			if c < low-1e-9 || c > high+1e-9 || math.IsNaN(c) {
				t.Fatalf("%s: %.9g °C is outside %g to %g °C", what, c, low, high)
			}
		}
		s := h.Sample(h.EndS() / 50)
		for i := range s.TimesS {
			hold("coldest", s.Coldest[i])
			hold("hottest", s.Hottest[i])
			hold("mean", s.Mean[i])
			if s.Coldest[i] > s.Mean[i]+1e-6 || s.Mean[i] > s.Hottest[i]+1e-6 {
				t.Fatalf("coldest %g, mean %g, hottest %g °C", s.Coldest[i], s.Mean[i], s.Hottest[i])
			}
		}
		for range 20 {
			at, place := rapid.Float64Range(0, h.EndS()).Draw(t, "t"), drawnPlace(t, p)
			hold("a place", h.At(place, at))
		}
		if c := h.At(drawnPlace(t, p), 0); math.Abs(c-p.StartC) > 1e-9 {
			t.Fatalf("%g °C at the start, want %g", c, p.StartC)
		}
	})
}

// No place found by looking around is colder or hotter than the one that the samples give.
func TestColdestAndHottestAreThat(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, allShapes...)
		steps := drawnChain(t)
		if p.Shape != model.Cylinder && p.Shape != model.Sphere {
			for i := range steps {
				e := film(rapid.Float64Range(4, 200).Draw(t, "film below"), steps[i].Medium.C[0]+rapid.Float64Range(0, 10).Draw(t, "warmer below"))
				steps[i].Faces = []model.FaceExposure{{Face: model.Underside, Exposure: e}}
			}
		}
		h := solved(t, p, steps)
		s := h.Sample(h.EndS() / 9)
		for i, at := range s.TimesS {
			if near := math.Abs(h.At(s.ColdestAt[i], at)-s.Coldest[i]) + math.Abs(h.At(s.HottestAt[i], at)-s.Hottest[i]); near > 1e-6 {
				t.Fatalf("the places named are not at the temperatures named: %g K off", near)
			}
			for range 10 {
				place := drawnPlace(t, p)
				if c := h.At(place, at); c < s.Coldest[i]-2*h.ErrorK-0.002 || c > s.Hottest[i]+2*h.ErrorK+0.002 {
					t.Fatalf("%s at %g s: %+v is at %.5f °C, outside coldest %.5f at %+v to hottest %.5f at %+v", p.Shape.Name, at, place, c, s.Coldest[i], s.ColdestAt[i], s.Hottest[i], s.HottestAt[i])
				}
			}
		}
	})
}

func TestLongerCookNeverLowersTheCore(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, _ := drawnFood(t)
		p := drawnProduct(t, f, allShapes...)
		steps := drawnChain(t)
		longer := append([]model.Step{}, steps...)
		more := rapid.Float64Range(60, 1800).Draw(t, "longer by")
		longer[0].DurationS += more
		a, b := solved(t, p, steps), solved(t, p, longer)
		slack := 2*(a.ErrorK+b.ErrorK) + 1e-6
		centre, cooked := model.Place{}, steps[0].DurationS
		if x, y := a.At(centre, cooked), b.At(centre, cooked+more); y < x-slack {
			t.Fatalf("%s: %g °C after the cook, %g after a longer one", p.Shape.Name, x, y)
		}
		after := rapid.Float64Range(60, steps[1].DurationS+steps[2].DurationS).Draw(t, "after the cook")
		if x, y := a.At(centre, cooked+after), b.At(centre, cooked+more+after); y < x-slack {
			t.Fatalf("%s: %g s after the cook %g °C, after a longer cook %g", p.Shape.Name, after, x, y)
		}
		before := p.StartC
		for i := range 40 { // from a minute after the start, as the errors are stated
			c := a.At(centre, 60+(cooked-60)*float64(i)/39)
			if c < before-slack {
				t.Fatalf("%s: the core falls from %g to %g °C in the oven", p.Shape.Name, before, c)
			}
			before = c
		}
	})
}

// gaussLegendre is the rule with five points on 0…1 (Abramowitz & Stegun 1964, table 25.4).
var gaussLegendre = [][2]float64{
	{0.046910077030668, 0.118463442528095}, {0.230765344947158, 0.239314335249683}, {0.5, 0.284444444444444},
	{0.769234655052842, 0.239314335249683}, {0.953089922969332, 0.118463442528095},
}

// over integrates f from a to b in n pieces of five points.
func over(a, b float64, n int, f func(x float64) float64) float64 {
	sum, d := 0.0, (b-a)/float64(n)
	for i := range n {
		for _, q := range gaussLegendre {
			sum += d * q[1] * f(a+d*(float64(i)+q[0]))
		}
	}
	return sum
}

// The heat that passes the surface through the films is the heat that the food gains: ρcV·ΔT of the mean = ∫∫ h (Tm - Ts) dA dt.
func TestHeatInIsHeatStored(t *testing.T) {
	p := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3550}
	f := &model.Material{Name: "test", Source: "input of the test", Props: func(float64) model.Properties { return p }, Waterless: true}
	for _, c := range []struct {
		shape *model.Shape
		size  model.Size
	}{
		{model.Slab, model.Size{ThicknessM: 0.043}},
		{model.Cylinder, model.Size{DiameterM: 0.071}},
		{model.Sphere, model.Size{DiameterM: 0.083}},
		{model.ShortCylinder, model.Size{DiameterM: 0.071, LengthM: 0.11}},
		{model.Bar, model.Size{ThicknessM: 0.043, WidthM: 0.087}},
		{model.Brick, model.Size{ThicknessM: 0.043, WidthM: 0.087, LengthM: 0.13}},
	} {
		t.Run(c.shape.Name, func(t *testing.T) {
			const topH, belowH, sideH, topC, belowC, sideC = 37., 90., 21., 160., 120., 150.
			steps := []model.Step{{Name: "oven", Stage: model.Cook, DurationS: 3000, Exposure: film(topH, topC)}}
			faces := map[*model.Face]model.Exposure{model.Underside: film(belowH, belowC), model.Sides: film(sideH, sideC), model.Ends: film(sideH/3, sideC)}
			for _, face := range c.shape.Faces() {
				if e, ok := faces[face]; ok {
					steps[0].Faces = append(steps[0].Faces, model.FaceExposure{Face: face, Exposure: e})
				}
			}
			h := solved(t, model.Product{Name: "p", Shape: c.shape, Size: c.size, Food: f, StartC: 7}, steps)
			const from, to = 600., 3000.
			s := h.Sample(from)
			stored := p.RhoKgM3 * p.CJkgK * (s.Mean[5] - s.Mean[1]) // J/m³
			if s.TimesS[1] != from || s.TimesS[5] != to {
				t.Fatalf("samples at %v s", s.TimesS)
			}
			z := c.size
			flux := func(h0, m float64, place model.Place) float64 { // J/m² from one place
				return over(from, to, 5, func(at float64) float64 { return h0 * (m - h.At(place, at)) })
			}
			// line is the mean over -half…half, half of it by symmetry; a direction without extent counts as one place.
			line := func(half float64, g func(x float64) float64) float64 {
				if half == 0 {
					return g(0)
				}
				return over(0, half, 4, g) / half
			}
			in := 0.0 // J/m³
			up, w, l, r := z.ThicknessM/2, z.WidthM/2, z.LengthM/2, z.DiameterM/2
			switch c.shape {
			case model.Cylinder:
				in = flux(topH, topC, model.Place{UpM: r}) * 2 / r
			case model.Sphere:
				in = flux(topH, topC, model.Place{UpM: r}) * 3 / r
			case model.ShortCylinder:
				end := func(h0, m, u float64) float64 { // mean over a disc
					return over(0, r, 2, func(x float64) float64 { return flux(h0, m, model.Place{UpM: u, AcrossM: x}) * 2 * x / r / r })
				}
				side := over(-l, l, 4, func(u float64) float64 { return flux(sideH, sideC, model.Place{UpM: u, AcrossM: r}) }) / (2 * l)
				in = (end(topH, topC, l)+end(belowH, belowC, -l))/(2*l) + side*2/r
			default:
				for _, e := range []struct{ h0, m, u float64 }{{topH, topC, up}, {belowH, belowC, -up}} {
					in += line(w, func(a float64) float64 {
						return line(l, func(b float64) float64 { return flux(e.h0, e.m, model.Place{UpM: e.u, AcrossM: a, AlongM: b}) })
					}) / (2 * up)
				}
				upright := func(g func(u float64) float64) float64 { return over(-up, up, 4, g) / (2 * up) }
				if w > 0 {
					in += 2 / (2 * w) * upright(func(u float64) float64 {
						return line(l, func(b float64) float64 { return flux(sideH, sideC, model.Place{UpM: u, AcrossM: w, AlongM: b}) })
					})
				}
				if l > 0 {
					in += 2 / (2 * l) * upright(func(u float64) float64 {
						return line(w, func(a float64) float64 { return flux(sideH/3, sideC, model.Place{UpM: u, AcrossM: a, AlongM: l}) })
					})
				}
			}
			t.Logf("stored %.6g, in %.6g J/m³: %.2g", stored, in, in/stored-1)
			// One axis: exact but for the time integral of the test. More: the errors of the surface integral.
			tol := 1e-9
			if len(c.shape.Needs) > 1 {
				tol = 5e-6
			}
			if math.Abs(in/stored-1) > tol {
				t.Errorf("%.7g J/m³ stored, %.7g came in: %.2g apart", stored, in, in/stored-1)
			}
		})
	}
}
