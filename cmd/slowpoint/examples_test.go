package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"slowpoint/cmd/slowpoint/workbook"
)

// examples are the folders of examples/: the flags of their run, besides --out and --date, the exit code that they teach,
// and the files of the report that are kept; all of them if there is no list.
var examples = []struct {
	folder string
	flags  []string
	exit   int
	keep   []string
}{
	{"trays", []string{"--every", "600s"}, exitNotMet, nil},
	{"roast", []string{"--every", "600s"}, exitNotMet, nil},
	{"eggs-and-dumplings", []string{"--every", "600s"}, exitNotMet, nil},
	{"letter-and-inches", []string{"--every", "600s"}, exitMet, nil},
	{"frozen-to-tray", []string{"--every", "600s"}, exitNotMet, nil},
	{"pie-in-a-tin", []string{"--every", "600s"}, exitNotMet, nil},
	{"humid-and-dry-oven", []string{"--every", "600s"}, exitNotMet, nil},
	{"worst-case", []string{"--every", "600s", "--samples", "200"}, exitNotMet, nil},
	{"trial-runs", []string{"--every", "600s", "--fit", "film"}, exitNotMet, nil},
	{"chiller-failure", []string{"--every", "600s"}, exitNotMet, nil},
	{"sixty-products", []string{"--every", "3600s"}, exitInput, []string{"summary.pdf", "report.txt", "results.json"}},
}

// exampleDate is the date on the reports of the examples.
const exampleDate = "2026-01-31"

// TestExamples makes the workbook of every example from its CSV files and the report from the workbook, and wants the very bytes
// that are kept. With -rewrite it keeps what it made.
func TestExamples(t *testing.T) {
	if testing.Short() {
		t.Skip("sixty products and their reports take some seconds")
	}
	for _, e := range examples {
		t.Run(e.folder, func(t *testing.T) {
			dir := filepath.Join(top, "examples", e.folder)
			made := map[string][]byte{"plan.xlsx": filled(t, filepath.Join(dir, "plan"))}
			again := filled(t, filepath.Join(dir, "plan"))
			if !bytes.Equal(made["plan.xlsx"], again) {
				t.Error("the workbook differs from one time to the next")
			}
			tmp := t.TempDir()
			book, out := filepath.Join(tmp, "plan.xlsx"), filepath.Join(tmp, "report")
			if err := os.WriteFile(book, made["plan.xlsx"], 0o644); err != nil {
				t.Fatal(err)
			}
			if records := filepath.Join(dir, "plan", "records"); isThere(records) { // files of loggers lie beside the plan
				if err := os.CopyFS(filepath.Join(tmp, "records"), os.DirFS(records)); err != nil {
					t.Fatal(err)
				}
				for name, b := range filesIn(t, records) {
					made["records/"+name] = b
				}
			}
			checked(t, book, out, e.flags, e.exit)
			for name, b := range filesIn(t, out) {
				if e.keep == nil || slices.Contains(e.keep, name) {
					made["report/"+name] = b
				}
			}
			for _, name := range e.keep {
				if made["report/"+name] == nil {
					t.Errorf("the run wrote no %s", name)
				}
			}
			if *rewrite {
				keep(t, dir, made)
			} else {
				sameAsKept(t, dir, made)
			}
			plain := filepath.Join(tmp, "csv")
			checked(t, filepath.Join(dir, "plan"), plain, append([]string{"--no-pdf"}, e.flags...), e.exit)
			if a, b := results(t, plain), results(t, out); !bytes.Equal(a, b) {
				t.Errorf("the CSV files and the workbook give different results%s", firstDifference(a, b))
			}
		})
	}
}

func isThere(name string) bool {
	_, err := os.Stat(name)
	return err == nil
}

// checked runs check on a plan and wants the exit code.
func checked(t *testing.T, plan, out string, flags []string, exit int) {
	t.Helper()
	var errs bytes.Buffer
	args := append([]string{"check", plan, "--out", out, "--date", exampleDate}, flags...)
	if code := run(args, strings.NewReader(""), io.Discard, &errs); code != exit {
		t.Fatalf("exit code %d, want %d; standard error:\n%s", code, exit, errs.String())
	}
}

