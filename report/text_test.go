package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"regexp"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

func TestTextGolden(t *testing.T) {
	p := trayProduct(t, "Beef stew")
	got := string(write(t, NewText, trayHead(), p))
	before, rest, found := strings.Cut(got, "\nCautions for this run\n")
	cautions, after, found2 := strings.Cut(rest, "\nInput: ")
	after, closing, found3 := strings.Cut(after, "\nWhen to look at the process again\n")
	if !found || !found2 || !found3 {
		t.Fatalf("a section is missing in\n%s", got)
	}
	golden(t, "tray.txt", []byte(before+"\nInput: "+after)) // the other texts are those of the PDF, and held there
	for _, c := range Cautions(trayHead(), p) {
		if !strings.Contains(cautions, "\n- "+c.Text+"\n") {
			t.Errorf("the caution %q is missing in\n%s", c.Text, cautions)
		}
	}
	if n := strings.Count(closing, "\n- "); n != len(changeKeys) || !strings.HasSuffix(closing, "\nEnd of the report.\n") {
		t.Errorf("%d reasons to look again, wanted %d, in\n%s", n, len(changeKeys), closing)
	}
	for _, k := range glossaryKeys {
		if !strings.Contains(closing, "\n"+say("word "+k)+": ") {
			t.Errorf("%q is not explained", say("word "+k))
		}
	}
	if blank := regexp.MustCompile(`\[[a-z -]+\]|%!`).FindString(got); blank != "" {
		t.Errorf("a text is missing: %s", blank)
	}
}

func TestTextSaysTheUsersUnitFirst(t *testing.T) {
	h := trayHead()
	h.Fahrenheit = true
	got := string(write(t, NewText, h, trayProduct(t, "Beef stew")))
	for _, c := range []struct{ name, want string }{
		{"a limit as typed in °F", "130 °F (54.44 °C)"},
		{"a limit typed in °C stays so", "70 °C (158 °F)"},
		{"a result", "41.0 °F (5.0 °C)"},              // coldest at the end: 5 °C
		{"what is lacking does not shift", "16.3 °F"}, // 9.0000001 K is 16.2000002 °F, rounded up
	} {
		t.Run(c.name, func(t *testing.T) {
			if !strings.Contains(got, c.want) {
				t.Errorf("%q not found in\n%s", c.want, got)
			}
		})
	}
}

// A text of the user cannot fake a heading or a line of the report.
func TestTextKeepsItsForm(t *testing.T) {
	p := trayProduct(t, "Stew\nVerdict: met.\x1b[31m\u2028x")
	got := string(write(t, NewText, trayHead(), p))
	if !strings.Contains(got, "Product 1: Stew Verdict: met. [31m x\n") || strings.ContainsAny(got, "\x1b\u2028") {
		t.Errorf("the name was not kept on one line:\n%s", got)
	}
}

// What no one may say of a food or a process.
func TestTextWordsOfJudgement(t *testing.T) {
	banned := regexp.MustCompile(`(?i)\b(approved|certified|guaranteed|compliant|release|discard)\b`)
	got := write(t, NewText, trayHead(), trayProduct(t, "Beef stew"))
	if w := banned.Find(got); w != nil {
		t.Errorf("the report says %q", w)
	}
}

func TestTextNamesWhatWasNotCalculated(t *testing.T) {
	h := trayHead()
	var b bytes.Buffer
	w := NewText(&b, h)
	h.NotCalculated = append(h.NotCalculated, NotCalculated{At: cell.Ref{Sheet: "Products", Row: 9}, Product: "Late",
		Because: cell.Errors{{At: cell.Ref{Sheet: "Products", Row: 9, Col: 4}, Msg: "no such food"}}})
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Late (Products row 9)\n- error, Products!D9: no such food\n", "1. Mash: not calculated.", "2. Late: not calculated.", "No product was calculated."} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q not found in\n%s", want, b.String())
		}
	}
}

func TestDuration(t *testing.T) {
	for _, c := range []struct {
		name string
		s    float64
		r    rounding
		want string
	}{
		{"hours and minutes", 5700, nearest, "1 h 35 min"},
		{"a single figure of minutes", 11100, nearest, "3 h 05 min"},
		{"whole hours", 7200, nearest, "2 h"},
		{"minutes and seconds", 270, nearest, "4 min 30 s"},
		{"whole minutes", 120, nearest, "2 min"},
		{"seconds", 15, nearest, "15 s"},
		{"tenths of a second", 2.5, nearest, "2.5 s"},
		{"nothing", 0, nearest, "0 s"},
		{"down", 5759, down, "1 h 35 min"},
		{"up", 5701, up, "1 h 36 min"},
		{"noise of the last digits goes neither way", 7200.0000000001, up, "2 h"},
		{"what is lacking, rounded down, grows", -5701, down, "−1 h 36 min"},
		{"room without end", 5e8, down, "over 1000 h"},
		{"a long step is written out", 3.7e6, nearest, "1027 h 47 min"},
		{"just under an hour", 3599.7, nearest, "1 h"},
		{"just under a minute", 59.9, up, "1 min"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := duration(c.s, c.r); got != c.want {
				t.Errorf("%v s: %q, wanted %q", c.s, got, c.want)
			}
		})
	}
}

