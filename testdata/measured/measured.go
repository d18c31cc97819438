// Package measured hands the measured figures beside it to tests. The table says in its head where they come from.
package measured

import (
	_ "embed" // the table
	"strings"
	"testing"

	"slowpoint/testdata/published"
)

//go:embed cases.csv
var cases string

// Rows reads the table: its rows as maps by heading. A table that is broken or without rows ends the test.
func Rows(t testing.TB) []map[string]string {
	t.Helper()
	return published.Read(t, "cases.csv", strings.NewReader(cases))
}
