package workbook

import (
	"sync"

	"slowpoint/model"
	"slowpoint/model/unit"
	"slowpoint/rules"
)

// Sheet is one sheet of a plan. Reader, blank workbook and help take sheets and columns from the list Sheets and from nowhere else.
type Sheet struct {
	Name    string
	Help    string // one line above the table in the blank workbook
	Columns []*Column

	byKey     map[string]*Column // columns by the key of their headings, made when first needed
	byKeyOnce sync.Once
}

// known finds a column by the key of its heading; nil if there is none.
func (s *Sheet) known(k string) *Column {
	s.byKeyOnce.Do(func() {
		s.byKey = make(map[string]*Column, len(s.Columns))
		for _, c := range s.Columns {
			s.byKey[Key(c.Heading)] = c
		}
	})
	return s.byKey[k]
}

// Column is one column of a sheet.
type Column struct {
	Heading  string         // without its unit
	Quantity *unit.Quantity // nil: words
	Unit     string         // the unit of the blank workbook, one of Quantity's; "" for words and bare numbers
	Needed   bool           // the column must be there, and filled in every row
	Least    Least          // which numbers are refused
	Usual    *span          // outside it a number is used, with a warning; nil: any is usual
	OfMedium *span          // Usual in a row that is about the surroundings (Where: medium)
	Possible *span          // outside it a number is refused; nil: whatever Least allows
	Slip     string         // what such a number most likely is, as a question
	Choices  []string       // accepted words, for a drop-down list; nil: any words or a number
	Also     []string       // further words that are accepted and not offered
	Free     bool           // Choices are suggestions: other words are accepted too
	Help     string         // what to type, for the cell note and the manual
}

// Least says which numbers a column refuses.
type Least int

const (
	Any         Least = iota // any finite number; a temperature not below −273.15 °C
	NotNegative              // 0 or more
	Positive                 // more than 0
	Share                    // 0 … 100 %
	UpToOne                  // more than 0, at most 1
)

// span is a range of numbers, ends included, in the unit that the program computes in.
type span struct{ least, most float64 }

// The spans are common practice, no source: wide enough for any food and kitchen, narrow enough to catch a number typed in the unit
// of another heading. What is possible of properties reaches from foamed plastic to copper, which trays and packs may be layers of.
var (
	usualSize, possibleSize         = &span{0.002, 1}, &span{1e-5, 10}              // m
	usualLayer                      = &span{0.0001, 1}                              // m
	usualContact, possibleContact   = &span{0, 1}, &span{0, 10}                     // m²·K/W
	usualStart, possibleStart       = &span{-30, 110}, &span{-80, 125}              // °C
	usualMedium, possibleMedium     = &span{-60, 280}, &span{-273.15, 600}          // °C
	usualFreezing, possibleFreezing = &span{-6, 0}, &span{-60, 0}                   // °C
	usualLimit                      = &span{-273.15, 125}                           // °C
	usualFilm, possibleFilm         = &span{0, 5000}, &span{0, 1e6}                 // W/(m²·K)
	usualSpeed, possibleSpeed       = &span{0, 15}, &span{0, 100}                   // m/s
	usualDuration, possibleDuration = &span{0, 60 * 86400}, &span{0.6, 400 * 86400} // s
	usualConduct, possibleConduct   = &span{0.1, 0.9}, &span{0.02, 430}             // W/(m·K)
	usualDensity, possibleDensity   = &span{300, 1500}, &span{20, 9000}             // kg/m³
	usualSpecific, possibleSpecific = &span{1500, 4300}, &span{350, 5000}           // J/(kg·K)
	usualZ, possibleZ               = &span{3, 40}, &span{1, 100}                   // K
)

const (
	slipSize    = "is it cm or inches typed in a mm column, or the other way round?"
	slipContact = "is it a thickness in mm? A millimetre of air is about 0.04 m²K/W"
	slipDegrees = "is it °F typed in a °C column?"
	slipFreezer = "is it the temperature of a freezer, or °F typed in a °C column?"
	slipFilm    = "is it in another unit than the heading says, such as kW/m²·K?"
	slipSpeed   = "is it ft/min or km/h typed in a m/s column?"
	slipTime    = "is it seconds or minutes typed in a column of longer units?"
	slipConduct = "is it in another unit than the heading says, such as mW/m·K or Btu/h·ft·°F?"
	slipDensity = "is it g/cm³ typed in a kg/m³ column?"
	slipHeat    = "is it kJ/kg·K typed in a J/kg·K column?"
	slipZ       = "is it a temperature, or in another unit than the heading says?"
)

