package intake

import (
	"maps"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// layout is how a sheet seems to be laid out, as Sources says it.
type layout struct {
	kind           string
	heading, first string // as Sources has them
	why            string
	heads          [2]int // the lines of the headings: rows, or columns where it is transposed
	units          int    // a line below them that holds units only; 0 if there is none
	from           int    // first line of data
	word           string // that begins a block
}

// lines is a sheet as lines of cells: its rows or, transposed, its columns.
type lines struct {
	grid *workbook.Grid
	swap bool
}

func (v lines) at(line, place int) *workbook.Entry {
	row, col := line, place
	if v.swap {
		row, col = place, line
	}
	if r := v.grid.Row(row); r != nil {
		return r.At(col)
	}
	return &workbook.Entry{}
}

// extent is the last line and the last place that hold anything.
func (v lines) extent() (line, place int) {
	for i := range v.grid.Rows {
		r := &v.grid.Rows[i]
		line = max(line, r.N)
		place = max(place, int(r.Cells[len(r.Cells)-1].Col))
	}
	if v.swap {
		return place, line
	}
	return line, place
}

// How much of a sheet is looked at to find its headings: lines from its first one on, and lines below a heading.
const (
	headLines  = 40
	belowLines = 30
)

var startsLikeNumber = regexp.MustCompile(`^[<>≤≥~≈+−-]?\s*[\d½¼¾]`)

// isName tells whether a cell may be a heading: words that are no value.
func isName(e *workbook.Entry) bool {
	return e.Kind == workbook.Text && !startsLikeNumber.MatchString(e.Text)
}

// names are the places of a line that may be headings.
func (v lines) names(line, last int) []int {
	var out []int
	for p := 1; p <= last; p++ {
		if isName(v.at(line, p)) {
			out = append(out, p)
		}
	}
	return out
}

// heading finds the line that looks most like headings: many names, known words or units among them, and values of one kind below each.
func (v lines) heading() (line int, score float64, names []int) {
	last, wide := v.extent()
	best := 0.0
	for i := 1; i <= min(last, headLines); i++ {
		at := v.names(i, wide)
		if len(at) < 2 || !slices.ContainsFunc(at, func(p int) bool { return !isUnit(v.at(i, p).Text) }) { // units alone are no names
			continue
		}
		known, alike, below := 0.0, 0.0, 0
		for _, p := range at {
			if isKnown(v.at(i, p).Text) || isUnit(v.at(i+1, p).Text) {
				known++
			}
			numbers, words := 0.0, 0.0
			for j := i + 1; j <= min(last, i+belowLines); j++ {
				switch e := v.at(j, p); {
				case e.Kind == workbook.Blank:
				case isName(e):
					words++
				default:
					numbers++
				}
			}
			if numbers+words > 0 {
				below++
				alike += max(numbers, words) / (numbers + words)
			}
		}
		if below < 2 {
			continue
		}
		n := float64(len(at))
		s := 2*known/n + alike/n
		if rank := s * min(n, 6); rank > best { // one known word in a row of two is no row of headings
			best, line, score, names = rank, i, s, at
		}
	}
	return line, score, names
}

// isKnown tells whether a heading gives a unit, or is a word of the plan or of the trade.
func isKnown(text string) bool {
	name, u, _ := unitIn(text)
	if u != "" {
		return true
	}
	_, ok := tradeAims()[workbook.Key(name)]
	return ok || workbook.SheetNamed("Products").Known(name) != nil
}

// quantities are those of which a heading may give the unit, the likelier ones first.
var quantities = []*unit.Quantity{&unit.Temperature, &unit.Duration, &unit.Length, &unit.Percent, &unit.Film, &unit.Speed, &unit.Volume, &unit.Area, &unit.Density, &unit.Conductivity,
	&unit.SpecificHeat, &unit.Resistance}

func isUnit(s string) bool {
	for _, q := range quantities {
		if s != "" && q.Unit(s) != nil {
			return true
		}
	}
	return false
}

// unitIn finds the unit in a heading: in brackets, as its last words, or the whole of it. A single letter without brackets is none,
// unless it is all there is.
func unitIn(heading string) (name, u string, inBrackets bool) {
	heading = colonless(heading)
	if name, u = workbook.SplitHeading(heading); u != "" {
		if isUnit(u) {
			return name, u, true
		}
		return heading, "", false
	}
	if isUnit(heading) {
		return "", heading, false
	}
	words := strings.Fields(heading)
	for n := min(2, len(words)-1); n >= 1; n-- {
		if u := strings.Trim(strings.Join(words[len(words)-n:], " "), ",:"); len([]rune(u)) > 1 && isUnit(u) {
			return strings.TrimRight(strings.Join(words[:len(words)-n], " "), " ,:"), u, false
		}
	}
	return heading, "", false
}

// guess finds how a sheet is laid out; card: others in the file look like it.
func guess(g *workbook.Grid, card bool) *layout {
	rows, columns := lines{grid: g}, lines{grid: g, swap: true}
	if card {
		return &layout{kind: sheetLayout, heading: "-", why: "several sheets have the same labels in the same cells"}
	}
	if word := blockWord(g); word != "" {
		return &layout{kind: blockLayout, heading: word, word: word, why: "the same labels come again below " + strconv.Quote(word)}
	}
	row, score, names := rows.heading()
	col, other, _ := columns.heading()
	switch {
	case col > 0 && col <= 3 && (row == 0 || other > score):
		l := &layout{kind: columnLayout, heading: cell.ColumnName(col), heads: [2]int{col, col}, why: "column " + cell.ColumnName(col) + " looks most like headings"}
		return l.data(columns)
	case row == 0:
		return &layout{kind: rowLayout, heading: "1", heads: [2]int{1, 1}, from: 2, why: "nothing looks like headings, so row 1 is taken; take this row out unless the sheet has products"}
	}
	l := &layout{kind: rowLayout, heads: [2]int{row, row}}
	switch {
	case row > 1 && merges(g, row-1) > 0:
		l.heads[0] = row - 1
	case merges(g, row) > 0 && len(rows.names(row+1, slices.Max(names))) > 1:
		l.heads[1] = row + 1
	}
	l.heading, l.why = strconv.Itoa(l.heads[0]), "row "+strconv.Itoa(row)+" looks most like headings"
	if l.heads[1] > l.heads[0] {
		l.heading += "-" + strconv.Itoa(l.heads[1])
		l.why = "rows " + l.heading + " look most like headings, with groups over them"
	}
	return l.data(rows)
}

// data finds the first line of data; a line of units below the headings is none.
func (l *layout) data(v lines) *layout {
	last, wide := v.extent()
	next, units, other := l.heads[1]+1, 0, 0
	for p := 1; p <= wide && next <= last; p++ {
		switch e := v.at(next, p); {
		case e.Kind == workbook.Blank:
		case isUnit(e.Text):
			units++
		default:
			other++
		}
	}
	l.from = next
	if units >= 2 && units > other {
		l.units, l.from = next, next+1
		l.first = strconv.Itoa(l.from)
		if v.swap {
			l.first = cell.ColumnName(l.from)
		}
		l.why += ", with units beside them"
	}
	return l
}

// merges counts the merged cells that lie across columns in a row.
func merges(g *workbook.Grid, row int) int {
	n := 0
	for _, b := range g.Merged {
		if b.Top == row && b.Bottom == row && b.Right > b.Left && g.Row(row) != nil && g.Row(row).At(b.Left).Kind == workbook.Text {
			n++
		}
	}
	return n
}

// finds lists the headings or labels of a sheet with their values.
func (l *layout) finds(g *workbook.Grid) []*theirHeading {
	switch l.kind {
	case blockLayout, sheetLayout:
		return l.labels(g)
	}
	v := lines{grid: g, swap: l.kind == columnLayout}
	last, wide := v.extent()
	var out []*theirHeading
	times := map[string]int{}
	for p := 1; p <= wide; p++ {
		h := &theirHeading{grid: g, hidden: !v.swap && g.HiddenCols[p]}
		for i := l.from; i <= last; i++ {
			if e := v.at(i, p); e.Kind != workbook.Blank {
				h.cells = append(h.cells, e)
			}
		}
		group, name := l.over(v, p)
		if name == "" && len(h.cells) == 0 {
			continue
		}
		h.group = group
		h.name, h.unit, h.inside = unitIn(name)
		if e := v.at(l.units, p); l.units > 0 && h.unit == "" && isUnit(e.Text) {
			h.unit = e.Text
		}
		h.theirs = name
		if group != "" {
			h.theirs = group + " › " + name
		}
		times[headingKey(h.theirs)]++
		if name == "" {
			h.theirs = l.ordinal(p)
		}
		out = append(out, h)
	}
	l.byOrdinal(out, times, v)
	return out
}

// byOrdinal names the columns of headings that stand more than once by their letters.
func (l *layout) byOrdinal(finds []*theirHeading, times map[string]int, v lines) {
	_, wide := v.extent()
	p := 0
	for _, h := range finds {
		for p++; p <= wide; p++ { // the place that this one was made of
			group, name := l.over(v, p)
			theirs := name
			if group != "" {
				theirs = group + " › " + name
			}
			if theirs == h.theirs || h.theirs == l.ordinal(p) {
				break
			}
		}
		if !strings.HasPrefix(h.theirs, "=") && times[headingKey(h.theirs)] > 1 {
			h.theirs, h.doubled = l.ordinal(p), true
		}
	}
}

// over gives the heading of a place and the group above it.
func (l *layout) over(v lines, p int) (group, name string) {
	name = nameAt(v, l.heads[1], p)
	if l.heads[0] == l.heads[1] {
		return "", name
	}
	if group = nameAt(v, l.heads[0], p); name == "" || group == name {
		return "", group
	}
	return group, name
}

// nameAt is the heading in a cell, or of the merged cells that it is part of.
func nameAt(v lines, line, place int) string {
	e := v.at(line, place)
	if e.Kind == workbook.Blank && !v.swap {
		if b := v.grid.Merge(line, place); b != nil && b.Right > b.Left {
			e = v.at(b.Top, b.Left)
		}
	}
	return e.Text
}

// labels lists the labels of a card or of the first block: a text with its value in the next cell. Of a row with several values each is
// named by its place.
func (l *layout) labels(g *workbook.Grid) []*theirHeading {
	var out []*theirHeading
	top, bottom, wide := 1, 0, 0
	v := lines{grid: g}
	bottom, wide = v.extent()
	if l.kind == blockLayout {
		starts := startsOf(g, l.word)
		top, bottom = starts[0].row, starts[1].row-1
	} else {
		out = append(out, &theirHeading{theirs: "{sheet}", name: "product", grid: g, cells: []*workbook.Entry{{Kind: workbook.Text, Text: g.Name}}})
	}
	for row := top; row <= bottom; row++ {
		for p := 1; p <= wide; p++ {
			label := v.at(row, p)
			if !isName(label) {
				continue
			}
			from := p + 1
			for p+1 <= wide && v.at(row, p+1).Kind != workbook.Blank && (p+1 == from || !isName(v.at(row, p+1))) {
				p++
			}
			for c := from; c <= p; c++ {
				out = append(out, l.labelled(v, label.Text, row, c, top, p-from))
			}
		}
	}
	out = onePerLabel(out)
	if l.kind == sheetLayout && namesProduct(out[1:]) { // the card says it itself
		out[0].name = ""
	}
	return out
}

// labelled is a value beside a label; one of several in the row has its name above it.
func (l *layout) labelled(v lines, label string, row, col, top, more int) *theirHeading {
	h := &theirHeading{theirs: label, grid: v.grid, cells: []*workbook.Entry{v.at(row, col)}}
	h.name, h.unit, h.inside = unitIn(label)
	if l.kind == blockLayout && row == top {
		h.name = "product"
	}
	if more == 0 {
		return h
	}
	h.group, h.name, h.unit, h.inside = label, "", "", false
	for up := row - 1; up >= top; up-- {
		if e := v.at(up, col); isName(e) {
			h.name, h.unit, _ = unitIn(e.Text)
			break
		}
	}
	if stage, _ := stageOf(h.group); stage != "" && h.unit != "" {
		h.name = "" // a temperature or a duration of the step that the row is
	}
	h.theirs = "=" + cell.ColumnName(col) + strconv.Itoa(row)
	if l.kind == blockLayout {
		h.theirs = "=" + cell.ColumnName(col) + "+" + strconv.Itoa(row-top)
	}
	return h
}

// onePerLabel drops labels that stand twice: a card has to name their cells.
func onePerLabel(finds []*theirHeading) []*theirHeading {
	times := map[string]int{}
	for _, h := range finds {
		times[workbook.Key(h.theirs)]++
	}
	return slices.DeleteFunc(finds, func(h *theirHeading) bool { return times[workbook.Key(h.theirs)] > 1 })
}

func startsOf(g *workbook.Grid, word string) []spotAt {
	var out []spotAt
	for i := range g.Rows {
		for _, e := range g.Rows[i].Cells {
			if e.Kind == workbook.Text && headingKey(e.Text) == headingKey(word) {
				out = append(out, spotAt{g.Rows[i].N, int(e.Col)})
			}
		}
	}
	return out
}

// mostAcross is how many names a row of a card or a block may have; a row of headings has more.
const mostAcross = 3

// blockWord finds the word that begins each block: one that comes again in its column with the same labels below it each time.
func blockWord(g *workbook.Grid) string {
	v := lines{grid: g}
	last, wide := v.extent()
	for i := 1; i <= min(last, 400); i++ {
		if len(v.names(i, wide)) > mostAcross {
			return ""
		}
	}
	starts := map[string][]spotAt{} // by the key of the word; of the first columns
	var words []string
	for i := range g.Rows {
		for _, e := range g.Rows[i].Cells {
			if e.Col <= 3 && isName(&e) {
				k := workbook.Key(e.Text)
				if starts[k] == nil {
					words = append(words, e.Text)
				}
				starts[k] = append(starts[k], spotAt{g.Rows[i].N, int(e.Col)})
			}
		}
	}
	for _, w := range words {
		if at := starts[workbook.Key(w)]; len(at) > 1 && v.comesAgain(at) {
			return w
		}
	}
	return ""
}

// comesAgain tells whether two labels at least stand below each of these cells, the same ones in the same places.
func (v lines) comesAgain(starts []spotAt) bool {
	same := 0
	for d := 1; d <= min(starts[1].row-starts[0].row-1, belowLines); d++ {
		first := v.at(starts[0].row+d, starts[0].col)
		if isName(first) && !slices.ContainsFunc(starts[1:], func(s spotAt) bool {
			return s.col != starts[0].col || workbook.Key(v.at(s.row+d, s.col).Text) != workbook.Key(first.Text)
		}) {
			same++
		}
	}
	return same >= 2
}

// sameCards finds sheets that have the same labels in the same cells, on several rows: cards of one form. It gives for each sheet the
// number of the first one like it, from 1; 0 if it is like no other.
func sameCards(grids []*workbook.Grid) []int {
	out, forms := make([]int, len(grids)), make([]map[spotAt]string, len(grids))
	for i, g := range grids {
		forms[i] = formOf(g)
	}
	for i := range grids {
		for j := i + 1; j < len(grids) && (out[i] == 0 || out[i] == i+1); j++ {
			if out[j] == 0 && alike(forms[i], forms[j]) {
				out[i], out[j] = i+1, i+1
			}
		}
	}
	return out
}

// formOf is the form of a card: its labels with a value beside them; none if a row has so many names that they are headings.
func formOf(g *workbook.Grid) map[spotAt]string {
	form, v := map[spotAt]string{}, lines{grid: g}
	last, wide := v.extent()
	for row := 1; row <= min(last, 200); row++ {
		names := v.names(row, wide)
		if len(names) > mostAcross+1 {
			return nil
		}
		for _, p := range names {
			if p < wide && v.at(row, p+1).Kind != workbook.Blank {
				form[spotAt{row, p}] = workbook.Key(v.at(row, p).Text)
			}
		}
	}
	return form
}

// alike tells whether two cards share most of their labels, and these on three rows at least.
func alike(a, b map[spotAt]string) bool {
	rows, shared := map[int]bool{}, 0
	for at, label := range a {
		if b[at] == label {
			shared++
			rows[at.row] = true
		}
	}
	return len(rows) >= 3 && 2*shared > len(a)
}

func sortedKeys(m map[string]string) []string { return slices.Sorted(maps.Keys(m)) }
