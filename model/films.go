package model

import (
	"fmt"
	"math"
	"strings"
)

// filmCase is what a film coefficient may depend on. Temperatures: the mean of the coldest and hottest food in the step,
// and the mean of the medium over the step.
type filmCase struct {
	shape     *Shape
	size      Size
	face      *Face // of a slab, where its other face has surroundings of its own; else nil
	foodC     float64
	mediumC   float64
	airMS     float64
	altitudeM float64
}

func (c *filmCase) at() string {
	return fmt.Sprintf("food surface %.1f °C, air %.1f °C", c.foodC, c.mediumC)
}

// airFilm is convection in air over a shape, without radiation: free, or the larger of free and forced.
type airFilm struct {
	lengthM, airMS, totalPa float64
	free, forced            *correlation // forced: nil in still air, and below its range
	below                   *correlation // the forced one that is left out because the air is too slow for it; nil usually
	lies                    *Face        // the face of a slab that free convection is told apart for; nil: as free says
	nodes                   []airNode    // what the film is interpolated from; nil: it is worked out each time
}

// airNode is what a film depends on at one temperature of the air, made when it is first asked for.
type airNode struct {
	ready   bool
	kL      float64 // conductivity by length, W/(m²·K)
	b, d    float64 // of free convection, by the difference in K: see freeBy
	mostK   float64 // difference at which free convection leaves its range
	layerW  float64 // film of air that lies still in layers, at a difference of 1 K; 0 if none counts
	layerK  float64 // difference at which such a film leaves its range
	forcedW float64 // film of forced convection, W/(m²·K); 0 if none counts
}

// Air nodes: 4 K apart, so that a cubic through four of them is within 1e-7 of the formulas.
const airNodesFromC, airNodeK, airNodes = -48, 4, 100

// newAirFilm takes the correlations that fit a case. Whether the air is too slow for the forced one is decided by the air alone, so that
// the film does not jump while the surface warms.
func newAirFilm(moving bool, c *filmCase) *airFilm {
	free, forced := c.shape.inFluid(&c.size)
	f := &airFilm{lengthM: c.shape.acrossFlowM(&c.size), totalPa: pressurePa(c.altitudeM), free: free, nodes: make([]airNode, airNodes)}
	if c.shape.flat() {
		f.lies = c.face
	}
	if !moving {
		return f
	}
	f.airMS, f.forced = c.airMS, forced
	if a := airOf(c.mediumC, f.totalPa); f.reynolds(&a) < f.forced.least(a.pr()) {
		f.below, f.forced = f.forced, nil
	}
	if a := airOf(airLowC, f.totalPa); f.forced != nil && f.reynolds(&a) > f.forced.most { // it turns level somewhere
		f.nodes = nil
	}
	return f
}

func (f *airFilm) reynolds(a *air) float64 { return f.airMS * f.lengthM / a.nu() }

func (f *airFilm) rayleigh(a *air, differenceK float64) float64 {
	return gravity * a.beta * math.Abs(differenceK) * f.lengthM * f.lengthM * f.lengthM / (a.nu() * a.nu()) * a.pr()
}

const gravity = 9.80665 // m/s²

// layered tells whether air lies in layers on a face of a slab: cold air on a cold upper face, warm air under a warm lower one. Both faces
// together, or the other direction, take the cylinder's film: it is within 10 % of the mean of the two faces of a plate, and below that of the
// face on which air rises or falls.
func (f *airFilm) layered(surfaceC, airC float64) bool {
	return f.lies == Top && surfaceC < airC || f.lies == Underside && surfaceC > airC
}

// plateSide is a plate's length, its area by its edge, as a share of the side of a square one.
const plateSide = 1.0 / 4

// layer is the film of air that lies in layers, W/(m²·K).
func (f *airFilm) layer(a *air, differenceK float64) float64 {
	return freeLayered.nusselt(min(f.layerRayleigh(a, differenceK), freeLayered.most), a.pr()) * a.k / (f.lengthM * plateSide)
}

