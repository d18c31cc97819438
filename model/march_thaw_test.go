package model

import (
	"math"
	"testing"
)

// fromFrozen cooks a food from frozen, chills it, freezes it and thaws it, each step for several times the time that heat takes through it.
func fromFrozen(shape *Shape, sizeM, filmW float64) (*Product, []Step) {
	tau := sizeM * sizeM / 4 / 1.3e-7
	return &Product{Name: "p", Food: freezingFood(), StartC: -18, Shape: shape, Size: Size{ThicknessM: sizeM, DiameterM: sizeM}}, []Step{
		{Name: "cook", Stage: Cook, DurationS: 2 * tau, Exposure: filmTo(filmW, 140)},
		{Name: "chill", Stage: Cool, DurationS: 2 * tau, Exposure: filmTo(50, 2)},
		{Name: "freeze", Stage: Freeze, DurationS: 6 * tau, Exposure: filmTo(30, -35)},
		{Name: "thaw", Stage: Thaw, DurationS: 6 * tau, Exposure: filmTo(12, 8)},
	}
}

// Ice of one direction: what a history states holds at all nodes and times but beside the front, against a march of many times the volumes.
func TestStatedErrorOfIceIsHonest(t *testing.T) {
	if testing.Short() {
		t.Skip("long")
	}
	for _, c := range []struct {
		shape        *Shape
		sizeM, filmW float64
	}{{Slab, 0.088, 30}, {Slab, 0.012, 150}, {Cylinder, 0.036, 100}, {Cylinder, 0.014, 40}, {Sphere, 0.038, 60}, {Sphere, 0.11, 20}} {
		p, steps := fromFrozen(c.shape, c.sizeM, c.filmW)
		h, err := Solve(*p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		e := effort{more: 9, tolK: 1e-3}
		s, _ := readyMarch(t, p, steps, e)
		_, fine := s.marchOnce(e)
		off := h.field.(*marched).differs(h, fine)
		t.Logf("%s of %g mm: stated %.4f K, true %.4f K", c.shape.Name, c.sizeM*1000, h.ErrorK, off)
		if off > 2*h.ErrorK+0.002 || h.ErrorK > 0.5 {
			t.Errorf("%s of %g mm: stated %.4f K, true %.4f K", c.shape.Name, c.sizeM*1000, h.ErrorK, off)
		}
	}
}

// The cubics that a track keeps between two instants are as right as the instants: over the end of thawing, where a food warms many times as fast
// as before, no step is longer than they can follow.
func TestTrackFollowsTheEndOfThawing(t *testing.T) {
	p, steps := fromFrozen(Slab, 0.088, 30)
	march := func(e effort) *marched {
		s, _ := readyMarch(t, p, steps, e)
		_, f := s.marchOnce(e)
		return f
	}
	f, fine := march(effort{more: 2, tolK: 6e-3}), march(effort{more: 2, tolK: 5e-4})
	mine, other := make([]float64, f.track.n), make([]float64, f.track.n)
	worst := 0.0
	last := f.track.times[len(f.track.times)-1]
	for at := last - steps[3].DurationS + 30; at < last; at += 60 {
		f.track.all(f.track.find(at), mine)
		fine.track.all(fine.track.find(at), other)
		for j := range mine {
			worst = max(worst, math.Abs(mine[j]-other[j]))
		}
	}
	t.Logf("%.4f K off", worst)
	if worst > 0.06 {
		t.Errorf("%.3f K off", worst)
	}
}

// No ice of one direction is refused, whatever its freezing point, start and surface: a face may be held at a temperature or a course, and food may
// start at its freezing point. Layers with held faces are marched too, ice or none.
func TestIceIsNotRefused(t *testing.T) {
	held := func(c ...float64) Exposure {
		e := Exposure{Surface: Held, Medium: Course{C: c}}
		if len(c) > 1 {
			e.Medium.TimesS = []float64{0, 3000}
		}
		return e
	}
	dry := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -60, HighC: 260, Waterless: true, Props: func(c float64) Properties {
		return Properties{0.45 + 0.002*c, 1000, 3200 + 6*c}
	}}
	for _, tf := range []float64{-0.005, -0.03, -0.06, -0.1, -1.1} {
		icy := iceLaw{1050, 3500, 1900, 227e3, tf, 0.48, 1.55}.food("test food", "input of the test", 150)
		for _, start := range []float64{tf, -18} {
			for _, e := range [][2]Exposure{{filmTo(30, -30), filmTo(30, 90)}, {filmTo(2000, -30), filmTo(2000, 90)}, {held(-30), held(90)}, {held(-5, -30), held(4, 90)}} {
				for _, shape := range []*Shape{Slab, Sphere, LayeredSlab} {
					p := Product{Name: "p", Food: icy, StartC: start, Shape: shape, Size: Size{ThicknessM: 0.04, DiameterM: 0.04}}
					if shape == LayeredSlab {
						p.Food, p.Layers = nil, []Layer{{Food: icy, ThicknessM: 0.025, BelowM2KW: 0.001}, {Food: dry, ThicknessM: 0.015}}
					}
					steps := []Step{{Name: "freeze", Stage: Freeze, DurationS: 3000, Exposure: e[0]}, {Name: "cook", Stage: Cook, DurationS: 3000, Exposure: e[1]}}
					if _, err := Solve(p, steps, Options{Rough: true}); err != nil {
						t.Errorf("freezing point %g °C, start %g °C, %s in %s: %v", tf, start, shape.Name, e[0].Surface.Name, err)
					}
				}
			}
		}
	}
	for _, e := range []Exposure{held(90), held(20, 90)} {
		p := Product{Name: "p", Shape: LayeredSlab, StartC: 5, Size: Size{ThicknessM: 0.04}, Layers: []Layer{{Food: dry, ThicknessM: 0.025, BelowM2KW: 0.001}, {Food: dry, ThicknessM: 0.015}}}
		h, err := Solve(p, []Step{{Name: "cook", Stage: Cook, DurationS: 3000, Exposure: e}}, Options{})
		if err != nil {
			t.Error(err)
		} else if n := len(h.field.(*marched).track.times); n > 400 {
			t.Errorf("%d instants", n)
		}
	}
}
