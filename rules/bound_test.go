package rules

import (
	"fmt"
	"math"
	"math/rand"
	"strings"
	"testing"

	"slowpoint/model"
)

// boundCase is a kind with an operator, and which verdicts a bound may carry where the limit turns on what comes after it begins:
// some may stand (M met, N not met), others never. A stated or timed condition has nothing to do with temperatures.
type boundCase struct {
	name  string
	limit func(r draw) Limit
	may   string
}

// draw gives random figures of a limit.
type draw struct{ rnd *rand.Rand }

func (r draw) c(lo, hi float64) *float64 { return c(lo + (hi-lo)*r.rnd.Float64()) }
func (r draw) min(hi int) *float64       { return min_(float64(1 + r.rnd.Intn(hi))) }
func (r draw) compare(x Compare) Compare { return []Compare{Usual, x}[r.rnd.Intn(2)] }
func (r draw) event() Clock {
	return []Clock{{Start: model.Cook}, {End: model.Cook}, {Start: model.Store}}[r.rnd.Intn(3)]
}
func (r draw) stages() []*model.Stage {
	return [][]*model.Stage{nil, st(model.Store)}[r.rnd.Intn(2)]
}
func (r draw) table() *Table {
	return &Table{Name: "T", Rows: []Row{{C: *r.c(40, 55), S: 300 + *r.min(150)}, {C: *r.c(55, 65), S: 300 + *r.min(60)}, {C: *r.c(65, 75), S: 300 + *r.min(20)}}}
}

func boundCases() []boundCase {
	counting := func(kind string, may [3]string, limit func(r draw) Limit) []boundCase {
		var cs []boundCase
		for i, n := range []Counting{Total, Continuous, Once} {
			n := n
			cs = append(cs, boundCase{kind + []string{", total", ", continuous", ", once"}[i], func(r draw) Limit { l := limit(r); l.Counting = n; return l }, may[i]})
		}
		return cs
	}
	both := [3]string{"MN", "MN", "MN"}
	cs := []boundCase{
		{"hold at or above, reached once", func(r draw) Limit { return Limit{Kind: Hold, FromC: r.c(40, 72), TimeS: c(0), Counting: Total} }, "MN"},
		{"hold at or below, reached once", func(r draw) Limit { return Limit{Kind: Hold, ToC: r.c(-5, 15), TimeS: c(0), Counting: Total} }, "M"},
		{"lethality", func(r draw) Limit {
			return Limit{Kind: Lethality, FromC: r.c(45, 55), ReferenceC: c(65), ZK: c(7.5), TimeS: r.min(60)}
		}, "MN"},
		{"cool from an event", func(r draw) Limit {
			return Limit{Kind: CoolWithin, ToC: r.c(5, 40), TimeS: r.min(250), Clock: r.event(), Compare: r.compare(LessThan)}
		}, "MN"},
		{"cool from a crossing", func(r draw) Limit {
			return Limit{Kind: CoolWithin, FromC: r.c(45, 70), ToC: r.c(5, 40), TimeS: r.min(250), Clock: crossing, CompareTime: r.compare(LessThan)}
		}, "MN"},
		{"heat from an event", func(r draw) Limit {
			return Limit{Kind: HeatWithin, ToC: r.c(45, 70), TimeS: r.min(200), SecondS: r.min(10), Clock: r.event()}
		}, "MN"},
		{"heat from a crossing", func(r draw) Limit {
			return Limit{Kind: HeatWithin, FromC: r.c(10, 40), ToC: r.c(45, 70), TimeS: r.min(60), Clock: crossing}
		}, "MN"},
		{"stay above", func(r draw) Limit { return Limit{Kind: StayAbove, Stages: st(model.Store), FromC: r.c(20, 60)} }, "N"},
		{"stay below", func(r draw) Limit { return Limit{Kind: StayBelow, Stages: r.stages(), ToC: r.c(5, 60)} }, "MN"},
		{"outside", func(r draw) Limit {
			x := 40 * r.rnd.Float64()
			return Limit{Kind: Outside, Stages: r.stages(), FromC: &x, ToC: c(x + 15), Compare: r.compare(MoreThan)}
		}, "MN"},
		{"at or above by the end", func(r draw) Limit { return Limit{Kind: ByTheEnd, Stages: st(model.Store), FromC: r.c(10, 60)} }, "N"},
		{"at or below by the end", func(r draw) Limit { return Limit{Kind: ByTheEnd, Stages: st(model.Store), ToC: r.c(10, 60)} }, "M"},
		{"at or above after an event", func(r draw) Limit {
			return Limit{Kind: ByTheEnd, FromC: r.c(10, 60), TimeS: r.min(150), Clock: r.event()}
		}, "MN"},
		{"at or below after an event", func(r draw) Limit {
			return Limit{Kind: ByTheEnd, ToC: r.c(10, 60), TimeS: r.min(150), Clock: r.event()}
		}, "MN"},
		{"at or above after a crossing", func(r draw) Limit {
			return Limit{Kind: ByTheEnd, FromC: r.c(10, 60), TimeS: r.min(100), Clock: Clock{Crossing: true, AtC: r.c(45, 70)}}
		}, "MN"},
		{"at or below after a crossing", func(r draw) Limit {
			return Limit{Kind: ByTheEnd, ToC: r.c(10, 60), TimeS: r.min(100), Clock: Clock{Crossing: true, AtC: r.c(45, 70)}}
		}, "MN"},
		{"delay", func(r draw) Limit {
			return Limit{Kind: Delay, Stages: st(model.Cook), Then: model.Store, TimeS: r.min(150)}
		}, "MN"},
		{"duration", func(r draw) Limit {
			return Limit{Kind: Duration, Stages: st(model.Store), TimeS: r.min(150), CompareTime: []Compare{AtLeast, AtMost}[r.rnd.Intn(2)]}
		}, "MN"},
		{"falling", func(r draw) Limit {
			return Limit{Kind: Falling, Stages: st(model.Cool, model.Store), AllowanceK: r.c(0, 10)}
		}, "N"},
		{"freeze", func(r draw) Limit {
			return Limit{Kind: FreezeHold, FromC: r.c(20, 60), TimeS: r.min(15), ToC: r.c(10, 40), SecondS: r.min(200)}
		}, "MN"},
		{"stated", func(r draw) Limit { return Limit{Kind: Stated, Answer: []string{"yes", "no"}[r.rnd.Intn(2)]} }, "MN"},
	}
	for _, more := range [][]boundCase{
		counting("hold at or above", both, func(r draw) Limit {
			return Limit{Kind: Hold, FromC: r.c(30, 70), TimeS: r.min(120), Compare: r.compare(MoreThan)}
		}),
		counting("hold at or below", both, func(r draw) Limit { return Limit{Kind: Hold, ToC: r.c(5, 60), TimeS: r.min(200)} }),
		counting("hold table", both, func(r draw) Limit { return Limit{Kind: HoldTable, Table: r.table()} }),
		counting("band", both, func(r draw) Limit { return Limit{Kind: Band, FromC: r.c(5, 35), ToC: r.c(40, 65), TimeS: r.min(250)} }),
		counting("stay above with a time", [3]string{"N", "N", "N"}, func(r draw) Limit {
			return Limit{Kind: StayAbove, FromC: r.c(20, 65), TimeS: r.min(200), CompareTime: r.compare(LessThan)}
		}),
		counting("stay below with a time", both, func(r draw) Limit {
			return Limit{Kind: StayBelow, ToC: r.c(5, 65), TimeS: r.min(250), Compare: r.compare(LessThan)}
		}),
	} {
		cs = append(cs, more...)
	}
	return cs
}

