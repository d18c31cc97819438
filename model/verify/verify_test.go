package verify

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/testdata/published"
)

func TestCases(t *testing.T) {
	cases := append(Cases(), LongCases()...)
	if len(cases) < 40 {
		t.Fatalf("%d cases, want at least 40", len(cases))
	}
	areas := map[string]int{}
	for _, a := range Areas {
		areas[a.Name] = 0
	}
	names := map[string]bool{}
	for _, c := range cases {
		t.Run(c.Name, func(t *testing.T) {
			if names[c.Name] {
				t.Error("two cases of this name")
			}
			names[c.Name] = true
			if _, ok := areas[c.Area]; !ok {
				t.Errorf("area %q is not listed", c.Area)
			}
			areas[c.Area]++
			if strings.TrimSpace(c.Source) == "" || c.Unit == "" || !(c.Allowance > 0) {
				t.Errorf("source %q, unit %q, allowance %g", c.Source, c.Unit, c.Allowance)
			}
			r := Run(c)
			if r.Err != nil {
				t.Fatal(r.Err)
			}
			t.Logf("got %.6g, expected %.6g ± %g %s", r.Got, c.Expected, c.Allowance, c.Unit)
			if !r.Met {
				t.Errorf("got %.9g %s, expected %.9g ± %g (%s)", r.Got, c.Unit, c.Expected, c.Allowance, c.Source)
			}
		})
	}
	for name, n := range areas {
		if n == 0 && name != Judging { // its cases are in rules/known
			t.Errorf("no case in area %q", name)
		}
	}
}

// A case whose answer is off by twice its allowance, or that gives nothing, must not pass.
func TestCasesCanFail(t *testing.T) {
	c := propertyCases()[0]
	if r := Run(c); !r.Met {
		t.Fatalf("%s is not met to begin with", c.Name)
	}
	c.Expected += 2 * c.Allowance
	if r := Run(c); r.Met {
		t.Error("met in spite of a wrong answer")
	}
	c.Got = func() (float64, error) { return math.NaN(), nil }
	if r := Run(c); r.Met {
		t.Error("met by a number that is none")
	}
	c.Got = func() (float64, error) { return 0, os.ErrInvalid }
	if r := Run(c); r.Met || r.Err == nil {
		t.Error("met in spite of an error")
	}
}

// worst keeps the largest error of a test and fails at each one beyond the tolerance.
type worst struct {
	err  float64
	name string
}

func (w *worst) hold(t *testing.T, name string, got, want, tol float64) {
	t.Helper()
	e := math.Abs(got - want)
	if !(e <= tol) {
		t.Errorf("%s: %.7g, want %.7g ± %g (off by %.4g)", name, got, want, tol, got-want)
	}
	if e > w.err || math.IsNaN(e) {
		w.err, w.name = e, name
	}
}

func (w *worst) log(t *testing.T) { t.Logf("largest error %.3g (%s)", w.err, w.name) }

func solve(t *testing.T, p Problem) *model.History {
	t.Helper()
	h, err := p.history()
	if err != nil {
		t.Fatalf("%s: %v", p.Name, err)
	}
	return h
}

// last gives the samples at the end of a history.
func last(h *model.History) (s model.Samples, i int) {
	s = h.Sample(h.EndS())
	return s, len(s.TimesS) - 1
}

var shapeOf = map[string]*model.Shape{"plate": model.Slab, "cylinder": model.Cylinder, "sphere": model.Sphere, "short cylinder": model.ShortCylinder, "brick": model.Brick}

// The accuracy promised for chains of constant properties, K: one, two and three directions.
const (
	oneAxisK   = 0.005
	twoAxesK   = 0.01
	threeAxesK = 0.02
)

func TestSeries(t *testing.T) {
	var w worst
	for _, file := range []string{"series_checks.csv", "series.csv"} {
		for _, r := range published.Rows(t, file) {
			const radius = 0.037
			p, end := oneStep(shapeOf[r["geometry"]], radius, published.Number(t, r["Bi"]), published.Number(t, r["Fo"]))
			h := solve(t, p)
			s, i := last(h)
			degrees := func(col string) float64 { return chillToC + (chillFromC-chillToC)*published.Number(t, r[col]) }
			w.hold(t, p.Name+": centre", h.At(model.Place{}, end), degrees("theta_centre"), oneAxisK)
			w.hold(t, p.Name+": mean", s.Mean[i], degrees("theta_mean"), oneAxisK)
			w.hold(t, p.Name+": surface", h.At(model.Place{UpM: radius}, end), degrees("theta_surface"), oneAxisK)
			w.hold(t, p.Name+": hottest", s.Hottest[i], degrees("theta_centre"), oneAxisK)
			w.hold(t, p.Name+": coldest", s.Coldest[i], degrees("theta_surface"), oneAxisK)
		}
	}
	w.log(t)
}

