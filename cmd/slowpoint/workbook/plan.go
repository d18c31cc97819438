// Package workbook reads a plan – a workbook or a folder of CSV files – and writes the blank one.
package workbook

import (
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// Item is a row of the sheet Plan.
type Item struct {
	At          cell.Ref
	Item, Value string
}

// Product is a sound row of Products with its chain of steps.
type Product struct {
	model.Product
	Steps                                       []model.Step // shared by the products of a process; do not change it
	Family, RecipeVersion, Batch, Process, Note string
	Spreads                                     []Spread   // what varies, by the sheet Spread; none: no worst case is asked for
	readings                                    [][]echoes // each part is shared by all products that use it
	origins                                     *origins   // the plan's
}

// Readings is everything typed or defaulted that the product uses: its own row, its food, points, steps, faces, courses, then the
// limits, groups and tables that apply to it. It is put together anew at each call, so that 10,000 products share what they share.
func (p *Product) Readings() []cell.Reading { return readingsOf(p.readings, p.origins) }

// readingsOf unfolds echoes.
func readingsOf(parts [][]echoes, from *origins) []cell.Reading {
	n := 0
	for _, part := range parts {
		for i := range part {
			n += len(part[i].list)
		}
	}
	out := make([]cell.Reading, 0, n)
	for _, part := range parts {
		for i := range part {
			row := &part[i]
			for _, e := range row.list {
				r := cell.Reading{At: cell.Ref{Sheet: row.sheet, Row: row.row, Col: int(e.col)}, Column: e.column.Heading, Used: e.used}
				r.From = from.ofValue(r.At)
				if e.blank {
					r.Why = e.text
				} else {
					r.Typed = e.text
				}
				out = append(out, r)
			}
		}
	}
	return out
}

// AsTyped puts what the user typed, with its unit, in the place of the computed value that a finder of the model told of the cell. Of a
// course the cell holds the name; the temperature of its row goes into the message.
func (p *Product) AsTyped(e cell.Error) cell.Error {
	if e.Typed == "" || e.At.Col == 0 {
		return e
	}
	course := "" // the temperature of the course, as typed
	var found *echo
	for _, part := range p.readings {
		for i := range part {
			for k := range part[i].list {
				c := &part[i].list[k]
				switch at := (cell.Ref{Sheet: part[i].sheet, Row: part[i].row, Col: int(c.col)}); {
				case c.blank:
				case at == e.At:
					found = c
				case e.Field == "Course" && c.column == courseTemperature && c.used == degrees(e.Typed):
					course = c.text
				}
			}
		}
	}
	if found == nil || found.text == e.Typed {
		return e
	}
	if course != "" {
		e.Msg = "has " + course + ", and " + e.Msg
	} else if found.column.Quantity == nil {
		return e
	}
	e.Typed = found.text
	return e
}

var courseTemperature = SheetNamed("Courses").Column("Temperature")

// degrees writes a temperature of the model, "-18.88888888888889 °C", as the echo does.
func degrees(s string) string {
	x, err := strconv.ParseFloat(strings.TrimSuffix(s, " °C"), 64)
	if err != nil {
		return s
	}
	return short(x) + " °C"
}

// echoes are the values of one row as they were taken, in half the space of cell.Reading: a large plan has a million of them.
type echoes struct {
	sheet string
	row   int
	list  []echo
}

// echo is one of them.
type echo struct {
	column *Column
	col    int32
	blank  bool   // a default stood in, and text says why
	text   string // as typed
	used   string
}

// NotCalculated is a product that the plan names and that cannot be calculated.
type NotCalculated struct {
	At      cell.Ref
	Product string
	Because cell.Errors // the faults that keep it from being calculated
}

// Plan is everything that was understood.
type Plan struct {
	Name          string // file or folder name
	SHA256        string // of the file, or of the folder's files in the order of their names
	Items         []Item
	AltitudeM     float64
	Paper         string // A4, Letter, or "" if not given
	Fahrenheit    bool   // show temperatures in °F first
	Products      []Product
	NotCalculated []NotCalculated
	Limits        []rules.Limit // also those with faults (Unreadable): they are cannot tell
	Groups        []rules.Group
	Records       []Record                  // the rows of Records, those with faults too
	Problems      cell.Errors               // in workbook order
	Columns       map[string]map[string]int // sheet -> heading without unit -> column number, for Locate
	Sheets        []string                  // the sheets in the order of the workbook, by the names that the user gave
	Sources       []Source                  // the user's own spreadsheets that the import made the plan of; none if it was typed
	NotImported   int                       // how many of their rows the import could not take
	origins       *origins                  // where each value comes from; nil if the plan was typed
}

// Locate fills in the column of a problem whose finder knew the row and the heading only, and where the cell comes from.
func (p *Plan) Locate(e cell.Error) cell.Error {
	if e.At.Row > 0 && e.At.Col == 0 && e.Field != "" {
		e.At.Col = p.Columns[e.At.Sheet][e.Field]
	}
	if e.From == "" {
		e.From = p.origins.of(e.At)
	}
	return e
}
