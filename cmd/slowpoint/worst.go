package main

import (
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"
	"sync"
	"sync/atomic"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// fullSpreads is how many quantities at most are tried at every combination of their ends and the typed value, endSpreads how many at every
// combination of their ends. Of more, the ends that are worse alone, the corners where everything is slow or fast, and those of the other
// limits come first; single flips and pairs of them lead on from the worst of these.
const (
	fullSpreads = 4
	endSpreads  = 6
)

// corner is where each spread of a product stands, as workbook.Varied takes it: −1 at its Minus end, 0 as typed, 1 at its Plus end, and in
// proportion between these.
type corner []float64

// parts is how many there are of the way from the typed value to an end; places between lie at whole parts, and edges beyond which a limit does
// not count at whole fineParts.
const (
	parts     = 64
	fineParts = 1024
)

// with is the corner with one spread elsewhere.
func (c corner) with(i int, at float64) corner {
	d := slices.Clone(c)
	d[i] = at
	return d
}

// nominal tells whether everything is as typed.
func (c corner) nominal() bool {
	return !slices.ContainsFunc(c, func(v float64) bool { return v != 0 })
}

// words are the places of a corner that are not as typed, in words, in the order of the plan.
func (s *search) words(c corner) []string {
	var out []string
	for i, v := range c {
		switch v {
		case 0:
		case -1, 1:
			out = append(out, s.p.Spreads[i].End(int(v)))
		default:
			out = append(out, s.p.Between(i, v, s.r.plan.Fahrenheit))
		}
	}
	return out
}

// search looks for the least favourable corner of each limit of a product. A limit is judged once at a corner, and only where it is asked for.
type search struct {
	r       *runner
	p       *workbook.Product
	options model.Options
	limits  []*rules.Limit // those that apply, in the order of the plan
	hints   [][]corner     // for each of them, corners that were worst beside this product; nil: nothing is known yet
	also    [][]corner     // for each of them, corners that were tried already and may be worse than what is found from nothing
	brief   bool           // neither combinations of ends that no single end leads to, nor places between the ends are tried
	worst   []corner       // for each of them, what was found last
	solved  map[string]*cornerFindings
}

// cornerFindings are what was found at a corner: for each limit a finding, and whether it was judged.
type cornerFindings struct {
	at       corner
	findings []rules.Finding
	judged   []bool
}

// ask is a corner at which a limit is to be judged, by its place among those that apply; everyLimit: all of them.
type ask struct {
	corner
	limit int
}

const everyLimit = -1

// searching starts the search for a product from the findings at its typed values.
func (r *runner) searching(p *workbook.Product, typed []rules.Finding, o model.Options) *search {
	s := &search{r: r, p: p, options: o, solved: map[string]*cornerFindings{}}
	all := &cornerFindings{make(corner, len(p.Spreads)), typed, make([]bool, len(typed))}
	for k := range typed {
		s.limits = append(s.limits, typed[k].Limit)
		all.judged[k] = true
	}
	s.solved[all.at.key()] = all
	return s
}

// key is a corner as the index of the map.
func (c corner) key() string {
	b := make([]byte, 0, 8*len(c))
	for _, v := range c {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(v))
	}
	return string(b)
}

// at is what was found at a corner that was asked for.
func (s *search) at(c corner) []rules.Finding { return s.solved[c.key()].findings }

// knows tells whether a limit was judged at a corner.
func (s *search) knows(c corner, k int) bool {
	f := s.solved[c.key()]
	return f != nil && f.judged[k]
}

// ends are the places, other than now, that a spread may stand at.
func (s *search) ends(i int, now float64) []float64 {
	var out []float64
	for _, v := range []float64{-1, 0, 1} {
		d := s.p.Spreads[i].Plus
		if v < 0 {
			d = s.p.Spreads[i].Minus
		}
		if v != now && (v == 0 || d.By > 0) {
			out = append(out, v)
		}
	}
	return out
}

// forAll asks for every limit at each of some corners.
func forAll(list []corner) []ask {
	out := make([]ask, len(list))
	for i, c := range list {
		out[i] = ask{c, everyLimit}
	}
	return out
}

