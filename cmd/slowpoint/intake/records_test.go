package intake

import (
	"fmt"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"slowpoint/cmd/slowpoint/workbook"
)

// gridOf makes a sheet of lines; | parts the cells, and what is a number is one, unless a ' stands before it.
func gridOf(name, text string) *workbook.Grid {
	g := &workbook.Grid{Name: name, HiddenCols: map[int]bool{}}
	for n, line := range strings.Split(text, "\n") {
		row := workbook.Row{N: n + 1}
		for c, v := range strings.Split(line, "|") {
			if v = strings.TrimSpace(v); v == "" {
				continue
			}
			e := workbook.Entry{Text: strings.TrimPrefix(v, "'"), Col: int32(c + 1), Kind: workbook.Text}
			if _, err := strconv.ParseFloat(v, 64); err == nil {
				e.Kind = workbook.Figure
			}
			row.Cells = append(row.Cells, e)
		}
		for i := range row.Cells {
			if row.Cells[i].Text == "#REF!" {
				row.Cells[i].Kind = workbook.Broken
			}
		}
		if len(row.Cells) > 0 {
			g.Rows = append(g.Rows, row)
		}
	}
	return g
}

// mappingOf makes a mapping of sheets, each begun by a line with its name and two points.
func mappingOf(text string) *Mapping {
	var grids []*workbook.Grid
	for _, part := range strings.Split(strings.TrimSpace(text), "\n\n") {
		name, lines, _ := strings.Cut(part, ":\n")
		grids = append(grids, gridOf(strings.TrimSpace(name), lines))
	}
	return understand(workbook.TablesOf(grids, "map.xlsx", "5f3a", Sheets))
}

func fileOf(name string, sheets ...*workbook.Grid) *workbook.Spreadsheet {
	return &workbook.Spreadsheet{Name: name, SHA256: "9c21", Sheets: sheets}
}

// madeLines words the made rows: "Steps chill: Duration 90 min @B3, …" with the cell, or the cell of the mapping.
func madeLines(r *Result) []string {
	var out []string
	for _, m := range r.Made {
		s := strings.TrimSpace(m.Sheet.Name+" "+m.Part) + ":"
		for _, v := range m.Values {
			at := v.Const
			if v.At.Row > 0 {
				at = v.At.short()
			}
			text := v.Text
			if !v.Number && v.Column.Quantity != nil {
				text = strconv.Quote(text)
			}
			s += fmt.Sprintf(" %s %s @%s;", v.Column.Heading, strings.TrimSpace(text+" "+v.Unit), at)
		}
		out = append(out, s)
	}
	return out
}

// courseMap maps to Courses, which has few needed columns: a name, a time and a temperature.
const courseMap = `
Sources:
Source | Layout | Heading | First | Last
S | LAYOUT | HEAD | FIRST | LAST

Columns:
Source | Theirs | Sheet | Column | Part | Unit | Words | Confirmed
S | NAME | Courses | Course | | | | yes
S | TIME | Courses | Time | | min | | yes
S | TEMP | Courses | Temperature | | | | yes`

func courses(layout, head, first, last, name, time, temp string) *Mapping {
	return mappingOf(strings.NewReplacer("LAYOUT", layout, "HEAD", head, "FIRST", first, "LAST", last, "NAME", name, "TIME", time, "TEMP", temp).Replace(courseMap))
}

