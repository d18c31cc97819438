package rules

import (
	"fmt"
	"math"
	"math/rand"
	"strings"
	"testing"

	"slowpoint/model"
)

// holed is a random recording each 5 min for 300 min, with up to three gaps: some readings are lacking. Now and then it begins late or
// ends early.
func holed(t testing.TB, rnd *rand.Rand, spans string) *model.Recording {
	r := logged(t, spans, "")
	cs := boundedCourse(rnd)
	lacking := make([]bool, len(cs))
	for n := rnd.Intn(4); n > 0; n-- {
		from, long := 1+rnd.Intn(len(cs)-2), rnd.Intn(6)
		for i := from; i < len(cs)-1 && i < from+long; i++ {
			lacking[i] = true
		}
		if long == 0 && from > 1 {
			r.Gaps = append(r.Gaps, -from) // readings that stand as usual, with a gap between them all the same
		}
	}
	if rnd.Intn(8) == 0 {
		for i := rnd.Intn(8) + 4; i >= 0; i-- {
			lacking[i] = true
		}
	}
	if rnd.Intn(8) == 0 {
		for i := len(cs) - 5 - rnd.Intn(8); i < len(cs); i++ {
			lacking[i] = true
		}
	}
	usual := map[int]bool{}
	for _, g := range r.Gaps {
		usual[-g] = true
	}
	r.Gaps = nil
	for i, x := range cs {
		if lacking[i] {
			continue
		}
		if n := len(r.C); n > 0 && (r.TimesS[n-1] < float64(300*(i-1)) || usual[i]) {
			r.Gaps = append(r.Gaps, n-1)
		}
		r.TimesS, r.C = append(r.TimesS, float64(300*i)), append(r.C, x)
	}
	return r
}

// allowed is a random course that a recording allows, moved by off (K): from reading to reading it only rises or only falls, in a gap it goes
// anywhere.
func allowed(rnd *rand.Rand, r *model.Recording, off float64) (t, c []float64) {
	lo, hi := -20.0, 120.0
	gaps := map[int]bool{}
	for _, g := range r.Gaps {
		gaps[g] = true
	}
	edge := func(from, until float64) {
		for ; from < until; from += 60 * (1 + 20*rnd.Float64()) {
			t, c = append(t, from), append(c, -20+120*rnd.Float64())
		}
	}
	edge(0, r.TimesS[0]-1)
	for i := range r.C {
		t, c = append(t, r.TimesS[i]), append(c, r.C[i]+off)
		if i+1 == len(r.C) {
			edge(r.TimesS[i]+1, r.Spans[len(r.Spans)-1].EndS)
			break
		}
		a, b, from, until := r.C[i], r.C[i+1], r.TimesS[i], r.TimesS[i+1]
		knots := rnd.Intn(3)
		if gaps[i] {
			knots = rnd.Intn(7)
		}
		share, dt := 0.0, (until-from)/float64(knots+1)
		for k := 1; k <= knots; k++ {
			at := from + (float64(k)-0.9+0.8*rnd.Float64())*dt
			share += (1 - share) * []float64{0, 1, rnd.Float64()}[rnd.Intn(3)]
			x := a + share*(b-a)
			if gaps[i] {
				x = math.Min(hi-1e-6, lo+(hi-lo)*[]float64{0, 1, rnd.Float64(), rnd.Float64()}[rnd.Intn(4)]) // where two are as warm but for the arithmetic, that must not pick the first
			}
			if at > t[len(t)-1]+0.5 {
				t, c = append(t, at), append(c, x+off)
			}
		}
	}
	return t, c
}

// No verdict on a record is contradicted by any course that its readings allow, and for each kind some verdicts stand all the same.
func TestVerdictsOfARecord(t *testing.T) {
	kinds := map[*Kind]bool{}
	for _, tt := range boundCases() {
		kinds[tt.limit(draw{rand.New(rand.NewSource(1))}).Kind] = true
		t.Run(tt.name, func(t *testing.T) {
			rnd := rand.New(rand.NewSource(5))
			stood, open := map[Verdict]int{}, 0
			for n := 0; n < 200; n++ {
				spans := []string{"cook 0-100, cool 100-180, store 180-300", "cook 0-98, cool 98-183, store 183-300",
					"cook 0-62, cool 62-122, reheat 122-151, cool 151-200, store 200-300"}[rnd.Intn(3)]
				r := holed(t, rnd, spans)
				r.ErrorK = 0.2 * float64(rnd.Intn(2))
				l := tt.limit(draw{rnd})
				f := found(t, l, r)
				if f.Verdict == CannotTell {
					open++
					continue
				}
				stood[f.Verdict]++
				for k := 0; k < 6; k++ {
					off := r.ErrorK * (2*rnd.Float64() - 1)
					ts, cs := allowed(rnd, r, off)
					h, err := model.NewRecord(r.Spans, []model.Trace{{Point: model.Point{Name: "centre"}, TimesS: ts, C: cs}}, nil)
					if err != nil {
						t.Fatal(err)
					}
					g := one(t, l, h)
					if g.Verdict != f.Verdict && g.Verdict != CannotTell && !(g.Verdict == NotApplicable && (f.Verdict == Met || r.ErrorK > 0)) {
						var read, course []string
						for i := range r.C {
							read = append(read, fmt.Sprintf("%.4g:%.4g", r.TimesS[i]/60, r.C[i]))
						}
						for i := range cs {
							course = append(course, fmt.Sprintf("%.4g:%.4g", ts[i]/60, cs[i]))
						}
						t.Fatalf("%d: %v for the readings, %v for a course that they allow (error %g, off %g), %s:\n%s\n%s\n%s %v\n%s", n, f.Verdict, g.Verdict, r.ErrorK, off, spans, f.Why, g.Why,
							strings.Join(read, " "), r.Gaps, strings.Join(course, " "))
					}
				}
			}
			t.Logf("met %d, not met %d, not applicable %d, cannot tell %d", stood[Met], stood[NotMet], stood[NotApplicable], open)
			for _, v := range []Verdict{Met, NotMet} {
				if stood[v] == 0 {
					t.Errorf("%v never stood", v)
				}
			}
		})
	}
	for _, k := range Kinds {
		if !kinds[k] && k != Humidity { // it is of the surroundings, as stated
			t.Errorf("%s is not held to it", k.Name)
		}
	}
}

