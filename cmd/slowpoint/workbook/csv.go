package workbook

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"os"
	"regexp"
	"strings"
	"unicode/utf8"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

// Limits on size; generous, and stated in the messages.
const (
	mostRows    = 100_000   // filled rows of a sheet
	mostColumns = 512       // columns of a sheet
	mostFile    = 64 << 20  // of a workbook file
	mostBytes   = 256 << 20 // of a plan, unzipped
	mostCells   = 3_000_000 // of a plan
	mostMerged  = 20_000    // ranges of merged cells of a sheet
	mostText    = 32_767    // characters of a cell, as in spreadsheets
)

// The last row and column of a spreadsheet (of current programs: common practice, no source).
const (
	LastRow    = 1_048_576
	LastColumn = 16_384
)

// readFolder reads the sheets of a folder.
func readFolder(folder string) ([]*Grid, string, error) { return readFiles(os.DirFS(folder), folder) }

// Reason is the plain cause of a failed file operation.
func Reason(err error) string {
	var pe *os.PathError
	if errors.As(err, &pe) {
		return pe.Err.Error()
	}
	return err.Error()
}

// csvGrid reads one CSV file. What cannot be read is told in refused.
func csvGrid(name string, data []byte) *Grid {
	g := &Grid{Name: tidy(name), CSV: true}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	switch {
	case bytes.HasPrefix(data, []byte("\xff\xfe")) || bytes.HasPrefix(data, []byte("\xfe\xff")):
		g.Refused, g.Mend = fill(notUTF8.msg, []string{"it is UTF-16"}), notUTF8.hint
		return g
	case !utf8.Valid(data):
		g.Refused, g.Mend = fill(notUTF8.msg, []string{fmt.Sprintf("line %d", 1+bytes.Count(data[:badByte(data)], []byte("\n")))}), notUTF8.hint
		return g
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		g.Refused, g.Mend = fill(csvUnreadable.msg, []string{"it is a workbook"}), "save the sheet as CSV, or give the workbook itself as the plan"
		return g
	}
	data = bytes.TrimRight(data, "\x00")
	if i := bytes.IndexByte(data, 0); i >= 0 {
		g.Refused, g.Mend = fill(csvUnreadable.msg, []string{fmt.Sprintf("line %d holds zero bytes, so a part of it is lost", 1+bytes.Count(data[:i], []byte("\n")))}), "ask for a fresh copy, or save the sheet as CSV UTF-8 again"
		return g
	}
	if !bytes.ContainsRune(data, '\n') { // lines end with \r alone, as old spreadsheet programs on the Mac have it
		data = bytes.ReplaceAll(data, []byte("\r"), []byte("\n"))
	}
	sheet := sheetOf(Sheets, g.Name)
	if sheet == nil {
		sheet = sheetOf(MadeSheets, g.Name)
	}
	best, score := ',', -1
	if sheet == nil {
		best = delimiter(data)
	}
	for _, d := range []rune{',', ';', '\t'} {
		if sheet == nil {
			break
		}
		if n := likeness(sheet, data, d); n > score {
			best, score = d, n
		}
	}
	g.Rows, g.Refused, g.Mend = csvRows(data, best, mostRows, sheet == nil)
	g.commas = best == ','
	return g
}

func badByte(data []byte) int {
	for i := 0; i < len(data); {
		r, n := utf8.DecodeRune(data[i:])
		if r == utf8.RuneError && n < 2 {
			return i
		}
		i += n
	}
	return 0
}

// likeness tells how well a delimiter divides a sheet: known headings in its best row count first, then data rows that are as wide.
func likeness(sheet *Sheet, data []byte, d rune) int {
	rows, _, _ := csvRows(data, d, 40, false)
	best, width := 0, 0
	for i := range rows {
		if n := len(headings(sheet, &rows[i])); n > best {
			best, width = n, len(rows[i].Cells)
		}
	}
	same := 0
	for i := range rows {
		if len(rows[i].Cells) > 1 && len(rows[i].Cells) <= max(width, 2) {
			same++
		}
	}
	return 1000*best + same
}

// delimiter finds what divides the cells of a file of which no heading is known, by its data: a sign that gives most lines the same
// number of cells. A semicolon or a tab goes before a comma, which stands in numbers and in words as well.
func delimiter(data []byte) rune {
	signs := []rune{'\t', ';', ','}
	var even [3]int
	most := 0
	for i, d := range signs {
		even[i] = evenness(data, d)
		most = max(most, even[i])
	}
	for i, d := range signs {
		if even[i] > 0 && 10*even[i] >= 6*most {
			return d
		}
	}
	return ','
}

// evenness is how many of the first lines have the same number of cells, more than one, if a sign divides them.
func evenness(data []byte, d rune) int {
	r := csv.NewReader(bytes.NewReader(data))
	r.Comma, r.FieldsPerRecord, r.ReuseRecord = d, -1, true
	lines, best := map[int]int{}, 0 // by their number of cells
	for range 200 {
		rec, err := r.Read()
		if err != nil {
			break
		}
		if n := len(rec); n > 1 {
			lines[n]++
			best = max(best, lines[n])
		}
	}
	return best
}

