package house

import (
	"encoding/json"
	"errors"
	"go/ast"
	"go/parser"
	"go/token"
	"io"
	"io/fs"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// pkg is what the tests need of one line of 'go list -deps -json'.
type pkg struct {
	ImportPath string
	Dir        string
	Name       string
	GoFiles    []string
	Imports    []string
	Deps       []string
	Standard   bool
}

// list returns every package of the module and all that they depend on.
func list(t *testing.T) []pkg {
	t.Helper()
	// Looking at every folder here tells go test that its cached result is old
	// when a file comes or goes; it does not see what go list reads.
	if err := filepath.WalkDir(filepath.Join("..", ".."), func(_ string, _ fs.DirEntry, err error) error { return err }); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("go", "list", "-deps", "-json=ImportPath,Dir,Name,GoFiles,Imports,Deps,Standard", "kindwell/...")
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	var all []pkg
	dec := json.NewDecoder(strings.NewReader(string(out)))
	for {
		var p pkg
		if err := dec.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		all = append(all, p)
	}
	return all
}

// ours keeps the module's own packages, by path below the module.
func ours(all []pkg) map[string]pkg {
	own := map[string]pkg{}
	for _, p := range all {
		if rest, ok := strings.CutPrefix(p.ImportPath, "kindwell/"); ok {
			own[rest] = p
		}
	}
	return own
}

// below is true for path itself and everything under it.
func below(path, root string) bool { return path == root || strings.HasPrefix(path, root+"/") }

// TestImportsRunDownward pins which of our packages each package may use. A
// package that no rule names fails the test: decide where it belongs first.
func TestImportsRunDownward(t *testing.T) {
	const command = "cmd/kindwell/internal/"
	statistics := []string{"crossval", "predict", "twin", "features"}
	rules := []struct {
		floor string
		may   []string
	}{
		{"internal", []string{"internal"}},
		{"crossval", []string{"internal"}},
		{"predict", []string{"crossval", "internal"}},
		{"twin", []string{"crossval", "internal"}},
		{"features", []string{"crossval", "internal"}},
		{"testdata", []string{"internal"}},
		{command + "tidy", nil},
		{command + "cohort", append([]string{"internal"}, statistics...)},
		{command + "demo", []string{"testdata"}},
		{command + "report", []string{command + "tidy"}},
		{command + "study/config", []string{"internal"}},
		{command + "study", append([]string{"internal", command}, statistics...)},
		{"cmd/kindwell", []string{command}},
	}
	for path, p := range ours(list(t)) {
		i := slices.IndexFunc(rules, func(r struct {
			floor string
			may   []string
		}) bool {
			return below(path, r.floor)
		})
		if i < 0 {
			t.Errorf("%s stands on no floor; give it a rule here", path)
			continue
		}
		for _, imported := range p.Imports {
			target, ok := strings.CutPrefix(imported, "kindwell/")
			if !ok {
				continue
			}
			allowed := below(target, rules[i].floor) && rules[i].floor != "cmd/kindwell" || slices.ContainsFunc(rules[i].may, func(m string) bool {
				return below(target, strings.TrimSuffix(m, "/"))
			})
			if !allowed {
				t.Errorf("%s imports %s", path, target)
			}
		}
	}
}

// TestStatisticsKnowNoSurroundings: the four public packages, with all that
// they pull in, work without files, flags, printing, or a data frame.
func TestStatisticsKnowNoSurroundings(t *testing.T) {
	own := ours(list(t))
	for _, name := range []string{"crossval", "predict", "twin", "features"} {
		p, ok := own[name]
		if !ok {
			t.Errorf("package %s is gone", name)
			continue
		}
		for _, imported := range p.Imports {
			switch imported {
			case "os", "flag", "log", "log/slog", "encoding/csv", "encoding/json", "io/fs", "path/filepath", "net/http":
				t.Errorf("%s imports %s", name, imported)
			}
		}
		for _, dep := range p.Deps {
			if strings.Contains(dep, "/gota/") || strings.Contains(dep, "/cobra") || below(dep, "kindwell/cmd") {
				t.Errorf("%s depends on %s", name, dep)
			}
		}
	}
}

// TestLibrariesStayInTheirRooms: the command line library is the command's
// alone, and data frames are the cohort's.
func TestLibrariesStayInTheirRooms(t *testing.T) {
	rooms := map[string]string{
		"github.com/spf13/cobra":        "cmd/kindwell",
		"github.com/vbauerster/mpb/v8":  "cmd/kindwell",
		"github.com/go-gota/gota/":      "cmd/kindwell/internal/cohort",
		"github.com/goccy/go-yaml":      "cmd/kindwell/internal/study/config",
		"github.com/sajari/regression":  "predict",
		"github.com/invopop/jsonschema": "cmd/kindwell/internal/study/config",
	}
	own := ours(list(t))
	for library, room := range rooms {
		used := false
		for path, p := range own {
			for _, imported := range p.Imports {
				if !strings.HasPrefix(imported, library) {
					continue
				}
				used = true
				exact := room == "cmd/kindwell" && path != room
				if exact || !below(path, room) {
					t.Errorf("%s imports %s, which belongs to %s", path, library, room)
				}
			}
		}
		if !used {
			t.Errorf("%s is used nowhere", library)
		}
	}
}

// TestOnlyTheCommandTouchesTheProcess: arguments, the standard streams and the
// exit status belong to package main of the command, and to the small
// generators that are programs of their own.
func TestOnlyTheCommandTouchesTheProcess(t *testing.T) {
	files := 0
	for path, p := range ours(list(t)) {
		if p.Name == "main" {
			continue
		}
		for _, name := range p.GoFiles {
			files++
			fset := token.NewFileSet()
			f, err := parser.ParseFile(fset, filepath.Join(p.Dir, name), nil, parser.SkipObjectResolution)
			if err != nil {
				t.Fatal(err)
			}
			ast.Inspect(f, func(n ast.Node) bool {
				sel, ok := n.(*ast.SelectorExpr)
				if !ok {
					return true
				}
				if x, ok := sel.X.(*ast.Ident); ok && x.Name == "os" && slices.Contains([]string{"Args", "Stdout", "Stderr", "Stdin", "Exit"}, sel.Sel.Name) {
					t.Errorf("%s/%s uses os.%s", path, name, sel.Sel.Name)
				}
				return true
			})
		}
	}
	if files == 0 {
		t.Error("no file was looked at")
	}
}
