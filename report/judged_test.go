package report

import (
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// TestJudgedInPart: a limit that was judged at one place does not make that place the slowest, and the report says on its first page that
// the rest was not judged.
func TestJudgedInPart(t *testing.T) {
	for _, x := range []struct{ where, called, says string }{
		{"every point", "the slowest place (", ""},
		{"", "the slowest place (", ""},
		{"centre", "the only place judged (", ""},
		{"surface", "the slowest place of the surface (", `"Chill to store": judged at the surface only, which says nothing of the inside.`},
		{"medium", "the place shown (", `"Chill to store": judged on the surroundings, not on the food.`},
		{"probe", "the only place judged (", `"Chill to store": judged at the point probe only, which says nothing of the rest of the food.`},
	} {
		t.Run(x.where, func(t *testing.T) {
			h, p := roastHead(), roast(t, model.Slab, rules.NotMet)
			p.Judgement.Findings[2].Limit.Where.Name = x.where
			text := writeText(t, h, p)
			front, _, _ := strings.Cut(pdfText(t, productPDF(t, h, p)), "Calculated, not measured.")
			for name, got := range map[string]string{"report.txt": text, "first page": strings.Replace(strings.Join(strings.Fields(front), " "), "✗ NOT MET ", "", 1)} {
				if x.says != "" && !strings.Contains(got, x.says) {
					t.Errorf("%s does not say %s\n%s", name, x.says, got)
				}
				if x.says == "" && strings.Contains(got, ": judged ") {
					t.Errorf("%s says that it was judged in part", name)
				}
			}
			if got := newSheetSentence(h, p); !strings.Contains(got, x.called) {
				t.Errorf("%q is not in %s", x.called, got)
			}
			due := false
			for _, c := range Cautions(h, p) {
				due = due || c.Key == "judged in part" && c.Text == x.says
			}
			if due != (x.says != "") {
				t.Errorf("caution: %v", due)
			}
		})
	}
}

// TestJudgedOnAirAlone: a limit on the air of an oven is no reservation beside limits on the food, and one if it is all that was judged.
func TestJudgedOnAirAlone(t *testing.T) {
	p := roast(t, model.Slab, rules.Met)
	for i := range p.Judgement.Findings {
		p.Judgement.Findings[i].Limit.Kind = rules.StayBelow
	}
	p.Judgement.Findings[1].Limit.Where.Name = "medium"
	if s := p.judgedInPart(); len(s) != 0 {
		t.Errorf("beside limits on the food: %q", s)
	}
	for i := range p.Judgement.Findings {
		p.Judgement.Findings[i].Limit.Where.Name = "medium"
	}
	if s := p.judgedInPart(); len(s) != 1 || s[0] != `"Core reached", "Chill, first part", "Chill to store": judged on the surroundings, not on the food.` {
		t.Errorf("alone: %q", s)
	}
}

// newSheetSentence is the sentence under the chart.
func newSheetSentence(h *Head, p *Product) string {
	return (&sheet{doc: &doc{head: h}, p: p, decides: p.decides()}).slowestSentence()
}
