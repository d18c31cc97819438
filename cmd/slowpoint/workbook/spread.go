package workbook

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Spread is one thing that varies about a product, or about one of its steps, between two ends.
type Spread struct {
	At          cell.Ref // its row
	Of          *Varies
	Step        int // which step of the product; -1: the product itself
	StepName    string
	Minus, Plus Deviation
	Basis       string
	rank        int // how specific its row is
}

// Deviation is how far below or above its typed value a quantity may be.
type Deviation struct {
	Typed string  // "2 mm", "5 %"; "" for none
	By    float64 // in the unit that the program computes in, or a share of the value; never negative
	Share bool
}

// of is the deviation from a value, in its own unit.
func (d Deviation) of(v float64) float64 {
	if d.Share {
		return v * d.By
	}
	return d.By
}

// Varies is a quantity of the sheet Spread.
type Varies struct {
	Name       string
	quantity   *unit.Quantity // of a deviation that is no percentage
	example    string
	percent    bool   // a percentage of it means something
	ofStep     bool   // a step has it, not the product
	less, more string // "thinner", "thicker": words of its ends
	positive   bool   // it must stay above 0
	has        func(p *model.Product, s *model.Step) bool
	value      func(p *model.Product, s *model.Step) float64                     // least value that must stay positive
	move       func(p *model.Product, s *model.Step, by func(v float64) float64) // by gives the new value of an old one
	one        func(p *model.Product, s *model.Step) (float64, bool)             // its value, if there is but one; nil: there are several as a rule
}

// degrees of a deviation: °C and K are one, and °F scales without a shift.
var spreadDegrees = unit.Quantity{Name: "temperature difference", Units: []unit.Unit{
	{Names: append([]string{"°C"}, append(unit.Difference.Units[0].Names, unit.Temperature.Units[0].Names...)...)},
	{Names: append([]string{"°F"}, append(unit.Difference.Units[1].Names, unit.Temperature.Units[1].Names...)...), Per: 1.8}}}

// size makes the entry of a size.
func sizeVaries(name, less, more string) *Varies {
	column := strings.ToUpper(name[:1]) + name[1:]
	return &Varies{Name: name, quantity: &unit.Length, example: "2 mm", percent: true, less: less, more: more, positive: true,
		has: func(p *model.Product, _ *model.Step) bool {
			return p.Shape != nil && (slices.Contains(p.Shape.Needs, column) || p.Shape.Layered() && name == "thickness")
		},
		value: func(p *model.Product, _ *model.Step) float64 { return *p.Size.Of(column) },
		one:   func(p *model.Product, _ *model.Step) (float64, bool) { return *p.Size.Of(column), true },
		move: func(p *model.Product, _ *model.Step, by func(float64) float64) {
			was := *p.Size.Of(column)
			*p.Size.Of(column) = by(was)
			for i := range p.Layers { // each in proportion
				p.Layers[i].ThicknessM *= by(was) / was
			}
		}}
}

// property makes the entry of a property of the food. The mass of ice and the heat that it takes belong to a kg and stay; of specific heat
// the sensible part varies, and with it the heat content by the same factor.
func propertyVaries(name string, q *unit.Quantity, example string, of func(*model.Properties) *float64) *Varies {
	return &Varies{Name: name, quantity: q, example: example, percent: true, less: "lower", more: "higher", positive: true,
		has: func(p *model.Product, _ *model.Step) bool { return len(p.Foods()) > 0 },
		value: func(p *model.Product, _ *model.Step) float64 {
			least := math.Inf(1)
			for _, m := range p.Foods() {
				q := m.Props(p.StartC)
				least = min(least, *of(&q))
			}
			return least
		},
		move: func(p *model.Product, _ *model.Step, by func(float64) float64) {
			made := map[*model.Material]*model.Material{}
			other := func(m *model.Material) *model.Material {
				if m == nil {
					return nil
				}
				if made[m] == nil {
					n := *m
					n.Props = func(c float64) model.Properties {
						q := m.Props(c)
						*of(&q) = by(*of(&q))
						return q
					}
					if name == "specific heat" && m.EnthalpyJkg != nil {
						base := m.EnthalpyJkg(m.HighC)
						q := m.Props(m.HighC)
						factor := by(q.CJkgK) / q.CJkgK
						n.EnthalpyJkg = func(c float64) float64 { return base + factor*(m.EnthalpyJkg(c)-base) }
					}
					made[m] = &n
				}
				return made[m]
			}
			p.Food = other(p.Food)
			for i := range p.Layers {
				p.Layers[i].Food = other(p.Layers[i].Food)
			}
		}}
}

