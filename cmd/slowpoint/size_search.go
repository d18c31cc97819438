package main

import (
	"maps"
	"math"
	"slices"
	"sync"
	"sync/atomic"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// sizeGrid is how many intervals a range is cut into before the verdict's changes are narrowed down, sizeStride how many of them are taken at once
// where nothing comes near between; sizeTurns how often an interval beside a turn of a margin is halved to see whether it changes sides there.
const (
	sizeGrid   = 24
	sizeStride = 3
	sizeTurns  = 4
)

// judgement gives the findings on a product with its steps; a search knows nothing else of how they come about.
type judgement func(p *workbook.Product) ([]rules.Finding, error)

// judges are the ways to judge a value in a search: look at what is known, exactly does so without first looks at what has to be marched (nil:
// look takes none), confirm searches on from there until nothing is worse (nil: look does). afresh does so from nothing, as check does. without
// are the same ways without some limits; fully those that leave nothing out where a limit is missed (nil: these do not).
type judges struct {
	look, exactly, confirm, afresh judgement
	without                        func([]*rules.Limit) judges
	fully                          func() judges
}

// sure is the way that searches on.
func (j judges) sure() judgement {
	if j.confirm != nil {
		return j.confirm
	}
	return j.look
}

// judges are those of a product: at the values of the plan, or at the unfavourable ends of those that vary.
func (r *runner) judges(p *workbook.Product) judges {
	if len(p.Spreads) > 0 {
		g := &guide{r: r}
		j := judges{look: g.look, exactly: g.exactly, confirm: g.confirm, afresh: g.afresh}
		j.without = j.less
		return j
	}
	return r.asTyped(nil, false)
}

// asTyped are the ways to judge a product at the values of the plan by all limits but some. Where one is missed, what the plan leaves open is only
// looked at if all of it is wanted: it makes none better.
func (r *runner) asTyped(fixed []*rules.Limit, all bool) judges {
	misses := func(fs []rules.Finding) bool {
		return !all && !meetsEvery(but(rules.Conclude(slices.Clone(fs), r.plan.Groups).Findings, fixed))
	}
	var marches atomic.Bool
	judge := func(p *workbook.Product, o model.Options) ([]rules.Finding, error) {
		run, err := r.predict(p, o)
		if err != nil {
			return nil, r.located(p, err)
		}
		marches.Store(marched(run.history))
		return but(rules.Conclude(run.findEnough(r.plan.Limits, misses), r.plan.Groups).Findings, fixed), nil
	}
	var sure sync.Map // by product: what is sure is judged once
	exactly := func(p *workbook.Product) ([]rules.Finding, error) {
		if found, ok := sure.Load(p); ok {
			return slices.Clone(found.([]rules.Finding)), nil
		}
		found, err := judge(p, model.Options{})
		if err == nil {
			sure.Store(p, slices.Clone(found))
		}
		return found, err
	}
	look := func(p *workbook.Product) ([]rules.Finding, error) {
		if marches.Load() {
			if found, err := judge(p, model.Options{Rough: true}); err == nil && plain(found) {
				return found, nil
			}
		}
		return exactly(p)
	}
	j := judges{exactly: exactly, confirm: exactly, look: look, without: func(fixed []*rules.Limit) judges { return r.asTyped(fixed, all) }}
	if !all {
		j.fully = func() judges { return r.asTyped(fixed, true) }
	}
	return j
}

// but drops the findings on some limits.
func but(fs []rules.Finding, fixed []*rules.Limit) []rules.Finding {
	return slices.DeleteFunc(fs, func(f rules.Finding) bool { return slices.Contains(fixed, f.Limit) })
}

// less is the same ways, with the findings on some limits left out.
func (j judges) less(fixed []*rules.Limit) judges {
	less := func(judge judgement) judgement {
		if judge == nil {
			return nil
		}
		return func(p *workbook.Product) ([]rules.Finding, error) {
			fs, err := judge(p)
			return but(fs, fixed), err
		}
	}
	return judges{look: less(j.look), exactly: less(j.exactly), confirm: less(j.confirm), afresh: less(j.afresh)}
}

// meetsEvery tells whether a must limit applies and all that do are met.
func meetsEvery(fs []rules.Finding) bool {
	n := 0
	for i := range fs {
		if missed(&fs[i]) {
			return false
		}
		if fs[i].Level == "must" && fs[i].Verdict == rules.Met {
			n++
		}
	}
	return n > 0
}

// examined is what was found at a step of a dial.
type examined struct {
	findings  []rules.Finding
	err       error // it cannot be calculated there
	meets     bool
	confirmed bool // not only looked at
}

// scan is a search along a dial.
type scan struct {
	p        *workbook.Product
	d        *dial
	judges   judges
	workers  int       // how many values are judged at once
	now      *examined // the product as it is; nil: of no account
	seen     map[int]*examined
	products map[int]*workbook.Product // at each step
	spacing  int                       // of the grid, in steps
}

// product is the product at a step, always the same one.
func (s *scan) product(k int) *workbook.Product {
	if s.products == nil {
		s.products = map[int]*workbook.Product{}
	}
	if s.products[k] == nil {
		q := *s.p
		q.Steps = slices.Clone(s.p.Steps)
		s.d.set(&q, s.d.value(k))
		s.products[k] = &q
	}
	return s.products[k]
}

// try judges a step.
func (s *scan) try(k int, judge judgement) *examined { return examine(s.product(k), judge) }

// examine judges a product.
func examine(p *workbook.Product, judge judgement) *examined {
	e := &examined{}
	if e.findings, e.err = judge(p); e.err == nil {
		e.meets = meetsEvery(e.findings)
	}
	return e
}

// at judges a step, once.
func (s *scan) at(k int) *examined {
	if e := s.seen[k]; e != nil {
		return e
	}
	e := s.try(k, s.judges.look)
	s.seen[k] = e
	return e
}

// all judges several steps, on as many processors as the search may use.
func (s *scan) all(ks []int) {
	out := make([]*examined, len(ks))
	slots := make(chan struct{}, s.workers)
	var working sync.WaitGroup
	for i, k := range ks {
		if s.seen[k] != nil {
			continue
		}
		slots <- struct{}{}
		q := s.product(k)
		working.Go(func() {
			out[i] = examine(q, s.judges.look)
			<-slots
		})
	}
	working.Wait()
	for i, k := range ks {
		if out[i] != nil {
			s.seen[k] = out[i]
		}
	}
}

// mostRounds is how often a search looks again with what it learned where it confirmed; after that it confirms everywhere.
const mostRounds = 8

// run looks along the range until what it found is confirmed, the answer from nothing.
func (s *scan) run() {
	for range mostRounds {
		if s.look(); s.confirm() && s.answers() && s.present() {
			return
		}
	}
	s.present()
	s.judges, s.workers = judges{look: s.judges.sure()}, 1 // one by one: what one value teaches the next ones know
	s.seen = nil
	s.look()
}

// begin looks for a first value that can be calculated, to guide the search.
func (s *scan) begin() {
	if s.judges.confirm == nil {
		return
	}
	for k := s.d.lo; k <= s.d.hi; k += max(1, (s.d.hi-s.d.lo+sizeGrid-1)/sizeGrid) {
		if s.try(k, s.judges.confirm).err == nil {
			return
		}
	}
}

// told is the step that will be told; ok is false if none meets.
func (s *scan) told() (told int, ok bool) {
	for _, k := range s.steps() {
		if s.seen[k].meets && (s.d.most || !ok) {
			told, ok = k, true
		}
	}
	return told, ok
}

// answers judges the value that will be told from nothing, and tells whether it still meets; true if there is none.
func (s *scan) answers() bool {
	told, found := s.told()
	if s.judges.afresh == nil || !found {
		return true
	}
	e := s.try(told, s.judges.afresh)
	e.confirmed = true
	s.seen[told] = e
	return e.meets
}

// present confirms the product as it is, with all that was learned since, and tells whether it still meets; true if it did not.
func (s *scan) present() bool {
	if s.now == nil || s.judges.confirm == nil || !s.now.meets || s.now.confirmed {
		return true
	}
	*s.now = *examine(s.p, s.judges.confirm)
	s.now.confirmed = true
	return s.now.meets
}

// confirm confirms the ends of each run of values that meet: what misses a limit where it was looked at misses it. It tells whether all of
// them still meet. The one that will be told is left to answers.
func (s *scan) confirm() bool {
	if s.judges.confirm == nil {
		return true
	}
	ks := s.steps()
	sure := map[int]*examined{}
	told, _ := s.told()
	holds := true
	for i, k := range ks {
		now := s.seen[k]
		before, after := i > 0 && s.seen[ks[i-1]].meets, i+1 < len(ks) && s.seen[ks[i+1]].meets
		if !now.meets && !now.confirmed && (before || after) && s.judges.exactly != nil { // the neighbour of a run
			sure[k] = s.try(k, s.judges.exactly)
			sure[k].confirmed = true
			holds = holds && !sure[k].meets
			continue
		}
		within := before && after
		if now.confirmed || !now.meets || within || k == told && s.judges.afresh != nil {
			continue
		}
		sure[k] = s.try(k, s.judges.confirm)
		sure[k].confirmed = true
		holds = holds && sure[k].meets
	}
	maps.Copy(s.seen, sure)
	return holds
}

// near tells whether a limit may change sides between two values: where its margin is no farther from nought than it moves, where it is missed at one,
// or where the course that decides it goes otherwise. Where another is missed by far at both, nothing meets between.
func (e *examined) near(o *examined) bool {
	if e.err != nil || o.err != nil || e.meets != o.meets || len(e.findings) != len(o.findings) {
		return true
	}
	close := false
	for i := range e.findings {
		f, g := &e.findings[i], &o.findings[i]
		far := f.Verdict == g.Verdict && f.Goes == g.Goes && farFromNought(f.MarginK, g.MarginK) && farFromNought(f.MarginS, g.MarginS)
		if far && missed(f) && (f.MarginK != nil || f.MarginS != nil) {
			return false
		}
		close = close || !far
	}
	return close
}

// farFromNought tells whether two margins, if there are any, lie on one side of nought and farther from it than from one another.
func farFromNought(a, b *float64) bool {
	if a == nil || b == nil {
		return a == nil && b == nil
	}
	return *a**b > 0 && min(math.Abs(*a), math.Abs(*b)) > math.Abs(*a-*b)
}

// look scans the range on a grid, looks closer where a margin turns round near its limit, and narrows every change of the verdict down to two
// neighbouring steps: a margin need not go one way. What was confirmed before stays.
func (s *scan) look() {
	s.forget()
	s.spacing = max(1, (s.d.hi-s.d.lo+sizeGrid-1)/sizeGrid)
	grid := []int{s.d.lo}
	for k := s.d.lo; k < s.d.hi; {
		k = min(k+sizeStride*s.spacing, s.d.hi)
		grid = append(grid, k)
	}
	s.all(grid)
	var between []int
	for i := 1; i < len(grid); i++ {
		if a, b := grid[i-1], grid[i]; s.seen[a].near(s.seen[b]) {
			for k := a + s.spacing; k < b; k += s.spacing {
				between = append(between, k)
			}
		}
	}
	s.all(between)
	for range sizeTurns {
		if more := s.turns(); len(more) > 0 {
			s.all(more)
		} else {
			break
		}
	}
	ks := s.steps()
	for i := 1; i < len(ks); i++ {
		a, b := ks[i-1], ks[i]
		if s.seen[a].meets == s.seen[b].meets {
			continue
		}
		if s.seen[a].meets {
			a, b = b, a
		}
		bisect(a, b, func(k int) bool { return s.at(k).meets })
	}
}

// forget leaves only what was confirmed not to meet: what was learned since may be worse than what a value met.
func (s *scan) forget() {
	if s.seen == nil {
		s.seen = map[int]*examined{}
	}
	maps.DeleteFunc(s.seen, func(_ int, e *examined) bool { return !e.confirmed || e.meets })
}

// steps are those that were judged, rising.
func (s *scan) steps() []int {
	ks := make([]int, 0, len(s.seen))
	for k := range s.seen {
		ks = append(ks, k)
	}
	slices.Sort(ks)
	return ks
}

// meets tells whether any value does.
func (s *scan) meets() bool {
	return slices.ContainsFunc(s.steps(), func(k int) bool { return s.seen[k].meets })
}

// turns are the steps half way to the neighbours of one at which a margin, in K or in s, turns round on one side of nought and might reach
// the other: it is nearer to nought than it is to a neighbour's.
func (s *scan) turns() []int {
	ks := s.steps()
	var more []int
	for i := 1; i+1 < len(ks); i++ {
		a, b, c := s.seen[ks[i-1]], s.seen[ks[i]], s.seen[ks[i+1]]
		if a.err != nil || b.err != nil || c.err != nil || a.meets != b.meets || b.meets != c.meets {
			continue
		}
		turned := false
		for n := range b.findings {
			if n >= len(a.findings) || n >= len(c.findings) || b.findings[n].Level != "must" {
				continue
			}
			turned = turned || turnsNear(a.findings[n].MarginK, b.findings[n].MarginK, c.findings[n].MarginK) ||
				turnsNear(a.findings[n].MarginS, b.findings[n].MarginS, c.findings[n].MarginS)
		}
		if !turned {
			continue
		}
		for _, k := range []int{(ks[i-1] + ks[i]) / 2, (ks[i] + ks[i+1]) / 2} {
			if s.seen[k] == nil && !slices.Contains(more, k) {
				more = append(more, k)
			}
		}
	}
	return more
}

// turnsNear tells whether the middle of three margins is the one nearest to nought, all on one side of it, and by more than it is from it.
func turnsNear(a, b, c *float64) bool {
	if a == nil || b == nil || c == nil || *b == 0 || *a**b <= 0 || *c**b <= 0 {
		return false
	}
	x, y, z := math.Abs(*a), math.Abs(*b), math.Abs(*c)
	return y <= x && y <= z && y < max(x, z)-y
}

// fixed are the must limits that are missed at every value and say the same at all of them, so that nothing on the dial helps.
func (s *scan) fixed() []*rules.Limit {
	var first []rules.Finding
	moved := map[*rules.Limit]bool{}
	for _, k := range s.steps() {
		e := s.seen[k]
		if e.err != nil {
			continue
		}
		if first == nil {
			first = e.findings
		}
		for i := range first {
			moved[first[i].Limit] = moved[first[i].Limit] || i >= len(e.findings) || !first[i].Same(&e.findings[i])
		}
	}
	var out []*rules.Limit
	for i := range first {
		if missed(&first[i]) && !moved[first[i].Limit] {
			out = append(out, first[i].Limit)
		}
	}
	return out
}

// size searches along a dial and makes what the documents show. Where limits that nothing on the dial changes are missed, it looks for what
// meets the others.
func (r *runner) size(p *workbook.Product, d *dial, j judges, basis string, workers int) *report.Sizing {
	s := &scan{p: p, d: d, judges: j, workers: workers}
	now := examine(p, j.sure()) // first: what is found here guides the search
	s.now = now
	if now.err != nil {
		s.begin()
	}
	s.run()
	if j.fully != nil && !s.meets() { // a limit that nothing changes shows only where all is looked at
		j = j.fully()
		s = &scan{p: p, d: d, judges: j, workers: workers, now: now, products: s.products}
		s.run()
	}
	fixed := s.fixed()
	if len(fixed) > 0 {
		all := s
		s = &scan{p: p, d: d, workers: workers, judges: j.without(fixed), products: all.products}
		if s.run(); len(s.fixed()) > 0 || !s.meets() {
			s, fixed = all, nil
		}
	}
	out := &report.Sizing{Product: p.Name, Process: p.Process, What: d.what, Most: d.most, Basis: basis, Step: d.stepWords(r, p, 1), Spacing: d.stepWords(r, p, s.spacing),
		Stride: d.stepWords(r, p, sizeStride*s.spacing)}
	for _, l := range fixed {
		out.Fixed = append(out.Fixed, l.Name)
	}
	point := func(v float64, e *examined) *report.SizePoint {
		x, symbol := d.plain(v)
		out.Unit = symbol
		pt := &report.SizePoint{Value: x, Words: d.words(r, p, v), Findings: e.findings, Meets: e.meets}
		if e.err != nil {
			pt.Refused = e.err.Error()
		}
		return pt
	}
	out.Now = point(d.now, now)
	ks := s.steps()
	for _, k := range ks {
		out.Curve = append(out.Curve, point(d.value(k), s.seen[k]))
	}
	out.Conclude()
	return out
}