func TestLayouts(t *testing.T) {
	merged := func(g *workbook.Grid, b ...workbook.Block) *workbook.Grid {
		g.Merged = b
		return g
	}
	for _, c := range []struct {
		name string
		m    *Mapping
		grid *workbook.Grid
		want []string
	}{
		{"rows, headings below a title", courses("rows", "2", "", "", "Door", "after", "Air (°C)"),
			gridOf("L", "Log of doors\nDoor | After | Air (°C)\nnorth | 7 | 3.5\n\nsouth | 11 | 4"),
			[]string{"Courses: Course north @A3; Time 7 min @B3; Temperature 3.5 °C @C3;", "Courses: Course south @A5; Time 11 min @B5; Temperature 4 °C @C5;"}},
		{"rows from and to", courses("rows", "1", "3", "3", "Door", "After", "Air (°C)"),
			gridOf("L", "Door | After | Air (°C)\nunits | min | °C\nnorth | 7 | 3.5\nsouth | 11 | 4"),
			[]string{"Courses: Course north @A3; Time 7 min @B3; Temperature 3.5 °C @C3;"}},
		{"rows by letters", courses("rows", "1", "", "", "=A", "=D", "=B"),
			gridOf("L", "Door | x °C | | x\nnorth | 3.5 | | 7"),
			[]string{"Courses: Course north @A2; Time 7 min @D2; Temperature 3.5 °C @B2;"}},
		{"two heading rows with merged groups", courses("rows", "1-2", "", "", "Door", "Morning › after", "Morning > air, °C"),
			merged(gridOf("L", "Door | Morning | | Evening\n | After | Air, °C | After\nnorth | 7 | 3.5 | 13"), workbook.Block{Left: 2, Top: 1, Right: 3, Bottom: 1}, workbook.Block{Left: 1, Top: 1, Right: 1, Bottom: 2}),
			[]string{"Courses: Course north @A3; Time 7 min @B3; Temperature 3.5 °C @C3;"}},
		{"a unit row under the headings", courses("rows", "1-2", "", "", "Door", "After › h", "Air › °F"),
			gridOf("L", "Door | After | Air\n | min | °F\nnorth | 7 | 38"), nil}, // After › h is no heading: it is min
		{"columns", courses("columns", "A", "", "", "Door", "=2", "Air (°C)"),
			gridOf("L", "Door | north | | south\nAfter | 7 | | 11\nAir (°C) | 3.5 | | 4"),
			[]string{"Courses: Course north @B1; Time 7 min @B2; Temperature 3.5 °C @B3;", "Courses: Course south @D1; Time 11 min @D2; Temperature 4 °C @D3;"}},
		{"columns with groups", courses("columns", "A-B", "", "", "Door", "Morning › after", "Morning › Air (°C)"),
			merged(gridOf("L", "Door | | north\nMorning | After | 7\n | Air (°C) | 3.5\nEvening | After | 9"), workbook.Block{Left: 1, Top: 2, Right: 1, Bottom: 3}),
			[]string{"Courses: Course north @C1; Time 7 min @C2; Temperature 3.5 °C @C3;"}},
		{"blocks by labels and places", courses("blocks", "Door", "", "", "Door", "After", "=C+2"),
			gridOf("L", "Doors\nDoor | north\nAfter | 7\n | °C | '3.5 °C\nDoor | south\nAfter | 11\n | °C | '4 °C"),
			[]string{"Courses: Course north @B2; Time 7 min @B3; Temperature \"3.5 °C\" @C4;", "Courses: Course south @B5; Time 11 min @B6; Temperature \"4 °C\" @C7;"}},
		{"one sheet", courses("sheet", "-", "", "", "{sheet}", "After", "=D2"),
			gridOf("north", "After | 7\n | | | '38 °F"),
			[]string{"Courses: Course north @; Time 7 min @B1; Temperature \"38 °F\" @D2;"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := c.m.Import([]*workbook.Spreadsheet{fileOf("Log.xlsx", c.grid)})
			if d := cmp.Diff(c.want, madeLines(r)); d != "" {
				t.Errorf("(- want, + got)\n%s\n%s", d, problemLines(r))
			}
			if c.want == nil != (r.Problems.Faults() > 0 || len(r.Not) > 0) {
				t.Errorf("faults: %s %v", problemLines(r), r.Not)
			}
		})
	}
}

// dishMap is a sound mapping of one row a product.
const dishMap = `
Sources:
Source | File | Sheet | Layout | Heading | First | Last | Decimal sign
S | | | rows | 1 | | |

Columns:
Source | Theirs | Sheet | Column | Part | Unit | Words | Confirmed
S | Dish | Products | Product | | | | yes
S | Tin | Products | Shape | | | tins | yes
S | Start | Products | Start temperature | | °C | | yes
S | Oven | Steps | Temperature | cook | | | yes
S | Cook | Steps | Duration | cook | min | | yes

Constants:
Source | Sheet | Column | Part | Value | When filled
S | Steps | Stage | cook | cook |
S | Steps | Surroundings | cook | film |
S | Steps | Film coefficient | cook | 25 W/m²·K |

Words:
List | Theirs | Sheet | Column | Ours
tins | low | | | slab
tins | low | Products | Thickness | 40 mm
tins | round | | | cylinder

Leave out:
Source | Theirs | When | Word | Reason
S | Dish | starts with | total | total`

