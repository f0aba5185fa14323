package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestGiantIsAsLargeAsItClaims(t *testing.T) {
	for _, c := range []struct {
		name  string
		giant giant
		shape shape
		rows  int64
		fault string
	}{
		{"one group", giants[0], shape{1, 5e6, 5e6}, 5e6, ""},
		{"pages of a million", giants[1], shape{5, 1000001, 1000001}, 5e6, ""},
		{"small survey", giants[0], shape{1, 9000, 9000}, 9000, ""},
		{"group cut", giants[0], shape{2, 3e6, 3e6}, 5e6, "largest row group has 3000000 rows, want 5000000"},
		{"pages cut", giants[0], shape{1, 5e6, 65536}, 5e6, "no page beyond 65536 values, want 1000000"},
		{"small survey, pages cut", giants[1], shape{1, 9000, 2048}, 9000, "no page beyond 2048 values, want 9000"},
	} {
		t.Run(c.name, func(t *testing.T) {
			err := c.giant.check("a.parquet", c.shape, c.rows)
			if c.fault == "" && err != nil || c.fault != "" && (err == nil || !strings.Contains(err.Error(), c.fault)) {
				t.Errorf("error is %v, want %q", err, c.fault)
			}
		})
	}
}

func TestJobNamesItsFiles(t *testing.T) {
	folder := t.TempDir()
	path, err := writeJob(folder, "survey-group.parquet", "group")
	if err != nil {
		t.Fatal(err)
	}
	if want := filepath.Join(folder, "job-group.toml"); path != want {
		t.Errorf("job is %s, want %s", path, want)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`files = ["survey-group.parquet"]`, `folder     = "bentray-group"`, "temperature = 17.5", "level = 0.42"} {
		if !strings.Contains(string(text), want) {
			t.Errorf("job lacks %q:\n%s", want, text)
		}
	}
}
