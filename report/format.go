package report

import (
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"slowpoint/model"
	"slowpoint/model/unit"
	"slowpoint/rules"
)

// rounding is the way in which a result loses digits.
type rounding int

const (
	nearest rounding = iota
	down             // towards −∞
	up               // towards +∞
)

// round rounds v to a number of decimals. Noise of the last binary digits (1e-7 of a step) moves nothing up or down,
// so that exactly 120 stays 120.
func (r rounding) round(v float64, decimals int) float64 {
	scale := math.Pow(10, float64(decimals))
	x := v * scale
	switch {
	case r == nearest || math.Abs(x-math.Round(x)) < 1e-7:
		x = math.Round(x)
	case r == down:
		x = math.Floor(x)
	case r == up:
		x = math.Ceil(x)
	}
	return x/scale + 0 // never −0
}

// finite tells whether a number exists and may be written.
func finite(v *float64) bool { return v != nil && !math.IsNaN(*v) && !math.IsInf(*v, 0) }

// decimal writes v with a fixed number of decimals and a true minus sign.
func decimal(v float64, decimals int, r rounding) string {
	s := strconv.FormatFloat(r.round(v, decimals), 'f', decimals, 64)
	return strings.Replace(s, "-", "−", 1)
}

// plain writes v with at most a number of decimals and no trailing noughts.
func plain(v float64, decimals int, r rounding) string {
	s := strconv.FormatFloat(r.round(v, decimals), 'f', -1, 64)
	return strings.Replace(s, "-", "−", 1)
}

// sentence gives a remark a capital and a full stop, as the remarks of the prediction have neither; "" stays "".
func sentence(s string) string {
	if s == "" {
		return ""
	}
	s = capital(s)
	if strings.HasSuffix(s, ".") {
		return s
	}
	return s + "."
}

// capital makes the first letter of a text large.
func capital(s string) string {
	first, n := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(first)) + s[n:]
}

// The units that the documents write beside those that the program computes in; a difference scales and never shifts.
var (
	degreeF     = unit.Temperature.Unit("°F")
	differenceF = unit.Difference.Unit("°F difference")
	inch        = unit.Length.Unit("in")
)

// fahrenheit turns °C into °F.
func fahrenheit(c float64) float64 { return degreeF.Out(c) }

// temperature writes a calculated temperature (°C) in the user's unit with the other in brackets: "74.1 °C (165.4 °F)".
func (h *Head) temperature(c float64, r rounding) string {
	inC, inF := decimal(c, 1, r)+" °C", decimal(fahrenheit(c), 1, r)+" °F"
	return h.first(inC, inF)
}

// difference writes a difference (K) likewise: "5.0 °C (9.0 °F)".
func (h *Head) difference(k float64, r rounding) string {
	inC, inF := decimal(k, 1, r)+" °C", decimal(differenceF.Out(k), 1, r)+" °F"
	return h.first(inC, inF)
}

// Difference writes how much is lost or lacking (K), rounded up: "5.0 °C (9.0 °F)".
func (h *Head) Difference(k float64) string { return h.difference(k, up) }

// stated writes a temperature that a person stated (°C inside), not rounded beyond a hundredth: "75 °C (167 °F)".
func (h *Head) stated(c float64) string {
	return h.first(plain(c, 2, nearest)+" °C", plain(fahrenheit(c), 2, nearest)+" °F")
}

func (h *Head) first(inC, inF string) string {
	if h.Fahrenheit {
		return inF + " (" + inC + ")"
	}
	return inC + " (" + inF + ")"
}

// roomShown is the longest room that is written out, s: 1000 h.
const roomShown = 3.6e6

// Duration writes seconds as a person says them.
func Duration(s float64) string { return duration(s, nearest) }

// duration writes seconds as a person says them, rounded as asked.
func duration(s float64, r rounding) string {
	if s < 0 {
		back := map[rounding]rounding{nearest: nearest, down: up, up: down}[r]
		return "−" + duration(-s, back)
	}
	if r == down && s >= roomShown { // room beyond that says nothing, and lethality far above its need makes room without end
		return "over 1000 h"
	}
	return unit.Lasting(s, r.round)
}

