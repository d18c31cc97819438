package report

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// mostRows is how many rows a sheet takes before it goes on in a second one; a spreadsheet program holds 1,048,576.
const mostRows = 1_000_000

// overviewName is the sheet that a spreadsheet program opens at.
const overviewName = "Overview"

// gridColumn is a column of a results sheet. A number is written with so many decimals at most; its looks are a number format.
type gridColumn struct {
	head     string
	width    float64 // in characters
	decimals int
}

// grid is a sheet that is written row by row and goes on in NAME 2, NAME 3, … when it is full.
type grid struct {
	name    string
	columns []gridColumn
	letters []string
	names   *names
	most    int // rows a page, the heading included
	paper   string
	pages   []*part
	filters []string // of each finished page: the range with the filter buttons
	row     int      // last row written on the current page
	col     int      // last column written or left blank in it
	wrote   int      // last column written in it
	lines   int      // lines of text that the row takes
	flat    bool     // the row's texts run on to the right, but for that in the last column
	b       []byte   // of the row
	open    []byte   // what stands before it
	n       []byte   // the row's number
	err     error
}

func newGrid(name string, columns []gridColumn, paper string, names *names) *grid {
	return &grid{name: name, columns: columns, paper: paper, names: names, most: mostRows}
}

// names are the texts that stand in many cells: each is kept once, and the cells have its number.
type names struct {
	number map[string]int
	part   *part
	b      []byte // scratch
	err    error
}

func newNames() *names {
	n := &names{number: map[string]int{}, part: newPart()}
	n.write(`<?xml version="1.0" encoding="UTF-8" standalone="yes"?>` + "\n" + `<sst xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">`)
	return n
}

func (n *names) write(s string) {
	if _, err := n.part.Write(append(n.b[:0], s...)); n.err == nil {
		n.err = err
	}
}

// of gives the number of a text, from 0.
func (n *names) of(s string) int {
	i, known := n.number[s]
	if !known {
		i = len(n.number)
		n.number[s] = i
		n.write(`<si><t xml:space="preserve">` + string(xmlText(nil, s)) + `</t></si>`)
	}
	return i
}

// room makes sure that n rows stand together if a page can hold them.
func (g *grid) room(n int) {
	if len(g.pages) == 0 || g.row+n > g.most && g.row > 1 {
		g.turn()
	}
}

// turn begins a page with its headings.
func (g *grid) turn() {
	g.finish("")
	g.pages, g.row = append(g.pages, newPart()), 0
	selected := ""
	if g.name == overviewName {
		selected = ` tabSelected="1"`
	}
	g.b = append(g.b[:0], `<?xml version="1.0" encoding="UTF-8" standalone="yes"?>`+"\n"+
		`<worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">`+g.fit()+
		`<sheetViews><sheetView`+selected+` workbookViewId="0"><pane ySplit="1" topLeftCell="A2" activePane="bottomLeft" state="frozen"/></sheetView></sheetViews><cols>`...)
	for i, c := range g.columns {
		g.b = append(g.b, fmt.Sprintf(`<col min="%d" max="%d" width="%g" customWidth="1"/>`, i+1, i+1, c.width)...)
	}
	g.open = append(append(g.open[:0], g.b...), `</cols><sheetData>`...)
	g.b = g.b[:0]
	g.begin()
	for _, c := range g.columns {
		g.styled(c.head, headingStyle)
	}
	g.end()
}

// finish ends the current page; filter is the range with the filter buttons, "" for the whole table.
func (g *grid) finish(filter string) {
	if len(g.pages) == 0 {
		return
	}
	if filter == "" {
		filter = g.table(g.row)
	}
	size := 9 // A4
	if g.paper == "Letter" {
		size = 1
	}
	_, err := fmt.Fprintf(g.pages[len(g.pages)-1], `</sheetData><autoFilter ref="%s"/>%s<pageMargins left="0.4" right="0.4" top="0.6" bottom="0.6" header="0.3" footer="0.3"/>`+
		`<pageSetup paperSize="%d" %s orientation="landscape"/></worksheet>`, filter, g.marked(), size, g.scale())
	g.fail(err)
	g.filters = append(g.filters, filter)
}

