// Package measured hands the measured figures beside it to tests. The table says in its head where they come from.
package measured

import (
	_ "embed" // the table
	"encoding/csv"
	"strings"
	"testing"
)

//go:embed cases.csv
var cases string

// Rows reads the table: its rows as maps by heading. A table that is broken or without rows ends the test.
func Rows(t testing.TB) []map[string]string {
	t.Helper()
	r := csv.NewReader(strings.NewReader(cases))
	r.Comment = '#'
	all, err := r.ReadAll()
	if err != nil || len(all) < 2 {
		t.Fatalf("%d rows, %v", len(all), err)
	}
	var rows []map[string]string
	for _, line := range all[1:] {
		row := map[string]string{}
		for i, h := range all[0] {
			row[h] = line[i]
		}
		rows = append(rows, row)
	}
	return rows
}
