package model

import (
	"math"
	"slices"
)

// heldW stands for a face that is kept at its medium where faces are taken together, W/(m²·K): so high that more makes no difference.
const heldW = 1e4

// Mixes tells whether a product is due to be calculated as well mixed too: its food may mix by itself, and it is not stirred already.
func Mixes(p *Product) bool {
	return !p.Shape.Mixed() && p.Food != nil && p.Food.Flow == FlowsThick
}

// Mixed gives a product that may mix by itself as one that is stirred all the time, with the volume and the surface of its shape, and its
// steps; those of endless shapes are taken for a metre (cylinder, bar) or a square metre (slab). A face that no step uncovers is no part of
// the surface. Where faces differ, they are taken together: their films weighed by area, as ran, the run as conducting, met them, and
// their media by film and area, which is exact for one temperature in the food. A spheroid has one surface.
func Mixed(p Product, steps []Step, ran *History) (Product, []Step) {
	volume, sides := p.Shape.bulk(&p.Size)
	var area float64 // of what any step uncovers, m²
	for _, d := range sides {
		if slices.ContainsFunc(steps, func(st Step) bool { return !st.on(d.face).Surface.NoMedium }) {
			area += d.areaM2
		}
	}
	if area == 0 { // insulated throughout: any will do
		area = 1
	}
	p.Shape, p.Size = Stirred, Size{VolumeM3: volume, AreaM2: area}
	out := make([]Step, len(steps))
	for i := range steps {
		out[i] = steps[i]
		out[i].Faces = nil
		out[i].Exposure = together(&steps[i], sides, area, ran.Spans[i].Films)
	}
	return p, out
}

// together makes one exposure of those of a step's faces, for a surface of areaM2.
func together(st *Step, sides []side, areaM2 float64, films []FilmUsed) Exposure {
	var only *Exposure // of every uncovered face
	var bare, conducts float64
	alike := true
	type part struct {
		e *Exposure
		w float64 // W/K
	}
	var parts []part
	for _, d := range sides {
		e := st.on(d.face)
		if e.Surface.NoMedium {
			continue
		}
		bare += d.areaM2
		w := math.Min(filmOn(films, d.face), heldW) * d.areaM2
		conducts += w
		parts = append(parts, part{e, w})
		alike = alike && (only == nil || e == only)
		only = e
	}
	switch {
	case len(parts) == 0:
		e := st.Exposure
		e.Surface, e.Medium = Insulated, Course{}
		return e
	case alike && math.Abs(bare-areaM2) < 1e-9*areaM2: // as it stands, with whatever follows the temperature
		return *only
	}
	film := conducts / areaM2
	out := Exposure{At: st.Exposure.At, Surface: Film, FilmW: &film}
	var times []float64
	for _, p := range parts {
		times = append(times, p.e.Medium.TimesS...)
	}
	slices.Sort(times)
	out.Medium.TimesS = slices.Compact(append([]float64{0}, times...))
	for _, t := range out.Medium.TimesS {
		sum := 0.0
		for _, p := range parts {
			sum += p.w / conducts * p.e.Medium.at(t)
		}
		out.Medium.C = append(out.Medium.C, sum)
	}
	return out
}

// filmOn is the film with wrap or contact that a face had, W/(m²·K).
func filmOn(films []FilmUsed, f *Face) float64 {
	w := 0.0
	for _, u := range films {
		if u.Face == f {
			return u.TotalW
		}
		if u.Face == nil {
			w = u.TotalW
		}
	}
	return w
}
