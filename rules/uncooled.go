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
	since := 0.0 // a clock that starts with a stage, or none, is about food that was heated
	if !l.clocked() {
		since = math.Inf(1)
		for _, r := range v.runs {
			if r.stage.Heats {
				since = math.Min(since, r.a)
			}
		}
	}
	rows := v.c.rows
	switch s := v.scope(); {
	case s.one != nil:
		p := v.path(*s.one)
		rows = [][]float64{make([]float64, len(v.c.times))}
		for i, t := range v.c.times {
			rows[0][i] = p.value(t)
		}
	case s.surfaceOnly:
		rows = nil
		for _, i := range s.spots {
			rows = append(rows, v.c.rows[i])
		}
	}
	first, top := math.NaN(), math.Inf(-1) // when any place judged was first above the level, and the highest temperature
	for i, t := range v.c.times {
		for _, row := range rows {
			if top = math.Max(top, row[i]); math.IsNaN(first) && t >= since && row[i] > level+sameK {
				first = t
			}
		}
	}
	if math.IsNaN(first) {
		return
	}
	end := math.Inf(-1)
	for _, row := range rows {
		end = math.Max(end, row[len(row)-1])
	}
	h := holes{"start": start, "top": l.degrees(top, 1), "end": l.degrees(end, 1), "stage": v.stageNames()}
	var own, other *model.Stage // a stage that chills once the food was warm: one that the limit names, and another
	heated := false             // before a stage that the limit names: the steps are in order
	for i, r := range v.runs {
		for _, b := range v.runs[:i] {
			heated = heated || named(l.Stages, r.stage) && b.stage.Heats
		}
		switch late := r.b > first+sameS; {
		case late && own == nil && named(l.Stages, r.stage):
			own = r.stage
		case late && other == nil && chills(r.stage):
			other = r.stage
		}
	}
	switch {
	case own != nil && !l.clocked(): // another stage is lacking, and that is what the finding says
	case own != nil:
		f.Verdict, f.Why = CannotTell, say("uncooled short", h)
	case len(l.Stages) > 0 && len(v.stages) > 0 && !heated:
		f.Verdict, f.Why = CannotTell, say("uncooled order", h)
	case other != nil && len(l.Stages) == 0:
		h["stage"] = other.Name
		f.Verdict, f.Why = CannotTell, say("uncooled short", h)
	case other != nil && len(l.Stages) > 0:
		h["other"] = other.Name
		f.Verdict, f.Why = CannotTell, say("uncooled other", h)
	default:
		f.StillWarm = say("uncooled", h)
	}
}
