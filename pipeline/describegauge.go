package pipeline

import (
	"fmt"
	"math"
	"time"

	"bentray/geo"
)

// GaugeReport is the level over time. Levels are those that are added: readings
// plus the height of the gauge's zero.
type GaugeReport struct {
	Series     []GaugeSeries // one a gauge
	Records    int
	From, To   time.Time // the first and the last record of all gauges, UTC
	Level      Range
	MaxGap     float64 // s
	LongestGap float64 // between two records of a gauge, s
	Gaps       int     // gaps longer than MaxGap, in which the gauge has no level
}

// GaugeSeries is the records of one gauge.
type GaugeSeries struct {
	Name  string  // empty where the file has no names
	X, Y  float64 // its place in the job's unit; NaN where the file has no places
	UTC   []float64
	Level []float64
}

// Times returns the first and the last record's time, UTC.
func (g *GaugeSeries) Times() (from, to time.Time) {
	return utcTime(g.UTC[0]), utcTime(g.UTC[len(g.UTC)-1])
}

func (s *survey) describeGauge() *GaugeReport {
	j, records := s.job.Surface.Gauge, &s.surface.source.gauges
	if j == nil {
		return nil
	}
	r := &GaugeReport{Series: gaugeSeries(records), Records: len(records.UTC), MaxGap: j.MaxGap}
	times, levels := s.surface.source.gaugeTimes, emptySpan()
	for k := range r.Series {
		g := &r.Series[k]
		g.X, g.Y = g.X/s.plan, g.Y/s.plan
		for i := range g.Level {
			g.Level[i] = g.Level[i]/s.height + j.Zero
		}
		levels.addFinite(g.Level)
		r.addGaps(g.UTC)
	}
	r.From, r.To, r.Level = utcTime(times.low), utcTime(times.high), Range{levels.low, levels.high}
	return r
}

func (r *GaugeReport) addGaps(utc []float64) {
	for i := 1; i < len(utc); i++ {
		gap := utc[i] - utc[i-1]
		r.LongestGap = max(r.LongestGap, gap)
		if gap > r.MaxGap {
			r.Gaps++
		}
	}
}

// gaugeSeries parts records by gauge: by name or, without, by place, in metres.
func gaugeSeries(r *geo.GaugeRecords) []GaugeSeries {
	var series []GaugeSeries
	number := map[string]int{}
	for i, utc := range r.UTC {
		one := GaugeSeries{X: math.NaN(), Y: math.NaN()}
		if r.X != nil {
			one.X, one.Y = r.X[i], r.Y[i]
		}
		key := fmt.Sprint(one.X, one.Y)
		if r.Name != nil {
			one.Name, key = r.Name[i], r.Name[i]
		}
		k, known := number[key]
		if !known {
			k = len(series)
			number[key], series = k, append(series, one)
		}
		series[k].UTC, series[k].Level = append(series[k].UTC, utc), append(series[k].Level, r.Level[i])
	}
	return series
}

// utcTime returns a time of UTC seconds since 1970.
func utcTime(seconds float64) time.Time {
	whole, part := math.Modf(seconds)
	return time.Unix(int64(whole), int64(math.Round(part*1e9))).UTC()
}
