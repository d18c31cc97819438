package report

import (
	"fmt"
	"sort"
	"strings"
	"sync"
	"unicode"

	"codeberg.org/go-fonts/dejavu/dejavusans"
	"codeberg.org/go-fonts/dejavu/dejavusansbold"
	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	fix "golang.org/x/image/math/fixed"
	"golang.org/x/text/unicode/norm"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
)

// family is the name of the font in the documents: DejaVu Sans, Latin, Greek, Cyrillic and Vietnamese.
const family = "dejavu"

// typefaces is what all documents share and nobody changes: the width of each character and the fonts that charts measure with.
type typefaces struct {
	width   [2][65536]int16 // thousandths of the type size, regular and bold; -1: no glyph
	measure text.Handler
	other   []byte       // a font of the user's for what DejaVu Sans lacks; nil: none
	by      *[65536]bool // the characters that it prints; nil: none
}

// faces are the fonts that the documents are written with: DejaVu Sans, alone or with the font in use.
func faces() *typefaces {
	if f := inUse.Load(); f != nil {
		return f.faces
	}
	return dejavu()
}

// dejavu reads the fonts once.
var dejavu = sync.OnceValue(func() *typefaces {
	t := &typefaces{}
	var all font.Collection
	for i, ttf := range [][]byte{dejavusans.TTF, dejavusansbold.TTF} {
		f, err := opentype.Parse(ttf)
		if err != nil {
			panic(err) // the font is compiled in
		}
		widths(&t.width[i], f)
		all = append(all, font.Face{Font: chartFont(0, i == 1), Face: f})
	}
	t.measure = &measure{Plain: text.Plain{Fonts: font.NewCache(all)}, faces: t, known: map[boxed]box3{}}
	return t
})

// measure keeps the sizes of words, for the charts of a plan have nearly the same ones.
type measure struct {
	text.Plain
	faces *typefaces
	lock  sync.Mutex
	known map[boxed]box3
}

type boxed struct {
	words string
	font  font.Font
}

// box3 is a width, a height and a depth.
type box3 [3]font.Length

// Box is the size of one line.
func (m *measure) Box(words string, f font.Font) (width, height, depth font.Length) {
	m.lock.Lock()
	b, ok := m.known[boxed{words, f}]
	m.lock.Unlock()
	if !ok {
		_, b[1], b[2] = m.Plain.Box("", f)
		m.faces.runs(words, func(run string, other bool) {
			if other {
				b[0] += f.Size * font.Length(thousandths(run, &m.faces.width[0])) / 1000
			} else {
				w, _, _ := m.Plain.Box(run, f)
				b[0] += w
			}
		})
		m.lock.Lock()
		if len(m.known) > 5000 { // of plans without end
			clear(m.known)
		}
		m.known[boxed{words, f}] = b
		m.lock.Unlock()
	}
	return b[0], b[1], b[2]
}

// widths fills the table of one font.
func widths(table *[65536]int16, f *sfnt.Font) {
	var b sfnt.Buffer
	em := fix.I(1000)
	for r := range table {
		table[r] = -1
		g, err := f.GlyphIndex(&b, rune(r))
		if err != nil || g == 0 {
			continue
		}
		if a, err := f.GlyphAdvance(&b, g, em, xfont.HintingNone); err == nil {
			table[r] = int16(a.Round())
		}
	}
}

// chartFont is the font of the charts at a size in pt.
func chartFont(size font.Length, bold bool) font.Font {
	f := font.Font{Typeface: "DejaVu", Variant: "Sans", Size: size}
	if bold {
		f.Weight = xfont.WeightBold
	}
	return f
}

// widthMM is the width of clean text in mm at a size in pt.
func widthMM(s string, size float64, bold bool) float64 {
	return toMM(thousandths(s, &faces().width[btoi(bold)]), size)
}

// thousandths is the width of clean text in thousandths of the type size.
func thousandths(s string, w *[65536]int16) int {
	sum := 0
	for _, r := range s {
		if r < 65536 && w[r] > 0 {
			sum += int(w[r])
		}
	}
	return sum
}

// toMM turns thousandths of a type size in pt into mm.
func toMM(n int, size float64) float64 { return float64(n) / 1000 * size * mmPerPt }

// wrap breaks clean text into lines no wider than width mm; there is at least one line. A word that is too long is cut.
func wrap(s string, width, size float64, bold bool) []string {
	var lines []string
	w := &faces().width[btoi(bold)]
	for par := range strings.SplitSeq(s, "\n") {
		if tidy(par) && toMM(thousandths(par, w), size) <= width { // as most are
			lines = append(lines, par)
		} else {
			lines = wrapOne(lines, par, width, size, bold)
		}
	}
	return lines
}

// wrapOne appends the lines of a paragraph.
func wrapOne(lines []string, par string, width, size float64, bold bool) []string {
	w, before := &faces().width[btoi(bold)], len(lines)
	var line []string // the words of the line so far
	long := 0         // and their width, thousandths
	end := func() {
		if len(line) > 0 {
			lines, line = append(lines, strings.Join(line, " ")), line[:0]
		}
	}
	for _, word := range tokens(par) {
		n := thousandths(word, w)
		if len(line) > 0 {
			if toMM(long+int(w[' '])+n, size) <= width {
				line, long = append(line, word), long+int(w[' '])+n
				continue
			}
			end()
		}
		for toMM(n, size) > width {
			k := fitting(word, width, size, bold)
			lines, word = append(lines, word[:k]), word[k:]
			n = thousandths(word, w)
		}
		if word != "" {
			line, long = append(line, word), n
		}
	}
	if end(); len(lines) == before {
		lines = append(lines, "")
	}
	return lines
}

