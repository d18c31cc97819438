package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Deep in the food nothing has come in yet in the first seconds after a change: the centre goes on as it was, by erfc(d/2√(αt)) far within a thousandth of
// a kelvin. The polynomials alone swing there by up to 3 K.
func TestNoSwingAfterAChange(t *testing.T) {
	q := Properties{0.45, 1050, 3500}
	food := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return q }}
	held := func(c float64) Exposure {
		return Exposure{Surface: Held, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}
	}
	step := func(stage *Stage, s float64, e Exposure) Step {
		return Step{Name: stage.Name, Stage: stage, DurationS: s, Exposure: e}
	}
	for _, x := range []struct {
		name  string
		shape *Shape
		size  Size
	}{
		{"sphere", Sphere, Size{DiameterM: 0.1}},
		{"cylinder", Cylinder, Size{DiameterM: 0.1}},
		{"slab", Slab, Size{ThicknessM: 0.08}},
		{"short cylinder", ShortCylinder, Size{DiameterM: 0.1, LengthM: 0.12}},
		{"brick", Brick, Size{ThicknessM: 0.08, WidthM: 0.1, LengthM: 0.12}},
	} {
		t.Run(x.name, func(t *testing.T) {
			h, err := Solve(Product{Name: "p", Shape: x.shape, Size: x.size, Food: food, StartC: 20},
				[]Step{step(Cook, 5400, held(95)), step(Cool, 5400, held(2)), step(Reheat, 5400, filmTo(600, 98))}, Options{})
			if err != nil {
				t.Fatal(err)
			}
			centre := Place{}
			for i, sp := range h.Spans {
				before, slope := h.At(centre, sp.StartS), 0.0
				if i > 0 {
					slope = (before - h.At(centre, sp.StartS-20)) / 20
				}
				for _, tau := range []float64{0.2, 1, 3, 8} {
					if got, want := h.At(centre, sp.StartS+tau), before+slope*tau; math.Abs(got-want) > 0.01 {
						t.Errorf("%s, %.1f s: %.4f °C at the centre, %.4f if it goes on", sp.Step.Name, tau, got, want)
					}
				}
			}
			for i, s := range h.Scan().Spots {
				if s.Place != centre {
					continue
				}
				for k, at := range h.Scan().TimesS {
					if at > 0 && at < 8 && math.Abs(h.Scan().C[i][k]-20) > 0.001 {
						t.Errorf("%.1f s: %.4f °C at the centre of the scan", at, h.Scan().C[i][k])
					}
				}
			}
		})
	}
}

