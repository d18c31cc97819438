package rules

import (
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

// TestRecorded judges records by hand: what their readings show, and what they leave open.
func TestRecorded(t *testing.T) {
	minutes := func(f func(m float64) float64, from, to float64) string {
		var s []string
		for m := from; m <= to; m++ {
			s = append(s, exactly(m, "")+":"+exactly(f(m), ""))
		}
		return strings.ReplaceAll(strings.Join(s, " "), " :", ":")
	}
	chill := func(m float64) float64 { return 4 + 76*math.Exp(-m/60) } // 80 at 0, 60 at 18.3, 21 at 89.9 min
	for _, x := range []struct {
		name          string
		l             Limit
		spans, course string
		verdict       Verdict
		why           string // part of the sentence
	}{
		{"a log of minutes cannot show 15 s: one reading there", hold15(), "cook 0-4", "0:20 1:70 2:74.5 3:73 4:70", CannotTell, "readings there are 1 min apart and cannot show 15 s"},
		{"a log of minutes shows 15 s: two readings there", hold15(), "cook 0-4", "0:20 1:70 2:74.5 3:74.2 4:70", Met, ""},
		{"a log of minutes shows that 15 s were not reached", hold15(), "cook 0-4", "0:20 1:70 2:73.5 3:73.2 4:70", NotMet, ""},
		{"three readings by hand, chilled in time", cooling(), "cool 0-140", "0:65 30:50 110:18 140:12", Met, ""},
		{"three readings by hand, either way", cooling(), "cool 0-140", "0:65 30:50 100:25 140:12", CannotTell, "between two readings"},
		{"three readings by hand, too late", cooling(), "cool 0-200", "0:65 30:50 155:25 200:12", NotMet, ""},
		{"a minute log of a chill", cooling(), "cool 0-200", minutes(chill, 0, 200), Met, ""},
		{"a gap after the end, the surroundings unknown", cooling(), "cool 0-200", minutes(chill, 0, 100) + " | " + minutes(chill, 180, 200), CannotTell, "1 h 40 min to 3 h 00 min"},
	} {
		t.Run(x.name, func(t *testing.T) {
			got := found(t, x.l, logged(t, x.spans, x.course))
			if got.Verdict != x.verdict || !strings.Contains(got.Why, x.why) {
				t.Errorf("%v, want %v: %s", got.Verdict, x.verdict, got.Why)
			}
			t.Log(got.Why, got.Notes)
		})
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
