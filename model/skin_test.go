package model

import (
	"math"
	"strings"
	"testing"
)

// surfaces is a wide choice of exposures, each with a medium that stays as it is.
func surfaces() map[string]*Exposure {
	const wet, dry = true, false
	air := func(c, speed float64) *Exposure {
		e := &Exposure{Surface: StillAir, Medium: Course{C: []float64{c}}, Wet: ptr(dry)}
		if speed > 0 {
			e.Surface, e.AirMS = MovingAir, ptr(speed)
		}
		return e
	}
	with := func(e *Exposure, change func(*Exposure)) *Exposure { change(e); return e }
	return map[string]*Exposure{
		"still chill":       air(2, 0),
		"blown chill":       air(-3, 2.3),
		"still oven":        air(178, 0),
		"breath of air":     air(21, 0.13),
		"blown, radiating":  with(air(163, 1.3), func(e *Exposure) { e.RadiatingC, e.Emissivity = ptr(196.0), ptr(0.87) }),
		"wet oven":          with(air(158, 1.7), func(e *Exposure) { e.Wet = ptr(wet) }),
		"wet humid oven":    with(air(141, 0.9), func(e *Exposure) { e.Wet, e.RH, e.RadiatingC = ptr(wet), ptr(7.0), ptr(133.0) }),
		"wet, in vapour":    with(air(205, 0), func(e *Exposure) { e.Wet, e.RH, e.RadiatingC = ptr(wet), ptr(5.6), ptr(205.0) }),
		"wet chill":         with(air(3, 1.9), func(e *Exposure) { e.Wet, e.RH = ptr(wet), ptr(83.0) }),
		"wrapped oven":      with(air(149, 2.1), func(e *Exposure) { e.WrapM2KW, e.RadiatingC, e.RH = ptr(0.013), ptr(171.0), ptr(31.0) }),
		"dry, condensing":   with(air(87, 0.6), func(e *Exposure) { e.RH = ptr(64.0) }),
		"steam with air":    {Surface: Steam, Medium: Course{C: []float64{96}}, RH: ptr(71.0)},
		"typed film, wet":   with(air(122, 1.1), func(e *Exposure) { e.FilmW, e.Wet = ptr(17.0), ptr(wet) }),
		"typed film, walls": with(air(122, 1.1), func(e *Exposure) { e.FilmW, e.RadiatingC = ptr(17.0), ptr(88.0) }),
	}
}

// A brick whose film is that of its longest side.
func skinCase() *filmCase {
	return &filmCase{shape: Brick, size: Size{ThicknessM: 0.041, WidthM: 0.087, LengthM: 0.163}}
}

func TestTableFollowsTheFlux(t *testing.T) {
	for name, e := range surfaces() {
		for _, stage := range []*Stage{Cook, Cool} {
			t.Run(name+", "+stage.Name, func(t *testing.T) {
				s := newSkin(e, skinCase(), ptr(0.97), &Step{Stage: stage, DurationS: 3100, AltitudeM: 320})
				for c := -29.7; c < 131; c += 0.0437 {
					w, slope := s.flux(c, 0)
					want, steep := s.exact(c, 0)
					if math.Abs(w-want) > 1e-6*(math.Abs(want)+math.Abs(steep)) {
						t.Fatalf("at %.4f °C %.9g W/m², directly %.9g", c, w, want)
					}
					_, before := s.exact(c-0.05, 0) // at a kink a difference mixes the slopes of both sides
					_, after := s.exact(c+0.05, 0)
					if off := 3e-3 * (1 + math.Abs(steep)); slope < min(before, steep, after)-off || slope > max(before, steep, after)+off {
						t.Errorf("at %.4f °C slope %g, directly %g", c, slope, steep)
					}
				}
			})
		}
	}
}

// The warmer the surface, the less heat it takes. Only on a wet surface in still air, within a few K of the air's temperature, is there
// nothing to move the air, and less evaporates: that is left out here.
func TestFluxFallsWithTheSurface(t *testing.T) {
	for name, e := range surfaces() {
		for _, stage := range []*Stage{Cook, Cool} {
			s := newSkin(e, skinCase(), nil, &Step{Stage: stage, DurationS: 3100})
			last := math.Inf(1)
			for c := -39.9; c < 190; c += 0.171 {
				w, slope := s.flux(c, 0)
				if w > last || slope > 0 {
					t.Errorf("%s, %s: at %.3f °C %g W/m² after %g, slope %g", name, stage.Name, c, w, last, slope)
					break
				}
				last = w
			}
		}
	}
}

