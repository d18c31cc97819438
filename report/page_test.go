package report

import (
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"slowpoint/model"
	"slowpoint/rules"
)

func TestClean(t *testing.T) {
	for _, c := range []struct{ name, in, want, missing string }{
		{"plain", "Tray 1, 60 mm", "Tray 1, 60 mm", ""},
		{"accents, Greek, Cyrillic, Vietnamese", "Crème Żurek Σούπα Щи Phở", "Crème Żurek Σούπα Щи Phở", ""},
		{"decomposed accent is composed", "e\u0301", "é", ""},
		{"control characters become blanks", "a\tb\x07c\u2028d", "a b c d", ""},
		{"invisible ones go", "soft\u00adhyphen\u200b\ufe0f", "softhyphen", ""},
		{"emoji", "soup 🍗", "soup \uFFFD", "U+1F357"},
		{"Chinese", "红", "\uFFFD", "U+7EA2"},
		{"broken bytes", "a\xff", "a\uFFFD", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			u := unseen{}
			if got := u.clean(c.in); got != c.want {
				t.Errorf("%q, want %q", got, c.want)
			}
			if got := u.list(); got != c.missing {
				t.Errorf("missing %q, want %q", got, c.missing)
			}
		})
	}
}

func TestUnseenListIsCapped(t *testing.T) {
	u := unseen{}
	for r := rune(0x4e00); r < 0x4e0d; r++ {
		u[r] = true
	}
	if got := u.list(); !strings.HasPrefix(got, "U+4E00, ") || !strings.HasSuffix(got, "U+4E09 and 3 more") {
		t.Error(got)
	}
}

func TestWrap(t *testing.T) {
	for _, c := range []struct {
		name, in string
		wide     float64 // mm
		want     []string
	}{
		{"nothing is one line", "", 50, []string{""}},
		{"short", "a b", 50, []string{"a b"}},
		{"a number keeps its unit", "reach 75 °C (167 °F) now", 23, []string{"reach 75 °C", "(167 °F) now"}},
		{"a word that is too long is cut", "WWWWWWWW", 12, []string{"WWW", "WWW", "WW"}},
		{"a width of nothing still ends", "ab", 0, []string{"a", "b"}},
		{"lines of its own", "a\nb", 50, []string{"a", "b"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := wrap(c.in, c.wide, small, false); !slices.Equal(got, c.want) {
				t.Errorf("%q, want %q", got, c.want)
			}
		})
	}
}

// The table of widths agrees with the advance widths of DejaVu Sans, in 2048ths of an em (from memory).
func TestWidths(t *testing.T) {
	for _, c := range []struct {
		r     rune
		bold  bool
		units float64
	}{{'A', false, 1401}, {'i', false, 569}, {'°', false, 1024}, {'A', true, 1585}} {
		want := c.units / 2048 * 100 * mmPerPt
		if got := widthMM(string(c.r), 100, c.bold); math.Abs(got-want) > 0.03 {
			t.Errorf("%c bold %v: %.3f mm, want %.3f", c.r, c.bold, got, want)
		}
	}
}

// Every kind of limit has words for what it asks.
func TestAsksOfEveryKind(t *testing.T) {
	if len(rules.Kinds) < 15 {
		t.Fatalf("only %d kinds", len(rules.Kinds))
	}
	for _, k := range rules.Kinds {
		if asked[k.Name] == nil {
			t.Errorf("%s: nothing says what it asks for", k.Name)
		}
	}
}

