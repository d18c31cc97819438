package model

import (
	"cmp"
	"math"
	"slices"
	"sort"
)

// body is the geometry of a history: between places in the food and coordinates on its axes, and where to look.
// A record has none.
type body struct {
	kinds  [3]axisKind
	radii  [3]float64
	by     [3]stretch   // of the coordinates
	ball   *spheroidMap // of a spheroid, whose coordinates are ρ and μ; nil: straight axes
	shells *confocal    // of a spheroid with ice, whose coordinates are these; nil else
	nodes  *nodes
	order  []int // nodes from the centre outwards
	rank   []int // by node: its place in order
	buf    []float64
	rows   [][2]float64 // the coldest and the hottest in each row of nodes in buf along the last axis that has more than one; filled by lowest
}

func newBody(of body, nd *nodes) *body {
	n := nd.count()
	b := &of
	b.nodes, b.order, b.rank, b.buf = nd, make([]int, n), make([]int, n), make([]float64, n)
	b.rows = make([][2]float64, n/b.rowLength())
	far := make([]float64, n)
	for i := range b.order {
		b.order[i] = i
		x := b.node(i)
		if b.ball != nil || b.by != [3]stretch{} {
			p := b.place(x)
			far[i] = p.UpM*p.UpM + p.AcrossM*p.AcrossM + p.AlongM*p.AlongM
			continue
		}
		for a := range x {
			far[i] += x[a] * x[a] * b.radii[a] * b.radii[a]
		}
	}
	if c := n / 2; n == len(nd.x[0]) && nd.x[0][0] < 0 { // nearly sorted already
		for k := range b.order {
			if b.order[k] = c + k/2; k%2 == 1 {
				b.order[k] = c - (k+1)/2
			}
		}
	}
	slices.SortFunc(b.order, func(i, j int) int {
		if far[i] != far[j] {
			return cmp.Compare(far[i], far[j])
		}
		return i - j
	})
	for k, i := range b.order {
		b.rank[i] = k
	}
	return b
}

// index gives the node's number on each axis.
func (b *body) index(i int) (g [3]int) {
	n1, n2 := len(b.nodes.x[1]), len(b.nodes.x[2])
	if n1 == 1 && n2 == 1 {
		return [3]int{i, 0, 0}
	}
	return [3]int{i / (n1 * n2), i / n2 % n1, i % n2}
}

// node gives the coordinates of a node.
func (b *body) node(i int) coord {
	g := b.index(i)
	return coord{b.nodes.x[0][g[0]], b.nodes.x[1][g[1]], b.nodes.x[2][g[2]]}
}

// coord turns a place into coordinates, moved into the food if it lies outside.
func (b *body) coord(p Place) coord {
	if b.shells != nil {
		return b.shells.coord(p)
	}
	if b.ball != nil {
		return b.ball.coord(p)
	}
	x := coord{p.UpM, p.AcrossM, p.AlongM}
	for a := range x {
		switch b.kinds[a] {
		case lumped:
			x[a] = 0
		case planeFull:
			x[a] = b.by[a].s(max(-1, min(1, x[a]/b.radii[a])))
		default:
			x[a] = b.by[a].s(min(1, math.Abs(x[a])/b.radii[a]))
		}
	}
	return x
}

// place turns coordinates into a place.
func (b *body) place(x coord) Place {
	if b.shells != nil {
		return b.shells.place(x)
	}
	if b.ball != nil {
		return b.ball.place(x)
	}
	return Place{UpM: b.by[0].x(x[0]) * b.radii[0], AcrossM: b.by[1].x(x[1]) * b.radii[1], AlongM: b.by[2].x(x[2]) * b.radii[2]}
}

// surface tells whether coordinates lie on the surface.
func (b *body) surface(x coord) bool {
	if b.ball != nil {
		return x[0] == 1
	}
	any := false
	for a := range x {
		if b.kinds[a] != lumped {
			any = true
			if x[a] == 1 || x[a] == -1 && b.kinds[a] == planeFull {
				return true
			}
		}
	}
	return !any
}

