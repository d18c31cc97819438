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
