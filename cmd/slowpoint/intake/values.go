package intake

import (
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/unit"
)

// set fills a value with what a column took of a cell: words as they are; a number as typed, with a decimal point; a number with a unit
// of its own keeps it, as text, unless it stands in the mapping (own). u is the unit of the heading; nil if it gives none.
func (v *Value) set(e *workbook.Entry, t workbook.Taken, u *unit.Unit, d unit.Decimal, own bool) {
	q := v.Column.Quantity
	if q == nil {
		v.Text = t.Words
		return
	}
	if u != nil {
		v.Unit = u.Name()
	}
	switch {
	case e.Kind == workbook.Text:
		v.typed(e.Text, t.Value, u, d, own)
	case e.Form == workbook.Clock:
		v.time(t.Value.Computed, u)
	case e.Form == workbook.Percent && q == &unit.Percent:
		v.Text, v.Number, v.Unit = digits(t.Value.Computed), true, "%"
	default:
		v.Text, v.Number = stored(e.Text), true
		if u == nil {
			_, name, _ := strings.Cut(t.Value.Typed, " ")
			v.Unit = name // shown by the number format
		}
	}
}

// typed makes a value of a text.
func (v *Value) typed(text string, is unit.Value, u *unit.Unit, d unit.Decimal, own bool) {
	q := v.Column.Quantity
	if x, ok := unit.Pointed(text, d); ok {
		v.Text, v.Number = x, true
		return
	}
	if q == &unit.Duration && strings.Contains(text, ":") {
		v.Text, v.Unit = strings.Join(strings.Fields(strings.ReplaceAll(text, ",", ".")), ""), "h:mm"
		if strings.HasSuffix(is.Typed, " mm:ss") {
			v.Unit = "mm:ss"
		}
		return
	}
	v.Text = is.Typed
	for i := range q.Units {
		name := q.Units[i].Name()
		number, found := strings.CutSuffix(is.Typed, " "+name)
		if !found || name == "" {
			continue
		}
		x, ok := unit.Pointed(number, d)
		switch {
		case ok && own:
			v.Text, v.Number, v.Unit = x, true, name
		case ok:
			v.Text = x + " " + name
		case strings.ContainsAny(number, ","): // 1,5 h 10 min
			v.time(is.Computed, u)
		}
		return
	}
}

// time makes a value of seconds: a number in the unit of the heading, in minutes if it has none; in minutes or seconds where that takes
// a long row of digits.
func (v *Value) time(seconds float64, u *unit.Unit) {
	minute, second := unit.Duration.Unit("min"), unit.Duration.Unit("s")
	if u == nil || strings.Contains(u.Name(), ":") {
		u = minute
	}
	for _, u := range []*unit.Unit{u, minute, second} {
		v.Text, v.Number, v.Unit = digits(u.Out(seconds)), true, u.Name()
		if len(v.Text) < 12 && u.In(u.Out(seconds)) == seconds {
			return
		}
	}
}

func digits(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }

// stored writes a stored number without an exponent.
func stored(s string) string {
	if len(s) < 12 && !strings.ContainsAny(s, "eE") {
		return s
	}
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		return s
	}
	return digits(x)
}

// headingUnit finds the unit that a heading of theirs gives for a quantity: in brackets, as the whole of it or of its group, behind a comma or,
// if it can be nothing else, as its last word. inside is what stands in brackets.
func headingUnit(q *unit.Quantity, heading string) (u *unit.Unit, inside string) {
	parts := strings.Split(heading, "›")
	for i := len(parts) - 1; i >= 0; i-- {
		part := colonless(strings.TrimSpace(parts[i]))
		name, in := workbook.SplitHeading(part)
		if inside == "" {
			inside = in
		}
		tries := []string{in, part}
		if j := strings.LastIndexByte(name, ','); j >= 0 {
			tries = append(tries, strings.TrimSpace(name[j+1:]))
		}
		if j := strings.LastIndexByte(part, ' '); j >= 0 && sure[part[j+1:]] {
			tries = append(tries, part[j+1:])
		}
		for _, t := range tries {
			if t == "" {
				continue
			}
			if u := q.Unit(t); u != nil {
				return u, inside
			}
			if q == &unit.Difference && unit.Temperature.Unit(t) != nil && strings.ContainsAny(t, "°º") {
				return nil, inside // a temperature or a difference: the mapping must say
			}
		}
	}
	return nil, inside
}

// sure are units that are no words: behind a heading they can be nothing else.
var sure = map[string]bool{"°C": true, "ºC": true, "℃": true, "°F": true, "ºF": true, "℉": true, "mm": true, "cm": true, "%": true, "W/m²K": true, "W/m2K": true, "kg/m³": true, "m/s": true}

// otherQuantity tells whether a word is a unit of anything else than a quantity.
func otherQuantity(q *unit.Quantity, word string) bool {
	return slices.ContainsFunc(quantities, func(other *unit.Quantity) bool { return other != q && other.Unit(word) != nil })
}
