package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// recordedRoast is the roast with a record that misses its limit, and with surroundings as they were recorded.
func recordedRoast(t *testing.T) *Product {
	t.Helper()
	p := roast(t, model.Cylinder, rules.Met)
	step := p.History.Spans[0].Step
	h, err := model.NewRecord([]model.Span{{Step: step, EndS: 3600}}, []model.Trace{{Point: model.Point{Name: "slowest point"}, TimesS: []float64{0, 1800, 3600}, C: []float64{8, 40, 66}}}, nil)
	if err != nil {
		t.Fatal(err)
	}
	miss := p.Judgement.Findings[0]
	miss.Verdict, miss.MarginK, miss.MarginS, miss.Why = rules.NotMet, ptr(-4.25), nil, "the slowest point came to 66 °C."
	m := Measured{Name: "Trial 7", What: "slowest point", File: "logs/seven.csv", SHA256: strings.Repeat("ab", 32), Column: "Core", Unit: "°C", Readings: 3, StepS: 1800, ResolutionK: 1,
		AccuracyK: ptr(0.5), Missing: 2, Gaps: [][2]float64{{1800, 3600}}, Before: 4, History: h, Judgement: rules.Conclude([]rules.Finding{miss}, nil),
		Against: &Against{PlaceName: "slowest point", TimesS: []float64{0, 3600}, C: []float64{8, 76.5}, Readings: 3, LeftOut: 2, BiasK: -3.5, RMSK: 6.1, ColderK: 10.5, ColderS: 3600,
			Fitted: []Fitted{{What: "film coefficient of Roast", Value: 14.2, Low: 13.1, High: 15.4, Typed: 20, Unit: "W/(m²·K)"}, {What: "conductivity", Low: 0.2, High: 4, Vague: true}}, FittedRMS: 0.4}}
	lost := Measured{Name: "Trial 8", What: "slowest point", File: "logs/eight.csv"}
	p.Measured = []Measured{m, lost}
	after := p.Judgement.Findings[2]
	after.Verdict, after.MarginK = rules.CannotTell, ptr(-11.5)
	p.Deviation = &Deviation{Records: []Measured{{Name: "Air", What: "medium of Blast chill", File: "logs/air.csv"}}, WithinK: 0.05,
		Judgement: rules.Conclude([]rules.Finding{p.Judgement.Findings[0], after}, nil)}
	return p
}

// TestRecordsStandApart: each document tells the verdict of a record beside that of the prediction, and neither for the other.
func TestRecordsStandApart(t *testing.T) {
	p := recordedRoast(t)
	row := p.Row()
	if row.Verdict != p.Judgement.Verdict || row.Measured == nil || *row.Measured != rules.NotMet || row.Worst() != rules.NotMet {
		t.Errorf("%v, by record %v, worst %v", row.Verdict, row.Measured, row.Worst())
	}
	text := string(write(t, NewText, trayHead(), p))
	for _, want := range []string{
		"Record Trial 7: not met. Core reached: the slowest point came to 66 °C.",
		"Record Trial 8 could not be used",
		"With the surroundings as recorded (Air): cannot tell.",
		"Readings: 3, usually 30 min apart, in steps of 1.0 °C (1.8 °F)",
		"Gaps: 30 min to 1 h (30 min)",
		"Left out: 4 readings before the start and 0 after the end of the chain",
		"Accuracy: 0.5 °C (0.9 °F)",
		"the record lies −3.5 °C (−6.3 °F) from it on average, 6.1 °C (11.0 °F) root mean square.",
		"Doubtful readings were left out of that, and of what is fitted: 2.",
		"colder than predicted by up to 10.5 °C (18.9 °F) while heated (1 h); never warmer",
		"film coefficient of Roast 14.2 (13.1 to 15.4) W/(m²·K), taken in the plan 20",
		"conductivity not told by this record (0.200 to 4.00)",
		"It changes no verdict.",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("report.txt lacks %q", want)
		}
	}
	f := opened(t, write(t, NewWorkbook, trayHead(), p))
	got := byHeading(t, f, "Records", 2)
	for k, want := range map[string]string{"Product": "Pork loin, rolled", "Record": "Trial 7", "Limit": "Core reached", "Verdict": "not met", "Margin (°C difference)": "-4.25",
		"Verdict of the prediction": "met", "Bias (°C difference)": "-3.5", "Colder while heated (°C difference)": "10.5", "File": "logs/seven.csv"} {
		if got[k] != want {
			t.Errorf("sheet Records, %s: %q, want %q", k, got[k], want)
		}
	}
	if got := byHeading(t, f, "Records", 3); got["Record"] != "Trial 8" || got["Verdict"] != "cannot tell" {
		t.Errorf("a record that could not be used: %v", got)
	}
	if got := byHeading(t, f, "Records", 4); got["Record"] != "Air" || got["Limit"] == "" {
		t.Errorf("surroundings as recorded: %v", got)
	}
	for _, sheet := range []string{"Overview", "Findings", "Records"} {
		formats, err := f.GetConditionalFormats(sheet)
		if err != nil || len(formats) == 0 {
			t.Errorf("%s marks no verdict: %v", sheet, err)
		}
	}
	var js struct {
		Products []struct {
			Verdict string
			Records []struct {
				Verdict string
				Gaps    [][2]float64 `json:"gaps_s"`
			}
			Recorded struct{ Verdict string } `json:"as_recorded"`
		}
	}
	if err := json.Unmarshal(write(t, NewJSON, trayHead(), p), &js); err != nil {
		t.Fatal(err)
	}
	q := js.Products[0]
	if q.Verdict != p.Judgement.Verdict.String() || len(q.Records) != 2 || q.Records[0].Verdict != "not met" || q.Records[1].Verdict != "cannot tell" ||
		q.Records[0].Gaps[0] != [2]float64{1800, 3600} || q.Recorded.Verdict != "cannot tell" {
		t.Errorf("%+v", q)
	}
	var pdf bytes.Buffer
	if err := WriteProductPDF(&pdf, trayHead(), p); err != nil {
		t.Fatal(err)
	}
}

