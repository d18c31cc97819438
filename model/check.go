package model

import (
	"fmt"
	"math"
	"slices"

	"slowpoint/model/cell"
)

// unfrozenC is how cold a food without a known freezing point may be predicted, °C.
const unfrozenC = -0.5

// warmerK is how much warmer than the medium before it air must be to count as heating, K.
const warmerK = 5

// Check tells everything that keeps a product from being calculated by the method at hand: rows in At, column headings in Field.
// Nothing is calculated.
func Check(p Product, steps []Step) cell.Errors {
	c := checker{product: &p}
	c.shape()
	c.food()
	c.points()
	if len(steps) == 0 {
		c.add(p.At, "Process", "", "has no steps", "add its steps to the sheet Steps")
	}
	before := p.StartC
	for i := range steps {
		st := &steps[i]
		c.step(st)
		low, high := math.Inf(1), math.Inf(-1)
		for _, e := range exposures(p.Shape, st) {
			c.exposure(st, e, before)
			for _, m := range e.Medium.C {
				low, high = math.Min(low, m), math.Max(high, m)
			}
		}
		if !math.IsInf(high, 0) {
			before = high
		}
	}
	return c.found
}

// exposures gives the different surroundings of a step that the shape has a face for.
func exposures(s *Shape, st *Step) []*Exposure {
	left := false // a face that keeps the step's own surroundings
	faces := s.Faces()
	out := make([]*Exposure, 1, 1+len(faces))
	out[0] = &st.Exposure
	for _, f := range faces {
		if e := st.on(f); e == &st.Exposure {
			left = true
		} else {
			out = append(out, e)
		}
	}
	if left || len(faces) == 0 {
		return out
	}
	return out[1:]
}

// on gives the surroundings of a face.
func (st *Step) on(f *Face) *Exposure {
	for i := range st.Faces {
		if st.Faces[i].Face == f {
			return &st.Faces[i].Exposure
		}
	}
	return &st.Exposure
}

// roundingM is how far outside the food a point may seem to lie, m: sizes and points are typed with few digits.
const roundingM = 1e-6

type checker struct {
	product *Product
	found   cell.Errors
}

func (c *checker) add(at cell.Ref, field, typed, msg, hint string) {
	c.found.Add(cell.Error{At: at, Field: field, Typed: typed, Msg: msg, Hint: hint})
}

func (c *checker) shape() {
	p := c.product
	if p.Shape.Refused != "" {
		c.add(p.At, "Shape", p.Shape.Name, p.Shape.Refused,
			"use the nearest shape on the slow side: the thickest part as a slab or cylinder, with the fewest cooled faces")
	}
	whole := true
	for _, need := range p.Shape.Needs {
		if v := *p.Size.Of(need); !(v > 0) || math.IsInf(v, 0) {
			c.add(p.At, need, "", fmt.Sprintf("a %s needs %s, a number above 0", p.Shape.Name, need), "")
			whole = false
		}
	}
	if whole && p.Shape.Oval() {
		c.spheroid()
	}
}

// mostSpheroid is how many times as long as wide, or as wide as thick, a spheroid may be: beyond that marches of it take minutes, and
// polynomials on its map are tenths of a degree off.
const mostSpheroid = 10

// spheroid refuses one that is nearly a cylinder or a slab. Both contain it, so that they are behind it.
func (c *checker) spheroid() {
	p := c.product
	along, across := p.Size.ThicknessM, p.Size.DiameterM
	const msg = "the spheroid is %.3g times as %s, and one of more than %d times cannot be calculated"
	switch {
	case along > mostSpheroid*across:
		c.add(p.At, "Thickness", fmt.Sprintf("%.5g mm", 1000*along), fmt.Sprintf(msg, along/across, "long as its diameter", mostSpheroid), "take a cylinder of its diameter, which is slower")
	case across > mostSpheroid*along:
		c.add(p.At, "Diameter", fmt.Sprintf("%.5g mm", 1000*across), fmt.Sprintf(msg, across/along, "wide as it is thick", mostSpheroid), "take a slab of its thickness, which is slower")
	}
}

