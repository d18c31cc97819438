package model

import (
	"math"
	"slices"
	"sync"
)

// A field is the temperature of every place in the food over the whole chain: exact in time as tensor, product of axes or modal, or marched.
// Places are given in the body's own coordinates, one an axis: 0…1 from the centre to the face, or -1…1 between two faces.
type field interface {
	// course fills out with the temperatures of a place at rising times.
	course(x coord, times, out []float64)
	// at makes the snapshot of one instant; it is valid until the next call.
	at(t float64) snapshot
}

// stepped is a field that is made step by step, exact in time.
type stepped interface {
	field
	// run appends a step; pop takes the last one back.
	run(cs *chainStep)
	pop()
}

// snapshot is a field at one instant.
type snapshot interface {
	// grid fills out with the temperatures at all nodes, the last axis fastest.
	grid(out []float64)
	mean() float64
}

// smooth is a snapshot with polynomials between its nodes. Of others nothing between two nodes is colder or hotter than both.
type smooth interface {
	snapshot
	// slice gives the coefficients of the polynomials along one axis through a place; node tells the nodes that the place lies on, -1 where
	// it lies between.
	slice(axis int, x coord, node [3]int, out []float64)
}

// coord is a place in the body's own coordinates.
type coord [3]float64

// chainStep is one step ready to be solved: what no longer depends on the resolution.
type chainStep struct {
	durS   float64 // as it runs
	props  Properties
	layers []Properties // layered slab: by layer from the top
	lo, up [3]film      // by axis
	media  []Course     // by group, each with a point at 0
	knots  []float64    // instants within the step at which the slope of a medium changes, from 0, the first is 0
	lumpW  float64      // stirred: Σ U·A/(ρcV), 1/s
	lumpG  []float64    // stirred: by group, 1/s
}

// nodes are the places at which snapshots are looked at, by axis.
type nodes struct {
	x   [3][]float64
	phi [3][]float64 // phi[a][g*n+m]: polynomial m at node g
}

// tensor is a field as sums over the modes of three axes; unused axes have one mode. It takes any media on any faces.
type tensor struct {
	axes  [3]*axis
	nodes *nodes
	start float64
	steps []*tensorStep
	segs  []tensorSeg
	now   tensorShot
	fades fades
	mem   *slab // for what lives as long as the field
	tmp   *slab // for what is needed within a call
}

type tensorStep struct {
	ax     [3]*axisStep
	lo, up film         // of the first axis
	extra  float64      // rate of a stirred food
	groups []response   // by medium
	e0     [3][]float64 // the constant 1 in modes, by axis
	meanS  []float64    // by medium: mean of response s
	meanW  []float64    // by medium: mean of response w
	gridB  [3][]float64 // gridB[a][g*n+i]: mode i at node g
	held   []response   // groups at all nodes; made when first needed
	even   bool         // there is one medium, which does not change and in the long run holds all of the food at its own temperature
	lines  []response   // one axis: groups as polynomials, made with held
	there  standing     // where course was asked for last
}

// standing is a place in a step: single instants of one place are asked for again and again.
type standing struct {
	x    coord
	v    [3][]float64 // by axis: the modes; nil: nothing was asked for yet
	s, w []float64    // by medium: the response
}

// move goes to a place; it tells whether that is another one, whose responses are not worked out.
func (at *standing) move(x coord, axes *[3]*axis, steps *[3]*axisStep, media int) bool {
	if at.v[0] != nil && at.x == x {
		return false
	}
	if at.v[0] == nil {
		all := make([]float64, axes[0].n+axes[1].n+axes[2].n+2*media)
		for a, ax := range axes {
			at.v[a], all = all[:ax.n:ax.n], all[ax.n:]
		}
		at.s, at.w = all[:media:media], all[media:]
	}
	at.x = x
	for a, ax := range axes {
		modeValues(ax, steps[a].b, x[a], at.v[a])
	}
	return true
}

