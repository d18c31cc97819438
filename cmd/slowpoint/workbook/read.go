package workbook

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Read reads a plan: an .xlsx or .xlsm workbook (macros are never run), or a folder of UTF-8 .csv files named like the sheets.
// The error says in one sentence why nothing at all could be understood as a plan; everything else that is wrong is in Plan.Problems,
// and sound products are in Plan.Products whatever else is wrong.
func Read(name string) (*Plan, error) {
	grids, digest, err := load(name, "plan")
	if err != nil {
		return nil, err
	}
	p, err := understand(grids, &Plan{Name: filepath.Base(filepath.Clean(name)), SHA256: digest})
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return p, nil
}

// Look asks the system what lies under a name of the user's; the error is worded for the user.
func Look(name string) (os.FileInfo, error) {
	info, err := os.Stat(name)
	switch {
	case errors.Is(err, os.ErrNotExist):
		return nil, fmt.Errorf("%s: there is no such file or folder; look at the spelling of its name", name)
	case err != nil:
		return nil, fmt.Errorf("%s: it cannot be opened (%s)", name, Reason(err))
	}
	return info, nil
}

// load reads the sheets of a workbook, or of a folder of CSV files; what says which of our files it is, for the messages.
func load(name, what string) (grids []*Grid, digest string, err error) {
	info, err := Look(name)
	if err != nil {
		return nil, "", err
	}
	if !info.IsDir() && !info.Mode().IsRegular() {
		return nil, "", fmt.Errorf("%s: it is neither a file nor a folder", name)
	}
	if info.IsDir() {
		return readFolder(name)
	}
	data, digest, err := readFile(name, info.Size(), what)
	if err != nil {
		return nil, "", err
	}
	if grids, err = readWorkbook(data); err != nil {
		return nil, "", fmt.Errorf("%s: %w", name, err)
	}
	return grids, digest, nil
}

// readFile reads a file and its digest.
func readFile(name string, size int64, what string) (data []byte, digest string, err error) {
	if size > mostFile {
		return nil, "", fmt.Errorf("%s: the file is larger than %d MB, too large for a %s; take out pictures and sheets that do not belong to it, or divide it into several", name, mostFile>>20, what)
	}
	if data, err = os.ReadFile(name); err != nil {
		return nil, "", fmt.Errorf("%s: it cannot be read (%s)", name, Reason(err))
	}
	sum := sha256.Sum256(data)
	return data, hex.EncodeToString(sum[:]), nil
}

// reader is a plan while it is read.
type reader struct {
	plan      *Plan
	list      []*Sheet          // the sheets there may be
	made      map[string]*Grid  // sheets that the import made, by the name in MadeSheets; nil where there is no import
	tables    map[string]*table // by the name in Sheets
	grids     map[string]*Grid
	unread    map[string]cell.Errors // why a sheet, or a part of it, could not be read
	ignore    map[string]bool        // headings of the item Ignore columns, by key
	decimal   unit.Decimal
	stated    unit.Decimal           // what the sheet Plan says
	dateOrder string                 // what the sheet Plan says; "" for nothing
	shownBy   cell.Ref               // the cell that shows the decimal sign; the zero Ref if the sheet Plan says it
	formulas  map[cell.Ref]*formulas // by sheet and column
	inOrder   []*formulas
	wraps     formulas // tight wraps without a resistance
	offers    int      // of names for misspelt ones
	problems  cell.Errors

	height    []echoes // of the item Altitude
	foods     map[string]*food
	courses   map[string]*course
	processes map[string]*process
	order     []*process // processes in order of their first row
	products  []*product
	byName    map[string]*product
	users     map[string][]*product // by process
	families  map[string][]*product
	given     bool     // the row of Records was given to a command, and its columns may be looked for in the file
	loose     *product // of stages alone, for a record of food that no plan describes; nil: the plan has products
}

// formulas counts cells of which one thing is told once, such as those of a column that hold the stored result of a formula.
type formulas struct {
	first cell.Ref
	last  cell.Ref
	n     int
}

func (r *reader) add(e cell.Error) { r.problems.Add(e) }

// formula notes a stored result; a column of them is told once.
func (r *reader) formula(at cell.Ref) {
	k := cell.Ref{Sheet: at.Sheet, Col: at.Col}
	f := r.formulas[k]
	if f == nil {
		f = &formulas{}
		r.formulas[k] = f
		r.inOrder = append(r.inOrder, f)
	}
	f.count(at)
}

func (f *formulas) count(at cell.Ref) {
	if f.n == 0 {
		f.first = at
	}
	if f.last != at { // a cell may be read more than once
		f.n++
	}
	f.last = at
}