// food looks at the food of the product, or at those of its layers.
func (c *checker) food() {
	p := c.product
	switch {
	case p.Shape.Layered():
		c.layers()
	case p.Food == nil && p.Shape.Refused == "":
		c.add(p.At, "Food", "", "no food is given", "type the name of a built-in food or of a row of Foods")
	case p.Food != nil:
		c.foodAt(p.Food, p.At)
	}
}

// layers looks at the layers of a layered slab.
func (c *checker) layers() {
	p := c.product
	if len(p.Layers) == 0 {
		c.add(p.At, "Shape", p.Shape.Name, "has no layers", "add a row of the sheet Layers for each")
	}
	told := map[*Material]bool{}
	for i := range p.Layers {
		y := &p.Layers[i]
		if !(y.ThicknessM > 0) || math.IsInf(y.ThicknessM, 0) {
			c.add(y.At, "Thickness", "", "a layer needs a thickness, a number above 0", "")
		}
		switch last := i == len(p.Layers)-1; {
		case !(y.BelowM2KW >= 0) || math.IsInf(y.BelowM2KW, 0):
			c.add(y.At, "Contact resistance below", fmt.Sprintf("%g m²K/W", y.BelowM2KW), "a contact resistance is 0, for layers that touch perfectly, or more", "")
		case last && y.BelowM2KW > 0:
			c.add(y.At, "Contact resistance below", fmt.Sprintf("%g m²K/W", y.BelowM2KW), "there is no layer below the last one", "leave it blank; what lies between the food and its surroundings goes into Wrap resistance of the sheet Faces")
		}
		switch {
		case y.Food == nil:
			c.add(y.At, "Food", "", "no food is given", "type the name of a built-in food or of a row of Foods")
		case !told[y.Food]:
			told[y.Food] = true
			c.foodAt(y.Food, y.At)
		}
	}
}

// foodAt looks at a food that the row at names.
func (c *checker) foodAt(f *Material, row cell.Ref) {
	p := c.product
	c.activity(f)
	at, field := f.At, "Flows"
	if at.IsZero() { // a built-in food has no row of its own
		at, field = row, "Food"
	}
	typed := func(flow *Flow) string {
		if field == "Food" {
			return f.Name
		}
		return flow.Name
	}
	says, instead := "", "use the shape stirred if it is stirred all the time, or judge a probe record"
	if f.Flow == FlowsYes && !p.Shape.Layered() {
		where := "here"
		if field == "Food" {
			where = "in the column Flows of a row \"" + f.Name + "\" of the sheet Foods (with a Source and nothing else)"
		}
		instead = "use the shape stirred if it is stirred all the time; type thick " + where +
			" if it hardly flows, as a mash or a thick sauce: it is then run as conducting and as well mixed, and the worse finding counts; or judge a probe record"
	}
	if field == "Flows" { // what was typed stands in front, and a food's own name with a built-in one
		says = "says that " + f.Name + " "
	}
	if f.SetForm != "" {
		instead = "once it is set, the built-in food is " + f.SetForm + "; else " + instead
	}
	if p.Shape.Mixed() {
		c.mixes()
		return
	}
	switch {
	case f.Flow == FlowsYes:
		c.add(at, field, typed(f.Flow), says+"mixes by itself when left still; conduction does not describe that", instead)
	case f.Flow == FlowsThick && p.Shape.Layered(): // of other shapes a second run takes it as well mixed
		c.add(at, field, typed(f.Flow), says+"may mix by itself while it is hot; conduction alone does not describe that, and a layer cannot be taken as well mixed", instead)
	}
	if f.freezes() || f.Waterless {
		return
	}
	if f.FreezingC != nil && p.StartC < *f.FreezingC || f.FreezingC == nil && p.StartC < unfrozenC {
		c.add(p.At, "Start temperature", fmt.Sprintf("%g °C", p.StartC), "the food starts frozen, and "+f.noIce(), f.iceNeeds())
	}
}

