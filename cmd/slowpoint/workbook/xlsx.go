package workbook

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"path"
	"strconv"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"slowpoint/model/cell"
)

// The parts of a workbook are read here and not by excelize, which gives a shortened sheet without an error where a part is damaged,
// rounds numbers, and needs a whole sheet in memory to tell a formula or a number format. One pass checks and reads.

// book is what a workbook's parts say before any sheet is read.
type book struct {
	sheets  []bookSheet
	is1904  bool
	strings []string
	formats []numberFormat // of each cell style; nil where every number has the form in forms and is shown as it is stored
	forms   []Form
	words   []string // of forms from worded on
	struck  struck
	raised  map[int]bool // shared texts with raised or lowered digits that are no unit's; nil if there are none
}

// struck is what is struck through; both are nil in a plan without such a thing.
type struck struct {
	texts  map[int]bool // shared texts
	styles map[int]bool // cell styles
}

type bookSheet struct {
	name, part string
	hidden     bool
}

// readWorkbook reads every sheet of a workbook; hidden ones are given without rows.
func readWorkbook(data []byte) ([]*Grid, error) {
	z, err := container(data)
	if err != nil {
		return nil, err
	}
	m := &meter{left: mostBytes, spare: mostElements}
	byName := map[string]*zip.File{}
	for _, f := range z.File {
		byName[strings.ToLower(f.Name)] = f
	}
	b, done, err := readBook(byName, m)
	if err != nil {
		return nil, err
	}
	grids := make([]*Grid, len(b.sheets))
	cells := mostCells
	for i, s := range b.sheets {
		f := byName[strings.ToLower(s.part)]
		if f == nil {
			return nil, damaged(s.part, fmt.Errorf("it is missing, and the sheet %s is in it", s.name))
		}
		g := &Grid{Name: tidy(s.name), Hidden: s.hidden, HiddenCols: map[int]bool{}, words: b.words, Is1904: b.is1904}
		if err := m.part(f, func(r metered) error { return b.sheet(r, g, &cells) }); err == errMerged {
			return nil, fmt.Errorf("the sheet %s %w", g.Name, err)
		} else if err != nil {
			return nil, err
		}
		done[f] = true
		grids[i] = g
	}
	for _, f := range z.File {
		if done[f] {
			continue
		}
		n := strings.ToLower(f.Name)
		var use func(metered) error
		if strings.HasSuffix(n, ".xml") && (strings.HasPrefix(n, "xl/worksheets/") || n == "[content_types].xml") || strings.HasSuffix(n, ".rels") {
			use = wellFormed
		}
		if err := m.part(f, use); err != nil {
			return nil, err
		}
	}
	return grids, nil
}

// readBook reads the parts that the sheets need: which sheets there are, shared texts, number formats.
func readBook(byName map[string]*zip.File, m *meter) (*book, map[*zip.File]bool, error) {
	b, done := &book{}, map[*zip.File]bool{}
	home := "xl/workbook.xml"
	for _, l := range linksOf("", byName, m) {
		if strings.HasSuffix(l.kind, "/officeDocument") {
			home = l.part
		}
	}
	f := byName[strings.ToLower(home)]
	if f == nil {
		return nil, nil, errors.New("this is not an .xlsx workbook (a document of another kind?); a plan is an .xlsx workbook, or a folder of .csv files")
	}
	parts := linksOf(home, byName, m)
	type raw struct{ name, id, state string }
	var sheets []raw
	err := m.part(f, func(r metered) error {
		return elements(r, func(_ *walker, e xml.StartElement) error {
			switch e.Name.Local {
			case "workbookPr":
				v := attr(e, "date1904")
				b.is1904 = isTrue(v)
			case "sheet":
				sheets = append(sheets, raw{attr(e, "name"), attr(e, "id"), attr(e, "state")})
			}
			return nil
		}, nil)
	})
	if err != nil {
		return nil, nil, err
	}
	done[f] = true
	for _, s := range sheets {
		l := parts[s.id]
		if l.part == "" {
			return nil, nil, damaged(f.Name, fmt.Errorf("the sheet %s has no part", s.name))
		}
		if !strings.HasSuffix(l.kind, "/worksheet") {
			continue // a chart or macro sheet
		}
		b.sheets = append(b.sheets, bookSheet{s.name, l.part, s.state == "hidden" || s.state == "veryHidden"})
	}
	if err := b.readShared(parts, byName, m, done); err != nil {
		return nil, nil, err
	}
	return b, done, nil
}

