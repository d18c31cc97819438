package main

import (
	"fmt"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/report"
	"slowpoint/rules"
)

// The size that the page of the operator names meets every limit, and a millimetre more does not; a product that meets its limits
// has no lever.
func TestLever(t *testing.T) {
	plan, err := workbook.ReadDemo()
	if err != nil {
		t.Fatal(err)
	}
	r := &runner{plan: plan, head: &report.Head{EveryS: 60}, options: &checkOptions{}}
	for _, c := range []struct {
		name   string
		larger float64 // of the demo's size
	}{{"Turkey roll", 1.9}, {"Potato bake, full tray", 2.2}, {"Liver terrine", 2.1}} {
		t.Run(c.name, func(t *testing.T) {
			var p workbook.Product
			for i := range plan.Products {
				if plan.Products[i].Name == c.name {
					p = plan.Products[i]
				}
			}
			z := &p.Size
			for _, size := range []*float64{&z.ThicknessM, &z.WidthM, &z.LengthM, &z.DiameterM} {
				*size *= c.larger
			}
			word, size := governing(&p.Product)
			verdict := func(mm float64) rules.Verdict {
				q := p
				q.Points = nil
				_, z := governing(&q.Product)
				*z = mm / 1000
				d, err := r.judged(&q)
				if err != nil {
					t.Fatal(err)
				}
				return d.Judgement.Verdict
			}
			now := *size * 1000
			if v := verdict(now); v != rules.NotMet {
				t.Fatalf("%g mm is %s: the case needs one that is not met", now, v)
			}
			said := r.lever(&p, rules.NotMet)
			var from, to float64
			if _, err := fmt.Sscanf(strings.ToLower(said), word+" %g mm → %g mm would meet", &from, &to); err != nil {
				t.Fatalf("%q: %v", said, err)
			}
			if verdict(to) != rules.Met || verdict(to+1) == rules.Met {
				t.Errorf("%q: %g mm is %s, %g mm is %s", said, to, verdict(to), to+1, verdict(to+1))
			}
			if said := r.lever(&p, rules.Met); said != "" {
				t.Errorf("a product that meets its limits has the lever %q", said)
			}
		})
	}
}
