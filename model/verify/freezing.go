package verify

import (
	"sync"

	"slowpoint/model"
)

// ice is a food whose enthalpy law is given as a formula: below its freezing point Tf the share 1 - Tf/T of its latent heat has left, and its
// conductivity has gone as far from the unfrozen to the frozen one.
type ice struct{ rhoKgM3, unfrozenJkgK, frozenJkgK, latentJkg, freezingC, unfrozenWmK, frozenWmK float64 }

func iceOf(i ice) *model.Material {
	tf := i.freezingC
	return &model.Material{Name: "test input", Source: "input of the case", FreezingC: &tf, Composed: true, Waterless: true, LowC: -60, HighC: 100,
		Props: func(c float64) model.Properties {
			if c >= tf {
				return model.Properties{KWmK: i.unfrozenWmK, RhoKgM3: i.rhoKgM3, CJkgK: i.unfrozenJkgK}
			}
			return model.Properties{KWmK: i.unfrozenWmK + (i.frozenWmK-i.unfrozenWmK)*(1-tf/c), RhoKgM3: i.rhoKgM3, CJkgK: i.frozenJkgK - i.latentJkg*tf/(c*c)}
		},
		EnthalpyJkg: func(c float64) float64 {
			if c >= tf {
				return i.unfrozenJkgK * (c - tf)
			}
			return i.frozenJkgK*(c-tf) - i.latentJkg*(1-tf/c)
		}}
}

// frozenAt is a step that freezes.
func frozenAt(durationS float64, e model.Exposure) model.Step {
	s := step("freeze", durationS, e)
	s.Stage = model.Freeze
	return s
}

// freezing takes a piece of 25 mm half thickness or radius from 10 °C in air of -30 °C; thawing from -18 °C in 15 °C.
func freezing(shape *model.Shape) Problem { return iced(shape, model.Freeze, 10, -30, 13000) }
func thawing(shape *model.Shape) Problem  { return iced(shape, model.Thaw, -18, 15, 21000) }

func iced(shape *model.Shape, stage *model.Stage, startC, mediumC, durationS float64) Problem {
	b := body(shape, 0.025, startC)
	b.Food = iceOf(ice{1000, 3600, 1900, 220e3, -1, 0.5, 1.6})
	s := step(stage.Name, durationS, exposure(30, mediumC))
	s.Stage = stage
	return Problem{shape.Name, b, []model.Step{s}}
}

// crossings asks when the centre passes temperatures, s, by one solution.
func (p Problem) crossings() func(c float64) func() (float64, error) {
	solved := sync.OnceValues(p.history)
	return func(c float64) func() (float64, error) {
		return func() (float64, error) {
			h, err := solved()
			if err != nil {
				return 0, err
			}
			return passing(h, model.Place{}, c)
		}
	}
}

func freezingCases() []Case {
	const source = "finite volumes in explicit steps with 20 to 160 cells, worked out apart from this program and extrapolated; 0.1 %"
	var list []Case
	add := func(p Problem, what string, c, want float64) {
		list = append(list, Case{what, Freezing, source, "s", want, 0.003 * want, p.crossings()(c), p})
	}
	add(freezing(model.Slab), "slab of 50 mm in air of -30 °C: centre down to -18 °C", -18, 11070.8)
	add(freezing(model.Cylinder), "cylinder of 50 mm in air of -30 °C: centre down to -18 °C", -18, 5416.3)
	add(freezing(model.Sphere), "sphere of 50 mm in air of -30 °C: centre down to -18 °C", -18, 3548.1)
	add(thawing(model.Slab), "frozen slab of 50 mm in air of 15 °C: centre up to 4 °C", 4, 18454)
	add(thawing(model.Cylinder), "frozen cylinder of 50 mm in air of 15 °C: centre up to 4 °C", 4, 9094.9)
	add(thawing(model.Sphere), "frozen sphere of 50 mm in air of 15 °C: centre up to 4 °C", 4, 6079.1)
	return list
}