// Foods whose properties change are marched, and swing no more; what radiates reaches beyond the media, and what can have come in with it.
func TestNoSwingOfMarches(t *testing.T) {
	food := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Props: func(c float64) Properties {
		return Properties{0.40 + 0.001*c, 1050, 3300 + 3*c}
	}}
	steps := []Step{ownStep(Cook, 9000, 30, 90), ownStep(Rest, 2700, 8, 21), ownStep(Cool, 5400, 500, 1)}
	h, err := Solve(Product{Name: "p", Shape: ShortCylinder, Size: Size{DiameterM: 0.13, LengthM: 0.2}, Food: food, StartC: 5}, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	chill, centre := h.Spans[2].StartS, Place{}
	before := h.At(centre, chill)
	slope := (before - h.At(centre, chill-60)) / 60
	for _, tau := range []float64{1, 5, 20, 60} {
		if got, want := h.At(centre, chill+tau), before+slope*tau; math.Abs(got-want) > 0.02 {
			t.Errorf("%.0f s after the change: %.4f °C at the centre, %.4f if it goes on", tau, got, want)
		}
	}
	// in a piece that heat would cross sooner than the error begins to hold if it were frozen, which it is not
	moist := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Props: func(c float64) Properties {
		if c < -1 {
			return Properties{1.6, 950, 2000}
		}
		return food.Props(c)
	}}
	small := Product{Name: "p", Shape: ShortCylinder, Size: Size{DiameterM: 0.056, LengthM: 0.1039}, Food: moist, StartC: 13.8}
	if h, err = Solve(small, []Step{ownStep(Cook, 3180, 11.2, 81.4)}, Options{}); err != nil {
		t.Fatal(err)
	}
	for _, tau := range []float64{0.6, 1.8, 10} {
		if got := h.At(centre, tau); math.Abs(got-13.8) > 0.002 {
			t.Errorf("%g s after the start: %.4f °C at the centre of a small piece", tau, got)
		}
	}
	hot, dry := 300.0, false
	steps[0] = Step{Name: "grill", Stage: Cook, DurationS: 1200, Exposure: Exposure{Surface: StillAir, RadiatingC: &hot, Wet: &dry,
		Medium: Course{TimesS: []float64{0}, C: []float64{100}}}}
	if h, err = Solve(Product{Name: "p", Shape: Slab, Size: Size{ThicknessM: 0.05}, Food: food, StartC: 5}, steps[:1], Options{}); err != nil {
		t.Fatal(err)
	}
	// the surface settles between the air and what radiates, and was at more than 200 °C if it came near to it
	if got := h.settling[0].drives[0].by[1]; got < 200 {
		t.Errorf("what comes in is bounded by %.0f K, and %.0f °C radiates on food of 5 °C in air of 100 °C", got, hot)
	}
}

// What is kept is kept to the right side: against many more polynomials, whose own swing is over some ten to a hundred times sooner, a temperature is never
// farther off than the polynomials alone leave it, but for two thousandths of a kelvin, at any place and instant, with media that change as well, faces
// that differ, steps that end soon, and properties that follow the temperature.
func TestKeptIsNearerToTheTruth(t *testing.T) {
	draw := rand.New(rand.NewPCG(4, 2))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	worst, kept, left, moved := 0.0, 0.0, 0.0, 0
	shapes := []*Shape{Slab, Sphere, Cylinder, ShortCylinder, Slab, Bar, Brick, Spheroid, Slab, Sphere, ShortCylinder}
	for n := range 33 {
		q := Properties{u(0.3, 0.6), 1050, u(2500, 3900)}
		food := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return q }}
		if n%11 >= 8 { // marched
			food = &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -10, HighC: 160, Props: func(c float64) Properties {
				return Properties{q.KWmK * (1 + c/500), q.RhoKgM3, q.CJkgK * (1 + c/1000)}
			}}
		}
		shape := shapes[n%11]
		size := Size{ThicknessM: u(0.03, 0.1), DiameterM: u(0.03, 0.1), LengthM: u(0.03, 0.1), WidthM: u(0.03, 0.1)}
		var steps []Step
		for i := range 4 {
			length := math.Round(u(200, 3000))
			e := filmTo(u(5, 600), u(0, 100))
			if draw.IntN(4) == 0 {
				e = Exposure{Surface: Held, Medium: Course{TimesS: []float64{0}, C: []float64{u(0, 100)}}}
			}
			if draw.IntN(3) == 0 {
				e.Medium = Course{TimesS: []float64{0, 0.5 * length, length - 20, length}, C: []float64{u(0, 100), u(0, 100), u(0, 100), u(0, 100)}}
			}
			stage := []*Stage{Cook, Cool, Reheat, Cool}[i]
			st := Step{Name: stage.Name, Stage: stage, DurationS: length, Exposure: e}
			if draw.IntN(4) == 0 { // reached at once, soon, late or never
				until := u(0, 100)
				st.UntilC = &until
			}
			if shape == Slab && n%2 == 0 {
				st.Faces = []FaceExposure{{Face: Top, Exposure: filmTo(u(5, 600), u(0, 100))}}
			}
			steps = append(steps, st)
		}
		p := Product{Name: "p", Shape: shape, Size: size, Food: food, StartC: u(2, 30)}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		sooner := 0.5 // s
		if shape == Brick || food.Table {
			sooner = 2
		}
		fine, err := Solve(p, steps, Options{ErrorFromS: sooner})
		if err != nil {
			t.Fatal(err)
		}
		half := [3]float64{size.ThicknessM / 2, size.WidthM / 2, size.LengthM / 2}
		switch shape {
		case Sphere, Cylinder:
			half[0] = size.DiameterM / 2
		case ShortCylinder:
			half = [3]float64{size.LengthM / 2, size.DiameterM / 2}
		case Spheroid:
			half = [3]float64{size.ThicknessM / 2}
		}
		for i, sp := range h.Spans {
			if math.Abs(sp.StartS-fine.Spans[i].StartS) > 1e-3 { // Until was reached at another instant: another course
				break
			}
			for range 40 {
				at := sp.StartS + min(u(2*sooner, h.settle), sp.EndS-sp.StartS)
				place := Place{UpM: u(-1, 1) * half[0], AcrossM: u(0, 1) * half[1], AlongM: u(0, 1) * half[2]}
				var alone [1]float64
				h.field.course(h.body.coord(place), []float64{at}, alone[:])
				c, truth := h.At(place, at), fine.At(place, at)
				was, is := math.Abs(h.within(at, alone[0])-truth), math.Abs(c-truth)
				if is > was+0.002 {
					t.Errorf("%d, %s, %.1f s after a change, at %.1f, %.1f, %.1f mm of %.4g: %.4f off, %.4f by the polynomials alone", n, shape.Name, at-sp.StartS, 1000*place.UpM, 1000*place.AcrossM, 1000*place.AlongM, half, is, was)
				}
				if was-is > 0.01 {
					moved++
				}
				worst, kept, left = max(worst, is-was), max(kept, was-is), max(left, is)
			}
		}
	}
	t.Logf("kept nearer by up to %.3f K, %d times; farther by up to %.4f K; off by up to %.4f K", kept, moved, worst, left)
	if moved < 50 {
		t.Errorf("%d temperatures were kept: the cases do not show it", moved)
	}
}

