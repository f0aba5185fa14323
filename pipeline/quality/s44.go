package quality

import (
	"math"

	"bentray/geo"
)

// order is a survey order of IHO S-44 with its limit of vertical uncertainty.
type order struct {
	name string  // key of the share in a report
	a, b float64 // m, and per metre of depth
}

// orders are those of IHO S-44, Edition 6.0.0 (2020), Table 1, the strictest first;
// Edition 6.1.0 (2022) has the same numbers. Orders 1a and 1b share theirs.
var orders = [...]order{
	{"exclusive", 0.15, 0.0075},
	{"special", 0.25, 0.0075},
	{"1", 0.5, 0.013},
	{"2", 1.0, 0.023},
}

// TVULimit is the greatest total vertical uncertainty, m at 95 %, that an order of IHO
// S-44 allows at a depth (m): sqrt(a^2 + (b depth)^2), section 3.2.3. The orders are
// "exclusive", "special", "1" (1a and 1b) and "2"; NaN for any other.
func TVULimit(orderName string, depthM float64) float64 {
	for _, o := range orders {
		if o.name == orderName {
			return o.limit(depthM)
		}
	}
	return math.NaN()
}

func (o order) limit(depthM float64) float64 { return math.Hypot(o.a, o.b*depthM) }

// Orders returns the names that TVULimit knows, the strictest first.
func Orders() []string {
	names := make([]string, len(orders))
	for i, o := range orders {
		names[i] = o.name
	}
	return names
}

// Limit is TVULimit with the depth, and the limit, in the report's VerticalUnit.
func (r *Report) Limit(orderName string, depth float64) float64 {
	metres, err := geo.ParseUnit(r.VerticalUnit)
	if err != nil {
		return math.NaN()
	}
	return TVULimit(orderName, depth*float64(metres)) / float64(metres)
}
