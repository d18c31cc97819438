package model

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// Film coefficients of air blown over a long round piece, W/(m²·K), air at 10 °C, convection only: Churchill & Bernstein 1977,
// worked out apart from this program with tabulated air (figures printed to 0.1).
func TestAirOverCylinder(t *testing.T) {
	for _, c := range []struct{ diameterM, airMS, want float64 }{
		{0.11, 0.3, 5.6}, {0.11, 0.5, 7.3}, {0.11, 1, 10.6}, {0.11, 1.2, 11.7}, {0.11, 2, 15.6}, {0.11, 3, 19.7}, {0.11, 5, 26.7},
		{0.178, 0.3, 4.4}, {0.178, 1, 8.5}, {0.178, 2, 12.7}, {0.178, 3, 16.2}, {0.178, 5, 22.3},
	} {
		t.Run(fmt.Sprintf("%g m, %g m/s", c.diameterM, c.airMS), func(t *testing.T) {
			a := airAt(10, 0)
			got := churchillBernstein(c.airMS*c.diameterM/a.nu(), a.pr()) * a.k / c.diameterM
			if math.Abs(got-c.want) > 0.015*c.want { // two tables of air differ by 1 %
				t.Errorf("%.2f W/(m²·K), want %.1f", got, c.want)
			}
		})
	}
}

// Still cold room, joints of 50 to 180 mm, air 2 °C, surface 5 to 40 K warmer: 3 to 6.2 W/(m²·K) without radiation
// (Churchill & Chu 1975, worked out apart from this program).
func TestStillAirOverCylinder(t *testing.T) {
	film := func(diameterM, excess float64) float64 {
		w, _ := stillAir(&filmCase{shape: Cylinder, size: Size{DiameterM: diameterM}, foodC: 2 + excess, mediumC: 2})
		return w
	}
	if low, high := film(0.18, 5), film(0.05, 40); math.Abs(low-3) > 0.15 || math.Abs(high-6.2) > 0.25 {
		t.Errorf("%.2f and %.2f W/(m²·K), want 3 and 6.2", low, high)
	}
}

// Formulas at one state each, worked out by hand from the printed form (numbers typed here, not taken from the code).
func TestCorrelations(t *testing.T) {
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"flat plate, laminar, Re 40000, Pr 0.71: 0.664·200·0.8921", plateForced(40000, 0.71), 118.47},
		{"flat plate beyond the laminar range, the laminar formula as a lower bound, Re 1e6, Pr 0.71: 0.664·1000·0.8921", plateForced(1e6, 0.71), 592.4},
		{"sphere at the end of the range, Re 50000, Pr 0.71: 2+0.47·223.61·0.8840", sphereForced(5e4, 0.71), 94.90},
		{"sphere in a stream, Re 2500, Pr 0.71: 2+0.47·50·0.8840", sphereForced(2500, 0.71), 22.774},
		{"plate with its cold face up, Ra 5e6: 0.27·47.287", plateLayered(5e6, 0.71), 12.767},
		{"sphere in still air, Ra 1e5, Pr 0.71: 2+0.589·17.783/1.2959·1.0002", sphereFree(1e5, 0.71), 10.084},
	} {
		t.Run(c.name, func(t *testing.T) {
			if math.Abs(c.got-c.want) > 2e-3*c.want {
				t.Errorf("%.4f, want %.4f", c.got, c.want)
			}
		})
	}
}

// Dry air at 20 °C and sea level: any textbook table (from memory): 1.204 kg/m³, 1.82e-5 Pa·s, 0.0257 W/(m·K).
// The standard atmosphere at 2000 m: 79495 Pa (ICAO, from memory).
func TestAirAtTheSea(t *testing.T) {
	a := airAt(20, 0)
	for _, c := range []struct {
		name           string
		got, want, tol float64
	}{
		{"density", a.rho, 1.204, 0.003}, {"viscosity", a.mu, 1.82e-5, 2e-7}, {"conductivity", a.k, 0.0257, 2.5e-4},
		{"pressure at 2000 m", pressurePa(2000), 79495, 40},
	} {
		if math.Abs(c.got-c.want) > c.tol {
			t.Errorf("%s: %g, want %g", c.name, c.got, c.want)
		}
	}
}

