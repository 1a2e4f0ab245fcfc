// Command generate writes the tables of the invented Saltmere cohort into
// testdata/saltmere of the module it is run in.
package main

import (
	"errors"
	"io/fs"
	"log"
	"os"
	"path/filepath"

	"kindwell/testdata/saltmere/invent"
)

func main() {
	log.SetFlags(0)
	root, err := moduleRoot()
	if err != nil {
		log.Fatal(err)
	}
	for name, data := range invent.Tables(invent.Seed, 1) {
		if err := os.WriteFile(filepath.Join(root, "testdata", "saltmere", name), data, 0o644); err != nil {
			log.Fatal(err)
		}
	}
}

// moduleRoot returns the nearest folder, from here upward, that holds go.mod.
func moduleRoot() (string, error) {
	dir, err := os.Getwd()
	if err != nil {
		return "", err
	}
	for {
		_, err := os.Stat(filepath.Join(dir, "go.mod"))
		if err == nil || !errors.Is(err, fs.ErrNotExist) {
			return dir, err
		}
		parent := filepath.Dir(dir)
		if parent == dir {
			return "", errors.New("run this inside the module")
		}
		dir = parent
	}
}
