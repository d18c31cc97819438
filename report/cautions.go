package report

import (
	"math"
	"slices"
	"strings"

	"slowpoint/model"
	"slowpoint/rules"
)

// Caution is a reservation that applies to a run.
type Caution struct{ Key, Text string }

// trigger tells whether a caution applies, and fills the blanks of its text.
type trigger struct {
	key string
	due func(h *Head, p *Product) (args []any, yes bool)
}

// triggers are the cautions in the order in which they are printed. The texts are in words, under "caution " and the key.
var triggers = []trigger{
	{"thin margin", thinMargin},
	{"cooling limit did not apply", stillWarm},
	{"judged in part", inPart},
	{"resolution coarser than margin", coarse},
	{"limit without citation", uncited},
	{"step did not reach its temperature", stepsWhere(func(sp *model.Span) bool { return sp.Reached != nil && !*sp.Reached })},
	{"step ended by the model", stepsWhere(func(sp *model.Span) bool { return sp.Reached != nil && *sp.Reached })},
	{"medium is a set-point", stepsWhere(func(sp *model.Span) bool {
		return anyExposure(sp.Step, func(e *model.Exposure) bool { return len(e.Medium.C) > 0 && !e.Measured })
	})},
	{"film coefficient assumed", stepsWhere(func(sp *model.Span) bool { return anyFilm(sp, func(f *model.FilmUsed) bool { return !f.Typed }) })},
	{"water film taken low", stepsWhere(func(sp *model.Span) bool {
		return anyExposure(sp.Step, func(e *model.Exposure) bool {
			return e.Surface.Water() && e.FilmW == nil
		})
	})},
	{"evaporation left out", stepsWhere(func(sp *model.Span) bool {
		return anyExposure(sp.Step, func(e *model.Exposure) bool { return e.Surface.Air() && uncovered(e) && !wet(e) }) // a typed coefficient stands for everything
	})},
	{"carry-over without evaporation", carryOver},
	{"boiling throughout", func(h *Head, p *Product) ([]any, bool) {
		return nil, p.History != nil && p.History.Boils
	}},
	{"beyond the properties", func(h *Head, p *Product) ([]any, bool) { return nil, p.History != nil && p.History.Beyond }},
	{"moist surface above boiling", boiling},
	{"chill medium raised to the freezing point", stepsWhere(func(sp *model.Span) bool { return sp.MediumFromC != nil })},
	{"crossing freezing", func(h *Head, p *Product) ([]any, bool) { return freezing(h, p, false) }},
	{"freezing calculated", func(h *Head, p *Product) ([]any, bool) { return freezing(h, p, true) }},
	{"properties from composition", func(h *Head, p *Product) ([]any, bool) {
		return nil, slices.ContainsFunc(p.Product.Foods(), func(m *model.Material) bool { return m.Composed })
	}},
	{"fat that melts", fatty},
	{"conductivity scatter", func(h *Head, p *Product) ([]any, bool) { return nil, p.run(rules.LowConductivity) != nil }},
	{"thick food may flow", func(h *Head, p *Product) ([]any, bool) {
		return nil, p.run(rules.WellMixed) != nil
	}},
	{"idealised shape", func(h *Head, p *Product) ([]any, bool) {
		if p.Product.Shape == nil || p.History == nil || p.History.Recorded || p.Product.Shape.Mixed() {
			return nil, false
		}
		return []any{p.Product.Shape.Name}, true
	}},
	{"layers touch perfectly", touching},
	{"cooked food shrinks", shrinks},
	{"start assumed uniform", func(h *Head, p *Product) ([]any, bool) {
		return []any{h.stated(p.Product.StartC)}, p.History != nil && !p.History.Recorded && !p.Product.Shape.Mixed()
	}},
	{"probe place unknown", func(h *Head, p *Product) ([]any, bool) {
		return nil, p.History != nil && len(p.History.Points) <= 1 && !p.Product.Shape.Mixed()
	}},
	{"record sparse or with gaps", sparse},
	{"dates set by hand", func(h *Head, p *Product) ([]any, bool) {
		v := strings.TrimSpace(h.item("Date order"))
		return []any{v}, v != ""
	}},
}

// ofCalculation are cautions about how a prediction is made; a record has none of them.
var ofCalculation = []string{"medium is a set-point", "film coefficient assumed", "water film taken low", "evaporation left out",
	"carry-over without evaporation", "beyond the properties", "properties from composition", "fat that melts", "conductivity scatter", "thick food may flow", "layers touch perfectly",
	"step did not reach its temperature", "step ended by the model"}

