package model

import "math"

// newMarched lays out the march of a product.
func (s *solver) newMarched(e effort) *marched {
	laws := s.lawsOf()
	f := &marched{track: &track{}}
	if e.rough {
		f.track.data = s.tmp.rough
	}
	switch {
	case s.product.Shape.Oval() && s.front:
		s.layShells(f, laws[0], e)
	case s.product.Shape.Oval():
		s.layRound(f, laws[0], e)
	case s.used > 1 || s.polynomial():
		s.laySpace(f, laws[0], e)
	default:
		s.layLine(f, laws, e)
	}
	f.track.n = len(f.mesh.weights())
	if m, ok := f.state.(*spaceMarch); ok && m.ice != nil {
		f.track.ice = laws[0]
	}
	f.now = make([]float64, f.track.n)
	f.shot = f.mesh.shot(f, f.now)
	return f
}

// layLine lays out a body of one axis, a layered slab, or a stirred food.
func (s *solver) layLine(f *marched, laws []*law, e effort) {
	kind, r := s.kinds[0], s.radii[0]
	if s.used == 0 {
		kind, r = lumped, s.product.Size.VolumeM3/s.product.Size.AreaM2
	}
	kinds := s.kinds
	if s.product.Shape.Layered() {
		kind, kinds[0] = planeFull, planeFull
	}
	crowd := lineCrowd
	if kind == radial || kind == spherical {
		crowd = roundCrowd
	}
	n := lineNodes
	for _, l := range laws {
		if s.front && l.sharp() {
			n = sharpNodes
		}
	}
	g := newLineGrid(s.product, kind, r, e.volumes(n), crowd)
	m := newLineMarch(g, laws)
	m.lower, m.upper = s.faces[0][0], s.faces[0][1]
	m.fill(s.product.StartC)
	line := newLineMesh(g)
	f.state, f.mesh = m, line
	for _, i := range g.food {
		if s.front {
			f.laws = append(f.laws, laws[i])
		}
	}
	nd := &nodes{x: [3][]float64{make([]float64, len(g.x)), {0}, {0}}}
	for i, x := range line.places() {
		nd.x[0][i] = x / g.r
	}
	f.body = newBody(body{kinds: kinds, radii: s.radii}, nd)
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
			n, crowd := s.cutNodes(a)
			axes[a] = cutAxis(s.kinds[a], s.radii[a], e.volumes(n), crowd, s.faces[a])
			nd.x[a] = axes[a].x
			continue
		}
		by[a] = s.stretchOf(a)
		axes[a] = smoothAxis(s.kinds[a], s.radii[a], s.smoothNodes(a, e), by[a], s.faces[a])
		axes[a].bodyNodes(nd, a, s.used)
	}
	march, mesh := newSpaceMarch(axes, l, s.product.StartC), newSpaceMesh(axes)
	if !front {
		mesh.seenAt(nd)
	}
	f.state, f.mesh = march, mesh
	if !front {
		f.state = newModesMarch(march, e.tolK/4)
	}
	f.body = newBody(body{kinds: s.kinds, radii: s.radii, by: by}, nd)
}

// marchSettleS is the longest time after a change of surroundings from which the error is held where polynomials in two or three
// directions are marched, s: the first minutes of a thick food would need many times the polynomials of all that follows.
const marchSettleS = 300

// crowding is how thin a layer at a far face is taken to be, by the thinnest half axis.
const crowding = 1.5

// crowded is the factor by which an axis is crowded at its faces.
func (s *solver) crowded(a int) float64 {
	return max(0.1, min(1, crowding*s.thinnest()/s.radii[a]))
}

// thinnest is the shortest half axis, m.
func (s *solver) thinnest() float64 {
	thin := s.radii[0]
	for _, r := range s.radii[1:s.used] {
		thin = min(thin, r)
	}
	return thin
}

