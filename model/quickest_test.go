package model

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// TestSlopes: the steepest slopes are those of the series for a surface that is held (Carslaw & Jaeger 1959, sections 3.4, 7.6 and 9.3; from
// memory), and the rates of decay their first squares.
func TestSlopes(t *testing.T) {
	bessel := func(n float64) float64 { // the zero of J0 near McMahon's estimate
		x := (n - 0.25) * math.Pi
		for range 20 {
			x += math.J0(x) / math.J1(x)
		}
		return x
	}
	for _, c := range []struct {
		name           string
		settles, slope float64
		root, weight   func(n float64) float64
	}{
		{"slab", slabSettles, slabSlope, func(n float64) float64 { return (n - 0.5) * math.Pi }, func(n float64) float64 { return -2 * math.Pow(-1, n) / ((n - 0.5) * math.Pi) }},
		{"cylinder", cylinderSettles, cylinderSlope, bessel, func(n float64) float64 { return 2 / (bessel(n) * math.J1(bessel(n))) }},
		{"sphere", ballSettles, ballSlope, func(n float64) float64 { return n * math.Pi }, func(n float64) float64 { return -2 * math.Pow(-1, n) }},
	} {
		most := 0.0
		for fo := 0.02; fo < 0.5; fo += 0.0005 {
			sum := 0.0
			for n := 1.0; n <= 14; n++ {
				l := c.root(n) * c.root(n)
				sum += c.weight(n) * l * math.Exp(-l*fo)
			}
			most = math.Max(most, sum)
		}
		// rounded up in the third decimal
		if most > c.slope || most < c.slope-0.002 || math.Abs(c.settles-c.root(1)*c.root(1)) > 1e-4 {
			t.Errorf("%s: slope %.5f, have %g; decay %.5f, have %g", c.name, most, c.slope, c.root(1)*c.root(1), c.settles)
		}
	}
}

// TestQuickest: the exact model never moves a place faster than that, with surroundings that change from one extreme to the other at drawn
// instants, a film or a surface that is held; and comes near it.
func TestQuickest(t *testing.T) {
	const lo, hi = 0.0, 90.0
	rng := rand.New(rand.NewPCG(3, 17))
	props := Properties{KWmK: 0.47, RhoKgM3: 1060, CJkgK: 3500}
	food := &Material{Name: "invented", Source: "invented", Props: func(float64) Properties { return props }, Waterless: true}
	for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar, Brick} {
		nearest := 0.0
		for range 25 {
			size := func() float64 { return 0.02 + 0.08*rng.Float64() }
			p := Product{Name: "drawn", Shape: shape, Food: food, StartC: lo + (hi-lo)*float64(rng.IntN(2)), Size: Size{ThicknessM: size(), WidthM: size(), LengthM: size(), DiameterM: size()}}
			at := Place{}
			if rng.IntN(3) == 0 {
				at.UpM = 0.5 * reach(&p)[0]
			}
			film := math.Inf(1)
			on := Exposure{Surface: Held}
			if rng.IntN(2) == 0 {
				film = 5 * math.Pow(200, rng.Float64())
				on = Exposure{Surface: Film, FilmW: &film}
			}
			q, ok := Quickest(&p, &at, lo, hi, film)
			if !ok {
				t.Fatal(shape.Name, "is not known")
			}
			c := lo + hi - p.StartC
			var steps []Step
			for range 4 {
				on.Medium = Course{TimesS: []float64{0}, C: []float64{c}}
				steps = append(steps, Step{Name: "step", Stage: Cook, DurationS: q.SettleS * (0.3 + 3*rng.Float64()), Exposure: on})
				c = lo + hi - c
			}
			h, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(shape.Name, err)
			}
			var times []float64
			dt := q.SettleS / 40
			for x := 0.0; x < h.EndS(); x += dt {
				times = append(times, x)
			}
			temps := make([]float64, len(times))
			h.Course(at, times, temps)
			for i := 1; i < len(temps); i++ {
				share := math.Abs(temps[i]-temps[i-1]) / (dt * q.ShareS * (hi - lo))
				if slices.ContainsFunc(h.Spans, func(sp Span) bool { return math.Abs(times[i]-sp.StartS) < dt || math.Abs(times[i-1]-sp.StartS) < dt }) {
					continue // within the first instants of a held surface the sum of modes swings by a degree, where the centre stands still
				}
				if nearest = math.Max(nearest, share); share > 1.005 {
					t.Fatalf("%s: %.3f times as fast as it can be, %.0f s after the start", shape.Name, share, times[i])
				}
			}
		}
		if nearest < 0.5 {
			t.Errorf("%s: no more than %.2f of what is said", shape.Name, nearest)
		}
	}
}

