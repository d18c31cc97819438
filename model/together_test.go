package model

import (
	"sync"
	"testing"
)

// Products are solved side by side on all cores: what is kept for all of them (bases, nodes, memory) is shared without harm, and the
// results do not depend on it.
func TestSolvingSideBySide(t *testing.T) {
	following := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -50, HighC: 250, Props: func(c float64) Properties {
		return Properties{0.46 + 0.0014*c, 1040, 3500 + 1.5*c}
	}}
	constant := &Material{Name: "test food", Source: "input of the test", Waterless: true, Props: func(float64) Properties { return Properties{0.47, 1040, 3550} }}
	var products []Product
	for _, f := range []*Material{following, constant} {
		for i, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar, Spheroid} {
			size := 0.001 * float64(i)
			products = append(products, Product{Name: shape.Name, Shape: shape, Food: f, StartC: 7,
				Size: Size{ThicknessM: 0.031 + size, WidthM: 0.042 + size, LengthM: 0.053 + size, DiameterM: 0.037 + size}})
		}
	}
	steps := []Step{{Name: "cook", Stage: Cook, DurationS: 900, Exposure: filmTo(27, 141)}, {Name: "chill", Stage: Cool, DurationS: 1500, Exposure: filmTo(19, 3)}}
	solve := func(p Product) float64 {
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Error(err)
			return 0
		}
		s := h.Sample(300)
		return s.Coldest[4] + s.Hottest[5] + s.Mean[6]
	}
	want := make([]float64, len(products))
	for i, p := range products {
		want[i] = solve(p)
	}
	var all sync.WaitGroup
	for worker := range 4 {
		all.Go(func() {
			for k := range products {
				i := (k + 3*worker) % len(products)
				if got := solve(products[i]); got != want[i] {
					t.Errorf("%s beside others: %.12g, alone: %.12g", products[i].Name, got, want[i])
				}
			}
		})
	}
	all.Wait()
}
