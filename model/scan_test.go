package model

import (
	"math"
	"testing"
)

// What a scan says of a spot is what is read at its place: of a joint of layers on the side of the spot. Its axes lead to its place and back.
func TestSpotsAreWhereTheyAreRead(t *testing.T) {
	linear := &Material{Name: "test food", Source: "input of the test", Props: func(float64) Properties { return Properties{0.4, 1000, 3500} }}
	jump := Product{Name: "two plates", Shape: LayeredSlab, Size: Size{ThicknessM: 0.03}, StartC: 5,
		Layers: []Layer{{Food: linear, ThicknessM: 0.02, BelowM2KW: 0.04}, {Food: linear, ThicknessM: 0.01}}}
	spots := func(t *testing.T, p Product, steps []Step) {
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		sc := h.Scan()
		for i, s := range sc.Spots {
			allowed := 1e-6
			if p.Shape == LayeredSlab {
				allowed += beyondM * 1e4 // a place beside a joint stands that far off its node, in food no steeper than 10 K/mm
			}
			if p.Shape == Spheroid && s.Place == (Place{}) {
				allowed = 1e-2 // where all lines from the equator to the poles meet, a march knows one temperature for each
			}
			for k := 1; k < len(sc.TimesS); k += 7 {
				if got := h.At(s.Place, sc.TimesS[k]); math.Abs(got-sc.C[i][k]) > allowed {
					t.Fatalf("spot %d at %v, %.0f s: %.6f °C at its place, %.6f in the scan", i, s.Place, sc.TimesS[k], got, sc.C[i][k])
				}
			}
			at := h.PlaceAt(s.Axes)
			if d := math.Hypot(at.UpM-s.UpM, math.Hypot(at.AcrossM-s.AcrossM, at.AlongM-s.AlongM)); d > 1e-12 {
				t.Fatalf("spot %d at %v: its axes lead to %v", i, s.Place, at)
			}
			if back := h.PlaceAt(h.Axes(s.Place)); math.Abs(back.UpM-s.UpM) > 1e-12 || math.Abs(back.AcrossM-s.AcrossM) > 1e-12 {
				t.Fatalf("spot %d at %v: the axes of its place lead to %v", i, s.Place, back)
			}
		}
	}
	t.Run("two plates", func(t *testing.T) {
		spots(t, jump, []Step{ownStep(Cook, 1500, 40, 100), ownStep(Cool, 3000, 30, 3)})
	})
	eachDrawn(t, 1, marchedShapes, func(t *testing.T, d *drawn) { spots(t, d.Product, d.steps) })
}