// TestQuickestOf: what is not known sets no bound, a place beside the surface hardly any, and ice makes food quicker.
func TestQuickestOf(t *testing.T) {
	props := Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 4000}
	food := &Material{Name: "invented", Source: "invented", Props: func(c float64) Properties {
		if c < -5 {
			return Properties{KWmK: 1.5, RhoKgM3: 1000, CJkgK: 2000}
		}
		return props
	}}
	slab := Product{Shape: Slab, Food: food, Size: Size{ThicknessM: 0.05}}
	of := func(p Product, at *Place, lo float64) float64 {
		q, ok := Quickest(&p, at, lo, 80, math.Inf(1))
		if !ok {
			return -1
		}
		return q.SettleS
	}
	// d²/(α·π²/4) = 0.025² / (1.25e-7 · 2.4674) = 2026.4 s, of ice 6 times as quick
	for _, c := range []struct {
		name string
		got  float64
		want float64
	}{
		{"slab", of(slab, nil, 0), 2026.4},
		{"with ice", of(slab, nil, -20), 2026.4 / 6},
		{"15 mm up, 10 mm below its face", of(slab, &Place{UpM: 0.015}, 0), 0.01 * 0.01 / (1.25e-7 * 9.8696)},
		{"spheroid, by its ball", of(Product{Shape: Spheroid, Food: food, Size: Size{ThicknessM: 0.08, DiameterM: 0.05}}, nil, 0), 0.025 * 0.025 / (1.25e-7 * 9.8696)},
		{"layers", of(Product{Shape: LayeredSlab, Size: Size{ThicknessM: 0.05}, Layers: []Layer{{Food: food}, {Food: food}}}, nil, 0), -1},
		{"stirred", of(Product{Shape: Stirred, Food: food, Size: Size{VolumeM3: 0.01, AreaM2: 0.2}}, nil, 0), -1},
		{"no size", of(Product{Shape: Slab, Food: food}, nil, 0), -1},
		{"no food", of(Product{Shape: Slab, Size: Size{ThicknessM: 0.05}}, nil, 0), -1},
		{"no shape", of(Product{Food: food}, nil, 0), -1},
		{"on the face", of(slab, &Place{UpM: 0.025}, 0), -1},
	} {
		if math.Abs(c.got-c.want) > 1e-4*math.Abs(c.want) {
			t.Errorf("%s: settles in %.1f s, want %.1f", c.name, c.got, c.want)
		}
	}
}

// TestQuickestBehindFilm: with a film a centre settles no sooner than is said, but for what is said of it; the first roots of Heisler's equations, by bisection:
// λ·tan λ = Bi, λ·J1(λ)/J0(λ) = Bi, 1 − λ·cot λ = Bi (Carslaw & Jaeger 1959, sections 3.11, 7.7 and 9.4; from memory).
func TestQuickestBehindFilm(t *testing.T) {
	props := Properties{KWmK: 0.47, RhoKgM3: 1060, CJkgK: 3500}
	food := &Material{Name: "invented", Source: "invented", Props: func(float64) Properties { return props }}
	const d = 0.017
	for _, c := range []struct {
		shape *Shape
		of    func(l float64) float64 // rises to +Inf at the root of a held surface
		end   float64
		slow  float64 // how much too slow at most, measured when this was written
	}{
		{Slab, func(l float64) float64 { return l * math.Tan(l) }, math.Pi / 2, 1.05},
		{Cylinder, func(l float64) float64 { return l * math.J1(l) / math.J0(l) }, 2.404825, 1.09},
		{Sphere, func(l float64) float64 { return 1 - l/math.Tan(l) }, math.Pi, 1.12},
	} {
		for _, bi := range []float64{0.05, 0.3, 0.9, 1.7, 4, 20} {
			lo, hi := 1e-6, c.end-1e-9
			for range 60 {
				if m := (lo + hi) / 2; c.of(m) < bi {
					lo = m
				} else {
					hi = m
				}
			}
			want := d * d * props.RhoKgM3 * props.CJkgK / (props.KWmK * lo * lo)
			p := Product{Shape: c.shape, Food: food, Size: Size{ThicknessM: 2 * d, DiameterM: 2 * d}}
			q, ok := Quickest(&p, nil, 0, 90, bi*props.KWmK/d)
			if !ok || q.SettleS > c.slow*want || q.SettleS < 0.999*want {
				t.Errorf("%s, Bi %g: settles in %.0f s, exactly %.0f (%.3f)", c.shape.Name, bi, q.SettleS, want, q.SettleS/want)
			}
		}
	}
}
