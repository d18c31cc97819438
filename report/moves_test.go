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
