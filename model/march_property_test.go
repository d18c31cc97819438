package model

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// These tests draw products and chains whose food or surfaces follow the temperature, and hold the march to what must be true of any
// conduction, and to finer marches.

// drawnFollowing is a food whose properties follow the temperature: rows in a straight line, or ice that forms over a range.
func drawnFollowing(t *rapid.T, freezes bool) *Material {
	u := func(name string, low, high float64) float64 { return rapid.Float64Range(low, high).Draw(t, name) }
	if !freezes {
		k, kc, c, cc, rho := u("k", 0.35, 0.6), u("k by °C", -0.0005, 0.0015), u("c", 2800, 3900), u("c by °C", -2, 4), u("rho", 950, 1100)
		return &Material{Name: "drawn", Source: "drawn by the test", Table: true, LowC: -60, HighC: 260, Waterless: true, Props: func(x float64) Properties {
			return Properties{k + kc*x, rho, c + cc*x}
		}}
	}
	tf, rho := u("freezing point", -3, -0.6), u("rho", 950, 1100)
	cu, cf, latent := u("c", 3000, 3900), u("c frozen", 1700, 2200), u("latent heat", 120e3, 260e3)
	ku, kf := u("k", 0.4, 0.55), u("k frozen", 1.1, 1.8)
	return iceLaw{rho, cu, cf, latent, tf, ku, kf}.food("drawn", "drawn by the test", 150)
}

// ownStep is a step in films, W/(m²·K), to one medium, °C.
func ownStep(stage *Stage, durationS, w, c float64) Step {
	return Step{Name: stage.Name, Stage: stage, DurationS: durationS, Exposure: filmTo(w, c)}
}

// drawnSteps is a chain for a food: cook, rest and chill, or freeze and thaw.
func drawnSteps(t *rapid.T, freezes bool) []Step {
	u := func(name string, low, high float64) float64 { return rapid.Float64Range(low, high).Draw(t, name) }
	if freezes {
		return []Step{ownStep(Freeze, u("freeze s", 2000, 9000), u("freeze film", 10, 60), u("freezer", -40, -15)),
			ownStep(Thaw, u("thaw s", 2000, 12000), u("thaw film", 10, 60), u("thawing air", 4, 25))}
	}
	return []Step{ownStep(Cook, u("cook s", 900, 4000), u("cook film", 10, 60), u("oven", 90, 200)),
		ownStep(Rest, u("rest s", 600, 1500), u("rest film", 5, 12), u("room", 15, 25)),
		ownStep(Cool, u("chill s", 2000, 9000), u("chill film", 10, 60), u("chiller", 0, 5))}
}

// drawnBody has a shape and sizes.
func drawnBody(t *rapid.T, f *Material, shape *Shape) Product {
	size := func(name string, low, high float64) float64 { return rapid.Float64Range(low, high).Draw(t, name) }
	p := Product{Name: "drawn", Food: f, StartC: rapid.Float64Range(3, 25).Draw(t, "start"), Shape: shape,
		Size: Size{ThicknessM: size("thickness", 0.02, 0.08), WidthM: size("width", 0.03, 0.1), LengthM: size("length", 0.03, 0.12), DiameterM: size("diameter", 0.02, 0.09)}}
	if p.Shape == LayeredSlab {
		other := drawnFollowing(t, f.EnthalpyJkg != nil)
		p.Food = nil
		p.Layers = []Layer{{Food: f, ThicknessM: 0.6 * p.Size.ThicknessM, BelowM2KW: 0.003}, {Food: other, ThicknessM: 0.4 * p.Size.ThicknessM}}
	}
	return p
}

// drawn is a product with its chain.
type drawn struct {
	Product
	steps   []Step
	freezes bool
}

var marchedShapes = []*Shape{Slab, Cylinder, Sphere, LayeredSlab, ShortCylinder, Bar, Brick, Spheroid}

