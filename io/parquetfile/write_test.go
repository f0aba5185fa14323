package parquetfile

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	"bentray/io/cloud"

	"github.com/xitongsys/parquet-go/parquet"
)

// rewrite copies a file with a number of workers, as the program does; fill sets
// Class, XYZ and Added of a chunk from its numbers.
func rewrite(path string, o Options, read cloud.Request, layout cloud.Layout, workers int, fill func(*cloud.Chunk)) ([]byte, error) {
	f, err := Open(path, o)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	var out bytes.Buffer
	err = rewriteTo(&out, f, read, layout, workers, fill)
	return out.Bytes(), err
}

// rewriteTo is rewrite for an open file.
func rewriteTo(out io.Writer, f *File, read cloud.Request, layout cloud.Layout, workers int, fill func(*cloud.Chunk)) error {
	if err := f.Begin(read, layout, out); err != nil {
		return err
	}
	type job struct {
		chunk *cloud.Chunk
		done  chan error
	}
	free, order, work := make(chan *cloud.Chunk, workers+3), make(chan job, workers+3), make(chan job)
	for range cap(free) {
		free <- new(cloud.Chunk)
	}
	var wg sync.WaitGroup
	defer wg.Wait()
	for range workers {
		wg.Go(func() {
			for j := range work {
				j.chunk.Resize(j.chunk.Rows, layout)
				fill(j.chunk)
				j.done <- f.Encode(j.chunk)
			}
		})
	}
	failed := make(chan error, 1)
	go func() {
		defer close(work)
		defer close(order)
		for c := range free {
			if err := f.Next(c); err != nil {
				failed <- err
				return
			}
			j := job{c, make(chan error, 1)}
			order <- j
			work <- j
		}
	}()
	var wrong error
	for j := range order {
		if err := <-j.done; wrong == nil {
			wrong = err
		}
		if wrong == nil {
			wrong = f.Put(j.chunk)
		}
		free <- j.chunk
	}
	if err := <-failed; err != io.EOF {
		return err
	}
	if wrong != nil {
		return wrong
	}
	return f.Finish()
}

var rawNames = [3]string{"x_raw", "y_raw", "z_raw"}

// survey is a made-up cloud: x y z with nulls and NaN, a text, an integer and a
// column that cannot be read.
func survey(rows int) []built {
	c := []built{
		{name: "note", typ: parquet.Type_BYTE_ARRAY, encoding: parquet.Encoding_RLE_DICTIONARY, codec: parquet.CompressionCodec_GZIP},
		{name: "x", typ: parquet.Type_DOUBLE, encoding: parquet.Encoding_BYTE_STREAM_SPLIT, codec: parquet.CompressionCodec_ZSTD, pages: []int{100, 1000}},
		{name: "y", typ: parquet.Type_DOUBLE, required: true, encoding: parquet.Encoding_RLE_DICTIONARY, codec: parquet.CompressionCodec_SNAPPY},
		{name: "z", typ: parquet.Type_DOUBLE, version: 2, style: mixed},
		{name: "class", typ: parquet.Type_INT32, mark: converted(parquet.ConvertedType_UINT_8), encoding: parquet.Encoding_DELTA_BINARY_PACKED},
		{name: "price", typ: parquet.Type_INT32, mark: converted(parquet.ConvertedType_DECIMAL), required: true},
	}
	for i := range rows {
		c[0].values = append(c[0].values, fmt.Sprintf("note %d", i%9))
		c[1].values = append(c[1].values, 1000+float64(i)/3)
		c[2].values = append(c[2].values, 2000-float64(i%50))
		c[3].values = append(c[3].values, -float64(i%97)/8)
		c[4].values = append(c[4].values, int32(i%6))
		c[5].values = append(c[5].values, int32(i))
		switch {
		case i%13 == 5:
			c[3].values[i] = nil
		case i%17 == 3:
			c[3].values[i] = math.NaN()
		case i%19 == 0:
			c[1].values[i] = nil
		}
	}
	return c
}