// sheets sorts the grids out: which sheet of the list each is.
func (r *reader) sheets(grids []*Grid) {
	r.grids, r.tables, r.ignore = map[string]*Grid{}, map[string]*table{}, map[string]bool{}
	inOrder := append([]*Grid(nil), grids...)
	sort.SliceStable(inOrder, func(i, j int) bool { // files have no order of their own
		return grids[0].CSV && rank(r.list, inOrder[i].Name) < rank(r.list, inOrder[j].Name)
	})
	for _, g := range inOrder {
		r.plan.Sheets = append(r.plan.Sheets, g.Name)
	}
	known := names(r.list, func(s *Sheet) string { return s.Name })
	imported := r.byImport(grids)
	for _, g := range grids {
		s := sheetOf(r.list, g.Name)
		at := cell.Ref{Sheet: g.Name}
		switch {
		case g.Hidden:
			r.add(hiddenSheet.problem(at, cell.Warning, "", g.Name))
		case s == nil && imported[g] != nil:
			r.keepMade(g, imported[g])
		case s == nil:
			hint := "the sheets of a plan are " + and(known)
			if n := nearest(g.Name, known); n != "" {
				hint = "did you mean " + n + "?"
			}
			r.add(unknownSheet.problem(at, cell.Warning, "", g.Name, hint))
		case r.grids[s.Name] != nil:
			e := doubledSheet.problem(at, cell.Fault, "", g.Name, r.grids[s.Name].Name, g.Name)
			r.add(e)
			r.unread[s.Name] = append(r.unread[s.Name], e)
		default:
			r.grids[s.Name] = g
		}
	}
}

// isPlan tells, in one sentence, why the sheets are no plan.
func (r *reader) isPlan() error {
	if r.grids["Products"] == nil {
		var got []string
		for i, name := range r.plan.Sheets {
			if i == 8 {
				got = append(got, "…")
				break
			}
			got = append(got, name)
		}
		return fmt.Errorf("this is not a plan: it has no visible sheet Products (its sheets are %s); slowpoint blank FILE.xlsx writes a plan to fill in", and(got))
	}
	return nil
}

// rank is the place of a sheet in a list; unknown ones come last.
func rank(list []*Sheet, name string) int {
	for i, s := range list {
		if Key(s.Name) == Key(name) {
			return i
		}
	}
	return len(list)
}

// blind tells whether no product could be read at all: then nothing can be held against their names.
func (r *reader) blind() bool { return len(r.products) == 0 }

// read reads the sheets in the order in which they need each other.
func (r *reader) read() {
	r.planItems()
	r.decimalSign()
	for _, s := range Sheets {
		if g := r.grids[s.Name]; g != nil && s.Name != "Plan" {
			r.tables[s.Name] = r.open(g, s)
		}
	}
	r.readOrigins() // before the cells of Steps are let go
	r.readFoods()
	r.readCourses()
	r.readProducts()
	for _, p := range r.products { // what such a sheet would say of a product nobody knows
		for _, name := range []string{"Plan", "Foods", "Steps", "Faces", "Spread"} {
			p.suffer(r.unread[name])
		}
	}
	r.readLayers()
	r.readSteps()
	r.readFaces()
	r.unusedCourses()
	r.readPoints()
	r.chains()
	r.readSpread()
	r.readRecords()
	r.readLimits()
	r.finish()
}

// finish tells of formulas, sorts the problems, and parts the sound products from the others.
func (r *reader) finish() {
	for _, f := range r.inOrder {
		s, args := formulaUsed, []string{}
		if f.n > 1 {
			s, args = formulasUsed, []string{strconv.Itoa(f.n - 1), strconv.Itoa(f.last.Row)}
		}
		r.add(s.problem(f.first, cell.Note, "", "", args...))
	}
	if w := &r.wraps; w.n > 0 {
		more := ""
		if w.n > 1 {
			more = ", here and in " + strconv.Itoa(w.n-1) + " more, down to " + w.last.String()
		}
		r.add(bareWrap.problem(w.first, cell.Note, "", model.TightWrap.Name, more))
	}
	if r.loose == nil && len(r.products) == 0 && len(r.unread["Products"]) == 0 {
		r.add(noProducts.problem(cell.Ref{Sheet: r.grids["Products"].Name}, cell.Fault, "", ""))
	}
	for _, p := range r.products {
		if len(p.because) == 0 {
			p.origins = r.plan.origins
			r.plan.Products = append(r.plan.Products, p.Product)
			continue
		}
		nc := NotCalculated{At: p.At, Product: p.Name, Because: once(p.because)}
		r.plan.origins.tell(nc.Because)
		nc.Because.Sort(r.plan.Sheets)
		if nc.Product == "" {
			nc.Product = fmt.Sprintf("(row %d)", p.At.Row)
		}
		r.plan.NotCalculated = append(r.plan.NotCalculated, nc)
	}
	r.plan.Problems = once(r.problems)
	r.plan.origins.tell(r.plan.Problems)
	r.plan.Problems.Sort(r.plan.Sheets)
}

// once drops repeats: the same words at the same place.
func once(es cell.Errors) cell.Errors {
	type same struct {
		at  cell.Ref
		msg string
	}
	seen := make(map[same]bool, len(es))
	out := es[:0:0]
	for _, e := range es {
		k := same{e.At, e.Msg}
		if !seen[k] {
			seen[k] = true
			out = append(out, e)
		}
	}
	return out
}