// eachDrawn draws n products of every shape, eight times as many where heat crosses one direction, that freeze and that do not. Marches in more are slow for
// the usual hundred draws.
func eachDrawn(t *testing.T, n int, shapes []*Shape, try func(t *testing.T, d *drawn)) {
	for _, shape := range shapes {
		for _, freezes := range []bool{false, true} {
			name := shape.Name
			if freezes {
				name += " that freezes"
			}
			t.Run(name, func(t *testing.T) {
				gen := rapid.Custom(func(t *rapid.T) *drawn {
					return &drawn{drawnBody(t, drawnFollowing(t, freezes), shape), drawnSteps(t, freezes), freezes}
				})
				draws := n
				if len(shape.Ways) < 2 {
					draws *= 8
				}
				for i := range draws {
					try(t, gen.Example(i+1))
				}
			})
		}
	}
}

// readyMarch lays a march of a product out.
func readyMarch(t rapid.TB, p *Product, steps []Step, e effort) (*solver, *marched) {
	t.Helper()
	if found := Check(*p, steps); found.Faults() > 0 {
		t.Fatal(found)
	}
	s := &solver{product: p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: new(scratch)}
	s.layOut()
	return s, s.newMarched(e)
}

// heatOf is the heat content of a line, J/m² of its upper face.
func (m *lineMarch) heatOf() float64 {
	sum := 0.0
	for i, h := range m.h {
		sum += m.w[i] * h
	}
	return sum
}

// What comes in over the faces of a line is what it gains, to 1e-9 of what it holds: freezing, thawing and changing properties, slab, cylinder, sphere and layers.
func TestHeatInIsHeatGained(t *testing.T) {
	worst := 0.0
	e := effort{more: 1, tolK: 2e-3}
	eachDrawn(t, 6, []*Shape{Slab, Cylinder, Sphere, LayeredSlab}, func(t *testing.T, d *drawn) {
		s, f := readyMarch(t, &d.Product, d.steps, e)
		line, ok := f.state.(*lineMarch)
		if !ok { // smooth fields go in modes: see the next test
			return
		}
		s.main = f
		at, before, most := 0.0, line.heatOf(), 0.0
		for i := range d.steps {
			span := Span{Step: &d.steps[i], StartS: at}
			s.chain = append(s.chain, s.marchStep(f, &span, e))
			at += d.steps[i].DurationS
			gained := line.heatOf() - before
			most = max(most, math.Abs(gained))
			off := math.Abs(line.inJ-gained) / most
			worst = max(worst, off)
			if off > 1e-9 {
				t.Errorf("step %d: %.9g J/m² came in, %.9g gained: %.2g of the most gained", i, line.inJ, gained, off)
			}
		}
	})
	t.Logf("worst %.2g", worst)
}

// heatContent is the mean heat content of a march, J/m³.
func heatContent(f *marched) float64 {
	var h []float64
	switch m := f.state.(type) {
	case *lineMarch:
		h = m.h
	case *modesMarch:
		m.leave()
		h = m.h
	case *spaceMarch:
		h = m.h
	case *shellMarch:
		h = m.h
	}
	sum := 0.0
	for i, w := range f.mesh.weights() {
		sum += w * h[i]
	}
	return sum
}

// flowing is a surface through which a flow goes that nothing changes, W/m².
func flowing(wM2 float64) Exposure {
	e := filmTo(1, 20)
	e.Surface = &Surface{Name: "test surface", law: func(float64, float64) (float64, float64) { return wM2, 0 }}
	return e
}

// faceByVolume is the surface of a body by its volume, 1/m.
func faceByVolume(p *Product) float64 {
	z := p.Size
	switch p.Shape {
	case Slab, LayeredSlab:
		return 2 / z.ThicknessM
	case Cylinder:
		return 4 / z.DiameterM
	case Sphere:
		return 6 / z.DiameterM
	case ShortCylinder:
		return 4/z.DiameterM + 2/z.LengthM
	case Bar:
		return 2/z.ThicknessM + 2/z.WidthM
	case Brick:
		return 2/z.ThicknessM + 2/z.WidthM + 2/z.LengthM
	}
	a, b := z.ThicknessM/2, z.DiameterM/2 // spheroid
	area := 2 * math.Pi * b * b
	if e := math.Sqrt(math.Abs(1 - math.Min(a, b)*math.Min(a, b)/math.Max(a, b)/math.Max(a, b))); a > b {
		area *= 1 + a/b/e*math.Asin(e)
	} else {
		area *= 1 + (1-e*e)/e*math.Atanh(e)
	}
	return area / (4 * math.Pi / 3 * a * b * b)
}

