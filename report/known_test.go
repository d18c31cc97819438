package report

import (
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// knownCases are invented cases: every shape and surroundings that the choice tells apart.
func knownCases() []KnownAnswer {
	exposed := func(s *model.Surface, points int) model.Exposure {
		return model.Exposure{Surface: s, Medium: model.Course{TimesS: make([]float64, points), C: make([]float64, points)}}
	}
	step := func(s *model.Surface, points int, faces ...model.FaceExposure) model.Step {
		return model.Step{Exposure: exposed(s, points), Faces: faces}
	}
	one := func(name string, shape *model.Shape, steps ...model.Step) KnownAnswer {
		return KnownAnswer{Name: name, Source: "an invented source", Expected: 50, Got: 50.002, Allowance: 0.01, Unit: "°C", OK: true, Shape: shape, Steps: steps}
	}
	top := model.FaceExposure{Face: model.Top, Exposure: exposed(model.Film, 1)}
	ks := []KnownAnswer{{Name: "water", Source: "an invented source", Expected: 4180, Got: 4181, Allowance: 2, Unit: "J/(kg·K)", OK: true}}
	for range 9 {
		ks = append(ks, one("slab held", model.Slab, step(model.Held, 1)))
	}
	return append(ks, one("slab film", model.Slab, step(model.Film, 1)), one("slab chain", model.Slab, step(model.Film, 1), step(model.Film, 1)),
		one("slab course", model.Slab, step(model.Film, 3)), one("slab faces", model.Slab, step(model.Film, 1, top)), one("brick film", model.Brick, step(model.Film, 1)))
}

// TestAmountOfAPureNumber: a case without a unit has none printed.
func TestAmountOfAPureNumber(t *testing.T) {
	pure, warm := KnownAnswer{Unit: "-"}, KnownAnswer{Unit: "°C"}
	if a, b := pure.Amount("0.005"), warm.Amount("0.005"); a != "0.005" || b != "0.005 °C" {
		t.Errorf("%q, %q", a, b)
	}
}

// A product's report shows the cases of its shape and surroundings, and every case that is outside its allowance.
func TestClosestCases(t *testing.T) {
	film := model.Step{Exposure: model.Exposure{Surface: model.MovingAir, Medium: model.Course{TimesS: []float64{0}, C: []float64{3}}}}
	held := model.Step{Exposure: model.Exposure{Surface: model.Held, Medium: model.Course{TimesS: []float64{0}, C: []float64{3}}}}
	faces := film
	faces.Faces = []model.FaceExposure{{Face: model.Underside, Exposure: film.Exposure}}
	for _, c := range []struct {
		name        string
		shape       *model.Shape
		steps       []model.Step
		has, hasNot []string
		n           int
	}{
		{"slab in a chain", model.Slab, []model.Step{film, film}, []string{"slab film", "slab chain", "slab course", "slab faces"}, []string{"brick film", "water"}, knownRows},
		{"slab with a face of its own", model.Slab, []model.Step{faces}, []string{"slab film", "slab faces"}, []string{"brick film"}, knownRows},
		{"slab held", model.Slab, []model.Step{held}, []string{"slab held"}, []string{"slab film", "slab chain"}, knownRows},
		{"brick", model.Brick, []model.Step{film}, []string{"brick film"}, []string{"slab film"}, 1},
		{"bar", model.Bar, []model.Step{film}, []string{"brick film"}, nil, 1},
		{"sphere", model.Sphere, []model.Step{film}, nil, nil, 0},
		{"stirred", model.Stirred, []model.Step{film}, nil, nil, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			ks := knownCases()
			var got []string
			for _, k := range closest(ks, &model.Product{Shape: c.shape}, c.steps) {
				got = append(got, k.Name)
			}
			if len(got) != c.n {
				t.Errorf("%d cases, want %d: %q", len(got), c.n, got)
			}
			for _, w := range c.has {
				if !slices.Contains(got, w) {
					t.Errorf("%q is missing in %q", w, got)
				}
			}
			for _, w := range c.hasNot {
				if slices.Contains(got, w) {
					t.Errorf("%q is in %q", w, got)
				}
			}
			ks[0].OK = false
			if bad := closest(ks, &model.Product{Shape: c.shape}, c.steps); len(bad) != c.n+1 || bad[0].Name != "water" {
				t.Errorf("a case outside its allowance is not shown: %d cases", len(bad))
			}
		})
	}
}

