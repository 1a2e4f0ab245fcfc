package demo

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"kindwell/testdata/saltmere"
)

// file is one file of the demo.
type file struct {
	name string
	data []byte
}

// WriteTo writes the files of the demo into dir, which is made if needed
// together with the folders above it. Each file is written whole or not at
// all. A file that is there already with the same content is left alone; one
// with another content is refused, before anything is written, unless
// overwrite is true. Other files in dir are never touched.
func WriteTo(dir string, overwrite bool) error {
	files, err := load(saltmere.Files())
	if err != nil {
		return err
	}
	var toWrite []file
	for _, f := range files {
		path := filepath.Join(dir, f.name)
		found, err := os.ReadFile(path)
		switch {
		case errors.Is(err, fs.ErrNotExist):
		case err != nil:
			return err
		case bytes.Equal(found, f.data):
			continue
		case !overwrite:
			return fmt.Errorf("%s exists and differs from the demo's; name another folder, or allow it to be overwritten", path)
		}
		toWrite = append(toWrite, f)
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	for _, f := range toWrite {
		if err := replace(filepath.Join(dir, f.name), f.data); err != nil {
			return err
		}
	}
	return nil
}

// load reads the files of a folder in the order of their names.
func load(folder fs.FS) ([]file, error) {
	entries, err := fs.ReadDir(folder, ".")
	if err != nil {
		return nil, err
	}
	var files []file
	for _, e := range entries {
		data, err := fs.ReadFile(folder, e.Name())
		if err != nil {
			return nil, err
		}
		files = append(files, file{e.Name(), data})
	}
	return files, nil
}

// replace puts a file in its place in one step: it is written beside it,
// brought to the disk and renamed.
func replace(path string, data []byte) error {
	beside := fmt.Sprintf("%s.kindwell-unfinished-%d", path, os.Getpid())
	f, err := os.OpenFile(beside, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	if err = errors.Join(err, f.Sync(), f.Close()); err == nil {
		err = os.Rename(beside, path)
	}
	if err != nil {
		return errors.Join(err, os.Remove(beside))
	}
	return nil
}
