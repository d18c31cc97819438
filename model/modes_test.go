package model

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"slowpoint/testdata/published"
)

// These tests hold the modes of one axis to published figures at the tolerance of the figures, with as many functions as there are.
// The whole program is held to the same figures, at the accuracy that it promises, in model/verify.

var kindOf = map[string]axisKind{"plate": planeHalf, "cylinder": radial, "sphere": spherical}

// testFood is the food of the checks: k 0.5 W/(m·K), diffusivity 1.35e-7 m²/s.
var testFood = Properties{KWmK: 0.5, RhoKgM3: 1000, CJkgK: 0.5 / 1.35e-7 / 1000}

// oneAxis is the field on one axis as polynomial coefficients, K or °C.
type oneAxis struct {
	axis
	c []float64
}

// uniform starts an axis of a kind at a temperature.
func uniform(kind axisKind, radiusM, startC float64) *oneAxis {
	b := baseOf(kind, maxDegrees)
	o := &oneAxis{axis: axis{base: b, radiusM: radiusM}, c: make([]float64, b.n)}
	o.c[0] = startC
	return o
}

// run lets t seconds of a step pass with a film h (+Inf: held) at a medium that starts at mediumC and rises by riseKs K/s; food gives the
// properties. It returns the modes and their amplitudes' deviation from the state that the medium would hold.
func (o *oneAxis) run(food Properties, h, mediumC, riseKs, t float64) (s *axisStep, amplitude []float64) {
	s = o.step(new(slab), new(slab), food, film{group: -1}, film{u: h})
	amplitude = make([]float64, o.n)
	o.c[0] -= mediumC
	for i := range amplitude {
		for m, c := range o.c {
			amplitude[i] += s.b[m*o.n+i] * c
		}
		r := s.rate[i]
		amplitude[i] = amplitude[i]*math.Exp(-r*t) + s.gUp[i]*riseKs*(t/r+math.Expm1(-r*t)/(r*r))
	}
	for m := range o.c {
		o.c[m] = 0
		for i, a := range amplitude {
			o.c[m] += s.b[m*o.n+i] * a
		}
	}
	o.c[0] += mediumC
	return s, amplitude
}

// at is the temperature at x, 0 centre to 1 face.
func (o *oneAxis) at(x float64) float64 {
	phi := make([]float64, o.n)
	o.values(x, phi, nil)
	sum := 0.0
	for m, c := range o.c {
		sum += c * phi[m]
	}
	return sum
}

func (o *oneAxis) mean() float64 { return o.c[0] }

// closeTo fails unless got is within tol of want.
func closeTo(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: %.12g, want %.12g ± %.3g (off by %.3g)", what, got, want, tol, got-want)
	}
}

func TestEigenvaluesOfTheTextbook(t *testing.T) {
	const printed = 0.52e-4 // four decimals; two of the book's figures are rounded up from a fifth decimal just below 5 (1.599449 as 1.5995)
	for _, r := range published.Rows(t, "eigenvalues_textbook.csv") {
		kind, bi := kindOf[r["geometry"]], published.Number(t, r["Bi"])
		radius := 0.037
		o := uniform(kind, radius, 1)
		s, _ := o.run(testFood, bi*0.5/radius, 0, 0, 0)
		zeta := math.Sqrt(s.rate[0] * radius * radius / 1.35e-7)
		name := r["geometry"] + " Bi " + r["Bi"]
		closeTo(t, name+" zeta1", zeta, published.Number(t, r["zeta1"]), printed)
		phi := make([]float64, o.n)
		o.values(0, phi, nil)
		c := 0.0
		for m := range phi {
			c += phi[m] * s.b[m*o.n]
		}
		closeTo(t, name+" C1", c*s.b[0], published.Number(t, r["C1"]), printed)
	}
}

