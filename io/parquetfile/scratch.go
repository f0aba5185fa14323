package parquetfile

import (
	"bufio"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"

	"bentray/io/atomicfile"
	"bentray/io/cloud"
)

// scratch is a file without a name, made when it is first written to. It holds
// either the numbers or texts of one page, read once in order, or whole buffers.
type scratch struct {
	beside  string // a path in the folder where it is made
	file    *atomicfile.Scratch
	written int64
	read    int64
	numbers []float64
	bytes   []byte
	reader  *bufio.Reader // of texts
	head    [4]byte
}

// rewind forgets what the file holds and makes room for a block of numbers.
func (s *scratch) rewind() {
	s.written, s.read = 0, 0
	s.numbers = cloud.Grow(s.numbers, 8*block)
	room(&s.bytes, 8*len(s.numbers))
}

func (s *scratch) write(b []byte) error {
	if s.file == nil {
		if err := s.make(); err != nil {
			return &scratchError{err}
		}
	}
	n, err := s.file.WriteAt(b, s.written)
	s.written += int64(n)
	if err != nil {
		return &scratchError{err}
	}
	return nil
}

func (s *scratch) make() (err error) {
	target := s.beside
	if target == "" {
		target = filepath.Join(os.TempDir(), "bentray")
	}
	s.file, err = atomicfile.NewScratch(target)
	return err
}

func (s *scratch) readAt(b []byte, off int64) error {
	n, err := s.file.ReadAt(b, off)
	if n == len(b) {
		return nil
	}
	if err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	return &scratchError{err}
}

// writeNumbers appends at most a block of the size that rewind made.
func (s *scratch) writeNumbers(list []float64) error {
	for i, v := range list {
		binary.LittleEndian.PutUint64(s.bytes[8*i:], math.Float64bits(v))
	}
	return s.write(s.bytes[:8*len(list)])
}

func (s *scratch) readNumbers(dst []float64) error {
	for len(dst) > 0 {
		n := min(len(dst), len(s.numbers))
		if err := s.readAt(s.bytes[:8*n], s.read); err != nil {
			return err
		}
		convert(dst[:n], s.bytes, doubles)
		s.read += int64(8 * n)
		dst = dst[n:]
	}
	return nil
}

func (s *scratch) close() error {
	if s.file == nil {
		return nil
	}
	err := s.file.Close()
	s.file = nil
	return err
}

// scratchError is a failure that the input has no part in.
type scratchError struct{ err error }

func (e *scratchError) Error() string { return fmt.Sprintf("a scratch file failed: %v", e.err) }

func (e *scratchError) Unwrap() error { return e.err }
