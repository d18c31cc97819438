package model

import "math"

// Shape is an idealised form of a product. Everything that depends on a shape follows from this value: nothing else asks which shape it is.
type Shape struct {
	Name, Help string
	Needs      []string // the size columns that it uses: Thickness, Width, Length, Diameter, Volume, Surface area
	Ways       []Way    // on which heat crosses it, in the order of Up, Across and Along; none: it has one temperature
	Refused    string   // why the method at hand cannot do it; "" if it can
	Like       *Shape   // the shape whose cases with a known answer hold for this one too; nil: its own
	build      build
}

// build says what is within the faces of a shape.
type build int

const (
	simple   build = iota // one food, and every way ends at faces of its own
	oval                  // one food within an ellipse that is turned about the first way: it has one surface, and spheroidMap stands for the ways
	ofLayers              // layers of the sheet Layers along the first way
	mixed                 // one temperature throughout
)

// The shapes.
var (
	Slab          = &Shape{Name: "slab", Needs: []string{"Thickness"}, Ways: []Way{upright("Thickness")}, Help: "wide and flat: trays, fillets; heat crosses the thickness"}
	Cylinder      = &Shape{Name: "cylinder", Needs: []string{"Diameter"}, Ways: []Way{{kind: radial, Size: "Diameter"}}, Help: "long and round: sausages, rolled joints; heat crosses the radius"}
	Sphere        = &Shape{Name: "sphere", Needs: []string{"Diameter"}, Ways: []Way{{kind: spherical, Size: "Diameter"}}, Help: "dumplings, round pieces"}
	ShortCylinder = &Shape{Name: "short cylinder", Needs: []string{"Diameter", "Length"}, Ways: []Way{upright("Length"), {radial, "Diameter", Sides, Sides}},
		Help: "tins, pots, pies: heat crosses the ends and the curved face"}
	Bar = &Shape{Name: "bar", Needs: []string{"Thickness", "Width"}, Ways: []Way{upright("Thickness"), {planeHalf, "Width", Sides, Sides}}, Like: Brick,
		Help: "long and rectangular: heat crosses thickness and width"}
	Brick = &Shape{Name: "brick", Needs: []string{"Thickness", "Width", "Length"}, Ways: []Way{upright("Thickness"), {planeHalf, "Width", Sides, Sides}, {planeHalf, "Length", Ends, Ends}},
		Help: "joints, blocks, portions: heat crosses all six faces"}
	Spheroid = &Shape{Name: "spheroid", Needs: []string{"Thickness", "Diameter"}, Ways: []Way{{kind: planeHalf, Size: "Thickness"}, {kind: radial, Size: "Diameter"}}, build: oval,
		Help: "eggs, potatoes, whole joints: thickness along its axis, diameter across it"}
	LayeredSlab = &Shape{Name: "layered slab", Ways: []Way{upright("Thickness")}, build: ofLayers, Help: "layers of different foods, wide and flat: each is a row of the sheet Layers"}
	Stirred     = &Shape{Name: "stirred", Needs: []string{"Volume", "Surface area"}, build: mixed, Help: "well mixed throughout: soups and sauces that are stirred all the time"}

	Shapes = []*Shape{Slab, Cylinder, Sphere, ShortCylinder, Bar, Brick, Spheroid, LayeredSlab, Stirred}
)

// IrregularPieces is the guide to the shape that stands for a piece that has none of them. What it says of spheres and cylinders is held by a test
// against spheroids of 1:1 to 1:3; that a shape which contains another stays behind it follows from the comparison principle.
const IrregularPieces = "A piece that is none of these shapes: take the thickest section that fits into it, and the fewest faces through which heat passes; what is left out " +
	"then makes the prediction slow, which is the safe side for heating and for chilling. " +
	"Slow: a slab of its smallest thickness at the thickest place, or a long cylinder of its smaller diameter (a spheroid of the same diameter is ahead of it). " +
	"Near: a spheroid with its length as thickness and its smaller diameter, for eggs, potatoes and boned joints; a brick or short cylinder that the piece fits into. " +
	"Fast, on the unsafe side: a sphere of its smaller diameter, or any shape that fits into the piece. " +
	"Of pieces that differ take the largest in the load. A bone, a tin or a liquid core is a food of its own: a layer, not a correction."

// Surface is a kind of surroundings: the word of the column Surroundings. Everything that depends on it follows from this value: nothing else
// asks which one it is.
type Surface struct {
	Name, Help string
	Needs      []string // columns that must be filled, besides Temperature or Course
	May        []string // columns that may be filled
	NoMedium   bool     // it has no temperature
	Published  string   // published film coefficients with their source, the low end first, in words
	meets      meets
	film       func(*filmCase) (w float64, source string)
	law        func(surfaceC, tauS float64) (w, slope float64) // heat into the food in W/m² and its slope; for tests: it stands for everything
}

// meets says what the food meets.
type meets int

const (
	_           meets = iota
	filmTyped         // something whose typed coefficient stands for everything that happens at the surface
	airStill          // air, whose film, radiation and moisture can be worked out
	airBlown          // air at a speed
	openWater         // water no hotter than it boils, whose film is stated low
	waterAtBoil       // water no colder than nearly that either
	vapour            // condensing vapour, pure or with air in it
	fixed             // the temperature itself, apart from what lies between
)

// Air tells whether it is air, whose film, radiation and moisture can be worked out.
func (s *Surface) Air() bool { return s != nil && (s.meets == airStill || s.meets == airBlown) }

