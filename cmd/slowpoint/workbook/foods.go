package workbook

import (
	"errors"
	"slices"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	foods "slowpoint/model/food"
)

// food is a food of the plan or a built-in one that the plan uses.
type food struct {
	name     string
	material *model.Material
	because  cell.Errors
	readings []echoes
	lines    []*foodLine
}

// foodLine is a row of Foods.
type foodLine struct {
	*Line
	parts             [6]*float64
	air, at           *float64
	k, rho, c         *float64
	freezing, aw      *float64
	flow              *model.Flow
	source            string
	composed, measure bool
}

var partNames = [6]string{"Water", "Protein", "Fat", "Carbohydrate", "Fibre", "Ash"}

// readFoods reads the plan's own foods; rows of one name make one food.
func (r *reader) readFoods() {
	r.foods = map[string]*food{}
	t := r.tables["Foods"]
	if t == nil {
		return
	}
	var order []*food
	for _, l := range t.lines {
		name := l.Words("Food")
		fl := readFoodLine(l)
		if name == "" {
			continue
		}
		f := r.foods[Key(name)]
		if f == nil {
			f = &food{name: name}
			r.foods[Key(name)] = f
			order = append(order, f)
		}
		f.lines = append(f.lines, fl)
	}
	for _, f := range order {
		f.make()
		for _, l := range f.lines {
			reasons(&f.because, l.because)
			f.readings = append(f.readings, l.readings...)
		}
		if len(f.because) > 0 {
			f.material = nil
		}
	}
}

func readFoodLine(l *Line) *foodLine {
	fl := &foodLine{Line: l}
	for i, n := range partNames {
		fl.parts[i] = l.Number(n)
		fl.composed = fl.composed || l.Filled(n)
	}
	fl.air, fl.at = l.Number("Air by volume"), l.Number("At temperature")
	fl.k, fl.rho, fl.c = l.Number("Conductivity"), l.Number("Density"), l.Number("Specific heat")
	fl.measure = l.Filled("Conductivity") || l.Filled("Specific heat")
	fl.freezing, fl.aw = l.Number("Freezing point"), l.Number("Water activity")
	if w := l.Choice("Flows"); w != "" {
		for _, f := range model.Flows {
			if f.Name == w {
				fl.flow = f
			}
		}
	}
	fl.source = l.Words("Source")
	return fl
}

// make turns the rows of a food into a material.
func (f *food) make() {
	first := f.lines[0]
	for _, l := range f.lines {
		if f.agrees(l) {
			continue
		}
		return
	}
	if first.source == "" || !first.Sound() {
		return
	}
	switch {
	case first.composed:
		f.compose()
	case !f.weighed():
		f.measured()
	}
	if m := f.material; m != nil {
		m.At, m.WaterActivity = first.Ref(), f.common(func(l *foodLine) *float64 { return l.aw })
		if t := f.common(func(l *foodLine) *float64 { return l.freezing }); t != nil {
			m.FreezingC = t
		}
		for _, l := range f.lines {
			if l.flow != nil {
				m.Flow = l.flow
			}
		}
		if m.Flow == nil {
			m.Flow = model.FlowsNo
			first.note("Flows", "", model.FlowsNo.Name, "blank: solid or set is taken")
		}
	}
}

// ownHeadings are what a row may say of the built-in food of its name.
var ownHeadings = []string{"Density", "Freezing point", "Water activity", "Flows"}

// ofBuiltIn tells whether a row says something of the built-in food of its name, and leaves the composition to that.
func (f *food) ofBuiltIn(l *foodLine) bool {
	_, ok := foods.Find(f.name)
	return ok && !l.composed && !l.measure && l.at == nil && l.air == nil && slices.ContainsFunc(ownHeadings, l.Filled)
}

// weighed makes the food of the built-in one of its name, with what its row says of it; false if the row says anything else.
func (f *food) weighed() bool {
	l := f.lines[0]
	if len(f.lines) > 1 || !f.ofBuiltIn(l) {
		return false
	}
	builtIn, _ := foods.Find(f.name)
	l.note("Water", "", builtIn.Composition.String(), "blank: the composition of the built-in food of this name is taken")
	f.made(builtIn.Weighed(foods.Weighing{DensityKgM3: l.rho, FreezingC: l.freezing, Source: l.source}))
	return true
}

// agrees checks that a row says one thing, and the same as the rows before it.
func (f *food) agrees(l *foodLine) bool {
	first := f.lines[0]
	switch {
	case l.composed && l.measure:
		head := "Conductivity"
		if !l.Filled(head) {
			head = "Specific heat"
		}
		l.Fault(head, l.Entry(head).Text, foodMixed)
	case l.composed && l != first || first.composed && l != first:
		l.Fault("Food", f.name, foodTwice, strconv.Itoa(first.row.N))
	case !l.composed && !l.measure && !l.Filled("Density") && !f.ofBuiltIn(l):
		l.Fault("Food", f.name, foodNothing)
	}
	for _, h := range []string{"Freezing point", "Water activity", "Flows"} {
		for _, o := range f.lines {
			if o == l {
				break
			}
			if o.Filled(h) && l.Filled(h) && Key(o.Entry(h).Text) != Key(l.Entry(h).Text) {
				l.Fault(h, l.Entry(h).Text, foodUnlike, strconv.Itoa(o.row.N), o.Entry(h).Text)
			}
		}
	}
	return l.Sound()
}

