package model_test

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/verify"
)

// BenchmarkSolve solves the reference problems and takes the history at every place every 60 s. Slabs and D are solved at the resolution
// that their own times need: the stated error holds from half their first time on. errK is the largest error against the independent solution at all its times and
// places; for D-constant, which has none, against the exact product of series in the first step (verify holds the later ones to a
// finer solution).
func BenchmarkSolve(b *testing.B) { solveAll(b, true) }

// BenchmarkSolveEarly solves slabs as the program does: the stated error holds from half a minute after each change.
func BenchmarkSolveEarly(b *testing.B) { solveAll(b, false) }

func solveAll(b *testing.B, later bool) {
	for _, r := range verify.References() {
		if r.ID == "B1" || !later && r.Product.Shape != model.Slab {
			continue
		}
		b.Run(r.ID, func(b *testing.B) {
			rows := referenceRows(b, &r)
			var o model.Options
			if later && (r.Product.Shape == model.Slab || r.ID == "D") {
				o.ErrorFromS = rows.Rows[0][0].(float64) / 2
			}
			bench(b, r.Product, r.Steps, o)
			b.ReportMetric(referenceErrorK(b, &r, rows, o), "errK")
		})
	}
	if !later {
		return
	}
	p, steps := constantBrick()
	b.Run("D-constant", func(b *testing.B) {
		bench(b, p, steps, model.Options{})
		b.ReportMetric(constantBrickErrorK(b), "errK")
	})
}

// reference is an independent solution.
type reference struct {
	Columns []string
	Rows    [][]any
}

func referenceRows(b *testing.B, r *verify.ReferenceProblem) reference {
	raw, err := os.ReadFile(filepath.Join("..", "testdata", "published", "solutions", r.ID+".json"))
	if err != nil {
		b.Fatal(err)
	}
	var sol struct{ Reference reference }
	if err := json.Unmarshal(raw, &sol); err != nil {
		b.Fatal(err)
	}
	return sol.Reference
}

// referenceErrorK is the largest difference from the independent solution: all its times, named places, mean, coldest and hottest.
func referenceErrorK(b *testing.B, r *verify.ReferenceProblem, sol reference, o model.Options) float64 {
	h, err := model.Solve(r.Product, r.Steps, o)
	if err != nil {
		b.Fatal(err)
	}
	s := h.Sample(30)
	worst, compared := 0.0, 0
	for _, row := range sol.Rows {
		i := slices.IndexFunc(s.TimesS, func(t float64) bool { return math.Abs(t-row[0].(float64)) < 1e-6 })
		for c, column := range sol.Columns {
			name, isC := strings.CutSuffix(column, "_C")
			if !isC {
				continue
			}
			got := 0.0
			switch name {
			case "volume_mean":
				got = s.Mean[i]
			case "coldest_T":
				got = s.Coldest[i]
			case "hottest_T":
				got = s.Hottest[i]
			default:
				got = h.At(r.Points[name], s.TimesS[i])
			}
			worst = math.Max(worst, math.Abs(got-row[c].(float64)))
			compared++
		}
	}
	if compared < 60 {
		b.Fatalf("only %d figures compared", compared)
	}
	return worst
}

func bench(b *testing.B, p model.Product, steps []model.Step, o model.Options) {
	b.ReportAllocs()
	for b.Loop() {
		h, err := model.Solve(p, steps, o)
		if err != nil {
			b.Fatal(err)
		}
		h.Sample(60)
	}
}

// constantBrick is the brick of problem D with k 0.55 W/(m·K) and ρc 3.75e6 J/(m³·K).
func constantBrick() (model.Product, []model.Step) {
	film := func(name string, stage *model.Stage, s, h, c float64) model.Step {
		return model.Step{Name: name, Stage: stage, DurationS: s, Exposure: model.Exposure{Surface: model.Film, FilmW: &h, Medium: constant(c)}}
	}
	food := &model.Material{Name: "test food", Source: "test input", Props: func(float64) model.Properties {
		return model.Properties{KWmK: 0.55, RhoKgM3: 1000, CJkgK: 3750}
	}}
	return model.Product{Name: "brick", Shape: model.Brick, Size: model.Size{ThicknessM: 0.09, WidthM: 0.18, LengthM: 0.3}, Food: food, StartC: 5},
		[]model.Step{film("cook", model.Cook, 3600, 25, 160), film("rest", model.Rest, 900, 8, 22), film("chill", model.Cool, 14400, 30, 2)}
}

// constantBrickErrorK holds the brick against products of exact plate series in its first step: θ = ΠΣ Cn cos(zn x) exp(-zn² Fo),
// zn tan zn = Bi (Carslaw & Jaeger 1959, section 3.11), at corner, faces, centre and halves, from 10 min on.
func constantBrickErrorK(b *testing.B) float64 {
	p, steps := constantBrick()
	h, err := model.Solve(p, steps, model.Options{})
	if err != nil {
		b.Fatal(err)
	}
	plate := func(r, x, t float64) float64 {
		bi, fo, sum := 25*r/0.55, 0.55/3.75e6*t/(r*r), 0.0
		for n := 0; n < 60; n++ {
			lo, hi := float64(n)*math.Pi, float64(n)*math.Pi+math.Pi/2
			for range 60 {
				if z := (lo + hi) / 2; z*math.Sin(z) < bi*math.Cos(z) == (math.Cos(z) > 0) {
					lo = z
				} else {
					hi = z
				}
			}
			z := (lo + hi) / 2
			sum += 4 * math.Sin(z) / (2*z + math.Sin(2*z)) * math.Cos(z*x/r) * math.Exp(-z*z*fo)
		}
		return sum
	}
	worst := 0.0
	for t := 600.0; t <= 3600; t += 600 {
		for _, f := range [][3]float64{{0, 0, 0}, {1, 1, 1}, {1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {0.5, 0.5, 0.5}, {0.9, 0.7, 0.95}} {
			at := model.Place{UpM: 0.045 * f[0], AcrossM: 0.09 * f[1], AlongM: 0.15 * f[2]}
			exact := 160 - 155*plate(0.045, at.UpM, t)*plate(0.09, at.AcrossM, t)*plate(0.15, at.AlongM, t)
			worst = math.Max(worst, math.Abs(h.At(at, t)-exact))
		}
	}
	return worst
}

// The brick of the benchmark is held here too, so that a wrong series or solver is seen without running benchmarks.
func TestConstantBrick(t *testing.T) {
	if e := testing.Benchmark(func(b *testing.B) { b.ReportMetric(constantBrickErrorK(b), "errK") }).Extra["errK"]; !(e < 0.02) {
		t.Errorf("largest error %g K, promised 0.02 K", e)
	}
}