// surveyLayout has three classes: 0 is moved, 1 and 2 are not.
func surveyLayout() cloud.Layout {
	return cloud.Layout{
		XYZ: [3]int{1, 2, 3}, RawNames: rawNames, Moved: []bool{true, false, false},
		Added: []cloud.Added{
			{Name: "depth"},
			{Name: "rays", Type: cloud.Count},
			{Name: "outcome", Type: cloud.Label, ByClass: []cloud.Value{{Set: true, Text: "corrected"}, {Set: true, Text: "dry"}, {}}},
			{Name: "n_water", ByClass: []cloud.Value{{Set: true, Number: 1.34}, {Set: true, Number: math.NaN()}, {}}},
			{Name: "views", Type: cloud.Count, ByClass: []cloud.Value{{Set: true, Number: 3}, {Set: true, Number: 3}, {Set: true, Number: 3}}},
			{Name: "nothing", Type: cloud.Label, ByClass: make([]cloud.Value, 3)},
		},
	}
}

// surveyClass and the functions below say what fillSurvey puts into row i. They
// read the row from y and x, which fillSurvey cannot know otherwise.
func surveyClass(z float64) uint8 {
	switch {
	case z != z:
		return 2
	case z > -2:
		return 1
	}
	return 0
}

func fillSurvey(c *cloud.Chunk) {
	x, y, z := c.Numbers[0], c.Numbers[1], c.Numbers[2]
	for i := range c.Rows {
		c.Class[i] = surveyClass(z[i])
		c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = x[i]+1, y[i]+2, z[i]*1.25
		c.Added[0][i], c.Added[1][i] = math.NaN(), math.NaN()
		if c.Class[i] == 0 {
			c.Added[0][i], c.Added[1][i] = -z[i], 2000-y[i]
		}
	}
	for k := range c.Numbers {
		clear(c.Numbers[k]) // the caller may do as it likes with them
	}
}

// wantSurvey lists the expected output, column by column; nil is null.
func wantSurvey(in []built) map[string][]any {
	w := map[string][]any{"x_raw": in[1].values, "y_raw": in[2].values, "z_raw": in[3].values, "note": in[0].values, "class": in[4].values}
	for i := range in[0].values {
		x, y, z := in[1].values[i], in[2].values[i], in[3].values[i]
		class := uint8(2)
		if z != nil {
			class = surveyClass(z.(float64))
		}
		row := map[string]any{"x": x, "y": y, "z": z, "views": int32(3)}
		switch class {
		case 0:
			if x != nil {
				row["x"] = x.(float64) + 1
			}
			row["y"], row["z"] = y.(float64)+2, z.(float64)*1.25
			row["depth"], row["rays"] = -z.(float64), int32(2000-y.(float64))
			row["outcome"], row["n_water"] = "corrected", 1.34
		case 1:
			row["outcome"] = "dry"
		}
		for _, name := range []string{"x", "y", "z", "depth", "rays", "outcome", "n_water", "views", "nothing"} {
			w[name] = append(w[name], row[name])
		}
	}
	return w
}

// TestRewrite copies a hand-made file and finds every value of the output, by a
// reader that TestRead and TestEngineFiles hold to other programs' encodings.
func TestRewrite(t *testing.T) {
	const rows = 3000
	in := survey(rows)
	path := buildFile(t, in, []int{1200, 0, 9, rows - 1209}, nil)
	out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 2, fillSurvey)
	if err != nil {
		t.Fatal(err)
	}
	made := filepath.Join(t.TempDir(), "out.parquet")
	if err := os.WriteFile(made, out, 0o600); err != nil {
		t.Fatal(err)
	}
	checkOutput(t, made, wantSurvey(in))
	f, err := Open(made, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var names []string
	for _, c := range f.Columns() {
		names = append(names, c.Name)
	}
	order := []string{"note", "x", "y", "z", "class", "price", "x_raw", "y_raw", "z_raw", "depth", "rays", "outcome", "n_water", "views", "nothing"}
	if !slices.Equal(names, order) {
		t.Errorf("columns are %q, want %q", names, order)
	}
	checkCopies(t, path, f)
}