// What the faces can have driven in holds between its ends until the faces know of each other, long after the swings: against the polynomials once they
// are exact, at the centre as well, where both faces of a slab and all of a sphere come together, and where the conductivity doubles with the temperature.
func TestWhatComesInIsBounded(t *testing.T) {
	q := Properties{0.45, 1050, 3500}
	constant := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return q }}
	rising := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -20, HighC: 140, Props: func(c float64) Properties {
		return Properties{q.KWmK * (1 + c/100), q.RhoKgM3, q.CJkgK * (1 + c/100)}
	}}
	held := Exposure{Surface: Held, Medium: Course{TimesS: []float64{0}, C: []float64{95}}}
	for _, food := range []*Material{constant, rising} {
		for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar} {
			for _, e := range []Exposure{held, filmTo(600, 95), filmTo(30, 95)} {
				size := Size{ThicknessM: 0.06, DiameterM: 0.06, LengthM: 0.06, WidthM: 0.06}
				p := Product{Name: "p", Shape: shape, Size: size, Food: food, StartC: 5}
				steps := []Step{{Name: "cook", Stage: Cook, DurationS: 3600, Exposure: e}}
				h, err := Solve(p, steps, Options{})
				if err != nil {
					t.Fatal(err)
				}
				s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}}
				s.layOut()
				early := h.settling[0]
				least, most := early.alpha[0], early.alpha[1]
				for _, x := range []float64{0, 0.1, 0.4, 0.8, 0.95, 1} {
					for _, fo := range []float64{0.025, 0.039} {
						at := fo * 0.03 * 0.03 / most
						if at < h.settle {
							continue
						}
						place := Place{UpM: 0.03 * x}
						c := h.At(place, at)
						var answers []answer
						for i := range early.drives {
							d := &early.drives[i]
							answers = append(answers, early.answered(s, d, s.under(h.body, d, place), at))
						}
						lo, hi := early.came(answers)
						if c < 5+lo-2*h.ErrorK || c > 5+hi+2*h.ErrorK {
							t.Errorf("%s, table %v, film %v, %.2f of the way out, Fourier number %g: %.4f °C, and %.4f to %.4f may have come in",
								shape.Name, food.Table, e.FilmW, x, fo, c, lo, hi)
						}
						if shape == Sphere && least == most && hi-lo > 0.01 {
							t.Errorf("sphere: %.4f to %.4f", lo, hi)
						}
					}
				}
			}
		}
	}
}

