package report

import (
	"bufio"
	"compress/zlib"
	"fmt"
	"image/color"
	"io"
	"math"
	"strconv"
	"sync"
	"time"
	"unicode/utf16"
)

// paper is a PDF document being written: pages with text, lines and an outline. Places on a page are in mm from its upper left
// corner, widths of lines in pt. Pages are kept until the end, since the running titles come last.
type paper struct {
	wide, tall     float64 // of a page, mm
	title, creator string
	date           time.Time
	sheets         []*leaf
	page           int       // the current one, from 1
	used           [2]blocks // regular and bold
	marks          []outline
}

// outline is a line of the outline: a place in the document.
type outline struct {
	words string
	level int // 0 for the uppermost
	page  int
	y     float64 // mm
}

// leaf is one page, and how the next thing on it would be drawn.
type leaf struct {
	b     []byte
	now   drawn
	saved []drawn
}

// drawn is the state of a page, so that nothing is set twice.
type drawn struct {
	line, fill color.NRGBA
	width      float64 // pt
	dash       string
	size       float64 // pt
	bold       bool
}

// pencil is how a line is drawn.
type pencil struct {
	pt    float64
	color color.NRGBA
	dash  []float64 // pt: line, gap, line, gap, …
	phase float64   // pt
}

// newPaper opens a document without a page; size is A4 or Letter.
func newPaper(size string) *paper {
	p := &paper{wide: 210, tall: 297}
	if size == "Letter" {
		p.wide, p.tall = 215.9, 279.4
	}
	return p
}

// addPage begins a new page after the last.
func (p *paper) addPage() {
	// A PDF begins each page with black lines of 1 pt without dashes; all joins are round.
	p.sheets = append(p.sheets, &leaf{b: append(make([]byte, 0, 1<<14), "1 j\n"...),
		now: drawn{line: color.NRGBA{A: 255}, fill: color.NRGBA{A: 255}, width: 1, dash: "[] 0 d\n"}})
	p.page = len(p.sheets)
}

// leaf is the current page.
func (p *paper) leaf() *leaf { return p.sheets[p.page-1] }

// xy appends a place. It is rounded as seen from the top, so that A4 and Letter are alike to the last digit.
func (p *paper) xy(b []byte, x, y float64) []byte {
	b = append(appendPt(b, x/mmPerPt), ' ')
	return append(appendPt(b, (math.Round(p.tall/mmPerPt*100)-math.Round(y/mmPerPt*100))/100), ' ')
}

// setColor makes a colour the one of lines (RG) or of areas and text (rg), of which now is the present one.
func (l *leaf) setColor(now *color.NRGBA, c color.NRGBA, operator string) {
	if *now == c {
		return
	}
	*now = c
	for _, v := range [3]uint8{c.R, c.G, c.B} {
		l.b = append(strconv.AppendFloat(l.b, math.Round(float64(v)/255*1000)/1000, 'f', -1, 64), ' ')
	}
	l.b = append(l.b, operator...)
}

// pencil makes the next lines look so.
func (p *paper) pencil(k pencil) {
	l := p.leaf()
	l.setColor(&l.now.line, k.color, "RG\n")
	if l.now.width != k.pt {
		l.now.width = k.pt
		l.b = append(appendPt(l.b, k.pt), " w\n"...)
	}
	var room [64]byte
	dash := append(room[:0], '[')
	for i, v := range k.dash {
		if i > 0 {
			dash = append(dash, ' ')
		}
		dash = appendPt(dash, v)
	}
	dash = append(appendPt(append(dash, "] "...), k.phase), " d\n"...)
	if l.now.dash != string(dash) {
		l.now.dash = string(dash)
		l.b = append(l.b, dash...)
	}
}

// moveTo, lineTo, curveTo and closePath lay a path down; stroke or fill then draws it.
func (p *paper) moveTo(x, y float64) { p.leaf().b = append(p.xy(p.leaf().b, x, y), "m\n"...) }
func (p *paper) lineTo(x, y float64) { p.leaf().b = append(p.xy(p.leaf().b, x, y), "l\n"...) }
func (p *paper) closePath()          { p.leaf().b = append(p.leaf().b, "h\n"...) }
func (p *paper) stroke()             { p.leaf().b = append(p.leaf().b, "S\n"...) }