// marked are the formats of the columns of verdicts: what is not met stands bold in a frame, what cannot be told in slanted type. The words
// stay as they are, and no colour is needed to tell them apart.
func (g *grid) marked() string {
	s, priority := "", 0
	for i, c := range g.columns {
		if !strings.HasPrefix(c.head, "Verdict") || g.row < 2 {
			continue
		}
		top := cell.ColumnName(i+1) + "2"
		s += fmt.Sprintf(`<conditionalFormatting sqref="%s:%s%d">`, top, cell.ColumnName(i+1), g.row)
		for dxf, word := range markedWords {
			priority++
			s += fmt.Sprintf(`<cfRule type="containsText" dxfId="%d" priority="%d" operator="containsText" text="%s"><formula>NOT(ISERROR(SEARCH("%s",%s)))</formula></cfRule>`, dxf, priority, word, word, top)
		}
		s += `</conditionalFormatting>`
	}
	return s
}

// markedWords are the verdicts that stand out, in the order of their formats.
var markedWords = []string{rules.NotMet.String(), rules.CannotTell.String()}

// leastScale is the smallest scale that a sheet is printed at; one that is too wide for it goes on in further pages to the right.
const leastScale = 0.6

// fits tells whether the columns go on the width of a page at leastScale. A column is 7 px a character and 5 px wide, a px 0.75 pt.
func (g *grid) fits() bool {
	wide := 0.0 // pt
	for _, c := range g.columns {
		wide += (7*c.width + 5) * 0.75
	}
	page := 842 - 2*0.4*72 // A4 across, without the margins
	if g.paper == "Letter" {
		page = 792 - 2*0.4*72
	}
	return wide*leastScale <= page
}

func (g *grid) fit() string {
	if g.fits() {
		return `<sheetPr><pageSetUpPr fitToPage="1"/></sheetPr>`
	}
	return ""
}

func (g *grid) scale() string {
	if g.fits() {
		return `fitToWidth="1" fitToHeight="0"`
	}
	return fmt.Sprintf(`scale="%.0f" pageOrder="overThenDown"`, 100*leastScale)
}

// table is the range of the headings and the rows below them.
func (g *grid) table(last int) string {
	return "A1:" + cell.ColumnName(len(g.columns)) + strconv.Itoa(last)
}

func (g *grid) fail(err error) {
	if g.err == nil {
		g.err = err
	}
}

func (g *grid) begin() {
	g.row++
	g.col, g.wrote = 0, 0
	g.lines = 1
	g.n = strconv.AppendInt(g.n[:0], int64(g.row), 10)
}

func (g *grid) end() {
	g.b = append(g.b, `</row>`...)
	g.open = append(append(append(g.open, `<row r="`...), g.n...), '"')
	if g.lines > 1 { // spreadsheet programs do not all make room for wrapped texts by themselves
		const lineHeight, most = 15, 409 // pt
		g.open = fmt.Appendf(g.open, ` ht="%d" customHeight="1"`, min(lineHeight*g.lines, most))
	}
	page := g.pages[len(g.pages)-1]
	_, err := page.Write(append(g.open, '>'))
	g.fail(err)
	g.open = g.open[:0]
	_, err = page.Write(g.b)
	g.fail(err)
	g.b = g.b[:0]
}

// cell opens the next cell up to its attributes. Its place is written where a row begins and behind a blank; the others follow.
func (g *grid) cell(style int) {
	g.col++
	for len(g.letters) < g.col {
		g.letters = append(g.letters, cell.ColumnName(len(g.letters)+1))
	}
	g.b = append(g.b, `<c`...)
	if g.col == 1 || g.col != g.wrote+1 {
		g.b = append(append(append(g.b, ` r="`...), g.letters[g.col-1]...), g.n...)
		g.b = append(g.b, '"')
	}
	g.wrote = g.col
	if style > 0 {
		g.b = append(append(g.b, ` s="`...), byte('0'+style), '"')
	}
}

func (g *grid) skip() { g.col++ }

func (g *grid) text(s string) {
	style := plainStyle
	if !g.flat || g.col == len(g.columns)-1 {
		style = wrappedStyle
	}
	g.styled(s, style)
}

// linesIn is how many lines a text takes in a column so many characters wide, by words; bold type is wider.
func linesIn(s string, width float64, bold bool) int {
	room := int(width) - 1 // for the margins
	if bold {
		room = int(width*0.85) - 1
	}
	lines, at := 1, 0
	for _, word := range strings.Fields(s) {
		n := len([]rune(word))
		if at > 0 && at+1+n > room {
			lines, at = lines+1, 0
		}
		if at > 0 {
			at++
		}
		at += n
		for ; at > room; at -= room { // a word that is longer than a line
			lines++
		}
	}
	return lines
}

