package cell

import "testing"

// TestColumnNumber holds the letters of columns to their numbers, there and back, as far as spreadsheets go and beyond.
func TestColumnNumber(t *testing.T) {
	for n := 1; n <= 18278; n++ { // ZZZ
		if got := ColumnNumber(ColumnName(n)); got != n {
			t.Fatalf("%d is %s, which is read as %d", n, ColumnName(n), got)
		}
	}
	for _, c := range []struct {
		name, letters string
		want          int
	}{
		{"small letters", "aB", 28},
		{"nothing", "", 0},
		{"a number behind", "B5", 0},
		{"a blank", "A B", 0},
		{"letters of no spreadsheet", "AAAA", 0},
		{"letters with marks", "Ä", 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := ColumnNumber(c.letters); got != c.want {
				t.Errorf("%q is %d, expected %d", c.letters, got, c.want)
			}
		})
	}
}