// TestDifferences: the strip below a record shows record minus prediction, in what the report shows, and breaks in gaps.
func TestDifferences(t *testing.T) {
	for _, fahrenheit := range []bool{false, true} {
		p := recordedRoast(t)
		q := p.Measured[0].asProduct(p)
		h := trayHead()
		h.Fahrenheit = fahrenheit
		f := h.differences(q, q.decides())
		l := f.lines[0]
		// the record goes straight from 8 to 40 °C in the first of two halves, the prediction from 8 to 76.5 °C in both
		seen, half := 0, f.x1/2
		for i, x := range l.x {
			switch y := l.y[i]; {
			case x > half && x < f.x1:
				if !math.IsNaN(y) {
					t.Errorf("%g at %g of %g, in a gap", y, x, f.x1)
				}
			case x <= half:
				if want := (40 - 8 - 68.5/2) * x / half * h.perK(); math.Abs(y-want) > 1e-6 {
					t.Errorf("%g at %g of %g, want %g", y, x, f.x1, want)
				}
				seen++
			}
		}
		if seen < 10 {
			t.Errorf("%d places", seen)
		}
	}
	p := recordedRoast(t)
	p.Measured[0].Against = nil
	if q := p.Measured[0].asProduct(p); trayHead().differences(q, q.decides()) != nil {
		t.Error("differences from no prediction")
	}
}

// TestSizesPDF: a search that meets nothing, and one whose values could not all be calculated, are drawn too.
func TestSizesPDF(t *testing.T) {
	l := &rules.Limit{Name: "Core 70"}
	at := func(v, margin float64, verdict rules.Verdict) *SizePoint {
		return &SizePoint{Value: v, Words: plain(v, 0, nearest) + " mm", Meets: verdict == rules.Met, Findings: []rules.Finding{{Limit: l, Level: "must", Verdict: verdict, MarginK: &margin}}}
	}
	s := &Sizing{Product: "Stew", What: "thickness", Unit: "mm", Most: true, Step: "1 mm", Spacing: "10 mm", Stride: "30 mm",
		Curve: []*SizePoint{at(20, 5, rules.Met), at(30, 1, rules.Met), at(40, -3, rules.NotMet), {Value: 50, Words: "50 mm", Refused: "too thick"}}}
	s.Now = s.Curve[2]
	s.Conclude()
	c := s.chart(trayHead())
	if c == nil || len(c.lines) != 1 || c.lines[0].y[2] != -3 || c.lines[0].y[3] == c.lines[0].y[3] || len(c.spots) != 1 || c.spots[0].x != 30 || c.y0 > -3 || c.y1 < 5 {
		t.Fatalf("%+v", c)
	}
	none := &Sizing{Product: "Mash", What: "thickness", Unit: "mm", Curve: []*SizePoint{{Value: 50, Words: "50 mm", Refused: "too thick"}, {Value: 60, Words: "60 mm", Refused: "too thick"}}}
	none.Now = none.Curve[0]
	none.Conclude()
	if none.chart(trayHead()) != nil {
		t.Error("there is nothing to draw")
	}
	var pdf bytes.Buffer
	if err := WriteSizesPDF(&pdf, trayHead(), []*Sizing{s, none}); err != nil || !bytes.HasPrefix(pdf.Bytes(), []byte("%PDF")) {
		t.Error(err)
	}
}