// curveTo goes on to x, y by way of two control points (cubic Bézier).
func (p *paper) curveTo(x1, y1, x2, y2, x, y float64) {
	p.leaf().b = append(p.xy(p.xy(p.xy(p.leaf().b, x1, y1), x2, y2), x, y), "c\n"...)
}

// fill draws the path laid down as an area.
func (p *paper) fill() { p.leaf().b = append(p.leaf().b, "f\n"...) }

// ground makes the next areas have a colour; call it before the path is laid down.
func (p *paper) ground(c color.NRGBA) { p.leaf().setColor(&p.leaf().now.fill, c, "rg\n") }

// line draws one line.
func (p *paper) line(k pencil, x, y, x2, y2 float64) {
	p.pencil(k)
	p.moveTo(x, y)
	p.lineTo(x2, y2)
	p.stroke()
}

// box lays a rectangle down: x, y is its upper left corner.
func (p *paper) box(x, y, w, h float64) {
	b := p.xy(p.leaf().b, x, y)
	b = append(appendPt(b, w/mmPerPt), ' ')
	p.leaf().b = append(appendPt(b, -h/mmPerPt), " re\n"...)
}

// frame draws the edge of a rectangle.
func (p *paper) frame(k pencil, x, y, w, h float64) {
	p.pencil(k)
	p.box(x, y, w, h)
	p.stroke()
}

// circle draws the edge of a circle around x, y.
func (p *paper) circle(k pencil, x, y, r float64) {
	p.pencil(k)
	p.moveTo(x+r, y)
	p.arc(x, y, r, 0, 2*math.Pi)
	p.stroke()
}

// arc goes on along a circle around x, y from an angle by an angle, counter-clockwise, rad. In quarters, a Bézier curve with
// control points at 4/3·tan(angle/4) of the radius leaves the circle by less than 0.03 % (from memory).
func (p *paper) arc(x, y, r, from, by float64) {
	n := max(1, math.Ceil(math.Abs(by)/(math.Pi/2)-1e-9))
	h := 4. / 3 * math.Tan(by/n/4) * r
	for i := range int(n) {
		s0, c0 := math.Sincos(from + by*float64(i)/n)
		s1, c1 := math.Sincos(from + by*float64(i+1)/n)
		p.curveTo(x+r*c0-h*s0, y-(r*s0+h*c0), x+r*c1+h*s1, y-(r*s1-h*c1), x+r*c1, y-r*s1)
	}
}

// text writes clean text with its baseline at y.
func (p *paper) text(x, y float64, s string, size float64, bold bool, c color.NRGBA) {
	if s == "" {
		return
	}
	p.used[btoi(bold)].add(s)
	l := p.leaf()
	l.setColor(&l.now.fill, c, "rg\n")
	l.b = append(l.b, "BT "...)
	if l.now.size != size || l.now.bold != bold {
		l.now.size, l.now.bold = size, bold
		l.b = append(append(l.b, "/F"...), byte('1'+btoi(bold)), ' ')
		l.b = append(appendPt(l.b, size), " Tf "...)
	}
	l.b = append(p.xy(l.b, x, y), "Td ("...)
	for _, r := range s {
		l.b = escaped(escaped(l.b, byte(r>>8)), byte(r))
	}
	l.b = append(l.b, ") Tj ET\n"...)
}

// escaped writes one byte of a string.
func escaped(b []byte, c byte) []byte {
	switch c {
	case '(', ')', '\\':
		return append(b, '\\', c)
	case '\r':
		return append(b, `\r`...)
	}
	return append(b, c)
}

