package rules

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model"
)

// TestStatedAnswers takes yes for a yes only where nothing takes it back.
func TestStatedAnswers(t *testing.T) {
	h := record(t, "cook 0-60", "0:5 60:80")
	for _, x := range []struct {
		answer string
		want   Verdict
	}{
		{"yes", Met}, {" Yes. ", Met}, {"yes, sealed bags", Met}, {"yes – seen by the cook", Met}, {"yes: form 4", Met}, {"yes; both lids", Met}, {"Yes, checked on Monday by the chef", Met},
		{"yes, checked 3 May 2026", Met}, {"yes, at most 2 h", Met}, {"yes, may be", CannotTell}, {"yes, excluding fish", CannotTell}, {"yes, other than fish", CannotTell},
		{"yes, from next week", CannotTell}, {"yes, will do so", CannotTell}, {"yes, unconfirmed", CannotTell}, {"yes, in progress", CannotTell}, {"yes, hardly ever", CannotTell},
		{"yes, most of the time", CannotTell}, {"yes, to be done", CannotTell},
		{"yes, if time allows", CannotTell}, {"yes, pending", CannotTell}, {"yes, mostly", CannotTell}, {"yes, should be", CannotTell}, {"yes – to be confirmed", CannotTell},
		{"yes, when the chiller is free", CannotTell}, {"yes; nothing else is open", CannotTell},
		{"yes, but not on Sundays", CannotTell}, {"yes, unless it is busy", CannotTell}, {"yes?", CannotTell}, {"yes, never checked", CannotTell},
		{"yes and no", CannotTell}, {"yes mostly", CannotTell}, {"yes, isn't it", CannotTell}, {"yes, in no case", CannotTell}, {"yesterday", CannotTell},
		{"no", NotMet}, {"No, never", NotMet}, {"", CannotTell}, {"perhaps", CannotTell},
	} {
		t.Run(x.answer, func(t *testing.T) {
			f := one(t, Limit{Kind: Stated, Answer: x.answer}, h)
			if f.Verdict != x.want {
				t.Errorf("%v, want %v: %s", f.Verdict, x.want, f.Why)
			}
			if a := strings.Trim(x.answer, " ."); !strings.Contains(f.Why, a) {
				t.Errorf("the answer is not printed: %s", f.Why)
			}
		})
	}
}

// TestStartsExactlyAtFrom counts a fall from exactly the temperature that starts the clock as the unfavourable reading.
func TestStartsExactlyAtFrom(t *testing.T) {
	limit := func(from, minutes float64) Limit {
		return Limit{Kind: CoolWithin, FromC: c(from), ToC: c(21), TimeS: min_(minutes), Clock: crossing}
	}
	for _, x := range []struct {
		name, course string
		l            Limit
		want         Verdict
		why          string
	}{
		{"exactly at From, too slow", "0:60 300:20", limit(60, 120), CannotTell, "exactly"},
		{"exactly at From, in time", "0:60 100:20", limit(60, 120), NotApplicable, "reached 60"},
		{"below From", "0:59.9 300:20", limit(60, 120), NotApplicable, "Nothing was above 60 °C: the warmest place judged reached 59.9 °C"},
		{"Fahrenheit typed as Celsius", "0:75 300:20", limit(135, 120), NotApplicable, "Nothing was above 135 °C: the warmest place judged reached 75 °C"},
		{"above From", "0:60.1 300:20", limit(60, 120), NotMet, "allowed"},
	} {
		t.Run(x.name, func(t *testing.T) {
			f := one(t, x.l, record(t, "cool 0-300", x.course+map[bool]string{true: " 300:20"}[strings.HasPrefix(x.course, "0:60 100")]))
			if f.Verdict != x.want || !strings.Contains(f.Why, x.why) {
				t.Errorf("%v: %s", f.Verdict, f.Why)
			}
		})
	}
	t.Run("within the error of From", func(t *testing.T) {
		h := record(t, "cool 0-300", "0:59.9 300:20")
		h.ErrorK = 0.2
		if f := one(t, limit(60, 120), h); f.Verdict != CannotTell || !strings.Contains(f.Why, "the error of the calculation is 0.2") {
			t.Errorf("%v: %s", f.Verdict, f.Why)
		}
	})
	t.Run("another place exactly at From", func(t *testing.T) {
		h := records(t, "cool 0-300", trace(t, "a", 0, "0:70 60:10 300:5"), trace(t, "b", 5, "0:60 250:30 300:20"))
		if f := one(t, limit(60, 120), h); f.Verdict != CannotTell || !strings.Contains(f.Why, "another place") {
			t.Errorf("%v: %s", f.Verdict, f.Why)
		}
	})
}

