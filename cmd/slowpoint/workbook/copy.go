package workbook

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"maps"
	"os"
	"slices"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model/cell"
	"slowpoint/model/unit"

	"github.com/xuri/excelize/v2"
)

// Rows are rows to add to a plan: by sheet, each a row's cells by heading without unit. A number carries its own unit ("165 °F"),
// so that it fits whatever unit the user's heading has.
type Rows map[string][]map[string]string

// CopyRows writes a new workbook: the plan as it is, with rows for the sheets Limits, Tables and Groups added below the last row of
// each. A sheet or a heading that is missing is added; no filled cell is changed. A table or group that the plan has already is used if it
// says the same, else the new one takes a numbered name. A limit that the plan has already is not added again: there names those, as the
// plan does; one of the same name that says something else takes a numbered name too.
// notCarried says, a line each, what the new workbook lacks of the old one. The error says why there is no new workbook.
func CopyRows(rows Rows, planPath string, w io.Writer) (there, notCarried []string, err error) {
	info, err := Look(planPath)
	if err != nil {
		return nil, nil, err
	}
	if info.IsDir() {
		return nil, nil, fmt.Errorf("%s: rows can be added to a workbook, not to a folder of CSV files: write a workbook with slowpoint blank, copy the rows into it, and save its sheets Limits, Tables and Groups as CSV", planPath)
	}
	if info.Size() > mostBytes {
		return nil, nil, fmt.Errorf("%s: the file is larger than %d MB, too large for a plan", planPath, mostBytes>>20)
	}
	old, err := os.ReadFile(planPath)
	if err != nil {
		return nil, nil, fmt.Errorf("%s: it cannot be read (%s)", planPath, Reason(err))
	}
	out, there, notCarried, err := copyRows(rows, old)
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", planPath, err)
	}
	_, err = w.Write(out)
	return there, notCarried, err
}

// copyRows gives the bytes of the new workbook, the limits that the old one has already, and what the new one lacks of it.
func copyRows(rows Rows, old []byte) (out []byte, there, notCarried []string, err error) {
	grids, err := readWorkbook(old)
	if err != nil {
		return nil, nil, nil, err
	}
	f, err := excelize.OpenReader(bytes.NewReader(old), excelize.Options{UnzipSizeLimit: mostBytes, UnzipXMLSizeLimit: mostBytes})
	if err != nil {
		return nil, nil, nil, fmt.Errorf("the workbook cannot be opened for a copy (%w)", err)
	}
	defer f.Close()
	c := &copier{f: f, sheets: map[string]*copySheet{}}
	if rows, err = rows.written(grids, c); err != nil {
		return nil, nil, nil, err
	}
	for _, name := range []string{"Limits", "Tables", "Groups"} {
		if c.sheets[name], err = c.find(SheetNamed(name), grids); err != nil {
			return nil, nil, nil, err
		}
	}
	for _, name := range []string{"Tables", "Groups", "Limits"} {
		if err := c.sheets[name].add(c, c.fit(name, rows)); err != nil {
			return nil, nil, nil, fmt.Errorf("sheet %s: %w", name, err)
		}
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		return nil, nil, nil, fmt.Errorf("the copy cannot be written (%w)", err)
	}
	if err := unchanged(grids, b.Bytes()); err != nil {
		return nil, nil, nil, err
	}
	notCarried, err = lost(old, b.Bytes())
	return b.Bytes(), c.there, append(notCarried, c.short...), err
}

// written gives a copy of the rows, each once in Tables and Groups, with the decimal sign of the plan.
func (rows Rows) written(grids []*Grid, c *copier) (Rows, error) {
	r := newReader(&Plan{}, Sheets)
	r.sheets(grids)
	if err := r.isPlan(); err != nil {
		return nil, err
	}
	r.planItems()
	r.decimalSign()
	if c.decimal = r.decimal; c.decimal == unit.Unsure {
		c.decimal = unit.Point
	}
	out := Rows{}
	for _, s := range Sheets {
		for _, row := range rows[s.Name] {
			n := map[string]string{}
			for heading, v := range row {
				col := s.Column(heading)
				if col == nil {
					return nil, fmt.Errorf("%q is not a column of the sheet %s", heading, s.Name)
				}
				if r.decimal == unit.Comma && (col.Quantity != nil || heading == "Clock starts") {
					v = strings.ReplaceAll(v, ".", ",")
				}
				if v != "" {
					n[heading] = v
				}
			}
			once := s.Name == "Limits" || !slices.ContainsFunc(out[s.Name], func(o map[string]string) bool { return maps.Equal(o, n) })
			if once && len(n) > 0 {
				out[s.Name] = append(out[s.Name], n)
			}
		}
	}
	return out, nil
}

