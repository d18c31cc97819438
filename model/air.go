package model

import "math"

// air holds the properties of dry air at one temperature and pressure.
type air struct {
	rho  float64 // kg/m³
	mu   float64 // Pa·s
	k    float64 // W/(m·K)
	cp   float64 // J/(kg·K)
	beta float64 // 1/K
}

func (a air) nu() float64 { return a.mu / a.rho }
func (a air) pr() float64 { return a.mu * a.cp / a.k }

// pressurePa is the pressure of the standard atmosphere at a height in m, up to 11 km
// (ICAO standard atmosphere, Doc 7488; constants from memory).
func pressurePa(altitudeM float64) float64 {
	return 101325 * math.Pow(1-2.25577e-5*altitudeM, 5.25588)
}

// Range of the properties of air, °C.
const airLowC, airHighC = -40, 250

// airAt gives dry air at tC °C and a height above the sea.
func airAt(tC, altitudeM float64) air { return airOf(tC, pressurePa(altitudeM)) }

// airOf gives dry air at tC °C and a pressure. Viscosity and conductivity by Sutherland's law with the constants of
// White, Viscous Fluid Flow, tables 1-2 and 1-3 (from memory): within 2 % between -40 and 250 °C. Density: ideal gas, 287.05 J/(kg·K).
func airOf(tC, pa float64) air {
	t := tC + 273.15
	x := t / 273.15
	x *= math.Sqrt(x)
	return air{rho: pa / (287.05 * t), mu: 1.716e-5 * x * (273.15 + 110.4) / (t + 110.4), k: 0.0241 * x * (273.15 + 194) / (t + 194), cp: 1006, beta: 1 / t}
}

// correlation is a published formula for the Nusselt number, and where it holds.
type correlation struct {
	name    string
	formula string                      // its authors and year, where it may be taken for another fluid
	nusselt func(x, pr float64) float64 // x: the Rayleigh number of free convection, the Reynolds number of forced
	least   func(pr float64) float64    // smallest x; nil: its low end is that of a surface in air at rest
	most    float64                     // largest x: beyond, the value there is kept
	held    string                      // what that means, in words
	// perK and by are nusselt of free convection in two parts: two numbers of the air at a Rayleigh number by the K, and the rest, by the
	// difference in K.
	perK func(ra, pr float64) (b, d float64)
	by   func(b, d, differenceK float64) float64
}

// The correlations. Their formulas stand below, with their sources.
var (
	freeCylinder = correlation{formula: "Churchill & Chu 1975", name: "Churchill & Chu 1975 (horizontal cylinder in still air, Rayleigh number up to 1e12)", nusselt: churchillChu, perK: churchillChuPerK, by: churchillChuBy, most: 1e12}
	freeSphere   = correlation{formula: "Churchill 1983", name: "Churchill 1983 (sphere in still air, Rayleigh number up to 1e13)", nusselt: sphereFree, perK: sphereFreePerK, by: sphereFreeBy, most: 1e13}
	freeLayered  = correlation{name: "McAdams 1954 (horizontal plate, cold face up or warm face down in still air, Rayleigh number up to 1e10)", nusselt: plateLayered, most: 1e10}

	forcedCylinder = correlation{name: "Churchill & Bernstein 1977 (cylinder in cross flow, Reynolds × Prandtl number from 0.2, Reynolds number up to 1e7)", nusselt: churchillBernstein,
		least: func(pr float64) float64 { return 0.2 / pr }, most: 1e7, held: "whose value there is kept, which is low"}
	forcedSphere = correlation{name: "Melissari & Argyropoulos 2005 (sphere, Reynolds number 100 to 50000)", nusselt: sphereForced,
		least: func(float64) float64 { return 100 }, most: 5e4, held: "whose value there is kept, which is low"}
	forcedPlate = correlation{name: "flat plate along the stream (Incropera & DeWitt, laminar formula, a lower bound from Reynolds number 5e5 on)", nusselt: plateForced,
		least: func(float64) float64 { return 0 }, most: math.Inf(1)}
)

// churchillBernstein is the Nusselt number of a cylinder in cross flow, on its diameter, for Re·Pr > 0.2
// (Churchill & Bernstein 1977, J. Heat Transfer 99:300-306); a lower bound of the data for Re·Pr > 0.4.
func churchillBernstein(re, pr float64) float64 {
	c := math.Cbrt(0.4 / pr)
	return 0.3 + 0.62*math.Sqrt(re)*math.Cbrt(pr)/math.Sqrt(math.Sqrt(1+c*c))*math.Pow(1+math.Pow(re/282000, 5.0/8), 4.0/5)
}

// sphereForced is the Nusselt number of a sphere in a stream, on its diameter, 100 ≤ Re ≤ 50000, 0.003 ≤ Pr ≤ 10
// (Melissari & Argyropoulos 2005, Int. J. Heat Mass Transfer; year and journal from memory).
func sphereForced(re, pr float64) float64 {
	return 2 + 0.47*math.Sqrt(re)*math.Pow(pr, 0.36)
}

// plateForced is the mean Nusselt number of a flat plate along a stream, on its length, with the laminar formula throughout
// (Incropera & DeWitt, Fundamentals of Heat and Mass Transfer): from Re 5e5 on, where the stream turns turbulent, it is a lower bound.
// Blunt edges of real food lie 20 to 60 % higher.
func plateForced(re, pr float64) float64 { return 0.664 * math.Sqrt(re) * math.Cbrt(pr) }

// churchillChu is the Nusselt number of a horizontal cylinder in still fluid, on its diameter, 1e-5 < Ra < 1e12
// (Churchill & Chu 1975, Int. J. Heat Mass Transfer 18:1049-1053).
func churchillChu(ra, pr float64) float64 {
	b, d := churchillChuPerK(ra, pr)
	return churchillChuBy(b, d, 1)
}

func churchillChuPerK(ra, pr float64) (b, _ float64) {
	return 0.387 * math.Cbrt(math.Sqrt(ra)) / math.Pow(1+math.Pow(0.559/pr, 9.0/16), 8.0/27), 0
}

func churchillChuBy(b, _, differenceK float64) float64 {
	x := 0.60 + b*math.Cbrt(math.Sqrt(differenceK))
	return x * x
}

// plateLayered is the Nusselt number of a horizontal plate on which air lies in layers: its cold face up or its warm face down, on area by
// edge, 1e5 < Ra < 1e10 (McAdams, Heat Transmission, 1954; in Incropera & DeWitt). Below the lower end the film is low.
func plateLayered(ra, _ float64) float64 { return 0.27 * math.Sqrt(math.Sqrt(ra)) }

// sphereFree is the Nusselt number of a sphere in still fluid, on its diameter, Ra < 1e13
// (Churchill 1983, Heat Exchanger Design Handbook, section 2.5.7; section from memory).
func sphereFree(ra, pr float64) float64 {
	b, d := sphereFreePerK(ra, pr)
	return sphereFreeBy(b, d, 1)
}

func sphereFreePerK(ra, pr float64) (b, d float64) {
	p := 1 + math.Pow(0.469/pr, 9.0/16)
	return 0.589 * math.Sqrt(math.Sqrt(ra)) / math.Pow(p, 4.0/9), 7.44e-8 * ra / math.Pow(p, 16.0/9)
}

func sphereFreeBy(b, d, differenceK float64) float64 {
	return 2 + b*math.Sqrt(math.Sqrt(differenceK))*math.Sqrt(math.Sqrt(math.Cbrt(1+d*differenceK)))
}
