package main

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

func TestGrouped(t *testing.T) {
	for n, want := range map[int64]string{0: "0", 7: "7", 999: "999", 1000: "1 000", 123456: "123 456", 1234567890: "1 234 567 890"} {
		if got := grouped(n); got != want {
			t.Errorf("%d is written %q, want %q", n, got, want)
		}
	}
}

func TestPlural(t *testing.T) {
	for n, want := range map[int]string{0: "0 files", 1: "1 file", 2: "2 files"} {
		if got := plural(n, "file"); got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
}

func TestOutcomeRows(t *testing.T) {
	got := fmt.Sprint(outcomeRows(map[string]int64{"dry": 1, "outside": 1, "corrected": 6}))
	if want := "[{corrected 6 75} {dry 1 12.5} {outside 1 12.5}]"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

func TestJoinNegatives(t *testing.T) {
	for _, c := range []struct{ args, want string }{
		{"ray --level -0.5 --point 1,2,3", "ray --level=-0.5 --point 1,2,3"},
		{"ray --origin -1,-2,3", "ray --origin=-1,-2,3"},
		{"index --temperature -1.5e0", "index --temperature=-1.5e0"},
		{"index --temperature=-1 -2", "index --temperature=-1 -2"},
		{"run --quiet --redo job.toml", "run --quiet --redo job.toml"},
		{"run -h", "run -h"},
		{"run --quiet -h", "run --quiet -h"},
		{"ray --level", "ray --level"},
		{"ray --level -inf", "ray --level=-inf"},
		{"ray --point 5 -1", "ray --point 5 -1"},
	} {
		if got := joinNegatives(strings.Fields(c.args)); !slices.Equal(got, strings.Fields(c.want)) {
			t.Errorf("%s becomes %q, want %s", c.args, got, c.want)
		}
	}
}

// Every command has a help that ends in an example and its exit codes.
func TestHelp(t *testing.T) {
	for _, command := range []string{"run", "plan", "index", "ray", "surface", "demo"} {
		code, out, errs := call(t, command, "--help")
		want(t, command, code, exitDone, errs, "")
		example, codes := strings.Index(out, "bentray "+command+" "), strings.Index(out, "Exit codes: 0 ")
		if example < 0 || codes < example {
			t.Errorf("%s: the help is\n%s", command, out)
		}
	}
}
