package record

import (
	"strings"
	"unicode"
)

// A scale is a unit of temperature in which a logger writes.
type scale struct {
	name      string
	zero, per float64 // °C = (x − zero)/per
}

var scales = []*scale{{"°C", 0, 1}, {"°F", 32, 1.8}, {"K", 273.15, 1}}

func (s *scale) celsius(x float64) float64 { return (x - s.zero) / s.per }

// degrees turns what has become of the sign for degrees, through code pages and look-alikes, into the sign.
var degrees = strings.NewReplacer("Â°", "°", "â„ƒ", "°C", "℃", "°C", "℉", "°F", "º", "°", "˚", "°", "∞", "°", "¡", "°", "\ufffd", "°", "\u0081Ž", "°C", "\u0081‹", "°", "?", "°",
	"degrees", "°", "Degrees", "°", "deg.", "°", "Deg.", "°", "deg", "°", "Deg", "°", "DEG", "°", "Grad", "°", "grad", "°", "*", "°", " ", "", "\u00a0", "", "\u202f", "", "\u2009", "")

// scaleOf reads a unit of temperature, nil if it is none. A bare letter is one: C, F, K.
func scaleOf(word string) *scale {
	w := degrees.Replace(strings.TrimSpace(word))
	w = strings.Trim(strings.TrimSuffix(w, "."), "°")
	switch w {
	case "C", "oC", "0C", "Celsius", "celsius", "CELSIUS", "c", "Celcius":
		return scales[0]
	case "F", "oF", "0F", "Fahrenheit", "fahrenheit", "FAHRENHEIT", "f":
		return scales[1]
	case "K", "Kelvin", "kelvin", "KELVIN":
		return scales[2]
	}
	return nil
}

// A tick is a unit or a writing of times.
type tick struct {
	name  string
	s     float64  // of one
	kind  tickKind // what a column of it holds
	words []string // in small letters
}

type tickKind uint8

const (
	amount  tickKind = iota // numbers since the start
	hours                   // durations h:mm
	minutes                 // durations mm:ss
	spans                   // durations h:mm:ss
	ofDay                   // clocks
	serials                 // days as spreadsheets count them
	epoch                   // s since 1970
)

var ticks = []*tick{
	{"s", 1, amount, []string{"s", "sec", "secs", "second", "seconds", "sek", "sekunden", "segundos", "secondes", "secondi"}},
	{"min", 60, amount, []string{"min", "mins", "minute", "minutes", "minuten", "minutos", "minuti", "m"}},
	{"h", 3600, amount, []string{"h", "hr", "hrs", "hour", "hours", "std", "stunden", "horas", "heures", "ore"}},
	{"d", 86400, amount, []string{"d", "day", "days", "tage"}},
	{"ms", 0.001, amount, []string{"ms", "msec", "milliseconds"}},
	{"h:mm", 1, hours, []string{"h:mm", "hh:mm", "[h]:mm", "[hh]:mm", "h:min", "h:m"}},
	{"mm:ss", 1, minutes, []string{"mm:ss", "m:ss", "[mm]:ss", "[m]:ss", "min:s", "min:sec", "m:s"}},
	{"h:mm:ss", 1, spans, []string{"h:mm:ss", "hh:mm:ss", "[h]:mm:ss", "[hh]:mm:ss", "h:m:s", "h:min:s"}},
	{"clock", 1, ofDay, []string{"clock", "time of day"}},
	{"serial", 86400, serials, []string{"serial"}},
	{"unix", 1, epoch, []string{"unix", "unix s", "epoch", "epoch s"}},
}

// timeUnit reads a unit of times, nil if it is none.
func timeUnit(word string) *tick {
	word = strings.TrimSuffix(strings.ToLower(strings.TrimSpace(word)), ".")
	for _, t := range ticks {
		for _, w := range t.words {
			if w == word {
				return t
			}
		}
	}
	return nil
}

// A title is a heading in its parts.
type title struct {
	raw  string
	name string // without its unit
	unit string // in brackets, or behind a comma
}

// titleOf parts a heading: "Probe 1 (°F)", "Temp, °C (S/N 123)", "Core [°C]", "Temp/°C", "Temp °C".
func titleOf(raw string) title {
	t := title{raw: raw, name: raw}
	for _, signs := range []string{"()", "[]"} {
		from := strings.LastIndexByte(raw, signs[0])
		to := strings.LastIndexByte(raw, signs[1])
		if from >= 0 && to > from && isUnit(raw[from+1:to]) {
			t.unit = strings.TrimSpace(raw[from+1 : to])
			t.name = strings.TrimSpace(strings.TrimSpace(raw[:from]) + raw[to+1:])
			return t
		}
	}
	bare := raw // without brackets that hold no unit
	if i := strings.IndexByte(bare, '('); i > 0 {
		bare = strings.TrimSpace(bare[:i])
	}
	for _, sign := range []string{",", "/", "_", " "} {
		i := strings.LastIndex(bare, sign)
		if i <= 0 {
			continue
		}
		word := strings.TrimSpace(bare[i+len(sign):])
		sure := sign == "," || sign == "/" || strings.ContainsAny(degrees.Replace(word), "°")
		if sure && isUnit(word) || sign == "_" && (word == "C" || word == "F") {
			t.unit, t.name = word, strings.TrimSpace(bare[:i])
			return t
		}
	}
	if s := scaleOf(raw); s != nil && strings.Contains(degrees.Replace(raw), "°") { // a heading that is a unit alone
		t.unit = raw
	}
	return t
}

// isUnit tells whether a word is a unit that this reader knows, or one of something else that it must not take for a temperature.
func isUnit(word string) bool {
	return scaleOf(word) != nil || timeUnit(word) != nil || patternOf(word) != 0 || zoneIn(word) != ""
}

// An order of day, month and year; as a mask, several that are possible.
type order uint8

const (
	dayFirst order = 1 << iota
	monthFirst
	yearFirst
	anyOrder = dayFirst | monthFirst | yearFirst
)

// orders are the words of the column Date order.
var orders = []struct {
	word  string
	order order
}{{"day month year", dayFirst}, {"month day year", monthFirst}, {"year month day", yearFirst}}

func orderOf(word string) order {
	for _, o := range orders {
		if strings.EqualFold(strings.Join(strings.Fields(word), " "), o.word) {
			return o.order
		}
	}
	return 0
}

func (o order) String() string {
	for _, w := range orders {
		if w.order == o {
			return w.word
		}
	}
	return "several orders"
}

// patternOf reads a pattern of dates as a heading may give it, "dd/mm/yyyy hh:mm", "TT.MM.JJJJ", "jj/mm/aaaa"; 0 if it is none.
func patternOf(word string) order {
	seq := ""
	run := rune(0)
	for _, r := range strings.ToLower(word) + " " {
		if r == run {
			continue
		}
		if !unicode.IsLetter(r) && r != '/' && r != '.' && r != '-' && r != ' ' && r != ',' {
			if run = 0; r == ':' {
				break
			}
			return 0
		}
		if run = r; unicode.IsLetter(r) {
			seq += string(r)
		}
		if len(seq) == 3 {
			break
		}
	}
	switch seq {
	case "dmy", "tmj", "jma", "dma", "dmå", "gma":
		return dayFirst
	case "mdy":
		return monthFirst
	case "ymd", "jmt", "amj", "amd":
		return yearFirst
	}
	return 0
}
