package model

import "math"

// marched is a field that was marched: the track of its nodes, and what stands between them.
type marched struct {
	body  *body
	state marcher
	track *track
	mesh  mesh
	laws  []*law    // by node, where fronts are followed; nil where the field is smooth
	now   []float64 // temperatures of the nodes at the instant that was asked for last
	shot  snapshot  // of them
	seen  followed
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
	// shot is a snapshot of the temperatures c of the nodes of f, which lie in this mesh.
	shot(f *marched, c []float64) snapshot
	// words for the report
	String() string
}

func (f *marched) course(x coord, times, out []float64) {
	if m, ok := f.mesh.(weighted); ok && f.track.ice == nil {
		if f.seen.w == nil || f.seen.x != x {
			f.seen = followed{x: x, w: m.placeWeights(x, f.seen.w[:0]), i: none}
		}
		for i, t := range times {
			out[i] = f.seen.at(f.track, f.track.find(t))
		}
		return
	}
	if f.track.ice != nil {
		for i, t := range times {
			f.track.raw(f.track.find(t), f.now)
			out[i], _ = f.track.ice.byU().temperature(f.mesh.at(x, f.now))
		}
		return
	}
	for i, t := range times {
		f.track.all(f.track.find(t), f.now)
		out[i] = f.mesh.at(x, f.now)
	}
}

// weighted is a mesh in which the temperature of a place is a sum over the nodes, and appends the weights of that sum.
type weighted interface {
	placeWeights(x coord, out []float64) []float64
}

// followed is the place that was asked for last, with the temperatures and slopes at both ends of the interval of the track that was asked
// for last there: times that follow one another mostly lie in the same or the next.
type followed struct {
	x      coord
	w      []float64
	i      int // the interval, none at first
	cuts   int // of the track at that time
	c0, s0 float64
	c1, s1 float64
}

// none is no interval, nor one before the first.
const none = -2

func (p *followed) at(k *track, b between) float64 {
	if b.i != p.i || k.cuts != p.cuts {
		if b.i == p.i+1 && k.cuts == p.cuts {
			p.c0, p.s0 = p.c1, p.s1
		} else {
			p.c0, p.s0 = k.sums(b.i, p.w)
		}
		p.c1, p.s1 = k.sums(b.i+1, p.w)
		p.i, p.cuts = b.i, k.cuts
	}
	return b.c0*p.c0 + b.s0*p.s0 + b.c1*p.c1 + b.s1*p.s1
}

func (f *marched) at(t float64) snapshot {
	b := f.track.find(t)
	if s, ok := f.shot.(*smoothShot); ok {
		s.b, s.full = b, false
		return s
	}
	f.track.all(b, f.now)
	return f.shot
}

// marchedShot is a marched field at one instant. Between its nodes nothing is colder or hotter than both.
type marchedShot struct {
	f *marched
	c []float64
}

func (s *marchedShot) grid(out []float64) { s.f.mesh.fill(s.c, out) }

func (s *marchedShot) mean() float64 {
	sum := 0.0
	for i, w := range s.f.mesh.weights() {
		sum += w * s.c[i]
	}
	return sum
}

// smoothShot is one with polynomials through its nodes. What the track kept at both ends of an interval is brought
// to the nodes of the body once for all instants between.
type smoothShot struct {
	marchedShot
	mesh *spaceMesh
	b    between
	full bool // c is filled
	i    int  // the interval that ends belongs to
	cuts int  // of the track at that time
	ends [4][]float64
	all  followed // the volume mean
}

func newSmoothShot(m *spaceMesh, f *marched, c []float64) *smoothShot {
	s := &smoothShot{marchedShot: marchedShot{f, c}, mesh: m, i: none}
	s.all = followed{w: m.w, i: none}
	n := 1
	for a, ax := range m.axes {
		n *= len(m.body[a]) / ax.n
	}
	for k := range s.ends {
		s.ends[k] = make([]float64, n)
	}
	return s
}

func (s *smoothShot) grid(out []float64) {
	k := s.f.track
	if i := s.b.i; i != s.i || k.cuts != s.cuts {
		e := &s.ends
		if i == s.i+1 && k.cuts == s.cuts {
			e[0], e[1], e[2], e[3] = e[2], e[3], e[0], e[1]
		} else {
			c, slope := k.row(i)
			s.mesh.fill(c, e[0])
			s.mesh.fill(slope, e[1])
		}
		c, slope := k.row(i + 1)
		s.mesh.fill(c, e[2])
		s.mesh.fill(slope, e[3])
		s.i, s.cuts = i, k.cuts
	}
	s.b.mix(s.ends[0], s.ends[1], s.ends[2], s.ends[3], out)
}

func (s *smoothShot) mean() float64 {
	return s.all.at(s.f.track, s.b)
}

