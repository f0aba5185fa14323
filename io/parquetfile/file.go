package parquetfile

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// Options say how a file is read and written. The zero value is ready to use.
type Options struct {
	Coarse   bool              // accept FLOAT coordinates whose step exceeds 1 mm
	Unit     float64           // metres per unit of the coordinates, for that step; 0 means 1
	Metadata map[string]string // written as key-value metadata, in place of the input's entries of these keys
	Output   string            // path of the output, for scratch files in its folder; empty: in the system's folder of temporary files
	Version  string            // of the program, for the name of the writer; empty: none is given
}

// File is a Parquet file that is being copied: a cloud.Rewriter.
type File struct {
	path     string
	options  Options
	input    input
	size     int64
	meta     *parquet.FileMetaData
	footer   int64 // where it begins
	leaves   []leaf
	columns  []cloud.Column
	cautions []string
	groups   []*parquet.RowGroup

	raw     []*cursor // x, y, z; none where there is no layout
	numbers []source
	texts   []*cursor
	stored  []*cursor            // numbers and texts, as they are stored
	checks  []func([]byte) error // by texts
	group   int                  // the group of the next piece
	done    int64                // rows of it that were handed out
	before  int64                // rows of the groups before it

	inflater inflater
	packed   []byte // compressed page, while it is opened

	out *output
}

// input is what is read: a file, or in tests bytes.
type input interface {
	io.ReaderAt
	io.Closer
}

var _ cloud.Rewriter = (*File)(nil)

// IsName tells whether a file of this name is taken for Parquet.
func IsName(path string) bool {
	return strings.EqualFold(filepath.Ext(path), ".parquet")
}

// Open reads and checks a file's footer. Errors name the file.
func Open(path string, o Options) (*File, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	info, err := file.Stat()
	if err == nil && !info.Mode().IsRegular() {
		err = fmt.Errorf("%s: is not a regular file", path)
	}
	if err != nil {
		return nil, errors.Join(err, file.Close())
	}
	return newFile(path, file, info.Size(), o)
}

// newFile takes the input over, and closes it where it returns an error.
func newFile(path string, in input, size int64, o Options) (*File, error) {
	f := &File{path: path, options: o, input: in, size: size}
	if err := f.readFooter(); err != nil {
		return nil, errors.Join(fmt.Errorf("%s: %w", path, err), in.Close())
	}
	return f, nil
}

func (f *File) readFooter() (err error) {
	if f.meta, f.footer, err = readFooter(f.input, f.size); err != nil {
		return err
	}
	if f.leaves, err = leavesOf(f.meta.Schema); err != nil {
		return err
	}
	f.columns = columnsOf(f.leaves)
	f.cautions = dropUnknown(f.meta.Schema)
	f.groups, err = checkGroups(f.meta, f.leaves, f.footer)
	return err
}

// Columns lists the stored columns; those inside a group go by their path with
// dots. Type is the physical type and what it stands for ("DOUBLE",
// "INT64 TIMESTAMP_MICROS"), with "nested " before it where the column is not
// flat, and " local" behind it where times are not adjusted to UTC.
func (f *File) Columns() []cloud.Column { return f.columns }

// Rows returns the number of rows of the file.
func (f *File) Rows() int64 { return f.meta.NumRows }

// Cautions says what of the input the output cannot repeat, which are names of
// logical types that are younger than this program, and after Begin which
// coordinates are FLOAT.
func (f *File) Cautions() []string { return f.cautions }

// Begin fixes what is decoded and what is written. It finds columns that cannot
// be read, and coordinates that are too coarse by the file's statistics, before
// anything is written; a layout that has classes is held to that without a
// writer too. Numbers and coordinates must be of a type that stands for a
// number, texts of a BYTE_ARRAY type.
func (f *File) Begin(read cloud.Request, write cloud.Layout, out io.Writer) error {
	if err := f.beginReading(read, write, out != nil || write.Moved != nil); err != nil {
		return err
	}
	if err := f.checkStep(); err != nil {
		return err
	}
	for _, c := range f.raw {
		if c.leaf.kind == floats {
			f.cautions = append(f.cautions, coarseCaution(c.leaf.name))
		}
	}
	if out == nil {
		return nil
	}
	var err error
	if f.out, err = newOutput(f, write, out); err != nil {
		return fmt.Errorf("%s: %w", f.path, err)
	}
	return nil
}

// Close releases the input and the scratch files.
func (f *File) Close() error {
	err := f.input.Close()
	for _, c := range f.cursors() {
		err = errors.Join(err, c.scratch.close())
	}
	if f.out != nil {
		err = errors.Join(err, f.out.scratch.close())
	}
	f.inflater.close()
	return err
}

// cursors lists all columns that are read.
func (f *File) cursors() []*cursor {
	list := slices.Concat(f.raw, f.texts, f.stored)
	for _, s := range f.numbers {
		if s.cursor != nil {
			list = append(list, s.cursor)
		}
	}
	return list
}
