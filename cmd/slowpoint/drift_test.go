package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestDriftTold: food that is kept hot in a cool room is not said to meet its limit only because the plan leaves the walls' radiation out; with
// it typed, or with room enough for all that is left open, the limit is judged as ever. So at the unfavourable ends of Spread.
func TestDriftTold(t *testing.T) {
	for _, x := range []struct{ name, walls, film, spread, says string }{
		{"blank", "", "", "", "CANNOT TELL"},
		{"typed, and missed", "20", "7", "", "NOT MET"},
		{"typed, and met", "60", "2", "", "MET"},
		{"varied", "", "", "A,start temperature,1 °C,1 °C,invented\n", "CANNOT TELL"},
	} {
		t.Run(strings.ReplaceAll(x.name, " ", "-"), func(t *testing.T) {
			dir := filepath.Join(t.TempDir(), "plan")
			sheets := map[string]string{
				"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nA,P,slab,50,Mash,80\n",
				"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nMash,0.5,1050,3600,no,invented\n",
				"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Surface,Radiating temperature (°C),Film coefficient (W/m²·K)\nP,counter,hold hot,60,still air,20,dry," + x.walls + "," + x.film + "\n",
				"Limits":   "Limit,Rule,Stage,Applies to,From (°C),Code,Clause,Edition\nL,stay above,hold hot,all,63,invented,1,1\n",
			}
			if x.spread != "" {
				sheets["Spread"] = "Applies to,Quantity,Minus,Plus,Basis\n" + x.spread
			}
			writePlan(t, dir, sheets)
			var said, errs bytes.Buffer
			code := run([]string{"check", dir, "--no-pdf", "--date", "2026-01-31", "--out", filepath.Join(dir, "out")}, nil, &said, &errs)
			if first, _, _ := strings.Cut(said.String(), "  "); first != x.says || (code == 0) != (x.says == "MET") {
				text, _ := os.ReadFile(filepath.Join(dir, "out", "report.txt"))
				t.Errorf("exit %d, want %s:\n%s\n%s\n%s", code, x.says, said.String(), errs.String(), text[:min(len(text), 3000)])
			}
		})
	}
}
