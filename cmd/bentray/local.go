package main

import (
	"fmt"
	"strconv"
	"strings"
	"time"

	"bentray/pipeline"
	"bentray/pipeline/job"
)

// mostGauges is how many gauges of one file are listed.
const mostGauges = 10

// zonesLines describes the zones of a job, if it has any.
func zonesLines(z *pipeline.ZonesReport, j *job.Job) []string {
	switch {
	case z == nil:
		return nil
	case z.WithLevel == 0:
		return []string{fmt.Sprintf("%d from %s, none with a level of its own", z.Count, j.Water.Zones)}
	}
	return []string{fmt.Sprintf("%d from %s, %d with a level of its own: %s", z.Count, j.Water.Zones, z.WithLevel, rangeText(z.Level, 4, j.Input.VerticalUnit))}
}

// gaugeLines describes the gauges of a job, if it has any.
func gaugeLines(g *pipeline.GaugeReport, j *job.Job) []string {
	if g == nil {
		return nil
	}
	lines := []string{
		fmt.Sprintf("%s from %s, %s", plural(g.Records, "record"), j.Surface.Gauge.File, plural(len(g.Series), "gauge")),
		timesText(g.From, g.To),
		fmt.Sprintf("adds %s (zero at %g %s)", rangeText(g.Level, 4, j.Input.VerticalUnit), j.Surface.Gauge.Zero, j.Input.VerticalUnit),
	}
	gaps := "none longer"
	if g.Gaps > 0 {
		gaps = fmt.Sprintf("%d longer, without a level", g.Gaps)
	}
	lines = append(lines, fmt.Sprintf("longest gap %g s; max_gap %g s, %s", g.LongestGap, g.MaxGap, gaps))
	if len(g.Series) == 1 {
		return lines
	}
	for i, one := range g.Series {
		if i == mostGauges {
			return append(lines, fmt.Sprintf("and %d gauges more", len(g.Series)-mostGauges))
		}
		label := fmt.Sprintf("%q", one.Name)
		if one.Name == "" {
			label = fmt.Sprintf("at %.1f, %.1f", one.X, one.Y)
		}
		lines = append(lines, fmt.Sprintf("%s: %s, %s", label, plural(len(one.UTC), "record"), timesText(one.Times())))
	}
	return lines
}

// stationsLines describes the stations of a job, if it has any.
func stationsLines(r *pipeline.StationsReport, j *job.Job) []string {
	if r == nil {
		return nil
	}
	lines := []string{fmt.Sprintf("%d from %s, %s", r.Stations, j.Water.Stations, plural(r.Records, "record"))}
	if r.Timed {
		lines = append(lines, fmt.Sprintf("%s, held for max_gap %g s beyond", timesText(r.From, r.To), r.MaxGap))
	}
	values := rangeText(r.Temperature, 2, "degrees C") + ", salinity " + strings.TrimSpace(rangeText(r.Salinity, 2, ""))
	if r.Casts {
		values += "; casts, depths " + rangeText(r.Depth, 2, j.Input.VerticalUnit)
	}
	return append(lines, values)
}

func timesText(from, to time.Time) string {
	return from.Format(time.RFC3339) + " to " + to.Format(time.RFC3339)
}

// rangeText writes a range, once where both ends are the same.
func rangeText(r pipeline.Range, decimals int, unit string) string {
	low, high := strconv.FormatFloat(r.Low, 'f', decimals, 64), strconv.FormatFloat(r.High, 'f', decimals, 64)
	if r.Low != r.High {
		low += " to " + high
	}
	return low + " " + unit
}
