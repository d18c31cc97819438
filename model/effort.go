package model

import "math"

// effort is how finely a march is made.
type effort struct {
	more  float64 // factor on the number of nodes
	tolK  float64 // error of a step in time, K
	rough bool    // the second march, that the error is estimated with
	first bool    // nothing has been marched yet: look first whether it takes too long
	kept  int     // numbers that the track may keep; 0: no bound
	fewer float64 // rough: share of the volumes
	ends  []Span  // rough: the steps as they ran in the first march, so that both change surroundings at the same instants
}

// rougher is the effort of the second march. Where time is of second order the error of a step is of third, so that their sum goes with the
// tolerance to 2/3. Half the control volumes and six times the tolerance make about four times the error; two polynomials fewer on each half
// axis make six to twenty times that of the space (as in fewerWorse). Where ice moves three times the tolerance shows as much, twice in more directions than one, four
// times in a spheroid, where the time counts more.
func (s *solver) rougher(e effort, ran []Span) effort {
	r := effort{more: e.more, tolK: e.tolK * 6, rough: true, fewer: 0.5, ends: ran}
	switch {
	case s.front && s.ball != nil:
		r.tolK, r.fewer = e.tolK*4, 0.7
	case s.front && s.used > 1:
		r.tolK, r.fewer = e.tolK*2, 0.7
	case s.front:
		r.tolK = e.tolK * 3
	}
	return r
}

// How the difference of the two marches goes over into an error: that of a march with four or six times the error lies three or five
// errors off, less some for doubt. Where a front moves in more directions than one the rougher march has seven tenths of the volumes and about
// twice the error: in two directions the difference counts as it is, in three, where edges and corners make more of it, two thirds of it (found
// by marches of 1.8 to 2.3 times the volumes, which were half of it off).
const (
	volumesWorse     = 3
	roundFrontWorse  = 2 // the last ice of cylinders and spheres goes fastest, and the error of the rougher march is less than four times as large
	twoWaysWorse     = 1
	spaceWorse       = 1.5
	stagesWorse      = 2   // polynomials with times of second order
	roundWorse       = 1.5 // of cylinders and spheres, whose centre has no node, and is where the error is largest, and of wet faces that differ
	polynomialsWorse = 3
)

// polynomial tells whether the march has polynomials in space: smooth fields.
func (s *solver) polynomial() bool { return s.used > 0 && !s.front && !s.product.Shape.Layered() }

// marchGoalK is the error that a march is to keep, K.
const marchGoalK = 0.019

// mostTries is how often a march may be made again with more effort. A front of ice in two and three directions costs more than more nodes and
// shorter steps are worth, and so does a third march of a wet brick or of a spheroid far from a sphere, whose time grows with the fifth power
// of the polynomials. What is left is stated.
func (s *solver) mostTries() int {
	switch {
	case s.used > 1 && s.front:
		return 0
	case s.front, s.used == 3 && s.wetFaces(), s.ball != nil && max(s.radii[0], s.radii[1]) > 5*min(s.radii[0], s.radii[1]):
		return 1
	}
	return 2
}

// firstEffort is how finely the march is made at first, and by what the difference of the rougher march is divided.
func (s *solver) firstEffort() (e effort, worse float64) {
	e = effort{more: 1, tolK: 6e-3, first: true, kept: mostKept}
	switch {
	case !s.polynomial():
		if s.ball != nil { // far from a sphere most of the error is that of the space
			e.tolK = 0.04 * math.Sqrt(s.radii[0]/s.radii[1])
			return e, twoWaysWorse
		}
		if s.used > 1 {
			e.tolK = [4]float64{2: 2e-2, 3: 1.2e-1}[s.used]
			if s.used == 3 {
				return e, spaceWorse
			}
			return e, twoWaysWorse
		}
		if s.front {
			e.tolK = 1e-2
			if s.kinds[0] == radial || s.kinds[0] == spherical {
				return e, roundFrontWorse
			}
		}
		return e, volumesWorse
	case s.product.Shape.Oval():
		e.more, e.tolK = 1.3, 4e-3
		return e, stagesWorse
	case s.wetFaces():
		e.tolK = 4e-3
		if s.kinds[0] == planeFull || s.kinds[1] == radial {
			return e, roundWorse
		}
		return e, polynomialsWorse
	}
	e.tolK = 8e-3
	if s.used == 3 {
		e.more, e.tolK = 1.1, 1.2e-2 // most of the error is that of the space
	}
	if s.used == 1 && (s.kinds[0] == radial || s.kinds[0] == spherical) {
		return e, roundWorse
	}
	return e, polynomialsWorse
}
