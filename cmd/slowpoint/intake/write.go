package intake

import (
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Write writes the plan workbook: the sheets of a plan with the columns that are used, of each the rows of the mapping first and the
// made ones after; then where everything comes from, what was not imported, what was left out, and what changed since an earlier plan.
// The same result gives the same bytes. Rows go through a temporary file, so that memory does not grow with them.
func Write(w io.Writer, r *Result) error {
	f := excelize.NewFile()
	defer f.Close()
	looks, err := workbook.NewLooks(f)
	if err != nil {
		return err
	}
	b := newBook(f, looks, r)
	for _, s := range workbook.Sheets {
		if err := b.sheet(s); err != nil {
			return fmt.Errorf("sheet %s: %w", s.Name, err)
		}
	}
	for _, t := range b.lists() {
		if err := b.list(t); err != nil {
			return fmt.Errorf("sheet %s: %w", t.Name, err)
		}
	}
	if i, err := f.GetSheetIndex("Products"); err == nil {
		f.SetActiveSheet(i)
	}
	if err := f.SetDocProps(&excelize.DocProperties{Title: "Slowpoint plan made by import", Creator: "slowpoint", LastModifiedBy: "slowpoint"}); err != nil {
		return err
	}
	f.SetZipWriter(func(io.Writer) excelize.ZipWriter { return newZipParts(w) })
	return f.Write(io.Discard)
}

// book is a plan workbook while it is written.
type book struct {
	f      *excelize.File
	looks  *workbook.Looks
	r      *Result
	trail  *trail
	copied map[*workbook.Sheet][]*workbook.Line // rows of the mapping that can be used; the others are in faulty
	faulty []NotImported
	made   map[*workbook.Sheet][]*Made
	lanes  map[*workbook.Sheet][]*lane
	point  bool // the plan is to say that its decimal sign is the point
	sheets int  // made so far
}

func newBook(f *excelize.File, looks *workbook.Looks, r *Result) *book {
	b := &book{f: f, looks: looks, r: r, trail: newTrail(r), faulty: r.Faulty(), copied: map[*workbook.Sheet][]*workbook.Line{},
		made: map[*workbook.Sheet][]*Made{}, lanes: map[*workbook.Sheet][]*lane{}}
	for i := range r.Made {
		b.made[r.Made[i].Sheet] = append(b.made[r.Made[i].Sheet], &r.Made[i])
	}
	for _, s := range workbook.Sheets {
		for _, l := range r.Copied[s.Name] {
			if l.Sound() { // Faulty has looked
				b.copied[s] = append(b.copied[s], l)
			}
		}
		b.lanes[s] = lanesOf(s, b.copied[s], b.made[s])
	}
	b.point = b.saysPoint()
	return b
}

// add makes the next sheet.
func (b *book) add(name string) error {
	b.sheets++
	if b.sheets == 1 {
		return b.f.SetSheetName("Sheet1", name)
	}
	_, err := b.f.NewSheet(name)
	return err
}

// lane is a column of a sheet that is written.
type lane struct {
	*workbook.Column
	unit    *unit.Unit // of the heading; nil for words
	longest int        // text of its cells, in characters
	pointed bool       // a number with a point stands in it as text
}

// put is a filled cell that is written.
type put struct {
	lane  int // index of its column
	value any // string, float64 or bool
	text  string
	style int // 0: that of its column
}

// sheet writes a sheet of the plan; one without a row is left out, except Products.
func (b *book) sheet(s *workbook.Sheet) error {
	copied, made, lanes := b.copied[s], b.made[s], b.lanes[s]
	if len(copied)+len(made) == 0 && s.Name != "Products" && !(s.Name == "Plan" && b.point) {
		return nil
	}
	if err := b.add(s.Name); err != nil {
		return err
	}
	wide, columns, heads := 0.0, make([]*workbook.Column, len(lanes)), make([]any, len(lanes)+1)
	for i, c := range lanes {
		columns[i], heads[i] = c.Column, excelize.Cell{StyleID: b.looks.Heading(c.Column), Value: c.Titled(c.unit)}
		wide += c.Width(c.longest)
	}
	heads[len(lanes)] = excelize.Cell{StyleID: b.looks.May, Value: workbook.FromHeading}
	if err := b.looks.Sheet(s, columns, len(copied)+len(made), wide+widthFrom); err != nil {
		return err
	}
	sw, err := b.f.NewStreamWriter(s.Name)
	if err != nil {
		return err
	}
	for i, c := range lanes {
		if err := sw.SetColWidth(i+1, i+1, c.Width(c.longest)); err != nil {
			return err
		}
	}
	if err := sw.SetColWidth(len(lanes)+1, len(lanes)+1, widthFrom); err != nil {
		return err
	}
	p := &page{b: b, sheet: s, lanes: lanes, sw: sw, row: workbook.HeadRow - 1}
	if err := sw.SetRow("A1", []any{excelize.Cell{StyleID: b.looks.Help, Value: s.Help}}); err != nil {
		return err
	}
	if err := p.cells(heads, excelize.RowOpts{Height: 44}); err != nil {
		return err
	}
	if err := p.rows(copied, made); err != nil {
		return err
	}
	return sw.Flush()
}

const widthFrom = 44 // of the column #From, in characters

// page is a sheet of the plan while its rows are written.
type page struct {
	b     *book
	sheet *workbook.Sheet
	lanes []*lane
	sw    *excelize.StreamWriter
	row   int // the last one written
	puts  []put
	line  []any             // cells of a row
	sum   []workbook.Filled // the same, for the checksum
}

func (p *page) cells(cells []any, options ...excelize.RowOpts) error {
	p.row++
	return p.sw.SetRow("A"+strconv.Itoa(p.row), cells, options...)
}

func (p *page) rows(copied []*workbook.Line, made []*Made) error {
	sign := p.sheet.Name == "Plan" && p.b.point // the decimal sign of made texts is to be said
	for _, l := range copied {
		p.puts = p.puts[:0]
		for i, c := range p.lanes {
			if l.Filled(c.Heading) {
				p.puts = append(p.puts, p.copy(i, l))
			}
		}
		if p.sheet.Name == "Plan" && isDecimalSign(l) {
			if sign {
				p.puts = []put{p.words(0, "Decimal sign"), p.words(1, "point")}
			}
			sign = false
		}
		if err := p.write(p.b.trail.ofLine(p.sheet, l)); err != nil {
			return err
		}
	}
	for _, m := range made {
		p.puts = p.puts[:0]
		for i := range m.Values {
			if v := &m.Values[i]; v.Text != "" {
				n := slices.IndexFunc(p.lanes, func(s *lane) bool { return s.Column == v.Column })
				p.puts = append(p.puts, p.value(n, v))
			}
		}
		slices.SortStableFunc(p.puts, func(a, b put) int { return a.lane - b.lane })
		if err := p.write(p.b.trail.ofMade(m)); err != nil {
			return err
		}
	}
	if sign {
		p.puts = []put{p.words(0, "Decimal sign"), p.words(1, "point")}
		return p.write("")
	}
	return nil
}

// write writes the cells at hand as a row that comes from there; "" is from nowhere.
func (p *page) write(from string) error {
	p.line, p.sum = p.line[:0], p.sum[:0]
	for _, c := range p.puts {
		for len(p.line) < c.lane {
			p.line = append(p.line, nil)
		}
		style := c.style
		if style == 0 {
			style = p.b.looks.Cell(p.lanes[c.lane].Column)
		}
		p.line = append(p.line, excelize.Cell{StyleID: style, Value: c.value})
		_, number := c.value.(float64)
		p.sum = append(p.sum, workbook.Filled{Heading: p.lanes[c.lane].Titled(p.lanes[c.lane].unit), Text: c.text, Number: number})
	}
	for len(p.line) < len(p.lanes) {
		p.line = append(p.line, nil)
	}
	if from != "" {
		p.line = append(p.line, excelize.Cell{StyleID: p.b.looks.Origin, Value: from + " · " + workbook.Checksum(p.sum)})
	}
	return p.cells(p.line)
}

func (p *page) words(lane int, s string) put { return put{lane: lane, value: s, text: s} }

func figure(lane int, x float64) put {
	return put{lane: lane, value: x, text: strconv.FormatFloat(x, 'g', -1, 64)}
}

// value makes the cell of a made value: a plain number in the unit of the heading as a number, everything else as text, with its unit
// where the heading has another.
func (p *page) value(n int, v *Value) put {
	c := p.lanes[n]
	if c.Quantity == nil {
		return p.words(n, v.Text)
	}
	u := unitOf(v)
	if u == nil {
		u = c.unit
	}
	if v.Number {
		if x, err := strconv.ParseFloat(v.Text, 64); err == nil && !math.IsNaN(x) && !math.IsInf(x, 0) && u == c.unit {
			return figure(n, x)
		}
	}
	return p.words(n, c.spell(v.Text, u))
}

// spell writes a text with its unit, unless it brings one or the heading says it.
func (s *lane) spell(text string, u *unit.Unit) string {
	text = inWords(text, u)
	if u == s.unit || u == nil {
		return text
	}
	if _, m := s.Quantity.Parse(text, nil, unit.Point); m == nil {
		return text
	}
	return text + " " + u.Name()
}

// unitOf is the unit of a value; nil for words and plain numbers.
func unitOf(v *Value) *unit.Unit {
	if v.Column.Quantity == nil || v.Unit == "" {
		return nil
	}
	return v.Column.Quantity.Unit(v.Unit)
}

var clock = regexp.MustCompile(`^(\d+):(\d\d?)(?::(\d\d?(?:\.\d+)?))?$`)

// inWords writes 2:05 as 2 h 5 min or 2 min 5 s, by the unit that says which; a heading has room for one unit only.
func inWords(text string, u *unit.Unit) string {
	m := clock.FindStringSubmatch(strings.TrimSpace(text))
	switch {
	case m == nil || u == nil:
		return text
	case m[3] != "":
		return m[1] + " h " + m[2] + " min " + m[3] + " s"
	case u.Name() == "h:mm":
		return m[1] + " h " + m[2] + " min"
	case u.Name() == "mm:ss":
		return m[1] + " min " + m[2] + " s"
	}
	return text
}

// copy makes the cell of a value that stands in the mapping, as it stands there; a text with a decimal comma gets a point.
func (p *page) copy(n int, l *workbook.Line) put {
	c := p.lanes[n]
	e := l.Entry(c.Heading)
	x, err := strconv.ParseFloat(e.Text, 64)
	switch {
	case e.Kind == workbook.Truth:
		return put{lane: n, value: e.Text == "TRUE", text: e.Text}
	case e.Kind == workbook.Figure && err == nil:
		out := figure(n, x)
		switch e.Form {
		case workbook.Clock:
			out.style = p.b.looks.Clock
		case workbook.Percent:
			out.style = p.b.looks.Percent
		case workbook.Date:
			out.style = p.b.looks.Date
			if t, err := time.Parse("2006-01-02", l.Words(c.Heading)); err == nil { // 1904 or not
				out = figure(n, t.Sub(time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)).Hours()/24)
				out.style = p.b.looks.Date
			}
		}
		return out
	case c.Quantity == nil:
		return p.words(n, e.Text)
	}
	v := l.Value(c.Heading)
	if v == nil {
		return p.words(n, e.Text) // settle keeps such rows away
	}
	u := l.Unit(c.Heading)
	text := inWords(e.Text, u)
	for _, t := range []string{text, strings.ReplaceAll(text, ",", "."), strings.NewReplacer(".", "", ",", ".").Replace(text)} {
		if same, m := c.Quantity.Parse(t, c.unit, unit.Point); m == nil && same.Computed == v.Computed {
			return p.words(n, t)
		}
	}
	return figure(n, c.unit.Out(v.Computed))
}

