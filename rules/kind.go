package rules

import "strings"

// Kind is a kind of limit: the word of the column Rule. Adding one takes its file, its line in Kinds and its test.
type Kind struct {
	Name, Help string
	Needs      [][]string // each entry: columns of which one must be filled ("From" or "To")
	May        []string   // further columns that may be filled, besides those of Always
	Unit       string     // of value and required; "" where it depends
	judge      func(v *view) Finding
}

// Always lists the columns of the sheet Limits that every kind may fill. All others a kind must name in Needs or May.
var Always = []string{"Limit", "Rule", "Applies to", "Group", "Level", "CCP", "Hazard", "Status", "Code", "Clause", "Edition",
	"Issued by", "Confirmed by", "Confirmed on", "Note"}

// Kinds lists the kinds of limit.
var Kinds = []*Kind{Hold, HoldTable, Lethality, CoolWithin, HeatWithin, Band, StayAbove, StayBelow, Outside, ByTheEnd,
	Delay, Duration, Falling, FreezeHold, Humidity, Stated}

// Named finds a kind by its word; nil if there is none.
func Named(word string) *Kind {
	for _, k := range Kinds {
		if same(k.Name, word) {
			return k
		}
	}
	return nil
}

// Uses tells whether a column (heading without unit) may be filled for the kind.
func (k *Kind) Uses(column string) bool {
	for _, list := range append([][]string{Always, k.May}, k.Needs...) {
		for _, c := range list {
			if same(c, column) {
				return true
			}
		}
	}
	return false
}

// Fault is something wrong with a limit as a whole that Needs and May cannot say: the column, what is wrong, how to mend it.
type Fault struct{ Column, Msg, Hint string }

// Faults tells what keeps a limit from being judged, given that the columns of Needs are filled. The reader reports them at
// their cells; Judge answers "cannot tell" to a limit that has one.
func (l *Limit) Faults() []Fault {
	var fs []Fault
	add := func(column, msg, hint string) { fs = append(fs, Fault{column, msg, hint}) }
	if l.Unreadable != "" {
		add("", "its row has errors: "+l.Unreadable, "mend the row")
		return fs
	}
	k := l.Kind
	one := k == Hold || k == StayAbove || k == StayBelow || k == ByTheEnd
	between := k == Band || k == Outside
	switch {
	case one && l.FromC != nil && l.ToC != nil:
		add("To", "From and To are both filled, and "+k.Name+" takes one of them", "clear one, or write two limits")
	case between && l.FromC != nil && l.ToC != nil && !(*l.FromC < *l.ToC):
		add("To", "To must be warmer than From: the limit is about the time between the two", "swap From and To")
	case k == CoolWithin && l.FromC != nil && l.ToC != nil && !(*l.ToC < *l.FromC):
		add("To", "To must be colder than From: the food cools from From down to To", "swap From and To")
	case k == HeatWithin && l.FromC != nil && l.ToC != nil && !(*l.ToC > *l.FromC):
		add("To", "To must be warmer than From: the food is heated from From up to To", "swap From and To")
	}
	if c := l.Clock.AtC; c != nil && l.ToC != nil && l.FromC == nil {
		switch { // By the end may well ask that the food has not risen again since
		case k == CoolWithin && !(*l.ToC < *c):
			add("Clock starts", "the temperature that is crossed must be warmer than To: the food cools from there down to To", "look at its unit, °C or °F")
		case k == HeatWithin && !(*l.ToC > *c):
			add("Clock starts", "the temperature that is crossed must be colder than To: the food is heated from there up to To", "look at its unit, °C or °F")
		}
	}
	l.emptyFaults(add)
	l.operatorFaults(add)
	if k == CoolWithin || k == HeatWithin || k == ByTheEnd {
		l.clockFaults(add)
	}
	if k == Lethality && l.TimeS != nil && (l.DS != nil || l.Logs != nil) {
		add("D", "Time and D with Log reductions are two ways to set one target", "clear Time, or clear D and Log reductions")
	}
	if k == Delay && (len(l.Stages) != 1 || l.Then == nil) {
		add("Stage", "delay needs a pair of stages", "write the pair as cook > cool")
	}
	if k == HoldTable && l.Table != nil && len(l.Table.Rows) == 0 {
		add("Table", "the table has no rows", "add its rows to the sheet Tables")
	}
	return fs
}

