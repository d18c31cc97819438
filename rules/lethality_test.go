package rules

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/testdata/published"
)

// lethal judges the lethality of a cook at the centre and returns its value.
func lethal(t testing.TB, l Limit, course string) float64 {
	t.Helper()
	words := strings.Fields(course)
	end, _, _ := strings.Cut(words[len(words)-1], ":")
	return *one(t, withLethality(l), record(t, "cook 0-"+end, course)).Value
}

// withLethality fills in what a lethality limit needs.
func withLethality(l Limit) Limit {
	l.Kind = Lethality
	if l.TimeS == nil && l.DS == nil {
		l.TimeS = min_(2)
	}
	return l
}

// exponential is T = Ta + (T0 − Ta)·exp(−kt), t in min, as a predicted course: knots every few minutes, exact between them.
type exponential struct{ t0, ta, k, min float64 }

func (e exponential) at(s float64) float64 { return e.ta + (e.t0-e.ta)*math.Exp(-e.k*s/60) }

func (e exponential) knots(everyMin float64) (t, c []float64) {
	for m := 0.0; m <= e.min+1e-9; m += everyMin {
		t, c = append(t, 60*m), append(c, e.at(60*m))
	}
	return t, c
}

// exact integrates it as the program integrates a prediction.
func (e exponential) exact(l Limit) float64 {
	t, c := e.knots(5)
	course := func(t, out []float64) {
		for i := range t {
			out[i] = e.at(t[i])
		}
	}
	p := refine(t, c, course, e.at)
	v := &view{l: &l}
	return v.killer(tilt{}).over(p, []interval{{0, 60 * e.min}}) / 60
}

// sampled judges readings of it as a record.
func (e exponential) sampled(t testing.TB, l Limit, everyMin float64) float64 {
	times, temps := e.knots(everyMin)
	tr := model.Trace{Point: model.Point{Name: "centre"}, TimesS: times, C: temps}
	return *one(t, withLethality(l), records(t, fmt.Sprintf("cook 0-%g", e.min), tr)).Value
}

// rule integrates samples by one of the rules that must not be used.
func (e exponential) rule(name string, ref, z, everyMin float64) float64 {
	_, temps := e.knots(everyMin)
	var rates []float64
	for _, c := range temps {
		rates = append(rates, math.Pow(10, (c-ref)/z))
	}
	return byRule(name, rates, everyMin)
}

func byRule(name string, rates []float64, dt float64) float64 {
	sum := 0.0
	for i := 0; i+1 < len(rates); i++ {
		switch name {
		case "left":
			sum += dt * rates[i]
		case "right":
			sum += dt * rates[i+1]
		default:
			sum += dt * (rates[i] + rates[i+1]) / 2
		}
	}
	return sum
}

// cookRestChill is the record of the published D rows.
const cookRestChill = "0:4 10:9 20:22 30:38 40:51 50:60 60:66.5 70:70.2 75:72.0 80:73.1 90:71.4 120:58 180:33 240:18 360:7"

