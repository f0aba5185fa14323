package main

import (
	"encoding/json"
	"fmt"

	"bentray/correct/medium"
	"bentray/pipeline"
)

type indexCommand struct {
	mediaFlags
	JSON bool `name:"json" help:"Print JSON with unrounded numbers."`
}

// mediaFlags describe water, air and light.
type mediaFlags struct {
	Temperature    float64 `required:"" help:"Water temperature, degrees C (ITS-90)." placeholder:"C"`
	Salinity       float64 `required:"" help:"Practical salinity." placeholder:"S"`
	Wavelength     float64 `default:"532" help:"Vacuum wavelength, nm."`
	Formula        string  `default:"quan-fry" help:"Index of water: quan-fry, millard-seaver or iapws."`
	PressureDbar   float64 `default:"0" help:"Water pressure, dbar gauge."`
	AirTemperature float64 `default:"15" help:"Air temperature, degrees C."`
	AirPressure    float64 `default:"1013.25" help:"Air pressure at the water, hPa."`
	Humidity       float64 `default:"0" help:"Relative humidity, percent."`
}

func (indexCommand) Help() string {
	return `Phase and group index of water and air, referred to vacuum, their ratio, and the speed of sound in the water.

Example:

    bentray index --temperature 17.5 --salinity 34.9 --wavelength 532

Exit codes: 0 done; 64 the call is wrong, or a value is beyond the formula's range.`
}

// mediaReport is what index prints; ratio is n_water / n_air.
type mediaReport struct {
	WaterPhase float64  `json:"n_water"`
	WaterGroup float64  `json:"ng_water"`
	AirPhase   float64  `json:"n_air"`
	AirGroup   float64  `json:"ng_air"`
	Ratio      float64  `json:"ratio"`
	SoundSpeed *float64 `json:"sound_speed"` // m/s, Chen & Millero; null beyond its range
	Formula    string   `json:"formula"`
	InRange    bool     `json:"in_range"` // within the formula's published range
}

// Run prints the indices.
func (c *indexCommand) Run(s *streams) error {
	r, err := c.report()
	if err != nil {
		return &pipeline.CallError{Err: err}
	}
	if c.JSON {
		encoder := json.NewEncoder(s.out)
		encoder.SetIndent("", "  ")
		return encoder.Encode(r)
	}
	c.print(s, r)
	return nil
}

func (c *mediaFlags) water() medium.Water {
	return medium.Water{TemperatureC: c.Temperature, Salinity: c.Salinity, PressureDbar: c.PressureDbar}
}

func (c *mediaFlags) report() (*mediaReport, error) {
	formula, err := medium.ParseWaterFormula(c.Formula)
	if err != nil {
		return nil, err
	}
	water := c.water()
	r := &mediaReport{Formula: formula.String(), InRange: formula.Published(water, c.Wavelength)}
	if r.WaterPhase, r.WaterGroup, err = formula.Index(water, c.Wavelength); err != nil {
		return nil, err
	}
	air := medium.StandardAir()
	air.TemperatureC, air.PressureHPa, air.HumidityPercent = c.AirTemperature, c.AirPressure, c.Humidity
	if r.AirPhase, r.AirGroup, err = air.Index(c.Wavelength); err != nil {
		return nil, err
	}
	r.Ratio = r.WaterPhase / r.AirPhase
	if medium.ChenMillero.Published(water, 0) {
		speed, err := medium.ChenMillero.Speed(water, 0)
		if err != nil {
			return nil, err
		}
		r.SoundSpeed = &speed
	}
	return r, nil
}

func (c *indexCommand) print(s *streams, r *mediaReport) {
	c.printPressure(s)
	fmt.Fprintf(s.out, "light        %g nm in vacuum\n", c.Wavelength)
	fmt.Fprintf(s.out, "water        %g degrees C, salinity %g, %g dbar; %s%s\n", c.Temperature, c.Salinity, c.PressureDbar, r.Formula, outside(r.InRange))
	fmt.Fprintf(s.out, "air          %g degrees C, %g hPa, %g %% humidity; Ciddor 1996\n\n", c.AirTemperature, c.AirPressure, c.Humidity)
	fmt.Fprintf(s.out, "             phase        group\n")
	fmt.Fprintf(s.out, "water        %.9f  %.9f\n", r.WaterPhase, r.WaterGroup)
	fmt.Fprintf(s.out, "air          %.9f  %.9f\n", r.AirPhase, r.AirGroup)
	fmt.Fprintf(s.out, "ratio        %.9f  (water to air, phase: bends the ray)\n", r.Ratio)
	if r.SoundSpeed == nil {
		fmt.Fprintln(s.out, "sound speed  not computed: the water is beyond the range of chen-millero")
		return
	}
	fmt.Fprintf(s.out, "sound speed  %.2f m/s; chen-millero\n", *r.SoundSpeed)
}

// printPressure says where the pressure has no effect on the index.
func (c *mediaFlags) printPressure(s *streams) {
	formula, err := medium.ParseWaterFormula(c.Formula)
	if err == nil && c.PressureDbar != 0 && !formula.UsesPressure() {
		fmt.Fprintf(s.errors, "caution: %s has no pressure term; the index is that at the surface\n", formula)
	}
}

func outside(inRange bool) string {
	if inRange {
		return ", within its published range"
	}
	return ", an extension beyond its published range"
}
