package workbook

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"

	"github.com/xuri/excelize/v2"
)

// A sheet of the blank workbook: one line of help, the headings, then the rows.
const (
	helpRow    = 1
	headRow    = 2
	firstRow   = 3   // of the data
	ruledRows  = 18  // rows that are ruled, at least
	listedRows = 500 // rows that have drop-down lists
	listChars  = 255 // characters of the longest drop-down list that excelize writes
)

// WriteBlank writes a plan workbook to fill in: every sheet with its headings and units, drop-down lists and notes; with demo, the demo
// plan in it. The same call gives the same bytes.
func WriteBlank(w io.Writer, demo bool) error {
	data := map[string][]map[string]string{"Plan": planRows()}
	if demo {
		var err error
		if data, err = demoRows(); err != nil {
			return err
		}
	}
	f := excelize.NewFile()
	defer f.Close()
	k, err := newBlank(f)
	if err != nil {
		return err
	}
	for i, s := range Sheets {
		if i == 0 {
			err = f.SetSheetName("Sheet1", s.Name)
		} else {
			_, err = f.NewSheet(s.Name)
		}
		if err != nil {
			return err
		}
		if err := k.sheet(s, data[s.Name]); err != nil {
			return fmt.Errorf("sheet %s: %w", s.Name, err)
		}
	}
	title := "Slowpoint plan"
	if demo {
		title = "Slowpoint demo plan, an invented example"
	}
	if err := f.SetDocProps(&excelize.DocProperties{Title: title, Creator: "slowpoint", LastModifiedBy: "slowpoint"}); err != nil {
		return err
	}
	return f.Write(w)
}

// planRows lists the items of a plan, their answers blank.
func planRows() []map[string]string {
	var rows []map[string]string
	for _, i := range PlanItems {
		rows = append(rows, map[string]string{"Item": i})
	}
	return rows
}

// blanks writes sheets of the blank workbook into a file.
type blanks struct {
	f                       *excelize.File
	help, needed, may       int // styles of the help line and of headings
	words, verbatim, figure int // styles of cells: verbatim keeps 2-10 and 1.10 as they were typed
}

// blankLook is the look of a cell.
type blankLook struct {
	fill, ink string // colours; fill "" for none
	bold      bool
	italic    bool
	centred   bool
	ruled     bool
	verbatim  bool
}

func newBlank(f *excelize.File) (*blanks, error) {
	k := &blanks{f: f}
	for _, s := range []struct {
		id   *int
		look blankLook
	}{
		{&k.help, blankLook{ink: "595959", italic: true}},
		{&k.needed, blankLook{fill: "1F4E79", ink: "FFFFFF", bold: true, centred: true, ruled: true}},
		{&k.may, blankLook{fill: "D9E5F1", ink: "1F3247", bold: true, centred: true, ruled: true}},
		{&k.words, blankLook{ink: "000000", ruled: true}},
		{&k.verbatim, blankLook{ink: "000000", ruled: true, verbatim: true}},
		{&k.figure, blankLook{ink: "000000", ruled: true}},
	} {
		id, err := f.NewStyle(s.look.style(s.id == &k.figure))
		if err != nil {
			return nil, err
		}
		*s.id = id
	}
	return k, nil
}

// style makes the look a style; figures stand at the right.
func (l blankLook) style(figure bool) *excelize.Style {
	s := &excelize.Style{Font: &excelize.Font{Bold: l.bold, Italic: l.italic, Color: l.ink, Family: "Calibri", Size: 10}, Alignment: &excelize.Alignment{Vertical: "top"}}
	if l.fill != "" {
		s.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{l.fill}}
	}
	if l.centred {
		s.Alignment = &excelize.Alignment{Horizontal: "center", Vertical: "center", WrapText: true}
	} else if l.ruled {
		s.Alignment.WrapText = !figure
	}
	if figure {
		s.Alignment.Horizontal, s.Alignment.Indent = "right", 1
	}
	if l.ruled {
		for _, side := range []string{"left", "right", "top", "bottom"} {
			s.Border = append(s.Border, excelize.Border{Type: side, Style: 1, Color: "BFBFBF"})
		}
	}
	if l.verbatim {
		s.NumFmt = 49 // text
	}
	return s
}

