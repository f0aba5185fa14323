package csvfile

import (
	"bytes"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"bentray/io/cloud"
)

// Options says what the file itself does not.
type Options struct {
	Names  []string // column names of a file without a header line
	Divert bool     // bad rows become Chunk.Rejects instead of an error
	Passed []int64  // lines, rising, on which rows begin that are passed over: they become Chunk.Rejects without a reason
}

// extensions of delimited text; each may be followed by .gz or .zst.
var extensions = []string{".csv", ".tsv", ".txt", ".xyz", ".asc"}

// IsName tells whether a file of this name is read by this package: .csv .tsv
// .txt .xyz .asc, each also with .gz or .zst, in any letter case.
func IsName(path string) bool {
	path = strings.ToLower(path)
	if codecOf(path) != plain {
		path = strings.TrimSuffix(path, filepath.Ext(path))
	}
	return slices.Contains(extensions, filepath.Ext(path))
}

// File is an open file of delimited text. It implements cloud.Rewriter.
type File struct {
	path   string
	source *source       // bytes of the file
	text   io.ReadCloser // the same decompressed
	codec  codec
	divert bool
	passed []int64

	head
	columns []cloud.Column

	blockSize int    // bytes in a block, unless a row is longer
	carry     []byte // text read, behind the last block
	line      int64  // line number of the next row
	ahead     int    // bytes of text before the rows that are still to be consumed
	consumed  int64  // bytes of the file given to chunks

	read    cloud.Request
	located int // fields to locate in a row, from the first
	encoder
}

var _ cloud.Rewriter = (*File)(nil)

// Open opens a file and reads its header. Errors name the file, and say what to
// do where text is not UTF-8, lines end in CR alone, no separator is found, a
// quote stands within a header's field, or compressed data are damaged. Where
// the first row has only numbers and there are no Options.Names, the error wraps
// ErrNoHeader.
func Open(path string, o Options) (*File, error) {
	s, err := openSource(path)
	if err != nil {
		return nil, err
	}
	f, err := newFile(s, o)
	if err != nil {
		s.Close()
		return nil, err
	}
	return f, nil
}

// newFile reads the header from a source, which it closes only by File.Close.
func newFile(s *source, o Options) (*File, error) {
	f := &File{path: s.path, source: s, codec: codecOf(s.path), divert: o.Divert, passed: o.Passed, blockSize: blockSize}
	var err error
	if f.text, err = f.codec.reader(s); err != nil {
		return nil, f.readError(err)
	}
	if err := f.readHead(o.Names); err != nil {
		f.text.Close()
		return nil, err
	}
	return f, nil
}

// readHead sets the dialect and the columns, and leaves the rows to Next.
func (f *File) readHead(names []string) error {
	s, err := f.readSample()
	if err != nil {
		return err
	}
	if f.head, err = newHead(f.path, s, names); err != nil {
		return err
	}
	header := 0 // its length in the file
	if !f.named {
		header = len(f.header) + len(f.lineEnd)
	}
	f.line = s.firstLine + int64(bytes.Count(s.text[:header], lineFeed))
	f.ahead = len(f.preamble) + header
	f.carry = bytes.Clone(s.text[header:]) // the head keeps what is before
	for _, name := range f.names {
		f.columns = append(f.columns, cloud.Column{Name: name, Type: "text"})
	}
	return nil
}

// Columns lists the columns of the header, or of Options.Names.
func (f *File) Columns() []cloud.Column { return f.columns }

// Close releases the input.
func (f *File) Close() error {
	f.text.Close()
	return f.source.Close()
}
