package report

import (
	"slices"
	"strings"

	"slowpoint/rules"
)

// typed writes a temperature of a limit as the user typed it, never rounded, with the other unit in brackets. c is in °C.
func (h *Head) typed(l *rules.Limit, heading string, c *float64) string {
	if c == nil {
		return ""
	}
	s := strings.TrimSpace(l.Typed[heading])
	switch {
	case s == "" || !strings.Contains(s, "°"):
		return h.stated(*c)
	case strings.HasSuffix(s, "F"):
		return s + " (" + plain(*c, 2, nearest) + " °C)"
	}
	return s + " (" + plain(fahrenheit(*c), 2, nearest) + " °F)"
}

// asTyped writes any other value of a limit as typed, or the number that is used.
func asTyped(l *rules.Limit, heading string, v *float64, per float64, unit string) string {
	if s := l.AsTyped(heading); s != "" {
		return s
	}
	if v == nil {
		return ""
	}
	return plain(*v/per, 4, nearest) + " " + unit
}

// typedDifference writes a difference of a limit as typed with the other unit in brackets: it scales and never shifts. k is in K.
func (h *Head) typedDifference(l *rules.Limit, heading string, k *float64) string {
	if k == nil {
		return ""
	}
	inC, inF := plain(*k, 2, nearest)+" °C", plain(differenceF.Out(*k), 2, nearest)+" °F"
	if strings.Contains(l.Typed[heading], "F") {
		return inF + " (" + inC + ")"
	}
	return inC + " (" + inF + ")"
}

func minutes(l *rules.Limit, heading string, s *float64) string {
	return asTyped(l, heading, s, 60, "min")
}

// bound says on which side of a temperature it has to be.
func (h *Head) bound(l *rules.Limit) string {
	if l.FromC != nil {
		if l.Compare == rules.MoreThan {
			return say("above", h.typed(l, "From", l.FromC))
		}
		return say("at or above", h.typed(l, "From", l.FromC))
	}
	if l.Compare == rules.LessThan {
		return say("below", h.typed(l, "To", l.ToC))
	}
	return say("at or below", h.typed(l, "To", l.ToC))
}

// lower is the lower bound of a limit whose To is what has to be reached from above.
func (h *Head) lower(l *rules.Limit) string {
	if l.Compare == rules.LessThan {
		return say("below", h.typed(l, "To", l.ToC))
	}
	return h.typed(l, "To", l.ToC)
}

// within is a longest allowed or a least needed time.
func within(l *rules.Limit) string {
	t := minutes(l, "Time", l.TimeS)
	switch l.CompareTime {
	case rules.LessThan:
		return say("less than", t)
	case rules.MoreThan:
		return say("more than", t)
	case rules.AtLeast:
		return say("at least", t)
	}
	return say("at most", t)
}

// clock says in words when the time of a limit starts to run.
func (h *Head) clock(l *rules.Limit) string {
	c := l.Clock
	switch {
	case c.Start != nil:
		return say("clock stage start", c.Start.Name)
	case c.End != nil:
		return say("clock stage end", c.End.Name)
	case c.AtC != nil:
		return say("clock crossing", h.clockTyped(l))
	case c.Crossing:
		return say("clock crossing", h.typed(l, "From", l.FromC))
	}
	return ""
}

func (h *Head) clockTyped(l *rules.Limit) string { return h.stated(*l.Clock.AtC) }

// stages names the stages that a limit is about.
func stages(l *rules.Limit) string {
	var s []string
	for _, st := range l.Stages {
		s = append(s, st.Name)
	}
	if l.Then != nil {
		return strings.Join(append(s, l.Then.Name), " > ")
	}
	if len(s) == 0 {
		return say("whole chain")
	}
	return strings.Join(s, " + ")
}

func counting(l *rules.Limit) string {
	return [...]string{"", say("total"), say("continuous"), say("once")}[l.Counting]
}

