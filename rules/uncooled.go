package rules

import (
	"math"

	"slowpoint/model"
)

// uncooled looks at a limit on cooling that applied nowhere although the food was warm enough for it. Where the process chills, in
// another stage than the limit names or before the food was warm, nobody can have meant that nothing be judged: it cannot be told. Where
// nothing chills after that, as in what is cooked and served, the limit still does not apply, and the finding says how warm the food was.
func (v *view) uncooled(f *Finding) {
	l := v.l
	cools := l.Kind == CoolWithin || l.Kind == ByTheEnd && l.ToC != nil && (len(l.Stages) == 0 || named(l.Stages, model.Cool))
	if !cools || l.Advice || f.Verdict != NotApplicable || same(l.Where.Name, "medium") || len(v.c.rows) == 0 {
		return
	}
	level, start := *l.ToC, l.figure("To", exactly(*l.ToC, "°C"))
	if l.clocked() {
		level, start = l.crossedC(), l.startWords()
	}
	first, top := math.NaN(), math.Inf(-1) // when any place was first above the level, and the highest temperature
	for i, t := range v.c.times {
		for _, row := range v.c.rows {
			if top = math.Max(top, row[i]); math.IsNaN(first) && row[i] > level+sameK {
				first = t
			}
		}
	}
	if math.IsNaN(first) {
		return
	}
	end := math.Inf(-1)
	for _, row := range v.c.rows {
		end = math.Max(end, row[len(row)-1])
	}
	h := holes{"start": start, "top": l.degrees(top, 1), "end": l.degrees(end, 1), "stage": v.stageNames()}
	var other *model.Stage // a stage that chills once the food was warm
	for _, r := range v.runs {
		if other == nil && chills(r.stage) && r.b > first+sameS {
			other = r.stage
		}
	}
	switch {
	case len(l.Stages) > 0 && len(v.stages) > 0:
		f.Verdict, f.Why = CannotTell, say("uncooled order", h)
	case other != nil && len(l.Stages) > 0:
		h["other"] = other.Name
		f.Verdict, f.Why = CannotTell, say("uncooled other", h)
	default:
		f.StillWarm = say("uncooled", h)
	}
}