// Cautions lists what applies to a product: first the reservations of this table, then those that its findings carry.
func Cautions(h *Head, p *Product) []Caution {
	var out []Caution
	seen := map[string]bool{}
	for _, t := range triggers {
		if p.recorded() && slices.Contains(ofCalculation, t.key) {
			continue
		}
		if args, yes := t.due(h, p); yes {
			out = append(out, Caution{t.key, say("caution "+t.key, args...)})
			seen[t.key] = true
		}
	}
	add := func(key string) {
		if key == "" || seen[key] {
			return
		}
		seen[key] = true
		text := sentence(key)
		if _, known := words["caution "+key]; known {
			text = say("caution " + key)
		}
		out = append(out, Caution{key, text})
	}
	for i := range p.Judgement.Findings {
		for _, key := range p.Judgement.Findings[i].Cautions {
			add(key)
		}
	}
	if p.History != nil {
		for _, sp := range p.History.Spans {
			for _, f := range sp.Films {
				add(remarks(f.Caution, seen["film coefficient assumed"]))
			}
		}
		add(p.History.Bound)
	}
	return out
}

// remarks are those of the prediction on a film, without the one that a caution of the table makes with the names of the steps.
func remarks(s string, assumed bool) string {
	const same = "film coefficient assumed, not measured"
	if rest, has := strings.CutPrefix(s, same); has && assumed {
		return strings.TrimPrefix(rest, "; ")
	}
	return s
}

// stepsWhere is a trigger that names the steps for which something holds.
func stepsWhere(holds func(*model.Span) bool) func(*Head, *Product) ([]any, bool) {
	return func(h *Head, p *Product) ([]any, bool) {
		if p.History == nil {
			return nil, false
		}
		var names []string
		for i := range p.History.Spans {
			if sp := &p.History.Spans[i]; sp.Step != nil && holds(sp) {
				names = append(names, sp.Step.Name)
			}
		}
		return []any{strings.Join(names, ", ")}, len(names) > 0
	}
}

// anyExposure tells whether something holds for the surroundings of a step or of one of its faces.
func anyExposure(s *model.Step, holds func(*model.Exposure) bool) bool {
	if s.Surface != nil && holds(&s.Exposure) {
		return true
	}
	for i := range s.Faces {
		if s.Faces[i].Surface != nil && holds(&s.Faces[i].Exposure) {
			return true
		}
	}
	return false
}

func anyFilm(sp *model.Span, holds func(*model.FilmUsed) bool) bool {
	for i := range sp.Films {
		if f := &sp.Films[i]; !math.IsInf(f.FilmW, 1) && f.FilmW > 0 && holds(f) {
			return true
		}
	}
	return false
}

func inAir(e *model.Exposure) bool {
	return e.Surface.Air() || e.Surface.FilmTyped()
}
func uncovered(e *model.Exposure) bool { return e.Cover == nil || e.Cover == model.Open }
func wet(e *model.Exposure) bool       { return e.Wet != nil && *e.Wet }

// thinMargin: the deciding room is less than 2 K or a tenth of the time.
func thinMargin(h *Head, p *Product) ([]any, bool) {
	var names []string
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		if f.Verdict == rules.Met && f.Level == "must" && tightness(f) < 1 && f.Limit != nil {
			names = append(names, f.Limit.Name)
		}
	}
	return []any{strings.Join(names, ", "), h.difference(2, nearest)}, len(names) > 0
}

// stillWarm: a limit on cooling did not apply to food that was warm enough for it.
func stillWarm(h *Head, p *Product) ([]any, bool) {
	var names []string
	for i := range p.Judgement.Findings {
		if f := &p.Judgement.Findings[i]; f.StillWarm != "" && f.Limit != nil {
			names = append(names, f.Limit.Name)
		}
	}
	return []any{strings.Join(names, ", ")}, len(names) > 0
}

// coarse: the error estimate is as large as a margin.
func coarse(h *Head, p *Product) ([]any, bool) {
	if p.History == nil {
		return nil, false
	}
	var names []string
	for i := range p.Judgement.Findings {
		f := &p.Judgement.Findings[i]
		if finite(f.MarginK) && math.Abs(*f.MarginK) <= p.History.ErrorK && f.Verdict != rules.NotApplicable && f.Limit != nil {
			names = append(names, f.Limit.Name)
		}
	}
	return []any{h.errorWords(p.History.ErrorK), strings.Join(names, ", ")}, len(names) > 0
}

// uncited: a limit lacks its code, clause or edition.
func uncited(h *Head, p *Product) ([]any, bool) {
	var names []string
	for _, f := range p.Judgement.Findings {
		if f.Limit != nil && bare(f.Limit) && f.Verdict != rules.NotApplicable {
			names = append(names, f.Limit.Name)
		}
	}
	return []any{strings.Join(names, ", ")}, len(names) > 0
}

// carryOver: standing after a cook in air, without a wet surface, is credited with the temperature still rising inside.
func carryOver(h *Head, p *Product) ([]any, bool) {
	if p.History == nil {
		return nil, false
	}
	for i := 1; i < len(p.History.Spans); i++ {
		before, sp := p.History.Spans[i-1].Step, p.History.Spans[i].Step
		if before == nil || sp == nil || sp.Stage != model.Rest || before.Stage != model.Cook && before.Stage != model.Reheat {
			continue
		}
		if anyExposure(sp, func(e *model.Exposure) bool { return inAir(e) && !wet(e) }) {
			return []any{sp.Name}, true
		}
	}
	return nil, false
}