// styled writes a text; never a formula, whatever it begins with.
func (g *grid) styled(s string, style int) {
	if s == "" {
		g.skip()
		return
	}
	if style != plainStyle && g.col < len(g.columns) {
		g.lines = max(g.lines, linesIn(s, g.columns[g.col].width, style == headingStyle))
	}
	g.cell(style)
	g.b = append(g.b, ` t="inlineStr"><is><t xml:space="preserve">`...)
	g.b = append(xmlText(g.b, s), `</t></is></c>`...)
}

// called writes a text that stands in many cells.
func (g *grid) called(s string) {
	if s == "" {
		g.skip()
		return
	}
	g.cell(plainStyle)
	g.b = strconv.AppendInt(append(g.b, ` t="s"><v>`...), int64(g.names.of(s)), 10)
	g.b = append(g.b, `</v></c>`...)
}

// number writes a number; one that does not exist leaves the cell blank.
func (g *grid) number(v float64) {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		g.skip()
		return
	}
	decimals, style := 6, numberStyle
	if g.col < len(g.columns) {
		if decimals = g.columns[g.col].decimals; decimals == 0 {
			style = wholeStyle
		}
	}
	g.cell(style)
	g.b = append(appendNumber(append(g.b, `><v>`...), v, decimals), `</v></c>`...)
}

// maybe writes a number that may be missing, times a factor.
func (g *grid) maybe(v *float64, factor float64) {
	if v == nil {
		g.skip()
		return
	}
	g.number(*v * factor)
}

// words writes a row of texts.
func (g *grid) words(texts ...string) {
	g.room(1)
	g.begin()
	g.flat = true
	for _, s := range texts {
		g.text(s)
	}
	g.flat = false
	g.end()
}

// The styles, in the order in which they are made; fewer than ten.
const (
	plainStyle   = iota + 1 // text: a formula typed by the user stays one even when the cell is edited
	headingStyle            // bold, wrapped, on grey
	numberStyle             // two decimals shown, more where there are more
	wrappedStyle            // text of several lines
	wholeStyle              // as the program shows numbers
)

func makeStyles(f *excelize.File) error {
	shown := "0.00###"
	top := &excelize.Alignment{Vertical: "top"}
	for want, s := range []*excelize.Style{
		{NumFmt: 49, Alignment: top},
		{Font: &excelize.Font{Bold: true, Family: "Calibri", Size: 11}, Alignment: &excelize.Alignment{WrapText: true, Vertical: "top"},
			Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"E6E6E6"}}},
		{CustomNumFmt: &shown, Alignment: top},
		{NumFmt: 49, Alignment: &excelize.Alignment{WrapText: true, Vertical: "top"}},
		{Alignment: top},
	} {
		id, err := f.NewStyle(s)
		if err != nil {
			return err
		}
		if id != want+1 {
			return fmt.Errorf("results.xlsx: style %d came out as %d", want+1, id)
		}
	}
	frame := []excelize.Border{}
	for _, side := range []string{"left", "right", "top", "bottom"} {
		frame = append(frame, excelize.Border{Type: side, Color: "000000", Style: 1})
	}
	for want, s := range []*excelize.Style{{Font: &excelize.Font{Bold: true}, Border: frame, Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"E6E6E6"}}},
		{Font: &excelize.Font{Italic: true}}} {
		id, err := f.NewConditionalStyle(s)
		if err != nil {
			return err
		}
		if id != want {
			return fmt.Errorf("results.xlsx: conditional style %d came out as %d", want, id)
		}
	}
	return nil
}

// Workbook writes results.xlsx: the sheets Overview, Findings, Courses and Input. A product is written and forgotten;
// only a row for the overview is kept. Problems and NotCalculated of the head may grow until Close.
type Workbook struct {
	w                        io.Writer
	h                        *Head
	rows                     []slim
	names                    *names
	findings, courses, input *grid
	drivers                  *grid // nil until something varies
	records                  *grid // nil until something was measured
}