// TestPublishedLethality computes every row of testdata/published/lethality.csv to its tolerance.
func TestPublishedLethality(t *testing.T) {
	p70 := func(z float64) Limit { return Limit{ReferenceC: c(70), ZK: c(z)} }
	f0 := func(z float64) Limit { return Limit{ReferenceC: c(121.1), ZK: c(z)} }
	p90 := func(below, above float64) Limit { return Limit{ReferenceC: c(90), ZK: c(below), ZAboveK: c(above)} }
	with := func(l Limit, change func(l *Limit)) Limit { change(&l); return l }
	hold := func(l Limit, tC, min float64) func() float64 {
		return func() float64 { return lethal(t, l, fmt.Sprintf("0:%.12g %.12g:%.12g", tC, min, tC)) }
	}
	ramp := func(l Limit, a, b, min float64) func() float64 {
		return func() float64 { return lethal(t, l, fmt.Sprintf("0:%.12g %.12g:%.12g", a, min, b)) }
	}
	course := func(l Limit, words string) func() float64 { return func() float64 { return lethal(t, l, words) } }
	heat, chill := exponential{5, 75, 0.05, 60}, exponential{75, 3, 0.02, 60}
	exact := func(e exponential, l Limit) func() float64 { return func() float64 { return e.exact(l) } }
	sampled := func(e exponential, every float64) func() float64 {
		return func() float64 { return e.sampled(t, p70(7.5), every) }
	}
	wrong := func(e exponential, name string, every float64) func() float64 {
		return func() float64 {
			x := e.rule(name, 70, 7.5, every)
			if ours := e.sampled(t, p70(7.5), every); math.Abs(ours-x) < 1e-4*x {
				t.Errorf("the program gives %g, what the %s rule gives", ours, name)
			}
			return x
		}
	}
	steep := []float64{math.Pow(10, -2.5/7.5), math.Pow(10, 2.5/7.5)}
	rule := func(name string) func() float64 { return func() float64 { return byRule(name, steep, 1) } }
	upTo80 := strings.Join(strings.Fields(cookRestChill)[:10], " ")
	logs := func(l Limit, dS float64) Limit {
		return with(l, func(l *Limit) { l.DS, l.Logs = c(dS), c(6) })
	}
	rateBase := 1 / math.Log10(1.393)
	cases := map[string]func() float64{
		"A1": hold(p70(7.5), 60, 45), "A1b": hold(p70(6), 60, 45), "A2": hold(p70(7.5), 65, 10), "A2b": hold(p70(6), 65, 10),
		"A3": hold(p70(7.5), 70, 2), "A3b": hold(p70(6), 70, 2), "A4": hold(p70(7.5), 75, 0.5), "A4b": hold(p70(6), 75, 0.5),
		"A5": hold(p70(7.5), 80, 0.1), "A5b": hold(p70(6), 80, 0.1),
		"A10": hold(f0(10), 121.1, 3), "A11": hold(f0(10), 111.1, 30), "A12": hold(f0(10), 115, 12.2217), "A13": hold(f0(10), 118, 6.12), "A14": hold(f0(10), 100, 387),
		"A20": hold(logs(p70(7.5), 20), 70, 2),
		"A21": hold(Limit{ReferenceC: c(60), ZK: c(7)}, 72, 0.25), "A22": hold(Limit{ReferenceC: c(60), ZK: &rateBase}, 72, 0.25),
		"A23": func() float64 { // the z whose rate grows by 1.393 a degree, from the rates the program gives 1 K apart
			l := Limit{ReferenceC: c(60), ZK: &rateBase}
			return 1 / math.Log10(lethal(t, l, "0:61 1:61")/lethal(t, l, "0:60 1:60"))
		},
		"A24": hold(f0(10), (250-32)/1.8, 1),
		"A25": hold(p90(9, 10), 90, 10), "A26": hold(p90(9, 10), 80, 129), "A27": hold(p90(7, 10), 80, 129),
		"A28": func() float64 { return 10 / lethal(t, p90(7, 10), "0:80 1:80") }, "A29": hold(Limit{ReferenceC: c(100), ZK: c(33.1)}, 121.1, 10),
		"B1": ramp(p70(7.5), 20, 80, 60), "B2": ramp(p70(7.5), 60, 75, 10), "B3": ramp(p70(7.5), 75, 60, 10), "B4": ramp(p70(7.5), 5, 95, 1),
		"B5": ramp(p70(7.5), 70, 70, 3), "B6": ramp(p70(7.5), 70, 70.000000001, 2), "B7": ramp(f0(10), 20, 121.1, 40),
		"B8":  ramp(with(p70(7.5), func(l *Limit) { l.FromC = c(60) }), 20, 80, 60),
		"B9":  ramp(with(p70(7.5), func(l *Limit) { l.FromC = c(55) }), 20, 80, 60),
		"B10": ramp(Limit{ReferenceC: c(90), ZK: c(9)}, 85, 95, 10), "B11": ramp(p90(9, 10), 85, 95, 10), "B12": ramp(p90(7, 10), 85, 95, 10),
		"B13": ramp(p70(7.5), 67.5, 72.5, 1), "B14": rule("trapezoid"), "B16": rule("left"), "B17": rule("right"),
		"B15": func() float64 { return byRule("trapezoid", steep, 1)/lethal(t, p70(7.5), "0:67.5 1:72.5") - 1 },
		"C1":  exact(heat, p70(7.5)), "C2": exact(exponential{5, 75, 0.05, 120}, p70(7.5)), "C3": exact(chill, p70(7.5)),
		"C4": exact(exponential{20, 121.1, 0.08, 60}, f0(10)), "C5": exact(exponential{121.1, 25, 0.1, 30}, f0(10)), "C6": exact(exponential{72, 3, 0.01, 240}, p70(6)),
		"D_z7.5": course(p70(7.5), cookRestChill), "D_z6": course(p70(6), cookRestChill), "D_z10": course(f0(10), cookRestChill),
		"D_z7.5_log": course(logs(p70(7.5), 20), cookRestChill), "D_z6_log": course(logs(p70(6), 20), cookRestChill), "D_z10_log": course(logs(f0(10), 12.6), cookRestChill),
		"D_heatonly": course(p70(7.5), upTo80),
		"D_floor55":  course(with(p70(7.5), func(l *Limit) { l.FromC = c(55) }), cookRestChill),
		"D_floor60":  course(with(p70(7.5), func(l *Limit) { l.FromC = c(60) }), cookRestChill),
		"D_minus0.5": func() float64 { // the unfavourable end of an error of 0.5 K
			h := record(t, "cook 0-360", cookRestChill)
			l := withLethality(p70(7.5))
			v := newView(&l, newCourses(h))
			return v.killer(tilt{errK: 0.5}).over(v.path(model.Place{}), v.heatings()[0]) / 60
		},
		"D_trap": func() float64 {
			sum, words := 0.0, strings.Fields(cookRestChill)
			var m0, r0 float64
			for i, w := range words {
				a, b, _ := strings.Cut(w, ":")
				m, r := number(t, a), math.Pow(10, (number(t, b)-70)/7.5)
				if i > 0 {
					sum += (m - m0) * (r + r0) / 2
				}
				m0, r0 = m, r
			}
			if ours := lethal(t, p70(7.5), cookRestChill); ours > 0.9*sum {
				t.Errorf("the program credits %g, like the trapezoid of rates", ours)
			}
			return sum
		},
	}
	for _, s := range []struct {
		id    string
		e     exponential
		every float64
	}{{"C7", heat, 5}, {"C8", heat, 1}, {"C9", chill, 5}, {"C10", chill, 1}} {
		cases[s.id+"_log-mean"] = sampled(s.e, s.every)
		for _, name := range []string{"trapezoid", "left", "right"} {
			cases[s.id+"_"+name] = wrong(s.e, name, s.every)
		}
	}
	for _, row := range published.Rows(t, "lethality.csv") {
		t.Run(row["id"], func(t *testing.T) {
			f := cases[row["id"]]
			if f == nil {
				t.Fatalf("no case for the row %s, %s", row["id"], row["inputs"])
			}
			want := number(t, row["expected"])
			tol := number(t, strings.TrimPrefix(row["tolerance"], "rel ")) * want
			// the printed figures have 12 digits; those of small values fewer beyond the point
			if got := f(); math.Abs(got-want) > tol+1e-11 {
				t.Errorf("%.13g, want %.13g ± %g: %s, %s", got, want, tol, row["inputs"], row["quantity"])
			}
			delete(cases, row["id"])
		})
	}
	for id := range cases {
		t.Errorf("the case %s has no row", id)
	}
}

