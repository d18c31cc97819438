package record

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"slowpoint/model"
)

// logOf makes a log of readings every stepS, rounded to resolution K.
func logOf(stepS, resolutionK float64, c []float64) *Log {
	l := &Log{StepS: stepS, ResolutionK: resolutionK}
	for i, x := range c {
		l.TimesS, l.C, l.Lines = append(l.TimesS, stepS*float64(i)), append(l.C, resolutionK*math.Round(x/resolutionK)), append(l.Lines, int32(i+2))
	}
	return l
}

// drawnHistory draws a piece of thick to thin, its chain, and what the exact model says of it.
func drawnHistory(t *testing.T, rng *rand.Rand) (*model.Product, *model.History, Food, string) {
	t.Helper()
	between := func(lo, hi float64) float64 { return lo * math.Pow(hi/lo, rng.Float64()) }
	props := model.Properties{KWmK: between(0.3, 0.65), RhoKgM3: between(900, 1150), CJkgK: between(2400, 4000)}
	food := &model.Material{Name: "drawn", Source: "drawn at random by the test", Props: func(float64) model.Properties { return props }, Waterless: true}
	size := between(0.010, 0.150)
	p := &model.Product{Name: "drawn", Food: food, Shape: []*model.Shape{model.Slab, model.Cylinder, model.Sphere, model.Brick}[rng.IntN(4)], StartC: 2 + 23*rng.Float64(),
		Size: model.Size{ThicknessM: size, DiameterM: size, WidthM: size * between(1, 2), LengthM: size * between(1, 3)}}
	topW := between(20, 1000) // of the chain, W/(m²·K)
	var steps []model.Step
	lo, hi, film := p.StartC, p.StartC, 0.0
	what := fmt.Sprintf("%s of %.1f mm from %.0f °C", p.Shape.Name, 1000*size, p.StartC)
	for _, st := range []struct {
		stage  *model.Stage
		lo, hi float64
	}{{model.Cook, 70, 200}, {model.Rest, 15, 30}, {model.Cool, -1, 5}, {model.Reheat, 70, 140}, {model.Cool, 0, 5}} {
		h, c, long := between(5, topW), st.lo+(st.hi-st.lo)*rng.Float64(), between(600, 10000)
		lo, hi, film = math.Min(lo, c), math.Max(hi, c), math.Max(film, h)
		steps = append(steps, model.Step{Name: st.stage.Name, Stage: st.stage, DurationS: long,
			Exposure: model.Exposure{Surface: model.Film, FilmW: &h, Medium: model.Course{TimesS: []float64{0}, C: []float64{c}}}})
		what += fmt.Sprintf("; %.0f s at %.0f °C, %.0f W/m²K", long, c, h)
	}
	h, err := model.Solve(*p, steps, model.Options{})
	if err != nil {
		t.Fatal(what, err)
	}
	f := Food{LowC: lo, HighC: hi}
	if q, ok := model.Quickest(p, nil, lo, hi, 3*film); ok { // films may be three times as high as typed
		f.SettleS, f.ShareS, f.Follows = q.SettleS, q.ShareS, q.Follows
	} else {
		t.Fatal(what, "is not known")
	}
	return p, h, f, what
}

// drawnProbe draws a piece and the course of its centre every stepS, with noise.
func drawnProbe(t *testing.T, rng *rand.Rand, stepS, noiseK float64) (*model.Product, []float64, Food, []Stretch, string) {
	t.Helper()
	p, h, f, what := drawnHistory(t, rng)
	var at []float64
	from := stepS * rng.Float64()
	for x := from; x <= h.EndS(); x += stepS {
		at = append(at, x)
	}
	c := make([]float64, len(at))
	h.Course(model.Place{}, at, c)
	for i := range c {
		c[i] += noiseK * rng.NormFloat64()
	}
	return p, c, f, stretches(h, from), what
}

