package pipeline

import (
	"context"
	"errors"
	"math"
	"os"
	"slices"

	"bentray/correct"
	"bentray/geo"
)

// waterSurface says where the water is. It stands on one base, or on none where
// zones or gauges hold the level; all in metres.
type waterSurface struct {
	level    float64 // constant
	column   bool    // the cloud's own
	plane    *geo.Plane
	fit      *geo.PlaneFit // where the plane is fitted
	profile  *geo.Profile
	grid     *geo.Grid
	constant bool // level is the base

	zoneLevel  []float64 // by zone, NaN where it has none
	gauges     *geo.Gauges
	at         *float64 // UTC of clouds without times
	separation *geo.Separation
	curved     bool // planes differ from place to place
	timed      bool // it depends on time

	source surfaceSource // what it was made from
}

// isConstant tells that every point has the same level plane.
func (f *waterSurface) isConstant() bool {
	return f.constant && f.zoneLevel == nil && f.gauges == nil && f.separation == nil
}

// fill gives each plan position and time its plane of the water, with a level of
// NaN where there is none. The zone of a point replaces the base. column holds the
// cloud's own levels, where they are the base.
func (f *waterSurface) fill(p correct.Planes, x, y []float64, t moments, zone []int32, column []float64) {
	switch {
	case f.plane != nil:
		f.plane.Fill(p.Level, p.SlopeX, p.SlopeY, x, y)
	case f.profile != nil:
		f.profile.Fill(p.Level, p.SlopeX, p.SlopeY, x, y)
	case f.grid != nil:
		f.grid.Fill(p.Level, p.SlopeX, p.SlopeY, x, y, t.own)
	case f.column:
		geo.FillLevel(p.Level, p.SlopeX, p.SlopeY, 0)
		copy(p.Level, column)
	default:
		geo.FillLevel(p.Level, p.SlopeX, p.SlopeY, f.level)
	}
	if f.zoneLevel != nil {
		for i, z := range zone {
			if z >= 0 && f.zoneLevel[z] == f.zoneLevel[z] {
				p.Level[i], p.SlopeX[i], p.SlopeY[i] = f.zoneLevel[z], 0, 0
			}
		}
	}
	if f.gauges != nil {
		f.gauges.Add(p.Level, x, y, t.utc)
	}
	if f.separation != nil {
		f.separation.Add(p.Level, p.SlopeX, p.SlopeY, x, y)
	}
}

// readSurface reads or fits the job's surface.
func (s *survey) readSurface(ctx context.Context, clouds []input) error {
	j, f := s.job.Surface, &s.surface
	if j.Gauge != nil {
		f.timed, f.at = true, j.Gauge.At
	}
	var err error
	switch {
	case j.Level != nil:
		f.level, f.constant = *j.Level*s.height, true
	case j.Column != "":
		f.column = true
	case j.Plane != nil && j.Plane.Waterline != "":
		err = s.auxiliaryFile(ctx, "waterline", "[surface.plane] waterline", j.Plane.Waterline, s.readWaterline)
	case j.Plane != nil:
		f.plane = &geo.Plane{Level: *j.Plane.Level * s.height, AtX: j.Plane.At[0] * s.plan, AtY: j.Plane.At[1] * s.plan, SlopeX: *j.Plane.SlopeX, SlopeY: *j.Plane.SlopeY}
	case j.Profile != nil:
		f.curved = true
		err = s.readProfile(ctx)
	case j.Grid != nil:
		f.curved = true
		err = s.readGrid(ctx, clouds)
	case j.Gauge != nil:
		f.level = 0 // the gauge stands on its own zero
	default:
		f.level = math.NaN() // only zones have a level
	}
	return errors.Join(err, s.readOverSurface(ctx))
}

// readOverSurface reads what is added to the base.
func (s *survey) readOverSurface(ctx context.Context) error {
	j, f := s.job.Surface, &s.surface
	var faults []error
	if j.Grid != nil && j.Grid.Classes != nil && (j.Gauge != nil || j.Separation != nil) {
		s.cautions = append(s.cautions, "a gauge or separation is added to a grid of the clouds' own surface points, which hold the tide and the vertical reference already")
	}
	if j.Gauge != nil {
		faults = append(faults, s.auxiliaryFile(ctx, "gauge", "[surface.gauge] file", j.Gauge.File, s.readGauges))
	}
	if j.Separation != nil {
		f.curved = true
		faults = append(faults, s.auxiliaryFile(ctx, "separation", "[surface.separation] file", j.Separation.File, s.readSeparation))
	}
	if slices.ContainsFunc(s.zones.list, func(z geo.Zone) bool { return z.Level == z.Level }) {
		for _, z := range s.zones.list {
			f.zoneLevel = append(f.zoneLevel, z.Level*s.height)
		}
	}
	return errors.Join(faults...)
}

