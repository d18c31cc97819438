package workbook

import (
	"archive/zip"
	"bytes"
	"encoding/csv"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"
)

var update = flag.Bool("update", false, "write what comes out into testdata/bad")

const badFolder = "../../../testdata/bad"

// recipe is a plan as it is built for a case; see testdata/bad/README.txt.
type recipe struct {
	sheets            []*page
	hiddenSheets      map[string]bool
	is1904, password  bool
	delimiter         rune
	files             map[string]string // CSV: whole texts
	damage            []string
	whole             *string
	onlyXlsx, onlyCSV bool
	head, want        string // of the case: everything up to expect, and what follows
}

type page struct {
	name  string
	cells map[int]map[int]string // row, column -> as the recipe writes it
	last  int
	hideR []int
	hideC []string
	merge []string
	lined []string // struck through: A3, or 3 for a row
}

func (p *page) set(row, col int, v string) {
	if p.cells[row] == nil {
		p.cells[row] = map[int]string{}
	}
	p.cells[row][col] = v
	p.last = max(p.last, row)
}

func (r *recipe) page(name string) *page {
	for _, p := range r.sheets {
		if strings.EqualFold(p.name, name) {
			return p
		}
	}
	p := &page{name: name, cells: map[int]map[int]string{}}
	r.sheets = append(r.sheets, p)
	return p
}

func cellsOf(line string) []string {
	parts := strings.Split(line, "|")
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	return parts
}

var ofRow = regexp.MustCompile(`^(.+) row (\d+)$`)

// follow takes the lines of a recipe.
func (r *recipe) follow(t *testing.T, text string) {
	t.Helper()
	r.head, r.want, _ = strings.Cut(text, "\nexpect\n")
	lines := strings.Split(r.head, "\n")
	for i := 0; i < len(lines); i++ {
		line := strings.TrimRight(lines[i], " ")
		if line == "" || strings.HasPrefix(line, "# ") || line == "#" {
			continue
		}
		verb, rest, _ := strings.Cut(line, " ")
		left, right, _ := strings.Cut(rest, "=")
		left, right = strings.TrimSpace(left), strings.TrimSpace(right)
		switch verb {
		case "set":
			sheet, name, ok := strings.Cut(left, "!")
			c, row, err := excelize.CellNameToCoordinates(name)
			if !ok || err != nil {
				t.Fatalf("line %d: %q is no cell", i+1, left)
			}
			r.page(sheet).set(row, c, right)
			if strings.HasPrefix(right, "=") || withFormat.MatchString(right) || right == "TRUE" || right == "FALSE" {
				r.onlyXlsx = true
			}
		case "row":
			name, at := left, 0
			if f := strings.Fields(left); len(f) == 2 {
				name = f[0]
				at, _ = strconv.Atoi(f[1])
			}
			p := r.page(name)
			if at == 0 {
				at = p.last + 1
			}
			for j, v := range cellsOf(right) {
				p.set(at, j+1, v)
			}
		case "sheet":
			p := r.page(rest)
			p.cells, p.last = map[int]map[int]string{}, 0
			for i++; i < len(lines) && strings.TrimSpace(lines[i]) != ""; i++ {
				for j, v := range cellsOf(lines[i]) {
					p.set(p.last+1-min(j, 1), j+1, v)
				}
			}
		case "drop":
			var keep []*page
			for _, p := range r.sheets {
				if !strings.EqualFold(p.name, rest) {
					keep = append(keep, p)
				}
			}
			r.sheets = keep
		case "rename":
			r.page(left).name = right
		case "hide":
			r.onlyXlsx = true
			if m := ofRow.FindStringSubmatch(rest); m != nil {
				n, _ := strconv.Atoi(m[2])
				r.page(m[1]).hideR = append(r.page(m[1]).hideR, n)
			} else if name, col, ok := strings.Cut(rest, " column "); ok {
				r.page(name).hideC = append(r.page(name).hideC, col)
			} else {
				r.hiddenSheets[rest] = true
			}
		case "strike":
			r.onlyXlsx = true
			sheet, at, ok := strings.Cut(rest, "!")
			if m := ofRow.FindStringSubmatch(rest); !ok && m != nil {
				sheet, at = m[1], m[2]
			}
			r.page(sheet).lined = append(r.page(sheet).lined, at)
		case "merge":
			r.onlyXlsx = true
			sheet, ref, _ := strings.Cut(rest, "!")
			r.page(sheet).merge = append(r.page(sheet).merge, ref)
		case "1904":
			r.is1904, r.onlyXlsx = true, true
		case "password":
			r.password, r.onlyXlsx = true, true
		case "delimiter":
			r.delimiter, r.onlyCSV = []rune(strings.ReplaceAll(rest, `\t`, "\t"))[0], true
		case "file":
			s, err := strconv.Unquote(`"` + strings.ReplaceAll(right, `"`, `\"`) + `"`)
			if err != nil {
				t.Fatalf("line %d: %v", i+1, err)
			}
			r.files[left], r.onlyCSV = s, true
		case "damage":
			r.onlyXlsx = true
			r.damage = append(r.damage, rest)
		case "whole":
			r.whole, r.onlyXlsx = &rest, true
		case "only":
			r.onlyXlsx, r.onlyCSV = rest == "xlsx", rest == "csv"
		default:
			t.Fatalf("line %d: %q is no change", i+1, line)
		}
	}
}

