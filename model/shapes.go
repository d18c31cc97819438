package model

// Shape is an idealised form of a product.
type Shape struct {
	Name, Help string
	Needs      []string // the size columns that it uses: Thickness, Width, Length, Diameter, Volume, Surface area
	Faces      []*Face  // the faces that may differ; none: one surface
	Refused    string   // why the method at hand cannot do it; "" if it can
}

// The shapes.
var (
	Slab          = &Shape{Name: "slab", Needs: []string{"Thickness"}, Faces: []*Face{Top, Underside}, Help: "wide and flat: trays, fillets; heat crosses the thickness"}
	Cylinder      = &Shape{Name: "cylinder", Needs: []string{"Diameter"}, Help: "long and round: sausages, rolled joints; heat crosses the radius"}
	Sphere        = &Shape{Name: "sphere", Needs: []string{"Diameter"}, Help: "dumplings, round pieces"}
	ShortCylinder = &Shape{Name: "short cylinder", Needs: []string{"Diameter", "Length"}, Faces: []*Face{Top, Underside, Sides}, Help: "tins, pots, pies: heat crosses the ends and the curved face"}
	Bar           = &Shape{Name: "bar", Needs: []string{"Thickness", "Width"}, Faces: []*Face{Top, Underside, Sides}, Help: "long and rectangular: heat crosses thickness and width"}
	Brick         = &Shape{Name: "brick", Needs: []string{"Thickness", "Width", "Length"}, Faces: []*Face{Top, Underside, Sides, Ends}, Help: "joints, blocks, portions: heat crosses all six faces"}
	Spheroid      = &Shape{Name: "spheroid", Needs: []string{"Thickness", "Diameter"}, Help: "eggs, potatoes, whole joints: thickness along its axis, diameter across it"}
	LayeredSlab   = &Shape{Name: "layered slab", Faces: []*Face{Top, Underside}, Help: "layers of different foods, wide and flat: each is a row of the sheet Layers"}
	Stirred       = &Shape{Name: "stirred", Needs: []string{"Volume", "Surface area"}, Help: "well mixed throughout: soups and sauces that are stirred all the time"}

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

// Surface is a kind of surroundings: the word of the column Surroundings.
type Surface struct {
	Name, Help string
	Needs      []string // columns that must be filled, besides Temperature or Course
	May        []string // columns that may be filled
	NoMedium   bool     // it has no temperature
	Published  string   // published film coefficients with their source, the low end first, in words
	film       func(*filmCase) (w float64, source string)
	law        func(surfaceC, tauS float64) (w, slope float64) // heat into the food in W/m² and its slope; for tests: it stands for everything
}

// The surroundings.
var (
	Film = &Surface{Name: "film", Needs: []string{"Film coefficient"}, May: []string{"Air speed", "Relative humidity", "Wrap resistance"},
		Help: "a film coefficient typed by you: it stands for everything that happens at the surface"}
	StillAir = &Surface{Name: "still air", May: []string{"Film coefficient", "Relative humidity", "Radiating temperature", "Emissivity", "Surface", "Wrap resistance"}, film: stillAir,
		Help: "air moved only by its own warmth; the film follows the surface (a typed one stands for convection alone), radiation counts with Radiating temperature, evaporation with Surface wet"}
	MovingAir = &Surface{Name: "moving air", Needs: []string{"Air speed"}, May: []string{"Film coefficient", "Relative humidity", "Radiating temperature", "Emissivity", "Surface", "Wrap resistance"}, film: movingAir,
		Help: "air blown over the food; as still air, and never less than it"}
	WaterBath = &Surface{Name: "water bath", May: []string{"Film coefficient", "Wrap resistance"},
		film: stated(waterBathW, "stated low: a vacuum-packed roast cooled more slowly in water than in air of 2 m/s (James & James 2002, Meat Refrigeration, table 16.7), at 21 to 31 W/m²K by how its shape and start are read; textbooks give 50 to 100 for liquids left still"),
		Help: "water left still; a low film is taken unless you type one"}
	StirredWater = &Surface{Name: "stirred water", May: []string{"Film coefficient", "Wrap resistance"},
		film: stated(waterBathW, "stated low, as in a water bath: measured joints in water cooled as slowly as with 21 to 31 W/m²K (James & James 2002, Meat Refrigeration, table 16.7), and whether that water was stirred is not published; 95 to 155 for a pouch in stirred water (Baldwin 2012, Int. J. Gastronomy and Food Science 1:15-30; from memory) has to be typed"),
		Help: "water kept moving; the low film of a water bath is taken unless you type one (95 to 155 W/m²K for a pouch, Baldwin 2012, from memory)"}
	BoilingWater = &Surface{Name: "boiling water", May: []string{"Film coefficient", "Wrap resistance"},
		film: stated(1000, "capped at 1000 W/m²K, below the textbook range of 2500 to 100000 (Çengel, Heat Transfer, typical values): food conducts so badly that more makes no difference"),
		Help: "water at the boil"}
	Steam = &Surface{Name: "steam", May: []string{"Film coefficient", "Relative humidity", "Wrap resistance"},
		film: stated(steamW, "capped at 1000 W/m²K, below the textbook range of 2500 to 100000 for pure condensing steam (Çengel, Heat Transfer, typical values); air in the steam lowers it strongly, which is calculated from a few degrees below boiling on, and with a relative humidity"),
		Help: "condensing steam, air vented; colder than boiling, or with a relative humidity below 100 %, steam with air in it, which condenses up to its dew point"}
	ContactPlate = &Surface{Name: "contact plate", Needs: []string{"Wrap resistance"},
		Help: "a plate pressed on; its contact goes into Wrap resistance"}
	Held      = &Surface{Name: "held", Help: "the surface itself is kept at the temperature"}
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
