package verify

import (
	"slices"
	"strings"
	"testing"
)

// TestNamesAreWords: the names stand in every report, so none has the signs of a program.
func TestNamesAreWords(t *testing.T) {
	for _, c := range slices.Concat(Cases(), LongCases()) {
		if strings.ContainsAny(c.Name, "_%") || strings.Contains(c.Name, "Inf") {
			t.Error(c.Name)
		}
	}
}
