package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// slabFood is a food of constant properties, W/(m·K), kg/m³, J/(kg·K); invented.
var slabFood = &model.Material{Name: "block", Source: "invented", Props: func(float64) model.Properties {
	return model.Properties{KWmK: 0.47, RhoKgM3: 1070, CJkgK: 3520}
}}

// centreLeft is the share of the first difference from the medium that the centre of a slab has left after t s, both faces in one film, W/(m²·K):
// the first 40 terms of the series of Incropera and DeWitt, Fundamentals of Heat and Mass Transfer, 6th edition, equations 5.39a to c
// (from memory; Carslaw and Jaeger 1959, section 3.11, give the same).
func centreLeft(thicknessM, film, t float64) float64 {
	p := slabFood.Props(0)
	half := thicknessM / 2
	bi, fo := film*half/p.KWmK, p.KWmK/(p.RhoKgM3*p.CJkgK)*t/(half*half)
	sum := 0.0
	for n := range 40 {
		lo, hi := float64(n)*math.Pi, (float64(n)+0.5)*math.Pi // the root of z tan z = Bi lies between
		for range 100 {
			if z := (lo + hi) / 2; z*math.Sin(z) < bi*math.Cos(z)*math.Copysign(1, 1) == (n%2 == 0) {
				lo = z
			} else {
				hi = z
			}
		}
		z := lo
		sum += 4 * math.Sin(z) / (2*z + math.Sin(2*z)) * math.Exp(-z*z*fo)
	}
	return sum
}

// Two entries of the published table of one-term coefficients of a plane wall (Incropera and DeWitt, 6th edition, table 5.1, from memory)
// hold the series to something outside this program.
func TestCentreLeft(t *testing.T) {
	p := slabFood.Props(0)
	for _, c := range []struct{ bi, zeta, c1 float64 }{{1, 0.8603, 1.1191}, {10, 1.4289, 1.2620}, {100, 1.5552, 1.2731}} {
		const thick = 0.038
		const fo = 0.9
		half := thick / 2
		got := centreLeft(thick, c.bi*p.KWmK/half, fo*half*half*p.RhoKgM3*p.CJkgK/p.KWmK)
		if want := c.c1 * math.Exp(-c.zeta*c.zeta*fo); math.Abs(got-want) > 2e-4 { // half a digit of both entries
			t.Errorf("Bi %g: %g, want %g", c.bi, got, want)
		}
	}
}

// slabRunner is a plan of one slab that is cooked or chilled in one step, with the limits given.
func slabRunner(stage *model.Stage, thicknessM, startC, mediumC, film, durationS float64, limits ...rules.Limit) (*runner, *workbook.Product) {
	for i := range limits {
		limits[i].Applies.All = true
	}
	p := workbook.Product{Product: model.Product{Name: "Block", Shape: model.Slab, Food: slabFood, StartC: startC, Size: model.Size{ThicknessM: thicknessM}},
		Process: "P", Steps: []model.Step{{Name: "bath", Stage: stage, DurationS: durationS,
			Exposure: model.Exposure{Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{mediumC}}, FilmW: &film}}}}
	plan := &workbook.Plan{Products: []workbook.Product{p}, Limits: limits}
	return &runner{plan: plan, head: &report.Head{EveryS: 60}, options: &checkOptions{}}, &plan.Products[0]
}

func coolTo(c, s float64) rules.Limit {
	return rules.Limit{Name: "Cool", Kind: rules.CoolWithin, ToC: &c, TimeS: &s, Stages: []*model.Stage{model.Cool}, Clock: rules.Clock{Start: model.Cool}}
}

func heatTo(c float64) rules.Limit {
	nought := 0.0
	return rules.Limit{Name: "Heat", Kind: rules.Hold, FromC: &c, TimeS: &nought, Counting: rules.Total, Stages: []*model.Stage{model.Cook}}
}

// search runs size for the only product.
func (r *runner) search1(t *testing.T, o sizeOptions) *report.Sizing {
	t.Helper()
	p := &r.plan.Products[0]
	d, err := r.dialOf(p, &o)
	if err != nil {
		t.Fatal(err)
	}
	return r.size(p, d, r.judges(p), nominalBasis, 1)
}

