package tidy

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
)

// fill writes a small results folder; text makes its contents recognisable.
func fill(f *Folder, text string) error {
	f.Title = "Saltmere"
	return errors.Join(
		f.File("report.html", []byte("<p>"+text+"</p>\n")),
		WriteTable(f, []Warning{{Analysis: "people", Message: text}}),
		f.File("figures/scores/one.svg", []byte("<svg/>")),
		WriteTable(f, []Relation{{Relation: "mz", Pairs: 2, Families: 2, SharingHome: 2}}),
		f.File(RecordName, []byte(`{"seconds": 1}`)),
		f.File("figures/two.svg", []byte("<svg />")),
	)
}

// commit makes a whole results folder at dir.
func commit(t *testing.T, dir, text string) {
	t.Helper()
	f, err := Create(dir, true)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abort()
	if err := errors.Join(fill(f, text), f.Commit()); err != nil {
		t.Fatal(err)
	}
}

// contents returns every file below a folder by its relative path; of a link
// it returns the target.
func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	files := map[string]string{}
	err := fs.WalkDir(os.DirFS(dir), ".", func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		if d.Type()&fs.ModeSymlink != 0 {
			target, err := os.Readlink(filepath.Join(dir, path))
			files[path] = "link to " + target
			return err
		}
		data, err := os.ReadFile(filepath.Join(dir, path))
		files[path] = string(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return files
}

// names returns the sorted names in a folder.
func names(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var all []string
	for _, e := range entries {
		all = append(all, e.Name())
	}
	return all
}

func TestFolder(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "results")
	f, err := Create(dir, false)
	if err != nil {
		t.Fatal(err)
	}
	if err := fill(f, "new"); err != nil {
		t.Fatal(err)
	}
	if _, err := os.Lstat(dir); !errors.Is(err, fs.ErrNotExist) {
		t.Error("the folder is in its place before it is complete")
	}
	if got := names(t, root); len(got) != 1 || !strings.HasPrefix(got[0], "results.kindwell-unfinished-") {
		t.Errorf("while writing there is %v", got)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	if err := f.Abort(); err != nil {
		t.Errorf("Abort after Commit: %v", err)
	}
	if got := names(t, root); !slices.Equal(got, []string{"results"}) {
		t.Errorf("after Commit there is %v", got)
	}
	files := contents(t, dir)
	for path, want := range map[string]string{
		"relations.csv":          "relation,pairs,families,sharing_home\nmz,2,2,2\n",
		"warnings.csv":           "analysis,about,message\npeople,,new\n",
		"report.html":            "<p>new</p>\n",
		"figures/scores/one.svg": "<svg/>",
		"figures/two.svg":        "<svg />",
		"run.json":               `{"seconds": 1}`,
	} {
		if files[path] != want {
			t.Errorf("%s holds %q, want %q", path, files[path], want)
		}
	}
	if len(files) != 7 {
		t.Errorf("%d files, want 7", len(files))
	}
	if err := f.File("late.txt", nil); err == nil {
		t.Error("a file was taken after Commit")
	}
	if err := f.Commit(); err == nil {
		t.Error("a second Commit succeeded")
	}
	if info, err := os.Stat(dir); err != nil || runtime.GOOS != "windows" && info.Mode().Perm()&0o500 != 0o500 {
		t.Errorf("mode of the folder: %v, %v", info, err)
	}
}

func TestDataPackage(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "results")
	commit(t, dir, "hello")
	files := contents(t, dir)
	var got dataPackage
	decoder := json.NewDecoder(strings.NewReader(files[PackageName]))
	decoder.DisallowUnknownFields()
	if err := decoder.Decode(&got); err != nil {
		t.Fatal(err)
	}
	if got.Name != "kindwell-results" || got.Title != "Saltmere" || !strings.Contains(got.Schema, "/2.0/") {
		t.Errorf("package %q %q %q", got.Name, got.Title, got.Schema)
	}
	var paths []string
	for _, r := range got.Resources {
		paths = append(paths, r.Path)
		if r.Path == RecordName {
			if r.Bytes != nil || r.Hash != "" {
				t.Error("the record has a size or hash, so equal runs would differ")
			}
			continue
		}
		sum := sha256.Sum256([]byte(files[r.Path]))
		if r.Bytes == nil || *r.Bytes != int64(len(files[r.Path])) || r.Hash != "sha256:"+hex.EncodeToString(sum[:]) {
			t.Errorf("%s: bytes %v, hash %s", r.Path, r.Bytes, r.Hash)
		}
	}
	if want := []string{"relations.csv", "warnings.csv", "figures/scores/one.svg", "figures/two.svg", "report.html", "run.json"}; !slices.Equal(paths, want) {
		t.Errorf("resources %v, want %v", paths, want)
	}
	want := `      "name": "relations",
      "path": "relations.csv",
      "title": "Relations",
      "description": "One row is a kind of pair of relatives: how many such pairs the study has.",
      "type": "table",
      "format": "csv",
      "mediatype": "text/csv",
      "encoding": "utf-8",
      "bytes": 46,
      "hash": "sha256:` + sha(files["relations.csv"]) + `",
      "schema": {
        "$schema": "https://datapackage.org/profiles/2.0/tableschema.json",
        "fields": [
          {
            "name": "relation",
            "type": "string",
`
	if !strings.Contains(files[PackageName], want) {
		t.Errorf("the package has no\n%s\nbut\n%s", want, files[PackageName])
	}
	schema := got.Resources[0].Schema
	if !slices.Equal(schema.PrimaryKey, []string{"relation"}) || !slices.Equal(schema.MissingValues, []string{""}) {
		t.Errorf("key %v, missing %v", schema.PrimaryKey, schema.MissingValues)
	}
	if c := schema.Fields[0].Constraints; !c.Required || len(c.Enum) != 9 || c.Enum[0] != "mz" {
		t.Errorf("constraints of relation: %+v", c)
	}
	if f := schema.Fields[1]; f.Type != "integer" || f.Unit != "pairs" || !f.Constraints.Required {
		t.Errorf("pairs: %+v", f)
	}
}

