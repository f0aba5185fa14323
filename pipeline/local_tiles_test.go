package pipeline

import (
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// tiles cuts one cloud of swell, 200 m square, into four strips along x, of which one is
// narrow. Every row has a number of its own.
func tiles(t *testing.T) (whole string, strips [4]string) {
	t.Helper()
	var all strings.Builder
	var parts [4]strings.Builder
	c := scene{surface: swell(1), sea: standardSea(t)}
	surface, bed := c.flyOver(newRand(8), 12_000, func(x float64) float64 { return 1.9e9 + x/60 })
	for i, line := range strings.Split(strings.TrimSpace(together(surface, bed)), "\n") {
		if i == 0 {
			all.WriteString(line + ",id\n")
			for k := range parts {
				parts[k].WriteString(line + ",id\n")
			}
			continue
		}
		var x float64
		if _, err := fmt.Sscanf(line, "%g", &x); err != nil {
			t.Fatal(err)
		}
		line = fmt.Sprintf("%s,%d\n", line, i)
		all.WriteString(line)
		k, _ := slices.BinarySearch([]float64{0.2, 60, 130}, x)
		parts[k].WriteString(line)
	}
	for k := range parts {
		strips[k] = parts[k].String()
	}
	return all.String(), strips
}

// rowsByID are the rows of an output without the run's name, by number.
func rowsByID(t *testing.T, into map[string]string, tb table) {
	t.Helper()
	run := slices.Index(tb.names, "run")
	for i := range tb.rows {
		id := exact(tb.number(t, i, "id"))
		if _, twice := into[id]; twice {
			t.Fatalf("row %s is there twice", id)
		}
		into[id] = strings.Join(slices.Delete(slices.Clone(tb.rows[i]), run, run+1), ",")
	}
}

// A tiled archive whose grid comes from its own points equals the same archive in one
// file, point for point: in CSV with nine decimals, in Parquet to the last bit.
func TestTilesEqualTheWhole(t *testing.T) {
	whole, strips := tiles(t)
	for _, format := range formats {
		t.Run(format, func(t *testing.T) {
			job := inFormat(inUTC(inNanometres(swellJob)), format)
			one, many := map[string]string{}, map[string]string{}
			for _, of := range []struct {
				rows   map[string]string
				clouds []string
			}{{one, []string{whole}}, {many, strips[:]}} {
				folder := t.TempDir()
				for k, text := range of.clouds {
					files{fmt.Sprintf("raw/%d.%s", k, format): encode(t, format, text)}.write(t, folder)
				}
				runJob(t, loadJob(t, folder, job), Options{Workers: 2})
				for k := range of.clouds {
					rowsByID(t, of.rows, decode(t, format, readFile(t, folder, fmt.Sprintf("true/%d.%s", k, format))))
				}
			}
			if len(one) != 16_000 || !maps.Equal(one, many) {
				t.Errorf("seed %d: %d rows of the whole, %d of the tiles; of those %d differ", seed, len(one), len(many), different(one, many))
			}
		})
	}
}

func different(a, b map[string]string) (n int) {
	for id, row := range a {
		if b[id] != row {
			n++
		}
	}
	return n
}

// Part of a run, by pattern or by shard, reads the surface points of all tiles too:
// the bytes are those of the whole run. A changed surface point in one tile makes
// every tile stale, a changed bed point only its own.
func TestPartsOfATiledRun(t *testing.T) {
	_, strips := tiles(t)
	folder := t.TempDir()
	for k, text := range strips {
		files{fmt.Sprintf("raw/%d.csv", k): text}.write(t, folder)
	}
	job := func(output string) string {
		return strings.Replace(inUTC(swellJob), `"true"`, `"`+output+`"`, 1)
	}
	runJob(t, loadJob(t, folder, job("whole")), Options{Workers: 2})
	want := outputs(t, filepath.Join(folder, "whole"))

	runJob(t, loadJob(t, folder, job("only")), Options{Only: "2.csv"})
	only := maps.Clone(want)
	maps.DeleteFunc(only, func(name, _ string) bool {
		return strings.HasSuffix(name, "csv") && name != "2.csv" || strings.HasSuffix(name, ".json") && name != "2.csv.receipt.json"
	})
	same(t, "--only", outputs(t, filepath.Join(folder, "only")), only)
	for k := range 2 {
		runJob(t, loadJob(t, folder, job("shards")), Options{Shard: Shard{Index: k, Count: 2}})
	}
	same(t, "--shard", outputs(t, filepath.Join(folder, "shards")), want)

	j := loadJob(t, folder, job("whole"))
	if s := runJob(t, j, Options{}); s.Fresh != 4 {
		t.Errorf("%d of 4 tiles are fresh", s.Fresh)
	}
	files{"raw/1.csv": strings.Replace(strips[1], ",40,", ",30,", 1)}.write(t, folder)
	if s := runJob(t, j, Options{}); s.Fresh != 3 || s.Done != 1 {
		t.Errorf("after a bed point changed %d tiles are fresh and %d done, want 3 and 1", s.Fresh, s.Done)
	}
	files{"raw/1.csv": strings.Replace(strips[1], ",41,", ",30,", 1)}.write(t, folder)
	if s := runJob(t, j, Options{}); s.Done != 4 {
		t.Errorf("after a surface point changed %d of 4 tiles are done", s.Done)
	}
}

// A point's result is the same to the last bit whether its neighbours come to rest
// sooner or later than it does: rays at 50 degrees take more tries to meet a surface
// than those straight down, and deep points more tries with casts.
func TestNeighboursDoNotMatter(t *testing.T) {
	c, r := scene{surface: swell(0), sea: standardSea(t)}, newRand(11)
	surface, _ := c.flyOver(r, 12_000, func(float64) float64 { return 1.9e9 })
	var easy, hard []shot
	for range 20 {
		x, y := 20+160*r.Float64(), 20+160*r.Float64()
		easy = append(easy, c.fire(1.9e9, vec{x + 8, y + 3, 400}, vec{x, y, 0}, 0.7+r.Float64()))
		hard = append(hard, c.fire(1.9e9, vec{x + 477, y, 400}, vec{x, y, 0}, 25))
	}
	job := inFormat(inUTC(pulseJob), "parquet") + "[surface.grid]\npoints = \"surface.parquet\"\n[water]\nstations = \"casts.parquet\"\n"
	folder := t.TempDir()
	files{
		"raw/easy.parquet": encode(t, "parquet", cloudOf(easy, 40, asUTC)), "raw/hard.parquet": encode(t, "parquet", cloudOf(append(easy, hard...), 40, asUTC)),
		"surface.parquet": encode(t, "parquet", strings.ReplaceAll(cloudOf(surface, 41, nil), "classification", "class")),
		"casts.parquet":   encode(t, "parquet", stationFile(probes(), true)),
	}.write(t, folder)
	runJob(t, loadJob(t, folder, job), Options{})
	alone, among := readParquet(t, readFile(t, folder, "true/easy.parquet")), readParquet(t, readFile(t, folder, "true/hard.parquet"))
	for i := range among.rows {
		if outcome := among.text(t, i, "outcome"); outcome != "corrected" {
			t.Fatalf("seed %d: row %d is %s, want corrected", seed, i, outcome)
		}
	}
	for i, want := range alone.rows {
		if got := among.rows[i]; !slices.Equal(got, want) {
			t.Errorf("seed %d: row %d is\n%q among others, want\n%q", seed, i, got, want)
		}
	}
}