// range_ gives the coldest and hottest node: enough for choosing properties.
func (b *body) range_(s snapshot) (lo, hi float64) {
	s.grid(b.buf)
	lo, hi = b.buf[0], b.buf[0]
	for _, c := range b.buf {
		lo, hi = min(lo, c), max(hi, c)
	}
	return lo, hi
}

// extreme is a coldest or hottest place.
type extreme struct {
	c float64 // °C
	x coord
}

// flatK is how much colder or hotter a place must be to be preferred to one nearer the centre, K.
const flatK = 1e-7

// extremes finds the coldest and hottest place anywhere in the food: among the nodes first, then along the axes between them.
func (b *body) extremes(shot snapshot) (low, high extreme) {
	if m, ok := shot.(*modalShot); ok {
		if layers, ok := m.f.fn.(*stack); ok {
			return layers.extremes(b, m)
		}
	}
	shot.grid(b.buf)
	lo, hi := b.lowest()
	s, between := shot.(smooth)
	if !between {
		return extreme{b.buf[lo], b.node(lo)}, extreme{b.buf[hi], b.node(hi)}
	}
	reach := rivalShare * (b.buf[hi] - b.buf[lo])
	low, high = b.polish(s, lo, 1), b.polish(s, hi, -1)
	if i := b.rival(lo, 1, reach, low.c); i >= 0 {
		if e := b.polish(s, i, 1); e.c < low.c-flatK {
			low = e
		}
	}
	if i := b.rival(hi, -1, reach, high.c); i >= 0 {
		if e := b.polish(s, i, -1); e.c > high.c+flatK {
			high = e
		}
	}
	return low, high
}

// rivalShare is how far behind the best node another may lie, as a share of the spread of all, and still hide a better place beside it.
const rivalShare = 0.15

// rival finds another node, lower than its neighbours, beside which a parabola promises a better place than best (°C); -1 if none.
func (b *body) rival(first int, sign, reach, best float64) int {
	stride, n := b.strides(), b.rowLength()
	found, most := -1, sign*best-flatK
	level := sign*b.buf[first] + reach
	for r := range b.rows {
		if sign*b.row(r, sign) > level {
			continue
		}
		row := b.buf[r*n:][:n]
		for k, c := range row {
			i := r*n + k
			c *= sign
			if c > level || k > 0 && sign*row[k-1] < c || k+1 < n && sign*row[k+1] < c || i == first {
				continue
			}
			if g := b.index(i); b.deeper(i, g, stride, sign) {
				if p := b.promise(i, g, stride, sign); p < most {
					found, most = i, p
				}
			}
		}
	}
	return found
}

// rowLength is the number of nodes along the last axis that has more than one.
func (b *body) rowLength() int {
	for a := 2; a > 0; a-- {
		if n := len(b.nodes.x[a]); n > 1 {
			return n
		}
	}
	return len(b.nodes.x[0])
}

// row gives the coldest (sign 1) or hottest (-1) node of a row.
func (b *body) row(r int, sign float64) float64 {
	if sign > 0 {
		return b.rows[r][0]
	}
	return b.rows[r][1]
}

// strides gives the distance of neighbours in buf, by axis.
func (b *body) strides() [3]int {
	return [3]int{len(b.nodes.x[1]) * len(b.nodes.x[2]), len(b.nodes.x[2]), 1}
}

// deeper tells whether no neighbour of a node is lower than it.
func (b *body) deeper(i int, g, stride [3]int, sign float64) bool {
	c := sign * b.buf[i]
	for a := 2; a >= 0; a-- {
		if g[a] > 0 && sign*b.buf[i-stride[a]] < c || g[a] < len(b.nodes.x[a])-1 && sign*b.buf[i+stride[a]] < c {
			return false
		}
	}
	return true
}

