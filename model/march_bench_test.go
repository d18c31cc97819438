package model

import "testing"

// BenchmarkSolve solves reference problem I, whose surface has a law of its own, as the benchmark of the same name solves the others: the
// stated error holds from half its first time on, and the history is taken at every place every 60 s.
func BenchmarkSolve(b *testing.B) {
	for _, p := range problems() {
		if p.id != "I" {
			continue
		}
		b.Run(p.id, func(b *testing.B) {
			sol := solutionOf(b, p.id)
			o := Options{ErrorFromS: sol.Reference.Rows[0][0].(float64) / 2}
			b.ReportAllocs()
			for b.Loop() {
				h, err := Solve(p.product, p.steps, o)
				if err != nil {
					b.Fatal(err)
				}
				h.Sample(60)
			}
			h, err := Solve(p.product, p.steps, o)
			if err != nil {
				b.Fatal(err)
			}
			b.ReportMetric(p.offK(b, h, sol), "errK")
		})
	}
}
