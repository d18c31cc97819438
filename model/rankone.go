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
	v2 := mem.take(n)
	for k, x := range v {
		v2[k] = x * x
		sum += v2[k]
	}
	gap := q // gap[k*n+j] = d[k] - mu[j], to full relative accuracy; turned into q below
	for j := range d {
		from, delta := secularRoot(d, v2, rho, sum, j)
		mu[j] = d[from] + delta
		for k := range d {
			gap[k*n+j] = (d[k] - d[from]) - delta
		}
	}
	norm := g // for now
	for k := range d {
		// ẑ² = Π(mu_j - d_k)/Π(d_j - d_k), each factor positive by interlacing; three at a time, for fewer divisions
		row, others := gap[k*n:][:n], 1.0
		z := (-row[n-1]) / rho
		for j, x := range row[:n-1] {
			z *= x
			if j < k {
				others *= d[k] - d[j]
			} else {
				others *= d[k] - d[j+1]
			}
			if j%3 == 2 {
				z, others = z/others, 1
			}
		}
		z = math.Copysign(math.Sqrt(math.Abs(z/others)), v[k])
		for j, x := range row {
			x = z / x
			row[j] = x
			norm[j] += x * x
		}
	}
	for j, x := range norm {
		g[j] = -1 / math.Sqrt(x) // rho Σ v²/(d-mu)/norm, and the sum is -1/rho
	}
	for k := range d {
		row := q[k*n:][:n]
		for j, x := range g {
			row[j] *= -x
		}
	}
	return mu, q, g
}

// secularRoot finds the j-th eigenvalue as d[from]+delta; v2 are the squares of v, and sum is their sum.
func secularRoot(d, v2 []float64, rho, sum float64, j int) (from int, delta float64) {
	n := len(d)
	// the interval, measured from its left end
	width := rho * sum
	if j < n-1 {
		width = d[j+1] - d[j]
	}
	if n == 1 {
		return 0, width
	}
	from = j
	lo, hi := 0.0, width
	var x float64
	if j < n-1 {
		s, half := 1/rho, width/2
		for k, z := range v2 {
			s += z / ((d[k] - d[j]) - half)
		}
		// the zero between the two poles if the others stay as they are in the middle
		left, right := v2[j], v2[j+1]
		rest := s + (left-right)/half
		a, b := rest*width+left+right, left*width
		if hi = half; s < 0 { // it lies in the right half
			from, lo, hi = j+1, -half, 0
			a, b = left+right-rest*width, -right*width
		}
		x = (lo + hi) / 2
		if first := smallRoot(a, b, rest); first > lo && first < hi {
			x = first
		}
	} else {
		x = width * 0.999999
	}
	for it := 0; it < 80; it++ {
		below, above, left, right := 0.0, 0.0, 0.0, 0.0 // poles up to j give negative terms, the others positive ones
		for k, z := range v2[:j+1] {
			r := 1 / ((d[k] - d[from]) - x)
			t := z * r
			below += t
			left += t * r
		}
		for k := j + 1; k < n; k++ {
			r := 1 / ((d[k] - d[from]) - x)
			t := v2[k] * r
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
		eta := smallRoot(a, b, c)
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

// smallRoot is the root of c·x² - a·x + b = 0 that goes to b/a with b, without cancellation.
func smallRoot(a, b, c float64) float64 {
	disc := math.Sqrt(max(0, a*a-4*b*c))
	if a <= 0 {
		return (a - disc) / (2 * c)
	}
	return 2 * b / (a + disc)
}
