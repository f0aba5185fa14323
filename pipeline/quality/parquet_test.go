package quality

import (
	"bytes"
	"encoding/binary"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"

	"bentray/pipeline"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// correctedOf runs a job on a Parquet file of another program and returns the output.
func correctedOf(t *testing.T, name string) (raw, corrected string) {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "parquet", name))
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	raw, corrected = writeFile(t, filepath.Join(folder, "raw", name), string(data)), filepath.Join(folder, "true", name)
	writeFile(t, filepath.Join(folder, "job.toml"), "[input]\nfiles = [\"raw/*\"]\n"+strings.Replace(verticalJob, "0.42", "-2.5", 1))
	j, err := job.Load(filepath.Join(folder, "job.toml"))
	if err != nil {
		t.Fatal(err)
	}
	summary, err := pipeline.Run(t.Context(), j, pipeline.Options{})
	if err != nil || summary.Failed > 0 {
		t.Fatal(err, summary)
	}
	return raw, corrected
}

// One table in other codecs, encodings and pages has the same values in every type: they
// are compared one by one. In the same file they are proven by their bytes.
func TestParquetByValue(t *testing.T) {
	_, corrected := correctedOf(t, "snappy.parquet")
	removeReceipt(t, corrected) // which names the one file that was corrected
	for _, name := range []string{"snappy.parquet", "none.parquet", "gzip.parquet", "zstd.parquet", "plain.parquet", "v2.parquet"} {
		r := diffFolders(t, filepath.Join("..", "..", "testdata", "parquet", name), corrected, Options{})
		if !r.Holds || r.Rows != 2500 || r.RowsRaw != 2500 || len(r.NotCompared) > 0 {
			t.Errorf("%s: holds %v, %d of %d rows, not compared %q: %v", name, r.Holds, r.Rows, r.RowsRaw, r.NotCompared, r.Findings)
		}
	}
}

// A nested column is proven by its bytes; in other bytes it cannot be compared, and that
// is said.
func TestParquetNested(t *testing.T) {
	raw, corrected := correctedOf(t, "nested.parquet")
	if r := diffFolders(t, raw, corrected, Options{}); !r.Holds || r.Rows != 100 {
		t.Fatalf("holds %v, %d rows: %v", r.Holds, r.Rows, r.Findings)
	}
	data, err := os.ReadFile(raw)
	if err != nil {
		t.Fatal(err)
	}
	removeReceipt(t, corrected)
	name, last := nestedColumn(t, string(data))
	data[last] ^= 1
	writeFile(t, raw, string(data))
	r := diffFolders(t, raw, corrected, Options{})
	if r.Holds || !slices.Equal(r.NotCompared, []string{name}) || len(r.Findings) != 1 || !strings.Contains(r.Findings[0].Text, "its values cannot be compared") {
		t.Errorf("holds %v, not compared %q, want %q: %v", r.Holds, r.NotCompared, name, r.Findings)
	}
}

func removeReceipt(t *testing.T, corrected string) {
	t.Helper()
	if err := os.Remove(corrected + receipt.Suffix); err != nil {
		t.Fatal(err)
	}
}

// nestedColumn is the first column within a group, and its last byte.
func nestedColumn(t *testing.T, data string) (name string, last int64) {
	t.Helper()
	end := len(data) - 8
	start := end - int(binary.LittleEndian.Uint32([]byte(data[end:])))
	meta, buffer := parquet.NewFileMetaData(), &thrift.TMemoryBuffer{Buffer: bytes.NewBufferString(data[start:end])}
	if err := meta.Read(t.Context(), thrift.NewTCompactProtocolConf(buffer, nil)); err != nil {
		t.Fatal(err)
	}
	for _, c := range meta.RowGroups[0].Columns {
		if m := c.MetaData; len(m.PathInSchema) > 1 {
			first := m.DataPageOffset
			if d := m.GetDictionaryPageOffset(); d > 0 {
				first = min(first, d)
			}
			return strings.Join(m.PathInSchema, "."), first + m.TotalCompressedSize - 1
		}
	}
	t.Fatal("no nested column")
	return "", 0
}
