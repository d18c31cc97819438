package workbook

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// table is a sheet of which headings and rows are known.
type table struct {
	sheet *Sheet
	grid  *grid
	head  int              // row number of the headings
	place map[string]*head // by heading without unit
	lines []*line
	cut   bool // it has more rows than are read
	// strays are rows without any needed cell; nobody knows what they belong to
	strays []*line
}

// head is one column of a table.
type head struct {
	col    int
	column *Column
	unit   *unit.Unit // of a dimensional column; nil if the heading is at fault
	faults cell.Errors
}

// line is one data row while it is read.
type line struct {
	r        *reader
	t        *table
	row      *gridRow
	because  cell.Errors // the faults that it has, or that it suffers from
	readings []echoes
	aside    bool    // hidden or struck through: somebody may have meant it away
	merged   []block // merged cells that the row has a part of
}

// splitHeading divides a heading into its name and what stands in brackets (or a % behind the name).
func splitHeading(s string) (name, inBrackets string) {
	s = tidy(s)
	for _, pair := range []string{"()", "[]"} {
		i := strings.IndexByte(s, pair[0])
		if i > 0 && strings.HasSuffix(s, pair[1:]) {
			return strings.TrimSpace(s[:i]), strings.TrimSpace(s[i+1 : len(s)-1])
		}
	}
	if n := strings.TrimSuffix(s, "%"); n != s && n != "" {
		return strings.TrimSpace(n), "%"
	}
	return s, ""
}

// byKey finds the columns of a sheet by the key of their headings.
var byKey = func() map[*Sheet]map[string]*Column {
	all := map[*Sheet]map[string]*Column{}
	for _, s := range Sheets {
		all[s] = map[string]*Column{}
		for _, c := range s.Columns {
			all[s][key(c.Heading)] = c
		}
	}
	return all
}()

// headings finds the columns of a sheet that a row names; the first of two equal ones.
func headings(s *Sheet, row *gridRow) map[string]*head {
	var found map[string]*head
	for i := range row.cells {
		if row.cells[i].kind != text {
			continue
		}
		name, _ := splitHeading(row.cells[i].text)
		if c := byKey[s][key(name)]; c != nil && found[c.Heading] == nil {
			if found == nil {
				found = map[string]*head{}
			}
			found[c.Heading] = &head{col: int(row.cells[i].col), column: c}
		}
	}
	return found
}

// complete tells whether all needed columns are among them.
func complete(s *Sheet, found map[string]*head) bool {
	for _, c := range s.Columns {
		if c.Needed && found[c.Heading] == nil {
			return false
		}
	}
	return len(found) > 0
}

// ref is a place of the table's sheet.
func (t *table) ref(row, col int) cell.Ref { return cell.Ref{Sheet: t.grid.name, Row: row, Col: col} }

// open finds the headings of a sheet and its rows. It returns nil if there is no table; the problems are the reader's.
func (r *reader) open(g *grid, s *Sheet) *table {
	t := &table{sheet: s, grid: g}
	if g.refused != "" {
		r.cannotRead(s, cell.Error{At: cell.Ref{Sheet: g.name}, Msg: g.refused, Hint: g.mend})
		return nil
	}
	if len(g.rows) == 0 && s.Name == "Products" {
		return nil // that the plan has no product is told in the end
	}
	if len(g.rows) == 0 {
		r.add(emptySheet.problem(cell.Ref{Sheet: g.name}, cell.Warning, "", ""))
		return nil
	}
	first, whole := findHeader(g, s)
	if first < 0 {
		r.missingHeadings(t, nil)
		return nil
	}
	top := &g.rows[first]
	t.head, t.place = top.n, headings(s, top)
	if !whole {
		r.missingHeadings(t, t.place)
	}
	if first > 0 && !(first == 1 && len(g.rows[0].cells) == 1 && key(g.rows[0].cells[0].text) == key(s.Help)) {
		what := fmt.Sprintf("Row %d stands", g.rows[0].n)
		if first > 1 {
			what = fmt.Sprintf("Rows %d to %d stand", g.rows[0].n, g.rows[first-1].n)
		}
		r.add(aboveHeader.problem(t.ref(g.rows[0].n, 0), cell.Note, "", "", what, "and "+isAre(first)))
	}
	own := r.headings(t, top)
	if r.plan.Columns[g.name] == nil {
		r.plan.Columns[g.name] = map[string]int{}
	}
	for name, h := range t.place {
		if h.column == nil {
			continue
		}
		r.plan.Columns[g.name][name] = h.col
	}
	if whole {
		r.rows(t, first+1, own)
	}
	return t
}