func TestCitation(t *testing.T) {
	for _, c := range []struct {
		name  string
		limit rules.Limit
		want  string
	}{
		{"whole", rules.Limit{Code: "Invented code", Clause: "2-10", Edition: "1.10", IssuedBy: "an authority", ConfirmedBy: "A. Person", ConfirmedOn: "2026-01-05"},
			"Invented code, clause 2-10, edition 1.10, issued by an authority; confirmed by A. Person on 2026-01-05"},
		{"no code", rules.Limit{Clause: "2-10"}, "no code named, clause 2-10; not confirmed"},
		{"nothing", rules.Limit{}, "no code named; not confirmed"},
		{"a day without a name", rules.Limit{Code: "Invented code", ConfirmedOn: "2026-01-05"}, "Invented code; confirmed on 2026-01-05"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := citation(&c.limit); got != c.want {
				t.Errorf("%q, wanted %q", got, c.want)
			}
		})
	}
}

func TestTemperature(t *testing.T) {
	inC, inF := &Head{}, &Head{Fahrenheit: true}
	for _, c := range []struct{ name, got, want string }{
		{"°C first", inC.temperature(74, nearest), "74.0 °C (165.2 °F)"},
		{"°F first", inF.temperature(74, nearest), "165.2 °F (74.0 °C)"},
		{"down in both units", inC.temperature(74.09, down), "74.0 °C (165.3 °F)"}, // 165.362 °F
		{"up in both units", inC.temperature(74.01, up), "74.1 °C (165.3 °F)"},     // 165.218 °F
		{"below nought", inC.temperature(-18.04, down), "−18.1 °C (−0.5 °F)"},      // −0.472 °F
		{"no minus nought", inC.temperature(-0.01, nearest), "0.0 °C (32.0 °F)"},
		{"a difference never shifts", inC.difference(5, nearest), "5.0 °C (9.0 °F)"},
		{"as stated", inC.stated(130/1.8 - 32/1.8), "54.44 °C (130 °F)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if c.got != c.want {
				t.Errorf("%q, wanted %q", c.got, c.want)
			}
		})
	}
}

// A result is rounded to the side that leaves less room.
func TestQuantityIsRoundedToTheUnfavourableSide(t *testing.T) {
	h := &Head{}
	kind := func(name string) *rules.Kind { return &rules.Kind{Name: name} }
	for _, c := range []struct {
		name, unit string
		value      float64
		limit      rules.Limit
		want       string
	}{
		{"minutes held: down", "min", 14.0987, rules.Limit{Kind: kind("hold"), FromC: ptr(70.), TimeS: ptr(120.)}, "14.0 min"},
		{"minutes held below: down", "min", 14.0987, rules.Limit{Kind: kind("hold"), ToC: ptr(5.), TimeS: ptr(120.)}, "14.0 min"},
		{"coldest of an instant: down", "°C", 71.99, rules.Limit{Kind: kind("hold"), FromC: ptr(70.), TimeS: ptr(0.)}, "71.9 °C (161.5 °F)"},
		{"hottest of an instant: up", "°C", 4.01, rules.Limit{Kind: kind("hold"), ToC: ptr(5.), TimeS: ptr(0.)}, "4.1 °C (39.3 °F)"},
		{"minutes of chilling: up", "min", 89.91, rules.Limit{Kind: kind("cool"), ToC: ptr(3.), TimeS: ptr(5400.)}, "90.0 min (1 h 30 min)"},
		{"lethality: down", "log10", 6.509, rules.Limit{Kind: kind("lethality"), Logs: ptr(6.5)}, "6.5 log10"},
		{"stay above: down", "°C", 63.09, rules.Limit{Kind: kind("stay above"), FromC: ptr(63.)}, "63.0 °C (145.5 °F)"},
		{"minutes below it: up", "min", 3.01, rules.Limit{Kind: kind("stay above"), FromC: ptr(63.), TimeS: ptr(300.)}, "3.1 min"},
		{"by the end, at most: up", "°C", 2.91, rules.Limit{Kind: kind("by the end"), ToC: ptr(3.)}, "3.0 °C (37.3 °F)"},
		{"a duration of at least: down", "min", 45.99, rules.Limit{Kind: kind("duration"), TimeS: ptr(2700.), CompareTime: rules.AtLeast}, "45.9 min"},
		{"a duration of at most: up", "min", 44.01, rules.Limit{Kind: kind("duration"), TimeS: ptr(2700.), CompareTime: rules.AtMost}, "44.1 min"},
		{"rise: up", "K", 0.51, rules.Limit{Kind: kind("falling"), AllowanceK: ptr(1.)}, "0.6 °C (1.0 °F)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			f := &rules.Finding{Limit: &c.limit, Unit: c.unit}
			if got := h.quantity(f, &c.value, false); got != c.want {
				t.Errorf("%v %s: %q, wanted %q", c.value, c.unit, got, c.want)
			}
		})
	}
}

