package codes

import (
	"encoding/csv"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"slowpoint/rules"
)

// published reads a file of testdata: a map by heading a line.
func published(t *testing.T, name string) []map[string]string {
	t.Helper()
	rows := records(os.DirFS("testdata"), name)
	if len(rows) == 0 {
		t.Fatalf("testdata/%s has no lines", name)
	}
	return rows
}

// standing lists the rows that stand for a published row: the one that covers it and, for a clause in parts, the others.
func standing(all []Row, id string) []Row {
	var out []Row
	for _, r := range all {
		if slices.Contains(r.Covers, id) || r.Clause() == id {
			out = append(out, r)
		}
	}
	return out
}

// TestEveryStarterOnce: testdata/starters.csv lists the 400 published rows that were seen and are fit to be copied.
func TestEveryStarterOnce(t *testing.T) {
	starters := published(t, "starters.csv")
	if len(starters) != 400 {
		t.Fatalf("%d published rows, want 400", len(starters))
	}
	want := make(map[string]int)
	for _, s := range starters {
		want[s["id"]] = 0
	}
	for _, r := range All() {
		for _, id := range r.Covers {
			if _, ok := want[id]; !ok {
				t.Errorf("%s stands for %q, which is not a row fit to be copied", r.ID, id)
			}
			want[id]++
		}
	}
	for id, n := range want {
		if n != 1 {
			t.Errorf("%s is covered %d times, want once", id, n)
		}
	}
}

// TestFurtherParts: a row that covers nothing is a further part of a clause whose other part is covered, or a
// column of the poultry grid between 1 and 12 % fat, which the published list leaves to the grid.
func TestFurtherParts(t *testing.T) {
	all := All()
	grid := regexp.MustCompile(`^US-FSIS-A21-T[34]-(chicken|turkey)-fat(0[2-9]|1[01])$`)
	for _, r := range all {
		if len(r.Covers) > 0 || grid.MatchString(r.ID) {
			continue
		}
		others := slices.ContainsFunc(all, func(o Row) bool { return o.Clause() == r.Clause() && len(o.Covers) > 0 })
		if !strings.Contains(r.ID, "+") || !others {
			t.Errorf("%s covers no published row and is no part of one that is covered", r.ID)
		}
	}
}

// TestFilled: what an auditor asks for is there, names are unique, no web address travels along.
func TestFilled(t *testing.T) {
	ids, names := make(map[string]bool), make(map[string]bool)
	for _, r := range All() {
		for _, column := range []string{"Limit", "Rule", "Applies to", "Status", "Code", "Clause", "Edition", "Issued by", "Note"} {
			if strings.TrimSpace(r.Cells[column]) == "" {
				t.Errorf("%s: %s is empty", r.ID, column)
			}
		}
		if r.ID == "" || r.Where == "" || r.Stage == "" || r.Title == "" || r.Source == "" || !strings.HasPrefix(r.Evidence, "Seen") {
			t.Errorf("%s: id, where, stage, title, source or evidence is missing: %+v", r.ID, r)
		}
		if !strings.HasSuffix(r.Cells["Note"], " "+Reminder) {
			t.Errorf("%s: the note does not end in the reminder: %s", r.ID, r.Cells["Note"])
		}
		if strings.Contains(r.Cells["Code"], "Food Code") && r.Cells["Issued by"] == "US Food and Drug Administration (FDA)" &&
			(!strings.HasPrefix(r.Cells["Edition"], "as adopted in ") || !strings.HasSuffix(r.Cells["Edition"], "confirm in the 2022 text")) {
			t.Errorf("%s: the edition is not the adoption in which it was seen: %s", r.ID, r.Cells["Edition"])
		}
		for column, c := range r.Cells {
			if strings.Contains(c, "http") || strings.Contains(c, "www.") || c != strings.TrimSpace(c) || c == "" {
				t.Errorf("%s: %s %q", r.ID, column, c)
			}
		}
		if ids[r.ID] || names[r.Title] || r.Title != r.Cells["Limit"] {
			t.Errorf("%s: id or name is used twice, or the title is not the limit's name: %s", r.ID, r.Title)
		}
		ids[r.ID], names[r.Title] = true, true
	}
}

