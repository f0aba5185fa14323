//go:build interop

package interop

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// cloudTable is a made-up cloud of 50 000 points as the engine's own: hashes
// serve for noise. Points are under water, dry, without a height, or seen too
// much from the side.
const cloudTable = `create table cloud as select
  i as id,
  round(4000 + (hash(i) % 100000) / 1e3, 3)::double as x,
  round(7000 + (hash(i + 1) % 100000) / 1e3, 3)::double as y,
  case when i % 97 = 5 then null else round(2 - (hash(i + 2) % 15000) / 1e3, 3)::double end as z,
  timestamp '2024-05-01 10:00:00' + to_microseconds((i * 250)::bigint) as taken,
  case when i % 11 = 3 then null else 'note ' || hash(i + 3) % 40 end as note,
  (hash(i + 4) % 5)::utinyint as classification,
  (hash(i + 5) % 1000000007)::bigint * 1000003 as serial,
  round(4050 + case when i % 89 = 1 then 900 else (hash(i + 6) % 1000) / 1e2 end, 2)::double as origin_x,
  7050::double as origin_y, 400.5::double as origin_z
  from range(50000) r(i)`

const programJob = `[input]
files = ["raw/*.csv", "raw/*.parquet"]
[output]
folder = "true"
decimals = 9
[water]
temperature = 17.5
salinity = 34.9
[surface]
level = 0.42
[rays]
model = "pulse"
`

// TestProgram has the engine make a cloud in both formats, the program correct
// them, and the engine compare: copied columns with the raw file, added ones
// with the program's CSV output. Every statement counts rows that differ.
func TestProgram(t *testing.T) {
	dir := t.TempDir()
	in := func(name string) string { return filepath.Join(dir, name) }
	if err := os.Mkdir(in("raw"), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(in("job.toml"), []byte(programJob), 0o666); err != nil {
		t.Fatal(err)
	}
	engine(t, cloudTable,
		fmt.Sprintf("copy cloud to '%s' (format parquet, compression zstd, row_group_size 8192)", in("raw/a.parquet")),
		fmt.Sprintf("copy cloud to '%s' (header)", in("raw/a.csv")))
	program := in("bentray")
	for _, args := range [][]string{{"go", "build", "-o", program, "bentray/cmd/bentray"}, {program, "run", in("job.toml"), "--quiet"}} {
		if out, err := exec.Command(args[0], args[1:]...).CombinedOutput(); err != nil {
			t.Fatalf("%q: %v\n%s", args, err, out)
		}
	}
	raw, out := fmt.Sprintf("read_parquet('%s')", in("raw/a.parquet")), fmt.Sprintf("read_parquet('%s')", in("true/a.parquet"))
	text := fmt.Sprintf("read_csv('%s', header = true, all_varchar = true)", in("true/a.csv"))
	statements := append(programCopied(raw, out), programAdded(t, in("true/a.parquet"), out, text)...)
	for i, rows := range engine(t, statements...) {
		if len(rows) != 1 || rows[0][0] != "0" {
			t.Errorf("%s\ngives %v, want 0", statements[i], rows)
		}
	}
	counts := engine(t, fmt.Sprintf("select outcome, count(*) from %s group by outcome order by outcome", out))[0]
	var outcomes []string
	for _, row := range counts {
		outcomes = append(outcomes, row[0])
	}
	if want := []string{"corrected", "dry", "grazing", "invalid"}; !slices.Equal(outcomes, want) {
		t.Errorf("outcomes are %v, want some of each of %v", counts, want)
	}
}

var cloudColumns = []string{"id", "x", "y", "z", "taken", "note", "classification", "serial", "origin_x", "origin_y", "origin_z"}

// programCopied compares the raw columns, both ways, and counts by filters.
func programCopied(raw, out string) []string {
	var kept []string
	for _, name := range cloudColumns {
		if slices.Contains([]string{"x", "y", "z"}, name) {
			name += "_raw"
		}
		kept = append(kept, name)
	}
	a := fmt.Sprintf("select %s from %s", strings.Join(cloudColumns, ", "), raw)
	b := fmt.Sprintf("select %s from %s", strings.Join(kept, ", "), out)
	list := []string{
		fmt.Sprintf("select count(*) from (%s except all %s)", a, b),
		fmt.Sprintf("select count(*) from (%s except all %s)", b, a),
		fmt.Sprintf("select count(*) from %s o positional join %s i where o.id is distinct from i.id", out, raw),
	}
	for _, filter := range []string{
		"note = 'note 7'", "note is null", "classification = 3", "serial > 500000000000000", "taken = timestamp '2024-05-01 10:00:05'",
		"x@ > 4050", "y@ between 7010 and 7011", "z@ is null", "z@ = -3.5", "origin_x > 4900", "id = 33333",
	} {
		list = append(list, fmt.Sprintf("select (select count(*) from %s where %s) - (select count(*) from %s where %s)",
			raw, strings.ReplaceAll(filter, "@", ""), out, strings.ReplaceAll(filter, "@", "_raw")))
	}
	return list
}

// programAdded compares new coordinates and added columns with the text output:
// null where that is empty, texts alike, numbers to half a unit of the last
// written place (9 decimals, 5 of angles) and a rounding of doubles near 7000.
func programAdded(t *testing.T, path, out, text string) []string {
	f, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var list []string
	for i, c := range f.Columns() {
		isNew := i >= len(cloudColumns)+3 || slices.Contains([]string{"x", "y", "z"}, c.Name)
		if !isNew {
			continue
		}
		differs := fmt.Sprintf("o.%s <> c.%[1]s", c.Name)
		if c.Type == "DOUBLE" || c.Type == "INT32" {
			tolerance := 0.5e-9 + 2e-12
			if strings.HasSuffix(c.Name, "_deg") {
				tolerance = 0.5e-5 + 1e-12
			}
			differs = fmt.Sprintf("abs(o.%s - c.%[1]s::double) > %g", c.Name, tolerance)
		}
		list = append(list, fmt.Sprintf("select count(*) from %s o positional join %s c where (o.%s is null) <> (c.%[3]s is null) or %s", out, text, c.Name, differs))
	}
	if len(list) != 22 { // x y z, and what full provenance adds for a pulse with origin columns, less the raw copies
		t.Errorf("%d new columns, want 22: %q", len(list), list)
	}
	return list
}
