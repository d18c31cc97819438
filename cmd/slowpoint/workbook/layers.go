package workbook

import (
	"math"
	"slices"
	"sort"
	"strconv"

	"slowpoint/model"
)

// leastLayers and mostLayers are how few and how many layers a layered slab may have.
const (
	leastLayers = 2
	mostLayers  = 50
)

// layer is a row of Layers.
type layer struct {
	model.Layer
	n      int // 1 = top; 0 where the row does not say
	inches bool
	line   *Line
	food   *food
}

// readLayers reads the sheet Layers and hangs its rows on their products.
func (r *reader) readLayers() {
	for _, p := range r.products {
		if p.Shape.Layered() {
			p.suffer(r.unread["Layers"])
		}
	}
	if t := r.tables["Layers"]; t != nil {
		var strays []*layer
		for _, l := range t.lines {
			if y := r.readLayer(l); !r.hangLayer(l, y) {
				strays = append(strays, y)
			}
		}
		for _, y := range strays {
			r.missing(y)
		}
	}
	for _, p := range r.products {
		if p.Shape.Layered() && len(r.unread["Layers"]) == 0 {
			p.stack()
		}
	}
}

// readLayer reads one row.
func (r *reader) readLayer(l *Line) *layer {
	y := &layer{line: l}
	y.At = l.Ref()
	if v := l.Value("Layer"); v != nil {
		if v.Computed != math.Trunc(v.Computed) || v.Computed > mostRows {
			l.Fault("Layer", v.Typed, layerNotWhole)
		} else {
			y.n = int(v.Computed)
		}
	}
	if name := l.Words("Food"); name != "" {
		if f := r.foodNamed(name); f == nil {
			l.Fault("Food", name, foodUnknown, r.foodsLike(name))
		} else {
			y.food, y.Food = f, f.material
			l.suffer(f.because)
		}
	}
	if v := l.Value("Thickness"); v != nil {
		y.ThicknessM, y.inches = v.Computed, inches(v.Typed)
	}
	if v := l.Number("Contact resistance below"); v != nil {
		y.BelowM2KW = *v
	}
	return y
}

// hangLayer gives a layer to its product; false: nobody knows whose it is.
func (r *reader) hangLayer(l *Line, y *layer) bool {
	name := l.Words("Product")
	p := r.byName[Key(name)]
	switch {
	case p == nil:
		if name != "" && !r.blind() {
			l.Fault("Product", name, productUnknown, r.offer(name, r.productNames))
		}
		return false
	case p.Shape != nil && !p.Shape.Layered():
		l.Fault("Product", name, layersOfOther, p.Shape.Name)
	}
	for _, o := range p.layers {
		if y.n > 0 && o.n == y.n {
			l.Fault("Layer", l.Entry("Layer").Text, layerTwice, strconv.Itoa(o.At.Row))
		}
	}
	p.layers = append(p.layers, y)
	p.suffer(l.because)
	return true
}

// missing refuses the layered slabs that may lack a layer whose product nobody knows: a slab that looks whole may lack its lowest one.
// Not those that have a layer of its number, and of the others only the one with nearly its name, if there is one.
func (r *reader) missing(y *layer) {
	lacks := func(p *product) bool {
		return p.Shape.Layered() && (y.n == 0 || !slices.ContainsFunc(p.layers, func(o *layer) bool { return o.n == y.n }))
	}
	near := r.byName[Key(r.near(y.line.Words("Product"), r.productNames))]
	if near != nil && (!near.Shape.Layered() || lacks(near)) {
		if lacks(near) {
			near.suffer(y.line.because)
		}
		return
	}
	for _, p := range r.products {
		if lacks(p) {
			p.suffer(y.line.because)
		}
	}
}

// stack puts the layers of a product together from the top.
func (p *product) stack() {
	sort.SliceStable(p.layers, func(i, j int) bool { return p.layers[i].n < p.layers[j].n })
	sound := true
	for _, y := range p.layers {
		sound = sound && y.line.Sound()
	}
	for _, e := range p.because { // a row that names nobody's layer
		sound = sound && SheetNamed("Layers") != sheetOf(Sheets, e.At.Sheet)
	}
	if len(p.layers) < leastLayers && !sound { // a layer that could not be read is told already
		return
	}
	if len(p.layers) < leastLayers {
		p.line.Fault("Shape", p.Shape.Name, layersFew, p.Name, strconv.Itoa(len(p.layers)))
		p.suffer(p.line.because)
		return
	}
	if len(p.layers) > mostLayers {
		l := p.layers[mostLayers].line
		l.Fault("Layer", l.Entry("Layer").Text, layersMany, strconv.Itoa(mostLayers))
		p.suffer(l.because)
		return
	}
	for i, y := range p.layers {
		l := y.line
		last := i == len(p.layers)-1
		switch {
		case y.n == 0:
		case y.n != i+1 && sound: // once: what follows is as far out
			l.Fault("Layer", l.Entry("Layer").Text, layerGap, strconv.Itoa(i+1))
			sound = false
		case last && l.Filled("Contact resistance below"):
			l.Fault("Contact resistance below", l.Entry("Contact resistance below").Text, layerLast)
		case !last && !l.Filled("Contact resistance below"):
			l.note("Contact resistance below", "", "0 m²·K/W", "blank: perfect contact taken")
		}
		p.suffer(l.because)
		p.Inches = p.Inches || y.inches
		p.Layers = append(p.Layers, y.Layer)
		p.Size.ThicknessM += y.ThicknessM
	}
}

// foods are the foods of a product, each once: the only one, or those of its layers from the top.
func (p *product) foods() []*food {
	var out []*food
	add := func(f *food) {
		for _, g := range out {
			if g == f {
				return
			}
		}
		if f != nil {
			out = append(out, f)
		}
	}
	add(p.food)
	for _, y := range p.layers {
		add(y.food)
	}
	return out
}
