package model

import (
	"fmt"
	"math"
)

// filmCase is what a film coefficient may depend on. Temperatures: the mean of the coldest and hottest food in the step,
// and the mean of the medium over the step.
type filmCase struct {
	shape     *Shape
	size      Size
	foodC     float64
	mediumC   float64
	airMS     float64
	altitudeM float64
}

// openWidthM stands for the width and length that a slab does not give: a large tray, so that films come out low.
const openWidthM = 0.5

// lengthM is the largest size across the air: the largest gives the lowest film, the safe side for heating and for chilling.
func (c *filmCase) lengthM() float64 {
	switch c.shape {
	case Slab:
		return openWidthM
	case Stirred: // the cube of the same volume
		return math.Cbrt(c.size.VolumeM3)
	}
	return max(max(c.size.ThicknessM, c.size.WidthM), max(c.size.LengthM, c.size.DiameterM))
}

func (c *filmCase) at() string {
	return fmt.Sprintf("food surface %.1f °C, air %.1f °C", c.foodC, c.mediumC)
}

// stillAir gives the film of free convection in air without radiation.
func stillAir(c *filmCase) (w float64, source string) {
	film := (c.foodC + c.mediumC) / 2
	a := airAt(film, c.altitudeM)
	l := c.lengthM()
	ra := 9.80665 * a.beta * math.Abs(c.foodC-c.mediumC) * l * l * l / (a.nu() * a.nu()) * a.pr()
	if c.shape == Sphere {
		return sphereFree(ra, a.pr()) * a.k / l, fmt.Sprintf("Churchill 1983 (sphere in still air, diameter %.0f mm), without radiation; %s", 1000*l, c.at())
	}
	return churchillChu(ra, a.pr()) * a.k / l, fmt.Sprintf("Churchill & Chu 1975 (horizontal cylinder in still air, taken at the largest size, %.0f mm), without radiation; %s", 1000*l, c.at())
}

// movingAir gives the film of forced convection in air without radiation, never less than that of still air.
func movingAir(c *filmCase) (w float64, source string) {
	film := (c.foodC + c.mediumC) / 2
	a := airAt(film, c.altitudeM)
	l := c.lengthM()
	re := c.airMS * l / a.nu()
	how := fmt.Sprintf("at %.2g m/s, %.0f mm, without radiation; %s", c.airMS, 1000*l, c.at())
	switch c.shape {
	case Slab:
		w, source = plateForced(re, a.pr())*a.k/l, "flat plate along the stream (Incropera & DeWitt) "+how
	case Sphere:
		w, source = sphereForced(re, a.pr())*a.k/l, "Melissari & Argyropoulos 2005 (sphere) "+how
	default:
		w, source = churchillBernstein(re, a.pr())*a.k/l, "Churchill & Bernstein 1977 (cylinder in cross flow) "+how
	}
	if still, from := stillAir(c); still > w {
		return still, from
	}
	return w, source
}

// stated makes a film that does not depend on the case.
func stated(w float64, source string) func(*filmCase) (float64, string) {
	return func(*filmCase) (float64, string) { return w, source }
}

// filmUsed tells how an exposure meets the food.
func (e *Exposure) filmUsed(face *Face, c *filmCase) FilmUsed {
	u := FilmUsed{Face: face}
	switch {
	case e.Surface == Insulated:
		u.Source = "no heat passes"
		return u
	case e.FilmW != nil:
		u.FilmW, u.Typed = *e.FilmW, true
		u.Source = "typed by the user: it stands for everything that happens at the surface"
	case e.Surface == Held:
		u.FilmW, u.Source = math.Inf(1), "the surface is kept at the temperature"
	case e.Surface == ContactPlate:
		u.FilmW, u.Typed, u.Source = math.Inf(1), true, "contact resistance typed by the user"
	default:
		u.FilmW, u.Source = e.Surface.film(c)
		u.Caution = "film coefficient assumed, not measured"
	}
	r := 0.0
	if e.WrapM2KW != nil {
		r = *e.WrapM2KW
	}
	u.TotalW = 1 / (1/u.FilmW + r)
	return u
}
