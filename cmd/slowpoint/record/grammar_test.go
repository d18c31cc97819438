package record

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
	"time"

	"slowpoint/model/cell"
)

// TestStamps holds the grammar of times: what a cell says, before the order of dates is decided.
func TestStamps(t *testing.T) {
	for _, c := range []struct{ typed, want string }{
		// ISO 8601 and its relatives
		{"2016-02-11T14:10:57+00:00", "2016.2.11 51057 +0"},
		{"2016-02-11T14:10:57Z", "2016.2.11 51057 +0"},
		{"2016-02-11 14:10:57.250", "2016.2.11 51057.25"},
		{"2016-02-11 14:10:57,5 -0730", "2016.2.11 51057.5 -27000"},
		{"2016-02-11 14:10 UTC+02", "2016.2.11 51000 +7200"},
		{"2016-02-11", "2016.2.11"},
		{"20160211141057", "2016.2.11 year month day 51057"},
		{"20160211T141057Z", "2016.2.11 year month day 51057 +0"},
		{"20160211 14:10:57", "2016.2.11 year month day 51057"},
		// signs, short years, blanks
		{"11/02/2016 14:05", "11.2.2016 50700"},
		{"05.09.2018 8:05:01", "5.9.2018 29101"},
		{"5. 9. 2018 8.05.01", "5.9.2018 29101"},
		{"18-08-10 23:59:59", "18.8.10 86399"},
		{"  18/08/10   2:00 ", "18.8.10 7200"},
		{"2018. 09. 05. 8:05", "2018.9.5 29100"},
		{"2018/9/5 下午 02:10", "2018.9.5 51000 half"},
		// before and after noon
		{"08/18/10 02:00:00  PM", "8.18.10 50400 half"},
		{"08/18/10 12:00:00 AM", "8.18.10 0 half"},
		{"08/18/10 12:30 p.m.", "8.18.10 45000 half"},
		{"08/18/10 12:30 a. m.", "8.18.10 1800 half"},
		{"18.8.2010 1:05 odp.", "18.8.2010 47100 half"},
		{"18/8/2010 1:05 μ.μ.", "18.8.2010 47100 half"},
		{"18-8-2010 1:05 em", "18.8.2010 47100 half"},
		{"08/18/10 13:05 PM", "8.18.10 47100 half"},
		{"08/18/10 13:05 AM", "none"},
		{"18/8/2010 1:05 xm", "none"},
		// words
		{"11 Feb 2016 14:05", "11.2.2016 day month year 50700"},
		{"11-Feb-16 14:05", "11.2.16 day month year 50700"},
		{"11. Februar 2016, 14:05", "11.2.2016 day month year 50700"},
		{"Feb 11, 2016 2:05 PM", "2.11.2016 month day year 50700 half"},
		{"Thu 11/02/2016 14:05", "11.2.2016 50700"},
		{"11 août 2016", "11.8.2016 day month year"},
		{"11 Feb 016", "none"}, {"Feb 11, 016", "none"},
		{"2016-Feb-11", "2016.2.11 year month day"},
		// clocks and durations
		{"2:05", "clock2 7500"},
		{"14:05:10", "clock3 50710"},
		{"26:00:00", "clock3 93600"},
		{"14:05 Z", "none"}, {"14:05:00+01:00", "none"},
		{"2:05 PM", "clock2 50700 half"},
		{"0:01:02.5", "clock3 62.5"},
		{"2:05.5", "clock2 7530 short"},
		// numbers
		{"0.764", "0.764"},
		{"0,5", "0.5 comma"},
		{"-3", "-3"},
		{"12 s", "12 s"},
		{"1.5min", "1.5 min"},
		{"1e3", "1000"},
		// neither
		{"", "none"}, {"soon", "none"}, {"2:65", "none"}, {"1:2:3", "none"}, {"11/02", "none"}, {"11/02/2016 14", "none"}, {"11/02/2016 25:61", "none"},
		{"NaN", "none"}, {"Inf", "none"}, {"0x10", "none"}, {"11/02/20166", "none"}, {"12 apples", "none"}, {"1/2/3/4", "none"}, {"2016-02-11T", "2016.2.11"},
	} {
		t.Run(c.typed, func(t *testing.T) {
			if got := sayStamp(readStamp([]byte(c.typed))); got != c.want {
				t.Errorf("%q is %q, expected %q", c.typed, got, c.want)
			}
		})
	}
}

