package report

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/xuri/excelize/v2"

	"slowpoint/model/cell"
	"slowpoint/rules"
)

// opened reads a written workbook back.
func opened(t *testing.T, b []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = f.Close() })
	return f
}

// byHeading reads a row as heading -> raw value; blanks are left out.
func byHeading(t *testing.T, f *excelize.File, sheet string, row int) map[string]string {
	t.Helper()
	out := map[string]string{}
	for col := 1; col <= 60; col++ {
		head, err := f.GetCellValue(sheet, cell.ColumnName(col)+"1")
		if err != nil {
			t.Fatal(err)
		}
		v, err := f.GetCellValue(sheet, cell.ColumnName(col)+strconv.Itoa(row), excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		if v != "" {
			out[head] = v
		}
	}
	return out
}

func TestWorkbookReadBack(t *testing.T) {
	f := opened(t, write(t, NewWorkbook, trayHead(), trayProduct(t, "Stew & <rice>")))
	if d := cmp.Diff([]string{"Overview", "Findings", "Courses", "Input"}, f.GetSheetList()); d != "" {
		t.Error(d)
	}
	for _, c := range []struct {
		name, sheet string
		row         int
		want        map[string]string
	}{
		{"a product that was not calculated comes first", "Overview", 2, map[string]string{"Product": "Mash", "Verdict": "not calculated", "Row of the plan": "Products row 7",
			"Why": `Products!C7: "-40" a length must be more than 0 – type the thickness in mm`}},
		{"the deciding limit is the one that is not met", "Overview", 3, map[string]string{"No. in the plan": "1", "Product": "Stew & <rice>", "Family": "stews", "Recipe version": "v2",
			"Batch": "B17", "Process": "Cook-chill", "Verdict": "not met", "Deciding limit": "Chill 90", "Margin (°C difference)": "-9", "Row of the plan": "Products row 6",
			"Why": "the record ends before the food reaches 3 °C. The step Chiller did not reach its Until within its longest duration (1 h 30 min)."}},
		{"a finding", "Findings", 2, map[string]string{"Product": "Stew & <rice>", "Process": "Cook-chill", "Limit": "Core 70", "Rule": "hold", "Level": "must", "Verdict": "met",
			"Value": "14.098765", "Required": "2", "Unit": "min", "Margin (°C difference)": "6.4877", "Margin (min)": "12.0988", "Deciding time (min)": "73.0083",
			"Deciding place": "2.0 mm below the centre", "Up (mm)": "-2", "Across (mm)": "0", "Along (mm)": "0", "Clock start (min)": "54.0333", "Clock end (min)": "74.4167",
			"Why": "every point is held for 2 min or more.", "Code": "Invented code", "Clause": "2-10", "Edition": "2020", "Issued by": "an authority",
			"Confirmed by": "A. Person", "Confirmed on": "2026-01-05", "Cells": "Limits!A3, Steps row 3"}},
		{"a group", "Findings", 4, map[string]string{"Product": "Stew & <rice>", "Process": "Cook-chill", "Limit": "Chilling", "Rule": "any of", "Level": "group", "Verdict": "not met", "Why": "decided by Chill 90"}},
		{"the instant of a change belongs to the step before", "Courses", 4, map[string]string{"Product": "Stew & <rice>", "Step": "Oven", "Stage": "cook", "Time (min)": "60",
			"Surroundings (°C)": "160", "Coldest (°C)": "76.5", "Hottest (°C)": "100", "Mean (°C)": "85", "Coldest: up (mm)": "-2", "Coldest: across (mm)": "0", "Coldest: along (mm)": "0",
			"Hottest: up (mm)": "30", "Hottest: across (mm)": "0", "Hottest: along (mm)": "0", "Point 1": "centre", "Point 1 (°C)": "76.5", "Point 2": "probe", "Point 2 (°C)": "82"}},
		{"a mean that does not exist is a blank", "Courses", 7, map[string]string{"Product": "Stew & <rice>", "Step": "Chiller", "Stage": "cool", "Time (min)": "150",
			"Surroundings (°C)": "1.5", "Coldest (°C)": "5", "Hottest (°C)": "12", "Coldest: up (mm)": "30", "Coldest: across (mm)": "0", "Coldest: along (mm)": "0",
			"Hottest: up (mm)": "0", "Hottest: across (mm)": "0", "Hottest: along (mm)": "0", "Point 1": "centre", "Point 1 (°C)": "12", "Point 2": "probe", "Point 2 (°C)": "5"}},
		{"the input", "Input", 3, map[string]string{"Product": "Stew & <rice>", "Cell": "Steps!I3", "Column": "Temperature is", "Used": "set-point", "Why": "blank stands for set-point"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := byHeading(t, f, c.sheet, c.row)
			delete(got, "Cautions") // counted by a test of their own
			if d := cmp.Diff(c.want, got); d != "" {
				t.Errorf("%s row %d (- wanted, + got):\n%s", c.sheet, c.row, d)
			}
		})
	}
}

func TestWorkbookInFahrenheit(t *testing.T) {
	h := trayHead()
	h.Fahrenheit = true
	p := trayProduct(t, "One")
	p.Judgement.Findings[0].Unit, p.Judgement.Findings[0].Value, p.Judgement.Findings[0].Required = "°C", ptr(76.5), ptr(70.)
	p.Judgement.Findings[1].Unit, p.Judgement.Findings[1].Value, p.Judgement.Findings[1].Required = "K", ptr(5.), ptr(2.5)
	f := opened(t, write(t, NewWorkbook, h, p))
	for _, c := range []struct {
		name, sheet   string
		row           int
		heading, want string
	}{
		{"a temperature shifts", "Findings", 2, "Value", "169.7"},
		{"so does what is required", "Findings", 2, "Required", "158"},
		{"and its unit says so", "Findings", 2, "Unit", "°F"},
		{"a difference does not shift", "Findings", 3, "Value", "9"},
		{"and its unit says so too", "Findings", 3, "Unit", "°F difference"},
		{"a margin is a difference", "Findings", 3, "Margin (°F difference)", "-16.2"},
		{"a course", "Courses", 2, "Coldest (°F)", "46.4"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := byHeading(t, f, c.sheet, c.row)[c.heading]; got != c.want {
				t.Errorf("%s row %d, %s: %q, wanted %q", c.sheet, c.row, c.heading, got, c.want)
			}
		})
	}
}

