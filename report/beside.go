package report

import (
	"strings"

	"slowpoint/model"
	"slowpoint/rules"
)

// beside is what must be read together with a product's verdict, a sentence each: limits that are met only by carry-over, steps
// whose Until did not do what it was typed for, and limits that did not apply, for a slip in a unit shows itself only there.
func (p *Product) beside() []string {
	var s []string
	decides := p.decides().finding
	for _, f := range p.worstFirst() {
		if f.CarryOver != "" && f.Verdict == rules.Met && f.Level == "must" && f.Limit != nil {
			says := say("beside carry-over", f.Limit.Name, f.CarryOver)
			if f == decides { // the sentence before it names the limit
				says = f.CarryOver
			}
			s = append(s, says)
		}
	}
	s = append(s, p.alternatives()...)
	s = append(s, p.judgedInPart()...)
	for _, f := range p.worstFirst() {
		if f.StillWarm != "" && f.Limit != nil {
			s = append(s, say("beside still warm", f.Limit.Name, f.StillWarm))
		}
	}
	s = append(s, p.untils()...)
	if decides == nil { // why nothing was judged says the same
		return s
	}
	if idle := p.notApplied(); idle != "" {
		s = append(s, idle)
	}
	return s
}

// alternatives says of each group of which any limit will do how many there are, which one decides, and what the others came to.
func (p *Product) alternatives() []string {
	const most = 4
	var s []string
	for _, g := range p.Judgement.Groups {
		if !g.AnyOf || g.Verdict == rules.NotApplicable || len(g.Members) < 2 {
			continue
		}
		var others []string
		for _, m := range g.Members {
			if m.Name != g.DecidedBy {
				others = append(others, say("one of other", m.Name, m.Verdict))
			}
		}
		more := ""
		if len(others) > most {
			more = say("glyph more", len(others)-most)
			others = others[:most]
		}
		s = append(s, say("one of", g.DecidedBy, len(g.Members), g.Group, strings.Join(others, ", ")+more))
	}
	return s
}

// untils tells of steps that did not reach their Until, or had reached it before they began.
func (p *Product) untils() []string {
	h := p.decides().history
	const atOnceS = 1.0
	var s []string
	for i := range h.Spans {
		sp := &h.Spans[i]
		switch {
		case sp.Reached == nil || sp.Step == nil:
		case !*sp.Reached:
			s = append(s, say("beside until late", sp.Step.Name, duration(sp.EndS-sp.StartS, nearest)))
		case sp.EndS-sp.StartS < atOnceS:
			s = append(s, say("beside until at once", sp.Step.Name))
		}
	}
	return s
}

// notApplied counts the verdicts that weigh and names the limits that did not apply, those with a clock that never started first; "" if all did.
func (p *Product) notApplied() string {
	const most = 4
	var n [4]int
	var clocked, lacking []string
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		if f.Level == "alternative" || f.Limit == nil {
			continue
		}
		if f.Level == "must" {
			n[f.Verdict]++
		}
		if f.Verdict != rules.NotApplicable {
			continue
		}
		if f.Limit.Clock != (rules.Clock{}) && p.has(f.Limit.Stages) {
			clocked = append(clocked, f.Limit.Name)
		} else {
			lacking = append(lacking, f.Limit.Name)
		}
	}
	names := append(clocked, lacking...)
	if len(names) == 0 {
		return ""
	}
	if len(names) > most {
		names = append(names[:most], say("glyph more", len(names)-most))
		names[most-1] += names[most]
		names = names[:most]
	}
	n[rules.NotApplicable] = 0
	return say("beside idle", tallied(n), len(clocked)+len(lacking), strings.Join(names, ", "))
}

// has tells whether the process has some of the stages; it has the whole chain.
func (p *Product) has(stages []*model.Stage) bool {
	if len(stages) == 0 || p.History == nil {
		return true
	}
	for i := range p.History.Spans {
		for _, st := range stages {
			if sp := &p.History.Spans[i]; sp.Step != nil && sp.Step.Stage == st {
				return true
			}
		}
	}
	return false
}

// besides is beside as the tail of a sentence.
func (x *sheet) besides() string {
	s := ""
	for _, b := range x.p.beside() {
		s += " " + b
	}
	return s
}

// adviceNotMet names the advice that is not met, in one line; "" if there is none.
func (p *Product) adviceNotMet() string {
	var s []string
	for i := range p.Judgement.Findings {
		if f := &p.Judgement.Findings[i]; f.Level == "advice" && f.Verdict == rules.NotMet && f.Limit != nil {
			s = append(s, f.Limit.Name)
		}
	}
	if len(s) == 0 {
		return ""
	}
	return say("advice not met", strings.Join(s, ", "))
}