func (s *smoothShot) slice(axis int, x coord, _ [3]int, out []float64) {
	if !s.full {
		s.f.track.all(s.b, s.c)
		s.full = true
	}
	s.mesh.slice(s.c, axis, x, out)
}

func (f *marched) method() string {
	return "conduction by heat content, marched in time; " + f.mesh.String()
}

// differs gives the largest difference from a rougher march at its nodes, from settle after each change on. Where a front of ice moves it
// leaves out the nodes beside the front: a place there warms by degrees in seconds when the front passes, in both marches, but not in
// the same second.
func (f *marched) differs(h *History, rough *marched) float64 {
	if f.track.ice != nil {
		return f.differsByIce(h, rough)
	}
	worst := 0.0
	mine, other, there := make([]float64, f.track.n), make([]float64, rough.track.n), make([]float64, f.track.n)
	end := rough.track.times[len(rough.track.times)-1]
	onto := rough.mesh.onto(f.mesh)
	grow := 1.4
	if f.laws != nil { // every node turns in its own time
		grow = 1.1
	}
	for i := range h.Spans {
		for _, t := range h.compared(i, grow) {
			f.track.all(f.track.find(t), mine)
			rough.track.all(rough.track.find(min(t, end)), other)
			onto(other, there)
			for j, c := range mine {
				if d := math.Abs(c - there[j]); d > worst && !f.atFront(mine, there, j) {
					worst = d
				}
			}
		}
	}
	return worst
}

// comparedCorners is how many corners of courses two marches of a step are compared after.
const comparedCorners = 60

// compared gives the instants of a span at which two marches are compared: ever further apart by a factor from settle on, and a little after
// corners of courses, where a cubic follows least.
func (h *History) compared(span int, grow float64) (times []float64) {
	sp, knots := &h.Spans[span], h.knots[span]
	for tau := h.settle; ; tau *= grow {
		t := min(sp.StartS+tau, sp.EndS)
		times = append(times, t)
		if t == sp.EndS {
			break
		}
	}
	if len(knots) < 2 {
		return times
	}
	for k, every := 1, 1+len(knots)/comparedCorners; k+1 < len(knots); k += every {
		if t := sp.StartS + knots[k] + (knots[k+1]-knots[k])/5; t > times[0] && t < sp.EndS {
			times = append(times, t)
		}
	}
	return rising(times)
}

// atFront tells whether the front of ice stands beside node j in one march or between the two marches.
func (f *marched) atFront(mine, there []float64, j int) bool {
	if f.laws == nil {
		return false
	}
	zero := f.laws[j].zeroC
	frozen := mine[j] < zero
	if there[j] < zero != frozen {
		return true
	}
	beside := false
	f.mesh.neighbours(j, func(k int) { beside = beside || mine[k] < zero != frozen || there[k] < zero != frozen })
	return beside
}

// lately is the share of the time since a change of surroundings in which a front of ice has just passed.
const lately = 0.02

// differsByIce is differs where a front moves in two or three directions. It looks at the nodes of the rougher march, which lie further from
// what stands between those of the finer one, and leaves out what lies within two of its volumes from a front now or lately: the last ice
// goes in a moment.
func (f *marched) differsByIce(h *History, rough *marched) float64 {
	worst := 0.0
	n := rough.track.n
	mine, fine, other := make([]float64, f.track.n), make([]float64, n), make([]float64, n)
	end := rough.track.times[len(rough.track.times)-1]
	onto := f.mesh.onto(rough.mesh)
	look := func(t float64) {
		f.track.raw(f.track.find(t), mine)
		rough.track.raw(rough.track.find(min(t, end)), other)
		onto(mine, fine)
	}
	cold, warm, next := make([]bool, n), make([]bool, n), make([]bool, n)
	spread := func(here []bool) {
		for range 2 {
			copy(next, here)
			for j, is := range here {
				if is {
					rough.mesh.neighbours(j, func(k int) { next[k] = true })
				}
			}
			copy(here, next)
		}
	}
	for i := range h.Spans {
		sp := &h.Spans[i]
		for tau := h.settle; ; tau *= 1.1 {
			t := min(sp.StartS+tau, sp.EndS)
			clear(cold)
			clear(warm)
			for _, at := range [2]float64{t - lately*(t-sp.StartS), t} {
				look(at)
				for j, u := range other {
					cold[j] = cold[j] || u < 0 || fine[j] < 0
					warm[j] = warm[j] || u >= 0 || fine[j] >= 0
				}
			}
			spread(cold)
			spread(warm)
			for j, u := range other {
				if cold[j] && warm[j] {
					continue
				}
				a, _ := f.track.ice.byU().temperature(u)
				b, _ := f.track.ice.byU().temperature(fine[j])
				worst = max(worst, math.Abs(a-b))
			}
			if t == sp.EndS {
				break
			}
		}
	}
	return worst
}
