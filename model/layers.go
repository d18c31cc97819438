package model

import "math"

// stack is a layered slab as functions: the polynomials of a plane on each layer. At a joint with contact resistance the field jumps.
type stack struct {
	kind  axisKind // planeHalf: from the middle up; planeFull: from the underside up
	halfM float64  // half of the whole thickness
	parts []part   // from the lowest up
	n     int
	at    *nodes      // that phi and of belong to
	phi   [][]float64 // by node: the polynomials of its part
	of    []int       // by node: its part
}

// part is a layer, or the upper half of the one in the middle of a symmetric slab.
type part struct {
	*base
	lo, hi    float64 // in half thicknesses of the whole
	first     int     // its first function
	layer     int     // of the product, from the top
	jointM2KW float64 // contact resistance to the part above; 0: they touch perfectly
	stiff     []float64
}

// bondM is how far from a joint a place is taken to lie on it, and beyondM how far beyond it the places on its other side are given, m.
const bondM, beyondM = 1e-10, 1e-9

// symmetric tells whether layers and joints are the same from both faces.
func symmetric(layers []Layer) bool {
	for i := range layers {
		j := len(layers) - 1 - i
		if !sameFood(layers[i].Food, layers[j].Food) || math.Abs(layers[i].ThicknessM-layers[j].ThicknessM) > 1e-12 {
			return false
		}
		if i < j && layers[i].BelowM2KW != layers[j-1].BelowM2KW {
			return false
		}
	}
	return true
}

// sameFood tells whether two layers are of one food: the same row, or the same built-in one.
func sameFood(a, b *Material) bool { return a == b || a.At == b.At && a.Name == b.Name }

// stackOf places the parts of a layered slab; degrees gives how many polynomials a part takes.
func stackOf(kind axisKind, layers []Layer, degrees func(p *part) int) *stack {
	s := &stack{kind: kind}
	for i := range layers {
		s.halfM += layers[i].ThicknessM / 2
	}
	at := -1.0
	for i := len(layers) - 1; i >= 0; i-- {
		p := part{lo: at, hi: at + layers[i].ThicknessM/s.halfM, layer: i}
		if at = p.hi; i == 0 {
			p.hi = 1
		}
		if i > 0 {
			p.jointM2KW = layers[i-1].BelowM2KW
		}
		form := planeFull
		if kind == planeHalf {
			if p.hi < bondM/s.halfM {
				continue
			}
			if p.lo < -bondM/s.halfM {
				form = planeHalf
			}
			p.lo = max(p.lo, 0)
		}
		p.base = &base{kind: form}
		p.base = baseOf(form, degrees(&p))
		p.first = s.n
		s.n += p.base.n
		n := p.base.n
		p.stiff = make([]float64, n*n)
		for i := 0; i < n; i++ {
			row := p.stiff[i*n:][:n]
			for j := range row {
				for f, d := range p.d {
					row[j] += d * p.u[i*n+f] * p.u[j*n+f]
				}
			}
		}
		s.parts = append(s.parts, p)
	}
	return s
}

// thickM is the thickness of a part.
func (s *stack) thickM(p *part) float64 { return (p.hi - p.lo) * s.halfM }

// inner gives the coordinate of a part's own polynomials.
func (p *part) inner(x float64) float64 {
	if p.kind == planeHalf {
		return max(0, min(1, x/p.hi))
	}
	return max(-1, min(1, (2*x-p.lo-p.hi)/(p.hi-p.lo)))
}

// outer is the inverse of inner.
func (p *part) outer(xi float64) float64 {
	if p.kind == planeHalf {
		return xi * p.hi
	}
	return (p.lo + p.hi + xi*(p.hi-p.lo)) / 2
}

// below tells whether a place x belongs to what lies below the joint c, within bond of which it lies on the joint: a place on a joint belongs
// to the layer nearer the centre, of two as near to the upper.
func below(x, c, bond float64) bool {
	if c > bond {
		return x <= c+bond
	}
	return x < c-bond
}

