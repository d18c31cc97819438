package codes

import (
	"embed"
	"encoding/csv"
	"fmt"
	"io/fs"
	"slices"
	"strings"
)

//go:embed limits.csv tables.csv groups.csv documents.csv
var files embed.FS

// copied are the columns of limits.csv that are columns of the sheet Limits and go there as they stand.
var copied = []string{"Limit", "Rule", "Stage", "Where", "From", "To", "Time", "Second time", "Clock starts", "Counting",
	"Compare", "Compare time", "Reference temperature", "z", "Humidity", "Share of stage", "Table", "Group", "Level", "Hazard", "Clause"}

// cited are the columns of documents.csv that are columns of the sheet Limits.
var cited = []string{"Code", "Edition", "Issued by", "Status"}

// read builds the rows from the four files. The files are part of the program: a fault in them is a fault of the
// program, and panics with the file and the line.
func read(from fs.FS) []Row {
	documents := make(map[string]map[string]string)
	for _, d := range records(from, "documents.csv") {
		documents[d["Document"]] = d
	}
	groups := make(map[string]GroupRow)
	for _, g := range records(from, "groups.csv") {
		groups[g["Group"]] = GroupRow{Group: g["Group"], Join: g["Join"], Within: g["Within"]}
	}
	tables := make(map[string][]TableRow)
	covers := make(map[string][]string)
	for _, t := range records(from, "tables.csv") {
		name := t["Table"]
		tables[name] = append(tables[name], TableRow{Table: name, Temperature: t["Temperature"], Time: t["Time"]})
		covers[name] = append(covers[name], strings.Fields(t["Stands for"])...)
	}
	var rows []Row
	for _, l := range records(from, "limits.csv") {
		d, ok := documents[l["Document"]]
		if !ok {
			panic(fmt.Sprintf("limits.csv: %s cites the document %q, which documents.csv lacks", l["ID"], l["Document"]))
		}
		rows = append(rows, Row{
			ID: l["ID"], Where: l["Jurisdiction"], Stage: l["Listed under"], Title: l["Limit"],
			Cells: cells(l, d), Tables: slices.Clone(tables[l["Table"]]), Groups: chain(groups, l["Group"]),
			Source:   fmt.Sprintf("%s: %s, %s, %s", d["Issued by"], d["Code"], d["Edition"], l["Clause"]),
			Evidence: d["Evidence"],
			Covers:   append(strings.Fields(l["Stands for"]), covers[l["Table"]]...),
		})
	}
	return rows
}

// cells are the filled cells of the sheet Limits for a line of limits.csv and its document.
func cells(limit, document map[string]string) map[string]string {
	c := map[string]string{"Applies to": "all"}
	for _, column := range copied {
		if limit[column] != "" {
			c[column] = limit[column]
		}
	}
	for _, column := range cited {
		c[column] = document[column]
	}
	c["Note"] = strings.Join([]string{"For: " + limit["Food"], limit["Note"], Reminder}, " ")
	return c
}

// chain lists a group and the groups around it, the outermost first.
func chain(groups map[string]GroupRow, name string) []GroupRow {
	var up []GroupRow
	for name != "" {
		g, ok := groups[name]
		if !ok || slices.Contains(up, g) {
			panic(fmt.Sprintf("groups.csv: the group %q is missing or lies within itself", name))
		}
		up = append(up, g)
		name = g.Within
	}
	slices.Reverse(up)
	return up
}

// records reads a file of comma-separated values with lines of remarks (#) above its headings: a map by heading a line.
func records(from fs.FS, name string) []map[string]string {
	f, err := from.Open(name)
	if err != nil {
		panic(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	lines, err := r.ReadAll()
	if err != nil {
		panic(fmt.Sprintf("%s: %v", name, err))
	}
	var out []map[string]string
	for _, line := range lines[1:] {
		m := make(map[string]string, len(line))
		for i, heading := range lines[0] {
			m[heading] = line[i]
		}
		out = append(out, m)
	}
	return out
}
