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

// importer is an import while it runs.
type importer struct {
	m        *Mapping
	files    []*workbook.Spreadsheet
	r        *Result
	opened   [][]*opened // of each source, in the order of the files
	problems cell.Errors
	products map[string]Place // where each product is
	made     map[string]int   // index in Result.Made of rows that several records may make
	fresh    []string         // keys of made that the record at hand added
	routes   map[string]route // of each process that records name, by key
	labels   map[*workbook.Grid]string
	shares   map[*target]*share // of each row that records may make

	// of the source at hand
	values []Value // of each slot
	filled []bool  // of each slot
	some   []bool  // of each target: a mapped cell is filled
	key    []byte
}

// Import makes the rows of a plan of their spreadsheets. Everything that is wrong is told in the result; if the mapping itself cannot be
// trusted, nothing is made.
func (m *Mapping) Import(files []*workbook.Spreadsheet) *Result {
	r := &Result{Mapping: m.t.Name, SHA256: m.t.SHA256, Copied: m.copied}
	for _, f := range files {
		r.Files = append(r.Files, File{f.Name, f.SHA256})
	}
	im := &importer{m: m, files: files, r: r, products: map[string]Place{}, made: map[string]int{}, routes: map[string]route{}, labels: map[*workbook.Grid]string{}, shares: map[*target]*share{}}
	if m.lost {
		r.Problems = im.everything()
		return r
	}
	im.find()
	for _, s := range m.sources {
		r.Counts = append(r.Counts, Count{Source: s.name})
	}
	for f := range files {
		im.decimals(f)
		for i, s := range m.sources {
			im.begin(s)
			for _, o := range im.opened[i] {
				if o.file == f {
					o.each(func(rec record) { im.record(o, rec, &r.Counts[i]) })
					o.tell()
					o.leftOutside()
					if o.records == 0 && o.fault == nil && s.fault == nil && !o.hidden && len(o.grid.Rows) > 0 {
						im.problems.Add(noRecords.problem(cell.Ref{Sheet: o.label}, cell.Warning, "", ""))
					}
				}
			}
		}
	}
	for i, s := range m.sources {
		im.lackingLabels(s, im.opened[i])
		im.lackingParts(s)
		im.unusedRules(s, im.opened[i])
	}
	im.unusedWords()
	r.Problems = im.everything()
	return r
}

// everything is what is wrong with the mapping and with their files, in order.
func (im *importer) everything() cell.Errors {
	var all cell.Errors
	type same struct {
		at  cell.Ref
		msg string
	}
	seen := map[same]bool{} // two sources may read one sheet
	for _, list := range []cell.Errors{im.m.t.Problems(), im.m.problems, im.problems} {
		for _, e := range list {
			if k := (same{e.At, e.Msg}); !seen[k] {
				seen[k] = true
				all.Add(e)
			}
		}
	}
	order := append([]string(nil), im.m.t.Sheets()...)
	for i, f := range im.files {
		order = append(order, f.Name)
		for _, g := range f.Sheets {
			order = append(order, im.label(i, g))
		}
	}
	all.Sort(order)
	return all
}

// label names a sheet of theirs: "Recipes.xlsx › Cook-chill", or the file for CSV.
func (im *importer) label(file int, g *workbook.Grid) string {
	if l, ok := im.labels[g]; ok {
		return l
	}
	l := im.files[file].Name
	if g.Name != "" {
		l += " › " + g.Name
	}
	im.labels[g] = l
	return l
}

