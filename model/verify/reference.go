package verify

import (
	"math"
	"strings"

	"slowpoint/model"
)

const twoMethods = "solved apart from this program by two methods that agree: Legendre-Galerkin, exact in time, and finite volumes"

// ReferenceProblem is a problem with independent solutions at many places and times.
type ReferenceProblem struct {
	Problem
	ID      string
	Points  map[string]model.Place
	FromLow bool    // places of the solution are counted from the lower face
	AllowK  float64 // accuracy that the program promises, K
	EdgeK   float64 // accuracy at a lower edge between unlike faces and for the coldest and hottest place, K
}

// References lists the reference problems: one, two and three directions, spheroids and layers, changing properties and freezing.
func References() []ReferenceProblem {
	p := model.Properties{KWmK: 0.48, RhoKgM3: 1060, CJkgK: 3600}
	slab := func(thicknessM, startC float64) model.Product {
		return model.Product{Name: "slab", Shape: model.Slab, Size: model.Size{ThicknessM: thicknessM}, Food: material(p), StartC: startC}
	}
	under := func(h, c float64) model.FaceExposure {
		return model.FaceExposure{Face: model.Underside, Exposure: exposure(h, c)}
	}
	chain := []model.Step{step("cook", 3600, exposure(25, 160)), step("rest", 900, exposure(8, 22)), step("blast chill", 14400, exposure(30, 2))}
	up := func(name string, u float64, more map[string]model.Place) map[string]model.Place {
		if more == nil {
			more = map[string]model.Place{}
		}
		more[name] = model.Place{UpM: u}
		return more
	}
	fromLow := func() map[string]model.Place { // of a slab of 40 mm
		return up("bottom", -0.02, up("quarter", -0.01, up("mid", 0, up("three_quarter", 0.01, up("top", 0.02, nil)))))
	}
	return []ReferenceProblem{
		{ID: "A", AllowK: 0.005, EdgeK: 0.005, Points: up("centre", 0, up("quarter", 0.01, up("surface", 0.02, nil))),
			Problem: Problem{"slab 40 mm, cook, rest, chill", slab(0.04, 5), chain}},
		{ID: "B1", AllowK: 0.005, EdgeK: 0.005, Points: fromLow(), FromLow: true,
			Problem: Problem{"slab 40 mm, underside insulated", slab(0.04, 5), []model.Step{
				step("cook", 3600, exposure(25, 160), under(0, 0)),
				step("rest", 900, exposure(8, 22), under(0, 0)),
				step("blast chill", 14400, exposure(30, 2), under(0, 0))}}},
		{ID: "B2", AllowK: 0.005, EdgeK: 0.005, Points: fromLow(), FromLow: true,
			Problem: Problem{"slab 40 mm, other films below", slab(0.04, 5), []model.Step{
				step("cook", 3600, exposure(25, 160), under(8, 160)),
				step("rest", 900, exposure(8, 22), under(3, 22)),
				step("blast chill", 14400, exposure(30, 2), under(10, 2))}}},
		{ID: "C", AllowK: 0.01, EdgeK: 0.01, Points: map[string]model.Place{"centre": {}, "side_mid": {AcrossM: 0.05}, "end_centre": {UpM: 0.06}, "edge": {UpM: 0.06, AcrossM: 0.05},
			"half_half": {UpM: 0.03, AcrossM: 0.025}},
			Problem: Problem{"short cylinder 100 × 120 mm", model.Product{Name: "cylinder", Shape: model.ShortCylinder, Size: model.Size{DiameterM: 0.1, LengthM: 0.12}, Food: material(p), StartC: 5}, chain}},
		{ID: "D", AllowK: 0.02, EdgeK: 0.02, Points: map[string]model.Place{"centre": {}, "face_x": {AlongM: 0.15}, "face_y": {AcrossM: 0.09}, "face_z": {UpM: 0.045},
			"corner": {UpM: 0.045, AcrossM: 0.09, AlongM: 0.15}, "half": {UpM: 0.0225, AcrossM: 0.045, AlongM: 0.075}},
			Problem: Problem{"brick 300 × 180 × 90 mm of changing properties, cook, rest, chill", model.Product{Name: "brick", Shape: model.Brick,
				Size: model.Size{LengthM: 0.3, WidthM: 0.18, ThicknessM: 0.09}, Food: changing(), StartC: 5}, chain}},
		{ID: "E", AllowK: 0.005, EdgeK: 0.005, Points: up("centre", 0, up("half_radius", 0.011, up("surface", 0.022, nil))),
			Problem: Problem{"sphere 44 mm, boiling water, ice water", model.Product{Name: "sphere", Shape: model.Sphere, Size: model.Size{DiameterM: 0.044},
				Food: material(model.Properties{KWmK: 0.5, RhoKgM3: 1040, CJkgK: 3700}), StartC: 20},
				[]model.Step{step("boil", 900, exposure(1200, 100)), step("ice water", 900, exposure(600, 0.5))}}},
		{ID: "F1", AllowK: 0.02, EdgeK: 0.02, Points: spheroidPoints(0.06, 0.04),
			Problem: Problem{"long spheroid 120 × 80 mm, cook, rest, chill", spheroid(0.06, 0.04, 5, p), chain}},
		{ID: "F2", AllowK: 0.02, EdgeK: 0.02, Points: spheroidPoints(0.03, 0.05),
			Problem: Problem{"flat spheroid 60 × 100 mm, cook, rest, chill", spheroid(0.03, 0.05, 5, p), chain}},
		{ID: "G", AllowK: 0.02, EdgeK: 0.02, Points: up("centre", 0, up("filling_at_joint", 0.02, up("pastry_at_joint", 0.020000001, up("pastry_mid", 0.023, up("surface", 0.026, nil))))),
			Problem: Problem{"filling of 40 mm in pastry of 6 mm, cook, rest, chill", layered(5, crust(0.006, 0.002, model.Properties{KWmK: 0.25, RhoKgM3: 600, CJkgK: 2200}, 0.04, model.Properties{KWmK: 0.5, RhoKgM3: 1050, CJkgK: 3600})...), chain}},
		{ID: "H", AllowK: 0.02, EdgeK: 0.02, Points: up("centre", 0, up("quarter", 0.0125, up("surface", 0.025, nil))),
			Problem: Problem{"slab 50 mm that freezes", model.Product{Name: "slab", Shape: model.Slab, Size: model.Size{ThicknessM: 0.05}, Food: iceOf(ice{1050, 3500, 1900, 0.68 * 333500, -1.1, 0.48, 1.55}), StartC: 20},
				[]model.Step{frozenAt(10800, exposure(40, -30))}}},
		{ID: "J", AllowK: 0.005, EdgeK: 0.005, Points: up("centre", 0, up("quarter", 0.015, up("surface", 0.03, nil))),
			Problem: Problem{"slab 60 mm, chiller that settles", slab(0.06, 70), []model.Step{settling()}}},
		{ID: "K", AllowK: 0.02, EdgeK: 0.03, FromLow: true, Points: trayPoints(),
			Problem: Problem{"brick 300 × 180 × 90 mm on a tray", model.Product{Name: "brick", Shape: model.Brick, Size: model.Size{LengthM: 0.3, WidthM: 0.18, ThicknessM: 0.09}, Food: material(p), StartC: 5}, []model.Step{
				traySteps("tray oven", 3600, [3]model.Exposure{exposure(35, 160), exposure(20, 160), exposure(120, 150)}),
				traySteps("rest", 900, [3]model.Exposure{exposure(8, 22), exposure(6, 22), exposure(15, 22)}),
				traySteps("chill", 14400, [3]model.Exposure{exposure(35, 2), exposure(20, 2), exposure(40, 2)})}}},
	}
}

