package report

import (
	"math"
	"sort"
	"strings"

	"slowpoint/model"
	"slowpoint/rules"
)

// deciding is the finding that settles a product's verdict, and where its picture is taken.
type deciding struct {
	finding   *rules.Finding // nil: no limit judged
	history   *model.History // the run that it belongs to
	place     model.Place
	placeName string
}

// tightness orders findings by how little room they leave: 1 is the room below which a caution is due (2 K, or a tenth of the time).
func tightness(f *rules.Finding) float64 {
	t := math.Inf(1)
	if finite(f.MarginK) {
		t = min(t, *f.MarginK/2)
	}
	if finite(f.MarginS) {
		need := 600.0
		if finite(f.Required) && f.Unit == "min" && *f.Required > 0 {
			need = *f.Required * 60
		}
		t = min(t, *f.MarginS/(0.1*need))
	}
	return t
}

// madeByUntil is the step whose end sets a finding's margin in K: it ends when the slowest place reaches a temperature that lies
// just that far beyond the limit's own, and the finding is decided in that step, or later at a place that has stayed there. Such a margin says what was typed in Until, and nothing of the
// food. "" if there is none.
func (p *Product) madeByUntil(f *rules.Finding) string {
	h := p.runOf(f)
	if h == nil || f.Limit == nil || f.Verdict != rules.Met || !finite(f.MarginK) || f.AtS == nil {
		return ""
	}
	own, heats := aim(f.Limit)
	const near = 0.3 // K: the slowest place ends the step, and the limit may be about another
	for _, sp := range h.Spans {
		if own == nil || sp.Step == nil || sp.Step.UntilC == nil || sp.Step.Stage == nil || sp.Step.Stage.Heats != heats || sp.Reached == nil || !*sp.Reached {
			continue
		}
		beyond := *sp.Step.UntilC - *own
		if !heats {
			beyond = -beyond
		}
		if beyond > 0 && math.Abs(*f.MarginK-beyond) < near && *f.AtS > sp.StartS && stays(h, f, &sp, near) {
			return sp.Step.Name
		}
	}
	return ""
}

// stays tells whether the place of a finding has stayed within near, K, of the temperature that ended a step, up to the deciding time: what has
// gone further and come back is decided by what brought it back.
func stays(h *model.History, f *rules.Finding, sp *model.Span, near float64) bool {
	if *f.AtS <= sp.EndS || f.Place == nil {
		return *f.AtS <= sp.EndS
	}
	const looks = 64
	for k := 0; k <= looks; k++ {
		c := h.At(*f.Place, sp.EndS+(*f.AtS-sp.EndS)*float64(k)/looks)
		if math.Abs(c-*sp.Step.UntilC) > near {
			return false
		}
	}
	return true
}

// aim is the temperature that a limit wants food brought to or kept at, °C, and whether by heating; nil where it wants none.
func aim(l *rules.Limit) (c *float64, heats bool) {
	switch l.Kind {
	case rules.CoolWithin:
		return l.ToC, false
	case rules.HeatWithin:
		return l.ToC, true
	case rules.Hold, rules.StayAbove, rules.StayBelow, rules.ByTheEnd:
		if l.Kind == rules.StayBelow && l.ToC == nil {
			return l.FromC, false
		}
		if l.Kind == rules.StayAbove && l.FromC == nil {
			return l.ToC, true
		}
		if l.ToC != nil {
			return l.ToC, false
		}
		return l.FromC, true
	}
	return nil, false
}

// tightness is that of a finding, without a room in K that says nothing of the food: one that the end of a step
// makes; the room in time counts then, or none. The length of a step was typed, and a limited time of which nothing was used was
// not put to the test: they have none.
func (p *Product) tightness(f *rules.Finding) float64 {
	if f.Verdict == rules.Met && f.Limit != nil && f.Limit.Kind == rules.Duration {
		return math.Inf(1)
	}
	if vacuous(f) {
		return math.Inf(1)
	}
	if p.madeByUntil(f) == "" {
		return tightness(f)
	}
	g := *f
	g.MarginK = nil
	return tightness(&g)
}

// telling is a finding with the room that tells how tight it is: without the room in K that the end of a step makes, where there is
// one in time.
func (p *Product) telling(f *rules.Finding) *rules.Finding {
	if !finite(f.MarginS) || p.madeByUntil(f) == "" {
		return f
	}
	g := *f
	g.MarginK = nil
	return &g
}

