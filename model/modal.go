package model

import (
	"cmp"
	"math"
	"slices"
)

// functions are what the temperature of a body that is no product of axes is a sum of.
type functions interface {
	size() int
	// terms gives what acts on the functions in a step; it lies in mem.
	terms(cs *chainStep, mem *slab) terms
	// one fills out with the sum that is 1 everywhere, mean with the volume mean of each function.
	one(out []float64)
	mean(out []float64)
	// values fills out with the functions at a place.
	values(x coord, out []float64)
	// grid fills out with the sum q at all nodes, the last axis fastest.
	grid(nd *nodes, q, out []float64)
	// slice gives the sum q along one axis through a place as polynomials of the axis' base; node as in snapshot.
	slice(nd *nodes, axis int, x coord, node [3]int, q, out []float64)
}

// terms are the equations of a step: mass·q' = -stiff·q + Σ drive[g]·T_g for the sum q, where held leaves it free.
type terms struct {
	mass  []float64   // n
	stiff []float64   // n×n, symmetric, with the films
	drive [][]float64 // by medium, n
	held  []holding
}

// holding binds a sum: v·q is the temperature of a medium, or 0 where there is none (-1).
type holding struct {
	v     []float64 // n
	group int
	share float64 // of the medium's temperature; 1 for the whole
}

// modal is a field as a sum over the modes of the whole body, found anew in every step. It takes any media, as tensor does.
type modal struct {
	fn    functions
	nodes *nodes
	start float64
	means []float64    // by function
	steps []*modalStep // one for each step; of steps that are alike the first again
	known []*modalStep // that were ever made
	first []int        // by step: its first segment
	segs  []modalSeg
	now   modalShot
	mem   *slab // for what lives as long as the field
	tmp   *slab // for what is needed within a call
}

type modalStep struct {
	of     *chainStep
	rate   []float64   // k, 1/s, rising
	modes  []float64   // k×n: row i is mode i as a sum of functions
	mass   []float64   // n
	groups []response  // by medium, as sums of functions
	lag    [][]float64 // by medium: w of its response by mode
}

// alike tells whether two steps have the same modes and responses.
func (cs *chainStep) alike(o *chainStep) bool {
	return cs.props == o.props && slices.Equal(cs.layers, o.layers) && cs.lo == o.lo && cs.up == o.up && len(cs.media) == len(o.media)
}

type modalSeg struct {
	t0, t1 float64
	step   *modalStep
	level  []float64 // by medium, at t0
	slope  []float64 // by medium, K/s
	c      []float64 // what decays, by mode, at t0
}

func newModal(fn functions, nd *nodes, startC float64, mem, tmp *slab) *modal {
	n := fn.size()
	f := &modal{fn: fn, nodes: nd, start: startC, means: mem.take(n), mem: mem, tmp: tmp}
	fn.mean(f.means)
	f.now = modalShot{f: f, q: make([]float64, n), amp: make([]float64, n)}
	return f
}

// run appends one step.
func (f *modal) run(cs *chainStep) {
	var st *modalStep
	for _, old := range f.known {
		if old.of.alike(cs) {
			st = old
			break
		}
	}
	if st == nil {
		st = f.step(cs)
		f.known = append(f.known, st)
	}
	mark := f.tmp.mark()
	q := f.tmp.take(f.fn.size())
	if len(f.segs) == 0 {
		f.fn.one(q)
		for i := range q {
			q[i] *= f.start
		}
	} else {
		last := &f.segs[len(f.segs)-1]
		f.sum(last, last.t1-last.t0, q)
	}
	f.first = append(f.first, len(f.segs))
	f.steps = append(f.steps, st)
	f.segments(cs, st, q)
	f.tmp.back(mark)
}

// pop takes the last step back.
func (f *modal) pop() {
	last := len(f.steps) - 1
	f.segs = f.segs[:f.first[last]]
	f.steps, f.first = f.steps[:last], f.first[:last]
}

// step finds the modes of a step.
func (f *modal) step(cs *chainStep) *modalStep {
	n := f.fn.size()
	mark := f.tmp.mark()
	te := f.fn.terms(cs, f.tmp)
	root := f.tmp.take(n) // the sum times this has a mass of 1
	for i, m := range te.mass {
		root[i] = math.Sqrt(m)
	}
	a := te.stiff
	for i := range root {
		row := a[i*n:][:n]
		for j := range row {
			row[j] /= root[i] * root[j]
		}
	}
	for g := range te.drive {
		for i := range root {
			te.drive[g][i] /= root[i]
		}
	}
	for _, h := range te.held {
		for i := range root {
			h.v[i] /= root[i]
		}
	}
	b := bind(f.tmp, n, a, te.held, len(cs.media))
	r, k := len(te.held), n-len(te.held)
	inner := f.tmp.take(k * k)
	for i := 0; i < k; i++ {
		copy(inner[i*k:][:k], a[(r+i)*n+r:][:k])
	}
	st := &modalStep{of: cs, mass: f.mem.take(n), rate: f.mem.take(k), modes: f.mem.take(k * n)}
	copy(st.mass, te.mass)
	rate, vec := eigen(f.tmp, k, inner)
	for i := range rate {
		st.rate[i] = max(rate[i], 0)
	}
	for i := 0; i < k; i++ {
		row := st.modes[i*n:][:n]
		copy(row[r:], vec[i*k:][:k])
		b.back(row)
		for j := range row {
			row[j] /= root[j]
		}
	}
	y, z := f.tmp.take(n), f.tmp.take(k)
	for g := range cs.media {
		st.respond(f, g, respondTo{te.drive[g], b, a, root, vec, y, z})
	}
	f.tmp.back(mark)
	return st
}

