package model

import "math"

// The numbers of moist air that the surfaces need. Everywhere: °C, Pa, kg of water a kg of dry air.

const (
	lewis       = 0.87   // Lewis number of water vapour in air, thermal by mass diffusivity (from memory)
	vapourRatio = 0.622  // molar mass of water by that of dry air (any textbook)
	dryAirCp    = 1006.0 // J/(kg·K), dry air from -40 to 100 °C within 1 % (any textbook)
)

// moistCp is the specific heat of moist air by the kg of dry air in it, J/(kg·K): that of vapour is 1860 J/(kg·K) (any textbook).
func moistCp(ratio float64) float64 { return dryAirCp + 1860*ratio }

// lewisFactor is Le^(2/3), by which heat transfer runs ahead of mass transfer (Chilton & Colburn 1934).
var lewisFactor = math.Pow(lewis, 2.0/3)

// Triple point and critical point of water (Wagner & Pruss 1993).
const (
	tripleC   = 0.01
	criticalK = 647.096
	criticalP = 22.064e6
)

// satPa is the saturation pressure of water: from 0.01 to 373.9 °C the equation of Wagner & Pruss 1993 (J. Phys. Chem. Ref. Data
// 22:783-787, adopted by IAPWS; coefficients from memory, held by published table points in the tests). Below, over supercooled water,
// Magnus' formula with the coefficients of Alduchov & Eskridge 1996 (J. Appl. Meteorology 35:601-609; from memory), scaled by 1.0004
// so that the two meet. Above the critical point its pressure is kept.
func satPa(tC float64) float64 {
	if tC < tripleC {
		return supercooledScale * magnusPa(tC)
	}
	return wagnerPa(tC)
}

var supercooledScale = wagnerPa(tripleC) / magnusPa(tripleC)

func magnusPa(tC float64) float64 {
	tC = max(tC, -200)
	return 610.94 * math.Exp(17.625*tC/(tC+243.04))
}

func wagnerPa(tC float64) float64 {
	t := tC + 273.15
	if t >= criticalK {
		return criticalP
	}
	x := 1 - t/criticalK
	r, x3 := math.Sqrt(x), x*x*x
	return criticalP * math.Exp(criticalK/t*(x*(-7.85951783+1.84408259*r)+x3*(-11.7866497+22.6807411*r-15.9618719*x+1.80122502*x3*x*r)))
}

// satC is the temperature at which the saturation pressure of water is pa: the boiling point and the dew point, °C.
func satC(pa float64) float64 {
	if pa >= criticalP {
		return criticalK - 273.15
	}
	t := 100.0
	for range 60 { // Newton in ln p by 1/T, where the curve is nearly straight
		const d = 1e-3
		l, slope := math.Log(satPa(t)/pa), math.Log(satPa(t+d)/satPa(t-d))/(2*d)
		k := t + 273.15
		next := 1/(1/k+l/(slope*k*k)) - 273.15
		next = min(max(next, -150), criticalK-273.2)
		if math.Abs(next-t) < 1e-11 {
			return next
		}
		t = next
	}
	return t
}

// boilingC is the temperature in °C at which water boils at a height in m, in the standard atmosphere.
func boilingC(altitudeM float64) float64 { return satC(pressurePa(altitudeM)) }

// latentJkg is the heat that evaporates a kg of water, J/kg: a straight line within 0.3 % of the steam tables from 0 to 100 °C
// (from memory).
func latentJkg(tC float64) float64 { return max(2.501e6-2361*tC, 0) }

// nearlyAll is the share of vapour from which humidityRatio goes on in a straight line.
const nearlyAll = 0.95

// humidityRatio is the mass of vapour by that of dry air, at a vapour pressure and the total pressure. Where all is vapour it would be
// without end; from nearlyAll of it on, it goes on with the slope that it has there, so that it stays finite and rising.
func humidityRatio(vapourPa, totalPa float64) float64 {
	x := vapourPa / totalPa
	if x <= nearlyAll {
		return vapourRatio * x / (1 - x)
	}
	const rest = 1 - nearlyAll
	return vapourRatio * (nearlyAll/rest + (x-nearlyAll)/(rest*rest))
}

// vapourPa is the vapour pressure of air: its relative humidity in % is a share of saturation at its own temperature, and there is never
// more vapour than the total pressure.
func vapourPa(tC, rh, totalPa float64) float64 { return min(rh/100*satPa(tC), totalPa) }

// dewC is the temperature below which vapour of a pressure condenses, °C.
func dewC(vapourPa float64) float64 {
	if vapourPa <= 0 {
		return -150
	}
	return satC(vapourPa)
}

// moistAir is air with vapour in it.
type moistAir struct{ tC, vapourPa, totalPa float64 }

// wetBulbC is the temperature that a wet surface of a water activity takes by convection and evaporation alone, with nothing conducted, °C:
// cp Le^(2/3) (air - wet), cp of the moist air, = latent heat × (humidity ratio at the surface - that of the air).
func (m moistAir) wetBulbC(activity float64) float64 {
	w := humidityRatio(m.vapourPa, m.totalPa)
	lo, hi := -100.0, min(max(m.tC, dewC(m.vapourPa))+1, satC(m.totalPa/activity)) // it does not get hotter than its water boils
	for range 60 {
		t := (lo + hi) / 2
		if moistCp(w)*lewisFactor*(m.tC-t) > latentJkg(t)*(humidityRatio(activity*satPa(t), m.totalPa)-w) {
			lo = t
		} else {
			hi = t
		}
	}
	return (lo + hi) / 2
}
