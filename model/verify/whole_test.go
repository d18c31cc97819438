package verify

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"slowpoint/model"
	"slowpoint/testdata/published"
)

func TestSpheroids(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "spheroids.csv") {
		c := spheroidCase{ratio: published.Number(t, r["ratio"]), bi: published.Number(t, r["Bi"])}
		p, end := c.problem(0.4)
		h := solve(t, p)
		s := h.Sample(end / 4)
		degrees := func(col string) float64 { return chillToC + (chillFromC-chillToC)*published.Number(t, r[col]) }
		w.hold(t, p.Name+": centre at 0.2", h.At(model.Place{}, end/2), degrees("centre02"), 0.005)
		w.hold(t, p.Name+": centre at 0.4", h.At(model.Place{}, end), degrees("centre04"), 0.005)
		w.hold(t, p.Name+": mean at 0.1", s.Mean[1], degrees("mean01"), 0.005)
		w.hold(t, p.Name+": mean at 0.2", s.Mean[2], degrees("mean02"), 0.005)
		w.hold(t, p.Name+": mean at 0.4", s.Mean[4], degrees("mean04"), 0.005)
		zeta2, err := c.decay()()
		if err != nil {
			t.Fatal(err)
		}
		w.hold(t, p.Name+": slowest decay", zeta2, published.Number(t, r["zeta2"]), 1e-4)
	}
	w.log(t)
}

func TestLayers(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "layers.csv") {
		end := published.Number(t, r["time_s"])
		p := filled(end)
		h := solve(t, p)
		for place, up := range filledUp {
			theta := (h.At(model.Place{UpM: up}, end) - chillToC) / (chillFromC - chillToC)
			w.hold(t, p.Name+": "+place, theta, published.Number(t, r[place]), 1e-6)
			w.hold(t, p.Name+": "+place+" below", (h.At(model.Place{UpM: -up}, end)-chillToC)/(chillFromC-chillToC), theta, 1e-12)
		}
		s, i := last(h)
		w.hold(t, p.Name+": coldest", s.Coldest[i], h.At(model.Place{UpM: 0.025}, end), 1e-6)
		w.hold(t, p.Name+": hottest", s.Hottest[i], h.At(model.Place{}, end), 1e-6)
	}
	w.log(t)
}

// chainOf draws a chain of films and media.
func chainOf(t *rapid.T, faces bool) []model.Step {
	var steps []model.Step
	for range rapid.IntRange(1, 3).Draw(t, "steps") {
		draw := func(what string) model.Exposure {
			e := exposure(rapid.Float64Range(4, 400).Draw(t, "film "+what), rapid.Float64Range(0, 100).Draw(t, "medium "+what))
			if rapid.Bool().Draw(t, "course "+what) {
				e.Medium = model.Course{TimesS: []float64{0, 700, 9000}, C: []float64{e.Medium.C[0], rapid.Float64Range(0, 100).Draw(t, "later "+what), 40}}
			}
			return e
		}
		var under []model.FaceExposure
		if faces {
			under = []model.FaceExposure{{Face: model.Underside, Exposure: draw("below")}}
		}
		steps = append(steps, step("step", rapid.Float64Range(300, 5000).Draw(t, "duration"), draw("all"), under...))
	}
	return steps
}

// A spheroid of equal axes is a sphere.
func TestRoundSpheroidIsASphere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := rapid.Float64Range(0.01, 0.05).Draw(t, "radius")
		steps := chainOf(t, false)
		ball, err := Problem{"ball", spheroid(r, r, 20, tested), steps}.history()
		if err != nil {
			t.Fatal(err)
		}
		sphere, err := Problem{"sphere", body(model.Sphere, r, 20), steps}.history()
		if err != nil {
			t.Fatal(err)
		}
		sameCourses(t, ball, sphere, [2]model.Place{{UpM: 0.48 * r, AcrossM: 0.64 * r}, {UpM: 0.8 * r}})
	})
}

// soon tells whether an instant is too near to the last change for the stated error to hold.
func soon(h *model.History, at float64) bool {
	for _, sp := range h.Spans {
		if at >= sp.StartS && at < sp.StartS+30 {
			return true
		}
	}
	return false
}

