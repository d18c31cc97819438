package rules

import (
	"math"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// cooling is 60 to 21 °C in two hours from the crossing.
func cooling() Limit {
	return Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(120), Clock: crossing}
}

// TestTraps holds the ambiguities that break a naive reading of a limit, one by one (B1 to B20 of the list of forms).
func TestTraps(t *testing.T) {
	carry := "0:5 60:75 70:78 100:60 200:21 300:3" // the core goes on rising after the oven
	for _, x := range []struct {
		name          string
		l             Limit
		spans, course string
		verdict       Verdict
		value         float64 // NaN: not compared
		start, end    float64 // clock in min; NaN: none wanted
	}{
		{"B1 clock at the crossing", cooling(), "cook 0-60, cool 60-300", carry, Met, 100, 100, 200},
		{"B1 clock at the end of cooking, while the core still rises", Limit{Kind: CoolWithin, ToC: c(21), TimeS: min_(120), Clock: after(model.Cook)}, "cook 0-60, cool 60-300", carry, NotMet, 140, 60, 200},
		{"B1 clock at the start of the chill", Limit{Kind: CoolWithin, ToC: c(21), TimeS: min_(120), Clock: fromStart(model.Cool)}, "cook 0-60, rest 60-90, cool 90-300", carry, Met, 110, 90, 200},
		{"B2 never above From", cooling(), "cook 0-60, cool 60-300", "0:5 60:59 300:3", NotApplicable, math.NaN(), math.NaN(), math.NaN()},
		{"B2 starts below From and rises above it", cooling(), "cook 0-60, cool 60-300", "0:21 60:61 70:60 150:21 300:3", Met, 80, 70, 150},
		{"B2 ends before To, time left", cooling(), "cook 0-60, cool 60-150", "0:5 60:61 70:60 150:30", CannotTell, 80, 70, math.NaN()},
		{"B2 ends before To, time run out", cooling(), "cook 0-60, cool 60-200", "0:5 60:61 70:60 200:30", NotMet, 130, 70, math.NaN()},
		{"B2 ends above From", cooling(), "cook 0-60, cool 60-80", "0:5 60:80 80:70", CannotTell, math.NaN(), math.NaN(), math.NaN()},
		{"B2 kept hot, never chilled", cooling(), "cook 0-60, hold hot 60-200", "0:5 60:80 200:70", NotApplicable, math.NaN(), math.NaN(), math.NaN()},
		{"B3 a door opening lifts it above From again", cooling(), "cook 0-60, cool 60-400", "0:5 60:80 80:60 100:55 110:62 120:60 190:21 400:3", Met, 110, 80, 190},
		{"B3 a door opening lifts it above To again", cooling(), "cook 0-60, cool 60-400", "0:5 60:80 80:60 180:21 190:20 195:22 205:21 400:3", NotMet, 125, 80, 205},
		{"B4 total", Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Total}, "cook 0-60", "0:63 6:63 6.5:60 7:63 11:63 12:50 60:20", Met, 10, 0, 11},
		{"B4 continuous", Limit{Kind: Hold, FromC: c(63), TimeS: min_(10), Counting: Continuous}, "cook 0-60", "0:63 6:63 6.5:60 7:63 11:63 12:50 60:20", NotMet, 6, 0, 6},
		{"B4 once", Limit{Kind: Hold, FromC: c(63), TimeS: min_(5), Counting: Once}, "cook 0-60", "0:63 6:63 6.5:60 7:63 11:63 12:50 60:20", NotMet, 6, 0, 6},
		{"B6 63.0 where above 63 is wanted (Scotland)", Limit{Kind: StayAbove, FromC: c(63), Compare: MoreThan}, "hold hot 0-60", "0:70 30:63 60:64", NotMet, 63, math.NaN(), math.NaN()},
		{"B6 63.0 where below 63 is the offence (England)", Limit{Kind: StayAbove, FromC: c(63)}, "hold hot 0-60", "0:70 30:63 60:64", Met, 63, math.NaN(), math.NaN()},
		{"B6 8.0 where above 8 is the offence", Limit{Kind: StayBelow, ToC: c(8)}, "store 0-60", "0:5 60:8", Met, 8, math.NaN(), math.NaN()},
		{"B6 41 °F where less is wanted (Minnesota)", Limit{Kind: StayBelow, ToC: f(41), Compare: LessThan}, "store 0-60", "0:4 60:5", NotMet, 5, math.NaN(), math.NaN()},
		{"B6 exactly 120 min, at most", cooling(), "cook 0-60, cool 60-300", "0:5 60:61 70:60 190:21 300:3", Met, 120, 70, 190},
		{"B6 exactly 15 min, more than", Limit{Kind: Hold, FromC: c(70), TimeS: min_(15), Counting: Total, CompareTime: MoreThan}, "cook 0-60", "0:20 10:70 25:70 60:20", NotMet, 15, 10, 25},
		{"B6 reached at exactly 75, at least", Limit{Kind: Hold, FromC: c(75), TimeS: c(0), Counting: Total}, "cook 0-60", "0:20 30:75 60:20", Met, 75, math.NaN(), math.NaN()},
		{"B6 reached at exactly 75, more than", Limit{Kind: Hold, FromC: c(75), TimeS: c(0), Counting: Total, Compare: MoreThan}, "cook 0-60", "0:20 30:75 60:20", NotMet, 75, math.NaN(), math.NaN()},
		{"B6 flat at From, more than", Limit{Kind: Hold, FromC: c(63), TimeS: min_(5), Counting: Total, Compare: MoreThan}, "cook 0-60", "0:20 10:63 40:63 60:20", NotMet, 0, math.NaN(), math.NaN()},
		{"B7 130 °F is 54.44 °C, not 54", Limit{Kind: Hold, FromC: f(130), TimeS: min_(112), Counting: Total}, "cook 0-200", "0:54.2 200:54.2", NotMet, 0, math.NaN(), math.NaN()},
		{"B7 165 °F is 73.89 °C, not 74", Limit{Kind: Hold, FromC: f(165), TimeS: c(0), Counting: Total}, "cook 0-60", "0:20 60:73.9", Met, 73.9, math.NaN(), math.NaN()},
		{"B8 the same in its sense, frozen hard", Limit{Kind: StayBelow, ToC: c(-18)}, "store 0-60", "0:-25 60:-25", Met, -25, math.NaN(), math.NaN()},
		{"B8 the same in its sense, thawed", Limit{Kind: StayBelow, ToC: c(-18)}, "store 0-60", "0:-25 60:-10", NotMet, -10, math.NaN(), math.NaN()},
		{"B13 reheating: 41 °F to 165 °F in 2 h (FDA Food Code 2022 3-403.11(D) with (A))", Limit{Kind: Band, FromC: f(41), ToC: f(165), TimeS: min_(120), Counting: Total}, "reheat 0-150", "0:5 100:57.2222222222 130:73.8888888889 150:80", NotMet, 130, 0, 130},
		{"B13 reheating: 41 °F to 135 °F in 2 h (FDA Food Code 2022 3-403.11(D) with (C))", Limit{Kind: Band, FromC: f(41), ToC: f(135), TimeS: min_(120), Counting: Total}, "reheat 0-150", "0:5 100:57.2222222222 130:73.8888888889 150:80", Met, 100, 0, 100},
		{"B14 roast at 130 °F, 121 min (older editions of FDA 3-401.11(B))", Limit{Kind: Hold, FromC: f(130), TimeS: min_(121), Counting: Total}, "cook 0-200", "0:54.5 115:54.5 115.0001:20 200:20", NotMet, 115, 0, 115},
		{"B14 roast at 130 °F, 112 min (later editions of FDA 3-401.11(B))", Limit{Kind: Hold, FromC: f(130), TimeS: min_(112), Counting: Total}, "cook 0-200", "0:54.5 115:54.5 115.0001:20 200:20", Met, 115, 0, 115},
		{"B14 poultry at 165 °F, 15 s (FDA Food Code 2013 3-401.11(A)(3))", Limit{Kind: Hold, FromC: f(165), TimeS: c(15), Counting: Total}, "cook 0-60", "0:20 29.9999:20 30:74 30.1:74 30.1001:20 60:20", NotMet, 0.1, 30, 30.1},
		{"B14 poultry at 165 °F, reached once (FDA Food Code 2017 3-401.11(A)(3), less than 1 s)", Limit{Kind: Hold, FromC: f(165), TimeS: c(0), Counting: Total}, "cook 0-60", "0:20 29.9999:20 30:74 30.1:74 30.1001:20 60:20", Met, 74, math.NaN(), math.NaN()},
		{"B15 fish at −20 °C, 24 h (EU, Regulation 853/2004)", Limit{Kind: Hold, ToC: c(-20), TimeS: min_(24 * 60), Counting: Total}, "store 0-9000", "0:-20 6000:-20 6001:0 9000:0", Met, 6000, 0, 6000},
		{"B15 fish at −20 °C, 168 h (FDA Food Code 3-402.11)", Limit{Kind: Hold, ToC: c(-20), TimeS: min_(168 * 60), Counting: Total}, "store 0-9000", "0:-20 6000:-20 6001:0 9000:0", NotMet, 6000, 0, 6000},
		{"B10 time between rows is not interpolated", Limit{Kind: HoldTable, Counting: Total, Table: fahrenheit(141, 9, 142, 8)}, "cook 0-60", "0:60.6 8.5:60.6 8.500001:20 60:20", NotMet, 8.5 / 9, 0, 8.5},
		{"B11 z 7.5 at 65 °C", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)}, "cook 0-10", "0:65 10:65", Met, 2.154434690, 0, 10},
		{"B11 z 6 at 65 °C", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(6), TimeS: min_(2)}, "cook 0-10", "0:65 10:65", NotMet, 1.467799268, 0, 10},
		{"B20 a time of 0 is a value: reached once", Limit{Kind: Hold, FromC: c(82), TimeS: c(0), Counting: Total}, "cook 0-60", "0:20 30:82.1 30.1:20 60:20", Met, 82.1, math.NaN(), math.NaN()},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, x.l, record(t, x.spans, x.course))
			if got.Verdict != x.verdict {
				t.Errorf("%v, want %v: %s", got.Verdict, x.verdict, got.Why)
			}
			if !math.IsNaN(x.value) {
				closeTo(t, "value", got.Value, x.value, 1e-6)
			}
			if x.l.Kind == CoolWithin && x.verdict == NotMet && (got.MarginS == nil) != math.IsNaN(x.end) { // what is lacking is not known before it is down
				t.Errorf("lacking %v s", got.MarginS)
			}
			for what, pair := range map[string]struct {
				got  *float64
				want float64
			}{"clock start": {got.ClockStartS, 60 * x.start}, "clock end": {got.ClockEndS, 60 * x.end}} {
				if math.IsNaN(pair.want) {
					if pair.got != nil {
						t.Errorf("%s: %g, want none", what, *pair.got)
					}
					continue
				}
				closeTo(t, what, pair.got, pair.want, 1e-3)
			}
		})
	}
}

