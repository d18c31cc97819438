package workbook

import (
	"embed"
	"fmt"
	"io/fs"
)

// demoFiles is the demo plan: an invented kitchen with invented recipes and measurements, and limits of published codes.
//
//go:embed demo/*.csv
var demoFiles embed.FS

// demoName is what results call the demo plan.
const demoName = "demo"

// demoGrids reads the files of the demo plan.
func demoGrids() ([]*Grid, string, error) {
	files, err := fs.Sub(demoFiles, "demo")
	if err != nil {
		return nil, "", err
	}
	return readFiles(files, demoName)
}

// ReadDemo reads the demo plan that is built in, as a folder of CSV files is read.
func ReadDemo() (*Plan, error) {
	grids, digest, err := demoGrids()
	if err != nil {
		return nil, err
	}
	return understand(grids, &Plan{Name: demoName, SHA256: digest})
}

// demoRows gives the cells of the demo plan by sheet and heading without unit. A test holds its headings to the units of the blank workbook.
func demoRows() (map[string][]map[string]string, error) {
	grids, _, err := demoGrids()
	if err != nil {
		return nil, err
	}
	out := map[string][]map[string]string{}
	for _, g := range grids {
		s := SheetNamed(g.Name)
		if s == nil || g.Refused != "" || len(g.Rows) == 0 {
			return nil, fmt.Errorf("demo/%s.csv is not a sheet of a plan %s", g.Name, g.Refused)
		}
		heads := headings(s, &g.Rows[0])
		for _, row := range g.Rows[1:] {
			cells := map[string]string{}
			for name, h := range heads {
				if e := row.at(h.col); e.Kind != Blank {
					cells[name] = e.Text
				}
			}
			out[s.Name] = append(out[s.Name], cells)
		}
	}
	return out, nil
}