// NewWorkbook makes a writer of results.xlsx; nothing reaches w before Close.
func NewWorkbook(w io.Writer, h *Head) *Workbook {
	n := newNames()
	return &Workbook{w: w, h: h, names: n,
		findings: newGrid("Findings", findingColumns(h), h.Paper, n),
		courses:  newGrid("Courses", courseColumns(h), h.Paper, n),
		input:    newGrid("Input", inputColumns(h), h.Paper, n)}
}

// unit is the user's unit of temperature.
func (h *Head) unit() string {
	if h.Fahrenheit {
		return "°F"
	}
	return "°C"
}

// inUnit turns °C into the user's unit.
func (h *Head) inUnit(c float64) float64 {
	if h.Fahrenheit {
		return fahrenheit(c)
	}
	return c
}

// perK is how many of the user's degrees make 1 K.
func (h *Head) perK() float64 {
	if h.Fahrenheit {
		return differenceF.Out(1)
	}
	return 1
}

func overviewColumns(h *Head) []gridColumn {
	return []gridColumn{{"No. in the plan", 8, 0}, {"Product", 24, 0}, {"Family", 13, 0}, {"Recipe version", 9, 0}, {"Batch", 10, 0},
		{"Process", 20, 0}, {"Verdict", 13, 0}, {"Deciding limit", 26, 0}, {"Margin (" + h.unit() + " difference)", 12, 4},
		{"Margin (min)", 10, 4}, {"Cautions", 11, 0}, {"Row of the plan", 15, 0}, {"Why", 54, 0}}
}

func findingColumns(h *Head) []gridColumn {
	return []gridColumn{{"Product", 30, 0}, {"Process", 20, 0}, {"Limit", 28, 0}, {"Rule", 14, 0}, {"Level", 12, 0}, {"Group", 16, 0},
		{"Verdict", 14, 0}, {"Value", 12, 6}, {"Required", 12, 6}, {"Unit", 14, 0}, {"Margin (" + h.unit() + " difference)", 14, 4},
		{"Margin (min)", 12, 4}, {"Deciding time (min)", 12, 4}, {"Deciding place", 28, 0}, {"Up (mm)", 10, 4}, {"Across (mm)", 10, 4},
		{"Along (mm)", 10, 4}, {"Clock start (min)", 12, 4}, {"Clock end (min)", 12, 4}, {"Why", 80, 0}, {"Notes", 40, 0},
		{"Run", 22, 0}, {"Code", 24, 0}, {"Clause", 16, 0}, {"Edition", 14, 0}, {"Issued by", 20, 0}, {"Confirmed by", 18, 0},
		{"Confirmed on", 14, 0}, {"Status", 12, 0}, {"CCP", 10, 0}, {"Hazard", 20, 0}, {"Cells", 24, 0}}
}

// courseColumns holds a pair of columns for each named point; each row names its own.
func courseColumns(h *Head) []gridColumn {
	u := " (" + h.unit() + ")"
	cs := []gridColumn{{"Product", 30, 0}, {"Step", 20, 0}, {"Stage", 12, 0}, {"Time (min)", 10, 4}, {"Surroundings" + u, 15, 5},
		{"Coldest" + u, 12, 5}, {"Hottest" + u, 12, 5}, {"Mean" + u, 12, 5},
		{"Coldest: up (mm)", 10, 4}, {"Coldest: across (mm)", 10, 4}, {"Coldest: along (mm)", 10, 4},
		{"Hottest: up (mm)", 10, 4}, {"Hottest: across (mm)", 10, 4}, {"Hottest: along (mm)", 10, 4}}
	for i := 1; i <= max(h.MostPoints, 1); i++ {
		cs = append(cs, gridColumn{fmt.Sprintf("Point %d", i), 14, 0}, gridColumn{fmt.Sprintf("Point %d%s", i, u), 12, 5})
	}
	return cs
}

// inputColumns end with where each value comes from, if the plan was imported.
func inputColumns(h *Head) []gridColumn {
	cs := []gridColumn{{"Product", 30, 0}, {"Cell", 18, 0}, {"Column", 30, 0}, {"Typed", 30, 0}, {"Used", 30, 0}, {"Why", 60, 0}}
	if len(h.Sources) > 0 {
		cs = append(cs, gridColumn{"From", 50, 0})
	}
	return cs
}

