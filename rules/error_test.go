package rules

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"slowpoint/model"
)

// A record with an error band of 0.1 K whose course keeps every level by 0.05 K: met as read, not met at the unfavourable end,
// so it cannot be told. The same course with 0.15 K of room is met, and with no error band it is met as well. Each course runs
// straight between the readings, so the place of the level is plain.
func TestErrorTurnsEveryKind(t *testing.T) {
	crossing := Clock{Crossing: true}
	atCook := Clock{End: model.Cook}
	cook, cool := []*model.Stage{model.Cook}, []*model.Stage{model.Cool}
	const flat = "cook 0-60" // courses: %[1]s is room K above 63, %[2]s room K below 5
	tests := []struct {
		name  string
		spans string
		// course for a room in K
		course func(room float64) string
		l      Limit
	}{
		{"hold", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 63+r, 63+r) },
			Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Total}},
		{"hold, longest period", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 63+r, 63+r) },
			Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Continuous}},
		{"hold, one period", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 63+r, 63+r) },
			Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Once}},
		{"hold, one period, the second just short", "cook 0-100", func(r float64) string {
			return fmt.Sprintf("0:70 40:70 41:50 59:50 60:%g 80:%g 81:50 100:50", 63-r, 63-r)
		}, Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Once}},
		{"hold in the cold", "store 0-60", func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 5-r, 5-r) },
			Limit{Kind: Hold, ToC: c(5), TimeS: min_(10), Counting: Total}},
		{"reached", flat, func(r float64) string { return fmt.Sprintf("0:50 30:%g 60:50", 63+r) },
			Limit{Kind: Hold, FromC: c(63), TimeS: c(0), Counting: Total}},
		{"reached in the cold", "store 0-60", func(r float64) string { return fmt.Sprintf("0:10 30:%g 60:10", 5-r) },
			Limit{Kind: Hold, ToC: c(5), TimeS: c(0), Counting: Total}},
		{"table row", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 63+r, 63+r) },
			Limit{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: 63, S: 600}}}, Counting: Total}},
		{"table, instant row", flat, func(r float64) string { return fmt.Sprintf("0:50 30:%g 60:50", 63+r) },
			Limit{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: 63}}}, Counting: Total}},
		{"table, one period", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 63+r, 63+r) },
			Limit{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: 63, S: 600}}}, Counting: Once}},
		{"table, one period, the second just short", "cook 0-100", func(r float64) string {
			return fmt.Sprintf("0:70 40:70 41:50 59:50 60:%g 80:%g 81:50 100:50", 63-r, 63-r)
		}, Limit{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: 63, S: 600}}}, Counting: Once}},
		{"lethality", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 70+r, 70+r) }, // 60 min at Tref; z of 10 K
			Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(10), FromC: c(55), TimeS: min_(60)}},
		{"lethality, floor", flat, func(r float64) string { return fmt.Sprintf("0:%g 60:%g", 55+r, 55+r) },
			Limit{Kind: Lethality, ReferenceC: c(55), ZK: c(10), FromC: c(55), TimeS: min_(10)}},
		{"cool", "cool 0-120", func(r float64) string { return fmt.Sprintf("0:60 30:%g 90:%g 91:3 120:3", 5-r, 5-r) },
			Limit{Kind: CoolWithin, ToC: c(5), TimeS: min_(60), Clock: Clock{Start: model.Cool}}},
		{"cool, down only at the end of the stage", "cook 0-10, cool 10-70, store 70-200", func(r float64) string {
			return fmt.Sprintf("0:70 10:70 40:%g 75:%g 80:3 200:3", 5-r, 5-r)
		}, Limit{Kind: CoolWithin, Stages: cool, ToC: c(5), TimeS: min_(180), Clock: atCook}},
		{"cool, clock by crossing", "cool 0-200", func(r float64) string {
			return fmt.Sprintf("0:75 10:%g 60:%g 61:50 100:3 200:3", 60+r, 60+r) // falls to 60 at 60 min, to 60.1 at 10
		}, Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(60), Clock: crossing}},
		{"heat", flat, func(r float64) string { return fmt.Sprintf("0:20 10:%g 40:%g 41:70 60:70", 63+r, 63+r) },
			Limit{Kind: HeatWithin, ToC: c(63), TimeS: min_(20), Clock: Clock{Start: model.Cook}}},
		{"heat, and stays", flat, func(r float64) string { return fmt.Sprintf("0:20 10:70 12:%g 40:%g 60:20", 63+r, 63+r) },
			Limit{Kind: HeatWithin, ToC: c(63), TimeS: min_(30), SecondS: min_(20), Clock: Clock{Start: model.Cook}}},
		{"heat, clock by crossing", "cook 0-120", func(r float64) string {
			return fmt.Sprintf("0:2 1:%g 60:%g 61:30 80:70 120:70", 5-r, 5-r) // is at 5 from 60 min on, at 4.9 from 1
		}, Limit{Kind: HeatWithin, FromC: c(5), ToC: c(63), TimeS: min_(30), Clock: crossing}},
		{"band, at From", "cool 0-120", func(r float64) string { return fmt.Sprintf("0:%g 120:%g", 5-r, 5-r) },
			Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(10), Counting: Total}},
		{"band, at To", "cool 0-120", func(r float64) string { return fmt.Sprintf("0:%g 120:%g", 60+r, 60+r) },
			Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(10), Counting: Total}},
		{"band, one period", "cool 0-120", func(r float64) string {
			return fmt.Sprintf("0:70 10:70 10.5:50 11:70 60:%g 61:%g 62:70 120:70", 60+r, 60+r)
		}, Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(60), Counting: Once}},
		{"stay above", "hold hot 0-60", func(r float64) string { return fmt.Sprintf("0:70 30:%g 60:70", 63+r) },
			Limit{Kind: StayAbove, FromC: c(63)}},
		{"stay below", "store 0-60", func(r float64) string { return fmt.Sprintf("0:2 30:%g 60:2", 5-r) },
			Limit{Kind: StayBelow, ToC: c(5)}},
		{"stay above, excursion", "hold hot 0-60", func(r float64) string { return fmt.Sprintf("0:70 1:%g 59:%g 60:70", 63+r, 63+r) },
			Limit{Kind: StayAbove, FromC: c(63), TimeS: min_(10)}},
		{"stay above, excursion, more than", "hold hot 0-60", func(r float64) string { return fmt.Sprintf("0:70 1:%g 59:%g 60:70", 63+r, 63+r) },
			Limit{Kind: StayAbove, FromC: c(63), TimeS: min_(10), Compare: MoreThan}},
		{"stay below, excursion", "store 0-60", func(r float64) string { return fmt.Sprintf("0:2 1:%g 59:%g 60:2", 5-r, 5-r) },
			Limit{Kind: StayBelow, ToC: c(5), TimeS: min_(10)}},
		{"stay below, excursion, less than", "store 0-60", func(r float64) string { return fmt.Sprintf("0:2 1:%g 59:%g 60:2", 5-r, 5-r) },
			Limit{Kind: StayBelow, ToC: c(5), TimeS: min_(10), Compare: LessThan}},
		{"outside, cold", "store 0-60", func(r float64) string { return fmt.Sprintf("0:2 30:%g 60:2", 5-r) },
			Limit{Kind: Outside, FromC: c(5), ToC: c(60)}},
		{"outside, hot", "hold hot 0-60", func(r float64) string { return fmt.Sprintf("0:70 30:%g 60:70", 60+r) },
			Limit{Kind: Outside, FromC: c(5), ToC: c(60)}},
		{"end, hot", flat, func(r float64) string { return fmt.Sprintf("0:20 60:%g", 63+r) },
			Limit{Kind: ByTheEnd, Stages: cook, FromC: c(63)}},
		{"end, cold", "cool 0-60", func(r float64) string { return fmt.Sprintf("0:70 60:%g", 5-r) },
			Limit{Kind: ByTheEnd, Stages: cool, ToC: c(5)}},
		{"end after the clock, level", "cool 0-120", func(r float64) string { return fmt.Sprintf("0:60 60:%g 120:%g", 5-r, 5-r) },
			Limit{Kind: ByTheEnd, ToC: c(5), TimeS: min_(90), Clock: Clock{Start: model.Cool}}},
		{"end after the clock, crossing", "cool 0-200", func(r float64) string {
			return fmt.Sprintf("0:75 10:%g 60:%g 61:50 100:3 200:3", 60+r, 60+r) // 60 min after 60 min it is cold, after 10 min warm
		}, Limit{Kind: ByTheEnd, FromC: nil, ToC: c(5), TimeS: min_(60), Clock: Clock{Crossing: true, AtC: c(60)}}},
		{"freeze, From", "freeze 0-200", func(r float64) string { return fmt.Sprintf("0:5 30:%g 60:%g 61:0 62:-20 200:-20", -2-r, -2-r) },
			Limit{Kind: FreezeHold, FromC: c(-2), TimeS: min_(20), ToC: c(-18), SecondS: min_(125)}},
		{"freeze, To", "freeze 0-200", func(r float64) string { return fmt.Sprintf("0:5 10:-10 40:%g 200:%g", -18-r, -18-r) },
			Limit{Kind: FreezeHold, FromC: c(-2), TimeS: min_(10), ToC: c(-18), SecondS: min_(60)}},
		{"falling", "cool 0-60", func(r float64) string { return fmt.Sprintf("0:70 30:20 40:%g 60:5", 21-r) },
			Limit{Kind: Falling, Stages: cool, AllowanceK: c(1)}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			for _, x := range []struct {
				room, errK float64
				want       Verdict
			}{{0.05, 0, Met}, {0.05, 0.1, CannotTell}, {0.15, 0.1, Met}, {-0.05, 0, NotMet}, {-0.05, 0.1, CannotTell}, {-0.15, 0.1, NotMet}} {
				h := record(t, tt.spans, tt.course(x.room))
				h.ErrorK = x.errK
				if f := one(t, tt.l, h); f.Verdict != x.want {
					t.Errorf("room %g K, error %g K: %v (%s), want %v", x.room, x.errK, f.Verdict, f.Why, x.want)
				}
			}
		})
	}
}

