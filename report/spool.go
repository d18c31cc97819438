package report

import (
	"bytes"
	"io"
	"os"
)

// spoolInMemory is how much a spool keeps before it goes on in a file, in bytes.
const spoolInMemory = 4 << 20

// spool keeps what is written until it is wanted: in memory while it is small, then in a nameless file,
// so that a plan of any length passes. The zero value is ready; Close it.
type spool struct {
	mem  bytes.Buffer
	file *os.File
	gone bool // the file has no name any more
	n    int64
	err  error
}

// Write keeps p. It fails where the temporary folder is full or cannot be written.
func (s *spool) Write(p []byte) (int, error) {
	if s.err != nil {
		return 0, s.err
	}
	s.n += int64(len(p))
	if s.mem.Len()+len(p) > spoolInMemory {
		if s.err = s.spill(); s.err != nil {
			return 0, s.err
		}
	}
	return s.mem.Write(p)
}

func (s *spool) spill() (err error) {
	if s.file == nil {
		if s.file, err = os.CreateTemp("", "slowpoint-"); err != nil {
			return err
		}
		s.gone = os.Remove(s.file.Name()) == nil // gone whatever happens to the program; where a system forbids it, Close does it
	}
	_, err = s.mem.WriteTo(s.file)
	return err
}

// WriteTo gives back everything, from the beginning.
func (s *spool) WriteTo(w io.Writer) (int64, error) {
	if s.err != nil {
		return 0, s.err
	}
	var n int64
	if s.file != nil {
		if _, err := s.file.Seek(0, io.SeekStart); err != nil {
			return 0, err
		}
		var err error
		if n, err = io.Copy(w, s.file); err != nil {
			return n, err
		}
	}
	m, err := w.Write(s.mem.Bytes())
	return n + int64(m), err
}

// Close lets go of the memory and the file.
func (s *spool) Close() {
	s.mem = bytes.Buffer{}
	if s.file != nil {
		_ = s.file.Close()
		if !s.gone {
			_ = os.Remove(s.file.Name())
		}
		s.file = nil
	}
}
