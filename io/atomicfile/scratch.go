package atomicfile

import (
	"os"
	"path/filepath"
)

// Scratch is a file for a while. It goes with Close, and where the system can do
// without a name also with the process; elsewhere a killed process leaves it
// under a name that a Sweeper takes for one of the target's leavings.
type Scratch struct {
	*os.File
	named bool
}

// NewScratch makes a scratch file in the folder of a target, which must exist.
func NewScratch(target string) (*Scratch, error) {
	if f, err := nameless(filepath.Dir(target)); err == nil {
		return &Scratch{File: f}, nil
	}
	return newNamed(target)
}

// newNamed makes a file that loses its name at once where the system lets it.
func newNamed(target string) (*Scratch, error) {
	f, err := os.OpenFile(temporary(target), os.O_RDWR|os.O_CREATE|os.O_EXCL, 0o600)
	if err != nil {
		return nil, cause(err)
	}
	return &Scratch{File: f, named: os.Remove(f.Name()) != nil}, nil
}

// Close gives the file up.
func (s *Scratch) Close() error {
	err := s.File.Close()
	if s.named {
		if removed := remove(s.Name()); err == nil {
			err = removed
		}
	}
	return err
}