// Add writes one product; it may be forgotten afterwards.
func (b *Workbook) Add(p *Product) error {
	if p == nil || p.History == nil {
		return errors.New("results.xlsx: a product without a history")
	}
	b.rows = append(b.rows, slimOf(b.h, p, len(b.rows)+1))
	b.addFindings(p)
	b.addDrivers(p)
	b.addRecords(p)
	b.addCourse(p)
	b.input.room(len(p.Readings))
	for _, r := range p.Readings {
		b.reading(p.Product.Name, &r)
	}
	return errors.Join(b.findings.err, errOf(b.drivers), errOf(b.records), b.courses.err, b.input.err, b.names.err)
}

// reading writes a row of the input.
func (b *Workbook) reading(product string, r *cell.Reading) {
	g := b.input
	g.room(1)
	g.begin()
	g.called(product)
	g.text(r.At.String())
	g.called(r.Column)
	g.text(r.Typed)
	g.text(r.Used)
	g.text(r.Why)
	g.text(r.From)
	g.end()
}

func (b *Workbook) addFindings(p *Product) {
	g := b.findings
	g.room(len(p.Judgement.Findings) + len(p.Judgement.Groups))
	for i := range p.Judgement.Findings {
		b.addFinding(p, &p.Judgement.Findings[i])
	}
	for _, gr := range p.Judgement.Groups {
		why := ""
		if gr.DecidedBy != "" {
			why = "decided by " + gr.DecidedBy
		}
		g.room(1)
		g.begin()
		for _, s := range []string{p.Product.Name, p.Process, gr.Group, join(gr.AnyOf), "group", "", gr.Verdict.String()} {
			g.text(s)
		}
		g.col = 19 // Why
		g.text(why)
		g.end()
	}
}

// addFinding writes one row; its cells stand in the order of findingColumns.
func (b *Workbook) addFinding(p *Product, f *rules.Finding) {
	g, l := b.findings, f.Limit
	if l == nil {
		l = &rules.Limit{}
	}
	g.room(1)
	g.begin()
	for _, s := range []string{p.Product.Name, p.Process, l.Name, ruleName(l), f.Level, l.Group, f.Verdict.String()} {
		g.text(s)
	}
	b.amount(g, f, f.Value)
	b.amount(g, f, f.Required)
	g.text(b.h.unitWord(f.Unit))
	g.maybe(f.MarginK, b.h.perK())
	g.maybe(f.MarginS, 1./60)
	g.maybe(f.AtS, 1./60)
	g.text(f.PlaceName)
	if f.Place != nil {
		b.place(g, *f.Place)
	} else {
		g.col += 3
	}
	g.maybe(f.ClockStartS, 1./60)
	g.maybe(f.ClockEndS, 1./60)
	run := ""
	switch kindOf(f.Run) {
	case rules.LowConductivity:
		run = "0.9 of the conductivity"
	case rules.WellMixed:
		run = "as well mixed"
	}
	if _, ok := worstOf(f.Run); ok {
		run = strings.TrimSuffix("at its unfavourable ends, "+run, ", ")
	}
	for _, s := range []string{f.Why, strings.Join(f.Notes, "; "), run, l.Code, l.Clause, l.Edition, l.IssuedBy, l.ConfirmedBy,
		l.ConfirmedOn, l.Status, l.CCP, l.Hazard, strings.Join(cellNames(f.Cells), ", ")} {
		g.text(s)
	}
	g.end()
}

// errOf is what went wrong with a sheet that may not be there.
func errOf(g *grid) error {
	if g == nil {
		return nil
	}
	return g.err
}

func recordColumns(h *Head) []gridColumn {
	u := " (" + h.unit() + " difference)"
	return []gridColumn{{"Product", 30, 0}, {"Record", 28, 0}, {"Limit", 28, 0}, {"Verdict", 14, 0}, {"Value", 12, 6}, {"Required", 12, 6}, {"Unit", 14, 0},
		{"Margin" + u, 14, 4}, {"Margin (min)", 12, 4}, {"Deciding time (min)", 12, 4}, {"Verdict of the prediction", 14, 0}, {"Predicted margin" + u, 14, 4},
		{"Predicted margin (min)", 12, 4}, {"Why", 80, 0}, {"What it measured", 20, 0}, {"File", 30, 0}, {"Readings", 10, 0}, {"Accuracy" + u, 12, 4},
		{"Bias" + u, 12, 4}, {"Root mean square" + u, 12, 4}, {"Colder while heated" + u, 12, 4}, {"Warmer otherwise" + u, 12, 4}, {"Cells", 30, 0}}
}