// exposures are those of a step, over the whole surface and on faces of their own.
func exposures(s *model.Step) []*model.Exposure {
	out := []*model.Exposure{&s.Exposure}
	for i := range s.Faces {
		out = append(out, &s.Faces[i].Exposure)
	}
	return out
}

// anyExposure tells whether one of a step's exposures is so.
func anyExposure(s *model.Step, is func(*model.Exposure) bool) bool {
	return slices.ContainsFunc(exposures(s), is)
}

func leastOf(s *model.Step, of func(*model.Exposure) *float64) float64 {
	least := math.Inf(1)
	for _, e := range exposures(s) {
		if v := of(e); v != nil {
			least = min(least, *v)
		}
	}
	return least
}

// oneMedium is the temperature of all surroundings of a step, if it is one and the same throughout.
func oneMedium(_ *model.Product, s *model.Step) (float64, bool) {
	var all []float64
	for _, e := range exposures(s) {
		all = append(all, e.Medium.C...)
	}
	if len(all) == 0 || slices.Min(all) < slices.Max(all) {
		return 0, false
	}
	return all[0], true
}

// worksOut tells whether the program works the film of an exposure out, as one number or by the surface temperature.
func worksOut(e *model.Exposure) bool {
	return e.FilmW == nil && e.Surface != nil && !e.Surface.NoMedium && !e.Surface.Fixed() && !e.Surface.FilmTyped()
}

// Spreads are the quantities that may vary, in the order of the sheet's list.
var Spreads = []*Varies{
	sizeVaries("thickness", "thinner", "thicker"),
	sizeVaries("width", "narrower", "wider"),
	sizeVaries("length", "shorter", "longer"),
	sizeVaries("diameter", "less in diameter", "more in diameter"),
	{Name: "start temperature", quantity: &spreadDegrees, example: "2 °C", less: "colder at the start", more: "warmer at the start",
		has:  func(*model.Product, *model.Step) bool { return true },
		move: func(p *model.Product, _ *model.Step, by func(float64) float64) { p.StartC = by(p.StartC) },
		one:  func(p *model.Product, _ *model.Step) (float64, bool) { return p.StartC, true }},
	{Name: "medium temperature", quantity: &spreadDegrees, example: "3 °C", ofStep: true, less: "colder", more: "warmer",
		has: func(_ *model.Product, s *model.Step) bool {
			return anyExposure(s, func(e *model.Exposure) bool { return len(e.Medium.C) > 0 })
		},
		move: func(_ *model.Product, s *model.Step, by func(float64) float64) {
			for _, e := range exposures(s) {
				e.Medium.C = slices.Clone(e.Medium.C)
				for i := range e.Medium.C {
					e.Medium.C[i] = by(e.Medium.C[i])
				}
				if e.RadiatingC != nil { // the walls go with the air
					walls := by(*e.RadiatingC)
					e.RadiatingC = &walls
				}
			}
		},
		one: oneMedium},
	{Name: "film coefficient", quantity: &unit.Film, example: "25 %", percent: true, ofStep: true, less: "less film coefficient", more: "more film coefficient", positive: true,
		has: func(_ *model.Product, s *model.Step) bool {
			return anyExposure(s, func(e *model.Exposure) bool { return e.FilmW != nil || worksOut(e) })
		},
		value: func(_ *model.Product, s *model.Step) float64 {
			return leastOf(s, func(e *model.Exposure) *float64 { return e.FilmW })
		},
		move: func(_ *model.Product, s *model.Step, by func(float64) float64) {
			for _, e := range exposures(s) {
				switch {
				case e.FilmW != nil:
					v := by(*e.FilmW)
					e.FilmW = &v
				case worksOut(e):
					e.FilmFactor = by(1)
				}
			}
		}},
	{Name: "air speed", quantity: &unit.Speed, example: "20 %", percent: true, ofStep: true, less: "slower air", more: "faster air", positive: true,
		has: func(_ *model.Product, s *model.Step) bool {
			return anyExposure(s, func(e *model.Exposure) bool { return e.AirMS != nil && e.FilmW == nil })
		},
		value: func(_ *model.Product, s *model.Step) float64 {
			return leastOf(s, func(e *model.Exposure) *float64 { return e.AirMS })
		},
		move: func(_ *model.Product, s *model.Step, by func(float64) float64) {
			for _, e := range exposures(s) {
				if e.AirMS != nil {
					v := by(*e.AirMS)
					e.AirMS = &v
				}
			}
		}},
	propertyVaries("conductivity", &unit.Conductivity, "5 %", func(q *model.Properties) *float64 { return &q.KWmK }),
	propertyVaries("specific heat", &unit.SpecificHeat, "3 %", func(q *model.Properties) *float64 { return &q.CJkgK }),
	propertyVaries("density", &unit.Density, "3 %", func(q *model.Properties) *float64 { return &q.RhoKgM3 }),
	{Name: "duration", quantity: &unit.Duration, example: "5 min", percent: true, ofStep: true, less: "shorter", more: "longer", positive: true,
		has:   func(_ *model.Product, s *model.Step) bool { return true },
		value: func(_ *model.Product, s *model.Step) float64 { return s.DurationS },
		move:  func(_ *model.Product, s *model.Step, by func(float64) float64) { s.DurationS = by(s.DurationS) },
		one:   func(_ *model.Product, s *model.Step) (float64, bool) { return s.DurationS, true }},
	{Name: "probe", quantity: &unit.Length, example: "3 mm", less: "lower or further in", more: "higher or further out",
		has: func(p *model.Product, _ *model.Step) bool { return len(p.Points) > 0 },
		move: func(p *model.Product, _ *model.Step, by func(float64) float64) {
			p.Points = slices.Clone(p.Points)
			for i := range p.Points {
				p.Points[i].UpM = by(p.Points[i].UpM)
			}
		}},
}