func isDecimalSign(l *workbook.Line) bool {
	name, _ := workbook.SplitHeading(l.Entry("Item").Text)
	return workbook.Key(name) == "decimal sign"
}

// saysPoint tells whether the plan must say that its decimal sign is the point: where it holds texts in columns of numbers, and where the
// mapping says a sign.
func (b *book) saysPoint() bool {
	for _, s := range workbook.Sheets {
		for _, c := range b.lanes[s] {
			if c.pointed {
				return true
			}
		}
	}
	return slices.ContainsFunc(b.copied[workbook.SheetNamed("Plan")], isDecimalSign)
}

// sound reads every number of a row of the mapping, and tells whether all of the row can be copied.
func sound(s *workbook.Sheet, l *workbook.Line) bool {
	for _, c := range s.Columns {
		switch e := l.Entry(c.Heading); {
		case e.Kind == workbook.Blank:
		case c.Quantity != nil:
			l.Value(c.Heading)
		case e.Kind == workbook.Broken || e.Kind == workbook.NoStored:
			l.Words(c.Heading)
		}
	}
	return l.Sound()
}

// Faulty are the rows of a plan's sheets in the mapping that cannot be copied into the plan, one entry a fault.
func (r *Result) Faulty() []NotImported {
	var out []NotImported
	for _, s := range workbook.Sheets {
		for _, l := range r.Copied[s.Name] {
			if sound(s, l) {
				continue
			}
			for _, e := range l.Because() {
				out = append(out, NotImported{Record: Place{File: -1, Sheet: l.Ref().Sheet, Row: l.Ref().Row}, At: Place{File: -1, Sheet: e.At.Sheet, Row: e.At.Row, Col: e.At.Col},
					Product: l.Entry(s.Columns[0].Heading).Text, Column: e.Field, Typed: e.Typed, Why: e.Msg, Mend: e.Hint})
			}
		}
	}
	return out
}