// airStep is a step with nothing but what the skin looks at.
func airStep(stage *Stage) *Step { return &Step{Stage: stage, DurationS: 3100} }

// One state of each kind of exchange: the sum of its parts worked out with mpmath apart from the program (numbers typed here), with the
// saturation pressure of Wagner & Pruss, Le 0.87, cp 1006 + 1860 w, 0.622, latent heat 2.501e6 - 2361 T.
func TestFluxAtOneState(t *testing.T) {
	typed := func(change func(*Exposure)) *Exposure {
		e := &Exposure{Surface: MovingAir, FilmW: ptr(17.0), Medium: Course{C: []float64{122}}}
		change(e)
		return e
	}
	walls := func(e *Exposure) {
		e.RadiatingC, e.Emissivity, e.RH, e.Wet = ptr(101.0), ptr(0.8), ptr(12.0), ptr(true)
	}
	for _, c := range []struct {
		name     string
		e        *Exposure
		stage    *Stage
		surfaceC float64
		want     float64
	}{
		{"through a wrap, with walls colder than the air", typed(func(e *Exposure) { e.RadiatingC, e.WrapM2KW = ptr(88.0), ptr(0.013) }), Cook, 31, 1518.084759},
		{"vapour condenses, in heating by the slower law", typed(walls), Cook, 47, 6089.719429},
		{"vapour condenses, in cooling by the faster law", typed(walls), Cool, 47, 6361.140468},
		{"water evaporates, in heating by the faster law", typed(walls), Cook, 83, -12898.83099},
		{"water evaporates, in cooling by the slower law", typed(walls), Cool, 83, -10861.45231},
		{"steam with air: dew point 86.90 °C, film 377.308", &Exposure{Surface: Steam, RH: ptr(71.0), Medium: Course{C: []float64{96}}}, Cook, 52, 377.308438 * (86.9009345 - 52)},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := newSkin(c.e, skinCase(), ptr(0.97), airStep(c.stage))
			if got, _ := s.flux(c.surfaceC, 0); math.Abs(got-c.want) > 2e-6*math.Abs(c.want) {
				t.Errorf("%.8g W/m², want %.8g", got, c.want)
			}
		})
	}
}

// Published figures for whole surfaces, convection with radiation, in W/(m²·K) of air and surface.
func TestFilmsWithRadiation(t *testing.T) {
	total := func(e *Exposure, c *filmCase, surfaceC float64) float64 {
		w, _ := newSkin(e, c, nil, airStep(Cook)).flux(surfaceC, 0)
		return w / (e.Medium.C[0] - surfaceC)
	}
	body := func(diameterM float64) *filmCase { return &filmCase{shape: Cylinder, size: Size{DiameterM: diameterM}} }
	still := func(c float64) *Exposure {
		return &Exposure{Surface: StillAir, Wet: ptr(false), Medium: Course{C: []float64{c}}, RadiatingC: ptr(c)}
	}
	// Chang, Carpenter & Toledo 1998, J. Food Science: 19.252 in a static oven at roasting temperature, measured; a body of 100 mm.
	for _, oven := range []float64{163, 175} {
		if got := total(still(oven), body(0.1), 70); math.Abs(got-19.252) > 0.15*19.252 {
			t.Errorf("static oven of %g °C: %.2f, measured 19.25", oven, got)
		}
	}
	// Churchill & Bernstein 1977, worked out apart from the program with tabulated air of 10 °C: 11.7 at 1.2 m/s over 110 mm, without radiation.
	blown := &Exposure{Surface: MovingAir, AirMS: ptr(1.2), Medium: Course{C: []float64{10}}}
	if got := total(blown, body(0.11), 10.5); math.Abs(got-11.7) > 0.015*11.7 {
		t.Errorf("air of 1.2 m/s: %.2f, want 11.7", got)
	}
	// Cold room of 2 °C, joints of 50 to 180 mm, 5 to 40 K warmer: 7.5 to 11.8 (Churchill & Chu with radiation of 4.6 to 5.6; worked out
	// apart from the program).
	if got := total(still(2), body(0.18), 7); math.Abs(got-7.5) > 0.25 {
		t.Errorf("cold room, low end: %.2f, want 7.5", got)
	}
	if got := total(still(2), body(0.05), 42); math.Abs(got-11.8) > 0.35 {
		t.Errorf("cold room, high end: %.2f, want 11.8", got)
	}
}

