package workbook

import (
	"strings"

	"slowpoint/model/cell"
)

// A saying is the wording of one kind of problem: what is wrong and what was expected, and how to mend it. {1}, {2}, … stand for its
// arguments. Where a typed text is quoted in front, msg goes on after it; where the cell was blank, msg is a sentence of its own.
type saying struct{ msg, hint string }

// Every wording of the reader. Those of numbers come from model/unit, those of compositions from model/food.
var (
	// sheets and headings
	unknownSheet  = saying{"is not a sheet of a plan and is ignored", "{1}"}
	hiddenSheet   = saying{"is a hidden sheet and is ignored", "unhide it if it belongs to the plan"}
	doubledSheet  = saying{"is there twice ({1} and {2})", "keep one of them"}
	noHeader      = saying{"The sheet has no row with all the needed headings: {1} {2} missing", "give every table a heading row; slowpoint blank writes one"}
	emptySheet    = saying{"The sheet is empty", "fill it or take it out"}
	aboveHeader   = saying{"{1} above the headings {2} ignored", ""}
	unknownColumn = saying{"is not a column of the sheet {1}{2}", "correct the heading; a column of your own starts with # or is named by the item Ignore columns of the sheet Plan"}
	doubledColumn = saying{"is there twice, in columns {1} and {2}", "keep one of the two columns"}
	headingNoUnit = saying{"has no unit; {1} needs one", "put the unit in brackets, as {2}"}
	headingOther  = saying{"has the unit {1}, which is not a unit of {2}", "units of {2} are {3}"}
	headingAlike  = saying{"has a unit with the {1}", "type it in Latin letters: {2}"}
	headingKelvin = saying{"is in kelvin, which is not accepted for a temperature", "use °C or °F"}
	headingNoDiff = saying{"is headed as a temperature, but it is a temperature difference", "write {1} (°C difference) or {1} (°F difference)"}
	noHeading     = saying{"stands in a column without a heading", "give column {1} a heading, one that starts with # if it is your own, or clear the cell{2}"}
	twoTables     = saying{"The sheet holds two tables, {1} and {2}", "keep one table on a sheet"}
	struckHeading = saying{"is a heading that is struck through", "take the line away if the column counts, put a # in front of it, or delete the column"}
	hiddenColumn  = saying{"Column {1} is hidden, and its values are used", "unhide it so that everybody sees what is calculated"}
	tooManyRows   = saying{"The sheet has more than {1} rows", "divide the plan into several"}
	csvUnreadable = saying{"The file cannot be read as CSV: {1}", "{2}"}
	swallowed     = saying{"a cell in quotation marks goes from line {1} to line {2} and holds a {3}, so two rows may have become one", "take out the stray quotation marks, or the line break of the cell"}
	notUTF8       = saying{"The file is not in UTF-8 ({1})", "save it as CSV UTF-8"}

	// sheets that the import makes
	originsDamaged  = saying{"{1}, so where some values come from cannot be told{2}", "the plan is calculated all the same; import again to have the sheet made anew"}
	madeHeadless    = saying{"The sheet was made by the import and has no longer a row with all its headings ({1}); it cannot be used", "the plan is calculated all the same; import again to have the sheet made anew"}
	fromDamaged     = saying{"leads to no origin: it is not as the import wrote it, or the sheet Origins does not know it{1}", "the row is calculated all the same; import again to have it made anew"}
	rowsGone        = saying{"{1} of {2} that the import made {3} gone: {4}", "leave rows out by the mapping, so that the plan says so, or import again to have them back"}
	rowsAdded       = saying{"The row was added after the import{1}", "nothing leads from it to the spreadsheets"}
	rowsCopied      = saying{"The row was copied within the plan after the import: it has the #From of a row above it{1}", "clear its cell of #From"}
	fromGone        = saying{"The column #From, which the import made, is gone, so that nobody can tell whether rows are gone too", "import again to have the sheet made anew"}
	rowsNotImported = saying{"{1} of the spreadsheets {2} not imported; see the sheet {3}", "mend them in the spreadsheets and import again"}

	// rows and cells
	keyMissing     = saying{"stands in a row without {1} and belongs to nothing", "fill the row, clear it, or put a # in front of the heading if the column is your own"}
	missing        = saying{"{1} is missing", "{2}"}
	hiddenRow      = saying{"The row is hidden", "unhide it or delete it; a hidden row is never used and never skipped in silence"}
	struckCell     = saying{"is struck through, or a part of it is", "take the line away if the row counts, or delete the row; what is struck through is never used and never skipped in silence"}
	mergedCells    = saying{"The cells {1} are merged", "unmerge them and fill each cell"}
	notAChoice     = saying{"is not a word of the column {1}{2}", "choose from: {3}"}
	notAnAnswer    = saying{"is not an answer to the item {1}", "choose from: {2}"}
	duplicate      = saying{"is there twice; the first is in row {1}", "give each {2} a name of its own"}
	errorValue     = saying{"is an error of the spreadsheet", "mend the formula or type the value"}
	noResult       = saying{"The formula in {1} has no stored result", "open the workbook in your spreadsheet program, let it calculate, and save it again; or type the value"}
	formulaUsed    = saying{"The cell holds a formula; its stored result is used", ""}
	formulasUsed   = saying{"The cell and {1} more of its column, down to row {2}, hold formulas; their stored results are used", ""}
	notPositive    = saying{"is not more than 0", "{1} must be more than 0"}
	negative       = saying{"is less than 0", "{1} must be 0 or more"}
	notShare       = saying{"is not between 0 and 100 %", "type a percentage from 0 to 100"}
	notUpToOne     = saying{"is not between 0 and 1", "{1} is more than 0 and at most 1"}
	belowZeroK     = saying{"is below the absolute zero", "check the number and its unit"}
	impossible     = saying{"is read as {1}, which cannot be: possible is {2}, usual {3}", "check the number and its unit{4}"}
	unusual        = saying{"is read as {1}, which is unusual: usual is {2}", "check the number and its unit{3}"}
	isDate         = saying{"is formatted as a date", "type {1}, and give the cell a number format"}
	isTime         = saying{"is formatted as a time", "type {1}, and give the cell a number format"}
	isWorded       = saying{"is shown with the unit {1} by its number format, but the heading says {2}", "let both say the same unit"}
	shownNothing   = saying{"is stored, but the cell shows nothing of it, by its number format", "look whether the number counts, and give the cell a number format that shows it"}
	shownWords     = saying{"is stored, but the cell shows words in its place, by its number format", "look whether the number counts, and give the cell a number format that shows it"}
	shownThousands = saying{"is stored, but the cell shows it divided by a thousand, by the comma that ends its number format", "look which number counts, and give the cell a number format without that comma"}
	shownOther     = saying{"is stored, but the cell shows another number, by its number format", "look which number counts, and give the cell the number format General"}
	shownTimeOfDay = saying{"is shown as a time of day by its number format", "for a duration give the cell the number format [h]:mm, or type a number with its unit, as 2 h"}
	shownOver      = saying{"is stored, but the cell shows only what is over after whole {1}, by its number format", "look which time counts, and give the cell the number format {2}, or type a number with its unit, as 90 min"}
	raisedDigits   = saying{"holds raised or lowered digits, of a footnote perhaps, which would be read with the number", "type the number alone, and the footnote into another column"}
	isPercent      = saying{"is formatted as a percentage", "type {1}, and give the cell a number format"}
	isTruth        = saying{"is a logical value", "type {1}"}
	decimalMixed   = saying{"shows a decimal {1}, but {2} shows a decimal {3}", "use one decimal sign throughout, or fill the item Decimal sign of the sheet Plan"}
	readByEvidence = saying{"is read as {1}, because {3} shows that the decimal sign is the {2}", "type it without a sign between thousands, or fill the item Decimal sign of the sheet Plan"}
	asFound        = saying{"{1}", "{2}"} // the words come from model/unit, model/food or rules
	numberNoUnit   = saying{"has no unit, and its heading gives none", "put the unit in brackets after the heading or behind the number: {1}"}
	plainHeading   = saying{"is a plain number, without a unit", "write {1} alone"}
	notNumber      = saying{"is not a number", "type {1}"}
	notClock       = saying{"is not in the form {1} that the heading announces", "give the cell the number format [h]:mm or [mm]:ss, or change the unit of the heading"}

	// Plan
	unknownItem = saying{"is not an item of a plan{1}", "items are: {2}"}
	ignoresOurs = saying{"is a column of slowpoint's own, in {1}, and cannot be ignored", "rename your column, or start its heading with #"}
	noProducts  = saying{"The plan has no product", "fill the sheet Products"}

	// products, foods
	sizeMissing     = saying{"{1} is missing: the shape {2} needs {3}", "fill it, with a unit in the heading or in the cell"}
	sizeUnused      = saying{"is a {1}, which the shape {2} does not use; it needs {3}", "clear the cell or change the shape"}
	foodMissing     = saying{"Food is missing", "name a food of the sheet Foods or a built-in one; slowpoint foods lists them"}
	foodForLayers   = saying{"is a food, but a layered slab takes its foods from the sheet Layers", "clear the cell or change the shape"}
	foodUnknown     = saying{"is neither a food of the sheet Foods nor a built-in one{1}", "slowpoint foods lists the built-in foods"}
	processUnknown  = saying{"has no rows in the sheet Steps{1}", "add its steps, or correct the name"}
	onlyOwnRows     = saying{"has only rows in the sheet Steps that name a product", "leave the column Product blank in the rows of the process; a row that names a product replaces one of them for it"}
	processUnused   = saying{"is a process that no product uses{1}", "correct the name, or take the row out"}
	productUnknown  = saying{"is not a product of the sheet Products{1}", "correct the name"}
	foodMixed       = saying{"is a measured property, but the row gives a composition too", "keep the parts of the composition, or Conductivity, Density and Specific heat"}
	foodNothing     = saying{"has neither a composition nor measured properties", "fill Water, Protein, Fat, Carbohydrate, Fibre and Ash, or Conductivity, Density and Specific heat; the composition may be left out of a row that has the name of a built-in food"}
	foodPartly      = saying{"{1} is missing: measured properties are Conductivity, Density and Specific heat together", "fill it"}
	foodTwice       = saying{"is there twice; a composition takes one row (the first is in row {1})", "keep one row, or give measured properties with At temperature"}
	foodNoAt        = saying{"At temperature is missing: {1} has several rows, which make a table", "fill it in every row of the food"}
	tableSameAt     = saying{"is the temperature of row {1} of the same table too, with another time", "give each row of a table a temperature of its own"}
	tableRising     = saying{"does not go with row {1} ({2}): what is hotter takes less time", "check both rows"}
	textTooLong     = saying{"is the beginning of a text of more than {1} characters", "shorten it"}
	foodSameAt      = saying{"is the temperature of row {1} too", "give each row of a food a temperature of its own"}
	foodUnlike      = saying{"differs from row {1} of the same food, which says {2}", "say it once, or the same in every row"}
	airWithMeasured = saying{"is given beside measured properties, which already hold the air", "clear the cell"}

	// steps, faces, courses
	stepUnknown  = saying{"is not a step of the process {1}{2}", "correct the name"}
	tooManySteps = saying{"has more than {1} steps", "divide the process"}
	stepTwice    = saying{"is there twice in the process {1}; the first is in row {2}", "give each step of a process a name of its own"}
	noMedium     = saying{"Temperature is missing: {1} needs a Temperature or a Course", "fill one of the two"}
	bothMedia    = saying{"is given beside the temperature {1}", "keep Temperature or Course, not both"}
	bothHumid    = saying{"is given beside that of the course {1}", "keep one of them: clear the cell, or the column Relative humidity of the course"}
	mediumUnused = saying{"is given, but {1} has no temperature", "clear the cell"}
	columnUnused = saying{"is given, but {1} does not use {2}", "clear the cell or choose other surroundings"}
	columnNeeded = saying{"{1} is missing: {2} needs it", "{3}"}
	looseLid     = saying{"Wrap resistance is missing: loose lid needs it", "measure the air gap under the lid: it is about 0.04 m²K/W a millimetre"}
	// The plastic of the example, 0.2 W/(m·K), is from memory.
	bareWrap = saying{"is taken without a Wrap resistance of its own{1}, so that heating and chilling both come out a little too fast, which is not the safe side",
		"type its thickness over its conductivity, 0.00025 m²K/W for 0.05 mm of a plastic of 0.2 W/(m·K), or a film coefficient that includes it; a wrap with air beneath it is no tight one: take loose lid, about 0.04 m²K/W a millimetre of air"}
	openWithWrap   = saying{"is given, but the cover is open", "clear the cell, or name the cover"}
	courseUnknown  = saying{"is not a course of the sheet Courses{1}", "correct the name"}
	courseUnused   = saying{"is a course that no row of Steps or Faces names", "name it in the column Course of Steps, or take its rows out"}
	courseShort    = saying{"is a course of {1}, shorter than the step of {2}", "add rows to the course up to the end of the step"}
	courseLong     = saying{"is a course of {1}, longer than the step of {2}; the rest is cut off", ""}
	courseStart    = saying{"is the first time of the course {1}; a course starts at 0", "add a row at 0, the start of the step"}
	courseOrder    = saying{"does not come after the row before ({1})", "sort the rows of a course by rising time, each time once"}
	courseHumidity = saying{"Relative humidity is missing, but other rows of the course {1} give it", "fill it in every row of a course or in none"}
	faceWrong      = saying{"is not a face that differs on the shape {1}; its faces are {2}", "correct the face, or take the row out"}
	faceNone       = saying{"is a face, but the shape {1} has one surface", "take the row out"}
	faceTwice      = saying{"is there twice for this step; the first is in row {1}", "keep one of the rows"}
	filmOfWater    = saying{"is read as {1}, more than air takes from food in the stage {2} (up to {3} W/m²·K): only water, ice slurry, sprays or plates reach it", "check the digits and the unit; if it is water or a plate, say so in Equipment"}
	processNamed   = saying{"names a process that cannot be calculated: {1}", "{2}; where nothing of the kind is done, word it otherwise"}
	processRefused = saying{"cannot be calculated: {1}", "{2}"}
	otherProcess   = saying{"is a product of the process {1}, not of this one", "correct the product or the process"}
	layerNotWhole  = saying{"is not the number of a layer", "number the layers 1, 2, 3 … from the top"}
	layerTwice     = saying{"is there twice for this product; the first is in row {1}", "number the layers 1, 2, 3 … from the top, each once"}
	layerGap       = saying{"is given, but no row is layer {1}", "number the layers 1, 2, 3 … from the top, without a gap"}
	layerLast      = saying{"is given for the lowest layer, below which there is no other", "clear the cell; what lies below the product goes into Wrap resistance of the sheets Steps or Faces"}
	layersFew      = saying{"needs two layers or more in the sheet Layers, and {1} has {2}", "add a row for each layer, or choose another shape"}
	layersMany     = saying{"is one of more than {1} layers", "join layers of one food"}
	layersOfOther  = saying{"has layers, but its shape is {1}", "choose the shape layered slab, or take its layers out"}
	pointCentre    = saying{"is the name of the built-in point at 0, 0, 0", "give the point another name, or type 0 for Up, Across and Along"}
	pointTwice     = saying{"is there twice for this product; the first is in row {1}", "give each point of a product a name of its own"}
	pointStirred   = saying{"is a point, but a stirred product has the same temperature everywhere", "take the row out"}

	// what varies
	spreadUnknown   = saying{"matches no product, family or process{1}", "type all, family: NAME, a product, a process, or process/step as Cook-chill/Oven"}
	spreadTwoNames  = saying{"is the name of a product and of a family or process too; the product is taken", "write family: NAME for a family"}
	spreadNotFor    = saying{"does not vary for {1}, which has none", ""}
	spreadFamilyToo = saying{"is the name of a process and of a family too", "write family: {1} if the family is meant; if the process is, give one of the two another name"}
	spreadNothing   = saying{"Neither Minus nor Plus says how far the {1} varies", "type how far it may be below or above, such as {2}, or take the row out"}
	spreadBare      = saying{"has no unit", "type how far the {2} may be off, with a unit in the cell, such as {1}"}
	spreadPercent   = saying{"is a percentage, and one of a {1} would depend on its scale", "type how far it may be off, such as {2}"}
	spreadNegative  = saying{"is less than 0", "{1} says how far it may be off, without a sign"}
	spreadToNothing = saying{"would leave nothing of the {1}", "type less than 100 %"}
	spreadTooMuch   = saying{"is more than {1} %", "check the number"}
	spreadOfProduct = saying{"names a step, and the {1} is no quantity of a step", "name the process, the product or its family"}
	spreadLacking   = saying{"is a quantity that {1} lacks", "correct the quantity, or whom the row is for"}
	spreadTwice     = saying{"varies by row {1} too, which is for as many", "keep one of the rows"}
	spreadOver      = saying{"is left to row {1} for {2}, which is more specific; an end that is blank there is taken from here", ""}
	spreadWins      = saying{"takes the place of row {1} for {2}, as it is more specific; an end that is blank here is taken from there", ""}
	spreadMany      = saying{"is the row by which {1} quantities of {2} vary; at most {3} are calculated", "keep those that matter, or say of which process/step they are"}
	spreadTooFar    = saying{"would leave nothing of the {1} of {2}", "type less"}
	spreadFilm      = saying{"is no percentage, and the program works out the film coefficient of {1}", "type a percentage, such as 25 %"}
	spreadCourse    = saying{"makes {1} longer than its course", "add rows to the course up to the end of the longest step"}
	spreadEnd       = saying{"as {1} leads, for {2}, to what cannot be calculated: {3}", "type less; a step may have a row of its own, as PROCESS/STEP"}

	// limits
	limitNeeds       = saying{"{1} is missing: the rule {2} needs it", "fill it"}
	limitUnused      = saying{"is given, but the rule {1} does not use {2}", "clear the cell or choose another rule"}
	stageUnknown     = saying{"is not a stage{1}", "choose from: {2}; join several by +, as cook + rest"}
	stageNowhere     = saying{"is a stage of no step of the products that the limit applies to", "correct the stage, or take the row out"}
	noPair           = saying{"is a pair of stages, which only delay uses", "join stages by +, as cook + rest"}
	appliesUnknown   = saying{"matches no product and no family{1}", "type all, family: NAME, or the name of a product"}
	familyNear       = saying{"is a family that no limit names; did you mean {1}, which the limit {2} is for?", "correct the family, or give it limits of its own"}
	familyUnknown    = saying{"matches no family of the sheet Products{1}", "correct the name of the family"}
	whereUnknown     = saying{"is not a place{1}", "type every point, surface, centre, medium, or the name of a row of Points"}
	whereLacking     = saying{"is a point that {1} does not have", "add it to Points for each product that the limit applies to"}
	tableUnknown     = saying{"is not a table of the sheet Tables{1}", "correct the name"}
	clockUnknown     = saying{"does not say when the clock starts", "type crossing, crossing of 60 °C, stage start: NAME, or stage end: NAME"}
	clockNoUnit      = saying{"does not say the unit of its temperature", "type it as crossing of 60 °C or crossing of 140 °F"}
	notAltitude      = saying{"is not an altitude between −500 and 6000 m", "type the height above the sea, such as 350 m"}
	noCitation       = saying{"{1} {2} missing", "name the document, clause and edition that the limit comes from; the report's front page says that it is missing"}
	appliesElsewhere = saying{"is not whom the record is of, so the limit is left out", "write all if it is for this food too"}
	recordOutside    = saying{"leads out of the plan's folder, from which alone records are read", "put the file into the folder of the plan, and type its path from there"}
	recordProcess    = saying{"is not the process of {1}, which is {2}", "correct it, or leave it blank"}
	recordOfNone     = saying{"Neither Product nor Process says whose record it is", "name the product that was probed, or, for a medium, the process"}
	recordOfMany     = saying{"The record is one of the {1} and of a process with {2} products", "name the product that was probed"}
	recordMediumBare = saying{"does not say of which step", "write medium of STEP, with the name of the step"}
	recordPlace      = saying{"is none of what a logger may have measured{1}", "write {2}"}
	recordOrder      = saying{"begins no later than the step before it", "write the steps in their order, each once, divided by semicolons"}
	recordNoTime     = saying{"has no time", "write each step with its time: Oven 09:12; Chill 11:20"}
	recordStart      = saying{"is neither a step nor a time{1}", "write a step, a time of the clock (09:12 or 2026-11-03 09:12), a time after the first reading (20 min), or steps with their times: Oven 09:12; Chill 11:20"}

	clauseDate    = saying{"looks as if the spreadsheet had turned the {1} into a date", "type it as text (an apostrophe in front), as the code prints it"}
	clauseDecimal = saying{"looks as if the spreadsheet had turned the {1} into a decimal number: 1.10 becomes 1.1", "type it as text (an apostrophe in front), as the code prints it"}
	groupUnknown  = saying{"is not a group of any limit or row of Groups{1}", "correct the name"}
	groupCycle    = saying{"lies within itself by way of {1}", "let groups lie within each other in one direction only"}
	groupDeep     = saying{"lies more than {1} groups deep", "let groups lie within each other less deep"}
	unusualLimit  = saying{"is read as {1}, which is unusual for the rule {2}{3}: usual is {4}", "check the number and its unit: {5}"}
	groupEmpty    = saying{"is a group that no limit and no other group belongs to", "name it in the column Group of Limits, or take the row out"}
)