// TestNoFalseLeaps: what the exact model says that the centre of a food does is never a leap, whatever the piece, the film and the interval;
// nor is any part of it that a logger may have kept.
func TestNoFalseLeaps(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 31))
	thick := 0
	for n := range 600 {
		stepS := []float64{10, 20, 30, 60, 120, 300, 600}[n%7]
		resolution := []float64{0.1, 0.5, 1}[n/7%3]
		p, c, f, steps, what := drawnProbe(t, rng, stepS, 0.1)
		later := 0.0 // they begin that much before what is said
		if n%2 == 1 {
			later = lateS * rng.Float64()
		}
		leaps := func(c []float64, f Food, from int) []Leap {
			l := newLeaper(logOf(stepS, resolution, c), f)
			for _, s := range steps {
				l.steps = append(l.steps, Stretch{s.StartS + later - stepS*float64(from), s.EndS + later - stepS*float64(from), s.Heats})
			}
			return l.all()
		}
		end, from := 1+rng.IntN(len(c)), rng.IntN(len(c))
		for _, part := range [][2]int{{0, len(c)}, {0, end}, {from, len(c)}} {
			c := c[part[0]:part[1]]
			if l := leaps(c, f, part[0]); len(l) > 0 {
				t.Errorf("%d: every %g s to %g °C: %d leaps, the first from %.1f to %.1f °C, stray %v: %s", n, stepS, resolution, len(l), c[l[0].Before], c[l[0].First], l[0].strayC, what)
			}
		}
		// of a piece that nobody described
		if least := map[*model.Shape]float64{model.Slab: 0.02, model.Cylinder: 0.03, model.Sphere: 0.04, model.Brick: 0.04}[p.Shape]; p.Size.DiameterM >= least {
			thick++
			if l := leaps(c, Food{LowC: math.NaN(), HighC: math.NaN()}, 0); len(l) > 0 {
				t.Errorf("%d: not described: every %g s to %g °C: %d leaps, the first from %.1f to %.1f °C: %s", n, stepS, resolution, len(l), c[l[0].Before], c[l[0].First], what)
			}
		}
	}
	if thick < 100 {
		t.Errorf("%d pieces are held against what is taken of one that nobody described", thick)
	}
}

// stretches are the steps of a history on the clock of a log that begins at from, s.
func stretches(h *model.History, from float64) (out []Stretch) {
	for _, sp := range h.Spans {
		out = append(out, Stretch{StartS: sp.StartS - from, EndS: sp.EndS - from, Heats: sp.Step.Stage.Heats})
	}
	return out
}

// cooling is a core that was cooked and is chilled, every stepS for long s: from 85 °C with a time constant of 80 min after a lag.
func cooling(stepS, long float64) []float64 {
	var c []float64
	for x := 0.0; x <= long; x += stepS {
		c = append(c, 2+83*math.Min(1, 1.1*math.Exp(-x/4800)))
	}
	return c
}

// follow gives what a sensor of a time constant (s) would show of the course c.
func follow(c []float64, from int, tauS, stepS float64) {
	for i := from; i < len(c) && tauS > 0; i++ {
		c[i] += (c[i-1] - c[i]) * math.Exp(-stepS/tauS)
	}
}