// TestPrintedSign: the annexure of South Africa's R.638 of 2018 prints "≥ −18 °C" for frozen food; a sign that is copied and not
// understood is refused, never judged (B8).
func TestPrintedSign(t *testing.T) {
	l := Limit{Name: "frozen", Applies: Applies{All: true}, Kind: StayBelow, ToC: c(-18), Compare: AtLeast}
	if fs := l.Faults(); len(fs) != 1 || fs[0].Column != "Compare" {
		t.Errorf("faults %+v", fs)
	}
	for _, course := range []string{"0:-25 60:-25", "0:-25 60:-10"} {
		if j := Judge([]Limit{l}, nil, Subject{Product: "peas", History: record(t, "store 0-60", course)}); j.Verdict != CannotTell {
			t.Errorf("%s: %v", course, j.Verdict)
		}
	}
}

// TestWhichPlace: a come-up starts at the surface and ends at the core, a warmest portion is the surface on warming, and nothing is
// ever averaged (B12).
func TestWhichPlace(t *testing.T) {
	h := records(t, "reheat 0-200", trace(t, "centre", 0, "0:4 60:5 190:73.8888888889 200:76"), trace(t, "surface", 30, "0:5 100:73.8888888889 200:90"))
	got := one(t, Limit{Kind: Band, FromC: f(41), ToC: f(165), TimeS: min_(120), Counting: Total}, h)
	if got.Verdict != NotMet || got.PlaceName != "centre" {
		t.Errorf("come-up: %v at %s", got.Verdict, got.PlaceName)
	}
	closeTo(t, "come-up", got.Value, 130, 1e-6)
	h = records(t, "store 0-100", trace(t, "centre", 0, "0:5 100:12"), trace(t, "surface", 30, "0:5 100:22"))
	if got := one(t, Limit{Kind: StayBelow, ToC: f(70)}, h); got.Verdict != NotMet || got.PlaceName != "surface" || *got.Value != 22 {
		t.Errorf("warmest portion: %v at %s: %v", got.Verdict, got.PlaceName, *got.Value)
	}
	h = records(t, "cook 0-60", trace(t, "centre", 0, "0:5 60:70"), trace(t, "surface", 30, "0:5 60:82")) // their mean is 76
	if got := one(t, Limit{Kind: Hold, FromC: c(75), TimeS: c(0), Counting: Total}, h); got.Verdict != NotMet || *got.Value != 70 {
		t.Errorf("worst, not mean: %v: %v", got.Verdict, *got.Value)
	}
}

