// Package record reads the files of data loggers, as they were exported: delimited text and .xlsx workbooks. Nothing is guessed: where a file
// leaves the order of its dates, a unit or the table open, reading fails and names the setting that decides.
package record

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"time"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// Setting is how a logger's file is to be read. A blank field is looked for in the file, and asked for where the file leaves it open.
type Setting struct {
	File        string              // path, ready to be opened
	Name        string              // the file as it is spoken of, "probe.csv"
	Sheet       string              // sheet of a workbook; "" where it has one that is not hidden
	Time        string              // heading or letter of the column of times; two joined by + are a date and a clock, "Date + Time"; a unit may stand in brackets behind: "Elapsed (min)"
	Temperature string              // heading or letter of the column of temperatures; a unit may stand in brackets behind: "Probe 1 (°F)"
	DateOrder   string              // day month year, month day year, year month day; "" if the file leaves no choice
	Zone        string              // the zone of clocks as an offset from UTC, "UTC-07:00"; "" if not stated
	Decimal     string              // point or comma; "" if the file leaves no choice
	Missing     []string            // further words for a reading that is missing
	Corrections float64             // K added to every reading
	AccuracyK   float64             // of the instrument, K; 0 if not stated
	Today       time.Time           // for dates in the future or long ago; the zero time: they are not looked for
	Cells       map[string]cell.Ref // where each setting stands, by the column of the sheet Records or the item of the sheet Plan; the zero Ref if nowhere
}

// Log is what a logger recorded in one channel.
type Log struct {
	Name, SHA256 string
	Sheet        string
	TimeHead     string    // headings as they stand in the file
	Head         string    //
	Unit         string    // as read or stated: °C, °F, K
	Start        time.Time // of the first reading, in the file's own clock and zone; the zero time if the file has no clock
	Dated        bool      // Start has a date; otherwise only its clock counts (the date is that of no day: 2000-01-01)
	TimesS       []float64 // s from the first reading, rising strictly
	C            []float64 // °C, corrected
	Lines        []int32   // line (text) or row (workbook) of each reading
	StepS        float64   // the usual time between readings (median), s
	ResolutionK  float64   // smallest step of the readings, K
	Gaps         []int     // i: readings are lacking between i and i+1, which lie more than three times the usual time or more than an hour apart
	Doubtful     []int     // readings that jump faster than their neighbours allow, or may be cut off
	Leaps        []Leap    // of a place within a food (Within), rising; their problems are not among Problems: readings outside the steps do not count
	Missing      int       // rows without a reading
	Rows         int       // rows of the table
	About        []string  // lines above the table, as typed
	How          string    // how the file was read, as far as that had to be decided: "cells divided by semicolons, decimal comma"
	Echo         []Echo    // first and last rows as they were understood
	Problems     cell.Errors

	src  source // for the places of readings
	temp int    // column of the temperatures
}

// Echo is a row of the file as typed and as understood.
type Echo struct {
	Line       int32
	Time, Read string  // as typed
	S, C       float64 // as in the log
	Taken      bool    // the row gives a reading of the log; otherwise S and C are 0
}

// Read reads one channel of a logger's file. The problems hold everything that is wrong, in the order of their places; with a Fault among
// them there is no log.
func Read(set Setting) (*Log, cell.Errors) { return read(set, mostRows) }

// read takes no more rows than most.
func read(set Setting, most int) (*Log, cell.Errors) {
	r := &reader{set: set, most: most, log: &Log{Name: set.Name}}
	if r.settings() && r.file() {
		r.table()
	}
	problems := append(r.problems, r.tells.all()...)
	if problems.Faults() > 0 {
		return nil, problems
	}
	r.log.Problems = problems
	return r.log, problems
}

// reader is a record while it is read.
type reader struct {
	set      Setting
	log      *Log
	most     int // rows
	src      source
	problems cell.Errors     // of the settings and the file as a whole
	tells    tellings        // of its lines
	words    map[string]bool // further words for a missing reading, by key
	decimal  byte            // as set; 0 if not
	is1904   bool
	width    int     // cells of the heading row of a text, which no line may exceed; 0 if there is none
	utc      bool    // times are in UTC
	east     float64 // s by which the file's clocks are ahead of it, if they are
	clock    bool    // times are clocks without a date
	reversed bool
}

// settings checks those that need no file.
func (r *reader) settings() bool {
	if r.set.Name == "" {
		r.set.Name = filepath.Base(r.set.File)
	}
	ok := true
	wrong := func(s saying, setting, typed string) {
		r.problems.Add(s.problem(r.set.Cells[setting], cell.Fault, setting, typed))
		ok = false
	}
	if o := r.set.DateOrder; o != "" && orderOf(o) == 0 {
		wrong(noOrderWord, setOrder, o)
	}
	if z := r.set.Zone; z != "" {
		if _, err := offsetOf(z); err != nil {
			wrong(badZone, setZone, z)
		}
	}
	var known bool
	if r.decimal, known = decimalOf(r.set.Decimal); !known {
		wrong(badDecimal, setDecimal, r.set.Decimal)
	}
	r.words = map[string]bool{}
	for _, w := range r.set.Missing {
		if k := workbook.Key(w); k != "" {
			r.words[k] = true
		}
	}
	return ok
}

// file opens the file.
func (r *reader) file() bool {
	src, ok := r.open()
	r.src, r.tells.of = src, src
	return ok
}