const dishes = "Dish | Tin | Start | Oven (°C) | Cook\nMash | low | 5 | 160 | 45\nHash | round | 6 | 150 | 55\nTotal | | | | 100"

// TestSays changes one thing of the mapping or of the sheet, and wants it told, at its cell.
func TestSays(t *testing.T) {
	for _, c := range []struct {
		name, was, is string // in the mapping or in the sheet
		want          string // part of a line that is told
		imported      int    // records of 2 and a total
	}{
		{"nothing", "", "", "", 2},
		{"two stars", "S | | | rows", "S | *.* x* | | rows", "holds more than one *", 0},
		{"a heading for a layout without", "rows | 1 |", "sheet | 1 |", "is the heading of a layout that has none", 0},
		{"a heading row that is none", "rows | 1 |", "rows | top |", "is not a heading row", 0},
		{"heading rows that do not touch", "rows | 1 |", "rows | 1-4 |", "is not a heading row", 0},
		{"a heading column that is none", "rows | 1 |", "columns | 1 |", "is not a heading column", 0},
		{"a first row that is none", "rows | 1 | |", "rows | 1 | C |", "is not a row or column of this layout", 0},
		{"ends that cross", "rows | 1 | | |", "rows | 1 | 5 | 3 |", "leave no data", 0},
		{"half a place of a word", "low | Products | Thickness", "low | Products |", "fill Sheet and Column, or leave both blank", 0},
		{"a rule without its word", "starts with | total", "starts with |", "Word is missing", 0},
		{"a rule with a word too many", "starts with | total", "is blank | total", "takes none", 0},
		{"any is blank", "Dish | starts with | total", "any | is blank |", "cannot be said of any cell", 0},
		{"a place of another layout", "S | Cook |", "S | =B+3 |", "is not a column of theirs", 0},
		{"kelvin", "| °C |", "| K |", "is kelvin", 0},
		{"a unit of words", "Product | | |", "Product | | mm |", "takes words", 0},
		{"a unit of another quantity", "Oven | Steps | Temperature | cook | |", "Oven | Steps | Duration | rest | |", "is not a unit of duration", 0},
		{"constants for one place", "film |\n", "film |\nS | Steps | Surroundings | cook | steam |\n", "is filled by row 3 of Constants too", 0},
		{"a constant for some records", "film |\n", "film | Cook\n", "", 2},
		{"a constant that some records lack", "160 | 45", "160 |", "Duration is missing", 1},
		{"a constant where nothing is filled", "film |\n", "film | Note\n", "is no heading", 0},
		{"no confirmed column", "yes", "later", "no row of Columns is confirmed", 0},
		{"a word that gives no size", "Thickness | 40 mm", "Thickness | thick", "\"thick\" is not a number", 1},
		{"a word without unit", "Thickness | 40 mm", "Thickness | 40", "has no unit, which Thickness needs", 1},
		{"a word that fills what is mapped", "Thickness | 40 mm", "Start temperature | 4 °C", "Start temperature is filled twice", 1},
		{"a word that leaves blank", "tins | low | | | slab", "tins | low | | |", "Shape is missing", 1},
		{"no cell filled", "Hash | round | 6 | 150 | 55", " | | | | | a note", "None of the cells that are mapped is filled", 1},
		{"no product", "Hash", "", "Product is missing", 1},
		{"a process told in two ways", "S | Tin | Products", "S | Oven | Products | Process | | | | yes\nS | Tin | Products", "", 2},
		{"a decimal comma", "| 5 |", "| 5,5 |", "", 2},
		{"both decimal signs", "| 5 | 160", "| 5,5 | '160.5 °C", "shows a decimal comma", 2},
		{"a sign by evidence", "| 5 | 160 | 45", "| 5,5 | 160 | '1,234", "is read as 74.04 s, because S.xlsx › L!C2 shows the decimal sign", 2},
		{"a sign in doubt", "| 45", "| '1,234", "Decimal sign in the sheet Sources of the mapping", 1},
		{"a text that is no number", "| 45", "| about 45", "\"about 45\" is not a number", 1},
		{"below nothing", "| 45", "| -45", "Duration must be more than 0", 1},
		{"a unit cell that is an error", "| °C |", "| #REF! |", "The row of the mapping is at fault", 0},
		{"a heading with another unit", "Dish | Tin | Start |", "Dish | Tin | Start (°F) |", "gives the unit °F, but the mapping", 0},
		{"a heading in kelvin", "Oven (°C) |", "Oven (K) |", "is in kelvin", 0},
		{"a heading of another quantity", "Oven (°C) |", "Oven (min) |", "is not a unit of temperature", 0},
		{"a heading without unit", "Oven (°C) |", "Oven |", "has no unit; Temperature needs one", 0},
		{"a text with its unit under a heading without", "Oven (°C) | Cook\nMash | low | 5 | 160 | 45\nHash | round | 6 | 150", "Oven | Cook\nMash | low | 5 | 160 °C | 45\nHash | round | 6 | 150", "has no unit", 1},
		{"a heading that is not there", "Oven (°C) |", "Grill (°C) |", "is no heading", 0},
		{"a sheet that is not there", "S | | | rows", "S | | M | rows", "is the name of no visible sheet", 0},
		{"a file that is not there", "S | | | rows", "S | M* | | rows", "is the name of no file", 0},
		{"a constant only where something is filled", "film |\n", "film | =F\n", "Surroundings is missing", 0},
		{"not possible", "| 5 |", "| 5000 |", "cannot be", 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			text, grid := dishMap, dishes
			switch {
			case c.was == "":
			case strings.Contains(text, c.was):
				text = strings.ReplaceAll(text, c.was, c.is)
			case strings.Contains(grid, c.was):
				grid = strings.Replace(grid, c.was, c.is, 1)
			default:
				t.Fatalf("%q is nowhere", c.was)
			}
			r := mappingOf(text).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", grid))})
			told := problemLines(r)
			for _, n := range r.Not {
				told += fmt.Sprintf("%s: %q %s – %s\n", n.At.short(), n.Typed, n.Why, n.Mend)
			}
			if !strings.Contains(told, c.want) || c.want == "" && r.Problems.Faults()+len(r.Not) > 0 {
				t.Errorf("want %q in\n%s", c.want, told)
			}
			imported := 0
			for _, n := range r.Counts {
				imported += n.Imported
			}
			if imported != c.imported {
				t.Errorf("%d records imported, want %d\n%s", imported, c.imported, told)
			}
			addUp(t, r)
		})
	}
}