// TestOverlappingRules: food that cools for five hours meets a rule of six hours and misses one of four; the user says which
// governs, by a group or a level, and the other is shown all the same (B19).
func TestOverlappingRules(t *testing.T) {
	six := Limit{Name: "cooling", Applies: Applies{All: true}, Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(360), Clock: crossing}
	four := Limit{Name: "2 h/4 h", Applies: Applies{All: true}, Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(240), Counting: Total}
	h := record(t, "cook 0-60, cool 60-400", "0:60 60:70 70:60 370:5 400:3")
	for _, x := range []struct {
		name    string
		group   string
		advice  bool
		verdict Verdict
		level   string // of the rule of four hours
	}{
		{"both must be met", "", false, NotMet, "must"},
		{"the cooling rule governs, by a group", "time", false, Met, "alternative"},
		{"the cooling rule governs, by the level", "", true, Met, "advice"},
	} {
		t.Run(x.name, func(t *testing.T) {
			a, b := six, four
			a.Group, b.Group, b.Advice = x.group, x.group, x.advice
			j := Judge([]Limit{a, b}, []Group{{Name: "time", AnyOf: true}}, Subject{Product: "rice", History: h})
			if j.Verdict != x.verdict || len(j.Findings) != 2 || j.Findings[0].Verdict != Met || j.Findings[1].Verdict != NotMet || j.Findings[1].Level != x.level {
				t.Errorf("%v, %+v", j.Verdict, j.Findings)
			}
			closeTo(t, "cooling", j.Findings[0].Value, 300, 1e-6)
			closeTo(t, "in the band", j.Findings[1].Value, 300, 1e-6)
		})
	}
}

// TestTwoHeatings cools twice: both windows are judged, and the worse one is reported.
func TestTwoHeatings(t *testing.T) {
	spans := "cook 0-60, cool 60-200, reheat 200-260, cool 260-500"
	h := record(t, spans, "0:5 60:80 80:60 150:21 200:10 260:80 270:60 400:21 500:5")
	got := one(t, cooling(), h)
	if got.Verdict != NotMet || *got.Value != 130 || *got.ClockStartS != 270*60 {
		t.Errorf("%v, %v min from %v s: %s", got.Verdict, *got.Value, *got.ClockStartS, got.Why)
	}
	// the window of the first heating ends when the reheat starts: a place that is still warm then was not cooled
	cut := record(t, spans, "0:5 60:80 80:60 200:30 260:80 270:60 350:21 500:5")
	if got := one(t, cooling(), cut); got.Verdict != CannotTell || !strings.Contains(got.Why, "next heating") {
		t.Errorf("reheated before it was cold: %v: %s", got.Verdict, got.Why)
	}
	// lethality is never summed across them: 1.2 min each, 2 needed
	l := Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), FromC: c(60)}
	twice := record(t, spans, "0:70 1.2:70 1.3:20 200:5 209.9:5 210:70 211.2:70 211.3:20 500:5")
	got = one(t, l, twice)
	if got.Verdict != NotMet || len(got.Notes) != 1 {
		t.Errorf("lethality of two heatings: %v, %v", got.Verdict, got.Notes)
	}
	closeTo(t, "the better heating alone", got.Value, 1.2, 0.02)
	// a total hold over stages with chilling between says so
	hold := Limit{Kind: Hold, FromC: c(69), TimeS: min_(2), Counting: Total, Stages: st(model.Cook, model.Reheat)}
	if got := one(t, hold, twice); got.Verdict != Met || len(got.Notes) != 1 {
		t.Errorf("total hold: %v, %v", got.Verdict, got.Notes)
	}
}