func isAre(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}

// findHeader gives the index of the first row with all needed headings, or of the likeliest one.
func findHeader(g *grid, s *Sheet) (int, bool) {
	best, most := -1, 0
	for i := range g.rows {
		found := headings(s, &g.rows[i])
		if complete(s, found) {
			return i, true
		}
		if len(found) > most {
			best, most = i, len(found)
		}
	}
	return best, false
}

// cannotRead tells why a sheet cannot be read.
func (r *reader) cannotRead(s *Sheet, e cell.Error) {
	r.add(e)
	r.unread[s.Name] = append(r.unread[s.Name], e)
}

// missingHeadings tells which needed headings are not there.
func (r *reader) missingHeadings(t *table, found map[string]*head) {
	var lack []string
	for _, c := range t.sheet.Columns {
		if c.Needed && found[c.Heading] == nil {
			lack = append(lack, c.Heading)
		}
	}
	r.cannotRead(t.sheet, noHeader.problem(t.ref(t.head, 0), cell.Fault, "", "", and(lack), isAre(len(lack))))
}

// headings checks every heading: known, once, with a unit of its quantity. It returns the columns that are the user's own.
func (r *reader) headings(t *table, top *gridRow) (own map[int]bool) {
	own = map[int]bool{}
	for i := range top.cells {
		e := &top.cells[i]
		name, inside := splitHeading(e.text)
		at := t.ref(top.n, int(e.col))
		if strings.HasPrefix(e.text, "#") && e.kind == text || r.ignore[key(e.text)] || r.ignore[key(name)] {
			own[int(e.col)] = true
			continue
		}
		var h *head
		if c := byKey[t.sheet][key(name)]; c != nil {
			h = t.place[c.Heading]
		}
		switch {
		case h == nil:
			var known []string
			for _, c := range t.sheet.Columns {
				if t.place[c.Heading] == nil {
					known = append(known, c.Heading)
				}
			}
			h = &head{col: int(e.col)}
			t.place["?"+strconv.Itoa(h.col)] = h
			h.faults.Add(unknownColumn.problem(at, cell.Fault, "", e.text, t.sheet.Name, meant(name, known)))
		case h.col != int(e.col):
			e := doubledColumn.problem(at, cell.Fault, "", e.text, cell.ColumnName(h.col), cell.ColumnName(int(e.col)))
			h.faults.Add(e)
			r.add(e)
			h2 := &head{col: at.Col, faults: cell.Errors{e}}
			t.place["?"+strconv.Itoa(at.Col)] = h2
			continue
		default:
			var fault *cell.Error
			if h.unit, fault = headingUnit(at, e.text, inside, h.column); fault != nil {
				h.faults.Add(*fault)
			}
		}
		if e.struck {
			h.faults.Add(struckHeading.problem(at, cell.Fault, "", e.text))
		}
		for _, f := range h.faults {
			r.add(f)
		}
		if t.grid.hiddenC[int(e.col)] {
			r.add(hiddenColumn.problem(at, cell.Warning, "", "", cell.ColumnName(int(e.col))))
		}
	}
	return own
}

// headingUnit finds the unit that a heading gives.
func headingUnit(at cell.Ref, typed, inside string, c *Column) (*unit.Unit, *cell.Error) {
	q := c.Quantity
	if q == nil {
		return nil, nil
	}
	if q.Plain() {
		if inside == "" || inside == "1" || inside == "-" || inside == "–" {
			return &q.Units[0], nil
		}
		e := plainHeading.problem(at, cell.Fault, c.Heading, typed, c.Heading)
		return nil, &e
	}
	var e cell.Error
	switch {
	case inside == "":
		e = headingNoUnit.problem(at, cell.Fault, c.Heading, typed, c.Heading, c.Title())
	case q.Unit(inside) != nil:
		return q.Unit(inside), nil
	case q == &unit.Difference && unit.Temperature.Unit(inside) != nil:
		e = headingNoDiff.problem(at, cell.Fault, c.Heading, typed, c.Heading)
	case q == &unit.Temperature && (strings.EqualFold(inside, "K") || strings.EqualFold(inside, "kelvin")):
		e = headingKelvin.problem(at, cell.Fault, c.Heading, typed)
	default:
		e = headingOther.problem(at, cell.Fault, c.Heading, typed, strconv.Quote(inside), q.Name, q.Listing())
	}
	return nil, &e
}

