package verify

import (
	"math"

	"slowpoint/model"
	"slowpoint/model/food"
)

// oneFood is a body of one axis of given properties in one step.
func oneFood(shape *model.Shape, radiusM float64, p model.Properties, startC float64, s model.Step) Problem {
	b := body(shape, radiusM, startC)
	b.Food = material(p)
	return Problem{shape.Name, b, []model.Step{s}}
}

// diffusing gives properties from conductivity, W/(m·K), and diffusivity, m²/s.
func diffusing(k, alpha float64) model.Properties {
	return model.Properties{KWmK: k, RhoKgM3: 1000, CJkgK: k / alpha / 1000}
}

func textbookCases() []Case {
	steak := oneFood(model.Slab, 0.01, diffusing(0.45, 0.91e-7), 25, step("freezer air", 3*3600, exposure(9, -11)))
	carcass := oneFood(model.Cylinder, 0.12, diffusing(0.47, 0.13e-6), 37, step("cold air", 24*3600, exposure(22, -10)))
	egg := oneFood(model.Sphere, 0.025, diffusing(0.627, 0.151e-6), 5, step("hot water", 3600, exposure(1200, 95)))
	apple := oneFood(model.Sphere, 0.045, diffusing(0.418, 1.3e-7), 20, step("freezer", 3600, exposure(8, -15)))
	roast := oneFood(model.Sphere, 0.0710, model.Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 4000}, 20, step("oven", 4*3600, exposure(18, 163)))
	chicken := oneFood(model.Sphere, 0.0753146, diffusing(0.45, 0.13e-6), 15, step("brine", 2.75*3600, exposure(440, -7)))
	soil := oneFood(model.Slab, 3, diffusing(0.4, 0.15e-6), 15, step("winter", 90*24*3600, exposure(held, -10)))
	soil.Product.Size.ThicknessM = 2 * 9.5 * math.Sqrt(0.15e-6*90*24*3600)
	flow := func(k, alpha float64) Problem { // 1250 W/m² whatever the surface: a film of next to nothing to a medium of more than a million degrees
		return oneFood(model.Slab, 9.5*math.Sqrt(alpha*1200), diffusing(k, alpha), 20, step("heat", 1200, exposure(1e-3, 1.25e6+20)))
	}
	metal, block := flow(237, 9.71e-5), flow(1.26, 1.1e-5)
	surface := func(p Problem) model.Place { return model.Place{UpM: p.Product.Size.ThicknessM / 2} }
	return []Case{
		{"chicken of 1.7 kg as a sphere, 2.75 h in stirred brine of -7 °C (no freezing in the problem): centre", Textbook, "Cengel & Ghajar, Heat and Mass Transfer, 5th ed., problem 4-75; exact series, -2.0327 °C", "°C", -2.0327, 0.005, chicken.at(model.Place{}, 2.75*3600), chicken},
		{"chicken of 1.7 kg as a sphere, 2.75 h in stirred brine of -7 °C: surface", Textbook, "Cengel & Ghajar, Heat and Mass Transfer, 5th ed., problem 4-75; exact series, -6.9315 °C", "°C", -6.9315, 0.005, chicken.at(model.Place{UpM: 0.0753146}, 2.75*3600), chicken},
		{"soil after 90 days below a surface of -10 °C: depth of 0 °C", Textbook, "Cengel, Heat Transfer, Example 4-6: 0.78 m read from its chart; exact 0.800943 m", "m", 0.800943, 0.001, soil.depth(0), soil},
		{"metal of k 237 under 1250 W/m² for 20 min: surface", Textbook, "Cengel, Heat Transfer, Example 4-7 (a); closed form, 22.0315 °C", "°C", 22.0315, 0.005, metal.at(surface(metal), 1200), metal},
		{"block of k 1.26 under 1250 W/m² for 20 min: surface", Textbook, "Cengel, Heat Transfer, Example 4-7 (b); closed form, 148.612 °C", "°C", 148.612, 0.03, block.at(surface(block), 1200), block},
		{"steak of 20 mm chilled until its surface is at 2 °C", Textbook, "Cengel, Heat Transfer, problem 11-44 with the publisher's solution: 93.1 min", "min", 93.1, 0.1, in(60, steak.passes(model.Place{UpM: 0.01}, 2)), steak},
		{"beef carcass as a cylinder of 240 mm: centre down to 4 °C (no freezing in the problem)", Textbook, "Cengel & Ghajar, Heat and Mass Transfer, 6th ed., problem 4-65: 12.2 h", "h", 12.2, 0.1, in(3600, carcass.passes(model.Place{}, 4)), carcass},
		{"egg as a sphere of 50 mm: centre up to 70 °C", Textbook, "Cengel, Heat Transfer, Example 4-3: 14.4 min with the coefficients of its table", "min", 14.4, 0.1, in(60, egg.passes(model.Place{}, 70)), egg},
		{"apple of 90 mm after an hour in the freezer: centre", Textbook, "Cengel & Ghajar, Heat and Mass Transfer, problem of the apple: 11.2 °C by the one-term solution", "°C", 11.2, 0.15, apple.at(model.Place{}, 3600), apple},
		{"apple of 90 mm after an hour in the freezer: surface", Textbook, "Cengel & Ghajar, Heat and Mass Transfer, problem of the apple: 2.7 °C by the one-term solution", "°C", 2.7, 0.15, apple.at(model.Place{UpM: 0.045}, 3600), apple},
		{"roast of 1.5 kg as a sphere: centre up to 77 °C", Textbook, "Kreith, Principles of Heat Transfer, problem of the roast: 134 min in its solution", "min", 134, 1.34, in(60, roast.passes(model.Place{}, 77)), roast},
	}
}

