package model

import (
	"math"
	"slices"
)

// anew is how many samples in a row may be carried from one to the next before the exponentials are taken anew:
// rounding grows by about one unit of the last place a sample.
const anew = 64

// lineSampler walks through a field with one axis: even steps of time within a segment multiply each mode by the same number,
// and what the media hold is added up once a segment.
type lineSampler struct {
	f         *tensor
	b         *body
	sg        *tensorSeg
	at, from  int         // the places of sg, and of that of the sample before, among the segments
	amp       []float64   // what decays, by mode
	factor    []float64   // by mode, over one step of time
	keep      int         // modes worth looking at
	factored  int         // how many of factor are known
	of        *tensorStep // that factor belongs to
	step      float64     // s, that factor belongs to
	carried   int         // steps of time since the exponentials were taken
	rest      []float64   // what the media hold, at the nodes, if rested
	rested    bool
	restMean  float64
	tau       float64   // s since the start of the segment
	line      []float64 // the whole field as polynomials, if lined
	restLine  []float64 // what the media hold as polynomials, if restLined
	lined     bool
	restLined bool
	first     float64 // temperature at the first node, °C
	last      float64 // at the last
	cold, hot float64 // where the coldest and hottest place were found last between nodes
	known     profile
}

// profile is what is known of the gradient along the axis. It obeys the heat equation too, so along the axis it cannot change its sign more
// often than it did, unless it turns round at a face (Sturm 1836, J. Math. Pures Appl. 1:373-444, from memory). While the gradient keeps
// its sign at both faces, a field that only rises or only falls goes on to do so, and one with one extreme inside keeps one. The sign is
// seen at the samples only; between them it stays where a medium that warms the food does not fall and one that cools it does not
// rise: then all of the food stays on its side of the media (maximum principle), as one that has an extreme inside does of a common medium.
type profile struct {
	st           *tensorStep // nil: nothing is known
	lower, upper int         // signs of the gradient at the two ends of the axis
	turns        int         // extremes inside: 0 or 1
}

// sampleLine fills samples of a field with one axis, as Sample does for any, with less work.
func (f *tensor) sampleLine(h *History, s *Samples) {
	n, g := f.axes[0].n, len(h.body.buf)
	mem := make([]float64, 4*n+g)
	w := lineSampler{f: f, b: h.body, amp: mem[:n], factor: mem[n : 2*n], line: mem[2*n : 3*n], restLine: mem[3*n : 4*n], rest: mem[4*n:]}
	span, last := 0, 0.0
	for k, t := range s.TimesS {
		for span < len(h.Spans)-1 && t > h.Spans[span].EndS {
			span++
		}
		mean := w.moveTo(t, t-last)
		last = t
		low, high, ok := w.follow()
		if !ok {
			low, high = w.look()
		}
		hull := h.hull[span]
		centre := w.first
		if f.axes[0].kind == planeFull {
			centre = w.node(w.b.order[0])
		}
		s.Points[0][k], s.Mean[k] = clamp(centre, hull), clamp(mean, hull)
		s.Coldest[k], s.ColdestAt[k].UpM = clamp(low.c, hull), low.x[0]*w.b.radii[0]
		s.Hottest[k], s.HottestAt[k].UpM = clamp(high.c, hull), high.x[0]*w.b.radii[0]
	}
}

// moveTo brings the modes to the instant t, d seconds after the last, and gives the mean.
func (w *lineSampler) moveTo(t, d float64) (mean float64) {
	fresh := w.sg == nil || t > w.sg.t1
	if w.from = w.at; fresh {
		w.at = w.f.segAt(t)
		w.sg = &w.f.segs[w.at]
	}
	sg, st := w.sg, w.sg.step
	tau := min(max(t-sg.t0, 0), sg.t1-sg.t0)
	w.tau = tau
	if fresh || w.carried == anew {
		w.f.gridValues(st)
		if w.of != st {
			w.of, w.factored = st, 0
		}
		w.keep, w.carried = decays(st.ax[0].rate, tau, w.amp), 0
		for i, c := range sg.c[:w.keep] {
			w.amp[i] *= c
		}
	} else {
		if d != w.step || w.keep > w.factored {
			w.step, w.factored = d, w.keep
			for i, r := range st.ax[0].rate[:w.keep] {
				w.factor[i] = math.Exp(-r * d)
			}
		}
		w.carried++
		for i, x := range w.factor[:w.keep] {
			w.amp[i] *= x
		}
		for w.keep > 1 && math.Abs(w.amp[w.keep-1]) < 1e-12 {
			w.keep--
		}
	}
	if fresh || sg.moves() {
		w.rested, w.restMean, w.restLined = false, sg.restMean(tau), false
	}
	w.lined = false
	amp := w.amp[:w.keep]
	mean = w.restMean
	for i, v := range st.e0[0][:len(amp)] {
		mean += v * amp[i]
	}
	w.first, w.last = w.node(0), w.node(len(w.b.buf)-1)
	return mean
}

