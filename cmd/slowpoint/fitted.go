package main

import (
	"fmt"
	"math"
	"strings"

	"slowpoint/model"
	"slowpoint/model/fit"
	"slowpoint/report"
)

// fitting is what is fitted to records.
type fitting struct{ film, conductivity bool }

// fittingOf understands the flag --fit.
func fittingOf(words string) (f fitting, err error) {
	for _, w := range strings.Split(words, ",") {
		switch strings.ToLower(strings.TrimSpace(w)) {
		case "":
		case "film":
			f.film = true
		case "conductivity":
			f.conductivity = true
		default:
			return f, fmt.Errorf("--fit %q: expected film, conductivity or both, as film,conductivity", words)
		}
	}
	return f, nil
}

// mostFitted is how many readings a fit uses, evenly through the record; more tell no more of a film.
const mostFitted = 400

// fitTo finds the film coefficients of the steps from first on, and the conductivity if asked, with which the prediction follows a record.
// on are the times of its readings on the clock of the steps, s, and c what it read, NaN where that is doubtful.
func (f fitting) fitTo(p *model.Product, steps []model.Step, first int, on, c []float64, accuracyK *float64, resolutionK float64, a *report.Against) {
	if !f.film && !f.conductivity {
		return
	}
	job := fit.Job{Product: *p, Steps: steps, Conductivity: f.conductivity}
	var names []string
	for i := first; i < len(steps) && f.film; i++ {
		if s := steps[i].Surface; !s.Fixed() && !s.Insulates() {
			job.Films, names = append(job.Films, []int{i}), append(names, steps[i].Name)
		}
	}
	rec := fit.Record{Place: a.Place, ResolutionK: resolutionK}
	if accuracyK != nil {
		rec.AccuracyK = *accuracyK
	}
	stride := max(1, (len(on)+mostFitted-1)/mostFitted)
	for i := 0; i < len(on); i += stride {
		if !math.IsNaN(c[i]) {
			rec.TimesS, rec.C = append(rec.TimesS, on[i]), append(rec.C, c[i])
		}
	}
	got, err := job.Fit(&rec)
	if err != nil {
		a.NotFitted = oneLine(err)
		return
	}
	a.FittedRMS = got.RMSK
	for i, v := range got.Films {
		one := report.Fitted{What: "film coefficient of " + names[i], Value: v.Value, Low: v.Low, High: v.High, Vague: v.Vague, Unit: "W/(m²·K)"}
		if w := steps[job.Films[i][0]].FilmW; w != nil {
			one.Typed = *w
		}
		a.Fitted = append(a.Fitted, one)
	}
	if v := got.Conductivity; v != nil {
		a.Fitted = append(a.Fitted, report.Fitted{What: "conductivity, as a factor of that of the plan,", Value: v.Value, Low: v.Low, High: v.High, Vague: v.Vague, Typed: 1})
	}
}
