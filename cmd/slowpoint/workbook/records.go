package workbook

import (
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
)

// Record is a row of the sheet Records: the file of a logger, and what it measured. A row with faults is not read.
type Record struct {
	At                 cell.Ref
	Name               string
	Products           []*Product // whose record it is, also those that cannot be calculated: one, but for a medium
	Process            string     // as typed
	File               string     // path from the plan's folder, with / between folders
	Sheet              string
	Time, Temperature  string // columns of the file, as typed
	Measured           string // as typed
	Of                 Measured
	Step               string      // of a medium: the step, as Steps names it
	Place              model.Point // of a named point
	Starts             []Start     // when steps began, in their order; none: the first step, at the first reading
	DateOrder, Zone    string
	Missing            []string
	Sensor, Calibrated string
	CorrectionK        float64
	AccuracyK          *float64 // nil: not stated
	Note               string
	Decimal            string // of the plan: point, comma or ""
	Cells              map[string]cell.Ref
	Sound              bool // it can be read
	readings           []echoes
}

// Measured is what a logger measured.
type Measured int

// What a logger may have measured.
const (
	AtSlowest Measured = iota + 1 // the slowest point, as whoever put the probe there says
	AtSurface
	AtPoint // a point of the sheet Points, or the centre
	AtOther // another place, or one that nobody knows
	OfMedium
)

// Food tells whether it is a temperature of the food.
func (m Measured) Food() bool { return m != OfMedium }

// Start is when a step began, or the chain ended.
type Start struct {
	Step    string        // as Steps names it; "" for the first
	End     bool          // of the chain
	Clock   bool          // it is a time of the clock
	Elapsed bool          // it counts from the first reading; neither: it is the first reading
	Date    time.Time     // of a clock with a date; the zero time otherwise
	After   time.Duration // since midnight, or since the first reading
	Typed   string
}

// theEnd is the word for the end of a chain.
const theEnd = "end"

// stepEnds are the signs that may divide a step from its time.
const stepEnds = " ,:="

// readRecords reads the sheet Records.
func (r *reader) readRecords() {
	t := r.tables["Records"]
	if t == nil {
		return
	}
	seen := map[string]int{}
	for _, l := range t.lines {
		rec := Record{At: l.Ref(), Name: l.Words("Record"), File: l.Words("File"), Sheet: l.Words("Sheet"), Time: r.columnOf(l, "Time column"),
			Temperature: r.columnOf(l, "Temperature column"), DateOrder: l.Choice("Date order"), Zone: l.Words("Time zone"),
			Sensor: l.Words("Sensor"), Calibrated: l.Words("Calibrated on"), Note: l.Words("Note"), Measured: l.Words("What it measured")}
		if first := seen[Key(rec.Name)]; first > 0 && rec.Name != "" {
			l.Fault("Record", rec.Name, duplicate, strconv.Itoa(first), "record")
		}
		seen[Key(rec.Name)] = l.row.N
		if rec.File != "" {
			rec.File = l.within(rec.File)
		}
		for _, w := range strings.FieldsFunc(l.Words("Missing words"), func(c rune) bool { return c == ',' || c == ';' }) {
			if w = tidy(w); w != "" {
				rec.Missing = append(rec.Missing, w)
			}
		}
		if v := l.Number("Correction"); v != nil {
			rec.CorrectionK = *v
		}
		rec.AccuracyK = l.Number("Accuracy")
		if rec.DateOrder == "" {
			rec.DateOrder = r.dateOrder
		}
		rec.Decimal = map[unit.Decimal]string{unit.Point: "point", unit.Comma: "comma"}[r.stated]
		of := r.recorded(l, &rec)
		rec.starting(r, l, of)
		rec.Cells = map[string]cell.Ref{}
		for _, c := range t.sheet.Columns {
			rec.Cells[c.Heading] = l.At(c.Heading)
		}
		rec.readings, rec.Sound = l.readings, l.Sound() && len(of) > 0
		r.plan.Records = append(r.plan.Records, rec)
		r.problems = slices.DeleteFunc(r.problems, func(e cell.Error) bool { // a file of a folder of CSV that is a logger's is no sheet that somebody misnamed
			return e.Msg == unknownSheet.msg && e.Level == cell.Warning && Key(e.At.Sheet+".csv") == Key(rec.File)
		})
	}
}

// columnOf reads the name of a column of the file; blank only where the row was given to a command.
func (r *reader) columnOf(l *Line, heading string) string {
	if r.given && !l.Filled(heading) {
		return ""
	}
	return l.Words(heading)
}

