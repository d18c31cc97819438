package model

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// collocation holds an axis of radius 1 by its values at n nodes, of which one stands on each face: the nodes of the Gauss-Radau rule of a
// half axis, in the variable of its polynomials, of the Gauss-Lobatto rule of a full one. What stands between is the polynomial through them.
type collocation struct {
	*base
	x, w []float64 // nodes, rising; weights in the axis' own measure, which add up to 1
	b    []float64 // n×n, b[m*n+j]: value at node j in coefficient m
	d    []float64 // n×n, slope at node i of a value at node j
	k    []float64 // n×n, what a value at node j adds to the rate at node i by conduction: minus stiffness over weight
	fast float64   // largest rate of decay of k
}

var (
	collocationsMu sync.Mutex
	collocations   [axisKinds][maxDegrees + 1]*collocation // made once each
)

// collocationOf gives the collocation of a kind with n nodes.
func collocationOf(kind axisKind, n int) *collocation {
	b := baseOf(kind, n)
	collocationsMu.Lock()
	defer collocationsMu.Unlock()
	if c := collocations[kind][n]; c != nil {
		return c
	}
	c := newCollocation(b)
	collocations[kind][n] = c
	return c
}

func newCollocation(b *base) *collocation {
	n := b.n
	c := &collocation{base: b, x: make([]float64, n), w: make([]float64, n), b: make([]float64, n*n), d: make([]float64, n*n), k: make([]float64, n*n)}
	if b.kind == planeFull {
		c.lobatto()
	} else {
		c.radau()
	}
	phi, dphi := mat.NewDense(n, n, nil), mat.NewDense(n, n, nil)
	for i, x := range c.x {
		b.values(x, phi.RawRowView(i), dphi.RawRowView(i))
	}
	var inv, slope mat.Dense
	if err := inv.Inverse(phi); err != nil {
		panic(err) // a bug of ours: the nodes are all different
	}
	slope.Mul(dphi, &inv)
	// The stiffness of the polynomials, brought to the nodes; its rows add up to 0, so that heat is conserved.
	var left, stiff mat.Dense
	left.Mul(inv.T(), b.stiffness())
	stiff.Mul(&left, &inv)
	for i := 0; i < n; i++ {
		for j := 0; j < n; j++ {
			c.b[i*n+j], c.d[i*n+j] = inv.At(i, j), slope.At(i, j)
		}
	}
	sym := mat.NewSymDense(n, nil)
	for i := 0; i < n; i++ {
		sum := 0.0
		for j := 0; j < n; j++ {
			s := (stiff.At(i, j) + stiff.At(j, i)) / 2
			if j >= i {
				sym.SetSym(i, j, s/math.Sqrt(c.w[i]*c.w[j]))
			}
			if j != i {
				c.k[i*n+j] = -s / c.w[i]
				sum += s / c.w[i]
			}
		}
		c.k[i*n+i] = sum
	}
	var eig mat.EigenSym
	eig.Factorize(sym, false)
	c.fast = eig.Values(nil)[n-1]
	return c
}

// radau makes the Gauss-Radau rule with the face as a node from the recurrence of the polynomials: the nodes are the eigenvalues of its
// Jacobi matrix with the last diagonal element so that the face is one (Golub 1973, SIAM Review 15:318-334).
func (c *collocation) radau() {
	n := c.n
	r := recurrences[c.kind][:n]
	j := mat.NewSymDense(n, nil)
	for i := 0; i < n; i++ {
		j.SetSym(i, i, -r[i].b/r[i].a)
		if i+1 < n {
			j.SetSym(i, i+1, 1/r[i].a)
		}
	}
	phi := make([]float64, n)
	c.values(1, phi, nil)
	last := 1.0
	if n > 1 {
		last -= phi[n-2] / phi[n-1] / r[n-2].a
	}
	j.SetSym(n-1, n-1, last)
	var eig mat.EigenSym
	eig.Factorize(j, false)
	for i, t := range eig.Values(nil) {
		c.x[i] = math.Sqrt(max(0, (1+t)/2))
	}
	c.x[n-1] = 1
	for i, x := range c.x {
		c.values(x, phi, nil)
		sum := 0.0
		for _, p := range phi {
			sum += p * p
		}
		c.w[i] = 1 / sum
	}
}

// lobatto makes the Gauss-Lobatto rule on -1…1 (Abramowitz & Stegun 1964, 25.4.32), its inner nodes by Newton's method.
func (c *collocation) lobatto() {
	n := c.n
	p, d := make([]float64, n), make([]float64, n)
	m := float64(n - 1)
	for i := range c.x {
		x := -math.Cos(math.Pi * float64(i) / m)
		for try := 0; try < 100 && i > 0 && i < n-1; try++ {
			legendreAll(x, p, d)
			step := d[n-1] * (1 - x*x) / (2*x*d[n-1] - m*(m+1)*p[n-1])
			x -= step
			if math.Abs(step) < 1e-15 {
				break
			}
		}
		legendreAll(x, p, d)
		c.x[i], c.w[i] = x, 1/(m*(m+1)*p[n-1]*p[n-1])
	}
	if n%2 == 1 {
		c.x[n/2] = 0
	}
}

// weightsAt fills out with the weights of the nodes' values in the value at x.
func (c *collocation) weightsAt(x float64, out []float64) {
	n := c.n
	var phi [maxDegrees]float64
	c.values(x, phi[:n], nil)
	clear(out)
	addColumns(out, c.b, n, phi[:n])
}

// coefficients gives those of the polynomials from the values at the nodes.
func (c *collocation) coefficients(values, out []float64) {
	clear(out[:c.n])
	addRows(out[:c.n], c.b, c.n, values)
}
