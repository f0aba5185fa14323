package parquetfile

import (
	"bytes"
	"io"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	"bentray/io/cloud"
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

// reopen opens what was written, under a path of its own, until the test ends.
func reopen(t *testing.T, out []byte) (f *File, path string) {
	t.Helper()
	path = filepath.Join(t.TempDir(), "out.parquet")
	if err := os.WriteFile(path, out, 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f, path
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
	f, made := reopen(t, out)
	checkOutput(t, made, wantSurvey(in))
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
		f, _ := reopen(t, out)
		if len(f.Columns()) != 15 || f.Rows() != 0 {
			t.Errorf("the output has %d columns and %d rows, want 15 and 0", len(f.Columns()), f.Rows())
		}
	}
}

// TestChunkReuse passes one chunk from file to file, and from another format.
func TestChunkReuse(t *testing.T) {
	c := cloud.Chunk{Format: "of another format", Numbers: [][]float64{{1, 2}}, Texts: make([]cloud.Texts, 3)}
	path := buildFile(t, survey(20), []int{20}, nil)
	for _, read := range []cloud.Request{{Numbers: []int{1, 4}}, {Texts: []int{0}}, {Numbers: []int{4}, Texts: []int{0}}} {
		f, err := Open(path, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if err := f.Begin(read, cloud.Layout{}, nil); err != nil {
			t.Fatal(err)
		}
		if err := f.Next(&c); err != nil {
			t.Fatal(err)
		}
		if c.Rows != 20 || len(c.Numbers) != len(read.Numbers) || len(c.Texts) != len(read.Texts) || c.Consumed != f.size {
			t.Errorf("%v: %d rows, %d numbers, %d texts, %d bytes", read, c.Rows, len(c.Numbers), len(c.Texts), c.Consumed)
		}
		for k := range c.Numbers {
			if column := read.Numbers[k]; column == 4 && c.Numbers[k][19] != 19%6 {
				t.Errorf("class of row 19 is %v, want 1", c.Numbers[k][19])
			}
		}
		if err := f.Next(&c); err != io.EOF {
			t.Errorf("got error %v behind the last row, want io.EOF", err)
		}
		f.Close()
	}
}
