package record

import (
	"fmt"
	"math"
	"math/bits"
	"time"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// A dateKey is a date as it is typed.
type dateKey struct {
	date  [3]int32
	width [3]int8
	order order
}

// A dated is one of the dates of a file, with the first line that has it.
type dated struct {
	key  dateKey
	fits order // the orders that it may have
	line int32
	text string
}

// date gives the number of a row's date among those that the file has.
func (t *taker) date(r *row, s *stamp) int32 {
	k := dateKey{s.date, s.width, s.order}
	if k == t.last && t.byDate != nil {
		return t.lastAt
	}
	if t.byDate == nil {
		t.byDate = map[dateKey]int32{}
	}
	i, known := t.byDate[k]
	if !known {
		i = int32(len(t.seen))
		t.byDate[k] = i
		t.seen = append(t.seen, dated{key: k, fits: k.fits(), line: r.n, text: inUTF8(r.at(t.dateCol()).b)})
	}
	t.last, t.lastAt = k, i
	return i
}

// fits gives the orders in which a date is one of the calendar.
func (k dateKey) fits() order {
	out := order(0)
	for _, o := range []order{dayFirst, monthFirst, yearFirst} {
		if k.order != 0 && k.order != o {
			continue
		}
		y, m, d, wide := k.in(o)
		if wide != 2 && wide != 4 || m < 1 || m > 12 || d < 1 || d > daysOf(y, m) {
			continue
		}
		if o != yearFirst && k.width[0] > 2 || o == yearFirst && k.width[2] > 2 {
			continue
		}
		out |= o
	}
	return out
}

// in gives year, month and day in an order, and the digits of the year; two digits are of this century.
func (k dateKey) in(o order) (y, m, d int, wide int8) {
	g := [3]int{int(k.date[0]), int(k.date[1]), int(k.date[2])}
	switch o {
	case dayFirst:
		d, m, y, wide = g[0], g[1], g[2], k.width[2]
	case monthFirst:
		m, d, y, wide = g[0], g[1], g[2], k.width[2]
	default:
		y, m, d, wide = g[0], g[1], g[2], k.width[0]
	}
	if wide == 2 {
		y += 2000
	}
	return y, m, d, wide
}

func daysOf(y, m int) int { return time.Date(y, time.Month(m)+1, 0, 0, 0, 0, 0, time.UTC).Day() }

// day gives a date as days since 1970.
func (k dateKey) day(o order) int64 {
	y, m, d, _ := k.in(o)
	return time.Date(y, time.Month(m), d, 0, 0, 0, 0, time.UTC).Unix() / 86400
}

// order decides the order of the dates: the one that the setting or the heading says, or the only one that every date fits. Where several
// are left that give other days, the setting is asked for.
func (t *taker) order() (order, bool) {
	all, sound := anyOrder, true
	for i := range t.seen {
		if d := &t.seen[i]; d.fits == 0 {
			t.tell(notTime, d.line, t.dateCol(), d.text)
			sound = false
		} else {
			all &= d.fits
		}
	}
	said := t.lay.order
	if set := orderOf(t.r.set.DateOrder); set != 0 {
		if said != 0 && said != set {
			t.r.problems.Add(otherOrder.problem(t.r.set.Cells[setOrder], cell.Fault, setOrder, t.r.set.DateOrder, quote(t.lay.heading(t.dateCol())), said.String()))
			return 0, false
		}
		said = set
	}
	switch {
	case said != 0:
		return said, t.fitsAll(said) && sound
	case all == 0:
		t.noOrder()
		return 0, false
	case !sound:
		return 0, false
	case bits.OnesCount8(uint8(all)) == 1:
		return all, true
	}
	for i := range t.seen {
		if ways := t.seen[i].ways(all); len(ways) > 1 {
			d := &t.seen[i]
			t.r.ask(askOrder, setOrder, "", quote(d.text), t.r.row(d.line), workbook.Joined(ways, " or "))
			return 0, false
		}
	}
	for _, o := range orders { // they are all the same day
		if all&o.order != 0 {
			return o.order, true
		}
	}
	return 0, false
}

func (t *taker) dateCol() int {
	if t.swap {
		return t.lay.clock
	}
	return t.lay.time
}

// ways are the different days that a date may be.
func (d *dated) ways(all order) []string {
	var out []string
	had := map[int64]bool{}
	for _, o := range orders {
		if all&o.order == 0 {
			continue
		}
		if day := d.key.day(o.order); !had[day] {
			had[day] = true
			out = append(out, fmt.Sprintf("%s (%s)", inWords(day), o.word))
		}
	}
	return out
}

func inWords(day int64) string { return time.Unix(day*86400, 0).UTC().Format("2 January 2006") }

// fitsAll holds every date to a stated order. A date whose writing leaves no choice needs none.
func (t *taker) fitsAll(said order) bool {
	ok := true
	for i := range t.seen {
		d := &t.seen[i]
		if d.fits != 0 && d.fits&said == 0 && d.key.order == 0 && d.key.width[0] != 4 {
			t.tell(wrongOrder, d.line, t.dateCol(), d.text, said.String())
			ok = false
		}
	}
	return ok
}

// noOrder tells which dates keep each order from fitting that others have.
func (t *taker) noOrder() {
	var why []string
	some := order(0)
	for i := range t.seen {
		some |= t.seen[i].fits
	}
	first := int32(math.MaxInt32)
	var d *dated
	for _, o := range orders {
		for i := range t.seen {
			if other := &t.seen[i]; some&o.order != 0 && other.fits != 0 && other.fits&o.order == 0 {
				why = append(why, fmt.Sprintf("%s in %s is not %s", quote(other.text), t.r.row(other.line), o.word))
				if other.line < first {
					first, d = other.line, other
				}
				break
			}
		}
	}
	t.tell(noOrder, d.line, t.dateCol(), d.text, workbook.Joined(why, ", and "))
}
