package main

import (
	"bytes"
	"fmt"
	"os/exec"
	"runtime"
	"slices"
	"syscall"
	"time"
)

// usage is what one run of a program took.
type usage struct {
	seconds, cpuSeconds float64
	peakMiB             float64
}

// measure runs a command to its end and returns its usage and what it wrote to
// stdout. The peak includes the memory of this program at the start of the
// command (the system counts it so), which is why nothing here holds a file.
func measure(cmd *exec.Cmd) (usage, []byte, error) {
	var stdout, stderr bytes.Buffer
	cmd.Stdout, cmd.Stderr = &stdout, &stderr
	started := time.Now()
	err := cmd.Run()
	seconds := time.Since(started).Seconds()
	if err != nil {
		return usage{}, nil, fmt.Errorf("%v: %w\n%s%s", cmd.Args, err, stdout.Bytes(), stderr.Bytes())
	}
	state := cmd.ProcessState
	return usage{
		seconds:    seconds,
		cpuSeconds: (state.UserTime() + state.SystemTime()).Seconds(),
		peakMiB:    peakMiB(state.SysUsage().(*syscall.Rusage)),
	}, stdout.Bytes(), nil
}

// peakMiB is the largest resident size. Linux counts it in KiB, macOS in bytes.
func peakMiB(r *syscall.Rusage) float64 {
	if runtime.GOOS == "darwin" {
		return float64(r.Maxrss) / (1 << 20)
	}
	return float64(r.Maxrss) / (1 << 10)
}

// total is what a program's runs came to: the medians of their times, the
// highest peak, and the seconds of the fastest run, which the machine's other
// work disturbed least.
type total struct {
	usage
	best float64
}

func summary(runs []usage) total {
	var seconds, cpu, peak []float64
	for _, r := range runs {
		seconds, cpu, peak = append(seconds, r.seconds), append(cpu, r.cpuSeconds), append(peak, r.peakMiB)
	}
	return total{usage{seconds: median(seconds), cpuSeconds: median(cpu), peakMiB: slices.Max(peak)}, slices.Min(seconds)}
}

func median(v []float64) float64 {
	slices.Sort(v)
	n := len(v)
	return (v[(n-1)/2] + v[n/2]) / 2
}
