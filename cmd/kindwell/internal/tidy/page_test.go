package tidy

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite docs/tables.md from the declarations")

// The manual page is the declarations, word for word.
func TestManualPage(t *testing.T) {
	path := filepath.Join("..", "..", "..", "..", "docs", "tables.md")
	want := ManualPage()
	if *update {
		if err := os.WriteFile(path, want, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	got, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(bytes.ReplaceAll(got, []byte("\r\n"), []byte("\n")), want) {
		t.Error("docs/tables.md is not what the declarations say; run go generate in cmd/kindwell/internal/tidy")
	}
	for _, table := range Tables() {
		if !strings.Contains(string(want), "\n## "+table.Name+".csv\n") {
			t.Errorf("the page has no section on %s", table.Name)
		}
	}
}