// What is stated and not calculated has no error band.
func TestMediumHasNoError(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.03}, 5, filmStep(model.Store, 60, 4.95, 20))
	h.ErrorK = 0.1
	if f := one(t, Limit{Kind: StayBelow, Where: Where{Name: "medium"}, ToC: c(5)}, h); f.Verdict != Met {
		t.Errorf("%v (%s), want met", f.Verdict, f.Why)
	}
}

// A limit that is met shows no lack, and one that is not met no time to spare.
func TestMarginsAgreeWithVerdict(t *testing.T) {
	rnd := rand.New(rand.NewSource(5))
	counts := []Counting{Total, Continuous, Once}
	clocks := []Clock{{Crossing: true}, {End: model.Cook}, {Start: model.Cool}}
	seen := map[Verdict]int{}
	for n := 0; n < 400; n++ {
		a, b := 20+rnd.Intn(80), 100+rnd.Intn(200)
		course := fmt.Sprintf("0:%.1f", rnd.Float64()*20)
		for m := 10; m <= 400; m += 10 {
			c := 20 + 55*rnd.Float64()
			if m > a {
				c = math.Max(3, 75*math.Exp(-float64(m-a)/(40+60*rnd.Float64()))+4*rnd.Float64())
			}
			course += fmt.Sprintf(" %d:%.2f", m, c)
		}
		h := record(t, fmt.Sprintf("cook 0-%d, cool %d-%d, store %d-400", a, a, b, b), course)
		lo, hi, time := 4+20*rnd.Float64(), 40+25*rnd.Float64(), min_(float64(1+rnd.Intn(200)))
		count, clock := counts[rnd.Intn(3)], clocks[rnd.Intn(3)]
		var from *float64
		if clock.Crossing {
			from = &hi
		}
		var stage []*model.Stage
		if rnd.Intn(2) == 0 {
			stage = []*model.Stage{model.Cool}
		}
		for _, l := range []Limit{
			{Kind: CoolWithin, Stages: stage, FromC: from, ToC: &lo, TimeS: time, Clock: clock},
			{Kind: HeatWithin, Stages: stage, ToC: &hi, TimeS: time, Clock: Clock{Start: model.Cook}},
			{Kind: Hold, Stages: stage, FromC: &hi, TimeS: time, Counting: count},
			{Kind: Band, Stages: stage, FromC: &lo, ToC: &hi, TimeS: time, Counting: count},
			{Kind: StayBelow, Stages: stage, ToC: &lo, TimeS: time, Counting: count},
			{Kind: HoldTable, Table: &Table{Name: "T", Rows: []Row{{C: lo, S: *time}, {C: hi, S: *time / 3}}}, Counting: count},
			{Kind: FreezeHold, FromC: &hi, TimeS: min_(5), ToC: &lo, SecondS: time},
		} {
			f := one(t, l, h)
			seen[f.Verdict]++
			const tol = 1e-3 // s; times closer than sameS are equal
			switch {
			case f.Verdict == Met && f.MarginS != nil && *f.MarginS < -tol, f.Verdict == NotMet && f.MarginS != nil && *f.MarginS > tol:
				t.Errorf("%s %v with %g s of room: %s\n%s", l.Kind.Name, f.Verdict, *f.MarginS, f.Why, course)
			case f.Verdict == Met && f.MarginK != nil && *f.MarginK < -tol:
				t.Errorf("%s met with %g K of room: %s\n%s", l.Kind.Name, *f.MarginK, f.Why, course)
			}
		}
	}
	if seen[Met] < 300 || seen[NotMet] < 300 {
		t.Errorf("the draws decide too little: %v", seen)
	}
}