// Radiation by the K of difference, emissivity 0.9: 14 W/(m²·K) between 70 and 200 °C, 11 between 20 and 180, 6 between 60 and 5 (physics
// alone; to three more digits with mpmath).
func TestRadiationByTheKelvin(t *testing.T) {
	for _, c := range []struct{ surfaceC, wallsC, want float64 }{{70, 200, 14.2315}, {20, 180, 11.0938}, {60, 5, 5.8761}} {
		e := &Exposure{Surface: StillAir, FilmW: ptr(1e-9), RadiatingC: &c.wallsC, Medium: Course{C: []float64{c.wallsC}}}
		w, _ := newSkin(e, skinCase(), nil, airStep(Cook)).flux(c.surfaceC, 0)
		if got := w / (c.wallsC - c.surfaceC); math.Abs(got-c.want) > 1e-4 {
			t.Errorf("%g and %g °C: %.4f, want %g", c.surfaceC, c.wallsC, got, c.want)
		}
	}
}

// NAFEMS benchmark T2 (The Standard NAFEMS Benchmarks, TNSB rev. 3, 1990): a bar of 0.1 m, 55.6 W/(m·K), 1000 K at one end, the other
// radiates to 300 K with emissivity 0.98: 927 K printed, 927.0076 K exactly with 5.67e-8.
func TestRadiatingBar(t *testing.T) {
	e := &Exposure{Surface: StillAir, FilmW: ptr(1e-9), RadiatingC: ptr(300 - 273.15), Emissivity: ptr(0.98), Medium: Course{C: []float64{20}}}
	s := newSkin(e, skinCase(), nil, airStep(Cool))
	c := 700.0
	for range 30 { // conducted = radiated, by Newton
		w, slope := s.flux(c, 0)
		c -= (55.6/0.1*(1000-273.15-c) + w) / (-55.6/0.1 + slope)
	}
	if got := c + 273.15; math.Abs(got-927.0076) > 0.01 {
		t.Errorf("%.4f K", got)
	}
}

// Evaporation carries 2.1 times the heat of convection off a wet surface of 30 °C in air of 2 °C and 85 %, and 1.3 times at 10 °C (worked
// out apart from the program, with Lewis numbers from 0.87 to 1: 2.03 to 2.21, and 1.21 to 1.32).
func TestEvaporationBesideConvection(t *testing.T) {
	for _, c := range []struct{ surfaceC, want float64 }{{30, 2.1}, {10, 1.3}} {
		e := &Exposure{Surface: MovingAir, AirMS: ptr(2.0), RH: ptr(85.0), Wet: ptr(true), Medium: Course{C: []float64{2}}}
		wet, _ := newSkin(e, skinCase(), ptr(1.0), airStep(Cool)).flux(c.surfaceC, 0)
		e.Wet = nil
		dry, _ := newSkin(e, skinCase(), ptr(1.0), airStep(Cool)).flux(c.surfaceC, 0)
		if got := wet/dry - 1; math.Abs(got-c.want) > 0.06*c.want {
			t.Errorf("surface %g °C: %.3f times, want %g", c.surfaceC, got, c.want)
		}
	}
}

// With nothing conducted a wet surface in an oven of 160 °C with 20.04 kPa of vapour goes to 64.6 °C, in one of 180 °C with 22.07 kPa to
// 67.0 °C (worked out apart from the program with Magnus' formula): the temperature at which the flux is nothing.
func TestWetSurfaceInAnOven(t *testing.T) {
	for _, c := range []struct{ airC, vapourPa, want float64 }{{160, 20040, 64.6}, {180, 22070, 67.0}} {
		e := &Exposure{Surface: MovingAir, AirMS: ptr(1.4), RH: ptr(100 * c.vapourPa / satPa(c.airC)), Wet: ptr(true), Medium: Course{C: []float64{c.airC}}}
		s := newSkin(e, skinCase(), ptr(1.0), airStep(Cook))
		lo, hi := 0.0, c.airC
		for range 50 {
			if mid := (lo + hi) / 2; func() bool { w, _ := s.flux(mid, 0); return w > 0 }() {
				lo = mid
			} else {
				hi = mid
			}
		}
		if math.Abs(lo-c.want) > 0.2 {
			t.Errorf("oven of %g °C: %.2f °C, want %g", c.airC, lo, c.want)
		}
	}
}

