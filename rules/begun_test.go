package rules

import (
	"math"
	"math/rand"
	"sort"
	"testing"

	"slowpoint/model"
)

// begun is a recording of an exact history at one place from a step on, of which the first late seconds are not read, on the clock of that step; and
// the history at that place alone, for that time.
func begun(t testing.TB, h *model.History, pt model.Point, first int, lateS, stepS float64, gap interval) (*model.Recording, *model.History) {
	t.Helper()
	zero, end := h.Spans[first].StartS, h.EndS()
	r := &model.Recording{Point: pt, LowC: math.NaN(), HighC: math.NaN(), ErrorK: 0.05, Medium: &model.Trace{}}
	for i, sp := range h.Spans {
		if i < first {
			r.Before = append(r.Before, *sp.Step)
			continue
		}
		r.Spans = append(r.Spans, model.Span{Step: sp.Step, StartS: sp.StartS - zero, EndS: sp.EndS - zero})
	}
	truth := model.Trace{Point: model.Point{Name: "centre"}}
	for s := 0.0; s <= end-zero; s += 5 {
		truth.TimesS, truth.C = append(truth.TimesS, s), append(truth.C, h.At(pt.Place, zero+s))
	}
	for s := 0.0; s <= end-zero; s += stepS {
		r.Medium.TimesS, r.Medium.C = append(r.Medium.TimesS, s), append(r.Medium.C, h.MediumC(zero+s+1e-3))
		if s < lateS || s > gap.a && s < gap.b {
			continue
		}
		if n := len(r.C); n > 0 && s > r.TimesS[n-1]+1.5*stepS {
			r.Gaps = []int{n - 1}
		}
		r.TimesS, r.C = append(r.TimesS, s), append(r.C, h.At(pt.Place, zero+s))
	}
	exact, err := model.NewRecord(r.Spans, []model.Trace{truth}, nil)
	if err != nil {
		t.Fatal(err)
	}
	return r, exact
}

// cookings are random chains that a record may begin in the midst of, with the first step that it may begin with.
func cookings(rnd *rand.Rand) []model.Step {
	some := func(lo, hi float64) float64 { return lo + (hi-lo)*rnd.Float64() }
	steps := []model.Step{filmStep(model.Cook, some(20, 90), some(120, 230), some(10, 60))}
	if rnd.Intn(2) == 0 {
		steps = append(steps, filmStep(model.Rest, some(1, 30), some(18, 30), some(5, 10)))
	}
	steps = append(steps, filmStep(model.Cool, some(20, 200), some(0, 8), some(10, 200)))
	if rnd.Intn(2) == 0 { // half warm, and chilled once more
		steps = append(steps, filmStep(model.Reheat, some(5, 60), some(70, 180), some(10, 80)), filmStep(model.Rest, some(1, 20), some(18, 30), some(5, 10)),
			filmStep(model.Cool, some(20, 200), some(0, 8), some(10, 100)))
	}
	return append(steps, filmStep(model.Store, some(60, 300), some(2, 12), some(5, 10)))
}

