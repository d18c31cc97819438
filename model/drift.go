package model

import "slices"

// Drifts tells whether a stage keeps food, or lets it stand, so that it may drift towards its surroundings sooner than calculated with films that
// are rather low: they are on the safe side where food is to be heated or cooled, not where it is to stay as it is.
func Drifts(s *Stage) bool {
	return s == Rest || s == HoldHot || s == HoldCold || s == Store || s == Thaw
}

// Drift is a side to which steps are taken, as far as their plan leaves it open, because a limit would rather have the other.
type Drift int

// The sides. What is slow and thus safe in a step itself is fast and unsafe for a step that comes after it.
const (
	Colder  Drift = iota // all that is no cook and no reheat, for limits that ask for heat: food comes out colder, and is cold sooner
	Earlier              // the same but the last chill of a chain, for clocks that start as food falls to a temperature
	Hotter               // all that is no chill, for limits that ask for cold; a chill too where its surroundings are warmer than the food
)

// Takes tells whether a side takes the step i of a chain to its side, as far as it is left open.
func (to Drift) Takes(steps []Step, i int) bool {
	chills := func(st Step) bool { return st.Stage == Cool || st.Stage == Freeze }
	switch heats := steps[i].Stage == Cook || steps[i].Stage == Reheat; {
	case to == Hotter:
		return true
	case heats:
		return false
	}
	return to == Colder || !chills(steps[i]) || slices.ContainsFunc(steps[i+1:], chills)
}

// How far a step is taken to a side as what its plan leaves open allows.
const (
	driftFilm  = 1.25   // times a film worked out for air: measured ones scatter by a quarter (Whitaker 1972, AIChE J. 18:361-371)
	driftWater = 1000.0 // film of water, W/(m²·K); food conducts so badly that more makes no difference
)

// Drifted gives the steps of a chain that ran, with what they leave open taken to one side: films of air a quarter higher and of water high where
// that moves the food there, radiation to walls as warm or as cold as the air ever is, and, of moist food, evaporation into dry air, or vapour that
// condenses from damp air. What is typed stays as it is. ok is false where nothing is left open.
func Drifted(p *Product, steps []Step, ran *History, to Drift) (out []Step, ok bool) {
	d := drift{product: p, to: to, moist: slices.ContainsFunc(p.Foods(), func(f *Material) bool { return !f.Waterless })}
	out = slices.Clone(steps)
	for i := range out {
		st := &out[i]
		if i >= len(ran.Spans) || !to.Takes(steps, i) {
			continue
		}
		d.foodC = ran.SampleAt([]float64{ran.Spans[i].StartS}).Mean[0]
		ok = d.take(st, &st.Exposure) || ok
		st.Faces = slices.Clone(st.Faces)
		for k := range st.Faces {
			ok = d.take(st, &st.Faces[k].Exposure) || ok
		}
	}
	return out, ok
}

// drift is what a step of a product is taken to a side with.
type drift struct {
	product *Product
	to      Drift
	moist   bool
	foodC   float64 // mean of the food as the step starts, °C
}

// take takes what an exposure leaves open to that side, and tells whether anything was left open. Where the surroundings lie on the other side of
// the food, they hold it back least as calculated, and moisture alone is taken.
func (d *drift) take(st *Step, e *Exposure) (open bool) {
	if len(e.Medium.C) == 0 {
		return false
	}
	walls, towards := slices.Min(e.Medium.C), false
	if towards = walls < d.foodC; d.to == Hotter {
		walls = slices.Max(e.Medium.C)
		towards = walls > d.foodC
	}
	if e.Surface.Water() {
		if e.FilmW != nil || !towards {
			return false
		}
		w := driftWater
		e.FilmW = &w
		return true
	}
	if !e.inAir() {
		return false
	}
	if e.FilmW == nil && towards {
		e.FilmFactor, open = driftFilm*e.filmFactor(), true
	}
	if e.RadiatingC == nil && towards {
		e.RadiatingC, open = &walls, true
	}
	if !d.moist || e.WrapM2KW != nil || e.Cover == TightWrap || e.Cover == LooseLid {
		return open
	}
	return d.dampen(st, e, walls, towards) || open
}

// dampen does so with moisture.
func (d *drift) dampen(st *Step, e *Exposure, walls float64, towards bool) (open bool) {
	hotter, was := d.to == Hotter, *e
	blank := e.RH == nil && e.Medium.RH == nil
	if yes := true; e.Wet == nil && (!hotter || towards && (blank || e.FilmW != nil && e.dewsOn(st, d.foodC))) {
		e.Wet, open = &yes, true
	}
	switch rh := 0.0; {
	case !blank:
	case hotter && (e.wet() || e.Wet != nil && towards): // dry too: vapour condenses on it
		rh = min(100, 100*pressurePa(st.AltitudeM)/satPa(walls)) // hotter than boiling: vapour alone
		e.RH, open = &rh, open || !e.wet() || st.Stage.Heats     // else it is what a wet surface has anyway
	case !hotter && e.wet():
		e.RH, open = &rh, open || !st.Stage.Heats
	}
	for open && !hotter && d.freezes(st, e) { // the driest air that can be calculated
		if !blank || *e.RH >= 100 {
			*e = was
			return false
		}
		*e.RH++
	}
	return open
}

// freezes tells whether evaporation alone could freeze the food, where that cannot be calculated.
func (d *drift) freezes(st *Step, e *Exposure) bool {
	c := checker{product: d.product}
	c.chilled(st, e)
	return len(c.found) > 0
}

// dewsOn tells whether vapour of air whose humidity is typed may condense on food of foodC.
func (e *Exposure) dewsOn(st *Step, foodC float64) bool {
	rh := e.Medium.RH
	if rh == nil {
		rh = []float64{*e.RH}
	}
	return dewC(vapourPa(slices.Max(e.Medium.C), slices.Max(rh), pressurePa(st.AltitudeM))) > foodC
}
