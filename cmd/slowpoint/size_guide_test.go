package main

import (
	"fmt"
	"math/rand/v2"
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

// BenchmarkSizeSpread is the search of BenchmarkSize at the unfavourable ends of two, four and six quantities.
func BenchmarkSizeSpread(b *testing.B) {
	all := []workbook.Spread{vary("thickness", -1, 0.001, 0.003, false), vary("start temperature", -1, 2, 3, false), vary("medium temperature", 0, 4, 4, false),
		vary("film coefficient", 2, 0.2, 0.2, true), vary("medium temperature", 2, 1, 2, false), vary("duration", 0, 120, 0, false)}
	for _, n := range []int{2, 4, 6} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			r, p := benchSlab()
			p.Spreads = all[:n]
			d, err := r.dialOf(p, &sizeOptions{})
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if s := r.size(p, d, r.judges(p), spreadBasis, 1); s.Answer == nil || s.Next == nil {
					b.Fatal("no answer")
				}
			}
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
