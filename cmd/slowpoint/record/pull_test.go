package record

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// pull is a course of which a probe was pulled out for a while.
type pull struct {
	true, read []float64 // °C, of the place and as the probe showed it
	out, in    int       // the first reading of something else, and the first after it was put back
	tauS       float64
	timesS     []float64
}

// pulled draws a probe that is pulled out of a food into the medium of that step and put back after 2 to 30 min, or not at all.
func pulled(h *model.History, rng *rand.Rand, stepS float64, ever bool) (p pull, ok bool, what string) {
	const fine = 5.0
	between := func(lo, hi float64) float64 { return lo * math.Pow(hi/lo, rng.Float64()) }
	p.tauS = between(12, 480)
	for range 50 {
		from := h.EndS() * rng.Float64()
		to := from + between(120, 1800)
		if !ever {
			to = math.Inf(1)
		}
		sensor, now := math.NaN(), 0.0
		next := stepS * rng.Float64()
		p.true, p.read, p.timesS, p.out, p.in = nil, nil, nil, -1, -1
		n := int(h.EndS() / fine)
		at, c := make([]float64, n), make([]float64, n)
		for i := range at {
			at[i] = fine * float64(i)
		}
		h.Course(model.Place{}, at, c)
		for i, t := range at {
			now = c[i]
			if t >= from && t < to {
				now = h.MediumC(t)
			}
			if t < from || math.IsNaN(sensor) {
				sensor = now
			} else {
				sensor += (now - sensor) * (1 - math.Exp(-fine/p.tauS))
			}
			if t >= next {
				next += stepS
				if t >= from && p.out < 0 {
					p.out = len(p.read)
				}
				if t >= to && p.in < 0 {
					p.in = len(p.read)
				}
				p.timesS = append(p.timesS, t)
				p.true, p.read = append(p.true, c[i]), append(p.read, sensor+0.1*rng.NormFloat64())
			}
		}
		most := 0.0
		for i := range p.read {
			most = math.Max(most, math.Abs(p.read[i]-p.true[i]))
		}
		if p.out > 0 && most > 10 {
			return p, true, fmt.Sprintf("out at %.0f s, back at %.0f s, a sensor of %.0f s, every %.0f s", from, to, p.tauS, stepS)
		}
	}
	return p, false, ""
}

// TestPulledOut: a probe that was pulled out for 2 to 30 min, or for good, with a time constant of 0.2 to 8 min and a logger that reads every
// 0.5 to 10 min, never meets a limit by its readings of the air that the food did not meet, where the plan describes a food that settles in 20
// min or more. Of thinner food, and of food that nobody described, some remain: a thin piece can do what a slow probe does. How many do is
// held.
func TestPulledOut(t *testing.T) {
	limits := pullLimits()
	kinds := []struct {
		name         string
		known, thick bool
		most         [2]int // limits met falsely of at most so many pulls: put back, for good
		least        int    // pulls that are told, %
		n, wrong     [2]int
		told         int
	}{
		{name: "described, settles in 20 min or more", known: true, thick: true, least: 97},
		{name: "described, thinner", known: true, most: [2]int{3, 3}, least: 50},
		{name: "not described, would settle in 20 min or more", thick: true, most: [2]int{8, 7}, least: 70},
		{name: "not described, thinner", most: [2]int{5, 5}, least: 50},
	}
	rng := rand.New(rand.NewPCG(0, 31))
	for k := range 400 {
		stepS := 30 * math.Pow(20, rng.Float64())
		_, h, f, what := drawnHistory(t, rng)
		resolution := []float64{0.1, 0.5, 1}[rng.IntN(3)]
		good := 0
		if k%3 == 0 {
			good = 1
		}
		p, ok, how := pulled(h, rng, stepS, good == 0)
		if !ok || len(p.read) < 5 {
			continue
		}
		for i := range kinds {
			c := &kinds[i]
			of := f
			if !c.known {
				of = Food{LowC: math.NaN(), HighC: math.NaN()}
			}
			if (f.SettleS >= 1200) != c.thick {
				continue
			}
			log := logOf(stepS, resolution, p.read)
			log.TimesS = p.timesS
			l := newLeaper(log, of)
			l.steps = stretches(h, 0)
			log.Leaps = l.all()
			c.n[good]++
			if len(log.Leaps) > 0 {
				c.told++
			}
			if bad := falselyMet(t, limits, h, log, p); len(bad) > 0 {
				if c.wrong[good]++; c.most[good] == 0 {
					t.Errorf("%s, %d: %v is met, and was not: settles in %.0f s; %s; %s", c.name, k, bad, f.SettleS, how, what)
				}
			}
		}
	}
	for _, c := range kinds {
		all := c.n[0] + c.n[1]
		t.Logf("%s: %d put back and %d for good, %d %% told; met falsely %d and %d", c.name, c.n[0], c.n[1], 100*c.told/all, c.wrong[0], c.wrong[1])
		if 100*c.told < c.least*all || c.wrong[0] > c.most[0] || c.wrong[1] > c.most[1] || c.n[0] < 90 || c.n[1] < 45 {
			t.Errorf("%s: %d of %v are told, %v met falsely; want at least %d %%, and at most %v", c.name, c.told, c.n, c.wrong, c.least, c.most)
		}
	}
}

// pullLimits are limits on heating and on cooling of many kinds (invented).
func pullLimits() (out []rules.Limit) {
	c := func(x float64) *float64 { return &x }
	for _, x := range []float64{55, 63, 70, 75} {
		out = append(out, rules.Limit{Name: fmt.Sprintf("hold %g", x), Kind: rules.Hold, FromC: c(x), TimeS: c(120), Counting: rules.Total, Applies: rules.Applies{All: true}})
		out = append(out, rules.Limit{Name: fmt.Sprintf("ever %g", x), Kind: rules.Hold, FromC: c(x), TimeS: c(0), Counting: rules.Total, Applies: rules.Applies{All: true}})
		out = append(out, rules.Limit{Name: fmt.Sprintf("lethality %g", x), Kind: rules.Lethality, ReferenceC: c(x), ZK: c(7.5), FromC: c(55), TimeS: c(300), Applies: rules.Applies{All: true}})
	}
	for _, x := range []float64{21, 10, 5, 8} {
		for _, long := range []float64{60, 120, 240, 480} {
			out = append(out, rules.Limit{Name: fmt.Sprintf("60 to %g in %g", x, long), Kind: rules.CoolWithin, FromC: c(60), ToC: c(x), TimeS: c(60 * long), Clock: rules.Clock{Crossing: true}, Applies: rules.Applies{All: true}})
		}
	}
	return out
}

// falselyMet names the limits that the readings meet and the place did not.
func falselyMet(t *testing.T, lim []rules.Limit, h *model.History, log *Log, p pull) (out []string) {
	judge := func(c []float64, gaps, doubted []int) []rules.Finding {
		pt := model.Point{Name: "slowest point"}
		re := &model.Recording{Point: pt, Spans: h.Spans, TimesS: log.TimesS, C: c, ErrorK: log.ResolutionK / 2, Doubted: doubted, LowC: math.NaN(), HighC: math.NaN()}
		fs, err := rules.FindRecorded(lim, rules.Recorded{Product: "x", Recording: re})
		if err != nil {
			t.Fatal(err)
		}
		return fs
	}
	exact := judge(p.true, nil, nil)
	got := judge(log.C, nil, log.Doubted(0, len(log.C), 0))
	for i := range exact {
		if got[i].Verdict == rules.Met && exact[i].Verdict == rules.NotMet {
			out = append(out, exact[i].Limit.Name)
		}
	}
	return out
}
