package parquetfile

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"os"

	"bentray/io/cloud"
)

// ScratchPattern matches the names of scratch files, as path.Match has it. On
// Unix a scratch file loses its name as soon as it is made.
const ScratchPattern = ".bentray-*.scratch"

// scratch is a file without a name, made when it is first written to. It holds
// either the numbers of one page, read once in order, or whole buffers.
type scratch struct {
	folder  string
	file    *os.File
	named   bool
	written int64
	read    int64
	numbers []float64
	bytes   []byte
}

// rewind forgets what the file holds and makes room for a block of numbers.
func (s *scratch) rewind() {
	s.written, s.read = 0, 0
	s.numbers = cloud.Grow(s.numbers, 8*block)
	s.bytes = room(s.bytes, 8*len(s.numbers))
}

func (s *scratch) write(b []byte) error {
	if s.file == nil {
		f, err := os.CreateTemp(s.folder, ScratchPattern)
		if err != nil {
			return fmt.Errorf("no scratch file: %w", err)
		}
		s.file, s.named = f, os.Remove(f.Name()) != nil
	}
	n, err := s.file.WriteAt(b, s.written)
	s.written += int64(n)
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
	return fmt.Errorf("scratch file: %w", err)
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
	if s.named {
		if removed := os.Remove(s.file.Name()); err == nil {
			err = removed
		}
	}
	s.file = nil
	return err
}
