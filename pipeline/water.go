package pipeline

import (
	"fmt"
	"math"
	"os"

	"github.com/paulmach/orb"

	"bentray/correct"
	"bentray/correct/medium"
	"bentray/geo"
)

// waters says which water a point is in: its zone's, else the stations', else
// the job's own.
type waters struct {
	formula  medium.WaterFormula
	pressure float64
	job      medium.Water // the job's own; NaN where it has none
	stations *geo.Stations
	records  geo.StationRecords // of the stations, in m
	sources  []string           // names for the column water_source, by code
}

// Codes of sources; a zone's is firstZone plus its number.
const (
	fromJob = iota
	fromStations
	firstZone
)

// zones are waters with values of their own.
type zones struct {
	list  []geo.Zone
	index *geo.PolygonIndex // nil: no zones; in the cloud's own units
	bound orb.Bound
}

// isConstant tells that all points have the job's own water.
func (s *survey) isConstantWater() bool { return s.water.stations == nil && s.zones.index == nil }

// fillConstantIndex gives each point the index of the job's own water.
func (s *survey) fillConstantIndex(w *workspace, out []correct.Outcome, sn *sensor) {
	phase, group := s.constantIndex(sn)
	for i, o := range out {
		if o != correct.NoRule {
			w.light.Water[i], w.light.WaterGroup[i] = phase, group
		}
	}
}

// constantIndex is the index of the job's own water for a sensor's light, which
// was checked when the job was read.
func (s *survey) constantIndex(sn *sensor) (phase, group float64) {
	phase, group, _ = s.water.formula.Index(s.water.job, sn.wavelength)
	return phase, group
}

func (s *survey) readZones(path string) error {
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	if s.zones.list, err = geo.ParseZones(data); err != nil {
		return err
	}
	var polygons orb.MultiPolygon
	for _, z := range s.zones.list {
		polygons = append(polygons, z.Polygons...)
	}
	s.zones.index, s.zones.bound = geo.NewZoneIndex(s.zones.list), polygons.Bound()
	for _, pair := range geo.Overlaps(s.zones.list) {
		s.cautions = append(s.cautions, fmt.Sprintf("zones %q and %q overlap: the one with the smaller area wins", s.zones.list[pair[0]].Name, s.zones.list[pair[1]].Name))
	}
	return nil
}

func (s *survey) readStations(path string) error {
	t, err := s.readSheet(path, sheetColumns{
		needed: []string{"x", "y", "temperature", "salinity"}, optional: []string{timeColumn, "depth"}, texts: []string{"name"},
	})
	if err != nil {
		return err
	}
	r := geo.StationRecords{
		X: t.numbers["x"], Y: t.numbers["y"], Temperature: t.numbers["temperature"], Salinity: t.numbers["salinity"],
		Name: t.texts["name"], UTC: t.utc, Depth: t.numbers["depth"],
	}
	scale(r.X, s.plan)
	scale(r.Y, s.plan)
	scale(r.Depth, s.height)
	s.water.records = r
	s.water.stations, err = geo.NewStations(r, s.job.Water.MaxGap)
	return err
}

// readWaters checks the job's own water and names the sources.
func (s *survey) readWaters() (err error) {
	j, w := s.job, &s.water
	if w.formula, err = medium.ParseWaterFormula(j.Water.Formula); err != nil {
		return err
	}
	w.pressure = j.Water.PressureDbar
	w.job = medium.Water{TemperatureC: math.NaN(), Salinity: math.NaN(), PressureDbar: w.pressure}
	if j.Water.Temperature != nil {
		w.job.TemperatureC, w.job.Salinity = *j.Water.Temperature, *j.Water.Salinity
		for _, sn := range s.sensors {
			if _, _, err := w.formula.Index(w.job, sn.wavelength); err != nil {
				return err
			}
			if !w.formula.Published(w.job, sn.wavelength) && s.isConstantWater() {
				s.cautions = append(s.cautions, fmt.Sprintf("the water (%g degrees C, salinity %g, %g nm) is outside the published range of %s; its index is an extension of the formula", w.job.TemperatureC, w.job.Salinity, sn.wavelength, w.formula))
			}
		}
	}
	if w.pressure != 0 && !w.formula.UsesPressure() {
		s.cautions = append(s.cautions, fmt.Sprintf("pressure_dbar = %g has no effect: %s has no pressure term", w.pressure, w.formula))
	}
	w.sources = []string{"job", "stations"}
	for _, z := range s.zones.list {
		w.sources = append(w.sources, "zone "+z.Name)
	}
	return nil
}