// turned draws something turned counter-clockwise about x, y, in degrees.
func (p *paper) turned(angle, x, y float64, draw func()) {
	l := p.leaf()
	l.saved = append(l.saved, l.now)
	s, c := math.Sincos(angle * math.Pi / 180)
	px, py := x/mmPerPt, (p.tall-y)/mmPerPt
	l.b = append(l.b, "q "...)
	for _, v := range [...]float64{c, s, -s, c} {
		l.b = append(strconv.AppendFloat(l.b, math.Round(v*1e5)/1e5+0, 'f', -1, 64), ' ')
	}
	l.b = append(appendPt(l.b, px+s*py-c*px), ' ')
	l.b = append(appendPt(l.b, py-c*py-s*px), " cm\n"...)
	draw()
	l.b = append(l.b, "Q\n"...)
	l.now, l.saved = l.saved[len(l.saved)-1], l.saved[:len(l.saved)-1]
}

// mark adds a line to the outline; a level is never more than one below the last.
func (p *paper) mark(words string, level int, y float64) {
	p.marks = append(p.marks, outline{words, level, p.page, y})
}

// objects is the file being written: numbered objects and where each begins.
type objects struct {
	w  *bufio.Writer
	n  int   // bytes written
	at []int // by number
}

func (o *objects) put(s string) {
	n, _ := o.w.WriteString(s) // the writer keeps the first error for Flush
	o.n += n
}

// object writes an object with the content s; its number is counted from 1.
func (o *objects) object(s string) {
	o.at = append(o.at, o.n)
	o.put(strconv.Itoa(len(o.at)) + " 0 obj\n" + s + "\nendobj\n")
}

// stream writes an object of compressed bytes; more are further entries.
func (o *objects) stream(b []byte, more string) {
	o.at = append(o.at, o.n)
	o.put(fmt.Sprintf("%d 0 obj\n<</Length %d /Filter /FlateDecode%s>>\nstream\n", len(o.at), len(b), more))
	n, _ := o.w.Write(b)
	o.n += n
	o.put("\nendstream\nendobj\n")
}

// The first objects have fixed numbers; from pagesAt on, each page takes two.
const (
	resourcesAt = 2
	fontsAt     = 3  // two fonts of fontObjects each
	pagesAt     = 15 // what follows the pages: the outline, the description of the document, the catalogue
	fontObjects = 6
)

// codePoints says that the text is in code points, so that it can be copied and searched.
var codePoints = sync.OnceValue(func() []byte {
	return packed([]byte("/CIDInit /ProcSet findresource begin\n12 dict begin\nbegincmap\n/CIDSystemInfo\n<</Registry (Adobe)\n/Ordering (UCS)\n"+
		"/Supplement 0\n>> def\n/CMapName /Adobe-Identity-UCS def\n/CMapType 2 def\n1 begincodespacerange\n<0000> <FFFF>\nendcodespacerange\n"+
		"1 beginbfrange\n<0000> <FFFF> <0000>\nendbfrange\nendcmap\nCMapName currentdict /CMap defineresource pop\nend\nend"), zlib.BestCompression)
})

// write sends the document.
func (p *paper) write(w io.Writer) error {
	o := &objects{w: bufio.NewWriterSize(w, 1<<16)}
	o.put("%PDF-1.3\n%\xe2\xe3\xcf\xd3\n") // the comment tells programs that the file is not text
	kids := make([]byte, 0, 16*len(p.sheets))
	for i := range p.sheets {
		kids = append(strconv.AppendInt(kids, int64(pagesAt+2*i), 10), " 0 R "...)
	}
	size := fmt.Sprintf("[0 0 %.2f %.2f]", p.wide/mmPerPt, p.tall/mmPerPt)
	o.object(fmt.Sprintf("<</Type /Pages /Kids [%s] /Count %d /MediaBox %s>>", kids, len(p.sheets), size))
	o.object(fmt.Sprintf("<</ProcSet [/PDF /Text] /Font <</F1 %d 0 R /F2 %d 0 R>>>>", fontsAt, fontsAt+fontObjects))
	for i := range p.used {
		o.font(letteringOf(i == 1, &p.used[i]))
	}
	for _, l := range p.sheets {
		o.object(fmt.Sprintf("<</Type /Page /Parent 1 0 R /Resources %d 0 R /Contents %d 0 R>>", resourcesAt, len(o.at)+2))
		o.stream(packed(l.b, zlib.BestSpeed), "")
	}
	root := p.outline(o)
	info := len(o.at) + 1
	day := p.date.UTC().Format("20060102150405")
	o.object(fmt.Sprintf("<</Producer %s /Title %s /Creator %s /CreationDate (D:%s) /ModDate (D:%s)>>", wide("slowpoint"), wide(p.title), wide(p.creator), day, day))
	catalog := "<</Type /Catalog /Pages 1 0 R"
	if root > 0 {
		catalog += fmt.Sprintf(" /Outlines %d 0 R /PageMode /UseOutlines", root)
	}
	o.object(catalog + ">>")
	begin := o.n
	o.put(fmt.Sprintf("xref\n0 %d\n0000000000 65535 f \n", len(o.at)+1))
	for _, at := range o.at {
		o.put(fmt.Sprintf("%010d 00000 n \n", at))
	}
	o.put(fmt.Sprintf("trailer\n<</Size %d /Root %d 0 R /Info %d 0 R>>\nstartxref\n%d\n%%%%EOF\n", len(o.at)+1, info+1, info, begin))
	return o.w.Flush()
}

