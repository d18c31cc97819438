package model

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// airOn is air around a food, dry but for what a test adds.
func airOn(surface *Surface, mediumC, airMS float64) Exposure {
	dry := false
	e := Exposure{Surface: surface, Wet: &dry, Medium: Course{TimesS: []float64{0}, C: []float64{mediumC}}}
	if surface == MovingAir {
		e.AirMS = &airMS
	}
	return e
}

// radiating adds a radiating temperature, °C.
func radiating(e Exposure, c float64) Exposure {
	e.RadiatingC = &c
	return e
}

// drawnTable is a food whose properties follow the temperature, as those of a built-in food do.
func drawnTable(u func(lo, hi float64) float64) *Material {
	k, c := u(0.35, 0.6), u(2800, 3900)
	return &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Props: func(x float64) Properties {
		return Properties{k * (1 + x/500), 1050, c * (1 + x/1000)}
	}}
}

// drawnSize gives sizes, and the half axes of a shape of them.
func drawnSize(u func(lo, hi float64) float64, shape *Shape) (z Size, half [3]float64) {
	z = Size{ThicknessM: u(0.03, 0.1), DiameterM: u(0.03, 0.1), LengthM: u(0.03, 0.1), WidthM: u(0.03, 0.1)}
	switch shape {
	case Sphere, Cylinder:
		half[0] = z.DiameterM / 2
	case ShortCylinder:
		half = [3]float64{z.LengthM / 2, z.DiameterM / 2}
	case Slab, Spheroid:
		half[0] = z.ThicknessM / 2
	case Bar:
		half = [3]float64{z.ThicknessM / 2, z.WidthM / 2}
	default:
		half = [3]float64{z.ThicknessM / 2, z.WidthM / 2, z.LengthM / 2}
	}
	return z, half
}

// nearRim is a place mostly near the faces.
func nearRim(draw *rand.Rand, half [3]float64) Place {
	out := func() float64 { return 1 - math.Pow(draw.Float64(), 3) }
	return Place{UpM: out() * half[0], AcrossM: out() * half[1], AlongM: out() * half[2]}
}

// Food that was 2.7 °C throughout is nowhere colder in air that is hotter, and food of 90 °C nowhere hotter in air that is colder: at no instant, however
// far the range of all temperatures before reaches.
func TestNothingLeavesAFoodOfOneTemperature(t *testing.T) {
	draw := rand.New(rand.NewPCG(27, 1))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	food := drawnTable(u)
	for _, shape := range []*Shape{ShortCylinder, Bar, Brick, Cylinder, Sphere, Spheroid} {
		for _, heats := range []bool{true, false} {
			was, before, to, stage := 2.7, 0.5, 96.6, Reheat
			if !heats {
				was, before, to, stage = 90, 98, 2, Cool
			}
			wet, rh := true, 95.0
			moist := airOn(StillAir, to, 0)
			moist.Wet, moist.RH = &wet, &rh
			for i, e := range []Exposure{airOn(MovingAir, to, 5), airOn(StillAir, to, 0), radiating(airOn(MovingAir, to, 3), 1.2*to), moist} {
				name := [...]string{"moving air", "still air", "walls", "still air, wet"}[i]
				size, half := drawnSize(u, shape)
				steps := []Step{ownStep(HoldCold, 36000, 300, was), {Name: "then", Stage: stage, DurationS: 1800, Exposure: e}}
				h, err := Solve(Product{Name: "p", Shape: shape, Size: size, Food: food, StartC: before}, steps, Options{})
				if err != nil {
					t.Fatal(err)
				}
				low, high := was-2e-3, to*1.2+1
				if !heats {
					low, high = to-1, was+2e-3
				}
				at := []float64{36000.05, 36000.2, 36000.5, 36001, 36002, 36004, 36010, 36030, 36100, 36300}
				c := make([]float64, len(at))
				for range 40 {
					p := nearRim(draw, half)
					h.Course(p, at, c)
					if slices.Min(c) < low || slices.Max(c) > high {
						t.Errorf("%s, %s: %.4f °C after food of %g °C came into it, at %.1f, %.1f, %.1f of %.4g mm", shape.Name, name, c, was,
							1000*p.UpM, 1000*p.AcrossM, 1000*p.AlongM, half)
						break
					}
				}
			}
		}
	}
}