// Varied is the product with each of its spreads at a place between its ends: −1 is Minus, 0 as typed, 1 Plus. at is as long as Spreads;
// the plan's own product stays as it is.
func (p *Product) Varied(at []float64) Product {
	q := *p
	q.Steps = slices.Clone(p.Steps)
	q.Layers = slices.Clone(p.Layers)
	for i := range q.Steps {
		q.Steps[i].Faces = slices.Clone(q.Steps[i].Faces)
	}
	for i := range p.Spreads {
		s := &p.Spreads[i]
		if at[i] == 0 {
			continue
		}
		d := s.Plus
		if at[i] < 0 {
			d = s.Minus
		}
		var step *model.Step
		if s.Step >= 0 {
			step = &q.Steps[s.Step]
		}
		s.Of.move(&q.Product, step, func(v float64) float64 { return v + at[i]*d.of(v) })
	}
	return q
}

// Span is how far a spread reaches below and above the typed value, both in one unit.
func (p *Product) Span(i int) (minus, plus float64) {
	s := &p.Spreads[i]
	if s.Minus.Share == s.Plus.Share || s.Of.value == nil {
		return s.Minus.By, s.Plus.By
	}
	var step *model.Step
	if s.Step >= 0 {
		step = &p.Steps[s.Step]
	}
	v := s.Of.value(&p.Product, step)
	return s.Minus.of(v), s.Plus.of(v)
}

// Named is the quantity in words, with its step: "medium temperature of Chill".
func (s *Spread) Named() string {
	if s.StepName == "" {
		return s.Of.Name
	}
	return s.Of.Name + " of " + s.StepName
}

// End words an end: "2 mm thicker", "Chill 3 °C warmer". at: below 0 Minus, above 0 Plus.
func (s *Spread) End(at int) string {
	if at < 0 {
		return s.off(s.Minus.Typed + " " + s.Of.less)
	}
	return s.off(s.Plus.Typed + " " + s.Of.more)
}

// off says of what a deviation is: "Chill 3 °C warmer".
func (s *Spread) off(words string) string {
	switch {
	case s.StepName != "":
		return s.StepName + " " + words
	case s.Of.ofSize():
		return words
	case s.Of.positive || s.Of.Name == "probe":
		return s.Of.Name + " " + words
	default:
		return words
	}
}