var (
	temperature = regexp.MustCompile(`^-?\d+(\.\d+)? °[CF]$`)
	difference  = regexp.MustCompile(`^\d+(\.\d+)? °[CF] difference$`)
	duration    = regexp.MustCompile(`^\d+(\.\d+)? (s|min|h|d)$`)
	percent     = regexp.MustCompile(`^\d+ %$`)
	stages      = regexp.MustCompile(`^(cook|rest|cool|hold hot|hold cold|store|reheat|freeze|thaw)( \+ (cook|rest|cool|hold hot|hold cold|store|reheat|freeze|thaw))*$`)
	pair        = regexp.MustCompile(`^cook > cool$`)
	clock       = regexp.MustCompile(`^(crossing|crossing of -?\d+(\.\d+)? °[CF]|stage (start|end): (cook|rest|cool|hold hot|hold cold|store|reheat|freeze|thaw))$`)
)

// spelling is how each column of Limits is written; a column that is not here is free text.
var spelling = map[string]*regexp.Regexp{
	"From": temperature, "To": temperature, "Reference temperature": temperature, "z": difference,
	"Time": duration, "Second time": duration, "Clock starts": clock, "Humidity": percent, "Share of stage": percent,
	"Applies to": regexp.MustCompile(`^all$`), "Where": regexp.MustCompile(`^(surface|centre|medium)$`),
	"Counting": regexp.MustCompile(`^(total|continuous|once)$`), "Compare": regexp.MustCompile(`^(more than|less than)$`),
	"Compare time": regexp.MustCompile(`^(at least|at most|less than)$`), "Level": regexp.MustCompile(`^advice$`),
	"Status": regexp.MustCompile(`^(law|guidance)$`), "Stage": stages,
}

// TestColumnsOfTheRule: each row fills what its kind of limit needs, nothing that it does not use, in the contract's
// spelling; every kind but falling, which no published row that was seen asks for, is there.
func TestColumnsOfTheRule(t *testing.T) {
	used := make(map[string]bool)
	for _, r := range All() {
		kind := rules.Named(r.Cells["Rule"])
		if kind == nil {
			t.Errorf("%s: unknown rule %q", r.ID, r.Cells["Rule"])
			continue
		}
		used[kind.Name] = true
		for _, choices := range kind.Needs {
			if !slices.ContainsFunc(choices, func(c string) bool { return r.Cells[c] != "" }) {
				t.Errorf("%s: %s needs %v", r.ID, kind.Name, choices)
			}
		}
		for column, c := range r.Cells {
			if !kind.Uses(column) {
				t.Errorf("%s: %s does not use %s (%s)", r.ID, kind.Name, column, c)
			}
			want := spelling[column]
			if kind == rules.Delay && column == "Stage" {
				want = pair
			}
			if want != nil && !want.MatchString(c) {
				t.Errorf("%s: %s is spelt %q", r.ID, column, c)
			}
		}
		if (kind == rules.Hold || kind == rules.StayAbove || kind == rules.StayBelow) && r.Cells["From"] != "" && r.Cells["To"] != "" {
			t.Errorf("%s: %s has From or To, not both", r.ID, kind.Name)
		}
		if c := r.Cells["Clock starts"]; c != "" && (c == "crossing") != (r.Cells["From"] != "") {
			t.Errorf("%s: From belongs to the clock crossing and to no other: %q, From %q", r.ID, c, r.Cells["From"])
		}
		if (len(r.Tables) > 0) != (r.Cells["Table"] != "") || (len(r.Groups) > 0) != (r.Cells["Group"] != "") {
			t.Errorf("%s: tables or groups do not go with the cells Table and Group", r.ID)
		}
	}
	for _, k := range rules.Kinds {
		if !used[k.Name] && k != rules.Falling {
			t.Errorf("no starter limit of rule %s", k.Name)
		}
	}
}

