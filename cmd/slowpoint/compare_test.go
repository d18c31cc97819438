package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// comparedSheets is a small plan, invented: a block that is cooked and chilled, with two limits.
var comparedSheets = map[string]string{
	"Products.csv": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nBlock,P,slab,40,Block food,6\n",
	"Foods.csv":    "Food,Conductivity (W/(m·K)),Density (kg/m³),Specific heat (J/(kg·K)),Source\nBlock food,0.47,1070,3520,invented\n",
	"Steps.csv": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/(m²·K))\n" +
		"P,bath,cook,90,film,80,800\nP,chill,cool,240,film,2,90\n",
	"Spread.csv": "Applies to,Quantity,Minus,Plus,Basis\n",
	"Limits.csv": "Limit,Rule,Applies to,Stage,From (°C),To (°C),Time (min),Clock starts,Counting\n" +
		"Hot,hold,all,cook,70,,2,,total\nCold,cool,all,cool,,10,240,stage start: cool,\nQuick,cool,all,cool,60,20,240,crossing,\n",
}

// Each kind of change is told with its cells, and the exit code says whether anything got worse.
func TestCompare(t *testing.T) {
	write := func(t *testing.T, change map[string][2]string) string {
		dir := filepath.Join(t.TempDir(), "plan")
		if err := os.Mkdir(dir, 0o755); err != nil {
			t.Fatal(err)
		}
		for name, text := range comparedSheets {
			if c, ok := change[name]; ok {
				if !strings.Contains(text, c[0]) {
					t.Fatalf("%s has no %q", name, c[0])
				}
				if text = strings.Replace(text, c[0], c[1], 1); c[0] == "" {
					text = comparedSheets[name] + c[1]
				}
			}
			if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		return dir
	}
	for _, c := range []struct {
		name   string
		change map[string][2]string
		code   int
		says   []string
	}{
		{"nothing", nil, 0, []string{"0 changed inputs", "Nothing got worse.", "the hottest place is nowhere slower to cool", "the coldest place is nowhere slower to heat"}},
		{"colder chiller", map[string][2]string{"Steps.csv": {"film,2,", "film,1,"}}, 0, []string{"process P: chill: Temperature 2 °C → 1 °C (Steps!F3 → Steps!F3)", "Nothing got worse."}},
		// a thinner piece is heated through further in the same time, and goes warmer into the chill
		{"thinner", map[string][2]string{"Products.csv": {"slab,40", "slab,35"}}, 1, []string{"Block: Thickness 40 mm → 35 mm (Products!D2 → Products!D2)",
			"the coldest place is nowhere slower to heat", "the hottest place is slower to cool", "behind as the step began", "Worse: 1 point"}},
		{"thicker", map[string][2]string{"Products.csv": {"slab,40", "slab,46"}}, 1, []string{"the coldest place is slower to heat", "the hottest place is slower to cool", "Block: met → met"}},
		{"not met any more", map[string][2]string{"Products.csv": {"slab,40", "slab,120"}}, 1, []string{"Block: met → not met", `"Hot" met → not met`}},
		{"warmer chiller", map[string][2]string{"Steps.csv": {"film,2,", "film,4,"}}, 1, []string{"process P: chill: Temperature 2 °C → 4 °C", "the hottest place is slower to cool", "bath: the coldest place is nowhere slower", `"Cold" has`}},
		{"limit gone", map[string][2]string{"Limits.csv": {"Hot,hold,all,cook,70,,2,,total\n", ""}}, 1, []string{"limit Hot: gone (Limits row 2 → –)", `limit "Hot" is gone`}},
		{"limit new and met", map[string][2]string{"Limits.csv": {"Hot,", "Warm,hold,all,cook,60,,2,,total\nHot,"}}, 0, []string{"limit Warm: new (– → Limits row 2)", `"Warm" (must): – → met`}},
		{"limit new and not met", map[string][2]string{"Limits.csv": {"Hot,", "Boil,hold,all,cook,95,,2,,total\nHot,"}}, 1, []string{`limit "Boil" is new and not met`}},
		{"limit made advice", map[string][2]string{"Limits.csv": {"Clock starts,Counting\nHot,hold,all,cook,70,,2,,total", "Clock starts,Counting,Level\nHot,hold,all,cook,70,,2,,total,advice"}}, 1, []string{"what is asked changed", "Level"}},
		{"limit on cooling made longer", map[string][2]string{"Limits.csv": {",,10,240,", ",,10,300,"}}, 1, []string{"what is asked changed", "limit Cold: Time 240 min → 300 min"}},
		{"product renamed", map[string][2]string{"Products.csv": {"Block,P", "Brick,P"}}, 0, []string{"Brick: new, met", "Block: gone, was met"}},
		{"product new and not met", map[string][2]string{"Products.csv": {"Block,P", "Big,P,slab,150,Block food,6\nBlock,P"}}, 1, []string{"Big is new and not met"}},
		{"step gone", map[string][2]string{"Steps.csv": {"P,bath,", "P,kettle,"}}, 1, []string{"kettle has no counterpart", "bath is gone"}},
		{"step gone and none instead", map[string][2]string{"Steps.csv": {"P,chill,cool,240,film,2,90\n", "P,chill,cool,240,film,2,90\nP,freezer,cool,2,film,1,90\n"}}, 1, []string{"freezer has no counterpart"}},
		{"limit not applicable any more", map[string][2]string{"Steps.csv": {"film,80,800", "film,55,800"}}, 1, []string{`"Quick" met → not applicable`}},
		{"less time hot, as warm", map[string][2]string{"Steps.csv": {"bath,cook,90,", "bath,cook,70,"}}, 1, []string{`"Hot" has `, "min", " less room"}},
		{"a spread that is new", map[string][2]string{"Spread.csv": {"", "Block,thickness,0 mm,0.1 mm,invented\n"}}, 1, []string{"what is asked changed", "spread of Block, thickness: new"}},
		{"error in the new one", map[string][2]string{"Products.csv": {"slab,40,Block food,6\n", "slab,-40,Block food,6\nPlank,P,slab,40,Block food,6\n"}}, 2, []string{"Block: met → not calculated"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			old, now := write(t, nil), write(t, c.change)
			var out, errs bytes.Buffer
			folder := filepath.Join(t.TempDir(), "out")
			if code := run([]string{"compare", old, now, "--out", folder, "--date", "2026-01-31"}, nil, &out, &errs); code != c.code {
				t.Fatalf("exit code %d, want %d\n%s%s", code, c.code, &out, &errs)
			}
			for _, w := range c.says {
				if !strings.Contains(out.String(), w) {
					t.Errorf("%q is missing in\n%s%s", w, &out, &errs)
				}
			}
			if c.code == 2 {
				return
			}
			b, err := os.ReadFile(filepath.Join(folder, "compare.json"))
			var js comparison
			if err != nil || json.Unmarshal(b, &js) != nil || js.Schema != compareSchema || (len(js.Worse) > 0) != (c.code == 1) {
				t.Errorf("%v\n%s", err, b)
			}
		})
	}
	var out, errs bytes.Buffer
	if code := run([]string{"compare", write(t, nil), filepath.Join(t.TempDir(), "none")}, nil, &out, &errs); code != exitInput {
		t.Errorf("a plan that is not there: exit code %d", code)
	}
}
