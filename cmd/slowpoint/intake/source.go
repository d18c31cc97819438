package intake

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// opened is one of their sheets as one source reads it.
type opened struct {
	im      *importer
	src     *source
	file    int
	grid    *workbook.Grid
	label   string           // "Recipes.xlsx › Cook-chill", or the file for CSV
	lines   []int            // of each where: its column (rows) or row (columns); 0: none
	heads   []heading        // of each where: what stands there
	hits    [][]spotAt       // blocks, sheet: of each where: its labels
	units   []headUnit       // of each mapped
	merged  []workbook.Block // rows, columns: those that records may have a part of
	told    bool             // that it has no block
	hidden  bool             // the sheet is: no record of it is imported
	known   []string         // cards, columns: its labels, for offers
	records int              // read
	lacks   []int            // cards, columns: of each where, the records that lack its label
	lacking []string         // the first of them
	width   int              // the last line with a heading; 0: unknown
	fault   *cell.Error      // why no record of the sheet is imported
	decimal unit.Decimal
	shown   string // the cell that shows the decimal sign; "" if the mapping says it

	cells     []found           // of each where, of the record at hand
	across    []*workbook.Entry // rows: the cells of the row at hand, by column
	row       *workbook.Row     // rows: the row at hand
	from      int               // first row (blocks, sheet) or the column (columns) of the record at hand
	to        int               // its last row
	tallies   [tallies][]tally  // of each where
	fileName  workbook.Entry    // the file's name
	sheetName workbook.Entry    // the sheet's name
}

// heading is what stands over the values of a where.
type heading struct {
	text string
	at   cell.Ref
}

// headUnit is the unit of a mapped column, of the heading that it was found for.
type headUnit struct {
	known   bool
	heading string
	unit    *unit.Unit
	fault   *cell.Error
	told    bool // that it has none
}

// spotAt is a cell of a grid.
type spotAt struct{ row, col int }

// found is a cell of a record.
type found struct {
	e        *workbook.Entry
	row, col int
	label    string // of blocks and sheets: the label, as it stands there
	labelAt  spotAt
	lacks    bool   // its label is not there
	twice    spotAt // its label is there twice
}

var blank workbook.Entry

// What is told once a column, of all its cells together.
const (
	formulaCells = iota // hold a formula
	linkedCells         // hold a formula that takes something from another workbook
	signedCells         // are read by the decimal sign that the file shows
	tallies             // how many there are
)

// tally counts cells of a column of which one thing is told once.
type tally struct {
	first cell.Ref
	typed string
	used  string
	n     int
}

func (o *opened) ref(row, col int) cell.Ref { return cell.Ref{Sheet: o.label, Row: row, Col: col} }

// open finds the headings of a sheet. What is wrong is told; then nothing of the sheet is imported.
func (im *importer) open(src *source, file int, g *workbook.Grid) *opened {
	o := &opened{im: im, src: src, file: file, grid: g, label: im.label(file, g), decimal: src.decimal}
	n := len(src.wheres)
	o.lines, o.heads, o.hits, o.cells = make([]int, n), make([]heading, n), make([][]spotAt, n), make([]found, n)
	o.units = make([]headUnit, len(src.mapped))
	o.lacks, o.lacking = make([]int, n), make([]string, n)
	for i := range o.tallies {
		o.tallies[i] = make([]tally, n)
	}
	o.fileName = workbook.Entry{Kind: workbook.Text, Text: im.files[file].Name}
	o.sheetName = workbook.Entry{Kind: workbook.Text, Text: g.Name}
	if g.Protected {
		im.problems.Add(protected.problem(cell.Ref{Sheet: o.label}, cell.Note, "", ""))
	}
	if g.Noted != "" {
		im.problems.Add(writing.problem(cell.Ref{Sheet: o.label}, cell.Note, "", "", g.Noted))
	}
	if g.Refused != "" {
		o.refuse(cell.Error{At: cell.Ref{Sheet: o.label}, Msg: g.Refused, Hint: g.Mend})
		return o
	}
	if g.Hidden && len(g.Rows) == 0 {
		o.hidden = true
		return o
	}
	if len(g.Rows) == 0 {
		im.problems.Add(sheetEmpty.problem(cell.Ref{Sheet: o.label}, cell.Warning, "", ""))
		return o
	}
	was, quiet := len(im.problems), g.Hidden // of a hidden sheet, that it is hidden is enough
	switch src.layout {
	case rowLayout, columnLayout:
		o.headings()
	default:
		o.labels()
	}
	o.hiddenHeads()
	if quiet {
		im.problems, o.fault, o.hidden = im.problems[:was], nil, true
	}
	return o
}

