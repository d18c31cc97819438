package intake

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"
	"pgregory.net/rapid"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// digest is a digest of nothing in particular.
var digest = strings.Repeat("5f", 32)

// typed makes a value of a column: a number in a unit, a text where number is false.
func typed(sheet, column, text, unit string, number bool, at Place) Value {
	c := workbook.SheetNamed(sheet).Column(column)
	if c == nil {
		panic(sheet + " has no column " + column)
	}
	return Value{Column: c, Text: text, Unit: unit, Number: number, At: at}
}

// lasagne is a list of two recipes with one process each: 45 mm and 165 °F in one row, 2 in and 75 °C in the other.
func lasagne() *Result {
	r := &Result{Mapping: "map.xlsx", SHA256: strings.Repeat("a1", 32), Files: []File{{"Recipes.xlsx", digest}}, Counts: []Count{{"recipes", 4, 2, 1, 1}}}
	for i, p := range []struct{ name, thick, inUnit, start, degrees, chill string }{{"Lasagne", "45", "mm", "165", "°F", "90"}, {"Mash", "2", "in", "75", "°C", "1 h 45 min"}} {
		at := func(col int) Place { return Place{Sheet: "Cook-chill", Row: 17 + i, Col: col} }
		record := at(0)
		constant := func(sheet, column, text, unit, from string) Value {
			v := typed(sheet, column, text, unit, unit != "", Place{})
			v.Const = from
			return v
		}
		r.Made = append(r.Made,
			Made{Sheet: workbook.SheetNamed("Products"), Record: record, Values: []Value{
				typed("Products", "Product", p.name, "", false, at(1)), typed("Products", "Process", p.name, "", false, at(1)),
				constant("Products", "Shape", "slab", "", "Constants!E4"), typed("Products", "Thickness", p.thick, p.inUnit, true, at(6)),
				constant("Products", "Food", "Potato, mashed, with whole milk", "", "Constants!E5"), typed("Products", "Start temperature", p.start, p.degrees, true, at(7))}},
			Made{Sheet: workbook.SheetNamed("Steps"), Part: "chill", Record: record, Values: []Value{
				typed("Steps", "Process", p.name, "", false, at(1)), typed("Steps", "Step", "chill", "", false, Place{}),
				constant("Steps", "Stage", "cool", "", "Constants!E6"), typed("Steps", "Duration", p.chill, "min", i == 0, at(9)),
				constant("Steps", "Surroundings", "film", "", "Constants!E7"), typed("Steps", "Temperature", "3", "°C", true, at(10)),
				constant("Steps", "Film coefficient", "12.5", "W/m²·K", "Constants!E8")}})
	}
	r.Left = []Left{{Place{Sheet: "Cook-chill", Row: 19}, "total"}}
	r.Not = []NotImported{{Record: Place{Sheet: "Cook-chill", Row: 20}, At: Place{Sheet: "Cook-chill", Row: 20, Col: 6}, Product: "Chili", Column: "Thickness", Typed: "thick", Why: "is not a number", Mend: "type a number"}}
	return r
}