// However hot the oven, a wet surface stays below the boiling point, at the sea and on a mountain.
func TestWetSurfaceStaysBelowBoiling(t *testing.T) {
	for _, altitude := range []float64{0, 2600} {
		e := &Exposure{Surface: MovingAir, AirMS: ptr(3.0), RadiatingC: ptr(290.0), Wet: ptr(true), RH: ptr(1.4), Medium: Course{C: []float64{250}}}
		s := newSkin(e, skinCase(), nil, &Step{Stage: Cook, DurationS: 900, AltitudeM: altitude})
		if w, slope := s.flux(boilingC(altitude)-0.5, 0); w > -1e5 || math.IsInf(slope, 0) {
			t.Errorf("at %g m: %g W/m², slope %g", altitude, w, slope)
		}
		if w, slope := s.flux(137, 0); math.IsInf(w, 0) || math.IsNaN(w) || math.IsNaN(slope) {
			t.Errorf("beyond boiling: %g, %g", w, slope)
		}
	}
}

// In an oven full of vapour too: with nothing conducted a wet surface is at the boiling point of water, 99.97 °C at the sea (steam tables) and
// 91.29 °C at 2600 m (standard atmosphere and steam tables, from memory), whatever the share of vapour near to all of it.
func TestWetSurfaceBoilsInVapour(t *testing.T) {
	for _, c := range []struct{ altitudeM, boilsC float64 }{{0, 99.97}, {2600, 91.29}} {
		for _, share := range []float64{0.96, 0.98, 1} {
			for name, e := range map[string]*Exposure{"still": {Surface: StillAir}, "blown": {Surface: MovingAir, AirMS: ptr(0.7)}, "typed": {Surface: StillAir, FilmW: ptr(13.0)}} {
				e.RadiatingC, e.Wet, e.RH, e.Medium = ptr(205.0), ptr(true), ptr(100*share*pressurePa(c.altitudeM)/satPa(205)), Course{C: []float64{205}}
				s := newSkin(e, skinCase(), nil, &Step{Stage: Cook, DurationS: 900, AltitudeM: c.altitudeM})
				lo, hi := 0.0, 205.0
				for range 50 {
					mid := (lo + hi) / 2
					if w, _ := s.flux(mid, 0); w > 0 {
						lo = mid
					} else {
						hi = mid
					}
				}
				if above := lo - c.boilsC; above > 0.05 || above < -1.2 {
					t.Errorf("%s, %g m, %g of it vapour: %.3f °C, %.3f K above boiling", name, c.altitudeM, share, lo, above)
				}
			}
			if wet := (moistAir{205, share * pressurePa(c.altitudeM), pressurePa(c.altitudeM)}).wetBulbC(1); wet > c.boilsC+0.05 || wet < c.boilsC-1.2 {
				t.Errorf("%g m, %g of it vapour: wet bulb %.3f °C", c.altitudeM, share, wet)
			}
		}
	}
}

// Where nothing is said the safe side is taken: a wet surface is heated in dry air at activity 1, cooled in saturated air at activity 0.95;
// a surface of which nothing is said is dry.
func TestDefaultsOfMoisture(t *testing.T) {
	at := func(stage *Stage, c float64, aw *float64, change func(*Exposure)) float64 {
		e := &Exposure{Surface: MovingAir, AirMS: ptr(1.1), Medium: Course{C: []float64{c}}}
		change(e)
		w, _ := newSkin(e, skinCase(), aw, airStep(stage)).flux(41.3, 0)
		return w
	}
	wet := func(rh ...float64) func(*Exposure) {
		return func(e *Exposure) {
			e.Wet = ptr(true)
			if rh != nil {
				e.RH = &rh[0]
			}
		}
	}
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"heating: dry air, activity 1", at(Cook, 138, nil, wet()), at(Cook, 138, ptr(1.0), wet(0))},
		{"cooling: saturated air, activity 0.95", at(Cool, 4, nil, wet()), at(Cool, 4, ptr(0.95), wet(100))},
		{"nothing said: dry", at(Cool, 4, nil, func(*Exposure) {}), at(Cool, 4, nil, func(e *Exposure) { e.Wet = ptr(false) })},
	} {
		if math.Abs(c.got-c.want) > 1e-9*math.Abs(c.want) {
			t.Errorf("%s: %g, want %g", c.name, c.got, c.want)
		}
	}
	if wet, dry := at(Cook, 138, nil, wet()), at(Cook, 138, nil, wet(3)); wet >= dry {
		t.Errorf("the default heats with %g W/m², humid air with %g", wet, dry)
	}
	if wet, dry := at(Cool, 4, nil, wet()), at(Cool, 4, nil, wet(70)); wet <= dry {
		t.Errorf("the default cools with %g W/m², drier air with %g", wet, dry)
	}
}

