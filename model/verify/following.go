package verify

import (
	"fmt"
	"math"

	"slowpoint/model"
)

// followingFood is a food with k = k0 (1 + 0.01 T) and ρc = ρc0 (1 + 0.01 T), T in °C, of the diffusivity of the other cases.
func followingFood() *model.Material {
	return &model.Material{Name: "test input", Source: "input of the case", Table: true, LowC: 0, HighC: 110, Waterless: true, Props: func(c float64) model.Properties {
		p := tested
		p.KWmK *= 1 + 0.01*c
		p.CJkgK *= 1 + 0.01*c
		return p
	}}
}

// heldHot keeps the faces of a slab of that food at 90 °C from 10 °C, up to the Fourier number fo.
func heldHot(fo float64) (p Problem, endS float64) {
	const half = 0.03
	endS = fo * half * half / alpha
	b := body(model.Slab, half, 10)
	b.Food = followingFood()
	return Problem{"slab held at 90 °C", b, []model.Step{step("heat", endS, exposure(held, 90))}}, endS
}

// between keeps the faces of a slab of that food at 0 and 100 °C for so long that nothing changes any more.
func between() Problem {
	b := body(model.Slab, 0.03, 20)
	b.Food = followingFood()
	return Problem{"slab between faces of 0 and 100 °C", b,
		[]model.Step{step("long", 20*3600, exposure(held, 100), model.FaceExposure{Face: model.Underside, Exposure: exposure(held, 0)})}}
}

func followingCases() []Case {
	const source = "exact: the Kirchhoff integral obeys the linear equation (Carslaw & Jaeger, Conduction of Heat in Solids, 1959, section 2.16)"
	var list []Case
	for _, c := range []struct{ fo, want float64 }{{0.1, 15.397882544}, {0.2, 32.531209288}, {0.5, 64.928292554}, {1, 83.053410057}} {
		p, end := heldHot(c.fo)
		list = append(list, Case{fmt.Sprintf("%s, Fo %g: centre", p.Name, c.fo), Following, source, "°C", c.want, 0.02, p.at(model.Place{}, end), p})
	}
	p := between()
	return append(list, Case{p.Name + ": middle", Following, source, "°C", 58.1138830084, 0.02, p.at(model.Place{}, 20*3600), p})
}

// The benchmarks of NAFEMS are of metal: what is tested is the program, not a food.
const nafems = "NAFEMS, The Standard NAFEMS Benchmarks, TNSB rev. 3 (1990), "

// alternating is test T3: a bar of 0.1 m from 0 °C, one end kept at 0 °C, the other at 100 sin(πt/40 s) °C, as straight lines of 0.1 s: within 0.001 K
// of the sine.
func alternating() Problem {
	b := body(model.Slab, 0.05, 0)
	b.Food = material(model.Properties{KWmK: 35, RhoKgM3: 7200, CJkgK: 440.5})
	end := exposure(held, 0)
	end.Medium = model.Course{}
	for i := range 321 {
		t := float64(i) / 10
		end.Medium.TimesS, end.Medium.C = append(end.Medium.TimesS, t), append(end.Medium.C, 100*math.Sin(math.Pi*t/40))
	}
	return Problem{"bar with an end that warms and cools", b, []model.Step{step("alternate", 32, end, model.FaceExposure{Face: model.Underside, Exposure: exposure(held, 0)})}}
}

// corner is test T4: a plate of 0.6 m by 1 m, its lower edge kept at 100 °C, its left edge insulated, the others with a film of 750 W/(m²·K) to
// 0 °C. It is one half of a bar of 1.2 m by 1 m, whose middle is what the insulated edge is. Steady, so that ρc does not matter.
func corner() Problem {
	b := model.Product{Name: "bar", Shape: model.Bar, Size: model.Size{ThicknessM: 1, WidthM: 1.2}, Food: material(model.Properties{KWmK: 52, RhoKgM3: 1000, CJkgK: 100}), StartC: 20}
	return Problem{"bar on a plate kept at 100 °C", b, []model.Step{step("long", 10*3600, exposure(750, 0), model.FaceExposure{Face: model.Underside, Exposure: exposure(held, 100)})}}
}

// radiating is test T2: a bar of 0.1 m, one end kept at 1000 K, the other radiates with emissivity 0.98 to 300 K. The program wants air
// around what radiates: its film is next to nothing.
func radiating() Problem {
	b := body(model.Slab, 0.05, 300-273.15)
	b.Food = material(model.Properties{KWmK: 55.6, RhoKgM3: 7850, CJkgK: 460})
	none, emissivity, around, dry := 1e-9, 0.98, 300-273.15, false
	free := model.Exposure{Surface: model.StillAir, Medium: constant(around), FilmW: &none, RadiatingC: &around, Emissivity: &emissivity, Wet: &dry}
	return Problem{"bar that radiates", b, []model.Step{step("long", 2*3600, free, model.FaceExposure{Face: model.Underside, Exposure: exposure(held, 1000-273.15)})}}
}

func benchmarkCases() []Case {
	t2, t3, t4 := radiating(), alternating(), corner()
	return []Case{
		{t2.Name + " to 300 K from an end kept at 1000 K: free end", Benchmarks, nafems + "test T2: 927 K printed (653.85 °C); exact root with 5.67e-8 W/(m²·K⁴) 653.8576 °C", "°C", 653.8576, 0.1, t2.at(model.Place{UpM: 0.05}, 2*3600), t2},
		{t3.Name + ", 80 mm from the other, after 32 s", Benchmarks, nafems + "test T3: 36.60 °C printed; exact series 36.603116", "°C", 36.603116, 0.1, t3.at(model.Place{UpM: 0.03}, 32), t3},
		{t4.Name + ", side at 0.2 m above it", Benchmarks, nafems + "test T4: 18.3 °C printed; exact series 18.253757", "°C", 18.253757, 0.1, t4.at(model.Place{UpM: -0.3, AcrossM: 0.6}, 10*3600), t4},
	}
}
