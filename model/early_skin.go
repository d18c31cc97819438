package model

import "math"

// What a face that reacts drives in just after a change of surroundings: one whose film follows its surface, that radiates, or where vapour condenses or
// water evaporates. The heat that it takes falls as its surface warms. What differs from the course that went on is therefore driven to the temperature at
// which it would take what the old surroundings went on to give, through a film that lies between the slopes of that heat on the way there; and no place
// leaves what the food had before and what its faces are in balance with (comparison and maximum principle of the equation of heat; any textbook).

// taking is what a face that reacts takes at one instant, by the temperature of its surface.
type taking struct {
	of    func(surfaceC float64) (w, slope float64) // W/m² and W/(m²·K)
	reach extent                                    // what the surface stays between, °C
	w     [takingLooks]float64                      // what is taken at even distances from one end of that to the other, W/m²
	falls bool                                      // it falls as the surface warms
}

// takingLooks is at how many temperatures a face is looked at, and steepMore by what the steepest fall between two of them may be less than the steepest
// slope: that leaps at a dew point, below which it grows by 5 % a K (own choice).
const takingLooks, steepMore = 33, 1.5

// newTaking looks at a face.
func newTaking(of func(surfaceC float64) (w, slope float64), only func(surfaceC float64) float64, reach extent) *taking {
	x := &taking{of: of, reach: reach, falls: reach[0] < reach[1]}
	for i := range x.w {
		x.w[i] = only(reach[0] + float64(i)*x.apart())
		x.falls = x.falls && (i == 0 || x.w[i] < x.w[i-1])
	}
	return x
}

// apart is the distance of two temperatures that are looked at, K.
func (x *taking) apart() float64 { return (x.reach[1] - x.reach[0]) / (takingLooks - 1) }

// steep is the steepest fall between two temperatures, W/(m²·K).
func (x *taking) steep(way extent) float64 {
	most, all := 0.0, way[0] < x.reach[0] || way[1] > x.reach[1]
	for i := 1; i < takingLooks; i++ {
		if c := x.reach[0] + float64(i)*x.apart(); all || c > way[0] && c-x.apart() < way[1] {
			most = max(most, x.w[i-1]-x.w[i])
		}
	}
	return steepMore * most / x.apart()
}

// at is the surface temperature at which a heat is taken, °C, from one nearby on. Where the surface does not come to it may be what is best known: a
// straight line, as steep as the steepest within.
func (x *taking) at(w, near float64) float64 {
	switch first, last := x.w[0], x.w[takingLooks-1]; {
	case w >= first:
		return x.reach[0] - (w-first)/x.steep(extent{math.Inf(-1), math.Inf(1)})
	case w <= last:
		return x.reach[1] + (last-w)/x.steep(extent{math.Inf(-1), math.Inf(1)})
	}
	lo, hi := x.reach[0], x.reach[1]
	c := clamp(near, x.reach)
	for range 60 {
		is, slope := x.of(c)
		if is > w {
			lo = c
		} else {
			hi = c
		}
		next := c - (is-w)/slope
		if !(next > lo && next < hi) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-c) < nearC {
			return next
		}
		c = next
	}
	return c
}

// nearC is how closely a temperature is found, K.
const nearC = 1e-5

// boilsNearK is how near to boiling a wet surface counts as boiling, K (own choice).
const boilsNearK = 1

// metFace is what a face meets in a step.
type metFace struct {
	*skin
	stays bool    // the medium stays as it is
	x     *taking // where it stays, and was looked at
}

// meets gives what a face meets in a step. Faces in the same surroundings share what the march asked for first: that of the upper face, on the first axis.
func (of *settlingOf) meets(step int, face *Face) *metFace {
	st := &of.s.steps[step]
	e := st.on(face)
	if k, ok := of.faces[e]; ok {
		return k
	}
	own := *e
	own.Medium = of.s.raised(st, &own, nil)
	k := &metFace{skin: of.s.skinOf(&own, face, st)}
	k.stays = len(k.course.x) < 2 && len(k.humidity.x) < 2
	if len(of.by) >= manyNodes {
		k.seen(manyPlaces)
	}
	if of.faces == nil {
		of.faces = map[*Exposure]*metFace{}
	}
	of.faces[e] = k
	return k
}

// manyNodes is from how many nodes of a body on the heat of a face is tabulated.
const manyNodes = 100

// taking is what a face that reacts takes in a step, tau s into it.
func (of *settlingOf) taking(k *metFace, tau float64) *taking {
	if k.x != nil {
		return k.x
	}
	takes, only := of.takes(k, tau), func(c float64) float64 {
		k.look(tau)
		return k.direct(c, &k.now)
	}
	if k.law != nil || len(of.by) >= manyNodes {
		only = func(c float64) float64 {
			w, _ := takes(c)
			return w
		}
	}
	x := newTaking(takes, only, of.h.hull[of.now])
	if k.stays {
		k.x = x
	}
	return x
}

