// Package intake makes a plan of spreadsheets that people already keep, by a mapping that is a workbook too.
package intake

import (
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// File is one of the spreadsheets given.
type File struct{ Name, SHA256 string }

// Place is a cell, a row, a column or a sheet of their files.
type Place struct {
	File  int    // index in Result.Files
	Sheet string // "" in a CSV file
	Row   int    // from 1; 0: no row
	Col   int    // from 1; 0: no column
}

// Value is one cell of a row that is made.
type Value struct {
	Column *workbook.Column
	Text   string // as it goes into the plan: a number with decimal point, or words; with a unit where it is not Unit
	Number bool   // Text is a plain number in Unit
	Unit   string // of a dimensional column: that of Text
	At     Place  // their cell; the zero Sheet, Row and Col for a constant
	Const  string // for a constant or the meaning of a word: its cell in the mapping, "Constants!E4"; "" otherwise
}

// Made is one row of the plan.
type Made struct {
	Sheet  *workbook.Sheet
	Part   string
	Record Place // the row, column, block or sheet that it comes from
	Values []Value
}

// Left is a record that was left out by a rule of the mapping.
type Left struct {
	At     Place
	Reason string
}

// NotImported is a record that could not be imported: one entry a fault.
type NotImported struct {
	Record  Place
	At      Place  // the cell at fault, or the record
	Product string // as far as it could be read
	Column  string // of the plan; "" if none
	Typed   string
	Why     string
	Mend    string
	Told    bool // Why is a fault of the mapping or of the whole sheet, which Problems tell
}

// Count is what became of the records of one source: Read = Imported + LeftOut + Not.
type Count struct {
	Source                       string
	Read, Imported, LeftOut, Not int
}

// Result is what the spreadsheets gave.
type Result struct {
	Mapping  string // its file name
	SHA256   string // of the mapping
	Files    []File
	Copied   map[string][]*workbook.Line // sheets of a plan that stand in the mapping, by name
	Made     []Made
	Left     []Left
	Not      []NotImported
	Counts   []Count
	Changes  []Change    // since an earlier plan; none if it is not compared
	Problems cell.Errors // of the mapping and of their files, in order; At.Sheet is "Recipes.xlsx › Cook-chill" for theirs, the sheet for the mapping
}
