package rules

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"slowpoint/model"
)

// logged makes a recording at the slowest point from words: "0:5 60:75 | 90:40 91:300? 92:39", minutes and °C; a bar is a gap, a question
// mark a doubted reading.
func logged(t testing.TB, spans, words string) *model.Recording {
	t.Helper()
	r := &model.Recording{Point: model.Point{Name: "slowest point"}, LowC: math.NaN(), HighC: math.NaN()}
	if spans != "" {
		r.Spans = chain(t, spans)
	}
	for _, w := range strings.Fields(words) {
		if w == "|" {
			r.Gaps = append(r.Gaps, len(r.C)-1)
			continue
		}
		a, b, _ := strings.Cut(w, ":")
		if strings.HasSuffix(b, "?") {
			r.Doubted = append(r.Doubted, len(r.C))
			b = strings.TrimSuffix(b, "?")
		}
		r.TimesS, r.C = append(r.TimesS, 60*number(t, a)), append(r.C, number(t, b))
	}
	return r
}

// found judges a single limit on a recording.
func found(t testing.TB, l Limit, r *model.Recording) Finding {
	t.Helper()
	if l.Name == "" {
		l.Name = "L"
	}
	if l.Applies == (Applies{}) {
		l.Applies = Applies{All: true}
	}
	for _, f := range l.Faults() {
		t.Fatalf("the limit is faulty: %+v", f)
	}
	fs, err := FindRecorded([]Limit{l}, Recorded{Product: "P", Family: "F", Recording: r})
	if err != nil || len(fs) != 1 {
		t.Fatalf("%d findings, %v", len(fs), err)
	}
	wellWorded(t, fs[0])
	return fs[0]
}

// hold15 is 15 s at 74 °C.
func hold15() Limit {
	return Limit{Kind: Hold, FromC: c(74), TimeS: c(15), Counting: Total}
}

// minutely writes a course each minute, for logged.
func minutely(course func(min float64) float64, from, to float64) string {
	var s []string
	for m := from; m <= to; m++ {
		s = append(s, fmt.Sprintf("%g:%.6f", m, course(m)))
	}
	return strings.Join(s, " ")
}

// chilled falls from 80 °C towards 4: it is at 60 at 18.3 min, at 21 at 89.9 min, at 8 at 176.7 min.
func chilled(m float64) float64 { return 4 + 76*math.Exp(-m/60) }

