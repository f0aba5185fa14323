package pipeline

import (
	"fmt"
	"maps"
	"math"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"bentray/io/parquetfile"
	"bentray/pipeline/receipt"
)

// tileFolder holds the strips of tiles, with bad files of other names beside them.
func tileFolder(t *testing.T, others files) string {
	t.Helper()
	_, strips := tiles(t)
	folder := t.TempDir()
	for k, text := range strips {
		files{fmt.Sprintf("raw/%d.csv", k): text}.write(t, folder)
	}
	others.write(t, folder)
	return folder
}

// surfaceInput is the receipt's entry of the surface points.
func surfaceInput(t *testing.T, output string) receipt.Input {
	t.Helper()
	for _, in := range readReceipt(t, output).Inputs {
		if in.Use == "surface points" {
			return in
		}
	}
	t.Fatalf("the receipt of %s names no surface points", output)
	return receipt.Input{}
}

// A tile without surface points leaves the others fresh, whatever its place among
// them, and so does another name for a tile with some.
func TestTileWithoutSurfacePoints(t *testing.T) {
	folder := tileFolder(t, nil)
	j := loadJob(t, folder, inUTC(swellJob))
	if s := runJob(t, j, Options{}); s.Done != 4 {
		t.Fatalf("%d of 4 tiles are done", s.Done)
	}
	before := surfaceInput(t, filepath.Join(folder, "true/0.csv"))
	if want := "classification [41] of the clouds"; before.Path != want || before.Bytes != 12_000*32 {
		t.Errorf("the receipt says %q of %d bytes, want %q of 12000 points", before.Path, before.Bytes, want)
	}
	_, bed := (&scene{surface: swell(1), sea: standardSea(t)}).flyOver(newRand(9), 0, func(float64) float64 { return 1.9e9 })
	files{"raw/00.csv": cloudOf(bed, 40, asUTC)}.write(t, folder)
	if s := runJob(t, j, Options{}); s.Fresh != 4 || s.Done != 1 {
		t.Errorf("with a tile of bed points %d tiles are fresh and %d done, want 4 and 1", s.Fresh, s.Done)
	}
	files{"raw/9.csv": readFile(t, folder, "raw/1.csv"), "raw/1.csv": cloudOf(bed, 40, asUTC)}.write(t, folder)
	if s := runJob(t, j, Options{}); s.Fresh != 4 || s.Done != 2 {
		t.Errorf("after a tile was renamed %d tiles are fresh and %d done, want 4 and 2", s.Fresh, s.Done)
	}
	if after := surfaceInput(t, filepath.Join(folder, "true/9.csv")); after != before {
		t.Errorf("the surface points are now %+v, want %+v", after, before)
	}
}

// Clouds that cannot be read are named with their reasons, the first three of them,
// and give no point, not even those before the place that is wrong. The others are
// what they are without them, for any number of workers.
func TestUnreadSurfacePoints(t *testing.T) {
	whole, _ := tiles(t)
	others := files{
		"raw/a.csv": "x,y,z\n1,2,3\n",
		"raw/b.csv": whole + "1,2,up,41,0,0,400,1900000000,16001\n",
		"raw/c.csv": "x,y,depth\n1,2,3\n", "raw/d.csv": "x,y,z\n1,2,3\n",
	}
	folder, alone := tileFolder(t, others), tileFolder(t, nil)
	runJob(t, loadJob(t, alone, inUTC(swellJob)), Options{Workers: 2})
	want := surfaceInput(t, filepath.Join(alone, "true/0.csv"))
	const caution = `4 of 8 clouds could not be read for their surface points: ` +
		`raw/a.csv: no column "classification" ([surface.grid] classes looks at it); the columns are x, y, z; ` +
		`raw/b.csv: line 16002: z is "up", want a number; ` +
		`raw/c.csv: no column for z; the columns are x, y, depth; name it in [input.columns]; and 1 more`
	var first map[string]string
	for _, workers := range []int{1, 2, 7} {
		s, err := Run(t.Context(), loadJob(t, folder, inUTC(swellJob)), Options{Workers: workers, Redo: true})
		if err != nil || s.Done != 4 || s.Failed != 4 {
			t.Fatalf("%d workers: %v, %+v, want 4 tiles done and 4 failed", workers, err, s)
		}
		if got := surfaceInput(t, filepath.Join(folder, "true/0.csv")); got != want {
			t.Errorf("%d workers: the surface points are %+v, want %+v as without the bad files", workers, got, want)
		}
		if cautions := readReceipt(t, filepath.Join(folder, "true/0.csv")).Cautions; len(cautions) != 1 || cautions[0] != caution {
			t.Errorf("%d workers: the cautions are %q, want %q", workers, cautions, caution)
		}
		got := outputs(t, filepath.Join(folder, "true"))
		if first == nil {
			first = maps.Clone(got)
		}
		same(t, fmt.Sprintf("%d workers", workers), got, first)
	}
}

