package pipeline

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"bentray/io/parquetfile"
	"bentray/pipeline/job"
)

// parquetJob is tinyJob over Parquet files.
func parquetJob() string { return tinyJob(`"raw/*.parquet"`, "true") }

// correctParquet does a job of one file, raw/a.parquet, and returns its output.
func correctParquet(t *testing.T, data, jobText string) string {
	t.Helper()
	folder := t.TempDir()
	files{"raw/a.parquet": data}.write(t, folder)
	runJob(t, loadJob(t, folder, jobText), Options{Workers: 2})
	return readFile(t, folder, "true/a.parquet")
}

// failParquet does a job of a file that fails, beside one that does not, and
// returns the error without the path.
func failParquet(t *testing.T, data, jobText string) string {
	t.Helper()
	folder := t.TempDir()
	files{"raw/bad.parquet": data, "raw/good.parquet": parquetOf(t, tiny, 0, nil)}.write(t, folder)
	s, err := Run(context.Background(), loadJob(t, folder, jobText), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if s.Done != 1 || s.Failed != 1 || exists(filepath.Join(folder, "true/bad.parquet")) {
		t.Fatalf("%d done and %d failed, want 1 and 1 and no output of the failed", s.Done, s.Failed)
	}
	return strings.TrimPrefix(s.Files[0].Error, filepath.Join(folder, "raw/bad.parquet")+": ")
}

// manifold is a cloud of several row groups with columns of every type: points
// under water, dry ones and ones without a height, seen straight down.
func manifold(t *testing.T) (data string, rows int) {
	const n = 500
	x, z, origin, height, id, class, note := make([]float64, n), make([]float64, n), make([]float64, n), make([]int32, n), make([]int64, n), make([]int32, n), make([]string, n)
	for i := range n {
		x[i], z[i] = 5+float64(i)/7, []float64{-5.125, 3, math.NaN()}[i%3]
		origin[i], height[i] = x[i], 400
		id[i], class[i], note[i] = math.MaxInt64-int64(i), int32(i%5), notes[i%len(notes)]
	}
	return tableOf(t, 128,
		parquetfile.Column{Name: "id", Values: id}, parquetfile.Column{Name: "y", Values: x}, parquetfile.Column{Name: "note", Values: note},
		parquetfile.Column{Name: "x", Values: x}, parquetfile.Column{Name: "z", Values: z}, parquetfile.Column{Name: "origin_x", Values: origin},
		parquetfile.Column{Name: "origin_y", Values: origin}, parquetfile.Column{Name: "origin_z", Values: height}, parquetfile.Column{Name: "class", Values: class},
	), n
}

// Columns that do not change, and x, y, z on their way to their raw copies, keep
// their chunks byte for byte, their types and their order; rows keep theirs.
func TestParquetColumnsKeepTheirBytes(t *testing.T) {
	raw, rows := manifold(t)
	for _, provenance := range []string{job.Full, job.Lean} {
		out := correctParquet(t, raw, strings.Replace(parquetJob(), "[output]", "[output]\nprovenance = \""+provenance+"\"", 1))
		was, is := footerOf(t, raw), footerOf(t, out)
		if is.NumRows != int64(rows) || len(is.RowGroups) != 4 {
			t.Errorf("%s: %d rows in %d groups, want %d in 4", provenance, is.NumRows, len(is.RowGroups), rows)
		}
		for i, e := range was.Schema[1:] {
			if is.Schema[1+i].Name != e.Name {
				t.Errorf("%s: column %d is %q, want %q", provenance, i, is.Schema[1+i].Name, e.Name)
			}
			copied := e.Name
			if slices.Contains([]string{"x", "y", "z"}, copied) {
				copied += "_raw"
			}
			if got := is.Schema[1+placeOf(t, is, copied)]; got.GetType() != e.GetType() || got.GetConvertedType() != e.GetConvertedType() {
				t.Errorf("%s: %s is %v, want %v", provenance, copied, got, e)
			}
			if !slices.Equal(chunksOf(t, out, copied), chunksOf(t, raw, e.Name)) {
				t.Errorf("%s: the chunks of %s are not those of the input", provenance, copied)
			}
		}
		checkManifold(t, readParquet(t, raw), readParquet(t, out))
	}
}

// checkManifold compares rows: new coordinates where corrected, else the raw
// ones; null stays null.
func checkManifold(t *testing.T, raw, got table) {
	t.Helper()
	w := standardSea(t)
	for i := range raw.rows {
		want := []string{"corrected", "dry", "invalid"}[i%3]
		if got.text(t, i, "outcome") != want || got.text(t, i, "id") != raw.text(t, i, "id") || got.text(t, i, "z_raw") != raw.text(t, i, "z") {
			t.Fatalf("row %d is %q, want it %s with the raw row's values", i, got.rows[i], want)
		}
		if want == "corrected" {
			near(t, i, "z", got.number(t, i, "z"), -5.125*w.rangeNg/w.waterGroup, 1e-12)
			near(t, i, "x", got.number(t, i, "x"), raw.number(t, i, "x"), 1e-12)
			continue
		}
		for _, name := range []string{"x", "y", "z"} {
			if got.text(t, i, name) != raw.text(t, i, name) {
				t.Errorf("row %d (%s): %s is %s, want %s", i, want, name, got.text(t, i, name), raw.text(t, i, name))
			}
		}
	}
}

// Whole numbers may be coordinates, stay so in the raw copies, and come out as DOUBLE.
func TestIntegerCoordinates(t *testing.T) {
	for _, types := range []map[string]string{{"x": "INT32", "y": "INT32", "z": "INT32"}, {"x": "INT64", "y": "INT64", "z": "INT32"}} {
		out := correctParquet(t, parquetOf(t, tiny, 0, types), parquetJob())
		f := openParquet(t, out)
		for _, c := range f.Columns() {
			if want := types[strings.TrimSuffix(c.Name, "_raw")]; strings.HasSuffix(c.Name, "_raw") && c.Type != want || want != "" && c.Name == "x" && c.Type != "DOUBLE" {
				t.Errorf("%s is %s", c.Name, c.Type)
			}
		}
		f.Close()
		got, w := readParquet(t, out), standardSea(t)
		near(t, 0, "z", got.number(t, 0, "z"), -10*w.rangeNg/w.waterGroup, 1e-12)
		if raw := got.text(t, 0, "z_raw"); raw != "-10" {
			t.Errorf("z_raw is %s, want -10", raw)
		}
	}
}

// FLOAT coordinates in steps above 1 mm are refused unless the job takes them: a
// FLOAT has 24 bits, so that its step is 2^-10 m below 2^14 m and 2^-9 m above.
func TestCoarseCoordinates(t *testing.T) {
	cloud := func(x float32) string {
		bits := []int32{int32(math.Float32bits(x))}
		one := []float64{float64(x)}
		return asFloats(t, tableOf(t, 0,
			parquetfile.Column{Name: "x", Values: bits}, parquetfile.Column{Name: "y", Values: []float64{6}}, parquetfile.Column{Name: "z", Values: []float64{-10}},
			parquetfile.Column{Name: "origin_x", Values: one}, parquetfile.Column{Name: "origin_y", Values: []float64{6}}, parquetfile.Column{Name: "origin_z", Values: []float64{400}},
		), "x")
	}
	fine := readParquet(t, correctParquet(t, cloud(16383.5), parquetJob()))
	near(t, 0, "x", fine.number(t, 0, "x"), 16383.5, 1e-11)
	const want = `column "x" is FLOAT, whose step at 16384.5 is 0.002, want at most 0.001; store it as DOUBLE or accept this with coarse = true in [input]`
	if got := failParquet(t, cloud(16384.5), parquetJob()); got != want {
		t.Errorf("the error is %s, want %s", got, want)
	}
	if p := planOf(t, files{"raw/a.parquet": cloud(16384.5)}, parquetJob()); p.Files[0].Err == nil || !strings.HasSuffix(p.Files[0].Err.Error(), want) {
		t.Errorf("the plan says %v, want %s", p.Files[0].Err, want)
	}
	coarse := strings.Replace(parquetJob(), "[output]", "coarse = true\n[output]", 1)
	accepted := readParquet(t, correctParquet(t, cloud(16384.5), coarse))
	near(t, 0, "x", accepted.number(t, 0, "x"), 16384.5, 1e-11)
	const caution = `coordinates in column "x" are FLOAT, of some 7 digits; take the cloud with DOUBLE ones if there is one`
	p := planOf(t, files{"raw/a.parquet": cloud(16384.5), "raw/b.parquet": cloud(5)}, coarse)
	if n := len(p.Cautions); n == 0 || p.Cautions[n-1] != caution || slices.Index(p.Cautions, caution) != n-1 {
		t.Errorf("the plan's cautions are %q, want one about FLOAT", p.Cautions)
	}
	// In feet the same step is below 1 mm.
	feet := readParquet(t, correctParquet(t, cloud(16384.5), strings.Replace(parquetJob(), "[output]", "unit = \"ft\"\n[output]", 1)))
	near(t, 0, "x", feet.number(t, 0, "x"), 16384.5, 1e-11)
}

// Metadata: bentray's own say what the receipt says, foreign keys stay, stale
// descriptions of the columns go.
func TestParquetMetadata(t *testing.T) {
	raw := withFooter(t, parquetOf(t, tiny, 0, nil), func(meta *parquet.FileMetaData) {
		for _, key := range []string{"survey", "ARROW:schema", "pandas", "bentray.run"} {
			value := "of the input"
			meta.KeyValueMetadata = append(meta.KeyValueMetadata, &parquet.KeyValue{Key: key, Value: &value})
		}
	})
	folder := t.TempDir()
	files{"raw/a.parquet": raw}.write(t, folder)
	runJob(t, loadJob(t, folder, parquetJob()), Options{})
	r := readReceipt(t, filepath.Join(folder, "true/a.parquet"))
	found := map[string]string{}
	for _, kv := range footerOf(t, readFile(t, folder, "true/a.parquet")).KeyValueMetadata {
		if _, twice := found[kv.Key]; twice {
			t.Errorf("the key %s is there twice", kv.Key)
		}
		found[kv.Key] = kv.GetValue()
	}
	var settings, receipted any
	if err := json.Unmarshal([]byte(found["bentray.job"]), &settings); err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(r.Job, &receipted); err != nil {
		t.Fatal(err)
	}
	if fmt.Sprint(settings) != fmt.Sprint(receipted) {
		t.Errorf("bentray.job is %v, want the receipt's %v", settings, receipted)
	}
	delete(found, "bentray.job")
	want := map[string]string{"survey": "of the input", "bentray.run": r.Run, "bentray.program": r.Program}
	if fmt.Sprint(found) != fmt.Sprint(want) {
		t.Errorf("metadata are %v, want %v", found, want)
	}
}