// TestEndlessLethality never calls met what is no number.
func TestEndlessLethality(t *testing.T) {
	h := record(t, "cook 0-60", "0:5 60:80")
	for _, z := range []float64{1e-3, 1e-6, 0.01} {
		f := one(t, Limit{Kind: Lethality, ReferenceC: c(60), ZK: c(z), TimeS: min_(2)}, h)
		if f.Verdict != CannotTell || f.Value != nil && math.IsInf(*f.Value, 0) {
			t.Errorf("z %g: %v: %s", z, f.Verdict, f.Why)
		}
	}
	if f := one(t, Limit{Kind: Lethality, ReferenceC: c(60), ZK: c(7), TimeS: min_(2), Stages: st(model.Cook)}, h); f.Verdict != Met {
		t.Errorf("a usual z: %v: %s", f.Verdict, f.Why)
	}
}

// TestOnlyByCarryOver tells a limit that is met only by what the food gets after the cook.
func TestOnlyByCarryOver(t *testing.T) {
	both := st(model.Cook, model.Rest)
	table := &Table{Name: "T", Rows: []Row{{C: 63, S: 3600}, {C: 66, S: 0}}}
	for _, x := range []struct {
		name, course string
		l            Limit
		says         string // "": no caution
	}{
		{"reached in the rest", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: Hold, FromC: c(65), TimeS: c(0), Counting: Total, Stages: both}, "left the cook at 37.8 °C and rose to 67.8 °C"},
		{"table in the rest", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: HoldTable, Table: table, Counting: Total, Stages: both}, "left the cook at 37.8 °C"},
		{"whole chain", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: Hold, FromC: c(65), TimeS: c(0), Counting: Total}, "left the cook at 37.8 °C"},
		{"lethality in the rest", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: Lethality, ReferenceC: c(65), ZK: c(7), TimeS: c(60), Stages: both}, "rose to 67.8 °C"},
		{"the rest only", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: Hold, FromC: c(65), TimeS: c(0), Counting: Total, Stages: st(model.Rest)}, "rose to 67.8 °C"},
		{"in Fahrenheit", "0:5 60:37.8 80:67.8 90:60", Limit{Kind: Hold, FromC: f(145), TimeS: c(0), Counting: Total, Stages: both, Typed: map[string]string{"From": "145 °F"}}, "left the cook at 100 °F"},
		{"kept warm by standing", "0:5 50:66 60:68 90:65", Limit{Kind: Hold, FromC: c(65), TimeS: min_(30), Counting: Total, Stages: both}, "the cook alone is not enough"},
		{"met in the cook", "0:5 50:66 60:68 90:65", Limit{Kind: Hold, FromC: c(65), TimeS: min_(5), Counting: Total, Stages: both}, ""},
		{"not met at all", "0:5 60:37.8 80:60 90:50", Limit{Kind: Hold, FromC: c(65), TimeS: c(0), Counting: Total, Stages: both}, ""},
		{"the cook only", "0:5 50:66 60:68 90:65", Limit{Kind: Hold, FromC: c(65), TimeS: min_(5), Counting: Total, Stages: st(model.Cook)}, ""},
	} {
		t.Run(x.name, func(t *testing.T) {
			g := one(t, x.l, record(t, "cook 0-60, rest 60-90", x.course))
			if (g.CarryOver != "") != (x.says != "") || !strings.Contains(g.CarryOver, x.says) {
				t.Errorf("%v: %q", g.Verdict, g.CarryOver)
			}
			if (len(g.Cautions) > 0) != (x.says != "") && x.l.Kind != Lethality {
				t.Errorf("cautions %v", g.Cautions)
			}
		})
	}
}

// TestOnlyIdleLimits says why nothing was judged.
func TestOnlyIdleLimits(t *testing.T) {
	l := Limit{Name: "A", Kind: CoolWithin, FromC: c(80), ToC: c(21), TimeS: min_(120), Clock: crossing, Applies: Applies{All: true}}
	j := Judge([]Limit{l}, nil, Subject{Product: "P", History: record(t, "cool 0-300", "0:75 300:20")})
	if want := "no limit judged: A did not apply (Nothing was above 80 °C: the warmest place judged reached 75 °C"; j.Verdict != CannotTell || !strings.HasPrefix(j.Why, want) {
		t.Errorf("%v: %s", j.Verdict, j.Why)
	}
}

