package report

import (
	_ "embed"
	"strings"
)

//go:embed caution.txt
var cautionText string

// CautionText is what every document says about itself, one sentence or two a paragraph.
// SAFETY.md holds the same words.
func CautionText() []string { return strings.Split(strings.TrimSpace(cautionText), "\n") }
