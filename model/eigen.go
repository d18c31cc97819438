package model

import "math"

// eigen brings a symmetric n×n matrix to diagonal form: d are its eigenvalues, rising, and row i of v is the eigenvector that belongs to d[i].
// The matrix is overwritten; the results lie in tmp. The way is that of the textbooks: Householder's reflections to three diagonals, then
// implicit QL steps (Wilkinson & Reinsch 1971, Handbook for Automatic Computation II, contributions II/2 and II/4; from memory), arranged so
// that every inner loop runs along rows.
func eigen(tmp *slab, n int, a []float64) (d, v []float64) {
	d, v = tmp.take(n), tmp.take(n*n)
	mark := tmp.mark()
	e := tmp.take(n + 1)
	tridiagonal(tmp, n, a, d, e, v)
	implicitQL(n, d, e, v)
	sortModes(n, d, v, tmp.take(n))
	tmp.back(mark)
	return d, v
}

// tridiagonal reduces a to the diagonal d and the diagonal beside it e (n-1): a = vᵀ·T·v.
func tridiagonal(tmp *slab, n int, a, d, e, v []float64) {
	p, scale := tmp.take(n), tmp.take(n)
	for k := 0; k+2 < n; k++ {
		x := a[k*n+k+1:][:n-k-1] // becomes the reflection's vector
		sum := 0.0
		for _, c := range x[1:] {
			sum += c * c
		}
		if sum == 0 {
			e[k] = x[0]
			continue
		}
		alpha := -math.Copysign(math.Sqrt(x[0]*x[0]+sum), x[0])
		e[k] = alpha
		x[0] -= alpha
		beta := 2 / (x[0]*x[0] + sum)
		scale[k] = beta
		m := len(x)
		p := p[:m]
		dot := 0.0
		for i, c := range x {
			s := 0.0
			for j, b := range a[(k+1+i)*n+k+1:][:m] {
				s += b * x[j]
			}
			p[i] = beta * s
			dot += p[i] * c
		}
		for i, c := range x {
			p[i] -= beta / 2 * dot * c
		}
		for i, c := range x {
			row, w := a[(k+1+i)*n+k+1:][:m], p[i]
			for j := range row {
				row[j] -= c*p[j] + w*x[j]
			}
		}
	}
	for k := 0; k < n; k++ {
		d[k] = a[k*n+k]
	}
	if n > 1 {
		e[n-2] = a[(n-2)*n+n-1]
	}
	for i := 0; i < n; i++ {
		v[i*n+i] = 1
	}
	for k := n - 3; k >= 0; k-- { // v = …·H1·H0 from the last on: rows and columns beyond k only
		if scale[k] == 0 {
			continue
		}
		x := a[k*n+k+1:][:n-k-1]
		for i := range x {
			row := v[(k+1+i)*n+k+1:][:len(x)]
			s := 0.0
			for j, c := range x {
				s += row[j] * c
			}
			s *= scale[k]
			for j, c := range x {
				row[j] -= s * c
			}
		}
	}
}

// implicitQL turns the tridiagonal matrix d, e to its eigenvalues and the rows of v to its eigenvectors.
func implicitQL(n int, d, e, v []float64) {
	e[n-1] = 0
	for l := 0; l < n; l++ {
		for range 60 { // two or three are the rule
			m := l
			for ; m < n-1; m++ {
				if math.Abs(e[m]) <= 1.2e-16*(math.Abs(d[m])+math.Abs(d[m+1])) {
					break
				}
			}
			if m == l {
				break
			}
			g := (d[l+1] - d[l]) / (2 * e[l])
			r := math.Sqrt(g*g + 1)
			g = d[m] - d[l] + e[l]/(g+math.Copysign(r, g))
			s, c, p := 1.0, 1.0, 0.0
			i := m - 1
			for ; i >= l; i-- {
				f, b := s*e[i], c*e[i]
				r = math.Sqrt(f*f + g*g)
				e[i+1] = r
				if r == 0 {
					d[i+1] -= p
					e[m] = 0
					break
				}
				s, c = f/r, g/r
				g = d[i+1] - p
				r = (d[i]-g)*s + 2*c*b
				p = s * r
				d[i+1] = g + p
				g = c*r - b
				turn(v[i*n:][:n], v[(i+1)*n:][:n], s, c)
			}
			if i >= l {
				continue
			}
			d[l] -= p
			e[l], e[m] = g, 0
		}
	}
}

// turn rotates two rows.
func turn(low, up []float64, s, c float64) {
	up = up[:len(low)]
	for k, x := range low {
		f := up[k]
		up[k] = s*x + c*f
		low[k] = c*x - s*f
	}
}

// sortModes sorts eigenvalues and the rows that belong to them.
func sortModes(n int, d, v, row []float64) {
	for i := 0; i < n-1; i++ {
		least := i
		for j := i + 1; j < n; j++ {
			if d[j] < d[least] {
				least = j
			}
		}
		if least != i {
			d[i], d[least] = d[least], d[i]
			copy(row, v[i*n:][:n])
			copy(v[i*n:][:n], v[least*n:][:n])
			copy(v[least*n:][:n], row)
		}
	}
}
