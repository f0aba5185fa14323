package pipeline

import (
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"time"

	"bentray/correct"
	"bentray/correct/medium"
	"bentray/geo"
	"bentray/io/cloud"
	"bentray/pipeline/job"
)

// sensor is what made some of the points: its rays, and the air they came through.
type sensor struct {
	job.Sensor
	wavelength         float64 // nm in vacuum
	airPhase, airGroup float64
	ranges             float64         // the index that the raw ranges were made with
	trajectory         *geo.Trajectory // nil: origins come from the cloud, or are not needed
	info               *TrajectoryInfo // nil without trajectory
	cameras            *cameras        // nil unless it is multiview
}

// isPulse tells a sensor whose rays have an origin each.
func (s *sensor) isPulse() bool { return s.Rays.Model == job.Pulse }

// isMultiview tells a sensor whose points have the rays of several cameras.
func (s *sensor) isMultiview() bool { return s.Rays.Model == job.Multiview }

// hasRays tells a sensor whose rays are traced.
func (s *sensor) hasRays() bool { return s.isPulse() || s.isMultiview() }

func (s *sensor) isAny() bool { return true }

// looksUp tells a sensor under water whose points are above it.
func (s *sensor) looksUp() bool { return s.isMultiview() && s.Rays.CameraMedium == job.InWater }

// wetName is the outcome dry of a sensor that looks up.
const wetName = "wet"

// nameOf names an outcome of the sensor's points: those on its own side of the surface
// are wet where it is under water.
func (s *sensor) nameOf(o correct.Outcome) string {
	if o == correct.Dry && s.looksUp() {
		return wetName
	}
	return o.String()
}

func (s *survey) readSensors(ctx context.Context) error {
	var faults []error
	for _, js := range s.job.Sensors {
		sn := &sensor{Sensor: js, wavelength: s.job.Wavelength(js)}
		faults = append(faults, sn.setAir(s.job),
			s.auxiliaryFile(ctx, "trajectory", sn.key("trajectory"), js.Rays.Trajectory, func(path string) error { return s.readTrajectory(sn, path) }),
			s.auxiliaryFile(ctx, "cameras", sn.key("cameras"), js.Rays.Cameras, func(path string) error { return s.readCameras(sn, path) }),
		)
		s.sensors = append(s.sensors, sn)
	}
	return errors.Join(faults...)
}

// key names a key of the sensor's rays, for messages.
func (sn *sensor) key(name string) string {
	if sn.Name == "" {
		return "[rays] " + name
	}
	return fmt.Sprintf("[sensor.rays] %s of %q", name, sn.Name)
}

func (sn *sensor) setAir(j *job.Job) (err error) {
	air := medium.Air{TemperatureC: j.Air.Temperature, PressureHPa: j.Air.Pressure, HumidityPercent: j.Air.Humidity, CO2PPM: j.Air.CO2}
	sn.airPhase, sn.airGroup, err = air.Index(sn.wavelength)
	sn.ranges = sn.airGroup
	if sn.Rays.RangeIndex != nil {
		sn.ranges = *sn.Rays.RangeIndex
	}
	return err
}

func (s *survey) readTrajectory(sn *sensor, path string) error {
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
		if isLocalTime(f.Columns()[i]) {
			s.cautions = append(s.cautions, filepath.ToSlash(sn.Rays.Trajectory)+": "+localTimeCaution(f.Columns()[i]))
		}
	}
	sn.info = s.describe(columns)
	scale(columns[1], s.plan)
	scale(columns[2], s.plan)
	scale(columns[3], s.height)
	sn.trajectory, err = geo.NewTrajectory(columns[0], columns[1], columns[2], columns[3], sn.Rays.MaxGap)
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