// refuse tells why no record of the sheet is imported; the first of several reasons is kept.
func (o *opened) refuse(e cell.Error) {
	o.im.problems.Add(e)
	if o.fault == nil {
		o.fault = &e
	}
}

// headCell gives a cell by its line (column of rows, row of columns) and its place among the headings.
func (o *opened) headCell(line, head int) *workbook.Entry {
	row, col := head, line
	if o.src.layout == columnLayout {
		row, col = line, head
	}
	if b := o.grid.Merge(row, col); b != nil {
		row, col = b.Top, b.Left
	}
	if r := o.grid.Row(row); r != nil {
		return r.At(col)
	}
	return &blank
}

func (o *opened) headRef(line, head int) cell.Ref {
	if o.src.layout == columnLayout {
		return o.ref(line, head)
	}
	return o.ref(head, line)
}

// headLines are the columns (or rows) that may have a heading, in order.
func (o *opened) headLines(heads [2]int) (last int) {
	if o.src.layout == columnLayout {
		return o.grid.Rows[len(o.grid.Rows)-1].N
	}
	for h := heads[0]; h <= heads[1]; h++ {
		if r := o.grid.Row(h); r != nil {
			last = max(last, int(r.Cells[len(r.Cells)-1].Col))
		}
	}
	for _, b := range o.grid.Merged {
		if b.Top <= heads[1] && b.Bottom >= heads[0] {
			last = max(last, min(b.Right, 512))
		}
	}
	return last
}

// headIndex are the headings of a sheet.
type headIndex struct {
	texts        map[int]string   // by line, group and heading joined by ›
	known        []string         // the same, in order
	width        int              // the last line with a heading
	exact, loose map[string][]int // lines by the key of the whole, and of it without its unit or its group
}

// index reads the headings of a sheet in the rows or columns heads.
func (o *opened) index(heads [2]int) headIndex {
	src := o.src
	x := headIndex{texts: map[int]string{}, exact: map[string][]int{}, loose: map[string][]int{}}
	last := o.headLines(heads)
	for line := 1; line <= last; line++ {
		if src.layout == columnLayout && o.grid.Row(line) == nil {
			continue
		}
		group, name := o.headCell(line, heads[0]).Text, ""
		if heads[1] > heads[0] {
			if name = o.headCell(line, heads[1]).Text; name == group {
				group = ""
			}
		} else {
			group, name = "", group
		}
		full := name
		switch {
		case name == "" && group == "":
			continue
		case name == "":
			full = group
		case group != "":
			full = group + " › " + name
			x.loose[headingKey(name)] = append(x.loose[headingKey(name)], line)
		}
		x.width = line
		x.texts[line] = full
		x.known = append(x.known, full)
		x.exact[headingKey(full)] = append(x.exact[headingKey(full)], line)
		if bare, in := workbook.SplitHeading(colonless(full)); in != "" {
			x.loose[headingKey(bare)] = append(x.loose[headingKey(bare)], line)
		}
	}
	return x
}

// headings finds the line of every where that is named by its heading.
func (o *opened) headings() {
	src := o.src
	if src.heads[0] == 0 { // the mapping is at fault, which was told
		return
	}
	x := o.index(src.heads)
	o.width, o.known = x.width, x.known
	if o.moved(x) {
		return
	}
	if len(x.known) == 0 && slices.ContainsFunc(src.wheres, func(w *where) bool { return w.kind == byName }) {
		o.refuse(headRowBlank.problem(cell.Ref{Sheet: o.label}, cell.Fault, "", "", o.headPlace(src.heads), src.line.At("Heading").String()))
		return
	}
	for i, w := range src.wheres {
		switch w.kind {
		case byNumber:
			o.lines[i] = w.col + w.row
		case byName:
			o.lines[i] = o.lineOf(w, x)
		}
		if line := o.lines[i]; line > 0 {
			o.heads[i] = heading{x.texts[line], o.headRef(line, src.heads[1])}
		}
	}
	o.dataMerges()
	for i, m := range src.mapped {
		if t := o.heads[m.where].text; t != "" || m.unit != nil {
			o.unitOf(i, t, o.heads[m.where].at)
		}
	}
}