// checkOutput compares columns with their wanted values. A null and a NaN are
// told apart by the mark of null.
func checkOutput(t *testing.T, path string, wanted map[string][]any) {
	t.Helper()
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	columns := f.Columns()
	f.Close()
	for name, values := range wanted {
		i, err := cloud.Find(columns, name)
		if err != nil || i < 0 {
			t.Fatalf("no column %q: %v", name, err)
		}
		read := cloud.Request{Numbers: []int{i}}
		if columns[i].Type == "BYTE_ARRAY UTF8" || columns[i].Type == "BYTE_ARRAY" {
			read = cloud.Request{Texts: []int{i}}
		}
		numbers, texts, err := readAll(path, Options{}, read)
		if err != nil {
			t.Fatal(err)
		}
		for row, v := range values {
			if read.Texts != nil {
				if s, _ := v.(string); texts[0][row] != s {
					t.Fatalf("%s: row %d is %q, want %v", name, row, texts[0][row], v)
				}
				continue
			}
			got := numbers[0][row]
			if !sameNumber(got, want(v)) || isMarked(got) != (v == nil) {
				t.Fatalf("%s: row %d is %v (null %v), want %v", name, row, got, isMarked(got), v)
			}
		}
	}
}

// checkCopies compares the bytes of the old chunks with those of the output.
func checkCopies(t *testing.T, path string, out *File) {
	t.Helper()
	in, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer in.Close()
	if len(in.groups) != len(out.groups) {
		t.Fatalf("the output has %d row groups, want %d", len(out.groups), len(in.groups))
	}
	for i, c := range in.columns {
		name := c.Name
		if slices.Contains([]string{"x", "y", "z"}, name) {
			name += "_raw"
		}
		k := slices.IndexFunc(out.columns, func(c cloud.Column) bool { return c.Name == name })
		if out.columns[k].Type != c.Type {
			t.Errorf("%s is %s, want %s", name, out.columns[k].Type, c.Type)
		}
		for g := range in.groups {
			if !bytes.Equal(chunkBytes(t, in, g, i), chunkBytes(t, out, g, k)) {
				t.Errorf("%s: row group %d differs from the input", name, g+1)
			}
		}
	}
}

func chunkBytes(t *testing.T, f *File, group, column int) []byte {
	t.Helper()
	s, err := chunkSpan(f.groups[group].Columns[column].MetaData, f.footer)
	if err != nil {
		t.Fatal(err)
	}
	b := make([]byte, s.end-s.start)
	if err := readAt(f.input, b, s.start); err != nil {
		t.Fatal(err)
	}
	return b
}

// TestWorkers wants the same bytes from 1, 2 and 7 workers.
func TestWorkers(t *testing.T) {
	path := buildFile(t, survey(150_000), []int{70_000, 10, 79_990}, nil)
	var first []byte
	for _, workers := range []int{1, 2, 7} {
		out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), workers, fillSurvey)
		if err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = out
		} else if !bytes.Equal(first, out) {
			t.Errorf("%d workers write other bytes than 1", workers)
		}
	}
}

// TestNoRows keeps the columns of a file without rows.
func TestNoRows(t *testing.T) {
	for _, groups := range [][]int{nil, {0}} {
		path := buildFile(t, survey(0), groups, nil)
		out, err := rewrite(path, Options{}, cloud.Request{Numbers: []int{1, 2, 3}}, surveyLayout(), 1, fillSurvey)
		if err != nil {
			t.Fatal(err)
		}
		made := filepath.Join(t.TempDir(), "out.parquet")
		if err := os.WriteFile(made, out, 0o600); err != nil {
			t.Fatal(err)
		}
		f, err := Open(made, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if len(f.Columns()) != 15 || f.Rows() != 0 {
			t.Errorf("the output has %d columns and %d rows, want 15 and 0", len(f.Columns()), f.Rows())
		}
		f.Close()
	}
}
