package workbook

import (
	"sort"
	"strconv"
	"strings"

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
	parts [][]cell.Reading
}

// step is a row of Steps.
type step struct {
	model.Step
	line   *line
	course *course
	faces  []*face // of all products
}

// face is a row of Faces.
type face struct {
	model.FaceExposure
	line   *line
	course *course
}

// course is the rows of one name in Courses.
type course struct {
	model.Course
	because  cell.Errors
	readings []cell.Reading
	humid    int // rows with a relative humidity
	first    *line
}

// readCourses reads the sheet Courses; rows of one name make one course.
func (r *reader) readCourses() {
	r.courses = map[string]*course{}
	t := r.tables["Courses"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		name := l.words("Course")
		at, temp, rh := l.number("Time"), l.number("Temperature"), l.number("Relative humidity")
		if name == "" {
			continue
		}
		c := r.courses[key(name)]
		if c == nil {
			c = &course{Course: model.Course{Name: name}, first: l}
			r.courses[key(name)] = c
			if at != nil && *at != 0 {
				l.fault("Time", l.entry("Time").text, courseStart, name)
			}
		}
		n := len(c.TimesS)
		switch {
		case at == nil || temp == nil:
		case n > 0 && *at <= c.TimesS[n-1]:
			l.fault("Time", l.entry("Time").text, courseOrder, minutes(c.TimesS[n-1]))
		default:
			c.TimesS, c.C = append(c.TimesS, *at), append(c.C, *temp)
			if rh != nil {
				c.RH = append(c.RH, *rh)
			}
			if (len(c.RH) > 0) != (rh != nil) || rh != nil && len(c.RH) != len(c.C) {
				l.fault("Relative humidity", "", courseHumidity, name)
			}
		}
		reasons(&c.because, l.because)
		c.readings = append(c.readings, l.readings...)
	}
}

// minutes prints a duration for a message.
func minutes(s float64) string { return short(s/60) + " min" }

func (r *reader) courseNames() []string {
	var out []string
	for _, c := range r.courses {
		out = append(out, c.Name)
	}
	sort.Strings(out)
	return out
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
		procName, prodName := l.words("Process"), l.words("Product")
		s := r.readStep(l)
		if procName == "" {
			r.orphan(t, i, users)
			continue
		}
		pr := r.process(procName)
		pr.used = users[key(procName)] != nil
		if !pr.used && !r.blind() {
			near := r.near(procName, func() []string { return names(r.products, func(p *product) string { return p.Process }) })
			offer := ""
			if near != "" {
				offer = "; did you mean " + near + "?"
			}
			l.fault("Process", procName, processUnused, offer)
			switch {
			case near != "": // a misspelt row would be missing from its chain
				for _, p := range users[key(near)] {
					p.suffer(l.because)
				}
			case r.offers > mostOffers && len(r.unread["Steps"]) == 0: // nobody looks any more whose rows these are
				r.unread["Steps"] = l.because
			}
		}
		k := key(s.Name)
		if prodName != "" {
			r.stepOfProduct(l, pr, s, prodName)
			continue
		}
		if first := pr.by[k]; first != nil && s.Name != "" {
			l.fault("Step", s.Name, stepTwice, procName, strconv.Itoa(first.At.Row))
		} else {
			pr.by[k] = s
		}
		if len(pr.steps) == mostSteps {
			l.fault("Process", procName, tooManySteps, strconv.Itoa(mostSteps))
			pr.steps[0].line.suffer(l.because)
		}
		if len(pr.steps) < mostSteps {
			pr.steps = append(pr.steps, s)
		}
	}
	for _, p := range r.products {
		p.suffer(r.unread["Steps"])
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
	pr := r.processes[key(name)]
	if pr == nil {
		pr = &process{name: name, by: map[string]*step{}}
		r.processes[key(name)] = pr
		r.order = append(r.order, pr)
	}
	return pr
}

// orphan refuses the products of the processes above and below a row without a process: it may belong to either.
func (r *reader) orphan(t *table, i int, users map[string][]*product) {
	h := t.place["Process"]
	for _, way := range []int{-1, 1} {
		for j := i + way; j >= 0 && j < len(t.lines) && (j-i)*way <= 100; j += way {
			if e := t.lines[j].row.at(h.col); e.kind != blank {
				for _, p := range users[key(e.text)] {
					p.suffer(t.lines[i].because)
				}
				break
			}
		}
	}
}

