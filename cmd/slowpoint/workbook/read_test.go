package workbook

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"

	"github.com/xuri/excelize/v2"
)

// manyProducts writes a plan of n products with a process of five steps each, and a limit for all of them.
func manyProducts(t testing.TB, n int) string { return many(t, n, false) }

// many is manyProducts; imported: with the origins of the rows of Products and Steps, as the import writes them.
func many(t testing.TB, n int, imported bool) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	sheet := func(name string, header []any, rows func(put func(...any))) {
		if _, err := f.NewSheet(name); err != nil {
			t.Fatal(err)
		}
		w, err := f.NewStreamWriter(name)
		if err != nil {
			t.Fatal(err)
		}
		row := 1
		put := func(v ...any) {
			switch made := imported && (name == "Products" || name == "Steps"); {
			case made && row == 1:
				v = append(v, FromHeading)
			case made:
				v = append(v, stamped(fmt.Sprintf("Recipes.xlsx › Cook-chill row %d part %v", row, v[2]), header, v))
			}
			name, _ := excelize.CoordinatesToCellName(1, row)
			if err := w.SetRow(name, v); err != nil {
				t.Fatal(err)
			}
			row++
		}
		put(header...)
		rows(put)
		if err := w.Flush(); err != nil {
			t.Fatal(err)
		}
	}
	sheet("Products", []any{"Product", "Family", "Process", "Shape", "Thickness (mm)", "Food", "Start temperature (°C)"}, func(put func(...any)) {
		for i := range n {
			put(fmt.Sprintf("Product %d", i), "trays", fmt.Sprintf("Process %d", i), "slab", 30+float64(i%40), "Mash", 5.5)
		}
	})
	sheet("Foods", []any{"Food", "Conductivity (W/m·K)", "Density (kg/m³)", "Specific heat (J/kg·K)", "Freezing point (°C)", "Source"}, func(put func(...any)) {
		put("Mash", 0.47, 1050, 3500, -1, "own measurement")
	})
	sheet("Steps", []any{"Process", "Step", "Stage", "Duration (min)", "Surroundings", "Temperature (°C)", "Film coefficient (W/m²·K)", "Equipment"}, func(put func(...any)) {
		stages := []string{"cook", "rest", "cool", "store", "reheat"}
		for i := range n {
			for j, s := range stages {
				put(fmt.Sprintf("Process %d", i), s, s, 60+float64(j), "film", []float64{100, 20, 2, 3, 90}[j], 20.5, "oven 1")
			}
		}
	})
	sheet("Limits", []any{"Limit", "Rule", "Stage", "Applies to", "From (°C)", "Time (min)", "Counting", "Code", "Clause", "Edition"}, func(put func(...any)) {
		for i := range 6 {
			put(fmt.Sprintf("Limit %d", i), "hold", "cook", "all", 60+i, 2, "total", "House rules", fmt.Sprint(i), "2026")
		}
	})
	if imported {
		sheet("Origins", []any{"File", "SHA-256", "Their sheet", "Sheet", "Part", "Column", "Place"}, func(put func(...any)) {
			put("Recipes.xlsx", recipesDigest, "Cook-chill", "Products", nil, "Thickness", "F")
			put("Recipes.xlsx", recipesDigest, "Cook-chill", "Steps", "cook", "Duration", "H")
		})
	}
	f.DeleteSheet("Sheet1")
	name := filepath.Join(t.TempDir(), "many.xlsx")
	if err := f.SaveAs(name); err != nil {
		t.Fatal(err)
	}
	return name
}

// BenchmarkRead1000 reads 1,000 products with five steps each.
func BenchmarkRead1000(b *testing.B) {
	name := manyProducts(b, 1000)
	b.ReportAllocs()
	for b.Loop() {
		p, err := Read(name)
		if err != nil || len(p.Products) != 1000 || p.Problems.Faults() > 0 {
			b.Fatalf("%v, %d products, %v", err, len(p.Products), p.Problems[:min(3, len(p.Problems))])
		}
	}
}

// TestManyProducts reads 10,000 products with 50,000 steps: everything is there, and what stays in memory is bounded.
func TestManyProducts(t *testing.T) {
	if testing.Short() {
		t.Skip("a big workbook")
	}
	for _, imported := range []bool{false, true} {
		t.Run(map[bool]string{false: "typed", true: "imported"}[imported], func(t *testing.T) { readMany(t, imported) })
	}
}

