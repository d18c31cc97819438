package workbook

import (
	"slices"
	"strconv"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// face is a row of Faces.
type face struct {
	model.FaceExposure
	line   *Line
	course *course
}

// readFaces reads the sheet Faces and hangs its rows on their steps.
func (r *reader) readFaces() {
	t := r.tables["Faces"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		procName, prodName, stepName := l.Words("Process"), l.Words("Product"), l.Words("Step")
		f := &face{line: l}
		if w := l.Choice("Face"); w != "" {
			for _, m := range model.Faces {
				if m.Name == w {
					f.Face = m
				}
			}
		}
		pr := r.processes[Key(procName)]
		if pr == nil {
			f.course = r.exposure(l, &f.Exposure, 0)
			if procName != "" && len(r.unread["Steps"]) == 0 {
				l.Fault("Process", procName, processUnknown, r.offer(procName, r.processNames))
				r.astray(procName, prodName, l.because)
			}
			continue
		}
		s := pr.by[Key(stepName)]
		if s == nil {
			f.course = r.exposure(l, &f.Exposure, 0)
			if stepName != "" {
				l.Fault("Step", stepName, stepUnknown, pr.name, r.offer(stepName, pr.stepNames))
			}
			r.concern(pr, prodName, l.because)
			continue
		}
		p := r.byName[Key(prodName)]
		duration := s.DurationS
		if p != nil && p.own[Key(stepName)] != nil {
			duration = p.own[Key(stepName)].DurationS
		}
		f.course = r.exposure(l, &f.Exposure, duration)
		l.quick(&f.Exposure, s)
		r.hang(l, pr, s, f, prodName)
	}
}

// astray refuses whom a row with an unknown process may concern: the product that it names, else the products of the process whose name
// is near, else all of them.
func (r *reader) astray(procName, prodName string, es cell.Errors) {
	if p := r.byName[Key(prodName)]; p != nil {
		p.suffer(es)
		return
	}
	near := r.near(procName, r.processNames)
	for _, p := range r.products {
		if near == "" || Key(p.Process) == Key(near) {
			p.suffer(es)
		}
	}
}

// hang puts a face on its step, for all products of the process or for one.
func (r *reader) hang(l *Line, pr *process, s *step, f *face, prodName string) {
	if prodName == "" {
		if !f.twice(s.faces) && f.Face != nil {
			s.faces = append(s.faces, f)
		} else {
			s.line.suffer(l.because)
		}
		return
	}
	p := r.productOf(l, pr, prodName)
	if p == nil {
		return
	}
	if p.faces == nil {
		p.faces = map[string][]*face{}
	}
	if !f.twice(p.faces[Key(s.Name)]) && f.Face != nil {
		p.faces[Key(s.Name)] = append(p.faces[Key(s.Name)], f)
	}
	p.suffer(l.because)
}

// twice tells of a face that a step has a row for already.
func (f *face) twice(others []*face) bool {
	for _, o := range others {
		if f.Face != nil && o.Face == f.Face {
			f.line.Fault("Face", f.Face.Name, faceTwice, strconv.Itoa(o.At.Row))
			return true
		}
	}
	return false
}

// concern refuses the products of a process, or the one that is named, for faults of a row.
func (r *reader) concern(pr *process, prodName string, es cell.Errors) {
	if p := r.byName[Key(prodName)]; p != nil {
		p.suffer(es)
		return
	}
	for _, p := range r.users[Key(pr.name)] {
		p.suffer(es)
	}
}

// facesOf joins the faces of a step: rows that name the product replace the others.
func (p *product) facesOf(s *step, parts [][]echoes) ([]model.FaceExposure, [][]echoes) {
	var out []model.FaceExposure
	use := func(f *face) {
		out = append(out, f.FaceExposure)
		parts = append(parts, f.line.readings)
		if f.course != nil {
			parts = append(parts, f.course.readings)
		}
	}
	own := p.faces[Key(s.Name)]
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
	faces := p.Shape.Faces()
	if slices.Contains(faces, f.Face) {
		return
	}
	if len(faces) == 0 {
		f.line.Fault("Face", f.Face.Name, faceNone, p.Shape.Name)
	} else {
		f.line.Fault("Face", f.Face.Name, faceWrong, p.Shape.Name, and(names(faces, func(f *model.Face) string { return f.Name })))
	}
	p.because.Add(f.line.because[len(f.line.because)-1])
	f.line.because = f.line.because[:len(f.line.because)-1] // other products of the process have other shapes
}
