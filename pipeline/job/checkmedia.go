package job

import (
	"errors"
	"strings"

	"bentray/correct/medium"
)

// checkMedia reports states of water, air and light that package medium does
// not compute. It tries each quantity by itself, the others at values that all
// formulas take, so that every fault is found and known by its key.
func (j *Job) checkMedia(f *faults) {
	j.Water.check(f)
	const green = 550 // nm, inside every range
	if formula, err := medium.ParseWaterFormula(j.Water.Formula); err == nil {
		j.checkWater(f, formula, green)
	} else {
		f.oneOf("water.formula", j.Water.Formula, waterFormulas()...)
	}
	j.checkAir(f, green)
}

// check reports keys of [water] that are missing or to no effect. Stations or
// zones stand in for temperature and salinity, but not for one of them.
func (w *Water) check(f *faults) {
	const temperature, salinity = "water.temperature", "water.salinity"
	switch local := f.meant("water.stations") || f.meant("water.zones"); {
	case !local:
		f.require(temperature, "a number in degrees C")
		f.require(salinity, "a number (practical salinity; 0 for fresh water)")
	case f.has(temperature):
		f.require(salinity, "a number beside temperature; with stations or zones both may be left out")
	case f.has(salinity):
		f.require(temperature, "a number beside salinity; with stations or zones both may be left out")
	}
	f.notBlank("water.stations", w.Stations, "a file of x, y, temperature and salinity")
	f.notBlank("water.zones", w.Zones, "a GeoJSON file")
	if !f.has("water.stations") {
		f.noEffect("water.max_gap", "without stations", "name the stations")
	}
	f.above0("water.max_gap", w.MaxGap, " seconds")
}

func (j *Job) checkWater(f *faults, formula medium.WaterFormula, nm float64) {
	const t = 10 // degrees C, inside every range
	water := func(key string, w medium.Water, nm float64) {
		_, _, err := formula.Index(w, nm)
		f.outOfRange(key, err)
	}
	if v := j.Water.Temperature; v != nil {
		water("water.temperature", medium.Water{TemperatureC: *v}, nm)
	}
	if v := j.Water.Salinity; v != nil {
		water("water.salinity", medium.Water{TemperatureC: t, Salinity: *v}, nm)
	}
	water("water.pressure_dbar", medium.Water{TemperatureC: t, PressureDbar: j.Water.PressureDbar}, nm)
	if v := j.Light.Wavelength; v != nil {
		water("light.wavelength", medium.Water{TemperatureC: t}, *v)
	}
}

func (j *Job) checkAir(f *faults, nm float64) {
	air := func(key string, nm float64, change func(*medium.Air)) {
		a := medium.StandardAir()
		change(&a)
		_, _, err := a.Index(nm)
		f.outOfRange(key, err)
	}
	air("air.temperature", nm, func(a *medium.Air) { a.TemperatureC = j.Air.Temperature })
	air("air.pressure", nm, func(a *medium.Air) { a.PressureHPa = j.Air.Pressure })
	air("air.humidity", nm, func(a *medium.Air) { a.HumidityPercent = j.Air.Humidity })
	air("air.co2", nm, func(a *medium.Air) { a.CO2PPM = j.Air.CO2 })
	if v := j.Light.Wavelength; v != nil {
		air("light.wavelength", *v, func(*medium.Air) {})
	}
}

// outOfRange reports what medium says of a key's value; nil is nothing.
func (f *faults) outOfRange(key string, err error) {
	var r *medium.RangeError
	switch {
	case errors.As(err, &r):
		wanted := strings.TrimSpace(format(r.Low) + " to " + format(r.High) + " " + r.Unit)
		f.add(key, "is %s, want %s for %s", format(r.Value), wanted, r.Formula)
	case err != nil:
		f.add(key, "has no index: %v", err)
	}
}

// waterFormulas returns the names that [water] formula takes.
func waterFormulas() []string {
	all := []medium.WaterFormula{medium.QuanFry, medium.MillardSeaver, medium.IAPWS}
	names := make([]string, len(all))
	for i, formula := range all {
		names[i] = formula.String()
	}
	return names
}
