package rules

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"slowpoint/model"
)

// swung is a food of any shape that is heated and chilled in turns, with places drawn at random as its points.
func swung(t *testing.T, draw *rand.Rand, shape *model.Shape, places int) *model.History {
	t.Helper()
	within := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	var size model.Size
	a, b := within(0.02, 0.045), within(0.02, 0.06)
	switch shape {
	case model.Slab:
		size.ThicknessM = a
	case model.Sphere, model.Cylinder:
		size.DiameterM = 1.6 * a
	case model.ShortCylinder:
		size.DiameterM, size.LengthM = 1.6*a, b
	case model.Spheroid:
		size.DiameterM, size.ThicknessM = 1.4*a, b
	}
	var steps []model.Step
	swing := func(s *model.Stage, turns int, warmC, coldC, longest float64) {
		for i := range turns {
			c := warmC
			if i%2 == 1 {
				c = coldC
			}
			steps = append(steps, filmStep(s, math.Round(within(0.3, 1)*longest), c+within(-5, 5), within(8, 60)))
		}
	}
	swing(model.Cook, 3+draw.IntN(3), 90, 40, 40)
	swing(model.Cool, 3+draw.IntN(3), 6, 45, 70)
	if draw.IntN(2) == 0 {
		swing(model.Reheat, 3, 85, 45, 30)
		swing(model.Cool, 1, 6, 6, 90)
	}
	h := solve(t, shape, size, within(3, 15), steps...)
	for i := range places {
		up, across, share := within(-1, 1), within(0, 1), 1.0
		if draw.IntN(3) == 0 {
			up = math.Copysign(1, up)
		}
		p := model.Place{UpM: up * size.ThicknessM / 2}
		switch shape {
		case model.Sphere, model.Cylinder:
			p = model.Place{UpM: across * size.DiameterM / 2}
		case model.ShortCylinder:
			p = model.Place{UpM: up * size.LengthM / 2, AcrossM: across * size.DiameterM / 2}
		case model.Spheroid:
			if draw.IntN(3) > 0 {
				share = math.Cbrt(draw.Float64())
			}
			p = model.Place{UpM: up * share * size.ThicknessM / 2, AcrossM: math.Sqrt(1-up*up) * share * size.DiameterM / 2}
		}
		h.Points = append(h.Points, model.Point{Name: fmt.Sprint("p", i), Place: p})
	}
	return h
}

// pivot makes a limit of each kind whose value may leap such that it leaps at one of the places: by one of the turns of its course there, the length of
// a period, or two peaks that are equally high.
func pivot(draw *rand.Rand, h *model.History, p model.Place) []Limit {
	d := readEvery(h, p, 10)
	var troughs, peaks []int
	for i := 1; i+1 < len(d.c); i++ {
		switch a, b := d.c[i]-d.c[i-1], d.c[i+1]-d.c[i]; {
		case a < 0 && b >= 0:
			troughs = append(troughs, i)
		case a > 0 && b <= 0:
			peaks = append(peaks, i)
		}
	}
	if len(troughs) == 0 || len(peaks) == 0 {
		return nil
	}
	low, high := d.c[troughs[draw.IntN(len(troughs))]], d.c[peaks[draw.IntN(len(peaks))]]
	count := []Counting{Continuous, Total}[draw.IntN(2)]
	// how long the first period at or above from lasts
	lasts := func(from float64, above bool) float64 {
		on := -1
		for i, c := range d.c {
			if in := (c >= from) == above; in && on < 0 && i > 0 {
				on = i
			} else if !in && on >= 0 {
				return d.t[i] - d.t[on]
			}
		}
		return 60
	}
	heat, chill := math.Round(high-3), math.Round(low+3)
	second, first := lasts(heat, true), lasts(chill, false)
	return []Limit{
		{Kind: Hold, FromC: c(low), Counting: Continuous},
		{Kind: Hold, FromC: c(low), Counting: Total},
		{Kind: Hold, ToC: c(high), Counting: Continuous},
		{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: low, S: 60}, {C: 150, S: 1}}}, Counting: Continuous},
		{Kind: Band, FromC: c(5), ToC: c(high), Counting: count},
		{Kind: StayAbove, FromC: c(low), Counting: count},
		{Kind: HeatWithin, ToC: c(heat), SecondS: &second, Clock: Clock{Start: model.Cook}},
		{Kind: HeatWithin, FromC: c(high), ToC: c(high + 4), Clock: Clock{Crossing: true}},
		{Kind: CoolWithin, FromC: c(high - 4), ToC: c(high - 20), Clock: Clock{Crossing: true}},
		{Kind: CoolWithin, FromC: c(low), ToC: c(low - 10), Clock: Clock{Crossing: true}},
		{Kind: FreezeHold, FromC: c(chill), TimeS: &first, ToC: c(high), SecondS: min_(1)},
	}
}