// A dry surface takes the heat of vapour that condenses below the dew point, 80.0 °C here, and none above it.
func TestDryCondensation(t *testing.T) {
	e := &Exposure{Surface: MovingAir, AirMS: ptr(0.8), Medium: Course{C: []float64{91}}, RH: ptr(100 * satPa(80) / satPa(91))}
	humid := newSkin(e, skinCase(), nil, airStep(Cook))
	e2 := *e
	e2.RH = nil
	dry := newSkin(&e2, skinCase(), nil, airStep(Cook))
	for _, c := range []float64{23, 61, 79.4, 80.6, 88} {
		w, _ := humid.flux(c, 0)
		d, _ := dry.flux(c, 0)
		if above := w-d > 1e-6*d; above != (c < 80) {
			t.Errorf("at %g °C: %g W/m², dry %g", c, w, d)
		}
	}
}

// Steam with air condenses at its dew point; beyond that the surface warms as in still air, and no steam is better than the film of pure
// steam.
func TestSteamWithAir(t *testing.T) {
	steam := func(rh float64) *skin {
		return newSkin(&Exposure{Surface: Steam, RH: &rh, Medium: Course{C: []float64{90}}}, skinCase(), nil, airStep(Cook))
	}
	s := steam(40) // dew point 67.576 °C, film 137.52 (mpmath)
	still := newSkin(&Exposure{Surface: StillAir, Medium: Course{C: []float64{90}}}, skinCase(), nil, airStep(Cook))
	w, _ := s.flux(20, 0)
	if want := 137.519065 * (67.5761897 - 20); math.Abs(w-want) > 2e-6*want {
		t.Errorf("condensing %g W/m², want %g", w, want)
	}
	w, _ = s.flux(75, 0)
	if want, _ := still.flux(75, 0); math.Abs(w-want) > 1e-6*want {
		t.Errorf("above the dew point %g W/m², still air %g", w, want)
	}
	if w, _ := steam(99.99).flux(20, 0); w > steamW*(90-20) {
		t.Errorf("nearly pure steam gives %g W/m²", w)
	}
}

// Steam colder than boiling holds air, whether that is said or not: blank, and 100 %, give what nearly 100 % does, and at the boiling point of
// the altitude it is pure steam. The film of 80 °C is by hand: vapour of 47.41 kPa (steam tables, from memory) in 101.325 kPa is 0.5470 kg a kg
// of air, 379 × 0.5470^0.707 = 247.4 W/m²K.
func TestSteamColderThanBoiling(t *testing.T) {
	at := func(c, altitudeM float64, rh *float64) *skin {
		st := airStep(Cook)
		st.AltitudeM = altitudeM
		return newSkin(&Exposure{Surface: Steam, RH: rh, Medium: Course{C: []float64{c}}}, skinCase(), nil, st)
	}
	const surfaceC = 21
	for _, c := range []struct {
		altitudeM, mediumC float64
		pure               bool
	}{
		{0, 50, false}, {0, 60, false}, {0, 75, false}, {0, 80, false}, {0, 85, false}, {0, 95, false}, {0, 96.5, true}, {0, 99.9, true}, {0, 100, true},
		{2600, 60, false}, {2600, 85, false}, {2600, 90.9, true}, {2600, 91.3, true},
	} {
		nearly, _ := at(c.mediumC, c.altitudeM, ptr(99.9)).flux(surfaceC, 0)
		for _, s := range []*skin{at(c.mediumC, c.altitudeM, nil), at(c.mediumC, c.altitudeM, ptr(100.0))} {
			w, _ := s.flux(surfaceC, 0)
			if math.Abs(w-nearly) > 0.005*nearly {
				t.Errorf("%g °C at %g m: %g W/m², with 99.9 %% %g", c.mediumC, c.altitudeM, w, nearly)
			}
			if s.linear != c.pure || c.pure && s.totalW != steamW {
				t.Errorf("%g °C at %g m is taken as pure: %v, film %g", c.mediumC, c.altitudeM, s.linear, s.totalW)
			}
		}
	}
	s := at(80, 0, nil)
	if w, _ := s.flux(surfaceC, 0); math.Abs(w/(80-surfaceC)-247.4) > 0.3 {
		t.Errorf("80 °C: film %g", w/(80-surfaceC))
	}
	if u := s.used(nil, surfaceRange{surfaceC, surfaceC, 79}, 3100); !strings.Contains(u.Source, "colder than boiling (100.0 °C here), so that it holds air: 100 %") {
		t.Errorf("source: %s", u.Source)
	}
	if u := at(80, 0, ptr(60.0)).used(nil, surfaceRange{surfaceC, surfaceC, 69}, 3100); strings.Contains(u.Source, "colder than boiling") {
		t.Errorf("source with a humidity: %s", u.Source)
	}
	for c := 95.7; c < 96.1; c += 0.001 { // no leap where it begins to be pure: it rises by up to 15 kW/m² a K
		a, _ := at(c, 0, nil).flux(surfaceC, 0)
		if b, _ := at(c+0.001, 0, nil).flux(surfaceC, 0); b < a || b-a > 20 {
			t.Errorf("from %g °C on it leaps from %g to %g W/m²", c, a, b)
		}
	}
	e := &Exposure{Surface: Steam, Medium: Course{C: []float64{80}}, FilmFactor: 0.75}
	less, _ := newSkin(e, skinCase(), nil, airStep(Cook)).flux(surfaceC, 0)
	if w, _ := s.flux(surfaceC, 0); math.Abs(less-0.75*w) > 1e-6*w {
		t.Errorf("a film of 0.75 times gives %g of %g W/m²", less, w)
	}
}

