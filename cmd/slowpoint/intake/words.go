package intake

import (
	"strconv"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// wordList is a list of the sheet Words.
type wordList struct {
	name    string
	line    *workbook.Line // its first row
	inOrder []*word
	byKey   map[string]*word
	used    bool // some confirmed column names it
}

// word is one of theirs with everything that it stands for.
type word struct {
	theirs string
	line   *workbook.Line
	ours   []*our
	used   bool
}

// our is what a word puts into one place of the plan.
type our struct {
	line  *workbook.Line
	sheet *workbook.Sheet // nil: the column that is mapped
	col   int
	value Value // of another column
	blank bool
	fault *cell.Error
}

func (m *Mapping) readWords() {
	for _, l := range m.t.Lines("Words") {
		list, theirs := text(l, "List"), text(l, "Theirs")
		for _, h := range []string{"List", "Theirs"} {
			if text(l, h) == "" {
				m.blame(nil, l, h, "", lacking, h)
			}
		}
		if list == "" || theirs == "" {
			continue
		}
		w := m.listOf(list, l).wordOf(theirs, l)
		o := &our{line: l, blank: !l.Filled("Ours")}
		m.readOur(o)
		for _, other := range w.ours {
			if other.sheet == o.sheet && other.col == o.col {
				m.blame(nil, l, "Theirs", theirs, wordTwice, strconv.Itoa(other.line.Ref().Row))
			}
		}
		if !l.Sound() {
			m.lost = true
		}
		w.ours = append(w.ours, o)
	}
}

func (m *Mapping) listOf(name string, l *workbook.Line) *wordList {
	k := workbook.Key(name)
	if m.lists[k] == nil {
		m.lists[k] = &wordList{name: name, line: l, byKey: map[string]*word{}}
	}
	return m.lists[k]
}

func (list *wordList) wordOf(theirs string, l *workbook.Line) *word {
	k := workbook.Key(theirs)
	w := list.byKey[k]
	if w == nil {
		w = &word{theirs: theirs, line: l}
		list.byKey[k] = w
		list.inOrder = append(list.inOrder, w)
	}
	return w
}

// readOur reads the place and the value of a row of Words.
func (m *Mapping) readOur(o *our) {
	l := o.line
	sheetName, columnName := text(l, "Sheet"), text(l, "Column")
	switch {
	case sheetName == "" && columnName == "":
		return // its value is read for each column that uses the list
	case sheetName == "":
		m.blame(nil, l, "Sheet", "", wordHalf, "Sheet")
		return
	case columnName == "":
		m.blame(nil, l, "Column", "", wordHalf, "Column")
		return
	}
	sheet, col, inside, what := placed(sheetName, columnName)
	if what != nil {
		m.blame(nil, l, what.field, what.typed, what.s, what.args...)
		return
	}
	o.sheet, o.col = sheet, col
	if o.blank || o.asks() {
		return
	}
	c := sheet.Columns[col]
	var e *cell.Error
	if o.value, e = m.own(l, "Ours", c, ofHeading(c, inside)); e != nil {
		o.fault = e
		m.problems.Add(*e)
	}
}

// asks tells whether a proposal asks what a word stands for, and nobody answered.
func (o *our) asks() bool { return text(o.line, "Ours") == "?" }

// questions tells which words of the lists in use nobody has answered; records with such a word are not imported.
func (m *Mapping) questions() {
	told := map[*wordList]bool{}
	for _, l := range m.t.Lines("Words") {
		list := m.lists[workbook.Key(text(l, "List"))]
		if list == nil || !list.used || told[list] {
			continue
		}
		told[list] = true
		for _, w := range list.inOrder {
			for _, o := range w.ours {
				if o.asks() {
					e := m.tell(o.line.At("Ours"), "Ours", "?", unanswered)
					o.fault = &e
				}
			}
		}
	}
}

func (m *Mapping) listNames() []string {
	var out []string
	for _, l := range m.t.Lines("Words") {
		out = append(out, text(l, "List"))
	}
	return out
}

// said is what a typed word fills.
type said struct {
	word  *word
	self  *Value // nil: the mapped cell stays blank
	fault *cell.Error
	at    string // of the fault's row in the mapping
}

// meaning gives what a word of theirs means in a column; nil if the list has no such word.
func (im *importer) meaning(c *mapped, typed string) *said {
	if s, met := c.said[typed]; met {
		return s
	}
	w := c.words.byKey[workbook.Key(typed)]
	var s *said
	if w != nil {
		s = &said{word: w}
		for _, o := range w.ours {
			if o.fault != nil {
				s.fault, s.at = o.fault, o.line.At("Ours").String()
			}
			if o.sheet == nil && !o.blank && o.fault == nil {
				im.selfOf(s, c, o)
			}
		}
	}
	c.said[typed] = s
	return s
}

// selfOf reads what a word puts into the column that is mapped.
func (im *importer) selfOf(s *said, c *mapped, o *our) {
	v, e := im.m.own(o.line, "Ours", c.to.column(), c.unit)
	if e != nil {
		im.problems.Add(*e)
		s.fault, s.at = e, o.line.At("Ours").String()
		return
	}
	s.self = &v
}
