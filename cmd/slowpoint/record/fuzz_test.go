package record

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// FuzzRead reads anything with settings of any kind: it must not panic, and a log that comes out holds together.
func FuzzRead(f *testing.F) {
	files, err := filepath.Glob("testdata/*.txt")
	if err != nil {
		f.Fatal(err)
	}
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		if _, body, isText := strings.Cut(string(data), "\nfile\n"); isText {
			body, _, _ = strings.Cut(body, "\nexpect\n")
			f.Add([]byte(body), "Time", "Core (°C)", "")
		}
	}
	f.Add([]byte("A;B\n1;2\n"), "A (s)", "B (°F)", "comma")
	f.Add([]byte("\xff\xfeT\x00,\x00B\x00\n\x00"), "", "", "")
	name := filepath.Join(f.TempDir(), "probe.csv")
	f.Fuzz(func(t *testing.T, data []byte, time, temp, decimal string) {
		if err := os.WriteFile(name, data, 0o644); err != nil {
			t.Fatal(err)
		}
		l, problems := Read(Setting{File: name, Time: time, Temperature: temp, Decimal: decimal})
		if (l == nil) != (problems.Faults() > 0) {
			t.Fatalf("a log is there: %v, with %v", l != nil, problems)
		}
		if l == nil {
			return
		}
		if len(l.C) == 0 || len(l.C) != len(l.TimesS) || len(l.C) != len(l.Lines) || l.TimesS[0] != 0 {
			t.Fatalf("%d readings, %d times, %d lines", len(l.C), len(l.TimesS), len(l.Lines))
		}
		for _, p := range l.Within(Food{SettleS: 300, ShareS: 0.001, HighC: 90}, []Stretch{{EndS: 900, Heats: true}, {StartS: 900, EndS: 4000}}).Leaps {
			if p.Before < 0 || p.First <= p.Before || p.Last < p.First-1 || p.Last >= len(l.C) {
				t.Fatalf("a leap of %d readings: %+v", len(l.C), p)
			}
		}
		for i, s := range l.TimesS {
			if i > 0 && s <= l.TimesS[i-1] || math.IsInf(s, 0) || !(l.C[i] >= leastC && l.C[i] <= mostC) {
				t.Fatalf("reading %d is %g °C at %g s", i, l.C[i], s)
			}
		}
	})
}