// A chill medium raised to the freezing point gives temperatures that the food is at or below: that proves no failure of a
// limit which colder food meets, unless it was missed before the chill, and every failure of one which colder food misses too.
func TestBoundProvesNoFailureOfColdLimits(t *testing.T) {
	props := model.Properties{KWmK: 0.47, RhoKgM3: 1050, CJkgK: 3500}
	food := &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties { return props }, FreezingC: c(-1)}
	chilled := func(restMin float64) *model.History {
		h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: 0.06}, Food: food, StartC: 75},
			[]model.Step{filmStep(model.Rest, restMin, 20, 10), filmStep(model.Cool, 120, -30, 30)}, model.Options{})
		if err != nil {
			t.Fatal(err)
		}
		if h.Bound == "" || math.Abs(h.BoundFromS-60*restMin) > 1e-6 {
			t.Fatalf("bound %q from %g s", h.Bound, h.BoundFromS)
		}
		return h
	}
	short, long := chilled(10), chilled(240)
	cool := []*model.Stage{model.Cool}
	fall := Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(90), Clock: Clock{Crossing: true}}
	exposed := Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(90), Counting: Total}
	for _, tt := range []struct {
		name string
		h    *model.History
		l    Limit
		want Verdict
	}{
		{"cool", short, fall, CannotTell},
		{"cool, the time had run out before", long, fall, NotMet},
		{"hold in the cold", short, Limit{Kind: Hold, ToC: c(-18), TimeS: c(0), Counting: Total}, CannotTell},
		{"stay below", short, Limit{Kind: StayBelow, Stages: cool, ToC: c(3), TimeS: min_(30)}, CannotTell},
		{"stay below, too warm before", short, Limit{Kind: StayBelow, ToC: c(3), TimeS: min_(5)}, NotMet},
		{"end", short, Limit{Kind: ByTheEnd, Stages: cool, ToC: c(-5)}, CannotTell},
		{"band", short, exposed, CannotTell},
		{"band, too long before", long, exposed, NotMet},
		{"freeze", short, Limit{Kind: FreezeHold, Stages: cool, FromC: c(-2), TimeS: min_(5), ToC: c(-18), SecondS: min_(5)}, CannotTell},
		{"hold in the heat", short, Limit{Kind: Hold, FromC: c(80), TimeS: min_(2), Counting: Total}, NotMet},
		{"stay above", short, Limit{Kind: StayAbove, FromC: c(63)}, NotMet},
	} {
		t.Run(tt.name, func(t *testing.T) {
			if f := one(t, tt.l, tt.h); f.Verdict != tt.want {
				t.Errorf("%v (%s), want %v", f.Verdict, f.Why, tt.want)
			}
		})
	}
}

