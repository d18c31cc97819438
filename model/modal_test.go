package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The base of a ball is orthonormal, and its gradients are those of its functions: by another rule of integration.
func TestBallBase(t *testing.T) {
	b := ballOf(6, 4)
	if b.n != 7+6+5+4+3 {
		t.Fatalf("%d functions", b.n)
	}
	mass, grad, polar := make([]float64, b.n*b.n), make([]float64, b.n*b.n), make([]float64, b.n*b.n)
	f := &ball{ballBase: b, spheroidMap: spheroidMap{1, 1}}
	at := func(z, r float64) []float64 {
		v := make([]float64, b.n)
		f.values(f.coord(Place{UpM: z, AcrossM: r}), v)
		return v
	}
	const d = 1e-5
	for _, u := range gauss(20) {
		for _, v := range gauss(20) {
			z, r := u.x*v.x, u.x*math.Sqrt(1-v.x*v.x)
			w := 3 * u.x * u.x * u.w * v.w
			here, up, down, out, in := at(z, r), at(z+d, r), at(z-d, r), at(z, r+d), at(z, r-d)
			for i := range here {
				for j := range here {
					zi, zj := (up[i]-down[i])/2/d, (up[j]-down[j])/2/d
					ri, rj := (out[i]-in[i])/2/d, (out[j]-in[j])/2/d
					mass[i*b.n+j] += w * here[i] * here[j]
					polar[i*b.n+j] += w * zi * zj
					grad[i*b.n+j] += w * (zi*zj + ri*rj)
				}
			}
		}
	}
	for i := range mass {
		want := 0.0
		if i%(b.n+1) == 0 {
			want = 1
		}
		if math.Abs(mass[i]-want) > 1e-10 {
			t.Fatalf("mass %d is %g, want %g", i, mass[i], want)
		}
		if scale := 1e-4 + 1e-6*math.Abs(grad[i]); math.Abs(grad[i]-b.grad[i]) > scale || math.Abs(polar[i]-b.polar[i]) > scale {
			t.Fatalf("gradients %d: %g and %g, want %g and %g", i, b.grad[i], b.polar[i], grad[i], polar[i])
		}
	}
}

// Along either coordinate through any place the polynomials of a slice are the field.
func TestSlicesOfASpheroid(t *testing.T) {
	b := &ball{ballBase: ballOf(9, 5), spheroidMap: spheroidMap{0.03, 0.05}}
	nd := &nodes{x: [3][]float64{{0, 0.3, 1}, {0, 0.7, 1}, {0}}}
	r := rand.New(rand.NewPCG(3, 4))
	q, v, line := make([]float64, b.n), make([]float64, b.n), make([]float64, maxDegrees)
	for i := range q {
		q[i] = r.NormFloat64()
	}
	value := func(x coord) (sum float64) {
		b.values(x, v)
		for i := range q {
			sum += q[i] * v[i]
		}
		return sum
	}
	for axis, n := range []int{10, 6} {
		for _, node := range [][3]int{{-1, -1, 0}, {1, 1, 0}} {
			x := coord{0.3, 0.7}
			b.slice(nd, axis, x, node, q, line[:n])
			for _, at := range []float64{0, 0.4, 0.9, 1} {
				x[axis] = at
				if c, _, _ := baseOf(planeHalf, n).curve(at, line[:n]); math.Abs(c-value(x)) > 1e-11 {
					t.Errorf("axis %d, node %v at %g: %g, want %g", axis, node, at, c, value(x))
				}
			}
		}
	}
	grid := make([]float64, 9)
	b.grid(nd, q, grid)
	for i, c := range grid {
		if x := (coord{nd.x[0][i/3], nd.x[1][i%3]}); math.Abs(c-value(x)) > 1e-11 {
			t.Errorf("node %v: %g, want %g", x, c, value(x))
		}
	}
}

