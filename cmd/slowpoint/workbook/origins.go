package workbook

import (
	"fmt"
	"hash/fnv"
	"io"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"slowpoint/model/cell"
)

// MadeSheets are the sheets that the import adds to the plan that it makes: no part of a plan that is typed, and not in the blank
// workbook. The writer of the import takes their headings from here.
var MadeSheets = []*Sheet{
	{Name: "Origins", Help: "Made by the import: which cell of the spreadsheets each column was taken from", Columns: []*Column{
		{Heading: "File", Needed: true, Help: "a spreadsheet that was imported, or the mapping"},
		{Heading: "SHA-256", Needed: true, Help: "digest of the file as it was imported"},
		{Heading: "Their sheet", Help: "its sheet; blank for CSV"},
		{Heading: "Sheet", Needed: true, Help: "a sheet of this plan; - for the mapping"},
		{Heading: "Part", Help: "of the rows that #From gives it to; blank = all"},
		{Heading: "Column", Needed: true, Help: "a column of that sheet; - for the mapping"},
		{Heading: "Place", Needed: true, Help: "F: that column in the row of #From; 12: that row in the column of #From; B+3: column B, 3 rows below the row of #From; B5: that cell; map: Constants!E4: a cell of the mapping; {file}, {sheet}: the name itself; by Words behind any of them: a word of the mapping stands for what is there; map: the file is the mapping"},
		{Heading: "Rows", Help: "how many rows of that sheet came from that file, sheet and part; blank if nobody counted"},
	}},
	{Name: "Not imported", Help: "Made by the import: what could not be imported, and why", Columns: []*Column{
		{Heading: "File", Needed: true}, {Heading: "Sheet"}, {Heading: "Place"}, {Heading: "Record"}, {Heading: "Column"}, {Heading: "Typed"},
		{Heading: "Why", Needed: true}, {Heading: "How to mend"},
	}},
	{Name: "Left out", Help: "Made by the import: what the mapping leaves out", Columns: []*Column{
		{Heading: "File", Needed: true}, {Heading: "Sheet"}, {Heading: "Place"}, {Heading: "Reason", Needed: true},
	}},
	{Name: "Changes", Help: "Made by the import: what changed since the plan that it was compared with", Columns: []*Column{
		{Heading: "Product", Needed: true}, {Heading: "What", Needed: true}, {Heading: "Before"}, {Heading: "Now"}, {Heading: "Cell"},
	}},
}

// FromHeading heads the column of made rows that says where a row comes from, as `Recipes.xlsx › Cook-chill row 17 part chill · 5f3a9c21`:
// the file, its sheet (not for CSV), `row 17`, `column F` or `sheet`, the part of a wide row, and the row's Checksum. In the sheet
// Not imported, where it may stand too, it tells how many rows the faults are of.
const FromHeading = "#From"

// Source is a spreadsheet that a plan was made of.
type Source struct{ File, SHA256 string }

// origins lead from the cells of made rows to those of the user's own spreadsheets: an anchor a row and a place a column.
type origins struct {
	names   []string         // file and sheet, "Recipes.xlsx › Cook-chill", by number
	files   []string         // the file alone, by the same number
	labels  map[string]int32 // the numbers
	parts   map[string]int32 // numbers of parts; "" is 0
	places  map[ofColumn]place
	rows    map[string]*madeRows // by the sheet's name as the user gave it
	mapping string               // file name of the mapping; "" if it is not told
	counts  map[ofRows]int       // rows that the import made
	inOrder []ofRows             // of counts
}

// ofRows are the rows of a sheet of the plan that one part of one of their sheets made.
type ofRows struct {
	label, part int32
	sheet       *Sheet
}

// ofColumn is a column of the plan as one part of one of their sheets fills it.
type ofColumn struct {
	label, part int32
	column      *Column
}

// place is where a column's cells stand in their sheet.
type place struct {
	kind     placeKind
	row, col int32
	text     string // of a cell of the mapping
	byWords  bool   // a word of the mapping stands for what the cell holds
}

