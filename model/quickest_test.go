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
// instants and a surface that is held; and comes near it.
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
			q, ok := Quickest(&p, &at, lo, hi)
			if !ok {
				t.Fatal(shape.Name, "is not known")
			}
			c := lo + hi - p.StartC
			var steps []Step
			for range 4 {
				steps = append(steps, Step{Name: "held", Stage: Cook, DurationS: q.SettleS * (0.3 + 3*rng.Float64()), Exposure: Exposure{Surface: Held, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}})
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
		q, ok := Quickest(&p, at, lo, 80)
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
		{"layers, by the quicker", of(Product{Shape: LayeredSlab, Size: Size{ThicknessM: 0.05}, Layers: []Layer{{Food: food}, {Food: food}}}, nil, 0), 2026.4},
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
