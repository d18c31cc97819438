package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A product that turns out not to be calculable while it is solved is told with its cell; the others are calculated, exit code 2.
func TestRefusedWhileCalculated(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	if err := os.Mkdir(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	for name, text := range map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nHot one,A,slab,31,Mash,80\nSound,B,slab,31,Mash,80\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Source\nMash,0.52,1040,3600,invented\n",
		"Steps": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Course,Film coefficient (W/m²·K)\n" +
			"A,chill,cool,700,film,,falling,27\nA,warm,reheat,90,still air,72,,\nB,chill,cool,700,film,3,,27\n",
		"Courses": "Course,Time (min),Temperature (°C)\nfalling,0,70\nfalling,50,3\nfalling,700,3\n",
		"Limits":  "Limit,Rule,Stage,Applies to,To (°C),Code,Clause,Edition\ncold,by the end,cool,all,8,invented,1,1\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	var out, errs bytes.Buffer
	code := run([]string{"check", dir, "--date", "2026-01-31"}, nil, &out, &errs)
	all := out.String() + errs.String()
	if code != exitInput || !strings.Contains(all, "dry or wet") || !strings.Contains(all, "Steps!J3") && !strings.Contains(all, "Steps row 3") {
		t.Errorf("exit %d\n%s", code, all)
	}
	if !strings.Contains(out.String(), "MET            Sound") || !strings.Contains(all, "Hot one") {
		t.Errorf("the other product is to be calculated:\n%s", all)
	}
	js, err := os.ReadFile(filepath.Join(dir+"-results", "results.json"))
	if err != nil || !bytes.Contains(js, []byte(`"not_calculated"`)) || !bytes.Contains(js, []byte(`"Hot one"`)) {
		t.Errorf("results.json: %v", err)
	}
	if _, err := os.Stat(filepath.Join(dir+"-results", "Hot_one.pdf")); err == nil {
		t.Error("a report of a product that was not calculated")
	}
}

// An oven of 350 °F typed in the °C column, for an hour: the centre of a solid slab would be at 128 °C. It is warned of at its cell, on
// the terminal, in results.json and in the report, as is that no oven of a kitchen is so hot.
func TestWarnedBeyondBoiling(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	writePlan(t, dir, map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nTray,A,slab,50,Mash,5\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nMash,0.52,1040,3600,no,invented\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nA,bake,cook,60,film,350,25\n",
		"Limits":   "Limit,Rule,Stage,Applies to,From (°C),Time (min),Counting,Code,Clause,Edition\nhot,hold,cook,all,70,2,total,invented,1,1\n",
	})
	var out, errs bytes.Buffer
	code := run([]string{"check", dir, "--date", "2026-01-31", "--no-pdf"}, nil, &out, &errs)
	for _, want := range []string{"warning: Steps!F2: \"350 °C\" would heat Tray beyond boiling throughout", "warning: Steps!F2: \"350 °C\" is read as 350 °C, which is unusual"} {
		if !strings.Contains(errs.String(), want) {
			t.Errorf("%q is not in\n%s", want, errs.String())
		}
	}
	if code != exitMet {
		t.Errorf("exit %d\n%s", code, out.String())
	}
	for file, want := range map[string]string{"results.json": "beyond boiling throughout", "report.txt": "hotter than boiling water"} {
		if data, err := os.ReadFile(filepath.Join(dir+"-results", file)); err != nil || !bytes.Contains(data, []byte(want)) {
			t.Errorf("%s does not say %q: %v", file, want, err)
		}
	}
}

// writePlan writes a folder of CSV files.
func writePlan(t *testing.T, dir string, sheets map[string]string) {
	t.Helper()
	if err := os.MkdirAll(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	for name, text := range sheets {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// TestOnlyBesideABrokenProduct: a product that was not asked for is left out, whatever is wrong with it; its errors are told all the same.
func TestOnlyBesideABrokenProduct(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	if err := os.Mkdir(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	for name, text := range map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nBroken,B,slab,31,Nothing like it,8\nSound,B,slab,31,Mash,8\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Source\nMash,0.52,1040,3600,invented\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nB,chill,cool,700,film,3,27\n",
		"Limits":   "Limit,Rule,Stage,Applies to,To (°C),Code,Clause,Edition\ncold,by the end,cool,all,8,invented,1,1\n",
	} {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	var out, errs bytes.Buffer
	code := run([]string{"check", dir, "--date", "2026-01-31", "--no-pdf", "--only", "Sound"}, nil, &out, &errs)
	if code != exitInput || strings.Contains(out.String(), "NOT CALCULATED") || !strings.Contains(out.String(), "left out by --only, and nothing is said of it here: Broken.") ||
		!strings.Contains(out.String(), "1 product: 1 met") || !strings.Contains(errs.String(), "Nothing like it") {
		t.Errorf("exit %d\n%s%s", code, out.String(), errs.String())
	}
}

// Ends of Spread that cannot be calculated together are told at the rows that make it so, and not at whatever row comes first: air that is warmer
// than the food, at its cold end or once it is chilled, needs to be dry or wet. Invented plans.
func TestRefusedAtTheEndsOfSpread(t *testing.T) {
	for _, c := range []struct{ name, start, steps, courses, rows, says string }{
		{"together", "5", "A,rest,store,300,still air,8.4,,\n", "", "all,thickness,1 mm,2 mm,b\nall,start temperature,1 °C,1 °C,b\nall,conductivity,5 %,5 %,b\nA/rest,medium temperature,1 °C,1.5 °C,b\n",
			`Spread!B3: "start temperature" varies together with Spread row 5 to what cannot be calculated (1 °C colder at the start, rest 1.5 °C warmer): `},
		{"alone", "80", "A,chill,cool,700,film,,falling,27\nA,rest,store,300,still air,8,,\n", "Course,Time (min),Temperature (°C)\nfalling,0,70\nfalling,50,10\nfalling,700,10\n",
			"all,thickness,1 mm,2 mm,b\nall,start temperature,1 °C,1 °C,b\nA/rest,medium temperature,1 °C,9 °C,b\n",
			`Spread!B4: "medium temperature" varies to what cannot be calculated (rest 9 °C warmer): `},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := filepath.Join(t.TempDir(), "plan")
			sheets := map[string]string{
				"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nTray,A,slab,31,Mash," + c.start + "\n",
				"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nMash,0.52,1040,3600,no,invented\n",
				"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Course,Film coefficient (W/m²·K)\n" + c.steps,
				"Limits":   "Limit,Rule,Stage,Applies to,To (°C),Code,Clause,Edition\ncold,by the end,store,all,30,invented,1,1\n",
				"Spread":   "Applies to,Quantity,Minus,Plus,Basis\n" + c.rows,
			}
			if c.courses != "" {
				sheets["Courses"] = c.courses
			}
			writePlan(t, dir, sheets)
			for _, args := range [][]string{{"check", dir, "--date", "2026-01-31", "--no-pdf"}, {"size", dir, "--from", "31 mm", "--to", "31 mm"}} {
				var out, errs bytes.Buffer
				code := run(args, nil, &out, &errs)
				if all := out.String() + errs.String(); !strings.Contains(all, c.says) {
					t.Errorf("%s: exit %d, %q is not in\n%s", args[0], code, c.says, all)
				}
			}
		})
	}
}
