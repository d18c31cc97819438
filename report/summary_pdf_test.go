package report

import (
	"bytes"
	"fmt"
	"os"
	"regexp"
	"strings"
	"sync"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// manyRows are n rows of an overview with every verdict.
func manyRows(n int) []Row {
	rows := make([]Row, n)
	for i := range rows {
		v := []rules.Verdict{rules.Met, rules.NotMet, rules.CannotTell}[i%3]
		k := []float64{3.27, -1.44, 0.004}[i%3] + float64(i%40)/10
		rows[i] = Row{Product: fmt.Sprintf("Tray %04d", i+1), Process: "Cook and chill", Verdict: v, Why: "The stage ends too early.", Deciding: "Chill, first part",
			MarginK: &k, File: fmt.Sprintf("Tray_%04d.pdf", i+1), tight: k / 2}
	}
	return rows
}

func summaryPDF(t testing.TB, h *Head, rows []Row) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := WriteSummaryPDF(&b, h, rows); err != nil {
		t.Fatal(err)
	}
	keep(t, b.Bytes())
	return b.Bytes()
}

func TestSummaryPDF(t *testing.T) {
	fault := cell.Error{At: cell.Ref{Sheet: "Products", Row: 7, Col: 3}, Field: "Thickness", Typed: "-40", Msg: "a length must be more than 0", Hint: "type the thickness in mm"}
	for _, c := range []struct {
		name   string
		n      int
		change func(*Head)
		want   []string
		repeat int // how often the header of the list has to come at least
	}{
		{"three", 3, nil, []string{"3 products calculated: 1 met, 1 not met, 1 cannot be told.", "room 3.2 °C", "lacking 1.4 °C", "Tray_0001.pdf"}, 1},
		{"two thousand on Letter", 2000, func(h *Head) { h.Paper = "Letter" }, []string{"2000 products calculated: 667 met", "Tray 2000"}, 40},
		{"some not calculated", 1, func(h *Head) {
			h.Problems = append(h.Problems, fault)
			h.NotCalculated = []NotCalculated{{At: fault.At, Product: "Mash 🥔", Because: cell.Errors{fault}}}
		}, []string{"1 could not be calculated", "These products of the plan were not calculated", "Products!C7", "a length must be more than 0", "U+1F954"}, 1},
		{"none", 0, nil, []string{"No product could be calculated"}, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			h := roastHead()
			if c.change != nil {
				c.change(h)
			}
			pdf := summaryPDF(t, h, manyRows(c.n))
			if !bytes.Equal(pdf, summaryPDF(t, h, manyRows(c.n))) {
				t.Error("the same input gives other bytes")
			}
			text := pdfText(t, pdf)
			for _, w := range append(c.want, "Not for canning") {
				if !strings.Contains(text, w) {
					t.Errorf("%q is missing", w)
				}
			}
			if n := strings.Count(text, say("col deciding")); n < c.repeat {
				t.Errorf("the header comes %d times, at least %d wanted", n, c.repeat)
			}
		})
	}
}

// The worst stands first: not met, cannot tell, met, each by the least room.
func TestSummaryOrder(t *testing.T) {
	text := pdfText(t, summaryPDF(t, roastHead(), manyRows(6)))
	last := -1
	for _, name := range []string{"Tray 0002", "Tray 0005", "Tray 0003", "Tray 0006", "Tray 0001", "Tray 0004"} {
		at := strings.Index(text, name)
		if at <= last {
			t.Errorf("%s stands at %d, not after %d", name, at, last)
		}
		last = at
	}
}