func newRecipe(t *testing.T, text string) *recipe {
	t.Helper()
	base, err := os.ReadFile(filepath.Join(badFolder, "plan.txt"))
	if err != nil {
		t.Fatal(err)
	}
	r := &recipe{hiddenSheets: map[string]bool{}, files: map[string]string{}, delimiter: ','}
	r.follow(t, string(base))
	r.follow(t, text)
	return r
}

var withFormat = regexp.MustCompile(`^(-?[0-9.]+) as (.+)$`)
var plainNumber = regexp.MustCompile(`^-?\d+(\.\d+)?$`)

// workbook builds the recipe as an .xlsx file.
func (r *recipe) workbook(t testing.TB, file string) {
	t.Helper()
	ok := func(err error) {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
	}
	if r.whole != nil {
		s, err := strconv.Unquote(`"` + *r.whole + `"`)
		ok(err)
		ok(os.WriteFile(file, []byte(s), 0o644))
		return
	}
	f := excelize.NewFile()
	defer f.Close()
	if r.is1904 {
		ok(f.SetWorkbookProps(&excelize.WorkbookPropsOptions{Date1904: &r.is1904}))
	}
	for i, p := range r.sheets {
		if i == 0 {
			ok(f.SetSheetName("Sheet1", p.name))
		} else {
			_, err := f.NewSheet(p.name)
			ok(err)
		}
		for row := 1; row <= p.last; row++ { // in order, so that shared texts get the same numbers each time
			for col := 1; col <= 40; col++ {
				name, _ := excelize.CoordinatesToCellName(col, row)
				ok(setCell(f, p.name, name, p.cells[row][col]))
			}
		}
		for _, at := range p.lined {
			from, to := at, at
			if _, err := strconv.Atoi(at); err == nil {
				from, to = "A"+at, "AN"+at
			}
			style, err := f.NewStyle(&excelize.Style{Font: &excelize.Font{Strike: true}})
			ok(err)
			ok(f.SetCellStyle(p.name, from, to, style))
		}
		for _, n := range p.hideR {
			ok(f.SetRowVisible(p.name, n, false))
		}
		for _, c := range p.hideC {
			ok(f.SetColVisible(p.name, c, false))
		}
		for _, m := range p.merge {
			a, b, _ := strings.Cut(m, ":")
			ok(f.MergeCell(p.name, a, b))
		}
	}
	for name := range r.hiddenSheets {
		ok(f.SetSheetVisible(name, false))
	}
	var out bytes.Buffer
	opt := excelize.Options{}
	if r.password {
		opt.Password = "secret"
	}
	ok(f.Write(&out, opt))
	data := out.Bytes()
	for _, d := range r.damage {
		data = spoil(t, data, d)
	}
	ok(os.WriteFile(file, data, 0o644))
}

// setCell writes one cell as the recipe says. A stored result of a formula is marked here and put in afterwards by storeResults.
func setCell(f *excelize.File, sheet, name, v string) error {
	switch m := withFormat.FindStringSubmatch(v); {
	case v == "":
		return nil
	case strings.HasPrefix(v, "'"):
		return f.SetCellStr(sheet, name, v[1:])
	case strings.HasPrefix(v, "="):
		formula, stored, has := strings.Cut(v[1:], " -> ")
		if has {
			if err := setCell(f, sheet, name, stored); err != nil {
				return err
			}
		}
		return f.SetCellFormula(sheet, name, formula)
	case v == "TRUE" || v == "FALSE":
		return f.SetCellBool(sheet, name, v == "TRUE")
	case m != nil:
		x, _ := strconv.ParseFloat(m[1], 64)
		style, err := f.NewStyle(&excelize.Style{CustomNumFmt: &m[2]})
		if err != nil {
			return err
		}
		if err := f.SetCellValue(sheet, name, x); err != nil {
			return err
		}
		return f.SetCellStyle(sheet, name, name, style)
	case plainNumber.MatchString(v):
		x, _ := strconv.ParseFloat(v, 64)
		return f.SetCellValue(sheet, name, x)
	}
	return f.SetCellStr(sheet, name, v)
}