// TestOrderOfTemperatures: From lies below To in a band, above it in cooling.
func TestOrderOfTemperatures(t *testing.T) {
	for _, r := range All() {
		from, to := r.Cells["From"], r.Cells["To"]
		if from == "" || to == "" {
			continue
		}
		a, b := number(t, from), number(t, to)
		if from[len(from)-1] != to[len(to)-1] {
			t.Errorf("%s: From %s and To %s are in two units", r.ID, from, to)
		}
		switch rule := r.Cells["Rule"]; {
		case (rule == "band" || rule == "outside") && a >= b, rule == "cool" && a <= b, rule == "freeze" && a > b:
			t.Errorf("%s: %s from %s to %s", r.ID, rule, from, to)
		}
	}
}

// number is the number at the head of a cell.
func number(t *testing.T, cell string) float64 {
	t.Helper()
	head, _, _ := strings.Cut(cell, " ")
	v, err := strconv.ParseFloat(head, 64)
	if err != nil {
		t.Fatalf("%q: %v", cell, err)
	}
	return v
}

// minutes is a duration cell in minutes.
func minutes(t *testing.T, cell string) float64 {
	t.Helper()
	_, unit, _ := strings.Cut(cell, " ")
	return number(t, cell) * map[string]float64{"s": 1.0 / 60, "min": 1, "h": 60, "d": 1440}[unit]
}

// TestPrintedFigures holds every temperature and time of the 400 published rows against the cells that stand for
// them: in °F wherever a US document prints it, elsewhere in the unit printed first.
func TestPrintedFigures(t *testing.T) {
	// The clause prints a surface allowance of 2 °C, a difference, which the rows add to the core limits.
	derived := []string{"ZA-R638-8(4)(a)(ii)"}
	// One temperature of the published list is no limit: the start is from memory; the upper end of 85-90 °C.
	partly := map[string]string{"HK-CFS-cool-1": "T1", "JP-MHLW-noro": "T2"}
	all, lines := All(), records(files, "tables.csv")
	for _, s := range published(t, "starters.csv") {
		if slices.Contains(derived, s["id"]) {
			continue
		}
		temps, times := figures(t, standing(all, s["id"]), lines, s["id"])
		for i, c := range []string{"T1", "T2"} {
			printed, unit := s[c+"_C"], "°C"
			if s[c+"_F"] != "" && (strings.HasPrefix(s["jurisdiction"], "US") || fahrenheitFirst(s["original_units"])) {
				printed, unit = s[c+"_F"], "°F"
			}
			if printed == "" || partly[s["id"]] == c {
				continue
			}
			if want := printed + " " + unit; !slices.Contains(temps, want) {
				t.Errorf("%s: T%d %s is not in %v", s["id"], i+1, want, temps)
			}
		}
		if s["time_min"] == "" {
			continue
		}
		want, _ := strconv.ParseFloat(s["time_min"], 64)
		if !slices.ContainsFunc(times, func(got float64) bool { return got > want-1e-5 && got < want+1e-5 }) {
			t.Errorf("%s: %v min is not in %v", s["id"], want, times)
		}
	}
}

// fahrenheitFirst: "130F (54.4C) to 80F" prints °F first.
func fahrenheitFirst(printed string) bool {
	f, c := strings.Index(printed, "F"), strings.Index(printed, "C")
	return f >= 0 && (c < 0 || f < c)
}

// figures lists the temperatures and times (min) of the cells that stand for a published row; for a stated limit,
// which has no such cells, those of its note too.
func figures(t *testing.T, rows []Row, lines []map[string]string, id string) (temps []string, times []float64) {
	t.Helper()
	inNote := regexp.MustCompile(`-?\d+(\.\d+)? (°[CF]|s|min|h|d)\b|-?\d+(\.\d+)? °[CF]`)
	add := func(cell string) {
		if temperature.MatchString(cell) {
			temps = append(temps, cell)
		} else if duration.MatchString(cell) {
			times = append(times, minutes(t, cell))
		}
	}
	for _, r := range rows {
		for _, column := range []string{"From", "To", "Time", "Second time", "Reference temperature"} {
			add(r.Cells[column])
		}
		if r.Cells["Rule"] == "stated" {
			for _, figure := range inNote.FindAllString(r.Cells["Note"], -1) {
				add(figure)
			}
		}
		if i := slices.Index(r.Covers, id); i >= 0 && len(r.Tables) > 0 {
			for _, row := range rowsOf(r, lines, id) {
				add(row.Temperature)
				add(row.Time)
			}
		}
	}
	return temps, times
}