// TestWindowStage names the stage in which cooling has to end.
func TestWindowStage(t *testing.T) {
	l := Limit{Kind: CoolWithin, ToC: c(10), TimeS: min_(200), Clock: after(model.Cook), Stages: st(model.Cool)}
	spans := "cook 0-60, cool 60-160, store 160-400"
	if got := one(t, l, record(t, spans, "0:5 60:80 150:10 400:3")); got.Verdict != Met {
		t.Errorf("within the chill: %v: %s", got.Verdict, got.Why)
	}
	if got := one(t, l, record(t, spans, "0:5 60:80 170:10 400:3")); got.Verdict != NotMet || !strings.Contains(got.Why, "stage cool ended") {
		t.Errorf("in the store: %v: %s", got.Verdict, got.Why)
	}
}

// TestEndedStage: what has not happened when the named stage ends can no longer happen in it, although time is left.
func TestEndedStage(t *testing.T) {
	for _, x := range []struct {
		name          string
		l             Limit
		spans, course string
		want          Verdict
		says          string
	}{
		{"cool: still warm at the end of the chain", Limit{Kind: CoolWithin, ToC: c(10), TimeS: min_(900), Clock: after(model.Cook), Stages: st(model.Cool)}, "cook 0-60, cool 60-160, store 160-400", "0:5 60:80 160:40 400:20", NotMet, "stage cool ended"},
		{"cool: the same without a stage", Limit{Kind: CoolWithin, ToC: c(10), TimeS: min_(900), Clock: after(model.Cook)}, "cook 0-60, cool 60-160, store 160-400", "0:5 60:80 160:40 400:20", CannotTell, "history ended"},
		{"heat: reached while resting", Limit{Kind: HeatWithin, ToC: c(75), TimeS: min_(120), Clock: fromStart(model.Reheat), Stages: st(model.Reheat)}, "reheat 0-60, rest 60-100", "0:5 60:74 70:75 100:76", NotMet, "stage reheat ended"},
		{"heat: reached in the stage", Limit{Kind: HeatWithin, ToC: c(75), TimeS: min_(120), Clock: fromStart(model.Reheat), Stages: st(model.Reheat)}, "reheat 0-60, rest 60-100", "0:5 59:75 60:76 100:76", Met, ""},
		{"heat: never reached", Limit{Kind: HeatWithin, ToC: c(75), TimeS: min_(120), Clock: fromStart(model.Reheat), Stages: st(model.Reheat)}, "reheat 0-60, rest 60-100", "0:5 60:70 100:60", NotMet, "stage reheat ended"},
		{"heat: never reached, time run out", Limit{Kind: HeatWithin, ToC: c(75), TimeS: min_(90), Clock: fromStart(model.Reheat)}, "reheat 0-60, rest 60-100", "0:5 60:70 100:60", NotMet, "after 100 min"},
		{"heat: from the crossing of 5 °C", Limit{Kind: HeatWithin, FromC: c(5), ToC: c(75), TimeS: min_(60), Clock: crossing}, "reheat 0-100", "0:3 30:5 89:75 100:75", Met, "59 min"},
		{"heat: warmer than that from the start", Limit{Kind: HeatWithin, FromC: c(5), ToC: c(75), TimeS: min_(60), Clock: crossing}, "reheat 0-100", "0:8 61:75 100:75", NotMet, "61 min"},
	} {
		t.Run(x.name, func(t *testing.T) {
			if got := one(t, x.l, record(t, x.spans, x.course)); got.Verdict != x.want || !strings.Contains(got.Why, x.says) {
				t.Errorf("%v, want %v: %s", got.Verdict, x.want, got.Why)
			}
		})
	}
}

// TestInstants of kinds whose clock is found in the course.
func TestInstants(t *testing.T) {
	rise := one(t, Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(0.5)}, record(t, "cool 0-100", "0:60 20:40 25:41 100:5"))
	closeTo(t, "start of the rise", rise.ClockStartS, 20*60, 1e-9)
	closeTo(t, "end of the rise", rise.ClockEndS, 25*60, 1e-9)
	frozen := one(t, Limit{Kind: FreezeHold, FromC: c(-35), TimeS: min_(10), ToC: c(-20), SecondS: min_(60)}, record(t, "freeze 0-300", "0:5 40:-35 60:-35 100:-30 150:-20 200:0 300:0"))
	closeTo(t, "first phase done", frozen.ClockStartS, 50*60, 1e-6)
	closeTo(t, "second phase over", frozen.ClockEndS, 150*60, 1e-6)
	closeTo(t, "second phase", frozen.Value, 100, 1e-9)
}

