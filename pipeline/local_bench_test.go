package pipeline

import (
	"bytes"
	"fmt"
	"math"
	"path/filepath"
	"testing"

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

// benchCloud is n points along parallel strips, as a scanner sees them.
func benchCloud(n int) string {
	r := newRand(19)
	var b bytes.Buffer
	b.WriteString("x,y,z,gps_time,intensity,return_number,classification,origin_x,origin_y,origin_z\n")
	for i := range n {
		along := 20 * float64(i) / float64(n) // strips of 100 m
		strip, share := math.Modf(along)
		x, y := 2000*share, 100*strip
		fmt.Fprintf(&b, "%.3f,%.3f,%.3f,%.6f,%d,1,40,%.3f,%.3f,400\n", x, y+100*r.Float64(), -0.5-14*r.Float64(), 1.9e9+2000*along, r.IntN(999), x, y+50)
	}
	return b.String()
}

// benchJobs are the same pulses through one water at one level, and through 2000
// zones, 200 stations and a gauge.
var benchJobs = []struct{ name, tables string }{
	{"constants", seaWater + "[surface]\nlevel = 0.42\n"},
	{"local", "[water]\nzones = \"zones.geojson\"\nstations = \"stations.csv\"\n[surface]\nlevel = 0.42\n[surface.gauge]\nfile = \"gauge.csv\"\n"},
}

func benchFolder(b *testing.B, n int) string {
	b.Helper()
	folder := b.TempDir()
	gauge := [][]float64{}
	for k := range 500 {
		gauge = append(gauge, []float64{1.9e9 + 600*float64(k), math.Sin(float64(k) / 12)})
	}
	files{
		"raw/a.csv": benchCloud(n), "zones.geojson": benchZones(), "stations.csv": benchStations(), "gauge.csv": lines("time,level", gauge...),
	}.write(b, folder)
	return folder
}

// BenchmarkLocalWater runs whole jobs on a CSV cloud, and reads zones and stations
// anew each time. Local water is to reach 60 % of the speed with constants.
func BenchmarkLocalWater(b *testing.B) {
	const n = 1_000_000
	folder := benchFolder(b, n)
	for _, c := range benchJobs {
		b.Run(c.name, func(b *testing.B) {
			j := loadJob(b, folder, inUTC(pulseJob)+c.tables)
			b.ReportAllocs()
			for b.Loop() {
				s := runJob(b, j, Options{Redo: true})
				if s.Outcomes["corrected"] < n*9/10 {
					b.Fatalf("outcomes are %v", s.Outcomes)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/point")
		})
	}
}

// BenchmarkCorrectChunk corrects one chunk, without reading and writing.
func BenchmarkCorrectChunk(b *testing.B) {
	folder := benchFolder(b, 60_000)
	for _, c := range benchJobs {
		b.Run(c.name, func(b *testing.B) {
			benchChunk(b, loadJob(b, folder, inUTC(pulseJob)+c.tables))
		})
	}
}

func benchChunk(b *testing.B, j *job.Job) {
	b.Helper()
	inputs, _, err := findInputs(j)
	if err != nil {
		b.Fatal(err)
	}
	s, err := readSurvey(b.Context(), j, inputs)
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
	b.ReportAllocs()
	for b.Loop() {
		s.correctChunk(&one.chunk, r, l, &one.work, one.tally)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(one.chunk.Rows), "ns/point")
}
