package rules

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// holes are what the placeholders of a sentence stand for.
type holes map[string]string

// words are the sentences of the findings: whole ones, so that they can be translated. {who} is the deciding place, {from},
// {to}, {time}, {second} are the limit's own figures as typed; results are rounded to the side that is less favourable.
var words = map[string]string{
	"no limit judged":   "no limit judged",
	"did not apply":     "{limit} did not apply ({why})",
	"and more":          "and {count} more",
	"no places":         "The history has no place in the food to judge.",
	"no surface":        "The history has no place on the surface to judge.",
	"no medium":         "The temperature of the surroundings is not known during the whole of the stages, so it cannot be told.",
	"no point":          "The product has no point named {point}, so it cannot be told.",
	"stage lacking":     "The process has no stage {stage}, which this limit is about.",
	"stage lacking own": "The process has no stage {stage}, although this limit names this very product or its family, so it cannot be told.",
	"faulty":            "The limit cannot be judged as it stands: {fault}.",

	"within error met":         "; the calculation turns on the very limit: it is met by {by}, and the error of the calculation is {error}, so it cannot be told.",
	"within error missed":      "; the calculation turns on the very limit: it is missed by {by}, and the error of the calculation is {error}, so it cannot be told.",
	"within error":             "; the calculation turns on the very limit, and its error ({error}) decides, so it cannot be told.",
	"within error until":       " The step {step} ends there by its Until: set Until a little beyond the limit.",
	"until moves":              "; but the step {step} ends by its Until, and the error of the calculation ({error}) moves that by up to {by}, so it cannot be told.",
	"clock at the edge":        "; but it was never above {start}: its highest temperature is exactly the one at which the clock starts, so the limit may not apply and it cannot be told.",
	"clock within error":       "; but whether the clock starts turns on the very limit: its highest temperature is {top}, the clock starts at {start}, and the error of the calculation is {error}, so it cannot be told.",
	"clock elsewhere":          "; but another place was exactly at {start} and not above it, and counted from there the limit is not met, so it cannot be told.",
	"never above":              "Nothing was above {start}: the warmest place judged reached {top}, so the limit does not apply.",
	"bound":                    "; but from {at} on the temperatures are only bounds ({bound}), so it cannot be told.",
	"bound clock":              "; but from {at} on the temperatures are only bounds ({bound}), and the clock may run from another instant than they show, so it cannot be told.",
	"bound once":               "; but from {at} on the temperatures are only bounds ({bound}), and there may be more periods or fewer than they show, so it cannot be told.",
	"within error met read":    "; the record turns on the very limit: it is met by {by}, and the readings may be off by {error}, so it cannot be told.",
	"within error missed read": "; the record turns on the very limit: it is missed by {by}, and the readings may be off by {error}, so it cannot be told.",
	"within error read":        "; the record turns on the very limit, and by how much the readings may be off ({error}) decides, so it cannot be told.",
	"clock within error read":  "; but whether the clock starts turns on the very limit: its highest reading is {top}, the clock starts at {start}, and the readings may be off by {error}, so it cannot be told.",
	"tube readings":            "; but between two readings, {long} apart at {from}, it may have run otherwise than straight, and that decides, so it cannot be told.",
	"tube gap":                 "; but nothing was recorded from {from} to {until} ({long}), where it may have been anywhere between {low} and {high}, and that decides, so it cannot be told.",
	"tube gap bare":            "; but nothing was recorded from {from} to {until} ({long}), neither of it nor of its surroundings, where nothing bounds it, and that decides, so it cannot be told.",
	"tube gap no top":          "; but nothing was recorded from {from} to {until} ({long}), where it was no colder than {low} and may have risen, for how hot other places were when the record began is not known, and that decides, so it cannot be told.",
	"tube gap no bottom":       "; but nothing was recorded from {from} to {until} ({long}), where it was no warmer than {high} and may have fallen, for how cold other places were when the record began is not known, and that decides, so it cannot be told.",
	"tube gap before":          "; but nothing was recorded before {until} ({long}), and that decides, so it cannot be told.",
	"tube gap after":           "; but nothing was recorded after {from} ({long}), and that decides, so it cannot be told.",
	"tube gaps":                "; but nothing was recorded in {count} gaps, {long} in all, the first from {from} to {until}, and together they decide, so it cannot be told.",
	"tube doubted":             "; but the reading of {value} at {when} is doubtful, and without it the verdict is another one, so it cannot be told.",
	"tube doubted all":         "; but {count} readings are doubtful, the first of {value} at {when}, and without them the verdict is another one, so it cannot be told.",
	"tube place":               "; but only the {place} was measured, and other places may be less favourable, so it cannot be told.",
	"note one place":           "Only the {place} was measured; the other places of the food are not judged.",
	"note gap":                 "Nothing was recorded from {from} to {until}; wherever it was then, the verdict is the same.",
	"not measured":             "The record is of the {place}; the {where} was not measured, so it cannot be told.",
	"no humidity read":         "The record is of the temperature of the {place}; the humidity was not measured, so it cannot be told.",
	"no medium read":           "The record is of the {place}; the surroundings were not recorded beside it, so it cannot be told.",
	"stage unread":             "The record covers no part of the stage {stage}, which this limit is about.",
	"stage unread own":         "The record covers no part of the stage {stage}, which this limit is about, so it cannot be told.",
	"sparse":                   "; but the readings there are {gap} apart and cannot show {time}, so it cannot be told.",

	"hold above":        "{who} stayed at or above {from} for {value}, and {time} is needed.",
	"hold below":        "{who} stayed at or below {to} for {value}, and {time} is needed.",
	"hold again":        "{who} was there for more than one period ({count}), and the limit allows one only; the first lasted {value}, and {time} is needed.",
	"reached above":     "{who} reached {value}, and {level} must be reached.",
	"reached below":     "{who} came down to {value}, and {level} must be reached.",
	"table met":         "{who} met the row {row} of the table {table}: it stayed there for {value}, and {need} is needed.",
	"table missed":      "{who} met no row of the table {table}; the nearest row is {row}, which it kept for {value}, and {need} is needed.",
	"table instant":     "{who} reached {row}, a row of the table {table} that is met at once.",
	"lethality time":    "{who} earned a lethality of {value} min equivalent at {ref}, and {time} is needed.",
	"lethality logs":    "{who} earned a lethality of {value} log reductions, and {logs} are needed.",
	"lethality endless": "{who} earned a lethality that is no finite number: z or the reference temperature is out of all proportion, so it cannot be told.",
	"cool closed":       "{who} took {value} from {start} to {to}, and {time} is allowed.",
	"cool at once":      "{who} was at or below {to} when the clock started.",
	"cool late":         "{who} was {still} above {to} after {value} from {start}, and {time} is allowed.",
	"cool open":         "{who} was {still} above {to} when the history ended, {value} from {start}, and {time} is allowed, so it cannot be told.",
	"cool cut":          "{who} was {still} above {to} when the next heating began, {value} from {start}, and {time} is allowed, so it cannot be told.",
	"cool stage":        "{who} was at {left} when the stage {stage} ended, and was not down to {to} for good later either.",
	"cool stage later":  "{who} was still at {left} when the stage {stage} ended; it was down to {to} only {value} from {start}, after that stage. If the limit lets the later stages count, name them too in Stage, as {wider}.",
	"cool stage again":  "{who} was at {left} when the stage {stage} ended, but rose above {to} again and was down to it for good only {value} from {start}, after that stage. If the limit lets the later stages count, name them too in Stage, as {wider}.",
	"cool not fallen":   "{who} had not yet fallen to {start} when the history ended, so the clock never started and it cannot be told.",
	"cool nowhere":      "No place was above the temperature at which the clock starts, so the limit does not apply.",
	"cool never fell":   "The food was above {start} (up to {top}) and never fell to it, so the clock did not start and the limit does not apply.",
	"uncooled order":    "The food was above {start} (up to {top}, at the end {end}), but the stage {stage} does not come after that, so it cannot be told. Are the steps in order? If that stage chills what is not yet cooked, call it store or hold cold.",
	"uncooled short":    "The food was above {start} (up to {top}) and was warmed again after the stage {stage} before it fell to it, so the clock never started and it cannot be told.",
	"uncooled other":    "The process has no stage {stage}, which this limit is about, but it chills food that was above {start} (up to {top}) in its stage {other}, so it cannot be told. Call that stage {stage}, or let the limit name it.",
	"uncooled":          "the food was above {start} (up to {top}), is at {end} at the end, and no stage chills it",
	"heat closed":       "{who} took {value} to {to}, and {time} is allowed.",
	"heat late":         "{who} had not reached {to} after {value}, and {time} is allowed.",
	"heat open":         "{who} had not reached {to} when the history ended after {value}, and {time} is allowed, so it cannot be told.",
	"heat stage":        "{who} was at {left} when the stage {stage} ended, and had not reached {to} later either.",
	"heat stage later":  "{who} was only at {left} when the stage {stage} ended; it reached {to} after {value}, later than that stage. If the limit lets the later stages count, name them too in Stage, as {wider}.",
	"heat nowhere":      "No place rose to the temperature at which the clock starts, so the limit does not apply.",
	"band":              "{who} was between {from} and {to} for {value}{in}, and {time} is allowed.",
	"band again":        "{who} was between {from} and {to} more than once ({count} periods){in}, and the limit allows one only.",
	"stay above":        "{who} fell to {value}, and {level} must be kept.",
	"stay below":        "{who} rose to {value}, and {level} must be kept.",
	"stay above began":  "{who} was at {value} as the stage began and never colder, and {level} must be kept.",
	"stay below began":  "{who} was at {value} as the stage began and never warmer, and {level} must be kept.",
	"out above":         "{who} was below {bare} for {value}{in}, and {time} is allowed.",
	"out below":         "{who} was above {bare} for {value}{in}, and {time} is allowed.",
	"out again":         "{who} was beyond {bare} more than once ({count} periods){in}, and the limit allows one only.",
	"outside":           "{who} was between {from} and {to} for {value}{in}, and no time there is allowed.",
	"outside touch":     "{who} touched {from} or {to}, and the limit does not allow that.",
	"outside never":     "{who} was never between {from} and {to}{in}.",
	"end above":         "{who} was at {value} at {when}, and {level} is needed.",
	"end below":         "{who} was at {value} at {when}, and {level} is needed.",
	"end open":          "The history ended before {when}, so it cannot be told.",
	"end nowhere":       "The clock of this limit never started, so the limit does not apply.",
	"delay":             "{value} passed from the end of {first} to the start of {second}, and {time} is allowed.",
	"delay late":        "The stage {second} had not started {value} after the end of {first}, and {time} is allowed.",
	"delay open":        "The stage {second} had not started when the history ended, {value} after the end of {first}, and {time} is allowed, so it cannot be told.",
	"delay order":       "The stage {second} comes only before the stage {first}, so it cannot be told. Are the steps in order?",
	"delay order cold":  "The stage {second} comes only before the stage {first}, so it cannot be told. Are the steps in order? If that stage chills what is not yet cooked, call it store or hold cold.",
	"duration least":    "The {stage} lasted {value}, and {time} is needed.",
	"duration most":     "The {stage} lasted {value}, and {time} is allowed.",
	"falling":           "{who} rose by {value}, and {allowance} is allowed.",
	"freeze":            "{who} was at or below {to} for {value} after {time} at or below {from}, and {second} is needed.",
	"freeze first":      "{who} was never at or below {from} for {time}, so the second phase did not begin.",
	"freeze at once":    "{who} was at or below {to} for {value} after it had come to {from}, and {second} is needed.",
	"freeze never":      "{who} never came to {from}, so the second phase did not begin.",
	"humidity":          "The stated relative humidity met {humidity} for {value}, and {need} is needed.",
	"humidity open":     "The relative humidity is not stated for the whole of the stages, so it cannot be told.",
	"stated blank":      "Only you can answer this, and the answer is blank, so it cannot be told.",
	"stated yes":        "Answered: {answer}.",
	"stated no":         "Answered: {answer}.",
	"stated text":       "Answered: {answer}; only yes, yes with a comma and a remark that takes nothing back, or no decides, so it cannot be told.",

	"who every":         "The least favourable place ({place})",
	"who slow":          "The slowest place ({place})",
	"who surface slow":  "The slowest place of the surface ({place})",
	"who surface every": "The least favourable place of the surface ({place})",

	"who named":  "The {place}",
	"who medium": "The medium",

	"carry-over":             "{met} only through the rise after the {stage}: {slow} left the {stage} at {left} and rose to {rose}",
	"carry-over moist":       "; a moist surface loses heat while standing, so the true rise is smaller",
	"slow place":             "the slowest place ({place})",
	"slow place read":        "the {place}",
	"carried":                "Met",
	"would be carried":       "It would be met",
	"carry-over not counted": "That is not counted: it was calculated without the water that moist food loses as it stands open in air, which cools it. Type wet or dry in the column Surface of that step, or the cover, for it to be counted",
	"carry-over left":        "As the {stage} ended, {slow} was at {left}, and what it gains after that is not counted.",
	"carry-over kept":        "{met} only with the time after the {stage}: {slow} left the {stage} at {left}, and the {stage} alone is not enough",
	"carry-over kept moist":  "; a moist surface loses heat while standing, so the true food cools faster",

	"note again":        "Rose above {temp} again at {when}; the clock does not start anew.",
	"note at the edge":  "The place lies at the edge of those that ever were above {start}: it only just was, and for a place beyond it no clock started.",
	"note edge":         "The place lies half a probe's breadth (0.6 mm) within the edge of those that ever were above {start}; at the edge itself, where it only just was, it is {value}. The verdict and the margin are those of the edge.",
	"note margin place": "The margin in temperature is that of another place ({place}).",
	"drift":             "{met}; but that rests on what the plan leaves blank of Radiating temperature, Film coefficient, Surface and Relative humidity in this step and those before: with walls as warm or as cold as the air, films of air a quarter higher, a high film of water and moisture as unfavourable as it may be, {fast}. So it cannot be told.",
	"boils":             "{met}; but that rests on food hotter than {most}, and food that holds water does not get so hot inside while it boils off. Counted to there at most: {less}. So it cannot be told.",
	"note boils":        "Temperatures above {most} are counted as that in the room: food that holds water does not get hotter inside while it boils off.",
	"drift unsolved":    "{met}; but that rests on what the plan leaves blank of Radiating temperature, Film coefficient, Surface and Relative humidity, and with that taken unfavourably it cannot be calculated: {why}. So it cannot be told.",
	"note margin drift": "The margin counts what the plan leaves blank as unfavourably as it may be: walls as warm or as cold as the air, films of air a quarter higher, films of water high, and moisture.",
	"note margin run":   "The margin in temperature is that of another of the runs.",
	"note heatings":     "The process has {count} heatings separated by chilling; each is judged on its own, and the best counts.",
	"note separated":    "The time is the sum of periods with chilling in between.",
	"note early":        "{share} % was earned on a slow way up or barely above the floor.",
}

