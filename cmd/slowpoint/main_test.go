package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"maps"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/rogpeppe/go-internal/testscript"
	"github.com/xuri/excelize/v2"
)

// TestMain lets scripts and tests start this very program as the command slowpoint.
func TestMain(m *testing.M) { testscript.Main(m, map[string]func(){"slowpoint": main}) }

// TestScripts runs testdata/script: what a person types, and what then is on the screen and in the folder.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{Dir: "testdata/script", Cmds: map[string]func(*testscript.TestScript, bool, []string){
		"exits": exits, "same": same, "findings": sameFindings, "pdf": pdfHolds, "key": keyIs, "clean": clean, "full": full,
	}})
}

// exits runs a command and wants exactly this exit code: exits 2 slowpoint read plan.
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits CODE COMMAND ARGUMENT…")
	}
	code := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		var e *exec.ExitError
		if !errors.As(err, &e) {
			ts.Fatalf("%v", err)
		}
		code = e.ExitCode()
	}
	if want, err := strconv.Atoi(args[0]); err != nil || code != want {
		ts.Fatalf("exit code %d, want %s\n%s%s", code, args[0], ts.ReadFile("stdout"), ts.ReadFile("stderr"))
	}
}

// same wants two folders with the same files, byte for byte.
func same(ts *testscript.TestScript, neg bool, args []string) {
	a, b := folder(ts, args[0]), folder(ts, args[1])
	if len(a) == 0 {
		ts.Fatalf("%s is empty", args[0])
	}
	if maps.EqualFunc(a, b, bytes.Equal) != neg {
		return
	}
	for name := range a {
		ts.Logf("%s: the same %v", name, bytes.Equal(a[name], b[name]))
	}
	ts.Fatalf("%s has %d files, %s has %d", args[0], len(a), args[1], len(b))
}

// folder reads all files of a folder.
func folder(ts *testscript.TestScript, name string) map[string][]byte {
	files := map[string][]byte{}
	list, err := os.ReadDir(ts.MkAbs(name))
	ts.Check(err)
	for _, f := range list {
		b, err := os.ReadFile(filepath.Join(ts.MkAbs(name), f.Name()))
		ts.Check(err)
		files[f.Name()] = b
	}
	return files
}

// sameFindings wants two results.json with the same verdicts, findings and groups.
func sameFindings(ts *testscript.TestScript, _ bool, args []string) {
	var all [2]any
	for i := range all {
		var r struct {
			Products []struct {
				Product, Verdict string
				Findings, Groups []map[string]any
			}
		}
		ts.Check(json.Unmarshal([]byte(ts.ReadFile(args[i])), &r))
		if len(r.Products) == 0 {
			ts.Fatalf("%s has no product", args[i])
		}
		for _, p := range r.Products {
			if len(p.Findings) == 0 {
				ts.Fatalf("%s has no findings", p.Product)
			}
			for _, f := range p.Findings {
				delete(f, "cells") // a folder of CSV has its heading in row 1, a workbook perhaps elsewhere
			}
		}
		all[i] = r
	}
	if d := cmp.Diff(all[0], all[1]); d != "" {
		ts.Fatalf("different findings:\n%s", d)
	}
}

// keyIs wants a key of a JSON file with a value: key results.json plan.name demo.
func keyIs(ts *testscript.TestScript, neg bool, args []string) {
	var v any
	ts.Check(json.Unmarshal([]byte(ts.ReadFile(args[0])), &v))
	for _, k := range strings.Split(args[1], ".") {
		switch x := v.(type) {
		case map[string]any:
			v = x[k]
		case []any:
			i, err := strconv.Atoi(k)
			ts.Check(err)
			if i >= len(x) {
				ts.Fatalf("%s has %d entries", args[1], len(x))
			}
			v = x[i]
		default:
			ts.Fatalf("%s has no %s", args[0], args[1])
		}
	}
	if got := fmt.Sprint(v); (got == args[2]) == neg {
		ts.Fatalf("%s is %s, want %s", args[1], got, args[2])
	}
}

// clean wants a folder without a temporary file.
func clean(ts *testscript.TestScript, _ bool, args []string) {
	list, err := os.ReadDir(ts.MkAbs(args[0]))
	ts.Check(err)
	for _, f := range list {
		if strings.HasPrefix(f.Name(), ".slowpoint-") {
			ts.Fatalf("%s is left over in %s", f.Name(), args[0])
		}
	}
}

