package verify

import (
	"fmt"
	"math"

	"slowpoint/model"
)

const exact = "exact series, worked out apart from this program (eigenvalues to 60 digits; the first ones as printed in Cengel, Heat Transfer, Table 4-2)"

// alpha and tested are the food of the series: diffusivity 1.35e-7 m²/s, k 0.5 W/(m·K).
const alpha = 1.35e-7

var tested = model.Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 0.5 / alpha / 1000}

// Chill from 75 to 3 °C: what the dimensionless figures are turned into.
const (
	chillFromC = 75
	chillToC   = 3
)

// body is a product of one shape of the tested food; radiusM is the half thickness or radius.
func body(shape *model.Shape, radiusM, startC float64) model.Product {
	size := model.Size{DiameterM: 2 * radiusM}
	if shape == model.Slab {
		size = model.Size{ThicknessM: 2 * radiusM}
	}
	return model.Product{Name: shape.Name, Shape: shape, Size: size, Food: material(tested), StartC: startC}
}

// oneStep is a body of one axis through one step; Biot and Fourier number on the half thickness or radius.
func oneStep(shape *model.Shape, radiusM, bi, fo float64) (p Problem, endS float64) {
	endS = fo * radiusM * radiusM / alpha
	return Problem{fmt.Sprintf("%s, %s, Fo %g", shape.Name, biot(bi), fo), body(shape, radiusM, chillFromC),
		[]model.Step{step("chill", endS, exposure(bi*tested.KWmK/radiusM, chillToC))}}, endS
}

// duration words a time.
func duration(s float64) string { return fmt.Sprintf("%g min", s/60) }

func seriesCases() []Case {
	var list []Case
	for _, c := range []struct {
		shape                           *model.Shape
		radiusM, bi, fo                 float64
		thetaCentre, thetaMean, surface float64
	}{
		{model.Slab, 0.03, 1, 0.5, 0.7725263834, 0.6811045654, 0.5045219279},
		{model.Slab, 0.03, 10, 0.2, 0.8292547308, 0.5832620326, 0.1224822381},
		{model.Slab, 0.03, held, 0.2, 0.7723116069, 0.4959121798, 0},
		{model.Cylinder, 0.04, 1, 0.5, 0.5485862039, 0.4473842636, 0.3527858375},
		{model.Cylinder, 0.04, 10, 0.2, 0.6002323369, 0.3116759163, 0.0748438621},
		{model.Cylinder, 0.04, held, 0.1, 0.8483551133, 0.3941758060, 0},
		{model.Sphere, 0.035, 1, 0.3, 0.6068038172, 0.4701240936, 0.3867639294},
		{model.Sphere, 0.035, 10, 0.1, 0.7957590821, 0.3460118351, 0.0975213088},
		{model.Sphere, 0.035, held, 0.1, 0.7071003482, 0.2295212620, 0},
	} {
		p, end := oneStep(c.shape, c.radiusM, c.bi, c.fo)
		add := func(what string, theta float64, got func() (float64, error)) {
			list = append(list, Case{p.Name + ": " + what, Series, exact, "°C", chillToC + (chillFromC-chillToC)*theta, 0.005, got, p})
		}
		add("centre", c.thetaCentre, p.at(model.Place{}, end))
		if c.bi == 10 {
			add("mean", c.thetaMean, p.sample(end, mean))
			add("surface", c.surface, p.at(model.Place{UpM: c.radiusM}, end))
		}
	}
	return list
}

func productCases() []Case {
	problem := func(shape *model.Shape, h, t float64) Problem {
		size := model.Size{DiameterM: 0.1, LengthM: 0.15}
		if shape == model.Brick {
			size = model.Size{ThicknessM: 0.06, WidthM: 0.1, LengthM: 0.2}
		}
		return Problem{fmt.Sprintf("%s, %s, %s", shape.Name, filmed(h), duration(t)),
			model.Product{Name: shape.Name, Shape: shape, Size: size, Food: material(tested), StartC: chillFromC}, []model.Step{step("chill", t, exposure(h, chillToC))}}
	}
	var list []Case
	for _, c := range []struct {
		shape                *model.Shape
		h, t, centre, thetaM float64
	}{
		{model.ShortCylinder, 25, 3600, 57.97136, 0.441938174},
		{model.ShortCylinder, held, 1800, 64.73857, 0.307007857},
		{model.Brick, 25, 3600, 47.60051, 0.371858398},
		{model.Brick, held, 1800, 47.81882, 0.222532369},
	} {
		p, allow := problem(c.shape, c.h, c.t), 0.01
		if c.shape == model.Brick {
			allow = 0.02
		}
		list = append(list,
			Case{p.Name + ": centre", Products, exact, "°C", c.centre, allow, p.at(model.Place{}, c.t), p},
			Case{p.Name + ": mean", Products, exact, "°C", chillToC + (chillFromC-chillToC)*c.thetaM, allow, p.sample(c.t, mean), p})
	}
	return list
}

func halfSpaceCases() []Case {
	const source = "closed form erfc(a) - exp(hx/k + b²) erfc(a + b); Carslaw & Jaeger, Conduction of Heat in Solids (1959), section 2.7"
	var list []Case
	for _, c := range []struct{ x, t, h, theta float64 }{
		{0, 300, 25, 0.277741144},
		{0.01, 900, 200, 0.428633002},
		{0.005, 60, held, 0.214140653},
	} {
		half := 9.5 * math.Sqrt(alpha*c.t) // so thick that the other face is not felt
		p := Problem{fmt.Sprintf("%g mm below a face, %s, %s", 1000*c.x, filmed(c.h), duration(c.t)), body(model.Slab, half, chillFromC),
			[]model.Step{step("chill", c.t, exposure(c.h, chillToC))}}
		list = append(list, Case{p.Name, HalfSpace, source, "°C", chillFromC - (chillFromC-chillToC)*c.theta, 0.005, p.at(model.Place{UpM: half - c.x}, c.t), p})
	}
	return list
}

