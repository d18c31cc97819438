package model

import (
	"math"
	"slices"
)

// skin is how a face, or the whole surface, exchanges heat during one step. It is for one goroutine.
//
// Outermost stands what follows the temperature of the outer surface: convection by a correlation or a typed film, radiation, evaporation
// and condensation. Resistances (wrap, lid gap, the film inside a stirred vessel) lie in series beneath: the outer surface then takes the
// temperature at which as much heat arrives as passes them.
type skin struct {
	held      bool // the surface is kept at the medium: no flux is to be asked for
	insulated bool
	linear    bool    // the flux is totalW × (medium - surface): neither a correlation nor radiation nor moisture
	totalW    float64 // W/(m²·K), where linear
	seriesR   float64 // m²·K/W between the outer surface and the food, where not linear

	course, humidity cursor  // °C and %, from the start of the step
	moist            bool    // the humidity is stated, or one is taken for a wet surface
	totalPa          float64 // pressure of the air

	filmW     float64  // typed film, W/(m²·K); 0: by air
	air       *airFilm // nil where the film is typed or stated
	steamAir  bool     // steam with air in it
	radiates  float64  // emissivity; 0: no radiation counted
	wallsK4   float64  // radiating temperature, K to the fourth
	wet       bool     // evaporates as well as condenses
	condenses bool     // vapour condenses below the dew point, wet or dry
	slowHeats bool     // of two forms of the law of evaporation the one that leaves the food colder; else the hotter
	activity  float64  // of the water at a wet surface
	boilsC    float64  // temperature at which the water at a wet surface boils, °C
	given     bool     // the food's activity is known

	law   func(surfaceC, tauS float64) (w, slope float64) // stands for everything (tests)
	now   around                                          // of a medium that stays as it is; else of the last look, nowS s into the step
	nowS  float64
	table *fluxTable // of a medium that stays as it is; nil otherwise
	brief *fluxTable // of one that changes, at the last look: where many places are looked at; nil otherwise
	exp   *Exposure
	film  filmCase
}

// around is what surrounds a face at one instant.
type around struct {
	mediumC  float64
	ratio    float64 // humidity ratio of the air
	massWK   float64 // mass that evaporates by the film and the drive, K·kg/J: 1/(cp Le^(2/3))
	vapourPa float64
	dewC     float64 // steam with air only
	uchidaW  float64 // film of condensing steam with air, W/(m²·K), times what multiplies it
}

// usualEmissivity is taken where a radiating temperature stands without an emissivity: foods lie at 0.9 to 0.95 (from memory).
const usualEmissivity = 0.9

// stefan is the constant of Stefan and Boltzmann, W/(m²·K⁴) (CODATA).
const stefan = 5.670374419e-8

// Water activity of a wet surface where the food's is not known: pure water where a colder food is the safe side, and in chilling the low
// end of moist cooked food (common practice, no source).
const activityHeats, activityCools = 1, 0.95

// newSkin makes ready what the exposure e does to a food of water activity aw during a step. Of c it takes shape, size, foodC and face.
func newSkin(e *Exposure, c *filmCase, aw *float64, st *Step) *skin {
	s := &skin{exp: e, film: *c, slowHeats: st.Stage != nil && st.Stage.Heats}
	s.film.altitudeM = st.AltitudeM
	s.film.mediumC = e.Medium.meanC(st.DurationS)
	if e.AirMS != nil {
		s.film.airMS = *e.AirMS
	}
	s.course = cursor{x: e.Medium.TimesS, y: e.Medium.C}
	if e.Surface.law != nil {
		s.law = e.Surface.law
		s.tabulate()
		return s
	}
	if e.Surface.NoMedium {
		s.insulated, s.linear = true, true
		return s
	}
	if !e.reacts(st) {
		u := e.filmUsed(nil, &s.film)
		s.linear, s.totalW, s.held = true, u.TotalW, math.IsInf(u.TotalW, 1)
		return s
	}
	s.totalPa = pressurePa(st.AltitudeM)
	s.seriesR = e.seriesM2KW(&s.film)
	s.steamAir = e.steamWithAir(st)
	switch {
	case e.FilmW != nil:
		s.filmW = *e.FilmW
	default:
		s.air = newAirFilm(e.Surface.meets == airBlown, &s.film)
	}
	if e.RadiatingC != nil {
		s.radiates = usualEmissivity
		if e.Emissivity != nil {
			s.radiates = *e.Emissivity
		}
		s.wallsK4 = math.Pow(*e.RadiatingC+273.15, 4)
	}
	s.wets(e, aw)
	s.tabulate()
	return s
}

