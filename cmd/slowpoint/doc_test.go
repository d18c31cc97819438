package main

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/rogpeppe/go-internal/txtar"
	"github.com/spf13/cobra"
	"github.com/xuri/excelize/v2"

	"slowpoint/cmd/slowpoint/intake"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/verify"
	"slowpoint/report"
	"slowpoint/rules"
	judging "slowpoint/rules/known"
)

var rewrite = flag.Bool("rewrite", false, "write what the program makes into README.md and the files of the examples")

// top is the folder of the project.
var top = func() string {
	path, err := filepath.Abs("../..")
	if err != nil {
		panic(err)
	}
	return path + string(filepath.Separator)
}()

// project reads a file of the project.
func project(t *testing.T, name string) string {
	t.Helper()
	b, err := os.ReadFile(top + name)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// made are the parts of README.md that the program knows best: each stands between <!-- made: NAME --> and <!-- made: end -->.
var made = []struct {
	name string
	make func() string
}{
	{"commands", commandTable}, {"sheets", sheetTables}, {"shapes", shapeTable}, {"surroundings", surroundingsTable},
	{"stages", stageTable}, {"rules", ruleTable}, {"refused", refusedList}, {"known answers", knownTable}, {"measured cases", measuredTable}, {"mapping", mappingTable},
}

// TestReadmeTables holds the tables of README.md equal to the lists that the program works with.
func TestReadmeTables(t *testing.T) {
	have := project(t, "README.md")
	want := have
	for _, m := range made {
		begin := "<!-- made: " + m.name + " -->\n"
		a := strings.Index(want, begin)
		if a < 0 || strings.Count(want, begin) != 1 {
			t.Fatalf("README.md has no place, or several, for %s", m.name)
		}
		a += len(begin)
		b := strings.Index(want[a:], "<!-- made: end -->")
		if b < 0 {
			t.Fatalf("the place for %s has no end", m.name)
		}
		want = want[:a] + m.make() + want[a+b:]
	}
	if *rewrite {
		if err := os.WriteFile(top+"README.md", []byte(want), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	if d := cmp.Diff(strings.Split(want, "\n"), strings.Split(have, "\n")); d != "" {
		t.Errorf("README.md is not what the program says (- the program, + README; rewrite with go test ./cmd/slowpoint -run TestReadmeTables -rewrite):\n%s", d)
	}
}

// TestReadmeColumns wants a word about every column: in the table, or below the tables.
func TestReadmeColumns(t *testing.T) {
	_, text, _ := strings.Cut(project(t, "README.md"), "Columns that the tables leave without a word:")
	text, _, _ = strings.Cut(text, "### Shapes")
	for _, s := range workbook.Sheets {
		for _, c := range s.Columns {
			if c.Help == "" && !strings.Contains(text, "*"+c.Heading+"*") {
				t.Errorf("README.md says nothing about the column %s of %s", c.Heading, s.Name)
			}
		}
	}
}

// table makes a Markdown table.
func table(head string, rows [][]string) string {
	var b strings.Builder
	heads := strings.Split(head, "|")
	fmt.Fprintf(&b, "| %s |\n|%s\n", strings.Join(heads, " | "), strings.Repeat("---|", len(heads)))
	for _, r := range rows {
		for i := range r {
			r[i] = strings.ReplaceAll(strings.ReplaceAll(r[i], "|", "\\|"), "\n", " ")
		}
		fmt.Fprintf(&b, "| %s |\n", strings.Join(r, " | "))
	}
	return b.String()
}

func code(words []string) string {
	var s []string
	for _, w := range words {
		s = append(s, "`"+w+"`")
	}
	return strings.Join(s, " ")
}

// commands lists every command with its parents' words in front.
func commands(c *cobra.Command) []*cobra.Command {
	var out []*cobra.Command
	for _, sub := range c.Commands() {
		if sub.Name() == "help" || sub.Name() == "completion" {
			continue
		}
		out = append(append(out, sub), commands(sub)...)
	}
	return out
}

func commandTable() string {
	var rows [][]string
	for _, c := range commands(rootCommand(new(shelf))) {
		var flags []string
		for _, line := range strings.Split(strings.TrimSpace(c.LocalFlags().FlagUsages()), "\n") {
			if words := strings.Fields(line); len(words) > 0 {
				n := 1
				if w := strings.TrimSuffix(words[1], ".xlsx"); w == strings.ToUpper(w) { // the word for its value
					n = 2
				}
				flags = append(flags, "`"+strings.Join(words[:n], " ")+"` "+strings.Join(words[n:], " "))
			}
		}
		use := strings.TrimSuffix(c.UseLine(), " [flags]")
		rows = append(rows, []string{"`" + use + "`", c.Short, strings.Join(flags, "<br>")})
	}
	return table("Command|What it does|Flags", rows)
}

func sheetTables() string {
	var b strings.Builder
	for _, s := range workbook.Sheets {
		fmt.Fprintf(&b, "\n#### %s\n\n%s.", s.Name, s.Help)
		b.WriteString("\n\n")
		var rows [][]string
		for _, c := range s.Columns {
			rows = append(rows, []string{c.Title(), yes(c.Needed), accepts(s, c), c.Help})
		}
		b.WriteString(table("Column|Needed|Takes|What it says", rows))
	}
	return b.String() + "\n"
}

// mappingTable lists the sheets of a mapping that are no sheets of a plan.
func mappingTable() string {
	var rows [][]string
	for _, s := range intake.OwnSheets {
		for i, c := range s.Columns {
			name := ""
			if i == 0 {
				name = "**" + s.Name + "**: " + s.Help
			}
			rows = append(rows, []string{name, c.Title(), yes(c.Needed), c.Help})
		}
	}
	return table("Sheet|Column|Needed|What it says", rows)
}

func yes(b bool) string {
	if b {
		return "yes"
	}
	return ""
}

// own are the columns whose words have a table of their own in README.md.
var own = map[string]string{"Shape": "shapes", "Surroundings": "surroundings", "Stage": "stages", "Rule": "rules"}

// accepts says what a column takes.
func accepts(s *workbook.Sheet, c *workbook.Column) string {
	switch {
	case own[c.Heading] != "":
		return "a word of the table of " + own[c.Heading]
	case len(c.Choices) > 0 && c.Free:
		return "words, such as " + code(c.Choices)
	case len(c.Choices) > 0:
		return code(c.Choices)
	case c.Quantity == nil:
		return "words"
	}
	words := map[workbook.Least]string{workbook.Any: "a number", workbook.NotNegative: "a number, 0 or more", workbook.Positive: "a number above 0",
		workbook.Share: "0 to 100 %", workbook.UpToOne: "a number above 0, at most 1"}
	if c.Quantity.Plain() || c.Least == workbook.Share {
		return words[c.Least]
	}
	return words[c.Least] + ", in " + c.Quantity.Listing()
}

func shapeTable() string {
	var rows [][]string
	for _, s := range model.Shapes {
		var faces []string
		for _, f := range s.Faces() {
			faces = append(faces, f.Name)
		}
		help := s.Help
		if s.Refused != "" {
			help += "; " + s.Refused
		}
		rows = append(rows, []string{"`" + s.Name + "`", strings.Join(s.Needs, ", "), strings.Join(faces, ", "), help})
	}
	return table("Shape|Sizes it needs|Faces that may differ|For", rows) + "\n" + model.IrregularPieces + "\n"
}

func surroundingsTable() string {
	var rows [][]string
	for _, s := range model.Surfaces {
		rows = append(rows, []string{"`" + s.Name + "`", strings.Join(s.Needs, ", "), strings.Join(s.May, ", "), s.Help})
	}
	return table("Surroundings|Needs|May have|Means", rows)
}

func stageTable() string {
	var rows [][]string
	for _, s := range model.Stages {
		name, ends := "`"+s.Name+"`", "hottest place"
		if s.Also != "" {
			name += " or `" + s.Also + "`"
		}
		if s.Heats {
			ends = "coldest place"
		}
		rows = append(rows, []string{name, s.Help, ends})
	}
	return table("Stage|For|*Until slowest point reaches* waits for the", rows)
}

func ruleTable() string {
	var rows [][]string
	for _, k := range rules.Kinds {
		var needs []string
		for _, n := range k.Needs {
			needs = append(needs, strings.Join(n, " or "))
		}
		rows = append(rows, []string{"`" + k.Name + "`", strings.Join(needs, ", "), strings.Join(k.May, ", "), k.Help})
	}
	return table("Rule|Needs|May have|Means", rows)
}

func refusedList() string {
	var b strings.Builder
	for _, r := range model.Refusals {
		fmt.Fprintf(&b, "- %s: %s. Instead: %s.\n", r.Words, r.Why, strings.TrimSuffix(r.Instead, " instead"))
	}
	for _, s := range model.Shapes {
		if s.Refused != "" {
			fmt.Fprintf(&b, "- shape `%s`: %s.\n", s.Name, s.Refused)
		}
	}
	return b.String()
}

func knownTable() string {
	var rows [][]string
	n := map[string]int{}
	cases := slices.Concat(verify.Cases(), verify.LongCases(), judging.Cases())
	for i := range cases {
		n[cases[i].Area]++
	}
	for _, a := range verify.Areas {
		rows = append(rows, []string{a.Name, fmt.Sprint(n[a.Name]), a.Help})
	}
	return table("Area|Cases|Held to", rows)
}

func measuredTable() string {
	var rows [][]string
	for _, c := range verify.MeasuredCases() {
		r := c.Compare()
		rows = append(rows, []string{r.ID, r.What, r.Words(), amount(r.Measured, r.Unit), amount(r.Got, r.Unit), ratio(r.Ratio), r.Outcome(), r.Taken})
	}
	return table("Case|Food and surroundings|What|Measured|Predicted|Ratio|Asked|What the publication does not say, and what was taken", rows)
}

// block is one fenced block of README.md.
type block struct{ head, body string }

func blocks(text string) []block {
	var out []block
	for _, m := range regexp.MustCompile("(?ms)^```([^\n]*)\n(.*?)^```$").FindAllStringSubmatch(text, -1) {
		out = append(out, block{m[1], m[2]})
	}
	return out
}

// TestReadmeExamples runs every $ line of README.md in one folder, from top to bottom, and compares what it prints. A line … stands for
// any lines. Blocks headed "csv NAME" are files that the reader is asked to write.
func TestReadmeExamples(t *testing.T) {
	text := project(t, "README.md")
	ci := project(t, ".ci/test")
	t.Chdir(t.TempDir())
	if err := os.CopyFS(".", os.DirFS(top+"examples/own-list")); err != nil { // that the reader is asked to copy
		t.Fatal(err)
	}
	ran := 0
	for _, b := range blocks(text) {
		if name, ok := strings.CutPrefix(b.head, "csv "); ok {
			if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(name, []byte(b.body), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		if b.head != "console" {
			continue
		}
		for _, part := range strings.Split("\n"+b.body, "\n$ ")[1:] {
			line, want, _ := strings.Cut(part, "\n")
			want = strings.TrimSuffix(want, "\n")
			ran++
			if line == "go test -timeout 20m ./..." {
				if !strings.Contains(ci, "\n"+line+"\n") {
					t.Errorf("%q is not what .ci/test runs", line)
				}
				continue
			}
			example(t, line, want)
		}
	}
	if ran < 10 {
		t.Errorf("only %d examples were found in README.md", ran)
	}
}

// example runs one command line. Its exit code is 0, or stands at the end of the line as "# exit code 1".
func example(t *testing.T, line, want string) {
	t.Helper()
	line, exit, found := strings.Cut(line, "# exit code ")
	code := 0
	if found {
		fmt.Sscan(exit, &code)
	}
	words := strings.Fields(strings.Replace(line, "go run ./cmd/slowpoint", "slowpoint", 1))
	if words[0] != "slowpoint" {
		t.Errorf("%q is not an example of slowpoint", line)
		return
	}
	var out, errs bytes.Buffer
	if got := run(words[1:], nil, &out, &errs); got != code {
		t.Errorf("%s: exit code %d, want %d\n%s%s", line, got, code, &out, &errs)
	}
	if *rewrite && want != "" && !strings.Contains(want, "…") {
		readme := project(t, "README.md")
		if err := os.WriteFile(top+"README.md", []byte(strings.Replace(readme, want+"\n```", errs.String()+out.String()+"```", 1)), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	if want != "" && !like(errs.String()+out.String(), want) {
		t.Errorf("%s: README.md says\n%s\nit prints\n%s%s", line, want, &errs, &out)
	}
}

// like compares a text with a pattern in which a line … stands for any lines.
func like(got, pattern string) bool {
	var b strings.Builder
	b.WriteString(`(?s)\A`)
	for _, l := range strings.Split(strings.TrimRight(pattern, "\n"), "\n") {
		if l == "…" {
			b.WriteString(`(?:.*\n)?`)
		} else {
			b.WriteString(regexp.QuoteMeta(l) + `\n`)
		}
	}
	b.WriteString(`\z`)
	return regexp.MustCompile(b.String()).MatchString(got)
}

func TestLike(t *testing.T) {
	for _, c := range []struct {
		name, got, pattern string
		want               bool
	}{
		{"the same", "a\nb\n", "a\nb", true}, {"another line", "a\nc\n", "a\nb", false}, {"a line more", "a\nb\nc\n", "a\nb", false},
		{"lines left out", "a\nb\nc\nd\n", "a\n…\nd", true}, {"nothing left out", "a\nd\n", "a\n…\nd", true}, {"end differs", "a\nb\n", "a\n…\nd", false},
	} {
		if like(c.got, c.pattern) != c.want {
			t.Errorf("%s: like(%q, %q) = %v", c.name, c.got, c.pattern, !c.want)
		}
	}
}

// TestHelpExamples runs the examples of every --help.
func TestHelpExamples(t *testing.T) {
	confirmed := ownList(t)
	probeFile(t)
	for _, name := range []string{"plan.xlsx", "my-plan.xlsx", "last-year.xlsx"} {
		if code := run([]string{"blank", "--demo", name}, nil, &bytes.Buffer{}, os.Stderr); code != 0 {
			t.Fatalf("blank: exit code %d", code)
		}
	}
	for _, c := range commands(rootCommand(new(shelf))) {
		if c.Example == "" {
			t.Errorf("%s has no example", c.CommandPath())
		}
		for _, line := range strings.Split(c.Example, "\n") {
			t.Run(strings.TrimSpace(line), func(t *testing.T) {
				words := wordsOf(line)
				if i := slices.Index(words, "--map"); i > 0 { // the proposed one, after the user confirmed it
					words[i+1] = confirmed
				}
				if words[1] == "blank" { // it never writes over an existing file
					os.Remove(words[len(words)-1])
				}
				var out, errs bytes.Buffer
				if code := run(words[1:], nil, &out, &errs); code != 0 {
					t.Errorf("exit code %d\n%s%s", code, &out, &errs)
				}
			})
		}
		var out bytes.Buffer
		if code := run(append(strings.Fields(c.CommandPath())[1:], "--help"), nil, &out, &out); code != 0 || !strings.Contains(out.String(), c.Example) {
			t.Errorf("%s --help: exit code %d, or its example is missing:\n%s", c.CommandPath(), code, &out)
		}
	}
}

// wordsOf parts a line at blanks, but for those in quotation marks.
func wordsOf(line string) (words []string) {
	for i, part := range strings.Split(line, `"`) {
		if i%2 == 1 {
			words = append(words, part)
		} else {
			words = append(words, strings.Fields(part)...)
		}
	}
	return words
}

// probeFile writes a logger's file as the examples of judge have it: cooked from 09:12 on, put into ice at 11:40.
func probeFile(t *testing.T) {
	t.Helper()
	var b strings.Builder
	b.WriteString("Time,Core (°C)\n")
	for m := 0; m <= 350; m++ {
		c := 85 - 80*math.Exp(-float64(m)/30)
		if m > 148 { // after 2 h 13 min in the pot and 15 min of rest
			on := float64(m - 148)
			c = 1 + 84*math.Exp(-on*on/(on+20)/35) // a core begins to fall smoothly
		}
		fmt.Fprintf(&b, "%02d:%02d:00,%.1f\n", 9+(12+m)/60, (12+m)%60, c)
	}
	if err := os.WriteFile("probe.csv", []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}

// ownList goes to an empty folder with the list and the mapping of the script import: Recipes.xlsx, and the folder that it names.
func ownList(t *testing.T) (mapping string) {
	t.Helper()
	a, err := txtar.ParseFile("testdata/script/import.txtar")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	if err := os.Mkdir("map", 0o755); err != nil {
		t.Fatal(err)
	}
	f := excelize.NewFile()
	defer f.Close()
	for _, file := range a.Files {
		switch {
		case strings.HasPrefix(file.Name, "map/"):
			if err := os.WriteFile(file.Name, file.Data, 0o644); err != nil {
				t.Fatal(err)
			}
		case file.Name == "list.csv":
			for i, line := range strings.Split(strings.TrimSpace(string(file.Data)), "\n") {
				row := strings.Split(line, ",")
				if err := f.SetSheetRow("Sheet1", fmt.Sprint("A", i+1), &row); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
	if err := f.SaveAs("Recipes.xlsx"); err != nil {
		t.Fatal(err)
	}
	return "map"
}

// TestReadmeResults holds the table of results.json in README.md to the keys that the demo's results have.
func TestReadmeResults(t *testing.T) {
	_, text, ok := strings.Cut(project(t, "README.md"), "<!-- results.json -->\n")
	if !ok {
		t.Fatal("README.md has no table of results.json")
	}
	text, _, _ = strings.Cut(text, "\n\n")
	told := map[string]bool{}
	for _, m := range regexp.MustCompile(`(?m)^\| ([^|]*) \|`).FindAllStringSubmatch(text, -1) {
		for _, k := range regexp.MustCompile("`([^`]*)`").FindAllStringSubmatch(m[1], -1) {
			told[k[1]] = true
		}
	}
	dir := t.TempDir()
	if code := run([]string{"check", "--no-pdf", "--out", dir, "--date", "2026-01-31"}, nil, &bytes.Buffer{}, os.Stderr); code != 0 {
		t.Fatalf("exit code %d", code)
	}
	b, err := os.ReadFile(filepath.Join(dir, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var all map[string]any
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	if all["schema"] != report.Schema {
		t.Errorf("schema %v, want %s", all["schema"], report.Schema)
	}
	have := map[string]bool{}
	keys(all, "", have)
	if run([]string{"check", "--no-pdf", "--samples", "5", "--out", dir, spreadPlan(t)}, nil, &bytes.Buffer{}, os.Stderr) != exitNotMet {
		t.Error("the plan with a spread is not judged")
	}
	if b, err = os.ReadFile(filepath.Join(dir, "results.json")); err != nil {
		t.Fatal(err)
	}
	all = nil
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	keys(all, "", have)
	for _, example := range []string{"trial-runs", "chiller-failure"} {
		run([]string{"check", "--no-pdf", "--fit", "film", "--out", dir, filepath.Join(top, "examples", example, "plan")}, nil, &bytes.Buffer{}, &bytes.Buffer{})
		if b, err = os.ReadFile(filepath.Join(dir, "results.json")); err != nil {
			t.Fatal(err)
		}
		all = nil
		if err := json.Unmarshal(b, &all); err != nil {
			t.Fatal(err)
		}
		keys(all, "", have)
	}
	for k := range have {
		if !told[k] {
			t.Errorf("README.md does not explain %s of results.json", k)
		}
	}
	for k := range told {
		// what the demo has none of
		imported := strings.HasPrefix(k, "plan.sources") || strings.HasSuffix(k, "[].from") // these are held by TestImportedPlan
		if !have[k] && !imported && k != "left_out" && k != "products[].records[].unnoticed" && !strings.HasPrefix(k, "problems[].") && !strings.HasPrefix(k, "not_calculated[].") {
			t.Errorf("README.md explains %s, which results.json does not have", k)
		}
	}
}

// alike are keys whose values have a form that is told elsewhere, or is the user's own.
var alike = []string{"plan.items", "products[].records[].findings", "products[].records[].problems", "products[].as_recorded.records",
	"products[].as_recorded.findings", "products[].as_recorded.groups"}

// keys collects the paths of all keys.
func keys(v any, path string, found map[string]bool) {
	switch v := v.(type) {
	case map[string]any:
		for k, x := range v {
			p := strings.TrimPrefix(path+"."+k, ".")
			found[p] = true
			if !slices.Contains(alike, p) {
				keys(x, p, found)
			}
		}
	case []any:
		for _, x := range v {
			keys(x, path+"[]", found)
		}
	}
}

// TestReadmePlaces holds the links and the picture of README.md and DEVELOPERS.md to files that are there, and their words to the house's.
func TestReadmePlaces(t *testing.T) {
	for _, file := range []string{"README.md", "DEVELOPERS.md", "CHANGELOG.md", "SAFETY.md"} {
		text := project(t, file)
		for _, m := range regexp.MustCompile(`\]\(([^)#]+)[^)]*\)`).FindAllStringSubmatch(text, -1) {
			if _, err := os.Stat(top + m[1]); err != nil {
				t.Errorf("%s links to %s, which is not there", file, m[1])
			}
		}
		if file == "SAFETY.md" { // it says which words are not used
			continue
		}
		for _, w := range []string{"validated", "approved", "certified", "guaranteed", "compliant"} {
			if slices.Contains(regexp.MustCompile(`\w+`).FindAllString(strings.ToLower(text), -1), w) {
				t.Errorf("%s says %q", file, w)
			}
		}
	}
	info, err := os.Stat(top + "examples/demo-report.png")
	if err != nil || info.Size() > 150_000 {
		t.Errorf("the picture of the report is missing or larger than 150 kB: %v", err)
	}
}
