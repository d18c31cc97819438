package report

import (
	"io"
	"math"
	"strings"

	"slowpoint/rules"
)

// WriteSizesPDF writes searches as a document: the answer of each, what must be read with it, and how the room of each limit goes with the value.
func WriteSizesPDF(w io.Writer, h *Head, list []*Sizing) (err error) {
	defer caught(&err)
	d := newDoc(h, say("sizes title"))
	d.title, d.note = say("sizes title"), say("footer not measured")
	d.page()
	d.heading(say("sizes title"), 0, 20)
	d.text(strings.Join(CautionText()[:2], " "))
	d.pairs([][2]string{{say("key file"), h.Plan}, {say("key digest"), h.SHA256}, {say("key version"), h.Version}, {say("key date"), h.day()}}, 45)
	for _, s := range list {
		d.sizing(s)
	}
	d.heading(say("standing title"), 1, 30)
	for _, s := range CautionText() {
		d.item("•", s, body)
	}
	return d.finish(w)
}

// sizing is one search.
func (d *doc) sizing(s *Sizing) {
	h := d.head
	d.heading(say("sizes one", s.Product, s.What), 0, 100)
	d.para(capital(s.headline()), style{size: body, bold: true, after: 1})
	for _, t := range s.sentences(h) {
		d.item("•", t, body)
	}
	if f := s.chart(h); f != nil {
		d.need(84)
		f.draw(d.canvas(d.left, d.y, frameWide, 80))
		d.y += 82
		d.text(say("sizes chart", s.What))
	}
	var rows [][]string
	for _, p := range s.Curve {
		name, room := "", p.room(h)
		if f := p.decides(); f != nil {
			name = f.Limit.Name
		}
		if p.Refused != "" {
			room = p.Refused
		}
		rows = append(rows, []string{p.Words, p.verdict(), name, room})
	}
	d.table([]col{{title: s.What, wide: 34, bold: true}, {title: say("col verdict"), wide: 28}, {title: say("col deciding"), wide: 60}, {title: say("col margin"), wide: frameWide - 122}}, rows, small)
}

// chart draws the room of each must limit over the values, in the limit's own temperature; nil where there is nothing to draw.
func (s *Sizing) chart(h *Head) *chart {
	if len(s.Curve) < 2 {
		return nil
	}
	const most = 6 // lines that can be told apart
	var lines []line
	for _, l := range s.limits() {
		ln := line{name: l.Limit}
		for _, p := range s.Curve {
			ln.x = append(ln.x, p.Value)
			y := math.NaN()
			for i := range p.Findings {
				f := &p.Findings[i]
				if f.Level == "must" && f.Limit.Name == l.Limit && f.Verdict != rules.NotApplicable && p.Refused == "" && finite(f.MarginK) && lackingOnly(f, f.MarginK) != nil {
					y = *f.MarginK * h.perK()
				}
			}
			ln.y = append(ln.y, y)
		}
		if len(lines) < most {
			lines = append(lines, ln)
		}
	}
	lo, hi := 0.0, 0.0
	some := false
	for _, l := range lines {
		for _, v := range l.y {
			if !math.IsNaN(v) {
				lo, hi, some = min(lo, v), max(hi, v), true
			}
		}
	}
	if !some {
		return nil
	}
	x0, x1 := s.Curve[0].Value, s.Curve[len(s.Curve)-1].Value
	f := &chart{xName: say("axis value", s.What, s.Unit), yName: say("axis room", h.degree()), x0: x0, x1: x1, size: small, ends: 120, lines: lines}
	f.y0, f.y1 = lo-0.06*(hi-lo)-0.5, hi+0.08*(hi-lo)+0.5
	f.yTicks = ticksTo(f.y0, f.y1, []float64{0.5, 1, 2, 5, 10, 20, 25, 50, 100}, 8)
	f.xTicks = marks(ticksTo(x0, x1, []float64{0.5, 1, 2, 5, 10, 20, 25, 50, 100, 200, 500}, 9))
	f.levels = []level{{words: []string{"0 " + h.degree(), say("sizes limit")}, y: 0, from: x0, to: x1}}
	if a := s.Answer; a != nil && len(s.Fixed) == 0 {
		if p := a.decides(); p != nil && finite(p.MarginK) && lackingOnly(p, p.MarginK) != nil {
			f.spots = []spot{{words: a.Words, x: a.Value, y: *p.MarginK * h.perK()}}
		}
	}
	return f
}
