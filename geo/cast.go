package geo

// cast is one profile of the water: levels by depth, at least two, each depth once.
type cast []castLevel

// castLevel is one record of a cast with the sums of temperature and salinity over
// the depths above it.
type castLevel struct {
	depth                           float64 // m, positive down
	temperature, salinity           float64 // degrees C, practical salinity
	temperatureAbove, salinityAbove float64 // integrals from 0 to depth
}

// integrate fills the sums of levels sorted by depth: the first level holds up to the
// surface, then the trapezoid rule.
func (c cast) integrate() {
	c[0].temperatureAbove = c[0].temperature * c[0].depth
	c[0].salinityAbove = c[0].salinity * c[0].depth
	for k := 1; k < len(c); k++ {
		half := (c[k].depth - c[k-1].depth) / 2
		c[k].temperatureAbove = c[k-1].temperatureAbove + half*(c[k-1].temperature+c[k].temperature)
		c[k].salinityAbove = c[k-1].salinityAbove + half*(c[k-1].salinity+c[k].salinity)
	}
}

// mean returns the means of temperature and salinity from the surface to a depth. At
// the surface, and above it, they are those of the surface; at NaN depth NaN.
func (c cast) mean(depth float64) (temperature, salinity float64) {
	if depth <= c[0].depth {
		return c[0].temperature, c[0].salinity
	}
	k := c.above(depth)
	temperature, salinity = c[k].temperature, c[k].salinity // from level k to depth; the last level holds
	step := depth - c[k].depth
	if k+1 < len(c) {
		half := step / (2 * (c[k+1].depth - c[k].depth))
		temperature += half * (c[k+1].temperature - c[k].temperature)
		salinity += half * (c[k+1].salinity - c[k].salinity)
	}
	return (c[k].temperatureAbove + step*temperature) / depth, (c[k].salinityAbove + step*salinity) / depth
}

// above returns the last level not deeper than a depth that is below the first one.
func (c cast) above(depth float64) int {
	low, high := 0, len(c)
	for high-low > 1 { // level low is not deeper, level high is
		middle := (low + high) / 2
		if c[middle].depth <= depth {
			low = middle
		} else {
			high = middle
		}
	}
	return low
}
