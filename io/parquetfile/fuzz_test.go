package parquetfile

import (
	"bytes"
	"errors"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// pageTypes are the types that can be read.
var pageTypes = []parquet.Type{
	parquet.Type_BOOLEAN, parquet.Type_INT32, parquet.Type_INT64, parquet.Type_FLOAT, parquet.Type_DOUBLE, parquet.Type_BYTE_ARRAY,
}

// FuzzPages reads arbitrary bytes as the chunk of a column of every type: no
// panic, and an error that names file and column, or all rows.
func FuzzPages(f *testing.F) {
	for typ, list := range encodings {
		for k, encoding := range list {
			f.Add(uint8(slices.Index(pageTypes, typ)), uint8(codecs[k%len(codecs)]), false, fuzzChunk(f, typ, encoding, k))
		}
	}
	f.Fuzz(checkPages)
}

// fuzzChunk makes a chunk of 100 rows in the k-th codec.
func fuzzChunk(t testing.TB, typ parquet.Type, encoding parquet.Encoding, k int) []byte {
	c := built{name: "v", typ: typ, encoding: encoding, codec: codecs[k%len(codecs)], version: 1 + k%2, style: mixed, pages: []int{3, 40}}
	for i := range 100 {
		v := map[parquet.Type]any{
			parquet.Type_DOUBLE: float64(i % 5), parquet.Type_FLOAT: float32(i), parquet.Type_INT32: int32(i * i), parquet.Type_INT64: int64(-i),
			parquet.Type_BOOLEAN: i%3 == 0, parquet.Type_BYTE_ARRAY: strings.Repeat("ab", i%6),
		}[typ]
		if i%7 == 2 {
			v = nil
		}
		c.values = append(c.values, v)
	}
	_, b := c.chunk(t, nil, c.values)
	return b
}

func checkPages(t *testing.T, typ, codec uint8, required bool, chunk []byte) {
	c := built{name: "v", typ: pageTypes[int(typ)%len(pageTypes)], codec: parquet.CompressionCodec(codec % 8), required: required}
	read := cloud.Request{Numbers: []int{0}}
	if c.typ == parquet.Type_BYTE_ARRAY {
		read = cloud.Request{Texts: []int{0}}
	}
	numbers, texts, err := readBytes(chunkFile(t, c, 100, chunk), Options{}, read)
	switch {
	case err != nil:
		if !strings.HasPrefix(err.Error(), `made.parquet: column "v"`) {
			t.Errorf("error does not name file and column: %v", err)
		}
	case read.Texts != nil && len(texts[0]) != 100, read.Texts == nil && len(numbers[0]) != 100:
		t.Error("no error and not 100 rows")
	}
}

// FuzzFile copies arbitrary bytes: no panic, and an error that names the file,
// or an output that can be read again with as many rows.
func FuzzFile(f *testing.F) {
	names, err := filepath.Glob(filepath.Join(engineFolder, "*.parquet"))
	if err != nil || len(names) == 0 {
		f.Fatalf("no files in %s (%v)", engineFolder, err)
	}
	for _, name := range names {
		b, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(b)
	}
	f.Add(buildBytes(f, survey(40), []int{30, 0, 10}, nil))
	f.Fuzz(checkFile)
}

func checkFile(t *testing.T, b []byte) {
	f, err := newFile("made.parquet", memory{bytes.NewReader(b)}, int64(len(b)), Options{Coarse: true})
	if err == nil {
		var out bytes.Buffer
		if err = copyAny(&out, f); err == nil {
			checkAgain(t, f, out.Bytes())
		}
	}
	if err != nil && !strings.HasPrefix(err.Error(), "made.parquet: ") {
		t.Errorf("error does not name the file: %v", err)
	}
}

func checkAgain(t *testing.T, f *File, out []byte) {
	again, err := newFile("out.parquet", memory{bytes.NewReader(out)}, int64(len(out)), Options{})
	if err != nil {
		t.Fatalf("the output cannot be opened: %v", err)
	}
	if again.Rows() != f.Rows() {
		t.Errorf("the output has %d rows, want %d", again.Rows(), f.Rows())
	}
}

// copyAny copies and closes a file, with its first three numbers as coordinates.
// Files of more rows than a test has time for are not copied: a few bytes may
// stand for any number of equal rows.
func copyAny(out io.Writer, f *File) error {
	defer f.Close()
	layout := cloud.Layout{RawNames: rawNames, Moved: []bool{true}, Added: []cloud.Added{{Name: "depth_"}}}
	n := 0
	for i, l := range f.leaves {
		if l.kind != opaque && l.kind != texts && n < 3 {
			layout.XYZ[n] = i
			n++
		}
	}
	if n < 3 || f.Rows() > 1<<17 {
		return errors.New("made.parquet: is not copied here")
	}
	return rewriteTo(out, f, cloud.Request{Numbers: layout.XYZ[:]}, layout, 1, func(c *cloud.Chunk) {
		clear(c.Class)
		for k := range c.XYZ {
			copy(c.XYZ[k], c.Numbers[k])
		}
		clear(c.Added[0])
	})
}

// TestMutations does some of what fuzzing does, the same every time: it changes
// a few bytes of well-formed pages and files.
func TestMutations(t *testing.T) {
	const seed = 11
	r := rand.New(rand.NewPCG(seed, 0))
	mutate := func(b []byte) []byte {
		b = bytes.Clone(b)
		for range 1 + r.IntN(4) {
			b[r.IntN(len(b))] = byte(r.Uint32())
		}
		if r.IntN(8) == 0 {
			b = b[:r.IntN(len(b))]
		}
		return b
	}
	for k, typ := range pageTypes {
		for _, encoding := range encodings[typ] {
			chunk := fuzzChunk(t, typ, encoding, k)
			for range 400 {
				checkPages(t, uint8(k), uint8(codecs[k%len(codecs)]), false, mutate(chunk))
			}
		}
	}
	file := buildBytes(t, survey(40), []int{30, 0, 10}, nil)
	for range 3000 {
		checkFile(t, mutate(file))
	}
	if t.Failed() {
		t.Logf("seed %d", seed)
	}
}