// need judges what is asked for and not known yet, on all processors.
func (s *search) need(list []ask) error {
	var order []corner
	due := map[string][]int{}
	for _, a := range list {
		from, to := a.limit, a.limit+1
		if a.limit == everyLimit {
			from, to = 0, len(s.limits)
		}
		key := a.key()
		for k := from; k < to; k++ {
			if s.knows(a.corner, k) || slices.Contains(due[key], k) {
				continue
			}
			if due[key] == nil {
				order = append(order, a.corner)
			}
			due[key] = append(due[key], k)
		}
	}
	at, which := make([][]float64, len(order)), make([][]int, len(order))
	for i, c := range order {
		at[i], which[i] = c, due[c.key()]
	}
	found, err := s.solve(at, which)
	if err != nil {
		return err
	}
	for i, c := range order {
		f := s.solved[c.key()]
		if f == nil {
			f = &cornerFindings{c, make([]rules.Finding, len(s.limits)), make([]bool, len(s.limits))}
			s.solved[c.key()] = f
		}
		for j, k := range which[i] {
			f.findings[k], f.judged[k] = found[i][j], true
		}
	}
	return nil
}

// every are the places of all limits.
func (s *search) every() []int {
	out := make([]int, len(s.limits))
	for k := range out {
		out[k] = k
	}
	return out
}

// solve judges the product at each of some places between the ends by the limits that are due there, on all processors. Of what fails the
// first in order is told.
func (s *search) solve(places [][]float64, due [][]int) ([][]rules.Finding, error) {
	found, errs := make([][]rules.Finding, len(places)), make([]error, len(places))
	var working sync.WaitGroup
	var taken atomic.Int64
	for range min(runtime.GOMAXPROCS(0), len(places)) {
		working.Go(func() {
			for i := int(taken.Add(1)) - 1; i < len(places); i = int(taken.Add(1)) - 1 {
				found[i], errs[i] = s.solveOne(places[i], due[i])
			}
		})
	}
	working.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	return found, nil
}

// solveOne is solve at one place.
func (s *search) solveOne(at []float64, due []int) (found []rules.Finding, err error) {
	defer func() {
		if fault := recover(); fault != nil {
			err = fmt.Errorf("fault of the program at its unfavourable ends: %v", fault)
		}
	}()
	q := s.p.Varied(at)
	run, err := s.r.predict(&q, s.options)
	if err != nil {
		return nil, s.refusal(at, err)
	}
	return s.judge(run, due), nil
}

// judge judges a run by some of the limits.
func (s *search) judge(run *prediction, due []int) []rules.Finding {
	limits := make([]rules.Limit, len(due))
	for j, k := range due {
		limits[j] = *s.limits[k]
	}
	found := run.find(limits)
	for j, k := range due {
		found[j].Limit = s.limits[k]
	}
	return found
}

// refusal words why a corner cannot be calculated, at the rows of the spreads that make it so.
func (s *search) refusal(at []float64, err error) error {
	var es cell.Errors
	if !errors.As(err, &es) || len(es) == 0 || corner(at).nominal() {
		return err
	}
	c, why := s.blame(at, es[0])
	var rows []string
	first := -1
	for i, v := range c {
		switch {
		case v == 0:
		case first < 0:
			first = i
		default:
			rows = append(rows, s.p.Spreads[i].At.String())
		}
	}
	together := ""
	if len(rows) > 0 {
		together = "together with " + strings.Join(rows, ", ") + " "
	}
	return cell.Errors{{At: s.p.Spreads[first].At, Level: cell.Fault, Field: "Quantity", Typed: s.p.Spreads[first].Of.Name,
		Msg:  fmt.Sprintf("varies %sto what cannot be calculated (%s): %s", together, strings.Join(s.words(c), ", "), strings.TrimSpace(why.Typed+" "+why.Msg)),
		Hint: "let it vary less, or change what it is about"}}
}