// tidy tells whether the words of a text stand one blank apart.
func tidy(s string) bool {
	before := ' '
	for _, r := range s {
		if r == ' ' && before == ' ' || r != ' ' && unicode.IsSpace(r) {
			return false
		}
		before = r
	}
	return s == "" || before != ' '
}

// units stay on the line of their number.
var units = map[string]bool{"°C": true, "°F": true, "min": true, "h": true, "s": true, "mm": true, "K": true, "%": true, "L": true, "m/s": true, "m²": true,
	"log10": true, "W/(m²·K)": true, "W/(m·K)": true, "J/(kg·K)": true, "kg/m³": true, "m²·K/W": true}

// tokens are the words of a paragraph, each number with its unit.
func tokens(s string) []string {
	words := strings.Fields(s)
	out := words[:0]
	for i, w := range words {
		if i > 0 {
			last := out[len(out)-1]
			if c := last[len(last)-1]; c >= '0' && c <= '9' && units[strings.TrimRight(w, ".,;:)")] {
				out[len(out)-1] = last + " " + w
				continue
			}
		}
		out = append(out, w)
	}
	return out
}

// fitting is how many bytes of a word fit; at least one character. A word is broken behind a _, - or / if there is one, so that
// no file name is broken within its extension.
func fitting(word string, width, size float64, bold bool) int {
	n := 0
	for i, r := range word {
		end := i + len(string(r))
		if i > 0 && widthMM(word[:end], size, bold) > width {
			break
		}
		n = end
	}
	if n < len(word) {
		if k := strings.LastIndexAny(word[:n], "_-/"); k > 0 {
			return k + 1
		}
	}
	return n
}

// shorten cuts clean text to width mm and ends it with an ellipsis if something was lost.
func shorten(s string, width, size float64, bold bool) string {
	if widthMM(s, size, bold) <= width {
		return s
	}
	r := []rune(s)
	for len(r) > 0 && widthMM(string(r)+"…", size, bold) > width {
		r = r[:len(r)-1]
	}
	return strings.TrimSpace(string(r)) + "…"
}

// capped cuts clean text to a number of lines of a width, mm, and ends it with an ellipsis if something was lost.
func capped(s string, width, size float64, lines int) string {
	all := wrap(s, width, size, false)
	if len(all) <= lines {
		return s
	}
	return strings.Join(append(all[:lines-1:lines-1], shorten(strings.Join(all[lines-1:], " "), width, size, false)), " ")
}

// unseen collects characters that no font in use can show.
type unseen map[rune]bool

// printable tells of most texts that clean has nothing to do: of those in ASCII, in Latin letters below U+0300, where no character
// joins the one before it, and in dashes, quotes and signs of comparison.
func (t *typefaces) printable(s string) bool {
	for _, r := range s {
		switch {
		case r >= ' ' && r <= '~':
		case (r > 0xa0 && r < 0x300 && r != 0xad || r >= 0x2010 && r <= 0x2026 || r == '≤' || r == '≥' || r == '−') && t.width[0][r] >= 0 && t.width[1][r] >= 0:
		default:
			return false
		}
	}
	return true
}

// clean makes any text printable: composed (NFC), without control characters, and with U+FFFD for what the fonts lack.
func (u unseen) clean(s string) string {
	w := faces()
	if w.printable(s) {
		return s
	}
	var b strings.Builder
	for _, r := range norm.NFC.String(strings.ToValidUTF8(s, "\uFFFD")) {
		switch {
		case r == '\n':
			b.WriteRune(r)
		case r == '\u00ad', r == '\u200b', r == '\ufeff', r >= 0xfe00 && r <= 0xfe0f: // invisible
		case r < ' ' || r >= 0x7f && r < 0xa0 || r == '\u2028' || r == '\u2029':
			b.WriteByte(' ')
		case r > 0xffff || w.width[0][r] < 0 || w.width[1][r] < 0:
			u[r] = true
			b.WriteRune('\uFFFD')
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}

// list names the characters by code point, at most ten.
func (u unseen) list() string {
	var rs []rune
	for r := range u {
		rs = append(rs, r)
	}
	sort.Slice(rs, func(i, j int) bool { return rs[i] < rs[j] })
	var s []string
	for i, r := range rs {
		if i == 10 {
			return strings.Join(s, ", ") + say("glyph more", len(rs)-10)
		}
		s = append(s, fmt.Sprintf("U+%04X", r))
	}
	return strings.Join(s, ", ")
}

// flat is text fit for a bookmark or a title, which no font limits: composed, one line, nothing above U+FFFF.
func flat(s string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r < ' ' || r >= 0x7f && r < 0xa0:
			return ' '
		case r > 0xffff:
			return '\uFFFD'
		}
		return r
	}, norm.NFC.String(strings.ToValidUTF8(s, "\uFFFD")))
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}
