package record

import (
	"bytes"
	"math"
	"strconv"
)

// A reading is a number as it is typed.
type reading struct {
	x      float64
	sign   byte  // the decimal sign that it shows: '.', ',' or 0
	places int8  // digits behind it
	lead   int64 // what stands before it, without its sign
	whole  int64 // all digits as one number, with its sign: 69,57 is 6957
	exact  bool  // whole holds all digits
	bad    flaw
}

// A flaw is why a text is no number.
type flaw uint8

const (
	fine flaw = iota
	noNumber
	bothSigns // 1.234,5
	compared  // >75
	endless   // 1e400
)

var pow10 = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18}

// readNumber reads the number that a text starts with, and gives what stands behind it: a unit perhaps. Its digits are read here, for
// there may be millions; what has more than 15 of them, or an exponent, goes the slow way.
func readNumber(b []byte) (v reading, rest []byte) {
	b = plainBlanks(b)
	from := 0
	minus := len(b) > 0 && b[0] == '-'
	if minus || len(b) > 0 && b[0] == '+' {
		from++
		for from < len(b) && b[from] == ' ' {
			from++
		}
	}
	end, count := v.digits(b, from)
	if v.bad == fine && count == 0 {
		v.bad = noNumber
		if len(b) > 0 && (b[0] == '<' || b[0] == '>' || b[0] == '~' || bytes.HasPrefix(b, []byte("≤")) || bytes.HasPrefix(b, []byte("≥")) || bytes.HasPrefix(b, []byte("≈"))) {
			v.bad = compared
		}
	}
	if v.bad != fine {
		return v, nil
	}
	if e := exponent(b[end:]); e > 0 {
		end, v.exact = end+e, false
	}
	if v.exact && count <= 15 {
		v.x = float64(v.whole) / pow10[v.places] // both are exact, so the quotient is rounded once
	} else {
		v.slow(b[from:end])
	}
	if minus {
		v.x, v.whole = -v.x, -v.whole
	}
	for end < len(b) && b[end] == ' ' {
		end++
	}
	return v, b[end:]
}

// digits reads digits with a decimal sign among them, and gives the place behind them and their number.
func (v *reading) digits(b []byte, i int) (end, count int) {
	v.exact = true
	for ; i < len(b); i++ {
		switch d := b[i]; {
		case d >= '0' && d <= '9':
			if count++; count > 18 {
				v.exact = false
				continue
			}
			v.whole = 10*v.whole + int64(d-'0')
			if v.sign != 0 {
				v.places++
			} else {
				v.lead = v.whole
			}
		case d != '.' && d != ',':
			return i, count
		case v.sign == 0:
			v.sign = d
		case v.sign == d:
			v.bad = noNumber
			return i, count
		default:
			v.bad = bothSigns
			return i, count
		}
	}
	return i, count
}

// exponent is the length of the exponent that a text starts with, e-2 or E37; 0 if it starts with none.
func exponent(b []byte) int {
	if len(b) < 2 || b[0] != 'e' && b[0] != 'E' {
		return 0
	}
	i := 1
	if b[1] == '-' || b[1] == '+' {
		i++
	}
	digits := i
	for i < len(b) && b[i] >= '0' && b[i] <= '9' {
		i++
	}
	if i == digits {
		return 0
	}
	return i
}

// slow reads a number of many digits or with an exponent.
func (v *reading) slow(b []byte) {
	s := []byte(string(b))
	for i := range s {
		if s[i] == ',' {
			s[i] = '.'
		}
	}
	x, err := strconv.ParseFloat(string(s), 64)
	v.x, v.exact = x, false
	if err != nil || math.IsInf(x, 0) || math.IsNaN(x) {
		v.bad = endless
	}
}
