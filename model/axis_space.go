package model

// spaceAxis is an axis of a body that is marched in more than one direction.
type spaceAxis struct {
	kind         axisKind
	n            int
	x            []float64 // nodes, in radii, or in the coordinate of a stretch
	w            []float64 // their shares of the volume
	k            []float64 // n×n, 1/m²: what a Kirchhoff integral at node j adds to the rate at node i
	fast         float64   // largest rate of decay of k, 1/m²
	perR2        float64   // one over the radius squared, 1/m²
	lower, upper *Face
	face         [2]float64   // what a flow over the lower and upper face adds to the rate of its node, 1/m; 0 where there is none
	poly         *collocation // nil where the nodes are those of control volumes
	line         *lineMesh    // control volumes only
}

// smooth makes an axis of n nodes with the polynomial through them, for fields without a freezing front.
func smoothAxis(kind axisKind, radiusM float64, n int, by stretch, faces [2]*Face) *spaceAxis {
	c := collocationOf(kind, n, by)
	a := &spaceAxis{kind: kind, n: n, x: c.x, w: c.w, k: make([]float64, n*n), poly: c, lower: faces[0], upper: faces[1], perR2: 1 / (radiusM * radiusM)}
	for i, k := range c.k {
		a.k[i] = k * a.perR2
	}
	a.fast = c.fast * a.perR2
	a.faces(radiusM)
	return a
}

// cutAxis makes an axis of control volumes, for fields with a freezing front; their nodes stand closer at a face by e to the power of crowd.
func cutAxis(kind axisKind, radiusM float64, n int, crowd float64, faces [2]*Face) *spaceAxis {
	g := newLineGrid(&Product{}, kind, radiusM, n, crowd)
	m := newLineMesh(g)
	a := &spaceAxis{kind: kind, n: len(g.x), w: m.share, line: m, lower: faces[0], upper: faces[1]}
	a.x, a.k = make([]float64, a.n), make([]float64, a.n*a.n)
	for i, x := range g.x {
		a.x[i] = x / radiusM
	}
	for i, l := range g.links {
		p, q := l.g/g.w[i], l.g/g.w[i+1]
		a.k[i*a.n+i] -= p
		a.k[i*a.n+i+1] += p
		a.k[(i+1)*a.n+i+1] -= q
		a.k[(i+1)*a.n+i] += q
	}
	for i := range a.x {
		a.fast = max(a.fast, -2*a.k[i*a.n+i])
	}
	a.faces(radiusM)
	return a
}

// faces sets what a flow over a face does.
func (a *spaceAxis) faces(radiusM float64) {
	per := (&axis{base: &base{kind: a.kind}}).weight() / radiusM
	a.face[1] = per / a.w[a.n-1]
	if a.kind == planeFull {
		a.face[0] = per / a.w[0]
	}
}

// apply adds the rates along an axis; inner values lie between one node of the axis and the next.
func (a *spaceAxis) apply(u, out []float64, inner int) {
	n := a.n
	switch {
	case n == 1:
	case inner == 1:
		addRows(out, a.k, n, u)
	default:
		for i := 0; i < n; i++ {
			addColumns(out[i*inner:(i+1)*inner], u, inner, a.k[i*n:(i+1)*n])
		}
	}
}

// onto gives a function that takes values at the nodes of an axis to those of another.
func (a *spaceAxis) onto(other *spaceAxis) func(here, there []float64) {
	if a.n == 1 {
		return func(here, there []float64) { copy(there, here) }
	}
	if a.poly == nil {
		return func(here, there []float64) {
			for j, x := range other.x {
				there[j] = a.line.at(coord{x}, here)
			}
		}
	}
	w := make([]float64, other.n*a.n)
	for j, x := range other.x {
		a.valueAt(x, w[j*a.n:(j+1)*a.n])
	}
	return func(here, there []float64) {
		clear(there)
		addRows(there, w, a.n, here)
	}
}

// valueAt fills out with the weights of the nodes in the value at x.
func (a *spaceAxis) valueAt(x float64, out []float64) {
	if a.n == 1 {
		out[0] = 1
		return
	}
	a.poly.weightsAt(x, out)
}
