package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
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

// TestDriftElsewhere: what a plan leaves blank is taken against a limit in the steps before it too: in a rest whose end a chill or a reheat starts from, in
// a chill before a reheat or before a colder chill, in a cook before a chill, in air that changes, and in food taken as well mixed. Typed as unfavourably
// the limit is missed, so that with a blank it may not be met.
func TestDriftElsewhere(t *testing.T) {
	const (
		cooked = "P,bath,cook,90,stirred water,85,,,,300,,\n"
		blast  = "P,blast,cool,400,film,2,,,,40,,\n"
		meat   = "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source,At temperature (°C)\nMeat,0.48,1050,3500,no,invented,\n"
		course = "Course,Time (min),Temperature (°C)\nk,0,90\nk,60,90\nk,61,25\nk,90,25\n"
	)
	for _, x := range []struct {
		name             string
		mm, startC       string
		food             string
		steps            string // Process,Step,Stage,Duration,Surroundings,Temperature,Course,Surface,Radiating temperature,Film coefficient,Air speed,Relative humidity
		blank, typed     string // the end of the row in steps that stands where it says ROW, from Surface on; no typed: it cannot be calculated
		rule, stage      string
		where, from, to  string
		timeMin          string
		clock, counting  string
		courses, refused string
	}{
		{name: "a rest after the cook, limit without a stage", mm: "50", startC: "5", steps: cooked + "P,stand,rest,90,still air,20,,ROW\n", blank: "dry,,,,", typed: "dry,20,,,", rule: "hold", from: "65", timeMin: "104", counting: "continuous"},
		{name: "a wet rest, limit without a stage", mm: "50", startC: "5", steps: cooked + "P,stand,rest,90,still air,20,,ROW\n", blank: "wet,,,,", typed: "wet,20,,,0", rule: "hold", from: "65", timeMin: "60.3", counting: "continuous"},
		{name: "a clock that starts in the rest", mm: "60", startC: "80", steps: "P,stand,rest,90,still air,20,,ROW\n" + blast, blank: ",,,,", typed: "wet,,,,30", rule: "cool", stage: "cool", from: "60", to: "21", timeMin: "111", clock: "crossing"},
		{name: "a clock that starts in the first of two chills", mm: "60", startC: "80", steps: "P,room,cool,90,still air,20,,ROW\n" + blast, blank: ",,,,", typed: "wet,,,,30", rule: "cool", stage: "cool", from: "60", to: "21", timeMin: "111", clock: "crossing"},
		{name: "a chill before a reheat", mm: "60", startC: "75", steps: "P,chill,cool,120,moving air,2,,ROW\nP,heat,reheat,200,stirred water,90,,,,300,,\n", blank: ",,,2,", typed: "wet,,,2,80", rule: "heat", stage: "reheat", to: "74", timeMin: "70.5", clock: "stage start: reheat"},
		{name: "a cook before a chill", mm: "60", startC: "5", steps: "P,bath,cook,60,stirred water,80,,ROW\n" + blast, blank: ",,,,", typed: ",,300,,", rule: "cool", stage: "cool", to: "10", timeMin: "159", clock: "stage start: cool"},
		{name: "a wet cook before a chill", mm: "60", startC: "5", steps: "P,oven,cook,60,moving air,160,,ROW\n" + blast, blank: "wet,160,,2,", typed: "wet,160,,2,16", rule: "cool", stage: "cool", to: "10", timeMin: "150", clock: "stage start: cool"},
		{name: "a cook that calculates too cold for the clock", mm: "60", startC: "5", steps: "P,bath,cook,40,stirred water,70,,ROW\nP,blast,cool,400,film,2,,,,10,,\n", blank: ",,,,", typed: ",,300,,", rule: "cool", stage: "cool", from: "57", to: "10", timeMin: "120", clock: "crossing"},
		{name: "a chill warmer than the food", mm: "40", startC: "3", steps: "P,van,cool,60,still air,7,,ROW\n", blank: ",,,,", typed: ",7,,,", rule: "stay below", stage: "cool", to: "3.9"},
		{name: "air that turns cold", mm: "40", startC: "66", steps: "P,keep,hold hot,90,still air,,k,ROW\n", blank: "dry,,,,", typed: "dry,25,,,", rule: "stay above", stage: "hold hot", from: "56", courses: course},
		{name: "a humidity typed, and dry or wet not", mm: "30", startC: "3", steps: "P,show,hold cold,60,still air,7.5,,ROW\n", blank: ",,,,40", typed: "dry,7.5,,,40", rule: "stay below", stage: "hold cold", to: "4.5"},
		{name: "food taken as well mixed", mm: "80", startC: "85", food: "thick", steps: "P,keep,hold hot,180,still air,25,,ROW\n", blank: "dry,,,,", typed: "dry,25,7,,", rule: "stay above", stage: "hold hot", where: "centre", from: "55"},
		{name: "properties that end where the food would come to", mm: "50", startC: "80", food: "table", steps: "P,keep,hold hot,60,still air,20,,ROW\n", blank: "dry,,,,", typed: "dry,20,7,,", rule: "stay above", stage: "hold hot", from: "63", refused: "its properties are not given there"},
	} {
		t.Run(strings.ReplaceAll(x.name, " ", "-"), func(t *testing.T) {
			check := func(row string) (says string, text string) {
				dir := filepath.Join(t.TempDir(), "plan")
				foods := meat
				switch x.food {
				case "thick":
					foods = strings.Replace(meat, ",no,", ",thick,", 1)
				case "table":
					foods = strings.TrimSuffix(meat, "\n") + "60\nMeat,0.48,1050,3500,no,invented,95\n"
				}
				sheets := map[string]string{
					"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nA,P,slab," + x.mm + ",Meat," + x.startC + "\n",
					"Foods":    foods,
					"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Course,Surface,Radiating temperature (°C),Film coefficient (W/m²·K),Air speed (m/s),Relative humidity (%)\n" + strings.Replace(x.steps, "ROW", row, 1),
					"Limits": "Limit,Rule,Stage,Applies to,Where,From (°C),To (°C),Time (min),Clock starts,Counting,Code,Clause,Edition\nL," +
						strings.Join([]string{x.rule, x.stage, "all", x.where, x.from, x.to, x.timeMin, x.clock, x.counting}, ",") + ",invented,1,1\n",
				}
				if x.courses != "" {
					sheets["Courses"] = x.courses
				}
				writePlan(t, dir, sheets)
				var said, errs bytes.Buffer
				run([]string{"check", dir, "--no-pdf", "--date", "2026-01-31", "--out", filepath.Join(dir, "out")}, nil, &said, &errs)
				says, _, _ = strings.Cut(said.String(), "  ")
				return says, said.String() + errs.String()
			}
			if says, text := check(x.blank); says != "CANNOT TELL" || !strings.Contains(text, "leaves blank") || !strings.Contains(text, x.refused) {
				t.Errorf("with a blank:\n%s", text)
			}
			if says, text := check(x.typed); says != "NOT MET" && x.refused == "" || !strings.Contains(text, x.refused) {
				t.Errorf("typed:\n%s", text)
			}
		})
	}
}

