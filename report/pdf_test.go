package report

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// roastHead is the head of an invented plan.
func roastHead() *Head {
	return &Head{
		Version: "0.1.0", Date: time.Date(2026, 12, 1, 14, 5, 0, 0, time.UTC), Plan: "winter menu.xlsx",
		SHA256: "9f2c4a7be0d15538c1a2b3c4d5e6f708192a3b4c5d6e7f8091a2b3c4d5e6f708", EveryS: 60, Paper: "A4", Products: 1,
		Items: []Item{{cell.Ref{Sheet: "Plan", Row: 2, Col: 2}, "Site", "Example kitchen"}, {cell.Ref{Sheet: "Plan", Row: 3, Col: 2}, "Plan", "Winter menu"},
			{cell.Ref{Sheet: "Plan", Row: 4, Col: 2}, "Edition", "3"}, {cell.Ref{Sheet: "Plan", Row: 5, Col: 2}, "Prepared by", "A. Example"},
			{cell.Ref{Sheet: "Plan", Row: 6, Col: 2}, "Reviewed by", "B. Example"}, {cell.Ref{Sheet: "Plan", Row: 7, Col: 2}, "Authority", "the local authority"}},
		Problems: cell.Errors{{At: cell.Ref{Sheet: "Limits", Row: 4, Col: 20}, Level: cell.Warning, Field: "Clause", Msg: "no clause is given", Hint: "type the clause as the code prints it"}},
		Known: []KnownAnswer{{Name: "slab with a film coefficient", Source: "series solution, an invented citation", Expected: 61.2534, Got: 61.2533, Allowance: 0.01, Unit: "°C", OK: true, Shape: model.Slab},
			{Name: "brick held at its surface", Source: "product of three series, an invented citation", Expected: 23.118, Got: 23.117, Allowance: 0.01, Unit: "°C", OK: true, Shape: model.Brick}},
	}
}

// crust is an invented food of a layer.
var crust = &model.Material{Name: "crust", Source: "an invented source", Props: func(float64) model.Properties { return model.Properties{KWmK: 0.21, RhoKgM3: 640, CJkgK: 2300} }}

// icy is an invented food that freezes: ice by Raoult's law, 0.65·(1 − Tf/T) of its mass from Tf = −1.2 °C on (Schwartzberg 1976).
func icy() *model.Material {
	const tf, water, latent, c0 = -1.2, 0.65, 333e3, 3500.
	ice := func(t float64) float64 { return water * max(0, 1-tf/min(t, tf)) }
	return &model.Material{Name: "mince", Source: "an invented source", Composed: true, LowC: -40, HighC: 150, FreezingC: ptr(tf), IceShare: ice,
		EnthalpyJkg: func(t float64) float64 { return c0*(t-tf) - latent*ice(t) },
		Props: func(t float64) model.Properties {
			q := model.Properties{KWmK: 0.45 + 0.8*ice(t), RhoKgM3: 1040, CJkgK: c0}
			if t < tf {
				q.CJkgK -= latent * water * tf / (t * t)
			}
			return q
		}}
}

// again solves a product anew after it was changed.
func again(t testing.TB, p *Product) {
	t.Helper()
	p.Further = nil
	var err error
	if p.History, err = model.Solve(p.Product, p.Steps, model.Options{}); err != nil {
		t.Fatal(err)
	}
	p.Samples = p.History.Sample(300)
}