// emptyFaults finds numbers that would let anything meet the limit.
func (l *Limit) emptyFaults(add func(column, msg, hint string)) {
	nought := func(x *float64) bool { return x != nil && *x <= 0 }
	k := l.Kind
	if k == Lethality {
		for _, n := range []struct {
			column string
			x      *float64
		}{{"Time", l.TimeS}, {"D", l.DS}, {"Log reductions", l.Logs}} {
			if nought(n.x) {
				add(n.column, "a lethality of nothing is met by any food", "type what the code asks for")
			}
		}
	}
	if k == Duration && nought(l.TimeS) && (l.CompareTime == AtLeast || l.CompareTime == MoreThan) {
		add("Time", "any stage lasts that long", "type the time that the code asks for")
	}
	if k == Humidity {
		switch {
		case nought(l.HumidityPc):
			add("Humidity", "any air is that humid", "type the relative humidity that the code asks for")
		case (l.TimeS == nil || nought(l.TimeS)) && (l.SharePc == nil || nought(l.SharePc)):
			column := "Time"
			if l.SharePc != nil {
				column = "Share of stage"
			}
			add(column, "no time at all is asked for, so that any air would do", "type the share of the stage, or the time, that the code asks for")
		}
	}
}

// operatorFaults checks that the operators point the way the kind does.
func (l *Limit) operatorFaults(add func(column, msg, hint string)) {
	k := l.Kind
	needed := k == Hold || k == HoldTable || k == Lethality || k == FreezeHold || k == Humidity
	allowed := k == CoolWithin || k == HeatWithin || k == Band || k == StayAbove || k == StayBelow || k == Delay
	up, down := l.CompareTime == AtLeast || l.CompareTime == MoreThan, l.CompareTime == AtMost || l.CompareTime == LessThan
	if needed && down || allowed && up {
		add("Compare time", "the operator points the other way than "+k.Name+" does",
			"write "+map[bool]string{true: "at least or more than", false: "at most or less than"}[needed]+", or leave it blank")
	}
	warm := (k == Hold || k == ByTheEnd) && l.ToC == nil || k == StayAbove || k == HoldTable || k == HeatWithin || k == Humidity
	cold := (k == Hold || k == ByTheEnd) && l.ToC != nil || k == StayBelow || k == CoolWithin || k == FreezeHold
	up, down = l.Compare == AtLeast || l.Compare == MoreThan, l.Compare == AtMost || l.Compare == LessThan
	if warm && down || cold && up {
		add("Compare", "the operator points the other way than "+k.Name+" does",
			"write "+map[bool]string{true: "at least or more than", false: "at most or less than"}[warm]+", or leave it blank")
	}
}

// clockFaults checks Clock starts against From and Time.
func (l *Limit) clockFaults(add func(column, msg, hint string)) {
	c := l.Clock
	event := c.Start != nil || c.End != nil
	if set := event || c.Crossing || c.AtC != nil; l.Kind == ByTheEnd && set != (l.TimeS != nil) {
		add("Clock starts", "by the end takes Time and Clock starts together, or neither", "fill both, or clear both for the end of the stage")
	}
	switch {
	case l.Kind == ByTheEnd && c.Crossing && c.AtC == nil:
		add("Clock starts", "the crossing needs its temperature here, because From and To say what must be reached", "write crossing of 60 °C")
	case c.Crossing && c.AtC == nil && l.FromC == nil:
		add("From", "a clock that starts at the crossing needs From, the temperature that is crossed", "fill From, or write crossing of 60 °C")
	case event && l.FromC != nil && l.Kind != ByTheEnd:
		add("From", "the clock starts with a stage, so From is not used", "clear From, or write crossing in Clock starts")
	case c.AtC != nil && l.FromC != nil && *c.AtC != *l.FromC && l.Kind != ByTheEnd:
		add("From", "Clock starts names the temperature that is crossed, and From names another", "clear From")
	}
}

// filled tells which of the columns that kinds differ in are filled.
func (l *Limit) filled() map[string]bool {
	return map[string]bool{"Stage": len(l.Stages) > 0, "Where": l.Where.Name != "", "From": l.FromC != nil, "To": l.ToC != nil,
		"Time": l.TimeS != nil, "Second time": l.SecondS != nil, "Clock starts": l.Clock != Clock{}, "Counting": l.Counting != NotCounted,
		"Compare": l.Compare != Usual, "Compare time": l.CompareTime != Usual, "Reference temperature": l.ReferenceC != nil,
		"z": l.ZK != nil, "z above the reference temperature": l.ZAboveK != nil, "D": l.DS != nil, "Log reductions": l.Logs != nil,
		"Allowance": l.AllowanceK != nil, "Humidity": l.HumidityPc != nil, "Share of stage": l.SharePc != nil, "Table": l.Table != nil,
		"Answer": l.Answer != ""}
}

// missing names the columns of which one must be filled and none is; "" if there are none.
func (l *Limit) missing() string {
	has := l.filled()
	for _, either := range l.Kind.Needs {
		any := false
		for _, column := range either {
			any = any || has[column]
		}
		if !any {
			return strings.Join(either, " or ")
		}
	}
	return ""
}