// The sentence counts the cases, tells the largest deviation, and names the program.
func TestKnownSentence(t *testing.T) {
	h := &Head{Version: "1.2.3", Known: knownCases()}
	if got := h.knownSentence(); !strings.Contains(got, "version 1.2.3, solved 15 problems with a known answer") || !strings.Contains(got, "All are within") ||
		!strings.Contains(got, "50 % of its allowance (water)") {
		t.Error(got)
	}
	h.Known[3].OK, h.Known[3].Got = false, math.NaN()
	if got := h.knownSentence(); !strings.Contains(got, "OUTSIDE their allowance: 1. Do not use") || strings.Contains(got, "NaN") {
		t.Error(got)
	}
	h.Known = h.Known[:1]
	if got := h.knownSentence(); !strings.Contains(got, "solved 1 problem with") {
		t.Error(got)
	}
}

// A product's report holds its own few cases and says where the others stand; the overview holds all.
func TestKnownAnswersInPDF(t *testing.T) {
	h := roastHead()
	for _, c := range []struct {
		shape       *model.Shape
		has, hasNot string
	}{{model.Slab, "61.2534 °C", "23.118 °C"}, {model.Bar, "23.118 °C", "61.2534 °C"}, {model.Sphere, "None of them is of this product's shape", "61.2534 °C"},
		{model.Stirred, "None of them is of this product's shape", "23.118 °C"}} {
		text := pdfText(t, productPDF(t, h, roast(t, c.shape, rules.Met)))
		for _, w := range []string{c.has, "solved 2 problems with a known answer", "stands in summary.pdf", "slowpoint verify"} {
			if !strings.Contains(text, w) {
				t.Errorf("%s: %q is missing", c.shape.Name, w)
			}
		}
		if strings.Contains(text, c.hasNot) {
			t.Errorf("%s: %q is printed", c.shape.Name, c.hasNot)
		}
	}
	text := pdfText(t, summaryPDF(t, h, manyRows(2)))
	for _, w := range []string{"61.2534 °C", "23.118 °C", "an invented citation", "solved 2 problems"} {
		if !strings.Contains(text, w) {
			t.Errorf("overview: %q is missing", w)
		}
	}
}

