package model

import (
	"strings"
	"testing"

	"slowpoint/model/cell"
)

// Fat that sets or melts is refused where a composition is all that is known of a food with much of it; where a table of properties may hold
// the heat, where the food has less fat, or where it stays melted or set, it is calculated.
func TestSettingFat(t *testing.T) {
	for _, c := range []struct {
		name            string
		fatPc           float64
		startC, mediumC float64
		table, composed bool
		refused         bool
	}{
		{"butter is chilled", 82, 57, 5, false, true, true},
		{"butter is warmed", 82, 6, 63, false, true, true},
		{"just above the limit", 35.1, 57, 5, false, true, true},
		{"as much as cream cheese", 34.44, 57, 5, false, true, false},
		{"butter with a table of properties", 82, 57, 5, true, false, false},
		{"butter of typed properties", 82, 57, 5, false, false, false},
		{"butter that stays melted", 82, 63, 85, false, true, false},
		{"butter that touches 40 °C", 82, 63, 36, false, true, false},
		{"butter in a refrigerator", 82, 3, 7, false, true, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, steps := plain()
			p.StartC = c.startC
			steps = steps[:1]
			steps[0].Stage, steps[0].UntilC, steps[0].Medium.C, steps[0].DurationS = Cool, nil, []float64{c.mediumC}, 6*3600
			p.Food.FatPc, p.Food.Table, p.Food.Composed, p.Food.LowC, p.Food.HighC = c.fatPc, c.table, c.composed, -20, 100
			_, err := Solve(p, steps, Options{})
			if (err != nil) != c.refused {
				t.Fatal(err)
			}
			if err == nil {
				return
			}
			for _, want := range []string{"its fat sets and melts", "100 to 180 J", "rows of Foods at several temperatures", "probe record"} {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("no %q: %v", want, err)
				}
			}
		})
	}
}

// The components are known from -40 to 150 °C: colder and hotter food is calculated with a warning.
func TestColderThanTheComponents(t *testing.T) {
	for mediumC, warned := range map[float64]bool{-39: false, -45: true, -90: true, 140: false, 171: true} {
		p, steps := plain()
		steps = steps[:1]
		steps[0].Stage, steps[0].UntilC, steps[0].Medium.C, steps[0].DurationS = Cool, nil, []float64{mediumC}, 9*3600
		p.Food.Composed, p.Food.LowC, p.Food.HighC, p.Food.Waterless = true, -40, 150, true
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if h.Beyond != warned || h.Boils || (len(h.Warnings) == 1) != warned {
			t.Errorf("%g °C: beyond %v, boils %v, %v", mediumC, h.Beyond, h.Boils, h.Warnings)
		}
		if warned && (h.Warnings[0].Level != cell.Warning || !strings.Contains(h.Warnings[0].Msg, "from -40 to 150 °C")) {
			t.Errorf("%g °C: %v", mediumC, h.Warnings)
		}
	}
}
