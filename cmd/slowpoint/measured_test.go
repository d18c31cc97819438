package main

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"slowpoint/cmd/slowpoint/record"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// TestLaidOut: steps begin as a record's row says, and where it says nothing they are as long as in the plan.
func TestLaidOut(t *testing.T) {
	steps := []model.Step{{Name: "Oven"}, {Name: "Rest"}, {Name: "Chill"}}
	lengths := []float64{600, 120, 1200}
	clock := func(h, m int) time.Duration { return time.Duration(h)*time.Hour + time.Duration(m)*time.Minute }
	evening := time.Date(2026, 1, 19, 23, 50, 0, 0, time.UTC)
	day := time.Date(2026, 1, 20, 0, 0, 0, 0, time.UTC)
	for _, c := range []struct {
		name   string
		starts []workbook.Start
		long   float64 // the last reading, s after the first
		first  int
		want   []float64
		fault  string
	}{
		{"nothing said", nil, 3000, 0, []float64{0, 600, 720, 3000}, ""},
		{"the record ends early", nil, 650, 0, []float64{0, 600, 650}, ""},
		{"from a later step", []workbook.Start{{Step: "Chill", Typed: "Chill"}}, 900, 2, []float64{0, 900}, ""},
		{"over midnight", []workbook.Start{{Step: "Oven", Clock: true, After: clock(23, 55), Typed: "Oven 23:55"}, {Step: "Chill", Clock: true, After: clock(0, 10), Typed: "Chill 00:10"}},
			3600, 0, []float64{300, 900, 1200, 3600}, ""},
		{"with its date", []workbook.Start{{Step: "Chill", Clock: true, Date: day, After: clock(0, 10), Typed: "Chill 2026-01-20 00:10"}}, 3600, 2, []float64{1200, 3600}, ""},
		{"to its end", []workbook.Start{{Step: "Rest", Elapsed: true, After: time.Minute, Typed: "Rest 1 min"}, {End: true, Elapsed: true, After: 10 * time.Minute, Typed: "end 10 min"}},
			3600, 1, []float64{60, 180, 600}, ""},
		{"ended within a step", []workbook.Start{{Elapsed: true, Typed: "0 s"}, {End: true, Elapsed: true, After: 5 * time.Minute, Typed: "end 5 min"}}, 3600, 0, []float64{0, 300}, ""},
		{"longer than it could be", []workbook.Start{{Step: "Oven", Typed: "Oven"}, {Step: "Chill", Elapsed: true, After: 300 * time.Second, Typed: "Chill 300 s"}},
			3600, 0, nil, "Rest would begin by the plan's durations at 2026-01-20 00:00:00, which is after Chill began"},
		{"before the record", []workbook.Start{{Clock: true, Date: day.AddDate(0, 0, -1), After: clock(23, 0), Typed: "2026-01-19 23:00"}}, 3600, 0, nil, "is before the first reading, at 2026-01-19 23:50:00"},
		{"after the record", []workbook.Start{{Clock: true, After: clock(12, 0), Typed: "12:00"}}, 3600, 0, nil, "lies outside the readings, which go from 2026-01-19 23:50:00 to 2026-01-20 00:50:00"},
		{"a day too many", []workbook.Start{{Clock: true, After: clock(0, 10), Typed: "00:10"}}, 90000, 0, nil, "has no date, and the record is longer than a day"},
		{"the end alone", []workbook.Start{{End: true, Elapsed: true, After: time.Minute, Typed: "end 1 min"}}, 3600, 0, nil, "says when the chain ended, and not when it began"},
	} {
		log := &record.Log{Start: evening, Dated: true, TimesS: []float64{0, c.long}}
		got, wrong := laidOut(&workbook.Record{Starts: c.starts}, log, steps, lengths)
		switch {
		case wrong != nil && (c.fault == "" || !strings.HasPrefix(wrong.Msg, c.fault)):
			t.Errorf("%s: %s, want %q", c.name, wrong.Msg, c.fault)
		case wrong == nil && c.fault != "":
			t.Errorf("%s: no error, want %q", c.name, c.fault)
		case wrong == nil && (got.first != c.first || fmt.Sprint(got.startS) != fmt.Sprint(c.want)):
			t.Errorf("%s: from step %d at %v, want %d at %v", c.name, got.first, got.startS, c.first, c.want)
		}
	}
	// the clocks that people write are those of the file, whatever its zone
	zoned := &record.Log{Start: time.Date(2026, 1, 19, 9, 0, 0, 0, time.FixedZone("UTC+01:00", 3600)), Dated: true, TimesS: []float64{0, 7200}}
	if got, wrong := laidOut(&workbook.Record{Starts: []workbook.Start{{Step: "Oven", Clock: true, After: clock(9, 10), Typed: "Oven 09:10"}}}, zoned, steps, lengths); wrong != nil || got.startS[0] != 600 {
		t.Errorf("%v %v, want a start after 600 s", got, wrong)
	}
	if _, wrong := laidOut(&workbook.Record{}, zoned, steps, []float64{math.NaN(), 120, 1200}); wrong == nil || !strings.HasPrefix(wrong.Msg, "does not say when Rest began") {
		t.Errorf("a step of no known length: %v", wrong)
	}
	if _, wrong := laidOut(&workbook.Record{Starts: []workbook.Start{{Clock: true, Typed: "09:00"}}}, &record.Log{TimesS: []float64{0, 60}}, steps, lengths); wrong == nil {
		t.Error("a clock is taken for a file that has none")
	}
}

// TestSimplified: the straight lines that stand for readings stay near them, and keep both ends.
func TestSimplified(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 8))
	for range 50 {
		c := model.Course{Name: "air"}
		x, y := 0.0, 3.0
		for range 2 + rng.IntN(1500) {
			c.TimesS, c.C = append(c.TimesS, x), append(c.C, y)
			x += 5 + 50*rng.Float64()
			y += 0.3 * rng.NormFloat64() * float64(rng.IntN(2))
		}
		s := simplified(c)
		n := len(c.TimesS)
		if s.TimesS[0] != 0 || s.TimesS[len(s.TimesS)-1] != c.TimesS[n-1] {
			t.Fatal("an end is gone")
		}
		k := 0
		for i := range n {
			for s.TimesS[k+1] < c.TimesS[i] {
				k++
			}
			f := (c.TimesS[i] - s.TimesS[k]) / (s.TimesS[k+1] - s.TimesS[k])
			if d := math.Abs(s.C[k] + f*(s.C[k+1]-s.C[k]) - c.C[i]); d > simplifyK+1e-9 {
				t.Fatalf("%g K from a reading", d)
			}
		}
	}
}

