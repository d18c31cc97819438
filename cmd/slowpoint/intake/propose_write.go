package intake

import (
	"fmt"
	"io"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"slowpoint/cmd/slowpoint/workbook"
)

// filledIn are the sheets that a proposal has, with what it found or blank for the user to fill.
var filledIn = []string{"Sources", "Columns", "Constants", "Words", "Leave out", "Plan", "Limits"}

// write writes the mapping workbook.
func (p *proposal) write(w io.Writer) error {
	f := excelize.NewFile()
	defer f.Close()
	looks, err := workbook.NewLooks(f)
	if err != nil {
		return err
	}
	for i, name := range filledIn {
		s := workbook.Known(Sheets, name)
		if i == 0 {
			err = f.SetSheetName("Sheet1", name)
		} else {
			_, err = f.NewSheet(name)
		}
		if err == nil {
			err = writeRows(f, looks, s, p.rows[name])
		}
		if err != nil {
			return fmt.Errorf("sheet %s: %w", name, err)
		}
	}
	if err := f.SetDocProps(&excelize.DocProperties{Title: "Slowpoint mapping, proposed", Creator: "slowpoint", LastModifiedBy: "slowpoint"}); err != nil {
		return err
	}
	f.SetZipWriter(func(io.Writer) excelize.ZipWriter { return newZipParts(w) })
	return f.Write(io.Discard)
}

// writeRows writes a sheet of the mapping: its line of help, its headings, the rows.
func writeRows(f *excelize.File, looks *workbook.Looks, s *workbook.Sheet, rows []map[string]string) error {
	longest, total := make([]int, len(s.Columns)), 0.0
	for i, c := range s.Columns {
		for _, r := range rows {
			longest[i] = max(longest[i], utf8.RuneCountInString(r[c.Heading]))
		}
		total += c.Width(longest[i])
	}
	if err := looks.Sheet(s, s.Columns, len(rows), total); err != nil {
		return err
	}
	sw, err := f.NewStreamWriter(s.Name)
	if err != nil {
		return err
	}
	heads := make([]any, len(s.Columns))
	for i, c := range s.Columns {
		heads[i] = excelize.Cell{StyleID: looks.Heading(c), Value: c.Title()}
		if err := sw.SetColWidth(i+1, i+1, c.Width(longest[i])); err != nil {
			return err
		}
	}
	if err := sw.SetRow("A1", []any{excelize.Cell{StyleID: looks.Help, Value: s.Help}}); err != nil {
		return err
	}
	if err := sw.SetRow(fmt.Sprintf("A%d", workbook.HeadRow), heads, excelize.RowOpts{Height: 44}); err != nil {
		return err
	}
	for i, r := range rows {
		line := make([]any, len(s.Columns))
		for k, c := range s.Columns {
			if v := r[c.Heading]; v != "" {
				line[k] = excelize.Cell{StyleID: looks.Text, Value: v}
			}
		}
		if err := sw.SetRow(fmt.Sprintf("A%d", workbook.FirstRow+i), line); err != nil {
			return err
		}
	}
	return sw.Flush()
}
