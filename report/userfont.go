package report

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"sync/atomic"

	"github.com/jung-kurt/gofpdf"
	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	fix "golang.org/x/image/math/fixed"
)

// Font is a TrueType font of the user's that prints what DejaVu Sans lacks.
type Font struct{ faces *typefaces }

// inUse is the font of the run; nil: none. Some fifty places measure text, and a run has one font.
var inUse atomic.Pointer[Font]

// UseFont has the PDFs written from now on print with a font what DejaVu Sans lacks; nil: with DejaVu Sans alone. Call it while no
// PDF is being written.
func UseFont(f *Font) { inUse.Store(f) }

// runs cuts clean text into runs of one font, in order; other tells those of the user's font.
func (t *typefaces) runs(s string, each func(run string, other bool)) {
	if t.by != nil {
		begin, before := 0, false
		for i, r := range s {
			if other := r < 65536 && t.by[r]; other != before {
				if i > begin {
					each(s[begin:i], before)
				}
				begin, before = i, other
			}
		}
		if begin > 0 || before {
			each(s[begin:], before)
			return
		}
	}
	each(s, false)
}

// ReadFont reads a TrueType font. Its error says what the file is, if it is something else, or why the PDF cannot take it.
func ReadFont(ttf []byte) (*Font, error) {
	if len(ttf) < 12 {
		return nil, errors.New(say("font no font"))
	}
	switch string(ttf[:4]) {
	case "\x00\x01\x00\x00", "true":
	case "ttcf":
		return nil, errors.New(say("font collection"))
	case "OTTO":
		return nil, errors.New(say("font outlines"))
	case "wOFF", "wOF2":
		return nil, errors.New(say("font web"))
	default:
		return nil, errors.New(say("font no font"))
	}
	f, err := sfnt.Parse(ttf)
	if err != nil {
		return nil, errors.New(say("font broken", err))
	}
	ttf, glyphs, err := forLibrary(ttf)
	if err != nil {
		return nil, err
	}
	t, err := besideDejavu(ttf, f, glyphs)
	if err != nil {
		return nil, err
	}
	return &Font{t}, nil
}

// forLibrary makes a copy of a font that the PDF library reads without a word, and gives the glyph of each character below
// U+10000 as the library reads it: by the first table of format 4.
func forLibrary(ttf []byte) (copied []byte, glyphs map[rune]sfnt.GlyphIndex, err error) {
	ttf = bytes.Clone(ttf)
	u16 := binary.BigEndian.Uint16
	tables := map[string][]byte{}
	for i := range int(u16(ttf[4:])) {
		if 28+16*i > len(ttf) {
			return nil, nil, errors.New(say("font broken", "directory"))
		}
		e := ttf[12+16*i:]
		at, n := uint64(binary.BigEndian.Uint32(e[8:])), uint64(binary.BigEndian.Uint32(e[12:]))
		if at+n > uint64(len(ttf)) {
			return nil, nil, errors.New(say("font broken", string(e[:4])))
		}
		tables[string(e[:4])] = ttf[at : at+n]
	}
	for _, need := range []struct {
		name string
		long int // bytes that the library reads
	}{{"name", 6}, {"head", 54}, {"hhea", 36}, {"maxp", 6}, {"OS/2", 78}, {"post", 32}, {"cmap", 4}, {"hmtx", 4}, {"loca", 4}, {"glyf", 1}} {
		if len(tables[need.name]) < need.long {
			return nil, nil, errors.New(say("font broken", need.name))
		}
	}
	// Bits 1, 8 and 9 of fsType: no embedding, no subset, bitmaps only (OpenType specification, table OS/2).
	if k := u16(tables["OS/2"][8:]); k&0xf == 2 || k&0x300 != 0 {
		return nil, nil, errors.New(say("font locked"))
	}
	clear(tables["name"][:4]) // a list of names without a name: the library prints what it cannot read of them
	cmap := tables["cmap"]
	for i := range int(u16(cmap[2:])) {
		if 12+8*i > len(cmap) {
			break
		}
		e := cmap[4+8*i:]
		at := uint64(binary.BigEndian.Uint32(e[4:]))
		if system, coding := u16(e), u16(e[2:]); (system == 0 || system == 3 && coding == 1) && at+16 <= uint64(len(cmap)) && u16(cmap[at:]) == 4 {
			if glyphs = format4(cmap[at:]); glyphs != nil {
				return ttf, glyphs, nil
			}
			break
		}
	}
	return nil, nil, errors.New(say("font broken", "cmap"))
}