// flicker is the air of a room by a logger of tenths: up and down by one, reading by reading, the hardest to stand for by lines.
func flicker(n int) model.Course {
	c := model.Course{TimesS: make([]float64, n), C: make([]float64, n)}
	for i := range n {
		c.TimesS[i], c.C[i] = 5*float64(i), 3+0.1*float64(i%2)
	}
	return c
}

// TestSimplifiedLong: four times the readings take about four times the looks, not sixteen times.
func TestSimplifiedLong(t *testing.T) {
	looks := func(n int) (k int) {
		simplifiedBy(flicker(n), &k)
		return k
	}
	if a, b := looks(20_000), looks(80_000); b > 5*a || a == 0 {
		t.Errorf("%d looks for 20000 readings, %d for 80000", a, b)
	}
}

// BenchmarkSimplified takes a log of a million readings.
func BenchmarkSimplified(b *testing.B) {
	c := flicker(1_000_000)
	for b.Loop() {
		if s := simplified(c); len(s.C) < 2 {
			b.Fatal("nothing is left")
		}
	}
}

// logFile writes a logger's file of minutes and °C into a folder.
func logFile(t *testing.T, folder, name string, minutes, c []float64) {
	t.Helper()
	var b strings.Builder
	b.WriteString("Elapsed (min),Air (°C)\n")
	for i := range minutes {
		fmt.Fprintf(&b, "%g,%.2f\n", minutes[i], c[i])
	}
	if err := os.WriteFile(filepath.Join(folder, name), []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}

// withAir gives a runner a record of the air of its only step.
func withAir(t *testing.T, r *runner, minutes, c []float64, accuracyK float64) {
	t.Helper()
	dir := t.TempDir()
	logFile(t, dir, "air.csv", minutes, c)
	r.plan.Records = []workbook.Record{{Name: "Air", Products: []*workbook.Product{&r.plan.Products[0]}, File: "air.csv", Time: "Elapsed (min)", Temperature: "Air (°C)",
		Measured: "medium of bath", Of: workbook.OfMedium, Step: "bath", AccuracyK: &accuracyK, Sound: true}}
	r.logs = newLogs(r.plan, dir, time.Time{})
}

// minutes are the whole minutes up to and with n, and a temperature at each.
func minutesOf(n int, c func(m int) float64) (at, what []float64) {
	for m := 0; m <= n; m++ {
		at, what = append(at, float64(m)), append(what, c(m))
	}
	return at, what
}

// TestDeviateAsPlanned: air that was as planned leaves the margins where they were, but for the accuracy of the instrument; warmer air shifts
// the whole course of a food of constant properties, for it is linear: 1 K of air and of start together is 1 K of margin.
func TestDeviateAsPlanned(t *testing.T) {
	const film, medium, start = 25.0, 2.0, 60.0
	for _, c := range []struct{ air, accuracy float64 }{{medium, 0}, {medium, 0.5}, {medium + 1, 0}} {
		r, p := slabRunner(model.Cool, 0.04, start, medium, film, 2*3600, coolTo(8, 2*3600))
		at, air := minutesOf(125, func(m int) float64 { return c.air + 0.01*float64(m%2) }) // a constant channel is refused
		withAir(t, r, at, air, c.accuracy)
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		v, _ := r.deviate(p, out)
		if v == nil || len(v.Judgement.Findings) != 1 {
			t.Fatalf("no deviation: %+v", v)
		}
		for _, m := range v.Records {
			if m.Problems.Faults() > 0 {
				t.Fatal(m.Problems)
			}
		}
		before, after := *out.Judgement.Findings[0].MarginK, *v.Judgement.Findings[0].MarginK
		warmer := c.air + c.accuracy + simplifyK + 0.005 - medium // with half of the resolution
		want := -warmer * (1 - centreLeft(0.04, film, 2*3600))
		if got := after - before; math.Abs(got-want) > 0.02 {
			t.Errorf("air of %g °C ± %g K: the margin moves by %.3f K, want %.3f", c.air, c.accuracy, got, want)
		}
	}
}

// TestDeviateGap: what the air did in a gap nobody knows; the whole range of the record is judged, and the less favourable end counts.
func TestDeviateGap(t *testing.T) {
	margin := func(from, to int) float64 {
		r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 2*3600, coolTo(8, 2*3600))
		var at, air []float64
		for m := 0; m <= 125; m++ {
			if m > from && m < to {
				continue
			}
			c := 2.0
			if m >= 115 { // once it was warm, at the end
				c = 12
			}
			at, air = append(at, float64(m)), append(air, c)
		}
		withAir(t, r, at, air, 0)
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		v, _ := r.deviate(p, out)
		return *v.Judgement.Findings[0].MarginK
	}
	whole, gap := margin(0, 0), margin(30, 90)
	if gap > whole-1 {
		t.Errorf("an hour without readings, in which the air may have been as warm as it once was, leaves a margin of %.2f K, and the whole log %.2f K", gap, whole)
	}
}

// TestDeviateRefuses what does not cover its step.
func TestDeviateRefuses(t *testing.T) {
	r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 2*3600, coolTo(8, 2*3600))
	at, air := minutesOf(60, func(int) float64 { return 2 })
	air[3] = 2.4
	withAir(t, r, at, air, 0)
	out, err := r.judged(p)
	if err != nil {
		t.Fatal(err)
	}
	v, _ := r.deviate(p, out)
	if v.Judgement.Verdict != rules.CannotTell || v.Records[0].Problems.Faults() != 1 || !strings.Contains(v.Records[0].Problems[0].Msg, "ends at 1 h after the first reading, and bath needs it up to 2 h") {
		t.Errorf("%v: %v", v.Judgement.Verdict, v.Records[0].Problems)
	}
}