// blame puts back to its typed value whatever a corner cannot be calculated without either, and tells why it still cannot be.
func (s *search) blame(at []float64, why cell.Error) (corner, cell.Error) {
	c := corner(at)
	for i := range c {
		less := c.with(i, 0)
		if c[i] == 0 || less.nominal() {
			continue
		}
		q := s.p.Varied(less)
		var es cell.Errors
		if _, err := s.r.predict(&q, s.options); errors.As(err, &es) && len(es) > 0 {
			c, why = less, es[0]
		}
	}
	return c, why
}

// corners finds the least favourable corner of each limit: directions by the effect of each end alone, or from corners that were worst beside
// this product, then whatever makes it worse. A quantity whose both ends are better than its typed value stays there.
func (s *search) corners() ([]corner, error) {
	begin := s.fromEnds
	if s.hints != nil {
		begin = s.fromHints
	}
	worst, err := begin()
	if err != nil {
		return nil, err
	}
	if err := s.climb(worst); err != nil || s.brief {
		return worst, err
	}
	return worst, s.between(worst)
}

// fromHints gives the worst of the corners that were worst beside this product, and of the typed values.
func (s *search) fromHints() ([]corner, error) {
	worst := make([]corner, len(s.limits))
	var list []ask
	for k := range worst {
		for _, c := range s.hints[k] {
			list = append(list, ask{c, k})
		}
	}
	if err := s.need(list); err != nil {
		return nil, err
	}
	for k := range worst {
		worst[k] = s.worstOf(k, make(corner, len(s.p.Spreads)), s.hints[k])
	}
	return worst, nil
}

// worstOf is the worst of some corners for a limit, the first given if none is worse.
func (s *search) worstOf(k int, worst corner, list []corner) corner {
	for _, c := range list {
		if rules.Worse(&s.at(c)[k], &s.at(worst)[k]) {
			worst = c
		}
	}
	return worst
}

// fromEnds finds where each end alone leads, and the worst of all corners that are worth it.
func (s *search) fromEnds() ([]corner, error) {
	zero := make(corner, len(s.p.Spreads))
	first := []corner{zero}
	for i := range zero {
		for _, v := range s.ends(i, 0) {
			first = append(first, zero.with(i, v))
		}
	}
	first = s.combined(first)
	if err := s.need(forAll(first)); err != nil {
		return nil, err
	}
	worst := make([]corner, len(s.limits))
	for k := range worst {
		c := zero
		for i := range zero {
			alone := zero
			for _, v := range s.ends(i, 0) {
				alone = s.worstOf(k, alone, []corner{zero.with(i, v)})
			}
			c = c.with(i, alone[i])
		}
		worst[k] = c
	}
	if err := s.need(forAll(worst)); err != nil {
		return nil, err
	}
	first = append(first, worst...) // what is worst for one limit may be for another
	for k := range worst {
		worst[k] = s.worstOf(k, worst[k], first)
		if s.also != nil {
			worst[k] = s.worstOf(k, worst[k], s.also[k])
		}
	}
	return worst, nil
}

// combined adds the corners that no single end may lead to.
func (s *search) combined(first []corner) []corner {
	n := len(s.p.Spreads)
	if s.brief {
		return first
	}
	if n <= fullSpreads {
		for k := 0; k < len(first); k++ { // grows while it is walked: each combination of ends
			for i := range n {
				for _, v := range s.ends(i, 0) {
					if c := first[k].with(i, v); !slices.ContainsFunc(first, func(o corner) bool { return slices.Equal(o, c) }) {
						first = append(first, c)
					}
				}
			}
		}
	}
	first = append(first, s.physical()...)
	if n > fullSpreads && n <= endSpreads {
		first = append(first, s.everyEnd()...)
	}
	return first
}

// betweenRounds is how often places between the ends are looked for at most, each time from where the last ones led.
const betweenRounds = 3