// filesIn reads the files of a folder, by name; not those of folders in it.
func filesIn(t *testing.T, dir string) map[string][]byte {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	out := map[string][]byte{}
	for _, e := range entries {
		if e.IsDir() {
			continue
		}
		b, err := os.ReadFile(filepath.Join(dir, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		out[e.Name()] = b
	}
	return out
}

// keep writes the workbook and the report of an example and removes what the report no longer has.
func keep(t *testing.T, dir string, made map[string][]byte) {
	t.Helper()
	if err := os.RemoveAll(filepath.Join(dir, "report")); err != nil {
		t.Fatal(err)
	}
	for name, b := range made {
		if err := os.MkdirAll(filepath.Dir(filepath.Join(dir, name)), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(dir, name), b, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// sameAsKept wants the kept files to be those that were made, no more and no fewer, byte by byte.
func sameAsKept(t *testing.T, dir string, made map[string][]byte) {
	t.Helper()
	kept := map[string][]byte{}
	for name, b := range filesIn(t, filepath.Join(dir, "report")) {
		kept["report/"+name] = b
	}
	if records := filepath.Join(dir, "records"); isThere(records) {
		for name, b := range filesIn(t, records) {
			kept["records/"+name] = b
		}
	}
	b, err := os.ReadFile(filepath.Join(dir, "plan.xlsx"))
	if err != nil {
		t.Fatal(err)
	}
	kept["plan.xlsx"] = b
	const how = "rewrite with go test ./cmd/slowpoint -run TestExamples -rewrite"
	for name := range kept {
		if made[name] == nil {
			t.Errorf("%s is kept and no longer made; %s", name, how)
		}
	}
	for name, b := range made {
		if kept[name] == nil {
			t.Errorf("%s is made and not kept; %s", name, how)
		} else if !bytes.Equal(kept[name], b) {
			t.Errorf("%s differs from what is made; %s%s", name, how, firstDifference(kept[name], b))
		}
	}
}

// firstDifference tells the first line that two text files do not share; nothing for other files.
func firstDifference(kept, made []byte) string {
	if !utf8.Valid(kept) || !utf8.Valid(made) {
		return ""
	}
	a, b := strings.Split(string(kept), "\n"), strings.Split(string(made), "\n")
	for i := range min(len(a), len(b)) {
		if a[i] != b[i] {
			return fmt.Sprintf("\nline %d\n- %.300s\n+ %.300s", i+1, a[i], b[i])
		}
	}
	return fmt.Sprintf("\n%d lines, then %d", len(a), len(b))
}

// results gives what results.json says about the products, without cells, which differ from one form of a plan to the other.
func results(t *testing.T, dir string) []byte {
	t.Helper()
	b, err := os.ReadFile(filepath.Join(dir, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var all struct {
		Products []map[string]any `json:"products"`
	}
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	if len(all.Products) == 0 {
		t.Fatal("results.json has no product")
	}
	for _, p := range all.Products {
		for list, place := range map[string]string{"findings": "cells", "input": "at"} {
			for _, f := range p[list].([]any) {
				delete(f.(map[string]any), place)
			}
		}
		placeless(p["records"])
		placeless(p["as_recorded"])
		worst, _ := p["worst_cases"].([]any) // only where something varies
		for _, w := range worst {
			for _, d := range w.(map[string]any)["drivers"].([]any) {
				delete(d.(map[string]any), "at")
			}
		}
	}
	if b, err = json.MarshalIndent(all.Products, "", " "); err != nil {
		t.Fatal(err)
	}
	return b
}

// placeless takes the places in a plan out of records, which only some products have.
func placeless(v any) {
	switch v := v.(type) {
	case []any:
		for _, x := range v {
			placeless(x)
		}
	case map[string]any:
		delete(v, "at")
		delete(v, "cells")
		for _, x := range v {
			placeless(x)
		}
	}
}

// unitOf finds the unit of a heading.
var unitOf = regexp.MustCompile(`\s*\([^)]*\)$`)

// filled fills the blank workbook with the CSV files of a folder, as a person would: each value under its heading, numbers as numbers,
// the unit of the heading changed where the folder has another.
func filled(t *testing.T, folder string) []byte {
	t.Helper()
	var blank bytes.Buffer
	if err := workbook.WriteBlank(&blank, false); err != nil {
		t.Fatal(err)
	}
	f, err := excelize.OpenReader(&blank)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	files := filesIn(t, folder)
	for _, s := range workbook.Sheets {
		b := files[s.Name+".csv"]
		delete(files, s.Name+".csv")
		if b == nil {
			continue
		}
		rows, err := csv.NewReader(bytes.NewReader(b)).ReadAll()
		if err != nil {
			t.Fatalf("%s.csv: %v", s.Name, err)
		}
		if s.Name == "Plan" {
			rows = inOrder(rows)
		}
		if err := fill(f, s, rows); err != nil {
			t.Fatalf("%s.csv: %v", s.Name, err)
		}
	}
	for name := range files {
		t.Errorf("%s is no sheet of a plan", name)
	}
	if err := f.SetDocProps(&excelize.DocProperties{Title: "Slowpoint plan, an invented example", Creator: "slowpoint", LastModifiedBy: "slowpoint"}); err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	if err := f.Write(&out); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// inOrder puts the rows of Plan in the order of the blank workbook, which lists every item, those without an answer too.
func inOrder(rows [][]string) [][]string {
	out := rows[:1:1]
	for _, item := range workbook.PlanItems {
		row := []string{item, ""}
		for _, r := range rows[1:] {
			if r[0] == item {
				row = r
			}
		}
		out = append(out, row)
	}
	return out
}

// fill writes the rows of a sheet below its headings, which stand in row 2 of the blank workbook.
func fill(f *excelize.File, s *workbook.Sheet, rows [][]string) error {
	const head = 2
	high := make([]float64, len(rows))
	for j, heading := range rows[0] {
		col := slices.IndexFunc(s.Columns, func(c *workbook.Column) bool {
			return c.Heading == heading || c.Heading == unitOf.ReplaceAllString(heading, "")
		})
		if col < 0 {
			return fmt.Errorf("the heading %s is unknown", heading)
		}
		c := s.Columns[col]
		name, err := excelize.ColumnNumberToName(col + 1)
		if err != nil {
			return err
		}
		if err := f.SetCellStr(s.Name, name+strconv.Itoa(head), heading); err != nil {
			return err
		}
		width, err := f.GetColWidth(s.Name, name)
		if err != nil {
			return err
		}
		for _, r := range rows[1:] {
			n := utf8.RuneCountInString(r[j])
			width = max(width, float64(max(min(n, 30), min(n/3, 60))+2))
		}
		if err := f.SetColWidth(s.Name, name, name, width); err != nil {
			return err
		}
		style, err := f.GetCellStyle(s.Name, name+strconv.Itoa(head+1))
		if err != nil {
			return err
		}
		if err := f.SetCellStyle(s.Name, name+strconv.Itoa(head+1), name+strconv.Itoa(head+max(len(rows)+2, 18)), style); err != nil {
			return err
		}
		for i, r := range rows[1:] {
			at := name + strconv.Itoa(head+1+i)
			x, err := strconv.ParseFloat(r[j], 64)
			switch {
			case r[j] == "":
				continue
			case c.Quantity != nil && err == nil:
				err = f.SetCellFloat(s.Name, at, x, -1, 64)
			default:
				err = f.SetCellStr(s.Name, at, r[j])
			}
			if err != nil {
				return err
			}
			lines := 1 + int(1.08*float64(utf8.RuneCountInString(r[j]))/width)
			high[i+1] = max(high[i+1], 13.5*float64(lines)+2)
		}
	}
	for i, h := range high[1:] {
		if err := f.SetRowHeight(s.Name, head+1+i, h); err != nil {
			return err
		}
	}
	return nil
}
