package geo

import (
	"fmt"
	"math"
	"time"
)

const (
	// gpsEpoch is 1980-01-06T00:00:00Z, GPS time 0, in POSIX seconds.
	gpsEpoch = 315964800
	// adjustedZero is the GPS time of adjusted standard GPS time 0 (ASPRS LAS 1.4
	// R15, 2019, section 2.4), 2011-09-14T01:46:25Z.
	adjustedZero = 1e9
	// secondsPerWeek is the length of a GPS week (IS-GPS-200, section 3.3.4).
	secondsPerWeek = 604800
	// lastSecond is 9999-12-31T23:59:59Z in POSIX seconds, the end of RFC 3339.
	lastSecond = 253402300799
)

// leapStarts holds the POSIX second at which each leap second since the GPS epoch
// has passed; entry k is the start of GPS - UTC = k+1 s. Source: IERS Bulletin C, all
// numbers to 70 (July 2025).
var leapStarts = [...]float64{
	362793600,  // 1981-07-01
	394329600,  // 1982-07-01
	425865600,  // 1983-07-01
	489024000,  // 1985-07-01
	567993600,  // 1988-01-01
	631152000,  // 1990-01-01
	662688000,  // 1991-01-01
	709948800,  // 1992-07-01
	741484800,  // 1993-07-01
	773020800,  // 1994-07-01
	820454400,  // 1996-01-01
	867715200,  // 1997-07-01
	915148800,  // 1999-01-01
	1136073600, // 2006-01-01
	1230768000, // 2009-01-01
	1341100800, // 2012-07-01
	1435708800, // 2015-07-01
	1483228800, // 2017-01-01
}

// TimeScale says what the seconds of a time column count. The zero value counts
// GPS seconds since 1980-01-06T00:00:00Z; ParseTimeScale gives those that files use.
//
// UTC is given as POSIX seconds, which have no number of their own for a leap
// second. The rule here is the formula of POSIX: the leap second 23:59:60 has the
// numbers of the second that follows it, 00:00:00, so UTC steps back by 1 s at the
// leap second's end, and from UTC those numbers mean the second that follows.
//
// After the last leap second of the table (18 s since 2017-01-01) the difference
// stays as it is. Before 1980-01-06 there is no GPS time: the result is NaN.
type TimeScale struct {
	utc  bool
	zero float64 // GPS time (s) of the scale's second 0
}

// ParseTimeScale returns the time scale with a name:
//
//   - "gps-adjusted": adjusted standard GPS time, GPS seconds less 1e9;
//   - "gps-week": seconds of the GPS week given, counted from 1980-01-06 without
//     rollover (so 2086 and not 38); the seconds may run past the week's end;
//   - "utc": POSIX seconds since 1970-01-01.
//
// It is an error if week is below 1 for "gps-week" or is not 0 for another scale.
func ParseTimeScale(name string, week int) (TimeScale, error) {
	if name != "gps-week" && week != 0 {
		return TimeScale{}, fmt.Errorf(`week is %d with time scale %q, want a week only with "gps-week"`, week, name)
	}
	switch name {
	case "gps-adjusted":
		return TimeScale{zero: adjustedZero}, nil
	case "gps-week":
		if week < 1 {
			return TimeScale{}, fmt.Errorf("week is %d, want the GPS week counted from 1980-01-06 without rollover", week)
		}
		return TimeScale{zero: float64(week) * secondsPerWeek}, nil
	case "utc":
		return TimeScale{utc: true}, nil
	}
	return TimeScale{}, fmt.Errorf(`time scale is %q, want "gps-adjusted", "gps-week" or "utc"`, name)
}

// UTC returns the UTC (POSIX seconds) of a time on the scale, to the rounding of
// the result. It is NaN for NaN and for a GPS time before 1980-01-06.
func (s TimeScale) UTC(seconds float64) float64 {
	if s.utc {
		return seconds
	}
	gps := seconds + s.zero
	if !(gps >= 0) {
		return math.NaN()
	}
	return seconds + (s.zero + gpsEpoch - leapsAtGPS(gps))
}

// FromUTC returns the time on the scale of a UTC (POSIX seconds); the inverse of
// UTC except within a leap second, where it gives the time 1 s later. It is NaN for
// NaN and, on the GPS scales, before 1980-01-06.
func (s TimeScale) FromUTC(utc float64) float64 {
	if s.utc {
		return utc
	}
	if !(utc >= gpsEpoch) {
		return math.NaN()
	}
	return utc + (leapsAtUTC(utc) - gpsEpoch - s.zero)
}

// Time returns the UTC of a time on the scale as a time.Time. It is the zero Time
// where UTC is NaN or outside the years 1 to 9999.
func (s TimeScale) Time(seconds float64) time.Time {
	utc := s.UTC(seconds)
	if !(utc >= float64(time.Time{}.Unix()) && utc <= lastSecond) {
		return time.Time{}
	}
	whole, part := math.Modf(utc)
	return time.Unix(int64(whole), int64(math.Round(part*1e9))).UTC()
}

// leapsAtUTC returns GPS - UTC (s) at a UTC in POSIX seconds.
func leapsAtUTC(utc float64) float64 {
	for k := len(leapStarts); k > 0; k-- {
		if utc >= leapStarts[k-1] {
			return float64(k)
		}
	}
	return 0
}

// leapsAtGPS returns GPS - UTC (s) at a GPS time in seconds.
func leapsAtGPS(gps float64) float64 {
	for k := len(leapStarts); k > 0; k-- {
		if gps >= leapStarts[k-1]-gpsEpoch+float64(k) {
			return float64(k)
		}
	}
	return 0
}