func sha(s string) string {
	sum := sha256.Sum256([]byte(s))
	return hex.EncodeToString(sum[:])
}

func TestSchemaOfEveryKind(t *testing.T) {
	fields := map[string]schemaField{}
	for _, f := range TableOf[PredictionScore]().schema().Fields {
		fields[f.Name] = f
	}
	for name, want := range map[string]string{"trait": "string", "tested": "boolean", "n_people": "integer", "constant_folds": "integer", "value": "number"} {
		if fields[name].Type != want {
			t.Errorf("%s is a %s, want %s", name, fields[name].Type, want)
		}
	}
	if c := fields["constant_folds"].Constraints; c != nil {
		t.Errorf("constant_folds may be missing, but has %+v", c)
	}
	if c := fields["p"].Constraints; c.Required || *c.Minimum != 0 || *c.Maximum != 1 {
		t.Errorf("p: %+v", c)
	}
}

func TestSameBytesInAnyOrder(t *testing.T) {
	root := t.TempDir()
	commit(t, filepath.Join(root, "a"), "x")
	f, err := Create(filepath.Join(root, "b"), false)
	if err != nil {
		t.Fatal(err)
	}
	f.Title = "Saltmere"
	err = errors.Join(
		f.File(RecordName, []byte(`{"seconds": 22}`)),
		f.File("figures/two.svg", []byte("<svg />")),
		WriteTable(f, []Relation{{Relation: "mz", Pairs: 2, Families: 2, SharingHome: 2}}),
		f.File("figures/scores/one.svg", []byte("<svg/>")),
		WriteTable(f, []Warning{{Analysis: "people", Message: "x"}}),
		f.File("report.html", []byte("<p>x</p>\n")),
		f.Commit(),
	)
	if err != nil {
		t.Fatal(err)
	}
	if contents(t, filepath.Join(root, "a"))[PackageName] != contents(t, filepath.Join(root, "b"))[PackageName] {
		t.Error("the data package depends on the order of writing or on the record")
	}
}

func TestAbortLeavesNothing(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "results")
	commit(t, dir, "old")
	f, err := Create(dir, true)
	if err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(fill(f, "new"), f.Abort(), f.Abort()); err != nil {
		t.Fatal(err)
	}
	if got := names(t, root); !slices.Equal(got, []string{"results"}) {
		t.Errorf("after Abort there is %v", got)
	}
	if got := contents(t, dir)["report.html"]; got != "<p>old</p>\n" {
		t.Errorf("the old report is now %q", got)
	}
	if err := f.Commit(); err == nil {
		t.Error("Commit after Abort succeeded")
	}
}

