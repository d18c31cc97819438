// Package record reads the files of data loggers, as they were exported: delimited text and .xlsx workbooks. Nothing is guessed: where a file
// leaves the order of its dates, a unit or the table open, reading fails and names the setting that decides.
package record

import (
	"errors"
	"time"

	"slowpoint/model/cell"
)

// Setting is how a logger's file is to be read. A blank field is looked for in the file, and asked for where the file leaves it open.
type Setting struct {
	File        string        // path, ready to be opened
	Name        string        // the file as it is spoken of, "probe.csv"
	Sheet       string        // sheet of a workbook; "" where it has one that is not hidden
	Time        string        // heading or letter of the column of times; two joined by + are a date and a clock, "Date + Time"; a unit may stand in brackets behind: "Elapsed (min)"
	Temperature string        // heading or letter of the column of temperatures; a unit may stand in brackets behind: "Probe 1 (°F)"
	DateOrder   string        // day month year, month day year, year month day; "" if the file leaves no choice
	Zone        string        // the zone of clocks as an offset from UTC, "UTC-07:00"; "" if not stated
	Decimal     string        // point or comma; "" if the file leaves no choice
	Missing     []string      // further words for a reading that is missing
	Corrections float64       // K added to every reading
	AccuracyK   float64       // of the instrument, K; 0 if not stated
	GapS        float64       // longest time between two readings that is no gap, s; 0: three times the usual one
	From, To    time.Duration // only readings from From to To after the first are taken; To 0: all
	Cells       map[string]cell.Ref
}

// Log is what a logger recorded in one channel.
type Log struct {
	Name, SHA256 string
	Sheet        string
	TimeHead     string    // headings as they stand in the file
	Head         string    //
	Unit         string    // as read or stated: °C, °F, K
	Start        time.Time // of the first reading, in UTC if Zone was stated; the zero time if the file has no clock
	Dated        bool      // Start has a date; otherwise only its clock counts
	TimesS       []float64 // s from the first reading, rising strictly
	C            []float64 // °C, corrected
	Lines        []int32   // line (text) or row (workbook) of each reading
	StepS        float64   // the usual time between readings (median), s
	ResolutionK  float64   // smallest step of the readings, K
	Gaps         []int     // i: readings are lacking between i and i+1
	Doubtful     []int     // readings that jump faster than their neighbours allow
	Missing      int       // rows without a reading
	Rows         int       // rows of the table
	About        []string  // lines above the table, as typed
	Echo         []Echo    // first and last rows as they were understood
	Problems     cell.Errors
}

// Echo is a row of the file as typed and as understood.
type Echo struct {
	Line       int32
	Time, Read string // as typed
	S, C       float64
}

// Read reads one channel of a logger's file. The problems hold everything that is wrong; with a Fault among them there is no log.
func Read(set Setting) (*Log, cell.Errors) {
	return nil, cell.Errors{{Msg: errors.ErrUnsupported.Error()}}
}
