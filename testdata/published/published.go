// Package published hands the published figures beside it to tests. Each table says in its head where its figures come from.
package published

import (
	"embed"
	"encoding/csv"
	"io"
	"strconv"
	"testing"
)

//go:embed *.csv
var tables embed.FS

// Rows reads a table of this folder: its rows as maps by heading. A table that is missing, broken or without rows ends the test.
func Rows(t testing.TB, name string) []map[string]string {
	t.Helper()
	f, err := tables.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	return Read(t, name, f)
}

// Read reads a table of another place in the same way.
func Read(t testing.TB, name string, table io.Reader) []map[string]string {
	t.Helper()
	r := csv.NewReader(table)
	r.Comment = '#'
	all, err := r.ReadAll()
	if err != nil || len(all) < 2 {
		t.Fatalf("%s: %d rows, %v", name, len(all), err)
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

// Number reads a figure, inf too. Anything else ends the test.
func Number(t testing.TB, figure string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(figure, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}
