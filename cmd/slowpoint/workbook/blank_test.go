package workbook

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"

	"github.com/xuri/excelize/v2"
)

// written gives the bytes of the blank workbook or of the demo, and its path in a folder of the test.
func written(t *testing.T, demo bool) ([]byte, string) {
	t.Helper()
	var b bytes.Buffer
	if err := WriteBlank(&b, demo); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "plan.xlsx")
	if err := os.WriteFile(path, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	return b.Bytes(), path
}

// readPlan reads a plan that has to be one.
func readPlan(t *testing.T, path string) *Plan {
	t.Helper()
	p, err := Read(path)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// TestBlankReads: nothing is wrong with the blank workbook but that it has no product.
func TestBlankReads(t *testing.T) {
	_, path := written(t, false)
	p := readPlan(t, path)
	if len(p.Problems) != 1 || p.Problems[0].Msg != noProducts.msg {
		t.Errorf("problems: %v, want that there is no product and nothing else", p.Problems)
	}
	if len(p.Sheets) != len(Sheets) {
		t.Errorf("%d sheets, want %d", len(p.Sheets), len(Sheets))
	}
}

// TestBlankSameBytes: five times each, because maps have no order.
func TestBlankSameBytes(t *testing.T) {
	for _, demo := range []bool{false, true} {
		first, _ := written(t, demo)
		for range 4 {
			if again, _ := written(t, demo); !bytes.Equal(first, again) {
				t.Fatalf("demo %v: two calls give different bytes", demo)
			}
		}
	}
}

// TestBlankHelps: every heading has its unit, every list of words its drop-down list, every explained column its note, and a sheet that
// cannot be used yet says so.
func TestBlankHelps(t *testing.T) {
	data, _ := written(t, false)
	f, err := excelize.OpenReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for _, s := range Sheets {
		comments, err := f.GetComments(s.Name)
		if err != nil {
			t.Fatal(err)
		}
		note := map[string]string{}
		for _, c := range comments {
			note[c.Cell] = c.Text
			for _, run := range c.Paragraph {
				note[c.Cell] += run.Text
			}
		}
		lists, err := f.GetDataValidations(s.Name)
		if err != nil {
			t.Fatal(err)
		}
		listed := map[string]string{}
		for _, l := range lists {
			listed[strings.TrimRight(strings.SplitN(l.Sqref, ":", 2)[0], "0123456789")] += l.Formula1
		}
		for i, c := range s.Columns {
			col := cell.ColumnName(i + 1)
			if got, _ := f.GetCellValue(s.Name, col+"2"); got != c.Title() {
				t.Errorf("%s %s2 is %q, want %q", s.Name, col, got, c.Title())
			}
			if c.Help != "" && !strings.Contains(strings.ToLower(note[col+"2"]), strings.ToLower(c.Help[:min(30, len(c.Help))])) {
				t.Errorf("%s %s: the note %q lacks %q", s.Name, c.Heading, note[col+"2"], c.Help)
			}
			if c.Heading == "Item" {
				continue // the items are there already
			}
			for _, w := range c.Choices {
				if !strings.Contains(listed[col], w) {
					t.Errorf("%s %s: %q is not in the drop-down list %q", s.Name, c.Heading, w, listed[col])
				}
			}
		}
	}
	if got, _ := f.GetDataValidations("Plan"); len(got) != len(planChoices) {
		t.Errorf("Plan has %d drop-down lists, want %d", len(got), len(planChoices))
	}
}

// TestBlankKeepsClauses: clauses and editions that look like dates or numbers stay as they are typed, for the cells are text.
func TestBlankKeepsClauses(t *testing.T) {
	data, _ := written(t, false)
	f, err := excelize.OpenReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for _, heading := range []string{"Clause", "Edition"} {
		for i, c := range SheetNamed("Limits").Columns {
			if c.Heading != heading {
				continue
			}
			id, err := f.GetCellStyle("Limits", cell.ColumnName(i+1)+"3")
			if err != nil {
				t.Fatal(err)
			}
			style, err := f.GetStyle(id)
			if err != nil || style.NumFmt != 49 { // 49 = text, ECMA-376 part 1, 18.8.30
				t.Errorf("%s has the number format %d (%v), want 49, text", heading, style.NumFmt, err)
			}
		}
	}
}

// TestDemo: the demo reads without any problem, the same as files and as a workbook; every must limit is met, one advice limit is not.
func TestDemo(t *testing.T) {
	files, err := ReadDemo()
	if err != nil {
		t.Fatal(err)
	}
	_, path := written(t, true)
	for name, p := range map[string]*Plan{"files": files, "workbook": readPlan(t, path)} {
		for _, e := range p.Problems {
			t.Errorf("%s: %s: %v", name, e.Level, e)
		}
		if len(p.Products) != 5 || len(p.NotCalculated) != 0 {
			t.Errorf("%s: %d products, %d not calculated, want 5 and 0", name, len(p.Products), len(p.NotCalculated))
		}
		var unmet []string
		judged := map[*rules.Kind]bool{}
		for _, pr := range p.Products {
			for _, f := range judgeProduct(t, p, &pr).Findings {
				if f.Verdict != rules.NotApplicable {
					judged[f.Limit.Kind] = true
				}
				switch {
				case f.Verdict == rules.Met || f.Verdict == rules.NotApplicable:
				case f.Level == "advice" && f.Verdict == rules.NotMet:
					unmet = append(unmet, pr.Name+": "+f.Limit.Name)
				default:
					t.Errorf("%s: %s, %s: %s, %s", name, pr.Name, f.Limit.Name, f.Verdict, f.Why)
				}
			}
		}
		if len(unmet) != 1 || unmet[0] != "Turkey roll: UK cook-chill 1989: chilling starts within 30 min" {
			t.Errorf("%s: advice that is not met: %v, want that of the turkey roll, which rests for 45 min", name, unmet)
		}
		if len(judged) < 7 {
			t.Errorf("%s: %d kinds of limit are judged, want at least 7", name, len(judged))
		}
	}
}

// judgeProduct predicts and judges a product; verdicts must be as good as the program's, so the second run is made where it is due.
func judgeProduct(t *testing.T, p *Plan, pr *Product) rules.Judgement {
	t.Helper()
	h, err := model.Solve(pr.Product, pr.Steps, model.Options{})
	if err != nil {
		t.Fatalf("%s: %v", pr.Name, err)
	}
	s := rules.Subject{Product: pr.Name, Family: pr.Family, History: h}
	runs := []*model.History{h}
	if pr.Food.Composed {
		low, err := model.Solve(pr.Product, pr.Steps, model.Options{ConductivityFactor: 0.9})
		if err != nil {
			t.Fatalf("%s: %v", pr.Name, err)
		}
		s.Further = []rules.Run{{Name: rules.LowConductivity, History: low}}
		runs = append(runs, low)
	}
	for _, h := range runs {
		for _, x := range h.Spans {
			if x.Reached != nil && !*x.Reached {
				t.Errorf("%s: the step %s ends before the food is at its temperature", pr.Name, x.Step.Name)
			}
		}
	}
	j := rules.Judge(p.Limits, p.Groups, s)
	if j.Verdict != rules.Met {
		t.Errorf("%s: %s, want met", pr.Name, j.Verdict)
	}
	return j
}

// TestDemoHeadings: the demo's files have the headings and units of the blank workbook, into which their cells go as they stand.
func TestDemoHeadings(t *testing.T) {
	grids, _, err := demoGrids()
	if err != nil {
		t.Fatal(err)
	}
	for _, g := range grids {
		for _, e := range g.Rows[0].Cells {
			name, _ := SplitHeading(e.Text)
			if c := SheetNamed(g.Name).Column(name); c == nil || c.Title() != e.Text {
				t.Errorf("demo/%s.csv: %q is not a heading of the blank workbook", g.Name, e.Text)
			}
		}
	}
}

// TestDemoSaysInvented: nobody can take the demo for a real kitchen.
func TestDemoSaysInvented(t *testing.T) {
	p, err := ReadDemo()
	if err != nil {
		t.Fatal(err)
	}
	for _, i := range p.Items {
		if (i.Item == "Site" || i.Item == "Plan") && !strings.Contains(i.Value, "nvented") {
			t.Errorf("%s is %q, which does not say that it is invented", i.Item, i.Value)
		}
	}
	for _, pr := range p.Products {
		if !strings.HasPrefix(pr.Note, "Invented.") {
			t.Errorf("%s: the note is %q, which does not say that it is invented", pr.Name, pr.Note)
		}
	}
	for _, l := range p.Limits {
		for _, c := range []string{"Confirmed by", "Confirmed on"} {
			if l.Typed[c] != "" {
				t.Errorf("%s: %s is %q; nobody has confirmed a limit of the demo", l.Name, c, l.Typed[c])
			}
		}
	}
}