// sameCourses holds two histories to each other by what they say of their errors: centre, mean, coldest, hottest, and a place of each.
func sameCourses(t *rapid.T, h, o *model.History, places [2]model.Place) {
	a, b := h.Sample(300), o.Sample(300)
	for i, at := range a.TimesS {
		if soon(h, at) {
			continue
		}
		for what, c := range map[string][2]float64{
			"centre":  {a.Points[0][i], b.Points[0][i]},
			"mean":    {a.Mean[i], b.Mean[i]},
			"coldest": {a.Coldest[i], b.Coldest[i]},
			"hottest": {a.Hottest[i], b.Hottest[i]},
			"place":   {h.At(places[0], at), o.At(places[1], at)},
		} {
			if math.Abs(c[0]-c[1]) > 2*(h.ErrorK+o.ErrorK)+0.002 {
				t.Fatalf("%s at %g s: %.4f and %.4f °C, and the stated errors are %.4f and %.4f K", what, at, c[0], c[1], h.ErrorK, o.ErrorK)
			}
		}
	}
}

// Layers of one food that touch perfectly are a slab.
func TestEqualLayersAreASlab(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		steps := chainOf(t, rapid.Bool().Draw(t, "faces"))
		food := material(tested)
		layers := []model.Layer{}
		for range rapid.IntRange(1, 4).Draw(t, "layers") {
			layers = append(layers, model.Layer{Food: food, ThicknessM: rapid.Float64Range(0.0005, 0.02).Draw(t, "thickness")})
		}
		whole := layered(20, layers...)
		parts, err := Problem{"layers", whole, steps}.history()
		if err != nil {
			t.Fatal(err)
		}
		slab, err := Problem{"slab", body(model.Slab, whole.Size.ThicknessM/2, 20), steps}.history()
		if err != nil {
			t.Fatal(err)
		}
		below := model.Place{UpM: -0.31 * whole.Size.ThicknessM}
		sameCourses(t, parts, slab, [2]model.Place{below, below})
	})
}

// What the surface lets in is what the food holds: the flux through the surface of a spheroid, added up over surface and time, against the mean.
func TestSpheroidKeepsItsHeat(t *testing.T) {
	const a, b, h, from, to = 0.045, 0.03, 40.0, 600.0, 4200.0
	p := Problem{"spheroid", spheroid(a, b, 5, tested), []model.Step{step("cook", to, exposure(h, 95))}}
	hist := solve(t, p)
	const n = 400
	inflow := 0.0
	for k := 0; k <= n; k++ {
		at := from + (to-from)*float64(k)/n
		flux := 0.0 // W over the surface, in rings of equal μ by Simpson's rule
		for j := 0; j <= n; j++ {
			mu := -1 + 2*float64(j)/n
			s := math.Sqrt(1 - mu*mu)
			ring := 2 * math.Pi * b * math.Hypot(a*s, b*mu)
			flux += simpson(j, n) * 2 / n * ring * h * (95 - hist.At(model.Place{UpM: a * mu, AcrossM: b * s}, at))
		}
		inflow += simpson(k, n) * (to - from) / n * flux
	}
	s := hist.Sample(600)
	gain := (s.Mean[7] - s.Mean[1]) * 4 / 3 * math.Pi * a * b * b * tested.RhoKgM3 * tested.CJkgK
	if math.Abs(inflow/gain-1) > 1e-6 {
		t.Errorf("%.6f J came in, the food holds %.6f more", inflow, gain)
	}
}

// simpson is the weight of point k of n intervals, n even.
func simpson(k, n int) float64 {
	switch {
	case k == 0 || k == n:
		return 1. / 3
	case k%2 == 1:
		return 4. / 3
	}
	return 2. / 3
}

// The centre of a spheroid lies between that of a sphere and that of a long cylinder of its smaller radius: the guide of the shapes says so.
func TestSpheroidLiesBetweenSphereAndCylinder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := rapid.Float64Range(0.01, 0.04).Draw(t, "radius")
		a := b * rapid.Float64Range(1.05, 3).Draw(t, "ratio")
		steps := []model.Step{step("chill", rapid.Float64Range(600, 7200).Draw(t, "duration"), exposure(rapid.Float64Range(5, 300).Draw(t, "film"), 2))}
		var c [3]float64
		for i, p := range []model.Product{body(model.Sphere, b, 80), spheroid(a, b, 80, tested), body(model.Cylinder, b, 80)} {
			h, err := Problem{p.Name, p, steps}.history()
			if err != nil {
				t.Fatal(err)
			}
			c[i] = h.At(model.Place{}, h.EndS())
		}
		if c[0] > c[1]+0.02 || c[1] > c[2]+0.02 {
			t.Errorf("chilled from 80 °C: sphere %.3f, spheroid %.3f, cylinder %.3f °C", c[0], c[1], c[2])
		}
	})
}

