package rules

import (
	"strings"
	"testing"

	"slowpoint/model"
)

// asked is a course with what only the user can say of it.
type asked struct {
	told
	answers string    // to the stated limits in their order, between bars: "yes | | no"
	rhPc    []float64 // relative humidity of each span, %; none: not stated
}

// askedForm is a form whose verdict hangs on what the user states. Its stated limits hold no answers: the cases do.
type askedForm struct {
	name   string // as in forms
	limits []Limit
	groups []Group
	cases  []asked
}

// slow and quick are 60 to 21 °C in 220 and in 110 min.
const (
	slow  = "0:5 60:80 80:60 300:21 400:3"
	quick = "0:5 60:80 80:60 190:21 400:3"
)

// yesNoBlank are the answers to a form of one stated limit and nothing else, in the usual words and in words that answer nothing.
func yesNoBlank(yes string) []asked {
	on := func(name string, want Verdict, answer string) asked {
		return asked{told: told{name, "cook 0-60, cool 60-400", slow, want}, answers: answer}
	}
	return []asked{on("stated", Met, yes), on("denied", NotMet, "no"), on("blank", CannotTell, ""), on("words without a yes", CannotTell, "see the file")}
}

// askedForms are the forms of codes in which the user states something, each on both sides; sources as in forms.
var askedForms = []askedForm{
	{"A5 log target without z: 9 CFR 318.17(a)(1), 6.5 log Salmonella", []Limit{{Kind: Stated}}, nil, yesNoBlank("yes, 6.5 log by the study of 2024")},
	{"A24 gate on composition: California 3 CCR 910.15(b)(3)(A), 120 ppm nitrite with 3.5 % brine", []Limit{{Kind: Stated}}, nil, yesNoBlank("Yes, 120 ppm nitrite with 3.5 % brine")},
	{"A25 growth outcome: 9 CFR 318.17(a)(2), at most 1 log of Clostridium perfringens: never met by the program", []Limit{{Kind: Stated}}, nil,
		append(yesNoBlank("yes: 0.4 log"), asked{told: told{"a model without a yes", "cook 0-60, cool 60-400", slow, CannotTell}, answers: "growth model of the laboratory"})},
	{"A28 duty without a number: Regulation 852/2004 Annex II IX 6 (from memory) and Scotland Sch. 4(2)(c), as quickly as possible", []Limit{{Kind: Stated}}, nil, yesNoBlank("yes, blast chiller")},
	{"A27 deviation: FSIS Appendix A, attachment A2 type 1, any other row (154 °F for 27 s), then an expert", []Limit{
		{Name: "rows", Kind: HoldTable, Stages: st(model.Cook), Counting: Total, Table: fahrenheit(154, 27.0/60, 158, 0), Group: "g"}, {Name: "expert", Kind: Stated, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []asked{
		{told: told{"another row", "cook 0-60", "0:5 30:67.8 30.5:67.8 31:50 60:50", Met}, answers: "no"},
		{told: told{"no row, but the expert", "cook 0-60", "0:5 30:67.8 30.3:67.8 30.35:50 60:50", Met}, answers: "yes, letter of 3 May"},
		{told: told{"no row, no expert", "cook 0-60", "0:5 30:67.8 30.3:67.8 30.35:50 60:50", NotMet}, answers: "no"},
		{told: told{"no row, the expert not asked yet", "cook 0-60", "0:5 30:67.8 30.3:67.8 30.35:50 60:50", CannotTell}, answers: ""}}},
	{"A17 a place for each clause, and a colour: FDA Food Code 3-401.11(C), surface at 145 °F and all of it changed", []Limit{
		{Name: "surface", Kind: Hold, Stages: st(model.Cook), FromC: f(145), TimeS: c(0), Counting: Total, Where: Where{"surface"}, Group: "g"}, {Name: "colour", Kind: Stated, Group: "g"}}, []Group{{Name: "g"}}, []asked{
		{told: told{"both", "cook 0-30", "centre: 0:5 30:40; surface: 0:5 30:70", Met}, answers: "yes"},
		{told: told{"still red", "cook 0-30", "centre: 0:5 30:40; surface: 0:5 30:70", NotMet}, answers: "no"},
		{told: told{"colour not stated", "cook 0-30", "centre: 0:5 30:40; surface: 0:5 30:70", CannotTell}, answers: ""},
		{told: told{"surface too cool", "cook 0-30", "centre: 0:5 30:40; surface: 0:5 30:62.7", NotMet}, answers: "yes"}}},
	{"A18 humidity: FSIS Appendix A, 90 % for half the cook and at least 1 h, or one of the exempt (sealed bag)", []Limit{
		{Name: "air", Kind: Humidity, Stages: st(model.Cook), HumidityPc: c(90), SharePc: c(50), TimeS: min_(60), Group: "g"}, {Name: "exempt", Kind: Stated, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []asked{
		{told: told{"exactly half of 3 h", "cook 0-90, cook 90-180", "0:5 180:70", Met}, answers: "no", rhPc: []float64{90, 40}},
		{told: told{"89 min of 3 h", "cook 0-89, cook 89-180", "0:5 180:70", NotMet}, answers: "no", rhPc: []float64{90, 40}},
		{told: told{"89.9 %", "cook 0-90, cook 90-180", "0:5 180:70", NotMet}, answers: "no", rhPc: []float64{89.9, 40}},
		{told: told{"half of 100 min, which is under 1 h", "cook 0-50, cook 50-100", "0:5 100:70", NotMet}, answers: "no", rhPc: []float64{90, 40}},
		{told: told{"dry, in a bag", "cook 0-90, cook 90-180", "0:5 180:70", Met}, answers: "yes, sealed bag", rhPc: []float64{20, 40}},
		{told: told{"neither stated", "cook 0-90, cook 90-180", "0:5 180:70", CannotTell}, answers: ""}}},
	{"A18 oven at or BELOW 250 °F, above 90 % for 1 h or in a moisture-tight bag, and a row for the core: FDA Food Code 3-401.11(B), high-humidity oven", []Limit{
		{Name: "oven", Kind: StayBelow, Stages: st(model.Cook), ToC: f(250), Where: Where{"medium"}, Group: "g"},
		{Name: "air", Kind: Humidity, Stages: st(model.Cook), HumidityPc: c(90), TimeS: min_(60), Compare: MoreThan, Group: "moist"}, {Name: "bag", Kind: Stated, Group: "moist"},
		{Name: "core", Kind: HoldTable, Stages: st(model.Cook, model.Rest), Counting: Total, Table: fahrenheit(130, 112, 140, 12, 145, 4), Group: "g"}},
		[]Group{{Name: "g"}, {Name: "moist", AnyOf: true, Within: "g"}}, []asked{
			{told: told{"all three, exactly 1 h and 121.1 °C", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:121.11111111111111 90:121.11111111111111", Met}, answers: "no", rhPc: []float64{95, 40}},
			{told: told{"oven at 251 °F", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:121.66666666666667 90:121", NotMet}, answers: "no", rhPc: []float64{95, 40}},
			{told: told{"59 min moist", "cook 0-59, cook 59-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:120 90:120", NotMet}, answers: "no", rhPc: []float64{95, 40}},
			{told: told{"exactly 90 %, where more is wanted", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:120 90:120", NotMet}, answers: "no", rhPc: []float64{90, 40}},
			{told: told{"90.1 %", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:120 90:120", Met}, answers: "no", rhPc: []float64{90.1, 40}},
			{told: told{"no row for the core", "cook 0-60, cook 60-90", "centre: 0:5 75:60 86:60 90:50; medium: 0:120 90:120", NotMet}, answers: "no", rhPc: []float64{95, 40}},
			{told: told{"dry, in a bag", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:120 90:120", Met}, answers: "yes", rhPc: []float64{20, 40}},
			{told: told{"in a bag, the oven too hot", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:122 90:120", NotMet}, answers: "yes", rhPc: []float64{20, 40}},
			{told: told{"humidity and bag not stated", "cook 0-60, cook 60-90", "centre: 0:5 75:60 88:60 90:59; medium: 0:120 90:120", CannotTell}, answers: ""}}},
	{"A8, A9 stated: FDA Food Code 3-502.12(D)(2)(e)(i), 34 °F within 48 h of 41 °F and used within 30 days of sealing", []Limit{
		{Name: "34 °F", Kind: CoolWithin, FromC: f(41), ToC: f(34), TimeS: min_(2880), Clock: crossing, Group: "g"}, {Name: "used", Kind: Stated, Group: "g"}}, []Group{{Name: "g"}}, []asked{
		{told: told{"both", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3120:1.1 4000:0.5", Met}, answers: "yes, on day 12"},
		{told: told{"kept longer", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3120:1.1 4000:0.5", NotMet}, answers: "no"},
		{told: told{"not stated", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3120:1.1 4000:0.5", CannotTell}, answers: ""},
		{told: told{"34 °F after 50 h", "cook 0-60, cool 60-300, store 300-4000", "0:5 60:80 300:5 3300:1.1111 4000:0.5", NotMet}, answers: "yes, on day 12"}}},
	{"A19 nested: California 3 CCR 910.15(b), (1) and (2A or 2B) and (3A or 3B or 3C): 120 ppm nitrite with 3.5 % brine, 40 ppm with 6 %, water activity 0.92", []Limit{
		{Name: "1", Kind: Band, FromC: f(40), ToC: f(120), TimeS: min_(1200), Counting: Total, Group: "rule"},
		{Name: "2A", Kind: Falling, Stages: st(model.Cool), AllowanceK: c(0.2), Group: "two"},
		{Name: "2B", Kind: Band, FromC: f(80), ToC: f(120), TimeS: min_(120), Counting: Total, Where: Where{"surface"}, Group: "two"},
		{Name: "3A", Kind: Stated, Group: "three"}, {Name: "3B", Kind: Stated, Group: "three"}, {Name: "3C", Kind: Stated, Group: "three"}},
		[]Group{{Name: "rule"}, {Name: "two", AnyOf: true, Within: "rule"}, {Name: "three", AnyOf: true, Within: "rule"}}, []asked{
			{told: told{"rises, but the surface is quick; 3A", "cool 0-1500", riseQuick, Met}, answers: "yes, 130 ppm and 3.6 % | no | no"},
			{told: told{"3B", "cool 0-1500", riseQuick, Met}, answers: "no | yes, 50 ppm and 6.2 % | no"},
			{told: told{"3C, the others blank", "cool 0-1500", riseQuick, Met}, answers: " | | yes, 0.91"},
			{told: told{"none of the three", "cool 0-1500", riseQuick, NotMet}, answers: "no | no | no"},
			{told: told{"one of the three not stated", "cool 0-1500", riseQuick, CannotTell}, answers: "no | | no"},
			{told: told{"falls all the time and is slow at the surface", "cool 0-1500", "centre: 0:60 100:49 1000:4.4 1500:3; surface: 0:60 100:49 1000:4.4 1500:3", Met}, answers: "yes | no | no"},
			{told: told{"rises and is slow", "cool 0-1500", "centre: 0:60 100:49 500:13 600:14 1000:4.4 1500:3; surface: 0:60 100:49 500:13 600:14 1000:4.4 1500:3", NotMet}, answers: "yes | yes | yes"},
			{told: told{"too long in the band", "cool 0-1500", "centre: 0:60 100:48.9 1400:4.4 1500:3; surface: 0:60 100:48.9 200:10 1500:3", NotMet}, answers: "yes | yes | yes"}}},
	{"A19 another combination with documents: FSANZ 3.2.2 cl. 7(3)", []Limit{
		{Name: "a", Kind: CoolWithin, FromC: c(60), ToC: c(21), TimeS: min_(120), Clock: crossing, Group: "g"}, {Name: "doc", Kind: Stated, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []asked{
		{told: told{"slow, but documented", "cook 0-60, cool 60-400", slow, Met}, answers: "yes: study of 2024"},
		{told: told{"slow, no documents", "cook 0-60, cool 60-400", slow, NotMet}, answers: "no"},
		{told: told{"slow, not stated", "cook 0-60, cool 60-400", slow, CannotTell}, answers: ""},
		{told: told{"quick, no documents", "cook 0-60, cool 60-400", quick, Met}, answers: "no"}}},
	{"A19 at 75 °C, or below with documents: Denmark", []Limit{
		{Name: "a", Kind: Hold, Stages: st(model.Cook), FromC: c(75), TimeS: c(0), Counting: Total, Group: "g"}, {Name: "doc", Kind: Stated, Group: "g"}}, []Group{{Name: "g", AnyOf: true}}, []asked{
		{told: told{"75.0", "cook 0-60", "0:5 60:75", Met}, answers: "no"},
		{told: told{"74 and no documents", "cook 0-60", "0:5 60:74", NotMet}, answers: "no"},
		{told: told{"74 with documents", "cook 0-60", "0:5 60:74", Met}, answers: "yes, file 7"},
		{told: told{"74, not stated", "cook 0-60", "0:5 60:74", CannotTell}, answers: ""}}},
	{"A26 advice: Norway, preferably 60 to 10 °C in 2 h; the duty beside it stated", []Limit{
		{Kind: CoolWithin, FromC: c(60), ToC: c(10), TimeS: min_(120), Clock: crossing, Advice: true}, {Name: "must", Kind: Stated}}, nil, []asked{
		{told: told{"slow is no failure", "cook 0-60, cool 60-400", slow, Met}, answers: "yes"},
		{told: told{"slow, and the duty not met", "cook 0-60, cool 60-400", slow, NotMet}, answers: "no"},
		{told: told{"quick, and the duty not stated: advice is no way to meet it", "cook 0-60, cool 60-400", "0:5 60:80 80:60 190:10 400:3", CannotTell}, answers: ""}}},
	{"A26 duty in two: FSIS Appendix B advice, at most 1 h from 120 to 80 °F; the duty beside it stated", []Limit{
		{Kind: Band, FromC: f(80), ToC: f(120), TimeS: min_(60), Counting: Total, Advice: true}, {Name: "must", Kind: Stated}}, nil, []asked{
		{told: told{"two hours", "cook 0-60, cool 60-400", "0:5 60:80 180:20 400:3", Met}, answers: "yes"},
		{told: told{"quick, and the duty not met", "cook 0-60, cool 60-400", "0:5 60:80 100:20 400:3", NotMet}, answers: "no"}}},
	{"A15 excursion: Quick-frozen Foodstuffs (Northern Ireland) Sch. 2 para 2(b)(i), never above -15 °C, and what was above -18 °C was brief", []Limit{
		{Name: "ceiling", Kind: StayBelow, Stages: st(model.Store), ToC: c(-15), Group: "g"}, {Name: "brief", Kind: Stated, Group: "g"}}, []Group{{Name: "g"}}, []asked{
		{told: told{"exactly -15.0 and brief", "store 0-300", "0:-20 100:-15 110:-20 300:-20", Met}, answers: "yes, 20 min by the study of 2024"},
		{told: told{"not brief", "store 0-300", "0:-20 100:-15 110:-20 300:-20", NotMet}, answers: "no"},
		{told: told{"-14.9", "store 0-300", "0:-20 100:-14.9 110:-20 300:-20", NotMet}, answers: "yes, 20 min by the study of 2024"}}},
}

// riseQuick is a product whose core rises by a degree while its surface is long cold.
const riseQuick = "centre: 0:60 100:49 500:13 600:14 1000:4.4 1500:3; surface: 0:60 100:48.9 200:10 1500:3"

// TestAskedForms judges every form that hangs on what the user states: the verdict of the product.
func TestAskedForms(t *testing.T) {
	for _, fm := range askedForms {
		for _, x := range fm.cases {
			t.Run(fm.name+"/"+x.name, func(t *testing.T) {
				limits := append([]Limit(nil), fm.limits...)
				answers := strings.Split(x.answers, "|")
				for i := range limits {
					if limits[i].Kind != Stated {
						continue
					}
					if len(answers) == 0 {
						t.Fatal("too few answers")
					}
					limits[i].Answer, answers = strings.TrimSpace(answers[0]), answers[1:]
				}
				if len(answers) > 0 {
					t.Fatalf("answers to nothing: %q", answers)
				}
				spans := chain(t, x.spans)
				if x.rhPc != nil && len(x.rhPc) != len(spans) {
					t.Fatalf("%d humidities for %d spans", len(x.rhPc), len(spans))
				}
				for i := range x.rhPc {
					spans[i].Step.RH = &x.rhPc[i]
				}
				judgeForm(t, limits, fm.groups, x.over(t, spans), x.want)
			})
		}
	}
}