// between moves the corner of each limit that is met there to places between the ends where that makes it clearly worse, and on from there: to
// those that inner gives; to the last place at which the limit still counts, where farther on it does not, as where the food no longer gets as
// warm as its clock starts; and to where the parabola through three places has its worst.
func (s *search) between(worst []corner) error {
	looks := []func([]corner) (bool, error){s.halves, s.edges, s.bent, s.bent, s.bent}
	for range betweenRounds {
		moved := false
		for _, look := range looks {
			on, err := look(worst)
			if err != nil {
				return err
			}
			moved = moved || on
		}
		if !moved {
			return nil
		}
		if err := s.climb(worst); err != nil {
			return err
		}
	}
	return nil
}

// halves tries what inner gives of each spread.
func (s *search) halves(worst []corner) (moved bool, err error) {
	typed := s.at(make(corner, len(s.p.Spreads)))
	return s.tryOut(worst, func(_ int, c corner) []corner {
		var out []corner
		for i := range c {
			for _, v := range s.inner(i, typed) {
				out = append(out, c.with(i, v))
			}
		}
		return out
	})
}

// bent tries what bends gives.
func (s *search) bent(worst []corner) (moved bool, err error) { return s.tryOut(worst, s.bends) }

// tryOut judges each limit that is met at its corner at the places that look gives, and moves the corner to one that is clearly worse.
func (s *search) tryOut(worst []corner, look func(k int, c corner) []corner) (moved bool, err error) {
	next := make([][]corner, len(worst))
	var list []ask
	for k, c := range worst {
		if s.at(c)[k].Verdict == rules.Met {
			next[k] = look(k, c)
		}
		for _, d := range next[k] {
			list = append(list, ask{d, k})
		}
	}
	if err := s.need(list); err != nil {
		return false, err
	}
	for k := range worst {
		for _, c := range next[k] {
			if a, b := &s.at(c)[k], &s.at(worst[k])[k]; rules.Worse(a, b) && apart(a, b) {
				worst[k], moved = c, true
			}
		}
	}
	return moved, nil
}

// stands are the places of a spread, in order, at which a limit was judged with everything else as at a corner.
func (s *search) stands(k int, c corner, i int) []float64 {
	var out []float64
known:
	for _, f := range s.solved {
		if !f.judged[k] {
			continue
		}
		for j, v := range f.at {
			if v != c[j] && j != i {
				continue known
			}
		}
		out = append(out, f.at[i])
	}
	slices.Sort(out)
	return out
}

// edge is a part of a spread at the ends of which the course that decides a limit goes otherwise: on one the limit does not apply, say, or the food
// falls to where the clock starts once more. A margin may leap there.
type edge struct {
	ask
	spread   int
	lo, hi   float64
	fineness float64 // parts of the way from the typed value to an end
}

// sameWay tells whether two findings are of courses that go the same way.
func sameWay(a, b *rules.Finding) bool {
	return a.Goes == b.Goes && (a.Verdict == rules.NotApplicable) == (b.Verdict == rules.NotApplicable)
}

// edges moves the corner of each limit that is met there to places just beside an edge, along each spread and, of few, along those beside it, with
// another quantity at its ends. Where all that was judged goes the same way, nothing is tried.
func (s *search) edges(worst []corner) (moved bool, err error) {
	var lines []edge
	var list []ask
	for k, c := range worst {
		if s.at(c)[k].Verdict != rules.Met || s.allAlike(k) {
			continue
		}
		from := []corner{c}
		if len(c) <= fullSpreads {
			from = append(from, s.flips(c)...)
		}
		for i := range c {
			for _, d := range from {
				if d[i] == c[i] && len(s.ends(i, 0)) > 0 {
					lines = append(lines, edge{ask: ask{d, k}, spread: i})
					for _, v := range append(s.ends(i, 0), 0) {
						list = append(list, ask{d.with(i, v), k})
					}
				}
			}
		}
	}
	if err := s.need(list); err != nil {
		return false, err
	}
	var found []edge
	for _, e := range lines {
		at := s.stands(e.limit, e.corner, e.spread)
		for j := 1; j < len(at); j++ {
			a, b := &s.at(e.with(e.spread, at[j-1]))[e.limit], &s.at(e.with(e.spread, at[j]))[e.limit]
			if sameWay(a, b) {
				continue
			}
			e.lo, e.hi, e.fineness = at[j-1], at[j], parts
			if a.Verdict == rules.NotApplicable || b.Verdict == rules.NotApplicable {
				e.fineness = fineParts
			}
			found = append(found, e)
		}
	}
	if err := s.halve(found); err != nil {
		return false, err
	}
	for _, e := range found {
		for _, v := range s.stands(e.limit, e.corner, e.spread) { // so close to an edge it often cannot be told, and a little before it is not met
			c := e.with(e.spread, v)
			if a, b := &s.at(c)[e.limit], &s.at(worst[e.limit])[e.limit]; rules.Worse(a, b) && apart(a, b) {
				worst[e.limit], moved = c, true
			}
		}
	}
	return moved, nil
}