func readMany(t *testing.T, imported bool) {
	name := many(t, 10_000, imported)
	var before, after runtime.MemStats
	runtime.GC()
	runtime.ReadMemStats(&before)
	p, err := Read(name)
	if err != nil {
		t.Fatal(err)
	}
	runtime.GC()
	runtime.ReadMemStats(&after)
	if len(p.Products) != 10_000 || len(p.Products[9999].Steps) != 5 || p.Problems.Faults() > 0 {
		t.Fatalf("%d products, %v", len(p.Products), p.Problems[:min(3, len(p.Problems))])
	}
	kept := float64(after.HeapAlloc-before.HeapAlloc) / (1 << 20)
	t.Logf("%.0f MB kept, %.0f MB of memory in all", kept, float64(after.Sys)/(1<<20))
	if kept > 80 {
		t.Errorf("%.0f MB kept", kept)
	}
	if got, want := p.origins.of(cell.Ref{Sheet: "Steps", Row: 49_997, Col: 4}), "Recipes.xlsx › Cook-chill!H49997"; imported && got != want { // 49,997 = 5 × 9,999 + 2: a cook
		t.Errorf("from %q, want %q", got, want)
	}
	runtime.KeepAlive(p)
}

// TestUnits: the same plan in other units and spellings is the same plan.
func TestUnits(t *testing.T) {
	read := func(text string) *Plan {
		t.Helper()
		name := filepath.Join(t.TempDir(), "plan.xlsx")
		newRecipe(t, text).workbook(t, name)
		p, err := Read(name)
		if err != nil {
			t.Fatal(err)
		}
		if p.Problems.Faults() > 0 {
			t.Fatal(p.Problems)
		}
		return p
	}
	stew := read("").Products[0]
	for _, c := range []struct{ name, change string }{
		{"inches in the heading", "set Products!E1 = Thickness (in)\nset Products!E2 = 1.5748031496062992\nset Products!E4 = 2"},
		{"inches in the cell", "set Products!E2 = '1.5748031496062992\""},
		{"centimetres in the cell", "set Products!E2 = '4 cm"},
		{"Fahrenheit", "set Products!J1 = Start temperature (°F)\nset Products!J2 = 41\nset Products!J3 = 41\nset Products!J4 = 40"},
		{"hours in the heading", "set Steps!E1 = Duration (h)\nset Steps!E2 = 1.5\nset Steps!E3 = '20 min\nset Steps!E4 = 5\nset Steps!E5 = 1"},
		{"clock format", "set Steps!E2 = 0.0625 as [h]:mm"},
		{"time of day format", "set Steps!E2 = 0.0625 as h:mm:ss"},
		{"hours and minutes in the cell", "set Steps!E2 = '1 h 30 min"},
		{"clock text under h:mm", "set Steps!E1 = Duration (h:mm)\nset Steps!E2 = '1:30\nset Steps!E3 = '0:20\nset Steps!E4 = '5:00\nset Steps!E5 = '1:00"},
		{"decimal comma", "set Products!E2 = '40,0"},
		{"decimal sign said", "row Plan = Decimal sign | comma\nset Products!E2 = '40,000"},
		{"spelling of a unit", "set Steps!J1 = film COEFFICIENT (W/(m2 K))"},
		{"case and blanks", "set Products!C2 = ' cook-CHILL \nset Products!I2 = MASH\nset Products!D2 = Slab"},
		{"1904", "1904\nset Steps!E2 = 0.0625 as [h]:mm"},
		{"formula with its result", "set Products!E2 = =8*5 -> 40"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := read(c.change).Products[0]
			if math.Abs(got.Size.ThicknessM-stew.Size.ThicknessM) > 1e-15 || math.Abs(got.StartC-stew.StartC) > 1e-12 {
				t.Errorf("%v, %g °C; want %v, %g °C", got.Size, got.StartC, stew.Size, stew.StartC)
			}
			if want := strings.Contains(c.name, "inch"); got.Inches != want {
				t.Errorf("to be shown in inches: %v, want %v", got.Inches, want)
			}
			for i := range stew.Steps {
				a, b := got.Steps[i], stew.Steps[i]
				if math.Abs(a.DurationS-b.DurationS) > 1e-9 || a.FilmW != nil && *a.FilmW != *b.FilmW {
					t.Errorf("step %d: %g s, want %g", i+1, a.DurationS, b.DurationS)
				}
			}
		})
	}
}

