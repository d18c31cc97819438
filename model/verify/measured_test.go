package verify

import (
	"math"
	"strings"
	"testing"

	"slowpoint/testdata/measured"
	"slowpoint/testdata/published"
)

// TestMeasuredCases holds the figures of the measured cases to their table, and their outcome to what is known of it: a case that is not
// met stands in missed, so that one more or one less is seen.
func TestMeasuredCases(t *testing.T) {
	const (
		ofMass  = "as a spheroid of its mass, 330 × 144 mm"
		smaller = "as a spheroid of its smaller diameter, 330 × 130 mm"
		inAir   = "vacuum-packed beef roast 330 × 160 × 130 mm, 3.75 kg, in air of 1 °C at 2 m/s, "
		inWater = "vacuum-packed beef roast 330 × 160 × 130 mm, 3.75 kg, in water of 1 °C, "
		slow    = "by its mass the roast took a film of more than 30 W/(m²·K), and the correlations with radiation give 19: the turbulence of the air is not stated, and open and wet, not packed, it would come to 1.06 times"
		light   = "by its smaller diameter it weighs 3.05 kg, and 3.75 kg were measured"
		unlike  = "table and abstract of one measurement do not go together"
	)
	missed := map[string]string{
		"C17 70 to 5 " + inAir + ofMass:     slow,
		"C17 70 to 8 " + inAir + ofMass:     slow,
		"C18 70 to 5 " + inWater + smaller:  light,
		"C18 70 to 8 " + inWater + smaller:  light,
		"C18b 70 to 4 " + inWater + ofMass:  unlike,
		"C18b 70 to 4 " + inWater + smaller: unlike,
		"C24 14 to 65 beef 93 × 50 × 26 mm, 143 g, in an oven of 175 °C, taken as dry in air left still": "most ovens have a fan, and whether this one had is not known",
	}
	want := map[string]string{}
	for _, r := range measured.Rows(t) {
		want[r["case"]+" "+r["measure"]] = r["measured"] + " " + r["unit"]
	}
	seen := map[string]bool{}
	for _, c := range MeasuredCases() {
		r := c.Compare()
		t.Logf("%-5s %-14s measured %8.4g predicted %8.4g %s ratio %.3f met %v (%s)  %s", c.ID, c.Measure, c.Measured, r.Got, c.Unit, r.Ratio, r.Met, c.Asked(), c.What)
		key := c.ID + " " + c.Measure
		figure, unit, _ := strings.Cut(want[key], " ")
		if figure == "" || published.Number(t, figure) != c.Measured || unit != c.Unit {
			t.Errorf("%s: %g %s, and the table says %q", key, c.Measured, c.Unit, want[key])
		}
		seen[key] = true
		if r.Err != nil || math.IsNaN(r.Ratio) {
			t.Errorf("%s: %v", key, r.Err)
		}
		if c.Source == "" || c.Taken == "" {
			t.Errorf("%s: no source, or nothing said of what was taken", key)
		}
		why := missed[key+" "+c.What]
		if r.Met == (why != "") {
			t.Errorf("%s, %s: ratio %.3f, met: %v, and known of it: %q", key, c.What, r.Ratio, r.Met, why)
		}
	}
	for key := range want {
		if !seen[key] {
			t.Errorf("%s stands in the table and is not predicted", key)
		}
	}
}
