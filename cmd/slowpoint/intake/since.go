package intake

import (
	"fmt"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Change is one difference from an earlier plan.
type Change struct {
	Product string // or "process Chill", "limit 57 to 21": what it is a row of
	What    string // "new", "gone", "not imported now", or the column, behind its step, face or point
	Before  string // as it stood there, with its unit; "" for a blank
	Now     string
	Was     string // the cell in the earlier plan; "" where that has none
	Cell    string // of their files or of the mapping: "Recipes.xlsx › Cook-chill!F17"; of what is gone, "was …", the place where it was
}

// String tells it in a line: "Lasagne: Thickness 45 mm → 50 mm (Recipes.xlsx › Cook-chill!F17)".
func (c Change) String() string {
	s := c.Product + ": " + c.What
	if c.Before+c.Now != "" {
		s += " " + orBlank(c.Before) + " → " + orBlank(c.Now)
	}
	if c.Cell != "" {
		s += " (" + c.Cell + ")"
	}
	return s
}

func orBlank(s string) string {
	if s == "" {
		return "blank"
	}
	return s
}

// keys are the columns that name a row of a sheet. Rows with the same names are told apart by their order; so are those of a sheet that
// is not listed, which are named by their first column.
var keys = map[string][]string{
	"Products": {"Product"}, "Layers": {"Product", "Layer"}, "Steps": {"Process", "Product", "Step"}, "Faces": {"Process", "Product", "Step", "Face"}, "Points": {"Product", "Point"},
	"Spread": {"Applies to", "Quantity"},
}

// nouns name what a row of a sheet belongs to, by its first column; a product needs none.
var nouns = map[string]string{"Products": "", "Layers": "", "Points": "", "Steps": "process ", "Faces": "process ", "Foods": "food ", "Courses": "course ",
	"Limits": "limit ", "Groups": "group ", "Tables": "table ", "Plan": "plan: ", "Spread": "spread of ", "Records": "record "}

// held is a value as it is compared.
type held struct {
	shown string  // as it stood, with its unit
	si    float64 // in the unit that the program computes in
	ok    bool    // si is known; otherwise the words are compared
}

// item is a row as it is compared.
type item struct {
	owner, what string         // "Lasagne"; "chill, top"
	first       string         // its first column, by key
	key         string         // all its names
	line        *workbook.Line // it was read, or stands in the mapping
	from        string         // of line: where an earlier import took it, as #From tells
	made        *Made          // or it was made
	sign        unit.Decimal   // of line
	r           *Result        // of made, and of line if that stands in the mapping
}

// value is a value of the row; false if the cell is blank.
func (it *item) value(c *workbook.Column) (held, bool) {
	if it.made != nil {
		v := it.made.value(c)
		if v == nil {
			return held{}, false
		}
		return v.held(), true
	}
	l := it.line
	if !l.Filled(c.Heading) {
		return held{}, false
	}
	e := l.Entry(c.Heading)
	if c.Quantity == nil {
		if e.Form == workbook.Date {
			return held{shown: l.Words(c.Heading)}, true
		}
		return held{shown: e.Text}, true
	}
	if v := l.Look(c.Heading); v != nil {
		return held{v.Typed, v.Computed, true}, true
	}
	if v, m := c.Quantity.Parse(e.Text, l.Unit(c.Heading), it.sign); m == nil {
		return held{v.Typed, v.Computed, true}, true
	}
	return held{shown: e.Text}, true
}

// words are those of a column; "" if it is blank.
func (it *item) words(c *workbook.Column) string {
	if it.made == nil {
		return it.line.Entry(c.Heading).Text
	}
	if v := it.made.value(c); v != nil {
		return v.Text
	}
	return ""
}

// ref is the cell of a value that was read, or its row if it is blank.
func (it *item) ref(c *workbook.Column) cell.Ref {
	if c != nil && it.line.Filled(c.Heading) {
		return it.line.At(c.Heading)
	}
	return it.line.Ref()
}

// at is where a value comes from, or the row if it is blank.
func (it *item) at(c *workbook.Column) string {
	if it.made == nil {
		ref := it.ref(c)
		if it.r == nil {
			return ref.String()
		}
		return it.r.Where(Place{File: -1, Sheet: ref.Sheet, Row: ref.Row, Col: ref.Col})
	}
	if v := it.made.value(c); v != nil {
		switch {
		case v.At.Row > 0 && v.At.Col > 0 && v.Const != "": // their word, or what it means, may have changed
			return it.r.Where(v.At) + ", by " + it.r.Mapping + " › " + v.Const
		case v.At.Row > 0 && v.At.Col > 0:
			return it.r.Where(v.At)
		case v.Const != "":
			return it.r.Mapping + " › " + v.Const
		}
	}
	return it.r.Where(it.made.Record)
}

// value finds the filled value of a column; nil if there is none.
func (m *Made) value(c *workbook.Column) *Value {
	for i := range m.Values {
		if v := &m.Values[i]; v.Column == c && v.Text != "" {
			return v
		}
	}
	return nil
}

// stock is a plan as it is compared: its rows by sheet, in order and by their names.
type stock struct {
	inOrder map[*workbook.Sheet][]*item
	by      map[string]*item
	count   map[string]int // rows of the same names
}

func newStock() *stock {
	return &stock{inOrder: map[*workbook.Sheet][]*item{}, by: map[string]*item{}, count: map[string]int{}}
}

func (s *stock) add(sheet *workbook.Sheet, it *item) {
	named, whole := keys[sheet.Name], []string{sheet.Name}
	if named == nil {
		named = []string{sheet.Columns[0].Heading}
	}
	var what []string
	for i, h := range named {
		v := it.words(sheet.Column(h))
		whole = append(whole, workbook.Key(v))
		switch {
		case i == 0:
			it.owner, it.first = nouns[sheet.Name]+v, workbook.Key(v)
		case v != "":
			what = append(what, v)
		}
	}
	if it.what = strings.Join(what, ", "); sheet.Name == "Spread" { // each quantity stands for itself
		it.owner, it.what = it.owner+", "+it.what, ""
		it.first = workbook.Key(it.owner)
	}
	key := strings.Join(whole, "\x1f")
	s.count[key]++
	n := s.count[key]
	it.key = key + "\x1f" + strconv.Itoa(n)
	if n > 1 || slices.Contains([]string{"Courses", "Tables"}, sheet.Name) {
		it.what = strings.TrimSpace(fmt.Sprintf("%s row %d", it.what, n))
	}
	s.by[it.key] = it
	s.inOrder[sheet] = append(s.inOrder[sheet], it)
}

// Since compares what the spreadsheets gave with an earlier plan, a workbook or a folder: what is new, what is gone, and every value
// that changed. Two spellings of one value in the unit that the program computes in, such as 1 h and 60 min, are no change. The error
// says in one sentence why the plan cannot be read.
func Since(name string, r *Result) ([]Change, error) {
	t, err := workbook.ReadTables(name, "plan", workbook.Sheets)
	if err != nil {
		return nil, err
	}
	if t.Grid("Products") == nil {
		return nil, fmt.Errorf("%s: this is not a plan: it has no visible sheet Products; give the plan that was written by an earlier import", filepath.Base(name))
	}
	return compare(stockOf(t), r.stock(), r), nil
}

// Between compares two plans, workbooks or folders, as Since does; the cells are those of the plans.
func Between(old, now string) ([]Change, error) {
	var read [2]*stock
	for i, name := range []string{old, now} {
		t, err := workbook.ReadTables(name, "plan", workbook.Sheets)
		if err != nil {
			return nil, err
		}
		read[i] = stockOf(t)
	}
	return compare(read[0], read[1], &Result{}), nil
}

// origins are the cells of the column #From of a sheet of an earlier plan, by row, without the checksum.
func origins(g *workbook.Grid) map[int]string {
	if g == nil {
		return nil
	}
	col, out := 0, map[int]string{}
	for i := range g.Rows {
		for _, e := range g.Rows[i].Cells {
			switch {
			case col == 0 && e.Text == workbook.FromHeading:
				col = int(e.Col)
			case int(e.Col) == col:
				out[g.Rows[i].N], _, _ = strings.Cut(e.Text, " · ")
			}
		}
	}
	return out
}

// refused are the products of the result that are not imported, by key, with the first cell at fault.
func (r *Result) refused() map[string]string {
	out := map[string]string{}
	for _, n := range r.Not {
		if k := workbook.Key(n.Product); k != "" && out[k] == "" {
			at := n.At
			if at.Row == 0 && at.Col == 0 {
				at = n.Record
			}
			out[k] = r.Where(at)
		}
	}
	return out
}

// stockOf is an earlier plan as it is compared.
func stockOf(t *workbook.Tables) *stock {
	s := newStock()
	sign := unit.Unsure
	for _, l := range t.Lines("Plan") {
		if isDecimalSign(l) {
			sign = map[string]unit.Decimal{"point": unit.Point, "comma": unit.Comma}[workbook.Key(l.Entry("Value").Text)]
		}
	}
	for _, sheet := range workbook.Sheets {
		from := origins(t.Grid(sheet.Name))
		for _, l := range t.Lines(sheet.Name) {
			s.line(sheet, l, sign, nil, from[l.Ref().Row])
		}
	}
	return s
}

// line adds a row that was read; how numbers are written is not a row of the sheet Plan.
func (s *stock) line(sheet *workbook.Sheet, l *workbook.Line, sign unit.Decimal, r *Result, from string) {
	if sheet.Name != "Plan" || !isDecimalSign(l) {
		s.add(sheet, &item{line: l, sign: sign, r: r, from: from})
	}
}

// stock is the result as it is compared, in the order in which it is written.
func (r *Result) stock() *stock {
	s := newStock()
	for _, sheet := range workbook.Sheets {
		for _, l := range r.Copied[sheet.Name] {
			if sound(sheet, l) {
				s.line(sheet, l, unit.Unsure, r, "")
			}
		}
	}
	for i := range r.Made {
		s.add(r.Made[i].Sheet, &item{made: &r.Made[i], r: r})
	}
	return s
}

// held is a made value as it is compared.
func (v *Value) held() held {
	q := v.Column.Quantity
	if q == nil {
		return held{shown: v.Text}
	}
	u := unitOf(v)
	if u == nil && q.Plain() {
		u = &q.Units[0]
	}
	if x, m := q.Parse(v.Text, u, unit.Point); m == nil {
		return held{x.Typed, x.Computed, true}
	}
	return held{shown: v.Text}
}

// same tells whether two values mean the same.
func same(c *workbook.Column, a, b held) bool {
	switch {
	case a.ok && b.ok:
		return a.si == b.si
	case c.Choices != nil || c.Heading == "Process": // names are compared so everywhere
		return workbook.Key(a.shown) == workbook.Key(b.shown)
	}
	return a.shown == b.shown
}

// parts name what the further rows of an owner are.
var parts = map[string]string{"Steps": "step ", "Faces": "face ", "Points": "point ", "Layers": "layer "}

// compare lists what changed, in the order of the sheets; what is gone comes last in each.
func compare(old, now *stock, r *Result) []Change {
	var out []Change
	refused := r.refused()
	fresh, lost := map[string]bool{}, map[string]bool{} // products, by key
	for _, s := range workbook.Sheets {
		before, after := owners(old.inOrder[s]), owners(now.inOrder[s])
		told := map[string]bool{}
		found := map[*item]bool{}
		for _, it := range now.inOrder[s] {
			was := old.by[it.key]
			if was != nil {
				found[was] = true
				out = append(out, changes(s, was, it)...)
				continue
			}
			if s.Name == "Products" {
				fresh[it.first] = true
			}
			out = append(out, only(s, it, "new", before, told, fresh)...)
		}
		told = map[string]bool{}
		for _, it := range old.inOrder[s] {
			if found[it] {
				continue
			}
			if s.Name == "Products" {
				lost[it.first] = true
				if at := refused[it.first]; at != "" {
					out = append(out, Change{Product: it.owner, What: "not imported now", Cell: at})
					continue
				}
			}
			out = append(out, only(s, it, "gone", after, told, lost)...)
		}
		if s.Name == "Steps" {
			out = append(out, reordered(old, now, s)...)
		}
	}
	return out
}

// owners are the first columns of rows, by key.
func owners(items []*item) map[string]bool {
	out := map[string]bool{}
	for _, it := range items {
		out[it.first] = true
	}
	return out
}

// only tells of a row that the other plan lacks: once an owner if that has none of the owner's, and not at all for the rows of a product
// that is new or gone itself.
func only(s *workbook.Sheet, it *item, word string, other, told, products map[string]bool) []Change {
	switch {
	case s.Name != "Products" && products[it.first] && nouns[s.Name] != "food ":
		return nil
	case told[it.first]:
		return nil
	}
	c := Change{Product: it.owner, What: word}
	if other[it.first] {
		c.What = strings.TrimSpace(parts[s.Name] + it.what + " " + word)
	} else {
		told[it.first] = true
	}
	if word == "gone" && it.line != nil {
		c.Was = it.line.Ref().String()
	}
	if it.r != nil || word == "new" {
		c.Cell = it.at(nil)
	} else if it.from != "" {
		c.Cell = "was " + it.from
	}
	return []Change{c}
}

// changes lists the values that differ between two rows of the same names.
func changes(s *workbook.Sheet, old, now *item) []Change {
	var out []Change
	if name := s.Columns[0]; s.Name == "Products" && old.words(name) != now.words(name) {
		out = append(out, Change{Product: now.owner, What: "the name is written otherwise", Before: old.words(name), Now: now.words(name), Cell: now.at(name)})
	}
	for _, c := range s.Columns {
		a, was := old.value(c)
		b, is := now.value(c)
		if slices.Contains(keys[s.Name], c.Heading) || was == is && (!was || same(c, a, b)) {
			continue
		}
		what := c.Heading
		if now.what != "" {
			what = now.what + ": " + what
		}
		out = append(out, Change{Product: now.owner, What: what, Before: a.shown, Now: b.shown, Was: old.ref(c).String(), Cell: now.at(c)})
	}
	return out
}

// reordered tells of processes whose steps stand in another order than before.
func reordered(old, now *stock, s *workbook.Sheet) []Change {
	order := func(of, with *stock) (first []string, names map[string][]string, at map[string]*item) {
		names, at = map[string][]string{}, map[string]*item{}
		for _, it := range of.inOrder[s] {
			if with.by[it.key] == nil {
				continue
			}
			if at[it.first] == nil {
				at[it.first] = it
				first = append(first, it.first)
			}
			names[it.first] = append(names[it.first], it.what)
		}
		return first, names, at
	}
	_, before, _ := order(old, now)
	first, after, at := order(now, old)
	var out []Change
	for _, p := range first {
		if !slices.EqualFunc(before[p], after[p], func(a, b string) bool { return workbook.Key(a) == workbook.Key(b) }) {
			out = append(out, Change{Product: at[p].owner, What: "order of steps", Before: strings.Join(before[p], "; "), Now: strings.Join(after[p], "; "), Cell: at[p].at(nil)})
		}
	}
	return out
}
