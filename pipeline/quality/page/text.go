package page

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"bentray/pipeline/picture"
	"bentray/pipeline/quality"
)

// outcomeMeanings say what became of a point, in plain words.
var outcomeMeanings = map[string]string{
	"corrected":    "under water, put where the bed is",
	"invalid":      "a coordinate is not a finite number",
	"not_selected": "left out by the job's selection",
	"no_rule":      "no sensor of the job fits it",
	"outside":      "not in the extent of the water",
	"no_surface":   "the water surface is not known there",
	"dry":          "on the shore, at or above the water",
	"wet":          "in the water with the camera, nothing to correct",
	"no_origin":    "where the ray came from is not known",
	"no_water":     "temperature and salinity are not known there",
	"out_of_range": "water beyond the range of the index formula",
	"few_rays":     "seen by fewer than two cameras",
	"grazing":      "seen at too flat an angle, or totally reflected",
	"unsolved":     "no finite result",
}

// orderNames are those of S-44; orders 1a and 1b have the same limit.
var orderNames = map[string]string{"exclusive": "Exclusive order", "special": "Special order", "1": "Order 1a and 1b", "2": "Order 2"}

const minus = "−"

// grouped writes a count with a thin space between thousands.
func grouped[T int | int64](n T) string {
	s := strconv.FormatInt(int64(n), 10)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "\u202f" + s[i:]
	}
	return s
}

// fixed writes a number with so many decimals, or a dash where it is not known.
func fixed(v float64, decimals int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	s := strconv.FormatFloat(math.Abs(v), 'f', decimals, 64)
	if v < 0 && strings.Trim(s, "0.") != "" {
		return minus + s
	}
	return s
}

// length writes a length or a difference of heights to four decimals.
func length(n quality.Number) string { return fixed(float64(n), 4) }

// signed is length with a plus before what is positive.
func signed(n quality.Number) string {
	s := length(n)
	if n > 0 && strings.Trim(s, "0.") != "" {
		return "+" + s
	}
	return s
}

func slope(n quality.Number) string { return fixed(float64(n), 5) }

// percent writes a share of 1.
func percent(n quality.Number) string {
	if math.IsNaN(float64(n)) {
		return "–"
	}
	return fixed(100*float64(n), 1) + "\u00a0%"
}

// span writes a band.
func span(from, to quality.Number) string {
	return plain(from) + " to " + plain(to)
}

// plain writes a number with the digits that it needs.
func plain[T float64 | quality.Number](v T) string {
	return strings.Replace(strconv.FormatFloat(float64(v), 'g', 10, 64), "-", minus, 1)
}

// rangeText writes a least and a greatest value, once where they are the same.
func rangeText(r [2]float64, decimals int) string {
	low, high := fixed(r[0], decimals), fixed(r[1], decimals)
	if low == high {
		return low
	}
	return low + " to " + high
}

// bytesText writes a size.
func bytesText(n int64) string { return grouped(n) + " bytes" }

func mapCaption(r *quality.Report) string {
	return fmt.Sprintf("Mean shift in height of the points in each cell of %s %s; blank where there is none. The outermost colours also hold the hundredth of the cells that lies beyond. Dashed lines: the sections below.", plain(r.Map.Cell), r.Unit)
}

func sectionCaption(r *quality.Report, i int) string {
	s := &r.Sections[i]
	name := picture.SectionLetter(i)
	way, where, _ := strings.Cut(s.Name, ",")
	return fmt.Sprintf("Section %s to %s', %s the main axis of the cloud%s: a sample of the points within %.3g %s of the line. Heights are exaggerated.", name, name, way, where, s.Halfwidth, r.Unit)
}
