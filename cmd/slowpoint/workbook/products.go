package workbook

import (
	"slices"
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// product is a row of Products while the plan is read.
type product struct {
	Product
	line    *Line
	food    *food
	layers  []*layer           // of a layered slab, from the top
	own     map[string]*step   // rows of Steps that name it, by step
	faces   map[string][]*face // rows of Faces that name it, by step
	points  map[string]int     // row of each point
	because cell.Errors
}

// suffer keeps faults that concern the product.
func (p *product) suffer(es cell.Errors) { reasons(&p.because, es) }

func (r *reader) productNames() []string {
	return names(r.products, func(p *product) string { return p.Name })
}

// readProducts reads the sheet Products, row by row.
func (r *reader) readProducts() {
	r.byName, r.users, r.families = map[string]*product{}, map[string][]*product{}, map[string][]*product{}
	t := r.tables["Products"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		p := &product{line: l}
		p.At = l.Ref()
		p.Name = l.Words("Product")
		if first := r.byName[Key(p.Name)]; p.Name != "" && first != nil {
			l.Fault("Product", p.Name, duplicate, strconv.Itoa(first.At.Row), "product")
		}
		p.Family, p.RecipeVersion, p.Batch = l.Words("Family"), l.Words("Recipe version"), l.Words("Batch")
		p.Process = l.Words("Process")
		p.size(l)
		r.productFood(p, l)
		if v := l.Number("Start temperature"); v != nil {
			p.StartC = *v
		}
		p.Note = l.Words("Note")
		p.because = l.because
		r.products = append(r.products, p)
		r.users[Key(p.Process)] = append(r.users[Key(p.Process)], p)
		r.families[Key(p.Family)] = append(r.families[Key(p.Family)], p)
		if p.Name != "" && r.byName[Key(p.Name)] == nil {
			r.byName[Key(p.Name)] = p
		}
	}
}

// size reads the shape and the sizes that it uses.
func (p *product) size(l *Line) {
	if w := l.Choice("Shape"); w != "" {
		for _, s := range model.Shapes {
			if s.Name == w {
				p.Shape = s
			}
		}
	}
	for _, column := range model.SizeColumns {
		used := p.Shape == nil || slices.Contains(p.Shape.Needs, column)
		switch {
		case !used && l.Filled(column):
			needs := and(p.Shape.Needs)
			if needs == "" {
				needs = "no size of its own"
			}
			l.Fault(column, l.Entry(column).Text, sizeUnused, strings.ToLower(column), p.Shape.Name, needs)
		case used && p.Shape != nil && !l.Filled(column):
			l.Fault(column, "", sizeMissing, column, p.Shape.Name, and(p.Shape.Needs))
		case used:
			if v := l.Value(column); v != nil {
				*p.Size.Of(column) = v.Computed
				p.Inches = p.Inches || inches(v.Typed)
			}
		}
	}
}

// inches tells whether a typed length is in inches or feet.
func inches(typed string) bool {
	return strings.HasSuffix(typed, " in") || strings.HasSuffix(typed, " ft")
}

// productFood finds the food of a product.
func (r *reader) productFood(p *product, l *Line) {
	layered := p.Shape.Layered()
	name := l.Words("Food")
	switch {
	case layered && name != "":
		l.Fault("Food", name, foodForLayers)
	case layered || !l.Sound() && name == "" && l.Filled("Food"):
	case name == "":
		l.Fault("Food", "", foodMissing)
	default:
		f := r.foodNamed(name)
		if f == nil {
			l.Fault("Food", name, foodUnknown, r.foodsLike(name))
			return
		}
		p.food, p.Food = f, f.material
		l.suffer(f.because)
	}
}

// readPoints reads the sheet Points.
func (r *reader) readPoints() {
	t := r.tables["Points"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		owner, name := l.Words("Product"), l.Words("Point")
		pt := model.Point{At: l.Ref(), Name: name}
		for _, axis := range []struct {
			heading string
			field   *float64
		}{{"Up", &pt.UpM}, {"Across", &pt.AcrossM}, {"Along", &pt.AlongM}} {
			if v := l.Number(axis.heading); v != nil {
				*axis.field = *v
			} else if !l.Filled(axis.heading) {
				l.note(axis.heading, "", "0 m", "blank: 0 is taken")
			}
		}
		p := r.byName[Key(owner)]
		if p == nil {
			if owner != "" && !r.blind() {
				l.Fault("Product", owner, productUnknown, r.offer(owner, r.productNames))
			}
			continue
		}
		builtIn := Key(name) == "centre"
		switch {
		case builtIn && pt.Place != (model.Place{}):
			l.Fault("Point", name, pointCentre)
		case p.points[Key(name)] > 0:
			l.Fault("Point", name, pointTwice, strconv.Itoa(p.points[Key(name)]))
		case p.Shape.Mixed() && !builtIn:
			l.Fault("Point", name, pointStirred)
		}
		if p.points == nil {
			p.points = map[string]int{}
		}
		p.points[Key(name)] = l.row.N
		if !builtIn {
			p.Points = append(p.Points, pt)
		}
		p.readings = append(p.readings, l.readings)
		p.suffer(l.because)
	}
}
