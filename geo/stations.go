package geo

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
)

// StationRecords are the records of water stations, as the rows of a file have them,
// in any order; the columns have one length or, where optional, are nil. Rows of one
// station and time with depths are a cast.
type StationRecords struct {
	X, Y        []float64 // m
	Temperature []float64 // degrees C (ITS-90)
	Salinity    []float64 // practical

	Name  []string  // which station, optional; without it one at each position
	UTC   []float64 // s since 1970, POSIX, optional
	Depth []float64 // m, positive down, optional
}

// Stations gives the temperature and the salinity of the water between stations, over
// time and, from casts, down to a depth. It does not change once made, so goroutines
// may share it.
type Stations struct {
	stations     []station
	index        nearIndex
	changes      []float64 // the times at which a station begins or ends to have water, rising
	timed, casts bool
}

// station is one place with its records over time; it has water from a time to
// another.
type station struct {
	x, y, from, until float64
	records           []stationRecord
	timeline
}

// stationRecord is the water at one time: the same at every depth where the cast is
// nil.
type stationRecord struct {
	utc, gap              float64 // s; gap to the next record, +Inf for the last
	temperature, salinity float64 // of a cast, at the surface
	cast
}

// NewStations returns the stations with the records given. A station with times has
// water up to maxGap (s) before its first and after its last record; +Inf holds them
// for ever. The columns are copied. It panics if their lengths differ.
//
// Errors: no records; maxGap not above 0; and, as *RecordError, a value that is not
// finite (so a time or a depth that only some rows have), a depth below 0, a
// second record of a station for one time and depth, an empty name, a name at two
// places, a place with two names. Whether a formula covers the values is for the
// caller to tell.
func NewStations(r StationRecords, maxGap float64) (*Stations, error) {
	r.checkLengths()
	if err := checkMaxGap(maxGap); err != nil {
		return nil, err
	}
	for row := range r.X {
		if err := r.checkRow(row); err != nil {
			return nil, &RecordError{Index: row, Err: err}
		}
	}
	sites, err := groupSites("station", len(r.X), r.Name, r.X, r.Y)
	if err != nil {
		return nil, err
	}
	if len(sites) == 0 {
		return nil, errors.New("there are no station records, want at least 1")
	}
	s := &Stations{stations: make([]station, len(sites)), timed: r.UTC != nil, casts: r.Depth != nil}
	x, y := make([]float64, len(sites)), make([]float64, len(sites))
	for k := range sites {
		if s.stations[k], err = r.station(&sites[k], maxGap); err != nil {
			return nil, err
		}
		x[k], y[k] = sites[k].x, sites[k].y
		if s.timed {
			s.changes = append(s.changes, s.stations[k].from, s.stations[k].until)
		}
	}
	slices.Sort(s.changes)
	s.index = newNearIndex(x, y)
	return s, nil
}

// checkLengths panics unless the columns have one length or, where optional, are nil.
func (r *StationRecords) checkLengths() {
	n := len(r.X)
	if len(r.Y) != n || len(r.Temperature) != n || len(r.Salinity) != n || r.Name != nil && len(r.Name) != n ||
		r.UTC != nil && len(r.UTC) != n || r.Depth != nil && len(r.Depth) != n {
		panic(errLengths)
	}
}

// checkRow returns what is wrong with the values of a row.
func (r *StationRecords) checkRow(row int) error {
	switch {
	case !isFinite(r.Temperature[row]) || !isFinite(r.Salinity[row]):
		return errors.New("a value is not finite, want temperature and salinity")
	case r.UTC != nil && !isFinite(r.UTC[row]):
		return errors.New("time is not finite, want a time in every record or no times")
	case r.Depth != nil && !isFinite(r.Depth[row]):
		return errors.New("depth is not finite, want a depth in every record or no depths")
	case r.depth(row) < 0:
		return fmt.Errorf("depth is %v m, want 0 or more, positive down", r.Depth[row])
	}
	return nil
}

// utc returns the time of a row, 0 where rows have none.
func (r *StationRecords) utc(row int) float64 {
	if r.UTC == nil {
		return 0
	}
	return r.UTC[row]
}

// depth returns the depth of a row, 0 where rows have none.
func (r *StationRecords) depth(row int) float64 {
	if r.Depth == nil {
		return 0
	}
	return r.Depth[row]
}

// station returns the station at a site, whose rows it sorts by time and depth.
func (r *StationRecords) station(s *site, maxGap float64) (station, error) {
	slices.SortStableFunc(s.rows, func(a, b int) int {
		return cmp.Or(cmp.Compare(r.utc(a), r.utc(b)), cmp.Compare(r.depth(a), r.depth(b)))
	})
	st := station{x: s.x, y: s.y, from: math.Inf(-1), until: math.Inf(1)}
	var utc []float64
	for i, row := range s.rows {
		if i == 0 || r.utc(row) != r.utc(s.rows[i-1]) {
			utc = append(utc, r.utc(row))
			st.records = append(st.records, stationRecord{utc: r.utc(row), temperature: r.Temperature[row], salinity: r.Salinity[row]})
		} else if r.depth(row) == r.depth(s.rows[i-1]) {
			return station{}, &RecordError{Index: row, Err: r.repeat(s, row)}
		}
		last := &st.records[len(st.records)-1]
		last.cast = append(last.cast, castLevel{
			depth: r.depth(row), temperature: r.Temperature[row], salinity: r.Salinity[row],
		})
	}
	for k := range st.records {
		st.records[k].finish(st.records[k+1:])
	}
	if r.UTC != nil {
		st.from, st.until = utc[0]-maxGap, utc[len(utc)-1]+maxGap
	}
	st.timeline = newTimeline(utc)
	return st, nil
}

// finish prepares a record with its levels, given those after it.
func (r *stationRecord) finish(after []stationRecord) {
	r.gap = math.Inf(1)
	if len(after) > 0 {
		r.gap = after[0].utc - r.utc
	}
	if len(r.cast) == 1 {
		r.cast = nil
		return
	}
	r.integrate()
}

// mean returns the means of temperature and salinity from the surface to a depth.
func (r *stationRecord) mean(depth float64) (temperature, salinity float64) {
	if r.cast == nil {
		return r.temperature, r.salinity
	}
	return r.cast.mean(depth)
}

// repeat says how a row repeats another of its station.
func (r *StationRecords) repeat(s *site, row int) error {
	switch {
	case r.Depth != nil:
		return fmt.Errorf("%s has depth %v m twice in one cast, want each depth once", s.label("station"), r.Depth[row])
	case r.UTC != nil:
		return fmt.Errorf("%s has time %s twice, want each time once, or a column depth where the rows are a cast", s.label("station"), decimal(r.UTC[row]))
	}
	return fmt.Errorf("%s has two records, want one, or times or depths that tell them apart", s.label("station"))
}

// Len returns how many stations there are.
func (s *Stations) Len() int { return len(s.stations) }

// HasTimes tells whether the stations have times, so that Fill wants those of points.
func (s *Stations) HasTimes() bool { return s.timed }

// HasDepths tells whether the stations are casts, so that Fill wants depths.
func (s *Stations) HasDepths() bool { return s.casts }