// readShared reads the texts and styles that all sheets share.
func (b *book) readShared(parts map[string]link, byName map[string]*zip.File, m *meter, done map[*zip.File]bool) error {
	for _, l := range parts {
		f := byName[strings.ToLower(l.part)]
		var use func(metered) error
		switch {
		case strings.HasSuffix(l.kind, "/sharedStrings"):
			use = b.readStrings
		case strings.HasSuffix(l.kind, "/styles"):
			use = b.readStyles
		default:
			continue
		}
		if f == nil {
			return damaged(l.part, errors.New("it is missing"))
		}
		if err := m.part(f, use); err != nil {
			return err
		}
		done[f] = true
	}
	return nil
}

// linksOf reads the relationships of a part (of the whole archive for ""); they are read again, with their errors, at the end.
func linksOf(part string, byName map[string]*zip.File, m *meter) map[string]link {
	out := map[string]link{}
	f := byName[strings.ToLower(path.Join(path.Dir(part), "_rels", path.Base(part)+".rels"))]
	if part == "" {
		f = byName["_rels/.rels"]
	}
	if f == nil {
		return out
	}
	m.part(f, func(r metered) error {
		return elements(r, func(_ *walker, e xml.StartElement) error {
			if e.Name.Local == "Relationship" {
				out[attr(e, "Id")] = link{attr(e, "Type"), target(part, attr(e, "Target"))}
			}
			return nil
		}, nil)
	})
	return out
}

// link is a relationship of one part to another.
type link struct{ kind, part string }

// target is a part's name from the place of the part that points at it.
func target(from, to string) string {
	if strings.HasPrefix(to, "/") {
		return strings.TrimPrefix(path.Clean(to), "/")
	}
	return strings.TrimPrefix(path.Join(path.Dir(from), to), "/")
}

func attr(e xml.StartElement, name string) string {
	for _, a := range e.Attr {
		if a.Name.Local == name {
			return a.Value
		}
	}
	return ""
}

// What a cell, with its formula, value and text, and a shared text in two or three writings hold; more comes out of what is spare.
const (
	inCell = 4
	inText = 20
)

// readStrings reads the shared texts; runs of one text are joined, its reading aids (rPh) left out.
func (b *book) readStrings(r metered) error {
	return elements(r, func(d *walker, e xml.StartElement) error {
		if e.Name.Local != "si" {
			return nil
		}
		d.m.spare += inText
		t, err := richText(d)
		if err != nil {
			return err
		}
		if t.struck {
			b.struck.texts = marked(b.struck.texts, len(b.strings))
		}
		if t.raised {
			b.raised = marked(b.raised, len(b.strings))
		}
		if b.strings = append(b.strings, tidy(t.joined)); len(b.strings) > mostCells {
			return errTooMany
		}
		return nil
	}, nil)
}

// marked adds a number to a set, which is made when it is first needed.
func marked(set map[int]bool, n int) map[int]bool {
	if set == nil {
		set = map[int]bool{}
	}
	set[n] = true
	return set
}

// strikes tells whether an element of a font strikes its text through.
func strikes(e xml.StartElement) bool {
	if e.Name.Local != "strike" {
		return false
	}
	v := attr(e, "val")
	return v != "0" && v != "false"
}

// raises tells whether an element of a font raises or lowers its text.
func raises(e xml.StartElement) bool {
	v := attr(e, "val")
	return e.Name.Local == "vertAlign" && v != "" && v != "baseline"
}

