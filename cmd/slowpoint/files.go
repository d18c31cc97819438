package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"unicode"
)

// unwritable is a file of the user's that could not be written.
type unwritable struct {
	path   string
	why    error
	folder bool // it is that of the results
}

func (u *unwritable) Error() string {
	other := "choose another place"
	if u.folder {
		other = "choose another folder with --out"
	}
	return fmt.Sprintf("%s cannot be written (%v): %s%s", u.path, u.why, other, u.mend())
}

// mend says what else can be done, by why it could not be written; "" for nothing.
func (u *unwritable) mend() string {
	switch {
	case errors.Is(u.why, fs.ErrPermission):
		return ", or give yourself the right to write there"
	case errors.Is(u.why, syscall.EROFS):
		return ": nothing can be written to that disk"
	case errors.Is(u.why, syscall.ENOTDIR):
		return ", or move the file that stands where a folder has to be"
	case errors.Is(u.why, fs.ErrNotExist):
		return ": the folder that it lies in is not there, and cannot be made"
	case errors.Is(u.why, syscall.ENOSPC):
		return ", or make room on that disk"
	}
	return ", or make room"
}

func (u *unwritable) Unwrap() error { return u.why }

// cannotWrite says which file could not be written and why, without the name of the temporary file.
func cannotWrite(path string, err error) error {
	var told *unwritable
	if errors.As(err, &told) {
		return told
	}
	return &unwritable{path: path, why: cause(err)}
}

// cause is an error of the system without the name of the file that it met.
func cause(err error) error {
	var p *os.PathError
	var l *os.LinkError
	switch {
	case errors.As(err, &p):
		return p.Err
	case errors.As(err, &l):
		return l.Err
	}
	return err
}

// makeFolder makes the folder of the results and tries whether it takes files.
func (s *shelf) makeFolder(path string) error {
	if err := os.MkdirAll(path, 0o755); err != nil {
		return &unwritable{path, cause(err), true}
	}
	f, err := s.begin(filepath.Join(path, "a file"))
	if err != nil {
		return &unwritable{path, errors.Unwrap(err), true} // without the name of a file that nobody asked for
	}
	s.drop(f)
	return nil
}

// fileNames gives each product a file name of its own, without its ending: letters, digits, - and _ stay,
// everything else becomes _, and a number is added where two collide (also when only their case differs).
func fileNames(products []string) []string {
	out := make([]string, len(products))
	taken := map[string]bool{"summary": true, "results": true, "report": true, "con": true, "prn": true, "aux": true, "nul": true} // the last: devices of Windows
	for i := range 9 {
		taken[fmt.Sprintf("com%d", i+1)], taken[fmt.Sprintf("lpt%d", i+1)] = true, true
	}
	for i, p := range products {
		name := strings.Map(func(r rune) rune {
			if unicode.IsLetter(r) || unicode.IsDigit(r) || r == '-' || r == '_' {
				return r
			}
			return '_'
		}, p)
		for len(name) > 120 { // file systems take 255 bytes
			name = string([]rune(name)[:len([]rune(name))-1])
		}
		try := name
		for n := 2; taken[strings.ToLower(try)]; n++ {
			try = fmt.Sprintf("%s_%d", name, n)
		}
		taken[strings.ToLower(try)] = true
		out[i] = try
	}
	return out
}
