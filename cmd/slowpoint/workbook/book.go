package workbook

import (
	"archive/zip"
	"errors"
	"fmt"
	"strings"
)

// Limits on a workbook of which rows are read one by one: a sheet of a logger, as long as spreadsheets can be.
const (
	mostBookBytes = 1 << 30 // unzipped
	mostBookCells = 20_000_000
)

// A Book is a workbook of somebody's own of which one sheet is read row by row, without being kept.
type Book struct {
	Is1904 bool // its dates count from 1904
	Macros bool // it has macros; they are never run
	files  map[string]*zip.File
	b      *book
	m      *meter
}

// OpenBook reads everything of a workbook but its sheets. The error says in one sentence why it cannot be read.
func OpenBook(data []byte) (*Book, error) {
	z, err := container(data)
	if err != nil {
		return nil, plainBook(err)
	}
	k := &Book{files: map[string]*zip.File{}, m: &meter{left: mostBookBytes, spare: mostBookCells}}
	for _, f := range z.File {
		k.files[strings.ToLower(f.Name)] = f
	}
	if k.b, _, err = readBook(k.files, k.m); err != nil {
		return nil, plainBook(err)
	}
	k.Is1904, k.Macros = k.b.is1904, k.files["xl/vbaproject.bin"] != nil
	return k, nil
}

// Sheets are the names of the sheets, those that are hidden marked.
func (k *Book) Sheets() (names []string, hidden map[string]bool) {
	hidden = map[string]bool{}
	for _, s := range k.b.sheets {
		name := tidy(s.name)
		names = append(names, name)
		hidden[name] = s.hidden
	}
	return names, hidden
}

// Rows gives take every row of a sheet that holds anything, and the sheet without its rows. A row is good until take returns; what take
// returns ends the reading and is given back as it is.
func (k *Book) Rows(name string, take func(*Grid, *Row) error) (*Grid, error) {
	for _, s := range k.b.sheets {
		if tidy(s.name) != name {
			continue
		}
		f := k.files[strings.ToLower(s.part)]
		if f == nil {
			return nil, damaged(s.part, fmt.Errorf("it is missing, and the sheet %s is in it", s.name))
		}
		g := &Grid{Name: name, Hidden: s.hidden, HiddenCols: map[int]bool{}, words: k.b.words, Is1904: k.b.is1904}
		var told error
		g.take = func(r *Row) error {
			told = take(g, r)
			return told
		}
		m, cells := *k.m, mostBookCells // of this reading alone
		err := m.part(f, func(r metered) error { return k.b.sheet(r, g, &cells) })
		if told != nil {
			return g, told
		}
		return g, plainBook(err)
	}
	return nil, fmt.Errorf("there is no sheet %s", name)
}

// plainBook words what is wrong with a workbook that is no plan.
func plainBook(err error) error {
	switch {
	case err == nil:
		return nil
	case errors.Is(err, errTooBig):
		return fmt.Errorf("the workbook unpacks to more than %d MB; export a part of it, or CSV", mostBookBytes>>20)
	case errors.Is(err, errTooMany), errors.Is(err, errLoaded):
		return fmt.Errorf("the workbook has more than %d cells and formats; export a part of it, or CSV", mostBookCells)
	}
	if what, _, ours := strings.Cut(err.Error(), "; a plan is"); ours {
		return errors.New(what)
	}
	return err
}