// TestAgainst: a record that is the prediction at its centre lies on it; one that is 2 K colder lies 2 K from it, on the unfavourable side
// while heated.
func TestAgainst(t *testing.T) {
	for _, off := range []float64{0, -2} {
		r, p := slabRunner(model.Cook, 0.04, 5, 90, 60, 3600, heatTo(70))
		p.Points = []model.Point{{Name: "probe", Place: model.Place{UpM: 0.005}}}
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		dir := t.TempDir()
		at, c := minutesOf(60, func(m int) float64 { return out.History.At(model.Place{UpM: 0.005}, float64(m)*60) + off })
		logFile(t, dir, "probe.csv", at, c)
		accuracy := 0.3
		r.plan.Records = []workbook.Record{{Name: "R", Products: []*workbook.Product{p}, File: "probe.csv", Time: "Elapsed (min)", Temperature: "Air (°C)", Measured: "probe",
			Of: workbook.AtPoint, Place: p.Points[0], AccuracyK: &accuracy, Sound: true}}
		r.logs, r.fit = newLogs(r.plan, dir, time.Time{}), fitting{film: off == 0}
		r.measure(p, out, nil)
		m := out.Measured[0]
		if m.History == nil || m.Against == nil {
			t.Fatal(m.Problems)
		}
		a := m.Against
		if math.Abs(a.BiasK-off) > 0.005 || math.Abs(a.RMSK-math.Abs(off)) > 0.006 || math.Abs(a.ColderK-max(-off, 0)) > 0.01 || a.WarmerK != 0 {
			t.Errorf("off by %g K: bias %g, root mean square %g, colder %g, warmer %g", off, a.BiasK, a.RMSK, a.ColderK, a.WarmerK)
		}
		slow := 0.0
		for i := range a.TimesS {
			slow = max(slow, a.C[i]-out.History.At(model.Place{}, a.TimesS[i]))
		}
		if slow < 0.5 || math.Abs(a.SlowestK-slow) > 0.01 {
			t.Errorf("the slowest place lies %g K below the probe, want %g", a.SlowestK, slow)
		}
		if off == 0 && (len(a.Fitted) != 1 || a.Fitted[0].Low > 60 || a.Fitted[0].High < 60 || math.Abs(a.Fitted[0].Value-60) > 0.5) {
			t.Errorf("fitted %+v, want a film of 60 W/(m²·K)", a.Fitted)
		}
		if want := 0.3 + m.ResolutionK/2; math.Abs(m.History.ErrorK-want) > 1e-9 {
			t.Errorf("the error counted is %g K, want %g", m.History.ErrorK, want)
		}
	}
}

// TestFittedChangesNoVerdict of a record or of the prediction.
func TestFittedChangesNoVerdict(t *testing.T) {
	verdicts := func(f fitting) string {
		r, p := slabRunner(model.Cook, 0.04, 5, 90, 60, 3600, heatTo(70))
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		dir := t.TempDir()
		at, c := minutesOf(60, func(m int) float64 { return out.History.At(model.Place{}, float64(m)*60) * 0.8 })
		logFile(t, dir, "probe.csv", at, c)
		r.plan.Records = []workbook.Record{{Name: "R", Products: []*workbook.Product{p}, File: "probe.csv", Time: "Elapsed (min)", Temperature: "Air (°C)", Measured: "slowest point",
			Of: workbook.AtSlowest, Sound: true}}
		r.logs, r.fit = newLogs(r.plan, dir, time.Time{}), f
		r.measure(p, out, nil)
		if f.film && len(out.Measured[0].Against.Fitted) == 0 {
			t.Error("nothing was fitted: " + out.Measured[0].Against.NotFitted)
		}
		return fmt.Sprint(out.Judgement.Verdict, out.Measured[0].Judgement.Verdict)
	}
	if a, b := verdicts(fitting{}), verdicts(fitting{film: true, conductivity: true}); a != b || !strings.HasSuffix(a, "not met") {
		t.Errorf("%s without a fit and %s with it; want a record that is not met", a, b)
	}
}

// TestRecordedAirHelps: with a record of the air, the prediction beside a probe is that of the air as it was, and a gap of the probe is bounded by
// what the air can have done to the food.
func TestRecordedAirHelps(t *testing.T) {
	judged := func(withAir bool) *report.Measured {
		r, p := slabRunner(model.Cool, 0.04, 60, 5, 25, 2*3600, coolTo(35, 90*60)) // planned at 5 °C
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		warm := *p
		warm.Steps = append([]model.Step(nil), p.Steps...)
		warm.Steps[0].Medium.C = []float64{9} // it was 9 °C
		truth, err := model.Solve(warm.Product, warm.Steps, model.Options{})
		if err != nil {
			t.Fatal(err)
		}
		dir := t.TempDir()
		var at, c []float64
		for m := 0; m <= 120; m++ {
			if m <= 80 || m >= 100 {
				at, c = append(at, float64(m)), append(c, truth.At(model.Place{}, float64(m)*60))
			}
		}
		logFile(t, dir, "probe.csv", at, c)
		at, c = minutesOf(121, func(m int) float64 { return 9 + 0.01*float64(m%2) })
		logFile(t, dir, "air.csv", at, c)
		exact := 0.1
		probe := workbook.Record{Name: "Probe", Products: []*workbook.Product{p}, File: "probe.csv", Time: "Elapsed (min)", Temperature: "Air (°C)", Measured: "slowest point",
			Of: workbook.AtSlowest, AccuracyK: &exact, Sound: true}
		air := probe
		air.Name, air.File, air.Measured, air.Of, air.Step = "Air", "air.csv", "medium of bath", workbook.OfMedium, "bath"
		r.plan.Records = []workbook.Record{probe}
		if withAir {
			r.plan.Records = append(r.plan.Records, air)
		}
		r.logs = newLogs(r.plan, dir, time.Time{})
		_, media := r.deviate(p, out)
		r.measure(p, out, media)
		if es := out.Measured[0].Problems; es.Faults() > 0 {
			t.Fatal(es)
		}
		return &out.Measured[0]
	}
	alone, with := judged(false), judged(true)
	if alone.Against.Air || alone.Against.BiasK < 1 || !with.Against.Air || math.Abs(with.Against.BiasK) > 0.02 {
		t.Errorf("the record lies %.3f K from the plan and %.3f K from the air as it was", alone.Against.BiasK, with.Against.BiasK)
	}
	if a, b := alone.Judgement.Findings[0], with.Judgement.Findings[0]; a.Verdict != rules.CannotTell || b.Verdict != rules.Met {
		t.Errorf("without the air %v (%s), with it %v (%s)", a.Verdict, a.Why, b.Verdict, b.Why)
	}
}

