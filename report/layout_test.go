package report

import (
	"bytes"
	"cmp"
	"math"
	"os/exec"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/rules"
)

// box is a word on a page, pt from the upper left corner.
type box struct {
	x0, y0, x1, y1 float64
	word           string
}

// pageBoxes are the words of a PDF page by page, and the size of the page in pt.
func pageBoxes(t *testing.T, pdf []byte) (pages [][]box, wide, tall float64) {
	t.Helper()
	tool := outside(t, "pdftotext")
	cmd := exec.Command(tool, "-bbox", "-", "-")
	cmd.Stdin = bytes.NewReader(pdf)
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	number := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	size := regexp.MustCompile(`width="([\d.]+)" height="([\d.]+)"`)
	word := regexp.MustCompile(`<word xMin="([\d.-]+)" yMin="([\d.-]+)" xMax="([\d.-]+)" yMax="([\d.-]+)">(.*)</word>`)
	for i, part := range strings.Split(string(out), "<page ")[1:] {
		if i == 0 {
			m := size.FindStringSubmatch(part)
			wide, tall = number(m[1]), number(m[2])
		}
		var boxes []box
		for _, m := range word.FindAllStringSubmatch(part, -1) {
			boxes = append(boxes, box{number(m[1]), number(m[2]), number(m[3]), number(m[4]), m[5]})
		}
		pages = append(pages, boxes)
	}
	return pages, wide, tall
}

// No word leaves the margins of 12 mm, no two words lie on each other, and no page is empty.
func TestLayout(t *testing.T) {
	const margin = 12 / mmPerPt
	for _, c := range []struct {
		name  string
		shape *model.Shape
		paper string
	}{{"slab on A4", model.Slab, "A4"}, {"brick on Letter", model.Brick, "Letter"}, {"sphere on Letter", model.Sphere, "Letter"},
		{"short cylinder on A4", model.ShortCylinder, "A4"}, {"stirred on A4", model.Stirred, "A4"}} {
		t.Run(c.name, func(t *testing.T) {
			h, p := roastHead(), roast(t, c.shape, rules.NotMet)
			h.Paper = c.paper
			for len(p.Readings) < 90 {
				p.Readings = append(p.Readings, p.Readings[:3]...)
			}
			pages, wide, tall := pageBoxes(t, productPDF(t, h, p))
			if wide > 596 && c.paper == "A4" || tall > 793 && c.paper == "Letter" {
				t.Errorf("the page is %g by %g pt", wide, tall)
			}
			for n, boxes := range pages {
				if len(boxes) < 40 {
					t.Errorf("page %d holds only %d words", n+1, len(boxes))
				}
				for i, a := range boxes {
					if a.x0 < margin || a.y0 < margin || a.x1 > wide-margin || a.y1 > tall-margin {
						t.Errorf("page %d: %q leaves the margins", n+1, a.word)
					}
					for _, b := range boxes[i+1:] {
						if min(a.x1, b.x1)-max(a.x0, b.x0) > 1 && min(a.y1, b.y1)-max(a.y0, b.y0) > 3.5 {
							t.Errorf("page %d: %q lies on %q", n+1, a.word, b.word)
						}
					}
				}
			}
		})
	}
}

// A4 and Letter break at the same lines: every word stands as far from the top on both.
func TestPaperChangesNoPage(t *testing.T) {
	var pages [2][][]box
	for i, paper := range []string{"A4", "Letter"} {
		h := roastHead()
		h.Paper = paper
		pages[i], _, _ = pageBoxes(t, productPDF(t, h, roast(t, model.Slab, rules.Met)))
		for _, boxes := range pages[i] {
			slices.SortFunc(boxes, func(a, b box) int {
				return cmp.Or(strings.Compare(a.word, b.word), cmp.Compare(math.Round(a.y0), math.Round(b.y0)), cmp.Compare(a.x0, b.x0))
			})
		}
	}
	if len(pages[0]) != len(pages[1]) {
		t.Fatalf("%d pages on A4, %d on Letter", len(pages[0]), len(pages[1]))
	}
	for n, boxes := range pages[0] {
		other := pages[1][n]
		if len(boxes) != len(other) {
			t.Fatalf("page %d: %d words on A4, %d on Letter", n+1, len(boxes), len(other))
		}
		for i, a := range boxes {
			if b := other[i]; a.word != b.word || math.Abs(a.y0-b.y0) > 1 {
				t.Errorf("page %d: %q at %.1f pt on A4, %q at %.1f pt on Letter", n+1, a.word, a.y0, b.word, b.y0)
			}
		}
	}
}