// stand gives a place in a step.
func (f *tensor) stand(st *tensorStep, x coord) *standing {
	at := &st.there
	if !at.move(x, &f.axes, &st.ax, len(st.groups)) {
		return at
	}
	n2 := f.axes[2].n
	for g, r := range st.groups {
		s, w := 0.0, 0.0
		i := 0
		for _, v0 := range at.v[0] {
			for _, v1 := range at.v[1] {
				ss, ww := 0.0, 0.0
				rs, rw := r.s[i:i+n2], r.w[i:i+n2]
				for k, z := range at.v[2] {
					ss += rs[k] * z
					ww += rw[k] * z
				}
				xy := v0 * v1
				s += ss * xy
				w += ww * xy
				i += n2
			}
		}
		at.s[g], at.w[g] = s, w
	}
	return at
}

// response is what a medium of 1 K does in the long run: the field s, and the field w by which s lags behind a slope of 1 K/s.
type response struct{ s, w []float64 }

type tensorSeg struct {
	t0, t1 float64
	step   *tensorStep
	level  []float64 // by medium, at t0, K relative to 0 °C
	slope  []float64 // by medium, K/s
	c      []float64 // what decays, by mode, at t0
}

// slab hands out zeroed slices from large pieces, since a field is made of very many small ones.
type slab struct {
	free []float64
	all  []float64 // scratch: the newest piece, to be handed out again
	wide int       // scratch: length of all; 0: the pieces are kept by their users
}

func (s *slab) take(n int) []float64 {
	if len(s.free) < n {
		s.free = make([]float64, max(n, 1024, 2*s.wide))
		if s.wide > 0 {
			s.all, s.wide = s.free, len(s.free)
		}
	}
	out := s.free[:n:n]
	s.free = s.free[n:]
	if s.wide > 0 {
		clear(out)
	}
	return out
}

// mark is where a scratch slab stands; back gives all that was taken since to be handed out again. Where a piece ran out in between, the
// newest goes on: it is larger, and everything in it was taken since.
func (s *slab) mark() slab { return *s }

func (s *slab) back(to slab) {
	s.free = to.free
	if s.wide != to.wide {
		s.free = s.all
	}
}

// scratch is memory for what does not outlive one solution: a second field, and what is needed within a call.
type scratch struct {
	field, call slab
	rough       []float64 // what the track of a rougher march kept
}

var scratches = sync.Pool{New: func() any { return &scratch{field: slab{wide: 1}, call: slab{wide: 1}} }}

// again makes all of it free.
func (s *scratch) again() { s.field.free, s.call.free = s.field.all, s.call.all }

func (f *tensor) size() int { return f.axes[0].n * f.axes[1].n * f.axes[2].n }

// newTensor starts a field at one temperature.
func newTensor(axes [3]*axis, nd *nodes, startC float64, mem, tmp *slab) *tensor {
	f := &tensor{axes: axes, nodes: nd, start: startC, mem: mem, tmp: tmp}
	f.now.f = f
	f.now.last = make([]int, axes[0].n*axes[1].n)
	return f
}

// run appends one step to the field.
func (f *tensor) run(cs *chainStep) {
	st := &tensorStep{lo: cs.lo[0], up: cs.up[0], extra: cs.lumpW}
	ax := f.axes
	for a := range ax {
		st.ax[a] = ax[a].step(f.mem, f.tmp, cs.props, cs.lo[a], cs.up[a])
		st.e0[a] = st.ax[a].b[:ax[a].n]
	}
	n, m := f.size(), len(cs.media)
	responses := make([]response, 3*m)
	st.groups, st.held, st.lines = responses[:0:m], responses[m:m:2*m], responses[2*m:2*m:3*m]
	st.meanS, st.meanW = f.mem.take(m)[:0], f.mem.take(m)[:0]
	for g := range cs.media {
		r := response{f.mem.take(n), f.mem.take(n)}
		for a := range ax {
			if cs.lo[a].group == g {
				addOuter(r.s, st, a, st.ax[a].gLo)
			}
			if cs.up[a].group == g {
				addOuter(r.s, st, a, st.ax[a].gUp)
			}
		}
		if cs.lumpG != nil {
			r.s[0] += cs.lumpG[g]
		}
		st.eachRate(func(i int, rate float64) {
			if rate > 0 {
				r.s[i] /= rate
				r.w[i] = r.s[i] / rate
			} else {
				r.s[i] = 0
			}
		})
		st.groups = append(st.groups, r)
		st.meanS, st.meanW = append(st.meanS, st.average(r.s)), append(st.meanW, st.average(r.w))
	}
	st.even = m == 1 && len(cs.media[0].C) == 1 && st.ax[0].rate[0]+st.ax[1].rate[0]+st.ax[2].rate[0] > 0
	f.steps = append(f.steps, st)
	f.segments(cs, st, f.carry(st))
}