// TestAirTooShort: air that was recorded for less time than the probe says that the step lasted is not taken for the prediction beside it, and that is said.
func TestAirTooShort(t *testing.T) {
	for _, c := range []struct{ minutes, notes int }{{120, 0}, {121, 0}, {150, 1}} {
		r, p := slabRunner(model.Cool, 0.04, 60, 5, 25, 2*3600, coolTo(35, 90*60))
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		at, air := minutesOf(121, func(m int) float64 { return 9 + 0.01*float64(m%2) })
		withAir(t, r, at, air, 0.1)
		at, core := minutesOf(c.minutes, func(m int) float64 { return 60 - 0.3*float64(m) })
		logFile(t, r.logs.folder, "core.csv", at, core)
		probe := r.plan.Records[0]
		probe.Name, probe.File, probe.Of, probe.Measured = "Core", "core.csv", workbook.AtSlowest, "slowest point"
		r.plan.Records = append(r.plan.Records, probe)
		r.logs = newLogs(r.plan, r.logs.folder, time.Time{})
		_, media := r.deviate(p, out)
		r.measure(p, out, media)
		m := out.Measured[0]
		n := 0
		for _, e := range m.Problems {
			if e.Level == cell.Note && strings.Contains(e.Msg, "Beside it bath is calculated for 2 h 30 min, and was recorded for 2 h by Air") {
				n++
			}
		}
		if n != c.notes || m.Against == nil || m.Against.Air != (c.notes == 0) {
			t.Errorf("a probe of %d min: %v, %+v", c.minutes, m.Problems, m.Against.Air)
		}
	}
}

// TestElsewhere: what stands still may come to the temperature of a kitchen that the plan knows, else to all that it knows.
func TestElsewhere(t *testing.T) {
	step := func(s *model.Stage, c float64) model.Step {
		return model.Step{Stage: s, Exposure: model.Exposure{Medium: model.Course{TimesS: []float64{0}, C: []float64{c}}}}
	}
	for _, c := range []struct {
		name  string
		steps []model.Step
		i     int
		want  []float64
	}{
		{"a kitchen", []model.Step{step(model.Cook, 120), step(model.Rest, 22), step(model.Cool, 1)}, 2, []float64{22, 1}},
		{"no kitchen", []model.Step{step(model.Cook, 120), step(model.Cool, 1)}, 1, []float64{120, 1}},
		{"an oven", []model.Step{step(model.Cook, 120), step(model.Rest, 22), step(model.Cool, 1)}, 0, []float64{120, 22, 1}},
	} {
		if got := elsewhere(c.steps, c.i); fmt.Sprint(got) != fmt.Sprint(c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

// TestDeviateStopped: a log that stops with its chiller, and is cold on both sides of its gap, shows nothing of the time between.
func TestDeviateStopped(t *testing.T) {
	r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 2*3600, coolTo(20, 2*3600))
	kitchen := p.Steps[0]
	kitchen.Name, kitchen.Stage, kitchen.DurationS = "carry", model.Rest, 1
	kitchen.Medium.C = []float64{25}
	p.Steps = []model.Step{kitchen, p.Steps[0]}
	var at, air []float64
	for m := 0; m <= 125; m++ {
		if m < 10 || m > 115 {
			at, air = append(at, float64(m)), append(air, 2+0.01*float64(m%2))
		}
	}
	withAir(t, r, at, air, 0)
	out, err := r.judged(p)
	if err != nil {
		t.Fatal(err)
	}
	v, _ := r.deviate(p, out)
	if len(v.Judgement.Findings) != 1 || out.Judgement.Findings[0].Verdict != rules.Met || v.Judgement.Verdict != rules.CannotTell {
		t.Errorf("as planned %v (%s), as recorded %v (%s): want met and cannot tell", out.Judgement.Verdict, out.Judgement.Findings[0].Why, v.Judgement.Verdict, v.Judgement.Findings[0].Why)
	}
}

// TestMediumStarts: the step of a medium begins when the steps before it, of which one is written down, are over.
func TestMediumStarts(t *testing.T) {
	_, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 1800, coolTo(8, 1800))
	oven := p.Steps[0]
	oven.Name, oven.Stage = "oven", model.Cook
	p.Steps = []model.Step{oven, p.Steps[0]}
	lengths := []float64{600, 1800}
	log := &record.Log{StepS: 60}
	for m := 0; m <= 90; m++ { // it reads the minute
		log.TimesS, log.C = append(log.TimesS, 60*float64(m)), append(log.C, float64(m))
	}
	after := func(step string, m int) workbook.Start {
		return workbook.Start{Step: step, Elapsed: true, After: time.Duration(m) * time.Minute, Typed: step}
	}
	end := workbook.Start{End: true, Elapsed: true, After: 50 * time.Minute, Typed: "end"}
	for _, c := range []struct {
		name     string
		starts   []workbook.Start
		from, to float64 // minutes
		fault    string
	}{
		{"nothing said", nil, 0, 30, ""},
		{"its own", []workbook.Start{after("bath", 7)}, 7, 37, ""},
		{"the one before", []workbook.Start{after("oven", 7)}, 17, 47, ""},
		{"both", []workbook.Start{after("oven", 3), after("bath", 20)}, 20, 50, ""},
		{"with its end", []workbook.Start{after("oven", 3), end}, 13, 50, ""},
		{"its end alone", []workbook.Start{end}, 0, 0, "does not say when bath began"},
		{"turned round", []workbook.Start{after("oven", 20), after("bath", 3)}, 0, 0, "is no later than the step before it"},
	} {
		rec := &workbook.Record{Step: "bath", Starts: c.starts}
		got, wrong := mediumOf(rec, log, p, lengths, describe(rec))
		switch {
		case wrong != nil:
			if c.fault == "" || wrong.Msg != c.fault {
				t.Errorf("%s: %s, want %q", c.name, wrong.Msg, c.fault)
			}
		case c.fault != "":
			t.Errorf("%s: no error, want %q", c.name, c.fault)
		default:
			k := got.courses[0]
			if n := len(k.C) - 1; k.C[0] != c.from || k.C[n] != c.to || math.Abs(got.durationS-60*(c.to-c.from)) > 1e-6 {
				t.Errorf("%s: from minute %g to %g for %g s, want %g to %g", c.name, k.C[0], k.C[n], got.durationS, c.from, c.to)
			}
		}
	}
}

// TestFromTheInstant: steps that begin and end between readings are judged from these instants, and not from the readings within them.
func TestFromTheInstant(t *testing.T) {
	for _, c := range []struct {
		name       string
		stage      *model.Stage
		kind       *rules.Kind
		end        int // minute
		minutes, c []float64
		verdict    rules.Verdict
	}{
		// 50 °C at 120 min, 5 °C by about 230 min: 165 min after the step began at 65 min, and 110 min after the first reading in it
		{"a clock of the stage", model.Cool, rules.CoolWithin, 290, []float64{0, 60, 120, 180, 230, 290}, []float64{80, 75, 50, 20, 4.8, 4}, rules.CannotTell},
		{"kept to the end", model.HoldHot, rules.StayAbove, 235, []float64{0, 60, 120, 180, 240}, []float64{80, 75, 64, 64, 50}, rules.CannotTell},
		{"kept to the last reading", model.HoldHot, rules.StayAbove, 180, []float64{0, 60, 120, 180, 240}, []float64{80, 75, 64, 64, 50}, rules.Met},
	} {
		r, p := slabRunner(c.stage, 0.04, 60, 2, 25, 2*3600, coolTo(5, 2*3600))
		l := &r.plan.Limits[0]
		l.Kind, l.Stages = c.kind, []*model.Stage{c.stage}
		from := 63.0
		l.FromC, l.Clock = nil, rules.Clock{Start: c.stage}
		if c.kind == rules.StayAbove {
			l.FromC, l.ToC, l.TimeS, l.Clock = &from, nil, nil, rules.Clock{}
		}
		dir := t.TempDir()
		logFile(t, dir, "core.csv", c.minutes, c.c)
		accuracy := 0.0
		r.plan.Records = []workbook.Record{{Name: "Core", Products: []*workbook.Product{p}, File: "core.csv", Time: "Elapsed (min)", Temperature: "Air (°C)", Measured: "slowest point",
			Of: workbook.AtSlowest, AccuracyK: &accuracy, Sound: true, Starts: []workbook.Start{
				{Step: "bath", Elapsed: true, After: 65 * time.Minute, Typed: "bath 65 min"}, {End: true, Elapsed: true, After: time.Duration(c.end) * time.Minute, Typed: "end"}}}}
		r.logs = newLogs(r.plan, dir, time.Time{})
		m := r.measured(&r.plan.Records[0], p, nil, nil)
		if len(m.Judgement.Findings) != 1 || m.Judgement.Verdict != c.verdict {
			t.Errorf("%s: %v: %+v %v, want %v", c.name, m.Judgement.Verdict, m.Judgement.Findings, m.Problems, c.verdict)
		}
	}
}

// TestNextDay: a first step whose clock is before the first reading's is taken for the next day's, with a warning.
func TestNextDay(t *testing.T) {
	log := &record.Log{Start: time.Date(0, 1, 1, 9, 12, 0, 0, time.UTC), TimesS: []float64{0, 82800}}
	for _, c := range []struct {
		hour, warnings int
	}{{7, 1}, {10, 0}} {
		m := describe(&workbook.Record{})
		nextDay(&workbook.Record{Starts: []workbook.Start{{Clock: true, After: time.Duration(c.hour) * time.Hour, Typed: "store"}}}, log, m)
		if len(m.Problems) != c.warnings || c.warnings > 0 && m.Problems[0].Level != cell.Warning {
			t.Errorf("%d h: %v, want %d warnings", c.hour, m.Problems, c.warnings)
		}
	}
}

// TestMediumUntil: a step that ends at a temperature may last longer in the recorded air than planned, as far as the log and its longest go.
func TestMediumUntil(t *testing.T) {
	_, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 3600, coolTo(8, 3600))
	eight := 8.0
	p.Steps[0].UntilC = &eight
	for _, c := range []struct{ log, want float64 }{{40, 40}, {90, 60}, {30, 30}} { // minutes
		log := &record.Log{StepS: 60}
		for m := 0.0; m <= c.log; m++ {
			log.TimesS, log.C = append(log.TimesS, 60*m), append(log.C, 2)
		}
		rec := &workbook.Record{Step: "bath"}
		got, wrong := mediumOf(rec, log, p, []float64{1800}, describe(rec))
		if wrong != nil || got.durationS != 60*c.want {
			t.Errorf("a log of %g min: %+v, %v, want %g min", c.log, got, wrong, c.want)
		}
	}
}

