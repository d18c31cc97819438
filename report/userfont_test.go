package report

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"testing"
	"time"

	"golang.org/x/image/font/gofont/goregular"
)

// table gives where a table of a font begins.
func table(ttf []byte, name string) int {
	for at := 12; ; at += 16 {
		if string(ttf[at:at+4]) == name {
			return int(binary.BigEndian.Uint32(ttf[at+8:]))
		}
	}
}

// lettered gives Go Regular with other characters, in rising order, for its glyphs 36, 37 and so on: A, B, … of its own order.
func lettered(rs ...rune) []byte {
	ttf := bytes.Clone(goregular.TTF)
	n := len(rs) + 1
	words := []int{0, 1, 3, 1, 0, 12, 4, 16 + 8*n, 0, 2 * n, 0, 0, 0}
	for _, r := range rs {
		words = append(words, int(r))
	}
	words = append(words, 0xffff, 0)
	for _, r := range rs {
		words = append(words, int(r))
	}
	words = append(words, 0xffff)
	for i, r := range rs {
		words = append(words, 36+i-int(r))
	}
	words = append(words, 1)
	at := table(ttf, "cmap")
	for i := range len(words) + n {
		w := 0
		if i < len(words) {
			w = words[i]
		}
		binary.BigEndian.PutUint16(ttf[at+2*i:], uint16(w))
	}
	return ttf
}

// use has a test write with a font.
func use(t *testing.T, ttf []byte) {
	t.Helper()
	f, err := ReadFont(ttf)
	if err != nil {
		t.Fatal(err)
	}
	UseFont(f)
	t.Cleanup(func() { UseFont(nil) })
}

// What DejaVu Sans lacks is written with the user's font, at its width, and the rest with DejaVu Sans; both come back from the PDF.
func TestUserFont(t *testing.T) {
	ttf := lettered('煮', '红')
	write := func() []byte {
		p := newPaper("A4", time.Unix(0, 0), "T", "C")
		p.addPage()
		p.text(20, 30, "Щи 红煮 end", 10, false, black)
		p.text(20, 40, "煮", 12, true, black)
		p.text(20, 50, "bold", 12, true, black)
		return written(t, p)
	}
	use(t, ttf)
	one, two := write(), write()
	if !bytes.Equal(one, two) {
		t.Error("the bytes differ from one writing to the next")
	}
	for _, want := range []string{"Щи 红煮 end", "end 煮 bold"} {
		if got := pdfText(t, one); !strings.Contains(got, want) {
			t.Errorf("%q is missing in %q", want, got)
		}
	}

	p := blank("Letter")
	p.addPage()
	p.text(25.4, 25.4, "a红煮b", 100, false, black)
	var at [3]float64 // of the three runs, pt: the advance widths in hmtx tell where the second and the third begin
	hmtx := table(ttf, "hmtx")
	at[0] = 72
	at[1] = at[0] + 1255./2048*100 // a in DejaVu Sans, from memory
	at[2] = at[1]
	for _, g := range []int{37, 36} {
		at[2] += float64(binary.BigEndian.Uint16(ttf[hmtx+4*g:])) / 2048 * 100
	}
	parts := strings.Split(content(t, p), "BT ")
	for i, want := range []struct {
		words string
		x     float64
	}{{"\x00a", at[0]}, {"\x7e\xa2\x71\x6e", at[1]}, {"\x00b", at[2]}} {
		found := false
		for _, s := range parts {
			if strings.Contains(s, "("+want.words+")") {
				found = near(s, want.x)
			}
		}
		if !found {
			t.Errorf("run %d does not begin at %.2f pt: %q", i, want.x, parts)
		}
	}
	f := chartFont(100, false)
	if w, _, _ := faces().measure.Box("a红煮b", f); math.Abs(float64(w)-widthMM("a红煮b", 100, false)/mmPerPt) > 0.3 {
		t.Errorf("a chart measures %.2f pt, the page %.2f", w, widthMM("a红煮b", 100, false)/mmPerPt)
	}
}

// near tells whether an operation begins with a place within 0.2 pt of x.
func near(s string, x float64) bool {
	for d := -20; d <= 20; d++ {
		if strings.HasPrefix(s, fmt.Sprintf("%.2f ", x+float64(d)/100)) {
			return true
		}
	}
	return false
}

// The user's font takes from the warning what it has, and nothing else; without it all is as before.
func TestUserFontWarning(t *testing.T) {
	const name = "红烧 🍖 soup"
	use(t, lettered('红'))
	if got := Unprinted(name); got != "U+70E7, U+1F356" {
		t.Error("with the font: ", got)
	}
	UseFont(nil)
	if got := Unprinted(name); got != "U+70E7, U+7EA2, U+1F356" {
		t.Error("without: ", got)
	}
}

// What cannot be taken is told in one sentence.
func TestFontRefused(t *testing.T) {
	begins := func(s string) []byte { return append([]byte(s), make([]byte, 40)...) }
	locked := lettered('红')
	binary.BigEndian.PutUint16(locked[table(locked, "OS/2")+8:], 2)
	for _, c := range []struct {
		name string
		ttf  []byte
		want string
	}{
		{"nothing", nil, "font no font"},
		{"words", []byte("Product,Process,Shape"), "font no font"},
		{"a collection", begins("ttcf"), "font collection"},
		{"PostScript outlines", begins("OTTO"), "font outlines"},
		{"for the web", begins("wOFF"), "font web"},
		{"may not be embedded", locked, "font locked"},
		{"only Latin letters", lettered('A', 'B'), "font nothing"},
		{"cut short", lettered('红')[:20_000], "font broken"},
	} {
		t.Run(c.name, func(t *testing.T) {
			want, _, _ := strings.Cut(words[c.want], "(%s)")
			if _, err := ReadFont(c.ttf); err == nil || !strings.HasPrefix(err.Error(), want) {
				t.Errorf("%v, want %q", err, want)
			}
		})
	}
}
