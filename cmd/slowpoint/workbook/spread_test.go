package workbook

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// TestBetween: a value between the ends of a spread is told as such, in the units of the plan, and where there is no single value, as how far
// it is off in the unit that the end is typed in.
func TestBetween(t *testing.T) {
	film, steady, course := 20.0, model.Step{Name: "Oven", DurationS: 5400}, model.Step{Name: "Ramp", DurationS: 600}
	steady.FilmW, steady.Medium = &film, model.Course{C: []float64{175}}
	course.Medium = model.Course{TimesS: []float64{0, 600}, C: []float64{20, 80}}
	p := &Product{Product: model.Product{Shape: model.Slab, Size: model.Size{ThicknessM: 0.04}, StartC: 64}, Steps: []model.Step{steady, course}}
	k := unit.Conductivity.Unit("Btu/h·ft·°F").In(0.02)
	for _, c := range []struct {
		of          string
		step        int
		minus, plus Deviation
		at          float64
		inches, f   bool
		want        string
	}{
		{"start temperature", -1, Deviation{"8 °C", 8, false}, Deviation{"2 °C", 2, false}, -0.25, false, false, "start temperature 62 °C"},
		{"start temperature", -1, Deviation{"8 °C", 8, false}, Deviation{"2 °C", 2, false}, 0.5, false, true, "start temperature 149 °F"},
		{"thickness", -1, Deviation{}, Deviation{"5 mm", 0.005, false}, 0.25, false, false, "thickness 41.25 mm"},
		{"thickness", -1, Deviation{"10 %", 0.1, true}, Deviation{}, -0.5, true, false, "thickness 1.5 in"}, // 38 mm are 1.496 in
		{"medium temperature", 0, Deviation{"3 °C", 3, false}, Deviation{"3 °C", 3, false}, -0.5, false, false, "medium temperature of Oven 173.5 °C"},
		{"medium temperature", 1, Deviation{"3 °C", 3, false}, Deviation{"5 °F", 5 / 1.8, false}, 0.5, false, false, "Ramp 2.5 °F warmer"},
		{"duration", 0, Deviation{"10 min", 600, false}, Deviation{}, -0.5, false, false, "duration of Oven 1 h 25 min"},
		{"film coefficient", 0, Deviation{"25 %", 0.25, true}, Deviation{}, -0.5, false, false, "Oven 12.5 % less film coefficient"},
		{"conductivity", -1, Deviation{}, Deviation{"0.02 Btu/h·ft·°F", k, false}, 0.5, false, false, "conductivity 0.01 Btu/h·ft·°F higher"},
		{"probe", -1, Deviation{"3 mm", 0.003, false}, Deviation{}, -0.5, false, false, "probe 1.5 mm lower or further in"},
	} {
		s := Spread{At: cell.Ref{Sheet: "Spread", Row: 3}, Of: Spreads[slices.Index(spreadNames, c.of)], Step: c.step, Minus: c.minus, Plus: c.plus}
		if c.step >= 0 {
			s.StepName = p.Steps[c.step].Name
		}
		p.Spreads, p.Inches = []Spread{s}, c.inches
		if got := p.Between(0, c.at, c.f); got != c.want+" (between the ends of Spread row 3)" {
			t.Errorf("%s at %g: %q, expected %q", c.of, c.at, got, c.want)
		}
	}
	if p.StartC != 64 || p.Size.ThicknessM != 0.04 {
		t.Error("the product was moved")
	}
}

// TestSpreadOfSomeOnly: what a row of Spread leaves of some products is told once for all of these, and keeps no other from being calculated,
// wherever it stands.
func TestSpreadOfSomeOnly(t *testing.T) {
	for _, thick := range [][]string{{"1", "30", "1.5"}, {"30", "1", "1.5"}, {"1", "1.5", "30"}} {
		dir := t.TempDir()
		for name, text := range map[string]string{
			"Products": fmt.Sprintf("Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nA,P,slab,%s,F,5\nB,P,slab,%s,F,5\nC,P,slab,%s,F,5\n", thick[0], thick[1], thick[2]),
			"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nF,0.48,1050,3500,no,invented\n",
			"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nP,s,cook,60,film,90,30\n",
			"Spread":   "Applies to,Quantity,Minus,Plus,Basis\nall,thickness,2 mm,2 mm,invented\n",
		} {
			if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		plan, err := Read(dir)
		if err != nil {
			t.Fatal(err)
		}
		if plan.Problems.Faults() != 1 || len(plan.Products) != 1 || plan.Products[0].Size.ThicknessM != 0.03 {
			t.Errorf("%v: %d products\n%v", thick, len(plan.Products), plan.Problems)
		}
	}
}