// TestPlan: what the sheets say arrives in the types of model and rules.
func TestPlan(t *testing.T) {
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	newRecipe(t, `row Plan = Altitude (m) | 1500 ft
row Plan = Paper | letter
row Plan = Show temperatures in | °F
set Steps!F2 = 72
row Steps = Cook-chill | Roll | Oven | cook | 45 | | film | 130 | | 30
row Faces = Cook-chill | Stew | Oven | top | film | 100 | 40
row Limits = Kills | lethality | cook | all | | 55 | | 2 | | | 70 | '13.5 °F
`).workbook(t, name)
	p, err := Read(name)
	if err != nil || p.Problems.Faults() > 0 {
		t.Fatal(err, p.Problems)
	}
	near := func(what string, got, want float64) {
		t.Helper()
		if math.Abs(got-want) > 1e-12*math.Max(1, math.Abs(want)) {
			t.Errorf("%s: %.17g, want %.17g", what, got, want)
		}
	}
	near("altitude", p.AltitudeM, 1500*0.3048)
	if p.Paper != "Letter" || !p.Fahrenheit || p.Name != "plan.xlsx" || len(p.SHA256) != 64 {
		t.Errorf("%q %v %q %q", p.Paper, p.Fahrenheit, p.Name, p.SHA256)
	}
	stew, roll, block := p.Products[0], p.Products[1], p.Products[2]
	near("until", *stew.Steps[0].UntilC, 72)
	near("altitude of a step", stew.Steps[2].AltitudeM, 1500*0.3048)
	if roll.Steps[0].DurationS != 45*60 || stew.Steps[0].DurationS != 90*60 || roll.Steps[1].Name != "Table" {
		t.Errorf("a row that names a product replaces its step alone: %g %g", roll.Steps[0].DurationS, stew.Steps[0].DurationS)
	}
	if len(stew.Steps[0].Faces) != 1 || stew.Steps[0].Faces[0].Face != model.Top || len(roll.Steps[0].Faces) != 0 {
		t.Error("a face of one product")
	}
	if block.Steps[0].Faces[0].Surface != model.Insulated || block.Steps[0].Surface != model.StirredWater || block.Steps[0].FilmW != nil {
		t.Error("surroundings of the block")
	}
	if c := stew.Steps[2].Medium; len(c.C) != 3 || c.TimesS[1] != 3600 || c.C[1] != 2 {
		t.Errorf("course %v", c)
	}
	near("point", block.Points[0].UpM, 0.010)
	near("point along", block.Points[0].AlongM, 0.005)
	near("conductivity", stew.Food.Props(20).KWmK, 0.5)
	hot, cold, again, kills := p.Limits[0], p.Limits[1], p.Limits[2], p.Limits[3]
	if hot.Kind != rules.Hold || hot.Applies.Family != "trays" || hot.Where.Name != "every point" || hot.Counting != rules.Total || hot.Typed["From"] != "70 °C" {
		t.Errorf("%+v", hot)
	}
	if !cold.Clock.Crossing || cold.Applies.Product != "Stew" || cold.Stages[0] != model.Cool || *cold.TimeS != 240*60 {
		t.Errorf("%+v", cold)
	}
	near("exact Fahrenheit of a table", again.Table.Rows[0].C, (130-32)/1.8)
	if again.Table.Rows[0].Typed != "130 °F, 112 min" || again.Table.Rows[1].S != 0 || again.Where.Name != "probe" || again.Group != "Reheat" {
		t.Errorf("%+v %+v", again, again.Table)
	}
	near("z", *kills.ZK, 13.5/1.8)
	if kills.Typed["z"] != "13.5 °F difference" || len(p.Groups) != 1 || !p.Groups[0].AnyOf {
		t.Errorf("%q %v", kills.Typed["z"], p.Groups)
	}
	echo := func(pr Product, at, column, typed, used string) {
		t.Helper()
		for _, r := range pr.Readings() {
			if r.At.String() == at && r.Column == column {
				if r.Typed != typed || r.Used != used {
					t.Errorf("%s: %q -> %q, want %q -> %q", at, r.Typed, r.Used, typed, used)
				}
				return
			}
		}
		t.Errorf("%s of %s is not in the echo", at, pr.Name)
	}
	echo(stew, "Products!E2", "Thickness", "40 mm", "0.04 m")
	echo(stew, "Foods!B2", "Conductivity", "0.5 W/m·K", "0.5 W/m·K")
	echo(stew, "Steps!E2", "Duration", "90 min", "5400 s")
	echo(roll, "Steps!E6", "Duration", "45 min", "2700 s")
	echo(stew, "Courses!C3", "Temperature", "2 °C", "2 °C")
	echo(stew, "Faces!F3", "Temperature", "100 °C", "100 °C")
	echo(stew, "Limits!F2", "From", "70 °C", "70 °C")
	echo(block, "Tables!B2", "Temperature", "130 °F", "54.44444 °C")
	echo(block, "Points!C2", "Up", "10 mm", "0.01 m")
}