func TestEigenvalues(t *testing.T) {
	for _, r := range published.Rows(t, "eigenvalues.csv") {
		radius, bi := 0.037, published.Number(t, r["Bi"])
		o := uniform(kindOf[r["geometry"]], radius, 1)
		s, _ := o.run(testFood, bi*0.5/radius, 0, 0, 0)
		n := int(published.Number(t, r["n"])) - 1
		phi := make([]float64, o.n)
		o.values(0, phi, nil)
		c := 0.0
		for m := range phi {
			c += phi[m] * s.b[m*o.n+n]
		}
		name := r["geometry"] + " Bi " + r["Bi"] + " n " + r["n"]
		zeta := published.Number(t, r["zeta"])
		closeTo(t, name+" zeta", math.Sqrt(s.rate[n]*radius*radius/1.35e-7), zeta, 1e-10*zeta)
		closeTo(t, name+" centre", c*s.b[n], published.Number(t, r["C"]), 1e-9)
		closeTo(t, name+" mean", s.b[n]*s.b[n], published.Number(t, r["M"]), 1e-9)

		// The characteristic equation itself, at the rate that the program uses.
		z := math.Sqrt(s.rate[n] * radius * radius / 1.35e-7)
		if math.IsInf(bi, 1) {
			continue
		}
		switch r["geometry"] {
		case "plate":
			closeTo(t, name+": z sin z = Bi cos z", z*math.Sin(z), bi*math.Cos(z), 1e-8*(1+z*bi))
		case "cylinder":
			closeTo(t, name+": z J1 = Bi J0", z*math.J1(z), bi*math.J0(z), 1e-8*(1+z*bi))
		case "sphere":
			closeTo(t, name+": sin z - z cos z = Bi sin z", math.Sin(z)-z*math.Cos(z), bi*math.Sin(z), 1e-8*(1+z*bi))
		}
	}
}

func TestModesOfAStep(t *testing.T) {
	for _, file := range []string{"series_checks.csv", "series.csv"} {
		for _, r := range published.Rows(t, file) {
			tol := 1e-9
			if file == "series_checks.csv" {
				tol = published.Number(t, r["tolerance"])
			}
			radius, bi, fo := 0.037, published.Number(t, r["Bi"]), published.Number(t, r["Fo"])
			o := uniform(kindOf[r["geometry"]], radius, 1)
			o.run(testFood, bi*0.5/radius, 0, 0, fo*radius*radius/1.35e-7)
			name := r["geometry"] + " Bi " + r["Bi"] + " Fo " + r["Fo"]
			closeTo(t, name+" centre", o.at(0), published.Number(t, r["theta_centre"]), tol)
			closeTo(t, name+" mean", o.mean(), published.Number(t, r["theta_mean"]), tol)
			closeTo(t, name+" surface", o.at(1), published.Number(t, r["theta_surface"]), tol)
		}
	}
}

func TestModesOfProducts(t *testing.T) {
	for _, r := range published.Rows(t, "product_solutions.csv") {
		axes := []*oneAxis{uniform(radial, 0.05, 1), uniform(planeHalf, 0.075, 1)}
		if r["shape"] == "brick" {
			axes = []*oneAxis{uniform(planeHalf, 0.03, 1), uniform(planeHalf, 0.05, 1), uniform(planeHalf, 0.1, 1)}
		}
		centre, mean := 1.0, 1.0
		for _, o := range axes {
			o.run(testFood, published.Number(t, r["h"]), 0, 0, published.Number(t, r["time_s"]))
			centre *= o.at(0)
			mean *= o.mean()
		}
		name := r["shape"] + " h " + r["h"] + " after " + r["time_s"] + " s"
		tol := published.Number(t, r["tolerance"])
		closeTo(t, name+" centre", centre, published.Number(t, r["theta_centre"]), tol)
		closeTo(t, name+" mean", mean, published.Number(t, r["theta_mean"]), tol)
		closeTo(t, name+" centre °C", 3+72*centre, published.Number(t, r["centre_C"]), 0.6e-5)
	}
}

