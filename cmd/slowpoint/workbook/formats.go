package workbook

import (
	"math"
	"strconv"
	"strings"
	"unicode"
)

// Display is how a cell shows another value than the one that is stored in it.
type Display uint8

const (
	AsStored    Display = iota // or rounded
	Nothing                    // the number format is empty for this number
	InWords                    // or holds words only
	Thousands                  // a comma at its end divides by a thousand
	Otherwise                  // with digits, a sign or a point that the stored number does not have
	TimeOfDay                  // 2:00 PM
	OverDays                   // what is over after whole days: 2:00 for 26 hours
	OverHours                  // after whole hours
	OverMinutes                // after whole minutes
	Raised                     // of text: digits beside it are raised or lowered, as of a footnote
)

// numberFormat is the parts of a number format code that are meant for numbers (ECMA-376 part 1, 18.8.31): for positive numbers, negative
// ones and zero, or by conditions of their own.
type numberFormat []section

// section is one part.
type section struct {
	form      Form
	look      Display // of every number
	condition string
	than      float64
	signed    bool    // shows that a number is less than 0, by a sign, brackets or a colour
	minus     bool    // has a sign before the digits
	dash      bool    // a dash alone, which stands for zero
	noZero    bool    // of # only, which shows no zero
	places    int     // behind the point
	over      Display // of times from the period on, days
	period    float64
}

// numberFormat reads a number format code.
func (b *book) numberFormat(code string) numberFormat {
	var f numberFormat
	if code == "" { // as programs show it (common practice, no source)
		code = "General"
	}
	parts := sections(code)
	for i, p := range parts {
		if i == 3 || i > 0 && i == len(parts)-1 && strings.Contains(p, "@") {
			break // for words
		}
		s := sectionOf(p, b.form(p))
		if s.form >= Worded && s.look == InWords {
			s.form = Bare // words in place of a number, not behind it
		}
		s.times(p)
		f = append(f, s)
	}
	return f
}

// sections parts a code at the semicolons that are not quoted.
func sections(code string) []string {
	var out []string
	from := 0
	for i := 0; i < len(code); i++ {
		switch code[i] {
		case '"':
			if j := strings.IndexByte(code[i+1:], '"'); j >= 0 {
				i += j + 1
			}
		case '\\', '_', '*':
			i++
		case '[':
			if j := strings.IndexByte(code[i:], ']'); j >= 0 {
				i += j
			}
		case ';':
			out = append(out, code[from:i])
			from = i + 1
		}
	}
	return append(out, code[from:])
}

// pieces parts a section: a digit's place is 0, #, ? in a string of its own, a literal text begins with a quotation mark, a bracket with [;
// what is left are single signs.
func pieces(s string) []string {
	var out []string
	literal := func(text string) {
		if n := len(out); n > 0 && out[n-1][0] == '"' {
			out[n-1] += text
		} else {
			out = append(out, `"`+text)
		}
	}
	rs := []rune(s)
	for i := 0; i < len(rs); i++ {
		switch c := rs[i]; {
		case c == '"':
			for i++; i < len(rs) && rs[i] != '"'; i++ {
				literal(string(rs[i]))
			}
		case c == '\\':
			if i++; i < len(rs) {
				literal(string(rs[i]))
			}
		case c == '_' || c == '*':
			i++
		case c == '[':
			in := ""
			for i++; i < len(rs) && rs[i] != ']'; i++ {
				in += string(rs[i])
			}
			if money, ok := strings.CutPrefix(in, "$"); ok {
				if money, _, _ = strings.Cut(money, "-"); money != "" {
					literal(money)
				}
				continue
			}
			out = append(out, "["+in)
		case (c == 'E' || c == 'e') && i+1 < len(rs) && (rs[i+1] == '+' || rs[i+1] == '-'):
			i++
			out = append(out, "E")
		case strings.ContainsRune("0#?.,%@", c) || unicode.IsLetter(c):
			out = append(out, string(c))
		default:
			literal(string(c))
		}
	}
	return out
}