// say fills a sentence.
func say(key string, h holes) string {
	s := words[key]
	for k, v := range h {
		s = strings.ReplaceAll(s, "{"+k+"}", v)
	}
	return s
}

// round writes x with the given decimals, rounded down (up < 0) or up (up > 0), without trailing zeros.
func round(x float64, decimals int, up int) string {
	f := math.Pow(10, float64(decimals))
	y := x * f
	// what differs from a round figure by less than the arithmetic can hold is that figure
	if r := math.Round(y); math.Abs(r-y) < 1e-6 {
		y = r
	} else if up > 0 {
		y = math.Ceil(y)
	} else {
		y = math.Floor(y)
	}
	y /= f
	if y == 0 {
		y = 0 // no minus zero
	}
	return strconv.FormatFloat(y, 'f', -1, 64)
}

// lasting writes a time in s as a person would, rounded as asked: 12.4 min, 8.5 s.
func lasting(s float64, up int) string {
	if math.Abs(s) < 60 {
		return round(s, 1, up) + " s"
	}
	return round(s/60, 1, up) + " min"
}

// inF tells whether the limit's own temperatures, or those of its table, were typed in °F; its sentences then speak °F.
func (l *Limit) inF() bool {
	for _, column := range []string{"From", "To", "Reference temperature", "Allowance", "Clock starts"} {
		if t := l.AsTyped(column); strings.Contains(t, "°") {
			return strings.HasSuffix(t, "F")
		}
	}
	return l.Table != nil && len(l.Table.Rows) > 0 && strings.Contains(l.Table.Rows[0].Typed, "°F")
}

