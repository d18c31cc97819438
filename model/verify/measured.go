package verify

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"

	"slowpoint/model"
	"slowpoint/model/food"
)

// MeasuredCase is a published measurement that the program predicts. Unlike a Case it is not expected to be met: food varies, and what a
// publication leaves out has to be taken from somewhere.
type MeasuredCase struct {
	ID       string // the case of testdata/measured/cases.csv
	What     string // the food, its surroundings
	Measure  string // what was measured, as in the table
	Source   string
	Taken    string // what the publication does not say, and what was taken instead
	Unit     string
	Measured float64
	Least    float64 // the ratio of prediction and measurement lies between these two; Most may be +Inf
	Most     float64
	Missed   string                  // why it is not met, as far as that is known; "" of one that is
	Predict  func() (float64, error) // in Unit; +Inf where it never comes to that
}

// MeasuredResult is what the program predicts for a measured case.
type MeasuredResult struct {
	MeasuredCase
	Got   float64 // NaN with an error
	Ratio float64 // Got by Measured
	Met   bool
	Err   error
}

// Compare predicts a measured case.
func (c MeasuredCase) Compare() MeasuredResult {
	got, err := c.Predict()
	if err != nil {
		return MeasuredResult{MeasuredCase: c, Got: math.NaN(), Ratio: math.NaN(), Err: err}
	}
	r := got / c.Measured
	return MeasuredResult{MeasuredCase: c, Got: got, Ratio: r, Met: r >= c.Least && r <= c.Most}
}

// Outcome says what the case was held to, whether it is met, and why not.
func (r *MeasuredResult) Outcome() string {
	switch {
	case r.Met:
		return r.Asked() + ": met"
	case r.Missed == "":
		return r.Asked() + ": NOT MET"
	}
	return r.Asked() + ": NOT MET, " + r.Missed
}

// Words says what was measured.
func (c *MeasuredCase) Words() string {
	if from, to, ok := strings.Cut(c.Measure, " to "); ok {
		return "centre from " + from + " to " + to + " °C"
	}
	return c.Measure
}

// Asked says in words what the ratio is held to.
func (c *MeasuredCase) Asked() string {
	switch {
	case math.IsInf(c.Most, 1):
		return "never shorter"
	case c.Least == 0:
		return fmt.Sprintf("at most %.3g %s", c.Most*c.Measured, c.Unit)
	case c.Least == 1:
		return fmt.Sprintf("not shorter, at most %g times", c.Most)
	}
	return fmt.Sprintf("± %.0f %%", 100*(c.Most-1))
}

const (
	burfoot   = "Burfoot et al. 1990, mean of six, in James & James, Meat Refrigeration (2002), Table 16.7"
	mcdonald  = "McDonald, Sun & Kenny 2000, in James & James, Meat Refrigeration (2002), Table 16.7"
	likeBeef  = "composition of braised beef"
	likeWalls = "walls as cold as the air, emissivity 0.9, nothing evaporates"
	even      = "the same temperature throughout at the start"
)

// blown is air of a speed, m/s, that sees walls as cold as itself.
func blown(airMS, c float64) model.Exposure {
	return model.Exposure{Surface: model.MovingAir, AirMS: &airMS, RadiatingC: &c, Medium: constant(c)}
}

// still is air left still, as hot as its walls, around a surface that is wet or dry.
func still(c float64, wet bool) model.Exposure {
	return model.Exposure{Surface: model.StillAir, RadiatingC: &c, Wet: &wet, Medium: constant(c)}
}

// water is a kind of water that a joint is in; whether that of the measured cases was stirred is not published.
type water struct {
	surface  *model.Surface
	as, film string
}

var waters = []water{{model.WaterBath, "", "water bath"}, {model.StirredWater, ", taken as stirred water", "bath of stirred water"}}

func (w *water) of(c float64) model.Exposure {
	return model.Exposure{Surface: w.surface, Medium: constant(c)}
}