func TestMovingAirIsNeverBelowStill(t *testing.T) {
	for _, shape := range []*Shape{Slab, Sphere, Cylinder, Brick} {
		c := filmCase{shape: shape, size: Size{ThicknessM: 0.05, WidthM: 0.1, LengthM: 0.2, DiameterM: 0.07}, foodC: 60, mediumC: 4, airMS: 0.01}
		still, _ := stillAir(&c)
		if moving, _ := movingAir(&c); moving < still {
			t.Errorf("%s: %g below %g", shape.Name, moving, still)
		}
	}
}

// Every correlation at ten Reynolds or Rayleigh numbers, Prandtl number 0.71: the printed formula worked out with mpmath at 30 digits
// apart from the program (the numbers are typed here).
func TestCorrelationsAtTenNumbers(t *testing.T) {
	for _, c := range []struct {
		name    string
		nusselt func(x, pr float64) float64
		at      [10][2]float64
	}{
		{"Churchill & Bernstein 1977, J. Heat Transfer 99:300-306", churchillBernstein, [10][2]float64{{1, 0.7858279}, {30, 2.967147}, {250, 8.0550927}, {1e3, 16.018792}, {4e3, 32.724396},
			{2e4, 79.309819}, {9e4, 200.73049}, {3e5, 470.75035}, {1e6, 1233.7196}, {9e6, 8979.2766}}},
		{"Melissari & Argyropoulos 2005", sphereForced, [10][2]float64{{100, 6.1548071}, {180, 7.5742586}, {400, 10.309614}, {900, 14.464421}, {2e3, 20.580862},
			{5e3, 31.378923}, {9e3, 41.415961}, {15e3, 52.885787}, {3e4, 73.96337}, {5e4, 94.904311}}},
		{"laminar flat plate, Incropera & DeWitt", plateForced, [10][2]float64{{1e3, 18.732146}, {3e3, 32.445028}, {8e3, 52.982509}, {2e4, 83.772703}, {5e4, 132.45627},
			{9e4, 177.70874}, {1.5e5, 229.42099}, {2.5e5, 296.18123}, {4e5, 374.64292}, {5e5, 418.86351}}},
		{"Churchill & Chu 1975, Int. J. Heat Mass Transfer 18:1049-1053", churchillChu, [10][2]float64{{1e-4, 0.44785151}, {0.1, 0.67057044}, {10, 1.1482634}, {1e3, 2.6113523}, {2e4, 5.1704253},
			{3e5, 10.424211}, {5e6, 23.051674}, {8e7, 52.838572}, {2e9, 144.09252}, {6e11, 906.35024}}},
		{"Churchill 1983, sphere", sphereFree, [10][2]float64{{0.1, 2.255579}, {1, 2.4544909}, {50, 3.2085587}, {1e3, 4.5557958}, {2e4, 7.4050757},
			{3e5, 12.643654}, {5e6, 23.714563}, {8e7, 49.24569}, {2e9, 135.96228}, {9e12, 2210.211}}},
		{"McAdams 1954, horizontal plate, cold face up", plateLayered, [10][2]float64{{1e5, 4.8013544}, {3e5, 6.3189378}, {1e6, 8.5381497}, {5e6, 12.767512}, {2e7, 18.055988},
			{8e7, 25.535023}, {3e8, 35.533998}, {1e9, 48.013544}, {4e9, 67.901405}, {9e9, 83.161898}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, p := range c.at {
				if got := c.nusselt(p[0], 0.71); math.Abs(got-p[1]) > 1e-7*p[1] {
					t.Errorf("at %g: %.9g, want %.9g", p[0], got, p[1])
				}
			}
		})
	}
}

