package intake

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// proposed writes the mapping that is proposed for the files of a folder, and reads its sheets.
func proposed(t *testing.T, theirs string) (name string, sheets map[string][]map[string]string) {
	t.Helper()
	var out, again bytes.Buffer
	files := theirFiles(t, theirs)
	if err := Propose(&out, files); err != nil {
		t.Fatal(err)
	}
	if err := Propose(&again, files); err != nil || !bytes.Equal(out.Bytes(), again.Bytes()) {
		t.Errorf("the mapping differs from one time to the next (%v)", err)
	}
	name = filepath.Join(t.TempDir(), "map.xlsx")
	if err := os.WriteFile(name, out.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	s, err := workbook.ReadSpreadsheet(name)
	if err != nil {
		t.Fatal(err)
	}
	sheets = map[string][]map[string]string{}
	for _, g := range s.Sheets {
		rows := rowsOf(g)
		for _, r := range rows[1:] {
			cells := map[string]string{}
			for i, v := range r {
				cells[rows[0][i]] = v
			}
			sheets[g.Name] = append(sheets[g.Name], cells)
		}
	}
	return name, sheets
}

// TestProposeIsRead reads every proposal back: nothing may be wrong with it but that it is not confirmed, and nothing may be imported by
// it.
func TestProposeIsRead(t *testing.T) {
	folders, err := filepath.Glob(filepath.Join(importFolder, "*", "theirs"))
	if err != nil || len(folders) < 14 {
		t.Fatalf("%d folders, %v", len(folders), err)
	}
	for _, theirs := range append(folders, ownList) {
		t.Run(filepath.Base(filepath.Dir(theirs)), func(t *testing.T) {
			name, sheets := proposed(t, theirs)
			if len(sheets["Sources"]) == 0 || len(sheets["Columns"]) < 3 {
				t.Fatalf("%d sources, %d columns", len(sheets["Sources"]), len(sheets["Columns"]))
			}
			for _, c := range sheets["Columns"] {
				if c["Confirmed"] != "" {
					t.Errorf("%s is confirmed by the program: %q", c["Theirs"], c["Confirmed"])
				}
			}
			m, err := ReadMapping(name)
			if err != nil {
				t.Fatal(err)
			}
			r := m.Import(theirFiles(t, theirs))
			if len(r.Made) > 0 {
				t.Errorf("%d rows were made by a mapping that nobody confirmed", len(r.Made))
			}
			for i := range r.Problems {
				e := &r.Problems[i]
				if e.Level == cell.Fault && !strings.Contains(e.Msg, "is not confirmed") && !strings.HasPrefix(e.Msg, "has no confirmed row") && e.At.Sheet != "Sources" {
					t.Errorf("the proposal is at fault: %s", e.Error())
				}
			}
		})
	}
}

// TestPropose looks at proposals for single headings.
func TestPropose(t *testing.T) {
	for _, c := range []struct {
		folder, theirs, place, unit, question string // place: Sheet › Column › Part
	}{
		{"wide-rows", "Recipe", "Products › Product › ", "", ""},
		{"wide-rows", "Tray depth (mm)", "Products › Thickness › ", "", ""},
		{"wide-rows", "Oven (°C)", "Steps › Temperature › oven", "", ""},
		{"wide-rows", "Oven time (min)", "Steps › Duration › oven", "", ""},
		{"wide-rows", "Kind", " ›  › ", "", ""},
		{"two-heading-rows", "Size › Height mm", "Products › Thickness › ", "mm", ""},
		{"two-heading-rows", "Bake › °C", "Steps › Temperature › bake", "°C", ""},
		{"two-heading-rows", "Store › h", "Steps › Duration › store", "h", ""},
		{"two-heading-rows", "Cool in spiral › °C", " ›  › ", "", "A temperature: of what, and of which step?"},
		{"german", "Höhe (cm)", "Products › Thickness › ", "", ""},
		{"german", "Garzeit (min)", "Steps › Duration › gar", "", ""},
		{"french", "Durée de refroidissement (h)", "Steps › Duration › refroidissement", "", ""},
		{"polish", "Czas pieczenia (min)", "Steps › Duration › pieczenia", "", ""},
		{"fahrenheit-inches", "Cooler °F", "Products › Start temperature › ", "°F", ""},
		{"transposed", "Batch", "Products › Volume › ", "L", ""},
		{"times", "Cook", "Steps › Duration › cook", "", ""},
		{"times", "Rest", "Steps › Duration › rest", "", ""},
		{"times", "Cool", " ›  › ", "", "A time: of which step?"},
		{"text-numbers", "Chiller", "Steps › Temperature › chiller", "", ""},
		{"text-numbers", "Minutes in chiller", " ›  › ", "", "A time: of which step?"},
		{"several-files", "Name", "Foods › Food › ", "", ""},
		{"totals-and-notes", "Dish", "Products › Product › ", "", `Is "Subtotal", "Total" a total?`},
		{"blocks", "Diameter (mm)", "Products › Diameter › ", "", ""},
		{"blocks", "=C+5", "Steps › Duration › water bath", "Minutes", ""},
		{"sheet-each", "Height (mm)", "Products › Thickness › ", "", ""},
		{"sheet-each", "{sheet}", "Products › Product › ", "", ""},
	} {
		t.Run(c.folder+" "+c.theirs, func(t *testing.T) {
			_, sheets := proposed(t, filepath.Join(importFolder, c.folder, "theirs"))
			for _, row := range sheets["Columns"] {
				if row["Theirs"] != c.theirs {
					continue
				}
				if got := row["Sheet"] + " › " + row["Column"] + " › " + row["Part"]; got != c.place || row["Unit"] != c.unit {
					t.Errorf("proposed %q in %q, want %q in %q", got, row["Unit"], c.place, c.unit)
				}
				if !strings.HasPrefix(row["Question"], c.question) || c.question == "" && row["Question"] != "" {
					t.Errorf("question %q, want %q", row["Question"], c.question)
				}
				return
			}
			t.Errorf("no row for %s in %v", c.theirs, sheets["Columns"])
		})
	}
}

// TestProposeLayout looks at the layouts that are proposed.
func TestProposeLayout(t *testing.T) {
	for folder, want := range map[string]string{"wide-rows": "rows 3 ", "two-heading-rows": "rows 3-4 ", "transposed": "columns A C", "blocks": "blocks Product sheet ", "sheet-each": "sheet - ",
		"german": "rows 2 ", "polish": "rows 1 ", "totals-and-notes": "rows 1 ", "text-numbers": "rows 1 ", "several-files": "rows 1 "} {
		t.Run(folder, func(t *testing.T) {
			_, sheets := proposed(t, filepath.Join(importFolder, folder, "theirs"))
			var got []string
			for _, s := range sheets["Sources"] {
				got = append(got, s["Layout"]+" "+s["Heading"]+" "+s["First"])
			}
			got = slices.DeleteFunc(got, func(g string) bool { return folder == "sheet-each" && g == "rows 1 " }) // the sheet that is no card
			if got = slices.Compact(got); len(got) != 1 || got[0] != want {
				t.Errorf("proposed %q, want %q", got, want)
			}
		})
	}
}

// TestProposeCards has cards whose labels end in a colon, beside a name of the product and a time that no step is named for.
func TestProposeCards(t *testing.T) {
	card := func(name, product string) *workbook.Grid {
		return gridOf(name, "Product: | "+product+"\nBase: | mash\nDepth (cm): | 4\nTime (h): | 6")
	}
	var out bytes.Buffer
	p := &proposal{rows: map[string][]map[string]string{}, taken: map[string]bool{}}
	if err := p.file(fileOf("Cards.xlsx", card("P1", "Mash"), card("P2", "Champ"))); err != nil {
		t.Fatal(err)
	}
	for _, row := range p.rows["Columns"] {
		out.WriteString(strings.Join([]string{row["Theirs"], row["Sheet"], row["Column"], row["Unit"], row["Question"]}, " | ") + "\n")
	}
	want := "{sheet} |  |  |  | \nProduct: | Products | Product |  | \nBase: | Products | Food |  | \nDepth (cm): | Products | Thickness |  | \n" +
		"Time (h): | Steps | Duration |  | Of which step? Name it in Part.\n"
	if out.String() != want {
		t.Errorf("proposed\n%swant\n%s", out.String(), want)
	}
}

// TestProposeAsks holds that numbers without a unit stay a question, whatever their size.
func TestProposeAsks(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "List.csv"), []byte("Dish,Depth,Start,Oven,Oven temperature,Chill time\nPie,40,8,180,180,90\nMash,35,6,350,350,120\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	_, sheets := proposed(t, dir)
	for i, want := range []string{"", "length in m, mm, cm, in or ft? Nothing in the sheet says it: fill Unit.", "temperature in °C or °F? Nothing in the sheet says it: fill Unit.",
		"Of the step oven a temperature, in °C or °F, or a time, in min or h? Nothing in the sheet says it.", "temperature in °C or °F? Nothing in the sheet says it: fill Unit.",
		"duration in s, min, h, d, h:mm or mm:ss? Nothing in the sheet says it: fill Unit."} {
		row := sheets["Columns"][i]
		if row["Question"] != want || row["Unit"] != "" {
			t.Errorf("%s: question %q and unit %q, want %q", row["Theirs"], row["Question"], row["Unit"], want)
		}
	}
}