// pieceOf is a piece of a built-in food; without the food what is asked of it is an error.
func pieceOf(name string, shape *model.Shape, size model.Size, startC float64) model.Product {
	f, _ := food.Named(name)
	return model.Product{Name: "piece", Shape: shape, Size: size, Food: f, StartC: startC}
}

// timing tells how long, in units of seconds, the centre takes from one temperature to another, by one solution.
type timing struct {
	solve func() (*model.History, error)
	unitS float64
}

func timed(p model.Product, steps ...model.Step) timing {
	return timing{sync.OnceValues(Problem{"measured case", p, steps}.history), 3600}
}

// startsK is how near to a temperature a centre has to begin to begin there, K: beyond what a solution rounds.
const startsK = 1e-6

// from starts its clock when the centre passes fromC, or at once where it starts there. What is cooked first and cooled then is looked at
// from the instant at which its centre is hottest.
func (m timing) from(fromC, toC float64) func() (float64, error) {
	return func() (float64, error) {
		h, err := m.solve()
		if err != nil {
			return 0, err
		}
		start := 0.0
		if toC < fromC && h.At(model.Place{}, 0) < fromC-startsK {
			for t := 0.0; t < h.EndS(); t += 60 {
				if h.At(model.Place{}, t) > h.At(model.Place{}, start) {
					start = t
				}
			}
		}
		since := start
		if c := h.At(model.Place{}, since); (c > fromC) == (fromC > toC) && math.Abs(c-fromC) > startsK {
			if start, err = passingSince(h, model.Place{}, fromC, since); err != nil {
				return 0, err
			}
		}
		end, err := passingSince(h, model.Place{}, toC, since)
		if errors.Is(err, errNotPassed) {
			return math.Inf(1), nil
		}
		return (end - start) / m.unitS, err
	}
}