// layerRayleigh is the Rayleigh number on a plate's length.
func (f *airFilm) layerRayleigh(a *air, differenceK float64) float64 {
	return f.rayleigh(a, differenceK) * plateSide * plateSide * plateSide
}

// at gives the film in W/(m²·K), with the air at the mean of surface and medium.
func (f *airFilm) at(surfaceC, airC float64) float64 {
	x := (max((surfaceC+airC)/2, airLowC) - airNodesFromC) / airNodeK
	if !(x >= 1 && x < float64(len(f.nodes)-2)) {
		w, _ := f.which(surfaceC, airC)
		return w
	}
	i := int(x)
	near := f.nodes[i-1 : i+3]
	for j := range near {
		if !near[j].ready {
			f.ready(&near[j], airNodesFromC+airNodeK*float64(i-1+j))
		}
	}
	u := x - float64(i) // Lagrange's cubic
	weights := [4]float64{-u * (u - 1) * (u - 2) / 6, (u + 1) * (u - 1) * (u - 2) / 2, -(u + 1) * u * (u - 2) / 2, (u + 1) * u * (u - 1) / 6}
	var n airNode
	for j, w := range weights {
		n.kL += w * near[j].kL
		n.b += w * near[j].b
		n.d += w * near[j].d
		n.mostK += w * near[j].mostK
		n.layerW += w * near[j].layerW
		n.layerK += w * near[j].layerK
		n.forcedW += w * near[j].forcedW
	}
	if f.layered(surfaceC, airC) {
		return max(n.layerW*math.Sqrt(math.Sqrt(min(math.Abs(surfaceC-airC), n.layerK))), n.forcedW)
	}
	return max(n.kL*f.free.by(n.b, n.d, min(math.Abs(surfaceC-airC), n.mostK)), n.forcedW)
}

// ready makes a node at a temperature of the air.
func (f *airFilm) ready(n *airNode, tC float64) {
	a := airOf(tC, f.totalPa)
	ra := f.rayleigh(&a, 1)
	*n = airNode{ready: true, kL: a.k / f.lengthM, mostK: f.free.most / ra}
	n.b, n.d = f.free.perK(ra, a.pr())
	if f.lies != nil {
		n.layerW, n.layerK = f.layer(&a, 1), freeLayered.most/f.layerRayleigh(&a, 1)
	}
	if f.forced != nil {
		n.forcedW = f.forced.nusselt(f.reynolds(&a), a.pr()) * n.kL
	}
}

// which also tells the correlation that decides.
func (f *airFilm) which(surfaceC, airC float64) (w float64, by *correlation) {
	a := airOf(max((surfaceC+airC)/2, airLowC), f.totalPa)
	ra := f.rayleigh(&a, surfaceC-airC)
	w, by = f.free.nusselt(min(ra, f.free.most), a.pr())*a.k/f.lengthM, f.free
	if f.layered(surfaceC, airC) {
		w, by = f.layer(&a, surfaceC-airC), &freeLayered
	}
	if f.forced == nil {
		return w, by
	}
	if forced := f.forced.nusselt(min(f.reynolds(&a), f.forced.most), a.pr()) * a.k / f.lengthM; forced >= w {
		return forced, f.forced
	}
	return w, by
}

// words describes the correlation that decides at a state, in its range.
func (f *airFilm) words(surfaceC, airC float64) string {
	_, by := f.which(surfaceC, airC)
	at := fmt.Sprintf("%.0f mm", 1000*f.lengthM)
	if by == f.forced {
		at = fmt.Sprintf("at %.2g m/s, %.0f mm", f.airMS, 1000*f.lengthM)
	}
	return fmt.Sprintf("%s %s", by.name, at)
}

