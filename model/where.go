package model

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Where says in words where a place lies: by the name of the user's point that lies there, else by Lies.
func (p *Product) Where(at Place) string {
	if p.Shape == Stirred {
		return "anywhere: it is stirred"
	}
	for _, pt := range p.Points {
		if pt.Name != "" && at.near(pt.Place) {
			return pt.Name
		}
	}
	return p.Lies(at)
}

// Lies says in words where a place lies by its distances: from the centre or the axis, above the underside, on which face.
func (p *Product) Lies(at Place) string {
	z, up := p.Size, at.UpM
	switch p.Shape {
	case Stirred:
		return "anywhere: it is stirred"
	case Cylinder, Sphere:
		return p.round(math.Abs(up), z.DiameterM/2)
	}
	if at.near(Place{}) {
		return "centre"
	}
	half, across, along := z.ThicknessM/2, z.WidthM/2, math.Inf(1)
	switch p.Shape {
	case ShortCylinder:
		half, across = z.LengthM/2, z.DiameterM/2
	case Brick:
		along = z.LengthM / 2
	case Spheroid, LayeredSlab, Slab, nil:
		across = math.Inf(1)
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
	case across-far < sameM && p.Shape == ShortCylinder:
		faces = append(faces, "curved face")
	case across-far < sameM:
		faces = append(faces, "side")
	case p.Shape == ShortCylinder && far < sameM:
		aside = "on the axis"
	case p.Shape == ShortCylinder:
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
func (p *Product) round(r, most float64) string {
	middle, skin := "the centre", "surface"
	if p.Shape == Cylinder {
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