// full runs a command with its standard output on a full device, and wants exit code 3.
func full(ts *testscript.TestScript, _ bool, args []string) {
	device, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		ts.Logf("this machine has no full device")
		return
	}
	defer device.Close()
	var errs bytes.Buffer
	if code := run(args, nil, device, &errs); code != exitFault || !strings.Contains(errs.String(), "slowpoint: standard output cannot be written (no space left on device)") {
		ts.Fatalf("exit code %d\n%s", code, &errs)
	}
}

// pdfHolds wants words in the text of a PDF: pdf file.pdf WORDS….
func pdfHolds(ts *testscript.TestScript, neg bool, args []string) {
	tool := poppler("pdftotext", ts.Fatalf)
	if tool == "" {
		return
	}
	out, err := exec.Command(tool, "-layout", ts.MkAbs(args[0]), "-").CombinedOutput()
	if err != nil {
		ts.Fatalf("%s: %v %s", args[0], err, out)
	}
	for _, w := range args[1:] {
		if strings.Contains(strings.Join(strings.Fields(string(out)), " "), w) == neg {
			ts.Fatalf("%s: %q found is %v\n%s", args[0], w, neg, out)
		}
	}
}

// poppler finds a tool that reads PDFs; "" means: leave this check out. Where all checks are run, it must be there.
func poppler(name string, fatal func(string, ...any)) string {
	tool, err := exec.LookPath(name)
	if err != nil && os.Getenv("CI") != "" {
		fatal("%s is missing: install poppler-utils", name)
	}
	if err != nil {
		return ""
	}
	return tool
}

