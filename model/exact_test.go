package model_test

import (
	"bytes"
	"encoding/csv"
	"flag"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"

	"slowpoint/model"
	"slowpoint/model/verify"
)

var rewrite = flag.Bool("rewrite", false, "write testdata/exact.csv anew")

// What constant properties and linear films are solved by stays the method exact in time, whatever else the program learns. Its temperatures
// are kept in testdata/exact.csv and held to rounding, which differs from processor to processor: these are no check values, they tell that
// a result has moved. On one machine they are the same to the last bit before and after a march, whose memory the next body is given.
func TestExactMethodStays(t *testing.T) {
	brick, brickSteps := constantBrick()
	problems := []verify.ReferenceProblem{{ID: "D-constant", Problem: verify.Problem{Product: brick, Steps: brickSteps}, Points: map[string]model.Place{
		"centre": {}, "corner": {UpM: 0.045, AcrossM: 0.09, AlongM: 0.15}, "half": {UpM: 0.0225, AcrossM: 0.045, AlongM: 0.075}}}}
	var marched []verify.ReferenceProblem
	for _, r := range verify.References() {
		if slices.Contains([]string{"D", "H", "I"}, r.ID) {
			marched = append(marched, r)
		} else {
			problems = append(problems, r)
		}
	}
	told := func() [][]string {
		rows := [][]string{{"problem", "place", "s", "°C"}}
		for _, r := range problems {
			h, err := model.Solve(r.Product, r.Steps, model.Options{})
			if err != nil {
				t.Fatal(err)
			}
			for _, span := range h.Spans {
				if span.Method != model.ExactInTime {
					t.Errorf("%s: %s is %s", r.ID, span.Step.Name, span.Method)
				}
			}
			end := 0.0
			for _, s := range r.Steps {
				end += s.DurationS
			}
			for _, name := range slices.Sorted(maps.Keys(r.Points)) {
				for _, s := range []float64{60, end / 20, end / 4, end / 2, end} {
					c := h.At(r.Points[name], s)
					rows = append(rows, []string{r.ID, name, strconv.FormatFloat(s, 'g', -1, 64), strconv.FormatFloat(c, 'g', -1, 64)})
				}
			}
		}
		return rows
	}
	got := told()
	for _, r := range marched {
		if _, err := model.Solve(r.Product, r.Steps, model.Options{}); err != nil {
			t.Fatal(err)
		}
		if !slices.EqualFunc(got, told(), slices.Equal) {
			t.Errorf("other temperatures after %s", r.ID)
		}
	}

	file := filepath.Join("testdata", "exact.csv")
	if *rewrite {
		var b bytes.Buffer
		if err := csv.NewWriter(&b).WriteAll(got); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(file, b.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	f, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	want, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(got) != len(want) {
		t.Fatalf("%d temperatures, kept are %d", len(got), len(want))
	}
	for i, w := range want[1:] {
		g := got[i+1]
		was, err1 := strconv.ParseFloat(w[3], 64)
		is, err2 := strconv.ParseFloat(g[3], 64)
		if err1 != nil || err2 != nil || !slices.Equal(g[:3], w[:3]) || math.Abs(is-was) > 1e-9 {
			t.Errorf("%v, kept is %v", g, w)
		}
	}
}