// mixes warns of a solid food that is taken as stirred: one temperature for a food that heat has to cross is too fast, on the unsafe side,
// but for pieces so small that their Biot number is below about 0.1 (textbooks of heat transfer, such as Çengel; from memory).
func (c *checker) mixes() {
	p := c.product
	if p.Food.Flow != FlowsNo {
		return
	}
	known := "by the answer no in the column Flows"
	if p.Food.At.IsZero() {
		known = "as a built-in food"
	}
	c.found.Add(cell.Error{At: p.At, Level: cell.Warning, Field: "Shape", Typed: p.Shape.Name,
		Msg:  fmt.Sprintf("gives all of the food one temperature, but %s is solid or set (%s): the inside of a piece lags behind what is shown, in heating and in chilling", p.Food.Name, known),
		Hint: "choose the shape of the piece, with its sizes; if it is thin enough to be stirred all the time, say so by thick or yes in the column Flows of a row of Foods"})
}

func (c *checker) points() {
	p := c.product
	if p.Shape.Refused != "" {
		return
	}
	half := reach(p)
	for _, pt := range p.Points {
		got := [3]float64{math.Abs(pt.UpM), math.Abs(pt.AcrossM), math.Abs(pt.AlongM)}
		for i, name := range []string{"Up", "Across", "Along"} {
			if got[i] > half[i]+roundingM {
				c.add(pt.At, name, fmt.Sprintf("%g mm", 1000*got[i]), fmt.Sprintf("the point %s lies outside the food, which reaches %g mm from its centre in this direction", pt.Name, 1000*half[i]), "measure from the geometric centre")
			}
		}
		if p.Shape.Oval() && got[0] <= half[0]+roundingM && got[1] <= half[1]+roundingM && math.Hypot(got[0]/half[0], got[1]/half[1]) > 1+roundingM/min(half[0], half[1]) {
			c.add(pt.At, "Across", fmt.Sprintf("%g mm", 1000*got[1]), fmt.Sprintf("the point %s lies outside the food: %g mm up, the spheroid reaches %.1f mm across", pt.Name, 1000*got[0], 1000*half[1]*math.Sqrt(max(0, 1-math.Pow(got[0]/half[0], 2)))), "measure from the geometric centre")
		}
	}
}

func (c *checker) step(st *Step) {
	if st.Stage == Freeze || st.Stage == Thaw {
		low := c.product.StartC
		for _, e := range exposures(c.product.Shape, st) {
			for _, m := range e.Medium.C {
				low = math.Min(low, m)
			}
		}
		foods := c.product.Foods()
		any := slices.ContainsFunc(foods, (*Material).freezes)
		for _, f := range foods {
			if !f.freezes() && !f.Waterless && !(any && f.FreezingC != nil && *f.FreezingC < low) { // a tin or a pack around it has none within reach
				c.add(st.At, "Stage", st.Stage.Name, f.noIce(), f.iceNeeds())
				break
			}
		}
	}
	if !(st.DurationS > 0) || math.IsInf(st.DurationS, 0) {
		c.add(st.At, "Duration", "", "the step needs a duration above 0", "")
	}
	for _, f := range st.Faces {
		known := false
		for _, g := range c.product.Shape.Faces() {
			known = known || g == f.Face
		}
		if !known {
			c.add(f.At, "Face", f.Face.Name, fmt.Sprintf("a %s has no face of that name", c.product.Shape.Name), "")
		}
	}
}

