package parquetfile

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"

	"github.com/xitongsys/parquet-go/parquet"
)

const (
	magic          = "PAR1"
	magicEncrypted = "PARE"
	tailBytes      = 8 // footer length and magic
)

var errEncrypted = errors.New("is encrypted, want a plain Parquet file; decrypt it first")

// readFooter reads the description of a file of the given size. It also returns
// where the footer begins, which is where column chunks end.
func readFooter(r io.ReaderAt, size int64) (*parquet.FileMetaData, int64, error) {
	length, err := footerLength(r, size)
	if err != nil {
		return nil, 0, err
	}
	start := size - tailBytes - length
	footer := make([]byte, length)
	if err := readAt(r, footer, start); err != nil {
		return nil, 0, err
	}
	meta := parquet.NewFileMetaData()
	if _, err := readThrift(footer, meta); err != nil {
		return nil, 0, fmt.Errorf("the footer is damaged, fetch the file again (%w)", err)
	}
	if meta.EncryptionAlgorithm != nil {
		return nil, 0, errEncrypted
	}
	return meta, start, nil
}

// footerLength checks both magics and returns the length between them and the
// file's end.
func footerLength(r io.ReaderAt, size int64) (int64, error) {
	if size < int64(len(magic))+tailBytes {
		return 0, fmt.Errorf("has %d bytes, want a Parquet file", size)
	}
	var head, tail [tailBytes]byte
	if err := readAt(r, head[:len(magic)], 0); err != nil {
		return 0, err
	}
	if err := readAt(r, tail[:], size-tailBytes); err != nil {
		return 0, err
	}
	begin, end := string(head[:len(magic)]), string(tail[4:])
	if begin == magicEncrypted || end == magicEncrypted {
		return 0, errEncrypted
	}
	if begin != magic {
		return 0, fmt.Errorf("begins with %q, want %q as in every Parquet file", begin, magic)
	}
	if end != magic {
		return 0, fmt.Errorf("ends with %q, want %q; the file is cut short, or has bytes behind its end", end, magic)
	}
	length := int64(binary.LittleEndian.Uint32(tail[:]))
	if most := min(size-tailBytes-int64(len(magic)), maxFooterBytes); length > most {
		return 0, fmt.Errorf("says its footer has %d bytes, want at most %d", length, most)
	}
	return length, nil
}

// readAt fills b from the file.
func readAt(r io.ReaderAt, b []byte, off int64) error {
	n, err := r.ReadAt(b, off)
	if n == len(b) {
		return nil
	}
	if err == io.EOF {
		return fmt.Errorf("ends at byte %d, want %d bytes more; did it shrink while it was read?", off+int64(n), len(b)-n)
	}
	return err
}
