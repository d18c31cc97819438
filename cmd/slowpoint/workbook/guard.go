package workbook

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"strings"
)

// container opens a workbook file as the archive that it is, or says in one sentence what it is instead.
func container(data []byte) (*zip.Reader, error) {
	switch {
	case len(data) == 0:
		return nil, errors.New("the file is empty; ask for a fresh copy")
	case bytes.HasPrefix(data, []byte("\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1")):
		if bytes.Contains(data, utf16("EncryptedPackage")) {
			return nil, errors.New("the workbook is protected by a password; save a copy without one (in the spreadsheet program: protect workbook, encrypt with password, clear it)")
		}
		return nil, errors.New("this is an old .xls workbook; open it in a spreadsheet program and save it as .xlsx")
	case bytes.HasPrefix(data, []byte("%PDF")):
		return nil, errors.New("this is a PDF; a plan is an .xlsx workbook, or a folder of .csv files")
	case !bytes.HasPrefix(data, []byte("PK\x03\x04")):
		if !bytes.ContainsRune(data[:min(len(data), 4096)], 0) {
			return nil, errors.New("this is a text file (CSV perhaps), whatever its name says; put the .csv files of a plan into a folder, named like the sheets, and give the folder, or save an .xlsx workbook")
		}
		return nil, errors.New("this is not an .xlsx workbook; a plan is an .xlsx workbook, or a folder of .csv files")
	}
	z, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		return nil, errors.New("the workbook is cut off or damaged (an incomplete copy or download?); ask for a fresh copy")
	}
	ods := false
	kinds := false
	seen := map[string]bool{}
	for _, f := range z.File {
		n := strings.ToLower(f.Name)
		if seen[n] {
			return nil, damaged(f.Name, errors.New("it is there twice"))
		}
		seen[n] = true
		ods = ods || n == "mimetype" || n == "meta-inf/manifest.xml"
		kinds = kinds || n == "[content_types].xml"
	}
	switch {
	case !kinds && ods:
		return nil, errors.New("this is an OpenDocument file (.ods); open it in a spreadsheet program and save it as .xlsx")
	case !kinds:
		return nil, errors.New("this is an archive, but not an .xlsx workbook; a plan is an .xlsx workbook, or a folder of .csv files")
	}
	return z, nil
}

// damaged is the sentence about a part of a workbook that cannot be trusted.
func damaged(part string, err error) error {
	why := err.Error()
	var syntax *xml.SyntaxError
	switch {
	case errors.Is(err, errTooBig), errors.Is(err, errTooMany), errors.Is(err, errLoaded), errors.Is(err, errMerged):
		return err
	case errors.As(err, &syntax):
		why = syntax.Msg + fmt.Sprintf(", line %d", syntax.Line)
		if strings.Contains(syntax.Msg, "unexpected EOF") {
			why = "it ends in the middle"
		}
	case errors.Is(err, io.ErrUnexpectedEOF):
		why = "it ends in the middle"
	case errors.Is(err, zip.ErrChecksum), errors.Is(err, zip.ErrFormat):
		why = "its content does not fit its checksum or its size"
	}
	return fmt.Errorf("the workbook is damaged in its part %s: %s; nothing of it is used, for rows could be lost – open it in a spreadsheet program, look whether it is whole, and save it again", part, why)
}

var errTooBig = fmt.Errorf("the workbook unpacks to more than %d MB; a plan is smaller: take out pictures and sheets that do not belong to it, or divide it into several", mostBytes>>20)

var errTooMany = fmt.Errorf("the workbook has more than %d cells, those counted that are formatted and blank; delete the blank rows below the tables of each sheet, or divide the plan", mostCells)

var errLoaded = fmt.Errorf("the workbook holds more than %d elements besides its cells: formats, links, merged ranges and the like; a plan has far fewer: copy the tables of each sheet into a new workbook", mostElements)

var errMerged = fmt.Errorf("has more than %d merged ranges; unmerge its cells, or copy its table into a new workbook", mostMerged)

func utf16(s string) []byte {
	var out []byte
	for i := 0; i < len(s); i++ {
		out = append(out, s[i], 0)
	}
	return out
}

// meter reads parts of the archive and stops when all of them together are too much.
type meter struct {
	left  int64 // bytes that may still be unpacked
	spare int   // elements that may still come, besides those that are counted by themselves
}

