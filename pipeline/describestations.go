package pipeline

import "time"

// StationsReport sums up the stations of the water. Depths are in the job's unit of
// heights.
type StationsReport struct {
	Stations, Records     int
	Timed                 bool
	From, To              time.Time // the first and the last record, UTC, where Timed
	MaxGap                float64   // s that a record holds beyond them
	Casts                 bool
	Depth                 Range // where Casts
	Temperature, Salinity Range // degrees C, practical
}

func (s *survey) describeStations() *StationsReport {
	if s.water.stations == nil {
		return nil
	}
	records := &s.water.records
	r := &StationsReport{
		Stations: s.water.stations.Len(), Records: len(records.X), Timed: records.UTC != nil, MaxGap: s.job.Water.MaxGap, Casts: records.Depth != nil,
		Temperature: rangeOf(records.Temperature), Salinity: rangeOf(records.Salinity),
	}
	if r.Timed {
		times := rangeOf(records.UTC)
		r.From, r.To = utcTime(times.Low), utcTime(times.High)
	}
	if r.Casts {
		depths := rangeOf(records.Depth)
		r.Depth = s.heights(span{depths.Low, depths.High})
	}
	return r
}

// rangeOf returns the least and the greatest of finite numbers.
func rangeOf(values []float64) Range {
	v := emptySpan()
	v.addFinite(values)
	return Range{v.low, v.high}
}