// lanesOf are the columns that a sheet is written with, in the order of the list: the needed ones and those with a filled cell. The
// heading takes the unit of the first filled cell.
func lanesOf(s *workbook.Sheet, copied []*workbook.Line, made []*Made) []*lane {
	of := map[*workbook.Column]*lane{}
	fill := func(c *workbook.Column, u *unit.Unit, text string) *lane {
		t := of[c]
		if t == nil {
			t = &lane{Column: c}
			of[c] = t
		}
		if t.unit == nil && c.Quantity != nil && u != nil && !strings.Contains(u.Name(), ":") {
			t.unit = u
		}
		t.longest = max(t.longest, utf8.RuneCountInString(text))
		return t
	}
	for _, l := range copied {
		for _, c := range s.Columns {
			if l.Filled(c.Heading) {
				t, e := fill(c, l.Unit(c.Heading), l.Entry(c.Heading).Text), l.Entry(c.Heading)
				t.pointed = t.pointed || c.Quantity != nil && e.Kind == workbook.Text && strings.ContainsAny(e.Text, ".,")
			}
		}
	}
	for _, m := range made {
		for i := range m.Values {
			if v := &m.Values[i]; v.Text != "" {
				u := unitOf(v)
				t := fill(v.Column, u, v.Text)
				t.pointed = t.pointed || v.Column.Quantity != nil && strings.ContainsRune(v.Text, '.') && (!v.Number || u != nil && u != t.unit)
			}
		}
	}
	var out []*lane
	for _, c := range s.Columns {
		t := of[c]
		if t == nil && !c.Needed && s.Name != "Plan" {
			continue
		}
		if t == nil {
			t = &lane{Column: c}
		}
		if t.unit == nil && c.Quantity != nil {
			t.unit = c.Quantity.Unit(c.Unit)
		}
		out = append(out, t)
	}
	return out
}

