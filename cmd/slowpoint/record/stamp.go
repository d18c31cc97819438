package record

import (
	"bytes"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
)

// A stamp is what a cell of times says, before anything is made of it: the order of day, month and year may still be open.
type stamp struct {
	form   stampForm
	date   [3]int32 // the groups of digits of a date, in the order in which they stand
	width  [3]int8  // their digits
	order  order    // the order that the writing leaves no doubt of: a month in words, a date cell of a workbook; 0 if open
	dated  bool     // has a date
	timed  bool     // has a clock
	sec    float64  // of a clock: s, two groups read as h:mm; of a number: as typed
	groups int8     // of the clock: 2 or 3
	short  bool     // two groups with a fraction behind: mm:ss.s
	half   bool     // the clock says before or after noon, so it is one of day
	zoned  bool
	east   int32  // of a zone: s east of UTC
	unit   string // behind a number, as typed; "" if there is none
	comma  bool   // the number has a decimal comma
	point  bool   // or a point
	exact  bool   // the comma cannot divide thousands
}

type stampForm uint8

const (
	noStamp stampForm = iota
	numberStamp
	clockStamp // a clock or a duration: 2:05, 14:05:10
	dateStamp  // with a date
)

// cursor walks through the text of a cell.
type cursor struct {
	b []byte
	i int
}

func (c *cursor) peek() byte {
	if c.i < len(c.b) {
		return c.b[c.i]
	}
	return 0
}

func (c *cursor) blanks() {
	for c.i < len(c.b) && (c.b[c.i] == ' ' || c.b[c.i] == '\t') {
		c.i++
	}
}

func (c *cursor) done() bool { c.blanks(); return c.i >= len(c.b) }

// digits reads a group of up to nine digits.
func (c *cursor) digits() (n int32, width int8) {
	for c.i < len(c.b) && c.b[c.i] >= '0' && c.b[c.i] <= '9' && width < 9 {
		n = 10*n + int32(c.b[c.i]-'0')
		c.i++
		width++
	}
	return n, width
}

// word reads letters and the stops of abbreviations: "Feb", "p. m.".
func (c *cursor) word() string {
	from := c.i
	for c.i < len(c.b) {
		r, n := utf8.DecodeRune(c.b[c.i:])
		if !unicode.IsLetter(r) && r != '.' && !unicode.IsMark(r) && r != '\'' && !(r == '-' && c.i > from && c.i+1 < len(c.b) && c.b[c.i+1] >= 'A') {
			break
		}
		c.i += n
	}
	return string(c.b[from:c.i])
}

// plainBlanks turns the blanks of other alphabets and widths into ordinary ones, where there are any, and cuts those around.
func plainBlanks(b []byte) []byte {
	for i := 0; i < len(b); i++ {
		if b[i] >= 0x80 || b[i] < ' ' {
			s := norm.NFKC.String(string(b))
			return []byte(strings.Join(strings.Fields(strings.Map(visible, s)), " "))
		}
	}
	for len(b) > 0 && b[0] == ' ' {
		b = b[1:]
	}
	for len(b) > 0 && b[len(b)-1] == ' ' {
		b = b[:len(b)-1]
	}
	return b
}

func visible(r rune) rune {
	switch {
	case r == '\u200b', r == '\u200e', r == '\u200f', r == '\u2060', r == '\ufeff', r == '\u00ad':
		return -1
	case r == '−':
		return '-'
	case unicode.IsControl(r):
		return ' '
	}
	return r
}

// readStamp reads a cell of times. What is no time at all has the form noStamp.
func readStamp(b []byte) stamp {
	c := cursor{b: plainBlanks(b)}
	if len(c.b) == 0 {
		return stamp{}
	}
	var s stamp
	if b := c.b[0]; b >= '0' && b <= '9' {
		if s, ok := c.started(); ok {
			return s
		}
		c.i = 0
	} else if b != '-' && b != '+' && b != '.' && b != ',' {
		if s, ok := c.worded(); ok {
			return s
		}
		return stamp{}
	}
	if c.number(&s) {
		return s
	}
	return stamp{}
}

