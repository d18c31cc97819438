package report

import (
	"bytes"
	"compress/zlib"
	"crypto/sha256"
	"io"
	"math"
	"strconv"
	"strings"
	"sync"

	"codeberg.org/go-fonts/dejavu/dejavusans"
	"codeberg.org/go-fonts/dejavu/dejavusansbold"
	"github.com/jung-kurt/gofpdf"
	"golang.org/x/image/font/sfnt"
)

// usual holds the characters beyond ASCII that the reports themselves use. Every document carries them, so that nearly all
// documents share one cut-out of the font: cutting it takes longer than all the rest of a report.
const usual = "°±²³·¼½×µπ–—‘’“”…•√≈≤≥−→☐✓✗\uFFFD"

// blocks are the runs of 128 characters that a document uses beyond the usual ones; each is cut out whole.
type blocks [65536 / 128]bool

// add notes what clean text needs.
func (b *blocks) add(s string) {
	for _, r := range s {
		if r > '~' && r < 65536 && !b[r/128] && !strings.ContainsRune(usual, r) {
			b[r/128] = true
		}
	}
}

// lettering is a font cut out for a document, in the form in which a PDF carries it.
type lettering struct {
	name   string // begins with six letters that are its own, as a PDF asks of a part of a font
	descr  string // its measures
	file   []byte // compressed
	bare   int    // bytes before compression
	glyphs []byte // compressed: of each code point its glyph, two bytes
	widths string // of each code point, thousandths of the type size
}

// letterings keeps what has been cut out, regular and bold; a plan needs one or two of each.
var letterings struct {
	sync.Mutex
	of [2]map[blocks]*lettering
}

// letteringOf gives the font for what a document uses.
func letteringOf(bold bool, used *blocks) *lettering {
	k, all := btoi(bold), &letterings
	all.Lock()
	defer all.Unlock()
	l := all.of[k][*used]
	if l == nil {
		l = cut(bold, used)
		if all.of[k] == nil || len(all.of[k]) > 50 {
			all.of[k] = map[blocks]*lettering{}
		}
		all.of[k][*used] = l
	}
	return l
}

// The measures of the two fonts in thousandths of the type size: tables hhea, head and OS/2 of DejaVu Sans 2.37.
var (
	descr = [2]string{
		"/Ascent 928 /Descent -236 /CapHeight 729 /Flags 4 /FontBBox [-1021 -463 1793 1232] /ItalicAngle 0 /StemV 87 /MissingWidth 600",
		"/Ascent 928 /Descent -236 /CapHeight 729 /Flags 262148 /FontBBox [-1069 -415 1975 1174] /ItalicAngle 0 /StemV 165 /MissingWidth 600"}
	letterName = [2]string{"DejaVuSans", "DejaVuSans-Bold"}
)

// cut cuts ASCII, the usual characters and whole blocks out of a font.
func cut(bold bool, used *blocks) *lettering {
	k := btoi(bold)
	w := &faces().width[k]
	var set []rune
	for r := ' '; r < 65536; r++ {
		if w[r] >= 0 && (r <= '~' || used[r/128] || strings.ContainsRune(usual, r)) {
			set = append(set, r)
		}
	}
	ttf := gofpdf.UTF8CutFont(bytes.Clone([2][]byte{dejavusans.TTF, dejavusansbold.TTF}[k]), string(set)) // it writes into what it is given
	f, err := sfnt.Parse(ttf)
	if err != nil {
		panic(err) // the font is compiled in
	}
	glyphs := make([]byte, 2*65536)
	var b sfnt.Buffer
	for _, r := range set {
		g, err := f.GlyphIndex(&b, r)
		if err != nil {
			panic(err)
		}
		glyphs[2*r], glyphs[2*r+1] = byte(g>>8), byte(g)
	}
	tag := sha256.Sum256([]byte(string(set)))
	for i := range 6 {
		tag[i] = 'A' + tag[i]%26
	}
	return &lettering{name: string(tag[:6]) + "+" + letterName[k], descr: descr[k], file: packed(ttf, zlib.BestCompression), bare: len(ttf),
		glyphs: packed(glyphs, zlib.BestCompression), widths: widthList(set, w)}
}

// widthList is the table of widths of a PDF: runs of code points, each with its widths.
func widthList(set []rune, w *[65536]int16) string {
	var b []byte
	for i, r := range set {
		if i == 0 || r != set[i-1]+1 {
			if i > 0 {
				b = append(b, "] "...)
			}
			b = append(strconv.AppendInt(b, int64(r), 10), " ["...)
		} else {
			b = append(b, ' ')
		}
		b = strconv.AppendInt(b, int64(w[r]), 10)
	}
	return string(append(b, ']'))
}

// packers are kept for the next document: a new one costs more than a page to compress.
var packers = [zlib.BestCompression + 1]sync.Pool{}

// packed compresses b. The result is the same whichever packer does it.
func packed(b []byte, level int) []byte {
	z, _ := packers[level].Get().(*zlib.Writer)
	if z == nil {
		z, _ = zlib.NewWriterLevel(io.Discard, level) // fails only for an unknown level
	}
	var out bytes.Buffer
	z.Reset(&out)
	_, _ = z.Write(b) // a buffer never fails
	_ = z.Close()
	packers[level].Put(z)
	return out.Bytes()
}

// appendPt writes a number with at most two decimals; in pt that is as fine as any printer.
func appendPt(b []byte, v float64) []byte {
	n := int64(math.Round(v * 100))
	if n < 0 {
		b, n = append(b, '-'), -n
	}
	b = strconv.AppendInt(b, n/100, 10)
	if r := n % 100; r > 0 {
		b = append(b, '.', byte('0'+r/10))
		if r%10 > 0 {
			b = append(b, byte('0'+r%10))
		}
	}
	return b
}