// find finds the sheets of every source.
func (im *importer) find() {
	read := map[*workbook.Grid]bool{}
	for _, s := range im.m.sources {
		var list []*opened
		file := false
		var names []string
		for f, sheet := range im.files {
			if !matches(s.file, sheet.Name) {
				continue
			}
			file = true
			for _, g := range sheet.Sheets {
				switch {
				case !matches(s.sheet, g.Name) || g.Name == "" && s.sheet != "":
					names = append(names, g.Name)
				case g.Hidden && (s.sheet == "" || len(g.Rows) == 0 && strings.Contains(s.sheet, "*")):
				default:
					if g.Hidden && !strings.Contains(s.sheet, "*") {
						im.problems.Add(sheetHidden.problem(s.line.At("Sheet"), cell.Fault, "Sheet", s.sheet, sheet.Name))
					}
					read[g] = true
					list = append(list, im.open(s, f, g))
				}
			}
		}
		im.lacksLabels(s, list)
		im.opened = append(im.opened, list)
		switch {
		case len(list) > 0 || s.fault != nil && (s.name == "" || s.layout == ""):
		case !file && s.file != "":
			var given []string
			for _, f := range im.files {
				given = append(given, f.Name)
			}
			im.problems.Add(fileUnknown.problem(s.line.At("File"), cell.Fault, "File", s.file, strings.Join(given, ", ")))
		case file && s.sheet != "" && onlyCSV(names):
			im.problems.Add(sheetOfCSV.problem(s.line.At("Sheet"), cell.Fault, "Sheet", s.sheet))
		case file && s.sheet != "":
			in := "the files given"
			if s.file != "" {
				in = s.file
			}
			im.problems.Add(theirsUnknown.problem(s.line.At("Sheet"), cell.Fault, "Sheet", s.sheet, in, workbook.Meant(s.sheet, names), strings.Join(names, ", ")))
		default:
			im.problems.Add(sheetNoFile.problem(s.line.At("Source"), cell.Fault, "", ""))
		}
	}
	im.unread(read)
}

// onlyCSV tells whether sheets are those of CSV files only, which have no names.
func onlyCSV(names []string) bool {
	for _, n := range names {
		if n != "" {
			return false
		}
	}
	return len(names) > 0
}

// unread tells of files and sheets that no source reads.
func (im *importer) unread(read map[*workbook.Grid]bool) {
	for f, file := range im.files {
		any := false
		for _, g := range file.Sheets {
			any = any || read[g]
			if g.Hidden && !read[g] {
				im.problems.Add(hiddenSheet.problem(cell.Ref{Sheet: im.label(f, g)}, cell.Warning, "", ""))
			}
		}
		if !any {
			im.problems.Add(fileUnread.problem(cell.Ref{Sheet: file.Name}, cell.Warning, "", ""))
			continue
		}
		for _, g := range file.Sheets {
			if !read[g] && !g.Hidden && len(g.Rows) > 0 {
				im.problems.Add(sheetUnread.problem(cell.Ref{Sheet: im.label(f, g)}, cell.Note, "", ""))
			}
		}
	}
}

// decimals finds the decimal sign that a file shows in the numbers that are mapped, for the sources that do not say it.
func (im *importer) decimals(file int) {
	var first [3]cell.Ref
	var typed [3]string
	var unsure []*opened
	for _, list := range im.opened {
		for _, o := range list {
			if o.file != file || o.decimal != unit.Unsure || o.fault != nil || o.hidden {
				continue
			}
			unsure = append(unsure, o)
			o.each(func(record) {
				for _, m := range o.src.mapped {
					f := &o.cells[m.where]
					if m.to.column().Quantity == nil || f.e.Kind != workbook.Text || !strings.ContainsAny(f.e.Text, ".,") {
						continue
					}
					if d := unit.Evidence(f.e.Text); d != unit.Unsure && first[d].Row == 0 {
						first[d], typed[d] = o.ref(f.row, f.col), f.e.Text
					}
				}
			})
		}
	}
	point, comma := first[unit.Point].Row > 0, first[unit.Comma].Row > 0
	d := unit.Unsure
	switch {
	case point && comma:
		im.problems.Add(decimalMixed.problem(first[unit.Comma], cell.Warning, "", typed[unit.Comma], first[unit.Point].String()))
	case point:
		d = unit.Point
	case comma:
		d = unit.Comma
	}
	for _, o := range unsure {
		if d != unit.Unsure {
			o.decimal, o.shown = d, first[d].String()
		}
	}
}

// begin makes room for the records of a source.
func (im *importer) begin(s *source) {
	im.values, im.filled = make([]Value, s.slots), make([]bool, s.slots)
	im.some = make([]bool, len(s.rows))
}