// allAlike tells whether everything that was judged by a limit goes the same way.
func (s *search) allAlike(k int) bool {
	var first *rules.Finding
	for _, f := range s.solved {
		switch {
		case !f.judged[k]:
		case first == nil:
			first = &f.findings[k]
		case !sameWay(first, &f.findings[k]):
			return false
		}
	}
	return true
}

// halve brings the ends of edges together.
func (s *search) halve(found []edge) error {
	for {
		var list []ask
		mids := make([]float64, len(found))
		for n, e := range found {
			mids[n] = math.Trunc((e.lo+e.hi)/2*e.fineness) / e.fineness
			if mids[n] > e.lo && mids[n] < e.hi {
				list = append(list, ask{e.with(e.spread, mids[n]), e.limit})
			}
		}
		if len(list) == 0 {
			return nil
		}
		if err := s.need(list); err != nil {
			return err
		}
		for n := range found {
			e := &found[n]
			at := func(v float64) *rules.Finding { return &s.at(e.with(e.spread, v))[e.limit] }
			switch {
			case !(mids[n] > e.lo && mids[n] < e.hi):
			case sameWay(at(mids[n]), at(e.lo)):
				e.lo = mids[n]
			default:
				e.hi = mids[n]
			}
		}
	}
}

// bends are places between the ends of each spread at which a limit may be less favourable than at a corner: along each stretch without an edge, where
// the parabola through the least margin, in time or in temperature, and those beside it has its least; and half way to those beside it, where the least
// lies between the ends of the stretch, or the margin hardly moves from its end on.
func (s *search) bends(k int, c corner) []corner {
	var out []corner
	for i := range c {
		at := s.stands(k, c, i)
		for len(at) > 0 {
			n := 1
			for n < len(at) && sameWay(&s.at(c.with(i, at[n-1]))[k], &s.at(c.with(i, at[n]))[k]) {
				n++
			}
			for _, margin := range []func(*rules.Finding) *float64{func(f *rules.Finding) *float64 { return f.MarginS }, func(f *rules.Finding) *float64 { return f.MarginK }} {
				y, known := make([]float64, n), n > 1
				for j, v := range at[:n] {
					m := margin(&s.at(c.with(i, v))[k])
					if known = known && m != nil; known {
						y[j] = *m
					}
				}
				if !known {
					continue
				}
				for _, v := range leastOf(at[:n], y) {
					v = math.Round(v*parts) / parts
					if d := c.with(i, v); !s.knows(d, k) && v > at[0] && v < at[n-1] {
						out = append(out, d)
					}
				}
			}
			at = at[n:]
		}
	}
	return out
}

// leastOf are places at which what is y at x may be less than that: see bends. x rises.
func leastOf(x, y []float64) []float64 {
	var out []float64
	least, most := slices.Min(y), slices.Max(y)
	here := slices.Index(y, least)
	within := here > 0 && here+1 < len(y)
	for _, n := range []int{here - 1, here + 1} {
		if n >= 0 && n < len(y) && most > least && (within || y[n]-least < flatPart*(most-least)) {
			out = append(out, (x[n]+x[here])/2)
		}
	}
	if len(x) < 3 {
		return out
	}
	j := max(1, min(here, len(x)-2))
	x, y = x[j-1:j+2], y[j-1:j+2]
	first, second := (y[1]-y[0])/(x[1]-x[0]), (y[2]-y[1])/(x[2]-x[1])
	if second > first {
		if v := (x[0]+x[1])/2 - first*(x[2]-x[0])/2/(second-first); v > x[0] && v < x[2] {
			out = append(out, v)
		}
	}
	return out
}

