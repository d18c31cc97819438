package rules

import (
	"math/rand/v2"
	"testing"

	"slowpoint/model"
)

// The error of the calculation moves the end of a step with Until: a time that turns on it by less than that cannot be told, by more it can. The figure that
// it moves by is that of a course in which the temperature of Until is moved by the error.
func TestUntilMovesTimes(t *testing.T) {
	at := func(untilC float64) *model.History {
		rest := filmStep(model.Rest, 400, 20, 8)
		rest.UntilC = &untilC
		return solve(t, model.Slab, model.Size{ThicknessM: 0.05}, 5, filmStep(model.Cook, 90, 100, 40), rest, filmStep(model.Cool, 200, 2, 30))
	}
	h := at(60)
	rest, moved := h.Spans[1], at(60 - h.ErrorK).Spans[1]
	long, by := rest.EndS-rest.StartS, moved.EndS-rest.EndS
	if by < 0.1 {
		t.Fatalf("the error of %.4f K moves the end by %.3f s", h.ErrorK, by)
	}
	for _, x := range []struct {
		more float64
		want Verdict
	}{{0.3 * by, CannotTell}, {-0.3 * by, CannotTell}, {3 * by, Met}, {-3 * by, NotMet}} {
		for _, l := range []Limit{
			{Kind: Delay, Stages: []*model.Stage{model.Cook}, Then: model.Cool, TimeS: c(long + x.more)},
			{Kind: Duration, Stages: []*model.Stage{model.Rest}, CompareTime: AtMost, TimeS: c(long + x.more)},
		} {
			if f := one(t, l, h); f.Verdict != x.want {
				t.Errorf("%s with %+.2f s of room, %.2f by the error: %v, want %v: %s", l.Kind.Name, x.more, by, f.Verdict, x.want, f.Why)
			}
		}
	}
	if f := one(t, Limit{Kind: Duration, Stages: []*model.Stage{model.Cook}, CompareTime: AtMost, TimeS: min_(90)}, h); f.Verdict != Met {
		t.Errorf("a step without Until: %v", f.Verdict)
	}
}

// Of two runs the margin in temperature is the smaller, though it be that of the run with more room in time.
func TestMarginOfTwoRuns(t *testing.T) {
	sharp := solve(t, model.Slab, model.Size{ThicknessM: 0.01}, 5, filmStep(model.Cook, 30, 95, 500), filmStep(model.Cool, 30, 2, 500))
	flat := solve(t, model.Slab, model.Size{ThicknessM: 0.01}, 5, filmStep(model.Cook, 30, 70.4, 500), filmStep(model.Rest, 20, 70.4, 500), filmStep(model.Cool, 30, 2, 500))
	l := Limit{Name: "L", Kind: Hold, FromC: c(70), TimeS: min_(20), Counting: Total, Applies: Applies{All: true}}
	a, b := one(t, l, sharp), one(t, l, flat)
	if a.Verdict != Met || b.Verdict != Met || *a.MarginS >= *b.MarginS || *a.MarginK <= *b.MarginK+1 {
		t.Fatalf("the runs do not show it: %v %v s %v K, %v %v s %v K", a.Verdict, *a.MarginS, *a.MarginK, b.Verdict, *b.MarginS, *b.MarginK)
	}
	f := Find([]Limit{l}, Subject{Product: "P", History: sharp, Further: []Run{{Name: "other", History: flat}}})[0]
	if *f.MarginS != *a.MarginS || *f.MarginK != *b.MarginK {
		t.Errorf("%v s and %v K, want %v s and %v K", *f.MarginS, *f.MarginK, *a.MarginS, *b.MarginK)
	}
	if len(f.Notes) == 0 {
		t.Error("no note says that the margin is that of another run")
	}
}

// Within the margin of a limit that allows one period only no second one appears at any place, though it may be gone again where the margin ends.
func TestOnceKeepsItsMargin(t *testing.T) {
	draw := rand.New(rand.NewPCG(5, 9))
	shapes := []*model.Shape{model.Slab, model.Sphere, model.Slab, model.ShortCylinder}
	margins := 0
	for n := range 24 {
		h := swung(t, draw, shapes[n%len(shapes)], 25)
		for _, from := range []float64{20, 26, 32, 45, 55, 62} {
			l := Limit{Kind: Hold, FromC: c(from), TimeS: min_(1), Counting: Once}
			if from > 40 {
				l.Stages = []*model.Stage{model.Cook}
			}
			f := one(t, l, h)
			if f.Verdict != Met || f.MarginK == nil || *f.MarginK < 0.2 {
				continue
			}
			margins++
			for k := 0.05; k < 1; k += 0.1 {
				moved := l
				moved.FromC = c(from + k**f.MarginK)
				for _, p := range h.Points {
					moved.Where.Name = p.Name
					if g := one(t, moved, h); g.Verdict == NotMet {
						t.Errorf("%d, %s from %g °C: margin %.3f K, and %s misses with %.3f K of it: %s", n, h.Product.Shape.Name, from, *f.MarginK, p.Name, k**f.MarginK, g.Why)
						k = 1
						break
					}
				}
			}
		}
	}
	if margins < 15 {
		t.Errorf("%d margins", margins)
	}
}

// The margin of one named place is that of its exact course: where it is up the limit turns, within a few thousandths of a kelvin, also where a trough
// between two instants that were looked at decides.
func TestMarginOfOnePlace(t *testing.T) {
	draw := rand.New(rand.NewPCG(2, 8))
	margins := 0
	for n := range 30 {
		h := swung(t, draw, []*model.Shape{model.Slab, model.Sphere}[n%2], 3)
		for _, p := range h.Points {
			for _, l := range pivot(draw, h, p.Place) {
				if l.Kind != Hold || l.FromC == nil || l.Counting != Continuous {
					continue
				}
				l.FromC, l.TimeS, l.Where.Name = c(*l.FromC-0.7), min_(10), p.Name
				l.TimeS = min_(0.9 * *one(t, l, h).Value)
				f := one(t, l, h)
				if f.Verdict != Met || f.MarginK == nil || *f.MarginK > 3 {
					continue
				}
				margins++
				for _, by := range []float64{-0.006, 0.006} {
					moved := l
					moved.FromC = c(*l.FromC + *f.MarginK + by)
					k := *one(t, moved, h).MarginS
					if kept := k >= 0; kept != (by < 0) {
						t.Errorf("%d, %s at %s: margin %.4f K, and %.0f s of room at %+.3f K beyond it", n, h.Product.Shape.Name, p.Name, *f.MarginK, k, by)
					}
				}
			}
		}
	}
	if margins < 10 {
		t.Errorf("%d margins", margins)
	}
}