// Texts of the user: no formula, no control character, no silent loss.
func TestWorkbookTexts(t *testing.T) {
	long := strings.Repeat("é", 40000)
	for _, c := range []struct{ name, typed, want string }{
		{"a formula stays a text", `=HYPERLINK("http://x","y")`, `=HYPERLINK("http://x","y")`},
		{"plus, minus and at sign", "+1-1@x", "+1-1@x"},
		{"mark-up", `<b>&amp;"quoted"</b>`, `<b>&amp;"quoted"</b>`},
		{"control characters", "a\x00b\x07c", "a\uFFFDb\uFFFDc"},
		{"line ends", "a\r\nb\rc", "a\nb\nc"},
		{"an escape of spreadsheets", "a_x000D_b_x000D_x000D_", "a_x000D_b_x000D_x000D_"},
		{"blanks at the ends", " a ", " a "},
		{"emoji and Chinese", "🍲 炖菜", "🍲 炖菜"},
		{"broken UTF-8", "a\xffb", "a\uFFFDb"},
		{"a very long text ends visibly", long, strings.Repeat("é", 32757) + "… (cut)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			f := opened(t, write(t, NewWorkbook, trayHead(), trayProduct(t, c.typed)))
			got, err := f.GetCellValue("Courses", "A2")
			if err != nil || got != c.want {
				t.Errorf("%.60q (%d letters), %v; wanted %.60q", got, len([]rune(got)), err, c.want)
			}
			formula, err := f.GetCellFormula("Courses", "A2")
			if err != nil || formula != "" {
				t.Errorf("formula %q, %v", formula, err)
			}
		})
	}
}