// planItems reads the sheet Plan.
func (r *reader) planItems() {
	s, g := SheetNamed("Plan"), r.grids["Plan"]
	if g == nil {
		return
	}
	t := r.open(g, s)
	r.tables["Plan"] = t
	if t == nil {
		return
	}
	seen := map[string]int{}
	for _, l := range t.lines {
		item := l.Words("Item")
		if item == "" {
			continue
		}
		known := ""
		for _, i := range PlanItems {
			name, _ := SplitHeading(i)
			typed, _ := SplitHeading(item)
			if Key(name) == Key(typed) {
				known = i
			}
		}
		if known == "" {
			l.Fault("Item", item, unknownItem, meant(item, PlanItems), strings.Join(PlanItems, ", "))
			r.ofAll(l, nearest(item, PlanItems))
			continue
		}
		if first := seen[known]; first > 0 {
			l.Fault("Item", item, duplicate, strconv.Itoa(first), "item")
			r.ofAll(l, known)
			continue
		}
		seen[known] = l.row.N
		value := l.Words("Value")
		r.plan.Items = append(r.plan.Items, Item{At: l.At("Value"), Item: item, Value: value})
		if value != "" {
			r.planItem(l, known, item, value)
		}
		r.ofAll(l, known)
		if known == altitude {
			r.height = l.readings
		}
	}
}

const altitude = "Altitude (m)"

// ofAll refuses all products for the faults of an item that all of them are calculated or read with.
func (r *reader) ofAll(l *Line, item string) {
	if item == altitude || item == "Decimal sign" || item == "Ignore columns" {
		r.unread["Plan"] = append(r.unread["Plan"], l.because...)
	}
}

// planItem uses the items that change how the plan is read or shown.
func (r *reader) planItem(l *Line, known, item, value string) {
	choice := func() string {
		for _, c := range planChoices[known] {
			if Key(c) == Key(value) {
				return c
			}
		}
		l.Fault("Value", value, notAnAnswer, known, strings.Join(planChoices[known], ", "))
		return ""
	}
	switch known {
	case altitude:
		if no := l.Entry("Value").differs(value); no != nil {
			l.refuse("Value", no)
			return
		}
		_, inside := SplitHeading(item)
		v, m := unit.Length.Parse(value, unit.Length.Unit(inside), unit.Point)
		if m != nil || v.Computed < -500 || v.Computed > 6000 {
			l.Fault("Value", value, notAltitude)
		} else {
			r.plan.AltitudeM = v.Computed
		}
	case "Paper":
		r.plan.Paper = choice()
	case "Show temperatures in":
		if u := unit.Temperature.Unit(value); u != nil {
			r.plan.Fahrenheit = u.Name() == "°F"
		} else {
			choice()
		}
	case "Decimal sign":
		r.decimal = map[string]unit.Decimal{"point": unit.Point, "comma": unit.Comma}[choice()]
		r.stated = r.decimal
	case "Date order":
		r.dateOrder = choice()
	case "Ignore columns":
		for _, c := range strings.FieldsFunc(value, func(c rune) bool { return c == ',' || c == ';' }) {
			if of := r.sheetsWith(c); len(of) > 0 {
				l.Fault("Value", tidy(c), ignoresOurs, and(of))
				continue
			}
			r.ignore[Key(c)] = true
		}
	}
}

// sheetsWith names the sheets that have a column of a heading, written with or without a unit.
func (r *reader) sheetsWith(heading string) (of []string) {
	name, _ := SplitHeading(heading)
	for _, s := range r.list {
		if s.known(Key(name)) != nil {
			of = append(of, s.Name)
		}
	}
	return of
}

// decimalSign looks at every text of a column of numbers for a decimal sign beyond doubt, unless the sheet Plan says it.
func (r *reader) decimalSign() {
	if r.decimal != unit.Unsure {
		return
	}
	var first [3]cell.Ref
	var typed [3]string
	for _, s := range r.list {
		g := r.grids[s.Name]
		if g == nil || g.Refused != "" {
			continue
		}
		i, _ := findHeader(g, s)
		if i < 0 {
			continue
		}
		numbers := map[int32]bool{}
		for _, h := range headings(s, &g.Rows[i]) {
			if h.column.Quantity != nil {
				numbers[int32(h.col)] = true
			}
		}
		for _, row := range g.Rows[i+1:] {
			for _, e := range row.Cells {
				if e.Kind != Text || !numbers[e.Col] || !strings.ContainsAny(e.Text, ".,") {
					continue
				}
				if d := unit.Evidence(e.Text); d != unit.Unsure && first[d].Row == 0 {
					first[d], typed[d] = cell.Ref{Sheet: g.Name, Row: row.N, Col: int(e.Col)}, e.Text
				}
			}
		}
	}
	point, comma := first[unit.Point].Row > 0, first[unit.Comma].Row > 0
	switch {
	case point && comma:
		r.add(decimalMixed.problem(first[unit.Comma], cell.Warning, "", typed[unit.Comma], "comma", first[unit.Point].String(), "point"))
	case point:
		r.decimal, r.shownBy = unit.Point, first[unit.Point]
	case comma:
		r.decimal, r.shownBy = unit.Comma, first[unit.Comma]
	}
}