// addRecords writes a row for each finding on a record, beside that on the prediction; its cells stand in the order of recordColumns.
func (b *Workbook) addRecords(p *Product) {
	all := p.Measured
	if v := p.Deviation; v != nil {
		one := Measured{Name: v.names(), What: say("deviated title"), Judgement: v.Judgement, History: v.History}
		if len(v.Records) == 1 {
			one = v.Records[0]
			one.Judgement, one.History = v.Judgement, v.History
		}
		all = append(append([]Measured(nil), all...), one)
	}
	if len(all) == 0 {
		return
	}
	if b.records == nil {
		b.records = newGrid("Records", recordColumns(b.h), b.h.Paper, b.names)
	}
	g, perK := b.records, b.h.perK()
	for i := range all {
		m := &all[i]
		fs := m.Judgement.Findings
		if len(fs) == 0 {
			fs = []rules.Finding{{Verdict: m.verdict(), Why: m.Judgement.Why, Limit: &rules.Limit{}}}
		}
		for k := range fs {
			f := &fs[k]
			g.room(1)
			g.begin()
			for _, s := range []string{p.Product.Name, m.Name, f.Limit.Name, f.Verdict.String()} {
				g.text(s)
			}
			b.amount(g, f, f.Value)
			b.amount(g, f, f.Required)
			g.text(b.h.unitWord(f.Unit))
			g.maybe(f.MarginK, perK)
			g.maybe(f.MarginS, 1./60)
			g.maybe(f.AtS, 1./60)
			predicted := &rules.Finding{}
			verdict := ""
			for n := range p.Judgement.Findings {
				if of := &p.Judgement.Findings[n]; of.Limit == f.Limit && of.Level != "alternative" {
					predicted, verdict = of, of.Verdict.String()
				}
			}
			g.text(verdict)
			g.maybe(predicted.MarginK, perK)
			g.maybe(predicted.MarginS, 1./60)
			for _, s := range []string{f.Why, m.What, m.File} {
				g.text(s)
			}
			g.number(float64(m.Readings))
			g.maybe(m.AccuracyK, perK)
			if a := m.Against; a != nil {
				for _, v := range []float64{a.BiasK, a.RMSK, a.ColderK, a.WarmerK} {
					g.number(v * perK)
				}
			} else {
				g.col += 4
			}
			g.text(strings.Join(cellNames(f.Cells), ", "))
			g.end()
		}
	}
}

// amount writes a value of a finding in the user's unit.
func (b *Workbook) amount(g *grid, f *rules.Finding, v *float64) {
	switch {
	case v == nil:
		g.skip()
	case f.Unit == "°C":
		g.number(b.h.inUnit(*v))
	case f.Unit == "K":
		g.number(*v * b.h.perK())
	default:
		g.number(*v)
	}
}

func driverColumns(h *Head) []gridColumn {
	return []gridColumn{{"Product", 30, 0}, {"Limit", 28, 0}, {"Verdict", 14, 0}, {"Unfavourable ends", 50, 0}, {"Verdict as typed", 14, 0},
		{"Margin as typed (" + h.unit() + " difference)", 14, 4}, {"Margin as typed (min)", 12, 4}, {"Rank", 8, 0}, {"Quantity", 28, 0}, {"End alone", 30, 0},
		{"Verdict at that end", 14, 0}, {"Change of margin (" + h.unit() + " difference)", 14, 4}, {"Change of margin (min)", 12, 4}, {"Basis", 50, 0}, {"Row of the plan", 15, 0}}
}

// addDrivers writes a row for each end of what varies, for each limit; its cells stand in the order of driverColumns.
func (b *Workbook) addDrivers(p *Product) {
	if len(p.Worst) == 0 {
		return
	}
	if b.drivers == nil {
		b.drivers = newGrid("Worst case", driverColumns(b.h), b.h.Paper, b.names)
	}
	g := b.drivers
	for i := range p.Worst {
		w := &p.Worst[i]
		verdict := w.Nominal.Verdict
		for k := range p.Judgement.Findings {
			if f := &p.Judgement.Findings[k]; f.Limit == w.Limit {
				verdict = f.Verdict
			}
		}
		for rank, d := range w.Drivers {
			for _, e := range d.Ends {
				g.room(1)
				g.begin()
				for _, s := range []string{p.Product.Name, w.Limit.Name, verdict.String(), strings.Join(w.Ends, ", "), w.Nominal.Verdict.String()} {
					g.text(s)
				}
				g.maybe(w.Nominal.MarginK, b.h.perK())
				g.maybe(w.Nominal.MarginS, 1./60)
				g.number(float64(rank + 1))
				g.text(d.Quantity)
				g.text(e.Words)
				g.text(e.Verdict.String())
				g.maybe(e.K, b.h.perK())
				g.maybe(e.S, 1./60)
				g.text(d.Basis)
				g.text(d.At.String())
				g.end()
			}
		}
	}
}

