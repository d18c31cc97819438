package main

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// leverPlans is the largest plan for which it is looked for what would meet the limits that are not met: it costs some dozens of runs
// a product.
const leverPlans = 100

// leverLeast is the smallest share of the size that is tried, in leverSteps steps that grow.
const (
	leverLeast = 0.3
	leverSteps = 8
)

// leverMost is how many times its present time a step is tried to last, and leverWarmerK how much warmer it is tried to end.
const (
	leverMost    = 4.0
	leverWarmerK = 20.0
)

// leverColdestC is the coldest medium that is tried for chilling, °C: below it the surface freezes, which is not calculated.
const leverColdestC = 0.0

// change is one thing that could be changed, by whole steps in the user's own unit.
type change struct {
	what string                           // "thickness", "cook", "blast chill in"
	from string                           // as it is now
	to   func(n int) string               // as it would be after n steps
	set  func(p *workbook.Product, n int) // makes it so; p is a copy whose steps may be changed
	most int                              // the largest number of steps
	far  string                           // how far was tried, in words
	try  []int                            // rising numbers of steps at which to look, since what meets the limits need not go on meeting them
	aims func(l *rules.Limit) bool        // the limits that it is meant for; nil: all
}

// lever says, for a product with a limit that is not met, which single change would meet its limits in the model with everything else
// unchanged: a smaller size; for heating, a longer step or one that ends warmer; for chilling, a colder medium. It says so too where
// none does. Limits that none of the changes bears on, such as a question that is not answered, are left out of that and named.
// "" if that was not looked for. Sizes are rounded down, times up, temperatures of chilling down: to the safe side.
func (r *runner) lever(p *workbook.Product, now *report.Product) string {
	if now.Judgement.Verdict != rules.NotMet || len(r.plan.Products) > leverPlans {
		return ""
	}
	found := r.tryAll(p, now)
	fixed := found.fixed(now)
	if len(fixed) > 0 { // look again, at the others
		others := r.without(fixed)
		found = tried{}
		if rest, err := others.judged(p); err == nil && rest.Judgement.Verdict == rules.NotMet {
			found = others.tryAll(p, rest)
		}
	}
	return leverWords(found.every, found.some, found.none, fixedWords(fixed))
}

// tried is what came of the changes.
type tried struct {
	every, some, none []string // changes that meet every limit, those they aim at, none; in words
	moved             map[*rules.Limit]bool
	any               bool // something was tried
}

// tryAll tries every change that is worth it.
func (r *runner) tryAll(p *workbook.Product, now *report.Product) tried {
	t := tried{moved: map[*rules.Limit]bool{}}
	for _, c := range r.changes(p, now) {
		missed := missedOf(now, c.aims)
		n, all := r.search(p, now, &c, t.moved)
		t.any = true
		switch words := fmt.Sprintf("%s %s → ", c.what, c.from); {
		case n == 0:
			t.none = append(t.none, c.far)
		case all:
			t.every = append(t.every, words+c.to(n))
		default:
			t.some = append(t.some, fmt.Sprintf("%s%s would meet %s", words, c.to(n), quoted(missed)))
		}
	}
	return t
}

// fixed are the findings on limits that must be met, are not, and stayed just as they are whatever was tried.
func (t *tried) fixed(now *report.Product) []*rules.Finding {
	var out []*rules.Finding
	for i := range now.Judgement.Findings {
		if f := &now.Judgement.Findings[i]; t.any && missed(f) && !t.moved[f.Limit] {
			out = append(out, f)
		}
	}
	return out
}

// without is the same job without some limits.
func (r *runner) without(fixed []*rules.Finding) *runner {
	plan := *r.plan
	plan.Limits = nil
	for i := range r.plan.Limits {
		l := &r.plan.Limits[i]
		if !slices.ContainsFunc(fixed, func(f *rules.Finding) bool { return f.Limit == l }) {
			plan.Limits = append(plan.Limits, *l)
		}
	}
	return &runner{plan: &plan, head: r.head, options: r.options}
}

