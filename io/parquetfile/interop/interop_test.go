//go:build interop

// Package interop proves Parquet outputs with another program: a columnar SQL
// engine reads them back. Its test has the build tag interop and runs node:
//
//	npm install --prefix FOLDER @duckdb/node-api
//	BENTRAY_ENGINE=FOLDER go test -tags interop ./io/parquetfile/interop
package interop

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

const folder = "../../../testdata/parquet"

// engine runs SQL and returns the rows of each statement.
func engine(t *testing.T, statements ...string) [][][]string {
	t.Helper()
	in, err := json.Marshal(statements)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command("node", "engine.mjs")
	cmd.Stdin = bytes.NewReader(in)
	var failed bytes.Buffer
	cmd.Stderr = &failed
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v: %s", err, &failed)
	}
	var rows [][][]string
	if err := json.Unmarshal(out, &rows); err != nil {
		t.Fatal(err)
	}
	return rows
}

var layout = cloud.Layout{
	XYZ: [3]int{0, 1, 2}, RawNames: [3]string{"x_raw", "y_raw", "z_raw"}, Moved: []bool{true, false, false},
	Added: []cloud.Added{
		{Name: "depth"},
		{Name: "ray_count", Type: cloud.Count},
		{Name: "outcome", Type: cloud.Label, ByClass: []cloud.Value{{Set: true, Text: "corrected"}, {Set: true, Text: "dry"}, {Set: true, Text: "invalid"}}},
		{Name: "n_water", ByClass: []cloud.Value{{Set: true, Number: 1.34}, {}, {}}},
		{Name: "run", Type: cloud.Label, ByClass: []cloud.Value{{Set: true, Text: "0123456789ab"}, {Set: true, Text: "0123456789ab"}, {Set: true, Text: "0123456789ab"}}},
		{Name: "nothing", ByClass: make([]cloud.Value, 3)},
	},
}

// rewrite copies a file: points below -2 are moved by 1, 2 and a quarter of z.
func rewrite(t *testing.T, path, target string) {
	t.Helper()
	f, err := parquetfile.Open(path, parquetfile.Options{Metadata: map[string]string{"bentray": "{}"}})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	out, err := os.Create(target)
	if err != nil {
		t.Fatal(err)
	}
	defer out.Close()
	if err := f.Begin(cloud.Request{Numbers: []int{0, 1, 2}}, layout, out); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		fill(&c)
		if err := f.Encode(&c); err != nil {
			t.Fatal(err)
		}
		if err := f.Put(&c); err != nil {
			t.Fatal(err)
		}
	}
	if err := f.Finish(); err != nil {
		t.Fatal(err)
	}
}

func fill(c *cloud.Chunk) {
	c.Resize(c.Rows, layout)
	for i, z := range c.Numbers[2] {
		switch {
		case z != z:
			c.Class[i] = 2
		case z > -2:
			c.Class[i] = 1
		default:
			c.Class[i] = 0
		}
		c.XYZ[0][i], c.XYZ[1][i], c.XYZ[2][i] = c.Numbers[0][i]+1, c.Numbers[1][i]+2, z*1.25
		c.Added[0][i], c.Added[1][i] = math.NaN(), math.NaN()
		if c.Class[i] == 0 {
			c.Added[0][i], c.Added[1][i] = -z, math.Floor(-z)
		}
	}
}

// TestEngineReads has the engine compare outputs with their inputs. Every
// statement counts rows that differ, so all must be 0.
func TestEngineReads(t *testing.T) {
	for _, name := range []string{"none", "snappy", "gzip", "zstd", "plain", "v2", "nested"} {
		t.Run(name, func(t *testing.T) {
			path := filepath.Join(folder, name+".parquet")
			target := filepath.Join(t.TempDir(), "out.parquet")
			rewrite(t, path, target)
			in, out := fmt.Sprintf("read_parquet('%s')", path), fmt.Sprintf("read_parquet('%s')", target)
			statements := append([]string{"create table copy as select * from " + out}, copied(t, path, in, out)...)
			statements = append(statements, added(in, out)...)
			for i, rows := range engine(t, statements...) {
				if i == 0 {
					continue // the table
				}
				if len(rows) != 1 || rows[0][0] != "0" {
					t.Errorf("%s\ngives %v, want 0", statements[i], rows)
				}
			}
		})
	}
}