func (s *stack) below(x, c float64) bool { return below(x, c, bondM/s.halfM) }

// partAt gives the part that a place belongs to.
func (s *stack) partAt(x float64) int {
	i := 0
	for i < len(s.parts)-1 && !s.below(x, s.parts[i].hi) {
		i++
	}
	return i
}

func (s *stack) size() int { return s.n }

func (s *stack) one(out []float64) {
	clear(out)
	for i := range s.parts {
		out[s.parts[i].first] = 1
	}
}

func (s *stack) mean(out []float64) {
	clear(out)
	for i := range s.parts {
		p := &s.parts[i]
		out[p.first] = (p.hi - p.lo) / (1 - s.parts[0].lo)
	}
}

// bondShare is the share of the smaller resistance of two layers (thickness by conductivity) below which that of their joint is left out: the
// jump it would make is below a millionth of what the temperature changes across that layer.
const bondShare = 1e-6

func (s *stack) terms(cs *chainStep, mem *slab) terms {
	n := s.n
	te := terms{mass: mem.take(n), stiff: mem.take(n * n), drive: make([][]float64, len(cs.media))}
	for g := range te.drive {
		te.drive[g] = mem.take(n)
	}
	end := func(i int, xi, sign float64, v []float64) { // adds part i at its end xi to a row
		p := &s.parts[i]
		at := v[p.first:][:p.n]
		p.values(xi, at, nil)
		for j := range at {
			at[j] *= sign
		}
	}
	outer := func(u float64, v []float64) {
		for i, x := range v {
			if x != 0 {
				add(te.stiff[i*n:][:n], u*x, v)
			}
		}
	}
	for i := range s.parts {
		p := &s.parts[i]
		q := &cs.layers[p.layer]
		thick := s.thickM(p)
		r := thick
		if p.kind == planeFull {
			r /= 2
		}
		for j := 0; j < p.n; j++ {
			te.mass[p.first+j] = q.RhoKgM3 * q.CJkgK * thick
			add(te.stiff[(p.first+j)*n+p.first:][:p.n], q.KWmK*thick/(r*r), p.stiff[j*p.n:][:p.n])
		}
		if i+1 == len(s.parts) {
			break
		}
		up := &s.parts[i+1]
		v := mem.take(n)
		end(i, 1, 1, v)
		end(i+1, -1, -1, v)
		if least := min(thick/q.KWmK, s.thickM(up)/cs.layers[up.layer].KWmK); p.jointM2KW < bondShare*least {
			te.held = append(te.held, holding{v: v, group: -1})
		} else {
			outer(1/p.jointM2KW, v)
		}
	}
	face := func(f film, i int, xi float64) {
		if f.group < 0 {
			return
		}
		v := mem.take(n)
		end(i, xi, 1, v)
		p := &s.parts[i]
		if !(f.u*s.thickM(p) < heldFrom*cs.layers[p.layer].KWmK) {
			te.held = append(te.held, holding{v: v, group: f.group, share: 1})
			return
		}
		outer(f.u, v)
		add(te.drive[f.group], f.u, v)
	}
	face(cs.up[0], len(s.parts)-1, 1)
	if s.kind == planeFull {
		face(cs.lo[0], 0, -1)
	}
	return te
}

func (s *stack) values(x coord, out []float64) {
	clear(out)
	p := &s.parts[s.partAt(x[0])]
	p.values(p.inner(x[0]), out[p.first:][:p.n], nil)
}

