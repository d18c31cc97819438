package record

import (
	"errors"
	"fmt"
	"strings"
	"unicode/utf8"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// How much of a file is looked at to find its table.
const (
	headRows  = 400 // rows
	headBlock = 12  // rows between headings and readings
)

// A layout is where the table stands in a file, and what its columns hold.
type layout struct {
	heads  int32 // line of the headings; 0 if there are none
	first  int32 // line of the first reading
	titles []string
	group  string // heading over that of the temperatures, where others have the same one
	time   int    // column of times, or of dates where clock is not 0
	clock  int
	temp   int
	tick   *tick  // unit of the times; nil if it is not stated
	scale  *scale // unit of the temperatures; nil if it is not stated
	order  order  // of dates, where a heading shows it
	zone   string // of the clocks, as a heading shows it
	dates  int    // a column of dates, and one of clocks, that was not asked for; 0 if there is none
	clocks int
	status map[int]bool // columns that say something in most rows, and so mark no event
}

// kept is a row of the beginning of a file, by itself.
type kept struct {
	row
	text []string
}

func keep(r *row) kept {
	k := kept{row: *r}
	k.fields = make([]field, len(r.fields))
	k.text = make([]string, len(r.fields))
	for i, f := range r.fields {
		k.text[i] = strings.Join(strings.Fields(inUTF8(f.b)), " ")
		f.b = []byte(k.text[i])
		k.fields[i] = f
	}
	return k
}

// foreign tells whether a row is not in UTF-8.
func foreign(r *row) bool {
	for i := range r.fields {
		if !utf8.Valid(r.fields[i].b) {
			return true
		}
	}
	return false
}

// word gives the text of a column, from 1.
func (k *kept) word(col int) string {
	if col < 1 || col > len(k.text) {
		return ""
	}
	return k.text[col-1]
}

// beginning reads the first rows.
func (r *reader) beginning() ([]kept, error) {
	var head []kept
	told := false
	err := r.src.each(func(row *row) error {
		if _, isText := r.src.(*text); isText && !told && foreign(row) {
			r.tells.tell(notUTF8, cell.Note, "", row.n, 0, "")
			told = true
		}
		if head = append(head, keep(row)); len(head) == headRows {
			return errStop
		}
		return nil
	})
	if err == errStop {
		err = nil
	}
	return head, err
}

// want is a column that a setting names.
type want struct {
	setting string // Time column
	typed   string // as it is typed
	title          // in its parts
	letter  int    // the column, if it is the letter of one
	sure    bool   // written as "column B"
}

func wanted(setting, typed string) want {
	w := want{setting: setting, typed: typed, title: titleOf(strings.TrimSpace(typed))}
	name := w.name
	if rest, ok := strings.CutPrefix(strings.ToLower(name), "column "); ok {
		name, w.sure = strings.TrimSpace(rest), true
	}
	w.letter = cell.ColumnNumber(name)
	return w
}

// fits gives the columns of a row whose headings are what is wanted: those that are the same words, else those that are without units, else
// those that are with the heading of their group, in the row above, in front. Capital letters count where they tell columns apart.
func (w want) fits(head []kept, at int) []int {
	if w.sure || at < 0 {
		return nil
	}
	var alike [5][]int
	for i, t := range head[at].text {
		if t == "" {
			continue
		}
		title := titleOf(t)
		group := groupOf(head, at, i+1)
		for how, same := range []bool{t == w.raw, workbook.Key(t) == workbook.Key(w.raw), title.name == w.name || t == w.name,
			workbook.Key(title.name) == workbook.Key(w.name) || workbook.Key(t) == workbook.Key(w.name),
			group != "" && workbook.Key(group+" "+title.name) == workbook.Key(w.name)} {
			if same {
				alike[how] = append(alike[how], i+1)
				break
			}
		}
	}
	for _, cols := range alike {
		if len(cols) > 0 {
			return cols
		}
	}
	return nil
}

// groupOf is the heading of a group of columns in the row above, which stands over the first of them; "" if there is none.
func groupOf(head []kept, at, col int) string {
	if at == 0 || head[at-1].n != head[at].n-1 {
		return ""
	}
	for c := col; c > 0; c-- {
		if w := head[at-1].word(c); w != "" {
			return w
		}
	}
	return ""
}

// wants are the columns that the settings name: that of times, or of dates and of clocks, and that of temperatures.
func (r *reader) wants(head []kept) (times []want, temp want) {
	if r.set.Time != "" {
		whole := wanted(setTime, r.set.Time)
		times = []want{whole}
		if a, b, two := strings.Cut(r.set.Time, "+"); two && !anyRow(head, whole) {
			times = []want{wanted(setTime, a), wanted(setTime, b)}
		}
	}
	if r.set.Temperature != "" {
		temp = wanted(setTemp, r.set.Temperature)
	}
	return times, temp
}

func anyRow(head []kept, w want) bool {
	for i := range head {
		if len(w.fits(head, i)) > 0 {
			return true
		}
	}
	return false
}

// layOut finds the table; nil where the problem was told.
func (r *reader) layOut(head []kept) *layout {
	times, temp := r.wants(head)
	all := append([]want{}, times...)
	if temp.typed != "" {
		all = append(all, temp)
	}
	at := r.headings(head, all)
	if at < 0 && len(all) > 0 && !lettered(all) {
		r.unknownHeading(head, all)
		return nil
	}
	l := &layout{}
	if at < 0 && (len(times) == 0 || temp.typed == "") {
		if at = guessHeadings(head); at < 0 {
			r.noTable(head)
			return nil
		}
	}
	var names *kept
	if at >= 0 {
		names = &head[at]
		l.heads, l.titles = names.n, names.text
	}
	if !r.columns(l, head, at, times, temp) {
		return nil
	}
	from := at + 1
	if at < 0 {
		from = 0
	}
	first := l.firstReading(head, from)
	if first < 0 {
		r.problems.Add(noReadings.problem(r.set.Cells[setFile], cell.Fault, setFile, "", r.src.holder(), r.underHeadings(l)))
		return nil
	}
	l.first = head[first].n
	if at < 0 {
		at = l.headAbove(head, first)
	}
	l.lookForDates(head, first)
	l.lookForStatus(head)
	if at >= 0 && !r.oneRun(l, &head[at]) {
		return nil
	}
	r.about(l, head, at, first)
	return l
}

// lookForDates finds a column of dates beside one of clocks.
func (l *layout) lookForDates(head []kept, first int) {
	if l.clock > 0 {
		return
	}
	for c := 1; c <= len(head[first].text); c++ {
		form, isDate, _ := columnForm(head, first-1, c)
		switch {
		case c == l.time || c == l.temp:
		case form == dateStamp && isDate && l.dates == 0:
			l.dates = c
		case form == clockStamp && l.clocks == 0:
			l.clocks = c
		}
	}
}

// lookForStatus finds the columns that hold words in most of the first rows.
func (l *layout) lookForStatus(head []kept) {
	words, rows := map[int]int{}, 0
	for i := range head {
		k := &head[i]
		if v, _ := readNumber(k.at(l.temp).b); k.n < l.first || v.bad != fine {
			continue
		}
		rows++
		for c, t := range k.text {
			if t != "" && readStamp([]byte(t)).form == noStamp {
				words[c+1]++
			}
		}
	}
	l.status = map[int]bool{}
	for c, n := range words {
		l.status[c] = 2*n > rows
	}
}

// oneRun holds the temperatures to the times of their own run, where several stand side by side under headings that differ by a number at
// most.
func (r *reader) oneRun(l *layout, names *kept) bool {
	of := runName(names.word(l.time))
	nearest, between := 0, 0
	for c := l.time + 1; c < l.temp; c++ {
		switch name := runName(names.word(c)); {
		case name == of && between > 0:
			nearest = c
		case name != "" && name != of && c != l.clock:
			between++
		}
	}
	if of == "" || nearest == 0 {
		return true
	}
	r.problems.Add(otherRun.problem(r.set.Cells[setTemp], cell.Fault, setTemp, r.set.Temperature, cell.ColumnName(l.temp), cell.ColumnName(nearest), cell.ColumnName(l.time)))
	return false
}

// runName is a heading without its unit and without numbers.
func runName(heading string) string {
	return workbook.Key(strings.Map(func(c rune) rune {
		if c >= '0' && c <= '9' || c == '#' || c == '.' || c == '_' {
			return -1
		}
		return c
	}, titleOf(heading).name))
}

func (r *reader) underHeadings(l *layout) string {
	if l.heads == 0 {
		return ""
	}
	return fmt.Sprintf(" below the headings in %s %d", r.src.word(), l.heads)
}

func lettered(all []want) bool {
	for _, w := range all {
		if w.letter == 0 {
			return false
		}
	}
	return true
}

// headings finds the row in which every wanted column is found, by heading or by letter, one of them at least by its heading.
func (r *reader) headings(head []kept, all []want) int {
	for i := range head {
		named, lacks := 0, false
		for _, w := range all {
			if len(w.fits(head, i)) > 0 {
				named++
			} else if w.letter == 0 {
				lacks = true
			}
		}
		if !lacks && named > 0 {
			return i
		}
	}
	return -1
}

// unknownHeading tells which wanted column is not there, and which there are.
func (r *reader) unknownHeading(head []kept, all []want) {
	at := guessHeadings(head)
	best := -1
	for i := range head { // a row that has some of the wanted columns is better than a guess
		for _, w := range all {
			if best < 0 && len(w.fits(head, i)) > 0 {
				best = i
			}
		}
	}
	if best >= 0 {
		at = best
	}
	if at < 0 {
		r.noTable(head)
		return
	}
	for _, w := range all {
		if len(w.fits(head, at)) == 0 && w.letter == 0 {
			there := "; its headings, in " + fmt.Sprintf("%s %d, are ", r.src.word(), head[at].n) + r.named(head, at, nil)
			r.problems.Add(noHeading.problem(r.set.Cells[w.setting], cell.Fault, w.setting, w.typed, r.src.holder(), there))
		}
	}
}

// noTable tells why no headings with readings below were found.
func (r *reader) noTable(head []kept) {
	names := lastHeadings(head)
	switch {
	case narrow(head):
		signs := ""
		if _, isText := r.src.(*text); isText {
			signs = "; between the two stands a comma, a semicolon, a tab, a | or a blank, the same in every line"
		}
		r.problems.Add(oneColumn.problem(r.set.Cells[setFile], cell.Fault, setFile, "", r.src.holder(), signs))
	case names >= 0:
		r.problems.Add(noReadings.problem(r.set.Cells[setFile], cell.Fault, setFile, "", r.src.holder(), r.underHeadings(&layout{heads: head[names].n})))
	default:
		r.problems.Add(noHeadings.problem(r.set.Cells[setTime], cell.Fault, setTime, "", r.src.holder()))
	}
}

// narrow tells whether rows have one cell, and none has more.
func narrow(head []kept) bool {
	widest := 0
	for i := range head {
		widest = max(widest, head[i].last())
	}
	return widest == 1
}

// lastHeadings is the row of names with which a file ends, a row of units below it perhaps; -1 if it does not.
func lastHeadings(head []kept) int {
	if len(head) == headRows { // it goes on
		return -1
	}
	for i := len(head) - 1; i >= 0; i-- {
		if onlyUnits(&head[i]) { // or blank
			continue
		}
		if wordy(&head[i]) {
			return i
		}
		break
	}
	return -1
}

// named lists headings with their letters; cols nil means all.
func (r *reader) named(head []kept, at int, cols []int) string {
	k := &head[at]
	if cols == nil {
		for i, t := range k.text {
			if t != "" {
				cols = append(cols, i+1)
			}
		}
	}
	var out []string
	for i, c := range cols {
		if i == 20 {
			out = append(out, fmt.Sprintf("%d more", len(cols)-i))
			break
		}
		name := k.word(c)
		if g := groupOf(head, at, c); g != "" && alike(k, name) > 1 {
			name = g + " " + name
		}
		out = append(out, fmt.Sprintf("%s (%s)", quote(name), cell.ColumnName(c)))
	}
	return workbook.Joined(out, " and ")
}

// alike counts the headings of the same words.
func alike(k *kept, name string) int {
	n := 0
	for _, t := range k.text {
		if t == name {
			n++
		}
	}
	return n
}

func quote(s string) string { return fmt.Sprintf("%q", shorten(s)) }

// guessHeadings finds the last row of names above the first row of a time and a number; -1 if there is none.
func guessHeadings(head []kept) int {
	for j := range head {
		if times, numbers := filled(&head[j]); times == 0 || times+numbers < 2 {
			continue
		}
		for i := j - 1; i >= 0 && i >= j-3; i-- {
			if wordy(&head[i]) && !onlyUnits(&head[i]) {
				return i
			}
		}
	}
	return -1
}

// onlyUnits tells whether a row holds nothing but units.
func onlyUnits(k *kept) bool {
	for _, t := range k.text {
		if t != "" && !isUnit(t) && t != "%" {
			return false
		}
	}
	return true
}

// wordy tells whether a row may be headings: two words at least and no numbers.
func wordy(k *kept) bool {
	n := 0
	for i, t := range k.text {
		if t == "" {
			continue
		}
		if k.fields[i].kind != workbook.Text || readStamp([]byte(t)).form != noStamp {
			return false
		}
		n++
	}
	return n >= 2
}

// filled counts what a row holds: clocks and dates, and numbers. A number may be a time too.
func filled(k *kept) (times, numbers int) {
	for i := range k.fields {
		switch s := readField(&k.fields[i], false); s.form {
		case dateStamp, clockStamp:
			times++
		case numberStamp:
			numbers++
		}
	}
	if times == 0 && numbers >= 2 {
		return 1, numbers - 1
	}
	return times, numbers
}

// columns finds the columns of times and temperatures and their units; false where a problem was told.
func (r *reader) columns(l *layout, head []kept, at int, times []want, temp want) bool {
	none := kept{}
	names := &none
	if at >= 0 {
		names = &head[at]
	}
	ok := true
	for i, w := range times {
		col, found := r.column(head, at, w)
		ok = ok && found
		if i == 0 {
			l.time = col
		} else {
			l.clock = col
		}
		r.timeTitle(l, w.title)
	}
	if temp.typed != "" {
		col, found := r.column(head, at, temp)
		ok = ok && found
		l.temp = col
		l.scale = scaleOf(temp.unit)
	}
	if !ok {
		return false
	}
	if len(times) == 0 && !r.timesByContent(l, head, at) {
		return false
	}
	if temp.typed == "" && !r.tempByContent(l, head, at) {
		return false
	}
	if at >= 0 && alike(names, names.word(l.temp)) > 1 {
		l.group = groupOf(head, at, l.temp)
	}
	if l.temp == l.time || l.temp == l.clock {
		r.problems.Add(sameColumn.problem(r.set.Cells[setTemp], cell.Fault, setTemp, r.set.Temperature))
		return false
	}
	return r.headUnits(l, names.n, names)
}

// column finds the column of one setting.
func (r *reader) column(head []kept, at int, w want) (int, bool) {
	tell := func(s saying, args ...string) (int, bool) {
		r.problems.Add(s.problem(r.set.Cells[w.setting], cell.Fault, w.setting, w.typed, args...))
		return 0, false
	}
	cols := w.fits(head, at)
	switch {
	case len(cols) > 1:
		return tell(severalCols, r.named(head, at, cols))
	case len(cols) == 1 && w.letter > 0 && w.letter != cols[0] && w.letter <= len(head[at].text):
		return tell(letterTwice, cell.ColumnName(cols[0]), cell.ColumnName(w.letter))
	case len(cols) == 1:
		return cols[0], true
	}
	last := 0
	for i := range head {
		last = max(last, head[i].last())
	}
	if w.letter > last {
		return tell(noColumn, cell.ColumnName(last))
	}
	return w.letter, true
}

// timeTitle takes what a heading says of times: their unit, the order of dates, the zone.
func (r *reader) timeTitle(l *layout, t title) {
	if u := timeUnit(t.unit); u != nil {
		l.tick = u
	}
	if o := patternOf(t.unit); o != 0 {
		l.order = o
	}
}

// headUnits takes the units that the headings of the file state, or a row of units below them, which must not contradict the settings.
func (r *reader) headUnits(l *layout, line int32, names *kept) bool {
	if line == 0 {
		return true
	}
	t := titleOf(names.word(l.temp))
	if hasWord(t.raw, moistWords) {
		r.problems.Add(ofMoisture.problem(r.set.Cells[setTemp], cell.Fault, setTemp, r.set.Temperature, t.raw))
		return false
	}
	if s := scaleOf(t.unit); s != nil && !r.agree(l, s, line) {
		return false
	}
	for _, col := range []int{l.time, l.clock} {
		t := titleOf(names.word(col))
		if t.unit == "" {
			t.unit = names.word(col) // of a row of units
		}
		if u := timeUnit(t.unit); u != nil {
			if l.tick != nil && l.tick != u {
				r.problems.Add(otherTick.problem(r.set.Cells[setTime], cell.Fault, setTime, r.set.Time, l.tick.name, u.name))
				return false
			}
			l.tick = u
		}
		if o := patternOf(t.unit); o != 0 {
			l.order = o
		}
		if z := zoneIn(names.word(col)); z != "" {
			l.zone = z
		}
	}
	return true
}

// agree takes the unit of temperatures that the file states.
func (r *reader) agree(l *layout, s *scale, line int32) bool {
	if l.scale != nil && l.scale != s {
		at := fmt.Sprintf("the heading in %s %d", r.src.word(), line)
		r.problems.Add(otherScale.problem(r.set.Cells[setTemp], cell.Fault, setTemp, r.set.Temperature, l.scale.name, at, s.name))
		return false
	}
	l.scale = s
	return true
}

// zoneIn finds an offset that a heading states: "Date Time, GMT-07:00".
func zoneIn(heading string) string {
	for _, word := range strings.FieldsFunc(heading, func(r rune) bool { return strings.ContainsRune(" ,;()[]", r) }) {
		up := strings.ToUpper(word)
		if strings.HasPrefix(up, "GMT") || strings.HasPrefix(up, "UTC") {
			if _, err := offsetOf(word); err == nil {
				return word
			}
		}
	}
	return ""
}

var errZone = errors.New("no offset")

// offsetOf reads an offset from UTC, s: "UTC-07:00", "+01:00", "GMT+2", "Z".
func offsetOf(word string) (int32, error) {
	w := strings.ToUpper(strings.Join(strings.Fields(strings.ReplaceAll(word, "−", "-")), ""))
	w = strings.TrimPrefix(strings.TrimPrefix(w, "UTC"), "GMT")
	if w == "" || w == "Z" {
		return 0, nil
	}
	var s stamp
	c := cursor{b: []byte(w)}
	if !c.zone(&s) || !c.done() {
		return 0, errZone
	}
	return s.east, nil
}

// firstReading finds the first row from from on that has a time; where there are no headings above, with a number under the temperatures.
func (l *layout) firstReading(head []kept, from int) int {
	for i := from; i < len(head); i++ {
		if i > from+headBlock && l.heads > 0 {
			break
		}
		k := &head[i]
		if !l.timed(k) {
			continue
		}
		if v, _ := readNumber(k.at(l.temp).b); v.bad == fine || l.heads > 0 {
			return i
		}
	}
	return -1
}

// timed tells whether a row has a time.
func (l *layout) timed(k *kept) bool {
	s := readField(k.at(l.time), false)
	if l.clock > 0 {
		return s.form != noStamp && readField(k.at(l.clock), false).form != noStamp
	}
	return s.form != noStamp
}

// headAbove finds the headings of columns that were given by letters: the nearest row above the readings with words in both columns that are
// no units; -1 if there is none.
func (l *layout) headAbove(head []kept, first int) int {
	for i := first - 1; i >= 0 && i >= first-3; i-- {
		k := &head[i]
		a, b := k.word(l.time), k.word(l.temp)
		if a == "" || b == "" || scaleOf(b) != nil && titleOf(b).name == b || timeUnit(a) != nil || !wordy(k) {
			continue
		}
		l.heads, l.titles = k.n, k.text
		return i
	}
	return -1
}

// about keeps what stands above the table, takes the units between headings and readings, and tells what else stands there.
func (r *reader) about(l *layout, head []kept, at, first int) {
	end := at
	if at < 0 {
		end = first
	}
	for i := range end {
		if !head[i].blank() {
			r.log.About = append(r.log.About, strings.Join(strings.Fields(strings.Join(head[i].text, " ")), " "))
		}
	}
	if at < 0 {
		return
	}
	r.headUnits(l, head[at].n, &head[at])
	for i := at + 1; i < first; i++ {
		k := &head[i]
		if k.blank() {
			continue
		}
		s := scaleOf(k.word(l.temp))
		u := timeUnit(k.word(l.time))
		if s == nil && u == nil && patternOf(k.word(l.time)) == 0 {
			if v, _ := readNumber(k.at(l.temp).b); v.bad == fine && k.word(l.time) != "" {
				r.tells.tell(notTime, cell.Fault, "", k.n, l.time, k.word(l.time))
				continue
			}
			r.tells.tell(aboveReading, cell.Note, "", k.n, 0, strings.Join(k.text, " "))
			continue
		}
		if s != nil && !r.agree(l, s, k.n) {
			return
		}
		r.headUnits(l, k.n, k)
	}
}

// heading is the heading of a column, or its letter.
func (l *layout) heading(col int) string {
	if l.heads > 0 && col <= len(l.titles) && l.titles[col-1] != "" {
		return l.titles[col-1]
	}
	return cell.ColumnName(col)
}

// timeWords and tempWords are how headings of times and of temperatures begin, in small letters.
var (
	timeWords  = []string{"time", "date", "stamp", "elapsed", "clock", "zeit", "datum", "uhr", "hora", "fecha", "heure", "temps", "tempo", "data", "ora", "tid", "čas", "czas", "aika", "ώρα", "ημερ"}
	tempWords  = []string{"temp", "probe", "core", "kern", "sensor", "channel", "sonde", "sonda", "fühler", "product", "meat", "air", "oven", "teplota", "θερμ", "lämpö"}
	moistWords = []string{"dew", "taupunkt", "humid", "feuchte"}
	notTemp    = []string{"humid", "rh", "%", "dew", "feuchte", "tau", "punto", "point", "volt", "batt", "press"}
)

func hasWord(s string, list []string) bool {
	s = strings.ToLower(s)
	for _, w := range list {
		if strings.Contains(s, w) {
			return true
		}
	}
	return false
}

// timesByContent finds the column of times where no setting names it: the only one that holds dates or clocks, or is headed as times.
func (r *reader) timesByContent(l *layout, head []kept, at int) bool {
	names := &head[at]
	var dates, clocks, counts []int
	for c := 1; c <= len(names.text); c++ {
		switch form, dated, timed := columnForm(head, at, c); {
		case form == dateStamp && dated && !timed:
			dates = append(dates, c)
		case form == dateStamp, form == clockStamp:
			clocks = append(clocks, c)
		case form == numberStamp && (timeUnit(titleOf(names.word(c)).unit) != nil || hasWord(names.word(c), timeWords) && !hasWord(names.word(c), notTemp)) && scaleOf(titleOf(names.word(c)).unit) == nil:
			counts = append(counts, c)
		}
	}
	switch {
	case len(dates) == 1 && len(clocks) == 1:
		l.time, l.clock = dates[0], clocks[0]
	case len(dates) == 0 && len(clocks) == 1:
		l.time = clocks[0]
	case len(dates)+len(clocks) == 0 && len(counts) == 1:
		l.time = counts[0]
	case len(dates)+len(clocks)+len(counts) == 0:
		r.problems.Add(noTimes.problem(r.set.Cells[setTime], cell.Fault, setTime, "", ": "+r.named(head, at, nil)))
		return false
	default:
		r.problems.Add(askColumn.problem(r.set.Cells[setTime], cell.Fault, setTime, "", r.named(head, at, append(append(dates, clocks...), counts...)), setTime))
		return false
	}
	return true
}

// columnForm is what the first rows below the headings have in a column; noStamp if they do not agree.
func columnForm(head []kept, at, col int) (form stampForm, dated, timed bool) {
	for i := at + 1; i < len(head) && i < at+30; i++ {
		s := readField(head[i].at(col), false)
		if s.form == noStamp {
			continue
		}
		if form != noStamp && form != s.form {
			return noStamp, false, false
		}
		form, dated, timed = s.form, dated || s.dated, timed || s.timed
	}
	return form, dated, timed
}

// tempByContent finds the column of temperatures where no setting names it: the only one that is headed as one.
func (r *reader) tempByContent(l *layout, head []kept, at int) bool {
	names := &head[at]
	var cols []int
	for c := 1; c <= len(names.text); c++ {
		t := titleOf(names.word(c))
		if c == l.time || c == l.clock || t.raw == "" || hasWord(t.raw, notTemp) {
			continue
		}
		if scaleOf(t.unit) != nil || hasWord(t.raw, tempWords) {
			cols = append(cols, c)
		}
	}
	switch len(cols) {
	case 0:
		r.problems.Add(noTemps.problem(r.set.Cells[setTemp], cell.Fault, setTemp, "", ": "+r.named(head, at, nil)))
	case 1:
		l.temp = cols[0]
	default:
		r.problems.Add(askColumn.problem(r.set.Cells[setTemp], cell.Fault, setTemp, "", r.named(head, at, cols), setTemp))
	}
	return len(cols) == 1
}

// readField reads a cell of times; of a workbook a date or a clock is a number with a number format.
func readField(f *field, is1904 bool) stamp {
	if f.kind == workbook.Text && len(f.b) < 80 {
		return readStamp(f.b)
	}
	if f.kind == workbook.Figure {
		return serialStamp(f, is1904)
	}
	return stamp{}
}

// missings are the words for a reading that is missing, in small letters.
var missings = map[string]bool{"na": true, "n/a": true, "nan": true, "#n/a": true, "---": true, "--": true, "-": true, "err": true, "open": true, "ol": true}

// missingWord tells whether a cell stands for a reading that is missing. A blank cell does.
func missingWord(b []byte) bool {
	if len(b) == 0 {
		return true
	}
	return len(b) < 12 && missings[strings.ToLower(string(b))]
}

func (r *reader) missing(b []byte) bool {
	if missingWord(b) {
		return true
	}
	if len(r.words) == 0 || !utf8.Valid(b) {
		return false
	}
	return r.words[workbook.Key(string(b))]
}