// Between words a place between the typed value and an end, from −1, which is Minus, to 1, which is Plus: by its value where there is one,
// "start temperature 61.4 °C (between the ends of Spread row 3)", else by how far it is off, "conductivity 2.5 % lower (…)".
func (p *Product) Between(i int, at float64, fahrenheit bool) string {
	s := &p.Spreads[i]
	words := s.Named() + " " + p.valueAt(i, at, fahrenheit)
	switch {
	case words != s.Named()+" ":
	case at < 0:
		words = s.off(s.Minus.part(-at, s.Of) + " " + s.Of.less)
	default:
		words = s.off(s.Plus.part(at, s.Of) + " " + s.Of.more)
	}
	return words + " (between the ends of " + s.At.String() + ")"
}

// valueAt is the value of spread i at a place, in the units of the plan; "" where it is not one value.
func (p *Product) valueAt(i int, at float64, fahrenheit bool) string {
	s := &p.Spreads[i]
	if s.Of.one == nil {
		return ""
	}
	places := make([]float64, len(p.Spreads))
	places[i] = at
	q := p.Varied(places)
	var step *model.Step
	if s.Step >= 0 {
		step = &q.Steps[s.Step]
	}
	v, isOne := s.Of.one(&q.Product, step)
	switch {
	case !isOne:
		return ""
	case s.Of.quantity == &unit.Duration:
		return unit.Lasting(v, nil)
	case s.Of.ofSize() && p.Inches:
		return hundredths(unit.Length.Unit("in").Out(v)) + " in"
	case s.Of.ofSize():
		return hundredths(v*1e3) + " mm"
	case fahrenheit:
		return hundredths(unit.Temperature.Unit("°F").Out(v)) + " °F"
	}
	return hundredths(v) + " °C"
}

// part is a share of a deviation from a quantity, in the unit that it is typed in.
func (d Deviation) part(share float64, of *Varies) string {
	if d.Share {
		return hundredths(share*d.By*100) + " %"
	}
	u := of.quantity.Unit(strings.TrimLeft(d.Typed, "0123456789.,/ ½⅓⅔¼¾⅛⅜⅝⅞"))
	if u == nil {
		u = &of.quantity.Units[0]
	}
	return hundredths(u.Out(share*d.By)) + " " + u.Name()
}

// hundredths writes a number with two decimals at most.
func hundredths(v float64) string {
	return strings.Replace(strconv.FormatFloat(math.Round(v*100)/100+0, 'f', -1, 64), "-", "−", 1)
}

// ofSize tells whether it is a size, whose words name it by themselves.
func (v *Varies) ofSize() bool {
	return v.quantity == &unit.Length && v.Name != "probe"
}

// The words of the column, and how many quantities of a product may vary, and how far up.
var spreadNames = names(Spreads, func(v *Varies) string { return v.Name })

const (
	mostSpreads    = 40
	mostSpreadPlus = 5.0 // of the value: a film may be five times what is taken
)

// scope is whom a row of Spread is for.
type spreadScope struct {
	products []*product
	step     string // key of the step; "" for all
	rank     int    // 0 all, 1 family, 2 process, 3 product, 4 process/step
}