// Of two findings with the same verdict the one with less room is less favourable: by time, and where that is equal by temperature.
func TestLessFavourable(t *testing.T) {
	for _, tt := range []struct {
		name string
		a, b Finding
		want bool
	}{
		{"verdict first", Finding{Verdict: NotMet, MarginS: c(9)}, Finding{Verdict: Met, MarginS: c(1)}, true},
		{"less time", Finding{Verdict: Met, MarginS: c(1), MarginK: c(5)}, Finding{Verdict: Met, MarginS: c(2), MarginK: c(1)}, true},
		{"more time", Finding{Verdict: Met, MarginS: c(2), MarginK: c(1)}, Finding{Verdict: Met, MarginS: c(1), MarginK: c(5)}, false},
		{"equal time, less room", Finding{Verdict: NotMet, MarginS: c(-600), MarginK: c(-12)}, Finding{Verdict: NotMet, MarginS: c(-600), MarginK: c(-10)}, true},
		{"equal time, more room", Finding{Verdict: NotMet, MarginS: c(-600), MarginK: c(-10)}, Finding{Verdict: NotMet, MarginS: c(-600), MarginK: c(-12)}, false},
		{"no time", Finding{Verdict: Met, MarginK: c(1)}, Finding{Verdict: Met, MarginK: c(2)}, true},
		{"a hair less time, less room", Finding{Verdict: Met, MarginS: c(599.95), MarginK: c(3)}, Finding{Verdict: Met, MarginS: c(600), MarginK: c(4)}, true},
		{"a hair less time, more room", Finding{Verdict: Met, MarginS: c(599.95), MarginK: c(4)}, Finding{Verdict: Met, MarginS: c(600), MarginK: c(3)}, false},
		{"a hair less time alone", Finding{Verdict: Met, MarginS: c(599.95)}, Finding{Verdict: Met, MarginS: c(600)}, false},
		{"a hair less room", Finding{Verdict: Met, MarginK: c(0.9)}, Finding{Verdict: Met, MarginK: c(0.905)}, false},
		{"a digit less room", Finding{Verdict: Met, MarginK: c(0.8)}, Finding{Verdict: Met, MarginK: c(0.9)}, true},
		{"a digit less time", Finding{Verdict: Met, MarginS: c(599)}, Finding{Verdict: Met, MarginS: c(600)}, true},
		{"alike", Finding{Verdict: Met, MarginS: c(1), MarginK: c(1)}, Finding{Verdict: Met, MarginS: c(1), MarginK: c(1)}, false},
	} {
		t.Run(tt.name, func(t *testing.T) {
			if got := lessFavourable(tt.a, tt.b); got != tt.want {
				t.Errorf("%v", got)
			}
		})
	}
}

