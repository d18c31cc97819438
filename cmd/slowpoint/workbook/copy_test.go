package workbook

import (
	"archive/zip"
	"bytes"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"slowpoint/model/cell"
	"slowpoint/rules"
	"slowpoint/rules/codes"

	"github.com/xuri/excelize/v2"
)

// asRows gives starter limits as rows of a plan.
func asRows(list []codes.Row) Rows {
	out := Rows{}
	for _, r := range list {
		out["Limits"] = append(out["Limits"], r.Cells)
		for _, x := range r.Tables {
			out["Tables"] = append(out["Tables"], map[string]string{"Table": x.Table, "Temperature": x.Temperature, "Time": x.Time})
		}
		for _, x := range r.Groups {
			out["Groups"] = append(out["Groups"], map[string]string{"Group": x.Group, "Join": x.Join, "Within": x.Within})
		}
	}
	return out
}

func rowsOf(t *testing.T, ids ...string) Rows {
	t.Helper()
	list, err := codes.ByID(ids...)
	if err != nil {
		t.Fatal(err)
	}
	return asRows(list)
}

// plan is a workbook made of sheets: rows of cells, numbers as numbers.
type plan map[string][][]any

// everyStage is a product whose process has all stages, so that limits of every stage have something to be about.
func everyStage() plan {
	steps := [][]any{{"Process", "Step", "Stage", "Duration (min)", "Surroundings", "Temperature (°C)"}}
	for _, s := range stageNames {
		steps = append(steps, []any{"Chain", s, s, 37, "water bath", 45})
	}
	return plan{
		"Products": {{"Product", "Process", "Shape", "Thickness (mm)", "Food", "Start temperature (°C)"}, {"Block", "Chain", "slab", 23, "Carrots, boiled", 12}},
		"Steps":    steps,
	}
}

