package record

import (
	"bytes"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"

	"slowpoint/model/cell"
)

var update = flag.Bool("update", false, "write what comes out into testdata")

// A trial is a file of a logger with its settings and what must come of it; see testdata/README.txt.
type trial struct {
	set        Setting
	food       *Food // nil: no place within a food
	content    []byte
	head, want string
}

// places are the cells of a plan in which the settings of every trial stand.
var places = map[string]cell.Ref{
	setFile: {Sheet: "Records", Row: 2, Col: 4}, setSheet: {Sheet: "Records", Row: 2, Col: 5}, setTime: {Sheet: "Records", Row: 2, Col: 6},
	setTemp: {Sheet: "Records", Row: 2, Col: 7}, setOrder: {Sheet: "Records", Row: 2, Col: 10}, setZone: {Sheet: "Records", Row: 2, Col: 11},
	setMissing: {Sheet: "Records", Row: 2, Col: 12}, setDecimal: {Sheet: "Plan", Row: 5, Col: 2},
}

func parseTrial(t *testing.T, text string) *trial {
	t.Helper()
	c := &trial{set: Setting{Name: "probe.csv", Cells: places}}
	c.head, c.want, _ = strings.Cut(text, "\nexpect\n")
	settings, body, isText := strings.Cut(c.head, "\nfile\n")
	if isText {
		c.content = []byte(body + "\n")
	} else if settings, body, isText = strings.Cut(c.head, "\nquoted\n"); isText {
		s, err := strconv.Unquote("\"" + strings.ReplaceAll(strings.ReplaceAll(body, "\n", ""), `"`, `\"`) + "\"")
		if err != nil {
			t.Fatal(err)
		}
		c.content = []byte(s)
	} else if settings, body, isText = strings.Cut(c.head, "\nbook\n"); isText {
		c.content, c.set.Name = buildBook(t, body), "probe.xlsx"
	}
	for line := range strings.Lines(settings) {
		key, value, ok := strings.Cut(strings.TrimSpace(line), "=")
		if strings.HasPrefix(line, "#") || !ok {
			continue
		}
		c.setting(t, strings.TrimSpace(key), strings.TrimSpace(value))
	}
	return c
}

func (c *trial) setting(t *testing.T, key, value string) {
	t.Helper()
	var err error
	switch key {
	case "name":
		c.set.Name = value
	case "sheet":
		c.set.Sheet = value
	case "time":
		c.set.Time = value
	case "temperature":
		c.set.Temperature = value
	case "date order":
		c.set.DateOrder = value
	case "zone":
		c.set.Zone = value
	case "decimal":
		c.set.Decimal = value
	case "missing":
		c.set.Missing = strings.Split(value, ",")
	case "correction":
		c.set.Corrections, err = strconv.ParseFloat(value, 64)
	case "settles":
		c.food = &Food{LowC: math.NaN(), HighC: math.NaN()}
		c.food.SettleS, err = strconv.ParseFloat(value, 64)
	case "today":
		c.set.Today, err = time.Parse("2006-01-02", value)
	default:
		t.Fatalf("%q is no setting of a trial", key)
	}
	if err != nil {
		t.Fatal(err)
	}
}

// write puts the file into a folder of the test.
func (c *trial) write(t *testing.T) {
	t.Helper()
	c.set.File = filepath.Join(t.TempDir(), c.set.Name)
	if err := os.WriteFile(c.set.File, c.content, 0o644); err != nil {
		t.Fatal(err)
	}
}

// said is what came of a trial, as its file has it: every problem with its level, and the log.
func said(l *Log, problems cell.Errors) string {
	var b strings.Builder
	for _, p := range problems {
		fmt.Fprintf(&b, "%s: %s\n", p.Level, p.Error())
	}
	if l == nil {
		return b.String()
	}
	fmt.Fprintf(&b, "%d readings of %d rows, %d missing, %s, every %g s, in steps of %.4g K", len(l.C), l.Rows, l.Missing, l.Unit, l.StepS, l.ResolutionK)
	if !l.Start.IsZero() {
		form := "15:04:05"
		if l.Dated {
			form = "2006-01-02 15:04:05"
		}
		fmt.Fprintf(&b, ", from %s", l.Start.Format(form))
	}
	fmt.Fprintf(&b, "; %s, %s\n", l.TimeHead, l.Head)
	if l.How != "" {
		fmt.Fprintf(&b, "%s\n", l.How)
	}
	if len(l.About) > 0 {
		fmt.Fprintf(&b, "about: %s\n", strings.Join(l.About, " / "))
	}
	if len(l.Gaps)+len(l.Doubtful) > 0 {
		fmt.Fprintf(&b, "gaps %v, doubtful %v\n", l.Gaps, l.Doubtful)
	}
	for _, p := range l.Leaps {
		fmt.Fprintf(&b, "leaps after %d, doubtful %d to %d\n%s: %s\n", p.Before, p.First, p.Last, p.Problem.Level, p.Problem.Error())
	}
	for i := range l.C {
		if i == 4 && len(l.C) > 8 {
			b.WriteString("…\n")
		}
		if i >= 4 && i < len(l.C)-4 {
			continue
		}
		fmt.Fprintf(&b, "%d: %.9g s %.6g °C\n", l.Lines[i], l.TimesS[i], l.C[i])
	}
	return b.String()
}

