package rules

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model"
)

// series is the exact course of a slab (half thickness halfM, test food) through steps of one medium each: in every step a sum of
// cosines whose factors β solve β·tan(β·halfM) = h/k, taken over from the step before by projection (Carslaw and Jaeger, Conduction
// of Heat in Solids, 2nd ed. 1959, section 3.11; from memory).
type series struct {
	halfM float64
	parts []cosines
}

type cosines struct {
	fromS, mediumC float64
	beta, amp      []float64
}

const seriesTerms = 120

func newSeries(halfM, startC float64, steps []model.Step) series {
	s := series{halfM: halfM}
	const k, alpha = 0.47, 0.47 / (1050 * 3500)
	product := func(a, b float64) float64 { // ∫cos(ax)cos(bx) over the half thickness
		sinc := func(q float64) float64 {
			if math.Abs(q) < 1e-9 {
				return halfM
			}
			return math.Sin(q*halfM) / q
		}
		return (sinc(a-b) + sinc(a+b)) / 2
	}
	t := 0.0
	for i, st := range steps {
		p := cosines{fromS: t, mediumC: st.Medium.C[0]}
		biot := *st.FilmW * halfM / k
		for n := 0; n < seriesTerms; n++ {
			lo, hi := float64(n)*math.Pi, (float64(n)+0.5)*math.Pi
			for it := 0; it < 100; it++ {
				if m := (lo + hi) / 2; (m*math.Sin(m)-biot*math.Cos(m))*math.Cos(float64(n)*math.Pi) > 0 {
					hi = m
				} else {
					lo = m
				}
			}
			b := (lo + hi) / 2 / halfM
			sum := startC * math.Sin(b*halfM) / b
			if i > 0 {
				before := s.parts[i-1]
				sum = before.mediumC * math.Sin(b*halfM) / b
				for j, c := range before.beta {
					sum += before.amp[j] * math.Exp(-alpha*c*c*(t-before.fromS)) * product(c, b)
				}
			}
			p.beta = append(p.beta, b)
			p.amp = append(p.amp, (sum-p.mediumC*math.Sin(b*halfM)/b)/product(b, b))
		}
		s.parts = append(s.parts, p)
		t += st.DurationS
	}
	return s
}

// at is the temperature x (m) from the middle at t (s).
func (s series) at(x, t float64) float64 {
	const alpha = 0.47 / (1050 * 3500)
	i := len(s.parts) - 1
	for i > 0 && t < s.parts[i].fromS {
		i--
	}
	c := s.parts[i].mediumC
	for n, b := range s.parts[i].beta {
		e := math.Exp(-alpha * b * b * (t - s.parts[i].fromS))
		if e < 1e-12 {
			break
		}
		c += s.parts[i].amp[n] * math.Cos(b*x) * e
	}
	return c
}

// took is the time in minutes from the fall to from after the peak to the fall to to; NaN where the place never was above from.
// It looks every 20 s and then closer.
func (s series) took(x, from, to, endS float64) float64 {
	top := 0.0
	for t := 0.0; t <= endS; t += 20 {
		if s.at(x, t) > s.at(x, top) {
			top = t
		}
	}
	for d := 10.0; d > 1e-4; d *= 0.7 {
		for _, t := range []float64{top - d, top + d} {
			if s.at(x, t) > s.at(x, top) {
				top = t
			}
		}
	}
	if s.at(x, top) <= from {
		return math.NaN()
	}
	fall := func(level, a, b float64) float64 {
		for b-a > 1e-4 {
			if m := (a + b) / 2; s.at(x, m) > level {
				a = m
			} else {
				b = m
			}
		}
		return a
	}
	return (fall(to, top, endS) - fall(from, top, endS)) / 60
}

// atEdge is the time taken at the edge, min: what is left of the time allowed there tells it.
func atEdge(f Finding) *float64 {
	took := *f.Required - *f.MarginS/60
	return &took
}