func TestOverwrite(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "results")
	commit(t, dir, "old")
	if err := os.WriteFile(filepath.Join(dir, ".DS_Store"), nil, 0o644); err != nil {
		t.Fatal(err)
	}
	commit(t, dir, "new")
	if got := names(t, root); !slices.Equal(got, []string{"results"}) {
		t.Errorf("after overwriting there is %v", got)
	}
	if got := contents(t, dir)["report.html"]; got != "<p>new</p>\n" {
		t.Errorf("the report is %q", got)
	}
}

func TestPlacesThatAreRefused(t *testing.T) {
	for _, c := range []struct {
		name    string
		prepare func(t *testing.T, dir string)
		over    bool
		want    string // ends the message; DIR stands for the place
	}{
		{"not empty", func(t *testing.T, dir string) { commit(t, dir, "old") }, false,
			"DIR exists and is not empty; name another folder, or allow its results to be overwritten"},
		{"not a results folder", func(t *testing.T, dir string) { write(t, dir, "thesis.txt", "dear") }, true,
			"DIR will not be overwritten: it is not a results folder (it has no datapackage.json)"},
		{"another package", func(t *testing.T, dir string) { write(t, dir, PackageName, `{"name": "penguins"}`) }, true,
			"DIR will not be overwritten: it is not a results folder (its datapackage.json is not kindwell's)"},
		{"package that is no JSON", func(t *testing.T, dir string) { write(t, dir, PackageName, `kindwell-results`) }, true,
			"DIR will not be overwritten: it is not a results folder (its datapackage.json is not kindwell's)"},
		{"a stranger inside", func(t *testing.T, dir string) { commit(t, dir, "old"); write(t, dir, "figures/mine.svg", "x") }, true,
			"DIR will not be overwritten: it holds figures/mine.svg, which kindwell did not write"},
		{"a link inside", func(t *testing.T, dir string) {
			commit(t, dir, "old")
			if err := errors.Join(os.Remove(filepath.Join(dir, "report.html")), os.Symlink("/dev/null", filepath.Join(dir, "report.html"))); err != nil {
				t.Skip(err)
			}
		}, true, "DIR will not be overwritten: it holds report.html, which kindwell did not write"},
		{"a file", func(t *testing.T, dir string) { write(t, filepath.Dir(dir), filepath.Base(dir), "x") }, true,
			"DIR is a file, not a folder"},
		{"a link to nothing", func(t *testing.T, dir string) {
			if err := os.Symlink("nowhere", dir); err != nil {
				t.Skip(err)
			}
		}, true, "cannot write DIR: it is a link to something that does not exist"},
	} {
		t.Run(c.name, func(t *testing.T) {
			root, err := filepath.EvalSymlinks(t.TempDir())
			if err != nil {
				t.Fatal(err)
			}
			dir := filepath.Join(root, "place")
			c.prepare(t, dir)
			before := contents(t, root)
			_, err = Create(dir, c.over)
			if want := strings.ReplaceAll(c.want, "DIR", dir); err == nil || err.Error() != want {
				t.Errorf("got  %v\nwant %s", err, want)
			}
			if after := contents(t, root); !sameFiles(before, after) || len(names(t, root)) != 1 {
				t.Errorf("the refusal changed something: %v", names(t, root))
			}
		})
	}
	t.Run("no parent", func(t *testing.T) {
		parent := filepath.Join(t.TempDir(), "none")
		_, err := Create(filepath.Join(parent, "results"), false)
		if err == nil || !strings.HasSuffix(err.Error(), "the folder "+parent+" does not exist") {
			t.Error(err)
		}
	})
	t.Run("no name", func(t *testing.T) {
		if _, err := Create("", false); err == nil {
			t.Error("a folder without a name was taken")
		}
	})
	t.Run("here", func(t *testing.T) {
		t.Chdir(t.TempDir())
		for _, dir := range []string{".", ".."} {
			if _, err := Create(dir, true); err == nil || !strings.Contains(err.Error(), "is the folder you are in") {
				t.Errorf("%s: %v", dir, err)
			}
		}
	})
}

