package main

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/unit"
	"slowpoint/report"
	"slowpoint/rules"
)

// leverLeast is the smallest share of the size that is tried, in leverSteps steps that grow.
const (
	leverLeast = 0.3
	leverSteps = 8
)

// leverMost is how many times its present time a step is tried to last, and leverWarmerK how much warmer it is tried to end.
const (
	leverMost    = 4.0
	leverWarmerK = 20.0
)

// leverColdestC is the coldest medium that is tried for chilling, °C: below it the surface freezes, which is not calculated.
const leverColdestC = 0.0

// The units that a plan may be in beside those that the program computes in.
var inch, degreeF = unit.Length.Unit("in"), unit.Temperature.Unit("°F")

// change is one thing that could be changed, by whole steps in the user's own unit.
type change struct {
	what string                           // "thickness", "cook", "blast chill in"
	from string                           // as it is now
	to   func(n int) string               // as it would be after n steps
	set  func(p *workbook.Product, n int) // makes it so; p is a copy whose steps may be changed
	most int                              // the largest number of steps
	far  string                           // how far was tried, in words
	try  []int                            // rising numbers of steps at which to look, since what meets the limits need not go on meeting them
	aims func(l *rules.Limit) bool        // the limits that it is meant for; nil: all
}

// changes are what is worth trying for the limits that are not met.
func (r *runner) changes(p *workbook.Product, now *report.Product) []change {
	var out []change
	if c, ok := smaller(p); ok {
		out = append(out, c)
	}
	hot, cold := false, false
	for i := range now.Judgement.Findings {
		f := &now.Judgement.Findings[i]
		if f.Level != "must" || f.Verdict != rules.NotMet {
			continue
		}
		if heats(f.Limit) && !hot {
			if c, ok := r.longer(p, now.History, f.Limit); ok {
				out, hot = append(out, c), true
			}
		}
		if cools(f.Limit) && !cold {
			if c, ok := r.colder(p, f.Limit); ok {
				out, cold = append(out, c), true
			}
		}
	}
	return out
}

// smaller is a smaller governing size: whole millimetres or, where it was typed in inches, twentieths of an inch.
func smaller(p *workbook.Product) (change, bool) {
	name, size := governing(&p.Product)
	if size == nil {
		return change{}, false
	}
	step, symbol, steps := 0.001, " mm", 1.0 // m, of the user's own unit, in one of it
	if p.Inches {
		step, symbol, steps = inch.In(1)/20, " in", 20
	}
	top := math.Ceil(*size/step - 1e-9) // the next whole step that is not smaller than the present size
	at := func(n int) float64 { return (top - float64(n)) * step }
	c := change{what: name, from: trimmed(*size/step/steps) + symbol, most: int(top) - 1,
		far: fmt.Sprintf("a smaller %s down to %.0f %%", name, 100*leverLeast),
		to: func(n int) string {
			if p.Inches {
				return fmt.Sprintf("%s in (%s mm)", trimmed(inch.Out(at(n))), trimmed(math.Floor(at(n)*1e4+1e-6)/10))
			}
			return trimmed(at(n)*1000) + symbol
		},
		set: func(q *workbook.Product, n int) { resize(q, governingColumn(&p.Product), at(n)) }}
	for k := 1; k <= leverSteps; k++ { // downwards, since a very small piece loses the heat that it carries over
		share := 1 - (1-leverLeast)*float64(k*k)/(leverSteps*leverSteps)
		c.try = append(c.try, int(top-math.Floor(*size/step*share)))
	}
	return c, true
}

// heats tells whether a limit asks for heat that a longer heating may give.
func heats(l *rules.Limit) bool {
	switch l.Kind {
	case rules.Hold, rules.ByTheEnd:
		return l.FromC != nil
	case rules.HoldTable, rules.Lethality, rules.HeatWithin:
		return true
	}
	return false
}

// cools tells whether a limit asks for a chilling that a colder medium may hasten.
func cools(l *rules.Limit) bool {
	switch l.Kind {
	case rules.CoolWithin, rules.Band:
		return true
	case rules.ByTheEnd, rules.StayBelow:
		return l.ToC != nil
	}
	return false
}