// The longest time of a clock that starts at a crossing is the supremum over all places that were ever above it, and lies at the
// edge of those. Here against the exact course: it agrees at the edge, no place among many takes longer, and the coarse grid of
// 41 places reads 6 % short.
func TestClockAtTheEdgeOfASlab(t *testing.T) {
	const half, startC, from, to = 0.0267764201879166, 3.4655973030009273, 62.6, 27.0
	steps := []model.Step{filmStep(model.Cook, 73, 90.8594208385161, 41.7619200435057), filmStep(model.Rest, 12, 21, 7),
		filmStep(model.Cool, 297, 0.9510439787581801, 17.113217562979603)}
	h := solve(t, model.Slab, model.Size{ThicknessM: 2 * half}, startC, steps...)
	s := newSeries(half, startC, steps)
	took := func(x float64) float64 { return s.took(x, from, to, h.EndS()) }

	in, out := half, 0.0 // the surface counts, the middle does not
	for in-out > 1e-10 {
		if m := (in + out) / 2; math.IsNaN(took(m)) {
			out = m
		} else {
			in = m
		}
	}
	supremum := took(in)
	longest, coarse := 0.0, 0.0
	for n := 0; n <= 400; n++ {
		if v := took(half * float64(n) / 400); v > longest {
			longest = v
		}
		if v := took(half * float64(n) / 20); n <= 20 && v > coarse {
			coarse = v
		}
	}
	if longest > supremum || longest < 0.99*supremum || coarse > 0.95*supremum {
		t.Fatalf("supremum %g, longest of 800 places %g, of 41 %g min: the case does not show what it should", supremum, longest, coarse)
	}
	l := Limit{Kind: CoolWithin, FromC: c(from), ToC: c(to), TimeS: min_(254), Clock: crossing}
	f := one(t, l, h)
	closeTo(t, "time at the edge", atEdge(f), supremum, 0.05)
	if at := math.Abs(f.Place.UpM); math.Abs(at-probeM-in) > 1e-5 {
		t.Errorf("place %g mm from the middle, the edge is at %g mm", 1000*at, 1000*in)
	}
	closeTo(t, "value at the place named", f.Value, took(math.Abs(f.Place.UpM)), 0.01)
	if want := "at the edge itself, where it only just was, it is " + lasting(60*supremum, 0); !strings.Contains(strings.Join(f.Notes, " "), want) {
		t.Errorf("no note says %q: %q", want, f.Notes)
	}
	if f.EdgeOf == "" || !strings.Contains(f.Notes[0], "ever were above "+f.EdgeOf) {
		t.Errorf("at the edge of what was above %q: %q", f.EdgeOf, f.Notes)
	}
	for _, x := range []struct {
		allowedMin float64
		want       Verdict
	}{{supremum + 1.5, Met}, {supremum - 1.5, NotMet}} { // the latter is met a probe's breadth within
		l.TimeS = min_(x.allowedMin)
		f := one(t, l, h)
		if f.Verdict != x.want {
			t.Errorf("%g min allowed: %v (%s), want %v", x.allowedMin, f.Verdict, f.Why, x.want)
		}
		if said := *f.Value > x.allowedMin; said != (x.want == NotMet) {
			t.Errorf("%g min allowed: %v with the value %g", x.allowedMin, f.Verdict, *f.Value)
		}
	}
}

// Of two windows the one that some places do not count in decides, although every place counts in the other.
func TestClockAtTheEdgeOfASecondWindow(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.05}, 60, filmStep(model.Cook, 60, 85, 25), filmStep(model.Cool, 300, 2, 200),
		filmStep(model.Reheat, 30, 110, 30), filmStep(model.Cool, 300, 3, 15))
	l := Limit{Kind: CoolWithin, FromC: c(60), ToC: c(20), TimeS: min_(400), Clock: crossing}
	second := h.Spans[2].StartS
	fall := func(x, a, b float64) float64 {
		v, _ := readEvery(h, model.Place{UpM: x}, 3).fall(60, 20, math.NaN(), a, b)
		return v
	}
	if first := fall(0, 0, second); math.IsNaN(first) {
		t.Fatal("the centre must count in the first window")
	}
	in, out := 0.025, 0.0
	for in-out > 1e-8 {
		if m := (in + out) / 2; math.IsNaN(fall(m, second, h.EndS())) {
			out = m
		} else {
			in = m
		}
	}
	f := one(t, l, h)
	closeTo(t, "time at the edge", atEdge(f), fall(in, second, h.EndS()), 0.1)
	if *f.ClockStartS < second {
		t.Errorf("the clock of the first window decides: %s", f.Why)
	}
}

