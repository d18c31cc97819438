package report

import (
	"slices"
	"strings"

	"slowpoint/rules"
)

// called names the place that the pictures show: the slowest only where every place was judged.
func (d *deciding) called() string {
	switch where := judgedAt(d.finding); {
	case where == "":
		return say("place slowest")
	case strings.EqualFold(where, "medium"):
		return say("place shown")
	case strings.EqualFold(where, "surface"):
		return say("place surface")
	}
	return say("place judged")
}

// judgedAt is the place or part that a limit was judged at, in the word of the column Where; "" for every point.
func judgedAt(f *rules.Finding) string {
	if f == nil || f.Limit == nil {
		return ""
	}
	if where := strings.TrimSpace(f.Limit.Where.Name); !strings.EqualFold(where, "every point") {
		return where
	}
	return ""
}

// ofTheInside are the kinds of limit that are about the whole of the food: how it is heated and how it is cooled.
var ofTheInside = []*rules.Kind{rules.Hold, rules.HoldTable, rules.Lethality, rules.CoolWithin, rules.HeatWithin, rules.ByTheEnd}

// judgedInPart says, a sentence for each place, which limits on heating and cooling were judged elsewhere than within the food or at its
// centre: at the surface, at a point, or on the surroundings. What is met there says nothing of the rest. Where nothing but the surroundings
// was judged, every limit on them is named.
func (p *Product) judgedInPart() []string {
	var places []string
	names := map[string][]string{}
	airOnly := true // nothing that weighs was judged on the food
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		airOnly = airOnly && (f.Level != "must" || unjudged(f) || strings.EqualFold(judgedAt(f), "medium"))
	}
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		where := judgedAt(f)
		if where == "" || strings.EqualFold(where, "centre") || f.Level != "must" || unjudged(f) {
			continue
		}
		inside := func(k *rules.Kind) bool { return f.Limit.Kind != nil && f.Limit.Kind.Name == k.Name }
		if !airOnly && !slices.ContainsFunc(ofTheInside, inside) {
			continue
		}
		if names[where] == nil {
			places = append(places, where)
		}
		names[where] = append(names[where], "\""+f.Limit.Name+"\"")
	}
	var out []string
	for _, where := range places {
		key := "judged at point"
		switch {
		case strings.EqualFold(where, "medium"):
			key = "judged on medium"
		case strings.EqualFold(where, "surface"):
			key = "judged at surface"
		}
		list := strings.Join(names[where], ", ")
		if key == "judged at point" {
			out = append(out, say(key, list, where))
		} else {
			out = append(out, say(key, list))
		}
	}
	return out
}

// unjudged tells whether nothing was judged: a limit that does not apply, or of which nothing could be read.
func unjudged(f *rules.Finding) bool {
	return f.Verdict == rules.NotApplicable || f.Verdict == rules.CannotTell && f.Value == nil
}

// inPart is the caution on them.
func inPart(h *Head, p *Product) ([]any, bool) {
	s := p.judgedInPart()
	return []any{strings.Join(s, " ")}, len(s) > 0
}
