package report

import (
	"image/color"
	"math"
	"slices"
	"sort"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"slowpoint/model"
	"slowpoint/model/unit"
	"slowpoint/rules"
)

// The colours of lines; they are told apart by dash, mark and label as well.
var (
	black      = color.NRGBA{A: 255}
	white      = color.NRGBA{255, 255, 255, 255}
	blue       = color.NRGBA{0, 114, 178, 255}
	vermillion = color.NRGBA{213, 94, 0, 255}
	green      = color.NRGBA{0, 158, 115, 255}
	grey       = color.NRGBA{110, 110, 110, 255}
	pale       = color.NRGBA{205, 205, 205, 255}
)

// looks are what tells lines apart in grey.
var looks = []struct {
	color color.NRGBA
	dash  []vg.Length
	mark  draw.GlyphDrawer
}{
	{black, nil, draw.CircleGlyph{}},
	{blue, []vg.Length{6, 2}, draw.BoxGlyph{}},
	{vermillion, []vg.Length{2, 2}, draw.TriangleGlyph{}},
	{green, []vg.Length{8, 2, 2, 2}, draw.RingGlyph{}},
	{blue, nil, draw.SquareGlyph{}},
	{vermillion, []vg.Length{10, 3}, draw.PyramidGlyph{}},
}

// line is one curve of a chart.
type line struct {
	name string
	x, y []float64 // as long as each other, in the units of the axes; NaN breaks the line
}

// level is a limit's temperature: a line from one time to another with its words at the line.
type level struct {
	words    []string // temperature, name: in one line if there is room, else in two
	more     int      // further limits at the same temperature
	y        float64
	from, to float64
}

// band is a step: its bounds, its name, and a shorter way to say it.
type band struct {
	name, short string
	from, to    float64
}

// spot marks an instant on a curve.
type spot struct {
	words string
	x, y  float64
}

// chart has curves with labels at their ends, limits with labels at the line, steps named in words.
type chart struct {
	xName, yName   string
	x0, x1, y0, y1 float64
	xTicks         []plot.Tick
	yTicks         []float64
	broken         []float64 // where the axis of time is drawn shorter
	lines          []line
	levels         []level
	bands          []band
	spots          []spot
	unnamed        int     // points that have no room for a label
	size           float64 // of the type, pt
	ends           float64 // room for the labels at the right, pt
}

func (f *chart) style(bold bool) text.Style {
	return text.Style{Color: black, Font: chartFont(vg.Length(f.size), bold), Handler: faces().measure}
}

// draw puts the chart on a canvas.
func (f *chart) draw(c *canvas) {
	p := plot.New()
	p.BackgroundColor = nil
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = f.x0, f.x1, f.y0, f.y1
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Label.TextStyle.Font, a.Label.TextStyle.Handler = chartFont(vg.Length(f.size), false), faces().measure
		a.Tick.Label.Font, a.Tick.Label.Handler = chartFont(vg.Length(f.size), false), faces().measure
		a.LineStyle.Width, a.Tick.LineStyle.Width = 0.7, 0.7
	}
	p.Title.TextStyle.Font, p.Title.TextStyle.Handler = p.X.Label.TextStyle.Font, faces().measure
	p.Legend.TextStyle.Font, p.Legend.TextStyle.Handler = p.X.Label.TextStyle.Font, faces().measure
	p.X.Label.Text, p.Y.Label.Text = f.xName, f.yName
	p.Y.Tick.Marker = marks(f.yTicks)
	p.Add(f)
	widest := 0.0
	for _, l := range f.lines {
		widest = max(widest, widthMM(unseen{}.clean(l.name), f.size, false)/mmPerPt+17)
	}
	f.ends = min(f.ends, widest)
	wide, _ := c.Size()
	const beside = 40 // pt for the axis of temperatures, about
	p.X.Tick.Marker = f.apart(float64(wide) - f.ends - beside)
	p.Draw(draw.Crop(draw.New(c), 0, -vg.Length(f.ends), 0, 0))
}

// apart gives the marks of the lower axis, wide pt long, without the numbers that would touch the one before.
func (f *chart) apart(wide float64) plot.ConstantTicks {
	const gap = 4 // pt
	t := append(plot.ConstantTicks(nil), f.xTicks...)
	end := math.Inf(-1)
	for i := range t {
		at, half := (t[i].Value-f.x0)/(f.x1-f.x0)*wide, widthMM(t[i].Label, f.size, false)/mmPerPt/2
		if at-half < end+gap {
			t[i].Label = ""
			continue
		}
		end = at + half
	}
	return t
}

func marks(at []float64) plot.ConstantTicks {
	var t plot.ConstantTicks
	for _, v := range at {
		t = append(t, plot.Tick{Value: v, Label: plain(v, 2, nearest)})
	}
	return t
}