// In a body of two axes the edge is a curve: no place on it, found by bisection on 60 lines, takes longer than said.
func TestClockAtTheEdgeOfACylinder(t *testing.T) {
	for _, x := range []struct {
		name             string
		diameterM, longM float64
		from, to         float64
	}{{"flat", 0.09, 0.04, 70, 20}, {"long", 0.06, 0.09, 66, 25}, {"even", 0.07, 0.07, 82, 15}} {
		t.Run(x.name, func(t *testing.T) {
			h := solve(t, model.ShortCylinder, model.Size{DiameterM: x.diameterM, LengthM: x.longM}, 6,
				filmStep(model.Cook, 25, 130, 30), filmStep(model.Rest, 12, 21, 7), filmStep(model.Cool, 300, 2, 22))
			took := func(p model.Place) float64 {
				v, _ := readEvery(h, p, 10).fall(x.from, x.to, math.NaN(), 0, h.EndS())
				return v
			}
			longest, edges := 0.0, 0
			for n := 0; n <= 30; n++ {
				for _, k := range []float64{0, 1} { // lines along the length, lines along the radius
					share := float64(n) / 30
					at := func(s float64) model.Place {
						return model.Place{UpM: x.longM / 2 * (k*share + (1-k)*s), AcrossM: x.diameterM / 2 * (k*s + (1-k)*share)}
					}
					out, in := 0.0, 1.0
					if !math.IsNaN(took(at(out))) || math.IsNaN(took(at(in))) {
						continue
					}
					for in-out > 1e-7 {
						if m := (in + out) / 2; math.IsNaN(took(at(m))) {
							out = m
						} else {
							in = m
						}
					}
					edges++
					longest = math.Max(longest, took(at(in)))
				}
			}
			if edges < 10 {
				t.Fatalf("%d edges: the case does not show what it should", edges)
			}
			f := one(t, Limit{Kind: CoolWithin, FromC: &x.from, ToC: &x.to, TimeS: min_(400), Clock: crossing}, h)
			closeTo(t, "time at the edge", atEdge(f), longest, 0.1)
		})
	}
}

// In a brick the edge is a surface that crosses every axis: no place on it, found by bisection on lines along each, takes longer.
func TestClockAtTheEdgeOfABrick(t *testing.T) {
	half := [3]float64{0.0859 / 2, 0.1398 / 2, 0.2393 / 2}
	h := solve(t, model.Brick, model.Size{ThicknessM: 2 * half[0], WidthM: 2 * half[1], LengthM: 2 * half[2]}, 3.4,
		filmStep(model.Cook, 90, 100, 25), filmStep(model.Rest, 15, 21, 8), filmStep(model.Cool, 320, 2, 30))
	took := func(x [3]float64) float64 {
		v, _ := readEvery(h, model.Place{UpM: x[0], AcrossM: x[1], AlongM: x[2]}, 30).fall(60, 10, math.NaN(), 0, h.EndS())
		return v
	}
	longest, edges := 0.0, [3]int{}
	for axis := range half {
		for n := 0; n < 16; n++ {
			a, b := (axis+1)%3, (axis+2)%3
			at := func(s float64) (x [3]float64) {
				x[axis], x[a], x[b] = s*half[axis], float64(n/4)/4*half[a], float64(n%4)/4*half[b]
				return x
			}
			out, in := 0.0, 1.0
			if !math.IsNaN(took(at(out))) || math.IsNaN(took(at(in))) {
				continue
			}
			for in-out > 1e-6 {
				if m := (in + out) / 2; math.IsNaN(took(at(m))) {
					out = m
				} else {
					in = m
				}
			}
			edges[axis]++
			longest = math.Max(longest, took(at(in)))
		}
	}
	if edges[0] == 0 || edges[1] == 0 || edges[2] == 0 {
		t.Fatalf("%d edges: the case does not show what it should", edges)
	}
	f := one(t, Limit{Kind: CoolWithin, FromC: c(60), ToC: c(10), TimeS: min_(150), Clock: crossing}, h)
	closeTo(t, "time at the edge", atEdge(f), longest, 0.3)
}