// roast is an invented product, solved, with invented findings around the true temperatures.
func roast(t testing.TB, shape *model.Shape, v rules.Verdict) *Product {
	t.Helper()
	oven := model.Step{Name: "Roast", Stage: model.Cook, DurationS: 5400, Equipment: "oven 2", Load: "12 pieces on two racks",
		Exposure: model.Exposure{At: cell.Ref{Sheet: "Steps", Row: 2}, Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{140}}, FilmW: ptr(22.)}}
	rest := model.Step{Name: "Rest on the bench", Stage: model.Rest, DurationS: 900,
		Exposure: model.Exposure{At: cell.Ref{Sheet: "Steps", Row: 3}, Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{24}}, Measured: true, FilmW: ptr(8.)}}
	chill := model.Step{Name: "Blast chill", Stage: model.Cool, DurationS: 9000, Equipment: "chiller 1",
		Exposure: model.Exposure{At: cell.Ref{Sheet: "Steps", Row: 4}, Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{1}}, Measured: true, FilmW: ptr(25.), AirMS: ptr(4.)}}
	p := &Product{
		Product: model.Product{At: cell.Ref{Sheet: "Products", Row: 2}, Name: "Pork loin, rolled", Shape: shape,
			Size: model.Size{ThicknessM: 0.055, WidthM: 0.12, LengthM: 0.2, DiameterM: 0.09, VolumeM3: 0.02, AreaM2: 0.4}, StartC: 6,
			Food: &model.Material{Name: "pork loin", Source: "an invented source", Composed: true, Composition: "water 72 %, protein 21 %, fat 6 %, ash 1 %",
				Props: func(float64) model.Properties { return model.Properties{KWmK: 0.47, RhoKgM3: 1060, CJkgK: 3520} }},
			Points: []model.Point{{Name: "probe", Place: model.Place{UpM: 0.01}}}},
		Steps: []model.Step{oven, rest, chill}, Family: "roasts", RecipeVersion: "v2", Batch: "B17", Process: "Roast and chill", Note: "netted",
		Readings: []cell.Reading{{At: cell.Ref{Sheet: "Products", Row: 2, Col: 6}, Column: "Thickness", Typed: "55 mm", Used: "0.055 m"},
			{At: cell.Ref{Sheet: "Products", Row: 2, Col: 9}, Column: "Start temperature", Typed: "6 °C", Used: "6 °C"},
			{At: cell.Ref{Sheet: "Steps", Row: 2, Col: 9}, Column: "Temperature is", Used: "set-point", Why: "a blank stands for set-point, the less favourable word"}},
	}
	var err error
	if p.History, err = model.Solve(p.Product, p.Steps, model.Options{}); err != nil {
		t.Fatal(err)
	}
	low, err := model.Solve(p.Product, p.Steps, model.Options{ConductivityFactor: 0.9})
	if err != nil {
		t.Fatal(err)
	}
	p.Further = []rules.Run{{Name: rules.LowConductivity, History: low}}
	p.Samples = p.History.Sample(60)
	p.Judgement = roastJudgement(p, v)
	return p
}

