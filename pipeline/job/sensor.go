package job

import "strconv"

// Sensor is what made some of the points, and how. A point belongs to the first
// sensor whose condition it meets.
type Sensor struct {
	Name  string           `toml:"name" json:"name,omitempty"`   // one of its own for each; empty for the only sensor of [rays]
	Where map[string][]any `toml:"where" json:"where,omitempty"` // condition, as Select.Where; empty, in the last sensor alone, for all points
	Rays  Rays             `toml:"rays" json:"rays"`
}

// maxSensors bounds the sensors of a job.
const maxSensors = 19

// Rays says how light went between the ray origin and the points.
type Rays struct {
	Model string `toml:"model" json:"model"` // Vertical, Pulse or Multiview

	// For Pulse alone.
	Trajectory string   `toml:"trajectory" json:"trajectory,omitempty"`   // a file of ray origins by time; empty: the cloud's origin columns
	MaxGap     float64  `toml:"max_gap" json:"max_gap,omitempty"`         // s between its records at most; default 1, and 0 without Trajectory
	RangeIndex *float64 `toml:"range_index" json:"range_index,omitempty"` // the index the ranges were made with, 1 to 1.01; nil: group index of the job's air

	// For Multiview alone.
	Cameras      string  `toml:"cameras" json:"cameras,omitempty"`             // a file of cameras
	Solve        string  `toml:"solve" json:"solve,omitempty"`                 // Invert (default), Intersect or Average
	Residual     string  `toml:"residual" json:"residual,omitempty"`           // what the cloud's rays were intersected by; empty: Image where the cameras have rotations, else Angle
	MaxOffNadir  float64 `toml:"max_off_nadir" json:"max_off_nadir,omitempty"` // degrees within which a camera is taken to see a point where nothing else tells; default 45
	CameraMedium string  `toml:"camera_medium" json:"camera_medium,omitempty"` // InAir (default) or InWater
}

// Wavelength returns the vacuum wavelength (nm) of a sensor's light: that of
// [light], or else 532 for Pulse and 550 for the others.
func (j *Job) Wavelength(s Sensor) float64 {
	if j.Light.Wavelength != nil {
		return *j.Light.Wavelength
	}
	return defaultWavelength(s.Rays.Model)
}

// defaultWavelength is that of common green lasers, or the middle of the
// visible light that an image is made of, in nm.
func defaultWavelength(model string) float64 {
	if model == Pulse {
		return 532
	}
	return 550
}

// settleSensors makes [rays] the job's one sensor where there are no others.
func (c *file) settleSensors(f *faults) {
	if !f.has(sensorTable) {
		c.Sensors = []Sensor{{Rays: c.Rays}}
	}
}

// sensorTable is the list of tables that a job file has for sensors. The paths
// of an item's keys have its number, such as "sensor.2.name".
const sensorTable = "sensor"

// sensorKey is the path of sensor i.
func sensorKey(i int) string { return join(sensorTable, strconv.Itoa(i+1)) }

// raysKey is the path of the table with the rays of sensor i.
func (f *faults) raysKey(i int) string {
	if !f.has(sensorTable) {
		return "rays"
	}
	return join(sensorKey(i), "rays")
}