func TestAsks(t *testing.T) {
	cool := &model.Stage{Name: "cool"}
	for _, c := range []struct {
		name, kind string
		fahrenheit bool
		limit      rules.Limit
		want       string
	}{
		{"hold", "hold", false, rules.Limit{FromC: ptr(70.), TimeS: ptr(120.), Counting: rules.Continuous}, "at or above 70 °C (158 °F) for 2 min (without a break)"},
		{"hold above", "hold", false, rules.Limit{FromC: ptr(70.), TimeS: ptr(15.), Counting: rules.Total, Compare: rules.MoreThan, Typed: map[string]string{"Time": "15 s"}}, "above 70 °C (158 °F) for 15 s (total)"},
		{"hold once reached", "hold", false, rules.Limit{FromC: ptr(74.), TimeS: ptr(0.)}, "reach a temperature at or above 74 °C (165.2 °F) once"},
		{"the typed unit is first", "cool", false, rules.Limit{FromC: ptr(135/1.8 - 32/1.8), ToC: ptr(70/1.8 - 32/1.8), TimeS: ptr(7200.), Clock: rules.Clock{Crossing: true},
			Typed: map[string]string{"From": "135 °F", "To": "70 °F", "Time": "2 h"}}, "reach 70 °F (21.11 °C) and stay there, within at most 2 h from the first fall to 135 °F (57.22 °C)"},
		{"less than, from the end of a stage", "cool", true, rules.Limit{ToC: ptr(5.), TimeS: ptr(5400.), CompareTime: rules.LessThan, Clock: rules.Clock{End: cool}, Typed: map[string]string{"To": "5 °C", "Time": "90 min"}},
			"reach 5 °C (41 °F) and stay there, within less than 90 min from the end of cool"},
		{"z is a difference and never shifts", "lethality", false, rules.Limit{TimeS: ptr(120.), ReferenceC: ptr(70.), ZK: ptr(7.5)}, "at least 2 min of equivalent time at 70 °C (158 °F) with z = 7.5 °C (13.5 °F), counting at every temperature"},
		{"log reductions with a floor", "lethality", false, rules.Limit{Logs: ptr(6.5), DS: ptr(30.), ReferenceC: ptr(70.), ZK: ptr(10.), FromC: ptr(60.)},
			"at least 6.5 log reductions with D = 0.5 min at 70 °C (158 °F) with z = 10 °C (18 °F), counting only from 60 °C (140 °F) on"},
		{"never between", "outside", false, rules.Limit{FromC: ptr(8.), ToC: ptr(63.)}, "never between 8 °C (46.4 °F) and 63 °C (145.4 °F)"},
		{"stay with an excursion", "stay below", false, rules.Limit{ToC: ptr(8.), TimeS: ptr(900.)}, "stay at or below 8 °C (46.4 °F), except for at most 15 min"},
		{"rise", "falling", false, rules.Limit{AllowanceK: ptr(0.5)}, "never rise by more than 0.5 °C (0.9 °F)"},
		{"stated and blank", "stated", false, rules.Limit{}, "to be stated by the user; left blank"},
	} {
		t.Run(c.name, func(t *testing.T) {
			c.limit.Kind = &rules.Kind{Name: c.kind}
			if got := (&Head{Fahrenheit: c.fahrenheit}).asks(&c.limit); got != c.want {
				t.Errorf("%q, want %q", got, c.want)
			}
		})
	}
}

// A store of days is drawn shorter; hours of cooking and chilling are not.
func TestTimeAxis(t *testing.T) {
	history := func(hours ...float64) *model.History {
		h, at := &model.History{}, 0.0
		for _, d := range hours {
			h.Spans = append(h.Spans, model.Span{StartS: at, EndS: at + d*3600})
			at += d * 3600
		}
		return h
	}
	for _, c := range []struct {
		name   string
		hours  []float64
		broken []bool
		end    float64 // of the axis, in its unit
	}{
		{"two hours in minutes", []float64{1.25, 0.75}, []bool{false, false}, 120},
		{"cook, chill, two days, reheat", []float64{2, 3, 48, 1}, []bool{false, false, true, false}, 8}, // 2+3+1, and a third of it
		{"a long chill alone", []float64{14}, []bool{false}, 14},
		{"seven hours beside nine", []float64{5, 4, 7}, []bool{false, false, false}, 16},
	} {
		t.Run(c.name, func(t *testing.T) {
			h := history(c.hours...)
			a := newTimeAxis(h, stretch{0, -1})
			for i, p := range a.pieces {
				if p.broken != c.broken[i] {
					t.Errorf("step %d drawn shorter: %v, want %v", i+1, p.broken, c.broken[i])
				}
			}
			if math.Abs(a.end()-c.end) > 1e-9 || math.Abs(a.at(h.EndS())-c.end) > 1e-9 {
				t.Errorf("end at %g and %g, want %g", a.end(), a.at(h.EndS()), c.end)
			}
			last := -1.0
			for s := 0.0; s <= h.EndS(); s += 600 {
				if x := a.at(s); x <= last {
					t.Fatalf("at %g s the axis stands at %g after %g", s, x, last)
				} else {
					last = x
				}
			}
			for i := 1; i < len(a.ticks); i++ {
				if a.ticks[i].Value <= a.ticks[i-1].Value {
					t.Errorf("mark %s stands before mark %s", a.ticks[i].Label, a.ticks[i-1].Label)
				}
			}
		})
	}
}