// record makes the rows of one record, leaves it out, or tells why it cannot be imported.
func (im *importer) record(o *opened, rec record, n *Count) {
	n.Read++
	o.records++
	if f, more := o.src.fault, o.src.more; f != nil || o.fault != nil {
		if f == nil {
			f, more = o.fault, 0
		}
		im.refuseAll(o, rec, f, more)
		clear(im.filled)
		last := &im.r.Not[len(im.r.Not)-1]
		last.Product, last.Told = o.product(im), true
		n.Not++
		return
	}
	if reason, out := o.leftOut(); out && !o.hidden {
		im.r.Left = append(im.r.Left, Left{rec.at, reason})
		n.LeftOut++
		return
	}
	from := len(im.r.Not)
	for i := range im.filled {
		im.filled[i] = false
	}
	for i := range im.some {
		im.some[i] = false
	}
	if o.hidden {
		rec.hidden = "The sheet"
	}
	if rec.hidden != "" {
		im.refuse(o, rec, rec.at, nil, "", hiddenRow, rec.hidden)
	} else {
		im.whole(o, rec)
		im.mapped(o, rec)
		im.constants(o, rec)
		im.rows(o, rec, from)
	}
	if len(im.r.Not) == from {
		n.Imported++
		o.noteLacks(im.r.Where(rec.at))
		im.noteShares(o, rec)
		return
	}
	n.Not++
	product := o.product(im)
	for i := from; i < len(im.r.Not); i++ {
		im.r.Not[i].Product = product
	}
}

// product is the name of the record's product as far as it can be read.
func (o *opened) product(im *importer) string {
	t := o.src.products()
	if t == nil || t.slots[0] == nil {
		return ""
	}
	if im.filled[t.from] {
		return im.values[t.from].Text
	}
	if m := t.slots[0].mapped; m != nil && o.cells[m.where].e != nil {
		return o.cells[m.where].e.Text
	}
	return ""
}

// refuse tells of a fault of a record.
func (im *importer) refuse(o *opened, rec record, at Place, c *workbook.Column, typed string, s saying, args ...string) {
	n := NotImported{Record: rec.at, At: at, Typed: typed, Why: fill(s.msg, args), Mend: fill(s.hint, args)}
	if c != nil {
		n.Column = c.Heading
	}
	im.r.Not = append(im.r.Not, n)
}

// refuseAll tells that a record is not imported because something is wrong with its sheet or the mapping.
func (im *importer) refuseAll(o *opened, rec record, f *cell.Error, more int) {
	also := ""
	if more > 0 {
		also = fmt.Sprintf(", in %d cells", more+1)
	}
	what := f.Msg
	if f.Typed != "" {
		what = fmt.Sprintf("%q %s", f.Typed, f.Msg)
	}
	s := saying{"{1}{2}: {3}", "{4}"}
	im.refuse(o, rec, rec.at, nil, "", s, f.At.String(), also, what, f.Hint)
}

// leftOut holds the record against the rules of the mapping.
func (o *opened) leftOut() (reason string, out bool) {
	for _, r := range o.src.rules {
		if out && r.used {
			continue
		}
		fits := false
		if o.src.wheres[r.where].kind == byAnything {
			fits = o.anyCell(r.fits)
		} else {
			fits = r.fits(o.cells[r.where].e)
		}
		if r.used = r.used || fits; fits && !out {
			reason, out = r.reason, true
		}
	}
	return reason, out
}

// fits tells whether a cell is as the rule says.
func (r *rule) fits(e *workbook.Entry) bool {
	switch r.when {
	case whenBlank:
		return e.Kind == workbook.Blank
	case whenFilled:
		return e.Kind != workbook.Blank
	case whenStruck:
		return e.Struck
	case whenIs:
		return len(e.Text) <= 4*len(r.word)+8 && workbook.Key(e.Text) == r.word
	case whenStarts:
		return e.Kind != workbook.Blank && strings.HasPrefix(workbook.Key(e.Text), r.word)
	}
	return e.Kind != workbook.Blank && strings.HasSuffix(workbook.Key(e.Text), r.word)
}