// leastAt is the value of the place among the points of a history that is least favourable, and which one that is; NaN for none.
func leastAt(t *testing.T, l Limit, h *model.History, needed bool) (worst float64, at string) {
	worst = math.NaN()
	for _, p := range h.Points {
		l.Where.Name = p.Name
		f := one(t, l, h)
		if f.Value == nil || f.Verdict == NotApplicable {
			continue
		}
		if v := *f.Value; math.IsNaN(worst) || needed && v < worst || !needed && v > worst {
			worst, at = v, p.Name
		}
	}
	return worst, at
}

// No place of foods that are heated and chilled in turns, where periods join, break and come back, decides a limit to the worse than is told: of each
// kind whose value may leap, leaping at one of the places, at places drawn at random and by the very measure. The margin in K keeps every
// place as well.
func TestNoPlaceIsWorse(t *testing.T) {
	draw := rand.New(rand.NewPCG(11, 7))
	shapes := []*model.Shape{model.Slab, model.Spheroid, model.Slab, model.ShortCylinder, model.Slab, model.Spheroid, model.Cylinder}
	cases, margins := 0, 0
	for n := range 21 {
		h := swung(t, draw, shapes[n%len(shapes)], 80)
		for i, l := range pivot(draw, h, h.Points[draw.IntN(len(h.Points))].Place) {
			needed := l.Kind == Hold || l.Kind == HoldTable || l.Kind == FreezeHold
			of := func(s float64) Limit {
				l := l
				switch l.Kind {
				case FreezeHold:
					l.SecondS = &s
				case HoldTable:
					l.Table = &Table{Name: "T", Rows: append([]Row(nil), l.Table.Rows...)}
					l.Table.Rows[0].S = s
				default:
					l.TimeS = &s
				}
				return l
			}
			if l.Kind == Hold && l.ToC != nil || l.Kind == StayAbove {
				l.Stages = []*model.Stage{model.Cool}
			}
			worst, at := leastAt(t, of(60), h, needed)
			if !(worst > 1) {
				continue
			}
			cases++
			missed, kept := worst*0.996-0.1, worst*1.15+1
			if needed {
				missed, kept = worst*1.004+0.1, math.Max(worst*0.85-0.5, 0.2)
			}
			if f := one(t, of(60*missed), h); f.Verdict == Met {
				t.Errorf("%d.%d, %s %s: met with %.3f at %v, and %s has %.3f min where %.3f is asked", n, i, h.Product.Shape.Name, l.Kind.Name, *f.Value, *f.Place, at, worst, missed)
			}
			f := one(t, of(60*kept), h)
			if f.Verdict != Met || f.MarginK == nil || *f.MarginK < 0.06 {
				continue
			}
			margins++
			k := 0.98**f.MarginK - 0.03
			moved := of(60 * kept)
			switch {
			case l.Kind == HoldTable:
				moved.Table.Rows[0].C += k
				moved.Table.Rows[1].C += k
			case l.Kind == Band:
				moved.FromC = c(*l.FromC - k)
			case l.Kind == HeatWithin:
				moved.ToC = c(*l.ToC + k)
			case l.ToC != nil:
				moved.ToC = c(*l.ToC - k)
			default:
				moved.FromC = c(*l.FromC + k)
			}
			for _, p := range h.Points {
				moved.Where.Name = p.Name
				if g := one(t, moved, h); g.Verdict == NotMet && g.MarginK != nil && *g.MarginK < -0.02 {
					t.Errorf("%d.%d, %s %s: margin %.3f K, and %s misses by %.3f K with %.3f K of it", n, i, h.Product.Shape.Name, l.Kind.Name, *f.MarginK, p.Name, -*g.MarginK, k)
					break
				}
			}
		}
	}
	t.Logf("%d cases, %d margins", cases, margins)
	if cases < 150 || margins < 80 {
		t.Errorf("%d cases, %d margins: the cases do not show what they should", cases, margins)
	}
}