// TestLocate finds the column of a problem that knows its row and heading.
func TestLocate(t *testing.T) {
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	newRecipe(t, "").workbook(t, name)
	p, err := Read(name)
	if err != nil {
		t.Fatal(err)
	}
	e := p.Locate(cell.Error{At: cell.Ref{Sheet: "Steps", Row: 3}, Field: "Film coefficient"})
	if e.At.String() != "Steps!J3" {
		t.Error(e.At)
	}
	if e := p.Locate(cell.Error{At: cell.Ref{Sheet: "Steps", Row: 3}, Field: "no such"}); e.At.String() != "Steps row 3" {
		t.Error(e.At)
	}
}

// TestUnreadableLimit: a limit with a fault is handed on as one that cannot be told, not left out.
func TestUnreadableLimit(t *testing.T) {
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	newRecipe(t, "set Limits!F2 = hot\nset Limits!B3 = coool").workbook(t, name)
	p, err := Read(name)
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Limits) != 3 || p.Limits[0].Unreadable == "" || p.Limits[1].Unreadable == "" || p.Limits[1].Kind == nil || p.Limits[2].Unreadable != "" {
		t.Errorf("%+v", p.Limits)
	}
	if len(p.Products) != 3 {
		t.Error("its products are calculated all the same")
	}
}

// TestBrokenLimits: whatever is wrong with a row of Limits, the products that it may be meant for are not met without it.
func TestBrokenLimits(t *testing.T) {
	for _, c := range []struct{ name, change, concerns string }{
		{"a family that is none", "set Limits!D2 = family: tray", "all"},
		{"a product that is none", "set Limits!D3 = Nothing like it", "all"},
		{"Applies to is blank", "set Limits!D3 =", "all"},
		{"Applies to is an error", "set Limits!D3 = #N/A", "all"},
		{"Applies to twice", "set Limits!R1 = Applies to", "all"},
		{"a stage of no step", "set Limits!C3 = thaw", "Stew"},
		{"a pair of which one is nowhere", "row Limits = Late | delay | cook > freeze | Roll | | | | 30", "Roll"},
		{"a clock from a stage of no step", "set Limits!I3 = stage start: reheat\nset Limits!F3 =", "Stew"},
		{"a clock to a stage of no step", "set Limits!I3 = stage end: freeze\nset Limits!F3 =", "Stew"},
		{"a table that is none", "set Limits!M4 = Row", "Block"},
		{"a row without name, rule and product", "row Limits = | | cook | | | 70 | | 2", "all"},
		{"two sheets of limits", `file limits = Limit,Rule,Applies to\nMore,stated,all\n`, "all"},
	} {
		t.Run(c.name, func(t *testing.T) {
			name := filepath.Join(t.TempDir(), "plan.xlsx")
			if r := newRecipe(t, c.change); r.onlyCSV {
				name = t.TempDir()
				r.folder(t, name)
			} else {
				r.workbook(t, name)
			}
			p, err := Read(name)
			if err != nil {
				t.Fatal(err)
			}
			if p.Problems.Faults() == 0 {
				t.Error("no error is told")
			}
			var got []string
			for _, l := range p.Limits {
				a := l.Applies
				if l.Unreadable != "" && !l.Advice && (c.concerns == "all" && a.All || c.concerns != "all" && (a.All || a.Product == c.concerns)) {
					return
				}
				got = append(got, fmt.Sprintf("%s for %+v: %s", l.Name, a, l.Unreadable))
			}
			t.Errorf("no broken limit concerns %s: %s", c.concerns, strings.Join(got, "; "))
		})
	}
}

// TestColumns: every heading is there once, every needed word list and unit fits its column.
func TestColumns(t *testing.T) {
	for _, s := range Sheets {
		seen := map[string]bool{}
		for _, c := range s.Columns {
			switch {
			case seen[Key(c.Heading)]:
				t.Errorf("%s: %s twice", s.Name, c.Heading)
			case c.Quantity == nil && c.Unit != "", c.Quantity != nil && !c.Quantity.Plain() && c.Quantity.Unit(c.Unit) == nil:
				t.Errorf("%s: unit of %s", s.Name, c.Title())
			}
			seen[Key(c.Heading)] = true
			if name, _ := SplitHeading(c.Title()); name != c.Heading {
				t.Errorf("%s: %q comes back as %q", s.Name, c.Title(), name)
			}
		}
		for _, k := range rules.Kinds {
			for _, list := range append(k.Needs, k.May) {
				for _, h := range list {
					if SheetNamed("Limits").Column(h) == nil {
						t.Errorf("rule %s: no column %s", k.Name, h)
					}
				}
			}
		}
	}
	for _, s := range model.Surfaces {
		for _, h := range append(append([]string(nil), s.Needs...), s.May...) {
			if SheetNamed("Steps").Column(h) == nil {
				t.Errorf("surroundings %s: no column %s", s.Name, h)
			}
		}
	}
	for _, s := range model.Shapes {
		for _, h := range s.Needs {
			if SheetNamed("Products").Column(h) == nil {
				t.Errorf("shape %s: no column %s", s.Name, h)
			}
		}
	}
}