// common is a value that one of the rows gives; nil if none does.
func (f *food) common(of func(*foodLine) *float64) *float64 {
	for _, l := range f.lines {
		if v := of(l); v != nil {
			return v
		}
	}
	return nil
}

// compose makes the food of its composition. Blank parts are none, and that is noted.
func (f *food) compose() {
	l := f.lines[0]
	var v [6]float64
	for i, p := range l.parts {
		if p != nil {
			v[i] = *p
		} else {
			l.note(partNames[i], "", "0 %", "blank: none is taken")
		}
	}
	f.made(foods.Compose(f.name, l.source, foods.Composition{WaterPc: v[0], ProteinPc: v[1], FatPc: v[2], CarbohydratePc: v[3], FibrePc: v[4], AshPc: v[5],
		AirByVolumePc: l.air, DensityKgM3: l.rho, FreezingC: l.freezing}))
}

// made takes a material over, or tells at its row why there is none.
func (f *food) made(m model.Material, err error) {
	l := f.lines[0]
	var faults foods.Faults
	switch {
	case errors.As(err, &faults):
		for _, x := range faults {
			l.Fault(x.Field, "", asFound, strings.ToUpper(x.Msg[:1])+x.Msg[1:], x.Hint)
		}
	case err != nil:
		l.Fault("", "", asFound, err.Error(), "")
	default:
		f.material = &m
	}
}

// measured makes the food of properties: a constant, or a table with straight lines between its rows.
func (f *food) measured() {
	for _, l := range f.lines {
		for _, h := range []string{"Conductivity", "Density", "Specific heat"} {
			if !l.Filled(h) {
				l.Fault(h, "", foodPartly, h)
			}
		}
		if l.Filled("Air by volume") {
			l.Fault("Air by volume", l.Entry("Air by volume").Text, airWithMeasured)
		}
		if len(f.lines) > 1 && !l.Filled("At temperature") {
			l.Fault("At temperature", "", foodNoAt, f.name)
		}
		if !l.Sound() {
			return
		}
	}
	rows := append([]*foodLine(nil), f.lines...)
	m := &model.Material{Name: f.name, Source: rows[0].source}
	if len(rows) == 1 {
		only := model.Properties{KWmK: *rows[0].k, RhoKgM3: *rows[0].rho, CJkgK: *rows[0].c}
		m.Props = func(float64) model.Properties { return only }
		f.material = m
		return
	}
	sort.SliceStable(rows, func(i, j int) bool { return *rows[i].at < *rows[j].at })
	for i := 1; i < len(rows); i++ {
		if *rows[i].at == *rows[i-1].at {
			rows[i].Fault("At temperature", rows[i].Entry("At temperature").Text, foodSameAt, strconv.Itoa(rows[i-1].row.N))
			return
		}
	}
	type knot struct {
		c float64
		model.Properties
	}
	knots := make([]knot, len(rows))
	for i, l := range rows {
		knots[i] = knot{*l.at, model.Properties{KWmK: *l.k, RhoKgM3: *l.rho, CJkgK: *l.c}}
	}
	m.Table, m.LowC, m.HighC = true, knots[0].c, knots[len(knots)-1].c
	m.Props = func(t float64) model.Properties { // outside its rows the model refuses the product; the end row stands in
		i := sort.Search(len(knots), func(i int) bool { return knots[i].c >= t })
		if i == 0 || i == len(knots) {
			return knots[min(i, len(knots)-1)].Properties
		}
		a, b := knots[i-1], knots[i]
		w := (t - a.c) / (b.c - a.c)
		line := func(x, y float64) float64 { return x + w*(y-x) }
		return model.Properties{KWmK: line(a.KWmK, b.KWmK), RhoKgM3: line(a.RhoKgM3, b.RhoKgM3), CJkgK: line(a.CJkgK, b.CJkgK)}
	}
	f.material = m
}

// foodNamed finds a food: the plan's own first, then the built-in ones; nil if there is none.
func (r *reader) foodNamed(name string) *food {
	if f := r.foods[Key(name)]; f != nil {
		return f
	}
	if m, ok := foods.Named(name); ok {
		f := &food{name: m.Name, material: m}
		r.foods[Key(name)] = f
		return f
	}
	return nil
}

// foodAiry goes on after foodUnknown.
const foodAiry = " that can do without a measured density: it holds much air, so add a row of this name to the sheet Foods with its Density and a Source, and its composition is taken from the built-in table"

// foodsLike offers names for one that is neither in the plan nor built in.
func (r *reader) foodsLike(name string) string {
	if r.offers > mostOffers {
		return ""
	}
	r.offers += 1000 + len(r.foods)
	if f, ok := foods.Find(name); ok && f.Airy() {
		return foodAiry
	}
	var own []string
	for _, f := range r.foods {
		own = append(own, f.name)
	}
	sort.Strings(own)
	if n := nearest(name, own); n != "" {
		return "; did you mean " + n + "?"
	}
	if like := foods.Nearest(name); len(like) > 0 {
		return "; nearest: " + strings.Join(like, "; ")
	}
	return ""
}
