package rules

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"slowpoint/model"
)

// filmStep is a step in surroundings of one temperature with a film coefficient.
func filmStep(stage *model.Stage, minutes, mediumC, filmW float64) model.Step {
	return model.Step{Name: stage.Name, Stage: stage, DurationS: 60 * minutes,
		Exposure: model.Exposure{Surface: model.Film, FilmW: &filmW, Medium: model.Course{TimesS: []float64{0}, C: []float64{mediumC}}}}
}

// solve predicts a history of a test food.
func solve(t testing.TB, shape *model.Shape, size model.Size, startC float64, steps ...model.Step) *model.History {
	t.Helper()
	p := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3500}
	food := &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return p }}
	h, err := model.Solve(model.Product{Name: "P", Shape: shape, Size: size, Food: food, StartC: startC}, steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// dense is a course read every 2 s, for an independent judgement by straight lines.
type dense struct{ t, c []float64 }

func read(h *model.History, p model.Place) dense { return readEvery(h, p, 2) }

func readEvery(h *model.History, p model.Place, s float64) dense {
	var d dense
	for x := 0.0; x < h.EndS(); x += s {
		d.t = append(d.t, x)
	}
	d.t = append(d.t, h.EndS())
	d.c = make([]float64, len(d.t))
	h.Course(p, d.t, d.c)
	return d
}

// inside is the time in minutes strictly between two temperatures from a to z (s): all of it, and the longest period.
func (d dense) inside(lo, hi, a, z float64) (total, longest float64) {
	run := 0.0
	for i := 0; i+1 < len(d.t); i++ {
		if d.t[i+1] <= a || d.t[i] >= z {
			continue
		}
		u, w := 0.0, 1.0
		A, B := d.c[i], d.c[i+1]
		if A == B {
			if A <= lo || A >= hi {
				w = 0
			}
		} else {
			u, w = (lo-A)/(B-A), (hi-A)/(B-A)
			if u > w {
				u, w = w, u
			}
			u, w = math.Max(0, u), math.Min(1, w)
		}
		if part := math.Max(0, w-u) * (d.t[i+1] - d.t[i]) / 60; part > 0 {
			if u > 0 {
				run = 0
			}
			run += part
			total += part
			longest = math.Max(longest, run)
			if w < 1 {
				run = 0
			}
		} else {
			run = 0
		}
	}
	return total, longest
}

// kill is the integral of the lethal rate in minutes above a floor from a to z (s), by the midpoint rule every 2 s.
func (d dense) kill(floor, ref, zK, a, z float64) float64 {
	sum := 0.0
	for i := 0; i+1 < len(d.t); i++ {
		if m := (d.c[i] + d.c[i+1]) / 2; d.t[i+1] > a && d.t[i] < z && m >= floor {
			sum += math.Pow(10, (m-ref)/zK) * (d.t[i+1] - d.t[i]) / 60
		}
	}
	return sum
}

// fall is the time in minutes from the first fall to from after the warmest instant (or from start, s, if from is NaN) to the
// instant after which it stays at or below to, in a window; NaN where it is never warm enough, and whether it is still open.
func (d dense) fall(from, to, start, a, z float64) (minutes float64, open bool) {
	i0, i1 := 0, 0
	for i, t := range d.t {
		if t <= a {
			i0 = i
		}
		if t <= z {
			i1 = i
		}
	}
	if math.IsNaN(start) {
		top := i0
		for i := i0; i <= i1; i++ {
			if d.c[i] > d.c[top] {
				top = i
			}
		}
		if d.c[top] <= from {
			return math.NaN(), false
		}
		for i := top; i < i1; i++ {
			if d.c[i] > from && d.c[i+1] <= from {
				start = d.t[i] + (d.t[i+1]-d.t[i])*(d.c[i]-from)/(d.c[i]-d.c[i+1])
				break
			}
		}
	}
	if d.c[i1] > to {
		return (d.t[i1] - start) / 60, true
	}
	for i := i1 - 1; i >= i0; i-- {
		if d.c[i] > to {
			end := d.t[i] + (d.t[i+1]-d.t[i])*(d.c[i]-to)/(d.c[i]-d.c[i+1])
			return math.Max(0, end-start) / 60, false
		}
	}
	return 0, false
}

// TestPredictedSlabs judges random slab chains and compares with an independent reading of their courses at 81 places: with a
// door opening in the chill, and with a reheat.
func TestPredictedSlabs(t *testing.T) {
	rnd := rand.New(rand.NewSource(7))
	between := func(a, b float64) float64 { return a + (b-a)*rnd.Float64() }
	for trial := 0; trial < 6; trial++ {
		air, film := between(0.5, 4), between(12, 35)
		thick := between(0.030, 0.060)
		steps := []model.Step{filmStep(model.Cook, math.Round(between(60, 110)), between(85, 125), between(20, 50)), filmStep(model.Rest, math.Round(between(5, 25)), 21, 7)}
		switch trial % 3 {
		case 1:
			steps = append(steps, filmStep(model.Cool, 45, air, film), filmStep(model.Cool, 12, 75, 12), filmStep(model.Cool, 300, air, film))
		case 2:
			steps = append(steps, filmStep(model.Cool, 300, air, film), filmStep(model.Reheat, 70, 110, 30), filmStep(model.Cool, 300, 3, 25))
		default:
			steps = append(steps, filmStep(model.Cool, 300, air, film))
		}
		h := solve(t, model.Slab, model.Size{ThicknessM: thick}, between(2, 12), steps...)
		cookEnd, end := h.Spans[0].EndS, h.EndS()
		windows := [][2]float64{{0, end}}
		if trial%3 == 2 {
			windows = [][2]float64{{0, h.Spans[3].StartS}, {h.Spans[3].StartS, end}}
		}
		for _, where := range []string{"centre", "every point"} {
			var ds []dense
			for k := 0; k <= 80; k++ {
				if where == "every point" || k == 40 {
					ds = append(ds, read(h, model.Place{UpM: thick * (float64(k)/80 - 0.5)}))
				}
			}
			w := Where{Name: where}
			check := func(what string, l Limit, least bool, value func(d dense) float64) {
				l.Where = w
				f := one(t, l, h)
				want := math.NaN()
				for _, d := range ds {
					if v := value(d); math.IsNaN(want) || least && v < want || !least && v > want {
						want = v
					}
				}
				tol := math.Max(0.02, 0.002*math.Abs(want))
				if where == "every point" {
					tol = math.Max(0.1, 0.007*math.Abs(want))
				}
				name := fmt.Sprintf("trial %d %s %s", trial, where, what)
				if math.IsNaN(want) {
					if f.Verdict != NotApplicable {
						t.Errorf("%s: %v, want not applicable", name, f.Verdict)
					}
					return
				}
				got := f.Value
				if l.clocked() { // the worst of the dense places lies at the edge, the place named half a probe's breadth within
					got = atEdge(f)
				}
				closeTo(t, name, got, want, tol)
				if need := *f.Required; math.Abs(want-need) > 3*tol {
					if met := (want >= need) == least; met != (f.Verdict == Met) {
						t.Errorf("%s: %v at %g against %g: %s", name, f.Verdict, want, need, f.Why)
					}
					if f.MarginK != nil && (*f.MarginK > 0) != (f.Verdict == Met) {
						t.Errorf("%s: %v with a margin of %g K", name, f.Verdict, *f.MarginK)
					}
				}
			}
			for n := 0; n < 3; n++ {
				a := between(45, 75)
				cook := []*model.Stage{model.Cook}
				check(fmt.Sprintf("hold %.1f", a), Limit{Kind: Hold, Stages: cook, FromC: &a, TimeS: min_(between(0.5, 25)), Counting: Total}, true,
					func(d dense) float64 { x, _ := d.inside(a, 1e6, 0, cookEnd); return x })
				check("hold longest", Limit{Kind: Hold, FromC: &a, TimeS: min_(between(0.5, 25)), Counting: Continuous}, true,
					func(d dense) float64 { _, x := d.inside(a, 1e6, 0, end); return x })
				hi, lo := between(45, 63), between(6, 30)
				check(fmt.Sprintf("band %.1f %.1f", lo, hi), Limit{Kind: Band, FromC: &lo, ToC: &hi, TimeS: min_(between(30, 300)), Counting: Total}, false,
					func(d dense) float64 { x, _ := d.inside(lo, hi, 0, end); return x })
				worst := func(from, start float64) func(d dense) float64 {
					return func(d dense) float64 {
						v := math.NaN()
						for i, win := range windows {
							if !math.IsNaN(start) && i > 0 {
								continue
							}
							if x, open := d.fall(from, lo, start, win[0], win[1]); !math.IsNaN(x) && !open && !(x < v) {
								v = x
							}
						}
						return v
					}
				}
				open := false
				for _, d := range ds {
					for _, win := range windows {
						_, o := d.fall(hi, lo, math.NaN(), win[0], win[1])
						open = open || o
					}
				}
				if !open {
					allowed := between(30, 300)
					check(fmt.Sprintf("cool %.1f %.1f", hi, lo), Limit{Kind: CoolWithin, FromC: &hi, ToC: &lo, TimeS: min_(allowed), Clock: Clock{Crossing: true}}, false, worst(hi, math.NaN()))
					check("cool from cook end", Limit{Kind: CoolWithin, ToC: &lo, TimeS: min_(allowed), Clock: Clock{End: model.Cook}}, false, worst(0, cookEnd))
				}
			}
			check("lethality", Limit{Kind: Lethality, Stages: []*model.Stage{model.Cook}, FromC: c(55), ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)}, true,
				func(d dense) float64 { return d.kill(55, 70, 7.5, 0, cookEnd) })
		}
	}
}