// pop takes the last step back.
func (f *tensor) pop() {
	last := f.steps[len(f.steps)-1]
	f.steps = f.steps[:len(f.steps)-1]
	for len(f.segs) > 0 && f.segs[len(f.segs)-1].step == last {
		f.segs = f.segs[:len(f.segs)-1]
	}
	f.now.of, f.now.kept = nil, [8]restSlice{} // its place in segs will hold another segment
}

// segments appends the stretches between the knots of the media; now holds the modes at the start of the step.
func (f *tensor) segments(cs *chainStep, st *tensorStep, now []float64) {
	n, m := f.size(), len(cs.media)
	t0 := f.end()
	f.segs = slices.Grow(f.segs, len(cs.knots))
	mark := f.tmp.free
	level, decay := f.tmp.take(m), f.tmp.take(n) // the media at the knot; what is left of every mode after one stretch of length long
	long := math.NaN()
	reads := make([]cursor, m)
	for g := range cs.media {
		reads[g] = cursor{x: cs.media[g].TimesS, y: cs.media[g].C}
		level[g] = cs.media[g].at(0)
	}
	var last *tensorSeg
	for k, from := range cs.knots {
		to := cs.durS
		if k+1 < len(cs.knots) {
			to = min(to, cs.knots[k+1])
		}
		if to <= from && k > 0 {
			break
		}
		sg := tensorSeg{t0: t0 + from, t1: t0 + to, step: st, level: f.mem.take(m), slope: f.mem.take(m), c: now}
		copy(sg.level, level)
		for g := range reads {
			if len(reads[g].x) > 1 && to > from {
				level[g] = reads[g].to(to)
				sg.slope[g] = (level[g] - sg.level[g]) / (to - from)
			}
			w := st.groups[g].w
			if last == nil {
				for i, s := range st.groups[g].s {
					now[i] -= s*sg.level[g] - w[i]*sg.slope[g]
				}
			} else if turn := sg.slope[g] - last.slope[g]; turn != 0 { // the level goes on, the slope changes
				for i := range now {
					now[i] += w[i] * turn
				}
			}
		}
		f.segs = append(f.segs, sg)
		if to >= cs.durS {
			break
		}
		last = &f.segs[len(f.segs)-1]
		if d := to - from; d != long { // courses mostly have even steps
			long = d
			st.eachRate(func(i int, rate float64) { decay[i] = math.Exp(-rate * d) })
		}
		now = f.mem.take(n)
		for i, c := range last.c {
			now[i] = c * decay[i]
		}
	}
	f.tmp.free = mark
}

// at is the medium at t seconds from the start of the step.
func (m *Course) at(t float64) float64 {
	if len(m.C) == 1 {
		return m.C[0]
	}
	return lineAt(m.TimesS, m.C, t)
}

// end is the end of the last segment.
func (f *tensor) end() float64 {
	if len(f.segs) == 0 {
		return 0
	}
	return f.segs[len(f.segs)-1].t1
}

// addOuter adds v on axis a times the constant on the others.
func addOuter(out []float64, st *tensorStep, a int, v []float64) {
	e := st.e0
	e[a] = v
	i := 0
	for _, x := range e[0] {
		for _, y := range e[1] {
			xy := x * y
			for _, z := range e[2] {
				out[i] += xy * z
				i++
			}
		}
	}
}

// average gives the volume mean of a field in modes.
func (st *tensorStep) average(modes []float64) float64 {
	sum, i := 0.0, 0
	for _, x := range st.e0[0] {
		for _, y := range st.e0[1] {
			for _, z := range st.e0[2] {
				sum += modes[i] * x * y * z
				i++
			}
		}
	}
	return sum
}

