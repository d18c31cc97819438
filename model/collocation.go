package model

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// stretch crowds the coordinate of an axis towards its faces: x = tanh(b·s)/tanh(b), both from 0 at the centre to 1 at the face. A body that
// is much wider than thick has layers at its far faces as thin as those of its thickness, and is even between them. 0: x = s.
type stretch float64

// stretchFor gives the stretch with which an axis is crowded by a factor at its face, 0 < factor ≤ 1: dx/ds = 2b/sinh(2b) there.
func stretchFor(factor float64) stretch {
	if factor >= 0.999 {
		return 0
	}
	lo, hi := 0.0, 20.0
	for range 60 {
		if mid := (lo + hi) / 2; 2*mid/math.Sinh(2*mid) > factor {
			lo = mid
		} else {
			hi = mid
		}
	}
	return stretch(math.Round(lo*20) / 20) // few different ones, since what depends on them is kept
}

// x is the share of the radius at s.
func (b stretch) x(s float64) float64 {
	if b == 0 || s == 1 || s == -1 {
		return s
	}
	return math.Tanh(float64(b)*s) / math.Tanh(float64(b))
}

// s is the inverse of x.
func (b stretch) s(x float64) float64 {
	if b == 0 || x == 1 || x == -1 {
		return x
	}
	return math.Atanh(x*math.Tanh(float64(b))) / float64(b)
}

// slope is dx/ds.
func (b stretch) slope(s float64) float64 {
	if b == 0 {
		return 1
	}
	c := math.Cosh(float64(b) * s)
	return float64(b) / math.Tanh(float64(b)) / (c * c)
}

// collocation holds an axis of radius 1 by its values at n nodes, of which one stands on each face: the nodes of the Gauss-Radau rule of a
// half axis, in the variable of its polynomials, of the Gauss-Lobatto rule of a full one. What stands between is the polynomial through
// them, in the coordinate s of its stretch.
type collocation struct {
	*base
	stretch
	x, w []float64 // nodes, rising; weights in the axis' own measure, which add up to 1
	b    []float64 // n×n, b[m*n+j]: value at node j in coefficient m
	d    []float64 // n×n, slope by s at node i of a value at node j
	k    []float64 // n×n, what a value at node j adds to the rate at node i by conduction: minus stiffness over weight
	root []float64 // the roots of w
	sym  []float64 // n×n, −k between values times the roots of the weights, between which it is symmetric
	fast float64   // largest rate of decay of k
}

// collocationKey tells collocations apart.
type collocationKey struct {
	kind axisKind
	n    int
	stretch
}

var (
	collocationsMu sync.Mutex
	collocations   = map[collocationKey]*collocation{} // made once each
)

// collocationOf gives the collocation of a kind with n nodes.
func collocationOf(kind axisKind, n int, by stretch) *collocation {
	b := baseOf(kind, n)
	collocationsMu.Lock()
	defer collocationsMu.Unlock()
	key := collocationKey{kind, n, by}
	if c := collocations[key]; c != nil {
		return c
	}
	if len(collocations) >= mostCollocations {
		clear(collocations)
	}
	c := newCollocation(b, by)
	collocations[key] = c
	return c
}

// mostCollocations is how many are kept.
const mostCollocations = 400

func newCollocation(b *base, by stretch) *collocation {
	n := b.n
	c := &collocation{base: b, stretch: by, x: make([]float64, n), w: make([]float64, n), b: make([]float64, n*n), d: make([]float64, n*n), k: make([]float64, n*n)}
	if b.kind == planeFull {
		c.lobatto()
	} else {
		c.radau()
	}
	phi, dphi := mat.NewDense(n, n, nil), mat.NewDense(n, n, nil)
	for i, s := range c.x {
		b.values(s, phi.RawRowView(i), dphi.RawRowView(i))
	}
	var inv, slope mat.Dense
	if err := inv.Inverse(phi); err != nil {
		panic(err) // a bug of ours: the nodes are all different
	}
	slope.Mul(dphi, &inv)
	for i := 0; i < n; i++ {
		for j := 0; j < n; j++ {
			c.b[i*n+j], c.d[i*n+j] = inv.At(i, j), slope.At(i, j)
		}
	}
	c.stiffness()
	return c
}

// stiffness makes k and, of a stretched axis, the weights. The integrals are taken at the nodes; the rows of the stiffness add up to 0 and
// it is symmetric, so that heat is conserved.
func (c *collocation) stiffness() {
	n := c.n
	across := make([]float64, n) // weight of the square of a slope by s
	sum := 0.0
	for i, s := range c.x {
		wide := 1.0 // how much wider the axis is at x than at s, by its measure
		if s != 0 {
			wide = math.Pow(c.stretch.x(s)/s, map[axisKind]float64{radial: 1, spherical: 2}[c.kind])
		}
		across[i] = c.w[i] * wide / c.slope(s)
		c.w[i] *= wide * c.slope(s)
		sum += c.w[i]
	}
	for i := range c.w {
		c.w[i] /= sum
		across[i] /= sum
	}
	sym := mat.NewSymDense(n, nil)
	for i := 0; i < n; i++ {
		for j := i; j < n; j++ {
			s := 0.0
			for q := 0; q < n; q++ {
				s += across[q] * c.d[q*n+i] * c.d[q*n+j]
			}
			sym.SetSym(i, j, s/math.Sqrt(c.w[i]*c.w[j]))
			if i != j {
				c.k[i*n+j], c.k[j*n+i] = -s/c.w[i], -s/c.w[j]
			}
		}
	}
	for i := 0; i < n; i++ {
		for j := 0; j < n; j++ {
			if j != i {
				c.k[i*n+i] -= c.k[i*n+j]
			}
		}
	}
	c.root, c.sym = make([]float64, n), make([]float64, n*n)
	for i, w := range c.w {
		c.root[i] = math.Sqrt(w)
	}
	for i := range c.sym {
		c.sym[i] = -c.k[i] * (c.root[i/n] / c.root[i%n])
	}
	var eig mat.EigenSym
	eig.Factorize(sym, false)
	c.fast = eig.Values(nil)[n-1]
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

// weightsAt fills out with the weights of the nodes' values in the value at s.
func (c *collocation) weightsAt(s float64, out []float64) {
	n := c.n
	var phi [maxDegrees]float64
	c.values(s, phi[:n], nil)
	clear(out)
	addColumns(out, c.b, n, phi[:n])
}

// coefficients gives those of the polynomials from the values at the nodes.
func (c *collocation) coefficients(values, out []float64) {
	clear(out[:c.n])
	addRows(out[:c.n], c.b, c.n, values)
}
