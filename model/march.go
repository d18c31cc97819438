package model

import (
	"fmt"
	"math"

	"slowpoint/model/cell"
)

// What cannot be solved exactly in time is marched: properties that follow the temperature, freezing, films that follow the surface,
// radiation, evaporation. The unknown is the heat content of control volumes or nodes, so heat is conserved whatever the steps.

// A marcher holds the state of a food in time and steps it.
type marcher interface {
	// surround changes what the faces meet; skins are asked for by face, nil for the only one.
	surround(skins func(*Face) *skin)
	// begin takes the state over at a change of surroundings, tau s into the step.
	begin(tau float64)
	// try makes a step of length d from tau and estimates its error, K; the state changes only by accept.
	try(tau, d float64) float64
	// accept makes the last try the state and writes it into a track, with what is needed of the way to it.
	accept(k *track, t float64)
	// turn takes over a corner of a course, tau s into the step, at which the slope of a medium changes.
	turn(tau float64)
	// keep writes the state into a track.
	keep(k *track, t float64)
	// firstS is a length for the first step after a change, s.
	firstS() float64
	// span gives the coldest and hottest temperature of the state, °C.
	span() (low, high float64)
	// touches gives the nodes that a skin lies on.
	touches(k *skin) []int
	// save puts a copy of the state aside, tau s into the step; restore takes it back.
	save(tau float64)
	restore()
}

// marches tells whether the product has to be marched: whether anything in it follows the temperature.
func (s *solver) marches() bool {
	for _, f := range s.product.Foods() {
		if f.Table || f.Composed {
			return true
		}
	}
	for i := range s.steps {
		for _, e := range exposures(s.product.Shape, &s.steps[i]) {
			if e.reacts(&s.steps[i]) {
				return true
			}
		}
	}
	return false
}

// march solves the product by marching, with more effort until the estimate of the error meets its goal or no more tries are left.
func (s *solver) march() (*History, error) {
	e, worse := s.firstEffort()
	if s.options.Rough {
		return s.marchRough(e)
	}
	for tries := 0; ; tries++ {
		h, fine := s.marchOnce(e)
		if len(s.refused) > 0 {
			return nil, s.refused
		}
		chain := s.chain
		_, rough := s.marchOnce(s.rougher(e, h.Spans))
		if len(s.refused) > 0 {
			return nil, s.refused
		}
		s.chain, s.main = chain, fine
		h.ErrorK = max(1e-5, fine.differs(h, rough)/worse)
		s.tmp.rough = rough.track.data[:0]
		if h.ErrorK <= marchGoalK || tries == s.mostTries() || len(fine.track.data) > againKept || s.corners*fine.track.n > s.mostTurned()/4 || s.wetFaces() && len(fine.track.times) > againSteps {
			s.warn(h)
			return h, nil
		}
		e.first = false
		by := h.ErrorK / marchGoalK
		if s.polynomial() {
			e.more *= min(1.3, 1+0.1*by)
		} else {
			e.more *= min(2.5, 1.15*math.Sqrt(by))
		}
		e.tolK /= min(4, 1.3*by)
	}
}

// roughK is the error that a first look is taken to have, K: what it names is confirmed by the run that counts.
const roughK = 0.05

// marchRough is a first look.
func (s *solver) marchRough(e effort) (*History, error) {
	e.tolK = min(4*e.tolK, 0.12)
	e.more *= [4]float64{0.85, 0.85, 0.8, 0.65}[s.used]
	h, fine := s.marchOnce(e)
	if len(s.refused) > 0 {
		return nil, s.refused
	}
	s.main, h.ErrorK = fine, roughK
	s.warn(h)
	return h, nil
}