// eachRate calls do for every mode with its rate.
func (st *tensorStep) eachRate(do func(i int, rate float64)) {
	i := 0
	for _, x := range st.ax[0].rate {
		for _, y := range st.ax[1].rate {
			for _, z := range st.ax[2].rate {
				do(i, x+y+z+st.extra)
				i++
			}
		}
	}
}

// carry turns the field at the end of the last segment into modes of the next step.
func (f *tensor) carry(st *tensorStep) []float64 {
	n := f.size()
	out := f.mem.take(n)
	if len(f.segs) == 0 {
		addOuter(out, st, 0, st.e0[0])
		for i := range out {
			out[i] *= f.start
		}
		return out
	}
	mark := f.tmp.mark()
	sg := &f.segs[len(f.segs)-1]
	now := f.tmp.take(n)
	f.modes(sg, sg.t1-sg.t0, now)
	if f.single() {
		q := f.tmp.take(n)
		addRows(q, sg.step.ax[0].b, n, now)
		addColumns(out, st.ax[0].b, n, q)
		f.tmp.back(mark)
		return out
	}
	var p [3][]float64
	for a := range f.axes { // from modes of the old step to modes of the new one
		p[a] = project(f.tmp, f.axes[a].n, sg.step.ax[a].b, st.ax[a].b)
	}
	n0, n1, n2 := f.axes[0].n, f.axes[1].n, f.axes[2].n
	along(now, out, p[0], 1, n0, n1*n2)
	along(out, now, p[1], n0, n1, n2)
	along(now, out, p[2], n0*n1, n2, 1)
	f.tmp.back(mark)
	return out
}

// single tells whether there is one axis only.
func (f *tensor) single() bool { return f.axes[1].n == 1 && f.axes[2].n == 1 }

// project gives newᵀ·old: n×n, row = new mode.
func project(mem *slab, n int, old, new []float64) []float64 {
	p := mem.take(n * n)
	m := 0
	for ; m+2 <= n; m += 2 {
		a, b := old[m*n:][:n], old[(m+1)*n:][:n]
		for i := 0; i < n; i++ {
			f, g := new[m*n+i], new[(m+1)*n+i]
			o := p[i*n:][:n]
			for j := range o {
				o[j] += f*a[j] + g*b[j]
			}
		}
	}
	for ; m < n; m++ {
		for i := 0; i < n; i++ {
			f := new[m*n+i]
			o := p[i*n:][:n]
			for j, x := range old[m*n:][:n] {
				o[j] += f * x
			}
		}
	}
	return p
}

// along applies the n×n matrix p to the middle index of in (outer × n × inner).
func along(in, out, p []float64, outer, n, inner int) {
	clear(out)
	for o := 0; o < outer; o++ {
		block, res := in[o*n*inner:(o+1)*n*inner], out[o*n*inner:(o+1)*n*inner]
		if inner == 1 {
			addRows(res, p, n, block)
			continue
		}
		for i := 0; i < n; i++ {
			addColumns(res[i*inner:(i+1)*inner], block, inner, p[i*n:i*n+n])
		}
	}
}

// gone is the exponent beyond which a mode is left out: e^-27 of 200 K is 4e-10 K.
const gone = 27

// faintest is the amplitude below which a mode of several axes is left out, K: thousands of them together stay below flatK.
const faintest = 1e-11

// decays fills e with exp(-rate·tau) and tells how many are worth keeping.
func decays(rate []float64, tau float64, e []float64) int {
	for i, r := range rate {
		x := r * tau
		if x > gone {
			if i > 0 {
				return i
			}
			e[0] = 0
			return 1
		}
		e[i] = math.Exp(-x)
	}
	return len(rate)
}

// modes fills out with all modes of a segment, tau after its start.
func (f *tensor) modes(sg *tensorSeg, tau float64, out []float64) {
	for i := range out {
		out[i] = 0
	}
	f.decaying(sg, tau, out)
	for g, r := range sg.step.groups {
		level := sg.level[g] + sg.slope[g]*tau
		for i := range out {
			out[i] += r.s[i]*level - r.w[i]*sg.slope[g]
		}
	}
}

