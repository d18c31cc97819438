package workbook

import (
	"bytes"
	"io"
	"strings"
)

// Nearly every row that a spreadsheet program writes has one form: cells with a value, a formula with its result, a text of their own, or
// nothing, in ASCII, with nothing escaped. It is called plain here:
//
//	<row r="7" spans="1:2"><c r="A7" s="1"><v>46064.5</v></c><c r="B7"><v>63.5</v></c></row>
//
// Where rows are taken one by one, plain ones are read from the buffer as they stand, if encoding/xml would make the same of them. All others
// go through it, and it alone says what is wrong. A sheet of a million rows takes a third of the time so (BenchmarkRead1M).

// A feed gives the bytes of a part to the decoder one by one, and whole rows to who knows their form.
type feed struct {
	r        io.Reader
	buf      []byte
	from, to int
	err      error
	given    int64 // bytes that the decoder took
	off      bool  // a row did not fit into the buffer: no more are looked for
}

const feedBytes = 1 << 16 // a row of the 512 columns that are read has 20 KB

func newFeed(r io.Reader) *feed { return &feed{r: r, buf: make([]byte, feedBytes)} }

// fill reads on, behind what was not taken yet.
func (f *feed) fill() {
	copy(f.buf, f.buf[f.from:f.to])
	f.from, f.to = 0, f.to-f.from
	var n int
	n, f.err = f.r.Read(f.buf[f.to:])
	f.to += n
}

func (f *feed) ReadByte() (byte, error) {
	for f.from == f.to {
		if f.err != nil {
			return 0, f.err
		}
		f.fill()
	}
	f.from++
	f.given++
	return f.buf[f.from-1], nil
}

// Read is not used by a decoder, which reads byte by byte where it can.
func (f *feed) Read(p []byte) (int, error) {
	if len(p) == 0 {
		return 0, nil
	}
	b, err := f.ReadByte()
	if err != nil {
		return 0, err
	}
	p[0] = b
	return 1, nil
}

// row is what stands next, up to the end of a row; "" if that is no row, or not whole in the buffer.
func (f *feed) row() string {
	for !f.off {
		rest := f.buf[f.from:f.to]
		if end := rowEnd(rest); end > 0 {
			return string(rest[:end])
		}
		if len(rest) >= len("<row ") && !bytes.HasPrefix(rest, []byte("<row ")) || f.err != nil {
			return ""
		}
		if len(rest) == len(f.buf) {
			f.off = true // or every short row behind it would search the buffer once more
			return ""
		}
		f.fill()
	}
	return ""
}

// rowEnd is how long a row is that begins a text; 0 if none does, or it does not end in it.
func rowEnd(s []byte) int {
	if !bytes.HasPrefix(s, []byte("<row ")) {
		return 0
	}
	open := bytes.IndexByte(s, '>')
	if open < 0 {
		return 0
	}
	if s[open-1] == '/' {
		return open + 1
	}
	end := bytes.Index(s[open:], []byte("</row>"))
	if end < 0 {
		return 0
	}
	return open + end + len("</row>")
}

// rowTag is what the begin of a row says.
type rowTag struct{ number, hidden, height string }

// cellTag is what the begin of a cell says, beside its kind.
type cellTag struct{ name, style string }

// plainCell is a cell of a plain row.
type plainCell struct {
	cellTag
	stored
	elements int // within it
}

// plainRow reads a plain row into cells, whose room is used again; false if it is not plain.
func plainRow(s string, cells []plainCell) (rowTag, []plainCell, bool) {
	cells = cells[:0]
	var row rowTag
	rest, closed, ok := attributes(s[len("<row"):], func(name, value string) bool {
		switch name {
		case "r":
			return keepOnce(&row.number, value)
		case "hidden":
			return keepOnce(&row.hidden, value)
		case "ht":
			return keepOnce(&row.height, value)
		}
		return true
	})
	if !ok || closed {
		return row, cells, ok && rest == ""
	}
	for strings.HasPrefix(rest, "<c ") {
		var c plainCell
		if rest, ok = c.read(rest); !ok {
			return row, cells, false
		}
		cells = append(cells, c)
	}
	return row, cells, rest == "</row>"
}