// TestBlockFaults are those that only labels can have.
func TestBlockFaults(t *testing.T) {
	for _, c := range []struct{ name, grid, want string }{
		{"side by side", "Door | north | Door | east\nAfter | 7\nAir (°C) | 3", "begins a second block in this row"},
		{"none", "After | 7\nAir (°C) | 3", "begins no block"},
		{"a label twice", "Door | north\nAfter | 7\nAir (°C) | 3\nAfter | 8", "is there twice in the record"},
		{"a label that one block lacks", "Door | north\nAfter | 7\nAir (°C) | 3\nDoor | south\nAfter | 8", "does not occur in the record"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := courses("blocks", "Door", "", "", "Door", "After", "Air (°C)").Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", c.grid))})
			told := problemLines(r)
			for _, n := range r.Not {
				told += n.Why + "\n"
			}
			if !strings.Contains(told, c.want) {
				t.Errorf("want %q in\n%s", c.want, told)
			}
			addUp(t, r)
		})
	}
}

// TestErrorValueOfFormula: of a formula that gives an error no stored result is used, and none is said to be.
func TestErrorValueOfFormula(t *testing.T) {
	g := gridOf("L", strings.Replace(dishes, "| 160 |", "| #REF! |", 1))
	e := &g.Rows[1].Cells[3]
	for _, linked := range []bool{false, true} {
		e.Formula, e.Linked = true, linked
		r := mappingOf(dishMap).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", g)})
		if len(r.Not) != 1 || r.Not[0].At.short() != "D2" || len(r.Problems) > 0 {
			t.Errorf("linked %t: %v\n%s", linked, r.Not, problemLines(r))
		}
	}
}