// flatPart is how little of all that a margin moves along a spread it may move from its end on for a place between to be tried there.
const flatPart = 0.25

// inner are places of a spread between its ends: half way to each, and of temperatures the quarters and those that bring the start just to
// either side of where a limit begins to count.
func (s *search) inner(i int, typed []rules.Finding) []float64 {
	sp := &s.p.Spreads[i]
	within := []int{parts / 2}
	if strings.HasSuffix(sp.Of.Name, "temperature") {
		within = []int{parts / 4, parts / 2, parts * 3 / 4}
	}
	return s.along(i, func(sign int, by float64) []int {
		here := slices.Clone(within)
		for k := range typed {
			here = append(here, s.starting(i, sign, by, typed[k].Limit)...)
		}
		return here
	})
}

// along gives the places of a spread between its ends at some parts of the way to each, which lies so far off on a side.
func (s *search) along(i int, at func(sign int, by float64) []int) []float64 {
	var out []float64
	minus, plus := s.p.Span(i)
	for k, by := range []float64{minus, plus} {
		sign := 2*k - 1
		if !(by > 0) {
			continue
		}
		here := at(sign, by)
		slices.Sort(here)
		for _, n := range slices.Compact(here) {
			if n > 0 && n < parts {
				out = append(out, float64(sign*n)/parts)
			}
		}
	}
	return out
}

// starting are the parts of the way to an end, which lies so far off, at which a start is just to either side of where the clock of a limit
// starts; none if the spread is not of the start or the limit has no such place.
func (s *search) starting(i, sign int, by float64, l *rules.Limit) []int {
	if l.FromC == nil || s.p.Spreads[i].Of.Name != "start temperature" {
		return nil
	}
	n := int(math.Floor((*l.FromC - s.p.StartC) * float64(sign) / by * parts))
	return []int{n - 1, n, n + 1, n + 2}
}

// beside are the places of a spread, between its ends, that starting gives.
func (s *search) beside(i int, l *rules.Limit) []float64 {
	return s.along(i, func(sign int, by float64) []int { return s.starting(i, sign, by, l) })
}

// slowing gives the ends at which heat moves slowly through a food, by quantity: 1 is Plus. Those of temperatures and durations depend on
// what the steps are for.
var slowing = map[string]float64{"thickness": 1, "width": 1, "length": 1, "diameter": 1, "film coefficient": -1, "air speed": -1, "conductivity": -1,
	"specific heat": 1, "density": 1}

// physical are the corners that no single end may lead to, where a step ends at a temperature say, and each end alone leaves the margin as it
// is: everything slow and cold, or quick and hot, in heating, with everything slow and warm, or quick and cold, afterwards, and durations both ways.
func (s *search) physical() []corner {
	var out []corner
	for _, heating := range []float64{-1, 1} { // cold and slow, hot and quick
		for _, after := range []float64{-1, 1} { // warm and slow, cold and quick
			for _, size := range []float64{-1, 1} {
				for _, time := range []float64{-1, 1} {
					c := make(corner, len(s.p.Spreads))
					for i := range c {
						sp := &s.p.Spreads[i]
						heats := sp.Step >= 0 && s.p.Steps[sp.Step].Stage != nil && s.p.Steps[sp.Step].Stage.Heats
						way, known := slowing[sp.Of.Name]
						switch {
						case sp.Of.Name == "start temperature":
							way = heating
						case sp.Of.Name == "medium temperature" && heats:
							way = heating
						case sp.Of.Name == "medium temperature":
							way = -after
						case sp.Of.Name == "duration":
							way = time
						case known && heats:
							way *= -heating
						case known && sp.Step >= 0:
							way *= -after
						default:
							way = size
							if known && slowing[sp.Of.Name] < 0 {
								way = -size
							}
						}
						if slices.Contains(s.ends(i, 0), way) {
							c[i] = way
						}
					}
					out = append(out, c)
				}
			}
		}
	}
	return out
}