// TestStageThatEndsFirst says what the place was at when the named stage ended, and when it was down.
func TestStageThatEndsFirst(t *testing.T) {
	cool := Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(360), Clock: crossing, Stages: st(model.Cool)}
	heat := Limit{Kind: HeatWithin, ToC: c(70), TimeS: min_(120), Clock: Clock{Start: model.Reheat}, Stages: st(model.Reheat)}
	for _, x := range []struct {
		name, spans, course string
		l                   Limit
		says                []string
		lacking             float64 // min
	}{
		{"down in the store", "cook 0-60, cool 60-160, store 160-400", "0:5 60:70 70:60 160:10 260:5 400:4", cool,
			[]string{"still at 10 °C when the stage cool ended", "down to 5 °C only 190 min from 60 °C", "as cool + store."}, -100},
		{"down, and up again in the store", "cook 0-60, cool 60-160, store 160-400", "0:5 60:70 70:60 160:4 200:7 260:5 400:4", cool,
			[]string{"was at 4 °C when the stage cool ended, but rose above 5 °C again", "for good only 190 min from 60 °C", "as cool + store."}, -100},
		{"never down", "cook 0-60, cool 60-160, store 160-260", "0:5 60:70 70:60 160:10 260:6", cool,
			[]string{"was at 10 °C when the stage cool ended", "not down to 5 °C for good later either"}, -100},
		{"hot while standing", "reheat 0-60, rest 60-100", "0:5 60:60 80:70 100:65", heat,
			[]string{"only at 60 °C when the stage reheat ended", "reached 70 °C after 80 min", "as reheat + rest."}, -20},
	} {
		t.Run(x.name, func(t *testing.T) {
			f := one(t, x.l, record(t, x.spans, x.course))
			for _, w := range x.says {
				if f.Verdict != NotMet || !strings.Contains(f.Why, w) {
					t.Errorf("%v, %q is missing: %s", f.Verdict, w, f.Why)
				}
			}
			if f.MarginS != nil {
				lacks := *f.MarginS / 60
				closeTo(t, "lacking", &lacks, x.lacking, 0.01)
			} else {
				t.Error("no margin")
			}
		})
	}
}

// TestStagesInTheSentence names the stages of a time that was spent in some of them only.
func TestStagesInTheSentence(t *testing.T) {
	l := Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(240), Counting: Total, Stages: st(model.HoldHot, model.HoldCold, model.Store)}
	f := one(t, l, record(t, "cook 0-60, hold hot 60-200", "0:5 60:75 200:70"))
	if f.Verdict != Met || !strings.Contains(f.Why, "for 0 s in hold hot, hold cold and store, and") {
		t.Errorf("%v: %s", f.Verdict, f.Why)
	}
}

// TestMarginOfAnotherPlace names the place that has the margin in temperature where it is not the one that decides.
func TestMarginOfAnotherPlace(t *testing.T) {
	h := records(t, "cool 0-300", trace(t, "slow", 0, "0:70 10:60 200:20 201:4 300:4"), trace(t, "warm", 5, "0:70 10:60 100:20 130:5 300:5"))
	f := one(t, Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(240), Clock: crossing}, h)
	if f.PlaceName == "" || len(f.Notes) != 1 || !strings.Contains(f.Notes[0], "another place") || f.MarginPlace == "" || !strings.Contains(f.Notes[0], f.MarginPlace) {
		t.Errorf("%s: %v", f.Why, f.Notes)
	}
}

// TestPredictedStartAtFrom does the same with a calculated course, whose error may be smaller than any difference of places.
func TestPredictedStartAtFrom(t *testing.T) {
	h := solve(t, model.Slab, model.Size{ThicknessM: 0.06}, 60, filmStep(model.Cool, 300, 2, 40))
	for _, x := range []struct {
		name    string
		from    float64
		minutes float64
		want    Verdict
	}{
		{"exactly at From, too slow", 60, 60, CannotTell},
		{"exactly at From, in time", 60, 300, NotApplicable},
		{"well below From", 63, 60, NotApplicable},
		{"above From, too slow", 59, 60, NotMet},
	} {
		t.Run(x.name, func(t *testing.T) {
			f := one(t, Limit{Kind: CoolWithin, FromC: c(x.from), ToC: c(10), TimeS: min_(x.minutes), Clock: crossing}, h)
			if f.Verdict != x.want {
				t.Errorf("%v: %s", f.Verdict, f.Why)
			}
			if x.want == CannotTell && (f.Place == nil || !strings.Contains(f.Why, "clock starts")) {
				t.Errorf("%v %s", f.Place, f.Why)
			}
		})
	}
}
