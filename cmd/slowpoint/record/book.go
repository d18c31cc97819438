package record

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"time"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

const mostBook = 64 << 20 // bytes of a workbook, as of a plan

// sheet is a sheet of a workbook.
type sheet struct {
	book *workbook.Book
	file string
	name string
	sum  string
	grid *workbook.Grid // as it was read last, without its rows
}

func (s *sheet) word() string   { return "row" }
func (s *sheet) holder() string { return "the sheet " + s.name + " of " + s.file }
func (s *sheet) digest() string { return s.sum }

func (s *sheet) place(line int32, col int) cell.Ref {
	return cell.Ref{Sheet: s.file + " › " + s.name, Row: int(line), Col: col}
}

func (s *sheet) each(take func(*row) error) error {
	var out row
	var bytes []byte
	g, err := s.book.Rows(s.name, func(g *workbook.Grid, in *workbook.Row) error {
		out.n, out.hidden = int32(in.N), in.Hidden
		last := int(in.Cells[len(in.Cells)-1].Col)
		out.fields = append(out.fields[:0], make([]field, last)...)
		bytes = bytes[:0]
		for i := range in.Cells {
			e := &in.Cells[i]
			from := len(bytes)
			bytes = append(bytes, e.Text...)
			f := field{b: bytes[from:len(bytes):len(bytes)], kind: e.Kind, form: e.Form, shows: e.Shows, formula: e.Formula, struck: e.Struck}
			if e.Form >= workbook.Worded {
				if i := strings.IndexByte(g.Shown(e), ' '); i >= 0 {
					f.shown = g.Shown(e)[i+1:]
				}
			}
			out.fields[e.Col-1] = f
		}
		return take(&out)
	})
	s.grid = g
	return err
}

// openBook opens a workbook and finds the sheet.
func (r *reader) openBook(size int64) (source, bool) {
	refuse := func(s saying, args ...string) (source, bool) {
		r.problems.Add(s.problem(r.set.Cells[setFile], cell.Fault, setFile, r.set.Name, args...))
		return nil, false
	}
	if size > mostBook {
		return refuse(tooBig, fmt.Sprint(mostBook>>20))
	}
	data, err := os.ReadFile(r.set.File)
	if err != nil {
		return refuse(noFile, workbook.Reason(err))
	}
	b, err := workbook.OpenBook(data)
	if err != nil {
		return refuse(badBook, err.Error())
	}
	sum := sha256.Sum256(data)
	s := &sheet{book: b, file: r.set.Name, sum: hex.EncodeToString(sum[:])}
	r.is1904 = b.Is1904
	if b.Macros {
		r.problems.Add(hasMacros.problem(r.set.Cells[setFile], cell.Warning, setFile, r.set.Name))
	}
	if s.name = r.choose(b); s.name == "" {
		return nil, false
	}
	r.log.Sheet = s.name
	return s, true
}

// choose finds the sheet that the setting names, or the only one that holds anything and is not hidden; "" where the problem was told.
func (r *reader) choose(b *workbook.Book) string {
	names, hidden := b.Sheets()
	at := r.set.Cells[setSheet]
	tell := func(s saying, typed string, args ...string) string {
		r.problems.Add(s.problem(at, cell.Fault, setSheet, typed, args...))
		return ""
	}
	var open, unseen []string
	for _, n := range names {
		if r.set.Sheet != "" && workbook.Key(n) == workbook.Key(r.set.Sheet) {
			if hidden[n] {
				return tell(sheetHidden, r.set.Sheet, r.set.Name)
			}
			return n
		}
		if hidden[n] {
			unseen = append(unseen, quote(n))
		} else if r.set.Sheet != "" || holds(b, n) {
			open = append(open, n)
		}
	}
	switch {
	case r.set.Sheet != "":
		return tell(noSheet, r.set.Sheet, r.set.Name, workbook.Joined(quotes(open), " and "))
	case len(open) == 0:
		return tell(noReadings, "", r.set.Name, " in a sheet that is not hidden")
	case len(open) > 1:
		return tell(askSheet, "", r.set.Name, workbook.Joined(quotes(open), " and "))
	}
	if len(unseen) > 0 {
		r.problems.Add(hiddenSheets.problem(at, cell.Warning, setSheet, "", r.set.Name, workbook.Joined(unseen, " and "), quote(open[0])))
	}
	return open[0]
}

