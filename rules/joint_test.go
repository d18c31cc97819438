package rules

import (
	"math"
	"math/rand/v2"
	"testing"

	"slowpoint/model"
)

// stays is the time that a place of a slab spends between two temperatures, min, total and longest, from the exact series every 10 s with
// straight lines between.
func (s series) stays(x, lo, hi, endS float64) (total, longest float64) {
	const every = 10.0
	run, before := 0.0, s.at(x, 0)
	for t := every; t <= endS; t += every {
		now := s.at(x, t)
		from, to := math.Min(before, now), math.Max(before, now)
		part := 0.0
		if to > from {
			part = math.Max(0, math.Min(to, hi)-math.Max(from, lo)) / (to - from) * every / 60
		} else if now > lo && now < hi {
			part = every / 60
		}
		total += part
		if before <= lo || before >= hi {
			run = 0
		}
		if run += part; part < every/60*(1-1e-9) {
			longest = math.Max(longest, run)
			if now <= lo || now >= hi {
				run = 0
			}
		}
		longest, before = math.Max(longest, run), now
	}
	return total, longest
}

// The longest time in a band often lies where two periods join: at the places that just reach To. No place of slabs of any size and steps,
// 400 of them by the exact series, spends more time in a band than is found, and the margin in K of a met band brings it to its limit
// within what the places tell.
func TestBandWhereTwoPeriodsJoin(t *testing.T) {
	draw := rand.New(rand.NewPCG(3, 5))
	within := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	joined, margins := 0, 0
	for n := range 12 {
		half, startC := within(0.012, 0.032), within(2, 10)
		steps := []model.Step{filmStep(model.Cook, math.Round(within(40, 80)), within(85, 110), within(20, 45)), filmStep(model.Rest, 12, 21, 7),
			filmStep(model.Cool, 250, within(1, 4), within(12, 35))}
		h := solve(t, model.Slab, model.Size{ThicknessM: 2 * half}, startC, steps...)
		s := newSeries(half, startC, steps)
		least, most := math.Inf(1), math.Inf(-1)
		for x := 0.0; x <= half; x += half / 40 {
			top := 0.0
			for at := 0.0; at < h.EndS(); at += 60 {
				top = math.Max(top, s.at(x, at))
			}
			least, most = math.Min(least, top), math.Max(most, top)
		}
		lo, hi := within(5, 20), within(least, most) // some places reach To and others do not
		for k, count := range []Counting{Total, Continuous} {
			longest, at := 0.0, 0.0
			for i := 0; i <= 400; i++ {
				x := half * float64(i) / 400
				total, run := s.stays(x, lo, hi, h.EndS())
				if v := []float64{total, run}[k]; v > longest {
					longest, at = v, x
				}
			}
			if at > 0 && at < half {
				joined++
			}
			f := one(t, Limit{Kind: Band, FromC: c(lo), ToC: c(hi), TimeS: min_(longest + 15), Counting: count}, h)
			if *f.Value < longest-0.05 || *f.Value > longest*1.02+0.3 || f.Verdict != Met {
				t.Errorf("%d, %v: %v, %.3f min at %.3f mm, the longest of 800 places is %.3f at %.3f", n, count, f.Verdict, *f.Value, 1000*f.Place.UpM, longest, 1000*at)
			}
			if f.MarginK != nil { // there is none where From lies so low that it plays no part
				margins++
				for _, by := range []float64{-0.02, 0.02} {
					moved := one(t, Limit{Kind: Band, FromC: c(lo - *f.MarginK - by), ToC: c(hi), TimeS: min_(longest + 15), Counting: count}, h)
					if met := moved.Verdict == Met; met != (by < 0) {
						t.Errorf("%d, %v: %v with From %.2f K beyond the margin of %.3f K", n, count, moved.Verdict, by, *f.MarginK)
					}
				}
			}
			if f := one(t, Limit{Kind: Band, FromC: c(lo), ToC: c(hi), TimeS: min_(longest - 0.2), Counting: count}, h); f.Verdict != NotMet {
				t.Errorf("%d, %v: %v of %.3f min with 0.2 min less allowed: %s", n, count, f.Verdict, *f.Value, f.Why)
			}
		}
	}
	if joined < 6 || margins < 10 {
		t.Errorf("%d longest times within the slab, %d margins: the cases do not show what they should", joined, margins)
	}
}

// Where the margin moves From, the places at which two periods join move with it, the more of them the colder From is: the margin in K of a met
// band brings it to its limit all the same.
func TestRoomWhereTwoPeriodsJoin(t *testing.T) {
	draw := rand.New(rand.NewPCG(8, 1))
	within := func(lo, hi float64) float64 { return lo + (hi-lo)*draw.Float64() }
	margins := 0
	for n := range 60 {
		h := solve(t, model.Slab, model.Size{ThicknessM: within(0.02, 0.05)}, 4, filmStep(model.Cook, math.Round(within(20, 50)), 90, 25),
			filmStep(model.Cool, math.Round(within(60, 160)), 1, 20), filmStep(model.Reheat, math.Round(within(15, 40)), 90, 25), filmStep(model.Cool, 300, 2, 20))
		from, allowed := within(8, 25), within(150, 350)
		limit := func(c float64) Limit {
			to := 95.0
			return Limit{Kind: Band, FromC: &c, ToC: &to, TimeS: min_(allowed), Counting: Continuous}
		}
		f := one(t, limit(from), h)
		if f.Verdict != Met || f.MarginK == nil {
			continue
		}
		margins++
		for _, by := range []float64{-0.02, 0.02} {
			if moved := one(t, limit(from-*f.MarginK-by), h); (moved.Verdict == Met) != (by < 0) {
				t.Errorf("%d: %v with From %.2f K beyond the margin of %.3f K: %s", n, moved.Verdict, by, *f.MarginK, moved.Why)
			}
		}
	}
	if margins < 10 {
		t.Errorf("%d margins", margins)
	}
}