// What is found is the exact value rounded to the safe side by the resolution: where the series, turned round, has the limit met just so.
func TestSizeAgainstTheSeries(t *testing.T) {
	const film = 4000.0 // Biot numbers of 100 and more
	root := func(lo, hi float64, f func(x float64) float64) float64 {
		for range 200 {
			if m := (lo + hi) / 2; (f(m) > 0) == (f(lo) > 0) {
				lo = m
			} else {
				hi = m
			}
		}
		return lo
	}
	// The thickness at which a block from 71 °C in 2.5 °C has 9 °C at its centre after 95 min.
	thick := 1000 * root(0.01, 0.2, func(x float64) float64 { return 2.5 + (71-2.5)*centreLeft(x, film, 95*60) - 9 })
	// The time in which 43 mm from 6 °C in 83 °C reach 72 °C.
	minutes := root(60, 36000, func(s float64) float64 { return 83 + (6-83)*centreLeft(0.043, film, s) - 72 }) / 60
	// The medium and the start that do so are linear in the series.
	left := centreLeft(0.043, film, 41*60)
	medium := (72 - 6*left) / (1 - left)
	left = centreLeft(0.052, film, 88*60)
	start := 3 + (9-3)/left
	chiller := (9 - 71*left) / (1 - left)
	for _, c := range []struct {
		name  string
		exact float64
		r     func() (*runner, *workbook.Product)
		o     sizeOptions
		step  float64
		up    bool // the safe side
	}{
		{"thickness", thick, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cool, 0.043, 71, 2.5, film, 4*3600, coolTo(9, 95*60))
		}, sizeOptions{}, 1, false},
		{"thickness by 0.1 mm", thick, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cool, 0.043, 71, 2.5, film, 4*3600, coolTo(9, 95*60))
		}, sizeOptions{vary: "thickness", step: "0.1 mm"}, 0.1, false},
		{"shortest cook", minutes, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cook, 0.043, 6, 83, film, 1800, heatTo(72))
		}, sizeOptions{vary: "duration P/bath", step: "0.5"}, 0.5, true},
		{"coldest cook", medium, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cook, 0.043, 6, 83, film, 41*60, heatTo(72))
		}, sizeOptions{vary: "medium temperature bath", step: "0.1"}, 0.1, true},
		{"warmest start", start, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cool, 0.052, 60, 3, film, 4*3600, coolTo(9, 88*60))
		}, sizeOptions{vary: "start temperature", to: "95 °C", step: "0.1"}, 0.1, false},
		{"warmest chiller", chiller, func() (*runner, *workbook.Product) {
			return slabRunner(model.Cool, 0.052, 71, 1, film, 4*3600, coolTo(9, 88*60))
		}, sizeOptions{vary: "medium temperature bath", step: "0.1"}, 0.1, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, _ := c.r()
			s := r.search1(t, c.o)
			if s.Answer == nil || s.Next == nil {
				t.Fatalf("no answer within the range; exact %g; %+v", c.exact, s)
			}
			want := math.Floor(c.exact/c.step) * c.step
			next := want + c.step
			if c.up {
				want, next = math.Ceil(c.exact/c.step)*c.step, math.Ceil(c.exact/c.step)*c.step-c.step
			}
			if math.Abs(s.Answer.Value-want) > 1e-9 || math.Abs(s.Next.Value-next) > 1e-9 {
				t.Errorf("%g, then %g; want %g, then %g: exact %g", s.Answer.Value, s.Next.Value, want, next, c.exact)
			}
		})
	}
}

