package geo

import (
	"math"
	"testing"
)

func BenchmarkFitPlane(b *testing.B) {
	x, y, z := banks(newRand(b, 86), 400, 0.004, 0.12)
	for b.Loop() {
		if _, err := FitPlane(x, y, z); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkProfileFill asks a line of 5000 vertices for positions along it, and in
// any order.
func BenchmarkProfileFill(b *testing.B) {
	rng := newRand(b, 96)
	lineX, lineY := winding(5000, 20000)
	x, y, z := levelPoints(rng, lineX, lineY, 1000, 0.01, 0)
	p, err := NewProfile(lineX, lineY, x, y, z, 100)
	if err != nil {
		b.Fatal(err)
	}
	const n = 1 << 16
	level, sx, sy := make([]float64, n), make([]float64, n), make([]float64, n)
	for _, order := range []string{"along", "any"} {
		px, py := make([]float64, n), make([]float64, n)
		for i := range n {
			at := 20000 * float64(i) / n
			if order == "any" {
				at = 20000 * rng.Float64()
			}
			px[i], py[i] = 512000+at, 7012000+60*math.Sin(at/90)+40*(rng.Float64()-0.5)
		}
		b.Run(order, func(b *testing.B) {
			b.SetBytes(n * 16)
			b.ReportAllocs()
			for b.Loop() {
				p.Fill(level, sx, sy, px, py)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
		})
	}
}

func BenchmarkNewProfile(b *testing.B) {
	rng := newRand(b, 97)
	lineX, lineY := winding(1000, 20000)
	x, y, z := levelPoints(rng, lineX, lineY, 2000, 0.01, 0.1)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := NewProfile(lineX, lineY, x, y, z, 100); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkNewGrid makes the grid of a still surface, and of one with times.
func BenchmarkNewGrid(b *testing.B) {
	x, y, z, t := testSwell.points(newRand(b, 72), 40_000, 0.02, true, pass(4.1e8))
	for _, times := range []string{"none", "pass"} {
		b.Run(times, func(b *testing.B) {
			at := t
			if times == "none" {
				at = nil
			}
			b.ReportAllocs()
			for b.Loop() {
				if _, err := gridOf(x, y, z, at, GridOptions{}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(x)), "ns/point")
		})
	}
}

// BenchmarkGridFill asks for positions in any order, among patches and in gaps.
func BenchmarkGridFill(b *testing.B) {
	x, y, z, t := testSwell.points(newRand(b, 72), 40_000, 0.02, true, pass(4.1e8))
	g, err := gridOf(x, y, z, t, GridOptions{})
	if err != nil {
		b.Fatal(err)
	}
	level, sx, sy := make([]float64, len(x)), make([]float64, len(x)), make([]float64, len(x))
	for _, where := range []string{"patches", "gaps"} {
		if where == "gaps" { // 8 to 16 m beyond the western side
			for i := range x {
				x[i] = testSwell.atX - 16 + (x[i]-testSwell.atX)/25
				t[i] = 4.1e8
			}
		}
		b.Run(where, func(b *testing.B) {
			b.SetBytes(int64(len(x)) * 24)
			b.ReportAllocs()
			for b.Loop() {
				g.Fill(level, sx, sy, x, y, t)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(x)), "ns/point")
		})
	}
}
