package record

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"
)

// A writing is a way in which a logger writes its times, and what must be set to read it.
type writing struct {
	form  string // of time.Format; "" for numbers
	unit  float64
	set   Setting
	least time.Duration // what it can tell apart
}

var writings = []writing{
	{form: "2006-01-02T15:04:05", least: time.Second},
	{form: "2006-01-02 15:04:05.000", least: time.Millisecond},
	{form: "2006-01-02T15:04:05-07:00", least: time.Second},
	{form: "02.01.2006 15:04:05", set: Setting{DateOrder: "day month year"}, least: time.Second},
	{form: "2/1/06 3:04:05 PM", set: Setting{DateOrder: "day month year"}, least: time.Second},
	{form: "01/02/06 03:04 PM", set: Setting{DateOrder: "month day year"}, least: time.Minute},
	{form: "06-01-02 15:04", set: Setting{DateOrder: "year month day"}, least: time.Minute},
	{form: "02-Jan-06 15:04:05", least: time.Second},
	{form: "Jan 2, 2006 15:04:05", least: time.Second},
	{form: "20060102150405", least: time.Second},
	{unit: 1, set: Setting{Time: "Time (s)"}, least: time.Second},
	{unit: 60, set: Setting{Time: "Time (min)"}, least: 3 * time.Second},
	{unit: 3600, set: Setting{Time: "Time (h)"}, least: 36 * time.Second},
}

// TestWrittenLogsReadBack writes logs in drawn ways and holds what is read to what was written, to the last digit.
func TestWrittenLogsReadBack(t *testing.T) {
	dir := t.TempDir()
	rapid.Check(t, func(t *rapid.T) {
		w := rapid.SampledFrom(writings).Draw(t, "writing")
		sign := rapid.SampledFrom([]string{",", ";", "\t", "|"}).Draw(t, "sign")
		comma := sign != "," && w.form != "Jan 2, 2006 15:04:05" && rapid.Bool().Draw(t, "decimal comma")
		places := rapid.IntRange(0, 3).Draw(t, "places")
		scale := rapid.SampledFrom(scales).Draw(t, "unit")
		n := rapid.IntRange(2, 40).Draw(t, "readings")
		at := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(rapid.IntRange(0, 500*24*60).Draw(t, "start")) * time.Minute)
		offset := 0
		if strings.HasSuffix(w.form, "-07:00") {
			offset = rapid.IntRange(-11, 14).Draw(t, "zone") * 3600
		}
		zone := time.FixedZone("", offset)
		var text strings.Builder
		sep := func(s string) string {
			if comma {
				return strings.Replace(s, ".", ",", 1)
			}
			return s
		}
		fmt.Fprintf(&text, "A logger%sof ours\n\nNo%sTime%sCore (%s)%sState\n", sign, sign, sign, scale.name, sign)
		var times, temps []float64
		now := at
		for i := range n {
			if i > 0 {
				now = now.Add(w.least * time.Duration(rapid.IntRange(1, 500).Draw(t, "step")))
			}
			s := now.Sub(at).Seconds()
			typed := now.In(zone).Format(w.form)
			if w.form == "" {
				typed = strconv.FormatFloat(s/w.unit, 'f', 2, 64)
			}
			digits := rapid.IntRange(int(220*pow10[places]), int(660*pow10[places])).Draw(t, "reading")
			if scale.name == "°C" {
				digits %= int(400 * pow10[places])
			}
			x := float64(digits) / pow10[places]
			if w.form == "" || strings.HasSuffix(w.form, ".000") {
				typed = sep(typed)
			}
			if strings.Contains(typed, sign) {
				typed = `"` + typed + `"`
			}
			fmt.Fprintf(&text, "%d%s%s%s%s%sOK\n", i+1, sign, typed, sign, sep(strconv.FormatFloat(x, 'f', places, 64)), sign)
			times, temps = append(times, s), append(temps, scale.celsius(x))
		}
		set := w.set
		set.File, set.Temperature = filepath.Join(dir, "probe.csv"), "Core"
		if set.Time == "" {
			set.Time = "Time"
		}
		if comma {
			set.Decimal = "comma"
		}
		if err := os.WriteFile(set.File, []byte(text.String()), 0o644); err != nil {
			t.Fatal(err)
		}
		l, problems := Read(set)
		if l == nil && n >= constantLeast && constantOf(temps) {
			return
		}
		if l == nil || len(l.C) != n {
			t.Fatalf("%v\n%s", problems, text.String())
		}
		for i := range n {
			if math.Abs(l.TimesS[i]-times[i]) > 2e-6 || l.C[i] != temps[i] {
				t.Fatalf("reading %d is %.9g °C at %.9g s, written was %.9g at %.9g", i, l.C[i], l.TimesS[i], temps[i], times[i])
			}
		}
		if w.form != "" && !l.Start.Equal(at) {
			t.Fatalf("starts at %v, written was %v", l.Start, at)
		}
	})
}

func constantOf(x []float64) bool {
	for _, v := range x {
		if v != x[0] {
			return false
		}
	}
	return true
}
