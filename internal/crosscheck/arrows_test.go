package crosscheck

import (
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

const module = "github.com/tenter-go/tenter/"

// floors gives the floor of each top-level folder; internal stands apart.
var floors = map[string]int{
	"lattice": 0, "field": 1, "action": 2, "constraint": 2, "integrate": 3, "minimize": 3, "examples": 4,
}

// floor returns the floor of a package and the folder it belongs to.
func floor(pkg string) (n int, folder string, known bool) {
	first, rest, _ := strings.Cut(pkg, "/")
	if first == "internal" {
		second, _, _ := strings.Cut(rest, "/")
		if second == "bench" || second == "crosscheck" {
			return 4, pkg, true
		}
		return -1, first, true
	}
	n, known = floors[first]
	return n, first, known
}

// wrong says what is wrong with an import of package to by package from, or "".
func wrong(from, to string) string {
	a, fa, ok := floor(from)
	if !ok {
		return "lies in no folder of the house"
	}
	b, fb, ok := floor(to)
	switch {
	case !ok:
		return "imports " + to + ", which lies in no folder of the house"
	case b > a:
		return "imports " + to + ", a floor up"
	case b == a && fa != fb:
		return "imports " + to + ", its neighbour on the floor"
	}
	return ""
}

func TestArrows(t *testing.T) {
	seen := 0
	root := filepath.Join("..", "..")
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() && file != root && (strings.HasPrefix(d.Name(), ".") || d.Name() == "testdata") {
			return filepath.SkipDir
		}
		if d.IsDir() || !strings.HasSuffix(file, ".go") {
			return nil
		}
		rel, err := filepath.Rel(root, file)
		if err != nil {
			return err
		}
		from := path.Dir(filepath.ToSlash(rel))
		f, err := parser.ParseFile(token.NewFileSet(), file, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		for _, imp := range f.Imports {
			to, err := strconv.Unquote(imp.Path.Value)
			if err != nil {
				return err
			}
			if to, inside := strings.CutPrefix(to, module); inside {
				seen++
				if why := wrong(from, to); why != "" {
					t.Errorf("%s %s", rel, why)
				}
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if seen == 0 {
		t.Error("found no import of the module's own packages")
	}
}

func TestArrowsPointDown(t *testing.T) {
	for _, c := range []struct {
		from, to string
		ok       bool
	}{
		{"field", "lattice", true},
		{"field/store", "lattice/refine", true},
		{"examples/delayline", "integrate", true},
		{"minimize", "internal/nested", true},
		{"internal/crosscheck", "minimize", true},
		{"lattice", "field", false},
		{"integrate", "minimize", false},
		{"minimize", "integrate", false},
		{"action", "constraint", false},
		{"internal/nested", "action", false},
		{"integrate", "internal/bench", false},
		{"field", "tools", false},
	} {
		if why := wrong(c.from, c.to); (why == "") != c.ok {
			t.Errorf("%s importing %s: got %q, want allowed = %v", c.from, c.to, why, c.ok)
		}
	}
}

func TestTopLevel(t *testing.T) {
	allowed := map[string]bool{"go.mod": true, "go.sum": true, "README.md": true, "DEVELOPERS.md": true, "LICENSE": true, "internal": true}
	for folder := range floors {
		allowed[folder] = true
	}
	entries, err := os.ReadDir(filepath.Join("..", ".."))
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if !allowed[e.Name()] && !strings.HasPrefix(e.Name(), ".") {
			t.Errorf("top-level entry %s is outside the fixed layout", e.Name())
		}
	}
}
