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
