package pipeline

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/paulmach/orb"

	"bentray/correct"
	"bentray/correct/medium"
	"bentray/geo"
	"bentray/io/cloud"
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
	run          string        // fingerprint
	plan, height float64       // metres per unit of x, y and of z
	times        geo.TimeScale // of the numbers in gps_time

	optics     indices
	trajectory *geo.Trajectory   // nil: origins come from the cloud
	extent     *geo.PolygonIndex // nil: no limit; in the cloud's own units

	trajectoryInfo *TrajectoryInfo
	extentBound    orb.Bound
	cautions       []string // that hold for every file
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
	if err := s.readFiles(ctx); err != nil {
		return nil, &CallError{err}
	}
	var err error
	if s.settings, err = j.Settings(); err != nil {
		return nil, err
	}
	s.run, err = receipt.Fingerprint(s.settings, s.auxiliary, correct.Version)
	return s, err
}

func (s *survey) readFiles(ctx context.Context) error {
	return errors.Join(
		s.auxiliaryFile(ctx, "trajectory", "[rays] trajectory", s.job.Rays.Trajectory, s.readTrajectory),
		s.auxiliaryFile(ctx, "extent", "[extent] polygons", s.job.Extent.Polygons, s.readExtent),
	)
}

func (s *survey) readUnits() error {
	plan, err := geo.ParseUnit(s.job.Input.Unit)
	if err != nil {
		return err
	}
	height, err := geo.ParseUnit(s.job.Input.VerticalUnit)
	if err != nil {
		return err
	}
	s.plan, s.height = float64(plan), float64(height)
	week := 0
	if s.job.Input.Week != nil {
		week = *s.job.Input.Week
	}
	s.times, err = geo.ParseTimeScale(s.job.Input.Time, week)
	return err
}

// fromUTC brings UTC seconds to the scale of the job's times.
func (s *survey) fromUTC(seconds []float64) {
	for i, utc := range seconds {
		seconds[i] = s.times.FromUTC(utc)
	}
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

func (s *survey) readTrajectory(path string) error {
	f, err := s.openBeside(path)
	if err != nil {
		return err
	}
	defer f.Close()
	steps := []float64{finestTime, finestLength / s.plan, finestLength / s.plan, finestLength / s.height}
	columns, err := cloud.ReadNumbersWithin(f, steps, "gps_time", "x", "y", "z")
	if err != nil {
		return err
	}
	for _, name := range []string{"x", "y", "z"} {
		i, _ := cloud.Find(f.Columns(), name)
		if err := checkLength(f.Columns()[i]); err != nil {
			return err
		}
	}
	if i, _ := cloud.Find(f.Columns(), "gps_time"); isTimestamp(f.Columns()[i]) {
		s.fromUTC(columns[0])
	}
	s.trajectoryInfo = s.describe(columns)
	scale(columns[1], s.plan)
	scale(columns[2], s.plan)
	scale(columns[3], s.height)
	s.trajectory, err = geo.NewTrajectory(columns[0], columns[1], columns[2], columns[3], s.job.Rays.MaxGap)
	return err
}

// describe sums up a trajectory's columns gps_time, x, y, z, in the job's units.
func (s *survey) describe(columns [][]float64) *TrajectoryInfo {
	t := columns[0]
	if len(t) == 0 {
		return nil
	}
	info := &TrajectoryInfo{Records: len(t), Times: [2]time.Time{s.times.Time(t[0]), s.times.Time(t[len(t)-1])}}
	for k, column := range columns[1:] {
		info.Low[k], info.High[k] = slices.Min(column), slices.Max(column)
	}
	for i := 1; i < len(t); i++ {
		info.Gap = max(info.Gap, t[i]-t[i-1])
	}
	return info
}

func (s *survey) readExtent(path string) error {
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	polygons, err := geo.ParsePolygons(data)
	if err != nil {
		return err
	}
	s.extent, s.extentBound = geo.NewPolygonIndex(polygons), orb.MultiPolygon(polygons).Bound()
	return nil
}

// auxiliaryFile hashes and reads a file that the job names beside its clouds, if
// it names one.
func (s *survey) auxiliaryFile(ctx context.Context, use, key, name string, read func(path string) error) error {
	if name == "" {
		return nil
	}
	path := s.job.Resolve(name)
	before, err := os.Stat(path)
	if err != nil {
		return fmt.Errorf("%s: %s: %w", s.job.Path, key, inFile(path, err))
	}
	if !before.Mode().IsRegular() {
		return fmt.Errorf("%s: %s: %s is not a regular file", s.job.Path, key, path)
	}
	bytes, sum, err := receipt.Hash(ctx, path)
	if err != nil {
		return fmt.Errorf("%s: %s: %w", s.job.Path, key, inFile(path, err))
	}
	s.auxiliary = append(s.auxiliary, receipt.Input{Use: use, File: receipt.File{Path: filepath.ToSlash(name), Bytes: bytes, SHA256: sum}})
	if err := read(path); err != nil {
		return inFile(path, err)
	}
	return unchanged(path, before)
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
