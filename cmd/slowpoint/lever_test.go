package main

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// demoRunner gives the demo's plan with its runner, and a product of it by name.
func demoRunner(t *testing.T, name string) (*runner, workbook.Product) {
	t.Helper()
	plan, err := workbook.ReadDemo()
	if err != nil {
		t.Fatal(err)
	}
	r := &runner{plan: plan, head: &report.Head{EveryS: 60}, options: &checkOptions{}}
	for i := range plan.Products {
		if plan.Products[i].Name == name {
			p := plan.Products[i]
			p.Steps = slices.Clone(p.Steps)
			return r, p
		}
	}
	t.Fatalf("the demo has no %s", name)
	return nil, workbook.Product{}
}

func (r *runner) mustJudge(t *testing.T, p workbook.Product) *report.Product {
	t.Helper()
	d, err := r.judged(&p)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// The size that the page of the operator names meets every limit, and one step more does not; a product that meets its limits has no
// lever, and neither has one of a large plan.
func TestLever(t *testing.T) {
	for _, c := range []struct {
		name   string
		larger float64 // of the demo's size
		inches bool
	}{{"Turkey roll", 1.9, false}, {"Potato bake, full tray", 2.2, false}, {"Turkey roll", 1.9, true}} {
		t.Run(fmt.Sprintf("%s, inches %v", c.name, c.inches), func(t *testing.T) {
			r, p := demoRunner(t, c.name)
			z := &p.Size
			for _, size := range []*float64{&z.ThicknessM, &z.WidthM, &z.LengthM, &z.DiameterM} {
				*size *= c.larger
			}
			p.Inches = c.inches
			unit, step, symbol := 0.001, 1.0, "mm"
			if c.inches {
				unit, step, symbol = 0.0254, 0.05, "in"
			}
			word, size := governing(&p.Product)
			verdict := func(x float64) rules.Verdict {
				q := p
				q.Points = nil
				_, z := governing(&q.Product)
				*z = x * unit
				return r.mustJudge(t, q).Judgement.Verdict
			}
			if v := verdict(*size / unit); v != rules.NotMet {
				t.Fatalf("%g m is %s: the case needs one that is not met", *size, v)
			}
			said := r.lever(&p, r.mustJudge(t, p))
			var from, to float64
			at := strings.Index(said, word+" ")
			if at < 0 {
				t.Fatalf("%q names no %s", said, word)
			}
			if _, err := fmt.Sscanf(said[at:], word+" %g "+symbol+" → %g "+symbol, &from, &to); err != nil || !strings.Contains(said, "every limit in the model") {
				t.Fatalf("%q: %v", said, err)
			}
			if verdict(to) != rules.Met || verdict(to+step) == rules.Met {
				t.Errorf("%q: %g is %s, %g is %s", said, to, verdict(to), to+step, verdict(to+step))
			}
			if c.inches && !strings.Contains(said, " mm)") {
				t.Errorf("%q lacks the mm", said)
			}
			if _, met := demoRunner(t, c.name); r.lever(&met, r.mustJudge(t, met)) != "" {
				t.Error("a product that meets its limits has a lever")
			}
			now := r.mustJudge(t, p)
			r.plan.Products = make([]workbook.Product, leverPlans+1)
			if said := r.lever(&p, now); said != "" {
				t.Errorf("a plan of %d products: %q", leverPlans+1, said)
			}
		})
	}
}

// A longer heating, one that ends warmer, and a colder chilling are found to the minute and the degree, on the safe side: what is named
// meets the limits, a step less does not, and nothing of it is applied.
func TestLeverOfStepsAndMedia(t *testing.T) {
	for _, c := range []struct {
		name, product string
		fahrenheit    bool
		step          int                                // of the chain
		spoil         func(s *model.Step)                // makes it miss a limit
		words         string                             // with the number named
		set           func(s *model.Step, named float64) // puts the named number in
		less          float64                            // a step to the less favourable side
	}{
		{"longer boil", "Potato dumplings", false, 0, func(s *model.Step) { s.UntilC, s.DurationS = nil, 6*60 }, `boil 6 min → ([\d.]+) min`,
			func(s *model.Step, n float64) { s.DurationS = n * 60 }, -1},
		{"boil of half minutes", "Potato dumplings", false, 0, func(s *model.Step) { s.UntilC, s.DurationS = nil, 6.5*60 }, `boil 6.5 min → ([\d.]+) min`,
			func(s *model.Step, n float64) { s.DurationS = n * 60 }, -1},
		{"warmer end", "Turkey roll", false, 0, func(s *model.Step) { c := 57.5; s.UntilC = &c }, `simmer until 57.5 °C → ([\d.]+) °C \([\d.]+ °F\)`,
			func(s *model.Step, n float64) { s.UntilC = &n }, -1},
		{"warmer end in °F", "Turkey roll", true, 0, func(s *model.Step) { c := 57.5; s.UntilC = &c }, `simmer until 135.5 °F → ([\d.]+) °F \([\d.]+ °C\)`,
			func(s *model.Step, n float64) { c := (n - 32) / 1.8; s.UntilC = &c }, -1},
		{"colder bath", "Liver terrine", false, 2, func(s *model.Step) { s.Medium.C = []float64{14.3}; s.UntilC = nil; s.DurationS = 10 * 3600 }, `ice bath in 14.3 °C → ([\d.]+) °C \(`,
			func(s *model.Step, n float64) {
				s.Medium.C = []float64{n}
				for k := range s.Faces {
					s.Faces[k].Medium.C = []float64{n}
				}
			}, 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, p := demoRunner(t, c.product)
			r.head.Fahrenheit = c.fahrenheit
			s := &p.Steps[c.step]
			s.Faces = slices.Clone(s.Faces)
			c.spoil(s)
			for k := range s.Faces {
				s.Faces[k].Medium = s.Medium
			}
			now := r.mustJudge(t, p)
			if now.Judgement.Verdict != rules.NotMet {
				t.Fatalf("%s: the case needs one that is not met", now.Judgement.Verdict)
			}
			before := fmt.Sprintf("%+v", p.Steps)
			said := r.lever(&p, now)
			m := regexp.MustCompile(c.words).FindStringSubmatch(said)
			if m == nil {
				t.Fatalf("%q", said)
			}
			if !strings.HasPrefix(said, "With everything else unchanged, ") {
				t.Errorf("%q", said)
			}
			if after := fmt.Sprintf("%+v", p.Steps); after != before {
				t.Errorf("the plan was changed:\n%s\n%s", before, after)
			}
			var named float64
			if _, err := fmt.Sscan(m[1], &named); err != nil {
				t.Fatal(err)
			}
			missed := func(x float64) int {
				q := p
				q.Steps = slices.Clone(p.Steps)
				q.Steps[c.step].Faces = slices.Clone(p.Steps[c.step].Faces)
				c.set(&q.Steps[c.step], x)
				n := 0
				for _, f := range r.mustJudge(t, q).Judgement.Findings {
					n += map[bool]int{true: 1}[f.Level == "must" && f.Verdict != rules.Met && f.Verdict != rules.NotApplicable]
				}
				return n
			}
			if a, b := missed(named), missed(named+c.less); a != 0 || b == 0 {
				t.Errorf("%q: %d limits are missed with it, %d with a step less", said, a, b)
			}
		})
	}
}