// save writes the plan, with sheets in the order of Sheets; change may spoil it first.
func (p plan) save(t *testing.T, change func(*excelize.File)) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	for _, s := range Sheets {
		if p[s.Name] == nil {
			continue
		}
		if _, err := f.NewSheet(s.Name); err != nil {
			t.Fatal(err)
		}
		for i, row := range p[s.Name] {
			for j, v := range row {
				if v == "" {
					continue
				}
				at, _ := excelize.CoordinatesToCellName(j+1, i+1)
				if err := f.SetCellValue(s.Name, at, v); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
	if err := f.DeleteSheet("Sheet1"); err != nil {
		t.Fatal(err)
	}
	if change != nil {
		change(f)
	}
	path := filepath.Join(t.TempDir(), "plan.xlsx")
	if err := f.SaveAs(path); err != nil {
		t.Fatal(err)
	}
	return path
}

// copied copies rows into a plan and gives the new one with what it lacks.
func copied(t *testing.T, rows Rows, path string) (*Plan, []string, string) {
	t.Helper()
	var b bytes.Buffer
	_, lacks, err := CopyRows(rows, path, &b)
	if err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(t.TempDir(), "copy.xlsx")
	if err := os.WriteFile(out, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	return readPlan(t, out), lacks, out
}

// inLimits are the problems of the sheets that rows are copied to.
func inLimits(p *Plan) (out cell.Errors) {
	for _, e := range p.Problems {
		if e.At.Sheet == "Limits" || e.At.Sheet == "Tables" || e.At.Sheet == "Groups" {
			out.Add(e)
		}
	}
	return out
}

// limitNamed finds a limit of a plan.
func limitNamed(t *testing.T, p *Plan, name string) *rules.Limit {
	t.Helper()
	for i := range p.Limits {
		if p.Limits[i].Name == name {
			return &p.Limits[i]
		}
	}
	t.Fatalf("there is no limit %q", name)
	return nil
}

// TestEveryStarterReads: each starter limit can be copied, and is read without a problem and as the rule that it is.
func TestEveryStarterReads(t *testing.T) {
	all := codes.All()
	p, lacks, _ := copied(t, asRows(all), everyStage().save(t, nil))
	if len(lacks) > 0 {
		t.Errorf("not carried over: %v", lacks)
	}
	for _, e := range inLimits(p) {
		t.Errorf("%s: %v", e.Level, e)
	}
	if len(p.Limits) != len(all) {
		t.Fatalf("%d limits, want %d", len(p.Limits), len(all))
	}
	for i, l := range p.Limits {
		r := all[i]
		if l.Name != r.Title || l.Kind == nil || l.Kind.Name != r.Cells["Rule"] || l.Unreadable != "" {
			t.Errorf("%s: read as %q, %v, %s", r.ID, l.Name, l.Kind, l.Unreadable)
		}
		if (l.Table != nil) != (len(r.Tables) > 0) || l.Table != nil && len(l.Table.Rows) != len(r.Tables) {
			t.Errorf("%s: the table is %v, want %d rows", r.ID, l.Table, len(r.Tables))
		}
	}
}

// TestCopyFitsHeadings: rows fit the user's own headings, units and columns, and stand below the user's last row; 145 °F is 62.78 °C.
func TestCopyFitsHeadings(t *testing.T) {
	w := everyStage()
	w["Limits"] = [][]any{
		{"our limits, kept since spring"},
		{"Time (h)", "#checked", "LIMIT", "Rule", "Applies to", "From (°F)", "Counting", "Stage", "Code", "Clause", "Edition"},
		{2, "yes", "Ours", "hold", "all", 140, "total", "cook", "House rules", "4", "1"},
	}
	list := rowsOf(t, "JP-MHLW-cook", "CA-FDR-B22.026+food")
	p, lacks, path := copied(t, list, w.save(t, nil))
	if len(lacks) > 0 {
		t.Errorf("not carried over: %v", lacks)
	}
	for _, e := range inLimits(p) {
		if e.Level != cell.Note {
			t.Errorf("%s: %v", e.Level, e)
		}
	}
	ours := limitNamed(t, p, "Ours")
	if *ours.TimeS != 7200 || math.Abs(*ours.FromC-60) > 1e-9 || ours.At.Row != 3 {
		t.Errorf("Ours is now %v s, %v °C in row %d", *ours.TimeS, *ours.FromC, ours.At.Row)
	}
	cook := limitNamed(t, p, "MHLW: centre 75 °C for 1 min")
	if *cook.FromC != 75 || *cook.TimeS != 60 || cook.At.Row != 4 {
		t.Errorf("%v °C, %v s in row %d, want 75, 60, 4", *cook.FromC, *cook.TimeS, cook.At.Row)
	}
	food := limitNamed(t, p, "Canada B.22.026: food outside 40 °F to 140 °F")
	if math.Abs(*food.FromC-40.0/9) > 1e-9 || math.Abs(*food.ToC-60) > 1e-9 { // (40 − 32)/1.8, (140 − 32)/1.8
		t.Errorf("%v to %v °C", *food.FromC, *food.ToC)
	}
	f, err := excelize.OpenFile(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if v, _ := f.GetCellValue("Limits", "B4"); v != "" {
		t.Errorf("the user's own column holds %q in a new row", v)
	}
}

// TestCopyNames: what is there already is used, what differs takes a numbered name, and the limits follow.
func TestCopyNames(t *testing.T) {
	const id, group, name = "UK-ACMSF-burger-equivalents", "ACMSF burgers", "ACMSF burgers: stated equivalents at 65 °C and 75 °C"
	rows := rowsOf(t, id)
	same := [][]any{{"Table", "Time (s)", "Temperature (°F)"}}
	for i := len(rows["Tables"]) - 1; i >= 0; i-- { // another order and other units: 65 °C is 149 °F, 75 °C is 167 °F
		r := rows["Tables"][i]
		same = append(same, []any{r["Table"], r["Time"], map[string]any{"65 °C": 149, "75 °C": 167}[r["Temperature"]]})
	}
	other := [][]any{{"Table", "Temperature (°C)", "Time (min)"}, {rows["Tables"][0]["Table"], 71, 3}}
	for _, c := range []struct {
		name          string
		tables        [][]any
		join          string
		times         int
		tablesAfter   int
		table, group  string // of the last limit
		limit         string
		groupRowsWant int
	}{
		{"nothing there", nil, "", 1, 2, group, group, name, 1},
		{"copied twice", nil, "", 2, 2, group, group, name, 1},
		{"the same table in other units", same, "any of", 1, 2, group, group, name, 1},
		{"another table of that name", other, "any of", 1, 3, group + " (2)", group, name, 1},
		{"another group of that name", nil, "all of", 1, 2, group, group + " (2)", name, 2},
		{"a group without a row, which is all of", nil, "no row", 1, 2, group, group + " (2)", name, 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			w := everyStage()
			if c.tables != nil {
				w["Tables"] = c.tables
			}
			w["Limits"] = [][]any{{"Limit", "Rule", "Applies to", "Stage", "From (°C)", "Time (min)", "Counting", "Table", "Group", "Code", "Clause", "Edition"},
				{"Ours", "hold", "all", "cook", 66, 5, "total", "", "", "House rules", "4", "1"}}
			if c.join != "" {
				if c.join != "no row" {
					w["Groups"] = [][]any{{"Group", "Join"}, {group, c.join}}
				}
				w["Limits"][1][8] = group
			}
			path := w.save(t, nil)
			var p *Plan
			for range c.times {
				p, _, path = copied(t, rowsOf(t, id), path)
			}
			for _, e := range inLimits(p) {
				t.Errorf("%s: %v", e.Level, e)
			}
			if len(p.Limits) != 2 {
				t.Errorf("%d limits, want ours and the new one", len(p.Limits))
			}
			l := limitNamed(t, p, c.limit)
			if l.Typed["Table"] != c.table || l.Group != c.group || len(l.Table.Rows) != 2 {
				t.Errorf("table %q of %d rows, group %q, want %q of 2 rows, %q", l.Typed["Table"], len(l.Table.Rows), l.Group, c.table, c.group)
			}
			if len(p.Groups) != c.groupRowsWant {
				t.Errorf("%d groups, want %d", len(p.Groups), c.groupRowsWant)
			}
			f, err := excelize.OpenFile(path)
			if err != nil {
				t.Fatal(err)
			}
			defer f.Close()
			n := 0
			for i := 2; i < 20; i++ {
				if v, _ := f.GetCellValue("Tables", "A"+strconv.Itoa(i)); strings.HasPrefix(v, group) {
					n++
				}
			}
			if n != c.tablesAfter {
				t.Errorf("%d rows of the table, want %d", n, c.tablesAfter)
			}
		})
	}
}

// TestCopyDecimalComma: a plan with decimal commas gets decimal commas. z of the row is 7.5 °C.
func TestCopyDecimalComma(t *testing.T) {
	w := everyStage()
	w["Products"][1][3] = "23,5"
	p, _, _ := copied(t, rowsOf(t, "UK-P70"), w.save(t, nil))
	for _, e := range p.Problems {
		if e.At.Sheet != "Steps" { // freezing and thawing
			t.Errorf("%s: %v", e.Level, e)
		}
	}
	if l := limitNamed(t, p, "70 °C for 2 min, z 7.5 °C"); l.ZK == nil || *l.ZK != 7.5 {
		t.Errorf("z is %v, want 7.5", l.ZK)
	}
}

// TestCopyLeavesPlan: the demo with rows added reads as before, and its file is not touched.
func TestCopyLeavesPlan(t *testing.T) {
	before, path := written(t, true)
	p, lacks, _ := copied(t, rowsOf(t, "IE-GN15-cook", "IE-GN15-store+cold"), path)
	if len(p.Problems) > 0 || len(lacks) > 0 {
		t.Errorf("problems %v, not carried over %v", p.Problems, lacks)
	}
	if len(p.Products) != 5 || len(p.Limits) != 12 || len(p.Groups) != 3 {
		t.Errorf("%d products, %d limits, %d groups, want 5, 12, 3", len(p.Products), len(p.Limits), len(p.Groups))
	}
	after, err := os.ReadFile(path)
	if err != nil || !bytes.Equal(before, after) {
		t.Errorf("the user's own workbook has changed (%v)", err)
	}
}

// TestCopyRefuses: what cannot take rows is told, and nothing is written.
func TestCopyRefuses(t *testing.T) {
	limits := [][]any{{"Limit", "Rule", "Applies to"}, {"Ours", "stated", "all"}}
	with := func(change func(*excelize.File), sheet [][]any) func(*testing.T) string {
		return func(t *testing.T) string {
			w := everyStage()
			w["Limits"] = sheet
			return w.save(t, change)
		}
	}
	for _, c := range []struct {
		name, want string
		path       func(*testing.T) string
	}{
		{"a folder", "folder of CSV", func(t *testing.T) string { return t.TempDir() }},
		{"no such file", "there is no such file or folder; look at the spelling of its name", func(t *testing.T) string { return filepath.Join(t.TempDir(), "none.xlsx") }},
		{"not a workbook", "none.xlsx: ", func(t *testing.T) string {
			path := filepath.Join(t.TempDir(), "none.xlsx")
			if err := os.WriteFile(path, []byte("Limit,Rule\n"), 0o644); err != nil {
				t.Fatal(err)
			}
			return path
		}},
		{"a hidden sheet", "hidden", with(func(f *excelize.File) { _ = f.SetSheetVisible("Limits", false) }, limits)},
		{"no headings", "no row with all its headings", with(nil, [][]any{{"Limit", "Rule"}, {"Ours", "stated"}})},
	} {
		t.Run(c.name, func(t *testing.T) {
			var b bytes.Buffer
			_, _, err := CopyRows(rowsOf(t, "UK-P70"), c.path(t), &b)
			if err == nil || !strings.Contains(err.Error(), c.want) || b.Len() > 0 {
				t.Errorf("error %v with %d bytes written, want one that says %q", err, b.Len(), c.want)
			}
		})
	}
}

// TestCopyTellsLoss: what the copy lacks is told. Element names that no spreadsheet program knows are sure to be dropped.
func TestCopyTellsLoss(t *testing.T) {
	w := everyStage()
	w["Limits"] = [][]any{{"Limit", "Rule", "Applies to"}, {"Ours", "stated", "all"}}
	path := w.save(t, func(f *excelize.File) {
		if err := f.AddTable("Limits", &excelize.Table{Range: "A1:C2", Name: "OurLimits"}); err != nil {
			t.Fatal(err)
		}
	})
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	spoiled := edited(t, data, "xl/worksheets/sheet4.xml", "</worksheet>", "<customThing><inner/></customThing></worksheet>")
	if err := os.WriteFile(path, spoiled, 0o644); err != nil {
		t.Fatal(err)
	}
	_, lacks, _ := copied(t, rowsOf(t, "UK-P70"), path)
	said := strings.Join(lacks, "\n")
	for _, want := range []string{"customThing (1 in xl/worksheets/sheet4.xml)", "the table OurLimits of the sheet Limits"} {
		if !strings.Contains(said, want) {
			t.Errorf("told is %q, want %q", said, want)
		}
	}
}

// TestCopyKeeps: charts, notes, and macros (which are never run) are in the copy, and nothing is told as lost.
func TestCopyKeeps(t *testing.T) {
	w := everyStage()
	w["Limits"] = [][]any{{"Limit", "Rule", "Applies to"}, {"Ours", "stated", "all"}}
	path := w.save(t, func(f *excelize.File) {
		if err := f.AddChart("Limits", "E5", &excelize.Chart{Type: excelize.Col, Series: []excelize.ChartSeries{{Name: "a", Values: "Steps!$D$2:$D$6"}}}); err != nil {
			t.Fatal(err)
		}
		if err := f.AddComment("Limits", excelize.Comment{Cell: "A2", Text: "ask the chef"}); err != nil {
			t.Fatal(err)
		}
	})
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	macros := edited(t, data, "[Content_Types].xml", "spreadsheetml.sheet.main+xml", "x-not-yet")
	macros = edited(t, macros, "[Content_Types].xml", "application/vnd.openxmlformats-officedocument.x-not-yet", "application/vnd.ms-excel.sheet.macroEnabled.main+xml")
	macros = edited(t, macros, "xl/_rels/workbook.xml.rels", "</Relationships>",
		`<Relationship Id="rId99" Type="http://schemas.microsoft.com/office/2006/relationships/vbaProject" Target="vbaProject.bin"/></Relationships>`)
	macros = withPart(t, macros, "xl/vbaProject.bin", "macros")
	if err := os.WriteFile(path, macros, 0o644); err != nil {
		t.Fatal(err)
	}
	_, lacks, out := copied(t, rowsOf(t, "UK-P70"), path)
	if len(lacks) > 0 {
		t.Errorf("told as lost: %v", lacks)
	}
	now, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	for part, holds := range map[string]string{"xl/vbaProject.bin": "macros", "xl/charts/chart1.xml": "Steps!$D$2:$D$6", "xl/comments1.xml": "ask the chef", "[Content_Types].xml": "macroEnabled.main+xml"} {
		edited(t, now, part, holds, "") // fails where the part does not hold it
	}
}

// TestCopySameBytes: the same rows and plan give the same bytes.
func TestCopySameBytes(t *testing.T) {
	path := everyStage().save(t, nil)
	var first bytes.Buffer
	for i := range 4 {
		var b bytes.Buffer
		if _, _, err := CopyRows(rowsOf(t, "UK-FSA-VPMAP", "UK-ACMSF-burger-70"), path, &b); err != nil {
			t.Fatal(err)
		}
		if i == 0 {
			first = b
		} else if !bytes.Equal(first.Bytes(), b.Bytes()) {
			t.Fatal("two copies differ")
		}
	}
}

// withPart gives a workbook with one more part.
func withPart(t *testing.T, data []byte, part, holds string) []byte {
	t.Helper()
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for _, f := range z.File {
		if err := w.Copy(f); err != nil {
			t.Fatal(err)
		}
	}
	o, err := w.Create(part)
	if err == nil {
		_, err = io.WriteString(o, holds)
	}
	if err == nil {
		err = w.Close()
	}
	if err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// edited gives a workbook with a text of one part replaced; it fails where the part does not hold the text.
func edited(t *testing.T, data []byte, part, from, to string) []byte {
	t.Helper()
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	hit := false
	for _, f := range z.File {
		r, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		body, err := io.ReadAll(r)
		if err != nil {
			t.Fatal(err)
		}
		if f.Name == part {
			hit = bytes.Contains(body, []byte(from))
			body = bytes.Replace(body, []byte(from), []byte(to), 1)
		}
		o, err := w.Create(f.Name)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := o.Write(body); err != nil {
			t.Fatal(err)
		}
	}
	if !hit {
		t.Fatalf("%s does not hold %q", part, from)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// TestCopyTwice: a limit that the plan has already is told and not added, in whatever units it stands there; another one of its name is.
func TestCopyTwice(t *testing.T) {
	const id = "UK-P70"
	name := rowsOf(t, id)["Limits"][0]["Limit"]
	for _, c := range []struct {
		name    string
		change  func(f *excelize.File, sheet string, at map[string]string) error
		there   int
		renamed bool
	}{
		{"unchanged", nil, 1, false},
		{"confirmed and noted", func(f *excelize.File, s string, at map[string]string) error {
			return errors.Join(f.SetCellStr(s, at["Confirmed by"], "A. Cook"), f.SetCellStr(s, at["Note"], "seen"))
		}, 1, false},
		{"in the other degrees", func(f *excelize.File, s string, at map[string]string) error {
			return f.SetCellStr(s, at["Reference temperature"], "158 °F") // 70 °C
		}, 1, false},
		{"another temperature", func(f *excelize.File, s string, at map[string]string) error {
			return f.SetCellStr(s, at["Reference temperature"], "71 °C")
		}, 0, true},
		{"for one product", func(f *excelize.File, s string, at map[string]string) error {
			return f.SetCellStr(s, at["Applies to"], "P")
		}, 0, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, _, path := copied(t, rowsOf(t, id), everyStage().save(t, nil))
			row := strconv.Itoa(limitNamed(t, p, name).At.Row)
			if c.change != nil {
				f, err := excelize.OpenFile(path)
				if err != nil {
					t.Fatal(err)
				}
				at := map[string]string{}
				for h, col := range p.Columns["Limits"] {
					at[h] = cell.ColumnName(col) + row
				}
				if err := errors.Join(c.change(f, "Limits", at), f.Save(), f.Close()); err != nil {
					t.Fatal(err)
				}
			}
			var b bytes.Buffer
			there, _, err := CopyRows(rowsOf(t, id), path, &b)
			if err != nil || len(there) != c.there || c.there == 1 && there[0] != name {
				t.Errorf("there already: %q, %v", there, err)
			}
			again := filepath.Join(t.TempDir(), "again.xlsx")
			if err := os.WriteFile(again, b.Bytes(), 0o644); err != nil {
				t.Fatal(err)
			}
			if q := readPlan(t, again); (len(q.Limits) == len(p.Limits)+1) != c.renamed {
				t.Errorf("%d limits, there were %d", len(q.Limits), len(p.Limits))
			}
		})
	}
}
