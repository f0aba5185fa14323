package pipeline

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"bentray/correct"
	"bentray/correct/medium"
	"bentray/geo"
	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// Version is the program's version.
const Version = "0.1.0"

// Program is the program's name and version, as receipts state it.
const Program = "bentray " + Version

// survey is what all files of a job share. It does not change once it is read.
type survey struct {
	job          *job.Job
	settings     []byte
	auxiliary    []receipt.Input
	run          string  // fingerprint
	plan, height float64 // metres per unit of x, y and of z

	optics     indices
	trajectory *geo.Trajectory   // nil: origins come from the cloud
	extent     *geo.PolygonIndex // nil: no limit; in the cloud's own units
	cautions   []string          // that hold for every file
}

// indices are the refractive indices of a job, referred to vacuum.
type indices struct {
	waterPhase, waterGroup, airPhase, airGroup float64
	ranges                                     float64 // the index that the raw ranges were made with
}

// readSurvey reads what the job names beside its clouds. Its errors are
// CallErrors: nothing can be done without these files.
func readSurvey(ctx context.Context, j *job.Job) (*survey, error) {
	s := &survey{job: j}
	if err := s.readUnits(); err != nil {
		return nil, &CallError{err}
	}
	if err := s.readIndices(); err != nil {
		return nil, &CallError{fmt.Errorf("%s: %w", j.Path, err)}
	}
	if err := errors.Join(s.readTrajectory(ctx), s.readExtent(ctx)); err != nil {
		return nil, &CallError{err}
	}
	var err error
	if s.settings, err = j.Settings(); err != nil {
		return nil, err
	}
	s.run, err = receipt.Fingerprint(s.settings, s.auxiliary, correct.Version)
	return s, err
}

func (s *survey) readUnits() error {
	plan, err := geo.ParseUnit(s.job.Input.Unit)
	if err != nil {
		return err
	}
	height, err := geo.ParseUnit(s.job.Input.VerticalUnit)
	s.plan, s.height = float64(plan), float64(height)
	return err
}

func (s *survey) readIndices() error {
	j := s.job
	formula, err := medium.ParseWaterFormula(j.Water.Formula)
	if err != nil {
		return err
	}
	water := medium.Water{TemperatureC: j.Water.Temperature, Salinity: j.Water.Salinity, PressureDbar: j.Water.PressureDbar}
	air := medium.Air{TemperatureC: j.Air.Temperature, PressureHPa: j.Air.Pressure, HumidityPercent: j.Air.Humidity, CO2PPM: j.Air.CO2}
	o := &s.optics
	if o.waterPhase, o.waterGroup, err = formula.Index(water, j.Light.Wavelength); err != nil {
		return err
	}
	if o.airPhase, o.airGroup, err = air.Index(j.Light.Wavelength); err != nil {
		return err
	}
	o.ranges = o.airGroup
	if j.Rays.RangeIndex != nil {
		o.ranges = *j.Rays.RangeIndex
	}
	if !formula.Published(water, j.Light.Wavelength) {
		s.cautions = append(s.cautions, fmt.Sprintf("the water (%g degrees C, salinity %g, %g nm) is outside the published range of %s; its index is an extension of the formula", water.TemperatureC, water.Salinity, j.Light.Wavelength, formula))
	}
	if j.Water.PressureDbar != 0 && !formula.UsesPressure() {
		s.cautions = append(s.cautions, fmt.Sprintf("pressure_dbar = %g has no effect: %s has no pressure term", j.Water.PressureDbar, formula))
	}
	return nil
}

func (s *survey) readTrajectory(ctx context.Context) error {
	j := s.job
	if j.Rays.Trajectory == "" {
		return nil
	}
	path := j.Resolve(j.Rays.Trajectory)
	if err := s.note(ctx, "trajectory", j.Rays.Trajectory); err != nil {
		return err
	}
	if err := checkFormat(path); err != nil {
		return err
	}
	f, err := csvfile.Open(path, csvfile.Options{})
	if err != nil {
		return err
	}
	defer f.Close()
	columns, err := cloud.ReadNumbers(f, "gps_time", "x", "y", "z")
	if err != nil {
		return inFile(path, err)
	}
	scale(columns[1], s.plan)
	scale(columns[2], s.plan)
	scale(columns[3], s.height)
	s.trajectory, err = geo.NewTrajectory(columns[0], columns[1], columns[2], columns[3], j.Rays.MaxGap)
	return inFile(path, err)
}

func (s *survey) readExtent(ctx context.Context) error {
	j := s.job
	if j.Extent.Polygons == "" {
		return nil
	}
	path := j.Resolve(j.Extent.Polygons)
	if err := s.note(ctx, "extent", j.Extent.Polygons); err != nil {
		return err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	polygons, err := geo.ParsePolygons(data)
	if err != nil {
		return inFile(path, err)
	}
	s.extent = geo.NewPolygonIndex(polygons)
	return nil
}

// note hashes an auxiliary file, named as in the job.
func (s *survey) note(ctx context.Context, use, name string) error {
	path := s.job.Resolve(name)
	bytes, sum, err := receipt.Hash(ctx, path)
	if err != nil {
		return fmt.Errorf("%s: %s: %w", s.job.Path, use, inFile(path, err))
	}
	s.auxiliary = append(s.auxiliary, receipt.Input{Use: use, File: receipt.File{Path: filepath.ToSlash(name), Bytes: bytes, SHA256: sum}})
	return nil
}

// inFile puts the file's name before an error that does not begin with it.
func inFile(path string, err error) error {
	if err == nil || strings.HasPrefix(err.Error(), path) {
		return err
	}
	var system *fs.PathError
	if errors.As(err, &system) && system.Path == path {
		err = system.Err
	}
	return fmt.Errorf("%s: %w", path, err)
}

func scale(values []float64, factor float64) {
	if factor == 1 {
		return
	}
	for i := range values {
		values[i] *= factor
	}
}