// TestNumberFormats: what a number format makes of a number (ECMA-376 part 1, 18.8.30 and 18.8.31).
func TestNumberFormats(t *testing.T) {
	for code, want := range map[string]Form{
		"General": Bare, "0.00": Bare, "#,##0.0": Bare, `0.0" °C"`: Bare, `0 \s`: Bare, `"day "0`: Bare, ";;;": Bare, "[Red]0.0": Bare, `# ?/?`: Bare,
		"0%": Percent, "0.00%": Percent, "h:mm": Clock, "[h]:mm": Clock, "[mm]:ss": Clock, "mm:ss.0": Clock, "h:mm AM/PM": Clock, "[$-F400]h:mm:ss": Clock,
		"yyyy-mm-dd": Date, "d-mmm": Date, "mmm-yy": Date, "m/d/yy h:mm": Date, "[$-407]dd.mm.yyyy": Date, "mmmm": Date,
	} {
		if got := formOf(code); got != want {
			t.Errorf("%q: %v, want %v", code, got, want)
		}
	}
}

// TestStoredDates: both calendars; 1 March 1900 is day 61 of one, and 1 January 2026 is day 46023 (ECMA-376 part 1, 18.17.4).
func TestStoredDates(t *testing.T) {
	for _, c := range []struct {
		stored string
		is1904 bool
		want   string
	}{{"61", false, "1900-03-01"}, {"1", false, "1900-01-01"}, {"46023", false, "2026-01-01"}, {"44561", true, "2026-01-01"}, {"46023.5", false, "2026-01-01 12:00:00"}, {"x", false, "x"}} {
		if got := isoDate(c.stored, c.is1904); got != c.want {
			t.Errorf("%s: %s, want %s", c.stored, got, c.want)
		}
	}
}

// TestWholePlan: what is bigger than the limits is refused in words.
func TestTooBig(t *testing.T) {
	m := &meter{left: 1000, spare: mostElements}
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	newRecipe(t, "").workbook(t, name)
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	z, err := container(data)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range z.File {
		err = m.part(f, nil)
	}
	if err == nil || !strings.Contains(err.Error(), "unpacks to more than") {
		t.Error(err)
	}
	if err := wellFormed(xmlOf("<a><!DOCTYPE x></a>")); err == nil {
		t.Error("a document type was taken")
	}
	if err := wellFormed(xmlOf("<a><b></a>")); err == nil {
		t.Error("elements that do not match were taken")
	}
	if err := wellFormed(xmlOf("<a>" + strings.Repeat(" ", mostBare+1))); err == nil {
		t.Error("megabytes without an element were taken")
	}
}

// xmlOf is a part of a workbook with nothing before it.
func xmlOf(s string) metered {
	return metered{strings.NewReader(s), &meter{left: mostBytes, spare: mostElements}}
}

