package report

import (
	"archive/zip"
	"bytes"
	"compress/flate"
	"errors"
	"hash"
	"hash/crc32"
	"io"
	"io/fs"
	"regexp"
	"slices"
	"sort"
	"strings"

	"github.com/xuri/excelize/v2"
)

// part is a piece of a workbook file, compressed as it is written.
type part struct {
	packed spool
	pack   *flate.Writer
	sum    hash.Hash32
	bare   uint64 // bytes before compression
}

func newPart() *part {
	p := &part{sum: crc32.NewIEEE()}
	p.pack, _ = flate.NewWriter(&p.packed, flate.BestSpeed) // fails only for an unknown level
	return p
}

// Write compresses b.
func (p *part) Write(b []byte) (int, error) {
	p.bare += uint64(len(b))
	_, _ = p.sum.Write(b) // never fails
	return p.pack.Write(b)
}

// zipParts is the ZIP writer given to excelize. The parts stand in a fixed order whatever order they come in, none carries
// a time, and a part of ours takes the place of the one of the same name; so the same workbook gives the same bytes.
type zipParts struct {
	out   io.Writer
	ours  map[string]*part // by name in the file
	plain map[string]*bytes.Buffer
}

// Create opens a part.
func (z *zipParts) Create(name string) (io.Writer, error) {
	if z.ours[name] != nil {
		return io.Discard, nil
	}
	b := &bytes.Buffer{}
	z.plain[name] = b
	return b, nil
}

// AddFS is not used by excelize.
func (z *zipParts) AddFS(fs.FS) error { return errors.New("results.xlsx: AddFS is not provided") }

// Close writes the file.
func (z *zipParts) Close() error {
	names := make([]string, 0, len(z.ours)+len(z.plain))
	for n := range z.ours {
		names = append(names, n)
	}
	for n := range z.plain {
		names = append(names, n)
	}
	sort.Slice(names, func(i, j int) bool { return rank(names[i]) < rank(names[j]) })
	zw := zip.NewWriter(z.out)
	for _, n := range names {
		if err := z.write(zw, n); err != nil {
			return err
		}
	}
	return zw.Close()
}

func (z *zipParts) write(zw *zip.Writer, name string) error {
	if p := z.ours[name]; p != nil {
		if err := p.pack.Close(); err != nil {
			return err
		}
		w, err := zw.CreateRaw(&zip.FileHeader{Name: name, Method: zip.Deflate, CRC32: p.sum.Sum32(),
			CompressedSize64: uint64(p.packed.n), UncompressedSize64: p.bare})
		if err != nil {
			return err
		}
		_, err = p.packed.WriteTo(w)
		return err
	}
	b := z.plain[name].Bytes()
	if name == "[Content_Types].xml" {
		b = sortTypes(b)
	}
	w, err := zw.Create(name)
	if err != nil {
		return err
	}
	_, err = w.Write(b)
	return err
}

// rank puts the two parts that a reader wants first in front.
func rank(name string) string {
	switch name {
	case "[Content_Types].xml":
		return "\x00"
	case "_rels/.rels":
		return "\x01"
	}
	return name
}

var defaultType = regexp.MustCompile(`<Default [^>]*></Default>`)

// sortTypes puts the file name extensions, which excelize may list in the random order of a map, in the order of the alphabet.
func sortTypes(b []byte) []byte {
	sorted := defaultType.FindAll(b, -1)
	for i := range sorted {
		sorted[i] = bytes.Clone(sorted[i])
	}
	slices.SortFunc(sorted, bytes.Compare)
	i := -1
	return defaultType.ReplaceAllFunc(b, func([]byte) []byte { i++; return sorted[i] })
}

// writeParts writes f to w; ours are the parts that take the place of those of f, by name.
func writeParts(f *excelize.File, w io.Writer, ours map[string]*part) error {
	f.SetZipWriter(func(io.Writer) excelize.ZipWriter {
		return &zipParts{out: w, ours: ours, plain: map[string]*bytes.Buffer{}}
	})
	return f.Write(io.Discard)
}

// xmlText writes s as the text of an XML element, safe in a spreadsheet: no control characters, at most 32,767 UTF-16 units
// (a longer text ends in "… (cut)"), and nothing that a spreadsheet would read as an escape.
func xmlText(b []byte, s string) []byte {
	const most, tail = 32767, "… (cut)"
	s = strings.ReplaceAll(strings.ReplaceAll(s, "\r\n", "\n"), "\r", "\n")
	units := 0
	for _, r := range s {
		if units++; r > 0xFFFF {
			units++
		}
	}
	long, units := units > most, 0
	for i, r := range s {
		if units++; r > 0xFFFF {
			units++
		}
		if long && units > most-10 {
			return append(b, tail...)
		}
		switch {
		case r == '&':
			b = append(b, "&amp;"...)
		case r == '<':
			b = append(b, "&lt;"...)
		case r == '>':
			b = append(b, "&gt;"...)
		case r == '_' && escape.MatchString(s[i:min(i+7, len(s))]):
			b = append(b, "_x005F_"...)
			units += 6
		case r < ' ' && r != '\t' && r != '\n', r == 0x7F, r == 0xFFFE, r == 0xFFFF:
			b = append(b, "\uFFFD"...)
		default:
			b = append(b, string(r)...)
		}
	}
	return b
}

// escape is what a spreadsheet reads as one character: _x000D_.
var escape = regexp.MustCompile(`^_x[0-9A-Fa-f]{4}_`)