// cut is a recording of an exact history at one place, each stepS from a first reading on, with a gap and the recorded medium.
func cut(rnd *rand.Rand, h *model.History, pt model.Point, stepS float64) (r *model.Recording, gapS [2]float64) {
	r = &model.Recording{Point: pt, Spans: h.Spans, LowC: math.NaN(), HighC: math.NaN(), ErrorK: 0.05, Medium: &model.Trace{}}
	end := h.EndS()
	long := 60 * (5 + 60*rnd.Float64())
	gapS[0] = rnd.Float64() * (end - long)
	gapS[1] = gapS[0] + long
	for s := 0.0; s <= end; s += stepS {
		r.Medium.TimesS, r.Medium.C = append(r.Medium.TimesS, s), append(r.Medium.C, h.MediumC(s+1e-3))
		if s > gapS[0] && s < gapS[1] {
			continue
		}
		if n := len(r.C); n > 0 && s > r.TimesS[n-1]+1.5*stepS {
			r.Gaps = []int{n - 1}
		}
		r.TimesS, r.C = append(r.TimesS, s), append(r.C, h.At(pt.Place, s))
	}
	return r, gapS
}

// In 1,000 random cuts of exact histories the bounds of a gap hold the truth, and no verdict contradicts that on the exact course.
func TestGapsOfExactHistories(t *testing.T) {
	rnd := rand.New(rand.NewSource(11))
	cases := boundCases()
	cuts, told, open, tight := 0, 0, 0, 0
	for n := 0; n < 50; n++ {
		chill := 15 * rnd.Float64()
		steps := []model.Step{filmStep(model.Cook, 20+100*rnd.Float64(), 70+110*rnd.Float64(), 10+40*rnd.Float64()),
			filmStep(model.Rest, 2+20*rnd.Float64(), 18+60*rnd.Float64(), 5+10*rnd.Float64()),
			filmStep(model.Cool, 30+200*rnd.Float64(), chill, 10+100*rnd.Float64()), filmStep(model.Store, 60, 3+20*rnd.Float64(), 5+10*rnd.Float64())}
		if rnd.Intn(2) == 0 {
			steps = append(steps, filmStep(model.Reheat, 3+60*rnd.Float64(), 80+100*rnd.Float64(), 10+100*rnd.Float64()), filmStep(model.Cool, 60, chill, 20))
		}
		for i := 2; i < len(steps) && n%2 == 1; i++ { // air that swings
			m := &steps[i].Medium
			end := steps[i].DurationS
			for s := 300.0; ; s += 300 + 1500*rnd.Float64() {
				s = math.Min(s, end)
				m.TimesS, m.C = append(m.TimesS, s), append(m.C, m.C[0]+20*rnd.Float64()*float64(rnd.Intn(2)))
				if s == end {
					break
				}
			}
		}
		half := 0.01 + 0.05*rnd.Float64()
		shape, size := model.Slab, model.Size{ThicknessM: 2 * half}
		if rnd.Intn(2) == 0 {
			shape, size = model.Sphere, model.Size{DiameterM: 2 * half}
		}
		h := solve(t, shape, size, 2+20*rnd.Float64(), steps...)
		for k := 0; k < 20; k++ {
			pt := model.Point{Name: "slowest point"}
			if k%4 == 3 { // another place
				pt = model.Point{Name: "probe", Place: model.Place{UpM: half * rnd.Float64()}}
			}
			r, _ := cut(rnd, h, pt, []float64{5, 15, 60}[rnd.Intn(3)])
			u := newTube(r, nil)
			cuts++
			for _, g := range u.gaps {
				for s := g.a; s <= g.b; s += (g.b - g.a) / 200 {
					if c := h.At(pt.Place, s); c < g.lo-r.ErrorK || c > g.hi+r.ErrorK {
						t.Fatalf("%d, %d: %g °C at %g s in a gap from %g to %g s between %g and %g °C", n, k, c, s, g.a, g.b, g.lo, g.hi)
					}
				}
				if g.hi-g.lo < 60 {
					tight++
				}
			}
			l := cases[rnd.Intn(len(cases))].limit(draw{rnd})
			f := found(t, l, r)
			if l.Kind == Stated || l.Kind == Delay || l.Kind == Duration {
				continue
			}
			if f.Verdict == CannotTell {
				open++
				continue
			}
			told++
			l.Where.Name = "centre"
			exact := *h
			if exact.Points = []model.Point{{Name: "centre", Place: pt.Place}}; one(t, l, &exact).Verdict != f.Verdict {
				if g := one(t, l, &exact); g.Verdict != CannotTell {
					t.Errorf("%d, %d: %v by the record, %v exactly:\n%s\n%s", n, k, f.Verdict, g.Verdict, f.Why, g.Why)
				}
			}
		}
	}
	t.Logf("%d cuts, %d narrow bounds, %d told, %d not", cuts, tight, told, open)
	if cuts < 1000 || told < 300 {
		t.Errorf("%d cuts, %d told", cuts, told)
	}
}
