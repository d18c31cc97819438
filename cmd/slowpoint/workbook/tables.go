package workbook

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"slowpoint/model/cell"
)

// Tables are the sheets of a workbook, or of a folder of CSV files, that is no plan and is made of the same kind of tables: the same
// headings with units, the same cells, the same messages.
type Tables struct {
	Name   string // file or folder name
	SHA256 string
	r      *reader
}

// ReadTables reads the sheets of a list; what says which of our files it is ("mapping"), for the messages. The error says in one
// sentence why nothing at all could be read; everything else that is wrong is in Problems.
func ReadTables(name, what string, list []*Sheet) (*Tables, error) {
	grids, digest, err := load(name, what)
	if err != nil {
		return nil, err
	}
	return TablesOf(grids, filepath.Base(filepath.Clean(name)), digest, list), nil
}

// TablesOf makes tables of sheets that were read already.
func TablesOf(grids []*Grid, name, digest string, list []*Sheet) *Tables {
	r := newReader(&Plan{Name: name, SHA256: digest}, list)
	if len(grids) > 0 {
		r.sheets(grids)
	}
	if slices.Contains(list, SheetNamed("Plan")) && len(grids) > 0 {
		r.planItems() // they may say the decimal sign
	}
	r.decimalSign()
	for _, s := range list {
		if g := r.grids[s.Name]; g != nil && r.tables[s.Name] == nil {
			r.tables[s.Name] = r.open(g, s)
		}
	}
	return &Tables{Name: name, SHA256: digest, r: r}
}

// Lines gives the rows of a sheet by its name in the list; none if there is no such sheet or it could not be read.
func (t *Tables) Lines(sheet string) []*Line {
	if found := t.r.tables[sheet]; found != nil {
		return found.lines
	}
	return nil
}

// Grid gives a sheet as it stands; nil if there is none.
func (t *Tables) Grid(sheet string) *Grid { return t.r.grids[sheet] }

// Sheets are the sheets in the order of the workbook, by the names that the user gave.
func (t *Tables) Sheets() []string { return t.r.plan.Sheets }

// Problems is everything that is wrong so far, in workbook order.
func (t *Tables) Problems() cell.Errors {
	found := once(t.r.problems)
	found.Sort(t.r.plan.Sheets)
	return found
}

// Spreadsheet is a file of somebody's own: a workbook, or a CSV file, whose only sheet has no name.
type Spreadsheet struct {
	Name   string // of the file, without its folder
	SHA256 string
	Sheets []*Grid
}

// ReadSpreadsheet reads such a file. The error says in one sentence why nothing of it could be read.
func ReadSpreadsheet(name string) (*Spreadsheet, error) {
	info, err := os.Stat(name)
	if err != nil {
		return nil, fmt.Errorf("%s: it cannot be opened (%s)", name, Reason(err))
	}
	data, digest, err := readFile(name, info.Size(), "spreadsheet")
	if err != nil {
		return nil, err
	}
	s := &Spreadsheet{Name: filepath.Base(name), SHA256: digest}
	if strings.EqualFold(filepath.Ext(name), ".csv") {
		s.Sheets = []*Grid{foreignGrid(data)}
		return s, nil
	}
	if s.Sheets, err = readWorkbook(data); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return s, nil
}

// Imported tells whether the file is a plan that an import made.
func (s *Spreadsheet) Imported() bool {
	has := func(list []*Sheet, name string) bool {
		for _, g := range s.Sheets {
			if f := sheetOf(list, g.Name); f != nil && f.Name == name {
				return true
			}
		}
		return false
	}
	return has(Sheets, "Products") && has(MadeSheets, "Origins")
}
