package food

import (
	"math"

	"slowpoint/model"
)

// component is one constituent of food; each property is a0 + a1·t + a2·t² with t in °C, for −40 to 150 °C.
type component struct {
	name    string
	density [3]float64 // kg/m³
	k       [3]float64 // conductivity, W/(m·K)
	c       [3]float64 // specific heat, J/(kg·K)
}

// The polynomials of Choi & Okos, "Effects of temperature and composition on the thermal properties of foods" (1986), as tabulated in
// ASHRAE Handbook – Refrigeration (2006), chapter 9, Tables 1 and 2. Two things differ between copies:
//   - water's specific heat: copies have 4176.2 and 4128.9. Water is 4.18 kJ/(kg·K) at 20 °C in any steam table (from memory), and the
//     specific heats that ASHRAE printed follow from 4176.2 only; 4128.9 would make food respond 1 % too fast.
//   - fat's conductivity slope: −2.7604e-4. A copy with e-3 would give 0.014 W/(m·K) at 60 °C.
//
// Water is the liquid. Below the freezing point the part of it that is not ice has the specific heat of coldWater, a separate fit that
// joins the other at 0 °C with a step of 2.3 %; ice is given for −40 to 0 °C. Copies of ice have a conductivity slope ten times too large
// and the specific heat's slope with the wrong sign.
var (
	water        = component{"water", [3]float64{997.18, 3.1439e-3, -3.7574e-3}, [3]float64{0.57109, 1.7625e-3, -6.7036e-6}, [3]float64{4176.2, -9.0864e-2, 5.4731e-3}}
	protein      = component{"protein", [3]float64{1329.9, -0.5184, 0}, [3]float64{0.17881, 1.1958e-3, -2.7178e-6}, [3]float64{2008.2, 1.2089, -1.3129e-3}}
	fat          = component{"fat", [3]float64{925.59, -0.41757, 0}, [3]float64{0.18071, -2.7604e-4, -1.7749e-7}, [3]float64{1984.2, 1.4733, -4.8008e-3}}
	carbohydrate = component{"carbohydrate", [3]float64{1599.1, -0.31046, 0}, [3]float64{0.20141, 1.3874e-3, -4.3312e-6}, [3]float64{1548.8, 1.9625, -5.9399e-3}}
	fibre        = component{"fibre", [3]float64{1311.5, -0.36589, 0}, [3]float64{0.18331, 1.2497e-3, -3.1683e-6}, [3]float64{1845.9, 1.8306, -4.6509e-3}}
	ash          = component{"ash", [3]float64{2423.8, -0.28063, 0}, [3]float64{0.32962, 1.4011e-3, -2.9069e-6}, [3]float64{1092.6, 1.8896, -3.6817e-3}}

	ice       = component{"ice", [3]float64{916.89, -0.13071, 0}, [3]float64{2.2196, -6.2489e-3, 1.0154e-4}, [3]float64{2062.3, 6.0769, 0}}
	coldWater = [3]float64{4081.7, -5.3062, 0.99516} // specific heat of water that is colder than the food's freezing point and still liquid, J/(kg·K)

	components = [6]*component{&water, &protein, &fat, &carbohydrate, &fibre, &ash} // in the order of mix
)

// airK is the conductivity of still air in the pores, W/(m·K): a rounded handbook figure. Moisture moving in hot pores raises it
// several times over, so the air of dough or crumb is not covered.
const airK = 0.025

// at is the polynomial at t °C.
func at(p [3]float64, t float64) float64 { return p[0] + t*(p[1]+t*p[2]) }

// integral is that of the polynomial from 0 to t °C.
func integral(p [3]float64, t float64) float64 { return t * (p[0] + t*(p[1]/2+t*p[2]/3)) }

// mix is a food as mass fractions of its components, which add up to 1, and its share of air by volume.
type mix struct {
	x      [6]float64
	air    float64
	joined bool // the air is in pores that join
}

// specificVolume is the volume of the components without air, m³/kg.
func (m *mix) specificVolume(t float64) float64 {
	v := 0.0
	for i, c := range components {
		v += m.x[i] / at(c.density, t)
	}
	return v
}

// density in kg/m³, the air weighing nothing.
func (m *mix) density(t float64) float64 { return (1 - m.air) / m.specificVolume(t) }

// specificHeat in J/(kg·K).
func (m *mix) specificHeat(t float64) float64 {
	c := 0.0
	for i, q := range components {
		c += m.x[i] * at(q.c, t)
	}
	return c
}

// properties of the food without ice.
func (m *mix) properties(t float64) model.Properties {
	return model.Properties{KWmK: m.conductivity(t), RhoKgM3: m.density(t), CJkgK: m.specificHeat(t)}
}

// conductivity in W/(m·K): that of the solid or liquid, then air.
func (m *mix) conductivity(t float64) float64 { return m.withAir(m.withoutAir(t)) }

// withAir is the conductivity with air, the food between the pores having k W/(m·K): closed pores by the rule of Maxwell and Eucken with
// the food continuous, pores that join by that of an effective medium.
func (m *mix) withAir(k float64) float64 {
	if m.joined {
		return medium(phase{k, 1 - m.air}, phase{airK, m.air})
	}
	return maxwell(phase{k, 1 - m.air}, phase{airK, m.air})
}

// withoutAir is the conductivity of what is no air, W/(m·K): water as one phase and the other components, mixed in parallel, as the
// other, joined by the rule of Levy.
func (m *mix) withoutAir(t float64) float64 {
	total := m.specificVolume(t)
	v1 := m.x[0] / at(water.density, t) / total
	k := at(water.k, t)
	if v1 < 1 {
		k2 := 0.0
		for i, c := range components[1:] {
			k2 += m.x[i+1] / at(c.density, t) / total * at(c.k, t)
		}
		k = levy(phase{k, v1}, phase{k2 / (1 - v1), 1 - v1})
	}
	return k
}

// phase is one of two materials that are mixed: conductivity in W/(m·K), share of the volume.
type phase struct{ k, share float64 }

// levy is the conductivity of two phases that are alike in standing, W/(m·K): Levy, "A modified Maxwell-Eucken equation for calculating
// the thermal conductivity of two-component solutions or mixtures", Int. J. Refrigeration 4 (1981). The form is from memory; the tests hold
// it to its limits, its symmetry and the two Maxwell-Eucken bounds.
func levy(a, b phase) float64 {
	l := a.k / b.k
	if l == 1 {
		return a.k
	}
	s := (l - 1) * (l - 1) / ((l+1)*(l+1) + l/2)
	q := 2/s - 1 + 2*a.share
	f := (q - math.Sqrt(q*q-8*a.share/s)) / 2
	return b.k * ((2 + l) + 2*(l-1)*f) / ((2 + l) - (l-1)*f)
}

// maxwell is the rule of Maxwell and Eucken: phase d spread as separate inclusions in the continuous phase c, W/(m·K).
func maxwell(c, d phase) float64 {
	return c.k * (2*c.k + d.k - 2*d.share*(c.k-d.k)) / (2*c.k + d.k + d.share*(c.k-d.k))
}

// medium is the conductivity of two phases that both reach through the food, the root above 0 of
// a.share (a.k − k)/(a.k + 2k) + b.share (b.k − k)/(b.k + 2k) = 0, W/(m·K): Landauer, J. Applied Physics 23 (1952), from memory.
func medium(a, b phase) float64 {
	p := (3*a.share-1)*a.k + (3*b.share-1)*b.k
	return (p + math.Sqrt(p*p+8*a.k*b.k)) / 4
}
