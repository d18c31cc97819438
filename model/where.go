package model

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Where says in words where a place lies: by the name of the user's point that lies there, else by Lies.
func (p *Product) Where(at Place) string {
	if p.Shape.Mixed() {
		return "anywhere: one temperature throughout"
	}
	for _, pt := range p.Points {
		if pt.Name != "" && at.near(pt.Place) && p.layerAt(at.UpM) == p.layerAt(pt.UpM) {
			return pt.Name
		}
	}
	return p.Lies(at)
}

// Lies says in words where a place lies by its distances: from the centre or the axis, above the underside, on which face.
func (p *Product) Lies(at Place) string {
	up, r := at.UpM, reach(p)
	switch {
	case p.Shape == nil && at.near(Place{}):
		return "centre"
	case p.Shape == nil:
		return "a place in a shape that is not known"
	case p.Shape.Mixed():
		return "anywhere: one temperature throughout"
	case p.Shape.Oval():
		return p.aboutAxis(at)
	case p.Shape.Layered():
		return p.inLayers(up)
	case p.Shape.Ways[0].Round():
		return p.round(math.Abs(up), r[0], p.Shape.Ways[0].kind)
	}
	if at.near(Place{}) {
		return "centre"
	}
	half, across, along := r[0], r[1], r[2]
	aroundAxis := len(p.Shape.Ways) > 1 && p.Shape.Ways[1].Round()
	if aroundAxis {
		along = math.Inf(1)
	}
	var faces, parts []string
	height := "half way up"
	switch {
	case half-up < sameM:
		faces, height = append(faces, "top"), ""
	case half+up < sameM:
		faces, height = append(faces, "underside"), ""
	case half-up < 1e-3:
		height = p.far(half-up) + " under the top"
	case math.Abs(up) >= sameM:
		height = p.far(half+up) + " above the underside"
	}
	aside := ""
	switch far := math.Abs(at.AcrossM); {
	case across-far < sameM && aroundAxis:
		faces = append(faces, "curved face")
	case across-far < sameM:
		faces = append(faces, "side")
	case aroundAxis && far < sameM:
		aside = "on the axis"
	case aroundAxis:
		aside = p.far(far) + " from the axis"
	case far >= sameM:
		aside = p.far(far) + " from the middle of the width"
	}
	lengthwise := ""
	switch far := math.Abs(at.AlongM); {
	case along-far < sameM:
		faces = append(faces, "end")
	case far >= sameM:
		lengthwise = p.far(far) + " from the middle of the length"
	}
	switch len(faces) {
	case 0:
	case 1:
		parts = append(parts, map[string]string{"underside": "underside", "curved face": "curved surface"}[faces[0]])
		if parts[0] == "" {
			parts[0] = faces[0] + " surface"
		}
	case 2:
		parts = append(parts, "edge of "+faces[0]+" and "+faces[1])
	default:
		parts = append(parts, "corner of "+strings.Join(faces[:2], ", ")+" and "+faces[2])
	}
	if len(faces) > 0 && aside == "on the axis" {
		aside = "" // the middle of a face needs no words
	}
	if len(faces) > 0 && height == "half way up" {
		height = ""
	}
	for _, s := range []string{aside, height, lengthwise} {
		if s != "" {
			parts = append(parts, s)
		}
	}
	return strings.Join(parts, ", ")
}

// round is a place at r (m) in a long cylinder or a sphere of radius most.
func (p *Product) round(r, most float64, kind axisKind) string {
	middle, skin := "the centre", "surface"
	if kind == radial {
		middle, skin = "the axis", "curved surface"
	}
	switch {
	case r < sameM:
		return "centre"
	case most-r < sameM:
		return skin
	case most-r < 1e-3:
		return p.far(most-r) + " under the surface"
	}
	return p.far(r) + " from " + middle
}

