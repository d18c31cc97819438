package record

import (
	"archive/zip"
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// packed makes an archive of named parts.
func packed(t *testing.T, parts ...string) string {
	t.Helper()
	var out bytes.Buffer
	z := zip.NewWriter(&out)
	for i := 0; i < len(parts); i += 2 {
		w, err := z.Create(parts[i])
		if err != nil {
			t.Fatal(err)
		}
		if _, err := w.Write([]byte(parts[i+1])); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return out.String()
}

// TestBrokenBooks are archives that are no workbook, or a part of one: a sentence each, and none of it speaks of plans.
func TestBrokenBooks(t *testing.T) {
	sound := string(buildBook(t, "sheet Log\nTime (s)|Core (°C)\n0|63.3\n10|63.4\n"))
	for _, c := range []struct{ name, content, want string }{
		{"another archive", packed(t, "log.txt", "1;2"), "this is an archive, but not an .xlsx workbook"},
		{"OpenDocument", packed(t, "mimetype", "application/vnd.oasis.opendocument.spreadsheet"), "this is an OpenDocument file (.ods); open it in a spreadsheet program and save it as .xlsx"},
		{"a document", packed(t, "[Content_Types].xml", "<Types/>", "word/document.xml", "<document/>"), "this is not an .xlsx workbook (a document of another kind?)"},
		{"cut off", sound[:len(sound)/2], "the workbook is cut off or damaged (an incomplete copy or download?); ask for a fresh copy"},
	} {
		t.Run(c.name, func(t *testing.T) {
			name := filepath.Join(t.TempDir(), "probe.xlsx")
			if err := os.WriteFile(name, []byte(c.content), 0o644); err != nil {
				t.Fatal(err)
			}
			l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core"})
			if want := `"probe.xlsx" cannot be read: ` + c.want; l != nil || problems.Error() != want {
				t.Errorf("got      %s\nexpected %s", problems, want)
			}
		})
	}
}

// TestDamagedSheet holds that nothing is used of a sheet that ends in the middle.
func TestDamagedSheet(t *testing.T) {
	sound := buildBook(t, "sheet Log\nTime (s)|Core (°C)\n0|63.3\n10|63.4\n20|63.5\n")
	parts := partsOf(t, sound)
	for i := 0; i < len(parts); i += 2 {
		if strings.HasSuffix(parts[i], "sheet1.xml") {
			parts[i+1] = parts[i+1][:strings.LastIndex(parts[i+1], "<row")]
		}
	}
	name := filepath.Join(t.TempDir(), "probe.xlsx")
	if err := os.WriteFile(name, []byte(packed(t, parts...)), 0o644); err != nil {
		t.Fatal(err)
	}
	l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core"})
	if l != nil || !strings.Contains(problems.Error(), "the workbook is damaged in its part xl/worksheets/sheet1.xml: it ends in the middle") {
		t.Error(l, problems)
	}
}

// partsOf are the parts of a workbook: name, content, name, content.
func partsOf(t *testing.T, book []byte) (parts []string) {
	t.Helper()
	r, err := zip.NewReader(bytes.NewReader(book), int64(len(book)))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range r.File {
		in, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		var b bytes.Buffer
		if _, err := b.ReadFrom(in); err != nil {
			t.Fatal(err)
		}
		parts = append(parts, f.Name, b.String())
	}
	return parts
}

// TestMacros: the macros of a workbook are told and not run; its cells are taken as they were saved.
func TestMacros(t *testing.T) {
	plain := buildBook(t, "sheet Log\nTime (s)|Core (°C)\n0|63.3\n10|63.4\n")
	for _, c := range []struct{ name, content, want string }{
		{"probe.xlsx", string(plain), ""},
		{"probe.xlsm", packed(t, append(partsOf(t, plain), "xl/vbaProject.bin", "macros")...), `warning: Records!D2: "probe.xlsm" has macros, which are never run; the cells are taken as they were saved last` + "\n"},
	} {
		name := filepath.Join(t.TempDir(), c.name)
		if err := os.WriteFile(name, []byte(c.content), 0o644); err != nil {
			t.Fatal(err)
		}
		l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core", Cells: places})
		if l == nil || len(l.C) != 2 || said(nil, problems) != c.want {
			t.Errorf("%s: %v, want %q", c.name, said(nil, problems), c.want)
		}
	}
}