// fillZones finds the zone of each position in the cloud's own unit, -1 for none. It
// does nothing where the job has no zones.
func (s *survey) fillZones(zone []int32, x, y []float64) {
	if s.zones.index == nil {
		for i := range zone {
			zone[i] = -1
		}
		return
	}
	s.zones.index.Find(zone, x, y)
}

// reachesWater tells whether nothing that comes before the water has stopped a point.
func reachesWater(o correct.Outcome) bool { return o == correct.Corrected || o > correct.OutOfRange }

// fillWater gives each point that reaches the water its temperature and salinity, NaN
// where there is none, and says where they came from; others keep what they have.
// Casts are averaged down to the depth.
func (s *survey) fillWater(w *workspace, out []correct.Outcome, depth []float64) {
	if s.water.stations != nil {
		w.rows = w.rows[:0]
		for i, o := range out {
			if reachesWater(o) && !s.hasZoneWater(w.zone[i]) {
				w.rows = append(w.rows, int32(i))
			}
		}
		s.water.stations.Fill(w.fromStations[0], w.fromStations[1], w.rows, w.raw.X, w.raw.Y, w.utc, depth)
	}
	for i, o := range out {
		if reachesWater(o) {
			w.temperature[i], w.salinity[i], w.source[i] = s.waterOf(w, i)
		}
	}
}

// hasZoneWater tells whether a zone (-1: none) has a temperature and salinity.
func (s *survey) hasZoneWater(zone int32) bool {
	return zone >= 0 && !math.IsNaN(s.zones.list[zone].Temperature)
}

// waterOf returns the water of one point and the code of its source.
func (s *survey) waterOf(w *workspace, i int) (temperature, salinity, source float64) {
	if zone := w.zone[i]; s.hasZoneWater(zone) {
		z := &s.zones.list[zone]
		return z.Temperature, z.Salinity, float64(firstZone + zone)
	}
	if s.water.stations != nil && !math.IsNaN(w.fromStations[0][i]) {
		return w.fromStations[0][i], w.fromStations[1][i], fromStations
	}
	return s.water.job.TemperatureC, s.water.job.Salinity, fromJob
}

// markWater sets NoWater, and computes the indices of the others for one sensor's
// light: where a water is outside the formula's range, that of the nearest one inside,
// so that casts can be averaged on to a depth at which it may be inside.
func (s *survey) markWater(w *workspace, out []correct.Outcome, sn *sensor) {
	for i, o := range out {
		switch {
		case o == correct.NoRule: // or another sensor's
			continue
		case o == correct.Corrected && math.IsNaN(w.temperature[i]):
			out[i] = correct.NoWater
		}
		if out[i] != correct.Corrected {
			w.light.Water[i], w.light.WaterGroup[i] = math.NaN(), math.NaN()
			continue
		}
		w.light.Water[i], w.light.WaterGroup[i], _ = s.water.formula.Index(s.water.formula.Nearest(s.waterAt(w, i)), sn.wavelength) // NaN with an error
	}
}

// waterAt is the state of a point's water.
func (s *survey) waterAt(w *workspace, i int) medium.Water {
	return medium.Water{TemperatureC: w.temperature[i], Salinity: w.salinity[i], PressureDbar: s.water.pressure}
}

// markOutOfRange sets OutOfRange for points whose water is outside the formula's range,
// before what a model may have said of them with another index.
func (s *survey) markOutOfRange(p *part, w *workspace, sn *sensor) {
	for i, o := range p.out {
		if reachesWater(o) && !s.water.formula.Computed(s.waterAt(w, i), sn.wavelength) {
			p.fail(i, correct.OutOfRange)
		}
	}
}
