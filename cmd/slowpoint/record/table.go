package record

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// A taker takes readings from the rows of a table.
type taker struct {
	r   *reader
	lay *layout

	form    stampForm // of the times; noStamp until the first one
	sample  string    // the first time as typed
	swap    bool      // the clocks stand before the dates
	groups  int8      // of clocks: 2 or 3
	half    bool      // a clock says before or after noon
	short   bool      // a clock is mm:ss with a fraction
	timed   bool      // a date has a clock
	ordered order     // of the dates, if there was a choice
	zoned   bool
	east    int32   // of the zone of the first time
	spread  bool    // zones differ
	most    float64 // of the times

	secs, cs     []float64 // of each reading: s of its day or as typed; its temperature as typed
	lines, dates []int32   // its line; its date in seen, -1 if it has none
	seen         []dated
	byDate       map[dateKey]int32
	last         dateKey // the date of the row before
	lastAt       int32

	decimal   byte // the decimal sign, 0 if none was shown yet
	shown     shownSign
	openComma shownSign // the first number whose comma may divide thousands
	sure      bool      // a decimal sign is shown that cannot be one of thousands
	step      grid
	places    int8  // the fewest digits behind the decimal sign of a reading so far
	fewest    int8  // the same, before the last one
	cutAt     int32 // line of a last reading that may be cut off; 0 if there is none
	inCells   bool  // the unit of the readings stands in the cells
	bare      bool  // a reading has no unit, and none was stated

	rows     int
	lacking  tally // missing words
	blanks   tally // blank readings
	beyond   tally // outside of what is possible
	formulas tally
	events   int
	pending  []pendingRow // rows that are no readings, since the last reading
	until    int32        // line of the last reading or missing one
	firstAt  int32        // and of the first
	ended    bool         // another table begins
	partsAt  []int32      // lines of the headings once more and empty ones with readings below: another run may begin there
	emptyAt  int32        // the last empty line since the last reading; 0 if there is none
	below    int          // rows below the readings with a number under the temperatures
	echo     echoes
}

// tally counts the same thing in many rows.
type tally struct {
	n     int
	typed string
	col   int
	lines []int32
}

func (t *tally) add(line int32, col int, typed func() string) {
	if t.n++; t.n == 1 {
		t.typed, t.col = typed(), col
	}
	if len(t.lines) < mostMore {
		t.lines = append(t.lines, line)
	}
}

// shownSign is a cell that shows a decimal sign.
type shownSign struct {
	line  int32
	col   int
	typed string
}

// pendingRow is a row that is no reading, kept until it is known whether readings follow.
type pendingRow struct {
	line   int32
	text   string
	time   string // what stands in the column of times
	known  bool   // a remark, an event, the headings once more: may stand between readings
	heads  bool   // the headings once more
	titled bool   // words in both columns
	hidden bool
	number bool   // a number under the temperatures, and something under the times
	words  string // all that stands in a row of one filled cell
}

const mostPending = 50

// reserve makes room for a number of readings, so that a long record is not moved while it grows.
func (t *taker) reserve(n int) {
	t.secs, t.cs = make([]float64, 0, n), make([]float64, 0, n)
	t.lines, t.dates = make([]int32, 0, n), make([]int32, 0, n)
}

// take reads one row.
func (t *taker) take(r *row) error {
	if r.n < t.lay.first || t.ended {
		return nil
	}
	if r.zeros {
		t.tell(zeroBytes, r.n, 0, "")
		return nil
	}
	if r.blank() {
		t.emptyAt = r.n
		return nil
	}
	last := r.last()
	at, temp := r.at(t.lay.time), r.at(t.lay.temp)
	if at.kind == workbook.NoStored {
		t.tell(noStored, r.n, t.lay.time, "")
		return nil
	}
	if len(at.b) == 0 {
		t.timeless(r, temp)
		return nil
	}
	s, ok := t.stamp(r)
	if !ok {
		t.noReading(r, at, temp)
		return nil
	}
	if len(t.pending) > 0 && !t.resume(r.n) {
		return nil
	}
	if t.rows == t.r.most {
		return errMany
	}
	if t.emptyAt > 0 && t.rows > 0 {
		t.partsAt = append(t.partsAt, t.emptyAt)
	}
	t.emptyAt = 0
	t.rows++
	t.until = r.n
	switch {
	case r.hidden:
		t.tell(hiddenRow, r.n, 0, "")
		return nil
	case r.quotes:
		t.tell(badQuote, r.n, 0, "")
		return nil
	case last > t.r.width && t.r.width > 0:
		t.tell(wideRow, r.n, 0, "", fmt.Sprint(last), fmt.Sprint(t.r.width))
		return nil
	}
	t.reading(r, s, temp)
	return nil
}