// mostMoved is how many rows or columns are searched for headings that were moved.
const mostMoved = 50

// moved tells where the headings stand if they are not where Sources says, but together in another place.
func (o *opened) moved(x headIndex) bool {
	if o.src.here(x) {
		return false
	}
	joined := o.src.heads[1] - o.src.heads[0]
	for n := 1; n <= mostMoved; n++ {
		heads := [2]int{n, n + joined}
		if n == o.src.heads[0] || !o.src.here(o.index(heads)) {
			continue
		}
		at := o.src.line.At("Heading")
		o.refuse(headMoved.problem(at, cell.Fault, "", "", o.label, o.headPlace(heads), strings.TrimPrefix(text(o.src.line, "Heading"), "'")))
		return true
	}
	return false
}

// here tells whether every heading that the mapping names is there, and one at least.
func (s *source) here(x headIndex) bool {
	n := 0
	for _, w := range s.wheres {
		if w.kind != byName {
			continue
		}
		if len(x.exact[w.key])+len(x.loose[w.key]) == 0 {
			return false
		}
		n++
	}
	return n > 0
}

// lineOf finds the line of a heading; 0 if there is none or more than one, which is told.
func (o *opened) lineOf(w *where, x headIndex) int {
	lines := x.exact[w.key]
	if len(lines) == 0 {
		lines = x.loose[w.key]
	}
	switch len(lines) {
	case 0:
		if o.src.layout == columnLayout {
			return 0 // a card may lack a label; see lacksLabels
		}
		o.refuse(headUnknown.problem(w.at, cell.Fault, "", w.text, o.label, workbook.Meant(w.text, x.known), example[o.src.layout]))
		return 0
	case 1:
		return lines[0]
	}
	o.refuse(headTwice.problem(w.at, cell.Fault, "", w.text, o.label, o.named(lines), "="+o.lineName(lines[0])))
	return 0
}

// headPlace names the heading rows or columns.
func (o *opened) headPlace(heads [2]int) string {
	a, b := o.headName(heads[0]), o.headName(heads[1])
	what := "row"
	if o.src.layout == columnLayout {
		what = "column"
	}
	if a == b {
		return what + " " + a
	}
	return what + "s " + a + " and " + b
}

func (o *opened) headName(n int) string {
	if o.src.layout == columnLayout {
		return cell.ColumnName(n)
	}
	return strconv.Itoa(n)
}

func (o *opened) lineName(n int) string {
	if o.src.layout == columnLayout {
		return strconv.Itoa(n)
	}
	return cell.ColumnName(n)
}

func (o *opened) named(lines []int) string {
	var out []string
	for _, l := range lines {
		out = append(out, o.lineName(l))
	}
	what := "columns "
	if o.src.layout == columnLayout {
		what = "rows "
	}
	return what + strings.Join(out, ", ")
}

// dataMerges keeps the merged cells that hold, or hide, a value.
func (o *opened) dataMerges() {
	used := map[int]bool{}
	for _, l := range o.lines {
		used[l] = true
	}
	for _, b := range o.grid.Merged {
		end, left, right := b.Bottom, b.Left, b.Right
		if o.src.layout == columnLayout {
			end, left, right = b.Right, b.Top, b.Bottom
		}
		if end <= o.src.heads[1] || b.Left == b.Right && b.Top == b.Bottom {
			continue
		}
		for l := range used {
			if l >= left && l <= right {
				o.merged = append(o.merged, b)
				break
			}
		}
	}
}