// FLOAT coordinates of surface points in steps above 1 mm are refused as those of the
// cloud are (their step is 2^-9 m from 2^14 m on), and taken with coarse.
func TestCoarseSurfacePoints(t *testing.T) {
	r := newRand(12)
	var bits []int32
	var y, z, time []float64
	var class []int32
	for range 400 {
		bits = append(bits, int32(math.Float32bits(float32(16385+19*r.Float64()))))
		y, z, time, class = append(y, 20*r.Float64()), append(z, 0.42), append(time, 1.9e9), append(class, 41)
	}
	bits[0] = int32(math.Float32bits(16405))
	cloud := asFloats(t, tableOf(t, 0,
		parquetfile.Column{Name: "x", Values: bits}, parquetfile.Column{Name: "y", Values: y}, parquetfile.Column{Name: "z", Values: z},
		parquetfile.Column{Name: "classification", Values: class}, parquetfile.Column{Name: "gps_time", Values: time},
		parquetfile.Column{Name: "origin_x", Values: y}, parquetfile.Column{Name: "origin_y", Values: y}, parquetfile.Column{Name: "origin_z", Values: time},
	), "x")
	jobText := inFormat(inUTC(swellJob), "parquet")
	folder := t.TempDir()
	files{"raw/a.parquet": cloud}.write(t, folder)
	_, err := MakePlan(t.Context(), loadJob(t, folder, jobText), nil)
	const want = `column "x" is FLOAT, whose step at 16405 is 0.002, want at most 0.001; store it as DOUBLE or accept this with coarse = true in [input]`
	if err == nil || !strings.Contains(err.Error(), "none of the clouds can be read: ") || !strings.HasSuffix(err.Error(), want) {
		t.Errorf("the error is %v, want %s", err, want)
	}
	p, err := MakePlan(t.Context(), loadJob(t, folder, strings.Replace(jobText, "[output]", "coarse = true\n[output]", 1)), nil)
	if err != nil || p.Files[0].Err != nil {
		t.Errorf("with coarse the plan fails: %v, %+v", err, p)
	}
}

// stages notes what a watcher is told.
type stages struct {
	mu    sync.Mutex
	names []string
	bytes map[string][2]int64 // announced and read
}

func (s *stages) Begin(stage string, _ int, bytes int64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.names = append(s.names, stage)
	s.bytes[stage] = [2]int64{bytes, 0}
}

func (s *stages) Read(bytes int64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	last := s.names[len(s.names)-1]
	s.bytes[last] = [2]int64{s.bytes[last][0], s.bytes[last][1] + bytes}
}

func (s *stages) End(receipt.FileSummary) {}

// Reading surface points is a stage of its own, in a run and in a plan, that comes to
// an end at all bytes of the clouds.
func TestSurfacePointsAreWatched(t *testing.T) {
	folder := tileFolder(t, nil)
	j := loadJob(t, folder, inUTC(swellJob))
	of := func(do func(Watcher)) string {
		watch := &stages{bytes: map[string][2]int64{}}
		do(watch)
		for stage, bytes := range watch.bytes {
			if bytes[0] == 0 || bytes[0] != bytes[1] {
				t.Errorf("stage %q: %d of %d bytes are read", stage, bytes[1], bytes[0])
			}
		}
		return strings.Join(watch.names, ", ")
	}
	if got := of(func(w Watcher) { runJob(t, j, Options{Watch: w}) }); got != "surface points, " {
		t.Errorf("the stages of a run are %q", got)
	}
	if got := of(func(w Watcher) {
		if _, err := MakePlan(t.Context(), j, w); err != nil {
			t.Fatal(err)
		}
	}); got != "surface points" {
		t.Errorf("the stages of a plan are %q", got)
	}
}

// A surface point measured at another time makes every tile stale: by its time it counts
// for one wave or the next.
func TestSurfacePointAtAnotherTime(t *testing.T) {
	folder := tileFolder(t, nil)
	j := loadJob(t, folder, inUTC(swellJob))
	runJob(t, j, Options{})
	rows := strings.Split(readFile(t, folder, "raw/1.csv"), "\n")
	fields := strings.Split(rows[1], ",") // x, y, z, classification, origin, gps_time, id
	if fields[3] != "41" || !strings.HasPrefix(fields[7], "1900000") {
		t.Fatalf("the first row is %q, want one of class 41 with its time", rows[1])
	}
	fields[7] = "1900000007.5"
	rows[1] = strings.Join(fields, ",")
	files{"raw/1.csv": strings.Join(rows, "\n")}.write(t, folder)
	if s := runJob(t, j, Options{}); s.Done != 4 {
		t.Errorf("%d of 4 tiles are done anew", s.Done)
	}
}
