package rules

import (
	"encoding/json"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"slowpoint/model"
)

// answered is a limit whose verdict is given by its answer: yes, no, blank; n/a is a limit on a stage that the process lacks.
func answered(name, answer, group string) Limit {
	l := Limit{Name: name, Kind: Stated, Applies: Applies{All: true}, Answer: answer, Group: group}
	if answer == "n/a" {
		l.Answer, l.Stages = "yes", st(model.Thaw)
	}
	return l
}

// TestGroups joins verdicts.
func TestGroups(t *testing.T) {
	h := record(t, "cook 0-60", "0:5 60:80")
	for _, x := range []struct {
		name   string
		limits []Limit
		groups []Group
		want   Verdict
		levels string // of the findings, first letters
		group  string // name, verdict and decider of the groups
	}{
		{"no limit", nil, nil, CannotTell, "", ""},
		{"only one that does not apply", []Limit{answered("a", "n/a", "")}, nil, CannotTell, "m", ""},
		{"one that does not apply beside one met", []Limit{answered("a", "n/a", ""), answered("b", "yes", "")}, nil, Met, "mm", ""},
		{"worst counts", []Limit{answered("a", "yes", ""), answered("b", "", ""), answered("c", "no", "")}, nil, NotMet, "mmm", ""},
		{"cannot tell beside met", []Limit{answered("a", "yes", ""), answered("b", "", "")}, nil, CannotTell, "mm", ""},
		{"any of: best row", []Limit{answered("a", "no", "g"), answered("b", "yes", "g"), answered("c", "", "g")}, []Group{{Name: "g", AnyOf: true}}, Met, "ama", "g met b"},
		{"any of: none met", []Limit{answered("a", "no", "g"), answered("b", "", "g")}, []Group{{Name: "g", AnyOf: true}}, CannotTell, "am", "g cannot tell b"},
		{"any of: one that does not apply is no way out", []Limit{answered("a", "no", "g"), answered("b", "n/a", "g")}, []Group{{Name: "g", AnyOf: true}}, NotMet, "ma", "g not met a"},
		{"all of", []Limit{answered("a", "yes", "g"), answered("b", "no", "g")}, []Group{{Name: "g"}}, NotMet, "mm", "g not met b"},
		{"a group without a row is all of", []Limit{answered("a", "yes", "g"), answered("b", "no", "G ")}, nil, NotMet, "mm", "g not met b"},
		{"any of two all-of groups", []Limit{answered("a", "yes", "x"), answered("b", "no", "x"), answered("c", "yes", "y"), answered("d", "yes", "y")},
			[]Group{{Name: "r", AnyOf: true}, {Name: "x", Within: "r"}, {Name: "y", Within: "r"}}, Met, "aamm", "r met y, x not met b, y met c"},
		{"all of (limit, any of)", []Limit{answered("1", "yes", "r"), answered("2A", "no", "s"), answered("2B", "yes", "s")},
			[]Group{{Name: "r"}, {Name: "s", AnyOf: true, Within: "r"}}, Met, "mam", "r met 1, s met 2B"},
		{"two groups within each other do not hang", []Limit{answered("a", "no", "x"), answered("b", "yes", "y")},
			[]Group{{Name: "x", AnyOf: true, Within: "y"}, {Name: "y", AnyOf: true, Within: "x"}}, CannotTell, "aa", ""},
		{"advice does not weigh", []Limit{{Name: "a", Kind: Stated, Applies: Applies{All: true}, Answer: "no", Advice: true, Group: "g"}, answered("b", "yes", "g")}, []Group{{Name: "g", AnyOf: true}}, Met, "Am", "g met b"},
	} {
		t.Run(x.name, func(t *testing.T) {
			j := Judge(x.limits, x.groups, Subject{Product: "P", History: h})
			if j.Verdict != x.want {
				t.Errorf("%v, want %v", j.Verdict, x.want)
			}
			if judged := strings.Contains(strings.ToLower(x.name), "no limit") || strings.HasPrefix(x.name, "only one") || strings.HasPrefix(x.name, "two groups"); judged != strings.HasPrefix(j.Why, "no limit judged") {
				t.Errorf("why: %q", j.Why)
			}
			levels := ""
			for _, f := range j.Findings {
				levels += map[string]string{"must": "m", "advice": "A", "alternative": "a"}[f.Level]
			}
			var gs []string
			for _, g := range j.Groups {
				gs = append(gs, fmt.Sprintf("%s %v %s", g.Group, g.Verdict, g.DecidedBy))
			}
			if levels != x.levels || x.group != "" && strings.Join(gs, ", ") != x.group {
				t.Errorf("levels %q, groups %q", levels, gs)
			}
		})
	}
}

