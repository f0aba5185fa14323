// Command bentray corrects refraction in point clouds of shallow water: it puts
// each underwater point of a survey where it is.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strconv"
	"strings"
	"syscall"

	"github.com/alecthomas/kong"

	"bentray/pipeline"
)

// Exit codes. 2 is left to the Go runtime.
const (
	exitDone        = 0
	exitNothing     = 1  // nothing could be done, or an internal fault
	exitPartly      = 3  // some files failed, the others are done
	exitCall        = 64 // the call or the job is wrong, nothing was written
	exitInterrupted = 130
)

const exitCodes = "Exit codes: 0 all done; 1 nothing could be done; 3 some files failed, the others are done; 64 the call or the job is wrong, nothing was written; 130 interrupted."

// errPartly and errNothing end a run whose files are reported already.
var (
	errPartly  = errors.New("some files failed")
	errNothing = errors.New("no file could be done")
)

type cli struct {
	Run     runCommand       `cmd:"" help:"Correct all clouds of a job."`
	Plan    planCommand      `cmd:"" help:"Show what run would do, or a cloud's columns and a starting job."`
	Diff    diffCommand      `cmd:"" help:"Compare raw and corrected clouds, and with surveyed points."`
	Audit   auditCommand     `cmd:"" help:"Prove outputs: hashes, counts and every point against the receipts."`
	Index   indexCommand     `cmd:"" help:"Refractive index and speed of sound of given water and air."`
	Ray     rayCommand       `cmd:"" help:"Bend one ray, step by step, for a check by hand."`
	Surface surfaceCommand   `cmd:"" help:"Describe a job's water surface, and draw it."`
	Demo    demoCommand      `cmd:"" help:"Write a small made-up survey with known truth, correct it and report."`
	Version kong.VersionFlag `help:"Print the version and stop."`
}

// streams are where a command reads and writes.
type streams struct {
	ctx    context.Context
	out    io.Writer // data
	errors io.Writer // messages and progress
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	context.AfterFunc(ctx, func() {
		stop() // a second signal stops at once
		fmt.Fprintln(os.Stderr, "bentray: stopping; once more to stop at once")
	})
	os.Exit(run(ctx, os.Args[1:], os.Stdout, os.Stderr))
}

// run is the whole program: it carries out the arguments and returns the exit code.
func run(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	var commands cli
	ended := false // by --help or --version
	parser, err := kong.New(&commands,
		kong.Name("bentray"),
		kong.Description("Puts each underwater point of a cloud where it is: bends its ray at the water surface, with the index of that water.\n\nbentray COMMAND --help shows each command with an example."),
		kong.Vars{"version": pipeline.Program},
		kong.Writers(stdout, stderr),
		kong.Exit(func(int) { ended = true }),
		kong.ConfigureHelp(kong.HelpOptions{Compact: true, NoExpandSubcommands: true}),
	)
	if err != nil {
		return report(stderr, err)
	}
	call, err := parser.Parse(joinNegatives(args))
	if ended {
		return exitDone
	}
	if err != nil {
		return report(stderr, &pipeline.CallError{Err: fmt.Errorf("%w (see bentray --help)", err)})
	}
	data := &output{to: stdout}
	err = call.Run(&streams{ctx: ctx, out: data, errors: stderr})
	if err == nil && data.err != nil {
		err = fmt.Errorf("cannot write to standard output: %w", data.err)
	}
	return report(stderr, err)
}

// output remembers its first error, which commands leave to run.
type output struct {
	to  io.Writer
	err error
}

func (o *output) Write(p []byte) (int, error) {
	n, err := o.to.Write(p)
	if o.err == nil {
		o.err = err
	}
	return n, err
}

// report prints an error and turns its kind into an exit code.
func report(stderr io.Writer, err error) int {
	var call *pipeline.CallError
	switch {
	case err == nil:
		return exitDone
	case errors.Is(err, errPartly):
		return exitPartly
	case errors.Is(err, errNothing), errors.Is(err, errNotHeld):
		return exitNothing
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(stderr, "bentray: interrupted; done files stay done, run again for the rest")
		return exitInterrupted
	}
	fmt.Fprintln(stderr, "bentray:", err)
	if errors.As(err, &call) {
		return exitCall
	}
	return exitNothing
}

// joinNegatives writes "--key -1.5" as "--key=-1.5", which the parser would take
// for two flags.
func joinNegatives(args []string) []string {
	var joined []string
	for i := 0; i < len(args); i++ {
		arg := args[i]
		if strings.HasPrefix(arg, "--") && !strings.Contains(arg, "=") && i+1 < len(args) && isNegative(args[i+1]) {
			arg += "=" + args[i+1]
			i++
		}
		joined = append(joined, arg)
	}
	return joined
}

// isNegative tells a number, or a list of numbers, that begins with a minus.
func isNegative(arg string) bool {
	first, _, _ := strings.Cut(arg, ",")
	_, err := strconv.ParseFloat(first, 64)
	return err == nil && strings.HasPrefix(arg, "-")
}