// whole tells what is wrong with the record as a whole: merged cells, cells beyond the headings of a CSV file.
func (im *importer) whole(o *opened, rec record) {
	for _, b := range o.merged {
		if rec.at.Row >= b.Top && rec.at.Row <= b.Bottom || rec.at.Row == 0 && rec.at.Col >= b.Left && rec.at.Col <= b.Right {
			at := Place{File: o.file, Sheet: o.grid.Name, Row: b.Top, Col: b.Left}
			im.refuse(o, rec, at, nil, "", mergedCells, fmt.Sprintf("%s%d:%s%d", cell.ColumnName(b.Left), b.Top, cell.ColumnName(b.Right), b.Bottom))
		}
	}
	if o.grid.CSV && o.src.layout == rowLayout && o.width > 0 {
		e := &o.row.Cells[len(o.row.Cells)-1]
		if int(e.Col) > o.width {
			im.refuse(o, rec, Place{File: o.file, Row: o.row.N, Col: int(e.Col)}, nil, e.Text, beyondHead)
		}
	}
}

// mapped takes the values of the mapped cells.
func (im *importer) mapped(o *opened, rec record) {
	for i, m := range o.src.mapped {
		f := &o.cells[m.where]
		if f.twice.row > 0 {
			im.refuse(o, rec, Place{o.file, o.grid.Name, f.twice.row, f.twice.col}, m.to.column(), "", labelTwice, f.label,
				o.ref(f.labelAt.row, f.labelAt.col).String(), o.ref(f.twice.row, f.twice.col).String(), example[o.src.layout])
			continue
		}
		if f.e.Kind == workbook.Blank {
			continue
		}
		at := Place{o.file, o.grid.Name, f.row, f.col}
		c := m.to.column()
		if !o.usable(im, rec, i, f, at, c) {
			continue
		}
		if m.words != nil {
			if s := im.meaning(m, o.grid.Shown(f.e)); s != nil {
				im.say(o, rec, m, s, at, f.e)
				continue
			}
		}
		im.take(o, rec, i, m, f, at)
	}
}

// usable tells whether a form's cell is none of the kinds that are never used, and tells of those.
func (o *opened) usable(im *importer, rec record, i int, f *found, at Place, c *workbook.Column) bool {
	if f.e.Struck {
		im.refuse(o, rec, at, c, o.grid.Shown(f.e), struckCell)
		return false
	}
	switch {
	case f.e.Kind == workbook.Broken: // an error of the spreadsheet: no result is used
	case f.e.Linked:
		o.count(linkedCells, o.src.mapped[i].where, o.ref(f.row, f.col), "", "")
	case f.e.Formula && f.e.Kind != workbook.NoStored:
		o.count(formulaCells, o.src.mapped[i].where, o.ref(f.row, f.col), "", "")
	}
	if f.row == 0 || o.src.layout == rowLayout || o.src.layout == columnLayout {
		return true
	}
	if r := o.grid.Row(f.row); r != nil && r.Hidden {
		im.refuse(o, rec, at, c, o.grid.Shown(f.e), hiddenRow, fmt.Sprintf("Row %d", f.row))
		return false
	}
	return true
}

// take reads a cell as its column does.
func (im *importer) take(o *opened, rec record, i int, m *mapped, f *found, at Place) {
	c := m.to.column()
	h := &o.units[i]
	if f.label != "" && (!h.known || h.heading != f.label) {
		h = o.unitOf(i, f.label, o.ref(f.labelAt.row, f.labelAt.col))
	}
	if h.fault != nil {
		im.refuse(o, rec, at, c, o.grid.Shown(f.e), saying{"{1}", "{2}"}, h.fault.Error(), h.fault.Hint)
		return
	}
	if m.words != nil && c.Quantity == nil {
		im.refuse(o, rec, at, c, o.grid.Shown(f.e), noWord, m.words.name, workbook.Meant(f.e.Text, m.words.theirs()))
		return
	}
	place := o.ref(f.row, f.col)
	t, e := c.Take(f.e, workbook.Under{At: place, Grid: o.grid, Unit: h.unit, Decimal: o.decimal})
	if e != nil {
		im.notTaken(o, rec, h, m, at, e)
		return
	}
	if o.shown != "" && f.e.Kind == workbook.Text && c.Quantity != nil && strings.ContainsAny(f.e.Text, ".,") && unit.Ambiguous(f.e.Text) {
		o.count(signedCells, m.where, place, f.e.Text, strconv.FormatFloat(t.Value.Computed, 'g', 7, 64)+" "+c.Quantity.Units[0].Name())
	}
	v := Value{Column: c, At: at}
	v.set(f.e, t, h.unit, o.decimal, false)
	im.put(o, rec, m.to, v)
}