// TestRecorded judges records by hand, on both sides of each kind: what their readings show, and what they leave open.
func TestRecorded(t *testing.T) {
	hold := func(min float64, counting Counting) Limit {
		return Limit{Kind: Hold, FromC: c(70), TimeS: min_(min), Counting: counting}
	}
	lethal := func(min float64) Limit {
		return Limit{Kind: Lethality, FromC: c(60), ReferenceC: c(70), ZK: c(7.5), TimeS: min_(min)}
	}
	below := func(to float64) Limit { return Limit{Kind: StayBelow, ToC: c(to), Stages: st(model.Store)} }
	above := func(from float64) Limit { return Limit{Kind: StayAbove, FromC: c(from), Stages: st(model.HoldHot)} }
	band := func(min float64) Limit {
		return Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(min), Counting: Total}
	}
	row := func(c, s float64) Row { return Row{C: c, S: s} }
	table := Limit{Kind: HoldTable, Counting: Total, Table: &Table{Name: "t", Rows: []Row{row(60, 2700), row(65, 600), row(75, 30)}}}
	chill := minutely(chilled, 0, 200)
	cooked := "0:20 10:60 20:71 | 40:72 50:74 60:60" // 20 to 40 min lacking
	between := func(lo, hi float64) func(*model.Recording) {
		return func(r *model.Recording) { r.LowC, r.HighC = lo, hi }
	}
	for _, x := range []struct {
		name          string
		l             Limit
		spans, course string
		also          func(*model.Recording)
		verdict       Verdict
		why           string // part of the sentence
	}{
		{"a log of minutes cannot show 15 s: one reading there", hold15(), "cook 0-4", "0:20 1:70 2:74.5 3:73 4:70", nil, CannotTell, "readings there are 1 min apart and cannot show 15 s"},
		{"a log of minutes shows 15 s: two readings there", hold15(), "cook 0-4", "0:20 1:70 2:74.5 3:74.2 4:70", nil, Met, ""},
		{"a log of minutes shows that 15 s were not reached", hold15(), "cook 0-4", "0:20 1:70 2:73.5 3:73.2 4:70", nil, NotMet, ""},
		{"reached once, at a reading", Limit{Kind: Hold, FromC: c(74), TimeS: c(0), Counting: Total}, "cook 0-4", "0:20 1:70 2:74 3:73 4:70", nil, Met, ""},
		{"three readings by hand, chilled in time", cooling(), "cool 0-140", "0:65 30:50 110:18 140:12", nil, Met, ""},
		{"three readings by hand, either way", cooling(), "cool 0-140", "0:65 30:50 100:25 140:12", nil, CannotTell, "between two readings, 40 min apart at 1 h 40 min"},
		{"three readings by hand, too late", cooling(), "cool 0-200", "0:65 30:50 155:25 200:12", nil, NotMet, ""},
		{"one reading", Limit{Kind: StayBelow, ToC: c(5)}, "store 0-0", "0:4", nil, Met, ""},
		{"a log of minutes of a chill", cooling(), "cool 0-200", chill, nil, Met, ""},
		{"a log of minutes of a chill that took too long", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(8), TimeS: min_(120), Clock: crossing}, "cool 0-200", chill, nil, NotMet, ""},
		{"the record ends before the clock does", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(360), Clock: crossing}, "cool 0-200", chill, nil, CannotTell, "when the history ended"},
		{"the record ends after the clock did", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: min_(150), Clock: crossing}, "cool 0-200", chill, nil, NotMet, ""},
		{"the record ends long before the step", below(8), "store 0-300", minutely(func(m float64) float64 { return 4 }, 0, 200), nil, CannotTell, "nothing was recorded after 3 h 20 min"},
		{"the record ends a reading before the step", below(8), "store 0-202", minutely(func(m float64) float64 { return 4 }, 0, 200), nil, Met, ""},
		{"the record begins long after the step", below(8), "store 0-200", minutely(func(m float64) float64 { return 4 }, 50, 200), nil, CannotTell, "nothing was recorded before 50 min"},
		{"a record that begins too late and shows enough", hold(20, Total), "cook 0-60", minutely(func(m float64) float64 { return 71 }, 30, 60), nil, Met, ""},

		{"a gap after the end of a chill, surroundings unknown", cooling(), "cool 0-200", minutely(chilled, 0, 100) + " | " + minutely(chilled, 180, 200), nil, CannotTell, "from 1 h 40 min to 3 h 00 min (80 min), neither of it nor of its surroundings, where nothing bounds it"},
		{"the same in air of 2 to 12 °C", cooling(), "cool 0-200", minutely(chilled, 0, 100) + " | " + minutely(chilled, 180, 200), between(2, 12), Met, ""},
		{"the end of a chill in a gap, in time either way", cooling(), "cool 0-200", minutely(chilled, 0, 85) + " | " + minutely(chilled, 100, 200), between(2, 12), Met, ""},
		{"the end of a chill in a gap, in time or not", cooling(), "cool 0-200", minutely(chilled, 0, 60) + " | " + minutely(chilled, 150, 200), between(2, 12), CannotTell, "from 1 h 00 min to 2 h 30 min"},
		{"the end of a chill in a gap, too late either way", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(30), Clock: crossing}, "cool 0-200", minutely(chilled, 0, 60) + " | " + minutely(chilled, 150, 200), between(2, 12), NotMet, ""},
		{"start and end of a chill in two gaps", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(90), Clock: crossing}, "cool 0-200",
			minutely(chilled, 0, 10) + " | " + minutely(chilled, 30, 80) + " | " + minutely(chilled, 105, 200), between(2, 12), CannotTell, "2 gaps, 45 min in all, the first from 10 min to 30 min"},
		{"a hold through a gap", hold(25, Total), "cook 0-60", cooked, nil, CannotTell, "from 20 min to 40 min (20 min), neither of it nor of its surroundings, where nothing bounds it"},
		{"a hold shown without the gap", hold(10, Total), "cook 0-60", cooked, nil, Met, ""},
		{"a hold too long even with the gap", hold(51, Total), "cook 0-60", cooked, nil, NotMet, ""},
		{"a hold through a gap in air of 70 to 90 °C", hold(25, Total), "cook 0-60", "0:70 10:70.5 20:71 | 40:72 50:74 60:74", between(70, 90), Met, ""},
		{"one period only, with a gap", hold(5, Once), "cook 0-60", "0:71 10:71.5 20:71 | 40:72 50:74 60:74", between(70.5, 90), Met, ""},
		{"one period only, with a gap of which nothing is known", hold(5, Once), "cook 0-60", "0:71 10:71.5 20:71 | 40:72 50:74 60:74", nil, CannotTell, "where nothing bounds it"},
		{"one period only, with a gap that may part it", hold(5, Once), "cook 0-60", cooked, nil, CannotTell, "from 20 min to 40 min"},
		{"no lethality across a gap", lethal(25), "cook 0-60", cooked, nil, CannotTell, "from 20 min to 40 min"},
		{"lethality without the gap", lethal(10), "cook 0-60", cooked, nil, Met, ""},
		{"too little lethality with all of the gap", lethal(200), "cook 0-60", cooked, between(4, 74), NotMet, ""},
		{"hot through a gap of which nothing is known", above(63), "hold hot 0-60", "0:65 10:66 20:65 | 40:65 50:66 60:65", nil, CannotTell, "where nothing bounds it"},
		{"cold through a gap of which nothing is known", below(8), "store 0-60", "0:4 10:4 20:5 | 40:5 50:4 60:4", nil, CannotTell, "where nothing bounds it"},
		{"a table through a gap", table, "cook 0-60", "0:20 10:60 20:66 | 40:66 50:60 60:50", nil, CannotTell, "from 20 min to 40 min"},
		{"a table row shown without the gap", table, "cook 0-60", "0:20 10:60 15:65.5 20:66 | 40:66 47:66 50:60 60:50", nil, Met, "65 °C"},
		{"cold through a gap", below(8), "store 0-60", "0:4 10:4 20:5 | 40:5 50:4 60:4", between(1, 9), CannotTell, "between 1 °C and 9 °C"},
		{"cold through a gap in cold air", below(8), "store 0-60", "0:4 10:4 20:5 | 40:5 50:4 60:4", between(1, 7), Met, ""},
		{"not cold beside the gap", below(4), "store 0-60", "0:4 10:4 20:5 | 40:5 50:4 60:4", nil, NotMet, ""},
		{"hot through a gap", above(63), "hold hot 0-60", "0:65 10:66 20:65 | 40:65 50:66 60:65", between(60, 70), CannotTell, "between 60 °C and 70 °C"},
		{"hot through a gap in hot air", above(63), "hold hot 0-60", "0:65 10:66 20:65 | 40:65 50:66 60:65", between(64, 70), Met, ""},
		{"too long in a band by a gap or not", band(65), "cook 0-60, store 60-120", "0:4 10:65 20:70 | 80:70 110:62 120:62", between(4, 80), CannotTell, "from 20 min to 1 h 20 min"},
		{"in a band for less, gap and all", band(75), "cook 0-60, store 60-120", "0:4 10:65 20:70 | 80:70 110:62 120:62", between(4, 80), Met, ""},
		{"in a band, over the gap where none of the two ends is", Limit{Kind: Outside, FromC: c(5), ToC: c(60)}, "store 0-60", "0:65 10:66 20:65 | 40:65 50:66 60:65", between(55, 90), CannotTell, "between 55 °C and 90 °C"},
		{"outside a band, gap and all", Limit{Kind: Outside, FromC: c(5), ToC: c(60)}, "store 0-60", "0:65 10:66 20:65 | 40:65 50:66 60:65", between(61, 90), Met, ""},
		{"a rise in a gap", Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(2)}, "cool 0-60", "0:65 10:60 20:55 | 40:45 50:40 60:35", nil, CannotTell, "from 20 min to 40 min"},
		{"falling through a gap", Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(2)}, "cool 0-60", "0:65 10:60 20:55 | 40:54.5 50:40 60:35", between(54, 55.5), Met, ""},
		{"rising beside a gap", Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(2)}, "cool 0-60", "0:65 10:60 20:55 | 40:45 50:48 60:35", nil, NotMet, ""},
		{"the end of a step in a gap", Limit{Kind: ByTheEnd, ToC: c(21), Stages: st(model.Cool)}, "cool 0-30, store 30-60", "0:65 10:40 20:25 | 40:15 50:10 60:10", nil, CannotTell, "from 20 min to 40 min"},
		{"the end of a step at a reading", Limit{Kind: ByTheEnd, ToC: c(21), Stages: st(model.Cool)}, "cool 0-40, store 40-60", "0:65 10:40 20:25 | 40:15 50:10 60:10", nil, Met, ""},
		{"heated in a gap", Limit{Kind: HeatWithin, ToC: c(74), TimeS: min_(30), Clock: fromStart(model.Reheat)}, "reheat 0-60", "0:5 10:40 20:60 | 40:75 50:76 60:76", nil, CannotTell, "from 20 min to 40 min"},
		{"heated by the end of a gap", Limit{Kind: HeatWithin, ToC: c(74), TimeS: min_(40), Clock: fromStart(model.Reheat)}, "reheat 0-60", "0:5 10:40 20:60 | 40:75 50:76 60:76", nil, Met, ""},
		{"frozen through a gap", Limit{Kind: FreezeHold, FromC: c(-5), TimeS: min_(10), ToC: c(-18), SecondS: min_(45)}, "freeze 0-100", "0:0 10:-6 20:-10 30:-19 40:-20 | 60:-20 90:-20 100:-20", nil, CannotTell, "from 40 min to 1 h 00 min"},
		{"frozen, gap and all", Limit{Kind: FreezeHold, FromC: c(-5), TimeS: min_(10), ToC: c(-18), SecondS: min_(45)}, "freeze 0-100", "0:0 10:-6 20:-10 30:-19 40:-20 | 60:-20 90:-20 100:-20", between(-30, -19), Met, ""},

		{"a band that was passed before the step or in it", Limit{Kind: Outside, FromC: c(16), ToC: c(31), Stages: st(model.Store)}, "cool 0-3, store 3-60", "0:8 5:32 60:33", nil, CannotTell, "between two readings"},
		{"a rise before the step or in it", Limit{Kind: Falling, Stages: st(model.Store), AllowanceK: c(2)}, "cool 0-12, store 12-60", "0:20 10:20 15:40 60:39", nil, CannotTell, "between two readings"},
		{"a clock that may start a reading later within the error", cooling(), "cool 0-200", "0:80 30:59.7 60:40 155:25 185:20.2 200:10", func(r *model.Recording) { r.ErrorK = 0.5 }, CannotTell, "between two readings"},
		{"two heatings, of which the first may be over in the gap and the second starts late", Limit{Kind: HeatWithin, FromC: c(35), ToC: c(56), TimeS: min_(36), Clock: crossing}, "cook 0-200, reheat 200-260",
			"40:36 50:30 60:30 70:30 80:30 90:40 100:57 110:57 120:40 130:20 140:20 150:20 160:20 170:20 180:20 190:20 200:20 210:36 220:40 230:45 240:50 250:57 260:57", nil, CannotTell, "nothing was recorded before 40 min"},
		{"a gap that may hold a higher peak, or none", cooling(), "cool 0-200", "0:80 20:50 40:40 60:30 | 110:30 130:20 200:10", between(2, 85), CannotTell, "between two readings"},

		{"a spike that decides", below(8), "store 0-40", "0:4 10:4 20:50? 30:4 40:4", nil, CannotTell, "the reading of 50 °C at 20 min is doubtful"},
		{"a spike that does not", below(60), "store 0-40", "0:4 10:4 20:50? 30:4 40:4", nil, Met, ""},
		{"two spikes, of which one decides", below(40), "store 0-60", "0:4 10:4 20:30? 30:4 40:50? 50:4 60:4", nil, CannotTell, "the reading of 50 °C at 40 min is doubtful"},
		{"two spikes, of which either decides", below(8), "store 0-60", "0:4 10:4 20:30? 30:4 40:50? 50:4 60:4", nil, CannotTell, "2 readings are doubtful, the first of 30 °C at 20 min"},
		{"a last reading that may be cut off", below(8), "store 0-30", "0:4 10:4 20:4 30:40?", nil, CannotTell, "the reading of 40 °C at 30 min is doubtful"},
		{"two doubted that change nothing", below(8), "store 0-60", "0:4 10:4 20:5? 30:5? 40:4 50:4 60:4", nil, Met, ""},
		{"three doubted leave a gap", below(8), "store 0-60", "0:4 10:4 20:5? 30:5? 40:5? 50:4 60:4", nil, CannotTell, "3 readings are doubtful, the first of 5 °C at 20 min"},
		{"a dip that would break a hold", hold(20, Continuous), "cook 0-40", "0:71 10:71 20:40? 30:71 40:71", nil, CannotTell, "is doubtful"},

		{"whole degrees decide", below(5), "store 0-40", "0:4 10:4 20:5 30:4 40:4", func(r *model.Recording) { r.ErrorK = 0.5 }, CannotTell, "by how much the readings may be off (0.5 °C) decides"},
		{"whole degrees do not decide", below(6), "store 0-40", "0:4 10:4 20:5 30:4 40:4", func(r *model.Recording) { r.ErrorK = 0.5 }, Met, ""},
		{"an error decides a clock", cooling(), "cool 0-200", "0:60.1 20:40 60:20 200:10", func(r *model.Recording) { r.ErrorK = 0.5 }, Met, ""},
		{"an error decides whether a clock starts", cooling(), "cool 0-200", "0:59.8 20:40 190:20 200:10", func(r *model.Recording) { r.ErrorK = 0.5 }, CannotTell, "its highest reading is 59.8 °C"},
	} {
		t.Run(x.name, func(t *testing.T) {
			r := logged(t, x.spans, x.course)
			if x.also != nil {
				x.also(r)
			}
			got := found(t, x.l, r)
			if got.Verdict != x.verdict || !strings.Contains(got.Why, x.why) {
				t.Errorf("%v, want %v: %s", got.Verdict, x.verdict, got.Why)
			}
			if got.Verdict == CannotTell && (got.MarginK != nil && *got.MarginK > r.ErrorK || got.MarginS != nil && *got.MarginS > 0) {
				t.Errorf("room is claimed where nobody can tell: %s", got.Why)
			}
		})
	}
}