func roastJudgement(p *Product, v rules.Verdict) rules.Judgement {
	end := p.History.EndS()
	core := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 2}, Name: "Core reached", Kind: &rules.Kind{Name: "hold", Unit: "min"}, Stages: []*model.Stage{model.Cook, model.Rest},
		FromC: ptr(70.), TimeS: ptr(120.), Counting: rules.Continuous, Code: "An invented code", Clause: "2-10", Edition: "2020", ConfirmedBy: "A. Example", ConfirmedOn: "2026-01-05",
		CCP: "1", Hazard: "Salmonella", Status: "law", Typed: map[string]string{"From": "70 °C", "Time": "2 min"}}
	first := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 3}, Name: "Chill, first part", Kind: &rules.Kind{Name: "cool", Unit: "min"}, Stages: []*model.Stage{model.Cool},
		FromC: ptr(135/1.8 - 32/1.8), ToC: ptr(70/1.8 - 32/1.8), TimeS: ptr(7200.), Clock: rules.Clock{Crossing: true}, Code: "An invented code", Clause: "3-501", Edition: "2022",
		Typed: map[string]string{"From": "135 °F", "To": "70 °F", "Time": "120 min"}}
	second := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 4}, Name: "Chill to store", Kind: &rules.Kind{Name: "by the end"}, Stages: []*model.Stage{model.Cool},
		ToC: ptr(5.), Code: "An invented code", Typed: map[string]string{"To": "5 °C"}}
	lid := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 5}, Name: "Hot holding", Kind: &rules.Kind{Name: "stay above"}, Stages: []*model.Stage{model.HoldHot}, FromC: ptr(63.), Code: "An invented code", Clause: "1", Edition: "1"}
	hot := p.History.At(model.Place{}, end)
	switch v {
	case rules.Met:
		second.ToC, second.Typed["To"] = ptr(25.), "25 °C"
	case rules.CannotTell:
		second.ToC, second.Typed["To"] = ptr(hot+0.0005), "just above"
	}
	value := p.History.At(model.Place{}, 6300)
	return rules.Judgement{Verdict: v, Findings: []rules.Finding{
		{Limit: core, Level: "must", Verdict: rules.Met, Value: ptr(14.0987654), Required: ptr(2.), Unit: "min", MarginK: ptr(value - 70), MarginS: ptr(725.92592),
			AtS: ptr(5600.), Place: &model.Place{}, PlaceName: "centre", ClockStartS: ptr(5200.), ClockEndS: ptr(6260.), Cells: []cell.Ref{core.At, {Sheet: "Steps", Row: 2}}, Why: "The place is held for 14 min."},
		{Limit: first, Level: "must", Verdict: rules.Met, Value: ptr(101.26), Required: ptr(120.), Unit: "min", MarginK: ptr(3.1), MarginS: ptr(18.7 * 60),
			AtS: ptr(12000.), Place: &model.Place{}, PlaceName: "centre", ClockStartS: ptr(6800.), ClockEndS: ptr(12000.), Cells: []cell.Ref{first.At}, Why: "The place falls to 70 °F in 101 min.",
			Cautions: []string{"lethality without floor"}},
		{Limit: second, Level: "must", Verdict: v, Value: &hot, Required: second.ToC, Unit: "°C", MarginK: ptr(*second.ToC - hot), AtS: ptr(end), Place: &model.Place{}, PlaceName: "centre", Cells: []cell.Ref{second.At}, Why: "The stage ends too early.",
			Notes: []string{"rose above From again at 1 h 05 min"}, Run: map[bool]string{true: rules.LowConductivity}[v == rules.NotMet]},
		{Limit: lid, Level: "must", Verdict: rules.NotApplicable, Why: "The process has no stage hold hot."},
	}, Groups: []rules.GroupFinding{{Group: "Chilling", AnyOf: true, Verdict: v, DecidedBy: "Chill to store"}}}
}

func productPDF(t testing.TB, h *Head, p *Product) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := WriteProductPDF(&b, h, p); err != nil {
		t.Fatal(err)
	}
	keep(t, b.Bytes())
	return b.Bytes()
}