// TestApplies picks the limits of a product, and tells of a stage that its process lacks.
func TestApplies(t *testing.T) {
	h := record(t, "cook 0-60", "0:5 60:80")
	limit := func(a Applies, s *model.Stage) Limit {
		return Limit{Name: "L", Kind: StayAbove, Applies: a, FromC: c(0), Stages: st(s)}
	}
	for _, x := range []struct {
		name string
		l    Limit
		want string
	}{
		{"all", limit(Applies{All: true}, model.Cook), "met"},
		{"this product", limit(Applies{Product: "p"}, model.Cook), "met"},
		{"this family", limit(Applies{Family: "Pies"}, model.Cook), "met"},
		{"another product", limit(Applies{Product: "Q"}, model.Cook), ""},
		{"another family", limit(Applies{Family: "Soups"}, model.Cook), ""},
		{"all, stage lacking", limit(Applies{All: true}, model.Cool), "not applicable"},
		{"this product, stage lacking", limit(Applies{Product: "P"}, model.Cool), "cannot tell"},
		{"this family, stage lacking", limit(Applies{Family: "pies"}, model.Cool), "cannot tell"},
		{"all, the clock's stage lacking", Limit{Kind: CoolWithin, Applies: Applies{All: true}, ToC: c(5), TimeS: c(60), Clock: after(model.Reheat)}, "not applicable"},
		{"this product, second stage of a delay lacking", Limit{Kind: Delay, Applies: Applies{Product: "P"}, Stages: st(model.Cook), Then: model.Cool, TimeS: c(60)}, "cannot tell"},
	} {
		t.Run(x.name, func(t *testing.T) {
			j := Judge([]Limit{x.l}, nil, Subject{Product: "P", Family: "Pies", History: h})
			got := ""
			if len(j.Findings) > 0 {
				got = j.Findings[0].Verdict.String()
			}
			if got != x.want {
				t.Errorf("%q, want %q", got, x.want)
			}
		})
	}
}