// MeasuredCases lists the measured cases that can be calculated, with what they are held to: the bad ones too.
func MeasuredCases() []MeasuredCase {
	const (
		beef  = "Beef, brisket, flat half, lean, braised"
		long  = 24 * 3600.0
		never = 0.0
	)
	var list []MeasuredCase
	add := func(c MeasuredCase, measure string, measured float64, predict func() (float64, error)) {
		c.Measure, c.Measured, c.Predict = measure, measured, predict
		if c.Unit == "" {
			c.Unit = "h"
		}
		list = append(list, c)
	}
	inf := math.Inf(1)
	rolled := model.Size{DiameterM: 0.11, LengthM: 0.271}
	cut := model.Size{ThicknessM: 0.05, WidthM: 0.134, LengthM: 0.134}

	c := MeasuredCase{ID: "C01", What: "rolled beef forequarter 110 mm, 2.7 kg, in air of 0 °C at 1.2 m/s, as a long cylinder", Source: burfoot, Least: 0.9, Most: 1.1,
		Taken: "film of moving air at 1.2 m/s; " + likeWalls + "; " + likeBeef + "; " + even}
	m := timed(pieceOf(beef, model.Cylinder, model.Size{DiameterM: 0.11}, 75), step("chill", long, blown(1.2, 0)))
	add(c, "70 to 10", 5.1, m.from(70, 10))
	add(c, "50 to 10", 4.4, m.from(50, 10))
	c.What = "rolled beef forequarter 110 mm, 2.7 kg, in air of 0 °C at 1.2 m/s, as a short cylinder"
	c.Taken = "length 271 mm from mass; " + c.Taken
	m = timed(pieceOf(beef, model.ShortCylinder, rolled, 75), step("chill", long, blown(1.2, 0)))
	add(c, "70 to 10", 5.1, m.from(70, 10))
	add(c, "50 to 10", 4.4, m.from(50, 10))

	c.What = "rolled beef forequarter 110 mm, 2.7 kg, in air of 0 °C at 1.2 m/s, as a long cylinder with a typed film"
	c.Taken = "film of 16.5 W/(m²·K): 11.7 by the correlation of Churchill and Bernstein (1977) at 1.2 m/s and 4.8 of radiation, both for walls as cold as the air; " + likeBeef + "; " + even
	m = timed(pieceOf(beef, model.Cylinder, model.Size{DiameterM: 0.11}, 75), step("chill", long, exposure(16.5, 0)))
	add(c, "70 to 10", 5.1, m.from(70, 10))
	add(c, "50 to 10", 4.4, m.from(50, 10))

	for _, w := range waters {
		c = MeasuredCase{ID: "C03", What: "beef 50 mm thick, 0.94 kg, in water of 0 °C, as a brick" + w.as, Source: burfoot, Least: 1, Most: inf,
			Taken: "sides of 134 mm from mass; the program's own film of a " + w.film + "; " + likeBeef + "; " + even}
		m = timed(pieceOf(beef, model.Brick, cut, 75), step("chill", long, w.of(0)))
		add(c, "70 to 10", 1.2, m.from(70, 10))
		add(c, "50 to 10", 1, m.from(50, 10))
	}

	c = MeasuredCase{ID: "C04", What: "beef 50 mm thick, 0.94 kg, in air of 0 °C at 1.2 m/s, as a brick", Source: burfoot, Least: 1, Most: 1.5,
		Taken: "sides of 134 mm from mass; film of moving air at 1.2 m/s; " + likeWalls + "; " + likeBeef + "; " + even}
	m = timed(pieceOf(beef, model.Brick, cut, 75), step("chill", long, blown(1.2, 0)))
	add(c, "70 to 10", 2.1, m.from(70, 10))
	add(c, "50 to 10", 1.7, m.from(50, 10))

	for _, w := range waters {
		c = MeasuredCase{ID: "C05", What: "rolled beef forequarter 110 mm, 2.7 kg, in water of 0 °C, as a short cylinder" + w.as, Source: burfoot, Least: 1, Most: inf,
			Taken: "length 271 mm from mass; the program's own film of a " + w.film + "; " + likeBeef + "; " + even}
		m = timed(pieceOf(beef, model.ShortCylinder, rolled, 75), step("chill", long, w.of(0)))
		add(c, "70 to 10", 3.6, m.from(70, 10))
		add(c, "50 to 10", 3.1, m.from(50, 10))
	}

	// The roast weighs what an ellipsoid of its three sizes does. With a uniform 70 °C at the start even a surface kept at 1 °C would leave the
	// centre of its mass above 50 °C for 1.4 h, and 1.2 h were measured: the clock of the table starts later, as in its other rows.
	const cooked = "cooked from 5 °C in still air of 80 °C until its centre is at 70 °C, and the clock starts when the centre passes 70 °C on its way down"
	for _, s := range []struct {
		as, shape      string
		d              float64
		inAir, inWater string // why it is not met
	}{
		{"a spheroid of its mass, 330 × 144 mm", "an ellipsoid by its mass, the spheroid has its length, mass and surface", 0.1442,
			"it took a film of more than 30 W/(m²·K) and the formulas give 19 with radiation: neither the turbulence of the air nor how it was packed in it is known (open and wet it would come to 1.06 times)", ""},
		{"a spheroid of its smaller diameter, 330 × 130 mm", "an ellipsoid by its mass, the spheroid weighs 3.05 kg", 0.13,
			"", "the spheroid weighs less than what was measured"},
	} {
		joint := pieceOf(beef, model.Spheroid, model.Size{ThicknessM: 0.33, DiameterM: s.d}, 5)
		roast, untilC := step("roast", long, still(80, false)), 70.0
		roast.UntilC = &untilC
		c = MeasuredCase{ID: "C17", What: "vacuum-packed beef roast 330 × 160 × 130 mm, 3.75 kg, in air of 1 °C at 2 m/s, as " + s.as, Source: mcdonald, Least: 0.8, Most: 1.2, Missed: s.inAir,
			Taken: s.shape + "; " + cooked + "; film of moving air at 2 m/s; " + likeWalls + "; " + likeBeef}
		m = timed(joint, roast, step("chill", long, blown(2, 1)))
		add(c, "70 to 5", 7.6, m.from(70, 5))
		add(c, "70 to 8", 6.1, m.from(70, 8))
		for _, w := range waters {
			c = MeasuredCase{ID: "C18", What: "vacuum-packed beef roast 330 × 160 × 130 mm, 3.75 kg, in water of 1 °C, as " + s.as + w.as, Source: mcdonald, Least: 1, Most: inf, Missed: s.inWater,
				Taken: s.shape + "; " + cooked + "; the program's own film of a " + w.film + "; " + likeBeef}
			m = timed(joint, roast, step("chill", long, w.of(1)))
			add(c, "70 to 5", 8.5, m.from(70, 5))
			add(c, "70 to 8", 6.9, m.from(70, 8))
			if w.surface != model.WaterBath {
				continue // of what contradicts itself once is enough
			}
			c.ID, c.Source = "C18b", "abstract of McDonald, Sun & Kenny, Lebensm.-Wiss. u. Technol. 33 (2000) 21-29, against the table in James & James (8.5 h to 5 °C)"
			c.Missed = "the abstract and the table do not go together"
			add(c, "70 to 4", 14.2, m.from(70, 4))
		}
	}

	c = MeasuredCase{ID: "C19", What: "ham logs 400 × 120 × 120 mm in metal moulds, 30 min under spray of 18 °C, then air of 0 °C at 3 m/s, as a brick",
		Source: "Anon. 1987 in James & James, Meat Refrigeration (2002), Table 16.7", Least: 0.75, Most: 1.25,
		Taken: "spray as a typed film of 95 W/(m²·K), the low end of 95 to 155 for a pouch in stirred water (Baldwin 2012, from memory), because water that runs off is no bath, for which the program takes 20; no gap to the mould; film of moving air at 3 m/s; " + likeWalls + "; composition of sliced ham; start 70 °C throughout"}
	m = timed(pieceOf("Ham, sliced, regular (11% fat)", model.Brick, model.Size{ThicknessM: 0.12, WidthM: 0.12, LengthM: 0.4}, 70),
		step("spray", 1800, exposure(95, 18)), step("chill", long, blown(3, 0)))
	add(c, "70 to 5", 6.7, m.from(70, 5))
	add(c, "70 to 8", 6, m.from(70, 8))

	add(MeasuredCase{ID: "C23", What: "film with radiation in a static electric oven at 162.8 °C around a turkey of 8 kg, as a sphere", Unit: "W/(m²·K)",
		Source: "Chang, Carpenter & Toledo 1998, J. Food Sci. 63", Least: 0.85, Most: 1.15,
		Taken: "a dry sphere of its mass; walls as hot as the air, emissivity 0.9; mean over the 243 min that 8 kg take"}, "film", 19.252, roastFilm)

	const slice = "beef 93 × 50 × 26 mm, 143 g, in an oven of 175 °C, "
	lean := pieceOf("Beef, top round, lean, raw", model.Brick, model.Size{ThicknessM: 0.026, WidthM: 0.05, LengthM: 0.093}, 14)
	seconds := func(p model.Product, e model.Exposure) func() (float64, error) {
		m := timed(p, step("roast", 2*3600, e))
		m.unitS = 1
		return m.from(p.StartC, 65)
	}
	add24 := func(what, taken, missed string, least, most float64, predict func() (float64, error)) {
		add(MeasuredCase{ID: "C24", Missed: missed, What: slice + what, Taken: taken + "; centre, where the probe sat is not known; composition of lean raw beef", Unit: "s",
			Source: "record of a student project", Least: least, Most: most}, "14 to 65", 780, predict)
	}
	add24("worst case: wet, in dry air left still", "fan and humidity: still air, dry air; walls as hot as the air", "", 1, inf, seconds(lean, still(175, true)))
	add24("taken as dry in air left still", "no fan; walls as hot as the air; nothing evaporates", "whether the oven had a fan is not known", 0.85, 1.15, seconds(lean, still(175, false)))
	fan := blown(3, 175)
	fan.Wet = new(bool)
	add24("taken as dry with a fan", "a fan of 3 m/s, the middle of 1 to 5 m/s (1.14 times at 1 m/s, 0.85 times at 5 m/s); walls as hot as the air; nothing evaporates", "", 0.85, 1.15, seconds(lean, fan))
	const another = "the film is that of another student's model of such a piece, who does not say where it comes from"
	add24("with a film of 33.4 W/(m²·K) for everything", another, "", 0.85, 1.15, seconds(lean, exposure(33.4, 175)))
	add24("with that film, worst case: film 25 % less, 5 % thicker, oven 10 °C less, start 2 °C less, conductivity 5 % less",
		another+"; spreads: film as correlations scatter (Whitaker 1972), the others by own judgement", "", 1, inf, seconds(spread(lean), exposure(0.75*33.4, 165)))

	tin := MeasuredCase{ID: "C28", What: "dough in a tin, 116 mm across, 47.5 mm high, in an oven that goes from 180 to 205 °C, as a wet solid (outside the product range)", Unit: "°C",
		Source: "Czech Academy of Sciences, doi 10.14311/TPFM.2025.015", Least: never, Most: 100 / 99.5}
	const dough = "no tin; wet all over, air left still, walls of 205 °C; the properties of dough are not given: lean meat; 25 min"
	tin.Taken = "humidity: dry air; " + dough
	add(tin, "highest inside", 99.5, func() (float64, error) { return wetDough(nil) })
	tin.What += ", full of its vapour"
	// Vapour of 0.1013 MPa by what air of 180 and 205 °C could hold, 1.003 and 1.724 MPa (saturated steam, from memory), in %, the second rounded
	// down; on the straight line between them there is up to 5 % more.
	tin.Taken = "humidity: vapour alone, no air; " + dough
	add(tin, "highest inside", 99.5, func() (float64, error) { return wetDough([]float64{10.1, 5.87}) })
	return list
}