// TestLeaps: a probe that leaves the food is doubted from the first reading away to the last, however soon its sensor follows; invented courses.
func TestLeaps(t *testing.T) {
	known := Food{SettleS: 1800, ShareS: 4e-4, LowC: 2, HighC: 180} // a slab of some 50 mm
	unknown := Food{LowC: math.NaN(), HighC: math.NaN()}
	thin := Food{SettleS: 10, ShareS: 0.2, LowC: 2, HighC: 180}
	for _, c := range []struct {
		name                     string
		stepS, long, tauS, awayC float64
		from, back               int // from which reading on it is away, and until before which; 0: to the end
		foods                    []Food
		want                     string
	}{
		{"pulled out in the chiller", 60, 12000, 0, 3, 90, 0, []Food{known, unknown}, "[{89 90 200}]"},
		{"at the last reading", 60, 5400, 0, 3, 90, 0, []Food{known, unknown}, "[{89 90 90}]"},
		{"at the last but one", 60, 5460, 0, 3, 90, 0, []Food{known, unknown}, "[{89 90 91}]"},
		{"every 5 min", 300, 12000, 0, 3, 18, 0, []Food{known, unknown}, "[{17 18 40}]"},
		{"every 10 s", 10, 6000, 0, 3, 540, 0, []Food{known, unknown}, "[{539 540 600}]"},
		{"a sensor of 10 s", 10, 6000, 10, 3, 540, 0, []Food{known, unknown}, "[{539 540 600}]"},
		{"a sensor of 30 s", 10, 6000, 30, 3, 540, 0, []Food{known, unknown}, "[{539 540 600}]"},
		{"a sensor of 2 min", 10, 9000, 120, 3, 540, 0, []Food{known}, "[{539 540 900}]"},
		{"at room temperature", 60, 12000, 0, 21, 90, 0, []Food{known, unknown}, "[{89 90 200}]"},
		{"into the oven", 60, 12000, 0, 118, 60, 0, []Food{known, unknown}, "[{59 60 200}]"},
		{"put back after 10 min", 60, 12000, 0, 3, 60, 70, []Food{known, unknown}, "[{59 60 69}]"},
		{"put back, a sensor of 30 s", 10, 9000, 30, 3, 300, 360, []Food{known, unknown}, "[{299 300 369}]"},
		{"put back after two hours", 60, 14400, 0, 3, 60, 180, []Food{known, unknown}, "[{59 60 240}]"},
		{"a thin slice", 60, 12000, 0, 3, 90, 0, []Food{thin}, "[]"},
		{"every hour by hand", 3600, 36000, 0, 3, 3, 0, []Food{known, unknown, thin}, "[]"},
	} {
		for k, f := range c.foods {
			x := cooling(c.stepS, c.long)
			for i := c.from; i < len(x) && (c.back == 0 || i < c.back); i++ {
				x[i] = c.awayC + 0.2*math.Sin(float64(i))
			}
			if c.from > 0 {
				follow(x, c.from, c.tauS, c.stepS)
			}
			var got []string
			for _, l := range newLeaper(logOf(c.stepS, 0.1, x), f).all() {
				got = append(got, fmt.Sprintf("{%d %d %d}", l.Before, l.First, l.Last))
			}
			if g := "[" + strings.Join(got, " ") + "]"; g != c.want {
				t.Errorf("%s, food %d: %s, want %s: from %.1f to %.1f °C", c.name, k, g, c.want, x[c.from-1], x[c.from])
			}
		}
	}
}

// TestPutIn: first readings at room temperature, before the probe is put in, are told and nothing is doubted.
func TestPutIn(t *testing.T) {
	known, unknown := Food{SettleS: 1800, ShareS: 4e-4, LowC: 2, HighC: 180}, Food{LowC: math.NaN(), HighC: math.NaN()}
	for _, c := range []struct {
		name        string
		room, foodC float64
		rows        int
		told, doubt bool
	}{
		{"into hot food", 21, 85, 5, true, false},
		{"into cold food", 21, 4, 3, true, false},
		{"after half an hour", 21, 85, 30, true, true},
		{"into an oven", 21, 160, 5, true, true},
		{"out of hot food", 70, 3, 5, true, true},
		{"in from the start", 21, 21, 5, false, false},
	} {
		for _, f := range []Food{known, unknown} {
			for _, tau := range []float64{0, 20} {
				var x []float64
				for i := range 300 {
					y := c.room
					if i >= c.rows {
						y = c.foodC
					}
					x = append(x, y)
				}
				follow(x, c.rows, tau, 60)
				l := newLeaper(logOf(60, 0.1, x), f).all()
				if told, doubt := len(l) > 0, len(l) > 0 && l[0].Last >= l[0].First; told != c.told || doubt != c.doubt || len(l) > 1 {
					t.Errorf("%s: %+v, want told %v, doubted %v", c.name, l, c.told, c.doubt)
				}
			}
		}
	}
}

// TestDoubted: a leap counts where the reading before it lies within the steps, and only as far as they go.
func TestDoubted(t *testing.T) {
	l := &Log{Doubtful: []int{3, 12}, Leaps: []Leap{{Before: 9, First: 10, Last: 14}, {Before: 20, First: 21, Last: 20}}}
	for _, c := range []struct {
		first, end, since int
		want              string
	}{{0, 30, 0, "[3 10 11 12 13 14]"}, {9, 13, 9, "[1 2 3]"}, {10, 30, 10, "[2]"}, {9, 30, 10, "[3]"}, {0, 10, 0, "[3]"}} {
		if got := fmt.Sprint(l.Doubted(c.first, c.end, c.since)); got != c.want {
			t.Errorf("from %d to %d since %d: %s, want %s", c.first, c.end, c.since, got, c.want)
		}
	}
}
