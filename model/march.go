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
	// keep writes the state into a track.
	keep(k *track, t float64)
	// firstS is a length for the first step after a change, s.
	firstS() float64
	// span gives the coldest and hottest temperature of the state, °C.
	span() (low, high float64)
	// keepsHeat gives the laws of the nodes if it keeps heat contents in a track; nil for temperatures.
	keepsHeat() []*law
	// touches gives the nodes that a skin lies on.
	touches(k *skin) []int
	// save and restore keep a copy of the state.
	save()
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
			if e.reacts() {
				return true
			}
		}
	}
	return false
}

// effort is how finely a march is made.
type effort struct {
	more  float64 // factor on the number of nodes
	tolK  float64 // error of a step in time, K
	rough bool    // the second march, that the error is estimated with
	kept  int     // numbers that the track may keep; 0: no bound
	fewer float64 // rough: share of the volumes
	ends  []Span  // rough: the steps as they ran in the first march, so that both change surroundings at the same instants
}

// rougher is the effort of the second march. A step's error in time is of third order, so that their sum goes with the tolerance to 2/3.
// Control volumes, with half the nodes, and times that go with them make about four times the error; polynomials, two fewer on each half
// axis, and times that go with them about six times.
func (s *solver) rougher(e effort, ran []Span) effort {
	if s.front && s.used > 1 {
		return effort{more: e.more, tolK: e.tolK * 3, rough: true, fewer: 0.7, ends: ran}
	}
	return effort{more: e.more, tolK: e.tolK * 6, rough: true, fewer: 0.5, ends: ran}
}

// How the difference of the two marches goes over into an error: that of a march with four or six times the error lies three or five
// errors off, less some for doubt; where a front moves in more directions than one the rougher march has seven tenths of the volumes, and
// twice the error.
const (
	volumesWorse     = 3
	spaceWorse       = 1
	stagesWorse      = 2   // polynomials with times of second order
	roundWorse       = 1.5 // of cylinders and spheres: their centre has no node, and is where the error is largest
	polynomialsWorse = 3
)

// polynomial tells whether the march has polynomials in space: smooth fields.
func (s *solver) polynomial() bool { return s.used > 0 && !s.front && s.product.Shape != LayeredSlab }

// marchGoalK is the error that a march is to keep, K.
const marchGoalK = 0.019

// mostTries is how often a march may be made again with more effort. A front of ice makes every place turn in its own instant, which more
// nodes and shorter steps move a little, and so does a surface that comes to boil; in two and three directions they cost more than they
// are worth. What is left is stated.
func (s *solver) mostTries() int {
	switch {
	case s.front && s.used > 1:
		return 0
	case s.front || s.used > 1 && s.wets():
		return 1
	}
	return 2
}

// firstEffort is how finely the march is made at first, and by what the difference of the rougher march is divided.
func (s *solver) firstEffort() (e effort, worse float64) {
	e = effort{more: 1, tolK: 6e-3, kept: mostKept}
	switch {
	case !s.polynomial():
		if s.used > 1 {
			e.tolK = 1.5e-2
			return e, spaceWorse
		}
		return e, volumesWorse
	case s.product.Shape == Spheroid:
		e.more, e.tolK = 1.3, 4e-3
		return e, stagesWorse
	case s.used > 1 && s.wets():
		e.more, e.tolK = 1.1, 1e-2
		return e, stagesWorse
	}
	e.tolK = 8e-3
	if s.used == 3 {
		e.more = 1.1
	}
	if s.used == 1 && (s.kinds[0] == radial || s.kinds[0] == spherical) {
		return e, roundWorse
	}
	return e, polynomialsWorse
}