func TestModesOfAHalfSpace(t *testing.T) {
	for _, r := range published.Rows(t, "semi_infinite.csv") {
		for col, h := range map[string]float64{"held": math.Inf(1), "h25": 25, "h200": 200} {
			x, after := published.Number(t, r["x_m"]), published.Number(t, r["time_s"])
			depth := math.Max(9.5*math.Sqrt(1.35e-7*after), x) // the far side is not felt: erfc(4.7) < 1e-10
			o := uniform(planeHalf, depth, 0)
			o.run(testFood, h, 1, 0, after)
			closeTo(t, "x "+r["x_m"]+" t "+r["time_s"]+" "+col, o.at(1-x/depth), published.Number(t, r[col]), published.Number(t, r["tolerance"]))
		}
	}
}

func TestModesOfARamp(t *testing.T) {
	for _, r := range published.Rows(t, "ramp.csv") {
		radius, kind := published.Number(t, r["radius_m"]), kindOf[r["geometry"]]
		o := uniform(kind, radius, 0)
		o.run(testFood, 20, 0, 40./3600, published.Number(t, r["time_s"]))
		closeTo(t, r["geometry"]+" "+r["time_s"], o.at(0), published.Number(t, r["rise_K"]), published.Number(t, r["tolerance"]))
		late := uniform(kind, radius, 0)
		late.run(testFood, 20, 0, 40./3600, 400000) // long after the start
		closeTo(t, r["geometry"]+" final lag", 400000-late.at(0)/(40./3600), published.Number(t, r["lag_s"]), 1e-3)
	}
}

func TestModesOfAChain(t *testing.T) {
	for _, r := range published.Rows(t, "chain.csv") {
		o := uniform(kindOf[r["geometry"]], published.Number(t, r["radius_m"]), 5)
		for _, step := range strings.Split(r["steps"], ";") {
			f := strings.Fields(step)
			o.run(testFood, published.Number(t, f[0]), published.Number(t, f[1]), 0, published.Number(t, f[2]))
		}
		name, tol := r["chain"]+" "+r["geometry"]+" "+r["steps"], published.Number(t, r["tolerance"])
		closeTo(t, name+" centre", o.at(0), published.Number(t, r["centre_C"]), tol)
		closeTo(t, name+" surface", o.at(1), published.Number(t, r["surface_C"]), tol)
		closeTo(t, name+" mean", o.mean(), published.Number(t, r["mean_C"]), tol)
	}
}

func TestModesOfCarryOver(t *testing.T) {
	for _, r := range published.Rows(t, "carry_over.csv") {
		after := func(rest float64) float64 {
			o := uniform(kindOf[r["geometry"]], published.Number(t, r["radius_m"]), 5)
			o.run(testFood, 40, 160, 0, 2400)
			o.run(testFood, 8, 22, 0, rest)
			return o.at(0)
		}
		peak := published.Number(t, r["peak_after_s"])
		closeTo(t, r["geometry"]+" at removal", after(0), published.Number(t, r["removal_C"]), 1e-6)
		closeTo(t, r["geometry"]+" peak", after(peak), published.Number(t, r["peak_C"]), 1e-5)
		if a, b, c := after(peak-1.5), after(peak), after(peak+1.5); !(b > a && b > c) {
			t.Errorf("%s: no peak at %g s: %.7f, %.7f, %.7f", r["geometry"], peak, a, b, c)
		}
	}
}

