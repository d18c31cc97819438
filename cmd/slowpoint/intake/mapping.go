package intake

import (
	"regexp"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Mapping says which of their cells go where in a plan.
type Mapping struct {
	t        *workbook.Tables
	sources  []*source
	lists    map[string]*wordList // by key
	copied   map[string][]*workbook.Line
	problems cell.Errors
	lost     bool // something is wrong that touches no single source: nothing is imported
}

// source is a row of Sources with everything that other sheets say of it.
type source struct {
	name        string
	line        *workbook.Line
	file, sheet string // patterns; "" = every one
	layout      string
	heads       [2]int // first and last row (rows) or column (columns) of the headings
	word        string // that begins a block, by key
	first, last int    // 0: the next after the headings; to the end
	decimal     unit.Decimal
	wheres      []*where
	mapped      []*mapped
	constants   []*constant
	rules       []*rule
	rows        []*target
	slots       int         // of all rows together
	fault       *cell.Error // the first of the mapping that it suffers from
	more        int         // further ones
	asleep      []*workbook.Line
}

// where is a place of their records, as the mapping names it.
type where struct {
	kind whereKind
	text string // as typed
	key  string // of a heading or label, made comparable
	at   cell.Ref
	col  int // a column, if it is given by its letter
	row  int // a row, if it is given by its number: absolute or, in blocks, below the start
}

type whereKind uint8

const (
	byName     whereKind = iota // a heading, or a label
	byNumber                    // =F, =12, =B+3, =B5
	byFile                      // {file}
	bySheet                     // {sheet}
	byAnything                  // any, of a rule
)

// mapped is a row of Columns.
type mapped struct {
	line  *workbook.Line
	where int // index in source.wheres
	to    slot
	unit  *unit.Unit
	words *wordList
	said  map[string]*said // words met, as typed
}

// constant is a row of Constants.
type constant struct {
	line  *workbook.Line
	to    slot
	value Value
	when  int // index in source.wheres; −1: always
}

// rule is a row of Leave out.
type rule struct {
	line               *workbook.Line
	where              int
	when, word, reason string // word by key
	used               bool   // some record is as it says
}

// target is a row of the plan that each record may make.
type target struct {
	sheet  *workbook.Sheet
	part   string
	partAt string    // where the mapping names the part first
	slots  []*filler // of each column of the sheet; nil: nobody fills it
	from   int       // index of its first slot among those of the source
	n      int       // its index in source.rows
	mapped bool      // not only constants fill it
}

// filler is what fills one place of the plan.
type filler struct {
	mapped    *mapped
	constants []*constant
	byWords   bool
}

// slot is a place of the plan: a column of a row that the source makes.
type slot struct {
	row *target
	col int // index in the sheet's columns
}

func (s slot) column() *workbook.Column { return s.row.sheet.Columns[s.col] }
func (s slot) index() int               { return s.row.from + s.col }

// ReadMapping reads a mapping: a workbook, or a folder of CSV files named like its sheets. The error says in one sentence why nothing
// of it could be read; everything else that is wrong is told by Import.
func ReadMapping(name string) (*Mapping, error) {
	t, err := workbook.ReadTables(name, "mapping", Sheets)
	if err != nil {
		return nil, err
	}
	return understand(t), nil
}

// understand makes a mapping of its tables.
func understand(t *workbook.Tables) *Mapping {
	m := &Mapping{t: t, lists: map[string]*wordList{}, copied: map[string][]*workbook.Line{}}
	m.lost = t.Problems().Faults() > 0
	if t.Grid("Sources") == nil {
		m.tell(cell.Ref{}, "", "", noSources)
		m.lost = true
	}
	m.readSources()
	m.readWords()
	m.readColumns()
	m.questions()
	m.readConstants()
	m.readRules()
	for _, s := range m.sources {
		m.arrange(s)
	}
	for _, name := range planSheets {
		if lines := t.Lines(name); len(lines) > 0 {
			m.copied[name] = lines
		}
	}
	return m
}

// tell adds a fault of the mapping.
func (m *Mapping) tell(at cell.Ref, field, typed string, s saying, args ...string) cell.Error {
	e := s.problem(at, cell.Fault, field, typed, args...)
	m.problems.Add(e)
	return e
}

// suffer keeps the first fault that keeps a source from being imported.
func (s *source) suffer(e cell.Error) {
	if s.fault == nil {
		s.fault = &e
	} else {
		s.more++
	}
}

// blame tells a fault in a cell of the mapping, from which a source suffers; all of them if it is nil.
func (m *Mapping) blame(s *source, l *workbook.Line, field, typed string, what saying, args ...string) {
	e := m.tell(l.At(field), field, typed, what, args...)
	if s == nil {
		m.lost = true
		return
	}
	s.suffer(e)
}

// text is a cell of the mapping as words; a blank is "" and no fault.
func text(l *workbook.Line, heading string) string {
	if !l.Filled(heading) {
		return ""
	}
	return l.Words(heading)
}

// needed is a cell of the mapping that must be filled; the fault is told.
func (m *Mapping) needed(s *source, l *workbook.Line, heading string) (string, bool) {
	w := text(l, heading)
	if w == "" {
		m.blame(s, l, heading, "", lacking, heading)
	}
	return w, w != ""
}

func (m *Mapping) readSources() {
	seen := map[string]*source{}
	for _, l := range m.t.Lines("Sources") {
		s := &source{line: l, name: text(l, "Source"), file: text(l, "File"), sheet: text(l, "Sheet")}
		m.sources = append(m.sources, s)
		if s.name == "" {
			m.needed(s, l, "Source")
		} else if first := seen[workbook.Key(s.name)]; first != nil {
			m.blame(s, l, "Source", s.name, twice, strconv.Itoa(first.line.Ref().Row))
		}
		seen[workbook.Key(s.name)] = s
		for _, h := range []string{"File", "Sheet"} {
			if w := text(l, h); strings.Count(w, "*") > 1 {
				m.blame(s, l, h, w, stars)
			}
		}
		if l.Filled("Decimal sign") {
			s.decimal = map[string]unit.Decimal{"point": unit.Point, "comma": unit.Comma}[l.Choice("Decimal sign")]
		}
		s.layout = l.Choice("Layout")
		m.readHeads(s)
		s.wants(l)
	}
	if m.t.Grid("Sources") != nil && len(m.sources) == 0 && !m.lost {
		m.tell(cell.Ref{Sheet: m.t.Grid("Sources").Name}, "", "", noSources)
		m.lost = true
	}
}

var headRange = regexp.MustCompile(`^([0-9]+|[A-Za-z]+)(?: ?[-–:] ?([0-9]+|[A-Za-z]+))?$`)

// readHeads reads where a source's headings and data are.
func (m *Mapping) readHeads(s *source) {
	typed, ok := m.needed(s, s.line, "Heading")
	if !ok || s.layout == "" {
		return
	}
	switch s.layout {
	case sheetLayout:
		if typed != "-" && typed != "–" {
			m.blame(s, s.line, "Heading", typed, headDash)
		}
	case blockLayout:
		s.word = headingKey(typed)
	default:
		parts := headRange.FindStringSubmatch(typed)
		if parts == nil {
			m.blame(s, s.line, "Heading", typed, headWrong[s.layout])
			break
		}
		s.heads[0] = s.number(parts[1])
		s.heads[1] = s.heads[0]
		if parts[2] != "" {
			s.heads[1] = s.number(parts[2])
		}
		if s.heads[0] == 0 || s.heads[1] < s.heads[0] || s.heads[1] > s.heads[0]+1 {
			m.blame(s, s.line, "Heading", typed, headWrong[s.layout])
		}
	}
	for _, end := range []struct {
		heading string
		to      *int
	}{{"First", &s.first}, {"Last", &s.last}} {
		w := text(s.line, end.heading)
		if w == "" {
			continue
		}
		if *end.to = s.number(w); *end.to == 0 {
			m.blame(s, s.line, end.heading, w, endWrong, map[bool]string{true: "the letter of a column, as D", false: "the number of a row, as 5"}[s.layout == columnLayout])
		}
	}
	if s.first > 0 && s.first <= s.heads[1] || s.last > 0 && s.last < max(s.first, s.heads[1]) {
		m.blame(s, s.line, "First", text(s.line, "First"), endsCross)
	}
}

// number reads the number of a row or, for columns, the letter of a column; 0 if it is none.
func (s *source) number(w string) int {
	if s.layout == columnLayout {
		return letters(w)
	}
	n, err := strconv.Atoi(w)
	if err != nil || n < 1 || n > workbook.LastRow {
		return 0
	}
	return n
}

// letters reads the letters of a column that a spreadsheet has; 0 if they are none.
func letters(w string) int {
	if n := cell.ColumnNumber(w); n <= workbook.LastColumn {
		return n
	}
	return 0
}

// sourceOf finds the source that a row names; the fault is told.
func (m *Mapping) sourceOf(l *workbook.Line) *source {
	name := text(l, "Source")
	for _, s := range m.sources {
		if workbook.Key(s.name) == workbook.Key(name) && name != "" {
			return s
		}
	}
	var known []string
	for _, s := range m.sources {
		known = append(known, s.name)
	}
	if name == "" {
		m.blame(nil, l, "Source", "", lacking, "Source")
	} else {
		m.blame(nil, l, "Source", name, sourceUnknown, workbook.Meant(name, known))
	}
	return nil
}

// placeOf finds the place of the plan that a row names; ok is false if it is at fault, which is told.
func (m *Mapping) placeOf(s *source, l *workbook.Line) (to slot, inBrackets string, ok bool) {
	sheetName, ok1 := m.needed(s, l, "Sheet")
	columnName, ok2 := m.needed(s, l, "Column")
	if !ok1 || !ok2 {
		return slot{}, "", false
	}
	sheet, col, inBrackets, what := placed(sheetName, columnName)
	if what != nil {
		m.blame(s, l, what.field, what.typed, what.s, what.args...)
		return slot{}, "", false
	}
	part := text(l, "Part")
	return slot{s.target(sheet, part, l), col}, inBrackets, true
}

// misplaced is what is wrong with the name of a sheet or a column of a plan.
type misplaced struct {
	field, typed string
	s            saying
	args         []string
}

// placed finds a column of a plan by the names of sheet and column.
func placed(sheetName, columnName string) (*workbook.Sheet, int, string, *misplaced) {
	sheet := workbook.Known(workbook.Sheets, sheetName)
	if sheet == nil || !may[sheet.Name] {
		return nil, 0, "", &misplaced{"Sheet", sheetName, sheetWrong, []string{workbook.Meant(sheetName, mayNames), strings.Join(mayNames, ", ")}}
	}
	name, inside := workbook.SplitHeading(columnName)
	c := sheet.Known(name)
	if c == nil {
		var known []string
		for _, k := range sheet.Columns {
			known = append(known, k.Heading)
		}
		return nil, 0, "", &misplaced{"Column", columnName, columnWrong, []string{sheet.Name, workbook.Meant(name, known), strings.Join(known, ", ")}}
	}
	return sheet, slices.Index(sheet.Columns, c), inside, nil
}

// mayNames are the sheets of a plan that records may make rows of.
var mayNames = []string{"Products", "Steps", "Faces", "Points", "Courses", "Foods", "Layers"}

var may = func() map[string]bool {
	out := map[string]bool{}
	for _, n := range mayNames {
		out[n] = true
	}
	return out
}()

// target gives the row of the plan that a sheet and a part make.
func (s *source) target(sheet *workbook.Sheet, part string, l *workbook.Line) *target {
	for _, t := range s.rows {
		if t.sheet == sheet && workbook.Key(t.part) == workbook.Key(part) {
			return t
		}
	}
	t := &target{sheet: sheet, part: part, slots: make([]*filler, len(sheet.Columns))}
	if l != nil {
		t.partAt = l.At("Part").String()
	}
	s.rows = append(s.rows, t)
	return t
}

func (s slot) fill() *filler {
	if s.row.slots[s.col] == nil {
		s.row.slots[s.col] = &filler{}
	}
	return s.row.slots[s.col]
}

func (m *Mapping) readColumns() {
	for _, l := range m.t.Lines("Columns") {
		switch workbook.Key(text(l, "Confirmed")) {
		case "yes":
		case "no":
			continue
		default:
			m.asleep(l)
			continue
		}
		s := m.sourceOf(l)
		if s == nil {
			continue
		}
		c := &mapped{line: l, said: map[string]*said{}}
		theirs, ok := m.needed(s, l, "Theirs")
		if ok {
			c.where = m.whereOf(s, l, "Theirs", theirs, false)
		}
		to, _, placed := m.placeOf(s, l)
		if list := text(l, "Words"); list != "" {
			if c.words = m.lists[workbook.Key(list)]; c.words == nil {
				m.blame(s, l, "Words", list, listUnknown, workbook.Meant(list, m.listNames()))
			} else {
				c.words.used = true
			}
		}
		if !ok || !placed || c.where < 0 {
			continue
		}
		c.to = to
		if u := text(l, "Unit"); u != "" {
			m.unitOf(s, c, u)
		}
		if there := to.fill(); there.mapped != nil {
			m.blame(s, l, "Column", text(l, "Column"), twoColumns, strconv.Itoa(there.mapped.line.Ref().Row))
			continue
		}
		to.fill().mapped, to.row.mapped = c, true
		s.mapped = append(s.mapped, c)
		if c.words != nil {
			m.alsoFills(s, c)
		}
		s.wants(l)
	}
}

// wants lets a source suffer from a row of which a cell could not be read, which was told.
func (s *source) wants(l *workbook.Line) {
	if !l.Sound() {
		s.suffer(rowFault.problem(l.Ref(), cell.Fault, "", ""))
	}
}

// asleep notes a row that nobody confirmed.
func (m *Mapping) asleep(l *workbook.Line) {
	if !l.Filled("Sheet") && !l.Filled("Column") {
		return // a heading for which nothing is proposed
	}
	m.problems.Add(notConfirmed.problem(l.At("Confirmed"), cell.Warning, "Confirmed", text(l, "Confirmed")))
	for _, s := range m.sources {
		if workbook.Key(s.name) == workbook.Key(text(l, "Source")) {
			s.asleep = append(s.asleep, l)
		}
	}
}

// unitOf reads the unit of a row of Columns.
func (m *Mapping) unitOf(s *source, c *mapped, typed string) {
	q := c.to.column().Quantity
	switch {
	case q == nil:
		m.blame(s, c.line, "Unit", typed, unitOfWords, c.to.column().Heading)
	case q == &unit.Temperature && (strings.EqualFold(typed, "K") || strings.EqualFold(typed, "kelvin")):
		m.blame(s, c.line, "Unit", typed, kelvin)
	case q.Unit(typed) == nil && q == &unit.Difference && unit.Temperature.Unit(typed) != nil:
		c.unit = q.Unit(unit.Temperature.Unit(typed).Name() + " difference")
	case q.Unit(typed) == nil:
		m.blame(s, c.line, "Unit", typed, unitUnknown, q.Name, q.Listing())
	default:
		c.unit = q.Unit(typed)
	}
}

// alsoFills notes the places that the words of a column fill besides.
func (m *Mapping) alsoFills(s *source, c *mapped) {
	for _, w := range c.words.inOrder {
		for _, o := range w.ours {
			if o.sheet == nil {
				continue
			}
			to := slot{s.target(o.sheet, c.to.row.part, nil), o.col}
			to.fill().byWords = true
			to.row.mapped = true
		}
	}
}

func (m *Mapping) readConstants() {
	for _, l := range m.t.Lines("Constants") {
		s := m.sourceOf(l)
		if s == nil {
			continue
		}
		k := &constant{line: l, when: -1}
		if when := text(l, "When filled"); when != "" {
			if k.when = m.whereOf(s, l, "When filled", when, false); k.when < 0 {
				continue
			}
		}
		to, inside, ok := m.placeOf(s, l)
		if !l.Filled("Value") {
			m.blame(s, l, "Value", "", lacking, "Value")
			continue
		}
		if !ok {
			continue
		}
		k.to = to
		v, e := m.own(l, "Value", to.column(), ofHeading(to.column(), inside))
		if e != nil {
			m.problems.Add(*e)
			s.suffer(*e)
			continue
		}
		k.value = v
		there := to.fill()
		if there.mapped != nil {
			m.blame(s, l, "Column", text(l, "Column"), constantToo, strconv.Itoa(there.mapped.line.Ref().Row))
			continue
		}
		for _, other := range there.constants {
			if other.when < 0 || k.when < 0 || other.when == k.when {
				m.blame(s, l, "Column", text(l, "Column"), constantTwice, strconv.Itoa(other.line.Ref().Row))
				break
			}
		}
		s.wants(l)
		there.constants = append(there.constants, k)
		s.constants = append(s.constants, k)
	}
}

// ofHeading is the unit that a column's name carries in brackets; nil if it carries none.
func ofHeading(c *workbook.Column, inside string) *unit.Unit {
	if c.Quantity == nil || inside == "" {
		return nil
	}
	return c.Quantity.Unit(inside)
}

// own reads a cell of the mapping that holds a value of the plan.
func (m *Mapping) own(l *workbook.Line, heading string, c *workbook.Column, u *unit.Unit) (Value, *cell.Error) {
	at := l.At(heading)
	g := m.t.Grid(sheetKey(at.Sheet))
	t, e := c.Take(l.Entry(heading), workbook.Under{At: at, Grid: g, Unit: u, Decimal: unit.Unsure})
	if e != nil {
		e.Field = heading
		e.Hint = strings.ReplaceAll(e.Hint, ", or fill "+unit.SignItem, "")
		if strings.HasPrefix(e.Msg, unit.NoUnit) {
			e.Msg, e.Hint = fill(ownNoUnit.msg, []string{c.Heading}), fill(ownNoUnit.hint, []string{c.Heading, c.Quantity.Listing()})
		}
		return Value{}, e
	}
	v := Value{Column: c, Const: at.String()}
	v.set(l.Entry(heading), t, u, unit.Unsure, true)
	return v, nil
}

func sheetKey(name string) string {
	if s := workbook.Known(Sheets, name); s != nil {
		return s.Name
	}
	return name
}

func (m *Mapping) readRules() {
	for _, l := range m.t.Lines("Leave out") {
		s := m.sourceOf(l)
		if s == nil {
			continue
		}
		r := &rule{line: l, when: l.Choice("When"), word: workbook.Key(text(l, "Word")), where: -1}
		reason, ok := m.needed(s, l, "Reason")
		r.reason = reason
		theirs, ok2 := m.needed(s, l, "Theirs")
		if ok2 {
			r.where = m.whereOf(s, l, "Theirs", theirs, true)
		}
		words := r.when == whenIs || r.when == whenStarts || r.when == whenEnds
		switch {
		case r.when == "":
			s.suffer(rowFault.problem(l.Ref(), cell.Fault, "", ""))
			continue
		case words && r.word == "":
			m.blame(s, l, "Word", "", wordMissing, r.when)
			continue
		case !words && r.word != "":
			m.blame(s, l, "Word", text(l, "Word"), wordUnused, r.when)
			continue
		case r.where >= 0 && s.wheres[r.where].kind == byAnything && (r.when == whenBlank || r.when == whenFilled):
			m.blame(s, l, "When", r.when, anyBlank)
			continue
		}
		s.wants(l)
		if ok && r.where >= 0 {
			s.rules = append(s.rules, r)
		}
	}
}

var (
	numberOnly = regexp.MustCompile(`^= ?([0-9]+)$`)
	letterOnly = regexp.MustCompile(`^= ?([A-Za-z]+)$`)
	offset     = regexp.MustCompile(`^= ?([A-Za-z]+) ?([+-]) ?([0-9]+)$`)
	address    = regexp.MustCompile(`^= ?\$?([A-Za-z]+)\$?([0-9]+)$`)
)

// whereOf reads how the mapping names a place of theirs; −1 if that is at fault, which is told.
func (m *Mapping) whereOf(s *source, l *workbook.Line, heading, typed string, rule bool) int {
	w := &where{text: typed, at: l.At(heading)}
	switch {
	case rule && workbook.Key(typed) == "any":
		w.kind = byAnything
	case workbook.Key(typed) == "{file}":
		w.kind = byFile
	case workbook.Key(typed) == "{sheet}":
		w.kind = bySheet
	case strings.HasPrefix(typed, "="):
		w.kind = byNumber
		if !w.numbers(s.layout) {
			if s.layout != "" {
				m.blame(s, l, heading, typed, whereWrong[s.layout])
			}
			return -1
		}
	default:
		w.key = headingKey(typed)
	}
	for i, have := range s.wheres {
		if have.kind == w.kind && have.key == w.key && have.col == w.col && have.row == w.row {
			return i
		}
	}
	s.wheres = append(s.wheres, w)
	return len(s.wheres) - 1
}

// numbers reads =F, =12, =B+3 and =B5, each where its layout has it.
func (w *where) numbers(layout string) bool {
	switch layout {
	case rowLayout:
		if p := letterOnly.FindStringSubmatch(w.text); p != nil {
			w.col = letters(p[1])
			return w.col > 0
		}
	case columnLayout:
		if p := numberOnly.FindStringSubmatch(w.text); p != nil {
			w.row, _ = strconv.Atoi(p[1])
			return w.row > 0 && w.row <= workbook.LastRow
		}
	case blockLayout:
		p := offset.FindStringSubmatch(w.text)
		if p == nil {
			if p = letterOnly.FindStringSubmatch(w.text); p == nil {
				return false
			}
			w.col = letters(p[1])
			return w.col > 0
		}
		w.col = letters(p[1])
		w.row, _ = strconv.Atoi(p[3])
		return w.col > 0 && (p[2] == "+" || w.row == 0) && w.row <= workbook.LastRow
	case sheetLayout:
		if p := address.FindStringSubmatch(w.text); p != nil {
			w.col = letters(p[1])
			w.row, _ = strconv.Atoi(p[2])
			return w.col > 0 && w.row > 0 && w.row <= workbook.LastRow
		}
	}
	return false
}

// colonless is a heading or label without the colon that ends it, which is no part of it.
func colonless(s string) string {
	return strings.TrimRightFunc(s, func(c rune) bool { return c == ':' || c == '：' || unicode.IsSpace(c) })
}

// headingKey makes a heading comparable; a group and its heading may be joined by › or >. A colon at the end of either is no part of it.
func headingKey(s string) string {
	k := colonless(workbook.Key(s))
	if strings.Contains(k, ">") {
		k = strings.ReplaceAll(k, ">", "›")
	}
	if strings.Contains(k, "›") {
		parts := strings.Split(k, "›")
		for i := range parts {
			parts[i] = colonless(strings.TrimSpace(parts[i]))
		}
		k = strings.Join(parts, " › ")
	}
	return k
}

// arrange puts the rows of a source in the order of a plan's sheets, and tells which needed columns nobody fills.
func (m *Mapping) arrange(s *source) {
	var rows []*target
	s.orderParts()
	for _, sheet := range workbook.Sheets {
		for _, t := range s.rows {
			if t.sheet == sheet {
				t.from = s.slots
				t.n = len(rows)
				s.slots += len(sheet.Columns)
				rows = append(rows, t)
			}
		}
	}
	s.rows = rows
	if s.fault != nil || m.lost {
		return
	}
	if len(s.mapped) == 0 {
		e := m.tell(s.line.At("Source"), "Source", s.name, nothingMapped)
		s.suffer(e)
		return
	}
	for _, t := range s.rows {
		for i, c := range t.sheet.Columns {
			if c.Needed && t.slots[i] == nil && !s.standsIn(t, c) {
				m.nobody(s, t, c)
			}
		}
	}
}

// orderParts puts a part that only constants fill before the part that follows it in Constants: a rest of so many minutes that nobody
// writes down stands between oven and chiller there. The others keep the order of Columns.
func (s *source) orderParts() {
	var named []*target // in the order of Constants
	for _, c := range s.constants {
		if !slices.Contains(named, c.to.row) {
			named = append(named, c.to.row)
		}
	}
	for i := len(named) - 1; i >= 0; i-- {
		if named[i].mapped {
			continue
		}
		for _, next := range named[i+1:] {
			if next.sheet == named[i].sheet {
				from := slices.Index(s.rows, named[i])
				s.rows = slices.Delete(s.rows, from, from+1)
				s.rows = slices.Insert(s.rows, slices.Index(s.rows, next), named[i])
				break
			}
		}
	}
}

// nobody tells that a needed column is filled by no row of the mapping.
func (m *Mapping) nobody(s *source, t *target, c *workbook.Column) {
	place := t.sheet.Name
	if t.part != "" {
		place += ", part " + t.part
	}
	for _, l := range s.asleep {
		name, _ := workbook.SplitHeading(text(l, "Column"))
		if workbook.Known(workbook.Sheets, text(l, "Sheet")) == t.sheet && t.sheet.Known(name) == c && workbook.Key(text(l, "Part")) == workbook.Key(t.part) {
			m.blame(s, l, "Confirmed", text(l, "Confirmed"), neededAsleep, c.Heading, place)
			return
		}
	}
	e := m.tell(s.line.At("Source"), "Source", s.name, neededUnmapped, c.Heading, place, c.Help)
	s.suffer(e)
}

// standsIn tells whether a blank needed column is filled by what the record says elsewhere.
func (s *source) standsIn(t *target, c *workbook.Column) bool {
	switch c.Heading {
	case "Process", "Product":
		return t.sheet.Name != "Courses" && !(t.sheet.Name == "Products" && c.Heading == "Product") && s.products() != nil && !t.isOnlyProduct(c)
	case "Step":
		return t.sheet.Name == "Steps" && t.part != ""
	case "Point":
		return t.part != ""
	}
	return false
}

// isOnlyProduct tells of the column Product of sheets where it narrows a row to one product and is not needed.
func (t *target) isOnlyProduct(c *workbook.Column) bool { return c.Heading == "Product" && !c.Needed }

// products is the row of Products that the records make; nil if they make none.
func (s *source) products() *target {
	for _, t := range s.rows {
		if t.sheet.Name == "Products" {
			return t
		}
	}
	return nil
}

// matches tells whether a name is that of a pattern with at most one *; "" is every name. Case and Unicode form make no difference.
func matches(pattern, name string) bool {
	if pattern == "" {
		return true
	}
	p, n := workbook.Key(pattern), workbook.Key(name)
	before, after, star := strings.Cut(p, "*")
	if !star {
		return p == n
	}
	return len(n) >= len(before)+len(after) && strings.HasPrefix(n, before) && strings.HasSuffix(n, after)
}