func quotes(names []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = quote(n)
	}
	return out
}

// holds tells whether anything stands in a sheet; of one that cannot be read it is said later.
func holds(b *workbook.Book, name string) bool {
	found := false
	_, err := b.Rows(name, func(*workbook.Grid, *workbook.Row) error { found = true; return errStop })
	return found || err != nil
}

// odd tells what is wrong with how a cell looks; false if nothing is.
func (t *taker) odd(r *row, col int) bool {
	f := r.at(col)
	switch {
	case f.struck:
		t.tell(struckCell, r.n, col, string(f.b))
	case f.shows == workbook.Nothing, f.shows == workbook.InWords, f.shows == workbook.Thousands, f.shows == workbook.Otherwise, f.shows == workbook.Raised:
		t.tell(shownOther, r.n, col, string(f.b))
	default:
		return false
	}
	return true
}

// unseen tells what is hidden or merged in the columns that are read.
func (t *taker) unseen() {
	s, isSheet := t.r.src.(*sheet)
	if !isSheet || s.grid == nil {
		return
	}
	for _, col := range []int{t.lay.time, t.lay.clock, t.lay.temp} {
		if col > 0 && s.grid.HiddenCols[col] {
			t.r.tells.tell(hiddenColumn, cell.Warning, "", t.lay.first, col, "", cell.ColumnName(col))
		}
		for _, m := range s.grid.Merged {
			if col >= m.Left && col <= m.Right && m.Bottom >= int(t.lay.first) && m.Top <= int(t.until) {
				block := fmt.Sprintf("%s%d:%s%d", cell.ColumnName(m.Left), m.Top, cell.ColumnName(m.Right), m.Bottom)
				t.tell(mergedData, int32(m.Top), col, "", block)
			}
		}
	}
}

// serialStamp reads a number of a cell of times by its number format: a date, a clock or a duration in days, else a plain number.
func serialStamp(f *field, is1904 bool) stamp {
	x, err := strconv.ParseFloat(string(f.b), 64)
	if err != nil || math.IsInf(x, 0) || math.IsNaN(x) {
		return stamp{}
	}
	switch {
	case f.form == workbook.Date && x >= 1, f.form == workbook.Clock && x >= firstSerial:
		return serialDate(x, is1904)
	case f.form == workbook.Date || f.form == workbook.Clock:
		if x < 0 {
			return stamp{}
		}
		return stamp{form: clockStamp, timed: true, groups: 3, sec: toMilli(x * 86400), half: f.shows == workbook.TimeOfDay}
	}
	return stamp{form: numberStamp, sec: x, unit: f.shown, exact: true}
}

// firstSerial is the least number that is taken for a date although only its clock is shown: of 1927, or of 1931 where days count from 1904.
const firstSerial = 10_000

// toMilli rounds to a thousandth: days have no more than that when they count from 1900.
func toMilli(s float64) float64 { return math.Round(s*1000) / 1000 }

// serialDate makes a date and a clock of days from the end of 1899 (with the 29 February 1900 that never was) or from 1904.
func serialDate(x float64, is1904 bool) stamp {
	if x > 2958466 {
		return stamp{}
	}
	day := math.Floor(x)
	sec := toMilli((x - day) * 86400)
	if sec >= 86400 {
		day, sec = day+1, sec-86400
	}
	y, m, d := serialZero(x, is1904).AddDate(0, 0, int(day)).Date()
	return stamp{form: dateStamp, dated: true, timed: sec > 0, groups: 3, sec: sec,
		date: [3]int32{int32(y), int32(m), int32(d)}, width: [3]int8{4, 2, 2}, order: yearFirst}
}

func serialZero(x float64, is1904 bool) time.Time {
	switch {
	case is1904:
		return time.Date(1904, 1, 1, 0, 0, 0, 0, time.UTC)
	case x < 61:
		return time.Date(1899, 12, 31, 0, 0, 0, 0, time.UTC)
	}
	return time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)
}

// serialSeconds makes seconds since 1970 of a serial number.
func serialSeconds(x float64, is1904 bool) float64 {
	return float64(serialZero(x, is1904).Unix()) + toMilli(x*86400)
}
