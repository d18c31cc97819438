package main

import (
	"encoding/json"
	"errors"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// order says which packages each package may import: our own without "slowpoint/", others by the start of their path.
// The standard library is free to all. In tests, forTests are free too.
var order = map[string]struct{ ours, others string }{
	"model/cell":             {"", ""},
	"model/unit":             {"", ""},
	"model":                  {"model/cell", "gonum.org/v1/gonum"},
	"model/food":             {"model", "gonum.org/v1/gonum"},
	"model/verify":           {"model model/food", ""},
	"model/fit":              {"model", "gonum.org/v1/gonum"},
	"rules":                  {"model model/cell", "gonum.org/v1/gonum"},
	"rules/codes":            {"rules model model/cell", "gonum.org/v1/gonum"},
	"rules/known":            {"rules model model/verify", ""},
	"report":                 {"model model/cell model/unit rules", "github.com/jung-kurt/gofpdf gonum.org/v1/plot github.com/xuri/excelize codeberg.org/go-fonts/dejavu golang.org/x/text golang.org/x/image"},
	"cmd/slowpoint/workbook": {"model model/cell model/unit model/food rules", "github.com/xuri/excelize golang.org/x/text"},
	"cmd/slowpoint/record":   {"model model/cell model/unit cmd/slowpoint/workbook", "github.com/xuri/excelize golang.org/x/text"},
	"cmd/slowpoint/intake":   {"model model/cell model/unit model/food rules cmd/slowpoint/workbook", "github.com/xuri/excelize golang.org/x/text"},
	"cmd/slowpoint": {"model model/cell model/unit model/food model/fit model/verify rules rules/codes rules/known report cmd/slowpoint/workbook cmd/slowpoint/intake cmd/slowpoint/record",
		"github.com/spf13/cobra github.com/schollz/progressbar golang.org/x/term"},
}

const forTests = "github.com/rogpeppe/go-internal pgregory.net/rapid github.com/google/go-cmp gonum.org/v1/gonum github.com/xuri/excelize"

// listed is what go list tells of a package.
type listed struct{ Imports, TestImports, XTestImports []string }

// TestImportOrder holds which way things flow.
func TestImportOrder(t *testing.T) {
	out, err := exec.Command("go", "list", "-json=ImportPath,Imports,TestImports,XTestImports", "slowpoint/...").Output()
	if err != nil {
		t.Fatal(err)
	}
	dec := json.NewDecoder(strings.NewReader(string(out)))
	seen := 0
	for {
		var p struct {
			ImportPath string
			listed
		}
		if err := dec.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		seen++
		name := strings.TrimPrefix(p.ImportPath, "slowpoint/")
		may, known := order[name]
		if !known {
			t.Errorf("%s is not in the table of packages", name)
		}
		for _, i := range p.Imports {
			if !allowed(i, may.ours, may.others) {
				t.Errorf("%s may not import %s", name, i)
			}
		}
		for _, i := range slices.Concat(p.TestImports, p.XTestImports) {
			if !strings.HasPrefix(i, "slowpoint/") && !allowed(i, may.ours, may.others+" "+forTests) {
				t.Errorf("the tests of %s may not import %s", name, i)
			}
		}
	}
	if seen != len(order) {
		t.Errorf("go list tells %d packages, the table has %d", seen, len(order))
	}
}

// allowed tells whether a path is in the standard library or in one of the two lists.
func allowed(path, ours, others string) bool {
	if own, ok := strings.CutPrefix(path, "slowpoint/"); ok {
		return slices.Contains(strings.Fields(ours), own)
	}
	if first, _, _ := strings.Cut(path, "/"); !strings.Contains(first, ".") {
		return true
	}
	return slices.ContainsFunc(strings.Fields(others), func(o string) bool { return path == o || strings.HasPrefix(path, o+"/") })
}

// TestTopLevel holds the fixed list of names at the top of the project. What git does not keep there, such as a plan of the user's own and
// the results of a run, is nobody's.
func TestTopLevel(t *testing.T) {
	fixed := strings.Fields("cmd model rules report examples testdata go.mod go.sum README.md DEVELOPERS.md SAFETY.md LICENSE CHANGELOG.md")
	for _, name := range topNames(t) {
		if !strings.HasPrefix(name, ".") && !slices.Contains(fixed, name) {
			t.Errorf("%s lies at the top of the project; only these may: %s", name, strings.Join(fixed, " "))
		}
	}
	for _, name := range fixed {
		if _, err := os.Stat(filepath.Join("..", "..", name)); err != nil {
			t.Error(err)
		}
	}
}

// topNames lists what git keeps at the top of the project; without git, all that lies there but folders of results.
func topNames(t *testing.T) []string {
	t.Helper()
	top := filepath.Join("..", "..")
	cmd := exec.Command("git", "ls-files")
	cmd.Dir = top
	if out, err := cmd.Output(); err == nil && len(out) > 0 {
		var names []string
		for path := range strings.Lines(string(out)) {
			name, _, _ := strings.Cut(strings.Trim(strings.TrimSpace(path), `"`), "/")
			names = append(names, name)
		}
		slices.Sort(names)
		return slices.Compact(names)
	}
	list, err := os.ReadDir(top)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, f := range list {
		if !f.IsDir() || !strings.HasSuffix(f.Name(), "-results") {
			names = append(names, f.Name())
		}
	}
	return names
}