// published times: "45 min", "169 s"
func seconds(t testing.TB, typed string) float64 {
	n, unit, _ := strings.Cut(typed, " ")
	if unit == "s" {
		return number(t, n)
	}
	return 60 * number(t, n)
}

// celsius reads "130 F" or "60 C".
func celsius(t testing.TB, typed string) float64 {
	n, unit, _ := strings.Cut(typed, " ")
	if unit == "F" {
		return (number(t, n) - 32) / 1.8
	}
	return number(t, n)
}

// holdTable reads one of the published tables.
func holdTable(t testing.TB, name string) *Table {
	t.Helper()
	table := &Table{Name: name}
	for _, row := range published.Rows(t, "hold_tables.csv") {
		if row["table"] == name {
			table.Rows = append(table.Rows, Row{C: celsius(t, row["temperature"]), S: seconds(t, row["time"]), Typed: row["temperature"] + ", " + row["time"]})
		}
	}
	if len(table.Rows) < 5 {
		t.Fatalf("table %s has %d rows", name, len(table.Rows))
	}
	return table
}

// holding is a cook at one temperature for a time.
func holding(t testing.TB, tC, s float64) *model.History {
	return record(t, fmt.Sprintf("cook 0-%.15g", s/60), fmt.Sprintf("0:%.15g %.15g:%.15g", tC, s/60, tC))
}