// moves notes the limits of which a change says anything else than before.
func moves(before, after *report.Product, moved map[*rules.Limit]bool) {
	differ := func(a, b *float64) bool {
		return (a == nil) != (b == nil) || a != nil && math.Abs(*a-*b) > 1e-6*(1+math.Abs(*a)) // beyond the last digits
	}
	for i := range before.Judgement.Findings {
		f := &before.Judgement.Findings[i]
		for k := range after.Judgement.Findings {
			if g := &after.Judgement.Findings[k]; g.Limit == f.Limit {
				moved[f.Limit] = moved[f.Limit] || g.Verdict != f.Verdict || g.Level != f.Level || differ(f.Value, g.Value) || differ(f.MarginK, g.MarginK) || differ(f.MarginS, g.MarginS)
			}
		}
	}
}

// fixedWords says of limits that nothing tried bears on how they stand; "" for none.
func fixedWords(fixed []*rules.Finding) string {
	var order []string
	names := map[string][]string{}
	for _, f := range fixed {
		why := "cannot be judged whatever of this is changed"
		switch {
		case f.Verdict == rules.NotMet && f.Limit.Kind == rules.Stated:
			why = "stays not met as long as its answer stands"
		case f.Verdict == rules.NotMet:
			why = "stays not met whatever of this is changed"
		case f.Limit.Kind == rules.Stated && f.Limit.Unreadable == "":
			why = "cannot be judged until it is answered"
		case len(f.Limit.Faults()) > 0:
			why = "cannot be judged until its row is mended"
		}
		if names[why] == nil {
			order = append(order, why)
		}
		names[why] = append(names[why], f.Limit.Name)
	}
	var s []string
	for _, why := range order {
		many := names[why]
		if len(many) > 1 {
			why = strings.NewReplacer("it is answered", "they are answered", "its row is", "their rows are", "stays", "stay", "its answer stands", "their answers stand").Replace(why)
		}
		s = append(s, named(many)+" "+why)
	}
	return strings.Join(s, "; ")
}

// named names limits, up to three of them.
func named(names []string) string {
	const most = 3
	var s []string
	for _, n := range names[:min(len(names), most)] {
		s = append(s, "\""+n+"\"")
	}
	if more := len(names) - most; more > 0 {
		s = append(s, count(more, "further limit"))
	}
	if len(s) == 1 {
		return s[0]
	}
	return strings.Join(s[:len(s)-1], ", ") + " and " + s[len(s)-1]
}

// leverWords puts together what was found; fixed is what stays open whatever is changed.
func leverWords(every, some, none []string, fixed string) string {
	const unchanged = "With everything else unchanged, "
	limits := "limit"
	if fixed != "" {
		limits, fixed = "other limit", "; "+fixed
	}
	var s []string
	switch {
	case len(every) == 1:
		s = append(s, unchanged+every[0]+" would meet every "+limits+" in the model"+fixed+".")
	case len(every) > 1:
		s = append(s, unchanged+"each of these alone would meet every "+limits+" in the model"+fixed+": "+strings.Join(every, "; ")+".")
	}
	but := ", but not every " + limits
	switch {
	case len(some) > 0 && len(s) == 0:
		s = append(s, unchanged+strings.Join(some, but+"; ")+but+fixed+".")
	case len(some) > 0:
		s = append(s, "Alone, "+strings.Join(some, but+"; ")+but+".")
	}
	switch {
	case len(none) == 0:
	case len(s) == 0:
		s = append(s, unchanged+"nothing that was tried meets the "+limits+"s in the model"+fixed+": "+strings.Join(none, ", ")+". Look at times, temperatures and air together.")
	default:
		s = append(s, "Not enough alone: "+strings.Join(none, ", ")+".")
	}
	if len(s) == 0 && fixed != "" {
		return "No single change of a size, a heating or a chilling helps: " + strings.TrimPrefix(fixed, "; ") + "."
	}
	return strings.Join(s, " ")
}

