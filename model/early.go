package model

import (
	"math"
	"slices"
)

// Just after a change of surroundings the polynomials through the food do not follow the bend at the surface yet, and swing farther in: by tenths of a
// kelvin, for a minute or two. What a place may do then is known without them. Let the old surroundings go on as they were: the difference between that
// course and the true one obeys the same equation from nought, and each face drives it through its new film, by what the food there would have to
// differ by for the new surroundings to give as much heat as the old ones: the drive. By the comparison principle it lies between what the least and what
// the greatest drive of each face would do to a half space behind that film; where a face is round, the answer of a sphere lies above. (Half space
// behind a film, and held: Carslaw & Jaeger 1959, sections 2.7 and 2.5; sphere, ibid. section 9.3, with the film less k/R; all from memory.) Where all
// faces drive alike, as in a food of one temperature, both ends are nearly the same, and the temperature is as good as exact.
//
// The course that goes on is taken from the last instants before the change. What a face that reacts drives in stands in early_skin.go.

// settles is what keeps the temperatures of a step just after its beginning.
type settles struct {
	startS, untilS float64    // s of the chain
	sinceS         float64    // when the surroundings ceased to go on: startS, or the beginning of an earlier step that this one followed too soon
	backS          float64    // between the instants of the parabola; 0: the first step, which begins at one temperature
	alpha          [2]float64 // of what conducts least and best, m²/s
	uneven         float64    // how many times the best conductivity is the least
	bentK          float64    // what corners of the old surroundings may do to the course that goes on at the surface, K
	drives         []drive    // by face
	within         [2]float64 // what no place leaves, °C
}

// drive is what a face does to the food beyond what went on.
type drive struct {
	axis  int
	side  int        // of a slab with two unlike faces: -1 or 1; 0: both, or all round
	exact bool       // the least drive bounds the answer as well; not if conduction or the film follows the temperature
	film  [2]float64 // weakest and strongest film by conductivity since, 1/m; +Inf: held
	by    [2]float64 // least and greatest, K; without a film in K/m
	flows bool       // by is in K/m
}

// slackKeptK is by how much the course that goes on may be off at least, K, and swingShare the share of bentK that it may be off by deep in the food
// (own choice, held by TestKeptIsNearerToTheTruth).
const slackKeptK, swingShare = 5e-4, 2e-4

// thinFo is the Fourier number of a half axis from which on the faces of a food know of each other: nothing is kept from then on.
const thinFo = 0.04

// settling lists the beginnings of steps at which swings are kept within bounds.
func (s *solver) settling(h *History) []settles {
	if s.used == 0 || s.front {
		return nil
	}
	var all []settles
	for i := range h.Spans {
		sp := &h.Spans[i]
		e := settles{startS: sp.StartS, untilS: min(sp.StartS+s.keptS(), sp.EndS)}
		since := i
		for ; since > 0 && !s.goesOn(h, &e, since); since-- { // a step too short to go on
		}
		e.sinceS = h.Spans[since].StartS
		e.alpha, _ = s.conducts(h)
		if e.untilS = min(e.untilS, e.sinceS+s.thinS(e.alpha[1])); e.untilS <= e.startS {
			continue
		}
		s.drivesOf(h, &e, since, i)
		all = append(all, e)
	}
	return all
}

// keptS is how long temperatures are kept after a change: as long as the stated error leaves out, but not where more was asked to be left out.
func (s *solver) keptS() float64 {
	if s.options.ErrorFromS > 0 {
		return min(s.settle, settleS)
	}
	return s.settle
}

// thinS is how long heat that spreads with α, m²/s, takes to cross the food, s.
func (s *solver) thinS(alpha float64) float64 {
	r := s.thinnest()
	return thinFo * r * r / alpha
}