// wallOf solves a layered slab by the simplest finite volumes, 60 a layer, implicit in time.
func wallOf(p *model.Product, st *model.Step, steps int) (at func(up float64) float64) {
	const cells = 60
	var k, heat, dx, gap []float64 // from the underside up; gap: resistance above the cell beside its own halves
	for i := len(p.Layers) - 1; i >= 0; i-- {
		l := p.Layers[i]
		q := l.Food.Props(20)
		for c := 0; c < cells; c++ {
			k, heat, dx, gap = append(k, q.KWmK), append(heat, q.RhoKgM3*q.CJkgK), append(dx, l.ThicknessM/cells), append(gap, 0)
		}
		if i > 0 {
			gap[len(gap)-1] = p.Layers[i-1].BelowM2KW
		}
	}
	n := len(k)
	up := make([]float64, n) // conductance to the cell above
	for i := range up {
		if i+1 < n {
			up[i] = 1 / (dx[i]/2/k[i] + gap[i] + dx[i+1]/2/k[i+1])
		}
	}
	under := &st.Exposure
	if len(st.Faces) > 0 {
		under = &st.Faces[0].Exposure
	}
	low, top := 1/(1 / *under.FilmW + dx[0]/2/k[0]), 1/(1 / *st.FilmW + dx[n-1]/2/k[n-1])
	c := make([]float64, n)
	for i := range c {
		c[i] = p.StartC
	}
	dt := st.DurationS / float64(steps)
	a, b, r := make([]float64, n), make([]float64, n), make([]float64, n)
	for range steps {
		for i := range c {
			b[i], r[i] = heat[i]*dx[i]/dt+up[i], heat[i]*dx[i]/dt*c[i]
			if i > 0 {
				b[i] += up[i-1]
			}
		}
		b[0], r[0] = b[0]+low, r[0]+low*under.Medium.C[0]
		b[n-1], r[n-1] = b[n-1]+top, r[n-1]+top*st.Medium.C[0]
		for i := 1; i < n; i++ { // elimination
			a[i] = up[i-1] / b[i-1]
			b[i] -= a[i] * up[i-1]
			r[i] += a[i] * r[i-1]
		}
		c[n-1] = r[n-1] / b[n-1]
		for i := n - 2; i >= 0; i-- {
			c[i] = (r[i] + up[i]*c[i+1]) / b[i]
		}
	}
	return func(y float64) float64 { // the cell that holds the height
		x := -p.Size.ThicknessM / 2
		for i := range c {
			if x += dx[i]; x > y {
				return c[i] + (c[min(i+1, n-1)]-c[max(i-1, 0)])/2/dx[i]*(y-x+dx[i]/2)
			}
		}
		return c[n-1]
	}
}

// Layers of any kind against simple finite volumes, in the middle of each layer.
func TestLayersAgainstFiniteVolumes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := model.Product{Name: "layers", Shape: model.LayeredSlab, StartC: 70}
		for range rapid.IntRange(1, 5).Draw(t, "layers") {
			q := model.Properties{KWmK: rapid.Float64Range(0.05, 2).Draw(t, "k"), RhoKgM3: rapid.Float64Range(200, 1200).Draw(t, "ρ"), CJkgK: 2500}
			l := model.Layer{Food: material(q), ThicknessM: rapid.Float64Range(0.002, 0.03).Draw(t, "thickness")}
			if rapid.Bool().Draw(t, "gap") {
				l.BelowM2KW = rapid.Float64Range(1e-4, 0.05).Draw(t, "resistance")
			}
			p.Layers = append(p.Layers, l)
			p.Size.ThicknessM += l.ThicknessM
		}
		p.Layers[len(p.Layers)-1].BelowM2KW = 0
		st := step("chill", rapid.Float64Range(1000, 6000).Draw(t, "duration"), exposure(rapid.Float64Range(5, 200).Draw(t, "film"), 2))
		if rapid.Bool().Draw(t, "underside") {
			st.Faces = []model.FaceExposure{{Face: model.Underside, Exposure: exposure(rapid.Float64Range(5, 200).Draw(t, "film below"), 40)}}
		}
		h, err := Problem{"layers", p, []model.Step{st}}.history()
		if err != nil {
			t.Fatal(err)
		}
		simple := wallOf(&p, &st, 2000)
		up := p.Size.ThicknessM / 2
		for i := range p.Layers {
			y := up - p.Layers[i].ThicknessM/2
			up -= p.Layers[i].ThicknessM
			if got, want := h.At(model.Place{UpM: y}, st.DurationS), simple(y); math.Abs(got-want) > 0.05 {
				t.Errorf("layer %d: %.4f °C, by finite volumes %.4f", i+1, got, want)
			}
		}
	})
}
