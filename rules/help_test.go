package rules

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// chain makes spans from words: "cook 0-60, rest 60-70, cool 70-300", minutes from the start.
func chain(t testing.TB, words string) []model.Span {
	t.Helper()
	var spans []model.Span
	for i, w := range strings.Split(words, ", ") {
		cut := strings.LastIndex(w, " ")
		name, times, _ := w[:cut], w[cut+1:], 0
		a, b, ok := strings.Cut(times, "-")
		if !ok {
			t.Fatalf("%q is no span", w)
		}
		sp := model.Span{StartS: 60 * number(t, a), EndS: 60 * number(t, b)}
		for _, s := range model.Stages {
			if s.Name == name {
				sp.Step = &model.Step{Name: name, Stage: s, Exposure: model.Exposure{At: cell.Ref{Sheet: "Steps", Row: i + 2}}}
			}
		}
		if sp.Step == nil {
			t.Fatalf("no stage %q", name)
		}
		spans = append(spans, sp)
	}
	return spans
}

// number reads a number or fails.
func number(t testing.TB, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// trace makes a course from words: "0:5 60:75", minutes and °C, at a height in mm above the centre.
func trace(t testing.TB, name string, upMM float64, words string) model.Trace {
	t.Helper()
	tr := model.Trace{Point: model.Point{Name: name, Place: model.Place{UpM: upMM / 1000}}}
	for _, w := range strings.Fields(words) {
		a, b, _ := strings.Cut(w, ":")
		tr.TimesS, tr.C = append(tr.TimesS, 60*number(t, a)), append(tr.C, number(t, b))
	}
	return tr
}

// record makes a history of one course at the centre.
func record(t testing.TB, spans, course string) *model.History {
	t.Helper()
	return records(t, spans, trace(t, "centre", 0, course))
}

// records makes a history of several courses.
func records(t testing.TB, spans string, traces ...model.Trace) *model.History {
	t.Helper()
	h, err := model.NewRecord(chain(t, spans), traces, nil)
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// one judges a single limit and returns its finding.
func one(t testing.TB, l Limit, h *model.History) Finding {
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
	j := Judge([]Limit{l}, nil, Subject{Product: "P", Family: "F", History: h})
	if len(j.Findings) != 1 {
		t.Fatalf("%d findings", len(j.Findings))
	}
	return j.Findings[0]
}

// c, min and f make pointers: °C or K, minutes as seconds, °F as °C.
func c(x float64) *float64    { return &x }
func min_(x float64) *float64 { return c(60 * x) }
func f(x float64) *float64    { return c((x - 32) / 1.8) }

// close compares a figure of a finding.
func closeTo(t testing.TB, what string, got *float64, want, tol float64) {
	t.Helper()
	if got == nil {
		t.Errorf("%s: none, want %g", what, want)
	} else if math.Abs(*got-want) > tol {
		t.Errorf("%s: %.9g, want %.9g ± %g", what, *got, want, tol)
	}
}