// wets makes moisture ready.
func (s *skin) wets(e *Exposure, aw *float64) {
	s.wet = e.wet()
	switch {
	case e.Medium.RH != nil:
		s.humidity = cursor{x: e.Medium.TimesS, y: e.Medium.RH}
	case e.RH != nil:
		s.humidity = cursor{y: []float64{*e.RH}}
	case s.steamAir: // the most vapour that it can hold
		s.humidity = cursor{y: []float64{100}}
	case s.wet && s.slowHeats: // dry air: the most evaporation
		s.humidity = cursor{y: []float64{0}}
	case s.wet: // the least
		s.humidity = cursor{y: []float64{100}}
	}
	s.moist = s.humidity.y != nil
	s.condenses = s.moist && !s.steamAir && (s.wet || e.FilmW == nil)
	s.activity = activityCools
	if s.slowHeats {
		s.activity = activityHeats
	}
	if aw != nil {
		s.activity, s.given = *aw, true
	}
	s.boilsC = satC(s.totalPa / s.activity)
}

// wet tells whether the surface is said to be wet.
func (e *Exposure) wet() bool { return e.Wet != nil && *e.Wet }

// inAir tells whether the surroundings are air, whose film, radiation and moisture can be worked out.
func (e *Exposure) inAir() bool { return e.Surface.Air() }

// steamWithAir tells whether steam is said not to be all vapour, or cannot be: what is colder than the boiling point holds air, at best
// saturated. From where even then it condenses with the film of pure steam, it is taken as pure, which is the same.
func (e *Exposure) steamWithAir(st *Step) bool {
	if e.Surface.meets != vapour || e.FilmW != nil {
		return false
	}
	for _, rh := range e.Medium.RH {
		if rh < 100 {
			return true
		}
	}
	if e.Medium.RH == nil && e.RH != nil && *e.RH < 100 {
		return true
	}
	total := pressurePa(st.AltitudeM)
	return slices.ContainsFunc(e.Medium.C, func(c float64) bool {
		return uchidaW(humidityRatio(vapourPa(c, 100, total), total)) < steamW
	})
}

// reacts tells whether the exchange of heat is no constant coefficient: its film follows the surface, or it radiates, or moisture counts.
func (e *Exposure) reacts(st *Step) bool {
	return e.Surface.law != nil || e.steamWithAir(st) || e.inAir() && (e.FilmW == nil || e.RadiatingC != nil || e.wet())
}

// seriesM2KW is what lies between the outer surface and the food, m²·K/W.
func (e *Exposure) seriesM2KW(c *filmCase) float64 {
	r := 0.0
	if e.WrapM2KW != nil {
		r = *e.WrapM2KW
	}
	if e.innerFilm(c) {
		r += 1 / innerW
	}
	return r
}

// innerW is the film between a vessel's wall and a liquid in it that is stirred, W/(m²·K): the low end of 50 to 100 for liquids that only
// move by themselves (Çengel, Heat Transfer, typical values); stirring makes it higher.
const innerW = 50.0

// innerFilm tells whether the film inside a vessel counts: not where the user typed the film, which stands for everything, nor where
// the liquid itself lies open and wet.
func (e *Exposure) innerFilm(c *filmCase) bool {
	return c.shape.Mixed() && e.FilmW == nil && !e.Surface.NoMedium && e.Surface.law == nil && !e.wet()
}

// around gives the surroundings tau s after the start of the step.
func (s *skin) around(tau float64) around {
	return s.surroundings(s.mediumC(tau), at(&s.humidity, tau))
}