func (c *checker) exposure(st *Step, e *Exposure, before float64) {
	c.radiation(e)
	c.moisture(e)
	if e.Cover == LooseLid && e.WrapM2KW == nil {
		c.add(e.At, "Wrap resistance", "", "a loose lid needs the resistance of its air gap", "about 0.04 m²K/W a millimetre of air")
	}
	for _, need := range e.Surface.Needs {
		if need == "Film coefficient" && e.FilmW == nil || need == "Air speed" && e.AirMS == nil && e.FilmW == nil || need == "Wrap resistance" && e.WrapM2KW == nil {
			c.add(e.At, need, "", fmt.Sprintf("%s is missing: %s needs it", need, e.Surface.Name), e.Surface.Published)
		}
	}
	m := &e.Medium
	if e.Surface.NoMedium {
		return
	}
	if len(m.C) == 0 {
		c.add(e.At, "Temperature", "", fmt.Sprintf("%s needs a temperature or a course", e.Surface.Name), "")
		return
	}
	if n := len(m.TimesS); n > 1 && m.TimesS[n-1] < st.DurationS*(1-1e-12) {
		c.add(e.At, "Course", m.Name, fmt.Sprintf("the course ends after %g min, before its step (%g min) does", m.TimesS[n-1]/60, st.DurationS/60), "add rows to the course or shorten the step")
	}
	low, high := m.C[0], m.C[0]
	for _, x := range m.C {
		low, high = math.Min(low, x), math.Max(high, x)
	}
	field := "Temperature"
	if m.Name != "" {
		field = "Course"
	}
	c.air(st, e, high, before)
	c.water(st, e, field, low, high)
	c.vapour(st, e)
	c.cold(st, e, field, low)
	if r := e.RadiatingC; r != nil && e.inAir() && *r < low {
		c.cold(st, e, "Radiating temperature", *r)
	}
	if st.DurationS > 0 {
		c.chilled(st, e)
	}
}

// boilsWithinK is by how much a thermometer in boiling water or steam may be off, K.
const boilsWithinK = 0.5

// water looks for water and steam at temperatures that they do not have in the open.
func (c *checker) water(st *Step, e *Exposure, field string, low, high float64) {
	steam, boils := e.Surface.meets == vapour, e.Surface.meets == waterAtBoil
	if !steam && !boils && !e.Surface.Water() {
		return
	}
	b := boilingC(st.AltitudeM)
	typed := func(x float64) string { return fmt.Sprintf("%g °C", x) }
	if high > b+boilsWithinK {
		hint := "type the temperature of the water at your altitude (Plan item Altitude)"
		if steam {
			hint = "steam under pressure is outside this program; if the air in an oven is meant, use moving air with its relative humidity"
		}
		c.add(e.At, field, typed(high), fmt.Sprintf("water boils at %.1f °C at %g m above the sea", b, st.AltitudeM), hint)
	}
	switch {
	case boils && low < b-boilingLeastK:
		c.add(e.At, field, typed(low), fmt.Sprintf("boiling water is at %.1f °C at %g m above the sea", b, st.AltitudeM), "use water bath or stirred water for water that does not boil")
	case steam && low < steamLeastC:
		c.add(e.At, field, typed(low), fmt.Sprintf("steam heats; nothing below %g °C is taken as steam", float64(steamLeastC)), "use moving air or still air for air, water bath or stirred water for water")
	}
}

// How far below the boiling point water at the boil may be typed, K, and how cold steam, °C: rounded figures and salted water, and steam
// with much air in it (our own judgement).
const (
	boilingLeastK = 10
	steamLeastC   = 50
)

