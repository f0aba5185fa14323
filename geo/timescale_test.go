package geo

import (
	"math"
	"testing"
	"time"
)

// scale returns a time scale that must exist.
func scale(t testing.TB, name string, week int) TimeScale {
	t.Helper()
	s, err := ParseTimeScale(name, week)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestPublishedPairs holds pairs of GPS and UTC that others have printed.
func TestPublishedPairs(t *testing.T) {
	const las = "ASPRS LAS 1.4 R15 (2019) section 2.4"
	for _, tc := range []struct {
		utc, source string
		gps         float64
		week        int
		ofWeek      float64
	}{
		{"1980-01-06T00:00:00Z", "IS-GPS-200, section 3.3.4: the GPS epoch", 0, 0, 0},
		{"2011-09-14T01:46:25Z", las + ": adjusted 0 is 01:46:40 GPS, GPS - UTC 15 s", 1e9, 1653, 265600},
		{"2013-07-01T00:00:00Z", las + ", GPS - UTC 16 s", 1056672016, 1747, 86416},
		{"2017-01-01T00:00:00Z", las + ", GPS - UTC 18 s", 1167264018, 1930, 18},
		{"2020-01-01T00:00:00Z", las + ", GPS - UTC 18 s", 1261872018, 2086, 259218},
		{"2024-06-24T00:00:00Z", las + ", GPS - UTC 18 s", 1403222418, 2320, 86418},
	} {
		at, err := time.Parse(time.RFC3339, tc.utc)
		if err != nil {
			t.Fatal(err)
		}
		check := func(s TimeScale, seconds float64) {
			if got := s.UTC(seconds); got != float64(at.Unix()) {
				t.Errorf("%s: UTC(%v) = %v, want %v (%s)", tc.utc, seconds, got, at.Unix(), tc.source)
			}
			if got := s.FromUTC(float64(at.Unix())); got != seconds {
				t.Errorf("%s: FromUTC = %v, want %v (%s)", tc.utc, got, seconds, tc.source)
			}
			if got := s.Time(seconds); !got.Equal(at) || got.Location() != time.UTC {
				t.Errorf("%s: Time(%v) = %v (%s)", tc.utc, seconds, got, tc.source)
			}
		}
		check(TimeScale{}, tc.gps)
		check(scale(t, "gps-adjusted", 0), tc.gps-1e9)
		check(scale(t, "utc", 0), float64(at.Unix()))
		if tc.week > 0 {
			check(scale(t, "gps-week", tc.week), tc.ofWeek)
			check(scale(t, "gps-week", tc.week-1), tc.ofWeek+604800) // past its week's end
		}
	}
}

// iersList is the list of TAI - UTC since 1980 by NTP time (s since 1900-01-01) and
// date: IERS Earth Orientation Centre, list of leap seconds, July 2025 (Bulletin C
// 70). GPS time is TAI - 19 s (IS-GPS-200).
var iersList = []struct {
	ntp      int64
	taiToUTC float64
	date     string
}{
	{2524521600, 19, "1980-01-01"},
	{2571782400, 20, "1981-07-01"},
	{2603318400, 21, "1982-07-01"},
	{2634854400, 22, "1983-07-01"},
	{2698012800, 23, "1985-07-01"},
	{2776982400, 24, "1988-01-01"},
	{2840140800, 25, "1990-01-01"},
	{2871676800, 26, "1991-01-01"},
	{2918937600, 27, "1992-07-01"},
	{2950473600, 28, "1993-07-01"},
	{2982009600, 29, "1994-07-01"},
	{3029443200, 30, "1996-01-01"},
	{3076704000, 31, "1997-07-01"},
	{3124137600, 32, "1999-01-01"},
	{3345062400, 33, "2006-01-01"},
	{3439756800, 34, "2009-01-01"},
	{3550089600, 35, "2012-07-01"},
	{3644697600, 36, "2015-07-01"},
	{3692217600, 37, "2017-01-01"},
}

func TestLeapSeconds(t *testing.T) {
	if got, want := len(leapStarts), len(iersList)-1; got != want {
		t.Fatalf("%d leap seconds, want %d", got, want)
	}
	ntpEpoch := time.Date(1900, 1, 1, 0, 0, 0, 0, time.UTC).Unix()
	gpsZero := time.Date(1980, 1, 6, 0, 0, 0, 0, time.UTC).Unix()
	for _, row := range iersList[1:] {
		start, err := time.Parse(time.DateOnly, row.date)
		if err != nil || start.Unix() != row.ntp+ntpEpoch {
			t.Fatalf("%s: NTP time %d does not fit the date", row.date, row.ntp)
		}
		utc, lead := float64(start.Unix()), row.taiToUTC-19
		gps := float64(start.Unix()-gpsZero) + lead
		for _, tc := range []struct{ gps, utc float64 }{
			{gps, utc},
			{gps + 0.5, utc + 0.5},
			{gps - 0.25, utc + 0.75},
			{gps - 1, utc}, // 23:59:60 has the numbers of 00:00:00
			{gps - 1.25, utc - 0.25},
			{gps - 2, utc - 1},
		} {
			if got := (TimeScale{}).UTC(tc.gps); got != tc.utc {
				t.Errorf("%s: UTC(%.2f) = %.2f, want %.2f", row.date, tc.gps, got, tc.utc)
			}
		}
		for _, tc := range []struct{ utc, gps float64 }{{utc, gps}, {utc + 0.75, gps + 0.75}, {utc - 0.25, gps - 1.25}} {
			if got := (TimeScale{}).FromUTC(tc.utc); got != tc.gps {
				t.Errorf("%s: FromUTC(%.2f) = %.2f, want %.2f", row.date, tc.utc, got, tc.gps)
			}
		}
	}
}

func TestTimeScaleRoundTrip(t *testing.T) {
	rng := newRand(t, 3)
	scales := []TimeScale{{}, scale(t, "gps-adjusted", 0), scale(t, "gps-week", 2086), scale(t, "utc", 0)}
	for range 20000 {
		utc := 315964800 + 1.6e9*rng.Float64()
		for _, s := range scales {
			if back := s.UTC(s.FromUTC(utc)); math.Abs(back-utc) > 0x1p-21 { // two roundings of 2e9 s
				t.Fatalf("%+v: %.9f comes back as %.9f", s, utc, back)
			}
		}
	}
}

func TestTimeScaleLimits(t *testing.T) {
	adjusted := scale(t, "gps-adjusted", 0)
	for _, tc := range []struct {
		name string
		got  float64
	}{
		{"NaN", adjusted.UTC(math.NaN())},
		{"before the GPS epoch", adjusted.UTC(-1e9 - 1)},
		{"minus infinity", adjusted.UTC(math.Inf(-1))},
		{"back from NaN", adjusted.FromUTC(math.NaN())},
		{"back from before the GPS epoch", adjusted.FromUTC(315964799)},
		{"utc NaN", scale(t, "utc", 0).UTC(math.NaN())},
	} {
		if !math.IsNaN(tc.got) {
			t.Errorf("%s: %v, want NaN", tc.name, tc.got)
		}
	}
	utc := scale(t, "utc", 0)
	for _, seconds := range []float64{math.NaN(), math.Inf(1), math.Inf(-1), 1e300, -1e300, 253402300800} {
		if got := utc.Time(seconds); !got.IsZero() {
			t.Errorf("Time(%v) = %v, want the zero time", seconds, got)
		}
	}
	if got, want := utc.Time(-0.5), time.Date(1969, 12, 31, 23, 59, 59, 5e8, time.UTC); !got.Equal(want) {
		t.Errorf("Time(-0.5) = %v, want %v", got, want)
	}
}

func TestParseTimeScaleRefuses(t *testing.T) {
	for _, tc := range []struct {
		name string
		week int
		want string
	}{
		{"gps", 0, `"gps"`},
		{"", 0, `"gps-adjusted"`},
		{"gps-week", 0, "week is 0"},
		{"gps-week", -3, "week is -3"},
		{"utc", 2086, "week is 2086"},
		{"gps-adjusted", 1, `only with "gps-week"`},
	} {
		_, err := ParseTimeScale(tc.name, tc.week)
		wantError(t, err, tc.want)
	}
}