// notTaken tells why a column does not take a cell; that a heading lacks its unit is told there too.
func (im *importer) notTaken(o *opened, rec record, h *headUnit, m *mapped, at Place, e *cell.Error) {
	c := m.to.column()
	why := saying{"{1}", "{2}"}
	mend := strings.ReplaceAll(e.Hint, unit.SignItem, "Decimal sign in the sheet Sources of the mapping")
	switch {
	case strings.HasPrefix(e.Msg, unit.NoUnit):
		mend = fill(headNoUnit.hint, []string{c.Heading, m.line.Ref().String()}) + ", or a unit behind the number"
		if !h.told {
			h.told = true
			head := o.heads[m.where]
			if f := &o.cells[m.where]; h.heading != "" && head.text == "" {
				head = heading{h.heading, o.ref(f.labelAt.row, f.labelAt.col)}
			}
			if head.text == "" {
				head.at = m.line.At("Unit")
			}
			im.problems.Add(headNoUnit.problem(head.at, cell.Fault, "", head.text, c.Heading, m.line.Ref().String()))
		}
	case m.words != nil:
		mend += "; or add it to the list " + m.words.name + " of the sheet Words"
	}
	im.refuse(o, rec, at, c, e.Typed, why, e.Msg, mend)
}

// say fills what a word means.
func (im *importer) say(o *opened, rec record, m *mapped, s *said, at Place, e *workbook.Entry) {
	s.word.used = true
	typed := o.grid.Shown(e)
	if s.fault != nil {
		im.refuse(o, rec, at, m.to.column(), typed, wordRefused, s.fault.Typed, s.at, s.fault.Msg, s.fault.Hint)
		return
	}
	if s.self != nil {
		v := *s.self
		v.At = at
		im.put(o, rec, m.to, v)
	}
	for _, w := range s.word.ours {
		if w.sheet == nil || w.blank {
			continue
		}
		v := w.value
		v.At = at
		im.put(o, rec, slot{o.src.target(w.sheet, m.to.row.part, nil), w.col}, v)
	}
}

// theirs lists the words of a list.
func (list *wordList) theirs() []string {
	out := make([]string, len(list.inOrder))
	for i, w := range list.inOrder {
		out[i] = w.theirs
	}
	return out
}

// put fills a place of the plan.
func (im *importer) put(o *opened, rec record, to slot, v Value) {
	i := to.index()
	if im.filled[i] {
		im.refuse(o, rec, v.At, v.Column, "", filledTwice, v.Column.Heading, im.by(&im.values[i]), im.by(&v))
		return
	}
	im.values[i], im.filled[i] = v, true
	im.some[to.row.n] = true
}

// by words the cell that a value comes from: theirs or, of a constant, that of the mapping.
func (im *importer) by(v *Value) string {
	if v.At.Row == 0 && v.Const != "" {
		return v.Const
	}
	return im.where(v.At)
}

// constants fills what the mapping says once for all records, in the rows that have a filled cell or only constants.
func (im *importer) constants(o *opened, rec record) {
	for _, k := range o.src.constants {
		if k.when >= 0 && o.cells[k.when].e.Kind == workbook.Blank {
			continue
		}
		i := k.to.index()
		v := k.value
		if im.filled[i] {
			im.refuse(o, rec, rec.at, v.Column, "", filledTwice, v.Column.Heading, im.by(&im.values[i]), v.Const)
			continue
		}
		v.At = Place{File: o.file}
		im.values[i], im.filled[i] = v, true
	}
}

