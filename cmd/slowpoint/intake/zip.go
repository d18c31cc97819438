package intake

import (
	"archive/zip"
	"bytes"
	"compress/flate"
	"errors"
	"hash"
	"hash/crc32"
	"io"
	"io/fs"
	"sort"
)

// zipParts is the ZIP writer given to excelize, which hands its streamed sheets over in the random order of a map. Here the parts stand
// in the order of their names, compressed as they come, and none carries a time: the same workbook gives the same bytes.
type zipParts struct {
	out   io.Writer
	parts map[string]*zipPart
}

// zipPart is one of them.
type zipPart struct {
	packed bytes.Buffer
	pack   *flate.Writer
	sum    hash.Hash32
	bare   uint64 // bytes before compression
}

func newZipParts(out io.Writer) *zipParts { return &zipParts{out, map[string]*zipPart{}} }

// Create opens a part.
func (z *zipParts) Create(name string) (io.Writer, error) {
	p := &zipPart{sum: crc32.NewIEEE()}
	p.pack, _ = flate.NewWriter(&p.packed, flate.BestSpeed) // fails only for an unknown level
	z.parts[name] = p
	return p, nil
}

// Write compresses b.
func (p *zipPart) Write(b []byte) (int, error) {
	p.bare += uint64(len(b))
	p.sum.Write(b) // never fails
	return p.pack.Write(b)
}

// AddFS is not used by excelize.
func (z *zipParts) AddFS(fs.FS) error { return errors.New("AddFS is not provided") }

// Close writes the file, the list of its parts first, as readers want it.
func (z *zipParts) Close() error {
	names := make([]string, 0, len(z.parts))
	for n := range z.parts {
		names = append(names, n)
	}
	sort.Strings(names) // [Content_Types].xml and _rels come before xl
	w := zip.NewWriter(z.out)
	for _, n := range names {
		p := z.parts[n]
		if err := p.pack.Close(); err != nil {
			return err
		}
		part, err := w.CreateRaw(&zip.FileHeader{Name: n, Method: zip.Deflate, CRC32: p.sum.Sum32(), CompressedSize64: uint64(p.packed.Len()), UncompressedSize64: p.bare})
		if err != nil {
			return err
		}
		if _, err := p.packed.WriteTo(part); err != nil {
			return err
		}
	}
	return w.Close()
}