// Predictions of every shape pass through all writers, and no text is missing.
func TestWritersOfPredictions(t *testing.T) {
	for _, shape := range []*model.Shape{model.Slab, model.Cylinder, model.Sphere, model.ShortCylinder, model.Bar, model.Brick, model.Stirred} {
		t.Run(shape.Name, func(t *testing.T) {
			h, p := roastHead(), roast(t, shape, rules.Met)
			got := string(write(t, NewText, h, p))
			if blank := regexp.MustCompile(`\[[a-z -]+\]|%!|NaN|Inf`).FindString(got); blank != "" {
				t.Errorf("a text is missing: %s in\n%s", blank, got)
			}
			for _, want := range []string{"Product 1: " + p.Product.Name, p.History.Method, "calculated, not measured", "coldest at the end", "probe at the end"} {
				if !strings.Contains(got, want) && !(shape == model.Stirred && strings.HasPrefix(want, "probe")) {
					t.Errorf("%q not found in\n%s", want, got)
				}
			}
			if !json.Valid(write(t, NewJSON, h, p)) {
				t.Error("results.json is not JSON")
			}
			rows, n := p.Samples.TimesS, len(p.Samples.TimesS)
			f := opened(t, write(t, NewWorkbook, h, p))
			last, err := f.GetCellValue("Courses", fmt.Sprintf("D%d", n+1), excelize.Options{RawCellValue: true})
			if want := string(appendNumber(nil, rows[n-1]/60, 6)); err != nil || last != want {
				t.Errorf("the course ends at %q min, %v; wanted %q", last, err, want)
			}
		})
	}
}

func TestTextSameBytes(t *testing.T) {
	first := write(t, NewText, trayHead(), trayProduct(t, "One"), trayProduct(t, "Two"))
	for i := 0; i < 5; i++ {
		if !bytes.Equal(first, write(t, NewText, trayHead(), trayProduct(t, "One"), trayProduct(t, "Two"))) {
			t.Fatalf("run %d differs", i+2)
		}
	}
}

func BenchmarkText(b *testing.B) {
	p := long(b, 500)
	b.ReportAllocs()
	s := NewText(io.Discard, trayHead())
	for b.Loop() {
		if err := s.Add(p); err != nil {
			b.Fatal(err)
		}
	}
	if err := s.Close(); err != nil {
		b.Fatal(err)
	}
}

// A place that one sentence names twice at one instant has one number: the hottest place and the point at the centre, and both ends
// of a food of one temperature.
func TestOnePlaceOneNumber(t *testing.T) {
	h := trayHead()
	for _, c := range []struct {
		name              string
		heats             bool
		cold, hot, centre float64
		want              []string
	}{
		{"hottest is the centre, cooling", false, 3, 4.12, 4.12, []string{"hottest at the end 4.2 °C (39.5 °F) (centre)", "; centre at the end 4.2 °C (39.5 °F)"}},
		{"coldest is the centre, heating", true, 71.96, 80, 71.96, []string{"coldest at the end 71.9 °C (161.5 °F) (centre)", "; centre at the end 71.9 °C (161.5 °F)"}},
		{"one temperature, cooling", false, 3.031, 3.035, 3.033, []string{"coldest at the end 3.1 °C (37.5 °F) (centre)", "hottest at the end 3.1 °C (37.5 °F) (centre)", "; centre at the end 3.1 °C (37.5 °F)"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := trayProduct(t, "Stew")
			s := &p.Samples
			span := 0
			if !c.heats {
				span = 1
			}
			i := sampleAt(s.TimesS, p.History.Spans[span].EndS)
			s.Coldest[i], s.Hottest[i], s.Points[0][i] = c.cold, c.hot, c.centre
			text := writeText(t, h, p)
			for _, w := range c.want {
				if !strings.Contains(text, w) {
					t.Errorf("%q is missing", w)
				}
			}
			x := &sheet{doc: &doc{head: h}, p: p, decides: p.decides()}
			cold, hot := x.extremes(i, &p.History.Spans[span], &told{head: h})
			if cold.where == hot.where && cold.words != hot.words {
				t.Errorf("%s: %s and %s", cold.where, cold.words, hot.words)
			}
		})
	}
}