// rich is the runs of a text, joined.
type rich struct {
	joined string
	struck bool // one of them is struck through
	raised bool // one of them holds raised or lowered digits that are no unit's, as the 2 of m² is
}

// richText reads up to the end of the element that was just opened.
func richText(d *walker) (r rich, err error) {
	var s strings.Builder
	lined, up := false, false // the run that is read
	before := ' '             // the letter or sign before it
	for depth, inT := 1, false; depth > 0; {
		t, err := d.Token()
		if err != nil {
			return rich{}, midway(err)
		}
		switch t := t.(type) {
		case xml.StartElement:
			if t.Name.Local == "rPh" {
				if err := d.Skip(); err != nil {
					return rich{}, midway(err)
				}
				continue
			}
			depth++
			lined = (lined || strikes(t)) && t.Name.Local != "r"
			up = (up || raises(t)) && t.Name.Local != "r"
			inT = t.Name.Local == "t"
		case xml.EndElement:
			depth--
			inT = false
		case xml.CharData:
			if inT {
				s.Write(t)
				r.struck = r.struck || lined && len(bytes.TrimSpace(t)) > 0
				r.raised = r.raised || up && bytes.ContainsAny(t, "0123456789") && !strings.ContainsRune("mtn", before) // m², ft², in²
				if len(t) > 0 {
					before, _ = utf8.DecodeLastRune(t)
				}
			}
		}
	}
	r.joined = unescape(s.String())
	return r, nil
}

func midway(err error) error {
	if err == io.EOF {
		return io.ErrUnexpectedEOF
	}
	return err
}

// unescape undoes _x000D_, which stands for a character that XML cannot hold.
func unescape(s string) string {
	for from := 0; ; {
		i := strings.Index(s[from:], "_x")
		if i < 0 || from+i+7 > len(s) {
			return s
		}
		i += from
		n, err := strconv.ParseUint(s[i+2:i+6], 16, 16)
		if err != nil || s[i+6] != '_' {
			from = i + 2
			continue
		}
		c := string(rune(n))
		s = s[:i] + c + s[i+7:]
		from = i + len(c)
	}
}

// readStyles finds what the number format of each cell style makes of a number, and which styles strike through.
func (b *book) readStyles(r metered) error {
	custom := map[string]numberFormat{}
	var lined map[int]bool // fonts that strike through
	fonts := 0             // begun so far
	inFonts, inCells := false, false
	return elements(r, func(_ *walker, e xml.StartElement) error {
		switch e.Name.Local {
		case "numFmt":
			custom[attr(e, "numFmtId")] = b.numberFormat(attr(e, "formatCode"))
		case "fonts":
			inFonts = true
		case "font":
			fonts++
		case "strike":
			if inFonts && strikes(e) {
				lined = marked(lined, fonts-1)
			}
		case "cellXfs":
			inCells = true
		case "xf":
			if inCells {
				if font, err := strconv.Atoi(attr(e, "fontId")); err == nil && lined[font] {
					b.struck.styles = marked(b.struck.styles, len(b.forms))
				}
				id := attr(e, "numFmtId")
				f, ok := custom[id]
				if code := clocks[id]; !ok && code != "" {
					f = b.numberFormat(code)
				} else if !ok {
					f = numberFormat{{form: builtIn(id)}}
				}
				b.forms = append(b.forms, f[0].form)
				if f.plain() {
					f = nil
				}
				b.formats = append(b.formats, f)
			}
		}
		return nil
	}, func(_ *walker, name string) error {
		switch name {
		case "fonts":
			inFonts = false
		case "cellXfs":
			inCells = false
		}
		return nil
	})
}

// builtIn gives the form of the number formats that have a number and no code (ECMA-376 part 1, 18.8.30).
func builtIn(id string) Form {
	n, _ := strconv.Atoi(id)
	switch {
	case n == 9 || n == 10:
		return Percent
	case n >= 14 && n <= 17 || n == 22 || n >= 27 && n <= 36 || n >= 50 && n <= 58:
		return Date
	}
	return Bare
}

