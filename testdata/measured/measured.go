// Package measured hands the measured figures beside it to tests. Each table says in its head where they come from.
package measured

import (
	_ "embed" // the tables
	"strings"
	"testing"

	"slowpoint/testdata/published"
)

//go:embed cases.csv
var cases string

//go:embed courses.csv
var courses string

// Courses reads the published courses as Rows reads the cases.
func Courses(t testing.TB) []map[string]string {
	t.Helper()
	return published.Read(t, "courses.csv", strings.NewReader(courses))
}

// Rows reads the table: its rows as maps by heading. A table that is broken or without rows ends the test.
func Rows(t testing.TB) []map[string]string {
	t.Helper()
	return published.Read(t, "cases.csv", strings.NewReader(cases))
}