// TestLoadedXML: what takes long to read and holds nothing is stopped, however it is made; what is spare is that of all parts together.
func TestLoadedXML(t *testing.T) {
	const spare = 1000
	for _, c := range []struct {
		name, piece string
		n           int
		want        string
	}{
		{"elements", "<e/>", spare - 1, ""},
		{"one element more", "<e/>", spare, errLoaded.Error()},
		{"comments", "<!-- -->", spare + 2, errLoaded.Error()},
		{"text in pieces", "<![CDATA[1]]>", spare + 2, errLoaded.Error()},
		{"text between elements", "<e/> ", spare - 1, ""},
		{"attributes", "<e" + strings.Repeat(` a="1"`, mostAttributes+spare/10) + "/>", 10, errLoaded.Error()},
		{"usual attributes", "<e" + strings.Repeat(` a="1"`, mostAttributes) + "/>", 10, ""},
		{"deep", "<e>", mostNested, "elements within each other"},
		{"deep enough", strings.Repeat("<e>", mostNested-1) + strings.Repeat("</e>", mostNested-1), 2, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := xmlOf("<a>" + strings.Repeat(c.piece, c.n) + "</a>")
			r.m.spare = spare
			err := wellFormed(r)
			if (err == nil) != (c.want == "") || err != nil && !strings.Contains(err.Error(), c.want) {
				t.Errorf("%v, want %q", err, c.want)
			}
		})
	}
	const head = `<worksheet><sheetData>`
	full := func(rows string) metered { return xmlOf(head + rows + "</sheetData></worksheet>") }
	for _, c := range []struct {
		name, rows string
		cells      int // that may come
		want       error
	}{
		{"cells with all that they hold", strings.Repeat(`<row><c t="inlineStr"><f>A1</f><v>1</v><is><t>x</t></is></c></row>`, 400), 400, nil},
		{"one cell more", strings.Repeat(`<row><c><v>1</v></c></row>`, 401), 400, errTooMany},
		{"empty rows", strings.Repeat(`<row/>`, 402), 400, errTooMany},
		{"a cell stuffed", `<row><c><v>1</v>` + strings.Repeat("<e/>", spare+inCell) + `</c></row>`, 400, errLoaded},
		{"a text stuffed", `<row><c t="inlineStr"><is>` + strings.Repeat("<rPh><e/></rPh>", spare) + `</is></c></row>`, 400, errLoaded},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := full(c.rows)
			r.m.spare = spare
			if err := (&book{}).sheet(r, &Grid{}, &c.cells); err != c.want {
				t.Errorf("%v, want %v", err, c.want)
			}
		})
	}
	r := xmlOf("<sst>" + strings.Repeat(`<si><r><rPr><b/><sz/><color/><rFont/><family/><scheme/></rPr><t>x</t></r><r><t>y</t></r></si>`, 200) + "</sst>")
	r.m.spare = spare
	if err := (&book{}).readStrings(r); err != nil {
		t.Errorf("shared texts in two writings: %v", err)
	}
}

// TestSlip: which names of families are likely one name misspelt.
func TestSlip(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want bool
	}{
		{"trays", "tray", true}, {"trays", "trais", true}, {"cook chill", "cookchill", true}, {"sausage rolls", "sausag rols", true}, {"ready-meals", "ready meals", true},
		{"ham", "jam", false}, {"beef", "beets", false}, {"rolls", "tolla", false}, {"soup 2", "soup 1", false}, {"pie 12 cm", "pie 14 cm", false}, {"line a", "line b", false},
		{"chilled trays", "chilled trout", false},
	} {
		if got := slip(c.a, c.b); got != c.want {
			t.Errorf("%s, %s: %v", c.a, c.b, got)
		}
	}
}

// TestContainers: files of other kinds are told apart by what they hold, not by their names.
func TestContainers(t *testing.T) {
	zipped := func(names ...string) []byte {
		var b bytes.Buffer
		w := zip.NewWriter(&b)
		for _, n := range names {
			p, _ := w.Create(n)
			p.Write([]byte("<a/>"))
		}
		w.Close()
		return b.Bytes()
	}
	const ole = "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
	for _, c := range []struct{ name, data, want string }{
		{"empty", "", "the file is empty"},
		{"old workbook", ole + "\x00W\x00o", "an old .xls workbook"},
		{"password", ole + "\x00" + string(utf16("EncryptedPackage")), "protected by a password"},
		{"OpenDocument", string(zipped("mimetype", "content.xml", "META-INF/manifest.xml")), "OpenDocument file (.ods)"},
		{"any archive", string(zipped("a.txt")), "an archive, but not an .xlsx workbook"},
		{"text document", string(zipped("[Content_Types].xml", "word/document.xml")), "not an .xlsx workbook"},
		{"a part twice", string(zipped("[Content_Types].xml", "xl/workbook.xml", "XL/workbook.xml")), "it is there twice"},
		{"PDF", "%PDF-1.7", "this is a PDF"},
		{"CSV", "Product;Process\nStew;Cook\n", "this is a text file"},
		{"noise", "\x00\x01\x02\x03", "not an .xlsx workbook"},
	} {
		t.Run(c.name, func(t *testing.T) {
			name := filepath.Join(t.TempDir(), "plan.xlsx")
			if err := os.WriteFile(name, []byte(c.data), 0o644); err != nil {
				t.Fatal(err)
			}
			if _, err := Read(name); err == nil || !strings.Contains(err.Error(), c.want) || strings.Contains(err.Error(), "\n") {
				t.Errorf("%v, want %q", err, c.want)
			}
		})
	}
	if _, err := Read(filepath.Join(t.TempDir(), "nothing.xlsx")); err == nil || !strings.Contains(err.Error(), "no such file") {
		t.Error(err)
	}
	if _, err := Read(t.TempDir()); err == nil || !strings.Contains(err.Error(), "holds no .csv file") {
		t.Error(err)
	}
}

