package main

import (
	"errors"
	"slices"
	"sync"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// guide judges the values of a search at the unfavourable ends of what varies. To look for the ends of each limit anew at every value would
// take some hundred runs a value, though they hardly change along a dial: so they are looked for at a few values, and the others are
// judged at the ends that were worst there. A value that misses a limit at any of these is missed. One that meets them all is confirmed by
// a search of its own, from the ends known on, before it ends a run of values that meet. The one that is told is searched on from nothing as well, with
// all combinations of ends that check tries; only there the first directions are of no account.
type guide struct {
	r      *runner
	limits []*rules.Limit // those that apply; nil: nothing was looked for yet
	worst  [][]corner     // for each of them, the corners that were worst somewhere
	mu     sync.Mutex     // guards both
}

// confirm looks for the unfavourable ends at a value, from those known already on, and keeps them. Where nothing is known it goes by the effect of
// each end alone.
func (g *guide) confirm(p *workbook.Product) ([]rules.Finding, error) {
	s, err := g.searching(p)
	if err != nil {
		return nil, err
	}
	s.brief = s.hints == nil
	return g.search(s)
}

// afresh looks for them from nothing too, as check does, unless those known lead to a limit that is missed.
func (g *guide) afresh(p *workbook.Product) ([]rules.Finding, error) {
	s, err := g.searching(p)
	if err != nil {
		return nil, err
	}
	if s.hints != nil {
		if found, err := g.search(s); err != nil || !meetsEvery(found) {
			return found, err
		}
		s.also, s.hints = s.hints, nil
		for k, c := range s.worst {
			s.also[k] = append(slices.Clip(s.also[k]), c)
		}
	}
	return g.search(s)
}

// searching starts a search at a value from the corners that are known, if any are.
func (g *guide) searching(p *workbook.Product) (*search, error) {
	run, err := g.r.predict(p, model.Options{})
	if err != nil {
		return nil, g.r.located(p, err)
	}
	s := g.r.searching(p, run.find(g.r.plan.Limits), model.Options{})
	_, s.hints = g.known()
	return s, nil
}

// search looks for the unfavourable ends at a value and keeps them.
func (g *guide) search(s *search) ([]rules.Finding, error) {
	worst, err := s.corners()
	if err != nil {
		return nil, g.r.located(s.p, err)
	}
	findings := make([]rules.Finding, len(worst))
	for k, c := range worst {
		findings[k] = s.at(c)[k]
	}
	s.worst = worst
	g.keep(s.limits, worst)
	return rules.Conclude(findings, g.r.plan.Groups).Findings, nil
}

// look judges a value at the corners that are known. Where a start lies on either side of what starts the clock of a limit, the places just
// beside that are tried too: they move with the value.
func (g *guide) look(p *workbook.Product) ([]rules.Finding, error) {
	limits, worst := g.known()
	if limits == nil {
		return g.confirm(p)
	}
	s := &search{r: g.r, p: p, limits: limits, solved: map[string]*cornerFindings{}}
	var list []ask
	tried := make([][]corner, len(limits))
	for k := range limits {
		for _, c := range worst[k] {
			tried[k] = append(tried[k], c)
			for i := range c {
				for _, v := range s.beside(i, limits[k]) {
					tried[k] = append(tried[k], c.with(i, v))
				}
			}
		}
		for _, c := range tried[k] {
			list = append(list, ask{c, k})
		}
	}
	if err := s.need(list); err != nil {
		return nil, g.r.located(p, err)
	}
	findings := make([]rules.Finding, len(limits))
	for k := range limits {
		findings[k] = s.at(tried[k][0])[k]
		for _, c := range tried[k][1:] {
			if f := &s.at(c)[k]; rules.Worse(f, &findings[k]) {
				findings[k] = *f
			}
		}
	}
	return rules.Conclude(findings, g.r.plan.Groups).Findings, nil
}

// known are the limits that apply and the corners that were worst for them.
func (g *guide) known() ([]*rules.Limit, [][]corner) {
	g.mu.Lock()
	defer g.mu.Unlock()
	return g.limits, slices.Clone(g.worst)
}

// keep adds the worst corner of each limit to those known.
func (g *guide) keep(limits []*rules.Limit, worst []corner) {
	g.mu.Lock()
	defer g.mu.Unlock()
	if g.limits == nil {
		g.limits, g.worst = limits, make([][]corner, len(limits))
	}
	for k, c := range worst {
		if !slices.ContainsFunc(g.worst[k], func(o corner) bool { return slices.Equal(o, c) }) {
			g.worst[k] = append(slices.Clip(g.worst[k]), c)
		}
	}
}

// located words the errors of a product that cannot be calculated, with the cells that the user typed.
func (r *runner) located(p *workbook.Product, err error) error {
	var es cell.Errors
	if !errors.As(err, &es) {
		return err
	}
	for i, e := range es {
		es[i] = p.AsTyped(r.plan.Locate(e))
	}
	return errors.New(firstFault(es))
}