// fill puts the arguments into a wording.
func fill(text string, args []string) string {
	if !strings.Contains(text, "{") {
		return text
	}
	pairs := make([]string, 0, 2*len(args))
	for i, a := range args {
		pairs = append(pairs, "{"+string(rune('1'+i))+"}", a)
	}
	return strings.NewReplacer(pairs...).Replace(text)
}

// problem words one problem.
func (s saying) problem(at cell.Ref, level cell.Level, field, typed string, args ...string) cell.Error {
	return cell.Error{At: at, Level: level, Field: field, Typed: typed, Msg: fill(s.msg, args), Hint: fill(s.hint, args)}
}

// or joins words: "a, b or c".
func or(words []string) string { return Joined(words, " or ") }

// and joins words: "a, b and c".
func and(words []string) string { return Joined(words, " and ") }

// Joined joins words, the last one by a word of its own: "a, b or c".
func Joined(words []string, last string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + last + words[len(words)-1]
}

// meant offers the nearest known word: "; did you mean cook?"; "" if none is near.
func meant(word string, known []string) string {
	if n := nearest(word, known); n != "" {
		return "; did you mean " + n + "?"
	}
	return ""
}

// mostOffers is how many names are compared with misspelt ones in lists that grow with the plan; a plan that needs more has another mistake.
const mostOffers = 500_000

