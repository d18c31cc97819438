package workbook

import (
	"os"
	"path/filepath"
	"testing"

	"slowpoint/model"
)

// readText reads a plan folder of the given sheets.
func readText(t *testing.T, sheets map[string]string) *Plan {
	t.Helper()
	dir := t.TempDir()
	for name, text := range sheets {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	p, err := Read(dir)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// What a row means is kept on its way into the plan: clocks, cut courses, and rows that replace others for one product.
func TestRowsMeanWhatTheySay(t *testing.T) {
	sheets := map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nMine,A,slab,31,Mash,70\nTheirs,A,slab,33,Mash,71\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Source\nMash,0.52,1040,3600,invented\n",
		"Steps": "Process,Product,Step,Stage,Duration (min),Surroundings,Temperature (°C),Course,Film coefficient (W/m²·K)\n" +
			"A,,chill,cool,50,film,,air,27\nA,Mine,keep,store,90,film,4,,11\nA,,keep,store,80,film,3,,9\n",
		"Courses": "Course,Time (min),Temperature (°C)\nair,0,20\nair,100,6\n",
		"Faces": "Process,Product,Step,Face,Surroundings,Temperature (°C),Film coefficient (W/m²·K)\n" +
			"A,,keep,underside,film,5,13\nA,Mine,keep,underside,insulated,,\n",
		"Limits": "Limit,Rule,Stage,Applies to,To (°C),Time (min),Clock starts,Code,Clause,Edition\n" +
			"cold,cool,cool + store,all,5,240,crossing of 140 °F,invented,1,1\n",
	}
	p := readText(t, sheets)
	if n := p.Problems.Faults(); n > 0 || len(p.Products) != 2 || len(p.Limits) != 1 {
		t.Fatalf("%d faults, %d products, %d limits: %v", n, len(p.Products), len(p.Limits), p.Problems)
	}
	if c := p.Limits[0].Clock; !c.Crossing || c.AtC == nil || *c.AtC != (140-32)/1.8 {
		t.Errorf("crossing of 140 °F became %+v", c)
	}
	mine, theirs := &p.Products[0], &p.Products[1]
	m := mine.Steps[0].Medium
	last := len(m.C) - 1
	if m.TimesS[last] != 3000 || m.C[last] != 13 {
		t.Errorf("the course is cut at %g s, %g °C; want 3000 s, 13 °C", m.TimesS[last], m.C[last])
	}
	if a, b := mine.Steps[1].DurationS, theirs.Steps[1].DurationS; a != 5400 || b != 4800 {
		t.Errorf("steps of %g s and %g s; the row for one product is to replace the process's for it alone", a, b)
	}
	if f := mine.Steps[1].Faces; len(f) != 1 || f[0].Surface != model.Insulated {
		t.Errorf("the product's own face: %+v", f)
	}
	if f := theirs.Steps[1].Faces; len(f) != 1 || f[0].Surface != model.Film {
		t.Errorf("the process's face for the other product: %+v", f)
	}

	sheets["Steps"] = "Process,Product,Step,Stage,Duration (min),Surroundings,Temperature (°C),Course,Film coefficient (W/m²·K)\n" +
		"A,,chill,cool,50,film,,air,27\nA,Mine,keep,store,-90,film,4,,11\nA,,keep,store,80,film,3,,9\n"
	p = readText(t, sheets)
	if len(p.Products) != 1 || p.Products[0].Name != "Theirs" {
		t.Errorf("a wrong row for one product: calculated %d, want the other alone", len(p.Products))
	}
}