// copier is a workbook while rows are added.
type copier struct {
	f      *excelize.File
	sheets map[string]*copySheet

	decimal unit.Decimal // of the plan
	there   []string     // limits that the plan has already, by its names
	short   []string     // tables of the spreadsheet program that end above the new rows
}

// copySheet is a sheet that takes rows.
type copySheet struct {
	*Sheet
	name  string // as the user named it; "" if it is missing
	heads map[string]*head
	rows  []map[string]string // what it holds, by heading without unit
	head  int                 // the row of the headings
	last  int                 // the last filled row
	wide  int                 // the last filled column
	own   map[string]string   // units of the user's headings, by heading
}

// find looks for a sheet among the user's.
func (c *copier) find(s *Sheet, grids []*Grid) (*copySheet, error) {
	cs := &copySheet{Sheet: s, heads: map[string]*head{}, own: map[string]string{}}
	var g *Grid
	for _, x := range grids {
		if sheetOf(Sheets, x.Name) == s {
			g = x
			break
		}
	}
	if g == nil {
		return cs, nil
	}
	for _, n := range c.f.GetSheetList() {
		if tidy(n) == g.Name {
			cs.name = n
		}
	}
	switch {
	case g.Hidden:
		return nil, fmt.Errorf("the sheet %s is hidden, and a hidden sheet is not read: unhide it, then copy again", g.Name)
	case g.Refused != "":
		return nil, fmt.Errorf("the sheet %s: %s", g.Name, g.Refused)
	case cs.name == "":
		return nil, fmt.Errorf("the sheet %s cannot be found again for a copy: give it a plain name", g.Name)
	case len(g.Rows) == 0:
		return cs, nil
	}
	i, whole := findHeader(g, s)
	if !whole {
		return nil, fmt.Errorf("the sheet %s has no row with all its headings: %s can be added only under headings; slowpoint read says what is missing", g.Name, strings.ToLower(s.Name))
	}
	top := &g.Rows[i]
	cs.heads, cs.head = headings(s, top), top.N
	for name, h := range cs.heads {
		_, cs.own[name] = SplitHeading(top.at(h.col).Text)
	}
	for _, row := range g.Rows {
		cs.last = row.N
		cs.wide = max(cs.wide, int(row.Cells[len(row.Cells)-1].Col))
	}
	for _, row := range g.Rows[i+1:] {
		cells := map[string]string{}
		for name, h := range cs.heads {
			if e := row.at(h.col); e.Kind != Blank {
				cells[name] = e.Text
			}
		}
		cs.rows = append(cs.rows, cells)
	}
	return cs, nil
}

// fit gives the new rows of a sheet, with the names that they take in this plan. Tables and Groups come before Limits.
func (c *copier) fit(sheet string, rows Rows) []map[string]string {
	var out []map[string]string
	switch sheet {
	case "Tables":
		names, tables := byName(rows["Tables"], "Table")
		for _, name := range names {
			taken, have := byName(c.sheets["Tables"].rows, "Table")
			now := c.settle(name, taken, func(as string) bool { return c.sheets["Tables"].sameTable(c.decimal, have[Key(as)], tables[Key(name)]) })
			c.rename(rows["Limits"], "Table", name, now)
			if have[Key(now)] == nil {
				out = append(out, renamed(tables[Key(name)], "Table", now)...)
			}
		}
	case "Groups":
		names, groups := byName(rows["Groups"], "Group")
		for _, name := range names { // a group within another follows it
			taken, have := byName(c.sheets["Groups"].rows, "Group")
			used, _ := byName(c.sheets["Limits"].rows, "Group")
			for _, u := range used {
				if have[Key(u)] == nil { // a group without a row is all of
					taken, have[Key(u)] = append(taken, u), []map[string]string{{"Group": u, "Join": "all of"}}
				}
			}
			g := groups[Key(name)][0]
			now := c.settle(name, taken, func(as string) bool {
				h := have[Key(as)][0]
				return Key(h["Join"]) == Key(g["Join"]) && Key(h["Within"]) == Key(g["Within"])
			})
			c.rename(rows["Limits"], "Group", name, now)
			c.rename(rows["Groups"], "Within", name, now)
			if have[Key(now)] == nil {
				out = append(out, renamed(groups[Key(name)][:1], "Group", now)...)
			}
		}
	case "Limits":
		taken, have := byName(c.sheets["Limits"].rows, "Limit")
		for _, l := range rows["Limits"] {
			now := c.settle(l["Limit"], taken, func(as string) bool {
				return slices.ContainsFunc(have[Key(as)], func(h map[string]string) bool { return c.sheets["Limits"].sameLimit(c.decimal, h, l) })
			})
			if old := have[Key(now)]; old != nil {
				c.there = append(c.there, old[0]["Limit"])
				continue
			}
			taken = append(taken, now)
			out = append(out, renamed([]map[string]string{l}, "Limit", now)...)
		}
	}
	return out
}

