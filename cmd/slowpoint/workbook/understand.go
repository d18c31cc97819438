package workbook

import "slowpoint/model/cell"

// understand fills a plan, of which name and digest are known, from its sheets. A workbook, a folder and the demo all come this way.
func understand(grids []*grid, p *Plan) (*Plan, error) {
	r := newReader(p)
	if err := r.sheets(grids); err != nil {
		return nil, err
	}
	r.read()
	return p, nil
}

// newReader is a reader that has read nothing yet.
func newReader(p *Plan) *reader {
	p.Columns = map[string]map[string]int{}
	return &reader{plan: p, formulas: map[cell.Ref]*formulas{}, unread: map[string]cell.Errors{}}
}
