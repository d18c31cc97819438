package model

import (
	"fmt"
	"math"
	"slices"
	"sort"
)

// Trace is a course of temperatures at one place: straight segments between readings.
type Trace struct {
	Point
	TimesS []float64 // rising strictly, from the start of the chain
	C      []float64 // °C, as long as TimesS
}

// NewRecord makes a History of measured courses: only the places of the traces exist, with straight segments between
// the readings and the first and last reading kept outside them. medium may be nil.
// It fails where times do not rise, a value is not finite, or lengths differ.
func NewRecord(spans []Span, traces []Trace, medium *Trace) (*History, error) {
	if len(traces) == 0 {
		return nil, fmt.Errorf("a record needs at least one trace")
	}
	all := append([]Trace(nil), traces...)
	if medium != nil {
		all = append(all, *medium)
	}
	for _, tr := range all {
		if len(tr.TimesS) == 0 || len(tr.TimesS) != len(tr.C) {
			return nil, fmt.Errorf("%s: %d times for %d readings", tr.Name, len(tr.TimesS), len(tr.C))
		}
		for i := range tr.TimesS {
			if math.IsNaN(tr.C[i]) || math.IsInf(tr.C[i], 0) || i > 0 && !(tr.TimesS[i] > tr.TimesS[i-1]) {
				return nil, fmt.Errorf("%s: reading %d: time %g s, %g °C", tr.Name, i+1, tr.TimesS[i], tr.C[i])
			}
		}
	}
	traces = all[:len(traces)]
	h := &History{Spans: spans, Recorded: true, Method: "measured course, straight segments between readings"}
	scan := &Scan{}
	for _, tr := range traces {
		h.Points = append(h.Points, tr.Point)
		scan.Spots = append(scan.Spots, Spot{Place: tr.Place, Surface: tr.Name == "surface", Axes: Axes{tr.Place.UpM, tr.Place.AcrossM, tr.Place.AlongM}})
		scan.TimesS = append(scan.TimesS, tr.TimesS...)
	}
	for _, sp := range spans {
		scan.TimesS = append(scan.TimesS, sp.StartS, sp.EndS)
	}
	scan.TimesS = rising(scan.TimesS)
	for _, tr := range traces {
		c := make([]float64, len(scan.TimesS))
		for i, t := range scan.TimesS {
			c[i] = tr.At(t)
		}
		scan.C = append(scan.C, c)
	}
	h.scan = scan
	find := func(p Place) *Trace {
		best, near := 0, math.Inf(1)
		for i, tr := range traces {
			d := math.Hypot(math.Hypot(tr.UpM-p.UpM, tr.AcrossM-p.AcrossM), tr.AlongM-p.AlongM)
			if d < near {
				best, near = i, d
			}
		}
		return &traces[best]
	}
	h.At = func(p Place, t float64) float64 { return find(p).At(t) }
	h.Course = func(p Place, times, out []float64) {
		tr := find(p)
		for i, t := range times {
			out[i] = tr.At(t)
		}
	}
	h.MediumC = func(t float64) float64 {
		if medium == nil {
			return math.NaN()
		}
		return medium.At(t)
	}
	h.HumidityPc = func(t float64) float64 { return humidityAt(spans, t) }
	return h, nil
}

// At is the straight-line value of a trace at t, s; before its first reading the first, after its last one the last.
func (tr *Trace) At(t float64) float64 {
	return lineAt(tr.TimesS, tr.C, t)
}

// rising sorts times and drops repeats.
func rising(t []float64) []float64 {
	if !slices.IsSorted(t) {
		slices.Sort(t)
	}
	out := t[:0]
	for i, x := range t {
		if i == 0 || x > out[len(out)-1] {
			out = append(out, x)
		}
	}
	return out
}

// spanAt finds the span that holds t; at the instant of a change the one before it.
func spanAt(spans []Span, t float64) int {
	for i := range spans {
		if t <= spans[i].EndS {
			return i
		}
	}
	return len(spans) - 1
}

// humidityAt is the stated relative humidity (%) at t; NaN where none was stated.
func humidityAt(spans []Span, t float64) float64 {
	i := spanAt(spans, t)
	if i < 0 || spans[i].Step == nil {
		return math.NaN()
	}
	e := &spans[i].Step.Exposure
	switch {
	case e.Medium.RH != nil:
		return lineAt(e.Medium.TimesS, e.Medium.RH, t-spans[i].StartS)
	case e.RH != nil:
		return *e.RH
	}
	return math.NaN()
}

// lineAt is the straight-line value between points; the ends are kept outside.
func lineAt(x, y []float64, at float64) float64 {
	c := cursor{x: x, y: y}
	return c.to(at)
}

// cursor reads a course of straight lines at times that mostly rise.
type cursor struct {
	x, y []float64
	i    int // the last point found at or after a time
}

// to is the straight-line value at a time; the ends are kept outside.
func (c *cursor) to(at float64) float64 {
	n := len(c.x)
	here := func(i int) bool { return (i == 0 || c.x[i-1] < at) && (i == n || at <= c.x[i]) }
	if !here(c.i) {
		if c.i < n && here(c.i+1) {
			c.i++
		} else {
			c.i = sort.SearchFloat64s(c.x, at)
		}
	}
	i := c.i
	switch {
	case i == 0:
		return c.y[0]
	case i == n:
		return c.y[i-1]
	}
	f := (at - c.x[i-1]) / (c.x[i] - c.x[i-1])
	return c.y[i-1] + f*(c.y[i]-c.y[i-1])
}

// back is the value at a time before from on the straight line that begins there.
func (c *cursor) back(from, at float64) float64 {
	switch len(c.x) {
	case 0:
		if len(c.y) == 0 {
			return math.NaN()
		}
		return c.y[0]
	case 1:
		return c.y[0]
	}
	here := c.to(from)
	i := sort.SearchFloat64s(c.x, math.Nextafter(from, math.Inf(1)))
	if i == 0 || i == len(c.x) {
		return here
	}
	return here + (c.y[i]-c.y[i-1])/(c.x[i]-c.x[i-1])*(at-from)
}
