package geo

import (
	"math"
	"slices"
)

// Fill fills temperature (degrees C) and salinity (practical) of the rows that are
// named with the water at their plan position x, y (m) and time utc (s since 1970,
// POSIX), for casts with the mean from the surface to depth (m, positive down). Other
// rows keep what they have. Both are NaN where there is none: no station has water at
// the time, or a coordinate, a time or a depth that is used is NaN.
//
//   - Each station is linear in time between its records, however far apart, and holds
//     its first and last up to maxGap beyond. One without water at the time drops
//     out, and the next nearest steps in.
//   - A cast is averaged by the trapezoid rule, its ends held to the surface and to the
//     depth; at depth 0 and above the water it is that of the surface. As all this is
//     linear, the mean of the cast interpolated in time is the interpolated mean.
//   - The 8 nearest stations are weighted by inverse distance squared (Shepard 1968);
//     within 1 mm of one it is that one's alone.
//
// The columns have one length (otherwise it panics); utc may be nil without HasTimes,
// depth without HasDepths. A point costs a look at 8 stations, and a search for
// them, among a dozen as long as the near ones have water, when it is far from the
// last point searched for; what comes out does not depend on the points before. Times
// that go on from point to point are looked up fastest.
func (s *Stations) Fill(temperature, salinity []float64, rows []int32, x, y, utc, depth []float64) {
	n := len(temperature)
	if len(salinity) != n || len(x) != n || len(y) != n || s.timed && len(utc) != n || s.casts && len(depth) != n {
		panic(errLengths)
	}
	var near nearest
	var last lately
	when, down := 0.0, 0.0
	for _, i := range rows {
		if s.timed {
			when = utc[i]
		}
		if s.casts {
			down = depth[i]
		}
		if !near.covers(x[i], y[i], when) {
			s.search(&near, x[i], y[i], when)
		}
		temperature[i], salinity[i] = s.mean(&near, &last, x[i], y[i], when, down)
	}
}

// search finds the nearest stations that have water at the time.
func (s *Stations) search(near *nearest, x, y, utc float64) {
	*near = nearest{x: x, y: y, worst: math.Inf(1)}
	near.after, near.until = s.unchanged(utc)
	for _, b := range s.index.of(x, y) {
		if b.distance2() > near.worst {
			break
		}
		st := &s.stations[b.site()]
		if !(utc >= st.from && utc <= st.until) {
			continue
		}
		dx, dy := x-st.x, y-st.y
		near.offer(dx*dx+dy*dy, b.site())
	}
	near.settle()
}

// unchanged returns the times between which the same stations have water as at utc;
// none at a time at which a station begins or ends.
func (s *Stations) unchanged(utc float64) (after, until float64) {
	k, at := slices.BinarySearch(s.changes, utc)
	if at {
		return utc, utc
	}
	after, until = math.Inf(-1), math.Inf(1)
	if k > 0 {
		after = s.changes[k-1]
	}
	if k < len(s.changes) {
		until = s.changes[k]
	}
	return after, until
}

// mean returns the weighted mean of the nearest stations. It is taken from differences
// to one of them, so where all agree it is what they say.
func (s *Stations) mean(near *nearest, last *lately, x, y, utc, depth float64) (temperature, salinity float64) {
	if near.count == 0 || math.IsNaN(depth) {
		return math.NaN(), math.NaN()
	}
	var sumT, sumS, weights float64
	for k, site := range near.site[:near.count] {
		st := &s.stations[site]
		dx, dy := x-st.x, y-st.y
		d2 := dx*dx + dy*dy
		oneT, oneS := st.at(last.record(st, site, utc), utc, depth)
		if d2 < atPlace*atPlace {
			return oneT, oneS
		}
		if k == 0 {
			temperature, salinity = oneT, oneS
		}
		w := 1 / d2
		sumT += w * (oneT - temperature)
		sumS += w * (oneS - salinity)
		weights += w
	}
	return temperature + sumT/weights, salinity + sumS/weights
}

// lately remembers which records stations were last asked for: times of points go on
// from row to row, and stations are often sampled together. It is a guess, which is
// looked at before it is taken, so stations may share places in it.
type lately [64]int32

// record returns a station's last record not after a time; its first where there is
// none.
func (l *lately) record(st *station, site int32, utc float64) int {
	guess := &l[site%int32(len(l))]
	if k := int(*guess) + 1; k < len(st.records) && st.records[k-1].utc <= utc && utc < st.records[k].utc {
		return k - 1
	}
	k := 0
	switch last := len(st.records) - 1; {
	case utc >= st.utc[last]:
		k = last
	case utc > st.utc[0]:
		k = st.before(utc)
	}
	*guess = int32(k)
	return k
}

// at returns the station's water at a time at which it has some, to a depth, given the
// last record not after the time, or the first.
func (st *station) at(k int, utc, depth float64) (temperature, salinity float64) {
	r := &st.records[k]
	temperature, salinity = r.mean(depth)
	if w := (utc - r.utc) / r.gap; w > 0 {
		t, s := st.records[k+1].mean(depth)
		temperature += w * (t - temperature)
		salinity += w * (s - salinity)
	}
	return temperature, salinity
}
