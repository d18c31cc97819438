package workbook

import (
	"slowpoint/model"
	"slowpoint/model/cell"
)

// chains puts the steps of every product together and asks the model what it cannot calculate.
func (r *reader) chains() {
	if r.height == nil {
		sheet := "Plan"
		if g := r.grids["Plan"]; g != nil {
			sheet = g.Name
		}
		r.height = []echoes{{sheet: sheet, list: []echo{{column: &Column{Heading: "Altitude"}, used: "0 m", text: "blank: the height of the sea is taken", blank: true}}}}
	}
	for _, p := range r.products {
		if p.Process == "" {
			continue
		}
		pr := r.processes[Key(p.Process)]
		if pr == nil || len(pr.steps) == 0 {
			if pr != nil && len(p.own) > 0 {
				p.line.Fault("Process", p.Process, onlyOwnRows)
				p.suffer(p.line.because)
			} else if len(r.unread["Steps"]) == 0 {
				p.line.Fault("Process", p.Process, processUnknown, r.offer(p.Process, r.processNames))
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
			s.line.Fault("Step", s.Name, stepUnknown, pr.name, r.offer(s.Name, pr.stepNames))
			p.suffer(s.line.because)
		}
	}
	for _, s := range pr.steps {
		if p.own[Key(s.Name)] == nil {
			p.suffer(s.line.because)
		}
		for _, f := range s.faces {
			p.suffer(f.line.because)
			p.faceFits(f)
		}
		for _, f := range p.faces[Key(s.Name)] {
			p.faceFits(f)
		}
	}
	if !own && pr.whole != nil {
		p.Steps = pr.whole
	} else {
		p.Steps = make([]model.Step, 0, len(pr.steps))
		var parts [][]echoes
		for _, s := range pr.steps {
			use := s
			if o := p.own[Key(s.Name)]; o != nil {
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
func (p *product) before(height []echoes) [][]echoes {
	out := [][]echoes{p.line.readings, height}
	for _, y := range p.layers {
		out = append(out, y.line.readings)
	}
	for _, f := range p.foods() {
		if len(f.readings) > 0 {
			out = append(out, f.readings)
		}
	}
	return out
}

// ask tells what the model cannot calculate, as far as the product was understood.
func (r *reader) ask(p *product, pr *process) {
	if p.Shape == nil || len(p.Steps) == 0 || !p.Shape.Layered() && p.Food == nil || p.Shape.Layered() && len(p.Layers) == 0 {
		return
	}
	for i := range p.Layers {
		if p.Layers[i].Food == nil {
			return
		}
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
		if !l.Sound() {
			told[row{l.t.grid.Name, l.row.N}] = true
		}
	}
	unsure := map[string]bool{} // without its sizes nobody knows where the product ends
	if t := r.tables["Points"]; t != nil && !p.line.Sound() {
		unsure[t.grid.Name] = true
	}
	for _, e := range model.Check(p.Product.Product, p.Steps) {
		e = p.AsTyped(r.plan.Locate(e))
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
func (p *product) lines(pr *process) []*Line {
	out := []*Line{p.line}
	for _, y := range p.layers {
		out = append(out, y.line)
	}
	for _, f := range p.foods() {
		for _, l := range f.lines {
			out = append(out, l.Line)
		}
	}
	for _, s := range pr.steps {
		if o := p.own[Key(s.Name)]; o != nil {
			out = append(out, o.line)
		} else {
			out = append(out, s.line)
		}
		for _, f := range append(s.faces[:len(s.faces):len(s.faces)], p.faces[Key(s.Name)]...) {
			out = append(out, f.line)
		}
	}
	return out
}
