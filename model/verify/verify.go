// Package verify holds problems whose answer is known from outside this program: closed forms, exact series and independent
// solutions, textbook problems, measured cooling. The tests, the command that verifies an installation and the report use the one list.
package verify

import "math"

// Case is one question with a known answer.
type Case struct {
	Name      string
	Area      string // one of Areas
	Source    string // where the answer comes from; never empty
	Unit      string // of Expected, Allowance and what Got returns
	Expected  float64
	Allowance float64 // the largest difference that passes
	Got       func() (float64, error)
	Problem   Problem // what is solved; without a shape where the case is about properties alone
}

// The areas, in the order of the list.
const (
	Series     = "series"
	Products   = "products of series"
	HalfSpace  = "half space"
	Ramp       = "rising medium"
	Chain      = "chain of steps"
	LongTime   = "long and short times"
	Spheroids  = "spheroids"
	Layers     = "layers"
	Following  = "changing properties"
	Freezing   = "freezing and thawing"
	Reference  = "reference problem"
	Benchmarks = "benchmark of other programs"
	Textbook   = "textbook problem"
	Properties = "properties"
	Practice   = "common practice"
	Measured   = "measured"
	Judging    = "limits" // in rules/known, which this package does not import
)

// Areas tells what each area is held to.
var Areas = []struct{ Name, Help string }{
	{Series, "uniform start, one step: slab, cylinder, sphere against exact series"},
	{Products, "short cylinder and brick against products of exact series"},
	{HalfSpace, "the first minutes near a face, against the closed form"},
	{Ramp, "a medium that rises steadily, against the exact integral"},
	{Chain, "other surroundings in every step, and the rise after the oven, against exact projections"},
	{LongTime, "the limits of long and short times"},
	{Spheroids, "against numerically exact solutions on the mapped ball"},
	{Layers, "a filling in its crust with an air gap against its exact series, and steady heat through three layers by hand"},
	{Following, "a food whose properties follow its temperature, against the exact Kirchhoff integral"},
	{Freezing, "ice that forms over a range, in slab, cylinder and sphere, against independent finite volumes; ice that forms at once, against Neumann and Plank"},
	{Reference, "whole chains in one, two and three directions, against independent solutions by two methods"},
	{Benchmarks, "heat in metal, that programs for engineers are held to: radiation, an end that warms and cools, two directions"},
	{Textbook, "problems with a printed answer; the allowance is that of the print"},
	{Properties, "properties from composition, against arithmetic on the published polynomials"},
	{Practice, "what every kitchen knows, with a wide allowance"},
	{Measured, "measured cooling, which no calculation meets better than food varies"},
	{Judging, "lethality of given courses against closed forms, and rows of published tables of time and temperature"},
}

// Result is what this program gives for a case.
type Result struct {
	Case Case
	Got  float64 // in the case's unit; NaN with an error
	Err  error
	Met  bool // Got is within the allowance
}

// Run works one case out.
func Run(c Case) Result {
	got, err := c.Got()
	if err != nil {
		return Result{Case: c, Got: math.NaN(), Err: err}
	}
	return Result{Case: c, Got: got, Met: math.Abs(got-c.Expected) <= c.Allowance}
}

// LongCases lists cases that take a few tenths of a second each, or more: for the command, not for every report.
func LongCases() []Case { return sharpCases() }

// Cases lists every other case, area by area.
func Cases() []Case {
	var all []Case
	for _, list := range [][]Case{seriesCases(), productCases(), halfSpaceCases(), rampCases(), chainCases(), limitCases(), spheroidCases(), layerCases(), followingCases(), freezingCases(), referenceCases(), benchmarkCases(), textbookCases(),
		propertyCases(), practiceCases(), measuredCases()} {
		all = append(all, list...)
	}
	return all
}