// A known flow goes in and out again: in every shape what is gained is the flow by surface and time, and at the end the food holds as much
// heat as at the start, to 1e-9, whatever it did in between: freezing, thawing, or properties that follow the temperature.
func TestFreezingAndThawingReturnTheHeat(t *testing.T) {
	if testing.Short() {
		t.Skip("long")
	}
	worst := 0.0
	eachDrawn(t, 1, marchedShapes, func(t *testing.T, d *drawn) {
		const durationS = 12000.0
		heat := 1.5e8 // J/m³
		if d.freezes {
			heat = -3e8
		}
		q := heat / durationS / faceByVolume(&d.Product)
		steps := []Step{{Name: "there", Stage: Cool, DurationS: durationS, Exposure: flowing(q)}, {Name: "back", Stage: Cool, DurationS: durationS, Exposure: flowing(-q)}}
		e := effort{more: 1, tolK: 2e-2}
		if d.Shape == Brick && d.freezes {
			e.more = 0.6 // for its time
		}
		s, f := readyMarch(t, &d.Product, steps, e)
		s.main = f
		before := heatContent(f)
		for i, want := range []float64{heat, 0} {
			span := Span{Step: &steps[i], StartS: float64(i) * durationS}
			s.chain = append(s.chain, s.marchStep(f, &span, e))
			off := math.Abs(heatContent(f)-before-want) / math.Abs(heat)
			tol := 1e-9
			if d.Shape == Spheroid && i == 0 {
				tol = 1e-6 // the surface of a spheroid is a sum over nodes
			} else {
				worst = max(worst, off)
			}
			if off > tol {
				t.Errorf("step %d: %.10g J/m³ gained, %.10g came in", i, heatContent(f)-before, want)
			}
		}
	})
	t.Logf("worst %.2g", worst)
}

// Nothing gets colder or hotter than the start and the media in films that are constant; nodes are looked at, which nothing clamps.
func TestMarchedNodesStayBetweenStartAndMedia(t *testing.T) {
	if testing.Short() {
		t.Skip("long")
	}
	eachDrawn(t, 1, marchedShapes, func(t *testing.T, d *drawn) {
		e := effort{more: 1, tolK: 2e-3}
		if d.Shape == Brick && d.freezes {
			e.more = 0.6 // for its time
		}
		s, _ := readyMarch(t, &d.Product, d.steps, e)
		h, f := s.marchOnce(e)
		low, high := d.StartC, d.StartC
		for i := range h.Spans {
			c := d.steps[i].Medium.C[0]
			low, high = min(low, c), max(high, c)
			a, b := f.track.reach(h.Spans[i].StartS+h.settle, h.Spans[i].EndS)
			if off := max(low-a, b-high); off > 2e-3 {
				t.Errorf("step %d: %.5f to %.5f °C, outside %.5f to %.5f", i, a, b, low, high)
			}
		}
	})
}

// apartK is the largest difference of two histories of one chain at the places and instants of the first's scan, from the settling of each
// step on.
func apartK(a, b *History) float64 {
	worst := 0.0
	var times, before []float64
	for _, sp := range a.Spans {
		for tau := a.settle; ; tau *= 1.5 {
			at := min(sp.StartS+tau, sp.EndS)
			times, before = append(times, at), append(before, at-lately*(at-sp.StartS))
			if at == sp.EndS {
				break
			}
		}
	}
	x, y := make([]float64, len(times)), make([]float64, len(times))
	for _, spot := range a.Scan().Spots {
		a.Course(spot.Place, times, x)
		b.Course(spot.Place, times, y)
		for i := range x {
			if off := math.Abs(x[i] - y[i]); off > worst && !atIce(a, spot.Place, times[i]) && !atIce(b, spot.Place, times[i]) &&
				!(severalWays(a.Product) && atIce(b, spot.Place, before[i])) {
				worst = off
			}
		}
	}
	return worst
}

