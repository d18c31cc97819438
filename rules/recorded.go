package rules

import "slowpoint/model"

// Recorded is a recording to be judged, of a product by name and family.
type Recorded struct {
	Product, Family string
	Recording       *model.Recording
}

// FindRecorded judges each limit that applies, on the straight lines between readings and on every course that the readings allow: where
// these differ, nobody can tell.
// It fails where the recording is no record (NewRecord).
func FindRecorded(limits []Limit, r Recorded) ([]Finding, error) { return nil, nil }
