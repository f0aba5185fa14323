package pipeline

import (
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"bentray/io/parquetfile"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// mixedFleet is a survey of CSV and Parquet clouds with a Parquet trajectory;
// one cloud has row groups of several chunks, one has many small groups, one has
// no rows.
func mixedFleet(t *testing.T) (folder string) {
	t.Helper()
	c, w := truthCases[0], standardSea(t)
	folder = t.TempDir()
	parquet := func(n, groupRows int) string { return parquetOf(t, c.cloud(w.shoot(n, false)), groupRows, nil) }
	files{
		"flight.parquet":        parquetOf(t, c.flight(), 7, nil),
		"water.geojson":         polygonOf(-1000, -1000, 900, 1000),
		"raw/none.parquet":      parquet(0, 0),
		"raw/part/wide.parquet": parquet(140_000, 131_000),
		"raw/part/many.parquet": parquet(5_000, 300),
		"raw/plain.csv":         c.cloud(w.shoot(700, false)),
	}.write(t, folder)
	return folder
}

func mixedJob(t *testing.T, folder, output string) *job.Job {
	t.Helper()
	return loadJob(t, folder, "[input]\nfiles = [\"raw/**/*.csv\", \"raw/**/*.parquet\"]\n[output]\nfolder = \""+output+"\"\n"+media+
		"[surface]\nlevel = 0.42\n[extent]\npolygons = \"water.geojson\"\n[rays]\nmodel = \"pulse\"\ntrajectory = \"flight.parquet\"\n")
}

func TestSameParquetBytesForAnyWorkers(t *testing.T) {
	folder := mixedFleet(t)
	want := sameForWorkers(t, folder, mixedJob, receipt.Rows{Read: 145_700, Written: 145_700}, 4)
	if s := runJob(t, mixedJob(t, folder, "true2"), Options{}); s.Fresh != 4 {
		t.Errorf("a second run finds %d files fresh, want 4", s.Fresh)
	}
	runJob(t, mixedJob(t, folder, "true2"), Options{Workers: 3, Redo: true})
	same(t, "redo", outputs(t, filepath.Join(folder, "true2")), want)
}

// A plan knows the rows of a Parquet file without reading them.
func TestPlanCountsParquetRows(t *testing.T) {
	folder := mixedFleet(t)
	p, err := MakePlan(t.Context(), mixedJob(t, folder, "true"), nil)
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]int64{"none.parquet": 0, "part/many.parquet": 5_000, "part/wide.parquet": 140_000, "plain.csv": 700}
	for _, f := range p.Files {
		if f.Err != nil || !f.Exact || f.Points != want[f.Output] {
			t.Errorf("%s has %d points (exactly %t, %v), want %d", f.Output, f.Points, f.Exact, f.Err, want[f.Output])
		}
	}
}

// One job treats a cloud alike in both formats: the same outcomes, and the same
// numbers but for the rounding to text.
func TestBothFormatsAgree(t *testing.T) {
	c, w := truthCases[0], standardSea(t)
	text := c.cloud(w.shoot(3000, false))
	folder := t.TempDir()
	files{
		"raw/a.csv": text, "raw/a.parquet": parquetOf(t, text, 700, nil),
		"flight.parquet": parquetOf(t, c.flight(), 0, nil), "water.geojson": polygonOf(-1000, -1000, 900, 1000),
	}.write(t, folder)
	runJob(t, mixedJob(t, folder, "true"), Options{})
	inText, inParquet := readTable(t, readFile(t, folder, "true/a.csv")), readParquet(t, readFile(t, folder, "true/a.parquet"))
	if !slices.Equal(inText.names, inParquet.names) || len(inText.rows) != len(inParquet.rows) {
		t.Fatalf("columns are %q, want %q", inParquet.names, inText.names)
	}
	for i := range inText.rows {
		for _, name := range inText.names {
			a, b := inText.text(t, i, name), inParquet.text(t, i, name)
			if _, number := numbersOf([]string{a}); a != b && a != "" && number {
				near(t, i, name, inParquet.number(t, i, name), inText.number(t, i, name), 0.5001e-4)
			} else if a != b {
				t.Errorf("row %d: %s is %q in Parquet, %q in CSV", i, name, b, a)
			}
		}
	}
}

// Parquet columns have types: a condition of texts wants a text column, one of
// numbers a number.
func TestSelectByTypes(t *testing.T) {
	data := parquetOf(t, "x,y,z,classification,strip,origin_x,origin_y,origin_z\n"+
		"5,6,-1,2,north,5,6,400\n5,6,-1,9,south,5,6,400\n5,6,-1,40,7,5,6,400\n5,6,-1,2,North,5,6,400\n", 3, map[string]string{"classification": "INT32"})
	for _, c := range []struct{ where, want string }{
		{"classification = [2]", "+--+"},
		{"classification = [9, 40]", "-++-"},
		{`strip = ["north", 7]`, "+-+-"},
		{"classification = [2]\nstrip = [\"north\"]", "+---"},
	} {
		got := ""
		for _, outcome := range readParquet(t, correctParquet(t, data, parquetJob()+"[select.where]\n"+c.where+"\n")).column(t, "outcome") {
			got += map[string]string{"corrected": "+", "not_selected": "-"}[outcome]
		}
		if got != c.want {
			t.Errorf("%s selects %s, want %s", c.where, got, c.want)
		}
	}
	for where, want := range map[string]string{
		`z = ["-10"]`: `column "z" is DOUBLE, want a text (BYTE_ARRAY)`,
		"z = [-10]":   "",
	} {
		folder := t.TempDir()
		files{"raw/a.parquet": parquetOf(t, tiny, 0, nil)}.write(t, folder)
		s, err := Run(t.Context(), loadJob(t, folder, parquetJob()+"[select.where]\n"+where+"\n"), Options{})
		if err != nil {
			t.Fatal(err)
		}
		if got := strings.TrimPrefix(s.Files[0].Error, filepath.Join(folder, "raw/a.parquet")+": "); got != want {
			t.Errorf("%s gives %q, want %q", where, got, want)
		}
	}
}