// Plot draws everything inside the axes, and the labels beside them. The labels are placed first, where they cover least;
// their white ground goes under the curves, so that no curve is ever covered by more than a letter.
func (f *chart) Plot(c draw.Canvas, p *plot.Plot) {
	x, y := p.Transforms(&c)
	taken := &labels{}
	for _, v := range f.yTicks {
		if v > f.y0 && v < f.y1 {
			c.StrokeLine2(draw.LineStyle{Color: pale, Width: 0.7}, x(f.x0), y(v), x(f.x1), y(v))
		}
	}
	f.plotBands(c, x, taken)
	runs := make([][][]vg.Point, len(f.lines))
	for i := range f.lines {
		runs[i] = f.runs(x, y, i, taken)
	}
	for _, s := range f.spots {
		taken.add(vg.Rectangle{Min: vg.Point{X: x(s.x) - 4, Y: y(s.y) - 4}, Max: vg.Point{X: x(s.x) + 4, Y: y(s.y) + 4}})
	}
	for _, l := range f.levels { // no words on any limit's line, their own among them
		taken.add(vg.Rectangle{Min: vg.Point{X: x(l.from), Y: y(l.y) - 0.7}, Max: vg.Point{X: x(l.to), Y: y(l.y) + 0.7}})
	}
	notes := f.notes(c, x, y, taken)
	for _, n := range notes {
		b := n.box
		c.FillPolygon(color.White, []vg.Point{b.Min, {X: b.Max.X, Y: b.Min.Y}, b.Max, {X: b.Min.X, Y: b.Max.Y}})
	}
	for _, l := range f.levels {
		ls := draw.LineStyle{Color: black, Width: 1, Dashes: []vg.Length{5, 2, 1, 2}}
		c.StrokeLine2(ls, x(l.from), y(l.y), x(l.to), y(l.y))
	}
	for _, at := range f.broken { // the axis is broken, and so is everything above it
		for _, dx := range []vg.Length{-2, 2} {
			c.StrokeLine2(draw.LineStyle{Color: black, Width: 0.9}, x(at)+dx-2, c.Min.Y-5, x(at)+dx+2, c.Min.Y+5)
			c.StrokeLine2(draw.LineStyle{Color: grey, Width: 0.7, Dashes: []vg.Length{1, 3}}, x(at)+dx, c.Min.Y+5, x(at)+dx, c.Max.Y-vg.Length(f.size*1.5))
		}
	}
	for i := len(f.lines) - 1; i >= 0; i-- {
		f.plotLine(c, x, y, i, runs[i])
	}
	for _, s := range f.spots {
		c.DrawGlyph(draw.GlyphStyle{Color: black, Radius: 4, Shape: draw.RingGlyph{}}, vg.Point{X: x(s.x), Y: y(s.y)})
	}
	for _, n := range notes {
		if n.from != nil {
			c.StrokeLine2(draw.LineStyle{Color: black, Width: 0.7}, n.from.X, n.from.Y, n.to.X, n.to.Y)
		}
		for k, s := range n.words {
			at := n.box.Max.Y - vg.Length(f.size*(1.2*float64(k)+0.97))
			c.FillText(f.style(false), vg.Point{X: n.box.Min.X + 1.5, Y: at}, s)
		}
	}
	f.plotEnds(c, y)
}

// note is a label with its place, and a line to what it is about unless it stands beside it.
type note struct {
	words    []string
	box      vg.Rectangle
	from, to *vg.Point
}

// plotBands draws the bounds of the steps and their names in the strip at the top.
func (f *chart) plotBands(c draw.Canvas, x func(float64) vg.Length, taken *labels) {
	st := f.style(true)
	st.YAlign = text.YTop
	h := vg.Length(f.size * 1.5)
	for i, b := range f.bands {
		if i > 0 {
			c.StrokeLine2(draw.LineStyle{Color: grey, Width: 0.7, Dashes: []vg.Length{1, 2}}, x(b.from), c.Min.Y, x(b.from), c.Max.Y)
			taken.add(vg.Rectangle{Min: vg.Point{X: x(b.from) - 0.7, Y: c.Min.Y}, Max: vg.Point{X: x(b.from) + 0.7, Y: c.Max.Y}})
		}
		room := float64(x(b.to)-x(b.from)) * mmPerPt
		s := f.fit(b.name, i, room-1)
		if b.short != "" && !strings.HasSuffix(s, unseen{}.clean(b.name)) {
			s = f.fit(b.short, i, room-1)
		}
		c.FillText(st, vg.Point{X: x(b.from) + 2.5, Y: c.Max.Y - 2}, s)
	}
	if len(f.bands) > 0 {
		c.StrokeLine2(draw.LineStyle{Color: grey, Width: 0.7}, c.Min.X, c.Max.Y-h, c.Max.X, c.Max.Y-h)
		taken.add(vg.Rectangle{Min: vg.Point{X: c.Min.X, Y: c.Max.Y - h}, Max: c.Max})
	}
}

// fit gives the name of a step as far as it fits: with its number, or the number alone, which the sentence below names; never cut.
func (f *chart) fit(name string, i int, room float64) string {
	clean := unseen{}.clean(name)
	number := plain(float64(i+1), 0, nearest)
	if s := number + " " + clean; widthMM(s, f.size, true) <= room {
		return s
	}
	if widthMM(number, f.size, true) <= room {
		return number
	}
	return ""
}

// runs turns a curve into unbroken pieces, and takes the room on its way.
func (f *chart) runs(x, y func(float64) vg.Length, i int, taken *labels) [][]vg.Point {
	l := &f.lines[i]
	var all [][]vg.Point
	var run []vg.Point
	for k := range l.x {
		if math.IsNaN(l.y[k]) {
			all, run = append(all, run), nil
			continue
		}
		pt := vg.Point{X: x(l.x[k]), Y: y(l.y[k])}
		if n := len(run); n > 0 {
			taken.line(run[n-1], pt)
		}
		run = append(run, pt)
	}
	return append(all, run)
}

// thinned appends a curve without the points that lie less than 0.02 pt off the line between their neighbours: what no printer
// can show. The ends and every turn stay.
func thinned(out, run []vg.Point) []vg.Point {
	if len(run) < 3 {
		return append(out, run...)
	}
	a, b := run[0], run[len(run)-1]
	long := math.Hypot(float64(b.X-a.X), float64(b.Y-a.Y))
	far, at := 0.02, 0
	for i, p := range run[1 : len(run)-1] {
		off := math.Hypot(float64(p.X-a.X), float64(p.Y-a.Y))
		if long > 0 {
			off = math.Abs(float64((b.X-a.X)*(p.Y-a.Y)-(b.Y-a.Y)*(p.X-a.X))) / long
		}
		if off > far {
			far, at = off, i+1
		}
	}
	if at == 0 {
		return append(out, a, b)
	}
	out = thinned(out, run[:at+1])
	return thinned(out[:len(out)-1], run[at:])
}