// node is the temperature at a node.
func (w *lineSampler) node(g int) float64 {
	sg, n := w.sg, w.f.axes[0].n
	sum := 0.0
	for m := range sg.step.held {
		r := &sg.step.held[m]
		sum += r.s[g]*(sg.level[m]+sg.slope[m]*w.tau) - r.w[g]*sg.slope[m]
	}
	amp := w.amp[:w.keep]
	for i, v := range sg.step.gridB[0][g*n:][:len(amp)] {
		sum += v * amp[i]
	}
	return sum
}

// gradients gives the signs of the gradient at the two ends of the axis, from where the media lie; ok is false where that is not clear.
func (w *lineSampler) gradients() (lower, upper int, ok bool) {
	sg := w.sg
	into := func(f film, surfaceC float64) (int, bool) { // 1: heat flows in
		if f.group < 0 {
			return 0, true
		}
		d := sg.level[f.group] + sg.slope[f.group]*w.tau - surfaceC
		switch {
		case math.IsInf(f.u, 1) || math.Abs(d) < clearK:
			return 0, false
		case d > 0:
			return 1, true
		}
		return -1, true
	}
	upper, ok = into(sg.step.up, w.last)
	if ok && w.f.axes[0].kind == planeFull {
		lower, ok = into(sg.step.lo, w.first)
	}
	return -lower, upper, ok
}

// clearK is how far a surface must be from its medium for the sign of its gradient to be certain, K.
const clearK = 1e-5

// steady tells whether, since the sample before, no medium that warms the food fell and none that cools it rose.
func (w *lineSampler) steady() bool {
	st := w.sg.step
	for i := w.from; i <= w.at; i++ {
		sg := &w.f.segs[i]
		if sg.step != st {
			continue
		}
		if g := st.up.group; g >= 0 && sg.slope[g]*float64(w.known.upper) < 0 {
			return false
		}
		if g := st.lo.group; g >= 0 && sg.slope[g]*float64(w.known.lower) > 0 {
			return false
		}
	}
	return true
}

// follow gives the coldest and hottest place from what is known of the field, without looking at all nodes; ok is false if not enough is.
func (w *lineSampler) follow() (low, high extreme, ok bool) {
	k := &w.known
	if k.st != w.sg.step {
		return low, high, false
	}
	if lower, upper, clear := w.gradients(); !clear || lower != k.lower || upper != k.upper || !w.steady() {
		k.st = nil
		return low, high, false
	}
	xs := w.b.nodes.x[0]
	last := len(xs) - 1
	low, high = extreme{w.first, coord{xs[0]}}, extreme{w.last, coord{xs[last]}}
	if low.c > high.c {
		low, high = high, low
	}
	if k.turns == 0 {
		return low, high, high.c-low.c > clearK
	}
	w.polynomials()
	v := valley{lo: xs[0], hi: xs[last], start: w.cold}
	if k.upper > 0 { // a valley
		low.c, low.x[0] = v.newton(w.f.axes[0].base, w.line, 1)
		w.cold = low.x[0]
		return low, high, true
	}
	v.start = w.hot
	high.c, high.x[0] = v.newton(w.f.axes[0].base, w.line, -1)
	w.hot = high.x[0]
	return low, high, true
}

// look fills the nodes, finds the coldest and hottest place among and between them, and remembers what is known of the field by that.
func (w *lineSampler) look() (low, high extreme) {
	st := w.sg.step
	if !w.rested {
		w.rested = true
		w.sg.mix(w.tau, w.rest, st.held)
	}
	copy(w.b.buf, w.rest)
	addRows(w.b.buf, st.gridB[0], w.f.axes[0].n, w.amp[:w.keep])
	low, high, turns := w.ends()
	w.known = profile{}
	lower, upper, clear := w.gradients()
	inside := func(e extreme) bool { return !slices.Contains(w.b.nodes.x[0], e.x[0]) }
	rise := math.Copysign(1, w.b.buf[len(w.b.buf)-1]-w.b.buf[0])
	switch {
	case !clear || turns > 1:
	case turns == 0 && rise*float64(lower) >= 0 && rise*float64(upper) >= 0: // else a layer at a face is too thin for the nodes
		w.known = profile{st, lower, upper, 0}
	case turns == 1 && lower*upper < 0 && st.lo.group == st.up.group && (upper > 0 && inside(low) || upper < 0 && inside(high)):
		w.known = profile{st, lower, upper, 1}
	}
	return low, high
}