// verbatim are columns whose words a spreadsheet would turn into dates or numbers.
var verbatim = []string{"Value", "Clause", "Edition", "Code", "Recipe version", "Batch"}

func isVerbatim(c *Column) bool { return slices.Contains(verbatim, c.Heading) }

// sheet writes one sheet: help, headings with notes, lists, the rows.
func (k *blanks) sheet(s *Sheet, rows []map[string]string) error {
	f := k.f
	if err := f.SetCellStr(s.Name, "A"+strconv.Itoa(helpRow), s.Help); err != nil {
		return err
	}
	if err := f.SetCellStyle(s.Name, "A1", "A1", k.help); err != nil {
		return err
	}
	if err := f.SetRowHeight(s.Name, headRow, 44); err != nil {
		return err
	}
	last := firstRow + max(ruledRows, len(rows)+5) - 1
	total := 0.0
	for i, c := range s.Columns {
		wide, err := k.column(s, i+1, c, rows, last)
		if err != nil {
			return fmt.Errorf("column %s: %w", c.Heading, err)
		}
		total += wide
	}
	if s.Name == "Plan" {
		if err := k.planLists(rows); err != nil {
			return err
		}
	}
	if err := k.heights(s, rows); err != nil {
		return err
	}
	return k.page(s, total)
}

// column writes a column: its heading, note, list and cells. It gives its width, in characters.
func (k *blanks) column(s *Sheet, n int, c *Column, rows []map[string]string, last int) (wide float64, err error) {
	f, name := k.f, cell.ColumnName(n)
	head := name + strconv.Itoa(headRow)
	look, body := k.may, k.words
	if c.Needed {
		look = k.needed
	}
	if c.Quantity != nil {
		body = k.figure
	} else if isVerbatim(c) {
		body = k.verbatim
	}
	wide = c.width(rows)
	steps := []func() error{
		func() error { return f.SetColWidth(s.Name, name, name, wide) },
		func() error { return f.SetCellStr(s.Name, head, c.Title()) },
		func() error { return f.SetCellStyle(s.Name, head, head, look) },
		func() error {
			return f.SetCellStyle(s.Name, name+strconv.Itoa(firstRow), name+strconv.Itoa(last), body)
		},
		func() error { return k.note(s.Name, head, c.Title(), c.explain(s)) },
	}
	if len(c.Choices) > 0 && c.Heading != "Item" {
		steps = append(steps, func() error {
			return k.list(s.Name, name+strconv.Itoa(firstRow)+":"+name+strconv.Itoa(firstRow+listedRows-1), c)
		})
	}
	for i, row := range rows {
		if v := row[c.Heading]; v != "" {
			steps = append(steps, func() error { return k.cell(s.Name, name+strconv.Itoa(firstRow+i), c, v) })
		}
	}
	for _, do := range steps {
		if err := do(); err != nil {
			return 0, err
		}
	}
	return wide, nil
}

// lineHeight is the height of a line of 10 pt text, in points.
const lineHeight = 13.5

// heights makes rows whose words take several lines as high as these need: not every spreadsheet program does so by itself.
func (k *blanks) heights(s *Sheet, rows []map[string]string) error {
	for i, row := range rows {
		lines := 1
		for _, c := range s.Columns {
			if c.Quantity == nil {
				lines = max(lines, int(math.Ceil(1.08*float64(utf8.RuneCountInString(row[c.Heading]))/c.width(rows))))
			}
		}
		if lines > 1 {
			if err := k.f.SetRowHeight(s.Name, firstRow+i, float64(lines)*lineHeight+2); err != nil {
				return err
			}
		}
	}
	return nil
}