// plotLine draws a curve with marks along it.
func (f *chart) plotLine(c draw.Canvas, x, y func(float64) vg.Length, i int, runs [][]vg.Point) {
	l, look := &f.lines[i], looks[i%len(looks)]
	ls := draw.LineStyle{Color: look.color, Width: 1.2, Dashes: look.dash}
	if i == 0 {
		ls.Width = 1.8
	}
	for _, run := range runs {
		c.StrokeLines(ls, thinned(nil, run))
	}
	const n = 7
	for k := 0; k < n; k++ {
		at := f.x0 + (f.x1-f.x0)*(float64(k)+0.35+0.12*float64(i))/n
		j := sort.SearchFloat64s(l.x, at)
		if j > 0 && j < len(l.x) && !math.IsNaN(l.y[j]) {
			c.DrawGlyph(draw.GlyphStyle{Color: look.color, Radius: 2.4, Shape: look.mark}, vg.Point{X: x(l.x[j]), Y: y(l.y[j])})
		}
	}
}

// notes places every label where it covers least. Limits without their names leave more room; the sentence below names them.
func (f *chart) notes(c draw.Canvas, x, y func(float64) vg.Length, taken *labels) []note {
	notes, covers := f.placeNotes(c, x, y, *taken, false)
	if covers > 0 {
		if brief, less := f.placeNotes(c, x, y, *taken, true); less < covers {
			return brief
		}
	}
	return notes
}

// placeNotes finds room for every label, brief without the names of limits, and tells how much the marked instants' labels cover.
func (f *chart) placeNotes(c draw.Canvas, x, y func(float64) vg.Length, taken labels, brief bool) (notes []note, covers float64) {
	taken.boxes = slices.Clip(taken.boxes) // each try adds its own
	for i := range f.levels {
		notes = append(notes, f.placeLevel(c, x, y, &f.levels[i], &taken, brief))
	}
	for _, s := range f.spots {
		n, cost := f.placeSpot(c, s.words, vg.Point{X: x(s.x), Y: y(s.y)}, &taken)
		notes, covers = append(notes, n), covers+cost
	}
	return notes, covers
}

// placeLevel finds room for the words of a limit at its line, within the steps that it is about: in one line, in several, without
// its name, or without its other unit; where all of them would lie on something, farther off with a line.
func (f *chart) placeLevel(c draw.Canvas, x, y func(float64) vg.Length, l *level, taken *labels, brief bool) note {
	var found note
	least := math.Inf(1)
	narrow := append([]string{l.words[0]}, wrap(unseen{}.clean(l.words[1]), 36*f.size/small, f.size, false)...)
	alone, _, _ := strings.Cut(l.words[0], " (")
	forms := [][]string{{strings.Join(l.words, " – ")}, l.words, narrow, l.words[:1], {alone}}
	from, to := max(x(l.from), c.Min.X), min(x(l.to), c.Max.X)
	for k, lines := range forms {
		if brief && k < 3 || len(lines) > 4 {
			continue
		}
		w, h := f.extent(lines)
		left, right := from+2, max(to-w-2, from+2)
		var at []vg.Point
		for k := 0; k <= 30; k++ { // along the line, above first
			px := min(max(left+(right-left)*vg.Length(k)/30, c.Min.X+2), c.Max.X-w)
			at = append(at, vg.Point{X: px, Y: y(l.y) + 1}, vg.Point{X: px, Y: y(l.y) - h - 1})
		}
		box, cost := taken.best(at, w, h, c.Rectangle)
		if k >= 3 { // the temperature alone rather than its name across a curve; the sentence below names it
			cost += 6 + float64(k-3)
		}
		if over := max(0, box.Max.X-to, from-box.Min.X); over > 0 { // into a step that it is not about
			cost += 20 + 2*float64(over)
		}
		if cost < least {
			found, least = note{words: lines, box: box}, cost
		}
	}
	if least > 9 { // more than leaving words out
		if n, cost := f.levelApart(c, from, to, y(l.y), forms[3:], taken); cost < least {
			found = n
		}
	}
	taken.label(found.box)
	if found.from != nil {
		taken.line(*found.from, *found.to)
	}
	return found
}

// levelApart finds room for the temperature of a limit above or below its line, which goes from one place to another at a height.
func (f *chart) levelApart(c draw.Canvas, from, to, at vg.Length, forms [][]string, taken *labels) (found note, least float64) {
	least = math.Inf(1)
	for k, lines := range forms {
		w, h := f.extent(lines)
		for px := from + 2; px+w < min(to, c.Max.X); px += 4 {
			for py := c.Min.Y + 1; py+h < c.Max.Y; py += 4 {
				box := vg.Rectangle{Min: vg.Point{X: px, Y: py}, Max: vg.Point{X: px + w, Y: py + h}}
				end, start := vg.Point{X: px + w/2, Y: py}, vg.Point{X: px + w/2, Y: at}
				if py+h/2 < at {
					end.Y = py + h
				}
				cost := 8 + float64(k) + 0.05*math.Abs(float64(end.Y-at))
				if cost += taken.cover(box, least-cost); cost >= least {
					continue
				}
				if cost += taken.crossed(start, end); cost < least {
					found, least = note{words: lines, box: box, from: &start, to: &end}, cost
				}
			}
		}
	}
	return found, least
}

// extent is the room that lines of words take, with a margin.
func (f *chart) extent(lines []string) (w, h vg.Length) {
	for _, s := range lines {
		w = max(w, f.style(false).Width(s)+3)
	}
	return w, vg.Length(f.size * 1.2 * float64(len(lines)))
}

