package pipeline

import (
	"context"
	"math"

	"bentray/geo"
	"bentray/pipeline/job"
)

// SurfaceReport describes a job's water surface: how it was fitted, how far it
// reaches, and how high it lies. Plan lengths are in Unit, heights in VerticalUnit,
// both the job's own; slopes are rise over run, both in one unit. Errors are 1-sigma.
type SurfaceReport struct {
	Unit, VerticalUnit string

	// The base: one of these is set, or none where zones or a gauge hold the level.
	Level   *float64 // the one elevation
	Column  string   // the cloud's column that holds it
	Plane   *PlaneReport
	Profile *ProfileReport
	Grid    *GridReport

	// What replaces the base in places, and what is added to it.
	Zones      *ZonesReport
	Gauge      *GaugeReport
	Separation *SeparationReport

	Map      *LevelMap // nil where the level is the same everywhere, or no place is known where it holds
	Cautions []string
}

// Range is the least and the greatest of some numbers.
type Range struct{ Low, High float64 }

// Extent is a rectangle in the plan.
type Extent struct{ X, Y Range }

// PlaneReport is a plane surface.
type PlaneReport struct {
	Level, AtX, AtY, SlopeX, SlopeY float64
	Fit                             *FitReport // nil where the plane is given

	// Of Level, and of the slopes; NaN where the plane is given, or fitted to 3 points.
	LevelSigma, SlopeXSigma, SlopeYSigma float64
}

// Fall returns how steeply the plane falls, rise over run and at least 0, and
// towards which direction, in degrees from the y axis, clockwise, 0 to below 360.
func (p *PlaneReport) Fall() (slope, bearingDeg float64) {
	bearingDeg = math.Atan2(-p.SlopeX, -p.SlopeY) / radiansPerDegree
	return math.Hypot(p.SlopeX, p.SlopeY), math.Mod(bearingDeg+360, 360)
}

// ProfileReport is a surface by levels along a centreline.
type ProfileReport struct {
	Fit         FitReport
	Beyond      int  // level points beyond Reach, not used
	Falling     bool // along the line as drawn
	Knots       int  // levels between which the profile interpolates
	Reach       float64
	Length      float64 // of the centreline
	Gap         Drop    // the longest way between two points that count
	Steps       []Drop  // where the level falls at once, as at a weir
	First, Last CurvePoint
	Curve       []CurvePoint // from the first to the last level point that counts
}

// Drop is the way along a centreline between two level points, or a row of them, and by how
// much the level differs between them, 0 or above.
type Drop struct{ From, To, Fall float64 }

// CurvePoint is a level along a centreline; Sigma is NaN where it is not known.
type CurvePoint struct{ Chainage, Level, Sigma float64 }

// GridReport is a surface by points on it. Level is over the map's raster, before
// zones, gauge and separation.
type GridReport struct {
	Cell, Reach, Window, Offset float64 // as used; Reach in cells, Window in s
	Points, Ignored             int     // Ignored have a coordinate that is not finite
	Misfit                      geo.GridMisfit
	Cells, Patches              int     // Patches are more where passes at other times overlap
	Sigma                       float64 // median of the cells' levels
	Extent                      Extent  // of the points
	Level                       Range
}

// ZonesReport counts zones; Level is that of those which have one.
type ZonesReport struct {
	Count, WithLevel int
	Level            Range
}

// SeparationReport is what takes levels to the cloud's vertical reference.
type SeparationReport struct {
	Extent Extent
	Range  Range
}

// DescribeSurface reads what a run of the job reads before its clouds, and describes
// the surface. Of the clouds it reads their surface points, where the surface is made
// of them, and tells the watcher (nil: nobody); and where there is a gauge the times
// with which they begin. Where it needs none of that they need not be there. It writes
// nothing. Errors are *CallErrors, or the context's.
func DescribeSurface(ctx context.Context, j *job.Job, watch Watcher) (*SurfaceReport, error) {
	clouds, _, err := findInputs(j)
	if g := j.Surface.Grid; err != nil && g != nil && g.Points == "" {
		return nil, err
	}
	s := newSurvey(j, Options{Watch: watch})
	s.describes = true
	if err := s.read(ctx, clouds); err != nil {
		return nil, err
	}
	times := emptySpan()
	if s.surface.timed {
		if times, err = s.cloudTimes(ctx, clouds); err != nil {
			return nil, err
		}
	}
	if s.surface.at != nil && !times.isEmpty() {
		s.cautions = append(s.cautions, atNotUsed)
	}
	return s.describeSurface(times), nil
}

// describeSurface reports on the surface; clouds is the span of the clouds' times
// (UTC seconds), as far as it is known.
func (s *survey) describeSurface(clouds span) *SurfaceReport {
	j := s.job.Surface
	r := &SurfaceReport{
		Unit: s.job.Input.Unit, VerticalUnit: s.job.Input.VerticalUnit, Level: j.Level, Column: j.Column,
		Plane: s.describePlane(), Profile: s.describeProfile(), Zones: s.describeZones(), Gauge: s.describeGauge(),
		Map: s.mapLevels(clouds), Cautions: s.cautions,
	}
	if s.surface.grid != nil {
		r.Grid = s.describeGrid()
	}
	if s.surface.separation != nil {
		source := &s.surface.source
		r.Separation = &SeparationReport{s.extentOf(source.separation), s.heights(source.separationZ)}
	}
	return r
}

func (s *survey) describeGrid() *GridReport {
	j, stats := s.job.Surface.Grid, s.surface.grid.Stats()
	bare := *s
	bare.surface = waterSurface{grid: s.surface.grid, curved: true, source: surfaceSource{area: s.surface.source.area}}
	r := &GridReport{
		Cell: stats.Cell / s.plan, Reach: j.Reach, Window: j.Window, Offset: j.Offset, Points: stats.Used, Ignored: stats.Ignored,
		Misfit: s.gridMisfit(), Cells: stats.Cells, Patches: stats.Patches, Sigma: stats.Sigma / s.height, Extent: s.extentOf(s.surface.source.area),
	}
	if m := bare.mapLevels(emptySpan()); m != nil {
		r.Level = m.Level
	}
	return r
}

// gridMisfit compares the surface points with the grid, in the job's unit.
func (s *survey) gridMisfit() geo.GridMisfit {
	m := s.surface.grid.Misfit(s.surface.source.gridPoints)
	for _, length := range []*float64{&m.RMS, &m.Largest, &m.Farthest, &m.Sigma} {
		*length /= s.height
	}
	return m
}

func (s *survey) describeZones() *ZonesReport {
	if s.zones.index == nil {
		return nil
	}
	r := &ZonesReport{Count: len(s.zones.list)}
	levels := emptySpan()
	for _, z := range s.zones.list {
		if !math.IsNaN(z.Level) {
			r.WithLevel++
			levels.add(z.Level)
		}
	}
	if r.WithLevel > 0 {
		r.Level = Range{levels.low, levels.high}
	}
	return r
}

// extentOf returns an area in the job's unit.
func (s *survey) extentOf(a area) Extent {
	return Extent{Range{a.x.low / s.plan, a.x.high / s.plan}, Range{a.y.low / s.plan, a.y.high / s.plan}}
}

// heights returns a span of heights in the job's unit.
func (s *survey) heights(v span) Range { return Range{v.low / s.height, v.high / s.height} }
