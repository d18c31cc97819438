package main

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// afresh judges every value by a search of its own, from nothing.
func (r *runner) afresh() judges {
	return judges{look: func(p *workbook.Product) ([]rules.Finding, error) { return (&guide{r: r}).afresh(p) }}
}

// A search that goes by the ends found at a few values gives the answer of one that looks for them afresh at every value:
// slabs of any size, starts on both sides of where a clock starts, all that can be varied.
func TestSizeGoesByTheEndsFoundBeside(t *testing.T) {
	draw := rand.New(rand.NewPCG(7, 11))
	for n := range 10 {
		r, p := wall()
		r.head, r.options = &report.Head{EveryS: 60}, &checkOptions{}
		p.Size.ThicknessM = 0.03 + 0.03*draw.Float64()
		p.StartC = 2 + 8*draw.Float64()
		from, to, within := 60.0, 21.0, (90+90*draw.Float64())*60
		r.plan.Limits = append(r.plan.Limits, rules.Limit{Name: "Two hours", Kind: rules.CoolWithin, Stages: []*model.Stage{model.Cool}, Applies: rules.Applies{All: true},
			FromC: &from, ToC: &to, TimeS: &within, Clock: rules.Clock{Crossing: true}})
		p.Spreads = []workbook.Spread{vary("thickness", -1, 0.001, 0.003, false), vary("start temperature", -1, 2, 3, false), vary("medium temperature", 0, 10, 4, false),
			vary("film coefficient", 1, 0.25, 0.2, true)}
		if n%3 == 1 { // chilled only, from about where the clock starts
			p.Steps, p.StartC = p.Steps[1:], 58+6*draw.Float64()
			p.Spreads = []workbook.Spread{vary("start temperature", -1, 5, 5, false), vary("thickness", -1, 0.002, 0.002, false)}
			r.plan.Limits = r.plan.Limits[len(r.plan.Limits)-1:]
		}
		o := sizeOptions{}
		switch n % 5 {
		case 2:
			o.vary = "duration " + p.Steps[0].Name
		case 3:
			o.vary = "start temperature"
		}
		d, err := r.dialOf(p, &o)
		if err != nil {
			t.Fatal(err)
		}
		got, want := r.size(p, d, r.judges(p), "", 2), r.size(p, d, r.afresh(), "", 2)
		if said, should := answerOf(got.Answer), answerOf(want.Answer); said != should {
			t.Errorf("plan %d, %s: %s, afresh %s", n, d.what, said, should)
		}
	}
}

// marchedWall is the wall of a food whose properties follow its temperature, so that it has to be marched. No real food.
func marchedWall() (*runner, *workbook.Product) {
	r, p := wall()
	r.head, r.options = &report.Head{EveryS: 60}, &checkOptions{}
	p.Food = &model.Material{Name: "Mash", Source: "made up", Table: true, LowC: -20, HighC: 200, Props: func(c float64) model.Properties {
		return model.Properties{KWmK: 0.44 + 0.0013*c, RhoKgM3: 1050, CJkgK: 3400 + 3*c}
	}}
	return r, p
}

// A first look at what has to be marched is taken only where it is plain: the answer, its neighbour and all runs are those of a search without.
func TestFirstLooksLeadToTheSameSizes(t *testing.T) {
	for _, c := range []struct {
		name, vary string
		spreads    []workbook.Spread
	}{
		{"thickness", "", nil},
		{"start", "start temperature", nil},
		{"duration", "duration Oven", nil},
		{"thickness at its ends", "", []workbook.Spread{vary("thickness", -1, 0.001, 0.003, false), vary("film coefficient", 1, 0.25, 0.2, true)}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, p := marchedWall()
			p.Spreads = c.spreads
			d, err := r.dialOf(p, &sizeOptions{vary: c.vary})
			if err != nil {
				t.Fatal(err)
			}
			rough := 0
			j := r.judges(p)
			look := j.look
			j.look = func(q *workbook.Product) ([]rules.Finding, error) {
				found, err := look(q)
				if sure, _ := j.exactly(q); err == nil && !slices.EqualFunc(found, sure, func(a, b rules.Finding) bool { return a.Same(&b) }) {
					rough++
				}
				return found, err
			}
			got := r.size(p, d, j, "", 1)
			if got.Now.Refused != "" {
				t.Fatal(got.Now.Refused)
			}
			if rough == 0 {
				t.Error("no first look was taken")
			}
			j = r.judges(p)
			j.look = j.exactly
			if len(c.spreads) > 0 {
				j = r.afresh()
			}
			want := r.size(p, d, j, "", 2)
			if said, should := runsOf(got), runsOf(want); said != should {
				t.Errorf("%s, without first looks %s", said, should)
			}
			for _, pt := range []*report.SizePoint{got.Answer, got.Next} {
				if pt == nil { // the answer lies at the end of the range
					continue
				}
				i := slices.IndexFunc(want.Curve, func(o *report.SizePoint) bool { return o.Value == pt.Value })
				if i < 0 || !slices.EqualFunc(pt.Findings, want.Curve[i].Findings, func(a, b rules.Finding) bool { return a.Verdict == b.Verdict && (c.spreads != nil || a.Same(&b)) }) {
					t.Errorf("%+v was not judged exactly", pt)
				}
			}
		})
	}
}