// placeSpot finds room for a label near a point, or else anywhere on the chart; farther off it gets a line.
func (f *chart) placeSpot(c draw.Canvas, s string, p vg.Point, taken *labels) (note, float64) {
	w, h := f.style(false).Width(s)+3, vg.Length(f.size*1.2)
	var at []vg.Point
	for _, far := range []vg.Length{6, 12, 20, 30, 42, 56, 75} {
		for _, side := range []vg.Length{0, -w, -w / 2} {
			dx := map[bool]vg.Length{true: far / 2, false: -far / 2}[side == 0]
			at = append(at, vg.Point{X: p.X + side + dx, Y: p.Y + far}, vg.Point{X: p.X + side + dx, Y: p.Y - far - h},
				vg.Point{X: p.X + side + 3*dx, Y: p.Y + far/3}, vg.Point{X: p.X + side + 3*dx, Y: p.Y - far/3 - h})
		}
	}
	b, covers := taken.best(at, w, h, c.Rectangle)
	covers += taken.crossed(leader(p, b))
	if cost := covers; cost > 0 { // nowhere near: the place anywhere that covers least, the nearest of several
		for y := c.Min.Y + 1; y+h < c.Max.Y; y += 4 {
			for x := c.Min.X + 1; x+w < c.Max.X; x += 8 {
				r := vg.Rectangle{Min: vg.Point{X: x, Y: y}, Max: vg.Point{X: x + w, Y: y + h}}
				from, to := leader(p, r)
				most := cost - 0.02*math.Hypot(float64(to.X-from.X), float64(to.Y-from.Y))
				if most <= 0 {
					continue
				}
				if here := taken.cover(r, most); here < most {
					if here += taken.crossed(from, to); here < most {
						b, covers, cost = r, here, here+cost-most
					}
				}
			}
		}
	}
	taken.label(b)
	n := note{words: []string{s}, box: b}
	if from, to := leader(p, b); math.Hypot(float64(to.X-p.X), float64(to.Y-p.Y)) > 10 {
		n.from, n.to = &from, &to
		taken.line(from, to)
	}
	return n, covers
}

// leader is the line from the ring around a point to the nearest edge of a label.
func leader(p vg.Point, b vg.Rectangle) (from, to vg.Point) {
	to = vg.Point{X: min(max(p.X, b.Min.X), b.Max.X), Y: min(max(p.Y, b.Min.Y), b.Max.Y)}
	d := vg.Length(math.Hypot(float64(to.X-p.X), float64(to.Y-p.Y)))
	if d <= 4 {
		return to, to
	}
	return vg.Point{X: p.X + (to.X-p.X)*4/d, Y: p.Y + (to.Y-p.Y)*4/d}, to
}

// labels remembers what is taken on a chart: everything, and the labels by themselves, which no line may cross.
type labels struct{ boxes, words []vg.Rectangle }

func (t *labels) add(r vg.Rectangle) { t.boxes = append(t.boxes, r) }

// line takes the room of a line.
func (t *labels) line(from, to vg.Point) {
	parts := max(1, int(math.Hypot(float64(to.X-from.X), float64(to.Y-from.Y))/4))
	for q := 1; q <= parts; q++ {
		s := vg.Length(q) / vg.Length(parts)
		m := vg.Point{X: from.X + s*(to.X-from.X), Y: from.Y + s*(to.Y-from.Y)}
		t.add(vg.Rectangle{Min: vg.Point{X: m.X - 1, Y: m.Y - 1}, Max: vg.Point{X: m.X + 1, Y: m.Y + 1}})
	}
}

// best takes the first of the places that covers nothing, or the one that covers least, within bounds.
func (t *labels) best(at []vg.Point, w, h vg.Length, in vg.Rectangle) (vg.Rectangle, float64) {
	least, found := math.Inf(1), at[0]
	for _, p := range at {
		r := vg.Rectangle{Min: p, Max: vg.Point{X: p.X + w, Y: p.Y + h}}
		cost := 0.0
		if r.Min.X < in.Min.X || r.Max.X > in.Max.X+1 || r.Min.Y < in.Min.Y || r.Max.Y > in.Max.Y {
			cost += 1000
		}
		if cost += t.cover(r, least-cost); cost < least {
			least, found = cost, p
		}
		if cost == 0 {
			break
		}
	}
	return vg.Rectangle{Min: found, Max: vg.Point{X: found.X + w, Y: found.Y + h}}, least
}

// cover is how much of what is taken a rectangle covers; it stops counting where most is reached.
func (t *labels) cover(r vg.Rectangle, most float64) float64 {
	cost := 0.0
	for i := range t.boxes {
		b := &t.boxes[i]
		if b.Max.X <= r.Min.X || b.Min.X >= r.Max.X || b.Max.Y <= r.Min.Y || b.Min.Y >= r.Max.Y { // nearly all of them
			continue
		}
		dx, dy := min(r.Max.X, b.Max.X)-max(r.Min.X, b.Min.X), min(r.Max.Y, b.Max.Y)-max(r.Min.Y, b.Min.Y)
		if dx > 0 && dy > 0 {
			if cost += 1 + float64(dx*dy); cost >= most {
				break
			}
		}
	}
	return cost
}

// crossed is how much of labels a line crosses.
func (t *labels) crossed(from, to vg.Point) float64 {
	cost := 0.0
	parts := max(1, int(math.Hypot(float64(to.X-from.X), float64(to.Y-from.Y))/3))
	for q := 0; q <= parts; q++ {
		s := vg.Length(q) / vg.Length(parts)
		x, y := from.X+s*(to.X-from.X), from.Y+s*(to.Y-from.Y)
		for _, b := range t.words {
			if x > b.Min.X && x < b.Max.X && y > b.Min.Y && y < b.Max.Y {
				cost += 5
			}
		}
	}
	return cost
}

// label takes the room of words: words upon words are worse than words upon a line.
func (t *labels) label(r vg.Rectangle) {
	t.words = append(t.words, r)
	for range 3 {
		t.add(r)
	}
}

