package record

import (
	"fmt"
	"math"
	"slices"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// instants turns the times as typed into seconds that can be compared, in t.secs: since 1970, since some midnight, or since the start that
// the logger counts from. False where a problem was told.
func (t *taker) instants() bool {
	switch t.form {
	case dateStamp:
		return t.zone() && t.calendar()
	case clockStamp:
		return t.clocks()
	}
	return t.amounts()
}

// calendar adds the days.
func (t *taker) calendar() bool {
	if c := t.lay.clocks; c > 0 && !t.timed {
		both := t.lay.heading(t.lay.time) + " + " + t.lay.heading(c)
		t.r.problems.Add(needsClock.problem(t.r.set.Cells[setTime], cell.Fault, setTime, t.r.set.Time, cell.ColumnName(c), both))
		return false
	}
	o, ok := t.order()
	if !ok {
		return false
	}
	days := make([]float64, len(t.seen))
	for i := range t.seen {
		k := t.seen[i].key
		of := o
		if k.order != 0 || k.width[0] == 4 {
			of = t.seen[i].fits
		} else {
			t.ordered = o
		}
		days[i] = float64(k.day(of)) * 86400
	}
	for i, d := range t.dates {
		t.secs[i] += days[d]
	}
	return true
}

// zone takes the zone of the clocks: of the times themselves, of the heading, of the setting; they must not contradict each other.
func (t *taker) zone() bool {
	set := t.r.set
	said, stated := int32(0), set.Zone != ""
	if stated {
		east, err := offsetOf(set.Zone)
		if err != nil {
			t.r.problems.Add(badZone.problem(set.Cells[setZone], cell.Fault, setZone, set.Zone))
			return false
		}
		said = east
	}
	file, inFile := t.east, t.zoned
	if !inFile && t.lay.zone != "" {
		file, _ = offsetOf(t.lay.zone)
		inFile = true
	}
	if stated && inFile && said != file && !t.spread {
		t.r.problems.Add(otherZone.problem(set.Cells[setZone], cell.Fault, setZone, set.Zone, offsetName(said), offsetName(file)))
		return false
	}
	if stated && !t.zoned {
		file = said
	}
	t.r.utc, t.r.east = stated || inFile, float64(file)
	if !t.zoned && t.r.utc {
		for i := range t.secs {
			t.secs[i] -= float64(file)
		}
	}
	return true
}

func offsetName(s int32) string {
	sign := '+'
	if s < 0 {
		sign, s = '-', -s
	}
	return fmt.Sprintf("UTC%c%02d:%02d", sign, s/3600, s%3600/60)
}

// amounts applies the unit to times that are numbers.
func (t *taker) amounts() bool {
	u := t.lay.tick
	name := t.lay.heading(t.lay.time)
	switch {
	case u == nil:
		t.r.problems.Add(noTick.problem(t.r.set.Cells[setTime], cell.Fault, setTime, t.r.set.Time, fmt.Sprintf(" (%s first)", quote(t.sample)), name))
		return false
	case u.kind != amount && u.kind != serials && u.kind != epoch:
		t.tell(wrongTick, t.firstAt, t.lay.time, t.sample, u.name)
		return false
	case t.openComma.line > 0 && !t.sure && t.r.decimal == 0:
		v, _ := readNumber([]byte(t.openComma.typed))
		t.r.ask(askComma, setDecimal, "", quote(t.openComma.typed), t.r.row(t.openComma.line), fmt.Sprintf("%g", v.x), fmt.Sprint(v.whole))
		return false
	}
	if u.kind == serials {
		for i := range t.secs {
			t.secs[i] = serialSeconds(t.secs[i], t.r.is1904)
		}
		t.form = dateStamp
		return t.zone()
	}
	if u.kind == epoch {
		t.form = dateStamp
		t.r.utc = true
		return true
	}
	for i := range t.secs {
		t.secs[i] *= u.s
	}
	return true
}

// clocks decides what clocks without dates are: times of day, or durations in h:mm, h:mm:ss or mm:ss.
func (t *taker) clocks() bool {
	u := t.lay.tick
	name := t.lay.heading(t.lay.time)
	var kind tickKind
	switch {
	case u != nil:
		kind = u.kind
		if kind == amount || kind == serials || kind == epoch || kind == spans && t.groups == 2 || (kind == hours || kind == minutes) && t.groups == 3 {
			t.tell(wrongTick, t.firstAt, t.lay.time, t.sample, u.name)
			return false
		}
	case t.short:
		kind = minutes
	case t.half || hasWord(name, dayWords):
		kind = ofDay
	case t.groups == 3 && (hasWord(name, spanWords) || t.secs[0] == 0 || t.most >= 86400):
		kind = spans
	case t.groups == 3 || t.wraps():
		kind = ofDay
	case t.groups == 2:
		s, sample, line := int(t.secs[0])/60, t.sample, t.firstAt
		if i := slices.IndexFunc(t.secs, func(x float64) bool { return x > 0 }); s == 0 && i >= 0 { // 0:00 says nothing
			s, line = int(t.secs[i])/60, t.lines[i]
			sample = fmt.Sprintf("%d:%02d", s/60, s%60)
		}
		day, span := unit.Lasting(float64(60*s), nil), unit.Lasting(float64(s), nil)
		t.r.ask(eitherClock, setTime, "", quote(sample), t.r.row(line), day, span, name)
		return false
	}
	switch kind {
	case minutes:
		for i := range t.secs {
			t.secs[i] /= 60
		}
	case ofDay:
		if d := t.lay.dates; d > 0 {
			both := t.lay.heading(d) + " + " + name
			t.r.problems.Add(needsDate.problem(t.r.set.Cells[setTime], cell.Fault, setTime, t.r.set.Time, cell.ColumnName(d), both))
			return false
		}
		t.midnights()
		t.r.clock = true
	}
	return true
}

// dayWords and spanWords are in headings of times of day and of durations, in small letters.
var (
	dayWords  = []string{"clock", "time of day", "uhrzeit", "hora", "heure"}
	spanWords = []string{"elapsed", "duration", "dauer", "durée", "duración", "run time", "runtime", "relative"}
)

// wraps tells whether clocks pass midnight, which durations do not.
func (t *taker) wraps() bool {
	for i := 1; i < len(t.secs); i++ {
		if t.secs[i] < t.secs[i-1]-halfDay {
			return true
		}
	}
	return false
}

const halfDay = 12 * 3600

// midnights adds a day wherever a clock goes back by more than half a day; of readings whose newest comes first, wherever it goes forward so.
func (t *taker) midnights() {
	if t.falling(halfDay) {
		t.reverse()
	}
	add := 0.0
	before := t.secs[0]
	for i := 1; i < len(t.secs); i++ {
		raw := t.secs[i]
		if raw < before-halfDay {
			add += 86400
			t.r.tells.tell(overMidnight, cell.Warning, "", t.lines[i], t.lay.time, clockOf(raw), clockOf(before))
		}
		before = raw
		t.secs[i] = raw + add
	}
}

func clockOf(s float64) string {
	n := int(s)
	return fmt.Sprintf("%02d:%02d:%02d", n/3600, n%3600/60, n%60)
}

// falling tells whether times only go back; steps of more than most do not count.
func (t *taker) falling(most float64) bool {
	down := false
	for i := 1; i < len(t.secs); i++ {
		switch d := t.secs[i] - t.secs[i-1]; {
		case d > 0 && d < most:
			return false
		case d < 0 && d > -most:
			down = true
		}
	}
	return down
}

func (t *taker) reverse() {
	slices.Reverse(t.secs)
	slices.Reverse(t.cs)
	slices.Reverse(t.lines)
	slices.Reverse(t.dates)
	t.r.reversed = true
	t.r.tells.tell(descending, cell.Note, "", t.lines[len(t.lines)-1], 0, "")
}

// rising puts the readings in order of time and merges those of one time that are equal. False where they cannot be put in order.
func (t *taker) rising() bool {
	if !t.r.reversed && t.falling(math.Inf(1)) {
		t.reverse()
	}
	ok := true
	n := 0
	for i := range t.secs {
		if n > 0 {
			d := t.secs[i] - t.secs[n-1]
			if d > -tiny && d < tiny {
				ok = t.same(n-1, i) && ok
				continue
			}
			if d < 0 {
				ok = false
				t.wentBack(n-1, i, d)
			}
		}
		t.secs[n], t.cs[n], t.lines[n], t.dates[n] = t.secs[i], t.cs[i], t.lines[i], t.dates[i]
		n++
	}
	t.secs, t.cs, t.lines, t.dates = t.secs[:n], t.cs[:n], t.lines[:n], t.dates[:n]
	return ok
}

// tiny is what sums of days and seconds since 1970 may be off, s.
const tiny = 1e-6

// same looks at two readings of one time.
func (t *taker) same(i, j int) bool {
	at := t.r.row(t.lines[i])
	if t.cs[i] == t.cs[j] {
		t.r.tells.tell(merged, cell.Note, "", t.lines[j], t.lay.time, t.timeAt(j), at)
		return true
	}
	t.tell(sameTime, t.lines[j], t.lay.time, t.timeAt(j), at, fmt.Sprintf("%g", t.cs[i]), fmt.Sprintf("%g", t.cs[j]))
	return false
}

// wentBack tells a time that is before the one above it; by an hour or so, a clock was set back.
func (t *taker) wentBack(i, j int, d float64) {
	at := t.r.row(t.lines[i])
	s := back
	if step := t.usual(); t.form != numberStamp && !t.r.utc && d > -3600 && d+3600 <= max(3*step, 60) {
		s = backHour
	}
	t.tell(s, t.lines[j], t.lay.time, t.timeAt(j), at, t.timeAt(i))
}

// usual is the usual step among the first readings, s.
func (t *taker) usual() float64 { return model.UsualStep(t.secs[:min(len(t.secs), 1000)]) }

// timeAt writes a time as it was understood.
func (t *taker) timeAt(i int) string { return t.r.shown(t.form, t.secs[i]) }

// shown writes an instant: with its date, as a clock, or as the time since the start.
func (r *reader) shown(form stampForm, s float64) string {
	switch {
	case form == dateStamp:
		return instant(s + r.east).Format("2006-01-02 15:04:05")
	case r.clock:
		return clockOf(math.Mod(s, 86400))
	}
	return spanOf(s)
}

// instant makes a time of seconds since 1970, to the microsecond.
func instant(s float64) time.Time {
	whole := math.Floor(s)
	return time.Unix(int64(whole), int64(math.Round((s-whole)*1e6))*1000).UTC()
}

// spanOf writes a time between two others: "0.764 s", "45 s", "5 min", "1 h 05 min".
func spanOf(s float64) string {
	if s < 10 { // fast loggers
		return fmt.Sprintf("%.4g s", s)
	}
	return unit.Lasting(s, nil)
}
