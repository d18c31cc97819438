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

// The part that decides has at least half of the axis of time where it meets steps of very different lengths, a short step keeps to
// scale beside it, and every axis has at least three numbers.
func TestTimeAxisShowsWhatDecides(t *testing.T) {
	for _, c := range []struct {
		name       string
		hours      []float64
		start, at  float64 // of the clock and the deciding instant, h
		from, to   int     // the part
		least      float64 // share of the axis
		mostOfRest float64 // share of the first step outside
	}{
		{"a pot stands a quarter of an hour, then 15 h in the refrigerator", []float64{0.25, 15}, 5, 15.2, 1, 1, 0.9, 0.05},
		{"a store of two days decides", []float64{2, 3, 48}, 6, 50, 2, 2, 0.6, 0.2},
		{"cook of 20 min before a long chill", []float64{1. / 3, 5}, 0.2, 0.3, 0, 0, 0.5, 0.5},
		{"reheat of 21 min at the end", []float64{1. / 3, 1.5, 2.1, 24, 0.35}, 28.1, 28.2, 4, 4, 0.5, 0.1},
		{"a clock over two steps", []float64{2, 0.2, 4, 40}, 2.1, 5, 1, 2, 0.5, 0.4},
		{"two long steps alone", []float64{9, 70}, 1, 8, 0, 0, 0.5, 0.5},
		{"seconds", []float64{0.002}, 0, 0.001, 0, 0, 1, 0},
		{"alike", []float64{1, 2, 3}, 0.1, 0.9, 0, 0, 0.16, 0.4},
	} {
		t.Run(c.name, func(t *testing.T) {
			h, now := &model.History{}, 0.0
			for _, d := range c.hours {
				h.Spans = append(h.Spans, model.Span{StartS: now, EndS: now + d*3600})
				now += d * 3600
			}
			start, at := c.start*3600, c.at*3600
			d := &deciding{history: h, finding: &rules.Finding{ClockStartS: &start, AtS: &at}}
			if got := d.part(); got != (stretch{c.from, c.to}) {
				t.Fatalf("part %v, want %d to %d", got, c.from, c.to)
			}
			a := newTimeAxis(h, d.part())
			if got := (a.pieces[c.to].x1 - a.pieces[c.from].x0) / a.end(); got < c.least-1e-9 {
				t.Errorf("what decides has %.2f of the axis, want at least %.2f", got, c.least)
			}
			out := 0
			if c.from == 0 {
				out = c.to + 1
			}
			if out < len(a.pieces) {
				if got := (a.pieces[out].x1 - a.pieces[out].x0) / a.end(); got > c.mostOfRest+1e-9 {
					t.Errorf("step %d has %.2f of the axis, want at most %.2f", out+1, got, c.mostOfRest)
				}
			}
			f := &chart{x1: a.end(), size: kitchen, xTicks: a.ticks}
			numbers := 0
			for _, k := range f.apart(330) { // pt: as wide as on the page for the kitchen
				numbers += btoi(k.Label != "")
			}
			if numbers < 3 {
				t.Errorf("%d numbers at the axis: %v", numbers, a.ticks)
			}
			for i := 1; i < len(a.ticks); i++ {
				if a.ticks[i].Value <= a.ticks[i-1].Value || a.ticks[i].Label == a.ticks[i-1].Label {
					t.Errorf("mark %v after %v", a.ticks[i], a.ticks[i-1])
				}
			}
		})
	}
}

// The words of a limit stay within the steps that it is about, off their borders and off curves.
func TestLimitWordsKeepToTheirSteps(t *testing.T) {
	d := newDoc(roastHead(), "T")
	d.page()
	const wide, high = 380, 120 // pt
	for _, c := range []struct {
		name     string
		from, to float64 // of the step, of 8
		y        float64
	}{{"wide step", 3, 8, 63}, {"short step", 3, 4.2, 63}, {"first step", 0, 2, 63}, {"last step under the fall", 6.6, 8, 20}, {"one unit only", 2, 2.95, 45}} {
		t.Run(c.name, func(t *testing.T) {
			f := crowded(3600)
			f.bands = []band{{name: "a", from: 0, to: c.from}, {name: "b", from: c.from, to: c.to}, {name: "c", from: c.to, to: 8}}
			f.spots = nil
			f.levels = []level{{words: []string{"145 °F (62.78 °C)", "A code 7(3): from sixty to twenty-one in two hours (+1)"}, y: c.y, from: c.from, to: c.to}}
			can := draw.Canvas{Canvas: d.canvas(d.left, d.y, 140, 40), Rectangle: vg.Rectangle{Max: vg.Point{X: wide, Y: high}}}
			x := func(v float64) vg.Length { return vg.Length(v / 8 * wide) }
			y := func(v float64) vg.Length { return vg.Length((v - f.y0) / (f.y1 - f.y0) * high) }
			taken := &labels{}
			f.plotBands(can, x, taken)
			curve := f.runs(x, y, 0, taken)[0]
			taken.add(vg.Rectangle{Min: vg.Point{X: x(c.from), Y: y(c.y) - 0.7}, Max: vg.Point{X: x(c.to), Y: y(c.y) + 0.7}})
			n := f.notes(can, x, y, taken)[0]
			if !strings.HasPrefix(n.words[0], "145 °F") {
				t.Errorf("%q", n.words)
			}
			if n.box.Min.X < x(c.from) || n.box.Max.X > x(c.to) {
				t.Errorf("%q goes from %.0f to %.0f pt, its step from %.0f to %.0f", n.words, n.box.Min.X, n.box.Max.X, x(c.from), x(c.to))
			}
			for _, p := range curve {
				if p.X > n.box.Min.X && p.X < n.box.Max.X && p.Y > n.box.Min.Y && p.Y < n.box.Max.Y {
					t.Errorf("%q lies on the curve", n.words)
					break
				}
			}
		})
	}
}