// severalWays tells whether heat goes through a product in two or three directions.
func severalWays(p *Product) bool {
	return p.Shape == ShortCylinder || p.Shape == Bar || p.Shape == Brick || p.Shape == Spheroid
}

// atIce tells whether a front of ice stands within a control volume and a half of a place, in several directions within two of the rougher
// march, where the stated error does not hold: both frozen and unfrozen food lie around it.
func atIce(h *History, p Place, at float64) bool {
	var zeros []float64
	for _, f := range h.Product.Foods() {
		if f.freezes() {
			zeros = append(zeros, *f.FreezingC)
		}
	}
	half := reach(h.Product)
	share := 0.07 // of a half axis of 48 volumes
	if half[1] < 1 {
		share = 0.2 // of one of 18
	}
	if h.Product.Shape == Bar || h.Product.Shape == ShortCylinder || h.Product.Shape == Spheroid {
		share = 0.12 // of one of 30
	}
	for _, zero := range zeros {
		frozen := h.At(p, at) < zero
		for i, r := range half {
			for _, d := range []float64{-share, -share / 2, share / 2, share} {
				q := p
				to := []*float64{&q.UpM, &q.AcrossM, &q.AlongM}[i]
				if r == 0 || math.IsInf(r, 1) {
					continue
				}
				*to = max(-r, min(r, *to+d*r))
				if h.At(q, at) < zero != frozen {
					return true
				}
			}
		}
	}
	return false
}

// The error that a history states holds against a march with more nodes and a finer tolerance in time. Freezing bricks are left out for the
// time that they take: bars go the same way.
func TestStatedErrorOfMarchesIsHonest(t *testing.T) {
	if testing.Short() {
		t.Skip("long")
	}
	most := 0.0
	eachDrawn(t, 2, marchedShapes, func(t *testing.T, d *drawn) {
		e := effort{more: 1.7, tolK: 2e-4}
		if d.freezes {
			switch d.Shape {
			case Brick:
				return
			case Spheroid:
				e = effort{more: 2, tolK: 2e-3}
			case Bar, ShortCylinder:
				e = effort{more: 1.6, tolK: 1e-2}
			default:
				e = effort{more: 8, tolK: 5e-4}
			}
		} else if d.Shape == LayeredSlab {
			e.more = 5
		}
		h, err := Solve(d.Product, d.steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s, _ := readyMarch(t, &d.Product, d.steps, e)
		fine, _ := s.marchOnce(e)
		if fine == nil {
			t.Fatal(s.refused)
		}
		off := apartK(h, fine)
		most = max(most, off/h.ErrorK)
		t.Logf("stated %.4f K, true %.4f K", h.ErrorK, off)
		if off > 2*h.ErrorK+0.002 {
			t.Errorf("%+v: stated %.4f K, true %.4f K", d.Size, h.ErrorK, off)
		}
	})
	t.Logf("at most %.2f of the stated error", most)
}

// A food of constant properties that is marched, because its properties stand in a table, agrees with the method that is exact in time, to
// the errors that both state.
func TestMarchesAgreeWithTheExactMethod(t *testing.T) {
	eachDrawn(t, 2, marchedShapes, func(t *testing.T, d *drawn) {
		if d.freezes {
			return
		}
		var solved [2]*History
		for i, table := range []bool{true, false} {
			p := d.Product
			plain := func(m *Material) *Material {
				c := *m
				q := m.Props(40)
				c.Table, c.Props = table, func(float64) Properties { return q }
				return &c
			}
			if p.Food != nil {
				p.Food = plain(p.Food)
			}
			p.Layers = append([]Layer(nil), p.Layers...)
			for j := range p.Layers {
				p.Layers[j].Food = plain(p.Layers[j].Food)
			}
			var err error
			if solved[i], err = Solve(p, d.steps, Options{}); err != nil {
				t.Fatal(err)
			}
		}
		m, x := solved[0], solved[1]
		if m.Spans[0].Method != Marched || x.Spans[0].Method != ExactInTime {
			t.Fatalf("%s and %s", m.Spans[0].Method, x.Spans[0].Method)
		}
		worst := apartK(m, x)
		t.Logf("%.4f K apart, stated %.4f and %.4f K", worst, m.ErrorK, x.ErrorK)
		if worst > 2*(m.ErrorK+x.ErrorK)+0.002 {
			t.Errorf("%+v: %.4f K apart, stated %.4f and %.4f K", d.Size, worst, m.ErrorK, x.ErrorK)
		}
	})
}

// Heat that must pass a contact to warm the lower layer: marched layers agree with the method that is exact in time, so closely that 2 % of the
// contact resistance would be seen, at 0.4 K.
func TestMarchedContact(t *testing.T) {
	steps := []Step{{Name: "oven", Stage: Cook, DurationS: 7300, Exposure: filmTo(31, 158), Faces: []FaceExposure{{Face: Underside, Exposure: Exposure{Surface: Insulated}}}}}
	var h [2]*History
	for i, table := range []bool{true, false} {
		food := func(q Properties) *Material {
			return &Material{Name: "test food", Source: "input of the test", Table: table, LowC: -50, HighC: 250, Waterless: true, Props: func(float64) Properties { return q }}
		}
		p := Product{Name: "p", Shape: LayeredSlab, Size: Size{ThicknessM: 0.041}, StartC: 6,
			Layers: []Layer{{Food: food(Properties{0.47, 1040, 3500}), ThicknessM: 0.019, BelowM2KW: 0.052}, {Food: food(Properties{0.39, 980, 3100}), ThicknessM: 0.022}}}
		var err error
		if h[i], err = Solve(p, steps, Options{}); err != nil {
			t.Fatal(err)
		}
	}
	if h[0].Spans[0].Method != Marched || h[1].Spans[0].Method != ExactInTime {
		t.Fatalf("%s and %s", h[0].Spans[0].Method, h[1].Spans[0].Method)
	}
	most := min(0.04, 2*(h[0].ErrorK+h[1].ErrorK)+0.002)
	for _, at := range []float64{1900, 4100, 7300} {
		for _, up := range []float64{0.0205, 0.0019, 0.0011, -0.0205} { // the contact lies at 0.0015
			if a, b := h[0].At(Place{UpM: up}, at), h[1].At(Place{UpM: up}, at); math.Abs(a-b) > most {
				t.Errorf("%g s, %g m: marched %.4f °C, exactly %.4f, apart by more than %.4f K", at, up, a, b, most)
			}
		}
	}
}

// marchOnceFor marches a product with an effort of one's own.
func marchOnceFor(t testing.TB, p Product, steps []Step, e effort) *History {
	t.Helper()
	if found := Check(p, steps); found.Faults() > 0 {
		t.Fatal(found)
	}
	s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: new(scratch)}
	s.layOut()
	h, _ := s.marchOnce(e)
	if len(s.refused) > 0 {
		t.Fatal(s.refused)
	}
	return h
}