// TestLyingSize: an archive that says its part is small and holds more is damaged, not shortened.
func TestLyingSize(t *testing.T) {
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	newRecipe(t, "").workbook(t, name)
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	const sheet = "xl/worksheets/sheet5.xml"
	hit := false
	for i := 0; i+46 < len(data); i++ { // central directory: PK 1 2, unpacked size at 24, length of the name at 28, name at 46
		if string(data[i:i+4]) == "PK\x01\x02" && strings.HasPrefix(string(data[i+46:]), sheet) {
			binary.LittleEndian.PutUint32(data[i+24:], 300)
			hit = true
		}
	}
	if !hit {
		t.Fatal("no such part")
	}
	if _, err := readWorkbook(data); err == nil || !strings.Contains(err.Error(), sheet) {
		t.Errorf("%v", err)
	}
}

// TestRowNumbers: a CSV file shows the rows that a spreadsheet would: blank lines count, line breaks in quotes do not.
func TestRowNumbers(t *testing.T) {
	g := csvGrid("Points", []byte("\xef\xbb\xbfProduct,Point\r\n\r\n\"a\nb\",p\r\n,,\r\nc,\"x\r\ny\"\r\nd,q\r\n"))
	var got []string
	for _, r := range g.Rows {
		got = append(got, fmt.Sprintf("%d %s", r.N, r.Cells[0].Text))
	}
	if want := "1 Product; 3 a b; 5 c; 6 d"; strings.Join(got, "; ") != want {
		t.Errorf("%s, want %s", strings.Join(got, "; "), want)
	}
}

// TestDelimiters: the sign between cells is found by what the rows hold; a heading may have a comma of its own.
func TestDelimiters(t *testing.T) {
	for name, text := range map[string]string{
		"comma":     "Product,Point,Up (mm)\nBlock,probe,10\n",
		"semicolon": "Product;Point;Up (mm);# seen, said\nBlock;probe;10,5;a\n",
		"tab":       "Product\tPoint\tUp (mm)\nBlock\tprobe, left\t10\n",
	} {
		g := csvGrid("Points", []byte(text))
		if len(g.Rows) != 2 || len(g.Rows[1].Cells) < 3 || g.Rows[1].Cells[0].Text != "Block" {
			t.Errorf("%s: %v %s", name, g.Rows, g.Refused)
		}
	}
}

// TestCells: kinds of cells that excelize does not write.
func TestCells(t *testing.T) {
	const head = `<worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"><sheetData>`
	for _, c := range []struct{ name, xml, want string }{
		{"error", `<row r="1"><c r="A1" t="e"><v>#N/A</v></c></row>`, "A1 broken #N/A"},
		{"logical", `<row r="1"><c r="A1" t="b"><v>1</v></c></row>`, "A1 truth TRUE"},
		{"inline text in runs", `<row r="1"><c r="B1" t="inlineStr"><is><r><t>a</t></r><r><t>b</t></r><rPh><t>x</t></rPh></is></c></row>`, "B1 text ab"},
		{"formula without result", `<row r="1"><c r="A1"><f>1+1</f><v></v></c></row>`, "A1 none "},
		{"formula with empty text", `<row r="1"><c r="A1" t="str"><f>""</f><v></v></c></row>`, ""},
		{"no names of cells", `<row><c><v>5</v></c><c><v>6</v></c></row><row><c><v>7</v></c></row>`, "A1 figure 5; B1 figure 6; A2 figure 7"},
		{"number as stored", `<row r="1"><c r="A1"><v>0.10000000000000001</v></c></row>`, "A1 figure 0.10000000000000001"},
		{"escaped character", `<row r="1"><c r="A1" t="str"><v>a_x000D_b_x00e9_</v></c></row>`, "A1 text a bé"},
		{"shared text out of range", `<row r="1"><c r="A1" t="s"><v>3</v></c></row>`, "ERR points at text 3"},
		{"negative shared text", `<row r="1"><c r="A1" t="s"><v>-1</v></c></row>`, "ERR points at text -1"},
		{"rows out of order", `<row r="3"><c r="A3"><v>3</v></c></row><row r="1"></row>`, "ERR row 1 comes after row 3"},
		{"doubled cell", `<row r="1"><c r="A1"><v>3</v></c><c r="A1"><v>4</v></c></row>`, "ERR doubled"},
		{"bad name", `<row r="1"><c r="1A"><v>3</v></c></row>`, "ERR not the name of a cell"},
		{"other row", `<row r="1"><c r="A2"><v>3</v></c></row>`, "ERR stands in row 1"},
		{"beyond the rows", `<row r="1048577"></row>`, "ERR does not exist"},
	} {
		t.Run(c.name, func(t *testing.T) {
			b, g, left := &book{}, &Grid{HiddenCols: map[int]bool{}}, 100
			err := b.sheet(xmlOf(head+c.xml+"</sheetData></worksheet>"), g, &left)
			var out []string
			for _, r := range g.Rows {
				for _, e := range r.Cells {
					out = append(out, fmt.Sprintf("%s%d %s %s", cell.ColumnName(int(e.Col)), r.N, [...]string{"blank", "text", "figure", "truth", "broken", "none"}[e.Kind], e.Text))
				}
			}
			got := strings.Join(out, "; ")
			if want, bad := strings.CutPrefix(c.want, "ERR "); bad {
				if err == nil || !strings.Contains(err.Error(), want) {
					t.Errorf("%v, want %q", err, want)
				}
			} else if err != nil || got != c.want {
				t.Errorf("%q %v, want %q", got, err, c.want)
			}
		})
	}
}

