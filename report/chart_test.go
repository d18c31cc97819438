package report

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"slowpoint/model"
	"slowpoint/rules"
)

// crowded is a chart as low as on the page for the kitchen: a steep rise and a slow fall, three limits with long names, two instants.
func crowded(fallS float64) *chart {
	f := &chart{x0: 0, x1: 8, y0: -5, y1: 95, size: kitchen}
	l := line{name: "centre"}
	at := func(x float64) float64 {
		if x < 2 {
			return 10 + 70*(1-math.Exp(-2*x))
		}
		return 3 + 75*math.Exp(-(x-2)*3600/fallS)
	}
	for x := 0.0; x <= 8; x += 0.05 {
		l.x, l.y = append(l.x, x), append(l.y, at(x))
	}
	f.lines = []line{l}
	for _, c := range []float64{60, 21, 5} {
		f.levels = append(f.levels, level{words: []string{plain(c, 0, nearest) + " °C", "A code 7(3): from sixty to twenty-one in two hours (+1)"}, y: c, from: 2, to: 8})
	}
	for _, x := range []float64{2.2, 3} {
		f.spots = append(f.spots, spot{fmt.Sprintf("clock passes %.0f min", x*60), x, at(x)})
	}
	return f
}

// No label of a crowded chart lies on a curve or on another label, and no line to a label crosses one.
func TestLabelsCoverNothing(t *testing.T) {
	d := newDoc(roastHead(), "T")
	d.page()
	for _, fallS := range []float64{1200, 2400, 3600, 5400} {
		t.Run(plain(fallS/60, 0, nearest)+" min", func(t *testing.T) {
			f := crowded(fallS)
			c := draw.Canvas{Canvas: d.canvas(d.left, d.y, 140, 40), Rectangle: vg.Rectangle{Max: vg.Point{X: 380, Y: 95}}}
			x := func(v float64) vg.Length { return vg.Length((v - f.x0) / (f.x1 - f.x0) * 380) }
			y := func(v float64) vg.Length { return vg.Length((v - f.y0) / (f.y1 - f.y0) * 95) }
			taken := &labels{}
			curve := f.runs(x, y, 0, taken)[0]
			notes := f.notes(c, x, y, taken)
			if len(notes) != 5 {
				t.Fatalf("%d labels", len(notes))
			}
			in := func(p vg.Point, b vg.Rectangle) bool {
				return p.X > b.Min.X && p.X < b.Max.X && p.Y > b.Min.Y && p.Y < b.Max.Y
			}
			for i, n := range notes {
				if n.box.Min.X < 0 || n.box.Min.Y < 0 || n.box.Max.X > 381 || n.box.Max.Y > 95 {
					t.Errorf("%q leaves the chart", n.words)
				}
				for _, p := range curve {
					if in(p, n.box) {
						t.Errorf("%q lies on the curve", n.words)
						break
					}
				}
				for k, m := range notes {
					dx, dy := min(n.box.Max.X, m.box.Max.X)-max(n.box.Min.X, m.box.Min.X), min(n.box.Max.Y, m.box.Max.Y)-max(n.box.Min.Y, m.box.Min.Y)
					if k > i && dx > 0.5 && dy > 0.5 {
						t.Errorf("%q lies on %q", n.words, m.words)
					}
					for q := vg.Length(0.05); k != i && n.from != nil && q < 0.95; q += 0.05 {
						if in(vg.Point{X: n.from.X + q*(n.to.X-n.from.X), Y: n.from.Y + q*(n.to.Y-n.from.Y)}, m.box) {
							t.Errorf("the line to %q crosses %q", n.words, m.words)
							break
						}
					}
				}
			}
		})
	}
}

// Numbers at the lower axis that would touch are left out, with their marks kept.
func TestTicksKeepApart(t *testing.T) {
	f := &chart{x0: 0, x1: 10, size: small, xTicks: []plot.Tick{{Value: 0, Label: "0"}, {Value: 4, Label: "4"}, {Value: 5, Label: "104"}, {Value: 5.4, Label: "104.5"}, {Value: 6, Label: "105"}, {Value: 9, Label: "108"}}}
	for _, c := range []struct {
		wide float64 // pt
		want string
	}{{400, "0 4 104 - 105 108"}, {1200, "0 4 104 104.5 105 108"}, {120, "0 4 - - 105 108"}} {
		var got []string
		for _, k := range f.apart(c.wide) {
			if k.Label == "" {
				k.Label = "-"
			}
			got = append(got, k.Label)
		}
		if s := strings.Join(got, " "); s != c.want {
			t.Errorf("%g pt: %s, want %s", c.wide, s, c.want)
		}
	}
	if f.xTicks[3].Label != "104.5" {
		t.Error("the chart itself was changed")
	}
}

// The words over a section stand clear of a place marked at its top, and a long name beside a short line gives way.
func TestSketchWordsStandClear(t *testing.T) {
	h, p := roastHead(), roast(t, model.Brick, rules.Met)
	p.Product.Size = model.Size{ThicknessM: 0.05, WidthM: 0.08, LengthM: 0.127}
	d := newDoc(h, "T")
	d.page()
	top := d.y
	d.sketch(&p.Product, model.Place{UpM: 0.025}, "top", 42)
	pages, _, _ := pageBoxes(t, finished(t, d))
	for _, b := range pages[0] {
		if b.word == "across" && b.y1 > (top+7-2.6)/mmPerPt {
			t.Errorf("the caption ends at %.1f pt, on the mark at the top of the section", b.y1)
		}
	}
}

func finished(t *testing.T, d *doc) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := d.finish(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}
