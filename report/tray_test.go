package report

import (
	"math"
	"testing"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

func ptr[T any](v T) *T { return &v }

// trayHead is the head of an invented plan with one fault, one warning and a product that could not be calculated.
func trayHead() *Head {
	fault := cell.Error{At: cell.Ref{Sheet: "Products", Row: 7, Col: 3}, Field: "Thickness", Typed: "-40", Msg: "a length must be more than 0", Hint: "type the thickness in mm"}
	return &Head{
		Version: "0.1.0", Date: time.Date(2026, 1, 31, 0, 0, 0, 0, time.UTC),
		Plan: "trays.xlsx", SHA256: "5f2c9a", EveryS: 1800, Paper: "A4", Products: 1, MostPoints: 2,
		Items: []Item{{At: cell.Ref{Sheet: "Plan", Row: 3, Col: 2}, Item: "Site", Value: "Test kitchen <1> & annexe"},
			{At: cell.Ref{Sheet: "Plan", Row: 4, Col: 2}, Item: "Edition", Value: "3"}},
		Problems: cell.Errors{fault, {At: cell.Ref{Sheet: "Limits", Row: 4, Col: 20}, Level: cell.Warning, Field: "Clause",
			Msg: "no clause is given", Hint: "type the clause as the code prints it"}},
		NotCalculated: []NotCalculated{{At: cell.Ref{Sheet: "Products", Row: 7}, Product: "Mash", Because: cell.Errors{fault}}},
		Known:         []KnownAnswer{{Name: "slab, film", Source: "an invented source", Expected: 61.25, Got: 61.2500004, Allowance: 0.01, Unit: "°C", OK: true}},
	}
}

// trayProduct is an invented record of a tray: cooked for 1 h, chilled for 1.5 h; the figures are not measurements.
func trayProduct(t testing.TB, name string) *Product {
	cook := &model.Step{Name: "Oven", Stage: model.Cook, DurationS: 3600,
		Exposure:  model.Exposure{Surface: model.Film, Medium: model.Course{TimesS: []float64{0}, C: []float64{160}}, FilmW: ptr(25.)},
		Equipment: "oven 2", Load: "12 trays"}
	cool := &model.Step{Name: "Chiller", Stage: model.Cool, DurationS: 5400, UntilC: ptr(3.),
		Exposure: model.Exposure{Surface: model.MovingAir, Measured: true, AirMS: ptr(4.),
			Medium: model.Course{Name: "logged air", TimesS: []float64{0, 5400}, C: []float64{6, 1.5}}}}
	props := model.Properties{KWmK: 0.52, RhoKgM3: 1045, CJkgK: 3620}
	spans := []model.Span{
		{Step: cook, StartS: 0, EndS: 3600, PropsAtC: 55, Props: props, Films: []model.FilmUsed{{FilmW: 25, TotalW: 24.4, Typed: true, Source: "typed"}}},
		{Step: cool, StartS: 3600, EndS: 9000, Reached: ptr(false), PropsAtC: 40, Props: props, Films: []model.FilmUsed{
			{Face: model.Top, FilmW: 21.3, TotalW: 21.3, Source: "an invented correlation", Caution: "the film coefficient is assumed"},
			{Face: model.Underside, FilmW: math.Inf(1), TotalW: math.Inf(1)}}},
	}
	centre := model.Trace{Point: model.Point{Name: "centre"}, TimesS: []float64{0, 1800, 3600, 5400, 7200, 9000}, C: []float64{8, 41.123456, 76.5, 63, 31.25, 12.0000001}}
	probe := model.Trace{Point: model.Point{Name: "probe", Place: model.Place{UpM: -0.014, AcrossM: 0.0325}},
		TimesS: []float64{0, 3600, 9000}, C: []float64{8, 82, 5}}
	medium := model.Trace{TimesS: []float64{0, 3600, 3601, 9000}, C: []float64{160, 160, 6, 1.5}}
	h, err := model.NewRecord(spans, []model.Trace{centre, probe}, &medium)
	if err != nil {
		t.Fatal(err)
	}
	h.ErrorK = 0.01
	p := &Product{
		Product: model.Product{At: cell.Ref{Sheet: "Products", Row: 6}, Name: name, Shape: model.Slab, Size: model.Size{ThicknessM: 0.06}, StartC: 8,
			Food: &model.Material{Name: "Stew", Source: "an invented source", Composed: true, Composition: "water 72 %, protein 15 %, fat 8 %"}},
		Steps: []model.Step{*cook, *cool}, Family: "stews", RecipeVersion: "v2", Batch: "B17", Process: "Cook-chill", Note: "lid on",
		Readings: []cell.Reading{{At: cell.Ref{Sheet: "Products", Row: 6, Col: 6}, Column: "Thickness", Typed: "60 mm", Used: "0.06 m"},
			{At: cell.Ref{Sheet: "Steps", Row: 3, Col: 9}, Column: "Temperature is", Used: "set-point", Why: "blank stands for set-point"}},
		History: h,
	}
	s := &p.Samples
	s.TimesS = []float64{0, 1800, 3600, 5400, 7200, 9000}
	s.Coldest = []float64{8, 41.123456, 76.5, 20, 11, 5}
	s.Hottest = []float64{8, 90, 99.99999999, 63, 31.25, 12.0000001}
	s.Mean = []float64{8, 60, 85, 44, 22, math.NaN()}
	s.ColdestAt = []model.Place{{}, {UpM: -0.001234567}, {UpM: -0.002}, {UpM: 0.03}, {UpM: 0.03}, {UpM: 0.03}}
	s.HottestAt = []model.Place{{}, {UpM: 0.03}, {UpM: 0.03}, {UpM: -0.004}, {}, {}}
	s.Points = [][]float64{make([]float64, 6), make([]float64, 6)}
	for i := range h.Points {
		h.Course(h.Points[i].Place, s.TimesS, s.Points[i])
	}
	p.Judgement = trayJudgement()
	return p
}

func trayJudgement() rules.Judgement {
	hold := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 3, Col: 1}, Name: "Core 70", Kind: &rules.Kind{Name: "hold", Unit: "min"}, Stages: []*model.Stage{model.Cook, model.Rest},
		FromC: ptr(70.), TimeS: ptr(120.), Counting: rules.Continuous, Code: "Invented code", Clause: "2-10", Edition: "2020", IssuedBy: "an authority", ConfirmedBy: "A. Person", ConfirmedOn: "2026-01-05",
		Typed: map[string]string{"From": "70 °C", "Time": "2 min"}}
	cool := &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 4, Col: 1}, Name: "Chill 90", Kind: &rules.Kind{Name: "cool", Unit: "min"}, Stages: []*model.Stage{model.Cool},
		FromC: ptr(130/1.8 - 32/1.8), ToC: ptr(3.), TimeS: ptr(5400.), Clock: rules.Clock{Crossing: true}, Group: "Chilling", Code: "=HYPERLINK(\"x\")",
		Typed: map[string]string{"From": "130 °F", "To": "3 °C", "Time": "90 min"}}
	return rules.Judgement{Verdict: rules.NotMet, Findings: []rules.Finding{
		{Limit: hold, Level: "must", Verdict: rules.Met, Value: ptr(14.0987654), Required: ptr(2.), Unit: "min", MarginK: ptr(6.48765), MarginS: ptr(725.92592),
			AtS: ptr(4380.5), Place: &model.Place{UpM: -0.002}, PlaceName: "2.0 mm below the centre", ClockStartS: ptr(3242.), ClockEndS: ptr(4465.),
			Cells: []cell.Ref{hold.At, {Sheet: "Steps", Row: 3}}, Why: "every point is held for 2 min or more."},
		{Limit: cool, Level: "must", Verdict: rules.NotMet, Required: ptr(90.), Unit: "min", MarginK: ptr(-9.0000001), PlaceName: "centre", Place: &model.Place{},
			AtS: ptr(9000.), ClockStartS: ptr(5910.), Cells: []cell.Ref{cool.At}, Why: "the record ends before the food reaches 3 °C.",
			Notes: []string{"rose above From again at 1 h 05 min"}, Run: rules.LowConductivity},
	}, Groups: []rules.GroupFinding{{Group: "Chilling", AnyOf: true, Verdict: rules.NotMet, DecidedBy: "Chill 90"}}}
}