// march solves the product by marching, with more effort until the estimate of the error meets its goal or no more tries are left.
func (s *solver) march() (*History, error) {
	if s.front && s.product.Shape == Spheroid {
		s.refused.Add(cell.Error{At: s.product.At, Field: "Shape", Typed: Spheroid.Name, Msg: "the food could freeze or melt here, and a front of ice in a spheroid cannot be calculated",
			Hint: "take a long cylinder of the spheroid's diameter, which is slower, or judge a probe record"})
		return nil, s.refused
	}
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
		if h.ErrorK <= marchGoalK || tries == s.mostTries() {
			s.boiling(h)
			return h, nil
		}
		by := h.ErrorK / marchGoalK
		if s.polynomial() {
			e.more *= min(1.3, 1+0.1*by)
		} else {
			e.more *= min(1.5, 1.15*math.Sqrt(by))
		}
		e.tolK /= min(6, 1.3*by)
	}
}

// roughK is the error that a first look is taken to have, K: several times that of the rougher march of the reference problems.
const roughK = 0.2

// marchRough is a first look.
func (s *solver) marchRough(e effort) (*History, error) {
	e.tolK *= 4
	e.more *= 0.85
	h, fine := s.marchOnce(e)
	if len(s.refused) > 0 {
		return nil, s.refused
	}
	s.main, h.ErrorK = fine, roughK
	s.boiling(h)
	return h, nil
}