// readXYZ reads the columns x, y, z of a table, in metres, and others that may be there.
func (s *survey) readXYZ(path string, optional ...string) (t *sheet, x, y, z []float64, err error) {
	t, err = s.readSheet(path, sheetColumns{needed: []string{"x", "y", "z"}, optional: optional})
	if err != nil {
		return nil, nil, nil, nil, err
	}
	x, y, z = t.numbers["x"], t.numbers["y"], t.numbers["z"]
	s.scaleXYZ(correct.XYZ{X: x, Y: y, Z: z}, s.plan, s.height)
	return t, x, y, z, nil
}

func (s *survey) readWaterline(path string) error {
	_, x, y, z, err := s.readXYZ(path)
	if err != nil {
		return err
	}
	fit, err := geo.FitPlane(x, y, z)
	if err != nil {
		return err
	}
	s.surface.fit, s.surface.plane = &fit, &fit.Plane
	s.surface.source.points(x, y, z)
	return nil
}

func (s *survey) readProfile(ctx context.Context) error {
	j := s.job.Surface.Profile
	var lineX, lineY []float64
	return errors.Join(
		s.auxiliaryFile(ctx, "centreline", "[surface.profile] centreline", j.Centreline, func(path string) error {
			data, err := os.ReadFile(path)
			if err != nil {
				return err
			}
			line, err := geo.ParseLine(data)
			for _, p := range line {
				lineX, lineY = append(lineX, p[0]*s.plan), append(lineY, p[1]*s.plan)
			}
			return err
		}),
		s.auxiliaryFile(ctx, "levels", "[surface.profile] levels", j.Levels, func(path string) error {
			_, x, y, z, err := s.readXYZ(path)
			if err != nil || lineX == nil {
				return err
			}
			if s.surface.profile, err = geo.NewProfile(lineX, lineY, x, y, z, j.Reach*s.plan); err != nil {
				return err
			}
			s.surface.source.points(x, y, z)
			s.surface.source.centreline(lineX, lineY, j.Reach*s.plan)
			s.profileCautions()
			return nil
		}),
	)
}

func (s *survey) readGrid(ctx context.Context, clouds []input) error {
	if s.job.Surface.Grid.Points == "" {
		return s.gridOfClouds(ctx, clouds)
	}
	return s.auxiliaryFile(ctx, "surface points", "[surface.grid] points", s.job.Surface.Grid.Points, func(path string) error {
		t, x, y, z, err := s.readXYZ(path, timeColumn)
		if err != nil {
			return err
		}
		var points geo.SurfacePoints
		points.Add(x, y, z, t.utc)
		return s.makeGrid(&points)
	})
}

func (s *survey) makeGrid(points *geo.SurfacePoints) (err error) {
	j := s.job.Surface.Grid
	o := geo.GridOptions{Reach: j.Reach, Window: j.Window, Offset: j.Offset * s.height}
	if j.Cell != nil {
		o.Cell = *j.Cell * s.plan
	}
	if s.surface.grid, err = geo.NewGrid(points, o); err != nil {
		return err
	}
	low, high := points.Bounds()
	s.surface.source.area.add([]float64{low[0], high[0]}, []float64{low[1], high[1]})
	if s.describes {
		s.surface.source.gridPoints = points
	}
	return nil
}

func (s *survey) readGauges(path string) error {
	t, err := s.readSheet(path, sheetColumns{needed: []string{timeColumn, "level"}, optional: []string{"x", "y"}, texts: []string{"name"}})
	if err != nil {
		return err
	}
	r := geo.GaugeRecords{UTC: t.utc, Level: t.numbers["level"], Name: t.texts["name"], X: t.numbers["x"], Y: t.numbers["y"]}
	if (r.X == nil) != (r.Y == nil) {
		return errors.New("there is only one of the columns x and y, want both or neither")
	}
	scale(r.Level, s.height)
	scale(r.X, s.plan)
	scale(r.Y, s.plan)
	s.surface.source.gauges, s.surface.source.gaugeTimes = r, emptySpan()
	s.surface.source.gaugeTimes.addFinite(r.UTC)
	g := s.job.Surface.Gauge
	if s.surface.gauges, err = geo.NewGauges(r, g.Zero*s.height, g.MaxGap); err != nil {
		return err
	}
	s.surface.curved = s.surface.curved || s.surface.gauges.Len() > 1 // the level differs between gauges
	return nil
}

func (s *survey) readSeparation(path string) error {
	_, x, y, z, err := s.readXYZ(path)
	if err != nil {
		return err
	}
	s.surface.source.separation.add(x, y)
	s.surface.source.separationZ = emptySpan()
	s.surface.source.separationZ.addFinite(z)
	s.surface.separation, err = geo.NewSeparation(x, y, z)
	return err
}
