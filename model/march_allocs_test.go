package model

import "testing"

// A step of a march allocates nothing: control volumes of one axis, modes, and stages of more axes.
func TestMarchesAllocateNothingWithin(t *testing.T) {
	freezing := freezingFood()
	following := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -50, HighC: 250, Props: func(c float64) Properties {
		return Properties{0.46 + 0.0014*c, 1040, 3500 + 1.5*c}
	}}
	for _, c := range []struct {
		name string
		p    Product
		airC float64
	}{
		{name: "slab that freezes", p: Product{Shape: Slab, Size: Size{ThicknessM: 0.05}, Food: freezing, StartC: 7}, airC: -29},
		{name: "bar that freezes", p: Product{Shape: Bar, Size: Size{ThicknessM: 0.05, WidthM: 0.08}, Food: freezing, StartC: 7}, airC: -29},
		{name: "brick that follows", p: Product{Shape: Brick, Size: Size{ThicknessM: 0.05, WidthM: 0.08, LengthM: 0.13}, Food: following, StartC: 7}, airC: 142},
		{name: "spheroid that follows", p: Product{Shape: Spheroid, Size: Size{ThicknessM: 0.05, DiameterM: 0.08}, Food: following, StartC: 7}, airC: 142},
	} {
		t.Run(c.name, func(t *testing.T) {
			steps := []Step{{Name: "step", Stage: Freeze, DurationS: 3000, Exposure: filmTo(23, c.airC)}}
			s := &solver{product: &c.p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: scratches.Get().(*scratch)}
			defer scratches.Put(s.tmp)
			s.layOut()
			e, _ := s.firstEffort()
			f := s.newMarched(e)
			k := s.skinOf(&steps[0].Exposure, nil, &steps[0])
			f.state.surround(func(*Face) *skin { return k })
			f.state.begin(0)
			if n := testing.AllocsPerRun(20, func() { f.state.try(0, 0.5) }); n > 0 {
				t.Errorf("%g allocations a step", n)
			}
		})
	}
}
