package pipeline

import "bentray/geo"

// surfaceSource is what a surface was made from, as far as a description of it
// tells; metres and seconds.
type surfaceSource struct {
	x, y, z      []float64          // waterline or level points
	lineX, lineY []float64          // centreline
	area         area               // of the base's points, or of the centreline and its reach
	gridPoints   *geo.SurfacePoints // nil in a run
	gauges       geo.GaugeRecords
	gaugeTimes   span // UTC seconds
	separation   area
	separationZ  span
}

// points keeps waterline or level points.
func (s *surfaceSource) points(x, y, z []float64) {
	s.x, s.y, s.z = x, y, z
	s.area.add(x, y)
}

// centreline keeps the line of a profile, and takes the area from it alone.
func (s *surfaceSource) centreline(x, y []float64, reach float64) {
	s.lineX, s.lineY, s.area = x, y, area{}
	s.area.add(x, y)
	s.area.widen(reach)
}

// area is a rectangle in the plan, in metres; the zero value is empty.
type area struct {
	x, y span
	used bool
}

// add widens the area to hold positions that are finite.
func (a *area) add(x, y []float64) {
	if !a.used {
		a.x, a.y = emptySpan(), emptySpan()
	}
	a.x.addFinite(x)
	a.y.addFinite(y)
	a.used = !a.x.isEmpty() && !a.y.isEmpty()
}

// widen moves each side outwards by a length.
func (a *area) widen(by float64) {
	a.x = span{a.x.low - by, a.x.high + by}
	a.y = span{a.y.low - by, a.y.high + by}
}

// join widens the area to hold another one.
func (a *area) join(o area) {
	if o.used {
		a.add([]float64{o.x.low, o.x.high}, []float64{o.y.low, o.y.high})
	}
}