// TestEdgeOfTheClock: in a reheat only the outer layers get above From; the place that only just does takes longest to cool.
func TestEdgeOfTheClock(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.0574}, 8.2, filmStep(model.Cook, 60, 85.3, 21.2), filmStep(model.Rest, 10, 21, 7),
		filmStep(model.Cool, 359, 1.7, 17.6), filmStep(model.Reheat, 70, 110, 30), filmStep(model.Cool, 300, 3, 25))
	l := Limit{Kind: CoolWithin, FromC: c(56.2), ToC: c(28.1), TimeS: min_(290), Clock: crossing}
	got := one(t, l, h)
	took := func(x float64) float64 {
		v, _ := readEvery(h, model.Place{UpM: x}, 2).fall(56.2, 28.1, math.NaN(), h.Spans[3].StartS, h.EndS())
		return v
	}
	in, out := 0.012, 0.0085
	for in-out > 1e-8 {
		if m := (in + out) / 2; math.IsNaN(took(m)) {
			out = m
		} else {
			in = m
		}
	}
	closeTo(t, "longest", atEdge(got), took(in), 0.1)
	l.TimeS = c(60 * (took(in) - 1.5))
	if strict := one(t, l, h); strict.Verdict != NotMet {
		t.Errorf("%v at %g of %g min", strict.Verdict, *strict.Value, *strict.Required)
	}
}