// sectionOf finds what a section of a form shows of numbers.
func sectionOf(code string, form Form) section {
	s := section{form: form}
	ps := pieces(code)
	place := func(i int) bool { return i >= 0 && i < len(ps) && strings.Contains("0#?", ps[i]) }
	first, last, percents := -1, -1, 0
	words, point, letters := "", false, ""
	for i, p := range ps {
		switch {
		case place(i):
			if first < 0 {
				first, s.noZero = i, true
			}
			last = i
			s.noZero = s.noZero && p == "#"
			if point {
				s.places++
			}
		case p == ".":
			point = true
		case p == "%":
			percents++
		case p == ",":
			end := i
			for end < len(ps) && ps[end] == "," {
				end++
			}
			if place(i-1) && !place(end) {
				s.look = Thousands
			}
		case p[0] == '"':
			words += p[1:]
		case p[0] == '[':
			s.bracket(p[1:])
		case unicode.IsLetter([]rune(p)[0]):
			letters += strings.ToLower(p)
		case p == "@":
			letters += "general"
		}
	}
	general := strings.Contains(letters, "general")
	s.minus = hasMinus(before(ps, first))
	s.signed = s.signed || strings.ContainsAny(words, "-−–(")
	switch {
	case general, first < 0 && (letters != "" || s.form == Clock):
	case first < 0 && strings.Trim(words, " -−–—") == "" && strings.TrimSpace(words) != "":
		s.dash, s.look = true, InWords
	case first < 0 && strings.TrimSpace(words) == "" && percents == 0:
		s.look = Nothing
	case first < 0:
		s.look = InWords
	case letters != "": // a time with digits of seconds
	case percents > 1 || alters(ps, first, last):
		s.look = Otherwise
	}
	s.places += 2 * percents
	return s
}

// bracket reads a condition or a colour.
func (s *section) bracket(in string) {
	op := strings.TrimRight(in, "0123456789.,+-eE ")
	switch x, err := strconv.ParseFloat(strings.TrimSpace(in[len(op):]), 64); {
	case op != "" && strings.Trim(op, "<>=") == "" && err == nil:
		s.condition, s.than = op, x
	case strings.Trim(strings.ToLower(in), "hms") != "": // no elapsed time
		s.signed = true
	}
}

// before is the literal text in front of a piece.
func before(ps []string, i int) string {
	if i > 0 && ps[i-1][0] == '"' {
		return ps[i-1][1:]
	}
	return ""
}

func hasMinus(s string) bool {
	s = strings.TrimSpace(s)
	return strings.HasSuffix(s, "-") || strings.HasSuffix(s, "−") || strings.HasSuffix(s, "–")
}

// alters tells whether literal text makes another number of the digits: a digit beside them, or anything between them but what parts
// thousands or a fraction.
func alters(ps []string, first, last int) bool {
	digit := func(s string) bool { return s != "" && s[0] >= '0' && s[0] <= '9' }
	if b := before(ps, first); b != "" {
		n := len(b)
		stop := strings.ContainsAny(b[n-1:], ".,") && (n == 1 || digit(b[n-2:])) // ca.150 is no .150
		if digit(b[n-1:]) || stop {
			return true
		}
	}
	for i := first; i < last; i++ {
		if ps[i][0] == '"' && strings.Trim(ps[i][1:], " '’/\u00a0\u202f\u2009") != "" {
			return true
		}
	}
	if last+1 < len(ps) && ps[last+1][0] == '"' {
		after := ps[last+1][1:]
		return digit(after) || strings.ContainsAny(after[:1], ".,") && digit(after[1:])
	}
	return false
}

