package report

import (
	"bytes"
	"fmt"
	"image/color"
	"os/exec"
	"regexp"
	"strings"
	"testing"
	"time"
)

// blank is a document for a test, not compressed.
func blank(size string) *paper {
	p := newPaper(size, time.Unix(0, 0), "T", "C")
	p.pdf.SetCompression(false)
	return p
}

// written gives the file of a document.
func written(t *testing.T, p *paper) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := p.write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// content gives what is drawn on the only page, with the fonts called F1, F2, … as they come.
func content(t *testing.T, p *paper) string {
	t.Helper()
	m := regexp.MustCompile(`(?s)stream\n(.*?)\nendstream`).FindSubmatch(written(t, p))
	if m == nil {
		t.Fatal("there is no page")
	}
	names := map[string]string{}
	return regexp.MustCompile(`/F[0-9a-f]{40}`).ReplaceAllStringFunc(string(m[1]), func(s string) string {
		if names[s] == "" {
			names[s] = fmt.Sprint("/F", len(names)+1)
		}
		return names[s]
	})
}

// Nothing is set twice, and what a turn changes is undone after it.
func TestPaperState(t *testing.T) {
	p := blank("Letter")
	p.addPage()
	red := color.NRGBA{255, 0, 0, 255}
	p.line(pencil{pt: 1, color: black}, 0, 0, 25.4, 25.4)
	p.line(pencil{pt: 2.25, color: red, dash: []float64{3, 1}}, 0, 25.4, 25.4, 0)
	p.line(pencil{pt: 2.25, color: red, dash: []float64{3, 1}}, 0, 25.4, 25.4, 0)
	p.text(25.4, 25.4, "a", 9, false, black)
	p.turned(90, 25.4, 50.8, func() { p.text(25.4, 50.8, "b", 11, true, red) })
	p.text(25.4, 25.4, "c", 9, false, black)
	p.text(25.4, 25.4, "d", 9, false, black)
	p.box(red, 25.4, 25.4, 12.7, 6.35)
	want := "BT /F1 9.00 Tf ET\n0.000 g\nBT 72.00 720.00 Td (\x00a) Tj ET\n" +
		"q\n0.00000 1.00000 -1.00000 0.00000 720.00000 576.00000 cm\nBT /F2 11.00 Tf ET\n1.000 0.000 0.000 rg\nBT 72.00 648.00 Td (\x00b) Tj ET\nQ\n" +
		"BT /F1 9.00 Tf ET\nBT 72.00 720.00 Td (\x00c) Tj ET\nBT 72.00 720.00 Td (\x00d) Tj ET\n" +
		"1.000 0.000 0.000 rg\n72.00 720.00 36.00 -18.00 re f\n"
	lines := "0.000 G\n1.00 w\n[] 0.00 d\n0.00 792.00 m 72.00 720.00 l S\n" +
		"1.000 0.000 0.000 RG\n2.25 w\n[3.00 1.00] 0.00 d\n0.00 720.00 m 72.00 792.00 l S\n0.00 720.00 m 72.00 792.00 l S\n"
	if got := content(t, p); !strings.HasSuffix(got, lines+want) {
		t.Errorf("%q,\nwant at its end\n%q", got, lines+want)
	}
}

// Going back to a page and beginning one sets everything anew: the page does not know what another had.
func TestPaperAcrossPages(t *testing.T) {
	p := blank("A4")
	draw := func() {
		p.line(pencil{pt: 1.5, color: blue}, 20, 20, 30, 20)
		p.text(20, 30, "a", 9, true, blue)
	}
	p.addPage()
	draw()
	p.addPage()
	p.line(pencil{pt: 0.5, color: black, dash: []float64{2, 1}}, 20, 20, 30, 20)
	p.text(20, 30, "b", 11, false, black)
	p.turnTo(1)
	draw()
	p.addPage()
	draw()
	got := string(written(t, p))
	for _, part := range []string{"0.000 0.447 0.698 RG\n1.50 w\n[] 0.00 d\n", "9.00 Tf ET\n0.000 0.447 0.698 rg\n"} {
		if n := strings.Count(got, part); n != 3 {
			t.Errorf("%q stands %d times, want 3", part, n)
		}
	}
	if p.page() != 3 || p.pages() != 3 {
		t.Errorf("page %d of %d, want 3 of 3", p.page(), p.pages())
	}
}

// An arc goes on from where the path stands or by a line to its beginning, counter-clockwise.
func TestArc(t *testing.T) {
	p := blank("Letter")
	p.addPage()
	p.moveTo(25.4, 50.8)
	p.arcTo(50.8, 50.8, 12.7, 0, 3.14159265358979)
	p.stroke()
	got := content(t, p)
	for _, want := range []string{"72.00 648.00 m\n180.00 648.00 l\n", " 144.00000 684.00000 c\n", " 108.00000 648.00000 c\nS\n"} {
		if !strings.Contains(got, want) {
			t.Errorf("%q is missing in %q", want, got)
		}
	}
}

// The fonts hold what is written: text in other blocks than the usual ones comes back from the PDF, in both weights, and pdffonts
// finds each font embedded.
func TestLettering(t *testing.T) {
	p := newPaper("A4", time.Unix(0, 0), "T", "C")
	p.addPage()
	words := []string{"Crème, żurek at 74 °C – done", "Żurek, Щи, Σούπα, Phở", "Żurek again", "Ünter Яблоко ☐"}
	for i, w := range words {
		p.text(20, 30+10*float64(i), w, 10, i == 3, black)
	}
	pdf := written(t, p)
	got := pdfText(t, pdf)
	for _, w := range words {
		if !strings.Contains(got, w) {
			t.Errorf("%q is missing in %q", w, got)
		}
	}
	for k, want := range []int{2, 1} { // the one for Latin letters, and the one that holds the other blocks too, at once or later
		if p.fonts[k].n != want {
			t.Errorf("weight %d: %d fonts, want %d", k, p.fonts[k].n, want)
		}
	}
	cmd := exec.Command(outside(t, "pdffonts"), "-")
	cmd.Stdin = bytes.NewReader(pdf)
	out, err := cmd.CombinedOutput()
	if n := len(regexp.MustCompile(`utf8dejavu\S* +CID TrueType +Identity-H +yes no +yes`).FindAll(out, -1)); err != nil || n != 3 {
		t.Errorf("%d fonts: %v\n%s", n, err, out)
	}
}

// A cut-out is made once for each set of blocks, and nobody gets another's bytes, for the library writes into them.
func TestCutOut(t *testing.T) {
	var none, cyrillic blocks
	if none.add("é ż – 74 °C ☐") {
		t.Error("Latin text needs more than what is always there")
	}
	if !cyrillic.add("щ") || cyrillic.add("Щ") {
		t.Error("the block of щ is not added exactly once")
	}
	a, b := cutOut(false, none), cutOut(false, cyrillic)
	if len(b) <= len(a) {
		t.Errorf("the font with щ has %d bytes, without %d", len(b), len(a))
	}
	kept := cutOuts.of[0][none]
	again := cutOut(false, none)
	if !bytes.Equal(a, again) || &a[0] == &again[0] || &kept[0] != &cutOuts.of[0][none][0] {
		t.Error("the font is cut out twice, or shared by two documents")
	}
}
