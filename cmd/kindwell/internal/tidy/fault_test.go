package tidy

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
)

// faulty is the machine's file system until its change number fail, counted
// from 1; that one has no effect and returns err. With forever set, none
// after it has an effect either, as when the disk is gone or the process
// killed.
type faulty struct {
	osDisk
	fail    int
	forever bool
	err     error
	count   int      // changes so far
	open    int      // files created and not closed
	log     []string // what was tried, by the last part of each path
}

var errFault = errors.New("input/output error")

func (d *faulty) next() error {
	d.count++
	if d.count == d.fail || d.forever && d.count > d.fail {
		return d.err
	}
	return nil
}

func (d *faulty) Mkdir(path string) error {
	if err := d.next(); err != nil {
		return err
	}
	return d.osDisk.Mkdir(path)
}

func (d *faulty) Create(path string) (io.WriteCloser, error) {
	if err := d.next(); err != nil {
		return nil, err
	}
	file, err := d.osDisk.Create(path)
	if err == nil {
		d.open++
	}
	return &faultyFile{file, d}, err
}

func (d *faulty) SyncFile(path string) error {
	if err := d.next(); err != nil {
		return err
	}
	d.log = append(d.log, "sync "+filepath.Base(path))
	return d.osDisk.SyncFile(path)
}

func (d *faulty) SyncFolder(path string) error {
	if err := d.next(); err != nil {
		return err
	}
	d.log = append(d.log, "sync "+filepath.Base(path)+"/")
	return d.osDisk.SyncFolder(path)
}

func (d *faulty) Rename(from, to string) error {
	if err := d.next(); err != nil {
		return err
	}
	d.log = append(d.log, "rename "+filepath.Base(from)+" to "+filepath.Base(to))
	return d.osDisk.Rename(from, to)
}

func (d *faulty) RemoveEmpty(path string) error {
	if err := d.next(); err != nil {
		return err
	}
	return d.osDisk.RemoveEmpty(path)
}

func (d *faulty) RemoveAll(path string) error {
	if err := d.next(); err != nil {
		return err
	}
	d.log = append(d.log, "remove "+filepath.Base(path))
	return d.osDisk.RemoveAll(path)
}

type faultyFile struct {
	io.WriteCloser
	disk *faulty
}

// Write gets half of its bytes out before it fails, as a full disk does.
func (f *faultyFile) Write(p []byte) (int, error) {
	if err := f.disk.next(); err != nil {
		n, _ := f.WriteCloser.Write(p[:len(p)/2])
		return n, err
	}
	return f.WriteCloser.Write(p)
}

func (f *faultyFile) Close() error {
	closed := f.WriteCloser.Close()
	f.disk.open--
	return errors.Join(f.disk.next(), closed)
}

// Contents reach the disk before names, and all of it before the renaming.
func TestOrderOfSyncing(t *testing.T) {
	root := filepath.Join(t.TempDir(), "root")
	if err := os.Mkdir(root, 0o755); err != nil {
		t.Fatal(err)
	}
	disk := &faulty{}
	if err := faultyRun(t, disk, root, "old results"); err != nil {
		t.Fatal(err)
	}
	siblings := regexp.MustCompile(`\.kindwell-([a-z]+)-[0-9-]+/?`)
	for i, step := range disk.log {
		disk.log[i] = siblings.ReplaceAllString(step, " $1")
	}
	want := []string{
		"sync report.html", "sync warnings.csv", "sync one.svg", "sync relations.csv", "sync run.json", "sync two.svg", "sync datapackage.json",
		"sync scores/", "sync figures/", "sync results unfinished",
		"rename results to results old", "rename results unfinished to results", "sync root/", "remove results old",
	}
	if !slices.Equal(disk.log, want) {
		t.Errorf("got\n%q, want\n%q", disk.log, want)
	}
}

// Every single change to the file system fails in turn, once or for good,
// over old results, an empty folder and nothing. Whatever happens, the place
// holds the old or the new results, whole, and a success is a success.
func TestEveryFault(t *testing.T) {
	for _, start := range []string{"old results", "empty folder", "nothing"} {
		for _, forever := range []bool{false, true} {
			faults := 0
			for fail := 1; ; fail++ {
				root := t.TempDir()
				disk := &faulty{fail: fail, forever: forever, err: errFault}
				err := faultyRun(t, disk, root, start)
				if disk.count < fail {
					if err != nil {
						t.Fatalf("%s: no fault, but %v", start, err)
					}
					break
				}
				faults++
				if !errors.Is(err, errFault) {
					t.Errorf("%s, fault %d: lost, the run returned %v", start, fail, err)
				}
				checkAfterFault(t, root, start, forever, fail, err)
				if disk.open != 0 {
					t.Errorf("%s, fault %d: %d files were left open", start, fail, disk.open)
				}
			}
			if faults < 25 {
				t.Errorf("%s: only %d faults were tried", start, faults)
			}
		}
	}
}

// faultyRun writes new results to root/results on a faulty disk.
func faultyRun(t *testing.T, disk *faulty, root, start string) error {
	dir := filepath.Join(root, "results")
	switch start {
	case "old results":
		commit(t, dir, "old")
	case "empty folder":
		if err := os.Mkdir(dir, 0o755); err != nil {
			t.Fatal(err)
		}
	}
	f, err := create(disk, dir, true)
	if err != nil {
		return err
	}
	if err := fill(f, "new"); err != nil {
		return errors.Join(err, f.Abort())
	}
	return f.Commit()
}

func checkAfterFault(t *testing.T, root, start string, forever bool, fail int, err error) {
	t.Helper()
	const files = 7
	whole := func(name, text string) bool {
		got := contents(t, filepath.Join(root, name))
		return len(got) == files && got["report.html"] == "<p>"+text+"</p>\n"
	}
	placed, old, unfinished := false, false, false
	for _, name := range names(t, root) {
		switch {
		case name == "results":
			if empty := len(names(t, filepath.Join(root, name))) == 0; empty && start == "empty folder" {
				continue
			}
			placed, old = whole(name, "new"), whole(name, "old")
			if !placed && !old {
				t.Errorf("%s, fault %d: the place is half-written", start, fail)
			}
		case strings.HasPrefix(name, "results.kindwell-old-"):
			if !whole(name, "old") && !strings.Contains(err.Error(), "the old ones could not be removed") {
				t.Errorf("%s, fault %d: the old results lie aside incomplete", start, fail)
			}
			old = whole(name, "old")
		case strings.HasPrefix(name, "results.kindwell-complete-"):
			if !whole(name, "new") || !strings.Contains(err.Error(), name) {
				t.Errorf("%s, fault %d: %s is not whole or not named by %v", start, fail, name, err)
			}
		case strings.HasPrefix(name, "results.kindwell-unfinished-"):
			unfinished = true
		default:
			t.Errorf("%s, fault %d: %s was left", start, fail, name)
		}
	}
	if start == "old results" && !placed && !old {
		t.Errorf("%s, fault %d: neither old nor new results are there", start, fail)
	}
	if start == "old results" && !forever && !slices.Contains(names(t, root), "results") {
		t.Errorf("%s, fault %d: the old results were not put back", start, fail)
	}
	if unfinished && !forever {
		t.Errorf("%s, fault %d: an unfinished folder was left", start, fail)
	}
}
