package model

import (
	"math"
	"testing"
)

// TestDrifted: what a step leaves open is taken to the side that is asked for; what is typed, what no side takes and covered food stay as they are, and
// where the surroundings lie on the other side of the food nothing brings it nearer to them.
func TestDrifted(t *testing.T) {
	yes, no, film, walls, rh, damp, wrap := true, false, 9.0, 31.0, 40.0, 90.0, 0.02
	for _, x := range []struct {
		name   string
		stage  *Stage
		startC float64
		to     Drift
		e      Exposure
		want   Exposure // what it becomes; FilmFactor 0: as it was
		open   bool
	}{
		{"hot, blank", Rest, 70, Colder, Exposure{Surface: StillAir}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0), Wet: &yes, RH: ptr(0.0)}, true},
		{"hot, blank, towards heat", Rest, 70, Hotter, Exposure{Surface: StillAir}, Exposure{}, false},
		{"hot, wet, towards heat: dry air is not", HoldHot, 70, Hotter, Exposure{Surface: StillAir, Wet: &yes}, Exposure{Wet: &yes, RH: ptr(100.0)}, true},
		{"cold, wet", HoldCold, 3, Hotter, Exposure{Surface: MovingAir, AirMS: &film, Wet: &yes}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &yes, RH: ptr(100.0)}, true},
		{"cold, towards cold: it evaporates", Rest, 19.5, Colder, Exposure{Surface: StillAir}, Exposure{Wet: &yes, RH: ptr(0.0)}, true},
		{"between the ends of the air", Store, 22, Hotter, Exposure{Surface: StillAir, Wet: &no}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &no, RH: ptr(100.0)}, true},
		{"hot, dry: nothing evaporates", HoldHot, 70, Colder, Exposure{Surface: StillAir, Wet: &no}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0), Wet: &no}, true},
		{"cold, dry: vapour condenses", Store, 3, Hotter, Exposure{Surface: StillAir, Wet: &no}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &no, RH: ptr(100.0)}, true},
		{"cold, humidity typed: nothing evaporates", Store, 19.5, Hotter, Exposure{Surface: StillAir, RH: &rh}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), RH: &rh}, true},
		{"cold, damp, film typed: vapour condenses", Store, 19.5, Hotter, Exposure{Surface: StillAir, FilmW: &film, RH: &damp}, Exposure{FilmW: &film, RadiatingC: ptr(24.0), Wet: &yes, RH: &damp}, true},
		{"wrapped", Rest, 70, Colder, Exposure{Surface: StillAir, Cover: TightWrap, WrapM2KW: &wrap}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0)}, true},
		{"film varied already", Rest, 70, Colder, Exposure{Surface: StillAir, Wet: &no, FilmFactor: 0.8}, Exposure{FilmFactor: 1, RadiatingC: ptr(20.0), Wet: &no}, true},
		{"all typed", Rest, 70, Colder, Exposure{Surface: StillAir, FilmW: &film, RadiatingC: &walls, Wet: &yes, RH: &rh}, Exposure{FilmW: &film, RadiatingC: &walls, Wet: &yes, RH: &rh}, false},
		{"water", HoldHot, 70, Colder, Exposure{Surface: WaterBath}, Exposure{FilmW: ptr(1000.0)}, true},
		{"a film for everything", Rest, 70, Colder, Exposure{Surface: Film, FilmW: &film}, Exposure{FilmW: &film}, false},
		{"chilling before a heating", Cool, 70, Colder, Exposure{Surface: StillAir, Wet: &no}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(20.0), Wet: &no}, true},
		{"the last chill", Cool, 70, Earlier, Exposure{Surface: StillAir}, Exposure{}, false},
		{"chilling", Cool, 70, Hotter, Exposure{Surface: StillAir}, Exposure{}, false},
		{"a chill that warms", Cool, 19.5, Hotter, Exposure{Surface: StillAir}, Exposure{FilmFactor: 1.25, RadiatingC: ptr(24.0), Wet: &yes, RH: ptr(100.0)}, true},
		{"cooking", Cook, 10, Colder, Exposure{Surface: StillAir, Wet: &yes}, Exposure{Wet: &yes}, false},
		{"cooking wet, before a chill: in damp air", Cook, 10, Hotter, Exposure{Surface: MovingAir, AirMS: &film, RadiatingC: &walls, Wet: &yes}, Exposure{FilmFactor: 1.25, RadiatingC: &walls, Wet: &yes, RH: ptr(100.0)}, true},
		{"cooking, before a chill", Cook, 10, Hotter, Exposure{Surface: StirredWater}, Exposure{FilmW: ptr(1000.0)}, true},
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
			out, open := Drifted(&p, steps, ran, x.to)
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

// TestSideTakes: a chill is slow and safe for itself, not for a heating that comes after it nor, where a colder one follows, for a clock that starts in it.
func TestSideTakes(t *testing.T) {
	chain := []Step{{Stage: Cook}, {Stage: Rest}, {Stage: Cool}, {Stage: Freeze}, {Stage: Store}, {Stage: Reheat}}
	for side, want := range map[Drift]string{Colder: "-xxxx-", Earlier: "-xx-x-", Hotter: "xxxxxx"} {
		got := ""
		for i := range chain {
			if side.Takes(chain, i) {
				got += "x"
			} else {
				got += "-"
			}
		}
		if got != want {
			t.Errorf("side %d takes %s, want %s", side, got, want)
		}
	}
}