// times finds from which time on a clock begins again.
func (s *section) times(code string) {
	if s.form != Clock {
		return
	}
	letters, elapsed := "", false
	for _, p := range pieces(code) {
		switch {
		case p[0] == '[':
			elapsed = elapsed || strings.Trim(strings.ToLower(p[1:]), "hms") == ""
		case p[0] != '"':
			letters += strings.ToLower(p)
		}
	}
	switch {
	case elapsed:
	case strings.ContainsAny(letters, "ap上下"): // AM/PM, A/P, 上午/下午
		s.look = TimeOfDay
	case strings.Contains(letters, "h"):
		s.over, s.period = OverDays, 1
	case strings.Contains(letters, "m"):
		s.over, s.period = OverHours, 1./24
	default:
		s.over, s.period = OverMinutes, 1./1440
	}
}

// holds tells whether a number meets the condition of a section.
func (s *section) holds(x float64) bool {
	switch s.condition {
	case "<":
		return x < s.than
	case "<=":
		return x <= s.than
	case ">":
		return x > s.than
	case ">=":
		return x >= s.than
	case "=":
		return x == s.than
	case "<>":
		return x != s.than
	}
	return false
}

// choose finds the section that shows a number, and whether it is the one for numbers below 0, which adds no sign; nil if none does.
func (f numberFormat) choose(x float64) (s *section, below bool) {
	if len(f) == 0 {
		return nil, false
	}
	conditions := false
	for i := range f {
		conditions = conditions || f[i].condition != ""
	}
	switch n := len(f); {
	case !conditions && n > 1 && x < 0:
		return &f[1], true
	case !conditions && n > 2 && x == 0:
		return &f[2], false
	case !conditions:
		return &f[0], false
	}
	for i := range f {
		switch s := &f[i]; {
		case s.condition != "" && s.holds(x): // a section for all below 0 adds no sign of its own (common practice, no source)
			return s, x < 0 && (s.condition == "<" || s.condition == "<=") && s.than == 0
		case s.condition != "":
		case i > 0 && i == len(f)-1, i == 0 && x > 0:
			return s, false
		case i == 1 && x < 0:
			return s, true
		}
	}
	return nil, false
}

// of gives what the format makes of a number, and how it shows it.
func (f numberFormat) of(x float64) (Form, Display) {
	s, below := f.choose(x)
	switch {
	case s == nil && len(f) > 0:
		return f[0].form, Otherwise
	case s == nil:
		return Bare, AsStored
	case s.look == InWords && s.dash && x == 0:
		return s.form, AsStored
	case s.look != AsStored:
		return s.form, s.look
	case s.over != AsStored && math.Round(math.Abs(x)*86400) >= math.Round(s.period*86400):
		return s.form, s.over
	case s.form == Clock || s.form == Date:
	case below && !s.signed, !below && s.minus && x != 0:
		return s.form, Otherwise
	case s.noZero && math.Abs(x)*math.Pow10(s.places) < 0.5:
		return s.form, Nothing
	}
	return s.form, AsStored
}

// plain tells whether every number has the same form and is shown as it is stored, so that none needs to be looked at.
func (f numberFormat) plain() bool {
	if len(f) != 1 {
		return false
	}
	s := &f[0]
	return s.look == AsStored && s.condition == "" && s.over == AsStored && !s.minus && !s.noZero
}

// differs words the refusal of a number or text that is shown otherwise than it is stored; nil if it is not.
func (e *Entry) differs(typed string) *refusal {
	switch e.Shows {
	case Nothing:
		return refused(typed, shownNothing)
	case InWords:
		return refused(typed, shownWords)
	case Thousands:
		return refused(typed, shownThousands)
	case Otherwise:
		return refused(typed, shownOther)
	case TimeOfDay:
		return refused(typed, shownTimeOfDay)
	case OverDays:
		return refused(typed, shownOver, "days", "[h]:mm")
	case OverHours:
		return refused(typed, shownOver, "hours", "[mm]:ss")
	case OverMinutes:
		return refused(typed, shownOver, "minutes", "[mm]:ss")
	case Raised:
		return refused(typed, raisedDigits)
	}
	return nil
}