func (t *taker) tell(s saying, line int32, col int, typed string, args ...string) {
	t.r.tells.tell(s, cell.Fault, "", line, col, typed, args...)
}

// timeless looks at a row without a time: a remark, or a reading that lacks it.
func (t *taker) timeless(r *row, temp *field) {
	v, _ := readNumber(temp.b)
	if len(temp.b) == 0 {
		if r.last() < t.lay.time || t.otherRunEnded(r) {
			return
		}
		t.wait(r, pendingRow{known: true})
		return
	}
	if v.bad == fine {
		t.wait(r, pendingRow{})
		return
	}
	t.wait(r, pendingRow{known: remark(r)})
}

// otherRunEnded tells whether a row holds something in other columns only: of a run beside that is longer.
func (t *taker) otherRunEnded(r *row) bool {
	for i := range r.fields {
		if f := &r.fields[i]; len(f.b) > 0 && readField(f, false).form == noStamp {
			return false
		}
	}
	return true
}

// remark tells whether a row is of a shape that may stand between readings: a sign of remarks in front, or one filled cell with what loggers write
// of themselves. Other words may name another run.
func remark(r *row) bool {
	n := 0
	var first []byte
	for i := range r.fields {
		if len(r.fields[i].b) > 0 {
			if n++; n == 1 {
				first = r.fields[i].b
			}
		}
	}
	if n == 0 {
		return false
	}
	if bytes.IndexByte([]byte("#;*!"), first[0]) >= 0 || bytes.HasPrefix(first, []byte("//")) || bytes.HasPrefix(first, []byte("--")) {
		return true
	}
	return n == 1 && slices.ContainsFunc(strings.Fields(strings.ToLower(inUTF8(first))), func(word string) bool { return slices.Contains(ofLoggers, strings.Trim(word, ".,:;()")) })
}

// ofLoggers are words of the lines in which loggers tell of themselves (common practice, no source).
var ofLoggers = []string{"connected", "disconnected", "logged", "logging", "button", "event", "marker", "host", "memory", "battery", "download", "downloaded", "usb"}

// noReading keeps a row whose time cannot be read until it is known whether readings follow.
func (t *taker) noReading(r *row, at, temp *field) {
	k := keep(r)
	p := pendingRow{time: inUTF8(at.b), known: remark(r)}
	if len(t.lay.titles) > 0 && t.lay.time <= len(t.lay.titles) && p.time == t.lay.titles[t.lay.time-1] && k.word(t.lay.temp) == t.lay.titles[t.lay.temp-1] {
		p.known, p.heads = true, true
	} else if scaleOf(k.word(t.lay.temp)) != nil && scaleOf(k.word(t.lay.temp)) == t.lay.scale {
		p.known = true // the units once more
	}
	v, _ := readNumber(temp.b)
	p.number = v.bad == fine && len(p.time) > 0
	p.titled = len(temp.b) > 0 && v.bad != fine && !t.r.missing(temp.b) && !p.known
	t.wait(r, p)
}

func (t *taker) wait(r *row, p pendingRow) {
	if p.number {
		t.below++
	}
	if len(t.pending) == mostPending {
		return
	}
	k := keep(r)
	p.hidden = r.hidden
	p.line, p.text = r.n, strings.Join(strings.Fields(strings.Join(k.text, " ")), " ")
	filled := slices.DeleteFunc(slices.Clone(k.text), func(s string) bool { return s == "" })
	if len(filled) == 1 {
		if v, _ := readNumber([]byte(filled[0])); v.bad != fine {
			p.words = filled[0]
		}
	}
	t.pending = append(t.pending, p)
}

