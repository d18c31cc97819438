package model

import "math"

// product is a field as a sum of products of one-axis fields. With one constant medium on all faces the field of the first step is
// Tm + (T0-Tm)·X·Y·Z, and each later step adds one product: a standard superposition (Carslaw & Jaeger 1959, section 1.15).
// A place then costs a few numbers an axis instead of all modes.
type product struct {
	axes  [3]*axis
	nodes *nodes
	start float64
	steps []*productStep
	now   productShot
	fades fades
	mem   *slab // for what lives as long as the field
	tmp   *slab // for what is needed within a call
}

type productStep struct {
	t0, t1  float64
	ax      [3]*axisStep
	e0      [3][]float64
	mediumC float64
	terms   []productTerm
	gridB   [3][]float64
	there   standing // where course was asked for last
}

// productTerm is weight times a one-axis field in modes for each axis, at t0.
type productTerm struct {
	weight float64
	x      [3][]float64
}

// mostTerms is how many steps are worth a product each; beyond that the tensor, whose cost does not grow with the chain, is cheaper.
const mostTerms = 12

// separates tells whether the chain, of steps steps in the end, keeps products of axes: one constant medium in every step,
// more than one axis.
func separates(axes [3]*axis, chain []*chainStep, steps int) bool {
	if axes[1].kind == lumped || steps > mostTerms {
		return false
	}
	for _, cs := range chain {
		if len(cs.media) != 1 || len(cs.media[0].C) != 1 {
			return false
		}
	}
	return true
}

// fadedK is the size below which a term of an earlier step is left out, K: chains of hundreds of steps would drag all of them along.
const fadedK = 1e-10

// sizeK is the root mean square of a term over the food, K.
func (t *productTerm) sizeK() float64 {
	size := math.Abs(t.weight)
	for _, x := range t.x {
		sum := 0.0
		for _, v := range x {
			sum += v * v
		}
		size *= math.Sqrt(sum)
	}
	return size
}

func newProduct(axes [3]*axis, nd *nodes, startC float64, mem, tmp *slab) *product {
	f := &product{axes: axes, nodes: nd, start: startC, mem: mem, tmp: tmp}
	f.now.f = f
	return f
}

// run appends one step.
func (f *product) run(cs *chainStep) {
	st := &productStep{mediumC: cs.media[0].C[0]}
	before := f.start
	var last *productStep
	if len(f.steps) > 0 {
		last = f.steps[len(f.steps)-1]
		st.t0, before = last.t1, last.mediumC
	}
	st.t1 = st.t0 + cs.durS
	for a := range f.axes {
		st.ax[a] = f.axes[a].step(f.mem, f.tmp, cs.props, cs.lo[a], cs.up[a])
		st.e0[a] = st.ax[a].b[:f.axes[a].n]
	}
	if last != nil {
		mark := f.tmp.mark()
		var p [3][]float64
		for a := range f.axes {
			p[a] = project(f.tmp, f.axes[a].n, last.ax[a].b, st.ax[a].b)
		}
		for _, old := range last.terms {
			t := productTerm{weight: old.weight}
			for a := range f.axes {
				n := f.axes[a].n
				var e [maxDegrees]float64
				keep := decays(last.ax[a].rate, last.t1-last.t0, e[:n])
				t.x[a] = f.mem.take(n)
				for j := range e[:keep] {
					e[j] *= old.x[a][j]
				}
				addRows(t.x[a], p[a], n, e[:keep])
			}
			if t.sizeK() > fadedK {
				st.terms = append(st.terms, t)
			}
		}
		f.tmp.back(mark)
	}
	if before != st.mediumC {
		st.terms = append(st.terms, productTerm{weight: before - st.mediumC, x: st.e0})
	}
	f.steps = append(f.steps, st)
}

// pop takes the last step back.
func (f *product) pop() { f.steps = f.steps[:len(f.steps)-1] }

func (f *product) stepAt(t float64) *productStep {
	for _, st := range f.steps {
		if t <= st.t1 {
			return st
		}
	}
	return f.steps[len(f.steps)-1]
}

func (f *product) course(x coord, times, out []float64) {
	if len(times) == 0 {
		return
	}
	e := &f.fades.between
	var in *productStep
	kept := f.fades.first(times[0])
	for ti, t := range times {
		st := f.stepAt(t)
		if st != in {
			in = st
			st.there.move(x, &f.axes, &st.ax, 0)
		}
		v := &st.there.v
		tau := min(max(t-st.t0, 0), st.t1-st.t0)
		left := f.fades.on(&kept, t, &f.axes, &st.ax, tau)
		for a := range left {
			for i, x := range left[a] {
				e[a][i] = x * v[a][i]
			}
		}
		sum := st.mediumC
		for i := range st.terms {
			term := &st.terms[i]
			w := term.weight
			for a := range left {
				dot := 0.0
				for k, c := range term.x[a][:len(left[a])] {
					dot += c * e[a][k]
				}
				w *= dot
			}
			sum += w
		}
		out[ti] = sum
	}
}

func (f *product) remember(times []float64) { f.fades.start(times) }

// productShot is a product at one instant.
type productShot struct {
	f    *product
	st   *productStep
	keep [3]int
	amp  [][3][]float64 // by term and axis: modes at the instant
	line [][3][]float64 // by term and axis: the term at the nodes, filled by grid
}

