package geo

import (
	"errors"
	"math"
	"sync"
	"testing"
	"time"
)

// tide returns the records of a made-up tide of 3 m amplitude every six minutes for two
// days, fastest at the time given: period 12.4206012 h, that of the tide M2 (speed
// 28.9841042 degrees an hour; Schureman 1958, table 2).
func tide(fastest float64) (utc, level []float64) {
	const period = 3600 * 360 / 28.9841042
	for k := range 481 {
		at := fastest - 86400 - 77 + 360*float64(k)
		utc = append(utc, at)
		level = append(level, 3*math.Sin(2*math.Pi*(at-fastest)/period))
	}
	return utc, level
}

// mustGauges returns gauges that are right.
func mustGauges(t testing.TB, r GaugeRecords, zero, maxGap float64) *Gauges {
	t.Helper()
	g, err := NewGauges(r, zero, maxGap)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func TestGaugeByHand(t *testing.T) {
	g := mustGauges(t, GaugeRecords{
		UTC: []float64{10, 20, 40, 45}, Level: []float64{1, 2, 4, 3.5},
	}, 0.25, 10)
	none := math.NaN()
	for _, tc := range []struct {
		name       string
		utc, level float64
	}{
		{"first record", 10, 1.25},
		{"a quarter on, gap as long as the limit", 12.5, 1.5},
		{"record before a gap", 20, 2.25},
		{"just in the gap", math.Nextafter(20, 21), none},
		{"in the gap", 30, none},
		{"record after the gap", 40, 4.25},
		{"falling", 41, 4.15},
		{"last record", 45, 3.75},
		{"after", math.Nextafter(45, 46), none},
		{"before", math.Nextafter(10, 9), none},
		{"NaN", none, none},
		{"infinite", math.Inf(-1), none},
	} {
		level := []float64{0}
		g.Add(level, nil, nil, []float64{tc.utc})
		if !same(level[0], tc.level) {
			t.Errorf("%s: level %v, want %v", tc.name, level[0], tc.level)
		}
		if recording := g.Recording(tc.utc); (recording == 1) != (tc.level == tc.level) || recording > 1 {
			t.Errorf("%s: %d gauges have a level of %v", tc.name, recording, tc.level)
		}
	}
	level := []float64{5, none}
	g.Add(level, nil, nil, []float64{10, 10})
	if level[0] != 6.25 || !math.IsNaN(level[1]) {
		t.Errorf("over 5 and none: %v, want [6.25 NaN]", level)
	}
}

// TestGaugePrecision compares times in any order with a plain search and an
// interpolation in 200-bit numbers, at the size of UTC seconds today.
func TestGaugePrecision(t *testing.T) {
	rng := newRand(t, 31)
	var utc, levels []float64
	at := 1.7e9
	for range 2000 {
		at += 30 + 600*rng.Float64()*rng.Float64()
		utc, levels = append(utc, at), append(levels, 6*rng.Float64()-3)
	}
	g := mustGauges(t, GaugeRecords{UTC: utc, Level: levels}, 0, math.Inf(1))
	const n = 5000
	when, level := make([]float64, n), make([]float64, n)
	for i := range when {
		when[i] = utc[0] + (utc[len(utc)-1]-utc[0])*rng.Float64()
	}
	copy(when, utc) // the records themselves, too
	g.Add(level, nil, nil, when)
	for i := range when {
		k := 0
		for k+2 < len(utc) && utc[k+1] <= when[i] {
			k++
		}
		if want := exactBetween(when[i], utc[k:], levels[k:]); math.Abs(level[i]-want) > 1e-14 {
			t.Fatalf("at %v: %.17g, want %.17g", when[i], level[i], want)
		}
		if i < len(utc) && level[i] != levels[i] {
			t.Fatalf("at record %d: %v, want %v", i, level[i], levels[i])
		}
	}
}

// TestGaugeAgainstCloudTimes takes points within a minute of the fastest tide, whose
// cloud times are GPS seconds by the difference published for the day, and wants
// the level of the gauge's UTC. Leap seconds forgotten move it by millimetres.
func TestGaugeAgainstCloudTimes(t *testing.T) {
	epoch := time.Date(1980, 1, 6, 0, 0, 0, 0, time.UTC)
	for _, tc := range []struct {
		source  string
		fastest time.Time
		ahead   float64 // GPS - UTC, s
	}{
		{"IERS Bulletin C 52 (2016), after 2017-01-01", time.Date(2026, 5, 9, 23, 59, 30, 0, time.UTC), 18}, // over a week's end
		{"IERS Bulletin C 49 (2015), before 2017-01-01", time.Date(2016, 12, 30, 11, 20, 0, 0, time.UTC), 17},
	} {
		utc, levels := tide(float64(tc.fastest.Unix()))
		g := mustGauges(t, GaugeRecords{UTC: utc, Level: levels}, 0, 3600)
		first := tc.fastest.Add(-time.Minute).Sub(epoch).Seconds() + tc.ahead
		week := int(math.Floor(first / 604800))
		for name, zero := range map[string]float64{"gps-adjusted": 1e9, "gps-week": 604800 * float64(week)} {
			scale, err := ParseTimeScale(name, map[string]int{"gps-week": week}[name])
			if err != nil {
				t.Fatal(err)
			}
			worst := math.Inf(1)
			for step := range 120 {
				when := float64(tc.fastest.Unix()-60) + float64(step) + 0.25
				cloud := when - float64(epoch.Unix()) + tc.ahead - zero
				level := []float64{0}
				g.Add(level, nil, nil, []float64{scale.UTC(cloud)})
				want := tideAt(when, utc, levels)
				if math.Abs(level[0]-want) > 1e-9 {
					t.Fatalf("%s, %s: level at %.2f is %.12f, want %.12f", tc.source, name, when, level[0], want)
				}
				worst = min(worst, math.Abs(tideAt(when+tc.ahead, utc, levels)-want))
			}
			if worst < 0.006 { // 3 m 2 pi/period 17 s = 7.2 mm
				t.Errorf("%s: forgotten leap seconds move the level by %.4f m, too little to be seen", name, worst)
			}
		}
	}
}

// tideAt interpolates the records in 200-bit numbers.
func tideAt(when float64, utc, levels []float64) float64 {
	k := 0
	for utc[k+1] <= when {
		k++
	}
	return exactBetween(when, utc[k:], levels[k:])
}

// TestTwoGaugesLinear moves along the line between two gauges, where weights by inverse
// distance give the straight line.
func TestTwoGaugesLinear(t *testing.T) {
	const x0, y0 = 7012000, 512000
	r := GaugeRecords{
		Name: []string{"mole", "mole", "weir", "weir"}, UTC: []float64{0, 100, 0, 100}, Level: []float64{0.2, 0.2, 1.2, 1.2},
		X: []float64{x0, x0, x0 + 300, x0 + 300}, Y: []float64{y0, y0, y0 + 400, y0 + 400},
	}
	g := mustGauges(t, r, 0, 100)
	for k := range 501 {
		w := float64(k) / 500
		level := []float64{0}
		g.Add(level, []float64{x0 + 300*w}, []float64{y0 + 400*w}, []float64{33})
		if want := 0.2 + w; math.Abs(level[0]-want) > 1e-11 {
			t.Fatalf("at %v of the line: %v, want %v", w, level[0], want)
		}
	}
	level := []float64{0}
	g.Add(level, []float64{x0 + 300 + 0.0006}, []float64{y0 + 400 - 0.0006}, []float64{0})
	if level[0] != 1.2 {
		t.Errorf("within 1 mm of the weir: %v, want 1.2", level[0])
	}
}

// TestGaugesPlain compares random gauges with gaps of their own with the weighted mean
// written out.
func TestGaugesPlain(t *testing.T) {
	rng := newRand(t, 32)
	names, records := []string{"a", "b", "c", "d"}, GaugeRecords{}
	series := map[string][2][]float64{}
	clock := map[string]float64{"a": 1.7e9, "b": 1.7e9 + 5000, "c": 1.7e9 - 3000, "d": 1.7e9}
	places := map[string][2]float64{}
	for _, name := range names {
		places[name] = [2]float64{7e6 + 3000*rng.Float64(), 5e5 + 3000*rng.Float64()}
	}
	for range 400 { // rows of all gauges, mixed
		name := names[rng.IntN(len(names))]
		clock[name] += 100 + 700*rng.Float64()
		s := series[name]
		series[name] = [2][]float64{append(s[0], clock[name]), append(s[1], rng.Float64())}
		records.Name, records.UTC = append(records.Name, name), append(records.UTC, clock[name])
		records.Level = append(records.Level, series[name][1][len(s[1])])
		records.X, records.Y = append(records.X, places[name][0]), append(records.Y, places[name][1])
	}
	g := mustGauges(t, records, -2, 600)
	partials, wholes, nones := 0, 0, 0
	for range 5000 {
		x, y, utc := 7e6+3000*rng.Float64(), 5e5+3000*rng.Float64(), 1.7e9-4000+60000*rng.Float64()
		level, sum, weights, used := []float64{1}, 0.0, 0.0, 0
		g.Add(level, []float64{x}, []float64{y}, []float64{utc})
		for _, name := range names {
			at, levels := series[name][0], series[name][1]
			for k := 1; k < len(at); k++ {
				if at[k-1] <= utc && utc < at[k] && at[k]-at[k-1] <= 600 {
					w := 1 / math.Hypot(x-places[name][0], y-places[name][1])
					sum += w * exactBetween(utc, at[k-1:], levels[k-1:])
					weights += w
					used++
				}
			}
		}
		if want := 1 - 2 + sum/weights; used == 0 != math.IsNaN(level[0]) || math.Abs(level[0]-want) > 1e-12 {
			t.Fatalf("at %v %v %v: %v, want %v of %d gauges", x, y, utc, level[0], want, used)
		}
		if got := g.Recording(utc); got != used || g.Len() != len(names) {
			t.Fatalf("at %v %d of %d gauges have a level, want %d of %d", utc, got, g.Len(), used, len(names))
		}
		switch used {
		case 0:
			nones++
		case len(names):
			wholes++
		default:
			partials++
		}
	}
	if partials == 0 || wholes == 0 || nones == 0 {
		t.Errorf("%d points with some, %d with all and %d without gauges, want each", partials, wholes, nones)
	}
	level := []float64{0, 0}
	g.Add(level, []float64{math.NaN(), math.Inf(1)}, []float64{5e5, 5e5}, []float64{1.7e9 + 10000, 1.7e9 + 10000})
	if !math.IsNaN(level[0]) || !math.IsNaN(level[1]) {
		t.Errorf("at positions that are not finite: %v, want NaN", level)
	}
}

func TestNewGaugesRefuses(t *testing.T) {
	good := func() GaugeRecords {
		return GaugeRecords{
			Name: []string{"mole", "weir", "mole", "weir"}, UTC: []float64{1, 1, 2, 2}, Level: []float64{0, 1, 0, 1},
			X: []float64{5, 6, 5, 6}, Y: []float64{7, 8, 7, 8},
		}
	}
	mustGauges(t, good(), 0, 1)
	for _, tc := range []struct {
		name   string
		change func(*GaugeRecords)
		index  int
		want   string
	}{
		{"repeat", func(r *GaugeRecords) { r.UTC[3] = 1 }, 3, `record 4: gauge "weir": time 1 repeats`},
		{"disorder", func(r *GaugeRecords) { r.UTC[2] = 0.5 }, 2, `record 3: gauge "mole": time 0.5 comes after 1`},
		{"time NaN", func(r *GaugeRecords) { r.UTC[1] = math.NaN() }, 1, "not finite"},
		{"level infinite", func(r *GaugeRecords) { r.Level[0] = math.Inf(1) }, 0, "not finite"},
		{"position NaN", func(r *GaugeRecords) { r.Y[2] = math.NaN() }, 2, "coordinate is not finite"},
		{"moved", func(r *GaugeRecords) { r.X[2] = 5.5 }, 2, `gauge "mole" is at 5.5 7, before at 5 7`},
		{"no name", func(r *GaugeRecords) { r.Name[1] = "" }, 1, "name of the gauge is empty"},
		{"one place", func(r *GaugeRecords) { r.X[1], r.Y[1] = 5, 7 }, 1, `gauge "weir" is where gauge "mole" is`},
	} {
		r := good()
		tc.change(&r)
		_, err := NewGauges(r, 0, 1)
		wantError(t, err, tc.want)
		var at *RecordError
		if !errors.As(err, &at) || at.Index != tc.index {
			t.Errorf("%s: %#v, want a RecordError with index %d", tc.name, err, tc.index)
		}
	}
	r := good()
	r.X, r.Y = nil, nil
	_, err := NewGauges(r, 0, 1)
	wantError(t, err, "2 gauges without positions", "x and y")
	_, err = NewGauges(GaugeRecords{UTC: []float64{1}, Level: []float64{1}}, 0, 1)
	wantError(t, err, "gauge has 1 record", "at least 2")
	_, err = NewGauges(GaugeRecords{}, 0, 1)
	wantError(t, err, "no gauge records")
	_, err = NewGauges(good(), math.NaN(), 1)
	wantError(t, err, "zero of the gauge")
	for _, gap := range []float64{0, -1, math.NaN()} {
		_, err = NewGauges(good(), 0, gap)
		wantError(t, err, "maximum gap", "more than 0")
	}
	mustPanic(t, func() { r := good(); r.Level = r.Level[1:]; _, _ = NewGauges(r, 0, 1) })
	mustPanic(t, func() { r := good(); r.Y = nil; _, _ = NewGauges(r, 0, 1) })
	mustPanic(t, func() { mustGauges(t, good(), 0, 1).Add(make([]float64, 2), nil, nil, make([]float64, 2)) })
	mustPanic(t, func() { mustGauges(t, good(), 0, 1).Add(make([]float64, 2), nil, nil, make([]float64, 1)) })
}

// TestGaugesByPosition leaves the names out.
func TestGaugesByPosition(t *testing.T) {
	g := mustGauges(t, GaugeRecords{
		UTC: []float64{0, 0, 9, 9}, Level: []float64{1, 2, 1, 2}, X: []float64{0, 10, 0, 10}, Y: []float64{0, 0, 0, 0},
	}, 0, 9)
	level := []float64{0}
	g.Add(level, []float64{2}, []float64{0}, []float64{3})
	if math.Abs(level[0]-1.2) > 1e-15 {
		t.Errorf("level %v, want 1.2", level[0])
	}
}

func TestGaugesShared(t *testing.T) {
	utc, levels := tide(1.7e9)
	far := make([]float64, len(utc))
	r := GaugeRecords{UTC: append(utc, utc...), Level: append(levels, levels...), X: append(far, far...), Y: append(far, far...)}
	for i := range utc {
		r.X[i] = 1000
	}
	g := mustGauges(t, r, 0, 3600)
	x := make([]float64, len(utc))
	var wait sync.WaitGroup
	for range 4 {
		wait.Go(func() {
			level := make([]float64, len(utc))
			g.Add(level, x, x, utc)
			for i := range level {
				if level[i] != levels[i] {
					t.Errorf("record %d: %v, want %v", i, level[i], levels[i])
				}
			}
		})
	}
	wait.Wait()
	level := make([]float64, len(utc))
	if n := testing.AllocsPerRun(10, func() { g.Add(level, x, x, utc) }); n != 0 {
		t.Errorf("%v allocations a chunk, want 0", n)
	}
}
