package job

import (
	"cmp"
	"path/filepath"
)

// newJob returns a job with the defaults that depend on nothing else.
func newJob(path string) *Job {
	return &Job{
		Path: path,
		Dir:  filepath.Dir(path),
		Input: Input{
			Unit:    Metre,
			BadRows: Stop,
			Time:    GPSAdjusted,
			CSV:     CSV{Header: true},
		},
		Output: Output{Provenance: Full, Decimals: 4},
		Water:  Water{Formula: "quan-fry"},
		Air:    Air{Temperature: 15, Pressure: 1013.25, CO2: 450},
		Limits: Limits{MaxIncidence: 60},
	}
}

// applyDefaults sets what was left out and follows from other keys.
func (j *Job) applyDefaults(f *faults) {
	if !f.has("input.vertical_unit") {
		j.Input.VerticalUnit = j.Input.Unit
	}
	if f.has("input.csv.names") && !f.has("input.csv.header") {
		j.Input.CSV.Header = false
	}
	if f.has("water.stations") {
		f.setDefault("water.max_gap", &j.Water.MaxGap, 3600)
	}
	j.Surface.applyDefaults(f)
	for i := range j.Sensors {
		j.Sensors[i].Rays.applyDefaults(f, f.raysKey(i))
	}
	j.settleWavelength()
}

func (r *Rays) applyDefaults(f *faults, table string) {
	if r.Trajectory != "" {
		f.setDefault(join(table, "max_gap"), &r.MaxGap, 1)
	}
	if r.Model != Multiview {
		return
	}
	f.setDefault(join(table, "max_off_nadir"), &r.MaxOffNadir, 45)
	f.setDefaultText(join(table, "solve"), &r.Solve, Invert)
	f.setDefaultText(join(table, "camera_medium"), &r.CameraMedium, InAir)
}

// settleWavelength writes out the default wavelength that all sensors share.
func (j *Job) settleWavelength() {
	if j.Light.Wavelength != nil || len(j.Sensors) == 0 {
		return
	}
	nm := j.Wavelength(j.Sensors[0])
	for _, s := range j.Sensors {
		if j.Wavelength(s) != nm {
			return
		}
	}
	j.Light.Wavelength = &nm
}

func (s *Surface) applyDefaults(f *faults) {
	if p := s.Plane; p != nil && !f.has("surface.plane.waterline") {
		p.SlopeX = cmp.Or(p.SlopeX, new(float64))
		p.SlopeY = cmp.Or(p.SlopeY, new(float64))
	}
	if g := s.Grid; g != nil {
		f.setDefault("surface.grid.reach", &g.Reach, 5)
		f.setDefault("surface.grid.window", &g.Window, 2)
	}
	if g := s.Gauge; g != nil {
		f.setDefault("surface.gauge.max_gap", &g.MaxGap, 3600)
	}
}

// setDefault sets a number that is not in the file.
func (f *faults) setDefault(key string, to *float64, value float64) {
	if !f.has(key) {
		*to = value
	}
}

// setDefaultText sets a text that is not in the file.
func (f *faults) setDefaultText(key string, to *string, value string) {
	if !f.has(key) {
		*to = value
	}
}
