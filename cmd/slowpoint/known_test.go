package main

import (
	"testing"

	"slowpoint/model"
	"slowpoint/model/verify"
)

// Every case with a known answer but those of properties and of given courses says what shape it solved in which surroundings, so that reports can show
// those of a product's shape.
func TestKnownCasesTellTheirShape(t *testing.T) {
	n := map[*model.Shape]int{}
	for _, k := range known() {
		if k.area == verify.Properties || k.area == verify.Judging {
			if k.Shape != nil {
				t.Errorf("%s: neither properties nor given courses have a shape", k.Name)
			}
			continue
		}
		if k.Shape == nil || len(k.Steps) == 0 {
			t.Errorf("%s: no shape or no steps", k.Name)
		}
		n[k.Shape]++
	}
	for _, s := range []*model.Shape{model.Slab, model.Cylinder, model.Sphere, model.ShortCylinder, model.Brick} {
		if n[s] < 4 {
			t.Errorf("%s: only %d cases", s.Name, n[s])
		}
	}
}
