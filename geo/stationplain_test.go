package geo

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// plainWater is the water at a point, written out: of every station whose record
// reaches the time, the profile is interpolated in time depth by depth and integrated
// between all the depths that occur; all stations are then sorted by distance.
func plainWater(r StationRecords, maxGap, x, y, utc, depth float64) (temperature, salinity float64) {
	type near struct {
		d2   float64
		rows []int
	}
	rows := map[string][]int{}
	var order []string
	for i := range r.X {
		name := fmt.Sprint(r.X[i], r.Y[i])
		if rows[name] == nil {
			order = append(order, name)
		}
		rows[name] = append(rows[name], i)
	}
	var stations []near
	for _, name := range order {
		of := rows[name]
		first, last := plainSpan(r, of)
		if r.UTC != nil && !(utc >= first-maxGap && utc <= last+maxGap) {
			continue
		}
		dx, dy := x-r.X[of[0]], y-r.Y[of[0]]
		stations = append(stations, near{d2: dx*dx + dy*dy, rows: of})
	}
	slices.SortStableFunc(stations, func(a, b near) int { return cmp.Compare(a.d2, b.d2) })
	if len(stations) > 8 {
		stations = stations[:8]
	}
	var t, s, weights float64
	for _, n := range stations {
		oneT, oneS := plainMean(r, n.rows, r.Temperature, utc, depth), plainMean(r, n.rows, r.Salinity, utc, depth)
		if math.Sqrt(n.d2) < 0.001 {
			return oneT, oneS
		}
		t, s, weights = t+oneT/n.d2, s+oneS/n.d2, weights+1/n.d2
	}
	return t / weights, s / weights
}

// plainSpan returns the first and the last time of some rows.
func plainSpan(r StationRecords, of []int) (first, last float64) {
	first, last = math.Inf(1), math.Inf(-1)
	for _, row := range of {
		if r.UTC != nil {
			first, last = min(first, r.UTC[row]), max(last, r.UTC[row])
		}
	}
	return first, last
}

// plainMean integrates a station's profile at a time from 0 to a depth.
func plainMean(r StationRecords, of []int, value []float64, utc, depth float64) float64 {
	before, after := math.Inf(-1), math.Inf(1) // the times of the casts on either side
	for _, row := range of {
		if r.UTC != nil && r.UTC[row] <= utc {
			before = max(before, r.UTC[row])
		}
		if r.UTC != nil && r.UTC[row] >= utc {
			after = min(after, r.UTC[row])
		}
	}
	at := func(d float64) float64 {
		a, okA := plainValue(r, of, value, before, d)
		b, okB := plainValue(r, of, value, after, d)
		switch {
		case !okA:
			return b
		case !okB || r.UTC == nil || before == after:
			return a
		}
		return (a*(after-utc) + b*(utc-before)) / (after - before)
	}
	if r.Depth == nil || depth <= 0 {
		return at(0)
	}
	cuts := []float64{0, depth}
	for _, row := range of {
		if r.Depth[row] < depth {
			cuts = append(cuts, r.Depth[row])
		}
	}
	slices.Sort(cuts)
	sum := 0.0
	for k := 1; k < len(cuts); k++ {
		sum += (cuts[k] - cuts[k-1]) * (at(cuts[k-1]) + at(cuts[k])) / 2
	}
	return sum / depth
}

// plainValue returns the value at a depth of the cast with a time.
func plainValue(r StationRecords, of []int, value []float64, utc, depth float64) (float64, bool) {
	up, down := -1, -1 // rows on either side
	for _, row := range of {
		if r.UTC != nil && r.UTC[row] != utc {
			continue
		}
		d := r.depth(row)
		if d <= depth && (up < 0 || d > r.depth(up)) {
			up = row
		}
		if d >= depth && (down < 0 || d < r.depth(down)) {
			down = row
		}
	}
	switch {
	case up < 0 && down < 0:
		return 0, false
	case up < 0:
		return value[down], true
	case down < 0 || up == down:
		return value[up], true
	}
	w := (depth - r.Depth[up]) / (r.Depth[down] - r.Depth[up])
	return value[up] + w*(value[down]-value[up]), true
}
