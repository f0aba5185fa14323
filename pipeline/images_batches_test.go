package pipeline

import (
	"math"
	"strings"
	"testing"
)

// Points that are not solved hold nothing of the points that were in memory before
// them: those without a surface stand in the last fifth of the cloud alone.
func TestImagesHoldNothingOfOtherChunks(t *testing.T) {
	f, job, header, rows := manyImages(30_000)
	job = strings.Replace(job, castWater, seaWater, 1)
	for i := range rows {
		if i < len(rows)*4/5 && i%40 == 1 {
			rows[i] = rows[i-1]
		}
	}
	f["raw/a.csv"] = header + strings.Join(rows, "")
	got := correctFiles(t, f, job)
	seen := 0
	for i := range got.rows {
		if got.text(t, i, "outcome") != "no_surface" {
			continue
		}
		seen++
		for _, name := range []string{"depth", "water_level", "entry_level", "incidence_deg", "refraction_deg", "slope_x", "ray_count"} {
			if text := got.text(t, i, name); text != "" {
				t.Fatalf("row %d has no surface, but its %s is %s", i, name, text)
			}
		}
	}
	if seen < 100 {
		t.Errorf("%d rows have no surface, want more than 100", seen)
	}
}

// A chunk of more rays than are in work at once comes to the same as smaller chunks.
func TestImagesInBatches(t *testing.T) {
	f, job, header, rows := manyImages(20_000)
	cloud := header + strings.Join(rows, "")
	f["raw/a.csv"] = cloud
	want := correctFiles(t, f, job)
	folder := t.TempDir()
	f.write(t, folder)
	files{"raw/a.parquet": parquetOf(t, cloud, len(rows), nil)}.write(t, folder)
	runJob(t, loadJob(t, folder, strings.Replace(job, "*.csv", "*.parquet", 1)), Options{Workers: 2})
	got := readParquet(t, readFile(t, folder, "true/a.parquet"))
	rays := 0.0
	for i := range want.rows {
		for _, name := range []string{"outcome", "view_source"} {
			if g, w := got.text(t, i, name), want.text(t, i, name); g != w {
				t.Fatalf("row %d: %s is %s, want %s", i, name, g, w)
			}
		}
		if want.text(t, i, "outcome") != "corrected" {
			continue
		}
		rays += want.number(t, i, "ray_count")
		for _, name := range []string{"x", "y", "z", "depth", "entry_level"} {
			if g, w := got.number(t, i, name), want.number(t, i, name); math.Abs(g-w) > 0.5e-4+1e-6 {
				t.Fatalf("row %d: %s is %v, want %v", i, name, g, w)
			}
		}
	}
	if rays < 1.1*batchRays {
		t.Errorf("the points have %v rays, want more than a batch of %d", rays, batchRays)
	}
}