// A corner of the old surroundings just before a change makes the polynomials swing before it, and with them the course that goes on.
func TestCornerJustBeforeAChange(t *testing.T) {
	q := Properties{0.5, 1050, 2750}
	food := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return q }}
	held := func(times []float64, c ...float64) Exposure {
		return Exposure{Surface: Held, Medium: Course{TimesS: times, C: c}}
	}
	steps := []Step{{Name: "cook", Stage: Cook, DurationS: 1500, Exposure: held([]float64{0, 750, 1496, 1500}, 90, 60, 75, 40)},
		{Name: "reheat", Stage: Reheat, DurationS: 1500, Exposure: held([]float64{0}, 95)}}
	p := Product{Name: "p", Shape: Sphere, Size: Size{DiameterM: 0.08}, Food: food, StartC: 10}
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	fine, err := Solve(p, steps, Options{ErrorFromS: 0.5})
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []float64{0, 0.004, 0.008, 0.012, 0.016, 0.02, 0.024, 0.028, 0.032, 0.036, 0.039} {
		for tau := 1.0; tau < h.settle; tau++ {
			var alone [1]float64
			at, place := 1500+tau, Place{UpM: x}
			h.field.course(h.body.coord(place), []float64{at}, alone[:])
			truth := fine.At(place, at)
			if is, was := math.Abs(h.At(place, at)-truth), math.Abs(h.within(at, alone[0])-truth); is > was+0.002 {
				t.Errorf("%.1f mm, %.0f s: %.4f K off, %.4f by the polynomials alone", 1000*x, tau, is, was)
			}
		}
	}
}

// A face that nothing surrounds has no course whose corner could make the food bend just before a change.
func TestCornerBesideAnInsulatedFace(t *testing.T) {
	q := Properties{0.5, 1050, 2750}
	food := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return q }}
	oven := filmTo(25, 0)
	oven.Medium = Course{TimesS: []float64{0, 1490, 1500}, C: []float64{90, 80, 60}}
	steps := []Step{{Name: "cook", Stage: Cook, DurationS: 1500, Exposure: oven, Faces: []FaceExposure{{Face: Underside, Exposure: Exposure{Surface: Insulated}}}},
		ownStep(Cool, 1500, 30, 2)}
	h, err := Solve(Product{Name: "p", Shape: Slab, Size: Size{ThicknessM: 0.04}, Food: food, StartC: 10}, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if h.settling[1].bentK == 0 {
		t.Error("the corner of the oven does not count")
	}
}

