package report

import (
	"fmt"
	"io"
	"time"

	"slowpoint/rules"
)

// The frame of every page, mm from its top: one layout for A4 and Letter, so both break at the same lines.
const (
	headerY   = 15.0  // baseline of the running title
	topY      = 20.0  // where text begins
	bottomY   = 257.0 // where text ends
	footerY   = 259.0 // the line above the footer
	frameWide = 180.0 // mm
)

// The type sizes, pt.
const (
	small   = 9.0
	body    = 9.5
	kitchen = 11.0 // the least on the page for the operator
	leading = 1.22 // line height over type size
)

// doc is a document being written: a page, a position on it, and what the running titles will say.
type doc struct {
	pdf    *paper
	head   *Head
	left   float64 // mm
	y      float64 // mm from the top of the page
	title  string  // running title of the pages to come
	titles []string
	note   string // of the pages to come: what their numbers are
	notes  []string
	unseen unseen
	nest   int // how deep the bookmarks to come lie below their own level
	marked int // the level of the last bookmark; -1: none yet
}

// newDoc opens a document without a page.
func newDoc(h *Head, title string) *doc {
	date := h.Date
	if date.IsZero() {
		date = time.Unix(0, 0)
	}
	p := newPaper(h.Paper, date, flat(title), flat("slowpoint "+h.Version))
	return &doc{pdf: p, head: h, left: (p.wide() - frameWide) / 2, title: title, note: say("footer not measured"), unseen: unseen{}, marked: -1}
}

// clean makes text printable and remembers what could not be shown.
func (d *doc) clean(s string) string { return d.unseen.clean(s) }

// page begins a new page.
func (d *doc) page() {
	d.pdf.addPage()
	d.titles, d.notes = append(d.titles, d.title), append(d.notes, d.note)
	d.y = topY
}

// need begins a new page unless h mm are left on this one.
func (d *doc) need(h float64) {
	if d.y+h > bottomY+0.01 {
		d.page()
	}
}

// put writes one line of clean text with its baseline at y, black.
func (d *doc) put(x, y float64, s string, size float64, bold bool) {
	d.pdf.text(x, y, s, size, bold, black)
}

// height of a line of a size, mm.
func height(size float64) float64 { return size * leading * mmPerPt }

// style of a paragraph.
type style struct {
	size   float64
	bold   bool
	indent float64 // mm
	after  float64 // mm of space below
}

// para writes text over as many lines and pages as it takes.
func (d *doc) para(s string, st style) {
	for _, line := range wrap(d.clean(s), frameWide-st.indent, st.size, st.bold) {
		d.need(height(st.size))
		d.y += height(st.size)
		d.put(d.left+st.indent, d.y-0.28*height(st.size), line, st.size, st.bold)
	}
	d.y += st.after
}

// text is a paragraph in the usual size.
func (d *doc) text(s string) { d.para(s, style{size: body, after: 1.6}) }

// item is a paragraph behind a mark; continued lines hang.
func (d *doc) item(mark, s string, size float64) {
	in := widthMM(mark+"  ", size, false)
	lines := wrap(d.clean(s), frameWide-in, size, false)
	for i, line := range lines {
		d.need(height(size))
		d.y += height(size)
		if i == 0 {
			d.put(d.left, d.y-0.28*height(size), mark, size, false)
		}
		d.put(d.left+in, d.y-0.28*height(size), line, size, false)
	}
	d.y += 1
}

// heading begins a section: it stays with at least keep mm of what follows, and is a bookmark at its level.
func (d *doc) heading(s string, level int, keep float64) {
	d.section(s, level, keep, level)
}

// section is a heading whose bookmark has a level of its own.
func (d *doc) section(s string, level int, keep float64, mark int) {
	size := [...]float64{16, 12.5, 10.5}[level]
	if d.y > topY {
		d.y += [...]float64{5, 3.5, 2.5}[level]
	}
	d.need(height(size) + keep)
	d.bookmark(s, mark)
	d.para(s, style{size: size, bold: true, after: [...]float64{2, 1.2, 0.8}[level]})
}

// bookmark marks the place in the outline, never more than one level below the last.
func (d *doc) bookmark(s string, level int) {
	d.marked = min(level+d.nest, d.marked+1)
	d.pdf.mark(flat(s), d.marked, d.y)
}