// TestTableRows holds each row of each published table for exactly its time: met, by that row; a second (or a hundredth) less: not.
func TestTableRows(t *testing.T) {
	for _, name := range []string{"fsis 6.5", "uk 70/2", "uk 90/10"} {
		table := holdTable(t, name)
		l := Limit{Kind: HoldTable, Table: table, Counting: Total}
		for i, row := range table.Rows {
			t.Run(row.Typed, func(t *testing.T) {
				if got := one(t, l, holding(t, row.C, row.S)); got.Verdict != Met || math.Abs(*got.Value-1) > 1e-9 || *got.Required != 1 {
					t.Errorf("held exactly: %v, %g of the row: %s", got.Verdict, *got.Value, got.Why)
				}
				short := math.Min(1, row.S/100)
				if got := one(t, l, holding(t, row.C, row.S-short)); got.Verdict != NotMet {
					t.Errorf("%g s less: %v: %s", short, got.Verdict, got.Why)
				}
				if i+1 < len(table.Rows) { // between two rows only the colder one counts, for its own time
					next := table.Rows[i+1]
					mid, s := (row.C+next.C)/2, math.Sqrt(row.S*next.S)
					if got := one(t, l, holding(t, mid, s)); got.Verdict != NotMet || math.Abs(*got.Value-s/row.S) > 1e-9 {
						t.Errorf("between the rows: %v, %g: %s", got.Verdict, *got.Value, got.Why)
					}
				}
			})
		}
		below := one(t, l, holding(t, table.Rows[0].C-1, 100*table.Rows[0].S))
		if below.Verdict != NotMet || *below.Value != 0 {
			t.Errorf("%s: a degree below the first row: %v, %g", name, below.Verdict, *below.Value)
		}
	}
}