// vapour looks for air that holds more vapour than the pressure around it allows.
func (c *checker) vapour(st *Step, e *Exposure) {
	if !e.inAir() && e.Surface.meets != vapour {
		return
	}
	if e.RH == nil && e.Medium.RH == nil && e.steamWithAir(st) && slices.Min(e.Medium.C) >= steamLeastC {
		c.add(e.At, "Relative humidity", "", fmt.Sprintf("Relative humidity is missing: steam of %g °C is colder than boiling (%.1f °C at %g m above the sea), so there is air in it, and how much decides how fast it heats", slices.Min(e.Medium.C), boilingC(st.AltitudeM), st.AltitudeM),
			"type the relative humidity in the cabinet, the lowest that it keeps; 100 only where it is known to be saturated")
	}
	total := pressurePa(st.AltitudeM)
	tell := func(field, typed string, tC, rh float64) bool {
		most := 100 * total / satPa(tC)
		if rh <= most*1.03 {
			return false
		}
		c.add(e.At, field, typed, fmt.Sprintf("at %g °C air can have at most %.3g %% relative humidity, when all of it is steam; %g %% would be vapour of %.2g bar", tC, most, rh, rh/100*satPa(tC)/1e5),
			"what an oven shows as humidity is mostly a share of steam, not a relative humidity: measure with a wet-bulb thermometer, or leave it blank, and the slow side is taken")
		return true
	}
	if e.RH != nil && e.Medium.RH == nil {
		for _, x := range e.Medium.C {
			if tell("Relative humidity", fmt.Sprintf("%g %%", *e.RH), x, *e.RH) {
				return
			}
		}
	}
	for i, rh := range e.Medium.RH {
		if i < len(e.Medium.C) && tell("Course", e.Medium.Name, e.Medium.C[i], rh) {
			return
		}
	}
}

// hottestWallsC is how hot what the food sees may be, °C: heating elements and flames are hotter, but a food does not see them alone.
const hottestWallsC = 400

// radiation looks at Radiating temperature and Emissivity.
func (c *checker) radiation(e *Exposure) {
	if e.RadiatingC == nil && e.Emissivity == nil {
		return
	}
	field, typed := "Emissivity", ""
	if e.Emissivity != nil {
		typed = fmt.Sprintf("%g", *e.Emissivity)
	}
	if e.RadiatingC != nil && !e.inAir() {
		field, typed = "Radiating temperature", fmt.Sprintf("%g °C", *e.RadiatingC)
	}
	switch {
	case e.Surface.FilmTyped():
		c.add(e.At, field, typed, "with the surroundings film the coefficient stands for everything that happens at the surface, radiation too",
			"use still air or moving air; the column Film coefficient is then for convection alone, and radiation is added")
	case !e.inAir():
		c.add(e.At, field, typed, fmt.Sprintf("radiation counts in still air and moving air only, not in %s", e.Surface.Name), "leave it out")
	case e.Emissivity != nil && !(*e.Emissivity > 0 && *e.Emissivity <= 1):
		c.add(e.At, field, typed, "an emissivity is more than 0 and at most 1", fmt.Sprintf("food has 0.9 to 0.95; left blank, %g is taken", usualEmissivity))
	case e.RadiatingC == nil:
		c.add(e.At, field, typed, "an emissivity needs the temperature of what the food sees", "type the temperature of the walls or elements into Radiating temperature, or leave both out")
	case !(*e.RadiatingC > -273.15) || math.IsInf(*e.RadiatingC, 0):
		c.add(e.At, "Radiating temperature", fmt.Sprintf("%g °C", *e.RadiatingC), "is no temperature above absolute zero", "")
	case *e.RadiatingC > hottestWallsC || *e.RadiatingC < coldestC:
		c.add(e.At, "Radiating temperature", fmt.Sprintf("%g °C", *e.RadiatingC), fmt.Sprintf("the walls that a food sees lie between %d and %d °C", coldestC, hottestWallsC),
			"type the mean temperature of the walls; an element that fills a part of the view counts by that part")
	}
}