// TestGroupTellsItsMembers: which limits a group has, with their own verdicts, whichever decides.
func TestGroupTellsItsMembers(t *testing.T) {
	h := record(t, "cool 0-200", "0:90 200:5")
	all := Applies{All: true}
	j := Judge([]Limit{
		{Name: "fast", Kind: CoolWithin, Applies: all, FromC: c(60), ToC: c(20), TimeS: min_(30), Clock: crossing, Group: "g"},
		{Name: "cold", Kind: ByTheEnd, Applies: all, ToC: c(8), Group: "g"},
		{Name: "hot", Kind: StayAbove, Applies: all, Stages: st(model.HoldHot), FromC: c(63), Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, Subject{History: h})
	if want := []Member{{"fast", NotMet}, {"cold", Met}, {"hot", NotApplicable}}; len(j.Groups) != 1 || !slices.Equal(j.Groups[0].Members, want) || j.Groups[0].DecidedBy != "cold" {
		t.Errorf("%+v, want %v", j.Groups, want)
	}
}

// TestEveryPoint judges each place by its own course: the coldest-anywhere envelope would miss the hold here.
func TestEveryPoint(t *testing.T) {
	h := records(t, "cook 0-60", trace(t, "centre", 0, "0:5 30:63 50:63 60:40"), trace(t, "surface", 30, "0:5 10:63 31:63 40:30 60:20"))
	l := Limit{Kind: Hold, FromC: c(63), TimeS: min_(15), Counting: Total}
	if got := one(t, l, h); got.Verdict != Met || got.PlaceName != "centre" || *got.Value != 20 {
		t.Errorf("%v at %s: %v", got.Verdict, got.PlaceName, *got.Value)
	}
	if slow := one(t, Limit{Kind: CoolWithin, ToC: c(25), TimeS: min_(60), Clock: Clock{Start: model.Cook}, Where: Where{"surface"}}, h); !strings.HasPrefix(slow.Why, "The surface took ") {
		t.Errorf("the surface alone was judged: %s", slow.Why) // not "The slowest place (surface)"
	}
	// the reported margin considers all places: the surface has 21 min but is colder elsewhere
	l = Limit{Kind: StayAbove, FromC: c(10)}
	h = records(t, "hold hot 0-60", trace(t, "centre", 0, "0:60 60:50"), trace(t, "surface", 30, "0:60 60:40"))
	got := one(t, l, h)
	closeTo(t, "margin", got.MarginK, 30, 1e-9)
	if got.PlaceName != "surface" || *got.AtS != 3600 || *got.Place != (model.Place{UpM: 0.03}) {
		t.Errorf("%s at %v", got.PlaceName, *got.AtS)
	}
	if len(got.Cells) != 1 || got.Cells[0] != (cell.Ref{Sheet: "Steps", Row: 2}) {
		t.Errorf("cells %v", got.Cells)
	}
}

// TestMargins compares margins with those that follow from the straight courses.
func TestMargins(t *testing.T) {
	for _, x := range []struct {
		name          string
		l             Limit
		spans, course string
		k, s          float64 // K and s; NaN: none wanted
	}{
		{"hold: 1 K/min up and down, 10 min above 60 of 4 needed", Limit{Kind: Hold, FromC: c(60), TimeS: min_(4), Counting: Total}, "cook 0-60", "0:40 25:65 50:40 60:40", 3, 360},
		{"hold lacking", Limit{Kind: Hold, FromC: c(60), TimeS: min_(14), Counting: Total}, "cook 0-60", "0:40 25:65 50:40 60:40", -2, -240},
		{"hold below", Limit{Kind: Hold, ToC: c(-20), TimeS: min_(20), Counting: Total}, "store 0-100", "0:0 40:-40 80:0 100:0", 10, 1200},
		{"cool: 0.5 K/min, 78 min of 90", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(90), Clock: crossing}, "cool 0-200", "0:70 140:0 200:0", 6, 720},
		{"cool lacking", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(70), Clock: crossing}, "cool 0-200", "0:70 140:0 200:0", -4, -480},
		{"band", Limit{Kind: Band, FromC: c(10), ToC: c(60), TimeS: min_(110), Counting: Total}, "cool 0-200", "0:70 140:0 200:0", 5, 600},
		{"stay below", Limit{Kind: StayBelow, ToC: c(8)}, "store 0-100", "0:5 50:6.5 100:5", 1.5, math.NaN()},
		{"reached", Limit{Kind: Hold, FromC: c(75), TimeS: c(0), Counting: Total}, "cook 0-60", "0:5 60:77", 2, math.NaN()},
		{"lethality: z·log10 of what was earned over what is needed", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)}, "cook 0-20", "0:70 20:70", 7.5, 18 * 60},
		{"table: its best row", Limit{Kind: HoldTable, Counting: Total, Table: &Table{Name: "t", Rows: []Row{{C: 60, S: 600}, {C: 70, S: 60}}}}, "cook 0-60", "0:40 25:65 50:40 60:40", 0, 0},
		{"by the end", Limit{Kind: ByTheEnd, ToC: c(5)}, "store 0-60", "0:10 60:3", 2, math.NaN()},
		{"heat: 1 K/min, 60 of 70 min", Limit{Kind: HeatWithin, ToC: c(70), TimeS: min_(70), Clock: fromStart(model.Reheat)}, "reheat 0-100", "0:10 100:110", 10, 600},
		{"outside, hot", Limit{Kind: Outside, FromC: c(5), ToC: c(60)}, "hold hot 0-60", "0:70 60:63", 3, math.NaN()},
		{"falling", Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(0.5)}, "cool 0-60", "0:70 30:40 40:40.2 60:5", 0.3, math.NaN()},
		{"excursion", Limit{Kind: StayBelow, ToC: c(8), TimeS: min_(30)}, "store 0-200", "0:5 40:5 50:15 60:5 200:5", math.NaN(), 1800 - 14*60},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, x.l, record(t, x.spans, x.course))
			for what, p := range map[string]struct {
				got       *float64
				want, tol float64
			}{"margin in K": {got.MarginK, x.k, 2e-3}, "margin in s": {got.MarginS, x.s, 1e-3}} {
				if math.IsNaN(p.want) {
					if what == "margin in s" && p.got != nil {
						t.Errorf("%s: %g, want none", what, *p.got)
					}
					continue
				}
				closeTo(t, what, p.got, p.want, p.tol)
			}
		})
	}
}