// missed tells whether a finding stands against a product.
func missed(f *rules.Finding) bool {
	return f.Level == "must" && f.Verdict != rules.Met && f.Verdict != rules.NotApplicable
}

// missedOf are the names of limits of a sort that must be met and are not.
func missedOf(d *report.Product, aims func(*rules.Limit) bool) []string {
	var names []string
	for i := range d.Judgement.Findings {
		f := &d.Judgement.Findings[i]
		if missed(f) && (aims == nil || aims(f.Limit)) && !slices.Contains(names, f.Limit.Name) {
			names = append(names, f.Limit.Name)
		}
	}
	return names
}

// quoted names the first of some limits and counts the others.
func quoted(names []string) string {
	if len(names) == 1 {
		return "\"" + names[0] + "\""
	}
	return "\"" + names[0] + "\" and " + count(len(names)-1, "further limit")
}

// changes are what is worth trying for the limits that are not met.
func (r *runner) changes(p *workbook.Product, now *report.Product) []change {
	var out []change
	if c, ok := smaller(p); ok {
		out = append(out, c)
	}
	hot, cold := false, false
	for i := range now.Judgement.Findings {
		f := &now.Judgement.Findings[i]
		if f.Level != "must" || f.Verdict != rules.NotMet {
			continue
		}
		if heats(f.Limit) && !hot {
			if c, ok := r.longer(p, now.History, f.Limit); ok {
				out, hot = append(out, c), true
			}
		}
		if cools(f.Limit) && !cold {
			if c, ok := r.colder(p, f.Limit); ok {
				out, cold = append(out, c), true
			}
		}
	}
	return out
}

// search finds the least number of steps of a change at which the limits that it aims at are met and none that was met is lost; 0 if
// there is none. all tells whether every limit is met then; moved notes the limits that the change bears on.
func (r *runner) search(p *workbook.Product, now *report.Product, c *change, moved map[*rules.Limit]bool) (n int, all bool) {
	meets := func(k int, o model.Options) bool {
		q := *p
		q.Steps = slices.Clone(p.Steps)
		c.set(&q, k)
		d, err := r.judgedBy(&q, o)
		if err != nil {
			return false
		}
		moves(now, d, moved)
		all = d.Judgement.Verdict == rules.Met
		return all || c.aims != nil && len(missedOf(d, c.aims)) == 0 && keeps(now, d)
	}
	look := model.Options{Rough: true}
	bad, good := 0, 0
	for _, k := range c.try {
		if k = min(k, c.most); k > bad {
			if meets(k, look) {
				good = k
				break
			}
			bad = k
		}
	}
	if good == 0 {
		return 0, false
	}
	for good-bad > 1 {
		if mid := (good + bad) / 2; meets(mid, look) {
			good = mid
		} else {
			bad = mid
		}
	}
	first := good
	for ; good <= c.most; good++ { // what is named is confirmed by the run that counts
		if meets(good, model.Options{}) {
			break
		}
	}
	if good > c.most {
		return 0, false
	}
	every := all
	if good == first { // a first look errs, mostly on the safe side
		for good > 1 && meets(good-1, model.Options{}) {
			good, every = good-1, all
		}
	}
	return good, every
}

// keeps tells whether every limit that was met still is.
func keeps(before, after *report.Product) bool {
	lost := missedOf(after, nil)
	for i := range before.Judgement.Findings {
		if f := &before.Judgement.Findings[i]; f.Verdict == rules.Met && f.Level == "must" && slices.Contains(lost, f.Limit.Name) {
			return false
		}
	}
	return true
}