// TestPredictedShapes compares judgements of other shapes with the least favourable of many places read independently, and
// their margins with limits moved by as much.
func TestPredictedShapes(t *testing.T) {
	steps := []model.Step{filmStep(model.Cook, 80, 120, 30), filmStep(model.Rest, 12, 21, 7), filmStep(model.Cool, 300, 2, 22)}
	tray := filmStep(model.Cook, 80, 120, 30)
	lower := 120.0
	tray.Faces = []model.FaceExposure{{Face: model.Underside, Exposure: model.Exposure{Surface: model.Film, FilmW: &lower, Medium: model.Course{TimesS: []float64{0}, C: []float64{95}}}}}
	onTray := []model.Step{tray, steps[1], steps[2]}
	for _, x := range []struct {
		name   string
		shape  *model.Shape
		size   model.Size
		steps  []model.Step
		extent model.Place // half sizes
	}{
		{"sphere", model.Sphere, model.Size{DiameterM: 0.07}, steps, model.Place{UpM: 0.035}},
		{"slab on a tray", model.Slab, model.Size{ThicknessM: 0.05}, onTray, model.Place{UpM: 0.025}},
		{"short cylinder", model.ShortCylinder, model.Size{DiameterM: 0.07, LengthM: 0.09}, steps, model.Place{UpM: 0.045, AcrossM: 0.035}},
		{"brick", model.Brick, model.Size{ThicknessM: 0.05, WidthM: 0.08, LengthM: 0.13}, steps, model.Place{UpM: 0.025, AcrossM: 0.04, AlongM: 0.065}},
	} {
		t.Run(x.name, func(t *testing.T) {
			h := solve(t, x.shape, x.size, 6, x.steps...)
			var ds []dense
			grid := func(half float64, n int) []float64 {
				if half == 0 {
					return []float64{0}
				}
				var at []float64
				for k := 0; k <= n; k++ {
					at = append(at, half*float64(k)/float64(n))
				}
				return at
			}
			ups := grid(x.extent.UpM, 8)
			for _, u := range ups[1:] {
				ups = append(ups, -u)
			}
			for _, u := range ups {
				for _, a := range grid(x.extent.AcrossM, 5) {
					for _, l := range grid(x.extent.AlongM, 4) {
						ds = append(ds, readEvery(h, model.Place{UpM: u, AcrossM: a, AlongM: l}, 15))
					}
				}
			}
			cookEnd, end := h.Spans[0].EndS, h.EndS()
			for i, l := range sixLimits() {
				if l.Kind == HoldTable {
					continue
				}
				f := one(t, l, h)
				want := math.NaN()
				for _, d := range ds {
					v := 0.0
					switch l.Name {
					case "hold":
						v, _ = d.inside(*l.FromC, 1e6, 0, cookEnd)
					case "lethality":
						v = d.kill(*l.FromC, 70, 7.5, 0, cookEnd)
					case "cool":
						v, _ = d.fall(*l.FromC, *l.ToC, math.NaN(), 0, end)
					case "cool end":
						v, _ = d.fall(0, *l.ToC, cookEnd, 0, end)
					case "band":
						v, _ = d.inside(*l.FromC, *l.ToC, 0, end)
					}
					if least := i < 3; math.IsNaN(want) || least && v < want || !least && v > want {
						want = v
					}
				}
				closeTo(t, l.Name, f.Value, want, math.Max(0.15, 0.01*math.Abs(want)))
				if f.MarginK == nil {
					continue
				}
				for _, side := range []float64{-0.05, 0.05} { // just inside and just beyond the margin
					m := l
					moved := func(p *float64, by float64) *float64 { x := *p + by; return &x }
					switch l.Kind {
					case Hold:
						m.FromC = moved(l.FromC, *f.MarginK+side)
					case Lethality:
						m.ReferenceC = moved(l.ReferenceC, *f.MarginK+side)
					case CoolWithin:
						m.ToC = moved(l.ToC, -*f.MarginK-side)
					case Band:
						m.FromC = moved(l.FromC, -*f.MarginK-side)
					}
					if got := one(t, m, h); (got.Verdict == Met) != (side < 0) {
						t.Errorf("%s: margin %g K, moved by %+.2f more: %v", l.Name, *f.MarginK, side, got.Verdict)
					}
				}
			}
		})
	}
}

