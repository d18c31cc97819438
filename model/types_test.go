package model

import (
	"slices"
	"testing"
)

// Every size has its column, no two share a field, and a shape needs no other.
func TestSizeColumns(t *testing.T) {
	var z Size
	for i, column := range SizeColumns {
		*z.Of(column) = float64(i + 2)
	}
	for i, column := range SizeColumns {
		if got := *z.Of(column); got != float64(i+2) {
			t.Errorf("%s: %g, want %d", column, got, i+2)
		}
	}
	if z != (Size{ThicknessM: 2, WidthM: 3, LengthM: 4, DiameterM: 5, VolumeM3: 6, AreaM2: 7}) || z.Of("Depth") != nil {
		t.Errorf("%+v", z)
	}
	for _, s := range Shapes {
		for _, need := range s.Needs {
			if !slices.Contains(SizeColumns, need) {
				t.Errorf("%s needs %s, which is no size", s.Name, need)
			}
		}
	}
}
