package pipeline

import (
	"crypto/rand"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/gofrs/flock"
)

// A run keeps others off its outputs by a lock file in the output folder that
// lists them and that it holds by an advisory file lock until it ends. The
// operating system lets go of that lock when the process dies, so the lock of
// a dead run is known by being free, and is swept by the next run.
//
// Runs whose outputs differ (shards of one job, or several jobs) share a folder.
const (
	gateName    = "bentray.lock" // held only while lock files are looked at and made, or a summary is written
	lockPattern = "bentray-*.lock"
)

// holder is what a lock file holds.
type holder struct {
	Host    string   `json:"host"`
	Process int      `json:"process"`
	Outputs []string `json:"outputs"` // relative to the folder
}

// lock is a held lock file.
type lock struct{ file *flock.Flock }

// acquire takes the outputs for this process, or says who has one of them.
func acquire(folder string, inputs []input) (*lock, error) {
	mine := make(map[string]bool, len(inputs))
	for _, in := range inputs {
		mine[in.target] = true
	}
	var held *lock
	err := withGate(folder, func() (err error) {
		if err = checkOthers(folder, mine); err == nil {
			held, err = hold(folder, inputs)
		}
		return err
	})
	if err != nil {
		return nil, &CallError{err}
	}
	return held, nil
}

// withGate calls f while no other run does the same in this folder.
func withGate(folder string, f func() error) error {
	gate := newLock(filepath.Join(folder, gateName))
	if err := gate.Lock(); err != nil {
		return fmt.Errorf("%s: cannot lock the output folder: %w", folder, err)
	}
	defer gate.Unlock()
	return f()
}

// checkOthers looks at every lock file: a dead one is removed, a live one must
// not list any of the outputs in mine.
func checkOthers(folder string, mine map[string]bool) error {
	paths, err := filepath.Glob(filepath.Join(escapeGlob(folder), lockPattern))
	if err != nil {
		return err
	}
	for _, path := range paths {
		other := newLock(path)
		free, err := other.TryLock()
		if err != nil {
			return fmt.Errorf("%s: cannot look at the lock: %w", path, err)
		}
		if free {
			err := os.Remove(path)
			other.Unlock()
			if err != nil {
				return err
			}
			continue
		}
		if err := checkHolder(path, mine); err != nil {
			return err
		}
	}
	return nil
}

// checkHolder looks at a lock that was held. Its run may have ended since.
func checkHolder(path string, mine map[string]bool) error {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	var h holder
	if err := json.Unmarshal(data, &h); err != nil {
		return fmt.Errorf("%s: a lock that is held but cannot be read: %w", path, err)
	}
	for _, output := range h.Outputs {
		if mine[output] {
			return fmt.Errorf("%s is being written by another run (host %s, process %d); wait for it to end, or stop it", filepath.Join(filepath.Dir(path), output), h.Host, h.Process)
		}
	}
	return nil
}

// hold makes this process's lock file. The gate is held.
func hold(folder string, inputs []input) (*lock, error) {
	host, err := os.Hostname()
	if err != nil {
		return nil, err
	}
	h := holder{Host: host, Process: os.Getpid()}
	for _, in := range inputs {
		h.Outputs = append(h.Outputs, in.target)
	}
	data, err := json.Marshal(h)
	if err != nil {
		return nil, err
	}
	l := &lock{newLock(filepath.Join(folder, "bentray-"+rand.Text()[:12]+".lock"))}
	if err := l.file.Lock(); err != nil {
		return nil, fmt.Errorf("%s: cannot lock the output folder: %w", folder, err)
	}
	if err := os.WriteFile(l.file.Path(), data, 0o666); err != nil {
		l.release()
		return nil, fmt.Errorf("%s: cannot lock the output folder: %w", folder, err)
	}
	return l, nil
}

// newLock is a lock file that others, too, may lock.
func newLock(path string) *flock.Flock {
	return flock.New(path, flock.SetPermissions(0o666))
}

// release gives the outputs free.
func (l *lock) release() {
	_ = os.Remove(l.file.Path()) // a lock that stays is free all the same
	_ = l.file.Unlock()
}

// escapeGlob keeps a folder's name from being read as a pattern.
func escapeGlob(folder string) string {
	var out []rune
	for _, r := range folder {
		switch r {
		case '*', '?', '[', '\\':
			out = append(out, '\\')
		}
		out = append(out, r)
	}
	return string(out)
}