// promise is the lowest point of the parabolas through a node and its neighbours, one along each axis.
func (b *body) promise(i int, g, stride [3]int, sign float64) float64 {
	low := sign * b.buf[i]
	for a := range g {
		if len(b.nodes.x[a]) == 1 {
			continue
		}
		x, f := b.around(onAxis{a, i, g[a], stride[a]}, sign)
		v := valleyOf(x, f)
		low -= v.bend * (v.start - v.mid) * (v.start - v.mid)
	}
	return low
}

// onAxis is a node i seen along an axis: it is node g there, and its neighbours lie stride away in buf.
type onAxis struct{ axis, i, g, stride int }

// around gives the coordinates and heights of a node and its two neighbours on an axis; at an end the node itself stands for the neighbour.
func (b *body) around(n onAxis, sign float64) (x, f [3]float64) {
	xs := b.nodes.x[n.axis]
	lo, hi := max(n.g-1, 0), min(n.g+1, len(xs)-1)
	return [3]float64{xs[lo], xs[n.g], xs[hi]}, [3]float64{sign * b.buf[n.i+(lo-n.g)*n.stride], sign * b.buf[n.i], sign * b.buf[n.i+(hi-n.g)*n.stride]}
}

// lowest gives the coldest and hottest of the nodes in buf; of those that are as cold or hot the nearest to the centre.
func (b *body) lowest() (lo, hi int) {
	cold, hot := b.buf[0], b.buf[0]
	n := b.rowLength()
	for r := range b.rows {
		row := b.buf[r*n:][:n]
		least, most := row[0], row[0]
		for _, c := range row[1:] {
			if c < least {
				least = c
			}
			if c > most {
				most = c
			}
		}
		b.rows[r] = [2]float64{least, most}
		cold, hot = min(cold, least), max(hot, most)
	}
	return b.nearest(cold+flatK, 1), b.nearest(hot-flatK, -1)
}

// nearest gives the node nearest to the centre of those not above level (sign 1) or not below it (-1); there is one.
func (b *body) nearest(level, sign float64) int {
	if len(b.nodes.x[1]) == 1 { // one axis
		for _, i := range b.order {
			if sign*(b.buf[i]-level) <= 0 {
				return i
			}
		}
	}
	best, n := len(b.rank)-1, b.rowLength()
	for r := range b.rows {
		if sign*(b.row(r, sign)-level) > 0 {
			continue
		}
		ranks := b.rank[r*n:][:n]
		for k, c := range b.buf[r*n:][:n] {
			if sign*(c-level) <= 0 && ranks[k] < best {
				best = ranks[k]
			}
		}
	}
	return b.order[best]
}

// polish moves from a node to the extreme beside it; sign 1 looks for the coldest, -1 for the hottest. It goes along the axes on which the
// nodes leave it open, in turn, until nothing moves.
func (b *body) polish(s smooth, node int, sign float64) extreme {
	stride, g := b.strides(), b.index(node)
	var done [3]bool
	open := 0
	for a := range g {
		if done[a] = b.settled(onAxis{a, node, g[a], stride[a]}, sign); !done[a] {
			open++
		}
	}
	e := extreme{b.buf[node], b.node(node)}
	if open == 0 {
		return e
	}
	var r [maxDegrees]float64
	at := g // the node that the place lies on, by axis; -1: between
	sweeps := 3
	if open == 1 {
		sweeps = 1
	}
	for sweep := 0; sweep < sweeps; sweep++ {
		moved := false
		for a := range g {
			if sweep == 0 && done[a] || b.kinds[a] == lumped {
				continue
			}
			x, f := b.around(onAxis{a, node, g[a], stride[a]}, sign)
			if sweep == 0 && f[0]-f[1] <= flatK && f[2]-f[1] <= flatK {
				continue // flat: stay where the centre is nearest
			}
			n := len(b.nodes.phi[a]) / len(b.nodes.x[a])
			s.slice(a, e.x, at, r[:n])
			v := valleyOf(x, f)
			if sweep > 0 {
				v.start = e.x[a]
			}
			c, to := v.newton(baseOf(b.kinds[a], n), r[:n], sign)
			if sign*c < sign*e.c-1e-12 {
				moved = moved || math.Abs(to-e.x[a]) > 1e-4 && sign*(e.c-c) > 3e-5
				e.c, e.x[a], at[a] = c, to, -1
			}
		}
		if !moved {
			break
		}
	}
	return e
}