func TestLongTimeNusselt(t *testing.T) {
	radius, alpha := 0.037, 1.35e-7
	for _, r := range published.Rows(t, "nusselt.csv") {
		kind := kindOf[r["geometry"]]
		e := uniform(kind, radius, 1).weight() // 1, 2, 3
		want := published.Number(t, r["Nu"])
		// Nu = flux·D/(k·ΔT of the mean) = -(dθ/dFo)/θ · 2/e with Fo on the half thickness
		local := func(foD float64) (nu, oneTerm float64) {
			o := uniform(kind, radius, 1)
			s, a := o.run(testFood, math.Inf(1), 0, 0, foD*4*radius*radius/alpha)
			slope := 0.0
			for i := range a {
				slope += s.rate[i] * a[i] * s.b[i] * radius * radius / alpha
			}
			return slope / o.mean() * 2 / e, a[0]*s.b[0]/o.mean() - 1
		}
		nu, _ := local(2)
		closeTo(t, r["geometry"]+" long-time Nusselt", nu, want, 1e-9)
		if printed := strconv.FormatFloat(nu, 'f', 2, 64); printed != r["printed"] {
			t.Errorf("%s: printed %s, want %s", r["geometry"], printed, r["printed"])
		}
		nu, _ = local(0.1)
		closeTo(t, r["geometry"]+" local excess at Fo 0.1", nu/want-1, published.Number(t, r["local_excess"]), 0.06*published.Number(t, r["local_excess"])+3e-7)
		for col, fo := range map[string]float64{"one_term_010": 0.1, "one_term_002": 0.02, "one_term_003": 0.03, "one_term_005": 0.05} {
			_, oneTerm := local(fo)
			want := published.Number(t, r[col])
			closeTo(t, r["geometry"]+" "+col, oneTerm, want, 0.06*math.Abs(want))
		}
		// The onset: at 0.1 the long-time value holds within 0.04 %, at 0.02 it does not hold within 1 %.
		if early, _ := local(0.02); early/want-1 < 0.01 {
			t.Errorf("%s: Nusselt %g at Fo 0.02 is already the long-time one", r["geometry"], early)
		}
	}
}

func TestPenetration(t *testing.T) {
	radius, alpha := 0.037, 1.35e-7
	for _, r := range published.Rows(t, "penetration.csv") {
		kind, fo := kindOf[r["geometry"]], 4*published.Number(t, r["Fo"])
		o := uniform(kind, radius, 1)
		s, a := o.run(testFood, math.Inf(1), 0, 0, fo*radius*radius/alpha)
		flux := 0.0 // in k·ΔT/R
		for i := range a {
			flux += s.rate[i] * a[i] * s.b[i] * radius * radius / alpha / o.weight()
		}
		want := published.Number(t, r["flux_error"])
		closeTo(t, r["geometry"]+" Fo "+r["Fo"]+" flux", 1/math.Sqrt(math.Pi*fo)/flux-1, want, 0.06*want)
		if r["theta_centre"] != "" {
			closeTo(t, r["geometry"]+" centre", o.at(0), published.Number(t, r["theta_centre"]), 0.6e-5)
		}
	}
}

