package main

import (
	"os"
	"os/exec"
	"strings"
	"testing"
)

func TestFloorsAndPeakAreHeld(t *testing.T) {
	took := func(seconds float64) *total { return &total{usage: usage{seconds: seconds}, best: 1} }
	fast := total{usage{seconds: 2, peakMiB: 100}, 1.9}
	slow := &total{usage{seconds: 7, peakMiB: 700}, 1} // 3.5 times as long
	giants := []giantResult{
		{shape{1, 5e6, 5e6}, 9, total{usage: usage{peakMiB: 512}}},
		{shape{5, 1e6, 1e6}, 9, total{usage: usage{peakMiB: 512.6}}},
	}
	for _, c := range []struct {
		name   string
		result result
		floor  bool
		fault  string
	}{
		{"csv above its floor", result{format: "csv", bentray: fast, engine: slow}, true, ""},
		{"csv below its floor", result{format: "csv", bentray: fast, engine: took(5.9)}, true, "csv: 2.95 times"},
		{"floor turned off", result{format: "csv", bentray: fast, engine: took(5.9)}, false, ""},
		{"parquet above its floor", result{format: "parquet", bentray: fast, engine: took(5.9)}, true, ""},
		{"parquet below its floor", result{format: "parquet", bentray: fast, engine: took(3)}, true, "parquet: 1.50 times"},
		{"no engine", result{format: "csv", bentray: fast}, true, ""},
		{"peak", result{format: "csv", bentray: total{usage: usage{seconds: 1, peakMiB: 513}}, engine: slow}, false, "peak memory is 513 MiB"},
		{"peak of diff", result{format: "csv", bentray: fast, diff: &total{usage{seconds: 1, peakMiB: 600}, 1}}, true, "csv: peak memory of diff is 600 MiB"},
		{"giants at the limit", result{format: "parquet", bentray: fast, giants: giants[:1]}, true, ""},
		{
			"peak of a giant",
			result{format: "parquet", bentray: fast, giants: giants},
			false,
			"parquet, 5 groups, pages of 1000000: peak memory is 513 MiB",
		},
	} {
		t.Run(c.name, func(t *testing.T) {
			err := c.result.check(c.floor)
			if c.fault == "" && err != nil || c.fault != "" && (err == nil || !strings.Contains(err.Error(), c.fault)) {
				t.Errorf("error is %v, want %q", err, c.fault)
			}
		})
	}
}

func TestReportShowsSpeedAndRatio(t *testing.T) {
	r := result{
		diff:   &total{usage{4, 6, 90}, 3.5},
		format: "csv", rows: 5e6, inputBytes: 440e6, workers: 2, runs: 3, checkedRows: 5016,
		bentray: total{usage{2, 3.5, 100}, 1.5}, engine: &total{usage{7, 13, 700}, 6},
		giants: []giantResult{{shape{1, 5e6, 4e6}, 110e6, total{usage{2.5, 4, 300}, 2.25}}},
	}
	var out strings.Builder
	r.print(&out)
	for _, want := range []string{
		"bentray     2.00  1.50   2500000  220.0   3.50       100",
		"bentray diff     4.00  3.50   1250000  110.0   6.00        90",
		"engine     7.00  6.00    714286   62.9  13.00       700",
		"bentray, 1 group, pages of 4000000     2.50  2.25   2000000   44.0   4.00       300",
		"ratio engine/bentray 3.50 by median (floor 3), 4.00 by best; outputs agree on 5016 rows",
	} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("report lacks %q:\n%s", want, out.String())
		}
	}
}

func TestSummary(t *testing.T) {
	got := summary([]usage{{3, 9, 50}, {1, 7, 90}, {2, 8, 70}})
	if want := (total{usage{2, 8, 90}, 1}); got != want {
		t.Errorf("summary is %v, want %v: medians of the times, the highest peak, the best seconds", got, want)
	}
	if m := median([]float64{4, 1}); m != 2.5 {
		t.Errorf("median of 4 and 1 is %v, want 2.5", m)
	}
}

// The test program itself is the command: with BENCHMARK_CHILD set it takes
// memory or fails.
func TestMeasure(t *testing.T) {
	child := func(what string) *exec.Cmd {
		cmd := exec.Command(os.Args[0])
		cmd.Env = append(os.Environ(), "BENCHMARK_CHILD="+what)
		return cmd
	}
	u, out, err := measure(child("memory"))
	if err != nil {
		t.Fatal(err)
	}
	if u.peakMiB < 64 || u.seconds <= 0 || u.cpuSeconds <= 0 {
		t.Errorf("usage is %+v, want at least the 64 MiB that the child touches", u)
	}
	if string(out) != "done\n" {
		t.Errorf("stdout is %q", out)
	}
	if _, _, err := measure(child("failure")); err == nil || !strings.Contains(err.Error(), "broken on purpose") {
		t.Errorf("error is %v, want the child's stderr in it", err)
	}
}

func TestMain(m *testing.M) {
	switch os.Getenv("BENCHMARK_CHILD") {
	case "memory":
		held := make([]byte, 64<<20)
		for i := range held {
			held[i] = 1
		}
		os.Stdout.WriteString("done\n")
	case "failure":
		os.Stderr.WriteString("broken on purpose\n")
		os.Exit(1)
	default:
		os.Exit(m.Run())
	}
}

func TestFlags(t *testing.T) {
	for _, c := range []struct{ args, fault string }{
		{"", ""},
		{"-rows 10 -runs 1 -format both -digits 17 -floors=false", ""},
		{"-rows 0", "want at least 1"},
		{"-digits 18", "want 0 to 17"},
		{"-format las", "want csv, parquet or both"},
		{"survey.csv", "takes flags only"},
	} {
		_, err := parse(strings.Fields(c.args))
		if c.fault == "" && err != nil || c.fault != "" && (err == nil || !strings.Contains(err.Error(), c.fault)) {
			t.Errorf("flags %q: error is %v, want %q", c.args, err, c.fault)
		}
	}
}
