// Package food turns a food's composition into its thermal behaviour, and holds a table of foods with their sources.
// Units: per cent by mass, °C, kg/m³, W/(m·K), J/(kg·K), J/kg.
package food

import (
	"fmt"
	"math"
	"strings"

	"slowpoint/model"
)

// Method says how properties follow from composition; it ends the source of every composed material.
const Method = "properties from composition: polynomials of Choi & Okos (1986) with 4176.2 J/(kg·K) for water, conductivity by the rule of Levy (1981)"

// poresMethod goes on after Method where the air is in pores that join.
const poresMethod = ", air in pores that join by the effective medium of Landauer (1952)"

// The range of the polynomials, °C.
const (
	LowC  = -40
	HighC = 150
)

// The sums of a composition that are accepted, %. Analyses seldom add up to 100 exactly; the sum is scaled to 100.
const (
	leastSum = 97
	mostSum  = 103
)

// coldestFreezing is the freezing point, °C, below which no food is believed: the polynomials of ice end there, and the saltiest
// brine of the kitchen freezes at −21 °C (common knowledge, no source).
const coldestFreezing = LowC

// The largest share of air, %, in closed pores, above which pores join and the rule for closed ones fails, and in pores that join.
const (
	mostAir       = 50
	mostJoinedAir = 95
)

// measuredAtC is the temperature at which a measured density is taken to hold.
const measuredAtC = 20

// Composition is what a food is made of, per cent by mass. Carbohydrate is without fibre, as on European labels; a label or a table
// that gives total carbohydrate, as American ones do, includes fibre: take it off first.
// At most one of air and density is given; nil means blank.
type Composition struct {
	WaterPc, ProteinPc, FatPc, CarbohydratePc, FibrePc, AshPc float64

	AirByVolumePc *float64 // air, % of the volume
	DensityKgM3   *float64 // as measured, air included
	PoresJoin     bool     // the air is in pores that join, as in bread; one of the two above is needed then
	FreezingC     *float64 // initial freezing point, °C, below 0 and above −40; nil: not known, and nothing is said below it
}

// parts lists the components with their column headings, in the order of mix.
func (c Composition) parts() [6]part {
	return [6]part{{"Water", c.WaterPc}, {"Protein", c.ProteinPc}, {"Fat", c.FatPc}, {"Carbohydrate", c.CarbohydratePc}, {"Fibre", c.FibrePc}, {"Ash", c.AshPc}}
}

type part struct {
	column string
	pc     float64
}

// SumPc is what the six components add up to, %.
func (c Composition) SumPc() float64 {
	sum := 0.0
	for _, p := range c.parts() {
		sum += p.pc
	}
	return sum
}

// String words the composition for a report: "water 71.7 %, protein 21.24 %, …".
func (c Composition) String() string {
	var words []string
	for _, p := range c.parts() {
		if p.pc != 0 {
			words = append(words, fmt.Sprintf("%s %s %%", strings.ToLower(p.column), short(p.pc)))
		}
	}
	s := strings.Join(words, ", ")
	if sum := c.SumPc(); math.Abs(sum-100) > 0.005 {
		s += fmt.Sprintf(" (adds up to %s %%, scaled to 100 %%)", short(sum))
	}
	if c.AirByVolumePc != nil {
		s += fmt.Sprintf(", air %s %% by volume", short(*c.AirByVolumePc))
	}
	if c.DensityKgM3 != nil {
		s += fmt.Sprintf(", measured density %s kg/m³", short(*c.DensityKgM3))
	}
	return s
}

// short writes a number with at most two decimals.
func short(x float64) string {
	s := fmt.Sprintf("%.2f", x)
	return strings.TrimSuffix(strings.TrimRight(s, "0"), ".")
}

// Fault is one thing wrong with a composition: the column, what is wrong, how to mend it.
type Fault struct{ Field, Msg, Hint string }

// Faults is everything wrong with one composition.
type Faults []Fault

// Error joins the faults, one a line.
func (fs Faults) Error() string {
	lines := make([]string, len(fs))
	for i, f := range fs {
		lines[i] = f.Field + ": " + f.Msg
		if f.Hint != "" {
			lines[i] += " – " + f.Hint
		}
	}
	return strings.Join(lines, "\n")
}