// resume decides what the rows were that are followed by a reading: remarks are skipped, the headings of another table end the reading,
// anything else is wrong. False if the table has ended.
func (t *taker) resume(line int32) bool {
	for _, p := range t.pending {
		switch {
		case p.hidden:
			t.tell(hiddenRow, p.line, 0, "")
		case p.known:
			if p.heads {
				t.partsAt = append(t.partsAt, p.line)
			}
			t.r.tells.tell(skippedRows, cell.Note, "", p.line, 0, p.text)
		case p.titled:
			w := t.r.src.word()
			t.tell(twoTables, p.line, 0, "", t.r.src.holder(), fmt.Sprintf("%ss %d to %d", w, t.lay.first, t.until), t.r.row(line))
			t.ended = true
		case p.time == "" && p.words != "":
			t.tell(anotherRun, p.line, 0, p.words)
		case p.time == "":
			t.tell(timeLacks, p.line, t.lay.time, "")
		case p.words != "" && p.words == p.time:
			t.tell(anotherRun, p.line, 0, p.words)
		default:
			t.tell(notTime, p.line, t.lay.time, p.time)
		}
	}
	t.pending, t.below = t.pending[:0], 0
	return !t.ended
}

// stamp reads the time of a row; false if it is none.
func (t *taker) stamp(r *row) (stamp, bool) {
	s := readField(r.at(t.lay.time), t.r.is1904)
	if t.lay.clock > 0 {
		c := readField(r.at(t.lay.clock), t.r.is1904)
		if t.form == noStamp && c.dated && !s.dated {
			t.swap = true
		}
		if t.swap {
			s, c = c, s
		}
		if s.form == numberStamp && s.plainDate(plainBlanks(r.at(t.dateCol()).b)) {
			s.form, s.dated, s.sec = dateStamp, true, 0
		}
		if s.form != dateStamp || c.form == noStamp || c.form == numberStamp || s.sec != 0 && s.sec != c.sec {
			return s, false
		}
		s.sec, s.timed, s.groups, s.half, s.zoned, s.east = c.sec, c.timed, c.groups, c.half, c.zoned, c.east
	}
	return s, s.form != noStamp
}

// reading takes the time and the temperature of a row that has a time.
func (t *taker) reading(r *row, s stamp, temp *field) {
	at := r.at(t.lay.time)
	if temp.formula || at.formula {
		t.formulas.add(r.n, t.lay.temp, func() string { return "" })
	}
	if t.odd(r, t.lay.time) || t.odd(r, t.lay.clock) || t.odd(r, t.lay.temp) {
		return
	}
	x, ok := t.value(r, temp)
	if ok && r.cut && t.shorter(r, temp) {
		t.cutAt = r.n
		t.r.tells.tell(cutReading, cell.Warning, "", r.n, t.lay.temp, inUTF8(temp.b))
	}
	t.echo.add(r.n, r.at(t.lay.time).b, r.at(t.lay.clock).b, temp.b)
	if t.form == noStamp {
		t.form, t.sample, t.groups, t.zoned, t.east = s.form, t.typed(r), s.groups, s.zoned, s.east
		t.firstAt = r.n
	}
	switch {
	case s.form != t.form || s.form == clockStamp && s.groups != t.groups:
		t.tell(otherForm, r.n, t.lay.time, t.typed(r), quote(t.sample))
		return
	case s.zoned && !t.zoned:
		t.tell(zoneCame, r.n, t.lay.time, t.typed(r))
		return
	case t.zoned && !s.zoned:
		t.tell(zoneLost, r.n, t.lay.time, t.typed(r))
		return
	}
	if s.form == numberStamp && !t.count(r, &s) {
		return
	}
	t.half, t.short, t.timed = t.half || s.half, t.short || s.short, t.timed || s.timed
	t.spread = t.spread || s.east != t.east
	date := int32(-1)
	if s.dated {
		date = t.date(r, &s)
	}
	if !ok {
		return
	}
	t.most = max(t.most, s.sec)
	t.secs = append(t.secs, s.sec-float64(s.east))
	t.cs = append(t.cs, x)
	t.lines = append(t.lines, r.n)
	t.dates = append(t.dates, date)
}

