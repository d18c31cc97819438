package rules

import (
	"strings"
	"testing"

	"slowpoint/model"
)

// st makes a list of stages.
func st(s ...*model.Stage) []*model.Stage { return s }

// crossing and after are the two ways a clock starts.
var crossing = Clock{Crossing: true}

func crossingOf(tC *float64) Clock   { return Clock{Crossing: true, AtC: tC} }
func after(s *model.Stage) Clock     { return Clock{End: s} }
func fromStart(s *model.Stage) Clock { return Clock{Start: s} }
func fahrenheit(rows ...float64) *Table { // °F, min, °F, min, …
	t := &Table{Name: "rows"}
	for i := 0; i < len(rows); i += 2 {
		t.Rows = append(t.Rows, Row{C: *f(rows[i]), S: 60 * rows[i+1]})
	}
	return t
}

// told is a course: spans and one or more traces "name@mm: course", judged against what is expected.
type told struct {
	name   string
	spans  string
	course string // of the centre; several courses as "centre: …; surface: …; medium: …"
	want   Verdict
}

// history builds it.
func (x told) history(t testing.TB) *model.History {
	t.Helper()
	return x.over(t, chain(t, x.spans))
}

// over builds it over spans made before.
func (x told) over(t testing.TB, spans []model.Span) *model.History {
	t.Helper()
	course := x.course
	if !strings.Contains(course, ";") {
		course = "centre: " + course
	}
	var traces []model.Trace
	var medium *model.Trace
	for i, part := range strings.Split(course, ";") {
		name, words, _ := strings.Cut(strings.TrimSpace(part), ": ")
		tr := trace(t, name, 10*float64(i), words)
		if name == "medium" {
			medium = &tr
			continue
		}
		traces = append(traces, tr)
	}
	h, err := model.NewRecord(spans, traces, medium)
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// form is one way in which codes word a limit.
type form struct {
	name   string // number in the list of forms, what it is, an example with its document and clause
	limits []Limit
	groups []Group
	cases  []told
}

// sealed and kept are the stages of a bag that is sealed as the cook ends: all of them, and those after it has been cooled.
var (
	sealed = st(model.Cool, model.Store, model.HoldCold)
	kept   = st(model.Store, model.HoldCold)
)

// forms are the thirty forms in which published codes word their limits, each on both sides. Clauses as seen in the documents
// or their reprints; the figures are theirs, the courses are ours. Those that hang on what the user states are in askedForms.
var forms = []form{
	{"A1 hold, °F: FDA Food Code 3-401.11(A)(1), 145 °F for 15 s", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: f(145), TimeS: c(15), Counting: Total}}, nil, []told{
		{"15 s at 145 °F", "cook 0-60", "0:5 50:62.77777777777778 50.25:62.77777777777778 51:40 60:40", Met},
		{"15 s at 62.7 °C", "cook 0-60", "0:5 50:62.7 50.25:62.7 51:40 60:40", NotMet},
		{"12 s at 145 °F, readings close", "cook 0-60", "0:5 50:62.7 50.01:62.78 50.2:62.78 50.21:62.7 51:40 60:40", NotMet}}},
	{"A1 hold: MHLW Japan, centre at 75 °C for 1 min", []Limit{{Kind: Hold, Stages: st(model.Cook), Where: Where{"centre"}, FromC: c(75), TimeS: min_(1), Counting: Continuous}}, nil, []told{
		{"one minute", "cook 0-60", "0:5 40:75 41:75 60:60", Met}, {"two half minutes", "cook 0-60", "0:5 40:75 40.5:75 41:74 42:75 42.5:75 60:60", NotMet}}},
	{"A1 hold: 9 CFR 315.2, 170 °F for 30 min", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: f(170), TimeS: min_(30), Counting: Total}}, nil, []told{
		{"31 min", "cook 0-90", "0:5 40:76.7 71:76.7 90:60", Met}, {"29 min", "cook 0-90", "0:5 40:76.7 69:76.7 90:60", NotMet}}},
	{"A2 instant: FDA Food Code 3-401.11(A)(3), 165 °F", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: f(165), TimeS: c(0), Counting: Total}}, nil, []told{
		{"reached once", "cook 0-60", "0:5 50:73.9 60:60", Met}, {"a tenth short", "cook 0-60", "0:5 50:73.8 60:60", NotMet}}},
	{"A2 instant: Scotland Sch. 4(3) reheat 82 °C", []Limit{{Kind: Hold, Stages: st(model.Reheat), FromC: c(82), TimeS: c(0), Counting: Total}}, nil, []told{
		{"exactly 82.0", "reheat 0-60", "0:5 50:82 60:82", Met}, {"81.9", "reheat 0-60", "0:5 50:81.9 60:80", NotMet}}},
	{"A2 instant: FSAI Guidance Note 15, core at 75 °C at once", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: c(75), TimeS: c(0), Counting: Continuous, Where: Where{"centre"}}}, nil, []told{
		{"exactly 75.0, for an instant", "cook 0-60", "0:5 50:75 60:40", Met}, {"74.9 for long", "cook 0-60", "0:5 20:74.9 60:74.9", NotMet},
		{"only the surface", "cook 0-60", "centre: 0:5 60:74; surface: 0:5 60:85", NotMet}}},
	{"A3 table: FSIS Appendix A, 6.5-log rows", []Limit{{Kind: HoldTable, Stages: st(model.Cook), Counting: Total, Table: fahrenheit(130, 112, 140, 12, 150, 67.0/60, 154, 27.0/60, 158, 0)}}, nil, []told{
		{"missed 158 °F but 154 °F for 27 s", "cook 0-60", "0:5 30:67.8 30.45:67.8 30.5:55 31:50 60:50", Met},
		{"total of two periods at 140 °F", "cook 0-60", "0:5 20:60 26:60 27:50 28:50 30:60 36:60 60:40", Met},
		{"158 °F at once", "cook 0-60", "0:5 30:71 60:5", Met},
		{"11 min at 140 °F", "cook 0-60", "0:5 20:60.1 30:60.1 31:50 60:40", NotMet},
		{"no row below the first: hours at 129 °F", "cook 0-600", "0:53.9 600:53.9", NotMet}}},
	{"A4 table with a second key: FSIS poultry, chicken of 1 % fat; the user copies the column", []Limit{{Kind: HoldTable, Stages: st(model.Cook), Counting: Total, Table: fahrenheit(140, 25.2, 150, 2.7, 160, 13.7/60)}}, nil, []told{
		{"150 °F for 3 min", "cook 0-60", "0:5 30:65.6 33:65.6 60:20", Met}, {"150 °F for 2 min", "cook 0-60", "0:5 30:65.6 31:65.6 32:40 60:20", NotMet}}},
	{"A5 integral: 70 °C, 2 min, z 7.5", []Limit{{Kind: Lethality, Stages: st(model.Cook), ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), FromC: c(55)}}, nil, []told{
		{"65 °C for 10 min", "cook 0-60", "0:65 10:65 10.001:20 60:20", Met}, {"65 °C for 9 min", "cook 0-60", "0:65 9:65 9.001:20 60:20", NotMet}}},
	{"A5 integral: ACMSF burgers, z 6", []Limit{{Kind: Lethality, Stages: st(model.Cook), ReferenceC: c(70), ZK: c(6), TimeS: min_(2)}}, nil, []told{
		{"65 °C for 14 min", "cook 0-60", "0:65 14:65 14.001:20 60:20", Met}, {"65 °C for 10 min", "cook 0-60", "0:65 10:65 10.001:20 60:20", NotMet}}},
	{"A5 integral: 90 °C, 10 min, z 9 below, 10 above", []Limit{{Kind: Lethality, Stages: st(model.Cook), ReferenceC: c(90), ZK: c(9), ZAboveK: c(10), TimeS: min_(10)}}, nil, []told{
		{"80 °C for 130 min", "cook 0-150", "0:80 130:80 130.001:20 150:20", Met}, {"100 °C for 0.9 min", "cook 0-150", "0:100 0.9:100 0.901:20 150:20", NotMet}}},
	{"A5 log reductions with D: 6 log, D70 20 s", []Limit{{Kind: Lethality, Stages: st(model.Cook), ReferenceC: c(70), ZK: c(7.5), DS: c(20), Logs: c(6)}}, nil, []told{
		{"2 min at 70 °C", "cook 0-60", "0:70 2:70 2.001:20 60:20", Met}, {"1.9 min at 70 °C", "cook 0-60", "0:70 1.9:70 1.901:20 60:20", NotMet}}},
	{"A6 window: FSANZ 3.2.2 cl. 7(3)(a), 60 to 21 °C in 2 h", []Limit{{Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(120), Clock: crossing}}, nil, []told{
		{"in 119 min", "cook 0-60, cool 60-300", "0:5 60:80 80:60 199:21 300:3", Met}, {"in 121 min", "cook 0-60, cool 60-300", "0:5 60:80 80:60 201:21 300:3", NotMet}}},
	{"A6 window: Denmark, 65 to 10 °C in at most 4 h", []Limit{{Kind: CoolWithin, FromC: c(65), ToC: c(10), TimeS: min_(240), Clock: crossing}}, nil, []told{
		{"exactly 240 min", "cook 0-60, cool 60-400", "0:5 60:65.5 61:65 301:10 400:3", Met}, {"241 min", "cook 0-60, cool 60-400", "0:5 60:66 61:65 302:10 400:3", NotMet}}},
	{"A6 window: France 2009, 63 to 10 °C in LESS than 2 h", []Limit{{Kind: CoolWithin, FromC: c(63), ToC: c(10), TimeS: min_(120), Clock: crossing, CompareTime: LessThan}}, nil, []told{
		{"119.9 min", "cook 0-60, cool 60-400", "0:5 60:64 61:63 180.9:10 400:3", Met}, {"exactly 120.0 min", "cook 0-60, cool 60-400", "0:5 60:64 61:63 181:10 400:3", NotMet}}},
	{"A7 total form: FDA Food Code 3-501.14(A), 135 to 70 °F in 2 h and to 41 °F in 6 h from the same start", []Limit{
		{Name: "a", Kind: CoolWithin, FromC: f(135), ToC: f(70), TimeS: min_(120), Clock: crossing, Group: "g"},
		{Name: "b", Kind: CoolWithin, FromC: f(135), ToC: f(41), TimeS: min_(360), Clock: crossing, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"60 min, then 290 min", "cook 0-60, cool 60-600", "0:5 60:70 70:57.22222222222222 130:21.11111111111111 420:5 600:2", Met},
		{"121 min to 70 °F", "cook 0-60, cool 60-600", "0:5 60:70 70:57.22222222222222 191:21.11111111111111 400:5 600:2", NotMet}}},
	{"A7 further form: Maine 10-144 c. 346, 2 h to 70 °F and a further 4 h to 41 °F", []Limit{
		{Name: "a", Kind: CoolWithin, FromC: f(140), ToC: f(70), TimeS: min_(120), Clock: crossing, Group: "g"},
		{Name: "b", Kind: CoolWithin, ToC: f(41), TimeS: min_(240), Clock: crossingOf(f(70)), Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"100 min, then 230 min", "cook 0-60, cool 60-600", "0:5 60:70 70:60 170:21.11111111111111 400:5 600:2", Met},
		{"60 min, then 290 min", "cook 0-60, cool 60-600", "0:5 60:70 70:60 130:21.11111111111111 420:5 600:2", NotMet}}},
	{"A8 clock from the end of cooking: FSAI GN 15, to 3 °C in 150 min", []Limit{{Kind: CoolWithin, ToC: c(3), TimeS: min_(150), Clock: after(model.Cook)}}, nil, []told{
		{"140 min after the cook", "cook 0-60, rest 60-80, cool 80-300", "0:5 60:80 80:78 200:3 300:2", Met},
		{"160 min after it", "cook 0-60, rest 60-80, cool 80-300", "0:5 60:80 80:78 220:3 300:2", NotMet}}},
	{"A8 clock from the start of cooling: MHLW Japan, about 20 °C in 30 min", []Limit{{Kind: CoolWithin, ToC: c(20), TimeS: min_(30), Clock: fromStart(model.Cool)}}, nil, []told{
		{"29 min", "cook 0-60, cool 60-120", "0:5 60:80 89:20 120:5", Met}, {"31 min", "cook 0-60, cool 60-120", "0:5 60:80 91:20 120:5", NotMet}}},
	{"A9 window from a crossing in another stage: FDA Food Code 3-502.12, 34 °F within 48 h of reaching 41 °F", []Limit{{Kind: CoolWithin, ToC: f(34), TimeS: min_(2880), Clock: crossingOf(f(41))}}, nil, []told{
		{"47 h", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3120:1.1 4000:0.5", Met}, {"50 h", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3300:1.1111 4000:0.5", NotMet}}},
	{"A10 delay: FSIS Appendix B, chilling begins within 90 min of the end of cooking", []Limit{{Kind: Delay, Stages: st(model.Cook), Then: model.Cool, TimeS: min_(90)}}, nil, []told{
		{"exactly 90 min", "cook 0-60, rest 60-150, cool 150-300", "0:5 60:80 300:5", Met}, {"91 min", "cook 0-60, rest 60-151, cool 151-300", "0:5 60:80 300:5", NotMet}}},
	{"A10 duration: FDA Food Code 3-401.14(A), first heating at most 60 min", []Limit{{Kind: Duration, Stages: st(model.Cook), TimeS: min_(60), CompareTime: AtMost}}, nil, []told{
		{"60 min", "cook 0-60, cool 60-100", "0:5 100:5", Met}, {"61 min", "cook 0-61, cool 61-100", "0:5 100:5", NotMet}}},
	{"A11 band over one stage: FSIS Appendix A, 50 to 130 °F at most 6 h while heating", []Limit{{Kind: Band, Stages: st(model.Cook), FromC: f(50), ToC: f(130), TimeS: min_(360), Counting: Total}}, nil, []told{
		{"350 min", "cook 0-500, cool 500-900", "0:10 350:54.5 500:60 900:20", Met}, {"370 min", "cook 0-500, cool 500-900", "0:10 371:54.5 500:60 900:20", NotMet}}},
	{"A11 band over the whole chain: FSANZ 2 h/4 h, every period between 5 and 60 °C added", []Limit{{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(240), Counting: Total}}, nil, []told{
		{"three periods, 230 min", "cook 0-60, cool 60-200, store 200-500, reheat 500-560", "0:5 30:60 60:80 61:60 161:5 500:5 560:32", Met},
		{"three periods, 280 min", "cook 0-60, cool 60-300, store 300-500, reheat 500-560", "0:5 30:60 60:80 61:60 251:5 500:5 560:32", NotMet}}},
	{"A12 once only: England, Sch. 4(7), below 63 °C less than 2 h, one period", []Limit{{Kind: StayAbove, Stages: st(model.HoldHot), FromC: c(63), TimeS: min_(120), Counting: Once, CompareTime: LessThan}}, nil, []told{
		{"119 min below", "hold hot 0-300", "0:70 100:70 101:62 220:62 221:64 300:64", Met},
		{"exactly two hours", "hold hot 0-300", "0:63 1:60 119:60 120:63 300:63", NotMet},
		{"two short periods", "hold hot 0-300", "0:70 100:70 101:62 110:62 111:64 150:64 151:60 160:64 300:64", NotMet}}},
	{"A13 keep above: FDA Food Code 3-501.16(A)(1), 135 °F", []Limit{{Kind: StayAbove, Stages: st(model.HoldHot), FromC: f(135)}}, nil, []told{
		{"57.3 °C", "hold hot 0-300", "0:70 300:57.3", Met}, {"57.2 °C", "hold hot 0-300", "0:70 299:57.2 300:60", NotMet}}},
	{"A13 keep below: England Sch. 4(2), above 8 °C is the offence", []Limit{{Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(8)}}, nil, []told{
		{"exactly 8.0", "hold cold 0-300", "0:3 300:8", Met}, {"8.1", "hold cold 0-300", "0:3 299:8.1 300:4", NotMet}}},
	{"A13 floor after the roast table: FDA Food Code 3-501.16(A)(1), 130 °F", []Limit{{Kind: StayAbove, Stages: st(model.HoldHot), FromC: f(130)}}, nil, []told{
		{"54.5 °C", "hold hot 0-300", "0:70 300:54.5", Met}, {"54.0 °C, which is not 130 °F", "hold hot 0-300", "0:70 300:54", NotMet}}},
	{"A14 outside a band: FDR Canada B.22.026, at most 40 °F or at least 140 °F", []Limit{{Kind: Outside, Stages: st(model.HoldHot), FromC: f(40), ToC: f(140)}}, nil, []told{
		{"always hot", "hold hot 0-300", "0:70 300:60", Met}, {"a dip", "hold hot 0-300", "0:70 100:58 300:61", NotMet}}},
	{"A14 outside, food OR air", []Limit{
		{Name: "food", Kind: Outside, Stages: st(model.HoldHot), FromC: c(10), ToC: c(65), Group: "g"},
		{Name: "air", Kind: Outside, Stages: st(model.HoldHot), FromC: c(10), ToC: c(65), Where: Where{"medium"}, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []told{
		{"air hot", "hold hot 0-300", "centre: 0:70 300:60; medium: 0:66 300:66", Met}, {"neither", "hold hot 0-300", "centre: 0:70 300:60; medium: 0:66 300:64", NotMet}}},
	{"A15 excursion: Finland frozen, -18 °C with brief rises to -15 °C, the user's own 20 min", []Limit{
		{Name: "a", Kind: StayBelow, Stages: st(model.Store), ToC: c(-18), TimeS: min_(20)}, {Name: "b", Kind: StayBelow, Stages: st(model.Store), ToC: c(-15)}}, nil, []told{
		{"two rises of 15 min", "store 0-300", "0:-20 50:-18 55:-16 65:-18 100:-20 200:-18 205:-16 215:-18 300:-20", Met},
		{"one of 25 min", "store 0-300", "0:-20 50:-18 55:-16 75:-18 300:-20", NotMet}, {"one to -14 °C", "store 0-300", "0:-20 50:-18 55:-14 60:-18 300:-20", NotMet}}},
	{"A16 core and surface: South Africa R638 8(4), the surface not more than 2 °C beyond", []Limit{
		{Name: "core", Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(5), Where: Where{"centre"}, Group: "g"},
		{Name: "surface", Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(7), Where: Where{"surface"}, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"4 and 6", "hold cold 0-300", "centre: 0:4 300:4; surface: 0:6 300:6", Met}, {"4 and 8", "hold cold 0-300", "centre: 0:4 300:4; surface: 0:6 200:8 300:6", NotMet}}},
	{"A16 internal and surrounding air: Quebec 1.4.1, 4 °C", []Limit{
		{Name: "in", Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(4)}, {Name: "air", Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(4), Where: Where{"medium"}}}, nil, []told{
		{"both", "hold cold 0-300", "centre: 0:4 300:4; medium: 0:3 300:4", Met}, {"air too warm", "hold cold 0-300", "centre: 0:4 300:4; medium: 0:3 300:5", NotMet}}},
	{"A17 a place for each clause: surface reached 145 °F, FDA Food Code 3-401.11(C)", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: f(145), TimeS: c(0), Counting: Total, Where: Where{"surface"}}}, nil, []told{
		{"surface only", "cook 0-30", "centre: 0:5 30:40; surface: 0:5 30:70", Met}, {"not even the surface", "cook 0-30", "centre: 0:5 30:70; surface: 0:5 30:60", NotMet}}},
	{"A19 either or: 7 CFR 58.635, 155 °F for 30 min or 175 °F for 25 s", []Limit{
		{Name: "a", Kind: Hold, Stages: st(model.Cook), FromC: f(155), TimeS: min_(30), Counting: Continuous, Group: "g"},
		{Name: "b", Kind: Hold, Stages: st(model.Cook), FromC: f(175), TimeS: c(25), Counting: Continuous, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []told{
		{"the first", "cook 0-90", "0:5 30:69 61:69 90:20", Met}, {"the second", "cook 0-90", "0:79 0.2:80 0.7:80 1:60 90:20", Met}, {"neither", "cook 0-90", "0:5 30:69 50:69 90:20", NotMet}}},
	{"A20 falling only, with room for the noise of a probe", []Limit{{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(0.5)}}, nil, []told{
		{"0.5 K of noise", "cool 0-100", "0:60 20:40 25:40.5 100:5", Met}, {"a rise of 0.6 K", "cool 0-100", "0:60 20:40 25:40.6 100:5", NotMet},
		{"a rise by small steps", "cool 0-100", "0:60 20:40 25:40.3 26:40.1 40:40.8 100:5", NotMet}}},
	{"A21 freezing in two phases: FDA Food Code 3-402.11, -31 °F then -4 °F for 24 h", []Limit{{Kind: FreezeHold, FromC: f(-31), TimeS: c(0), ToC: f(-4), SecondS: min_(1440)}}, nil, []told{
		{"24 h after it", "freeze 0-100, store 100-2000", "0:5 100:-35 110:-21 1600:-21 2000:-21", Met}, {"never that cold", "freeze 0-100, store 100-2000", "0:5 100:-34.9 110:-21 2000:-21", NotMet},
		{"only 20 h", "freeze 0-100, store 100-2000", "0:5 100:-35.1 110:-21 1300:-21 1400:-18 2000:-18", NotMet}}},
	{"A22 check at one instant: New York City 81.10, not above 70 °F at 4 h", []Limit{{Kind: ByTheEnd, ToC: f(70), TimeS: min_(240), Clock: after(model.Store)}}, nil, []told{
		{"20 °C at 4 h", "store 0-60, hold cold 60-420", "0:4 60:4 300:20 420:25", Met}, {"22 °C at 4 h", "store 0-60, hold cold 60-420", "0:4 60:4 300:22 420:22", NotMet}, {"ends before 4 h", "store 0-60, hold cold 60-200", "0:4 60:4 200:15", CannotTell}}},
	{"A22 deadline: Codex 39, 75 °C within one hour of leaving the store", []Limit{{Kind: HeatWithin, ToC: c(75), TimeS: min_(60), Clock: after(model.Store)}}, nil, []told{
		{"55 min", "store 0-60, reheat 60-150", "0:4 60:4 115:75 150:80", Met}, {"65 min", "store 0-60, reheat 60-150", "0:4 60:4 125:75 150:80", NotMet}}},
	{"A22 deadline with a hold: South Dakota 44:02:07:33, 165 °F for 15 s within one hour", []Limit{{Kind: HeatWithin, ToC: f(165), TimeS: min_(60), SecondS: c(15), Clock: fromStart(model.Reheat)}}, nil, []told{
		{"reached and kept", "reheat 0-90", "0:4 55:73.9 56:74 90:80", Met}, {"reached at 59.9 min", "reheat 0-90", "0:4 59.9:73.88888888888889 90:80", NotMet}}},
	{"A23 rest: FDA Food Code 3-401.12, stand 2 min; FSIS 145 °F and 3 min", []Limit{
		{Name: "stand", Kind: Duration, Stages: st(model.Rest), TimeS: min_(2), CompareTime: AtLeast}, {Name: "rise", Kind: Hold, Stages: st(model.Cook, model.Rest), FromC: f(145), TimeS: min_(3), Counting: Continuous}}, nil, []told{
		{"rise after the oven counts", "cook 0-30, rest 30-40", "0:5 29:62 30:62.8 34:63 40:60", Met}, {"rest of 1 min", "cook 0-30, rest 30-31", "0:5 26:62.8 30:66 31:66", NotMet}}},
	{"A29 calendar: Codex 39, 4 °C at most 5 days", []Limit{{Name: "t", Kind: StayBelow, Stages: st(model.Store), ToC: c(4)}, {Name: "d", Kind: Duration, Stages: st(model.Store), TimeS: min_(7200), CompareTime: AtMost}}, nil, []told{
		{"5 days", "store 0-7200", "0:4 7200:4", Met}, {"6 days", "store 0-8640", "0:4 8640:4", NotMet}}},
	{"A30 margin of the instrument: 165 °F needed, 166 °F set", []Limit{{Kind: Hold, Stages: st(model.Cook), FromC: f(166), TimeS: c(0), Counting: Total}}, nil, []told{
		{"166 °F", "cook 0-60", "0:5 60:74.5", Met}, {"165.5 °F", "cook 0-60", "0:5 60:74.2", NotMet}}},
	{"A3 table: MHLW Japan, equals of 75 °C for 1 min", []Limit{{Kind: HoldTable, Stages: st(model.Cook), Where: Where{"centre"}, Counting: Continuous, Table: celsiusRows(75, 1, 70, 3, 69, 4, 68, 5, 67, 8, 66, 11, 65, 15, 63, 30)}}, nil, []told{
		{"8 min at 67 °C", "cook 0-60", "0:5 30:67 38:67 39:20 60:20", Met}, {"7 min at 67.9 °C", "cook 0-60", "0:5 30:67.9 37:67.9 37.1:20 60:20", NotMet},
		{"two periods of 4 min at 67 °C, continuously wanted", "cook 0-60", "0:5 30:67 34:67 35:60 36:67 40:67 41:20 60:20", NotMet}}},
	{"A4 table by oven: FDA Food Code 3-401.11(B), convection oven at 325 °F and a row for the core", []Limit{
		{Name: "oven", Kind: StayAbove, Stages: st(model.Cook), FromC: f(325), Where: Where{"medium"}, Group: "g"},
		{Name: "core", Kind: HoldTable, Stages: st(model.Cook, model.Rest), Counting: Total, Table: fahrenheit(130, 112, 140, 12, 145, 4), Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"both, the row with the rise after the oven", "cook 0-60, rest 60-80", "centre: 0:5 60:61 66:63 73:60 80:50; medium: 0:165 60:165 80:165", Met},
		{"oven too cool", "cook 0-60, rest 60-80", "centre: 0:5 60:61 66:63 73:60 80:50; medium: 0:160 60:165 80:165", NotMet},
		{"no row", "cook 0-60, rest 60-80", "centre: 0:5 60:59 80:50; medium: 0:165 60:165 80:165", NotMet}}},
	{"A4 milk: 21 CFR 131.3, rows for holding continuously", []Limit{{Kind: HoldTable, Stages: st(model.Cook), Counting: Continuous, Table: fahrenheit(145, 30, 161, 0.25, 191, 1.0/60, 204, 0.05/60, 212, 0.01/60)}}, nil, []told{
		{"30 min at 63 °C", "cook 0-60", "0:5 10:63 40:63 60:20", Met}, {"half of it, twice", "cook 0-90", "0:5 10:63 27:63 28:60 29:63 45:63 60:20 90:20", NotMet}}},
	{"A5 integral: 3 min at 121.1 °C, z 10", []Limit{{Kind: Lethality, Stages: st(model.Cook), ReferenceC: c(121.1), ZK: c(10), TimeS: min_(3)}}, nil, []told{
		{"31 min at 111.1 °C", "cook 0-60", "0:111.1 31:111.1 31.1:20 60:20", Met}, {"29 min", "cook 0-60", "0:111.1 29:111.1 29.1:20 60:20", NotMet}}},
	{"A7 further form: HK CFS and Ontario, 60 to 20 °C in 2 h, then 20 to 4 °C in 4 h", []Limit{
		{Name: "a", Kind: CoolWithin, FromC: c(60), ToC: c(20), TimeS: min_(120), Clock: crossing, Where: Where{"centre"}, Group: "g"},
		{Name: "b", Kind: CoolWithin, FromC: c(20), ToC: c(4), TimeS: min_(240), Clock: crossing, Where: Where{"centre"}, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"both", "cook 0-60, cool 60-600", "0:5 60:80 70:60 189:20 428:4 600:3", Met}, {"the second too long", "cook 0-60, cool 60-600", "0:5 60:80 70:60 180:20 421:4 600:3", NotMet}}},
	{"A7 three stages: Gaze et al. 1998, end of cooking to 50 °C in 2.5 h, to 12 °C in 6 h, to 5 °C in 1.5 h", []Limit{
		{Name: "a", Kind: CoolWithin, ToC: c(50), TimeS: min_(150), Clock: after(model.Cook), Group: "g"}, {Name: "b", Kind: CoolWithin, FromC: c(50), ToC: c(12), TimeS: min_(360), Clock: crossing, Group: "g"},
		{Name: "c", Kind: CoolWithin, FromC: c(12), ToC: c(5), TimeS: min_(90), Clock: crossing, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"all three", "cook 0-60, cool 60-900", "0:5 60:80 200:50 550:12 635:5 900:3", Met}, {"the last too long", "cook 0-60, cool 60-900", "0:5 60:80 200:50 550:12 645:5 900:3", NotMet}}},
	{"A8 clock from preparation: FDA Food Code 3-501.14(B), 41 °F in 4 h", []Limit{{Kind: CoolWithin, ToC: f(41), TimeS: min_(240), Clock: fromStart(model.Cool)}}, nil, []told{
		{"3 h 50 min", "cool 0-400", "0:21 230:5 400:3", Met}, {"4 h 10 min", "cool 0-400", "0:21 250:5 400:3", NotMet}}},
	{"A8 clock from receipt: FDA Food Code 3-501.14(C), 41 °F in 4 h; the store is the van", []Limit{{Kind: CoolWithin, ToC: f(41), TimeS: min_(240), Clock: fromStart(model.Cool)}}, nil, []told{
		{"exactly 4 h after receipt", "store 0-120, cool 120-500", "0:9 120:9 360:5 500:3", Met}, {"4 h 1 min after it", "store 0-120, cool 120-500", "0:9 120:9 361:5 500:3", NotMet},
		{"still 6 °C when the record ends at 3 h", "store 0-120, cool 120-300", "0:9 120:9 300:6", CannotTell}}},
	{"A8 and A10: Department of Health 1989, chilling starts within 30 min of cooking, then 3 °C within 90 min", []Limit{
		{Name: "start", Kind: Delay, Stages: st(model.Cook), Then: model.Cool, TimeS: min_(30), Group: "g"}, {Name: "down", Kind: CoolWithin, ToC: c(3), TimeS: min_(90), Clock: fromStart(model.Cool), Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"both", "cook 0-60, rest 60-85, cool 85-300", "0:5 60:80 85:76 174:3 300:2", Met}, {"late start", "cook 0-60, rest 60-95, cool 95-300", "0:5 60:80 95:76 174:3 300:2", NotMet}, {"slow", "cook 0-60, rest 60-85, cool 85-300", "0:5 60:80 85:76 177:3 300:2", NotMet}}},
	{"A11 band on the way up: FDA Food Code 3-403.11(D), 41 to 165 °F at most 2 h, and the target", []Limit{
		{Name: "band", Kind: Band, Stages: st(model.Reheat), FromC: f(41), ToC: f(165), TimeS: min_(120), Counting: Total, Group: "g"}, {Name: "target", Kind: Hold, Stages: st(model.Reheat), FromC: f(165), TimeS: c(15), Counting: Total, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"110 min", "store 0-60, reheat 60-200", "0:4 60:4 170:75 200:76", Met}, {"130 min", "store 0-60, reheat 60-200", "0:4 60:5 190:74 200:76", NotMet}, {"not hot enough", "store 0-60, reheat 60-150", "0:4 60:4 150:70", NotMet}}},
	{"A11 bands while cooling: FSIS Appendix B, 130 to 80 °F in 1.5 h and 80 to 40 °F in 5 h", []Limit{
		{Name: "a", Kind: Band, Stages: st(model.Cool), FromC: f(80), ToC: f(130), TimeS: min_(90), Counting: Total, Group: "g"}, {Name: "b", Kind: Band, Stages: st(model.Cool), FromC: f(40), ToC: f(80), TimeS: min_(300), Counting: Total, Group: "g"}}, []Group{{Name: "g"}}, []told{
		{"both", "cook 0-60, cool 60-500", "0:5 60:60 70:54.5 159:26.6 458:4.4 500:3", Met}, {"the first, by a rise in between", "cook 0-60, cool 60-500", "0:5 60:60 70:54.5 155:26.6 160:28 170:26 400:4.4 500:3", NotMet}}},
	{"A12 once only: Northern Ireland Sch. 4(5), above 8 °C less than 4 h, one period", []Limit{{Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(8), TimeS: min_(240), Counting: Once, CompareTime: LessThan}}, nil, []told{
		{"3 h 59 min", "hold cold 0-300", "0:5 10:8 100:15 249:8 300:5", Met}, {"4 h", "hold cold 0-300", "0:5 10:8 100:15 250:8 300:5", NotMet}, {"twice an hour", "hold cold 0-300", "0:5 10:8 20:12 70:8 80:5 100:8 120:12 160:8 300:5", NotMet}}},
	{"A13 keep above at the core: South Africa R638, 60 °C", []Limit{{Kind: StayAbove, Stages: st(model.HoldHot), FromC: c(60), Where: Where{"centre"}}}, nil, []told{
		{"60.0", "hold hot 0-300", "0:70 300:60", Met}, {"59.9", "hold hot 0-300", "0:70 300:59.9", NotMet}}},
	{"A14 outside, edges not allowed: Singapore, above 60 or below 5 °C", []Limit{{Kind: Outside, Stages: st(model.HoldHot), FromC: c(5), ToC: c(60), Compare: MoreThan}}, nil, []told{
		{"60.1", "hold hot 0-300", "0:70 300:60.1", Met}, {"60.0", "hold hot 0-300", "0:70 300:60", NotMet}}},
	{"A15 excursion: Regulation 853/2004 Annex III VIII, -18 °C, brief rises of up to 3 °C, the user's own 30 min in all", []Limit{
		{Name: "a", Kind: StayBelow, Stages: st(model.Store), ToC: c(-18), TimeS: min_(30), Counting: Total}, {Name: "b", Kind: StayBelow, Stages: st(model.Store), ToC: c(-15)}}, nil, []told{
		{"one of 25 min", "store 0-300", "0:-20 50:-18 60:-15 75:-18 300:-20", Met}, {"two of 20 min", "store 0-300", "0:-20 50:-18 60:-16 70:-18 100:-20 200:-18 210:-16 220:-18 300:-20", NotMet}}},
	{"A15 another limit in the display: Quick-frozen Foodstuffs (Northern Ireland) Sch. 2, -18 °C, and -12 °C in a cabinet", []Limit{
		{Name: "base", Kind: StayBelow, Stages: st(model.Store), ToC: c(-18)}, {Name: "cabinet", Kind: StayBelow, Stages: st(model.HoldCold), ToC: c(-12)}}, nil, []told{
		{"exactly -12.0 in the cabinet", "store 0-300, hold cold 300-600", "0:-20 300:-18 600:-12", Met}, {"-11.9 in it", "store 0-300, hold cold 300-600", "0:-20 300:-18 599:-11.9 600:-12", NotMet},
		{"-13 before it", "store 0-300, hold cold 300-600", "0:-20 200:-13 300:-18 600:-18", NotMet}}},
	{"A8, A9 and A19: FDA Food Code 3-502.12(D)(2)(e), cooled in the bag by 3-501.14, then (i) 34 °F within 48 h of 41 °F, used 30 days from sealing; (ii, from memory) 41 °F for 7 days; " +
		"or (iii) at 34 °F 48 h after 41 °F, then 41 °F for 7 days, never past the 30; the bag is sealed as the cook ends", []Limit{
		{Name: "first", Kind: CoolWithin, FromC: f(135), ToC: f(70), TimeS: min_(120), Clock: crossing, Group: "e"}, {Name: "total", Kind: CoolWithin, FromC: f(135), ToC: f(41), TimeS: min_(360), Clock: crossing, Stages: st(model.Cool), Group: "e"},
		{Name: "34 °F", Kind: CoolWithin, FromC: f(41), ToC: f(34), TimeS: min_(2880), Clock: crossing, Group: "i"}, {Name: "30 d", Kind: Duration, Stages: sealed, TimeS: min_(43200), CompareTime: AtMost, Group: "i"},
		{Name: "41 °F", Kind: StayBelow, Stages: kept, ToC: f(41), Group: "ii"}, {Name: "7 d", Kind: Duration, Stages: kept, TimeS: min_(10080), CompareTime: AtMost, Group: "ii"},
		{Name: "34 °F at 48 h", Kind: ByTheEnd, ToC: f(34), TimeS: min_(2880), Clock: crossingOf(f(41)), Group: "iii"}, {Name: "41 °F after it", Kind: StayBelow, Stages: st(model.HoldCold), ToC: f(41), Group: "iii"},
		{Name: "7 d after it", Kind: Duration, Stages: st(model.HoldCold), TimeS: min_(10080), CompareTime: AtMost, Group: "iii"}, {Name: "30 d in all", Kind: Duration, Stages: sealed, TimeS: min_(43200), CompareTime: AtMost, Group: "iii"}},
		[]Group{{Name: "e"}, {Name: "then", AnyOf: true, Within: "e"}, {Name: "i", Within: "then"}, {Name: "ii", Within: "then"}, {Name: "iii", Within: "then"}}, []told{
			{"(i), exactly 30 days from sealing", "cook 0-60, cool 60-410, store 410-43260", "0:5 60:80 80:57 180:21 400:5 3200:1.1 43260:1", Met},
			{"(i), a minute past 30 days", "cook 0-60, cool 60-410, store 410-43261", "0:5 60:80 80:57 180:21 400:5 3200:1.1 43261:1", NotMet},
			{"(i), 34 °F only after 50 h", "cook 0-60, cool 60-410, store 410-43260", "0:5 60:80 80:57 180:21 400:5 3400:1.1111 43260:1", NotMet},
			{"(ii), exactly 7 days", "cook 0-60, cool 60-410, store 410-10490", "0:5 60:80 80:57 180:21 400:5 500:4 10490:4", Met},
			{"(ii), a minute past 7 days", "cook 0-60, cool 60-410, store 410-10491", "0:5 60:80 80:57 180:21 400:5 500:4 10491:4", NotMet},
			{"(ii), 41.2 °F", "cook 0-60, cool 60-410, store 410-9000", "0:5 60:80 80:57 180:21 400:5 500:4 8000:5.1 9000:4", NotMet},
			{"(ii), cooled too slowly before", "cook 0-60, cool 60-410, store 410-9000", "0:5 60:80 80:57 210:21 400:5 500:4 9000:4", NotMet},
			{"(iii), exactly 7 days after 14 in store", "cook 0-60, cool 60-410, store 410-20000, hold cold 20000-30080", "0:5 60:80 80:57 180:21 400:5 3200:1.1 20000:1 20100:5 30080:4", Met},
			{"(iii), a minute past 7 days", "cook 0-60, cool 60-410, store 410-20000, hold cold 20000-30081", "0:5 60:80 80:57 180:21 400:5 3200:1.1 20000:1 20100:5 30081:4", NotMet},
			{"(iii), 41.2 °F after it", "cook 0-60, cool 60-410, store 410-20000, hold cold 20000-30080", "0:5 60:80 80:57 180:21 400:5 3200:1.1 20000:1 20100:5.1 30080:4", NotMet},
			{"(iii), never at 34 °F", "cook 0-60, cool 60-410, store 410-20000, hold cold 20000-30080", "0:5 60:80 80:57 180:21 400:5 3200:1.2 20000:1.2 20100:5 30080:4", NotMet},
			{"(iii), past 30 days from sealing", "cook 0-60, cool 60-410, store 410-34000, hold cold 34000-43261", "0:5 60:80 80:57 180:21 400:5 3200:1.1 34000:1 34100:5 43261:4", NotMet}}},
	{"A19 either or: MHLW Japan, about 20 °C in 30 min or 10 °C in 60 min", []Limit{
		{Name: "a", Kind: CoolWithin, ToC: c(20), TimeS: min_(30), Clock: fromStart(model.Cool), Where: Where{"centre"}, Group: "g"}, {Name: "b", Kind: CoolWithin, ToC: c(10), TimeS: min_(60), Clock: fromStart(model.Cool), Where: Where{"centre"}, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []told{
		{"the second", "cook 0-60, cool 60-200", "0:5 60:80 95:20 119:10 200:5", Met}, {"neither", "cook 0-60, cool 60-200", "0:5 60:80 95:20 125:10 200:5", NotMet}}},
	{"A19 either or: FDA Food Code 3-402.11, parasites, -4 °F for 168 h or -31 °F for 15 h", []Limit{
		{Name: "a", Kind: Hold, ToC: f(-4), TimeS: min_(10080), Counting: Continuous, Group: "g"}, {Name: "b", Kind: FreezeHold, FromC: f(-31), TimeS: c(0), ToC: f(-31), SecondS: min_(900), Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []told{
		{"a week", "freeze 0-600, store 600-12000", "0:5 600:-20 10690:-20.1 12000:-20.1", Met}, {"15 h at -31 °F", "freeze 0-600, store 600-3000", "0:5 600:-35.1 1510:-35.1 1600:-18 3000:-18", Met}, {"neither", "freeze 0-600, store 600-9000", "0:5 600:-34 9000:-34", NotMet}}},
}

// celsiusRows makes a table: °C, min, °C, min, …
func celsiusRows(rows ...float64) *Table {
	t := &Table{Name: "rows"}
	for i := 0; i < len(rows); i += 2 {
		t.Rows = append(t.Rows, Row{C: rows[i], S: 60 * rows[i+1]})
	}
	return t
}

// TestForms judges every form on both sides: the verdict of the product.
func TestForms(t *testing.T) {
	for _, fm := range forms {
		for _, x := range fm.cases {
			t.Run(fm.name+"/"+x.name, func(t *testing.T) { judgeForm(t, fm.limits, fm.groups, x.history(t), x.want) })
		}
	}
}

// judgeForm holds the verdict of the product under the limits against what is wanted.
func judgeForm(t *testing.T, limits []Limit, groups []Group, h *model.History, want Verdict) {
	t.Helper()
	limits = append([]Limit(nil), limits...)
	for i := range limits {
		limits[i].Applies = Applies{All: true}
		for _, fault := range limits[i].Faults() {
			t.Fatalf("%+v", fault)
		}
		filled(t, &limits[i])
	}
	j := Judge(limits, groups, Subject{Product: "P", History: h})
	if j.Verdict != want {
		t.Errorf("%v, want %v", j.Verdict, want)
		for _, f := range j.Findings {
			t.Logf("%s %v %s", f.Limit.Name, f.Verdict, f.Why)
		}
	}
}

// filled tells when a limit fills a column that its kind does not use, or leaves one blank that it needs.
func filled(t *testing.T, l *Limit) {
	has := l.filled()
	for column, is := range has {
		if is && !l.Kind.Uses(column) {
			t.Errorf("%s does not use %s", l.Kind.Name, column)
		}
	}
	for _, either := range l.Kind.Needs {
		any := false
		for _, column := range either {
			any = any || has[column]
		}
		if !any {
			t.Errorf("%s needs one of %v", l.Kind.Name, either)
		}
	}
}