// rows makes the rows of a record if nothing of it is at fault.
func (im *importer) rows(o *opened, rec record, from int) {
	if !im.any(o) {
		if len(im.r.Not) == from {
			im.refuse(o, rec, rec.at, nil, "", nothingFilled)
		}
		return
	}
	for k, t := range o.src.rows {
		if im.makes(o, k) {
			im.complete(o, rec, t)
		}
	}
	if len(im.r.Not) > from {
		return
	}
	if p := o.src.products(); p != nil {
		name := &im.values[p.from]
		key := workbook.Key(name.Text)
		if first, known := im.products[key]; known {
			im.refuse(o, rec, name.At, name.Column, name.Text, productTwice, im.where(first))
			return
		}
		defer func() {
			if len(im.r.Not) == from {
				im.products[key] = name.At
			}
		}()
	}
	was := len(im.r.Made)
	im.fresh = im.fresh[:0]
	for k, t := range o.src.rows {
		if im.makes(o, k) {
			im.make(o, rec, t)
		}
	}
	if len(im.r.Not) == from {
		im.sameRoute(o, rec)
	}
	if len(im.r.Not) > from { // taken back, so that a later record may make them
		im.r.Made = im.r.Made[:was]
		for _, key := range im.fresh {
			delete(im.made, key)
		}
	}
}

// route is the steps that a process was made of.
type route struct {
	at    Place    // the record that made them first
	steps []string // names of its rows of Steps and Faces, in order
}

// sameRoute holds the steps that a record makes against those that another one made of the same process: of a step whose cells are blank
// here a dish would take what stands there, without a word. A record that fills no step at all takes the process as it is.
func (im *importer) sameRoute(o *opened, rec record) {
	p := o.src.products()
	if p == nil {
		return
	}
	i := slices.Index(p.sheet.Columns, p.sheet.Column("Process"))
	if p.slots[i] == nil { // a process of its own
		return
	}
	now, own := route{at: rec.at}, false
	for k, t := range o.src.rows {
		if t.sheet.Name != "Steps" && t.sheet.Name != "Faces" || !im.makes(o, k) || im.said(t, "Product") != "" {
			continue
		}
		own = own || t.mapped
		now.steps = append(now.steps, strings.TrimSpace(im.said(t, "Step")+" "+im.said(t, "Face")))
	}
	if !own {
		return
	}
	name := im.values[p.from+i]
	was, known := im.routes[workbook.Key(name.Text)]
	switch {
	case !known:
		im.routes[workbook.Key(name.Text)] = now
	case !slices.EqualFunc(was.steps, now.steps, func(a, b string) bool { return workbook.Key(a) == workbook.Key(b) }):
		im.refuse(o, rec, rec.at, name.Column, name.Text, routeOther, strings.Join(now.steps, ", "), im.where(was.at), strings.Join(was.steps, ", "))
	}
}

// said is the text of a column of a row that the record makes; "" if it is blank or the sheet has none.
func (im *importer) said(t *target, heading string) string {
	i := slices.IndexFunc(t.sheet.Columns, func(c *workbook.Column) bool { return c.Heading == heading })
	if i >= 0 && im.filled[t.from+i] {
		return im.values[t.from+i].Text
	}
	return ""
}

// any tells whether any mapped cell is filled.
func (im *importer) any(o *opened) bool {
	mapped := false
	for k, t := range o.src.rows {
		mapped = mapped || t.mapped
		if im.some[k] {
			return true
		}
	}
	return !mapped
}

// makes tells whether the record makes a row: of Products always, of another sheet if one of its mapped cells is filled, or if only
// constants fill it.
func (im *importer) makes(o *opened, k int) bool {
	t := o.src.rows[k]
	if t.mapped {
		return im.some[k] || t.sheet.Name == "Products"
	}
	for i := range t.slots {
		if im.filled[t.from+i] {
			return true
		}
	}
	return t.sheet.Name == "Products"
}