// TestTrials reads every file of testdata and holds the messages and what was understood to the words in it.
func TestTrials(t *testing.T) {
	files, err := filepath.Glob("testdata/*.txt")
	if err != nil || len(files) < 10 {
		t.Fatal(err, files)
	}
	for _, name := range files {
		if filepath.Base(name) == "README.txt" {
			continue
		}
		t.Run(strings.TrimSuffix(filepath.Base(name), ".txt"), func(t *testing.T) {
			data, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			c := parseTrial(t, string(data))
			c.write(t)
			log, problems := Read(c.set)
			if log != nil && c.food != nil {
				log = log.Within(*c.food, nil)
			}
			got := said(log, problems)
			if *update {
				if err := os.WriteFile(name, []byte(c.head+"\nexpect\n"+got), 0o644); err != nil {
					t.Fatal(err)
				}
				return
			}
			if d := cmp.Diff(c.want, got); d != "" {
				t.Errorf("(-expected +got)\n%s", d)
			}
		})
	}
}

var withFormat = regexp.MustCompile(`^(-?[\d.]+) as (.+)$`)

// buildBook makes a workbook of a recipe.
func buildBook(t *testing.T, body string) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	must := func(err error) {
		if err != nil {
			t.Helper()
			t.Fatal(err)
		}
	}
	sheet, n, made := "Sheet1", 0, 0
	for line := range strings.Lines(body) {
		line = strings.TrimRight(line, "\n")
		verb, rest, _ := strings.Cut(line, " ")
		switch verb {
		case "sheet":
			sheet, n = rest, 0
			if made++; made == 1 {
				must(f.SetSheetName("Sheet1", sheet))
			} else {
				_, err := f.NewSheet(sheet)
				must(err)
			}
		case "hide":
			must(f.SetSheetVisible(rest, false))
		case "hiderow":
			row, err := strconv.Atoi(rest)
			must(err)
			must(f.SetRowVisible(sheet, row, false))
		case "hidecolumn":
			must(f.SetColVisible(sheet, rest, false))
		case "merge":
			a, b, _ := strings.Cut(rest, ":")
			must(f.MergeCell(sheet, a, b))
		case "1904":
			yes := true
			must(f.SetWorkbookProps(&excelize.WorkbookPropsOptions{Date1904: &yes}))
		default:
			n++
			for i, v := range strings.Split(line, "|") {
				name, err := excelize.CoordinatesToCellName(i+1, n)
				must(err)
				fillCell(t, f, sheet, name, strings.TrimSpace(v))
			}
		}
	}
	var out bytes.Buffer
	must(f.Write(&out))
	return out.Bytes()
}

func fillCell(t *testing.T, f *excelize.File, sheet, name, v string) {
	t.Helper()
	var err error
	x, noNumber := strconv.ParseFloat(v, 64)
	m := withFormat.FindStringSubmatch(v)
	switch {
	case v == "":
	case strings.HasPrefix(v, "~"): // struck through
		x, _ = strconv.ParseFloat(v[1:], 64)
		if err = f.SetCellValue(sheet, name, x); err == nil {
			var style int
			if style, err = f.NewStyle(&excelize.Style{Font: &excelize.Font{Strike: true}}); err == nil {
				err = f.SetCellStyle(sheet, name, name, style)
			}
		}
	case m != nil:
		x, _ = strconv.ParseFloat(m[1], 64)
		if err = f.SetCellValue(sheet, name, x); err == nil {
			var style int
			if style, err = f.NewStyle(&excelize.Style{CustomNumFmt: &m[2]}); err == nil {
				err = f.SetCellStyle(sheet, name, name, style)
			}
		}
	case strings.HasPrefix(v, "="):
		formula, value, stored := strings.Cut(v, " -> ")
		if stored {
			x, _ = strconv.ParseFloat(value, 64)
			err = f.SetCellValue(sheet, name, x)
		}
		if err == nil {
			err = f.SetCellFormula(sheet, name, formula[1:])
		}
	case v == "TRUE":
		err = f.SetCellValue(sheet, name, true)
	case noNumber == nil && !math.IsNaN(x):
		err = f.SetCellValue(sheet, name, x)
	default:
		err = f.SetCellValue(sheet, name, strings.TrimPrefix(v, "'"))
	}
	if err != nil {
		t.Fatal(err)
	}
}
