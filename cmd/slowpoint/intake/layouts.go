package intake

import (
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// record is a row, a column, a block or a sheet of theirs, while its cells are in opened.cells.
type record struct {
	at     Place
	hidden string // "The row", "The column": it is hidden; "" if it is not
}

// each goes through the records of a sheet, in their order.
func (o *opened) each(use func(record)) {
	if len(o.grid.Rows) == 0 {
		return
	}
	switch o.src.layout {
	case rowLayout:
		o.eachRow(use)
	case columnLayout:
		o.eachColumn(use)
	case blockLayout:
		o.eachBlock(use)
	case sheetLayout:
		o.from, o.to = 1, o.grid.Rows[len(o.grid.Rows)-1].N
		o.form(0)
		use(record{at: Place{File: o.file, Sheet: o.grid.Name}})
	}
}

// ownName fills the cells that are the names of file and sheet.
func (o *opened) ownName(i int) bool {
	switch o.src.wheres[i].kind {
	case byFile:
		o.cells[i] = found{e: &o.fileName}
	case bySheet:
		o.cells[i] = found{e: &o.sheetName}
		if o.sheetName.Text == "" {
			o.cells[i].e = &blank
		}
	case byAnything:
		o.cells[i] = found{e: &blank}
	default:
		return false
	}
	return true
}

func (o *opened) eachRow(use func(record)) {
	src := o.src
	most := 0
	for _, l := range o.lines {
		most = max(most, l)
	}
	if o.across == nil {
		o.across = make([]*workbook.Entry, most+1)
		for i := range o.across {
			o.across[i] = &blank
		}
	}
	for r := range o.grid.Rows {
		row := &o.grid.Rows[r]
		if row.N <= src.heads[1] || row.N < src.first || src.last > 0 && row.N > src.last {
			continue
		}
		o.row = row
		for c := range row.Cells {
			if col := int(row.Cells[c].Col); col <= most {
				o.across[col] = &row.Cells[c]
			}
		}
		for i := range src.wheres {
			if !o.ownName(i) {
				o.cells[i] = found{e: o.across[o.lines[i]], row: row.N, col: o.lines[i]}
			}
		}
		rec := record{at: Place{File: o.file, Sheet: o.grid.Name, Row: row.N}}
		if row.Hidden {
			rec.hidden = "The row"
		}
		use(rec)
		for c := range row.Cells {
			if col := int(row.Cells[c].Col); col <= most {
				o.across[col] = &blank
			}
		}
	}
}

func (o *opened) eachColumn(use func(record)) {
	src := o.src
	rows := make([]*workbook.Row, len(src.wheres))
	for i, l := range o.lines {
		rows[i] = o.grid.Row(l)
	}
	var headed []*workbook.Row // those that belong to the records
	last := 0
	for r := range o.grid.Rows {
		row := &o.grid.Rows[r]
		belongs := row.At(src.heads[1]).Kind != workbook.Blank
		for _, u := range rows {
			belongs = belongs || u == row
		}
		if belongs {
			headed = append(headed, row)
			last = max(last, int(row.Cells[len(row.Cells)-1].Col))
		}
	}
	if src.last > 0 {
		last = min(last, src.last)
	}
	for col := max(src.heads[1]+1, src.first); col <= last; col++ {
		filled := false
		for _, row := range headed {
			filled = filled || row.At(col).Kind != workbook.Blank
		}
		if !filled {
			continue
		}
		o.from = col
		for i := range src.wheres {
			if o.ownName(i) {
				continue
			}
			o.cells[i] = found{e: &blank, row: o.lines[i], col: col, lacks: !o.has(i)}
			if rows[i] != nil {
				o.cells[i].e = rows[i].At(col)
			}
		}
		rec := record{at: Place{File: o.file, Sheet: o.grid.Name, Col: col}}
		if o.grid.HiddenCols[col] {
			rec.hidden = "Column " + cell.ColumnName(col)
		}
		use(rec)
	}
}

// starts finds the cells that begin a block.
func (o *opened) starts() []spotAt {
	var out []spotAt
	last := 0
	for r := range o.grid.Rows {
		row := &o.grid.Rows[r]
		if row.N < o.src.first || o.src.last > 0 && row.N > o.src.last {
			continue
		}
		for c := range row.Cells {
			e := &row.Cells[c]
			if e.Kind != workbook.Text || headingKey(e.Text) != o.src.word {
				continue
			}
			if last == row.N {
				if o.fault == nil {
					o.refuse(blocksBeside.problem(o.ref(row.N, int(e.Col)), cell.Fault, "", e.Text, o.ref(row.N, out[len(out)-1].col).String()))
				}
				continue
			}
			last = row.N
			out = append(out, spotAt{row.N, int(e.Col)})
		}
	}
	return out
}

func (o *opened) eachBlock(use func(record)) {
	starts := o.starts()
	if len(starts) == 0 && !o.told && !o.hidden {
		o.told = true
		o.refuse(noBlock.problem(o.src.line.At("Heading"), cell.Fault, "", text(o.src.line, "Heading"), o.label))
	}
	for i, s := range starts {
		o.from, o.to = s.row, o.grid.Rows[len(o.grid.Rows)-1].N
		if o.src.last > 0 {
			o.to = min(o.to, o.src.last)
		}
		if i+1 < len(starts) {
			o.to = starts[i+1].row - 1
		}
		o.form(s.row)
		rec := record{at: Place{File: o.file, Sheet: o.grid.Name, Row: s.row, Col: s.col}}
		if o.grid.Row(s.row).Hidden {
			rec.hidden = "The row in which the block starts"
		}
		use(rec)
	}
}

// form fills the cells of a record between the rows from and to; above is the row that places count from, 0 if they are absolute.
func (o *opened) form(above int) {
	for i, w := range o.src.wheres {
		if o.ownName(i) {
			continue
		}
		f := found{e: &blank}
		if w.kind == byNumber {
			f.row, f.col = above+w.row, w.col
		} else {
			first := true
			for _, h := range o.hits[i] {
				switch {
				case h.row < o.from || h.row > o.to:
				case first:
					f.labelAt, first = h, false
				default:
					f.twice = h
				}
			}
			if f.lacks = first; !first {
				f.label = o.grid.Row(f.labelAt.row).At(f.labelAt.col).Text
				f.row, f.col = f.labelAt.row, f.labelAt.col+1
				if b := o.grid.Merge(f.labelAt.row, f.labelAt.col); b != nil {
					f.col = b.Right + 1
				}
			}
		}
		if r := o.grid.Row(f.row); r != nil && f.row >= o.from && f.row <= o.to {
			f.e = r.At(f.col)
		}
		o.cells[i] = f
	}
}

// anyCell tells whether one of the filled cells of the record at hand is as wanted.
func (o *opened) anyCell(is func(*workbook.Entry) bool) bool {
	if o.src.layout == rowLayout {
		for c := range o.row.Cells {
			if is(&o.row.Cells[c]) {
				return true
			}
		}
		return false
	}
	for r := range o.grid.Rows {
		row := &o.grid.Rows[r]
		if o.src.layout == columnLayout {
			if e := row.At(o.from); e.Kind != workbook.Blank && is(e) {
				return true
			}
			continue
		}
		if row.N < o.from || row.N > o.to {
			continue
		}
		for c := range row.Cells {
			if is(&row.Cells[c]) {
				return true
			}
		}
	}
	return false
}