// unitWord is the unit of a finding as its numbers are shown.
func (h *Head) unitWord(unit string) string {
	switch unit {
	case "°C":
		return h.unit()
	case "K":
		return h.unit() + " difference"
	}
	return unit
}

func (b *Workbook) place(g *grid, p model.Place) {
	g.number(p.UpM * 1000)
	g.number(p.AcrossM * 1000)
	g.number(p.AlongM * 1000)
}

// addCourse writes a row for each sample.
func (b *Workbook) addCourse(p *Product) {
	g, s, w := b.courses, &p.Samples, p.History
	temperature := func(v []float64, i int) {
		if i < len(v) {
			g.number(b.h.inUnit(v[i]))
		} else {
			g.skip()
		}
	}
	place := func(v []model.Place, i int) {
		if i < len(v) {
			b.place(g, v[i])
		} else {
			g.col += 3
		}
	}
	g.room(len(s.TimesS))
	k := 0
	for i, t := range s.TimesS {
		for k < len(w.Spans)-1 && t > w.Spans[k].EndS { // at the instant of a change: the step before it
			k++
		}
		step, stage := stepWords(w.Spans, k)
		g.room(1)
		g.begin()
		g.called(p.Product.Name)
		g.called(step)
		g.called(stage)
		g.number(t / 60)
		if w.MediumC != nil {
			g.number(b.h.inUnit(w.MediumC(t)))
		} else {
			g.skip()
		}
		temperature(s.Coldest, i)
		temperature(s.Hottest, i)
		temperature(s.Mean, i)
		place(s.ColdestAt, i)
		place(s.HottestAt, i)
		for n, pt := range w.Points {
			g.called(pt.Name)
			if n < len(s.Points) {
				temperature(s.Points[n], i)
			} else {
				g.skip()
			}
		}
		g.end()
	}
}

// stepWords names a step and its stage.
func stepWords(spans []model.Span, k int) (step, stage string) {
	if k >= len(spans) || spans[k].Step == nil {
		return "", ""
	}
	st := spans[k].Step
	if st.Stage != nil {
		stage = st.Stage.Name
	}
	return st.Name, stage
}

// overview makes the first sheet: the products, the worst first; below them the problems and what the run was.
func (b *Workbook) overview() *grid {
	g := newGrid(overviewName, overviewColumns(b.h), b.h.Paper, b.names)
	rows := listed(b.h.NotCalculated, b.rows)
	g.room(len(rows))
	for i := range rows {
		r := &rows[i]
		g.begin()
		if r.calculated {
			g.number(float64(r.order))
		} else {
			g.skip()
		}
		for _, s := range []string{r.Product, r.family, r.recipe, r.batch, r.Process, r.word(), r.Deciding} {
			g.text(s)
		}
		g.maybe(r.MarginK, b.h.perK())
		g.maybe(r.MarginS, 1./60)
		if r.calculated {
			g.number(float64(r.cautions))
		} else {
			g.skip()
		}
		g.text(r.at.String())
		g.text(strings.TrimSpace(r.Why + " " + strings.Join(r.Records, " ")))
		g.end()
	}
	last := g.row
	b.about(g)
	g.finish(g.table(last))
	return g
}

// about writes what the run was, below the overview.
func (b *Workbook) about(g *grid) {
	h := b.h
	g.words("")
	if left := h.LeftOutWords(); left != "" {
		g.words("", left)
	}
	for _, r := range [][2]string{{"Plan", h.Plan}, {"SHA-256 of the plan", h.SHA256}, {"Program", "slowpoint " + h.Version}, {"Date", isoDate(h)}} {
		g.words("", r[0], r[1])
	}
	for _, s := range h.Sources {
		g.words("", "Made by the import from", s.File, s.SHA256)
	}
	for _, it := range h.Items {
		g.words("", it.Item, it.Value, "", "", "", "", "", "", "", "", it.At.String())
	}
	g.words("")
	for _, s := range CautionText() {
		g.words("", s)
	}
	if len(h.Problems) > 0 {
		g.words("")
		g.words("", "Problems in the plan")
		for _, e := range h.Problems {
			g.words("", e.Level.String(), e.Typed, "", "", "", "", "", "", "", "", e.Where(), strings.TrimSuffix(e.Msg+" – "+e.Hint, " – "))
		}
	}
	if bad := wrongAnswers(h.Known); bad > 0 {
		g.words("", fmt.Sprintf("%d of %d known-answer cases came out wrong on this machine: do not use these results", bad, len(h.Known)))
	}
}

