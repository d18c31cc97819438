package main

import (
	"encoding/json"
	"errors"
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"io"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/model"
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

// TestWhatIsAddedIsOneValue holds that a shape or a kind of surroundings is told by its value: beside the file that lists them and the cases
// with a known answer nothing names one, but mixed.go, which makes a stirred product of another.
func TestWhatIsAddedIsOneValue(t *testing.T) {
	listed := map[string]bool{}
	const list = "model/shapes.go"
	for _, d := range parsed(t, list).Decls {
		if g, ok := d.(*ast.GenDecl); ok && g.Tok == token.VAR {
			for _, s := range g.Specs {
				if v := s.(*ast.ValueSpec); ast.IsExported(v.Names[0].Name) && strings.HasPrefix(types.ExprString(v.Values[0]), "&S") {
					listed[v.Names[0].Name] = true
				}
			}
		}
	}
	if len(listed) != len(model.Shapes)+len(model.Surfaces) {
		t.Fatalf("%d shapes and surroundings found in %s, there are %d", len(listed), list, len(model.Shapes)+len(model.Surfaces))
	}
	may := map[string]string{"model/mixed.go": "Stirred Film Insulated"}
	files := 0
	for _, top := range []string{"model", "rules", "report", "cmd"} {
		err := filepath.WalkDir(filepath.Join("..", "..", top), func(path string, _ fs.DirEntry, err error) error {
			path = strings.TrimPrefix(filepath.ToSlash(path), "../../")
			if err != nil || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") || path == list || strings.HasPrefix(path, "model/verify/") {
				return err
			}
			files++
			for _, name := range namesUsed(parsed(t, path), listed) {
				if !slices.Contains(strings.Fields(may[path]), name) {
					t.Errorf("%s names %s: let it ask for what the value says", path, name)
				}
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	if files < 100 {
		t.Errorf("only %d files were read", files)
	}
}

func parsed(t *testing.T, path string) *ast.File {
	t.Helper()
	f, err := parser.ParseFile(token.NewFileSet(), filepath.Join("..", "..", filepath.FromSlash(path)), nil, 0)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// namesUsed lists the names of package model that a file uses: bare ones within the package, those after "model." elsewhere. The names of fields
// are not meant.
func namesUsed(f *ast.File, listed map[string]bool) []string {
	var found []string
	fields := map[ast.Node]bool{}
	ast.Inspect(f, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.SelectorExpr:
			fields[n.Sel] = true
			if of, ok := n.X.(*ast.Ident); ok && of.Name == "model" && listed[n.Sel.Name] {
				found = append(found, n.Sel.Name)
			}
		case *ast.KeyValueExpr:
			fields[n.Key] = true
		case *ast.Ident:
			if f.Name.Name == "model" && listed[n.Name] && !fields[n] {
				found = append(found, n.Name)
			}
		}
		return true
	})
	return found
}
