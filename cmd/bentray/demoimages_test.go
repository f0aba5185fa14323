package main

import (
	"math"
	"path/filepath"
	"regexp"
	"strconv"
	"testing"
)

// checkSolutions holds the printed table of solutions against the files, and the solutions
// against what they are known for: raw beds are too shallow, vertical and average leave a
// part of that, and invert leaves rounding.
func checkSolutions(t *testing.T, folder, printed string) {
	t.Helper()
	for _, s := range []struct {
		name, folder, z string
		least, most     float64 // of the bias, m
	}{
		{"raw", "corrected", "z_raw", 0.3, 0.6},
		{"vertical", "vertical", "z", 0.05, 0.2},
		{"average", "average", "z", 0.005, 0.05},
		{"intersect", "intersect", "z", -0.05, 0},
		{"invert", "corrected", "z", -0.00002, 0.00002},
	} {
		bias, rms := heightErrors(t, folder, s.folder, s.z)
		row := regexp.MustCompile(`\n  ` + s.name + ` +\| +(\S+) +(\S+) `).FindStringSubmatch(printed)
		if row == nil || row[1] != fixed(1000*bias, 2) || row[2] != fixed(1000*rms, 2) {
			t.Errorf("%s: bias %g m and rms %g m are printed as %q", s.name, bias, rms, row)
		}
		if !(bias > s.least && bias < s.most) {
			t.Errorf("%s: bias is %g m, want %g to %g m", s.name, bias, s.least, s.most)
		}
	}
}

// heightErrors returns bias and rms in z (m) of the pool's points that the truth says
// are corrected.
func heightErrors(t *testing.T, folder, output, z string) (bias, rms float64) {
	t.Helper()
	n := 0.0
	for _, name := range []string{"head.csv", "tail.csv"} {
		at, rows := readTable(t, filepath.Join(folder, output, name))
		_, truth := readTable(t, filepath.Join(folder, "truth", name))
		for i, row := range rows {
			if truth[i][4] != "corrected" {
				continue
			}
			found, errFound := strconv.ParseFloat(row[at[z]], 64)
			is, errIs := strconv.ParseFloat(truth[i][2], 64)
			if errFound != nil || errIs != nil {
				t.Fatalf("%s: row %d: z is %q, and in truth %q", name, i+1, row[at[z]], truth[i][2])
			}
			bias += found - is
			rms += (found - is) * (found - is)
			n++
		}
	}
	return bias / n, math.Sqrt(rms / n)
}
