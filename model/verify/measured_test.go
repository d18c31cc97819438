package verify

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/testdata/measured"
	"slowpoint/testdata/published"
)

// TestMeasuredCases holds the figures of the measured cases to their table, and their outcome to what is known of it: a case that is not
// met says why, and no other does, so that one more or one less is seen.
func TestMeasuredCases(t *testing.T) {
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
		if r.Met == (c.Missed != "") {
			t.Errorf("%s, %s: ratio %.3f, met: %v, and known of it: %q", key, c.What, r.Ratio, r.Met, c.Missed)
		}
	}
	for key := range want {
		if !seen[key] {
			t.Errorf("%s stands in the table and is not predicted", key)
		}
	}
}

// TestMeasuredClockAtOnce: the clock of what begins at the temperature from which it is timed starts with its first step.
func TestMeasuredClockAtOnce(t *testing.T) {
	long := timed(pieceOf("Ham, sliced, regular (11% fat)", model.Brick, model.Size{ThicknessM: 0.12, WidthM: 0.12, LengthM: 0.4}, 70),
		step("spray", 1800, exposure(95, 18)), step("chill", 6*3600, blown(3, 0)))
	got, err := long.from(70, 40)()
	if err != nil {
		t.Fatal(err)
	}
	h, err := long.solve()
	if err != nil {
		t.Fatal(err)
	}
	if c := h.At(model.Place{}, 3600*got); math.Abs(c-40) > 1e-3 {
		t.Errorf("%g °C %g h after the start, want 40", c, got)
	}
}