// decaying fills out with what still decays and tells the number of modes by axis that are worth looking at; last of the shot at hand tells
// more.
func (f *tensor) decaying(sg *tensorSeg, tau float64, out []float64) (keep [3]int) {
	if f.single() && sg.step.extra == 0 {
		k := decays(sg.step.ax[0].rate, tau, out)
		for i, c := range sg.c[:k] {
			out[i] *= c
		}
		return [3]int{k, 1, 1}
	}
	var e [3][maxDegrees]float64
	for a := range keep {
		keep[a] = decays(sg.step.ax[a].rate, tau, e[a][:f.axes[a].n])
	}
	if sg.step.extra > 0 {
		e[0][0] *= math.Exp(-sg.step.extra * tau)
	}
	n1, n2 := f.axes[1].n, f.axes[2].n
	r0, r1, r2 := sg.step.ax[0].rate, sg.step.ax[1].rate, sg.step.ax[2].rate
	most := 0
	for i := 0; i < keep[0]; i++ {
		rows := f.now.last[i*n1:][:keep[1]]
		for j := range rows {
			xy := e[0][i] * e[1][j]
			at := (i*n1 + j) * n2
			left, k := gone-(r0[i]+r1[j])*tau, keep[2]
			for k > 0 && r2[k-1]*tau > left {
				k--
			}
			c, o := sg.c[at:at+k], out[at:at+n2]
			clear(o[k:])
			for k, z := range e[2][:k] {
				o[k] = c[k] * xy * z
			}
			for k > 0 && math.Abs(o[k-1]) < faintest {
				k--
			}
			rows[j] = k
		}
		for j := keep[1] - 2; j >= 0; j-- { // so that later rows are no longer
			rows[j] = max(rows[j], rows[j+1])
		}
		if rows[0] > 0 {
			most = i + 1
		}
	}
	keep[0] = max(most, 1)
	return keep
}

// segAt finds the segment that holds t; at a change the one before it.
func (f *tensor) segAt(t float64) int {
	lo, hi := 0, len(f.segs)-1
	for lo < hi {
		mid := (lo + hi) / 2
		if t <= f.segs[mid].t1 {
			hi = mid
		} else {
			lo = mid + 1
		}
	}
	return lo
}

// modeValues fills out with the first modes of one axis of a step at x, as many as there is room for.
func modeValues(a *axis, b []float64, x float64, out []float64) {
	n := a.n
	var phi [maxDegrees]float64
	a.values(x, phi[:n], nil)
	clear(out)
	addColumns(out, b, n, phi[:n])
}

func (f *tensor) course(x coord, times, out []float64) {
	if len(times) == 0 {
		return
	}
	if f.single() {
		f.along(x, times, out)
		return
	}
	var at *standing
	var in *tensorStep
	n1, n2 := f.axes[1].n, f.axes[2].n
	e := &f.fades.between
	kept := f.fades.first(times[0])
	for ti, t := range times {
		sg := &f.segs[f.segAt(t)]
		st := sg.step
		if st != in {
			in, at = st, f.stand(st, x)
		}
		v := &at.v
		tau := min(max(t-sg.t0, 0), sg.t1-sg.t0)
		sum := 0.0
		for g := range st.groups {
			sum += at.s[g]*(sg.level[g]+sg.slope[g]*tau) - at.w[g]*sg.slope[g]
		}
		left := f.fades.on(&kept, t, &f.axes, &st.ax, tau)
		extra := 1.0
		if st.extra > 0 {
			extra = math.Exp(-st.extra * tau)
		}
		for a := range left {
			for i, x := range left[a] {
				e[a][i] = x * v[a][i]
			}
		}
		z := e[2][:len(left[2])]
		for i := range left[0] {
			row := 0.0
			for j := range left[1] {
				at := (i*n1 + j) * n2
				c := sg.c[at : at+len(z)]
				dot := 0.0
				for k, z := range z {
					dot += c[k] * z
				}
				row += dot * e[1][j]
			}
			sum += row * e[0][i] * extra
		}
		out[ti] = sum
	}
}