// written writes a result into a file.
func written(t testing.TB, r *Result) string {
	t.Helper()
	var b bytes.Buffer
	if err := Write(&b, r); err != nil {
		t.Fatal(err)
	}
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	if err := os.WriteFile(name, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	return name
}

// sheets are the cells of a workbook as text, a row a line, cells divided by |.
func sheets(t *testing.T, name string) map[string][]string {
	t.Helper()
	s, err := workbook.ReadSpreadsheet(name)
	if err != nil {
		t.Fatal(err)
	}
	out := map[string][]string{}
	for _, g := range s.Sheets {
		for i := range g.Rows {
			var line []string
			for _, e := range g.Rows[i].Cells {
				for len(line) < int(e.Col)-1 {
					line = append(line, "")
				}
				line = append(line, e.Text)
			}
			out[g.Name] = append(out[g.Name], strings.Join(line, "|"))
		}
	}
	return out
}

func TestWritesOnlyWhatIsUsed(t *testing.T) {
	got := sheets(t, written(t, lasagne()))
	a, b := digest, strings.Repeat("a1", 32)
	want := map[string][]string{
		"Plan": nil, // looked at below
		"Products": {"A row is one product through one process", "Product|Process|Shape|Thickness (mm)|Food|Start temperature (°F)|#From",
			"Lasagne|Lasagne|slab|45|Potato, mashed, with whole milk|165|Recipes.xlsx › Cook-chill row 17 · ",
			"Mash|Mash|slab|2 in|Potato, mashed, with whole milk|75 °C|Recipes.xlsx › Cook-chill row 18 · "},
		"Steps": {"One row a step, in order within its process", "Process|Step|Stage|Duration (min)|Surroundings|Temperature (°C)|Film coefficient (W/m²·K)|#From",
			"Lasagne|chill|cool|90|film|3|12.5|Recipes.xlsx › Cook-chill row 17 part chill · ",
			"Mash|chill|cool|1 h 45 min|film|3|12.5|Recipes.xlsx › Cook-chill row 18 part chill · "},
		"Origins": {"", "File|SHA-256|Their sheet|Sheet|Part|Column|Place|Rows", "map.xlsx|" + b + "||-||-|map",
			"Recipes.xlsx|" + a + "|Cook-chill|Products||Product|A|2", "Recipes.xlsx|" + a + "|Cook-chill|Products||Process|A|2",
			"Recipes.xlsx|" + a + "|Cook-chill|Products||Shape|map: Constants!E4|2", "Recipes.xlsx|" + a + "|Cook-chill|Products||Thickness|F|2",
			"Recipes.xlsx|" + a + "|Cook-chill|Products||Food|map: Constants!E5|2", "Recipes.xlsx|" + a + "|Cook-chill|Products||Start temperature|G|2",
			"Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Process|A|2", "Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Stage|map: Constants!E6|2",
			"Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Duration|I|2", "Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Surroundings|map: Constants!E7|2",
			"Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Temperature|J|2", "Recipes.xlsx|" + a + "|Cook-chill|Steps|chill|Film coefficient|map: Constants!E8|2"},
		"Not imported": {"", "File|Sheet|Place|Record|Column|Typed|Why|How to mend|#From",
			"Recipes.xlsx|Cook-chill|F20|Chili|Thickness|thick|is not a number|type a number|Recipes.xlsx › Cook-chill row 20"},
		"Left out": {"", "File|Sheet|Place|Reason", "Recipes.xlsx|Cook-chill|row 19|total"},
	}
	got["Plan"] = want["Plan"]
	for name, rows := range got {
		for i, row := range rows {
			if at := strings.LastIndex(row, " · "); at > 0 {
				rows[i] = row[:at+len(" · ")] // the checksum is held by the reader
			}
			if i == 0 && workbook.SheetNamed(name) == nil {
				rows[i] = "" // the help line
			}
		}
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestSameBytes(t *testing.T) {
	var first []byte
	for range 5 { // the order of a map would show within five
		var b bytes.Buffer
		if err := Write(&b, lasagne()); err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = b.Bytes()
		}
		if !bytes.Equal(first, b.Bytes()) {
			t.Fatal("the same result gave other bytes")
		}
	}
}

// TestReadsBack holds the cell of their file behind each value, and what is told of a row that was edited after the import.
func TestReadsBack(t *testing.T) {
	p, err := workbook.Read(written(t, lasagne()))
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Products) != 2 {
		t.Fatalf("%d products, want 2: %v", len(p.Products), p.Problems)
	}
	got := map[string]string{}
	for _, r := range p.Products[1].Readings() {
		if r.Typed != "" {
			got[r.Column+" "+r.Typed] = r.From
		}
	}
	for reading, from := range map[string]string{
		"Product Mash": "Recipes.xlsx › Cook-chill!A18", "Thickness 2 in": "Recipes.xlsx › Cook-chill!F18", "Start temperature 75 °C": "Recipes.xlsx › Cook-chill!G18",
		"Duration 1 h 45 min": "Recipes.xlsx › Cook-chill!I18", "Film coefficient 12.5 W/m²·K": "map.xlsx › Constants!E8",
	} {
		if have, ok := got[reading]; !ok || have != from {
			t.Errorf("%s comes from %q, want %q; readings %v", reading, have, from, got)
		}
	}
	if _, d := p.Products[1].Steps[0].DurationS, p.Products[1].Steps[0].DurationS; d != 6300 { // 1 h 45 min
		t.Errorf("duration %g s, want 6300", d)
	}
}

// TestPartsOfOtherPlaces has two records of one part whose column stands in different places, as labels in blocks do.
func TestPartsOfOtherPlaces(t *testing.T) {
	r := lasagne()
	r.Made[3].Values[3].At.Col = 12
	got := sheets(t, written(t, r))
	if row := got["Steps"][3]; !strings.Contains(row, "row 18 part chill (2) · ") {
		t.Error(row)
	}
	want := "Recipes.xlsx|" + digest + "|Cook-chill|Steps|chill (2)|Duration|L|1"
	if all := strings.Join(got["Origins"], "\n"); !strings.Contains(all, want) {
		t.Errorf("%s\nlacks %s", all, want)
	}
}

// drawn is a value with the number that it must give in the unit that the program computes in.
type drawn struct {
	Value
	si float64
}

// draw makes a value of a dimensional column, of so much in the unit of the blank workbook, in any of its units and spellings.
func draw(t *rapid.T, sheet, column string, least, most float64) drawn {
	c := workbook.SheetNamed(sheet).Column(column)
	home := c.Quantity.Unit(c.Unit)
	var units []*unit.Unit
	for i := range c.Quantity.Units {
		if u := &c.Quantity.Units[i]; !strings.Contains(u.Name(), ":") {
			units = append(units, u)
		}
	}
	u := rapid.SampledFrom(units).Draw(t, column+" unit")
	a, b := u.Out(home.In(least)), u.Out(home.In(most))
	x := rapid.Float64Range(a, b).Draw(t, column)
	text := fmt.Sprintf("%.6g", x)
	if strings.Contains(text, "e") {
		text = fmt.Sprintf("%.9f", x)
	}
	fmt.Sscan(text, &x)
	v := drawn{Value{Column: c, Text: text, Unit: u.Name(), Number: true}, u.In(x)}
	if u.Name() == "" {
		v.Unit = ""
	}
	switch rapid.IntRange(0, 3).Draw(t, column+" form") {
	case 0:
		v.Number = false // a text without unit
	case 1:
		if u.Name() != "" {
			v.Number, v.Text = false, text+" "+u.Name()
		}
	}
	return v
}

// sayings are words that a spreadsheet program or an XML file could take for something else.
var sayings = []string{"", "=1+1", "1.10", "2-10", "<b> & \"c\"", "_x000D_", "Gratin", "グラタン", "+49", "00017"}

// drawResult makes a random list of sound products, each with a process of its own.
func drawResult(t *rapid.T) (*Result, [][]drawn) {
	r := &Result{Mapping: "map.xlsx", SHA256: digest, Files: []File{{"A.xlsx", digest}, {"b.csv", digest}}}
	var all [][]drawn
	add := func(sheet, part string, record Place, values []drawn) {
		m := Made{Sheet: workbook.SheetNamed(sheet), Part: part, Record: record}
		for i := range values {
			v := &values[i]
			v.At = Place{record.File, record.Sheet, max(record.Row, i+1), max(record.Col, i+1)}
			m.Values = append(m.Values, v.Value)
		}
		r.Made, all = append(r.Made, m), append(all, values)
	}
	word := func(sheet, column, text string) drawn {
		return drawn{Value: typed(sheet, column, text, "", false, Place{})}
	}
	for i := range rapid.IntRange(1, 5).Draw(t, "products") {
		record := rapid.SampledFrom([]Place{{0, "S", 5 + i, 0}, {0, "T", 0, 3 + i}, {1, "", 2 + i, 0}, {0, "U", 10 + i, 2}, {0, fmt.Sprint("Sheet of ", i), 0, 0}}).Draw(t, "record")
		name := fmt.Sprintf("%s %d", rapid.SampledFrom(sayings[1:]).Draw(t, "name"), i)
		values := []drawn{word("Products", "Product", name), word("Products", "Process", "p "+name), word("Products", "Food", "Potato, mashed, with whole milk"),
			draw(t, "Products", "Start temperature", 50, 90)}
		for _, h := range []string{"Family", "Recipe version", "Batch", "Note"} {
			values = append(values, word("Products", h, rapid.SampledFrom(sayings).Draw(t, h)))
		}
		shape := rapid.SampledFrom([]string{"slab", "cylinder", "sphere", "short cylinder", "bar", "brick"}).Draw(t, "shape")
		values = append(values, word("Products", "Shape", shape))
		needs := map[string][]string{"slab": {"Thickness"}, "cylinder": {"Diameter"}, "sphere": {"Diameter"}, "short cylinder": {"Diameter", "Length"},
			"bar": {"Thickness", "Width"}, "brick": {"Thickness", "Width", "Length"}}
		for _, h := range needs[shape] {
			values = append(values, draw(t, "Products", h, 20, 300))
		}
		add("Products", "", record, values)
		for k, stage := range []string{"cook", "cool"}[:rapid.IntRange(1, 2).Draw(t, "steps")] {
			values := []drawn{word("Steps", "Process", "p "+name), word("Steps", "Step", stage), word("Steps", "Stage", stage), draw(t, "Steps", "Duration", 5, 600),
				word("Steps", "Surroundings", "film"), draw(t, "Steps", "Temperature", []float64{80, 1}[k], []float64{200, 9}[k]),
				draw(t, "Steps", "Film coefficient", 6, 40), word("Steps", "Temperature is", "measured"), word("Steps", "Equipment", rapid.SampledFrom(sayings).Draw(t, "equipment"))}
			if rapid.Bool().Draw(t, "humid") {
				values = append(values, draw(t, "Steps", "Relative humidity", 1, 100))
			}
			add("Steps", stage, record, values)
		}
	}
	return r, all
}

// TestRoundTrip holds that a plan is the same after it was written and read, whatever it holds: each value gives the number of the
// source, every product can be calculated, and what was read is written the same again.
func TestRoundTrip(t *testing.T) {
	folder := t.TempDir()
	rapid.Check(t, func(t *rapid.T) {
		r, all := drawResult(t)
		name := writeInto(t, folder, "first.xlsx", r)
		tables, err := workbook.ReadTables(name, "plan", workbook.Sheets)
		if err != nil {
			t.Fatal(err)
		}
		n := map[*workbook.Sheet]int{}
		for i, m := range r.Made {
			l := tables.Lines(m.Sheet.Name)[n[m.Sheet]]
			n[m.Sheet]++
			for _, v := range all[i] {
				h := v.Column.Heading
				switch {
				case v.Column.Quantity == nil:
					if got := l.Entry(h).Text; got != v.Text {
						t.Fatalf("%s %s is %q, want %q", l.Ref(), h, got, v.Text)
					}
				default:
					got := l.Value(h)
					if saidPoint := got == nil && strings.Contains(l.Entry(h).Text, "."); saidPoint {
						// that the decimal sign is the point stands in Plan, which reading a plan takes into account
						if x, m := v.Column.Quantity.Parse(l.Entry(h).Text, l.Unit(h), unit.Point); m == nil {
							got = &x
						}
					}
					if got == nil || got.Computed != v.si {
						t.Fatalf("%s %s gives %v, want %v; typed %q", l.Ref(), h, got, v.si, v.Text)
					}
				}
			}
		}
		first := readSound(t, name, n[workbook.SheetNamed("Products")])
		again := &Result{Mapping: "plan.xlsx", SHA256: digest, Copied: map[string][]*workbook.Line{}}
		for _, s := range workbook.Sheets {
			again.Copied[s.Name] = tables.Lines(s.Name)
		}
		second := readSound(t, writeInto(t, folder, "second.xlsx", again), len(first.Products))
		if d := cmp.Diff(values(first), values(second)); d != "" {
			t.Fatalf("written again, the plan is another:\n%s", d)
		}
	})
}

// values are the readings of a plan without their origin.
func values(p *workbook.Plan) [][]cell.Reading {
	var out [][]cell.Reading
	for i := range p.Products {
		var list []cell.Reading
		for _, r := range p.Products[i].Readings() {
			r.From = ""
			list = append(list, r)
		}
		out = append(out, list)
	}
	return out
}

func readSound(t *rapid.T, name string, products int) *workbook.Plan {
	p, err := workbook.Read(name)
	if err != nil {
		t.Fatal(err)
	}
	if p.Problems.Faults() > 0 || len(p.Products) != products {
		t.Fatalf("%d products, want %d: %v", len(p.Products), products, p.Problems)
	}
	for _, e := range p.Problems {
		if strings.HasPrefix(e.At.String(), "Origins") || strings.Contains(e.Msg, "#From") {
			t.Fatal(e)
		}
	}
	for i := range p.Products {
		for _, r := range p.Products[i].Readings() {
			if r.Typed != "" && (strings.Contains(r.From, "edited") || r.From == "" && r.At.Sheet != "Plan") {
				t.Fatalf("%s comes from %q", r.At, r.From)
			}
		}
	}
	return p
}

func writeInto(t *rapid.T, folder, name string, r *Result) string {
	var b bytes.Buffer
	if err := Write(&b, r); err != nil {
		t.Fatal(err)
	}
	name = filepath.Join(folder, name)
	if err := os.WriteFile(name, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	return name
}

// TestEditedRow holds that a row which was edited after the import says so, and that its neighbour does not.
func TestEditedRow(t *testing.T) {
	name := written(t, lasagne())
	f, err := excelize.OpenFile(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if err := f.SetCellFloat("Products", "D3", 46, -1, 64); err != nil {
		t.Fatal(err)
	}
	if err := f.Save(); err != nil {
		t.Fatal(err)
	}
	p, err := workbook.Read(name)
	if err != nil {
		t.Fatal(err)
	}
	from := map[string]string{}
	for i := range p.Products {
		for _, r := range p.Products[i].Readings() {
			if r.Column == "Thickness" {
				from[p.Products[i].Name] = r.From
			}
		}
	}
	want := map[string]string{"Lasagne": "edited after import; was Recipes.xlsx › Cook-chill!F17", "Mash": "Recipes.xlsx › Cook-chill!F18"}
	if d := cmp.Diff(want, from); d != "" {
		t.Error(d)
	}
}

// TestRowTakenOut: what is counted when the plan is written is missed when a row is deleted in it; the plan as it is written misses none.
func TestRowTakenOut(t *testing.T) {
	name := written(t, lasagne())
	told := func() (out []string) {
		p, err := workbook.Read(name)
		if err != nil {
			t.Fatal(err)
		}
		for _, e := range p.Problems {
			if strings.Contains(e.Msg, "the import made") || strings.Contains(e.Msg, "after the import") {
				out = append(out, e.Level.String()+" "+e.At.String()+": "+e.Msg)
			}
		}
		return out
	}
	if got := told(); len(got) > 0 {
		t.Errorf("as it was written: %q", got)
	}
	f, err := excelize.OpenFile(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if err := f.RemoveRow("Steps", workbook.FirstRow+1); err != nil {
		t.Fatal(err)
	}
	if err := f.Save(); err != nil {
		t.Fatal(err)
	}
	want := []string{"warning Steps: 1 row of Steps that the import made is gone: 1 of Recipes.xlsx › Cook-chill part chill"}
	if d := cmp.Diff(want, told()); d != "" {
		t.Error(d)
	}
}