// Compose gives the thermal behaviour of a food from its composition, for −40 to 150 °C; source says where the composition comes from.
// With a freezing point, and water that can freeze, the behaviour below it is that of the freezing food and EnthalpyJkg and IceShare are
// set; otherwise they are nil and what Props gives below 0 °C is the food without ice. The error, if any, is of type Faults and names
// every column that is wrong.
func Compose(name, source string, c Composition) (model.Material, error) {
	faults := c.check()
	if strings.TrimSpace(source) == "" {
		faults = append(faults, Fault{"Source", "a composition needs its source", "name the label, analysis or table that it comes from"})
	}
	if len(faults) > 0 {
		return model.Material{}, faults
	}
	m, faults := c.mix()
	if len(faults) > 0 {
		return model.Material{}, faults
	}
	material := model.Material{
		Name:        name,
		Source:      source + "; " + Method,
		Props:       m.properties,
		LowC:        LowC,
		HighC:       HighC,
		Composed:    true,
		Composition: c.String(),
		Waterless:   c.WaterPc == 0,
		FatPc:       100 * c.FatPc / c.SumPc(),
	}
	if c.PoresJoin {
		material.Source += poresMethod
	}
	if c.FreezingC != nil {
		tf := *c.FreezingC
		material.FreezingC = &tf
		if z, ok := m.freezing(tf); ok {
			material.Props, material.EnthalpyJkg, material.IceShare = z.properties, z.enthalpy, z.ice
		}
	}
	return material, nil
}

// check holds every figure to its range and the sum to 97–103 %.
func (c Composition) check() Faults {
	var faults Faults
	sound := true
	for _, p := range c.parts() {
		if !(p.pc >= 0 && p.pc <= 100) {
			sound = false
			faults = append(faults, Fault{p.column, fmt.Sprintf("%g %% is not a share of the mass", p.pc), "give 0 to 100 %"})
		}
	}
	if sum := c.SumPc(); sound && !(sum >= leastSum && sum <= mostSum) {
		hint := "something is missing, or a figure is for dry matter or for a serving"
		if sum > mostSum {
			hint = "Carbohydrate is without fibre here: take Fibre off a total that includes it"
		}
		faults = append(faults, Fault{"Water", fmt.Sprintf("the composition adds up to %s %%, and %d to %d %% is accepted", short(sum), leastSum, mostSum), hint})
	}
	if a := c.AirByVolumePc; a != nil && !(*a >= 0 && *a <= c.mostAir()) {
		faults = append(faults, Fault{"Air by volume", fmt.Sprintf("%g %% is outside 0 to %.0f %%", *a, c.mostAir()), "for a looser food give measured conductivity, density and specific heat"})
	}
	if d := c.DensityKgM3; d != nil && !(*d > 0 && !math.IsInf(*d, 0)) {
		faults = append(faults, Fault{"Density", fmt.Sprintf("%g kg/m³ is not a density", *d), "give the measured mass over the volume, or leave it blank"})
	}
	if f := c.FreezingC; f != nil && !(*f < 0 && *f > coldestFreezing) { // which range is usual is said where it is typed
		why := "food freezes only below 0 °C"
		if *f < 0 {
			why = fmt.Sprintf("what is known of ice in food ends at %d °C", coldestFreezing)
		}
		faults = append(faults, Fault{"Freezing point", fmt.Sprintf("%s °C is not the freezing point of a food: %s", short(*f), why),
			"give the temperature at which ice begins to form, or leave it blank"})
	}
	if c.PoresJoin && c.AirByVolumePc == nil && c.DensityKgM3 == nil {
		faults = append(faults, Fault{"Density", "the food holds much air in its pores, and how much does not follow from its composition", "give its measured mass over its volume"})
	}
	if c.AirByVolumePc != nil && c.DensityKgM3 != nil {
		faults = append(faults, Fault{"Density", "both Air by volume and Density are given, and each follows from the other", "leave one of them blank"})
	}
	return faults
}

// mostAir is the largest share of air for its kind of pores, %.
func (c Composition) mostAir() float64 {
	if c.PoresJoin {
		return mostJoinedAir
	}
	return mostAir
}

// mix scales the composition to mass fractions and finds the share of air: as given, or from the measured density. A density up to 5 %
// above what the components give without air is within the scatter of analyses and taken as no air; above that it contradicts them.
func (c Composition) mix() (*mix, Faults) {
	m, sum, most := &mix{joined: c.PoresJoin}, c.SumPc(), c.mostAir()
	for i, p := range c.parts() {
		m.x[i] = p.pc / sum
	}
	switch {
	case c.AirByVolumePc != nil:
		m.air = *c.AirByVolumePc / 100
	case c.DensityKgM3 != nil:
		m.air = 1 - *c.DensityKgM3*m.specificVolume(measuredAtC)
		if m.air < -0.05 || m.air > most/100 {
			return nil, Faults{{"Density", fmt.Sprintf("%s kg/m³ does not go with the composition, which gives %.0f kg/m³ without air and %.0f with %.0f %% of it",
				short(*c.DensityKgM3), 1/m.specificVolume(measuredAtC), (1-most/100)/m.specificVolume(measuredAtC), most), "check the density and its unit, or give measured conductivity, density and specific heat"}}
		}
		m.air = math.Max(m.air, 0)
	}
	return m, nil
}
