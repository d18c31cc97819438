package intake

import (
	"fmt"
	"slices"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// share is which records of a source make a row of the plan, such as the step of a part, and which do not.
type share struct {
	made  map[string]bool // processes that have it, by key
	n     int             // records that make it
	lacks []lack
}

// lack is an imported record whose cells for a row are all blank.
type lack struct {
	product string
	process string // by key
	at      cell.Ref
}

// mostLacking is how many such records are told one by one.
const mostLacking = 3

// noteShares notes which rows an imported record made. A blank cell of a step that the others have may be forgotten, and without the
// step the product would be judged as if it had none.
func (im *importer) noteShares(o *opened, rec record) {
	p := o.src.products()
	if p == nil {
		return
	}
	product, process := im.values[p.from].Text, ""
	if i := slices.IndexFunc(p.sheet.Columns, func(c *workbook.Column) bool { return c.Heading == "Process" }); i >= 0 && im.filled[p.from+i] {
		process = workbook.Key(im.values[p.from+i].Text)
	}
	for k, t := range o.src.rows {
		if !t.mapped || t.sheet.Name == "Products" {
			continue
		}
		s := im.shares[t]
		if s == nil {
			s = &share{made: map[string]bool{}}
			im.shares[t] = s
		}
		if im.makes(o, k) {
			s.n++
			s.made[process] = true
			continue
		}
		s.lacks = append(s.lacks, lack{product, process, o.firstCell(rec, t)})
	}
}

// firstCell is the first mapped cell of a row that a record may make; the record if it has none.
func (o *opened) firstCell(rec record, t *target) cell.Ref {
	for _, m := range o.src.mapped {
		if f := &o.cells[m.where]; m.to.row == t && f.row > 0 {
			return o.ref(f.row, f.col)
		}
	}
	return o.ref(rec.at.Row, rec.at.Col)
}

// lackingParts warns of records that lack a row which others of the source make: each of a few, many in one.
func (im *importer) lackingParts(src *source) {
	for _, t := range src.rows {
		s := im.shares[t]
		if s == nil || s.n == 0 {
			continue
		}
		lacks := slices.DeleteFunc(s.lacks, func(l lack) bool { return t.sheet.Name == "Steps" && s.made[l.process] }) // a record before or after it makes the step of the process
		what, others := t.part, fmt.Sprintf("%d others of the source have", s.n)
		if what == "" {
			what = t.sheet.Name
		}
		if s.n == 1 {
			others = "another of the source has"
		}
		if len(lacks) <= mostLacking {
			for _, l := range lacks {
				im.problems.Add(partLacks.problem(l.at, cell.Warning, "", "", l.product, what, others, t.sheet.Name))
			}
			continue
		}
		var cells []string
		for _, l := range append(slices.Clone(lacks[:mostLacking]), lacks[len(lacks)-1]) {
			cells = append(cells, l.product+" ("+Place{Row: l.at.Row, Col: l.at.Col}.short()+")")
		}
		im.problems.Add(partsLack.problem(lacks[0].at, cell.Warning, "", "", fmt.Sprint(len(lacks)), what, others, t.sheet.Name,
			strings.Join(cells[:mostLacking], ", ")+" … "+cells[mostLacking]))
	}
}