// list is a sheet that tells of the import.
type list struct {
	*workbook.Sheet
	rows [][]string // cells in the order of its columns; one more: of the column #From
}

// lists are the sheets that tell of the import; one without rows is left out.
func (b *book) lists() []list {
	r := b.r
	rows := map[string][][]string{"Origins": b.trail.rows()}
	for _, n := range append(slices.Clone(r.Not), b.faulty...) {
		at := n.At
		if at.Row == 0 && at.Col == 0 {
			at = n.Record
		}
		rows["Not imported"] = append(rows["Not imported"], []string{r.file(at), at.Sheet, at.short(), n.Product, n.Column, n.Typed, n.Why, n.Mend, r.anchor(n.Record)})
	}
	for _, l := range r.Left {
		rows["Left out"] = append(rows["Left out"], []string{r.file(l.At), l.At.Sheet, l.At.short(), l.Reason})
	}
	for _, c := range r.Changes {
		rows["Changes"] = append(rows["Changes"], []string{c.Product, c.What, c.Before, c.Now, c.Cell})
	}
	var out []list
	for _, s := range workbook.MadeSheets {
		if len(rows[s.Name]) > 0 {
			out = append(out, list{s, rows[s.Name]})
		}
	}
	return out
}

// wide is the width of the columns of such a sheet, in characters.
var wide = map[string]float64{"File": 30, "SHA-256": 66, "Their sheet": 24, "Sheet": 16, "Place": 14, "Rows": 8, "Part": 16, "Column": 26, "Record": 30, "Typed": 24,
	"Why": 60, "How to mend": 60, "Reason": 60, "Product": 30, "What": 40, "Before": 30, "Now": 30, "Cell": 44, workbook.FromHeading: widthFrom}