// moisture looks at Relative humidity and Surface.
func (c *checker) moisture(e *Exposure) {
	share := func(rh float64) bool { return rh >= 0 && rh <= 100 }
	if e.RH != nil && !share(*e.RH) {
		c.add(e.At, "Relative humidity", fmt.Sprintf("%g %%", *e.RH), "a relative humidity lies between 0 and 100 %", "")
	}
	for _, rh := range e.Medium.RH {
		if !share(rh) {
			c.add(e.At, "Course", e.Medium.Name, fmt.Sprintf("the course has a relative humidity of %g %%; it lies between 0 and 100 %%", rh), "")
			break
		}
	}
	if e.RH != nil && *e.RH > 0 && *e.RH < 1 {
		c.found.Add(cell.Error{At: e.At, Level: cell.Warning, Field: "Relative humidity", Typed: fmt.Sprintf("%g %%", *e.RH),
			Msg: fmt.Sprintf("is less than one per cent; if a share is meant it is %g %%", 100**e.RH), Hint: "type per cent"})
	}
	if e.Surface.meets == vapour && e.FilmW != nil && (e.RH != nil || e.Medium.RH != nil) {
		c.add(e.At, "Film coefficient", fmt.Sprintf("%g W/m²·K", *e.FilmW), "steam with a relative humidity has a film of its own, by the air in it, and a typed film stands for everything", "leave out one of the two")
	}
	if !e.wet() {
		return
	}
	switch {
	case e.Surface.FilmTyped():
		c.add(e.At, "Surface", "wet", "with the surroundings film the coefficient stands for everything that happens at the surface, evaporation too",
			"use still air or moving air; the column Film coefficient is then for convection alone, and evaporation is calculated")
	case !e.inAir():
		c.add(e.At, "Surface", "wet", fmt.Sprintf("evaporation counts in still air and moving air only, not in %s", e.Surface.Name), "leave it blank")
	case e.Cover == TightWrap || e.Cover == LooseLid:
		c.add(e.At, "Surface", "wet", fmt.Sprintf("under a %s vapour does not get away, so nothing evaporates", e.Cover.Name), "type dry: wrapped and lidded food counts as dry; wet is for food that lies open")
	case e.WrapM2KW != nil:
		c.add(e.At, "Surface", "wet", "beneath a wrap or lid, whose resistance is given, vapour does not get away, so nothing evaporates", "type dry, or leave out Wrap resistance: wet is for food that lies open")
	}
}

// activity looks at the water activity of a food.
func (c *checker) activity(f *Material) {
	if a := f.WaterActivity; a != nil && !(*a > 0 && *a <= 1) {
		at := f.At
		if at.IsZero() {
			at = c.product.At
		}
		c.add(at, "Water activity", fmt.Sprintf("%g", *a), "a water activity is more than 0 and at most 1", "moist food has 0.95 to 1; leave it blank if it was not measured")
	}
}

// chilled refuses a wet surface that evaporation alone could freeze, where freezing cannot be calculated.
func (c *checker) chilled(st *Step, e *Exposure) {
	if !e.wet() || !e.inAir() {
		return
	}
	for _, f := range c.product.Foods() {
		if f.EnthalpyJkg != nil {
			continue
		}
		limit := unfrozenC
		if f.FreezingC != nil {
			limit = *f.FreezingC
		}
		s := newSkin(e, &filmCase{shape: c.product.Shape, size: c.product.Size}, f.WaterActivity, st)
		for i, t := range append([]float64{0}, e.Medium.TimesS...) {
			if i > 1 && t > st.DurationS {
				break
			}
			a := s.around(t)
			wet := moistAir{a.mediumC, a.vapourPa, s.totalPa}.wetBulbC(s.activity)
			if wet < limit && a.mediumC >= limit {
				c.add(e.At, "Surface", "wet", fmt.Sprintf("evaporation alone could chill the surface to the wet-bulb temperature, %.1f °C, where %s could freeze", wet, f.Name),
					"leave Surface blank, which chills more slowly, or give the composition and the freezing point of the food")
				return
			}
		}
	}
}