// boiling: a surface that may be moist is predicted above 100 °C.
func boiling(h *Head, p *Product) ([]any, bool) {
	hot := math.Inf(-1)
	for _, c := range p.Samples.Hottest {
		hot = max(hot, c)
	}
	return []any{h.temperature(hot, up), h.stated(100)}, hot > 100
}

// freezing: somewhere the food is at or below its freezing point, or below 0 °C where none is known; of foods whose ice is calculated,
// or of the others. Of several foods it is the first.
func freezing(h *Head, p *Product, calculated bool) ([]any, bool) {
	if p.History == nil || p.History.Recorded {
		return nil, false
	}
	cold := math.Inf(1)
	for _, c := range p.Samples.Coldest {
		cold = min(cold, c)
	}
	for _, m := range p.Product.Foods() {
		at := 0.0
		if m.FreezingC != nil {
			at = *m.FreezingC
		}
		if cold <= at && (m.EnthalpyJkg != nil) == calculated {
			return []any{h.temperature(cold, down), h.stated(at)}, true
		}
	}
	return nil, false
}

// muchFatPc is how much fat, %, is worth a number (our own judgement).
const muchFatPc = 10

// fatty: a food with much fat that passes, by more than 5 K, temperatures at which fat melts; of several the one with most.
func fatty(h *Head, p *Product) ([]any, bool) {
	if p.History == nil || p.History.Recorded {
		return nil, false
	}
	var most *model.Material
	for _, m := range p.Product.Foods() {
		if m.Composed && m.FatPc >= muchFatPc && (most == nil || m.FatPc > most.FatPc) {
			most = m
		}
	}
	low, high := math.Inf(1), math.Inf(-1)
	for i := range p.Samples.Coldest {
		low, high = min(low, p.Samples.Coldest[i]), max(high, p.Samples.Hottest[i])
	}
	if most == nil || min(high, 40)-max(low, 0) <= 5 {
		return nil, false
	}
	const leastJg, mostJg = 100.0, 180.0 // from memory
	heat := func(jg float64) float64 { return most.FatPc / 100 * jg * 1000 }
	inK := heat(mostJg) / most.Props(20).CJkgK
	return []any{most.Name, plain(most.FatPc, 0, nearest), plain(heat(leastJg)/1000, 0, nearest), plain(heat(mostJg)/1000, 0, nearest), h.difference(inK, nearest)}, true
}

// touching: layers between which no contact resistance was given.
func touching(h *Head, p *Product) ([]any, bool) {
	var joints []string
	for i := 0; i+1 < len(p.Product.Layers); i++ {
		if p.Product.Layers[i].BelowM2KW == 0 {
			joints = append(joints, say("joint", i+1, i+2))
		}
	}
	return []any{strings.Join(joints, ", ")}, len(joints) > 0
}

// shrinks: a step that cooks food that holds water.
func shrinks(h *Head, p *Product) ([]any, bool) {
	moist := func(m *model.Material) bool { return !m.Waterless }
	cooks := func(sp model.Span) bool { return sp.Step != nil && sp.Step.Stage == model.Cook }
	return nil, p.History != nil && !p.History.Recorded && !p.Product.Shape.Mixed() && slices.ContainsFunc(p.History.Spans, cooks) &&
		slices.ContainsFunc(p.Product.Foods(), moist)
}

// sparse: a record whose readings are more than five minutes apart somewhere. The times of a scan hold the changes of step as
// well, which may cut a gap in two, so it is looked at without them too.
func sparse(h *Head, p *Product) ([]any, bool) {
	if p.History == nil || !p.History.Recorded || p.History.Scan() == nil {
		return nil, false
	}
	bounds := map[float64]bool{}
	for _, sp := range p.History.Spans {
		bounds[sp.StartS], bounds[sp.EndS] = true, true
	}
	gap := widestGap(p.History.Scan().TimesS, nil)
	if cut := widestGap(p.History.Scan().TimesS, bounds); cut > 600 { // a reading at a change of step is taken out as well: two intervals of five minutes
		gap = max(gap, cut)
	}
	return []any{duration(gap, up)}, gap > 300
}

// widestGap is the longest way from one time to the next, s, without those in out.
func widestGap(times []float64, out map[float64]bool) float64 {
	gap, before := 0.0, math.NaN()
	for _, t := range times {
		if out[t] {
			continue
		}
		if t-before > gap {
			gap = t - before
		}
		before = t
	}
	return gap
}

// errorWords writes an error estimate, rounded up.
func (h *Head) errorWords(k float64) string {
	decimals := 1
	if k < 0.1 {
		decimals = 3
	}
	return h.first(plain(k, decimals, up)+" °C", plain(differenceF.Out(k), decimals, up)+" °F")
}
