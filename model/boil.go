package model

import (
	"fmt"
	"math"
	"slices"

	"slowpoint/model/cell"
)

// boilsK is by how much the coldest place of a food may pass the boiling point of water, K: dissolved salt and sugar raise it by a few
// (common practice, no source). Beyond it the water inside boils off, which conduction does not describe.
const boilsK = 5

// WhileItBoils gives a history with every temperature, °C, no higher than food gets that holds water and boils it off, and nil where none is higher, or
// a food holds none. It is for limits that ask for heat.
func (h *History) WhileItBoils() *History {
	if !h.mayBoil() {
		return nil
	}
	most := boilsAtMost(h.Spans)
	scan := h.Scan()
	mosts := make([]float64, len(scan.TimesS))
	for k, t := range scan.TimesS {
		mosts[k] = most(t)
	}
	passes := func(row []float64) bool {
		for k, c := range row {
			if c > mosts[k] {
				return true
			}
		}
		return false
	}
	if !slices.ContainsFunc(scan.C, passes) {
		return nil
	}
	capped := &Scan{TimesS: scan.TimesS, Spots: scan.Spots}
	for _, row := range scan.C {
		row = slices.Clone(row)
		for k := range row {
			row[k] = min(row[k], mosts[k])
		}
		capped.C = append(capped.C, row)
	}
	g := *h
	g.scan = capped
	g.Course = func(p Place, times, out []float64) {
		h.Course(p, times, out)
		for i, t := range times {
			out[i] = min(out[i], most(t))
		}
	}
	g.At = func(p Place, t float64) float64 { return min(h.At(p, t), most(t)) }
	return &g
}

// mayBoil tells whether a history is a calculated one of foods that all hold water.
func (h *History) mayBoil() bool {
	return !h.Recorded && h.Product != nil && !slices.ContainsFunc(h.Product.Foods(), func(f *Material) bool { return f.Waterless })
}

// BoilsAtMostC is the temperature, °C, below which WhileItBoils leaves every temperature as it is: BoilsAtMostC at the highest altitude of the steps,
// and without end where the history counts as it stands.
func (h *History) BoilsAtMostC() float64 {
	if !h.mayBoil() {
		return math.Inf(1)
	}
	highestM := math.Inf(-1)
	for i := range h.Spans {
		highestM = max(highestM, h.Spans[i].Step.AltitudeM)
	}
	return BoilsAtMostC(highestM)
}

// boilsAtMost is BoilsAtMostC over the steps, which mostly are at one altitude.
func boilsAtMost(spans []Span) func(t float64) float64 {
	inStep := make([]float64, len(spans))
	for i := range spans {
		if i > 0 && spans[i].Step.AltitudeM == spans[i-1].Step.AltitudeM {
			inStep[i] = inStep[i-1]
		} else {
			inStep[i] = BoilsAtMostC(spans[i].Step.AltitudeM)
		}
	}
	return func(t float64) float64 { return inStep[spanAt(spans, t)] }
}

// BoilsAtMostC is how hot food that holds water gets at most, °C, at an altitude, m.
func BoilsAtMostC(altitudeM float64) float64 { return boilingC(altitudeM) + boilsK }

// boiling warns of a food that would be hotter than boiling water throughout. It looks at the ends of the steps, since the coldest place
// warms all the time in surroundings that stay as they are, and between them where the surroundings change.
func (s *solver) boiling(h *History) {
	for _, f := range s.product.Foods() {
		if f.Waterless {
			return
		}
	}
	for i := range h.Spans {
		sp := &h.Spans[i]
		limit := BoilsAtMostC(sp.Step.AltitudeM)
		if h.hull[i][1] <= limit {
			continue
		}
		looks := 1
		if len(s.chain[i].knots) > 1 {
			looks = 16
		}
		for k := 1; k <= looks; k++ {
			t := sp.StartS + (sp.EndS-sp.StartS)*float64(k)/float64(looks)
			if lo, _ := h.body.range_(s.main.at(t)); lo <= limit {
				continue
			}
			e := s.hotter(i, limit)
			if low, _ := h.body.extremes(s.main.at(t)); e == nil || low.c <= limit {
				continue
			}
			h.Boils = true
			h.Warnings.Add(s.boilsOver(h, e, sp, t, limit))
			return
		}
	}
}

// hotter gives the surroundings above a temperature, °C, that are the last before the end of a step and the hottest of theirs; nil if
// there are none, so that the food only started so hot.
func (s *solver) hotter(step int, limit float64) *Exposure {
	for i := step; i >= 0; i-- {
		var hottest *Exposure
		most := limit
		for _, e := range exposures(s.product.Shape, &s.steps[i]) {
			if !e.Surface.NoMedium && e.mostC() > most {
				hottest, most = e, e.mostC()
			}
		}
		if hottest != nil {
			return hottest
		}
	}
	return nil
}

// mostC is the highest temperature of the surroundings, °C: of the medium or of the walls that the food sees.
func (e *Exposure) mostC() float64 {
	if e.RadiatingC != nil {
		return max(e.Medium.mostC(), *e.RadiatingC)
	}
	return e.Medium.mostC()
}

// mostC is the highest temperature of a course, °C.
func (m *Course) mostC() float64 {
	most := math.Inf(-1)
	for _, c := range m.C {
		most = max(most, c)
	}
	return most
}

// boilsOver words the warning: t is an instant in the span at which all of the food is above limit, °C.
func (s *solver) boilsOver(h *History, e *Exposure, sp *Span, t, limit float64) cell.Error {
	before, after := sp.StartS, t
	for after-before > 1 {
		mid := (before + after) / 2
		if low, _ := h.body.extremes(s.main.at(mid)); low.c > limit {
			after = mid
		} else {
			before = mid
		}
	}
	low, _ := h.body.extremes(s.main.at(t))
	field, typed := "Temperature", fmt.Sprintf("%g °C", e.Medium.mostC())
	switch {
	case e.RadiatingC != nil && *e.RadiatingC > e.Medium.mostC():
		field, typed = "Radiating temperature", fmt.Sprintf("%g °C", *e.RadiatingC)
	case e.Medium.Name != "":
		field, typed = "Course", e.Medium.Name
	}
	altitude := sp.Step.AltitudeM
	place := s.product.Where(h.body.place(low.x))
	msg := fmt.Sprintf("would heat %s beyond boiling throughout: even its coldest place (%s) passes %.1f °C %.0f min into the step %s and is at %.1f °C %.0f min into it, but water boils at %.1f °C at %g m above the sea, and food that holds water does not get hotter inside while it boils off; conduction without evaporation does not describe that, so do not rely on what is calculated from there on",
		s.product.Name, place, limit, (after-sp.StartS)/60, sp.Step.Name, low.c, (t-sp.StartS)/60, boilingC(altitude), altitude)
	hint := "look at the temperature and its unit (°F typed in a °C column?), or shorten the step"
	return cell.Error{At: e.At, Level: cell.Warning, Field: field, Typed: typed, Msg: msg, Hint: hint}
}