// FuzzGuard: no bytes make the workbook reader panic, and what it takes has rows in order.
func FuzzGuard(f *testing.F) {
	x := excelize.NewFile()
	x.SetSheetName("Sheet1", "Products")
	x.SetCellValue("Products", "A1", "Product")
	x.SetCellValue("Products", "B2", 3.5)
	var b bytes.Buffer
	x.Write(&b)
	x.Close()
	f.Add(b.Bytes())
	f.Add(b.Bytes()[:b.Len()/2])
	f.Add([]byte("PK\x03\x04"))
	f.Add([]byte("\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"))
	f.Add([]byte("Product;Process\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		grids, err := readWorkbook(data)
		if err != nil && err.Error() == "" {
			t.Fatal("an error without words")
		}
		for _, g := range grids {
			for i, r := range g.Rows {
				if i > 0 && r.N <= g.Rows[i-1].N || len(r.Cells) == 0 {
					t.Fatalf("row %d", r.N)
				}
			}
		}
	})
}

// FuzzSheet does the same for the XML of one sheet, which the archive would hide from a fuzzer.
func FuzzSheet(f *testing.F) {
	f.Add(`<worksheet><sheetData><row r="1"><c r="A1" t="s"><v>0</v></c><c r="B1" t="inlineStr"><is><t>x</t></is></c></row></sheetData><mergeCells><mergeCell ref="A1:B2"/></mergeCells></worksheet>`)
	f.Add(`<worksheet><cols><col min="1" max="3" hidden="1"/></cols><sheetData><row hidden="1"><c><f>1</f></c></row></sheetData></worksheet>`)
	f.Fuzz(func(t *testing.T, s string) {
		b, g, left := &book{strings: []string{"Product"}, forms: []Form{Bare, Clock}}, &Grid{Name: "Products", HiddenCols: map[int]bool{}}, 1000
		if b.sheet(xmlOf(s), g, &left) == nil {
			understand([]*Grid{g}, &Plan{})
		}
	})
}

// FuzzCSV: no text makes the CSV reader or anything behind it panic.
func FuzzCSV(f *testing.F) {
	f.Add("Product,Process,Shape,Start temperature (°C)\nA,B,slab,5\n", "Process,Step,Stage,Duration (min),Surroundings\nB,1,cook,5,held\n")
	f.Add("\"Product\";Process\n", "Process\tStep\n\"")
	f.Add("\xff\xfeP", "")
	f.Fuzz(func(t *testing.T, products, steps string) {
		grids := []*Grid{csvGrid("Products", []byte(products)), csvGrid("Steps", []byte(steps)), csvGrid("Limits", []byte(steps)), csvGrid("Plan", []byte(products))}
		plan, err := understand(grids, &Plan{})
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range plan.Problems {
			if strings.TrimSpace(e.Msg) == "" {
				t.Fatalf("a problem without words at %s", e.At)
			}
		}
	})
}

// TestSplitHeading parts headings as people write them.
func TestSplitHeading(t *testing.T) {
	for _, c := range []struct{ typed, name, inside string }{
		{"Thickness (mm)", "Thickness", "mm"},
		{"Thickness（mm）", "Thickness", "mm"},
		{"冷却温度（℃）", "冷却温度", "℃"},
		{"Thickness ［ｍｍ］", "Thickness", "mm"},
		{"Thickness（mm)", "Thickness", "mm"},
		{"Water％", "Water", "%"},
		{"Water %", "Water", "%"},
		{"（mm）", "（mm）", ""},
		{"Note（own） later", "Note（own） later", ""},
	} {
		if name, inside := SplitHeading(c.typed); name != c.name || inside != c.inside {
			t.Errorf("%q: %q and %q, want %q and %q", c.typed, name, inside, c.name, c.inside)
		}
	}
}
