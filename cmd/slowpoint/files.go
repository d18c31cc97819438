package main

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"unicode"
)

// unwritable is a file of the user's that could not be written.
type unwritable struct {
	path string
	why  error
}

func (u *unwritable) Error() string {
	return fmt.Sprintf("%s cannot be written (%v): choose another place, or make room", u.path, u.why)
}

func (u *unwritable) Unwrap() error { return u.why }

// cannotWrite says which file could not be written and why, without the name of the temporary file.
func cannotWrite(path string, err error) error {
	var told *unwritable
	if errors.As(err, &told) {
		return told
	}
	return &unwritable{path, cause(err)}
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
		return cannotWrite(path, err)
	}
	f, err := s.begin(filepath.Join(path, "a file"))
	if err != nil {
		return err
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