// mm writes a length (m) in mm.
func mm(m float64) string { return plain(m*1000, 1, nearest) + " mm" }

// length writes a size (m) of a product in the unit that its sizes were typed in, inches with mm in brackets: "1.75 in (44.5 mm)".
func length(p *model.Product, m float64) string {
	if p.Inches {
		return ownLength(p, m) + " (" + mm(m) + ")"
	}
	return mm(m)
}

// ownLength is length without the brackets.
func ownLength(p *model.Product, m float64) string {
	if p.Inches {
		return plain(inch.Out(m), 3, nearest) + " in"
	}
	return mm(m)
}

// needsMore tells whether a larger value is the better one for a finding; it decides which way a value is rounded.
func needsMore(f *rules.Finding) bool {
	l := f.Limit
	if l == nil || l.Kind == nil {
		return false
	}
	timed := l.TimeS != nil && *l.TimeS > 0
	if f.Unit == "min" && l.CompareTime != rules.Usual {
		return l.CompareTime == rules.AtLeast || l.CompareTime == rules.MoreThan
	}
	switch l.Kind.Name {
	case "hold":
		return timed || l.FromC != nil
	case "hold table", "lethality", "humidity", "freeze":
		return true
	case "stay above":
		return l.TimeS == nil
	case "by the end":
		return l.FromC != nil
	}
	return false
}

// quantity writes the value of a finding rounded to the safe side, or what is required (asked: not rounded at all).
func (h *Head) quantity(f *rules.Finding, v *float64, asked bool) string {
	if !finite(v) {
		return ""
	}
	r := up
	if needsMore(f) {
		r = down
	}
	switch f.Unit {
	case "min":
		lethal := f.Limit != nil && f.Limit.Kind == rules.Lethality
		tail := ""
		switch {
		case lethal:
		case *v >= 60 && !asked:
			tail = " (" + duration(*v*60, r) + ")"
		case *v > 0 && *v < 1:
			tail = " (" + plain(*v*60, 1, r) + " s)"
		}
		if asked {
			return plain(*v, 4, nearest) + " min" + tail
		}
		return decimal(*v, 1+btoi(*v > 0 && *v < 1), r) + " min" + tail
	case "°C":
		if asked {
			return h.stated(*v)
		}
		return h.temperature(*v, r)
	case "K":
		if asked {
			return h.first(plain(*v, 2, nearest)+" °C", plain(differenceF.Out(*v), 2, nearest)+" °F")
		}
		return h.difference(*v, r)
	case "log10":
		return plain(*v, 2, r) + " log10"
	case "1":
		if asked || *v == 0 || *v == 1 { // a row that is met at once has no time
			return plain(*v, 2, r)
		}
		return say("times of row", plain(*v, 2, r))
	}
	return strings.TrimSpace(plain(*v, 3, r) + " " + f.Unit)
}

// citation is what the user typed about where a limit comes from.
func citation(l *rules.Limit) string {
	var parts []string
	add := func(before, s string) {
		if s = strings.TrimSpace(s); s != "" {
			parts = append(parts, before+s)
		}
	}
	add("", l.Code)
	if strings.HasPrefix(strings.ToLower(strings.TrimSpace(l.Clause)), "clause") {
		add("", l.Clause)
	} else {
		add("clause ", l.Clause)
	}
	add("edition ", l.Edition)
	add("issued by ", l.IssuedBy)
	if strings.TrimSpace(l.Code) == "" {
		parts = append([]string{"no code named"}, parts...)
	}
	s := strings.Join(parts, ", ")
	switch by, on := strings.TrimSpace(l.ConfirmedBy), strings.TrimSpace(l.ConfirmedOn); {
	case by != "" && on != "":
		s += "; confirmed by " + by + " on " + on
	case by != "":
		s += "; confirmed by " + by
	case on != "":
		s += "; confirmed on " + on
	default:
		s += "; not confirmed"
	}
	return s
}
