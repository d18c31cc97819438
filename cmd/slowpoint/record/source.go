package record

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"hash"
	"io"
	"os"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/cell"
)

// A source gives the rows of a file, as often as it is asked.
type source interface {
	each(take func(*row) error) error // from the first one on; what take returns ends it
	place(line int32, col int) cell.Ref
	word() string   // for a row of it: line, row
	holder() string // of the rows: the file, the sheet
	digest() string // once each has come to the end
}

// text is a file of delimited text.
type text struct {
	path, name string
	sign       byte // between the cells
	eol        byte
	wide       bool // UTF-16
	sum        hash.Hash
	zeros      bool // it ends in zero bytes
	lines      int32
	size       int64 // bytes
	read       int64 // bytes of the lines that were given
}

// times is by how much the file is larger than what was read of it.
func (t *text) times() float64 {
	if t.read == 0 {
		return 1
	}
	return max(float64(t.size)/float64(t.read), 1)
}

func (t *text) word() string   { return "line" }
func (t *text) holder() string { return t.name }
func (t *text) digest() string { return hex.EncodeToString(t.sum.Sum(nil)) }

func (t *text) place(line int32, col int) cell.Ref {
	s := fmt.Sprintf("%s line %d", t.name, line)
	if col > 0 {
		s += fmt.Sprintf(", column %d", col)
	}
	return cell.Ref{Sheet: s}
}

func (t *text) each(take func(*row) error) error {
	f, err := os.Open(t.path)
	if err != nil {
		return err
	}
	defer f.Close()
	t.sum = sha256.New()
	var in io.Reader = io.TeeReader(f, t.sum)
	if t.wide {
		in = fromUTF16(in)
	}
	l := newLineReader(in, t.eol)
	d := divider{sign: t.sign}
	r := row{}
	t.lines, t.zeros, t.read = 0, false, 0
	for {
		line, err := l.next()
		if err == io.EOF {
			t.zeros = t.zeros || l.zeros
			return nil
		}
		if err != nil {
			return err
		}
		t.took(line)
		if t.lines == 1 {
			line = bytes.TrimPrefix(line, []byte("\xef\xbb\xbf"))
		}
		r = row{n: t.lines, cut: l.cut}
		r.zeros, l.zeros = l.zeros, false
		if bytes.IndexByte(line, 0) >= 0 {
			atEnd := l.ended && l.from == l.to
			if line = bytes.TrimRight(line, "\x00"); atEnd {
				t.zeros = true
			}
			r.zeros = !atEnd || bytes.IndexByte(line, 0) >= 0
		}
		open := false
		if r.fields, open, r.quotes = d.divide(line); open {
			if err := t.join(l, &d, &r, line); err != nil {
				return err
			}
		}
		if err := take(&r); err != nil {
			return err
		}
	}
}

// took counts a line.
func (t *text) took(line []byte) {
	n := len(line) + 1
	if t.wide {
		n *= 2
	}
	t.lines, t.read = t.lines+1, t.read+int64(n)
}

// join reads on in a cell in quotation marks that goes over several lines.
func (t *text) join(l *lineReader, d *divider, r *row, line []byte) error {
	whole := bytes.Clone(line)
	for range mostJoined {
		next, err := l.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return err
		}
		t.took(next)
		whole = append(append(whole, '\n'), next...)
		open := false
		if r.fields, open, r.quotes = d.divide(whole); !open {
			return nil
		}
	}
	r.quotes = true
	return nil
}

// openText finds how a text is written, by its beginning.
func openText(path, name string, size int64, head []byte) *text {
	t := &text{path: path, name: name, eol: '\n', size: size}
	if bytes.HasPrefix(head, []byte("\xff\xfe")) || bytes.HasPrefix(head, []byte("\xfe\xff")) {
		t.wide = true
		head, _ = io.ReadAll(fromUTF16(bytes.NewReader(head[:len(head)&^1])))
	}
	if bytes.IndexByte(head, '\n') < 0 && bytes.IndexByte(head, '\r') >= 0 {
		t.eol = '\r'
	}
	t.sign = divides(head, t.eol)
	return t
}

// signs are what may divide cells; the earlier ones go before a comma, which stands in numbers and in words as well, and all before blanks.
var signs = []byte{'\t', ';', '|', ',', ' '}

