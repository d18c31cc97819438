package report

import (
	"math"

	"slowpoint/model"
)

// sketch draws the section of a product with the slowest place marked; it takes height mm of the page.
func (d *doc) sketch(p *model.Product, at model.Place, name string, h float64) {
	d.need(h)
	s := section{d: d, p: p, at: at, name: name, x: d.left, y: d.y, h: h}
	switch p.Shape {
	case model.Cylinder, model.Sphere:
		s.round()
	case model.ShortCylinder:
		s.box(frameWide*0.5, p.Size.DiameterM, p.Size.LengthM, at.AcrossM, "", say("size diameter"), say("size length"), true)
	case model.Bar:
		s.box(frameWide*0.5, p.Size.WidthM, p.Size.ThicknessM, at.AcrossM, "", say("size width"), say("size thickness"), true)
	case model.Brick:
		s.box(0, p.Size.WidthM, p.Size.ThicknessM, at.AcrossM, say("sketch across"), say("size width"), say("size thickness"), true)
		s.x += frameWide / 2
		s.box(0, p.Size.LengthM, p.Size.ThicknessM, at.AlongM, say("sketch along"), say("size length"), say("size thickness"), false)
	case model.Stirred:
		s.pot()
	default:
		s.slab()
	}
	d.y += h + 1
}

// section is a sketch being drawn; x, y is its upper left corner on the page, mm.
type section struct {
	d       *doc
	p       *model.Product
	at      model.Place
	name    string
	x, y, h float64
}

func (s *section) line(x, y, x2, y2 float64) {
	s.d.pdf.SetDrawColor(0, 0, 0)
	s.d.pdf.SetLineWidth(0.7 * mmPerPt)
	s.d.pdf.SetDashPattern(nil, 0)
	s.d.pdf.Line(x, y, x2, y2)
}

// cross marks the slowest place and writes its name beside it, on white.
func (s *section) cross(x, y, right float64) {
	p := s.d.pdf
	p.SetDrawColor(0, 0, 0)
	p.SetLineWidth(1.8 * mmPerPt)
	p.Line(x-2.2, y-2.2, x+2.2, y+2.2)
	p.Line(x-2.2, y+2.2, x+2.2, y-2.2)
	p.SetLineWidth(0.7 * mmPerPt)
	p.Circle(x, y, 3.4, "D")
	s.line(x+3.4, y, right-1.5, y)
	lines := wrap(s.d.clean(say("sketch slowest", s.name)), 44, small, true)
	for i, t := range lines {
		s.d.put(right, y+1.2+float64(i)*height(small), t, small, true)
	}
}

// probes marks the user's own places that lie in the section: across is along the width of the picture.
func (s *section) probes(to func(model.Place) (float64, float64)) {
	for _, pt := range s.p.Points {
		if pt.Place == s.at || pt.Name == "centre" {
			continue
		}
		x, y := to(pt.Place)
		s.d.pdf.SetDrawColor(0, 0, 0)
		s.d.pdf.SetLineWidth(0.9 * mmPerPt)
		s.d.pdf.Rect(x-1.3, y-1.3, 2.6, 2.6, "D")
		s.d.put(x-1.3-1-widthMM(s.d.clean(pt.Name), small, false), y+1.2, s.d.clean(pt.Name), small, false)
	}
}

// measure writes a size beside a line with end strokes, upright at x or level at y.
func (s *section) measure(x, y, x2, y2 float64, words string) {
	s.line(x, y, x2, y2)
	w := widthMM(words, small, false)
	if x == x2 {
		s.line(x-1.2, y, x+1.2, y)
		s.line(x-1.2, y2, x+1.2, y2)
		s.d.pdf.TransformBegin()
		s.d.pdf.TransformRotate(90, x-1.2, (y+y2)/2+w/2)
		s.d.put(x-1.2, (y+y2)/2+w/2, words, small, false)
		s.d.pdf.TransformEnd()
		return
	}
	s.line(x, y-1.2, x, y+1.2)
	s.line(x2, y-1.2, x2, y+1.2)
	s.d.put((x+x2)/2-w/2, y+3.6, words, small, false)
}

// outline draws the heavy edge of the food.
func (s *section) outline(x, y, w, h float64) { s.d.frame(x, y, w, h, 1.5) }

