package intake

import (
	"bytes"
	"encoding/csv"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/rogpeppe/go-internal/txtar"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

var rewrite = flag.Bool("rewrite", false, "build the workbooks of testdata/import from their texts, and write what is told into problems.txt and bad/*.txtar")

const (
	importFolder = "../../../testdata/import"
	ownList      = "../../../examples/own-list" // files and mapping of sixty-recipes
)

// TestExamples imports the files of every folder of testdata/import by its mapping, and wants exactly the plan that is kept beside them.
func TestExamples(t *testing.T) {
	entries, err := os.ReadDir(importFolder)
	if err != nil {
		t.Fatal(err)
	}
	ran := 0
	for _, e := range entries {
		if !e.IsDir() || e.Name() == "bad" {
			continue
		}
		ran++
		t.Run(e.Name(), func(t *testing.T) {
			dir := filepath.Join(importFolder, e.Name())
			theirs, mapping := filepath.Join(dir, "theirs"), filepath.Join(dir, "map")
			if e.Name() == "sixty-recipes" {
				theirs, mapping = ownList, filepath.Join(ownList, "mapping")
			}
			build(t, filepath.Dir(mapping), theirs)
			r := imported(t, theirs, mapping)
			samePlan(t, r, dir)
			sameList(t, filepath.Join(dir, "left.csv"), leftRows(r))
			sameList(t, filepath.Join(dir, "not.csv"), notRows(r))
			sameText(t, filepath.Join(dir, "counts.txt"), countLines(r), false)
			sameText(t, filepath.Join(dir, "problems.txt"), problemLines(r), *rewrite)
		})
	}
	if ran < 15 {
		t.Errorf("only %d examples were found", ran)
	}
}

// TestBad imports by mappings and of files with one mistake each, and wants exactly what must be told.
func TestBad(t *testing.T) {
	base, err := txtar.ParseFile(filepath.Join(importFolder, "bad", "base.txtar"))
	if err != nil {
		t.Fatal(err)
	}
	cases, err := filepath.Glob(filepath.Join(importFolder, "bad", "*.txtar"))
	if err != nil || len(cases) < 40 {
		t.Fatalf("%d cases, %v", len(cases), err)
	}
	for _, name := range cases {
		title := strings.TrimSuffix(filepath.Base(name), ".txtar")
		if title == "base" {
			continue
		}
		t.Run(title, func(t *testing.T) {
			a, err := txtar.ParseFile(name)
			if err != nil {
				t.Fatal(err)
			}
			files := map[string]string{}
			for _, f := range append(slices.Clone(base.Files), a.Files...) {
				files[f.Name] = string(f.Data)
			}
			want, has := files["expect"]
			if delete(files, "expect"); !has {
				t.Fatal("the case does not say what it expects")
			}
			dir := t.TempDir()
			for name, text := range files {
				if text != "" {
					keepFile(t, filepath.Join(dir, name), text)
				}
			}
			got := told(t, filepath.Join(dir, "theirs"), filepath.Join(dir, "map"))
			if *rewrite {
				for i := range a.Files {
					if a.Files[i].Name == "expect" {
						a.Files[i].Data = []byte(got)
					}
				}
				if err := os.WriteFile(name, txtar.Format(a), 0o644); err != nil {
					t.Fatal(err)
				}
				return
			}
			if d := cmp.Diff(strings.Split(want, "\n"), strings.Split(got, "\n")); d != "" {
				t.Errorf("(- expected, + told)\n%s", d)
			}
		})
	}
}

// keepFile writes a file; a workbook in words is built.
func keepFile(t *testing.T, name, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
		t.Fatal(err)
	}
	data := []byte(text)
	if filepath.Ext(name) == ".txt" {
		name, data = strings.TrimSuffix(name, ".txt")+".xlsx", builtBook(t, text)
	}
	if err := os.WriteFile(name, data, 0o644); err != nil {
		t.Fatal(err)
	}
}