// runsOf are the runs of values that meet, the answer and its neighbour, in words.
func runsOf(s *report.Sizing) string {
	out := answerOf(s.Answer) + ", next " + answerOf(s.Next)
	for _, m := range s.Meets {
		out += fmt.Sprintf("; %s to %s", m[0].Words, m[1].Words)
	}
	return out
}

// BenchmarkSizeMarched is the search of a food whose properties follow its temperature, at the ends of two quantities.
func BenchmarkSizeMarched(b *testing.B) {
	r, p := marchedWall()
	p.Spreads = []workbook.Spread{vary("thickness", -1, 0.001, 0.003, false), vary("film coefficient", 1, 0.25, 0.2, true)}
	benchSize(b, r, p, spreadBasis)
}

// BenchmarkSizeSpread is the search of BenchmarkSize at the unfavourable ends of two, four and six quantities.
func BenchmarkSizeSpread(b *testing.B) {
	all := []workbook.Spread{vary("thickness", -1, 0.001, 0.003, false), vary("start temperature", -1, 2, 3, false), vary("medium temperature", 0, 4, 4, false),
		vary("film coefficient", 2, 0.2, 0.2, true), vary("medium temperature", 2, 1, 2, false), vary("duration", 0, 120, 0, false)}
	for _, n := range []int{2, 4, 6} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			r, p := benchSlab()
			p.Spreads = all[:n]
			benchSize(b, r, p, spreadBasis)
		})
	}
}

// answerOf is an answer in words; "none" if there is none.
func answerOf(p *report.SizePoint) string {
	if p == nil {
		return "none"
	}
	return p.Words
}

// A first look is taken only where the margin of every limit is known and farther from nought than its error could carry it.
func TestPlain(t *testing.T) {
	k := func(x float64) *float64 { return &x }
	hold, stated := &rules.Limit{Kind: rules.Hold}, &rules.Limit{Kind: rules.Stated}
	far := rules.Finding{Limit: hold, Verdict: rules.Met, MarginK: k(2)}
	for _, c := range []struct {
		name string
		also rules.Finding
		want bool
	}{
		{"met by far", rules.Finding{Limit: hold, Verdict: rules.Met, MarginK: k(0.31)}, true},
		{"met within six times the error", rules.Finding{Limit: hold, Verdict: rules.Met, MarginK: k(0.29)}, false},
		{"missed by far", rules.Finding{Limit: hold, Verdict: rules.NotMet, MarginK: k(-0.31)}, true},
		{"missed within six times the error", rules.Finding{Limit: hold, Verdict: rules.NotMet, MarginK: k(-0.29)}, false},
		{"no margin", rules.Finding{Limit: hold, Verdict: rules.Met}, false},
		{"cannot tell", rules.Finding{Limit: hold, Verdict: rules.CannotTell, MarginK: k(3)}, false},
		{"not applicable", rules.Finding{Limit: hold, Verdict: rules.NotApplicable}, false},
		{"stated", rules.Finding{Limit: stated, Verdict: rules.Met}, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := plain([]rules.Finding{far, c.also}); got != c.want {
				t.Errorf("%v", got)
			}
		})
	}
}