// The error that a history states is honest: the true error, held against all functions there are, is at most twice that and 0.002 K, at
// every place from a minute after each change on. And it is useful: no larger than the accuracy promised for 1, 2 and 3 axes.
func TestStatedErrorIsHonest(t *testing.T) {
	promised := map[*Shape]float64{Slab: 0.005, Cylinder: 0.005, Sphere: 0.005, ShortCylinder: 0.01, Bar: 0.01, Brick: 0.02}
	for _, shape := range []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar, Brick} {
		t.Run(shape.Name, func(t *testing.T) {
			worst, where := 0.0, ""
			for _, r := range []float64{0.01, 0.02, 0.04, 0.08, 0.15} {
				for _, h := range []float64{5, 25, 100, 500, 3000, math.Inf(1)} {
					axes := bodyAxes(shape, r)
					p := Product{Shape: shape, StartC: 5, Food: &Material{Name: "test", Source: "input of the test", Props: func(float64) Properties { return testFood }, Waterless: true},
						Size: Size{ThicknessM: 2 * r, DiameterM: 2 * r, WidthM: 2.4 * r, LengthM: 3.2 * r}}
					e := Exposure{Surface: Film, FilmW: &h, Medium: Course{TimesS: []float64{0}, C: []float64{160}}}
					if math.IsInf(h, 1) {
						e.Surface, e.FilmW = Held, nil
					}
					hist, err := Solve(p, []Step{{Stage: Cook, DurationS: 3600, Exposure: e}}, Options{})
					if err != nil {
						t.Fatal(err)
					}
					off := 0.0
					for _, at := range []float64{60, 90, 150, 300, 900, 3600} {
						off = math.Max(off, trueError(hist, axes, h, at))
					}
					name := fmt.Sprintf("half thickness or radius %g m, film %g W/(m²·K)", r, h)
					if off > 2*hist.ErrorK+0.002 {
						t.Errorf("%s: error %.4f K, stated %.4f K", name, off, hist.ErrorK)
					}
					if off > promised[shape] || hist.ErrorK > promised[shape] {
						t.Errorf("%s: error %.4f K, stated %.4f K, promised %g K", name, off, hist.ErrorK, promised[shape])
					}
					if off > worst {
						worst, where = off, name
					}
				}
			}
			t.Logf("largest error %.4f K (%s)", worst, where)
		})
	}
}

// bodyAxis is an axis of a body and the coordinate of a place that goes with it.
type bodyAxis struct {
	kind    axisKind
	radiusM float64
	along   func(*Place) *float64
}

// bodyAxes takes the body of TestStatedErrorIsHonest apart.
func bodyAxes(shape *Shape, r float64) []bodyAxis {
	up := func(p *Place) *float64 { return &p.UpM }
	across := func(p *Place) *float64 { return &p.AcrossM }
	along := func(p *Place) *float64 { return &p.AlongM }
	switch shape {
	case Slab:
		return []bodyAxis{{planeHalf, r, up}}
	case Cylinder:
		return []bodyAxis{{radial, r, up}}
	case Sphere:
		return []bodyAxis{{spherical, r, up}}
	case ShortCylinder:
		return []bodyAxis{{planeHalf, 1.6 * r, up}, {radial, r, across}}
	case Bar:
		return []bodyAxis{{planeHalf, r, up}, {planeHalf, 1.2 * r, across}}
	}
	return []bodyAxis{{planeHalf, r, up}, {planeHalf, 1.2 * r, across}, {planeHalf, 1.6 * r, along}}
}

// trueError is the largest difference, K, of a history of one step from 5 °C at 160 °C from the product of its axes with all functions.
func trueError(h *History, axes []bodyAxis, filmW, at float64) float64 {
	const n = 9 // places an axis, crowded towards the face
	theta := make([][n]float64, len(axes))
	for a, x := range axes {
		o := uniform(x.kind, x.radiusM, 1)
		o.run(testFood, filmW, 0, 0, at)
		for i := range theta[a] {
			theta[a][i] = o.at(math.Sin(math.Pi / 2 * float64(i) / (n - 1)))
		}
	}
	worst := 0.0
	for i := range int(math.Pow(n, float64(len(axes)))) {
		product, p := 1.0, Place{}
		for a, x := range axes {
			j := i % n
			i /= n
			product *= theta[a][j]
			*x.along(&p) = x.radiusM * math.Sin(math.Pi/2*float64(j)/(n-1))
		}
		worst = math.Max(worst, math.Abs(h.At(p, at)-(160-155*product)))
	}
	return worst
}