// list writes such a sheet.
func (b *book) list(t list) error {
	if err := b.add(t.Name); err != nil {
		return err
	}
	if err := b.looks.List(t.Name); err != nil {
		return err
	}
	sw, err := b.f.NewStreamWriter(t.Name)
	if err != nil {
		return err
	}
	var heads []string
	for _, c := range t.Columns {
		heads = append(heads, c.Heading)
	}
	if len(t.rows[0]) > len(heads) {
		heads = append(heads, workbook.FromHeading)
	}
	for i, h := range heads {
		if err := sw.SetColWidth(i+1, i+1, max(wide[h], 10)); err != nil {
			return err
		}
	}
	line := make([]any, len(heads))
	put := func(row int, texts []string, style int) error {
		for k := range line {
			line[k] = nil
			if k < len(texts) && texts[k] != "" {
				line[k] = excelize.Cell{StyleID: style, Value: texts[k]}
			}
		}
		return sw.SetRow("A"+strconv.Itoa(row), line)
	}
	err = errors.Join(put(1, []string{t.Help}, b.looks.Help), put(workbook.HeadRow, heads, b.looks.May))
	for i := 0; err == nil && i < len(t.rows); i++ {
		err = put(workbook.FirstRow+i, t.rows[i], b.looks.Wrapped)
	}
	if err != nil {
		return err
	}
	return sw.Flush()
}

// file is the name of the file of a place; that of the mapping for File −1.
func (r *Result) file(p Place) string {
	if p.File < 0 || p.File >= len(r.Files) {
		return r.Mapping
	}
	return r.Files[p.File].Name
}

// short tells a place within its sheet: F17, row 17, column F, sheet.
func (p Place) short() string {
	switch {
	case p.Row > 0 && p.Col > 0:
		return cell.ColumnName(p.Col) + strconv.Itoa(p.Row)
	case p.Row > 0:
		return "row " + strconv.Itoa(p.Row)
	case p.Col > 0:
		return "column " + cell.ColumnName(p.Col)
	}
	return "sheet"
}

// Where tells a place of their files in full: "Recipes.xlsx › Cook-chill!F17", "Recipes.csv row 17".
func (r *Result) Where(p Place) string {
	s := r.sheetOf(p)
	if p.Row > 0 && p.Col > 0 {
		return s + "!" + p.short()
	}
	return s + " " + p.short()
}

// Ref is a place of their files as problems tell it; of the mapping, by the sheet alone.
func (r *Result) Ref(p Place) cell.Ref {
	if p.File < 0 {
		return cell.Ref{Sheet: p.Sheet, Row: p.Row, Col: p.Col}
	}
	return cell.Ref{Sheet: r.sheetOf(p), Row: p.Row, Col: p.Col}
}

func (r *Result) sheetOf(p Place) string {
	if p.Sheet == "" {
		return r.file(p)
	}
	return r.file(p) + " › " + p.Sheet
}
