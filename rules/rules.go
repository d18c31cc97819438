// Package rules judges a history of temperatures, predicted or recorded, against limits that the user entered.
// Units: °C, s; kinds state their own unit of value. It never supplies a limit and never says more than the numbers do.
package rules

import (
	"math"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// Verdict on one limit. The zero value is CannotTell.
type Verdict int

const (
	CannotTell Verdict = iota
	Met
	NotMet
	NotApplicable
)

// String is the word of the report and of results.json.
func (v Verdict) String() string {
	return [...]string{"cannot tell", "met", "not met", "not applicable"}[v]
}

// Applies says whom a limit is for: exactly one of the three.
type Applies struct {
	All     bool
	Family  string
	Product string
}

// Where says which places a limit is about.
type Where struct {
	Name string // as typed or "every point": every point, surface, centre, medium, or the name of a row of Points
}

// Compare is an operator as the code prints it.
type Compare int

const (
	Usual    Compare = iota // the kind's own
	AtLeast                 // >=
	MoreThan                // >
	AtMost                  // <=
	LessThan                // <
)

// Counting says how periods add up; there is no default where a kind uses it.
type Counting int

const (
	NotCounted Counting = iota // blank
	Total
	Continuous
	Once
)

// Clock is when a limit's time starts to run.
type Clock struct {
	Crossing bool         // of From, or of AtC if given
	AtC      *float64     // crossing of N °C
	Start    *model.Stage // stage start: NAME
	End      *model.Stage // stage end: NAME
}

// Row is a row of a time-temperature table.
type Row struct {
	At    cell.Ref
	C     float64 // °C
	S     float64 // s; 0 = met when reached once
	Typed string  // "145 °F, 4 min": as typed, the master
}

// Table is a set of rows of which any may be met; never interpolated.
type Table struct {
	At   cell.Ref
	Name string
	Rows []Row
}

// Limit is one row of the sheet Limits. Nil pointers are blanks; temperatures in °C exactly converted from the typed unit.
type Limit struct {
	At                              cell.Ref
	Name                            string
	Kind                            *Kind
	Stages                          []*model.Stage // none: the whole chain
	Then                            *model.Stage   // delay: the second stage of the pair; Stages holds the first
	Applies                         Applies
	Where                           Where
	FromC                           *float64
	ToC                             *float64
	TimeS                           *float64
	SecondS                         *float64
	Clock                           Clock
	Counting                        Counting
	Compare                         Compare // temperatures
	CompareTime                     Compare
	ReferenceC                      *float64
	ZK                              *float64 // K, below the reference temperature
	ZAboveK                         *float64 // K, above it; nil: the same
	DS                              *float64 // s
	Logs                            *float64
	AllowanceK                      *float64
	HumidityPc                      *float64
	SharePc                         *float64
	Table                           *Table
	Answer                          string // as typed
	Group                           string
	Advice                          bool // Level: advice; false: must
	CCP, Hazard, Status             string
	Code, Clause, Edition, IssuedBy string
	ConfirmedBy, ConfirmedOn, Note  string
	Unreadable                      string            // what in its row could not be used, in words; such a limit cannot be told. "" for a sound row
	Typed                           map[string]string // column heading without unit -> value with its unit as typed ("130 °F")
}

// Group joins limits and groups.
type Group struct {
	At     cell.Ref
	Name   string
	AnyOf  bool   // false: all of
	Within string // another group; "" for none
}

// Finding is what a limit says of a history.
type Finding struct {
	Limit       *Limit
	Level       string // must, advice, alternative
	Verdict     Verdict
	Value       *float64 // in Unit
	Required    *float64 // in Unit
	Unit        string   // min, °C, log10, K, 1, or "" for stated
	MarginK     *float64 // room in the limit's own temperature; negative: lacking
	MarginPlace string   // the place of MarginK in words where it is not Place; "" elsewhere
	MarginS     *float64 // room in time; negative: lacking
	EdgeOf      string   // "60 °C": Place lies at the edge of those that ever were above it, beyond which no clock started; "" elsewhere
	AtS         *float64 // deciding time from the start of the chain
	Place       *model.Place
	PlaceName   string // every point: where in words ("centre", "surface", "14 mm above the underside"); the typed Where otherwise
	ClockStartS *float64
	ClockEndS   *float64
	Cells       []cell.Ref // the limit's cell first, then the step's or record's
	Why         string     // one sentence
	Notes       []string   // e.g. rose above From again at 3 h 05 min
	Cautions    []string   // keys of the report's cautions: "slow come-up lethality", "lethality without floor", "below 60 °C table row", …
	CarryOver   string     // that the limit is met only by what the food gets after its heating, in a sentence with numbers; "" elsewhere
	StillWarm   string     // of a limit on cooling that did not apply though the food was warm enough: how warm, in a clause; "" elsewhere
	Goes        int        // how the course of Place goes through the temperatures of the limit; where it differs between two runs there is an edge between them
	Run         string     // the further run that this is the finding of; "" for the usual one
}

// Same tells whether two findings on one limit say the same: verdict, level, value and margins, but for the last digits.
func (f *Finding) Same(g *Finding) bool {
	alike := func(a, b *float64) bool {
		return (a == nil) == (b == nil) && (a == nil || *a == *b || math.Abs(*a-*b) <= 1e-6*(1+math.Abs(*a)))
	}
	return f.Verdict == g.Verdict && f.Level == g.Level && alike(f.Value, g.Value) && alike(f.MarginK, g.MarginK) && alike(f.MarginS, g.MarginS)
}

// GroupFinding is what a group of limits says.
type GroupFinding struct {
	Group     string
	AnyOf     bool
	Verdict   Verdict
	DecidedBy string // limit or group name
	Members   []Member
}

// Member is a limit or a group within a group, with its own verdict.
type Member struct {
	Name    string
	Verdict Verdict
}

// The further runs of a product, besides the usual one.
const (
	LowConductivity = "low"   // at 0.9 of the conductivity, where that comes from composition
	WellMixed       = "mixed" // stirred all the time, where the food may mix by itself; the usual run is then the one as conducting
)

// Run is a further run of a product.
type Run struct {
	Name    string // LowConductivity, WellMixed
	History *model.History
}

// Subject is what is judged: a product with its history, and further runs where they were due; the worst finding on each limit counts.
type Subject struct {
	Product string
	Family  string
	History *model.History
	Further []Run
	Drift   func(model.Drift) ([]Run, error) // the runs of its steps taken to a side (model.Drifted), asked for only where a limit needs them; nil, or of none: none
	Enough  func([]Finding) bool             // tells whether findings are enough without those; nil: they never are
}

// Judgement is everything that the limits say of a product.
type Judgement struct {
	Verdict  Verdict
	Why      string // for a verdict without findings: "no limit judged", and why those that there are did not apply
	Findings []Finding
	Groups   []GroupFinding
}
