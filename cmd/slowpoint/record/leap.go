package record

import (
	"math"
	"sort"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// Food is a place within a food whose temperature a channel shows.
type Food struct {
	SettleS     float64         // how soon it settles once its surroundings change, at the soonest (model.Quickness), s; 0: not known
	ShareS      float64         // the most that it moves in a second, as a share of the range of its surroundings, 1/s; 0: not known
	LowC, HighC float64         // that range, °C; NaN: not known
	Follows     *model.Response // how it follows its surroundings at the soonest; nil: not known
}

// Stretch is a step of the chain on the clock of a log.
type Stretch struct {
	StartS, EndS float64 // s
	Heats        bool    // its surroundings are hotter than the food
}

// Leap is a move that is faster than a food can move, after which the readings may be of something else.
type Leap struct {
	Before      int // the last reading before it
	First, Last int // the readings that are doubtful; Last < First: none, the probe was put in there
	Problem     cell.Error
	strayC      float64 // the farthest of readings that went away and came back, °C; 0: it is told by how fast it was
}

// A leap is told from a move of the food in one of five ways. All figures are our own choice; what a food can do is computed (model.Quickest)
// and held against histories of the exact model by tests.
//
// It begins and ends too sharply. A food smooths what its surroundings do: in up to a quarter of the time in which it settles it does not move
// sharply times as fast as in the three times as long before, and after (in 3000 drawn pieces, films and chains 6.6 times at most). A probe
// that was pulled out or unplugged settles within a minute or two. Of a food that is not known little is taken for granted: that it is no slab
// under 20 mm, nor a cylinder under 30 mm; and, for readings that lie further apart than unknownS, no slab under 36 mm (5 min apart) to 50 mm
// (10 min). A thinner piece may then be doubted, which the thickness in the plan mends.
//
// It is faster than a known food can move: twice over, for a plan whose thickness or conductivity is off, or by any amount if it is sharp as
// well.
//
// It is beyond what a known food can do, however its surroundings were (model.Response): it turns away further from the straight line that it
// was on, or comes nearer to the coldest or the hottest of the plan, than food that is twice as quick could. So a slow sensor is told from the
// food too, which it leaves too suddenly, or for the air too soon.
//
// It begins too sharply and is faster than the food can move, however it ends: a probe in a sleeve follows the air for minutes. Of a food that
// is not known that is what the core of a slab of 20 mm does with its faces held at a temperature unknownK away.
//
// It is the last that was read, or the first, so that nothing shows how it ends or began. Then it must be sharp on the other side, and faster
// than the food can move; of a food that is not known, of 10 K.
const (
	sharply     = 8.0
	quietTimes  = 3.0   // how many times as long as the move the readings before and after it are looked at
	ofSettling  = 4.0   // the part of the time of settling
	leapS       = 900.0 // of a food that is known; sensors follow within that
	unknownS    = 90.0  // of a food that is not
	unknownOneS = 600.0 // from a reading to the next
	twiceOver   = 2.0
	lastLeap    = 10.0 // K
	slackK      = 5.0  // by which surroundings may be colder or hotter than in the plan, and than all readings, K
	turnK       = 2.0  // of noise, K
	onsetK      = 1.0  // that a first reading has turned, K
	onsetBack   = 3    // readings before the move in which it is looked for
	onsetPart   = 0.03 // of the leap
	strayS      = 3600.0
	lateS       = 300.0 // by which a step may have begun earlier than is said

	unknownShareS = 1.851 * 1.5e-7 / (0.010 * 0.010) // model.Quickest of that slab, of a food that conducts well, 1/s
	unknownK      = 120.0
)

// Readings have come back when, within backS, they go back by at least half of how far they were away, as fast as a leap, to within a quarter
// of it of the last reading before it, and backLeast of them in a row stay there. Otherwise they are doubted to the end. A slow sensor is
// still on its way then, and is doubted on (settled). Own choice.
const (
	backS     = 3600.0
	backLeast = 3
	backK     = 2.0 // near enough in any case
	farPart   = 0.9 // of the farthest
	settledK  = 1.5 // that it moves in the time that it took to come back
)

// A probe was put in, and not pulled out, where the file begins with readings that all lie within putInK of each other at a temperature of
// rooms, for no longer than putInS, and no reading of 100 °C or more follows. Such a leap is told, and nothing is doubted. Own choice.
const (
	putInS            = 600.0
	putInK            = 2.0
	putOnS            = 300.0      // until the sensor shows the food
	roomLow, roomHigh = 10.0, 35.0 // °C
	boils             = 100.0
)

// leaper looks for leaps among the readings that are not doubtful already.
type leaper struct {
	at     []int // of each reading: its place in the log
	t, c   []float64
	food   Food
	resK   float64
	spans  []float64 // the times in which a leap is looked for, s, rising
	oneS   float64   // the longest from a reading to the next
	mostC  float64   // K/s, 0: not known
	since  int       // the first reading after the last leap: what was read before it was of something else
	steps  []Stretch // of the chain; nil: not known
	lo, hi float64   // what its surroundings may have been at, °C; NaN: not known
}

func newLeaper(log *Log, f Food) *leaper {
	s := &leaper{food: f, resK: log.ResolutionK, lo: math.NaN(), hi: math.NaN()}
	for i, d := 0, 0; i < len(log.C); i++ {
		if d < len(log.Doubtful) && log.Doubtful[d] == i {
			d++
			continue
		}
		s.at, s.t, s.c = append(s.at, i), append(s.t, log.TimesS[i]), append(s.c, log.C[i])
	}
	longest := unknownS
	s.oneS = unknownOneS
	if f.SettleS > 0 {
		longest = math.Min(f.SettleS, leapS)
		s.oneS = longest
	}
	if log.StepS > 0 {
		for w := log.StepS; w <= longest; w *= 2 {
			s.spans = append(s.spans, w)
		}
	}
	if len(s.spans) == 0 || s.spans[len(s.spans)-1] < s.oneS {
		s.spans = append(s.spans, math.Min(longest, s.oneS))
	}
	if f.ShareS > 0 && f.HighC >= f.LowC {
		lo, hi := f.LowC, f.HighC
		for _, c := range s.c {
			lo, hi = math.Min(lo, c), math.Max(hi, c)
		}
		s.mostC = f.ShareS * (hi - lo)
		s.lo, s.hi = lo-slackK, hi+slackK
	} else if f.SettleS == 0 {
		s.mostC = unknownShareS * unknownK
	}
	return s
}

// Within gives the log of a place within a food: the same readings, with where they leap. steps are those of the chain, rising; none: they are
// not known.
func (l *Log) Within(f Food, steps []Stretch) *Log {
	out := *l
	if len(l.C) < 3 {
		return &out
	}
	s := newLeaper(l, f)
	s.steps = steps
	out.Leaps = s.all()
	for i := range out.Leaps {
		out.Leaps[i].Problem = out.leapt(&out.Leaps[i], f.SettleS > 0)
	}
	return &out
}

// all are the leaps, without what there is to say.
func (s *leaper) all() []Leap {
	var out []Leap
	s.since = 0
	ends := make([]int, len(s.spans)) // by span: the last reading within it
	for i := 0; i+1 < len(s.c); {
		base, ok := s.from(i, ends)
		if !ok {
			i++
			continue
		}
		back, far := s.back(base)
		l := Leap{Before: s.at[base], First: s.at[base+1], Last: s.at[back-1]}
		if s.putIn(base, far) {
			l.Last = l.First - 1
			for back = base + 1; back < len(s.c)-1 && s.t[back] <= s.t[base]+putOnS; back++ {
			}
		}
		out = append(out, l)
		i, s.since = back, back
	}
	return s.withStrays(out)
}

// withStrays adds to the leaps where readings go astray and come back, between them.
func (s *leaper) withStrays(leaps []Leap) []Leap {
	var out []Leap
	i, n := 0, 0
	for k := range s.steps {
		sign := 1.0 // of food that is chilled: it may rise before it falls, and does not rise again
		if s.steps[k].Heats {
			sign = -1
		}
		until := math.Inf(1) // when the next step begins
		if k+1 < len(s.steps) {
			until = s.steps[k].EndS
		}
		for i < len(s.t) && s.t[i] < s.steps[k].StartS-sameS {
			i++
		}
		for i < len(s.t) && s.step(i) == k {
			j := i // up to the next leap
			for j < len(s.t) && s.step(j) == k && (n == len(leaps) || s.at[j] < leaps[n].First) {
				j++
			}
			out = append(out, s.strays(i, j, sign, until)...)
			for i = j; n < len(leaps) && i < len(s.t) && s.at[i] >= leaps[n].First; n++ {
				out = append(out, leaps[n])
				for i < len(s.t) && s.at[i] <= leaps[n].Last {
					i++
				}
			}
		}
	}
	out = append(out, leaps[n:]...)
	sort.SliceStable(out, func(a, b int) bool { return out[a].First < out[b].First })
	return out
}

// strays finds where the readings from i up to before end, of one step, fall and rise again (sign 1) or rise and fall again (−1) as no food
// does in surroundings that stay as they are: heat from further out may first run on, and then the middle follows them. What turns once more
// within strayS is of something else until it has come back, which a sensor has where it turns anew: there it shows what it is in.
func (s *leaper) strays(i, end int, sign, untilS float64) []Leap {
	var out []Leap
	least := math.Max(leastJump, 3*s.resK)
	for i < end {
		high, x := i, -1 // the highest so far, and the lowest since, where it is far enough below
		k := i
		for ; k < end; k++ {
			y := sign * s.c[k]
			switch {
			case y > sign*s.c[high] && x < 0:
				high = k
			case x < 0 && y <= sign*s.c[high]-least, x >= 0 && y < sign*s.c[x]:
				x = k
			}
			if x >= 0 && y >= sign*s.c[x]+least {
				break
			}
		}
		if k >= end {
			return out
		}
		back := k // where it turns anew
		for r := k; r < len(s.c) && sign*s.c[r] > sign*s.c[back]-math.Max(onsetK, 3*s.resK); r++ {
			if sign*s.c[r] >= sign*s.c[back] {
				back = r
			}
		}
		m := x - 1 // the last that was as high
		for m > i && sign*s.c[m] < sign*s.c[back] {
			m--
		}
		if s.t[x]-s.t[m] > strayS || back >= end-1 && (k == end-1 && end < len(s.t) || untilS-s.t[k] <= lateS+sameS) {
			i = max(back, i+1)
			continue
		}
		m = s.leaves(i, m, x, sign)
		last := back - 1
		if back == len(s.c)-1 { // it is on its way yet
			last = back
		}
		out = append(out, Leap{Before: s.at[m], First: s.at[m+1], Last: s.at[last], strayC: s.c[x]})
		i = back
	}
	return out
}

// leaves is the last reading before those that went astray to x, from i on: m, or earlier where it turns that way earlier.
func (s *leaper) leaves(i, m, x int, sign float64) int {
	least := math.Max(onsetK, math.Max(3*s.resK, onsetPart*math.Abs(s.c[x]-s.c[m])))
	first := m
	for k := m; k > i && s.t[m]-s.t[k] <= strayS/4; k-- {
		turn := s.c[k+1] - s.c[k] - (s.c[k]-s.c[k-1])*(s.t[k+1]-s.t[k])/(s.t[k]-s.t[k-1])
		if -sign*turn >= least {
			first = k
		}
	}
	return first
}

// from looks for a leap after the reading i, and gives the last reading before it.
func (s *leaper) from(i int, ends []int) (base int, ok bool) {
	n, before := len(s.c), -1
	for k, w := range s.spans {
		for ends[k] < i || ends[k]+1 < n && s.t[ends[k]+1] <= s.t[i]+w+sameS {
			ends[k]++
		}
		j := ends[k]
		if j == i {
			if j++; s.t[j]-s.t[i] > s.oneS+sameS {
				continue
			}
		}
		if j == before {
			continue
		}
		before = j
		if s.isLeap(i, j) || s.beyond(i, j) {
			return s.onset(s.soonest(i, j)), true
		}
	}
	return 0, false
}

// soonest is the move within the readings from i to j, which hold a leap, that ends first and is one too.
func (s *leaper) soonest(i, j int) (from, to int) {
	for to = i + 1; to < j; to++ {
		for from = to - 1; from >= i; from-- {
			if s.isLeap(from, to) || s.beyond(from, to) {
				return from, to
			}
		}
	}
	return i, j
}

// sameS is below what any logger's clock tells, s.
const sameS = 1e-6

// isLeap tells whether the readings leap after i, up to j.
func (s *leaper) isLeap(i, j int) bool {
	away, long := math.Abs(s.c[j]-s.c[i]), s.t[j]-s.t[i]
	if away < leastJump {
		return false
	}
	if s.mostC > 0 && away > twiceOver*s.mostC*long+s.resK {
		return true
	}
	if away <= sharply*s.resK {
		return false
	}
	quiet := away / sharply
	open := true // what came before it, or comes after it, was not read for as long
	for h := i - 1; h >= 0; h-- {
		if math.Abs(s.c[h]-s.c[i]) >= quiet*math.Max(1, (s.t[i]-s.t[h])/long) {
			return false
		}
		if open = s.t[i]-s.t[h] < long-sameS; s.t[i]-s.t[h] >= quietTimes*long-sameS {
			break
		}
	}
	if !open && s.mostC > 0 && away > s.mostC*long+s.resK {
		return true
	}
	ends := true
	for k := j + 1; k < len(s.c); k++ {
		if math.Abs(s.c[k]-s.c[j]) >= quiet*math.Max(1, (s.t[k]-s.t[j])/long) {
			return false
		}
		if ends = s.t[k]-s.t[j] < long-sameS; s.t[k]-s.t[j] >= quietTimes*long-sameS {
			break
		}
	}
	open = open || ends
	switch {
	case s.food.SettleS == 0:
		return !open || away >= lastLeap
	case s.mostC > 0 && away > s.mostC*long+s.resK:
		return true
	}
	return !open && long <= s.food.SettleS/ofSettling
}

// beyond tells whether the readings up to j are beyond what the place of a known food can do after the reading i, however its surroundings were.
func (s *leaper) beyond(i, j int) bool {
	move, long := s.c[j]-s.c[i], s.t[j]-s.t[i]
	if s.food.Follows == nil || math.IsNaN(s.lo) || math.Abs(move) < leastJump {
		return false
	}
	end := s.lo
	if move > 0 {
		end = s.hi
	}
	if math.Abs(s.c[j]-end)+2*s.resK < (math.Abs(s.c[i]-end)-2*s.resK)*math.Exp(-twiceOver*long/s.food.SettleS) {
		return true // sooner there than the slowest part of a start is gone
	}
	h := i
	for h > s.since && s.t[i]-s.t[h] < long-sameS {
		h--
	}
	before, share := s.t[i]-s.t[h], 0.0
	if before < long/2 { // too short to tell a straight line from noise
		h, before = i, 0
	}
	if h < i {
		share = long / before
	}
	off := move - share*(s.c[i]-s.c[h]) // from the straight line
	if off*move <= 0 {
		return false
	}
	noise := turnK + (1+share)*s.resK
	if math.Abs(off) > leastJump && math.Abs(off) > noise+s.food.Follows.Turn(twiceOver*before, twiceOver*long)*(s.hi-s.lo) {
		return true
	}
	return math.Abs(move) > noise+s.food.Follows.Turn(0, twiceOver*long)*(s.hi-s.lo)
}

// onset is the last reading before a leap between i and j: the first after which it turns that way, by more than noise and than a small part
// of the leap. A probe that is pulled out shortly before a reading has moved by little at that.
func (s *leaper) onset(i, j int) int {
	away := s.c[j] - s.c[i]
	least := math.Max(onsetK, math.Max(3*s.resK, math.Abs(away)*onsetPart))
	for m := max(s.since, i-onsetBack); m < j; m++ {
		turn := s.c[m+1] - s.c[m]
		if m > 0 {
			turn -= (s.c[m] - s.c[m-1]) * (s.t[m+1] - s.t[m]) / (s.t[m] - s.t[m-1])
		}
		if math.Copysign(turn, turn*away) >= least {
			return m
		}
	}
	return i
}

// back finds the reading with which a leap after base has come back; the number of readings if it has not. far is the reading farthest away on
// its side.
func (s *leaper) back(base int) (back int, far float64) {
	n := len(s.c)
	fast := math.Max(s.spans[len(s.spans)-1], s.oneS)
	if s.food.SettleS == 0 {
		fast = unknownOneS
	}
	away := 0.0 // K, with its sign
	for m, k := base+1, base+1; k < n && s.t[k]-s.t[base] <= backS+sameS; k++ {
		d := s.c[k] - s.c[base]
		if k == base+1 || d*away >= 0 && math.Abs(d) > math.Abs(away) {
			away = d
		}
		for s.t[k]-s.t[m] > fast {
			m++
		}
		m = min(m, k-1)
		near := math.Max(backK, math.Abs(away)/4)
		if k == base+1 || math.Abs(d) > near || k+backLeast > n {
			continue
		}
		returned := false // as fast as a leap
		for x := m; x < k; x++ {
			returned = returned || math.Abs(s.c[x]-s.c[k]) >= math.Abs(away)/2 && (s.c[x]-s.c[k])*away > 0
		}
		stays := returned && s.maySee(base, k, away)
		for x := k + 1; x < k+backLeast; x++ {
			stays = stays && math.Abs(s.c[x]-s.c[base]) <= near
		}
		if stays {
			return s.settled(base, k), s.c[base] + away
		}
	}
	return n, s.c[base] + away
}

// maySee tells whether a reading k may be of the food again after a leap by away (K, with its sign) behind base. In another step a probe that
// lies in the air passes what the food was at on its way to the new surroundings; only what goes the other way has been put back.
func (s *leaper) maySee(base, k int, away float64) bool {
	a, b := s.step(base), s.step(k)
	return a == b || b < 0 || s.steps[b].Heats == (away > 0)
}

// step is the step that a reading lies in; −1 if it lies in none.
func (s *leaper) step(i int) int {
	for k := range s.steps {
		if s.t[i] >= s.steps[k].StartS-sameS && (s.t[i] < s.steps[k].EndS || k == len(s.steps)-1 && s.t[i] <= s.steps[k].EndS+sameS) {
			return k
		}
	}
	return -1
}

// settled is the reading, from k on, at which a sensor that has come back to k is no longer on its way: a slow one that has come to within a
// quarter takes as long again for each further quarter. It is waited for twice that, and no longer than it moves.
func (s *leaper) settled(base, k int) int {
	far, side := k-1, s.c[k-1]-s.c[base]
	for x := k - 1; x > base; x-- { // the last that was as far away as any
		if d := s.c[x] - s.c[base]; math.Abs(d) > math.Abs(side)/farPart {
			far, side = x, d
		}
	}
	took := s.t[k] - s.t[far]
	last := k
	for ; last+1 < len(s.c) && s.t[last+1] <= s.t[k]+2*took+sameS; last++ {
		move := math.Copysign(s.c[last+1]-s.c[last], -side*(s.c[last+1]-s.c[last]))
		if move*took/(s.t[last+1]-s.t[last]) <= settledK+2*s.resK {
			break
		}
	}
	return last
}

// putIn tells whether the probe was put into the food just after base; far is where it went.
func (s *leaper) putIn(base int, far float64) bool {
	k := s.step(base)
	heated := k >= 0 && s.steps[k].Heats && far > s.c[base] // food comes cold to a step that heats it
	if s.t[base]-s.t[0] > putInS || far >= boils || heated {
		return false
	}
	lo, hi := s.c[0], s.c[0]
	for _, c := range s.c[:base+1] {
		lo, hi = math.Min(lo, c), math.Max(hi, c)
	}
	return hi-lo <= math.Max(putInK, 2*s.resK) && lo >= roomLow && hi <= roomHigh
}

// leapt words a leap of a food that is known or not.
func (l *Log) leapt(p *Leap, known bool) cell.Error {
	at, typed := l.src.place(l.Lines[p.First], l.temp), shownC(l.C[p.First])
	from, long := shownC(l.C[p.Before]), spanOf(l.TimesS[p.First]-l.TimesS[p.Before])
	if p.Last < p.First {
		return putInto.problem(at, cell.Warning, "", typed, from, long)
	}
	which := "it is"
	switch {
	case p.Last == len(l.C)-1 && p.Last > p.First:
		which = "it and what follows to the end are"
	case p.Last > p.First:
		which = "it and what follows up to " + rowOf(l.src, l.Lines[p.Last]) + " are"
	}
	if p.strayC != 0 {
		lasted := spanOf(l.TimesS[min(p.Last+1, len(l.C)-1)] - l.TimesS[p.Before])
		return strayed.problem(at, cell.Warning, "", typed, from, long, shownC(p.strayC), lasted, which)
	}
	food := "the core of a food can move unless it is thin"
	if known {
		food = "this food can move there"
	}
	return leapt.problem(at, cell.Warning, "", typed, from, long, food, which)
}

// Doubted lists the readings from first up to before end that are doubtful, rising, counted from first on. Of a leap only those count before
// which there is a reading from since on.
func (l *Log) Doubted(first, end, since int) []int {
	var out []int
	out = append(out, l.Doubtful...)
	for _, p := range l.Leaps {
		if p.Before < since {
			continue
		}
		for d := p.First; d <= p.Last; d++ {
			out = append(out, d)
		}
	}
	sort.Ints(out)
	n := 0
	for i, d := range out {
		if d >= first && d < end && (i == 0 || d != out[i-1]) {
			out[n] = d - first
			n++
		}
	}
	return out[:n]
}
