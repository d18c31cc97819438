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
	grid  *Grid
	head  int              // row number of the headings
	place map[string]*head // by heading without unit
	lines []*Line
	cut   bool // it has more rows than are read
	// strays are rows without any needed cell; nobody knows what they belong to
	strays []*Line
}

// head is one column of a table.
type head struct {
	col    int
	column *Column
	unit   *unit.Unit // of a dimensional column; nil if the heading is at fault
	faults cell.Errors
}

// Line is one data row while it is read.
type Line struct {
	r        *reader
	t        *table
	row      *Row
	because  cell.Errors // the faults that it has, or that it suffers from
	readings []echoes
	aside    bool    // hidden or struck through: somebody may have meant it away
	merged   []Block // merged cells that the row has a part of
}

// SplitHeading divides a heading into its name and what stands in brackets (or a % behind the name). Brackets, % and the unit may have
// the full-width forms of East Asian keyboards: （℃）.
func SplitHeading(s string) (name, inBrackets string) {
	typed := tidy(s)
	s = narrowed.Replace(typed)
	for _, pair := range []string{"()", "[]"} {
		i := strings.IndexByte(s, pair[0])
		if i > 0 && strings.HasSuffix(s, pair[1:]) {
			return strings.TrimSpace(s[:i]), strings.TrimSpace(unit.Narrow(s[i+1 : len(s)-1]))
		}
	}
	if n := strings.TrimSuffix(s, "%"); n != s && n != "" {
		return strings.TrimSpace(n), "%"
	}
	return typed, ""
}

var narrowed = strings.NewReplacer("（", "(", "）", ")", "［", "[", "］", "]", "％", "%")

