package intake

import (
	"archive/zip"
	"bytes"
	"io"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

// builtBook builds a workbook from words; testdata/import/README.txt says how they read. The same words give the same bytes.
func builtBook(t testing.TB, text string) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	ok := func(err error) {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
	}
	sheet, row, stored := "", 0, false
	for _, line := range strings.Split(strings.TrimRight(text, "\n"), "\n") {
		word, rest, _ := strings.Cut(line, " ")
		switch {
		case word == "sheet":
			if sheet == "" {
				ok(f.SetSheetName("Sheet1", rest))
			} else {
				_, err := f.NewSheet(rest)
				ok(err)
			}
			sheet, row = rest, 0
		case word == "!":
			ok(followChange(f, sheet, rest))
		case sheet == "":
			if line != "" && word != "#" {
				t.Fatalf("%q stands above the first sheet", line)
			}
		default:
			row++
			for i, v := range strings.Split(line, "|") {
				name, err := excelize.CoordinatesToCellName(i+1, row)
				ok(err)
				ok(setCell(f, sheet, name, strings.TrimSpace(v)))
				stored = stored || strings.Contains(v, " -> ")
			}
		}
	}
	var out bytes.Buffer
	ok(f.Write(&out))
	if !stored {
		return out.Bytes()
	}
	data, err := storeResults(out.Bytes())
	ok(err)
	return data
}

// followChange follows a line that begins with an exclamation mark.
func followChange(f *excelize.File, sheet, line string) error {
	word, rest, _ := strings.Cut(line, " ")
	from, to, ranged := strings.Cut(rest, ":")
	if !ranged {
		to = from
	}
	kind, which, _ := strings.Cut(rest, " ")
	switch {
	case word == "merge":
		return f.MergeCell(sheet, from, to)
	case word == "hide" && kind == "row":
		n, err := strconv.Atoi(which)
		if err != nil {
			return err
		}
		return f.SetRowVisible(sheet, n, false)
	case word == "hide" && kind == "column":
		return f.SetColVisible(sheet, which, false)
	case word == "hide":
		return f.SetSheetVisible(sheet, false)
	case word == "strike":
		style, err := f.NewStyle(&excelize.Style{Font: &excelize.Font{Strike: true}})
		if err != nil {
			return err
		}
		return f.SetCellStyle(sheet, from, to, style)
	case word == "filter":
		return f.AutoFilter(sheet, rest, nil)
	case word == "protect":
		return f.ProtectSheet(sheet, &excelize.SheetProtectionOptions{Password: "secret"})
	}
	return &unknownChange{line}
}

type unknownChange struct{ line string }

func (u *unknownChange) Error() string { return strconv.Quote(u.line) + " is no change" }

var withFormat = regexp.MustCompile(`^(-?[0-9.]+) as (.+)$`)

// setCell writes one cell. A stored result is written first and then kept by storeResults.
func setCell(f *excelize.File, sheet, name, v string) error {
	m := withFormat.FindStringSubmatch(v)
	x, plain := plainNumber(v)
	switch {
	case v == "":
		return nil
	case strings.HasPrefix(v, "'"):
		return f.SetCellStr(sheet, name, v[1:])
	case strings.HasPrefix(v, "="):
		formula, result, has := strings.Cut(v[1:], " -> ")
		if has {
			formula += resultMark + result
		}
		return f.SetCellFormula(sheet, name, formula)
	case m != nil:
		style, err := f.NewStyle(&excelize.Style{CustomNumFmt: &m[2]})
		if err != nil {
			return err
		}
		if x, err = strconv.ParseFloat(m[1], 64); err != nil {
			return err
		}
		if err := f.SetCellValue(sheet, name, x); err != nil {
			return err
		}
		return f.SetCellStyle(sheet, name, name, style)
	case plain:
		return f.SetCellValue(sheet, name, x)
	}
	return f.SetCellStr(sheet, name, v)
}

// resultMark parts a formula from its stored result until storeResults puts it in its place: excelize writes no results.
const resultMark = "→"

var marked = regexp.MustCompile(`<f>([^<]*)` + resultMark + `([^<]*)</f>(<v></v>)?`)

func storeResults(data []byte) ([]byte, error) {
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		return nil, err
	}
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	for _, f := range z.File {
		r, err := f.Open()
		if err != nil {
			return nil, err
		}
		body, err := io.ReadAll(r)
		if err != nil {
			return nil, err
		}
		part, err := w.Create(f.Name)
		if err != nil {
			return nil, err
		}
		if _, err := part.Write(marked.ReplaceAll(body, []byte("<f>$1</f><v>$2</v>"))); err != nil {
			return nil, err
		}
	}
	if err := w.Close(); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}
