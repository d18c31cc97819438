package rules

import (
	"math"

	"slowpoint/model"
)

// CarryOver is the key of the caution on a limit that is met only by what the food gets after its heating.
const CarryOver = "only by carry-over"

// carryOver judges a met hold, table or lethality again with the heating stages alone; where it is not met there, the finding says
// so in numbers: what the slowest place had when it left the heat, and what it rose to.
func (v *view) carryOver(f *Finding) {
	l := v.l
	heated := l.Kind == Hold && l.ToC == nil || l.Kind == HoldTable || l.Kind == Lethality
	if f.Verdict != Met || !heated || same(l.Where.Name, "medium") {
		return
	}
	stages := l.Stages
	if len(stages) == 0 || len(stages) == 1 && stages[0] == model.Rest { // what the rest shows was begun by the heating before it
		stages = model.Stages
	}
	hot := *l
	hot.Stages = nil
	for _, s := range stages {
		if s.Heats && len(v.within([]*model.Stage{s})) > 0 {
			hot.Stages = append(hot.Stages, s)
		}
	}
	if len(hot.Stages) == 0 || len(stages) == len(hot.Stages) {
		return
	}
	w := newView(&hot, v.c)
	w.brief = true
	g := l.Kind.judge(w)
	if g.Verdict == Met || g.Place == nil {
		return
	}
	if says := v.rose(w, &g); says != "" {
		f.carriedOver(says)
	}
}

// carriedOver enters the sentence on a limit that is met only by what the food gets after its heating.
func (f *Finding) carriedOver(says string) {
	f.CarryOver = says
	f.Notes = append(f.Notes, says)
	f.Cautions = append(f.Cautions, CarryOver)
}

// rose says what the slowest place had at the end of a heating, and the highest that it came to before the next one. Of several
// heatings it is the one after which the place became warmest.
func (v *view) rose(hot *view, g *Finding) string {
	p := v.c.path(*g.Place, interval{0, v.c.end})
	left, rose, from := math.NaN(), math.Inf(-1), interval{}
	for i, iv := range hot.stages {
		after := interval{iv.b, v.c.end}
		if i+1 < len(hot.stages) {
			after.b = hot.stages[i+1].a
		}
		var rest []interval
		for _, s := range v.stages {
			if a, b := math.Max(s.a, after.a), math.Min(s.b, after.b); b > a {
				rest = append(rest, interval{a, b})
			}
		}
		if _, c := p.mostOf(rest, 1); c > rose {
			left, rose, from = p.value(iv.b), c, after
		}
	}
	if math.IsNaN(left) {
		return ""
	}
	l := v.l
	h := holes{"place": g.PlaceName, "left": l.degrees(left, -1), "rose": l.degrees(rose, -1)}
	for _, r := range v.runs {
		if math.Abs(r.b-from.a) < sameS {
			h["stage"] = r.stage.Name
		}
	}
	key := "carry-over"
	if rose < left+0.05 {
		key = "carry-over kept"
	}
	says := say(key, h)
	if !v.h.Recorded && !v.enclosed(from) {
		says += say(key+" moist", nil)
	}
	return says + "."
}

// enclosed tells whether the first step of a stretch needs no word on evaporation: its wet surface is calculated, or it is covered.
func (v *view) enclosed(iv interval) bool {
	for _, sp := range v.h.Spans {
		if sp.Step != nil && sp.StartS >= iv.a-sameS {
			e := &sp.Step.Exposure
			return e.Wet != nil && *e.Wet || e.Cover != nil && e.Cover != model.Open
		}
	}
	return false
}