// TestWhatARecordMeasured: a record answers for its own place only, and says so.
func TestWhatARecordMeasured(t *testing.T) {
	kept := func(where string) Limit { return Limit{Kind: StayBelow, ToC: c(8), Where: Where{Name: where}} }
	for _, x := range []struct {
		name, place string
		surface     bool
		l           Limit
		course      string
		verdict     Verdict
		why, note   string
	}{
		{"every point by the slowest", "slowest point", false, kept(""), "0:4 60:5", Met, "The slowest point rose to 5 °C", "Only the slowest point was measured"},
		{"centre by the slowest", "slowest point", false, kept("centre"), "0:4 60:5", Met, "", "Only the slowest point was measured"},
		{"centre by the centre", "centre", false, kept("centre"), "0:4 60:5", Met, "The centre", ""},
		{"surface by the slowest", "slowest point", false, kept("surface"), "0:4 60:5", CannotTell, "The record is of the slowest point; the surface was not measured", ""},
		{"surface by the surface", "surface", true, kept("surface"), "0:4 60:5", Met, "The surface", ""},
		{"every point by the surface, met", "surface", true, kept(""), "0:4 60:5", CannotTell, "only the surface was measured, and other places may be less favourable", "Only the surface was measured"},
		{"every point by the surface, not met", "surface", true, kept(""), "0:4 60:9", NotMet, "", "Only the surface was measured"},
		{"centre by the surface", "surface", true, kept("centre"), "0:4 60:5", CannotTell, "the centre was not measured", ""},
		{"every point by another place, met", "other place", false, kept("every point"), "0:4 60:5", CannotTell, "only the place of the probe was measured", "Only the place"},
		{"a named point", "Bone", false, kept("bone"), "0:4 60:5", Met, "The Bone", ""},
		{"another named point", "Bone", false, kept("Rim"), "0:4 60:5", CannotTell, "the Rim was not measured", ""},
		{"the surroundings", "slowest point", false, kept("medium"), "0:4 60:5", CannotTell, "the surroundings were not recorded", ""},
		{"humidity", "slowest point", false, Limit{Kind: Humidity, HumidityPc: c(90), SharePc: c(50)}, "0:4 60:5", CannotTell, "the humidity was not measured", ""},
		{"a stage that the record does not cover", "slowest point", false, Limit{Kind: StayBelow, ToC: c(8), Stages: st(model.Cool)}, "0:4 60:5", NotApplicable, "covers no part of the stage cool", ""},
		{"a duration", "slowest point", false, Limit{Kind: Duration, Stages: st(model.Store), TimeS: min_(60), CompareTime: AtLeast}, "0:4 59:5", Met, "lasted 60 min", ""},
		{"an answer", "slowest point", false, Limit{Kind: Stated, Answer: "yes"}, "0:4 60:5", Met, "", ""},
	} {
		t.Run(x.name, func(t *testing.T) {
			r := logged(t, "store 0-60", x.course)
			r.Name, r.Surface = x.place, x.surface
			got := found(t, x.l, r)
			if notes := strings.Join(got.Notes, " "); got.Verdict != x.verdict || !strings.Contains(got.Why, x.why) || !strings.Contains(notes, x.note) || x.note == "" && notes != "" {
				t.Errorf("%v, want %v: %s (%s)", got.Verdict, x.verdict, got.Why, notes)
			}
		})
	}
	t.Run("recorded surroundings", func(t *testing.T) {
		for _, x := range []struct {
			course  string
			verdict Verdict
		}{{"0:4 20:4 40:5 60:6", Met}, {"0:4 20:4 40:9 60:6", NotMet}, {"0:4 10:4 20:4 60:4", CannotTell}, {"0:4 20:4 40:7.8 60:6", CannotTell}} {
			r := logged(t, "store 0-60", "0:4 60:5")
			r.ErrorK = 0.5
			tr := trace(t, "medium", 0, x.course)
			r.Medium = &tr
			if got := found(t, kept("medium"), r); got.Verdict != x.verdict || !strings.Contains(got.Why, "The medium") {
				t.Errorf("%s: %v, want %v: %s", x.course, got.Verdict, x.verdict, got.Why)
			}
		}
	})
}

