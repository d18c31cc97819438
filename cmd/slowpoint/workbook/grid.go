package workbook

import (
	"strings"
	"unicode"

	"golang.org/x/text/unicode/norm"
)

// grid is a sheet as it stands in the file, without any meaning.
type grid struct {
	name    string // as the user named it
	rows    []gridRow
	merged  []block
	hidden  bool         // the whole sheet
	hiddenC map[int]bool // hidden columns
	words   []string     // that number formats show behind a number, as 0.0" cm" does
	csv     bool
	commas  bool   // CSV whose cells are divided by commas
	is1904  bool   // its dates count from 1904
	refused string // why nothing in it can be used: goes into a fault of the whole sheet
	mend    string
}

// gridRow is a row with at least one filled cell.
type gridRow struct {
	n      int // from 1
	hidden bool
	cells  []entry // filled ones, in order of their columns
}

// block is a range of cells, from 1, ends included.
type block struct{ left, top, right, bottom int }

// kind of a cell's content.
type kind uint8

const (
	blank    kind = iota
	text          // words
	figure        // a number; text holds its digits, decimal point, as stored
	truth         // TRUE or FALSE
	broken        // #N/A and its like
	noStored      // a formula without a stored result
)

// form is what a number format makes of a number.
type form uint8

const (
	bare form = iota
	percent
	clock  // duration or time of day, in days
	date   // in days
	worded // and above: shows words behind the number, which are in grid.words
)

// entry is one filled cell.
type entry struct {
	text    string
	col     int32
	kind    kind
	form    form
	formula bool
	struck  bool // struck through, wholly or in part
}

var nothing entry

// at gives the cell of a column; a blank one if it is not filled.
func (r *gridRow) at(col int) *entry {
	for i := range r.cells {
		if int(r.cells[i].col) == col {
			return &r.cells[i]
		}
	}
	return &nothing
}

// tidy makes a typed word comparable for the eye: no surrounding or doubled blanks, nothing that cannot be seen, composed letters.
func tidy(s string) string {
	plain := true
	for i := 0; i < len(s); i++ {
		if s[i] >= 0x7f || s[i] < ' ' || s[i] == ' ' && (i == 0 || i == len(s)-1 || s[i-1] == ' ') {
			plain = false
			break
		}
	}
	if plain {
		return s
	}
	s = strings.Map(seen, strings.ToValidUTF8(s, "\uFFFD"))
	return norm.NFC.String(strings.Join(strings.Fields(s), " "))
}

// seen drops what comes along with text copied from web pages and chats and cannot be seen: soft hyphens, zero-width blanks, marks of
// direction and byte order. A control character counts as a blank. What joins letters or emoji stays.
func seen(c rune) rune {
	switch {
	case c == '\u00ad', c == '\u200b', c == '\u200e', c == '\u200f', c == '\u2060', c == '\ufeff', c >= '\u202a' && c <= '\u202e', c >= '\u2066' && c <= '\u2069':
		return -1
	case unicode.IsControl(c):
		return ' '
	}
	return c
}

// key makes a name comparable: without regard to case, blanks around it, or Unicode form.
func key(s string) string { return strings.ToLower(tidy(s)) }