// smaller is a smaller governing size: whole millimetres or, where it was typed in inches, twentieths of an inch.
func smaller(p *workbook.Product) (change, bool) {
	const inch = 0.0254 // m
	name, size := governing(&p.Product)
	if size == nil {
		return change{}, false
	}
	unit, symbol, decimals := 0.001, " mm", 1.0
	if p.Inches {
		unit, symbol, decimals = inch/20, " in", 20
	}
	top := math.Ceil(*size/unit - 1e-9) // the next whole step that is not smaller than the present size
	at := func(n int) float64 { return (top - float64(n)) * unit }
	c := change{what: name, from: trimmed(*size/unit/decimals) + symbol, most: int(top) - 1,
		far: fmt.Sprintf("a smaller %s down to %.0f %%", name, 100*leverLeast),
		to: func(n int) string {
			if p.Inches {
				return fmt.Sprintf("%s in (%s mm)", trimmed(at(n)/inch), trimmed(math.Floor(at(n)*1e4+1e-6)/10))
			}
			return trimmed(at(n)*1000) + symbol
		},
		set: func(q *workbook.Product, n int) {
			_, z := governing(&q.Product)
			*z = at(n)
			q.Points = nil // they may lie outside the smaller piece; a limit on one of them then cannot be told
		}}
	for k := 1; k <= leverSteps; k++ { // downwards, since a very small piece loses the heat that it carries over
		share := 1 - (1-leverLeast)*float64(k*k)/(leverSteps*leverSteps)
		c.try = append(c.try, int(top-math.Floor(*size/unit*share)))
	}
	return c, true
}

// heats tells whether a limit asks for heat that a longer heating may give.
func heats(l *rules.Limit) bool {
	switch l.Kind {
	case rules.Hold, rules.ByTheEnd:
		return l.FromC != nil
	case rules.HoldTable, rules.Lethality, rules.HeatWithin:
		return true
	}
	return false
}

// cools tells whether a limit asks for a chilling that a colder medium may hasten.
func cools(l *rules.Limit) bool {
	switch l.Kind {
	case rules.CoolWithin, rules.Band:
		return true
	case rules.ByTheEnd, rules.StayBelow:
		return l.ToC != nil
	}
	return false
}

// longer is a longer heating: of the last heating step that a limit is about, or one that ends at a higher temperature where that is
// what ends it. Times are whole minutes, temperatures whole degrees of the user's own scale.
func (r *runner) longer(p *workbook.Product, h *model.History, l *rules.Limit) (change, bool) {
	i := lastStep(p.Steps, l, func(s *model.Step) bool { return s.Stage != nil && s.Stage.Heats })
	if i < 0 {
		i = lastStep(p.Steps, nil, func(s *model.Step) bool { return s.Stage == model.Cook })
	}
	if i < 0 || i >= len(h.Spans) {
		return change{}, false
	}
	s := &p.Steps[i]
	if reached := h.Spans[i].Reached; s.UntilC != nil && reached != nil && *reached {
		step := r.degree()
		top := int(leverWarmerK / step)
		at := func(n int) float64 { return r.onScale(*s.UntilC, math.Floor) + float64(n)*step }
		return change{what: s.Name + " until", from: r.degrees(*s.UntilC, false), most: top, aims: heats,
			far: fmt.Sprintf("%s until up to %s", s.Name, r.degrees(at(top), false)), try: []int{2, 4, 7, 12, top},
			to:  func(n int) string { return r.degrees(at(n), true) },
			set: func(q *workbook.Product, n int) { c := at(n); q.Steps[i].UntilC = &c }}, true
	}
	least := math.Floor(s.DurationS / 60)
	most := int(math.Ceil(least*(leverMost-1))) + 5
	c := change{what: s.Name, from: minutes(s.DurationS), most: most, aims: heats,
		far: fmt.Sprintf("%s up to %s", s.Name, minutes((least+float64(most))*60)),
		to:  func(n int) string { return minutes((least + float64(n)) * 60) },
		set: func(q *workbook.Product, n int) { q.Steps[i].DurationS = (least + float64(n)) * 60 }}
	for _, share := range []float64{0.06, 0.15, 0.3, 0.6, 1} {
		c.try = append(c.try, int(math.Ceil(share*float64(most))))
	}
	return c, true
}