type placeKind uint8

const (
	inRow     placeKind = iota // column col, in the row of the record
	inColumn                   // row row, in the column of the record
	below                      // column col, row rows below that of the record
	fixed                      // row and col
	ofMapping                  // text
	fileName
	sheetName
)

// madeRows are the made rows of one sheet.
type madeRows struct {
	columns map[int]*Column
	anchors map[int]anchor // by row
}

// anchor is where a row comes from: a row, a column, or the whole of their sheet (both 0).
type anchor struct {
	label, part int32 // part −1: unknown to Origins
	row, col    int32
	edited      bool
}

// of tells where a cell, or a row, comes from; "" if nothing is known.
func (o *origins) of(at cell.Ref) string { return o.tells(at, true) }

// ofValue is of for a value of the input, which comes from a cell of theirs or from nowhere.
func (o *origins) ofValue(at cell.Ref) string { return o.tells(at, false) }

func (o *origins) tells(at cell.Ref, orRow bool) string {
	if o == nil || o.rows[at.Sheet] == nil {
		return ""
	}
	rows := o.rows[at.Sheet]
	a, known := rows.anchors[at.Row]
	if !known {
		return ""
	}
	from := o.cellOf(a, rows.columns[at.Col])
	if from == "" && (orRow || a.edited) {
		from = o.names[a.label]
		switch {
		case a.row > 0:
			from += fmt.Sprintf(" row %d", a.row)
		case a.col > 0:
			from += " column " + cell.ColumnName(int(a.col))
		}
	}
	if a.edited {
		return "edited after import; was " + from
	}
	return from
}

// cellOf is their cell for a column of a made row; "" if Origins does not tell it.
func (o *origins) cellOf(a anchor, c *Column) string {
	p, known := o.places[ofColumn{a.label, a.part, c}]
	if !known {
		if p, known = o.places[ofColumn{a.label, 0, c}]; !known {
			return ""
		}
	}
	at := o.at(a, p)
	if at != "" && p.byWords {
		at += ", by a word of the mapping"
	}
	return at
}

// at is the cell of a place for a row; "" if the row has none such.
func (o *origins) at(a anchor, p place) string {
	name := o.names[a.label]
	row, col := p.row, p.col
	switch p.kind {
	case ofMapping:
		return o.mapping + " › " + p.text
	case fileName:
		return o.files[a.label]
	case sheetName:
		return name
	case inRow:
		row = a.row
	case inColumn:
		col = a.col
	case below:
		if a.row == 0 {
			return ""
		}
		row += a.row
	}
	if row == 0 || col == 0 {
		return ""
	}
	return fmt.Sprintf("%s!%s%d", name, cell.ColumnName(int(col)), row)
}

// tell adds to problems where their cells come from.
func (o *origins) tell(es cell.Errors) {
	for i := range es {
		if o != nil && es[i].From == "" {
			es[i].From = o.of(es[i].At)
		}
	}
}

// byImport finds the sheets that the import made; none in a plan that was typed, which may have sheets of these names of its own.
func (r *reader) byImport(grids []*Grid) map[*Grid]*Sheet {
	found, sure := map[*Grid]*Sheet{}, false
	for _, g := range grids {
		if s := sheetOf(MadeSheets, g.Name); s != nil && r.made != nil {
			found[g] = s
			sure = sure || s.Name == "Origins" || s.Name == "Not imported"
		}
	}
	if !sure {
		return nil
	}
	return found
}

// keepMade keeps such a sheet until the plan is read.
func (r *reader) keepMade(g *Grid, s *Sheet) {
	if first := r.made[s.Name]; first != nil {
		r.add(doubledSheet.problem(cell.Ref{Sheet: g.Name}, cell.Warning, "", g.Name, first.Name, g.Name))
		return
	}
	r.made[s.Name] = g
}