// A chilling that is judged by pieces that hold heat too short and by those that cool too slowly is met in the middle only, and nothing in
// between is taken for an end. A narrow run between two values of the first look is found where the margin turns round.
func TestSizeOfSeveralRuns(t *testing.T) {
	judged := func(margin func(x float64) float64) judgement {
		l := &rules.Limit{Name: "made", Kind: rules.CoolWithin}
		return func(p *workbook.Product) ([]rules.Finding, error) {
			m := margin(p.Size.ThicknessM * 1000)
			v := rules.NotMet
			if m >= 0 {
				v = rules.Met
			}
			return []rules.Finding{{Limit: l, Level: "must", Verdict: v, MarginK: &m}}, nil
		}
	}
	for _, c := range []struct {
		name   string
		margin func(x float64) float64
		from   string
		to     string
		meets  [][2]float64
		most   float64
	}{
		{"one run within", func(x float64) float64 { return 100 - (x-50.2)*(x-50.2) }, "10", "130", [][2]float64{{41, 60}}, 60},
		{"narrow run between two looks", func(x float64) float64 { return 1.2 - math.Abs(x-72.4) }, "10", "250", [][2]float64{{72, 73}}, 73},
		{"two runs", func(x float64) float64 { return math.Cos(x / 20) }, "10", "130", [][2]float64{{10, 31}, {95, 130}}, 130},
		{"narrow gap", func(x float64) float64 { return math.Abs(x-72.4) - 1.2 }, "10", "250", [][2]float64{{10, 71}, {74, 250}}, 250},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, p := slabRunner(model.Cool, 0.043, 71, 2.5, 300, 3600)
			d, err := r.dialOf(p, &sizeOptions{from: c.from, to: c.to})
			if err != nil {
				t.Fatal(err)
			}
			s := r.size(p, d, judges{look: judged(c.margin)}, "", 2)
			var got [][2]float64
			for _, m := range s.Meets {
				got = append(got, [2]float64{math.Round(m[0].Value), math.Round(m[1].Value)})
			}
			if !slices.Equal(got, c.meets) || s.Answer == nil || math.Round(s.Answer.Value) != c.most {
				t.Errorf("%v, want %v", got, c.meets)
			}
			var b bytes.Buffer
			if err := report.WriteSizing(&b, r.head, s, true); err != nil || strings.Contains(b.String(), "do not read the answer as") != (len(c.meets) > 1) {
				t.Errorf("%v\n%s", err, &b)
			}
		})
	}
}

// TestNear: between two values nothing is looked for where every limit lies on one side by more than it moves, or one is missed by far.
func TestNear(t *testing.T) {
	f := func(v rules.Verdict, k float64, goes int) rules.Finding {
		return rules.Finding{Level: "must", Verdict: v, MarginK: &k, Goes: goes}
	}
	ex := func(fs ...rules.Finding) *examined { return &examined{findings: fs, meets: meetsEvery(fs)} }
	far, met, missed := f(rules.Met, 9, 0), rules.Met, rules.NotMet
	s := func(x rules.Finding, s float64) rules.Finding { x.MarginS = &s; return x }
	for _, c := range []struct {
		name string
		a, b *examined
		want bool
	}{
		{"met by far", ex(far, f(met, 5, 0)), ex(far, f(met, 3, 0)), false},
		{"comes near", ex(far, f(met, 5, 0)), ex(far, f(met, 2, 0)), true},
		{"comes near in time", ex(s(f(met, 5, 0), 500)), ex(s(f(met, 4.5, 0), 200)), true},
		{"goes otherwise", ex(far, f(met, 5, 0)), ex(far, f(met, 5, 2)), true},
		{"changes sides", ex(far, f(met, 5, 0)), ex(far, f(missed, -5, 0)), true},
		{"missed by far", ex(f(met, 5, 0), f(missed, -5, 0)), ex(f(met, 1, 0), f(missed, -4, 0)), false},
		{"missed, and comes near", ex(f(missed, -5, 0)), ex(f(missed, -2, 0)), true},
		{"one after the other missed", ex(f(missed, -5, 0), f(met, 5, 0)), ex(f(met, 5, 0), f(missed, -5, 0)), true},
		{"begins to apply", ex(far, f(rules.NotApplicable, 0, 0)), ex(far, f(met, 9, 0)), true},
		{"does not move", ex(far, f(met, 0.01, 0)), ex(far, f(met, 0.01, 0)), false},
		{"cannot be calculated", ex(far), &examined{err: errors.New("too hot")}, true},
	} {
		if got := c.a.near(c.b); got != c.want || got != c.b.near(c.a) {
			t.Errorf("%s: %v", c.name, got)
		}
	}
}