// sixLimits are a cook, a table, a lethality, two cooling windows and a cold keeping.
func sixLimits() []Limit {
	all := Applies{All: true}
	cook := []*model.Stage{model.Cook}
	return []Limit{
		{Name: "hold", Kind: Hold, Applies: all, Stages: cook, FromC: c(70), TimeS: min_(2), Counting: Total},
		{Name: "table", Kind: HoldTable, Applies: all, Stages: cook, Counting: Total, Table: &Table{Name: "t", Rows: []Row{{C: 60, S: 2700}, {C: 65, S: 600}, {C: 70, S: 120}, {C: 75, S: 30}, {C: 80, S: 6}}}},
		{Name: "lethality", Kind: Lethality, Applies: all, Stages: cook, FromC: c(55), ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)},
		{Name: "cool", Kind: CoolWithin, Applies: all, FromC: c(60), ToC: c(21), TimeS: min_(120), Clock: Clock{Crossing: true}},
		{Name: "cool end", Kind: CoolWithin, Applies: all, ToC: c(8), TimeS: min_(300), Clock: Clock{End: model.Cook}},
		{Name: "band", Kind: Band, Applies: all, FromC: c(5), ToC: c(60), TimeS: min_(360), Counting: Total},
	}
}

// BenchmarkJudge holds six limits against a predicted history: time by product, the history itself not counted.
func BenchmarkJudge(b *testing.B) {
	steps := []model.Step{filmStep(model.Cook, 90, 110, 30), filmStep(model.Rest, 10, 21, 7), filmStep(model.Cool, 360, 2, 25)}
	for _, bc := range []struct {
		name  string
		shape *model.Shape
		size  model.Size
	}{
		{"slab", model.Slab, model.Size{ThicknessM: 0.045}},
		{"sphere", model.Sphere, model.Size{DiameterM: 0.06}},
		{"short cylinder", model.ShortCylinder, model.Size{DiameterM: 0.08, LengthM: 0.1}},
		{"brick", model.Brick, model.Size{ThicknessM: 0.05, WidthM: 0.09, LengthM: 0.14}},
	} {
		b.Run(bc.name, func(b *testing.B) {
			h := solve(b, bc.shape, bc.size, 6, steps...)
			h.Scan()
			limits := sixLimits()
			b.ReportAllocs()
			for i := 0; i < b.N; i++ {
				Judge(limits, nil, Subject{Product: "P", History: h})
			}
		})
	}
}
