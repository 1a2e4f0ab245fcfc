package tidy

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"runtime"
	"syscall"
)

// disk is every change a Folder makes to the file system, so that tests can
// let any one of them fail.
type disk interface {
	Mkdir(path string) error                    // one new folder; an error if the path exists
	Create(path string) (io.WriteCloser, error) // a new file; an error if the path exists
	SyncFile(path string) error                 // the file's content is on the disk when it returns
	SyncFolder(path string) error               // so are the names in the folder
	Rename(from, to string) error               // in one step
	RemoveEmpty(path string) error              // a folder with nothing in it
	RemoveAll(path string) error                // a folder with everything in it
}

// osDisk is the machine's file system.
type osDisk struct{}

func (osDisk) Mkdir(path string) error      { return os.Mkdir(path, 0o777) }
func (osDisk) Rename(from, to string) error { return os.Rename(from, to) }
func (osDisk) RemoveAll(path string) error  { return os.RemoveAll(path) }

func (osDisk) Create(path string) (io.WriteCloser, error) {
	return os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
}

// RemoveEmpty refuses anything but an empty folder: os.Remove alone would
// take a file or a link as well.
func (osDisk) RemoveEmpty(path string) error {
	info, err := os.Lstat(path)
	if err != nil {
		return err
	}
	if !info.IsDir() {
		return &fs.PathError{Op: "remove", Path: path, Err: syscall.ENOTDIR}
	}
	return os.Remove(path)
}

func (osDisk) SyncFile(path string) error {
	file, err := os.OpenFile(path, os.O_RDWR, 0)
	if err != nil {
		return err
	}
	return errors.Join(file.Sync(), file.Close())
}

// SyncFolder does nothing where folders cannot be synced: on Windows, which
// writes names through, and on file systems that say so.
func (osDisk) SyncFolder(path string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	folder, err := os.Open(path)
	if err != nil {
		return err
	}
	err = folder.Sync()
	if errors.Is(err, errors.ErrUnsupported) || errors.Is(err, syscall.EINVAL) {
		err = nil
	}
	return errors.Join(err, folder.Close())
}