// TestWordsOrigin: a value that a word stands for leads to the cell of the word, and says that the mapping gave it.
func TestWordsOrigin(t *testing.T) {
	r := mappingOf(dishMap).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", dishes))})
	trail := newTrail(r)
	for i := range r.Made {
		trail.ofMade(&r.Made[i])
	}
	got := map[string]string{}
	for _, row := range trail.rows() {
		got[row[5]] += row[6] + ";"
	}
	for column, want := range map[string]string{"Product": "A;", "Shape": "B by Words;", "Thickness": "B by Words;", "Start temperature": "C;", "Stage": "map: Constants!E2;"} {
		if !strings.HasPrefix(got[column], want) {
			t.Errorf("%s comes from %q, want %q", column, got[column], want)
		}
	}
}

// TestForgottenCells: a record whose cells of a part are all blank is told, unless another record makes the step of its process.
func TestForgottenCells(t *testing.T) {
	text := strings.Replace(dishMap, "S | Tin | Products", "S | Way | Products | Process | | | | yes\nS | Tin | Products", 1)
	for _, c := range []struct{ name, way, want string }{{"a process of its own", "V", "S.xlsx › L!D3: Hash has nothing filled for cook, which another of the source has"}, {"a shared process", "w", ""}} {
		t.Run(c.name, func(t *testing.T) {
			grid := "Dish | Tin | Start | Oven (°C) | Cook | Way\nMash | low | 5 | 160 | 45 | W\nHash | round | 6 | | | " + c.way
			r := mappingOf(text).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", grid))})
			told := problemLines(r)
			if !strings.Contains(told, c.want) || strings.Contains(told, "nothing filled") != (c.want != "") || r.Counts[0].Imported != 2 {
				t.Errorf("want %q in\n%s%v", c.want, told, r.Not)
			}
		})
	}
}

// TestSharedProcess: rows of one process that several records make are made once if they say the same, and refused if they do not.
func TestSharedProcess(t *testing.T) {
	text := strings.Replace(dishMap, "S | Tin | Products", "S | Way | Products | Process | | | | yes\nS | Tin | Products", 1)
	for _, c := range []struct {
		name, cook string
		made, not  int
	}{{"the same", "45", 3, 0}, {"another", "46", 2, 1}} {
		t.Run(c.name, func(t *testing.T) {
			grid := "Dish | Tin | Start | Oven (°C) | Cook | Way\nMash | low | 5 | 160 | 45 | W\nHash | round | 6 | 160 | " + c.cook + " | w"
			r := mappingOf(text).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", grid))})
			if len(r.Made) != c.made || len(r.Not) != c.not {
				t.Errorf("%v %v %s", madeLines(r), r.Not, problemLines(r))
			}
			if c.not > 0 && (r.Not[0].At.short() != "E3" || r.Not[0].Column != "Duration") {
				t.Errorf("%+v", r.Not[0])
			}
		})
	}
}

// sharedMap is dishMap with a process that dishes may share, of two steps.
var sharedMap = strings.NewReplacer(
	"S | Tin | Products", "S | Way | Products | Process | | | | yes\nS | Tin | Products",
	"S | Cook | Steps | Duration | cook | min | | yes", "S | Cook | Steps | Duration | cook | min | | yes\nS | Chill | Steps | Duration | chill | min | | yes",
	"S | Steps | Stage | cook | cook |", "S | Steps | Stage | cook | cook |\nS | Steps | Temperature | chill | 3 °C |\nS | Steps | Surroundings | chill | film |\nS | Steps | Film coefficient | chill | 18 W/m²·K |\nS | Steps | Stage | chill | chill |",
).Replace(dishMap)

