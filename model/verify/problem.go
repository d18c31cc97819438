package verify

import (
	"errors"
	"fmt"
	"math"

	"slowpoint/model"
)

// Problem is a product with its chain of steps.
type Problem struct {
	Name    string
	Product model.Product
	Steps   []model.Step
}

// held stands for a film so good that the surface has the temperature of the medium.
var held = math.Inf(1)

// exposure is a film h, W/(m²·K), to a medium, °C; h = 0 is insulated, held imposes the surface temperature.
func exposure(h, mediumC float64) model.Exposure {
	switch {
	case h == 0:
		return model.Exposure{Surface: model.Insulated}
	case math.IsInf(h, 1):
		return model.Exposure{Surface: model.Held, Medium: constant(mediumC)}
	}
	return model.Exposure{Surface: model.Film, FilmW: &h, Medium: constant(mediumC)}
}

func constant(c float64) model.Course { return model.Course{TimesS: []float64{0}, C: []float64{c}} }

// step lasts for a time, s, in surroundings that are the same on all faces but those named.
func step(name string, durationS float64, e model.Exposure, faces ...model.FaceExposure) model.Step {
	stage := model.Cool
	if len(e.Medium.C) > 0 && e.Medium.C[0] >= 60 {
		stage = model.Cook
	}
	return model.Step{Name: name, Stage: stage, DurationS: durationS, Exposure: e, Faces: faces}
}

// material is a food of constant properties that are the input of a case. Freezing is none of the case's business: textbooks that chill
// below a food's freezing point leave it out, so it is put out of reach; so is boiling.
func material(p model.Properties) *model.Material {
	neverC := -100.0
	return &model.Material{Name: "test input", Source: "input of the case", Props: func(float64) model.Properties { return p }, FreezingC: &neverC, Waterless: true}
}

// history solves the problem.
func (p Problem) history() (*model.History, error) {
	return model.Solve(p.Product, p.Steps, model.Options{})
}

// at asks for the temperature, °C, of a place at a time, s.
func (p Problem) at(place model.Place, t float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		return h.At(place, t), nil
	}
}

// sample asks for something of the samples at a time, s.
func (p Problem) sample(t float64, what func(s *model.Samples, i int) float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		s := h.Sample(t)
		for i := range s.TimesS {
			if math.Abs(s.TimesS[i]-t) < 1e-6 {
				return what(&s, i), nil
			}
		}
		return 0, fmt.Errorf("%s: no sample at %g s", p.Name, t)
	}
}

func mean(s *model.Samples, i int) float64      { return s.Mean[i] }
func coldest(s *model.Samples, i int) float64   { return s.Coldest[i] }
func hottest(s *model.Samples, i int) float64   { return s.Hottest[i] }
func coldestUp(s *model.Samples, i int) float64 { return 1000 * s.ColdestAt[i].UpM }

// passes asks when, in s, a place passes a temperature for good: it is on the other side of it at the end of the chain and stays there.
func (p Problem) passes(place model.Place, c float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		return passing(h, place, c)
	}
}

var errNotPassed = errors.New("is not passed")

// passing finds when a place of a history passes a temperature for good.
func passing(h *model.History, place model.Place, c float64) (float64, error) {
	return passingSince(h, place, c, 0)
}

// passingSince looks at what comes after an instant, s.
func passingSince(h *model.History, place model.Place, c, since float64) (float64, error) {
	lo, hi := since, h.EndS()
	start, end := h.At(place, lo) > c, h.At(place, hi) > c
	if start == end {
		return 0, fmt.Errorf("%g °C: %w", c, errNotPassed)
	}
	for hi-lo > 1e-3 {
		if mid := (lo + hi) / 2; h.At(place, mid) > c == start {
			lo = mid
		} else {
			hi = mid
		}
	}
	return hi, nil
}

// in turns an answer in s into one in longer units.
func in(seconds float64, got func() (float64, error)) func() (float64, error) {
	return func() (float64, error) {
		t, err := got()
		return t / seconds, err
	}
}

// depth asks how far below the upper face of a slab a temperature, °C, lies at the end, m; it falls from there to the middle or rises.
func (p Problem) depth(c float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := p.history()
		if err != nil {
			return 0, err
		}
		half, end := p.Product.Size.ThicknessM/2, h.EndS()
		lo, hi := 0.0, half
		above := h.At(model.Place{UpM: half}, end) > c
		for hi-lo > 1e-7 {
			if mid := (lo + hi) / 2; h.At(model.Place{UpM: half - mid}, end) > c == above {
				lo = mid
			} else {
				hi = mid
			}
		}
		return hi, nil
	}
}