// within refuses paths that lead out of the plan's folder.
func (l *Line) within(name string) string {
	p := strings.ReplaceAll(name, `\`, "/")
	if !filepath.IsLocal(filepath.FromSlash(p)) || strings.Contains(p, ":") {
		l.Fault("File", name, recordOutside)
		return ""
	}
	return p
}

// recorded finds what was measured, and in which products.
func (r *reader) recorded(l *Line, rec *Record) []*product {
	name, process := l.Words("Product"), l.Words("Process")
	rec.Process = process
	var of []*product
	switch pr := r.processes[Key(process)]; {
	case r.loose != nil:
		of = []*product{r.loose}
	case name != "":
		p := r.byName[Key(name)]
		switch {
		case p == nil && !r.blind():
			l.Fault("Product", name, productUnknown, r.offer(name, r.productNames))
		case p != nil && process != "" && Key(p.Process) != Key(process):
			l.Fault("Process", process, recordProcess, p.Name, p.Process)
		case p != nil:
			of = []*product{p}
		}
	case process != "":
		if pr == nil {
			l.Fault("Process", process, processUnknown, r.offer(process, r.processNames))
		} else if of = r.users[Key(process)]; len(of) == 0 {
			l.Fault("Process", process, processUnused, "")
		}
	default:
		l.Fault("Product", "", recordOfNone)
	}
	rec.measured(l, of, r)
	if rec.Of.Food() && rec.Of != 0 && len(of) > 1 {
		l.Fault("Product", "", recordOfMany, rec.Measured, strconv.Itoa(len(of)))
		of = nil
	}
	for _, p := range of {
		rec.Products = append(rec.Products, &p.Product)
	}
	return of
}

const mediumOf = "medium of "

// measured understands the column What it measured.
func (rec *Record) measured(l *Line, of []*product, r *reader) {
	w := tidy(rec.Measured)
	k := Key(w)
	switch {
	case w == "":
	case k == "slowest point":
		rec.Of = AtSlowest
	case k == "surface":
		rec.Of = AtSurface
	case k == "other place":
		rec.Of = AtOther
	case k == "centre":
		rec.Of, rec.Place = AtPoint, model.Point{Name: "centre"}
	case k == "medium" || k == "medium of":
		l.Fault("What it measured", w, recordMediumBare)
	case strings.HasPrefix(k, mediumOf):
		rec.Of = OfMedium
		rec.Step = r.stepOf(l, "What it measured", strings.TrimSpace(w[len(mediumOf):]), of)
	default:
		for _, p := range of {
			for _, pt := range p.Points {
				if Key(pt.Name) == k {
					rec.Of, rec.Place = AtPoint, pt
					return
				}
			}
		}
		known := []string{"slowest point", "centre", "surface", "medium of STEP", "other place"}
		if len(of) == 1 {
			known = append(known, names(of[0].Points, func(p model.Point) string { return p.Name })...)
		}
		l.Fault("What it measured", w, recordPlace, meant(w, known), Joined(known, " or "))
	}
}

// stepOf finds a step of the products by its name, and gives the name as it stands in Steps.
func (r *reader) stepOf(l *Line, heading, name string, of []*product) string {
	if len(of) == 0 {
		return ""
	}
	chain := r.chainOf(of[0])
	for _, s := range chain {
		if Key(s) == Key(name) {
			return s
		}
	}
	if chain != nil {
		l.Fault(heading, name, stepUnknown, of[0].Process, meant(name, chain))
	}
	return ""
}

// starting understands the column Starts at: a step, a time, or steps with their times, divided by semicolons; end is when the
// last one ended.
func (rec *Record) starting(r *reader, l *Line, of []*product) {
	typed := l.Words("Starts at")
	if e := l.Entry("Starts at"); e.Kind == Figure && e.Form == Clock {
		typed = l.t.grid.Shown(e)
	}
	if typed == "" || len(of) == 0 {
		return
	}
	chain := r.chainOf(of[0])
	if chain == nil {
		return
	}
	last := -1
	for _, part := range strings.Split(typed, ";") {
		part = tidy(part)
		if part == "" {
			continue
		}
		s := Start{Typed: part}
		at, rest := led(part, chain)
		if at >= 0 {
			s.Step = chain[at]
		} else if k, after := led(part, []string{theEnd}); k == 0 {
			s.End, at, rest = true, len(chain), after
		}
		rest = strings.TrimPrefix(rest, "at ")
		at = max(at, 0)
		switch {
		case at <= last:
			l.Fault("Starts at", part, recordOrder)
			return
		case rest == "" && len(rec.Starts) > 0:
			l.Fault("Starts at", part, recordNoTime)
			return
		case rest != "" && !s.when(rest):
			near := meant(part, chain)
			l.Fault("Starts at", part, recordStart, near)
			return
		}
		last = at
		rec.Starts = append(rec.Starts, s)
	}
}

// led tells which of some names a part of Starts at begins with, the longest that fits, and gives what stands behind it; −1 and the whole part if
// none does.
func led(part string, names []string) (i int, rest string) {
	i, rest = -1, part
	long := 0
	for k, name := range names {
		if n := len(name); n > long && len(part) >= n && Key(part[:n]) == Key(name) && (len(part) == n || strings.ContainsRune(stepEnds, rune(part[n]))) {
			i, rest, long = k, strings.TrimSpace(strings.TrimLeft(part[n:], stepEnds)), n
		}
	}
	return i, rest
}

// when understands a time of the clock with or without a date, or a duration with its unit.
func (s *Start) when(text string) bool {
	for _, form := range []string{"2006-01-02 15:04:05", "2006-01-02 15:04", "2006-01-02T15:04:05", "2006-01-02T15:04"} {
		if t, err := time.Parse(form, text); err == nil {
			s.Clock, s.Date = true, t.Truncate(24*time.Hour)
			s.After = t.Sub(s.Date)
			return true
		}
	}
	for _, form := range []string{"15:04:05", "15:04", "3:04 PM", "3:04PM"} {
		if t, err := time.Parse(form, strings.ToUpper(text)); err == nil {
			s.Clock = true
			s.After = time.Duration(t.Hour())*time.Hour + time.Duration(t.Minute())*time.Minute + time.Duration(t.Second())*time.Second
			return true
		}
	}
	v, m := unit.Duration.Parse(text, nil, unit.Point)
	if m != nil || v.Computed < 0 {
		return false
	}
	s.Elapsed, s.After = true, time.Duration(v.Computed*float64(time.Second))
	return true
}

// Readings is everything typed or defaulted in the row.
func (rec *Record) Readings() []cell.Reading { return readingsOf([][]echoes{rec.readings}, nil) }
