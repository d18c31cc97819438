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
