package intake

import (
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// A saying is the wording of one kind of problem: what is wrong and what was expected, and how to mend it. {1}, {2}, … stand for its
// arguments. Where a typed text is quoted in front, msg goes on after it; where the cell was blank, msg is a sentence of its own.
type saying struct{ msg, hint string }

func fill(wording string, args []string) string { return workbook.Fill(wording, args...) }

// problem words one problem.
func (s saying) problem(at cell.Ref, level cell.Level, field, typed string, args ...string) cell.Error {
	return cell.Error{At: at, Level: level, Field: field, Typed: typed, Msg: fill(s.msg, args), Hint: fill(s.hint, args)}
}

// Every wording of the import; those of single values come from workbook.
var (
	// the mapping
	noSources      = saying{"The mapping has no row in the sheet Sources", "name there which of their sheets are read; slowpoint import THEIRS --propose MAP.xlsx writes a mapping to confirm"}
	lacking        = saying{"{1} is missing", "fill it"}
	twice          = saying{"is there twice; the first is in row {1}", "keep one of the rows"}
	stars          = saying{"holds more than one *", "keep one; use a row of Sources for each kind of name"}
	rowFault       = saying{"The row of the mapping is at fault", "mend it as its own message says"}
	headDash       = saying{"is the heading of a layout that has none", "type - for the layout sheet"}
	headRows       = saying{"is not a heading row", "type its number, as 4, or two rows below each other as 3-4 (as text: put an apostrophe in front, or the spreadsheet makes a date of it)"}
	headColumns    = saying{"is not a heading column", "type its letter, as A, or two columns side by side as A-B"}
	endWrong       = saying{"is not a row or column of this layout", "type {1}"}
	endsCross      = saying{"First and Last leave no data below the headings", "correct Heading, First or Last"}
	sourceUnknown  = saying{"is not a source of the sheet Sources{1}", "correct the name, or add the source"}
	sheetWrong     = saying{"is not a sheet of a plan that records fill{1}", "choose from: {2}"}
	columnWrong    = saying{"is not a column of the sheet {1}{2}", "choose from: {3}"}
	twoColumns     = saying{"is filled by row {1} of Columns too", "map one of their columns to each place; use another Part if it is another row of the plan"}
	constantToo    = saying{"is filled by row {1} of Columns too", "keep the column or the constant"}
	constantTwice  = saying{"is filled by row {1} of Constants too", "keep one of the two, or give both a When filled of their own"}
	notConfirmed   = saying{"The row is not confirmed and not used", "type yes under Confirmed once it is right, or no"}
	neededAsleep   = saying{"{1} of {2} is needed, and this row, which would fill it, is not confirmed", "type yes under Confirmed once it is right"}
	neededUnmapped = saying{"needs {1} of {2}, and no row of Columns, Constants or Words fills it", "add a row to Columns, or to Constants if their sheets never say it: {3}"}
	nothingMapped  = saying{"is a source of which no row of Columns is confirmed", "confirm its rows in Columns, or take the source out"}
	listUnknown    = saying{"is not a list of the sheet Words{1}", "correct the name, or add the list"}
	unitUnknown    = saying{"is not a unit of {1}", "units of {1} are {2}"}
	unitOfWords    = saying{"is a unit, but {1} takes words", "clear the cell"}
	kelvin         = saying{"is kelvin, which is not accepted for a temperature", "convert their values, and type °C or °F"}
	ownNoUnit      = saying{"has no unit, which {1} needs", "type the unit behind the number: {2}"}
	wordMissing    = saying{"Word is missing: {1} needs one", "type what the cell says"}
	wordUnused     = saying{"is a word, but {1} takes none", "clear the cell"}
	anyBlank       = saying{"cannot be said of any cell of a record", "name one heading instead of any"}
	whereRows      = saying{"is not a column of theirs", "type their heading, or =F for column F"}
	whereColumns   = saying{"is not a row of theirs", "type their heading, or =12 for row 12"}
	whereBlocks    = saying{"is not a place of a block", "type a label, or =B+3 for column B, 3 rows below the row in which the block starts"}
	whereSheet     = saying{"is not a cell", "type a label, or =B5"}
	wordHalf       = saying{"{1} is missing", "fill Sheet and Column, or leave both blank for the column that is mapped"}
	wordTwice      = saying{"fills this place twice; the first is in row {1}", "keep one of the rows"}
	wordNever      = saying{"never occurs in the column that uses the list", "correct the word, or take the row out"}
	listNever      = saying{"is a list that no confirmed row of Columns uses", "name it under Words, or take its rows out"}
	unanswered     = saying{"is a question of the proposal that nobody answered", "type what the plan shall say; a blank leaves the cell blank"}
	ruleNever      = saying{"The rule ({1}) fits no record", "correct When and Word, or take the row out"}
	wordRefused    = saying{"stands for {1} in the mapping ({2}), which cannot be used: {3}", "mend the mapping: {4}"}

	// their files and sheets
	fileUnknown   = saying{"is the name of no file that was given", "files given: {1}"}
	sheetOfCSV    = saying{"is a sheet, and a CSV file has none", "leave Sheet blank for CSV files"}
	theirsUnknown = saying{"is the name of no visible sheet of {1}{2}", "its sheets are {3}"}
	sheetNoFile   = saying{"No file that was given has a sheet for this source", "give the files, or correct File and Sheet"}
	sheetHidden   = saying{"is a hidden sheet of {1} and is not read", "unhide it if it is to be imported"}
	fileUnread    = saying{"The file is read by no source of the mapping", "add a source for it, or do not give it"}
	sheetUnread   = saying{"The sheet is read by no source of the mapping", ""}
	hiddenSheet   = saying{"The sheet is hidden and is not read", "unhide it if it is to be imported"}
	sheetEmpty    = saying{"The sheet is empty", ""}
	headRowBlank  = saying{"The sheet has no headings in {1}, where the mapping ({2}) looks for them", "correct Heading in the sheet Sources"}
	headMoved     = saying{"The headings of this mapping stand in {2} of {1}, and Sources says {3}", "correct Heading, or take out what was inserted before them"}
	headUnknown   = saying{"is no heading of {1}{2}", "correct the name, or name the place by its letter or number as {3}"}
	labelUnknown  = saying{"is no label of {1}{2}", "correct the name, or name the place as {3}"}
	labelNowhere  = saying{"is no label of any sheet of the source{1}", "correct the name, or name the place as {2}"}
	labelLacks    = saying{"is a label that {1} of {2} do not have ({3}); it is blank there", "add the label there, unless it has nothing to say"}
	headTwice     = saying{"is there twice in {1}: {2}", "name the place itself, as {3}"}
	labelTwice    = saying{"The label {1} is there twice in the record, in {2} and {3}", "name the place itself in the mapping, as {4}"}
	headNoUnit    = saying{"has no unit; {1} needs one", "fill Unit in {2} of the mapping, or put the unit in brackets after the heading"}
	headOther     = saying{"gives the unit {1}, but the mapping ({2}) says {3}", "let both say the same unit"}
	headNotUnit   = saying{"has the unit {1}, which is not a unit of {2}", "correct the column that it is mapped to, or fill Unit in {3} of the mapping"}
	headKelvin    = saying{"is in kelvin, which is not accepted for a temperature", "use °C or °F"}
	headHidden    = saying{"{1} is hidden, and its values are imported", "unhide it so that everybody sees what is imported"}
	decimalMixed  = saying{"shows a decimal comma, but {1} shows a decimal point", "use one decimal sign throughout, or fill Decimal sign in the sheet Sources"}
	byEvidence    = saying{"is read as {1}, because {2} shows the decimal sign{3}", "fill Decimal sign in the sheet Sources if that is wrong"}
	formulasUsed  = saying{"The cell{1} a formula; the stored result is used", ""}
	linksUsed     = saying{"The cell{1} a link to another workbook; the result that was stored last is used", "look whether it is up to date"}
	protected     = saying{"The sheet is protected; it is read all the same", ""}
	writing       = saying{"{1}", "look at its letters; save it as CSV UTF-8 if they are wrong"}
	noRecords     = saying{"The list has no rows below its headings", "fill it, or take its source out of the mapping"}
	outside       = saying{"{1} outside First and Last of the mapping ({2}) and not read: {3}", "correct First or Last, or take them out if they are no records; a rule of the sheet Leave out takes out what is none"}
	blocksBeside  = saying{"begins a second block in this row; the first begins in {1}", "blocks must stand below each other; name the places of each in a source of its own, or part them"}
	noBlock       = saying{"begins no block of {1}", "correct Heading in the sheet Sources: the whole cell that starts each block"}

	// records
	hiddenRow     = saying{"{1} is hidden", "unhide it or delete it, or leave it out by a rule; what is hidden is never imported and never skipped in silence"}
	struckCell    = saying{"is struck through, or a part of it is", "take the line away if it counts, delete the record, or leave it out by a rule"}
	mergedCells   = saying{"The cells {1} are merged", "unmerge them and fill each cell"}
	beyondHead    = saying{"stands right of the last heading", "take it out, or give it a heading; in CSV a value that holds the sign between cells needs quotation marks"}
	noWord        = saying{"is not a word of the list {1}{2}", "add it to the sheet Words of the mapping, with what the plan shall say"}
	neededBlank   = saying{"{1} is missing", "{2}, or leave the record out by a rule of the sheet Leave out"}
	neededWhen    = saying{"{1} is missing: {2} gives it only where {3} is filled", "fill that, or add a constant"}
	neededWord    = saying{"{1} is missing: no word of the record gives it", "add it to the sheet Words of the mapping, for the words of this record"}
	noLabel       = saying{"{1} is missing: the label {2} does not occur in the record", "add the label, or leave the record out by a rule of the sheet Leave out"}
	filledTwice   = saying{"{1} is filled twice, by {2} and by {3}", "let one of them fill it"}
	nothingFilled = saying{"None of the cells that are mapped is filled", "leave such records out by a rule of the sheet Leave out, or fill them"}
	productTwice  = saying{"is there twice; the first is {1}", "give each product a name of its own, or leave one out"}
	partLacks     = saying{"{1} has nothing filled for {2}, which {3}; it makes no row of {4}", "fill its cells, unless there is none"}
	partsLack     = saying{"{1} records have nothing filled for {2}, which {3}; they make no row of {4}: {5}", "fill their cells, unless there is none"}
	stepOther     = saying{"{1} differs from {2}, which makes the same row of the plan ({3})", "let both say the same, or give each its own name"}
	routeOther    = saying{"is a process that is made here of {1}, but in {2} of {3}", "fill the same steps in all records of a process, or give each kind a process of its own"}
)

var headWrong = map[string]saying{rowLayout: headRows, columnLayout: headColumns}

var whereWrong = map[string]saying{rowLayout: whereRows, columnLayout: whereColumns, blockLayout: whereBlocks, sheetLayout: whereSheet}

// example is how a place is named by its letter or number.
var example = map[string]string{rowLayout: "=F", columnLayout: "=12", blockLayout: "=B+3", sheetLayout: "=B5"}
