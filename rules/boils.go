package rules

import (
	"math"
	"strings"

	"slowpoint/model"
)

// judgeHot judges a limit by a history, and where it asks for heat and is met, by no more of that than food gets which holds water: for the room that
// is left, and whether it can be told. What was reached is told as calculated.
func judgeHot(l *Limit, c *courses) Finding {
	f := judgeOne(l, c)
	if f.Verdict != Met || !l.wantsHeat() || l.countsBelow(&f, c.h) {
		return f
	}
	if !c.boilAsked {
		c.boilAsked = true
		if h := c.h.WhileItBoils(); h != nil {
			c.boils = newCourses(h)
		}
	}
	if c.boils == nil {
		return f
	}
	g, most := judgeOne(l, c.boils), l.degrees(model.BoilsAtMostC(c.h.Spans[0].Step.AltitudeM), 1)
	if g.Verdict == Met {
		f.lessRoom(&g, say("note boils", holes{"most": most}))
		return f
	}
	f.open(say("boils", holes{"met": strings.TrimSuffix(f.Why, "."), "most": most, "less": strings.TrimSuffix(g.Why, ".")}))
	return f
}

// belowK is how far below boiling food the temperatures lie at least that a finding may rest on, for it to be the same whatever is hotter, K.
const belowK = 1

// countsBelow tells whether a limit that is met asks only whether temperatures were reached, and these and its room lie below what food that holds
// water gets to: no place that is hotter than that decides it.
func (l *Limit) countsBelow(f *Finding, h *model.History) bool {
	if l.Kind == Lethality || f.MarginK == nil {
		return false
	}
	asked := math.Inf(-1)
	for _, c := range []*float64{l.FromC, l.ToC, l.Clock.AtC} {
		if c != nil {
			asked = max(asked, *c)
		}
	}
	if l.Table != nil {
		for _, r := range l.Table.Rows {
			asked = max(asked, r.C)
		}
	}
	if l.AllowanceK != nil {
		asked += math.Abs(*l.AllowanceK)
	}
	return asked+max(*f.MarginK, 0)+2*h.ErrorK+belowK < h.BoilsAtMostC()
}