// marchOnce runs the whole chain.
func (s *solver) marchOnce(e effort) (*History, *marched) {
	h := &History{Product: s.product, Points: append([]Point{{Name: "centre"}}, s.product.Points...)}
	f := s.newMarched(e)
	h.body = f.body
	h.field = f
	s.main, s.chain = f, nil
	if e.first && s.tooMany(f.track.n) {
		return nil, nil
	}
	t := 0.0
	for i := range s.steps {
		span := Span{Step: &s.steps[i], StartS: t, Method: Marched}
		low, _ := f.state.span()
		s.airQuestion(&s.steps[i], low)
		if len(s.refused) > 0 {
			return nil, nil
		}
		cs := s.marchStep(f, &span, e)
		if len(s.refused) > 0 {
			return nil, nil
		}
		s.chain = append(s.chain, cs)
		t += cs.durS
		span.EndS = t
		h.Spans = append(h.Spans, span)
		if span.MediumFromC != nil && h.Bound == "" {
			h.Bound = fmt.Sprintf("a chill medium of %.1f °C was raised to the freezing point, %.1f °C: the food is at or below the temperatures shown until it freezes", *span.MediumFromC, *span.MediumToC)
			h.BoundFromS = span.StartS
		}
	}
	s.finish(h)
	for i := range h.Spans {
		sp := &h.Spans[i]
		low, high := f.track.reach(sp.StartS, sp.EndS)
		s.described(sp, [2]float64{low, high})
		h.hull[i] = f.bounds[i]
	}
	if !e.rough {
		h.settling = s.settling(h)
	}
	low, high := f.track.reach(0, h.EndS())
	s.outside(h, low, high)
	h.Method = f.method()
	h.IceMoves = s.front
	return h, f
}

// described fills what a report says of a span: its properties in the middle of the temperatures of the food.
func (s *solver) described(sp *Span, hull [2]float64) {
	if s.product.Food == nil {
		return
	}
	sp.PropsAtC = (min(hull[0], boilingLimitC) + min(hull[1], boilingLimitC)) / 2
	sp.Props = s.props(sp.PropsAtC)
}

// mostKept is how many numbers a track may keep: 300 MB. A march that kept more than againKept is not made again: with more nodes and shorter
// steps it could be refused for what it keeps, and would take many seconds; nor is one with wet faces that took more than againSteps, through a
// course of hundreds of corners. What is left is stated.
const mostKept, againKept, againSteps = 4e7, 1e7, 4000

// mostTurned is how many nodes times corners of courses a march may take: about eight seconds, or what can be kept. One with more than a
// quarter of it is not made again.
func (s *solver) mostTurned() int {
	switch {
	case s.ball != nil && s.front:
		return 1_500_000
	case s.ball != nil:
		return 300_000
	case s.used < 2:
		return 2_000_000
	case s.front && s.used == 2:
		return 2_500_000
	case s.front:
		return 6_000_000
	case s.wetFaces(), s.sharp[0], s.sharp[1], s.sharp[2]:
		return 3_500_000
	}
	return 8_000_000
}

// manyCorners is from how many corners on it is they that make a march long, and not the food or its surface.
const manyCorners = 100

// leastStepS is the shortest step of a march, s: one that cannot be solved is not made shorter than this.
const leastStepS = 1e-7

// tooFast refuses a step that cannot be marched.
func (s *solver) tooFast(st *Step) {
	s.refused.Add(cell.Error{At: st.At, Field: "Step", Typed: st.Name, Msg: "changes so fast at the surface that it takes more steps than can be kept",
		Hint: "look at the temperatures and the sizes of the product, or use film with a coefficient that stands for everything"})
}

// tooMany refuses a chain whose courses have more corners than a body of so many nodes can be marched through.
func (s *solver) tooMany(nodes int) bool {
	s.corners = 0
	most, at := 0, 0
	for i := range s.steps {
		cs := chainStep{knots: []float64{0}}
		for _, e := range exposures(s.product.Shape, &s.steps[i]) {
			cs.follow(e, &s.steps[i])
		}
		n := len(cs.knots) - 1
		if s.corners += n; n > most {
			most, at = n, i
		}
	}
	if s.corners*nodes <= s.mostTurned() {
		return false
	}
	s.tooLong(&s.steps[at], s.corners, s.mostTurned()/nodes)
	return true
}

