package workbook

import (
	"strconv"
	"strings"
	"unicode"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// process is the chain of steps that products share.
type process struct {
	name  string
	steps []*step
	by    map[string]*step
	used  bool
	whole []model.Step // of a product without rows of its own; made once
	parts [][]echoes
}

// step is a row of Steps.
type step struct {
	model.Step
	line   *Line
	course *course
	faces  []*face // of all products
}

// readSteps reads the sheet Steps into processes and rows of single products.
func (r *reader) readSteps() {
	r.processes = map[string]*process{}
	t := r.tables["Steps"]
	if t == nil {
		return
	}
	users := r.users
	for i, l := range t.lines {
		procName, prodName := l.Words("Process"), l.Words("Product")
		s := r.readStep(l)
		if procName == "" {
			r.orphan(t, i, users)
			continue
		}
		pr := r.process(procName)
		pr.used = users[Key(procName)] != nil
		if !pr.used && !r.blind() {
			near := r.near(procName, func() []string { return names(r.products, func(p *product) string { return p.Process }) })
			offer := ""
			if near != "" {
				offer = "; did you mean " + near + "?"
			}
			l.Fault("Process", procName, processUnused, offer)
			switch {
			case near != "": // a misspelt row would be missing from its chain
				for _, p := range users[Key(near)] {
					p.suffer(l.because)
				}
			case r.offers > mostOffers && len(r.unread["Steps"]) == 0: // nobody looks any more whose rows these are
				r.unread["Steps"] = l.because
			}
		}
		k := Key(s.Name)
		if prodName != "" {
			r.stepOfProduct(l, pr, s, prodName)
			continue
		}
		if first := pr.by[k]; first != nil && s.Name != "" {
			l.Fault("Step", s.Name, stepTwice, procName, strconv.Itoa(first.At.Row))
		} else {
			pr.by[k] = s
		}
		if len(pr.steps) == mostSteps {
			l.Fault("Process", procName, tooManySteps, strconv.Itoa(mostSteps))
			pr.steps[0].line.suffer(l.because)
		}
		if len(pr.steps) < mostSteps {
			pr.steps = append(pr.steps, s)
		}
	}
	for _, p := range r.products {
		p.suffer(r.unread["Steps"])
	}
	for _, l := range t.lines {
		l.row.Cells = nil // everything has been read; this is most of a large plan
	}
}

// mostSteps is how many steps a process may have.
const mostSteps = 1000

func (r *reader) processNames() []string {
	return names(r.order, func(p *process) string { return p.name })
}

func (pr *process) stepNames() []string {
	return names(pr.steps, func(s *step) string { return s.Name })
}

func (r *reader) process(name string) *process {
	pr := r.processes[Key(name)]
	if pr == nil {
		pr = &process{name: name, by: map[string]*step{}}
		r.processes[Key(name)] = pr
		r.order = append(r.order, pr)
	}
	return pr
}

// orphan refuses the products of the processes above and below a row without a process: it may belong to either.
func (r *reader) orphan(t *table, i int, users map[string][]*product) {
	h := t.place["Process"]
	for _, way := range []int{-1, 1} {
		for j := i + way; j >= 0 && j < len(t.lines) && (j-i)*way <= 100; j += way {
			if e := t.lines[j].row.at(h.col); e.Kind != Blank {
				for _, p := range users[Key(e.Text)] {
					p.suffer(t.lines[i].because)
				}
				break
			}
		}
	}
}

// productOf finds the product that a row of a process names, and says so where there is none or where it goes through another process.
func (r *reader) productOf(l *Line, pr *process, name string) *product {
	p := r.byName[Key(name)]
	switch {
	case p == nil:
		l.Fault("Product", name, productUnknown, r.offer(name, r.productNames))
		r.concern(pr, "", l.because) // whose row it is is not known: without it any product of the process may be wrong
	case Key(p.Process) != Key(pr.name):
		l.Fault("Product", name, otherProcess, strconv.Quote(p.Process))
	}
	return p
}

// stepOfProduct keeps a row that replaces a step for one product.
func (r *reader) stepOfProduct(l *Line, pr *process, s *step, name string) {
	p := r.productOf(l, pr, name)
	if p == nil {
		return
	}
	if first := p.own[Key(s.Name)]; first != nil && Key(p.Process) == Key(pr.name) {
		l.Fault("Step", s.Name, stepTwice, pr.name+" for this product", strconv.Itoa(first.At.Row))
	}
	if p.own == nil {
		p.own = map[string]*step{}
	}
	p.own[Key(s.Name)] = s
	p.suffer(l.because)
}

// readStep reads one row of Steps.
func (r *reader) readStep(l *Line) *step {
	s := &step{line: l}
	s.Name = l.Words("Step")
	s.Stage = l.stage("Stage")
	if v := l.Number("Duration"); v != nil {
		s.DurationS = *v
	}
	s.UntilC = l.Number("Until slowest point reaches")
	s.course = r.exposure(l, &s.Exposure, s.DurationS)
	s.Equipment, s.Load, s.Note = l.Words("Equipment"), l.Words("Load"), l.Words("Note")
	l.quick(&s.Exposure, s)
	if s.Equipment != "" {
		l.refused("Equipment", s.Equipment)
	}
	l.refusedName("Step", s.Name)
	l.refusedName("Process", l.Entry("Process").Text)
	if no := processIn(s.Note, true); no != nil {
		l.Remark(cell.Warning, "Note", s.Note, processNamed, no.Why, no.Instead)
	}
	s.AltitudeM = r.plan.AltitudeM
	return s
}

// mostOfAir is the highest film coefficient that air of a chiller, a freezer or a room gives, W/(m²·K): published totals for blown air end
// at 48, see publishedFilms; the rest is room (common practice, no source).
const mostOfAir = 60

// quicker are beginnings of words for what takes heat faster than air does.
var quicker = []string{"water", "bath", "ice", "icy", "slurry", "spray", "plate", "brine", "immers", "sink", "shower", "drench", "hydro", "jacket", "contact",
	"glycol", "nitrogen", "cryo", "co2", "imping"}

// quick warns of a film coefficient that air does not reach, where food cools or stands and nothing speaks of water, plates or sprays.
func (l *Line) quick(x *model.Exposure, s *step) {
	inAir := x.Surface.Air()
	if x.FilmW == nil || *x.FilmW <= mostOfAir || usualFilm.outside(*x.FilmW) || s.Stage == nil || !x.Surface.FilmTyped() && !inAir {
		return
	}
	switch s.Stage {
	case model.Cool, model.Rest, model.Store, model.HoldCold, model.Freeze:
	default:
		return
	}
	said := Key(s.Name + " " + s.Equipment + " " + s.Note)
	for _, w := range strings.FieldsFunc(said, func(c rune) bool { return !unicode.IsLetter(c) && !unicode.IsDigit(c) }) {
		for _, q := range quicker {
			if !inAir && strings.HasPrefix(w, q) && w != "plated" {
				return
			}
		}
	}
	c := l.t.sheet.Column("Film coefficient")
	l.Remark(cell.Warning, "Film coefficient", l.Entry("Film coefficient").Text, filmOfWater, c.shown(*x.FilmW), s.Stage.Name, strconv.Itoa(mostOfAir))
}

// stage reads the word of one stage.
func (l *Line) stage(heading string) *model.Stage {
	e := l.Entry(heading)
	for _, s := range model.Stages {
		if e.Kind == Text && (Key(e.Text) == Key(s.Name) || s.Also != "" && Key(e.Text) == Key(s.Also)) {
			l.note(heading, e.Text, s.Name, "")
			return s
		}
	}
	if e.Kind == Text && l.refused(heading, e.Text) {
		return nil
	}
	l.Choice(heading) // tells what is wrong
	return nil
}

// refused tells whether a word names a process that conduction does not describe, and says so.
func (l *Line) refused(heading, typed string) bool {
	if no := processIn(typed, false); no != nil {
		l.Fault(heading, typed, processRefused, no.Why, no.Instead)
		return true
	}
	return false
}

// refusedName does the same for what a process or a step is called. Baking is a warning there: a pie or a pasta bake is called so too.
func (l *Line) refusedName(heading, typed string) {
	switch no := processIn(typed, true); {
	case no == nil:
	case strings.Contains(no.Words, "baking"):
		l.Remark(cell.Warning, heading, typed, processNamed, no.Why, no.Instead)
	default:
		l.Fault(heading, typed, processRefused, no.Why, no.Instead)
	}
}

// processIn finds the process among model.Refusals that a text names; nil if there is none. Blanks and hyphens within a word do not matter.
// In a name or a note, one that is ruled out or that came before is passed over: not microwaved, standing after the fryer.
func processIn(typed string, passing bool) *model.Refusal {
	if typed == "" {
		return nil
	}
	words := strings.FieldsFunc(Key(typed), func(c rune) bool { return !('a' <= c && c <= 'z') })
	for k := range words {
		if passing && k > 0 && (aside[words[k-1]] || k > 1 && (words[k-1] == "the" || words[k-1] == "deep") && aside[words[k-2]]) {
			continue
		}
		said := words[k]
		for j := k; ; {
			if no := refusedWords[said]; no != nil && !(j+1 < len(words) && harmless[words[j+1]]) {
				return no
			}
			if j++; j == len(words) || len(said) > longestRefused {
				break
			}
			said += words[j]
		}
	}
	return nil
}

// refusedWords are the words of model.Refusals without blanks, and what they become in a sentence: microwaves, microwaved, microwaving.
var refusedWords, longestRefused = func() (map[string]*model.Refusal, int) {
	all, longest := map[string]*model.Refusal{}, 0
	for i := range model.Refusals {
		for _, w := range strings.Split(model.Refusals[i].Words, ", ") {
			w = strings.ReplaceAll(w, " ", "")
			for _, form := range []string{w, w + "s", w + "d", w + "ed", strings.TrimSuffix(w, "e") + "ing"} {
				all[form] = &model.Refusals[i]
				longest = max(longest, len(form))
			}
		}
	}
	return all, longest
}()

// aside are words before a word of model.Refusals that rule it out, or put it before or after what is typed.
var aside = map[string]bool{"no": true, "not": true, "non": true, "never": true, "without": true, "after": true, "before": true}

// harmless words behind a word of model.Refusals name packs and tools, not the process: a vacuum bag, a baking tray.
var harmless = map[string]bool{"bag": true, "bags": true, "pack": true, "packs": true, "packed": true, "packaged": true, "packaging": true, "pouch": true, "pouches": true,

	"seal": true, "sealed": true, "skin": true, "tumble": true, "tumbled": true, "tumbler": true, "tumbling": true, "filled": true, "filler": true, "filling": true,
	"meal": true, "meals": true, "safe": true, "proof": true, "sealing": true, "packing": true, "sealer": true, "wrapped": true, "tray": true, "trays": true, "sheet": true, "sheets": true, "paper": true, "tin": true, "tins": true, "dish": true, "parchment": true}

// exposure reads the surroundings columns of Steps or Faces. The course is nil if none is named or it is not known.
func (r *reader) exposure(l *Line, x *model.Exposure, durationS float64) *course {
	x.At = l.Ref()
	e := l.Entry("Surroundings")
	if e.Kind != Text || !l.refused("Surroundings", e.Text) {
		if w := l.Choice("Surroundings"); w != "" {
			for _, s := range model.Surfaces {
				if s.Name == w {
					x.Surface = s
				}
			}
		}
	}
	c := r.medium(l, x, durationS)
	x.FilmW, x.AirMS, x.RH = l.Number("Film coefficient"), l.Number("Air speed"), l.Number("Relative humidity")
	if x.RH != nil && x.Medium.RH != nil {
		l.Fault("Relative humidity", l.Entry("Relative humidity").Text, bothHumid, l.Words("Course"))
	}
	x.RadiatingC, x.Emissivity = l.Number("Radiating temperature"), l.Number("Emissivity")
	x.WrapM2KW = l.Number("Wrap resistance")
	if w := l.Choice("Surface"); w != "" {
		wet := w == "wet"
		x.Wet = &wet
	}
	if w := l.Choice("Cover"); w != "" {
		for _, k := range model.Covers {
			if k.Name == w {
				x.Cover = k
			}
		}
	}
	if x.Surface != nil {
		fits(l, x)
	}
	return c
}

// medium reads Temperature or Course, and what kind of temperature it is.
func (r *reader) medium(l *Line, x *model.Exposure, durationS float64) *course {
	typed, name := l.Value("Temperature"), l.Words("Course")
	if c := r.courses[Key(name)]; c != nil {
		c.used = true
	}
	if !l.Filled("Temperature is") {
		if typed != nil || name != "" {
			l.note("Temperature is", "", "set-point", "blank: a set-point is taken")
		}
	}
	x.Measured = l.Choice("Temperature is") == "measured"
	if x.Surface != nil && x.Surface.NoMedium {
		for _, h := range []string{"Temperature", "Course", "Temperature is"} {
			if l.Filled(h) {
				l.Fault(h, l.Entry(h).Text, mediumUnused, x.Surface.Name)
			}
		}
		return nil
	}
	switch {
	case l.Filled("Temperature") && l.Filled("Course"):
		l.Fault("Course", name, bothMedia, l.Entry("Temperature").Text)
	case typed != nil:
		x.Medium = model.Course{TimesS: []float64{0}, C: []float64{typed.Computed}}
	case name != "":
		c := r.courses[Key(name)]
		if c == nil && len(r.unread["Courses"]) > 0 {
			l.suffer(r.unread["Courses"])
			return nil
		}
		if c == nil {
			offer := ""
			if near := r.near(name, r.courseNames); near != "" {
				offer = "; did you mean " + near + "?"
				r.courses[Key(near)].used = true // as it seems
			}
			l.Fault("Course", name, courseUnknown, offer)
			return nil
		}
		l.suffer(c.because)
		x.Medium = c.cut(l, durationS)
		return c
	case !l.Filled("Temperature") && !l.Filled("Course") && x.Surface != nil:
		l.Fault("Temperature", "", noMedium, x.Surface.Name)
	}
	return nil
}

// fits holds the filled columns against what the surroundings need and may have.
func fits(l *Line, x *model.Exposure) {
	s := x.Surface
	lists := func(list []string, h string) bool {
		for _, n := range list {
			if n == h {
				return true
			}
		}
		return false
	}
	for _, h := range []string{"Film coefficient", "Air speed", "Relative humidity", "Wrap resistance"} {
		switch given := l.Filled(h); {
		case given && !lists(s.Needs, h) && !lists(s.May, h):
			l.Fault(h, l.Entry(h).Text, columnUnused, s.Name, h)
		case !given && lists(s.Needs, h) && !(h == "Air speed" && l.Filled("Film coefficient")):
			l.Fault(h, "", columnNeeded, h, s.Name, published(s, h))
		}
	}
	mayWrap := lists(s.Needs, "Wrap resistance") || lists(s.May, "Wrap resistance")
	for _, h := range []string{"Radiating temperature", "Emissivity", "Surface", "Cover"} {
		if l.Filled(h) && (!mayWrap || h == "Surface" && !lists(s.May, "Relative humidity")) {
			l.Fault(h, l.Entry(h).Text, columnUnused, s.Name, h)
		}
	}
	switch {
	case x.Cover == model.LooseLid && !l.Filled("Wrap resistance"):
		l.Fault("Wrap resistance", "", looseLid)
	case x.Cover == model.TightWrap && mayWrap && x.FilmW != nil && !l.Filled("Wrap resistance"):
		l.note("Wrap resistance", "", "0 m²·K/W", "blank: the film coefficient stands for the wrap too")
	case x.Cover == model.TightWrap && mayWrap && !l.Filled("Wrap resistance"):
		l.note("Wrap resistance", "", "0 m²·K/W", "blank: the tight wrap is taken without a resistance of its own")
		l.r.wraps.count(l.At("Cover"))
	case x.Cover == model.Open && l.Filled("Wrap resistance"):
		l.Fault("Wrap resistance", l.Entry("Wrap resistance").Text, openWithWrap)
	case x.Cover == nil && x.WrapM2KW == nil && mayWrap && !l.Filled("Cover"):
		l.note("Cover", "", model.Open.Name, "blank: nothing lies between")
	}
}

// published words what is known of a missing value, the low end first.
func published(s *model.Surface, heading string) string {
	switch {
	case heading == "Air speed":
		return publishedSpeeds
	case heading == "Film coefficient" && s.Published != "":
		return s.Published
	case heading == "Film coefficient":
		return publishedFilms
	}
	return "fill it"
}
