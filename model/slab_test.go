package model

import "testing"

// A scratch slab whose piece runs out between mark and back goes on in the larger one. It once began a larger piece each time, up to all
// the memory of the machine.
func TestScratchStaysSmall(t *testing.T) {
	s := slab{wide: 1}
	s.take(1000) // leaves 24 of the first piece
	for range 40 {
		m := s.mark()
		for i, x := range s.take(37) {
			if x != 0 {
				t.Fatalf("number %d is %g, want 0", i, x)
			}
		}
		inner := s.mark()
		s.take(1200)[7] = 1
		s.back(inner)
		s.back(m)
	}
	if s.wide > 8*1200 {
		t.Errorf("a piece of %d numbers where at most 1237 are in use", s.wide)
	}
}