// typed is the time of a row as it stands.
func (t *taker) typed(r *row) string {
	s := inUTF8(r.at(t.lay.time).b)
	if t.lay.clock > 0 {
		s += " " + inUTF8(r.at(t.lay.clock).b)
	}
	return s
}

// count looks at a time that is a number: its unit and its decimal sign.
func (t *taker) count(r *row, s *stamp) bool {
	if s.unit != "" {
		u := timeUnit(s.unit)
		if t.lay.tick == nil {
			t.lay.tick = u
		} else if t.lay.tick != u {
			t.tell(wrongTick, r.n, t.lay.time, t.typed(r), t.lay.tick.name)
			return false
		}
	}
	sign := byte(0)
	switch {
	case s.comma:
		sign = ','
	case s.point:
		sign = '.'
	}
	if sign != 0 && r.at(t.lay.time).kind == workbook.Text {
		if !t.sign(r, t.lay.time, sign) {
			return false
		}
		if s.exact {
			t.sure = true
		} else if s.comma && t.openComma.line == 0 {
			t.openComma = shownSign{r.n, t.lay.time, t.typed(r)}
		}
	}
	return true
}

// sign holds the whole file to one decimal sign.
func (t *taker) sign(r *row, col int, sign byte) bool {
	if sign == t.decimal {
		return true
	}
	names := map[byte]string{'.': "point", ',': "comma"}
	f := r.at(col)
	switch {
	case t.r.decimal != 0 && sign != t.r.decimal:
		t.tell(otherSign, r.n, col, inUTF8(f.b), names[sign], names[t.r.decimal])
		return false
	case t.decimal == 0:
		t.decimal, t.shown = sign, shownSign{r.n, col, inUTF8(f.b)}
		return true
	}
	at := fmt.Sprintf("%s in %s %d", quote(t.shown.typed), t.r.src.word(), t.shown.line)
	t.tell(mixedSigns, r.n, col, inUTF8(f.b), names[sign], at, names[t.decimal])
	return false
}

// value reads a temperature; false if there is none.
func (t *taker) value(r *row, f *field) (float64, bool) {
	col := t.lay.temp
	if f.kind == workbook.Blank || (f.kind == workbook.Text || f.kind == workbook.Figure) && t.r.missing(f.b) || f.kind == workbook.Broken {
		t.noValue(r, f)
		return 0, false
	}
	if f.kind != workbook.Text && f.kind != workbook.Figure || f.kind == workbook.Figure && (f.form == workbook.Date || f.form == workbook.Clock || f.form == workbook.Percent) {
		t.tells(r, f)
		return 0, false
	}
	v, rest := readNumber(asStored(f))
	if f.shown != "" && len(rest) == 0 {
		rest = []byte(f.shown)
	}
	if !t.sound(r, f, v) || !t.inScale(r, f, rest) {
		return 0, false
	}
	if v.sign != 0 && f.kind == workbook.Text {
		if !t.sign(r, col, v.sign) {
			return 0, false
		}
		t.sure = true // no temperature needs a sign between thousands
	}
	if t.lay.scale != nil {
		if c := t.lay.scale.celsius(v.x); c < leastC || c > mostC {
			t.beyond.add(r.n, col, func() string { return inUTF8(f.b) })
			return 0, false
		}
	}
	t.step.add(v)
	if t.fewest = t.places; v.places < t.places {
		t.places = v.places
	}
	return v.x, true
}

// shorter tells whether a reading at the very end of a text is shorter than those above: it has fewer decimals than any, or is how the one above begins.
func (t *taker) shorter(r *row, temp *field) bool {
	if t.echo.n == 0 || t.lay.temp != len(r.fields) {
		return false
	}
	above := t.echo.ring[(t.echo.n-1)%mostEcho].val
	return t.places < t.fewest || len(temp.b) < len(above) && bytes.HasPrefix(above, temp.b)
}

// sound tells what is wrong with a number.
func (t *taker) sound(r *row, f *field, v reading) bool {
	says := notReading
	switch v.bad {
	case fine:
		return true
	case compared:
		says = isCompared
	case bothSigns:
		says = bothPoints
	case endless:
		says = isEndless
	}
	t.tell(says, r.n, t.lay.temp, inUTF8(f.b))
	return false
}

