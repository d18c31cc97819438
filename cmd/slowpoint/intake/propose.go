package intake

import (
	"fmt"
	"io"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Propose looks at the sheets of somebody's own spreadsheets and writes a mapping workbook with everything that it found: which sheets,
// where their headings are, every heading with some of its values, and what it may mean. No row is confirmed, so nothing of it is applied
// until the user says yes in the column Confirmed. The same files give the same bytes.
func Propose(w io.Writer, files []*workbook.Spreadsheet) error {
	p := &proposal{rows: map[string][]map[string]string{}, taken: map[string]bool{}}
	for _, f := range files {
		if err := p.file(f); err != nil {
			return err
		}
	}
	return p.write(w)
}

// proposal is a mapping while it is made up: the rows of its sheets by their headings.
type proposal struct {
	rows  map[string][]map[string]string
	taken map[string]bool // names of sources, by key
}

func (p *proposal) add(sheet string, row map[string]string) {
	p.rows[sheet] = append(p.rows[sheet], row)
}

// file looks at the visible sheets of a file.
func (p *proposal) file(f *workbook.Spreadsheet) error {
	var grids []*workbook.Grid
	for _, g := range f.Sheets {
		if g.Refused != "" {
			return fmt.Errorf("%s: %s – %s", f.Name, g.Refused, g.Mend)
		}
		if !g.Hidden && len(g.Rows) > 0 {
			grids = append(grids, g)
		}
	}
	like := sameCards(grids)
	for i, g := range grids {
		if like[i] > 0 && like[i] != i+1 {
			continue // a card like an earlier one
		}
		l := guess(g, like[i] > 0)
		p.source(f, g, l, cardsLike(grids, like, i))
	}
	return nil
}

// cardsLike names the sheets that are cards like that of index i.
func cardsLike(grids []*workbook.Grid, like []int, i int) []string {
	var names []string
	for j := range grids {
		if like[i] > 0 && like[j] == like[i] {
			names = append(names, grids[j].Name)
		}
	}
	return names
}

// theirHeading is a heading or label of theirs with what stands under or beside it.
type theirHeading struct {
	theirs  string // as the mapping names it
	group   string // above it
	name    string // without its unit
	unit    string // that it gives; "" if none
	inside  bool   // the unit stands in brackets
	doubled bool   // others have the same name
	cells   []*workbook.Entry
	grid    *workbook.Grid
	hidden  bool
}

// source writes the row of Sources and those of its columns.
func (p *proposal) source(f *workbook.Spreadsheet, g *workbook.Grid, l *layout, cards []string) {
	name := g.Name
	if name == "" {
		name = strings.TrimSuffix(f.Name, filepath.Ext(f.Name))
	}
	for n, base := 2, name; p.taken[workbook.Key(name)]; n++ {
		name = base + " " + strconv.Itoa(n)
	}
	p.taken[workbook.Key(name)] = true
	row := map[string]string{"Source": name, "File": f.Name, "Sheet": g.Name, "Layout": l.kind, "Heading": l.heading, "First": l.first, "Note": "a proposal: " + l.why}
	if len(cards) > 1 {
		row["Note"] += "; the like are " + strings.Join(cards[1:], ", ") + ": a name with one * may stand for all, or give each a row"
	}
	finds := l.finds(g)
	used := map[string]string{}
	for _, h := range finds {
		p.column(name, h, l, finds, used)
	}
	if lacks := unfilled(used); lacks != "" {
		row["Note"] += "; " + lacks
	}
	p.add("Sources", row)
}

// column writes a row of Columns, and the words of its column where they are few.
func (p *proposal) column(source string, h *theirHeading, l *layout, all []*theirHeading, used map[string]string) {
	row := map[string]string{"Source": source, "Theirs": h.theirs, "Found": h.samples()}
	a, ok := h.means(all)
	var why, ask []string
	if h.unit != "" {
		why = append(why, "the heading says "+h.unit)
		if !h.inside {
			row["Unit"] = h.unit
		}
	}
	place := ""
	if ok {
		place = strings.Join([]string{a.sheet.Name, workbook.Key(a.part), a.column.Heading}, " › ")
	}
	switch {
	case !ok:
		ask = append(ask, h.doubts()...)
		row["Unit"] = ""
	case used[place] != "":
		ask = append(ask, "Could be "+a.sheet.Name+" › "+a.column.Heading+" too, which is proposed for "+used[place]+".")
		row["Unit"] = ""
	default:
		used[place] = h.theirs
		row["Sheet"], row["Column"], row["Part"] = a.sheet.Name, a.column.Heading, a.part
		why = append(why, a.why)
		ask = append(ask, h.questions(a, all)...)
		if list := h.words(a.column); len(list) > 0 {
			row["Words"] = source + ": " + h.name
			p.words(row["Words"], list, a.column)
		}
		if a.column.Heading == "Product" {
			ask = append(ask, h.totals(l)...)
		}
	}
	if h.hidden {
		ask = append(ask, "The column is hidden: is it meant?")
	}
	row["Why"], row["Question"] = strings.Join(why, "; "), strings.Join(ask, " ")
	p.add("Columns", row)
}

// words writes a list of words. What a word of theirs stands for is said only where it is a word of ours.
func (p *proposal) words(list string, theirs []string, c *workbook.Column) {
	for _, w := range theirs {
		row := map[string]string{"List": list, "Theirs": w, "Ours": "?", "Note": "what is it? Blank leaves the cell blank"}
		for _, ours := range c.Choices {
			if workbook.Key(ours) == workbook.Key(w) {
				row["Ours"], row["Note"] = ours, "a word of ours"
			}
		}
		p.add("Words", row)
	}
}

// means finds the place of a plan that a heading may mean.
func (h *theirHeading) means(all []*theirHeading) (aim, bool) {
	for _, try := range []func([]*theirHeading) (aim, bool){h.own, h.trade, h.ofStage} {
		if a, ok := try(all); ok {
			return a, true
		}
	}
	return aim{}, false
}

// own finds a heading that is the plan's own.
func (h *theirHeading) own(all []*theirHeading) (aim, bool) {
	for _, sheet := range []string{"Products", "Steps", "Foods", "Courses"} {
		s := workbook.SheetNamed(sheet)
		c := s.Known(h.name)
		if c == nil || !h.fits(c) || sheet == "Courses" && namesProduct(all) || sheet == "Steps" && c.Heading == "Duration" && !h.isList(all) || sheet != "Products" && c.Heading == "Temperature" && !h.isList(all) {
			continue
		}
		return aim{s, c, h.stage(s, all), "the heading is the plan's own"}, true
	}
	return aim{}, false
}

// namesProduct tells whether a heading of the sheet names its products, which courses have none of.
func namesProduct(all []*theirHeading) bool {
	return slices.ContainsFunc(all, func(o *theirHeading) bool {
		a, ok := tradeAims()[workbook.Key(o.name)]
		return ok && a.column.Heading == "Product"
	})
}

// trade finds a word of the trade.
func (h *theirHeading) trade(all []*theirHeading) (aim, bool) {
	a, ok := tradeAims()[workbook.Key(h.name)]
	if !ok || !h.fits(a.column) {
		return aim{}, false
	}
	if a.column.Heading == "Product" && listsFoods(all) {
		foods := workbook.SheetNamed("Foods")
		return aim{sheet: foods, column: foods.Column("Food"), why: "beside the parts of a composition"}, true
	}
	a.part = h.stage(a.sheet, all)
	return a, true
}

// ofStage finds a temperature or a duration of a step by its name, or by that of its group.
func (h *theirHeading) ofStage(all []*theirHeading) (aim, bool) {
	stage, column := stageOf(h.name)
	group, _ := stageOf(h.group)
	if stage == "" && group != "" && (h.name == "" || column != "") {
		stage = group
	}
	if stage == "" && group != "" {
		for _, b := range besides {
			for _, w := range strings.Split(b.words, ";") {
				if workbook.Key(w) == workbook.Key(h.name) {
					stage, column = group, b.column
				}
			}
		}
	}
	if stage == "" {
		return h.ofSomeStep(all)
	}
	switch {
	case column != "":
	case h.isOf(&unit.Temperature):
		column = "Temperature"
	case h.isOf(&unit.Duration):
		column = "Duration"
	default:
		return aim{}, false
	}
	s := workbook.SheetNamed("Steps")
	c := s.Column(column)
	if !h.fits(c) {
		return aim{}, false
	}
	return aim{s, c, stage, "named after a step, and of a " + c.Quantity.Name}, true
}

// ofSomeStep finds a time or a temperature of a step that nothing names, beside products.
func (h *theirHeading) ofSomeStep(all []*theirHeading) (aim, bool) {
	if h.group != "" || h.unit == "" || !namesProduct(all) {
		return aim{}, false
	}
	steps := workbook.SheetNamed("Steps")
	for _, b := range besides {
		c := steps.Column(b.column)
		if slices.ContainsFunc(strings.Split(b.words, ";"), func(w string) bool { return workbook.Key(w) == workbook.Key(h.name) }) && h.fits(c) {
			return aim{sheet: steps, column: c, why: "a word for the " + c.Quantity.Name + " of a step"}, true
		}
	}
	return aim{}, false
}

// stage is the part that a heading of Steps belongs to: the step that its group names; none in a list of steps.
func (h *theirHeading) stage(s *workbook.Sheet, all []*theirHeading) string {
	if s.Name != "Steps" || h.isList(all) {
		return ""
	}
	stage, _ := stageOf(h.group)
	return stage
}

// isList tells whether the sheet lists steps, one a row.
func (h *theirHeading) isList(all []*theirHeading) bool {
	for _, o := range all {
		if a, ok := tradeAims()[workbook.Key(o.name)]; ok && a.column.Heading == "Step" {
			return true
		}
	}
	return false
}

// listsFoods tells whether the sheet gives the compositions of foods.
func listsFoods(all []*theirHeading) bool {
	n := 0
	for _, o := range all {
		if a, ok := tradeAims()[workbook.Key(o.name)]; ok && a.sheet.Name == "Foods" {
			n++
		}
	}
	return n >= 3
}

// fits tells whether a column can hold what the heading says: its unit is one of the column's quantity.
func (h *theirHeading) fits(c *workbook.Column) bool {
	switch {
	case c.Quantity == nil:
		return h.unit == ""
	case h.unit == "":
		return true
	}
	return c.Quantity.Unit(h.unit) != nil
}

// questions asks what nothing in the sheet says.
func (h *theirHeading) questions(a aim, all []*theirHeading) []string {
	var ask []string
	q := a.column.Quantity
	if q != nil && h.unit == "" && !q.Plain() && !h.ownUnits(q) {
		ask = append(ask, q.Name+" in "+q.Listing()+"? Nothing in the sheet says it: fill Unit.")
	}
	if a.sheet.Name == "Steps" && a.part == "" && !h.isList(all) {
		ask = append(ask, "Of which step? Name it in Part.")
	}
	if h.doubled {
		ask = append(ask, "The heading stands more than once: is this the one?")
	}
	return ask
}

// ownUnits tells whether every cell brings its unit, or is a time.
func (h *theirHeading) ownUnits(q *unit.Quantity) bool {
	for _, e := range h.cells {
		if e.Kind == workbook.Text {
			if _, m := q.Parse(e.Text, nil, unit.Unsure); m != nil {
				return false
			}
		} else if e.Form != workbook.Clock || q != &unit.Duration {
			return false
		}
	}
	return len(h.cells) > 0
}

// isOf tells whether the heading gives a unit of a quantity, or else every cell brings one.
func (h *theirHeading) isOf(q *unit.Quantity) bool {
	if h.unit != "" {
		return q.Unit(h.unit) != nil
	}
	return h.ownUnits(q)
}

// doubts asks about a heading for which no place is proposed.
func (h *theirHeading) doubts() []string {
	stage, _ := stageOf(h.name)
	switch {
	case h.isOf(&unit.Temperature):
		return []string{"A temperature: of what, and of which step?"}
	case h.isOf(&unit.Duration), h.clocks():
		return []string{"A time: of which step?"}
	case stage != "" && h.unit == "" && h.numbers():
		return []string{"Of the step " + stage + " a temperature, in °C or °F, or a time, in min or h? Nothing in the sheet says it."}
	}
	return nil
}

// clocks tells whether every cell is a time, also one that may be minutes and seconds.
func (h *theirHeading) clocks() bool {
	for _, e := range h.cells {
		if e.Form != workbook.Clock && !clock.MatchString(e.Text) {
			return false
		}
	}
	return len(h.cells) > 0
}

// numbers tells whether every cell is a plain number.
func (h *theirHeading) numbers() bool {
	for _, e := range h.cells {
		if e.Form == workbook.Clock || e.Kind != workbook.Figure && !plainDigits.MatchString(e.Text) {
			return false
		}
	}
	return len(h.cells) > 0
}

var plainDigits = regexp.MustCompile(`^[-−+]?[0-9]+([.,][0-9]+)?$`)

// The most words of a list, and the most values that are shown of a column; long ones are cut.
const (
	mostWords   = 30
	mostSamples = 4
	mostLetters = 40
)

// words lists the values of a column of choices, or of foods, where they are few.
func (h *theirHeading) words(c *workbook.Column) []string {
	if c.Quantity != nil || len(c.Choices) == 0 && c.Heading != "Food" {
		return nil
	}
	different := h.different()
	if len(different) > mostWords {
		return nil
	}
	return different
}

// different lists the values of a column, each once.
func (h *theirHeading) different() []string {
	var out []string
	seen := map[string]bool{}
	for _, e := range h.cells {
		w := h.grid.Shown(e)
		if k := workbook.Key(w); !seen[k] && w != "" {
			seen[k] = true
			out = append(out, w)
		}
	}
	return out
}

// samples shows some of the values of a column.
func (h *theirHeading) samples() string {
	values := h.different()
	n := len(values)
	values = values[:min(n, mostSamples)]
	for i, v := range values {
		if r := []rune(v); len(r) > mostLetters {
			values[i] = string(r[:mostLetters]) + "…"
		}
	}
	s := strings.Join(values, " · ")
	if n > mostSamples {
		s += fmt.Sprintf(" · … (%d different)", n)
	}
	if s == "" {
		return "(blank)"
	}
	return s
}

// totals asks about rows that look like sums: a rule of Leave out would take them out.
func (h *theirHeading) totals(l *layout) []string {
	seen := map[string]bool{}
	var out []string
	for _, e := range h.cells {
		k := workbook.Key(e.Text)
		for _, w := range strings.Split(totalWords, ";") {
			if k == w || strings.HasPrefix(k, w+" ") || strings.HasSuffix(k, " "+w) {
				if !seen[k] && len(out) < mostSamples {
					out = append(out, strconv.Quote(e.Text))
				}
				seen[k] = true
			}
		}
	}
	if len(out) == 0 {
		return nil
	}
	return []string{"Is " + strings.Join(out, ", ") + " a total? Then give it a row in Leave out."}
}

// unfilled lists the needed columns of Products, and of each step that was found, that no heading is proposed for.
func unfilled(used map[string]string) string {
	parts := map[string]bool{}
	var inOrder, lacks []string
	has := func(sheet, part, column string) bool {
		return used[strings.Join([]string{sheet, workbook.Key(part), column}, " › ")] != ""
	}
	if !has("Products", "", "Product") {
		return ""
	}
	for _, place := range sortedKeys(used) {
		if p := strings.Split(place, " › "); p[0] == "Steps" && p[1] != "" && !parts[p[1]] {
			parts[p[1]] = true
			inOrder = append(inOrder, p[1])
		}
	}
	for _, c := range workbook.SheetNamed("Products").Columns {
		if (c.Needed && c.Heading != "Process" || c.Heading == "Food") && !has("Products", "", c.Heading) {
			lacks = append(lacks, c.Heading)
		}
	}
	for _, part := range inOrder {
		for _, c := range workbook.SheetNamed("Steps").Columns {
			if c.Needed && c.Heading != "Process" && c.Heading != "Step" && !has("Steps", part, c.Heading) {
				lacks = append(lacks, c.Heading+" of "+part)
			}
		}
	}
	if len(lacks) == 0 {
		return ""
	}
	return "no heading was found for " + strings.Join(lacks, ", ") + ": see Constants"
}

// ordinal names a column by its letter or a row by its number, as the mapping does.
func (l *layout) ordinal(n int) string {
	if l.kind == columnLayout {
		return "=" + strconv.Itoa(n)
	}
	return "=" + cell.ColumnName(n)
}