// changing is a food of which conductivity and specific heat rise with the temperature in straight lines.
func changing() *model.Material {
	return &model.Material{Name: "test input", Source: "input of the case", Table: true, Waterless: true, LowC: -50, HighC: 200, Props: func(c float64) model.Properties {
		return model.Properties{KWmK: 0.46 + 0.0014*c, RhoKgM3: 1000, CJkgK: 3700 + 1.5*c}
	}}
}

// spheroid is a spheroid with half axes a along its axis and b across, m.
func spheroid(a, b, startC float64, p model.Properties) model.Product {
	return model.Product{Name: "spheroid", Shape: model.Spheroid, Size: model.Size{ThicknessM: 2 * a, DiameterM: 2 * b}, Food: material(p), StartC: startC}
}

func spheroidPoints(a, b float64) map[string]model.Place {
	return map[string]model.Place{"centre": {}, "pole": {UpM: a}, "equator": {AcrossM: b}, "half_pole": {UpM: a / 2}, "half_equator": {AcrossM: b / 2}}
}

// layered is a slab of layers.
func layered(startC float64, layers ...model.Layer) model.Product {
	p := model.Product{Name: "layered slab", Shape: model.LayeredSlab, Layers: layers, StartC: startC}
	for _, l := range layers {
		p.Size.ThicknessM += l.ThicknessM
	}
	return p
}

// crust is a core between two crusts, each with a contact resistance, m²·K/W, to the core; thicknesses in m.
func crust(crustM, contactM2KW float64, ofCrust model.Properties, coreM float64, ofCore model.Properties) []model.Layer {
	outside := material(ofCrust)
	return []model.Layer{{Food: outside, ThicknessM: crustM, BelowM2KW: contactM2KW}, {Food: material(ofCore), ThicknessM: coreM, BelowM2KW: contactM2KW}, {Food: outside, ThicknessM: crustM}}
}