// along is course of a food with one axis.
func (f *tensor) along(x coord, times, out []float64) {
	var at *standing
	var in *tensorStep
	ax := f.axes[0]
	kept, seg := f.fades.first(times[0]), f.segAt(times[0])
	for ti, t := range times {
		for seg < len(f.segs)-1 && t > f.segs[seg].t1 {
			seg++
		}
		sg := &f.segs[seg]
		st := sg.step
		if st != in {
			in, at = st, f.stand(st, x)
		}
		tau := min(max(t-sg.t0, 0), sg.t1-sg.t0)
		sum := 0.0
		for g := range st.groups {
			sum += at.s[g]*(sg.level[g]+sg.slope[g]*tau) - at.w[g]*sg.slope[g]
		}
		extra := 1.0
		if st.extra > 0 {
			extra = math.Exp(-st.extra * tau)
		}
		left := f.fades.one(&kept, t, ax, st.ax[0], tau)
		c, v := sg.c[:len(left)], at.v[0][:len(left)]
		for i, x := range left {
			sum += c[i] * (x * v[i]) * extra
		}
		out[ti] = sum
	}
}

func (f *tensor) remember(times []float64) { f.fades.start(times) }

// tensorShot is a tensor at one instant.
type tensorShot struct {
	f      *tensor
	sg     *tensorSeg
	tau    float64
	keep   [3]int
	amp    []float64  // what decays
	all    []float64  // what the media hold, made when asked for
	of     *tensorSeg // the segment that all belongs to
	moving bool       // a medium changes in it
	last   []int      // by the first two axes: how many modes of the third are worth looking at
	kept   [8]restSlice
	turn   int // which of kept to give up next
	b1, b2 []float64
}

func (f *tensor) at(t float64) snapshot {
	s := &f.now
	if s.amp == nil {
		s.amp = make([]float64, f.size())
	}
	s.sg = &f.segs[f.segAt(t)]
	s.tau = min(max(t-s.sg.t0, 0), s.sg.t1-s.sg.t0)
	if f.single() && s.sg.step.extra == 0 {
		if i, ok := f.fades.find(f.fades.first(t), t); ok {
			left := f.fades.along(0, i, f.axes[0], s.sg.step.ax[0], s.tau)
			for i, c := range s.sg.c[:len(left)] {
				s.amp[i] = left[i] * c
			}
			s.keep = [3]int{len(left), 1, 1}
			return s
		}
	}
	s.keep = f.decaying(s.sg, s.tau, s.amp)
	return s
}

// gridValues gives mode i at node g for each axis.
func (f *tensor) gridValues(st *tensorStep) {
	if st.gridB[0] != nil {
		return
	}
	for a := range f.axes {
		st.gridB[a] = nodeModes(f.mem, f.axes[a], f.nodes, a, st.ax[a].b)
	}
	var whole [3]int
	for a := range whole {
		whole[a] = f.axes[a].n
	}
	if st.even && !f.single() {
		return
	}
	m := f.nodes.count()
	for _, r := range st.groups {
		at := response{f.mem.take(m), f.mem.take(m)}
		f.now.contract(r.s, whole, nil, st, at.s)
		f.now.contract(r.w, whole, nil, st, at.w)
		st.held = append(st.held, at)
	}
}

// polynomialResponses gives the responses of a field with one axis as polynomials.
func (f *tensor) polynomialResponses(st *tensorStep) {
	if len(st.lines) > 0 {
		return
	}
	n := f.axes[0].n
	for _, r := range st.groups {
		line := response{f.mem.take(n), f.mem.take(n)}
		addRows(line.s, st.ax[0].b, n, r.s)
		addRows(line.w, st.ax[0].b, n, r.w)
		st.lines = append(st.lines, line)
	}
}

// nodeModes gives the modes of one axis of a step at its nodes.
func nodeModes(mem *slab, ax *axis, nd *nodes, a int, b []float64) []float64 {
	n := ax.n
	out := mem.take(len(nd.x[a]) * n)
	for g := range nd.x[a] {
		addColumns(out[g*n:g*n+n], b, n, nd.phi[a][g*n:g*n+n])
	}
	return out
}

func (nd *nodes) count() int { return len(nd.x[0]) * len(nd.x[1]) * len(nd.x[2]) }

