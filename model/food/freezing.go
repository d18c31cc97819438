package food

import "slowpoint/model"

// FreezingMethod says how the behaviour below the freezing point follows from composition.
const FreezingMethod = "below the freezing point: ice by Miles (1974), bound water 0.4 of the protein by Schwartzberg (1976), heat content from the components and 333.6 kJ/kg for melting, conductivity by the rule of Levy (1981) with the ice as one phase"

const (
	// melting is the latent heat of ice at 0 °C, J/kg, as in ASHRAE Handbook – Refrigeration (2006), chapter 9. At t it is what keeps the heat
	// content a function of the state: melting plus the integral of the specific heats' difference, water less ice, from 0 to t.
	melting = 333.6e3
	// boundToProtein is the water that protein holds and that never freezes, kg a kg: Schwartzberg, "Effective heat capacities for the freezing
	// and thawing of food", J. Food Science 41 (1976).
	boundToProtein = 0.4
)

// freezing is a food with a known freezing point.
//
// Ice: a share of the mass, freezable (1 − point/t) below the point, the rule of Miles (1974). Heat content: that of the components, liquid
// water and ice at the same temperature, each integrated from its specific heat, 0 at 0 °C unfrozen. As the amount of ice and both heats of
// water are closed forms, so is the heat content, and the apparent specific heat is its exact slope, latent heat included.
type freezing struct {
	mix
	pointC    float64 // initial freezing point, °C, below 0
	freezable float64 // water that is not bound, kg a kg of food, above 0
	rho       float64 // density at the freezing point, kg/m³: the mass of a piece stays as it freezes, and its swelling is left out
}

// freezing is false for a food whose water is all bound, or that has none: what sets in it is no ice.
func (m *mix) freezing(pointC float64) (*freezing, bool) {
	free := m.x[0] - boundToProtein*m.x[1]
	return &freezing{mix: *m, pointC: pointC, freezable: free, rho: m.density(pointC)}, free > 0
}

// ice is the mass of ice in a kg of food at t °C.
func (z *freezing) ice(t float64) float64 {
	if t >= z.pointC {
		return 0
	}
	return z.freezable * (1 - z.pointC/t)
}

// enthalpy is the heat content of a kg at t °C, J/kg; 0 at 0 °C.
func (z *freezing) enthalpy(t float64) float64 {
	h := 0.0
	for i, c := range components[1:] {
		h += z.x[i+1] * integral(c.c, t)
	}
	if t >= z.pointC {
		return h + z.x[0]*integral(water.c, t)
	}
	return h + z.x[0]*z.liquid(t) - z.ice(t)*z.latent(t)
}

// liquid is the heat content of liquid water below the freezing point, J/kg, and latent what it gives off when it freezes there.
func (z *freezing) liquid(t float64) float64 {
	return integral(water.c, z.pointC) + integral(coldWater, t) - integral(coldWater, z.pointC)
}
func (z *freezing) latent(t float64) float64 { return z.liquid(t) + melting - integral(ice.c, t) }

// properties at t °C; from the freezing point upwards those of the food without ice.
func (z *freezing) properties(t float64) model.Properties {
	if t >= z.pointC {
		return z.mix.properties(t)
	}
	return model.Properties{KWmK: z.withAir(z.frozen(t)), RhoKgM3: z.rho, CJkgK: z.apparent(t)}
}

// apparent is the slope of enthalpy below the freezing point, J/(kg·K).
func (z *freezing) apparent(t float64) float64 {
	frozen := z.ice(t)
	c := (z.x[0]-frozen)*at(coldWater, t) + frozen*at(ice.c, t)
	for i, q := range components[1:] {
		c += z.x[i+1] * at(q.c, t)
	}
	return c - z.latent(t)*z.freezable*z.pointC/(t*t)
}

// frozen is the conductivity without air below the freezing point, W/(m·K): ice as one phase and everything else, mixed by the rule for
// unfrozen food, as the other, joined by the rule of Levy.
func (z *freezing) frozen(t float64) float64 {
	rest := mix{x: z.x}
	frozen := z.ice(t)
	rest.x[0] -= frozen
	solid := frozen / at(ice.density, t)
	share := solid / (solid + rest.specificVolume(t))
	return levy(phase{at(ice.k, t), share}, phase{rest.withoutAir(t), 1 - share})
}