// clocks are the built-in number formats of times (ECMA-376 part 1, 18.8.30).
var clocks = map[string]string{"18": "h:mm AM/PM", "19": "h:mm:ss AM/PM", "20": "h:mm", "21": "h:mm:ss", "45": "mm:ss", "46": "[h]:mm:ss", "47": "mm:ss.0"}

// form is formOf, but tells bare formats apart that show words behind the number.
func (b *book) form(code string) Form {
	f := formOf(code)
	words := behind(code)
	named := strings.ContainsFunc(words, func(c rune) bool { return unicode.IsLetter(c) || strings.ContainsRune("°%\"″", c) }) // and no bracket or stop
	if f != Bare || !named || len(b.words) >= 200 {
		return f
	}
	for i, w := range b.words {
		if w == words {
			return Worded + Form(i)
		}
	}
	b.words = append(b.words, words)
	return Worded + Form(len(b.words)-1)
}

// behind gives the words that the first part of a number format code shows behind the number: cm of 0.0" cm", °C of 0\ °\C.
func behind(code string) string {
	var words strings.Builder
	rs := []rune(code)
	for i := 0; i < len(rs); i++ {
		switch c := rs[i]; c {
		case '"':
			for i++; i < len(rs) && rs[i] != '"'; i++ {
				words.WriteRune(rs[i])
			}
		case '\\':
			if i++; i < len(rs) {
				words.WriteRune(rs[i])
			}
		case '_', '*':
			i++
		case '[':
			for i < len(rs) && rs[i] != ']' {
				i++
			}
		case ';':
			i = len(rs)
		case '0', '#', '?', '.':
			words.Reset()
		case '°', '²', '³', 'µ', '·', '/':
			words.WriteRune(c)
		}
	}
	return tidy(words.String())
}

// formOf reads a number format code: what stands in quotes, behind a backslash or in brackets is no part of it, but [h], [m] and [s].
func formOf(code string) Form {
	code = strings.ToLower(code)
	var plain strings.Builder
	for i := 0; i < len(code); i++ {
		switch c := code[i]; c {
		case '"':
			if j := strings.IndexByte(code[i+1:], '"'); j >= 0 {
				i += j + 1
			}
		case '\\', '_', '*':
			i++
		case '[':
			j := strings.IndexByte(code[i:], ']')
			if j < 0 {
				continue
			}
			if in := strings.Trim(code[i+1:i+j], "hms"); in == "" {
				plain.WriteString(code[i+1 : i+j])
				plain.WriteByte('h')
			}
			i += j
		case ';':
			i = len(code)
		default:
			plain.WriteByte(c)
		}
	}
	s := plain.String()
	switch {
	case strings.Contains(s, "general"):
		return Bare
	case strings.ContainsAny(s, "yd"):
		return Date
	case strings.ContainsAny(s, "hs"):
		return Clock
	case strings.Contains(s, "m"):
		return Date
	case strings.Contains(s, "%"):
		return Percent
	}
	return Bare
}

// sheet reads the cells of one sheet. left is how many cells and empty rows the plan may still have.
func (b *book) sheet(r metered, g *Grid, left *int) error {
	s := &sheetReader{b: b, g: g, left: left}
	if err := elements(r, s.element, s.end); err != nil {
		return err
	}
	return s.flush()
}

// A sheetReader takes the rows and cells of a sheet as they come.
type sheetReader struct {
	b      *book
	g      *Grid
	left   *int // cells and empty rows that the plan may still have
	row    Row
	col    int  // the last one of the row
	filled int  // rows with something in them
	rooted bool // the element around all was seen
	plain  []plainCell
}

