package main

import (
	"math"
	"math/rand/v2"
	"slices"

	"slowpoint/report"
	"slowpoint/rules"
)

// share judges n pieces drawn from between the ends of what varies, evenly and apart from one another, by a Latin hypercube: each quantity
// takes each of n equal parts of its range once. The same seed draws the same pieces.
func (s *search) share(n int, seed uint64, out []report.WorstCase) error {
	draw := rand.New(rand.NewPCG(seed, 0x5370726561640000))
	at := make([][]float64, n)
	for k := range at {
		at[k] = make([]float64, len(s.p.Spreads))
	}
	for i := range s.p.Spreads {
		minus, plus := s.p.Span(i)
		for k, part := range draw.Perm(n) {
			x := -minus + (minus+plus)*(float64(part)+draw.Float64())/float64(n)
			switch {
			case x < 0:
				at[k][i] = x / minus
			case x > 0:
				at[k][i] = x / plus
			}
		}
	}
	met := make([]int, len(out))
	counted := make([]int, len(out))
	const batch = 64 // findings that are kept at a time
	due := slices.Repeat([][]int{s.every()}, batch)
	for from := 0; from < n; from += batch {
		found, err := s.solve(at[from:min(n, from+batch)], due)
		if err != nil {
			return err
		}
		for _, fs := range found {
			for k := range fs {
				if fs[k].Verdict != rules.NotApplicable {
					counted[k]++
				}
				if fs[k].Verdict == rules.Met {
					met[k]++
				}
			}
		}
	}
	for k := range out {
		if counted[k] > 0 {
			low, high := wilson(met[k], counted[k])
			out[k].Share = &report.Share{Pieces: counted[k], Met: met[k], Low: low, High: high, Seed: seed}
		}
	}
	return nil
}

// wilson is the interval that holds the true share with 95 % where so many of n pieces drawn apart from one another have met (E. B. Wilson
// 1927, J Am Stat Assoc 22:209). A Latin hypercube errs less as a rule.
func wilson(met, n int) (low, high float64) {
	const z = 1.959964
	p, m := float64(met)/float64(n), float64(n)
	middle, half := p+z*z/(2*m), z*math.Sqrt(p*(1-p)/m+z*z/(4*m*m))
	return max(0, (middle-half)/(1+z*z/m)), min(1, (middle+half)/(1+z*z/m))
}
