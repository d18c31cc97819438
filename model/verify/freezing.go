package verify

import (
	"math"
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

// icy is a food of which the ice forms at one temperature, as nearly as a table of heat contents can have it: over sharpK.
type icy struct {
	frozen, unfrozen model.Properties // of one density
	latentJkg        float64
	freezingC        float64
}

// sharpK is the range over which the ice of an icy food forms, K: about a thousandth of the temperature differences of the cases.
const sharpK = 0.02

// food gives the material down to lowC or a little below. The cold table of a law has 256 rows of equal heat, so the range is chosen such
// that the last ice forms at the end of a row: a bend within a row would be rounded.
func (f *icy) food(lowC float64) *model.Material {
	end := f.freezingC - sharpK
	plateau := f.latentJkg + f.frozen.CJkgK*sharpK
	rows := math.Floor(256 * plateau / (plateau + f.frozen.CJkgK*(end-lowC)))
	return &model.Material{Name: "test input", Source: "input of the case", Composed: true, LowC: end - plateau*(256/rows-1)/f.frozen.CJkgK, HighC: 100, FreezingC: &f.freezingC, Waterless: true,
		Props: func(c float64) model.Properties {
			switch {
			case c >= f.freezingC:
				return f.unfrozen
			case c < end-1e-9:
				return f.frozen
			}
			p := f.frozen
			p.KWmK = f.unfrozen.KWmK + (f.freezingC-c)/sharpK*(f.frozen.KWmK-f.unfrozen.KWmK)
			p.CJkgK = plateau / sharpK
			return p
		},
		EnthalpyJkg: func(c float64) float64 {
			switch {
			case c >= f.freezingC:
				return f.unfrozen.CJkgK * (c - f.freezingC)
			case c >= end:
				return plateau / sharpK * (c - f.freezingC)
			}
			return f.frozen.CJkgK*(c-end) - plateau
		}}
}

// halfSpace is a half space that freezes from its surface (Neumann), as a slab of which the middle does not notice for as long as it lasts.
type halfSpace struct {
	icy
	name             string
	startC, surfaceC float64
}

var (
	waterlike = halfSpace{icy{model.Properties{KWmK: 2.22, RhoKgM3: 1000, CJkgK: 1762}, model.Properties{KWmK: 0.556, RhoKgM3: 1000, CJkgK: 4226}, 338000, 0}, "of water", 10, -20}
	meatlike  = halfSpace{icy{model.Properties{KWmK: 1.55, RhoKgM3: 1050, CJkgK: 1900}, model.Properties{KWmK: 0.48, RhoKgM3: 1050, CJkgK: 3500}, 210000, -1.7}, "like meat", 20, -35}
	chilled   = halfSpace{meatlike.icy, "like meat that starts at its freezing point", -1.7, -35}
)

// problem freezes the half space for a time; far away from the surface, 2.6 times as deep as warmth spreads, nothing happens.
func (s halfSpace) problem(endS float64) Problem {
	alpha := func(p model.Properties) float64 { return p.KWmK / (p.RhoKgM3 * p.CJkgK) }
	b := body(model.Slab, 5.2*math.Sqrt(alpha(s.unfrozen)*endS), s.startC)
	b.Food = s.food(s.surfaceC - 1)
	return Problem{"half space " + s.name, b, []model.Step{frozenAt(endS, exposure(held, s.surfaceC))}}
}

// temperature asks for that in a depth, m, at the end.
func (s halfSpace) temperature(h *model.History, depthM float64) float64 {
	return h.At(model.Place{UpM: h.Product.Size.ThicknessM/2 - depthM}, h.EndS())
}

// front asks how deep the ice reaches at the end, mm. A mesh knows the front to within a volume, so it is read from the temperature in what is
// frozen, in a depth about halfway to it, which the whole past of the front has made: below the surface temperatures follow an error function,
// and the front is where that is at the freezing point.
func (s halfSpace) front(p Problem, halfwayM float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		spread := 2 * math.Sqrt(s.frozen.KWmK/s.frozen.RhoKgM3/s.frozen.CJkgK*h.EndS())
		full := (s.temperature(h, halfwayM) - s.surfaceC) / math.Erf(halfwayM/spread)
		return 1000 * spread * math.Erfinv((s.freezingC-s.surfaceC)/full), nil
	}
}

// plankSlab is a slab of 50 mm with next to no sensible heat, 20 J/(kg·K), and sharp ice.
func plankSlab() Problem {
	p := model.Properties{KWmK: 1.6, RhoKgM3: 1000, CJkgK: 20}
	f := icy{p, p, 220e3, 0}
	b := body(model.Slab, 0.025, 0)
	b.Food = f.food(-31)
	return Problem{"slab of 50 mm with latent heat alone", b, []model.Step{frozenAt(8000, exposure(30, -30))}}
}

// sharpCases freeze foods of which the ice forms at one temperature. They take the longest of all, since every volume freezes by itself.
func sharpCases() []Case {
	const source = "Neumann's similarity solution (Carslaw & Jaeger, Conduction of Heat in Solids, 1959, chapter XI); ice within 0.02 K"
	var list []Case
	for _, c := range []struct {
		halfSpace
		endS, wantMM float64
	}{{waterlike, 3600, 27.6701909}, {meatlike, 3600, 32.0758855}, {chilled, 3600, 39.2000255}} {
		p := c.problem(c.endS)
		list = append(list, Case{p.Name + " after " + duration(c.endS) + ": depth of the ice", Freezing, source, "mm", c.wantMM, 0.005 * c.wantMM, c.front(p, c.wantMM/2000), p})
	}
	p := plankSlab()
	return append(list, Case{p.Name + ": centre frozen", Freezing, "Plank: t = Λ/(Tf - Tm)·(D/2h + D²/8k), 7543.4 s, to which all else must tend without sensible heat", "s",
		7543.4028, 0.003 * 7543.4028, p.crossings()(-sharpK), p})
}
