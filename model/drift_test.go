package model

import (
	"math"
	"testing"
)

// TestDrifted: what a step leaves open in a stage that drifts is taken so that the food moves fastest, to the side of its surroundings; what is typed, other
// stages and covered food stay as they are.
func TestDrifted(t *testing.T) {
	yes, no, film, walls, rh, wrap := true, false, 9.0, 31.0, 40.0, 0.02
	for _, x := range []struct {
		name   string
		stage  *Stage
		startC float64
		e      Exposure
		moist  bool
		want   Exposure // what it becomes; FilmFactor 0: as it was
		open   bool
	}{
		{"hot, blank", Rest, 70, Exposure{Surface: StillAir}, true, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0), Wet: &yes, RH: ptr(0.0)}, true},
		{"cold, wet", HoldCold, 3, Exposure{Surface: MovingAir, AirMS: &film, Wet: &yes}, true, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &yes, RH: ptr(100.0)}, true},
		{"hot, without moisture", Rest, 70, Exposure{Surface: StillAir}, false, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0)}, true},
		{"hot, dry: nothing condenses", HoldHot, 70, Exposure{Surface: StillAir, Wet: &no}, true, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0), Wet: &no}, true},
		{"cold, dry: vapour condenses", Store, 3, Exposure{Surface: StillAir, Wet: &no}, true, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &no, RH: ptr(100.0)}, true},
		{"wrapped", Rest, 70, Exposure{Surface: StillAir, Cover: TightWrap, WrapM2KW: &wrap}, true, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0)}, true},
		{"film varied already", Rest, 70, Exposure{Surface: StillAir, FilmFactor: 0.8}, false, Exposure{FilmFactor: 1, RadiatingC: ptr(20.0)}, true},
		{"all typed", Rest, 70, Exposure{Surface: StillAir, FilmW: &film, RadiatingC: &walls, Wet: &yes, RH: &rh}, true, Exposure{FilmW: &film, RadiatingC: &walls, Wet: &yes, RH: &rh}, false},
		{"water", HoldHot, 70, Exposure{Surface: WaterBath}, true, Exposure{FilmW: ptr(1000.0)}, true},
		{"a film for everything", Rest, 70, Exposure{Surface: Film, FilmW: &film}, true, Exposure{FilmW: &film}, false},
		{"chilling", Cool, 70, Exposure{Surface: StillAir}, true, Exposure{}, false},
		{"cooking", Cook, 10, Exposure{Surface: StillAir, Wet: &yes}, true, Exposure{Wet: &yes}, false},
	} {
		t.Run(x.name, func(t *testing.T) {
			p, _ := plain()
			p.StartC = x.startC
			e := x.e
			e.Medium = Course{TimesS: []float64{0, 900}, C: []float64{20, 24}}
			steps := []Step{{Name: "s", Stage: x.stage, DurationS: 900, Exposure: e, Faces: []FaceExposure{{Face: Top, Exposure: e}}}}
			ran, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			out, open := Drifted(&p, steps, ran, x.moist)
			same := func(a, b *float64) bool { return (a == nil) == (b == nil) && (a == nil || *a == *b) }
			for _, got := range []*Exposure{&out[0].Exposure, &out[0].Faces[0].Exposure} {
				if open != x.open || !same(got.FilmW, x.want.FilmW) || math.Abs(got.FilmFactor-x.want.FilmFactor) > 1e-9 || !same(got.RadiatingC, x.want.RadiatingC) || !same(got.RH, x.want.RH) ||
					(got.Wet == nil) != (x.want.Wet == nil) || got.wet() != x.want.wet() {
					t.Errorf("open %v, %+v; want %v, %+v", open, got, x.open, x.want)
				}
			}
			if steps[0].RadiatingC != x.e.RadiatingC || steps[0].Faces[0].Wet != x.e.Wet {
				t.Error("the plan's own step has changed")
			}
		})
	}
}