// longer is a longer heating: of the last heating step that a limit is about, or one that ends at a higher temperature where that is
// what ends it. Times are whole minutes, temperatures whole degrees of the user's own scale.
func (r *runner) longer(p *workbook.Product, h *model.History, l *rules.Limit) (change, bool) {
	i := lastStep(p.Steps, l, func(s *model.Step) bool { return s.Stage != nil && s.Stage.Heats })
	if i < 0 {
		i = lastStep(p.Steps, nil, func(s *model.Step) bool { return s.Stage == model.Cook })
	}
	if i < 0 || i >= len(h.Spans) {
		return change{}, false
	}
	s := &p.Steps[i]
	if reached := h.Spans[i].Reached; s.UntilC != nil && reached != nil && *reached {
		step := r.degree()
		top := int(leverWarmerK / step)
		at := func(n int) float64 { return r.onScale(*s.UntilC, math.Floor) + float64(n)*step }
		return change{what: s.Name + " until", from: r.degrees(*s.UntilC, false), most: top, aims: heats,
			far: fmt.Sprintf("%s until up to %s", s.Name, r.degrees(at(top), false)), try: []int{2, 4, 7, 12, top},
			to:  func(n int) string { return r.degrees(at(n), true) },
			set: func(q *workbook.Product, n int) { c := at(n); q.Steps[i].UntilC = &c }}, true
	}
	least := math.Floor(s.DurationS / 60)
	most := int(math.Ceil(least*(leverMost-1))) + 5
	c := change{what: s.Name, from: minutes(s.DurationS), most: most, aims: heats,
		far: fmt.Sprintf("%s up to %s", s.Name, minutes((least+float64(most))*60)),
		to:  func(n int) string { return minutes((least + float64(n)) * 60) },
		set: func(q *workbook.Product, n int) { lasting(q, i, (least+float64(n))*60) }}
	for _, share := range []float64{0.06, 0.15, 0.3, 0.6, 1} {
		c.try = append(c.try, int(math.Ceil(share*float64(most))))
	}
	return c, true
}

// colder is a colder medium in the first chilling step that a limit is about, in whole degrees of the user's own scale.
func (r *runner) colder(p *workbook.Product, l *rules.Limit) (change, bool) {
	i := slices.IndexFunc(p.Steps, func(s model.Step) bool { return s.Stage == model.Cool && about(l, &s) })
	if i < 0 || len(p.Steps[i].Medium.C) != 1 {
		return change{}, false
	}
	s, step := &p.Steps[i], r.degree()
	nowC := s.Medium.C[0]
	top := r.onScale(nowC, math.Ceil)
	most := int(math.Floor((top-leverColdestC)/step + 1e-9))
	if most < 1 {
		return change{}, false
	}
	at := func(n int) float64 { return top - float64(n)*step }
	return change{what: s.Name + " in", from: r.degrees(nowC, false), most: most, aims: cools,
		far: fmt.Sprintf("%s in as little as %s", s.Name, r.degrees(at(most), false)), try: []int{most},
		to:  func(n int) string { return r.degrees(at(n), true) },
		set: func(q *workbook.Product, n int) { surround(q, i, at(n)) }}, true
}

// resize gives one size of a product, by its column, another length, m.
func resize(q *workbook.Product, column string, m float64) {
	*q.Size.Of(column) = m
	q.Points = nil // they may lie outside the smaller piece; a limit on one of them then cannot be told
}

// lasting gives a step another duration, s. The steps of q are its own.
func lasting(q *workbook.Product, i int, s float64) { q.Steps[i].DurationS = s }

// surround gives a step of one constant medium another one, °C, and with it the faces that had the same. The steps of q are its own.
func surround(q *workbook.Product, i int, c float64) {
	nowC := q.Steps[i].Medium.C[0]
	constant := func(e *model.Exposure) {
		if len(e.Medium.C) == 1 && e.Medium.C[0] == nowC {
			e.Medium.C = []float64{c}
		}
	}
	constant(&q.Steps[i].Exposure)
	q.Steps[i].Faces = slices.Clone(q.Steps[i].Faces)
	for k := range q.Steps[i].Faces {
		constant(&q.Steps[i].Faces[k].Exposure)
	}
}

// lastStep is the last step that a limit is about and that is fit; -1 if there is none.
func lastStep(steps []model.Step, l *rules.Limit, fit func(*model.Step) bool) int {
	for i := len(steps) - 1; i >= 0; i-- {
		if fit(&steps[i]) && (l == nil || len(l.Stages) > 0 && about(l, &steps[i])) {
			return i
		}
	}
	return -1
}

// about tells whether a limit is about the stage of a step.
func about(l *rules.Limit, s *model.Step) bool {
	return len(l.Stages) == 0 || slices.Contains(l.Stages, s.Stage)
}

// degree is a degree of the user's own scale, K.
func (r *runner) degree() float64 {
	if r.head.Fahrenheit {
		return unit.Difference.Unit("°F difference").In(1)
	}
	return 1
}

// onScale rounds a temperature, °C, to a whole degree of the user's own scale.
func (r *runner) onScale(c float64, way func(float64) float64) float64 {
	if r.head.Fahrenheit {
		return degreeF.In(way(degreeF.Out(c)))
	}
	return way(c)
}

// governing is the size that decides how fast heat gets in: the smaller of those that end in cooled faces. A layered slab and what is
// stirred have none of their own.
func governing(p *model.Product) (name string, size *float64) {
	column := governingColumn(p)
	return strings.ToLower(column), p.Size.Of(column)
}

// governingColumn is the column of that size; "" if there is none.
func governingColumn(p *model.Product) string {
	if p.Shape == nil || p.Shape.Mixed() {
		return ""
	}
	found := ""
	for _, column := range p.Shape.Needs {
		if found == "" || *p.Size.Of(column) < *p.Size.Of(found) {
			found = column
		}
	}
	return found
}