// settled tells from the three nodes at an end of an axis whether the extreme lies at that end: a parabola through them,
// in x² at a centre of symmetry, falls towards it clearly.
func (b *body) settled(n onAxis, sign float64) bool {
	if b.kinds[n.axis] == lumped {
		return true
	}
	xs := b.nodes.x[n.axis]
	if n.g != 0 && n.g != len(xs)-1 {
		return false
	}
	i, j := 1, 2
	if n.g != 0 {
		i, j = n.g-1, n.g-2
	}
	f0 := sign * b.buf[n.i]
	f1, f2 := sign*b.buf[n.i+(i-n.g)*n.stride], sign*b.buf[n.i+(j-n.g)*n.stride]
	x1, x2 := math.Abs(xs[i]-xs[n.g]), math.Abs(xs[j]-xs[n.g])
	if n.g == 0 && b.kinds[n.axis] != planeFull {
		x1, x2 = x1*x1, x2*x2
	}
	rise, next := (f1-f0)/x1, (f2-f1)/(x2-x1)
	slope := rise - (next-rise)*x1/x2
	return f1-f0 > flatK && slope > 0.25*rise
}

// valley is where a curve of three nodes is looked at for its minimum: mid is the lowest node, bend the curvature of the
// parabola through the three, start its lowest point.
type valley struct{ lo, mid, hi, start, bend float64 }

// valleyOf puts a parabola through three nodes; f are the heights.
func valleyOf(x, f [3]float64) valley {
	v := valley{lo: x[0], mid: x[1], hi: x[2], start: x[1]}
	if x[0] == x[1] || x[1] == x[2] { // at an end
		return v
	}
	left, right := (f[1]-f[0])/(x[1]-x[0]), (f[2]-f[1])/(x[2]-x[1])
	v.bend = 2 * (right - left) / (x[2] - x[0])
	if v.bend > 0 {
		v.start = max(v.lo, min(v.hi, (x[0]+x[1])/2-left/v.bend))
	}
	return v
}

// newton finds the minimum of sign times the sum of q times the polynomials, by Newton's method from the start on, kept between the ends
// by halving; an end where there is none inside.
func (v valley) newton(b *base, q []float64, sign float64) (c, x float64) {
	lo, hi, x := v.lo, v.hi, v.start
	tried := [2]bool{v.start == lo, v.start == hi}
	for it := 0; ; it++ {
		c, slope, bend := b.curve(x, q)
		slope, bend = sign*slope, sign*bend
		if slope < 0 || slope == 0 && bend < 0 {
			lo = x
		} else {
			hi = x
		}
		next := x - slope/bend
		switch {
		case bend > 0 && next >= lo && next <= hi:
			if gain := slope * (x - next) / 2; gain < 1e-7 { // K: no more is to be had
				return c - sign*gain, next
			}
		case slope < 0 && !tried[1]: // the end may be the minimum
			next, tried[1] = v.hi, true
		case slope > 0 && !tried[0]:
			next, tried[0] = v.lo, true
		default:
			next = (lo + hi) / 2
		}
		if hi-lo < 1e-5 || it == 60 {
			return c, x
		}
		x = next
	}
}

// Scan gives the first look at the history; it is made once and shared, so do not change it.
func (h *History) Scan() *Scan {
	if h.scan == nil {
		h.scan = h.look()
	}
	return h.scan
}