// degrees writes a temperature (°C) in the unit in which the limit was typed, rounded as asked.
func (l *Limit) degrees(c float64, up int) string {
	if l.inF() {
		return round(c*1.8+32, 1, up) + " °F"
	}
	return round(c, 1, up) + " °C"
}

// differenceUp writes a difference (K) in the unit in which the limit was typed, rounded up to two significant figures.
func (l *Limit) differenceUp(k float64) string {
	unit := " °C"
	if l.inF() {
		k, unit = k*1.8, " °F"
	}
	if math.Abs(k) < 1e-6 {
		return "0" + unit
	}
	d := max(0, 1-int(math.Floor(math.Log10(math.Abs(k)))))
	return round(k, d, 1) + unit
}

// decimalsOf is how many decimals a lethality is written with, here and in the documents.
func decimalsOf(v float64, unit string) int {
	if unit == "min" && v >= 1 {
		return 1
	}
	return 2
}

// clockTime writes an instant from the start of the chain: 3 h 05 min.
func clockTime(s float64) string {
	m := int(math.Floor(s/60 + 1e-9))
	if m < 60 {
		return fmt.Sprintf("%d min", m)
	}
	return fmt.Sprintf("%d h %02d min", m/60, m%60)
}

// figure is a number of the limit as typed, or as the program holds it.
func (l *Limit) figure(column, held string) string {
	if t := l.AsTyped(column); t != "" {
		return t
	}
	return held
}