// font writes the objects of one font.
func (o *objects) font(l *lettering) {
	n := len(o.at) + 1
	o.object(fmt.Sprintf("<</Type /Font /Subtype /Type0 /BaseFont /%s /Encoding /Identity-H /DescendantFonts [%d 0 R] /ToUnicode %d 0 R>>", l.name, n+1, n+2))
	o.object(fmt.Sprintf("<</Type /Font /Subtype /CIDFontType2 /BaseFont /%s /CIDSystemInfo <</Registry (Adobe) /Ordering (UCS) /Supplement 0>> "+
		"/FontDescriptor %d 0 R /DW 600 /W [%s] /CIDToGIDMap %d 0 R>>", l.name, n+3, l.widths, n+4))
	o.stream(codePoints(), "")
	o.object(fmt.Sprintf("<</Type /FontDescriptor /FontName /%s %s /FontFile2 %d 0 R>>", l.name, l.descr, n+5))
	o.stream(l.glyphs, "")
	o.stream(l.file, fmt.Sprintf(" /Length1 %d", l.bare))
}

// outline writes the outline and gives the number of its root; 0 if there is none.
func (p *paper) outline(o *objects) int {
	if len(p.marks) == 0 {
		return 0
	}
	type links struct{ parent, prev, next, first, last int } // indexes; −1: none
	all := make([]links, len(p.marks)+1)                     // the last is the root
	for i := range all {
		all[i] = links{-1, -1, -1, -1, -1}
	}
	var latest []int // by level
	for i, m := range p.marks {
		latest = latest[:min(m.level+1, len(latest))]
		parent := len(p.marks)
		if m.level > 0 {
			parent = latest[m.level-1]
		}
		if m.level < len(latest) {
			all[i].prev, all[latest[m.level]].next = latest[m.level], i
			latest[m.level] = i
		} else {
			all[parent].first = i
			latest = append(latest, i)
		}
		all[i].parent, all[parent].last = parent, i
	}
	n := len(o.at) + 1
	for i, m := range p.marks {
		s := fmt.Sprintf("<</Title %s /Dest [%d 0 R /XYZ 0 %.2f null] /Count 0", wide(m.words), pagesAt+2*(m.page-1), (p.tall-m.y)/mmPerPt)
		for _, to := range []struct {
			key string
			at  int
		}{{"Parent", all[i].parent}, {"Prev", all[i].prev}, {"Next", all[i].next}, {"First", all[i].first}, {"Last", all[i].last}} {
			if to.at >= 0 {
				s += fmt.Sprintf(" /%s %d 0 R", to.key, n+to.at)
			}
		}
		o.object(s + ">>")
	}
	root := &all[len(p.marks)]
	o.object(fmt.Sprintf("<</Type /Outlines /First %d 0 R /Last %d 0 R>>", n+root.first, n+root.last))
	return len(o.at)
}

// wide is a string of the document's description or outline: UTF-16 with its mark.
func wide(s string) string {
	b := []byte("(\xfe\xff")
	for _, u := range utf16.Encode([]rune(s)) {
		b = escaped(escaped(b, byte(u>>8)), byte(u))
	}
	return string(append(b, ')'))
}