// TestGapInRecordedSurroundings bounds a gap by the medium: of the whole record while heat may still come in from outside, of what followed once
// the slowest point falls.
func TestGapInRecordedSurroundings(t *testing.T) {
	medium := "0:180 60:180 60.5:4 300:4"
	for _, x := range []struct {
		name, place, course, medium string
		lo, hi                      float64
	}{
		{"while it may still rise", "slowest point", "0:10 30:50 60:70 65:72 | 90:74 120:60", medium, 4, 180},
		{"once it falls", "slowest point", "0:10 30:50 60:70 65:72 70:73 80:71 | 90:60 120:40", medium, 4, 71},
		{"at a place that may not be the hottest", "probe", "0:10 30:50 60:70 65:72 70:73 80:71 | 90:60 120:40", medium, 4, 180},
		{"warm air since", "slowest point", "0:10 30:50 60:70 65:72 70:73 80:71 | 90:60 120:40", "0:180 60:180 60.5:4 85:4 86:90 90:90 90.5:4 300:4", 4, 90},
		{"while it is heated", "slowest point", "0:10 10:20 20:40 | 30:50 120:70", medium, 40, 180},
		{"before it is known to warm", "slowest point", "0:10 10:10 20:10 | 30:50 120:70", medium, 10, 180},
		{"after a second heating", "slowest point", "0:10 30:50 60:70 65:70.5 66:71 69:70.6 80:69 | 90:60 120:40", "0:180 60:180 60.5:4 65:4 66:180 69:180 70:4 300:4", 4, 180},
	} {
		t.Run(x.name, func(t *testing.T) {
			r := logged(t, "cook 0-60, cool 60-120", x.course)
			tr := trace(t, "medium", 0, x.medium)
			// a logger of minutes
			for i := range 240 {
				tr.TimesS, tr.C = append(tr.TimesS, 60*float64(i)+1), append(tr.C, (&path{t: tr.TimesS[:len(tr.TimesS)-i], c: tr.C}).value(60*float64(i)+1))
			}
			r.Name, r.Medium = x.place, sorted(tr)
			u := newTube(r, nil)
			if len(u.gaps) != 1 || u.gaps[0].lo != x.lo || u.gaps[0].hi != x.hi {
				t.Errorf("%+v, want %g to %g", u.gaps, x.lo, x.hi)
			}
		})
	}
}

