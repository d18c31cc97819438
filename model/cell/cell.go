// Package cell names places in a plan workbook and the problems found there.
package cell

import (
	"fmt"
	"sort"
)

// Ref is one cell of a plan: the sheet by the name that the user gave it, row and column counted from 1.
// The zero Ref means "made in code, not read". Col 0 means the whole row; Row 0 the whole sheet.
type Ref struct {
	Sheet    string
	Row, Col int
}

// IsZero tells whether the place is unknown.
func (r Ref) IsZero() bool { return r == Ref{} }

// String writes the place as a spreadsheet user would: "Products!C7", "Products row 7", "Products".
func (r Ref) String() string {
	switch {
	case r.Sheet == "":
		return ""
	case r.Row == 0:
		return r.Sheet
	case r.Col == 0:
		return fmt.Sprintf("%s row %d", r.Sheet, r.Row)
	}
	return fmt.Sprintf("%s!%s%d", r.Sheet, ColumnName(r.Col), r.Row)
}

// ColumnName turns 1, 2, … 27 into A, B, … AA.
func ColumnName(col int) string {
	name := ""
	for ; col > 0; col = (col - 1) / 26 {
		name = string(rune('A'+(col-1)%26)) + name
	}
	return name
}

// ColumnNumber turns A, B, … AA into 1, 2, … 27, in small letters too; 0 for anything else, and for more letters than any spreadsheet has.
func ColumnNumber(name string) int {
	if len(name) > 3 {
		return 0
	}
	n := 0
	for _, c := range name {
		switch {
		case c >= 'A' && c <= 'Z':
			n = 26*n + int(c-'A') + 1
		case c >= 'a' && c <= 'z':
			n = 26*n + int(c-'a') + 1
		default:
			return 0
		}
	}
	return n
}

// Level says how much a problem weighs.
type Level int

const (
	Fault   Level = iota // the rows that it touches are not calculated
	Warning              // calculated, and printed on the report
	Note                 // worth knowing
)

// String gives the word of results.json.
func (l Level) String() string { return [...]string{"error", "warning", "note"}[l] }

// Error is one thing wrong in the input: where, what was typed, what was expected, how to mend it.
type Error struct {
	At    Ref
	From  string // the cell of the user's own spreadsheet that the import took it from, "Recipes.xlsx › Cook-chill!F17"; "" if none is known
	Level Level
	Field string // the column heading without its unit, so that whoever knows the sheet can find the cell
	Typed string // as it stood in the cell; "" for a blank
	Msg   string // what is wrong and what was expected
	Hint  string // how to mend it
}

// Where writes the place, and behind it in brackets where it comes from: "Products!C7 (Recipes.xlsx › Cook-chill!F17)".
func (e Error) Where() string { return where(e.At, e.From) }

// where writes a place and where it comes from, as far as they are known.
func where(at Ref, from string) string {
	if from == "" || at.IsZero() {
		return at.String()
	}
	return at.String() + " (" + from + ")"
}

// Error makes one line of the problem.
func (e Error) Error() string {
	s := e.Where()
	if s != "" {
		s += ": "
	}
	if e.Typed != "" {
		s += fmt.Sprintf("%q ", e.Typed)
	}
	s += e.Msg
	if e.Hint != "" {
		s += " – " + e.Hint
	}
	return s
}

// Errors collects problems; the zero value is ready.
type Errors []Error

// Add appends one problem.
func (es *Errors) Add(e Error) { *es = append(*es, e) }

// Faults counts the problems that keep something from being calculated.
func (es Errors) Faults() int {
	n := 0
	for _, e := range es {
		if e.Level == Fault {
			n++
		}
	}
	return n
}

// Sort puts problems in workbook order: the sheets in the order given, then row, then column; stable otherwise.
func (es Errors) Sort(sheets []string) {
	place := map[string]int{}
	for i, s := range sheets {
		place[s] = i + 1
	}
	sort.SliceStable(es, func(i, j int) bool {
		a, b := es[i].At, es[j].At
		if a.Sheet != b.Sheet {
			pa, pb := place[a.Sheet], place[b.Sheet]
			if pa != pb {
				return pa < pb
			}
			return a.Sheet < b.Sheet
		}
		if a.Row != b.Row {
			return a.Row < b.Row
		}
		return a.Col < b.Col
	})
}

// Reading is one value as it was taken from the plan: the input echo.
type Reading struct {
	At     Ref
	From   string // as in Error
	Column string // heading without unit
	Typed  string // as typed, with the unit that the heading or the cell gave; "" where a default stood in for a blank
	Used   string // what the program computes with, in SI or °C
	Why    string // for a default: why this value stands in; "" otherwise
}

// Where writes the place of the value, as that of a problem.
func (r Reading) Where() string { return where(r.At, r.From) }

// Error makes Errors an error: one line a problem.
func (es Errors) Error() string {
	s := ""
	for i, e := range es {
		if i > 0 {
			s += "\n"
		}
		s += e.Error()
	}
	return s
}

// Fold joins the same problem in cells below each other into one, with "… and N more cells down to C19" in its message.
// The order is kept.
func (es Errors) Fold() Errors {
	type key struct {
		sheet             string
		col               int
		level             Level
		field, typed, msg string
	}
	var out Errors
	first := map[key]int{}
	count := map[int]int{}
	last := map[int]Ref{}
	for _, e := range es {
		k := key{e.At.Sheet, e.At.Col, e.Level, e.Field, e.Typed, e.Msg}
		i, seen := first[k]
		if !seen || e.At.Row == 0 || e.At.Col == 0 || e.At.Row != last[i].Row+1 {
			first[k] = len(out)
			last[len(out)] = e.At
			out = append(out, e)
			continue
		}
		count[i]++
		last[i] = e.At
	}
	for i, n := range count {
		out[i].Msg += fmt.Sprintf(" (the same in %d more, down to %s)", n, last[i])
	}
	return out
}
