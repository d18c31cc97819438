package model

import "slowpoint/model/cell"

// Span is one step as it ran.
type Span struct {
	Step        *Step
	StartS      float64 // from the start of the chain
	EndS        float64
	Reached     *bool        // for a step with Until: whether the slowest place reached it before the duration ran out
	PropsAtC    float64      // temperature at which the properties were taken; meaningless if Props is constant
	Props       Properties   // used throughout the step
	LayerProps  []Properties // layered slab: by layer from the top; Props are then those of a slab that conducts and holds as much; nil: no layers
	Films       []FilmUsed   // one a face with its own surroundings, at least one
	MediumFromC *float64     // lowest medium as typed, where it was raised to the freezing point; nil otherwise
	MediumToC   *float64     // what it was raised to
	Method      string       // ExactInTime or Marched; "" for a record
}

// How a step was solved.
const (
	ExactInTime = "exact in time"
	Marched     = "marched"
)

// FilmUsed tells how a face met its surroundings in a step.
type FilmUsed struct {
	Face    *Face   // nil: the whole surface
	FilmW   float64 // film coefficient, W/(m²·K); +Inf for held
	TotalW  float64 // with wrap or contact in series
	LeastW  float64 // smallest and largest FilmW of the step where it followed the surface, and FilmW is that of the start; 0 where it is constant
	MostW   float64
	Typed   bool   // the film coefficient was typed by the user
	Source  string // of a stated coefficient or correlation, with the film conditions
	Caution string // e.g. that a stated coefficient is assumed; "" if none
}

// History is the temperature of every place in a food from the start of the chain to its end.
// A prediction and a probe record are the same type.
type History struct {
	Product  *Product // whose temperatures they are, for the words about places; nil for a record
	Spans    []Span
	Recorded bool // a probe record: only the places of Points exist
	// At gives the temperature in °C of a place at t seconds from the start of the chain:
	// exact for a prediction (within ErrorK), straight segments for a record. Times outside the chain give its ends.
	At func(p Place, t float64) float64
	// Course is At for many rising times at once, and cheaper; it fills out, which is as long as times.
	Course func(p Place, times, out []float64)
	// MediumC gives the temperature of the main surroundings (the step's own row) at t; NaN where there is none.
	// At the instant of a change: the one before the change.
	MediumC func(t float64) float64
	// HumidityPc gives the stated relative humidity (%) at t; NaN where none was stated.
	HumidityPc func(t float64) float64

	Points []Point // "centre" first, then the user's
	ErrorK float64 // honest estimate of the largest error at any place, from ErrorFromS after each change of surroundings
	// ErrorFromS is half a minute at most, s, but for large foods that are marched in two or three directions, whose edges take minutes.
	ErrorFromS float64
	IceMoves   bool   // ice may form or melt: ErrorK leaves out the places beside its front, which change by degrees in seconds
	Method     string // in words, for the report
	// Warnings are what only the calculation shows and what makes its result doubtful: food that is hotter than boiling water throughout (Boils),
	// or beyond the range of its components' properties (Beyond), or a step that is over at once.
	Warnings      cell.Errors
	Boils, Beyond bool
	// Bound says in words why temperatures are bounds from BoundFromS on (a chill medium raised to the freezing point:
	// the true food is at or below them until it freezes); "" if they are not.
	Bound      string
	BoundFromS float64

	scan   *Scan
	body   *body
	field  field
	hull   [][2]float64 // by span: the range of the food
	knots  [][]float64  // by span: instants in it at which the slope of a medium changes
	settle float64      // s after a change from which ErrorK holds

	settling   []settles // beginnings of steps at which swings are kept within bounds
	settleScan func(*Scan)
}

// EndS is the end of the chain, in s.
func (h *History) EndS() float64 {
	if len(h.Spans) == 0 {
		return 0
	}
	return h.Spans[len(h.Spans)-1].EndS
}

// Spot is a place of a scan.
type Spot struct {
	Place
	Surface bool // it lies on the surface
	Axes    Axes
}

// Axes are the coordinates of a place along which the spots of a scan are a grid and the food has no corners missing: Up, Across and Along in m, and in
// a spheroid the share of the way out and the one from the equator to the poles, both times its greatest half axis, m.
type Axes [3]float64

// Axes gives the coordinates of a place; one outside a spheroid is moved to its surface.
func (h *History) Axes(p Place) Axes {
	if b := h.body; b != nil && b.ball != nil {
		x := b.coord(p)
		return Axes{x[0] * b.ball.reach(), x[1] * b.ball.reach()}
	}
	return Axes{p.UpM, p.AcrossM, p.AlongM}
}

// PlaceAt is the inverse of Axes.
func (h *History) PlaceAt(x Axes) Place {
	if b := h.body; b != nil && b.ball != nil {
		return b.place(coord{x[0] / b.ball.reach(), x[1] / b.ball.reach()})
	}
	return Place{UpM: x[0], AcrossM: x[1], AlongM: x[2]}
}

// Scan is a first look at a history: places close enough that the least favourable one lies beside one of them,
// instants close enough that a course is nearly straight between two. Decide with At, not with a scan.
type Scan struct {
	TimesS []float64
	Spots  []Spot
	C      [][]float64 // C[spot][time], °C
}

// Samples are what the results file holds.
type Samples struct {
	TimesS           []float64
	Coldest, Hottest []float64 // over the whole product
	Mean             []float64 // volume mean
	ColdestAt        []Place
	HottestAt        []Place
	Points           [][]float64 // Points[i] belongs to History.Points[i]
}

// Options of Solve; the zero value is the usual.
type Options struct {
	ConductivityFactor float64 // multiplies every conductivity; 0 = 1
	// ErrorFromS is the time after each change of surroundings from which the error is held and stated, s; 0 = 30 s, or sooner for
	// small foods. Who needs later times only gets them with fewer polynomials. Of short steps a quarter is the most.
	ErrorFromS float64
	// Rough asks for a first look at what has to be marched: once, with few nodes and long steps, at a quarter of the cost. Its error is
	// stated as roughK. What is solved exactly is not affected.
	Rough bool
}
