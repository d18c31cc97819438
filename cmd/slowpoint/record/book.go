package record

import (
	"slowpoint/model/cell"
)

// openBook opens a workbook.
func (r *reader) openBook(size int64) (source, bool) {
	r.problems.Add(badBook.problem(r.set.Cells[setFile], cell.Fault, setFile, r.set.Name, "workbooks come next"))
	return nil, false
}

func serialStamp(f *field, is1904 bool) stamp { return stamp{} }

func serialSeconds(x float64, is1904 bool) float64 { return x }