// goesOn tells whether the course before a step is long enough to be gone on with, and how: with which instants before it.
func (s *solver) goesOn(h *History, e *settles, step int) bool {
	last, knots := h.Spans[step-1], h.knots[step-1]
	length := h.Spans[step].StartS - last.StartS
	if e.backS = min(s.settle/2, (length-s.settle)/3); e.backS < s.settle/4 {
		e.backS = 0
		return false
	}
	e.bentK = 0
	from := length - 3*e.backS - s.settle // a medium that bends from here on makes the course bend too
	if !slices.ContainsFunc(knots, func(k float64) bool { return k > 0 && k > from }) {
		return true
	}
	share := (e.untilS - h.Spans[step].StartS) / e.backS
	bent := func(tau float64) {
		for _, x := range exposures(s.product.Shape, last.Step) {
			if x.Surface.NoMedium {
				continue
			}
			m := s.raised(last.Step, x, nil)
			e.bentK = max(e.bentK, math.Abs(m.at(tau)-m.onward(length, tau)))
		}
	}
	bent(max(0, from))
	for _, k := range knots {
		if k > from {
			bent(k)
		}
	}
	e.bentK *= 1 + share*(2+share*(3+share)) // about the weights of what follows
	return true
}

// onward is what a medium would be at tau if the straight line that it followed just before from went on.
func (m *Course) onward(from, tau float64) float64 {
	now := m.at(from)
	if len(m.C) < 2 {
		return now
	}
	before := m.TimesS[0]
	for _, t := range m.TimesS {
		if t < from {
			before = t
		}
	}
	if before >= from {
		return now
	}
	return now + (now-m.at(before))/(from-before)*(tau-from)
}

// before are the instants that the course goes on from, the latest last.
func (e *settles) before() []float64 {
	if e.backS == 0 {
		return []float64{e.sinceS}
	}
	return []float64{e.sinceS - 3*e.backS, e.sinceS - 2*e.backS, e.sinceS - e.backS, e.sinceS}
}