// rows makes the lines of a table, from the grid row of index from on, and tells what makes any of them unusable.
func (r *reader) rows(t *table, from int, own map[int]bool) {
	g := t.grid
	used, ofHead := map[int]bool{}, map[int]*head{}
	for _, h := range t.place {
		used[h.col], ofHead[h.col] = true, h
	}
	told := map[int]bool{} // columns without heading that were told already
	var all cell.Errors    // what every row suffers from
	end := len(g.rows)
	if second := secondTable(g, t.sheet, from); second > 0 {
		end = second
		last := g.rows[len(g.rows)-1].n
		e := twoTables.problem(t.ref(t.head, 0), cell.Fault, "", "", g.extent(t.head, g.rows[second-1].n), g.extent(g.rows[second].n, last))
		r.cannotRead(t.sheet, e)
		all.Add(e)
	}
	t.lines = make([]*line, 0, len(g.rows)-from)
	for i := from; i < end; i++ {
		row := &g.rows[i]
		l := &line{r: r, t: t, row: row}
		filled, struck := false, -1
		for j := range row.cells {
			col := int(row.cells[j].col)
			switch h := ofHead[col]; {
			case own[col]:
				continue
			case h != nil:
				l.suffer(h.faults)
			case !used[col]:
				mend := ""
				if c := row.cells[j].text[0]; g.commas && c >= '0' && c <= '9' {
					mend = "; a value with a decimal comma needs quotation marks"
				}
				e := noHeading.problem(t.ref(row.n, col), cell.Fault, "", row.cells[j].text, cell.ColumnName(col), mend)
				if !told[col] || g.csv {
					r.add(e)
				}
				told[col] = true
				l.because.Add(e)
			}
			if row.cells[j].struck && struck < 0 {
				struck = j
			}
			filled = true
		}
		if !filled {
			continue
		}
		if l.stray() {
			t.strays = append(t.strays, l)
			continue
		}
		if len(t.lines) == t.sheet.most() {
			t.cut = true
			r.cannotRead(t.sheet, tooManyRows.problem(t.ref(row.n, 0), cell.Fault, "", "", strconv.Itoa(t.sheet.most())))
			break
		}
		l.suffer(all)
		if row.hidden {
			l.aside = true
			l.fault("", "", hiddenRow)
		}
		if struck >= 0 {
			l.aside = true
			e := struckCell.problem(t.ref(row.n, int(row.cells[struck].col)), cell.Fault, "", row.cells[struck].text)
			r.add(e)
			l.because.Add(e)
		}
		t.lines = append(t.lines, l)
	}
	r.mergedRows(t)
}

// stray tells of text without a key, such as a remark below the table: a row in which no needed cell is filled.
func (l *line) stray() bool {
	for _, c := range l.t.sheet.Columns {
		if c.Needed && l.filled(c.Heading) {
			return false
		}
	}
	e := &l.row.cells[0]
	at := l.t.ref(l.row.n, int(e.col))
	if len(l.because) == 0 {
		e := keyMissing.problem(at, cell.Fault, "", e.text, l.t.sheet.Columns[0].Heading)
		l.r.add(e)
		l.because.Add(e)
	}
	return true
}

// secondTable gives the index of a further row that holds all needed headings and more than one; 0 if there is none.
func secondTable(g *grid, s *Sheet, from int) int {
	for i := from; i < len(g.rows); i++ {
		if len(g.rows[i].cells) < 2 {
			continue
		}
		if found := headings(s, &g.rows[i]); len(found) > 1 && complete(s, found) {
			return i
		}
	}
	return 0
}

