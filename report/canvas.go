package report

import (
	"image"
	"image/color"
	"math"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

const mmPerPt = 25.4 / 72

// canvas draws charts as vectors and real text onto an area of a page whose unit is mm.
// The origin is the lower left corner of the area.
type canvas struct {
	pdf         *paper
	clean       func(string) string
	left, floor float64 // the lower left corner of the area from the top left of the page, mm
	w, h        float64 // mm
	now         pen
	saved       []pen
}

// pen is the state of a canvas.
type pen struct {
	m [6]float64 // to the area: X = m0 x + m2 y + m4, Y = m1 x + m3 y + m5 (mm, y up)
	pencil
}

// canvas opens an area of the current page; top is the distance from the top of the page, mm.
func (d *doc) canvas(left, top, w, h float64) *canvas {
	return &canvas{pdf: d.pdf, clean: d.clean, left: left, floor: top + h, w: w, h: h,
		now: pen{m: [6]float64{1, 0, 0, 1, 0, 0}, pencil: pencil{pt: 1, color: black}}}
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

func (c *canvas) SetLineWidth(w vg.Length) { c.now.pt = float64(w) }
func (c *canvas) SetLineDash(p []vg.Length, phase vg.Length) {
	c.now.dash = nil
	for _, d := range p {
		c.now.dash = append(c.now.dash, float64(d))
	}
	c.now.phase = float64(phase)
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
	var x0, y0 float64 // where the path stands
	for _, e := range p {
		x, y := c.at(e.Pos)
		switch e.Type {
		case vg.MoveComp:
			c.pdf.moveTo(x, y)
			begun = true
		case vg.LineComp:
			c.pdf.lineTo(x, y)
		case vg.CurveComp:
			x1, y1 := c.at(e.Control[0])
			if len(e.Control) == 1 { // quadratic: the cubic curve that is the same
				c.pdf.curveTo(x0+(x1-x0)*2/3, y0+(y1-y0)*2/3, x+(x1-x)*2/3, y+(y1-y)*2/3, x, y)
			} else {
				x2, y2 := c.at(e.Control[1])
				c.pdf.curveTo(x1, y1, x2, y2, x, y)
			}
		case vg.ArcComp:
			x, y = c.arc(e, begun)
			begun = true
		case vg.CloseComp:
			c.pdf.closePath()
		}
		x0, y0 = x, y
	}
}

// arc lays an arc of a circle down, after a line to its beginning, and gives its end.
func (c *canvas) arc(e vg.PathComp, begun bool) (x, y float64) {
	m := c.now.m
	scale, turn := math.Hypot(m[0], m[1]), math.Atan2(m[1], m[0]) // a canvas is never sheared or mirrored
	r := float64(e.Radius) * mmPerPt * scale
	cx, cy := c.at(e.Pos)
	s, k := math.Sincos(e.Start + turn)
	if !begun {
		c.pdf.moveTo(cx+r*k, cy-r*s)
	}
	c.pdf.arcTo(cx, cy, r, e.Start+turn, e.Angle)
	s, k = math.Sincos(e.Start + turn + e.Angle)
	return cx + r*k, cy - r*s
}

func (c *canvas) Stroke(p vg.Path) {
	if c.now.pt <= 0 || len(p) == 0 {
		return
	}
	c.pdf.pencil(c.now.pencil)
	c.trace(p)
	c.pdf.stroke()
}

func (c *canvas) Fill(p vg.Path) {
	if len(p) == 0 {
		return
	}
	c.pdf.ground(c.now.color)
	c.trace(p)
	c.pdf.fill()
}

func (c *canvas) FillString(f font.Face, p vg.Point, s string) {
	if f.Font.Size == 0 || s == "" {
		return
	}
	x, y := c.at(p)
	draw := func() {
		c.pdf.text(x, y, c.clean(s), float64(f.Font.Size), f.Font.Weight == xfont.WeightBold, c.now.color)
	}
	if angle := math.Atan2(c.now.m[1], c.now.m[0]) * 180 / math.Pi; angle != 0 {
		c.pdf.turned(angle, x, y, draw)
	} else {
		draw()
	}
}

// DrawImage is here for the interface only: no chart holds a bitmap.
func (c *canvas) DrawImage(vg.Rectangle, image.Image) {}