// slab is cut off at both sides: it goes on.
func (s *section) slab() {
	x, w := s.x+18, 84.0
	y, h := s.y+6, s.h-12
	p := s.d.pdf
	p.SetDrawColor(0, 0, 0)
	p.SetLineWidth(1.5 * mmPerPt)
	p.Line(x, y, x+w, y)
	p.Line(x, y+h, x+w, y+h)
	for _, side := range []float64{x, x + w} { // it goes on: a broken edge
		p.SetLineWidth(0.7 * mmPerPt)
		p.MoveTo(side, y)
		for k := 1; k <= 8; k++ {
			p.LineTo(side+float64(k%2*2-1)*1.2*btof(k < 8), y+h*float64(k)/8)
		}
		p.DrawPath("D")
	}
	s.d.put(x+2, y-1.5, model.Top.Name, small, false)
	s.d.put(x+2, y+h+4, model.Underside.Name, small, false)
	t := s.p.Size.ThicknessM
	s.measure(x-6, y, x-6, y+h, say("size thickness")+" "+mm(t))
	to := func(pl model.Place) (float64, float64) { return x + w/2, y + h/2 - pl.UpM/t*h }
	cx, cy := to(s.at)
	s.cross(cx, cy, x+w+4)
	s.probes(func(pl model.Place) (float64, float64) { a, b := to(pl); return a - 18, b })
}

// round is a ball or the cut through a long round piece.
func (s *section) round() {
	r := (s.h - 14) / 2
	cx, cy := s.x+18+r, s.y+3+r
	p := s.d.pdf
	p.SetDrawColor(0, 0, 0)
	p.SetLineWidth(1.5 * mmPerPt)
	p.Circle(cx, cy, r, "D")
	s.measure(cx-r, cy+r+3, cx+r, cy+r+3, say("size diameter")+" "+mm(s.p.Size.DiameterM))
	scale := r / (s.p.Size.DiameterM / 2)
	s.cross(cx+s.at.UpM*scale, cy, cx+r+8)
	s.probes(func(pl model.Place) (float64, float64) { return cx - pl.UpM*scale, cy })
}

// box is a rectangular section, or the section along the axis of a short cylinder; wide and tall in m.
func (s *section) box(_ float64, wide, tall, across float64, caption, wideName, tallName string, named bool) {
	roomW, roomH := 60.0, s.h-14
	if caption != "" {
		roomW = 44
	}
	scale := min(roomW/wide, roomH/tall)
	w, h := wide*scale, tall*scale
	note := ""
	if w < 8 || h < 8 {
		w, h = max(w, 8), max(h, 8)
		note = say("not to scale")
	}
	x, y := s.x+14, s.y+5
	s.outline(x, y, w, h)
	if caption != "" {
		s.d.put(x, y-1.5, caption+note, small, false)
	} else if note != "" {
		s.d.put(x, y-1.5, note, small, false)
	}
	s.measure(x-5, y, x-5, y+h, sizeWords(tallName, tall, h))
	s.measure(x, y+h+3, x+w, y+h+3, wideName+" "+mm(wide))
	to := func(ac, up float64) (float64, float64) { return x + w/2 + ac/wide*w, y + h/2 - up/tall*h }
	cx, cy := to(across, s.at.UpM)
	if !named {
		s.name = ""
	}
	s.mark(cx, cy, x+w+3, named)
	if named {
		s.probes(func(pl model.Place) (float64, float64) { return to(pl.AcrossM, pl.UpM) })
	}
}

// sizeWords leaves the name away where the line is too short for it.
func sizeWords(name string, m, room float64) string {
	if s := name + " " + mm(m); widthMM(s, small, false) < room {
		return s
	}
	return mm(m)
}

// mark is a cross with or without words.
func (s *section) mark(x, y, right float64, named bool) {
	if named {
		s.cross(x, y, right)
		return
	}
	p := s.d.pdf
	p.SetDrawColor(0, 0, 0)
	p.SetLineWidth(1.8 * mmPerPt)
	p.Line(x-2.2, y-2.2, x+2.2, y+2.2)
	p.Line(x-2.2, y+2.2, x+2.2, y-2.2)
}

// pot is a vessel whose whole content has one temperature.
func (s *section) pot() {
	x, y, w, h := s.x+18, s.y+4, 60.0, s.h-12
	p := s.d.pdf
	p.SetDrawColor(0, 0, 0)
	p.SetLineWidth(1.5 * mmPerPt)
	p.MoveTo(x, y)
	p.LineTo(x, y+h)
	p.LineTo(x+w, y+h)
	p.LineTo(x+w, y)
	p.DrawPath("D")
	p.SetLineWidth(0.9 * mmPerPt)
	p.MoveTo(x, y+5)
	for k := 1; k <= 30; k++ {
		p.LineTo(x+w*float64(k)/30, y+5+0.6*math.Sin(float64(k)*math.Pi/5))
	}
	p.DrawPath("D")
	for i, t := range wrap(say("sketch stirred"), w-8, small, false) {
		s.d.put(x+4, y+h/2+float64(i)*height(small), t, small, false)
	}
}