// plotEnds names the curves at their right ends, moved apart where they would touch.
func (f *chart) plotEnds(c draw.Canvas, y func(float64) vg.Length) {
	type end struct {
		i      int
		at, to vg.Length
		lines  []string
	}
	var ends []end
	st := f.style(false)
	lh := vg.Length(f.size * 1.2)
	for i := range f.lines {
		l := &f.lines[i]
		for k := len(l.y) - 1; k >= 0; k-- {
			if !math.IsNaN(l.y[k]) {
				name := wrap(unseen{}.clean(l.name), (f.ends-16)*mmPerPt, f.size, false)
				ends = append(ends, end{i, y(l.y[k]), y(l.y[k]), name})
				break
			}
		}
	}
	sort.SliceStable(ends, func(a, b int) bool { return ends[a].at < ends[b].at })
	half := func(e *end) vg.Length { return lh*vg.Length(len(e.lines))/2 + 1 }
	for range 60 {
		for k := range ends {
			e := &ends[k]
			if k > 0 {
				if gap := e.to - half(e) - ends[k-1].to - half(&ends[k-1]); gap < 0 {
					e.to -= gap / 2
					ends[k-1].to += gap / 2
				}
			}
		}
		for k := range ends {
			ends[k].to = min(max(ends[k].to, c.Min.Y+half(&ends[k])), c.Max.Y-half(&ends[k]))
		}
	}
	for _, e := range ends {
		look := looks[e.i%len(looks)]
		c.StrokeLine2(draw.LineStyle{Color: look.color, Width: 0.7}, c.Max.X, e.at, c.Max.X+7, e.to)
		c.DrawGlyph(draw.GlyphStyle{Color: look.color, Radius: 2.4, Shape: look.mark}, vg.Point{X: c.Max.X + 9, Y: e.to})
		for k, s := range e.lines {
			c.FillText(st, vg.Point{X: c.Max.X + 14, Y: e.to + half(&e) - 1 - lh*vg.Length(float64(k)+0.8)}, s)
		}
	}
}

// ticksTo gives round values from lo to hi, about n of them.
func ticksTo(lo, hi float64, steps []float64, n int) []float64 {
	step := steps[len(steps)-1]
	for _, s := range steps {
		if (hi-lo)/s <= float64(n) {
			step = s
			break
		}
	}
	for (hi-lo)/step > float64(2*n) {
		step *= 2
	}
	var t []float64
	for k := math.Ceil(lo/step - 1e-9); k*step <= hi+1e-9*step; k++ {
		t = append(t, k*step+0)
	}
	return t
}

// timeAxis is the axis of time of a chart. A step that is much longer than the others together, such as a cold store, is drawn
// shorter, with a break in the axis, so that the others can be seen, or much less so if it decides.
type timeAxis struct {
	name   string
	unitS  float64
	pieces []piece
	ticks  []plot.Tick
}

// piece is a step on the axis: from t0 to t1 (s), drawn from x0 to x1 (in the unit of the axis).
type piece struct {
	t0, t1, x0, x1  float64
	broken, decides bool // drawn shorter; and holds the instant that decides all the same
}

// breaks is where the break of a piece that is drawn shorter stands: in its middle, or away from the instant that decides.
func (p *piece) breaks(a *timeAxis, d *deciding) float64 {
	if !p.decides || d.finding == nil || !finite(d.finding.AtS) {
		return (p.x0 + p.x1) / 2
	}
	if a.at(*d.finding.AtS) > (p.x0+p.x1)/2 {
		return p.x0 + 0.2*(p.x1-p.x0)
	}
	return p.x0 + 0.8*(p.x1-p.x0)
}

// at is where an instant (s) stands on the axis.
func (a *timeAxis) at(t float64) float64 {
	for _, p := range a.pieces {
		if t <= p.t1 && p.t1 > p.t0 {
			return p.x0 + (p.x1-p.x0)*max(0, t-p.t0)/(p.t1-p.t0)
		}
	}
	return a.end()
}

func (a *timeAxis) end() float64 { return a.pieces[len(a.pieces)-1].x1 }

// stretch is the steps of a history between two of its indices, both included; none if to is below from.
type stretch struct{ from, to int }

func (p stretch) has(i int) bool { return i >= p.from && i <= p.to }

// part is the steps from where the clock of the deciding limit starts to the instant that decides, with those of the same stage beside
// them.
func (d *deciding) part() stretch {
	none := stretch{0, -1}
	if d.finding == nil {
		return none
	}
	at := d.finding.AtS
	if at == nil {
		at = d.finding.ClockEndS
	}
	if !finite(at) {
		return none
	}
	in := func(t float64) int {
		for i, sp := range d.history.Spans {
			if t <= sp.EndS+1e-6 {
				return i
			}
		}
		return len(d.history.Spans) - 1
	}
	p := stretch{in(*at), in(*at)}
	if start := d.finding.ClockStartS; finite(start) && *start <= *at {
		p.from = min(p.to, in(*start+1e-3)) // at the border of two steps: in the second
	}
	alike := func(i, k int) bool {
		a, b := d.history.Spans[i].Step, d.history.Spans[k].Step
		return a != nil && b != nil && a.Stage != nil && a.Stage == b.Stage
	}
	for p.from > 0 && alike(p.from, p.from-1) {
		p.from--
	}
	for p.to+1 < len(d.history.Spans) && alike(p.to, p.to+1) {
		p.to++
	}
	return p
}

// minutesUpTo is the last instant that is written in minutes, s.
const minutesUpTo = 4 * 3600.0