// everyEnd are all combinations of ends, each as far as it varies that way.
func (s *search) everyEnd() []corner {
	out := []corner{make(corner, len(s.p.Spreads))}
	for i := range s.p.Spreads {
		var next []corner
		for _, c := range out {
			for _, v := range s.ends(i, 0) {
				next = append(next, c.with(i, v))
			}
		}
		out = next
	}
	return out
}

// climb moves each limit's corner as long as one flip makes it worse. Where any did, the quantities bear on one another, and pairs of
// flips are tried too before it is left.
func (s *search) climb(worst []corner) error {
	moved, paired := make([]bool, len(worst)), make([]bool, len(worst))
	for {
		var list []ask
		next := make([][]corner, len(worst))
		for k, c := range worst {
			next[k] = s.flips(c)
			if paired[k] {
				next[k] = append(next[k], s.pairs(c)...)
			}
			for _, d := range next[k] {
				list = append(list, ask{d, k})
			}
		}
		if err := s.need(list); err != nil {
			return err
		}
		open := false
		for k := range worst {
			best := worst[k]
			for _, c := range next[k] {
				if rules.Worse(&s.at(c)[k], &s.at(best)[k]) {
					best = c
				}
			}
			switch {
			case !slices.Equal(best, worst[k]):
				worst[k], moved[k], paired[k], open = best, true, false, true
			case moved[k] && !paired[k]:
				paired[k], open = true, true
			}
		}
		if !open {
			return nil
		}
	}
}

// flips are the corners that differ in one quantity.
func (s *search) flips(c corner) []corner {
	var out []corner
	for i, now := range c {
		for _, v := range s.ends(i, now) {
			out = append(out, c.with(i, v))
		}
	}
	return out
}

// pairs are the corners that differ in two quantities, each at an end of its own.
func (s *search) pairs(c corner) []corner {
	var out []corner
	for i := range c {
		for _, v := range s.ends(i, c[i]) {
			for j := range i {
				for _, w := range s.ends(j, c[j]) {
					if v != 0 && w != 0 {
						out = append(out, c.with(i, v).with(j, w))
					}
				}
			}
		}
	}
	return out
}

// worst judges each limit of a product at its own least favourable corner. out is what the typed values give, with its findings before
// groups join them; what the corners give takes their place.
func (r *runner) worst(p *workbook.Product, out *report.Product, typed []rules.Finding, o model.Options) error {
	s := r.searching(p, typed, o)
	if r.corners != nil {
		return s.known(out, typed)
	}
	worst, err := s.corners()
	if err != nil {
		return err
	}
	findings := make([]rules.Finding, len(worst))
	runs := map[string]*prediction{}
	for k, c := range worst {
		f := s.at(c)[k]
		w := report.WorstCase{Limit: f.Limit, At: c, Ends: s.words(s.telling(k, c)), Nominal: typed[k], Drivers: s.drivers(k)}
		if !c.nominal() {
			if runs[c.key()] == nil {
				q := p.Varied(c)
				if runs[c.key()], err = r.predict(&q, o); err != nil {
					return err
				}
			}
			run := runs[c.key()]
			f.Run = out.AtWorst(fmt.Sprint(len(runs)), f.Run, run.runOf(f.Run), &run.product.Product)
			f.Why = strings.TrimSpace(f.Why + " " + w.Words())
		}
		findings[k] = f
		out.Worst = append(out.Worst, w)
	}
	if r.options != nil && r.options.samples > 0 {
		if err := s.share(r.options.samples, r.options.seed, out.Worst); err != nil {
			return err
		}
		for k := range findings {
			findings[k].Verdict, findings[k].Why = drawn(&findings[k], out.Worst[k].Share)
		}
	}
	out.Judgement = rules.Conclude(findings, r.plan.Groups)
	return nil
}

