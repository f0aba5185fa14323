package picture

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"

	"gonum.org/v1/plot"
)

// rounds marks round numbers, at most so many.
type rounds int

// Ticks returns the marks from low to high.
func (r rounds) Ticks(low, high float64) []plot.Tick {
	step := roundStep((high - low) / float64(r))
	decimals := max(0, int(math.Ceil(-math.Log10(step)-1e-9)))
	var ticks []plot.Tick
	for k := math.Ceil(low/step - 1e-9); k*step <= high+1e-9*step; k++ {
		ticks = append(ticks, plot.Tick{Value: k * step, Label: grouped(k*step, decimals)})
	}
	return ticks
}

// roundStep returns the least of 1, 2 and 5 times a power of ten that is not below v.
func roundStep(v float64) float64 {
	power := math.Pow(10, math.Floor(math.Log10(v)))
	for _, factor := range []float64{1, 2, 5} {
		if factor*power >= v*(1-1e-9) {
			return factor * power
		}
	}
	return 10 * power
}

// grouped writes a number with a space between thousands.
func grouped(v float64, decimals int) string {
	s := strconv.FormatFloat(math.Abs(v), 'f', decimals, 64)
	whole, part, _ := strings.Cut(s, ".")
	for i := len(whole) - 3; i > 0; i -= 3 {
		whole = whole[:i] + " " + whole[i:]
	}
	if v < 0 && strings.Trim(s, "0.") != "" {
		whole = "-" + whole
	}
	if part != "" {
		whole += "." + part
	}
	return whole
}

// clock marks times (UTC seconds since 1970), at most so many.
type clock int

// steps are the distances of its marks in seconds, up to days.
var steps = []float64{1, 2, 5, 10, 15, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 10800, 21600, 43200, 86400}

// Ticks returns the marks from low to high.
func (c clock) Ticks(low, high float64) []plot.Tick {
	step := math.Max(1, roundStep((high-low)/86400/float64(c))) * 86400
	for i := len(steps) - 1; i >= 0 && (high-low)/steps[i] <= float64(c); i-- {
		step = steps[i]
	}
	format := "15:04:05"
	switch {
	case step >= 86400:
		format = "2006-01-02"
	case step >= 60:
		format = "15:04"
	}
	var ticks []plot.Tick
	for t := math.Ceil(low/step) * step; t <= high; t += step {
		ticks = append(ticks, plot.Tick{Value: t, Label: time.Unix(int64(t), 0).UTC().Format(format)})
	}
	return ticks
}

// count writes a number with its noun.
func count(n int, noun string) string {
	if n != 1 && !strings.HasPrefix(noun, "of ") {
		noun += "s"
	}
	return fmt.Sprintf("%s %s", grouped(float64(n), 0), noun)
}
