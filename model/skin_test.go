package model

import (
	"math"
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
					if math.Abs(w-want) > 1e-6*(1+math.Abs(want)) {
						t.Fatalf("at %.4f °C %.9g W/m², directly %.9g", c, w, want)
					}
					if math.Abs(slope-steep) > 3e-3*(1+math.Abs(steep)) {
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

func BenchmarkFluxDirectly(b *testing.B) {
	s := newSkin(surfaces()["wet humid oven"], skinCase(), nil, &Step{Stage: Cook, DurationS: 3100})
	for b.Loop() {
		s.exact(63.1, 0)
	}
}
