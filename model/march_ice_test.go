package model

import (
	"math"
	"testing"
)

// icyFood freezes from -1 °C on: 230 kJ/kg of ice, of the size of lean meat's (made up for the test).
func icyFood() *Material {
	return iceLaw{1050, 3500, 1950, 230e3, -1, 0.48, 1.5}.food("test food", "input of the test", 150)
}

// A volume through which a front goes is read as the mean over what lies in it: the mean heat content of Kirchhoff integrals from u-near to
// u+near, added up here in many small parts, comes back as u, frozen, thawed and in between.
func TestVolumesWithAFrontAreReadAsMeans(t *testing.T) {
	l := newLaw(icyFood(), 1)
	axis := cutAxis(planeHalf, 0.03, 4, cutCrowd, [2]*Face{})
	none := &spaceAxis{kind: lumped, n: 1}
	v := newIceVolumes([3]*spaceAxis{axis, none, none}, l, -18)
	for _, near := range []float64{0.3, 2, 9} {
		for _, u := range []float64{-20, -8, -3, -1, -0.1, 0, 0.1, 1, 3, 8, 20} {
			const parts = 20000
			mean := 0.0
			for k := range parts {
				h := l.byU().heat(u + near*(2*(float64(k)+0.5)/parts-1))
				mean += h / parts
			}
			v.near[2], v.shift[2] = near*near, 0
			got := l.kirchhoff(mean)
			for range 4 { // as the stages of a step do
				got, _ = v.invert(mean, got, 2)
			}
			if math.Abs(got-u) > 0.004*near {
				t.Errorf("u %g, near %g W/m: read as %.5f", u, near, got)
			}
		}
	}
}

// A wide bar is a slab in its middle: the march in two directions agrees with that of one axis, which has other volumes and is implicit, where no
// front is near. In films, and with the surface kept at a temperature.
func TestIceInAWideBarIsThatInASlab(t *testing.T) {
	const thickness = 0.04
	food := icyFood()
	for _, c := range []struct {
		name  string
		steps []Step
		mostK float64 // 1.6 times what was found
	}{
		{"films", []Step{ownStep(Thaw, 9000, 20, 10), ownStep(Cook, 2400, 25, 150)}, 0.15},
		{"held", []Step{{Name: "thaw", Stage: Thaw, DurationS: 4000, Exposure: Exposure{Surface: Held, Medium: Course{C: []float64{6}}}}, ownStep(Freeze, 4000, 40, -30)}, 0.035},
	} {
		t.Run(c.name, func(t *testing.T) {
			var h [2]*History
			for i, shape := range []*Shape{Slab, Bar} {
				p := Product{Name: "p", Food: food, StartC: -18, Shape: shape, Size: Size{ThicknessM: thickness}}
				if shape == Bar {
					p.Size.WidthM = 0.5
				}
				var err error
				if h[i], err = Solve(p, c.steps, Options{}); err != nil {
					t.Fatal(err)
				}
			}
			worst := 0.0
			for _, up := range []float64{0, 0.3, 0.6, 0.9, 1} {
				place := Place{UpM: up * thickness / 2}
				for _, sp := range h[0].Spans {
					for at := sp.StartS + 300; at <= sp.EndS; at += 100 {
						if !atIce(h[0], place, at) && !atIce(h[1], place, at) {
							worst = max(worst, math.Abs(h[0].At(place, at)-h[1].At(place, at)))
						}
					}
				}
			}
			t.Logf("%.4f K apart; stated %.4f and %.4f K", worst, h[0].ErrorK, h[1].ErrorK)
			if worst > c.mostK {
				t.Errorf("%.4f K apart", worst)
			}
		})
	}
}