// TestNoNumberWithoutBounds: what a limit lacks in a gap that nothing bounds has no number in K; the room of a straight line through it is none.
func TestNoNumberWithoutBounds(t *testing.T) {
	r := logged(t, "store 0-60", "0:4 10:4 20:5 | 40:5 50:4 60:4")
	eight := 8.0
	fs, err := FindRecorded([]Limit{{Kind: StayBelow, Stages: []*model.Stage{model.Store}, Applies: Applies{All: true}, ToC: &eight}}, Recorded{Recording: r})
	if err != nil || len(fs) != 1 || fs[0].Verdict != CannotTell || fs[0].MarginK != nil {
		t.Errorf("%+v, %v: want cannot tell without a margin", fs, err)
	}
}

// TestRoomOfARecord: the room in K of what is judged by readings is that of readings which are all off to the unfavourable side; what is missed for
// another reason than a temperature has none still.
func TestRoomOfARecord(t *testing.T) {
	room := func(l Limit, errorK float64) Finding {
		r := logged(t, "store 0-60", "0:4 10:4 20:5 30:5.5 40:5 50:4 60:4")
		r.ErrorK = errorK
		return found(t, l, r)
	}
	below := Limit{Kind: StayBelow, Stages: []*model.Stage{model.Store}, ToC: c(8)}
	for _, x := range []struct {
		errorK, roomK float64
		verdict       Verdict
	}{{0, 2.5, Met}, {0.5, 2, Met}, {3, -0.5, CannotTell}} {
		if f := room(below, x.errorK); f.Verdict != x.verdict || math.Abs(*f.MarginK-x.roomK) > 1e-9 {
			t.Errorf("readings off by %g K: %v, room %g K, want %v, %g", x.errorK, f.Verdict, *f.MarginK, x.verdict, x.roomK)
		}
	}
	below.ToC = c(3)
	if f := room(below, 0.5); f.Verdict != NotMet || math.Abs(*f.MarginK+3) > 1e-9 {
		t.Errorf("%v, %g K", f.Verdict, *f.MarginK)
	}
}