// With a medium that changes, each instant is what it would be if it stayed so.
func TestFluxFollowsACourse(t *testing.T) {
	e := &Exposure{Surface: MovingAir, AirMS: ptr(1.6), Wet: ptr(true), Medium: Course{Name: "log", TimesS: []float64{0, 700, 2900}, C: []float64{93, 171, 128}, RH: []float64{61, 9, 17}}}
	s := newSkin(e, skinCase(), nil, airStep(Cook))
	for _, c := range []struct{ tau, airC, rh float64 }{{0, 93, 61}, {350, 132, 35}, {700, 171, 9}, {1800, 149.5, 13}, {3000, 128, 17}} {
		now := newSkin(&Exposure{Surface: MovingAir, AirMS: ptr(1.6), Wet: ptr(true), RH: &c.rh, Medium: Course{C: []float64{c.airC}}}, skinCase(), nil, airStep(Cook))
		for _, surface := range []float64{7, 58, 77} {
			w, slope := s.flux(surface, c.tau)
			want, steep := now.flux(surface, 0)
			if math.Abs(w-want) > 1e-6*(math.Abs(want)+math.Abs(steep)) || math.Abs(slope-steep) > 1e-3*math.Abs(steep) {
				t.Errorf("%g s, %g °C: %g W/m² (%g), want %g (%g)", c.tau, surface, w, slope, want, steep)
			}
		}
	}
}