// inScale takes the unit that stands behind a reading: all must have the same one, and none another than the heading says.
func (t *taker) inScale(r *row, f *field, rest []byte) bool {
	if len(rest) == 0 {
		t.bare = t.bare || t.lay.scale == nil
		return true
	}
	s, col := scaleOf(inUTF8(rest)), t.lay.temp
	switch {
	case s == nil:
		t.tell(notReading, r.n, col, inUTF8(f.b))
	case t.lay.scale == nil && t.bare:
		t.tell(scaleCame, r.n, col, inUTF8(f.b))
	case t.lay.scale == nil:
		t.lay.scale = s
		t.inCells = true
		return true
	case t.lay.scale != s && t.inCells:
		t.tell(mixedScale, r.n, col, inUTF8(f.b), t.lay.scale.name)
	case t.lay.scale != s:
		t.tell(otherScaleCell, r.n, col, inUTF8(f.b), t.lay.scale.name)
	default:
		return true
	}
	return false
}

// asStored gives a stored number of a workbook as it was meant: 63.3 for 63.299999999999997, which has no more than 15 digits that count.
func asStored(f *field) []byte {
	if f.kind != workbook.Figure || len(f.b) < 12 {
		return f.b
	}
	x, err := strconv.ParseFloat(string(f.b), 64)
	if err != nil {
		return f.b
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 15, 64), 64)
	return strconv.AppendFloat(nil, rounded, 'f', -1, 64)
}

// What is taken as a temperature of food or its surroundings, °C; beyond, loggers write signs of a fault: −200, 850, 65336, 9.9E37.
const (
	leastC = -60
	mostC  = 400
)

// noValue counts a row without a reading. A blank one with words beside it marks an event.
func (t *taker) noValue(r *row, f *field) {
	if len(f.b) == 0 {
		if t.event(r) {
			t.events++
			t.r.tells.tell(eventRows, cell.Note, "", r.n, 0, "")
			t.rows--
			return
		}
		t.blanks.add(r.n, t.lay.temp, func() string { return "" })
		return
	}
	t.lacking.add(r.n, t.lay.temp, func() string { return inUTF8(f.b) })
}

// event tells whether a row without a reading holds words beside its time.
func (t *taker) event(r *row) bool {
	for i := range r.fields {
		f := &r.fields[i]
		if c := i + 1; c == t.lay.time || c == t.lay.clock || c == t.lay.temp || t.lay.status[c] || f.kind != workbook.Text || t.r.missing(f.b) {
			continue
		}
		if readStamp(f.b).form == noStamp {
			return true
		}
	}
	return false
}

// tells says what a cell of a workbook is that is no reading.
func (t *taker) tells(r *row, f *field) {
	switch {
	case f.kind == workbook.NoStored:
		t.tell(noStored, r.n, t.lay.temp, "")
	case f.form == workbook.Date || f.form == workbook.Clock || f.form == workbook.Percent:
		t.tell(wrongForm, r.n, t.lay.temp, string(f.b))
	default:
		t.tell(notReading, r.n, t.lay.temp, string(f.b))
	}
}

// finish tells what stands below the table, and what is missing.
func (t *taker) finish() {
	t.unseen()
	t.footer()
	all := fmt.Sprint(t.rows)
	of := t.r.src
	if t.lacking.n > 0 {
		t.r.tells.tell(isMissing, cell.Warning, "", t.lacking.lines[0], t.lacking.col, t.lacking.typed, fmt.Sprint(t.lacking.n), all, listing(of, t.lacking.lines, t.lacking.n))
	}
	if t.blanks.n > 0 {
		t.r.tells.tell(blankRead, cell.Warning, "", t.blanks.lines[0], t.blanks.col, "", fmt.Sprint(t.blanks.n), all, listing(of, t.blanks.lines, t.blanks.n))
	}
	if t.beyond.n > 0 {
		t.r.tells.tell(outside, cell.Warning, "", t.beyond.lines[0], t.beyond.col, t.beyond.typed, degreesC(leastC), degreesC(mostC), fmt.Sprint(t.beyond.n), all, listing(of, t.beyond.lines, t.beyond.n))
	}
	if t.formulas.n > 0 {
		t.r.tells.tell(formulaUsed, cell.Note, "", t.formulas.lines[0], t.formulas.col, "", fmt.Sprint(t.formulas.n), listing(of, t.formulas.lines, t.formulas.n))
	}
}