// TestGapWithoutSurroundings bounds a gap by what is known of the medium and, where the food may still hold heat, by what was read before.
func TestGapWithoutSurroundings(t *testing.T) {
	for _, x := range []struct {
		name, place  string
		known        bool
		lo, hi       float64
		edgeLo, edge float64
	}{
		{"the hottest place in known air", "slowest point", true, 2, 60, 2, 40},
		{"any place in known air", "probe", true, 2, 80, 2, 80},
		{"unknown air", "slowest point", false, anyLowC, anyHighC, anyLowC, anyHighC},
	} {
		r := logged(t, "cool 0-300", "0:80 30:60 | 60:50 90:40")
		if r.Name = x.place; x.known {
			r.LowC, r.HighC = 2, 12
		}
		u := newTube(r, nil)
		if len(u.gaps) != 2 || u.gaps[0].lo != x.lo || u.gaps[0].hi != x.hi || u.gaps[1].lo != x.edgeLo || u.gaps[1].hi != x.edge {
			t.Errorf("%s: %+v", x.name, u.gaps)
		}
	}
}

// TestCourseAtTheEndOfAStep: where a step ends between two readings, what ends there and what begins there each have their own choice.
func TestCourseAtTheEndOfAStep(t *testing.T) {
	u := newTube(logged(t, "cook 0-12, cool 12-30", "0:70 10:60 15:40 30:20"), nil)
	p := u.course(&path{}, func(i int, lo, hi float64, _ bool) choice {
		if u.t[i] < 720 {
			return at(hi)
		}
		return at(lo)
	}, allGaps)
	before, after := p.in(interval{0, 720}), p.in(interval{720, 1800})
	if n := len(before.t) - 1; before.c[n] != 60 || before.t[n] != 720 || after.t[0] != 720 || after.c[0] != 40 {
		t.Errorf("%v and %v", before, after)
	}
	closeTo(t, "halfway in the cook", c(before.value(300)), 70, 0)
	closeTo(t, "halfway in the chill", c(after.value(1200)), 20, 0)
}