// surroundings gives those of a temperature, °C, and a relative humidity, %.
func (s *skin) surroundings(mediumC, rhPc float64) around {
	a := around{mediumC: mediumC}
	if !s.moist {
		return a
	}
	a.vapourPa = vapourPa(a.mediumC, rhPc, s.totalPa)
	a.ratio = humidityRatio(a.vapourPa, s.totalPa)
	a.massWK = 1 / (moistCp(a.ratio) * lewisFactor)
	if s.steamAir {
		a.dewC = dewC(a.vapourPa)
		a.uchidaW = min(uchidaW(a.ratio), steamW) * s.exp.filmFactor()
	}
	return a
}

// mediumC is the temperature of the surroundings tau s after the start of the step; meaningless where insulated.
func (s *skin) mediumC(tau float64) float64 { return at(&s.course, tau) }

// at reads a course, or the one value that it has; NaN if it has none.
func at(c *cursor, tau float64) float64 {
	switch len(c.y) {
	case 0:
		return math.NaN()
	case 1:
		return c.y[0]
	}
	return c.to(tau)
}

// uchidaW is the film of steam that condenses on a cold wall out of air, W/(m²·K), by the mass of steam to that of air
// (Uchida, Oyama & Togo 1965, 3rd UN Conference on Peaceful Uses of Atomic Energy 13:93-102; from memory), air left still.
func uchidaW(ratio float64) float64 { return 379 * math.Pow(ratio, 0.707) }

// convectionW is the film on the outer surface, W/(m²·K).
func (s *skin) convectionW(outerC float64, a *around) float64 {
	if s.air == nil {
		return s.filmW
	}
	return s.air.at(outerC, a.mediumC) * s.exp.filmFactor()
}

// outer is the heat that arrives at the outer surface, W/m².
func (s *skin) outer(outerC float64, a *around) float64 {
	h := s.convectionW(outerC, a)
	w := h * (a.mediumC - outerC)
	if s.steamAir { // it condenses while the surface is colder than the dew point, and beyond that it warms as still air does
		return max(a.uchidaW*(a.dewC-outerC), w)
	}
	if s.radiates > 0 {
		w += s.radiationW(outerC)
	}
	if s.condenses {
		w -= h * a.massWK * s.drive(outerC, a) * latentJkg(outerC)
		if above := outerC - (s.boilsC - boilsEarlyK); s.wet && above > 0 { // where air is nearly all vapour, drive does not hold it there
			w -= boilW * above
		}
	}
	return w
}

// boilW is the film by which a wet surface whose water boils gives off steam, W/(m²·K): within the 2500 to 100000 of boiling water (Çengel,
// Heat Transfer, typical values). It sets in boilsEarlyK below boiling, so that no usual oven takes the surface above it.
const (
	boilW       = 1e4
	boilsEarlyK = 0.3
)

// radiationW is the net heat by radiation, W/m².
func (s *skin) radiationW(outerC float64) float64 {
	k := outerC + 273.15
	return s.radiates * stefan * (s.wallsK4 - k*k*k*k)
}

// drive is what drives vapour off the surface, kg a kg of dry air: above 0 it evaporates, below it condenses. The mass is
// h/(cp Le^(2/3)) times it, cp by the kg of dry air (Lewis' relation; Chilton & Colburn 1934). It is the difference of the humidity ratios
// where the food is to be heated, and Stefan's logarithm of it, which is never more, where it is to be cooled: of two forms of the law the
// one that makes the step slower.
func (s *skin) drive(outerC float64, a *around) float64 {
	activity := 1.0
	if s.wet {
		activity = s.activity
	}
	ws := humidityRatio(activity*satPa(outerC), s.totalPa)
	d := ws - a.ratio
	if !s.wet && d >= 0 {
		return 0
	}
	if !s.slowHeats {
		d = (1 + a.ratio) * math.Log1p(d/(1+a.ratio))
	}
	return d
}

// direct is the heat that flows into the food at a temperature of its surface, W/m².
func (s *skin) direct(surfaceC float64, a *around) float64 {
	if s.seriesR == 0 {
		return s.outer(surfaceC, a)
	}
	_, w := s.through(surfaceC, a)
	return w
}