// TestMean of a course by hand: 10 to 20 in 60 s, 20 to 40 in the next 60 s, then 40.
func TestMean(t *testing.T) {
	c := model.Course{TimesS: []float64{0, 60, 120}, C: []float64{10, 20, 40}}
	for _, x := range []struct{ until, want float64 }{{30, 12.5}, {60, 15}, {90, 55.0 / 3}, {120, 22.5}, {240, 31.25}} {
		if got := mean(c, x.until); math.Abs(got-x.want) > 1e-9 {
			t.Errorf("up to %g s: %g, want %g", x.until, got, x.want)
		}
	}
}

// coldOven is a slab that is planned in the still air and between the walls of an oven of 180 °C, and a record of its air at 60 °C.
func coldOven(t *testing.T) (*runner, *workbook.Product, *report.Product) {
	t.Helper()
	r, p := slabRunner(model.Cook, 0.04, 5, 180, 25, 5400, heatTo(70))
	still, wet, hot, emissivity := p.Steps[0].Exposure, false, 180.0, 0.9
	still.Surface, still.RadiatingC, still.Emissivity, still.Wet, still.FilmW = model.StillAir, &hot, &emissivity, &wet, nil
	p.Steps[0].Exposure = still
	at, air := minutesOf(92, func(m int) float64 { return 60 + 0.1*float64(m%2) })
	withAir(t, r, at, air, 0.5)
	out, err := r.judged(p)
	if err != nil {
		t.Fatal(err)
	}
	return r, p, out
}

// TestDeviateWalls: an oven whose air was recorded colder radiates no longer as hot as planned.
func TestDeviateWalls(t *testing.T) {
	r, p, out := coldOven(t)
	v, _ := r.deviate(p, out)
	if out.Judgement.Verdict != rules.Met || v.Judgement.Verdict != rules.NotMet {
		t.Errorf("as planned %v, in air of 60 °C %v: want met and not met", out.Judgement.Verdict, v.Judgement.Verdict)
	}
}

