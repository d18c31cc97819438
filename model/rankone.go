package model

import "math"

// rankOne brings diag(d) + rho·v·vᵀ to diagonal form: its eigenvalues mu (rising), its eigenvectors q (n×n, column j belongs to
// mu[j]), and g = rho·qᵀv. d rises strictly, rho ≥ 0, no element of v is 0.
//
// The eigenvalues are the zeros of 1/rho + Σ v²/(d-mu), one between each pair of d (Golub 1973, SIAM Review 15:318-334);
// they are found from the nearer pole by the rational iteration of Li 1993 (LAPACK Working Note 89, "the middle way"),
// guarded by bisection, and the vectors are made from the v that has exactly these eigenvalues (Gu & Eisenstat 1994,
// SIAM J. Matrix Anal. Appl. 15:1266-1276), which keeps them orthogonal to rounding. Both references from memory.
func rankOne(mem *slab, d, v []float64, rho float64) (mu, q, g []float64) {
	n := len(d)
	mu, q, g = mem.take(n), mem.take(n*n), mem.take(n)
	if rho == 0 {
		copy(mu, d)
		for i := range d {
			q[i*n+i] = 1
		}
		return mu, q, g
	}
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	gap := q // gap[k*n+j] = d[k] - mu[j], to full relative accuracy; turned into q below
	for j := range d {
		from, delta := secularRoot(d, v, rho, sum, j)
		mu[j] = d[from] + delta
		for k := range d {
			gap[k*n+j] = (d[k] - d[from]) - delta
		}
	}
	for k := range d {
		// ẑ² = Π(mu_j - d_k)/Π(d_j - d_k), each factor positive by interlacing
		z := (-gap[k*n+n-1]) / rho
		for j := 0; j < n-1; j++ {
			den := d[j] - d[k]
			if j >= k {
				den = d[j+1] - d[k]
			}
			z *= -gap[k*n+j] / den
		}
		z = math.Copysign(math.Sqrt(math.Abs(z)), v[k])
		for j := 0; j < n; j++ {
			q[k*n+j] = z / gap[k*n+j]
		}
	}
	for j := 0; j < n; j++ {
		norm := 0.0
		for k := 0; k < n; k++ {
			norm += q[k*n+j] * q[k*n+j]
		}
		norm = math.Sqrt(norm)
		for k := 0; k < n; k++ {
			q[k*n+j] /= norm
		}
		g[j] = -1 / norm // rho Σ v²/(d-mu)/norm, and the sum is -1/rho
	}
	return mu, q, g
}

// secularRoot finds the j-th eigenvalue as d[from]+delta.
func secularRoot(d, v []float64, rho, sum float64, j int) (from int, delta float64) {
	n := len(d)
	// the interval, measured from its left end
	width := rho * sum
	if j < n-1 {
		width = d[j+1] - d[j]
	}
	f := func(from int, x float64) float64 {
		s := 1 / rho
		for k := range d {
			s += v[k] * v[k] / ((d[k] - d[from]) - x)
		}
		return s
	}
	from = j
	lo, hi := 0.0, width
	if j < n-1 {
		if f(j, width/2) < 0 { // the zero lies in the right half
			from, lo, hi = j+1, -width/2, 0
		} else {
			hi = width / 2
		}
	}
	x := (lo + hi) / 2
	if j == n-1 && n > 1 {
		x = width * 0.999999
	}
	for it := 0; it < 80; it++ {
		below, above, left, right := 0.0, 0.0, 0.0, 0.0 // poles up to j give negative terms, the others positive ones
		for k, z := range v[:j+1] {
			r := 1 / ((d[k] - d[from]) - x)
			t := z * z * r
			below += t
			left += t * r
		}
		for k := j + 1; k < n; k++ {
			r := 1 / ((d[k] - d[from]) - x)
			t := v[k] * v[k] * r
			above += t
			right += t * r
		}
		s, size := 1/rho+below+above, 1/rho-below+above
		if s < 0 {
			lo = x
		} else {
			hi = x
		}
		if math.Abs(s) <= 4e-16*size || hi-lo <= 2e-16*max(math.Abs(lo), math.Abs(hi)) {
			break
		}
		dl := (d[j] - d[from]) - x
		dr := (d[j] - d[from]) + width - x
		a := (dl+dr)*s - dl*dr*(left+right)
		b := dl * dr * s
		c := s - dl*left - dr*right
		disc := math.Sqrt(max(0, a*a-4*b*c))
		var eta float64
		if a <= 0 {
			eta = (a - disc) / (2 * c)
		} else {
			eta = 2 * b / (a + disc)
		}
		next := x + eta
		if !(next > lo && next < hi) {
			next = (lo + hi) / 2
		}
		done := math.Abs(next-x) <= 1e-8*math.Abs(next) // the iteration squares its error
		x = next
		if done {
			break
		}
	}
	return from, x
}
