// Package unit knows the quantities that a person may type, their units, and the way back.
// Units[0] of a quantity is what the program computes in.
package unit

// Unit is one unit of a quantity: computed = typed*Scale + Shift.
type Unit struct {
	Names []string // Names[0] is printed; the others are accepted spellings
	Scale float64
	Shift float64
}

// Name is the printed name.
func (u Unit) Name() string { return u.Names[0] }

// In turns a typed number into the unit that the program computes in.
func (u Unit) In(typed float64) float64 { return typed*u.Scale + u.Shift }

// Out turns a computed number into this unit.
func (u Unit) Out(computed float64) float64 { return (computed - u.Shift) / u.Scale }

// Quantity is something with a dimension.
type Quantity struct {
	Name  string
	Units []Unit
}

// Unit finds a unit of the quantity by any of its spellings; nil if it is none of them.
func (q Quantity) Unit(name string) *Unit {
	for i := range q.Units {
		for _, n := range q.Units[i].Names {
			if n == name {
				return &q.Units[i]
			}
		}
	}
	return nil
}

// Temperature and Difference are two quantities: a difference scales, it never shifts.
var (
	Temperature = Quantity{"temperature", []Unit{
		{Names: []string{"°C", "degC", "C", "℃"}, Scale: 1},
		{Names: []string{"°F", "degF", "F", "℉"}, Scale: 1 / 1.8, Shift: -32 / 1.8}}}
	Difference = Quantity{"temperature difference", []Unit{
		{Names: []string{"°C difference", "K"}, Scale: 1},
		{Names: []string{"°F difference"}, Scale: 1 / 1.8}}}
	Length = Quantity{"length", []Unit{
		{Names: []string{"m"}, Scale: 1}, {Names: []string{"mm"}, Scale: 1e-3}, {Names: []string{"cm"}, Scale: 1e-2},
		{Names: []string{"in", "inch", "inches", "\""}, Scale: 0.0254}, {Names: []string{"ft"}, Scale: 0.3048}}}
	Duration = Quantity{"duration", []Unit{
		{Names: []string{"s", "sec"}, Scale: 1}, {Names: []string{"min"}, Scale: 60},
		{Names: []string{"h", "hour", "hours"}, Scale: 3600}, {Names: []string{"d", "day", "days"}, Scale: 86400}}}
)