// wetFaces tells whether moisture counts on faces of more directions than one: near boiling its flow is steep, and so much steeper at an edge
// than beside it that the food there needs more polynomials than dry.
func (s *solver) wetFaces() bool {
	if s.used == 1 || s.ball != nil {
		return false
	}
	for i := range s.steps {
		for _, e := range exposures(s.product.Shape, &s.steps[i]) {
			if e.wet() || e.steamWithAir(&s.steps[i]) {
				return true
			}
		}
	}
	return false
}

// stretchOf is the stretch of an axis.
func (s *solver) stretchOf(a int) stretch { return stretchFor(s.crowded(a)) }

// mostNodes is how many nodes a brick may have: more take tens of seconds, and a track that is too long to keep. It binds bricks of a metre
// with steps of seconds, whose first layers are then left coarse: the stated error tells.
const mostNodes = 16000

// smoothNodes is how many polynomials an axis gets.
func (s *solver) smoothNodes(a int, e effort) int {
	n := s.freeNodes(a, e)
	if s.used == 3 {
		all := float64(s.freeNodes(0, e) * s.freeNodes(1, e) * s.freeNodes(2, e))
		n = int(float64(n) * min(1, math.Cbrt(mostNodes/all)))
	}
	if e.rough {
		n += s.fewer(a, 0) - s.degrees(a, 0)
	}
	return n
}

// freeNodes is how many an axis needs by itself: a stretched one as many as one of its crowded radius, and some for the stretch.
func (s *solver) freeNodes(a int, e effort) int {
	by := s.crowded(a)
	fo := s.foMin[a]
	s.foMin[a] /= by * by
	more := 2 * (1 - by)
	if s.wetFaces() {
		more = s.wetNodes(a)
	}
	n := int(math.Round((float64(s.degrees(a, 0)) + more) * e.more))
	s.foMin[a] = fo
	return min(n, maxDegrees)
}

// wetNodes is how many polynomials more an axis gets where moisture counts on faces of more than one direction: those that are longer than
// the thinnest have layers as thin as its own, and no place takes as long to come to rest as the middle of a disc.
func (s *solver) wetNodes(a int) float64 {
	more := 5 * (1 - s.thinnest()/s.radii[a])
	if s.kinds[a] == radial {
		more *= 2
	}
	if !s.sharp[a] { // those of a sharp film are many already
		more += 1.5
	}
	if s.kinds[a] == planeFull {
		more *= 1.85
	}
	return more
}

// volumes is how many control volumes an axis gets of n.
func (e effort) volumes(n int) int {
	if e.rough {
		return int(math.Round(float64(n) * e.more * e.fewer))
	}
	return int(math.Round(float64(n) * e.more))
}

// bodyNodes gives the nodes that a body with so many used axes looks at on an axis of polynomials, one with three as close as one with two.
func (a *spaceAxis) bodyNodes(nd *nodes, axis, used int) {
	x := nodesOf(a.kind, min(used, 2), a.n, false)
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

// lineNodes is how many volumes a half axis gets at first.
const lineNodes = 42

// sharpNodes is how many a half axis gets whose ice forms all but at one temperature.
const sharpNodes = 84

// cutNodes is how many a half axis gets where a front moves through more than one, and how they crowd: in three directions fewer where the two
// faces of one axis are not alike, which makes twice the volumes. Thin axes get fewer than wide ones, since the closest nodes set the number of
// stages; wide ones are crowded more, so that a front begins at all faces alike.
func (s *solver) cutNodes(a int) (n int, crowd float64) {
	most := 18.0
	switch {
	case s.used == 2:
		most = 30
	case s.kinds[0] == planeFull:
		most = 14
	}
	mean := 1.0
	for _, r := range s.radii[:s.used] {
		mean *= r
	}
	mean = math.Pow(mean, 1/float64(s.used))
	return int(math.Round(most * max(0.75, min(1.25, math.Sqrt(s.radii[a]/mean))))), cutCrowd + 0.7*math.Log(s.radii[a]/s.thinnest())
}