// madeTable is a sheet of the import: the columns by heading, and the rows below the headings.
type madeTable struct {
	grid  *Grid
	place map[string]*head
	from  int // column of #From; 0 if there is none
	rows  []Row
}

// text is a cell of a row.
func (t *madeTable) text(row *Row, heading string) string {
	if h := t.place[heading]; h != nil {
		return row.at(h.col).Text
	}
	return ""
}

// openMade opens a sheet of the import; nil if there is none. Whatever is wrong with it is a warning.
func (r *reader) openMade(name string) *madeTable {
	g, s := r.made[name], sheetOf(MadeSheets, name)
	if g == nil || len(g.Rows) == 0 && g.Refused == "" {
		return nil
	}
	if g.Refused != "" {
		r.add(cell.Error{At: cell.Ref{Sheet: g.Name}, Level: cell.Warning, Msg: g.Refused, Hint: g.Mend})
		return nil
	}
	i, whole := findHeader(g, s)
	if !whole {
		var needed []string
		for _, c := range s.Columns {
			if c.Needed {
				needed = append(needed, c.Heading)
			}
		}
		r.add(madeHeadless.problem(cell.Ref{Sheet: g.Name}, cell.Warning, "", "", and(needed)))
		return nil
	}
	return &madeTable{grid: g, place: headings(s, &g.Rows[i]), from: fromColumn(&g.Rows[i]), rows: g.Rows[i+1:]}
}

// fromColumn is the column of #From in a row of headings; 0 if there is none.
func fromColumn(top *Row) int {
	for i := range top.Cells {
		if top.Cells[i].Kind == Text && Key(top.Cells[i].Text) == Key(FromHeading) {
			return int(top.Cells[i].Col)
		}
	}
	return 0
}

// readOrigins reads what the import says of the plan's rows. Nothing in it keeps the plan from being calculated.
func (r *reader) readOrigins() {
	r.countNotImported()
	t := r.openMade("Origins")
	if t == nil {
		return
	}
	o := &origins{mapping: "the mapping", labels: map[string]int32{}, parts: map[string]int32{"": 0}, places: map[ofColumn]place{}, rows: map[string]*madeRows{}, counts: map[ofRows]int{}}
	bad, why := formulas{}, ""
	seen := map[Source]bool{}
	for i := range t.rows {
		row := &t.rows[i]
		if fault := o.take(t, row); fault != "" {
			bad.count(cell.Ref{Sheet: t.grid.Name, Row: row.N})
			if why == "" {
				why = fault
			}
			continue
		}
		s := Source{t.text(row, "File"), strings.ToLower(t.text(row, "SHA-256"))}
		if !seen[s] {
			seen[s] = true
			r.plan.Sources = append(r.plan.Sources, s)
		}
	}
	if bad.n > 0 {
		r.add(originsDamaged.problem(bad.first, cell.Warning, "", "", why, bad.more()))
	}
	if len(r.plan.Sources) == 0 {
		return
	}
	r.plan.origins = o
	for _, s := range Sheets {
		switch t := r.tables[s.Name]; {
		case t != nil && t.place != nil:
			r.anchor(o, t)
		case len(r.unread[s.Name]) == 0 && !r.hidden(s):
			r.gone(o, s, cell.Ref{Sheet: s.Name}, nil, 0)
		}
	}
}

// hidden tells whether the plan has a sheet that is there and not read, which is told.
func (r *reader) hidden(s *Sheet) bool {
	return slices.ContainsFunc(r.plan.Sheets, func(name string) bool { return Key(name) == Key(s.Name) }) && r.grids[s.Name] == nil
}

