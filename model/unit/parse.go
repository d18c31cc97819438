package unit

import (
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

// Decimal is the sign before the tenths.
type Decimal int

const (
	Unsure Decimal = iota // nothing in the file tells
	Point
	Comma
)

// Mistake is a text that is no value of a quantity: Says goes on after the quoted text, Mend tells what to type instead.
type Mistake struct{ Says, Mend string }

// Words of mistakes by which whoever words them anew for another place knows them.
const (
	NoUnit   = "has no unit"                             // how Says begins where neither the heading nor the cell gives a unit
	SignItem = "the item Decimal sign of the sheet Plan" // where Mend sends for a sign that can be read two ways
)

// Error joins the two.
func (m *Mistake) Error() string { return m.Says + " – " + m.Mend }

// Value is a typed value.
type Value struct {
	Computed float64 // in Units[0] of its quantity
	Typed    string  // as typed, with the unit that the cell or the heading gave
}

// Of makes a value of a number whose unit the heading gives; shown is how the number is printed.
func (u *Unit) Of(x float64, shown string) Value {
	return Value{Computed: u.In(x), Typed: strings.TrimSpace(shown + " " + u.Name())}
}

// The forms of a typed number, after blanks were made plain: 1 1/4, 1¼, 1 234.5, 0,5, 1e-3.
var (
	fraction  = regexp.MustCompile(`^([+-]?)(?:(\d+)([ -]))?(\d+) ?[/⁄] ?(\d+) ?`)
	vulgar    = regexp.MustCompile(`^([+-]?)(\d*) ?([½⅓⅔¼¾⅕⅖⅗⅘⅙⅚⅐⅛⅜⅝⅞⅑⅒]) ?`)
	decimal   = regexp.MustCompile(`^([+-]?)(\d{1,3}(?:[ ']\d{3})+(?:[.,]\d+)?|\d+(?:[.,]\d+)*[.,]?|[.,]\d+)([eE][+-]?\d+)? ?`)
	clockText = regexp.MustCompile(`^(\d+):([0-5]?\d)(?::([0-5]?\d(?:[.,]\d+)?))?$`)
	blanks    = strings.NewReplacer("\u00a0", " ", "\u2009", " ", "\u202f", " ", "\u2007", " ", "\t", " ", "\n", " ", "\r", " ", "−", "-", "–", "-", "’", "'")
	parts     = map[rune][2]float64{'½': {1, 2}, '⅓': {1, 3}, '⅔': {2, 3}, '¼': {1, 4}, '¾': {3, 4}, '⅕': {1, 5}, '⅖': {2, 5}, '⅗': {3, 5}, '⅘': {4, 5},
		'⅙': {1, 6}, '⅚': {5, 6}, '⅐': {1, 7}, '⅛': {1, 8}, '⅜': {3, 8}, '⅝': {5, 8}, '⅞': {7, 8}, '⅑': {1, 9}, '⅒': {1, 10}}
)

func tidy(text string) string { return strings.Join(strings.Fields(blanks.Replace(Narrow(text))), " ") }

// Narrow writes the full-width forms of East Asian keyboards, as in ５．５（ｍｍ）, as plain letters, digits and signs.
func Narrow(s string) string {
	return strings.Map(func(c rune) rune {
		switch {
		case c >= '\uff01' && c <= '\uff5e': // in the order of ASCII
			return c - '\uff01' + '!'
		case c == '\u3000':
			return ' '
		}
		return c
	}, s)
}

// Parse reads a text as a value: a number, a fraction where it can be no range (see slashed.of), a number with its own unit (which wins over the heading's), for durations also
// several of them (1 h 30 min) and clock forms where the heading says which. heading may be nil: then the text must bring its unit.
// It never panics and never gives a number that is not finite.
func (q *Quantity) Parse(text string, heading *Unit, d Decimal) (Value, *Mistake) {
	s := tidy(text)
	if q.Name == Duration.Name {
		if m := clockText.FindStringSubmatch(s); m != nil {
			return q.clock(s, m, heading)
		}
	}
	if len(s) > 200 {
		return Value{}, &Mistake{"is too long for a value", "type a number, with a unit if it differs from the heading's"}
	}
	total, n := 0.0, 0
	var last *Unit
	own, typedUnit := false, ""
	for rest := s; n == 0 || rest != ""; n++ {
		x, slash, after, m := number(rest, d)
		if m != nil {
			if n > 0 {
				return Value{}, q.noNumber(s)
			}
			return Value{}, q.orNoNumber(m, s)
		}
		word := after
		if q.Name == Duration.Name {
			if i := strings.IndexAny(after, "0123456789½⅓⅔¼¾"); i > 0 {
				word = after[:i]
			}
		}
		rest = after[len(word):]
		u := heading
		switch word = strings.TrimSpace(word); {
		case word != "":
			own, typedUnit = true, word
			if u = q.unitOfCell(word); u == nil {
				return Value{}, q.noUnit(word)
			}
		case n > 0 && last != nil && last.Name() == "h" && rest == "":
			u = q.Unit("min") // 1 h 30
		case n > 0:
			return Value{}, q.noNumber(s)
		case u == nil:
			return Value{}, &Mistake{NoUnit + ", and its heading gives none", "put the unit in brackets after the heading or behind the number: " + q.Listing()}
		case strings.Contains(u.Name(), ":"):
			return Value{}, &Mistake{"is not in the form " + u.Name() + " that the heading announces", "type it as " + u.Name() + ", or change the unit of the heading"}
		}
		if u != nil && strings.Contains(u.Name(), ":") {
			return Value{}, q.noNumber(s)
		}
		if n > 0 && (last == nil || orOne(u.Scale) >= orOne(last.Scale)) {
			return Value{}, q.noNumber(s)
		}
		if slash != nil && !slash.of(u) {
			return Value{}, &orRange
		}
		total += u.In(x)
		last = u
	}
	if math.IsNaN(total) || math.IsInf(total, 0) {
		return Value{}, q.noNumber(s)
	}
	if own && n == 1 {
		return Value{total, strings.TrimSpace(strings.TrimSuffix(s, typedUnit)) + " " + last.Name()}, nil
	}
	if own || last == nil {
		return Value{total, s}, nil
	}
	return Value{total, strings.TrimSpace(s + " " + last.Name())}, nil
}

// clock reads 2:05 by the form that the heading announces; 1:02:03 is always hours, minutes, seconds.
func (q *Quantity) clock(s string, m []string, heading *Unit) (Value, *Mistake) {
	a, _ := strconv.ParseFloat(m[1], 64)
	b, _ := strconv.ParseFloat(m[2], 64)
	var sec float64
	form := ""
	switch {
	case m[3] != "":
		c, _ := strconv.ParseFloat(strings.Replace(m[3], ",", ".", 1), 64)
		sec, form = a*3600+b*60+c, "h:mm:ss"
	case heading != nil && heading.Name() == "h:mm":
		sec, form = a*3600+b*60, "h:mm"
	case heading != nil && heading.Name() == "mm:ss":
		sec, form = a*60+b, "mm:ss"
	default:
		return Value{}, &Mistake{"can mean hours and minutes or minutes and seconds", "type it with units, as 2 h 5 min or 2 min 5 s, or let the heading say (h:mm) or (mm:ss)"}
	}
	if math.IsInf(sec, 0) {
		return Value{}, q.noNumber(s)
	}
	return Value{sec, s + " " + form}, nil
}

// unitOfCell finds the unit of a cell. A difference needs no second "difference" in the cell: its column has said so.
func (q *Quantity) unitOfCell(word string) *Unit {
	if u := q.Unit(word); u != nil || q.Name != Difference.Name {
		return u
	}
	if u := Temperature.Unit(word); u != nil {
		return q.Unit(u.Name() + " difference")
	}
	return nil
}

func (q *Quantity) noUnit(word string) *Mistake {
	if q.Name == Temperature.Name && (strings.EqualFold(word, "K") || strings.EqualFold(word, "kelvin")) {
		return &Mistake{"is in kelvin, which is not accepted for a temperature", "convert it to °C (take 273.15 off) or °F"}
	}
	if u, letter := q.Alike(word); u != nil {
		return &Mistake{"has the unit " + strconv.Quote(word) + " with the " + letter, "type it in Latin letters: " + u.Name()}
	}
	if q.Plain() {
		return &Mistake{"is not a plain number", "type the number alone"}
	}
	if q.Unit(strings.Trim(word, " 0123456789.,-/")) != nil || strings.Trim(word, " 0123456789.,-/") == "" {
		return &Mistake{"is not a single number", "type one number" + strings.TrimPrefix(q.example(), ", or a number")}
	}
	return &Mistake{"is not a number with a unit of " + q.Name + ": " + strconv.Quote(word) + " is none", "units of " + q.Name + " are " + q.Listing()}
}

func (q *Quantity) noNumber(s string) *Mistake { return q.orNoNumber(nil, s) }

func (q *Quantity) orNoNumber(m *Mistake, s string) *Mistake {
	switch {
	case m != nil && m.Says != "":
		return m
	case strings.ContainsAny(s, "<>≤≥~≈"):
		return &Mistake{"is not a number: a comparison sign does not belong to a value", "type the number alone"}
	}
	return &Mistake{"is not a number", "type a number" + q.example()}
}

func (q *Quantity) example() string {
	switch {
	case q.Plain():
		return ""
	case q.Name == Duration.Name:
		return ", or a number with its unit such as 90 min or 1 h 30 min"
	case q.Name == Length.Name:
		return ", or a number with its unit such as 25 mm or 1 1/4 in"
	}
	return ", or a number with its unit such as 10 " + q.Units[0].Name()
}

// slashed is a number that is typed with a slash: 1 1/4.
type slashed struct {
	over, per  float64 // 1 and 4
	whole      bool    // a whole number stands before it
	hyphenated bool    // and is joined to it by a hyphen: 1-1/4
}

// of tells whether a slash is a fraction in this unit and can be no range: 2/4 under °C, cm or min is more likely "2 to 4" than a half.
// Inches and feet are divided by halves down to 64ths, and by thirds; hours and days by halves, thirds and quarters. Behind a whole number,
// as in 1 1/2, such a fraction is one in every unit. Common practice, no source.
func (f *slashed) of(u *Unit) bool {
	among := func(list ...float64) bool { return slices.Contains(list, f.per) }
	proper := f.over >= 1 && f.over < f.per
	switch name := u.Name(); {
	case name == "in" || name == "ft":
		return proper && among(2, 3, 4, 8, 16, 32, 64)
	case f.hyphenated:
		return false
	case f.whole:
		return proper && among(2, 3, 4, 8, 16, 32, 64)
	case name == "h" || name == "d":
		return proper && among(2, 3, 4) && !(f.over == 2 && f.per == 4)
	}
	return false
}

var orRange = Mistake{"reads like a range or a fraction", "type one number: of a range the end that counts, of a fraction its decimal form, as 0.5 for 1/2"}

// number reads the number at the start of a tidy text and gives what follows; slash is told if it has one. An empty Mistake means: no
// number at all.
func number(s string, d Decimal) (x float64, slash *slashed, after string, m *Mistake) {
	if m := fraction.FindStringSubmatch(s); m != nil {
		whole, _ := strconv.ParseFloat("0"+m[2], 64)
		a, _ := strconv.ParseFloat(m[4], 64)
		b, _ := strconv.ParseFloat(m[5], 64)
		if b == 0 {
			return 0, nil, "", &Mistake{}
		}
		return signed(m[1], whole+a/b), &slashed{over: a, per: b, whole: m[2] != "", hyphenated: m[3] == "-"}, s[len(m[0]):], nil
	}
	if m := vulgar.FindStringSubmatch(s); m != nil {
		whole, _ := strconv.ParseFloat("0"+m[2], 64)
		p := parts[[]rune(m[3])[0]]
		return signed(m[1], whole+p[0]/p[1]), nil, s[len(m[0]):], nil
	}
	found := decimal.FindStringSubmatch(s)
	if found == nil {
		return 0, nil, "", &Mistake{}
	}
	digits, m := pointed(found[2], d)
	if m != nil {
		return 0, nil, "", m
	}
	x, err := strconv.ParseFloat(digits+found[3], 64)
	if err != nil || math.IsInf(x, 0) {
		return 0, nil, "", &Mistake{}
	}
	return signed(found[1], x), nil, s[len(found[0]):], nil
}

func signed(sign string, x float64) float64 {
	if sign == "-" {
		return -x
	}
	return x
}

// pointed writes digits with a decimal point and without signs between thousands.
func pointed(s string, d Decimal) (string, *Mistake) {
	kind, ambiguous := signs(s)
	if ambiguous && d != Unsure {
		kind, ambiguous = d, false
	}
	switch {
	case ambiguous:
		a, b := strings.NewReplacer(",", "", ".", "").Replace(s), strings.Replace(s, ",", ".", 1)
		return "", &Mistake{"can be read as " + a + " or as " + b, "type it without a sign between thousands, or fill " + SignItem}
	case kind == bad:
		return "", &Mistake{}
	case kind != Unsure && d != Unsure && kind != d:
		name := map[Decimal]string{Point: "point", Comma: "comma"}
		return "", &Mistake{"has a decimal " + name[kind] + ", and the decimal sign of this plan is the " + name[d], "type it with a decimal " + name[d]}
	}
	out := strings.NewReplacer(" ", "", "'", "", ",", "")
	if kind == Comma {
		out = strings.NewReplacer(" ", "", "'", "", ".", "", ",", ".")
	}
	return out.Replace(s), nil
}

// Pointed writes a typed number with a decimal point and without signs between thousands; false if the text is a fraction, or anything
// but one number without a unit.
func Pointed(text string, d Decimal) (string, bool) {
	s := tidy(text)
	m := decimal.FindStringSubmatch(s)
	if m == nil || len(m[0]) != len(s) {
		return "", false
	}
	digits, found := pointed(m[2], d)
	return strings.TrimPrefix(m[1], "+") + strings.TrimSuffix(digits, ".") + m[3], found == nil
}

const bad Decimal = -1

// signs tells which decimal sign a number shows, or that it may be a sign between thousands as well.
func signs(s string) (kind Decimal, ambiguous bool) {
	grouped := strings.ContainsAny(s, " '")
	points, commas := strings.Count(s, "."), strings.Count(s, ",")
	one := func(sign string, is, other Decimal) (Decimal, bool) {
		if strings.Count(s, sign) > 1 { // 1.234.567
			if threes(s, sign) {
				return other, false
			}
			return bad, false
		}
		i := strings.Index(s, sign)
		before, after := s[:i], s[i+1:]
		if !grouped && len(after) == 3 && len(before) >= 1 && len(before) <= 3 && before[0] != '0' {
			return Unsure, true
		}
		return is, false
	}
	switch {
	case points == 0 && commas == 0:
		return Unsure, false
	case commas == 0:
		return one(".", Point, Comma)
	case points == 0:
		return one(",", Comma, Point)
	}
	lastPoint, lastComma := strings.LastIndex(s, "."), strings.LastIndex(s, ",")
	switch {
	case lastPoint > lastComma && points == 1 && threes(s[:lastPoint], ","):
		return Point, false
	case lastComma > lastPoint && commas == 1 && threes(s[:lastComma], "."):
		return Comma, false
	}
	return bad, false
}

// threes tells whether every group after the first has three digits.
func threes(s, sign string) bool {
	groups := strings.Split(s, sign)
	for i, g := range groups {
		if i > 0 && len(g) != 3 || i == 0 && (len(g) < 1 || len(g) > 3) {
			return false
		}
	}
	return true
}

// Evidence tells which decimal sign a typed text shows without doubt; Unsure if it shows none.
func Evidence(text string) Decimal {
	s := tidy(text)
	if fraction.MatchString(s) || vulgar.MatchString(s) {
		return Unsure
	}
	m := decimal.FindStringSubmatch(s)
	if m == nil {
		return Unsure
	}
	if kind, ambiguous := signs(m[2]); !ambiguous && kind != bad {
		return kind
	}
	return Unsure
}

// Ambiguous tells whether the sign in the number of a typed text may stand before the tenths or between thousands: 1,500.
func Ambiguous(text string) bool {
	s := tidy(text)
	if fraction.MatchString(s) || vulgar.MatchString(s) {
		return false
	}
	m := decimal.FindStringSubmatch(s)
	if m == nil {
		return false
	}
	_, ambiguous := signs(m[2])
	return ambiguous
}
