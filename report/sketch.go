package report

import (
	"math"
	"sort"

	"slowpoint/model"
)

// sketch draws the section of a product with a place marked, name in words beside it; it takes height mm of the page.
func (d *doc) sketch(p *model.Product, at model.Place, name string, h float64) {
	d.need(h)
	s := section{d: d, p: p, at: at, name: name, x: d.left, y: d.y, h: h, x0: d.left}
	across, along := func(q model.Place) float64 { return q.AcrossM }, func(q model.Place) float64 { return q.AlongM }
	switch ways := p.Shape.Ways; {
	case p.Shape.Mixed():
		s.pot()
	case p.Shape.Oval():
		s.oval()
	case p.Shape.Layered():
		s.slab()
		s.layers()
	case len(ways) == 3:
		s.x -= 6
		s.box(&ways[1], &ways[0], across, say("sketch across"), false)
		s.x += 64
		s.box(&ways[2], &ways[0], along, say("sketch along"), true)
	case len(ways) == 2:
		s.box(&ways[1], &ways[0], across, "", true)
	case ways[0].Round():
		s.round()
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
	x0      float64 // the left edge of the frame
}

// The lines of a sketch.
var (
	thin  = pencil{pt: 0.7, color: black}
	probe = pencil{pt: 0.9, color: black}
	heavy = pencil{pt: 1.5, color: black}
)

func (s *section) line(x, y, x2, y2 float64) {
	s.d.pdf.line(thin, x, y, x2, y2)
}

// mark is a place in a section with its words.
type mark struct {
	x, y  float64 // on the page, mm
	words string
	probe bool
}

// marks draws the slowest place as a ringed cross and the user's places as squares. With words, each is led to its name at the
// right of x = right, from the top down; names are moved apart.
func (s *section) marks(to func(model.Place) (float64, float64), right float64, words bool) {
	cx, cy := to(s.at)
	all := []mark{{cx, cy, s.name, false}}
	for _, pt := range s.p.Points {
		if pt.Place != s.at && pt.Name != "centre" && len(all) < 6 {
			x, y := to(pt.Place)
			all = append(all, mark{x, y, pt.Name, true})
		}
	}
	p := s.d.pdf
	for _, m := range all {
		if m.probe {
			p.frame(probe, m.x-1.1, m.y-1.1, 2.2, 2.2)
			continue
		}
		p.line(heavy, m.x-1.8, m.y-1.8, m.x+1.8, m.y+1.8)
		p.line(heavy, m.x-1.8, m.y+1.8, m.x+1.8, m.y-1.8)
		p.circle(thin, m.x, m.y, 2.6)
	}
	if !words {
		return
	}
	sort.SliceStable(all, func(i, j int) bool { return all[i].y < all[j].y })
	next := s.y + 1
	for _, m := range all {
		lines := wrap(s.d.clean(m.words), s.x0+frameWide-right-9, small, !m.probe)
		tall := float64(len(lines)) * height(small)
		y := max(next, m.y-height(small)/2)
		next = y + tall + 1
		reach := 2.6
		if m.probe {
			reach = 1.1
		}
		s.line(m.x+reach, m.y, right+2, y+height(small)/2)
		s.line(right+2, y+height(small)/2, right+7, y+height(small)/2)
		for k, t := range lines {
			s.d.put(right+8.5, y+(float64(k)+0.72)*height(small), t, small, !m.probe)
		}
	}
}

// measure writes a size beside a line with end strokes, upright at x or level at y.
func (s *section) measure(x, y, x2, y2 float64, words string) {
	s.line(x, y, x2, y2)
	w := widthMM(words, small, false)
	if x == x2 {
		s.line(x-1.2, y, x+1.2, y)
		s.line(x-1.2, y2, x+1.2, y2)
		at := (y+y2)/2 + w/2
		s.d.pdf.turned(90, x-1.2, at, func() { s.d.put(x-1.2, at, words, small, false) })
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
	p.line(heavy, x, y, x+w, y)
	p.line(heavy, x, y+h, x+w, y+h)
	for _, side := range []float64{x, x + w} { // it goes on: a broken edge
		p.pencil(thin)
		p.moveTo(side, y)
		for k := 1; k <= 8; k++ {
			p.lineTo(side+float64(k%2*2-1)*1.2*btof(k < 8), y+h*float64(k)/8)
		}
		p.stroke()
	}
	s.d.put(x+2, y-1.5, model.Top.Name, small, false)
	s.d.put(x+2, y+h+4, model.Underside.Name, small, false)
	column := s.p.Shape.Ways[0].Size
	t := *s.p.Size.Of(column)
	s.measure(x-6, y, x-6, y+h, s.sizeWords(sizeName(column), t, h))
	to := func(pl model.Place) (float64, float64) { return x + w/2, y + h/2 - pl.UpM/t*h }
	s.marks(to, x+w, true)
}

// round is a ball or the cut through a long round piece.
func (s *section) round() {
	r := (s.h - 14) / 2
	cx, cy := s.x+18+r, s.y+3+r
	s.d.pdf.circle(heavy, cx, cy, r)
	column := s.p.Shape.Ways[0].Size
	whole := *s.p.Size.Of(column)
	s.measure(cx-r, cy+r+3, cx+r, cy+r+3, s.sizeWords(sizeName(column), whole, 2*r+16))
	scale := r / (whole / 2)
	s.marks(func(q model.Place) (float64, float64) { return cx + q.UpM*scale, cy }, cx+r+4, true)
}

// oval is the section of a spheroid through its axis, which stands upright.
func (s *section) oval() {
	upright, level := s.p.Shape.Ways[0].Size, s.p.Shape.Ways[1].Size
	thick, wide := *s.p.Size.Of(upright), *s.p.Size.Of(level)
	scale := min(60/wide, (s.h-14)/thick)
	rx, ry := max(wide*scale/2, 4), max(thick*scale/2, 4)
	cx, cy := s.x+18+rx, s.y+3+ry
	p := s.d.pdf
	p.pencil(heavy)
	const n = 72
	for k := 0; k <= n; k++ {
		sin, cos := math.Sincos(2 * math.Pi * float64(k) / n)
		if k == 0 {
			p.moveTo(cx+rx*cos, cy+ry*sin)
		} else {
			p.lineTo(cx+rx*cos, cy+ry*sin)
		}
	}
	p.stroke()
	axis := thin
	axis.dash = []float64{6, 2, 1, 2}
	p.line(axis, cx, cy-ry-1.5, cx, cy+ry+1.5)
	s.measure(cx-rx-6, cy-ry, cx-rx-6, cy+ry, s.sizeWords(sizeName(upright), thick, 2*ry))
	s.measure(cx-rx, cy+ry+3, cx+rx, cy+ry+3, s.sizeWords(sizeName(level), wide, 2*rx+16))
	s.marks(func(q model.Place) (float64, float64) { return cx + q.AcrossM/wide*2*rx, cy - q.UpM/thick*2*ry }, cx+rx+4, true)
}

// layers draws the joints of a layered slab into it, to scale, and leads each layer to its number and food. A joint with a contact
// resistance is broken.
func (s *section) layers() {
	x, w := s.x+18, 84.0
	y, h := s.y+6, s.h-12
	p, t := s.d.pdf, s.p.Size.ThicknessM
	gap := thin
	gap.dash = []float64{3, 2}
	tall := height(small)
	label := y + 0.4
	over := float64(len(s.p.Layers)) * tall // what the names need below
	at := y
	for i := range s.p.Layers {
		l := &s.p.Layers[i]
		middle := at + l.ThicknessM/t*h/2
		at += l.ThicknessM / t * h
		if i < len(s.p.Layers)-1 {
			k := thin
			if l.BelowM2KW > 0 {
				k = gap
			}
			p.line(k, x, at, x+w, at)
		}
		if over > h { // too many to be named: the sentence below the picture names them
			continue
		}
		label = max(label, min(middle-tall/2, y+h-over))
		over -= tall
		words := s.d.clean(say("sketch layer", i+1, l.Food.Name))
		for widthMM(words, small, false) > w/2-8 && len(words) > 4 {
			words = string([]rune(words)[:len([]rune(words))-2]) + "…"
		}
		s.line(x, middle, x+3, label+tall/2)
		p.box(white, x+3.5, label+0.3, widthMM(words, small, false)+1, tall-0.6)
		s.d.put(x+4, label+0.72*tall, words, small, false)
		label += tall
	}
}

// box is the section of two ways that cross; side says how far to the side a place lies, m.
func (s *section) box(level, upright *model.Way, side func(model.Place) float64, caption string, words bool) {
	wide, tall := *s.p.Size.Of(level.Size), *s.p.Size.Of(upright.Size)
	roomW, roomH := 60.0, s.h-16
	if caption != "" {
		roomW = 46
	}
	scale := min(roomW/wide, roomH/tall)
	w, h := wide*scale, tall*scale
	if w < 8 || h < 8 {
		w, h = max(w, 8), max(h, 8)
		caption += say("not to scale")
	}
	x, y := s.x+14, s.y+7
	s.outline(x, y, w, h)
	if caption != "" {
		s.d.put(x, y-3.4, caption, small, false) // above the mark of a place at the top
	}
	s.measure(x-4, y, x-4, y+h, s.sizeWords(sizeName(upright.Size), tall, h))
	s.measure(x, y+h+3, x+w, y+h+3, s.sizeWords(sizeName(level.Size), wide, w))
	s.marks(func(q model.Place) (float64, float64) { return x + w/2 + side(q)/wide*w, y + h/2 - q.UpM/tall*h }, x+w, words)
}

// sizeWords leaves the name away where the line is too short for it, and then the second unit, which the sentence below has.
func (s *section) sizeWords(name string, m, room float64) string {
	for _, words := range []string{name + " " + length(s.p, m), length(s.p, m)} {
		if widthMM(words, small, false) < room {
			return words
		}
	}
	return ownLength(s.p, m)
}

// pot is a vessel whose whole content has one temperature.
func (s *section) pot() {
	x, y, w, h := s.x+18, s.y+4, 60.0, s.h-12
	p := s.d.pdf
	p.pencil(heavy)
	p.moveTo(x, y)
	p.lineTo(x, y+h)
	p.lineTo(x+w, y+h)
	p.lineTo(x+w, y)
	p.stroke()
	p.pencil(probe)
	p.moveTo(x, y+5)
	for k := 1; k <= 30; k++ {
		p.lineTo(x+w*float64(k)/30, y+5+0.6*math.Sin(float64(k)*math.Pi/5))
	}
	p.stroke()
	for i, t := range wrap(say("sketch stirred"), w-8, small, false) {
		s.d.put(x+4, y+h/2+float64(i)*height(small), t, small, false)
	}
}