// newTimeAxis lays out the steps of a history. The part that decides has at least half of the axis where steps of very different
// lengths meet.
func newTimeAxis(h *model.History, decides stretch) *timeAxis {
	a := &timeAxis{name: say("axis minutes"), unitS: 60}
	wide := drawnLengths(h, decides)
	for i, sp := range h.Spans {
		if to := sp.EndS; to > minutesUpTo && (decides.has(i) || wide[i] >= to-sp.StartS) {
			a.name, a.unitS = say("axis hours"), 3600
		}
	}
	x := 0.0
	for i, sp := range h.Spans {
		broken := wide[i] < sp.EndS-sp.StartS
		a.pieces = append(a.pieces, piece{sp.StartS, sp.EndS, x, x + wide[i]/a.unitS, broken, broken && decides.has(i)})
		x += wide[i] / a.unitS
	}
	a.mark()
	return a
}

// drawnLengths are the lengths that the steps are drawn with, s: their own, or a shorter one.
func drawnLengths(h *model.History, decides stretch) []float64 {
	const long = 6 * 3600.0 // s; shorter steps are drawn shorter only beside a part that decides and is much shorter still
	const hour = 3600.0
	wide := make([]float64, len(h.Spans))
	rest, own, others := 0.0, 0.0, 0.0
	for i, sp := range h.Spans {
		if wide[i] = sp.EndS - sp.StartS; wide[i] <= long {
			rest += wide[i]
		}
	}
	most := 0.0 // of the others
	for i := range wide {
		if decides.has(i) {
			own += wide[i]
			continue
		}
		if rest > 0 && wide[i] > long && wide[i] > rest {
			wide[i] = rest / 3
		}
		others += wide[i]
		most = max(most, wide[i])
	}
	switch {
	case own > long && own > others && others >= hour: // leave the others up to a third
		share := max(others/(others+own), min(1./3, others/(6*hour)))
		if factor := others * (1 - share) / share / own; factor < 0.75 {
			for i := range wide {
				if decides.has(i) {
					wide[i] *= factor
				}
			}
		}
	case own > 0 && own < others && most > 5*own:
		giveWay(wide, decides, own)
	}
	return wide
}

// giveWay draws the steps around a part that decides so much shorter that they take together as much as it does, own s: those that
// are longer than the part if that is enough, else all.
func giveWay(wide []float64, decides stretch, own float64) {
	short, tall := 0.0, 0.0
	for i, w := range wide {
		switch {
		case decides.has(i):
		case w <= own:
			short += w
		default:
			tall += w
		}
	}
	factor, all := (own-short)/tall, false
	if short > own/2 {
		factor, all = own/(short+tall), true
	}
	for i := range wide {
		if !decides.has(i) && (all || wide[i] > own) {
			wide[i] *= factor
		}
	}
}

// mark puts marks at round times outside the steps that are drawn shorter, and at the ends of those: at least three.
func (a *timeAxis) mark() {
	steps := []float64{0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 15, 20, 30, 60}
	if a.unitS == 3600 {
		steps = []float64{0.05, 0.1, 0.25, 0.5, 1, 2, 3, 4, 6, 12, 24, 48, 96, 168}
	}
	for k := len(steps) - 1; k > 0; k-- {
		const most = 9
		last := k == len(steps)-1
		for step := steps[k]; ; step *= 2 {
			if a.markAt(step); !last || len(a.ticks) <= 2*most {
				break
			}
		}
		if len(a.ticks) >= 3 && a.end()/steps[k-1] > most {
			return
		}
	}
	if len(a.ticks) < 3 {
		a.markAt(steps[0])
	}
}

// markAt puts a mark at each multiple of step, in the unit of the axis, or at coarser ones where the axis is drawn shorter.
func (a *timeAxis) markAt(step float64) {
	a.ticks = nil
	put := func(t float64, decimals int) { // t in the unit of the axis
		at := a.at(t * a.unitS)
		if n := len(a.ticks); n == 0 || at-a.ticks[n-1].Value > 0.55*step {
			label := plain(t, decimals, nearest)
			if s := t * a.unitS; a.unitS < 3600 && s > minutesUpTo { // the end of a store behind minutes
				label = say("axis in hours", plain(s/3600, decimals, nearest))
			}
			a.ticks = append(a.ticks, plot.Tick{Value: at, Label: label})
		}
	}
	for i, p := range a.pieces {
		t0, t1, own := p.t0/a.unitS, p.t1/a.unitS, step
		if i == 0 {
			put(t0, 0)
		}
		if p.broken && !p.decides {
			put(t1, 1)
			continue
		}
		for p.broken && own*(p.x1-p.x0) < 0.8*step*(t1-t0) {
			own *= 2
		}
		for k := math.Ceil(t0/own - 1e-9); k*own <= t1+1e-9; k++ {
			put(k*own, 2)
		}
	}
}

// shown turns °C into the unit of the charts.
func (h *Head) shown(c float64) float64 {
	if h.Fahrenheit {
		return fahrenheit(c)
	}
	return c
}

func (h *Head) degree() string {
	if h.Fahrenheit {
		return "°F"
	}
	return "°C"
}

// chartTimes are close together after each change, s; each change comes once, with the value before it.
func chartTimes(h *model.History) []float64 {
	n := min(60, max(8, 360/max(1, len(h.Spans))))
	t := []float64{0}
	for _, sp := range h.Spans {
		for k := 1; k <= n; k++ {
			f := float64(k) / float64(n)
			t = append(t, sp.StartS+(sp.EndS-sp.StartS)*f*(0.35+0.65*f))
		}
		t[len(t)-1] = sp.EndS
	}
	return t
}