// Beyond its range a correlation gives the value at the end of it, below it the air counts as still, and both are said.
func TestCorrelationsKeepToTheirRanges(t *testing.T) {
	ball := func(diameterM, airMS float64) *filmCase {
		return &filmCase{shape: Sphere, size: Size{DiameterM: diameterM}, mediumC: 4, airMS: airMS}
	}
	fast, end := newAirFilm(true, ball(0.31, 9.7)), newAirFilm(true, ball(0.31, 1))
	a := airAt(4, 0)
	end.airMS = 5e4 * a.nu() / 0.31 // Reynolds number 50000
	if got, want := fast.at(4, 4), end.at(4, 4); math.Abs(got-want) > 1e-9*want {
		t.Errorf("beyond the range %g W/(m²·K), at its end %g", got, want)
	}
	slow, still := newAirFilm(true, ball(0.031, 0.02)), newAirFilm(false, ball(0.031, 0))
	if got, want := slow.at(31, 4), still.at(31, 4); got != want { // Reynolds number about 45
		t.Errorf("below the range %g W/(m²·K), still air %g", got, want)
	}
	for _, c := range []struct {
		name  string
		film  *airFilm
		lowC  float64
		highC float64
		airC  float64
		says  string
	}{
		{"a fast stream", fast, 3, 40, 4, "Reynolds number 2.2e+05 is above the range of Melissari"},
		{"a breath", slow, 3, 40, 4, "0.02 m/s is below the range of Melissari"},
		{"within the range", newAirFilm(true, ball(0.071, 2.3)), 3, 90, 4, ""},
		{"a huge body in still air", newAirFilm(false, &filmCase{shape: Cylinder, size: Size{DiameterM: 9}}), 3, 250, 4, "Rayleigh number 4.5e+12 is above the range of Churchill & Chu"},
		{"hotter than the tables of air", newAirFilm(false, ball(0.071, 0)), 30, 40, 490, "air properties are known from -40 to 250 °C"},
		{"colder", newAirFilm(false, ball(0.071, 0)), -50, 4, -50, "air properties are known from -40 to 250 °C"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := c.film.beyond(c.lowC, c.highC, c.airC); (got == "") != (c.says == "") || !strings.Contains(got, c.says) {
				t.Errorf("says %q, want %q", got, c.says)
			}
		})
	}
}

// Above the range of its correlation a film keeps the value at the end of it, whatever the difference or the speed, and that is said. The ends:
// Churchill & Bernstein 1977, Reynolds number 1e7; Churchill & Chu 1975, Rayleigh number 1e12; Churchill 1983 (sphere), 1e13; McAdams 1954
// (plate with its cold face up or warm face down, on area by edge), 1e10.
func TestFilmsKeepTheEndOfTheirRange(t *testing.T) {
	huge := func(moving bool, shape *Shape, face *Face, m, airMS float64) *airFilm {
		f := newAirFilm(moving, &filmCase{shape: shape, size: Size{DiameterM: m}, face: face, mediumC: 4, airMS: airMS})
		f.lengthM = m // a slab's own size stays within the range
		return f
	}
	for _, c := range []struct {
		name           string
		film           *airFilm
		surfaceC, airC float64
		nusselt        func(x, pr float64) float64
		end, lengthM   float64
		says           string
	}{
		{"a gale over a long joint", huge(true, Cylinder, nil, 9, 27), 4, 4, churchillBernstein, 1e7, 9, "is above the range of Churchill & Bernstein 1977"},
		{"a long body in still air", huge(false, Cylinder, nil, 9, 0), 250, 4, churchillChu, 1e12, 9, "is above the range of Churchill & Chu 1975"},
		{"a ball in still air", huge(false, Sphere, nil, 17, 0), 91, 4, sphereFree, 1e13, 17, "is above the range of Churchill 1983"},
		{"warm face down", huge(false, Slab, Underside, 9, 0), 73, 4, plateLayered, 1e10, 9.0 / 4, "is above the range of McAdams 1954"},
		{"cold face up", huge(false, Slab, Top, 9, 0), 3, 70, plateLayered, 1e10, 9.0 / 4, "is above the range of McAdams 1954"},
	} {
		t.Run(c.name, func(t *testing.T) {
			a := airAt((c.surfaceC+c.airC)/2, 0)
			want := c.nusselt(c.end, a.pr()) * a.k / c.lengthM
			got := c.film.at(c.surfaceC, c.airC)
			now, _ := c.film.which(c.surfaceC, c.airC)
			if math.Abs(got-want) > 1e-6*want || math.Abs(now-want) > 1e-9*want {
				t.Errorf("%.7g W/(m²·K), by the formulas %.7g, at the end of the range %.7g", got, now, want)
			}
			low, high := min(c.surfaceC, c.airC), max(c.surfaceC, c.airC)
			if says := c.film.beyond(low, high, c.airC); !strings.Contains(says, c.says) || strings.Contains(says, ";") {
				t.Errorf("says %q, want %q alone", says, c.says)
			}
		})
	}
	if says := newAirFilm(false, &filmCase{shape: Slab, face: Top}).beyond(-30, 90, 90); says != "" {
		t.Errorf("a tray says %q", says)
	}
}

