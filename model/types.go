// Package model predicts the temperature of every place in a food through a chain of steps by unsteady heat conduction.
//
// Units everywhere in this package: °C, s, m, W/(m·K), J/(kg·K), kg/m³, W/(m²·K), m²·K/W; a temperature difference is in K.
// It reads no files and prints nothing.
package model

import (
	"slices"

	"slowpoint/model/cell"
)

// Stage is what a step is for.
type Stage struct {
	Name, Help string
	Also       string // another accepted word; "" if none
	Heats      bool   // a step of this stage that ends at a temperature waits for the coldest place, otherwise for the hottest
}

// The stages of a chain.
var (
	Cook     = &Stage{Name: "cook", Heats: true, Help: "heating that has to reach every place"}
	Rest     = &Stage{Name: "rest", Help: "standing after heating or before chilling"}
	Cool     = &Stage{Name: "cool", Also: "chill", Help: "chilling in air, water or on ice"}
	HoldHot  = &Stage{Name: "hold hot", Heats: true, Help: "keeping hot for service"}
	HoldCold = &Stage{Name: "hold cold", Help: "cold display"}
	Store    = &Stage{Name: "store", Help: "cold store"}
	Reheat   = &Stage{Name: "reheat", Heats: true, Help: "heating again after chilling"}
	Freeze   = &Stage{Name: "freeze", Help: "freezing"}
	Thaw     = &Stage{Name: "thaw", Heats: true, Help: "thawing"}

	Stages = []*Stage{Cook, Rest, Cool, HoldHot, HoldCold, Store, Reheat, Freeze, Thaw}
)

// Size holds the sizes of a shape; 0 means not given. Each shape's Needs says which it uses.
type Size struct {
	ThicknessM, WidthM, LengthM, DiameterM float64
	VolumeM3, AreaM2                       float64 // stirred only
}

// SizeColumns are the columns of the sizes, as a shape's Needs names them.
var SizeColumns = []string{"Thickness", "Width", "Length", "Diameter", "Volume", "Surface area"}

// Of is the size of a column; nil if there is none of that name.
func (z *Size) Of(column string) *float64 {
	switch column {
	case "Thickness":
		return &z.ThicknessM
	case "Width":
		return &z.WidthM
	case "Length":
		return &z.LengthM
	case "Diameter":
		return &z.DiameterM
	case "Volume":
		return &z.VolumeM3
	case "Surface area":
		return &z.AreaM2
	}
	return nil
}

// Place is a position in the food, from its geometric centre, in m.
// Up: along the thickness (slab, bar, brick), along the axis (short cylinder), along the radius (sphere, cylinder).
// Across: along the width or, with an axis, along the radius. Along: along the length. Unused ones are 0.
type Place struct{ UpM, AcrossM, AlongM float64 }

// Point is a place with a name that the user wants to see, such as where a probe sits.
type Point struct {
	At   cell.Ref
	Name string
	Place
}

// Face is a part of the surface that may have surroundings of its own.
type Face struct{ Name, Help string }

// The faces that a sheet of faces may name.
var (
	Top       = &Face{"top", "upper end of the thickness (or of the axis)"}
	Underside = &Face{"underside", "lower end of the thickness (or of the axis)"}
	Sides     = &Face{"sides", "both ends of the width, or the curved face"}
	Ends      = &Face{"ends", "both ends of the length"}

	Faces = []*Face{Top, Underside, Sides, Ends}
)

// Cover is what lies between surroundings and food.
type Cover struct{ Name, Help string }

// The covers.
var (
	Open      = &Cover{"open", "nothing in between"}
	TightWrap = &Cover{"tight wrap", "film or foil in contact; its resistance may be given"}
	LooseLid  = &Cover{"loose lid", "a lid with an air gap; its resistance must be given (about 0.04 m²K/W a millimetre of air)"}

	Covers = []*Cover{Open, TightWrap, LooseLid}
)

// Course is a medium that changes in time: straight lines between its points. One point is a constant.
type Course struct {
	Name   string
	TimesS []float64 // from the start of the step, the first is 0, rising
	C      []float64 // °C, as long as TimesS
	RH     []float64 // relative humidity in %, as long as TimesS; nil if not given
}