func TestProductsOfSeries(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "product_solutions.csv") {
		size, tol := model.Size{DiameterM: 0.1, LengthM: 0.15}, twoAxesK
		if r["shape"] == "brick" {
			size, tol = model.Size{ThicknessM: 0.06, WidthM: 0.1, LengthM: 0.2}, threeAxesK
		}
		end := published.Number(t, r["time_s"])
		p := Problem{r["shape"] + " h " + r["h"] + " after " + r["time_s"], model.Product{Name: "p", Shape: shapeOf[r["shape"]], Size: size, Food: material(tested), StartC: chillFromC},
			[]model.Step{step("chill", end, exposure(published.Number(t, r["h"]), chillToC))}}
		h := solve(t, p)
		s, i := last(h)
		w.hold(t, p.Name+": centre", h.At(model.Place{}, end), published.Number(t, r["centre_C"]), tol)
		w.hold(t, p.Name+": centre by theta", h.At(model.Place{}, end), chillToC+(chillFromC-chillToC)*published.Number(t, r["theta_centre"]), tol)
		w.hold(t, p.Name+": mean", s.Mean[i], chillToC+(chillFromC-chillToC)*published.Number(t, r["theta_mean"]), tol)
	}
	w.log(t)
}

func TestHalfSpace(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "semi_infinite.csv") {
		for col, h := range map[string]float64{"held": held, "h25": 25, "h200": 200} {
			x, end := published.Number(t, r["x_m"]), published.Number(t, r["time_s"])
			half := math.Max(9.5*math.Sqrt(alpha*end), x)
			p := Problem{"x " + r["x_m"] + " t " + r["time_s"] + " " + col, body(model.Slab, half, chillFromC), []model.Step{step("chill", end, exposure(h, chillToC))}}
			w.hold(t, p.Name, solve(t, p).At(model.Place{UpM: half - x}, end), chillFromC-(chillFromC-chillToC)*published.Number(t, r[col]), oneAxisK)
		}
	}
	w.log(t)
}

func TestRamp(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "ramp.csv") {
		end := published.Number(t, r["time_s"])
		p := Problem{r["geometry"] + " after " + r["time_s"], body(shapeOf[r["geometry"]], published.Number(t, r["radius_m"]), 5), []model.Step{rising(end)}}
		w.hold(t, p.Name, solve(t, p).At(model.Place{}, end)-5, published.Number(t, r["rise_K"]), oneAxisK)
	}
	w.log(t)
}

func TestChains(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "chain.csv") {
		radius := published.Number(t, r["radius_m"])
		p := Problem{Name: r["chain"] + " " + r["geometry"] + " " + r["steps"], Product: body(shapeOf[r["geometry"]], radius, 5)}
		for _, s := range strings.Split(r["steps"], ";") {
			f := strings.Fields(s)
			p.Steps = append(p.Steps, step("step", published.Number(t, f[2]), exposure(published.Number(t, f[0]), published.Number(t, f[1]))))
		}
		h := solve(t, p)
		s, i := last(h)
		w.hold(t, p.Name+": centre", h.At(model.Place{}, h.EndS()), published.Number(t, r["centre_C"]), oneAxisK)
		w.hold(t, p.Name+": surface", h.At(model.Place{UpM: radius}, h.EndS()), published.Number(t, r["surface_C"]), oneAxisK)
		w.hold(t, p.Name+": mean", s.Mean[i], published.Number(t, r["mean_C"]), oneAxisK)
	}
	w.log(t)
}

func TestCarryOver(t *testing.T) {
	var w worst
	for _, r := range published.Rows(t, "carry_over.csv") {
		p := Problem{r["geometry"], body(shapeOf[r["geometry"]], published.Number(t, r["radius_m"]), 5),
			[]model.Step{step("oven", 2400, exposure(40, 160)), step("rest", 3600, exposure(8, 22))}}
		h := solve(t, p)
		w.hold(t, p.Name+": at removal", h.At(model.Place{}, 2400), published.Number(t, r["removal_C"]), oneAxisK)
		peak, when := math.Inf(-1), 0.0
		for after := 0.0; after <= 3600; after++ {
			if c := h.At(model.Place{}, 2400+after); c > peak {
				peak, when = c, after
			}
		}
		w.hold(t, p.Name+": peak", peak, published.Number(t, r["peak_C"]), oneAxisK)
		if want := published.Number(t, r["peak_after_s"]); math.Abs(when-want) > 5 {
			t.Errorf("%s: peak %g s after removal, want %g ± 5", p.Name, when, want)
		}
	}
	w.log(t)
}