// TestHalves holds every word for before and after noon: 12 o'clock is 0 before it.
func TestHalves(t *testing.T) {
	for _, c := range []struct{ words, want string }{
		{"am|AM|a.m.|a. m.|A|dop.|dopoledne|vorm.|vm|fm|f.m.|du matin|matin|de la mañana|da manhã|ant.|antim.|przed południem|ap.|ap|πμ|π.μ.|de|de.|öö|ÖÖ|上午|午前|오전|ص", "13.2.2026 1800 half"},
		{"pm|PM|p.m.|p. m.|P|odp.|odpoledne|nachm.|nm|em|e.m.|de l'après-midi|soir|de la tarde|de la noche|da tarde|da noite|pom.|po południu|ip.|μμ|μ.μ.|du|du.|ös|ÖS|下午|午後|오후|م", "13.2.2026 45000 half"},
	} {
		for _, w := range strings.Split(c.words, "|") {
			if got := sayStamp(readStamp([]byte("13.2.2026 12:30 " + w))); got != c.want {
				t.Errorf("%q is %q, expected %q", w, got, c.want)
			}
		}
	}
}

// sayStamp writes a stamp down.
func sayStamp(s stamp) string {
	var b strings.Builder
	switch s.form {
	case noStamp:
		return "none"
	case dateStamp:
		fmt.Fprintf(&b, "%d.%d.%d", s.date[0], s.date[1], s.date[2])
		if s.order != 0 {
			fmt.Fprintf(&b, " %s", s.order)
		}
	case clockStamp:
		fmt.Fprintf(&b, "clock%d", s.groups)
	case numberStamp:
		fmt.Fprintf(&b, "%g", s.sec)
		if s.unit != "" {
			fmt.Fprintf(&b, " %s", s.unit)
		}
		if s.comma {
			b.WriteString(" comma")
		}
		return b.String()
	}
	if s.timed {
		fmt.Fprintf(&b, " %g", s.sec)
	}
	if s.zoned {
		fmt.Fprintf(&b, " %+d", s.east)
	}
	if s.short {
		b.WriteString(" short")
	}
	if s.half {
		b.WriteString(" half")
	}
	return b.String()
}

// TestNumbers holds the grammar of readings: the number, and what stands behind it.
func TestNumbers(t *testing.T) {
	for _, c := range []struct {
		typed string
		x     float64
		rest  string
		bad   flaw
	}{
		{"69.5", 69.5, "", fine},
		{"69,557", 69.557, "", fine},
		{" +4 ", 4, "", fine},
		{"−43,6", -43.6, "", fine},
		{"- 3", -3, "", fine},
		{"-0.0", 0, "", fine},
		{"165 °F", 165, "°F", fine},
		{"75C", 75, "C", fine},
		{"75\u00a0°C", 75, "°C", fine},
		{"6.5E-2", 0.065, "", fine},
		{"9.9E37", 9.9e37, "", fine},
		{"0.1234567890123456789", 0.1234567890123456789, "", fine},
		{"123456789012345678901", 123456789012345678901, "", fine},
		{".5", 0.5, "", fine},
		{"5.", 5, "", fine},
		{"1.234,5", 0, "", bothSigns},
		{"1,2,3", 0, "", noNumber},
		{">75", 0, "", compared},
		{"≥75", 0, "", compared},
		{"<0", 0, "", compared},
		{"~5", 0, "", compared},
		{"1e999", 0, "", endless},
		{"NaN", 0, "", noNumber},
		{"Inf", 0, "", noNumber},
		{"-", 0, "", noNumber},
		{"", 0, "", noNumber},
		{"1e", 1, "e", fine},
	} {
		t.Run(c.typed, func(t *testing.T) {
			v, rest := readNumber([]byte(c.typed))
			if v.bad != c.bad || c.bad == fine && (v.x != c.x || string(rest) != c.rest) {
				t.Errorf("%q is %g with %q behind it (%d), expected %g, %q (%d)", c.typed, v.x, rest, v.bad, c.x, c.rest, c.bad)
			}
		})
	}
}