// readSpread reads the sheet Spread and gives each product what varies about it; of rows for the same quantity the most specific counts.
func (r *reader) readSpread() {
	t := r.tables["Spread"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		scope := r.spreadScope(l)
		s := Spread{At: l.Ref(), Step: -1, rank: scope.rank}
		if w := l.Choice("Quantity"); w != "" {
			s.Of = Spreads[slices.Index(spreadNames, w)]
		}
		s.Basis = l.Words("Basis")
		if s.Of != nil {
			s.Minus, s.Plus = l.deviation("Minus", s.Of), l.deviation("Plus", s.Of)
			switch {
			case !l.Filled("Minus") && !l.Filled("Plus"):
				l.Fault("Minus", "", spreadNothing, s.Of.Name, s.Of.example)
			case s.Minus.By == 0 && s.Plus.By == 0 && l.Sound():
				l.Fault("Minus", "", spreadNothing, s.Of.Name, s.Of.example)
			}
			if s.Of.positive && s.Minus.Share && s.Minus.By >= 1 {
				l.Fault("Minus", s.Minus.Typed, spreadToNothing, s.Of.Name)
			}
			if s.Plus.Share && s.Plus.By > mostSpreadPlus {
				l.Fault("Plus", s.Plus.Typed, spreadTooMuch, short(mostSpreadPlus*100))
			}
			if scope.step != "" && !s.Of.ofStep {
				l.Fault("Applies to", l.Entry("Applies to").Text, spreadOfProduct, s.Of.Name)
			}
		}
		had := false
		var lacking []string
		for _, p := range scope.products {
			if l.Sound() && p.Shape != nil {
				if r.hangSpread(l, p, s, scope.step) {
					had = true
				} else {
					lacking = append(lacking, p.Name)
				}
				p.readings = append(p.readings, l.readings)
			}
		}
		if l.Sound() && !had && len(scope.products) > 0 && slices.ContainsFunc(scope.products, func(p *product) bool { return p.Shape != nil && len(p.Steps) > 0 }) {
			l.Fault("Quantity", s.Of.Name, spreadLacking, r.whoLacks(scope))
		}
		if had && len(lacking) > 0 {
			l.Remark(cell.Note, "Quantity", s.Of.Name, spreadNotFor, someOf(lacking))
		}
		for _, p := range scope.products {
			p.suffer(l.because)
		}
	}
	var found spreadFaults
	for _, p := range r.products {
		found.check(t, p)
	}
	found.tell()
}

// whoLacks names what a quantity is missing in.
func (r *reader) whoLacks(s spreadScope) string {
	switch {
	case s.step != "":
		return "that step"
	case len(s.products) == 1 && s.products[0].Shape != nil:
		return s.products[0].Name + ", a product of the shape " + s.products[0].Shape.Name + ","
	}
	return "every product that the row is for"
}

// spreadScope finds whom a row is for. Where nobody knows, every product suffers: a spread that is left out would be taken for met.
func (r *reader) spreadScope(l *Line) spreadScope {
	typed := l.Words("Applies to")
	if typed == "" {
		return spreadScope{products: r.products}
	}
	head, family, named := strings.Cut(typed, ":")
	process, step, both := strings.Cut(typed, "/")
	switch {
	case Key(typed) == "all":
		return spreadScope{products: r.products}
	case named && Key(head) == "family" && len(r.families[Key(family)]) > 0 && Key(family) != "":
		return spreadScope{products: r.families[Key(family)], rank: 1}
	case r.byName[Key(typed)] != nil:
		if r.processes[Key(typed)] != nil || len(r.families[Key(typed)]) > 0 {
			l.Remark(cell.Warning, "Applies to", typed, spreadTwoNames)
		}
		return spreadScope{products: []*product{r.byName[Key(typed)]}, rank: 3}
	case r.processes[Key(typed)] != nil:
		if len(r.families[Key(typed)]) > 0 {
			l.Fault("Applies to", typed, spreadFamilyToo, r.processes[Key(typed)].name)
			return spreadScope{products: slices.Concat(r.users[Key(typed)], r.families[Key(typed)]), rank: 2}
		}
		return spreadScope{products: r.users[Key(typed)], rank: 2}
	case len(r.families[Key(typed)]) > 0:
		return spreadScope{products: r.families[Key(typed)], rank: 1}
	case both && r.processes[Key(process)] != nil:
		pr := r.processes[Key(process)]
		if pr.by[Key(step)] == nil {
			l.Fault("Applies to", typed, stepUnknown, pr.name, r.offer(step, pr.stepNames))
		}
		return spreadScope{products: r.users[Key(process)], step: Key(step), rank: 4}
	}
	if !r.blind() {
		near := r.offer(typed, func() []string {
			list := append([]string{"all"}, r.productNames()...)
			for _, p := range r.products {
				if p.Family != "" && !slices.Contains(list, "family: "+p.Family) && len(list) < 2*len(r.products)+1 {
					list = append(list, "family: "+p.Family)
				}
			}
			return append(list, r.processNames()...)
		})
		l.Fault("Applies to", typed, spreadUnknown, near)
	}
	return spreadScope{products: r.products}
}