// A limit is met only where it is met with every temperature moved by the error: the finding of a predicted food without an
// error band, judged with its levels moved by 0.04 K, must be met wherever the one with an error band of 0.04 K is.
func TestMetHoldsAtUnfavourableEnd(t *testing.T) {
	rnd := rand.New(rand.NewSource(11))
	met, told := 0, 0
	for n := 0; n < 6; n++ {
		h := unlike(t, 5, filmStep(model.Cook, 60, 90+20*rnd.Float64(), 30), filmStep(model.Cool, 200, 2, 20))
		for k := 0; k < 12; k++ {
			// From near what some place only just reaches, so that the clock of another place decides
			from, to := 50+25*rnd.Float64(), 8+25*rnd.Float64()
			for _, kind := range []*Kind{CoolWithin, Band, Hold} {
				l := Limit{Kind: kind, FromC: &from, ToC: &to, Clock: Clock{Crossing: true}}
				moved := Limit{Kind: kind, FromC: c(from + 0.04), ToC: c(to - 0.04), Clock: Clock{Crossing: true}}
				switch kind {
				case Band:
					l = Limit{Kind: kind, FromC: &to, ToC: &from, Counting: Total}
					moved = Limit{Kind: kind, FromC: c(to - 0.04), ToC: c(from + 0.04), Counting: Total}
				case Hold:
					l = Limit{Kind: kind, FromC: &from, Counting: Total}
					moved = Limit{Kind: kind, FromC: c(from + 0.04), Counting: Total}
				}
				l.TimeS = min_(1000)
				h.ErrorK = 0
				f := one(t, l, h)
				if f.Value == nil {
					continue
				}
				// the time at the very edge of what is met
				time := 60 * *f.Value * (1 + 2e-3*rnd.Float64())
				if kind == Hold {
					time = 60 * *f.Value * (1 - 2e-3*rnd.Float64())
				}
				l.TimeS, moved.TimeS = &time, &time
				if time == 0 {
					continue
				}
				edge := one(t, moved, h)
				h.ErrorK = 0.04
				switch f := one(t, l, h); {
				case f.Verdict == Met && edge.Verdict == NotMet:
					t.Errorf("%s of %g and %g °C met within the error, not at its end: %s", kind.Name, from, to, edge.Why)
				case f.Verdict == Met:
					met++
				case f.Verdict == CannotTell:
					told++
				}
			}
		}
	}
	if told < 10 {
		t.Errorf("met %d, cannot tell %d: too little turns on the error", met, told)
	}
}