// mostBelow is how many rows of statistics may stand below the readings: of more, or of one that has digits like a time, the times are
// wrong.
const mostBelow = 10

// footer looks at what stands below the readings.
func (t *taker) footer() {
	if len(t.pending) == 0 || t.ended {
		return
	}
	wrong := false
	for _, p := range t.pending {
		if p.number && (t.below > mostBelow || digitsIn(p.time) >= 3) {
			t.tell(notTime, p.line, t.lay.time, p.time)
			wrong = true
		}
	}
	if wrong {
		return
	}
	p := t.pending[0]
	t.r.tells.tell(belowTable, cell.Note, "", p.line, 0, p.text)
}

func digitsIn(s string) int {
	n := 0
	for i := range len(s) {
		if s[i] >= '0' && s[i] <= '9' {
			n++
		}
	}
	return n
}

func degreesC(x float64) string { return strings.Replace(fmt.Sprintf("%g °C", x), "-", "−", 1) }

// grid finds the smallest step of the readings, by the greatest common divisor of their differences in digits.
type grid struct {
	started bool
	first   int64 // in steps of the last digit
	places  int8
	gcd     int64
	prev    float64
	changes int
	lost    bool // a reading has too many digits
}

// add takes one reading.
func (g *grid) add(v reading) {
	if !v.exact || v.places > 6 || v.whole > 1e11 || v.whole < -1e11 {
		g.lost = true
		return
	}
	w := v.whole
	for p := v.places; p < g.places; p++ {
		w *= 10
	}
	if !g.started {
		g.started, g.first, g.places, g.prev = true, w, v.places, v.x
		return
	}
	for ; g.places < v.places; g.places++ {
		g.first *= 10
		g.gcd *= 10
	}
	if v.x != g.prev {
		g.prev = v.x
		g.changes++
	}
	g.gcd = gcd(g.gcd, w-g.first)
}

func gcd(a, b int64) int64 {
	for b != 0 {
		a, b = b, a%b
	}
	if a < 0 {
		return -a
	}
	return a
}

// fewChanges is how often readings must change before their common step says more than their last digit.
const fewChanges = 8

// size is the smallest step in the unit of the readings; 0 if it cannot be told.
func (g *grid) size() float64 {
	switch {
	case !g.started:
		return 0
	case g.changes < fewChanges || g.gcd == 0:
		return 1 / pow10[g.places]
	}
	return float64(g.gcd) / pow10[g.places]
}

// echoes are the first and the last rows as typed.
type echoes struct {
	first []Echo
	ring  [mostEcho]struct {
		line             int32
		time, clock, val []byte
	}
	n int
}

const mostEcho = 3

func (e *echoes) add(line int32, time, clock, val []byte) {
	k := &e.ring[e.n%mostEcho]
	e.n++
	k.line = line
	k.time, k.clock, k.val = append(k.time[:0], time...), append(k.clock[:0], clock...), append(k.val[:0], val...)
	if len(e.first) < mostEcho {
		e.first = append(e.first, Echo{Line: line, Time: typedTime(time, clock), Read: inUTF8(val)})
	}
}

func typedTime(time, clock []byte) string {
	return strings.TrimSpace(inUTF8(time) + " " + inUTF8(clock))
}

// all gives the first and the last rows, each once.
func (e *echoes) all() []Echo {
	out := e.first
	for i := max(e.n-mostEcho, mostEcho); i < e.n; i++ {
		k := &e.ring[i%mostEcho]
		out = append(out, Echo{Line: k.line, Time: typedTime(k.time, k.clock), Read: inUTF8(k.val)})
	}
	return out
}

// decimalOf reads the item Decimal sign.
func decimalOf(word string) (byte, bool) {
	switch workbook.Key(word) {
	case "":
		return 0, true
	case "point", ".":
		return '.', true
	case "comma", ",":
		return ',', true
	}
	return 0, false
}
