// Package fit finds the film coefficients, and on request the conductivity, with which a prediction comes nearest to a record of one place.
//
// A fitted value holds for the equipment, the load and the place of the record alone. It explains a record; it never makes a record that
// missed a limit meet it. Units as in package model.
package fit

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"slowpoint/model"
)

// Confidence is that of the intervals.
const Confidence = 0.95

// Limits of what is fitted: outside them a value has no meaning, and the record does not tell it.
const (
	leastFilmW, mostFilmW     = 0.5, 20000.0
	leastFactor, mostFactor   = 0.3, 3.0 // of the conductivity
	assumedFilmW              = 15.0     // to start from where none is typed, W/(m²·K)
	mostWide                  = 3.0      // highest over lowest of an interval beyond which the record does not tell the value
	difference                = 0.02     // of the logarithm, for the derivatives
	settled                   = 2e-4     // change of the logarithm at which the search ends
	mostRounds, mostShortened = 40, 12
)

// Record is what a probe showed at one place. Times rise, s from the start of the chain; C is as long, °C.
type Record struct {
	Place       model.Place
	TimesS, C   []float64
	ResolutionK float64 // of the readings; 0: as typed
	AccuracyK   float64 // of the sensor, either way, the same for all readings; 0: not known
}

// Job is what is to be fitted.
type Job struct {
	Product model.Product
	Steps   []model.Step
	// Films are groups of steps, by index, that share one film coefficient: that of their own row, not of faces with rows of their own.
	Films        [][]int
	Conductivity bool // fit a factor of the conductivity too
}

// Interval is a fitted value with its interval of 95 %.
type Interval struct {
	Value, Low, High float64
	// Vague: the record does not tell it. The interval is wider than three to one, or the search ran to the end of what has a meaning.
	Vague bool
}

// Fitted is the outcome.
type Fitted struct {
	Films        []Interval // W/(m²·K), as Job.Films
	Conductivity *Interval  // factor of the conductivity; nil if it was not asked for
	RMSK         float64    // root mean square of prediction minus record
	Readings     int        // used
	// Correlation is that of neighbouring residuals, 0 to below 1: where the model leaves a trend, readings count for fewer.
	Correlation float64
}

// Fit finds the values by least squares in their logarithms (Gauss and Newton's method, damped after Levenberg and Marquardt). The interval
// is that of Student's t on the linearised model, with the readings counted as the correlation of neighbouring residuals lets them count,
// no scatter below that of the rounding of the readings, and widened by what the sensor's accuracy can shift the value.
//
// It fails where there is nothing to fit, with fewer than five readings more than values, or where the product cannot be calculated.
func (j *Job) Fit(r *Record) (*Fitted, error) {
	f := &search{job: j, record: r}
	if err := f.prepare(); err != nil {
		return nil, err
	}
	if err := f.descend(); err != nil {
		return nil, err
	}
	return f.outcome()
}

type search struct {
	job    *Job
	record *Record
	x      []float64 // logarithms of films, then of the factor of the conductivity
	low    []float64 // their least
	high   []float64
	times  []float64
	res    []float64 // prediction minus record at x
}

func (f *search) prepare() error {
	j, r := f.job, f.record
	if len(r.TimesS) != len(r.C) {
		return fmt.Errorf("%d times and %d readings", len(r.TimesS), len(r.C))
	}
	if !slices.IsSorted(r.TimesS) {
		return errors.New("the times of the readings do not rise")
	}
	for _, group := range j.Films {
		film := assumedFilmW
		for _, i := range group {
			if i < 0 || i >= len(j.Steps) {
				return fmt.Errorf("there is no step %d", i+1)
			}
			if s := j.Steps[i].Surface; s.Fixed() || s.Insulates() {
				return fmt.Errorf("the step %q has the surroundings %q, which have no film coefficient", j.Steps[i].Name, s.Name)
			}
			if w := j.Steps[i].FilmW; w != nil {
				film = *w
			}
		}
		f.add(film, leastFilmW, mostFilmW)
	}
	if j.Conductivity {
		f.add(1, leastFactor, mostFactor)
	}
	if len(f.x) == 0 {
		return errors.New("nothing is to be fitted")
	}
	if len(r.C) < len(f.x)+5 {
		return fmt.Errorf("%d readings are too few to fit %d values: at least %d", len(r.C), len(f.x), len(f.x)+5)
	}
	f.times = r.TimesS
	return nil
}

func (f *search) add(start, least, most float64) {
	f.x = append(f.x, math.Log(min(max(start, least), most)))
	f.low, f.high = append(f.low, math.Log(least)), append(f.high, math.Log(most))
}

// residuals gives prediction minus record at x.
func (f *search) residuals(x []float64) ([]float64, error) {
	j := f.job
	steps := slices.Clone(j.Steps)
	for g, group := range j.Films {
		for _, i := range group {
			film := math.Exp(x[g])
			steps[i].FilmW = &film
		}
	}
	var o model.Options
	if j.Conductivity {
		o.ConductivityFactor = math.Exp(x[len(x)-1])
	}
	h, err := model.Solve(j.Product, steps, o)
	if err != nil {
		return nil, err
	}
	out := make([]float64, len(f.times))
	h.Course(f.record.Place, f.times, out)
	for i := range out {
		out[i] -= f.record.C[i]
	}
	return out, nil
}