// takes gives the heat that a face takes by the temperature of its surface, and its slope, tau s into a step.
func (of *settlingOf) takes(k *metFace, tau float64) func(surfaceC float64) (w, slope float64) {
	if len(of.by) >= manyNodes {
		return func(c float64) (w, slope float64) { return k.flux(c, tau) }
	}
	return func(c float64) (w, slope float64) { return k.exact(c, tau) }
}

// instants are those of a step at which its faces are looked at, s of the chain.
func (of *settlingOf) instants(e *settles, step int) []float64 {
	sp := &of.h.Spans[step]
	from, to := max(sp.StartS, e.sinceS), min(sp.EndS, e.untilS)
	times := []float64{from, to}
	for _, k := range of.h.knots[step] {
		if t := sp.StartS + k; t > from && t < to {
			times = append(times, t)
		}
	}
	return times
}

// reacting adds what the nodes of a face that reacts ask for in a step, as node does. It is false where nothing is known: what a wet face takes from still
// air that is a little warmer rises as it warms, for the film goes down while water still evaporates.
func (of *settlingOf) reacting(e *settles, d *drive, face *Face, step int, differ, flow *extent) bool {
	k := of.meets(step, face)
	if k.wet && k.air != nil && k.air.forced == nil {
		return false
	}
	for _, t := range of.instants(e, step) {
		x := of.taking(k, t-of.h.Spans[step].StartS)
		if !x.falls {
			return false
		}
		way := extent{math.Inf(1), math.Inf(-1)}
		for i := range of.by {
			if !of.on(d, i) {
				continue
			}
			went := of.went(e, d, face, i)
			if went == nil {
				return false
			}
			c, slack := e.onward(of.by[i], t)
			q, qSlack := went(t, c)
			to := c
			for _, w := range [2]float64{q - qSlack, q + qSlack} {
				to = x.at(w, to)
				differ.add(to-c, slack+nearC)
				way.add(to, 0)
			}
			way.add(c, slack)
			on := clamp(c, x.reach)
			w, _ := x.of(on)
			flow.add(w-q, x.steep(extent{c - slack, c + slack})*(slack+math.Abs(c-on))+qSlack)
		}
		steep := math.Inf(1) // where water boils
		if !k.wet || way[1] < k.boilsC-boilsNearK {
			steep = x.steep(way) / of.k[0]
		}
		d.film[1] = max(d.film[1], steep)
	}
	return true
}

// wentReacting is went of a face that reacted.
func (of *settlingOf) wentReacting(e *settles, face *Face, node int) func(t, c float64) (q, slack float64) {
	sp, k := &of.h.Spans[of.since-1], of.meets(of.since-1, face)
	if len(k.humidity.x) > 1 {
		return nil
	}
	if !k.stays {
		m := &k.exp.Medium
		return func(t, c float64) (q, slack float64) {
			a := k.surroundings(m.onward(sp.EndS-sp.StartS, t-sp.StartS), at(&k.humidity, 0))
			q, slope := k.sloped(c, &a, slopeK)
			_, off := e.onward(of.by[node], t)
			return q, math.Abs(slope) * off
		}
	}
	takes := of.takes(k, 0)
	return func(t, c float64) (q, slack float64) {
		q, slope := takes(c)
		_, off := e.onward(of.by[node], t)
		return q, math.Abs(slope) * off
	}
}

// within finds what no place leaves: what the food had when the course that goes on ended, and what its faces since then are in balance with.
func (of *settlingOf) within(e *settles) [2]float64 {
	s := of.s
	r := extent{s.product.StartC, s.product.StartC}
	if e.backS > 0 {
		low, high := of.h.body.extremes(of.h.field.at(e.sinceS))
		r = extent{low.c, high.c}
	}
	for m := of.since; m <= of.now; m++ {
		times := of.instants(e, m)
		for a := range s.used {
			of.balances(m, s.faces[a][1], times, &r)
			if s.kinds[a] == planeFull {
				of.balances(m, s.faces[a][0], times, &r)
			}
		}
	}
	wide := slackKeptK + e.bentK
	return [2]float64{r[0] - wide, r[1] + wide}
}

// balances adds the temperatures at which a face takes nothing in a step.
func (of *settlingOf) balances(step int, face *Face, times []float64, r *extent) {
	k := of.meets(step, face)
	if k.insulated {
		return
	}
	for _, t := range times {
		if r.add(of.balanceC(k, t-of.h.Spans[step].StartS), 0); k.stays {
			return
		}
	}
}

// balanceC is the temperature at which a face takes nothing, °C.
func (of *settlingOf) balanceC(k *metFace, tau float64) float64 {
	if !k.linear && !k.held {
		if x := of.taking(k, tau); x.falls {
			return x.at(0, k.mediumC(tau))
		}
	}
	return k.skin.balanceC(tau)
}