// extent is the range of filled cells of some rows: "Steps!A1:H6".
func (g *grid) extent(top, bottom int) string {
	left, right := math.MaxInt, 1
	for _, row := range g.rows {
		if row.n >= top && row.n <= bottom {
			left, right = min(left, int(row.cells[0].col)), max(right, int(row.cells[len(row.cells)-1].col))
		}
	}
	return g.block(block{left, top, right, bottom})
}

func (g *grid) block(b block) string {
	return fmt.Sprintf("%s!%s%d:%s%d", g.name, cell.ColumnName(b.left), b.top, cell.ColumnName(b.right), b.bottom)
}

// mergedRows tells of merged cells in the data.
func (r *reader) mergedRows(t *table) {
	for _, b := range t.grid.merged {
		hit := false
		for _, h := range t.place {
			hit = hit || h.col >= b.left && h.col <= b.right
		}
		if b.bottom <= t.head || !hit || len(t.lines) == 0 || b.top > t.lines[len(t.lines)-1].row.n {
			continue
		}
		e := mergedCells.problem(t.ref(b.top, b.left), cell.Fault, "", "", t.grid.block(b))
		r.add(e)
		for i := sort.Search(len(t.lines), func(i int) bool { return t.lines[i].row.n >= b.top }); i < len(t.lines) && t.lines[i].row.n <= b.bottom; i++ {
			t.lines[i].suffer(cell.Errors{e})
			if l := t.lines[i]; len(l.merged) < mostReasons {
				l.merged = append(l.merged, b)
			}
		}
	}
}

// mostReasons is how many faults a row, a food, a course or a product keeps as its reasons; all of them are told anyway.
const mostReasons = 40

// reasons adds the faults among es to those of a row, a food, a course or a product.
func reasons(to *cell.Errors, es cell.Errors) {
	for _, e := range es {
		if len(*to) >= mostReasons {
			return
		}
		if e.Level == cell.Fault {
			to.Add(e)
		}
	}
}

// suffer adds faults that are told already.
func (l *line) suffer(es cell.Errors) { reasons(&l.because, es) }

// sound tells whether nothing is wrong with the row.
func (l *line) sound() bool { return len(l.because) == 0 }

// at is the place of a column in the row; of the whole row if the sheet lacks the column.
func (l *line) at(heading string) cell.Ref {
	if h := l.t.place[heading]; h != nil {
		return l.t.ref(l.row.n, h.col)
	}
	return l.t.ref(l.row.n, 0)
}

// ref is the place of the row.
func (l *line) ref() cell.Ref { return l.t.ref(l.row.n, 0) }

// entry is the cell of a column.
func (l *line) entry(heading string) *entry {
	if h := l.t.place[heading]; h != nil {
		return l.row.at(h.col)
	}
	return &nothing
}

// filled tells whether a cell holds anything.
func (l *line) filled(heading string) bool { return l.entry(heading).kind != blank }

// fault tells of something wrong in a cell of the row (heading "" = the row) and marks the row.
func (l *line) fault(heading, typed string, s saying, args ...string) {
	e := s.problem(l.at(heading), cell.Fault, heading, typed, args...)
	l.r.add(e)
	l.because.Add(e)
}

// remark tells of something that does not keep the row from being used.
func (l *line) remark(level cell.Level, heading, typed string, s saying, args ...string) {
	l.r.add(s.problem(l.at(heading), level, heading, typed, args...))
}

// note keeps a value for the input echo.
func (l *line) note(heading, typed, used, why string) {
	if l.readings == nil {
		l.readings = []echoes{{sheet: l.t.grid.name, row: l.row.n, list: make([]echo, 0, len(l.row.cells)+2)}} // and about two defaults
	}
	e := echo{column: l.t.sheet.Column(heading), col: int32(l.at(heading).Col), text: typed, used: used}
	if why != "" {
		e.text, e.blank = why, true
	}
	l.readings[0].list = append(l.readings[0].list, e)
}

// broken tells of a cell that holds no value at all.
func (l *line) broken(heading string, e *entry) bool {
	switch e.kind {
	case broken:
		l.fault(heading, e.text, errorValue)
	case noStored:
		l.fault(heading, "", noResult, l.at(heading).String())
	default:
		if e.formula {
			l.r.formula(l.at(heading))
		}
		return false
	}
	return true
}