// headings finds the columns of a sheet that a row names; the first of two equal ones.
func headings(s *Sheet, row *Row) map[string]*head {
	var found map[string]*head
	for i := range row.Cells {
		if row.Cells[i].Kind != Text {
			continue
		}
		name, _ := SplitHeading(row.Cells[i].Text)
		if c := s.known(Key(name)); c != nil && found[c.Heading] == nil {
			if found == nil {
				found = map[string]*head{}
			}
			found[c.Heading] = &head{col: int(row.Cells[i].Col), column: c}
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
func (t *table) ref(row, col int) cell.Ref { return cell.Ref{Sheet: t.grid.Name, Row: row, Col: col} }

// open finds the headings of a sheet and its rows. It returns nil if there is no table; the problems are the reader's.
func (r *reader) open(g *Grid, s *Sheet) *table {
	t := &table{sheet: s, grid: g}
	if g.Refused != "" {
		r.cannotRead(s, cell.Error{At: cell.Ref{Sheet: g.Name}, Msg: g.Refused, Hint: g.Mend})
		return nil
	}
	if len(g.Rows) == 0 && s.Name == "Products" {
		return nil // that the plan has no product is told in the end
	}
	if len(g.Rows) == 0 {
		r.add(emptySheet.problem(cell.Ref{Sheet: g.Name}, cell.Warning, "", ""))
		return nil
	}
	first, whole := findHeader(g, s)
	if first < 0 {
		r.missingHeadings(t, nil)
		return nil
	}
	top := &g.Rows[first]
	t.head, t.place = top.N, headings(s, top)
	if !whole {
		r.missingHeadings(t, t.place)
	}
	if first > 0 && !(first == 1 && len(g.Rows[0].Cells) == 1 && Key(g.Rows[0].Cells[0].Text) == Key(s.Help)) {
		what := fmt.Sprintf("Row %d stands", g.Rows[0].N)
		if first > 1 {
			what = fmt.Sprintf("Rows %d to %d stand", g.Rows[0].N, g.Rows[first-1].N)
		}
		r.add(aboveHeader.problem(t.ref(g.Rows[0].N, 0), cell.Note, "", "", what, "and "+isAre(first)))
	}
	own := r.headings(t, top)
	if r.plan.Columns[g.Name] == nil {
		r.plan.Columns[g.Name] = map[string]int{}
	}
	for name, h := range t.place {
		if h.column == nil {
			continue
		}
		r.plan.Columns[g.Name][name] = h.col
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
func findHeader(g *Grid, s *Sheet) (int, bool) {
	best, most := -1, 0
	for i := range g.Rows {
		found := headings(s, &g.Rows[i])
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
func (r *reader) headings(t *table, top *Row) (own map[int]bool) {
	own = map[int]bool{}
	for i := range top.Cells {
		e := &top.Cells[i]
		name, inside := SplitHeading(e.Text)
		at := t.ref(top.N, int(e.Col))
		if strings.HasPrefix(e.Text, "#") && e.Kind == Text || r.ignore[Key(e.Text)] || r.ignore[Key(name)] {
			own[int(e.Col)] = true
			continue
		}
		var h *head
		if c := t.sheet.known(Key(name)); c != nil {
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
			h = &head{col: int(e.Col)}
			t.place["?"+strconv.Itoa(h.col)] = h
			h.faults.Add(unknownColumn.problem(at, cell.Fault, "", e.Text, t.sheet.Name, meant(name, known)))
		case h.col != int(e.Col):
			e := doubledColumn.problem(at, cell.Fault, "", e.Text, cell.ColumnName(h.col), cell.ColumnName(int(e.Col)))
			h.faults.Add(e)
			r.add(e)
			h2 := &head{col: at.Col, faults: cell.Errors{e}}
			t.place["?"+strconv.Itoa(at.Col)] = h2
			continue
		default:
			var fault *cell.Error
			if h.unit, fault = headingUnit(at, e.Text, inside, h.column); fault != nil {
				h.faults.Add(*fault)
			}
		}
		if e.Struck {
			h.faults.Add(struckHeading.problem(at, cell.Fault, "", e.Text))
		}
		for _, f := range h.faults {
			r.add(f)
		}
		if t.grid.HiddenCols[int(e.Col)] {
			r.add(hiddenColumn.problem(at, cell.Warning, "", "", cell.ColumnName(int(e.Col))))
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
		if u, letter := q.Alike(inside); u != nil {
			e = headingAlike.problem(at, cell.Fault, c.Heading, typed, letter, u.Name())
			break
		}
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
	end := len(g.Rows)
	if second := secondTable(g, t.sheet, from); second > 0 {
		end = second
		last := g.Rows[len(g.Rows)-1].N
		e := twoTables.problem(t.ref(t.head, 0), cell.Fault, "", "", g.extent(t.head, g.Rows[second-1].N), g.extent(g.Rows[second].N, last))
		r.cannotRead(t.sheet, e)
		all.Add(e)
	}
	t.lines = make([]*Line, 0, len(g.Rows)-from)
	for i := from; i < end; i++ {
		row := &g.Rows[i]
		l := &Line{r: r, t: t, row: row}
		filled, struck := false, -1
		for j := range row.Cells {
			col := int(row.Cells[j].Col)
			switch h := ofHead[col]; {
			case own[col]:
				continue
			case h != nil:
				l.suffer(h.faults)
			case !used[col]:
				mend := ""
				if text := row.Cells[j].Text; g.commas && text != "" && text[0] >= '0' && text[0] <= '9' {
					mend = "; a value with a decimal comma needs quotation marks"
				}
				e := noHeading.problem(t.ref(row.N, col), cell.Fault, "", row.Cells[j].Text, cell.ColumnName(col), mend)
				if !told[col] || g.CSV {
					r.add(e)
				}
				told[col] = true
				l.because.Add(e)
			}
			if row.Cells[j].Struck && struck < 0 {
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
			r.cannotRead(t.sheet, tooManyRows.problem(t.ref(row.N, 0), cell.Fault, "", "", strconv.Itoa(t.sheet.most())))
			break
		}
		l.suffer(all)
		if row.Hidden {
			l.aside = true
			l.Fault("", "", hiddenRow)
		}
		if struck >= 0 {
			l.aside = true
			e := struckCell.problem(t.ref(row.N, int(row.Cells[struck].Col)), cell.Fault, "", row.Cells[struck].Text)
			r.add(e)
			l.because.Add(e)
		}
		t.lines = append(t.lines, l)
	}
	r.mergedRows(t)
}

// stray tells of text without a key, such as a remark below the table: a row in which no needed cell is filled.
func (l *Line) stray() bool {
	for _, c := range l.t.sheet.Columns {
		if c.Needed && l.Filled(c.Heading) {
			return false
		}
	}
	e := &l.row.Cells[0]
	at := l.t.ref(l.row.N, int(e.Col))
	if len(l.because) == 0 {
		e := keyMissing.problem(at, cell.Fault, "", e.Text, l.t.sheet.Columns[0].Heading)
		l.r.add(e)
		l.because.Add(e)
	}
	return true
}

// secondTable gives the index of a further row that holds all needed headings and more than one; 0 if there is none.
func secondTable(g *Grid, s *Sheet, from int) int {
	for i := from; i < len(g.Rows); i++ {
		if len(g.Rows[i].Cells) < 2 {
			continue
		}
		if found := headings(s, &g.Rows[i]); len(found) > 1 && complete(s, found) {
			return i
		}
	}
	return 0
}

// extent is the range of filled cells of some rows: "Steps!A1:H6".
func (g *Grid) extent(top, bottom int) string {
	left, right := math.MaxInt, 1
	for _, row := range g.Rows {
		if row.N >= top && row.N <= bottom {
			left, right = min(left, int(row.Cells[0].Col)), max(right, int(row.Cells[len(row.Cells)-1].Col))
		}
	}
	return g.block(Block{left, top, right, bottom})
}

func (g *Grid) block(b Block) string {
	return fmt.Sprintf("%s!%s%d:%s%d", g.Name, cell.ColumnName(b.Left), b.Top, cell.ColumnName(b.Right), b.Bottom)
}

// mergedRows tells of merged cells in the data.
func (r *reader) mergedRows(t *table) {
	for _, b := range t.grid.Merged {
		hit := false
		for _, h := range t.place {
			hit = hit || h.col >= b.Left && h.col <= b.Right
		}
		if b.Bottom <= t.head || !hit || len(t.lines) == 0 || b.Top > t.lines[len(t.lines)-1].row.N {
			continue
		}
		e := mergedCells.problem(t.ref(b.Top, b.Left), cell.Fault, "", "", t.grid.block(b))
		r.add(e)
		for i := sort.Search(len(t.lines), func(i int) bool { return t.lines[i].row.N >= b.Top }); i < len(t.lines) && t.lines[i].row.N <= b.Bottom; i++ {
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
func (l *Line) suffer(es cell.Errors) { reasons(&l.because, es) }

// Sound tells whether nothing is wrong with the row.
func (l *Line) Sound() bool { return len(l.because) == 0 }

// At is the place of a column in the row; of the whole row if the sheet lacks the column.
func (l *Line) At(heading string) cell.Ref {
	if h := l.t.place[heading]; h != nil {
		return l.t.ref(l.row.N, h.col)
	}
	return l.t.ref(l.row.N, 0)
}

// Ref is the place of the row.
func (l *Line) Ref() cell.Ref { return l.t.ref(l.row.N, 0) }

// Entry is the cell of a column.
func (l *Line) Entry(heading string) *Entry {
	if h := l.t.place[heading]; h != nil {
		return l.row.at(h.col)
	}
	return &nothing
}

// Filled tells whether a cell holds anything.
func (l *Line) Filled(heading string) bool { return l.Entry(heading).Kind != Blank }

// Fault tells of something wrong in a cell of the row (heading "" = the row) and marks the row.
func (l *Line) Fault(heading, typed string, s saying, args ...string) {
	e := s.problem(l.At(heading), cell.Fault, heading, typed, args...)
	l.r.add(e)
	l.because.Add(e)
}

// Remark tells of something that does not keep the row from being used.
func (l *Line) Remark(level cell.Level, heading, typed string, s saying, args ...string) {
	l.r.add(s.problem(l.At(heading), level, heading, typed, args...))
}

// note keeps a value for the input echo.
func (l *Line) note(heading, typed, used, why string) {
	if l.readings == nil {
		l.readings = []echoes{{sheet: l.t.grid.Name, row: l.row.N, list: make([]echo, 0, len(l.row.Cells)+2)}} // and about two defaults
	}
	e := echo{column: l.t.sheet.Column(heading), col: int32(l.At(heading).Col), text: typed, used: used}
	if why != "" {
		e.text, e.blank = why, true
	}
	l.readings[0].list = append(l.readings[0].list, e)
}

// broken tells of a cell that holds no value at all.
func (l *Line) broken(heading string, e *Entry) bool {
	if no := e.broken(l.At(heading)); no != nil {
		l.refuse(heading, no)
		return true
	}
	if e.Formula {
		l.r.formula(l.At(heading))
	}
	return false
}

// refuse tells of a cell that its column does not take.
func (l *Line) refuse(heading string, no *refusal) { l.Fault(heading, no.typed, no.s, no.args...) }

// Words reads a cell as words; "" for a blank. A needed blank is a fault.
func (l *Line) Words(heading string) string {
	c, e := l.t.sheet.Column(heading), l.Entry(heading)
	if e.Kind == Blank {
		l.lacks(c)
		return ""
	}
	if l.broken(heading, e) {
		return ""
	}
	s, no := c.words(e, l.t.grid)
	if no != nil {
		l.refuse(heading, no)
		return ""
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
func (l *Line) lacks(c *Column) {
	if !c.Needed {
		return
	}
	at := l.At(c.Heading)
	for _, b := range l.merged {
		if at.Col >= b.Left && at.Col <= b.Right {
			return
		}
	}
	l.Fault(c.Heading, "", missing, c.Heading, mendMissing(c))
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

// Choice reads a cell as one of the words of its column, and gives that word as it stands in the list; "" for a blank or a fault.
func (l *Line) Choice(heading string) string {
	c, e := l.t.sheet.Column(heading), l.Entry(heading)
	if e.Kind == Blank {
		l.lacks(c)
		return ""
	}
	if l.broken(heading, e) {
		return ""
	}
	w, no := c.choice(e)
	if no != nil {
		l.refuse(heading, no)
		return ""
	}
	l.note(heading, e.Text, w, "")
	return w
}

// Number reads a cell as a value of its column's quantity, in the unit that the program computes in; nil for a blank or a fault.
func (l *Line) Number(heading string) *float64 {
	v := l.Value(heading)
	if v == nil {
		return nil
	}
	return &v.Computed
}

// Value is Number with the text as typed.
func (l *Line) Value(heading string) *unit.Value {
	c, e := l.t.sheet.Column(heading), l.Entry(heading)
	if e.Kind == Blank {
		l.lacks(c)
		return nil
	}
	h := l.t.place[heading]
	if l.broken(heading, e) || h.unit == nil { // a heading at fault has been told, and the row suffers from it
		return nil
	}
	v, no := c.value(e, l.t.grid, h.unit, l.r.decimal)
	if no != nil {
		l.refuse(heading, no)
		return nil
	}
	if e.Kind == Text && !l.r.shownBy.IsZero() && unit.Ambiguous(e.Text) {
		sign := map[unit.Decimal]string{unit.Point: "point", unit.Comma: "comma"}[l.r.decimal]
		l.Remark(cell.Note, heading, e.Text, readByEvidence, short(v.Computed)+spaced(c.Quantity.Units[0].Name()), sign, l.r.shownBy.String())
	}
	l.likely(c, v)
	l.note(heading, v.Typed, short(v.Computed)+spaced(c.Quantity.Units[0].Name()), "")
	return &v
}

// likely holds a number against what is usual.
func (l *Line) likely(c *Column, v unit.Value) {
	usual := c.Usual
	if c.OfMedium != nil && Key(l.Entry("Where").Text) == "medium" {
		usual = c.OfMedium
	}
	if usual.outside(v.Computed) && !(metal[c.Heading] != nil && l.metallic()) {
		l.Remark(cell.Warning, c.Heading, v.Typed, unusual, c.shown(v.Computed), c.between(usual), c.slipped(v))
	}
}

// metal is what three columns of Foods hold of a tin or a tray that is a layer: aluminium, steel, copper (any textbook). Each of them alone is
// unusual for a food; together they are no slip.
var metal = map[string]*span{"Conductivity": {10, 430}, "Density": {2500, 9000}, "Specific heat": {350, 1000}}

// metallic tells whether a row of Foods holds a metal.
func (l *Line) metallic() bool {
	for heading, range_ := range metal {
		c, e := l.t.sheet.Column(heading), l.Entry(heading)
		h := l.t.place[heading]
		if c == nil || h == nil || h.unit == nil || e.Kind == Blank {
			return false
		}
		if v, no := c.value(e, l.t.grid, h.unit, l.r.decimal); no != nil || range_.outside(v.Computed) {
			return false
		}
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