// respondTo is what a response is made of.
type respondTo struct {
	drive []float64
	b     *binding
	a     []float64 // bound
	root  []float64
	vec   []float64 // rows: modes of what is free
	y, z  []float64 // room
}

// respond adds the response to medium g.
func (st *modalStep) respond(f *modal, g int, in respondTo) {
	n, k := len(in.y), len(in.z)
	r := n - k
	res, lag := response{f.mem.take(n), f.mem.take(n)}, f.mem.take(k)
	y := in.y
	copy(y, in.drive)
	in.b.forward(y)
	fixed := in.b.fixed[g] // r: what the medium holds
	for i := range in.z {
		in.z[i] = y[r+i]
		for j, x := range fixed {
			in.z[i] -= in.a[(r+i)*n+j] * x
		}
	}
	clear(y)
	copy(y, fixed)
	free := y[r:]
	for i, rate := range st.rate {
		row := in.vec[i*k:][:k]
		sum := 0.0
		for j, x := range in.z {
			sum += row[j] * x
		}
		if rate <= 0 {
			continue
		}
		s := sum / rate
		lag[i] = s / rate
		for j, x := range row {
			free[j] += s * x
		}
	}
	in.b.back(y)
	for i := range y {
		res.s[i] = y[i] / in.root[i]
	}
	addColumns(res.w, st.modes, n, lag)
	st.groups = append(st.groups, res)
	st.lag = append(st.lag, lag)
}

// binding takes sums apart into what is held, in front, and what is free, by Householder's reflections.
type binding struct {
	v     [][]float64 // the vectors of the reflections, each as long as what it leaves
	fixed [][]float64 // by medium: what it holds, for 1 K; nil where it holds nothing
}

// bind turns the matrix a so that what is held stands in front; the holdings are overwritten.
func bind(mem *slab, n int, a []float64, held []holding, media int) *binding {
	b := &binding{fixed: make([][]float64, media)}
	if len(held) == 0 {
		return b
	}
	for k, h := range held {
		b.forward(h.v)
		x := mem.take(n - k)
		copy(x, h.v[k:])
		rest := 0.0
		for _, c := range x[1:] {
			rest += c * c
		}
		h.v[k] = -math.Copysign(math.Sqrt(x[0]*x[0]+rest), x[0])
		x[0] -= h.v[k]
		scale := math.Sqrt(2 / (x[0]*x[0] + rest))
		for i := range x {
			x[i] *= scale
		}
		b.v = append(b.v, x)
		if h.group >= 0 && b.fixed[h.group] == nil {
			b.fixed[h.group] = mem.take(len(held))
		}
	}
	for g, fixed := range b.fixed { // row by row, as the holdings are a triangle now
		for k := range fixed {
			want := 0.0
			if held[k].group == g {
				want = held[k].share
			}
			for j := 0; j < k; j++ {
				want -= held[k].v[j] * fixed[j]
			}
			fixed[k] = want / held[k].v[k]
		}
	}
	for i := 0; i < n; i++ {
		b.forward(a[i*n:][:n])
	}
	col := mem.take(n)
	for j := 0; j < n; j++ {
		for i := range col {
			col[i] = a[i*n+j]
		}
		b.forward(col)
		for i := range col {
			a[i*n+j] = col[i]
		}
	}
	return b
}

// forward turns a sum so that what is held stands in front.
func (b *binding) forward(y []float64) {
	for _, x := range b.v {
		reflect(x, y[len(y)-len(x):])
	}
}

// back is the inverse of forward.
func (b *binding) back(y []float64) {
	for k := len(b.v) - 1; k >= 0; k-- {
		reflect(b.v[k], y[len(y)-len(b.v[k]):])
	}
}

// reflect applies 1 - x·xᵀ.
func reflect(x, y []float64) {
	dot := 0.0
	for i, c := range x {
		dot += c * y[i]
	}
	for i, c := range x {
		y[i] -= dot * c
	}
}