// nodes places the nodes: in each part as those of a slab, both sides of each joint, and the centre.
func (s *stack) nodes(coarse bool) []float64 {
	var x []float64
	beyond := beyondM / s.halfM
	for i := range s.parts {
		p := &s.parts[i]
		count := 5
		if !coarse {
			count = max(5, p.n+1)
		}
		for k := 0; k < count; k++ {
			xi := -math.Cos(math.Pi * float64(k) / float64(count-1))
			if p.kind == planeHalf {
				xi = math.Sin(math.Pi / 2 * float64(k) / float64(count-1))
			}
			at := p.outer(xi)
			switch {
			case k == 0 && i > 0:
				if at = p.lo; s.below(at, p.lo) {
					at += beyond
				}
			case k == 0:
				at = p.lo
			case k == count-1:
				if at = p.hi; i+1 < len(s.parts) && !s.below(at, p.hi) {
					at -= beyond
				}
			case math.Abs(at) < beyond:
				at = 0
			}
			if k > 0 && at > 0 && x[len(x)-1] < 0 {
				x = append(x, 0)
			}
			x = append(x, at)
		}
	}
	return x
}

// prepare makes the tables of the nodes.
func (s *stack) prepare(nd *nodes) {
	if s.at == nd {
		return
	}
	s.at, s.phi, s.of = nd, nil, nil
	for _, x := range nd.x[0] {
		i := s.partAt(x)
		p := &s.parts[i]
		phi := make([]float64, p.n)
		p.values(p.inner(x), phi, nil)
		s.phi, s.of = append(s.phi, phi), append(s.of, i)
	}
}

func (s *stack) grid(nd *nodes, q, out []float64) {
	s.prepare(nd)
	for g, phi := range s.phi {
		sum := 0.0
		for j, c := range q[s.parts[s.of[g]].first:][:len(phi)] {
			sum += phi[j] * c
		}
		out[g] = sum
	}
}

// slice gives the polynomials of the part that the place belongs to.
func (s *stack) slice(_ *nodes, _ int, x coord, _ [3]int, q, out []float64) {
	p := &s.parts[s.partAt(x[0])]
	copy(out, q[p.first:][:p.n])
}

// extremes finds the coldest and hottest place of a layered slab: in each layer among its nodes and between them.
func (s *stack) extremes(b *body, shot *modalShot) (low, high extreme) {
	shot.grid(b.buf)
	lo, hi := b.lowest()
	reach := rivalShare * (b.buf[hi] - b.buf[lo])
	return s.extreme(b, shot, lo, 1, reach), s.extreme(b, shot, hi, -1, reach)
}

// extreme starts from the best node and looks at the best nodes of the other parts that are within reach, K; sign 1 looks for the coldest.
func (s *stack) extreme(b *body, shot *modalShot, node int, sign, reach float64) extreme {
	best := s.beside(b, shot, node, sign)
	for g := 0; g < len(s.of); {
		part, least := s.of[g], g
		for ; g < len(s.of) && s.of[g] == part; g++ {
			if sign*b.buf[g] < sign*b.buf[least] {
				least = g
			}
		}
		if part == s.of[node] || sign*(b.buf[least]-b.buf[node]) > reach {
			continue
		}
		if e := s.beside(b, shot, least, sign); sign*e.c < sign*best.c-flatK {
			best = e
		}
	}
	return best
}

// beside finds the extreme at or beside a node within its part.
func (s *stack) beside(b *body, shot *modalShot, g int, sign float64) extreme {
	p := &s.parts[s.of[g]]
	lo, hi := g, g
	if g > 0 && s.of[g-1] == s.of[g] {
		lo--
	}
	if g+1 < len(s.of) && s.of[g+1] == s.of[g] {
		hi++
	}
	var x, f [3]float64
	for k, i := range [3]int{lo, g, hi} {
		x[k], f[k] = p.inner(b.nodes.x[0][i]), sign*b.buf[i]
	}
	e := extreme{b.buf[g], coord{b.nodes.x[0][g]}}
	if f[0]-f[1] <= flatK && f[2]-f[1] <= flatK {
		return e // flat: stay where the centre is nearest
	}
	if c, xi := valleyOf(x, f).newton(p.base, shot.q[p.first:][:p.n], sign); sign*c < sign*e.c-1e-12 {
		e.c = c
		if at := p.outer(xi); s.partAt(at) == s.of[g] {
			e.x[0] = at
		}
	}
	return e
}
