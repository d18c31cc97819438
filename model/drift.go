package model

import "slices"

// Drifts tells whether a stage keeps food, or lets it stand, so that it may drift towards its surroundings sooner than calculated with films that
// are rather low: they are on the safe side where food is to be heated or cooled, not where it is to stay as it is.
func Drifts(s *Stage) bool {
	return s == Rest || s == HoldHot || s == HoldCold || s == Store || s == Thaw
}

// How a step drifts as fast as what its plan leaves open allows.
const (
	driftFilm  = 1.25   // times a film worked out for air: measured ones scatter by a quarter (Whitaker 1972, AIChE J. 18:361-371)
	driftWater = 1000.0 // film of water, W/(m²·K); food conducts so badly that more makes no difference
)

// Drifted gives the steps of a chain that ran, with what they leave open in stages that drift taken so that the food moves fastest: films
// of air a quarter higher, radiation to walls as warm or as cold as the air, and, if moist, evaporation into dry air of food that cools, and
// vapour that condenses from damp air on food that warms. What is typed stays as it is. ok is false where nothing is left open.
func Drifted(p *Product, steps []Step, ran *History, moist bool) (out []Step, ok bool) {
	moist = moist && slices.ContainsFunc(p.Foods(), func(f *Material) bool { return !f.Waterless })
	out = slices.Clone(steps)
	for i := range out {
		st := &out[i]
		if !Drifts(st.Stage) || i >= len(ran.Spans) {
			continue
		}
		foodC := ran.SampleAt([]float64{ran.Spans[i].StartS}).Mean[0]
		ok = st.Exposure.drift(foodC, st.DurationS, moist) || ok
		st.Faces = slices.Clone(st.Faces)
		for k := range st.Faces {
			ok = st.Faces[k].Exposure.drift(foodC, st.DurationS, moist) || ok
		}
	}
	return out, ok
}

// drift takes what an exposure leaves open so that food of foodC drifts fastest, and tells whether anything was left open.
func (e *Exposure) drift(foodC, durationS float64, moist bool) (open bool) {
	if e.Surface.Water() {
		if e.FilmW != nil {
			return false
		}
		w := driftWater
		e.FilmW = &w
		return true
	}
	if !e.inAir() || len(e.Medium.C) == 0 {
		return false
	}
	cools := foodC > e.Medium.meanC(durationS)
	if e.FilmW == nil {
		e.FilmFactor, open = driftFilm*e.filmFactor(), true
	}
	if e.RadiatingC == nil {
		walls := slices.Max(e.Medium.C)
		if cools {
			walls = slices.Min(e.Medium.C)
		}
		e.RadiatingC, open = &walls, true
	}
	if !moist || e.WrapM2KW != nil || e.Cover == TightWrap || e.Cover == LooseLid {
		return open
	}
	if e.Wet == nil {
		yes := true
		e.Wet, open = &yes, true
	}
	if e.RH == nil && e.Medium.RH == nil && (*e.Wet || !cools) {
		rh := 100.0
		if cools {
			rh = 0
		}
		e.RH, open = &rh, true
	}
	return open
}