// rowsOf are the table rows that stand for a published row: those that the lines of tables.csv mark with it, or all of them
// where the whole table stands for it.
func rowsOf(r Row, lines []map[string]string, id string) []TableRow {
	var out []TableRow
	for _, line := range lines {
		if line["Table"] == r.Cells["Table"] && slices.Contains(strings.Fields(line["Stands for"]), id) {
			out = append(out, TableRow{line["Table"], line["Temperature"], line["Time"]})
		}
	}
	if len(out) == 0 {
		return r.Tables
	}
	return out
}

// TestPoultryGrid: all 720 cells of Tables 3 and 4 of FSIS-GD-2021-14 (2021), each in its own table and limit.
func TestPoultryGrid(t *testing.T) {
	grid := published(t, "poultry.csv")
	if len(grid) != 720 {
		t.Fatalf("%d cells, want 720", len(grid))
	}
	rows := make(map[string]Row)
	for _, r := range All() {
		if strings.HasPrefix(r.Cells["Table"], "FSIS poultry, ") {
			if r.Cells["Rule"] != "hold table" || r.Cells["Counting"] != "total" {
				t.Errorf("%s: %s counted %s, want a hold table counted total", r.ID, r.Cells["Rule"], r.Cells["Counting"])
			}
			rows[r.Cells["Table"]] = r
		}
	}
	if len(rows) != 24 {
		t.Errorf("%d poultry limits, want 24 (two species, twelve fat levels)", len(rows))
	}
	cells := 0
	for _, r := range rows {
		cells += len(r.Tables)
	}
	if cells != 720 {
		t.Errorf("%d cells shipped, want 720", cells)
	}
	for _, g := range grid {
		name := "FSIS poultry, " + g["species"] + ", " + g["fat_pct"] + " % fat"
		want, _ := strconv.ParseFloat(g["time_min"], 64)
		if !slices.ContainsFunc(rows[name].Tables, func(row TableRow) bool {
			d := minutes(t, row.Time) - want
			return row.Temperature == g["T_F"]+" °F" && row.Table == name && d > -1e-5 && d < 1e-5
		}) {
			t.Errorf("%s at %s °F: %s is missing", name, g["T_F"], g["printed"])
		}
	}
}

// TestTablesAreWhole: rows go up in temperature and never up in time, except where the guideline prints it so.
func TestTablesAreWhole(t *testing.T) {
	for _, r := range All() {
		for i := 1; i < len(r.Tables); i++ {
			a, b := r.Tables[i-1], r.Tables[i]
			if r.Cells["Table"] == "ACMSF burgers" || r.Cells["Table"] == "21 CFR 131.3(b)" || minutes(t, b.Time) <= minutes(t, a.Time) {
				if number(t, b.Temperature) > number(t, a.Temperature) && minutes(t, b.Time) <= minutes(t, a.Time) {
					continue
				}
			}
			t.Errorf("%s: %v after %v", r.ID, b, a)
		}
	}
}