// outside tells whether a number lies outside a span; no number lies outside none.
func (s *span) outside(x float64) bool { return s != nil && (x < s.least || x > s.most) }

// Title is the heading of the blank workbook, with its unit: "Thickness (mm)".
func (c *Column) Title() string {
	if c.Unit == "" {
		return c.Heading
	}
	return c.Heading + " (" + c.Unit + ")"
}

// Titled is the heading with another unit, as the program names it; nil: none.
func (c *Column) Titled(u *unit.Unit) string {
	if u == nil || u.Name() == "" {
		return c.Heading
	}
	return c.Heading + " (" + u.Name() + ")"
}

// most is how many rows of the sheet are read.
func (s *Sheet) most() int {
	if s.Name == "Limits" || s.Name == "Groups" {
		return 10_000
	}
	return mostRows
}

// Column finds a column by its heading without unit, as it stands in the list; nil if there is none.
func (s *Sheet) Column(heading string) *Column {
	for _, c := range s.Columns {
		if c.Heading == heading {
			return c
		}
	}
	return nil
}

// names lists a word of each value.
func names[T any](list []T, name func(T) string) []string {
	out := make([]string, len(list))
	for i, v := range list {
		out[i] = name(v)
	}
	return out
}

// The words of columns that are no values of their own in model or rules.
var (
	shapeNames   = names(model.Shapes, func(s *model.Shape) string { return s.Name })
	surfaceNames = names(model.Surfaces, func(s *model.Surface) string { return s.Name })
	stageNames   = names(model.Stages, func(s *model.Stage) string { return s.Name })
	coverNames   = names(model.Covers, func(c *model.Cover) string { return c.Name })
	faceNames    = names(model.Faces, func(f *model.Face) string { return f.Name })
	flowNames    = names(model.Flows, func(f *model.Flow) string { return f.Name })
	ruleNames    = names(rules.Kinds, func(k *rules.Kind) string { return k.Name })
	compareWords = []string{"at least", "more than", "at most", "less than"} // rules.AtLeast, MoreThan, AtMost, LessThan
	countWords   = []string{"total", "continuous", "once"}                   // rules.Total, Continuous, Once
	whereWords   = []string{"every point", "surface", "centre", "medium"}
	yesNo        = []string{"yes", "no"}
)

// stagesAlso are the other words for stages.
func stagesAlso() []string {
	var out []string
	for _, s := range model.Stages {
		if s.Also != "" {
			out = append(out, s.Also)
		}
	}
	return out
}

// publishedFilms is what the message about a missing film coefficient and the note of the column say, the low end of each first.
const publishedFilms = "Published totals, low end first. Cold room, still air: 7.5 to 11.8 W/m²·K (Churchill-Chu cylinder 50–180 mm plus radiation 4.6–5.6). " +
	"Air blown at 0.3 to 5 m/s over a 110 mm joint: 5.6 to 26.7 without radiation (Churchill and Bernstein 1977, J Heat Transfer 99:300). " +
	"Cooked boneless ham of 2.3 kg in chilled air: 5.1 dry, 9.1 with evaporation (Ryland and others 2006, RURALS 1(1):1). " +
	"Oven without fan: 15 to 23, 19.25 measured at roasting temperature (Chang, Carpenter and Toledo 1998, J Food Sci). " +
	"Tunnel oven at low air speed: 20 to 48 (Baik and others 1999, J Food Sci 64(4):688). " +
	"Contact grill, hamburger: 250 to 650 (Wichchukit, Zorrilla and Singh 2001; authors and year from memory). " +
	"Boiling water and pure condensing steam: 2500 and more (Cengel, Heat Transfer, table of typical ranges)"