// marchOnce runs the whole chain.
func (s *solver) marchOnce(e effort) (*History, *marched) {
	h := &History{Product: s.product, Points: append([]Point{{Name: "centre"}}, s.product.Points...)}
	f := s.newMarched(e)
	h.body = f.body
	h.field = f
	s.main, s.chain = f, nil
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
	s.outside(f.track.reach(0, h.EndS()))
	h.Method = f.method()
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

// outsideK is how far a temperature may leave the rows of a table of properties, K.
const outsideK = 0.05

// outside refuses a food of which the temperatures leave its table of properties.
func (s *solver) outside(low, high float64) {
	for _, f := range s.product.Foods() {
		if !f.Table {
			continue
		}
		if low < f.LowC-outsideK || high > f.HighC+outsideK {
			s.refused.Add(cell.Error{At: f.At, Field: "At temperature", Typed: fmt.Sprintf("%g to %g °C", f.LowC, f.HighC),
				Msg:  fmt.Sprintf("the food %s gets as cold as %.1f °C and as hot as %.1f °C, and its properties are not given there", f.Name, low, high),
				Hint: "add rows for these temperatures, or one row alone for a constant"})
		}
	}
}

// mostKept is how many numbers a track may keep: 300 MB.
const mostKept = 4e7

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
		k := s.skinOf(&own, face, st)
		if e == &st.Exposure {
			face = nil
		}
		made[e] = k
		worn = append(worn, wornSkin{k, face})
		if !e.Surface.NoMedium {
			cs.group(own.Medium, st.DurationS)
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
	for next := 1; tau < cs.durS; {
		for next < len(cs.knots) && cs.knots[next] <= tau {
			next++
		}
		end := cs.durS
		if next < len(cs.knots) {
			end = min(end, cs.knots[next])
		}
		use := d
		if rest := end - tau; use >= rest*(1-1e-9) {
			use = rest
		} else if use > rest/2 {
			use = rest / 2
		}
		if until != nil {
			f.state.save()
		}
		err := f.state.try(tau, use)
		if err > 2*tolK && use > 1e-7 {
			d = use * max(0.1, min(0.5, 0.9*math.Cbrt(tolK/err)))
			continue
		}
		from, kept := tau, len(f.track.times)
		if tau += use; use == end-from {
			tau = end
		}
		f.state.accept(f.track, span.StartS+tau)
		if e.kept > 0 && len(f.track.data) > e.kept {
			s.refused.Add(cell.Error{At: st.At, Field: "Step", Typed: st.Name, Msg: "changes so fast at the surface that it takes more steps than can be kept",
				Hint: "look at the temperatures and the sizes of the product, or use film with a coefficient that stands for everything"})
			return cs
		}
		if grow := max(0.2, min(2.5, 0.9*math.Cbrt(tolK/err))); grow >= 1 {
			d = max(d, use*grow)
		} else {
			d = use * grow
		}
		if until != nil && f.missing(span.StartS+tau, *until, st.Stage.Heats) <= 0 {
			cs.durS = f.arrive(*until, st.Stage.Heats, span.StartS, from, kept)
			reached := true
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
// began, s into the chain's step that began at start, when the track had kept instants.
func (f *marched) arrive(goal float64, heats bool, start, from float64, kept int) float64 {
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
		hi = max(hi, start+1e-3) // a step of no length cannot be drawn or judged
		k.cut(kept)
		f.state.restore()
		f.state.try(from, hi-start-from)
		f.state.accept(k, hi)
		left := f.missing(hi, goal, heats)
		if math.Abs(left) < 1e-6 || try == 4 || before <= left {
			return hi - start
		}
		hi += left * (hi - start - from) / (before - left)
	}
}

// marched is a field that was marched: the track of its nodes, and what stands between them.
type marched struct {
	body  *body
	state marcher
	track *track
	mesh  mesh
	now   marchedShot
	// bounds are what no place can pass, by span, °C: the start and what the surfaces so far are in balance with.
	bounds [][2]float64
}

// mesh is the shape of a field between its nodes.
type mesh interface {
	// at gives the temperature of a place from those of the nodes.
	at(x coord, nodes []float64) float64
	// weights of the nodes in the volume mean; they add up to 1.
	weights() []float64
	// onto gives a function that fills there with the temperatures at the nodes of another mesh of the same kind, from those at its own.
	onto(other mesh) func(here, there []float64)
	// neighbours calls do for the nodes beside a node.
	neighbours(j int, do func(k int))
	// fill gives the temperatures at the nodes of the body, which may be more than those of the march.
	fill(nodes, out []float64)
	// slice gives the coefficients of the polynomials along an axis through a place, where the mesh has polynomials.
	slice(nodes []float64, axis int, x coord, node [3]int, out []float64)
	// words for the report
	String() string
}

func (f *marched) course(x coord, times, out []float64) {
	if m, ok := f.mesh.(weighted); ok && f.track.laws == nil && f.state.keepsHeat() == nil {
		w := m.placeWeights(x)
		for i, t := range times {
			out[i] = f.track.sum(f.track.find(t), w)
		}
		return
	}
	now := f.now.c
	for i, t := range times {
		f.track.all(f.track.find(t), now)
		out[i] = f.mesh.at(x, now)
	}
}

// weighted is a mesh in which the temperature of a place is a sum over the nodes.
type weighted interface{ placeWeights(x coord) []float64 }

// marchedShot is a marched field at one instant.
type marchedShot struct {
	f *marched
	c []float64
}

func (f *marched) at(t float64) snapshot {
	f.track.all(f.track.find(t), f.now.c)
	return &f.now
}

func (s *marchedShot) grid(out []float64) { s.f.mesh.fill(s.c, out) }

func (s *marchedShot) slice(axis int, x coord, node [3]int, out []float64) {
	s.f.mesh.slice(s.c, axis, x, node, out)
}

func (s *marchedShot) mean() float64 {
	sum := 0.0
	for i, w := range s.f.mesh.weights() {
		sum += w * s.c[i]
	}
	return sum
}

func (f *marched) run(*chainStep) { panic("model: a march is made as a whole") }
func (f *marched) pop()           { panic("model: a march is made as a whole") }

func (f *marched) method() string {
	return "conduction by heat content, marched in time; " + f.mesh.String()
}

// differs gives the largest difference from a rougher march at its nodes, from settle after each change on. Where a front of ice moves it
// leaves out the nodes beside the front: a place there warms by degrees in seconds when the front passes, in both marches, but not in
// the same second.
func (f *marched) differs(h *History, rough *marched) float64 {
	worst := 0.0
	mine, other, there := make([]float64, f.track.n), make([]float64, rough.track.n), make([]float64, f.track.n)
	end := rough.track.times[len(rough.track.times)-1]
	onto := rough.mesh.onto(f.mesh)
	grow := 1.4
	if f.track.laws != nil { // every node turns in its own time
		grow = 1.1
	}
	for i := range h.Spans {
		sp := &h.Spans[i]
		for tau := h.settle; ; tau *= grow {
			t := min(sp.StartS+tau, sp.EndS)
			f.track.all(f.track.find(t), mine)
			rough.track.all(rough.track.find(min(t, end)), other)
			onto(other, there)
			for j, c := range mine {
				if d := math.Abs(c - there[j]); d > worst && !f.atFront(mine, there, j) {
					worst = d
				}
			}
			if t == sp.EndS {
				break
			}
		}
	}
	return worst
}

// atFront tells whether the front of ice stands beside node j in one march or between the two marches.
func (f *marched) atFront(mine, there []float64, j int) bool {
	if f.track.laws == nil {
		return false
	}
	zero := f.track.laws[j].zeroC
	frozen := mine[j] < zero
	if there[j] < zero != frozen {
		return true
	}
	beside := false
	f.mesh.neighbours(j, func(k int) { beside = beside || mine[k] < zero != frozen || there[k] < zero != frozen })
	return beside
}

// newMarched lays out the march of a product.
func (s *solver) newMarched(e effort) *marched {
	laws := s.lawsOf()
	f := &marched{track: &track{}}
	switch {
	case s.product.Shape == Spheroid:
		s.layRound(f, laws[0], e)
	case s.used > 1 || s.polynomial():
		s.laySpace(f, laws[0], e)
	default:
		s.layLine(f, laws, e)
	}
	f.track.n = len(f.mesh.weights())
	f.track.laws = f.state.keepsHeat()
	f.now = marchedShot{f, make([]float64, f.track.n)}
	return f
}

// layLine lays out a body of one axis, a layered slab, or a stirred food.
func (s *solver) layLine(f *marched, laws []*law, e effort) {
	kind, r := s.kinds[0], s.radii[0]
	if s.used == 0 {
		kind, r = lumped, s.product.Size.VolumeM3/s.product.Size.AreaM2
	}
	kinds := s.kinds
	if s.product.Shape == LayeredSlab {
		kind, kinds[0] = planeFull, planeFull
	}
	g := newLineGrid(s.product, kind, r, e.volumes(lineNodes), lineCrowd)
	m := newLineMarch(g, laws)
	m.lower, m.upper = s.faces[0][0], s.faces[0][1]
	m.fill(s.product.StartC)
	f.state, f.mesh = m, newLineMesh(g)
	nd := &nodes{x: [3][]float64{make([]float64, len(g.x)), {0}, {0}}}
	for i, x := range g.x {
		nd.x[0][i] = x / g.r
	}
	f.body = newBody(body{kinds: kinds, radii: s.radii, pieces: true}, nd)
}

// laySpace lays out a body of two or three axes, or of one without a front.
func (s *solver) laySpace(f *marched, l *law, e effort) {
	var axes [3]*spaceAxis
	var by [3]stretch
	nd := &nodes{x: [3][]float64{{0}, {0}, {0}}, phi: [3][]float64{{1}, {1}, {1}}}
	front := s.front
	for a := range axes {
		switch {
		case a >= s.used:
			axes[a] = &spaceAxis{kind: lumped, n: 1, x: []float64{0}, w: []float64{1}, k: []float64{0}}
			continue
		case front:
			axes[a] = cutAxis(s.kinds[a], s.radii[a], e.volumes(cutNodes[s.used]), s.faces[a])
			nd.x[a] = axes[a].x
			continue
		}
		by[a] = s.stretchOf(a)
		axes[a] = smoothAxis(s.kinds[a], s.radii[a], s.smoothNodes(a, e), by[a], s.faces[a])
		axes[a].bodyNodes(nd, a)
	}
	march := newSpaceMarch(axes, l, s.product.StartC)
	f.state, f.mesh = march, newSpaceMesh(axes)
	if !front && (s.used == 1 || !s.wets()) {
		f.state = newModesMarch(march, e.tolK/4)
	}
	f.body = newBody(body{kinds: s.kinds, radii: s.radii, by: by, pieces: front}, nd)
}

// marchSettleS is the longest time after a change of surroundings from which the error is held where polynomials in two or three
// directions are marched, s: the first minutes of a thick food would need many times the polynomials of all that follows.
const marchSettleS = 300

// marchSettle is that time.
func (s *solver) marchSettle(alpha float64) float64 {
	settle := float64(marchSettleS)
	for a := 0; a < s.used; a++ {
		settle = min(settle, settleFo*s.radii[a]*s.radii[a]/alpha)
	}
	return settle
}

// crowding is how thin a layer at a far face is taken to be, by the thinnest half axis.
const crowding = 1.5

// crowded is the factor by which an axis is crowded at its faces.
func (s *solver) crowded(a int) float64 {
	thin := s.radii[a]
	for i := 0; i < s.used; i++ {
		thin = min(thin, s.radii[i])
	}
	return max(0.1, min(1, crowding*thin/s.radii[a]))
}

// wets tells whether moisture counts on any surface: near boiling its flow is so steep, and so much steeper at an edge than beside it, that no
// linear problem is close to it all over a face.
func (s *solver) wets() bool {
	for i := range s.steps {
		for _, e := range exposures(s.product.Shape, &s.steps[i]) {
			if e.wet() || e.steamWithAir() {
				return true
			}
		}
	}
	return false
}

// stretchOf is the stretch of an axis.
func (s *solver) stretchOf(a int) stretch { return stretchFor(s.crowded(a)) }

// smoothNodes is how many polynomials an axis gets: a stretched one as many as one of its crowded radius, and some for the stretch.
func (s *solver) smoothNodes(a int, e effort) int {
	by := s.crowded(a)
	fo := s.foMin[a]
	s.foMin[a] /= by * by
	n := int(math.Round((float64(s.degrees(a, 0)) + 2*(1-by)) * e.more))
	s.foMin[a] = fo
	if e.rough {
		n += s.fewer(a, 0) - s.degrees(a, 0)
	}
	return min(n, maxDegrees)
}

// volumes is how many control volumes an axis gets of n.
func (e effort) volumes(n int) int {
	if e.rough {
		return int(math.Round(float64(n) * e.more * e.fewer))
	}
	return int(math.Round(float64(n) * e.more))
}

// bodyNodes gives the nodes that a body looks at: those of the axis, and a centre of symmetry.
func (a *spaceAxis) bodyNodes(nd *nodes, axis int) {
	x := a.x
	if a.kind != planeFull {
		x = append([]float64{0}, x...)
	}
	nd.x[axis], nd.phi[axis] = x, make([]float64, len(x)*a.n)
	for g, at := range x {
		a.poly.values(at, nd.phi[axis][g*a.n:(g+1)*a.n], nil)
	}
}

// mayFreeze tells whether any place of a food that freezes may pass its freezing point.
func (s *solver) mayFreeze() bool {
	for _, f := range s.product.Foods() {
		if !f.freezes() {
			continue
		}
		if s.product.StartC < *f.FreezingC {
			return true
		}
		for i := range s.steps {
			for _, e := range exposures(s.product.Shape, &s.steps[i]) {
				if low, _ := s.skinOf(e, nil, &s.steps[i]).mediumRange(); low < *f.FreezingC {
					return true
				}
			}
		}
	}
	return false
}

// lawsOf makes the laws of the foods, by layer; they are made once for all marches of the product.
func (s *solver) lawsOf() []*law {
	if s.laws == nil {
		made := map[*Material]*law{}
		of := func(m *Material) *law {
			if made[m] == nil {
				made[m] = newLaw(m, s.options.ConductivityFactor)
			}
			return made[m]
		}
		if s.product.Food != nil {
			s.laws = append(s.laws, of(s.product.Food))
		}
		for i := range s.product.Layers {
			s.laws = append(s.laws, of(s.product.Layers[i].Food))
		}
	}
	return s.laws
}

// lineNodes is how many volumes a half axis gets at first, cutNodes how many by the number of axes where a front moves through more than one.
const lineNodes = 84

var cutNodes = [4]int{2: 22, 3: 14}

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
	return newSkin(e, &filmCase{shape: s.product.Shape, size: s.product.Size, foodC: s.product.StartC}, food.WaterActivity, st)
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