// TestAgainstWalls: a probe beside which the air was recorded is held against the prediction in that air, with walls as it makes them; where it read
// what that prediction has, nothing is left between them.
func TestAgainstWalls(t *testing.T) {
	r, p, out := coldOven(t)
	v, media := r.deviate(p, out)
	at, core := minutesOf(90, func(m int) float64 { return v.History.At(model.Place{}, float64(m)*60) })
	logFile(t, r.logs.folder, "core.csv", at, core)
	r.plan.Records = append(r.plan.Records, r.plan.Records[0])
	probe := &r.plan.Records[1]
	probe.Name, probe.File, probe.Of, probe.Measured = "Core", "core.csv", workbook.AtSlowest, "slowest point"
	r.logs = newLogs(r.plan, r.logs.folder, time.Time{})
	r.measure(p, out, media)
	a := out.Measured[0].Against
	if a == nil || !a.Air || a.RMSK > 0.02 { // the file has hundredths
		t.Fatalf("%+v %v", a, out.Measured[0].Problems)
	}
}

// TestInexact: a blank accuracy is warned of; one of 0 is an answer.
func TestInexact(t *testing.T) {
	nought := 0.0
	for _, c := range []struct {
		accuracy *float64
		warnings int
	}{{nil, 1}, {&nought, 0}} {
		m := describe(&workbook.Record{})
		inexact(&workbook.Record{AccuracyK: c.accuracy}, m)
		if len(m.Problems) != c.warnings || m.Problems.Faults() != 0 {
			t.Errorf("accuracy %v: %v, want %d warnings and no error", c.accuracy, m.Problems, c.warnings)
		}
	}
}

// TestUnread: what was not recorded is not taken for met, and a clock that may have started before the first reading not for none.
func TestUnread(t *testing.T) {
	steps := []model.Step{{Name: "bake", Stage: model.Cook, DurationS: 600}, {Name: "chill", Stage: model.Cool, DurationS: 600}, {Name: "shelf", Stage: model.HoldCold, DurationS: 600}}
	planned := func(startC float64) *workbook.Product {
		return &workbook.Product{Product: model.Product{StartC: startC}, Steps: steps}
	}
	from, to := 60.0, 5.0
	for _, c := range []struct {
		name    string
		kind    *rules.Kind
		stages  []*model.Stage
		verdict rules.Verdict
		first   int
		startS  []float64
		begins  float64
		want    rules.Verdict
	}{
		{"cold already", rules.CoolWithin, []*model.Stage{model.Cool}, rules.NotApplicable, 1, []float64{0, 600}, 40, rules.CannotTell},
		{"never warm", rules.CoolWithin, []*model.Stage{model.Cool}, rules.NotApplicable, 0, []float64{0, 600, 1200}, 40, rules.NotApplicable},
		{"chilled before", rules.CoolWithin, []*model.Stage{model.Cool}, rules.NotApplicable, 1, []float64{0, 600}, 4, rules.NotApplicable},
		{"hot still", rules.CoolWithin, []*model.Stage{model.Cool}, rules.Met, 1, []float64{0, 600}, 75, rules.Met},
		{"the whole chain", rules.Band, nil, rules.Met, 0, []float64{0, 600, 1200, 1800}, 20, rules.Met},
		{"its end lacks", rules.Band, nil, rules.Met, 0, []float64{0, 600, 1200}, 20, rules.CannotTell},
		{"its start lacks", rules.Band, nil, rules.Met, 1, []float64{0, 600, 1200}, 20, rules.CannotTell},
		{"another stage lacks", rules.StayBelow, []*model.Stage{model.Cool}, rules.Met, 1, []float64{0, 600}, 4, rules.Met},
		{"not met all the same", rules.Band, nil, rules.NotMet, 1, []float64{0, 600, 1200}, 20, rules.NotMet},
		{"a hold earned", rules.Hold, nil, rules.Met, 0, []float64{0, 600}, 75, rules.Met},
	} {
		f := &rules.Finding{Limit: &rules.Limit{Kind: c.kind, Stages: c.stages, FromC: &from, ToC: &to}, Verdict: c.verdict, Why: "It was so."}
		r := &runner{head: &report.Head{}}
		r.unread(f, planned(20), &ran{first: c.first, startS: c.startS}, &model.Recording{C: []float64{c.begins}})
		if f.Verdict != c.want {
			t.Errorf("%s: %v (%s), want %v", c.name, f.Verdict, f.Why, c.want)
		}
	}
	// a chain that begins with its chill, a clock that starts at a temperature of its own, and a temperature some time after it
	chill := steps[1:2]
	for _, c := range []struct {
		name                   string
		kind                   *rules.Kind
		startC, begins, atC, x float64
		want                   rules.Verdict
	}{
		{"planned hot, read cold", rules.CoolWithin, 75, 37, 60, 5, rules.CannotTell},
		{"planned cold", rules.CoolWithin, 37, 37, 60, 5, rules.NotApplicable},
		{"planned hot, by the end", rules.ByTheEnd, 75, 37, 60, 21, rules.CannotTell},
		{"below the end already", rules.CoolWithin, 75, 4, 60, 5, rules.NotApplicable},
	} {
		f := &rules.Finding{Limit: &rules.Limit{Kind: c.kind, ToC: &c.x, Clock: rules.Clock{Crossing: true, AtC: &c.atC}}, Verdict: rules.NotApplicable}
		p := planned(c.startC)
		p.Steps = chill
		r := &runner{head: &report.Head{}}
		r.unread(f, p, &ran{first: 0, startS: []float64{0, 600}}, &model.Recording{C: []float64{c.begins}})
		if f.Verdict != c.want {
			t.Errorf("%s: %v, want %v", c.name, f.Verdict, c.want)
		}
	}
	for fahrenheit, want := range map[bool]string{false: "at 40.4 °C already", true: "at 104.72 °F already"} { // 40.4 °C is 104.72 °F
		f := &rules.Finding{Limit: &rules.Limit{Kind: rules.CoolWithin, FromC: &from, ToC: &to}, Verdict: rules.NotApplicable}
		r := &runner{head: &report.Head{Fahrenheit: fahrenheit}}
		r.unread(f, planned(20), &ran{first: 1, startS: []float64{0, 600}}, &model.Recording{C: []float64{40.4}})
		if !strings.Contains(f.Why, want) {
			t.Errorf("%q, want %q", f.Why, want)
		}
	}
}

