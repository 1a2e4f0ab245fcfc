package dense

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// The committed assembly and declarations are what the generators write, but
// for the first line, which may name the command. The amd64 generator needs
// modules of its own and is left out where they are not in the module cache.
func TestGeneratedFilesAreCurrent(t *testing.T) {
	if testing.Short() {
		t.Skip("compiles the generators")
	}
	tool, err := exec.LookPath("go")
	if err != nil {
		t.Skip("no go command")
	}
	source, err := os.ReadFile("dense.go")
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	compared := 0
	for line := range strings.Lines(string(source)) {
		arguments, found := strings.CutPrefix(line, "//go:generate go ")
		if !found {
			continue
		}
		args := strings.Fields(strings.ReplaceAll(arguments, "../", folder+string(filepath.Separator)))
		run := exec.Command(tool, args...)
		run.Env = append(os.Environ(), "GOPROXY=off", "GOFLAGS=", "GOOS=", "GOARCH=", "GOWORK=off")
		if out, err := run.CombinedOutput(); err != nil {
			if strings.Contains(string(out), "module lookup disabled") {
				t.Skip("the generator's modules are not in the module cache")
			}
			t.Fatalf("go %s: %v\n%s", arguments, err, out)
		}
	}
	committed, err := filepath.Glob("tiles_*")
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range committed {
		want, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		got, err := os.ReadFile(filepath.Join(folder, name))
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(afterFirstLine(got), afterFirstLine(want)) {
			t.Errorf("%s is not what its generator writes: run go generate", name)
		}
		compared++
	}
	if compared != 4 {
		t.Errorf("%d generated files compared, want 4", compared)
	}
}

func afterFirstLine(text []byte) []byte {
	_, rest, _ := bytes.Cut(text, []byte("\n"))
	return rest
}