// history makes the temperature-time chart. With everything it shows surface and medium too.
func (h *Head) history(p *Product, d *deciding, size, ends float64, everything bool) *chart {
	hist := d.history
	axis := newTimeAxis(hist, d.part())
	f := &chart{xName: axis.name, yName: say("axis temperature", h.degree()), x0: 0, x1: axis.end(), xTicks: axis.ticks, size: size, ends: ends}
	times := p.aroundGaps(chartTimes(hist))
	course := func(name string, on *model.History, at model.Place) {
		c := make([]float64, len(times))
		on.Course(at, times, c)
		l := line{name: name}
		for i := range times {
			if on.Recorded && p.inGap(times[i]) {
				c[i] = math.NaN()
			}
			l.x, l.y = append(l.x, axis.at(times[i])), append(l.y, h.shown(c[i]))
		}
		f.lines = append(f.lines, l)
	}
	course(d.placeName, hist, d.place)
	if everything {
		h.others(p, d, f, course, times, axis)
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, l := range f.lines {
		for _, v := range l.y {
			if !math.IsNaN(v) {
				lo, hi = min(lo, v), max(hi, v)
			}
		}
	}
	for _, l := range h.levels(p, hist, axis) {
		lo, hi = min(lo, l.y), max(hi, l.y)
		f.levels = append(f.levels, l)
	}
	f.y0 = lo - 0.06*(hi-lo) - 1
	f.y1 = hi + 0.17*(hi-lo) + 1 // for the strip with the names of the steps
	if size > small {
		f.y1 += 0.1 * (hi - lo) // larger type on a lower chart
	}
	f.yTicks = ticksTo(f.y0, hi+0.03*(hi-lo), []float64{1, 2, 5, 10, 20, 25, 50, 100}, 8)
	for _, sp := range hist.Spans {
		b := band{name: sp.Step.Name, from: axis.at(sp.StartS), to: axis.at(sp.EndS)}
		if p := axis.pieces[len(f.bands)]; p.broken {
			b.name, b.short = say("band broken", sp.Step.Name, duration(p.t1-p.t0, nearest)), sp.Step.Name
			f.broken = append(f.broken, p.breaks(axis, d))
		}
		f.bands = append(f.bands, b)
	}
	f.spots = h.spots(d, hist, axis)
	return f
}

// others adds surface, medium and the run with the lower conductivity.
func (h *Head) others(p *Product, d *deciding, f *chart, course func(string, *model.History, model.Place), times []float64, axis *timeAxis) {
	hist := d.history
	if hist.Recorded {
		for _, pt := range hist.Points {
			if pt.Place != d.place {
				course(pt.Name, hist, pt.Place)
			}
		}
		if tr := p.predicted; tr != nil {
			l := line{name: tr.Name}
			for i, c := range predictedAt(tr, times) {
				l.x, l.y = append(l.x, axis.at(times[i])), append(l.y, h.shown(c))
			}
			f.lines = append(f.lines, l)
		}
	} else if at, ok := SurfacePlace(&p.Product); ok && at != d.place {
		course(p.Product.Lies(at), hist, at)
	}
	if hist.MediumC != nil {
		l := line{name: say("line medium")}
		some := false
		add := func(t float64, c float64) {
			l.x, l.y = append(l.x, axis.at(t)), append(l.y, h.shown(c))
			some = some || !math.IsNaN(c)
		}
		for _, sp := range hist.Spans {
			for i, t := range times {
				if t > sp.StartS && t <= sp.EndS {
					if len(l.x) > 0 && times[i-1] <= sp.StartS || i == 1 {
						add(sp.StartS, hist.MediumC(sp.StartS+1e-6*(sp.EndS-sp.StartS)))
					}
					add(t, hist.MediumC(t))
				}
			}
		}
		if some {
			f.lines = append(f.lines, l)
		}
	}
	for _, r := range p.Further {
		if d.history != r.History {
			name := say("line " + r.Name)
			if r.Name == rules.LowConductivity {
				name = say("line "+r.Name, d.called())
			}
			course(name, r.History, p.inTyped(d.place, d.history))
		}
	}
	switch name := p.nameOf(d.history); {
	case name != "" && p.run(rules.WellMixed) != nil:
		course(say("line conducting", d.called()), p.History, p.inTyped(d.place, d.history))
	case len(p.atWorst) > 0 && name != "" && kindOf(name) != name:
		course(say("line typed", d.called()), p.History, p.inTyped(d.place, d.history))
	case name != "":
		course(say("line usual", d.called()), p.History, p.inTyped(d.place, d.history))
	}
}

// SurfacePlace is the middle of the top, or the skin of a round piece; false where there is none of its own.
func SurfacePlace(p *model.Product) (model.Place, bool) {
	if p.Shape == nil || p.Shape.Mixed() {
		return model.Place{}, false
	}
	ways := p.Shape.Ways
	up := *p.Size.Of(ways[0].Size) / 2
	if p.Shape.Oval() { // its side, which lies nearer to the middle of a long one
		if across := *p.Size.Of(ways[1].Size) / 2; across < up {
			return model.Place{AcrossM: across}, true
		}
	}
	return model.Place{UpM: up}, true
}

// levels are the temperatures of the limits, each once, over the stages that they are about.
func (h *Head) levels(p *Product, hist *model.History, axis *timeAxis) []level {
	var out []level
	add := func(l *rules.Limit, words string, c *float64) {
		if c == nil {
			return
		}
		from, to := 0.0, hist.EndS()
		if len(l.Stages) > 0 {
			from, to = math.Inf(1), 0
			for _, sp := range hist.Spans {
				for _, st := range l.Stages {
					if sp.Step.Stage == st {
						from, to = min(from, sp.StartS), max(to, sp.EndS)
					}
				}
			}
			if from >= to {
				return
			}
		}
		n := level{words: []string{words, l.Name}, y: h.shown(*c), from: axis.at(from), to: axis.at(to)}
		for i := range out {
			if out[i].y == n.y && n.from <= out[i].to && n.to >= out[i].from { // side by side or one over the other
				out[i].from, out[i].to = min(out[i].from, n.from), max(out[i].to, n.to)
				if out[i].words[1] != l.Name {
					out[i].more++
				}
				return
			}
		}
		out = append(out, n)
	}
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		if f.Limit == nil || f.Verdict == rules.NotApplicable || len(out) > 5 {
			continue
		}
		l := f.Limit
		add(l, h.briefly(h.typed(l, "From", l.FromC)), l.FromC)
		add(l, h.briefly(h.typed(l, "To", l.ToC)), l.ToC)
		if l.FromC == nil && l.ToC == nil {
			add(l, h.briefly(h.typed(l, "Clock starts", l.Clock.AtC)), l.Clock.AtC)
		}
		if row := decidingRow(f); row != nil {
			add(l, h.briefly(h.rowTyped(row)), &row.C)
		}
	}
	for i := range out {
		if out[i].more > 0 {
			out[i].words[1] += say("level more", out[i].more)
		}
	}
	return out
}

