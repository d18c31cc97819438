package record

import (
	"bytes"
	"errors"
	"io"
	"unicode/utf8"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"

	"slowpoint/cmd/slowpoint/workbook"
)

// Limits on size, stated in the messages.
const (
	mostText   = 1 << 30   // bytes of a text file
	mostRows   = 2_000_000 // rows of a record: 23 days of one a second; so many take 300 MB when they are judged
	mostLine   = 1 << 20   // bytes of a line
	mostFields = 512       // cells of a line
	mostJoined = 20        // lines of a cell in quotation marks
)

var (
	errLong = errors.New("a line has more than 1 MB")
	errMany = errors.New("too many rows")
	errStop = errors.New("enough") // told by whoever takes rows
)

// A field is one cell as it stands in the file. Its bytes are good until the next row is read.
type field struct {
	b       []byte
	kind    workbook.Kind // of text files always Text, or Blank
	form    workbook.Form
	shows   workbook.Display
	shown   string // words that the number format shows behind the number
	formula bool
	struck  bool
}

// A row is a line of a text file or a row of a sheet.
type row struct {
	n      int32 // from 1
	hidden bool
	quotes bool // a quotation mark is in the wrong place
	zeros  bool // holds zero bytes
	cut    bool // the text ends in it, without a line end
	fields []field
}

var nothing field

// at gives a column, from 1.
func (r *row) at(col int) *field {
	if col < 1 || col > len(r.fields) {
		return &nothing
	}
	return &r.fields[col-1]
}

// blank tells whether nothing stands in a row.
func (r *row) blank() bool { return r.last() == 0 }

// last is the last column that is filled.
func (r *row) last() int {
	for i := len(r.fields); i > 0; i-- {
		if len(r.fields[i-1].b) > 0 || r.fields[i-1].kind == workbook.NoStored {
			return i
		}
	}
	return 0
}

// lineReader gives the lines of a text without holding it.
type lineReader struct {
	r        io.Reader
	buf      []byte
	from, to int
	ended    bool
	eol      byte
	zeros    bool // long runs of zero bytes were passed over
	cut      bool // the last line had no end
}

func newLineReader(r io.Reader, eol byte) *lineReader {
	return &lineReader{r: r, eol: eol, buf: make([]byte, 1<<18)}
}

// next gives a line without its end. It is good until the next one is read.
func (l *lineReader) next() ([]byte, error) {
	seen := 0
	for {
		if i := bytes.IndexByte(l.buf[l.from+seen:l.to], l.eol); i >= 0 {
			line := l.buf[l.from : l.from+seen+i]
			l.from += seen + i + 1
			if len(line) > mostLine {
				if line = bytes.TrimLeft(line, "\x00"); len(line) > mostLine {
					return nil, errLong
				}
				l.zeros = true
			}
			return line, nil
		}
		seen = l.to - l.from
		if l.ended {
			if seen == 0 {
				return nil, io.EOF
			}
			line := l.buf[l.from:l.to]
			l.from, l.cut = l.to, true
			return line, nil
		}
		if seen > mostLine {
			if len(bytes.Trim(l.buf[l.from:l.to], "\x00")) > 0 {
				return nil, errLong
			}
			l.zeros = true // a file of which only the size was written
			l.from, l.to, seen = 0, 0, 0
		}
		if l.from > 0 {
			copy(l.buf, l.buf[l.from:l.to])
			l.from, l.to = 0, seen
		}
		if l.to == len(l.buf) {
			l.buf = append(l.buf, make([]byte, len(l.buf))...)
		}
		n, err := l.r.Read(l.buf[l.to:])
		l.to += n
		if err == io.EOF {
			l.ended = true
		} else if err != nil {
			return nil, err
		}
	}
}

// A divider makes fields of lines.
type divider struct {
	sign   byte // between cells; a blank stands for any number of blanks
	fields []field
}

// divide parts a line. open tells that a cell in quotation marks goes on in the next line.
func (d *divider) divide(line []byte) (fields []field, open, stray bool) {
	d.fields = d.fields[:0]
	line = bytes.TrimRight(line, "\r")
	if d.sign != ' ' && bytes.IndexByte(line, '"') < 0 { // the usual case
		for len(d.fields) < mostFields {
			i := bytes.IndexByte(line, d.sign)
			if i < 0 {
				break
			}
			d.add(line[:i])
			line = line[i+1:]
		}
		d.add(line)
		return d.fields, false, false
	}
	for at := 0; len(d.fields) < mostFields; {
		for d.sign == ' ' && at < len(line) && (line[at] == ' ' || line[at] == '\t') {
			at++
		}
		if d.sign == ' ' && at == len(line) {
			break
		}
		from := at
		for d.sign != ' ' && at < len(line) && line[at] == ' ' {
			at++
		}
		if at < len(line) && line[at] == '"' {
			text, end, whole := quoted(line, at)
			if !whole {
				return d.fields, true, stray
			}
			for end < len(line) && line[end] == ' ' && d.sign != ' ' {
				end++
			}
			if end < len(line) && line[end] != d.sign {
				stray = true
				for end < len(line) && line[end] != d.sign {
					end++
				}
			}
			d.add(text)
			at = end
		} else {
			at = from
			for at < len(line) && line[at] != d.sign && (d.sign != ' ' || line[at] != '\t') {
				at++
			}
			d.add(line[from:at])
		}
		if at == len(line) {
			break
		}
		if at++; at == len(line) && d.sign != ' ' {
			d.add(nil)
			break
		}
	}
	return d.fields, false, stray
}

func (d *divider) add(b []byte) {
	for len(b) > 0 && (b[0] == ' ' || b[0] == '\t') {
		b = b[1:]
	}
	for len(b) > 0 && (b[len(b)-1] == ' ' || b[len(b)-1] == '\t') {
		b = b[:len(b)-1]
	}
	f := field{b: b}
	if len(b) > 0 {
		f.kind = workbook.Text
	}
	d.fields = append(d.fields, f)
}

// quoted reads a cell in quotation marks that starts at a place; doubled ones stand for one. end is the place behind it.
func quoted(line []byte, at int) (text []byte, end int, whole bool) {
	at++
	from := at
	doubled := false
	for ; at < len(line); at++ {
		if line[at] != '"' {
			continue
		}
		if at+1 < len(line) && line[at+1] == '"' {
			doubled = true
			at++
			continue
		}
		text = line[from:at]
		if doubled {
			text = bytes.ReplaceAll(text, []byte(`""`), []byte(`"`))
		}
		return text, at + 1, true
	}
	return nil, at, false
}

// inUTF8 gives a text in UTF-8: what is not is read as Windows-1252.
func inUTF8(b []byte) string {
	if utf8.Valid(b) {
		return string(b)
	}
	out, err := charmap.Windows1252.NewDecoder().Bytes(b)
	if err != nil {
		return string(bytes.ToValidUTF8(b, []byte("\ufffd")))
	}
	return string(out)
}

// fromUTF16 reads UTF-16 with a mark.
func fromUTF16(r io.Reader) io.Reader {
	return transform.NewReader(r, unicode.UTF16(unicode.BigEndian, unicode.UseBOM).NewDecoder())
}
