package main

import (
	"bytes"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

func TestAppendNumberRoundsLikeStrconv(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 1))
	for range 5000 {
		v := (random.Float64() - 0.5) * 1e7
		for places, scale := range map[int]int64{3: 1e3, 6: 1e6} {
			got, err := strconv.ParseFloat(string(appendNumber(nil, v, scale, 0)), 64)
			if err != nil {
				t.Fatalf("seed 3, 1: %v: %v", v, err)
			}
			if want, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'f', places, 64), 64); got != want {
				t.Fatalf("seed 3, 1: %v is written as %v, want %v", v, got, want)
			}
		}
	}
	for _, c := range []struct {
		v    float64
		want string
	}{{-0.007, "-0.007"}, {-0.0001, "0.000"}, {12.3456, "12.346"}, {0, "0.000"}, {-11.9999, "-12.000"}} {
		if got := string(appendNumber(nil, c.v, 1e3, 0)); got != c.want {
			t.Errorf("%v is written as %q, want %q", c.v, got, c.want)
		}
	}
}

func TestSeventeenDigitsKeepTheNumber(t *testing.T) {
	v := 412025.91112242552
	got, err := strconv.ParseFloat(string(appendNumber(nil, v, 1e3, 17)), 64)
	if err != nil || got != v {
		t.Errorf("%v comes back as %v, %v", v, got, err)
	}
}

func TestSurveyFileIsWholeAndRepeatable(t *testing.T) {
	const rows = 20000 // more than one buffer
	var files [2][]byte
	for i := range files {
		path := filepath.Join(t.TempDir(), "survey.csv")
		if err := writeSurvey(path, rows, 0); err != nil {
			t.Fatal(err)
		}
		files[i], _ = os.ReadFile(path)
	}
	if !bytes.Equal(files[0], files[1]) {
		t.Error("two surveys differ")
	}
	lines := strings.Split(strings.TrimSuffix(string(files[0]), "\n"), "\n")
	if lines[0] != columns || len(lines) != rows+1 {
		t.Fatalf("header %q and %d lines, want %q and %d", lines[0], len(lines), columns, rows+1)
	}
	for i, line := range lines {
		if n := strings.Count(line, ","); n != 9 {
			t.Fatalf("line %d has %d commas, want 9: %s", i+1, n, line)
		}
	}
}

func TestSurveyCannotBeWritten(t *testing.T) {
	if err := writeSurvey(filepath.Join(t.TempDir(), "none", "survey.csv"), 1, 0); err == nil {
		t.Error("no error for a folder that is not there")
	}
}
