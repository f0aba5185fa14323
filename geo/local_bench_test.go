package geo

import "testing"

// benchPoints returns a chunk over the zones of manyZones: a swath that goes along a
// line with rising times, or points and times anywhere.
func benchPoints(b *testing.B, swath bool) (x, y, utc, depth []float64) {
	const n = 1 << 16
	rng := newRand(b, 71)
	x, y, utc, depth = make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		along, across := float64(i)/n, rng.Float64()
		x[i], y[i], utc[i] = 500000+2000*along, 7000000+300*across, 1.7e9+1000+60*along
		if !swath {
			x[i], y[i], utc[i] = 490000+40000*rng.Float64(), 6990000+40000*across, 1.7e9+86400*rng.Float64()
		}
		depth[i] = 15 * rng.Float64()
	}
	return x, y, utc, depth
}

// benchStations returns 200 stations over the zones of manyZones, with 48 times and 20
// depths each if wanted.
func benchStations(b *testing.B, timed, casts bool) *Stations {
	rng := newRand(b, 72)
	var r StationRecords
	for range 200 {
		x, y := 490000+40000*rng.Float64(), 6990000+40000*rng.Float64()
		times, depths := 1, 1
		if timed {
			times = 48
		}
		if casts {
			depths = 20
		}
		for k := range times * depths {
			r.X, r.Y = append(r.X, x), append(r.Y, y)
			r.Temperature, r.Salinity = append(r.Temperature, 10+8*rng.Float64()), append(r.Salinity, 30+5*rng.Float64())
			if timed {
				r.UTC = append(r.UTC, 1.7e9+1800*float64(k/depths))
			}
			if casts {
				r.Depth = append(r.Depth, float64(k%depths))
			}
		}
	}
	return mustStations(b, r, 3600)
}

// benchGauges returns gauges with a record every six minutes for ten days.
func benchGauges(b *testing.B, count int) *Gauges {
	rng := newRand(b, 73)
	var r GaugeRecords
	for k := range count {
		for i := range 2400 {
			r.UTC, r.Level = append(r.UTC, 1.7e9-86400+360*float64(i)), append(r.Level, rng.Float64())
			r.X, r.Y = append(r.X, 490000+1000*float64(k)), append(r.Y, 7000000)
		}
	}
	return mustGauges(b, r, 0, 3600)
}

// runChunks measures a chunk-filling function, in points.
func runChunks(b *testing.B, n int, fill func()) {
	b.SetBytes(int64(n) * 16)
	b.ReportAllocs()
	for b.Loop() {
		fill()
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
}

// swaths names the two orders of points.
var swaths = []struct {
	name  string
	swath bool
}{{"swath", true}, {"anywhere", false}}

func BenchmarkStations(b *testing.B) {
	for _, kind := range []struct {
		name         string
		timed, casts bool
	}{{"plain", false, false}, {"times", true, false}, {"casts", false, true}, {"castsInTime", true, true}} {
		s := benchStations(b, kind.timed, kind.casts)
		for _, where := range swaths {
			x, y, utc, depth := benchPoints(b, where.swath)
			t, c, rows := make([]float64, len(x)), make([]float64, len(x)), rowsTo(len(x))
			b.Run(kind.name+"/"+where.name, func(b *testing.B) {
				runChunks(b, len(x), func() { s.Fill(t, c, rows, x, y, utc, depth) })
			})
		}
	}
}

// BenchmarkStationsOnce has 200 stations with one record each, spread over the day, so
// that a dozen have water at a time.
func BenchmarkStationsOnce(b *testing.B) {
	rng := newRand(b, 74)
	var r StationRecords
	for range 200 {
		r.X, r.Y = append(r.X, 490000+40000*rng.Float64()), append(r.Y, 6990000+40000*rng.Float64())
		r.Temperature, r.Salinity = append(r.Temperature, 10), append(r.Salinity, 30)
		r.UTC = append(r.UTC, 1.7e9+86400*rng.Float64())
	}
	s := mustStations(b, r, 3600)
	x, y, utc, _ := benchPoints(b, false)
	t, c, rows := make([]float64, len(x)), make([]float64, len(x)), rowsTo(len(x))
	runChunks(b, len(x), func() { s.Fill(t, c, rows, x, y, utc, nil) })
}

func BenchmarkNewStations(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		benchStations(b, false, false)
	}
}

func BenchmarkGauges(b *testing.B) {
	for _, kind := range []struct {
		name  string
		count int
	}{{"one", 1}, {"three", 3}} {
		g := benchGauges(b, kind.count)
		for _, where := range swaths {
			x, y, utc, _ := benchPoints(b, where.swath)
			level := make([]float64, len(x))
			b.Run(kind.name+"/"+where.name, func(b *testing.B) {
				runChunks(b, len(x), func() { g.Add(level, x, y, utc) })
			})
		}
	}
}

func BenchmarkSeparation(b *testing.B) {
	var nx, ny, nz []float64
	for k := range 401 * 401 {
		nx, ny, nz = append(nx, 490000+100*float64(k%401)), append(ny, 6990000+100*float64(k/401)), append(nz, float64(k%7))
	}
	s := mustSeparation(b, nx, ny, nz)
	for _, where := range swaths {
		x, y, _, _ := benchPoints(b, where.swath)
		level, sx, sy := make([]float64, len(x)), make([]float64, len(x)), make([]float64, len(x))
		b.Run(where.name, func(b *testing.B) {
			runChunks(b, len(x), func() { s.Add(level, sx, sy, x, y) })
		})
	}
}

// BenchmarkLocalWater asks for all that local water needs for a point: which of 2000
// zones holds it, the water between 200 stations and the level of a gauge.
func BenchmarkLocalWater(b *testing.B) {
	zones := NewPolygonIndex(manyZones(b))
	stations, gauge := benchStations(b, true, false), benchGauges(b, 1)
	for _, where := range swaths {
		x, y, utc, _ := benchPoints(b, where.swath)
		zone, level := make([]int32, len(x)), make([]float64, len(x))
		t, c, rows := make([]float64, len(x)), make([]float64, len(x)), rowsTo(len(x))
		b.Run(where.name, func(b *testing.B) {
			runChunks(b, len(x), func() {
				zones.Find(zone, x, y)
				stations.Fill(t, c, rows, x, y, utc, nil)
				gauge.Add(level, x, y, utc)
			})
		})
	}
}