// wrongAnswers counts the known-answer cases that this machine did not solve.
func wrongAnswers(ks []KnownAnswer) int {
	n := 0
	for _, k := range ks {
		if !k.OK {
			n++
		}
	}
	return n
}

// isoDate is the day of the run; "" if it was not given.
func isoDate(h *Head) string {
	if h.Date.IsZero() {
		return ""
	}
	return h.Date.Format("2006-01-02")
}

// Close writes the workbook and lets go of what was spooled. Call it once, after the last product, also after an error.
func (b *Workbook) Close() (err error) {
	grids := []*grid{b.overview(), b.findings, b.courses, b.input}
	if b.records != nil {
		grids = append(grids, b.records)
	}
	if b.drivers != nil {
		grids = append(grids, b.drivers)
	}
	defer func() {
		for _, g := range grids {
			for _, p := range g.pages {
				p.packed.Close()
			}
		}
		b.names.part.packed.Close()
	}()
	f := excelize.NewFile()
	defer func() { err = errors.Join(err, f.Close()) }()
	if err := makeStyles(f); err != nil {
		return err
	}
	if err := f.SetCellStr("Sheet1", "A1", overviewName); err != nil { // for the part of the names, which ours replaces
		return err
	}
	if b.names.write(`</sst>`); b.names.err != nil {
		return b.names.err
	}
	parts := map[string]*part{"xl/sharedStrings.xml": b.names.part}
	for i, g := range grids {
		if len(g.pages) == 0 {
			g.turn()
		}
		if i > 0 { // the overview is finished
			g.finish("")
		}
		if g.err != nil {
			return g.err
		}
		if err := g.bind(f, parts); err != nil {
			return err
		}
	}
	if err := b.properties(f); err != nil {
		return err
	}
	return writeParts(f, b.w, parts)
}

// bind makes the sheets in the file that the pages stand for.
func (g *grid) bind(f *excelize.File, parts map[string]*part) error {
	for i, p := range g.pages {
		name := g.name
		if i > 0 {
			name = fmt.Sprintf("%s %d", g.name, i+1)
		}
		n := len(parts) // the sheets so far, and the names
		if n == 1 {
			if err := f.SetSheetName("Sheet1", name); err != nil {
				return err
			}
		} else if _, err := f.NewSheet(name); err != nil {
			return err
		}
		parts[fmt.Sprintf("xl/worksheets/sheet%d.xml", n)] = p
		if err := f.AutoFilter(name, g.filters[i], nil); err != nil { // for the hidden name that goes with the filter
			return err
		}
		title := excelize.DefinedName{Name: "_xlnm.Print_Titles", RefersTo: "'" + name + "'!$1:$1", Scope: name}
		if !g.fits() { // the pages to the right begin with the product
			title.RefersTo = "'" + name + "'!$A:$A," + title.RefersTo
		}
		if err := f.SetDefinedName(&title); err != nil {
			return err
		}
	}
	return nil
}

func (b *Workbook) properties(f *excelize.File) error {
	p := &excelize.DocProperties{Title: "Results of " + string(xmlSafe(b.h.Plan)), Creator: "slowpoint " + b.h.Version,
		Description: strings.Join(CautionText(), " ")}
	if !b.h.Date.IsZero() {
		p.Created = b.h.Date.UTC().Format("2006-01-02T15:04:05Z")
		p.Modified = p.Created
	}
	return f.SetDocProps(p)
}

// xmlSafe drops what XML cannot hold; the writer of the properties escapes the rest itself.
func xmlSafe(s string) []byte {
	return bytes.Map(func(r rune) rune {
		if r < ' ' || r == 0xFFFE || r == 0xFFFF {
			return -1
		}
		return r
	}, []byte(s))
}
