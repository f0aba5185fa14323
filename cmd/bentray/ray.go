package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"bentray/correct"
	"bentray/correct/optics"
	"bentray/pipeline"
)

type rayCommand struct {
	mediaFlags
	Origin       string  `required:"" help:"Ray origin, m." placeholder:"X,Y,Z"`
	Point        string  `required:"" help:"Apparent point, m." placeholder:"X,Y,Z"`
	Level        float64 `required:"" help:"Elevation of the water surface at the point's plan position, m." placeholder:"Z"`
	SlopeX       float64 `default:"0" help:"Slope of the surface along x."`
	SlopeY       float64 `default:"0" help:"Slope of the surface along y."`
	RangeIndex   float64 `default:"0" help:"Index that the range was made with; 0 is the group index of the air."`
	MaxIncidence float64 `default:"60" help:"Largest incidence, degrees."`
}

func (rayCommand) Help() string {
	return `Follows one laser pulse from its origin to the true point and prints every step, so that it can be checked with a pocket calculator.

Example:

    bentray ray --origin 0,0,400 --point 120,0,-6 --level 0.42 --temperature 17.5 --salinity 34.9

Exit codes: 0 the point was corrected; 1 it was not (the outcome says why); 64 the call is wrong.`
}

// Run prints the steps.
func (c *rayCommand) Run(s *streams) error {
	raw, err := vec("--point", c.Point)
	if err != nil {
		return err
	}
	origin, err := vec("--origin", c.Origin)
	if err != nil {
		return err
	}
	media, err := c.report()
	if err != nil {
		return &pipeline.CallError{Err: err}
	}
	light := correct.Light{Air: media.AirPhase, RangeIndex: c.RangeIndex, Water: []float64{media.WaterPhase}, WaterGroup: []float64{media.WaterGroup}}
	if c.RangeIndex == 0 {
		light.RangeIndex = media.AirGroup
	}
	if !(c.MaxIncidence > 0 && c.MaxIncidence < 90) {
		return &pipeline.CallError{Err: fmt.Errorf("--max-incidence is %g, want above 0 and below 90", c.MaxIncidence)}
	}
	surface := correct.Planes{Level: []float64{c.Level}, SlopeX: []float64{c.SlopeX}, SlopeY: []float64{c.SlopeY}}
	ray, outcome := correct.TracePulse(raw, origin, surface, light, radians(c.MaxIncidence))
	c.print(s, raw, origin, media, light, ray, outcome)
	if outcome != correct.Corrected {
		return fmt.Errorf("the point is not corrected: %s", outcome)
	}
	return nil
}

// vec reads "X,Y,Z".
func vec(flag, text string) (optics.Vec, error) {
	parts := strings.Split(text, ",")
	var v [3]float64
	var err error
	for i := 0; i < len(parts) && len(parts) == 3 && err == nil; i++ {
		v[i], err = strconv.ParseFloat(strings.TrimSpace(parts[i]), 64)
	}
	if err != nil || len(parts) != 3 {
		return optics.Vec{}, &pipeline.CallError{Err: fmt.Errorf("%s is %q, want three numbers: X,Y,Z", flag, text)}
	}
	return optics.Vec{X: v[0], Y: v[1], Z: v[2]}, nil
}

func (c *rayCommand) print(s *streams, raw, origin optics.Vec, media *mediaReport, l correct.Light, r correct.PulseRay, outcome correct.Outcome) {
	say := func(format string, args ...any) { fmt.Fprintf(s.out, format+"\n", args...) }
	say("origin        %s m", position(origin))
	say("apparent      %s m", position(raw))
	say("surface       %.4f m there, slopes %g, %g", c.Level, c.SlopeX, c.SlopeY)
	if outcome == correct.Corrected || outcome == correct.Grazing {
		say("normal        %s", position(r.Normal))
		say("incidence     %.6f degrees, sine %.9f", degrees(r.IncidenceRad), math.Sin(r.IncidenceRad))
	}
	if outcome != correct.Corrected {
		return
	}
	say("entry         %s m", position(r.Entry))
	say("phase index   air %.9f, water %.9f (%s)", media.AirPhase, media.WaterPhase, media.Formula)
	say("refraction    %.6f degrees, sine %.9f = %.9f x %.9f / %.9f", degrees(r.RefractionRad), math.Sin(r.RefractionRad), math.Sin(r.IncidenceRad), media.AirPhase, media.WaterPhase)
	say("direction     %s", position(r.Down))
	say("raw range     %.6f m, entry to apparent point", r.ApparentRange)
	say("group index   of the ranges %.9f, of the water %.9f", l.RangeIndex, media.WaterGroup)
	say("true range    %.6f m = %.6f x %.9f / %.9f", r.Range, r.ApparentRange, l.RangeIndex, media.WaterGroup)
	say("true point    %s m", position(r.True))
	say("depth         %.4f m under %.4f m", r.Depth, r.WaterLevel)
	say("moved         %.4f m up, %.4f m in plan", r.True.Z-raw.Z, math.Hypot(r.True.X-raw.X, r.True.Y-raw.Y))
}

// position writes a vector; adding 0 takes the sign from a zero.
func position(v optics.Vec) string { return fmt.Sprintf("%.6f, %.6f, %.6f", v.X+0, v.Y+0, v.Z+0) }

func degrees(rad float64) float64 { return rad * 180 / math.Pi }

func radians(deg float64) float64 { return deg * math.Pi / 180 }
