package tidy

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
)

// Commit writes datapackage.json, waits until every file is on the disk and
// renames the folder into its place. With overwrite the old results are moved
// aside, the new ones renamed in and the old ones removed; when the renaming
// fails, the old ones are put back.
//
// After an error from a write, or when a file cannot be brought to the disk,
// nothing of the new folder stays. When all of it is written but the place
// cannot be taken (somebody has put something there meanwhile), the complete
// results are kept beside it and the error names where.
func (f *Folder) Commit() error {
	if f.closed {
		return errors.New("the results folder is closed")
	}
	if err := f.complete(); err != nil {
		return errors.Join(err, f.Abort())
	}
	f.closed = true
	old, err := f.takePlace()
	if err != nil {
		return fmt.Errorf("cannot put the results at %s: %w; they are complete in %s", f.dir, err, f.keep())
	}
	if err := f.disk.SyncFolder(filepath.Dir(f.dir)); err != nil {
		return fmt.Errorf("the results are at %s but may not outlive a power cut: %w", f.dir, err)
	}
	if old == "" {
		return nil
	}
	if err := f.disk.RemoveAll(old); err != nil {
		return fmt.Errorf("the results are at %s; the old ones could not be removed: %w", f.dir, err)
	}
	return nil
}

// complete writes the data package and syncs everything below the temporary
// folder, files first, so that no name is on the disk before its content.
func (f *Folder) complete() error {
	if f.failed != nil {
		return fmt.Errorf("the results are not complete: %w", f.failed)
	}
	description, err := f.describe()
	if err != nil {
		return err
	}
	if err := f.addBytes(PackageName, description); err != nil {
		return err
	}
	for _, file := range f.files {
		if err := f.disk.SyncFile(filepath.Join(f.temp, filepath.FromSlash(file.path))); err != nil {
			return err
		}
	}
	for _, folder := range slices.Backward(f.folders) {
		if err := f.disk.SyncFolder(filepath.Join(f.temp, filepath.FromSlash(folder))); err != nil {
			return err
		}
	}
	return f.disk.SyncFolder(f.temp)
}

// takePlace renames the temporary folder to its place and returns where the
// old results are, "" when there were none.
func (f *Folder) takePlace() (old string, err error) {
	if err := f.checkPlace(); err != nil {
		return "", err
	}
	entries, err := os.ReadDir(f.dir)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return "", f.disk.Rename(f.temp, f.dir)
	case err != nil:
		return "", err
	case len(entries) == 0:
		if err := f.disk.RemoveEmpty(f.dir); err != nil {
			return "", err
		}
		return "", f.disk.Rename(f.temp, f.dir)
	}
	old = f.free("old")
	if err := f.disk.Rename(f.dir, old); err != nil {
		return "", err
	}
	if err := f.disk.Rename(f.temp, f.dir); err != nil {
		if back := f.disk.Rename(old, f.dir); back != nil {
			return "", fmt.Errorf("%w (the old results are in %s: %w)", err, old, back)
		}
		return "", err
	}
	return old, nil
}

// keep gives the complete but unplaced results a name that says so and
// returns it.
func (f *Folder) keep() string {
	kept := f.free("complete")
	if err := f.disk.Rename(f.temp, kept); err != nil {
		return f.temp
	}
	return kept
}

// free returns the path of a sibling that does not exist.
func (f *Folder) free(what string) string {
	for n := 0; ; n++ {
		path := f.beside(what, n)
		if _, err := os.Lstat(path); errors.Is(err, fs.ErrNotExist) {
			return path
		}
	}
}

// ErrNotEmpty is in the error of a results folder that holds something, and
// may not be overwritten.
var ErrNotEmpty = errors.New("exists and is not empty")

// checkPlace refuses a place that must not be replaced; see Create.
func (f *Folder) checkPlace() error {
	info, err := os.Stat(f.dir)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	if !info.IsDir() {
		return fmt.Errorf("%s is a file, not a folder", f.dir)
	}
	if here, err := os.Getwd(); err == nil {
		if here, err = filepath.EvalSymlinks(here); err == nil && within(f.dir, here) {
			return fmt.Errorf("%s is the folder you are in, or one above it; results need a folder of their own", f.dir)
		}
	}
	entries, err := os.ReadDir(f.dir)
	switch {
	case err != nil:
		return err
	case len(entries) == 0:
		return nil
	case !f.overwrite:
		return fmt.Errorf("%s %w; name another folder, or allow its results to be overwritten", f.dir, ErrNotEmpty)
	}
	stranger, err := firstStranger(f.dir)
	if err != nil {
		return fmt.Errorf("%s will not be overwritten: %w", f.dir, err)
	}
	if stranger != "" {
		return fmt.Errorf("%s will not be overwritten: it holds %s, which kindwell did not write", f.dir, stranger)
	}
	return nil
}

// firstStranger returns the path, relative to a results folder, of the first
// thing in it that the folder's data package does not list, "" when there is
// none. It is an error if the folder is no results folder at all.
func firstStranger(dir string) (string, error) {
	description, err := os.ReadFile(filepath.Join(dir, PackageName))
	if errors.Is(err, fs.ErrNotExist) {
		return "", errors.New("it is not a results folder (it has no " + PackageName + ")")
	}
	if err != nil {
		return "", err
	}
	var known struct {
		Name      string
		Resources []struct{ Path string }
	}
	if err := json.Unmarshal(description, &known); err != nil || known.Name != packageID {
		return "", errors.New("it is not a results folder (its " + PackageName + " is not kindwell's)")
	}
	// Files that desktop programs leave in any folder they show.
	listed := map[string]bool{PackageName: true, ".DS_Store": true, "Thumbs.db": true, "desktop.ini": true}
	for _, r := range known.Resources {
		listed[r.Path] = true
	}
	stranger := ""
	err = fs.WalkDir(os.DirFS(dir), ".", func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || listed[path] && d.Type().IsRegular() {
			return err
		}
		stranger = path
		return fs.SkipAll
	})
	return stranger, err
}