// What was found is said in whole sentences, whole successes first.
func TestLeverWords(t *testing.T) {
	for _, c := range []struct {
		name              string
		every, some, none []string
		fixed             string
		want              string
	}{
		{"one", []string{"a 2 → 1"}, nil, nil, "", "With everything else unchanged, a 2 → 1 would meet every limit in the model."},
		{"two", []string{"a", "b"}, nil, []string{"c up to 9"}, "", "With everything else unchanged, each of these alone would meet every limit in the model: a; b. Not enough alone: c up to 9."},
		{"a part", nil, []string{"b would meet \"x\""}, nil, "", "With everything else unchanged, b would meet \"x\", but not every limit."},
		{"all and a part", []string{"a"}, []string{"b would meet \"x\""}, nil, "", "With everything else unchanged, a would meet every limit in the model. Alone, b would meet \"x\", but not every limit."},
		{"none", nil, nil, []string{"a", "b"}, "", "With everything else unchanged, nothing that was tried meets the limits in the model: a, b. Look at times, temperatures and air together."},
		{"one, others open", []string{"a 2 → 1"}, nil, nil, `"q" cannot be judged until it is answered`,
			`With everything else unchanged, a 2 → 1 would meet every other limit in the model; "q" cannot be judged until it is answered.`},
		{"none, others open", nil, nil, []string{"a"}, `"q" stays open`,
			`With everything else unchanged, nothing that was tried meets the other limits in the model; "q" stays open: a. Look at times, temperatures and air together.`},
		{"only open ones", nil, nil, nil, `"q" stays open`, `No single change of a size, a heating or a chilling helps: "q" stays open.`},
		{"nothing tried", nil, nil, nil, "", ""},
	} {
		if got := leverWords(c.every, c.some, c.none, c.fixed); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
	if got := quoted([]string{"x", "y", "z"}); got != `"x" and 2 further limits` {
		t.Error(got)
	}
}

// A change that meets its own limits and loses another that was met is no lever.
func TestLeverKeepsWhatWasMet(t *testing.T) {
	finding := func(name string, v rules.Verdict) rules.Finding {
		return rules.Finding{Limit: &rules.Limit{Name: name}, Level: "must", Verdict: v}
	}
	product := func(fs ...rules.Finding) *report.Product {
		return &report.Product{Judgement: rules.Judgement{Findings: fs}}
	}
	before := product(finding("heat", rules.NotMet), finding("cool", rules.Met))
	if !keeps(before, product(finding("heat", rules.Met), finding("cool", rules.Met))) || !keeps(before, product(finding("heat", rules.NotMet), finding("cool", rules.Met))) {
		t.Error("nothing was lost")
	}
	for _, v := range []rules.Verdict{rules.NotMet, rules.CannotTell} {
		if keeps(before, product(finding("heat", rules.Met), finding("cool", v))) {
			t.Errorf("the chilling is %s", v)
		}
	}
}

// A limit that no change bears on does not hide that a smaller size meets the others: a question without an answer, a row in error,
// a length of a step. It is named in the same sentence.
func TestLeverBesideLimitsThatNothingChanges(t *testing.T) {
	minute := 60.0
	spoilt := func(p *workbook.Product) { p.Size.DiameterM *= 1.9 }
	duration := rules.Limit{Name: "Oven hour", Kind: rules.Duration, Stages: []*model.Stage{model.Cool}, TimeS: &minute, CompareTime: rules.AtMost}
	for _, c := range []struct {
		name  string
		extra []rules.Limit
		says  string
	}{
		{"unanswered", []rules.Limit{{Name: "Wrapped", Kind: rules.Stated}}, `; "Wrapped" cannot be judged until it is answered.`},
		{"answered no", []rules.Limit{{Name: "Wrapped", Kind: rules.Stated, Answer: "no"}}, `; "Wrapped" stays not met as long as its answer stands.`},
		{"row in error", []rules.Limit{{Name: "Typo", Kind: rules.CoolWithin, Unreadable: "To is no number"}}, `; "Typo" cannot be judged until its row is mended.`},
		{"length of a step", []rules.Limit{duration}, `; "Oven hour" stays not met whatever of this is changed.`},
		{"two unanswered and an error", []rules.Limit{{Name: "Wrapped", Kind: rules.Stated}, {Name: "Typo", Kind: rules.Hold, Unreadable: "x"}, {Name: "Lid", Kind: rules.Stated}},
			`; "Wrapped" and "Lid" cannot be judged until they are answered; "Typo" cannot be judged until its row is mended.`},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, p := demoRunner(t, "Turkey roll")
			spoilt(&p)
			for i := range p.Steps { // of typed lengths, so that no size changes them
				if p.Steps[i].Stage == model.Cool {
					p.Steps[i].UntilC, p.Steps[i].DurationS = nil, 10*3600
				}
			}
			alone := r.lever(&p, r.mustJudge(t, p))
			plan := *r.plan
			plan.Limits = slices.Clone(plan.Limits)
			for _, l := range c.extra {
				l.Applies.All = true
				plan.Limits = append(plan.Limits, l)
			}
			r.plan = &plan
			first, _, found := strings.Cut(alone, " would meet every limit in the model")
			if !found {
				t.Fatalf("%q: the case needs a lever", alone)
			}
			said := r.lever(&p, r.mustJudge(t, p))
			if !strings.HasPrefix(said, first+" would meet every other limit in the model") || !strings.Contains(said, c.says) {
				t.Errorf("%q, want %q … %q", said, first, c.says)
			}
			if len(r.plan.Limits) != len(plan.Limits) {
				t.Error("the plan was changed")
			}
		})
	}
}

// Where what is named has to be confirmed far from the first look, it is found in few runs, and it is the least.
func TestGallop(t *testing.T) {
	const most = 300
	for _, c := range []struct{ guess, least, want int }{{1, 1, 1}, {10, 10, 10}, {10, 9, 9}, {10, 1, 1}, {200, 3, 3}, {10, 250, 250}, {10, 300, 300}, {10, 301, 0}, {300, 301, 0}} {
		runs := 0
		n, ok := gallop(c.guess, most, func(k int) bool {
			if runs++; k < 1 || k > most {
				t.Errorf("from %d: %d steps tried", c.guess, k)
			}
			return k >= c.least
		})
		if n != c.want || ok != (c.want > 0) || runs > 20 {
			t.Errorf("from %d: %d %v after %d runs, want %d", c.guess, n, ok, runs, c.want)
		}
	}
}
