package workbook

import (
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strings"

	"slowpoint/model"
)

// Given is a row of the sheet Records that was not typed in a plan but given to a command.
type Given struct {
	Cells  map[string]string // by heading
	Like   string            // the row of the plan's own sheet Records that fills what Cells leave blank; "" for none
	Stages string            // stages with their times, where no product of the plan is meant: "cook 09:12; cool 11:20"
}

// ReadWith reads a plan with one row in the place of its sheet Records. With Stages the plan may be limits alone.
// Problems of the row stand at the cells of that sheet, its row 2. The error says why nothing could be understood.
func ReadWith(name string, given Given) (*Plan, *Record, error) {
	grids, digest, err := load(name, "plan")
	if err != nil {
		return nil, nil, err
	}
	if given.Like != "" {
		own, err := understand(grids, &Plan{Name: filepath.Base(name)})
		if err != nil {
			return nil, nil, fmt.Errorf("%s: %w", name, err)
		}
		if err := given.fill(own); err != nil {
			return nil, nil, fmt.Errorf("%s: %w", name, err)
		}
		if grids, digest, err = load(name, "plan"); err != nil { // reading lets cells go
			return nil, nil, err
		}
	}
	records := SheetNamed("Records")
	var kept []*Grid
	for _, g := range grids {
		if s := sheetOf(Sheets, g.Name); s != records {
			kept = append(kept, g)
		}
	}
	kept = append(kept, given.grid(records))
	p := &Plan{Name: filepath.Base(filepath.Clean(name)), SHA256: digest}
	r := newReader(p, Sheets)
	r.made, r.given = map[string]*Grid{}, true
	r.sheets(kept)
	if given.Stages != "" {
		if r.loose, err = loosely(given.Stages); err != nil {
			return nil, nil, err
		}
		if r.grids["Limits"] == nil {
			return nil, nil, fmt.Errorf("%s: it has no sheet Limits, so there is nothing to judge by", name)
		}
	} else if r.grids["Products"] == nil && r.grids["Limits"] != nil {
		return nil, nil, fmt.Errorf("%s: it has limits and no products: say what was measured with --stages, as --stages \"cook 09:12; cool 11:20\"", name)
	} else if err := r.isPlan(); err != nil {
		return nil, nil, fmt.Errorf("%s: %w", name, err)
	}
	r.read()
	if len(p.Records) != 1 {
		return p, nil, nil
	}
	return p, &p.Records[0], nil
}

// grid is the sheet with the one row.
func (given *Given) grid(records *Sheet) *Grid {
	head, row := Row{N: 1}, Row{N: 2}
	for i, c := range records.Columns {
		head.Cells = append(head.Cells, Entry{Text: c.Title(), Col: int32(i + 1), Kind: Text})
		if s := strings.TrimSpace(given.Cells[c.Heading]); s != "" {
			row.Cells = append(row.Cells, Entry{Text: s, Col: int32(i + 1), Kind: Text})
		}
	}
	return &Grid{Name: records.Name, Rows: []Row{head, row}}
}

// fill takes from a row of the plan what was not given.
func (given *Given) fill(p *Plan) error {
	var names []string
	for i := range p.Records {
		rec := &p.Records[i]
		names = append(names, rec.Name)
		if Key(rec.Name) != Key(given.Like) {
			continue
		}
		for _, r := range rec.Readings() {
			if given.Cells[r.Column] == "" && r.Column != "File" && r.Typed != "" {
				given.Cells[r.Column] = r.Typed
			}
		}
		return nil
	}
	known := "it has none"
	if len(names) > 0 {
		known = "its rows are " + and(names[:min(len(names), 12)])
	}
	return fmt.Errorf("%q is not a row of the sheet Records%s; %s", given.Like, meant(given.Like, names), known)
}

// loosely makes a product of nothing but stages, for records of food that no plan describes.
func loosely(typed string) (*product, error) {
	p := &product{}
	p.Name, p.Process = "The record", "the stages given"
	words := names(model.Stages, func(s *model.Stage) string { return s.Name })
	both := append(slices.Clone(words), names(model.Stages, func(s *model.Stage) string { return s.Also })...)
	for _, part := range strings.Split(typed, ";") {
		part = tidy(part)
		if k, _ := led(part, []string{theEnd}); part == "" || k == 0 {
			continue
		}
		k, _ := led(part, both)
		if k < 0 {
			return nil, fmt.Errorf("%q does not begin with a stage%s; the stages are %s", part, meant(part, words), and(words))
		}
		p.Steps = append(p.Steps, model.Step{Name: both[k], Stage: model.Stages[k%len(words)], DurationS: math.Inf(1)})
	}
	if len(p.Steps) == 0 {
		return nil, fmt.Errorf("%q names no stage; the stages are %s", typed, and(words))
	}
	return p, nil
}

// chainOf are the names of the steps of a product's process, in their order; none if nothing is known of it.
func (r *reader) chainOf(p *product) []string {
	if p == r.loose {
		return names(p.Steps, func(s model.Step) string { return s.Name })
	}
	if pr := r.processes[Key(p.Process)]; pr != nil {
		return pr.stepNames()
	}
	return nil
}