// element reads what an element begins.
func (s *sheetReader) element(d *walker, e xml.StartElement) error {
	if !s.rooted && e.Name.Local != "worksheet" {
		return errors.New("it is not a sheet")
	}
	s.rooted = true
	g := s.g
	switch e.Name.Local {
	case "sheetData":
		return s.plainRows(d)
	case "row":
		d.m.spare++
		return s.begin(rowTag{attr(e, "r"), attr(e, "hidden"), attr(e, "ht")})
	case "c":
		at := cellTag{attr(e, "r"), attr(e, "s")}
		if err := s.next(at.name); err != nil {
			return err
		}
		d.m.spare += inCell
		in, err := readCell(d)
		if err != nil {
			return err
		}
		in.kind = attr(e, "t")
		return s.cell(at, in)
	case "sheetProtection":
		g.Protected = isTrue(attr(e, "sheet"))
	case "mergeCell":
		if len(g.Merged) == mostMerged {
			return errMerged
		}
		if m, ok := parseBlock(attr(e, "ref")); ok {
			g.Merged = append(g.Merged, m)
		}
	case "col":
		if isTrue(attr(e, "hidden")) || smaller(attr(e, "width"), leastWidth) {
			from, _ := strconv.Atoi(attr(e, "min"))
			to, _ := strconv.Atoi(attr(e, "max"))
			for i := max(from, 1); i <= min(to, mostColumns); i++ {
				g.HiddenCols[i] = true
			}
		}
	}
	return nil
}

// end goes on behind a row.
func (s *sheetReader) end(d *walker, name string) error {
	if name == "row" {
		return s.plainRows(d)
	}
	return nil
}

// plainRows takes the rows that come next, up to one that is not plain.
func (s *sheetReader) plainRows(d *walker) error {
	for s.g.take != nil && d.between() {
		text := d.feed.row()
		if text == "" {
			return nil
		}
		row, cells, ok := plainRow(text, s.plain)
		if s.plain = cells; !ok {
			return nil
		}
		d.feed.from += len(text)
		if err := s.begin(row); err != nil {
			return err
		}
		for i := range cells {
			c := &cells[i]
			d.m.spare += inCell - 1 - c.elements
			if err := s.next(c.name); err != nil {
				return err
			}
			if err := s.cell(c.cellTag, c.stored); err != nil {
				return err
			}
		}
	}
	return nil
}

// flush hands on the row that was read.
func (s *sheetReader) flush() error {
	cells := s.row.Cells
	switch {
	case len(cells) == 0:
	case s.g.take != nil:
		if err := s.g.take(&s.row); err != nil {
			return err
		}
		cells = cells[:0]
	default:
		s.g.Rows = append(s.g.Rows, s.row)
		cells = nil
	}
	s.row = Row{N: s.row.N, Cells: cells}
	return nil
}

// begin begins a row.
func (s *sheetReader) begin(t rowTag) error {
	if s.row.N > 0 && s.col == 0 { // an empty row takes as long as a cell
		if *s.left--; *s.left < 0 {
			return errTooMany
		}
	}
	if err := s.flush(); err != nil {
		return err
	}
	next, err := startRow(t, s.row.N)
	if err != nil {
		return err
	}
	next.Cells = s.row.Cells
	s.row, s.col = next, 0
	return nil
}

// next goes to the column of a cell.
func (s *sheetReader) next(name string) error {
	if s.row.N == 0 {
		return errors.New("a cell stands outside the rows")
	}
	n, err := column(name, s.row.N, s.col)
	if err != nil {
		return err
	}
	s.col = n
	if *s.left--; *s.left < 0 {
		return errTooMany
	}
	return nil
}

