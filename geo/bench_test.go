package geo

import (
	"testing"

	"github.com/paulmach/orb"
)

// bigCoast returns a coast of 100 000 corners with 40 islands of 250 in it.
func bigCoast(b *testing.B) []orb.Polygon {
	rng := newRand(b, 51)
	poly := orb.Polygon{coast(rng, orb.Point{512000, 7012000}, 20000, 90_000)}
	for range 40 {
		at := orb.Point{506000 + 12000*rng.Float64(), 7006000 + 12000*rng.Float64()}
		poly = append(poly, coast(rng, at, 100+300*rng.Float64(), 250))
	}
	return []orb.Polygon{poly}
}

// manyZones returns 2000 overlapping zones of 60 corners.
func manyZones(b *testing.B) []orb.Polygon {
	rng := newRand(b, 52)
	var polys []orb.Polygon
	for range 2000 {
		at := orb.Point{490000 + 40000*rng.Float64(), 6990000 + 40000*rng.Float64()}
		polys = append(polys, orb.Polygon{star(rng, at, 300, 1200, 60)})
	}
	return polys
}

// nestedZones returns 2000 zones within each other.
func nestedZones(b *testing.B) []orb.Polygon {
	rng := newRand(b, 53)
	var polys []orb.Polygon
	for k := range 2000 {
		r := 10 * float64(k+1)
		polys = append(polys, orb.Polygon{star(rng, orb.Point{512000, 7012000}, r, r+8, 60)})
	}
	return polys
}

var polygonBenches = []struct {
	name  string
	polys func(*testing.B) []orb.Polygon
}{{"coast", bigCoast}, {"zones", manyZones}, {"nested", nestedZones}}

func BenchmarkNewPolygonIndex(b *testing.B) {
	for _, bench := range polygonBenches {
		b.Run(bench.name, func(b *testing.B) {
			polys := bench.polys(b)
			b.ReportAllocs()
			for b.Loop() {
				NewPolygonIndex(polys)
			}
		})
	}
}

// BenchmarkFind takes points all over, and points within 1 m of a corner, which lie
// in cells that an edge touches.
func BenchmarkFind(b *testing.B) {
	const n = 1 << 16
	for _, bench := range polygonBenches {
		polys := bench.polys(b)
		idx := NewPolygonIndex(polys)
		rng := newRand(b, 54)
		for _, where := range []string{"anywhere", "edge"} {
			x, y, dst := make([]float64, n), make([]float64, n), make([]int32, n)
			for i := range n {
				x[i], y[i] = 490000+44000*rng.Float64(), 6990000+44000*rng.Float64()
				if where == "edge" {
					ring := polys[rng.IntN(len(polys))][0]
					p := ring[rng.IntN(len(ring))]
					x[i], y[i] = p[0]+rng.Float64(), p[1]+rng.Float64()
				}
			}
			b.Run(bench.name+"/"+where, func(b *testing.B) {
				b.SetBytes(n * 16)
				b.ReportAllocs()
				for b.Loop() {
					idx.Find(dst, x, y)
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
			})
		}
	}
}

func BenchmarkParsePolygons(b *testing.B) {
	data := []byte(`{"type":"Polygon","coordinates":` + geojson(bigCoast(b)[0]) + `}`)
	b.SetBytes(int64(len(data)))
	b.ReportAllocs()
	for b.Loop() {
		if _, err := ParsePolygons(data); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPlaneFill(b *testing.B) {
	const n = 1 << 16
	c := [5][]float64{}
	for k := range c {
		c[k] = make([]float64, n)
	}
	b.SetBytes(n * 16)
	b.ReportAllocs()
	for b.Loop() {
		Plane{Level: 1, SlopeX: 0.01}.Fill(c[0], c[1], c[2], c[3], c[4])
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n), "ns/point")
}