// boundedCourse is a random course through a cook, a chill and a store of 300 min: a knot each 5 min, up and down in all of them.
func boundedCourse(rnd *rand.Rand) []float64 {
	cs := make([]float64, 61)
	x, to := 5+60*rnd.Float64(), 75*rnd.Float64()
	for i := range cs {
		switch {
		case rnd.Intn(8) == 0:
			to = 75*rnd.Float64() - 5*rnd.Float64()
		case i == 0 && rnd.Intn(2) == 0, i < 12 && rnd.Intn(6) == 0:
			to = 60 + 20*rnd.Float64()
		}
		x += (0.1 + 0.4*rnd.Float64()) * (to - x)
		cs[i] = math.Round(100*x) / 100
	}
	return cs
}

// colder is a random course at or below another from a knot on, and equal to it before.
func colder(rnd *rand.Rand, shown []float64, from int) []float64 {
	cs := append([]float64(nil), shown...)
	less := 0.0
	for i := from + 1; i < len(cs); i++ {
		switch rnd.Intn(6) {
		case 0:
			less = 0
		case 1:
			less = 3 * rnd.Float64()
		case 2:
			less = 60 * rnd.Float64()
		}
		cs[i] = math.Round(100*(cs[i]-less)) / 100
	}
	return cs
}

func courseWords(cs []float64) string {
	var s []string
	for i, x := range cs {
		s = append(s, fmt.Sprintf("%d:%g", 5*i, x))
	}
	return strings.Join(s, " ")
}

// No verdict on a bound is contradicted by any course at or below it: what is met stays met or does not apply, what is not met
// stays not met. And a bound carries the verdicts that it may: each is seen to stand for some limit that turns on what follows.
func TestVerdictsOfABound(t *testing.T) {
	kinds := map[*Kind]bool{}
	for _, tt := range boundCases() {
		kinds[tt.limit(draw{rand.New(rand.NewSource(1))}).Kind] = true
		t.Run(tt.name, func(t *testing.T) {
			rnd := rand.New(rand.NewSource(3))
			stood := map[Verdict]int{}
			for n := 0; n < 300; n++ {
				shown, from := boundedCourse(rnd), 6+rnd.Intn(40)
				l := tt.limit(draw{rnd})
				const spans = "cook 0-100, cool 100-180, store 180-300"
				h := record(t, spans, courseWords(shown))
				h.ErrorK = 0.1 * float64(rnd.Intn(2))
				h.Bound, h.BoundFromS = "air raised", float64(300*from)
				f := one(t, l, h)
				if f.Verdict != Met && f.Verdict != NotMet {
					continue
				}
				if len(l.Stages) == 0 || h.BoundFromS < 180*60 {
					stood[f.Verdict]++
				}
				for k := 0; k < 4; k++ {
					cold := colder(rnd, shown, from)
					g := one(t, l, record(t, spans, courseWords(cold)))
					if g.Verdict != f.Verdict && !(f.Verdict == Met && g.Verdict == NotApplicable) {
						t.Fatalf("%v as a bound from %d min, %v for a course below it:\n%s\n%s\n%s\n%s", f.Verdict, 5*from, g.Verdict, f.Why, g.Why, courseWords(shown), courseWords(cold))
					}
				}
			}
			for mark, v := range map[string]Verdict{"M": Met, "N": NotMet} {
				if may := strings.Contains(tt.may, mark); may && stood[v] < 1 {
					t.Errorf("%v never stood", v)
				} else if !may && stood[v] > 0 {
					t.Errorf("%v stood %d times, and may never", v, stood[v])
				}
			}
		})
	}
	for _, k := range Kinds {
		if !kinds[k] && k != Humidity { // it is of the surroundings, as stated
			t.Errorf("%s is not held to it", k.Name)
		}
	}
}
