package report

import (
	"math"
	"sort"

	"slowpoint/rules"
)

// The panels of the margin bars, mm.
const (
	barNames = 54.0
	barPanel = 47.0
	barRoom  = 22.0 // for the number behind the bar
	barWord  = frameWide - barNames - 2*barPanel
)

// marginBars draws one bar a limit, zero being the limit, with number and word at the end.
func (d *doc) marginBars(fs []*rules.Finding) {
	k := scaleOf(fs, func(f *rules.Finding) *float64 { return f.MarginK })
	t := scaleOf(fs, func(f *rules.Finding) *float64 { return f.MarginS })
	headed := -1
	for _, f := range fs {
		name := say("nameless")
		if f.Limit != nil {
			name = f.Limit.Name
		}
		if f.Level != "must" && f.Level != "" {
			name += " (" + f.Level + ")"
		}
		lines := wrap(d.clean(name), barNames-2, small, false)
		h := max(float64(len(lines))*height(small)+1.5, 6.5)
		d.need(h + 8*btof(headed < 0))
		if headed != d.pdf.page() {
			d.y += height(small)
			d.put(d.left, d.y-1, say("bars limit"), small, true)
			d.put(d.left+barNames, d.y-1, say("bars temperature", d.head.degree()), small, true)
			d.put(d.left+barNames+barPanel, d.y-1, say("bars time"), small, true)
			d.put(d.left+barNames+2*barPanel, d.y-1, say("bars verdict"), small, true)
			d.rule(d.left, d.left+frameWide, d.y+0.5, 1)
			d.y += 1
			headed = d.pdf.page()
		}
		for i, s := range lines {
			d.put(d.left, d.y+0.5+(float64(i+1)-0.2)*height(small), s, small, false)
		}
		word := verdictWord(f.Verdict)
		d.put(d.left+barNames+2*barPanel, d.y+h/2+1.2, word, small, true)
		d.bar(d.left+barNames, d.y, h, f.MarginK, k, f.Verdict, func(v float64) string {
			if d.head.Fahrenheit {
				return decimal(differenceF.Out(v), 1, down) + " °F"
			}
			return decimal(v, 1, down) + " °C"
		})
		d.bar(d.left+barNames+barPanel, d.y, h, f.MarginS, t, f.Verdict, func(v float64) string { return duration(v, down) })
		d.y += h
		d.rule(d.left, d.left+frameWide, d.y, 0.7)
	}
	d.y += 2
}

// scale is the least and the largest of the values, with zero between.
type scale struct{ lo, hi float64 }

// scaleOf takes the values as they are, but for those far beyond the others: their bars are cut.
func scaleOf(fs []*rules.Finding, of func(*rules.Finding) *float64) scale {
	var s scale
	var sizes []float64
	for _, f := range fs {
		if v := of(f); finite(v) {
			s.lo, s.hi = min(s.lo, *v), max(s.hi, *v)
			sizes = append(sizes, math.Abs(*v))
		}
	}
	if len(sizes) > 0 {
		sort.Float64s(sizes)
		most := 4 * sizes[len(sizes)/2]
		s.lo, s.hi = max(s.lo, -most), min(s.hi, most)
	}
	if s.lo == s.hi {
		s.hi = 1
	}
	return s
}

// bar draws one bar: full if met, hatched if not met, empty if it cannot be told.
func (d *doc) bar(x, y, h float64, v *float64, s scale, verdict rules.Verdict, write func(float64) string) {
	x++
	span := barPanel - barRoom - 2
	zero := x + span*(-s.lo)/(s.hi-s.lo)
	p := d.pdf
	p.line(pencil{pt: 1, color: black}, zero, y, zero, y+h)
	if !finite(v) {
		d.put(zero+1.5, y+h/2+1.2, "–", small, false)
		return
	}
	end := x + span*(min(max(*v, s.lo), s.hi)-s.lo)/(s.hi-s.lo)
	a, b := min(zero, end), max(zero, end)
	const tall = 3.6
	top := y + (h-tall)/2
	switch verdict {
	case rules.Met:
		p.box(blue, a, top, max(b-a, 0.3), tall)
	case rules.NotMet:
		edge := pencil{pt: 0.8, color: vermillion}
		p.frame(edge, a, top, max(b-a, 0.3), tall)
		for q := a - tall; q < b; q += 1.6 { // strokes rising to the right, kept within the bar
			x1, x2 := max(q, a), min(q+tall, b)
			if x2 > x1 {
				p.line(edge, x1, top+tall-(x1-q), x2, top+tall-(x2-q))
			}
		}
	default:
		p.frame(pencil{pt: 0.8, color: black}, a, top, max(b-a, 0.3), tall)
	}
	if *v > s.hi || *v < s.lo { // a gap near the end: it goes on
		cut := end - 2*math.Copysign(1, *v)
		p.line(pencil{pt: 2, color: white}, cut-0.8, top+tall+0.4, cut+0.8, top-0.4)
	}
	d.put(math.Max(b, zero)+1.2, y+h/2+1.2, write(*v), small, false)
}
