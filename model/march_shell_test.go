package model

import (
	"math"
	"testing"
)

// Confocal coordinates go to places and back, and their volumes and faces add up to those of the spheroid.
func TestConfocalCoordinates(t *testing.T) {
	for _, m := range []spheroidMap{{0.06, 0.02}, {0.02, 0.07}, {0.031, 0.03}, {0.03, 0.03}} {
		q := m.shells()
		for _, x := range []coord{{1, 0}, {1, 1}, {0.4, 0.3}, {0.9, 0.99}, {0.1, 0.6}} {
			if got := q.coord(q.place(x)); math.Abs(got[0]-x[0]) > 1e-9 || math.Abs(got[1]-x[1]) > 1e-7 {
				t.Errorf("%+v: %v came back as %v", m, x, got)
			}
		}
		if p := q.place(q.coord(Place{})); math.Hypot(p.UpM, p.AcrossM) > 1e-9 {
			t.Errorf("%+v: the centre came back as %+v", m, p)
		}
		march, _ := newShellMarch(q, [2]int{9, 7}, newLaw(icyFood(), 1), 5)
		volume, face := 0.0, 0.0
		for _, w := range march.w {
			volume += w
		}
		for _, w := range march.faceM2 {
			face += w
		}
		if want := m.a * m.b * m.b / 3; math.Abs(volume-want) > 1e-12*want {
			t.Errorf("%+v: volume %g, want %g", m, volume, want)
		}
		if want := spheroidM2(2*m.a, 2*m.b) / (4 * math.Pi); math.Abs(face-want) > 1e-9*want {
			t.Errorf("%+v: face %g, want %g", m, face, want)
		}
	}
}

// Ice in a spheroid tends to that in the bodies that it comes to: all but a sphere and exactly one, a long cylinder in its middle, a slab in its
// middle; those are lines, with other volumes. A flat one still gains heat
// from its rim.
func TestIceInASpheroidTendsToThatInOneDirection(t *testing.T) {
	steps := []Step{ownStep(Thaw, 9000, 20, 10), ownStep(Freeze, 9000, 40, -30), ownStep(Cook, 3000, 25, 150)}
	for _, c := range []struct {
		name      string
		size, one Size
		shape     *Shape
		mostK     float64 // beside what both state: what the shapes differ by
	}{
		{"a sphere", Size{ThicknessM: 0.05, DiameterM: 0.05}, Size{DiameterM: 0.05}, Sphere, 0},
		{"nearly, long", Size{ThicknessM: 0.0505, DiameterM: 0.0495}, Size{DiameterM: 0.0495 * 1.00667}, Sphere, 0},
		{"nearly, flat", Size{ThicknessM: 0.0495, DiameterM: 0.0505}, Size{DiameterM: 0.0505 * 0.99333}, Sphere, 0},
		{"long", Size{ThicknessM: 0.4, DiameterM: 0.04}, Size{DiameterM: 0.04}, Cylinder, 0.8},
		{"flat", Size{ThicknessM: 0.03, DiameterM: 0.3}, Size{ThicknessM: 0.03}, Slab, 3},
	} {
		t.Run(c.name, func(t *testing.T) {
			var h [2]*History
			for i, p := range []Product{{Shape: Spheroid, Size: c.size}, {Shape: c.shape, Size: c.one}} {
				p.Name, p.Food, p.StartC = "p", icyFood(), -18
				var err error
				if h[i], err = Solve(p, steps, Options{}); err != nil {
					t.Fatal(err)
				}
			}
			worst := 0.0
			for _, sp := range h[0].Spans {
				for at := sp.StartS + 300; at <= sp.EndS; at += 100 {
					if !atIce(h[0], Place{}, at) && !atIce(h[1], Place{}, at) {
						worst = max(worst, math.Abs(h[0].At(Place{}, at)-h[1].At(Place{}, at)))
					}
				}
			}
			t.Logf("%.4f K apart; stated %.4f and %.4f K", worst, h[0].ErrorK, h[1].ErrorK)
			if worst > h[0].ErrorK+h[1].ErrorK+c.mostK {
				t.Errorf("%.4f K apart", worst)
			}
		})
	}
}

// Where nothing freezes the volumes of a spheroid that may freeze come to the method that is exact in time.
func TestVolumesOfASpheroidAgreeWithTheExactMethod(t *testing.T) {
	for _, c := range []struct {
		size  Size
		mostK float64 // 1.6 times what was found
	}{{Size{ThicknessM: 0.12, DiameterM: 0.08}, 0.23}, {Size{ThicknessM: 0.06, DiameterM: 0.1}, 0.15}} {
		q := Properties{KWmK: 0.5, RhoKgM3: 1040, CJkgK: 3600}
		food := func(table bool) *Material {
			return &Material{Name: "test food", Source: "input of the test", LowC: -40, HighC: 150, Table: table, Props: func(float64) Properties { return q }}
		}
		steps := []Step{ownStep(Cook, 6000, 25, 150), ownStep(Cool, 6000, 15, 3)}
		p := Product{Name: "p", Food: food(false), StartC: 8, Shape: Spheroid, Size: c.size}
		want, err := Solve(p, steps, Options{})
		if err != nil || want.Spans[0].Method != ExactInTime {
			t.Fatal(err)
		}
		p.Food = food(true)
		e := effort{more: 1, tolK: 0.02}
		s, _ := readyMarch(t, &p, steps, e)
		s.front = true // volumes, though no ice will come
		got, f := s.marchOnce(e)
		if _, ok := f.state.(*shellMarch); !ok {
			t.Fatalf("marched by %T", f.state)
		}
		worst := apartK(want, got)
		t.Logf("%.4f K apart", worst)
		if worst > c.mostK {
			t.Errorf("%+v: %.4f K apart", c.size, worst)
		}
	}
}

// A face that is kept at a temperature freezes and thaws as one in a very strong film does.
func TestIceInASpheroidWithItsFaceHeld(t *testing.T) {
	held := func(c, s float64, stage *Stage) Step {
		return Step{Name: "held", Stage: stage, DurationS: s, Exposure: Exposure{Surface: Held, Medium: Course{C: []float64{c}}}}
	}
	var h [2]*History
	for i, steps := range [][]Step{{held(6, 4000, Thaw), held(-30, 4000, Freeze)}, {ownStep(Thaw, 4000, 1e5, 6), ownStep(Freeze, 4000, 1e5, -30)}} {
		var err error
		p := Product{Name: "p", Food: icyFood(), StartC: -18, Shape: Spheroid, Size: Size{ThicknessM: 0.06, DiameterM: 0.04}}
		if h[i], err = Solve(p, steps, Options{}); err != nil {
			t.Fatal(err)
		}
	}
	worst := apartK(h[0], h[1])
	t.Logf("%.4f K apart; stated %.4f and %.4f K", worst, h[0].ErrorK, h[1].ErrorK)
	if worst > h[0].ErrorK+h[1].ErrorK {
		t.Errorf("%.4f K apart", worst)
	}
}
