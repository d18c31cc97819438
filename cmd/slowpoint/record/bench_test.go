package record

import (
	"archive/zip"
	"bufio"
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"
)

// BenchmarkRead1M reads a million readings: delimited text of two columns, with dates in two writings, and a workbook of three, with
// dates as numbers and words that the cells share.
func BenchmarkRead1M(b *testing.B) {
	for _, c := range []struct{ name, form, head string }{
		{"iso", "2006-01-02T15:04:05", "Time,Core (°C)"},
		{"day first", "02.01.2006 15:04:05", "Time,Core (°C)"},
	} {
		b.Run(c.name, func(b *testing.B) {
			name := filepath.Join(b.TempDir(), "probe.csv")
			f, err := os.Create(name)
			if err != nil {
				b.Fatal(err)
			}
			w := bufio.NewWriter(f)
			fmt.Fprintln(w, c.head)
			at := time.Date(2026, 2, 11, 14, 5, 0, 0, time.UTC)
			for i := range 1_000_000 {
				fmt.Fprintf(w, "%s,%d.%d\n", at.Add(time.Duration(i)*5*time.Second).Format(c.form), 20+i/20_000, i/2000%10)
			}
			if err := w.Flush(); err != nil {
				b.Fatal(err)
			}
			f.Close()
			readMillion(b, name)
		})
	}
	b.Run("workbook", func(b *testing.B) {
		name := filepath.Join(b.TempDir(), "probe.xlsx")
		if err := os.WriteFile(name, millionRows(b), 0o644); err != nil {
			b.Fatal(err)
		}
		readMillion(b, name)
	})
}

func readMillion(b *testing.B, name string) {
	b.ReportAllocs()
	for b.Loop() {
		l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core"})
		if l == nil || len(l.C) != 1_000_000 {
			b.Fatal(problems)
		}
	}
}

// millionRows is a workbook of a million rows: the parts that a spreadsheet program writes for a small one, and a sheet as it writes it.
func millionRows(b *testing.B) []byte {
	f := excelize.NewFile()
	defer f.Close()
	form := "yyyy-mm-dd hh:mm:ss"
	style, err := f.NewStyle(&excelize.Style{CustomNumFmt: &form})
	if err != nil {
		b.Fatal(err)
	}
	for i, word := range []string{"Time", "Core (°C)", "State", "OK"} {
		if err := f.SetCellValue("Sheet1", fmt.Sprintf("%c1", 'A'+i), word); err != nil {
			b.Fatal(err)
		}
	}
	var small, out bytes.Buffer
	if err := f.Write(&small); err != nil {
		b.Fatal(err)
	}
	z, err := zip.NewReader(bytes.NewReader(small.Bytes()), int64(small.Len()))
	if err != nil {
		b.Fatal(err)
	}
	to := zip.NewWriter(&out)
	for _, part := range z.File {
		if part.Name != "xl/worksheets/sheet1.xml" {
			if err := to.Copy(part); err != nil {
				b.Fatal(err)
			}
			continue
		}
		w, err := to.Create(part.Name)
		if err != nil {
			b.Fatal(err)
		}
		sheet := bufio.NewWriter(w)
		sheet.WriteString(`<worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"><sheetData><row r="1"><c r="A1" t="s"><v>0</v></c><c r="B1" t="s"><v>1</v></c><c r="C1" t="s"><v>2</v></c></row>`)
		for i := range 1_000_000 {
			n := i + 2
			fmt.Fprintf(sheet, `<row r="%d" spans="1:3"><c r="A%d" s="%d"><v>%.15g</v></c><c r="B%d"><v>%d.%d</v></c><c r="C%d" t="s"><v>3</v></c></row>`,
				n, n, style, 46064.375+float64(i)*5/86400, n, 20+i/20_000, i/2000%10, n)
		}
		sheet.WriteString(`</sheetData></worksheet>`)
		if err := sheet.Flush(); err != nil {
			b.Fatal(err)
		}
	}
	if err := to.Close(); err != nil {
		b.Fatal(err)
	}
	return out.Bytes()
}