// beyond says where a state between two surface temperatures leaves the range of a correlation, and what was done; "" if none does.
func (f *airFilm) beyond(lowC, highC, airC float64) string {
	var says []string
	add := func(format string, args ...any) { says = append(says, fmt.Sprintf(format, args...)) }
	if f.below != nil {
		add("air of %.2g m/s is below the range of %s, so that it counts as still", f.airMS, f.below.name)
	}
	cold, hot := airOf(max((lowC+airC)/2, airLowC), f.totalPa), airOf((highC+airC)/2, f.totalPa)
	if f.forced != nil && f.reynolds(&cold) > f.forced.most {
		add("Reynolds number %.2g is above the range of %s (%.2g), %s", f.reynolds(&cold), f.forced.name, f.forced.most, f.forced.held)
	}
	above := func(ra float64, free *correlation) {
		if ra > free.most {
			add("Rayleigh number %.2g is above the range of %s (%.2g), whose value there is kept, which is low", ra, free.name, free.most)
		}
	}
	rises, lies := 0.0, 0.0 // the largest Rayleigh number of air that moves over the face, and of air in layers on it
	for _, end := range []struct {
		a        *air
		surfaceC float64
	}{{&cold, lowC}, {&hot, highC}} {
		if f.layered(end.surfaceC, airC) {
			lies = max(lies, f.layerRayleigh(end.a, end.surfaceC-airC))
		} else {
			rises = max(rises, f.rayleigh(end.a, end.surfaceC-airC))
		}
	}
	above(rises, f.free)
	above(lies, &freeLayered)
	if (lowC+airC)/2 < airLowC || (highC+airC)/2 > airHighC {
		add("air properties are known from %d to %d °C (mean of surface and air); below, those of the low end are taken, above, the formulas go on", airLowC, airHighC)
	}
	return strings.Join(says, "; ")
}

// stillAir gives the film of free convection in air without radiation.
func stillAir(c *filmCase) (w float64, source string) {
	return newAirFilm(false, c).stated(c)
}

// movingAir gives the film of forced convection in air without radiation, never less than that of still air.
func movingAir(c *filmCase) (w float64, source string) {
	return newAirFilm(true, c).stated(c)
}

func (f *airFilm) stated(c *filmCase) (w float64, source string) {
	return f.at(c.foodC, c.mediumC), f.words(c.foodC, c.mediumC) + ", without radiation; " + c.at()
}

// stated makes a film that does not depend on the case.
func stated(w float64, source string) func(*filmCase) (float64, string) {
	return func(*filmCase) (float64, string) { return w, source }
}

// innerWords tells of the film inside a vessel.
var innerWords = fmt.Sprintf("; inside the vessel %g W/(m²·K) in series, stated low: textbooks give 50 to 100 for liquids left still (Çengel, Heat Transfer, typical values), and stirring makes it more", innerW)

// filmFactor is what multiplies a film that is worked out.
func (e *Exposure) filmFactor() float64 {
	if e.FilmFactor == 0 {
		return 1
	}
	return e.FilmFactor
}

// filmUsed tells how an exposure meets the food.
func (e *Exposure) filmUsed(face *Face, c *filmCase) FilmUsed {
	u := FilmUsed{Face: face}
	switch {
	case e.Surface.NoMedium:
		u.Source = "no heat passes"
		return u
	case e.FilmW != nil:
		u.FilmW, u.Typed = *e.FilmW, true
		u.Source = "typed by the user: it stands for everything that happens at the surface"
	case e.Surface.Fixed():
		u.FilmW, u.Source = e.Surface.film(c)
		u.Typed = len(e.Surface.Needs) > 0
	default:
		u.FilmW, u.Source = e.Surface.film(c)
		u.FilmW *= e.filmFactor()
		u.Caution = "film coefficient assumed, not measured"
	}
	if e.innerFilm(c) {
		u.Source += innerWords
		if u.Caution == "" {
			u.Caution = "film inside the vessel assumed, not measured"
		}
	}
	u.TotalW = 1 / (1/u.FilmW + e.seriesM2KW(c))
	return u
}
