package acoustics

import "bentray/correct/medium"

// Cast is a series of measurements down the water, one value per row, in the order they were
// made: depths below the water level in metres with either speeds of sound in m/s or
// temperatures in degrees C (ITS-90) and practical salinities.
type Cast struct {
	DepthM       []float64
	Speed        []float64 // nil: temperature and salinity are read instead
	TemperatureC []float64
	Salinity     []float64
}

// Cleaning tells what became of a cast's rows.
type Cleaning struct {
	Rows     int  // of the cast
	Kept     int  // samples of the profile
	Sorted   bool // the rows were in no order
	Upward   bool // the cast was read from its end
	Extended int  // kept rows outside the published range of the formula
}

// Profile returns the profile of a cast.
//
// Rows are checked first, all of them: a depth or a speed that NewProfile would refuse,
// such as a depth above the water, and a state beyond the formula's computed range give a
// *RowError. Then rows are chosen:
//
//   - Of rows in no order (of the inner ones more than half turn the direction) all are taken,
//     sorted by depth.
//   - Else the deepest descent: the rows between the two whose depth increases most from
//     one to a later one. If the depth decreases by more than that somewhere, the cast
//     was made upward, and is read from its end.
//   - Of these rows, one that is not deeper than all before it is left out: stops, heave,
//     repeats.
//
// formula and latitudeRad, radians, are those of the speed and of the pressure at depth; they are
// not read where the cast has speeds. Columns of unequal length panic.
func (c *Cast) Profile(formula medium.SoundFormula, latitudeRad float64, kind Interpolation) (*Profile, Cleaning, error) {
	told := Cleaning{Rows: len(c.DepthM)}
	if len(c.DepthM) == 0 {
		return nil, told, errNoRows
	}
	speeds, err := c.speeds(formula, latitudeRad)
	if err != nil {
		return nil, told, err
	}
	rows := told.descent(c.DepthM)
	samples := make([]sample, len(rows))
	for i, row := range rows {
		samples[i] = sample{c.DepthM[row], speeds[row]}
		if c.Speed == nil && !formula.Published(c.water(row, latitudeRad), latitudeRad) {
			told.Extended++
		}
	}
	return newProfile(samples, kind), told, nil
}

// speeds returns the speed of every row, and checks the rows.
func (c *Cast) speeds(formula medium.SoundFormula, latitudeRad float64) ([]float64, error) {
	speeds := make([]float64, len(c.DepthM))
	if c.Speed != nil {
		copy(speeds, c.Speed)
	}
	if c.Speed != nil && len(c.Speed) != len(speeds) ||
		c.Speed == nil && (len(c.TemperatureC) != len(speeds) || len(c.Salinity) != len(speeds)) {
		panic(errLengths)
	}
	for i, depth := range c.DepthM {
		if err := checkDepth(i, depth); err != nil {
			return nil, err
		}
		if c.Speed == nil {
			speed, err := formula.Speed(c.water(i, latitudeRad), latitudeRad)
			if err != nil {
				return nil, &RowError{Row: i, Err: err}
			}
			speeds[i] = speed
		}
		if err := checkSpeed(i, speeds[i]); err != nil {
			return nil, err
		}
	}
	return speeds, nil
}

// water returns the state at row i.
func (c *Cast) water(i int, latitudeRad float64) medium.Water {
	return medium.Water{
		TemperatureC: c.TemperatureC[i],
		Salinity:     c.Salinity[i],
		PressureDbar: medium.PressureDbar(c.DepthM[i], latitudeRad),
	}
}