// gone warns of rows of a sheet that the import made and that are not there any more; found are those that are. So many rows more lead
// to no origin, which is told.
func (r *reader) gone(o *origins, s *Sheet, at cell.Ref, found map[ofRows]int, unknown int) {
	n, of := 0, []string{}
	for _, k := range o.inOrder {
		lack := o.counts[k] - found[k]
		if k.sheet != s || lack <= 0 {
			continue
		}
		n += lack
		if len(of) == mostGone {
			of = append(of, "others")
		}
		if len(of) > mostGone {
			continue
		}
		from := o.names[k.label]
		for part, number := range o.parts {
			if number == k.part && part != "" {
				from += " part " + part
			}
		}
		of = append(of, fmt.Sprintf("%d of %s", lack, from))
	}
	if n > unknown {
		r.add(rowsGone.problem(at, cell.Warning, "", "", rowCount(n-unknown), s.Name, isAre(n-unknown), and(of)))
	}
}

// mostGone is how many of their sheets and parts are named as those that rows are gone of.
const mostGone = 5

// more tells of the further rows of one kind.
func (f *formulas) more() string {
	if f.n < 2 {
		return ""
	}
	return fmt.Sprintf(" (and %d more, down to row %d)", f.n-1, f.last.Row)
}

func rowCount(n int) string {
	if n == 1 {
		return "1 row"
	}
	return fmt.Sprintf("%d rows", n)
}

// take takes a row of Origins; it returns what is wrong with it.
func (o *origins) take(t *madeTable, row *Row) string {
	get := func(heading string) string { return t.text(row, heading) }
	for _, c := range sheetOf(MadeSheets, "Origins").Columns {
		if e := row.at(t.place[c.Heading].column0()); c.Needed && (e.Kind == Blank || e.Kind == Broken || e.Kind == NoStored) {
			return fmt.Sprintf("Row %d has no %s", row.N, c.Heading)
		}
	}
	if !digest.MatchString(get("SHA-256")) {
		return fmt.Sprintf("The SHA-256 of row %d is no digest of 64 hexadecimal digits", row.N)
	}
	file := get("File")
	if Key(get("Place")) == "map" {
		o.mapping = file
		return ""
	}
	s := sheetOf(Sheets, get("Sheet"))
	if s == nil {
		return fmt.Sprintf("Row %d names the sheet %q, which is not one of a plan", row.N, get("Sheet"))
	}
	name, _ := SplitHeading(get("Column"))
	c := s.known(Key(name))
	if c == nil {
		return fmt.Sprintf("Row %d names the column %q, which is not one of the sheet %s", row.N, get("Column"), s.Name)
	}
	p, ok := placeOf(get("Place"))
	if !ok {
		return fmt.Sprintf("The place %q of row %d is not understood", get("Place"), row.N)
	}
	label := file
	if sheet := get("Their sheet"); sheet != "" {
		label += " › " + sheet
	}
	k := ofColumn{number(o.labels, label), number(o.parts, get("Part")), c}
	if int(k.label) == len(o.names) {
		o.names, o.files = append(o.names, label), append(o.files, file)
	}
	o.places[k] = p
	if n := get("Rows"); n != "" {
		made, err := strconv.Atoi(n)
		if err != nil || made < 1 {
			return fmt.Sprintf("The number %q under Rows of row %d is no number of rows", n, row.N)
		}
		if rows := (ofRows{k.label, k.part, s}); o.counts[rows] == 0 {
			o.counts[rows], o.inOrder = made, append(o.inOrder, rows)
		}
	}
	return ""
}

// column0 is the column of a heading; 0 if there is none.
func (h *head) column0() int {
	if h == nil {
		return 0
	}
	return h.col
}

// number gives the number of a name, a new one if it is new.
func number(known map[string]int32, name string) int32 {
	n, ok := known[name]
	if !ok {
		n = int32(len(known))
		known[name] = n
	}
	return n
}

var (
	digest   = regexp.MustCompile(`^[0-9a-fA-F]{64}$`)
	inSheet  = regexp.MustCompile(`^([A-Za-z]{0,3})(\+?)(\d{0,7})$`)
	checksum = regexp.MustCompile(`^(.*) · ([0-9a-f]{8})$`)
	record   = regexp.MustCompile(`^ (?:row (\d{1,7})|column ([A-Z]{1,3})|sheet)(?: part (.+))?$`)
)