// inStepsOf marches to an end, s, in n equal steps and gives the heat contents there.
func inStepsOf(t *testing.T, f *marched, skins func(*Face) *skin, endS float64, n int) []float64 {
	t.Helper()
	f.state.surround(skins)
	f.state.begin(0)
	f.state.keep(f.track, 0)
	d := endS / float64(n)
	for i := range n {
		if e := f.state.try(float64(i)*d, d); math.IsInf(e, 0) || math.IsNaN(e) {
			t.Fatalf("step %d of %d: error %g", i, n, e)
		}
		f.state.accept(f.track, float64(i+1)*d)
	}
	switch m := f.state.(type) {
	case *lineMarch:
		return m.h
	case *modesMarch:
		m.leave()
		return m.h
	}
	return f.state.(*spaceMarch).h
}

// Errors in time fall with the length of the steps as the schemes claim: with the square in control volumes (TR-BDF2) and in RKL2. In modes
// the order rises towards 3 only where steps are of a second; at usual steps, of minutes, it is 1 to 1.5, because what is left over is stiff, with errors
// of a thousandth of a degree. A food of changing properties that the surroundings change slowly, so that no start hides the order.
func TestOrderInTime(t *testing.T) {
	food := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Props: func(c float64) Properties {
		return Properties{0.45 + 0.002*c, 1000, 3200 + 6*c}
	}}
	slow := filmTo(30, 20)
	slow.Medium = Course{TimesS: []float64{0, 4000}, C: []float64{20, 140}}
	steps := []Step{{Name: "warm", Stage: Cook, DurationS: 4000, Exposure: slow}}
	layered := Product{Name: "p", Shape: LayeredSlab, Size: Size{ThicknessM: 0.04}, Layers: []Layer{{Food: food, ThicknessM: 0.02, BelowM2KW: 0.001}, {Food: food, ThicknessM: 0.02}}, StartC: 20}
	for _, c := range []struct {
		name  string
		p     Product
		order float64
		steps int
	}{
		{"volumes", layered, 2, 20},
		{"modes", Product{Name: "p", Shape: Slab, Size: Size{ThicknessM: 0.04}, Food: food, StartC: 20}, 2.5, 1600},
		{"modes of a bar", Product{Name: "p", Shape: Bar, Size: Size{ThicknessM: 0.04, WidthM: 0.06}, Food: food, StartC: 20}, 2.5, 1600},
		{"spheroid", Product{Name: "p", Shape: Spheroid, Size: Size{ThicknessM: 0.04, DiameterM: 0.04}, Food: food, StartC: 20}, 2, 40},
	} {
		var ends [4][]float64
		for i, n := range []int{c.steps, 2 * c.steps, 4 * c.steps, 32 * c.steps} {
			s, f := readyMarch(t, &c.p, steps, effort{more: 0.7, tolK: 1e-3})
			ends[i] = inStepsOf(t, f, func(face *Face) *skin { return s.skinOf(&steps[0].Exposure, face, &steps[0]) }, 4000, n)
		}
		var off [3]float64
		for i := range off {
			for j, h := range ends[i] {
				off[i] = max(off[i], math.Abs(h-ends[3][j]))
			}
		}
		a, b := math.Log2(off[0]/off[1]), math.Log2(off[1]/off[2])
		t.Logf("%s: %.3g, %.3g, %.3g J/m³ off, orders %.2f and %.2f", c.name, off[0], off[1], off[2], a, b)
		if b < c.order-0.25 {
			t.Errorf("%s: order %.2f, claimed %g", c.name, b, c.order)
		}
	}
}