// offer is meant for lists that grow with the plan.
func (r *reader) offer(word string, known func() []string) string {
	if n := r.near(word, known); n != "" {
		return "; did you mean " + n + "?"
	}
	return ""
}

// near is nearest for such lists.
func (r *reader) near(word string, known func() []string) string {
	if r.offers > mostOffers {
		return ""
	}
	list := known()
	r.offers += 100 + len(list)
	return nearest(word, list)
}

// nearest is the known word with the fewest edits from word, if those are few enough to be a slip; the first of equals.
func nearest(word string, known []string) string {
	if len(word) > 200 {
		return ""
	}
	w := []rune(Key(word))
	best, least := "", 1+len(w)/3
	for _, k := range known {
		kk := []rune(Key(k))
		if d := len(kk) - len(w); d > least || -d > least {
			continue
		}
		if n := edits(w, kk); n <= least && (best == "" || n < least) {
			best, least = k, n
		}
	}
	return best
}

// edits counts the letters to add, drop or change (Levenshtein).
func edits(a, b []rune) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range a {
		diagonal := row[0]
		row[0] = i + 1
		for j := range b {
			cost := diagonal
			if a[i] != b[j] {
				cost = 1 + min(diagonal, row[j], row[j+1])
			}
			diagonal, row[j+1] = row[j+1], cost
		}
	}
	return row[len(b)]
}