// cell keeps what a cell holds.
func (s *sheetReader) cell(at cellTag, in stored) error {
	c, err := s.b.meaning(in, at.style)
	switch {
	case err != nil:
		return fmt.Errorf("the cell %s %w", at.name, err)
	case tooLong(c.Text, mostText):
		return fmt.Errorf("the cell %s holds more than %d characters", at.name, mostText)
	case c.Kind == Blank:
		return nil
	}
	if len(s.row.Cells) == 0 {
		if s.filled++; s.filled > mostRows+1000 && s.g.take == nil {
			s.g.Refused, s.g.Mend = fill(tooManyRows.msg, []string{strconv.Itoa(mostRows)}), tooManyRows.hint
		}
		if cap(s.row.Cells) == 0 {
			s.row.Cells = make([]Entry, 0, 12)
		}
	}
	c.Col = int32(s.col)
	if s.g.Refused == "" {
		s.row.Cells = append(s.row.Cells, c)
	}
	return nil
}

// What is lower or narrower is a line at most, and nobody sees what is in it.
const (
	leastHeight = 1   // points
	leastWidth  = 0.2 // characters; a column of one pixel has 0.14 (common practice, no source)
)

// smaller tells whether a size is given and less than least.
func smaller(size string, least float64) bool {
	x, err := storedNumber(size)
	return err == nil && x < least
}

func isTrue(v string) bool { return v == "1" || v == "true" }

// startRow reads what a row says of itself, after the row before.
func startRow(t rowTag, before int) (Row, error) {
	n := before + 1
	if a := t.number; a != "" {
		v, err := strconv.Atoi(a)
		if err != nil {
			return Row{}, fmt.Errorf("%q is not a row number", a)
		}
		if v < n {
			return Row{}, fmt.Errorf("row %d comes after row %d", v, before)
		}
		n = v
	}
	if n > LastRow {
		return Row{}, fmt.Errorf("row %d does not exist in a spreadsheet", n)
	}
	hidden := isTrue(t.hidden) || smaller(t.height, leastHeight)
	return Row{N: n, Hidden: hidden}, nil
}

// column reads a cell's name (which must lie in its row) and gives its column, after the one before.
func column(name string, row, before int) (int, error) {
	n := before + 1
	if name != "" {
		c, r, ok := parseName(name)
		switch {
		case !ok:
			return 0, fmt.Errorf("%q is not the name of a cell", name)
		case r != row:
			return 0, fmt.Errorf("the cell %s stands in row %d", name, row)
		case c < n:
			return 0, fmt.Errorf("the cells of row %d are doubled or out of order", row)
		}
		n = c
	}
	if n > mostColumns {
		return 0, fmt.Errorf("a cell of row %d lies beyond column %d, the last that is read", row, mostColumns)
	}
	return n, nil
}

// parseName reads the name of a cell: AB12.
func parseName(name string) (col, row int, ok bool) {
	letters := strings.TrimRight(name, "0123456789")
	col = cell.ColumnNumber(letters)
	row, err := strconv.Atoi(name[len(letters):])
	return col, row, err == nil && row > 0 && col > 0 && col <= LastColumn
}

func parseBlock(ref string) (Block, bool) {
	a, b, two := strings.Cut(ref, ":")
	if !two {
		b = a
	}
	l, t, ok := parseName(a)
	r, bo, ok2 := parseName(b)
	return Block{l, t, r, bo}, ok && ok2
}

// stored is what the XML of a cell holds.
type stored struct {
	kind, value, inline   string
	formula, hasV, struck bool
	linked, raised        bool
}

// readCell reads one cell up to its end.
func readCell(d *walker) (in stored, err error) {
	for depth := 1; depth > 0; {
		t, err := d.Token()
		if err != nil {
			return in, midway(err)
		}
		switch t := t.(type) {
		case xml.StartElement:
			switch t.Name.Local {
			case "f":
				var f string
				f, err = charData(d)
				in.formula, in.linked = true, otherBook(f)
			case "is":
				var t rich
				t, err = richText(d)
				in.inline, in.struck, in.raised = t.joined, t.struck, t.raised
			case "v":
				in.value, err = charData(d)
				in.hasV = true
			default:
				depth++
			}
			if err != nil {
				return in, midway(err)
			}
		case xml.EndElement:
			depth--
		}
	}
	return in, nil
}