// addRows adds to each out the product of a row of m (n wide) with v, of which there may be fewer than n: four rows at a time,
// so that the sums do not wait for each other.
func addRows(out, m []float64, n int, v []float64) {
	g := 0
	for ; g+4 <= len(out); g += 4 {
		a, b, c, d := m[g*n:][:len(v)], m[(g+1)*n:][:len(v)], m[(g+2)*n:][:len(v)], m[(g+3)*n:][:len(v)]
		var p, q, r, s float64
		for i, x := range v {
			p += a[i] * x
			q += b[i] * x
			r += c[i] * x
			s += d[i] * x
		}
		out[g] += p
		out[g+1] += q
		out[g+2] += r
		out[g+3] += s
	}
	for ; g < len(out); g++ {
		sum := 0.0
		for i, x := range m[g*n:][:len(v)] {
			sum += x * v[i]
		}
		out[g] += sum
	}
}

// moves tells whether a medium changes within a segment.
func (sg *tensorSeg) moves() bool {
	for _, x := range sg.slope {
		if x != 0 {
			return true
		}
	}
	return false
}

// mix fills out with what the media hold, tau after the start of a segment: r are the responses to each, in any form.
func (sg *tensorSeg) mix(tau float64, out []float64, r []response) {
	clear(out)
	for g := range r {
		level, slope := sg.level[g]+sg.slope[g]*tau, sg.slope[g]
		if slope == 0 {
			for i, v := range r[g].s {
				out[i] += v * level
			}
			continue
		}
		w := r[g].w
		for i, v := range r[g].s {
			out[i] += v*level - w[i]*slope
		}
	}
}

// restMean is the mean of what the media hold, tau after the start of a segment.
func (sg *tensorSeg) restMean(tau float64) float64 {
	sum := 0.0
	for g, slope := range sg.slope {
		sum += sg.step.meanS[g]*(sg.level[g]+slope*tau) - sg.step.meanW[g]*slope
	}
	return sum
}

// ends finds the coldest and hottest place from the nodes, looking between them only where they leave it open.
func (w *lineSampler) ends() (low, high extreme, turns int) {
	b := w.b
	lo, hi, turns := b.turning()
	low, high = w.beside(lo, 1, &w.cold), w.beside(hi, -1, &w.hot)
	if turns < 2 { // no third extreme: none that could rival
		return low, high, turns
	}
	reach := rivalShare * (b.buf[hi] - b.buf[lo])
	if i := b.rival(lo, 1, reach, low.c); i >= 0 {
		x := w.cold
		if e := w.beside(i, 1, &x); e.c < low.c-flatK {
			low, w.cold = e, x
		}
	}
	if i := b.rival(hi, -1, reach, high.c); i >= 0 {
		x := w.hot
		if e := w.beside(i, -1, &x); e.c > high.c+flatK {
			high, w.hot = e, x
		}
	}
	return low, high, turns
}

// turning gives the coldest and hottest node of one axis, the nearest to the centre of those that are as cold or hot, and how often the
// field turns between rising and falling.
func (b *body) turning() (lo, hi, turns int) {
	cold, hot, before := b.buf[0], b.buf[0], b.buf[0]
	rising, falling := false, false
	for _, c := range b.buf {
		if c < cold {
			cold = c
		} else if c > hot {
			hot = c
		}
		switch d := c - before; {
		case d > flatK:
			if falling {
				turns++
			}
			rising, falling = true, false
		case d < -flatK:
			if rising {
				turns++
			}
			rising, falling = false, true
		}
		before = c
	}
	return b.nearest(cold+flatK, 1), b.nearest(hot-flatK, -1), turns
}

// beside finds the extreme at or beside a node; sign 1 looks for the coldest. near is where it was found last, and is kept up to date.
func (w *lineSampler) beside(node int, sign float64, near *float64) extreme {
	b, xs := w.b, w.b.nodes.x[0]
	at := onAxis{axis: 0, i: node, g: node, stride: 1}
	e := extreme{b.buf[node], coord{xs[node]}}
	lo, hi := max(node-1, 0), min(node+1, len(xs)-1)
	if b.settled(at, sign) || math.Abs(b.buf[lo]-e.c) <= flatK && math.Abs(b.buf[hi]-e.c) <= flatK {
		return e // the latter is flat: stay where the centre is nearest
	}
	w.polynomials()
	v := valley{lo: xs[lo], hi: xs[hi], start: *near}
	if *near <= v.lo || *near >= v.hi {
		v = valleyOf(b.around(at, sign))
	}
	if c, to := v.newton(w.f.axes[0].base, w.line, sign); sign*c < sign*e.c-1e-12 {
		e.c, e.x[0], *near = c, to, to
	}
	return e
}

// polynomials makes the field one sum of polynomials.
func (w *lineSampler) polynomials() {
	if w.lined {
		return
	}
	w.lined = true
	st := w.sg.step
	if !w.restLined {
		w.restLined = true
		w.sg.mix(w.tau, w.restLine, st.lines)
	}
	n := len(w.restLine)
	w.line = w.line[:n]
	copy(w.line, w.restLine)
	addRows(w.line, st.ax[0].b, n, w.amp[:w.keep])
	for n > 3 && math.Abs(w.line[n-1]) < 1e-9 { // what has smoothed out needs few polynomials
		n--
	}
	w.line = w.line[:n]
}
