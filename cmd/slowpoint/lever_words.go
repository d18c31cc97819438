package main

import (
	"math"
	"strconv"
	"strings"

	"slowpoint/rules"
)

// fixedWords says of limits that nothing tried bears on how they stand; "" for none.
func fixedWords(fixed []*rules.Finding) string {
	var order []string
	names := map[string][]string{}
	for _, f := range fixed {
		why := "cannot be judged whatever of this is changed"
		switch {
		case f.Verdict == rules.NotMet && f.Limit.Kind == rules.Stated:
			why = "stays not met as long as its answer stands"
		case f.Verdict == rules.NotMet:
			why = "stays not met whatever of this is changed"
		case f.Limit.Kind == rules.Stated && f.Limit.Unreadable == "":
			why = "cannot be judged until it is answered"
		case len(f.Limit.Faults()) > 0:
			why = "cannot be judged until its row is mended"
		}
		if names[why] == nil {
			order = append(order, why)
		}
		names[why] = append(names[why], f.Limit.Name)
	}
	var s []string
	for _, why := range order {
		many := names[why]
		if len(many) > 1 {
			why = strings.NewReplacer("it is answered", "they are answered", "its row is", "their rows are", "stays", "stay", "its answer stands", "their answers stand").Replace(why)
		}
		s = append(s, named(many)+" "+why)
	}
	return strings.Join(s, "; ")
}

// named names limits, up to three of them.
func named(names []string) string {
	const most = 3
	var s []string
	for _, n := range names[:min(len(names), most)] {
		s = append(s, "\""+n+"\"")
	}
	if more := len(names) - most; more > 0 {
		s = append(s, count(more, "further limit"))
	}
	if len(s) == 1 {
		return s[0]
	}
	return strings.Join(s[:len(s)-1], ", ") + " and " + s[len(s)-1]
}

// leverWords puts together what was found; fixed is what stays open whatever is changed.
func leverWords(every, some, none []string, fixed string) string {
	const unchanged = "With everything else unchanged, "
	limits := "limit"
	if fixed != "" {
		limits, fixed = "other limit", "; "+fixed
	}
	var s []string
	switch {
	case len(every) == 1:
		s = append(s, unchanged+every[0]+" would meet every "+limits+" in the model"+fixed+".")
	case len(every) > 1:
		s = append(s, unchanged+"each of these alone would meet every "+limits+" in the model"+fixed+": "+strings.Join(every, "; ")+".")
	}
	but := ", but not every " + limits
	switch {
	case len(some) > 0 && len(s) == 0:
		s = append(s, unchanged+strings.Join(some, but+"; ")+but+fixed+".")
	case len(some) > 0:
		s = append(s, "Alone, "+strings.Join(some, but+"; ")+but+".")
	}
	switch {
	case len(none) == 0:
	case len(s) == 0:
		s = append(s, unchanged+"nothing that was tried meets the "+limits+"s in the model"+fixed+": "+strings.Join(none, ", ")+". Look at times, temperatures and air together.")
	default:
		s = append(s, "Not enough alone: "+strings.Join(none, ", ")+".")
	}
	if len(s) == 0 && fixed != "" {
		return "No single change of a size, a heating or a chilling helps: " + strings.TrimPrefix(fixed, "; ") + "."
	}
	return strings.Join(s, " ")
}

// quoted names the first of some limits and counts the others.
func quoted(names []string) string {
	if len(names) == 1 {
		return "\"" + names[0] + "\""
	}
	return "\"" + names[0] + "\" and " + count(len(names)-1, "further limit")
}

// degrees writes a temperature, °C, in the user's own scale, with the other in brackets if wanted.
func (r *runner) degrees(c float64, both bool) string {
	own, other := trimmed(c)+" °C", trimmed(degreeF.Out(c))+" °F"
	if r.head.Fahrenheit {
		own, other = other, own
	}
	if both {
		return own + " (" + other + ")"
	}
	return own
}

// trimmed writes a number with at most two decimals, and a true minus sign.
func trimmed(v float64) string {
	return strings.Replace(strconv.FormatFloat(math.Round(v*100)/100+0, 'f', -1, 64), "-", "−", 1)
}
