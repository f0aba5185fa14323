package main

import (
	"errors"
	"os/exec"
	"strconv"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain makes the test binary the program itself where it is called so.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"bentray": main})
}

// TestScript runs the scripts below testdata/script, each in a folder of its
// own. In them `exits CODE ARGUMENTS` runs bentray and wants that exit code.
func TestScript(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:  "testdata/script",
		Cmds: map[string]func(ts *testscript.TestScript, neg bool, args []string){"exits": exits},
	})
}

func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 1 {
		ts.Fatalf("usage: exits CODE ARGUMENTS")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	err = ts.Exec("bentray", args[1:]...)
	code := 0
	var exit *exec.ExitError
	if errors.As(err, &exit) {
		code = exit.ExitCode()
	} else {
		ts.Check(err)
	}
	if code != want {
		ts.Fatalf("bentray %q ends with %d, want %d", args[1:], code, want)
	}
}