// The input echo tells what was typed and what was used, and leaves out what stands on a limit's card word for word.
func TestEcho(t *testing.T) {
	at := func(row, col int) cell.Ref { return cell.Ref{Sheet: "Limits", Row: row, Col: col} }
	for _, c := range []struct {
		name string
		r    cell.Reading
		want string
	}{
		{"as typed", cell.Reading{At: at(2, 3), Column: "Rule", Typed: "hold", Used: "hold"}, "C Rule: hold"},
		{"in other units", cell.Reading{At: at(2, 28), Column: "Time", Typed: "2 min", Used: "120 s"}, "AB Time: 2 min → 120 s"},
		{"blank", cell.Reading{At: at(2, 5), Column: "Where", Used: "every point", Why: "blank: every point is taken"}, "E Where: (blank) → every point"},
		{"blank with a reason", cell.Reading{At: at(2, 5), Column: "Temperature is", Used: "set-point", Why: "the less favourable word"}, "E Temperature is: (blank) → set-point; the less favourable word"},
		{"no column", cell.Reading{At: at(2, 0), Column: "Note", Typed: "x", Used: "x"}, "Note: x"},
	} {
		if got := echoed([]cell.Reading{c.r}); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
	blank := func(col int, column, used string) cell.Reading {
		return cell.Reading{At: at(2, col), Column: column, Used: used, Why: "blank: the usual"}
	}
	if got, want := echoed([]cell.Reading{blank(12, "Compare", "usual"), blank(13, "Compare time", "usual"), blank(14, "Level", "must"), {At: at(2, 15), Column: "z", Typed: "7 K", Used: "7 K"},
		blank(16, "Zone", "must")}), "L Compare, M Compare time: (blank) → usual · N Level: (blank) → must · O z: 7 K · P Zone: (blank) → must"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	h, p := roastHead(), roast(t, model.Slab, rules.Met)
	for i, row := range []int{2, 5} { // the limit of row 5 does not apply and has no card
		words := []string{"first note", "second note"}[i]
		p.Readings = append(p.Readings, cell.Reading{At: at(row, 4), Column: "Note", Typed: words, Used: words})
	}
	p.Judgement.Findings[0].Limit.Note = "first note"
	text := pdfText(t, productPDF(t, h, p))
	if strings.Count(text, "first note") != 1 || strings.Count(text, "second note") != 1 {
		t.Errorf("the notes stand %d and %d times", strings.Count(text, "first note"), strings.Count(text, "second note"))
	}
}

// A default that stood in three rows or more of a sheet is told once with its rows; nothing else leaves its row.
func TestBlanksTogether(t *testing.T) {
	at := func(sheet string, row, col int) cell.Ref { return cell.Ref{Sheet: sheet, Row: row, Col: col} }
	var rs []cell.Reading
	for _, row := range []int{2, 3, 4, 7, 9, 10} {
		rs = append(rs, cell.Reading{At: at("Limits", row, 5), Column: "Where", Used: "every point", Why: "blank: every point is taken"},
			cell.Reading{At: at("Limits", row, 3), Column: "Rule", Typed: "hold", Used: "hold"})
	}
	rs = append(rs, cell.Reading{At: at("Limits", 11, 5), Column: "Where", Typed: "every point", Used: "every point"},
		cell.Reading{At: at("Limits", 12, 5), Column: "Where", Used: "every point", From: "mine.xlsx!A1"},
		cell.Reading{At: at("Limits", 2, 6), Column: "Level", Used: "must"}, cell.Reading{At: at("Limits", 3, 6), Column: "Level", Used: "must"})
	for row := 5; row > 2; row-- {
		rs = append(rs, cell.Reading{At: at("Steps", row, 5), Column: "Cover", Used: "open", Why: "the usual"})
	}
	left, lines := blanksTogether(rs)
	if want := [][]string{{"Limits, blank cells", "E Where: (blank) → every point in rows 2–4, 7, 9, 10"}, {"Steps, blank cells", "E Cover: (blank) → open; the usual in rows 3–5"}}; !reflect.DeepEqual(lines, want) {
		t.Errorf("%q, want %q", lines, want)
	}
	for _, r := range left {
		if r.Typed == "" && r.From == "" && r.Column != "Level" {
			t.Errorf("%v is told twice", r)
		}
	}
	if len(left) != len(rs)-9 {
		t.Errorf("%d cells of %d stay in their rows, want %d", len(left), len(rs), len(rs)-9)
	}
}

// The form for deviations stands on one page, wherever the glossary ends: with less room to write rather than split.
func TestDeviationForm(t *testing.T) {
	ends := map[int]map[float64]bool{1: {}, 2: {}}
	for at := 20.0; at < 60; at += 0.5 { // the last place that has room is about 40 mm down
		d := newDoc(roastHead(), "x")
		d.page()
		d.y += at
		(&sheet{doc: d}).deviation()
		ends[d.pdf.pages()][math.Round((d.y-btof(d.pdf.pages() == 1)*at)*10)/10] = true
	}
	if len(ends[1]) != 1 || len(ends[2]) != 1 {
		t.Errorf("the form is split: it ends at %v mm below where it began, on a page of its own at %v", ends[1], ends[2])
	}
}
