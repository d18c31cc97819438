package model

import (
	"math"
	"slices"
)

// anew is how many samples in a row may be carried from one to the next before the exponentials are taken anew:
// rounding grows by about one unit of the last place a sample.
const anew = 64

// faint is the amplitude below which a mode is no longer looked at, K.
const faint = 1e-10

// lineSampler walks through a field with one axis: even steps of time within a segment multiply each mode by the same number,
// and what is asked at every sample is a sum over few modes.
type lineSampler struct {
	f                         *tensor
	b                         *body
	sg                        *tensorSeg
	at, from                  int                 // the places of sg, and of that of the sample before, among the segments
	of                        *tensorStep         // that factor and watch belong to
	amp                       [maxDegrees]float64 // what decays, by mode
	factor                    [maxDegrees]float64 // by mode, over one step of time
	watch                     [maxDegrees]watched // by mode, 1 K of it
	keep                      int                 // modes worth looking at
	factored                  int                 // how many of factor are known
	step                      float64             // s, that factor belongs to
	carried                   int                 // steps of time since the exponentials were taken
	held                      [2][2]watched       // by medium (one a face): of its response s, and w
	moving                    bool                // a medium changes within sg
	tau                       float64             // s since the start of the segment
	rest                      watched             // what the media hold
	now                       watched             // °C
	looks                     int                 // how often all nodes were looked at in the step
	restGrid                  []float64           // what the media hold, at the nodes, if gridded
	restLine                  [maxDegrees]float64 // what the media hold as polynomials, if restLined
	line                      [maxDegrees]float64 // the whole field as polynomials, if lined
	lineLen                   int                 // how many of line are worth looking at
	gridded, restLined, lined bool
	cold, hot                 float64 // where the coldest and hottest place were found last between nodes
	known                     profile
	near                      nearby
}

// watched are the temperatures that are asked at every sample.
type watched struct{ mean, first, last, centre float64 }

// add adds f times others.
func (w *watched) add(f float64, o *watched) {
	w.mean += f * o.mean
	w.first += f * o.first
	w.last += f * o.last
	w.centre += f * o.centre
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
	w := lineSampler{f: f, b: h.body}
	span, before := 0, 0.0
	for k, t := range s.TimesS {
		for span < len(h.Spans)-1 && t > h.Spans[span].EndS {
			span++
		}
		w.moveTo(t, t-before)
		before = t
		low, high, ok := w.follow()
		if !ok {
			low, high = w.look()
		}
		hull := h.hull[span]
		s.Points[0][k], s.Mean[k] = clamp(w.now.centre, hull), clamp(w.now.mean, hull)
		s.Coldest[k], s.ColdestAt[k].UpM = clamp(low.c, hull), low.x*w.b.radii[0]
		s.Hottest[k], s.HottestAt[k].UpM = clamp(high.c, hull), high.x*w.b.radii[0]
	}
}

// moveTo brings the modes and what is watched to the instant t, d seconds after the last.
func (w *lineSampler) moveTo(t, d float64) {
	fresh := w.sg == nil || t > w.sg.t1
	if w.from = w.at; fresh {
		w.at = w.f.segAt(t)
		w.sg = &w.f.segs[w.at]
		w.moving = w.sg.moves()
	}
	sg, st := w.sg, w.sg.step
	w.tau = min(max(t-sg.t0, 0), sg.t1-sg.t0)
	if w.of != st {
		w.begin(st)
	}
	if fresh || w.carried == anew {
		w.keep, w.carried = decays(st.ax[0].rate, w.tau, w.amp[:w.f.axes[0].n]), 0
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
	}
	for w.keep > 1 && math.Abs(w.amp[w.keep-1]) < faint {
		w.keep--
	}
	w.lined = false
	if fresh || w.moving {
		w.gridded, w.restLined = false, false
		w.rest = w.resting()
	}
	now := w.rest
	for i, a := range w.amp[:w.keep] {
		now.add(a, &w.watch[i])
	}
	w.now = now
}

// begin makes what belongs to one step.
func (w *lineSampler) begin(st *tensorStep) {
	w.of, w.factored, w.looks = st, 0, 0
	w.f.polynomialResponses(st)
	ax := w.f.axes[0]
	n, phi, b := ax.n, w.b.nodes.phi[0], st.ax[0].b
	first, last, centre := phi[:n], phi[len(phi)-n:], phi[w.b.order[0]*n:][:n]
	watch := w.watch[:n]
	clear(watch)
	for m := range first {
		p, q, r := first[m], last[m], centre[m]
		for i, v := range b[m*n:][:n] {
			watch[i].first += p * v
			watch[i].last += q * v
			watch[i].centre += r * v
		}
	}
	for i, v := range st.e0[0] {
		watch[i].mean = v
	}
	at := func(line []float64, mean float64) watched {
		sum := watched{mean: mean}
		for m, v := range line {
			sum.add(v, &watched{0, first[m], last[m], centre[m]})
		}
		return sum
	}
	for g, r := range st.lines {
		w.held[g] = [2]watched{at(r.s, st.meanS[g]), at(r.w, st.meanW[g])}
	}
}

// resting gives of what is watched what the media hold.
func (w *lineSampler) resting() (sum watched) {
	for g, slope := range w.sg.slope {
		h := &w.held[g]
		sum.add(w.sg.level[g]+slope*w.tau, &h[0])
		if slope != 0 {
			sum.add(-slope, &h[1])
		}
	}
	return sum
}

