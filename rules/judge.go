package rules

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"slowpoint/model"
)

// same compares two words as a person would: without regard to case and surrounding blanks.
func same(a, b string) bool { return strings.EqualFold(strings.TrimSpace(a), strings.TrimSpace(b)) }

// Judge holds a subject against the limits that apply to it, in the order given.
func Judge(limits []Limit, groups []Group, s Subject) Judgement {
	return Conclude(Find(limits, s), groups)
}

// Conclude joins findings, one for each limit in its order, into a judgement.
func Conclude(findings []Finding, groups []Group) Judgement {
	j := Judgement{Findings: findings}
	j.join(groups)
	j.conclude()
	return j
}

// Find judges each limit that applies to a subject, in the order given, before groups join them.
func Find(limits []Limit, s Subject) []Finding {
	var out []Finding
	usual := newCourses(s.History)
	further := make([]*courses, len(s.Further))
	for i := range s.Further {
		further[i] = newCourses(s.Further[i].History)
	}
	for i := range limits {
		l := &limits[i]
		if !l.Applies.to(s) {
			continue
		}
		f := judgeHot(l, usual)
		for k, c := range further {
			g := judgeHot(l, c)
			g.Run = s.Further[k].Name
			if lessFavourable(g, f) {
				f, g = g, f
			}
			f.narrowed(&g, say("note margin run", nil))
			if f.Verdict == Met && f.CarryOver == "" && g.CarryOver != "" { // true of one run is a reservation for both
				f.carriedOver(g.CarryOver)
			}
		}
		out = append(out, f)
	}
	if s.Drift == nil || s.Enough != nil && s.Enough(out) {
		return out
	}
	drifts := map[model.Drift]drift{}
	for i := range out {
		s.weighDrift(&out[i], drifts)
	}
	return out
}

// weighDrift weighs a finding against the runs of the sides that its limit would not have, which are made once they are asked for.
func (s *Subject) weighDrift(f *Finding, drifts map[model.Drift]drift) {
	for _, side := range f.Limit.sides() {
		if f.Verdict != Met && f.Verdict != NotApplicable || !f.Limit.takes(side, s.History) {
			continue
		}
		d, asked := drifts[side]
		if !asked {
			d = s.drift(side)
			drifts[side] = d
		}
		for _, c := range d.runs {
			if f.Verdict != CannotTell {
				g := judgeHot(f.Limit, c)
				f.drifted(&g)
			}
		}
		if d.err != nil && f.Verdict != CannotTell {
			f.open(say("drift unsolved", holes{"met": strings.TrimSuffix(f.Why, "."), "why": strings.TrimSuffix(d.err.Error(), ".")}))
		}
	}
}

// drift holds the runs of steps taken to a side, or why they cannot be calculated.
type drift struct {
	runs []*courses
	err  error
}

// drift prepares the runs of a side; none where nothing is left open.
func (s *Subject) drift(side model.Drift) drift {
	runs, err := s.Drift(side)
	d := drift{err: err}
	for i := range runs {
		d.runs = append(d.runs, newCourses(runs[i].History))
	}
	return d
}

// narrowed takes the margin in temperature of another run in which the limit is met as well, where that is smaller: the one with less room in time
// is not always the one with less room in temperature. The note says so.
func (f *Finding) narrowed(other *Finding, note string) {
	if f.Verdict != Met || other.Verdict != Met || f.MarginK == nil || other.MarginK == nil || !(*other.MarginK < *f.MarginK-tieK) {
		return
	}
	old := say("note margin place", holes{"place": f.MarginPlace})
	f.Notes = slices.DeleteFunc(f.Notes, func(n string) bool { return n == old })
	f.MarginK, f.MarginPlace = other.MarginK, other.MarginPlace
	if f.MarginPlace == "" && other.PlaceName != f.PlaceName {
		f.MarginPlace = other.PlaceName
	}
	f.noteOnce(note)
}

func (f *Finding) noteOnce(note string) {
	if !slices.Contains(f.Notes, note) {
		f.Notes = append(f.Notes, note)
	}
}

// Worse tells whether a finding is less favourable than another of the same limit: by verdict, then by room in time, then in temperature.
// No difference is too small for it. One that does not apply is the most favourable.
func Worse(a, b *Finding) bool {
	if a.Verdict != b.Verdict {
		return rank(a.Verdict) > rank(b.Verdict)
	}
	if a.MarginS != nil && b.MarginS != nil && *a.MarginS != *b.MarginS {
		return *a.MarginS < *b.MarginS
	}
	return a.MarginK != nil && b.MarginK != nil && *a.MarginK < *b.MarginK
}

// to tells whether a limit is for a subject.
func (a Applies) to(s Subject) bool {
	switch {
	case a.All:
		return true
	case a.Product != "":
		return same(a.Product, s.Product)
	}
	return a.Family != "" && same(a.Family, s.Family)
}

// judgeOne judges one limit on one history.
func judgeOne(l *Limit, c *courses) Finding {
	v := newView(l, c)
	if fs := l.Faults(); len(fs) > 0 {
		return v.blank(CannotTell, say("faulty", holes{"fault": fs[0].Msg}))
	}
	if blank := l.missing(); blank != "" {
		return v.blank(CannotTell, say("faulty", holes{"fault": blank + " is blank"}))
	}
	if s := v.lacks(); s != nil {
		if l.Applies.All {
			f := v.blank(NotApplicable, say("stage lacking", holes{"stage": s.Name}))
			v.uncooled(&f)
			return f
		}
		return v.blank(CannotTell, say("stage lacking own", holes{"stage": s.Name}))
	}
	f := l.Kind.judge(v)
	v.carryOver(&f)
	v.uncooled(&f)
	return f
}

// tieS and tieK are how little two margins differ that are one, s and K: a tenth of the last digit that is printed of either. Where a
// step ends at a temperature, its end decides in both runs, and they differ by what the arithmetic leaves.
const tieS, tieK = 0.1, 0.01

// lessFavourable tells whether a is worse than b: by verdict, then by margin, of which a tie is none.
func lessFavourable(a, b Finding) bool {
	if a.Verdict != b.Verdict {
		return rank(a.Verdict) > rank(b.Verdict)
	}
	switch {
	case a.MarginS != nil && b.MarginS != nil && math.Abs(*a.MarginS-*b.MarginS) > tieS:
		return *a.MarginS < *b.MarginS
	case a.MarginK != nil && b.MarginK != nil:
		return *a.MarginK < *b.MarginK-tieK
	}
	return false
}

// conclude finds the verdict of the product from what weighs: its must findings that are applicable.
func (j *Judgement) conclude() {
	j.Verdict, j.Why = CannotTell, say("no limit judged", nil)+j.idle()
	worst := NotApplicable
	for _, f := range j.Findings {
		if f.Level == "must" && rank(f.Verdict) > rank(worst) {
			worst = f.Verdict
		}
	}
	if worst != NotApplicable {
		j.Verdict, j.Why = worst, ""
	}
}

// idle says why the limits of a product did not apply, the first three.
func (j *Judgement) idle() string {
	var s []string
	for _, f := range j.Findings {
		if f.Level == "must" && f.Verdict == NotApplicable {
			s = append(s, say("did not apply", holes{"limit": f.Limit.Name, "why": strings.TrimSuffix(f.Why, ".")}))
		}
	}
	switch n := len(s); {
	case n == 0:
		return ""
	case n > 3:
		s = append(s[:3], say("and more", holes{"count": strconv.Itoa(n - 3)}))
	}
	return ": " + strings.Join(s, "; ")
}