// asked words what each kind of limit asks for.
var asked = map[string]func(h *Head, l *rules.Limit) string{
	"hold": func(h *Head, l *rules.Limit) string {
		if l.TimeS != nil && *l.TimeS == 0 {
			return say("asks once", h.bound(l))
		}
		return say("asks hold", h.bound(l), minutes(l, "Time", l.TimeS), counting(l))
	},
	"hold table": func(h *Head, l *rules.Limit) string {
		if l.Table == nil {
			return ""
		}
		return say("asks table", l.Table.Name, counting(l))
	},
	"lethality": func(h *Head, l *rules.Limit) string {
		s := say("asks equivalent", minutes(l, "Time", l.TimeS))
		if l.Logs != nil {
			s = say("asks logs", plain(*l.Logs, 4, nearest), minutes(l, "D", l.DS))
		}
		s += say("asks reference", h.typed(l, "Reference temperature", l.ReferenceC), h.typedDifference(l, "z", l.ZK))
		if l.ZAboveK != nil {
			s += say("asks z above", h.typedDifference(l, "z above the reference temperature", l.ZAboveK))
		}
		if l.FromC != nil {
			return s + say("asks floor", h.typed(l, "From", l.FromC))
		}
		return s + say("asks no floor")
	},
	"cool": func(h *Head, l *rules.Limit) string { return say("asks cool", h.lower(l), within(l), h.clock(l)) },
	"heat": func(h *Head, l *rules.Limit) string {
		s := say("asks heat", h.typed(l, "To", l.ToC), within(l), h.clock(l))
		if l.SecondS != nil {
			s += say("asks heat stay", minutes(l, "Second time", l.SecondS))
		}
		return s
	},
	"band": func(h *Head, l *rules.Limit) string {
		return say("asks band", within(l), h.typed(l, "From", l.FromC), h.typed(l, "To", l.ToC), counting(l))
	},
	"stay above": stay, "stay below": stay,
	"outside": func(h *Head, l *rules.Limit) string {
		return say("asks outside", h.typed(l, "From", l.FromC), h.typed(l, "To", l.ToC))
	},
	"by the end": func(h *Head, l *rules.Limit) string {
		if l.TimeS != nil {
			return say("asks by time", h.bound(l), minutes(l, "Time", l.TimeS), h.clock(l))
		}
		return say("asks by the end", h.bound(l))
	},
	"delay":    func(h *Head, l *rules.Limit) string { return say("asks delay", within(l)) },
	"duration": func(h *Head, l *rules.Limit) string { return say("asks duration", within(l)) },
	"falling": func(h *Head, l *rules.Limit) string {
		return say("asks falling", h.typedDifference(l, "Allowance", l.AllowanceK))
	},
	"freeze": func(h *Head, l *rules.Limit) string {
		return say("asks freeze", h.typed(l, "From", l.FromC), minutes(l, "Time", l.TimeS), h.typed(l, "To", l.ToC), minutes(l, "Second time", l.SecondS))
	},
	"humidity": func(h *Head, l *rules.Limit) string {
		s := say("asks humidity", asTyped(l, "Humidity", l.HumidityPc, 1, "%"))
		if l.SharePc != nil {
			s += say("asks share", asTyped(l, "Share of stage", l.SharePc, 1, "%"))
		}
		if l.TimeS != nil {
			s += say("asks at least", minutes(l, "Time", l.TimeS))
		}
		return s
	},
	"stated": func(h *Head, l *rules.Limit) string {
		if l.Answer == "" {
			return say("asks stated blank")
		}
		return say("asks stated", l.Answer)
	},
}

func stay(h *Head, l *rules.Limit) string {
	s := say("asks stay", h.bound(l))
	if l.TimeS != nil {
		s += say("asks except", within(l))
	}
	return s
}

// asks says in words what a limit asks for, with every number as typed.
func (h *Head) asks(l *rules.Limit) string {
	if l.Kind == nil {
		return ""
	}
	if f := asked[l.Kind.Name]; f != nil {
		return strings.ReplaceAll(f(h, l), " ()", "")
	}
	return l.Kind.Help
}

// plainly is asks for whoever cooks: without words of theory.
func (h *Head) plainly(f *rules.Finding) string {
	l := f.Limit
	if row := decidingRow(f); row != nil && row.Typed != "" {
		return say("plainly row", row.Typed, l.Table.Name)
	}
	if l.Kind == nil || l.Kind.Name != "lethality" {
		return h.asks(l)
	}
	if l.Logs != nil {
		return say("plainly logs", h.typed(l, "Reference temperature", l.ReferenceC))
	}
	return say("plainly equivalent", minutes(l, "Time", l.TimeS), h.typed(l, "Reference temperature", l.ReferenceC))
}

// decidingRow is the row of a limit's table that decides its finding; nil if there is none.
func decidingRow(f *rules.Finding) *rules.Row {
	if f.Limit == nil || f.Limit.Table == nil {
		return nil
	}
	for i := range f.Limit.Table.Rows {
		if row := &f.Limit.Table.Rows[i]; !row.At.IsZero() && slices.Contains(f.Cells, row.At) {
			return row
		}
	}
	return nil
}

// rowTyped writes the temperature of a table's row as typed, with the other unit in brackets.
func (h *Head) rowTyped(row *rules.Row) string {
	temperature, _, _ := strings.Cut(row.Typed, ",")
	return h.typed(&rules.Limit{Typed: map[string]string{"": temperature}}, "", &row.C)
}

// bare tells whether a limit lacks a part of its citation.
func bare(l *rules.Limit) bool {
	return strings.TrimSpace(l.Code) == "" || strings.TrimSpace(l.Clause) == "" || strings.TrimSpace(l.Edition) == ""
}

// lacks names what is missing in a citation.
func lacks(l *rules.Limit) string {
	var s []string
	for _, part := range []struct{ name, value string }{{"Code", l.Code}, {"Clause", l.Clause}, {"Edition", l.Edition}} {
		if strings.TrimSpace(part.value) == "" {
			s = append(s, part.name)
		}
	}
	return strings.Join(s, ", ")
}

// room says a finding's margin in words: rounded down, so that it never looks larger than it is; and whose it is where the margin in
// temperature is not that of the place that decides.
func (h *Head) room(f *rules.Finding) string {
	var have, lack []string
	kelvin := func(v float64, r rounding) string {
		if f.MarginPlace != "" {
			return say("room elsewhere", h.difference(v, r), f.MarginPlace)
		}
		return h.difference(v, r)
	}
	for _, m := range []struct {
		v     *float64
		write func(v float64, r rounding) string
	}{{f.MarginK, kelvin}, {f.MarginS, duration}} {
		switch {
		case !finite(m.v), *m.v >= 0 && f.Verdict == rules.NotMet: // what is missed has no room
		case *m.v >= 0:
			have = append(have, m.write(*m.v, down))
		default:
			lack = append(lack, m.write(-*m.v, up))
		}
	}
	var s []string
	if len(have) > 0 {
		s = append(s, say("room", strings.Join(have, say("and"))))
	}
	if len(lack) > 0 {
		s = append(s, say("lacking", strings.Join(lack, say("and"))))
	}
	return strings.Join(s, "; ")
}
