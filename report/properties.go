package report

import (
	"slices"

	"slowpoint/model"
)

// follows tells whether the properties of a food followed the temperature in this run.
func (x *sheet) follows(m *model.Material) bool {
	marched := func(sp model.Span) bool { return sp.Method == model.Marched }
	return (m.Table || m.Composed) && x.p.History != nil && slices.ContainsFunc(x.p.History.Spans, marched)
}

// propertiesAtC are the temperatures that the properties of a food are listed at, °C.
var propertiesAtC = []float64{-20, -5, 5, 40, 75, 100}

// properties lists the properties of the foods of a product: those that follow the temperature at several temperatures, a constant once.
// Without such a food, and without layers, the steps tell them.
func (x *sheet) properties() {
	rows := x.propertyRows()
	if len(rows) == 0 {
		return
	}
	d := x.doc
	d.heading(say("properties title"), 1, 40)
	d.grouped([]col{{title: say("col food"), wide: 46, bold: true}, {title: say("col temperature"), wide: 33}, {title: say("col conductivity"), wide: 27},
		{title: say("col density"), wide: 25}, {title: say("col heat"), wide: 31}, {title: say("col ice"), wide: 18}}, rows, small, func(i int) bool { return i+1 < len(rows) && rows[i+1][0] != "" })
	d.text(x.propertiesSentence())
}

// propertyRows are the rows of that table: food, temperature, conductivity, density, specific heat, ice; none where it is not due.
func (x *sheet) propertyRows() [][]string {
	var rows [][]string
	foods := x.p.Product.Foods()
	if len(x.p.Product.Layers) == 0 && !slices.ContainsFunc(foods, x.follows) {
		return nil
	}
	for _, m := range foods {
		name := m.Name
		add := func(at string, q model.Properties, ice string) {
			rows = append(rows, []string{name, at, plain(q.KWmK, 3, nearest), plain(q.RhoKgM3, 0, nearest), plain(q.CJkgK, 0, nearest), ice})
			name = ""
		}
		if !x.follows(m) {
			add(say("any temperature"), m.Props(20), "")
			continue
		}
		for _, c := range x.propertiesAt(m) {
			ice := ""
			if m.IceShare != nil && x.coldRun(*m.FreezingC) {
				ice = say("percent", plain(100*m.IceShare(c), 0, nearest))
			}
			add(x.head.temperature(c, nearest), m.Props(c), ice)
		}
	}
	return rows
}

// propertiesAt chooses the temperatures for a food, °C: of a table those within it and its ends; frozen ones only where the food can be
// frozen, and comes near it in this run.
func (x *sheet) propertiesAt(m *model.Material) []float64 {
	var out []float64
	for _, c := range propertiesAtC {
		frozen := m.FreezingC != nil && c < *m.FreezingC || c < 0
		switch {
		case frozen && (m.EnthalpyJkg == nil || !x.coldRun(*m.FreezingC)):
		case (m.LowC != 0 || m.HighC != 0) && (c < m.LowC || c > m.HighC):
		default:
			out = append(out, c)
		}
	}
	if m.Table {
		if len(out) == 0 || out[0] > m.LowC {
			out = append([]float64{m.LowC}, out...)
		}
		if out[len(out)-1] < m.HighC {
			out = append(out, m.HighC)
		}
	}
	return out
}

// coldRun tells whether the food, or what surrounds it, is below a freezing point in this run.
func (x *sheet) coldRun(freezingC float64) bool {
	cold := x.p.Product.StartC < freezingC
	for i := range x.p.Steps {
		cold = cold || anyExposure(&x.p.Steps[i], func(e *model.Exposure) bool {
			for _, c := range e.Medium.C {
				if c < freezingC {
					return true
				}
			}
			return e.RadiatingC != nil && *e.RadiatingC < freezingC
		})
	}
	return cold
}

// propertiesSentence says how the properties were used and how far they can be trusted.
func (x *sheet) propertiesSentence() string {
	s := say("properties sentence")
	composed, ice := false, false
	for _, m := range x.p.Product.Foods() {
		composed = composed || m.Composed
		ice = ice || m.EnthalpyJkg != nil && x.coldRun(*m.FreezingC)
	}
	if composed {
		s += say("properties scatter")
	}
	if ice {
		s += say("properties ice")
	}
	return s
}