// build makes the workbooks of an example from their texts, and wants them to be those that are kept.
func build(t *testing.T, texts, theirs string) {
	t.Helper()
	names, err := filepath.Glob(filepath.Join(texts, "*.xlsx.txt"))
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range names {
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		kept, made := filepath.Join(theirs, strings.TrimSuffix(filepath.Base(name), ".txt")), builtBook(t, string(text))
		if *rewrite {
			if err := os.MkdirAll(theirs, 0o755); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(kept, made, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		if b, err := os.ReadFile(kept); err != nil || !bytes.Equal(b, made) {
			t.Fatalf("%s is not what %s makes (%v); build it with -rewrite", kept, name, err)
		}
	}
}

// theirFiles reads the files of a folder in order of name.
func theirFiles(t *testing.T, folder string) []*workbook.Spreadsheet {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	var out []*workbook.Spreadsheet
	for _, e := range entries {
		if ext := filepath.Ext(e.Name()); ext != ".xlsx" && ext != ".csv" {
			continue
		}
		s, err := workbook.ReadSpreadsheet(filepath.Join(folder, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, s)
	}
	return out
}

func imported(t *testing.T, theirs, mapping string) *Result {
	t.Helper()
	m, err := ReadMapping(mapping)
	if err != nil {
		t.Fatal(err)
	}
	return m.Import(theirFiles(t, theirs))
}

// told is everything that an import tells: its problems, what it could not use, its counts.
func told(t *testing.T, theirs, mapping string) string {
	t.Helper()
	m, err := ReadMapping(mapping)
	if err != nil {
		return strings.ReplaceAll(err.Error(), filepath.Dir(mapping)+string(filepath.Separator), "") + "\n"
	}
	r := m.Import(theirFiles(t, theirs))
	var b strings.Builder
	b.WriteString(problemLines(r))
	for _, n := range r.Not {
		fmt.Fprintf(&b, "not imported: %s: %s: %s: %q %s – %s\n", r.Where(at(n)), n.Product, n.Column, n.Typed, n.Why, n.Mend)
	}
	for _, l := range r.Left {
		fmt.Fprintf(&b, "left out: %s: %s\n", r.Where(l.At), l.Reason)
	}
	b.WriteString(countLines(r))
	return b.String()
}

// at is the cell at fault, or the record.
func at(n NotImported) Place {
	if n.At.Row == 0 && n.At.Col == 0 {
		return n.Record
	}
	return n.At
}

func problemLines(r *Result) string {
	var b strings.Builder
	for i := range r.Problems {
		e := &r.Problems[i]
		fmt.Fprintf(&b, "%s: %s\n", e.Level, e.Error())
	}
	return b.String()
}

// countLines also holds that the counts add up.
func countLines(r *Result) string {
	var b strings.Builder
	for _, c := range r.Counts {
		fmt.Fprintf(&b, "%s: %d read = %d imported + %d left out + %d not imported\n", c.Source, c.Read, c.Imported, c.LeftOut, c.Not)
		if c.Read != c.Imported+c.LeftOut+c.Not {
			b.WriteString("the counts do not add up\n")
		}
	}
	return b.String()
}

func leftRows(r *Result) [][]string {
	rows := [][]string{{"Place", "Reason"}}
	for _, l := range r.Left {
		rows = append(rows, []string{r.Where(l.At), l.Reason})
	}
	return rows
}

func notRows(r *Result) [][]string {
	rows := [][]string{{"Place", "Product", "Column", "Typed"}}
	for _, n := range r.Not {
		rows = append(rows, []string{r.Where(at(n)), n.Product, n.Column, n.Typed})
	}
	return rows
}

// samePlan writes the plan and wants its sheets to hold what the CSV files of the folder plan hold, no more and no less; and the reader
// of plans to find no fault in it.
func samePlan(t *testing.T, r *Result, dir string) {
	t.Helper()
	name := filepath.Join(t.TempDir(), "plan.xlsx")
	var out, again bytes.Buffer
	if err := Write(&out, r); err != nil {
		t.Fatal(err)
	}
	if err := Write(&again, r); err != nil || !bytes.Equal(out.Bytes(), again.Bytes()) {
		t.Errorf("the plan differs from one time to the next (%v)", err)
	}
	if err := os.WriteFile(name, out.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	s, err := workbook.ReadSpreadsheet(name)
	if err != nil {
		t.Fatal(err)
	}
	got := map[string][][]string{}
	for _, g := range s.Sheets {
		if workbook.SheetNamed(g.Name) != nil {
			got[g.Name] = rowsOf(g)
		}
	}
	for _, sheet := range workbook.Sheets {
		want := wanted(t, filepath.Join(dir, "plan", sheet.Name+".csv"))
		if d := cmp.Diff(want, got[sheet.Name]); d != "" {
			t.Errorf("%s (- must come out, + came out)\n%.4000s", sheet.Name, d)
		}
	}
	p, err := workbook.Read(name)
	if err != nil {
		t.Fatal(err)
	}
	for i := range p.Problems {
		if e := &p.Problems[i]; e.Level == cell.Fault {
			t.Errorf("the plan that came out has a fault: %s", e.Error())
		}
	}
}

// rowsOf are the rows of a sheet that the program wrote, from its headings on, without the checksums of #From.
func rowsOf(g *workbook.Grid) [][]string {
	var rows [][]string
	wide := 0
	for _, row := range g.Rows {
		if row.N < workbook.HeadRow {
			continue
		}
		if row.N == workbook.HeadRow {
			wide = int(row.Cells[len(row.Cells)-1].Col)
		}
		cells := make([]string, wide)
		for _, e := range row.Cells {
			cells[e.Col-1] = e.Text
		}
		cells[wide-1], _, _ = strings.Cut(cells[wide-1], " · ")
		rows = append(rows, cells)
	}
	return rows
}

// wanted reads a CSV file; none if it is not there.
func wanted(t *testing.T, name string) [][]string {
	t.Helper()
	b, err := os.ReadFile(name)
	if os.IsNotExist(err) {
		return nil
	}
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(b)).ReadAll()
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return rows
}

// sameList wants the rows of a CSV file; without the file there must be none below the headings.
func sameList(t *testing.T, name string, got [][]string) {
	t.Helper()
	want := wanted(t, name)
	if want == nil {
		want = got[:1]
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("%s (- must come out, + came out)\n%s", filepath.Base(name), d)
	}
}

// sameText wants the text of a file; without the file there must be none.
func sameText(t *testing.T, name, got string, write bool) {
	t.Helper()
	if write {
		if got == "" {
			os.Remove(name)
		} else if err := os.WriteFile(name, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(name)
	if err != nil && !os.IsNotExist(err) {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got, "\n")); d != "" {
		t.Errorf("%s (- must be told, + told)\n%s", filepath.Base(name), d)
	}
}

// plainNumber tells whether a text is a plain number.
func plainNumber(s string) (float64, bool) {
	x, err := strconv.ParseFloat(s, 64)
	return x, err == nil && strings.Trim(s, "0123456789.-") == ""
}
