package model

import "math"

// iceVolumes reads the heat contents of control volumes through which a front of ice moves.
//
// The heat content of a volume is a mean. Read as that of its node, the node would stay near the freezing point until the whole volume has
// frozen or thawed, and fronts would go in jumps. It is read as the mean over Kirchhoff integrals that lie evenly from u-near to u+near, where
// near is what the steeper side of each axis spreads over half a volume; of several axes the squares add up, as variances do. So a front goes
// through a volume as it goes through the food, and errors fall with the square of the number of volumes.
type iceVolumes struct {
	law   *law
	axes  [3]*spaceAxis
	near  []float64 // by node: the square of near, W²/m²
	shift []float64 // by node: how far the middle of half a volume lies from its node, W/m; 0 in whole volumes
	start []float64 // Kirchhoff integrals at the start of a step
}

func newIceVolumes(axes [3]*spaceAxis, l *law, startC float64) *iceVolumes {
	n := axes[0].n * axes[1].n * axes[2].n
	v := &iceVolumes{law: l, axes: axes, near: make([]float64, n), shift: make([]float64, n), start: make([]float64, n)}
	at := l.kirchhoff(l.heat(startC))
	for i := range v.start {
		v.start[i] = at
	}
	return v
}

// conduct fills out with the rates of heat contents by conduction from Kirchhoff integrals u, and near and shift for the next read.
func (v *iceVolumes) conduct(u, out []float64) {
	clear(out)
	clear(v.near)
	clear(v.shift)
	n0, n1, n2 := v.axes[0].n, v.axes[1].n, v.axes[2].n
	v.along(0, n1*n2, 0, u, out)
	for i := 0; i < n0; i++ {
		v.along(1, n2, i*n1*n2, u, out)
	}
	if n2 > 1 {
		for i := 0; i < n0*n1; i++ {
			v.row(i*n2, u, out)
		}
	}
}

// even makes volumes stand for their nodes alone.
func (v *iceVolumes) even(nodes []int) {
	for _, i := range nodes {
		v.near[i], v.shift[i] = 0, 0
	}
}

// along goes along an axis in a block of nodes that begins at from; inner nodes lie between one of the axis and the next.
func (v *iceVolumes) along(axis, inner, from int, u, out []float64) {
	a := v.axes[axis]
	n := a.n
	for i := 1; i < n-1; i++ {
		at := from + i*inner
		low, high := a.k[i*n+i-1], a.k[i*n+i+1]
		before, here, after := u[at-inner:at], u[at:at+inner], u[at+inner:at+2*inner]
		rate, near := out[at:at+inner], v.near[at:at+inner]
		for k, x := range here {
			p, q := before[k]-x, after[k]-x
			rate[k] += low*p + high*q
			if p, q = p*p, q*q; p < q {
				p = q
			}
			near[k] += p / 4
		}
	}
	first, last := from, from+(n-1)*inner
	for k := range inner {
		v.end(a, 0, first+k, inner, u, out)
		v.end(a, n-1, last+k, -inner, u, out)
	}
}

// row is along for the last axis.
func (v *iceVolumes) row(from int, u, out []float64) {
	a := v.axes[2]
	n := a.n
	here, rate, near := u[from:from+n], out[from:from+n], v.near[from:from+n]
	q := here[1] - here[0]
	for i := 1; i < n-1; i++ {
		p := q
		q = here[i+1] - here[i]
		rate[i] += a.k[i*n+i+1]*q - a.k[i*n+i-1]*p
		if p = p * p; p < q*q {
			p = q * q
		}
		near[i] += p / 4
	}
	v.end(a, 0, from, 1, u, out)
	v.end(a, n-1, from+n-1, -1, u, out)
}

// end is the first or last node of an axis, node at of the body, with its neighbour a stride away. Half a volume lies there. At a centre of
// symmetry u goes with the square of the distance. At a face it is straight, and its middle lies at a quarter of the way to the neighbour;
// half of that is taken, which was best against finer marches: the surface itself moves while the front passes.
func (v *iceVolumes) end(a *spaceAxis, i, at, stride int, u, out []float64) {
	d := u[at+stride] - u[at]
	j := i + 1
	if i > 0 {
		j = i - 1
	}
	out[at] += a.k[i*a.n+j] * d
	switch {
	case i > 0 && a.face[1] > 0 || a.kind == planeFull:
		v.near[at] += d * d / 16
		v.shift[at] += d / 8
	case i > 0 || a.kind == radial: // a pole is a centre too
		v.near[at] += d * d / 64
		v.shift[at] += d / 8
	default:
		v.near[at] += d * d / 64
		v.shift[at] += d / 12
	}
}

// read replaces the Kirchhoff integrals u of a moment ago, from which near and shift were taken, by those of heat contents h.
func (v *iceVolumes) read(h, u []float64) {
	for i, x := range h {
		u[i], _ = v.invert(x, u[i], i)
	}
}

// shiftAt is the shift of node i that counts at about u.
func (v *iceVolumes) shiftAt(i int, u float64) float64 {
	near2, shift := v.near[i], v.shift[i]
	if shift != 0 {
		if far := (u + shift) * (u + shift); far >= 4*near2 {
			shift = 0
		} else if far > near2 {
			shift *= 2 - math.Sqrt(far/near2)
		}
	}
	return shift
}

// evenly is how far from the freezing point, by its spread, a frozen volume is so even that the first term of a series does.
const evenly = 0.15

// invert finds the Kirchhoff integral of the heat content of node i from a guess, and its slope by the heat content. The shift counts only while a
// front is about: elsewhere the node stands for its volume as in any finite volumes.
func (v *iceVolumes) invert(h, guess float64, i int) (u, slope float64) {
	l := v.law
	near2, shift := v.near[i], v.shiftAt(i, guess)
	r, x, per := l.row(h)
	if x > 1 {
		_, u, _, slope = l.at(h)
		return u - shift, slope
	}
	b := &r.u
	u = b[0] + x*(b[1]+x*(b[2]+x*b[3]))
	slope = (b[1] + x*(2*b[2]+x*3*b[3])) * per
	square := u * u
	if h >= 0 && square >= near2 {
		return u - shift, slope
	}
	if near2 <= evenly*evenly*square {
		return u + near2/6*(2*b[2]+6*b[3]*x)*per*per/(slope*slope) - shift, slope
	}
	u, slope = v.within(h, guess+shift, u, math.Sqrt(near2))
	return u - shift, slope
}

// closeEnough is where Newton's method ends, by near: the next look begins there, and heat is kept whatever u is.
const closeEnough = 0.01

// within solves for the middle u of a volume with a front by Newton's method, kept between two bounds; at is the Kirchhoff integral of the point
// with the mean heat content h, which lies in the volume.
func (v *iceVolumes) within(h, guess, at, near float64) (u, slope float64) {
	lo, hi := at-near, at+near
	u = max(lo, min(hi, guess))
	for range 50 {
		mean, byU, _ := v.law.byU().mean(u, near)
		off := mean - h
		if off > 0 {
			hi = u
		} else {
			lo = u
		}
		slope = 1 / byU
		next := u - off*slope
		if !(next >= lo && next <= hi) {
			next = (lo + hi) / 2
		}
		d := math.Abs(next - u)
		if u = next; d < closeEnough*near {
			break
		}
	}
	return u, slope
}

// slopes fills out with the slopes in time of the Kirchhoff integrals u of heat contents h that change by rate.
func (v *iceVolumes) slopes(h, u, rate, out []float64) {
	for i, x := range h {
		_, slope := v.invert(x, u[i], i)
		out[i] = rate[i] * slope
	}
}
