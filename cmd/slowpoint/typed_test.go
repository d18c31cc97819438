package main

import (
	"bytes"
	"strings"
	"testing"
)

// TestHelpOf: help COMMAND is COMMAND --help, and of a word that is no command it speaks as the program does elsewhere.
func TestHelpOf(t *testing.T) {
	for _, x := range []struct {
		args, says string
		code       int
	}{
		{"help foo", `slowpoint has no command "foo"`, exitInput},
		{"help chekc", "did you mean check?", exitInput},
		{"help check foo", `slowpoint check has no command "foo"`, exitInput},
	} {
		var out, errs bytes.Buffer
		if code := run(strings.Fields(x.args), nil, &out, &errs); code != x.code || out.Len() > 0 || !strings.Contains(errs.String(), x.says) {
			t.Errorf("%s: exit %d, %q, %q", x.args, code, out.String(), errs.String())
		}
	}
	var long, short, errs bytes.Buffer
	if run([]string{"check", "--help"}, nil, &long, &errs) != exitMet || run([]string{"help", "check"}, nil, &short, &errs) != exitMet || long.String() != short.String() || long.Len() == 0 {
		t.Errorf("help check is not check --help:\n%s", short.String())
	}
}