// cell writes a value: a bare number of a column of numbers as a number, everything else as text, as a person types it.
func (k *blanks) cell(sheet, at string, c *Column, v string) error {
	if c.Quantity != nil {
		if x, err := strconv.ParseFloat(v, 64); err == nil && !math.IsNaN(x) && !math.IsInf(x, 0) {
			return k.f.SetCellFloat(sheet, at, x, -1, 64)
		}
	}
	return k.f.SetCellStr(sheet, at, v)
}

// width fits the longest word of the heading, the choices and the cells, within reason.
func (c *Column) width(rows []map[string]string) float64 {
	n := 9
	for _, w := range strings.Fields(c.Title()) {
		n = max(n, utf8.RuneCountInString(w)+2)
	}
	n = max(n, utf8.RuneCountInString(c.Title())/2+3) // a heading takes at most three lines
	for _, w := range c.Choices {
		n = max(n, min(utf8.RuneCountInString(w)+3, 24))
	}
	for _, row := range rows {
		if l := utf8.RuneCountInString(row[c.Heading]); c.Quantity != nil || l <= 26 {
			n = max(n, l+2)
		} else {
			n = max(n, 28, min(l/3, 60))
		}
	}
	if c.Heading == "Value" {
		n = max(n, 44)
	}
	return float64(n)
}

// explain words the note of a heading: what to type, the accepted words with what they mean, the units.
func (c *Column) explain(s *Sheet) string {
	var b strings.Builder
	if c.Needed {
		b.WriteString("Needed. ")
	}
	b.WriteString(sentence(c.Help))
	if q := c.Quantity; q != nil && !q.Plain() {
		fmt.Fprintf(&b, "\nIn %s; change the unit in the heading (%s), or type a unit in the cell, which wins.", c.Unit, q.Listing())
	}
	switch c.Least {
	case Positive:
		b.WriteString("\nMore than 0.")
	case NotNegative:
		b.WriteString("\n0 or more.")
	}
	for _, line := range meanings(c) {
		b.WriteString("\n" + line)
	}
	return strings.TrimSpace(b.String())
}

// sentence ends a help line with a full stop and starts it with a capital.
func sentence(s string) string {
	if s == "" {
		return ""
	}
	first, n := utf8.DecodeRuneInString(s)
	return strings.ToUpper(string(first)) + strings.TrimSuffix(s[n:], ".") + "."
}

// meanings says what each word of a list means, a line each; none where the words speak for themselves.
func meanings(c *Column) []string {
	var out []string
	add := func(name, help string) { out = append(out, "• "+name+": "+help) }
	switch c.Heading {
	case "Shape":
		for _, x := range model.Shapes {
			if x.Refused != "" {
				add(x.Name, x.Refused)
				continue
			}
			needs := and(x.Needs)
			if needs == "" {
				needs = "no size of its own"
			}
			add(x.Name, x.Help+"; needs "+needs)
		}
		out = append(out, model.IrregularPieces)
	case "Surroundings":
		for _, x := range model.Surfaces {
			help := x.Help
			if len(x.Needs) > 0 {
				help += "; needs " + and(x.Needs)
			}
			add(x.Name, help)
		}
	case "Stage":
		if c.Free {
			return nil
		}
		for _, x := range model.Stages {
			add(x.Name, x.Help)
		}
	case "Cover":
		for _, x := range model.Covers {
			add(x.Name, x.Help)
		}
	case "Face":
		for _, x := range model.Faces {
			add(x.Name, x.Help)
		}
	case "Flows":
		for _, x := range model.Flows {
			add(x.Name, x.Help)
		}
	case "Rule":
		for _, x := range rules.Kinds {
			var needs []string
			for _, n := range x.Needs {
				needs = append(needs, or(n))
			}
			help := x.Help
			if len(needs) > 0 {
				help += "; needs " + and(needs)
			}
			add(x.Name, help)
		}
	}
	return out
}

