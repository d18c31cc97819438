package main

import (
	"bytes"
	"strings"
	"testing"

	"slowpoint/rules/codes"
)

// TestCodesAreCounted: 400 rows of published codes were seen and are fit to be copied (rules/codes/testdata/starters.csv); the list says how
// fewer limits stand for all of them.
func TestCodesAreCounted(t *testing.T) {
	for _, x := range []struct {
		args []string
		want string
	}{
		{nil, "204 starter limits, for 400 rows of published codes: 34 of the limits have a table, with 872 rows in all, 61 are further parts of a clause. Starter"},
		{[]string{"--where", "Scotland", "--stage", "reheat"}, " of published codes. Starter"},
	} {
		var out, errs bytes.Buffer
		if code := run(append([]string{"codes"}, x.args...), nil, &out, &errs); code != 0 || !strings.Contains(out.String(), x.want) {
			t.Errorf("%v: exit %d, %q is not in\n%s", x.args, code, x.want, out.String()[max(0, out.Len()-500):])
		}
	}
	if got := standFor([]codes.Row{{Covers: []string{"a"}}}); got != "1 starter limit, for 1 row of published codes" {
		t.Error(got)
	}
}