// TestFaults finds what keeps a limit from being judged; Judge then cannot tell.
func TestFaults(t *testing.T) {
	for _, x := range []struct {
		name, column string
		l            Limit
	}{
		{"both ends of a hold", "To", Limit{Kind: Hold, FromC: c(5), ToC: c(6), TimeS: c(60)}},
		{"band upside down", "To", Limit{Kind: Band, FromC: c(60), ToC: c(5), TimeS: c(60)}},
		{"cooling upwards", "To", Limit{Kind: CoolWithin, FromC: c(5), ToC: c(60), TimeS: c(60), Clock: crossing}},
		{"heating downwards", "To", Limit{Kind: HeatWithin, FromC: c(60), ToC: c(5), TimeS: c(60), Clock: crossing}},
		{"crossing of nothing", "From", Limit{Kind: CoolWithin, ToC: c(5), TimeS: c(60), Clock: crossing}},
		{"From with an event", "From", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: c(60), Clock: after(model.Cook)}},
		{"two crossings", "From", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: c(60), Clock: crossingOf(c(50))}},
		{"clock colder than To", "Clock starts", Limit{Kind: CoolWithin, ToC: c(21), TimeS: c(60), Clock: crossingOf(f(57))}},
		{"clock at To", "Clock starts", Limit{Kind: CoolWithin, ToC: c(21), TimeS: c(60), Clock: crossingOf(c(21))}},
		{"clock hotter than To", "Clock starts", Limit{Kind: HeatWithin, ToC: c(74), TimeS: c(60), Clock: crossingOf(c(165))}},
		{"no equivalent time", "Time", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: c(0)}},
		{"no reduction", "Log reductions", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), DS: c(20), Logs: c(0)}},
		{"a stage of any length", "Time", Limit{Kind: Duration, Stages: st(model.Cook), TimeS: c(0), CompareTime: AtLeast}},
		{"any humidity", "Humidity", Limit{Kind: Humidity, HumidityPc: c(0), SharePc: c(50)}},
		{"humid for no time", "Time", Limit{Kind: Humidity, HumidityPc: c(90), TimeS: c(0)}},
		{"humid for no share", "Share of stage", Limit{Kind: Humidity, HumidityPc: c(90), SharePc: c(0), TimeS: c(0)}},
		{"time without a clock", "Clock starts", Limit{Kind: ByTheEnd, ToC: c(5), TimeS: c(60)}},
		{"two targets", "D", Limit{Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: c(60), DS: c(20), Logs: c(6)}},
		{"one stage", "Stage", Limit{Kind: Delay, Stages: st(model.Cook), TimeS: c(60)}},
		{"empty table", "Table", Limit{Kind: HoldTable, Table: &Table{Name: "t"}, Counting: Total}},
		{"hold for at most", "Compare time", Limit{Kind: Hold, FromC: c(60), TimeS: c(60), CompareTime: AtMost}},
		{"cool in at least", "Compare time", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(5), TimeS: c(60), Clock: crossing, CompareTime: MoreThan}},
		{"keep hot at most", "Compare", Limit{Kind: StayAbove, FromC: c(60), Compare: LessThan}},
		{"keep cold at least", "Compare", Limit{Kind: StayBelow, ToC: c(6), Compare: AtLeast}},
	} {
		t.Run(x.name, func(t *testing.T) {
			fs := x.l.Faults()
			if len(fs) != 1 || fs[0].Column != x.column || fs[0].Hint == "" {
				t.Fatalf("%+v", fs)
			}
			x.l.Applies = Applies{All: true}
			j := Judge([]Limit{x.l}, nil, Subject{History: record(t, "cook 0-60, cool 60-100", "0:5 60:80 100:3")})
			if j.Verdict != CannotTell || !strings.Contains(j.Findings[0].Why, fs[0].Msg) {
				t.Errorf("%v: %s", j.Verdict, j.Findings[0].Why)
			}
		})
	}
}

// TestKinds are complete, and differ.
func TestKinds(t *testing.T) {
	want := "hold, hold table, lethality, cool, heat, band, stay above, stay below, outside, by the end, delay, duration, falling, freeze, humidity, stated"
	var names []string
	for _, k := range Kinds {
		names = append(names, k.Name)
		if k.Help == "" || k.judge == nil || Named(" "+strings.ToUpper(k.Name)) != k {
			t.Errorf("%s is not complete", k.Name)
		}
	}
	if got := strings.Join(names, ", "); got != want {
		t.Errorf("kinds: %s", got)
	}
	if !Hold.Uses("counting") || Hold.Uses("Table") || !Hold.Uses("Note") || Named("hold on") != nil {
		t.Error("columns of hold")
	}
}

// forbidden are words that no finding may say of a food or process, and theory that belongs to lethality alone.
var (
	forbidden = regexp.MustCompile(`(?i)\b(safe|compliant|validated|approved|certified|guaranteed|release|discard|biot|fourier)`)
	hole      = regexp.MustCompile(`[{}]|NaN|Inf|%!`)
)

// wellWorded checks a sentence.
func wellWorded(t testing.TB, f Finding) {
	t.Helper()
	if forbidden.MatchString(f.Why) || hole.MatchString(f.Why) || strings.Contains(f.Why, "lethality") && f.Limit.Kind != Lethality ||
		!strings.HasSuffix(f.Why, ".") || f.Why[:1] != strings.ToUpper(f.Why[:1]) || strings.Contains(f.Why, "  ") {
		t.Errorf("%s: %q", f.Limit.Kind.Name, f.Why)
	}
	for _, n := range f.Notes {
		if hole.MatchString(n) || forbidden.MatchString(n) {
			t.Errorf("note %q", n)
		}
	}
	if _, err := json.Marshal([]*float64{f.Value, f.Required, f.MarginK, f.MarginS, f.AtS, f.ClockStartS, f.ClockEndS}); err != nil {
		t.Errorf("%s: %v", f.Limit.Kind.Name, err)
	}
	if f.Limit.Kind.Unit != "" && f.Value != nil && f.Unit != f.Limit.Kind.Unit && !(f.Limit.Kind == Hold && f.Unit == "°C") {
		t.Errorf("%s: unit %q", f.Limit.Kind.Name, f.Unit)
	}
}