// note puts a note on a cell, in a box that holds its text.
func (k *blanks) note(sheet, at, title, text string) error {
	if text == "" {
		return nil
	}
	lines, chars := 2, 46
	if len(text) > 600 {
		chars = 80
	}
	for _, l := range strings.Split(text, "\n") {
		lines += 1 + utf8.RuneCountInString(l)/chars
	}
	return k.f.AddComment(sheet, excelize.Comment{Cell: at, Author: "slowpoint", Width: uint(chars) * 6, Height: uint(lines) * 17,
		Paragraph: []excelize.RichTextRun{
			{Text: title + "\n", Font: &excelize.Font{Bold: true, Size: 9, Family: "Calibri", Color: "000000"}},
			{Text: text, Font: &excelize.Font{Size: 9, Family: "Calibri", Color: "000000"}},
		}})
}

// list gives cells a drop-down list. Other words bring a question, not a refusal, where the reader may know a further spelling.
func (k *blanks) list(sheet, cells string, c *Column) error {
	if n := utf8.RuneCountInString(strings.Join(c.Choices, ",")); n > listChars {
		return fmt.Errorf("the drop-down list has %d characters, more than %d", n, listChars)
	}
	for _, w := range c.Choices {
		if strings.Contains(w, ",") {
			return fmt.Errorf("%q holds a comma, which would divide it in a drop-down list", w)
		}
	}
	v := excelize.NewDataValidation(true)
	v.Sqref = cells
	if err := v.SetDropList(c.Choices); err != nil {
		return err
	}
	if c.Free {
		v.ShowErrorMessage = false
	} else {
		v.SetError(excelize.DataValidationErrorStyleWarning, c.Heading, "This is not a word of the list. Keep it all the same?")
	}
	return k.f.AddDataValidation(sheet, v)
}

// planLists gives the items of the sheet Plan that take a word of a list their lists.
func (k *blanks) planLists(rows []map[string]string) error {
	for i, row := range rows {
		if words := planChoices[row["Item"]]; words != nil {
			at := "B" + strconv.Itoa(firstRow+i)
			if err := k.list("Plan", at+":"+at, &Column{Heading: row["Item"], Choices: words}); err != nil {
				return err
			}
		}
	}
	return nil
}

// pageChars is how many characters of width go on a landscape page that can still be read.
const pageChars = 190

// page sets how a sheet is shown and printed: frozen headings, landscape, headings on each page.
func (k *blanks) page(s *Sheet, total float64) error {
	f := k.f
	yes, landscape, paper := true, "landscape", 9 // 9 = A4
	across, down := int(math.Ceil(total/pageChars)), 0
	colour := "1F4E79"
	switch {
	case len(s.Columns) == 0: // it tells of the import
		colour = "A6A6A6"
	case !slices.Contains([]string{"Plan", "Products", "Steps", "Limits"}, s.Name):
		colour = "9DC3E6"
	}
	top := "B" + strconv.Itoa(firstRow)
	for _, do := range []func() error{
		func() error {
			return f.SetPanes(s.Name, &excelize.Panes{Freeze: true, XSplit: 1, YSplit: headRow, TopLeftCell: top, ActivePane: "bottomRight",
				Selection: []excelize.Selection{{SQRef: "A" + strconv.Itoa(firstRow), ActiveCell: "A" + strconv.Itoa(firstRow), Pane: "bottomLeft"}, {SQRef: top, ActiveCell: top, Pane: "bottomRight"}}})
		},
		func() error {
			return f.SetPageLayout(s.Name, &excelize.PageLayoutOptions{Size: &paper, Orientation: &landscape, FitToWidth: &across, FitToHeight: &down})
		},
		func() error {
			return f.SetSheetProps(s.Name, &excelize.SheetPropsOptions{FitToPage: &yes, TabColorRGB: &colour})
		},
		func() error {
			return f.SetHeaderFooter(s.Name, &excelize.HeaderFooterOptions{OddFooter: "&L&F&C&A&RPage &P of &N"})
		},
		func() error {
			return f.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Titles", Scope: s.Name,
				RefersTo: fmt.Sprintf("'%s'!$A:$A,'%s'!$%d:$%d", s.Name, s.Name, helpRow, headRow)})
		},
	} {
		if err := do(); err != nil {
			return err
		}
	}
	return nil
}
