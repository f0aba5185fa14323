package csvfile

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"
)

// maxWindow is the largest zstd window that is decoded. A decoder takes twice
// its window; common levels have windows up to 8 MiB.
const maxWindow = 64 << 20

// source is the input's bytes as they stand in the file.
type source struct {
	path string
	in   io.Reader
	size int64 // bytes when it was opened, or -1
	done int64 // bytes read
	err  error // what ended reading, but for the end of the file
}

func openSource(path string) (*source, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, pathError(path, err)
	}
	size := int64(-1)
	if info, err := file.Stat(); err == nil && info.Mode().IsRegular() {
		size = info.Size()
	}
	return &source{path: path, in: file, size: size}, nil
}

// Read reads on, and refuses a file that has another length than when it was
// opened.
func (s *source) Read(p []byte) (int, error) {
	n, err := s.in.Read(p)
	s.done += int64(n)
	switch {
	case err == io.EOF && s.size >= 0 && s.done != s.size:
		err = fmt.Errorf("%s ends after %d bytes, had %d when it was opened; leave it unchanged during a run", s.path, s.done, s.size)
		s.err = err
	case err != nil && err != io.EOF:
		err = pathError(s.path, err)
		s.err = err
	}
	return n, err
}

func (s *source) Close() error {
	if c, ok := s.in.(io.Closer); ok {
		return c.Close()
	}
	return nil
}

// pathError names the file once, in front.
func pathError(path string, err error) error {
	var inner *fs.PathError
	if errors.As(err, &inner) {
		err = inner.Err
	}
	return fmt.Errorf("%s: %w", path, err)
}

// readError explains why decompressed text could not be had.
func (f *File) readError(err error) error {
	if f.source.err != nil {
		return f.source.err
	}
	if errors.Is(err, zstd.ErrWindowSizeExceeded) || errors.Is(err, zstd.ErrDecoderSizeExceeded) {
		return fmt.Errorf("%s needs a zstd window above %d MiB; compress it again with a smaller one", f.path, maxWindow>>20)
	}
	return fmt.Errorf("%s: %s data are damaged or cut short (%w); fetch the file again", f.path, f.codec, err)
}

// codec is how a file is compressed.
type codec string

const (
	plain   codec = "plain"
	gzipped codec = "gzip"
	zstded  codec = "zstd"
)

func codecOf(path string) codec {
	switch strings.ToLower(filepath.Ext(path)) {
	case ".gz":
		return gzipped
	case ".zst":
		return zstded
	}
	return plain
}

// reader decompresses all members or frames of in. The zstd decoder starts no
// goroutines, so that its memory is one window and a few blocks.
func (c codec) reader(in io.Reader) (io.ReadCloser, error) {
	switch c {
	case gzipped:
		z, err := gzip.NewReader(in)
		if err == io.EOF {
			return io.NopCloser(strings.NewReader("")), nil // nothing in the file: an empty text
		}
		return z, err
	case zstded:
		z, err := zstd.NewReader(in, zstd.WithDecoderConcurrency(1), zstd.WithDecoderLowmem(true), zstd.WithDecoderMaxWindow(maxWindow))
		if err != nil {
			return nil, err
		}
		return z.IOReadCloser(), nil
	}
	return io.NopCloser(in), nil
}

// writer compresses to one member or frame, whose bytes depend on the text
// alone.
func (c codec) writer(out io.Writer) (io.WriteCloser, error) {
	switch c {
	case gzipped:
		return gzip.NewWriter(out), nil
	case zstded:
		return zstd.NewWriter(out, zstd.WithEncoderConcurrency(1))
	}
	return unclosed{out}, nil
}

// unclosed leaves closing the writer to its owner.
type unclosed struct{ io.Writer }

func (unclosed) Close() error { return nil }
