package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A food that may mix by itself is run as conducting and as well mixed, and the worse finding of each limit counts: the middle warms up
// last where nothing moves, and stays hot longest there, so that keeping hot is judged by the run as well mixed. A food that does not
// flow has one run.
func TestThickFoodIsRunBothWays(t *testing.T) {
	for _, c := range []struct {
		flows       string
		cook, serve bool // the finding is of the run as well mixed
	}{{"thick", false, true}, {"no", false, false}} {
		t.Run(c.flows, func(t *testing.T) {
			dir := filepath.Join(t.TempDir(), "plan")
			writePlan(t, dir, map[string]string{
				"Products": "Product,Process,Shape,Diameter (mm),Length (mm),Food,Start temperature (°C)\nPot,A,short cylinder,190,160,Chili,6\n",
				"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nChili,0.52,1040,3600," + c.flows + ",invented\n",
				"Steps": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\n" +
					"A,heat,cook,420,film,98,60\nA,serve,hold hot,90,film,21,9\n",
				"Limits": "Limit,Rule,Stage,Applies to,Where,From (°C),Time (min),Counting,Code,Clause,Edition\n" +
					"hot,hold,cook,all,,70,2,total,invented,1,1\nkept,stay above,hold hot,all,centre,63,,,invented,2,1\n",
			})
			var out, errs bytes.Buffer
			if code := run([]string{"check", dir, "--date", "2026-01-31", "--no-pdf"}, nil, &out, &errs); code > exitNotMet {
				t.Fatalf("exit %d\n%s%s", code, out.String(), errs.String())
			}
			js, err := os.ReadFile(filepath.Join(dir+"-results", "results.json"))
			if err != nil {
				t.Fatal(err)
			}
			mixed := map[string]bool{}
			for _, line := range strings.Split(string(js), "\n") {
				for _, limit := range []string{"hot", "kept"} {
					if strings.Contains(line, `"limit":"`+limit+`"`) {
						mixed[limit] = strings.Contains(line, `"well_mixed":true`)
					}
				}
			}
			if want := map[string]bool{"hot": c.cook, "kept": c.serve}; mixed["hot"] != want["hot"] || mixed["kept"] != want["kept"] || len(mixed) != 2 {
				t.Errorf("as well mixed: %v, want %v\n%s", mixed, want, js)
			}
			text, err := os.ReadFile(filepath.Join(dir+"-results", "report.txt"))
			if err != nil {
				t.Fatal(err)
			}
			for _, want := range []string{"run as conducting", "run as well mixed", "prefer a probe"} {
				if bytes.Contains(text, []byte(want)) != (c.flows == "thick") {
					t.Errorf("%q is in the report of a food that flows %s: %v", want, c.flows, c.flows != "thick")
				}
			}
		})
	}
}
