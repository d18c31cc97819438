package workbook

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io/fs"
	"path/filepath"
	"strings"

	"slowpoint/model/cell"
)

// understand fills a plan, of which name and digest are known, from its sheets. A workbook, a folder and the demo all come this way.
func understand(grids []*Grid, p *Plan) (*Plan, error) {
	r := newReader(p, Sheets)
	r.made = map[string]*Grid{}
	r.sheets(grids)
	if err := r.isPlan(); err != nil {
		return nil, err
	}
	r.read()
	return p, nil
}

// newReader is a reader that has read nothing yet.
func newReader(p *Plan, list []*Sheet) *reader {
	p.Columns = map[string]map[string]int{}
	return &reader{plan: p, list: list, formulas: map[cell.Ref]*formulas{}, unread: map[string]cell.Errors{}}
}

// readFiles takes every .csv file of a folder, wherever it is kept, as a sheet, in the order of their names, and the digest of them all.
func readFiles(files fs.FS, folder string) ([]*Grid, string, error) {
	list, err := fs.ReadDir(files, ".")
	if err != nil {
		return nil, "", fmt.Errorf("the folder %s cannot be read: %v", folder, Reason(err))
	}
	sum := sha256.New()
	var grids []*Grid
	total := int64(0)
	for _, f := range list { // sorted by name
		ext := filepath.Ext(f.Name())
		if f.IsDir() || !strings.EqualFold(ext, ".csv") || strings.HasPrefix(f.Name(), ".") {
			continue
		}
		path := filepath.Join(folder, f.Name())
		if info, err := fs.Stat(files, f.Name()); err == nil {
			if total += info.Size(); total > mostBytes {
				return nil, "", fmt.Errorf("the folder %s holds more than %d MB of CSV; divide the plan into several", folder, mostBytes>>20)
			}
		}
		data, err := fs.ReadFile(files, f.Name())
		if err != nil {
			return nil, "", fmt.Errorf("%s cannot be read: %v", path, Reason(err))
		}
		fmt.Fprintf(sum, "%s %d\n", f.Name(), len(data))
		sum.Write(data)
		grids = append(grids, csvGrid(strings.TrimSuffix(f.Name(), ext), data))
	}
	if len(grids) == 0 {
		return nil, "", fmt.Errorf("the folder %s holds no .csv file; a plan is a workbook, or a folder with Products.csv, Steps.csv and the other sheets", folder)
	}
	return grids, hex.EncodeToString(sum.Sum(nil)), nil
}
