package report

import (
	"bytes"
	"fmt"
	"image/color"
	"io"
	"math"
	"slices"
	"time"

	"github.com/jung-kurt/gofpdf"
)

// paper is a PDF document being written with gofpdf. It sets nothing twice, and knows what a page has after a turn or on going
// back to it. Places on a page are in mm from its upper left corner, widths of lines and sizes of type in pt.
type paper struct {
	pdf   *gofpdf.Fpdf
	fonts [2]struct { // regular and bold
		family string
		holds  blocks
		n      int // how many have been added
	}
	other bool // the font of the user's has been added
	now   drawn
}

// drawn is how the next thing on the page would be drawn; the zero value: unknown.
type drawn struct {
	line   pencil
	fill   color.NRGBA // of areas and text
	family string
	bold   bool
	size   float64
}

// pencil is how a line is drawn.
type pencil struct {
	pt    float64
	color color.NRGBA
	dash  []float64 // pt: line, gap, line, gap, …
	phase float64   // pt
}

// newPaper opens a document without a page; size is A4 or Letter, date and words are for its description.
func newPaper(size string, date time.Time, title, creator string) *paper {
	if size != "Letter" {
		size = "A4"
	}
	p := &paper{pdf: gofpdf.New("P", "mm", size, "")}
	p.pdf.SetCreationDate(date.UTC())
	p.pdf.SetModificationDate(date.UTC())
	p.pdf.SetCatalogSort(true) // the same bytes each time
	p.pdf.SetProducer("gofpdf", true)
	p.pdf.SetCreator(creator, true)
	p.pdf.SetTitle(title, true)
	p.pdf.SetAutoPageBreak(false, 0)
	p.pdf.SetLineJoinStyle("round")
	p.letters("", false, 10) // the library takes bookmarks as Unicode only once such a font is set
	return p
}

// wide is the width of a page, mm.
func (p *paper) wide() float64 {
	w, _ := p.pdf.GetPageSize()
	return w
}

// addPage begins a new page after the last.
func (p *paper) addPage() {
	p.pdf.AddPage()
	p.now = drawn{}
}

// page is the number of the current page, from 1; pages is how many there are.
func (p *paper) page() int  { return p.pdf.PageNo() }
func (p *paper) pages() int { return p.pdf.PageCount() }

// turnTo makes a page the current one.
func (p *paper) turnTo(page int) {
	p.pdf.SetPage(page)
	p.now = drawn{}
}

// pencil makes the next lines look so.
func (p *paper) pencil(k pencil) {
	old := &p.now.line
	if old.color != k.color {
		p.pdf.SetDrawColor(int(k.color.R), int(k.color.G), int(k.color.B))
	}
	if old.pt != k.pt {
		p.pdf.SetLineWidth(k.pt * mmPerPt)
	}
	if old.pt == 0 || old.phase != k.phase || !slices.Equal(old.dash, k.dash) {
		dash := make([]float64, len(k.dash))
		for i, v := range k.dash {
			dash[i] = v * mmPerPt
		}
		p.pdf.SetDashPattern(dash, k.phase*mmPerPt)
	}
	*old = k
}

// ground makes the next areas and text have a colour; call it before a path is laid down. The two are set together, for the
// library brackets every text of another colour than the areas'.
func (p *paper) ground(c color.NRGBA) {
	if p.now.fill != c {
		p.now.fill = c
		p.pdf.SetFillColor(int(c.R), int(c.G), int(c.B))
		p.pdf.SetTextColor(int(c.R), int(c.G), int(c.B))
	}
}

// moveTo, lineTo, curveTo (a cubic Bézier curve), arcTo and closePath lay a path down; stroke or fill then draws it.
func (p *paper) moveTo(x, y float64)                  { p.pdf.MoveTo(x, y) }
func (p *paper) lineTo(x, y float64)                  { p.pdf.LineTo(x, y) }
func (p *paper) curveTo(x1, y1, x2, y2, x, y float64) { p.pdf.CurveBezierCubicTo(x1, y1, x2, y2, x, y) }
func (p *paper) closePath()                           { p.pdf.ClosePath() }
func (p *paper) stroke()                              { p.pdf.DrawPath("D") }
func (p *paper) fill()                                { p.pdf.DrawPath("F") }