// A file of no rows is done: its output has all columns, and a caution says so.
func TestParquetWithoutRows(t *testing.T) {
	folder := t.TempDir()
	files{"raw/a.parquet": tableOf(t, 0,
		parquetfile.Column{Name: "x", Values: []float64{}}, parquetfile.Column{Name: "y", Values: []float64{}}, parquetfile.Column{Name: "z", Values: []float64{}},
		parquetfile.Column{Name: "origin_x", Values: []float64{}}, parquetfile.Column{Name: "origin_y", Values: []float64{}}, parquetfile.Column{Name: "origin_z", Values: []float64{}},
	)}.write(t, folder)
	runJob(t, loadJob(t, folder, parquetJob()), Options{})
	got := readParquet(t, readFile(t, folder, "true/a.parquet"))
	if len(got.rows) != 0 || got.names[6] != "x_raw" || got.names[len(got.names)-1] != "run" {
		t.Errorf("%d rows of %q", len(got.rows), got.names)
	}
	if r := readReceipt(t, filepath.Join(folder, "true/a.parquet")); !slices.Equal(r.Cautions, []string{"the file holds no points"}) {
		t.Errorf("cautions are %q", r.Cautions)
	}
}

// What fails, fails alone, with the column named.
func TestParquetThatCannotBeDone(t *testing.T) {
	named := func(names string) string { return parquetOf(t, strings.Replace(tiny, "x,y,z", names, 1), 0, nil) }
	for name, c := range map[string]struct{ data, want string }{
		"a text for a coordinate": {parquetOf(t, tiny, 0, map[string]string{"z": "text"}), `column "z" is BYTE_ARRAY UTF8, want a number (DOUBLE, FLOAT, INT32, INT64 or TIMESTAMP)`},
		"no z":                    {named("x,y,up"), "no column for z; the columns are x, y, up, origin_x, origin_y, origin_z; name it in [input.columns]"},
		"degrees":                 {named("lon,lat,z"), `no column for x, and "lon" holds degrees; project the cloud first, its coordinates must be lengths`},
		"a raw copy there":        {parquetOf(t, "x,y,z,origin_x,origin_y,origin_z,Z_raw\n5,6,-10,5,6,400,1\n", 0, nil), `the file already has a column "Z_raw", which bentray would add; rename it there, or take the raw cloud if this file is an output`},
		"a codec that cannot be read": {withFooter(t, parquetOf(t, tiny, 0, nil), func(meta *parquet.FileMetaData) {
			meta.RowGroups[0].Columns[2].MetaData.Codec = parquet.CompressionCodec_LZ4_RAW
		}), `column "z", row group 1: is compressed with LZ4_RAW, want none, SNAPPY, GZIP or ZSTD`},
		"an output again": {
			correctParquet(t, parquetOf(t, tiny, 0, nil), parquetJob()),
			`the file already has a column "x_raw", which bentray would add; rename it there, or take the raw cloud if this file is an output`,
		},
	} {
		t.Run(name, func(t *testing.T) {
			if got := failParquet(t, c.data, parquetJob()); got != c.want {
				t.Errorf("the error is %s, want %s", got, c.want)
			}
		})
	}
}

// Damage far behind the head is found before the file gets its name.
func TestDamageInTheLastGroup(t *testing.T) {
	good, _ := manifold(t)
	chunk := chunksOf(t, good, "z")[3]
	at := strings.Index(good, chunk)
	bad := good[:at] + strings.Repeat("\xff", 16) + good[at+16:]
	if got, want := failParquet(t, bad, parquetJob()), `column "z", row group 4: `; !strings.HasPrefix(got, want) {
		t.Errorf("the error is %s, want it to begin with %s", got, want)
	}
}

// A plan reads pages that do not stay in memory though there is no folder of
// outputs yet.
func TestPlanOfGiantPages(t *testing.T) {
	list := make([]float64, 530_000) // of 8 bytes: more than 4 MiB
	for i := range list {
		list[i] = -1
	}
	var columns []parquetfile.Column
	for _, name := range []string{"x", "y", "z", "origin_x", "origin_y", "origin_z"} {
		columns = append(columns, parquetfile.Column{Name: name, Values: list})
	}
	temporary := t.TempDir()
	t.Setenv("TMPDIR", temporary)
	p := planOf(t, files{"raw/a.parquet": tableOf(t, 0, columns...)}, tinyJob(`"raw/*.parquet"`, "true"))
	if f := p.Files[0]; f.Err != nil || f.Points != 530_000 {
		t.Errorf("%d points (%v), want 530000", f.Points, f.Err)
	}
	same(t, "the folder of temporary files", snapshot(t, temporary), map[string]string{})
}