// drawnAir is a step in dry air that moves or not, with walls or without.
func drawnAir(draw *rand.Rand, u func(lo, hi float64) float64, mediumC float64) Exposure {
	switch draw.IntN(3) {
	case 0:
		return airOn(StillAir, mediumC, 0)
	case 1:
		return airOn(MovingAir, mediumC, u(0.4, 6))
	}
	return radiating(airOn(MovingAir, mediumC, u(0.4, 6)), mediumC+u(-10, 100))
}

// Whatever chain of dry air is drawn, no place is colder or hotter than all of the food was when the air changed and all that is around it since (maximum
// principle): neither a place that is asked for, nor the scan, nor what the results list.
func TestNoPlaceLeavesFoodAndSurroundings(t *testing.T) {
	draw := rand.New(rand.NewPCG(8, 3))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	shapes := []*Shape{ShortCylinder, Bar, Brick, Slab, Sphere, Cylinder, Spheroid}
	for n := range 35 {
		shape := shapes[n%len(shapes)]
		size, half := drawnSize(u, shape)
		var steps []Step
		for i, stage := range []*Stage{Cook, Cool, Reheat, Cool} {
			length, mediumC := math.Round(u(200, 3000)), u(60, 110)
			if i == 2 {
				length *= 6
			}
			if i%2 == 1 {
				mediumC = u(0.5, 20)
			}
			steps = append(steps, Step{Name: stage.Name, Stage: stage, DurationS: length, Exposure: drawnAir(draw, u, mediumC)})
		}
		p := Product{Name: "p", Shape: shape, Size: size, Food: drawnTable(u), StartC: u(2, 30)}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}}
		s.layOut()
		var within [][2]float64
		for i, sp := range h.Spans {
			low, high := s.skinOf(&steps[i].Exposure, nil, &steps[i]).mediumRange()
			if i == 0 {
				low, high = min(low, p.StartC), max(high, p.StartC)
			} else {
				a, b := h.body.extremes(h.field.at(sp.StartS))
				low, high = min(low, a.c), max(high, b.c)
			}
			within = append(within, [2]float64{low - 2e-3, high + 2e-3})
		}
		hold := func(what string, c, at float64) {
			i := spanAt(h.Spans, at)
			if r := within[i]; c < r[0] || c > r[1] {
				t.Errorf("%d, %s, %s: %.4f °C %.2f s into step %d, outside %.4f to %.4f", n, shape.Name, what, c, at-h.Spans[i].StartS, i, r[0], r[1])
			}
		}
		for _, sp := range h.Spans {
			for range 200 {
				at := sp.StartS + math.Exp(u(math.Log(0.05), math.Log(sp.EndS-sp.StartS)))
				hold("a place", h.At(nearRim(draw, half), at), at)
			}
		}
		sc := h.Scan()
		for i := range sc.Spots {
			for k, at := range sc.TimesS {
				if at > 0 {
					hold("the scan", sc.C[i][k], at)
				}
			}
		}
		some := h.Sample(60)
		for k, at := range some.TimesS {
			if at > 0 {
				hold("the coldest place", some.Coldest[k], at)
				hold("the hottest place", some.Hottest[k], at)
			}
		}
	}
}

