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
	r       *runner
	limits  []*rules.Limit // those that apply; nil: nothing was looked for yet
	worst   [][]corner     // for each of them, the corners that were worst somewhere
	marched bool           // the product has to be marched
	at      map[lookedAt]*search
	mu      sync.Mutex // guards all
}

// lookedAt is a value, by its product, in a first look or in one that counts.
type lookedAt struct {
	p     *workbook.Product
	rough bool
}

// confirm looks for the unfavourable ends at a value, from those known already on, and keeps them. Where nothing is known it goes by the effect of
// each end alone.
func (g *guide) confirm(p *workbook.Product) ([]rules.Finding, error) {
	s, hints, err := g.typed(p)
	if err != nil {
		return nil, err
	}
	s.hints, s.also, s.brief = hints, nil, hints == nil
	return g.search(s)
}

// afresh looks for them from nothing too, as check does, unless those known lead to a limit that is missed.
func (g *guide) afresh(p *workbook.Product) ([]rules.Finding, error) {
	s, hints, err := g.typed(p)
	if err != nil {
		return nil, err
	}
	s.hints, s.also, s.brief = hints, nil, false
	if hints != nil {
		if found, err := g.search(s); err != nil || !meetsEvery(found) {
			return found, err
		}
		s.hints, s.also = nil, hints
		for k, c := range s.worst {
			s.also[k] = append(slices.Clip(s.also[k]), c)
		}
	}
	return g.search(s)
}

// typed starts a search at a value, or takes that of before, with what its own values give; hints are the corners that are known, nil if none are.
func (g *guide) typed(p *workbook.Product) (s *search, hints [][]corner, err error) {
	limits, hints := g.known()
	if limits == nil {
		run, err := g.r.predict(p, model.Options{})
		if err != nil {
			return nil, nil, g.r.located(p, err)
		}
		s = g.r.searching(p, run.find(g.r.plan.Limits), model.Options{})
		g.mu.Lock()
		defer g.mu.Unlock()
		g.marched, g.at = marched(run.history), map[lookedAt]*search{{p, false}: s}
		return s, nil, nil
	}
	s = g.of(p, limits, false)
	if err := s.need(forAll([]corner{make(corner, len(p.Spreads))})); err != nil {
		return nil, nil, g.r.located(p, err)
	}
	return s, hints, nil
}

// of is the search at a value, with all that was judged there before.
func (g *guide) of(p *workbook.Product, limits []*rules.Limit, rough bool) *search {
	g.mu.Lock()
	defer g.mu.Unlock()
	s := g.at[lookedAt{p, rough}]
	if s == nil {
		s = &search{r: g.r, p: p, options: model.Options{Rough: rough}, limits: limits, solved: map[string]*cornerFindings{}}
		g.at[lookedAt{p, rough}] = s
	}
	return s
}

// marched tells whether any step of a history was marched.
func marched(h *model.History) bool {
	return slices.ContainsFunc(h.Spans, func(sp model.Span) bool { return sp.Method == model.Marched })
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

// look judges a value at the corners that are known; what has to be marched by a first look, where that is plain.
func (g *guide) look(p *workbook.Product) ([]rules.Finding, error) {
	limits, _ := g.known()
	if limits == nil {
		return g.confirm(p)
	}
	if g.marches() {
		if found, err := g.lookOnce(p, true); err == nil && plain(found) {
			return found, nil
		}
	}
	return g.exactly(p)
}

// marches tells whether the product has to be marched.
func (g *guide) marches() bool {
	g.mu.Lock()
	defer g.mu.Unlock()
	return g.marched
}

// exactly is look without first looks.
func (g *guide) exactly(p *workbook.Product) ([]rules.Finding, error) {
	if limits, _ := g.known(); limits == nil {
		return g.confirm(p)
	}
	return g.lookOnce(p, false)
}

// plainK is how far a margin has to lie from nought in a first look for its verdict to be taken, K: six times the error that such a look is taken to have.
const plainK = 0.3

// plain tells whether every verdict on a limit that must be met is plain from a first look.
func plain(found []rules.Finding) bool {
	return !slices.ContainsFunc(found, func(f rules.Finding) bool {
		sure := f.Verdict == rules.Met && f.MarginK != nil && *f.MarginK > plainK || f.Verdict == rules.NotMet && f.MarginK != nil && *f.MarginK < -plainK
		return !sure && f.Limit.Kind != rules.Stated
	})
}

// lookOnce judges a value at the corners that are known. Where a start lies on either side of what starts the clock of a limit, the places just
// beside that are tried too: they move with the value.
func (g *guide) lookOnce(p *workbook.Product, rough bool) ([]rules.Finding, error) {
	limits, worst := g.known()
	s := g.of(p, limits, rough)
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
