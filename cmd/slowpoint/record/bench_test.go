package record

import (
	"bufio"
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"
)

// BenchmarkRead1M reads a million readings: delimited text of two columns, with dates in two writings.
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
			b.ReportAllocs()
			for b.Loop() {
				l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core"})
				if l == nil || len(l.C) != 1_000_000 {
					b.Fatal(problems)
				}
			}
		})
	}
}