// Penetration theory gives the mean of a plate at Fo 0.02 on the full thickness, and not that of a cylinder or sphere.
// Closed form: Carslaw & Jaeger, Conduction of Heat in Solids (1959), section 3.3; the limits of the rule are worked out apart from this program.
func TestPenetrationRule(t *testing.T) {
	flat := func(fo, areaByVolume float64) float64 { return 1 - areaByVolume*2*math.Sqrt(4*fo/math.Pi) } // θ of the mean
	for _, c := range []struct {
		shape *model.Shape
		e     float64
		holds bool
	}{{model.Slab, 1, true}, {model.Cylinder, 2, false}, {model.Sphere, 3, false}} {
		for _, fo := range []float64{0.005, 0.01, 0.02} {
			p, _ := oneStep(c.shape, 0.037, held, 4*fo)
			s, i := last(solve(t, p))
			want := chillToC + (chillFromC-chillToC)*flat(fo, c.e)
			if diff := math.Abs(s.Mean[i] - want); c.holds && diff > oneAxisK {
				t.Errorf("%s, Fo %g: mean %.4f °C, penetration theory %.4f", c.shape.Name, fo, s.Mean[i], want)
			} else if !c.holds && diff < 1 {
				t.Errorf("%s, Fo %g: mean %.4f °C is that of penetration theory for a flat body, %.4f: curvature is missing", c.shape.Name, fo, s.Mean[i], want)
			}
		}
	}
}

// The long-time value holds from Fo 0.1 on the full thickness or diameter on, and not at 0.02.
func TestOnsetOfTheLongTime(t *testing.T) {
	for _, r := range published.Rows(t, "nusselt.csv") {
		shape, e := shapeOf[r["geometry"]], map[string]float64{"plate": 1, "cylinder": 2, "sphere": 3}[r["geometry"]]
		const radius = 0.1 // large, so that Fo 0.02 comes long after the start
		p, _ := oneStep(shape, radius, held, 4*0.2)
		h := solve(t, p)
		nu := func(fo float64) float64 { // from the means a little before and after
			every := 4 * fo * radius * radius / alpha / 50
			s := h.Sample(every)
			return math.Log((s.Mean[49]-chillToC)/(s.Mean[51]-chillToC)) / (s.TimesS[51] - s.TimesS[49]) * radius * radius / alpha * 2 / e
		}
		want := published.Number(t, r["Nu"])
		for _, fo := range []float64{0.1, 0.15, 0.19} {
			if got := nu(fo); math.Abs(got/want-1) > 1e-3 {
				t.Errorf("%s: Nusselt %.5f at Fo %g, want %.5f within 0.1 %%", shape.Name, got, fo, want)
			}
		}
		if got := nu(0.02); got/want-1 < 0.05 {
			t.Errorf("%s: Nusselt %.5f at Fo 0.02 is already near the long-time %.5f", shape.Name, got, want)
		}
	}
}

// The time to a given centre temperature grows with the square of the size when film and size keep their product.
func TestTimeGrowsWithTheSquareOfTheSize(t *testing.T) {
	for _, shape := range []*model.Shape{model.Slab, model.Cylinder, model.Sphere, model.Brick} {
		times := make([]float64, 2)
		for i, scale := range []float64{1, 2.5} {
			const h = 60.0
			b := body(shape, 0.02*scale, chillFromC)
			if shape == model.Brick {
				b.Size = model.Size{ThicknessM: 0.04 * scale, WidthM: 0.06 * scale, LengthM: 0.1 * scale}
			}
			p := Problem{shape.Name, b, []model.Step{step("chill", 4*3600*scale*scale, exposure(h/scale, chillToC))}}
			var err error
			if times[i], err = p.passes(model.Place{}, 10)(); err != nil {
				t.Fatal(err)
			}
		}
		if ratio := times[1] / times[0]; math.Abs(ratio/6.25-1) > 1e-3 {
			t.Errorf("%s: 2.5 times the size takes %.5f times as long, want 6.25", shape.Name, ratio)
		}
	}
}

// solution is a file of testdata/published/solutions.
type solution struct {
	ID        string
	Reference struct {
		Columns []string
		Rows    [][]any
	}
}

