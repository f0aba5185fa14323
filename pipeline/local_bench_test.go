package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"bentray/io/parquetfile"
	"bentray/pipeline/job"
)

// benchZones are 2000 zones of 16 corners over a square of 2000 m, of which they
// cover about half; every second one has a level too.
func benchZones() string {
	r := newRand(17)
	var places []place
	for k := range 2000 {
		p := place{name: fmt.Sprintf("Z%d", k), temperature: 12 + 8*r.Float64(), salinity: 30 * r.Float64(), level: nan}
		if k%2 == 0 {
			p.level = r.Float64()
		}
		for i := range 16 {
			sin, cos := math.Sincos(2 * math.Pi * float64(i) / 16)
			far := 15 + 7*r.Float64()
			p.ring = append(p.ring, [2]float64{25 + 50*float64(k%40) + far*cos, 20 + 40*float64(k/40) + far*sin})
		}
		places = append(places, p)
	}
	return zonesFile(places)
}

// benchStations are 200 stations with a record every hour of half a day.
func benchStations() string {
	r := newRand(18)
	var rows [][]float64
	for range 200 {
		x, y := 2000*r.Float64(), 2000*r.Float64()
		for hour := range 13 {
			rows = append(rows, []float64{x, y, 15 + 3*r.Float64(), 34 + r.Float64(), 1.9e9 + 3600*float64(hour)})
		}
	}
	return lines("x,y,temperature,salinity,time", rows...)
}

// benchCloud is n points along parallel strips, as a scanner sees them: whole numbers
// are counts, the others lengths in millimetres and times in microseconds.
func benchCloud(n int) []parquetfile.Column {
	r := newRand(19)
	var numbers [7][]float64
	var counts [3][]int64
	for i := range n {
		along := 20 * float64(i) / float64(n) // strips of 100 m
		strip, share := math.Modf(along)
		x, y := 2000*share, 100*strip
		for k, v := range [...]float64{x, y + 100*r.Float64(), -0.5 - 14*r.Float64(), 1.9e9 + 2000*along, x, y + 50, 400} {
			step := 1e3
			if k == 3 {
				step = 1e6
			}
			numbers[k] = append(numbers[k], math.Round(v*step)/step)
		}
		for k, v := range [...]int64{r.Int64N(999), 1, 40} {
			counts[k] = append(counts[k], v)
		}
	}
	return []parquetfile.Column{
		{Name: "x", Values: numbers[0]},
		{Name: "y", Values: numbers[1]},
		{Name: "z", Values: numbers[2]},
		{Name: "gps_time", Values: numbers[3]},
		{Name: "intensity", Values: counts[0]},
		{Name: "return_number", Values: counts[1]},
		{Name: "classification", Values: counts[2]},
		{Name: "origin_x", Values: numbers[4]},
		{Name: "origin_y", Values: numbers[5]},
		{Name: "origin_z", Values: numbers[6]},
	}
}

// csvOf is a table of numbers as CSV: times with six decimals, others with three.
func csvOf(columns []parquetfile.Column, n int) string {
	var b []byte
	for k, c := range columns {
		b = append(append(b, c.Name...), ",\n"[k/(len(columns)-1)])
	}
	for i := range n {
		for k, c := range columns {
			switch values := c.Values.(type) {
			case []int64:
				b = strconv.AppendInt(b, values[i], 10)
			case []float64:
				decimals := 3
				if c.Name == "gps_time" {
					decimals = 6
				}
				b = strconv.AppendFloat(b, values[i], 'f', decimals, 64)
			}
			b = append(b, ",\n"[k/(len(columns)-1)])
		}
	}
	return string(b)
}

// benchJobs are the same pulses through one water at one level, and through 2000
// zones, 200 stations and a gauge.
var benchJobs = []struct{ name, tables string }{
	{"constants", seaWater + "[surface]\nlevel = 0.42\n"},
	{"local", "[water]\nzones = \"zones.geojson\"\nstations = \"stations.csv\"\n[surface]\nlevel = 0.42\n[surface.gauge]\nfile = \"gauge.csv\"\n"},
}

func benchFolder(b *testing.B, n int) string {
	b.Helper()
	folder, cloud := b.TempDir(), benchCloud(n)
	gauge := [][]float64{}
	for k := range 500 {
		gauge = append(gauge, []float64{1.9e9 + 600*float64(k), math.Sin(float64(k) / 12)})
	}
	var parquet bytes.Buffer
	if err := parquetfile.WriteTable(&parquet, cloud, 1<<20); err != nil {
		b.Fatal(err)
	}
	files{
		"raw/a.csv": csvOf(cloud, n), "raw/a.parquet": parquet.String(),
		"zones.geojson": benchZones(), "stations.csv": benchStations(), "gauge.csv": lines("time,level", gauge...),
	}.write(b, folder)
	return folder
}

// BenchmarkLocalWater runs whole jobs, and reads zones and stations anew each time.
// Local water is to reach 60 % of the speed with constants in either format.
func BenchmarkLocalWater(b *testing.B) {
	const n = 1_500_000
	folder := benchFolder(b, n)
	for _, format := range formats {
		for _, c := range benchJobs {
			b.Run(format+"/"+c.name, func(b *testing.B) {
				benchRun(b, loadJob(b, folder, benchJob(format)+c.tables), n)
			})
		}
	}
}

// benchJob is the job of benchFolder's cloud in a format, without water and surface.
func benchJob(format string) string {
	return strings.Replace(inUTC(pulseJob), "*.csv", "*."+format, 1)
}

func benchRun(b *testing.B, j *job.Job, n int) {
	b.Helper()
	b.ReportAllocs()
	for b.Loop() {
		s := runJob(b, j, Options{Redo: true})
		if s.Outcomes["corrected"] < int64(n)*9/10 {
			b.Fatalf("outcomes are %v", s.Outcomes)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/point")
}

// BenchmarkCorrectChunk corrects one chunk, without reading and writing.
func BenchmarkCorrectChunk(b *testing.B) {
	folder := benchFolder(b, 60_000)
	for _, c := range benchJobs {
		b.Run(c.name, func(b *testing.B) {
			benchChunk(b, loadJob(b, folder, benchJob("csv")+c.tables))
		})
	}
}

func benchChunk(b *testing.B, j *job.Job) {
	b.Helper()
	inputs, _, err := findInputs(j)
	if err != nil {
		b.Fatal(err)
	}
	s, err := readSurvey(b.Context(), j, inputs, Options{})
	if err != nil {
		b.Fatal(err)
	}
	file, err := s.openCloud(input{path: filepath.Join(j.Dir, "raw/a.csv")}, "")
	if err != nil {
		b.Fatal(err)
	}
	defer file.Close()
	r, err := newReading(s, file.Columns())
	if err != nil {
		b.Fatal(err)
	}
	l, err := newLayout(s, file.Columns(), r)
	if err != nil {
		b.Fatal(err)
	}
	var one slot
	if err := file.Begin(r.request, l.Layout, nil); err != nil {
		b.Fatal(err)
	}
	if err := file.Next(&one.chunk); err != nil {
		b.Fatal(err)
	}
	if err := file.Decode(&one.chunk); err != nil {
		b.Fatal(err)
	}
	one.tally = newTally()
	work := func() {
		if err := s.correctChunk(&one.chunk, r, l, &one.work, one.tally); err != nil {
			b.Fatal(err)
		}
	}
	work() // grows what is reused
	b.ReportAllocs()
	for b.Loop() {
		work()
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(one.chunk.Rows), "ns/point")
}
