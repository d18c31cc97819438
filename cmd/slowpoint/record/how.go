package record

import "strings"

// signNames are the signs between cells in words.
var signNames = map[byte]string{'\t': "tabs", ';': "semicolons", '|': "bars", ',': "commas", ' ': "blanks"}

// how says how a file was read, as far as it was decided and not plain from the file: "cells divided by semicolons, decimal comma, dates as
// day month year".
func (t *taker) how() string {
	var out []string
	if f, isText := t.r.src.(*text); isText {
		out = append(out, "cells divided by "+signNames[f.sign])
		if f.wide {
			out = append(out, "UTF-16")
		}
	}
	switch t.decimal {
	case '.':
		out = append(out, "decimal point")
	case ',':
		out = append(out, "decimal comma")
	}
	u := t.lay.tick
	switch {
	case t.ordered != 0:
		out = append(out, "dates as "+t.ordered.String())
	case t.form == clockStamp && t.r.clock:
		out = append(out, "times of day")
	case t.form == clockStamp && t.short:
		out = append(out, "times in mm:ss")
	case t.form == clockStamp && u == nil:
		out = append(out, "times in h:mm:ss")
	case u != nil && u.kind == serials:
		out = append(out, "times as serial numbers of a spreadsheet")
	case u != nil && u.kind == epoch:
		out = append(out, "times in s since 1970")
	case u != nil:
		out = append(out, "times in "+u.name)
	}
	switch {
	case t.spread:
		out = append(out, "each clock with its own offset from UTC")
	case t.r.utc:
		out = append(out, "clocks "+strings.Replace(offsetName(int32(t.r.east)), "UTC+00:00", "UTC", 1))
	}
	return strings.Join(out, ", ")
}
