// Package atomicfile writes files that appear whole or not at all.
//
// A file is written under a temporary name in the folder of its target, synced,
// closed and renamed; then the folder is synced, so that the name survives a
// power cut as well. What a killed process leaves behind has a name that tells
// its target (see Leaving), so that its owner can sweep it.
package atomicfile

import (
	"crypto/rand"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

const prefix = ".part-"

// File is a file on its way to its name. Write to it, then Commit or Discard.
type File struct {
	*os.File
	target  string
	done    bool
	written int64
	started int64 // of the written bytes, how many are on their way to the disk
}

// writebackStep is how many bytes are gathered before the disk is asked to take them.
const writebackStep = 16 << 20

// Create begins a file that will stand at the path. Its folder must exist.
func Create(path string) (*File, error) {
	f, err := os.OpenFile(temporary(path), os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return nil, fmt.Errorf("%s: cannot begin the file: %w", path, cause(err))
	}
	return &File{File: f, target: path}, nil
}

// Write appends to the file. Its errors name the target.
func (f *File) Write(p []byte) (int, error) {
	n, err := f.File.Write(p)
	f.written += int64(n)
	if f.written-f.started >= writebackStep {
		startWriteback(f.File, f.started, f.written-f.started)
		f.started = f.written
	}
	if err != nil {
		err = fmt.Errorf("%s: cannot write: %w", f.target, cause(err))
	}
	return n, err
}

// Commit makes the file durable and gives it its name, in place of what stood
// there. After an error nothing of it is left.
func (f *File) Commit() error {
	err := f.Sync()
	if closing := f.Close(); err == nil {
		err = closing
	}
	if err == nil {
		err = os.Rename(f.Name(), f.target)
	}
	if err != nil {
		f.done = true
		return fmt.Errorf("%s: cannot finish the file: %w", f.target, errors.Join(cause(err), remove(f.Name())))
	}
	f.done = true
	return syncFolder(filepath.Dir(f.target))
}

// Discard removes the file. After Commit it does nothing, so it can be deferred.
func (f *File) Discard() {
	if f.done {
		return
	}
	f.done = true
	_ = f.Close() // the contents are given up
	_ = remove(f.Name())
}

// Write makes a whole file of the data.
func Write(path string, data []byte) error {
	f, err := Create(path)
	if err != nil {
		return err
	}
	defer f.Discard()
	if _, err := f.Write(data); err != nil {
		return err
	}
	return f.Commit()
}

// Sweeper removes what killed processes left behind while writing its targets.
type Sweeper struct {
	folders map[string]map[string]bool // folder -> tags of its targets
}

// NewSweeper returns a Sweeper for the targets. They must be the caller's
// alone: a live process may be writing the leavings of any other.
func NewSweeper(targets []string) *Sweeper {
	s := &Sweeper{folders: map[string]map[string]bool{}}
	for _, t := range targets {
		folder := filepath.Dir(t)
		if s.folders[folder] == nil {
			s.folders[folder] = map[string]bool{}
		}
		s.folders[folder][tag(t)] = true
	}
	return s
}

// Sweep removes the leavings and returns how many there were.
func (s *Sweeper) Sweep() (int, error) {
	swept := 0
	for folder, tags := range s.folders {
		entries, err := os.ReadDir(folder)
		if errors.Is(err, os.ErrNotExist) {
			continue
		}
		if err != nil {
			return swept, err
		}
		for _, e := range entries {
			name, ours := strings.CutPrefix(e.Name(), prefix)
			t, _, _ := strings.Cut(name, "-")
			if !ours || !tags[t] {
				continue
			}
			if err := remove(filepath.Join(folder, e.Name())); err != nil {
				return swept, err
			}
			swept++
		}
	}
	return swept, nil
}

// temporary makes up a name beside a target by which a Sweeper knows it.
func temporary(target string) string {
	return filepath.Join(filepath.Dir(target), prefix+tag(target)+"-"+rand.Text()[:12])
}

// tag names a target within its folder, shortly, for names may be as long as a
// file system allows.
func tag(path string) string {
	sum := sha256.Sum256([]byte(filepath.Base(path)))
	return hex.EncodeToString(sum[:8])
}

func remove(path string) error {
	err := os.Remove(path)
	if errors.Is(err, os.ErrNotExist) {
		return nil
	}
	return err
}

func syncFolder(folder string) error {
	d, err := os.Open(folder)
	if err != nil {
		return err
	}
	defer d.Close()
	return d.Sync()
}

// cause is the error without the temporary name, which says nothing to people.
func cause(err error) error {
	var path *os.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	var link *os.LinkError
	if errors.As(err, &link) {
		return link.Err
	}
	return err
}