// TestTablesAndIntegral holds published tables against the integral with the z of their line, both ways.
func TestTablesAndIntegral(t *testing.T) {
	// The line of the 6.5-log rows: z 10.005 °F, 111.329 min at 130 °F, fitted to the rows and rounded up to them.
	zF, t130 := 10.005, 111.329
	fsis := Limit{Kind: Lethality, ReferenceC: f(130), ZK: c(zF / 1.8), DS: c(60 * t130 / 6.5), Logs: c(6.5)}
	for _, row := range holdTable(t, "fsis 6.5").Rows {
		if got := one(t, fsis, holding(t, row.C, row.S)); got.Verdict != Met {
			t.Errorf("%s: the integral says %v: %s", row.Typed, got.Verdict, got.Why)
		}
		if strings.HasPrefix(row.Typed, "146 F") {
			if got := one(t, fsis, holding(t, row.C, row.S-1)); got.Verdict != NotMet {
				t.Errorf("%s, a second less: the integral says %v: %s", row.Typed, got.Verdict, got.Why)
			}
		}
	}
	uk := func(z float64) Limit { return withLethality(Limit{ReferenceC: c(70), ZK: c(z)}) }
	for _, row := range holdTable(t, "uk 70/2").Rows {
		if got := one(t, uk(7.5), holding(t, row.C, row.S)); got.Verdict != Met {
			t.Errorf("%s at z 7.5: %v: %s", row.Typed, got.Verdict, got.Why)
		}
		want := Met // at z 6 the rows below 70 °C are not equivalent
		if row.C < 70 {
			want = NotMet
		}
		if got := one(t, uk(6), holding(t, row.C, row.S)); got.Verdict != want {
			t.Errorf("%s at z 6: %v, want %v: %s", row.Typed, got.Verdict, want, got.Why)
		}
	}
	// ACMSF (2007), z 6: 13.6 min at 65 °C and 18 s at 75 °C, printed rounded.
	closeTo(t, "65 °C for 13.6 min, z 6", one(t, uk(6), holding(t, 65, 13.6*60)).Value, 2, 0.005)
	closeTo(t, "75 °C for 18 s, z 6", one(t, uk(6), holding(t, 75, 18)).Value, 2, 0.05)
	spores := Limit{Kind: Lethality, ReferenceC: c(90), ZK: c(9), ZAboveK: c(10), TimeS: min_(10)}
	for _, row := range holdTable(t, "uk 90/10").Rows {
		// printed rounded to nearest: up to 0.9 % short, up to 3.3 % long
		got := one(t, spores, holding(t, row.C, row.S))
		if *got.Value < 10*0.991-1e-3 || *got.Value > 10*1.0335 {
			t.Errorf("%s: %g equivalent minutes of 10", row.Typed, *got.Value)
		}
		if short := one(t, spores, holding(t, row.C, 0.985*row.S/(*got.Value/10))); short.Verdict != NotMet {
			t.Errorf("%s: 1.5 %% short of the line: %v", row.Typed, short.Verdict)
		}
	}
	// with z 7 below 90 °C, 80 °C needs 268 min, not 129
	strict := spores
	strict.ZK = c(7)
	if got := one(t, strict, holding(t, 80, 129*60)); got.Verdict != NotMet {
		t.Errorf("80 °C for 129 min at z 7: %v", got.Verdict)
	}
	// 158 °F is instantaneous by the table; the line of its other rows wants 10.6 s
	instant := Limit{Kind: HoldTable, Counting: Total, Table: &Table{Name: "t", Rows: []Row{{C: *f(158), S: 0}}}}
	if got := one(t, instant, holding(t, *f(158), 5)); got.Verdict != Met {
		t.Errorf("158 °F reached, by the table: %v", got.Verdict)
	}
	if got := one(t, fsis, holding(t, *f(158), 5)); got.Verdict != NotMet {
		t.Errorf("158 °F for 5 s, by the integral: %v", got.Verdict)
	}
}

// A needed time of microseconds, as a D at a high reference temperature makes it, is not met by nothing: at 30 °C 1e-14 of a minute at 121.1 °C is earned.
func TestLethalityOfAMoment(t *testing.T) {
	at := func(x float64) *float64 { return &x }
	l := Limit{Kind: Lethality, ReferenceC: at(121.1), ZK: at(10), DS: at(1e-6), Logs: at(6)}
	if g := one(t, l, record(t, "cook 0-60", "0:30 60:30")); g.Verdict != NotMet {
		t.Errorf("%v, %v log reductions of 6", g.Verdict, *g.Value)
	}
}