// publishedSpeeds does the same for a missing air speed.
const publishedSpeeds = "Take the lowest speed that you measured at the food, not the fan's rating. Published film coefficients of air blown over a 110 mm joint, without radiation: " +
	"0.3 m/s 5.6, 0.5 m/s 7.3, 1 m/s 10.6, 1.2 m/s 11.7, 2 m/s 15.6, 3 m/s 19.7, 5 m/s 26.7 W/m²·K (Churchill and Bernstein 1977, J Heat Transfer 99:300, air at 10 °C)"

// surroundings are the columns that Steps and Faces share.
func surroundings() []*Column {
	return []*Column{
		{Heading: "Surroundings", Needed: true, Choices: surfaceNames, Help: "what the food stands in"},
		{Heading: "Temperature", Quantity: &unit.Temperature, Unit: "°C", Usual: usualMedium, Possible: possibleMedium, Slip: slipDegrees, Help: "of the surroundings; blank with a Course, and for insulated"},
		{Heading: "Course", Help: "a course of the sheet Courses, instead of one temperature"},
		{Heading: "Temperature is", Choices: []string{"measured", "set-point"}, Help: "a set-point is not an air temperature; blank = set-point"},
		{Heading: "Film coefficient", Quantity: &unit.Film, Unit: "W/m²·K", Usual: usualFilm, Possible: possibleFilm, Slip: slipFilm, Least: Positive, Help: "heat taken or given by a square metre for each degree of difference; it stands for everything that happens at the surface. " + publishedFilms},
		{Heading: "Air speed", Quantity: &unit.Speed, Unit: "m/s", Usual: usualSpeed, Possible: possibleSpeed, Slip: slipSpeed, Least: Positive, Help: "at the food, for moving air. " + publishedSpeeds},
		{Heading: "Relative humidity", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "of the air, as measured or set; a wet surface, and steam with air, are calculated with it; blank with a wet surface = dry air in cook, reheat, thaw and hold hot, saturated air in other stages, the slow side of each; steam colder than boiling needs it"},
		{Heading: "Radiating temperature", Quantity: &unit.Temperature, Unit: "°C", Help: "of walls or elements that the food sees, in still or moving air; blank = no radiation, which heats and chills more slowly"},
		{Heading: "Emissivity", Quantity: &unit.Number, Least: UpToOne, Help: "of the food's surface, more than 0 and at most 1; blank with a Radiating temperature = 0.9"},
		{Heading: "Surface", Choices: []string{"dry", "wet"}, Help: "needed for air warmer than the food. wet: moist food that lies open; its evaporation is calculated, which holds back heating and hastens chilling. dry: wrapped, lidded or truly dry. Blank in chilling = evaporation is left out, the slow side; what moist food gains while it stands is then not counted for a limit on heating"},
		{Heading: "Cover", Choices: coverNames, Help: "what lies between surroundings and food; blank = open"},
		{Heading: "Wrap resistance", Quantity: &unit.Resistance, Unit: "m²K/W", Least: Positive, Help: "of wrap, lid gap or contact; an air gap is about 0.04 m²K/W a millimetre"},
	}
}

func join(lists ...[]*Column) []*Column {
	var out []*Column
	for _, l := range lists {
		out = append(out, l...)
	}
	return out
}