// contract adds up modes to temperatures at all nodes, the first keep modes of each axis only, and of the third axis the first last.
func (s *tensorShot) contract(amp []float64, keep [3]int, last []int, st *tensorStep, out []float64) {
	f := s.f
	n0, n1, n2 := f.axes[0].n, f.axes[1].n, f.axes[2].n
	g0, g1, g2 := len(f.nodes.x[0]), len(f.nodes.x[1]), len(f.nodes.x[2])
	if g1 == 1 && g2 == 1 { // one axis
		clear(out)
		addRows(out, st.gridB[0], n0, amp[:keep[0]])
		return
	}
	// last axis first: nodes of axis 2, then 1, then 0
	need1, need2 := n0*n1*g2, n0*g1*g2
	if cap(s.b1) < need1 {
		s.b1 = make([]float64, need1)
	}
	if cap(s.b2) < need2 {
		s.b2 = make([]float64, need2)
	}
	b1, b2 := s.b1[:need1], s.b2[:need2]
	for i := 0; i < keep[0]; i++ {
		rows := keep[1]
		for j := 0; j < keep[1]; j++ {
			k := keep[2]
			if last != nil {
				k = last[i*n1+j]
			}
			if k == 0 { // the later ones have none either
				rows = j
				break
			}
			o := b1[(i*n1+j)*g2 : (i*n1+j+1)*g2]
			clear(o)
			addRows(o, st.gridB[2], n2, amp[(i*n1+j)*n2:][:k])
		}
		for g := 0; g < g1; g++ {
			o := b2[(i*g1+g)*g2 : (i*g1+g+1)*g2]
			clear(o)
			addColumns(o, b1[i*n1*g2:], g2, st.gridB[1][g*n1:][:rows])
		}
	}
	plane := g1 * g2
	clear(out)
	for g := 0; g < g0; g++ {
		addColumns(out[g*plane:(g+1)*plane], b2, plane, st.gridB[0][g*n0:][:keep[0]])
	}
}

func (s *tensorShot) grid(out []float64) {
	st := s.sg.step
	s.f.gridValues(st)
	if s.f.single() {
		s.sg.mix(s.tau, out, 0, st.held)
		addRows(out, st.gridB[0], s.f.axes[0].n, s.amp[:s.keep[0]])
		return
	}
	s.contract(s.amp, s.keep, s.last, st, out)
	if st.even {
		c := s.sg.level[0]
		for i := range out {
			out[i] += c
		}
		return
	}
	for g := range st.held {
		level, slope := s.sg.level[g]+s.sg.slope[g]*s.tau, s.sg.slope[g]
		for i, v := range st.held[g].s {
			out[i] += v*level - st.held[g].w[i]*slope
		}
	}
}

// resting gives all modes of what the media hold at the instant.
func (s *tensorShot) resting() []float64 {
	st := s.sg.step
	s.moving = false
	for _, x := range s.sg.slope {
		s.moving = s.moving || x != 0
	}
	if s.all == nil {
		s.all = make([]float64, s.f.size())
	}
	if s.of == s.sg && !s.moving {
		return s.all
	}
	s.of = s.sg
	for i := range s.all {
		s.all[i] = 0
	}
	for g, r := range st.groups {
		level, slope := s.sg.level[g]+s.sg.slope[g]*s.tau, s.sg.slope[g]
		for i, v := range r.s {
			s.all[i] += v*level - r.w[i]*slope
		}
	}
	return s.all
}

func (s *tensorShot) slice(axis int, x coord, node [3]int, out []float64) {
	f := s.f
	if f.single() {
		s.only(0, out)
		return
	}
	st := s.sg.step
	n := [3]int{f.axes[0].n, f.axes[1].n, f.axes[2].n}
	var buf [3][maxDegrees]float64
	var v [3][]float64
	for a, ax := range f.axes {
		switch {
		case a == axis:
		case node[a] >= 0:
			v[a] = st.gridB[a][node[a]*ax.n:][:ax.n]
		default:
			v[a] = buf[a][:ax.n]
			if st.even { // of the others all are asked
				v[a] = buf[a][:s.keep[a]]
			}
			modeValues(ax, st.ax[a].b, x[a], v[a])
		}
	}
	var q [maxDegrees]float64
	s.along(axis, v, s.amp, s.keep, s.last, q[:])
	if st.even {
		toPolynomials(n[axis], st.ax[axis].b, q[:s.keep[axis]], out)
		out[0] += s.sg.level[0]
		return
	}
	for i, c := range s.restAlong(axis, x, v) {
		q[i] += c
	}
	toPolynomials(n[axis], st.ax[axis].b, q[:n[axis]], out)
}

