package intake

import "slowpoint/cmd/slowpoint/workbook"

// The layouts of their sheets.
const (
	rowLayout    = "rows"    // a row is a record
	columnLayout = "columns" // a column is a record
	blockLayout  = "blocks"  // a record begins at each cell that holds the word of Heading
	sheetLayout  = "sheet"   // a sheet is a record
)

// What makes a record be left out.
const (
	whenIs     = "is"
	whenBlank  = "is blank"
	whenFilled = "is filled"
	whenStarts = "starts with"
	whenEnds   = "ends with"
	whenStruck = "struck through"
)

// OwnSheets are the sheets of a mapping that say what becomes of their cells.
var OwnSheets = []*workbook.Sheet{
	{Name: "Sources", Help: "Which of their sheets are read, and how; a row is one kind of sheet", Columns: []*workbook.Column{
		{Heading: "Source", Needed: true, Help: "a short name, used in the other sheets of the mapping"},
		{Heading: "File", Help: "name of a file, may hold one *; blank = every file given"},
		{Heading: "Sheet", Help: "name of a sheet, may hold one *; blank = every visible sheet; blank for CSV"},
		{Heading: "Layout", Needed: true, Choices: []string{rowLayout, columnLayout, blockLayout, sheetLayout}, Help: "rows: a row is a record; columns: a column is one; blocks: one begins at each cell that holds the word of Heading; sheet: a sheet is one"},
		{Heading: "Heading", Needed: true, Help: "rows: number of the heading row, or two joined rows as 3-4; columns: letter of the heading column, or A-B; blocks: the word that starts each block; sheet: -"},
		{Heading: "First", Help: "first row or column of data; blank = the next after the headings"},
		{Heading: "Last", Help: "last row or column of data; blank = to the end"},
		{Heading: "Decimal sign", Choices: []string{"point", "comma"}, Help: "of numbers typed as text; blank = by evidence of the file"},
		{Heading: "Note", Help: "yours"},
	}},
	{Name: "Columns", Help: "Where each of their values goes; a row is one value", Columns: []*workbook.Column{
		{Heading: "Source", Needed: true, Help: "a source of the sheet Sources"},
		{Heading: "Theirs", Needed: true, Help: "their heading or label; group › heading; =F for column F, =12 for row 12; blocks: =B+3; sheet: =B5; {file} or {sheet} for the name itself"},
		{Heading: "Sheet", Needed: true, Help: "a sheet of a plan"},
		{Heading: "Column", Needed: true, Help: "its column"},
		{Heading: "Part", Help: "for wide sheets: which step, face or point; rows of one part make one row of the plan"},
		{Heading: "Unit", Help: "where their heading has none"},
		{Heading: "Words", Help: "a list of the sheet Words"},
		{Heading: "Confirmed", Needed: true, Help: "yes; anything else: the row is not used"},
		{Heading: "Found", Help: "what the proposal saw"},
		{Heading: "Question", Help: "what the proposal could not decide"},
		{Heading: "Why", Help: "why it is proposed"},
		{Heading: "Note", Help: "yours"},
	}},
	{Name: "Constants", Help: "What their sheets never say", Columns: []*workbook.Column{
		{Heading: "Source", Needed: true, Help: "a source of the sheet Sources"},
		{Heading: "Sheet", Needed: true, Help: "a sheet of a plan"},
		{Heading: "Column", Needed: true, Help: "its column"},
		{Heading: "Part", Help: "as in Columns"},
		{Heading: "Value", Needed: true, Help: "with its unit, as 25 W/m²·K"},
		{Heading: "When filled", Help: "one of their headings: only records where it is filled get the value"},
		{Heading: "Note", Help: "yours"},
	}},
	{Name: "Words", Help: "Their words and yours", Columns: []*workbook.Column{
		{Heading: "List", Needed: true, Help: "name of the list, as Columns gives it"},
		{Heading: "Theirs", Needed: true, Help: "their word, the whole cell"},
		{Heading: "Sheet", Help: "blank: the column that is mapped; else the word fills this place too"},
		{Heading: "Column", Help: "of that sheet"},
		{Heading: "Ours", Help: "what the plan says, numbers with their unit; blank = leave the cell blank"},
		{Heading: "Note", Help: "yours"},
	}},
	{Name: "Leave out", Help: "Records that are no products", Columns: []*workbook.Column{
		{Heading: "Source", Needed: true, Help: "a source of the sheet Sources"},
		{Heading: "Theirs", Needed: true, Help: "as in Columns; any = any cell of the record"},
		{Heading: "When", Needed: true, Choices: []string{whenIs, whenBlank, whenFilled, whenStarts, whenEnds, whenStruck}, Help: "what the cell must be: is, is blank, is filled, starts with, ends with, struck through"},
		{Heading: "Word", Help: "for is, starts with, ends with"},
		{Heading: "Reason", Needed: true, Help: "counted and listed by it"},
	}},
}

// planSheets may stand in a mapping: their rows go into the plan as they are.
var planSheets = []string{"Plan", "Layers", "Foods", "Courses", "Faces", "Steps", "Points", "Limits", "Groups", "Tables"}

// Sheets are all sheets that a mapping may have.
var Sheets = append(append([]*workbook.Sheet(nil), OwnSheets...), ofPlan(planSheets)...)

func ofPlan(names []string) []*workbook.Sheet {
	var out []*workbook.Sheet
	for _, n := range names {
		out = append(out, workbook.SheetNamed(n))
	}
	return out
}
