package geo

import (
	"errors"
	"math"
	"testing"
)

// goodRecords returns two named stations with two casts each, which are right.
func goodRecords() StationRecords {
	return StationRecords{
		Name: []string{"pier", "pier", "pier", "buoy", "buoy", "buoy"},
		X:    []float64{1, 1, 1, 2, 2, 2}, Y: []float64{3, 3, 3, 4, 4, 4},
		Temperature: []float64{15, 14, 16, 17, 16, 18}, Salinity: []float64{30, 31, 30, 29, 30, 29},
		UTC: []float64{0, 0, 60, 0, 0, 60}, Depth: []float64{1, 0, 0, 1, 0, 0},
	}
}

func TestNewStationsRefuses(t *testing.T) {
	mustStations(t, goodRecords(), 1)
	for _, tc := range []struct {
		name   string
		change func(*StationRecords)
		index  int
		want   string
	}{
		{"depth twice in a cast", func(r *StationRecords) { r.Depth[1] = 1 }, 1, `record 2: station "pier" has depth 1 m twice in one cast`},
		{"time twice", func(r *StationRecords) { r.Depth = nil }, 1, `record 2: station "pier" has time 0 twice, want each time once, or a column depth where the rows are a cast`},
		{"two records", func(r *StationRecords) { r.Depth, r.UTC = nil, nil }, 1, `station "pier" has two records`},
		{"two records unnamed", func(r *StationRecords) { r.Depth, r.UTC, r.Name = nil, nil, nil }, 1, "station has two records, want one"},
		{"some without depth", func(r *StationRecords) { r.Depth[4] = math.NaN() }, 4, "record 5: depth is not finite, want a depth in every record or no depths"},
		{"some without time", func(r *StationRecords) { r.UTC[0] = math.NaN() }, 0, "want a time in every record or no times"},
		{"negative depth", func(r *StationRecords) { r.Depth[2] = -0.25 }, 2, "depth is -0.25 m, want 0 or more"},
		{"temperature NaN", func(r *StationRecords) { r.Temperature[3] = math.NaN() }, 3, "want temperature and salinity"},
		{"salinity infinite", func(r *StationRecords) { r.Salinity[5] = math.Inf(1) }, 5, "want temperature and salinity"},
		{"x NaN", func(r *StationRecords) { r.X[3] = math.NaN() }, 3, "coordinate is not finite"},
		{"no name", func(r *StationRecords) { r.Name[1] = "" }, 1, "name of the station is empty"},
		{"moved", func(r *StationRecords) { r.Y[5] = 4.5 }, 5, `station "buoy" is at 2 4.5, before at 2 4`},
		{"two names", func(r *StationRecords) { r.Name[2] = "quay" }, 2, `station "quay" is where station "pier" is, want one name for one place`},
	} {
		r := goodRecords()
		tc.change(&r)
		_, err := NewStations(r, 1)
		if err == nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		wantError(t, err, tc.want)
		var at *RecordError
		if !errors.As(err, &at) || at.Index != tc.index {
			t.Errorf("%s: %#v, want a RecordError with index %d", tc.name, err, tc.index)
		}
	}
	_, err := NewStations(StationRecords{}, 1)
	wantError(t, err, "no station records")
	for _, gap := range []float64{0, -1, math.NaN()} {
		_, err = NewStations(goodRecords(), gap)
		wantError(t, err, "maximum gap", "more than 0")
	}
}

func TestStationsLengths(t *testing.T) {
	mustPanic(t, func() { r := goodRecords(); r.Y = r.Y[1:]; _, _ = NewStations(r, 1) })
	mustPanic(t, func() { r := goodRecords(); r.UTC = r.UTC[1:]; _, _ = NewStations(r, 1) })
	c := make([]float64, 3)
	mustPanic(t, func() { mustStations(t, goodRecords(), 1).Fill(c, c, nil, c, c, c, nil) })
	mustPanic(t, func() { mustStations(t, goodRecords(), 1).Fill(c, c, nil, c, c, nil, c) })
	r := goodRecords()
	r.Depth, r.UTC = nil, nil
	for _, column := range []*[]float64{&r.X, &r.Y, &r.Temperature, &r.Salinity} {
		*column = []float64{(*column)[0], (*column)[3]}
	}
	r.Name = nil
	s := mustStations(t, r, 1)
	s.Fill(c, make([]float64, 3), rowsTo(3), []float64{1, 2, 1.5}, []float64{3, 4, 3.5}, nil, nil)
	if c[0] != 15 || c[1] != 17 || c[2] != 16 {
		t.Errorf("at both stations and half way: %v, want [15 17 16]", c)
	}
}

// TestStationsRepeatAcrossNames keeps one station for a name, whatever the order of rows.
func TestStationsRepeatAcrossNames(t *testing.T) {
	r := goodRecords()
	r.Name[1], r.Name[4] = "buoy", "pier"
	r.X[1], r.Y[1], r.X[4], r.Y[4] = 2, 4, 1, 3
	s := mustStations(t, r, 1)
	if len(s.stations) != 2 || len(s.stations[0].records) != 2 || len(s.stations[1].records) != 2 {
		t.Errorf("%d stations, want 2 with 2 casts each", len(s.stations))
	}
	if gotT, gotS := fillOne(s, 1, 3, 0, 0); gotT != 16 || gotS != 30 {
		t.Errorf("at the pier: %v %v, want 16 30", gotT, gotS)
	}
}
