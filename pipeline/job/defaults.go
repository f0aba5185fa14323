package job

import "path/filepath"

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
	if !f.has("light.wavelength") {
		j.Light.Wavelength = defaultWavelength(j.Rays.Model)
	}
	if j.Rays.Trajectory != "" && !f.has("rays.max_gap") {
		j.Rays.MaxGap = 1
	}
}

// defaultWavelength is that of common green lasers, or the middle of the
// visible light that an image is made of, in nm.
func defaultWavelength(model string) float64 {
	if model == Pulse {
		return 532
	}
	return 550
}