// byName gathers rows by the name in a column: the names in order, and the rows by key.
func byName(rows []map[string]string, column string) (order []string, by map[string][]map[string]string) {
	by = map[string][]map[string]string{}
	for _, r := range rows {
		name := r[column]
		if name == "" {
			continue
		}
		if by[Key(name)] == nil {
			order = append(order, name)
		}
		by[Key(name)] = append(by[Key(name)], r)
	}
	return order, by
}

// settle gives the name that something new takes: its own where that is free or what has it says the same, else a numbered one.
func (c *copier) settle(name string, taken []string, same func(as string) bool) string {
	is := func(n string) bool {
		return slices.ContainsFunc(taken, func(t string) bool { return Key(t) == Key(n) })
	}
	now := name
	for n := 2; is(now) && !same(now); n++ {
		now = fmt.Sprintf("%s (%d)", name, n)
	}
	return now
}

// rename changes a name in a column of rows.
func (c *copier) rename(rows []map[string]string, column, from, to string) {
	for i, r := range rows {
		if from != to && Key(r[column]) == Key(from) {
			rows[i] = renamed([]map[string]string{r}, column, to)[0]
		}
	}
}

// renamed copies rows with another name in a column; the caller's own stay as they are.
func renamed(rows []map[string]string, column, to string) []map[string]string {
	var out []map[string]string
	for _, r := range rows {
		n := map[string]string{}
		for k, v := range r {
			n[k] = v
		}
		n[column] = to
		out = append(out, n)
	}
	return out
}

// theUsers are the columns of a limit that its user fills; they do not make another limit of it.
var theUsers = []string{"Limit", "CCP", "Hazard", "Confirmed by", "Confirmed on", "Note"}

// sameLimit tells whether two limits say the same, whatever their units.
func (cs *copySheet) sameLimit(d unit.Decimal, have, want map[string]string) bool {
	for _, col := range cs.Columns {
		a, b := have[col.Heading], want[col.Heading]
		if slices.Contains(theUsers, col.Heading) || Key(a) == Key(b) && col.Quantity == nil {
			continue
		}
		if col.Quantity == nil || a == "" || b == "" {
			if a != b {
				return false
			}
			continue
		}
		x, m := col.Quantity.Parse(a, col.Quantity.Unit(cs.own[col.Heading]), d)
		y, n := col.Quantity.Parse(b, nil, d)
		if col.Quantity.Plain() {
			y, n = col.Quantity.Parse(b, &col.Quantity.Units[0], d)
		}
		if m != nil || n != nil || short(x.Computed) != short(y.Computed) {
			return false // what cannot be read is not the same
		}
	}
	return true
}

// sameTable tells whether two tables have the same rows, whatever their units and order.
func (cs *copySheet) sameTable(d unit.Decimal, have, want []map[string]string) bool {
	set := func(rows []map[string]string, units map[string]string) []string {
		var out []string
		for _, r := range rows {
			s := ""
			for _, heading := range []string{"Temperature", "Time"} {
				q := cs.Column(heading).Quantity
				v, m := q.Parse(r[heading], q.Unit(units[heading]), d)
				if m != nil {
					return nil // what cannot be read is not the same
				}
				s += short(v.Computed) + " "
			}
			out = append(out, s)
		}
		sort.Strings(out)
		return out
	}
	a, b := set(have, cs.own), set(want, nil)
	return a != nil && slices.Equal(a, b)
}