// Sheets lists every sheet of a plan in the order of the workbook.
var Sheets = []*Sheet{
	{Name: "Plan", Help: "What the plan is and who answers for it", Columns: []*Column{
		{Heading: "Item", Needed: true, Choices: PlanItems, Help: "what is told"},
		{Heading: "Value", Help: "your answer"},
	}},
	{Name: "Products", Help: "A row is one product through one process", Columns: []*Column{
		{Heading: "Product", Needed: true, Help: "a name of its own"},
		{Heading: "Family", Help: "products that limits may name together"},
		{Heading: "Recipe version", Help: "printed on the report"},
		{Heading: "Batch", Help: "printed on the report"},
		{Heading: "Process", Needed: true, Help: "a process of the sheet Steps"},
		{Heading: "Shape", Needed: true, Choices: shapeNames, Help: "the shape that the product is calculated as"},
		{Heading: "Thickness", Quantity: &unit.Length, Unit: "mm", Usual: usualSize, Possible: possibleSize, Slip: slipSize, Least: Positive, Help: "slab, bar, brick; along the axis of a spheroid"},
		{Heading: "Width", Quantity: &unit.Length, Unit: "mm", Usual: usualSize, Possible: possibleSize, Slip: slipSize, Least: Positive, Help: "bar, brick"},
		{Heading: "Length", Quantity: &unit.Length, Unit: "mm", Usual: usualSize, Possible: possibleSize, Slip: slipSize, Least: Positive, Help: "brick, short cylinder"},
		{Heading: "Diameter", Quantity: &unit.Length, Unit: "mm", Usual: usualSize, Possible: possibleSize, Slip: slipSize, Least: Positive, Help: "cylinder, sphere, short cylinder, spheroid"},
		{Heading: "Volume", Quantity: &unit.Volume, Unit: "L", Least: Positive, Help: "stirred"},
		{Heading: "Surface area", Quantity: &unit.Area, Unit: "m²", Least: Positive, Help: "stirred"},
		{Heading: "Food", Help: "a food of the sheet Foods or a built-in one; blank for a layered slab"},
		{Heading: "Start temperature", Quantity: &unit.Temperature, Unit: "°C", Usual: usualStart, Possible: possibleStart, Slip: slipDegrees, Needed: true, Help: "of the whole product when its first step begins"},
		{Heading: "Note", Help: "printed on the report"},
	}},
	{Name: "Layers", Help: "The layers of a layered slab, from the top", Columns: []*Column{
		{Heading: "Product", Needed: true, Help: "a product of the sheet Products whose shape is layered slab"},
		{Heading: "Layer", Quantity: &unit.Number, Needed: true, Least: Positive, Help: "1 = top, then 2, 3 … downwards without a gap"},
		{Heading: "Food", Needed: true, Help: "a food of the sheet Foods or a built-in one; a tray, tin or pack as a layer goes into Foods too, with measured properties"},
		{Heading: "Thickness", Quantity: &unit.Length, Unit: "mm", Usual: usualLayer, Possible: possibleSize, Slip: slipSize, Needed: true, Least: Positive, Help: "of this layer"},
		{Heading: "Contact resistance below", Quantity: &unit.Resistance, Unit: "m²K/W", Usual: usualContact, Possible: possibleContact, Slip: slipContact, Least: NotNegative, Help: "between this layer and the one below, about 0.04 m²K/W a millimetre of air; 0 or blank for perfect contact, which is the fast side; blank in the lowest layer"},
	}},
	{Name: "Foods", Help: "The plan's own foods: a composition, or measured properties", Columns: []*Column{
		{Heading: "Food", Needed: true, Help: "a name; it wins over a built-in food of that name"},
		{Heading: "Water", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "by mass; the parts of a composition make 97 to 103 % together"},
		{Heading: "Protein", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "by mass"},
		{Heading: "Fat", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "by mass"},
		{Heading: "Carbohydrate", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "without fibre"},
		{Heading: "Fibre", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "by mass; not part of Carbohydrate here"},
		{Heading: "Ash", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "by mass: minerals and salt"},
		{Heading: "Air by volume", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "for a whipped or porous food; or a measured Density instead"},
		{Heading: "At temperature", Quantity: &unit.Temperature, Unit: "°C", Help: "several rows of one food make a table"},
		{Heading: "Conductivity", Quantity: &unit.Conductivity, Unit: "W/m·K", Usual: usualConduct, Possible: possibleConduct, Slip: slipConduct, Least: Positive, Help: "thermal conductivity, instead of a composition, with Density and Specific heat"},
		{Heading: "Density", Quantity: &unit.Density, Unit: "kg/m³", Usual: usualDensity, Possible: possibleDensity, Slip: slipDensity, Least: Positive, Help: "of the whole food with its air; measured"},
		{Heading: "Specific heat", Quantity: &unit.SpecificHeat, Unit: "J/kg·K", Usual: usualSpecific, Possible: possibleSpecific, Slip: slipHeat, Least: Positive, Help: "instead of a composition, with Conductivity and Density"},
		{Heading: "Freezing point", Quantity: &unit.Temperature, Unit: "°C", Usual: usualFreezing, Possible: possibleFreezing, Slip: slipFreezer, Help: "where ice begins to form; needed where food gets near 0 °C. With a composition, freezing and thawing are calculated. For a tray or pack without water: a temperature that the plan never reaches"},
		{Heading: "Water activity", Quantity: &unit.Number, Least: UpToOne, Help: "more than 0 and at most 1, of a wet surface; blank = 1 in cook, reheat, thaw and hold hot, 0.95 in other stages, the slow side of each"},
		{Heading: "Flows", Choices: flowNames, Help: "a liquid left still is not conduction; a thick food is run as conducting and as well mixed, and the worse finding counts; blank = no"},
		{Heading: "Source", Needed: true, Help: "where the figures come from"},
	}},
	{Name: "Steps", Help: "One row a step, in order within its process", Columns: join([]*Column{
		{Heading: "Process", Needed: true, Help: "the name that Products gives"},
		{Heading: "Product", Help: "only for a row that replaces the process's row of that Step for one product"},
		{Heading: "Step", Needed: true, Help: "a name of its own within the process"},
		{Heading: "Stage", Needed: true, Choices: stageNames, Also: stagesAlso(), Help: "what the step is for; limits name stages"},
		{Heading: "Duration", Quantity: &unit.Duration, Unit: "min", Usual: usualDuration, Possible: possibleDuration, Slip: slipTime, Needed: true, Least: Positive, Help: "the longest that the step may last"},
		{Heading: "Until slowest point reaches", Quantity: &unit.Temperature, Unit: "°C", Help: "the step ends when the coldest place (cook, reheat, thaw, hold hot) or the hottest place (other stages) reaches this, at the latest after Duration"},
	}, surroundings(), []*Column{
		{Heading: "Equipment", Help: "printed on the report"},
		{Heading: "Load", Help: "how full, which position"},
		{Heading: "Note", Help: "printed on the report"},
	})},
	{Name: "Faces", Help: "What differs on one face of the product", Columns: join([]*Column{
		{Heading: "Process", Needed: true, Help: "a process of the sheet Steps"},
		{Heading: "Product", Help: "only for one product of the process"},
		{Heading: "Step", Needed: true, Help: "a step of that process"},
		{Heading: "Face", Needed: true, Choices: faceNames, Help: "top and underside close the thickness, sides the width, ends the length of a brick; the sides of a short cylinder are its curved face"},
	}, surroundings())},
	{Name: "Courses", Help: "Temperatures of surroundings that change in time: straight lines between rows", Columns: []*Column{
		{Heading: "Course", Needed: true, Help: "its name, as Steps and Faces use it; the same in each of its rows"},
		{Heading: "Time", Quantity: &unit.Duration, Unit: "min", Needed: true, Least: NotNegative, Help: "from the start of the step; the first row is 0"},
		{Heading: "Temperature", Quantity: &unit.Temperature, Unit: "°C", Usual: usualMedium, Possible: possibleMedium, Slip: slipDegrees, Needed: true, Help: "of the surroundings at that time; straight lines between the rows"},
		{Heading: "Relative humidity", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "of the air at that time"},
	}},
	{Name: "Limits", Help: "What has to be met: your own entry, with the code that says so", Columns: []*Column{
		{Heading: "Limit", Needed: true, Help: "a name of its own"},
		{Heading: "Rule", Needed: true, Choices: ruleNames, Help: "the kind of limit"},
		{Heading: "Stage", Choices: stageNames, Free: true, Help: "blank = the whole chain; several joined by + (cook + rest); for delay a pair (cook > cool)"},
		{Heading: "Applies to", Needed: true, Help: "all, family: NAME, or a product"},
		{Heading: "Where", Choices: whereWords, Free: true, Help: "or the name of a row of Points; blank = every point"},
		{Heading: "From", Quantity: &unit.Temperature, Unit: "°C", Usual: usualLimit, OfMedium: usualMedium, Slip: slipDegrees, Help: "hold, stay above: the temperature to be kept or reached. cool: where the clock starts. band, outside: the lower edge. lethality: nothing is credited below it"},
		{Heading: "To", Quantity: &unit.Temperature, Unit: "°C", Usual: usualLimit, OfMedium: usualMedium, Slip: slipDegrees, Help: "cool, heat: the temperature to be reached. stay below: the highest allowed. band, outside: the upper edge"},
		{Heading: "Time", Quantity: &unit.Duration, Unit: "min", Least: NotNegative, Help: "0 = reached once"},
		{Heading: "Second time", Quantity: &unit.Duration, Unit: "min", Least: NotNegative, Help: "heat: how long it must then stay. freeze: the time of the second phase"},
		{Heading: "Clock starts", Choices: []string{"crossing"}, Free: true, Help: "crossing, crossing of N °C, stage start: NAME, stage end: NAME"},
		{Heading: "Counting", Choices: countWords, Help: "how periods add up; there is no default where a rule uses it"},
		{Heading: "Compare", Choices: compareWords, Help: "for temperatures; blank = the rule's own"},
		{Heading: "Compare time", Choices: compareWords, Help: "blank = at least for a needed time, at most for an allowed one"},
		{Heading: "Reference temperature", Quantity: &unit.Temperature, Unit: "°C", Help: "lethality: the temperature that the equivalent time is told at"},
		{Heading: "z", Quantity: &unit.Difference, Unit: "°C difference", Usual: usualZ, Possible: possibleZ, Slip: slipZ, Least: Positive, Help: "lethality: the difference that changes the rate tenfold; a difference, not a temperature"},
		{Heading: "z above the reference temperature", Quantity: &unit.Difference, Unit: "°C difference", Usual: usualZ, Possible: possibleZ, Slip: slipZ, Least: Positive, Help: "lethality: z above the reference temperature, where the code gives another one"},
		{Heading: "D", Quantity: &unit.Duration, Unit: "min", Least: Positive, Help: "time for one decimal reduction at the reference temperature"},
		{Heading: "Log reductions", Quantity: &unit.Number, Least: Positive, Help: "lethality: needed decimal reductions, with D"},
		{Heading: "Allowance", Quantity: &unit.Difference, Unit: "°C difference", Least: NotNegative, Help: "falling: the largest rise that still counts as falling; a difference"},
		{Heading: "Humidity", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "humidity: the relative humidity needed"},
		{Heading: "Share of stage", Quantity: &unit.Percent, Unit: "%", Least: Share, Help: "humidity: for this share of the stage"},
		{Heading: "Table", Help: "a table of the sheet Tables"},
		{Heading: "Answer", Choices: yesNo, Free: true, Help: "for a stated limit; blank = cannot tell"},
		{Heading: "Group", Help: "limits that belong together; see Groups"},
		{Heading: "Level", Choices: []string{"must", "advice"}, Help: "blank = must"},
		{Heading: "CCP", Help: "critical control point, printed on the report"},
		{Heading: "Hazard", Help: "printed on the report"},
		{Heading: "Status", Choices: []string{"law", "guidance", "own study"}, Help: "law, guidance or own study; printed on the report"},
		{Heading: "Code", Help: "the document that says so; missing = a warning on the front page"},
		{Heading: "Clause", Help: "type it as text, so that the spreadsheet does not turn it into a date"},
		{Heading: "Edition", Help: "of the code, as you read it; blank is a warning on the front page"},
		{Heading: "Issued by", Help: "who issued the code"},
		{Heading: "Confirmed by", Help: "who held this row against the code in force"},
		{Heading: "Confirmed on", Help: "when"},
		{Heading: "Note", Help: "printed on the report"},
	}},
	{Name: "Groups", Help: "How limits join; a group without a row is all of", Columns: []*Column{
		{Heading: "Group", Needed: true, Help: "its name, as Limits uses it"},
		{Heading: "Join", Needed: true, Choices: []string{"all of", "any of"}, Help: "all of: every row must be met; any of: one is enough"},
		{Heading: "Within", Help: "another group"},
	}},
	{Name: "Tables", Help: "Time-temperature tables; any row may be met, rows are never interpolated", Columns: []*Column{
		{Heading: "Table", Needed: true, Help: "its name, as Limits uses it; the same in each of its rows"},
		{Heading: "Temperature", Quantity: &unit.Temperature, Unit: "°C", Needed: true, Help: "as printed in the code, in the printed unit; rows are never interpolated"},
		{Heading: "Time", Quantity: &unit.Duration, Unit: "min", Needed: true, Least: NotNegative, Help: "0 = met when reached once"},
	}},
	{Name: "Points", Help: "Extra places whose course you want to see, from the geometric centre", Columns: []*Column{
		{Heading: "Product", Needed: true, Help: "a product of the sheet Products"},
		{Heading: "Point", Needed: true, Help: "a name, such as probe 1"},
		{Heading: "Up", Quantity: &unit.Length, Unit: "mm", Help: "along the thickness, the axis or the radius; blank = 0"},
		{Heading: "Across", Quantity: &unit.Length, Unit: "mm", Help: "along the width or, with an axis, along the radius; blank = 0"},
		{Heading: "Along", Quantity: &unit.Length, Unit: "mm", Help: "along the length; blank = 0"},
	}},
	{Name: "Spread", Help: "Least and most of what varies, for the worst case", Columns: []*Column{
		{Heading: "Applies to", Needed: true, Help: "all, family: NAME, a product, a process, or process/step as Cook-chill/Oven; of rows for one quantity the most specific counts"},
		{Heading: "Quantity", Needed: true, Choices: spreadNames, Help: "what varies; of a process, its steps vary apart from one another"},
		{Heading: "Minus", Help: "how far below it may be, with its unit in the cell: 2 mm, 5 %, 3 °C; 0 = not at all; blank = as a row for more says, else not at all"},
		{Heading: "Plus", Help: "how far above it may be, with its unit in the cell: 2 mm, 5 %, 3 °C; 0 = not at all; blank = as a row for more says, else not at all"},
		{Heading: "Basis", Needed: true, Help: "where the figure comes from"},
	}},
	{Name: "Records", Help: "Files of probe and air loggers, which are judged by the same limits beside the prediction", Columns: []*Column{
		{Heading: "Record", Needed: true, Help: "a name for it, such as Trial 3 core"},
		{Heading: "Product", Help: "a product of the sheet Products; blank for the air of a process"},
		{Heading: "Process", Help: "whose air or water was logged, where that is for all its products"},
		{Heading: "File", Needed: true, Help: "the logger's file (.csv, .txt or .xlsx), in the folder of the plan or below it"},
		{Heading: "Sheet", Help: "of a workbook with several sheets: which one"},
		{Heading: "Time column", Needed: true, Help: "its heading in the file, or its letter; a date and a clock as Date + Time; a unit that the file does not say in brackets: Elapsed (min)"},
		{Heading: "Temperature column", Needed: true, Help: "its heading in the file, or its letter; a unit that the file does not say in brackets: Probe 1 (°C)"},
		{Heading: "What it measured", Needed: true, Choices: []string{"slowest point", "centre", "surface", "other place"}, Free: true, Help: "slowest point, centre, surface, medium of STEP, a name of the sheet Points, or other place"},
		{Heading: "Starts at", Help: "the step of the first reading, or when steps began and the last ended: Oven 09:12; Chill 11:20; end 13:00. Blank: the first step, or of a medium its own, at the first reading"},
		{Heading: "Date order", Choices: planChoices["Date order"], Help: "of the file's dates, where they fit two orders"},
		{Heading: "Time zone", Help: "of the file's clock, as UTC+01:00; blank: not known"},
		{Heading: "Missing words", Help: "further words of this logger for a reading that is missing, divided by commas"},
		{Heading: "Sensor", Help: "which instrument"}, {Heading: "Calibrated on", Help: "when, as YYYY-MM-DD"},
		{Heading: "Correction", Quantity: &unit.Difference, Unit: "°C difference", Help: "is added to every reading"},
		{Heading: "Accuracy", Quantity: &unit.Difference, Unit: "°C difference", Least: NotNegative, Help: "of the instrument, either way; blank: not known, and a warning"}, {Heading: "Note"},
	}},
}

// PlanItems are the items of the sheet Plan.
var PlanItems = []string{"Site", "Plan", "Edition", "Prepared for", "Prepared by", "Reviewed by", "Authority", "Altitude (m)", "Paper",
	"Show temperatures in", "Decimal sign", "Date order", "Ignore columns"}

// planChoices are the answers of the items that take a word of a list.
var planChoices = map[string][]string{
	"Paper": {"A4", "Letter"}, "Show temperatures in": {"°C", "°F"}, "Decimal sign": {"point", "comma"},
	"Date order": {"day month year", "month day year", "year month day"},
}

// SheetNamed finds a sheet of the list by its exact name; nil if there is none.
func SheetNamed(name string) *Sheet {
	for _, s := range Sheets {
		if s.Name == name {
			return s
		}
	}
	return nil
}
