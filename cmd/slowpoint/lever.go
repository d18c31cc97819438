package main

import (
	"fmt"
	"slices"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// leverPlans is the largest plan for which it is looked for what would meet the limits that are not met: it costs some dozens of runs
// a product.
const leverPlans = 100

// lever says, for a product with a limit that is not met, which single change would meet its limits in the model with everything else
// unchanged: a smaller size; for heating, a longer step or one that ends warmer; for chilling, a colder medium. It says so too where
// none does. Limits that none of the changes bears on, such as a question that is not answered, are left out of that and named.
// "" if that was not looked for. Sizes are rounded down, times up, temperatures of chilling down: to the safe side.
func (r *runner) lever(p *workbook.Product, now *report.Product) string {
	if now.Judgement.Verdict != rules.NotMet || len(r.plan.Products) > leverPlans {
		return ""
	}
	r = r.atCorners(now)
	found := r.tryAll(p, now)
	fixed := found.fixed(now)
	if len(fixed) > 0 { // look again, at the others
		others := r.without(fixed)
		found = tried{}
		if rest, err := others.judged(p); err == nil && rest.Judgement.Verdict == rules.NotMet {
			found = others.tryAll(p, rest)
		}
	}
	return leverWords(found.every, found.some, found.none, fixedWords(fixed))
}

// tried is what came of the changes.
type tried struct {
	every, some, none []string // changes that meet every limit, those they aim at, none; in words
	moved             map[*rules.Limit]bool
	any               bool // something was tried
}

// tryAll tries every change that is worth it.
func (r *runner) tryAll(p *workbook.Product, now *report.Product) tried {
	t := tried{moved: map[*rules.Limit]bool{}}
	for _, c := range r.changes(p, now) {
		missed := missedOf(now, c.aims)
		n, all := r.search(p, now, &c, t.moved)
		t.any = true
		switch words := fmt.Sprintf("%s %s → ", c.what, c.from); {
		case n == 0:
			t.none = append(t.none, c.far)
		case all:
			t.every = append(t.every, words+c.to(n))
		default:
			t.some = append(t.some, fmt.Sprintf("%s%s would meet %s", words, c.to(n), quoted(missed)))
		}
	}
	return t
}

// fixed are the findings on limits that must be met, are not, and stayed just as they are whatever was tried.
func (t *tried) fixed(now *report.Product) []*rules.Finding {
	var out []*rules.Finding
	for i := range now.Judgement.Findings {
		if f := &now.Judgement.Findings[i]; t.any && missed(f) && !t.moved[f.Limit] {
			out = append(out, f)
		}
	}
	return out
}

// without is the same job without some limits.
func (r *runner) without(fixed []*rules.Finding) *runner {
	plan := *r.plan
	plan.Limits = nil
	for i := range r.plan.Limits {
		l := &r.plan.Limits[i]
		if !slices.ContainsFunc(fixed, func(f *rules.Finding) bool { return f.Limit == l }) {
			plan.Limits = append(plan.Limits, *l)
		}
	}
	return &runner{plan: &plan, head: r.head, options: r.options, corners: r.corners}
}

// moves notes the limits of which a change says anything else than before.
func moves(before, after *report.Product, moved map[*rules.Limit]bool) {
	for i := range before.Judgement.Findings {
		f := &before.Judgement.Findings[i]
		for k := range after.Judgement.Findings {
			if g := &after.Judgement.Findings[k]; g.Limit == f.Limit {
				moved[f.Limit] = moved[f.Limit] || !f.Same(g)
			}
		}
	}
}

// missed tells whether a finding stands against a product.
func missed(f *rules.Finding) bool {
	return f.Level == "must" && f.Verdict != rules.Met && f.Verdict != rules.NotApplicable
}

// missedOf are the names of limits of a sort that must be met and are not.
func missedOf(d *report.Product, aims func(*rules.Limit) bool) []string {
	var names []string
	for i := range d.Judgement.Findings {
		f := &d.Judgement.Findings[i]
		if missed(f) && (aims == nil || aims(f.Limit)) && !slices.Contains(names, f.Limit.Name) {
			names = append(names, f.Limit.Name)
		}
	}
	return names
}

// search finds the least number of steps of a change at which the limits that it aims at are met and none that was met is lost; 0 if
// there is none. all tells whether every limit is met then; moved notes the limits that the change bears on.
func (r *runner) search(p *workbook.Product, now *report.Product, c *change, moved map[*rules.Limit]bool) (n int, all bool) {
	meets := func(k int, o model.Options) bool {
		q := *p
		q.Steps = slices.Clone(p.Steps)
		c.set(&q, k)
		d, err := r.judgedBy(&q, o)
		if err != nil {
			return false
		}
		moves(now, d, moved)
		all = d.Judgement.Verdict == rules.Met
		return all || c.aims != nil && len(missedOf(d, c.aims)) == 0 && keeps(now, d)
	}
	look := model.Options{Rough: true}
	bad, good := 0, 0
	for _, k := range c.try {
		if k = min(k, c.most); k > bad {
			if meets(k, look) {
				good = k
				break
			}
			bad = k
		}
	}
	if good == 0 {
		return 0, false
	}
	_, good = bisect(bad, good, func(k int) bool { return meets(k, look) })
	every := false
	confirmed := func(k int) bool { // what is named is confirmed by the run that counts
		met := meets(k, model.Options{})
		if met {
			every = all
		}
		return met
	}
	if good, ok := gallop(good, c.most, confirmed); ok {
		return good, every
	}
	return 0, false
}

// gallop finds, from a first guess on, the least number of steps at which something holds and with one less does not, in ever longer strides and
// back; false if it holds nowhere up to most. With no steps it does not hold.
func gallop(guess, most int, holds func(k int) bool) (n int, ok bool) {
	if holds(guess) {
		bad, good := 0, guess
		for d := 1; good-d > 0; d *= 2 {
			if !holds(good - d) {
				bad = good - d
				break
			}
			good -= d
		}
		_, good = bisect(bad, good, holds)
		return good, true
	}
	bad := guess
	for d := 1; bad < most; d *= 2 {
		k := min(bad+d, most)
		if holds(k) {
			_, good := bisect(bad, k, holds)
			return good, true
		}
		bad = k
	}
	return 0, false
}

// bisect narrows the steps between one at which something does not hold and one at which it does, on whichever side, until they are
// neighbours.
func bisect(bad, good int, holds func(k int) bool) (lastBad, firstGood int) {
	for good-bad > 1 || bad-good > 1 {
		if mid := (good + bad) / 2; holds(mid) {
			good = mid
		} else {
			bad = mid
		}
	}
	return bad, good
}

// keeps tells whether every limit that was met still is.
func keeps(before, after *report.Product) bool {
	lost := missedOf(after, nil)
	for i := range before.Judgement.Findings {
		if f := &before.Judgement.Findings[i]; f.Verdict == rules.Met && f.Level == "must" && slices.Contains(lost, f.Limit.Name) {
			return false
		}
	}
	return true
}