// TestHeadings holds how a heading is parted into its name and its unit.
func TestHeadings(t *testing.T) {
	for _, c := range []struct{ typed, name, unit string }{
		{"Probe 1 (°F)", "Probe 1", "°F"},
		{"Core [°C]", "Core", "°C"},
		{"Temp, °C (S/N 123)", "Temp", "°C"},
		{"Temp/°C", "Temp", "°C"},
		{"Temp °C", "Temp", "°C"},
		{"Temp. (Â°C)", "Temp.", "Â°C"},
		{"Temp_C", "Temp", "C"},
		{"Channel C", "Channel C", ""},
		{"Elapsed (mm:ss)", "Elapsed", "mm:ss"},
		{"t / s", "t", "s"},
		{"Date Time, GMT-07:00", "Date Time", "GMT-07:00"},
		{"RH (%)", "RH (%)", ""},
		{"Core (probe 2)", "Core (probe 2)", ""},
		{"Core (probe 2) (°C)", "Core (probe 2)", "°C"},
		{"Core (°C) left", "Core left", "°C"},
		{"°C", "°C", "°C"},
		{"C", "C", ""},
	} {
		t.Run(c.typed, func(t *testing.T) {
			if got := titleOf(c.typed); got.name != c.name || got.unit != c.unit {
				t.Errorf("%q is %q in %q, expected %q in %q", c.typed, got.name, got.unit, c.name, c.unit)
			}
		})
	}
}

// TestDegrees holds what has become of the sign for degrees on its way to the file.
func TestDegrees(t *testing.T) {
	for word, want := range map[string]string{
		"°C": "°C", "ºC": "°C", "˚C": "°C", "℃": "°C", "∞C": "°C", "Â°C": "°C", "oC": "°C", "° C": "°C", "deg C": "°C", "Deg. F": "°F", "degF": "°F", "*F": "°F", "¡C": "°C",
		"\ufffdC": "°C", "?F": "°F", "℉": "°F", "Celsius": "°C", "degrees Fahrenheit": "°F", "K": "K", "C": "°C", "C°": "°C",
		"%": "", "mV": "", "R": "", "min": "", "": "",
	} {
		got := ""
		if s := scaleOf(word); s != nil {
			got = s.name
		}
		if got != want {
			t.Errorf("%q is %q, expected %q", word, got, want)
		}
	}
}

// TestPatterns holds the patterns of dates that headings give.
func TestPatterns(t *testing.T) {
	for word, want := range map[string]order{
		"dd/mm/yyyy": dayFirst, "DD.MM.YY hh:mm:ss": dayFirst, "TT.MM.JJJJ": dayFirst, "jj/mm/aaaa": dayFirst, "dd-mm-aaaa": dayFirst, "mm/dd/yy": monthFirst,
		"yyyy-mm-dd": yearFirst, "aaaa-mm-dd": yearFirst, "hh:mm:ss": 0, "min": 0, "Date": 0, "": 0, "°C": 0,
	} {
		if got := patternOf(word); got != want {
			t.Errorf("%q is %v, expected %v", word, got, want)
		}
	}
}

// TestOffsets holds the writings of offsets from UTC.
func TestOffsets(t *testing.T) {
	for word, want := range map[string]int32{"UTC-07:00": -25200, "+01:00": 3600, "GMT+2": 7200, "UTC": 0, "Z": 0, "utc +5:30": 19800, "UTC−3": -10800, "+0530": 19800} {
		if got, err := offsetOf(word); err != nil || got != want {
			t.Errorf("%q is %d (%v), expected %d", word, got, err, want)
		}
	}
	for _, word := range []string{"CET", "Europe/Berlin", "7", "+15:00", "+1:99", "UTC+"} {
		if got, err := offsetOf(word); err == nil {
			t.Errorf("%q is %d, expected an error", word, got)
		}
	}
}

// TestGrid holds the smallest step of readings.
func TestGrid(t *testing.T) {
	for _, c := range []struct {
		name     string
		readings []string
		want     float64
	}{
		{"halves", []string{"20.0", "20.5", "21.5", "21.0", "22.5", "23.0", "24.5", "25.0", "24.0", "22.0"}, 0.5},
		{"three tenths", []string{"20.0", "20.3", "20.9", "21.2", "21.8", "22.1", "21.5", "22.4", "23.0", "23.3"}, 0.3},
		{"few changes: the last digit", []string{"70", "75", "80"}, 1},
		{"more places later", []string{"20", "21", "22", "23", "22", "21", "20", "21.5", "22.25", "23"}, 0.25},
		{"one", []string{"20.25"}, 0.01},
	} {
		t.Run(c.name, func(t *testing.T) {
			var g grid
			for _, r := range c.readings {
				v, _ := readNumber([]byte(r))
				g.add(v)
			}
			if got := g.size(); got < c.want*(1-1e-12) || got > c.want*(1+1e-12) {
				t.Errorf("%g, expected %g", got, c.want)
			}
		})
	}
}