// A slab in still air with both faces alike takes one film, within 10 % of the mean of what McAdams (1954, in Incropera & DeWitt) gives for the
// two faces of a plate: 0.54 Ra^(1/4) to Ra 1e7 and 0.15 Ra^(1/3) above, and 0.27 Ra^(1/4), on a quarter of the side. A face that differs from
// the other takes the lower one where air lies in layers on it, and never more than the higher one.
func TestFacesOfASlab(t *testing.T) {
	film := func(face *Face, surfaceC, airC float64) float64 {
		return newAirFilm(false, &filmCase{shape: Slab, size: Size{ThicknessM: 0.04}, face: face, mediumC: airC}).at(surfaceC, airC)
	}
	for _, c := range []struct{ surfaceC, airC float64 }{{7, 2}, {22, 2}, {62, 2}, {9, 175}, {61, 175}, {71, 163}, {30, 95}, {-20, 4}, {4, 21}} {
		a := airAt((c.surfaceC+c.airC)/2, 0)
		ra := 9.80665 * a.beta * math.Abs(c.surfaceC-c.airC) * 0.125 * 0.125 * 0.125 / a.nu() / a.nu() * a.pr()
		rises := 0.54 * math.Pow(ra, 0.25)
		if ra > 1e7 {
			rises = 0.15 * math.Cbrt(ra)
		}
		high, low := rises*a.k/0.125, 0.27*math.Pow(ra, 0.25)*a.k/0.125
		both := film(nil, c.surfaceC, c.airC)
		if mean := (high + low) / 2; math.Abs(both-mean) > 0.1*mean {
			t.Errorf("%g in %g °C: %.3f W/(m²·K), mean of the faces %.3f", c.surfaceC, c.airC, both, mean)
		}
		still, moves := Top, Underside // which face has air in layers
		if c.surfaceC > c.airC {
			still, moves = Underside, Top
		}
		if got := film(still, c.surfaceC, c.airC); math.Abs(got-low) > 1e-6*low {
			t.Errorf("%g in %g °C, %s: %.4f W/(m²·K), want %.4f", c.surfaceC, c.airC, still.Name, got, low)
		}
		if got := film(moves, c.surfaceC, c.airC); got != both || got > high {
			t.Errorf("%g in %g °C, %s: %.4f W/(m²·K), want %.4f, at most %.4f", c.surfaceC, c.airC, moves.Name, got, both, high)
		}
	}
	if f := newAirFilm(false, &filmCase{shape: Brick, size: Size{ThicknessM: 0.04, WidthM: 0.2, LengthM: 0.3}, face: Top}); f.lies != nil {
		t.Error("a brick's face has air rising beside it")
	}
}

// Spreads of film coefficients that were worked out apart from the program or measured, radiation with emissivity 0.9 where it counts. Static
// ovens of 120 to 220 °C: 15 to 23 W/(m²·K) in whole numbers, a body of 100 mm, 19.252 measured (Chang, Carpenter & Toledo 1998, J. Food Sci. 63). Blown at
// 1, 2 and 5 m/s at 175 °C: 10.7, 15.5 and 26 by convection (Churchill & Bernstein 1977, air at 175 °C), 20 to 45 with radiation.
func TestFilmsOfOvens(t *testing.T) {
	body := filmCase{shape: Cylinder, size: Size{DiameterM: 0.1}}
	flux := func(e Exposure, surfaceC, airC float64) float64 {
		e.Medium, e.RadiatingC = Course{C: []float64{airC}}, &airC
		w, _ := newSkin(&e, &body, nil, airStep(Cook)).flux(surfaceC, 0)
		return w / (airC - surfaceC)
	}
	for _, airC := range []float64{120, 163, 175, 220} {
		for _, surfaceC := range []float64{40, 70, 95} {
			if got := flux(Exposure{Surface: StillAir}, surfaceC, airC); got < 14.5 || got > 23.5 {
				t.Errorf("static oven %g °C, surface %g °C: %.1f W/(m²·K)", airC, surfaceC, got)
			}
		}
	}
	for _, c := range []struct{ airMS, want float64 }{{1, 10.7}, {2, 15.5}, {5, 26}} {
		c := c
		a := airAt(175, 0)
		if got := churchillBernstein(c.airMS*0.1/a.nu(), a.pr()) * a.k / 0.1; math.Abs(got-c.want) > 0.04*c.want {
			t.Errorf("%g m/s: %.2f W/(m²·K), want %.1f", c.airMS, got, c.want)
		}
		if got := flux(Exposure{Surface: MovingAir, AirMS: &c.airMS}, 80, 175); got < 20 || got > 45 {
			t.Errorf("%g m/s with radiation: %.1f W/(m²·K)", c.airMS, got)
		}
	}
}