// Air that gets hotter cools no place: none is colder than where the air stays as it was, and none is hotter in air that gets colder (comparison principle).
func TestHotterAirCoolsNoPlace(t *testing.T) {
	draw := rand.New(rand.NewPCG(5, 11))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	worst := 0.0
	for n, shape := range []*Shape{ShortCylinder, Bar, Brick, Spheroid, ShortCylinder, Bar, Cylinder, Sphere} {
		size, half := drawnSize(u, shape)
		food, startC, mediumC, airMS, first := drawnTable(u), u(2, 60), u(20, 40), u(1, 5), math.Round(u(300, 1200))
		by := u(30, 60)
		if n%2 == 1 {
			mediumC, by = mediumC+60, -by
		}
		solve := func(then float64) *History {
			h, err := Solve(Product{Name: "p", Shape: shape, Size: size, Food: food, StartC: startC}, []Step{
				{Name: "first", Stage: Cook, DurationS: first, Exposure: airOn(MovingAir, mediumC, airMS)},
				{Name: "then", Stage: Cook, DurationS: 1200, Exposure: airOn(MovingAir, then, airMS)}}, Options{})
			if err != nil {
				t.Fatal(err)
			}
			return h
		}
		stays, changes := solve(mediumC), solve(mediumC+by)
		for range 600 {
			at, out := first+math.Exp(u(math.Log(0.1), math.Log(100))), func() float64 { return 1 - 0.3*math.Pow(draw.Float64(), 3) }
			p := Place{UpM: out() * half[0], AcrossM: out() * half[1], AlongM: out() * half[2]}
			short := stays.At(p, at) - changes.At(p, at)
			if by < 0 {
				short = -short
			}
			if worst = max(worst, short); short > 0.02 {
				t.Errorf("%s, air changes by %.1f K: %.4f K the other way after %.1f s, at %.1f, %.1f, %.1f of %.4g mm", shape.Name, by, short, at-first, 1000*p.UpM, 1000*p.AcrossM, 1000*p.AlongM, half)
				break
			}
		}
	}
	t.Logf("worst %.4f K", worst)
}

// drawnFaces is a step of any surroundings that react, or that do not: still or moving air, walls, wet or dry, moist, wrapped, with courses.
func drawnFaces(draw *rand.Rand, u func(lo, hi float64) float64, stage *Stage, shape *Shape) Step {
	length := math.Round(u(200, 3000))
	medium := func() float64 {
		if stage == Cool {
			return u(0.5, 20)
		}
		return u(60, 98)
	}
	e := drawnAir(draw, u, medium())
	wet := draw.IntN(2) == 0
	e.Wet = &wet
	if draw.IntN(4) == 0 {
		rh := u(60, 95)
		e.RH = &rh
	}
	if draw.IntN(4) == 0 {
		e = filmTo(u(5, 300), medium())
	}
	if draw.IntN(5) == 0 {
		e.Medium = Course{TimesS: []float64{0, 0.4 * length, 0.6 * length, length}, C: []float64{medium(), medium(), medium(), medium()}}
	}
	if e.Surface != Film && draw.IntN(4) == 0 {
		w, dry := u(.001, .02), false
		e.WrapM2KW, e.Wet = &w, &dry
	}
	st := Step{Name: stage.Name, Stage: stage, DurationS: length, Exposure: e}
	if (shape == Slab || shape == Bar) && draw.IntN(2) == 0 {
		st.Faces = []FaceExposure{{Face: Top, Exposure: filmTo(u(5, 300), medium())}}
		if draw.IntN(2) == 0 {
			st.Faces[0].Exposure = Exposure{Surface: Insulated}
		}
	}
	return st
}

