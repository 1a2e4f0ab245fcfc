package study

import (
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/cmd/kindwell/internal/tidy"
)

// TestFolderIsAsItsPackageSays: every file with its size and digest, every
// table with its columns, and a record and study that read back.
func TestFolderIsAsItsPackageSays(t *testing.T) {
	dir := cohortFiles(t, 24)
	folder := folderOf(t, runStudy(t, writeStudy(t, dir, wholeStudy), 2), false)
	data, err := os.ReadFile(filepath.Join(folder, tidy.PackageName))
	if err != nil {
		t.Fatal(err)
	}
	var pkg struct {
		Resources []struct {
			Path   string
			Bytes  int64
			Hash   string
			Schema struct {
				Fields []struct{ Name string }
			}
		}
	}
	if err := json.Unmarshal(data, &pkg); err != nil {
		t.Fatal(err)
	}
	tables := 0
	for _, r := range pkg.Resources {
		file, err := os.ReadFile(filepath.Join(folder, r.Path))
		if err != nil {
			t.Errorf("%s: %v", r.Path, err)
			continue
		}
		sum := sha256.Sum256(file)
		if r.Path != tidy.RecordName && (r.Bytes != int64(len(file)) || strings.TrimPrefix(r.Hash, "sha256:") != hex.EncodeToString(sum[:])) {
			t.Errorf("%s: size or digest differ", r.Path)
		}
		if filepath.Ext(r.Path) != ".csv" {
			continue
		}
		tables++
		header, err := csv.NewReader(strings.NewReader(string(file))).Read()
		if err != nil {
			t.Errorf("%s: %v", r.Path, err)
			continue
		}
		var fields []string
		for _, f := range r.Schema.Fields {
			fields = append(fields, f.Name)
		}
		if !slices.Equal(header, fields) {
			t.Errorf("%s has columns %v, described are %v", r.Path, header, fields)
		}
	}
	if tables != len(tidy.Tables()) {
		t.Errorf("%d tables, want %d", tables, len(tidy.Tables()))
	}
	asRun := filepath.Join(folder, "study_as_run.yaml")
	again, err := config.Load(asRun)
	if err != nil {
		t.Fatal(err)
	}
	if again.Seed != 5 || again.Predict.Permutations != 99 || len(again.Heritability.Models) != 5 {
		t.Errorf("the study as run reads back as %+v", again)
	}
	var rec record
	text, err := os.ReadFile(filepath.Join(folder, tidy.RecordName))
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &rec); err != nil {
		t.Fatal(err)
	}
	if rec.Seed != 5 || len(rec.Inputs) != 4 || rec.Inputs[0].File != "study.yaml" || rec.Counts["people"] == 0 || rec.Kindwell != "test" {
		t.Errorf("record: %+v", rec)
	}
}
