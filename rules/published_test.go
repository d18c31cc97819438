package rules

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/testdata/measured"
	"slowpoint/testdata/published"
)

// printed is a published course of a core, as a sparse record of a chill whose beginning is its clock.
type printed struct {
	name      string
	r         *model.Recording
	stated    bool // the range of the surroundings is printed
	low, high float64
}

// printedCourses are the published courses of testdata/measured.
func printedCourses(t testing.TB) []printed {
	var out []printed
	for _, row := range measured.Courses(t) {
		p := printed{name: row["course"], r: &model.Recording{Point: model.Point{Name: "slowest point"}, LowC: math.NaN(), HighC: math.NaN()}}
		if row["low"] != "" {
			p.stated, p.low, p.high = true, published.Number(t, row["low"]), published.Number(t, row["high"])
		}
		for _, w := range strings.Fields(row["points"]) {
			h, x, _ := strings.Cut(w, ":")
			p.r.TimesS, p.r.C = append(p.r.TimesS, 3600*published.Number(t, h)), append(p.r.C, published.Number(t, x))
		}
		if n := len(p.r.C); n < 3 || row["source"] == "" || row["evidence"] != "SEEN" {
			t.Fatalf("%s: %d points of %q (%s)", p.name, n, row["source"], row["evidence"])
		}
		p.r.Spans = chain(t, fmt.Sprintf("cool 0-%g", p.r.TimesS[len(p.r.C)-1]/60))
		out = append(out, p.gapped())
	}
	return out
}

// gapped is a course with the gaps that a reader of its file finds.
func (p printed) gapped() printed {
	r := *p.r
	r.Gaps = nil
	most := model.MostApartS(model.UsualStep(r.TimesS))
	for i := 1; i < len(r.TimesS); i++ {
		if r.TimesS[i]-r.TimesS[i-1] > most+sameS {
			r.Gaps = append(r.Gaps, i-1)
		}
	}
	p.r = &r
	return p
}

// without leaves a reading out.
func (p printed) without(k int) printed {
	r := *p.r
	r.TimesS = append(append([]float64(nil), r.TimesS[:k]...), r.TimesS[k+1:]...)
	r.C = append(append([]float64(nil), r.C[:k]...), r.C[k+1:]...)
	p.r = &r
	return p.gapped()
}

// inAir is a course beside the surroundings that are printed: as a record of them, at each end of their range in turn, or as no more than that
// range.
func (p printed) inAir(recorded bool) printed {
	r := *p.r
	if p.stated && !recorded {
		r.LowC, r.HighC = p.low, p.high
	}
	if p.stated && recorded {
		r.Medium = &model.Trace{Point: model.Point{Name: "medium"}}
		end := r.Spans[0].EndS
		for n := 0; n <= 200; n++ {
			r.Medium.TimesS, r.Medium.C = append(r.Medium.TimesS, end*float64(n)/200), append(r.Medium.C, []float64{p.high, p.low}[n%2])
		}
	}
	p.r = &r
	return p
}

// Each inner point of a published course lies within what the course without it allows in the gap; and it is known which courses nothing
// bounds: of chills whose first reading is followed by a gap, a record of the air alone bounds none, for the roast may have been hotter
// outside.
func TestPublishedPointsLieWithinGaps(t *testing.T) {
	bounded := map[string]int{}
	left := 0
	for _, p := range printedCourses(t) {
		for k := 1; k+1 < len(p.r.C); k++ {
			at, c := p.r.TimesS[k], p.r.C[k]
			left++
			for _, way := range []struct {
				name   string
				course printed
			}{{"nothing", p.without(k)}, {"range", p.without(k).inAir(false)}, {"record", p.without(k).inAir(true)}} {
				in := false
				for _, g := range newTube(way.course.r, nil).gaps {
					if at < g.a || at > g.b {
						continue
					}
					in = true
					if c < g.lo || c > g.hi {
						t.Errorf("%s, surroundings by %s: %g °C at %g h, and the gap from %g h to %g h is held between %g and %g °C", p.name, way.name, c, at/3600, g.a/3600, g.b/3600, g.lo, g.hi)
					}
					if !g.bare() {
						bounded[way.name]++
					} else if way.name == "range" {
						t.Logf("%s: nothing bounds the gap over %g h", p.name, at/3600)
					}
				}
				if !in { // between usual readings it runs from one to the other
					lo, hi := math.Min(p.r.C[k-1], p.r.C[k+1]), math.Max(p.r.C[k-1], p.r.C[k+1])
					if c < lo || c > hi {
						t.Errorf("%s: %g °C at %g h lies outside its neighbours, and without it no gap is seen", p.name, c, at/3600)
					}
				}
			}
		}
	}
	t.Logf("%d points left out; bounded: %v", left, bounded)
	if bounded["nothing"] > 0 || bounded["range"] < 20 || left < 30 {
		t.Errorf("%d points left out; bounded: %v", left, bounded)
	}
}

