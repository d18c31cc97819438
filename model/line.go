package model

import "math"

// anew is how many samples in a row may be carried from one to the next before the exponentials are taken anew:
// rounding grows by about one unit of the last place a sample.
const anew = 64

// sampleLine fills samples of a field with one axis, as Sample does for any, with less work: even steps of time within a segment
// multiply each mode by the same number, and what the media hold is added up once a segment.
func (f *tensor) sampleLine(h *History, s *Samples) {
	b, n := h.body, f.axes[0].n
	amp, factor, rest := make([]float64, n), make([]float64, n), make([]float64, len(b.buf))
	var sg *tensorSeg
	restMean, step := 0.0, math.NaN()
	carried, keep, span := 0, n, 0
	for k, t := range s.TimesS {
		for span < len(h.Spans)-1 && t > h.Spans[span].EndS {
			span++
		}
		fresh := sg == nil || t > sg.t1
		if fresh {
			sg = &f.segs[f.segAt(t)]
		}
		st, tau := sg.step, math.Min(math.Max(t-sg.t0, 0), sg.t1-sg.t0)
		if fresh || carried == anew {
			f.gridValues(st)
			keep, carried, step = decays(st.ax[0].rate, tau, amp), 0, math.NaN()
			for i, c := range sg.c[:keep] {
				amp[i] *= c
			}
		} else {
			if d := t - s.TimesS[k-1]; d != step {
				step = d
				for i, r := range st.ax[0].rate[:keep] {
					factor[i] = math.Exp(-r * d)
				}
			}
			carried++
			for i, x := range factor[:keep] {
				amp[i] *= x
			}
			for keep > 1 && math.Abs(amp[keep-1]) < 1e-12 {
				keep--
			}
		}
		if fresh || sg.moves() {
			restMean = sg.rest(tau, rest)
		}
		for g := range b.buf {
			sum := rest[g]
			for i, v := range st.gridB[0][g*n : g*n+keep] {
				sum += v * amp[i]
			}
			b.buf[g] = sum
		}
		mean := restMean
		for i, v := range st.e0[0][:keep] {
			mean += v * amp[i]
		}
		low, high := f.ends(b, t)
		hull := h.hull[span]
		s.Points[0][k], s.Mean[k] = clamp(b.buf[b.order[0]], hull), clamp(mean, hull)
		s.Coldest[k], s.ColdestAt[k] = clamp(low.c, hull), b.place(low.x)
		s.Hottest[k], s.HottestAt[k] = clamp(high.c, hull), b.place(high.x)
	}
}

// moves tells whether a medium changes within a segment.
func (sg *tensorSeg) moves() bool {
	for _, x := range sg.slope {
		if x != 0 {
			return true
		}
	}
	return false
}

// rest fills out with what the media hold at the nodes, tau after the start of a segment, and gives its mean.
func (sg *tensorSeg) rest(tau float64, out []float64) (mean float64) {
	st := sg.step
	clear(out)
	for g := range st.groups {
		level, slope := sg.level[g]+sg.slope[g]*tau, sg.slope[g]
		mean += st.meanS[g]*level - st.meanW[g]*slope
		for i, v := range st.steady[g] {
			out[i] += v*level - st.creep[g][i]*slope
		}
	}
	return mean
}

// ends finds the coldest and hottest place from the nodes in buf, going along the axis only where the nodes leave it open.
func (f *tensor) ends(b *body, t float64) (low, high extreme) {
	lo, hi := b.lowest()
	var shot snapshot
	at := func(node int, sign float64) extreme {
		if b.settled(node, node, 0, 1, sign) {
			return extreme{b.buf[node], coord{b.nodes.x[0][node]}}
		}
		if shot == nil {
			shot = f.at(t)
		}
		return b.descend(shot, node, [3]int{node}, [3]int{1}, [3]bool{false, true, true}, sign)
	}
	low, high = at(lo, 1), at(hi, -1)
	reach := rivalShare * (b.buf[hi] - b.buf[lo])
	if i := b.rival(lo, 1, reach, low.c); i >= 0 {
		if e := at(i, 1); e.c < low.c-flatK {
			low = e
		}
	}
	if i := b.rival(hi, -1, reach, high.c); i >= 0 {
		if e := at(i, -1); e.c > high.c+flatK {
			high = e
		}
	}
	return low, high
}