// add writes rows below the last one, the sheet and headings first where they are missing.
func (cs *copySheet) add(c *copier, rows []map[string]string) error {
	if len(rows) == 0 {
		return nil
	}
	if cs.head == 0 {
		if err := cs.begin(c); err != nil {
			return err
		}
	}
	tables, err := c.f.GetTables(cs.name)
	if err != nil {
		return err
	}
	for _, t := range tables {
		if b, ok := parseBlock(t.Range); ok && b.Top == cs.head {
			c.short = append(c.short, fmt.Sprintf("the new rows are not part of the table %s of the sheet %s, which ends above them: drag its corner down", t.Name, cs.name))
		}
	}
	styled := cs.last > cs.head && len(cs.rows) > 0
	for _, col := range cs.Columns {
		if cs.heads[col.Heading] == nil && slices.ContainsFunc(rows, func(r map[string]string) bool { return r[col.Heading] != "" }) {
			if err := cs.headingFor(c, col); err != nil {
				return err
			}
		}
	}
	for i, r := range rows {
		if err := cs.write(c, r, cs.last+1+i, styled); err != nil {
			return err
		}
	}
	return nil
}

// write writes one row, styled as the last one of the user's if there is one.
func (cs *copySheet) write(c *copier, r map[string]string, n int, styled bool) error {
	for _, col := range cs.Columns { // in order, for the same bytes
		h, v := cs.heads[col.Heading], r[col.Heading]
		if h == nil {
			continue
		}
		name := cell.ColumnName(h.col)
		if styled {
			id, err := c.f.GetCellStyle(cs.name, name+strconv.Itoa(cs.last))
			if err == nil && id > 0 {
				err = c.f.SetCellStyle(cs.name, name+strconv.Itoa(n), name+strconv.Itoa(n), id)
			}
			if err != nil {
				return err
			}
		}
		if v == "" {
			continue
		}
		if err := c.f.SetCellStr(cs.name, name+strconv.Itoa(n), v); err != nil {
			return err
		}
	}
	return nil
}

// begin makes the sheet as in the blank workbook, or gives a sheet without a cell its headings.
func (cs *copySheet) begin(c *copier) error {
	if cs.name == "" {
		cs.name = cs.Name
		if _, err := c.f.NewSheet(cs.name); err != nil {
			return err
		}
	}
	if cs.name == cs.Name {
		k, err := newBlank(c.f)
		if err != nil {
			return err
		}
		if err := k.sheet(cs.Sheet, nil); err != nil {
			return err
		}
		cs.head, cs.last = headRow, headRow
	} else {
		cs.head, cs.last = 1, 1
	}
	for i, col := range cs.Columns {
		cs.heads[col.Heading] = &head{col: i + 1, column: col}
		if cs.head == 1 {
			if err := c.f.SetCellStr(cs.name, cell.ColumnName(i+1)+"1", col.Title()); err != nil {
				return err
			}
		}
	}
	cs.wide = len(cs.Columns)
	return nil
}

// headingFor adds a heading at the right, beyond everything that the sheet holds.
func (cs *copySheet) headingFor(c *copier, col *Column) error {
	cs.wide++
	at := cell.ColumnName(cs.wide) + strconv.Itoa(cs.head)
	if err := c.f.SetCellStr(cs.name, at, col.Title()); err != nil {
		return err
	}
	beside, err := c.f.GetCellStyle(cs.name, cell.ColumnName(cs.wide-1)+strconv.Itoa(cs.head))
	if err == nil && beside > 0 {
		err = c.f.SetCellStyle(cs.name, at, at, beside)
	}
	cs.heads[col.Heading] = &head{col: cs.wide, column: col}
	return err
}