// rising is a medium that rises by 40 K/h from 5 °C, film 20 W/(m²·K).
func rising(durationS float64) model.Step {
	e := exposure(20, 0)
	e.Medium = model.Course{TimesS: []float64{0, durationS}, C: []float64{5, 5 + durationS/90}}
	return step("warm up", durationS, e)
}

func rampCases() []Case {
	var list []Case
	for _, c := range []struct {
		shape      *model.Shape
		r, t, rise float64
	}{
		{model.Slab, 0.03, 7200, 21.39037638},
		{model.Cylinder, 0.04, 7200, 25.89173490},
		{model.Sphere, 0.04, 3600, 8.51799254},
	} {
		p := Problem{c.shape.Name + " in a medium rising by 40 K/h: centre after " + duration(c.t), body(c.shape, c.r, 5), []model.Step{rising(c.t)}}
		list = append(list, Case{p.Name, Ramp, "Duhamel integral of the exact step series, worked out apart from this program", "°C", 5 + c.rise, 0.005, p.at(model.Place{}, c.t), p})
	}
	return list
}

func chainCases() []Case {
	const source = "end profile of each step projected on the exact eigenfunctions of the next, worked out apart from this program"
	plate, sphere := model.Slab, model.Sphere
	chain := func(shape *model.Shape, r, restS, chillS float64) Problem {
		return Problem{shape.Name + ", oven, rest, chill", body(shape, r, 5),
			[]model.Step{step("oven", 2400, exposure(40, 160)), step("rest", restS, exposure(8, 22)), step("chill", chillS, exposure(30, 2))}}
	}
	a, long, b := chain(plate, 0.025, 900, 5400), chain(plate, 0.025, 3600, 7200), chain(sphere, 0.035, 3600, 7200)
	peak := func(p Problem) func() (float64, error) { // highest temperature of the centre
		return func() (float64, error) {
			h, err := p.history()
			if err != nil {
				return 0, err
			}
			top := math.Inf(-1)
			for t := 2400.; t <= 6000; t++ {
				top = math.Max(top, h.At(model.Place{}, t))
			}
			return top, nil
		}
	}
	return []Case{
		{"slab 50 mm, oven 40 min: centre", Chain, source, "°C", 59.9082220, 0.005, a.at(model.Place{}, 2400), a},
		{"slab 50 mm, oven, rest 15 min, chill 90 min: centre", Chain, source, "°C", 28.4677106, 0.005, a.at(model.Place{}, 8700), a},
		{"slab 50 mm, oven, rest 15 min: mean", Chain, source, "°C", 73.5758983, 0.005, a.sample(3300, mean), a},
		{"sphere 70 mm, oven, rest 60 min, chill 120 min: surface", Chain, source, "°C", 3.6599653, 0.005, b.at(model.Place{UpM: 0.035}, 13200), b},
		{"slab 50 mm: peak of the centre during the rest", Chain, source, "°C", 73.7885034, 0.005, peak(long), long},
		{"sphere 70 mm: peak of the centre during the rest", Chain, source, "°C", 113.9605908, 0.005, peak(b), b},
	}
}

// filmed words a film coefficient, W/(m²·K); an endless one holds the surface.
func filmed(h float64) string {
	if math.IsInf(h, 1) {
		return "surface held"
	}
	return fmt.Sprintf("film %g W/(m²·K)", h)
}

// biot words a Biot number; an endless one holds the surface.
func biot(bi float64) string {
	if math.IsInf(bi, 1) {
		return "surface held"
	}
	return fmt.Sprintf("Bi %g", bi)
}

func limitCases() []Case {
	// Nu = -(dθm/dFo)/θm/(2e) with Fo on the full thickness or diameter: from two means a little apart, which is exact for a single exponential.
	nusselt := func(c Case, shape *model.Shape, e float64) Case {
		const r = 0.03
		p, end := oneStep(shape, r, held, 4*0.22)
		c.Area, c.Unit, c.Allowance, c.Problem = LongTime, "-", 0.005, p
		c.Got = func() (float64, error) {
			h, err := p.history()
			if err != nil {
				return 0, err
			}
			s := h.Sample(end / 22)
			a, b := s.Mean[11]-chillToC, s.Mean[22]-chillToC // at 0.11 and 0.22
			return math.Log(a/b) / (s.TimesS[22] - s.TimesS[11]) * r * r / alpha * 2 / e, nil
		}
		return c
	}
	p, end := oneStep(model.Slab, 0.03, held, 4*0.02)
	return []Case{
		nusselt(Case{Name: "slab, long-time Nusselt number on thickness and mean temperature", Source: "closed form π²/2, printed as 4.93 in textbooks", Expected: 4.934802}, model.Slab, 1),
		nusselt(Case{Name: "cylinder, long-time Nusselt number on diameter and mean temperature", Source: "closed form, square of the first zero of J0, printed as 5.78 in textbooks", Expected: 5.783186}, model.Cylinder, 2),
		nusselt(Case{Name: "sphere, long-time Nusselt number on diameter and mean temperature", Source: "closed form 2π²/3, printed as 6.58 in textbooks", Expected: 6.579736}, model.Sphere, 3),
		{"slab, mean at Fo 0.02 on the thickness, by penetration theory", LongTime, "closed form 1 - 4·√(Fo/π); Carslaw & Jaeger, Conduction of Heat in Solids (1959), section 3.3", "°C",
			chillToC + (chillFromC-chillToC)*(1-4*math.Sqrt(0.02/math.Pi)), 0.005, p.sample(end, mean), p},
	}
}