// Errors of control volumes in space fall with the square of their number: slab with a film, changing properties, at the end of slow warming.
func TestOrderInSpace(t *testing.T) {
	food := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Props: func(c float64) Properties {
		return Properties{0.45 + 0.002*c, 1000, 3200 + 6*c}
	}}
	slow := filmTo(30, 20)
	slow.Medium = Course{TimesS: []float64{0, 4000}, C: []float64{20, 140}}
	steps := []Step{{Name: "warm", Stage: Cook, DurationS: 4000, Exposure: slow}}
	p := Product{Name: "p", Shape: LayeredSlab, Size: Size{ThicknessM: 0.04}, Layers: []Layer{{Food: food, ThicknessM: 0.025, BelowM2KW: 0.001}, {Food: food, ThicknessM: 0.015}}, StartC: 20}
	at := []Place{{UpM: 0.02}, {UpM: -0.004}, {UpM: -0.02}}
	between := Place{UpM: 0} // its error swings with where the nodes beside it fall
	efforts := []float64{0.25, 0.5, 1, 2, 4}
	finest := marchOnceFor(t, p, steps, effort{more: 32, tolK: 1e-6})
	var off []float64
	for i, more := range efforts {
		h := marchOnceFor(t, p, steps, effort{more: more, tolK: 1e-6})
		d := 0.0
		for _, place := range at {
			d = max(d, math.Abs(h.At(place, 4000)-finest.At(place, 4000)))
		}
		off = append(off, d)
		if i > 0 {
			if order := math.Log2(off[i-1] / d); order < 1.75 || order > 2.5 {
				t.Errorf("order %.2f from %g to %g of the nodes, claimed 2", order, efforts[i-1], more)
			}
		}
		if d := math.Abs(h.At(between, 4000) - finest.At(between, 4000)); d > 0.0025/(more*more) {
			t.Errorf("%.2g K off between nodes with %g of them, want at most %.2g", d, more, 0.0025/(more*more))
		}
	}
	t.Logf("%.3g K off", off)
}