// A spheroid in a stream: Yovanovich's formula for spheroids (AIAA paper 88-0743, 1988, from memory: Nu = 2 √π + [0.15 (P/√A)^½ Re^½ + 0.35
// Re^0.566] Pr^⅓ on the root of the surface A, P the edge of the largest section across the stream, Re up to 2e5) gives for long ones what
// the cylinder's film does, within 8 %, and more for round ones than the sphere's.
func TestSpheroidInAStream(t *testing.T) {
	for _, c := range []struct{ lengthM, diameterM, least, most float64 }{
		{0.33, 0.144, 0.94, 1.08}, {0.33, 0.13, 0.94, 1.08}, {0.12, 0.06, 0.94, 1.08}, {0.16, 0.1, 0.94, 1.08}, {0.13, 0.1, 0.6, 0.9}, {0.07, 0.12, 0.6, 0.9},
	} {
		for _, airMS := range []float64{0.7, 1.3, 2, 3.1} {
			b, l := c.diameterM/2, c.lengthM/2
			area := 0.0 // of the surface of revolution, by Simpson's rule in the angle
			const n = 200
			for i := range n + 1 {
				s, k := math.Sincos(math.Pi * float64(i) / n)
				w := float64(2 + 2*(i%2))
				if i == 0 || i == n {
					w = 1
				}
				area += w / 3 * math.Pi / n * 2 * math.Pi * b * s * math.Hypot(b*k, l*s)
			}
			edge := 0.0 // of the section across the stream: the ellipse of length and diameter
			for i := range n {
				s, k := math.Sincos(2 * math.Pi * float64(i) / n)
				edge += 2 * math.Pi / n * math.Hypot(b*k, l*s)
			}
			a, root := airAt(10, 0), math.Sqrt(area)
			re := airMS * root / a.nu()
			want := (2*math.Sqrt(math.Pi) + (0.15*math.Sqrt(edge/root*re)+0.35*math.Pow(re, 0.566))*math.Cbrt(a.pr())) * a.k / root
			f := newAirFilm(true, &filmCase{shape: Spheroid, size: Size{ThicknessM: c.lengthM, DiameterM: c.diameterM}, mediumC: 10, airMS: airMS})
			if got := f.at(10, 10) / want; got < c.least || got > c.most {
				t.Errorf("%g × %g m, %g m/s: %.3f of Yovanovich's film, %.2f W/(m²·K)", c.lengthM, c.diameterM, airMS, got, want)
			}
		}
	}
}

// The film between two temperatures of the air is interpolated: within 1e-7 of the formulas.
func TestFilmBetweenNodes(t *testing.T) {
	for _, c := range []filmCase{{shape: Slab}, {shape: Slab, face: Top}, {shape: LayeredSlab, face: Underside}, {shape: Sphere}, {shape: Cylinder}} {
		for _, speed := range []float64{0, 0.2, 2.7} {
			shape := c.shape
			c.size, c.mediumC, c.airMS = Size{ThicknessM: 0.05, DiameterM: 0.07}, 4, speed
			f := newAirFilm(speed > 0, &c)
			for _, airC := range []float64{-44, -3, 21, 94, 263, 610} {
				for surface := -31.0; surface < 121; surface += 1.7 {
					got := f.at(surface, airC)
					if now, _ := f.which(surface, airC); math.Abs(got-now) > 1e-7*now {
						t.Fatalf("%s, %g m/s, surface %g, air %g °C: %.10g, want %.10g", shape.Name, speed, surface, airC, got, now)
					}
				}
			}
		}
	}
}