// TestFiles are files that cannot be written into testdata: too large, none at all.
func TestFiles(t *testing.T) {
	dir := t.TempDir()
	file := func(name string, parts ...string) string {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, []byte(strings.Join(parts, "")), 0o644); err != nil {
			t.Fatal(err)
		}
		return path
	}
	huge := file("huge.csv", "T (s),B (°C)\n1,2\n")
	if err := os.Truncate(huge, mostText+1); err != nil {
		t.Fatal(err)
	}
	var rows strings.Builder
	for i := range 5000 {
		fmt.Fprintf(&rows, "%04d,%d\n", i, i%10)
	}
	many := file("many.csv", "T (s),B (°C)\n", rows.String())
	for _, c := range []struct{ name, path, want string }{
		{"missing", filepath.Join(dir, "none.csv"), `Records!D2: "none.csv" cannot be read: no such file or directory – check the name; it is looked for from the folder of the plan`},
		{"folder", dir, fmt.Sprintf("Records!D2: %q is a folder; a record is one file – name the file in it", filepath.Base(dir))},
		{"device", os.DevNull, `Records!D2: "null" is neither a file nor a folder – name a file`},
		{"huge", huge, `Records!D2: "huge.csv" has more than 1024 MB, the most that is read – export a part of the record, or with a longer interval`},
		{"long line", file("long.csv", "T (s),B (°C)\n1,2\n", strings.Repeat("x", mostLine+300_000), "\n2,3\n"), `Records!D2: "long.csv" has a line of more than 1 MB – export the record again, one reading a line`},
		{"many rows", many, `Records!D2: "many.csv" has more than 1000 readings, the most that one record may have; by its size it has about 5000 – export it with a longer interval, such as a reading every 10 seconds, or divide it into several files`},
		{"zeros at the end", file("zeros.csv", "T (s),B (°C)\n1,2\n2,3\n", strings.Repeat("\x00", 3<<20)), "zeros.csv line 4: The file ends in zero bytes, which are ignored"},
		{"zeros inside", file("lost.csv", "T (s),B (°C)\n1,2\n2,3\n", strings.Repeat("\x00", 3<<20), "3,4\n"), "lost.csv line 4: The line holds zero bytes, so a part of the record is lost or it is UTF-16 without a mark – export the record again, as CSV UTF-8"},
		{"blanks only", file("blank.csv", "\n \n\n"), `Records!D2: "blank.csv" is empty – export the record again`},
		{"headings beyond what is looked at", file("late.csv", strings.Repeat("a remark\n", headRows), "T (s),B (°C)\n1,2\n"), `Records!F2: "T" is no heading with readings below that could be found, and as a letter it is beyond the last column, A – correct it` + "\n" +
			`Records!G2: "B (°C)" is no heading with readings below that could be found, and as a letter it is beyond the last column, A – correct it`},
	} {
		t.Run(c.name, func(t *testing.T) {
			if (c.name == "missing" || c.name == "device") && runtime.GOOS == "windows" {
				t.Skip("the words of the system are others")
			}
			most := mostRows
			if c.name == "many rows" {
				most = 1000
			}
			_, problems := read(Setting{File: c.path, Time: "T", Temperature: "B (°C)", Cells: places}, most)
			if got := problems.Error(); got != c.want {
				t.Errorf("got      %s\nexpected %s", got, c.want)
			}
		})
	}
}

// TestRounded holds counts in messages to two digits.
func TestRounded(t *testing.T) {
	for n, want := range map[int]string{0: "0", 7: "7", 99: "99", 104: "100", 2_000_000: "2 million", 10_040_000: "10 million", 1_949_999: "1.9 million", 999_999: "1 million"} {
		if got := rounded(n); got != want {
			t.Errorf("%d: %s, expected %s", n, got, want)
		}
	}
}