// What reacting faces can have driven in is kept to the right side: as in TestKeptIsNearerToTheTruth, a temperature is never farther off than the polynomials
// alone leave it, but for two thousandths of a kelvin and the error of the finer march.
func TestReactingFacesAreKeptNearerToTheTruth(t *testing.T) {
	draw := rand.New(rand.NewPCG(6, 3))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	const sooner = 2.0 // s
	shapes := []*Shape{ShortCylinder, Bar, Slab, Sphere, Cylinder, Spheroid}
	kept, moved, left, free, all := 0.0, 0, 0.0, 0, 0
	for n := range 18 {
		shape := shapes[n%len(shapes)]
		size, half := drawnSize(u, shape)
		var steps []Step
		for _, stage := range []*Stage{Cook, Cool, Reheat, Cool} {
			steps = append(steps, drawnFaces(draw, u, stage, shape))
		}
		p := Product{Name: "p", Shape: shape, Size: size, Food: drawnTable(u), StartC: u(2, 30)}
		if Check(p, steps).Faults() > 0 { // wet food that could freeze
			continue
		}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		fine, err := Solve(p, steps, Options{ErrorFromS: sooner})
		if err != nil {
			t.Fatal(err)
		}
		for i := range h.settling {
			for _, d := range h.settling[i].drives {
				if all++; d.by[0] == -d.by[1] && math.IsInf(d.film[0], 1) {
					free++
				}
			}
		}
		for i, sp := range h.Spans {
			for range 150 {
				at := sp.StartS + min(u(2*sooner, h.settle), sp.EndS-sp.StartS)
				place := nearRim(draw, half)
				if draw.IntN(2) == 0 {
					place = Place{UpM: u(-1, 1) * half[0], AcrossM: u(0, 1) * half[1]}
				}
				var alone [1]float64
				h.field.course(h.body.coord(place), []float64{at}, alone[:])
				c, truth := h.At(place, at), fine.At(place, at)
				was, is := math.Abs(h.within(at, alone[0])-truth), math.Abs(c-truth)
				if is > was+0.002+fine.ErrorK {
					t.Errorf("%d, %s, %.1f s after change %d, at %.1f, %.1f mm of %.4g: %.4f off, %.4f by the polynomials alone", n, shape.Name, at-sp.StartS, i, 1000*place.UpM, 1000*place.AcrossM, half, is, was)
				}
				if was-is > 0.01 {
					moved++
				}
				kept, left = max(kept, was-is), max(left, is)
			}
		}
	}
	words := fmt.Sprintf("kept nearer by up to %.3f K, %d times; off by up to %.4f K; nothing is known of %d faces of %d", kept, moved, left, free, all)
	if t.Log(words); moved < 50 || 5*free > all {
		t.Error(words)
	}
}

// A face whose heat goes with its temperature in a straight line drives as the constant film that it is.
func TestDriveOfAReactingFaceIsThatOfItsFilm(t *testing.T) {
	const film, mediumC = 30.0, 80.0
	food := drawnTable(func(lo, hi float64) float64 { return (lo + hi) / 2 })
	law := filmTo(film, mediumC)
	law.Surface = &Surface{Name: "test surface", law: func(c, _ float64) (w, slope float64) { return film * (mediumC - c), -film }}
	var of [2][]settles
	for i, e := range []Exposure{filmTo(film, mediumC), law} {
		steps := []Step{ownStep(Cook, 3000, 20, 95), ownStep(Cool, 3000, 15, 3), {Name: "then", Stage: Reheat, DurationS: 3000, Exposure: e}, ownStep(Cool, 3000, 15, 3)}
		h, err := Solve(Product{Name: "p", Shape: Bar, Size: Size{ThicknessM: 0.05, WidthM: 0.08}, Food: food, StartC: 10}, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		of[i] = h.settling
	}
	for i := range of[0] {
		for a := range of[0][i].drives {
			want, got := of[0][i].drives[a], of[1][i].drives[a]
			for end := range want.by {
				if math.Abs(got.by[end]-want.by[end]) > 0.05 {
					t.Errorf("step %d, axis %d: %.4f K, and %.4f by the film", i, a, got.by, want.by)
				}
			}
			if got.film[1] < want.film[1]*0.999 || got.film[1] > want.film[1]*steepMore*1.001 {
				t.Errorf("step %d, axis %d: at most %.2f /m, and %.2f by the film", i, a, got.film[1], want.film[1])
			}
		}
	}
}