// complete fills the needed columns that the record says elsewhere, and tells which are blank.
func (im *importer) complete(o *opened, rec record, t *target) {
	for i, c := range t.sheet.Columns {
		if !c.Needed || im.filled[t.from+i] {
			continue
		}
		if v, ok := im.standIn(o, t, c); ok {
			v.Column = c
			im.values[t.from+i], im.filled[t.from+i] = v, true
			continue
		}
		if im.told(rec, c.Heading) || o.src.standsIn(t, c) && (im.told(rec, "Product") || im.told(rec, "Process")) {
			continue
		}
		im.missing(o, rec, t.slots[i], c)
	}
}

// told tells whether a fault of the record in a column was told already.
func (im *importer) told(rec record, heading string) bool {
	for i := len(im.r.Not) - 1; i >= 0 && im.r.Not[i].Record == rec.at; i-- {
		if im.r.Not[i].Column == heading {
			return true
		}
	}
	return false
}

// missing tells of a needed cell that is blank.
func (im *importer) missing(o *opened, rec record, p *filler, c *workbook.Column) {
	mend := c.Missing()
	switch {
	case p != nil && p.mapped != nil:
		f := &o.cells[p.mapped.where]
		at := Place{o.file, o.grid.Name, f.row, f.col}
		if f.lacks {
			im.refuse(o, rec, rec.at, c, "", noLabel, c.Heading, o.src.wheres[p.mapped.where].text)
			return
		}
		im.refuse(o, rec, at, c, o.grid.Shown(f.e), neededBlank, c.Heading, mend)
	case p != nil && len(p.constants) > 0:
		k := p.constants[0]
		im.refuse(o, rec, rec.at, c, "", neededWhen, c.Heading, k.value.Const, o.src.wheres[max(k.when, 0)].text)
	case p != nil && p.byWords:
		im.refuse(o, rec, rec.at, c, "", neededWord, c.Heading)
	default:
		im.refuse(o, rec, rec.at, c, "", neededBlank, c.Heading, mend)
	}
}

// standIn is what the record says elsewhere of a needed column: its product, its process (by default the product's name), its part.
func (im *importer) standIn(o *opened, t *target, c *workbook.Column) (Value, bool) {
	if !o.src.standsIn(t, c) {
		return Value{}, false
	}
	p := o.src.products()
	switch c.Heading {
	case "Step", "Point":
		return Value{Text: t.part, At: Place{File: o.file}, Const: t.partAt}, true
	case "Process":
		for i, pc := range p.sheet.Columns {
			if pc.Heading == "Process" && im.filled[p.from+i] {
				return im.values[p.from+i], true
			}
		}
	}
	return im.values[p.from], im.filled[p.from]
}

// make makes a row. A row that an earlier record made too is made once.
func (im *importer) make(o *opened, rec record, t *target) {
	n := 0
	for i := range t.slots {
		if im.filled[t.from+i] {
			n++
		}
	}
	values := make([]Value, 0, n)
	for i := range t.slots {
		if im.filled[t.from+i] {
			values = append(values, im.values[t.from+i])
		}
	}
	if same := keys[t.sheet.Name]; same != nil && t.sheet.Name != "Products" { // of products there is one of a name, see rows
		key := im.keyOf(t, same)
		if before, known := im.made[key]; known {
			if c := differs(im.r.Made[before].Values, values); c != nil {
				i := slices.Index(t.sheet.Columns, c)
				at, typed := rec.at, ""
				if im.filled[t.from+i] {
					if v := &im.values[t.from+i]; v.At.Row > 0 {
						at, typed = v.At, v.Text
					}
				}
				im.refuse(o, rec, at, c, typed, stepOther, c.Heading, im.where(im.r.Made[before].Record), im.words(t, same))
			}
			return
		}
		im.made[key] = len(im.r.Made)
		im.fresh = append(im.fresh, key)
	}
	im.r.Made = append(im.r.Made, Made{Sheet: t.sheet, Part: t.part, Record: rec.at, Values: values})
}

// keyOf joins what tells a row from another.
func (im *importer) keyOf(t *target, columns []string) string {
	im.key = append(im.key[:0], t.sheet.Name...)
	for _, h := range columns {
		im.key = append(im.key, 0)
		im.key = append(im.key, workbook.Key(im.said(t, h))...)
	}
	return string(im.key)
}

