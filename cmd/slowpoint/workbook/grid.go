package workbook

import (
	"strings"
	"unicode"

	"golang.org/x/text/unicode/norm"
)

// Grid is a sheet as it stands in the file, without any meaning.
type Grid struct {
	Name       string // as the user named it
	Rows       []Row
	Merged     []Block
	Hidden     bool             // the whole sheet
	HiddenCols map[int]bool     // hidden columns
	take       func(*Row) error // is given each row instead of Rows; nil if they are kept
	words      []string         // that number formats show behind a number, as 0.0" cm" does
	CSV        bool
	commas     bool   // CSV whose cells are divided by commas
	Is1904     bool   // its dates count from 1904
	Protected  bool   // against changes, with or without a password
	Noted      string // how a CSV file of somebody's own had to be read; a sentence, "" if it is plain UTF-8
	Refused    string // why nothing in it can be used: goes into a fault of the whole sheet
	Mend       string
}

// Row is a row with at least one filled cell.
type Row struct {
	N      int // from 1
	Hidden bool
	Cells  []Entry // filled ones, in order of their columns
}

// Block is a range of cells, from 1, ends included.
type Block struct{ Left, Top, Right, Bottom int }

// Kind of a cell's content.
type Kind uint8

const (
	Blank    Kind = iota
	Text          // words
	Figure        // a number; text holds its digits, decimal point, as stored
	Truth         // TRUE or FALSE
	Broken        // #N/A and its like
	NoStored      // a formula without a stored result
)

// Form is what a number format makes of a number.
type Form uint8

const (
	Bare Form = iota
	Percent
	Clock  // duration or time of day, in days
	Date   // in days
	Worded // and above: shows words behind the number, which are in Grid.words
)

// Entry is one filled cell.
type Entry struct {
	Text    string
	Col     int32
	Kind    Kind
	Form    Form
	Shows   Display
	Formula bool
	Linked  bool // the formula takes something from another workbook
	Struck  bool // struck through, wholly or in part
}

var nothing Entry

// at gives the cell of a column; a blank one if it is not filled.
func (r *Row) at(col int) *Entry {
	for i := range r.Cells {
		if int(r.Cells[i].Col) == col {
			return &r.Cells[i]
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

// Key makes a name comparable: without regard to case, blanks around it, or Unicode form.
func Key(s string) string { return strings.ToLower(tidy(s)) }