// sorted puts the readings of a trace in order.
func sorted(tr model.Trace) *model.Trace {
	at := map[float64]float64{}
	for i, s := range tr.TimesS {
		at[s] = tr.C[i]
	}
	out := &model.Trace{Point: tr.Point, TimesS: rising(append([]float64(nil), tr.TimesS...))}
	for _, s := range out.TimesS {
		out.C = append(out.C, at[s])
	}
	return out
}

// TestRecordedMargins: the room of a record is that of the least favourable course that its readings allow.
func TestRecordedMargins(t *testing.T) {
	// at or above 70 °C by straight lines from 10 to 45 min, certainly from 20 to 40
	got := found(t, Limit{Kind: Hold, FromC: c(70), TimeS: min_(15), Counting: Total}, logged(t, "cook 0-60", "0:50 20:90 40:74 60:58"))
	closeTo(t, "value", got.Value, 35, 1e-6)
	closeTo(t, "room in time", got.MarginS, 5*60, 1e-3)
	closeTo(t, "room in temperature", got.MarginK, 4, 1e-3)
	if got.Verdict != Met {
		t.Errorf("%v: %s", got.Verdict, got.Why)
	}
}

// TestNoRecord refuses what is no record.
func TestNoRecord(t *testing.T) {
	for name, r := range map[string]*model.Recording{
		"no readings":          {},
		"a time twice":         {TimesS: []float64{0, 0}, C: []float64{1, 2}},
		"no number":            {TimesS: []float64{0, 1}, C: []float64{1, math.NaN()}},
		"a time for nothing":   {TimesS: []float64{0, 1}, C: []float64{1}},
		"a gap past the end":   {TimesS: []float64{0, 1}, C: []float64{1, 2}, Gaps: []int{1}},
		"a doubt past the end": {TimesS: []float64{0, 1}, C: []float64{1, 2}, Doubted: []int{2}},
	} {
		if fs, err := FindRecorded([]Limit{hold15()}, Recorded{Recording: r}); err == nil || fs != nil {
			t.Errorf("%s: %v", name, fs)
		}
	}
}