// TestSharedProcessOfOtherSteps: a dish whose cells of a step are blank does not take the step that another dish of its process has, and
// what is refused leaves nothing behind for the records after it. One that fills no step takes the process as it is.
func TestSharedProcessOfOtherSteps(t *testing.T) {
	for _, c := range []struct {
		name, rows string
		made       string // sheet, part and first column of each row, with the row of theirs that it is made of
		not        string // what is not imported, and why
	}{
		{"a step is lacking", "Mash | low | 5 | 160 | 45 | 90 | W\nHash | round | 6 | | | 90 | W", "Products Mash 2; Steps cook W 2; Steps chill W 2",
			"row 3 is a process that is made here of chill, but in S.xlsx › L row 2 of cook, chill"},
		{"a step is new", "Mash | low | 5 | | | 90 | W\nHash | round | 6 | 160 | 45 | 90 | w", "Products Mash 2; Steps chill W 2",
			"row 3 is a process that is made here of cook, chill, but in S.xlsx › L row 2 of chill"},
		{"two after each other", "Mash | low | 5 | | | 90 | W\nHash | round | 6 | 160 | 45 | 95 | W\nPie | low | 7 | 165 | 50 | 90 | W", "Products Mash 2; Steps chill W 2",
			"F3 Duration differs from S.xlsx › L row 2, which makes the same row of the plan (Process W, Step chill); row 4 is a process that is made here of cook, chill, but in S.xlsx › L row 2 of chill"},
		{"no step at all", "Mash | low | 5 | 160 | 45 | 90 | W\nHash | round | 6 | | | | W", "Products Mash 2; Steps cook W 2; Steps chill W 2; Products Hash 3", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := mappingOf(sharedMap).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", gridOf("L", "Dish | Tin | Start | Oven (°C) | Cook | Chill | Way\n"+c.rows))})
			var made, not []string
			for _, m := range r.Made {
				made = append(made, fmt.Sprintf("%s %s %d", strings.TrimSpace(m.Sheet.Name+" "+m.Part), m.Values[0].Text, m.Record.Row))
			}
			for _, n := range r.Not {
				not = append(not, n.At.short()+" "+n.Why)
			}
			if diff := cmp.Diff([]string{c.made, c.not}, []string{strings.Join(made, "; "), strings.Join(not, "; ")}); diff != "" {
				t.Errorf("made and not (-want +got):\n%s\n%s", diff, problemLines(r))
			}
		})
	}
}

// addUp holds that the counts add up, and that each record is in exactly one place: imported, left out, not imported.
func addUp(t interface {
	Helper()
	Errorf(string, ...any)
}, r *Result) {
	t.Helper()
	made, left, not := map[Place]bool{}, map[Place]bool{}, map[Place]bool{}
	for _, m := range r.Made {
		made[m.Record] = true
	}
	for _, l := range r.Left {
		left[l.At] = true
	}
	for _, n := range r.Not {
		not[n.Record] = true
		if n.Why == "" || n.Mend == "" {
			t.Errorf("no reason, or no way to mend: %+v", n)
		}
	}
	for p := range made {
		if left[p] || not[p] {
			t.Errorf("%v is imported and is not", p)
		}
	}
	for p := range left {
		if not[p] {
			t.Errorf("%v is left out and not imported", p)
		}
	}
	sum := Count{}
	for _, c := range r.Counts {
		if c.Read != c.Imported+c.LeftOut+c.Not {
			t.Errorf("%+v does not add up", c)
		}
		sum.Read, sum.LeftOut, sum.Not = sum.Read+c.Read, sum.LeftOut+c.LeftOut, sum.Not+c.Not
	}
	if len(r.Counts) == 1 && (sum.LeftOut != len(left) || sum.Not != len(not)) {
		t.Errorf("%+v, but %d left out and %d not imported", sum, len(left), len(not))
	}
}

// TestEachRecordOnce: whatever stands in a sheet, each of its filled rows is imported, left out or not imported, and no row vanishes.
func TestEachRecordOnce(t *testing.T) {
	cells := rapid.SampledFrom([]string{"", "Mash", "Total", "low", "round", "oval", "5", "160", "45", "-3", "'1,5", "'1,234", "1e9", "n/a", "'45 min", "'165 °F"})
	minutes := rapid.SampledFrom([]string{"", "45", "46"})
	rapid.Check(t, func(t *rapid.T) {
		text, filled := "Dish | Tin | Start | Oven (°C) | Cook | Chill | Way", 0
		var places []int
		for n := range rapid.IntRange(1, 12).Draw(t, "rows") {
			row := rapid.SliceOfN(cells, 7, 7).Draw(t, "row")
			if rapid.Bool().Draw(t, "sound") {
				row = append([]string{"Dish " + strconv.Itoa(n), "low", "5", "160"}, rapid.SliceOfN(minutes, 2, 2).Draw(t, "minutes")...)
				row = append(row, "W")
			}
			if strings.Join(row, "") != "" {
				filled++
				places = append(places, n+2)
			}
			text += "\n" + strings.Join(row, " | ")
		}
		g := gridOf("L", text)
		for i := range g.Rows[1:] {
			g.Rows[i+1].Hidden = rapid.IntRange(0, 9).Draw(t, "hidden") == 0
		}
		r := mappingOf(rapid.SampledFrom([]string{dishMap, sharedMap}).Draw(t, "map")).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", g)})
		addUp(t, r)
		if r.Counts[0].Read != filled {
			t.Errorf("%d rows are filled, %d were read", filled, r.Counts[0].Read)
		}
		ended := map[int]bool{}
		for _, m := range r.Made {
			ended[m.Record.Row] = true
		}
		for _, l := range r.Left {
			ended[l.At.Row] = true
		}
		for _, n := range r.Not {
			ended[n.Record.Row] = true
		}
		for _, p := range places {
			if !ended[p] {
				t.Errorf("row %d vanished", p)
			}
		}
	})
}