// unitOf finds the unit of a mapped column under a heading of theirs. A heading at fault makes its values unusable.
func (o *opened) unitOf(i int, text string, at cell.Ref) *headUnit {
	m, h := o.src.mapped[i], &o.units[i]
	if h.known && h.heading == text {
		return h
	}
	*h = headUnit{known: true, heading: text, unit: m.unit, told: h.told}
	c := m.to.column()
	q := c.Quantity
	if q == nil || m.words != nil && text == "" {
		return h
	}
	if q.Plain() {
		h.unit = &q.Units[0]
		return h
	}
	u, inside := headingUnit(q, text)
	row := m.line.Ref().String()
	var e cell.Error
	switch {
	case u != nil && m.unit != nil && u != m.unit && !strings.Contains(m.unit.Name(), ":"):
		e = headOther.problem(at, cell.Fault, "", text, u.Name(), row, m.unit.Name())
	case u != nil && m.unit == nil:
		h.unit = u
		return h
	case m.unit == nil && q == &unit.Temperature && (strings.EqualFold(inside, "K") || strings.EqualFold(inside, "kelvin")):
		e = headKelvin.problem(at, cell.Fault, "", text)
	case m.unit == nil && inside != "" && otherQuantity(q, inside):
		e = headNotUnit.problem(at, cell.Fault, "", text, strconv.Quote(inside), q.Name, row)
	default:
		return h
	}
	h.fault = &e
	o.refuse(e)
	return h
}

// hiddenHeads warns of hidden columns, or rows of transposed sheets, whose values are used.
func (o *opened) hiddenHeads() {
	if len(o.grid.HiddenCols) == 0 && o.src.layout != columnLayout {
		return
	}
	told := map[int]bool{}
	for i, l := range o.lines {
		if l == 0 || told[l] {
			continue
		}
		told[l] = true
		switch {
		case o.src.layout == columnLayout:
			if r := o.grid.Row(l); r != nil && r.Hidden {
				o.im.problems.Add(headHidden.problem(o.ref(l, 0), cell.Warning, "", "", fmt.Sprintf("Row %d", l)))
			}
		case o.grid.HiddenCols[l]:
			o.im.problems.Add(headHidden.problem(o.heads[i].at, cell.Warning, "", "", "Column "+cell.ColumnName(l)))
		}
	}
}

// labels finds the labels of forms.
func (o *opened) labels() {
	wanted := map[string][]int{}
	for i, w := range o.src.wheres {
		if w.kind == byName {
			wanted[w.key] = append(wanted[w.key], i)
		}
	}
	exact := make([][]spotAt, len(o.src.wheres))
	for r := range o.grid.Rows {
		row := &o.grid.Rows[r]
		for c := range row.Cells {
			e := &row.Cells[c]
			if e.Kind != workbook.Text || len(e.Text) > 250 {
				continue
			}
			at := spotAt{row.N, int(e.Col)}
			if len(o.known) < 2000 {
				o.known = append(o.known, e.Text)
			}
			for _, i := range wanted[headingKey(e.Text)] {
				exact[i] = append(exact[i], at)
			}
			if bare, in := workbook.SplitHeading(colonless(e.Text)); in != "" {
				for _, i := range wanted[headingKey(bare)] {
					o.hits[i] = append(o.hits[i], at)
				}
			}
		}
	}
	for i := range o.src.wheres {
		if len(exact[i]) > 0 {
			o.hits[i] = exact[i]
		}
	}
	for i, m := range o.src.mapped {
		if m.unit != nil && o.src.wheres[m.where].kind == byNumber {
			o.unitOf(i, "", cell.Ref{})
		}
	}
}

// has tells whether the label of a where is in the sheet.
func (o *opened) has(i int) bool {
	return o.src.wheres[i].kind != byName || o.lines[i] > 0 || len(o.hits[i]) > 0
}

