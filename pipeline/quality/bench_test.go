package quality

import (
	"path/filepath"
	"testing"
)

// BenchmarkDiff compares a cloud with its corrected one, where columns are stored in the
// same bytes (CSV is compared field by field all the same) and, of Parquet, in others.
func BenchmarkDiff(b *testing.B) {
	const rows = 100_000
	raw, corrected := scene(rows)
	folder := b.TempDir()
	other := writeFile(b, filepath.Join(folder, "other", "a.parquet"), raw.parquet(b, 999))
	for _, c := range []struct{ name, raw, corrected string }{
		{"csv", raw.write(b, filepath.Join(folder, "raw", "a.csv")), corrected.write(b, filepath.Join(folder, "true", "a.csv"))},
		{"parquet", raw.write(b, filepath.Join(folder, "raw", "a.parquet")), corrected.write(b, filepath.Join(folder, "true", "a.parquet"))},
		{"parquet by value", other, filepath.Join(folder, "true", "a.parquet")},
	} {
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if r, err := Diff(b.Context(), c.raw, c.corrected, Options{}); err != nil || !r.Holds {
					b.Fatal(err, r)
				}
			}
			b.ReportMetric(float64(b.N)*rows/b.Elapsed().Seconds(), "rows/s")
		})
	}
}