// Exposure is what surrounds the food, or one face of it, during a step. Nil pointers are blanks.
type Exposure struct {
	At         cell.Ref // its row
	Surface    *Surface
	Medium     Course // no points for insulated
	Measured   bool   // the medium temperature was measured; false: it is a set-point
	FilmW      *float64
	FilmFactor float64  // multiplies a film that the program works out, for what if it is less; 0 = 1
	AirMS      *float64 // air speed, m/s
	RH         *float64 // relative humidity, %
	RadiatingC *float64
	Emissivity *float64
	Wet        *bool // Surface: wet or dry
	Cover      *Cover
	WrapM2KW   *float64 // resistance of wrap, lid gap or contact, m²·K/W
}

// FaceExposure is what differs on one face.
type FaceExposure struct {
	Face *Face
	Exposure
}

// Step is one step of the chain.
type Step struct {
	Name      string
	Stage     *Stage
	DurationS float64  // the longest it may last
	UntilC    *float64 // it ends when the slowest place reaches this; nil: after DurationS
	Exposure           // of the whole surface; its At is the step's row
	Faces     []FaceExposure
	AltitudeM float64 // height above the sea, for air density and boiling
	Equipment string
	Load      string
	Note      string
}

// Properties of a food at one temperature.
type Properties struct {
	KWmK    float64 // thermal conductivity, W/(m·K)
	RhoKgM3 float64 // density, kg/m³
	CJkgK   float64 // specific heat, J/(kg·K)
}

// Flow says whether a food moves by itself when it is left still.
type Flow struct{ Name, Help string }

// The answers of the column Flows.
var (
	FlowsNo    = &Flow{"no", "solid or set: heat moves by conduction"}
	FlowsThick = &Flow{"thick", "may mix by itself while hot"}
	FlowsYes   = &Flow{"yes", "a liquid: it mixes by itself"}

	Flows = []*Flow{FlowsNo, FlowsThick, FlowsYes}
)

// Material is a food's thermal behaviour.
type Material struct {
	At            cell.Ref // its row in the plan; zero for a built-in food
	Name          string
	Source        string // where the figures come from; never empty
	Props         func(tC float64) Properties
	LowC, HighC   float64  // range of Props, °C; both 0: no limit (a typed constant)
	Table         bool     // the plan gives rows at several temperatures: the properties follow the temperature
	Composed      bool     // computed from composition: a second run at 0.9 k is due
	FreezingC     *float64 // initial freezing point, °C
	WaterActivity *float64
	Flow          *Flow
	Waterless     bool    // it holds no water, so that nothing in it boils; false: it does, or nobody knows
	SetForm       string  // of a food that flows: the built-in food that it is once it has set; "" if none is listed
	FatPc         float64 // fat, % of the mass, where it is composed; else 0
	Composition   string  // in words, for the report: "water 71.7 %, protein 21.2 %, …"; "" if typed as properties

	// EnthalpyJkg gives the heat content in J/kg through freezing, rising strictly, from LowC to HighC. It is set where FreezingC is known and
	// the composition tells how much ice forms; Props then holds below FreezingC too: conductivity with the ice, the density at the
	// freezing point (the mass stays, swelling is left out), and the apparent specific heat, the slope of EnthalpyJkg. Nil: the food may not be
	// calculated below its freezing point.
	EnthalpyJkg func(tC float64) float64
	// IceShare gives the mass of ice in a kg of food at a temperature; nil as EnthalpyJkg.
	IceShare func(tC float64) float64
}

// Layer is one layer of a layered slab.
type Layer struct {
	At         cell.Ref
	Food       *Material
	ThicknessM float64
	BelowM2KW  float64 // contact resistance to the layer below it, m²·K/W; 0: they touch perfectly; of the last layer: 0
}

// Product is one product; its process is the chain of steps that goes with it.
type Product struct {
	At     cell.Ref
	Name   string
	Shape  *Shape
	Size   Size
	Food   *Material // nil for a layered slab
	Layers []Layer   // layered slab: from the top; Size.ThicknessM is their sum
	StartC float64
	Points []Point // extra places; the centre is always known
	Inches bool    // its sizes were typed in inches or feet: lengths in words stand in inches, with mm in brackets
}

// Foods are the foods of a product, each once: the only one, or those of its layers from the top. Missing ones are left out.
func (p *Product) Foods() []*Material {
	var out []*Material
	add := func(m *Material) {
		if m != nil && !slices.Contains(out, m) {
			out = append(out, m)
		}
	}
	add(p.Food)
	for i := range p.Layers {
		add(p.Layers[i].Food)
	}
	return out
}
