package record

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// How many equal readings are more than a steady temperature explains.
const (
	constantLeast = 20   // of a whole record
	frozenLeast   = 60   // in a row
	frozenS       = 1800 // and s from the first to the last of them
)

// constant refuses a channel that never moves although it shows more than whole degrees; one of whole degrees may be steady.
func (r *reader) constant(t *taker) {
	if len(t.cs) < constantLeast || slices.Min(t.cs) != slices.Max(t.cs) {
		return
	}
	level := cell.Fault
	if t.step.places == 0 {
		level = cell.Warning
	}
	r.tells.tell(constant, level, "", t.lines[0], t.lay.temp, fmt.Sprintf("%g", t.cs[0]), fmt.Sprint(len(t.cs)))
}

// check looks at the log as a whole: gaps, jumps, sensors that stopped, clocks that were not set.
func (r *reader) check(t *taker, start float64) {
	r.gaps(t, start)
	r.jumps(t)
	r.log.src, r.log.temp = r.src, t.lay.temp
	r.stopped(t)
	r.years(t)
}

// gaps finds the usual step, and where readings are lacking.
func (r *reader) gaps(t *taker, start float64) {
	log := r.log
	n := len(log.TimesS)
	log.StepS = model.UsualStep(log.TimesS)
	most := model.MostApartS(log.StepS)
	if n < 2 {
		return
	}
	sparse := log.StepS > most
	if sparse {
		r.tells.tell(farApart, cell.Warning, "", log.Lines[0], 0, "", spanOf(log.StepS), spanOf(most))
	}
	for i := 1; i < n; i++ {
		d := log.TimesS[i] - log.TimesS[i-1]
		apart := d > most+tiny
		if apart || leaps(log.C, i) {
			if h := t.partBetween(log.Lines[i-1], log.Lines[i]); h > 0 {
				t.tell(twoTables, h, 0, "", r.src.holder(), fmt.Sprintf("%ss %d to %d", r.src.word(), t.lay.first, log.Lines[i-1]), r.row(log.Lines[i]))
				return
			}
		}
		if !apart {
			continue
		}
		log.Gaps = append(log.Gaps, i-1)
		if sparse && d <= 3*log.StepS { // told as a whole
			continue
		}
		s := gap
		if t.form == dateStamp && !r.utc && math.Abs(d-3600) <= max(3*log.StepS, 60) && changeHour(instant(start+log.TimesS[i])) {
			s = springGap
		}
		r.tells.tell(s, cell.Warning, "", log.Lines[i-1], 0, "", r.row(log.Lines[i-1]), fmt.Sprint(log.Lines[i]), spanOf(d), spanOf(log.StepS))
	}
}

// partBetween gives a line of headings or an empty one between two lines; 0 if there is none.
func (t *taker) partBetween(a, b int32) int32 {
	a, b = min(a, b), max(a, b) // a record turned round
	if i := sort.Search(len(t.partsAt), func(i int) bool { return t.partsAt[i] > a }); i < len(t.partsAt) && t.partsAt[i] < b {
		return t.partsAt[i]
	}
	return 0
}

// leastLeapK is how far readings lie apart at least that leap, K (own choice).
const leastLeapK = 1.0

// leaps tells whether reading i lies further from the one before than those beside ever move.
func leaps(c []float64, i int) bool {
	d := math.Abs(c[i] - c[i-1])
	if d < leastLeapK {
		return false
	}
	for k := max(1, i-neighbours); k <= min(len(c)-1, i+neighbours); k++ {
		if k != i && overOthers*math.Abs(c[k]-c[k-1]) > d {
			return false
		}
	}
	return true
}

// changeHour tells whether clocks may be set forward or back just before a time: in the small hours of a Sunday in spring or autumn.
func changeHour(t time.Time) bool {
	m := t.Month()
	return t.Weekday() == time.Sunday && t.Hour() <= 4 && (m == time.March || m == time.April || m == time.September || m == time.October || m == time.November)
}

// A jump is looked for in this way.
const (
	longestJump = 3   // readings away from the others
	leastJump   = 5.0 // K
	overOthers  = 5.0 // times the largest step of the neighbours
	neighbours  = 4   // steps on either side
)