// arcTo goes on along a circle around x, y from an angle by an angle > 0, counter-clockwise, rad; a line leads to its
// beginning.
func (p *paper) arcTo(x, y, r, from, by float64) {
	p.pdf.ArcTo(x, y, r, r, 0, from*180/math.Pi, (from+by)*180/math.Pi)
}

// line draws one line.
func (p *paper) line(k pencil, x, y, x2, y2 float64) {
	p.pencil(k)
	p.pdf.Line(x, y, x2, y2)
}

// frame draws the edge of a rectangle; x, y is its upper left corner.
func (p *paper) frame(k pencil, x, y, w, h float64) {
	p.pencil(k)
	p.pdf.Rect(x, y, w, h, "D")
}

// box draws a rectangle as an area.
func (p *paper) box(c color.NRGBA, x, y, w, h float64) {
	p.ground(c)
	p.pdf.Rect(x, y, w, h, "F")
}

// circle draws the edge of a circle around x, y.
func (p *paper) circle(k pencil, x, y, r float64) {
	p.pencil(k)
	p.pdf.Circle(x, y, r, "D")
}

// text writes clean text with its baseline at y.
func (p *paper) text(x, y float64, s string, size float64, bold bool, c color.NRGBA) {
	if s == "" {
		return
	}
	faces().runs(s, func(run string, other bool) {
		if other {
			p.otherLetters(size)
		} else {
			p.letters(run, bold, size)
		}
		p.ground(c)
		p.pdf.Text(x, y, run)
		if len(run) < len(s) {
			x += widthMM(run, size, bold)
		}
	})
}

// letters sets the font in which s is written. A text in other blocks than the ones before it brings a font that holds them too.
func (p *paper) letters(s string, bold bool, size float64) {
	f, weight := &p.fonts[btoi(bold)], [2]string{"", "B"}[btoi(bold)]
	if f.holds.add(s) || f.n == 0 {
		f.family, f.n = family, f.n+1
		if f.n > 1 {
			f.family = fmt.Sprint(family, f.n)
		}
		p.pdf.AddUTF8FontFromBytes(f.family, weight, cutOut(bold, f.holds))
	}
	if n := &p.now; n.size != size || n.bold != bold || n.family != f.family {
		n.size, n.bold, n.family = size, bold, f.family
		p.pdf.SetFont(f.family, weight, size)
	}
}

// otherFamily is the name of the user's font in the documents.
const otherFamily = "other"

// otherLetters sets the font of the user's, which has one weight and is added whole; the library embeds what is written with it.
func (p *paper) otherLetters(size float64) {
	if !p.other {
		p.other = true
		p.pdf.AddUTF8FontFromBytes(otherFamily, "", bytes.Clone(faces().other)) // the library writes into it
	}
	if n := &p.now; n.size != size || n.family != otherFamily {
		n.size, n.bold, n.family = size, false, otherFamily
		p.pdf.SetFont(otherFamily, "", size)
	}
}

// turned draws something turned counter-clockwise about x, y, in degrees.
func (p *paper) turned(angle, x, y float64, draw func()) {
	before := p.now
	p.pdf.TransformBegin()
	p.pdf.TransformRotate(angle, x, y)
	draw()
	p.pdf.TransformEnd()
	p.now = before // the page has again what it had, but the library goes on with the last font
	p.now.size = 0
}

// mark adds a line to the outline; a level, 0 for the uppermost, is never more than one below the last.
func (p *paper) mark(words string, level int, y float64) { p.pdf.Bookmark(words, level, y) }

// err is the first error of the document, after which nothing more is drawn.
func (p *paper) err() error { return p.pdf.Error() }

// write sends the document.
func (p *paper) write(w io.Writer) error { return p.pdf.Output(w) }
