package report

import (
	"archive/zip"
	"bytes"
	"encoding/json"
	"io"
	"math/rand/v2"
	"path/filepath"
	"strings"
	"testing"
)

// What goes in comes out, whether it stayed in memory or went to a file.
func TestSpool(t *testing.T) {
	for _, c := range []struct {
		name string
		size int
	}{{"in memory", 1000}, {"just full", spoolInMemory}, {"in a file", 3*spoolInMemory + 17}} {
		t.Run(c.name, func(t *testing.T) {
			rnd := rand.New(rand.NewPCG(5, 11))
			in := make([]byte, c.size)
			for i := range in {
				in[i] = byte(rnd.UintN(256))
			}
			var s spool
			defer s.Close()
			for rest := in; len(rest) > 0; {
				n := min(len(rest), 1+rnd.IntN(100_000))
				if _, err := s.Write(rest[:n]); err != nil {
					t.Fatal(err)
				}
				rest = rest[n:]
			}
			var out bytes.Buffer
			if n, err := s.WriteTo(&out); err != nil || n != int64(c.size) || s.n != n {
				t.Fatalf("%d bytes, %v; wanted %d", n, err, c.size)
			}
			if !bytes.Equal(in, out.Bytes()) {
				t.Error("other bytes came out")
			}
			if gone := c.size > spoolInMemory; gone != (s.file != nil) {
				t.Errorf("in a file: %v, wanted %v", s.file != nil, gone)
			}
		})
	}
}

// A temporary folder that cannot be written is an error, not a shorter document.
func TestSpoolWithoutATemporaryFolder(t *testing.T) {
	t.Setenv("TMPDIR", filepath.Join(t.TempDir(), "missing"))
	t.Setenv("TMP", filepath.Join(t.TempDir(), "missing"))
	var out bytes.Buffer
	j, p := NewJSON(&out, trayHead()), long(t, 500)
	var err error
	for i := 0; i < 200 && err == nil; i++ {
		err = j.Add(p)
	}
	if err == nil {
		t.Fatal("no error from Add")
	}
	if j.Close() == nil || out.Len() > 0 {
		t.Errorf("Close wrote %d bytes after the error", out.Len())
	}
}

// A document longer than the memory of its spool is whole.
func TestLongDocumentIsWhole(t *testing.T) {
	p := long(t, 500)
	ps := make([]*Product, 150)
	for i := range ps {
		ps[i] = p
	}
	b := write(t, NewJSON, trayHead(), ps...)
	if len(b) < 2*spoolInMemory {
		t.Fatalf("only %d bytes: the spool did not go to a file", len(b))
	}
	var all struct {
		Products []struct {
			T []float64 `json:"t_s"`
		} `json:"products"`
	}
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	if len(all.Products) != 150 || len(all.Products[149].T) != 500 {
		t.Errorf("%d products", len(all.Products))
	}
	book := write(t, NewWorkbook, trayHead(), ps...)
	z, err := zip.NewReader(bytes.NewReader(book), int64(len(book)))
	if err != nil {
		t.Fatal(err)
	}
	r, err := z.Open("xl/worksheets/sheet3.xml") // Courses
	if err != nil {
		t.Fatal(err)
	}
	sheet, err := io.ReadAll(r) // checks the CRC of the whole sheet
	if n := bytes.Count(sheet, []byte("<row r=")); err != nil || n != 150*500+1 || !bytes.HasSuffix(sheet, []byte("</worksheet>")) {
		t.Errorf("%d rows, %v; wanted the headings and 150 × 500", n, err)
	}
	if n := strings.Count(string(write(t, NewText, trayHead(), ps...)), "\nProduct "); n != 150 {
		t.Errorf("%d products in the text", n)
	}
}