// stepOfProduct keeps a row that replaces a step for one product.
func (r *reader) stepOfProduct(l *line, pr *process, s *step, name string) {
	p := r.byName[key(name)]
	switch {
	case p == nil:
		l.fault("Product", name, productUnknown, r.offer(name, r.productNames))
		return
	case key(p.Process) != key(pr.name):
		l.fault("Product", name, otherProcess, strconv.Quote(p.Process))
	case p.own[key(s.Name)] != nil:
		l.fault("Step", s.Name, stepTwice, pr.name+" for this product", strconv.Itoa(p.own[key(s.Name)].At.Row))
	}
	if p.own == nil {
		p.own = map[string]*step{}
	}
	p.own[key(s.Name)] = s
	p.suffer(l.because)
}

// readStep reads one row of Steps.
func (r *reader) readStep(l *line) *step {
	s := &step{line: l}
	s.Name = l.words("Step")
	s.Stage = l.stage("Stage")
	if v := l.number("Duration"); v != nil {
		s.DurationS = *v
	}
	s.UntilC = l.number("Until slowest point reaches")
	s.course = r.exposure(l, &s.Exposure, s.DurationS)
	s.Equipment, s.Load, s.Note = l.words("Equipment"), l.words("Load"), l.words("Note")
	if s.Equipment != "" {
		l.refused("Equipment", s.Equipment)
	}
	s.AltitudeM = r.plan.AltitudeM
	return s
}

// stage reads the word of one stage.
func (l *line) stage(heading string) *model.Stage {
	e := l.entry(heading)
	for _, s := range model.Stages {
		if e.kind == text && (key(e.text) == key(s.Name) || s.Also != "" && key(e.text) == key(s.Also)) {
			l.note(heading, e.text, s.Name, "")
			return s
		}
	}
	if e.kind == text && l.refused(heading, e.text) {
		return nil
	}
	l.choice(heading) // tells what is wrong
	return nil
}

// refused tells whether a word names a process that conduction does not describe, and says so.
func (l *line) refused(heading, typed string) bool {
	words := strings.FieldsFunc(key(typed), func(c rune) bool { return !('a' <= c && c <= 'z') })
	said := " " + strings.Join(words, " ") + " "
	for _, no := range model.Refusals {
		for _, w := range strings.Split(no.Words, ", ") {
			i := strings.Index(said, " "+w)
			if i < 0 {
				continue
			}
			rest := strings.Fields(said[i+1+len(w):])
			if len(rest) > 0 && harmless[rest[0]] || !strings.HasPrefix(said[i+1+len(w):], " ") && !strings.HasPrefix(said[i+1+len(w):], "s ") && !strings.HasPrefix(said[i+1+len(w):], "d ") {
				continue
			}
			l.fault(heading, typed, processRefused, no.Why, no.Instead)
			return true
		}
	}
	return false
}

// harmless words behind a word of model.Refusals name packs and tools, not the process: a vacuum bag, a baking tray.
var harmless = map[string]bool{"bag": true, "bags": true, "pack": true, "packs": true, "packed": true, "packaged": true, "packaging": true, "pouch": true, "pouches": true,
	"sealed": true, "sealer": true, "wrapped": true, "tray": true, "trays": true, "sheet": true, "sheets": true, "paper": true, "tin": true, "tins": true, "dish": true, "parchment": true}