// briefly shortens a limit's temperature, as typed with the other unit in brackets, for a chart: in the unit of the chart alone if
// it was typed in that.
func (h *Head) briefly(s string) string {
	if first, _, found := strings.Cut(s, " ("); found && strings.HasSuffix(first, h.degree()) {
		return first
	}
	return s
}

// spots marks where the deciding limit's clock starts and ends.
func (h *Head) spots(d *deciding, hist *model.History, axis *timeAxis) []spot {
	if d.finding == nil {
		return nil
	}
	var out []spot
	add := func(word string, t *float64) {
		if !finite(t) || *t < 0 || *t > hist.EndS() {
			return
		}
		out = append(out, spot{say(word, duration(*t, nearest)), axis.at(*t), h.shown(hist.At(d.place, *t))})
	}
	add("spot starts", d.finding.ClockStartS)
	add("spot ends", d.finding.ClockEndS)
	if len(out) == 0 {
		add("spot decides", d.finding.AtS)
	}
	return out
}

// profile makes the chart of temperature against depth at the ends of steps, past the deciding place; nil where there is none to draw: of
// a record, and of a food that is mixed throughout.
func (h *Head) profile(p *Product, d *deciding, size, ends float64) (*chart, []float64) {
	hist := d.history
	way := p.passage(d)
	if way == nil {
		return nil, nil
	}
	times := profileTimes(hist)
	in := unit.Length.Unit("mm")
	if p.Product.Inches {
		in = inch
	}
	f := &chart{xName: say(way.name, in.Name()), yName: say("axis temperature", h.degree()), x0: in.Out(way.m[0]), x1: in.Out(way.m[len(way.m)-1]), size: size, ends: ends}
	f.xTicks = marks(ticksTo(f.x0, f.x1, []float64{0.1, 0.25, 0.5, 1, 2, 5, 10, 20, 25, 50, 100, 200}, 9))
	if f.x0 < 0 { // to both sides of a centre
		for i := range f.xTicks {
			f.xTicks[i].Label = strings.TrimLeft(f.xTicks[i].Label, "-−")
		}
	}
	f.y0, f.y1 = math.Inf(1), math.Inf(-1)
	for _, t := range times {
		l := line{name: say("profile at", duration(t, nearest))}
		for k, m := range way.m {
			v := math.NaN()
			if !math.IsNaN(m) {
				v = h.shown(hist.At(way.places[k], t))
				f.y0, f.y1 = min(f.y0, v), max(f.y1, v)
			} else {
				m = way.m[k-1]
			}
			l.x, l.y = append(l.x, in.Out(m)), append(l.y, v)
		}
		f.lines = append(f.lines, l)
	}
	room := 0.08*(f.y1-f.y0) + 1
	f.y0, f.y1 = f.y0-room, f.y1+room
	f.yTicks = ticksTo(f.y0, f.y1, []float64{1, 2, 5, 10, 20, 25, 50, 100}, 7)
	for _, pt := range hist.Points {
		m, on := pt.UpM-way.places[0].UpM, pt.AcrossM == d.place.AcrossM && pt.AlongM == d.place.AlongM
		if p.Product.Shape.Oval() {
			m, on = pt.UpM-pt.AcrossM, pt.UpM >= 0 && pt.AcrossM >= 0 && (pt.UpM == 0 || pt.AcrossM == 0)
		}
		if pt.Name == "centre" || !on {
			continue
		}
		if len(f.spots) == mostSpots {
			f.unnamed++
		} else {
			f.spots = append(f.spots, spot{pt.Name, in.Out(m), h.shown(hist.At(pt.Place, times[len(times)-1]))})
		}
	}
	return f, times
}

// mostSpots is how many points a profile names at most: more have no room.
const mostSpots = 20

// passage is the way that the profile of a product is drawn along; nil if there is no profile.
func (p *Product) passage(d *deciding) *passage {
	h := d.history
	if h.Recorded || len(h.Spans) == 0 || h == p.run(rules.WellMixed) || kindOf(p.nameOf(h)) == rules.WellMixed {
		return nil
	}
	return passageOf(p.productOf(h), d.place)
}

// profileTimes are three to six instants: the ends of steps, and the middles of the longest ones where there are too few.
func profileTimes(h *model.History) []float64 {
	var t []float64
	for _, sp := range h.Spans {
		t = append(t, sp.EndS)
	}
	if len(t) > 6 { // the first, the last, and four evenly between
		n := len(t)
		t = []float64{t[0], t[n/5], t[2*n/5], t[3*n/5], t[4*n/5], t[n-1]}
	}
	for _, sp := range h.Spans {
		if len(t) < 5 && len(h.Spans) < 3 {
			t = append(t, sp.StartS+(sp.EndS-sp.StartS)/4, sp.StartS+(sp.EndS-sp.StartS)/2)
		} else if len(t) < 6 {
			t = append(t, sp.StartS+(sp.EndS-sp.StartS)/2)
		}
	}
	sort.Float64s(t)
	return t[:min(len(t), 6)]
}