// Places in a spheroid and back.
func TestSpheroidMap(t *testing.T) {
	m := spheroidMap{a: 0.06, b: 0.04}
	for _, p := range []Place{{}, {UpM: 0.06}, {AcrossM: 0.04}, {UpM: 0.03, AcrossM: 0.01}, {UpM: 0.001, AcrossM: 0.039}} {
		if q := m.place(m.coord(p)); math.Abs(q.UpM-p.UpM) > 1e-15 || math.Abs(q.AcrossM-p.AcrossM) > 1e-15 {
			t.Errorf("%v became %v", p, q)
		}
	}
	if x := m.coord(Place{UpM: -0.12}); x != (coord{1, 1}) {
		t.Errorf("a place outside became %v", x)
	}
	area := 0.0
	for _, g := range gauss(60) {
		area += g.w * m.surfaceShare(g.x)
	}
	// surface of a prolate spheroid: 2πb²(1 + a/(b·e)·asin e), e² = 1 - b²/a² (closed form)
	e := math.Sqrt(1 - m.b*m.b/(m.a*m.a))
	want := 2 * math.Pi * m.b * m.b * (1 + m.a/(m.b*e)*math.Asin(e)) / (4. / 3 * math.Pi * m.a * m.b * m.b)
	if math.Abs(area/want-1) > 1e-9 {
		t.Errorf("surface by volume %.9g, want %.9g", area, want)
	}
}

// randomWhole draws a spheroid or a layered slab and its chain.
func randomWhole(r *rand.Rand, round bool) (Product, []Step) {
	among := func(low, high float64) float64 { return low * math.Pow(high/low, r.Float64()) }
	food := func(kHigh float64) *Material {
		never, q := -100.0, Properties{KWmK: among(0.1, kHigh), RhoKgM3: among(300, 1200), CJkgK: 3000}
		return &Material{Name: "x", FreezingC: &never, Waterless: true, Props: func(float64) Properties { return q }}
	}
	p := Product{Name: "p", Shape: LayeredSlab, StartC: 5}
	if round {
		b := among(0.01, 0.07)
		p.Shape, p.Food, p.Size = Spheroid, food(0.65), Size{ThicknessM: 2 * b * among(0.4, 2.5), DiameterM: 2 * b}
	}
	for i := 1 + r.IntN(5); i > 0 && !round; i-- {
		l := Layer{Food: food(2), ThicknessM: among(0.001, 0.06)}
		if i > 1 && r.IntN(2) == 0 {
			l.BelowM2KW = among(3e-4, 0.03)
		}
		p.Layers = append(p.Layers, l)
		p.Size.ThicknessM += l.ThicknessM
	}
	var steps []Step
	for range 1 + r.IntN(3) {
		h := among(4, 1200)
		steps = append(steps, Step{Name: "s", Stage: Cook, DurationS: 60 + 4000*r.Float64(),
			Exposure: Exposure{Surface: Film, FilmW: &h, Medium: Course{TimesS: []float64{0}, C: []float64{150 * r.Float64()}}}})
	}
	return p, steps
}

// What a history states of its error is held to a solution with far more functions, at every node from settle after each change on.
func TestStatedErrorOfWholeBodiesIsHonest(t *testing.T) {
	for _, round := range []bool{false, true} {
		r := rand.New(rand.NewPCG(5, 6))
		trials := 80
		if round {
			trials = 8
		}
		for range trials {
			p, steps := randomWhole(r, round)
			h, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: scratches.Get().(*scratch)}
			s.layOut()
			var fn functions = stackOf(s.kinds[0], p.Layers, func(*part) int { return 36 })
			if round {
				fn = &ball{ballBase: ballOf(22, 16), spheroidMap: *s.ball}
			}
			fine := newModal(fn, h.body.nodes, p.StartC, &slab{}, &slab{wide: 1})
			for i := range steps {
				fine.run(s.film(&Span{Step: &steps[i]}, 50))
			}
			a, b := make([]float64, h.body.nodes.count()), make([]float64, h.body.nodes.count())
			worst := 0.0
			for _, sp := range h.Spans {
				for tau := s.settle; sp.StartS+tau < sp.EndS; tau *= 1.3 {
					h.field.at(sp.StartS + tau).grid(a)
					fine.at(sp.StartS + tau).grid(b)
					for k := range a {
						worst = math.Max(worst, math.Abs(a[k]-b[k]))
					}
				}
			}
			if worst > 2*h.ErrorK+0.002 {
				t.Errorf("%s %v, %d layers: off by %.4f K, and the history says %.4f", p.Shape.Name, p.Size, len(p.Layers), worst, h.ErrorK)
			}
			if h.ErrorK > 0.02 {
				t.Errorf("%s %v: says %.4f K, which is of no use", p.Shape.Name, p.Size, h.ErrorK)
			}
			scratches.Put(s.tmp)
		}
	}
}

