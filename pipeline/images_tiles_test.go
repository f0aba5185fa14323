package pipeline

import (
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

const castWater = "[water]\nstations = \"casts.csv\"\n"

// manyImages is a job under swell with a grid, casts and cameras that have times, and the
// rows of its cloud below their header. Points are random, so outcomes differ.
func manyImages(n int) (f files, job, header string, rows []string) {
	c, r := scene{surface: swell(0)}, newRand(180)
	all := block(r)
	for k := range all {
		all[k].utc = 1.9e9 + 40*float64(k)
	}
	var points [][]float64
	for range 10_000 {
		x, y := 140*r.Float64()-20, 140*r.Float64()-20
		z, _, _ := c.surface(x, y, 0)
		points = append(points, []float64{x, y, z})
	}
	for i := range n {
		p := vec{130*r.Float64() - 15, 130*r.Float64() - 15, 1.5 - 12*r.Float64()}
		views := choose(r, all, p)
		switch {
		case i%40 == 0:
			views = views[:min(1, len(views))]
		case i%40 == 1:
			p[0] += 200
		}
		rows = append(rows, strings.Join(append(inMetres.in(p), named(views, ";"), fmt.Sprint(i)), ",")+"\n")
	}
	f = files{
		"cameras.csv": cameraFile(all, withAngles, false, true, inMetres), "surface.csv": lines("x,y,z", points...),
		"casts.csv": "x,y,temperature,salinity,depth\n5,6,24,2,0\n5,6,18,8,4\n95,96,14,20,1\n95,96,4,30,12\n",
		"gauge.csv": "time,level\n1900000000,0\n1900003600,0.2\n",
	}
	job = inUTC(imageJob) + "residual = \"angle\"\n" + castWater + "[surface.grid]\npoints = \"surface.csv\"\n[surface.gauge]\nfile = \"gauge.csv\"\nat = 2030-03-17T18:00:00Z\n"
	return f, job, "x,y,z,views,id\n", rows
}

// The bytes of an output do not depend on how many work.
func TestImagesSameBytesForAnyWorkers(t *testing.T) {
	f, job, header, rows := manyImages(14_000)
	job = strings.Replace(job, castWater, seaWater, 1)
	cloud := header + strings.Join(rows, "")
	for _, format := range formats {
		folder := t.TempDir()
		f.write(t, folder)
		data := cloud
		if format == "parquet" {
			data = parquetOf(t, cloud, 3000, nil)
		}
		files{"raw/a." + format: data}.write(t, folder)
		var want map[string]string
		for _, workers := range []int{1, 2, 7} {
			output := fmt.Sprintf("true%d", workers)
			text := strings.Replace(strings.Replace(job, `"true"`, `"`+output+`"`, 1), "raw/*.csv", "raw/*."+format, 1)
			s := runJob(t, loadJob(t, folder, text), Options{Workers: workers})
			got := outputs(t, filepath.Join(folder, output))
			if want == nil {
				want = got
			}
			same(t, fmt.Sprintf("%s, %d workers", format, workers), got, want)
			for _, outcome := range []string{"corrected", "dry", "no_surface", "few_rays"} {
				if s.Outcomes[outcome] == 0 {
					t.Errorf("%s: outcomes are %v, want some %s", format, s.Outcomes, outcome)
				}
			}
		}
	}
}

// Points come out the same to the last bit in one file and in tiles of neighbours that
// need more tries or fewer. In CSV there are casts too; in Parquet the
// whole is one chunk of more rays than a batch.
func TestImageTilesEqualTheWhole(t *testing.T) {
	f, withCasts, header, all := manyImages(16_000)
	for _, format := range formats {
		rows, job := all, strings.Replace(withCasts, castWater, seaWater, 1)
		if format == "csv" {
			rows, job = all[:2000], withCasts
		} else if rays := strings.Count(strings.Join(rows, ""), "IMG"); rays < batchRays*10/9 {
			t.Fatalf("%d rays, want more than a batch has", rays)
		}
		one, many := map[string]string{}, map[string]string{}
		for _, of := range []struct {
			rows  map[string]string
			tiles int
		}{{one, 1}, {many, 5}} {
			folder := t.TempDir()
			f.write(t, folder)
			size := (len(rows) + of.tiles - 1) / of.tiles
			for k, tile := range slices.Collect(slices.Chunk(rows, size)) {
				files{fmt.Sprintf("raw/%d.%s", k, format): encode(t, format, header+strings.Join(tile, ""))}.write(t, folder)
			}
			runJob(t, loadJob(t, folder, strings.Replace(job, "raw/*.csv", "raw/*."+format, 1)), Options{Workers: 2})
			for k := range of.tiles {
				rowsByID(t, of.rows, decode(t, format, readFile(t, folder, fmt.Sprintf("true/%d.%s", k, format))))
			}
		}
		if len(one) != len(rows) || !maps.Equal(one, many) {
			t.Errorf("%s, seed %d: %d rows of the whole, %d of the tiles; of those %d differ", format, seed, len(one), len(many), different(one, many))
		}
	}
}