// rule draws a line across from x to x2 at y.
func (d *doc) rule(x, x2, y, pt float64) { d.pdf.line(pencil{pt: pt, color: black}, x, y, x2, y) }

// frame draws a box.
func (d *doc) frame(x, y, w, h, pt float64) { d.pdf.frame(pencil{pt: pt, color: black}, x, y, w, h) }

// col is a column of a table.
type col struct {
	title string
	wide  float64 // mm
	bold  bool
	right bool
}

const cellPad = 1.2 // mm beside the text of a cell

// table writes rows with a header that repeats on every page. A row is split only if it is taller than a page. A row of one cell
// in a table of several columns is a title over the rows below it.
func (d *doc) table(cols []col, rows [][]string, size float64) {
	d.grouped(cols, rows, size, func(int) bool { return true })
}

// grouped is a table with a line only below the rows that end a group.
func (d *doc) grouped(cols []col, rows [][]string, size float64, ends func(row int) bool) {
	titles := make([][]string, len(cols))
	for i, c := range cols {
		titles[i] = wrap(d.clean(c.title), c.wide-2*cellPad, size, true)
	}
	headed := -1
	start := func(h float64) { // room for h mm, below a header
		d.need(h + btof(headed < 0)*2*height(size))
		if headed != d.pdf.page() {
			d.row(cols, titles, size, true)
			d.rule(d.left, d.left+total(cols), d.y, 1)
			headed = d.pdf.page()
		}
	}
	most := int((bottomY - topY - 20) / height(size))
	for k, r := range rows {
		over := cols
		if len(r) == 1 && len(cols) > 1 {
			over = []col{{wide: total(cols), bold: true}}
		}
		lines := make([][]string, len(over))
		n := 1
		for i, c := range over {
			s := ""
			if i < len(r) {
				s = r[i]
			}
			lines[i] = wrap(d.clean(s), c.wide-2*cellPad, size, c.bold)
			n = max(n, len(lines[i]))
		}
		for n > 0 {
			part := min(n, most)
			start(float64(part)*height(size) + 1 + btof(len(over) < len(cols))*2*height(size)) // a title stays with a row
			chunk := make([][]string, len(over))
			for i := range lines {
				q := min(part, len(lines[i]))
				chunk[i], lines[i] = lines[i][:q], lines[i][q:]
			}
			d.row(over, chunk, size, false)
			n -= part
		}
		if ends(k) || k == len(rows)-1 {
			d.rule(d.left, d.left+total(cols), d.y, 0.7)
		}
	}
	if len(rows) == 0 {
		start(0)
	}
	d.y += 2
}

// row writes the lines of one row.
func (d *doc) row(cols []col, lines [][]string, size float64, bold bool) {
	x, n := d.left, 1
	for i, c := range cols {
		n = max(n, len(lines[i]))
		for k, s := range lines[i] {
			at := x + cellPad
			if c.right {
				at = x + c.wide - cellPad - widthMM(s, size, bold || c.bold)
			}
			d.put(at, d.y+0.5+float64(k+1)*height(size)-0.28*height(size), s, size, bold || c.bold)
		}
		x += c.wide
	}
	d.y += float64(n)*height(size) + 1
}

func total(cols []col) float64 {
	w := 0.0
	for _, c := range cols {
		w += c.wide
	}
	return w
}

func btof(b bool) float64 { return float64(btoi(b)) }

// pairGap is how much closer pairs stand than the rows of a table, mm.
const pairGap = 0.6

// pairs writes names and values in two columns, leaving out blank values.
func (d *doc) pairs(rows [][2]string, wide float64) {
	for _, line := range rows {
		if line[1] == "" {
			continue
		}
		a, b := d.pair(line, wide)
		cols := []col{{wide: wide, bold: true}, {wide: frameWide - wide}}
		for len(b) > 40 {
			d.need(40*height(small) + 1)
			d.row(cols, [][]string{a, b[:40]}, small, false)
			a, b = nil, b[40:]
		}
		d.need(float64(max(len(a), len(b)))*height(small) + 1)
		d.row(cols, [][]string{a, b}, small, false)
		d.y -= pairGap
	}
	d.y += 1.5
}

// pair is a name and a value as lines.
func (d *doc) pair(line [2]string, wide float64) (name, value []string) {
	return wrap(d.clean(line[0]), wide-2*cellPad, small, true), wrap(d.clean(line[1]), frameWide-wide-2*cellPad, small, false)
}

