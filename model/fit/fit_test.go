package fit

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/verify"
)

// problem gives a reference problem with its own films.
func problem(t testing.TB, id string) (model.Product, []model.Step) {
	for _, r := range verify.References() {
		if r.ID == id {
			return r.Product, r.Steps
		}
	}
	t.Fatalf("no reference problem %s", id)
	return model.Product{}, nil
}

// probe gives what a probe at the centre would show every everyS, with scatter of noiseK.
func probe(t testing.TB, p model.Product, steps []model.Step, everyS, noiseK float64, rnd *rand.Rand) *Record {
	h, err := model.Solve(p, steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	r := &Record{}
	for at := 0.0; at <= h.EndS(); at += everyS {
		r.TimesS = append(r.TimesS, at)
	}
	r.C = make([]float64, len(r.TimesS))
	h.Course(model.Place{}, r.TimesS, r.C)
	for i := range r.C {
		r.C[i] += noiseK * rnd.NormFloat64()
	}
	return r
}

// TestFitFindsTheFilmAgain: the films of problems whose films are known come back from noisy probes within their own interval, in 93 of 100
// draws at least, each film by itself. The search starts from films of twice and half.
func TestFitFindsTheFilmAgain(t *testing.T) {
	for _, id := range []string{"A", "C", "J"} {
		t.Run(id, func(t *testing.T) {
			p, steps := problem(t, id)
			guess := slices.Clone(steps)
			job := &Job{Product: p, Steps: guess}
			var truth []float64
			for i := range guess {
				film := *steps[i].FilmW * []float64{2, 0.5}[i%2]
				guess[i].FilmW = &film
				job.Films, truth = append(job.Films, []int{i}), append(truth, *steps[i].FilmW)
			}
			within := make([]int, len(truth))
			for seed := range uint64(100) {
				r := probe(t, p, steps, 120, 0.3, rand.New(rand.NewPCG(seed, 11)))
				got, err := job.Fit(r)
				if err != nil {
					t.Fatal(err)
				}
				for i, v := range got.Films {
					if v.Low <= truth[i] && truth[i] <= v.High {
						within[i]++
					}
					if v.Vague && truth[i] > 20 { // the rest is too short for its film to be known well
						t.Errorf("seed %d: film %d is called vague: %v", seed, i, v)
					}
				}
				if math.Abs(got.RMSK-0.3) > 0.1 {
					t.Errorf("seed %d: residuals of %.3f K, the noise is 0.3 K", seed, got.RMSK)
				}
			}
			for i, n := range within {
				t.Logf("film of %g: %d of 100", truth[i], n)
				if n < 93 {
					t.Errorf("film of %g W/m²K lies in its interval in %d of 100 draws, wanted at least 93", truth[i], n)
				}
			}
		})
	}
}

// TestFitOfConductivity finds film and conductivity together where both show.
func TestFitOfConductivity(t *testing.T) {
	p, steps := problem(t, "A")
	r := probe(t, p, steps, 60, 0, rand.New(rand.NewPCG(1, 1)))
	thicker := *p.Food
	props := p.Food.Props
	thicker.Props = func(c float64) model.Properties {
		q := props(c)
		q.KWmK /= 1.2
		return q
	}
	p.Food = &thicker
	got, err := (&Job{Product: p, Steps: steps, Films: [][]int{{0}, {2}}, Conductivity: true}).Fit(r)
	if err != nil {
		t.Fatal(err)
	}
	if k := got.Conductivity; math.Abs(k.Value-1.2) > 0.005 || k.Vague {
		t.Errorf("factor of the conductivity %v, made with 1.2", *k)
	}
	for i, want := range []float64{25, 30} {
		if v := got.Films[i]; math.Abs(v.Value/want-1) > 0.005 {
			t.Errorf("film %v, made with %g", v, want)
		}
	}
}

// TestFitSaysWhatARecordDoesNotTell: a place that the film does not reach in time tells nothing of it; a sensor that may be wrong by a
// kelvin widens the interval.
func TestFitSaysWhatARecordDoesNotTell(t *testing.T) {
	p, steps := problem(t, "A")
	rnd := rand.New(rand.NewPCG(5, 5))
	r := probe(t, p, steps, 60, 0.2, rnd)
	job := &Job{Product: p, Steps: steps, Films: [][]int{{0}, {2}}}
	exact, err := job.Fit(r)
	if err != nil {
		t.Fatal(err)
	}
	r.AccuracyK = 1
	doubtful, err := job.Fit(r)
	if err != nil {
		t.Fatal(err)
	}
	for i := range exact.Films {
		if e, d := exact.Films[i], doubtful.Films[i]; d.High-d.Low < 2*(e.High-e.Low) {
			t.Errorf("film %d: interval %v with an accuracy of 1 K, %v without", i, d, e)
		}
	}
	early := &Record{TimesS: r.TimesS[:8], C: r.C[:8]} // 7 min: the centre has hardly moved
	got, err := (&Job{Product: p, Steps: steps, Films: [][]int{{2}}}).Fit(early)
	if err != nil {
		t.Fatal(err)
	}
	if !got.Films[0].Vague {
		t.Errorf("the chill's film from readings of the cook: %v", got.Films[0])
	}
}

func TestFitRefuses(t *testing.T) {
	p, steps := problem(t, "A")
	held := slices.Clone(steps)
	held[0].Surface = model.Held
	held[0].FilmW = nil
	r := &Record{TimesS: []float64{0, 1, 2, 3, 4, 5, 6}, C: make([]float64, 7)}
	for _, c := range []struct {
		job  Job
		r    *Record
		want string
	}{
		{Job{Product: p, Steps: steps}, r, "nothing is to be fitted"},
		{Job{Product: p, Steps: steps, Films: [][]int{{7}}}, r, "there is no step 8"},
		{Job{Product: p, Steps: held, Films: [][]int{{0}}}, r, "which have no film coefficient"},
		{Job{Product: p, Steps: steps, Films: [][]int{{0}, {1}, {2}}}, r, "7 readings are too few to fit 3 values: at least 8"},
		{Job{Product: p, Steps: steps, Films: [][]int{{0}}}, &Record{TimesS: []float64{1, 0}, C: []float64{0, 0}}, "do not rise"},
		{Job{Product: p, Steps: steps, Films: [][]int{{0}}}, &Record{TimesS: []float64{1}}, "1 times and 0 readings"},
	} {
		if _, err := c.job.Fit(c.r); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, wanted %q", err, c.want)
		}
	}
}

func BenchmarkFit(b *testing.B) {
	p, steps := problem(b, "A")
	r := probe(b, p, steps, 60, 0.3, rand.New(rand.NewPCG(1, 1)))
	job := &Job{Product: p, Steps: steps, Films: [][]int{{0}, {2}}}
	for b.Loop() {
		if _, err := job.Fit(r); err != nil {
			b.Fatal(err)
		}
	}
}
