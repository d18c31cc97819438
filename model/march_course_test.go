package model

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model/cell"
)

// logged is a course as a thermostat and a logger make it: a row a minute, up and down by some K, to a tenth of a degree and a whole per cent.
// The numbers are input of the test.
func logged(meanC, rhPc float64, rows int) Course {
	c := Course{Name: "log"}
	seed := uint32(7)
	noise := func() float64 {
		seed = seed*1664525 + 1013904223
		return float64(seed>>8)/(1<<24) - 0.5
	}
	for i := 0; i <= rows; i++ {
		turn := 2 * math.Pi * float64(i) / 11
		c.TimesS = append(c.TimesS, 60*float64(i))
		c.C = append(c.C, math.Round(10*(meanC+2.5*math.Sin(turn)+1.4*noise()))/10)
		if rhPc > 0 {
			c.RH = append(c.RH, math.Round(rhPc+4*math.Sin(turn+1)+3*noise()))
		}
	}
	return c
}

// loggedFoods are foods of each march in logged surroundings.
func loggedFoods(rows int) []drawn {
	aw := 0.98
	plain := &Material{Name: "moist food", Source: "input of the test", WaterActivity: &aw, Props: func(float64) Properties { return Properties{0.5, 1050, 3500} }}
	follows := &Material{Name: "food of a table", Source: "input of the test", Table: true, LowC: -50, HighC: 210, Props: func(c float64) Properties {
		return Properties{0.46 + 0.0009*c, 1060 - 0.3*c, 3500 + 1.1*c}
	}}
	air := func(m Course) Exposure {
		e := Exposure{Surface: MovingAir, AirMS: ptr(2.0), Wet: ptr(true), Medium: m}
		if m.RH == nil {
			e.RH = ptr(60.0)
		}
		return e
	}
	humid := air(logged(85, 60, rows))
	for i := range humid.Medium.C {
		humid.Medium.C[i] = 85
	}
	shine := air(logged(85, 0, rows))
	shine.Wet, shine.RH, shine.RadiatingC = ptr(false), nil, ptr(90.0)
	film := func(c float64) Exposure {
		return Exposure{Surface: Film, FilmW: ptr(25.0), Medium: logged(c, 0, rows)}
	}
	food := func(name string, shape *Shape, z Size, f *Material, stage *Stage, e Exposure) drawn {
		st := Step{Name: "log", Stage: stage, DurationS: 60 * float64(rows), Exposure: e}
		st.At = cell.Ref{Sheet: "Steps", Row: 4}
		return drawn{Product: Product{Name: name, Shape: shape, Size: z, Food: f, StartC: 8}, steps: []Step{st}, freezes: stage == Freeze}
	}
	bar, brick := Size{ThicknessM: 0.05, WidthM: 0.08}, Size{ThicknessM: 0.08, WidthM: 0.1, LengthM: 0.2}
	return []drawn{
		food("wet slab", Slab, Size{ThicknessM: 0.05}, plain, Cook, air(logged(85, 60, rows))),
		food("wet slab in air as warm throughout", Slab, Size{ThicknessM: 0.05}, plain, Cook, humid),
		food("wet cylinder", Cylinder, Size{DiameterM: 0.07}, plain, Cook, air(logged(85, 60, rows))),
		food("wet bar", Bar, bar, plain, Cook, air(logged(85, 60, rows))),
		food("wet brick", Brick, brick, plain, Cook, air(logged(85, 60, rows))),
		food("radiating bar", Bar, bar, plain, Cook, shine),
		food("brick of a table", Brick, brick, follows, Cook, film(85)),
		food("held slab of a table", Slab, Size{ThicknessM: 0.05}, follows, Cook, Exposure{Surface: Held, Medium: logged(85, 0, rows)}),
		food("slab that freezes", Slab, Size{ThicknessM: 0.05}, freezingFood(), Freeze, film(-25)),
	}
}

// The stated error of a food in logged surroundings holds against a march in much shorter steps, at all instants and not only at the rows, and
// a row costs a few instants: steps through it begin nothing anew.
func TestLoggedSurroundings(t *testing.T) {
	const rows = 60
	for _, d := range loggedFoods(rows) {
		t.Run(d.Name, func(t *testing.T) {
			h, err := Solve(d.Product, d.steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			e := effort{more: 1.5, tolK: 2e-4}
			if d.Shape == Brick {
				e = effort{more: 1.25, tolK: 1e-3}
			}
			fine := marchOnceFor(t, d.Product, d.steps, e)
			var times []float64
			for at := h.settle; at < h.EndS(); at += 37 {
				times = append(times, at)
			}
			off := 0.0
			x, y := make([]float64, len(times)), make([]float64, len(times))
			for _, spot := range h.Scan().Spots {
				h.Course(spot.Place, times, x)
				fine.Course(spot.Place, times, y)
				for i := range x {
					if !atIce(h, spot.Place, times[i]) && !atIce(fine, spot.Place, times[i]) {
						off = max(off, math.Abs(x[i]-y[i]))
					}
				}
			}
			kept := len(h.field.(*marched).track.times)
			t.Logf("stated %.4f K, true %.4f K, %d instants", h.ErrorK, off, kept)
			if off > 1.1*h.ErrorK {
				t.Errorf("stated %.4f K, true %.4f K", h.ErrorK, off)
			}
			if h.ErrorK > 0.02 {
				t.Errorf("stated %.4f K", h.ErrorK)
			}
			if kept > 8*rows {
				t.Errorf("%d instants", kept)
			}
		})
	}
}

// Ten thousand rows of a log in one direction are calculated; in three the rows are too many, which is said before anything is marched, with how
// many can be.
func TestLongLogs(t *testing.T) {
	for _, d := range loggedFoods(10000) {
		switch d.Shape {
		case Slab, Cylinder:
			if _, err := Solve(d.Product, d.steps, Options{}); err != nil {
				t.Errorf("%s: %v", d.Name, err)
			}
		case Brick:
			s := &solver{product: &d.Product, steps: d.steps, options: Options{ConductivityFactor: 1}, tmp: new(scratch)}
			s.layOut()
			_, err := s.march()
			if err == nil || !strings.Contains(err.Error(), "change their slope") || !strings.Contains(err.Error(), "leave out rows") || !strings.Contains(err.Error(), "Steps") {
				t.Errorf("%s: %v", d.Name, err)
			}
			if kept := len(s.main.(*marched).track.times); kept > 0 {
				t.Errorf("%s: refused after %d instants", d.Name, kept)
			}
		}
	}
}