// TestDriftIsShared: sides to which a plan leaves the same open are calculated once; others are not taken for them.
func TestDriftIsShared(t *testing.T) {
	food := &model.Material{Name: "meat", Source: "test input", Flow: model.FlowsNo, Props: func(float64) model.Properties { return model.Properties{KWmK: 0.48, RhoKgM3: 1050, CJkgK: 3500} }}
	film, dry := 30.0, false
	step := func(stage *model.Stage, e model.Exposure, c float64) model.Step {
		e.Medium = model.Course{TimesS: []float64{0}, C: []float64{c}}
		return model.Step{Name: stage.Name, Stage: stage, DurationS: 3600, Exposure: e}
	}
	p := &workbook.Product{Product: model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.04}, Food: food, StartC: 75},
		Steps: []model.Step{step(model.Rest, model.Exposure{Surface: model.StillAir, Wet: &dry}, 20), step(model.Cool, model.Exposure{Surface: model.Film, FilmW: &film}, 2),
			step(model.Store, model.Exposure{Surface: model.StillAir, Wet: &dry}, 55)}}
	usual, err := model.Solve(p.Product, p.Steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	runs := drift(p, usual, model.Options{})
	var h [3]*model.History
	for i, to := range []model.Drift{model.Colder, model.Earlier, model.Hotter} {
		got, err := runs(to)
		if err != nil || len(got) == 0 {
			t.Fatal(got, err)
		}
		h[i] = got[0].History
	}
	if h[0] != h[1] || h[0] == h[2] {
		t.Errorf("colder and earlier are one: %v; colder and hotter: %v", h[0] == h[1], h[0] == h[2])
	}
}