// deviation reads a cell of Minus or Plus, which brings its own unit.
func (l *Line) deviation(heading string, v *Varies) Deviation {
	e := l.Entry(heading)
	var d Deviation
	if e.Kind == Blank {
		l.note(heading, "", "0", "blank: it does not vary this way, unless a row for more says so")
		return d
	}
	if l.broken(heading, e) {
		return d
	}
	text := l.t.grid.Shown(e)
	var value unit.Value
	var wrong *unit.Mistake
	share := strings.ContainsAny(text, "%％")
	q := v.quantity
	if share {
		q = &unit.Percent
	}
	switch {
	case e.Kind == Truth:
		l.Fault(heading, text, isTruth, v.example)
		return d
	case e.Kind == Figure && (e.Form == Date || e.Form == Clock && v.quantity != &unit.Duration):
		l.Fault(heading, text, spreadBare, v.example, v.Name)
		return d
	case e.Kind == Figure && e.Shows != AsStored:
		l.refuse(heading, e.differs(text))
		return d
	case e.Kind == Figure && e.Form == Clock:
		x, err := storedNumber(e.Text)
		if err != nil {
			l.Fault(heading, text, spreadBare, v.example, v.Name)
			return d
		}
		value = unit.Value{Computed: math.Round(x*86400*1000) / 1000, Typed: text}
	default:
		dec := l.r.decimal
		if e.Kind == Figure { // as it is stored, with a point
			dec = unit.Point
		}
		value, wrong = q.Parse(text, nil, dec)
	}
	switch {
	case wrong != nil && strings.HasPrefix(wrong.Says, unit.NoUnit):
		if x, err := strconv.ParseFloat(strings.TrimSpace(text), 64); err == nil && x == 0 { // nothing needs no unit
			value, wrong = unit.Value{Typed: "0"}, nil
			break
		}
		l.Fault(heading, text, spreadBare, v.example, v.Name)
		return d
	case wrong != nil:
		l.Fault(heading, text, asFound, wrong.Says, wrong.Mend)
		return d
	}
	switch {
	case share && !v.percent:
		l.Fault(heading, value.Typed, spreadPercent, v.Name, v.example)
	case value.Computed < 0:
		l.Fault(heading, value.Typed, spreadNegative, heading)
	}
	d = Deviation{Typed: value.Typed, By: value.Computed, Share: share}
	used := short(value.Computed) + spaced(v.quantity.Units[0].Name())
	if share {
		d.By /= 100
		used = short(value.Computed) + " %"
	}
	l.note(heading, value.Typed, used, "")
	return d
}

// hangSpread gives a spread to a product, for each step that has it, and tells whether it has it at all.
// someOf names the first of a list, and how many more there are.
func someOf(names []string) string {
	const most = 5
	if len(names) > most {
		return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), len(names)-most)
	}
	return strings.Join(names, ", ")
}

// rounded writes the number that a text begins with in at most six digits.
func rounded(typed string) string {
	number, rest, _ := strings.Cut(typed, " ")
	x, err := strconv.ParseFloat(number, 64)
	if err != nil {
		return typed
	}
	return strings.TrimSpace(strconv.FormatFloat(x, 'g', 6, 64) + " " + rest)
}

// inherit takes a blank end over from a less specific row: only 0 says that a quantity does not vary that way.
func (s *Spread) inherit(from *Spread) {
	if s.Minus.Typed == "" {
		s.Minus = from.Minus
	}
	if s.Plus.Typed == "" {
		s.Plus = from.Plus
	}
}

func (r *reader) hangSpread(l *Line, p *product, s Spread, stepKey string) (had bool) {
	add := func(step int, name string) {
		had = true
		s.Step, s.StepName = step, name
		for i := range p.Spreads {
			o := &p.Spreads[i]
			if o.Of != s.Of || o.Step != step {
				continue
			}
			switch {
			case o.rank == s.rank:
				l.Fault("Quantity", s.Of.Name, spreadTwice, strconv.Itoa(o.At.Row))
			case o.rank > s.rank:
				l.Remark(cell.Note, "Quantity", s.Of.Name, spreadOver, strconv.Itoa(o.At.Row), p.Name)
				o.inherit(&s)
			default:
				l.Remark(cell.Note, "Quantity", s.Of.Name, spreadWins, strconv.Itoa(o.At.Row), p.Name)
				t := s
				t.inherit(o)
				*o = t
			}
			return
		}
		p.Spreads = append(p.Spreads, s)
	}
	if !s.Of.ofStep {
		if s.Of.has(&p.Product.Product, nil) {
			add(-1, "")
		}
		return had
	}
	for i := range p.Steps {
		if st := &p.Steps[i]; (stepKey == "" || Key(st.Name) == stepKey) && st.Surface != nil && s.Of.has(&p.Product.Product, st) {
			add(i, st.Name)
		}
	}
	return had
}