// What is not found is said: no value meets, both ends do, a limit does not depend on the value, or keeps every value from meeting.
func TestSizeSays(t *testing.T) {
	hot := coolTo(9, 95*60)
	hour := 3600.0
	long := rules.Limit{Name: "At most an hour", Kind: rules.Duration, Stages: []*model.Stage{model.Cool}, TimeS: &hour, CompareTime: rules.AtMost}
	for _, c := range []struct {
		name   string
		limits []rules.Limit
		o      sizeOptions
		found  bool
		says   []string
	}{
		{"none", []rules.Limit{coolTo(2, 95*60)}, sizeOptions{}, false, []string{"no thickness from 13 mm to 129 mm meets every limit in the model", `"Cool" is met nowhere in the range.`}},
		{"both ends", []rules.Limit{hot}, sizeOptions{from: "10 mm", to: "30 mm"}, true, []string{"Both ends of the range meet, 10 mm and 30 mm"}},
		{"end of the range", []rules.Limit{hot}, sizeOptions{find: "smallest"}, true, []string{"13 mm is the end of the range"}},
		{"no effect", []rules.Limit{hot, {Name: "Wrapped", Kind: rules.Stated, Answer: "yes"}}, sizeOptions{}, true,
			[]string{`"Wrapped" does not depend on the thickness: met.`, `the limit that binds is "Cool"`, `does not: "Cool" not met`}},
		{"missed whatever it is", []rules.Limit{hot, long}, sizeOptions{}, false,
			[]string{"largest thickness that meets every other limit", `"At most an hour" is missed whatever the thickness is`}},
		{"only that", []rules.Limit{long}, sizeOptions{}, false, []string{"no thickness from 13 mm to 129 mm", `"At most an hour" does not depend on the thickness: not met.`}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, _ := slabRunner(model.Cool, 0.043, 71, 2.5, 300, 4*3600, slices.Clone(c.limits)...)
			s := r.search1(t, c.o)
			var b bytes.Buffer
			if err := report.WriteSizing(&b, r.head, s, true); err != nil {
				t.Fatal(err)
			}
			for _, w := range c.says {
				if !strings.Contains(b.String(), w) {
					t.Errorf("%q is missing in\n%s", w, &b)
				}
			}
			if s.Found() != c.found {
				t.Errorf("found: %v", s.Found())
			}
		})
	}
}

// The temperature at which a cook may end at the lowest is that of the first whole degree which meets all limits, tried one by one.
func TestSizeOfAnEndTemperature(t *testing.T) {
	meets := func(c float64) bool {
		r, p := slabRunner(model.Cook, 0.043, 6, 95, 60, 4*3600, heatTo(72))
		p.Steps[0].UntilC = &c
		d, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		return d.Judgement.Verdict == rules.Met
	}
	want := 60.0
	for !meets(want) {
		want++
	}
	r, p := slabRunner(model.Cook, 0.043, 6, 95, 60, 4*3600, heatTo(72))
	p.Steps[0].UntilC = new(float64)
	*p.Steps[0].UntilC = 80
	s := r.search1(t, sizeOptions{vary: "until bath"})
	if s.Answer == nil || s.Next == nil || s.Answer.Value != want || s.Next.Value != want-1 || s.Most || s.What != "end temperature of bath" {
		t.Errorf("%+v, then %+v; want %g", s.Answer, s.Next, want)
	}
	p.Steps[0].UntilC = nil
	if _, err := r.dialOf(p, &sizeOptions{vary: "until bath"}); err == nil || !strings.Contains(err.Error(), "ends after its duration") {
		t.Error(err)
	}
}

