package workbook

import (
	"crypto/sha256"
	"embed"
	"encoding/hex"
	"fmt"
	"io/fs"
	"strings"

	"slowpoint/model/cell"
)

// demoFiles is the demo plan: an invented kitchen with invented recipes and measurements, and limits of published codes.
//
//go:embed demo/*.csv
var demoFiles embed.FS

// demoName is the demo plan's name in results.
const demoName = "demo"

// demoGrids reads the files of the demo plan in the order of their names, and the digest of them all as for a folder.
func demoGrids() ([]*grid, string, error) {
	list, err := fs.ReadDir(demoFiles, "demo")
	if err != nil {
		return nil, "", err
	}
	sum := sha256.New()
	var grids []*grid
	for _, f := range list {
		data, err := fs.ReadFile(demoFiles, "demo/"+f.Name())
		if err != nil {
			return nil, "", err
		}
		fmt.Fprintf(sum, "%s %d\n", f.Name(), len(data))
		sum.Write(data)
		grids = append(grids, csvGrid(strings.TrimSuffix(f.Name(), ".csv"), data))
	}
	return grids, hex.EncodeToString(sum.Sum(nil)), nil
}

// ReadDemo reads the demo plan that is built in. It is read like a folder of CSV files.
func ReadDemo() (*Plan, error) {
	grids, digest, err := demoGrids()
	if err != nil {
		return nil, err
	}
	r := &reader{plan: &Plan{Name: demoName, SHA256: digest, Columns: map[string]map[string]int{}}, formulas: map[cell.Ref]*formulas{}}
	if err := r.sheets(grids); err != nil {
		return nil, fmt.Errorf("%s: %w", demoName, err)
	}
	r.read()
	return r.plan, nil
}

// demoRows gives the cells of the demo plan by sheet and heading without unit. Their headings carry the units of the blank workbook.
func demoRows() (map[string][]map[string]string, error) {
	grids, _, err := demoGrids()
	if err != nil {
		return nil, err
	}
	out := map[string][]map[string]string{}
	for _, g := range grids {
		s := SheetNamed(g.name)
		if s == nil || g.refused != "" || len(g.rows) == 0 {
			return nil, fmt.Errorf("demo/%s.csv is not a sheet of a plan %s", g.name, g.refused)
		}
		heads := headings(s, &g.rows[0])
		for _, row := range g.rows[1:] {
			cells := map[string]string{}
			for name, h := range heads {
				if e := row.at(h.col); e.kind != blank {
					cells[name] = e.text
				}
			}
			out[s.Name] = append(out[s.Name], cells)
		}
	}
	return out, nil
}