func write(t *testing.T, dir, name, text string) {
	t.Helper()
	path := filepath.Join(dir, name)
	if err := errors.Join(os.MkdirAll(filepath.Dir(path), 0o755), os.WriteFile(path, []byte(text), 0o644)); err != nil {
		t.Fatal(err)
	}
}

func sameFiles(a, b map[string]string) bool {
	if len(a) != len(b) {
		return false
	}
	for path, text := range a {
		if other, ok := b[path]; !ok || other != text {
			return false
		}
	}
	return true
}

func TestReadOnlyParent(t *testing.T) {
	if os.Getuid() == 0 || runtime.GOOS == "windows" {
		// A read-only folder stops neither root nor Windows; the file system
		// itself does.
		f, err := create(&faulty{fail: 1, err: fs.ErrPermission}, filepath.Join(t.TempDir(), "results"), false)
		if f != nil || !errors.Is(err, fs.ErrPermission) || !strings.HasPrefix(err.Error(), "cannot write ") {
			t.Errorf("%v, %v", f, err)
		}
		return
	}
	root := t.TempDir()
	if err := os.Chmod(root, 0o500); err != nil {
		t.Fatal(err)
	}
	defer os.Chmod(root, 0o700)
	if _, err := Create(filepath.Join(root, "results"), false); !errors.Is(err, fs.ErrPermission) {
		t.Errorf("got %v", err)
	}
}

func TestEmptyFolderAndLinkAreTaken(t *testing.T) {
	root := t.TempDir()
	target, link := filepath.Join(root, "disk", "target"), filepath.Join(root, "link")
	if err := errors.Join(os.MkdirAll(target, 0o755), os.Symlink(target, link)); err != nil {
		t.Skip(err)
	}
	for _, text := range []string{"one", "two"} {
		commit(t, link, text)
		if got := contents(t, target)["report.html"]; got != "<p>"+text+"</p>\n" {
			t.Errorf("the report behind the link is %q", got)
		}
		if info, err := os.Lstat(link); err != nil || info.Mode()&fs.ModeSymlink == 0 {
			t.Errorf("the link is gone: %v, %v", info, err)
		}
	}
}

func TestFileNames(t *testing.T) {
	f, err := Create(filepath.Join(t.TempDir(), "results"), false)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abort()
	if err := WriteTable(f, []Fold{}); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"", ".", "../x", "/x", "a//b", "a/../b", PackageName, "folds.csv"} {
		if err := f.File(name, nil); err == nil {
			t.Errorf("%q was taken", name)
		}
	}
	if err := WriteTable(f, []Fold{}); err == nil || err.Error() != "cannot write folds.csv: it has been written before" {
		t.Errorf("second table: %v", err)
	}
	if err := f.Commit(); err == nil || !strings.HasPrefix(err.Error(), "the results are not complete: cannot write") {
		t.Errorf("Commit after a failed write: %v", err)
	}
	if _, err := os.Lstat(f.Path()); !errors.Is(err, fs.ErrNotExist) {
		t.Error("an incomplete folder was put in place")
	}
}

// Somebody takes the place between Create and Commit: hours of work must not
// be lost, nor that somebody's files.
func TestPlaceTakenMeanwhile(t *testing.T) {
	root := t.TempDir()
	dir := filepath.Join(root, "results")
	f, err := Create(dir, false)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abort()
	if err := fill(f, "new"); err != nil {
		t.Fatal(err)
	}
	write(t, dir, "thesis.txt", "dear")
	err = f.Commit()
	if err == nil || !strings.Contains(err.Error(), "is not empty") {
		t.Fatal(err)
	}
	_, kept, _ := strings.Cut(err.Error(), "they are complete in ")
	if got := contents(t, kept)["report.html"]; got != "<p>new</p>\n" || !strings.Contains(kept, ".kindwell-complete-") {
		t.Errorf("%s holds the report %q", kept, got)
	}
	if got := contents(t, dir); len(got) != 1 || got["thesis.txt"] != "dear" {
		t.Errorf("the place holds %v", got)
	}
}