// jumps finds readings, three in a row at most, that leave their neighbours and come back faster than those ever move, and adds to these a last
// one that may be cut off.
func (r *reader) jumps(t *taker) {
	c := r.log.C
	least := max(leastJump, 10*r.log.ResolutionK)
	for i := 1; i < len(c)-1; i++ {
		away := c[i] - c[i-1]
		if math.Abs(away) < least {
			continue
		}
		n := jumpAt(c, i, least)
		for k := range n {
			r.log.Doubtful = append(r.log.Doubtful, i+k)
			r.tells.tell(doubtful, cell.Warning, "", r.log.Lines[i+k], t.lay.temp, shownC(c[i+k]), shownC(c[i-1]), shownC(c[i+n]))
		}
		i += n
	}
	if last := len(c) - 1; t.cutAt > 0 { // of a record turned round it is the first
		if r.log.Lines[0] == t.cutAt {
			r.log.Doubtful = slices.Insert(r.log.Doubtful, 0, 0)
		} else if r.log.Lines[last] == t.cutAt {
			r.log.Doubtful = append(r.log.Doubtful, last)
		}
	}
}

// jumpAt is how many readings from i on are a jump; 0 if none.
func jumpAt(c []float64, i int, least float64) int {
	away := c[i] - c[i-1]
	for n := 1; n <= longestJump && i+n < len(c); n++ {
		home := c[i+n] - c[i+n-1]
		small := min(math.Abs(away), math.Abs(home))
		if away*home >= 0 || small < least || math.Abs(c[i+n]-c[i-1]) > small/2 {
			continue
		}
		others := 0.0
		for j := max(1, i-neighbours); j < i; j++ {
			others = max(others, math.Abs(c[j]-c[j-1]))
		}
		for j := i + n + 1; j < min(len(c), i+n+1+neighbours); j++ {
			others = max(others, math.Abs(c[j]-c[j-1]))
		}
		if small > overOthers*others {
			return n
		}
	}
	return 0
}

func shownC(c float64) string { return strings.Replace(fmt.Sprintf("%.4g °C", c), "-", "−", 1) }

// stopped finds the longest run of one and the same reading, where readings are fine enough to move.
func (r *reader) stopped(t *taker) {
	c := r.log.C
	from, most := 0, 0
	for i, j := 0, 0; i < len(c); i = j {
		for j = i; j < len(c) && c[j] == c[i]; j++ {
		}
		if j-i > most {
			from, most = i, j-i
		}
	}
	if most < frozenLeast || most == len(c) || r.log.ResolutionK > fineStep || r.log.TimesS[from+most-1]-r.log.TimesS[from] < frozenS {
		return
	}
	r.tells.tell(frozen, cell.Warning, "", r.log.Lines[from], t.lay.temp, shownC(c[from]), fmt.Sprint(most), r.row(r.log.Lines[from+most-1]))
}

const fineStep = 0.15 // K; coarser readings stay the same for long in a steady place

// years looks at the dates: of a clock that was not set, and of nights in which clocks change.
func (r *reader) years(t *taker) {
	log := r.log
	if !log.Dated {
		return
	}
	at, now := log.Start, r.set.Today
	typed := at.Add(time.Duration(r.east) * time.Second).Format("2006-01-02")
	switch {
	case at.Year() <= 2000:
		r.tells.tell(oldYear, cell.Warning, "", log.Lines[0], t.dateCol(), typed)
	case now.IsZero():
	case at.After(now.AddDate(0, 0, 1)):
		r.tells.tell(farYear, cell.Warning, "", log.Lines[0], t.dateCol(), typed)
	case at.Before(now.AddDate(-10, 0, 0)):
		r.tells.tell(longAgo, cell.Warning, "", log.Lines[0], t.dateCol(), typed)
	}
	if r.utc {
		return
	}
	end := at.Add(time.Duration(log.TimesS[len(log.TimesS)-1] * float64(time.Second)))
	for day := at.Truncate(24 * time.Hour); day.Before(end); day = day.AddDate(0, 0, 1) {
		if changeDay(day) && at.Before(day.Add(time.Hour)) && end.After(day.Add(3*time.Hour)) && !r.gapOn(day, at) {
			r.tells.tell(changeNight, cell.Note, "", log.Lines[0], 0, "", inWords(day.Unix()/86400))
			return
		}
	}
}

// gapOn tells whether readings are lacking in the small hours of a day.
func (r *reader) gapOn(day, start time.Time) bool {
	for _, g := range r.log.Gaps {
		if s := day.Sub(start).Seconds(); r.log.TimesS[g] < s+4*3600 && r.log.TimesS[g+1] > s {
			return true
		}
	}
	return false
}

// changeDay tells whether clocks change on a day in Europe or in North America (2007 on; from memory).
func changeDay(day time.Time) bool {
	if day.Weekday() != time.Sunday {
		return false
	}
	switch d := day.Day(); day.Month() {
	case time.March:
		return d >= 25 || d >= 8 && d <= 14
	case time.October:
		return d >= 25
	case time.November:
		return d <= 7
	}
	return false
}