// through finds the temperature of the outer surface, °C, and the heat, W/m², that arrives there and passes the resistances beneath it.
// The heat falls as the outer surface warms, so that the answer lies between the food's surface and what would be if nothing changed.
func (s *skin) through(surfaceC float64, a *around) (outerC, w float64) {
	r := s.seriesR
	x := surfaceC // an end of the bracket, with what is short there as a temperature: the answer is no further away
	w = s.outer(x, a)
	fx := r * w
	y := x + fx
	w = s.outer(y, a)
	fy := surfaceC + r*w - y
	for range 100 { // false position, halving what stays (Illinois)
		if math.Abs(fy) < 1e-12*(1+math.Abs(y)) || x == y {
			break
		}
		z := y - fy*(y-x)/(fy-fx)
		w = s.outer(z, a)
		fz := surfaceC + r*w - z
		if (fz > 0) != (fy > 0) {
			x, fx = y, fy
		} else {
			fx /= 2
		}
		y, fy = z, fz
	}
	return y, w
}

// flux gives the heat that flows into the food, W/m², and its slope by the surface temperature, W/(m²·K), tau s after the start of the
// step. Where the medium stays as it is, or many places are looked at, both come from a table of cubics.
func (s *skin) flux(surfaceC, tau float64) (w, slope float64) {
	switch {
	case s.table != nil:
		return s.table.at(surfaceC)
	case s.brief != nil:
		s.look(tau)
		return s.brief.at(surfaceC)
	}
	return s.exact(surfaceC, tau)
}

// look takes the surroundings tau s after the start of the step, unless the last look was there.
func (s *skin) look(tau float64) {
	if tau == s.nowS {
		return
	}
	s.now, s.nowS = s.around(tau), tau
	if s.brief != nil {
		s.brief.clear()
	}
}

// exact is flux without a table.
func (s *skin) exact(surfaceC, tau float64) (w, slope float64) {
	switch {
	case s.law != nil:
		return s.law(surfaceC, tau)
	case s.insulated:
		return 0, 0
	case s.linear:
		return s.totalW * (s.mediumC(tau) - surfaceC), -s.totalW
	case s.table == nil:
		s.look(tau)
	}
	return s.sloped(surfaceC, &s.now, slopeK)
}

// corner is what stands around a skin a while before a course of it changes its slope: as it was, and as if the line after the corner had
// begun there already.
type corner struct{ was, straight around }

// mostBackK is how far the line after a corner may lead from what was, K, and mostBackPc in % of humidity: beyond, it says nothing of the food.
const mostBackK, mostBackPc = 25, 20

// cornerAt gives the corner at tau, seen from before, both s into the step; ok tells whether the line after it may be followed so far.
func (s *skin) cornerAt(tau, before float64) (c corner, turns, ok bool) {
	was, wasPc := s.mediumC(before), at(&s.humidity, before)
	back, backPc := s.course.back(tau, before), s.humidity.back(tau, before)
	byK, byPc := math.Abs(back-was), math.Abs(backPc-wasPc)
	if !s.moist {
		byPc = 0
	}
	if byK > mostBackK || byPc > mostBackPc {
		return c, true, false
	}
	return corner{s.surroundings(was, wasPc), s.surroundings(back, max(0, min(100, backPc)))}, byK > 1e-9 || byPc > 1e-9, true
}

// change is by how much more heat flows into the food after a corner, W/m².
func (c *corner) change(s *skin, surfaceC float64) float64 {
	if s.linear {
		return s.totalW * (c.straight.mediumC - c.was.mediumC)
	}
	return s.direct(surfaceC, &c.straight) - s.direct(surfaceC, &c.was)
}

// slopeK is half of the difference that a slope is taken over, K.
const slopeK = 1e-3

// sloped takes the slope from two temperatures d K to each side, of the outer surface where something lies in series beneath it.
func (s *skin) sloped(surfaceC float64, a *around, d float64) (w, slope float64) {
	outerC := surfaceC
	if s.seriesR > 0 {
		outerC, w = s.through(surfaceC, a)
	} else {
		w = s.outer(surfaceC, a)
	}
	slope = (s.outer(outerC+d, a) - s.outer(outerC-d, a)) / (2 * d)
	return w, slope / (1 - s.seriesR*slope)
}
