package pipeline

import (
	"bytes"
	"compress/gzip"
	"encoding/csv"
	"fmt"
	"io"
	"math/rand/v2"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/klauspost/compress/zstd"
)

// dialect is one way to write a table as text.
type dialect struct {
	name, file     string
	sep            string // between fields
	end            string // of lines
	before, behind string // the table
}

var dialects = []dialect{
	{name: "commas", file: "a.csv", sep: ",", end: "\n"},
	{name: "commas, CR LF", file: "a.csv", sep: ",", end: "\r\n"},
	{name: "semicolons after comments", file: "a.txt", sep: ";", end: "\n", before: "# flown at dawn; calm\n// second strip\n\n"},
	{name: "tabs, CR LF, byte order mark", file: "a.tsv", sep: "\t", end: "\r\n", before: "\ufeff"},
	{name: "blanks", file: "a.xyz", sep: "  ", end: "\n"},
	{name: "empty lines", file: "a.asc", sep: ",", end: "\n\n", behind: "\n\n"},
	{name: "gzip", file: "a.csv.gz", sep: ",", end: "\n"},
	{name: "zstd", file: "a.csv.zst", sep: ";", end: "\n"},
}

// notes are texts that other readers like to change.
var notes = []string{"plain", "007", "1.50", "1e3", "-0", `""`, `"a, b; c"`, `"tab	in it"`, `"two ""quotes"""`, `"line` + "\n" + `break"`, "Ünïcode", "NaN"}

const untouchedRows = 240

var untouchedNames = []string{"id", "y", "note", "x", "z", "origin_x", "origin_y", "origin_z", `"last one"`}

// fields are those of raw row i, which is seen straight down: one row in three
// is under water, the next dry, the third without a number.
func (d dialect) fields(i int) []string {
	r := rand.New(rand.NewPCG(seed, uint64(i)))
	x, y := fmt.Sprintf("%.3f", 1000*r.Float64()), fmt.Sprintf("%.2f", 7e6+100*r.Float64())
	return []string{fmt.Sprint(i), y, notes[i%len(notes)], x, []string{"-5.125", "3", "nan"}[i%3], x, y, "400", fmt.Sprint(-i)}
}

func (d dialect) text() string {
	var b strings.Builder
	b.WriteString(d.before + strings.Join(untouchedNames, d.sep) + d.end)
	for i := range untouchedRows {
		b.WriteString(strings.Join(d.fields(i), d.sep) + d.end)
	}
	return b.String() + d.behind
}

