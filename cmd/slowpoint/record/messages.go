package record

import (
	"fmt"
	"sort"
	"strconv"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// A saying is the wording of one kind of problem: what is wrong and what was expected, and how to mend it. {1}, {2}, … stand for its
// arguments. Where a typed text is quoted in front, msg goes on after it.
type saying struct{ msg, hint string }

// problem words one problem.
func (s saying) problem(at cell.Ref, level cell.Level, field, typed string, args ...string) cell.Error {
	return cell.Error{At: at, Level: level, Field: field, Typed: typed, Msg: workbook.Fill(s.msg, args...), Hint: workbook.Fill(s.hint, args...)}
}

// The settings, by their columns of the sheet Records and by the item of the sheet Plan.
const (
	setFile    = "File"
	setSheet   = "Sheet"
	setTime    = "Time column"
	setTemp    = "Temperature column"
	setOrder   = "Date order"
	setZone    = "Time zone"
	setMissing = "Missing words"
	setDecimal = "Decimal sign"
)

// Every wording of the reader.
var (
	// the file
	noFile    = saying{"cannot be read: {1}", "check the name; it is looked for from the folder of the plan"}
	isFolder  = saying{"is a folder; a record is one file", "name the file in it"}
	noRegular = saying{"is neither a file nor a folder", "name a file"}
	emptyFile = saying{"is empty", "export the record again"}
	tooBig    = saying{"has more than {1} MB, the most that is read", "export a part of the record, or with a longer interval"}
	tooMany   = saying{"has more than {1} readings, the most that one record may have{2}", "export it with a longer interval, such as a reading every 10 seconds, or divide it into several files"}
	notText   = saying{"is {1}, and neither delimited text in a known writing nor an .xlsx workbook", "export the record as CSV or .xlsx"}
	badBook   = saying{"cannot be read: {1}", ""}
	zeroBytes = saying{"The line holds zero bytes, so a part of the record is lost or it is UTF-16 without a mark", "export the record again, as CSV UTF-8"}
	zeroEnd   = saying{"The file ends in zero bytes, which are ignored", ""}
	longLine  = saying{"has a line of more than 1 MB", "export the record again, one reading a line"}
	notUTF8   = saying{"The line is not in UTF-8; such lines are read as Windows-1252", ""}
	badQuote  = saying{"A quotation mark stands in the wrong place", "take out the stray quotation mark, or export the record again"}
	wideRow   = saying{"The line has {1} cells, but the headings are {2}", "a sign that divides the cells may stand in a cell, such as a decimal comma: export the record with semicolons or tabs between the cells"}

	sheetHidden  = saying{"is a hidden sheet of {1}", "unhide it, so that everybody sees what is read"}
	noSheet      = saying{"is no sheet of {1}; there are {2}", "correct the name"}
	askSheet     = saying{"{1} has several sheets: {2}", "name one of them in Sheet"}
	hiddenSheets = saying{"{1} has hidden sheets, {2}, which are ignored; {3} is read", ""}
	sheetOfText  = saying{"is given, but {1} is text and has no sheets", "clear the cell"}
	hiddenRow    = saying{"The row is hidden", "unhide it or delete it; a hidden row is never used and never skipped in silence"}
	hiddenColumn = saying{"Column {1} is hidden, and its values are used", "unhide it, so that everybody sees what is read"}
	hasMacros    = saying{"has macros, which are never run; the cells are taken as they were saved last", ""}
	struckCell   = saying{"is struck through, or a part of it is", "take the line away if the row counts, or delete the row; what is struck through is never used and never skipped in silence"}
	shownOther   = saying{"is stored, but the cell shows something else, by its number format or by raised digits", "look which counts, and give the cells the number format General"}
	mergedData   = saying{"The cells {1} are merged", "unmerge them and fill each cell, or export the record again"}

	// the table
	noHeading    = saying{"is no heading of {1}{2}", "correct it, or give the letter of the column"}
	noHeadings   = saying{"{1} has no row of headings with readings below that could be found", "give the letters of the columns in Time column and Temperature column, the unit in brackets behind: B (°C)"}
	noTimes      = saying{"No column of times could be told among the headings{1}", "name it in Time column"}
	noTemps      = saying{"No column of temperatures could be told among the headings{1}", "name it in Temperature column"}
	severalCols  = saying{"fits several columns: {1}", "give the letter of the one that is meant"}
	askColumn    = saying{"Several columns could be meant: {1}", "name one of them in {2}"}
	letterTwice  = saying{"is the heading of column {1} and the letter of column {2}", "write column {1} or column {2}"}
	noColumn     = saying{"is no heading with readings below that could be found, and as a letter it is beyond the last column, {1}", "correct it"}
	sameColumn   = saying{"is the column of times too", "name the column of temperatures"}
	otherRun     = saying{"is column {1}, behind the times of column {2}, but Time column is column {3}", "several runs stand side by side: give the times and the temperatures of one of them, by their letters"}
	needsDate    = saying{"holds clocks only, and column {1} holds the dates", "write both, joined by a +: {2}"}
	needsClock   = saying{"holds dates only, and column {1} holds the clocks", "write both, joined by a +: {2}"}
	noReadings   = saying{"{1} holds no readings{2}", "check the columns, and export the record again"}
	oneColumn    = saying{"{1} has one column; a record has its times in one and its temperatures in another", "export both{2}"}
	oneReading   = saying{"The line has the only reading, {1}; a course is two at least, at different times", "export the whole record: what the temperature was before and after one reading cannot be told from it"}
	anotherRun   = saying{"may begin another run, and readings follow", "keep one run in the file; a remark within one run stands behind a # in its row"}
	twoTables    = saying{"{1} holds more than one table: {2}, and again from {3} on", "keep one of them in the file"}
	skippedRows  = saying{"is no reading; the line is skipped", ""}
	eventRows    = saying{"The line marks an event and has no reading; it is skipped", ""}
	belowTable   = saying{"stands below the readings; it and what follows are not read", ""}
	aboveReading = saying{"stands between the headings and the readings and is not read", ""}

	// units
	ofMoisture     = saying{"is headed {1} in the file; a dew point or a humidity is no temperature of the food or of what surrounds it", "choose the column of the probe"}
	noScale        = saying{"has no unit, and neither has its heading in the file{1}", "write the unit behind it, as {2} (°C), {2} (°F) or {2} (K)"}
	otherScale     = saying{"says {1}, but {2} says {3}", "find out which counts, and correct Temperature column"}
	noTick         = saying{"holds numbers without a unit{1}", "write the unit behind it: {2} (s), {2} (min), {2} (h), {2} (d) or {2} (serial)"}
	otherTick      = saying{"says {1}, but the heading in the file says {2}", "find out which counts, and correct Time column"}
	wrongTick      = saying{"is not written as {1}, which the unit of the times says", "correct the unit in Time column"}
	eitherClock    = saying{"{2} in {3} can be {4} or {5}, and {1} does not say which", "write behind it how the times are meant: {6} (h:mm) or {6} (mm:ss), or {6} (clock) for the time of day"}
	otherScaleCell = saying{"has another unit than the heading or Temperature column says, {1}", "find out which counts, and correct Temperature column"}
	scaleCame      = saying{"has a unit, but readings above have none", "write the unit of all behind Temperature column, or export the record in one writing"}
	mixedScale     = saying{"has another unit than the readings above, {1}", "export the record in one unit"}

	// times
	notTime      = saying{"is not a time", "mend the line, or take it out of the file"}
	timeLacks    = saying{"The reading has no time", "mend the line, or take it out of the file"}
	otherForm    = saying{"is not written as the times above, {1}", "export the record again with times of one form"}
	askOrder     = saying{"The dates of {1} fit several orders: {2} in {3} can be {4}", "fill Date order"}
	noOrder      = saying{"and the other dates fit no order of day, month and year: {1}", "mend the dates, or export the record with dates as 2026-02-11"}
	wrongOrder   = saying{"is no date with the order {1}", "correct Date order"}
	otherOrder   = saying{"is set, but the heading {1} says {2}", "find out which counts; blank takes that of the heading"}
	noOrderWord  = saying{"is no order of dates", "choose from: day month year, month day year, year month day"}
	badZone      = saying{"is no offset from UTC", "write it as UTC-07:00"}
	otherZone    = saying{"says {1}, but the file says {2}", "find out which counts; blank takes that of the file"}
	zoneLost     = saying{"has no zone, but the times above have one", "export the record again with times of one form"}
	zoneCame     = saying{"has a zone, but the times above have none", "export the record again with times of one form"}
	backHour     = saying{"is an hour or so before the time of {1}, {2}: the clock of the logger was set back, so an hour is there twice", "export the record in UTC, or keep the readings up to here or from here on"}
	back         = saying{"is before the time of {1}, {2}", "if a clock of 12 hours or a date that stays the same turned over there, export it with AM or PM and the date; otherwise sorted by time"}
	sameTime     = saying{"is the time of {1} too, with another reading ({2} and {3})", "take one of the two out, or, where several sensors are listed below each other, export them in columns of their own"}
	merged       = saying{"is the time of {1} too, with the same reading; the two are one reading", ""}
	descending   = saying{"The newest reading comes first; they are put in order of time", ""}
	overMidnight = saying{"comes after {1}: the clock passes midnight, and a day is added", ""}
	oldYear      = saying{"is a date of a clock that was not set, as after an empty battery", "check when the record was made; the times between its readings are used as they are"}
	farYear      = saying{"is in the future", "check the clock of the logger; the times between its readings are used as they are"}
	longAgo      = saying{"is more than ten years ago", "check the clock of the logger; the times between its readings are used as they are"}

	// readings
	notReading  = saying{"is not a temperature", "if it stands for a reading that is missing, add it to Missing words"}
	isCompared  = saying{"is a limit and not a reading", "export the record with plain readings"}
	isEndless   = saying{"is no number that can be used", "export the record again"}
	bothPoints  = saying{"shows a point and a comma, so what it is worth cannot be told", "export the record without signs between thousands"}
	mixedSigns  = saying{"has a decimal {1}, but {2} has a decimal {3}", "export the record with one decimal sign"}
	otherSign   = saying{"has a decimal {1}, but Decimal sign says {2}", "correct the item Decimal sign of the sheet Plan"}
	askComma    = saying{"{2} in {3} can be {4} or {5}, for its comma may divide thousands, and nothing else in {1} shows the decimal sign", "fill the item Decimal sign of the sheet Plan"}
	badDecimal  = saying{"is no decimal sign", "choose from: point, comma"}
	isMissing   = saying{"is not a temperature and is taken as missing: {1} of {2} readings ({3})", ""}
	blankRead   = saying{"{1} of {2} readings missing ({3})", ""}
	noStored    = saying{"The formula has no stored result", "open the workbook in your spreadsheet program, let it calculate, and save it again"}
	wrongForm   = saying{"is formatted as a date, a time or a percentage, and is no temperature", "check the column, and give its cells a number format"}
	formulaUsed = saying{"{1} of the cells hold formulas; their stored results are used ({2})", ""}
	outside     = saying{"is beyond what is read as a temperature of food or its surroundings, {1} to {2}, and is taken as missing: {3} of {4} readings ({5})", ""}
	constant    = saying{"is every one of the {1} readings: the sensor does not follow", "choose another channel or record; of surroundings that did stay at one value, leave the record out and write it as the Temperature of the step in the sheet Steps"}
	cutReading  = saying{"stands at the end of the file, in a line without an end, and is shorter than the readings above: it may be cut off, and is kept", "export the record again, or take the line out"}
	frozen      = saying{"is read {1} times in a row, up to {2}: the sensor may have stopped", "check the logger"}
	doubtful    = saying{"jumps away from {1} before and {2} after it, and is kept", "look at the record there: a loose plug or a moved probe?"}
	leapt       = saying{"comes {2} after {1}, faster than {3}; {4} kept, and doubtful", "was the probe pulled out or unplugged, write in Starts at when the readings of the food begin or end (end 13:30); was it moved, look at the record there"}
	strayed     = saying{"comes {2} after {1}, goes on to {3} and comes back within {4}, as no food does where its surroundings stay as they are; {5} kept, and doubtful", "was the probe out of the food, or the food out of its surroundings, look at the record there; Starts at tells when another step began"}
	putInto     = saying{"comes {2} after {1}, as when the probe is put into the food; what was read before is kept", "if so, write in Starts at when the first step began"}
	farApart    = saying{"The readings lie {1} apart as a rule; in more than {2} without a reading it may have been anywhere", "let a logger record it, or read it every hour"}
	gap         = saying{"No reading between {1} and {2}: {3}, where {4} is usual", ""}
	springGap   = saying{"No reading between {1} and {2}: {3}, where {4} is usual; clocks are set forward by an hour in such nights, which would be no gap", "if the clock of the logger was, export the record in UTC"}
	changeNight = saying{"The record runs over the night before {1}, in which clocks change in many countries, and no Time zone is given; no step of an hour is seen", ""}
)

// found is what is wrong in one way in one column: the first place, and others.
type found struct {
	problem cell.Error
	line    int32
	col     int
	more    []int32 // at most three lines
	n       int     // places in all
}

// tellings collects what is wrong in a file: the same in a thousand lines is one problem.
type tellings struct {
	of    source
	byKey map[tellKey]*found
	list  []*found
}

type tellKey struct {
	msg string
	col int
}

const mostMore = 3 // further places that are named

// tell adds one place where something is wrong.
func (t *tellings) tell(s saying, level cell.Level, field string, line int32, col int, typed string, args ...string) {
	k := tellKey{s.msg, col}
	if f := t.byKey[k]; f != nil {
		if f.n++; len(f.more) < mostMore {
			f.more = append(f.more, line)
		}
		return
	}
	f := &found{problem: s.problem(t.of.place(line, col), level, field, shorten(typed), args...), line: line, col: col, n: 1}
	if t.byKey == nil {
		t.byKey = map[tellKey]*found{}
	}
	t.byKey[k] = f
	t.list = append(t.list, f)
}

// faults counts those that keep the record from being used.
func (t *tellings) faults() int {
	n := 0
	for _, f := range t.list {
		if f.problem.Level == cell.Fault {
			n++
		}
	}
	return n
}

// all gives the problems in the order of their places.
func (t *tellings) all() cell.Errors {
	sort.SliceStable(t.list, func(i, j int) bool {
		a, b := t.list[i], t.list[j]
		return a.line < b.line || a.line == b.line && a.col < b.col
	})
	var out cell.Errors
	for _, f := range t.list {
		p := f.problem
		if f.n > 1 {
			p.Msg += " (likewise in " + listing(t.of, f.more, f.n-1) + ")"
		}
		out.Add(p)
	}
	return out
}

// listing names lines: "line 5", "lines 5, 6 and 9", "lines 5, 6, 9 and 412 more".
func listing(of source, lines []int32, n int) string {
	word := of.word()
	if n != 1 {
		word += "s"
	}
	names := make([]string, 0, len(lines)+1)
	for _, l := range lines {
		names = append(names, strconv.Itoa(int(l)))
	}
	if more := n - len(lines); more > 0 {
		names = append(names, fmt.Sprintf("%d more", more))
	}
	return word + " " + workbook.Joined(names, " and ")
}

// shorten keeps what is quoted to a length that can be read.
func shorten(s string) string {
	if rs := []rune(s); len(rs) > 60 {
		return string(rs[:57]) + "…"
	}
	return s
}