// A step that ends at a temperature, and the place of an extreme, are the same in the new bodies as in the old ones that they contain.
func TestWholeBodiesEndStepsAndFindPlacesAsOthersDo(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 9))
	for range 10 {
		p, steps := randomWhole(r, true)
		p.Size.ThicknessM = p.Size.DiameterM
		goal := 0.5 * (p.StartC + steps[0].Medium.C[0])
		steps[0].UntilC, steps[0].DurationS = &goal, 1e5
		if goal < p.StartC {
			steps[0].Stage = Cool
		}
		sphere := p
		sphere.Shape = Sphere
		slab := Product{Name: "slab", Shape: Slab, Food: p.Food, Size: Size{ThicknessM: p.Size.DiameterM}, StartC: p.StartC}
		layers := slab
		layers.Shape, layers.Food = LayeredSlab, nil
		for _, share := range []float64{0.2, 0.5, 0.3} {
			layers.Layers = append(layers.Layers, Layer{Food: p.Food, ThicknessM: share * slab.Size.ThicknessM})
		}
		for _, pair := range [][2]Product{{p, sphere}, {layers, slab}} {
			a, err := Solve(pair[0], steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			b, err := Solve(pair[1], steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			if !*a.Spans[0].Reached || math.Abs(a.Spans[0].EndS/b.Spans[0].EndS-1) > 1e-3 {
				t.Errorf("%s: %g °C reached after %g s, in a %s %g s", pair[0].Shape.Name, goal, a.Spans[0].EndS, pair[1].Shape.Name, b.Spans[0].EndS)
			}
		}
	}
}

// A layered slab that heats unevenly has its coldest place in a layer, at a joint or on a face: never below what a close look finds.
func TestExtremesOfLayers(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for range 20 {
		p, steps := randomWhole(r, false)
		w := 10.0
		steps[0].Faces = []FaceExposure{{Face: Underside, Exposure: Exposure{Surface: Film, FilmW: &w, Medium: Course{TimesS: []float64{0}, C: []float64{60}}}}}
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		s := h.Sample(400)
		for i, at := range s.TimesS {
			if at == 0 {
				continue
			}
			low, high := math.Inf(1), math.Inf(-1)
			for k := 0; k <= 800; k++ {
				c := h.At(Place{UpM: p.Size.ThicknessM * (float64(k)/800 - 0.5)}, at)
				low, high = min(low, c), max(high, c)
			}
			if s.Coldest[i] > low+1e-4 || s.Hottest[i] < high-1e-4 {
				t.Errorf("at %g s: %.5f to %.5f °C, a close look finds %.5f to %.5f", at, s.Coldest[i], s.Hottest[i], low, high)
			}
			if c := h.At(s.ColdestAt[i], at); math.Abs(c-s.Coldest[i]) > 1e-4 {
				t.Errorf("at %g s: the coldest place has %.5f °C, not %.5f", at, c, s.Coldest[i])
			}
			if c := h.At(s.HottestAt[i], at); math.Abs(c-s.Hottest[i]) > 1e-4 {
				t.Errorf("at %g s: the hottest place has %.5f °C, not %.5f", at, c, s.Hottest[i])
			}
		}
	}
}

// A search on the surface of a spheroid stays there and ends at the pole or the equator, wherever the score is least.
func TestLeastStaysOnASpheroid(t *testing.T) {
	p, steps := randomWhole(rand.New(rand.NewPCG(1, 1)), true)
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	m := spheroidMap{a: p.Size.ThicknessM / 2, b: p.Size.DiameterM / 2}
	for _, target := range []float64{0, 0.35, 1} { // height by half axis
		score := func(at Place) float64 { return 1 + math.Pow(at.UpM/m.a-target, 2) }
		best, from := math.Inf(1), Spot{}
		for _, s := range h.Scan().Spots {
			if c := score(s.Place); s.Surface && c < best {
				best, from = c, s
			}
		}
		at, c := h.Least(from, true, score)
		if x := m.coord(at); math.Abs(x[0]-1) > 1e-9 || c > best || math.Abs(at.UpM/m.a-target) > 0.02 {
			t.Errorf("least at %v (%v), score %g, height %g wanted", at, x, c, target)
		}
	}
}

// Foil between food and air holds next to no heat and lets it all through: the food is as without it.
func TestFoil(t *testing.T) {
	never := -100.0
	food := &Material{Name: "food", FreezingC: &never, Props: func(float64) Properties { return Properties{KWmK: 0.5, RhoKgM3: 1050, CJkgK: 3600} }}
	foil := &Material{Name: "foil", FreezingC: &never, Props: func(float64) Properties { return Properties{KWmK: 200, RhoKgM3: 2700, CJkgK: 900} }} // aluminium, textbooks
	const foilM = 2e-5
	h := 30.0
	steps := []Step{{Name: "s", Stage: Cook, DurationS: 3600, Exposure: Exposure{Surface: Film, FilmW: &h, Medium: Course{TimesS: []float64{0}, C: []float64{160}}}}}
	slab, err := Solve(Product{Name: "slab", Shape: Slab, Food: food, Size: Size{ThicknessM: 0.04}, StartC: 5}, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	wrapped, err := Solve(Product{Name: "wrapped", Shape: LayeredSlab, Size: Size{ThicknessM: 0.04 + 2*foilM}, StartC: 5,
		Layers: []Layer{{Food: foil, ThicknessM: foilM}, {Food: food, ThicknessM: 0.04}, {Food: foil, ThicknessM: foilM}}}, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, at := range []float64{300, 900, 3600} {
		for _, up := range []float64{0, 0.012, -0.02} {
			// the foil's own heat, 49 J/(m²·K) of 75600, comes later: 0.06 % of what the film brings
			if a, b := slab.At(Place{UpM: up}, at), wrapped.At(Place{UpM: up}, at); math.Abs(a-b) > 0.0013*math.Abs(b-5)+0.01 {
				t.Errorf("at %g s, %g m: %.4f °C, wrapped in foil %.4f", at, up, a, b)
			}
		}
	}
}

// A contact resistance just large enough to be counted changes nothing that can be seen, in thin layers of a thick slab too.
func TestContactThatIsNextToNone(t *testing.T) {
	never, h := -100.0, 25.0
	food := &Material{Name: "food", FreezingC: &never, Props: func(float64) Properties { return Properties{KWmK: 0.5, RhoKgM3: 1050, CJkgK: 3600} }}
	steps := []Step{{Name: "s", Stage: Cook, DurationS: 7200, Exposure: Exposure{Surface: Film, FilmW: &h, Medium: Course{TimesS: []float64{0}, C: []float64{160}}}}}
	solve := func(share float64) *History {
		p := Product{Name: "p", Shape: LayeredSlab, StartC: 5, Size: Size{ThicknessM: 0.055}}
		for _, mm := range []float64{1, 50, 2, 2} {
			p.Layers = append(p.Layers, Layer{Food: food, ThicknessM: mm / 1000, BelowM2KW: share * 0.001 / 0.5})
		}
		p.Layers[3].BelowM2KW = 0
		hist, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		return hist
	}
	none, least := solve(0), solve(1.01*bondShare)
	for _, at := range []float64{60, 600, 7200} {
		for _, up := range []float64{0.0275, 0.02649, 0, -0.0236, -0.0275} {
			if a, b := none.At(Place{UpM: up}, at), least.At(Place{UpM: up}, at); math.Abs(a-b) > 1e-3 {
				t.Errorf("at %g s, %g m: %.5f and %.5f °C", at, up, a, b)
			}
		}
	}
}