// keep writes a document into the folder SLOWPOINT_PDF, so that one can look at what the tests made.
func keep(t testing.TB, pdf []byte) {
	if dir := os.Getenv("SLOWPOINT_PDF"); dir != "" {
		if err := os.WriteFile(filepath.Join(dir, strings.ReplaceAll(t.Name(), "/", "_")+".pdf"), pdf, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// outside finds a tool of another program; without it the test is skipped, and fails in CI.
func outside(t *testing.T, name string) string {
	t.Helper()
	tool, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatal(name + " is missing")
		}
		t.Skip(name + " is missing")
	}
	return tool
}

// pdfText gives the text of a PDF, with runs of blanks made one.
func pdfText(t *testing.T, pdf []byte) string {
	t.Helper()
	tool := outside(t, "pdftotext")
	cmd := exec.Command(tool, "-layout", "-", "-")
	cmd.Stdin = bytes.NewReader(pdf)
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	return strings.Join(strings.Fields(string(out)), " ")
}

func TestProductPDF(t *testing.T) {
	for _, c := range []struct {
		name    string
		shape   *model.Shape
		verdict rules.Verdict
		change  func(*Head, *Product)
		want    []string
	}{
		{"slab met", model.Slab, rules.Met, nil, []string{"✓ MET", "Pork loin, rolled", "at or above 70 °C (158 °F) for 2 min", "135 °F (57.22 °C)", "Missing citation", "no Clause, Edition", "winter menu.xlsx",
			"Predicted (calculated", "Measured (the user's own record)", "No measured record was given", "Deviation record", "page 1 of", "61.2534 °C", "Person responsible", "slowest place"}},
		{"brick not met", model.Brick, rules.NotMet, nil, []string{"✗ NOT MET", "lacking", "is not met in the calculation", "0.9 times the conductivity"}},
		{"sphere cannot tell", model.Sphere, rules.CannotTell, nil, []string{"? CANNOT TELL", "cannot be told"}},
		{"short cylinder letter", model.ShortCylinder, rules.Met, func(h *Head, p *Product) { h.Paper, h.Fahrenheit = "Letter", true }, []string{"42.8 °F (6 °C)", "temperature, °F"}},
		{"cylinder", model.Cylinder, rules.NotMet, nil, []string{"diameter 90 mm"}},
		{"bar", model.Bar, rules.NotMet, nil, []string{"thickness 55 mm, width 120 mm"}},
		{"stirred", model.Stirred, rules.Met, nil, []string{"volume 20 L", "the same temperature"}},
		{"spheroid", model.Spheroid, rules.Met, nil, []string{"Calculated as a spheroid: thickness 55 mm, diameter 90 mm", "from the side to the centre", "end of the axis", "method: marched"}},
		{"layered slab", model.Slab, rules.Met, func(h *Head, p *Product) {
			p.Product.Layers = []model.Layer{{Food: crust, ThicknessM: 0.006, BelowM2KW: 0.003}, {Food: p.Product.Food, ThicknessM: 0.043}, {Food: crust, ThicknessM: 0.006}}
			p.Product.Shape, p.Product.Food = model.LayeredSlab, nil
			again(t, p)
		}, []string{"thickness 55 mm, in 3 layers from the top: 1 crust 6 mm (contact below: 0.003 m²·K/W), 2 pork loin 43 mm, 3 crust 6 mm", "the temperature jumps", "1 crust",
			"touch perfectly", "Properties of the food"}},
		{"frozen start", model.Slab, rules.Met, func(h *Head, p *Product) {
			p.Product.Food, p.Product.StartC = icy(), -18
			again(t, p)
		}, []string{"−20.0 °C (−4.0 °F)", "Ice", "61 %", "supercooling is left out", "specific heat holds the heat of the ice"}},
		{"thick food", model.ShortCylinder, rules.NotMet, func(h *Head, p *Product) {
			q, steps := model.Mixed(p.Product, p.Steps, p.History)
			mixed, err := model.Solve(q, steps, model.Options{})
			if err != nil {
				t.Fatal(err)
			}
			p.Further = []rules.Run{{Name: rules.WellMixed, History: mixed}}
			for i := range p.Judgement.Findings {
				p.Judgement.Findings[i].Run = rules.WellMixed
			}
		}, []string{"(run as well mixed)", "The food may mix by itself while it is hot", "the run as conducting", "the food as well mixed (anywhere: one temperature throughout)"}},
		{"accents, emoji and Chinese", model.Slab, rules.Met, func(h *Head, p *Product) {
			p.Product.Name = "Crème brûlée Żurek Щи Σούπα 🍗 红烧肉\u0007"
		}, []string{"Crème brûlée Żurek Щи Σούπα", "U+1F357", "U+70E7", "U+7EA2", "U+8089"}},
		{"a record", model.Slab, rules.NotMet, func(h *Head, p *Product) {
			rec := trayProduct(t, "Stew, logged")
			rec.Lever = "depth 60 mm → 45 mm would meet the limit in the model"
			*p = *rec
		}, []string{"Stew, logged", "Measured (the user's own record)", "Nothing in it was calculated", "the measured record", "depth 60 mm → 45 mm"}},
		{"everything long", model.Slab, rules.NotMet, func(h *Head, p *Product) {
			long := strings.Repeat("a long name that never seems to end ", 12)
			p.Product.Name, p.Process, p.Lever = long, long, long
			p.Note, p.Batch = strings.Repeat("Wort", 300), strings.Repeat(long, 60)
			for i := range p.Judgement.Findings {
				f := &p.Judgement.Findings[i]
				f.Limit.Name, f.Why = f.Limit.Name+" "+long, long
				f.PlaceName = "14 mm above the underside"
			}
			for i := range p.History.Spans {
				p.History.Spans[i].Step.Name = long
			}
			for range 300 {
				p.Readings = append(p.Readings, cell.Reading{At: cell.Ref{Sheet: "Steps", Row: 3, Col: 2}, Column: "Note", Typed: long, Used: long})
			}
		}, []string{"a long name that never seems to end"}},
		{"twelve steps and forty limits", model.Slab, rules.Met, func(h *Head, p *Product) {
			p.Steps = append(append(append(p.Steps, p.Steps...), p.Steps...), p.Steps...)
			var err error
			if p.History, err = model.Solve(p.Product, p.Steps, model.Options{}); err != nil {
				t.Fatal(err)
			}
			p.Further, p.Samples = nil, p.History.Sample(300)
			fs := p.Judgement.Findings
			for i := range 36 {
				f := fs[i%3]
				l := *f.Limit
				l.Name += " " + strings.Repeat("I", i)
				f.Limit = &l
				p.Judgement.Findings = append(p.Judgement.Findings, f)
			}
		}, []string{"12 steps"}},
		{"no history", model.Slab, rules.CannotTell, func(h *Head, p *Product) { p.History, p.Further, p.Samples = nil, nil, model.Samples{} }, []string{"CANNOT TELL"}},
		{"no limits", model.Slab, rules.CannotTell, func(h *Head, p *Product) { p.Judgement = rules.Judgement{Why: "no limit judged"} }, []string{"No limit judged."}},
	} {
		t.Run(c.name, func(t *testing.T) {
			h, p := roastHead(), roast(t, c.shape, c.verdict)
			if c.change != nil {
				c.change(h, p)
			}
			pdf := productPDF(t, h, p)
			if !bytes.Equal(pdf, productPDF(t, h, p)) {
				t.Error("the same input gives other bytes")
			}
			text := pdfText(t, pdf)
			if at, next := strings.Index(text, "page 2 of"), strings.Index(text, "Report for the audit"); next > at || strings.Index(text, "page 1 of") > next {
				t.Error("the page for the kitchen is not exactly page 1")
			}
			for _, w := range append(c.want, "Not for canning") {
				if !strings.Contains(text, w) {
					t.Errorf("%q is missing", w)
				}
			}
			for _, w := range []string{"%!", "[caution", "NaN", "Inf"} {
				if strings.Contains(text, w) {
					t.Errorf("%q is printed", w)
				}
			}
		})
	}
}

// A finding of the second run is decided in a step of the second run, which may end later than the first.
func TestStepOfSecondRun(t *testing.T) {
	p := roast(t, model.Slab, rules.NotMet)
	late := *p.run(rules.LowConductivity)
	late.Spans = append([]model.Span(nil), late.Spans...)
	late.Spans[0].EndS += 700
	p.Further[0].History = &late
	x := &sheet{p: p, decides: p.decides()}
	at := p.History.Spans[0].EndS + 600
	for _, c := range []struct {
		low  bool
		want string
	}{{false, "Rest on the bench"}, {true, "Roast"}} {
		if got := x.stepAt(&rules.Finding{AtS: &at, Run: map[bool]string{true: rules.LowConductivity}[c.low]}); got != c.want {
			t.Errorf("second run %v: %s, want %s", c.low, got, c.want)
		}
	}
}

// BenchmarkReport writes one product's report of a usual size: about 250 cells of input and 60 known answers.
func BenchmarkReport(b *testing.B) {
	h, p := roastHead(), roast(b, model.Slab, rules.NotMet)
	for len(h.Known) < 60 {
		h.Known = append(h.Known, h.Known[:2]...)
	}
	for len(p.Readings) < 250 {
		p.Readings = append(p.Readings, p.Readings[:3]...)
	}
	b.ReportAllocs()
	for b.Loop() {
		var out bytes.Buffer
		if err := WriteProductPDF(&out, h, p); err != nil {
			b.Fatal(err)
		}
	}
}