// kitchen writes an invented plan of many bricks, each with a size of its own.
func kitchen(t *testing.T, folder string, n int) {
	t.Helper()
	sheets := map[string][][]string{
		"Products": {{"Product", "Process", "Shape", "Thickness (mm)", "Width (mm)", "Length (mm)", "Food", "Start temperature (°C)"}},
		"Steps": {{"Process", "Step", "Stage", "Duration (min)", "Surroundings", "Temperature (°C)", "Temperature is", "Film coefficient (W/m²·K)"},
			{"Roast", "oven", "cook", "150", "film", "130", "measured", "21"}, {"Roast", "chiller", "cool", "300", "film", "2", "measured", "17"}},
		"Limits": {{"Limit", "Rule", "Stage", "Applies to", "From (°C)", "To (°C)", "Time (min)", "Clock starts", "Code", "Clause", "Edition"},
			{"57 to 21 °C", "cool", "cool", "all", "57", "21", "120", "crossing", "own study", "1", "1"}},
	}
	for i := range n {
		sheets["Products"] = append(sheets["Products"], []string{fmt.Sprintf("Joint %03d", i), "Roast", "brick",
			fmt.Sprint(60 + i%23), fmt.Sprint(85 + i%31), fmt.Sprint(140 + i%57), "Pork, loin, whole, lean, raw", "5"})
	}
	for name, rows := range sheets {
		var b bytes.Buffer
		if err := csv.NewWriter(&b).WriteAll(rows); err != nil {
			t.Fatal(err)
		}
		if err := os.MkdirAll(folder, 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(folder, name+".csv"), b.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// TestInterrupt presses Ctrl-C before the first report of a long plan, or in the middle: it ends at once, what is finished is whole, and
// nothing else is left.
func TestInterrupt(t *testing.T) {
	for _, c := range []struct {
		name    string
		reports int // that are finished when it is pressed
	}{{"while the first products are calculated", 0}, {"in the middle", 3}} {
		t.Run(c.name, func(t *testing.T) { interrupt(t, c.reports) })
	}
}

func interrupt(t *testing.T, reports int) {
	dir := t.TempDir()
	kitchen(t, filepath.Join(dir, "plan"), 600)
	out := filepath.Join(dir, "out")
	if err := os.Mkdir(out, 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(out, "results.json"), []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("slowpoint", "check", filepath.Join(dir, "plan"), "--out", out)
	var errs, told bytes.Buffer
	cmd.Stderr, cmd.Stdout = &errs, &told
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	finished := func() []string {
		list, _ := filepath.Glob(filepath.Join(out, "*.pdf"))
		return list
	}
	spools := func() []string {
		list, _ := filepath.Glob(filepath.Join(out, ".slowpoint-*"))
		return list
	}
	for start := time.Now(); len(finished()) < reports || len(spools()) < 3; time.Sleep(time.Millisecond) {
		if time.Since(start) > time.Minute {
			cmd.Process.Kill()
			t.Fatalf("no reports after a minute: %s", &errs)
		}
	}
	pressed := time.Now()
	if err := cmd.Process.Signal(os.Interrupt); err != nil {
		t.Fatal(err)
	}
	var e *exec.ExitError
	if err := cmd.Wait(); !errors.As(err, &e) || e.ExitCode() != exitFault {
		t.Fatalf("ended with %v, want exit code %d\n%s%s", err, exitFault, &errs, &told)
	}
	// A few milliseconds as a rule, for the temporary files that are removed; two seconds on a machine that does much else.
	if took := time.Since(pressed); took > 2*time.Second {
		t.Errorf("it went on for %v", took)
	}
	pdfs := finished()
	said := fmt.Sprintf("stopped: %s of this run finished and whole in %s; not written: results.json, results.xlsx, report.txt, summary.pdf, ", count(len(pdfs), "file"), out)
	if !strings.Contains(errs.String(), said) || !strings.Contains(errs.String(), " more; of an earlier run: results.json\n") || told.Len() > 0 {
		t.Errorf("standard error: %s\nstandard output: %s\nwant %s", &errs, &told, said)
	}
	list, err := os.ReadDir(out)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range list {
		if !strings.HasPrefix(f.Name(), "Joint_") && f.Name() != "results.json" {
			t.Errorf("%s is left over", f.Name())
		}
	}
	if len(pdfs) < reports || len(pdfs) >= 600 {
		t.Errorf("%d reports: it was not stopped on the way", len(pdfs))
	}
	tool := poppler("pdfinfo", t.Fatalf)
	for _, f := range pdfs {
		b, err := os.ReadFile(f)
		if err != nil || !bytes.HasPrefix(b, []byte("%PDF-")) || !bytes.HasSuffix(bytes.TrimSpace(b), []byte("%%EOF")) {
			t.Errorf("%s is not whole: %v", f, err)
		}
		if tool != "" {
			if out, err := exec.Command(tool, f).CombinedOutput(); err != nil || bytes.Contains(out, []byte("Error")) {
				t.Errorf("%s cannot be read: %v %s", f, err, out)
			}
		}
	}
}

// TestDemo holds the demo to what it is there to show: every must limit met, one advice limit not.
func TestDemo(t *testing.T) {
	dir := t.TempDir()
	var out, errs bytes.Buffer
	if code := run([]string{"check", "--out", dir, "--no-pdf"}, nil, &out, &errs); code != exitMet || errs.Len() > 0 {
		t.Fatalf("exit code %d\n%s", code, &errs)
	}
	b, err := os.ReadFile(filepath.Join(dir, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var r struct {
		Products []struct {
			Verdict  string
			Findings []struct{ Limit, Level, Verdict string }
		}
	}
	if err := json.Unmarshal(b, &r); err != nil {
		t.Fatal(err)
	}
	var not []string
	for _, p := range r.Products {
		if p.Verdict != "met" {
			t.Errorf("verdict %s", p.Verdict)
		}
		for _, f := range p.Findings {
			if f.Verdict != "met" && f.Verdict != "not applicable" {
				not = append(not, f.Level+" "+f.Verdict+": "+f.Limit)
			}
		}
	}
	if want := []string{"advice not met: UK cook-chill 1989: chilling starts within 30 min"}; len(r.Products) != 5 || cmp.Diff(want, not) != "" {
		t.Errorf("%d products; not met: %q, want %q", len(r.Products), not, want)
	}
	if !strings.Contains(out.String(), "Advice not met: UK cook-chill 1989") {
		t.Errorf("the advice is not told:\n%s", &out)
	}
}

// TestShelf clears the shelf while files are being written: no half file gets a name, none is left, and none begins afterwards.
func TestShelf(t *testing.T) {
	dir := t.TempDir()
	s := &shelf{}
	at := func(name string) string { return filepath.Join(dir, name) }
	for _, name := range []string{"whole", "half", "of another product"} {
		if err := os.WriteFile(at(name), []byte("of an earlier run"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	s.expect(at("whole"), at("half"), at("late"))
	s.spare(at("of another product"), at("never made"))
	words := func(text string) func(io.Writer) error {
		return func(w io.Writer) error { _, err := io.WriteString(w, text); return err }
	}
	if err := s.writeWhole(at("whole"), words("all of it")); err != nil {
		t.Fatal(err)
	}
	said := ""
	if err := s.writeWhole(at("half"), func(w io.Writer) error {
		err := words("some of it")(w)
		said = s.clear()
		return err
	}); err == nil {
		t.Error("a file that was cleared away was kept")
	}
	if err := s.writeWhole(at("late"), words("too late")); err == nil {
		t.Error("a file was begun after the shelf was cleared")
	}
	list, err := os.ReadDir(dir)
	if err != nil || len(list) != 3 {
		t.Errorf("left over: %v %v", list, err)
	}
	if want := "1 file of this run finished and whole in " + dir + "; not written: half, late; of an earlier run: half, of another product"; said != want {
		t.Errorf("%q, want %q", said, want)
	}
}

func TestFileNames(t *testing.T) {
	long := strings.Repeat("ż", 200)
	for _, c := range []struct {
		name       string
		have, want []string
	}{
		{"letters of any script stay", []string{"Żurek", "Борщ", "粥", "Crème brûlée"}, []string{"Żurek", "Борщ", "粥", "Crème_brûlée"}},
		{"nothing leads out of the folder", []string{"../../etc/passwd", `a\b`, ".hidden", "a:b*c?"}, []string{"______etc_passwd", "a_b", "_hidden", "a_b_c_"}},
		{"collisions are numbered", []string{"a b", "a_b", "A_B", "a/b"}, []string{"a_b", "a_b_2", "A_B_3", "a_b_4"}},
		{"names of other results are taken", []string{"summary", "Results", "report"}, []string{"summary_2", "Results_2", "report_2"}},
		{"names of devices are taken", []string{"con", "LPT1"}, []string{"con_2", "LPT1_2"}},
		{"a number that is taken already", []string{"a_2", "a", "a"}, []string{"a_2", "a", "a_3"}},
		{"emoji", []string{"🍲", "🍜"}, []string{"_", "__2"}},
		{"long names are cut", []string{long, long}, []string{long[:120], long[:120] + "_2"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if d := cmp.Diff(c.want, fileNames(c.have)); d != "" {
				t.Error(d)
			}
		})
	}
}

// --only names a report as a run of the whole plan does, so that it never takes the place of another product's.
func TestOnlyKeepsFileNames(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	writePlan(t, dir, map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\na/b,A,slab,21,Mash,60\na_b,A,slab,37,Mash,60\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Freezing point (°C),Source\nMash,0.52,1040,3600,no,-1,invented\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nA,chill,cool,90,film,3,25\n",
	})
	out := dir + "-results"
	check := func(more ...string) {
		t.Helper()
		var told, errs bytes.Buffer
		if code := run(append([]string{"check", dir, "--date", "2026-01-31"}, more...), nil, &told, &errs); code > exitNotMet {
			t.Fatalf("exit %d: %s", code, &errs)
		}
	}
	check()
	first, err := os.ReadFile(filepath.Join(out, "a_b.pdf"))
	if err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(filepath.Join(out, "a_b_2.pdf")); err != nil {
		t.Fatal(err)
	}
	check("--only", "a_b")
	if now, err := os.ReadFile(filepath.Join(out, "a_b.pdf")); err != nil || !bytes.Equal(now, first) {
		t.Errorf("the report of a/b is another: %v", err)
	}
	if _, err := os.Stat(filepath.Join(out, "a_b_2.pdf")); err != nil {
		t.Error(err)
	}
}

// Whoever has a part of a plan calculated sees in every result that there is more of it: three products more, of which one would not be met.
func TestOnlyTellsWhatItLeavesOut(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	writePlan(t, dir, map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nGood,A,slab,21,Mash,60\nBad,A,slab,140,Mash,60\nThird,A,slab,23,Mash,60\nFourth,A,slab,25,Mash,60\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Freezing point (°C),Source\nMash,0.52,1040,3600,no,-1,invented\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nA,chill,cool,90,film,3,25\n",
		"Limits":   "Limit,Rule,Stage,Applies to,To (°C),Code,Clause,Edition\ncold,by the end,cool,all,21,invented,1,1\n",
	})
	check := func(only ...string) string {
		var told, errs bytes.Buffer
		if code := run(append([]string{"check", dir, "--date", "2026-01-31"}, only...), nil, &told, &errs); code != exitMet {
			t.Fatalf("exit %d: %s%s", code, &told, &errs)
		}
		return told.String()
	}
	const left = "3 more products of the plan were left out by --only, and nothing is said of them here: Bad, Third, Fourth."
	if told := check("--only", "Good"); !strings.Contains(told, "\n"+left+"\n") {
		t.Errorf("the screen:\n%s", told)
	}
	read := func(name string) string {
		b, err := os.ReadFile(filepath.Join(dir+"-results", name))
		if err != nil {
			t.Fatal(err)
		}
		return string(b)
	}
	var js struct {
		LeftOut []string `json:"left_out"`
	}
	if err := json.Unmarshal([]byte(read("results.json")), &js); err != nil || strings.Join(js.LeftOut, ", ") != "Bad, Third, Fourth" {
		t.Errorf("results.json: %v %v", js.LeftOut, err)
	}
	if n := strings.Count(read("report.txt"), left); n != 2 { // beside the plan, and above the list of products
		t.Errorf("report.txt says it %d times", n)
	}
	book, err := excelize.OpenFile(filepath.Join(dir+"-results", "results.xlsx"))
	if err != nil {
		t.Fatal(err)
	}
	defer book.Close()
	if found, err := book.SearchSheet("Overview", left); err != nil || len(found) != 1 {
		t.Errorf("results.xlsx: %v %v", found, err)
	}
	if tool := poppler("pdftotext", t.Fatalf); tool != "" {
		out, err := exec.Command(tool, "-layout", "-l", "1", filepath.Join(dir+"-results", "summary.pdf"), "-").Output()
		page := strings.Join(strings.Fields(string(out)), " ")
		if err != nil || !strings.Contains(page, left) || !strings.Contains(page, "Overview of a part of the plan") {
			t.Errorf("summary.pdf: %v\n%s", err, page)
		}
	}
	if told := check("--only", "Good", "--only", "third", "--only", "fourth"); !strings.Contains(told, "1 more product of the plan was left out by --only, and nothing is said of it here: Bad.") {
		t.Errorf("the screen:\n%s", told)
	}
}

func TestBeside(t *testing.T) {
	here := filepath.Join(t.TempDir(), "summer menu")
	if err := os.MkdirAll(filepath.Join(here, "trays"), 0o755); err != nil {
		t.Fatal(err)
	}
	t.Chdir(here)
	for plan, want := range map[string]string{"plan.xlsx": "plan-results", "plan.XLSM": "plan-results", "trays": "trays-results", "trays/": "trays-results",
		"menu.v2": "menu.v2-results", "../x/plan.xlsx": "../x/plan-results", ".": here + "-results", "trays/..": here + "-results"} {
		if got := beside(plan); got != filepath.FromSlash(want) {
			t.Errorf("%s: %s, want %s", plan, got, want)
		}
	}
}

func TestWriteWhole(t *testing.T) {
	path := filepath.Join(t.TempDir(), "kept")
	write := func(text string, err error) error {
		return new(shelf).writeWhole(path, func(w io.Writer) error {
			if _, err := io.WriteString(w, text); err != nil {
				return err
			}
			return err
		})
	}
	if err := write("first", nil); err != nil {
		t.Fatal(err)
	}
	if err := write("half", &os.PathError{Op: "write", Path: "hidden", Err: syscall.ENOSPC}); err == nil || strings.Contains(err.Error(), "hidden") || !strings.Contains(err.Error(), "no space left") {
		t.Errorf("%v", err)
	}
	if b, err := os.ReadFile(path); err != nil || string(b) != "first" {
		t.Errorf("%q %v", b, err)
	}
	if list, _ := os.ReadDir(filepath.Dir(path)); len(list) != 1 {
		t.Errorf("%d files are left", len(list))
	}
}

// TestWhatCannotBeWritten: an error met while a file is written names the file that the user knows, once, not the temporary one.
func TestWhatCannotBeWritten(t *testing.T) {
	var s shelf
	path := filepath.Join(t.TempDir(), "results.json")
	f, err := s.spool(path)
	if err != nil {
		t.Fatal(err)
	}
	f.file.Close() // as a full disk would, further writing fails
	_, err = f.Write(make([]byte, 1<<17))
	for _, err := range []error{err, cannotWrite("results.zip", err), f.keep()} {
		if err == nil || !strings.HasPrefix(err.Error(), path+" cannot be written (") || strings.Contains(err.Error(), ".slowpoint-") || strings.Count(err.Error(), path) != 1 {
			t.Errorf("%v", err)
		}
	}
	f.drop()
}

// TestWhereNothingCanBeWritten: what is told names the folder of the results, why nothing can be written there and what to do, and nothing is left.
func TestWhereNothingCanBeWritten(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "notes")
	if err := os.WriteFile(file, nil, 0o644); err != nil {
		t.Fatal(err)
	}
	var s shelf
	in := filepath.Join(file, "results")
	if err := s.makeFolder(in); err == nil || err.Error() != in+" cannot be written (not a directory): choose another folder with --out, or move the file that stands where a folder has to be" {
		t.Errorf("a file instead of a folder: %v", err)
	}
	for _, x := range []struct {
		why  error
		want string
	}{
		{syscall.EACCES, "D cannot be written (permission denied): choose another folder with --out, or give yourself the right to write there"},
		{syscall.EROFS, "D cannot be written (read-only file system): choose another folder with --out: nothing can be written to that disk"},
		{syscall.ENOSPC, "D cannot be written (no space left on device): choose another folder with --out, or make room on that disk"},
		{syscall.ENOENT, "D cannot be written (no such file or directory): choose another folder with --out: the folder that it lies in is not there, and cannot be made"},
	} {
		if got := (&unwritable{"D", x.why, true}).Error(); got != x.want {
			t.Errorf("%s", got)
		}
	}
	t.Run("a folder that is locked", func(t *testing.T) {
		locked := filepath.Join(dir, "locked")
		if err := os.Mkdir(locked, 0o555); err != nil {
			t.Fatal(err)
		}
		if f, err := os.CreateTemp(locked, "x"); err == nil {
			f.Close()
			t.Skip("whoever runs this may write anywhere, as root may")
		}
		if err := s.makeFolder(locked); err == nil || !strings.HasPrefix(err.Error(), locked+" cannot be written (permission denied)") {
			t.Errorf("%v", err)
		}
	})
}

// Whoever runs a plan again without PDFs, or a part of it, is told which files in the folder are of an earlier run.
func TestFilesOfAnEarlierRunAreTold(t *testing.T) {
	out := filepath.Join(t.TempDir(), "results")
	plan := filepath.Join("..", "..", "examples", "eggs-and-dumplings", "plan.xlsx")
	said := func(more ...string) string {
		var told, errs bytes.Buffer
		run(append([]string{"check", plan, "--out", out}, more...), nil, &told, &errs)
		return told.String()
	}
	const left = "Left from an earlier run, not of this one: "
	if got := said("--one-pdf"); strings.Contains(got, left) {
		t.Errorf("first run: %s", got)
	}
	if got := said("--no-pdf"); !strings.Contains(got, left+"summary.pdf\n") {
		t.Errorf("without PDFs: %s", got)
	}
}

// The report of a product that was calculated once, and now has a mistake, is told to be of an earlier run; the others keep their names.
func TestReportOfARefusedProductIsTold(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "plan")
	check := func(thickness string) string {
		writePlan(t, dir, map[string]string{
			"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\na/b,A,slab," + thickness + ",Mash,60\na_b,A,slab,37,Mash,60\n",
			"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Freezing point (°C),Source\nMash,0.52,1040,3600,no,-1,invented\n",
			"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nA,chill,cool,90,film,3,25\n",
			"Limits":   "Limit,Rule,Stage,Applies to,To (°C),Code,Clause,Edition\ncold,by the end,cool,all,30,invented,1,1\n",
		})
		var told, errs bytes.Buffer
		run([]string{"check", dir, "--date", "2026-01-31"}, nil, &told, &errs)
		return told.String()
	}
	check("21")
	first, err := os.ReadFile(filepath.Join(dir+"-results", "a_b.pdf"))
	if err != nil {
		t.Fatal(err)
	}
	if told := check("-20"); !strings.Contains(told, "Left from an earlier run, not of this one: a_b.pdf\n") {
		t.Errorf("the screen:\n%s", told)
	}
	if now, err := os.ReadFile(filepath.Join(dir+"-results", "a_b.pdf")); err != nil || !bytes.Equal(now, first) {
		t.Errorf("the old report of a/b is now that of another product: %v", err)
	}
}