// Water tells whether it is water that need not boil; its film is stated low.
func (s *Surface) Water() bool { return s != nil && s.meets == openWater }

// Fixed tells whether the surface is at the temperature, apart from what lies between.
func (s *Surface) Fixed() bool { return s != nil && s.meets == fixed }

// Insulates tells whether no heat passes.
func (s *Surface) Insulates() bool { return s != nil && s.NoMedium }

// FilmTyped tells whether a typed coefficient stands for everything that happens at the surface.
func (s *Surface) FilmTyped() bool { return s != nil && s.meets == filmTyped }

// The surroundings.
var (
	Film = &Surface{Name: "film", meets: filmTyped, Needs: []string{"Film coefficient"}, May: []string{"Air speed", "Relative humidity", "Wrap resistance"},
		Help: "a film coefficient typed by you: it stands for everything that happens at the surface"}
	StillAir = &Surface{Name: "still air", meets: airStill, May: []string{"Film coefficient", "Relative humidity", "Radiating temperature", "Emissivity", "Surface", "Wrap resistance"}, film: stillAir,
		Help: "air moved only by its own warmth; the film follows the surface (a typed one stands for convection alone), radiation counts with Radiating temperature, evaporation with Surface wet"}
	MovingAir = &Surface{Name: "moving air", meets: airBlown, Needs: []string{"Air speed"}, May: []string{"Film coefficient", "Relative humidity", "Radiating temperature", "Emissivity", "Surface", "Wrap resistance"}, film: movingAir,
		Help: "air blown over the food; as still air, and never less than it"}
	WaterBath = &Surface{Name: "water bath", meets: openWater, May: []string{"Film coefficient", "Wrap resistance"},
		film: inWater("stated low: a vacuum-packed roast cooled more slowly in water than in air of 2 m/s (James & James 2002, Meat Refrigeration, table 16.7), at 21 to 31 W/m²K by how its shape and start are read; textbooks give 50 to 100 for liquids left still"),
		Help: "water left still; a low film is taken unless you type one"}
	StirredWater = &Surface{Name: "stirred water", meets: openWater, May: []string{"Film coefficient", "Wrap resistance"},
		film: inWater("stated low, as in a water bath: measured joints in water cooled as slowly as with 21 to 31 W/m²K (James & James 2002, Meat Refrigeration, table 16.7), and whether that water was stirred is not published; 95 to 155 for a pouch in stirred water (Baldwin 2012, Int. J. Gastronomy and Food Science 1:15-30; from memory) has to be typed"),
		Help: "water kept moving; the low film of a water bath is taken unless you type one (95 to 155 W/m²K for a pouch, Baldwin 2012, from memory)"}
	BoilingWater = &Surface{Name: "boiling water", meets: waterAtBoil, May: []string{"Film coefficient", "Wrap resistance"},
		film: stated(1000, "capped at 1000 W/m²K, below the textbook range of 2500 to 100000 (Çengel, Heat Transfer, typical values): food conducts so badly that more makes no difference"),
		Help: "water at the boil"}
	Steam = &Surface{Name: "steam", meets: vapour, May: []string{"Film coefficient", "Relative humidity", "Wrap resistance"},
		film: stated(steamW, "capped at 1000 W/m²K, below the textbook range of 2500 to 100000 for pure condensing steam (Çengel, Heat Transfer, typical values); air in the steam lowers it strongly, which is calculated from a few degrees below boiling on, and with a relative humidity"),
		Help: "condensing steam, air vented; colder than boiling it has air in it and needs its Relative humidity; such steam condenses up to its dew point"}
	ContactPlate = &Surface{Name: "contact plate", meets: fixed, Needs: []string{"Wrap resistance"}, film: stated(math.Inf(1), "contact resistance typed by the user"),
		Help: "a plate pressed on; its contact goes into Wrap resistance"}
	Held      = &Surface{Name: "held", meets: fixed, film: stated(math.Inf(1), "the surface is kept at the temperature"), Help: "the surface itself is kept at the temperature"}
	Insulated = &Surface{Name: "insulated", NoMedium: true, Help: "no heat passes"}

	Surfaces = []*Surface{Film, StillAir, MovingAir, WaterBath, StirredWater, BoilingWater, Steam, ContactPlate, Held, Insulated}
)

// steamW is the film of condensing steam, W/(m²·K).
const steamW = 1000

// waterBathW is the film taken in water, still or stirred, W/(m²·K): just below the lowest that the measured cases can be read to give. What
// their water did is not published; with the 95 of a pouch in stirred water a joint that took 6.9 h came out at 5.3 h.
const waterBathW = 20

// Refusal is a process or food that conduction does not describe: what a person may type, why it is refused, what to do instead.
type Refusal struct{ Words, Why, Instead string }

// Refusals lists what the reader must refuse by name, in Surroundings, Stage and Equipment and in the names of steps and processes.
var Refusals = []Refusal{
	{"vacuum", "vacuum cooling boils water out of the whole food; conduction does not describe it", "judge a probe record of the batch instead"},
	{"microwave, radio frequency, ohmic", "the heat arises inside the food, very unevenly", "measure the coldest place with probes; only the standing time after a measured start may be predicted"},
	{"retort, canning, autoclave", "commercial sterility needs a process authority and is outside this program", "ask a recognised process authority"},
	{"fryer, frying, deep fat", "a moving crust with boiling water in it", "use probe records"},
	{"baking, dough", "vapour moves in the pores and the food changes shape", "use probe records"},
}
