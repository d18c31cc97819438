// Package unit knows the quantities that a person may type, their units, and the way back.
// Units[0] of a quantity is what the program computes in.
package unit

import (
	"strings"
	"unicode"
)

// Unit is one unit of a quantity: computed = (typed − Zero)·Scale/Per. Multiplier and divisor are apart so that
// 25 mm is the float64 nearest to 0.025 m and 130 °F is exactly (130−32)/1.8 °C.
type Unit struct {
	Names []string // Names[0] is printed; the others are accepted spellings
	Scale float64  // 0 = 1
	Per   float64  // 0 = 1
	Zero  float64  // the typed number that is 0 in the computed unit; only scales of temperature have one
}

// Name is the printed name.
func (u Unit) Name() string { return u.Names[0] }

// In turns a typed number into the unit that the program computes in.
func (u Unit) In(typed float64) float64 { return (typed - u.Zero) * orOne(u.Scale) / orOne(u.Per) }

// Out turns a computed number into this unit.
func (u Unit) Out(computed float64) float64 { return computed*orOne(u.Per)/orOne(u.Scale) + u.Zero }

func orOne(x float64) float64 {
	if x == 0 {
		return 1
	}
	return x
}

// Quantity is something with a dimension.
type Quantity struct {
	Name  string
	Units []Unit
}

// Plain tells whether the quantity is a bare number, without any unit.
func (q *Quantity) Plain() bool { return len(q.Units) == 1 && q.Units[0].Name() == "" }

// Unit finds a unit of the quantity by any of its spellings; nil if it is none of them.
// Blanks, brackets, dots between factors and raised digits make no difference: W/m2K, W/(m2 K) and W/m²·K are one unit.
// Capitals count only where a spelling fits nothing otherwise.
func (q *Quantity) Unit(name string) *Unit {
	bare := plainSpelling(name)
	for _, same := range []func(a, b string) bool{func(a, b string) bool { return a == b }, strings.EqualFold} {
		for i := range q.Units {
			for _, n := range q.Units[i].Names {
				if same(plainSpelling(n), bare) {
					return &q.Units[i]
				}
			}
		}
	}
	return nil
}

// Alike finds a unit that a name is written like, but for letters of another alphabet that look the same, as the Cyrillic С of °С, and tells
// the first of these; nil if there is none.
func (q *Quantity) Alike(name string) (u *Unit, letter string) {
	plain := strings.Map(func(c rune) rune {
		i := strings.IndexRune(lookalikes, c)
		if i < 0 {
			return c
		}
		if letter == "" {
			alphabet := "Cyrillic"
			if unicode.Is(unicode.Greek, c) {
				alphabet = "Greek"
			}
			letter = alphabet + " letter " + string(c)
		}
		return rune(latin[len([]rune(lookalikes[:i]))])
	}, name)
	if letter == "" {
		return nil, ""
	}
	return q.unitOfCell(plain), letter
}

// Letters of units that other alphabets have too, and the Latin ones.
const (
	lookalikes = "СсКкВМмНОоРрТАаЕеХхЅѕІіЈԌԛԝΒΕΗΙΚΜΝΟοΡΤΧ"
	latin      = "CcKkBMmHOoPpTAaEeXxSsIiJGqwBEHIKMNOoPTX"
)

// Listing is every unit's printed name, for messages: "m, mm, cm, in or ft".
func (q *Quantity) Listing() string {
	var names []string
	for _, u := range q.Units {
		names = append(names, u.Name())
	}
	if len(names) < 2 {
		return strings.Join(names, "")
	}
	return strings.Join(names[:len(names)-1], ", ") + " or " + names[len(names)-1]
}

var spelling = strings.NewReplacer(" ", "", "\u00a0", "", "\u2009", "", "\u202f", "", "(", "", ")", "", "·", "", "⋅", "", "•", "", "*", "", "×", "",
	"²", "2", "³", "3", "^", "", "−", "-", "\u207b", "-", "¹", "1", "º", "°", "˚", "°", "℃", "°C", "℉", "°F", "″", "\"", "”", "\"", "“", "\"", "’’", "\"",
	"㎜", "mm", "㎝", "cm", "㎡", "m2", "㎥", "m3", "㎏", "kg")

// plainSpelling is a unit's name without anything that makes no difference.
func plainSpelling(s string) string { return strings.TrimSuffix(spelling.Replace(Narrow(s)), ".") }