// format4 reads a table of glyphs by character (OpenType specification, cmap format 4); nil if it is cut short.
func format4(b []byte) map[rune]sfnt.GlyphIndex {
	u16 := binary.BigEndian.Uint16
	b = b[:min(len(b), max(16, int(u16(b[2:]))))]
	n := int(u16(b[6:])) / 2
	if n == 0 || len(b) < 16+8*n {
		return nil
	}
	glyphs := map[rune]sfnt.GlyphIndex{}
	for i := range n {
		from, to := int(u16(b[16+2*n+2*i:])), int(u16(b[14+2*i:]))
		delta, offset := u16(b[16+4*n+2*i:]), int(u16(b[16+6*n+2*i:]))
		for r := from; r <= to; r++ {
			g := uint16(r) + delta
			if offset != 0 {
				at := 16 + 6*n + 2*i + offset + 2*(r-from)
				if g = 0; at+2 <= len(b) && u16(b[at:]) != 0 {
					g = u16(b[at:]) + delta
				}
			}
			if g != 0 {
				glyphs[rune(r)] = sfnt.GlyphIndex(g)
			}
		}
	}
	return glyphs
}

// besideDejavu adds to the characters of DejaVu Sans those that a font has besides. A glyph that cannot be read is none.
func besideDejavu(ttf []byte, f *sfnt.Font, glyphs map[rune]sfnt.GlyphIndex) (*typefaces, error) {
	base := dejavu()
	t := &typefaces{width: base.width, other: ttf, by: new([65536]bool)}
	t.measure = &measure{Plain: base.measure.(*measure).Plain, faces: t, known: map[boxed]box3{}}
	var b sfnt.Buffer
	sound := func(g sfnt.GlyphIndex) bool {
		_, err := f.LoadGlyph(&b, g, fix.I(1000), nil)
		return err == nil
	}
	ok := sound(0) // the library embeds it always, as it does ASCII up to 8
	for r := rune(0); r <= '8'; r++ {
		ok = ok && (glyphs[r] == 0 || sound(glyphs[r]))
	}
	if !ok {
		return nil, errors.New(say("font broken", "glyf"))
	}
	var all []rune
	for r := ' '; r < 0xffff; r++ {
		g := glyphs[r]
		if g == 0 || base.width[0][r] >= 0 && base.width[1][r] >= 0 || r >= 0xd800 && r < 0xe000 {
			continue
		}
		if same, err := f.GlyphIndex(&b, r); err != nil || same != g || !sound(g) {
			continue
		}
		const widest = 10_000 // thousandths; nothing sound is wider
		a, err := f.GlyphAdvance(&b, g, fix.I(1000), xfont.HintingNone)
		if err != nil || a < 0 || a > fix.I(widest) {
			continue
		}
		t.width[0][r], t.width[1][r], t.by[r] = int16(a.Round()), int16(a.Round()), true
		all = append(all, r)
	}
	if len(all) == 0 {
		return nil, errors.New(say("font nothing"))
	}
	return t, tried(ttf, all)
}

// tried writes some characters of a font, the first and the last among them, into a document that nobody keeps, so that a font which
// the library cannot read is refused before a report is begun. It does not write all, which takes the library minutes.
func tried(ttf []byte, all []rune) (err error) {
	defer func() {
		if fault := recover(); fault != nil {
			err = errors.New(say("font broken", fmt.Sprint(fault)))
		}
	}()
	pdf := gofpdf.New("P", "mm", "A4", "")
	pdf.AddUTF8FontFromBytes(otherFamily, "", bytes.Clone(ttf))
	pdf.SetFont(otherFamily, "", 10)
	pdf.AddPage()
	for i := 0; i < len(all); i += 1 + len(all)/50 {
		pdf.Text(0, 0, string(all[i]))
	}
	pdf.Text(0, 0, string(all[len(all)-1]))
	return pdf.Output(io.Discard)
}