// placeOf reads the column Place of Origins.
func placeOf(s string) (place, bool) {
	bare, byWords := strings.CutSuffix(s, " by Words")
	p, ok := barePlace(bare)
	p.byWords = byWords
	return p, ok
}

// barePlace reads a place without what may stand behind it.
func barePlace(s string) (place, bool) {
	if rest, ok := strings.CutPrefix(s, "map:"); ok {
		return place{kind: ofMapping, text: strings.TrimSpace(rest)}, strings.TrimSpace(rest) != ""
	}
	switch Key(s) {
	case "{file}":
		return place{kind: fileName}, true
	case "{sheet}":
		return place{kind: sheetName}, true
	}
	m := inSheet.FindStringSubmatch(s)
	if m == nil {
		return place{}, false
	}
	p := place{col: int32(cell.ColumnNumber(m[1]))}
	n, _ := strconv.Atoi(m[3]) // "" is 0
	p.row = int32(n)
	switch {
	case m[1] == "" && m[2] == "" && n > 0:
		p.kind = inColumn
	case m[1] != "" && m[2] == "" && m[3] == "":
		p.kind = inRow
	case m[1] != "" && m[2] == "+" && m[3] != "":
		p.kind = below
	case m[1] != "" && m[2] == "" && n > 0:
		p.kind = fixed
	default:
		return place{}, false
	}
	return p, true
}

// anchor reads the column #From of a sheet of the plan.
func (r *reader) anchor(o *origins, t *table) {
	rows := &madeRows{columns: map[int]*Column{}, anchors: map[int]anchor{}}
	titles := map[int]string{}
	for _, h := range t.place {
		if h.column != nil {
			rows.columns[h.col], titles[h.col] = h.column, h.column.Titled(h.unit)
		}
	}
	from, bad, added, copied, typed := 0, formulas{}, formulas{}, formulas{}, ""
	found, seen := map[ofRows]int{}, map[string]bool{}
	var cells []Filled
	for i := range t.grid.Rows {
		row := &t.grid.Rows[i]
		if row.N == t.head {
			from = fromColumn(row)
		}
		if row.N <= t.head || from == 0 {
			continue
		}
		text := row.at(from).Text
		if row.at(from).Kind == Blank {
			if filled(row, titles) && !saysSign(t, row) {
				added.count(t.ref(row.N, 0))
			}
			continue
		}
		a, sum, ok := o.read(text)
		if !ok {
			if bad.n == 0 {
				typed = text
			}
			bad.count(t.ref(row.N, from))
			continue
		}
		if seen[text] {
			copied.count(t.ref(row.N, 0))
		} else {
			seen[text] = true
			found[ofRows{a.label, a.part, t.sheet}]++
		}
		cells = cells[:0]
		for j := range row.Cells {
			e := &row.Cells[j]
			if title := titles[int(e.Col)]; title != "" {
				cells = append(cells, Filled{Heading: title, Text: e.Text, Number: e.Kind == Figure})
			}
		}
		a.edited = Checksum(cells) != sum
		rows.anchors[row.N] = a
	}
	if bad.n > 0 {
		r.add(fromDamaged.problem(bad.first, cell.Warning, "", typed, bad.more()))
	}
	if len(rows.anchors) > 0 {
		o.rows[t.grid.Name] = rows
	}
	at := cell.Ref{Sheet: t.grid.Name}
	if from == 0 && slices.ContainsFunc(o.inOrder, func(k ofRows) bool { return k.sheet == t.sheet }) {
		r.add(fromGone.problem(at, cell.Warning, "", ""))
		return
	}
	r.gone(o, t.sheet, at, found, bad.n)
	if added.n > 0 && len(o.counts) > 0 && len(rows.anchors) > 0 {
		r.add(rowsAdded.problem(added.first, cell.Note, "", "", added.more()))
	}
	if copied.n > 0 {
		r.add(rowsCopied.problem(copied.first, cell.Note, "", "", copied.more()))
	}
}