// tooLong refuses a step for the corners of its courses; most is how many the chain may have, 0 where nobody knows.
func (s *solver) tooLong(st *Step, corners, most int) {
	could := "fewer"
	if most > 0 {
		could = fmt.Sprintf("about %d", most)
	}
	s.refused.Add(cell.Error{At: st.At, Field: "Step", Typed: st.Name,
		Msg:  fmt.Sprintf("the rows of the courses change their slope %d times in the chain of %s, and a %s of this size can be calculated through %s such changes", corners, s.product.Name, s.product.Shape.Name, could),
		Hint: "leave out rows of the course in sheet Courses, such as all but every second or fifth one, but not its highest and lowest; or end it with the step"})
}

// marchStep runs one step into the track.
func (s *solver) marchStep(f *marched, span *Span, e effort) *chainStep {
	st := span.Step
	until, tolK := st.UntilC, e.tolK
	cs := &chainStep{durS: st.DurationS, knots: []float64{0}}
	if e.rough {
		until = nil
		ran := &e.ends[len(s.chain)]
		cs.durS = ran.EndS - ran.StartS
	}
	made := map[*Exposure]*skin{}
	var worn []wornSkin
	skins := func(face *Face) *skin {
		e := &st.Exposure
		if face != nil {
			e = st.on(face)
		}
		if k, ok := made[e]; ok {
			return k
		}
		own := *e
		own.Medium = s.raised(st, e, span)
		k := s.worn[e] // a rougher or finer march has the same surroundings
		if k == nil {
			if k = s.skinOf(&own, face, st); k.table != nil {
				if s.worn == nil {
					s.worn = map[*Exposure]*skin{}
				}
				s.worn[e] = k
			}
		}
		if e == &st.Exposure {
			face = nil
		}
		made[e] = k
		worn = append(worn, wornSkin{k, face})
		if !e.Surface.NoMedium {
			cs.follow(&own, st)
		}
		return k
	}
	defer func() {
		bound := [2]float64{s.product.StartC, s.product.StartC}
		if n := len(f.bounds); n > 0 {
			bound = f.bounds[n-1]
		}
		for _, w := range worn {
			if !w.insulated {
				low, high := w.mediumRange()
				bound[0], bound[1] = min(bound[0], low), max(bound[1], high)
			}
		}
		f.bounds = append(f.bounds, bound)
		for _, w := range worn {
			span.Films = append(span.Films, w.used(w.face, f.surfaceRange(w.skin, span.StartS, cs.durS), cs.durS))
		}
	}()
	f.state.surround(skins)
	f.state.begin(0)
	f.state.keep(f.track, span.StartS)
	tau, d := 0.0, min(f.state.firstS(), st.DurationS/8)
	// Steps end at the corners of courses. In many of them both marches could go from one to the next at a stride and be alike, however far off:
	// the finer one takes two.
	for next := 1; tau < cs.durS; {
		for next < len(cs.knots) && cs.knots[next] <= tau {
			next++
		}
		end := cs.durS
		if next < len(cs.knots) {
			end = min(end, cs.knots[next])
		}
		use := d
		if !e.rough && len(cs.knots) > 1 && tau == cs.knots[next-1] {
			use = min(use, (end-tau)/2)
		}
		if rest := end - tau; use >= rest*(1-1e-9) {
			use = rest
		} else if use > rest/2 {
			use = rest / 2
		}
		if until != nil {
			f.state.save(tau)
		}
		err := f.state.try(tau, use)
		if !(err <= 2*tolK) && use > leastStepS {
			d = use * max(0.1, min(0.5, 0.9*math.Cbrt(tolK/err)))
			continue
		}
		if math.IsInf(err, 1) {
			s.tooFast(st)
			return cs
		}
		from, kept := tau, len(f.track.times)
		if tau += use; use == end-from {
			tau = end
		}
		f.state.accept(f.track, span.StartS+tau)
		if tau == end && tau < cs.durS {
			f.state.turn(tau)
		}
		if e.kept > 0 && len(f.track.data) > e.kept {
			if n := len(cs.knots) - 1; n > manyCorners {
				s.tooLong(st, n, 0)
			} else {
				s.tooFast(st)
			}
			return cs
		}
		if grow := max(0.2, min(2.5, 0.9*math.Cbrt(tolK/err))); grow >= 1 {
			d = max(d, use*grow)
		} else {
			d = use * grow
		}
		if until != nil && f.missing(span.StartS+tau, *until, st.Stage.Heats) <= 0 {
			var reached bool
			if cs.durS, reached = f.arrive(*until, st.Stage.Heats, span.StartS, from, kept); !reached {
				s.tooFast(st)
				return cs
			}
			span.Reached = &reached
			return cs
		}
	}
	if until != nil {
		reached := false
		span.Reached = &reached
	}
	return cs
}