// A thin layer over a gap, or over what takes little heat, warms as fast as a plate that lets nothing out, and is not held back: what is kept of control
// volumes, which do not swing, is never farther from a finer march than they are.
func TestThinLayersAreNotHeldBack(t *testing.T) {
	draw := rand.New(rand.NewPCG(3, 9))
	u := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	worst := 0.0
	for n := range 60 {
		food := func() *Material {
			q := Properties{u(0.3, 0.6), 1050, u(2500, 3900)}
			return &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -10, HighC: 160, Props: func(float64) Properties { return q }}
		}
		p := Product{Name: "p", Shape: LayeredSlab, StartC: u(2, 30)}
		one := food()
		for range 2 + draw.IntN(2) {
			l := Layer{Food: one, ThicknessM: u(0.0004, 0.004), BelowM2KW: u(0, 0.08)}
			if draw.IntN(2) == 0 {
				l.ThicknessM = u(0.005, 0.04)
			}
			if n%3 == 2 {
				l.Food = food()
			}
			p.Layers = append(p.Layers, l)
			p.Size.ThicknessM += l.ThicknessM
		}
		p.Layers[len(p.Layers)-1].BelowM2KW = 0
		steps := []Step{ownStep(Cook, 1800, u(5, 300), 95), ownStep(Cool, 1800, u(5, 300), 2)}
		if n%2 == 0 {
			for i := range steps {
				steps[i].Faces = []FaceExposure{{Face: Underside, Exposure: Exposure{Surface: Insulated}}}
			}
		}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		fine, err := Solve(p, steps, Options{ErrorFromS: 2})
		if err != nil {
			t.Fatal(err)
		}
		for i, sp := range h.Spans {
			for range 100 {
				at, place := sp.StartS+u(h.settle/3, h.settle), Place{UpM: u(-0.5, 0.5) * p.Size.ThicknessM}
				if draw.IntN(2) == 0 {
					place.UpM = p.Size.ThicknessM/2 - u(0, 2)*p.Layers[0].ThicknessM
				}
				var alone, truth [1]float64
				h.field.course(h.body.coord(place), []float64{at}, alone[:])
				fine.field.course(fine.body.coord(place), []float64{at}, truth[:])
				is, was := math.Abs(h.At(place, at)-truth[0]), math.Abs(alone[0]-truth[0])
				if worst = max(worst, is-was); is-was > 2e-3+fine.ErrorK {
					t.Errorf("%d: %.4f °C %.1f s into step %d, %.4f by control volumes, %.4f by more, %.2f mm under the top of layers of %.2f mm and more", n, h.At(place, at), at-sp.StartS, i, alone[0], truth[0],
						1000*(p.Size.ThicknessM/2-place.UpM), 1000*p.Layers[0].ThicknessM)
				}
			}
		}
	}
	t.Logf("worst %.4f K", worst)
}

// The least answer to a drive is that behind the weakest film in the food that conducts least, the most that behind the strongest in the one that conducts
// best: one number only where these are one.
func TestLeastAnswerIsOfTheWeakestFilm(t *testing.T) {
	const radiusM, depthM, tauS = 0.02, 0.0013, 17.0
	for _, c := range []struct {
		name  string
		alpha [2]float64 // m²/s
		film  [2]float64 // 1/m
	}{
		{"two films", [2]float64{1.3e-7, 1.3e-7}, [2]float64{18, 41}},
		{"two foods", [2]float64{1.1e-7, 1.5e-7}, [2]float64{33, 33}},
		{"one of each", [2]float64{1.3e-7, 1.3e-7}, [2]float64{33, 33}},
	} {
		for _, kind := range []axisKind{planeHalf, spherical} {
			e := &settles{alpha: c.alpha, backS: 5}
			d := &drive{exact: true, film: c.film}
			s := &solver{product: &Product{Shape: Slab}, kinds: [3]axisKind{kind}, radii: [3]float64{radiusM}}
			by := func(i int) float64 {
				root := math.Sqrt(c.alpha[i] * tauS)
				if kind == spherical {
					return d.inSphere(radiusM, radiusM-depthM, c.film[i], root)
				}
				return d.flat(depthM, c.film[i], root)
			}
			a := e.answered(s, d, radiusM-depthM, tauS)
			if math.Abs(a.least-by(0)) > 1e-12 || math.Abs(a.most-by(1)) > 1e-12 { // the far face of a slab gives nothing yet
				t.Errorf("%s, axis %d: %g to %g, want %g to %g", c.name, kind, a.least, a.most, by(0), by(1))
			}
		}
	}
}
