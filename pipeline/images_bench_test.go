package pipeline

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// benchViews sees n raw points, to 12 m below 0, by 8 cameras of a block each.
func benchViews(n int) (all []photo, x, y, z []float64, views []string) {
	r := newRand(190)
	all = block(r)
	for range n {
		p := vec{10 + 80*r.Float64(), 10 + 80*r.Float64(), -0.5 - 11*r.Float64()}
		x, y, z = append(x, p[0]), append(y, p[1]), append(z, p[2])
		views = append(views, named(eight(r, all, p), " "))
	}
	return all, x, y, z, views
}

// eight picks the cameras nearest in plan of all but a few.
func eight(r *rand.Rand, all []photo, p vec) (views []int) {
	for k := range all {
		if r.IntN(8) > 0 {
			views = append(views, k)
		}
	}
	away := func(k int) float64 { return math.Hypot(all[k].at[0]-p[0], all[k].at[1]-p[1]) }
	slices.SortFunc(views, func(a, b int) int { return cmp.Compare(away(a), away(b)) })
	return views[:8]
}

// benchSurfaces are those of the floors in points a second of one core.
var benchSurfaces = []struct{ name, tables string }{
	{"level", "[surface]\nlevel = 0.1\n"},
	{"grid", "[surface.grid]\npoints = \"surface.csv\"\n"},
}

// benchImages writes a survey from images in both formats, with views or without.
func benchImages(b *testing.B, n int, named bool) string {
	b.Helper()
	all, x, y, z, views := benchViews(n)
	columns := []parquetfile.Column{{Name: "x", Values: x}, {Name: "y", Values: y}, {Name: "z", Values: z}}
	var csv strings.Builder
	csv.WriteString("x,y,z")
	if named {
		columns = append(columns, parquetfile.Column{Name: "views", Values: views})
		csv.WriteString(",views")
	}
	csv.WriteByte('\n')
	for i := range n {
		line := strconv.AppendFloat(nil, x[i], 'f', 4, 64)
		line = strconv.AppendFloat(append(line, ','), y[i], 'f', 4, 64)
		line = strconv.AppendFloat(append(line, ','), z[i], 'f', 4, 64)
		if named {
			line = append(append(line, ','), views[i]...)
		}
		csv.Write(append(line, '\n'))
	}
	var parquet strings.Builder
	if err := parquetfile.WriteTable(&parquet, columns, 1<<18); err != nil {
		b.Fatal(err)
	}
	swell, r := swell(0), newRand(191)
	var points [][]float64
	for range 40_000 {
		x, y := 140*r.Float64()-20, 140*r.Float64()-20
		z, _, _ := swell(x, y, 0)
		points = append(points, []float64{x, y, z - 0.3})
	}
	folder := b.TempDir()
	files{
		"raw/a.csv": csv.String(), "raw/a.parquet": parquet.String(), "surface.csv": lines("x,y,z", points...),
		"cameras.csv": cameraFile(all, withAngles, !named, false, inMetres),
	}.write(b, folder)
	return folder
}

// BenchmarkCorrectImages corrects one chunk of points with 8 views each, without reading and
// writing. One core is to reach 250 000 points a second under a level (4000 ns a
// point) and 80 000 under a grid (12 500 ns).
func BenchmarkCorrectImages(b *testing.B) {
	folder := benchImages(b, 10_000, true)
	for _, residual := range []string{"image", "angle", "equal"} {
		for _, c := range benchSurfaces {
			b.Run(residual+"/"+c.name, func(b *testing.B) {
				benchChunk(b, loadJob(b, folder, imageJob+"residual = \""+residual+"\"\n"+seaWater+c.tables))
			})
		}
	}
	seen := benchImages(b, 10_000, false)
	b.Run("image/level, by image", func(b *testing.B) {
		benchChunk(b, loadJob(b, seen, imageJob+seaWater+benchSurfaces[0].tables))
	})
}

// BenchmarkImages runs whole jobs of a million points with a column views.
func BenchmarkImages(b *testing.B) {
	const n = 1_000_000
	folder := benchImages(b, n, true)
	for _, format := range formats {
		b.Run(format, func(b *testing.B) {
			benchRun(b, loadJob(b, folder, strings.Replace(imageJob, "*.csv", "*."+format, 1)+seaWater+benchSurfaces[0].tables), n)
		})
	}
}