// Surroundings with a film that stays as it is: what flows in, by the K of difference. Inside a vessel that is stirred 50 W/(m²·K) lie in
// series (Çengel, Heat Transfer: 50 to 100 for liquids by free convection), but where the film is typed.
func TestConstantSurroundings(t *testing.T) {
	pot := &filmCase{shape: Stirred, size: Size{VolumeM3: 0.021, AreaM2: 0.44}}
	medium := Course{C: []float64{77}}
	for _, c := range []struct {
		name string
		e    Exposure
		c    *filmCase
		want float64
	}{
		{"typed", Exposure{Surface: Film, FilmW: ptr(23.0)}, skinCase(), 23},
		{"typed, wrapped", Exposure{Surface: Film, FilmW: ptr(23.0), WrapM2KW: ptr(0.05)}, skinCase(), 1 / (1/23.0 + 0.05)},
		{"typed on still air", Exposure{Surface: StillAir, FilmW: ptr(9.0), RH: ptr(50.0)}, skinCase(), 9},
		{"water bath", Exposure{Surface: WaterBath}, skinCase(), waterBathW},
		{"contact plate", Exposure{Surface: ContactPlate, WrapM2KW: ptr(0.004)}, skinCase(), 250},
		{"typed around a pot", Exposure{Surface: Film, FilmW: ptr(23.0)}, pot, 23},
		{"a pot in stirred water", Exposure{Surface: StirredWater, WrapM2KW: ptr(0.002)}, pot, 1 / (1.0/waterBathW + 0.002 + 1/50.0)},
		{"a pot in steam", Exposure{Surface: Steam, Medium: Course{C: []float64{98}}}, pot, 1 / (1/1000.0 + 1/50.0)},
		{"a pot on a plate", Exposure{Surface: ContactPlate, WrapM2KW: ptr(0.004)}, pot, 1 / (0.004 + 1/50.0)},
		{"a pot whose wall is held", Exposure{Surface: Held}, pot, 50},
	} {
		t.Run(c.name, func(t *testing.T) {
			by := 63.0
			if c.e.Medium.C == nil {
				c.e.Medium = medium
			} else {
				by = c.e.Medium.C[0] - 14
			}
			s := newSkin(&c.e, c.c, nil, airStep(Cook))
			w, slope := s.flux(14, 600)
			if c.e.reacts(airStep(Cook)) || s.held || math.Abs(w-c.want*by) > 1e-9*w || math.Abs(slope+c.want) > 1e-9*c.want {
				t.Errorf("%g W/m², slope %g, want %g", w, slope, c.want)
			}
		})
	}
	if s := newSkin(&Exposure{Surface: Held, Medium: medium}, skinCase(), nil, airStep(Cook)); !s.held {
		t.Error("a held surface is not held")
	}
	if s := newSkin(&Exposure{Surface: Insulated}, skinCase(), nil, airStep(Cook)); !s.insulated {
		t.Error("an insulated surface is not insulated")
	} else if w, slope := s.flux(14, 3); w != 0 || slope != 0 {
		t.Errorf("insulated: %g, %g", w, slope)
	}
	air := newSkin(&Exposure{Surface: MovingAir, AirMS: ptr(1.9), Medium: medium}, pot, nil, airStep(Cook)) // both films of a pot in air
	a := air.around(0)
	outer, w := air.through(14, &a)
	if want := (outer - 14) * innerW; math.Abs(w-want) > 1e-9*want || math.Abs(w-air.air.at(outer, 77)*(77-outer)) > 1e-6*w {
		t.Errorf("a pot in air: wall at %g °C, %g W/m²", outer, w)
	}
}

// A law of a test takes the place of everything, through the same table.
func TestLawOfATest(t *testing.T) {
	magnus := func(c float64) float64 { return 610.94 * math.Exp(17.625*c/(c+243.04)) }
	law := func(c, _ float64) (w, slope float64) {
		const km, hfg, aw = 1.525513e-7, 2.4e6, 0.98
		k, s := c+273.15, magnus(c)
		w = 25*(160-c) + 0.9*stefan*(math.Pow(443.15, 4)-math.Pow(k, 4)) - km*hfg*(aw*s-0.03*magnus(160))
		return w, -25 - 4*0.9*stefan*k*k*k - km*hfg*aw*s*17.625*243.04/((c+243.04)*(c+243.04))
	}
	e := &Exposure{Surface: &Surface{Name: "law", law: law}, Medium: Course{C: []float64{160}}}
	s := newSkin(e, skinCase(), nil, airStep(Cook))
	if !e.reacts(airStep(Cook)) {
		t.Error("goes through the linear method")
	}
	for c := 3.0; c < 110; c += 0.173 {
		w, slope := s.flux(c, 20)
		want, steep := law(c, 20)
		if math.Abs(w-want) > 1e-6*(math.Abs(want)+math.Abs(steep)) || math.Abs(slope-steep) > 1e-4*math.Abs(steep) {
			t.Errorf("%g °C: %g, %g; want %g, %g", c, w, slope, want, steep)
		}
	}
}

