package report

import (
	"image"
	"image/color"
	"math"

	"github.com/jung-kurt/gofpdf"
	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

const mmPerPt = 25.4 / 72

// canvas draws charts as vectors and real text onto an area of a page whose unit is mm.
// The origin is the lower left corner of the area.
type canvas struct {
	pdf         *gofpdf.Fpdf
	clean       func(string) string
	left, floor float64 // the lower left corner of the area from the top left of the page, mm
	w, h        float64 // mm
	now         pen
	saved       []pen
}

// pen is the state of a canvas.
type pen struct {
	m     [6]float64 // to the area: X = m0 x + m2 y + m4, Y = m1 x + m3 y + m5 (mm, y up)
	width vg.Length
	dash  []float64
	phase float64
	color color.NRGBA
}

// canvas opens an area of the current page; top is the distance from the top of the page, mm.
func (d *doc) canvas(left, top, w, h float64) *canvas {
	d.forget()
	return &canvas{pdf: d.pdf, clean: d.clean, left: left, floor: top + h, w: w, h: h,
		now: pen{m: [6]float64{1, 0, 0, 1, 0, 0}, width: 1, color: color.NRGBA{A: 255}}}
}

func (c *canvas) Size() (vg.Length, vg.Length) {
	return vg.Length(c.w / mmPerPt), vg.Length(c.h / mmPerPt)
}

// at is the place on the page of a point of the chart.
func (c *canvas) at(p vg.Point) (float64, float64) {
	x, y := float64(p.X)*mmPerPt, float64(p.Y)*mmPerPt
	m := c.now.m
	return c.left + m[0]*x + m[2]*y + m[4], c.floor - (m[1]*x + m[3]*y + m[5])
}

func (c *canvas) turn(n [6]float64) {
	m := c.now.m
	c.now.m = [6]float64{m[0]*n[0] + m[2]*n[1], m[1]*n[0] + m[3]*n[1], m[0]*n[2] + m[2]*n[3], m[1]*n[2] + m[3]*n[3],
		m[0]*n[4] + m[2]*n[5] + m[4], m[1]*n[4] + m[3]*n[5] + m[5]}
}

func (c *canvas) SetLineWidth(w vg.Length) { c.now.width = w }
func (c *canvas) SetLineDash(p []vg.Length, phase vg.Length) {
	c.now.dash = nil
	for _, d := range p {
		c.now.dash = append(c.now.dash, float64(d)*mmPerPt)
	}
	c.now.phase = float64(phase) * mmPerPt
}
func (c *canvas) SetColor(k color.Color) {
	if k == nil {
		k = color.Black
	}
	c.now.color = color.NRGBAModel.Convert(k).(color.NRGBA)
}
func (c *canvas) Rotate(r float64) {
	s, k := math.Sincos(r)
	c.turn([6]float64{k, s, -s, k, 0, 0})
}
func (c *canvas) Translate(p vg.Point) {
	c.turn([6]float64{1, 0, 0, 1, float64(p.X) * mmPerPt, float64(p.Y) * mmPerPt})
}
func (c *canvas) Scale(x, y float64) { c.turn([6]float64{x, 0, 0, y, 0, 0}) }
func (c *canvas) Push()              { c.saved = append(c.saved, c.now) }
func (c *canvas) Pop() {
	c.now = c.saved[len(c.saved)-1]
	c.saved = c.saved[:len(c.saved)-1]
}

// trace lays the path down.
func (c *canvas) trace(p vg.Path) {
	begun := false
	for _, e := range p {
		x, y := c.at(e.Pos)
		switch e.Type {
		case vg.MoveComp:
			c.pdf.MoveTo(x, y)
			begun = true
		case vg.LineComp:
			c.pdf.LineTo(x, y)
		case vg.CurveComp:
			a, b := c.at(e.Control[0])
			if len(e.Control) == 1 {
				c.pdf.CurveTo(a, b, x, y)
			} else {
				f, g := c.at(e.Control[1])
				c.pdf.CurveBezierCubicTo(a, b, f, g, x, y)
			}
		case vg.ArcComp: // short chords, fine enough in print
			n := int(math.Ceil(math.Abs(e.Angle)/(math.Pi/16))) + 1
			for i := 0; i <= n; i++ {
				s, k := math.Sincos(e.Start + e.Angle*float64(i)/float64(n))
				x, y := c.at(vg.Point{X: e.Pos.X + e.Radius*vg.Length(k), Y: e.Pos.Y + e.Radius*vg.Length(s)})
				if !begun {
					c.pdf.MoveTo(x, y)
					begun = true
					continue
				}
				c.pdf.LineTo(x, y)
			}
		case vg.CloseComp:
			c.pdf.ClosePath()
		}
	}
}

func (c *canvas) Stroke(p vg.Path) {
	if c.now.width <= 0 || len(p) == 0 {
		return
	}
	k := c.now.color
	c.pdf.SetDrawColor(int(k.R), int(k.G), int(k.B))
	c.pdf.SetLineWidth(float64(c.now.width) * mmPerPt)
	c.pdf.SetLineJoinStyle("round")
	c.pdf.SetDashPattern(c.now.dash, c.now.phase)
	c.trace(p)
	c.pdf.DrawPath("D")
	c.pdf.SetDashPattern(nil, 0)
}

func (c *canvas) Fill(p vg.Path) {
	if len(p) == 0 {
		return
	}
	k := c.now.color
	c.pdf.SetFillColor(int(k.R), int(k.G), int(k.B))
	c.trace(p)
	c.pdf.DrawPath("F")
}

func (c *canvas) FillString(f font.Face, p vg.Point, s string) {
	if f.Font.Size == 0 || s == "" {
		return
	}
	s = c.clean(s)
	x, y := c.at(p)
	k := c.now.color
	style := ""
	if f.Font.Weight == xfont.WeightBold {
		style = "B"
	}
	c.pdf.SetTextColor(int(k.R), int(k.G), int(k.B))
	c.pdf.SetFont(family, style, float64(f.Font.Size))
	angle := math.Atan2(c.now.m[1], c.now.m[0]) * 180 / math.Pi
	if angle == 0 {
		c.pdf.Text(x, y, s)
		return
	}
	c.pdf.TransformBegin()
	c.pdf.TransformRotate(angle, x, y)
	c.pdf.Text(x, y, s)
	c.pdf.TransformEnd()
}

// DrawImage is here for the interface only: no chart holds a bitmap.
func (c *canvas) DrawImage(vg.Rectangle, image.Image) {}
