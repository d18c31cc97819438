package model

import (
	"fmt"
	"math"

	"slowpoint/model/cell"
)

// outsideK is how far a temperature may leave the rows of a table of properties, or the range of the components' properties, K.
const outsideK = 0.05

// outside looks at foods whose temperatures, °C, leave what is known of them: a table of properties is refused, and so is setting fat; the
// properties of the components go on in their formulas beyond their range, which is warned of.
func (s *solver) outside(h *History, low, high float64) {
	for _, f := range s.product.Foods() {
		beyond := (f.LowC != 0 || f.HighC != 0) && (low < f.LowC-outsideK || high > f.HighC+outsideK)
		switch {
		case f.Table && beyond:
			s.refused.Add(cell.Error{At: f.At, Field: "At temperature", Typed: fmt.Sprintf("%g to %g °C", f.LowC, f.HighC),
				Msg:  fmt.Sprintf("the food %s gets as cold as %.1f °C and as hot as %.1f °C, and its properties are not given there", f.Name, low, high),
				Hint: "add rows for these temperatures, or one row alone for a constant"})
		case f.setsFat(low, high):
			s.refused.Add(s.foodCell(f, cell.Error{Field: "Fat", Typed: fmt.Sprintf("%.3g %%", f.FatPc),
				Msg: fmt.Sprintf("the food %s goes from %.1f to %.1f °C, and its fat sets and melts between about %d and %d °C: that takes 100 to 180 J a gram of fat (from memory), which does not follow from a composition; above %d %% fat it is too much to leave out, for the food would chill and heat more slowly than calculated",
					f.Name, low, high, fatSetsC, fatMeltsC, mostFatPc),
				Hint: "give measured Conductivity, Density and Specific heat in rows of Foods at several temperatures, the heat of melting in the specific heat (of an oil that stays liquid one row is enough), or judge a probe record"}))
		case f.Composed && beyond:
			h.Beyond = true
			h.Warnings.Add(s.foodCell(f, cell.Error{Level: cell.Warning, Field: "Food", Typed: f.Name,
				Msg:  fmt.Sprintf("gets as cold as %.1f °C and as hot as %.1f °C, and the properties of its components are known from %g to %g °C; beyond, their formulas go on, which nothing holds", low, high, f.LowC, f.HighC),
				Hint: "do not rely on what is calculated there: judge a probe record, or look at the temperatures of the surroundings and their units"}))
		}
	}
}

// Where fat sets and melts, °C: milk fat, lard and tallow are partly solid below about 40 °C and mostly set near 0 °C (common knowledge,
// no source); and from how much fat on, %, a composition does not do, where more than fatSpanK of that is passed. All built-in foods, up to
// cheddar and cream cheese, have less than mostFatPc; with the 180 J/g a food of 35 % holds 63 kJ/kg more than is calculated, against some
// 150 kJ/kg from 57 to 5 °C, and of less the report says so (our own judgement).
const (
	fatSetsC, fatMeltsC = 0, 40
	mostFatPc           = 35
	fatSpanK            = 5
)

// setsFat tells whether the fat of a food known by its composition alone sets or melts too much to be left out, in temperatures from low to high.
func (m *Material) setsFat(low, high float64) bool {
	return m.Composed && m.FatPc > mostFatPc && math.Min(high, fatMeltsC)-math.Max(low, fatSetsC) > fatSpanK
}

// foodCell puts a message at the row of a food, or at the product where it is a built-in one.
func (s *solver) foodCell(f *Material, e cell.Error) cell.Error {
	e.At = f.At
	if e.At.IsZero() {
		e.At, e.Field, e.Typed = s.product.At, "Food", f.Name
	}
	return e
}