// TestDeviateOtherSteps: a step before the recorded one that took longer than planned is calculated as long as it was.
func TestDeviateOtherSteps(t *testing.T) {
	ends := func(starts ...workbook.Start) float64 {
		r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 3600, coolTo(20, 3600))
		kitchen := p.Steps[0]
		kitchen.Name, kitchen.Stage, kitchen.DurationS = "carry", model.Rest, 600
		p.Steps = []model.Step{kitchen, p.Steps[0]}
		at, air := minutesOf(120, func(m int) float64 { return 2 + 0.01*float64(m%2) })
		withAir(t, r, at, air, 0)
		r.plan.Records[0].Starts = starts
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		v, _ := r.deviate(p, out)
		if v.History == nil {
			t.Fatal(v.Judgement.Why, v.Records[0].Problems)
		}
		return v.History.EndS()
	}
	carry := workbook.Start{Step: "carry", Typed: "carry"}
	bath := workbook.Start{Step: "bath", Elapsed: true, After: 40 * time.Minute, Typed: "bath 40 min"}
	if got := ends(carry, bath); got != 2400+3600 {
		t.Errorf("carried for 40 min: the chain ends after %g s", got)
	}
	if got := ends(carry); got != 600+3600 {
		t.Errorf("carried as planned: the chain ends after %g s", got)
	}
}

// TestStoppedEarly: a logger that stopped before the chiller shows nothing of the chiller, unless somebody wrote that it was meant to end there.
func TestStoppedEarly(t *testing.T) {
	chill := []model.Step{{Name: "Chill", Stage: model.Cool}}
	for _, c := range []struct {
		name   string
		starts []workbook.Start
		stage  *model.Stage
		want   rules.Verdict
	}{
		{"stopped", nil, model.Cool, rules.CannotTell},
		{"meant to end", []workbook.Start{{Typed: "Oven"}, {End: true}}, model.Cool, rules.NotApplicable},
		{"of a stage that the chain lacks", nil, model.HoldHot, rules.NotApplicable},
	} {
		fs := []rules.Finding{{Verdict: rules.NotApplicable, Limit: &rules.Limit{Stages: []*model.Stage{c.stage}}}}
		stoppedEarly(fs, &workbook.Record{Starts: c.starts}, chill)
		if fs[0].Verdict != c.want {
			t.Errorf("%s: %v, want %v", c.name, fs[0].Verdict, c.want)
		}
	}
}

// TestDeviateSparse: between readings that are an hour apart the air may have been at the warmer of the two all the time.
func TestDeviateSparse(t *testing.T) {
	margin := func(every int) float64 {
		r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 2*3600, coolTo(8, 2*3600))
		var at, air []float64
		for m := 0; m <= 120; m += every {
			at, air = append(at, float64(m)), append(air, 6-4*float64(m)/120) // it falls from 6 to 2 °C
		}
		withAir(t, r, at, air, 0)
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		v, _ := r.deviate(p, out)
		if len(v.Judgement.Findings) != 1 {
			t.Fatal(v.Judgement.Why, v.Records[0].Problems)
		}
		return *v.Judgement.Findings[0].MarginK
	}
	if dense, sparse := margin(1), margin(60); sparse > dense-0.5 {
		t.Errorf("readings every hour leave a margin of %.2f K, every minute %.2f K", sparse, dense)
	}
}

// TestDeviateTwice: of two records of one medium nobody knows which holds.
func TestDeviateTwice(t *testing.T) {
	r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 2*3600, coolTo(8, 2*3600))
	at, air := minutesOf(125, func(m int) float64 { return 2 + 0.01*float64(m%2) })
	withAir(t, r, at, air, 0)
	r.plan.Records[0].At = cell.Ref{Sheet: "Records", Row: 2}
	r.plan.Records = append(r.plan.Records, r.plan.Records[0])
	r.logs = newLogs(r.plan, r.logs.folder, time.Time{})
	out, err := r.judged(p)
	if err != nil {
		t.Fatal(err)
	}
	v, media := r.deviate(p, out)
	if v.Judgement.Verdict != rules.CannotTell || len(media) != 0 || v.Records[1].Problems.Faults() != 1 {
		t.Errorf("%v %v", v.Judgement, v.Records[1].Problems)
	}
	if msg := v.Records[1].Problems[len(v.Records[1].Problems)-1].Msg; !strings.Contains(msg, "twice for Block: by Air (Records row 2) too") {
		t.Errorf("%q does not name the other row", msg)
	}
}

// TestDeviateOtherTimes: two records that give a step different lengths leave open which it had, unless they differ by less than times in whole
// minutes, or in seconds, tell; a length that only one gives counts.
func TestDeviateOtherTimes(t *testing.T) {
	after := func(step string, m float64) workbook.Start {
		return workbook.Start{Step: step, Elapsed: true, After: time.Duration(m * float64(time.Minute)), Typed: fmt.Sprintf("%s %g min", step, m)}
	}
	for _, c := range []struct {
		name         string
		first, other []workbook.Start // of the records of the bath and of the store
		told         string
		endS         float64
	}{
		{"a step that neither measured", []workbook.Start{after("carry", 0), after("bath", 10)}, []workbook.Start{after("carry", 0), after("bath", 25), after("store", 85)}, "carry", 0},
		{"a step that one measured", []workbook.Start{after("bath", 0), after("store", 60)}, []workbook.Start{after("bath", 0), after("store", 80)}, "bath", 0},
		{"agreed", []workbook.Start{after("carry", 0), after("bath", 10), after("store", 80)}, []workbook.Start{after("carry", 5), after("bath", 15), after("store", 85)}, "", 600 + 4200 + 1800},
		{"said by the other alone", []workbook.Start{after("bath", 0)}, []workbook.Start{after("bath", 0), after("store", 40)}, "", 600 + 2400 + 1800},
		{"a minute apart, in whole minutes", []workbook.Start{after("carry", 0), after("bath", 10)}, []workbook.Start{after("carry", 0), after("bath", 11), after("store", 71)}, "", 660 + 3600 + 1800},
		{"two minutes apart, in whole minutes", []workbook.Start{after("carry", 0), after("bath", 10)}, []workbook.Start{after("carry", 0), after("bath", 12), after("store", 72)}, "carry", 0},
		{"half a minute apart, one of them in seconds", []workbook.Start{after("carry", 0), after("bath", 10)}, []workbook.Start{after("carry", 0), after("bath", 10.5), after("store", 70.5)}, "", 630 + 3600 + 1800},
		{"half a minute apart, in seconds", []workbook.Start{after("carry", 0), after("bath", 10.1)}, []workbook.Start{after("carry", 0), after("bath", 10.6), after("store", 70.6)}, "carry", 0},
		{"longer by the other alone", []workbook.Start{after("bath", 0)}, []workbook.Start{after("bath", 0), after("store", 75)}, "bath", 0},
	} {
		r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 3600, coolTo(20, 3600))
		carry, store := p.Steps[0], p.Steps[0]
		carry.Name, carry.Stage, carry.DurationS = "carry", model.Rest, 600
		store.Name, store.Stage, store.DurationS = "store", model.HoldCold, 1800
		p.Steps = []model.Step{carry, p.Steps[0], store}
		at, air := minutesOf(150, func(m int) float64 { return 2 + 0.01*float64(m%2) })
		withAir(t, r, at, air, 0)
		first := &r.plan.Records[0]
		first.Starts, first.At = c.first, cell.Ref{Sheet: "Records", Row: 2}
		other := *first
		other.Name, other.Step, other.Measured, other.Starts, other.At = "Store", "store", "medium of store", c.other, cell.Ref{Sheet: "Records", Row: 3}
		r.plan.Records = append(r.plan.Records, other)
		r.logs = newLogs(r.plan, r.logs.folder, time.Time{})
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		v, media := r.deviate(p, out)
		last := v.Records[1].Problems
		switch {
		case c.told == "" && (v.History == nil || math.Abs(v.History.EndS()-c.endS) > 1e-6):
			t.Errorf("%s: %v %v, want a chain of %g s", c.name, v.Judgement.Why, last, c.endS)
		case c.told != "" && (v.Judgement.Verdict != rules.CannotTell || v.History != nil || len(media) != 0 || last.Faults() != 1):
			t.Errorf("%s: %v, %v", c.name, v.Judgement, last)
		case c.told != "":
			if msg := last[len(last)-1].Msg; !strings.Contains(msg, c.told) || !strings.Contains(msg, "Air (Records row 2)") {
				t.Errorf("%s: %q", c.name, msg)
			}
		}
	}
}