// table reads the table.
func (r *reader) table() {
	head, err := r.beginning()
	if err != nil {
		r.broken(err)
		return
	}
	l := r.layOut(head)
	if l == nil {
		return
	}
	r.widest(l, head)
	t := &taker{r: r, lay: l, places: math.MaxInt8}
	if f, isText := r.src.(*text); isText && len(head) == headRows {
		t.reserve(min(int(1.02*headRows*f.times()), r.most))
	}
	if err := r.src.each(t.take); err != nil {
		r.broken(err)
		return
	}
	t.finish()
	if f, isText := r.src.(*text); isText && f.zeros {
		r.tells.tell(zeroEnd, cell.Note, "", f.lines, 0, "")
	}
	r.make(t)
}

// broken tells why the rows could not be read to their end.
func (r *reader) broken(err error) {
	at := r.set.Cells[setFile]
	switch err {
	case errLong:
		r.problems.Add(longLine.problem(at, cell.Fault, setFile, r.set.Name))
	case errMany:
		r.problems.Add(tooMany.problem(at, cell.Fault, setFile, r.set.Name, rounded(r.most), r.bySize()))
	default:
		r.problems.Add(noFile.problem(at, cell.Fault, setFile, r.set.Name, workbook.Reason(err)))
	}
}

// bySize says how many readings a text has in all, by its size and by what was read of it; "" where that is not known.
func (r *reader) bySize() string {
	f, isText := r.src.(*text)
	if !isText {
		return ""
	}
	return "; by its size it has about " + rounded(int(float64(r.most)*f.times()))
}

// rounded gives a count to two digits, in millions where it has some.
func rounded(n int) string {
	unit := 1
	for n >= 100*unit {
		unit *= 10
	}
	n = (n + unit/2) / unit * unit
	if n < 1_000_000 {
		return fmt.Sprint(n)
	}
	return fmt.Sprintf("%g million", float64(n)/1e6)
}

// row names a row of the file: "line 48", "row 48".
func (r *reader) row(line int32) string { return rowOf(r.src, line) }

// rowOf names a row of a file.
func rowOf(src source, line int32) string { return fmt.Sprintf("%s %d", src.word(), line) }

// ask tells that a setting is needed. The first argument of its wording is the file or the sheet.
func (r *reader) ask(s saying, setting, typed string, args ...string) {
	r.problems.Add(s.problem(r.set.Cells[setting], cell.Fault, setting, typed, append([]string{r.src.holder()}, args...)...))
}

// widest takes how many cells a line of a text may have: those of its headings; without headings those of the first reading.
func (r *reader) widest(l *layout, head []kept) {
	if _, isText := r.src.(*text); !isText {
		return
	}
	for i := range head {
		if head[i].n == l.heads || l.heads == 0 && head[i].n == l.first {
			r.width = max(len(head[i].fields), l.time, l.clock, l.temp)
		}
	}
}

// make makes the log of what was taken.
func (r *reader) make(t *taker) {
	l := t.lay
	log := r.log
	if l.scale == nil {
		name := l.heading(l.temp)
		r.problems.Add(noScale.problem(r.set.Cells[setTemp], cell.Fault, setTemp, r.set.Temperature, "", name))
	}
	if len(t.secs) == 0 {
		if r.tells.faults() == 0 {
			r.problems.Add(noReadings.problem(r.set.Cells[setFile], cell.Fault, setFile, "", r.src.holder(), r.underHeadings(l)))
		}
		return
	}
	if !t.instants() || !t.rising() || l.scale == nil {
		return
	}
	if len(t.secs) == 1 {
		if r.tells.faults() > 0 { // the others are wrong
			return
		}
		t.tell(oneReading, t.lines[0], l.temp, "", fmt.Sprintf("%g %s", t.cs[0], l.scale.name))
		return
	}
	log.SHA256 = r.src.digest()
	log.TimeHead, log.Head, log.Unit = l.heading(l.time), strings.TrimSpace(l.group+" "+l.heading(l.temp)), l.scale.name
	if l.clock > 0 {
		log.TimeHead += " + " + l.heading(l.clock)
	}
	log.How = t.how()
	log.Missing, log.Rows = t.lacking.n+t.blanks.n+t.beyond.n, t.rows
	log.ResolutionK = t.step.size() / l.scale.per
	r.constant(t)
	log.TimesS, log.C, log.Lines = t.secs, t.cs, t.lines
	start := t.secs[0]
	for i := range t.secs {
		t.secs[i] = roundMicro(t.secs[i] - start)
		t.cs[i] = l.scale.celsius(t.cs[i]) + r.set.Corrections
	}
	switch {
	case t.form == dateStamp:
		log.Start, log.Dated = instant(start), true
		if r.utc { // in the file's own clock, which people go by
			log.Start = log.Start.In(time.FixedZone(offsetName(int32(r.east)), int(r.east)))
		}
	case r.clock:
		log.Start = time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(math.Round(start*1e6)) * time.Microsecond)
	}
	r.echoes(t)
	r.check(t, start)
}

// roundMicro takes off what sums of days and fractions leave behind.
func roundMicro(s float64) float64 { return math.Round(s*1e6) / 1e6 }

// echoes shows the first and last rows as they were understood.
func (r *reader) echoes(t *taker) {
	at := map[int32]int{}
	list := t.echo.all()
	for _, e := range list {
		at[e.Line] = -1
	}
	for i, line := range r.log.Lines {
		if i > 10 && i < len(r.log.Lines)-10 {
			continue
		}
		if _, asked := at[line]; asked {
			at[line] = i
		}
	}
	for _, e := range list {
		if i := at[e.Line]; i >= 0 {
			e.S, e.C, e.Taken = r.log.TimesS[i], r.log.C[i], true
		}
		r.log.Echo = append(r.log.Echo, e)
	}
}