// The command on the demo: words, exit codes, files; what it cannot vary is refused in one sentence.
func TestSizeCommand(t *testing.T) {
	dir := t.TempDir()
	plan := filepath.Join(dir, "demo.xlsx")
	must := func(want int, args ...string) (out, errs string) {
		t.Helper()
		var a, b bytes.Buffer
		if code := run(args, nil, &a, &b); code != want {
			t.Fatalf("%v: exit code %d, want %d\n%s%s", args, code, want, &a, &b)
		}
		return a.String(), b.String()
	}
	must(0, "blank", "--demo", plan)
	out, _ := must(0, "size", plan, "--product", "turkey  ROLL", "--out", filepath.Join(dir, "out"), "--date", "2026-01-31")
	if !strings.HasPrefix(out, "Turkey roll: largest diameter that meets every limit in the model: ") || strings.Contains(out, "Deciding limit") {
		t.Error(out)
	}
	text, err := os.ReadFile(filepath.Join(dir, "out", "size.txt"))
	if err != nil || !strings.Contains(string(text), "Deciding limit") {
		t.Errorf("%v %s", err, text)
	}
	if pdf, err := os.ReadFile(filepath.Join(dir, "out", "size.pdf")); err != nil || !bytes.HasPrefix(pdf, []byte("%PDF")) {
		t.Errorf("size.pdf: %v", err)
	}
	b, err := os.ReadFile(filepath.Join(dir, "out", "size.json"))
	if err != nil {
		t.Fatal(err)
	}
	var js struct {
		Schema   string
		Searches []struct {
			Product, What, Unit, Find string
			Answer, Next              float64
			Curve                     []struct{ Value float64 }
		}
	}
	if err := json.Unmarshal(b, &js); err != nil || js.Schema != report.SizeSchema || len(js.Searches) != 1 {
		t.Fatalf("%v %s", err, b)
	}
	s := js.Searches[0]
	if want := fmt.Sprintf(": %g mm (now 75 mm: met)", s.Answer); s.Unit != "mm" || s.Find != "largest" || s.Next != s.Answer+1 || !strings.Contains(out, want) || len(s.Curve) < sizeGrid/2 {
		t.Errorf("%+v\n%s", s, out)
	}
	must(1, "size", plan, "--product", "Turkey roll", "--from", "150 mm", "--to", "160 mm")
	for _, c := range []struct{ says, vary string }{
		{`has no step "roast"; it has simmer, rest, ice bath, store, reheat`, "duration roast"}, {"has no width", "width"}, {"expected thickness", "colour"},
		{"ends at a temperature", "duration simmer"},
	} {
		if _, errs := must(2, "size", plan, "--product", "Turkey roll", "--vary", c.vary); !strings.Contains(errs, c.says) {
			t.Errorf("%s: %s", c.vary, errs)
		}
	}
	if _, errs := must(2, "size", plan, "--product", "Pea and ham soup"); !strings.Contains(errs, "no size of its own") {
		t.Error(errs)
	}
	if _, errs := must(2, "size", plan, "--product", "nobody"); !strings.Contains(errs, "no product of that name") {
		t.Error(errs)
	}
	for _, flags := range [][]string{{"--step", "0 mm"}, {"--step", "x"}, {"--from", "90 mm", "--to", "20 mm"}, {"--find", "best"}, {"--step", "0.0001 mm"}} {
		must(2, append([]string{"size", plan, "--product", "Turkey roll"}, flags...)...)
	}
}

// BenchmarkSize is one search for the largest thickness of a linear slab through five steps under six limits.
func BenchmarkSize(b *testing.B) {
	r, p := benchSlab()
	benchSize(b, r, p, nominalBasis)
}

// benchSize searches the largest thickness of a product over and over.
func benchSize(b *testing.B, r *runner, p *workbook.Product, basis string) {
	d, err := r.dialOf(p, &sizeOptions{})
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if s := r.size(p, d, r.judges(p), basis, 1); s.Answer == nil || s.Next == nil {
			b.Fatal("no answer")
		}
	}
}

// benchSlab is a slab of five steps with six limits.
func benchSlab() (*runner, *workbook.Product) {
	num := func(x float64) *float64 { return &x }
	r, p := slabRunner(model.Cook, 0.045, 6, 90, 800, 5400, heatTo(72), coolTo(10, 150*60),
		rules.Limit{Name: "lethality", Kind: rules.Lethality, ReferenceC: num(70), ZK: num(7.5), TimeS: num(120), FromC: num(60), Stages: []*model.Stage{model.Cook}},
		rules.Limit{Name: "60 to 21", Kind: rules.CoolWithin, FromC: num(60), ToC: num(21), TimeS: num(7200), Stages: []*model.Stage{model.Cool}, Clock: rules.Clock{Crossing: true}},
		rules.Limit{Name: "band", Kind: rules.Band, FromC: num(10), ToC: num(55), TimeS: num(4 * 3600), Counting: rules.Total},
		rules.Limit{Name: "store", Kind: rules.StayBelow, ToC: num(12), Stages: []*model.Stage{model.Store}})
	step := func(name string, st *model.Stage, c, film, s float64) model.Step {
		return model.Step{Name: name, Stage: st, DurationS: s, Exposure: model.Exposure{Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{c}}, FilmW: &film}}
	}
	p.Steps = append(p.Steps, step("rest", model.Rest, 22, 9, 900), step("chill", model.Cool, 1, 40, 5*3600), step("store", model.Store, 4, 10, 24*3600), step("reheat", model.Reheat, 95, 60, 3600))
	return r, p
}