// AsTyped is a number of the limit as it was typed, in the form that it takes in a sentence: the form of a clock in brackets, a difference
// without the word. "" where nothing was typed.
func (l *Limit) AsTyped(column string) string {
	t := strings.TrimSuffix(strings.TrimSpace(l.Typed[column]), " difference")
	if at := strings.LastIndex(t, " "); at > 0 && strings.Contains(t[at:], ":") && !strings.ContainsAny(t[at:], "0123456789") {
		return t[:at] + " (" + t[at+1:] + ")"
	}
	return t
}

// exactly writes a limit's own number without rounding.
func exactly(x float64, unit string) string {
	return strconv.FormatFloat(math.Round(x*1e6)/1e6, 'f', -1, 64) + " " + unit
}

// own are the limit's own figures, for every sentence.
func (l *Limit) own() holes {
	h := holes{}
	put := func(hole, column string, x *float64, scale float64, unit string) {
		if x != nil {
			h[hole] = l.figure(column, exactly(*x/scale, unit))
		}
	}
	put("from", "From", l.FromC, 1, "°C")
	put("to", "To", l.ToC, 1, "°C")
	put("time", "Time", l.TimeS, 60, "min")
	put("second", "Second time", l.SecondS, 60, "min")
	put("ref", "Reference temperature", l.ReferenceC, 1, "°C")
	put("allowance", "Allowance", l.AllowanceK, 1, "K")
	put("humidity", "Humidity", l.HumidityPc, 1, "%")
	put("logs", "Log reductions", l.Logs, 1, "")
	h["logs"] = strings.TrimSpace(h["logs"])
	h["bare"] = h["to"]
	h["in"] = l.inStages()
	if l.FromC != nil {
		h["bare"] = h["from"]
	}
	h["level"] = l.operator(l.FromC == nil) + h["bare"]
	switch l.CompareTime {
	case MoreThan:
		h["time"] = "more than " + h["time"]
	case LessThan:
		h["time"] = "less than " + h["time"]
	}
	return h
}