// The worst stands first; what does not apply is last.
func TestWorstFirst(t *testing.T) {
	f := func(level string, v rules.Verdict, k float64) rules.Finding {
		return rules.Finding{Limit: &rules.Limit{Name: level}, Level: level, Verdict: v, MarginK: &k}
	}
	fs := []rules.Finding{f("must", rules.NotApplicable, -9), f("advice", rules.NotMet, -8), f("must", rules.Met, 5), f("must", rules.CannotTell, 0.1), f("must", rules.NotMet, -1), f("must", rules.NotMet, -3), f("must", rules.Met, 0.4)}
	var got []float64
	for _, f := range (&Product{Judgement: rules.Judgement{Findings: fs}}).worstFirst() {
		got = append(got, *f.MarginK)
	}
	if want := []float64{-3, -1, 0.1, 0.4, 5, -8, -9}; !slices.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

// A product that was typed in inches is shown in inches with mm in brackets: an inch is 25.4 mm.
func TestLengthsInInches(t *testing.T) {
	metric := &model.Product{}
	us := &model.Product{Inches: true}
	for _, c := range []struct{ name, got, want string }{
		{"mm", length(metric, 0.04445), "44.5 mm"},
		{"inches", length(us, 0.04445), "1.75 in (44.5 mm)"},
		{"alone", ownLength(us, 0.04445), "1.75 in"},
		{"mm alone", ownLength(metric, 0.04445), "44.5 mm"},
		{"a line with room", (&section{p: us}).sizeWords("thickness", 0.04445, 60), "thickness 1.75 in (44.5 mm)"},
		{"a short line", (&section{p: us}).sizeWords("thickness", 0.04445, 40), "1.75 in (44.5 mm)"},
		{"a very short line", (&section{p: us}).sizeWords("thickness", 0.04445, 15), "1.75 in"},
	} {
		if c.got != c.want {
			t.Errorf("%s: %q, want %q", c.name, c.got, c.want)
		}
	}
	h, p := roastHead(), roast(t, model.Brick, rules.NotMet)
	p.Product.Inches, p.Product.Size.ThicknessM = true, 0.05715
	for _, doc := range []struct{ name, text string }{{"PDF", pdfText(t, productPDF(t, h, p))}, {"text", writeText(t, h, p)}} {
		for _, w := range []string{"thickness 2.25 in (57.2 mm)", "length 7.874 in (200 mm)"} {
			if !strings.Contains(doc.text, w) {
				t.Errorf("%s: %q is missing", doc.name, w)
			}
		}
	}
	f, _ := h.profile(p, p.decides(), small, 84)
	if f.xName != "height above the underside, in" || math.Abs(f.x1-2.25) > 1e-9 || math.Abs(f.lines[0].x[48]-2.25) > 1e-9 || math.Abs(f.spots[0].x-(2.25/2+0.01/0.0254)) > 1e-9 {
		t.Errorf("profile: %q up to %g, line to %g, probe at %g", f.xName, f.x1, f.lines[0].x[48], f.spots[0].x)
	}
}

// What is written upright in a sketch changes no font of what follows: after the turn the page has the font of before again.
func TestFontAfterUprightWords(t *testing.T) {
	var fonts []string
	d := newDoc(roastHead(), "T")
	d.pdf.pdf.SetCompression(false)
	d.page()
	d.put(20, 20, "A heading", 12.5, true)
	s := section{d: d, p: &model.Product{}}
	s.measure(20, 30, 20, 60, "upright")
	s.measure(20, 70, 60, 70, "level")
	var saved []string
	now := ""
	for _, m := range regexp.MustCompile(`(?m)^q$|^Q$|/F\S+ [\d.]+ Tf|Tj ET`).FindAllString(content(t, d.pdf), -1) {
		switch {
		case m == "q":
			saved = append(saved, now)
		case m == "Q":
			now, saved = saved[len(saved)-1], saved[:len(saved)-1]
		case m == "Tj ET":
			fonts = append(fonts, now)
		default:
			now = m
		}
	}
	if len(fonts) != 3 || fonts[1] != fonts[2] || fonts[0] == fonts[1] {
		t.Errorf("the fonts of heading, upright and level words: %q", fonts)
	}
}

// A curve keeps its ends, its turns and everything that a printer could show; a straight piece keeps its ends alone.
func TestThinned(t *testing.T) {
	var straight, wave []vg.Point
	for i := range 901 {
		x := vg.Length(i) / 2
		straight = append(straight, vg.Point{X: x, Y: 3 - 2*x})
		wave = append(wave, vg.Point{X: x, Y: 80 * vg.Length(math.Sin(float64(x)/40))})
	}
	wave[500].Y += 0.5 // a spike that was measured
	if got := thinned(nil, straight); len(got) != 2 || got[0] != straight[0] || got[1] != straight[900] {
		t.Errorf("a straight line keeps %d points", len(got))
	}
	got := thinned(nil, wave)
	if len(got) > 300 || !slices.Contains(got, wave[0]) || !slices.Contains(got, wave[500]) || !slices.Contains(got, wave[900]) {
		t.Errorf("a wave keeps %d points", len(got))
	}
	k := 0
	for _, p := range wave { // the height of the line drawn, at each point
		for k < len(got)-2 && got[k+1].X < p.X {
			k++
		}
		a, b := got[k], got[k+1]
		if off := math.Abs(float64(a.Y + (b.Y-a.Y)*(p.X-a.X)/(b.X-a.X) - p.Y)); off > 0.06 { // 0.02 pt across a slope of up to 2
			t.Errorf("at %g the line is off by %g pt", p.X, off)
		}
	}
}

// A remark of the prediction becomes a sentence; the words of a verdict are never spelled another way.
func TestSentence(t *testing.T) {
	for _, c := range []struct{ name, in, want string }{
		{"nothing", "", ""}, {"a remark", "no limit judged", "No limit judged."}, {"a sentence", "Nothing was above 80 °C.", "Nothing was above 80 °C."},
		{"a remark with a full stop", "no limit judged: A did not apply.", "No limit judged: A did not apply."}, {"not of the alphabet", "×2", "×2."}, {"with an accent", "über", "Über."},
	} {
		if got := sentence(c.in); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}