// settling is a chiller at 2 + 10·exp(-t/1200 s) °C for 6 h, film 18 W/(m²·K), as straight lines: within 0.0001 K of the law, which bends
// less as it settles, by d²/8·10/1200²·exp(-t/1200) over a line of d seconds.
func settling() model.Step {
	e := exposure(18, 0)
	e.Medium = model.Course{}
	add := func(t float64) {
		e.Medium.TimesS, e.Medium.C = append(e.Medium.TimesS, t), append(e.Medium.C, 2+10*math.Exp(-t/1200))
	}
	for t := 0.0; t < 21600; t += math.Floor(10 * math.Exp(t/2400)) {
		add(t)
	}
	add(21600)
	return step("chill", 21600, e)
}

// traySteps gives the brick its top, its four sides and its underside, in this order.
func traySteps(name string, durationS float64, e [3]model.Exposure) model.Step {
	return step(name, durationS, e[0], model.FaceExposure{Face: model.Sides, Exposure: e[1]}, model.FaceExposure{Face: model.Ends, Exposure: e[1]},
		model.FaceExposure{Face: model.Underside, Exposure: e[2]})
}

func trayPoints() map[string]model.Place {
	const u, a, l = 0.045, 0.09, 0.15
	return map[string]model.Place{"bottom_centre": {UpM: -u}, "axis_quarter": {UpM: -u / 2}, "axis_mid": {}, "axis_three_quarter": {UpM: u / 2}, "top_centre": {UpM: u},
		"bottom_corner": {UpM: -u, AcrossM: a, AlongM: l}, "top_corner": {UpM: u, AcrossM: a, AlongM: l}, "half": {AcrossM: a / 2, AlongM: l / 2}}
}

// referenceCases picks a few instants of every reference problem; the tests hold all of them.
func referenceCases() []Case {
	by := map[string]ReferenceProblem{}
	for _, r := range References() {
		by[r.ID] = r
	}
	point := func(id, point string, t, want float64) Case {
		r := by[id]
		return Case{id + ", " + r.Name + ": " + strings.ReplaceAll(point, "_", " ") + " after " + duration(t), Reference, twoMethods, "°C", want, r.AllowK, r.at(r.Points[point], t), r.Problem}
	}
	sampled := func(id, what string, t, want float64, of func(*model.Samples, int) float64) Case {
		r := by[id]
		return Case{id + ", " + r.Name + ": " + what + " after " + duration(t), Reference, twoMethods, "°C", want, r.EdgeK, r.sample(t, of), r.Problem}
	}
	place := func(id, what string, t, wantMM float64, of func(*model.Samples, int) float64) Case {
		r := by[id]
		return Case{id + ", " + r.Name + ": height of the " + what + " above the middle after " + duration(t), Reference, twoMethods, "mm", wantMM, 1, r.sample(t, of), r.Problem}
	}
	return []Case{
		point("A", "surface", 600, 60.70556),
		point("A", "centre", 18900, 3.97004),
		point("B1", "bottom", 6300, 45.99839),
		sampled("B2", "coldest place", 1200, 20.40251, coldest),
		place("B2", "coldest place", 600, 16.99-20, coldestUp),
		place("B2", "coldest place", 3600, 12.69-20, coldestUp),
		point("C", "edge", 600, 98.66216),
		point("C", "centre", 6300, 72.79845),
		sampled("C", "hottest place", 5100, 84.63564, hottest),
		point("D", "corner", 600, 114.66806),
		point("D", "centre", 6300, 45.38995),
		sampled("D", "mean", 4500, 69.03867, mean),
		point("E", "surface", 60, 94.62478),
		point("E", "centre", 1080, 87.71003),
		point("F1", "pole", 600, 74.47924),
		point("F1", "centre", 6300, 82.41315),
		sampled("F1", "hottest place", 5100, 98.90158, hottest),
		point("F2", "equator", 600, 74.583),
		point("F2", "centre", 3600, 88.09131),
		sampled("F2", "mean", 1800, 78.68907, mean),
		point("G", "pastry_at_joint", 600, 40.50406),
		point("G", "centre", 3600, 63.44954),
		sampled("G", "mean", 6300, 48.24528, mean),
		point("H", "surface", 600, -2.0067),
		point("H", "centre", 7200, -1.32747),
		sampled("H", "mean", 3600, -2.00172, mean),
		sampled("J", "mean", 7200, 32.41275, mean),
		sampled("K", "coldest place", 600, 5.02081, coldest),
		sampled("K", "hottest place", 6300, 73.13478, hottest),
		place("K", "coldest place", 3600, 47.91-45, coldestUp),
	}
}