// along adds to q the modes of one axis, with the others summed up at a place where their modes are v.
func (s *tensorShot) along(axis int, v [3][]float64, amp []float64, keep [3]int, last []int, q []float64) {
	n1, n2 := s.f.axes[1].n, s.f.axes[2].n
	var dots [maxDegrees]float64
	for a := 0; a < keep[0]; a++ {
		if axis == 2 {
			for b := 0; b < keep[1]; b++ {
				dots[b] = v[0][a] * v[1][b]
			}
			addColumns(q[:keep[2]], amp[a*n1*n2:], n2, dots[:keep[1]])
			continue
		}
		clear(dots[:keep[1]])
		for b := 0; b < keep[1]; b += 4 { // later rows are shorter
			width := keep[2]
			if last != nil {
				width = last[a*n1+b]
			}
			if width == 0 {
				break
			}
			addRows(dots[b:min(b+4, keep[1])], amp[(a*n1+b)*n2:], n2, v[2][:width])
		}
		if axis == 1 {
			for b, d := range dots[:keep[1]] {
				q[b] += d * v[0][a]
			}
			continue
		}
		for b, d := range dots[:keep[1]] {
			q[a] += d * v[1][b]
		}
	}
}

// restSlice is what the media hold along one axis through a place, in modes.
type restSlice struct {
	sg   *tensorSeg
	axis int
	x    coord
	q    []float64
}

// restAlong gives what the media hold along one axis through a place, where the modes of the others are v. Much is asked again for the same
// lines, along edges and the axes of symmetry, and kept.
func (s *tensorShot) restAlong(axis int, x coord, v [3][]float64) []float64 {
	all := s.resting()
	x[axis] = 0
	if !s.moving {
		for i := range s.kept {
			if k := &s.kept[i]; k.sg == s.sg && k.axis == axis && k.x == x {
				return k.q
			}
		}
	}
	k := &s.kept[s.turn]
	s.turn = (s.turn + 1) % len(s.kept)
	if k.q == nil {
		k.q = make([]float64, maxDegrees)
	}
	k.sg, k.axis, k.x = s.sg, axis, x
	clear(k.q)
	n := [3]int{s.f.axes[0].n, s.f.axes[1].n, s.f.axes[2].n}
	s.along(axis, v, all, n, nil, k.q)
	return k.q
}

// only fills out with the polynomials of a field with one axis, from one of them on.
func (s *tensorShot) only(from int, out []float64) {
	st, n := s.sg.step, s.f.axes[0].n
	s.f.polynomialResponses(st)
	s.sg.mix(s.tau, out, from, st.lines)
	addRows(out, st.ax[0].b[from*n:], n, s.amp[:s.keep[0]])
}

// toPolynomials turns the first modes of n into polynomials: out = b·q.
func toPolynomials(n int, b, q, out []float64) {
	clear(out[:n])
	addRows(out[:n], b, n, q)
}

func (s *tensorShot) mean() float64 {
	f, st := s.f, s.sg.step
	if f.single() {
		sum := 0.0
		for i, e := range st.e0[0][:s.keep[0]] {
			sum += s.amp[i] * e
		}
		return sum + s.sg.restMean(s.tau)
	}
	n1, n2 := f.axes[1].n, f.axes[2].n
	sum := 0.0
	for i := 0; i < s.keep[0]; i++ {
		for j := 0; j < s.keep[1]; j++ {
			xy := st.e0[0][i] * st.e0[1][j]
			at := (i*n1 + j) * n2
			for k, z := range st.e0[2][:s.last[i*n1+j]] {
				sum += s.amp[at+k] * xy * z
			}
		}
	}
	return sum + s.sg.restMean(s.tau)
}
