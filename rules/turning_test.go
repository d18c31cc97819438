package rules

import (
	"math"
	"testing"

	"slowpoint/model"
)

// unlike is a slab of 60 mm whose top meets the surroundings with less wind than its underside.
func unlike(t testing.TB, startC float64, steps ...model.Step) *model.History {
	t.Helper()
	for i := range steps {
		w := *steps[i].FilmW / 3
		steps[i].Faces = []model.FaceExposure{{Face: model.Top, Exposure: model.Exposure{Surface: model.Film, FilmW: &w, Medium: steps[i].Medium}}}
	}
	return solve(t, model.Slab, model.Size{ThicknessM: 0.06}, startC, steps...)
}

// Where no place comes to the level, or all keep it all the while, the coldest (or warmest) place decides: figured here from
// the solver's courses on a grid of 0.5 mm, not from the ranking.
func TestPlaceWhereTimesTie(t *testing.T) {
	reheated := unlike(t, 5, filmStep(model.Reheat, 30, 70, 30))
	kept := unlike(t, 80, filmStep(model.HoldHot, 60, 70, 30))
	chilled := unlike(t, 80, filmStep(model.Cool, 90, 2, 30))
	stored := unlike(t, 2, filmStep(model.Store, 60, 4, 30))
	rows := &Table{Name: "T", Rows: []Row{{C: 65, S: 120}, {C: 70, S: 30}}}
	low := &Table{Name: "T", Rows: []Row{{C: 65, S: 120}}}
	crossing := Clock{Crossing: true}
	tests := []struct {
		name string
		h    *model.History
		l    Limit
		sign float64 // the place decides whose course (1: highest, −1: lowest; in sense of peak) is the most extreme
		peak float64 // 1: compare highest temperatures, −1: lowest, 0: those at the end
		want Verdict
	}{
		{"hold, never reached", reheated, Limit{Kind: Hold, FromC: c(65), TimeS: min_(2), Counting: Total}, -1, 1, NotMet},
		{"hold, kept throughout", kept, Limit{Kind: Hold, FromC: c(60), TimeS: min_(60), Counting: Continuous}, -1, -1, Met},
		{"hold in the cold, never reached", chilled, Limit{Kind: Hold, ToC: c(1), TimeS: min_(2), Counting: Total}, 1, -1, NotMet},
		{"hold in the cold, kept throughout", stored, Limit{Kind: Hold, ToC: c(5), TimeS: min_(60), Counting: Total}, 1, 1, Met},
		{"table, no row reached", reheated, Limit{Kind: HoldTable, Table: rows, Counting: Total}, -1, 1, NotMet},
		{"table, row kept throughout", kept, Limit{Kind: HoldTable, Table: low, Counting: Total}, -1, -1, Met},
		{"lethality, nothing credited", reheated, Limit{Kind: Lethality, FromC: c(65), ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)}, -1, 1, NotMet},
		{"heat, never reached", reheated, Limit{Kind: HeatWithin, ToC: c(65), TimeS: min_(20), Clock: Clock{Start: model.Reheat}}, -1, 0, NotMet},
		{"heat, still under way", reheated, Limit{Kind: HeatWithin, ToC: c(65), TimeS: min_(200), Clock: Clock{Start: model.Reheat}}, -1, 0, CannotTell},
		{"cool, never down", chilled, Limit{Kind: CoolWithin, ToC: c(1), TimeS: min_(89.9), Clock: Clock{Start: model.Cool}}, 1, 0, NotMet},
		{"cool, still under way", chilled, Limit{Kind: CoolWithin, FromC: c(60), ToC: c(1), TimeS: min_(360), Clock: crossing}, 1, 0, CannotTell},
		{"band, never in it", kept, Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(10), Counting: Total}, -1, -1, Met},
		{"stay below, never above", stored, Limit{Kind: StayBelow, ToC: c(5), TimeS: min_(10)}, 1, 1, Met},
		{"stay above, never warm enough", reheated, Limit{Kind: StayAbove, FromC: c(71), TimeS: min_(10)}, -1, 1, NotMet},
		{"outside, never in it", kept, Limit{Kind: Outside, FromC: c(5), ToC: c(60)}, -1, -1, Met},
		{"freeze, never cold", stored, Limit{Kind: FreezeHold, FromC: c(-1), TimeS: min_(2), ToC: c(-18), SecondS: min_(3)}, 1, -1, NotMet},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			figure := func(p model.Place) float64 {
				d := readEvery(tt.h, p, 20)
				if tt.peak == 0 {
					return d.c[len(d.c)-1]
				}
				x := math.Inf(-1)
				for _, c := range d.c {
					x = math.Max(x, tt.peak*c)
				}
				return tt.peak * x
			}
			extreme := math.Inf(-1)
			for mm := -30.0; mm <= 30; mm += 0.5 {
				extreme = math.Max(extreme, tt.sign*figure(model.Place{UpM: mm / 1000}))
			}
			extreme *= tt.sign
			f := one(t, tt.l, tt.h)
			if f.Verdict != tt.want || f.Place == nil {
				t.Fatalf("%v at %v (%s), want %v", f.Verdict, f.Place, f.Why, tt.want)
			}
			if got := figure(*f.Place); math.Abs(got-extreme) > 0.02 {
				t.Errorf("%.1f mm above the centre with %.3f °C decides (%s); the extreme is %.3f °C", 1000*f.Place.UpM, got, f.Why, extreme)
			}
		})
	}
}

// A turn of a predicted course lies between two knots of its path: what it does there is seen. The level lies between the
// lowest (highest) knot and the true extreme, which the solver itself gives every 0.5 s.
func TestTurnBetweenKnotsIsSeen(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.06}, 75,
		filmStep(model.HoldHot, 20, 5, 30), filmStep(model.HoldHot, 60, 110, 60))
	h.ErrorK = 0
	place := model.Place{}
	at := Where{Name: "here"}
	h.Points = append(h.Points, model.Point{Name: "here", Place: place})
	knots, low := math.Inf(1), math.Inf(1)
	for _, x := range newCourses(h).path(place, interval{0, h.EndS()}).c {
		knots = math.Min(knots, x)
	}
	for _, x := range readEvery(h, place, 0.5).c {
		low = math.Min(low, x)
	}
	if knots-low < 1e-5 {
		t.Fatalf("the lowest knot %.7f °C is the extreme %.7f °C: nothing to see", knots, low)
	}
	level := (knots + low) / 2
	for _, tt := range []struct {
		name string
		l    Limit
	}{
		{"hold, longest period", Limit{Kind: Hold, FromC: &level, TimeS: min_(79), Counting: Continuous}},
		{"outside", Limit{Kind: Outside, FromC: c(level - 20), ToC: &level}},
		{"stay above, no time beyond", Limit{Kind: StayAbove, FromC: &level, TimeS: c(0)}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			tt.l.Where = at
			f := one(t, tt.l, h)
			if f.Verdict != NotMet {
				t.Errorf("%v (%s), want not met", f.Verdict, f.Why)
			}
			if f.MarginK != nil && *f.MarginK > 0 {
				t.Errorf("not met with %g K of room", *f.MarginK)
			}
		})
	}
}
