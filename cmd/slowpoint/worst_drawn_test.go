package main

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/rules"
)

// drawnPlan draws a product of one or two quantities that vary, by much, in a chain with a chill, and a limit on that chill which is met.
func drawnPlan(r *rand.Rand) map[string]string {
	u := func(a, b float64) float64 { return a + (b-a)*r.Float64() }
	size, body := "diameter", fmt.Sprintf("sphere,,%.1f", u(20, 90))
	if r.IntN(2) == 0 {
		size, body = "thickness", fmt.Sprintf("slab,%.1f,", u(15, 70))
	}
	var steps []string
	add := func(stage string, least, most, c, film float64) {
		steps = append(steps, fmt.Sprintf("X,s%d,%s,%.0f,film,%.1f,%.1f\n", len(steps)+1, stage, u(least, most), c, film))
	}
	startC := u(58, 80)
	if r.IntN(2) == 0 {
		startC = u(2, 20)
		add("cook", 15, 90, u(75, 120), u(10, 60))
	}
	if r.IntN(2) == 0 {
		add("rest", 5, 30, u(18, 25), u(5, 15))
	}
	if r.IntN(3) == 0 {
		add("hold hot", 5, 40, u(45, 70), u(5, 20))
	}
	add("cool", 120, 400, u(2, 4), u(5, 60))
	if r.IntN(4) == 0 {
		add("hold cold", 20, 100, u(4, 9), u(5, 20))
	}
	from, to, clock := fmt.Sprintf("%.2f", u(45, 65)), u(8, 35), "crossing"
	if r.IntN(3) == 0 {
		from, clock = "", "stage start: cool"
	}
	quantities := []string{"start temperature,%.1f °C,%.1f °C", "density,%.1f %%,%.1f %%", "specific heat,%.1f %%,%.1f %%", "conductivity,%.1f %%,%.1f %%",
		"film coefficient,%.1f %%,%.1f %%", size + ",%.1f mm,%.1f mm"}
	spread := ""
	for _, i := range r.Perm(len(quantities))[:1+r.IntN(2)] {
		most := 40.0
		switch {
		case strings.HasPrefix(quantities[i], "start"):
			most = 20
		case strings.HasPrefix(quantities[i], size):
			most = 6
		}
		spread += fmt.Sprintf("all,"+quantities[i]+",invented\n", u(0, most), u(0, most))
	}
	return map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Diameter (mm),Food,Start temperature (°C)\n" + fmt.Sprintf("P,X,%s,F,%.1f\n", body, startC),
		"Foods": "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Freezing point (°C),Flows,Source\n" +
			fmt.Sprintf("F,%.3f,%.0f,%.0f,-3,no,invented\n", u(0.25, 0.6), u(900, 1100), u(2800, 3900)),
		"Steps": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\n" + strings.Join(steps, ""),
		"Limits": "Limit,Where,Applies to,Rule,Stage,From (°C),To (°C),Time (min),Clock starts\n" +
			fmt.Sprintf("L,%s,all,cool,cool,%s,%.2f,5000,%s\n", []string{"", "centre", "surface"}[r.IntN(3)], from, to, clock),
		"Spread": "Applies to,Quantity,Minus,Plus,Basis\n" + spread,
	}
}

// TestDrawnPlansHaveNoWorsePlace: over plans drawn at random no place of a fine grid of what varies leaves half a minute less room than the place found.
func TestDrawnPlansHaveNoWorsePlace(t *testing.T) {
	const halfMinute = 30.0
	tried, between := 0, 0
	for seed := range uint64(300) {
		sheets := drawnPlan(rand.New(rand.NewPCG(seed, 3)))
		dir := t.TempDir()
		writePlan(t, dir, sheets)
		plan, err := workbook.Read(dir)
		if err != nil {
			t.Fatal(err)
		}
		if plan.Problems.Faults() > 0 || len(plan.Products) == 0 || len(plan.Products[0].Spreads) > 2 { // it would freeze, say; a film of several steps is several quantities
			continue
		}
		p := &plan.Products[0]
		s := searchOf(t, &runner{plan: plan}, p)
		worst, err := s.corners()
		if err != nil || s.at(worst[0])[0].Verdict != rules.Met {
			continue
		}
		tried++
		if slices.ContainsFunc(worst[0], func(v float64) bool { return v != -1 && v != 0 && v != 1 }) {
			between++
		}
		var grid [][]float64
		for i := range 65 {
			switch v := float64(i-32) / 32; len(p.Spreads) {
			case 1:
				grid = append(grid, []float64{v})
			default:
				for k := 0; i%4 == 0 && k < 17; k++ {
					grid = append(grid, []float64{v, float64(k-8) / 8})
				}
			}
		}
		found, err := s.solve(grid, slices.Repeat([][]int{{0}}, len(grid)))
		if err != nil {
			t.Fatal(seed, err)
		}
		f := &s.at(worst[0])[0]
		for i := range found {
			g := &found[i][0]
			if g.Verdict != rules.Met && g.Verdict != rules.NotApplicable || g.MarginS != nil && f.MarginS != nil && *g.MarginS < *f.MarginS-halfMinute {
				t.Errorf("drawn %d: %v at %.3v, %.0f min of 5000 left; %v at %.3v, %.0f min\n%v", seed, f.Verdict, worst[0], *f.MarginS/60, g.Verdict, grid[i], *g.MarginS/60, sheets)
				break
			}
		}
	}
	if tried < 150 || between < 8 {
		t.Errorf("%d tried, %d of them with their worst between the ends", tried, between)
	}
}