// filled tells whether a row fills a column of the plan, and not only some of the user's own.
func filled(row *Row, titles map[int]string) bool {
	return slices.ContainsFunc(row.Cells, func(e Entry) bool { return titles[int(e.Col)] != "" && e.Kind != Blank })
}

// saysSign tells of the row of the sheet Plan that says the decimal sign, which the import adds of itself.
func saysSign(t *table, row *Row) bool {
	item := t.place["Item"]
	if t.sheet.Name != "Plan" || item == nil {
		return false
	}
	name, _ := SplitHeading(row.at(item.col).Text)
	return Key(name) == "decimal sign"
}

// read reads a cell of #From. Names may hold any words, so that of all ways to read it the one counts that names a known sheet.
func (o *origins) read(s string) (a anchor, sum string, ok bool) {
	m := checksum.FindStringSubmatch(s)
	if m == nil {
		return a, "", false
	}
	for i := 0; i < len(m[1]); i++ {
		if m[1][i] != ' ' {
			continue
		}
		label, known := o.labels[m[1][:i]]
		if !known {
			continue
		}
		tail := record.FindStringSubmatch(m[1][i:])
		if tail == nil {
			continue
		}
		row, _ := strconv.Atoi(tail[1]) // "" is 0
		a = anchor{label: label, part: -1, row: int32(row), col: int32(cell.ColumnNumber(tail[2]))}
		if n, known := o.parts[tail[3]]; known {
			a.part = n
		}
		return a, m[2], true
	}
	return a, "", false
}

// countNotImported warns of the rows of the spreadsheets that are not in the plan. A row may have several faults, a line each.
func (r *reader) countNotImported() {
	t := r.openMade("Not imported")
	if t == nil {
		return
	}
	records := map[string]bool{}
	for i := range t.rows {
		row := &t.rows[i]
		of := t.text(row, "Record")
		if of == "" {
			of = "\x1f" + t.text(row, "Place")
		}
		if from := row.at(t.from).Text; t.from > 0 && from != "" {
			of = from
		}
		records[t.text(row, "File")+"\x1f"+t.text(row, "Sheet")+"\x1f"+of] = true
	}
	n := len(records)
	if n == 0 {
		return
	}
	r.plan.NotImported = n
	was := "were"
	if n == 1 {
		was = "was"
	}
	r.add(rowsNotImported.problem(cell.Ref{Sheet: t.grid.Name}, cell.Warning, "", "", rowCount(n), was, t.grid.Name))
}

// Filled is a filled cell of a made row, as it goes into its checksum.
type Filled struct {
	Heading string // with its unit as the program names it: "Thickness (mm)"
	Text    string // as stored; of a number its digits, with a decimal point
	Number  bool   // stored as a number and not as text
}

// Checksum is that of a made row, by which the reader of the plan tells whether it was edited since: FNV-1a of 32 bits, as eight
// hexadecimal digits, over `heading=text` of its filled cells in the order of their columns, with the control character 1F between
// them. Cells headed with # do not count; a number is written in the fewest digits that give it back.
func Checksum(cells []Filled) string {
	sum := fnv.New32a()
	n := 0
	for _, c := range cells {
		text := asStored(c.Text, c.Number)
		if strings.HasPrefix(c.Heading, "#") || text == "" {
			continue
		}
		if n++; n > 1 {
			io.WriteString(sum, "\x1f")
		}
		io.WriteString(sum, c.Heading)
		io.WriteString(sum, "=")
		io.WriteString(sum, text)
	}
	return fmt.Sprintf("%08x", sum.Sum32())
}

// asStored is the text of a cell for a checksum: two spellings of one number, such as 0.1 and 0.10000000000000001, are equal.
func asStored(text string, number bool) string {
	if number {
		if x, err := strconv.ParseFloat(text, 64); err == nil {
			return strconv.FormatFloat(x, 'g', -1, 64)
		}
	}
	return tidy(text)
}