// restPolynomials gives what the media hold as polynomials.
func (w *lineSampler) restPolynomials() []float64 {
	line := w.restLine[:w.f.axes[0].n]
	if !w.restLined {
		w.restLined = true
		w.sg.mix(w.tau, line, 0, w.sg.step.lines)
	}
	return line
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
	upper, ok = into(sg.step.up, w.now.last)
	if ok && w.f.axes[0].kind == planeFull {
		lower, ok = into(sg.step.lo, w.now.first)
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

// endmost is a coldest or hottest place of one axis.
type endmost struct {
	c float64 // °C
	x float64
}

// follow gives the coldest and hottest place from what is known of the field, without looking at all nodes; ok is false if not enough is.
func (w *lineSampler) follow() (low, high endmost, ok bool) {
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
	low, high = endmost{w.now.first, xs[0]}, endmost{w.now.last, xs[last]}
	if low.c > high.c {
		low, high = high, low
	}
	if k.turns == 1 && high.c-low.c <= flatK { // faces that meet the same: the underside, as among nodes
		low = endmost{w.now.first, xs[0]}
		high = low
	}
	if k.turns == 0 {
		return low, high, high.c-low.c > clearK
	}
	if k.upper > 0 { // a valley
		low.c, low.x = w.inner(1, &w.cold)
	} else {
		high.c, high.x = w.inner(-1, &w.hot)
	}
	return low, high, true
}

// look fills the nodes, finds the coldest and hottest place among and between them, and remembers what is known of the field by that.
func (w *lineSampler) look() (low, high endmost) {
	st := w.sg.step
	w.fill()
	low, high, turns := w.ends()
	w.known, w.near.move = profile{}, 0
	lower, upper, clear := w.gradients()
	inside := func(e endmost) bool { return !slices.Contains(w.b.nodes.x[0], e.x) }
	rise := w.b.buf[len(w.b.buf)-1] - w.b.buf[0]
	if math.Abs(rise) <= flatK { // rounding: the faces tell
		rise = 0
	}
	switch {
	case !clear || turns > 1:
	case turns == 0 && lower*upper >= 0 && rise*float64(lower) >= 0 && rise*float64(upper) >= 0: // else a layer at a face is too thin for the nodes
		w.known = profile{st, lower, upper, 0}
	case turns == 1 && lower*upper < 0 && st.lo.group == st.up.group && (upper > 0 && inside(low) || upper < 0 && inside(high)):
		w.known = profile{st, lower, upper, 1}
	}
	return low, high
}

// manyLooks is how often all nodes are looked at in a step by way of the polynomials before the modes at the nodes are made.
const manyLooks = 8

// fill fills the nodes.
func (w *lineSampler) fill() {
	st, n := w.sg.step, w.f.axes[0].n
	if w.looks++; w.looks <= manyLooks && st.gridB[0] == nil {
		w.polynomials()
		clear(w.b.buf)
		addRows(w.b.buf, w.b.nodes.phi[0], n, w.line[:w.lineLen])
		return
	}
	w.f.gridValues(st)
	if w.restGrid == nil {
		w.restGrid = make([]float64, len(w.b.buf))
	}
	if !w.gridded {
		w.gridded = true
		w.sg.mix(w.tau, w.restGrid, 0, st.held)
	}
	copy(w.b.buf, w.restGrid)
	addRows(w.b.buf, st.gridB[0], n, w.amp[:w.keep])
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

// mix fills out with what the media hold, tau after the start of a segment: r are the responses to each, in any form, read from one number on.
func (sg *tensorSeg) mix(tau float64, out []float64, from int, r []response) {
	clear(out)
	for g := range r {
		level, slope := sg.level[g]+sg.slope[g]*tau, sg.slope[g]
		held := r[g].s[from:][:len(out)]
		if slope == 0 {
			for i, v := range held {
				out[i] += v * level
			}
			continue
		}
		w := r[g].w[from:][:len(out)]
		for i, v := range held {
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
func (w *lineSampler) ends() (low, high endmost, turns int) {
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
func (w *lineSampler) beside(node int, sign float64, near *float64) endmost {
	b, xs := w.b, w.b.nodes.x[0]
	at := onAxis{axis: 0, i: node, g: node, stride: 1}
	e := endmost{b.buf[node], xs[node]}
	lo, hi := max(node-1, 0), min(node+1, len(xs)-1)
	if b.settled(at, sign) || math.Abs(b.buf[lo]-e.c) <= flatK && math.Abs(b.buf[hi]-e.c) <= flatK {
		return e // the latter is flat: stay where the centre is nearest
	}
	w.polynomials()
	v := valley{lo: xs[lo], hi: xs[hi], start: *near}
	if *near <= v.lo || *near >= v.hi {
		v = valleyOf(b.around(at, sign))
	}
	if c, to := v.newton(w.f.axes[0].base, w.line[:w.lineLen], sign); sign*c < sign*e.c-1e-12 {
		e.c, e.x, *near = c, to, to
	}
	return e
}

// polynomials makes the field one sum of polynomials.
func (w *lineSampler) polynomials() {
	if w.lined {
		return
	}
	w.lined = true
	rest := w.restPolynomials()
	n := len(rest)
	line := w.line[:n]
	copy(line, rest)
	addRows(line, w.sg.step.ax[0].b, n, w.amp[:w.keep])
	for n > 3 && math.Abs(line[n-1]) < 1e-9 { // what has smoothed out needs few polynomials
		n--
	}
	w.lineLen = n
}