// TestDeviateEitherLength: where two clocks in whole minutes differ by one on how long a step was, what only the longer one gives cannot be told.
func TestDeviateEitherLength(t *testing.T) {
	after := func(step string, m int) workbook.Start {
		return workbook.Start{Step: step, Elapsed: true, After: time.Duration(m) * time.Minute, Typed: fmt.Sprintf("%s %d min", step, m)}
	}
	r, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 3600, coolTo(20, 4000))
	h, err := model.Solve(p.Product, p.Steps, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	reached := h.At(model.Place{}, 59.5*60) // by the centre, half a minute before the end of the hour
	r.plan.Limits[0].ToC = &reached
	store := p.Steps[0]
	store.Name, store.Stage, store.DurationS = "store", model.HoldCold, 1800
	p.Steps = append(p.Steps, store)
	at, air := minutesOf(150, func(m int) float64 { return 2 + 0.01*float64(m%2) })
	withAir(t, r, at, air, 0)
	other := r.plan.Records[0]
	other.Name, other.Step, other.Measured = "Store", "store", "medium of store"
	r.plan.Records = append(r.plan.Records, other)
	for _, c := range []struct {
		own, other int // min
		want       rules.Verdict
	}{{60, 60, rules.Met}, {59, 59, rules.NotMet}, {60, 59, rules.CannotTell}, {59, 60, rules.NotMet}} { // the length by the record of the bath itself goes first
		r.plan.Records[0].Starts = []workbook.Start{after("bath", 0), after("store", c.own)}
		r.plan.Records[1].Starts = []workbook.Start{after("bath", 0), after("store", c.other)}
		r.logs = newLogs(r.plan, r.logs.folder, time.Time{})
		out, err := r.judged(p)
		if err != nil {
			t.Fatal(err)
		}
		if v, _ := r.deviate(p, out); v.Judgement.Verdict != c.want {
			t.Errorf("%d and %d min: %v (%s), want %v", c.own, c.other, v.Judgement.Verdict, v.Judgement.Why, c.want)
		}
	}
}

// TestClockOf: how finely a record tells when steps began.
func TestClockOf(t *testing.T) {
	minute, second := workbook.Start{Clock: true, After: 9*time.Hour + 12*time.Minute}, workbook.Start{Clock: true, After: 9*time.Hour + 12*time.Minute + 30*time.Second}
	for _, c := range []struct {
		name   string
		starts []workbook.Start
		start  time.Time
		timesS []float64
		want   float64
	}{
		{"row in minutes", []workbook.Start{minute, {End: true, Elapsed: true, After: time.Hour}}, time.Time{}, []float64{0, 7}, 60},
		{"row in seconds", []workbook.Start{minute, second}, time.Time{}, []float64{0, 60}, 1},
		{"file in minutes", []workbook.Start{{Step: "Oven"}}, time.Date(2026, 1, 19, 9, 12, 0, 0, time.UTC), []float64{0, 60, 240}, 60},
		{"file from a second on", nil, time.Date(2026, 1, 19, 9, 12, 17, 0, time.UTC), []float64{0, 60, 240}, 1},
		{"file in seconds", nil, time.Date(2026, 1, 19, 9, 12, 0, 0, time.UTC), []float64{0, 60, 121}, 1},
		{"elapsed minutes", nil, time.Time{}, []float64{0, 60, 120}, 60},
	} {
		if got := clockOf(&workbook.Record{Starts: c.starts}, &record.Log{Start: c.start, TimesS: c.timesS}); got != c.want {
			t.Errorf("%s: %g s, want %g s", c.name, got, c.want)
		}
	}
}

// TestTraceOfOtherClock: air that was recorded for as long as a step lasted by the probe, as far as the two clocks tell, bounds the food in gaps.
func TestTraceOfOtherClock(t *testing.T) {
	for _, c := range []struct {
		probeS, airS, lastedS float64 // how finely the two clocks tell; the step by the probe, and by the air 3600 s
		want                  bool
	}{{60, 60, 3660, true}, {60, 60, 3720, false}, {1, 60, 3660, true}, {1, 1, 3601, true}, {1, 1, 3660, false}} {
		re := &model.Recording{Spans: []model.Span{{StartS: 0, EndS: c.lastedS}}}
		air := &medium{durationS: 3600, clockS: c.airS, timesS: []float64{0, 3600}, c: []float64{3, 4}}
		if got := traceOf([]*medium{air}, re, &ran{clockS: c.probeS}); (got != nil) != c.want {
			t.Errorf("%+v: %v", c, got)
		}
	}
}