// drawn is the verdict of a limit and its why beside the pieces that were drawn: a piece that misses a limit lies worse than the worst place found.
func drawn(f *rules.Finding, s *report.Share) (rules.Verdict, string) {
	if f.Verdict != rules.Met || s == nil || s.Met == s.Pieces {
		return f.Verdict, f.Why
	}
	return rules.CannotTell, strings.TrimSuffix(f.Why, ".") + fmt.Sprintf("; but %d of %d pieces drawn from between the ends are not met, so it cannot be told.", s.Pieces-s.Met, s.Pieces)
}

// An end is told if leaving it moves the margin by this much, or the verdict.
const (
	toldK = 0.005
	toldS = 1.0
)

// apart tells whether two findings of a limit differ by what is told.
func apart(a, b *rules.Finding) bool {
	far := func(a, b *float64, least float64) bool {
		if a == nil || b == nil {
			return (a == nil) != (b == nil)
		}
		return math.Abs(*a-*b) >= least
	}
	return a.Verdict != b.Verdict || far(a.MarginK, b.MarginK, toldK) || far(a.MarginS, b.MarginS, toldS)
}

// telling is the corner of a limit with the ends that hardly matter left as typed, such as a cook's oven for a limit on chilling. If none of
// them matters it is the corner itself.
func (s *search) telling(k int, c corner) corner {
	at := &s.at(c)[k]
	out := c
	for i := range c {
		if d := c.with(i, 0); s.knows(d, k) && !apart(&s.at(d)[k], at) {
			out = out.with(i, 0)
		}
	}
	if out.nominal() {
		return c
	}
	return out
}

// known judges each limit at the corner that was found for it before, or as typed where that is worse.
func (s *search) known(out *report.Product, typed []rules.Finding) error {
	findings := slices.Clone(typed)
	for k := range findings {
		c := s.r.corners[findings[k].Limit.At]
		if c == nil {
			continue
		}
		if err := s.need([]ask{{c, k}}); err != nil {
			return err
		}
		if f := &s.at(c)[k]; rules.Worse(f, &findings[k]) {
			findings[k] = *f
		}
	}
	out.Judgement = rules.Conclude(findings, s.r.plan.Groups)
	return nil
}

// atCorners is the same job at the corners that were found for a product: what helps most is looked for there, at the cost of a few runs.
func (r *runner) atCorners(now *report.Product) *runner {
	if len(now.Worst) == 0 {
		return r
	}
	q := &runner{plan: r.plan, head: r.head, options: r.options, corners: map[cell.Ref]corner{}}
	for i := range now.Worst {
		q.corners[now.Worst[i].Limit.At] = now.Worst[i].At
	}
	return q
}

// drivers rank what varies by the room that each leaves alone, the least first.
func (s *search) drivers(k int) []report.Driver {
	zero := make(corner, len(s.p.Spreads))
	typed := &s.at(zero)[k]
	type ranked struct {
		report.Driver
		worst *rules.Finding
	}
	var list []ranked
	for i := range s.p.Spreads {
		sp := &s.p.Spreads[i]
		d := ranked{report.Driver{Quantity: sp.Named(), Basis: sp.Basis, At: sp.At}, typed}
		for _, v := range s.ends(i, 0) {
			f := &s.at(zero.with(i, v))[k]
			d.Ends = append(d.Ends, report.DriverEnd{Words: sp.End(int(v)), Verdict: f.Verdict, K: less(f.MarginK, typed.MarginK), S: less(f.MarginS, typed.MarginS)})
			if rules.Worse(f, d.worst) {
				d.worst = f
			}
		}
		list = append(list, d)
	}
	slices.SortStableFunc(list, func(a, b ranked) int {
		switch {
		case rules.Worse(a.worst, b.worst):
			return -1
		case rules.Worse(b.worst, a.worst):
			return 1
		}
		return 0
	})
	out := make([]report.Driver, len(list))
	for i := range list {
		out[i] = list[i].Driver
	}
	return out
}

// less is a minus b; nil where one of them does not exist.
func less(a, b *float64) *float64 {
	if a == nil || b == nil {
		return nil
	}
	d := *a - *b
	return &d
}