// aboutAxis is a place in a spheroid: by its distances from the axis and from the plane of the equator.
func (p *Product) aboutAxis(at Place) string {
	m := spheroidMap{a: p.Size.ThicknessM / 2, b: p.Size.DiameterM / 2}
	up, across := math.Abs(at.UpM), math.Abs(at.AcrossM)
	if up < sameM && across < sameM {
		return "centre"
	}
	where := p.far(across) + " from the axis, " + p.far(up) + " from the plane of the equator"
	switch depth := m.depthM(at); {
	case across < sameM && m.a-up < sameM:
		return "surface, at a pole"
	case up < sameM && m.b-across < sameM:
		return "surface, at the equator"
	case depth < sameM:
		return "surface, " + where
	case depth < 1e-3 && across < sameM:
		return p.far(depth) + " under the surface, at a pole"
	case depth < 1e-3 && up < sameM:
		return p.far(depth) + " under the surface, at the equator"
	case depth < 1e-3:
		return p.far(depth) + " under the surface, " + where
	case across < sameM:
		return "on the axis, " + p.far(up) + " from the centre"
	case up < sameM:
		return "in the plane of the equator, " + p.far(across) + " from the centre"
	}
	return where
}

// depthM is about how far a place lies under the surface, m: exact on it, on the axis and in the plane of the equator.
func (s *spheroidMap) depthM(at Place) float64 {
	x := s.coord(at)
	out := s.place(coord{1, x[1]})
	return (1 - x[0]) / math.Hypot(out.UpM/(s.a*s.a), out.AcrossM/(s.b*s.b)) // by the slope of ρ along the normal
}

// inLayers is a height in a layered slab: as in a slab, with the layer, or the joint and on which side of it.
func (p *Product) inLayers(up float64) string {
	layer := func(i int) string {
		if f := p.Layers[i].Food; f != nil {
			return fmt.Sprintf("layer %d (%s)", i+1, f.Name)
		}
		return fmt.Sprintf("layer %d", i+1)
	}
	half := p.Size.ThicknessM / 2
	switch {
	case half-up < sameM:
		return "top surface"
	case half+up < sameM:
		return "underside"
	}
	in, height := p.layerAt(up), half
	for i := 0; i < len(p.Layers)-1; i++ {
		height -= p.Layers[i].ThicknessM // of the joint below layer i
		if math.Abs(up-height) < sameM && (in == i || in == i+1) {
			return fmt.Sprintf("at the joint between %s and %s, in layer %d", layer(i), layer(i+1), in+1)
		}
	}
	if math.Abs(up) < sameM {
		return "centre, in " + layer(in)
	}
	if half-up < 1e-3 {
		return p.far(half-up) + " under the top, in " + layer(in)
	}
	return p.far(half+up) + " above the underside, in " + layer(in)
}

// layerAt gives the layer that a height belongs to, from the top; 0 where there are none.
func (p *Product) layerAt(up float64) int {
	height := p.Size.ThicknessM / 2
	for i := 0; i < len(p.Layers)-1; i++ {
		height -= p.Layers[i].ThicknessM
		if !below(up, height, bondM) {
			return i
		}
	}
	return max(len(p.Layers)-1, 0)
}

// sameM is how near two places are one, m: no probe is placed better.
const sameM = 5e-5

// inchM is an inch, m (exact by definition; NIST SP 811 (2008), app. B.6).
const inchM = 0.0254

// far writes a distance (m) for a place: in mm, or in inches to a hundredth (a thousandth below 1 mm) with mm in brackets.
func (p *Product) far(m float64) string {
	if !p.Inches {
		return mm(m)
	}
	parts := 100.0
	if m < 1e-3 {
		parts = 1000
	}
	return strconv.FormatFloat(math.Round(m/inchM*parts)/parts, 'f', -1, 64) + " in (" + mm(m) + ")"
}

// mm writes a length (m) in mm: whole ones from 1 mm on.
func mm(m float64) string {
	if m < 1e-3 {
		return strconv.FormatFloat(math.Round(m*1e4)/10, 'f', -1, 64) + " mm"
	}
	return fmt.Sprintf("%.0f mm", m*1000)
}

// near tells whether two places are one.
func (a Place) near(b Place) bool {
	return math.Abs(a.UpM-b.UpM) < sameM && math.Abs(a.AcrossM-b.AcrossM) < sameM && math.Abs(a.AlongM-b.AlongM) < sameM
}
