package model

import (
	"fmt"
	"testing"
	"time"
)

func TestZZ(t *testing.T) {
	for _, p := range problems() {
		if p.id == "D" {
			continue
		}
		for _, e := range []effort{{0.5, 6e-3}, {0.5, 1e-3}, {0.7, 2e-3}, {1, 1e-3}, {1, 3e-4}, {1, 3e-3}, {1.5, 1e-3}, {2, 3e-4}} {
			s := &solver{product: &p.product, steps: p.steps, options: Options{ConductivityFactor: 1}, tmp: scratches.Get().(*scratch)}
			s.layOut()
			s.marchOnce(e)
			t0 := time.Now()
			h, f := s.marchOnce(e)
			d := time.Since(t0)
			s.main = f
			q := p
			q.allowK = 10
			q.edgeK = 10
			_, r := s.marchOnce(e.rougher())
			w := q.offK(t, h, solutionOf(t, p.id))
			fmt.Printf("%s %v off %.4f est %.4f steps %d  %v\n", p.id, e, w, f.differs(h, r)/marchedWorse, len(f.track.times), d)
		}
	}
}
