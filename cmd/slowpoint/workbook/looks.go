package workbook

import (
	"math"
	"strconv"

	"slowpoint/model/cell"
	"slowpoint/model/unit"

	"github.com/xuri/excelize/v2"
)

// Where the headings and the rows of a plan's sheet stand when the program writes it; row 1 is a line of help.
const (
	HeadRow  = headRow
	FirstRow = firstRow
)

// Looks gives the sheets of a plan that is written row by row the looks of the blank workbook: its colours, notes and lists.
type Looks struct {
	k *blanks

	Help, Needed, May    int // styles of the help line and of headings
	Words, Text, Number  int // of cells; Text keeps 2-10 and 1.10 as they were typed
	Wrapped              int // of text that takes several lines
	Clock, Date, Percent int // of numbers that these formats give their meaning
	Origin               int // of where a row comes from
}

// NewLooks makes the styles in a file.
func NewLooks(f *excelize.File) (*Looks, error) {
	k, err := newBlank(f)
	if err != nil {
		return nil, err
	}
	l := &Looks{k: k, Help: k.help, Needed: k.needed, May: k.may, Wrapped: k.verbatim}
	number := func(format int) *excelize.Style {
		s := blankLook{ink: "000000", ruled: true}.style(true)
		s.NumFmt = format
		return s
	}
	words, text := blankLook{ink: "000000", ruled: true}.style(false), blankLook{ink: "000000", ruled: true, verbatim: true}.style(false)
	words.Alignment.WrapText, text.Alignment.WrapText = false, false // rows by the thousand are one line high
	for _, s := range []struct {
		id    *int
		style *excelize.Style
	}{
		{&l.Words, words}, {&l.Text, text}, {&l.Number, number(0)}, {&l.Clock, number(46)}, {&l.Date, number(14)}, {&l.Percent, number(10)},
		{&l.Origin, blankLook{ink: "7F7F7F", italic: true}.style(false)},
	} {
		if *s.id, err = f.NewStyle(s.style); err != nil {
			return nil, err
		}
	}
	return l, nil
}

// Heading is the style of a column's heading.
func (l *Looks) Heading(c *Column) int {
	if c.Needed {
		return l.Needed
	}
	return l.May
}

// Cell is the style of a column's cells.
func (l *Looks) Cell(c *Column) int {
	switch {
	case c.Quantity != nil:
		return l.Number
	case isVerbatim(c):
		return l.Text
	}
	return l.Words
}

// Sheet makes everything of a sheet but its cells: the notes of its headings, its drop-down lists for so many rows, and how it is shown
// and printed. It comes before the rows are written; wide is the width of its columns together, in characters.
func (l *Looks) Sheet(s *Sheet, columns []*Column, rows int, wide float64) error {
	for i, c := range columns {
		name := cell.ColumnName(i + 1)
		if err := l.k.note(s.Name, name+strconv.Itoa(headRow), c.Title(), c.explain(s)); err != nil {
			return err
		}
		if len(c.Choices) == 0 || c.Heading == "Item" {
			continue
		}
		last := firstRow - 1 + max(listedRows, rows+100)
		if err := l.k.list(s.Name, name+strconv.Itoa(firstRow)+":"+name+strconv.Itoa(last), c); err != nil {
			return err
		}
	}
	return l.k.page(s, wide)
}

// List sets how a sheet that tells of the import is shown and printed. It comes before its rows are written.
func (l *Looks) List(name string) error {
	return l.k.page(&Sheet{Name: name}, pageChars)
}

// Width fits the heading and the choices of a column, and a text of so many characters, within reason.
func (c *Column) Width(longest int) float64 {
	return math.Max(c.width(nil), math.Min(float64(longest+2), 40))
}

// Unit is the unit that the heading of a column gives in the sheet of the row; nil for words, for a column that the sheet lacks, and
// for a heading at fault.
func (l *Line) Unit(heading string) *unit.Unit {
	if h := l.t.place[heading]; h != nil {
		return h.unit
	}
	return nil
}

// Because are the faults that keep the row from being used.
func (l *Line) Because() cell.Errors { return l.because }

// Look is Value for whoever only compares: nothing is told and nothing goes into the input echo.
func (l *Line) Look(heading string) *unit.Value {
	problems, because, readings := len(l.r.problems), l.because, l.readings
	echoed := 0
	if readings != nil {
		echoed = len(readings[0].list)
	}
	v := l.Value(heading)
	l.r.problems, l.because, l.readings = l.r.problems[:problems], because, readings
	if readings != nil {
		readings[0].list = readings[0].list[:echoed]
	}
	return v
}
