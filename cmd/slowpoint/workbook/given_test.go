package workbook

import (
	"os"
	"path/filepath"
	"testing"
	"time"

	"slowpoint/model"
)

// TestLoosely: stages are known by both of their words, with any of the signs before their time.
func TestLoosely(t *testing.T) {
	for _, typed := range []string{"hold hot 09:12; chill 11:20; end 13:00", "Hold hot: 09:12; chill=11:20", "hold hot; chill, 2 h", "hold hot; chill 11:20; end:13:00",
		"hold hot; chill 11:20; End = 13:00"} {
		p, err := loosely(typed)
		if err != nil || len(p.Steps) != 2 || p.Steps[0].Stage != model.HoldHot || p.Steps[1].Stage != model.Cool || p.Steps[1].Name != "chill" {
			t.Errorf("%q: %+v, %v", typed, p, err)
		}
	}
	for _, typed := range []string{"cooling 09:12", "hold 09:12", "end 09:12", "end:09:12", "ending 09:12; chill 09:20"} {
		if _, err := loosely(typed); err == nil {
			t.Errorf("%q is taken", typed)
		}
	}
}

// TestEnd: the word for the end of a chain takes the same signs before its time as the name of a step.
func TestEnd(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "Limits.csv"), []byte("Limit,Kind,Citation\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	for typed, want := range map[string]time.Duration{"cook 09:12; end 13:00": 13 * time.Hour, "cook: 09:12; end:13:00": 13 * time.Hour, "cook 09:12; End : 13:00": 13 * time.Hour,
		"cook 0 min; end=90 min": 90 * time.Minute, "cook 0 min; end, at 90 min": 90 * time.Minute, "cook 09:12; end": 0, "cook 09:12; end:": 0} {
		_, rec, err := ReadWith(dir, Given{Cells: map[string]string{"Record": "R", "File": "probe.csv", "What it measured": "slowest point", "Starts at": typed}, Stages: typed})
		if err != nil || rec == nil {
			t.Fatalf("%q: %v", typed, err)
		}
		switch n := len(rec.Starts); {
		case want == 0 && (rec.Sound || n != 1):
			t.Errorf("%q: %+v is taken", typed, rec.Starts)
		case want > 0 && (n != 2 || !rec.Sound || !rec.Starts[1].End || rec.Starts[1].After != want):
			t.Errorf("%q: %+v", typed, rec.Starts)
		}
	}
}