// pairsHeight is how high pairs will be, mm.
func (d *doc) pairsHeight(rows [][2]string, wide float64) float64 {
	h := 1.5
	for _, line := range rows {
		if line[1] != "" {
			a, b := d.pair(line, wide)
			h += float64(max(len(a), len(b)))*height(small) + 1 - pairGap
		}
	}
	return h
}

// boxed writes paragraphs in a frame.
func (d *doc) boxed(lines []string, st style) {
	const pad = 2.5
	var all []string
	for _, s := range lines {
		all = append(all, wrap(d.clean(s), frameWide-2*pad, st.size, st.bold)...)
	}
	for len(all) > 0 {
		n := min(len(all), int((bottomY-topY-2*pad)/height(st.size)))
		h := float64(n)*height(st.size) + 2*pad
		d.need(h)
		d.frame(d.left, d.y, frameWide, h, 1)
		for i, s := range all[:n] {
			d.put(d.left+pad, d.y+pad+(float64(i+1)-0.28)*height(st.size), s, st.size, st.bold)
		}
		d.y += h + 2.5
		all = all[n:]
	}
}

// caught turns a panic while a PDF is made into an error: one document less, and the others are written.
func caught(err *error) {
	if r := recover(); r != nil {
		*err = fmt.Errorf("PDF: %v", r)
	}
}

// finish writes the running titles and page numbers and sends the document.
func (d *doc) finish(w io.Writer) error {
	n := d.pdf.pages()
	for i := 1; i <= n; i++ {
		d.pdf.turnTo(i)
		d.running(i, n)
	}
	return d.pdf.write(w)
}

// running writes the header and the footer of a page.
func (d *doc) running(i, n int) {
	h := d.head
	right := d.clean(h.planName())
	right = shorten(right, 70, small, false)
	left := shorten(d.clean(d.titles[i-1]), frameWide-4-widthMM(right, small, false), small, true)
	d.put(d.left, headerY, left, small, true)
	d.put(d.left+frameWide-widthMM(right, small, false), headerY, right, small, false)
	d.rule(d.left, d.left+frameWide, headerY+1.5, 0.7)
	d.rule(d.left, d.left+frameWide, footerY, 0.7)
	number := say("page", i, n)
	d.put(d.left+frameWide-widthMM(number, small, false), footerY+3.6, number, small, false)
	d.put(d.left, footerY+3.6, shorten(d.clean(say("footer", h.Version, h.digest(), h.day())), 150, small, false), small, false)
	d.y = footerY
	d.put(d.left, footerY+7.4, shorten(d.notes[i-1], frameWide, small, false), small, false)
	if i == 1 && len(d.unseen) > 0 {
		d.put(d.left, footerY+11.2, shorten(say("glyphs missing", d.unseen.list()), frameWide, small, true), small, true)
	}
}

// item of the sheet Plan by its name; "" if it is not there.
func (h *Head) item(name string) string {
	for _, it := range h.Items {
		if it.Item == name {
			return it.Value
		}
	}
	return ""
}

// planName is what the pages call the plan.
func (h *Head) planName() string {
	name := h.item("Plan")
	if name == "" {
		name = h.Plan
	}
	if e := h.item("Edition"); e != "" {
		name = say("edition", name, e)
	}
	return name
}

// digest is the beginning of the input's SHA-256, enough to tell two inputs apart.
func (h *Head) digest() string {
	if len(h.SHA256) > 12 {
		return h.SHA256[:12] + "…"
	}
	if h.SHA256 == "" {
		return "–"
	}
	return h.SHA256
}

// day is the date of the run, with the time of day if it has one.
func (h *Head) day() string {
	if h.Date.IsZero() {
		return "–"
	}
	if h.Date.Hour() == 0 && h.Date.Minute() == 0 && h.Date.Second() == 0 {
		return h.Date.Format("2006-01-02")
	}
	return h.Date.Format("2006-01-02 15:04")
}

// verdictWord is the word and a symbol of its own, so that neither colour nor position carries it alone.
func verdictWord(v rules.Verdict) string {
	return [...]string{"? CANNOT TELL", "✓ MET", "✗ NOT MET", "– NOT APPLICABLE"}[v]
}