// allows is what a printed course allows between two points: by itself anything over an hour or three times the usual, and in a stated range
// of the surroundings no more than all that was read up to there and they, or than its beginning where the core was seen to fall before.
func (p printed) allows(i int) region {
	r := p.r
	a := region{lo: math.Min(r.C[i], r.C[i+1]), hi: math.Max(r.C[i], r.C[i+1])}
	for _, g := range r.Gaps {
		if g != i {
			continue
		}
		if math.IsNaN(r.LowC) {
			return region{lo: anyLowC, hi: anyHighC}
		}
		a.lo, a.hi = math.Min(a.lo, r.LowC), math.Max(a.hi, r.HighC)
		top := math.Inf(-1)
		for _, c := range r.C[:i+1] {
			a.lo, top = math.Min(a.lo, c), math.Max(top, c)
		}
		if seen := r.Gaps[0] == i && r.C[i] < top-1 && r.HighC < r.C[i]; !seen { // a core that was seen to fall beside colder air is the hottest place
			a.hi = math.Max(a.hi, top)
		}
	}
	return a
}

// provable is a limit, with what the points prove of it by themselves: surely met, surely not.
type provable struct {
	l           Limit
	met, missed bool
}

// first is the time before the first point of a course whose clock starts earlier, s.
func (p printed) first() float64 { return p.r.TimesS[0] }

// ask makes the limits that a course is judged by, each judged by its points alone.
func (p printed) ask() []provable {
	r, n := p.r, len(p.r.C)
	var out []provable
	late := p.first() > 0 // what came before is not read
	spent := func(in func(a region) bool) (s float64) {
		for i := 0; i+1 < n; i++ {
			if in(p.allows(i)) {
				s += r.TimesS[i+1] - r.TimesS[i]
			}
		}
		return s
	}
	for _, x := range []float64{4, 11, 30, 55, 65, 90} {
		top, bottom := math.Inf(-1), math.Inf(1)
		highest, lowest := math.Inf(-1), math.Inf(1)
		for i := 0; i < n; i++ {
			highest, lowest = math.Max(highest, r.C[i]), math.Min(lowest, r.C[i])
			if i+1 < n {
				a := p.allows(i)
				top, bottom = math.Max(top, a.hi), math.Min(bottom, a.lo)
			}
		}
		if late {
			top, bottom = anyHighC, anyLowC
		}
		out = append(out, provable{Limit{Kind: StayBelow, ToC: c(x)}, top <= x, highest > x},
			provable{Limit{Kind: Hold, ToC: c(x), TimeS: c(0), Counting: Total}, lowest <= x, bottom > x},
			provable{Limit{Kind: ByTheEnd, ToC: c(x)}, r.C[n-1] <= x, r.C[n-1] > x})
		for _, hours := range []float64{0.3, 3, 12} {
			most := p.first() + spent(func(a region) bool { return a.hi >= x })
			least := spent(func(a region) bool { return a.lo >= x })
			out = append(out, provable{Limit{Kind: Hold, FromC: c(x), TimeS: c(3600 * hours), Counting: Total}, least >= 3600*hours, most < 3600*hours})
		}
	}
	for _, b := range [][2]float64{{5, 60}, {20, 45}, {10, 65}} {
		for _, hours := range []float64{0.3, 2, 6, 15, 22} {
			most := p.first() + spent(func(a region) bool { return a.hi > b[0] && a.lo < b[1] })
			least := spent(func(a region) bool { return a.lo > b[0] && a.hi < b[1] })
			out = append(out, provable{Limit{Kind: Band, FromC: c(b[0]), ToC: c(b[1]), TimeS: c(3600 * hours), Counting: Total}, most <= 3600*hours, least > 3600*hours})
			met, missed := p.cooled(b[1], b[0], 3600*hours)
			out = append(out, provable{Limit{Kind: CoolWithin, FromC: c(b[1]), ToC: c(b[0]), TimeS: c(3600 * hours), Clock: Clock{Crossing: true}}, met, missed})
		}
	}
	return out
}