func TestReferenceProblems(t *testing.T) {
	for _, r := range References() {
		t.Run(r.ID, func(t *testing.T) {
			raw, err := os.ReadFile(filepath.Join("..", "..", "testdata", "published", "solutions", r.ID+".json"))
			if err != nil {
				t.Fatal(err)
			}
			var sol solution
			if err := json.Unmarshal(raw, &sol); err != nil || sol.ID != r.ID || len(sol.Reference.Rows) < 12 {
				t.Fatalf("%v, %q, %d rows", err, sol.ID, len(sol.Reference.Rows))
			}
			h := solve(t, r.Problem)
			s := h.Sample(30)
			var w worst
			for _, row := range sol.Reference.Rows {
				r.holdRow(t, h, &s, sol.Reference.Columns, row, &w)
			}
			w.log(t)
			// The other solution of K differs by up to 0.0078 K at the lower corner.
			doubt := 0.002
			if r.ID == "K" {
				doubt += 0.0078
			}
			if w.err > 2*h.ErrorK+doubt {
				t.Errorf("error %.4f K, and the history says %.4f: not honest", w.err, h.ErrorK)
			}
			if !(h.ErrorK > 0 && h.ErrorK <= r.AllowK) {
				t.Errorf("the history says an error of %.4f K, want at most %g: not useful", h.ErrorK, r.AllowK)
			}
			t.Logf("the history says %.4g K", h.ErrorK)
		})
	}
}

// holdRow compares one instant.
func (r *ReferenceProblem) holdRow(t *testing.T, h *model.History, s *model.Samples, columns []string, row []any, w *worst) {
	t.Helper()
	time := row[0].(float64)
	i := -1
	for j, at := range s.TimesS {
		if math.Abs(at-time) < 1e-6 {
			i = j
		}
	}
	if i < 0 {
		t.Errorf("no sample at %g s", time)
		return
	}
	for c, name := range columns {
		at := name + " at " + strconv.FormatFloat(time, 'g', -1, 64) + " s"
		switch name {
		case "time_s":
		case "volume_mean_C":
			w.hold(t, at, s.Mean[i], row[c].(float64), r.AllowK)
		case "coldest_T_C":
			w.hold(t, at, s.Coldest[i], row[c].(float64), r.EdgeK)
		case "hottest_T_C":
			w.hold(t, at, s.Hottest[i], row[c].(float64), r.EdgeK)
		case "coldest_at_m":
			r.holdPlace(t, h, at, time, s.ColdestAt[i], r.place(row[c].([]any)))
		case "hottest_at_m":
			r.holdPlace(t, h, at, time, s.HottestAt[i], r.place(row[c].([]any)))
		default:
			name := strings.TrimSuffix(name, "_C")
			p, ok := r.Points[name]
			if !ok {
				t.Errorf("no point %s", name)
				continue
			}
			tol := r.AllowK
			if strings.HasPrefix(name, "bottom") {
				tol = r.EdgeK
			}
			w.hold(t, at, h.At(p, time), row[c].(float64), tol)
		}
	}
}

// place turns the coordinates of a solution into a place.
func (r *ReferenceProblem) place(m []any) model.Place {
	x := func(i int) float64 { return m[i].(float64) }
	switch {
	case r.ID == "C" || r.Product.Shape == model.Spheroid: // r, z from mid-height
		return model.Place{UpM: x(1), AcrossM: x(0)}
	case r.ID == "D": // x, y, z from the centre
		return model.Place{UpM: x(2), AcrossM: x(1), AlongM: x(0)}
	case r.ID == "K": // x, y from centre; z from below
		return model.Place{UpM: x(2) - r.Product.Size.ThicknessM/2, AcrossM: x(1), AlongM: x(0)}
	case r.FromLow:
		return model.Place{UpM: x(0) - r.Product.Size.ThicknessM/2}
	}
	return model.Place{UpM: x(0)}
}

// holdPlace wants a place within 1 mm, or at a temperature that differs by no more than 0.05 K where the field is flat. Mirror images count.
func (r *ReferenceProblem) holdPlace(t *testing.T, h *model.History, name string, time float64, got, want model.Place) {
	t.Helper()
	g := model.Place{UpM: got.UpM, AcrossM: math.Abs(got.AcrossM), AlongM: math.Abs(got.AlongM)}
	if !r.FromLow {
		g.UpM = math.Abs(g.UpM)
	}
	d := math.Hypot(math.Hypot(g.UpM-want.UpM, g.AcrossM-want.AcrossM), g.AlongM-want.AlongM)
	if flat := math.Abs(h.At(got, time) - h.At(want, time)); d > 0.001 && flat > 0.05 {
		t.Errorf("%s: %+v, want %+v: %.2f mm apart, %.3f K", name, got, want, 1000*d, flat)
	}
}