// started reads a stamp that starts with a digit, but is no plain number.
func (c *cursor) started() (s stamp, ok bool) {
	if c.compact(&s) {
		return s, true
	}
	n, width := c.digits()
	switch sep := c.peek(); {
	case sep == ':':
		return s, c.clock(&s, n, width, ':') && c.after(&s)
	case sep == '.' && c.i+2 < len(c.b) && (c.b[c.i+1] >= 'A' || c.b[c.i+1] == ' ' && c.b[c.i+2] >= 'A'): // 11. Februar 2016
		c.i++
		c.blanks()
		return s, c.dayMonth(&s, n, width) && c.dayTime(&s)
	case sep == '/' || sep == '-' || sep == '.':
		return s, c.date(&s, n, width, sep) && c.dayTime(&s)
	case width >= 1 && width <= 2 && (sep == ' ' || sep >= 'A'):
		c.blanks()
		return s, c.dayMonth(&s, n, width) && c.dayTime(&s)
	}
	return s, false
}

// compact reads a date without signs between its parts, with a clock behind: 20260211140557, 20260211T140557Z.
func (c *cursor) compact(s *stamp) bool {
	run := 0
	for run < len(c.b) && c.b[run] >= '0' && c.b[run] <= '9' {
		run++
	}
	if run != 14 && (run != 8 || len(c.b) < 13 || !strings.ContainsRune("Tt_ ", rune(c.b[8])) || c.b[9] < '0' || c.b[9] > '9') {
		return false
	}
	clock := c.b[8:]
	if run == 8 {
		clock = c.b[9:]
	}
	if bytes.IndexByte(clock, ':') >= 0 {
		if !s.plainDate(c.b[:8]) {
			return false
		}
		c.i = 8
		return c.dayTime(s)
	}
	k := cursor{b: clock}
	n, w := k.digits()
	if w != 6 || n/10000 > 24 || n/100%100 > 59 || n%100 > 60 || !s.plainDate(c.b[:8]) {
		return false
	}
	s.form, s.dated, s.timed, s.groups = dateStamp, true, true, 3
	s.sec = float64(n/10000*3600 + n/100%100*60 + n%100)
	c.b, c.i = clock, k.i
	return c.after(s)
}

// plainDate reads eight digits as year, month and day.
func (s *stamp) plainDate(b []byte) bool {
	n := int32(0)
	for _, d := range b {
		if d < '0' || d > '9' {
			return false
		}
		n = 10*n + int32(d-'0')
	}
	s.date, s.width, s.order = [3]int32{n / 10000, n / 100 % 100, n % 100}, [3]int8{4, 2, 2}, yearFirst
	return len(b) == 8
}

// worded reads a stamp that starts with a word: a day of the week, a month, before or after noon.
func (c *cursor) worded() (s stamp, ok bool) {
	w := c.word()
	if m := monthOf(w); m > 0 {
		c.blanks()
		d, wd := c.digits()
		if c.peek() == ',' {
			c.i++
		}
		c.blanks()
		y, wy := c.digits()
		s.date, s.width, s.order = [3]int32{m, d, y}, [3]int8{2, wd, wy}, monthFirst
		return s, wd > 0 && (wy == 4 || wy == 2) && c.dayTime(&s)
	}
	if w == "" || len(w) > 24 {
		return s, false
	}
	late, isHalf := halfOf(w)
	c.blanks()
	if c.peek() == ',' {
		c.i++
		c.blanks()
	}
	n, width := c.digits()
	switch sep := c.peek(); {
	case width == 0:
		return s, false
	case isHalf && sep == ':':
		return s, c.clock(&s, n, width, ':') && s.noon(late) && c.done()
	case !weekday(w):
		return s, false
	case sep == '/' || sep == '-' || sep == '.':
		if c.date(&s, n, width, sep) {
			return s, c.dayTime(&s)
		}
	case sep == ' ':
		c.blanks()
		return s, c.dayMonth(&s, n, width) && c.dayTime(&s)
	}
	return s, false
}

// date reads the rest of a date whose first group and the sign behind it are known: 11/02/2016, 2016-02-11, 11-Feb-16.
func (c *cursor) date(s *stamp, first int32, width int8, sep byte) bool {
	c.i++
	if sep != '.' || c.peek() > '9' {
		at := c.i
		if m := monthOf(c.word()); m > 0 && c.peek() == sep {
			c.i++
			y, wy := c.digits()
			s.date, s.width, s.order = [3]int32{first, m, y}, [3]int8{width, 2, wy}, dayFirst
			if width == 4 {
				s.order = yearFirst
			}
			return wy == 2 || wy == 4
		}
		c.i = at
	}
	if c.peek() == ' ' && sep == '.' { // 11. 2. 2016
		c.i++
	}
	second, w2 := c.digits()
	if w2 == 0 || c.peek() != sep {
		return false
	}
	c.i++
	if c.peek() == ' ' && sep == '.' {
		c.i++
	}
	third, w3 := c.digits()
	s.date, s.width = [3]int32{first, second, third}, [3]int8{width, w2, w3}
	if w3 > 0 && c.peek() == '.' && sep == '.' { // 2016. 02. 11.
		c.i++
	}
	return w3 > 0 && width <= 4 && w2 <= 2 && w3 <= 4
}

