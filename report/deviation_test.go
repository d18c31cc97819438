package report

import (
	"testing"

	"slowpoint/model/cell"
)

// TestDeviationNames: a record that was refused is not said to have been calculated with.
func TestDeviationNames(t *testing.T) {
	bad := cell.Errors{{Msg: "is recorded twice"}}
	v := &Deviation{Records: []Measured{{Name: "Air"}, {Name: "Second", Problems: bad}}}
	if got := v.names(); got != "Air" {
		t.Errorf("%q, want Air", got)
	}
	v = &Deviation{Records: []Measured{{Name: "Air", Problems: bad}}}
	if got := v.names(); got != "Air" {
		t.Errorf("none used: %q, want Air", got)
	}
}