// meaning makes an entry of what a cell holds; style is the number of its cell style.
func (b *book) meaning(in stored, style string) (Entry, error) {
	c := Entry{Formula: in.formula, Linked: in.linked, Struck: in.struck}
	if b.struck.styles != nil {
		n, err := strconv.Atoi(style)
		c.Struck = c.Struck || err == nil && b.struck.styles[n]
	}
	switch {
	case in.kind == "s" && in.value != "":
		n, err := strconv.Atoi(strings.TrimSpace(in.value))
		if err != nil || n < 0 || n >= len(b.strings) {
			return c, fmt.Errorf("points at text %s of %d shared texts", in.value, len(b.strings))
		}
		c.Kind, c.Text = Text, b.strings[n]
		c.Struck = c.Struck || b.struck.texts[n]
		in.raised = b.raised[n]
	case in.kind == "inlineStr":
		c.Kind, c.Text = Text, tidy(in.inline)
	case in.formula && (!in.hasV || in.value == "" && in.kind != "str"): // of text, <v></v> is the stored result "", a missing <v> is none
		c.Kind = NoStored
		return c, nil
	case in.value == "":
	case in.kind == "str":
		c.Kind, c.Text = Text, tidy(unescape(in.value))
	case in.kind == "b":
		c.Kind, c.Text = Truth, map[bool]string{true: "TRUE", false: "FALSE"}[isTrue(in.value)]
	case in.kind == "e":
		c.Kind, c.Text = Broken, in.value
	case in.kind == "d":
		c.Kind, c.Text = Text, tidy(in.value)
	default:
		c.Kind, c.Text = Figure, strings.TrimSpace(in.value)
		if n, err := strconv.Atoi(style); err == nil && n >= 0 && n < len(b.forms) {
			c.Form = b.forms[n]
			if f := b.formats[n]; f != nil {
				if x, err := storedNumber(c.Text); err == nil {
					c.Form, c.Shows = f.of(x)
				}
			}
		}
	}
	switch {
	case c.Text == "":
		return Entry{}, nil
	case c.Kind == Text && failed(c.Text):
		c.Kind = Broken
	case c.Kind == Text && in.raised:
		c.Shows = Raised
	}
	return c, nil
}

// otherBook tells whether a formula takes something from another workbook, which it names by a number: [1]Sheet1!A1.
func otherBook(formula string) bool {
	for {
		i := strings.IndexByte(formula, '[')
		if i < 0 {
			return false
		}
		formula = formula[i+1:]
		j := 0
		for j < len(formula) && formula[j] >= '0' && formula[j] <= '9' {
			j++
		}
		if j > 0 && j < len(formula) && formula[j] == ']' {
			return true
		}
	}
}

// charData reads the text of an element up to its end.
func charData(d *walker) (string, error) {
	var s strings.Builder
	for {
		t, err := d.Token()
		if err != nil {
			return "", midway(err)
		}
		switch t := t.(type) {
		case xml.CharData:
			s.Write(t)
		case xml.StartElement:
			if err := d.Skip(); err != nil {
				return "", midway(err)
			}
		case xml.EndElement:
			return s.String(), nil
		}
	}
}

// isoDate prints a stored date: days from the end of 1899 (with the 29 February 1900 that never was) or from 1904.
func isoDate(stored string, is1904 bool) string {
	x, err := storedNumber(stored)
	if err != nil || math.IsNaN(x) || x < 0 || x > 2958466 {
		return stored
	}
	start := time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)
	if is1904 {
		start = time.Date(1904, 1, 1, 0, 0, 0, 0, time.UTC)
	} else if x < 61 {
		start = start.AddDate(0, 0, 1)
	}
	whole := math.Floor(x)
	t := start.AddDate(0, 0, int(whole))
	if x == whole {
		return t.Format("2006-01-02")
	}
	return t.Add(time.Duration(math.Round((x-whole)*86400)) * time.Second).Format("2006-01-02 15:04:05")
}