type metered struct {
	r io.Reader
	m *meter
}

func (r metered) Read(p []byte) (int, error) {
	n, err := r.r.Read(p)
	if r.m.left -= int64(n); r.m.left < 0 {
		return 0, errTooBig
	}
	return n, err
}

// part reads one part with use, then to its end, so that its checksum is tested too.
func (m *meter) part(f *zip.File, use func(metered) error) error {
	rc, err := f.Open()
	if err != nil {
		return damaged(f.Name, err)
	}
	defer rc.Close()
	r := metered{rc, m}
	if use != nil {
		if err := use(r); err != nil {
			return damaged(f.Name, err)
		}
	}
	if _, err := io.Copy(io.Discard, r); err != nil {
		return damaged(f.Name, err)
	}
	return nil
}

// tagged stops XML that is no workbook: megabytes without an element.
type tagged struct {
	r    io.Reader
	bare int // bytes since the last element
}

const mostBare = 4 << 20

func (t *tagged) Read(p []byte) (int, error) {
	n, err := t.r.Read(p)
	if i := bytes.LastIndexByte(p[:n], '<'); i >= 0 {
		t.bare = n - i
	} else {
		t.bare += n
	}
	if t.bare > mostBare {
		return 0, fmt.Errorf("it holds more than %d MB in one piece", mostBare>>20)
	}
	return n, err
}

// walker gives the tokens of XML, and stops where a small file unpacks to what takes minutes to read: elements deeper within each other
// than in any workbook, or more of them than a plan can have. Attributes beyond the usual number, comments, and text in pieces count as
// elements too.
type walker struct {
	*xml.Decoder
	feed   *feed
	m      *meter
	deep   int  // elements that are open
	pieces bool // the token before was no element's begin or end
}

const (
	mostElements   = 1_000_000 // of a plan, besides its cells, rows and shared texts, which are counted by themselves
	mostNested     = 100       // elements within each other; a sheet has a dozen (measured)
	mostAttributes = 40        // of an element; the first of a sheet has up to 20 (from memory)
)

func (w *walker) Token() (xml.Token, error) {
	t, err := w.Decoder.Token() // and not RawToken: it checks that elements match
	if err != nil {
		return nil, err
	}
	pieces := false
	switch t := t.(type) {
	case xml.StartElement:
		if w.deep++; w.deep > mostNested {
			return nil, fmt.Errorf("it holds more than %d elements within each other, which no workbook does", mostNested)
		}
		w.m.spare -= 1 + max(0, len(t.Attr)-mostAttributes)
	case xml.EndElement:
		w.deep--
	default:
		if pieces = true; w.pieces {
			w.m.spare--
		}
	}
	w.pieces = pieces
	if w.m.spare < 0 {
		return nil, errLoaded
	}
	return t, nil
}

// between tells whether the decoder has taken no byte beyond the token that it gave last.
func (w *walker) between() bool { return w.feed.given == w.InputOffset() }

// Skip reads up to the end of the element that was just opened.
func (w *walker) Skip() error {
	for end := w.deep - 1; w.deep > end; {
		if _, err := w.Token(); err != nil {
			return err
		}
	}
	return nil
}

// wellFormed reads XML to its end without making anything of it.
func wellFormed(r metered) error {
	return elements(r, func(*walker, xml.StartElement) error { return nil }, nil)
}

// elements walks through XML: start is called for each element, end (which may be nil) for each end. Declarations are refused:
// no workbook needs them, and they can make a small file expand without end.
func elements(r metered, start func(*walker, xml.StartElement) error, end func(d *walker, name string) error) error {
	f := newFeed(&tagged{r: r})
	d := &walker{Decoder: xml.NewDecoder(f), feed: f, m: r.m}
	for any := false; ; {
		t, err := d.Token()
		switch {
		case err == io.EOF && !any:
			return io.ErrUnexpectedEOF
		case err == io.EOF:
			return nil
		case err != nil:
			return err
		}
		switch t := t.(type) {
		case xml.Directive:
			return errors.New("it declares a document type, which no workbook needs")
		case xml.StartElement:
			any = true
			if err := start(d, t); err != nil {
				return err
			}
		case xml.EndElement:
			if end == nil {
				continue
			}
			if err := end(d, t.Name.Local); err != nil {
				return err
			}
		}
	}
}
