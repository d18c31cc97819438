package workbook

import (
	"slices"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
	"slowpoint/rules"
)

// usualOf is the usual range of a number of one kind of limit in some stages.
type usualOf struct {
	kinds   []*rules.Kind
	heading string
	stages  []*model.Stage          // all stages of the limit are among these; nil: in any
	medium  bool                    // of the surroundings too, for which other ranges are usual otherwise
	span    span                    // °C, s, K, %
	when    func(*rules.Limit) bool // nil: always
}

// fromHot tells whether a limit on cooling begins with hot food: its clock starts above 38 °C, or with a stage.
func fromHot(l *rules.Limit) bool {
	from := l.FromC
	if l.Clock.AtC != nil {
		from = l.Clock.AtC
	}
	return from == nil || *from > 38
}

const (
	hour = 3600.0
	day  = 24 * hour
)

var (
	hotStages  = []*model.Stage{model.Cook, model.Reheat, model.HoldHot}
	coldStages = []*model.Stage{model.HoldCold, model.Store}
	iceStages  = []*model.Stage{model.Freeze, model.Store}
)

// usualLimits are common practice, no source: wide enough for every starter limit (a test holds them against it), narrow enough for a
// missing digit and for °F typed in a °C column. The first that fits counts.
var usualLimits = []usualOf{
	{[]*rules.Kind{rules.Lethality}, "Reference temperature", nil, false, span{45, 135}, nil},
	{[]*rules.Kind{rules.Lethality}, "From", nil, false, span{35, 125}, nil},
	{[]*rules.Kind{rules.Hold, rules.StayAbove, rules.ByTheEnd}, "From", hotStages, false, span{45, 125}, nil},
	{[]*rules.Kind{rules.HeatWithin}, "To", hotStages, false, span{45, 125}, nil},
	{[]*rules.Kind{rules.CoolWithin}, "To", nil, false, span{-60, 30}, nil},
	{[]*rules.Kind{rules.CoolWithin}, "From", nil, false, span{0, 100}, nil},
	{[]*rules.Kind{rules.ByTheEnd}, "To", append([]*model.Stage{model.Cool}, coldStages...), false, span{-60, 30}, nil},
	{[]*rules.Kind{rules.Hold, rules.FreezeHold}, "To", iceStages, false, span{-60, 0}, nil},
	{[]*rules.Kind{rules.StayBelow}, "To", coldStages, true, span{-60, 22}, nil}, // cold food without refrigeration: 70 °F in published codes
	{[]*rules.Kind{rules.Band, rules.Outside}, "From", nil, false, span{-10, 35}, nil},
	{[]*rules.Kind{rules.Band, rules.Outside}, "To", nil, false, span{15, 110}, nil},

	{[]*rules.Kind{rules.CoolWithin}, "Time", nil, true, span{0, 15 * hour}, fromHot},
	{[]*rules.Kind{rules.CoolWithin}, "Time", nil, true, span{0, 3 * day}, nil},
	{[]*rules.Kind{rules.HeatWithin, rules.Band, rules.StayAbove, rules.StayBelow, rules.Delay}, "Time", nil, true, span{0, day}, nil},
	{[]*rules.Kind{rules.ByTheEnd, rules.Duration}, "Time", nil, true, span{0, 60 * day}, nil},
	{[]*rules.Kind{rules.Lethality}, "Time", nil, true, span{6, day}, nil},
	{[]*rules.Kind{rules.Lethality}, "D", nil, true, span{0.6, day}, nil},
	{[]*rules.Kind{rules.Lethality}, "Log reductions", nil, true, span{1, 12}, nil},
	{[]*rules.Kind{rules.Falling}, "Allowance", nil, true, span{0, 5}, nil},
	{[]*rules.Kind{rules.Humidity}, "Humidity", nil, true, span{30, 100}, nil},
}

// likely warns of numbers that the rule does not usually have in these stages; what no limit has at all is told by the columns.
func (sc *scope) likely(l *Line, lim *rules.Limit) {
	told := map[string]bool{}
	for i := range usualLimits {
		u := &usualLimits[i]
		if told[u.heading] || !slices.Contains(u.kinds, lim.Kind) || !u.within(sc.stagesOf(lim)) || lim.Where.Name == "medium" && !u.medium || u.when != nil && !u.when(lim) {
			continue
		}
		c := l.t.sheet.Column(u.heading)
		got := map[string]*float64{"From": lim.FromC, "To": lim.ToC, "Reference temperature": lim.ReferenceC, "Time": lim.TimeS, "D": lim.DS,
			"Log reductions": lim.Logs, "Allowance": lim.AllowanceK, "Humidity": lim.HumidityPc}[u.heading]
		if got == nil || *got <= 0 && c.Quantity != &unit.Temperature { // nothing at all is an error where it lets anything pass
			continue
		}
		told[u.heading] = true
		if c.Usual.outside(*got) || !u.span.outside(*got) {
			continue
		}
		typed := lim.Typed[u.heading]
		l.Remark(cell.Warning, u.heading, typed, unusualLimit, c.shown(*got), lim.Kind.Name, u.where(lim), c.between(&u.span), c.slipOf(typed, *got < u.span.least))
	}
}

// stagesOf are the stages that a limit is about: its own, else all that the products have.
func (sc *scope) stagesOf(lim *rules.Limit) []*model.Stage {
	if len(lim.Stages) > 0 {
		return lim.Stages
	}
	var out []*model.Stage
	for _, s := range model.Stages {
		if sc.stages[s] {
			out = append(out, s)
		}
	}
	return out
}

// within tells whether a usual range is one of these stages.
func (u *usualOf) within(stages []*model.Stage) bool {
	for _, s := range stages {
		if u.stages != nil && !slices.Contains(u.stages, s) {
			return false
		}
	}
	return u.stages == nil || len(stages) > 0
}

// where words the stages of the limit, if they decide what is usual: " in cook".
func (u *usualOf) where(lim *rules.Limit) string {
	if u.stages == nil || len(lim.Stages) == 0 {
		return ""
	}
	return " in " + and(names(lim.Stages, func(s *model.Stage) string { return s.Name }))
}

// slipOf asks for the likeliest slip behind a number, of a temperature by the unit that it was typed in.
func (c *Column) slipOf(typed string, low bool) string {
	fahrenheit := strings.HasSuffix(typed, "F")
	switch {
	case c.Quantity == &unit.Duration:
		return "is it in another unit than the heading says, or has it a digit too many or too few?"
	case c.Quantity != &unit.Temperature:
		return "is it what the code asks for?"
	case low && fahrenheit:
		return "is it °C typed in a °F column, or is a digit missing?"
	case low:
		return "is a digit missing?"
	case fahrenheit:
		return "is there a digit too many?"
	}
	return slipDegrees
}