// jacobian gives the derivatives of the residuals by the logarithms, by central differences that stay within the limits.
func (f *search) jacobian(x []float64) (*mat.Dense, error) {
	jac := mat.NewDense(len(f.times), len(x), nil)
	for p := range x {
		at := slices.Clone(x)
		up, down := min(x[p]+difference, f.high[p]), max(x[p]-difference, f.low[p])
		at[p] = up
		above, err := f.residuals(at)
		if err != nil {
			return nil, err
		}
		at[p] = down
		below, err := f.residuals(at)
		if err != nil {
			return nil, err
		}
		for i := range above {
			jac.Set(i, p, (above[i]-below[i])/(up-down))
		}
	}
	return jac, nil
}

// descend brings x to the least sum of squares.
func (f *search) descend() error {
	var err error
	if f.res, err = f.residuals(f.x); err != nil {
		return err
	}
	damping := 1e-3
	for range mostRounds {
		jac, err := f.jacobian(f.x)
		if err != nil {
			return err
		}
		moved := 0.0
		for range mostShortened {
			next := f.next(jac, damping)
			res, err := f.residuals(next)
			if err != nil {
				return err
			}
			if squares(res) <= squares(f.res) {
				for p := range next {
					moved = max(moved, math.Abs(next[p]-f.x[p]))
				}
				f.x, f.res, damping = next, res, max(damping/10, 1e-9)
				break
			}
			damping *= 10
		}
		if moved < settled {
			return nil
		}
	}
	return nil
}

// next is the step of Levenberg and Marquardt from x, kept within the limits.
func (f *search) next(jac *mat.Dense, damping float64) []float64 {
	n := len(f.x)
	a, b := normal(jac), make([]float64, n)
	for p := range b {
		for i, r := range f.res {
			b[p] -= jac.At(i, p) * r
		}
		a.SetSym(p, p, a.At(p, p)*(1+damping)+1e-12)
	}
	var chol mat.Cholesky
	out := slices.Clone(f.x)
	if !chol.Factorize(a) {
		return out
	}
	var d mat.VecDense
	if chol.SolveVecTo(&d, mat.NewVecDense(n, b)) != nil {
		return out
	}
	for p := range out {
		out[p] = min(max(out[p]+min(max(d.AtVec(p), -1), 1), f.low[p]), f.high[p])
	}
	return out
}

// outcome gives the values with their intervals.
func (f *search) outcome() (*Fitted, error) {
	n, p := len(f.res), len(f.x)
	out := &Fitted{RMSK: math.Sqrt(squares(f.res) / float64(n)), Readings: n, Correlation: correlation(f.res)}
	jac, err := f.jacobian(f.x)
	if err != nil {
		return nil, err
	}
	count := max(float64(n)*(1-out.Correlation)/(1+out.Correlation), float64(p)+1)
	variance := squares(f.res) / float64(n-p)
	variance = max(variance, f.record.ResolutionK*f.record.ResolutionK/12)
	variance *= float64(n) / count
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: max(count-float64(p), 1)}.Quantile(0.5 + Confidence/2)
	var chol mat.Cholesky
	a := normal(jac)
	known := chol.Factorize(a)
	var inverse mat.SymDense
	if known {
		known = chol.InverseTo(&inverse) == nil
	}
	for i, x := range f.x {
		v := Interval{Value: math.Exp(x), Low: math.Exp(f.low[i]), High: math.Exp(f.high[i]), Vague: true}
		if known {
			half := t*math.Sqrt(variance*inverse.At(i, i)) + f.record.AccuracyK*math.Abs(shift(jac, &inverse, i))
			v.Low, v.High = max(v.Low, math.Exp(x-half)), min(v.High, math.Exp(x+half))
			v.Vague = 2*half > math.Log(mostWide) || x <= f.low[i] || x >= f.high[i]
		}
		if i < len(f.job.Films) {
			out.Films = append(out.Films, v)
		} else {
			out.Conductivity = &v
		}
	}
	return out, nil
}

// shift is how far the logarithm of a value moves for each K that all readings are wrong.
func shift(jac *mat.Dense, inverse *mat.SymDense, value int) float64 {
	rows, cols := jac.Dims()
	sum := 0.0
	for p := range cols {
		column := 0.0
		for i := range rows {
			column += jac.At(i, p)
		}
		sum += inverse.At(value, p) * column
	}
	return sum
}

// normal is the matrix of the normal equations.
func normal(jac *mat.Dense) *mat.SymDense {
	var a mat.SymDense
	a.SymOuterK(1, jac.T())
	return &a
}

func squares(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v * v
	}
	return sum
}

// correlation is that of neighbouring residuals about their zero; 0 where it is none or negative.
func correlation(res []float64) float64 {
	products := 0.0
	for i := 1; i < len(res); i++ {
		products += res[i] * res[i-1]
	}
	all := squares(res)
	if all == 0 {
		return 0
	}
	return min(max(products/all, 0), 0.99)
}