// A record that begins in the midst of a chain knows nothing of how hot the food was elsewhere: a roast whose outside is hotter than its core when
// the chill begins goes on rising in it. In 3,000 records of exact histories that begin with a later step, some of them late in it, the bounds of a gap, and those
// of what lies before the first reading, hold the truth, and no verdict contradicts it.
func TestGapsOfRecordsBegunLater(t *testing.T) {
	rnd := rand.New(rand.NewSource(23))
	cases := boundCases()
	told, open, risen, capped := 0, 0, 0, 0
	for n := 0; n < 150; n++ {
		half := 0.01 + 0.06*rnd.Float64()
		shape, size := model.Slab, model.Size{ThicknessM: 2 * half}
		if rnd.Intn(2) == 0 {
			shape, size = model.Sphere, model.Size{DiameterM: 2 * half}
		}
		steps := cookings(rnd)
		h := solve(t, shape, size, 2+20*rnd.Float64(), steps...)
		for k := 0; k < 20; k++ {
			pt := model.Point{Name: "slowest point"}
			if k%4 == 3 {
				pt = model.Point{Name: "probe", Place: model.Place{UpM: half * rnd.Float64()}}
			}
			first := 1 + rnd.Intn(len(steps)-1)
			stepS := []float64{30, 60, 300}[rnd.Intn(3)]
			all := h.EndS() - h.Spans[first].StartS
			late := 0.0
			if rnd.Intn(4) == 0 {
				late = all / 3 * rnd.Float64()
			}
			gap := interval{late + stepS*float64(rnd.Intn(3)*rnd.Intn(20)), 0} // often just after the first reading
			gap.b = gap.a + 4*stepS + all/2*rnd.Float64()
			r, exact := begun(t, h, pt, first, late, stepS, gap)
			if len(r.C) == 0 {
				continue
			}
			for _, g := range newTube(r, nil).gaps {
				if g.edge == 0 && g.hi < anyHighC {
					capped++
				}
				for s := g.a; s <= g.b; s += (g.b - g.a) / 200 {
					c := h.At(pt.Place, h.Spans[first].StartS+s)
					if c < g.lo-r.ErrorK || c > g.hi+r.ErrorK {
						t.Fatalf("%d, %d: %g °C at %g s in a gap from %g to %g s between %g and %g °C, in a record from step %d on", n, k, c, s, g.a, g.b, g.lo, g.hi, first)
					}
					if g.edge == 0 && c > r.C[0]+1 && h.MediumC(h.Spans[first].StartS+s) < r.C[0] {
						risen++
						break
					}
				}
			}
			l := cases[rnd.Intn(len(cases))].limit(draw{rnd})
			f := found(t, l, r)
			switch {
			case l.Kind == Stated || l.Kind == Delay || l.Kind == Duration:
			case f.Verdict == CannotTell:
				open++
			default:
				told++
				l.Where.Name = "centre"
				if g := one(t, l, exact); g.Verdict != f.Verdict && g.Verdict != CannotTell {
					t.Errorf("%d, %d: %v by the record, %v exactly, in a record from step %d on:\n%s\n%s", n, k, f.Verdict, g.Verdict, first, f.Why, g.Why)
				}
			}
		}
	}
	t.Logf("%d told, %d not; %d rose in a gap by carry-over; %d bounded from above", told, open, risen, capped)
	if told < 500 || risen < 50 || capped < 50 {
		t.Errorf("%d told, %d rose in a gap, %d bounded from above", told, risen, capped)
	}
}

// Of raw food that is logged from its second step on, core and air alike, no more is known than of any other: a first oven that was hotter has left
// its outside hotter than anything that was read since. In 100 records of exact histories the bounds of a gap hold the truth.
func TestGapsOfRawFoodBegunLate(t *testing.T) {
	rnd := rand.New(rand.NewSource(5))
	some := func(lo, hi float64) float64 { return lo + (hi-lo)*rnd.Float64() }
	above := 0
	for n := range 100 {
		half := some(0.02, 0.05)
		h := solve(t, model.Slab, model.Size{ThicknessM: 2 * half}, some(2, 15), filmStep(model.Cook, some(5, 30), some(180, 250), some(30, 60)),
			filmStep(model.Cook, some(60, 120), some(60, 90), some(10, 20)), filmStep(model.Cool, 120, 3, 30))
		pt := model.Point{Name: "probe", Place: model.Place{UpM: half * some(0.5, 0.95)}}
		late := h.Spans[1].StartS
		gap := interval{late + 60*float64(rnd.Intn(10)), late + some(1200, 3000)}
		r, _ := begun(t, h, pt, 0, late, 60, gap)
		from := sort.SearchFloat64s(r.Medium.TimesS, late)
		r.Medium.TimesS, r.Medium.C = r.Medium.TimesS[from:], r.Medium.C[from:]
		for _, g := range newTube(r, nil).gaps {
			for s := g.a; s <= g.b; s += (g.b - g.a) / 100 {
				c := h.At(pt.Place, s)
				if c < g.lo-r.ErrorK || c > g.hi+r.ErrorK {
					t.Fatalf("%d: %g °C at %g s in a gap from %g to %g s between %g and %g °C", n, c, s, g.a, g.b, g.lo, g.hi)
				}
				if c > max(r.C[0], h.MediumC(s))+1 {
					above++
				}
			}
		}
	}
	if above < 50 {
		t.Errorf("%d instants above the air and the first reading", above)
	}
}
