package report

import (
	"math"

	"slowpoint/model"
)

// passage is a way through a product, that its profile is drawn along.
type passage struct {
	name   string        // key of the words of its axis
	m      []float64     // m along it, rising; NaN where the line breaks: at a joint with a contact resistance the temperature jumps
	places []model.Place // as long as m
	ends   []model.Place // the places that the sentence under the picture tells, in the order of its words
	words  string        // key of that sentence
}

// passageSteps is how many pieces a line has, in all.
const passageSteps = 48

// besideM is how far from a joint the ends of the layers' lines are taken, m: on their own side, and too near to be seen.
const besideM = 1e-8

// passageOf is the way through a product past a place: along the thickness, the axis or the radius; of a spheroid from its side to the
// centre and on along the axis. nil if there is none.
func passageOf(p *model.Product, past model.Place) *passage {
	w := &passage{name: "axis depth", words: "profile flat"}
	up := func(m float64) model.Place {
		at := past
		at.UpM = m
		return at
	}
	run := func(from, to, origin float64, n int, at func(m float64) model.Place) {
		for k := 0; k <= n; k++ {
			m := from + (to-from)*float64(k)/float64(n)
			w.m, w.places = append(w.m, m-origin), append(w.places, at(m))
		}
	}
	if p.Shape == nil || p.Shape.Mixed() {
		return nil
	}
	whole := *p.Size.Of(p.Shape.Ways[0].Size)
	half := whole / 2
	switch {
	case p.Shape.Ways[0].Round():
		w.name, w.words = "axis radius", "profile round"
		run(0, half, 0, passageSteps, up)
		w.ends = []model.Place{up(0), up(half)}
		return w
	case p.Shape.Oval():
		w.name, w.words = "axis spheroid", "profile spheroid"
		r := *p.Size.Of(p.Shape.Ways[1].Size) / 2
		run(-r, 0, 0, passageSteps/2, func(m float64) model.Place { return model.Place{AcrossM: -m} })
		run(0, half, 0, passageSteps/2, func(m float64) model.Place { return model.Place{UpM: m} })
		w.ends = []model.Place{{}, {AcrossM: r}, {UpM: half}}
		return w
	case p.Shape.Layered():
		at := -half
		for i := len(p.Layers) - 1; i >= 0; i-- {
			y := &p.Layers[i]
			if n := len(w.m); n > 0 && y.BelowM2KW > 0 {
				w.m, w.places = append(w.m, math.NaN()), append(w.places, w.places[n-1])
			}
			n := max(4, int(math.Round(passageSteps*y.ThicknessM/whole)))
			lo, hi := at, at+y.ThicknessM
			at = hi
			if i < len(p.Layers)-1 {
				lo += besideM
			}
			if i > 0 {
				hi -= besideM
			} else {
				hi = half
			}
			run(lo, hi, -half, n, up)
		}
	default:
		run(-half, half, -half, passageSteps, up)
	}
	w.ends = []model.Place{up(-half), up(0), up(half)}
	return w
}