// unchanged holds every filled cell of the old workbook against the new one.
func unchanged(old []*Grid, now []byte) error {
	grids, err := readWorkbook(now)
	if err != nil {
		return fmt.Errorf("the copy cannot be read again: %w", err)
	}
	for i, g := range old {
		if i >= len(grids) || grids[i].Name != g.Name || grids[i].Hidden != g.Hidden {
			return fmt.Errorf("the copy would change the sheet %s, so none is written; add the rows by hand", g.Name)
		}
		rows := map[int]*Row{}
		for j := range grids[i].Rows {
			rows[grids[i].Rows[j].N] = &grids[i].Rows[j]
		}
		for _, row := range g.Rows {
			for _, e := range row.Cells {
				if n := rows[row.N]; n == nil || n.Hidden != row.Hidden || *n.at(int(e.Col)) != e {
					return fmt.Errorf("the copy would change the cell %s, so none is written; add the rows by hand", cell.Ref{Sheet: g.Name, Row: row.N, Col: int(e.Col)})
				}
			}
		}
	}
	return nil
}

// known words what users call some elements of a workbook's parts.
var known = map[string]string{
	"AlternateContent": "buttons or drawings of newer spreadsheet programs", "customSheetView": "custom views", "customWorkbookView": "custom views",
	"sparkline": "sparklines", "conditionalFormatting": "conditional formats", "dataValidation": "drop-down lists and checks", "hyperlink": "links",
	"control": "buttons and form controls", "oleObject": "embedded objects", "drawing": "charts and pictures", "legacyDrawing": "notes and buttons",
	"ext": "features of newer spreadsheet programs", "tablePart": "tables", "pivotCache": "pivot tables", "definedName": "names", "protectedRange": "protected ranges",
	"fileRecoveryPr": "marks of a repaired file", "smartTag": "smart tags", "scenario": "scenarios", "webPublishItem": "web publishing",
}

// lost compares the parts of two workbooks: parts that are gone, and elements of which there are fewer than before. Blank cells, widths
// and the like, which are written in another way and mean the same, are left out.
func lost(before, after []byte) ([]string, error) {
	a, err := contents(before)
	if err != nil {
		return nil, err
	}
	b, err := contents(after)
	if err != nil {
		return nil, err
	}
	var out []string
	for _, part := range sortedKeys(a) {
		if b[part] == nil {
			if part != "xl/calcchain.xml" { // the order of calculation: made anew by every program
				out = append(out, "the part "+part+" of the workbook")
			}
			continue
		}
		for _, element := range sortedKeys(a[part]) {
			if lack := a[part][element] - b[part][element]; lack > 0 && !likewise[element] {
				what := known[element]
				if what == "" {
					what = "the element " + element
				}
				out = append(out, fmt.Sprintf("%s (%d in %s)", what, lack, part))
			}
		}
	}
	return out, nil
}

// likewise are elements that are written in another way and mean the same.
var likewise = map[string]bool{"row": true, "c": true, "v": true, "col": true, "cols": true, "s": true, "is": true, "t": true, "r": true, "rPr": true, "selection": true, "Default": true, "Override": true}

func sortedKeys[V any](m map[string]V) []string {
	out := make([]string, 0, len(m))
	for k := range m {
		out = append(out, k)
	}
	sort.Strings(out)
	return out
}

// contents counts the elements of every part of a workbook; a part that is not XML counts none.
func contents(data []byte) (map[string]map[string]int, error) {
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		return nil, err
	}
	out := map[string]map[string]int{}
	m := &meter{left: mostBytes, spare: mostElements + inCell*mostCells}
	for _, f := range z.File {
		n := strings.ToLower(f.Name)
		if strings.HasSuffix(n, "/") {
			continue
		}
		count := map[string]int{}
		out[n] = count
		if !strings.HasSuffix(n, ".xml") && !strings.HasSuffix(n, ".rels") {
			continue
		}
		if err := m.part(f, func(r metered) error { return countElements(r, count) }); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// countElements counts the elements of a part by name; one without attributes, text and elements says nothing and is left out.
func countElements(r metered, count map[string]int) error {
	d := &walker{Decoder: xml.NewDecoder(r), m: r.m}
	open := "" // the element just begun, if nothing of it was seen yet
	for {
		t, err := d.Token()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		switch t := t.(type) {
		case xml.StartElement:
			if open != "" {
				count[open]++
			}
			open = t.Name.Local
			if len(t.Attr) > 0 {
				count[open]++
				open = ""
			}
		case xml.CharData:
			if open != "" && len(bytes.TrimSpace(t)) > 0 {
				count[open]++
				open = ""
			}
		case xml.EndElement:
			open = ""
		}
	}
}