// spreadFaults are what cannot be calculated at the ends of the rows of Spread, each told once for all products that it is true of.
type spreadFaults []*spreadFault

type spreadFault struct {
	line           *Line
	heading, typed string
	saying         saying
	args           []string // ofProducts stands for their names
	products       []*product
}

const ofProducts = "\x00"

// add takes in what is true of a product.
func (fs *spreadFaults) add(p *product, l *Line, heading, typed string, s saying, args ...string) {
	for _, f := range *fs {
		if f.line == l && f.heading == heading && f.typed == typed && f.saying == s && slices.Equal(f.args, args) {
			f.products = append(f.products, p)
			return
		}
	}
	*fs = append(*fs, &spreadFault{l, heading, typed, s, args, []*product{p}})
}

// tell puts them to their lines, and to the products, which cannot be calculated.
func (fs spreadFaults) tell() {
	for _, f := range fs {
		var names []string
		for _, p := range f.products {
			names = append(names, p.Name)
		}
		for i, a := range f.args {
			if a == ofProducts {
				f.args[i] = someOf(names)
			}
		}
		f.line.Fault(f.heading, f.typed, f.saying, f.args...)
		for _, p := range f.products {
			p.suffer(f.line.because[len(f.line.because)-1:])
		}
	}
}

// check asks the model what it cannot calculate of a product at each end.
func (fs *spreadFaults) check(t *table, p *product) {
	if len(p.because) > 0 || len(p.Spreads) == 0 || p.Shape == nil || len(p.Steps) == 0 {
		return
	}
	lineOf := func(s *Spread) *Line {
		return t.lines[slices.IndexFunc(t.lines, func(l *Line) bool { return l.Ref() == s.At })]
	}
	if len(p.Spreads) > mostSpreads {
		l := lineOf(&p.Spreads[mostSpreads])
		fs.add(p, l, "Applies to", l.Entry("Applies to").Text, spreadMany, strconv.Itoa(len(p.Spreads)), ofProducts, strconv.Itoa(mostSpreads))
		return
	}
	before := map[string]bool{}
	for _, e := range model.Check(p.Product.Product, p.Steps) {
		before[e.Msg] = true
	}
	for i := range p.Spreads {
		s := &p.Spreads[i]
		l := lineOf(s)
		for _, end := range []struct {
			heading string
			at      float64
			d       Deviation
		}{{"Minus", -1, s.Minus}, {"Plus", 1, s.Plus}} {
			if end.d.By == 0 {
				continue
			}
			var step *model.Step
			if s.Step >= 0 {
				step = &p.Steps[s.Step]
			}
			if s.Of.positive && end.at < 0 {
				if v := s.Of.value(&p.Product.Product, step); v-end.d.of(v) <= 0 {
					fs.add(p, l, end.heading, end.d.Typed, spreadTooFar, s.Named(), ofProducts)
					continue
				}
			}
			if s.Of.Name == "film coefficient" && !end.d.Share && anyExposure(step, worksOut) {
				fs.add(p, l, end.heading, end.d.Typed, spreadFilm, s.StepName)
				continue
			}
			if s.Of.Name == "duration" && anyExposure(step, func(e *model.Exposure) bool {
				n := len(e.Medium.TimesS)
				return n > 1 && e.Medium.TimesS[n-1] < step.DurationS+end.at*end.d.of(step.DurationS)-1e-6
			}) {
				fs.add(p, l, end.heading, end.d.Typed, spreadCourse, s.StepName)
				continue
			}
			at := make([]float64, len(p.Spreads))
			at[i] = end.at
			q := p.Varied(at)
			for _, e := range model.Check(q.Product, q.Steps) {
				if e.Level == cell.Fault && !before[e.Msg] {
					fs.add(p, l, end.heading, end.d.Typed, spreadEnd, s.Named(), ofProducts, strings.TrimPrefix(rounded(e.Typed)+": "+e.Msg, ": "))
					break
				}
			}
		}
	}
}
