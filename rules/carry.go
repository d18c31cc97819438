package rules

import (
	"math"
	"slices"

	"slowpoint/model"
)

// CarryOver is the key of the caution on a limit that is met only by what the food gets after its heating.
const CarryOver = "only by carry-over"

// NoCarryOver is the key of the caution on a limit that would be met only so, and from a dry surface of moist food, which is not counted.
const NoCarryOver = "carry-over not counted"

// carryOver judges a met hold, table, lethality or heating within a time again with the heating stages alone; where it is not met there, the finding says
// so in numbers: what the slowest place had when it left the heat, and what it rose to. Of moist food that stands open in air, calculated
// without the water that it loses, what comes after the heating is not counted: the finding is that of the heating alone.
func (v *view) carryOver(f *Finding) {
	l := v.l
	heated := l.Kind == Hold && l.ToC == nil || l.Kind == HoldTable || l.Kind == Lethality || l.Kind == HeatWithin
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
	whole := *l
	if len(l.Stages) == 0 {
		whole.Stages = slices.DeleteFunc(slices.Clone(stages), func(s *model.Stage) bool { return len(v.within([]*model.Stage{s})) == 0 })
	}
	counts := newView(&whole, v.c)
	if counts.stages = v.counted(); len(counts.stages) == 0 { // it is about the rest only, and nothing of that counts
		counts = newView(&hot, v.c)
	}
	without := l.Kind.judge(counts)
	says, moist, left, after := v.rose(w, &g, without.Verdict == Met)
	switch {
	case says == "":
	case without.Verdict != Met:
		*f = without
		f.Limit = l
		if l.Kind == HeatWithin { // it was reached after the last stage that counts, whatever stages are named
			f.Why = left
		}
		f.Notes = append(f.Notes, says+". "+say("carry-over not counted", nil))
		f.Cautions = append(f.Cautions, NoCarryOver)
	case !v.h.Recorded && !v.enclosed(after):
		f.carriedOver(says + moist + ".")
	default:
		f.carriedOver(says + ".")
	}
}

// counted is what counts of the stages: not what moist food does after a cook or a reheat from the first step on in which it is dry.
func (v *view) counted() []interval {
	moist := !v.h.Recorded && v.h.Product != nil && slices.ContainsFunc(v.h.Product.Foods(), func(f *model.Material) bool { return !f.Waterless })
	out, from := []interval(nil), math.Inf(-1)
	upTo := func(end float64) {
		for _, s := range v.stages {
			if a, b := math.Max(s.a, from), math.Min(s.b, end); b > a {
				out = append(out, interval{a, b})
			}
		}
	}
	heated, cut := false, false
	for _, sp := range v.h.Spans {
		if sp.Step == nil {
			continue
		}
		switch heats := sp.Step.Stage == model.Cook || sp.Step.Stage == model.Reheat; {
		case heats && cut:
			from, cut = sp.StartS, false
		case !heats && moist && heated && !cut && openAndDry(sp.Step):
			upTo(sp.StartS)
			cut = true
		}
		heated = heated || sp.Step.Stage == model.Cook || sp.Step.Stage == model.Reheat
	}
	if !cut {
		upTo(v.c.end)
	}
	return out
}

// openAndDry tells whether food is calculated as dry in a step, on any face, though it lies open: in air, where nobody said dry or wet; a film
// typed there stands for convection alone.
func openAndDry(st *model.Step) bool {
	dry := func(e *model.Exposure) bool {
		return e.Surface.Air() && e.Wet == nil && (e.Cover == nil || e.Cover == model.Open)
	}
	return dry(&st.Exposure) || slices.ContainsFunc(st.Faces, func(f model.FaceExposure) bool { return dry(&f.Exposure) })
}

// carriedOver enters the sentence on a limit that is met only by what the food gets after its heating.
func (f *Finding) carriedOver(says string) {
	f.CarryOver = says
	f.Notes = append(f.Notes, says)
	f.Cautions = append(f.Cautions, CarryOver)
}

// rose says what the slowest place had at the end of a heating, and the highest that it came to before the next one, what
// water does to that, in a sentence of its own what it had, and when it was; counts tells whether that counts. Of several heatings it is the one after which the place became warmest.
func (v *view) rose(hot *view, g *Finding, counts bool) (says, moist, had string, after interval) {
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
		return "", "", "", from
	}
	l := v.l
	h := holes{"met": say("carried", nil), "slow": say("slow place", holes{"place": g.PlaceName}), "left": l.degrees(left, -1), "rose": l.degrees(rose, -1)}
	if v.c.whole != nil {
		h["slow"] = say("slow place read", holes{"place": g.PlaceName})
	}
	for _, r := range v.runs {
		if math.Abs(r.b-from.a) < sameS {
			h["stage"] = r.stage.Name
		}
	}
	if !counts {
		h["met"] = say("would be carried", nil)
	}
	key := "carry-over"
	if rose < left+0.05 {
		key = "carry-over kept"
	}
	return say(key, h), say(key+" moist", nil), say("carry-over left", h), from
}

// enclosed tells whether the first step of a stretch needs no word on evaporation: its wet surface is calculated, or it is covered.
func (v *view) enclosed(iv interval) bool {
	e := v.first(iv)
	return e != nil && (e.Wet != nil && *e.Wet || e.Cover != nil && e.Cover != model.Open)
}

// first is what surrounds the food in the first step of a stretch; nil if there is none.
func (v *view) first(iv interval) *model.Exposure {
	for _, sp := range v.h.Spans {
		if sp.Step != nil && sp.StartS >= iv.a-sameS {
			return &sp.Step.Exposure
		}
	}
	return nil
}