// inStages names the stages of the limit: " in hold hot, hold cold and store"; "" for the whole chain.
func (l *Limit) inStages() string {
	s := ""
	for i, st := range l.Stages {
		switch {
		case i == 0:
			s = " in "
		case i == len(l.Stages)-1:
			s += " and "
		default:
			s += ", "
		}
		s += st.Name
	}
	return s
}

// operator words how the limit's temperature is compared, given its side.
func (l *Limit) operator(cold bool) string {
	switch {
	case cold && l.Compare == LessThan:
		return "less than "
	case cold:
		return "at most "
	case l.Compare == MoreThan:
		return "more than "
	}
	return "at least "
}

// sentence words a finding about places.
func (v *view) sentence(f *Finding, o outcome, tail string) string {
	h := v.l.own()
	for k, x := range o.holes {
		h[k] = x
	}
	switch name := strings.TrimSpace(v.l.Where.Name); {
	case same(name, "medium"):
		h["who"] = say("who medium", nil)
	case name != "" && !same(name, "every point") && !same(name, "surface"):
		h["who"] = say("who named", holes{"place": f.PlaceName})
	case same(name, "surface") && f.PlaceName != "surface":
		h["who"] = say(map[bool]string{true: "who surface slow", false: "who surface every"}[o.slow], holes{"place": f.PlaceName})
	case same(name, "surface"):
		h["who"] = say("who named", holes{"place": f.PlaceName})
	case o.slow:
		h["who"] = say("who slow", holes{"place": f.PlaceName})
	default:
		h["who"] = say("who every", holes{"place": f.PlaceName})
	}
	s := say(o.word, h)
	if tail != "" {
		s = strings.TrimSuffix(strings.TrimSuffix(s, "."), ", so it cannot be told") + tail
	}
	return s
}

// startWords says from what a clock ran.
func (l *Limit) startWords() string {
	switch c := l.Clock; {
	case c.Start != nil:
		return "the start of " + c.Start.Name
	case c.End != nil:
		return "the end of " + c.End.Name
	case c.AtC != nil:
		return strings.TrimPrefix(l.figure("Clock starts", exactly(*c.AtC, "°C")), "crossing of ")
	case l.FromC != nil:
		return l.figure("From", exactly(*l.FromC, "°C"))
	}
	return "the start"
}
