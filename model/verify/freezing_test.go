package verify

import (
	"math"
	"testing"

	"slowpoint/model"
	"slowpoint/testdata/published"
)

// The times at which a centre passes three temperatures while it freezes and thaws.
func TestFreezing(t *testing.T) {
	passed := map[string][3]float64{"freezing": {-5, -10, -18}, "thawing": {-2, -0.5, 4}}
	for _, r := range published.Rows(t, "freezing.csv") {
		p := freezing(shapeOf[r["geometry"]])
		if r["process"] == "thawing" {
			p = thawing(shapeOf[r["geometry"]])
		}
		h := solve(t, p)
		for i, column := range []string{"first_s", "second_s", "third_s"} {
			want := published.Number(t, r[column])
			got, err := passing(h, model.Place{}, passed[r["process"]][i])
			if err != nil || math.Abs(got/want-1) > 0.003 {
				t.Errorf("%s of a %s to %g °C: %.1f s, want %.1f (%v)", r["process"], r["geometry"], passed[r["process"]][i], got, want, err)
			}
			t.Logf("%s of a %s to %g °C: %.3f %% off", r["process"], r["geometry"], passed[r["process"]][i], 100*(got/want-1))
		}
	}
}

func TestNeumann(t *testing.T) {
	cases := map[string]halfSpace{"A": waterlike, "B": meatlike, "C": chilled}
	for _, r := range published.Rows(t, "neumann.csv") {
		n := func(c string) float64 { return published.Number(t, r[c]) }
		s := cases[r["case"]]
		if s.frozen != (model.Properties{KWmK: n("ks"), RhoKgM3: n("rho"), CJkgK: n("cs")}) || s.unfrozen != (model.Properties{KWmK: n("kl"), RhoKgM3: n("rho"), CJkgK: n("cl")}) ||
			s.latentJkg != n("L") || s.freezingC != n("freezing_C") || s.startC != n("start_C") || s.surfaceC != n("surface_C") {
			t.Fatalf("%s is not the case of the table: %+v", r["case"], s)
		}
		p := s.problem(n("time_s"))
		h := solve(t, p)
		got, err := s.front(Problem{Name: p.Name, Product: p.Product, Steps: p.Steps}, n("front_mm")/2000)()
		if err != nil || math.Abs(got/n("front_mm")-1) > 0.005 {
			t.Errorf("%s after %s s: front at %.3f mm, want %.3f (%v)", r["case"], r["time_s"], got, n("front_mm"), err)
		}
		for _, d := range []string{"5", "20", "50"} {
			depth := published.Number(t, d) / 1000
			if depth > p.Product.Size.ThicknessM/2 {
				continue
			}
			// 0.5 % of the front is as much as this of the temperature
			if got, want := s.temperature(h, depth), n("at"+d+"mm_C"); math.Abs(got-want) > 0.02+0.005*(n("freezing_C")-n("surface_C")) {
				t.Errorf("%s after %s s: %s mm deep %.4f °C, want %.4f", r["case"], r["time_s"], d, got, want)
			}
		}
	}
}
