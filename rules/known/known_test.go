package known

import (
	"strconv"
	"strings"
	"testing"

	"slowpoint/model/verify"
	"slowpoint/testdata/published"
)

func TestCases(t *testing.T) {
	for _, c := range Cases() {
		if r := verify.Run(c); !r.Met {
			t.Errorf("%s: got %.12g, want %.12g ± %.2g %v", c.Name, r.Got, c.Expected, c.Allowance, r.Err)
		}
		if c.Source == "" {
			t.Errorf("%s has no source", c.Name)
		}
	}
}

// What is expected stands in the published rows.
func TestCasesStandInThePublishedRows(t *testing.T) {
	printed := map[string]bool{}
	for _, row := range published.Rows(t, "lethality.csv") {
		printed[row["expected"]] = true
	}
	tables := map[string]bool{}
	for _, r := range published.Rows(t, "hold_tables.csv") {
		deg, unit, _ := strings.Cut(r["temperature"], " ")
		n, by, _ := strings.Cut(r["time"], " ")
		v, err := strconv.ParseFloat(n, 64)
		if err != nil {
			t.Fatal(err)
		}
		if by == "min" {
			v *= 60
		}
		d, err := strconv.ParseFloat(deg, 64)
		if err != nil {
			t.Fatal(err)
		}
		tables[row(d, "°"+unit, v)] = true
	}
	rows := 0
	for _, c := range Cases() {
		if name, ok := strings.CutPrefix(c.Name, "held for the time of the row "); ok {
			name, _, _ = strings.Cut(name, ": share")
			if rows++; !tables[name] {
				t.Errorf("no published table has the row %q", name)
			}
		} else if c.Unit != "" && !printed[strconv.FormatFloat(c.Expected, 'g', 12, 64)] {
			t.Errorf("%s: no published row expects %.12g", c.Name, c.Expected)
		}
	}
	if rows < 10 {
		t.Errorf("%d rows of tables", rows)
	}
}