// words reads a cell as words; "" for a blank. A needed blank is a fault.
func (l *line) words(heading string) string {
	c, e := l.t.sheet.Column(heading), l.entry(heading)
	if e.kind == blank {
		l.lacks(c)
		return ""
	}
	if l.broken(heading, e) {
		return ""
	}
	s := e.text
	if most := c.longest(); tooLong(s, most) {
		l.fault(heading, string([]rune(s)[:40])+"…", textTooLong, strconv.Itoa(most))
		return ""
	}
	if e.kind == figure && e.form == date {
		s = isoDate(e.text, l.t.grid.is1904)
	}
	l.note(heading, s, s, "")
	return s
}

// longest is how many characters a column takes: a remark goes on for several lines, a name stands in one.
func (c *Column) longest() int {
	switch c.Heading {
	case "Note", "Source", "Value", "Hazard":
		return 2000
	}
	return 250
}

// lacks tells of a blank cell where one must be filled, unless it is blank because it is merged with others, which was told.
func (l *line) lacks(c *Column) {
	if !c.Needed {
		return
	}
	at := l.at(c.Heading)
	for _, b := range l.merged {
		if at.Col >= b.left && at.Col <= b.right {
			return
		}
	}
	l.fault(c.Heading, "", missing, c.Heading, mendMissing(c))
}

func mendMissing(c *Column) string {
	switch {
	case c.Choices != nil && !c.Free:
		return "choose from: " + strings.Join(c.Choices, ", ")
	case c.Help != "":
		return "fill it: " + c.Help
	}
	return "fill it"
}

// choice reads a cell as one of the words of its column, and gives that word as it stands in the list; "" for a blank or a fault.
func (l *line) choice(heading string) string {
	c, e := l.t.sheet.Column(heading), l.entry(heading)
	if e.kind == blank {
		l.lacks(c)
		return ""
	}
	if l.broken(heading, e) {
		return ""
	}
	for _, w := range c.Choices {
		if key(w) == key(e.text) {
			l.note(heading, e.text, w, "")
			return w
		}
	}
	l.fault(heading, e.text, notAChoice, heading, meant(e.text, c.Choices), strings.Join(c.Choices, ", "))
	return ""
}

// number reads a cell as a value of its column's quantity, in the unit that the program computes in; nil for a blank or a fault.
func (l *line) number(heading string) *float64 {
	v := l.value(heading)
	if v == nil {
		return nil
	}
	return &v.Computed
}

// value is number with the text as typed.
func (l *line) value(heading string) *unit.Value {
	c, e := l.t.sheet.Column(heading), l.entry(heading)
	if e.kind == blank {
		l.lacks(c)
		return nil
	}
	h := l.t.place[heading]
	if l.broken(heading, e) || h.unit == nil { // a heading at fault has been told, and the row suffers from it
		return nil
	}
	v, ok := l.convert(heading, e, c, h.unit)
	if !ok {
		return nil
	}
	if s, args := c.refuses(v.Computed); s != nil {
		l.fault(heading, v.Typed, *s, args...)
		return nil
	}
	if !l.likely(c, v) {
		return nil
	}
	l.note(heading, v.Typed, short(v.Computed)+spaced(c.Quantity.Units[0].Name()), "")
	return &v
}

// likely holds a number against what is usual and what is possible; false if it cannot be.
func (l *line) likely(c *Column, v unit.Value) bool {
	usual, slip := c.Usual, ""
	if c.OfMedium != nil && key(l.entry("Where").text) == "medium" {
		usual = c.OfMedium
	}
	if strings.HasSuffix(v.Typed, spaced(c.Unit)) {
		slip = ": " + c.Slip
	}
	switch {
	case c.Possible.outside(v.Computed):
		l.fault(c.Heading, v.Typed, impossible, c.shown(v.Computed), c.between(c.Possible), c.between(c.Usual), slip)
		return false
	case usual.outside(v.Computed):
		l.remark(cell.Warning, c.Heading, v.Typed, unusual, c.shown(v.Computed), c.between(usual), slip)
	}
	return true
}