func (f *product) at(t float64) snapshot {
	s := &f.now
	st := f.stepAt(t)
	s.st = st
	tau := min(max(t-st.t0, 0), st.t1-st.t0)
	for len(s.amp) < len(st.terms) {
		var x, line [3][]float64
		for a := range x {
			x[a], line[a] = make([]float64, f.axes[a].n), make([]float64, len(f.nodes.x[a]))
		}
		s.amp, s.line = append(s.amp, x), append(s.line, line)
	}
	for a := range f.axes {
		var e [maxDegrees]float64
		s.keep[a] = decays(st.ax[a].rate, tau, e[:f.axes[a].n])
		for i := range st.terms {
			for k, c := range st.terms[i].x[a][:s.keep[a]] {
				s.amp[i][a][k] = c * e[k]
			}
		}
	}
	return s
}

func (s *productShot) grid(out []float64) {
	f, st := s.f, s.st
	if st.gridB[0] == nil {
		for a := range f.axes {
			st.gridB[a] = nodeModes(f.mem, f.axes[a], f.nodes, a, st.ax[a].b)
		}
	}
	for t := range st.terms {
		for a, ax := range f.axes {
			line := s.line[t][a]
			clear(line)
			addRows(line, st.gridB[a], ax.n, s.amp[t][a][:s.keep[a]])
		}
	}
	lines := s.line[:len(st.terms)]
	last, middle := 1, 1 // the last axis with extent, and how many nodes there are on one between it and the first
	if f.axes[2].kind != lumped {
		last, middle = 2, len(f.nodes.x[1])
	}
	var sizes [mostTerms]float64
	n := len(f.nodes.x[last])
	for g0 := range f.nodes.x[0] {
		for g1 := 0; g1 < middle; g1++ {
			for t := range lines {
				sizes[t] = st.terms[t].weight * lines[t][0][g0]
				if last == 2 {
					sizes[t] *= lines[t][1][g1]
				}
			}
			sumLines(out[(g0*middle+g1)*n:][:n], st.mediumC, sizes[:len(lines)], lines, last)
		}
	}
}

// sumLines fills out with a number and the sum of the terms' lines along an axis, each times its size: three at a time, for fewer rounds.
func sumLines(out []float64, from float64, sizes []float64, lines [][3][]float64, axis int) {
	line := func(t int) []float64 { return lines[t][axis][:len(out)] }
	switch len(sizes) {
	case 0:
		for i := range out {
			out[i] = from
		}
	case 1:
		p, a := sizes[0], line(0)
		for i := range out {
			out[i] = from + p*a[i]
		}
	case 2:
		p, q, a, b := sizes[0], sizes[1], line(0), line(1)
		for i := range out {
			out[i] = from + p*a[i] + q*b[i]
		}
	default:
		p, q, r, a, b, c := sizes[0], sizes[1], sizes[2], line(0), line(1), line(2)
		for i := range out {
			out[i] = from + p*a[i] + q*b[i] + r*c[i]
		}
		for t := 3; t < len(sizes); t++ {
			add(out, sizes[t], line(t))
		}
	}
}

// add adds f times x to out.
func add(out []float64, f float64, x []float64) {
	x = x[:len(out)]
	for i := range out {
		out[i] += f * x[i]
	}
}

func (s *productShot) slice(axis int, x coord, node [3]int, out []float64) {
	f, st := s.f, s.st
	var v [3][maxDegrees]float64
	for a, ax := range f.axes {
		if a != axis && node[a] < 0 {
			modeValues(ax, st.ax[a].b, x[a], v[a][:s.keep[a]])
		}
	}
	var q [maxDegrees]float64
	for t := range st.terms {
		w := st.terms[t].weight
		for a := range f.axes {
			switch {
			case a == axis:
				continue
			case node[a] >= 0:
				w *= s.line[t][a][node[a]]
				continue
			}
			dot := 0.0
			for k, c := range s.amp[t][a][:s.keep[a]] {
				dot += c * v[a][k]
			}
			w *= dot
		}
		for k, c := range s.amp[t][axis][:s.keep[axis]] {
			q[k] += w * c
		}
	}
	toPolynomials(f.axes[axis].n, st.ax[axis].b, q[:s.keep[axis]], out)
	out[0] += st.mediumC
}

func (s *productShot) mean() float64 {
	st := s.st
	sum := st.mediumC
	for t := range st.terms {
		w := st.terms[t].weight
		for a := range s.f.axes {
			dot := 0.0
			for k, c := range s.amp[t][a][:s.keep[a]] {
				dot += c * st.e0[a][k]
			}
			w *= dot
		}
		sum += w
	}
	return sum
}

// together gives the properties at a temperature of a slab that conducts and holds as much heat as the layers with their joints, with the
// density of the whole.
func (p *Product) together(tC float64) Properties {
	var thick, against, mass, heat float64
	for i := range p.Layers {
		l := &p.Layers[i]
		q := l.Food.Props(tC)
		thick += l.ThicknessM
		against += l.ThicknessM/q.KWmK + l.BelowM2KW
		mass += l.ThicknessM * q.RhoKgM3
		heat += l.ThicknessM * q.RhoKgM3 * q.CJkgK
	}
	return Properties{KWmK: thick / against, RhoKgM3: mass / thick, CJkgK: heat / mass}
}