// divides finds the sign that divides the cells of a text by its data: one that gives most lines the same number of cells, some of them
// with digits.
func divides(head []byte, eol byte) byte {
	lines := bytes.Split(head, []byte{eol})
	if len(lines) > 1 && len(head) >= headBytes {
		lines = lines[:len(lines)-1] // cut off
	}
	best, most := byte(','), 0
	for _, s := range signs {
		n := even(lines, s)
		better := 10*n > 16*most // a later sign must be much better
		if s == ' ' {
			better = n > 4*most
		}
		if n > 0 && better {
			best, most = s, n
		}
	}
	return best
}

// even counts the lines that a sign divides into one and the same number of cells, more than one, the first or second of them with digits.
func even(lines [][]byte, sign byte) int {
	count := map[int]int{}
	d := divider{sign: sign}
	best := 0
	for _, l := range lines {
		fields, open, _ := d.divide(l)
		n := len(fields)
		if open || n < 2 || !bytes.ContainsAny(fields[0].b, "0123456789") && !bytes.ContainsAny(fields[1].b, "0123456789") {
			continue
		}
		if count[n]++; count[n] > best {
			best = count[n]
		}
	}
	return best
}

const headBytes = 1 << 16 // by which a file is recognised

// open recognises a file by its content and makes a source of it; ok is false where the problem was told.
func (r *reader) open() (source, bool) {
	at := r.set.Cells[setFile]
	refuse := func(s saying, args ...string) (source, bool) {
		r.problems.Add(s.problem(at, cell.Fault, setFile, r.set.Name, args...))
		return nil, false
	}
	info, err := os.Stat(r.set.File)
	switch {
	case err != nil:
		return refuse(noFile, workbook.Reason(err))
	case info.IsDir():
		return refuse(isFolder)
	case !info.Mode().IsRegular():
		return refuse(noRegular)
	case info.Size() == 0:
		return refuse(emptyFile)
	case info.Size() > mostText:
		return refuse(tooBig, fmt.Sprint(mostText>>20))
	}
	head, err := beginning(r.set.File)
	if err != nil {
		return refuse(noFile, workbook.Reason(err))
	}
	if what := otherKind(head); what != "" {
		return refuse(notText, what)
	}
	if bytes.HasPrefix(head, []byte("PK\x03\x04")) || bytes.HasPrefix(head, []byte("\xd0\xcf\x11\xe0")) {
		return r.openBook(info.Size())
	}
	if strings.TrimSpace(strings.Trim(string(head), "\x00\ufeff")) == "" && len(head) < headBytes {
		return refuse(emptyFile)
	}
	if r.set.Sheet != "" {
		r.problems.Add(sheetOfText.problem(r.set.Cells[setSheet], cell.Warning, setSheet, r.set.Sheet, r.set.Name))
	}
	if what := binary(head); what != "" {
		return refuse(notText, what)
	}
	return openText(r.set.File, r.set.Name, info.Size(), head), true
}

func beginning(path string) ([]byte, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	head := make([]byte, headBytes)
	n, err := io.ReadFull(f, head)
	if err == io.ErrUnexpectedEOF || err == io.EOF {
		err = nil
	}
	return head[:n], err
}

// otherKind names what a file is by its first bytes, where it can hold no record; "" if it may.
func otherKind(head []byte) string {
	for _, k := range []struct{ start, is string }{
		{"%PDF", "a PDF"}, {"\x89PNG", "a picture"}, {"\xff\xd8\xff", "a picture"}, {"GIF8", "a picture"}, {"\x1f\x8b", "a packed file (gzip)"},
		{"7z\xbc\xaf", "a packed file (7z)"}, {"Rar!", "a packed file (rar)"}, {"<!DOCTYPE", "a web page"}, {"<html", "a web page"}, {"<?xml", "XML"},
	} {
		if bytes.HasPrefix(head, []byte(k.start)) {
			return k.is
		}
	}
	return ""
}

// binary names what is no text: of many zero bytes, or of other signs that no text has; "" if it is text.
func binary(head []byte) string {
	if bytes.HasPrefix(head, []byte("\xff\xfe")) || bytes.HasPrefix(head, []byte("\xfe\xff")) {
		return ""
	}
	head = bytes.TrimRight(head, "\x00")
	zeros, odd := bytes.Count(head, []byte{0}), 0
	for _, b := range head {
		if b < ' ' && b != 0 && b != '\t' && b != '\n' && b != '\r' {
			odd++
		}
	}
	switch {
	case 4*zeros > len(head) && 20*odd < len(head):
		return "UTF-16 without a mark"
	case 10*(zeros+odd) > len(head):
		return "a file of the logger's own program"
	}
	return ""
}