// TestSpotChecks: figures typed from the documents named, independent of the lists above.
func TestSpotChecks(t *testing.T) {
	for _, c := range []struct {
		name, id string
		want     map[string]string
	}{
		{"FDA Food Code 3-401.11(A)(1), as in Minnesota Rules 4626.0340: 63 °C (145 °F) / 15 s", "US-FC22-401.11-A1",
			map[string]string{"Rule": "hold", "From": "145 °F", "Time": "15 s", "Stage": "cook", "Clause": "3-401.11(A)(1)"}},
		{"FDA Food Code 3-501.14(A)(1), as in Delaware: 57 °C (135 °F) to 21 °C (70 °F) within 2 h", "US-FC22-501.14-A1",
			map[string]string{"Rule": "cool", "From": "135 °F", "To": "70 °F", "Time": "2 h", "Clock starts": "crossing"}},
		{"FDA Food Code 3-501.14(A)(2), as in Delaware: to 5 °C (41 °F) within a total of 6 h", "US-FC22-501.14-A2",
			map[string]string{"Rule": "cool", "From": "135 °F", "To": "41 °F", "Time": "6 h", "Clock starts": "crossing"}},
		{"Maine ch. 346-3-12 A(2): a second window, 70 °F to 41 °F in 4 h", "US-ME-346-3-12-A2",
			map[string]string{"Rule": "cool", "From": "70 °F", "To": "41 °F", "Time": "4 h", "Clock starts": "crossing"}},
		{"FSIS-GD-2021-14, pp. 24-25: between 50 and 130 °F, 6 h or less in all", "US-FSIS-A21-CUT",
			map[string]string{"Rule": "band", "From": "50 °F", "To": "130 °F", "Time": "6 h", "Counting": "total", "Stage": "cook"}},
		{"9 CFR 315.2: 170 °F for 30 min", "US-9CFR315.2",
			map[string]string{"Rule": "hold", "From": "170 °F", "Time": "30 min"}},
		{"9 CFR 590.575(b)(1): 130 °F continuously 7 days", "US-9CFR590.575-spray+hold",
			map[string]string{"Rule": "hold", "From": "130 °F", "Time": "7 d", "Counting": "continuous"}},
		{"ACMSF burgers, 2007: 70 °C for 2 min, z 6 °C", "UK-ACMSF-burger-70",
			map[string]string{"Rule": "lethality", "Reference temperature": "70 °C", "z": "6 °C difference", "Time": "2 min"}},
		{"70 °C for 2 min with z 7.5 °C", "UK-P70",
			map[string]string{"Rule": "lethality", "Reference temperature": "70 °C", "z": "7.5 °C difference", "Time": "2 min"}},
		{"Scotland 2006, Schedule 4 para 2(1)(b): above 63 °C, strict", "UK-SCO-S4-2",
			map[string]string{"Rule": "stay above", "From": "63 °C", "Compare": "more than"}},
		{"Wales 2006, Schedule 4 para 6: below 63 °C is the offence, 63.0 °C passes", "UK-EWNI-S4-6",
			map[string]string{"Rule": "stay above", "From": "63 °C", "Compare": ""}},
		{"England 2005, Schedule 4 para 7(2): less than two hours", "UK-EWNI-S4-7",
			map[string]string{"Rule": "stay above", "From": "63 °C", "Time": "2 h", "Counting": "once", "Compare time": "less than"}},
		{"FSAI Guidance Note 15: 3 °C in at most 150 min, start taken as the end of cooking", "IE-GN15-chill",
			map[string]string{"Rule": "cool", "To": "3 °C", "Time": "150 min", "Clock starts": "stage end: cook"}},
		{"Department of Health 1989: chilling starts at most 30 min after cooking", "UK-DH89-start",
			map[string]string{"Rule": "delay", "Stage": "cook > cool", "Time": "30 min"}},
		{"Food and Drug Regulations B.22.026: 40 °F (4.4 °C) or 140 °F (60 °C)", "CA-FDR-B22.026+air",
			map[string]string{"Rule": "outside", "From": "40 °F", "To": "140 °F", "Where": "medium"}},
		{"Washington WAC 246-215-03425: -35 °C (-31 °F) until solid, then -20 °C (-4 °F) 24 h", "US-FC22-402.11-c",
			map[string]string{"Rule": "freeze", "From": "-31 °F", "To": "-4 °F", "Second time": "24 h"}},
		{"New Brunswick 27(1)(e): within 2 hours to at least 74 °C for 15 seconds", "CA-NB-27-reheat",
			map[string]string{"Rule": "heat", "To": "74 °C", "Time": "2 h", "Second time": "15 s"}},
		{"9 CFR 318.17(a)(1): 6.5-log, no z published", "US-9CFR318.17-leth",
			map[string]string{"Rule": "stated", "z": "", "Time": "", "From": "", "Log reductions": ""}},
		{"FDA Food Code 3-401.11(B)(1), footnote: humidity greater than 90 % for at least 1 h", "US-FC22-401.11-B1-hh+humidity",
			map[string]string{"Rule": "humidity", "Humidity": "90 %", "Time": "1 h", "Compare": "more than"}},
		{"NYC Health Code 81.10 Table 1: 70 °F when checked at 4 h", "US-NYC-81.10-cold+check",
			map[string]string{"Rule": "by the end", "To": "70 °F", "Time": "4 h", "Clock starts": "stage start: hold cold"}},
		{"FSIS-GD-2021-14 Table 1 option 3: 90 % for a quarter of the cook or 1 h", "US-FSIS-A21-RH3+humidity",
			map[string]string{"Rule": "humidity", "Humidity": "90 %", "Share of stage": "25 %", "Time": "1 h"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			rows, err := ByID(c.id)
			if err != nil || len(rows) != 1 {
				t.Fatalf("ByID: %d rows, %v", len(rows), err)
			}
			for column, want := range c.want {
				if got := rows[0].Cells[column]; got != want {
					t.Errorf("%s is %q, want %q", column, got, want)
				}
			}
		})
	}
}