// wornSkin is a skin and the face that it is told of.
type wornSkin struct {
	*skin
	face *Face
}

// surfaceRange tells what the temperature beneath a skin did in a step of durS seconds.
func (f *marched) surfaceRange(k *skin, startS, durS float64) surfaceRange {
	spots := f.state.touches(k)
	r := surfaceRange{lowC: math.Inf(1), highC: math.Inf(-1)}
	first := true
	for i, t := range f.track.times {
		if t < startS || t > startS+durS {
			continue
		}
		for _, j := range spots {
			c := f.track.kept(i, j)
			r.lowC, r.highC = min(r.lowC, c), max(r.highC, c)
		}
		if len(spots) > 0 && (first || t == startS) { // of two instants at a change the one after it
			r.startC, first = f.track.kept(i, spots[0]), false
		}
	}
	return r
}

// missing is by how much the slowest place falls short of a temperature at t, K; below 0 it is past it.
func (f *marched) missing(t, goal float64, heats bool) float64 {
	low, high := f.body.extremes(f.at(t))
	if heats {
		return goal - low.c
	}
	return high.c - goal
}

// arrive finds when, in the last step of the march, the slowest place reached a temperature, and steps there again; from is where that step
// began, s into the chain's step that began at start, when the track had kept instants. It gives the length of the chain's step, s, and whether
// it could be stepped.
func (f *marched) arrive(goal float64, heats bool, start, from float64, kept int) (durS float64, ok bool) {
	k := f.track
	lo, hi := start+from, k.times[len(k.times)-1]
	before := f.missing(lo, goal, heats)
	for hi-lo > 1e-4 {
		if mid := (lo + hi) / 2; f.missing(mid, goal, heats) <= 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	for try := 0; ; try++ { // a step to there lands a little off the cubic between the two instants
		hi = max(hi, start+shortestS)
		k.cut(kept)
		f.state.restore()
		if math.IsInf(f.state.try(from, hi-start-from), 1) {
			return hi - start, false
		}
		f.state.accept(k, hi)
		left := f.missing(hi, goal, heats)
		if math.Abs(left) < 1e-6 || try == 4 || before <= left {
			return hi - start, true
		}
		hi += left * (hi - start - from) / (before - left)
	}
}

// skinOf makes the skin of a face; of layers the outermost tells the water at a wet surface.
func (s *solver) skinOf(e *Exposure, face *Face, st *Step) *skin {
	var food *Material
	if p := s.product; p.Food != nil {
		food = p.Food
	} else if face == Underside {
		food = p.Layers[len(p.Layers)-1].Food
	} else {
		food = p.Layers[0].Food
	}
	c := &filmCase{shape: s.product.Shape, size: s.product.Size, foodC: s.product.StartC}
	if face != nil && st.on(Top) != st.on(Underside) {
		c.face = face
	}
	return newSkin(e, c, food.WaterActivity, st)
}

// raisedTo is the freezing point that chill media are raised to: the highest of the foods that are not calculated through freezing; nil if
// there is none.
func (p *Product) raisedTo() *float64 {
	var high *float64
	for _, f := range p.Foods() {
		if f.FreezingC != nil && !f.freezes() && (high == nil || *f.FreezingC > *high) {
			high = f.FreezingC
		}
	}
	return high
}