// exposure reads the surroundings columns of Steps or Faces. The course is nil if none is named or it is not known.
func (r *reader) exposure(l *line, x *model.Exposure, durationS float64) *course {
	x.At = l.ref()
	e := l.entry("Surroundings")
	if e.kind != text || !l.refused("Surroundings", e.text) {
		if w := l.choice("Surroundings"); w != "" {
			for _, s := range model.Surfaces {
				if s.Name == w {
					x.Surface = s
				}
			}
		}
	}
	c := r.medium(l, x, durationS)
	x.FilmW, x.AirMS, x.RH = l.number("Film coefficient"), l.number("Air speed"), l.number("Relative humidity")
	x.RadiatingC, x.Emissivity = l.number("Radiating temperature"), l.number("Emissivity")
	x.WrapM2KW = l.number("Wrap resistance")
	if w := l.choice("Surface"); w != "" {
		wet := w == "wet"
		x.Wet = &wet
	}
	if w := l.choice("Cover"); w != "" {
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
func (r *reader) medium(l *line, x *model.Exposure, durationS float64) *course {
	typed, name := l.value("Temperature"), l.words("Course")
	if !l.filled("Temperature is") {
		if typed != nil || name != "" {
			l.note("Temperature is", "", "set-point", "blank: a set-point is taken")
		}
	}
	x.Measured = l.choice("Temperature is") == "measured"
	if x.Surface != nil && x.Surface.NoMedium {
		for _, h := range []string{"Temperature", "Course", "Temperature is"} {
			if l.filled(h) {
				l.fault(h, l.entry(h).text, mediumUnused, x.Surface.Name)
			}
		}
		return nil
	}
	switch {
	case l.filled("Temperature") && l.filled("Course"):
		l.fault("Course", name, bothMedia, l.entry("Temperature").text)
	case typed != nil:
		x.Medium = model.Course{TimesS: []float64{0}, C: []float64{typed.Computed}}
	case name != "":
		c := r.courses[key(name)]
		if c == nil && len(r.unread["Courses"]) > 0 {
			l.suffer(r.unread["Courses"])
			return nil
		}
		if c == nil {
			l.fault("Course", name, courseUnknown, r.offer(name, r.courseNames))
			return nil
		}
		l.suffer(c.because)
		x.Medium = c.cut(l, durationS)
		return c
	case !l.filled("Temperature") && !l.filled("Course") && x.Surface != nil:
		l.fault("Temperature", "", noMedium, x.Surface.Name)
	}
	return nil
}

// cut gives the part of a course that its step lasts; a course that is shorter is a fault, a longer one a note.
func (c *course) cut(l *line, durationS float64) model.Course {
	m := c.Course
	n := len(m.TimesS)
	if n == 0 || durationS <= 0 || len(c.because) > 0 {
		return m
	}
	last := m.TimesS[n-1]
	const slack = 1e-9 // of rounding, where times and durations are typed in other units
	switch {
	case last < durationS*(1-slack):
		l.fault("Course", m.Name, courseShort, minutes(last), minutes(durationS))
	case last > durationS*(1+slack):
		l.remark(cell.Note, "Course", m.Name, courseLong, minutes(last), minutes(durationS))
		i := sort.SearchFloat64s(m.TimesS, durationS) // the first point at or after the end
		end := func(y []float64) []float64 {
			f := (durationS - m.TimesS[i-1]) / (m.TimesS[i] - m.TimesS[i-1])
			return append(append([]float64(nil), y[:i]...), y[i-1]+f*(y[i]-y[i-1]))
		}
		m.C = end(m.C)
		if m.RH != nil {
			m.RH = end(m.RH)
		}
		m.TimesS = append(append([]float64(nil), m.TimesS[:i]...), durationS)
	}
	return m
}

// fits holds the filled columns against what the surroundings need and may have.
func fits(l *line, x *model.Exposure) {
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
		switch given := l.filled(h); {
		case given && !lists(s.Needs, h) && !lists(s.May, h):
			l.fault(h, l.entry(h).text, columnUnused, s.Name, h)
		case !given && lists(s.Needs, h) && !(h == "Air speed" && l.filled("Film coefficient")):
			l.fault(h, "", columnNeeded, h, s.Name, published(s, h))
		}
	}
	mayWrap := lists(s.Needs, "Wrap resistance") || lists(s.May, "Wrap resistance")
	for _, h := range []string{"Radiating temperature", "Emissivity", "Surface", "Cover"} {
		if l.filled(h) && (!mayWrap || h == "Surface" && !lists(s.May, "Relative humidity")) {
			l.fault(h, l.entry(h).text, columnUnused, s.Name, h)
		}
	}
	switch {
	case x.Cover == model.LooseLid && !l.filled("Wrap resistance"):
		l.fault("Wrap resistance", "", looseLid)
	case x.Cover == model.Open && l.filled("Wrap resistance"):
		l.fault("Wrap resistance", l.entry("Wrap resistance").text, openWithWrap)
	case x.Cover == nil && x.WrapM2KW == nil && mayWrap && !l.filled("Cover"):
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

// readFaces reads the sheet Faces and hangs its rows on their steps.
func (r *reader) readFaces() {
	t := r.tables["Faces"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		procName, prodName, stepName := l.words("Process"), l.words("Product"), l.words("Step")
		f := &face{line: l}
		if w := l.choice("Face"); w != "" {
			for _, m := range model.Faces {
				if m.Name == w {
					f.Face = m
				}
			}
		}
		pr := r.processes[key(procName)]
		if pr == nil {
			f.course = r.exposure(l, &f.Exposure, 0)
			if procName != "" && len(r.unread["Steps"]) == 0 {
				l.fault("Process", procName, processUnknown, r.offer(procName, r.processNames))
			}
			continue
		}
		s := pr.by[key(stepName)]
		if s == nil {
			f.course = r.exposure(l, &f.Exposure, 0)
			if stepName != "" {
				l.fault("Step", stepName, stepUnknown, pr.name, r.offer(stepName, pr.stepNames))
			}
			r.concern(pr, prodName, l.because)
			continue
		}
		p := r.byName[key(prodName)]
		duration := s.DurationS
		if p != nil && p.own[key(stepName)] != nil {
			duration = p.own[key(stepName)].DurationS
		}
		f.course = r.exposure(l, &f.Exposure, duration)
		r.hang(l, pr, s, f, prodName)
	}
}

// hang puts a face on its step, for all products of the process or for one.
func (r *reader) hang(l *line, pr *process, s *step, f *face, prodName string) {
	if prodName == "" {
		if !f.twice(s.faces) && f.Face != nil {
			s.faces = append(s.faces, f)
		} else {
			s.line.suffer(l.because)
		}
		return
	}
	p := r.byName[key(prodName)]
	switch {
	case p == nil:
		l.fault("Product", prodName, productUnknown, r.offer(prodName, r.productNames))
		return
	case key(p.Process) != key(pr.name):
		l.fault("Product", prodName, otherProcess, strconv.Quote(p.Process))
	}
	if p.faces == nil {
		p.faces = map[string][]*face{}
	}
	if !f.twice(p.faces[key(s.Name)]) && f.Face != nil {
		p.faces[key(s.Name)] = append(p.faces[key(s.Name)], f)
	}
	p.suffer(l.because)
}

// twice tells of a face that a step has a row for already.
func (f *face) twice(others []*face) bool {
	for _, o := range others {
		if f.Face != nil && o.Face == f.Face {
			f.line.fault("Face", f.Face.Name, faceTwice, strconv.Itoa(o.At.Row))
			return true
		}
	}
	return false
}

// concern refuses the products of a process, or the one that is named, for faults of a row.
func (r *reader) concern(pr *process, prodName string, es cell.Errors) {
	if p := r.byName[key(prodName)]; p != nil {
		p.suffer(es)
		return
	}
	for _, p := range r.users[key(pr.name)] {
		p.suffer(es)
	}
}

// chains puts the steps of every product together and asks the model what it cannot calculate.
func (r *reader) chains() {
	if r.height == nil {
		at := cell.Ref{Sheet: "Plan"}
		if g := r.grids["Plan"]; g != nil {
			at.Sheet = g.name
		}
		r.height = []cell.Reading{{At: at, Column: "Altitude", Used: "0 m", Why: "blank: the height of the sea is taken"}}
	}
	for _, p := range r.products {
		if p.Process == "" {
			continue
		}
		pr := r.processes[key(p.Process)]
		if pr == nil || len(pr.steps) == 0 {
			if len(r.unread["Steps"]) == 0 {
				p.line.fault("Process", p.Process, processUnknown, r.offer(p.Process, r.processNames))
				p.suffer(p.line.because)
			}
			continue
		}
		r.chain(p, pr)
		r.ask(p, pr)
	}
}

// chain makes the steps of one product; products without rows of their own share them.
func (r *reader) chain(p *product, pr *process) {
	own := len(p.own) > 0 || len(p.faces) > 0
	for k, s := range p.own {
		if pr.by[k] == nil {
			s.line.fault("Step", s.Name, stepUnknown, pr.name, r.offer(s.Name, pr.stepNames))
			p.suffer(s.line.because)
		}
	}
	for _, s := range pr.steps {
		if p.own[key(s.Name)] == nil {
			p.suffer(s.line.because)
		}
		for _, f := range s.faces {
			p.suffer(f.line.because)
			p.faceFits(f)
		}
		for _, f := range p.faces[key(s.Name)] {
			p.faceFits(f)
		}
	}
	if !own && pr.whole != nil {
		p.Steps = pr.whole
	} else {
		p.Steps = make([]model.Step, 0, len(pr.steps))
		var parts [][]cell.Reading
		for _, s := range pr.steps {
			use := s
			if o := p.own[key(s.Name)]; o != nil {
				use = o
			}
			st := use.Step
			parts = append(parts, use.line.readings)
			if use.course != nil {
				parts = append(parts, use.course.readings)
			}
			st.Faces, parts = p.facesOf(s, parts)
			p.Steps = append(p.Steps, st)
		}
		if !own {
			pr.whole, pr.parts = p.Steps, parts
		} else {
			p.readings = append(p.before(r.height), append(p.readings, parts...)...)
			return
		}
	}
	p.readings = append(p.before(r.height), append(p.readings, pr.parts...)...)
}

// before are the readings of the product's own row, of the height above the sea, and of its food.
func (p *product) before(height []cell.Reading) [][]cell.Reading {
	out := [][]cell.Reading{p.line.readings, height}
	if p.food != nil && len(p.food.readings) > 0 {
		out = append(out, p.food.readings)
	}
	return out
}

// facesOf joins the faces of a step: rows that name the product replace the others.
func (p *product) facesOf(s *step, parts [][]cell.Reading) ([]model.FaceExposure, [][]cell.Reading) {
	var out []model.FaceExposure
	use := func(f *face) {
		out = append(out, f.FaceExposure)
		parts = append(parts, f.line.readings)
		if f.course != nil {
			parts = append(parts, f.course.readings)
		}
	}
	own := p.faces[key(s.Name)]
	for _, f := range s.faces {
		replaced := false
		for _, o := range own {
			replaced = replaced || o.Face == f.Face
		}
		if !replaced && f.Face != nil {
			use(f)
		}
	}
	for _, f := range own {
		if f.Face != nil {
			use(f)
		}
	}
	return out, parts
}

// faceFits holds a face against the product's shape.
func (p *product) faceFits(f *face) {
	if p.Shape == nil || f.Face == nil {
		return
	}
	for _, g := range p.Shape.Faces {
		if g == f.Face {
			return
		}
	}
	if len(p.Shape.Faces) == 0 {
		f.line.fault("Face", f.Face.Name, faceNone, p.Shape.Name)
	} else {
		f.line.fault("Face", f.Face.Name, faceWrong, p.Shape.Name, and(names(p.Shape.Faces, func(f *model.Face) string { return f.Name })))
	}
	p.because.Add(f.line.because[len(f.line.because)-1])
	f.line.because = f.line.because[:len(f.line.because)-1] // other products of the process have other shapes
}

// ask tells what the model cannot calculate, as far as the product was understood.
func (r *reader) ask(p *product, pr *process) {
	if p.Shape == nil || len(p.Steps) == 0 || p.Shape != model.LayeredSlab && p.Food == nil {
		return
	}
	for i := range p.Steps {
		s := &p.Steps[i]
		if s.Stage == nil || s.Surface == nil || s.DurationS <= 0 {
			return
		}
		for _, f := range s.Faces {
			if f.Surface == nil {
				return
			}
		}
	}
	type row struct {
		sheet string
		n     int
	}
	told := map[row]bool{} // what may follow from a fault that was told is not told
	for _, e := range p.because {
		told[row{e.At.Sheet, e.At.Row}] = true
	}
	for _, l := range p.lines(pr) {
		if !l.sound() {
			told[row{l.t.grid.name, l.row.n}] = true
		}
	}
	unsure := map[string]bool{} // without its sizes nobody knows where the product ends
	if t := r.tables["Points"]; t != nil && !p.line.sound() {
		unsure[t.grid.name] = true
	}
	for _, e := range model.Check(p.Product.Product, p.Steps) {
		e = r.plan.Locate(e)
		if told[row{e.At.Sheet, e.At.Row}] || unsure[e.At.Sheet] {
			continue
		}
		r.add(e)
		if e.Level == cell.Fault {
			p.because.Add(e)
		}
	}
}

// lines are the rows that a product is made of: its own, those of its food, steps and faces.
func (p *product) lines(pr *process) []*line {
	out := []*line{p.line}
	if p.food != nil {
		for _, f := range p.food.lines {
			out = append(out, f.line)
		}
	}
	for _, s := range pr.steps {
		if o := p.own[key(s.Name)]; o != nil {
			out = append(out, o.line)
		} else {
			out = append(out, s.line)
		}
		for _, f := range append(s.faces[:len(s.faces):len(s.faces)], p.faces[key(s.Name)]...) {
			out = append(out, f.line)
		}
	}
	return out
}
