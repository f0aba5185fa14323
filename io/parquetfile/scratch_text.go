package parquetfile

import (
	"bufio"
	"encoding/binary"
	"fmt"
	"io"
	"slices"

	"bentray/io/cloud"
)

// writeTexts appends texts, each with its length before it.
func (s *scratch) writeTexts(t *cloud.Texts) error {
	if s.written+int64(len(t.Bytes)) > maxSpilledTexts {
		return fmt.Errorf("the texts of a page are longer than %d bytes", int64(maxSpilledTexts))
	}
	s.bytes = s.bytes[:0]
	for i := range t.Ends {
		text := t.At(i)
		s.bytes = binary.LittleEndian.AppendUint32(s.bytes, uint32(len(text)))
		if len(text) > cap(s.bytes)-len(s.bytes) {
			if err := s.write(s.bytes); err != nil {
				return err
			}
			s.bytes = s.bytes[:0]
		}
		if len(text) > cap(s.bytes) {
			if err := s.write(text); err != nil {
				return err
			}
			continue
		}
		s.bytes = append(s.bytes, text...)
	}
	return s.write(s.bytes)
}

// readTexts appends the next texts to a piece's.
func (s *scratch) readTexts(t *cloud.Texts, rows int) error {
	for range rows {
		if _, err := io.ReadFull(s.reader, s.head[:]); err != nil {
			return &scratchError{err}
		}
		from, n := len(t.Bytes), int(binary.LittleEndian.Uint32(s.head[:]))
		if err := checkText(t, n); err != nil {
			return err
		}
		t.Bytes = slices.Grow(t.Bytes, n)[:from+n]
		if _, err := io.ReadFull(s.reader, t.Bytes[from:]); err != nil {
			return &scratchError{err}
		}
		t.Ends = append(t.Ends, len(t.Bytes))
	}
	return nil
}

// beginTexts turns from writing to reading.
func (s *scratch) beginTexts() {
	if s.reader == nil {
		s.reader = bufio.NewReaderSize(s, 8*8*block)
	}
	s.reader.Reset(s)
}

// Read reads on where the last call ended, for the buffer before it.
func (s *scratch) Read(b []byte) (int, error) {
	if s.read == s.written {
		return 0, io.EOF
	}
	b = b[:min(int64(len(b)), s.written-s.read)]
	n, err := s.file.ReadAt(b, s.read)
	s.read += int64(n)
	return n, err
}