// TestWords words every form, and some sentences exactly.
func TestWords(t *testing.T) {
	for key, s := range words {
		if forbidden.MatchString(s) {
			t.Errorf("%s: %s", key, s)
		}
	}
	for _, fm := range forms {
		for _, x := range fm.cases {
			limits := append([]Limit(nil), fm.limits...)
			for i := range limits {
				limits[i].Applies = Applies{All: true}
			}
			for _, f := range Judge(limits, fm.groups, Subject{Product: "P", History: x.history(t)}).Findings {
				wellWorded(t, f)
			}
		}
	}
	typed := map[string]string{"From": "130 °F", "Time": "2 h", "To": "70 °F"}
	for _, x := range []struct {
		name string
		l    Limit
		h    *model.History
		want string
	}{
		{"as typed", Limit{Kind: Hold, FromC: f(130), TimeS: c(7200), Counting: Total, Typed: typed}, record(t, "cook 0-200", "0:55 112.39:55 112.39001:20 200:20"),
			"The slowest place (centre) stayed at or above 130 °F for 112.3 min, and 2 h is needed."},
		{"seconds", Limit{Kind: Hold, FromC: c(74), TimeS: c(15), Counting: Total, Where: Where{"centre"}}, record(t, "cook 0-60", "0:74 0.2:74 0.2001:20 60:20"),
			"The centre stayed at or above 74 °C for 12 s, and 0.25 min is needed."},
		{"cooling, rounded up", Limit{Kind: CoolWithin, FromC: f(130), ToC: f(70), TimeS: c(7200), Clock: crossing, Typed: typed}, record(t, "cook 0-60, cool 60-400", "0:5 60:60 70:54.44444444444444 190.01:21.11111111111111 400:5"),
			"The slowest place (centre) took 120.1 min from 130 °F to 70 °F, and 2 h is allowed."},
		{"less than", Limit{Kind: Band, FromC: c(5), ToC: c(60), TimeS: min_(240), Counting: Total, CompareTime: LessThan}, record(t, "store 0-300", "0:20 240:20 240.001:3 300:3"), "The least favourable place (centre) was between 5 °C and 60 °C for 240.1 min, and less than 240 min is allowed."},
		{"cold, rounded up", Limit{Kind: StayBelow, ToC: c(8)}, record(t, "store 0-60", "0:5 60:8.01"), "The least favourable place (centre) rose to 8.1 °C, and at most 8 °C must be kept."},
		{"it only fell", Limit{Kind: StayBelow, ToC: f(135), Typed: map[string]string{"To": "135 °F"}}, record(t, "cool 0-60", "0:61.1 60:20"),
			"The least favourable place (centre) was at 142 °F as the stage began and never warmer, and at most 135 °F must be kept."},
		{"it only rose", Limit{Kind: StayAbove, FromC: c(63)}, record(t, "hold hot 0-60", "0:61.1 60:70"),
			"The least favourable place (centre) was at 61.1 °C as the stage began and never colder, and at least 63 °C must be kept."},
		{"a clock form", Limit{Kind: CoolWithin, FromC: c(60), ToC: c(20), TimeS: c(7200), Clock: crossing, Typed: map[string]string{"Time": "2:00:00 h:mm:ss"}}, record(t, "cook 0-60, cool 60-400", "0:5 60:90 150:0 400:0"),
			"The slowest place (centre) took 40 min from 60 °C to 20 °C, and 2:00:00 (h:mm:ss) is allowed."},
		{"a difference", Limit{Kind: Falling, Stages: st(model.Cool), AllowanceK: c(0), Typed: map[string]string{"Allowance": "0 °F difference"}}, record(t, "cool 0-60", "0:60 30:50 40:51 60:20"),
			"The least favourable place (centre) rose by 1.8 °F, and 0 °F is allowed."},
		{"hot, rounded down", Limit{Kind: StayAbove, FromC: c(63)}, record(t, "hold hot 0-60", "0:70 60:62.99"), "The least favourable place (centre) fell to 62.9 °C, and at least 63 °C must be kept."},
	} {
		if got := one(t, x.l, x.h).Why; got != x.want {
			t.Errorf("%s:\n%s\n%s", x.name, got, x.want)
		}
	}
}

