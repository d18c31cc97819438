package model

import "math"

// nearTerms is how many terms of a Taylor series a field is followed with.
const nearTerms = 6

// nearby follows an extreme inside a field with one axis by the Taylor series of the field about a place near it: each term is a sum
// over the modes, of which few are left soon after a change. It holds for a common medium on both faces.
type nearby struct {
	st    *tensorStep // that all belongs to; nil: nothing is known
	x     float64     // the place
	h     float64     // where the extreme was found last, from x
	move  float64     // how far the extreme moved from the last sample to the one before
	known int         // how many of modes are known
	modes [maxDegrees]series
	s, w  series // of the response to the medium
}

// series are the terms of a Taylor series: term k times the k-th power of the distance.
type series [nearTerms]float64

// add adds f times another series.
func (s *series) add(f float64, o *series) {
	s[0] += f * o[0]
	s[1] += f * o[1]
	s[2] += f * o[2]
	s[3] += f * o[3]
	s[4] += f * o[4]
	s[5] += f * o[5]
}

// nearK is how large the last term of the series may be, K; those left out are smaller.
const nearK = 1e-7

// inner follows the extreme inside a field that has one; sign 1: it is the coldest. last is where it was found last, and is kept up to date.
func (w *lineSampler) inner(sign float64, last *float64) (c, x float64) {
	if c, x, ok := w.near.extreme(w, sign); ok {
		w.near.move, *last = x-*last, x
		return c, x
	}
	w.polynomials()
	xs := w.b.nodes.x[0]
	v := valley{lo: xs[0], hi: xs[len(xs)-1], start: *last}
	if x := *last + w.near.move; v.lo < x && x < v.hi {
		v.start = x
	}
	c, x = v.newton(w.f.axes[0].base, w.line[:w.lineLen], sign)
	if math.Abs(x-*last) < nearMove {
		w.near.settle(w, x)
	}
	w.near.move, *last = x-*last, x
	return c, x
}

// nearMove is how far an extreme may move from one sample to the next to be worth following.
const nearMove = 0.02

// settle makes the series about x.
func (l *nearby) settle(w *lineSampler, x float64) {
	ax, st := w.f.axes[0], w.sg.step
	n := ax.n
	l.st, l.x, l.h, l.known = st, x, 0, w.keep
	modes := l.modes[:w.keep]
	clear(modes)
	l.s, l.w = series{}, series{}
	r := &st.lines[st.up.group]
	rec := recurrences[ax.kind][:n]
	p0, p1 := series{}, series{1}
	for m := range rec {
		l.s.add(r.s[m], &p1)
		l.w.add(r.w[m], &p1)
		for i, v := range st.ax[0].b[m*n:][:len(modes)] {
			modes[i].add(v, &p1)
		}
		a, b, c := rec[m].a, rec[m].a*x+rec[m].b, rec[m].c
		next := series{b*p1[0] - c*p0[0]}
		for k := 1; k < nearTerms; k++ {
			next[k] = b*p1[k] + a*p1[k-1] - c*p0[k]
		}
		p0, p1 = p1, next
	}
}

// extreme finds the extreme from the series; ok is false where they do not reach.
func (l *nearby) extreme(w *lineSampler, sign float64) (c, x float64, ok bool) {
	sg := w.sg
	if l.st != sg.step || w.keep > l.known {
		return 0, 0, false
	}
	var q series
	g := l.st.up.group
	q.add(sg.level[g]+sg.slope[g]*w.tau, &l.s)
	if w.moving {
		q.add(-sg.slope[g], &l.w)
	}
	for i, a := range w.amp[:w.keep] {
		q.add(a, &l.modes[i])
	}
	h := l.h
	for range 8 {
		slope := q[1] + h*(2*q[2]+h*(3*q[3]+h*(4*q[4]+h*5*q[5])))
		bend := 2*q[2] + h*(6*q[3]+h*(12*q[4]+h*20*q[5]))
		if !(sign*bend > 0) {
			return 0, 0, false
		}
		d := slope / bend
		h -= d
		if h2 := h * h; !(math.Abs(q[5]*h2*h2*h) < nearK) || math.Abs(l.x+h) >= 1 {
			return 0, 0, false
		}
		if math.Abs(d) < 3e-4 {
			l.h = h
			return q[0] + h*(q[1]+h*(q[2]+h*(q[3]+h*(q[4]+h*q[5])))), l.x + h, true
		}
	}
	return 0, 0, false
}