// weight orders verdicts, the worst first.
func weight(v rules.Verdict) int { return [...]int{1, 2, 0, 3}[v] }

// worstFirst gives the findings in the order of their weight: must before advice, not met, cannot tell, met by the tightest, not applicable.
func (p *Product) worstFirst() []*rules.Finding {
	fs := p.Judgement.Findings
	out := make([]*rules.Finding, len(fs))
	for i := range fs {
		out[i] = &fs[i]
	}
	rank := map[string]int{"must": 0, "advice": 1, "alternative": 2}
	sort.SliceStable(out, func(i, j int) bool {
		a, b := out[i], out[j]
		na, nb := a.Verdict == rules.NotApplicable, b.Verdict == rules.NotApplicable
		switch {
		case na != nb:
			return nb
		case rank[a.Level] != rank[b.Level]:
			return rank[a.Level] < rank[b.Level]
		case a.Verdict != b.Verdict:
			return weight(a.Verdict) < weight(b.Verdict)
		}
		return p.tightness(a) < p.tightness(b)
	})
	return out
}

// decides finds the deciding finding and the place and run that pictures show.
func (p *Product) decides() *deciding {
	d := &deciding{history: p.History}
	if d.history == nil {
		d.history = &model.History{}
	}
	for _, f := range p.worstFirst() {
		if f.Level == "must" && f.Verdict != rules.NotApplicable {
			d.finding = f
			break
		}
	}
	f := d.finding
	if f != nil && p.runOf(f) != nil {
		d.history = p.runOf(f)
	}
	if len(d.history.Points) > 0 {
		d.place, d.placeName = d.history.Points[0].Place, d.history.Points[0].Name
	}
	if f != nil && f.Place != nil {
		d.place, d.placeName = *f.Place, f.PlaceName
	}
	if p.Product.Shape.Mixed() || d.history != p.History && kindOf(p.nameOf(d.history)) == rules.WellMixed {
		d.placeName = say("anywhere")
	}
	if d.placeName == "" || d.placeName == "every point" {
		d.placeName = p.productOf(d.history).Where(d.place)
	}
	return d
}

// Row is one line of the overview of a plan.
type Row struct {
	Product, Process string
	Verdict          rules.Verdict
	Why              string
	Deciding         string   // the limit that settles the verdict
	MarginK          *float64 // of the deciding limit
	MarginS          *float64
	MarginPlace      string         // the place of MarginK where it is not the deciding one; "" elsewhere
	Beside           string         // what must be read with the verdict, in sentences; Why ends with it
	Problems         int            // warnings that touch the product
	Measured         *rules.Verdict // the worst of its records; nil: it has none
	Records          []string       // what each record came to, a sentence each
	File             string         // name of its document; set by whoever names the files
	tight            float64
}

// Row gives the product's line of the overview.
func (p *Product) Row() Row {
	r := Row{Product: p.Product.Name, Process: p.Process, Verdict: p.Judgement.Verdict, Why: sentence(p.Judgement.Why), tight: math.Inf(1), Measured: p.measuredWorst()}
	if d := p.decides(); d.finding != nil {
		f := d.finding
		g := p.telling(f)
		r.MarginK, r.MarginS, r.tight = lackingOnly(f, g.MarginK), lackingOnly(f, g.MarginS), p.tightness(f)
		r.MarginPlace = f.MarginPlace
		if f.Limit != nil {
			r.Deciding = f.Limit.Name
		}
		if r.Why == "" {
			r.Why = f.Why
		}
	}
	r.Beside = strings.Join(p.beside(), " ")
	r.Records = p.recordSentences()
	r.Why = strings.TrimSpace(r.Why + " " + r.Beside)
	return r
}

// lackingOnly leaves a margin out that would be room in a limit that is not met.
func lackingOnly(f *rules.Finding, margin *float64) *float64 {
	if f.Verdict == rules.NotMet && finite(margin) && *margin >= 0 {
		return nil
	}
	return margin
}

// vacuous tells whether a limited time was met without any of it being used.
func vacuous(f *rules.Finding) bool {
	return f.Verdict == rules.Met && f.Unit == "min" && !needsMore(f) && finite(f.Value) && *f.Value == 0
}