// roastFilm is the mean of the film with radiation over the roasting of a turkey: the heat that it took by area, time and difference.
func roastFilm() (float64, error) {
	const kg, airC, startC = 8.0, 162.8, 4.44
	p := model.Properties{KWmK: 0.464, RhoKgM3: 1050, CJkgK: 3500}
	r, endS := math.Cbrt(kg/p.RhoKgM3*3/4/math.Pi), (155+11*kg)*60
	b := body(model.Sphere, r, startC)
	b.Food = material(p)
	h, err := Problem{"turkey", b, []model.Step{step("roast", endS, still(airC, false))}}.history()
	if err != nil {
		return 0, err
	}
	s := h.Sample(endS / 400)
	kelvinS, last := 0.0, len(s.TimesS)-1
	for i, t := range s.TimesS[1:] {
		surface := (h.At(model.Place{UpM: r}, t) + h.At(model.Place{UpM: r}, s.TimesS[i])) / 2
		kelvinS += (airC - surface) * (t - s.TimesS[i])
	}
	return p.RhoKgM3 * p.CJkgK * r / 3 * (s.Mean[last] - startC) / kelvinS, nil
}

// spread is a piece as its least favourable measures would have it: thicker, colder and a worse conductor.
func spread(p model.Product) model.Product {
	food := p.Food
	worse := *food
	worse.Props = func(c float64) model.Properties {
		q := food.Props(c)
		q.KWmK *= 0.95
		return q
	}
	p.Food, p.StartC = &worse, p.StartC-2
	p.Size.ThicknessM *= 1.05
	return p
}

// wetDough is the highest temperature anywhere in a wet solid in a hot oven whose relative humidity, %, is given at the start and at the end;
// nil: dry air.
func wetDough(rh []float64) (float64, error) {
	e := still(205, true)
	e.Medium = model.Course{TimesS: []float64{0, 1500}, C: []float64{180, 205}, RH: rh}
	h, err := Problem{"dough", pieceOf("Beef, top round, lean, raw", model.ShortCylinder, model.Size{DiameterM: 0.116, LengthM: 0.0475}, 30), []model.Step{step("bake", 1500, e)}}.history()
	if err != nil {
		return 0, err
	}
	top := math.Inf(-1)
	for _, c := range h.Sample(30).Hottest {
		top = max(top, c)
	}
	return top, nil
}