// TestErrorBand judges at the unfavourable end of the error of a history.
func TestErrorBand(t *testing.T) {
	for _, x := range []struct {
		name   string
		l      Limit
		course string
		errK   float64
		want   Verdict
		says   string
	}{
		{"met by more than the error", Limit{Kind: Hold, FromC: c(70), TimeS: c(0), Counting: Total}, "0:5 60:70.2", 0.1, Met, ""},
		{"met by less", Limit{Kind: Hold, FromC: c(70), TimeS: c(0), Counting: Total}, "0:5 60:70.05", 0.1, CannotTell, "met by 0.05 °C"},
		{"missed by less", Limit{Kind: Hold, FromC: c(70), TimeS: c(0), Counting: Total}, "0:5 60:69.95", 0.1, CannotTell, "missed by 0.05"},
		{"missed by more", Limit{Kind: Hold, FromC: c(70), TimeS: c(0), Counting: Total}, "0:5 60:69.8", 0.1, NotMet, ""},
		{"a slow fall: 0.1 K is 10 min at each end", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(59), TimeS: min_(115), Clock: crossing}, "0:61 100:60 200:59 300:58", 0.1, CannotTell, "error"},
		{"a slow fall with time to spare", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(59), TimeS: min_(121), Clock: crossing}, "0:61 100:60 200:59 300:58", 0.1, Met, ""},
		{"a band", Limit{Kind: Band, FromC: c(58.5), ToC: c(59.5), TimeS: min_(110), Counting: Total}, "0:61 100:60 200:59 300:58", 0.1, CannotTell, "error"},
		{"lethality: 36 % a degree", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(50)}, "0:70 60:70", 1, CannotTell, "error"},
		{"cold", Limit{Kind: StayBelow, ToC: c(5)}, "0:3 60:4.95", 0.1, CannotTell, "met by 0.05"},
	} {
		t.Run(x.name, func(t *testing.T) {
			h := record(t, "cool 0-300", x.course)
			if strings.HasSuffix(strings.Fields(x.course)[len(strings.Fields(x.course))-1], ":70") {
				h = record(t, "cook 0-60", x.course)
			}
			h.ErrorK = x.errK
			got := one(t, x.l, h)
			if got.Verdict != x.want || !strings.Contains(got.Why, x.says) {
				t.Errorf("%v, want %v: %s", got.Verdict, x.want, got.Why)
			}
			if x.want == CannotTell && !strings.HasSuffix(got.Why, "it cannot be told.") {
				t.Errorf("the sentence does not say so: %s", got.Why)
			}
		})
	}
}

// TestBound judges a history whose temperatures are bounds from 100 min on.
func TestBound(t *testing.T) {
	for _, x := range []struct {
		name   string
		l      Limit
		course string
		want   Verdict
	}{
		{"a hold reached before", Limit{Kind: Hold, FromC: c(70), TimeS: min_(2), Counting: Total}, "0:5 50:72 60:72 100:20 300:-2", Met},
		{"a hold that needs what comes after", Limit{Kind: Hold, FromC: c(10), TimeS: min_(120), Counting: Total}, "0:5 50:72 100:60 200:10 300:-2", CannotTell},
		{"a hold in the cook", Limit{Kind: Hold, Stages: st(model.Cook), FromC: c(70), TimeS: min_(2), Counting: Total}, "0:5 50:72 60:72 100:20 300:-2", Met},
		{"a hold missed", Limit{Kind: Hold, FromC: c(70), TimeS: min_(20), Counting: Total}, "0:5 50:72 60:72 100:20 300:-2", NotMet},
		{"cooling", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(240), Clock: crossing}, "0:5 50:72 60:72 100:20 300:-2", Met},
		{"keeping cold", Limit{Kind: StayBelow, Stages: st(model.Store), ToC: c(5)}, "0:5 50:72 60:72 100:20 200:5 300:-2", Met},
		{"never below 0", Limit{Kind: StayAbove, FromC: c(0)}, "0:5 50:72 60:72 100:20 300:1", CannotTell},
		{"below 0 even so", Limit{Kind: StayAbove, FromC: c(0)}, "0:5 50:72 60:72 100:20 300:-1", NotMet},
		{"cold at the end", Limit{Kind: ByTheEnd, ToC: c(3)}, "0:5 50:72 60:72 100:20 300:1", Met},
		{"heated before", Limit{Kind: HeatWithin, ToC: c(70), TimeS: min_(60), Clock: fromStart(model.Cook)}, "0:5 50:72 60:72 100:20 300:-2", Met},
		{"warm at the end of the cook", Limit{Kind: ByTheEnd, FromC: c(70), Stages: st(model.Cook)}, "0:5 50:72 60:72 100:20 300:-2", Met},
		{"outside before and after", Limit{Kind: Outside, FromC: c(-10), ToC: c(-5)}, "0:5 50:72 60:72 100:20 300:-2", CannotTell},
		{"warm at the end", Limit{Kind: ByTheEnd, FromC: c(0)}, "0:5 50:72 60:72 100:20 300:1", CannotTell},
	} {
		t.Run(x.name, func(t *testing.T) {
			h := record(t, "cook 0-60, cool 60-200, store 200-300", x.course)
			h.Bound, h.BoundFromS = "chill air raised to the freezing point", 6000
			if got := one(t, x.l, h); got.Verdict != x.want {
				t.Errorf("%v, want %v: %s", got.Verdict, x.want, got.Why)
			}
		})
	}
}