// dayMonth reads the rest of a date with the month in words behind the day: 11 Feb 2016, 11. Februar 2016.
func (c *cursor) dayMonth(s *stamp, day int32, width int8) bool {
	m := monthOf(c.word())
	c.blanks()
	if c.peek() == ',' {
		c.i++
		c.blanks()
	}
	y, wy := c.digits()
	s.date, s.width, s.order = [3]int32{day, m, y}, [3]int8{width, 2, wy}, dayFirst
	return m > 0 && (wy == 4 || wy == 2)
}

// dayTime reads what stands behind a date: nothing, or a clock.
func (c *cursor) dayTime(s *stamp) bool {
	s.form, s.dated = dateStamp, true
	if b := c.peek(); b == 'T' || b == 't' || b == ',' || b == ';' || b == '_' {
		c.i++
	} else if b != 0 && b != ' ' {
		return false
	}
	if c.done() {
		return true
	}
	late, isHalf := false, false
	if c.peek() >= 'A' { // 2016/2/11 下午 02:10
		if late, isHalf = halfOf(c.word()); !isHalf {
			return false
		}
		c.blanks()
	}
	n, width := c.digits()
	sep := c.peek()
	if width == 0 || sep != ':' && sep != '.' && sep != 'h' || !c.clock(s, n, width, sep) {
		return false
	}
	s.form = dateStamp
	if isHalf {
		return s.noon(late) && c.done()
	}
	return c.after(s) && s.sec < 86400+1
}

// clock reads the rest of a clock whose first group and the sign behind it are known.
func (c *cursor) clock(s *stamp, first int32, width int8, sep byte) bool {
	c.i++
	second, w := c.digits()
	if w != 2 || second > 59 || width > 6 {
		return false
	}
	s.form, s.timed, s.groups = clockStamp, true, 2
	s.sec = float64(first)*3600 + float64(second)*60
	if sep == 'h' {
		sep = ':'
	}
	if b := c.peek(); (b == '.' || b == ',') && sep == ':' && !s.dated {
		s.short = true
		return c.fraction(s, 60)
	}
	if c.peek() != sep {
		return true
	}
	c.i++
	third, w := c.digits()
	if w != 2 || third > 60 {
		return false
	}
	s.groups = 3
	s.sec += float64(third)
	if b := c.peek(); b == '.' || b == ',' || b == ':' {
		return c.fraction(s, 1)
	}
	return true
}

// fraction reads the fraction of the last group of a clock, which stands for so many seconds.
func (c *cursor) fraction(s *stamp, of float64) bool {
	c.i++
	f, w := c.digits()
	for c.peek() >= '0' && c.peek() <= '9' { // more than nanoseconds are dropped
		c.i++
	}
	s.sec += of * float64(f) / pow10[w]
	return w > 0
}

// after reads what stands behind a clock: nothing, before or after noon, a zone.
func (c *cursor) after(s *stamp) bool {
	if c.done() {
		return true
	}
	if b := c.peek(); b == '+' || b == '-' {
		return s.dated && c.zone(s) && c.done()
	}
	w := c.word()
	for at := c.i; ; at = c.i { // "p. m.", "de la tarde"
		c.blanks()
		more := c.word()
		if more == "" {
			c.i = at
			break
		}
		w += " " + more
	}
	if late, ok := halfOf(w); ok {
		return s.noon(late) && c.done()
	}
	switch strings.ToUpper(w) {
	case "Z":
		s.zoned = true
		return s.dated && c.done()
	case "UTC", "GMT":
		s.zoned = true
		if c.done() {
			return s.dated
		}
		return s.dated && c.zone(s) && c.done()
	}
	return false
}

// zone reads an offset from UTC: +01:00, -0700, +1.
func (c *cursor) zone(s *stamp) bool {
	sign := int32(1)
	if c.peek() == '-' {
		sign = -1
	} else if c.peek() != '+' {
		return false
	}
	c.i++
	h, w := c.digits()
	m := int32(0)
	switch {
	case w == 4:
		h, m = h/100, h%100
	case w == 0 || w > 2:
		return false
	case c.peek() == ':':
		c.i++
		if m, w = c.digits(); w != 2 {
			return false
		}
	}
	s.zoned, s.east = true, sign*(3600*h+60*m)
	return h <= 14 && m < 60
}