func TestOnePDF(t *testing.T) {
	h := roastHead()
	products := []*Product{roast(t, model.Slab, rules.Met), roast(t, model.Sphere, rules.NotMet)}
	products[1].Product.Name = "Dumplings"
	var rows []Row
	for _, p := range products {
		rows = append(rows, p.Row())
	}
	var b bytes.Buffer
	err := OnePDF(&b, h, rows, func(write func(*Product) error) error {
		for _, p := range products {
			if err := write(p); err != nil {
				return err
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	keep(t, b.Bytes())
	text := pdfText(t, b.Bytes())
	for _, w := range []string{"Overview of the plan", "Report for the audit: Pork loin, rolled", "Report for the audit: Dumplings", "page 1 of"} {
		if !strings.Contains(text, w) {
			t.Errorf("%q is missing", w)
		}
	}
	failing := fmt.Errorf("no more")
	if err := OnePDF(&b, h, rows, func(func(*Product) error) error { return failing }); err != failing {
		t.Errorf("error %v, want %v", err, failing)
	}
}

// Several documents may be written at once, and come out as one by one.
func TestParallelPDFs(t *testing.T) {
	h := roastHead()
	want := productPDF(t, h, roast(t, model.Slab, rules.Met))
	var wg sync.WaitGroup
	got := make([][]byte, 4)
	for i := range got {
		p := roast(t, model.Slab, rules.Met)
		wg.Go(func() {
			var b bytes.Buffer
			if err := WriteProductPDF(&b, h, p); err == nil {
				got[i] = b.Bytes()
			}
		})
	}
	wg.Wait()
	for i := range got {
		if !bytes.Equal(got[i], want) {
			t.Errorf("document %d is not the same", i)
		}
	}
}

// The caution that every document prints is the one that SAFETY.md shows.
func TestCautionTextIsInSafety(t *testing.T) {
	safety, err := os.ReadFile("../SAFETY.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, found := strings.Cut(string(safety), "<!-- caution text: begin -->\n")
	text, _, ended := strings.Cut(rest, "<!-- caution text: end -->")
	if !found || !ended {
		t.Fatal("SAFETY.md lacks a mark of the caution text")
	}
	if strings.TrimSpace(text) != strings.TrimSpace(cautionText) {
		t.Errorf("SAFETY.md says\n%s\nreport/caution.txt says\n%s", text, cautionText)
	}
}

// The title of the notes stands with the first of them, wherever the page ends.
func TestNotesStayWithTheirTitle(t *testing.T) {
	for n := 1; n < 40; n++ {
		h := roastHead()
		h.Problems[0].Msg = strings.Repeat("a long remark ", 20)
		pages, _, _ := pageBoxes(t, summaryPDF(t, h, manyRows(n)))
		for i, boxes := range pages {
			words := ""
			for _, b := range boxes {
				words += b.word + " "
			}
			if strings.Contains(words, say("summary problems")) && !strings.Contains(words, "a long remark") {
				t.Fatalf("%d products, page %d: the title stands alone", n, i+1)
			}
		}
	}
}

// One of a kind is not several.
func TestOneIsNotSeveral(t *testing.T) {
	h := roastHead()
	p := roast(t, model.Slab, rules.Met)
	p.Steps, p.Further = p.Steps[:1], nil
	var err error
	if p.History, err = model.Solve(p.Product, p.Steps, model.Options{}); err != nil {
		t.Fatal(err)
	}
	p.Samples, p.Judgement = p.History.Sample(60), rules.Judgement{Verdict: rules.Met, Findings: p.Judgement.Findings[:1]}
	p.Judgement.Findings = append(p.Judgement.Findings, rules.Finding{Limit: p.Judgement.Findings[0].Limit, Level: "must", Verdict: rules.NotApplicable})
	for len(h.Problems) < 201 {
		h.Problems = append(h.Problems, h.Problems[0])
	}
	docs := map[string]string{"product": pdfText(t, productPDF(t, h, p)), "overview": pdfText(t, summaryPDF(t, h, manyRows(1))), "text": writeText(t, h, p)}
	for _, c := range []struct{ doc, want string }{{"product", ": 1 step, 1 h 30 min"}, {"product", "1 does not apply"}, {"text", "1 does not apply"}, {"overview", "1 product calculated:"},
		{"overview", "1 further note is in"}} {
		if !strings.Contains(docs[c.doc], c.want) {
			t.Errorf("%s: %q is missing", c.doc, c.want)
		}
	}
	several := regexp.MustCompile(`\b1 (products|steps|problems|cases|notes|findings|warnings|do) `)
	for name, text := range docs {
		if m := several.FindString(text); m != "" {
			t.Errorf("%s: %q", name, m)
		}
	}
}

// No text of the documents judges a food or a process.
func TestWordsDoNotJudge(t *testing.T) {
	bad := regexp.MustCompile(`(?i)\b(validated|approved|certified|guarantee[ds]?|compliant|compliance|safe|safely|release[ds]?|discard(ed)?|pass(es|ed)?|passing)\b`)
	if !bad.MatchString("the product is safe") {
		t.Fatal("the pattern finds nothing")
	}
	for key, text := range words {
		if m := bad.FindString(text); m != "" {
			t.Errorf("%s: %q is in %q", key, m, text)
		}
	}
}

// Every key that the code asks for is in the table, with as many blanks as it is given values, and no text is idle.
func TestWordsAreComplete(t *testing.T) {
	files, err := os.ReadDir(".")
	if err != nil {
		t.Fatal(err)
	}
	source := ""
	for _, f := range files {
		if strings.HasSuffix(f.Name(), ".go") && !strings.HasSuffix(f.Name(), "_test.go") && f.Name() != "words.go" {
			b, err := os.ReadFile(f.Name())
			if err != nil {
				t.Fatal(err)
			}
			source += string(b)
		}
	}
	for _, m := range regexp.MustCompile(`counted\([^\n]*?, "([^"]+)"\)`).FindAllStringSubmatch(source, -1) {
		if many, one := words[m[1]], words[m[1]+" one"]; !strings.HasPrefix(many, "%d ") || !strings.HasPrefix(one, "1 ") {
			t.Errorf("%q is counted, and its texts for several and for one are %q and %q", m[1], many, one)
		}
	}
	asked := regexp.MustCompile(`say\("([^"]+)"[,)]`).FindAllStringSubmatch(source, -1)
	if len(asked) < 100 {
		t.Fatalf("only %d texts found", len(asked))
	}
	for _, m := range asked {
		if _, known := words[m[1]]; !known {
			t.Errorf("%q is not in the table of words", m[1])
		}
	}
	for key := range words {
		plain := !strings.HasPrefix(key, "caution ") && !strings.HasPrefix(key, "change ") && !strings.HasPrefix(key, "deviation ") &&
			!strings.HasPrefix(key, "word ") && !strings.HasPrefix(key, "means ")
		for _, run := range []string{rules.LowConductivity, rules.WellMixed} { // "line " + the name of the run
			stem := strings.TrimSuffix(key, " "+run)
			plain = plain && (stem == key || !strings.Contains(source, `"`+stem+`"`) && !strings.Contains(source, `"`+stem+` "`))
		}
		if plain && !strings.Contains(source, `"`+key+`"`) && !strings.Contains(source, `"`+strings.TrimSuffix(key, " one")+`"`) {
			t.Errorf("nobody asks for %q", key)
		}
	}
	for _, tr := range triggers {
		if _, known := words["caution "+tr.key]; !known {
			t.Errorf("the caution %q has no text", tr.key)
		}
	}
}