// A full sheet goes on in the next one with the same headings, and a product stays together where it can.
func TestWorkbookGoesOnInASecondSheet(t *testing.T) {
	var b bytes.Buffer
	w := NewWorkbook(&b, trayHead())
	w.courses.most, w.input.most = 15, 4 // rows; a product has 6 samples and 2 readings
	for _, name := range []string{"One", "Two", "Three", "Four", "Five"} {
		if err := w.Add(trayProduct(t, name)); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	f := opened(t, b.Bytes())
	want := []string{"Overview", "Findings", "Courses", "Courses 2", "Courses 3", "Input", "Input 2", "Input 3", "Input 4", "Input 5"}
	if d := cmp.Diff(want, f.GetSheetList()); d != "" {
		t.Fatal(d)
	}
	for _, c := range []struct{ sheet, at, want string }{
		{"Courses", "A2", "One"}, {"Courses", "A13", "Two"}, {"Courses", "A14", ""},
		{"Courses 2", "A1", "Product"}, {"Courses 2", "A2", "Three"}, {"Courses 3", "A7", "Five"}, {"Input 5", "A3", "Five"},
	} {
		t.Run(c.sheet+" "+c.at, func(t *testing.T) {
			if got, err := f.GetCellValue(c.sheet, c.at); err != nil || got != c.want {
				t.Errorf("%q, %v; wanted %q", got, err, c.want)
			}
		})
	}
}

// A product that alone is longer than a sheet is cut where the sheet ends, and nothing is lost.
func TestWorkbookCutsAProductThatIsTooLong(t *testing.T) {
	var b bytes.Buffer
	w := NewWorkbook(&b, trayHead())
	w.courses.most = 5
	if err := errors.Join(w.Add(trayProduct(t, "One")), w.Close()); err != nil {
		t.Fatal(err)
	}
	f := opened(t, b.Bytes())
	for at, want := range map[string]string{"Courses!D5": "90", "Courses 2!D3": "150"} { // minutes: 4 samples, then 2
		sheet, c, _ := strings.Cut(at, "!")
		if got, err := f.GetCellValue(sheet, c, excelize.Options{RawCellValue: true}); err != nil || got != want {
			t.Errorf("%s: %q, %v; wanted %q", at, got, err, want)
		}
	}
}

// Every part of the file is well-formed XML, and no part carries a time.
func TestWorkbookParts(t *testing.T) {
	p := trayProduct(t, "A\x01<&>\"B\uFFFE")
	p.Samples.Coldest[2], p.Samples.Hottest[2] = math.NaN(), math.Inf(1)
	p.Judgement.Findings[0].MarginS = ptr(math.Inf(-1))
	b := write(t, NewWorkbook, trayHead(), p)
	z, err := zip.NewReader(bytes.NewReader(b), int64(len(b)))
	if err != nil {
		t.Fatal(err)
	}
	if z.File[0].Name != "[Content_Types].xml" {
		t.Errorf("first part %s", z.File[0].Name)
	}
	for _, part := range z.File {
		r, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		text, err := io.ReadAll(r) // checks the CRC too
		if err != nil {
			t.Errorf("%s: %v", part.Name, err)
		}
		for d := xml.NewDecoder(bytes.NewReader(text)); err == nil; {
			_, err = d.Token()
		}
		if err != io.EOF {
			t.Errorf("%s: %v", part.Name, err)
		}
		for _, bad := range []string{"NaN", "Inf"} {
			if strings.HasPrefix(part.Name, "xl/worksheets/") && strings.Contains(string(text), bad) {
				t.Errorf("%s holds %s", part.Name, bad)
			}
		}
		if !part.Modified.IsZero() && part.Modified.Year() > 1980 {
			t.Errorf("%s carries the time %v", part.Name, part.Modified)
		}
	}
}

func TestListedWorstFirst(t *testing.T) {
	row := func(name string, v rules.Verdict, tight float64) slim {
		return slim{Row: Row{Product: name, Verdict: v, tight: tight}, calculated: true}
	}
	rows := []slim{row("met, roomy", rules.Met, 9), row("met, tight", rules.Met, 0.2), row("cannot tell", rules.CannotTell, math.Inf(1)),
		row("not met by little", rules.NotMet, -0.1), row("not met by much", rules.NotMet, -7), row("met, as tight", rules.Met, 0.2)}
	var got []string
	for _, r := range listed([]NotCalculated{{Product: "refused"}}, rows) {
		got = append(got, r.Product)
	}
	want := []string{"refused", "not met by much", "not met by little", "cannot tell", "met, tight", "met, as tight", "met, roomy"}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

// A name that stands in every row of a course is kept once, and a cell behind a blank says where it stands.
func TestNamesAreKeptOnce(t *testing.T) {
	p := trayProduct(t, "Stew & rice")
	p.Samples.Mean[1] = math.NaN() // leaves a blank in column H
	f := opened(t, write(t, NewWorkbook, trayHead(), p))
	texts := map[string]string{}
	for _, name := range []string{"xl/sharedStrings.xml", "xl/worksheets/sheet3.xml"} {
		b, ok := f.Pkg.Load(name)
		if !ok {
			t.Fatalf("%s is missing", name)
		}
		texts[name] = string(b.([]byte))
	}
	if n := strings.Count(texts["xl/sharedStrings.xml"], "Stew &amp; rice"); n != 1 {
		t.Errorf("the product is kept %d times", n)
	}
	if sheet := texts["xl/worksheets/sheet3.xml"]; strings.Contains(sheet, "Stew") || !strings.Contains(sheet, `<c r="I3"`) || strings.Contains(sheet, `r="I2"`) {
		t.Errorf("the courses: %.2000s", sheet)
	}
}

// Headings and long texts are shown in full, and a sheet is printed on the width of a page only where it stays legible.
func TestWorkbookIsLegible(t *testing.T) {
	p := trayProduct(t, "Stew")
	p.Samples.TimesS[1] += 0.0007 // s: a step that ended a little after the full minute
	whole := write(t, NewWorkbook, trayHead(), p)
	f := opened(t, whole)
	for _, c := range []struct {
		sheet   string
		fits    bool
		heading string // the longest for its column
		column  string
	}{
		{"Overview", true, "Margin (°C difference)", "I"},
		{"Findings", false, "Margin (°C difference)", "K"},
		{"Courses", true, "Hottest: across (mm)", "M"},
		{"Input", true, "Typed", "D"},
	} {
		t.Run(c.sheet, func(t *testing.T) {
			if got, _ := f.GetCellValue(c.sheet, c.column+"1"); got != c.heading {
				t.Fatalf("%s1 holds %q", c.column, got)
			}
			wide, _ := f.GetColWidth(c.sheet, c.column)
			high, _ := f.GetRowHeight(c.sheet, 1)
			if need := 15 * float64(linesIn(c.heading, wide, true)); high < need {
				t.Errorf("the headings are %g pt high, %q takes %g", high, c.heading, need)
			}
			layout, err := f.GetPageLayout(c.sheet)
			if err != nil || *layout.Orientation != "landscape" {
				t.Errorf("%v, %v", layout, err)
			}
			props, _ := f.GetSheetProps(c.sheet)
			if fits := props.FitToPage != nil && *props.FitToPage; fits != c.fits {
				t.Errorf("on the width of a page: %v", fits)
			}
			sum := 0.0 // pt
			for i := 1; i <= 60; i++ {
				if head, _ := f.GetCellValue(c.sheet, cell.ColumnName(i)+"1"); head != "" {
					w, _ := f.GetColWidth(c.sheet, cell.ColumnName(i))
					sum += (7*w + 5) * 0.75
				}
			}
			if scale := (842 - 57.6) / sum; c.fits && scale < 0.6 { // A4 across, margins of 0.4 in
				t.Errorf("printed at %.2f", scale)
			} else if !c.fits && (scale >= 0.6 || *layout.AdjustTo != 60) {
				t.Errorf("at %.2f it would fit; printed at %d %%", scale, *layout.AdjustTo)
			}
		})
	}
	why, _ := f.GetCellValue("Overview", "M3")
	if high, _ := f.GetRowHeight("Overview", 3); linesIn(why, 54, false) < 2 || high < 15*float64(linesIn(why, 54, false)) {
		t.Errorf("%q stands in a row %g pt high", why, high)
	}
	if got := byHeading(t, f, "Courses", 3)["Time (min)"]; got != "30" {
		t.Errorf("time %s", got)
	}
}

// Lines are counted by words.
func TestLinesIn(t *testing.T) {
	for _, c := range []struct {
		text  string
		width float64
		bold  bool
		want  int
	}{{"", 10, false, 1}, {"one two", 9, false, 1}, {"one two", 7, false, 2}, {"one two", 9, true, 2}, {"one two three four", 10, false, 3}, {"abcdefghijklmnopqrstu", 11, false, 3}, {"a b", 4, false, 1}} {
		if got := linesIn(c.text, c.width, c.bold); got != c.want {
			t.Errorf("%q in %g: %d, want %d", c.text, c.width, got, c.want)
		}
	}
}