// drawn makes a random record with readings at most 5 min apart: a cook, a rest, a chill, another heating now and then.
func drawn(rt *rapid.T) (*model.History, []float64, []float64) {
	n := rapid.IntRange(20, 60).Draw(rt, "readings")
	times, temps := make([]float64, n), make([]float64, n)
	x := rapid.Float64Range(0, 80).Draw(rt, "start")
	for i := range times {
		if i > 0 {
			times[i] = times[i-1] + rapid.Float64Range(30, 300).Draw(rt, "dt")
			x += rapid.Float64Range(-15, 15).Draw(rt, "step")
			x = math.Max(-30, math.Min(100, x))
		}
		temps[i] = x
	}
	return built(rt, times, temps), times, temps
}

// built makes a record of a cook in the first third, a chill after it, a reheat in the last third.
func built(t rapid.TB, times, temps []float64) *model.History {
	end := times[len(times)-1]
	var spans []model.Span
	for i, s := range []*model.Stage{model.Cook, model.Cool, model.Reheat} {
		spans = append(spans, model.Span{StartS: end * float64(i) / 3, EndS: end * float64(i+1) / 3, Step: &model.Step{Name: s.Name, Stage: s}})
	}
	h, err := model.NewRecord(spans, []model.Trace{{Point: model.Point{Name: "centre"}, TimesS: times, C: temps}}, nil)
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// drawnLimit makes a random limit of a kind that reads temperatures.
func drawnLimit(rt *rapid.T) Limit {
	a := rapid.Float64Range(5, 60).Draw(rt, "lower")
	b := a + rapid.Float64Range(1, 30).Draw(rt, "width")
	time := rapid.Float64Range(300, 7200).Draw(rt, "time")
	count := rapid.SampledFrom([]Counting{Total, Continuous}).Draw(rt, "counting")
	l := rapid.SampledFrom([]Limit{
		{Kind: Hold, FromC: &b, TimeS: &time, Counting: count},
		{Kind: Hold, ToC: &a, TimeS: &time, Counting: count},
		{Kind: Hold, FromC: &b, TimeS: c(0), Counting: count},
		{Kind: HoldTable, Counting: count, Table: &Table{Name: "t", Rows: []Row{{C: a, S: time}, {C: b, S: time / 3}}}},
		{Kind: Lethality, ReferenceC: &b, ZK: c(7.5), TimeS: &time, FromC: &a},
		{Kind: CoolWithin, FromC: &b, ToC: &a, TimeS: &time, Clock: crossing},
		{Kind: CoolWithin, ToC: &a, TimeS: &time, Clock: after(model.Cook)},
		{Kind: HeatWithin, ToC: &b, TimeS: &time, SecondS: c(60), Clock: fromStart(model.Reheat)},
		{Kind: Band, FromC: &a, ToC: &b, TimeS: &time, Counting: count},
		{Kind: StayAbove, FromC: &a}, {Kind: StayBelow, ToC: &b}, {Kind: StayBelow, ToC: &b, TimeS: &time, Counting: count},
		{Kind: Outside, FromC: &a, ToC: &b}, {Kind: ByTheEnd, ToC: &a, Stages: st(model.Cool)}, {Kind: Falling, Stages: st(model.Cool), AllowanceK: c(5)},
		{Kind: FreezeHold, FromC: &b, TimeS: c(60), ToC: &a, SecondS: &time},
	}).Draw(rt, "limit")
	l.Name, l.Applies = "L", Applies{All: true}
	return l
}

// judged judges one limit.
func judged(l Limit, h *model.History) Finding {
	return Judge([]Limit{l}, nil, Subject{Product: "P", History: h}).Findings[0]
}

// TestCollinear: readings that lie on the straight line between two others change nothing.
func TestCollinear(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		h, times, temps := drawn(rt)
		l := drawnLimit(rt)
		a := judged(l, h)
		if slices.Contains(a.Cautions, "sparse record") {
			return // more readings are what is asked for there
		}
		var t2, c2 []float64
		for i := range times {
			t2, c2 = append(t2, times[i]), append(c2, temps[i])
			if i+1 < len(times) {
				w := rapid.Float64Range(0.1, 0.9).Draw(rt, "where")
				t2, c2 = append(t2, times[i]+w*(times[i+1]-times[i])), append(c2, temps[i]+w*(temps[i+1]-temps[i]))
			}
		}
		b := judged(l, built(rt, t2, c2))
		if a.Verdict != b.Verdict || (a.Value == nil) != (b.Value == nil) || a.Value != nil && math.Abs(*a.Value-*b.Value) > 1e-6*(1+math.Abs(*a.Value)) {
			rt.Fatalf("%s: %v %v, then %v %v: %s / %s", l.Kind.Name, a.Verdict, a.Value, b.Verdict, b.Value, a.Why, b.Why)
		}
		wellWorded(t, a)
	})
}

