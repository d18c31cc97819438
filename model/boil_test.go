package model

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"slowpoint/model/cell"
)

// A food that would be above boiling water by more than 5 K at its coldest place is warned of, at the step whose surroundings did it.
// Boiling at 2000 m: 93.3 °C (ICAO standard atmosphere and steam tables, from memory; the model's own formula is held in air_test.go).
func TestSolveWarnsOfBoilingThroughout(t *testing.T) {
	oven := func(steps []Step, c, durationS float64) {
		steps[0].Medium.C[0], steps[0].DurationS = c, durationS
	}
	for _, v := range []struct {
		name   string
		change func(*Product, []Step)
		row    int    // of Steps; 0: it is calculated
		field  string // of the message
		says   []string
	}{
		{"an oven of 350 °F typed as °C", func(_ *Product, s []Step) { oven(s, 350, 3700) }, 2, "Temperature",
			[]string{"P beyond boiling throughout", "(centre)", "passes 105.0 °C", "into the step bake", "boils at 100.0 °C at 0 m", "without evaporation", "°F typed"}},
		{"until the surface alone boils", func(_ *Product, s []Step) { oven(s, 350, 1500) }, 0, "", nil},
		{"an oven that does not get it there", func(_ *Product, s []Step) { oven(s, 104.6, 90000) }, 0, "", nil},
		{"as hot, on a mountain", func(_ *Product, s []Step) { oven(s, 104.6, 90000); s[0].AltitudeM = 2000 }, 2, "Temperature", []string{"boils at 93.", "at 2000 m"}},
		{"no hotter than boiling there by 5 K", func(_ *Product, s []Step) { oven(s, 97.9, 90000); s[0].AltitudeM = 2000 }, 0, "", nil},
		{"stirred", func(p *Product, s []Step) {
			p.Shape, p.Size = Stirred, Size{VolumeM3: 0.015, AreaM2: 0.32}
			oven(s, 212, 9000)
		}, 2, "Temperature", []string{"anywhere: one temperature throughout"}},
		{"one face alone", func(_ *Product, s []Step) {
			oven(s, 98, 40000)
			hot := s[0].Exposure
			hot.At, hot.Medium = cell.Ref{Sheet: "Faces", Row: 5}, Course{C: []float64{240}}
			s[0].Faces = []FaceExposure{{Face: Underside, Exposure: hot}}
			s[0].Medium.C[0] = 108
		}, 5, "Temperature", []string{"top"}},
		{"in the rest, of a crust that was too hot", func(_ *Product, s []Step) {
			oven(s, 600, 1100)
			s[1].Exposure = Exposure{At: s[1].At, Surface: Insulated}
		}, 2, "Temperature", []string{"into the step blast"}},
		{"walls that radiate", func(_ *Product, s []Step) {
			s[0].Exposure = Exposure{At: s[0].At, Surface: StillAir, Wet: ptr(false), Medium: Course{C: []float64{95}}, RadiatingC: ptr(350.0)}
			s[0].DurationS = 9000
		}, 2, "Radiating temperature", []string{"into the step bake"}},
		{"a peak in a course", func(_ *Product, s []Step) {
			s[0].Medium, s[0].DurationS = Course{Name: "peak", TimesS: []float64{0, 3600, 3700, 20000}, C: []float64{300, 300, 20, 20}}, 20000
		}, 2, "Course", []string{"into the step bake"}},
	} {
		t.Run(v.name, func(t *testing.T) {
			p, steps := plain()
			v.change(&p, steps)
			if found := Check(p, steps); found.Faults() > 0 {
				t.Fatalf("the case is to be one that Check lets pass: %v", found)
			}
			h, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			es := h.Warnings
			switch {
			case v.row == 0 && len(es) > 0:
				t.Fatal(es)
			case v.row == 0:
				for i := range h.Spans { // what is let pass is not beyond boiling by more than 5 K
					s := h.Sample(60)
					for k, c := range s.Coldest {
						if s.TimesS[k] <= h.Spans[i].EndS && c > 105 {
							t.Errorf("%g °C at %g s", c, s.TimesS[k])
						}
					}
				}
				return
			case len(es) != 1 || es[0].Level != cell.Warning || es[0].At.Row != v.row || es[0].Field != v.field || es[0].Typed == "":
				t.Fatalf("%v", es)
			}
			for _, w := range v.says {
				if !strings.Contains(es[0].Error(), w) {
					t.Errorf("%q is not in: %v", w, es[0])
				}
			}
		})
	}
}

// The time told is the one at which the centre passes: the first term of the series of a slab with its Biot number and Fourier number
// (Carslaw and Jaeger 1959, section 3.11, from memory), which is exact to a second so late.
func TestBoilingTellsWhen(t *testing.T) {
	p, steps := plain()
	steps[0].Medium.C[0], steps[0].DurationS = 350, 3700
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	k, rc, half, u := 0.51, 1040*3600.0, 0.0215, 27.0
	biot, zeta := u*half/k, 1.0
	for range 200 { // ζ·tan ζ = Bi
		zeta -= (zeta*math.Tan(zeta) - biot) / (math.Tan(zeta) + zeta/math.Pow(math.Cos(zeta), 2))
	}
	c1 := 4 * math.Sin(zeta) / (2*zeta + math.Sin(2*zeta))
	at := -math.Log((350-105.0)/(350-6)/c1) / (zeta * zeta) * half * half * rc / k
	if want := fmt.Sprintf("passes 105.0 °C %.0f min into", at/60); !strings.Contains(h.Warnings.Error(), want) {
		t.Errorf("expected %q: %v", want, h.Warnings)
	}
}
