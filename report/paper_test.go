package report

import (
	"bytes"
	"compress/zlib"
	"fmt"
	"image/color"
	"io"
	"os/exec"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// written gives the file of a document.
func written(t *testing.T, p *paper) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := p.write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// Every entry of the cross-reference table stands where its object begins, and the trailer where the table does.
func TestCrossReferences(t *testing.T) {
	p := newPaper("A4")
	for i := range 3 {
		p.addPage()
		p.text(20, 30, "page (\\) é Щ", 10, i == 1, black)
		p.mark(fmt.Sprint("part ", i), min(i, 1), 20)
	}
	b := written(t, p)
	begin, err := strconv.Atoi(string(regexp.MustCompile(`startxref\n(\d+)\n%%EOF\n$`).FindSubmatch(b)[1]))
	if err != nil || !bytes.HasPrefix(b[begin:], []byte("xref\n")) {
		t.Fatalf("the trailer points at %d: %v", begin, err)
	}
	entries := regexp.MustCompile(`(?m)^(\d{10}) 00000 n $`).FindAllSubmatch(b[begin:], -1)
	if want := 2 + 2*fontObjects + 2*3 + 4 + 2; len(entries) != want { // pages, resources; fonts; 3 pages; outline; description, catalogue
		t.Errorf("%d objects, want %d", len(entries), want)
	}
	for i, e := range entries {
		at, _ := strconv.Atoi(string(e[1]))
		if want := fmt.Sprintf("%d 0 obj\n", i+1); !bytes.HasPrefix(b[at:], []byte(want)) {
			t.Errorf("object %d: at %d stands %q", i+1, at, b[at:at+10])
		}
	}
	for _, m := range regexp.MustCompile(`/Length (\d+) /Filter /FlateDecode[^>]*>>\nstream\n`).FindAllSubmatchIndex(b, -1) {
		n, _ := strconv.Atoi(string(b[m[2]:m[3]]))
		if !bytes.HasPrefix(b[m[1]+n:], []byte("\nendstream")) {
			t.Errorf("the stream at %d does not end after %d bytes", m[1], n)
		}
		z, err := zlib.NewReader(bytes.NewReader(b[m[1] : m[1]+n]))
		if err != nil {
			t.Fatal(err)
		}
		if _, err := io.ReadAll(z); err != nil {
			t.Errorf("the stream at %d: %v", m[1], err)
		}
	}
}

// The outline is a tree of links: parents, neighbours, first and last.
func TestOutline(t *testing.T) {
	p := newPaper("A4")
	p.addPage()
	for _, m := range []struct {
		words string
		level int
	}{{"a", 0}, {"a1", 1}, {"a2", 1}, {"b", 0}, {"b1", 1}} {
		p.mark(m.words, m.level, 50)
	}
	b := string(written(t, p))
	n := pagesAt + 2 // object of a
	for i, want := range []string{
		fmt.Sprintf("/Parent %d 0 R /Next %d 0 R /First %d 0 R /Last %d 0 R", n+5, n+3, n+1, n+2),
		fmt.Sprintf("/Parent %d 0 R /Next %d 0 R", n, n+2),
		fmt.Sprintf("/Parent %d 0 R /Prev %d 0 R", n, n+1),
		fmt.Sprintf("/Parent %d 0 R /Prev %d 0 R /First %d 0 R /Last %d 0 R", n+5, n, n+4, n+4),
		fmt.Sprintf("/Parent %d 0 R", n+3),
		fmt.Sprintf("<</Type /Outlines /First %d 0 R /Last %d 0 R", n, n+3),
	} {
		line := regexp.MustCompile(fmt.Sprintf(`(?m)^%d 0 obj\n(.*)>>$`, n+i)).FindStringSubmatch(b)
		if line == nil || !strings.HasSuffix(line[1], want) {
			t.Errorf("object %d: %q, want it to end in %q", n+i, line, want)
		}
	}
	if !strings.Contains(b, fmt.Sprintf("/Dest [%d 0 R /XYZ 0 700.16 null]", pagesAt)) { // (297 − 50) mm · 72/25.4
		t.Error("the outline does not lead to 50 mm below the top of the first page")
	}
}

// Nothing is set twice, and what a turn changes is undone after it.
func TestPaperState(t *testing.T) {
	p := newPaper("Letter")
	p.addPage()
	red := color.NRGBA{255, 0, 0, 255}
	p.line(pencil{pt: 1, color: black}, 0, 0, 25.4, 25.4)
	p.line(pencil{pt: 2.25, color: red, dash: []float64{3, 1}}, 0, 25.4, 25.4, 0)
	p.line(pencil{pt: 2.25, color: red, dash: []float64{3, 1}}, 0, 25.4, 25.4, 0)
	p.text(25.4, 25.4, "a", 9, false, black)
	p.turned(90, 25.4, 50.8, func() { p.text(25.4, 50.8, "b", 11, true, red) })
	p.text(25.4, 25.4, "c", 9, false, black)
	p.ground(red)
	p.box(25.4, 25.4, 12.7, 6.35)
	p.fill()
	want := "1 j\n0 792 m\n72 720 l\nS\n" +
		"1 0 0 RG\n2.25 w\n[3 1] 0 d\n0 720 m\n72 792 l\nS\n0 720 m\n72 792 l\nS\n" +
		"BT /F1 9 Tf 72 720 Td (\x00a) Tj ET\n" +
		"q 0 1 -1 0 720 576 cm\n1 0 0 rg\nBT /F2 11 Tf 72 648 Td (\x00b) Tj ET\nQ\n" +
		"BT 72 720 Td (\x00c) Tj ET\n" +
		"1 0 0 rg\n72 720 36 -18 re\nf\n"
	if got := string(p.leaf().b); got != want {
		t.Errorf("%q,\nwant\n%q", got, want)
	}
}

func TestAppendPt(t *testing.T) {
	for _, c := range []struct {
		v    float64
		want string
	}{{0, "0"}, {-0.001, "0"}, {12, "12"}, {0.5, "0.5"}, {-3.049, "-3.05"}, {7.004, "7"}, {841.89, "841.89"}, {-0.07, "-0.07"}} {
		if got := string(appendPt(nil, c.v)); got != c.want {
			t.Errorf("%g: %s, want %s", c.v, got, c.want)
		}
	}
}

// The font holds what is written: text in other blocks than the usual ones comes back from the PDF, in both weights, and pdffonts
// finds the font embedded as a part with a name of its own.
func TestLettering(t *testing.T) {
	p := newPaper("A4")
	p.addPage()
	p.text(20, 30, "Żurek, Щи, Σούπα, Phở – 74 °C", 10, false, black)
	p.text(20, 40, "Ünter Яблоко ☐", 10, true, black)
	got := pdfText(t, written(t, p))
	for _, w := range []string{"Żurek, Щи, Σούπα, Phở – 74 °C", "Ünter Яблоко ☐"} {
		if !strings.Contains(got, w) {
			t.Errorf("%q is missing in %q", w, got)
		}
	}
	var none, latin blocks
	latin.add("é")
	a, b := letteringOf(false, &none), letteringOf(false, &latin)
	if a.name == b.name || len(b.file) <= len(a.file) {
		t.Errorf("the font with accents is %s of %d bytes, without %s of %d", b.name, len(b.file), a.name, len(a.file))
	}
	if letteringOf(false, &none) != a {
		t.Error("the same font is cut out twice")
	}
	tool, err := exec.LookPath("pdffonts")
	if err != nil {
		t.Skip("pdffonts is missing")
	}
	cmd := exec.Command(tool, "-")
	cmd.Stdin = bytes.NewReader(written(t, p))
	out, err := cmd.CombinedOutput()
	if err != nil || len(regexp.MustCompile(`[A-Z]{6}\+DejaVuSans(-Bold)? +CID TrueType +Identity-H +yes yes yes`).FindAll(out, -1)) != 2 {
		t.Errorf("%v\n%s", err, out)
	}
}