// words names a row by what tells it from another.
func (im *importer) words(t *target, columns []string) string {
	var out []string
	for _, h := range columns {
		if w := im.said(t, h); w != "" {
			out = append(out, h+" "+w)
		}
	}
	return strings.Join(out, ", ")
}

// differs gives the first column in which two rows say something else; nil if there is none.
func differs(a, b []Value) *workbook.Column {
	for i := 0; i < len(a) || i < len(b); i++ {
		switch {
		case i >= len(a):
			return b[i].Column
		case i >= len(b):
			return a[i].Column
		case a[i].Column != b[i].Column, a[i].Unit != b[i].Unit, a[i].Text != b[i].Text && workbook.Key(a[i].Text) != workbook.Key(b[i].Text):
			return b[i].Column
		}
	}
	return nil
}

// where words a place of theirs.
func (im *importer) where(p Place) string {
	if p.Row == 0 && p.Col > 0 { // a whole column, which no cell.Ref tells
		return im.r.Where(p)
	}
	return im.r.Ref(p).String()
}

// count counts a cell of which one thing is told once a column.
func (o *opened) count(what, where int, at cell.Ref, typed, used string) {
	t := &o.tallies[what][where]
	if t.n++; t.n == 1 {
		t.first, t.typed, t.used = at, typed, used
	}
}

// tell tells what was counted.
func (o *opened) tell() {
	for what, s := range [...]saying{formulaCells: formulasUsed, linkedCells: linksUsed, signedCells: byEvidence} {
		for i := range o.tallies[what] {
			t := &o.tallies[what][i]
			if t.n == 0 {
				continue
			}
			more := " holds"
			if t.n > 1 {
				more = fmt.Sprintf(" and %d more of its column hold", t.n-1)
			}
			args := []string{more}
			if what == signedCells {
				if more = ""; t.n > 1 {
					more = fmt.Sprintf("; so are %d more of its column", t.n-1)
				}
				args = []string{t.used, o.shown, more}
			}
			o.im.problems.Add(s.problem(t.first, cell.Note, "", t.typed, args...))
		}
	}
}

// listsUnread are the lists of sources of which some sheet could not be read.
func (im *importer) listsUnread() map[*wordList]bool {
	out := map[*wordList]bool{}
	for i, s := range im.m.sources {
		lost := im.unsure(s, im.opened[i])
		for _, m := range s.mapped {
			if lost && m.words != nil {
				out[m.words] = true
			}
		}
	}
	return out
}

// unsure tells whether nobody knows what stands in the records of a source: some were not looked at, or there are none.
func (im *importer) unsure(s *source, list []*opened) bool {
	n := 0
	for _, o := range list {
		if n += o.records; o.fault != nil || o.hidden {
			return true
		}
	}
	return s.fault != nil || n == 0
}

// unusedRules warns of rules that fit no record.
func (im *importer) unusedRules(s *source, list []*opened) {
	if im.unsure(s, list) {
		return
	}
	for _, r := range s.rules {
		if !r.used {
			im.problems.Add(ruleNever.problem(r.line.At("Theirs"), cell.Warning, "", "", strings.TrimSpace(s.wheres[r.where].text+" "+r.when+" "+text(r.line, "Word"))))
		}
	}
}

// unusedWords warns of words that never occur and of lists that nobody uses.
func (im *importer) unusedWords() {
	unread := im.listsUnread()
	seen := map[*wordList]bool{}
	for _, l := range im.m.t.Lines("Words") {
		list := im.m.lists[workbook.Key(text(l, "List"))]
		if list == nil || seen[list] {
			continue
		}
		seen[list] = true
		if unread[list] { // nobody knows which of its words occur
			continue
		}
		if !list.used {
			im.problems.Add(listNever.problem(list.line.At("List"), cell.Warning, "List", list.name))
			continue
		}
		for _, w := range list.inOrder {
			if !w.used {
				im.problems.Add(wordNever.problem(w.line.At("Theirs"), cell.Warning, "Theirs", w.theirs))
			}
		}
	}
}
