package pipeline

import (
	"math"
	"slices"

	"bentray/correct"
	"bentray/geo"
)

// mapCells is the number of cells along the longer side of a map.
const mapCells = 200

// LevelMap is the level of the water sampled on a raster of square cells, with
// zones, gauge and separation. A grid is that of all its points, whatever their times.
type LevelMap struct {
	X, Y     []float64 // centres of columns, rising, and of rows, rising
	Levels   []float64 // row by row; NaN where there is no surface
	Level    Range
	At       *Moment   // of a gauge's level; nil without gauge
	Outlines []Outline // of zones
}

// Outline is a ring of a zone's polygon in the plan.
type Outline struct {
	Name string
	XY   [][2]float64
}

// mapLevels returns the map; nil where the level is the same everywhere, where the
// cloud alone knows it, or where nothing says in which area it holds. clouds is the
// span of the clouds' times (UTC seconds), as far as it is known.
func (s *survey) mapLevels(clouds span) *LevelMap {
	f, a := &s.surface, s.mapArea()
	sloping := f.curved || f.plane != nil || slices.ContainsFunc(f.zoneLevel, func(v float64) bool { return v == v })
	if !sloping || !a.used || !(a.x.high > a.x.low || a.y.high > a.y.low) {
		return nil
	}
	m := &LevelMap{Outlines: s.outlines()}
	cell := max(a.x.high-a.x.low, a.y.high-a.y.low) / mapCells
	m.X, m.Y = centres(a.x, cell), centres(a.y, cell)
	s.sample(m, clouds)
	scale(m.X, 1/s.plan)
	scale(m.Y, 1/s.plan)
	levels := emptySpan()
	levels.addFinite(m.Levels)
	if levels.isEmpty() {
		return nil
	}
	m.Level = Range{levels.low, levels.high}
	return m
}

// zonesMargin is how much wider than the zones a map is that they alone place, as a
// share of their longer side: to show what holds around them.
const zonesMargin = 0.1

// mapArea is where the points of the base lie; where it has none, where there is a
// separation, else the extent, else around the zones and several gauges. Zones with
// levels of their own belong to it in any case.
func (s *survey) mapArea() area {
	source := &s.surface.source
	a := source.area
	if !a.used {
		a = source.separation
	}
	if !a.used && s.extent != nil {
		a = s.areaOf(s.extentBound.Min, s.extentBound.Max)
	}
	if !a.used {
		return s.placesArea()
	}
	a.join(s.zonesArea(func(z *geo.Zone) bool { return !math.IsNaN(z.Level) }))
	return a
}

// placesArea is around all zones, and holds the gauges where there are several.
func (s *survey) placesArea() area {
	a := s.zonesArea(func(*geo.Zone) bool { return true })
	if a.used {
		a.widen(zonesMargin * max(a.x.high-a.x.low, a.y.high-a.y.low))
	}
	if g := s.surface.gauges; g != nil && g.Len() > 1 {
		var places area
		places.add(s.surface.source.gauges.X, s.surface.source.gauges.Y)
		a.join(places)
	}
	return a
}

// zonesArea holds the zones of a kind.
func (s *survey) zonesArea(isOfKind func(*geo.Zone) bool) (a area) {
	for i := range s.zones.list {
		if z := &s.zones.list[i]; isOfKind(z) {
			for _, polygon := range z.Polygons {
				a.join(s.areaOf(polygon.Bound().Min, polygon.Bound().Max))
			}
		}
	}
	return a
}

// areaOf returns a rectangle of the job's unit.
func (s *survey) areaOf(low, high [2]float64) (a area) {
	a.add([]float64{low[0] * s.plan, high[0] * s.plan}, []float64{low[1] * s.plan, high[1] * s.plan})
	return a
}

// centres returns the centres of cells that cover a span.
func centres(v span, cell float64) []float64 {
	n := max(int(math.Ceil((v.high-v.low)/cell-1e-9)), 1)
	first := (v.low+v.high)/2 - cell*float64(n-1)/2
	c := make([]float64, n)
	for i := range c {
		c[i] = first + cell*float64(i)
	}
	return c
}

// sample takes the levels at the cells' centres, which are in metres.
func (s *survey) sample(m *LevelMap, clouds span) {
	n := len(m.X)
	at, y, zone, none := make([]float64, n), make([]float64, n), make([]int32, n), make([]float64, n)
	fill(none, math.NaN())
	base := s.surface
	base.gauges = nil // added below: its time is not that of a grid's points
	if s.surface.gauges != nil {
		var utc float64
		utc, m.At = s.moment(clouds)
		fill(at, utc)
	}
	ownX, ownY := slices.Clone(m.X), make([]float64, n)
	scale(ownX, 1/s.plan)
	for _, row := range m.Y {
		fill(y, row)
		fill(ownY, row/s.plan)
		planes := correct.Planes{Level: make([]float64, n), SlopeX: make([]float64, n), SlopeY: make([]float64, n)}
		s.fillZones(zone, ownX, ownY)
		base.fill(planes, m.X, y, moments{none, none}, zone, none)
		if s.surface.gauges != nil {
			s.surface.gauges.Add(planes.Level, m.X, y, at)
		}
		m.Levels = append(m.Levels, planes.Level...)
	}
	scale(m.Levels, 1/s.height)
}

// outlines returns the rings of the zones.
func (s *survey) outlines() []Outline {
	var outlines []Outline
	for i := range s.zones.list {
		z := &s.zones.list[i]
		for _, polygon := range z.Polygons {
			for _, ring := range polygon {
				o := Outline{Name: z.Name}
				for _, p := range ring {
					o.XY = append(o.XY, p)
				}
				outlines = append(outlines, o)
			}
		}
	}
	return outlines
}