// colder is a colder medium in the first chilling step that a limit is about, in whole degrees of the user's own scale.
func (r *runner) colder(p *workbook.Product, l *rules.Limit) (change, bool) {
	i := slices.IndexFunc(p.Steps, func(s model.Step) bool { return s.Stage == model.Cool && about(l, &s) })
	if i < 0 || len(p.Steps[i].Medium.C) != 1 {
		return change{}, false
	}
	s, step := &p.Steps[i], r.degree()
	nowC := s.Medium.C[0]
	top := r.onScale(nowC, math.Ceil)
	most := int(math.Floor((top-leverColdestC)/step + 1e-9))
	if most < 1 {
		return change{}, false
	}
	at := func(n int) float64 { return top - float64(n)*step }
	constant := func(e *model.Exposure, c float64) {
		if len(e.Medium.C) == 1 && e.Medium.C[0] == nowC {
			e.Medium.C = []float64{c}
		}
	}
	return change{what: s.Name + " in", from: r.degrees(nowC, false), most: most, aims: cools,
		far: fmt.Sprintf("%s in as little as %s", s.Name, r.degrees(at(most), false)), try: []int{most},
		to: func(n int) string { return r.degrees(at(n), true) },
		set: func(q *workbook.Product, n int) {
			constant(&q.Steps[i].Exposure, at(n))
			q.Steps[i].Faces = slices.Clone(q.Steps[i].Faces)
			for k := range q.Steps[i].Faces {
				constant(&q.Steps[i].Faces[k].Exposure, at(n))
			}
		}}, true
}

// lastStep is the last step that a limit is about and that is fit; -1 if there is none.
func lastStep(steps []model.Step, l *rules.Limit, fit func(*model.Step) bool) int {
	for i := len(steps) - 1; i >= 0; i-- {
		if fit(&steps[i]) && (l == nil || len(l.Stages) > 0 && about(l, &steps[i])) {
			return i
		}
	}
	return -1
}

// about tells whether a limit is about the stage of a step.
func about(l *rules.Limit, s *model.Step) bool {
	return len(l.Stages) == 0 || slices.Contains(l.Stages, s.Stage)
}

// degree is a degree of the user's own scale, K.
func (r *runner) degree() float64 {
	if r.head.Fahrenheit {
		return 1 / 1.8
	}
	return 1
}

// onScale rounds a temperature, °C, to a whole degree of the user's own scale.
func (r *runner) onScale(c float64, way func(float64) float64) float64 {
	if r.head.Fahrenheit {
		return (way(c*1.8+32) - 32) / 1.8
	}
	return way(c)
}

// degrees writes a temperature, °C, in the user's own scale, with the other in brackets if wanted.
func (r *runner) degrees(c float64, both bool) string {
	own, other := trimmed(c)+" °C", trimmed(c*1.8+32)+" °F"
	if r.head.Fahrenheit {
		own, other = other, own
	}
	if both {
		return own + " (" + other + ")"
	}
	return own
}

// trimmed writes a number with at most two decimals, and a true minus sign.
func trimmed(v float64) string {
	return strings.Replace(strconv.FormatFloat(math.Round(v*100)/100+0, 'f', -1, 64), "-", "−", 1)
}

// governing is the size that decides how fast heat gets in: the smaller of those that end in cooled faces. A layered slab has none of
// its own.
func governing(p *model.Product) (string, *float64) {
	z := &p.Size
	switch p.Shape {
	case model.Slab:
		return "thickness", &z.ThicknessM
	case model.Cylinder, model.Sphere:
		return "diameter", &z.DiameterM
	case model.Spheroid:
		if z.ThicknessM < z.DiameterM {
			return "thickness", &z.ThicknessM
		}
		return "diameter", &z.DiameterM
	case model.ShortCylinder:
		if z.LengthM < z.DiameterM {
			return "length", &z.LengthM
		}
		return "diameter", &z.DiameterM
	case model.Bar, model.Brick:
		name, s := "thickness", &z.ThicknessM
		if z.WidthM < *s {
			name, s = "width", &z.WidthM
		}
		if p.Shape == model.Brick && z.LengthM < *s {
			name, s = "length", &z.LengthM
		}
		return name, s
	}
	return "", nil
}
