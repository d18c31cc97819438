package model

import (
	"math"
	"slices"
)

// Way is a direction in which heat crosses a shape, from its middle to the faces at both ends.
type Way struct {
	kind         axisKind // planeHalf, radial or spherical
	Size         string   // the column with its whole length: thickness, width, length or diameter
	lower, upper *Face    // at its ends; alike, they never differ; nil: the one surface
}

// upright is the way from the underside to the top; the column says what its length is called.
func upright(column string) Way { return Way{planeHalf, column, Underside, Top} }

// Round tells whether the way is a radius, all round an axis or a centre.
func (w *Way) Round() bool { return w.kind == radial || w.kind == spherical }

// lengthM is its whole length in a product of sizes z, m.
func (w *Way) lengthM(z *Size) float64 { return *z.Of(w.Size) }

// bulk is what the way spans in a product of sizes z: a length, the area of a circle or the volume of a ball, m, m² or m³; ends is what each of
// its ends covers beside the other ways: 1, the girth of a circle or the surface of a ball, 1, m or m².
func (w *Way) bulk(z *Size) (span, end float64) {
	switch d := w.lengthM(z); w.kind {
	case radial:
		return math.Pi / 4 * d * d, math.Pi * d
	case spherical:
		return math.Pi / 6 * d * d * d, math.Pi * d * d
	default:
		return d, 1
	}
}

// directions is how many directions of space the way takes up.
func (w *Way) directions() int { return [axisKinds]int{planeHalf: 1, radial: 2, spherical: 3}[w.kind] }

// Faces are the faces that may have surroundings of their own; none: one surface.
func (s *Shape) Faces() []*Face {
	var all []*Face
	for i := range s.Ways {
		for _, f := range []*Face{s.Ways[i].upper, s.Ways[i].lower} {
			if f != nil && !slices.Contains(all, f) {
				all = append(all, f)
			}
		}
	}
	return all
}

// Mixed tells whether a shape has one temperature throughout; a nil shape is not known to have.
func (s *Shape) Mixed() bool { return s != nil && s.build == mixed }

// Layered tells whether a shape is made of the rows of the sheet Layers.
func (s *Shape) Layered() bool { return s != nil && s.build == ofLayers }

// Oval tells whether a shape is an ellipse turned about its first way.
func (s *Shape) Oval() bool { return s != nil && s.build == oval }

// flat tells whether heat crosses a shape in one direction, so that its faces have no edges.
func (s *Shape) flat() bool { return len(s.Ways) == 1 && !s.Ways[0].Round() }

// reach is how far the food extends from its centre up, across and along, m: 0 where a round way takes the direction up, endless where no way
// leads.
func reach(p *Product) [3]float64 {
	endless := math.Inf(1)
	r, n := [3]float64{endless, endless, endless}, 0
	if p.Shape == nil {
		return r
	}
	for i := range p.Shape.Ways {
		r[i], n = p.Shape.Ways[i].lengthM(&p.Size)/2, n+p.Shape.Ways[i].directions()
	}
	for i := len(p.Shape.Ways); i < n; i++ {
		r[i] = 0
	}
	return r
}

// side is a part of the surface.
type side struct {
	face   *Face // nil: all of it
	areaM2 float64
}

// bulk gives the volume of a shape, m³, and the parts of its surface; of an endless one those of a metre, or of a square metre.
func (s *Shape) bulk(z *Size) (volumeM3 float64, sides []side) {
	switch s.build {
	case mixed:
		return z.VolumeM3, []side{{nil, z.AreaM2}}
	case oval:
		t, d := s.Ways[0].lengthM(z), s.Ways[1].lengthM(z)
		return math.Pi / 6 * t * d * d, []side{{nil, spheroidM2(t, d)}}
	}
	volumeM3 = 1
	for i := range s.Ways {
		span, area := s.Ways[i].bulk(z)
		volumeM3 *= span
		for k := range s.Ways {
			if k != i {
				span, _ := s.Ways[k].bulk(z)
				area *= span
			}
		}
		switch w := &s.Ways[i]; {
		case w.lower != w.upper:
			sides = append(sides, side{w.upper, area}, side{w.lower, area})
		case w.Round():
			sides = append(sides, side{w.upper, area})
		default:
			sides = append(sides, side{w.upper, 2 * area})
		}
	}
	return volumeM3, sides
}

// spheroidM2 is the surface of a spheroid of a thickness along its axis and a diameter across it, m² (Bronshtein & Semendyayev,
// Handbook of Mathematics; from memory, and held by a test against a sum over rings).
func spheroidM2(thickness, diameter float64) float64 {
	c, a := thickness/2, diameter/2
	switch e := math.Sqrt(math.Abs(1 - (min(a, c)/max(a, c))*(min(a, c)/max(a, c)))); {
	case e < 1e-4: // a sphere
		return 4 * math.Pi * a * c
	case c > a:
		return 2 * math.Pi * a * (a + c*math.Asin(e)/e)
	default:
		return 2 * math.Pi * (a*a + c*c*math.Atanh(e)/e)
	}
}

// openWidthM stands for the width and length that a slab does not give: a large tray, so that films come out low.
const openWidthM = 0.5

// acrossFlowM is the size across the flow of air or water, m. A body of three sizes lies across it with its middle one, as the cylinder formulas take it: the
// diameter of a long joint, the middle edge of a block, the diameter of a flat tin. Round ones have their diameter twice or three times, an
// endless direction is the largest, and what is mixed lies as the cube of its volume.
func (s *Shape) acrossFlowM(z *Size) float64 {
	if s.build == mixed {
		return math.Cbrt(z.VolumeM3)
	}
	if s.flat() {
		return openWidthM
	}
	sizes, n := [3]float64{math.Inf(1), math.Inf(1), math.Inf(1)}, 0
	for i := range s.Ways {
		w := &s.Ways[i]
		for range w.directions() {
			sizes[n], n = w.lengthM(z), n+1
		}
	}
	slices.Sort(sizes[:])
	return sizes[1]
}

// longSpheroid is the length by diameter from which a spheroid takes the cylinder's film in a stream: from there on Yovanovich's formula for
// spheroids (AIAA paper 88-0743, 1988; from memory) gives as much within 8 %. Rounder ones take the sphere's film, which is lower.
const longSpheroid = 1.5

// inFluid gives the correlations of air or water that stands and of air that streams over a shape.
func (s *Shape) inFluid(z *Size) (free, forced *correlation) {
	switch {
	case s.flat():
		return &freeCylinder, &forcedPlate
	case len(s.Ways) > 0 && s.Ways[0].kind == spherical:
		return &freeSphere, &forcedSphere
	case s.build == oval && s.Ways[0].lengthM(z) < longSpheroid*s.Ways[1].lengthM(z):
		return &freeCylinder, &forcedSphere
	}
	return &freeCylinder, &forcedCylinder
}
