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
	r, err := zip.NewReader(bytes.NewReader(sound), int64(len(sound)))
	if err != nil {
		t.Fatal(err)
	}
	var parts []string
	for _, f := range r.File {
		in, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		var b bytes.Buffer
		if _, err := b.ReadFrom(in); err != nil {
			t.Fatal(err)
		}
		text := b.String()
		if strings.HasSuffix(f.Name, "sheet1.xml") {
			text = text[:strings.LastIndex(text, "<row")]
		}
		parts = append(parts, f.Name, text)
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