// onward is a temperature at t if it goes on as at the instants before, °C: by a parabola. It may be off by twice its bend and twice what a cubic would add,
// K (own choice), and by a little of the swings after a corner of the old surroundings.
func (e *settles) onward(by []float64, t float64) (c, slack float64) {
	if e.backS == 0 {
		return by[0], slackKeptK
	}
	share := (t - e.sinceS) / e.backS
	bend := share * (share + 1) / 2 * (by[3] - 2*by[2] + by[1])
	cubic := share * (share + 1) * (share + 2) / 6 * (by[3] - 3*by[2] + 3*by[1] - by[0])
	c = by[3] + share*(by[3]-by[2]) + bend
	return c, slackKeptK + 2*math.Abs(bend) + 2*math.Abs(cubic) + swingShare*e.bentK
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

// keep keeps the temperature of a place at t, °C, within what is possible; by are its temperatures at the instants before, lo and hi what can have come in.
func (e *settles) keep(c, t float64, by []float64, lo, hi float64) float64 {
	on, slack := e.onward(by, t)
	return clamp(max(on+lo-slack, min(on+hi+slack, c)), e.within)
}

// settlingOf is what the drives are worked out from.
type settlingOf struct {
	s     *solver
	h     *History
	k     [2]float64  // least and greatest conductivity, W/(m·K)
	since int         // step
	now   int         // step
	by    [][]float64 // temperatures of all nodes at the instants before, °C
	faces map[*Exposure]*metFace
}

// conducts gives the least and greatest thermal diffusivity, m²/s, and conductivity, W/(m·K), of the foods at the temperatures that occur.
func (s *solver) conducts(h *History) (alpha, k [2]float64) {
	low, high := s.product.StartC, s.product.StartC
	for _, r := range h.hull {
		low, high = min(low, r[0]), max(high, r[1])
	}
	alpha, k = [2]float64{math.Inf(1), 0}, [2]float64{math.Inf(1), 0}
	for _, f := range s.product.Foods() {
		for n := range 9 {
			q := f.Props(low + (high-low)*float64(n)/8)
			one := s.options.ConductivityFactor * q.KWmK
			k = [2]float64{min(k[0], one), max(k[1], one)}
			one /= q.RhoKgM3 * q.CJkgK
			alpha = [2]float64{min(alpha[0], one), max(alpha[1], one)}
		}
	}
	return alpha, k
}

// leastFilm is a film by conductivity below which a face counts as one without, 1/m.
const leastFilm = 1e-3

// nodesMiss is by what share of the range over the nodes of a face the drive between them may lie beyond it (own choice).
const nodesMiss = 0.02

// drivesOf works out what the faces drive in from the beginning of the step since to the end of what is kept in the step now.
func (s *solver) drivesOf(h *History, e *settles, since, now int) {
	of := settlingOf{s: s, h: h, since: since, now: now, by: make([][]float64, h.body.nodes.count())}
	_, of.k = s.conducts(h)
	e.uneven = of.k[1] / of.k[0]
	s.before(h, e, of.by)
	e.within = [2]float64{math.Inf(-1), math.Inf(1)}
	if s.marches() {
		e.within = of.within(e)
	}
	for a := range s.used {
		switch {
		case s.ball != nil && a > 0:
		case s.kinds[a] == planeFull:
			e.drives = append(e.drives, of.drive(e, a, -1), of.drive(e, a, 1))
		default:
			e.drives = append(e.drives, of.drive(e, a, 0))
		}
	}
}

// before fills the temperatures of all nodes at the instants before.
func (s *solver) before(h *History, e *settles, by [][]float64) {
	clear(by)
	if e.backS == 0 { // a held surface is at its new temperature at this instant
		for i := range by {
			by[i] = []float64{s.product.StartC}
		}
		return
	}
	for _, t := range e.before() {
		h.field.at(t).grid(h.body.buf)
		for i, c := range h.body.buf {
			by[i] = append(by[i], c)
		}
	}
}

// drive works out that of one face.
func (of *settlingOf) drive(e *settles, axis, side int) drive {
	s := of.s
	face := s.faces[axis][1]
	if side < 0 {
		face = s.faces[axis][0]
	}
	d := drive{axis: axis, side: side, exact: !s.marches() && s.ball == nil && !s.product.Shape.Layered(), film: [2]float64{math.Inf(1), 0}}
	differ, flow := extent{math.Inf(1), math.Inf(-1)}, extent{math.Inf(1), math.Inf(-1)}
	for m := of.since; m <= of.now; m++ {
		x := s.steps[m].on(face)
		if x.reacts(&s.steps[m]) {
			if !of.reacting(e, &d, face, m, &differ, &flow) {
				return of.anything(d)
			}
			continue
		}
		w := s.constantW(x)
		d.film = [2]float64{min(d.film[0], w/of.k[1]), max(d.film[1], w/of.k[0])}
		times := of.instants(e, m)
		for i := range of.by {
			if of.on(&d, i) && !of.node(e, &d, faceAt{face, m, times}, i, &differ, &flow) {
				return of.anything(d)
			}
		}
	}
	if d.by = differ; d.film[0] < leastFilm {
		d.by, d.flows, d.exact = [2]float64{min(flow[0]/of.k[0], flow[0]/of.k[1]), max(flow[1]/of.k[0], flow[1]/of.k[1])}, true, d.exact && d.film[1] < leastFilm
	}
	wide := nodesMiss * (d.by[1] - d.by[0])
	d.by = [2]float64{d.by[0] - wide, d.by[1] + wide}
	return d
}

// anything is a drive of which no more is known than how far the surroundings and the food are apart at most.
func (of *settlingOf) anything(d drive) drive {
	r := of.h.hull[of.now]
	d.exact, d.flows, d.film, d.by = false, false, [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{r[0] - r[1], r[1] - r[0]}
	return d
}

// on tells whether a node lies on the face.
func (of *settlingOf) on(d *drive, i int) bool {
	x := of.h.body.node(i)
	if d.side < 0 {
		return x[d.axis] == -1
	}
	return x[d.axis] == 1
}

// constantW is the film of an exposure that does not react, with what lies in series, W/(m²·K).
func (s *solver) constantW(x *Exposure) float64 {
	return x.filmUsed(nil, &filmCase{shape: s.product.Shape, size: s.product.Size, foodC: 50, mediumC: 20, airMS: 1}).TotalW
}

// extent is the range of some numbers.
type extent [2]float64

func (x *extent) add(c, by float64) { *x = extent{min(x[0], c-by), max(x[1], c+by)} }

// faceAt is a face in a step, at some instants of the chain, s.
type faceAt struct {
	face   *Face
	step   int
	timesS []float64
}

// node adds what a node of a face asks for in a step: by how much the food there would have to differ, K, and the heat that is more than what went on,
// W/m². It is false where nothing is known.
func (of *settlingOf) node(e *settles, d *drive, at faceAt, node int, differ, flow *extent) bool {
	s, sp := of.s, &of.h.Spans[at.step]
	x := s.steps[at.step].on(at.face)
	w, medium := s.constantW(x), s.raised(&s.steps[at.step], x, nil)
	went := of.went(e, d, at.face, node)
	if went == nil {
		return false
	}
	for _, t := range at.timesS {
		c, slack := e.onward(of.by[node], t)
		q, qSlack := went(t, c)
		if w < leastFilm {
			flow.add(-q, qSlack)
			differ.add(0, math.Inf(1))
			continue
		}
		more := medium.at(t-sp.StartS) - c
		if math.IsInf(w, 1) {
			differ.add(more, slack)
			flow.add(0, math.Inf(1))
			continue
		}
		differ.add(more-q/w, slack+qSlack/w)
		flow.add(w*more-q, w*slack+qSlack)
	}
	return true
}

// went gives what a face went on to take up at an instant, W/m², by the temperature of a node there, and how far that may be off; nil where it is not known.
func (of *settlingOf) went(e *settles, d *drive, face *Face, node int) func(t, c float64) (q, slack float64) {
	if of.since == 0 {
		return func(_, _ float64) (q, slack float64) { return 0, 0 }
	}
	s, sp := of.s, of.h.Spans[of.since-1]
	x := s.steps[of.since-1].on(face)
	if x.reacts(&s.steps[of.since-1]) {
		return of.wentReacting(e, face, node)
	}
	if w := s.constantW(x); !math.IsInf(w, 1) {
		if w < leastFilm {
			return func(_, _ float64) (q, slack float64) { return 0, 0 }
		}
		medium := s.raised(&s.steps[of.since-1], x, nil)
		return func(t, c float64) (q, slack float64) {
			_, off := e.onward(of.by[node], t)
			return w * (medium.onward(sp.EndS-sp.StartS, t-sp.StartS) - c), w * off
		}
	}
	if s.ball != nil {
		return nil
	}
	before, after := of.slope(d, node, e.sinceS-3*e.backS), of.slope(d, node, e.sinceS)
	k := (of.k[0] + of.k[1]) / 2
	return func(t, _ float64) (q, slack float64) {
		change := (after - before) * (t - e.sinceS) / (3 * e.backS)
		most := of.k[1] * (math.Abs(after) + math.Abs(change))
		return k * (after + change), most*slopeOff + (of.k[1]-of.k[0])/2*(math.Abs(after)+math.Abs(change)) + of.k[1]*math.Abs(change)
	}
}

// slopeOff is the share by which a slope at a surface may be off, and slopePart the share of the half thickness that it is taken over (own choice).
const slopeOff, slopePart = 0.1, 0.01

// slope is that of the temperature towards a face at a node on it, K/m.
func (of *settlingOf) slope(d *drive, node int, t float64) float64 {
	b := of.h.body
	at := b.place(b.node(node))
	to := [3]*float64{&at.UpM, &at.AcrossM, &at.AlongM}[d.axis]
	step := slopePart * of.s.radii[d.axis]
	if d.side < 0 {
		step = -step
	}
	var c [3]float64
	for i := range c {
		of.h.field.course(b.coord(at), []float64{t}, c[i:i+1])
		*to -= step
	}
	return (3*c[0] - 4*c[1] + c[2]) / (2 * math.Abs(step))
}

// farOff is the depth, over twice the root of time times α, to which nothing has come yet: less than 1e-17 of it.
const farOff = 6.2

// behindFilm is the answer of a half space behind a film to surroundings that rise by 1, at a depth in m, with the film by conductivity, 1/m, and the
// root of time times α, m; divided by that film, in m. The film may be 0 or a little less.
func behindFilm(depthM, film, root float64) float64 {
	z, f := depthM/(2*root), film*root
	if z > farOff {
		return 0
	}
	if math.Abs(f) < 1e-3 { // to the first order in f, by repeated integrals of erfc
		once := math.Exp(-z*z)/math.Sqrt(math.Pi) - z*math.Erfc(z)
		return root * (2*once - f*(math.Erfc(z)-2*z*once))
	}
	return (math.Erfc(z) - expErfc(z, z+f)) / film
}

// expErfc is exp(y²-z²)·erfc(y) without an overflow.
func expErfc(z, y float64) float64 {
	if y < 10 {
		return math.Exp((y-z)*(y+z)) * math.Erfc(y)
	}
	u := 1 / (2 * y * y)
	return math.Exp(-z*z) / (y * math.Sqrt(math.Pi)) * (1 - u*(1-3*u*(1-5*u*(1-7*u))))
}

// flat is the answer to a drive of 1 at a depth under a plane face.
func (d *drive) flat(depthM, film, root float64) float64 {
	switch {
	case d.flows:
		return behindFilm(depthM, 0, root)
	case math.IsInf(film, 1):
		return math.Erfc(depthM / (2 * root))
	}
	return film * behindFilm(depthM, film, root)
}

// inSphere is the answer at r from the centre of a sphere.
func (d *drive) inSphere(radiusM, r, film, root float64) float64 {
	r = max(r, 1e-3*radiusM)
	scale := radiusM / r
	switch {
	case d.flows:
		film = 0
	case math.IsInf(film, 1):
		return scale * (math.Erfc((radiusM-r)/(2*root)) - math.Erfc((radiusM+r)/(2*root)))
	default:
		scale *= film
	}
	film -= 1 / radiusM
	return scale * (behindFilm(radiusM-r, film, root) - behindFilm(radiusM+r, film, root))
}

// held is the film by conductivity of a face that is held.
var held = [2]float64{math.Inf(1), math.Inf(1)}

// inPlate is the most that a drive of 1 at one side of a plate does at a depth, with nothing let out at the other: reflected there and here, or, where
// that has come to and fro, all that came in, spread.
func (d *drive) inPlate(depthM, thickM, root float64) float64 {
	if 2*root < thickM {
		return d.flat(depthM, d.film[1], root) + d.flat(2*thickM-depthM, d.film[1], root) + d.flat(2*thickM+depthM, d.film[1], root) + d.flat(4*thickM-depthM, d.film[1], root)
	}
	all := root*root/thickM + thickM/3
	switch {
	case d.flows:
		return all
	case math.IsInf(d.film[1], 1):
		return 1
	}
	return min(1, d.film[1]*all)
}

// throughLayers is the most that a drive of 1 at a face of layers does at a depth under it. What can be at the far side of a layer, with nothing let
// out there, is what the next one is held at.
func (e *settles) throughLayers(s *solver, d *drive, depthM, root float64) float64 {
	layers := s.product.Layers
	most, on := 1.0, d
	for i := range layers {
		l := &layers[i]
		if d.side < 0 {
			l = &layers[len(layers)-1-i]
		}
		part := on.inPlate(min(depthM, l.ThicknessM), l.ThicknessM, root)
		if i > 0 {
			part = min(1, e.uneven*part)
		}
		most *= part
		if depthM -= l.ThicknessM; depthM <= 0 {
			break
		}
		on = &drive{film: held}
	}
	return most
}

// answer is the least and the most that the food at a place takes up of a drive of 1, and how much of a bend of the surroundings before may have come in.
type answer struct{ least, most, bend float64 }

// farZ is from how many times 2√(αt) on nothing comes in.
const farZ = 6

// answered gives the answer to a drive at a place's coordinate, tau s after it began. Of a spheroid the coordinate is the depth.
func (e *settles) answered(s *solver, d *drive, x, tau float64) (a answer) {
	r := s.radii[d.axis]
	root := [2]float64{math.Sqrt(e.alpha[0] * tau), math.Sqrt(e.alpha[1] * tau)}
	one := root[0] == root[1] && d.film[0] == d.film[1] // least and most are the same, as of a food of constant properties
	depth, far := r-math.Abs(x), r+math.Abs(x)          // of both faces
	switch {
	case s.ball != nil:
		depth = x
	case d.side != 0:
		depth = r - float64(d.side)*x
	}
	if depth > 2*farZ*math.Sqrt(e.alpha[1]*(tau+3*e.backS+s.settle)) {
		return a
	}
	if bentRoot := math.Sqrt(e.alpha[1] * (tau + 3*e.backS + s.settle)); e.bentK > 0 {
		a.bend = min(1, 4*math.Erfc(depth/(2*bentRoot)))
		if s.product.Shape.Layered() {
			a.bend = min(1, 2*e.throughLayers(s, &drive{side: d.side, film: held}, depth, bentRoot))
		}
	}
	switch {
	case s.ball != nil: // 4·erfc(z) is above the answer of a held sphere from a quarter of the radius out, the other within
		z := depth / (2 * root[1])
		a.most = min(1, max(4*math.Erfc(z), 16*z/(3*math.Sqrt(math.Pi))*math.Exp(-z*z)))
	case s.kinds[d.axis] == spherical:
		a.most = d.inSphere(r, math.Abs(x), d.film[1], root[1])
		if a.least = a.most; !one {
			a.least = d.inSphere(r, math.Abs(x), d.film[0], root[0])
		}
	case s.kinds[d.axis] == radial:
		a.most = d.inSphere(r, math.Abs(x), d.film[1], root[1])
		a.least = d.flat(depth, d.film[0], root[0])
	case s.product.Shape.Layered():
		a.most = e.throughLayers(s, d, depth, root[1])
		if d.side == 0 {
			a.most += e.throughLayers(s, d, far, root[1])
		}
	default:
		a.most = d.flat(depth, d.film[1], root[1])
		if a.least = a.most; !one {
			a.least = d.flat(depth, d.film[0], root[0])
		}
		if d.side == 0 {
			a.most += d.flat(far, d.film[1], root[1])
		}
	}
	if !d.exact { // where conductivity follows the temperature it is the integral of conductivity that is answered like this
		a.least = 0
		if a.most *= e.uneven; !d.flows {
			a.most = min(1, a.most)
		}
	}
	return a
}

// came gives the least and the most that has come in at a place by the answers to the drives.
func (e *settles) came(answers []answer) (lo, hi float64) {
	least, most := math.Inf(1), math.Inf(-1)
	flows := false
	for i := range e.drives {
		d := &e.drives[i]
		least, most, flows = min(least, d.by[0]), max(most, d.by[1]), flows || d.flows
		lo += min(0, d.by[0]) * answers[i].most
		hi += max(0, d.by[1]) * answers[i].most
	}
	switch {
	case least > 0:
		lo, hi = e.oneSided(answers, flows, [2]float64{least, most}, hi, 0)
	case most < 0:
		hi, lo = e.oneSided(answers, flows, [2]float64{most, least}, lo, 1)
	}
	if e.bentK > 0 {
		for _, a := range answers {
			lo, hi = lo-a.bend*e.bentK, hi+a.bend*e.bentK
		}
	}
	return lo, hi
}

// oneSided is came where all drives have one sign: the end nearer to nought and the other. of are the drive nearest to nought and the farthest, far is
// what the faces together would do if none took back what another gave, and near is which end of a drive is the nearer one.
func (e *settles) oneSided(answers []answer, flows bool, of [2]float64, far float64, near int) (nearer, farther float64) {
	alone := 0.0 // each face by itself, less what goes out by the others
	none, all := 1.0, 1.0
	for i := range e.drives {
		part := e.drives[i].by[near] * answers[i].least
		for j := range e.drives {
			if j != i {
				part *= 1 - min(1, answers[j].most)
			}
		}
		alone += part
		none *= 1 - min(1, answers[i].least)
		all *= 1 - min(1, answers[i].most)
	}
	if flows {
		return alone, far
	}
	together := of[0] * (1 - none) // all by the least, as a product of axes
	if math.Abs(alone) > math.Abs(together) {
		together = alone
	}
	if f := of[1] * (1 - all); math.Abs(f) < math.Abs(far) {
		far = f
	}
	return together, far
}

// under is where a drive is answered: the coordinate on its axis, or the depth in a spheroid, of which four fifths are taken (own choice) as it is known about.
func (s *solver) under(b *body, d *drive, p Place) float64 {
	if b.ball != nil {
		return 0.8 * b.ball.depthM(p)
	}
	return [3]float64{p.UpM, p.AcrossM, p.AlongM}[d.axis]
}

// early keeps the courses of a place; what it needs of that place it has until another is asked for.
type early struct {
	s   *solver
	at  Place
	e   *settles // nil: nothing is known of the place yet
	by  []float64
	now []answer
}

// keep keeps the temperature of a place at t, by its coordinates; before gives its temperatures at instants.
func (k *early) keep(h *History, p Place, c, t float64, before func(times, out []float64)) float64 {
	e := settlingAt(h.settling, t)
	if e == nil {
		return c
	}
	if e != k.e || p != k.at {
		times := e.before()
		k.at, k.e, k.by, k.now = p, e, slices.Grow(k.by[:0], len(times))[:len(times)], slices.Grow(k.now[:0], len(e.drives))[:len(e.drives)]
		before(times, k.by)
		if e.backS == 0 { // a held surface is at its new temperature at this instant
			k.by[0] = k.s.product.StartC
		}
	}
	for i := range e.drives {
		k.now[i] = e.answered(k.s, &e.drives[i], k.s.under(h.body, &e.drives[i], p), t-e.sinceS)
	}
	lo, hi := e.came(k.now)
	return e.keep(c, t, k.by, lo, hi)
}

// settled keeps the beginnings of steps of a scan within what is possible.
func (s *solver) settled(h *History, sc *Scan) {
	n := len(sc.Spots)
	var e *settles
	var by [][]float64 // by spot
	var of []spotsOf   // by drive
	var now []answer
	for k, t := range sc.TimesS {
		at := settlingAt(h.settling, t)
		if at == nil {
			continue
		}
		if at != e {
			e, by, of, now = at, make([][]float64, n), of[:0], make([]answer, len(at.drives))
			s.before(h, e, by)
			for i := range e.drives {
				of = append(of, s.spotsOf(h.body, &e.drives[i], sc.Spots))
			}
		}
		for j := range of {
			for i, x := range of[j].x {
				of[j].answers[i] = e.answered(s, &e.drives[j], x, t-e.sinceS)
			}
		}
		for i := range sc.Spots {
			for j := range of {
				now[j] = of[j].answers[of[j].which[i]]
			}
			lo, hi := e.came(now)
			sc.C[i][k] = e.keep(sc.C[i][k], t, by[i], lo, hi)
		}
	}
}

// spotsOf are the different coordinates of the spots of a scan for a drive, and which spot has which.
type spotsOf struct {
	x       []float64
	answers []answer
	which   []int
}

func (s *solver) spotsOf(b *body, d *drive, spots []Spot) spotsOf {
	of := spotsOf{which: make([]int, len(spots))}
	known := map[float64]int{}
	for i := range spots {
		x := s.under(b, d, spots[i].Place)
		j, ok := known[x]
		if !ok {
			j = len(of.x)
			known[x] = j
			of.x = append(of.x, x)
		}
		of.which[i] = j
	}
	of.answers = make([]answer, len(of.x))
	return of
}

// settledSamples does the same for samples: for the points, and for the coldest and the hottest place, which the polynomials alone may name elsewhere.
func (h *History) settledSamples(s *Samples) {
	for k, t := range s.TimesS {
		if settlingAt(h.settling, t) == nil {
			continue
		}
		s.Points[0][k] = h.At(h.Points[0].Place, t)
		sc := &Scan{TimesS: []float64{t}}
		h.lookAt(sc)
		s.ColdestAt[k], s.Coldest[k] = h.utmost(sc, s.ColdestAt[k], 1)
		s.HottestAt[k], s.Hottest[k] = h.utmost(sc, s.HottestAt[k], -1)
	}
}

// utmost finds the coldest place of a scan of one instant, or with sign -1 the hottest: from its coldest spot on, or from a place that may be colder
// still, along each axis between the nodes beside. Of places as cold it keeps the one nearer to the centre.
func (h *History) utmost(sc *Scan, maybe Place, sign float64) (Place, float64) {
	b, t := h.body, sc.TimesS[0]
	best := b.order[0]
	for _, i := range b.order {
		if sign*(sc.C[i][0]-sc.C[best][0]) < -flatK {
			best = i
		}
	}
	place, c := b.place(b.node(best)), sc.C[best][0]
	if is := h.At(maybe, t); sign*(is-c) < flatK {
		place, c = maybe, is
	}
	for a, nodes := range b.nodes.x {
		if len(nodes) < 2 {
			continue
		}
		x := b.coord(place)
		i, _ := slices.BinarySearch(nodes, x[a])
		x[a] = least(nodes[max(0, i-1)], nodes[min(len(nodes)-1, i+1)], func(y float64) float64 {
			x[a] = y
			return sign * h.At(b.place(x), t)
		})
		if is := h.At(b.place(x), t); sign*(is-c) < -flatK {
			place, c = b.place(x), is
		}
	}
	return place, c
}

// least is where between two ends a function with one trough is least, by the golden section.
func least(lo, hi float64, f func(float64) float64) float64 {
	const part = 0.6180339887498949
	x, y := hi-part*(hi-lo), lo+part*(hi-lo)
	fx, fy := f(x), f(y)
	for range 25 {
		if fx < fy {
			hi, y, fy = y, x, fx
			x = hi - part*(hi-lo)
			fx = f(x)
		} else {
			lo, x, fx = x, y, fy
			y = lo + part*(hi-lo)
			fy = f(y)
		}
	}
	return (lo + hi) / 2
}