func (d dialect) compress(t *testing.T, text string) string {
	t.Helper()
	var b bytes.Buffer
	var w io.WriteCloser
	switch filepath.Ext(d.file) {
	case ".gz":
		w = gzip.NewWriter(&b)
	case ".zst":
		w, _ = zstd.NewWriter(&b)
	default:
		return text
	}
	if _, err := io.WriteString(w, text); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func (d dialect) decompress(t *testing.T, data string) string {
	t.Helper()
	r := io.Reader(strings.NewReader(data))
	var err error
	switch filepath.Ext(d.file) {
	case ".gz":
		r, err = gzip.NewReader(r)
	case ".zst":
		r, err = zstd.NewReader(r)
	}
	if err != nil {
		t.Fatal(err)
	}
	text, err := io.ReadAll(r)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

func TestUntouchedColumnsKeepTheirBytes(t *testing.T) {
	for _, d := range dialects {
		t.Run(d.name, func(t *testing.T) {
			folder := t.TempDir()
			raw := d.text()
			files{"raw/" + d.file: d.compress(t, raw)}.write(t, folder)
			s := runJob(t, loadJob(t, folder, tinyJob(`"raw/*"`, "true")), Options{Workers: 2})
			if s.Rows.Read != untouchedRows || s.Rows.Written != untouchedRows {
				t.Errorf("rows are %+v, want %d read and written", s.Rows, untouchedRows)
			}
			out := d.decompress(t, readFile(t, folder, "true/"+d.file))
			d.checkBytes(t, out)
			if d.sep != "  " { // which encoding/csv does not read
				d.checkSecondReader(t, raw, out)
			}
		})
	}
}

// checkBytes goes through the output: what the raw file has, with new
// coordinates in their place, then raw copies, then what was added.
func (d dialect) checkBytes(t *testing.T, out string) {
	t.Helper()
	w := standardSea(t)
	z := strconv.FormatFloat(-5.125*w.rangeNg/w.waterGroup, 'f', 4, 64)
	one := d.sep[:1]
	rest := d.skipRow(t, out, d.before+strings.Join(untouchedNames, d.sep)+one+strings.Join([]string{"x_raw", "y_raw", "z_raw", "depth", ""}, one))
	for i := range untouchedRows {
		f := d.fields(i)
		raw := one + f[3] + one + f[1] + one + f[4]
		if f[4] == "-5.125" {
			f[1], f[3], f[4] = f[1]+"00", f[3]+"0", z
		}
		rest = d.skipRow(t, rest, strings.Join(f, d.sep)+raw+one)
	}
	if rest != d.behind {
		t.Errorf("behind the last row stands %q, want %q", rest, d.behind)
	}
}

// skipRow returns what is behind a row, which must begin as wanted.
func (d dialect) skipRow(t *testing.T, text, want string) string {
	t.Helper()
	if !strings.HasPrefix(text, want) {
		t.Fatalf("a row is %q, want it to begin with %q", text[:min(len(text), len(want))], want)
	}
	added, rest, ended := strings.Cut(text[len(want):], d.end)
	if !ended || strings.ContainsAny(added, "\r\n") {
		t.Fatalf("a row ends in %q, want %q", added, d.end)
	}
	return rest
}

// checkSecondReader compares all untouched columns as encoding/csv reads them.
func (d dialect) checkSecondReader(t *testing.T, raw, out string) {
	t.Helper()
	was, is := d.second(t, raw), d.second(t, out)
	if len(was.rows) != untouchedRows || len(is.rows) != untouchedRows {
		t.Fatalf("%d rows, want %d", len(is.rows), untouchedRows)
	}
	for i := range was.rows {
		for _, name := range was.names {
			from := name
			if slices.Contains([]string{"x", "y", "z"}, name) {
				from += "_raw"
			}
			if got, want := is.text(t, i, from), was.text(t, i, name); got != want {
				t.Errorf("row %d: %s is %q, want %q", i, from, got, want)
			}
		}
	}
}

func (d dialect) second(t *testing.T, text string) table {
	t.Helper()
	r := csv.NewReader(strings.NewReader(strings.TrimPrefix(text, d.before)))
	r.Comma = []rune(d.sep)[0]
	all, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return table{all[0], all[1:]}
}

// Diverted rows and written rows make up the file, each once and in order.
func TestDivertedRows(t *testing.T) {
	const head = "x,y,z,origin_x,origin_y,origin_z,id\n"
	good := func(id int) string { return fmt.Sprintf("5,6,-10,5,6,400,%d\n", id) }
	text := head + good(1) + "5,6,-10,5,6\n" + good(2) + "5,6,deep,5,6,400,\"3\n3\"\n" + good(4) + "5,6,-10,5,6,400,5,6\n5,six,-10,5,6,400,6\n" + good(7)
	folder := t.TempDir()
	files{"raw/a.csv": text}.write(t, folder)
	s := runJob(t, loadJob(t, folder, strings.Replace(tinyJob(`"raw/*.csv"`, "true"), "[output]", "bad_rows = \"divert\"\n[output]", 1)), Options{})
	if s.Rows.Read != 8 || s.Rows.Written != 4 || s.Rows.Diverted != 4 {
		t.Errorf("rows are %+v, want 8 = 4 + 4", s.Rows)
	}
	got := readTable(t, readFile(t, folder, "true/a.csv"))
	if ids := got.column(t, "id"); !slices.Equal(ids, []string{"1", "2", "4", "7"}) {
		t.Errorf("written are rows %q", ids)
	}
	rejects := readTable(t, readFile(t, folder, "true/a.csv.rejects.csv"))
	want := [][]string{
		{"3", "has 5 fields, want 7", "5,6,-10,5,6"},
		{"5", `z is "deep", want a number`, "5,6,deep,5,6,400,\"3\n3\""},
		{"8", "has 8 fields, want 7", "5,6,-10,5,6,400,5,6"},
		{"9", `y is "six", want a number`, "5,six,-10,5,6,400,6"},
	}
	if fmt.Sprint(rejects.names, rejects.rows) != fmt.Sprint([]string{"line", "reason", "text"}, want) {
		t.Errorf("rejects are %q, want %q", rejects.rows, want)
	}
}

// A file without a header line is read by the job's names, and gains a header.
func TestNamesFromTheJob(t *testing.T) {
	text, _ := correctText(t, "5,6,-10,5,6,400\n5,6,-20,5,6,400\n", strings.Replace(tinyJob(`"raw/*.csv"`, "true"), "[output]",
		"csv = { names = [\"x\", \"y\", \"z\", \"origin_x\", \"origin_y\", \"origin_z\"] }\n[output]", 1))
	got := readTable(t, text)
	if raw := got.column(t, "z_raw"); !slices.Equal(raw, []string{"-10", "-20"}) {
		t.Errorf("raw z are %q", raw)
	}
}