// shown words a computed number in the unit of the blank workbook.
func (c *Column) shown(x float64) string {
	u := c.Quantity.Unit(c.Unit)
	return strconv.FormatFloat(u.Out(x), 'g', 7, 64) + spaced(u.Name())
}

// between words a span: "2 to 1000 mm"; without its lower end where that is nothing in itself.
func (c *Column) between(s *span) string {
	if s.least == 0 || s.least == -273.15 {
		return "at most " + c.whole(s.most)
	}
	u := c.Quantity.Unit(c.Unit)
	return strings.TrimSuffix(c.whole(s.least), spaced(u.Name())) + " to " + c.whole(s.most)
}

// whole is shown without exponents, for the round ends of spans.
func (c *Column) whole(x float64) string {
	u := c.Quantity.Unit(c.Unit)
	return strconv.FormatFloat(math.Round(u.Out(x)*1e6)/1e6, 'f', -1, 64) + spaced(u.Name())
}

// convert makes a value of a cell, by its kind and its number format.
func (l *line) convert(heading string, e *entry, c *Column, u *unit.Unit) (unit.Value, bool) {
	q := c.Quantity
	if e.kind == text {
		v, m := q.Parse(e.text, u, l.r.decimal)
		if m != nil {
			l.fault(heading, e.text, asFound, m.Says, m.Mend)
			return v, false
		}
		if !l.r.shownBy.IsZero() && unit.Ambiguous(e.text) {
			sign := map[unit.Decimal]string{unit.Point: "point", unit.Comma: "comma"}[l.r.decimal]
			l.remark(cell.Note, heading, e.text, readByEvidence, short(v.Computed)+spaced(q.Units[0].Name()), sign, l.r.shownBy.String())
		}
		return v, true
	}
	x, err := strconv.ParseFloat(e.text, 64)
	expected := article(q.Name)
	switch {
	case e.kind == truth:
		l.fault(heading, e.text, isTruth, expected)
	case err != nil || math.IsNaN(x) || math.IsInf(x, 0):
		l.fault(heading, e.text, notNumber, expected)
	case e.form == date:
		l.fault(heading, isoDate(e.text, l.t.grid.is1904), isDate, expected)
	case e.form == clock && q != &unit.Duration:
		l.fault(heading, clockWords(x), isTime, expected)
	case e.form == clock:
		s := math.Round(x*86400*1000) / 1000
		return unit.Value{Computed: s, Typed: clockWords(x)}, true
	case e.form == percent && q == &unit.Percent:
		return u.Of(math.Round(x*100*1e12)/1e12, short(x*100)), true
	case e.form == percent && !q.Plain():
		l.fault(heading, short(x*100)+" %", isPercent, expected)
	case strings.Contains(u.Name(), ":"):
		l.fault(heading, e.text, notClock, u.Name())
	case e.form >= worded && q.Unit(l.t.grid.words[e.form-worded]) != nil && q.Unit(l.t.grid.words[e.form-worded]) != u:
		l.fault(heading, shown(e.text, x), isWorded, l.t.grid.words[e.form-worded], u.Name())
	default:
		return u.Of(x, shown(e.text, x)), true
	}
	return unit.Value{}, false
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

// short prints a number with at most seven significant digits.
func short(x float64) string { return strconv.FormatFloat(x, 'g', 7, 64) }

// shown prints a stored number as a person typed it: 0.1 and not 0.10000000000000001.
func shown(stored string, x float64) string {
	if len(stored) < 12 {
		return stored
	}
	return strconv.FormatFloat(x, 'g', 15, 64)
}

func spaced(unit string) string {
	if unit == "" {
		return ""
	}
	return " " + unit
}

func article(noun string) string {
	if strings.ContainsRune("aeiou", rune(noun[0])) {
		return "an " + noun
	}
	return "a " + noun
}

// clockWords prints a time in days as h:mm:ss.
func clockWords(days float64) string {
	sign := ""
	if days < 0 {
		sign, days = "-", -days
	}
	if days > 1e6 {
		return sign + short(days) + " d"
	}
	s := int(math.Round(days * 86400))
	return fmt.Sprintf("%s%d:%02d:%02d h:mm:ss", sign, s/3600, s/60%60, s%60)
}
