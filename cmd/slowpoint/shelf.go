package main

import (
	"bufio"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"sync"
)

// shelf is where the files of a run are finished: each is written into a temporary file beside its place and gets its name when it is
// whole. It can be cleared at any instant, whoever is writing, so that Ctrl-C need not wait for a calculation.
// The zero shelf is ready for use.
type shelf struct {
	mu      sync.Mutex
	open    map[*os.File]bool // temporary files
	due     []string          // files of the run, as far as they are known beforehand
	beside  []string          // files that another run of the same plan makes, and this one does not
	whole   map[string]bool   // files that have their name
	cleared bool
}

// expect names files that the run is to write, the most important first.
func (s *shelf) expect(paths ...string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.due = append(s.due, paths...)
}

// spare names files that the run leaves alone and an earlier run of the same plan may have made.
func (s *shelf) spare(paths ...string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.beside = append(s.beside, paths...)
}

// begin opens a temporary file in the folder of path.
func (s *shelf) begin(path string) (*os.File, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.cleared {
		return nil, cannotWrite(path, os.ErrClosed)
	}
	f, err := os.CreateTemp(filepath.Dir(path), ".slowpoint-*")
	if err != nil {
		return nil, cannotWrite(path, err)
	}
	if s.open == nil {
		s.open = map[*os.File]bool{}
	}
	s.open[f] = true
	return f, nil
}

// keep finishes a temporary file under its name.
func (s *shelf) keep(f *os.File, path string) error {
	for _, step := range []func() error{f.Sync, f.Close, func() error { return os.Chmod(f.Name(), 0o644) }} {
		if err := step(); err != nil {
			return cannotWrite(path, err)
		}
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.cleared {
		return cannotWrite(path, os.ErrClosed)
	}
	if err := os.Rename(f.Name(), path); err != nil {
		return cannotWrite(path, err)
	}
	delete(s.open, f)
	if s.whole == nil {
		s.whole = map[string]bool{}
	}
	s.whole[path] = true
	return nil
}

// drop removes a temporary file that was not kept.
func (s *shelf) drop(f *os.File) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.open[f] {
		f.Close()
		os.Remove(f.Name())
		delete(s.open, f)
	}
}

// clear removes every temporary file and takes no more; it says which files are whole, which are missing, and which of those in the folder
// are of an earlier run.
func (s *shelf) clear() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.cleared = true
	for f := range s.open {
		f.Close()
		os.Remove(f.Name())
	}
	s.open = nil
	if len(s.due) == 0 && len(s.whole) == 0 {
		return "nothing was written"
	}
	in := ""
	if len(s.due) > 0 {
		in = " in " + filepath.Dir(s.due[0])
	}
	text := fmt.Sprintf("%s of this run finished and whole%s", count(len(s.whole), "file"), in)
	missing, earlier := s.others()
	if len(missing) > 0 {
		text += "; not written: " + few(missing)
	}
	if len(earlier) > 0 {
		text += "; of an earlier run: " + few(earlier)
	}
	return text
}

// others gives the files of the run that are not whole, and those in the folder that are of an earlier run of the plan.
func (s *shelf) others() (missing, earlier []string) {
	for _, path := range s.due {
		if !s.whole[path] {
			missing = append(missing, path)
		}
	}
	for _, path := range append(missing[:len(missing):len(missing)], s.beside...) {
		if _, err := os.Lstat(path); err == nil && !s.whole[path] {
			earlier = append(earlier, path)
		}
	}
	return missing, earlier
}

// stale says which files in the folder are of an earlier run and not of this one, which is over; "" if there are none.
func (s *shelf) stale() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	if _, earlier := s.others(); len(earlier) > 0 {
		return "Left from an earlier run, not of this one: " + few(earlier)
	}
	return ""
}

// few names files, without their folder, the first five of them.
func few(paths []string) string {
	const most = 5
	var names []string
	for _, path := range paths[:min(len(paths), most)] {
		names = append(names, filepath.Base(path))
	}
	text := strings.Join(names, ", ")
	if len(paths) > most {
		text += fmt.Sprintf(" and %d more", len(paths)-most)
	}
	return text
}

// writeWhole writes a file whole or not at all.
func (s *shelf) writeWhole(path string, write func(io.Writer) error) error {
	f, err := s.begin(path)
	if err != nil {
		return err
	}
	defer s.drop(f)
	if err := write(temporary{f, path}); err != nil {
		return cannotWrite(path, err)
	}
	return s.keep(f, path)
}

// temporary is a file under its temporary name, whose errors name the file that it is to be.
type temporary struct {
	file *os.File
	path string
}

func (t temporary) Write(p []byte) (int, error) {
	n, err := t.file.Write(p)
	if err != nil {
		err = cannotWrite(t.path, err)
	}
	return n, err
}

// spooled is a results file that is written while the products come and gets its name at the end.
type spooled struct {
	*bufio.Writer
	shelf *shelf
	file  *os.File
	path  string
}

func (s *shelf) spool(path string) (*spooled, error) {
	f, err := s.begin(path)
	if err != nil {
		return nil, err
	}
	return &spooled{bufio.NewWriterSize(temporary{f, path}, 1<<16), s, f, path}, nil
}

// keep finishes the file under its name.
func (s *spooled) keep() error {
	if err := s.Flush(); err != nil {
		return cannotWrite(s.path, err)
	}
	return s.shelf.keep(s.file, s.path)
}

// drop removes what was not kept.
func (s *spooled) drop() { s.shelf.drop(s.file) }
