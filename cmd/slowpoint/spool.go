package main

import (
	"bufio"
	"os"
	"path/filepath"
)

// spooled is a results file that is written while the products come and gets its name at the end.
type spooled struct {
	*bufio.Writer
	file *os.File
	path string
}

func newSpool(folder, name string) (*spooled, error) {
	f, err := os.CreateTemp(folder, ".slowpoint-*")
	if err != nil {
		return nil, cannotWrite(filepath.Join(folder, name), err)
	}
	return &spooled{bufio.NewWriterSize(f, 1<<16), f, filepath.Join(folder, name)}, nil
}

// keep finishes the file under its name.
func (s *spooled) keep() error {
	for _, step := range []func() error{s.Flush, s.file.Sync, s.file.Close,
		func() error { return os.Chmod(s.file.Name(), 0o644) },
		func() error { return os.Rename(s.file.Name(), s.path) }} {
		if err := step(); err != nil {
			return cannotWrite(s.path, err)
		}
	}
	return nil
}

// drop removes what was not kept.
func (s *spooled) drop() {
	s.file.Close()
	os.Remove(s.file.Name())
}
