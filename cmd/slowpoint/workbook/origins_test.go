package workbook

import (
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"slowpoint/model/cell"
)

// TestChecksum holds the checksum to figures from outside this program: the first is the start value of FNV-1a 32 as its authors publish
// it (Fowler, Noll, Vo; draft-eastlake-fnv), the others come from the same published recurrence written in another language.
func TestChecksum(t *testing.T) {
	for _, c := range []struct {
		name  string
		cells []Filled
		want  string
	}{
		{"nothing", nil, "811c9dc5"},
		{"words and numbers", []Filled{{"Product", "Lasagne", false}, {"Thickness (mm)", "45", true}, {"Start temperature (°C)", "5.5", true}}, "38780e22"},
		{"spellings of a number", []Filled{{"Product", "Lasagne", false}, {"Thickness", "4.5E1", true}, {"Start temperature", "5.50000000000000001", true}}, "3eb98dc5"},
		{"user's own columns and blanks", []Filled{{"#Shelf", "B", false}, {"Product", " Lasagne ", false}, {"Note", "", false}, {"Thickness", "45", true}, {"Start temperature", "5.5", true}, {"#From", "x", false}}, "3eb98dc5"},
		{"percent", []Filled{{"Water (%)", "60,5", false}}, "b697eca0"},
		{"another script", []Filled{{"Product", "Z\u0307urek", false}, {"Thickness (mm)", "1 1/2 in", false}}, "5991cb59"},
	} {
		if got := Checksum(c.cells); got != c.want {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
	}
	if Checksum([]Filled{{"Product", "a", false}, {"Note", "b", false}}) == Checksum([]Filled{{"Product", "a", false}, {"Family", "b", false}}) {
		t.Error("another column gives the same checksum")
	}
	if Checksum([]Filled{{"Thickness (mm)", "2", true}}) == Checksum([]Filled{{"Thickness (in)", "2", true}}) {
		t.Error("another unit gives the same checksum")
	}
}

const (
	recipesDigest = "5f2b51ca0b1ca2d1f1d1b6d9a3c5e7f90123456789abcdef0123456789abcdef"
	cardsDigest   = "00ff51ca0b1ca2d1f1d1b6d9a3c5e7f90123456789abcdef0123456789abcdef"
	mapDigest     = "abcd51ca0b1ca2d1f1d1b6d9a3c5e7f90123456789abcdef0123456789abcdef"
)

// stamped is what stands in #From behind a row: where it is from, with the checksum of its cells.
func stamped(from string, header, row []any) string {
	var cells []Filled
	for i, v := range row {
		if v != nil {
			_, text := v.(string)
			cells = append(cells, Filled{Heading: header[i].(string), Text: fmt.Sprint(v), Number: !text})
		}
	}
	return from + " · " + Checksum(cells)
}

// made is a plan as the import writes it: the sheets in order, each with its rows, the headings first. The last cell of a row of
// Products and Steps is where it is from, without the checksum.
type made struct {
	order []string
	rows  map[string][][]any
}

func madePlan() *made {
	m := &made{[]string{"Products", "Foods", "Steps", "Origins", "Left out", "Changes"}, map[string][][]any{
		"Products": {
			{"Product", "Process", "Shape", "Thickness (mm)", "Diameter (mm)", "Food", "Start temperature (°C)", FromHeading},
			{"Lasagne", "Tray", "slab", 45.5, nil, "Mash", 5.0, "Recipes.xlsx › Cook-chill row 17"},
			{"Pie", "Tray", "slab", "3 cm", nil, "Mash", 6.0, "Recipes.xlsx › Cook-chill row 18"},
			{"Ball", "Tray", "sphere", nil, 60.0, "Mash", 7.0, "Recipes.xlsx › my row 5 part 2 column F"},
			{"Roll", "Tray", "cylinder", nil, 61.0, "Mash", 7.0, "Cards.xlsx › Cards row 31"},
			{"Loaf", "Tray", "slab", 46.0, nil, "Mash", 8.0, "Cards.xlsx › Loaf sheet"},
			{"Stick", "Tray", "cylinder", nil, 25.0, "Mash", 9.0, "list.csv row 4"},
			{"Typed", "Tray", "slab", 20.0, nil, "Mash", 9.5, nil},
		},
		"Foods": {
			{"Food", "Conductivity (W/m·K)", "Density (kg/m³)", "Specific heat (J/kg·K)", "Freezing point (°C)", "Source"},
			{"Mash", 0.47, 1050.0, 3500.0, -1.0, "own measurement"},
		},
		"Steps": {
			{"Process", "Step", "Stage", "Duration (min)", "Surroundings", "Temperature (°C)", "Film coefficient (W/m²·K)", FromHeading},
			{"Tray", "oven", "cook", 90.0, "film", 100.0, 20.5, "Recipes.xlsx › Cook-chill row 17 part oven"},
			{"Tray", "blast", "cool", 120.0, "film", 2.0, 15.5, "Recipes.xlsx › Cook-chill row 17 part blast"},
		},
		"Origins": {
			{"File", "SHA-256", "Their sheet", "Sheet", "Part", "Column", "Place"},
			{"Recipes-map.xlsx", mapDigest, nil, "-", nil, "-", "map"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Product", "B"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Thickness", "F"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Process", "{sheet}"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Shape", "map: Constants!E4"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Food", "C by Words"},
			{"Cards.xlsx", cardsDigest, "Loaf", "Products", nil, "Food", "B7 by Words"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Steps", "oven", "Duration", "J"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Steps", "blast", "Duration", "M"},
			{"Recipes.xlsx", recipesDigest, "Cook-chill", "Steps", nil, "Process", "A"},
			{"Recipes.xlsx", recipesDigest, "my row 5 part 2", "Products", nil, "Diameter", "12"},
			{"Cards.xlsx", cardsDigest, "Cards", "Products", nil, "Diameter", "C+3"},
			{"Cards.xlsx", cardsDigest, "Loaf", "Products", nil, "Thickness", "B5"},
			{"list.csv", strings.ToUpper(cardsDigest), nil, "Products", nil, "Diameter", "AB"},
			{"list.csv", cardsDigest, nil, "Products", nil, "Process", "{file}"},
		},
		"Left out": {{"File", "Sheet", "Place", "Reason"}, {"Recipes.xlsx", "Cook-chill", "row 60", "a total"}},
		"Changes":  {{"Product", "What", "Before", "Now", "Cell"}, {"Pie", "new", nil, nil, "Recipes.xlsx › Cook-chill row 18"}},
	}}
	for _, s := range []string{"Products", "Steps"} {
		rows := m.rows[s]
		for _, row := range rows[1:] {
			if last := len(row) - 1; row[last] != nil {
				row[last] = stamped(row[last].(string), rows[0], row[:last])
			}
		}
	}
	return m
}

// set changes a cell; row and column count from 1.
func (m *made) set(sheet string, row, col int, v any) { m.rows[sheet][row-1][col-1] = v }

// workbook writes it as a workbook.
func (m *made) workbook(t *testing.T) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	for _, s := range m.order {
		if _, err := f.NewSheet(s); err != nil {
			t.Fatal(err)
		}
		for i := range m.rows[s] {
			at, _ := excelize.CoordinatesToCellName(1, i+1)
			if err := f.SetSheetRow(s, at, &m.rows[s][i]); err != nil {
				t.Fatal(err)
			}
		}
	}
	f.DeleteSheet("Sheet1")
	name := filepath.Join(t.TempDir(), "Recipes-plan.xlsx")
	if err := f.SaveAs(name); err != nil {
		t.Fatal(err)
	}
	return name
}

// folder writes it as CSV files.
func (m *made) folder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for _, s := range m.order {
		var b strings.Builder
		w := csv.NewWriter(&b)
		for _, row := range m.rows[s] {
			line := make([]string, len(row))
			for i, v := range row {
				if v != nil {
					line[i] = fmt.Sprint(v)
				}
			}
			w.Write(line)
		}
		w.Flush()
		if err := os.WriteFile(filepath.Join(dir, s+".csv"), []byte(b.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

func (m *made) read(t *testing.T, asFolder bool) *Plan {
	t.Helper()
	name := ""
	if asFolder {
		name = m.folder(t)
	} else {
		name = m.workbook(t)
	}
	p, err := Read(name)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// TestOrigins: each cell of a made row leads to the cell of their file, in every layout.
func TestOrigins(t *testing.T) {
	for _, asFolder := range []bool{false, true} {
		p := madePlan().read(t, asFolder)
		if len(p.Problems) > 0 || len(p.Products) != 7 || p.NotImported != 0 {
			t.Fatalf("folder %v: %d products, %v", asFolder, len(p.Products), p.Problems)
		}
		want := []Source{{"Recipes-map.xlsx", mapDigest}, {"Recipes.xlsx", recipesDigest}, {"Cards.xlsx", cardsDigest}, {"list.csv", cardsDigest}}
		if fmt.Sprint(p.Sources) != fmt.Sprint(want) {
			t.Errorf("sources %v, want %v", p.Sources, want)
		}
		for _, c := range []struct{ name, at, want string }{
			{"a column of theirs", "Products D2", "Recipes.xlsx › Cook-chill!F17"},
			{"the next row", "Products D3", "Recipes.xlsx › Cook-chill!F18"},
			{"the row", "Products -2", "Recipes.xlsx › Cook-chill row 17"},
			{"a column that is not told", "Products G2", "Recipes.xlsx › Cook-chill row 17"},
			{"by a word", "Products F2", "Recipes.xlsx › Cook-chill!C17, by a word of the mapping"},
			{"a cell by a word", "Products F6", "Cards.xlsx › Loaf!B7, by a word of the mapping"},
			{"a constant", "Products C2", "Recipes-map.xlsx › Constants!E4"},
			{"the sheet's name", "Products B3", "Recipes.xlsx › Cook-chill"},
			{"transposed, the sheet named like a row", "Products E4", "Recipes.xlsx › my row 5 part 2!F12"},
			{"a transposed record", "Products -4", "Recipes.xlsx › my row 5 part 2 column F"},
			{"a block", "Products E5", "Cards.xlsx › Cards!C34"}, // 31 + 3
			{"one sheet a record", "Products D6", "Cards.xlsx › Loaf!B5"},
			{"such a record", "Products -6", "Cards.xlsx › Loaf"},
			{"CSV", "Products E7", "list.csv!AB4"},
			{"the file's name", "Products B7", "list.csv"},
			{"a row of the user's own", "Products D8", ""},
			{"a part", "Steps D2", "Recipes.xlsx › Cook-chill!J17"},
			{"another part", "Steps D3", "Recipes.xlsx › Cook-chill!M17"},
			{"a column of all parts", "Steps A3", "Recipes.xlsx › Cook-chill!A17"},
			{"the headings", "Products D1", ""},
			{"a sheet without #From", "Foods B2", ""},
		} {
			at := refOf(t, c.at)
			if got := p.Locate(cell.Error{At: at}).From; got != c.want {
				t.Errorf("folder %v, %s: %s comes from %q, want %q", asFolder, c.name, c.at, got, c.want)
			}
		}
	}
}

// refOf reads "Products D2", or "Products -2" for the whole row.
func refOf(t *testing.T, s string) cell.Ref {
	t.Helper()
	sheet, at, _ := strings.Cut(s, " ")
	if row, ok := strings.CutPrefix(at, "-"); ok {
		r := cell.Ref{Sheet: sheet}
		fmt.Sscan(row, &r.Row)
		return r
	}
	col, row, err := excelize.CellNameToCoordinates(at)
	if err != nil {
		t.Fatal(err)
	}
	return cell.Ref{Sheet: sheet, Row: row, Col: col}
}

// TestOriginsOfReadings: the input echo tells where a value comes from, and of a default nothing.
func TestOriginsOfReadings(t *testing.T) {
	p := madePlan().read(t, false)
	got := map[string]string{}
	for _, r := range p.Products[0].Readings() {
		got[r.At.String()] = r.Where()
	}
	for at, want := range map[string]string{
		"Products!D2": "Products!D2 (Recipes.xlsx › Cook-chill!F17)",
		"Products!G2": "Products!G2", // a column that the sheet Origins does not tell
		"Steps!D3":    "Steps!D3 (Recipes.xlsx › Cook-chill!M17)",
		"Foods!B2":    "Foods!B2",
	} {
		if got[at] != want {
			t.Errorf("%s is told as %q, want %q", at, got[at], want)
		}
	}
}

// TestOriginsOfProblems: a message names the cell of their file; of a product that is not calculated too.
func TestOriginsOfProblems(t *testing.T) {
	m := madePlan()
	bad := []any{"Cake", "Tray", "slab", "thick", nil, "Mash", 5.0}
	m.rows["Products"] = append(m.rows["Products"], append(bad, stamped("Recipes.xlsx › Cook-chill row 40", m.rows["Products"][0], bad)))
	p := m.read(t, false)
	want := `Products!D9 (Recipes.xlsx › Cook-chill!F40): "thick"`
	if len(p.Problems) != 1 || !strings.HasPrefix(p.Problems[0].Error(), want) {
		t.Errorf("%v, want %s …", p.Problems, want)
	}
	if len(p.NotCalculated) != 1 || !strings.HasPrefix(p.NotCalculated[0].Because[0].Error(), want) {
		t.Errorf("%v, want %s …", p.NotCalculated, want)
	}
}

// TestEditedAfterImport: a change of any cell of a row is told with all its cells; what does not change a value is not.
func TestEditedAfterImport(t *testing.T) {
	was := "Recipes.xlsx › Cook-chill!F17"
	edited := "edited after import; was " + was
	for _, c := range []struct {
		name   string
		change func(m *made)
		want   string
	}{
		{"untouched", func(m *made) {}, was},
		{"the value itself", func(m *made) { m.set("Products", 2, 4, 50.0) }, edited},
		{"another value of the row", func(m *made) { m.set("Products", 2, 7, 4.0) }, edited},
		{"a number as text", func(m *made) { m.set("Products", 2, 4, "45.5 mm") }, edited},
		{"a blank cell filled", func(m *made) { m.set("Products", 2, 5, 12.0) }, edited},
		{"another row", func(m *made) { m.set("Products", 3, 4, 50.0) }, was},
		{"a column of the user's own", func(m *made) {
			for i, row := range m.rows["Products"] {
				m.rows["Products"][i] = append(row, []any{"#Shelf", i}[min(i, 1)])
			}
		}, was},
		{"the row moved", func(m *made) { // its anchor moves with it
			rows := m.rows["Products"]
			rows[1], rows[2] = rows[2], rows[1]
		}, "Recipes.xlsx › Cook-chill!F18"},
	} {
		m := madePlan()
		c.change(m)
		p := m.read(t, false)
		if got := p.origins.of(refOf(t, "Products D2")); got != c.want {
			t.Errorf("%s: from %q, want %q", c.name, got, c.want)
		}
	}
}

// TestDamagedOrigins: whatever becomes of the sheet, the plan is calculated, one warning tells of it, and what still can be told is.
func TestDamagedOrigins(t *testing.T) {
	for _, c := range []struct {
		name, at, says string
		change         func(m *made)
		thickness      string // where Products D2 is from
	}{
		{"no headings", "Origins", "no longer a row with all its headings", func(m *made) { m.rows["Origins"] = m.rows["Origins"][1:] }, ""},
		{"a digest cut short", "Origins row 4", "The SHA-256 of row 4 is no digest", func(m *made) { m.set("Origins", 4, 2, "5f2b") }, "Recipes.xlsx › Cook-chill row 17"},
		{"no file", "Origins row 4", "Row 4 has no File", func(m *made) { m.set("Origins", 4, 1, nil) }, "Recipes.xlsx › Cook-chill row 17"},
		{"an unknown sheet", "Origins row 4", `Row 4 names the sheet "Recipes"`, func(m *made) { m.set("Origins", 4, 4, "Recipes") }, "Recipes.xlsx › Cook-chill row 17"},
		{"an unknown column", "Origins row 4", `Row 4 names the column "Hight"`, func(m *made) { m.set("Origins", 4, 6, "Hight") }, "Recipes.xlsx › Cook-chill row 17"},
		{"a place in words", "Origins row 4", `The place "to the left" of row 4`, func(m *made) { m.set("Origins", 4, 7, "to the left") }, "Recipes.xlsx › Cook-chill row 17"},
		{"several rows", "Origins row 3", "(and 1 more, down to row 7)", func(m *made) {
			m.set("Origins", 3, 7, "?")
			m.set("Origins", 7, 7, "+3")
		}, "Recipes.xlsx › Cook-chill!F17"},
		{"#From in other words", "Products!H2", "leads to no origin", func(m *made) { m.set("Products", 2, 8, "from the blue folder") }, ""},
		{"#From without its checksum", "Products!H2", "leads to no origin", func(m *made) { m.set("Products", 2, 8, "Recipes.xlsx › Cook-chill row 17") }, ""},
		{"#From of an unknown sheet", "Products!H2", "leads to no origin", func(m *made) { m.set("Products", 2, 8, "Recipes.xlsx › Grill row 17 · 0123abcd") }, ""},
		{"the mapping is not told", "", "", func(m *made) { m.rows["Origins"] = append(m.rows["Origins"][:1:1], m.rows["Origins"][2:]...) }, "Recipes.xlsx › Cook-chill!F17"},
		{"a column in the row of a column", "", "", func(m *made) { m.set("Origins", 4, 7, "12") }, "Recipes.xlsx › Cook-chill row 17"},
	} {
		for _, asFolder := range []bool{false, true} {
			m := madePlan()
			c.change(m)
			p := m.read(t, asFolder)
			if len(p.Products) != 7 || p.Problems.Faults() > 0 {
				t.Errorf("%s: %d products, %v", c.name, len(p.Products), p.Problems)
			}
			if c.says == "" && len(p.Problems) > 0 {
				t.Errorf("%s: %v", c.name, p.Problems)
			}
			if c.says != "" && (len(p.Problems) != 1 || p.Problems[0].Level != cell.Warning || p.Problems[0].At.String() != c.at || !strings.Contains(p.Problems[0].Error(), c.says)) {
				t.Errorf("%s: %v, want a warning at %s that says %s", c.name, p.Problems, c.at, c.says)
			}
			if got := p.origins.of(refOf(t, "Products D2")); got != c.thickness {
				t.Errorf("%s: from %q, want %q", c.name, got, c.thickness)
			}
		}
	}
}

// TestNotImported: rows that the import could not take are counted once, however many faults they have.
func TestNotImported(t *testing.T) {
	heads := []any{"File", "Sheet", "Place", "Record", "Column", "Typed", "Why", "How to mend"}
	for _, c := range []struct {
		name string
		rows [][]any
		want int
		says string
	}{
		{"none", [][]any{heads}, 0, ""},
		{"one with two faults", [][]any{heads, {"R.xlsx", "A", "F4", "Stew", "Thickness", "thick", "no number", nil}, {"R.xlsx", "A", "G4", "Stew", "Shape", "flat", "no word", nil}}, 1,
			"1 row of the spreadsheets was not imported; see the sheet Not imported"},
		{"names that repeat in another sheet, and none", [][]any{heads, {"R.xlsx", "A", "F4", "Stew", nil, nil, "w", nil}, {"R.xlsx", "B", "F4", "Stew", nil, nil, "w", nil}, {"R.xlsx", "B", "row 9", nil, nil, nil, "w", nil}}, 3,
			"3 rows of the spreadsheets were not imported; see the sheet Not imported"},
		{"told by #From", [][]any{append(heads[:8:8], FromHeading), {"R.xlsx", "A", "B4", "Stew", nil, nil, "twice", nil, "R.xlsx › A row 4"}, {"R.xlsx", "A", "B5", "Stew", nil, nil, "twice", nil, "R.xlsx › A row 5"}}, 2,
			"2 rows of the spreadsheets were not imported; see the sheet Not imported"},
	} {
		m := madePlan()
		m.order = append(m.order, "Not imported")
		m.rows["Not imported"] = c.rows
		p := m.read(t, false)
		if p.NotImported != c.want {
			t.Errorf("%s: %d rows, want %d", c.name, p.NotImported, c.want)
		}
		if c.want == 0 && len(p.Problems) > 0 || c.want > 0 && (len(p.Problems) != 1 || p.Problems[0].Level != cell.Warning || p.Problems[0].Msg != c.says) {
			t.Errorf("%s: %v, want %q", c.name, p.Problems, c.says)
		}
	}
}

// TestWithoutOrigins: a plan that was typed is read as ever, with sheets of such names of its own and with a column #From of its own.
func TestWithoutOrigins(t *testing.T) {
	m := madePlan()
	m.order = []string{"Products", "Foods", "Steps", "Changes"}
	p := m.read(t, false)
	if len(p.Problems) != 1 || !strings.Contains(p.Problems[0].Msg, unknownSheet.msg) || p.Problems[0].At.Sheet != "Changes" {
		t.Errorf("%v, want the sheet Changes to be unknown", p.Problems)
	}
	if p.origins != nil || len(p.Sources) > 0 || p.Products[0].Readings()[0].From != "" {
		t.Errorf("sources %v", p.Sources)
	}
}

// countedPlan is madePlan with the rows counted, and with a limit that was copied from the mapping.
func countedPlan() *made {
	m := madePlan()
	m.order = append(m.order, "Limits")
	head := []any{"Limit", "Rule", "Stage", "Applies to", "From (°C)", "Time (min)", "Counting", "Code", "Clause", "Edition", FromHeading}
	m.rows["Limits"] = [][]any{head}
	for i, name := range []string{"Hot", "Hotter"} {
		row := []any{name, "hold", "cook", "all", 70.0 + float64(i), 2.0, "total", "House rules", "4", "2026"}
		m.rows["Limits"] = append(m.rows["Limits"], append(row, stamped(fmt.Sprintf("Recipes-map.xlsx › Limits row %d", 2+i), head, row)))
	}
	for i, row := range m.rows["Origins"] {
		var n any
		switch of := fmt.Sprint(row[2], row[3], row[4]); {
		case i == 0:
			n = "Rows"
		case of == "Cook-chillProducts<nil>":
			n = "2"
		case of == "Cook-chillStepsoven" || of == "Cook-chillStepsblast":
			n = 1.0
		}
		m.rows["Origins"][i] = append(row, n)
	}
	m.rows["Origins"] = append(m.rows["Origins"], []any{"Recipes-map.xlsx", mapDigest, "Limits", "Limits", nil, "Limit", "A", "2"})
	return m
}

// TestRowsGone: rows of the import that somebody took out of the plan are told, and rows that somebody added.
func TestRowsGone(t *testing.T) {
	drop := func(m *made, sheet string, row int) {
		m.rows[sheet] = append(m.rows[sheet][:row-1:row-1], m.rows[sheet][row:]...)
	}
	for _, c := range []struct {
		name   string
		change func(m *made)
		level  cell.Level
		want   []string // beside the note of the row of Products that was typed
	}{
		{"as it was made", func(m *made) {}, 0, nil},
		{"a step", func(m *made) { drop(m, "Steps", 3) }, cell.Warning, []string{"Steps: 1 row of Steps that the import made is gone: 1 of Recipes.xlsx › Cook-chill part blast – "}},
		{"a limit of the mapping", func(m *made) { drop(m, "Limits", 3) }, cell.Warning, []string{"Limits: 1 row of Limits that the import made is gone: 1 of Recipes-map.xlsx › Limits – "}},
		{"all limits", func(m *made) { drop(m, "Limits", 3); drop(m, "Limits", 2) }, cell.Warning, []string{"Limits: 2 rows of Limits that the import made are gone: 2 of Recipes-map.xlsx › Limits – "}},
		{"the sheet", func(m *made) { m.order = m.order[:len(m.order)-1] }, cell.Warning, []string{"Limits: 2 rows of Limits that the import made are gone: 2 of Recipes-map.xlsx › Limits – "}},
		{"products", func(m *made) { drop(m, "Products", 3); drop(m, "Products", 2) }, cell.Warning, []string{"Products: 2 rows of Products that the import made are gone: 2 of Recipes.xlsx › Cook-chill – "}},
		{"a row moved", func(m *made) {
			r := m.rows["Limits"]
			r[1], r[2] = r[2], r[1]
		}, 0, nil},
		{"a row copied over another", func(m *made) {
			again := append([]any(nil), m.rows["Limits"][1]...)
			again[0] = "Hot again"
			m.rows["Limits"][2] = again
		}, cell.Warning, []string{"Limits: 1 row of Limits that the import made is gone: 1 of Recipes-map.xlsx › Limits – ", "Limits row 3 (edited after import; was Recipes-map.xlsx › Limits row 2): The row was copied within the plan after the import"}},
		{"rows added", func(m *made) {
			for _, name := range []string{"Own", "Own too"} {
				m.rows["Limits"] = append(m.rows["Limits"], []any{name, "hold", "cook", "all", 75.0, 2.0, "total", "House rules", "5", "2026"})
			}
		}, cell.Note, []string{"Limits row 4: The row was added after the import (and 1 more, down to row 5) – "}},
		{"the column #From", func(m *made) {
			for i := range m.rows["Limits"] {
				m.rows["Limits"][i] = m.rows["Limits"][i][:10]
			}
		}, cell.Warning, []string{"Limits: The column #From, which the import made, is gone"}},
		{"#From spoilt", func(m *made) { m.set("Limits", 3, 11, "from the blue folder") }, cell.Warning, []string{"Limits!K3: \"from the blue folder\" leads to no origin"}},
		{"the decimal sign, which the import adds", func(m *made) {
			m.order = append([]string{"Plan"}, m.order...)
			row := []any{"Site", "Kitchen"}
			head := []any{"Item", "Value", FromHeading}
			m.rows["Plan"] = [][]any{head, append(row, stamped("Recipes-map.xlsx › Limits row 9", head, row)), {"Decimal sign", "point"}}
		}, 0, nil},
		{"a number of rows in words", func(m *made) { m.set("Origins", 8, 8, "one") }, cell.Warning, []string{"Origins row 8: The number \"one\" under Rows of row 8 is no number of rows"}},
	} {
		for _, asFolder := range []bool{false, true} {
			m := countedPlan()
			c.change(m)
			var got []string
			for _, e := range m.read(t, asFolder).Problems {
				if at := e.At.String(); !strings.HasPrefix(at, "Products row") {
					got = append(got, e.Error())
					if len(got) == 1 && e.Level != c.level {
						t.Errorf("%s: %v is a %s", c.name, e, e.Level)
					}
				} else if e.Level != cell.Note || !strings.Contains(e.Msg, "added after the import") {
					t.Errorf("%s: %v", c.name, e)
				}
			}
			same := len(got) == len(c.want)
			for i := range got {
				same = same && strings.HasPrefix(got[i], c.want[i])
			}
			if !same {
				t.Errorf("%s, folder %v: %q, want %q", c.name, asFolder, got, c.want)
			}
		}
	}
}