// spoil damages an archive.
func spoil(t testing.TB, data []byte, how string) []byte {
	t.Helper()
	what, rest, _ := strings.Cut(how, " ")
	part, arg, _ := strings.Cut(rest, " ")
	if what == "truncate" {
		n, _ := strconv.Atoi(strings.TrimSuffix(rest, "%"))
		return data[:len(data)*n/100]
	}
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	hit := false
	for _, f := range z.File {
		rc, _ := f.Open()
		body, _ := io.ReadAll(rc)
		rc.Close()
		if f.Name == part {
			hit = true
			switch what {
			case "remove":
				continue
			case "cut":
				n, _ := strconv.Atoi(strings.TrimSuffix(arg, "%"))
				body = body[:len(body)*n/100]
			case "replace":
				x := strings.Split(arg[1:], arg[:1])
				if !bytes.Contains(body, []byte(x[0])) {
					t.Fatalf("%s does not hold %q", part, x[0])
				}
				body = bytes.ReplaceAll(body, []byte(x[0]), []byte(x[1]))
			case "bomb":
				i := bytes.LastIndexByte(body, '<')
				body = append(append(append([]byte(nil), body[:i]...), bytes.Repeat([]byte(" "), 80<<20)...), body[i:]...)
			case "stuff":
				n, piece, _ := strings.Cut(arg, " ")
				times, _ := strconv.Atoi(n)
				i := bytes.LastIndexByte(body, '<')
				body = append(append(append([]byte(nil), body[:i]...), strings.Repeat(piece, times)...), body[i:]...)
			default:
				t.Fatalf("%q is no damage", what)
			}
		}
		p, _ := w.Create(f.Name)
		p.Write(body)
	}
	if !hit {
		t.Fatalf("the workbook has no part %s", part)
	}
	w.Close()
	return out.Bytes()
}

// folder builds the recipe as CSV files.
func (r *recipe) folder(t testing.TB, dir string) {
	t.Helper()
	if err := os.MkdirAll(dir, 0o755); err != nil {
		t.Fatal(err)
	}
	for _, p := range r.sheets {
		var b bytes.Buffer
		w := csv.NewWriter(&b)
		w.Comma = r.delimiter
		for row := 1; row <= p.last; row++ {
			width := 1
			for c := range p.cells[row] {
				width = max(width, c)
			}
			rec := make([]string, width)
			for c, v := range p.cells[row] {
				rec[c-1] = strings.TrimPrefix(v, "'")
			}
			w.Write(rec)
		}
		w.Flush()
		if err := os.WriteFile(filepath.Join(dir, p.name+".csv"), b.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	for name, s := range r.files {
		if err := os.WriteFile(filepath.Join(dir, name+".csv"), []byte(s), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// outcome words what Read gives, as the files of testdata/bad do.
func outcome(name string) string {
	p, err := Read(name)
	if err != nil {
		return "refused: " + strings.TrimPrefix(strings.ReplaceAll(err.Error(), name, "PLAN"), "PLAN: ") + "\n"
	}
	var b strings.Builder
	for _, e := range p.Problems {
		fmt.Fprintf(&b, "%s %s\n", e.Level, e.Error())
	}
	var sound, not []string
	for i := range p.Products {
		sound = append(sound, p.Products[i].Name)
	}
	for _, n := range p.NotCalculated {
		not = append(not, n.Product)
	}
	list := func(s []string) string {
		if len(s) == 0 {
			return "none"
		}
		return strings.Join(s, ", ")
	}
	fmt.Fprintf(&b, "sound: %s\nnot calculated: %s\n", list(sound), list(not))
	return b.String()
}

// TestBad holds every message about a mistake to the text in testdata/bad.
func TestBad(t *testing.T) {
	files, _ := filepath.Glob(filepath.Join(badFolder, "*.txt"))
	n := 0
	for _, file := range files {
		name := strings.TrimSuffix(filepath.Base(file), ".txt")
		if name == "README" || name == "plan" {
			continue
		}
		n++
		t.Run(name, func(t *testing.T) {
			text, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			r := newRecipe(t, string(text))
			got := ""
			if !r.onlyCSV {
				x := filepath.Join(t.TempDir(), "plan.xlsx")
				r.workbook(t, x)
				got = outcome(x)
				if d := cmp.Diff(r.want, got); d != "" && !*update {
					t.Errorf("workbook (- expected, + got):\n%s", d)
				}
			}
			if !r.onlyXlsx {
				dir := filepath.Join(t.TempDir(), "plan")
				r.folder(t, dir)
				c := outcome(dir)
				if d := cmp.Diff(r.want, c); d != "" && !*update {
					t.Errorf("folder of CSV (- expected, + got):\n%s", d)
				}
				if got != "" && got != c {
					t.Errorf("workbook and folder differ (- workbook, + folder):\n%s", cmp.Diff(got, c))
				}
				got = c
			}
			if *update && !t.Failed() {
				if err := os.WriteFile(file, []byte(strings.TrimRight(r.head, "\n")+"\n\nexpect\n"+got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
		})
	}
	if n < 60 {
		t.Errorf("only %d cases in testdata/bad", n)
	}
}

// TestSoundPlan: the plan that all cases start from is sound in both forms.
func TestSoundPlan(t *testing.T) {
	r := newRecipe(t, "")
	x := filepath.Join(t.TempDir(), "plan.xlsx")
	r.workbook(t, x)
	dir := filepath.Join(t.TempDir(), "plan")
	r.folder(t, dir)
	for _, name := range []string{x, dir} {
		if got, want := outcome(name), "sound: Stew, Roll, Block\nnot calculated: none\n"; got != want {
			t.Errorf("%s: %s", name, got)
		}
	}
}