// Temperature and Difference are two quantities: a difference scales, it never shifts.
var (
	Temperature = Quantity{"temperature", []Unit{
		{Names: []string{"°C", "degC", "deg C", "C", "Celsius", "oC"}},
		{Names: []string{"°F", "degF", "deg F", "F", "Fahrenheit", "oF"}, Per: 1.8, Zero: 32}}}
	Difference = Quantity{"temperature difference", []Unit{
		{Names: []string{"°C difference", "K", "degC difference", "C difference", "C°", "K difference", "°C diff"}},
		{Names: []string{"°F difference", "degF difference", "F difference", "F°", "°F diff"}, Per: 1.8}}}
	Length = Quantity{"length", []Unit{
		{Names: []string{"m", "metre", "metres", "meter", "meters"}}, {Names: []string{"mm", "millimetre", "millimetres"}, Per: 1000},
		{Names: []string{"cm", "centimetre", "centimetres"}, Per: 100},
		{Names: []string{"in", "inch", "inches", "\""}, Scale: 0.0254}, {Names: []string{"ft", "foot", "feet"}, Scale: 0.3048}}}
	Duration = Quantity{"duration", []Unit{
		{Names: []string{"s", "sec", "secs", "second", "seconds"}}, {Names: []string{"min", "mins", "minute", "minutes"}, Scale: 60},
		{Names: []string{"h", "hr", "hrs", "hour", "hours"}, Scale: 3600}, {Names: []string{"d", "day", "days"}, Scale: 86400},
		{Names: []string{"h:mm", "hh:mm", "[h]:mm"}, Scale: 3600}, {Names: []string{"mm:ss", "m:ss", "[mm]:ss", "min:s"}, Scale: 60}}}
	Volume = Quantity{"volume", []Unit{
		{Names: []string{"m³", "m3"}}, {Names: []string{"L", "l", "litre", "litres", "liter", "liters"}, Per: 1000},
		{Names: []string{"mL", "ml", "cm³"}, Per: 1e6}, {Names: []string{"US gal"}, Scale: 0.003785411784}}} // 231 in³, NIST SP 811 (2008) app. B
	Area = Quantity{"area", []Unit{
		{Names: []string{"m²", "sq m"}}, {Names: []string{"cm²"}, Per: 1e4}, {Names: []string{"in²", "sq in"}, Scale: 0.00064516}, {Names: []string{"ft²", "sq ft"}, Scale: 0.09290304}}}
	Film = Quantity{"film coefficient", []Unit{
		{Names: []string{"W/m²·K", "W/m2K", "W/(m2 K)", "W m-2 K-1", "W/m²°C", "W/m²/K"}},
		{Names: []string{"Btu/h·ft²·°F", "Btu/h/ft2/F", "BTU/hr ft2 F"}, Scale: 5.678263}}} // NIST SP 811 (2008) app. B.8
	Speed = Quantity{"speed", []Unit{
		{Names: []string{"m/s", "m s-1"}}, {Names: []string{"ft/min", "fpm"}, Scale: 0.00508}, {Names: []string{"ft/s", "fps", "ft s-1"}, Scale: 0.3048}, {Names: []string{"km/h"}, Per: 3.6}}}
	Conductivity = Quantity{"conductivity", []Unit{
		{Names: []string{"W/m·K", "W/mK", "W/(m K)", "W m-1 K-1", "W/m°C", "W/m/K"}},
		{Names: []string{"Btu/h·ft·°F", "BTU/hr ft F"}, Scale: 1.730735}}} // NIST SP 811 (2008) app. B.8
	Density = Quantity{"density", []Unit{
		{Names: []string{"kg/m³", "kg/m3", "kg m-3"}}, {Names: []string{"g/cm³", "g/mL", "kg/L"}, Scale: 1000}, {Names: []string{"lb/ft³"}, Scale: 16.01846}}} // NIST SP 811 (2008) app. B.8
	SpecificHeat = Quantity{"specific heat", []Unit{
		{Names: []string{"J/kg·K", "J/kgK", "J/(kg K)", "J kg-1 K-1", "J/kg°C", "J/kg/K"}}, {Names: []string{"kJ/kg·K", "kJ/kgK", "kJ/kg°C", "J/g·K", "J/g°C"}, Scale: 1000},
		{Names: []string{"Btu/lb·°F"}, Scale: 4186.8}}} // NIST SP 811 (2008) app. B.8, international table
	Resistance = Quantity{"thermal resistance", []Unit{
		{Names: []string{"m²K/W", "m2K/W", "m²·K/W", "m²°C/W", "K m²/W"}}}}
	Percent = Quantity{"percentage", []Unit{{Names: []string{"%", "percent", "per cent", "% RH", "%RH", "g/100 g"}}}}
	Number  = Quantity{"number", []Unit{{Names: []string{""}}}}
)
