// Package workbook reads a plan – a workbook or a folder of CSV files – and writes the blank one.
package workbook

import (
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
	Steps                                       []model.Step
	Family, RecipeVersion, Batch, Process, Note string
	Readings                                    []cell.Reading // everything typed or defaulted that this product uses
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
	Limits        []rules.Limit
	Groups        []rules.Group
	Problems      cell.Errors               // in workbook order
	Columns       map[string]map[string]int // sheet -> heading without unit -> column number, for Locate
}