// lacksLabels tells of labels that no card of a source has. A card that has none of its own for a value has a blank there.
func (im *importer) lacksLabels(s *source, list []*opened) {
	if s.layout == rowLayout || s.layout == "" {
		return
	}
	list = slices.DeleteFunc(slices.Clone(list), func(o *opened) bool { return o.hidden || o.fault != nil || len(o.grid.Rows) == 0 })
	if len(list) == 0 {
		return
	}
	for i, w := range s.wheres {
		if slices.ContainsFunc(list, func(o *opened) bool { return o.has(i) }) {
			continue
		}
		var known []string
		for _, o := range list {
			known = append(known, o.known...)
		}
		known = known[:min(len(known), 2000)]
		var e cell.Error
		switch {
		case len(list) > 1:
			e = labelNowhere.problem(w.at, cell.Fault, "", w.text, workbook.Meant(w.text, known), example[s.layout])
		case s.layout == columnLayout:
			e = headUnknown.problem(w.at, cell.Fault, "", w.text, list[0].label, workbook.Meant(w.text, known), example[s.layout])
		default:
			e = labelUnknown.problem(w.at, cell.Fault, "", w.text, list[0].label, workbook.Meant(w.text, known), example[s.layout])
		}
		im.problems.Add(e)
		for _, o := range list {
			if o.fault == nil {
				o.fault = &e
			}
		}
	}
}

// noteLacks notes which labels the imported record at hand lacks.
func (o *opened) noteLacks(record string) {
	for i := range o.cells {
		if o.cells[i].lacks {
			if o.lacks[i]++; o.lacks[i] == 1 {
				o.lacking[i] = record
			}
		}
	}
}

// lackingLabels warns of labels that some records of a source lack.
func (im *importer) lackingLabels(s *source, list []*opened) {
	for i, w := range s.wheres {
		n, of, first := 0, 0, ""
		for _, o := range list {
			if o.fault == nil && !o.hidden {
				n, of = n+o.lacks[i], of+o.records
				if first == "" {
					first = o.lacking[i]
				}
			}
		}
		if n == 0 {
			continue
		}
		if n > 1 {
			first += " and others"
		}
		im.problems.Add(labelLacks.problem(w.at, cell.Warning, "", w.text, strconv.Itoa(n), counted(of, "record"), first))
	}
}

// counted words a number of things.
func counted(n int, what string) string {
	if n != 1 {
		what += "s"
	}
	return strconv.Itoa(n) + " " + what
}

// leftOutside warns of filled rows, or columns, that First and Last keep out; a line of units is none.
func (o *opened) leftOutside() {
	src := o.src
	if src.first == 0 && src.last == 0 || o.hidden || o.fault != nil || src.fault != nil || src.layout == sheetLayout {
		return
	}
	v := lines{grid: o.grid, swap: src.layout == columnLayout}
	end, wide := v.extent()
	if !v.swap {
		wide = max(o.width, 1)
	}
	var out []int
	if src.layout == blockLayout {
		for _, s := range startsOf(o.grid, src.word) {
			if s.row < src.first || src.last > 0 && s.row > src.last {
				out = append(out, s.row)
			}
		}
	} else {
		for n := src.heads[1] + 1; n <= end; n++ {
			if (n < src.first || src.last > 0 && n > src.last) && v.filled(n, wide) {
				out = append(out, n)
			}
		}
	}
	if len(out) == 0 {
		return
	}
	at, what := o.ref(out[0], 0), "row is"
	switch {
	case v.swap:
		at, what = o.ref(0, out[0]), "column is"
	case src.layout == blockLayout:
		what = "block is"
	}
	if len(out) > 1 {
		what = strings.Replace(what, " is", "s are", 1)
	}
	o.im.problems.Add(outside.problem(at, cell.Warning, "", "", fmt.Sprintf("%d filled %s", len(out), what), src.line.Ref().String(), o.spans(out)))
}

// filled tells whether a line holds anything but units.
func (v lines) filled(line, wide int) bool {
	for p := 1; p <= wide; p++ {
		if e := v.at(line, p); e.Kind != workbook.Blank && !isUnit(e.Text) {
			return true
		}
	}
	return false
}

// spans words rows or columns in order: "3–5, 9".
func (o *opened) spans(of []int) string {
	var out []string
	for i := 0; i < len(of); {
		j := i
		for j+1 < len(of) && of[j+1] == of[j]+1 {
			j++
		}
		s := o.headName(of[i])
		if j > i {
			s += "–" + o.headName(of[j])
		}
		if out = append(out, s); len(out) == 6 && j+1 < len(of) {
			return strings.Join(out, ", ") + ", … " + o.headName(of[len(of)-1])
		}
		i = j + 1
	}
	return strings.Join(out, ", ")
}
