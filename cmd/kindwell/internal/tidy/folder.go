package tidy

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
)

// Names of the files with a meaning of their own in a results folder.
const (
	PackageName = "datapackage.json" // the description of all tables; written by Commit
	RecordName  = "run.json"         // the record of the run; holds times, so it differs between equal runs
)

// Folder is a results folder being written. Everything goes into a folder
// beside its place, on the same file system, named
// NAME.kindwell-unfinished-PROCESS-NUMBER; [Folder.Commit] makes it the
// results folder in one step, [Folder.Abort] removes it. A Folder is used by
// one goroutine at a time.
type Folder struct {
	Title string // title of the study, for datapackage.json; may be empty

	dir       string // where the results go: absolute, links resolved
	temp      string // where they are written until then
	overwrite bool
	disk      disk
	files     []written       // in the order they were written
	folders   []string        // sub-folders, relative to temp, parents first
	names     map[string]bool // relative paths in use
	failed    error           // first error of a write; Commit refuses after it
	closed    bool            // committed or aborted
}

// written is a file that lies complete in the temporary folder.
type written struct {
	path  string // relative, with slashes
	table *Table // nil for a file that is no table
	bytes int64
	hash  string // SHA-256 in hexadecimal
}

// Create begins a results folder that will stand at dir. Its parent must
// exist. What is at dir now decides:
//
//   - nothing, or an empty folder: fine;
//   - a folder with something in it: refused, unless overwrite is true and it
//     is a results folder whose every file kindwell wrote (it holds a
//     datapackage.json of ours that lists them);
//   - a file, or the folder the program runs in or one above it: refused.
//
// The old results stay as they are until Commit. The caller defers Abort,
// which does nothing after a Commit.
func Create(dir string, overwrite bool) (*Folder, error) {
	return create(osDisk{}, dir, overwrite)
}

func create(d disk, dir string, overwrite bool) (*Folder, error) {
	place, err := resolve(dir)
	if err != nil {
		return nil, err
	}
	f := &Folder{dir: place, overwrite: overwrite, disk: d, names: map[string]bool{}}
	if err := f.checkPlace(); err != nil {
		return nil, err
	}
	for n := 0; ; n++ {
		f.temp = f.beside("unfinished", n)
		err := d.Mkdir(f.temp)
		if err == nil {
			return f, nil
		}
		if !errors.Is(err, fs.ErrExist) {
			return nil, fmt.Errorf("cannot write %s: %w", dir, err)
		}
	}
}

// Path returns the folder's final place as an absolute path.
func (f *Folder) Path() string { return f.dir }

// WriteTable writes the table of rows into the folder; see [Write] for the
// errors. A table is written once. It panics when T is not the row of a
// table.
func WriteTable[T any](f *Folder, rows []T) error {
	t := TableOf[T]()
	return f.add(t.Path(), t, func(w io.Writer) error { return Write(w, rows) })
}

// File writes a file that is no table. Its name is relative to the folder,
// with slashes; sub-folders are made as needed. [PackageName] is refused.
func (f *Folder) File(name string, data []byte) error {
	if name == PackageName {
		return errors.New("cannot write " + PackageName + ": that is left to Commit")
	}
	return f.addBytes(name, data)
}

func (f *Folder) addBytes(name string, data []byte) error {
	return f.add(name, nil, func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
}

// add writes one file through a hash.
func (f *Folder) add(name string, t *Table, write func(io.Writer) error) (err error) {
	if f.closed {
		return fmt.Errorf("%s: the results folder is closed", name)
	}
	defer func() {
		if err != nil {
			err = fmt.Errorf("cannot write %s: %w", name, err)
			if f.failed == nil {
				f.failed = err
			}
		}
	}()
	if err := f.checkName(name); err != nil {
		return err
	}
	if err := f.makeFolders(name); err != nil {
		return err
	}
	file, err := f.disk.Create(filepath.Join(f.temp, filepath.FromSlash(name)))
	if err != nil {
		return err
	}
	f.names[name] = true
	sum := sha256.New()
	size := counter{}
	err = write(io.MultiWriter(file, sum, &size))
	if err := errors.Join(err, file.Close()); err != nil {
		return err
	}
	f.files = append(f.files, written{path: name, table: t, bytes: size.n, hash: hex.EncodeToString(sum.Sum(nil))})
	return nil
}

// checkName refuses a name that would leave the folder or that is taken.
func (f *Folder) checkName(name string) error {
	switch {
	case !fs.ValidPath(name) || name == "." || !filepath.IsLocal(filepath.FromSlash(name)):
		return errors.New("the name must be a relative path with slashes")
	case f.names[name]:
		return errors.New("it has been written before")
	}
	return nil
}

// makeFolders makes the sub-folders of a name that are not there yet.
func (f *Folder) makeFolders(name string) error {
	for i := range len(name) {
		if name[i] != '/' || slices.Contains(f.folders, name[:i]) {
			continue
		}
		if err := f.disk.Mkdir(filepath.Join(f.temp, filepath.FromSlash(name[:i]))); err != nil {
			return err
		}
		f.folders = append(f.folders, name[:i])
	}
	return nil
}

// Abort removes what was written. It does nothing after a Commit or another
// Abort.
func (f *Folder) Abort() error {
	if f.closed {
		return nil
	}
	f.closed = true
	return f.disk.RemoveAll(f.temp)
}

// beside returns the path of a sibling of the results folder that tells by
// its name what it is and which process made it.
func (f *Folder) beside(what string, n int) string {
	return fmt.Sprintf("%s.kindwell-%s-%d-%d", f.dir, what, os.Getpid(), n)
}

// resolve makes a path absolute and, where something is there, follows links,
// so that a linked results folder is replaced where it lies.
func resolve(dir string) (string, error) {
	if dir == "" {
		return "", errors.New("the results folder has no name")
	}
	place, err := filepath.Abs(dir)
	if err != nil {
		return "", err
	}
	if _, err := os.Lstat(place); errors.Is(err, fs.ErrNotExist) {
		parent, err := filepath.EvalSymlinks(filepath.Dir(place))
		if errors.Is(err, fs.ErrNotExist) {
			return "", fmt.Errorf("cannot write %s: the folder %s does not exist", dir, filepath.Dir(place))
		}
		if err != nil {
			return "", fmt.Errorf("cannot write %s: %w", dir, err)
		}
		return filepath.Join(parent, filepath.Base(place)), nil
	}
	resolved, err := filepath.EvalSymlinks(place)
	if errors.Is(err, fs.ErrNotExist) {
		return "", fmt.Errorf("cannot write %s: it is a link to something that does not exist", dir)
	}
	if err != nil {
		return "", fmt.Errorf("cannot write %s: %w", dir, err)
	}
	return resolved, nil
}

// within reports whether path is dir or lies below it.
func within(dir, path string) bool {
	relative, err := filepath.Rel(dir, path)
	return err == nil && filepath.IsLocal(relative)
}

// counter counts bytes.
type counter struct{ n int64 }

func (c *counter) Write(p []byte) (int, error) {
	c.n += int64(len(p))
	return len(p), nil
}
