package model

// temporary stand-in
type skin struct {
	held, insulated bool
	e               *Exposure
	f               FilmUsed
	law             func(c, tau float64) (float64, float64)
}

func (s *skin) flux(c, tau float64) (float64, float64) {
	if s.law != nil {
		return s.law(c, tau)
	}
	return s.f.TotalW * (s.e.Medium.at(tau) - c), -s.f.TotalW
}
func (s *skin) mediumC(tau float64) float64 { return s.e.Medium.at(tau) }
func (s *skin) used(face *Face) FilmUsed    { f := s.f; f.Face = face; return f }
func (e *Exposure) reacts() bool            { return e.Surface.law != nil }

func (p *Product) Foods() []*Material { return []*Material{p.Food} }