// TestSpotTables: rows typed from the tables named.
func TestSpotTables(t *testing.T) {
	for _, c := range []struct {
		name, id          string
		temperature, time string
		rows              int
	}{
		{"FSIS-GD-2021-14 Table 2 (p. 35), 6.5 log", "US-FSIS-A21-T2-6.5", "146 °F", "169 s", 31},
		{"FSIS-GD-2021-14 Table 2 (p. 35), 7 log", "US-FSIS-A21-T2-7.0", "146 °F", "182 s", 31},
		{"FSIS-GD-2021-14 Table 6 (p. 59), 5 log", "US-FSIS-A21-T6", "157 °F", "11 s", 31},
		{"FSIS-GD-2021-14 Table 3 (p. 37), chicken, 12 % fat", "US-FSIS-A21-T3-chicken-fat12", "160 °F", "16.9 s", 30},
		{"FSIS-GD-2021-14 Table 4 (p. 38), turkey, 1 % fat", "US-FSIS-A21-T4-turkey-fat01", "136 °F", "64 min", 30},
		{"FDA Food Code 3-401.11(B)(2)", "US-FC22-401.11-B2", "147 °F", "134 s", 17},
		{"FDA Food Code 3-401.11(A)(2)", "US-FC22-401.11-A2", "158 °F", "0 s", 3},
		{"1 NYCRR 271-2.10", "US-NY-271-2.10", "132 °F", "77 min", 9},
		{"21 CFR 131.3(b)", "US-21CFR131.3", "212 °F", "0.01 s", 5},
		{"7 CFR 58.635", "US-7CFR58.635", "175 °F", "25 s", 2},
		{"FSA vacuum and MAP table", "UK-FSA-VPMAP", "92 °C", "6.3 min", 21},
		{"ACMSF burgers, 2007, equivalents", "UK-ACMSF-burger-equivalents", "65 °C", "13.6 min", 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			rows, err := ByID(c.id)
			if err != nil || len(rows) != 1 {
				t.Fatalf("ByID: %d rows, %v", len(rows), err)
			}
			r := rows[0]
			if len(r.Tables) != c.rows {
				t.Errorf("%d rows, want %d", len(r.Tables), c.rows)
			}
			if !slices.Contains(r.Tables, TableRow{r.Cells["Table"], c.temperature, c.time}) {
				t.Errorf("no row %s for %s in %v", c.temperature, c.time, r.Tables)
			}
		})
	}
}

// TestData: the four files and the lists of testdata name their source at the head.
func TestData(t *testing.T) {
	for _, name := range []string{"limits.csv", "tables.csv", "groups.csv", "documents.csv", "testdata/starters.csv", "testdata/poultry.csv"} {
		b, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if !strings.HasPrefix(string(b), "# Source: ") {
			t.Errorf("%s does not begin with its source", name)
		}
		if strings.Contains(string(b), "http") || strings.Contains(string(b), "FROM MEMORY") {
			t.Errorf("%s holds a web address or a row from memory", name)
		}
	}
	r := csv.NewReader(strings.NewReader("# a\nx\n"))
	r.Comment = '#'
	if rows, err := r.ReadAll(); err != nil || len(rows) != 1 {
		t.Errorf("remarks are not skipped: %v %v", rows, err)
	}
}