// read takes a cell from the beginning of s, and gives what follows it.
func (c *plainCell) read(s string) (rest string, ok bool) {
	rest, closed, ok := attributes(s[len("<c"):], func(name, value string) bool {
		switch name {
		case "r":
			return keepOnce(&c.name, value)
		case "s":
			return keepOnce(&c.style, value)
		case "t":
			return keepOnce(&c.kind, value)
		}
		return true
	})
	if !ok || closed {
		return rest, ok
	}
	var text string
	if text, rest, ok = plainText(rest, "<f>", "</f>"); ok {
		c.formula, c.linked = true, otherBook(text)
		c.elements++
	}
	if text, rest, ok = plainText(rest, "<v>", "</v>"); ok {
		c.value, c.hasV = text, true
		c.elements++
	} else if text, rest, ok = plainText(rest, "<is><t>", "</t></is>"); ok {
		c.inline = unescape(text)
		c.elements += 2
	}
	return strings.CutPrefix(rest, "</c>")
}

// plainText takes what stands between two tags at the beginning of s, and gives what follows; false, and all of s, if they are not there.
func plainText(s, open, end string) (text, rest string, ok bool) {
	in, ok := strings.CutPrefix(s, open)
	if !ok {
		return "", s, false
	}
	n := plainLen(in)
	if rest, ok = strings.CutPrefix(in[n:], end); !ok {
		return "", s, false
	}
	return in[:n], rest, true
}

// keepOnce keeps the value of an attribute; false if it is there twice, or empty and so as good as not there.
func keepOnce(at *string, value string) bool {
	if *at != "" || value == "" {
		return false
	}
	*at = value
	return true
}

// attributes takes those of an element up to the end of its begin, and gives what follows; closed: the element ends there. It is false if
// they are not plain, or take, which gets each by its local name, is.
func attributes(s string, take func(name, value string) bool) (rest string, closed, ok bool) {
	for n := 0; n <= mostAttributes; n++ {
		begun := len(s)
		s = strings.TrimLeft(s, " ")
		switch {
		case strings.HasPrefix(s, ">"):
			return s[1:], false, true
		case strings.HasPrefix(s, "/>"):
			return s[2:], true, true
		case len(s) == begun:
			return s, false, false
		}
		eq := strings.IndexByte(s, '=')
		if eq < 0 || !strings.HasPrefix(s[eq:], `="`) {
			return s, false, false
		}
		name, plain := localName(s[:eq])
		s = s[eq+len(`="`):]
		quote := strings.IndexByte(s, '"')
		if !plain || quote < 0 || plainLen(s[:quote]) < quote || !take(name, s[:quote]) {
			return s, false, false
		}
		s = s[quote+1:]
	}
	return s, false, false
}

// localName is a name without its prefix; false if it is not one of plain letters, or a declaration.
func localName(s string) (string, bool) {
	for i := range len(s) {
		switch c := s[i]; {
		case c >= 'a' && c <= 'z', c >= 'A' && c <= 'Z', i > 0 && (c >= '0' && c <= '9' || c == ':'):
		default:
			return "", false
		}
	}
	prefix, local, two := strings.Cut(s, ":")
	if !two {
		return s, s != "" && s != "xmlns"
	}
	return local, local != "" && prefix != "xmlns" && !strings.Contains(local, ":") && !(local[0] >= '0' && local[0] <= '9')
}

// plainLen is how many characters of s, from its beginning, stand for themselves in XML.
func plainLen(s string) int {
	for i := range len(s) {
		if c := s[i]; c < ' ' || c > '~' || c == '<' || c == '>' || c == '&' {
			return i
		}
	}
	return len(s)
}