// stepTimes gives instants between two ends: dense after the change at from, then evenly, with the knots of the media.
func stepTimes(from, to, settle float64, knots []float64) []float64 {
	length := to - from
	wide := max(length/48, settle/4)
	times := []float64{from}
	for tau, d := settle/16, settle/16; tau < length; tau += d {
		times = append(times, from+tau)
		d = min(d*1.3, wide)
		d = max(d, settle/16)
	}
	times = append(times, to)
	for _, k := range knots {
		if k > 0 && k < length {
			times = append(times, from+k)
		}
	}
	return rising(times)
}

// mostKnots is how many instants of a medium a scan takes in a step; a longer course is thinned.
const mostKnots = 240

func (h *History) look() *Scan {
	sc := &Scan{}
	for i := range h.Spans {
		sp := &h.Spans[i]
		var knots []float64
		for k, every := 0, 1+len(h.knots[i])/mostKnots; k < len(h.knots[i]); k += every {
			knots = append(knots, h.knots[i][k])
		}
		times := stepTimes(sp.StartS, sp.EndS, h.settle, knots)
		if i > 0 {
			times = times[1:]
		}
		sc.TimesS = append(sc.TimesS, times...)
	}
	if f, ok := h.field.(remembers); ok {
		f.remember(h.remembered(sc.TimesS))
	}
	h.lookAt(sc)
	return sc
}

// lookAt fills the spots and temperatures of a scan, by its instants.
func (h *History) lookAt(sc *Scan) {
	b := h.body
	n, m := b.nodes.count(), len(sc.TimesS)
	all := make([]float64, n*m)
	sc.C, sc.Spots = make([][]float64, n), make([]Spot, n)
	for i := range sc.C {
		sc.C[i] = all[i*m : (i+1)*m]
		x := b.node(i)
		sc.Spots[i] = Spot{Place: b.place(x), Surface: b.surface(x)}
		if sc.Spots[i].Axes = h.Axes(sc.Spots[i].Place); b.ball != nil { // exactly the same of all nodes on a line
			sc.Spots[i].Axes = Axes{x[0] * b.ball.reach(), x[1] * b.ball.reach()}
		}
	}
	for k, t := range sc.TimesS {
		h.field.at(t).grid(b.buf)
		r := h.hull[spanAt(h.Spans, t)]
		for i, c := range b.buf {
			sc.C[i][k] = clamp(c, r)
		}
	}
	if h.settling != nil {
		h.settleScan(sc)
	}
}

// Least looks in the food, from a spot of the scan on, for the place with the smallest score, staying on the surface if asked.
// It returns the place and its score, and asks for few scores: a parabola along each axis, twice at most.
// A record returns the spot itself.
func (h *History) Least(from Spot, surfaceOnly bool, score func(Place) float64) (Place, float64) {
	best := score(from.Place)
	b := h.body
	if b == nil {
		return from.Place, best
	}
	x := b.coord(from.Place)
	fixed := -1
	if surfaceOnly {
		for a := range x {
			if b.kinds[a] != lumped && math.Abs(x[a]) == 1 {
				fixed = a
			}
			if b.ball != nil { // the other coordinate runs along the surface
				break
			}
		}
	}
	start := best
	for round := 0; round < 2; round++ {
		before := best
		for a := range x {
			if b.kinds[a] == lumped || a == fixed {
				continue
			}
			x[a], best = b.parabola(x, a, b.spacing(a, x[a])/math.Pow(3, float64(round)), best, score)
		}
		if math.IsNaN(best) || before-best <= 1e-3*math.Abs(start)+1e-9 {
			break
		}
	}
	return b.place(x), best
}

// spacing is half the distance of the nodes around a coordinate.
func (b *body) spacing(a int, x float64) float64 {
	xs := b.nodes.x[a]
	i := min(max(sort.SearchFloat64s(xs, x), 1), len(xs)-1)
	if xs[i]-xs[i-1] < 1e-6 && i+1 < len(xs) { // the two sides of a joint
		i++
	}
	return (xs[i] - xs[i-1]) / 2
}

