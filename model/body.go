package model

// body is the geometry that a history looks for places in. (Filled by Solve; a record has none.)
type body struct {
	look func(h *History, from Spot, surfaceOnly bool, score func(Place) float64) (Place, float64)
}

// Scan gives the first look at the history; it is made once and shared, so do not change it.
func (h *History) Scan() *Scan { return h.scan }

// Least looks in the food, from a spot of the scan on, for the place with the smallest score, staying on the surface if asked.
// It returns the place and its score. A record returns the spot itself.
func (h *History) Least(from Spot, surfaceOnly bool, score func(Place) float64) (Place, float64) {
	if h.body.look == nil {
		return from.Place, score(from.Place)
	}
	return h.body.look(h, from, surfaceOnly, score)
}