// copied compares the old columns: all rows both ways, and counts by filters,
// which read statistics and Bloom filters.
func copied(t *testing.T, path, in, out string) []string {
	f, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var old, kept []string
	for _, c := range f.Columns() {
		name := strings.TrimSuffix(c.Name, ".list.element")
		old = append(old, name)
		if slices.Contains([]string{"x", "y", "z"}, name) {
			name += "_raw"
		}
		kept = append(kept, name)
	}
	a := fmt.Sprintf("select %s from %s", strings.Join(old, ", "), in)
	b := fmt.Sprintf("select %s from %s", strings.Join(kept, ", "), out)
	list := []string{
		fmt.Sprintf("select count(*) from (%s except all %s)", a, b),
		fmt.Sprintf("select count(*) from (%s except all %s)", b, a),
	}
	for _, filter := range []string{
		"classification = 3", "views = 'cam1;cam2'", "note = 'point 77 é'", "serial > 500000000000000", "edge",
		"time_us = timestamp '2024-05-01 10:00:00.098760'", "y@ < 7050", "z@ = -3.5", "z@ between -7 and -6.5", "x@ > 4020", "y@ is null", "cost > 0.5",
	} {
		count := "(select count(*) from %s where " + filter + ")"
		list = append(list, "select "+fmt.Sprintf(strings.ReplaceAll(count, "@", ""), in)+" - "+fmt.Sprintf(strings.ReplaceAll(count, "@", "_raw"), out))
	}
	return list
}

// added compares the new columns with the same rules in SQL, row by row.
func added(in, out string) []string {
	const moved = "o.z_raw <= -2 and not isnan(o.z_raw)"
	rows := fmt.Sprintf("%s o positional join %s i where ", out, in)
	var list []string
	for column, rule := range map[string]string{
		"x": "case when MOVED then i.x + 1 else i.x end", "y": "case when MOVED then i.y + 2 else i.y end", "z": "case when MOVED then i.z * 1.25 else i.z end",
		"depth": "case when MOVED then -i.z end", "ray_count": "case when MOVED then floor(-i.z)::integer end",
		"outcome": "case when i.z is null or isnan(i.z) then 'invalid' when MOVED then 'corrected' else 'dry' end",
		"n_water": "case when MOVED then 1.34::double end", "run": "'0123456789ab'", "nothing": "null",
	} {
		list = append(list, "select count(*) from "+rows+"o."+column+" is distinct from ("+strings.ReplaceAll(rule, "MOVED", moved)+")")
	}
	slices.Sort(list)
	for _, filter := range []string{"depth > 7", "outcome = 'dry'", "outcome = 'invalid'", "n_water is null", "run = 'x'", "ray_count = 5", "z < -14", "nothing is not null", "z > 100", "x > 1e9", "isnan(z)"} {
		// The second count comes from a table, which has no statistics of ours.
		list = append(list, fmt.Sprintf("select (select count(*) from %s where %s) - (select count(*) from copy where %s)", out, filter, filter))
	}
	return list
}

// TestEngineStatistics wants the engine to see the ranges of new columns.
func TestEngineStatistics(t *testing.T) {
	target := filepath.Join(t.TempDir(), "out.parquet")
	rewrite(t, filepath.Join(folder, "snappy.parquet"), target)
	rows := engine(t,
		fmt.Sprintf("select min(stats_min_value::double), max(stats_max_value::double), sum(stats_null_count) from parquet_metadata('%s') where path_in_schema = 'depth'", target),
		fmt.Sprintf("select min(depth), max(depth), count(*) - count(depth) from read_parquet('%s')", target),
		fmt.Sprintf("select key::varchar, value::varchar from parquet_kv_metadata('%s')", target),
	)
	for i := range rows[0][0] {
		a, errA := strconv.ParseFloat(rows[0][0][i], 64)
		b, errB := strconv.ParseFloat(rows[1][0][i], 64)
		if errA != nil || errB != nil || a != b {
			t.Errorf("statistics of depth are %v, want %v", rows[0][0], rows[1][0])
		}
	}
	if len(rows[2]) != 1 || rows[2][0][0] != "bentray" {
		t.Errorf("metadata is %v, want the key bentray", rows[2])
	}
}