// air asks for dry or wet where air, or what radiates through it, heats the food or is to keep it hot, however cold it is itself.
func (c *checker) air(st *Step, e *Exposure, high, before float64) {
	if !e.inAir() {
		return
	}
	if e.RadiatingC != nil {
		high = max(high, *e.RadiatingC)
	}
	heats := st.Stage.Heats || high > before+warmerK
	if !heats {
		return
	}
	wetOrDry(&c.found, e)
}

// wetOrDry refuses air that heats the food where neither was said.
func wetOrDry(found *cell.Errors, e *Exposure) {
	if e.Wet == nil {
		found.Add(cell.Error{At: e.At, Field: "Surface", Msg: "air needs dry or wet where it heats the food or keeps it hot: a wet surface heats much more slowly, and cools much faster",
			Hint: "type wet for moist food that lies open, and dry only for food that is wrapped, lidded or truly dry"})
	}
}

// cold looks for media below the freezing point.
func (c *checker) cold(st *Step, e *Exposure, field string, low float64) {
	for _, f := range c.product.Foods() {
		n := len(c.found)
		c.coldFor(f, st, e, field, low)
		if len(c.found) > n { // of layers the first
			return
		}
	}
}

// coldFor does so for one food.
func (c *checker) coldFor(f *Material, st *Step, e *Exposure, field string, low float64) {
	if f.Waterless {
		return
	}
	typed := func() string { return fmt.Sprintf("%g °C", low) }
	if f.FreezingC == nil {
		if low < unfrozenC {
			mend := f.pointNeeds()
			if mend == "" {
				mend = "give the food's freezing point in Foods; a chill medium below it is then raised to it, which is a bound on the safe side"
			}
			c.add(e.At, field, typed(), fmt.Sprintf("the food could freeze here, and its freezing point is not known, so nothing below %g °C is calculated", unfrozenC), mend)
		}
		return
	}
	if low >= *f.FreezingC || f.freezes() || raises(st.Stage) {
		return
	}
	c.add(e.At, field, typed(), fmt.Sprintf("the food could freeze here (its freezing point is %g °C), and %s", *f.FreezingC, f.noIce()), f.iceNeeds())
}

// raises tells whether a medium below the freezing point may be raised to it: only where the food is to get colder,
// so that every temperature is then at or above the true one until the place itself freezes (comparison principle).
func raises(s *Stage) bool { return s == Cool || s == Rest || s == HoldCold || s == Store }

// freezes tells whether the food is calculated through freezing and melting.
func (m *Material) freezes() bool { return m.FreezingC != nil && m.EnthalpyJkg != nil }

// noIce says why a food is not calculated through freezing and melting.
func (m *Material) noIce() string {
	if m.FreezingC == nil {
		return fmt.Sprintf("the freezing point of %s is not known, so its freezing and melting cannot be calculated", m.Name)
	}
	if m.Composed {
		return fmt.Sprintf("the proteins of %s hold all of its water by its composition, so that no ice would form, which is not calculated", m.Name)
	}
	return fmt.Sprintf("how much ice forms in %s is not known from typed properties, so its freezing and melting cannot be calculated", m.Name)
}

// iceNeeds is what freezing and melting need.
func (m *Material) iceNeeds() string {
	if s := m.pointNeeds(); s != "" {
		return s + "; or judge a probe record of this step"
	}
	return "give the food's composition and its freezing point in a row of Foods, or judge a probe record of this step"
}

// pointNeeds says how a food that lacks its freezing point alone, for its composition is known, is given it; "" of others.
func (m *Material) pointNeeds() string {
	switch {
	case !m.Composed || m.FreezingC != nil:
		return ""
	case m.At.IsZero(): // a built-in food has no row of its own
		return "add a row \"" + m.Name + "\" to the sheet Foods with its Freezing point and a Source and nothing else: the composition stays the built-in one, and its ice is calculated"
	}
	return "give its Freezing point in its row of Foods: its ice is then calculated"
}
