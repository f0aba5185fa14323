package pipeline

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"

	"github.com/paulmach/orb"

	"bentray/correct"
	"bentray/geo"
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
	describes    bool             // keeps what a description alone needs
	proves       *receipt.Receipt // the clouds are outputs with this receipt, which are audited; nil in a run
	workers      int
	watch        Watcher
	settings     []byte
	auxiliary    []receipt.Input
	run          string        // fingerprint
	plan, height float64       // metres per unit of x, y and of z
	times        geo.TimeScale // of the numbers in gps_time

	sensors []*sensor
	water   waters
	surface waterSurface
	zones   zones
	extent  *geo.PolygonIndex // nil: no limit; in the cloud's own units

	extentBound orb.Bound
	cautions    []string // that hold for every file
}

// newSurvey returns a survey of which nothing is read yet.
func newSurvey(j *job.Job, o Options) *survey {
	s := &survey{job: j, workers: o.Workers, watch: o.Watch}
	if s.workers <= 0 {
		s.workers = runtime.GOMAXPROCS(0)
	}
	if s.watch == nil {
		s.watch = silent{}
	}
	return s
}

// readSurvey returns what the files of a job share.
func readSurvey(ctx context.Context, j *job.Job, clouds []input, o Options) (*survey, error) {
	s := newSurvey(j, o)
	return s, s.read(ctx, clouds)
}

// read reads what the job names beside its clouds, and of the clouds themselves their
// surface points where the surface is made of them. Its errors are CallErrors: nothing
// can be done without these files.
func (s *survey) read(ctx context.Context, clouds []input) error {
	if err := s.readUnits(); err != nil {
		return &CallError{err}
	}
	j := s.job
	err := errors.Join(
		s.readSensors(ctx),
		s.auxiliaryFile(ctx, "extent", "[extent] polygons", j.Extent.Polygons, s.readExtent),
		s.readLocalWater(ctx),
		s.readSurface(ctx, clouds),
	)
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if err != nil {
		return &CallError{err}
	}
	if err := errors.Join(s.readWaters(), s.checkSides()); err != nil {
		return &CallError{fmt.Errorf("%s: %w", j.Path, err)}
	}
	if s.settings, err = j.Settings(); err != nil {
		return err
	}
	s.run, err = receipt.Fingerprint(s.settings, s.auxiliary, correct.Version)
	return err
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

// readLocalWater reads zones and stations, side by side since both take a while.
func (s *survey) readLocalWater(ctx context.Context) error {
	zones := s.hashAuxiliary(ctx, "zones", "[water] zones", s.job.Water.Zones, s.readZones)
	stations := s.hashAuxiliary(ctx, "stations", "[water] stations", s.job.Water.Stations, s.readStations)
	var stationsErr error
	var beside sync.WaitGroup
	beside.Go(func() { stationsErr = stations() })
	zonesErr := zones()
	beside.Wait()
	return errors.Join(zonesErr, stationsErr)
}

// auxiliaryFile hashes and reads a file that the job names beside its clouds, if
// it names one.
func (s *survey) auxiliaryFile(ctx context.Context, use, key, name string, read func(path string) error) error {
	return s.hashAuxiliary(ctx, use, key, name, read)()
}

// hashAuxiliary hashes such a file, and returns what is left to do: to read it, or to
// return what was wrong so far.
func (s *survey) hashAuxiliary(ctx context.Context, use, key, name string, read func(path string) error) (rest func() error) {
	failed := func(err error) func() error {
		return func() error { return err }
	}
	if name == "" {
		return failed(nil)
	}
	path := s.job.Resolve(name)
	before, err := os.Stat(path)
	if err != nil {
		return failed(fmt.Errorf("%s: %s: %w", s.job.Path, key, inFile(path, err)))
	}
	if !before.Mode().IsRegular() {
		return failed(fmt.Errorf("%s: %s: %s is not a regular file", s.job.Path, key, path))
	}
	bytes, sum, err := receipt.Hash(ctx, path)
	if err != nil {
		return failed(fmt.Errorf("%s: %s: %w", s.job.Path, key, inFile(path, err)))
	}
	if err := s.addAuxiliary(use, receipt.File{Path: filepath.ToSlash(name), Bytes: bytes, SHA256: sum}); err != nil {
		return failed(inFile(path, err))
	}
	return func() error {
		if err := read(path); err != nil {
			return inFile(path, s.atLine(path, err))
		}
		return unchanged(path, before)
	}
}

// addAuxiliary notes a file that takes part in the result. In an audit it must be
// the one that the receipt names.
func (s *survey) addAuxiliary(use string, f receipt.File) error {
	s.auxiliary = append(s.auxiliary, receipt.Input{Use: use, File: f})
	if s.proves == nil {
		return nil
	}
	return matchInput(s.proves, use, f)
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
