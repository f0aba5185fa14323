package main

import (
	"bytes"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// goodParquet is goodCloud as Parquet, of some rows in groups of some.
func goodParquet(t *testing.T, rows, groupRows int) string {
	t.Helper()
	same := func(v float64) []float64 {
		list := make([]float64, rows)
		for i := range list {
			list[i] = v
		}
		return list
	}
	var b bytes.Buffer
	err := parquetfile.WriteTable(&b, []parquetfile.Column{
		{Name: "x", Values: same(5)},
		{Name: "y", Values: same(6)},
		{Name: "z", Values: same(-10)},
		{Name: "origin_x", Values: same(5)},
		{Name: "origin_y", Values: same(6)},
		{Name: "origin_z", Values: same(400)},
		{Name: "gps_time", Values: same(1)},
	}, groupRows)
	if err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// overwrite puts bytes in the place of others.
func overwrite(text string, at int, with string) string {
	return text[:at] + with + text[at+len(with):]
}

// Damaged and foreign Parquet files fail alone, by name, in a plan as in a run.
func TestBadParquetFailsAlone(t *testing.T) {
	good := goodParquet(t, 5, 2)
	for _, c := range []struct{ name, data, want string }{
		{name: "empty", data: "", want: `raw/b.parquet: has 0 bytes, want a Parquet file`},
		{name: "text", data: goodCloud + goodCloud, want: `raw/b.parquet: begins with "x,y,", want "PAR1" as in every Parquet file`},
		{name: "cut short", data: good[:len(good)-20], want: `raw/b.parquet: ends with `},
		{name: "encrypted", data: overwrite(good, len(good)-4, "PARE"), want: `raw/b.parquet: is encrypted, want a plain Parquet file; decrypt it first`},
		{name: "footer beyond the file", data: overwrite(good, len(good)-8, "\xff\xff\xff\x7f"), want: `raw/b.parquet: says its footer has 2147483647 bytes, want at most `},
		{name: "footer of noise", data: overwrite(good, len(good)-40, strings.Repeat("\xff", 32)), want: `raw/b.parquet: `},
		{name: "page of noise", data: overwrite(good, 4, strings.Repeat("\xff", 16)), want: `raw/b.parquet: column "x", row group 1: `},
	} {
		t.Run(c.name, func(t *testing.T) {
			bad := badInput{files: map[string]string{"raw/b.parquet": c.data}, old: `"raw/*.csv"]`, new: `"raw/*.csv", "raw/*.parquet"]`}
			bad.lay(t)
			for command, prefix := range map[string]string{"plan": "would fail: ", "run": "failed: "} {
				code, _, errs := call(t, command, "job.toml")
				if code != exitPartly || !strings.HasPrefix(errs, prefix+c.want) || strings.Count(errs, "\n") != 1 {
					t.Errorf("%s: exit code is %d with %q, want %d with %q", command, code, errs, exitPartly, prefix+c.want)
				}
			}
			after := listing(t)
			for _, name := range []string{"true/a.csv", "true/a.csv.receipt.json"} {
				if _, there := after[name]; !there {
					t.Errorf("there is no %s", name)
				}
			}
			for name := range after {
				if strings.HasPrefix(name, "true/b.parquet") || strings.Contains(name, "part-") || strings.Contains(name, "scratch") {
					t.Errorf("%s is left", name)
				}
			}
		})
	}
}