// The place that decides at the unfavourable end need not be one that is near to deciding as read: two places have just enough,
// a third has plenty, but by 0.02 K only, and the error is 0.04 K.
func TestThirdPlaceDecidesWithinError(t *testing.T) {
	hold := records(t, "cook 0-100", trace(t, "a", 0, "0:50 10:50 10.5:80 22:80 22.5:50 100:50"),
		trace(t, "b", 5, "0:50 10:50 10.5:80 23:80 23.5:50 100:50"), trace(t, "c", 10, "0:63.02 100:63.02"))
	band := records(t, "cool 0-100", trace(t, "a", 0, "0:70 10:70 10.5:30 65:30 65.5:2 100:2"),
		trace(t, "b", 5, "0:70 10:70 10.5:30 64:30 64.5:2 100:2"), trace(t, "c", 10, "0:60.02 100:60.02"))
	for _, tt := range []struct {
		name string
		h    *model.History
		l    Limit
	}{
		{"by its own temperature", hold, Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Total}},
		{"by another", band, Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(60), Counting: Total}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			for errK, want := range map[float64]Verdict{0.04: CannotTell, 0.01: Met} {
				tt.h.ErrorK = errK
				if f := one(t, tt.l, tt.h); f.Verdict != want {
					t.Errorf("error %g K: %v (%s), want %v", errK, f.Verdict, f.Why, want)
				}
			}
		})
	}
}
