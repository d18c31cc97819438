package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// TestProcessWithoutItsChill has a limit on cooling for all, and processes whose chill is missing, out of order or called otherwise: each
// says so on the screen, on the first page and in results.json.
func TestProcessWithoutItsChill(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	writePlan(t, dir, map[string]string{
		"Products": "Product,Process,Shape,Diameter (mm),Food,Start temperature (°C)\nSound,A,sphere,60,Mash,4\nUnsorted,B,sphere,60,Mash,4\nStored,C,sphere,60,Mash,4\nServed,D,sphere,60,Mash,4\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Freezing point (°C),Source\nMash,0.52,1040,3600,no,-1,invented\n",
		"Steps": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\n" +
			"A,boil,cook,60,film,95,200\nA,chill,cool,120,film,2,30\nB,chill,cool,120,film,2,30\nB,boil,cook,60,film,95,200\n" +
			"C,boil,cook,60,film,95,200\nC,chill,store,120,film,2,30\nD,boil,cook,60,film,95,200\nD,stand,rest,10,film,20,8\n",
		"Limits": "Limit,Rule,Stage,Applies to,From (°C),To (°C),Time (min),Clock starts,Counting,Code,Clause,Edition\n" +
			"hot,hold,cook,all,70,,2,,total,invented,1,1\nchill,cool,cool,all,57,21,120,crossing,,invented,2,1\n",
	})
	var told, errs bytes.Buffer
	if code := run([]string{"check", dir, "--date", "2026-01-31"}, nil, &told, &errs); code != exitNotMet {
		t.Fatalf("exit %d: %s%s", code, &told, &errs)
	}
	const served = `"chill" did not apply, though the food was above 57 °C`
	for _, want := range []string{"CANNOT TELL    Unsorted\n", "the stage cool does not come after that", "CANNOT TELL    Stored\n", "in its stage store", "MET            Served\n", served,
		"MET            Sound\n"} {
		if !strings.Contains(told.String(), want) {
			t.Errorf("%q is not in\n%s", want, &told)
		}
	}
	js, err := os.ReadFile(filepath.Join(dir+"-results", "results.json"))
	if err != nil || bytes.Count(js, []byte(`"cooling limit did not apply"`)) != 1 {
		t.Errorf("results.json: %v", err)
	}
	if tool := poppler("pdftotext", t.Fatalf); tool != "" {
		for _, file := range []string{"Served.pdf", "summary.pdf"} {
			out, err := exec.Command(tool, "-l", "1", filepath.Join(dir+"-results", file), "-").Output()
			if page := strings.Join(strings.Fields(string(out)), " "); err != nil || !strings.Contains(page, served) {
				t.Errorf("%s: %v\n%s", file, err, page)
			}
		}
	}
}
