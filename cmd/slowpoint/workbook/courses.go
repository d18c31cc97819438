package workbook

import (
	"sort"

	"slowpoint/model"
	"slowpoint/model/cell"
)

// course is the rows of one name in Courses.
type course struct {
	model.Course
	line     *Line // the first
	used     bool  // a row of Steps or Faces names it
	because  cell.Errors
	readings []echoes
}

// readCourses reads the sheet Courses; rows of one name make one course.
func (r *reader) readCourses() {
	r.courses = map[string]*course{}
	t := r.tables["Courses"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		name := l.Words("Course")
		at, temp, rh := l.Number("Time"), l.Number("Temperature"), l.Number("Relative humidity")
		if name == "" {
			continue
		}
		c := r.courses[Key(name)]
		if c == nil {
			c = &course{Course: model.Course{Name: name}, line: l}
			r.courses[Key(name)] = c
			if at != nil && *at != 0 {
				l.Fault("Time", l.Entry("Time").Text, courseStart, name)
			}
		}
		n := len(c.TimesS)
		switch {
		case at == nil || temp == nil:
		case n > 0 && *at <= c.TimesS[n-1]:
			l.Fault("Time", l.Entry("Time").Text, courseOrder, minutes(c.TimesS[n-1]))
		default:
			c.TimesS, c.C = append(c.TimesS, *at), append(c.C, *temp)
			if rh != nil {
				c.RH = append(c.RH, *rh)
			}
			if (len(c.RH) > 0) != (rh != nil) || rh != nil && len(c.RH) != len(c.C) {
				l.Fault("Relative humidity", "", courseHumidity, name)
			}
		}
		reasons(&c.because, l.because)
		c.readings = append(c.readings, l.readings...)
	}
}

// unusedCourses notes courses that no row of Steps or Faces names.
func (r *reader) unusedCourses() {
	if len(r.unread["Steps"]) > 0 || len(r.unread["Faces"]) > 0 {
		return
	}
	for _, c := range r.courses {
		if !c.used {
			c.line.Remark(cell.Note, "Course", c.Name, courseUnused)
		}
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

// cut gives the part of a course that its step lasts; a course that is shorter is a fault, a longer one a note.
func (c *course) cut(l *Line, durationS float64) model.Course {
	m := c.Course
	n := len(m.TimesS)
	if n == 0 || durationS <= 0 || len(c.because) > 0 {
		return m
	}
	last := m.TimesS[n-1]
	const slack = 1e-9 // of rounding, where times and durations are typed in other units
	switch {
	case last < durationS*(1-slack):
		l.Fault("Course", m.Name, courseShort, minutes(last), minutes(durationS))
	case last > durationS*(1+slack):
		l.Remark(cell.Note, "Course", m.Name, courseLong, minutes(last), minutes(durationS))
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
