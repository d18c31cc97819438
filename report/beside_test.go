package report

import (
	"bytes"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// TestBeside keeps what must be read together with a verdict on the front pages, in the text and in the overview.
func TestBeside(t *testing.T) {
	const rise = "Met only through the rise after the cook: the slowest place (centre) left the cook at 37.8 °C and rose to 67.8 °C."
	for _, x := range []struct {
		name    string
		verdict rules.Verdict
		change  func(p *Product)
		want    []string
		not     []string
	}{
		{"only by carry-over", rules.Met, func(p *Product) { p.Judgement.Findings[0].CarryOver = rise }, []string{`"Core reached": ` + rise}, nil},
		{"a limit that does not apply", rules.Met, func(p *Product) {}, []string{"3 met; 1 did not apply: Hot holding."}, []string{"carry-over"}},
		{"a clock that never started comes first", rules.Met, func(p *Product) { p.Judgement.Findings[1].Verdict = rules.NotApplicable },
			[]string{"2 met; 2 did not apply: Chill, first part, Hot holding."}, nil},
		{"an Until that was not reached", rules.NotMet, func(p *Product) {
			no := false
			p.History.Spans[0].Reached, p.Further[0].History.Spans[0].Reached = &no, &no
		},
			[]string{"The step Roast did not reach its Until within its longest duration (1 h 30 min)."}, nil},
		{"an Until that was reached at once", rules.Met, func(p *Product) {
			yes := true
			for _, h := range []*model.History{p.History, p.Further[0].History} {
				h.Spans[1].Reached, h.Spans[1].EndS = &yes, h.Spans[1].StartS
			}
		}, []string{"The step Rest on the bench ended at once: its Until was already reached when it began."}, nil},
	} {
		t.Run(x.name, func(t *testing.T) {
			h, p := roastHead(), roast(t, model.Brick, x.verdict)
			x.change(p)
			row := p.Row()
			text := writeText(t, h, p)
			for _, w := range x.want {
				if !strings.Contains(row.Why, w) {
					t.Errorf("the overview lacks %q: %s", w, row.Why)
				}
				if n := strings.Count(text, w); n < 2 {
					t.Errorf("the text has %q %d times", w, n)
				}
			}
			for _, w := range x.not {
				if strings.Contains(row.Why, w) {
					t.Errorf("the overview has %q: %s", w, row.Why)
				}
			}
			pdf := pdfText(t, productPDF(t, h, p))
			kitchen, audit, _ := strings.Cut(pdf, "Report for the audit")
			words := strings.Fields(x.want[0])
			last := words[len(words)-1] // lines of the box break within the sentence beside the word of the verdict
			if !strings.Contains(kitchen, last) || !strings.Contains(audit, x.want[0]) {
				t.Errorf("the front pages lack %q:\n%.900s", x.want[0], pdf)
			}
		})
	}
}

func writeText(t *testing.T, h *Head, p *Product) string {
	t.Helper()
	var b bytes.Buffer
	w := NewText(&b, h)
	if err := w.Add(p); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestNoRoomInAMissedLimit prints what is lacking and nothing that looks like room.
func TestNoRoomInAMissedLimit(t *testing.T) {
	f := &rules.Finding{Verdict: rules.NotMet, MarginK: ptr(-2.), MarginS: ptr(6000.)}
	if s := roastHead().room(f); strings.Contains(s, "room") || !strings.Contains(s, "lacking 2.0 °C") {
		t.Error(s)
	}
	if f.Verdict = rules.Met; !strings.Contains(roastHead().room(f), "room 1 h 40 min") {
		t.Error(roastHead().room(f))
	}
}

// TestDecidingRow finds the row of a table that decides and writes it in its own unit.
func TestDecidingRow(t *testing.T) {
	rows := []rules.Row{{C: 60, S: 720, Typed: "60 °C, 12 min"}, {C: 145/1.8 - 32/1.8, S: 240, Typed: "145 °F, 4 min"}}
	rows[0].At.Sheet, rows[0].At.Row, rows[1].At.Sheet, rows[1].At.Row = "Tables", 2, "Tables", 3
	f := &rules.Finding{Limit: &rules.Limit{Table: &rules.Table{Name: "T", Rows: rows}}}
	if decidingRow(f) != nil {
		t.Error("a row decides without being named")
	}
	f.Cells = append(f.Cells, rows[1].At)
	row := decidingRow(f)
	if row == nil || row.S != 240 {
		t.Fatalf("%+v", row)
	}
	if s := roastHead().rowTyped(row); s != "145 °F (62.78 °C)" {
		t.Error(s)
	}
}

// TestMissingGlyph keeps the sentence of the footer beside the warning of a character that the font lacks.
func TestMissingGlyph(t *testing.T) {
	h, p := roastHead(), roast(t, model.Brick, rules.Met)
	p.Product.Name, h.Problems = "Pork 𓀀 loin", nil
	first, _, _ := strings.Cut(pdfText(t, productPDF(t, h, p)), "Report for the audit")
	for _, w := range []string{"Warning: the font cannot show", say("footer not measured")} {
		if !strings.Contains(first, w) {
			t.Errorf("page 1 lacks %q", w)
		}
	}
	var b bytes.Buffer
	if err := WriteSummaryPDF(&b, h, []Row{p.Row()}); err != nil {
		t.Fatal(err)
	}
	if s := pdfText(t, b.Bytes()); strings.Contains(s, say("summary no problem")) || !strings.Contains(s, say("footer not measured")) {
		t.Error("the overview says that nothing was noted, or lost its footer")
	}
}

// TestVacuous lets a limited time of which nothing was used neither decide nor be checked with the probe.
func TestVacuous(t *testing.T) {
	p := roast(t, model.Brick, rules.Met)
	f := &p.Judgement.Findings[0]
	f.Limit.Kind, f.Value, f.Required, f.MarginK, f.MarginS = rules.Band, ptr(0.), ptr(2.), ptr(0.1), ptr(1.)
	if d := p.decides().finding; d == f || !vacuous(f) {
		t.Errorf("%s decides", d.Limit.Name)
	}
	x := &sheet{doc: newDoc(roastHead(), "T"), p: p, decides: p.decides(), order: p.worstFirst()}
	checks := strings.Join(x.checks(), "\n")
	if strings.Contains(checks, "Throughout") || strings.Contains(checks, "93 min") || !strings.Contains(checks, "the model expects") {
		t.Error(checks)
	}
}

// TestCheckTellsOfAnEdge says on the first page, where a place within the food is named, why it is that one: beyond it no clock started.
func TestCheckTellsOfAnEdge(t *testing.T) {
	p := roast(t, model.Brick, rules.NotMet)
	const says = "(beyond this place nothing was ever above 60 °C, so no clock ran there)"
	checks := func() string {
		x := &sheet{doc: newDoc(roastHead(), "T"), p: p, decides: p.decides(), order: p.worstFirst()}
		return strings.Join(x.checks(), "\n")
	}
	if s := checks(); strings.Contains(s, "beyond this place") {
		t.Error(s)
	}
	d := p.decides().finding
	d.EdgeOf = "60 °C"
	if s := checks(); strings.Count(strings.Join(strings.Fields(s), " "), says) != 1 {
		t.Error(s)
	}
}

// TestFilmStandsForEvaporation gives no caution on evaporation where the typed coefficient stands for everything.
func TestFilmStandsForEvaporation(t *testing.T) {
	for _, x := range []struct {
		surface *model.Surface
		want    bool
	}{{model.Film, false}, {model.StillAir, true}} {
		p := roast(t, model.Brick, rules.Met)
		for i := range p.Steps {
			p.Steps[i].Surface = x.surface
			p.History.Spans[i].Step = &p.Steps[i]
		}
		got := false
		for _, c := range Cautions(roastHead(), p) {
			got = got || c.Key == "evaporation left out"
		}
		if got != x.want {
			t.Errorf("%s: %v", x.surface.Name, got)
		}
	}
}

// TestBesideInOverview shows what must be read with a verdict in every row, with a margin or without, and once.
func TestBesideInOverview(t *testing.T) {
	const rise = "Met only through the rise after the cook."
	for _, x := range []struct {
		name string
		row  Row
		want []string
		not  string
	}{
		{"with a margin", Row{Verdict: rules.Met, Why: "The slowest place took 12 min. " + rise, Beside: rise, MarginK: ptr(3.27)}, []string{"room 3.2 °C", rise}, "took 12 min"},
		{"without one", Row{Verdict: rules.CannotTell, Why: "Something is missing. " + rise, Beside: rise}, []string{"Something is missing.", rise}, "room"},
		{"a margin of another place", Row{Verdict: rules.Met, MarginK: ptr(3.27), MarginPlace: "14 mm above the underside"}, []string{"room 3.2 °C (5.8 °F) at another place (14 mm above the underside)"}, "Met only"},
	} {
		t.Run(x.name, func(t *testing.T) {
			x.row.Product, x.row.Deciding = "Stew", "Core"
			text := pdfText(t, summaryPDF(t, roastHead(), []Row{x.row}))
			list, _, _ := strings.Cut(text, say("plan title"))
			var flat []string // the columns stand beside each other in the text of the page
			for _, w := range x.want {
				for _, word := range strings.Fields(w) {
					if !strings.Contains(list, word) {
						flat = append(flat, word)
					}
				}
			}
			if len(flat) > 0 || strings.Contains(list, x.not) || strings.Count(list, "through") > 1 {
				t.Errorf("%q are missing or something is printed twice or %q is printed:\n%s", flat, x.not, list)
			}
		})
	}
	p := roast(t, model.Brick, rules.Met)
	p.Judgement.Findings[0].CarryOver = rise
	if r := p.Row(); !strings.Contains(r.Beside, rise) || !strings.HasSuffix(r.Why, r.Beside) || !finite(r.MarginK) {
		t.Errorf("%+v", r)
	}
}

// TestMarginOfAnotherPlace says on the front pages, in the text and in the overview whose margin it is; the card says it in its notes.
func TestMarginOfAnotherPlace(t *testing.T) {
	h, p := roastHead(), roast(t, model.Brick, rules.Met)
	const elsewhere = "at another place (4 mm above the underside)"
	f := p.decides().finding
	f.MarginPlace = "4 mm above the underside"
	f.Notes = append(f.Notes, "The margin in temperature is that of another place (4 mm above the underside).")
	if row := p.Row(); !strings.Contains(row.Room(h), elsewhere) {
		t.Error(row.Room(h))
	}
	x := &sheet{doc: newDoc(h, "T"), p: p, decides: p.decides(), order: p.worstFirst()}
	if s := x.headline(); !strings.Contains(s, elsewhere) {
		t.Error(s)
	}
	if s := x.marginWords(f); strings.Contains(s, elsewhere) || !strings.Contains(s, "room") {
		t.Errorf("the card says it twice: %s", s)
	}
	audit := pdfText(t, productPDF(t, h, p))
	if _, audit, _ = strings.Cut(audit, "Report for the audit"); !strings.Contains(audit, elsewhere) {
		t.Error("the front page for the auditor does not say whose margin it prints")
	}
	f.MarginPlace = ""
	if s := x.headline(); strings.Contains(s, "another place") {
		t.Error(s)
	}
}
