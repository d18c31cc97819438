package report

import (
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// TestAlternatives: where any limit of a group will do, the verdict says how many there are and what became of the others.
func TestAlternatives(t *testing.T) {
	h, p := roastHead(), roast(t, model.Slab, rules.Met)
	p.Judgement.Groups[0].Members = []rules.Member{{Name: "Chill, first part", Verdict: rules.NotMet}, {Name: "Chill to store", Verdict: rules.Met}, {Name: "Ice", Verdict: rules.NotApplicable}}
	const want = `"Chill to store" is one of 3 limits of which any will do (group Chilling); the others: "Chill, first part" not met, "Ice" not applicable.`
	if row := p.Row(); !strings.Contains(row.Beside, want) || !strings.Contains(row.Why, want) {
		t.Errorf("the screen and the overview: %s", row.Why)
	}
	if text := writeText(t, h, p); !strings.Contains(text, want) {
		t.Errorf("report.txt does not say it:\n%s", text)
	}
	p.Judgement.Groups[0].Members = p.Judgement.Groups[0].Members[1:2]
	if row := p.Row(); strings.Contains(row.Beside, "any will do") {
		t.Errorf("a group of one: %s", row.Beside)
	}
}