// FuzzMapping: no mapping makes the import fall over, or the counts not add up.
func FuzzMapping(f *testing.F) {
	f.Add(dishMap)
	f.Add(courseMap)
	f.Add(strings.ReplaceAll(dishMap, "rows | 1", "columns | A-B"))
	f.Add(strings.ReplaceAll(strings.ReplaceAll(dishMap, "rows | 1", "blocks | Dish"), "S | Cook", "S | =B+1"))
	f.Add(strings.ReplaceAll(strings.ReplaceAll(dishMap, "rows | 1", "sheet | -"), "S | Cook", "S | =E2"))
	f.Add("Sources:\nSource | Layout | Heading\n* | rows | 999999999999")
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 1<<14 {
			return
		}
		g := gridOf("L", dishes)
		g.Merged = []workbook.Block{{Left: 1, Top: 3, Right: 2, Bottom: 3}}
		r := mappingOf(text).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", g), fileOf("T.csv", &workbook.Grid{CSV: true}), fileOf("U.xlsx")})
		for _, c := range r.Counts {
			if c.Read != c.Imported+c.LeftOut+c.Not {
				t.Errorf("%+v does not add up", c)
			}
		}
		for _, e := range r.Problems {
			if e.Msg == "" || strings.Contains(e.Msg+e.Hint, "{1}") {
				t.Errorf("no words: %+v", e)
			}
		}
	})
}

// BenchmarkImport imports 10,000 rows of 40 columns, all of them mapped: a product and four steps of nine columns each.
func BenchmarkImport(b *testing.B) {
	text := "Sources:\nSource | Layout | Heading\nS | rows | 1\n\nColumns:\nSource | Theirs | Sheet | Column | Part | Unit | Confirmed\n"
	heads := []string{"Name", "Form", "High", "Start"}
	for i, c := range []string{"Product |", "Shape |", "Thickness | | mm", "Start temperature | | °C"} {
		text += "S | " + heads[i] + " | Products | " + strings.Replace(c, " |", " | ", 1) + map[bool]string{true: " | "}[i < 2] + " | yes\n"
	}
	values := []string{"cook", "moving air", "45", "160", "measured", "1.5", "30", "dry", "oven 3"}
	for p := range 4 {
		for i, c := range []string{"Stage", "Surroundings", "Duration", "Temperature", "Temperature is", "Air speed", "Relative humidity", "Surface", "Equipment"} {
			head := fmt.Sprintf("%s %d", c, p)
			heads = append(heads, head)
			text += fmt.Sprintf("S | %s | Steps | %s | step %d | %s | yes\n", head, c, p, []string{"", "", "min", "°C", "", "m/s", "%", "", ""}[i])
		}
	}
	var rows strings.Builder
	rows.WriteString(strings.Join(heads, "|"))
	for n := range 10_000 {
		fmt.Fprintf(&rows, "\nDish %d|slab|45.5|%d", n, n%9+1)
		for range 4 {
			for i, v := range values {
				if i == 2 {
					v = strconv.Itoa(30 + n%60)
				}
				rows.WriteString("|" + v)
			}
		}
	}
	g := gridOf("L", rows.String())
	b.ReportAllocs()
	for b.Loop() {
		r := mappingOf(text).Import([]*workbook.Spreadsheet{fileOf("S.xlsx", g)})
		if len(r.Made) != 50_000 || len(r.Not) > 0 {
			b.Fatalf("%d rows made, %d not\n%s %v", len(r.Made), len(r.Not), problemLines(r), r.Not[:min(3, len(r.Not))])
		}
	}
}
