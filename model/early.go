package model

import (
	"math"
	"slices"
)

// Just after a change of surroundings the polynomials through the food do not follow the bend at the surface yet, and swing farther in: by tenths of a
// kelvin, for a minute or two. What a place may do then is known without them. Let the surroundings go on as they were: the difference between
// that course and the true one obeys the same equation from nought, and is no more than what a surface that is held by the range of the surroundings
// further away sends in (comparison principle; the answer of a half space to a held surface is erfc(z) with z = d/2√(αt), Carslaw & Jaeger 1959,
// section 2.5, doubled for two faces; that of a sphere R/r·(erfc((R−r)/2√(αt)) − erfc((R+r)/2√(αt))), ibid. section 9.3, both from memory, which is at
// most 4·erfc(z) from R/4 out and 16z/3√π·exp(−z²) within, where d is more than 3R/4; a cylinder draws the rays together less). The course that goes on is the parabola through the last instants before the change. So in these minutes a
// temperature is kept within what this allows: deep in the food to a few thousandths of a kelvin, near the surface not at all.

// settles is what keeps the temperatures of a step just after its beginning.
type settles struct {
	startS, untilS float64 // s of the chain
	backS          float64 // between the instants of the parabola; 0: the first step, which begins at one temperature
	rangeK         float64 // how far the surroundings and the food are apart at most, K
	alpha          float64 // of what conducts best, m²/s
}

// slackKeptK is by how much the parabola may be off besides twice its bend, K.
const slackKeptK = 5e-4

// mostSentK is from how much on that comes in a place is not kept, K: more than the swings are.
const mostSentK = 5.0

// settling lists the beginnings of steps at which swings are kept within bounds.
func (s *solver) settling(h *History) []settles {
	if s.used == 0 || s.front {
		return nil
	}
	alpha := 0.0
	for _, f := range s.product.Foods() {
		for c := -20.0; c <= 140; c += 20 {
			q := f.Props(c)
			alpha = max(alpha, s.options.ConductivityFactor*q.KWmK/(q.RhoKgM3*q.CJkgK))
		}
	}
	var all []settles
	window := s.settle // as long as the stated error leaves out
	for i, sp := range h.Spans {
		e := settles{startS: sp.StartS, untilS: min(sp.StartS+window, sp.EndS), rangeK: h.hull[i][1] - h.hull[i][0], alpha: alpha}
		if i > 0 {
			last := h.Spans[i-1]
			e.backS = min(window/2, (sp.StartS-last.StartS)/4)
			from := sp.StartS - last.StartS - 2*e.backS - s.settle // a medium that bends from here on makes the course swing too
			if e.backS < window/4 || slices.ContainsFunc(h.knots[i-1], func(k float64) bool { return k > 0 && k > from }) {
				continue
			}
		}
		all = append(all, e)
	}
	return all
}

// settlingAt gives what keeps an instant; nil where nothing does.
func settlingAt(all []settles, t float64) *settles {
	for i := range all {
		if t > all[i].startS && t <= all[i].untilS {
			return &all[i]
		}
	}
	return nil
}

// before are the instants of the parabola, the latest last.
func (e *settles) before() []float64 {
	if e.backS == 0 {
		return []float64{e.startS}
	}
	return []float64{e.startS - 2*e.backS, e.startS - e.backS, e.startS}
}

// part is the part of the beginning that an instant lies in: how often it can be halved, four times at most.
func (e *settles) part(t float64) int {
	n := 0
	for n < 4 && math.Ldexp(e.untilS-e.startS, -n-1) >= t-e.startS {
		n++
	}
	return n
}

// sentK is how much can have come in to a place, until the end of a part, from other surroundings than those that go on, K; +Inf where that is too
// much to matter.
func (e *settles) sentK(in entry, part int) float64 {
	lasted := math.Ldexp(e.untilS-e.startS, -part) + 2*e.backS
	if k := e.rangeK * in.share(e.alpha*lasted); k < mostSentK {
		return k
	}
	return math.Inf(1)
}

// keep keeps the temperature of a place at t, °C, within what is possible; by are its temperatures at the instants before.
func (e *settles) keep(c, t float64, by []float64, sentK float64) float64 {
	if math.IsInf(sentK, 1) {
		return c
	}
	goesOn, slack := by[len(by)-1], slackKeptK
	if e.backS > 0 {
		share := (t - e.startS) / e.backS
		bend := share * (share + 1) / 2 * (by[2] - 2*by[1] + by[0])
		goesOn, slack = goesOn+share*(by[2]-by[1])+bend, slack+math.Abs(bend)*2
	}
	slack += sentK
	return max(goesOn-slack, min(goesOn+slack, c))
}

// entry is how deep a place lies under the faces of each direction, m, and whether that is round.
type entry struct {
	depth [3]float64
	round [3]bool
	ways  int
}

// share is the most of a held surface that has come in, by time times α, m².
func (in entry) share(spread float64) float64 {
	sum := 0.0
	for a := range in.ways {
		z := in.depth[a] / (2 * math.Sqrt(spread))
		if in.round[a] {
			sum += max(4*math.Erfc(z), 16*z/(3*math.Sqrt(math.Pi))*math.Exp(-z*z))
		} else {
			sum += 2 * math.Erfc(z)
		}
	}
	return min(1, sum)
}

// entryOf is that of a place in a body. The depth in a spheroid is known about; four fifths of it are taken (own choice).
func (s *solver) entryOf(b *body, p Place) entry {
	if b.ball != nil {
		return entry{depth: [3]float64{0.8 * b.ball.depthM(p)}, round: [3]bool{true}, ways: 1}
	}
	in := entry{ways: s.used}
	at := [3]float64{p.UpM, p.AcrossM, p.AlongM}
	for a := range in.ways {
		in.depth[a] = max(0, s.radii[a]-math.Abs(at[a]))
		in.round[a] = s.kinds[a] == radial || s.kinds[a] == spherical
	}
	return in
}

// settled keeps the beginnings of steps of a scan within what is possible.
func (h *History) settled(sc *Scan) {
	n := len(sc.Spots)
	var e *settles
	var by [][]float64 // by spot
	sent, part := make([]float64, n), 0
	for k, t := range sc.TimesS {
		now := settlingAt(h.settling, t)
		if now == nil {
			continue
		}
		if now != e {
			e, by, part = now, make([][]float64, n), -1
			for _, at := range e.before() {
				h.field.at(at).grid(h.body.buf)
				for i, c := range h.body.buf {
					by[i] = append(by[i], c)
				}
			}
		}
		if p := e.part(t); p != part {
			part = p
			for i, s := range sc.Spots {
				sent[i] = e.sentK(h.entryOf(s.Place), part)
			}
		}
		for i := range sc.Spots {
			sc.C[i][k] = e.keep(sc.C[i][k], t, by[i], sent[i])
		}
	}
}

// settledSamples does the same for samples: of the places that they name and of the points.
func (h *History) settledSamples(s *Samples) {
	for k, t := range s.TimesS {
		if settlingAt(h.settling, t) == nil {
			continue
		}
		s.Points[0][k] = h.At(h.Points[0].Place, t)
		s.Coldest[k], s.Hottest[k] = h.At(s.ColdestAt[k], t), h.At(s.HottestAt[k], t)
	}
}
