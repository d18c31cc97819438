package verify

import (
	"fmt"
	"math"

	"slowpoint/model"
)

const ritz = "Rayleigh-Ritz with polynomials of degree 16 on the mapped ball in 70-digit arithmetic, worked out apart from this program; with equal axes it gives the sphere to 13 digits"

// spheroidCase is a chill of a spheroid with radius a across and half axis ratio·a; Biot and Fourier number on a.
type spheroidCase struct {
	ratio, bi              float64
	zeta2                  float64 // slowest decay of ln θ by Fo
	centre02, centre04     float64 // θ at the centre at Fo 0.2 and 0.4
	mean01, mean02, mean04 float64
}

// problem chills the spheroid to the Fourier number fo.
func (c *spheroidCase) problem(fo float64) (p Problem, endS float64) {
	const a = 0.03
	endS = fo * a * a / alpha
	return Problem{fmt.Sprintf("spheroid 1:%g, %s", c.ratio, biot(c.bi)), spheroid(c.ratio*a, a, chillFromC, tested),
		[]model.Step{step("chill", endS, exposure(c.bi*tested.KWmK/a, chillToC))}}, endS
}

// decay asks for the slowest decay of the mean by Fourier number: so late that the faster ones are gone, and the mean is not yet.
func (c *spheroidCase) decay() func() (float64, error) {
	return func() (float64, error) {
		late := 1.8 * (1 + 2/c.bi)
		p, end := c.problem(late)
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		s := h.Sample(end / 12)
		return math.Log((s.Mean[10]-chillToC)/(s.Mean[12]-chillToC)) / (late / 6), nil
	}
}

func spheroidCases() []Case {
	var list []Case
	for _, c := range []spheroidCase{
		{1.3, 5, 5.82746110, 0.55259, 0.1761393, 0.47909524, 0.26251229, 0.08147833},
		{1.5, held, 7.99537649, 0.39885, 0.0822907, 0.27801789, 0.12153560, 0.02439292},
		{1.5, 1, 2.15953683, 0.82995, 0.5511930, 0.79333784, 0.63712365, 0.41300440},
		{2, 5, 5.04631214, 0.62820, 0.2434362, 0.51119212, 0.29836707, 0.10662660},
	} {
		p, _ := c.problem(0.4)
		at := func(fo float64) float64 { return fo * 0.03 * 0.03 / alpha }
		degrees := func(theta float64) float64 { return chillToC + (chillFromC-chillToC)*theta }
		list = append(list,
			Case{p.Name + ", Fo 0.4: centre", Spheroids, ritz, "°C", degrees(c.centre04), 0.005, p.at(model.Place{}, at(0.4)), p},
			Case{p.Name + ", Fo 0.1: mean", Spheroids, ritz, "°C", degrees(c.mean01), 0.005, p.sample(at(0.1), mean), p},
			Case{p.Name + ": slowest decay by Fo", Spheroids, ritz, "-", c.zeta2, 1e-4, c.decay(), p})
	}
	return list
}

const twoLayers = "exact series of the eigenfunctions of two layers, worked out apart from this program (first root 0.011111267246 s^-1/2, C1 = 1.08560863)"

// filled is a filling in a crust with an air gap, chilled for a time.
func filled(endS float64) Problem {
	return Problem{"filling of 40 mm in pastry of 5 mm, " + duration(endS),
		layered(chillFromC, crust(0.005, 0.004, model.Properties{KWmK: 0.25, RhoKgM3: 950, CJkgK: 2000}, 0.04, model.Properties{KWmK: 0.48, RhoKgM3: 1000, CJkgK: 3600})...),
		[]model.Step{step("chill", endS, exposure(15, chillToC))}}
}

// filledUp are the heights of the known places of the filled crust above the middle, m: those at the joint lie on either side of it.
var filledUp = map[string]float64{"centre": 0, "core face": 0.02, "shell inner face": 0.02 + 1e-9, "outer": 0.025}

// wall is a slab of three layers between hot and cold air for so long that nothing changes any more.
func wall() Problem {
	layer := func(k, thickM, belowM2KW float64) model.Layer {
		return model.Layer{Food: material(model.Properties{KWmK: k, RhoKgM3: 900, CJkgK: 2500}), ThicknessM: thickM, BelowM2KW: belowM2KW}
	}
	return Problem{"three layers between 80 and 5 °C", layered(20, layer(0.2, 0.004, 0.01), layer(0.5, 0.02, 0), layer(0.3, 0.006, 0)),
		[]model.Step{step("long", 20*3600, exposure(20, 80), model.FaceExposure{Face: model.Underside, Exposure: exposure(10, 5)})}}
}

func layerCases() []Case {
	var list []Case
	for _, c := range []struct {
		place    string
		t, theta float64
	}{
		{"centre", 600, 0.987121286},
		{"core face", 600, 0.847992196},
		{"shell inner face", 600, 0.815630263},
		{"outer", 1800, 0.532236916},
		{"shell inner face", 3600, 0.547842127},
		{"centre", 7200, 0.4462959},
	} {
		p := filled(c.t)
		list = append(list, Case{p.Name + ": " + c.place, Layers, twoLayers, "°C", chillToC + (chillFromC-chillToC)*c.theta, 1e-4, p.at(model.Place{UpM: filledUp[c.place]}, c.t), p})
	}
	// by hand: resistances 0.05, 0.02, 0.01, 0.04, 0, 0.02, 0.1 m²K/W, 0.24 in all; 75 K drive 312.5 W/m²
	p := wall()
	for _, c := range []struct {
		place   string
		up      float64
		celsius float64
	}{
		{"top", 0.015, 80 - 312.5*0.05},
		{"first layer at the joint", 0.011 + 1e-9, 80 - 312.5*0.07},
		{"second layer at the joint", 0.011, 80 - 312.5*0.08},
		{"joint without resistance", -0.009, 80 - 312.5*0.12},
		{"underside", -0.015, 80 - 312.5*0.14},
	} {
		list = append(list, Case{p.Name + ": " + c.place, Layers, "steady heat through resistances in a row, by hand", "°C", c.celsius, 1e-4, p.at(model.Place{UpM: c.up}, 20*3600), p})
	}
	return list
}
