package workbook

import (
	"math"
	"strconv"
	"strings"

	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// refusal is why a column does not take a cell.
type refusal struct {
	typed string
	s     saying
	args  []string
}

func refused(typed string, s saying, args ...string) *refusal { return &refusal{typed, s, args} }

// Under says what stands above a cell: where it is, for the messages, and how it is read.
type Under struct {
	At      cell.Ref
	Grid    *Grid      // the sheet that the cell is in
	Unit    *unit.Unit // of the heading; nil if it gives none: then the cell must
	Decimal unit.Decimal
}

// Taken is a filled cell as a column takes it.
type Taken struct {
	Words string     // of a column of words; of one with a list of choices: the choice as the list writes it
	Value unit.Value // of a column of numbers
}

// Take reads a filled cell as the reader of plans does, or tells why a plan would refuse it.
func (c *Column) Take(e *Entry, u Under) (Taken, *cell.Error) {
	var t Taken
	no := e.broken(u.At)
	switch {
	case no != nil:
	case c.Quantity != nil:
		t.Value, no = c.value(e, u.Grid, u.Unit, u.Decimal)
	case c.Choices != nil && !c.Free:
		t.Words, no = c.choice(e)
	default:
		t.Words, no = c.words(e, u.Grid)
	}
	if no != nil {
		told := no.s.problem(u.At, cell.Fault, c.Heading, no.typed, no.args...)
		return t, &told
	}
	return t, nil
}

// Meant offers the nearest known word, for messages: "; did you mean cook?"; "" if none is near.
func Meant(word string, known []string) string { return meant(word, known) }

// Missing tells how to fill a needed cell.
func (c *Column) Missing() string { return mendMissing(c) }

// Known finds a column by its heading without unit, in any writing; nil if there is none.
func (s *Sheet) Known(heading string) *Column { return s.known(Key(heading)) }

// Known finds a sheet of a list by its name, in any writing; nil if there is none.
func Known(list []*Sheet, name string) *Sheet { return sheetOf(list, name) }

// Merge finds the merged cells that a cell is part of; nil if it is none.
func (g *Grid) Merge(row, col int) *Block {
	for i := range g.Merged {
		if b := &g.Merged[i]; row >= b.Top && row <= b.Bottom && col >= b.Left && col <= b.Right {
			return b
		}
	}
	return nil
}

// At gives the cell of a column; a blank one if it is not filled.
func (r *Row) At(col int) *Entry { return r.at(col) }

// Row gives a row by its number; nil if nothing in it is filled.
func (g *Grid) Row(n int) *Row {
	lo, hi := 0, len(g.Rows)
	for lo < hi {
		if mid := (lo + hi) / 2; g.Rows[mid].N < n {
			lo = mid + 1
		} else {
			hi = mid
		}
	}
	if lo < len(g.Rows) && g.Rows[lo].N == n {
		return &g.Rows[lo]
	}
	return nil
}

// Shown is a cell as a person reads it: a date as 2026-01-31, a time as 1:30:00, a number without the last digits of its storage.
func (g *Grid) Shown(e *Entry) string {
	if e.Kind != Figure {
		return e.Text
	}
	x, err := storedNumber(e.Text)
	switch {
	case err != nil:
		return e.Text
	case e.Form == Date:
		return isoDate(e.Text, g.Is1904)
	case e.Form == Clock:
		return strings.TrimSuffix(clockWords(x), " h:mm:ss")
	case e.Form == Percent:
		return short(x*100) + " %"
	case e.Form >= Worded:
		return shown(e.Text, x) + " " + g.words[e.Form-Worded]
	}
	return shown(e.Text, x)
}

// broken tells of a cell that holds no value at all.
func (e *Entry) broken(at cell.Ref) *refusal {
	switch e.Kind {
	case Broken:
		return refused(e.Text, errorValue)
	case NoStored:
		return refused("", noResult, at.String())
	}
	return nil
}

// words reads a cell as words.
func (c *Column) words(e *Entry, g *Grid) (string, *refusal) {
	if most := c.longest(); tooLong(e.Text, most) {
		return "", refused(string([]rune(e.Text)[:40])+"…", textTooLong, strconv.Itoa(most))
	}
	if e.Kind == Figure && e.Form == Date {
		return isoDate(e.Text, g.Is1904), nil
	}
	if e.Kind == Figure && e.Form != Clock && e.Shows != AsStored {
		return "", e.differs(e.Text)
	}
	return e.Text, nil
}

// choice reads a cell as one of the words of its column, as it stands in the list.
func (c *Column) choice(e *Entry) (string, *refusal) {
	for _, list := range [][]string{c.Choices, c.Also} {
		for _, w := range list {
			if Key(w) == Key(e.Text) {
				return w, nil
			}
		}
	}
	return "", refused(e.Text, notAChoice, c.Heading, meant(e.Text, c.Choices), strings.Join(c.Choices, ", "))
}

// value reads a cell as a number that the column takes.
func (c *Column) value(e *Entry, g *Grid, u *unit.Unit, d unit.Decimal) (unit.Value, *refusal) {
	v, no := c.convert(e, g, u, d)
	if no != nil {
		return v, no
	}
	if s, args := c.refuses(v.Computed); s != nil {
		return v, refused(v.Typed, *s, args...)
	}
	if c.Possible.outside(v.Computed) {
		return v, refused(v.Typed, impossible, c.shown(v.Computed), c.between(c.Possible), c.between(c.Usual), c.slipped(v))
	}
	return v, nil
}

// slipped asks for the likeliest slip behind a number typed in the unit of the blank workbook.
func (c *Column) slipped(v unit.Value) string {
	if strings.HasSuffix(v.Typed, spaced(c.Unit)) {
		return ": " + c.Slip
	}
	return ""
}

// storedNumber reads a number as workbooks store it: decimal, with a point. ParseFloat alone takes 2_0 for 20 and 0x1p4 for 16.
func storedNumber(stored string) (float64, error) {
	if strings.ContainsAny(stored, "_xXpP") {
		return 0, strconv.ErrSyntax
	}
	return strconv.ParseFloat(stored, 64)
}

// convert makes a value of a cell, by its kind and its number format.
func (c *Column) convert(e *Entry, g *Grid, u *unit.Unit, d unit.Decimal) (unit.Value, *refusal) {
	q := c.Quantity
	if u == nil && q.Plain() {
		u = &q.Units[0]
	}
	if e.Kind == Text {
		if e.Shows != AsStored {
			return unit.Value{}, e.differs(e.Text)
		}
		v, m := q.Parse(e.Text, u, d)
		if m != nil {
			return v, refused(e.Text, asFound, m.Says, m.Mend)
		}
		return v, nil
	}
	x, err := storedNumber(e.Text)
	expected := article(q.Name)
	var worded *unit.Unit // that the number format shows
	if e.Form >= Worded {
		worded = q.Unit(g.words[e.Form-Worded])
	}
	if u == nil {
		switch {
		case worded != nil:
			u = worded
		case e.Form == Percent && q == &unit.Percent:
			u = &q.Units[0]
		}
	}
	switch {
	case e.Kind == Truth:
		return unit.Value{}, refused(e.Text, isTruth, expected)
	case err != nil || math.IsNaN(x) || math.IsInf(x, 0):
		return unit.Value{}, refused(e.Text, notNumber, expected)
	case e.Shows != AsStored && e.Form != Clock:
		return unit.Value{}, e.differs(shown(e.Text, x))
	case e.Form == Date:
		return unit.Value{}, refused(isoDate(e.Text, g.Is1904), isDate, expected)
	case e.Form == Clock && q != &unit.Duration:
		return unit.Value{}, refused(clockWords(x), isTime, expected)
	case e.Form == Clock && e.Shows != AsStored:
		return unit.Value{}, e.differs(clockWords(x))
	case e.Form == Clock:
		s := math.Round(x*86400*1000) / 1000
		return unit.Value{Computed: s, Typed: clockWords(x)}, nil
	case e.Form == Percent && q != &unit.Percent && !q.Plain():
		return unit.Value{}, refused(short(x*100)+" %", isPercent, expected)
	case u == nil:
		return unit.Value{}, refused(shown(e.Text, x), numberNoUnit, q.Listing())
	case e.Form == Percent && q == &unit.Percent:
		return u.Of(math.Round(x*100*1e12)/1e12, short(x*100)), nil
	case strings.Contains(u.Name(), ":"):
		return unit.Value{}, refused(e.Text, notClock, u.Name())
	case worded != nil && worded != u:
		return unit.Value{}, refused(shown(e.Text, x), isWorded, g.words[e.Form-Worded], u.Name())
	}
	return u.Of(x, shown(e.Text, x)), nil
}

// refuses tells which numbers a column does not take.
func (c *Column) refuses(x float64) (*saying, []string) {
	switch {
	case c.Least == Positive && x <= 0:
		return &notPositive, []string{c.Heading}
	case c.Least == NotNegative && x < 0:
		return &negative, []string{c.Heading}
	case c.Least == Share && (x < 0 || x > 100):
		return &notShare, nil
	case c.Least == UpToOne && (x <= 0 || x > 1):
		return &notUpToOne, []string{c.Heading}
	case c.Quantity == &unit.Temperature && x < -273.15:
		return &belowZeroK, nil
	}
	return nil, nil
}

// Fill puts arguments into a wording: {1} is the first.
func Fill(wording string, args ...string) string { return fill(wording, args) }
