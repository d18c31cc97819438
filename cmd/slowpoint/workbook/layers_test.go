package workbook

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// layeredPlan writes a plan of one layered slab with the given rows of Layers, as a folder.
func layeredPlan(t *testing.T, layers string) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range map[string]string{
		"Products": "Product,Process,Shape,Start temperature (°C)\nPie,Bake,layered slab,5\n",
		"Layers":   layers,
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Freezing point (°C),Flows,Source\nCrust,0.22,650,2400,-6,no,invented\nFilling,0.51,1040,3600,-1,no,invented\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nBake,Oven,cook,50,film,180,23\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// Rows of Layers make the layers of a product from the top, whatever their order on the sheet and their units.
func TestLayers(t *testing.T) {
	p, err := Read(layeredPlan(t, "Product,Layer,Food,Thickness (mm),Contact resistance below (m²K/W)\nPie,3,Crust,5,\nPie,1,Crust,1/8 in,0.0035\nPie,2,Filling,3.1 cm,\n"))
	if err != nil || p.Problems.Faults() > 0 || len(p.Products) != 1 {
		t.Fatalf("%v; %v", err, p.Problems)
	}
	q := &p.Products[0]
	if q.Food != nil || len(q.Layers) != 3 || math.Abs(q.Size.ThicknessM-(0.003175+0.031+0.005)) > 1e-12 || !q.Inches {
		t.Errorf("food %v, %d layers, %g m, inches %v", q.Food, len(q.Layers), q.Size.ThicknessM, q.Inches)
	}
	for i, want := range []struct {
		food         string
		thick, below float64
		row          int
	}{{"Crust", 0.003175, 0.0035, 3}, {"Filling", 0.031, 0, 4}, {"Crust", 0.005, 0, 2}} {
		y := q.Layers[i]
		if y.Food.Name != want.food || math.Abs(y.ThicknessM-want.thick) > 1e-12 || y.BelowM2KW != want.below || y.At.Sheet != "Layers" || y.At.Row != want.row {
			t.Errorf("layer %d: %s %g m, below %g m²K/W, of %v; want %+v", i+1, y.Food.Name, y.ThicknessM, y.BelowM2KW, y.At, want)
		}
	}
	if q.Layers[0].Food != q.Layers[2].Food || len(q.Foods()) != 2 {
		t.Error("one food of the plan is one material")
	}
	var echo []string
	for _, r := range q.Readings() {
		if r.At.Sheet == "Layers" || r.At.Sheet == "Foods" && r.Column == "Food" {
			echo = append(echo, r.Where()+" "+r.Column+" "+r.Typed+" → "+r.Used+" "+r.Why)
		}
	}
	all := strings.Join(echo, "\n")
	for _, want := range []string{"Layers!D3 Thickness 1/8 in → 0.003175 m", "Layers!E3 Contact resistance below 0.0035 m²K/W → 0.0035 m²K/W", "Layers!E4 Contact resistance below  → 0 m²·K/W blank: perfect contact taken", "Foods!A3 Food Filling"} {
		if !strings.Contains(all, want) {
			t.Errorf("%q is not echoed in\n%s", want, all)
		}
	}
	if strings.Contains(all, "Layers!E2") || strings.Count(all, "Food Crust → Crust") != 3 { // its row of Foods, and two layers
		t.Errorf("nothing lies below the lowest layer, and each row is echoed once:\n%s", all)
	}
}

// More layers than a slab may have are told once; the most there may be are taken.
func TestMostLayers(t *testing.T) {
	rows := func(n int) string {
		var b strings.Builder
		b.WriteString("Product,Layer,Food,Thickness (mm)\n")
		for i := range n {
			b.WriteString("Pie," + short(float64(i+1)) + ",Crust,1\n")
		}
		return b.String()
	}
	for _, c := range []struct{ n, sound, faults int }{{mostLayers, 1, 0}, {mostLayers + 1, 0, 1}} {
		p, err := Read(layeredPlan(t, rows(c.n)))
		if err != nil || len(p.Products) != c.sound || p.Problems.Faults() != c.faults {
			t.Errorf("%d layers: %v, %d sound, %v", c.n, err, len(p.Products), p.Problems)
		}
	}
}
