package intake

import (
	"fmt"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// trail gathers where the columns of the made rows come from: the sheet Origins. A row names its record, its part and its checksum in
// the column #From, and Origins says of each column of such rows which place of the record it is.
type trail struct {
	r        *Result
	variants map[group][]*variant
	taken    map[group]bool // parts that are in use, by their words
	inOrder  []*variant
}

// group is what rows with one line of Origins a column have in common.
type group struct {
	file        int // index in Result.Files; −1: the mapping
	theirSheet  string
	sheet, part string
}

// variant is a group of rows whose columns come from the same places. Where records of one part differ in them, as labels in blocks can,
// each kind is a part of its own: "chill", "chill (2)".
type variant struct {
	group
	places  map[*workbook.Column]spot
	columns []*workbook.Column // in the order of their first value
	n       int                // rows
}

// spot is a place of a record.
type spot struct {
	kind     spotKind
	col, row int
	mapping  string // a cell of the mapping
	words    bool   // the cell holds a word that the mapping says the meaning of
}

type spotKind uint8

const (
	ofRow   spotKind = iota // a column
	ofCol                   // a row
	ofBlock                 // a column, and so many rows below the start of the record
	ofSheet                 // a cell
	ofMap                   // a cell of the mapping
	ofFile                  // the name of the file
	ofName                  // the name of the sheet
)

func newTrail(r *Result) *trail {
	return &trail{r: r, variants: map[group][]*variant{}, taken: map[group]bool{}}
}

// spotOf is the place of a value within its record; false if it comes from no cell.
func spotOf(record Place, file string, v *Value) (spot, bool) {
	at, words := v.At, v.Const != ""
	switch {
	case at.Row == 0 && at.Col == 0 && v.Const == "" && v.Text == file:
		return spot{kind: ofFile}, true
	case at.Row == 0 && at.Col == 0 && v.Const == "" && v.Text == record.Sheet:
		return spot{kind: ofName}, true
	case at.Row == 0 && at.Col == 0 && v.Const == "":
		return spot{}, false
	case at.Row == 0 && at.Col == 0:
		return spot{kind: ofMap, mapping: v.Const}, true
	case record.Row > 0 && record.Col > 0 && at.Row >= record.Row:
		return spot{kind: ofBlock, col: at.Col, row: at.Row - record.Row, words: words}, true
	case record.Row > 0 && record.Col == 0:
		return spot{kind: ofRow, col: at.Col, words: words}, true
	case record.Col > 0 && record.Row == 0:
		return spot{kind: ofCol, row: at.Row, words: words}, true
	}
	return spot{kind: ofSheet, col: at.Col, row: at.Row, words: words}, true
}

// String is the place as Origins tells it.
func (s spot) String() string {
	if s.words {
		s.words = false
		return s.String() + " by Words"
	}
	switch s.kind {
	case ofRow:
		return cell.ColumnName(s.col)
	case ofCol:
		return strconv.Itoa(s.row)
	case ofBlock:
		return fmt.Sprintf("%s%+d", cell.ColumnName(s.col), s.row)
	case ofSheet:
		return cell.ColumnName(s.col) + strconv.Itoa(s.row)
	case ofFile:
		return "{file}"
	case ofName:
		return "{sheet}"
	}
	return "map: " + s.mapping
}

// mostTried is how many variants a row is held against, the newest first: a file in which every record has places of its own must not
// take the square of its length.
const mostTried = 20

// ofMade notes where the cells of a made row come from, and gives the words for its column #From, without the checksum.
func (t *trail) ofMade(m *Made) string {
	g := group{m.Record.File, m.Record.Sheet, m.Sheet.Name, m.Part}
	file := t.r.file(m.Record)
	var fits *variant
	for i, all := len(t.variants[g])-1, t.variants[g]; i >= max(0, len(all)-mostTried); i-- {
		if v := all[i]; v.takes(m, file) {
			fits = v
			break
		}
	}
	if fits == nil {
		fits = t.open(g)
	}
	fits.n++
	for i := range m.Values {
		if s, ok := spotOf(m.Record, file, &m.Values[i]); ok && m.Values[i].Text != "" {
			fits.put(m.Values[i].Column, s)
		}
	}
	return withPart(t.r.anchor(m.Record), fits.part)
}

func (v *variant) takes(m *Made, file string) bool {
	for i := range m.Values {
		s, ok := spotOf(m.Record, file, &m.Values[i])
		if have, known := v.places[m.Values[i].Column]; ok && m.Values[i].Text != "" && known && have != s {
			return false
		}
	}
	return true
}

func (v *variant) put(c *workbook.Column, s spot) {
	if _, known := v.places[c]; !known {
		v.places[c] = s
		v.columns = append(v.columns, c)
	}
}

// open begins a variant of a group, with a part of its own.
func (t *trail) open(g group) *variant {
	v := &variant{group: g, places: map[*workbook.Column]spot{}}
	for n := len(t.variants[g]) + 1; n > 1 || t.taken[v.group]; n++ {
		if v.part = strings.TrimSpace(fmt.Sprintf("%s (%d)", g.part, max(n, 2))); !t.taken[v.group] {
			break
		}
	}
	t.taken[v.group] = true
	t.variants[g] = append(t.variants[g], v)
	t.inOrder = append(t.inOrder, v)
	return v
}

// ofLine does the same for a row that stands in the mapping.
func (t *trail) ofLine(s *workbook.Sheet, l *workbook.Line) string {
	g := group{file: -1, theirSheet: l.Ref().Sheet, sheet: s.Name}
	if t.variants[g] == nil {
		t.open(g)
	}
	t.variants[g][0].n++
	for _, c := range s.Columns {
		if l.Filled(c.Heading) {
			t.variants[g][0].put(c, spot{kind: ofRow, col: l.At(c.Heading).Col})
		}
	}
	return t.r.anchor(Place{File: -1, Sheet: l.Ref().Sheet, Row: l.Ref().Row})
}

// rows are those of the sheet Origins: which file is the mapping, then a column a row.
func (t *trail) rows() [][]string {
	out := [][]string{{t.r.Mapping, t.r.SHA256, "", "-", "", "-", "map"}}
	for _, v := range t.inOrder {
		digest := t.r.SHA256
		if v.file >= 0 {
			digest = t.r.Files[v.file].SHA256
		}
		for _, c := range v.columns {
			out = append(out, []string{t.r.file(Place{File: v.file}), digest, v.theirSheet, v.sheet, v.part, c.Heading, v.places[c].String(), strconv.Itoa(v.n)})
		}
	}
	return out
}

// anchor tells a record: "Recipes.xlsx › Cook-chill row 17", "… column F", "… sheet"; a block by the row that it begins in.
func (r *Result) anchor(p Place) string {
	if p.Row > 0 {
		p.Col = 0
	}
	return r.sheetOf(p) + " " + p.short()
}

func withPart(anchor, part string) string {
	if part == "" {
		return anchor
	}
	return anchor + " part " + part
}