// TestLowConductivity reports the worse of two runs.
func TestLowConductivity(t *testing.T) {
	usual := record(t, "cook 0-60", "0:5 60:76")
	low := record(t, "cook 0-60", "0:5 60:74")
	l := Limit{Name: "L", Kind: Hold, Applies: Applies{All: true}, FromC: c(75), TimeS: c(0), Counting: Total}
	j := Judge([]Limit{l}, nil, Subject{Product: "P", History: usual, Further: []Run{{LowConductivity, low}}})
	if j.Verdict != NotMet || j.Findings[0].Run != LowConductivity || *j.Findings[0].Value != 74 {
		t.Errorf("%v, %+v", j.Verdict, j.Findings[0])
	}
	j = Judge([]Limit{l}, nil, Subject{Product: "P", History: low, Further: []Run{{LowConductivity, usual}}})
	if j.Verdict != NotMet || j.Findings[0].Run != "" {
		t.Errorf("%v, %+v", j.Verdict, j.Findings[0])
	}
	tied := record(t, "cook 0-60", "0:5 60:75.99999") // as where both end a step at one temperature: the usual run is named
	j = Judge([]Limit{l}, nil, Subject{Product: "P", History: usual, Further: []Run{{LowConductivity, tied}}})
	if j.Verdict != Met || j.Findings[0].Run != "" || *j.Findings[0].Value != 76 {
		t.Errorf("a tie: %v, %+v", j.Verdict, j.Findings[0])
	}
}

// TestCautions attach by trigger.
func TestCautions(t *testing.T) {
	for _, x := range []struct {
		name, spans, course string
		l                   Limit
		want                string
	}{
		{"no floor, quick", "cook 0-60", "0:5 1:80 20:80 21:5 60:5", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2)}, "lethality without floor"},
		{"floor, quick", "cook 0-60", "0:5 1:80 20:80 21:5 60:5", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), FromC: c(60)}, ""},
		{"slow come-up, 1 K/min", "cook 0-80", "0:5 75:80 75.1:5 80:5", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), FromC: c(55)}, "slow come-up lethality"},
		{"barely above the floor", "cook 0-80", "0:5 1:63 75:63 75.1:5 80:5", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), FromC: c(55)}, "slow come-up lethality"},
		{"row below 60 °C", "cook 0-200", "0:54.5 200:54.5", Limit{Kind: HoldTable, Counting: Total, Table: fahrenheit(130, 112, 158, 0)}, "below 60 °C table row"},
		{"row above it", "cook 0-200", "0:54.5 10:71 200:54.5", Limit{Kind: HoldTable, Counting: Total, Table: fahrenheit(130, 1120, 158, 0)}, ""},
		{"a 1-minute log cannot show 15 s (B18)", "cook 0-60", "0:5 29:70 30:74.1 31:70 60:5", Limit{Kind: Hold, FromC: c(74), TimeS: c(1), Counting: Total}, "sparse record"},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, x.l, record(t, x.spans, x.course))
			if strings.Join(got.Cautions, ", ") != x.want {
				t.Errorf("%q, want %q", got.Cautions, x.want)
			}
			if x.want == "sparse record" && got.Verdict != CannotTell {
				t.Errorf("%v: %s", got.Verdict, got.Why)
			}
		})
	}
}

// TestHumidity judges the stated humidity of the cook (A18).
func TestHumidity(t *testing.T) {
	step := func(min float64, rh *float64, course []float64) model.Step {
		s := filmStep(model.Cook, min, 80, 30)
		s.RH = rh
		if course != nil {
			s.Medium = model.Course{TimesS: []float64{0, 60 * min}, C: []float64{80, 80}, RH: course}
		}
		return s
	}
	at := func(steps ...model.Step) *model.History {
		return solve(t, model.Slab, model.Size{ThicknessM: 0.04}, 5, steps...)
	}
	l := Limit{Kind: Humidity, Stages: st(model.Cook), HumidityPc: c(90), SharePc: c(50), TimeS: min_(60)}
	for _, x := range []struct {
		name        string
		h           *model.History
		want        Verdict
		value, need float64
	}{
		{"95 % for half of 3 h", at(step(90, c(95), nil), step(90, c(40), nil)), Met, 90, 90},
		{"95 % for an hour of 3 h", at(step(60, c(95), nil), step(120, c(40), nil)), NotMet, 60, 90},
		{"at least 1 h: 40 min of 50", at(step(40, c(95), nil), step(10, c(40), nil)), NotMet, 40, 60},
		{"rising from 80 to 100 %: half the time", at(step(180, nil, []float64{80, 100})), Met, 90, 90},
		{"not stated", at(step(180, nil, nil)), CannotTell, 0, 90},
		{"not stated for a part that would decide", at(step(60, c(95), nil), step(120, nil, nil)), CannotTell, 60, 90},
		{"not stated for a part that does not matter", at(step(120, c(95), nil), step(60, nil, nil)), Met, 120, 90},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, l, x.h)
			if got.Verdict != x.want {
				t.Errorf("%v, want %v: %s", got.Verdict, x.want, got.Why)
			}
			closeTo(t, "value", got.Value, x.value, 1e-3)
			closeTo(t, "needed", got.Required, x.need, 1e-9)
		})
	}
	more := l
	more.Compare = MoreThan
	if got := one(t, more, at(step(90, c(90), nil), step(90, c(40), nil))); got.Verdict != NotMet {
		t.Errorf("90 %% where more than 90 is wanted: %v", got.Verdict)
	}
}