// The same for slabs whose faces meet different films, against a solution with nearly all functions, from the first look at the error on.
func TestStatedErrorIsHonestWithUnlikeFaces(t *testing.T) {
	for _, r := range []float64{0.01, 0.02, 0.03, 0.05, 0.08} {
		for _, w := range [][2]float64{{25, 8}, {25, 0}, {5, 3}, {100, 10}, {8, 80}, {60, 60.1}} {
			face := func(w, c float64) Exposure {
				if w == 0 {
					return Exposure{Surface: Insulated}
				}
				return Exposure{Surface: Film, FilmW: &w, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}
			}
			step := func(stage *Stage, c float64) Step {
				return Step{Stage: stage, DurationS: 3600, Exposure: face(w[0], c), Faces: []FaceExposure{{Face: Underside, Exposure: face(w[1], c)}}}
			}
			p := Product{Shape: Slab, StartC: 5, Size: Size{ThicknessM: 2 * r},
				Food: &Material{Name: "test", Source: "input of the test", Waterless: true, Props: func(float64) Properties { return testFood }}}
			steps := []Step{step(Cook, 160), step(Cool, 2)}
			h, err := Solve(p, steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			fine := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: &scratch{field: slab{wide: 1}, call: slab{wide: 1}}}
			fine.layOut()
			more := 0
			for fine.degrees(0, more) < maxDegrees-2 {
				more++
			}
			truth := fine.run(more)
			off := 0.0
			for _, start := range []float64{0, 3600} {
				for _, k := range []float64{1, 1.3, 1.7, 2.3, 3, 6} {
					for x := -1.0; x <= 1; x += 1.0 / 40 {
						at := Place{UpM: x * r}
						off = math.Max(off, math.Abs(h.At(at, start+k*h.settle)-truth.At(at, start+k*h.settle)))
					}
				}
			}
			if off > h.ErrorK*1.2 || h.ErrorK > 0.005 {
				t.Errorf("half thickness %g m, films %v W/(m²·K), %s: error %.5f K, stated %.5f K", r, w, h.Method, off, h.ErrorK)
			}
		}
	}
}

// The same in the step after a cook: the field to begin with is no longer uniform.
func TestStatedErrorIsHonestInTheNextStep(t *testing.T) {
	for _, shape := range []*Shape{Slab, Cylinder, Sphere} {
		for _, r := range []float64{0.01, 0.03, 0.07, 0.1, 0.15} {
			for _, h := range []float64{5, 25, 100, 3000} {
				rest, chill := 8., 40.
				film := func(w *float64, c float64) Exposure {
					return Exposure{Surface: Film, FilmW: w, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}
				}
				p := Product{Shape: shape, StartC: 5, Food: &Material{Name: "test", Source: "input of the test", Props: func(float64) Properties { return testFood }, Waterless: true},
					Size: Size{ThicknessM: 2 * r, DiameterM: 2 * r}}
				hist, err := Solve(p, []Step{{Stage: Cook, DurationS: 3000, Exposure: film(&h, 160)}, {Stage: Rest, DurationS: 600, Exposure: film(&rest, 22)},
					{Stage: Cool, DurationS: 3000, Exposure: film(&chill, 2)}}, Options{})
				if err != nil {
					t.Fatal(err)
				}
				off := 0.0
				for _, after := range []float64{60, 120, 300, 600} {
					o := uniform(bodyAxes(shape, r)[0].kind, r, 5)
					o.run(testFood, h, 160, 0, 3000)
					o.run(testFood, rest, 22, 0, after)
					for x := 0.; x <= 1; x += 1. / 16 {
						off = math.Max(off, math.Abs(hist.At(Place{UpM: x * r}, 3000+after)-o.at(x)))
					}
					if after == 600 {
						o.run(testFood, chill, 2, 0, 60)
						for x := 0.; x <= 1; x += 1. / 16 {
							off = math.Max(off, math.Abs(hist.At(Place{UpM: x * r}, 3660)-o.at(x)))
						}
					}
				}
				if off > 2*hist.ErrorK+0.002 || off > 0.005 || hist.ErrorK > 0.005 {
					t.Errorf("%s, half thickness or radius %g m, film %g W/(m²·K): error %.4f K, stated %.4f K, promised 0.005", shape.Name, r, h, off, hist.ErrorK)
				}
			}
		}
	}
}
