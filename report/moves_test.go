package report

import (
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// TestMovesWhateverTheInterval: how the slowest place moves is the same sentence however far apart the samples are.
func TestMovesWhateverTheInterval(t *testing.T) {
	for _, shape := range []*model.Shape{model.Slab, model.Brick, model.ShortCylinder} {
		p := roast(t, shape, rules.Met)
		p.Steps[2].Faces = []model.FaceExposure{{Face: model.Top, Exposure: model.Exposure{Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{1}}, FilmW: ptr(60.)}}}
		again(t, p)
		var said []string
		for _, every := range []float64{7, 60, 600, 9000} {
			p.Samples, p.moved = p.History.Sample(every), ""
			said = append(said, (&sheet{doc: &doc{head: roastHead()}, p: p, decides: p.decides()}).moves())
		}
		for _, s := range said {
			if s != said[0] || !strings.Contains(s, "moves from") {
				t.Errorf("%s: %q, and %q", shape.Name, said[0], s)
			}
		}
	}
}

// TestBeyond measures how far a place lies outside of two others.
func TestBeyond(t *testing.T) {
	at := func(up, along float64) model.Place { return model.Place{UpM: up, AlongM: along} }
	for _, x := range []struct {
		q, a, b model.Place
		want    float64
	}{
		{at(0.25, 0), at(0, 0), at(0.5, 0), 0},
		{at(-0.25, 0), at(0, 0), at(0.5, 0), 0.25},
		{at(0.25, 0.125), at(0, 0), at(0.5, 0), 0.125},
		{at(0.75, -0.5), at(0.5, 0), at(0, 0), 0.5},
	} {
		if got := beyond(x.q, x.a, x.b); got != x.want {
			t.Errorf("%v: %g, want %g", x, got, x.want)
		}
	}
}

// TestCentreInTableAndSentence: the places in the table of steps are called the centre where the sentence on how they move does so.
func TestCentreInTableAndSentence(t *testing.T) {
	p := roast(t, model.Slab, rules.Met)
	x := &sheet{doc: &doc{head: roastHead()}, p: p, decides: p.decides()}
	p.History.ErrorK = 0.02
	at := []model.Place{{UpM: 0.02}, {UpM: 0.02}}
	p.Samples.Points = [][]float64{{5.06, 5.14}}
	p.Samples.Coldest, p.Samples.Hottest = []float64{5, 5}, []float64{6, 6}
	for i, centre := range []bool{true, false} { // 0.06 K off and 0.14 K off, where 0.1 K is nothing
		if got := x.extremePlace(i, p.Samples.Coldest, at); (got == p.Product.Where(model.Place{})) != centre {
			t.Errorf("%g °C at the centre: %s", p.Samples.Points[0][i], got)
		}
	}
}

// TestRaisedMediumBesideItsStep: where the medium of a step is not the one that was typed, its row says so.
func TestRaisedMediumBesideItsStep(t *testing.T) {
	p := roast(t, model.Slab, rules.Met)
	x := &sheet{doc: &doc{head: roastHead()}, p: p, decides: p.decides()}
	sp := p.History.Spans[1]
	if got := x.mediumAtEnd(&sp); strings.Contains(got, "raised") {
		t.Error(got)
	}
	sp.MediumFromC, sp.MediumToC = ptr(-20.), ptr(-1.)
	if got := x.mediumAtEnd(&sp); !strings.Contains(got, "raised to the freezing point (typed: down to −20 °C (") {
		t.Error(got)
	}
	const said = ", raised to the freezing point (typed: down to "
	before := strings.Count(writeText(t, roastHead(), p), said)
	p.History.Spans[1] = sp
	if after := strings.Count(writeText(t, roastHead(), p), said); before != 0 || after != 1 {
		t.Errorf("report.txt says it %d times, and %d times before", after, before)
	}
}