// cooled tells what the points prove of a fall from one temperature to another, by the earliest and the latest that each can have been.
func (p printed) cooled(from, to, s float64) (met, missed bool) {
	r, n := p.r, len(p.r.C)
	top := 0
	for i, c := range r.C {
		if c > r.C[top] {
			top = i
		}
	}
	// the clock starts after the peak: that is the highest point, or in a gap that leaves room for more
	earliest, latest, elsewhere := math.Inf(1), 0.0, p.first() > 0
	for i := 0; i+1 < n; i++ {
		elsewhere = elsewhere || p.allows(i).hi > r.C[top]
	}
	for i := 0; i+1 < n; i++ {
		a := p.allows(i)
		if a.hi > from && a.lo <= from && (elsewhere || i >= top && latest == 0) { // it may fall past in here
			if earliest = math.Min(earliest, r.TimesS[i]); elsewhere || r.C[i+1] <= from {
				latest = r.TimesS[i+1]
			}
		}
	}
	if p.first() > 0 {
		earliest = 0
	}
	// from when it may be down for good, and from when it surely is
	soonest, last := 0.0, math.Inf(1)
	if r.C[n-1] <= to {
		k := n - 1
		for k > 0 && r.C[k-1] <= to {
			k--
		}
		if k > 0 {
			soonest = r.TimesS[k-1]
		}
		k = n - 1
		for k > 0 && p.allows(k-1).hi <= to {
			k--
		}
		last = r.TimesS[k]
	} else {
		soonest = r.TimesS[n-1]
	}
	return r.C[top] > from && last-earliest <= s, r.C[top] > from && soonest-latest > s
}

// The program never says met of a published course where its points do not prove it, nor not met where they do not; and says either where they
// do.
func TestPublishedCoursesJudged(t *testing.T) {
	count := map[string]int{}
	for _, whole := range printedCourses(t) {
		for _, p := range []printed{whole, whole.inAir(false)} {
			for _, a := range p.ask() {
				f := found(t, a.l, p.r)
				count[fmt.Sprint(f.Verdict)]++
				proved := f.Verdict == Met && a.met || f.Verdict == NotMet && a.missed
				if (f.Verdict == Met || f.Verdict == NotMet) && !proved {
					t.Errorf("%s (surroundings %g to %g): %s %v: %v, and the points prove met %v, not met %v: %s", p.name, p.r.LowC, p.r.HighC, a.l.Kind.Name, numbers(a.l), f.Verdict, a.met, a.missed, f.Why)
				}
				if a.met && f.Verdict == NotMet || a.missed && f.Verdict == Met {
					t.Errorf("%s: %s %v: %v against the points", p.name, a.l.Kind.Name, numbers(a.l), f.Verdict)
				}
				if (a.met || a.missed) && f.Verdict == CannotTell {
					t.Errorf("%s: %s %v: the points prove met %v, not met %v: %s", p.name, a.l.Kind.Name, numbers(a.l), a.met, a.missed, f.Why)
				}
			}
		}
	}
	t.Logf("%v", count)
	for _, v := range []Verdict{Met, NotMet, CannotTell} {
		if count[fmt.Sprint(v)] < 100 {
			t.Errorf("%v came %d times: %v", v, count[fmt.Sprint(v)], count)
		}
	}
}

// numbers are From, To and Time of a limit, °C and h.
func numbers(l Limit) string {
	s := ""
	for _, x := range []*float64{l.FromC, l.ToC} {
		if x == nil {
			s += "- "
		} else {
			s += fmt.Sprintf("%g ", *x)
		}
	}
	if l.TimeS != nil {
		s += fmt.Sprintf("%g h", *l.TimeS/3600)
	}
	return s
}
