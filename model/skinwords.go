package model

import (
	"fmt"
	"math"
	"strings"
)

// surfaceRange is what the surface's temperature did in a step, °C.
type surfaceRange struct{ startC, lowC, highC float64 }

// used tells how the face met its surroundings during the durS seconds that the step lasted.
func (s *skin) used(face *Face, r surfaceRange, durS float64) FilmUsed {
	switch {
	case s.law != nil:
		return FilmUsed{Face: face, Typed: true, Source: "a law of the test"}
	case s.linear:
		return s.exp.filmUsed(face, &s.film)
	}
	a := s.around(0)
	outer := r.startC
	if s.seriesR > 0 {
		outer, _ = s.through(r.startC, &a)
	}
	u := FilmUsed{Face: face, Typed: s.filmW > 0, FilmW: s.convectionW(outer, &a)}
	var source, caution []string
	say := func(list *[]string, format string, args ...any) { *list = append(*list, fmt.Sprintf(format, args...)) }
	switch {
	case s.filmW > 0:
		say(&source, "typed by the user, for convection alone")
	case s.steamAir:
		if condensing := a.uchidaW * (a.dewC - outer); condensing > u.FilmW*(a.mediumC-outer) {
			u.FilmW = a.uchidaW
		}
		say(&source, "steam with air: Uchida, Oyama & Togo 1965 (from memory), at most %d W/(m²·K), to the dew point of the steam's own pressure, %.1f °C at the start; a hotter surface warms as in still air, %s", steamW, a.dewC, s.air.words(outer, a.mediumC))
		if s.exp.RH == nil && s.exp.Medium.RH == nil || s.exp.Medium.RH == nil && *s.exp.RH >= 100 {
			say(&source, "colder than boiling (%.1f °C here), so that it holds air: 100 %% relative humidity is taken, the most vapour that it can hold", satC(s.totalPa))
		}
		say(&caution, "film coefficient assumed, not measured")
	default:
		say(&source, "%s, followed as the surface changes; at the start food surface %.1f °C, air %.1f °C", s.air.words(outer, a.mediumC), outer, a.mediumC)
		say(&caution, "film coefficient assumed, not measured")
	}
	if s.air != nil {
		u.LeastW, u.MostW = s.filmRange(r, durS)
		if beyond := s.air.beyond(r.lowC, r.highC, s.film.mediumC); beyond != "" {
			say(&caution, "%s", beyond)
		}
	}
	s.sayRadiation(outer, u.FilmW*(a.mediumC-outer), &source, &caution)
	s.sayMoisture(&a, &source, &caution)
	u.Source, u.Caution = strings.Join(source, "; "), strings.Join(caution, "; ")
	if s.exp.innerFilm(&s.film) {
		u.Source += innerWords
	}
	u.TotalW = 1 / (1/u.FilmW + s.seriesR)
	return u
}

// filmRange is the smallest and largest film of a step, W/(m²·K).
func (s *skin) filmRange(r surfaceRange, durS float64) (least, most float64) {
	const looks = 8
	for i := range looks + 1 {
		a := s.around(durS * float64(i) / looks)
		for j := range looks + 1 {
			c := r.lowC + (r.highC-r.lowC)*float64(j)/looks
			if s.seriesR > 0 {
				c, _ = s.through(c, &a)
			}
			w := s.convectionW(c, &a)
			if s.steamAir && c < a.dewC {
				w = max(w, a.uchidaW)
			}
			if i+j == 0 {
				least, most = w, w
			}
			least, most = min(least, w), max(most, w)
		}
	}
	return least, most
}

func (s *skin) sayRadiation(outerC, convected float64, source, caution *[]string) {
	if s.steamAir {
		return
	}
	if s.radiates == 0 {
		*source = append(*source, "without radiation")
		return
	}
	radiated := s.radiationW(outerC)
	says := fmt.Sprintf("besides, radiation to %.0f °C with emissivity %.2g", *s.exp.RadiatingC, s.radiates)
	if sum := math.Abs(radiated) + math.Abs(convected); sum > 0 {
		says += fmt.Sprintf(", at the start %.0f %% of the two", 100*math.Abs(radiated)/sum)
	}
	*source = append(*source, says)
	if s.exp.Emissivity == nil {
		*caution = append(*caution, fmt.Sprintf("emissivity assumed: %.1f, the low end of 0.9 to 0.95 for food (from memory); bright metal or foil has far less", usualEmissivity))
	}
	if !s.slowHeats {
		*caution = append(*caution, "radiation counted while chilling: it holds only where the food sees those walls and not its neighbours")
	}
}

func (s *skin) sayMoisture(a *around, source, caution *[]string) {
	if !s.condenses {
		return
	}
	if !s.wet {
		*source = append(*source, fmt.Sprintf("vapour condenses while the surface is colder than the dew point, %.1f °C at the start", dewC(a.vapourPa)))
		return
	}
	*source = append(*source, fmt.Sprintf("wet: evaporation and condensation by Lewis' relation (Chilton & Colburn 1934), Lewis number %.2f, water activity %.2f; with nothing conducted the surface would go to the wet-bulb temperature, %.1f °C at the start",
		lewis, s.activity, moistAir{a.mediumC, a.vapourPa, s.totalPa}.wetBulbC(s.activity)))
	if s.exp.RH == nil && s.exp.Medium.RH == nil {
		*caution = append(*caution, map[bool]string{
			true:  "humidity not given: dry air is taken, which leaves a wet surface coldest",
			false: "humidity not given: 100 % is taken, which evaporates least",
		}[s.slowHeats])
	}
	if !s.given {
		*caution = append(*caution, fmt.Sprintf("water activity of the surface not known: %.2g is taken, the side on which the food comes out %s", s.activity, map[bool]string{true: "colder", false: "hotter"}[s.slowHeats]))
	}
	if !s.slowHeats {
		*caution = append(*caution, "evaporation counted while chilling, because the surface is said to be wet: it holds only while it stays wet, open and unwrapped")
	}
}