// TestDelay finds the second stage.
func TestDelay(t *testing.T) {
	l := Limit{Kind: Delay, Stages: st(model.Cook), Then: model.Cool, TimeS: min_(90)}
	for _, x := range []struct {
		name, spans string
		want        Verdict
		value       float64
	}{
		{"at once", "cook 0-60, cool 60-100", Met, 0},
		{"two cooks, the second too late", "cook 0-60, cool 60-100, cook 100-160, rest 160-300, cool 300-400", NotMet, 140},
		{"cooked again before", "cook 0-60, rest 60-200, cook 200-260, cool 260-400", Met, 0},
		{"cooked again and not chilled after it", "cook 0-60, cool 60-100, cook 100-160, rest 160-200", CannotTell, 40},
		{"not chilled after it, time run out", "cook 0-60, cool 60-100, cook 100-160, rest 160-300", NotMet, 140},
		{"chilled raw, cooked and served", "cool 0-40, cook 40-60, rest 60-80", CannotTell, math.NaN()},
		{"chilled raw, cooked and held hot past the time", "cool 0-40, cook 40-60, hold hot 60-300", CannotTell, math.NaN()},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, l, record(t, x.spans, "0:5 100:60"))
			if got.Verdict != x.want {
				t.Errorf("%v, want %v: %s", got.Verdict, x.want, got.Why)
			}
			if math.IsNaN(x.value) { // the chilling is none of the cooked food, so no time is counted
				if got.Value != nil || !strings.Contains(got.Why, "cool comes only before the stage cook") || !strings.Contains(got.Why, "call it store") {
					t.Errorf("%v: %s", got.Value, got.Why)
				}
				return
			}
			closeTo(t, "value", got.Value, x.value, 1e-9)
		})
	}
	heat := Limit{Kind: Delay, Stages: st(model.Cook), Then: model.HoldHot, TimeS: min_(90)}
	if got := one(t, heat, record(t, "hold hot 0-40, cook 40-200", "0:5 200:80")); got.Verdict != CannotTell || strings.Contains(got.Why, "store") {
		t.Errorf("%v: %s", got.Verdict, got.Why)
	}
}

// TestPlaces that are not there.
func TestPlaces(t *testing.T) {
	h := record(t, "cook 0-60", "0:5 60:80")
	for where, says := range map[string]string{"surface": "surface", "medium": "surroundings", "probe 2": "probe 2"} {
		got := one(t, Limit{Kind: StayAbove, FromC: c(0), Where: Where{where}}, h)
		if got.Verdict != CannotTell || !strings.Contains(got.Why, says) {
			t.Errorf("%s: %v: %s", where, got.Verdict, got.Why)
		}
	}
	if got := one(t, Limit{Kind: StayAbove, FromC: c(0), Where: Where{"Centre"}}, h); got.Verdict != Met || got.PlaceName != "centre" {
		t.Errorf("centre: %v at %s", got.Verdict, got.PlaceName)
	}
}

// TestMedium jumps from step to step: the air before a change does not count for the step after it.
func TestMedium(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.04}, 5, filmStep(model.Cook, 60, 110, 30), filmStep(model.Cool, 120, 2, 20))
	l := Limit{Kind: StayBelow, Stages: st(model.Cool), ToC: c(4), Where: Where{"medium"}}
	got := one(t, l, h)
	if got.Verdict != Met || *got.Value != 2 || *got.MarginK != 2 || got.Place != nil {
		t.Errorf("%v, %v: %s", got.Verdict, *got.Value, got.Why)
	}
	l = Limit{Kind: Hold, FromC: c(100), TimeS: min_(60), Counting: Total, Where: Where{"medium"}}
	if got := one(t, l, h); got.Verdict != Met || *got.Value != 60 {
		t.Errorf("%v, %v: %s", got.Verdict, *got.Value, got.Why)
	}
}

// TestCoolAgain says of food that was down and is above To at the end that it rose; a display after the store is common practice.
func TestCoolAgain(t *testing.T) {
	l := Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(360), Clock: crossing}
	for _, x := range []struct {
		name, spans, course string
		want                Verdict
		why, note           string
	}{
		{"down, then warm again", "cook 0-60, cool 60-400, hold cold 400-800", "0:5 60:80 80:60 300:4 400:4 500:7 800:7", NotMet, "was again above 5 °C after 720 min", "Rose above 5 °C again at 7 h 13 min"},
		{"never down", "cook 0-60, cool 60-400, hold cold 400-800", "0:5 60:80 80:60 300:9 800:7", NotMet, "was still above 5 °C after 720 min", ""},
		{"warm again, and time left", "cook 0-60, cool 60-300", "0:5 60:80 80:60 200:4 300:7", CannotTell, "was again above 5 °C when the history ended", "Rose above 5 °C again"},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := one(t, l, record(t, x.spans, x.course))
			notes := strings.Join(got.Notes, " ")
			if got.Verdict != x.want || !strings.Contains(got.Why, x.why) || !strings.Contains(notes, x.note) || x.note == "" && notes != "" {
				t.Errorf("%v: %s Notes: %s", got.Verdict, got.Why, notes)
			}
		})
	}
}