// long is a record of n readings, one a second, in tenths of a kelvin with some noise: a cook, a chill and a long store, with three gaps
// and a doubted reading.
func long(n int) *model.Recording {
	end := float64(n - 1)
	r := &model.Recording{Point: model.Point{Name: "slowest point"}, LowC: 2, HighC: 85, ErrorK: 0.25,
		Gaps: []int{n / 3, n / 2, n - n/5}, Doubted: []int{n / 4}, Spans: []model.Span{
			{EndS: 7200, Step: &model.Step{Stage: model.Cook, Name: "Cook"}}, {StartS: 7200, EndS: 30000, Step: &model.Step{Stage: model.Cool, Name: "Cool"}},
			{StartS: 30000, EndS: end, Step: &model.Step{Stage: model.Store, Name: "Store"}}}}
	r.TimesS, r.C = make([]float64, n), make([]float64, n)
	noise := uint32(1)
	for i := range r.C {
		t := float64(i)
		x := 82 - 77*math.Exp(-t/2400)
		if t > 7200 {
			x = 3 + 75*math.Exp(-(t-7200)/4000) + 0.3*math.Sin(t/900)
		}
		noise = noise*1664525 + 1013904223
		r.TimesS[i], r.C[i] = t, math.Round(10*x+float64(noise>>24)/256-0.5)/10
	}
	r.C[n/4] += 30
	return r
}

// BenchmarkJudgeRecord1M judges a million readings against six limits, on all courses.
func BenchmarkJudgeRecord1M(b *testing.B) {
	r := long(1_000_000)
	limits := sixLimits()
	b.ReportAllocs()
	b.ResetTimer()
	for i := 0; i < b.N; i++ {
		fs, err := FindRecorded(limits, Recorded{Product: "P", Recording: r})
		if err != nil {
			b.Fatal(err)
		}
		if i == 0 {
			for _, f := range fs {
				b.Log(f.Limit.Name, f.Verdict, f.Why)
			}
		}
	}
}