func propertyCases() []Case {
	const source = "arithmetic, apart from this program, on the polynomials of Choi & Okos (1986) as in ASHRAE Handbook – Refrigeration (2006), chapter 9, Tables 1 and 2, with the rule of Levy (1981)"
	meat := food.Composition{WaterPc: 72, ProteinPc: 21, FatPc: 6, AshPc: 1}
	starchy := food.Composition{WaterPc: 70, ProteinPc: 3, FatPc: 2, CarbohydratePc: 22, FibrePc: 2, AshPc: 1}
	of := func(c food.Composition, t float64, what func(model.Properties) float64) func() (float64, error) {
		return func() (float64, error) {
			m, err := food.Compose("test input", "input of the case", c)
			if err != nil {
				return 0, err
			}
			return what(m.Props(t)), nil
		}
	}
	conductivity := func(p model.Properties) float64 { return p.KWmK }
	heat := func(p model.Properties) float64 { return p.CJkgK }
	density := func(p model.Properties) float64 { return p.RhoKgM3 }
	return []Case{
		{"water at 20 °C: specific heat", Properties, source, "J/(kg·K)", 4176.57, 0.01, of(food.Composition{WaterPc: 100}, 20, heat), Problem{}},
		{"meat at 70 °C: conductivity", Properties, source, "W/(m·K)", 0.524977, 1e-6, of(meat, 70, conductivity), Problem{}},
		{"meat at 5 °C: density", Properties, source, "kg/m³", 1053.2902, 1e-3, of(meat, 5, density), Problem{}},
		{"starchy food at 20 °C: conductivity", Properties, source, "W/(m·K)", 0.492883, 1e-6, of(starchy, 20, conductivity), Problem{}},
		{"starchy food at 70 °C: specific heat", Properties, source, "J/(kg·K)", 3457.177, 1e-2, of(starchy, 70, heat), Problem{}},
	}
}

func practiceCases() []Case {
	// A hen's egg, 42 mm across, of the composition of whole egg, from room temperature. A sphere of its width is on the fast side, the film
	// of boiling water is the lowest of the published range.
	egg, _ := food.Named("Egg, whole, hard-boiled") // without it the case is an error: no food is given
	p := Problem{"egg", model.Product{Name: "egg", Shape: model.Sphere, Size: model.Size{DiameterM: 0.042}, Food: egg, StartC: 20}, []model.Step{step("boil", 1800, exposure(2500, 100))}}
	return []Case{{"hen's egg in boiling water, set to the centre (65 °C)", Practice, "common practice, no source: roughly 7 min", "min", 7, 2, in(60, p.passes(model.Place{}, 65)), p}}
}

func measuredCases() []Case {
	const source = "measured, mean of six: Burfoot et al., Int. J. Food Sci. Technol. 25 (1990) 657-667, as given in James & James, Meat Refrigeration (2002), Table 16.7; " +
		"film of moving air at 1.2 m/s and radiation by the program; composition of braised beef"
	p := Problem{"rolled beef", pieceOf("Beef, brisket, flat half, lean, braised", model.Cylinder, model.Size{DiameterM: 0.11}, 75), []model.Step{step("chill", 10*3600, blown(1.2, 0))}}
	m := timed(p.Product, p.Steps...)
	return []Case{
		{"rolled beef forequarter, 110 mm, 2.7 kg, cooked to 75 °C, in air of 0 °C: centre from 70 to 10 °C", Measured, source, "h", 5.1, 0.51, m.from(70, 10), p},
		{"rolled beef forequarter, 110 mm, 2.7 kg, cooked to 75 °C, in air of 0 °C: centre from 50 to 10 °C", Measured, source, "h", 4.4, 0.44, m.from(50, 10), p},
	}
}