// TestVanished is a file that is taken away while it is read.
func TestVanished(t *testing.T) {
	path := filepath.Join(t.TempDir(), "probe.csv")
	if err := os.WriteFile(path, []byte("T (s),B (°C)\n1,2\n2,3\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	r := &reader{set: Setting{File: path, Name: "probe.csv", Cells: places}, log: &Log{}, most: mostRows}
	if !r.settings() || !r.file() {
		t.Fatal(r.problems)
	}
	if err := os.Remove(path); err != nil {
		t.Skip("an open file cannot be removed here: ", err)
	}
	r.table()
	if got := r.problems.Error(); !strings.HasPrefix(got, `Records!D2: "probe.csv" cannot be read: `) || r.problems.Faults() != 1 {
		t.Error(got)
	}
}

// TestPieces holds that lines are the same however the file comes in pieces.
func TestPieces(t *testing.T) {
	text := "T (s);B (°C)\n" + strings.Repeat("1;2\r\n", 3) + "\"2\";\"3\"\n"
	for size := 1; size < 20; size++ {
		l := newLineReader(&pieces{[]byte(text), size}, '\n')
		l.buf = make([]byte, 4)
		var lines []string
		for {
			line, err := l.next()
			if err != nil {
				break
			}
			lines = append(lines, string(line))
		}
		if got := strings.Join(lines, "\n") + "\n"; got != text {
			t.Fatalf("in pieces of %d: %q", size, got)
		}
	}
}

// pieces gives its bytes a few at a time.
type pieces struct {
	b    []byte
	size int
}

func (p *pieces) Read(b []byte) (int, error) {
	n := copy(b, p.b[:min(p.size, len(p.b))])
	if p.b = p.b[n:]; n == 0 {
		return 0, io.EOF
	}
	return n, nil
}

// TestDivides holds what divides the cells of a text.
func TestDivides(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       byte
	}{
		{"a comma within quotes in the headings", "\"Date Time, GMT-07:00\";\"Temp, °C\"\n1;2\n3;4\n", ';'},
		{"decimal commas", "T;B\n1,5;2,5\n3,5;4,5\n", ';'},
		{"tabs", "T\tB\n2026-02-11 14:00\t2,5\n2026-02-11 14:01\t2,5\n", '\t'},
		{"bars", "T|B\n1|2\n", '|'},
		{"commas", "T,B\n2026-02-11 14:00,2.5\n2026-02-11 14:01,2.5\n", ','},
		{"blanks", "T   B\n1   2\n10  3\n", ' '},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := divides([]byte(c.text), '\n'); got != c.want {
				t.Errorf("%q, expected %q", got, c.want)
			}
		})
	}
}

// TestLog holds what is not in the words of testdata: corrections, digests, echoes, starts in UTC.
func TestLog(t *testing.T) {
	name := filepath.Join(t.TempDir(), "probe.csv")
	var text bytes.Buffer
	text.WriteString("Time,Core (°F)\n")
	for i := range 9 {
		fmt.Fprintf(&text, "2026-02-11 23:5%d:00,%d\n", i, 50+9*i)
	}
	if err := os.WriteFile(name, text.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	l, problems := Read(Setting{File: name, Time: "Time", Temperature: "Core", Zone: "UTC-07:00", Corrections: 0.25})
	if l == nil {
		t.Fatal(problems)
	}
	if want := time.Date(2026, 2, 12, 6, 50, 0, 0, time.UTC); !l.Start.Equal(want) || !l.Dated {
		t.Errorf("starts at %v, expected %v", l.Start, want)
	}
	if l.C[0] != 10.25 || l.C[8] != 50.25 || l.TimesS[8] != 480 { // (50 − 32)/1.8 + 0.25
		t.Errorf("%v at %v", l.C, l.TimesS)
	}
	if l.SHA256 != digestOf(text.Bytes()) {
		t.Errorf("the digest is %s", l.SHA256)
	}
	var echo []string
	for _, e := range l.Echo {
		echo = append(echo, fmt.Sprintf("%d %s %s %g %g %v", e.Line, e.Time, e.Read, e.S, e.C, e.Taken))
	}
	want := "2 2026-02-11 23:50:00 50 0 10.25 true; 3 2026-02-11 23:51:00 59 60 15.25 true; 4 2026-02-11 23:52:00 68 120 20.25 true; " +
		"8 2026-02-11 23:56:00 104 360 40.25 true; 9 2026-02-11 23:57:00 113 420 45.25 true; 10 2026-02-11 23:58:00 122 480 50.25 true"
	if got := strings.Join(echo, "; "); got != want {
		t.Errorf("echo\n%s, expected\n%s", got, want)
	}
	_, problems = Read(Setting{File: name, Time: "Tim", Temperature: "Core"})
	if len(problems) != 1 || !problems[0].At.IsZero() || problems[0].Field != setTime || problems[0].Level != cell.Fault {
		t.Errorf("without cells: %+v", problems)
	}
}

func digestOf(b []byte) string {
	sum := sha256.Sum256(b)
	return hex.EncodeToString(sum[:])
}