// foreignGrid reads a CSV file of somebody's own, in whatever writing it was saved: UTF-8, UTF-16 with a mark, else Windows-1252.
func foreignGrid(data []byte) *Grid {
	noted := ""
	switch {
	case bytes.HasPrefix(data, []byte("\xff\xfe")), bytes.HasPrefix(data, []byte("\xfe\xff")):
		if out, err := unicode.UTF16(unicode.BigEndian, unicode.UseBOM).NewDecoder().Bytes(data); err == nil {
			data, noted = out, "The file is in UTF-16 and is read as such"
		}
	case !utf8.Valid(data) && bytes.IndexByte(data, 0) < 0:
		if out, err := charmap.Windows1252.NewDecoder().Bytes(data); err == nil {
			data, noted = out, "The file is not in UTF-8 and has no mark of its writing; it is read as Windows-1252"
		}
	}
	g := csvGrid("", data)
	g.Noted = noted
	return g
}

// csvRows reads at most most filled rows; foreign ones are of somebody's own sheet. Row numbers are those that a spreadsheet shows: a line
// break within quotes starts no row.
func csvRows(data []byte, d rune, most int, foreign bool) (rows []Row, refused, mend string) {
	r := csv.NewReader(bytes.NewReader(data))
	r.Comma, r.FieldsPerRecord, r.ReuseRecord = d, -1, true
	breaks := 0 // line breaks within quotes so far
	cells, widest := 0, 0
	unreadable := func(why string) ([]Row, string, string) {
		return rows, fill(csvUnreadable.msg, []string{why}), "save the sheet as CSV again from your spreadsheet program"
	}
	for {
		rec, err := r.Read()
		if err == io.EOF {
			return rows, "", ""
		}
		if err != nil {
			var pe *csv.ParseError
			if errors.As(err, &pe) {
				return unreadable(fmt.Sprintf("line %d: %s", pe.Line, plainCSV(pe.Err)))
			}
			return unreadable(err.Error())
		}
		line, _ := r.FieldPos(0)
		row := Row{N: line - breaks}
		widest = max(widest, len(rec))
		for i, f := range rec {
			if n := strings.Count(f, "\n"); n > 0 {
				breaks += n
				if swallows(f, d, widest, foreign) {
					at, _ := r.FieldPos(i)
					return rows, fill(csvUnreadable.msg, []string{fill(swallowed.msg, []string{fmt.Sprint(at), fmt.Sprint(at + n), signNames[d]})}), swallowed.hint
				}
			}
			if f = tidy(f); f != "" {
				if i >= mostColumns || tooLong(f, mostText) {
					return unreadable(fmt.Sprintf("line %d has more than %d columns or a cell of more than %d characters", line, mostColumns, mostText))
				}
				k := Text
				if failed(f) {
					k = Broken
				}
				row.Cells = append(row.Cells, Entry{Text: strings.Clone(f), Col: int32(i + 1), Kind: k})
			}
		}
		if len(row.Cells) == 0 {
			continue
		}
		if cells += len(row.Cells); cells > mostCells {
			return unreadable(fmt.Sprintf("more than %d cells", mostCells))
		}
		if rows = append(rows, row); len(rows) > most {
			if most == mostRows {
				return nil, fill(tooManyRows.msg, []string{fmt.Sprint(mostRows)}), tooManyRows.hint
			}
			return rows, "", ""
		}
	}
}

var signNames = map[rune]string{',': "comma", ';': "semicolon", '\t': "tab"}

// swallows tells whether a cell of several lines may be rows between two stray quotation marks: it holds the sign that divides the cells.
// In a sheet of somebody's own, where a remark of several lines is more likely, it holds that of half a row.
func swallows(cell string, d rune, width int, foreign bool) bool {
	n := strings.Count(cell, string(d))
	return n > 0 && (!foreign || 2*n >= width-1)
}

// tooLong tells whether a text has more than most characters.
func tooLong(s string, most int) bool { return len(s) > most && utf8.RuneCountInString(s) > most }

// failed tells whether a text is what spreadsheets print for a formula that failed, in any of their languages: #REF!, #NAME?, #N/A, Err:502.
func failed(s string) bool {
	return s != "" && (s[0] == '#' || s[0] == 'E') && failure.MatchString(s)
}

var failure = regexp.MustCompile(`^(#[\p{Lu}\d/_]+[!?]|#N/[AD]|#NV|#GETTING_DATA|Err:\d{3})$`)

func plainCSV(err error) string {
	switch err {
	case csv.ErrQuote:
		return "a quotation mark in the wrong place"
	case csv.ErrBareQuote:
		return "a quotation mark in a cell that does not begin with one"
	}
	return err.Error()
}

// sheetOf finds a sheet of a list by the name that the user gave it; nil if there is none.
func sheetOf(list []*Sheet, name string) *Sheet {
	for _, s := range list {
		if Key(s.Name) == Key(name) {
			return s
		}
	}
	return nil
}