// noon applies before or after noon: 12 AM is 0 o'clock, 12 PM is 12.
func (s *stamp) noon(late bool) bool {
	h := int(s.sec) / 3600
	if h > 12 { // 14:05 PM says the same twice
		s.half = true
		return late && h < 24
	}
	if h == 12 {
		s.sec -= 12 * 3600
	}
	if late {
		s.sec += 12 * 3600
	}
	s.half = true
	return true
}

// number reads a number with a unit perhaps behind it.
func (c *cursor) number(s *stamp) bool {
	v, rest := readNumber(c.b)
	if v.bad != fine {
		return false
	}
	s.form, s.sec, s.comma, s.point = numberStamp, v.x, v.sign == ',', v.sign == '.'
	s.exact = v.places != 3 || v.lead == 0
	if len(rest) > 0 {
		s.unit = string(rest)
		if timeUnit(s.unit) == nil {
			return false
		}
	}
	return true
}

// halves are the words for before and after noon, without stops and blanks, in small letters (from memory; common practice, no source).
var halves = map[string]bool{
	"am": false, "a": false, "pm": true, "p": true, // English; also es a. m., it, pt, hi and others
	"dop": false, "odp": true, "dopoledne": false, "odpoledne": true, // cs, sk
	"vorm": false, "vormittags": false, "nachm": true, "nachmittags": true, // de
	"vm": false, "nm": true, // nl, af
	"fm": false, "em": true, // sv
	"matin": false, "dumatin": false, "soir": true, "dusoir": true, "aprèsmidi": true, "delaprèsmidi": true, // fr
	"delamañana": false, "delatarde": true, "delanoche": true, // es
	"damanhã": false, "datarde": true, "danoite": true, // pt
	"ant": false, "antim": false, "pom": true, // it
	"przedpołudniem": false, "popołudniu": true, // pl
	"ap": false, "ip": true, // fi
	"πμ": false, "μμ": true, // el
	"de": false, "du": true, // hu
	"öö": false, "ös": true, // tr
	"上午": false, "下午": true, "午前": false, "午後": true, "오전": false, "오후": true, "ص": false, "م": true,
}

// halfOf tells before from after noon.
func halfOf(w string) (late, ok bool) {
	if len(w) == 2 && (w[1] == 'M' || w[1] == 'm') { // the usual case, without a copy
		switch w[0] {
		case 'A', 'a':
			return false, true
		case 'P', 'p':
			return true, true
		}
	}
	late, ok = halves[strings.Map(func(r rune) rune {
		if r == '.' || r == ' ' || r == '\'' || r == '’' || r == '-' {
			return -1
		}
		return unicode.ToLower(r)
	}, w)]
	return late, ok
}

// months are the beginnings of the names of months, in small letters; of a language not listed a month in words is an error.
var months = [12][]string{
	{"jan", "gen", "ene"}, {"feb", "fév", "fev"}, {"mar", "mär", "mrz", "maa"}, {"apr", "abr", "avr"}, {"may", "mai", "mag", "maj", "mei"}, {"jun", "juin", "giu"},
	{"jul", "juil", "lug"}, {"aug", "aoû", "ago"}, {"sep", "set"}, {"oct", "okt", "ott", "out"}, {"nov"}, {"dec", "déc", "dez", "dic", "des"},
}

// monthOf gives the number of a month in words (en, de, fr, es, it, pt, nl, sv), 0 if it is none.
func monthOf(w string) int32 {
	if len(w) < 3 {
		return 0
	}
	w = strings.ToLower(strings.Trim(w, "."))
	for i, names := range months {
		for _, n := range names {
			if strings.HasPrefix(w, n) {
				return int32(i + 1)
			}
		}
	}
	return 0
}

// weekdays are the beginnings of the names of days of the week, in small letters (en, de, fr, es, it, nl, sv).
var weekdays = []string{"mo", "tu", "we", "th", "fr", "sa", "su", "di", "mi", "do", "so", "lu", "ma", "me", "je", "ve", "mié", "jue", "vie", "sá", "gio", "wo", "vr", "za", "zo", "må", "ti", "on", "to", "lö", "sö", "sá", "dom", "sam", "dim"}

func weekday(w string) bool {
	w = strings.ToLower(w)
	for _, d := range weekdays {
		if strings.HasPrefix(w, d) && len(w) < 14 {
			return true
		}
	}
	return false
}
