package cohort

import (
	"bytes"
	"compress/gzip"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf16"
)

// folderWith writes files into a new folder.
func folderWith(t testing.TB, files map[string]string) string {
	t.Helper()
	folder := t.TempDir()
	for name, text := range files {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return folder
}

// packed is a text packed with gzip; writing to memory cannot fail.
func packed(text string) string {
	var b bytes.Buffer
	z := gzip.NewWriter(&b)
	io.WriteString(z, text)
	z.Close()
	return b.String()
}

// utf16Text is a table as some spreadsheets save "Unicode text".
func utf16Text(s string, mark bool) string {
	var b strings.Builder
	if mark {
		b.WriteString("\xff\xfe")
	}
	for _, unit := range utf16.Encode([]rune(s)) {
		b.WriteByte(byte(unit))
		b.WriteByte(byte(unit >> 8))
	}
	return b.String()
}

// study is a small study: its tables and how they are read.
type study struct {
	name     string
	people   string            // people.csv, unless in says otherwise
	measures string            // measures.csv, none when empty
	traits   string            // traits.csv, none when empty
	raw      map[string]string // further files
	in       func(*Inputs)
	want     string // all of the error's message, where one is due
}

func (b study) load(t testing.TB) (*Cohort, error) {
	files := map[string]string{}
	if b.people != "" {
		files["people.csv"] = b.people
	}
	in := Inputs{People: PeopleInput{File: "people.csv"}}
	if b.measures != "" {
		files["measures.csv"] = b.measures
		in.Measures = &MeasuresInput{Files: []string{"measures.csv"}}
	}
	if b.traits != "" {
		files["traits.csv"] = b.traits
		in.Traits = []TableInput{{File: "traits.csv"}}
	}
	for name, text := range b.raw {
		files[name] = text
	}
	in.Folder = folderWith(t, files)
	if b.in != nil {
		b.in(&in)
	}
	return Load(in)
}

func peopleFile(name string) func(*Inputs) {
	return func(in *Inputs) { in.People.File = name }
}

func peopleColumns(pairs ...string) func(*Inputs) {
	return func(in *Inputs) {
		in.People.Columns = map[string]string{}
		for k := 0; k < len(pairs); k += 2 {
			in.People.Columns[pairs[k]] = pairs[k+1]
		}
	}
}

func sessions(people, measures, traits string) func(*Inputs) {
	return func(in *Inputs) {
		in.People.Session = people
		if in.Measures != nil {
			in.Measures.Session = measures
		}
		for k := range in.Traits {
			in.Traits[k].Session = traits
		}
	}
}

// pair is a people table of one twin pair.
const pair = "person,family,twin_set,zygosity,sex,age\nA,F1,T1,MZ,f,30\nB,F1,T1,MZ,f,30\n"

func numeric(names ...string) func(*Inputs) {
	return func(in *Inputs) { in.Numeric = names }
}

func rows(format string, n int) string {
	var b strings.Builder
	for k := range n {
		b.WriteString(strings.ReplaceAll(format, "%d", string(rune('0'+k))))
	}
	return b.String()
}

var packedPair = packed(pair)