// segments appends the stretches between the knots of the media; q is the field at the start of the step and is overwritten.
func (f *modal) segments(cs *chainStep, st *modalStep, q []float64) {
	n, k, m := len(q), len(st.rate), len(cs.media)
	t0 := f.endS()
	reads := make([]cursor, m)
	for g := range reads {
		reads[g] = cursor{x: cs.media[g].TimesS, y: cs.media[g].C}
	}
	var last *modalSeg
	for i, from := range cs.knots {
		to := cs.durS
		if i+1 < len(cs.knots) {
			to = min(to, cs.knots[i+1])
		}
		if to <= from && i > 0 {
			break
		}
		sg := modalSeg{t0: t0 + from, t1: t0 + to, step: st, level: f.mem.take(m), slope: f.mem.take(m), c: f.mem.take(k)}
		for g := range reads {
			if sg.level[g] = cs.media[g].at(0); last != nil {
				sg.level[g] = last.level[g] + last.slope[g]*(last.t1-last.t0)
			}
			if len(reads[g].x) > 1 && to > from {
				sg.slope[g] = (reads[g].to(to) - sg.level[g]) / (to - from)
			}
		}
		if last == nil {
			for g, r := range st.groups {
				for j, s := range r.s {
					q[j] -= s*sg.level[g] - r.w[j]*sg.slope[g]
				}
			}
			for j := range q {
				q[j] *= st.mass[j]
			}
			addRows(sg.c, st.modes, n, q)
		} else {
			for j, c := range last.c {
				sg.c[j] = c * math.Exp(-st.rate[j]*(last.t1-last.t0))
			}
			for g := range reads { // the level goes on, the slope changes
				if turn := sg.slope[g] - last.slope[g]; turn != 0 {
					add(sg.c, turn, st.lag[g])
				}
			}
		}
		f.segs = append(f.segs, sg)
		if to >= cs.durS {
			break
		}
		last = &f.segs[len(f.segs)-1]
	}
}

// endS is the end of the last segment.
func (f *modal) endS() float64 {
	if len(f.segs) == 0 {
		return 0
	}
	return f.segs[len(f.segs)-1].t1
}

// sum fills q with the field tau after the start of a segment.
func (f *modal) sum(sg *modalSeg, tau float64, q []float64) {
	st, n := sg.step, len(q)
	clear(q)
	for g, r := range st.groups {
		slope := sg.slope[g]
		add(q, sg.level[g]+slope*tau, r.s)
		if slope != 0 {
			add(q, -slope, r.w)
		}
	}
	amp := f.now.amp[:len(st.rate)]
	keep := decays(st.rate, tau, amp)
	for i, c := range sg.c[:keep] {
		amp[i] *= c
	}
	addColumns(q, st.modes, n, amp[:keep])
}

// segAt finds the segment that holds t; at a change the one before it.
func (f *modal) segAt(t float64) *modalSeg {
	i, _ := slices.BinarySearchFunc(f.segs, t, func(sg modalSeg, t float64) int { return cmp.Compare(sg.t1, t) })
	return &f.segs[min(i, len(f.segs)-1)]
}

func (f *modal) course(x coord, times, out []float64) {
	n := f.fn.size()
	phi, v, e := make([]float64, n), make([]float64, n), make([]float64, n)
	f.fn.values(x, phi)
	var in *modalStep
	var s, w []float64 // by medium, at the place
	dot := func(r []float64) (sum float64) {
		for i, p := range phi {
			sum += p * r[i]
		}
		return sum
	}
	for ti, t := range times {
		sg := f.segAt(t)
		st := sg.step
		if st != in {
			in = st
			v = v[:len(st.rate)]
			clear(v)
			addRows(v, st.modes, n, phi)
			s, w = s[:0], w[:0]
			for _, r := range st.groups {
				s, w = append(s, dot(r.s)), append(w, dot(r.w))
			}
		}
		tau := min(max(t-sg.t0, 0), sg.t1-sg.t0)
		sum := 0.0
		for g, slope := range sg.slope {
			sum += s[g]*(sg.level[g]+slope*tau) - w[g]*slope
		}
		keep := decays(st.rate, tau, e[:len(st.rate)])
		for i, c := range sg.c[:keep] {
			sum += c * e[i] * v[i]
		}
		out[ti] = sum
	}
}

// modalShot is a modal field at one instant.
type modalShot struct {
	f   *modal
	q   []float64 // as a sum of functions
	amp []float64 // room for the modes
}

func (f *modal) at(t float64) snapshot {
	sg := f.segAt(t)
	f.sum(sg, min(max(t-sg.t0, 0), sg.t1-sg.t0), f.now.q)
	return &f.now
}

func (s *modalShot) grid(out []float64) { s.f.fn.grid(s.f.nodes, s.q, out) }

func (s *modalShot) slice(axis int, x coord, node [3]int, out []float64) {
	s.f.fn.slice(s.f.nodes, axis, x, node, s.q, out)
}

func (s *modalShot) mean() float64 {
	sum := 0.0
	for i, m := range s.f.means {
		sum += m * s.q[i]
	}
	return sum
}