// TestStricter: a stricter limit never turns what was not met into met, and the margin says how much stricter it may be.
func TestStricter(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		h, _, _ := drawn(rt)
		l := drawnLimit(rt)
		a := judged(l, h)
		by := rapid.Float64Range(0.01, 5).Draw(rt, "K")
		stricter := func(k float64) Limit {
			m := l
			move := func(p **float64, d float64) {
				if *p != nil {
					x := **p + d
					*p = &x
				}
			}
			switch l.Kind {
			case Hold, StayAbove, StayBelow, ByTheEnd:
				move(&m.FromC, k)
				move(&m.ToC, -k)
			case HoldTable:
				m.Table = &Table{Name: "t"}
				for _, r := range l.Table.Rows {
					m.Table.Rows = append(m.Table.Rows, Row{C: r.C + k, S: r.S})
				}
			case Lethality:
				move(&m.ReferenceC, k)
			case CoolWithin, FreezeHold:
				move(&m.ToC, -k)
			case HeatWithin:
				move(&m.ToC, k)
			case Band:
				move(&m.FromC, -k)
			case Outside:
				move(&m.FromC, -k)
				move(&m.ToC, k)
			case Falling:
				move(&m.AllowanceK, -k)
			}
			return m
		}
		if b := judged(stricter(by), h); a.Verdict == NotMet && b.Verdict == Met {
			rt.Fatalf("%s: not met, but met when %g K stricter: %s / %s", l.Kind.Name, by, a.Why, b.Why)
		}
		if a.MarginK == nil || a.Verdict == CannotTell {
			return
		}
		if (*a.MarginK > 0.003) && a.Verdict != Met || (*a.MarginK < -0.003) && a.Verdict != NotMet {
			rt.Fatalf("%s: %v with a margin of %g K: %s", l.Kind.Name, a.Verdict, *a.MarginK, a.Why)
		}
		if math.Abs(*a.MarginK) > 100 || l.Kind == Outside && *a.MarginK < 0.02-(*l.ToC-*l.FromC)/2 ||
			l.Kind == Falling && *a.MarginK > *l.AllowanceK-0.02 || l.Kind == CoolWithin && l.FromC != nil && *a.MarginK < *l.ToC-*l.FromC+0.02 {
			return // nothing would be left of the limit
		}
		if b := judged(stricter(*a.MarginK-0.01), h); b.Verdict != Met && b.Verdict != NotApplicable && len(b.Cautions) == 0 {
			rt.Fatalf("%s: margin %g K, but %v just inside it: %s", l.Kind.Name, *a.MarginK, b.Verdict, b.Why)
		}
		if b := judged(stricter(*a.MarginK+0.01), h); b.Verdict == Met {
			rt.Fatalf("%s: margin %g K, but met just beyond it: %s", l.Kind.Name, *a.MarginK, b.Why)
		}
	})
}