// What the report says of a face.
func TestFilmUsedSays(t *testing.T) {
	seen := surfaceRange{startC: 9, lowC: 9, highC: 68}
	for _, c := range []struct {
		name    string
		e       *Exposure
		stage   *Stage
		source  []string
		caution []string
	}{
		{"moving air", &Exposure{Surface: MovingAir, AirMS: ptr(2.1), Medium: Course{C: []float64{83}}}, Cook,
			[]string{"Churchill & Bernstein 1977", "Reynolds number up to 1e7", "at 2.1 m/s, 87 mm", "food surface 9.0 °C, air 83.0 °C", "without radiation"}, []string{"film coefficient assumed, not measured"}},
		{"radiating", &Exposure{Surface: StillAir, RadiatingC: ptr(181.0), Medium: Course{C: []float64{163}}}, Cook,
			[]string{"Churchill & Chu 1975", "radiation to 181 °C with emissivity 0.9", "at the start 61 % of the two"}, []string{"emissivity assumed: 0.9"}},
		{"radiating in a chiller", &Exposure{Surface: StillAir, RadiatingC: ptr(1.0), Emissivity: ptr(0.93), Medium: Course{C: []float64{2}}}, Cool,
			[]string{"radiation to 1 °C with emissivity 0.93"}, []string{"radiation counted while chilling"}},
		{"wet in heating, nothing else known", &Exposure{Surface: MovingAir, AirMS: ptr(2.1), Wet: ptr(true), Medium: Course{C: []float64{163}}}, Cook,
			[]string{"Lewis' relation", "Lewis number 0.87", "water activity 1.00", "wet-bulb temperature, 39.3"}, []string{"dry air is taken", "1 is taken, the side on which the food comes out colder"}},
		{"wet in cooling", &Exposure{Surface: MovingAir, AirMS: ptr(2.1), Wet: ptr(true), Medium: Course{C: []float64{3}}}, Cool,
			[]string{"water activity 0.95"}, []string{"100 % is taken", "0.95 is taken, the side on which the food comes out hotter", "only while it stays wet, open and unwrapped"}},
		{"humid air on a dry surface", &Exposure{Surface: StillAir, RH: ptr(70.0), Medium: Course{C: []float64{90}}}, Cook,
			[]string{"vapour condenses while the surface is colder than the dew point, 80.9"}, nil},
		{"steam with air", &Exposure{Surface: Steam, RH: ptr(71.0), Medium: Course{C: []float64{96}}}, Cook,
			[]string{"Uchida", "86.9 °C", "as in still air, Churchill & Chu"}, []string{"film coefficient assumed"}},
		{"typed, with walls", &Exposure{Surface: StillAir, FilmW: ptr(7.0), RadiatingC: ptr(120.0), Medium: Course{C: []float64{110}}}, Cook,
			[]string{"typed by the user, for convection alone", "radiation to 120 °C"}, nil},
		{"too slow a stream", &Exposure{Surface: MovingAir, AirMS: ptr(1e-5), Medium: Course{C: []float64{83}}}, Cook,
			[]string{"Churchill & Chu"}, []string{"below the range of Churchill & Bernstein"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			u := newSkin(c.e, skinCase(), nil, airStep(c.stage)).used(Top, seen, 3100)
			for _, w := range c.source {
				if !strings.Contains(u.Source, w) {
					t.Errorf("source lacks %q: %s", w, u.Source)
				}
			}
			for _, w := range c.caution {
				if !strings.Contains(u.Caution, w) {
					t.Errorf("caution lacks %q: %s", w, u.Caution)
				}
			}
			if typed := c.e.FilmW != nil; u.Face != Top || u.Typed != typed || !typed && !(0 < u.LeastW && u.LeastW <= u.FilmW && u.FilmW <= u.MostW) {
				t.Errorf("%+v", u)
			}
		})
	}
}

func BenchmarkFlux(b *testing.B) {
	s := newSkin(surfaces()["wet humid oven"], skinCase(), nil, &Step{Stage: Cook, DurationS: 3100})
	sum := 0.0
	for b.Loop() {
		for c := 50.0; c < 60; c += 0.01 {
			w, _ := s.flux(c, 0)
			sum += w
		}
	}
	if math.IsNaN(sum) {
		b.Fatal(sum)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/1000, "ns/flux")
}

func BenchmarkFluxThroughAWrap(b *testing.B) {
	s := newSkin(surfaces()["wrapped oven"], skinCase(), nil, &Step{Stage: Cook, DurationS: 3100})
	for b.Loop() {
		s.exact(63.1, 0)
	}
}

func BenchmarkFluxDirectly(b *testing.B) {
	s := newSkin(surfaces()["wet humid oven"], skinCase(), nil, &Step{Stage: Cook, DurationS: 3100})
	for b.Loop() {
		s.exact(63.1, 0)
	}
}

// The more humid the air, the faster a wet surface is heated, up to pure steam.
func TestHumidAirHeatsFaster(t *testing.T) {
	for _, airC := range []float64{60, 85, 100} {
		for _, surfaceC := range []float64{6, 31, 58} {
			last := math.Inf(-1)
			for _, rh := range []float64{0, 5, 20, 50, 80, 95, 99, 100} {
				e := &Exposure{Surface: MovingAir, AirMS: ptr(2.0), Wet: ptr(true), RH: ptr(rh), Medium: Course{C: []float64{airC}}}
				w, _ := newSkin(e, skinCase(), nil, airStep(Cook)).flux(surfaceC, 0)
				if w < last {
					t.Errorf("air %g °C, surface %g °C: %g W/m² at %g %%, %g at less", airC, surfaceC, w, rh, last)
				}
				last = w
			}
		}
	}
}