// parabola looks along one axis, d either side, for a smaller score.
func (b *body) parabola(x coord, a int, d, best float64, score func(Place) float64) (float64, float64) {
	at, low := x[a], -1.0
	if b.kinds[a] != planeFull {
		low = 0
	}
	try := func(c float64) float64 {
		c = max(low, min(1, c))
		y := x
		y[a] = c
		s := score(b.place(y))
		if s < best {
			best, at = s, c
		}
		return s
	}
	here := best
	left, right := math.NaN(), math.NaN()
	if x[a]-d >= low {
		left = try(x[a] - d)
	}
	if x[a]+d <= 1 {
		right = try(x[a] + d)
	}
	if bend := left + right - 2*here; bend > 0 {
		if step := d / 2 * (left - right) / bend; math.Abs(step) > d/20 && math.Abs(step) < 2*d {
			try(x[a] + step)
		}
	}
	return at, best
}

// Sample fills the courses of the results: every multiple of everyS and every change of step.
func (h *History) Sample(everyS float64) Samples {
	end := h.EndS()
	var times []float64
	if everyS > 0 && end/everyS < 1e7 {
		times = make([]float64, 0, int(end/everyS)+len(h.Spans)+2)
	}
	ended := 0 // spans
	for k := 0; everyS > 0 && float64(k)*everyS < end; k++ {
		at := float64(k) * everyS
		for ; ended < len(h.Spans) && h.Spans[ended].EndS <= at; ended++ { // in order, so that there is nothing to sort
			times = append(times, h.Spans[ended].EndS)
		}
		times = append(times, at)
	}
	if len(times) == 0 {
		times = append(times, 0)
	}
	for ; ended < len(h.Spans); ended++ {
		times = append(times, h.Spans[ended].EndS)
	}
	return h.SampleAt(times)
}

// SampleAt gives the samples at chosen instants, at least one, s, put in order.
func (h *History) SampleAt(times []float64) Samples {
	s := Samples{TimesS: near(rising(times))}
	n := len(s.TimesS)
	courses := make([]float64, (len(h.Points)+3)*n)
	s.Points = make([][]float64, len(h.Points))
	first := 1 // the centre is a node, read below
	if h.Recorded {
		first = 0
	}
	for i := range h.Points {
		s.Points[i] = courses[i*n : (i+1)*n : (i+1)*n]
		if i >= first {
			h.Course(h.Points[i].Place, s.TimesS, s.Points[i])
		}
	}
	if h.Recorded {
		return s
	}
	courses = courses[len(h.Points)*n:]
	s.Coldest, s.Hottest, s.Mean = courses[:n:n], courses[n:2*n:2*n], courses[2*n:]
	places := make([]Place, 2*n)
	s.ColdestAt, s.HottestAt = places[:n:n], places[n:]
	if f, ok := h.field.(*tensor); ok && f.single() && f.axes[0].kind != lumped {
		f.sampleLine(h, &s)
		h.settledSamples(&s)
		return s
	}
	for i, t := range s.TimesS {
		shot := h.field.at(t)
		low, high := h.body.extremes(shot)
		s.Points[0][i] = h.within(t, h.body.buf[h.body.order[0]])
		s.Coldest[i], s.ColdestAt[i] = h.within(t, low.c), h.body.place(low.x)
		s.Hottest[i], s.HottestAt[i] = h.within(t, high.c), h.body.place(high.x)
		s.Mean[i] = h.within(t, shot.mean())
	}
	h.settledSamples(&s)
	return s
}

// near drops instants that lie within a microsecond of the one before.
func near(t []float64) []float64 {
	out := t[:1]
	for _, x := range t[1:] {
		if x-out[len(out)-1] > 1e-6 {
			out = append(out, x)
		}
	}
	return out
}
